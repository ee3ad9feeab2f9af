// States of the line stage of line-frame machines: every line begins in one state, and kinds do not compete.

#include "drawn.h"

#define CHIPS "chips: { line: { part: 28C64, speed: 150 ns }, frame: { part: 28C64, speed: 150 ns } }\n"
#define FRAME "frame: [ { repeat: 2, line: pier }, { repeat: 1, line: mole } ]\n"
#define LAMP "signals: { lamp: { role: plain, active: high, from: { field: top, codes: %s } } }\n"
#define BOTH "lines:\n  pier: { regions: [ %s ] }\n  mole: { regions: [ %s ] }\n" FRAME CHIPS

static struct drawn *draw_both(const char *machine, const char *codes, const char *pier, const char *mole)
{
	struct arena *arena = arena_create();
	const char *signals = codes != NULL ? arena_format(arena, LAMP, codes) : "signals: { lamp: { role: plain, active: high } }\n";
	const char *rest = arena_format(arena, "%s" BOTH, signals, pier, mole);
	assert_non_null(rest);
	struct drawn *drawn = draw(machine, rest);
	arena_destroy(arena);
	return drawn;
}

// States differ within a kind, first states are one, rows lead from cell to cell, decoded signals and holds come true.
static void assert_valid(const struct drawn *drawn)
{
	const struct table *table = drawn->table;
	const struct timeline *timeline = drawn->timeline;
	const struct plan *plan = drawn->plan;
	uint8_t *seen = test_calloc((size_t)1 << table->wiring.line.address_bits, 1);
	assert_drawn(drawn);
	for (uint32_t row = 0; row < table->period; row++) {
		const uint32_t address = table_row_address(table, STAGE_LINE, row);
		assert_int_equal(seen[address], 0);
		seen[address] = 1;
	}
	for (uint32_t line = 0; line < timeline->line_count; line++)
		for (uint32_t cell = 0; cell < timeline->types[timeline->lines[line].type].cells; cell++) {
			const uint32_t row = table_cell_row(table, line, cell), at = timeline->lines[line].first_cell + cell;
			const uint32_t now = table->state_of_cell[row];
			assert_int_equal(table_row_address(table, STAGE_LINE, row),
			                 now | timeline->lines[line].type << table->wiring.line.state_bits);
			if (cell == 0)
				assert_int_equal(now, table->state_of_cell[0]);
			if (timeline->has_holds)
				assert_int_equal(now & timeline->hold_mask[at], timeline->hold_value[at]);
			for (size_t signal = 0; signal < plan->signal_count; signal++) {
				bool asserted = false;
				for (size_t code = 0; code < table->code_counts[signal]; code++)
					asserted |= table->codes[signal][code] == field_value(&plan->machine.fields[plan->signals[signal].field], now);
				assert_true(signal_is_data(&plan->signals[signal]) || asserted == (table->pins[at] >> signal & 1));
			}
		}
	test_free(seen);
}

static void assert_states(const struct drawn *drawn, const uint32_t *states, uint32_t count)
{
	assert_valid(drawn);
	assert_int_equal(drawn->table->period, count);
	for (uint32_t row = 0; row < count; row++)
		assert_int_equal(drawn->table->state_of_cell[row], states[row]);
}

// Two bits of state serve twice four cells, each of which is held: kinds do not compete.
static void test_kinds_do_not_compete(void **state)
{
	(void)state;
	struct drawn *drawn =
		draw_both("  line: { state: 2 bits }\n  frame: { state: 2 bits }\n  fields: { at: 1..0 }\n", NULL,
	              "{ region: a, cells: 4, hold: { at: cell } }", "{ region: a, cells: 4, hold: { at: (4 - cell) % 4 } }");
	assert_states(drawn, (const uint32_t[]){0, 1, 2, 3, 0, 3, 2, 1}, 8);
	assert_int_equal(table_row(drawn->table, STAGE_LINE, 3).next, 0);
	assert_int_equal(table_row(drawn->table, STAGE_LINE, 4).next, 3);
	drawn_destroy(drawn);
}

