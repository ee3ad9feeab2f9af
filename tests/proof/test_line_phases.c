// Phases at line starts, by hand and against their definition. Sources: S170 = SMPTE 170M-2004; B470 = Rec. ITU-R BT.470-6 (1998);
// B601 = Rec. ITU-R BT.601-5 (1995). Lines of 912 ticks: common practice, no standard.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "by_hand.h"

static struct line_phases measure(struct arena *arena, const int64_t *ticks, uint32_t lines, struct fraction cycles_per_tick)
{
	struct line_phases phases;
	assert_true(line_phases_measure(ticks, lines, cycles_per_tick, arena, &phases));
	return phases;
}

static void assert_phase(const struct line_phases *phases, int64_t line, int64_t numerator, int64_t denominator)
{
	const struct fraction phase = line_phase(phases, line);
	assert_int_equal(phase.numerator, numerator);
	assert_int_equal(phase.denominator, denominator);
}

static void assert_run(const struct line_phases *phases, uint32_t run, uint32_t first, uint32_t lines, int64_t phase, int64_t advance)
{
	assert_true(run < phases->run_count);
	assert_int_equal(phases->runs[run].first_line, first);
	assert_int_equal(phases->runs[run].lines, lines);
	assert_int_equal(phases->runs[run].phase, phase);
	assert_int_equal(phases->runs[run].advance, advance);
}

static void assert_distinct(const struct line_phases *phases, size_t count, const struct fraction *expected)
{
	struct fraction values[PHASES_LISTED];
	assert_int_equal(line_phases_distinct(phases, values), count);
	for (size_t index = 0; index < count; index++)
		assert_true(fraction_compare(values[index], expected[index]) == 0);
}

// At four times the subcarrier. S170 11.2: a line of 455/2 cycles, 910 ticks. Common practice: 912 ticks, 228 cycles.
static void lines_that_alternate_and_lines_that_do_not(void **test)
{
	(void)test;
	struct arena *arena = arena_create();
	const int64_t ticks[] = {910, 910, 910}, whole[] = {912, 912, 912};
	struct line_phases phases = measure(arena, ticks, 3, ratio(1, 4));
	assert_int_equal(phases.parts, 4);
	assert_int_equal(phases.period_lines, 1);
	assert_int_equal(phases.period_advance, 2);
	assert_int_equal(phases.run_count, 1);
	assert_run(&phases, 0, 0, 1, 0, 2);
	for (int64_t line = 0; line < 10; line++)
		assert_phase(&phases, line, line % 2, line % 2 == 0 ? 1 : 2);
	assert_distinct(&phases, 2, (struct fraction[]){{0, 1}, {1, 2}});
	phases = measure(arena, whole, 3, ratio(1, 4));
	for (int64_t line = 0; line < 10; line++)
		assert_phase(&phases, line, 0, 1);
	assert_distinct(&phases, 1, (struct fraction[]){{0, 1}});
	arena_destroy(arena);
}

// B470 table 2, 2.11b: 1135/4 + 1/625 cycles a line, 283.7516. B601 (625 lines, 13.5 MHz): 864 samples a line, so 864 ticks at
// 13.5 MHz and 4 433 618.75 Hz. Each line is 0.7516 = 1879/2500 of a cycle on; 2500 lines, four frames, are whole.
static void lines_of_625(void **test)
{
	(void)test;
	struct arena *arena = arena_create();
	struct fraction cycles_per_tick;
	assert_true(fraction_divide(ratio(443361875, 100), fraction_whole(13500000), &cycles_per_tick));
	static int64_t ticks[625];
	for (uint32_t line = 0; line < 625; line++)
		ticks[line] = 864;
	struct line_phases phases = measure(arena, ticks, 625, cycles_per_tick);
	assert_int_equal(phases.run_count, 1);
	assert_phase(&phases, 1, 1879, 2500);
	assert_phase(&phases, 2, 629, 1250);   // 3758/2500 - 1
	assert_phase(&phases, 625, 3, 4);      // 625 × 1879/2500 = 469 3/4
	assert_phase(&phases, 1250, 1, 2);
	assert_phase(&phases, 2499, 621, 2500); // 1 - 1879/2500
	assert_phase(&phases, 2500, 0, 1);
	assert_distinct(&phases, 0, NULL);     // 2500 of them
	arena_destroy(arena);
}

