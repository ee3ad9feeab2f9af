// Pulses of drawn frames, at ticks and cells counted by hand. A cell is 10 ticks, a stretched one 14.
#include "drawn.h"

static const struct trace *trace_of(const struct drawn *drawn, uint32_t laps)
{
	const struct trace *trace = trace_make(drawn->arena, &drawn->recording, laps);
	assert_non_null(trace);
	assert_int_equal(trace->laps, laps);
	return trace;
}

static void assert_pulse(const struct trace *trace, enum traced traced, uint32_t index, int64_t start, int64_t end, uint32_t start_cell,
                         uint32_t end_cell)
{
	assert_true(index < trace->of[traced].count);
	const struct pulse *pulse = &trace->of[traced].list[index];
	assert_int_equal(pulse->start, start);
	assert_int_equal(pulse->end, end);
	assert_int_equal(pulse->start_cell, start_cell);
	assert_int_equal(pulse->end_cell, end_cell);
}

static void assert_counts(const struct trace *trace, uint32_t sync, uint32_t vertical, uint32_t burst, uint32_t picture)
{
	assert_int_equal(trace->of[TRACED_SYNC].count, sync);
	assert_int_equal(trace->of[TRACED_VERTICAL].count, vertical);
	assert_int_equal(trace->of[TRACED_BURST].count, burst);
	assert_int_equal(trace->of[TRACED_PICTURE].count, picture);
}

//           cell  0  1  2  3  4  5  6  7   (cell 1, 3 and 6 stretched)
//           tick  0 10 24 34 48 58 68 82 92
static void stretched_cells_move_what_follows(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("sS-Bb.:-");
	const struct trace *trace = trace_of(drawn, 1);
	assert_int_equal(trace->ticks, 92);
	assert_counts(trace, 1, 0, 1, 1);
	assert_pulse(trace, TRACED_SYNC, 0, 0, 24, 0, 2);
	assert_pulse(trace, TRACED_BURST, 0, 34, 58, 3, 5);
	assert_pulse(trace, TRACED_PICTURE, 0, 58, 82, 5, 7);
	assert_true(trace->of[TRACED_SYNC].has_signal && trace->of[TRACED_SYNC].active_high);
	assert_true(trace->of[TRACED_PICTURE].has_signal && !trace->of[TRACED_PICTURE].active_high);
	assert_false(trace->of[TRACED_VERTICAL].has_signal);
	erase(drawn);
}

// The last cell and the first two are one pulse, from tick 60; so is the picture that ends with the frame.
static void pulses_go_over_the_end(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("ss-..-s");
	const struct trace *trace = trace_of(drawn, 1);
	assert_counts(trace, 1, 0, 0, 1);
	assert_pulse(trace, TRACED_SYNC, 0, 60, 90, 6, 2);
	assert_pulse(trace, TRACED_PICTURE, 0, 30, 50, 3, 5);
	erase(drawn);
	// Two pulses of sync: the one that goes over the end has the highest start and is the last.
	drawn = DRAW("s-s-s.");
	trace = trace_of(drawn, 1);
	assert_counts(trace, 3, 0, 0, 1);
	assert_pulse(trace, TRACED_SYNC, 0, 0, 10, 0, 1);
	assert_pulse(trace, TRACED_PICTURE, 0, 50, 60, 5, 0);
	erase(drawn);
	drawn = DRAW("s-s--s");
	trace = trace_of(drawn, 1);
	assert_counts(trace, 2, 0, 0, 0);
	assert_pulse(trace, TRACED_SYNC, 0, 20, 30, 2, 3);
	assert_pulse(trace, TRACED_SYNC, 1, 50, 70, 5, 1);
	erase(drawn);
}

static void laps_repeat(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("s-s--S");
	const struct trace *trace = trace_of(drawn, 3);
	assert_int_equal(trace->ticks, 3 * 64);
	assert_counts(trace, 6, 0, 0, 0);
	for (uint32_t lap = 0; lap < 3; lap++) {
		assert_pulse(trace, TRACED_SYNC, 2 * lap, 64 * lap + 20, 64 * lap + 30, 2, 3);
		assert_pulse(trace, TRACED_SYNC, 2 * lap + 1, 64 * lap + 50, 64 * lap + 74, 5, 1);
	}
	erase(drawn);
}