// The plan's start is that of both, whatever is free; without one it is 0.
static void test_start(void **state)
{
	(void)state;
	struct drawn *drawn = draw_both("  line: { state: 2 bits }\n  frame: { state: 2 bits }\n  start: 2\n", NULL, "{ region: a, cells: 3 }",
	                                "{ region: a, cells: 2 }");
	assert_states(drawn, (const uint32_t[]){2, 0, 1, 2, 0}, 5);
	drawn_destroy(drawn);
	drawn = draw_both("  line: { state: 2 bits }\n  frame: { state: 2 bits }\n  start: 0\n", NULL, "{ region: a, cells: 3 }",
	                  "{ region: a, cells: 2 }");
	assert_states(drawn, (const uint32_t[]){0, 1, 2, 0, 1}, 5);
	drawn_destroy(drawn);
}

// The pier holds state 0 in its second cell, the mole 1 in its last, so that both begin in 2.
static void test_start_found(void **state)
{
	(void)state;
	struct drawn *drawn = draw_both("  line: { state: 2 bits }\n  frame: { state: 2 bits }\n  fields: { at: 1..0 }\n", NULL,
	                                "{ region: a, cells: 1 }, { region: b, cells: 1, hold: { at: 0 } }",
	                                "{ region: a, cells: 2 }, { region: b, cells: 1, hold: { at: 1 } }");
	assert_states(drawn, (const uint32_t[]){2, 0, 2, 0, 1}, 5);
	drawn_destroy(drawn);
}

// Each type could begin in some state, but no state is free in both: the pier holds 0 and 1, the mole 2 and 3.
static void test_no_start(void **state)
{
	(void)state;
	struct drawn *drawn = draw_both("  line: { state: 2 bits }\n  frame: { state: 2 bits }\n  fields: { at: 1..0 }\n", NULL,
	                                "{ region: a, cells: 1 }, { region: b, cells: 2, hold: { at: col } }",
	                                "{ region: a, cells: 1 }, { region: b, cells: 2, hold: { at: 2 + col } }");
	assert_refused(drawn, RULE_LINE_START, 1);
	assert_says(drawn, "found no state that the first cells of all line types, from \"pier\" to \"mole\", can have together");
	drawn_destroy(drawn);
}

// A partial hold needs all of the pier's states 0 to 3, so that none of them is free for its first cell, though none is held
// whole. Of the others 4 is held in the pier and 5 in the mole.
static void test_start_tight(void **state)
{
	(void)state;
	struct drawn *drawn = draw_both("  line: { state: 3 bits }\n  frame: { state: 2 bits }\n  fields: { top: 2, at: 2..0 }\n", NULL,
	                                "{ region: a, cells: 1 }, { region: b, cells: 4, hold: { top: 0 } }, { region: c, cells: 1, hold: { at: 4 } }",
	                                "{ region: a, cells: 2 }, { region: b, cells: 1, hold: { at: 5 } }");
	assert_valid(drawn);
	assert_int_equal(drawn->table->state_of_cell[0], 6);
	drawn_destroy(drawn);
}

// First cells that differ in what is decoded from the state, or are held to different values, are told.
static void test_first_cells_differ(void **state)
{
	(void)state;
	const char *machine = "  line: { state: 3 bits }\n  frame: { state: 2 bits }\n  fields: { top: 2..1, end: 0 }\n";
	struct drawn *drawn =
		draw_both(machine, "[1]", "{ region: a, cells: 2 }, { region: b, cells: 1, assert: [lamp] }", "{ region: a, cells: 2, assert: [lamp] }");
	assert_refused(drawn, RULE_LINE_START, 1);
	assert_says(drawn, "every line begins in the same state, but \"lamp\", which is decoded from the state, is not asserted in the first cell of "
	                   "\"pier\" and asserted in that of \"mole\" [line-start]");
	drawn_destroy(drawn);
	drawn = draw_both(machine, NULL, "{ region: a, cells: 2, hold: { end: cell } }", "{ region: a, cells: 2, hold: { top: 2, end: 1 - cell } }");
	assert_refused(drawn, RULE_LINE_START, 1);
	assert_says(drawn, "the holds of the first cells of \"pier\" and \"mole\" contradict each other [line-start]");
	drawn_destroy(drawn);
}

static void test_start_conflicts(void **state)
{
	(void)state;
	const char *machine = "  line: { state: 3 bits }\n  frame: { state: 2 bits }\n  fields: { top: 2..1, end: 0 }\n  start: 2\n";
	struct drawn *drawn = draw_both(machine, "[1]", "{ region: a, cells: 2 }, { region: b, cells: 1, assert: [lamp] }",
	                                "{ region: a, cells: 2, assert: [lamp], hold: { end: 1 } }");
	assert_refused(drawn, RULE_START_CONFLICT, 2);
	assert_says(drawn, "start has 1 in field \"top\", with which \"lamp\" is asserted, but line type \"pier\", cell 0, region \"a\", wants it not "
	                   "asserted [start-conflict]");
	assert_says(drawn, "start has 0 in field \"end\", but line type \"mole\", cell 0, region \"a\", holds it to 1 [start-conflict]");
	drawn_destroy(drawn);
}

