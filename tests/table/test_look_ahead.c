// What rows of a line-frame machine hold of the lines around theirs.

#include "drawn.h"

#define CHIPS "chips: { line: { part: 28C64, speed: 150 ns }, frame: { part: 28C64, speed: 150 ns } }\n"
#define STAGES "  line: { state: 4 bits }\n  frame: { state: 3 bits }\n"
#define DIRECT "  line: { state: 4 bits, outputs: direct }\n  frame: { state: 3 bits }\n"

// Frame: pier, pier, mole, pier: a pier is followed by a pier and by a mole. Only in the mole is the signal asserted in the
// first cell. `lead` is the signal's, `first` and `last` say whether the mole asserts it there.
static struct drawn *draw_mole(const char *machine, int lead, bool first, bool last)
{
	struct arena *arena = arena_create();
	const char *rest = arena_format(arena,
	                                "signals: { lamp: { role: plain, active: high, lead: %d cells } }\n"
	                                "lines:\n"
	                                "  pier: { regions: [ { region: a, cells: 4 } ] }\n"
	                                "  mole:\n"
	                                "    regions:\n"
	                                "      - { region: a, cells: 1, assert: [%s] }\n"
	                                "      - { region: b, cells: 2, assert: [lamp] }\n"
	                                "      - { region: c, cells: 1, assert: [%s] }\n"
	                                "frame: [ { repeat: 2, line: pier }, { repeat: 1, line: mole }, { repeat: 1, line: pier } ]\n" CHIPS,
	                                lead, first ? "lamp" : "", last ? "lamp" : "");
	struct drawn *drawn = draw(machine, rest);
	arena_destroy(arena);
	return drawn;
}

// The last row of a pier would have to hold the lamp of the line that follows. Line 0 is compared with line 1.
static void test_successors(void **state)
{
	(void)state;
	struct drawn *drawn = draw_mole(STAGES, 0, true, false);
	assert_refused(drawn, RULE_LOOK_AHEAD, 1);
	assert_says(drawn, "mole.yaml:10:3: error: line type \"pier\", cell 3: its row shows \"lamp\" as it is 1 cell later, which differs with what "
	                   "follows: not asserted in line 1 (\"pier\"), cell 0, but asserted in line 2 (\"mole\"), cell 0 [look-ahead]");
	assert_says(drawn, "mole.yaml:16:10: note: line 1 (\"pier\") is of this block");
	assert_says(drawn, "mole.yaml:16:37: note: line 2 (\"mole\") is of this block");
	assert_says(drawn, "hint: start the lines elsewhere, say in the front porch, so that what follows them begins alike, or give the line "
	                   "stage outputs: direct\n");
	drawn_destroy(drawn);
	drawn = draw_mole(DIRECT, 0, true, true);
	assert_drawn(drawn);
	drawn_destroy(drawn);
	drawn = draw_mole(STAGES, 0, false, true);
	assert_drawn(drawn);
	drawn_destroy(drawn);
}

// With a lead of a cell direct outputs look ahead as registered ones do without; registered ones by two cells.
static void test_lead(void **state)
{
	(void)state;
	struct drawn *drawn = draw_mole(DIRECT, 1, true, false);
	assert_refused(drawn, RULE_LOOK_AHEAD, 1);
	assert_says(drawn, "\"pier\", cell 3: its row shows \"lamp\" as it is 1 cell later");
	assert_says(drawn, "begins alike\n"); // registered outputs would not help
	drawn_destroy(drawn);
	drawn = draw_mole(DIRECT, 1, false, false);
	assert_drawn(drawn);
	drawn_destroy(drawn);
	drawn = draw_mole(STAGES, 1, false, false);
	assert_refused(drawn, RULE_LOOK_AHEAD, 1);
	assert_says(drawn, "\"pier\", cell 3: its row shows \"lamp\" as it is 2 cells later");
	assert_says(drawn, "but asserted in line 2 (\"mole\"), cell 1");
	assert_says(drawn, "or give the line stage outputs: direct\n");
	drawn_destroy(drawn);
}

// A negative lead looks back: line 3, a pier, comes after the mole, lines 0 and 1 after a pier. Registered outputs with a lead
// of -1 hold what their own cell has.
static void test_predecessors(void **state)
{
	(void)state;
	struct drawn *drawn = draw_mole(DIRECT, -1, false, true);
	assert_refused(drawn, RULE_LOOK_AHEAD, 1);
	assert_says(drawn, "\"pier\", cell 0: its row shows \"lamp\" as it is 1 cell earlier, which differs with what comes before: not asserted in "
	                   "line 3 (\"pier\"), cell 3, but asserted in line 2 (\"mole\"), cell 3");
	assert_says(drawn, "so that what comes before them ends alike, or give the line stage outputs: registered\n");
	drawn_destroy(drawn);
	drawn = draw_mole(STAGES, -1, true, true);
	assert_drawn(drawn);
	drawn_destroy(drawn);
	drawn = draw_mole(STAGES, -2, true, true);
	assert_refused(drawn, RULE_LOOK_AHEAD, 1);
	assert_says(drawn, "cell 0: its row shows \"lamp\" as it is 1 cell earlier");
	drawn_destroy(drawn);
}