// 910, 912: every second line is half a cycle more. 0, 1/2, 1/2, 0 and again.
static void lines_by_turns(void **test)
{
	(void)test;
	struct arena *arena = arena_create();
	const int64_t ticks[] = {910, 912, 910, 912};
	const struct line_phases phases = measure(arena, ticks, 4, ratio(1, 4));
	assert_int_equal(phases.period_lines, 2);
	assert_int_equal(phases.period_advance, 2);
	assert_int_equal(phases.run_count, 2);
	assert_run(&phases, 0, 0, 1, 0, 2);
	assert_run(&phases, 1, 1, 1, 2, 0);
	for (int64_t line = 0; line < 12; line++)
		assert_phase(&phases, line, line % 4 == 1 || line % 4 == 2, line % 4 == 1 || line % 4 == 2 ? 2 : 1);
	arena_destroy(arena);
}

// Other ticks, the same phase: 909, 913 and 917 are all a quarter more than whole. 908 and 916 are whole.
static void what_counts_is_the_rest(void **test)
{
	(void)test;
	struct arena *arena = arena_create();
	const int64_t ticks[] = {909, 913, 908, 916, 917};
	const struct line_phases phases = measure(arena, ticks, 5, ratio(1, 4));
	assert_int_equal(phases.period_lines, 5);
	assert_int_equal(phases.period_advance, 3);
	assert_int_equal(phases.run_count, 3);
	assert_run(&phases, 0, 0, 2, 0, 1);
	assert_run(&phases, 1, 2, 2, 2, 0);
	assert_run(&phases, 2, 4, 1, 2, 1);
	// The second frame begins three quarters on, the fourth at 9/4, the fifth in step again.
	assert_phase(&phases, 5, 3, 4);
	assert_phase(&phases, 6, 0, 1);
	assert_phase(&phases, 8, 1, 4);
	assert_phase(&phases, 15, 1, 4);
	assert_phase(&phases, 20, 0, 1);
	assert_distinct(&phases, 4, (struct fraction[]){{0, 1}, {1, 4}, {1, 2}, {3, 4}});
	arena_destroy(arena);
}

// Three lines of 13, 14 and 13 ticks at 5/12 cycle each: rests of 5, 10 and 5 twelfths; 20/12 a frame, so 8/12. Three frames, of
// starts 0 5 3, 8 1 11, 4 9 7: nine of twelve.
static void more_phases_than_are_listed(void **test)
{
	(void)test;
	struct arena *arena = arena_create();
	const int64_t ticks[] = {13, 14, 13}, fewer[] = {13, 18, 17};
	struct line_phases phases = measure(arena, ticks, 3, ratio(5, 12));
	assert_int_equal(phases.period_advance, 8);
	assert_run(&phases, 1, 1, 1, 5, 10);
	assert_phase(&phases, 2, 1, 4);
	assert_phase(&phases, 4, 1, 12);
	assert_phase(&phases, 5, 11, 12);
	assert_phase(&phases, 8, 7, 12);
	assert_distinct(&phases, 0, NULL);
	// 65, 90 and 85 twelfths: 5, 6 and 1, whole together. 0, 5, 11 and again.
	phases = measure(arena, fewer, 3, ratio(5, 12));
	assert_distinct(&phases, 3, (struct fraction[]){{0, 1}, {5, 12}, {11, 12}});
	arena_destroy(arena);
}

// The largest denominator there is: sums of two phases pass 64 bits. 2^63 - 1 = p; lines of 1 tick, each p - 1 parts on.
static void parts_of_63_bits(void **test)
{
	(void)test;
	struct arena *arena = arena_create();
	const int64_t ticks[] = {1, 2, 1, 1};
	const struct line_phases phases = measure(arena, ticks, 4, ratio(INT64_MAX - 1, INT64_MAX));
	assert_phase(&phases, 1, INT64_MAX - 1, INT64_MAX);
	assert_phase(&phases, 2, INT64_MAX - 3, INT64_MAX);
	assert_phase(&phases, 4, INT64_MAX - 5, INT64_MAX);
	assert_phase(&phases, 8, INT64_MAX - 10, INT64_MAX);
	// k = 2^61 - 1 frames: -5k modulo p = 4k + 3 is 2p - 5k = 3k + 6.
	assert_phase(&phases, INT64_MAX / 4 * 4, INT64_MAX / 4 * 3 + 6, INT64_MAX);
	assert_distinct(&phases, 0, NULL);
	// More than a cycle a tick, and many.
	const struct line_phases fast = measure(arena, ticks, 4, ratio(INT64_MAX, 2));
	assert_phase(&fast, 1, 1, 2);
	assert_phase(&fast, 2, 1, 2);
	assert_phase(&fast, 3, 0, 1);
	assert_phase(&fast, 4, 1, 2);
	arena_destroy(arena);
}