// Three cells on two states of one kind, while the other kind has plenty. Kind bits are no part of what is told.
static void test_short_in_a_kind(void **state)
{
	(void)state;
	struct drawn *drawn = draw_both("  line: { state: 3 bits }\n  frame: { state: 2 bits }\n  fields: { top: 2..1 }\n", NULL, "{ region: a, cells: 2 }",
	                                "{ region: a, cells: 1 }, { region: b, cells: 3, hold: { top: 3 } }");
	assert_refused(drawn, RULE_STATES_SHORT, 1);
	assert_says(drawn, "line type \"mole\", cell 3, region \"b\": 3 states needed for this cell and those that compete with it, 2 available "
	                   "under the hold of \"top\"");
	drawn_destroy(drawn);
	drawn = draw_both("  line: { state: 3 bits }\n  frame: { state: 2 bits }\n  fields: { at: 2..0 }\n", NULL, "{ region: a, cells: 2 }",
	                  "{ region: a, cells: 1 }, { region: b, cells: 2, hold: { at: 5 } }");
	assert_refused(drawn, RULE_STATE_SHARED, 1);
	assert_says(drawn, "line type \"mole\", cell 1, region \"b\", and line type \"mole\", cell 2, region \"b\", are held to one state, 0x5, but their "
	                   "rows differ");
	drawn_destroy(drawn);
	drawn = draw_both("  line: { state: 3 bits }\n  frame: { state: 2 bits }\n  fields: { top: 2 }\n", "[1]", "{ region: a, cells: 6 }",
	                  "{ region: a, cells: 4 }");
	assert_refused(drawn, RULE_STATES_SHORT, 1);
	assert_says(drawn, "6 states needed for this cell and those that compete with it, 4 available under the codes of \"top\"");
	drawn_destroy(drawn);
}

// A start that another cell of a later type holds is told where the plan says it; the kind, which all cells hold, is no hold.
static void test_words(void **state)
{
	(void)state;
	struct drawn *drawn = draw_both("  line: { state: 3 bits }\n  frame: { state: 2 bits }\n  start: 5\n  fields: { at: 2..0 }\n", NULL,
	                                "{ region: a, cells: 2 }", "{ region: a, cells: 1 }, { region: b, cells: 1, hold: { at: 5 } }");
	assert_refused(drawn, RULE_STATE_SHARED, 1);
	assert_says(drawn, "mole.yaml:8:10: error: line type \"mole\", cell 0, region \"a\", and line type \"mole\", cell 1, region \"b\", are held to one "
	                   "state, 0x5");
	drawn_destroy(drawn);
	drawn = draw("  line: { state: 3 bits }\n  frame: { state: 2 bits }\n  fields: { top: 2 }\n",
	             "signals:\n"
	             "  lamp: { role: plain, active: high, from: { field: top, codes: [1] } }\n"
	             "  bell: { role: plain, active: high, from: { field: top, codes: [1] } }\n"
	             "lines:\n"
	             "  pier: { regions: [ { region: a, cells: 2 } ] }\n"
	             "  mole: { regions: [ { region: a, cells: 1 }, { region: b, cells: 1, assert: [lamp] } ] }\n" FRAME CHIPS);
	assert_refused(drawn, RULE_CODE_CONFLICT, 1);
	assert_says(drawn, "line type \"mole\", cell 1, region \"b\": field \"top\" has no code for \"lamp\" asserted, \"bell\" not asserted");
	drawn_destroy(drawn);
}

