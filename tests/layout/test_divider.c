// The tick divider, worked out by hand. Figures from outside:
//   S170   SMPTE 170M-2004, 11.2: 227.5 cycles of subcarrier a line
//   S244   SMPTE 244M-2003, 4.1.1: 910 samples a line at four times the subcarrier; table 5: the samples of the burst
//   B601   Rec. ITU-R BT.601-5 (1995), part A, table 2: 858 samples of luminance a line at 13.5 MHz
//   E3280  EBU Tech. 3280-E (April 1995), 1.1 and 1.2: 17.734475 MHz are four times the subcarrier; 1135 samples a line
#include "laid.h"

#include "layout/divider.h"

// A clock of 8 MHz; a subcarrier of so many ticks a cycle, none for 0.
static struct clock ticks_clock(int64_t dot, int64_t cell, int64_t stretch, int64_t subcarrier)
{
	struct clock clock = {.master_hz = {8000000, 1}, .dot_ticks = dot, .cell_ticks = cell, .stretch_ticks = stretch,
	                      .has_subcarrier = subcarrier > 0};
	if (subcarrier > 0)
		assert_true(fraction_divide(clock.master_hz, fraction_whole(subcarrier), &clock.subcarrier_hz));
	return clock;
}

static struct divider divider_of_ticks(int64_t dot, int64_t cell, int64_t stretch, int64_t subcarrier)
{
	const struct clock clock = ticks_clock(dot, cell, stretch, subcarrier);
	return divider_of_clock(&clock);
}

static void assert_fraction(struct fraction found, int64_t numerator, int64_t denominator)
{
	assert_int_equal(found.numerator, numerator);
	assert_int_equal(found.denominator, denominator);
}

// The house example: 9 = 2 × 4 + 1 ticks are 9/4 cycles, 12 are 3. The phase moves by 1/4 and by 0, and no half cycle (2)
// divides 9.
static void a_quarter_cycle_over_needs_a_divider(void **state)
{
	(void)state;
	const struct divider divider = divider_of_ticks(1, 9, 3, 4);
	assert_int_equal(divider.cell_ticks, 9);
	assert_int_equal(divider.stretch_ticks, 3);
	assert_int_equal(divider.bits, 4); // counts 0 … 11
	assert_int_equal(divider.dot.source, TAP_MASTER);
	assert_true(divider.dot.in_step);
	assert_int_equal(divider.subcarrier.source, TAP_DIVIDER);
	assert_true(divider.subcarrier.exact);
	assert_true(divider.subcarrier.in_step);
	assert_fraction(divider.subcarrier.period_ticks, 4, 1);
	assert_fraction(divider.subcarrier.cell_cycles, 9, 4);
	assert_fraction(divider.subcarrier.stretched_cycles, 3, 1);
	assert_int_equal(divider.subcarrier.step_ticks, 0);
}

// 8 ticks are four dots of two. A stretch of 3 ends within a dot, one of 2 or 4 does not.
static void dots_are_whole_through_the_stretch(void **state)
{
	(void)state;
	const struct divider odd = divider_of_ticks(2, 8, 3, 0);
	assert_int_equal(odd.dot.source, TAP_COUNTER);
	assert_int_equal(odd.dot.step_ticks, 2);
	assert_false(odd.dot.in_step);
	assert_fraction(odd.dot.cell_cycles, 4, 1);
	assert_fraction(odd.dot.stretched_cycles, 11, 2);
	assert_int_equal(odd.subcarrier.source, TAP_NONE);
	assert_true(divider_of_ticks(2, 8, 2, 0).dot.in_step);
	assert_true(divider_of_ticks(2, 8, 4, 0).dot.in_step);
	assert_true(divider_of_ticks(2, 8, 0, 0).dot.in_step);
	// Half a dot of four is no dot, and 9 + 3 ticks being six whole dots does not mend the cells of 9.
	assert_false(divider_of_ticks(4, 8, 2, 0).dot.in_step);
	const struct divider mended = divider_of_ticks(2, 9, 3, 0);
	assert_int_equal(mended.dot.source, TAP_DIVIDER);
	assert_false(mended.dot.in_step);
	assert_fraction(mended.dot.cell_cycles, 9, 2);
	assert_fraction(mended.dot.stretched_cycles, 6, 1);
}

