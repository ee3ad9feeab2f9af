// Line-frame machines of three lines worked out by hand.

#include "drawn.h"

// Line types pier (kind 0) and mole (kind 1), four cells each; pier, pier, mole make the frame. Bit 0 of the levels is sync,
// low while asserted, bit 1 blank, bit 2 lamp, which the frame stage has.
#define LINES                                                                     \
	"signals:\n"                                                                  \
	"  sync: { role: composite sync, active: low }\n"                             \
	"  blank: { role: blanking, active: high }\n"                                 \
	"  lamp: { role: plain, active: high, stage: frame }\n"                       \
	"lines:\n"                                                                    \
	"  pier:\n"                                                                   \
	"    regions:\n"                                                              \
	"      - { region: porch, cells: 1, assert: [blank] }\n"                      \
	"      - { region: sync, cells: 1, assert: [blank, sync] }\n"                 \
	"      - { region: picture, cells: 2, assert: [] }\n"                         \
	"  mole:\n"                                                                   \
	"    regions:\n"                                                              \
	"      - { region: porch, cells: 1, assert: [blank, lamp] }\n"                \
	"      - { region: sync, cells: 3, assert: [blank, sync, lamp] }\n"           \
	"frame: [ { repeat: 2, line: pier }, { repeat: 1, line: mole } ]\n"

#define CHIPS "chips: { line: { part: 28C64, speed: 150 ns }, frame: { part: 28C64, speed: 150 ns } }\n"

#define ROW(...) ((struct row){__VA_ARGS__})

// Both stages latched, both tables. A line row's levels are those of the next cell, a frame row's those of the next line.
static void test_registered(void **state)
{
	(void)state;
	struct drawn *drawn = draw("  line: { state: 3 bits }\n  frame: { state: 2 bits }\n  kind: 2 bits\n", LINES CHIPS);
	assert_drawn(drawn);
	assert_int_equal(table_row_count(drawn->table, STAGE_LINE), 8);
	// pier, kind 0
	assert_line_row(drawn, 0, 0x00, ROW(.next = 1, .levels = 2));               // sync follows: sync low, blank high
	assert_line_row(drawn, 1, 0x01, ROW(.next = 2, .levels = 1));               // picture: sync high, blank low
	assert_line_row(drawn, 2, 0x02, ROW(.next = 3, .step = true, .levels = 1)); // picture, the last cell, in which step is asserted
	assert_line_row(drawn, 3, 0x03, ROW(.next = 0, .levels = 3));               // the porch of whatever line follows
	// mole, kind 1: address 8 * 1 + state
	assert_line_row(drawn, 4, 0x08, ROW(.next = 1, .levels = 2));
	assert_line_row(drawn, 5, 0x09, ROW(.next = 2, .levels = 2));
	assert_line_row(drawn, 6, 0x0A, ROW(.next = 3, .step = true, .levels = 2));
	assert_line_row(drawn, 7, 0x0B, ROW(.next = 0, .levels = 3));
	assert_int_equal(table_row_count(drawn->table, STAGE_FRAME), 3);
	assert_frame_row(drawn, 0, ROW(.next = 1, .kind = 0, .levels = 0)); // line 1 is a pier
	assert_frame_row(drawn, 1, ROW(.next = 2, .kind = 1, .levels = 4)); // line 2 a mole, with the lamp
	assert_frame_row(drawn, 2, ROW(.next = 0, .kind = 0, .levels = 0)); // line 0 a pier
	drawn_destroy(drawn);
}

// Spare rows lead to the first cell, with its levels; kinds 2 and 3, which no line has, end the line at once.
static void test_spare(void **state)
{
	(void)state;
	struct drawn *drawn = draw("  line: { state: 3 bits }\n  frame: { state: 2 bits }\n  kind: 2 bits\n", LINES CHIPS);
	assert_drawn(drawn);
	for (uint32_t kind = 0; kind < 4; kind++) {
		const struct row row = table_spare(drawn->table, STAGE_LINE, kind);
		assert_int_equal(row.next, 0);
		assert_int_equal(row.step, kind > 1);
		assert_int_equal(row.levels, 3); // a porch: sync high, blank high
		assert_false(row.clear);
		assert_int_equal(table_uses_kind(drawn->table, kind), kind < 2);
	}
	const struct row row = table_spare(drawn->table, STAGE_FRAME, 0);
	assert_int_equal(row.next, 0);
	assert_int_equal(row.kind, 0);
	assert_int_equal(row.levels, 0);
	drawn_destroy(drawn);
}