// Several lines on: a lead of 5 cells looks past the line that follows. All rows of a type count, but each signal is told once.
static void test_far(void **state)
{
	(void)state;
	struct drawn *drawn = draw_mole(DIRECT, 5, true, true);
	assert_refused(drawn, RULE_LOOK_AHEAD, 1);
	assert_says(drawn, "\"pier\", cell 0: its row shows \"lamp\" as it is 5 cells later");
	assert_says(drawn, "not asserted in line 1 (\"pier\"), cell 1, but asserted in line 2 (\"mole\"), cell 1");
	drawn_destroy(drawn);
}

// A line of one cell steps in its first. Latched, that comes from the row before, and whoever powers up there stays.
static void test_single(void **state)
{
	(void)state;
	const char *rest = "signals: { lamp: { role: plain, active: high } }\n"
	                   "lines:\n"
	                   "  pier: { regions: [ { region: a, cells: 2 } ] }\n"
	                   "  tick: { regions: [ { region: a, cells: 1 } ] }\n"
	                   "frame: [ { repeat: 2, line: pier }, { repeat: 1, line: tick } ]\n" CHIPS;
	struct drawn *drawn = draw(STAGES, rest);
	assert_refused(drawn, RULE_LINE_SINGLE, 1);
	assert_says(drawn, "line type \"tick\" has one cell, beside longer lines");
	drawn_destroy(drawn);
	drawn = draw(DIRECT, rest);
	assert_drawn(drawn);
	drawn_destroy(drawn);
}

// What is decoded from the state is not latched: only a lead looks ahead.
static void test_field(void **state)
{
	(void)state;
	const char *form = "signals: { lamp: { role: plain, active: high, lead: %d cell, from: { field: top, codes: [1] } } }\n"
	                   "lines:\n"
	                   "  pier: { regions: [ { region: a, cells: 4 } ] }\n"
	                   "  mole: { regions: [ { region: a, cells: %d }, { region: b, cells: 2, assert: [lamp] }, { region: c, cells: 1 } ] }\n"
	                   "frame: [ { repeat: 2, line: pier }, { repeat: 1, line: mole } ]\n" CHIPS;
	struct arena *arena = arena_create();
	struct drawn *drawn = draw(STAGES "  fields: { top: 3 }\n", arena_format(arena, form, 0, 2));
	assert_drawn(drawn);
	drawn_destroy(drawn);
	drawn = draw(STAGES "  fields: { top: 3 }\n", arena_format(arena, form, 2, 1));
	assert_refused(drawn, RULE_LOOK_AHEAD, 1);
	assert_says(drawn, "\"pier\", cell 3: its state shows \"lamp\" as it is 2 cells later");
	assert_says(drawn, "begins alike\n"); // outputs have no say
	drawn_destroy(drawn);
	// Here, as there, the mole begins with the lamp at its pin, and a pier does not; but states are not looked for in vain.
	drawn = draw(STAGES "  fields: { top: 3 }\n", arena_format(arena, form, 1, 1));
	assert_refused(drawn, RULE_LINE_START, 1);
	drawn_destroy(drawn);
	arena_destroy(arena);
}

// The frame stage's signals keep their level over each line; a lead moves them off.
static void test_frame_signal(void **state)
{
	(void)state;
	const char *form = "signals: { lamp: { role: plain, active: high, stage: frame, lead: %d cell } }\n"
	                   "lines:\n"
	                   "  pier: { regions: [ { region: a, cells: 4 } ] }\n"
	                   "  mole: { regions: [ { region: a, cells: 3, assert: [lamp] }, { region: b, cells: 1, assert: [%s] } ] }\n"
	                   "frame: [ { repeat: 2, line: pier }, { repeat: 2, line: mole } ]\n" CHIPS;
	struct arena *arena = arena_create();
	struct drawn *drawn = draw(STAGES, arena_format(arena, form, 0, "lamp"));
	assert_drawn(drawn);
	drawn_destroy(drawn);
	drawn = draw(STAGES, arena_format(arena, form, 0, ""));
	assert_refused(drawn, RULE_FRAME_SIGNAL, 1);
	assert_says(drawn, "mole.yaml:8:12: error: signal \"lamp\" of the frame stage changes within line 2 (\"mole\"): asserted in cell 0, but not asserted "
	                   "in cell 3, region \"b\" [frame-signal]");
	assert_says(drawn, "mole.yaml:11:3: note: line type \"mole\" is here");
	assert_says(drawn, "hint: assert it in all regions of the line type or in none, or give it stage: line");
	drawn_destroy(drawn);
	// Asserted in line 1, a pier, in its last cell, and in line 3, a mole, in all but its last.
	drawn = draw(STAGES, arena_format(arena, form, 1, "lamp"));
	assert_refused(drawn, RULE_FRAME_SIGNAL, 2);
	assert_says(drawn, "changes within line 1 (\"pier\"): not asserted in cell 0, but asserted in cell 3");
	assert_says(drawn, "changes within line 3 (\"mole\"): asserted in cell 0, but not asserted in cell 3");
	assert_says(drawn, "hint: its lead of 1 cell moves its edges away from the lines' ends");
	drawn_destroy(drawn);
	arena_destroy(arena);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_successors), cmocka_unit_test(test_lead), cmocka_unit_test(test_predecessors), cmocka_unit_test(test_far),
		cmocka_unit_test(test_single),      cmocka_unit_test(test_field), cmocka_unit_test(test_frame_signal),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
