// What a line shows at the pins, its limits, and the levels of composite video; figures worked out by hand.
#include "../layout/laid.h"

#include "view/line_limits.h"
#include "view/line_shape.h"
#include "view/pictures.h"
#include "view/ruler.h"

// Ten cells of 10 ticks, the first two of "sync" 4 longer: ticks 0 14 28 38 48 … 108.
static struct laid lay_quay(void)
{
	return lay("",
	           "  plain:\n"
	           "    regions:\n"
	           "      - { region: sync, cells: 3, assert: [sync], stretch: 2 }\n"
	           "      - { region: rest, cells: 7, assert: [load] }\n"
	           "  other:\n"
	           "    like: plain\n"
	           "    change: [ { region: rest, assert: [mark] } ]\n",
	           "  - { repeat: 1, line: other }\n"
	           "  - { repeat: 3, line: plain }\n"
	           "  - { repeat: 2, line: other }\n");
}

enum { SYNC, LATE, LOAD, MARK };

static void assert_run(struct shape_run run, uint32_t cell, uint32_t cells, int64_t tick, int64_t ticks, unsigned value)
{
	assert_int_equal(run.cell, cell);
	assert_int_equal(run.cells, cells);
	assert_int_equal(run.tick, tick);
	assert_int_equal(run.ticks, ticks);
	assert_int_equal(run.value, value);
}

static void runs_are_those_of_the_pins(void **state)
{
	(void)state;
	struct laid laid = lay_quay();
	struct line_shape shape;
	assert_laid(&laid);
	assert_true(line_shape_make(&shape, laid.timeline, 2, laid.arena));
	assert_int_equal(shape.ticks, 108);
	assert_run(shape_signal_run(&shape, SYNC, 0), 0, 3, 0, 38, 1);
	assert_run(shape_signal_run(&shape, SYNC, 3), 3, 7, 38, 70, 0);
	// A cell early: from cell 2 to cell 8.
	assert_run(shape_signal_run(&shape, LOAD, 0), 0, 2, 0, 28, 0);
	assert_run(shape_signal_run(&shape, LOAD, 2), 2, 7, 28, 70, 1);
	assert_run(shape_signal_run(&shape, LOAD, 9), 9, 1, 98, 10, 0);
	assert_int_equal(shape_signal_runs(&shape, LOAD, 100), 3);
	assert_int_equal(shape_signal_runs(&shape, LOAD, 2), 2);
	assert_int_equal(shape_level(&laid.plan->signals[SYNC], 1), 0);
	assert_int_equal(shape_level(&laid.plan->signals[LOAD], 1), 1);
	release(&laid);
}

// Line 1 follows one with a mark to its end, which comes two cells late.
static void leads_reach_over_from_other_lines(void **state)
{
	(void)state;
	struct laid laid = lay_quay();
	struct line_shape shape;
	assert_laid(&laid);
	assert_true(line_shape_make(&shape, laid.timeline, 1, laid.arena));
	assert_run(shape_signal_run(&shape, MARK, 0), 0, 2, 0, 28, 1);
	assert_run(shape_signal_run(&shape, MARK, 2), 2, 8, 28, 80, 0);
	release(&laid);
}

static void stretched_cells_are_runs(void **state)
{
	(void)state;
	struct laid laid = lay_quay();
	struct line_shape shape;
	assert_laid(&laid);
	assert_true(line_shape_make(&shape, laid.timeline, 2, laid.arena));
	assert_run(shape_stretched_run(&shape, 0), 0, 2, 0, 28, 1);
	assert_int_equal(shape_stretched_run(&shape, 2).cells, 0);
	// There is no blanking: what is not sync is other.
	assert_run(shape_kind_run(&shape, 0), 0, 3, 0, 38, HUE_SYNC);
	assert_run(shape_kind_run(&shape, 3), 3, 7, 38, 70, HUE_OTHER);
	assert_int_equal(shape_kind_runs(&shape, 9), 2);
	release(&laid);
}

// A line between others of its type shows what is usual; of "other" none is but the last, before line 0, which is of its type too.
static void a_type_is_shown_by_a_line_between_others(void **state)
{
	(void)state;
	struct laid laid = lay_quay();
	assert_laid(&laid);
	assert_int_equal(picture_line_of_type(laid.timeline, 0), 2);
	assert_int_equal(picture_line_of_type(laid.timeline, 1), 5);
	assert_int_equal(picture_common_line(laid.timeline), 2); // three lines each: the first type
	release(&laid);
}

// The levels of the same frame with a clock that makes it come so often, and with a standard of a name.
static const struct composite_levels *levels_at(struct fraction master_hz, const char *standard)
{
	struct laid laid = lay_quay();
	assert_laid(&laid);
	const struct standard named = {.name = standard != NULL ? standard : ""};
	laid.plan->clock.master_hz = master_hz;
	laid.plan->standard = standard != NULL ? &named : NULL;
	const struct composite_levels *levels = composite_levels_of(laid.timeline);
	release(&laid);
	return levels;
}

// White 100, setup 7.5, sync -40, burst 20 IRE either way: SMPTE 170M-2004 table 1. 700, 0, -300, 150 mV: Rec. ITU-R BT.1700 (2005) part B.
static void levels_are_those_of_525_or_625_lines(void **state)
{
	(void)state;
	const int64_t frame = 6 * 108; // ticks
	const struct composite_levels *sixty = levels_at(fraction_whole(60 * frame), NULL), *fifty = levels_at(fraction_whole(50 * frame), NULL);
	assert_string_equal(sixty->unit, "IRE");
	assert_int_equal(sixty->white, 100000);
	assert_int_equal(sixty->black, 7500);
	assert_int_equal(sixty->sync, -40000);
	assert_int_equal(sixty->burst, 20000);
	assert_string_equal(fifty->unit, "mV");
	assert_int_equal(fifty->white, 700000);
	assert_int_equal(fifty->black, 0);
	assert_int_equal(fifty->sync, -300000);
	assert_int_equal(fifty->burst, 150000);
	assert_ptr_equal(levels_at(fraction_whole(30 * frame), NULL), sixty);
	assert_ptr_equal(levels_at(fraction_whole(25 * frame), NULL), fifty);
	assert_ptr_equal(levels_at(fraction_whole(50 * frame), "composite-525"), sixty);
	assert_ptr_equal(levels_at(fraction_whole(60 * frame), "composite-625"), fifty);
}

static void rulers_have_round_steps(void **state)
{
	(void)state;
	assert_int_equal(ruler_step(0, 1), 1);
	assert_int_equal(ruler_step(10, 10), 1);
	assert_int_equal(ruler_step(11, 10), 2);
	assert_int_equal(ruler_step(101, 16), 10);
	assert_int_equal(ruler_step(101, 50), 2);
	assert_int_equal(ruler_step(101, 20), 5);
	assert_int_equal(ruler_step(1000000, 10), 100000);
	assert_int_equal(ruler_step(INT64_MAX, 1) > 0, 1);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(runs_are_those_of_the_pins),
		cmocka_unit_test(leads_reach_over_from_other_lines),
		cmocka_unit_test(stretched_cells_are_runs),
		cmocka_unit_test(a_type_is_shown_by_a_line_between_others),
		cmocka_unit_test(levels_are_those_of_525_or_625_lines),
		cmocka_unit_test(rulers_have_round_steps),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