static void always_and_never(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("nnnn");
	const struct trace *trace = trace_of(drawn, 2);
	assert_counts(trace, 0, 0, 0, 0);
	assert_true(trace->of[TRACED_SYNC].always);
	assert_true(trace->of[TRACED_PICTURE].always);
	assert_false(trace->of[TRACED_BURST].always);
	take_signal(drawn, DRAWN_BLANK);
	// No signal for blanking: no picture, rather than picture for ever.
	trace = trace_of(drawn, 1);
	assert_false(trace->of[TRACED_PICTURE].always || trace->of[TRACED_PICTURE].has_signal);
	erase(drawn);
	drawn = DRAW("----");
	trace = trace_of(drawn, 1);
	assert_counts(trace, 0, 0, 0, 0);
	assert_false(trace->of[TRACED_SYNC].always || trace->of[TRACED_PICTURE].always);
	erase(drawn);
}

static void horizontal_and_vertical(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("w-v-H-.-");
	const struct trace *trace = trace_of(drawn, 1);
	assert_true(trace->separate);
	assert_counts(trace, 2, 2, 0, 1);
	assert_pulse(trace, TRACED_SYNC, 1, 40, 54, 4, 5);
	assert_pulse(trace, TRACED_VERTICAL, 1, 20, 30, 2, 3);
	erase(drawn);
	// Composite sync beside them is taken, unless the others are preferred.
	drawn = DRAW("w-v-h-.-");
	drawn->plan.role_signal[ROLE_COMPOSITE_SYNC] = DRAWN_SYNC;
	assert_false(trace_of(drawn, 1)->separate);
	drawn->recording.prefer_separate = true;
	assert_true(trace_of(drawn, 1)->separate);
	// There is nothing to be preferred.
	take_signal(drawn, DRAWN_HORIZONTAL);
	assert_false(trace_of(drawn, 1)->separate);
	erase(drawn);
}

// Pins that lead, or lag, by less than a frame and by more, each signal by its own: the trace is that of the timeline.
static void leads_are_undone(void **state)
{
	(void)state;
	static const int64_t leads[] = {0, 1, -1, 3, -3, 8, -8, 9, -17, 1000000, -1000000};
	for (size_t one = 0; one < COUNT_OF(leads); one++)
		for (size_t other = 0; other < COUNT_OF(leads); other++) {
			struct drawn *drawn = DRAW("sS-Bb.:-");
			const int64_t each[DRAWN_SIGNALS] = {leads[one], 0, 0, leads[other], leads[(one + 1) % COUNT_OF(leads)],
			                                     leads[(one + other) % COUNT_OF(leads)]};
			record_pins(drawn, each);
			const struct trace *trace = trace_of(drawn, 1);
			assert_int_equal(trace->ticks, 92);
			assert_counts(trace, 1, 0, 1, 1);
			assert_pulse(trace, TRACED_SYNC, 0, 0, 24, 0, 2);
			assert_pulse(trace, TRACED_BURST, 0, 34, 58, 3, 5);
			assert_pulse(trace, TRACED_PICTURE, 0, 58, 82, 5, 7);
			erase(drawn);
		}
}

// What is recorded of the timeline has leads already undone.
static void leads_do_not_matter_to_the_timeline(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("sS-Bb.:-");
	drawn->signals[DRAWN_SYNC].lead_cells = 2;
	assert_pulse(trace_of(drawn, 1), TRACED_SYNC, 0, 0, 24, 0, 2);
	erase(drawn);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(stretched_cells_move_what_follows),
		cmocka_unit_test(pulses_go_over_the_end),
		cmocka_unit_test(laps_repeat),
		cmocka_unit_test(always_and_never),
		cmocka_unit_test(horizontal_and_vertical),
		cmocka_unit_test(leads_are_undone),
		cmocka_unit_test(leads_do_not_matter_to_the_timeline),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