// A subcarrier of 4 ticks turns over every 2. Cells of 8 and of 14 are whole half cycles; so is a stretch of 2, but 1 and 3
// are none.
static void a_counter_gives_whole_half_cycles(void **state)
{
	(void)state;
	const struct divider halves = divider_of_ticks(1, 14, 2, 4);
	assert_int_equal(halves.subcarrier.source, TAP_COUNTER);
	assert_int_equal(halves.subcarrier.step_ticks, 2);
	assert_true(halves.subcarrier.in_step);
	assert_fraction(halves.subcarrier.cell_cycles, 7, 2);
	assert_fraction(halves.subcarrier.stretched_cycles, 4, 1);
	assert_true(divider_of_ticks(1, 8, 0, 4).subcarrier.in_step);
	assert_true(divider_of_ticks(1, 8, 4, 4).subcarrier.in_step);
	assert_false(divider_of_ticks(1, 8, 1, 4).subcarrier.in_step);
	assert_false(divider_of_ticks(1, 8, 3, 4).subcarrier.in_step);
	// Three ticks have no halves: 6 are two cycles, and only another 3 keep step. Of two ticks each is a half.
	assert_int_equal(divider_of_ticks(1, 6, 3, 3).subcarrier.step_ticks, 3);
	assert_true(divider_of_ticks(1, 6, 3, 3).subcarrier.in_step);
	assert_false(divider_of_ticks(1, 6, 1, 3).subcarrier.in_step);
	assert_true(divider_of_ticks(1, 7, 1, 2).subcarrier.in_step);
	assert_int_equal(divider_of_ticks(1, 7, 1, 2).subcarrier.source, TAP_COUNTER);
	assert_int_equal(divider_of_ticks(1, 7, 1, 1).subcarrier.source, TAP_MASTER);
}

// Cells of one tick need no counter; two counts are one bit; 8 counts 3 bits, 9 counts 4.
static void bits_hold_the_last_count(void **state)
{
	(void)state;
	assert_int_equal(divider_of_ticks(1, 1, 0, 0).bits, 0);
	assert_int_equal(divider_of_ticks(1, 1, 1, 0).bits, 1);
	assert_int_equal(divider_of_ticks(1, 8, 0, 0).bits, 3);
	assert_int_equal(divider_of_ticks(1, 8, 1, 0).bits, 4);
	assert_int_equal(divider_of_ticks(1, 1000000, 1000000, 0).bits, 21); // 2^20 = 1048576 <= 1999999 < 2^21
}

// A divider of `period` for cells of a prime number of ticks, so that it is one of its own, against levels written out.
static void assert_levels(int64_t period, const char *levels)
{
	const struct divider divider = divider_of_ticks(1, 13, 0, period);
	assert_true(divider_tap_has_levels(&divider.subcarrier));
	for (int64_t count = 0; levels[count] != '\0'; count++)
		assert_int_equal(divider_tap_is_high(&divider.subcarrier, count), levels[count] == 'H');
}

static void taps_are_high_for_the_first_half(void **state)
{
	(void)state;
	assert_levels(2, "HLHLHLHLHLHLH");
	assert_levels(3, "HHLHHLHHLHHLH");
	assert_levels(4, "HHLLHHLLHHLLH");
	assert_levels(5, "HHHLLHHHLLHHH");
	assert_levels(13, "HHHHHHHLLLLLL");
	const struct divider master = divider_of_ticks(1, 13, 0, 1);
	assert_false(divider_tap_has_levels(&master.dot));
	assert_false(divider_tap_has_levels(&master.subcarrier));
}

static void assert_spans(int64_t cell, int64_t stretch, const struct divider_span *wanted, size_t count)
{
	struct divider_span spans[DIVIDER_SPANS];
	const struct divider divider = divider_of_ticks(1, cell, stretch, 0);
	assert_int_equal(divider_spans(&divider, spans), count);
	for (size_t index = 0; index < count; index++) {
		assert_int_equal(spans[index].first, wanted[index].first);
		assert_int_equal(spans[index].last, wanted[index].last);
		assert_int_equal(spans[index].stretched, wanted[index].stretched);
	}
}