static int64_t ticks_before(const int64_t *ticks, uint32_t lines, int64_t line)
{
	int64_t sum = 0;
	for (int64_t index = 0; index < line; index++)
		sum += ticks[index % lines];
	return sum;
}

#define MOST_LINES 24
#define MOST_TRIED 400 // more than 24 lines × 16 frames, after which everything repeats

static void against_the_definition(void **test)
{
	(void)test;
	uint64_t seed = 9;
	unsigned short_lists = 0, long_lists = 0;
	for (unsigned round = 0; round < 3000; round++) {
		struct arena *arena = arena_create();
		int64_t ticks[MOST_LINES], parts = 1 + random_below(&seed, 16), cycles = 1 + random_below(&seed, 40);
		const uint32_t lines = 1 + random_below(&seed, MOST_LINES), repeated = 1 + random_below(&seed, lines);
		const uint32_t variety = 1 + random_below(&seed, 6);
		for (uint32_t line = 0; line < lines; line++)
			ticks[line] = line < repeated ? 20 + random_below(&seed, variety) : ticks[line - repeated];
		const struct line_phases phases = measure(arena, ticks, lines, ratio(cycles, parts));
		assert_int_equal(lines % phases.period_lines, 0);
		bool seen[16] = {false};
		size_t distinct = 0;
		for (int64_t line = 0; line < MOST_TRIED; line++) {
			const int64_t rest = ticks_before(ticks, lines, line) * cycles % parts;
			struct fraction expected;
			assert_true(fraction_make(rest, parts, &expected));
			assert_phase(&phases, line, expected.numerator, expected.denominator);
			distinct += !seen[rest];
			seen[rest] = true;
		}
		struct fraction values[PHASES_LISTED];
		const size_t count = line_phases_distinct(&phases, values);
		assert_int_equal(count, distinct > PHASES_LISTED ? 0 : distinct);
		for (size_t index = 0, rest = 0; index < count; index++, rest++) {
			while (!seen[rest])
				rest++;
			struct fraction expected;
			assert_true(fraction_make((int64_t)rest, parts, &expected));
			assert_int_equal(fraction_compare(values[index], expected), 0);
		}
		short_lists += count > 1;
		long_lists += count == 0;
		arena_destroy(arena);
	}
	assert_true(short_lists > 300 && long_lists > 300);
}

// Runs follow each other without gaps, and no two neighbours advance alike.
static void runs_are_as_long_as_can_be(void **test)
{
	(void)test;
	struct arena *arena = arena_create();
	static int64_t ticks[1000];
	for (uint32_t line = 0; line < 1000; line++)
		ticks[line] = line < 600 ? 912 : line < 601 ? 910 : line < 950 ? 908 : 911;
	const struct line_phases phases = measure(arena, ticks, 1000, ratio(1, 4));
	assert_int_equal(phases.run_count, 4);
	assert_run(&phases, 0, 0, 600, 0, 0);
	assert_run(&phases, 1, 600, 1, 0, 2);
	assert_run(&phases, 2, 601, 349, 2, 0);
	assert_run(&phases, 3, 950, 50, 2, 3);
	assert_phase(&phases, 600, 0, 1);
	assert_phase(&phases, 601, 1, 2);
	assert_phase(&phases, 950, 1, 2);
	assert_phase(&phases, 951, 1, 4);
	assert_phase(&phases, 999, 1, 4); // 2 + 49 × 3 = 149, 1 more than 37 × 4
	assert_phase(&phases, 1000, 0, 1);
	arena_destroy(arena);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(lines_that_alternate_and_lines_that_do_not),
		cmocka_unit_test(lines_of_625),
		cmocka_unit_test(lines_by_turns),
		cmocka_unit_test(what_counts_is_the_rest),
		cmocka_unit_test(more_phases_than_are_listed),
		cmocka_unit_test(parts_of_63_bits),
		cmocka_unit_test(against_the_definition),
		cmocka_unit_test(runs_are_as_long_as_can_be),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