// A type that the frame does not use keeps its code, and has no rows: the first line of the frame has kind 2 here.
static void test_unused_type(void **state)
{
	(void)state;
	struct drawn *drawn = draw("  line: { state: 2 bits }\n  frame: { state: 1 bit }\n",
	                           "signals: { sync: { role: plain, active: high } }\n"
	                           "lines:\n"
	                           "  idle: { regions: [ { region: a, cells: 9 } ] }\n"
	                           "  late: { regions: [ { region: a, cells: 2, assert: [sync] } ] }\n"
	                           "  early: { regions: [ { region: a, cells: 2, assert: [sync] }, { region: b, cells: 1 } ] }\n"
	                           "frame: [ { repeat: 1, line: early }, { repeat: 1, line: late } ]\n" CHIPS);
	assert_drawn(drawn);
	assert_int_equal(table_row_count(drawn->table, STAGE_LINE), 5);
	assert_line_row(drawn, 0, 0x4, ROW(.next = 1, .step = true, .levels = 1)); // late, kind 1
	assert_line_row(drawn, 1, 0x5, ROW(.next = 0, .levels = 1));
	assert_line_row(drawn, 2, 0x8, ROW(.next = 1, .levels = 1)); // early, kind 2
	assert_line_row(drawn, 3, 0x9, ROW(.next = 2, .step = true, .levels = 0));
	assert_line_row(drawn, 4, 0xA, ROW(.next = 0, .levels = 1));
	assert_frame_row(drawn, 0, ROW(.next = 1, .kind = 1));
	assert_frame_row(drawn, 1, ROW(.next = 0, .kind = 2));
	assert_int_equal(table_cell_row(drawn->table, 0, 1), 3);
	assert_int_equal(table_cell_row(drawn->table, 1, 1), 1);
	assert_true(table_spare(drawn->table, STAGE_LINE, 0).step);
	assert_false(table_spare(drawn->table, STAGE_LINE, 1).step);
	assert_true(table_spare(drawn->table, STAGE_LINE, 3).step);
	assert_int_equal(table_spare(drawn->table, STAGE_FRAME, 0).kind, 2);
	drawn_destroy(drawn);
}

// Direct in both stages: each row holds what its own cell, or line, shows. Spare rows are at rest, and blanked.
static void test_direct(void **state)
{
	(void)state;
	struct drawn *drawn = draw("  line: { state: 2 bits, outputs: direct }\n  frame: { state: 2 bits, outputs: direct }\n", LINES CHIPS);
	assert_drawn(drawn);
	assert_line_row(drawn, 0, 0x0, ROW(.next = 1, .levels = 3)); // porch
	assert_line_row(drawn, 1, 0x1, ROW(.next = 2, .levels = 2)); // sync
	assert_line_row(drawn, 2, 0x2, ROW(.next = 3, .levels = 1)); // picture
	assert_line_row(drawn, 3, 0x3, ROW(.next = 0, .step = true, .levels = 1));
	assert_line_row(drawn, 7, 0x7, ROW(.next = 0, .step = true, .levels = 2)); // mole's last: sync
	assert_frame_row(drawn, 0, ROW(.next = 1, .kind = 0));
	assert_frame_row(drawn, 1, ROW(.next = 2, .kind = 0));
	assert_frame_row(drawn, 2, ROW(.next = 0, .kind = 1, .levels = 4));
	assert_int_equal(table_spare(drawn->table, STAGE_LINE, 1).levels, 3);
	assert_false(table_spare(drawn->table, STAGE_LINE, 1).step);
	assert_int_equal(table_spare(drawn->table, STAGE_FRAME, 0).levels, 0); // blank is no signal of this stage
	drawn_destroy(drawn);
}

// Counters with a synchronous clear: asserted in the last row of each line, and of the frame.
static void test_count_sync(void **state)
{
	(void)state;
	struct drawn *drawn = draw("  line: { state: 2 bits, advance: count, clear: sync }\n"
	                           "  frame: { state: 2 bits, advance: count, clear: sync, outputs: direct }\n", LINES CHIPS);
	assert_drawn(drawn);
	assert_line_row(drawn, 0, 0x0, ROW(.levels = 2));
	assert_line_row(drawn, 2, 0x2, ROW(.step = true, .levels = 1));
	assert_line_row(drawn, 3, 0x3, ROW(.clear = true, .levels = 3));
	assert_line_row(drawn, 6, 0x6, ROW(.step = true, .levels = 2));
	assert_line_row(drawn, 7, 0x7, ROW(.clear = true, .levels = 3));
	assert_frame_row(drawn, 1, ROW(.kind = 0));
	assert_frame_row(drawn, 2, ROW(.clear = true, .kind = 1, .levels = 4));
	assert_true(table_spare(drawn->table, STAGE_LINE, 0).clear);
	assert_true(table_spare(drawn->table, STAGE_FRAME, 0).clear);
	drawn_destroy(drawn);
}

