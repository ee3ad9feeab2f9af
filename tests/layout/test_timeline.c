// The timeline: stretched cells, leads, holds, period. Worked out by hand. A cell is 10 ticks, stretched 14.
#include "laid.h"

#define SYNC 1u
#define LATE 2u
#define LOAD 4u
#define MARK 8u

// `stretch: 2` stretches the first two cells of its region, and a cell that asserts the signal by name is stretched too.
static void stretched_cells_are_the_first(void **state)
{
	(void)state;
	struct laid laid = lay("",
	                       "  a:\n    regions:\n"
	                       "      - { region: p, cells: 2, assert: [sync] }\n"
	                       "      - { region: q, cells: 3, stretch: 2 }\n"
	                       "      - { region: r, cells: 1, assert: [late] }\n",
	                       "  - { repeat: 2, line: a }\n");
	assert_laid(&laid);
	const uint64_t expected[] = {SYNC, SYNC, LATE, LATE, 0, LATE};
	assert_int_equal(laid.timeline->cell_count, 12);
	for (uint32_t cell = 0; cell < 12; cell++)
		assert_int_equal(laid.timeline->asserted[cell], expected[cell % 6]);
	assert_int_equal(laid.timeline->types[0].ticks, 6 * 10 + 3 * 4);
	assert_int_equal(laid.timeline->tick_count, 2 * 72);
	assert_int_equal(laid.timeline->types[0].regions[1].start_ticks, 20);
	assert_int_equal(laid.timeline->types[0].regions[1].ticks, 38);
	assert_int_equal(laid.timeline->lines[1].first_tick, 72);
	release(&laid);
}

// A subcarrier of master / 8 closes lines of a multiple of 8 ticks: 10 cells are 100 ticks, and one of them stretched makes
// 104. Eight cells are 80 ticks and need none.
static void auto_takes_the_fewest_leftmost(void **state)
{
	(void)state;
	const char *clock = ", subcarrier: master / 8, phase: every line";
	struct laid laid = lay(clock,
	                       "  a:\n    regions:\n"
	                       "      - { region: p, cells: 2 }\n"
	                       "      - { region: q, cells: 3, stretch: auto }\n"
	                       "      - { region: r, cells: 5, stretch: auto }\n",
	                       "  - { repeat: 1, line: a }\n");
	assert_laid(&laid);
	for (uint32_t cell = 0; cell < 10; cell++)
		assert_int_equal(laid.timeline->asserted[cell], cell == 2 ? LATE : 0);
	assert_int_equal(laid.timeline->types[0].auto_stretched, 1);
	release(&laid);
	// Two cells that are stretched by name already are none that may be: 108 ticks stay 108.
	laid = lay(clock, "  a: { regions: [ { region: p, cells: 2, assert: [late], stretch: auto }, { region: q, cells: 8 } ] }\n",
	           "  - { repeat: 1, line: a }\n");
	assert_refused(&laid, RULE_PHASE_UNREACHABLE);
	release(&laid);
	laid = lay(clock, "  a: { regions: [ { region: p, cells: 8, stretch: auto } ] }\n", "  - { repeat: 1, line: a }\n");
	assert_laid(&laid);
	assert_int_equal(laid.timeline->types[0].auto_stretched, 0);
	assert_int_equal(laid.timeline->types[0].ticks, 80);
	release(&laid);
}