static void long_sequences_show_their_ends(void **state)
{
	(void)state;
	assert_spans(1, 0, (struct divider_span[]){{0, 0, false}}, 1);
	assert_spans(9, 3, (struct divider_span[]){{0, 8, false}, {9, 11, true}}, 2);
	assert_spans(32, 16, (struct divider_span[]){{0, 31, false}, {32, 47, true}}, 2);
	assert_spans(33, 0, (struct divider_span[]){{0, 23, false}, {25, 32, false}}, 2);
	assert_spans(1000000, 1000000,
	             (struct divider_span[]){
	                 {0, 23, false}, {999992, 999999, false}, {1000000, 1000007, true}, {1999992, 1999999, true}},
	             4);
	assert_spans(2, 17, (struct divider_span[]){{0, 1, false}, {2, 9, true}, {11, 18, true}}, 3);
}

// The whole line as one cell. At four times the subcarrier, S244 table 5 has a burst that repeats every 4 samples, 12D 092 0B3
// 14E from sample 866 on, and for the opposite phase 0B3 14E 12D 092 there, two samples on. 910 samples (S244 4.1.1) are 227.5
// cycles (S170). A line of 912, stretched by 2, is 228, and the tap keeps its half cycles.
static void lines_of_910_samples_end_half_a_cycle_on(void **state)
{
	(void)state;
	static const int burst[] = {0x12D, 0x092, 0x0B3, 0x14E}, opposite[] = {0x0B3, 0x14E, 0x12D, 0x092};
	const struct clock clock = {.master_hz = {157500000, 11}, .dot_ticks = 1, .cell_ticks = 910, .stretch_ticks = 2,
	                            .has_subcarrier = true, .subcarrier_hz = {39375000, 11}};
	const struct divider divider = divider_of_clock(&clock);
	assert_fraction(divider.subcarrier.period_ticks, sizeof burst / sizeof *burst, 1);
	assert_fraction(divider.subcarrier.cell_cycles, 455, 2);
	assert_fraction(divider.subcarrier.stretched_cycles, 228, 1);
	assert_int_equal(divider.subcarrier.source, TAP_COUNTER);
	assert_true(divider.subcarrier.in_step);
	// Half a cycle of ticks, found in the published samples.
	for (int64_t sample = 0; sample < 4; sample++)
		assert_int_equal(burst[(sample + divider.subcarrier.step_ticks) % 4], opposite[sample]);
}

// The same line at 13.5 MHz is 858 samples (B601), still 227.5 cycles, of 13.5 / (315/88) = 132/35 samples each: no divider
// gives that.
static void lines_of_858_samples_need_an_oscillator(void **state)
{
	(void)state;
	const struct clock clock = {.master_hz = {13500000, 1}, .dot_ticks = 1, .cell_ticks = 858, .stretch_ticks = 1,
	                            .has_subcarrier = true, .subcarrier_hz = {39375000, 11}};
	const struct divider divider = divider_of_clock(&clock);
	assert_int_equal(divider.subcarrier.source, TAP_OSCILLATOR);
	assert_true(divider.subcarrier.exact);
	assert_true(divider.subcarrier.in_step);
	assert_false(divider_tap_has_levels(&divider.subcarrier));
	assert_fraction(divider.subcarrier.period_ticks, 132, 35);
	assert_fraction(divider.subcarrier.cell_cycles, 455, 2);
}

// 1135 samples (E3280) are 283 3/4 cycles: an odd number, so that the tap needs a divider of its own.
static void lines_of_1135_samples_need_a_divider(void **state)
{
	(void)state;
	const struct clock clock = {.master_hz = {17734475, 1}, .dot_ticks = 1, .cell_ticks = 1135, .has_subcarrier = true,
	                            .subcarrier_hz = {17734475, 4}};
	const struct divider divider = divider_of_clock(&clock);
	assert_int_equal(divider.subcarrier.source, TAP_DIVIDER);
	assert_fraction(divider.subcarrier.cell_cycles, 1135, 4);
	assert_fraction(divider.subcarrier.stretched_cycles, 1135, 4);
}