// With an asynchronous clear it is asserted in the row after the last alone, under every kind, which is a spare one.
static void test_count_async(void **state)
{
	(void)state;
	struct drawn *drawn = draw("  line: { state: 3 bits, advance: count, clear: async }\n"
	                           "  frame: { state: 2 bits, advance: count, clear: async }\n", LINES CHIPS);
	assert_drawn(drawn);
	assert_int_equal(table_row_count(drawn->table, STAGE_LINE), 8);
	assert_line_row(drawn, 3, 0x3, ROW(.levels = 3));
	assert_line_row(drawn, 7, 0xB, ROW(.levels = 3));
	assert_frame_row(drawn, 2, ROW(.kind = 0));
	for (uint32_t kind = 0; kind < 2; kind++)
		assert_true(table_spare(drawn->table, STAGE_LINE, kind).clear);
	assert_int_equal(table_row_count(drawn->table, STAGE_FRAME), 3);
	assert_true(table_spare(drawn->table, STAGE_FRAME, 0).clear); // state 3
	drawn_destroy(drawn);
}

// Lines of one cell step in it: the row before holds step. Spare rows, too, are as before the frame's first cell.
static void test_single_cells(void **state)
{
	(void)state;
	struct drawn *drawn = draw("  line: { state: 1 bit }\n  frame: { state: 2 bits }\n",
	                           "signals: { sync: { role: plain, active: high } }\n"
	                           "lines: { tick: { regions: [ { region: a, cells: 1, assert: [sync] } ] } }\n"
	                           "frame: [ { repeat: 3, line: tick } ]\n" CHIPS);
	assert_drawn(drawn);
	assert_line_row(drawn, 0, 0, ROW(.next = 0, .step = true, .levels = 1));
	assert_true(table_spare(drawn->table, STAGE_LINE, 0).step);
	assert_int_equal(drawn->table->wiring.kind_bits, 0);
	drawn_destroy(drawn);
}

// Stage names the counters' and states' shortages speak of.
static void test_too_few_bits(void **state)
{
	(void)state;
	struct drawn *drawn = draw("  line: { state: 1 bit }\n  frame: { state: 1 bit }\n", LINES CHIPS);
	assert_refused(drawn, RULE_STATES_SHORT, 2);
	assert_says(drawn, "line type \"pier\" needs 4 states, one for each cell, but 1 bit of state of the line stage have 2");
	assert_says(drawn, "hint: line: { state: 2 bits } would do");
	assert_says(drawn, "the frame has 3 lines, each of which needs a state, but 1 bit of state of the frame stage have 2");
	assert_says(drawn, "hint: frame: { state: 2 bits } would do");
	drawn_destroy(drawn);
	// Three states are not enough for the line's four cells, four just are; with an asynchronous clear it takes five and four.
	drawn = draw("  line: { state: 2 bits, advance: count, clear: async }\n  frame: { state: 2 bits, advance: count, clear: async }\n",
	             LINES CHIPS);
	assert_refused(drawn, RULE_COUNTER_SHORT, 1);
	assert_says(drawn, "line type \"pier\" needs 5 states, one of them to clear the counter in, but the line stage's counter of 2 bits has 4");
	assert_says(drawn, "hint: line: { state: 3 bits } would do");
	drawn_destroy(drawn);
	drawn = draw("  line: { state: 2 bits, advance: count, clear: sync }\n  frame: { state: 1 bit, advance: count, clear: sync }\n",
	             LINES CHIPS);
	assert_refused(drawn, RULE_COUNTER_SHORT, 1);
	assert_says(drawn, "the frame has 3 lines and needs 3 states, but the frame stage's counter of 1 bit has 2");
	drawn_destroy(drawn);
}

static void test_lengths_differ(void **state)
{
	(void)state;
	const char *rest = "signals: { sync: { role: plain, active: high } }\n"
	                   "lines:\n"
	                   "  pier: { regions: [ { region: a, cells: 3 } ] }\n"
	                   "  mole: { regions: [ { region: a, cells: 2 } ] }\n"
	                   "frame: [ { repeat: 2, line: pier }, { repeat: 1, line: mole } ]\n" CHIPS;
	struct drawn *drawn = draw("  line: { state: 2 bits, advance: count, clear: async }\n  frame: { state: 2 bits }\n", rest);
	assert_refused(drawn, RULE_LINES_DIFFER, 1);
	assert_says(drawn, "\"pier\" has 3, and \"mole\" has 2");
	drawn_destroy(drawn);
	drawn = draw("  line: { state: 2 bits, advance: count, clear: sync }\n  frame: { state: 2 bits }\n", rest);
	assert_drawn(drawn);
	assert_line_row(drawn, 2, 0x2, ROW(.clear = true));
	assert_line_row(drawn, 4, 0x5, ROW(.clear = true));
	drawn_destroy(drawn);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_registered),   cmocka_unit_test(test_spare),        cmocka_unit_test(test_unused_type),
		cmocka_unit_test(test_direct),       cmocka_unit_test(test_count_sync),   cmocka_unit_test(test_count_async),
		cmocka_unit_test(test_single_cells), cmocka_unit_test(test_too_few_bits), cmocka_unit_test(test_lengths_differ),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