// Ten cells of which one is stretched are 104 ticks already. Eleven with one are 114, and 114 + 4k is never a multiple of 8; but over
// four lines 114 ticks are 57 cycles.
static void auto_counts_what_is_stretched_already(void **state)
{
	(void)state;
	struct laid laid = lay(", subcarrier: master / 8, phase: every line",
	                       "  a: { regions: [ { region: p, cells: 5, stretch: 1 }, { region: q, cells: 5, stretch: auto } ] }\n",
	                       "  - { repeat: 1, line: a }\n");
	assert_laid(&laid);
	assert_int_equal(laid.timeline->types[0].auto_stretched, 0);
	release(&laid);
	laid = lay(", subcarrier: master / 8, phase: every line",
	           "  a: { regions: [ { region: p, cells: 5, stretch: 1 }, { region: q, cells: 6, stretch: auto } ] }\n",
	           "  - { repeat: 1, line: a }\n");
	assert_refused(&laid, RULE_PHASE_UNREACHABLE);
	release(&laid);
	laid = lay(", subcarrier: master / 8, phase: every 4 lines",
	           "  a: { regions: [ { region: p, cells: 5, stretch: 1 }, { region: q, cells: 6, stretch: auto } ] }\n",
	           "  - { repeat: 1, line: a }\n");
	assert_laid(&laid);
	assert_int_equal(laid.timeline->types[0].ticks, 114);
	release(&laid);
}

// load leads by one cell: its pin shows the next cell's; mark by -2: the one of two cells before. Around the frame.
static void pins_are_shifted_by_the_lead(void **state)
{
	(void)state;
	struct laid laid = lay("",
	                       "  a:\n    regions:\n"
	                       "      - { region: p, cells: 1, assert: [sync, load, mark] }\n"
	                       "      - { region: q, cells: 3 }\n"
	                       "      - { region: r, cells: 1, assert: [mark] }\n",
	                       "  - { repeat: 1, line: a }\n");
	assert_laid(&laid);
	const uint64_t *pins = timeline_pins(laid.timeline, laid.arena);
	const uint64_t expected[] = {SYNC, MARK, MARK, 0, LOAD}; // mark of cell 4 shows at cell 6 = 1, that of cell 0 at 2
	for (uint32_t cell = 0; cell < 5; cell++)
		assert_int_equal(pins[cell], expected[cell]);
	assert_int_equal(levels_of(laid.plan, 0), SYNC); // active low
	release(&laid);
}

// Two blocks: `row` starts anew in each. `at` is the low six bits, `top` the eight from bit 4 on: they share bits 4 and 5.
static void holds_are_evaluated_in_every_cell(void **state)
{
	(void)state;
	struct laid laid = lay("",
	                       "  a:\n    regions:\n"
	                       "      - { region: p, cells: 1 }\n"
	                       "      - { region: q, cells: 2, hold: { at: 16*row + col + cell*0x1 } }\n",
	                       "  - { repeat: 2, line: a }\n  - { repeat: 2, line: a }\n");
	assert_laid(&laid);
	const uint32_t expected[] = {0, 1, 3, 0, 17, 19};
	for (uint32_t cell = 0; cell < 12; cell++) {
		assert_int_equal(laid.timeline->hold_mask[cell], cell % 3 == 0 ? 0 : 0x3F);
		assert_int_equal(laid.timeline->hold_value[cell], expected[cell % 6]);
	}
	assert_int_equal(timeline_period(laid.timeline), 1); // no signal is asserted
	assert_int_equal(timeline_held_period(laid.timeline), 6);
	release(&laid);
	laid = lay("", "  a: { regions: [ { region: p, cells: 2, hold: { at: 0x30, top: 0x0B + 0 } } ] }\n", "  - { repeat: 1, line: a }\n");
	assert_laid(&laid); // top 0x0B has bits 4 and 5 set, as at 0x30 asks
	assert_int_equal(laid.timeline->hold_mask[1], 0xFFF);
	assert_int_equal(laid.timeline->hold_value[1], 0x0B0);
	release(&laid);
	laid = lay("", "  a: { regions: [ { region: p, cells: 2, hold: { at: 0x30 - 16*col, top: 0x0B } } ] }\n", "  - { repeat: 1, line: a }\n");
	assert_refused(&laid, RULE_HOLD_CONFLICT);
	release(&laid);
	laid = lay("", "  a: { regions: [ { region: p, cells: 2, hold: { at: 63 + col } } ] }\n", "  - { repeat: 1, line: a }\n");
	assert_refused(&laid, RULE_HOLD_VALUE);
	release(&laid);
	laid = lay("", "  a: { regions: [ { region: p, cells: 2, hold: { at: 1 - 2*col } } ] }\n", "  - { repeat: 1, line: a }\n");
	assert_refused(&laid, RULE_HOLD_VALUE);
	release(&laid);
}