// Ratios beyond 64 bits: nothing is claimed but that no divider gives them.
static void what_does_not_fit_is_not_exact(void **state)
{
	(void)state;
	const struct clock clock = {.master_hz = {INT64_MAX, 2}, .dot_ticks = 1, .cell_ticks = 9, .has_subcarrier = true,
	                            .subcarrier_hz = {1000003, 1000000000}};
	const struct divider divider = divider_of_clock(&clock);
	assert_int_equal(divider.subcarrier.source, TAP_OSCILLATOR);
	assert_false(divider.subcarrier.exact);
	assert_true(divider.subcarrier.in_step);
}

// The notices of a clock, for a plan with or without stretched cells.
static void assert_notices(struct clock clock, bool stretched, size_t count, enum rule first)
{
	struct diagnostics *diagnostics = diagnostics_create();
	assert_non_null(diagnostics);
	divider_report(&clock, stretched, diagnostics);
	assert_int_equal(diagnostics_count(diagnostics), count);
	assert_int_equal(diagnostics_error_count(diagnostics), 0);
	if (count > 0)
		assert_int_equal(diagnostics_rule(diagnostics, 0), first);
	diagnostics_destroy(diagnostics);
}

static void only_what_breaks_is_reported(void **state)
{
	(void)state;
	assert_notices(ticks_clock(1, 9, 3, 4), true, 0, 0);
	assert_notices(ticks_clock(1, 14, 2, 4), true, 0, 0);
	assert_notices(ticks_clock(2, 8, 3, 0), true, 1, RULE_DOT_OUT_OF_STEP);
	assert_notices(ticks_clock(2, 8, 3, 0), false, 0, 0);
	assert_notices(ticks_clock(2, 9, 3, 0), false, 1, RULE_DOT_OUT_OF_STEP);
	assert_notices(ticks_clock(2, 9, 2, 0), true, 1, RULE_DOT_OUT_OF_STEP);
	assert_notices(ticks_clock(1, 8, 3, 4), true, 1, RULE_SUBCARRIER_OUT_OF_STEP);
	assert_notices(ticks_clock(1, 8, 3, 4), false, 0, 0);
	assert_notices(ticks_clock(2, 8, 3, 4), true, 2, RULE_DOT_OUT_OF_STEP);
}

// Notices need a cell of the frame that is stretched, and not just a type of line that the frame does not use.
static void the_frame_decides(void **state)
{
	(void)state;
	const char *lines = "  a: { regions: [ { region: p, cells: 2 } ] }\n  b: { regions: [ { region: p, cells: 2, stretch: 1 } ] }\n";
	struct laid laid = lay(", dot: 5 ticks", lines, "  - { repeat: 1, line: a }\n");
	assert_laid(&laid);
	assert_int_equal(diagnostics_count(laid.diagnostics), 1);
	assert_int_equal(diagnostics_rule(laid.diagnostics, 0), RULE_UNUSED_LINE);
	release(&laid);
	laid = lay(", dot: 5 ticks", lines, "  - { repeat: 9, line: a }\n  - { repeat: 1, line: b }\n");
	assert_laid(&laid);
	assert_int_equal(diagnostics_count(laid.diagnostics), 1);
	assert_int_equal(diagnostics_rule(laid.diagnostics, 0), RULE_DOT_OUT_OF_STEP);
	release(&laid);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(a_quarter_cycle_over_needs_a_divider),
		cmocka_unit_test(dots_are_whole_through_the_stretch),
		cmocka_unit_test(a_counter_gives_whole_half_cycles),
		cmocka_unit_test(bits_hold_the_last_count),
		cmocka_unit_test(taps_are_high_for_the_first_half),
		cmocka_unit_test(long_sequences_show_their_ends),
		cmocka_unit_test(lines_of_910_samples_end_half_a_cycle_on),
		cmocka_unit_test(lines_of_858_samples_need_an_oscillator),
		cmocka_unit_test(lines_of_1135_samples_need_a_divider),
		cmocka_unit_test(what_does_not_fit_is_not_exact),
		cmocka_unit_test(only_what_breaks_is_reported),
		cmocka_unit_test(the_frame_decides),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