// A decoded signal, with listed codes and with such as the planner chooses: one set of codes serves both types.
static void test_decoded(void **state)
{
	(void)state;
	const char *machine = "  line: { state: 4 bits }\n  frame: { state: 2 bits }\n  fields: { top: 3..2 }\n";
	const char *pier = "{ region: a, cells: 2 }, { region: b, cells: 7, assert: [lamp] }, { region: c, cells: 2 }";
	const char *mole = "{ region: a, cells: 6 }, { region: b, cells: 1, assert: [lamp] }, { region: c, cells: 1 }";
	struct drawn *drawn = draw_both(machine, "[2, 3]", pier, mole);
	assert_valid(drawn);
	assert_int_equal(drawn->table->state_of_cell[0], 0);
	drawn_destroy(drawn);
	drawn = draw_both(machine, "auto", pier, mole);
	assert_valid(drawn);
	assert_int_equal(drawn->table->code_counts[0], 2);
	drawn_destroy(drawn);
	// Code 0 is the lamp's, so that no line can begin in state 0.
	drawn = draw_both(machine, "[0, 1]", pier, mole);
	assert_valid(drawn);
	assert_int_equal(drawn->table->state_of_cell[0], 8);
	drawn_destroy(drawn);
}

// Lamp (code 3) in cell 1 of the pier, bell (code 4) in its cell 2: from the one to the other more than a bit changes in any case.
// From 0, 5 or 6 to the lamp too, from 1, 2 and 7 not: of these the lowest, 1, is where lines begin.
static void test_quiet_start(void **state)
{
	(void)state;
	struct drawn *drawn = draw("  line: { state: 4 bits }\n  frame: { state: 2 bits }\n  fields: { top: 3..1 }\n",
	                           "signals:\n"
	                           "  lamp: { role: plain, active: high, from: { field: top, codes: [3] } }\n"
	                           "  bell: { role: plain, active: high, from: { field: top, codes: [4] } }\n"
	                           "lines:\n"
	                           "  pier:\n"
	                           "    regions:\n"
	                           "      - { region: a, cells: 1 }\n"
	                           "      - { region: b, cells: 1, assert: [lamp] }\n"
	                           "      - { region: c, cells: 1, assert: [bell] }\n"
	                           "      - { region: d, cells: 1 }\n"
	                           "  mole: { regions: [ { region: a, cells: 2 } ] }\n" FRAME CHIPS);
	assert_valid(drawn);
	assert_int_equal(drawn->table->state_of_cell[0], 2);
	drawn_destroy(drawn);
}

// A counter's states are what they are: cell i of any line has state i.
static void test_counted(void **state)
{
	(void)state;
	const char *machine = "  line: { state: 3 bits, advance: count, clear: sync }\n  frame: { state: 2 bits }\n  fields: { top: 2..1, end: 0 }\n";
	struct drawn *drawn = draw_both(machine, "[1]", "{ region: a, cells: 2, hold: { top: 0 } }, { region: b, cells: 2, assert: [lamp] }, { region: c, cells: 1 }",
	                                "{ region: a, cells: 2 }, { region: b, cells: 2, assert: [lamp], hold: { end: col } }");
	assert_states(drawn, (const uint32_t[]){0, 1, 2, 3, 4, 0, 1, 2, 3}, 9);
	drawn_destroy(drawn);
	drawn = draw_both(machine, "[1]", "{ region: a, cells: 3 }", "{ region: a, cells: 2, hold: { end: 1 - col } }");
	assert_refused(drawn, RULE_COUNTED_CONFLICT, 3);
	assert_says(drawn, "line type \"pier\", cell 2, region \"a\": wanted \"lamp\" not asserted, but the counter has state 2, with 1 in field \"top\"");
	assert_says(drawn, "line type \"mole\", cell 0, region \"a\": field \"end\" is held to 1, but the counter has state 0, with 0 there");
	assert_says(drawn, "line type \"mole\", cell 1, region \"a\": field \"end\" is held to 0, but the counter has state 1, with 1 there");
	drawn_destroy(drawn);
	// One code cannot be both: the lamp is asserted in cells 0 and 1 of the mole alone.
	drawn = draw_both(machine, "auto", "{ region: a, cells: 3 }", "{ region: a, cells: 2, assert: [lamp] }");
	assert_refused(drawn, RULE_COUNTED_CONFLICT, 1);
	assert_says(drawn, "\"lamp\" is not asserted in line type \"pier\", cell 0, region \"a\", and asserted in line type \"mole\", cell 0");
	drawn_destroy(drawn);
	drawn = draw_both("  line: { state: 3 bits, advance: count, clear: sync }\n  frame: { state: 2 bits }\n  start: 1\n", NULL,
	                  "{ region: a, cells: 3 }", "{ region: a, cells: 2 }");
	assert_refused(drawn, RULE_COUNTED_CONFLICT, 1);
	assert_says(drawn, "wanted start 0, since a counter begins each line there, found 1");
	drawn_destroy(drawn);
}