// The shortest period divides the frame: six equal lines of four cells have one of four; one odd line makes it the whole frame;
// lines that are equal inside have an even shorter one.
static void the_period_divides_the_frame(void **state)
{
	(void)state;
	const char *lines = "  a: { regions: [ { region: p, cells: 1, assert: [sync] }, { region: q, cells: 3 } ] }\n"
	                    "  b: { regions: [ { region: p, cells: 4 } ] }\n";
	struct laid laid = lay("", lines, "  - { repeat: 6, line: a }\n");
	assert_laid(&laid);
	assert_int_equal(timeline_period(laid.timeline), 4);
	release(&laid);
	laid = lay("", lines, "  - { repeat: 5, line: a }\n  - { repeat: 1, line: b }\n");
	assert_laid(&laid);
	assert_int_equal(timeline_period(laid.timeline), 24);
	release(&laid);
	laid = lay("", lines, "  - { repeat: 2, line: a }\n  - { repeat: 1, line: b }\n  - { repeat: 2, line: a }\n  - { repeat: 1, line: b }\n");
	assert_laid(&laid);
	assert_int_equal(timeline_period(laid.timeline), 12);
	release(&laid);
	laid = lay("", lines, "  - { repeat: 3, line: b }\n");
	assert_laid(&laid);
	assert_int_equal(timeline_period(laid.timeline), 1);
	release(&laid);
	// Borders that do not divide the frame are no periods: sync in cells 0 and 4 of 6.
	laid = lay("", "  a: { regions: [ { region: p, cells: 1, assert: [sync] }, { region: q, cells: 3 }, { region: r, cells: 1, assert: [sync] }, { region: s, cells: 1 } ] }\n",
	           "  - { repeat: 1, line: a }\n");
	assert_laid(&laid);
	assert_int_equal(timeline_period(laid.timeline), 6);
	release(&laid);
}

// What one lap leaves free another may hold; two values for one bit can not be folded.
static void holds_of_all_laps_are_folded(void **state)
{
	(void)state;
	const char *lines = "  a: { regions: [ { region: p, cells: 1, assert: [sync] }, { region: q, cells: 2, hold: { at: 5 + col } } ] }\n"
	                    "  b: { regions: [ { region: p, cells: 1, assert: [sync], hold: { at: 9 } }, { region: q, cells: 2 } ] }\n"
	                    "  c: { like: a, change: [ { region: q, hold: { at: 5 + 2*col } } ] }\n";
	uint32_t mask[6], value[6];
	struct laid laid = lay("", lines, "  - { repeat: 1, line: a }\n  - { repeat: 1, line: b }\n");
	assert_laid(&laid);
	assert_int_equal(timeline_period(laid.timeline), 3);
	assert_int_equal(timeline_held_period(laid.timeline), 6);
	assert_true(timeline_fold_holds(laid.timeline, 3, mask, value));
	const uint32_t expected[] = {9, 5, 6};
	for (uint32_t cell = 0; cell < 3; cell++) {
		assert_int_equal(mask[cell], 0x3F);
		assert_int_equal(value[cell], expected[cell]);
	}
	release(&laid);
	laid = lay("", lines, "  - { repeat: 1, line: a }\n  - { repeat: 1, line: c }\n"); // 6 and 7 in their last cells
	assert_laid(&laid);
	assert_false(timeline_fold_holds(laid.timeline, 3, mask, value));
	assert_true(timeline_fold_holds(laid.timeline, 6, mask, value));
	release(&laid);
}

static void a_cell_knows_its_place(void **state)
{
	(void)state;
	struct laid laid = lay("",
	                       "  short: { regions: [ { region: p, cells: 2 } ] }\n"
	                       "  long: { regions: [ { region: q, cells: 1 }, { region: r, cells: 3 } ] }\n",
	                       "  - { repeat: 2, line: short }\n  - { repeat: 1, line: long }\n");
	assert_laid(&laid);
	const struct cell_place place = timeline_place(laid.timeline, 6);
	assert_int_equal(place.line, 2);
	assert_int_equal(place.cell, 2);
	assert_int_equal(place.region, 1);
	assert_string_equal(timeline_line_name(laid.timeline, 6), "long");
	assert_string_equal(timeline_region_name(laid.timeline, 6), "r");
	assert_string_equal(timeline_line_name(laid.timeline, 3), "short");
	assert_int_equal(timeline_place(laid.timeline, 0).line, 0);
	release(&laid);
}

// Sync and the stretch signal are asserted in all of line a. Load, a cell early at its pin, is asserted from cell 1 of a to cell
// 0 of b, and so in all of a there. Mark, two cells late, is asserted at first nowhere, then over a.
static void signals_of_whole_lines_suit_the_frame_stage(void **state)
{
	(void)state;
	const char *form = "  a: { regions: [ { region: p, cells: 1, assert: [sync, late%s] }, { region: q, cells: 3, assert: [sync, late, load%s] } ] }\n"
	                   "  b: { regions: [ { region: p, cells: 1, assert: [load] }, { region: q, cells: 3, assert: [%s] } ] }\n";
	struct arena *arena = arena_create();
	const struct {
		const char *marks, *last;
		uint64_t constant, suit;
	} cases[] = {
		{"", "", 0xF, 0xD},             // all of them; not the stretch signal, 1
		{", mark", "", 0x7, 0x5},       // mark changes in the middle of a and of b at its pin
		{"", "sync, late", 0xC, 0xC},   // sync and late change within b
		{"", "load", 0xB, 0x9},         // at its pin load goes off in the last cell of b
	};
	for (size_t index = 0; index < sizeof cases / sizeof *cases; index++) {
		struct laid laid = lay("", arena_format(arena, form, cases[index].marks, cases[index].marks, cases[index].last),
		                       "  - { repeat: 1, line: a }\n  - { repeat: 1, line: b }\n");
		assert_laid(&laid);
		const uint64_t *pins = timeline_pins(laid.timeline, arena);
		assert_non_null(pins);
		assert_int_equal(timeline_line_signals(laid.timeline, pins) & 0xF, cases[index].constant);
		assert_int_equal(signals_for_frame(laid.timeline, pins), cases[index].suit);
		laid.plan->signals[0].stage = STAGE_FRAME;
		assert_int_equal(signals_for_frame(laid.timeline, pins), cases[index].suit & ~(uint64_t)1);
		release(&laid);
	}
	struct laid laid = lay("", "  a: { regions: [ { region: p, cells: 1, assert: [sync] }, { region: q, cells: 1 } ] }\n", "  - { repeat: 1, line: a }\n");
	assert_laid(&laid);
	assert_int_equal(timeline_line_signals(laid.timeline, timeline_pins(laid.timeline, arena)) & 1, 0);
	release(&laid);
	arena_destroy(arena);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(stretched_cells_are_the_first),
		cmocka_unit_test(auto_takes_the_fewest_leftmost),
		cmocka_unit_test(auto_counts_what_is_stretched_already),
		cmocka_unit_test(pins_are_shifted_by_the_lead),
		cmocka_unit_test(holds_are_evaluated_in_every_cell),
		cmocka_unit_test(the_period_divides_the_frame),
		cmocka_unit_test(holds_of_all_laps_are_folded),
		cmocka_unit_test(a_cell_knows_its_place),
		cmocka_unit_test(signals_of_whole_lines_suit_the_frame_stage),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