// (Multiplier and increment: Numerical Recipes, 1992.)
static uint32_t below(uint32_t *random, uint32_t limit)
{
	*random = *random * 1664525u + 1013904223u;
	return (uint32_t)((uint64_t)*random * limit >> 32);
}

// Two to six regions of a cell each: the lamp may be asserted but in the first, and fields of one or three bits may be held.
static const char *random_regions(struct arena *arena, uint32_t *random, const char *before, uint32_t cells)
{
	for (uint32_t cell = 0; cell < cells; cell++) {
		const uint32_t held = below(random, 4);
		const char *hold = held == 0   ? arena_format(arena, ", hold: { at: %u }", (unsigned)below(random, 8))
		                   : held == 1 ? arena_format(arena, ", hold: { end: %u }", (unsigned)below(random, 2))
		                               : "";
		before = arena_format(arena, "%s%s{ region: r%u, cells: 1, assert: [%s]%s }", before, cell == 0 ? "" : ", ", (unsigned)cell,
		                      cell > 0 && below(random, 3) == 0 ? "lamp" : "", hold);
		assert_non_null(before);
	}
	return before;
}

// Whether a state suits a cell of the frame: its hold, and the lamp, which code 1 of the field "top" shows.
static bool suits(const struct drawn *drawn, uint32_t cell, uint32_t state)
{
	const struct timeline *timeline = drawn->timeline;
	const uint32_t mask = timeline->has_holds ? timeline->hold_mask[cell] : 0;
	return (mask == 0 || (state & mask) == timeline->hold_value[cell]) && (state >> 1 == 1) == (timeline->asserted[cell] & 1);
}

// Whether the cells of a line can have states of their own, the first one `start`: each set of cells has as many states that suit
// one of them (Hall 1935).
static bool can_start(const struct drawn *drawn, uint32_t line, uint32_t start)
{
	const struct frame_line *in_frame = &drawn->timeline->lines[line];
	const uint32_t cells = drawn->timeline->types[in_frame->type].cells;
	if (!suits(drawn, in_frame->first_cell, start))
		return false;
	for (uint32_t set = 0; set < 1u << (cells - 1); set++) {
		uint32_t states = 0;
		for (uint32_t state = 0; state < 8; state++)
			for (uint32_t cell = 1; cell < cells; cell++)
				if ((set >> (cell - 1) & 1) != 0 && state != start && suits(drawn, in_frame->first_cell + cell, state))
					states |= 1u << state;
		if (__builtin_popcount(set) > __builtin_popcount(states))
			return false;
	}
	return true;
}

// States are found whenever there are any.
static void test_random(void **state)
{
	(void)state;
	uint32_t random = 7;
	unsigned made = 0, moved = 0;
	for (unsigned number = 0; number < 2000; number++) {
		struct arena *arena = arena_create();
		const char *pier = random_regions(arena, &random, "", 2 + below(&random, 5));
		const char *mole = random_regions(arena, &random, "", 2 + below(&random, 5));
		struct drawn *drawn =
			draw_both("  line: { state: 3 bits, outputs: direct }\n  frame: { state: 2 bits }\n  fields: { at: 2..0, top: 2..1, end: 0 }\n", "[1]",
		              pier, mole);
		bool possible = false;
		for (uint32_t start = 0; start < 8; start++)
			possible |= can_start(drawn, 0, start) && can_start(drawn, 2, start);
		assert_int_equal(drawn->table != NULL, possible);
		if (possible)
			assert_valid(drawn);
		made += possible;
		moved += possible && drawn->table->state_of_cell[0] != 0;
		drawn_destroy(drawn);
		arena_destroy(arena);
	}
	assert_true(made > 200 && moved > 50 && made < 1800);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_kinds_do_not_compete), cmocka_unit_test(test_start),
		cmocka_unit_test(test_start_found),          cmocka_unit_test(test_no_start),
		cmocka_unit_test(test_start_tight),          cmocka_unit_test(test_first_cells_differ),
		cmocka_unit_test(test_start_conflicts),      cmocka_unit_test(test_short_in_a_kind),
		cmocka_unit_test(test_decoded),              cmocka_unit_test(test_counted),
		cmocka_unit_test(test_words),
		cmocka_unit_test(test_quiet_start),          cmocka_unit_test(test_random),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
