// Machines that count: what must agree with the counter's states. (Their rows: test_rows.c.)

#include "builder.h"

static void assert_printed(const struct bench *bench, const char *expected)
{
	assert_null(bench->table);
	assert_string_equal(text_string(&bench->printed), expected);
}

static struct bench *create_counter(unsigned bits)
{
	struct bench *bench = bench_create(bits, 64);
	bench->plan.machine.line.advance = ADVANCE_COUNT;
	return bench;
}

// Holds, start and codes that say what the counter does anyway are welcome.
static void test_agreement(void **state)
{
	(void)state;
	struct bench *bench = create_counter(3);
	const size_t at = bench_field(bench, "at", 1, 0), top = bench_field(bench, "top", 2, 2);
	const size_t sync = bench_coded(bench, "sync", top, (const uint32_t[]){1}, 1);
	bench_start(bench, 0);
	bench_region(bench, "line", 4, 0);
	bench_hold(bench, at, 0, 1);
	bench_region(bench, "sync", 2, SIGNAL(sync));
	const struct table *table = bench_table(bench);
	assert_states(table, (const uint32_t[]){0, 1, 2, 3, 4, 5}, 6);
	assert_codes(table, sync, (const uint32_t[]){1}, 1);
	assert_valid(bench);
	bench_destroy(bench);
}

// The counter gives a signal with automatic codes those that come up while it is asserted: here 1 and 2 of 0, 1, 2, 3.
static void test_automatic(void **state)
{
	(void)state;
	struct bench *bench = create_counter(3);
	const size_t pair = bench_field(bench, "pair", 2, 1);
	const size_t sync = bench_coded(bench, "sync", pair, NULL, 0);
	bench_region(bench, "line", 2, 0);
	bench_region(bench, "sync", 4, SIGNAL(sync));
	bench_region(bench, "rest", 1, 0);
	const struct table *table = bench_table(bench);
	assert_codes(table, sync, (const uint32_t[]){1, 2}, 2);
	assert_valid(bench);
	bench_destroy(bench);
}

static void test_automatic_conflict(void **state)
{
	(void)state;
	struct bench *bench = create_counter(3);
	const size_t pair = bench_field(bench, "pair", 2, 1);
	const size_t sync = bench_coded(bench, "sync", pair, NULL, 0);
	bench_region(bench, "line", 3, 0);
	bench_region(bench, "sync", 3, SIGNAL(sync));
	assert_null(bench_table(bench));
	assert_printed(bench, "board.yaml:10:1: error: signal \"sync\" is not asserted in line 0 (\"quay\"), cell 2, "
	                      "region \"line\", and asserted in "
	                      "line 0 (\"quay\"), cell 3, region \"sync\", but the counter has 1 in field \"pair\" in both "
	                      "[counted-conflict]\n");
	bench_destroy(bench);
}

static void test_start(void **state)
{
	(void)state;
	struct bench *bench = create_counter(3);
	bench_data(bench, "x");
	bench_start(bench, 4);
	bench_region(bench, "a", 3, 0);
	bench_region(bench, "b", 3, 1);
	assert_null(bench_table(bench));
	assert_printed(
		bench,
		"board.yaml:2:1: error: wanted start 0, since a counter begins its frame there, found 4 [counted-conflict]\n");
	bench_destroy(bench);
}

static void test_hold(void **state)
{
	(void)state;
	struct bench *bench = create_counter(4);
	const size_t page = bench_field(bench, "page", 3, 2), at = bench_field(bench, "at", 1, 0);
	bench_data(bench, "x");
	bench_region(bench, "porch", 4, 1);
	bench_region(bench, "picture", 3, 0);
	bench_hold(bench, page, 1, 0);
	bench_hold(bench, at, 0, 1);
	bench_region(bench, "late", 2, 1);
	bench_hold(bench, at, 0, 1);
	assert_null(bench_table(bench));
	// Cells 7 and 8 are held to 0 and 1, but the counter has 3 and 0 there.
	assert_printed(bench, "board.yaml:121:1: error: line 0 (\"quay\"), cell 7, region \"late\": field \"at\" is held "
	                      "to 0, but the counter has "
	                      "state 7, with 3 there [counted-conflict]\n"
	                      "board.yaml:121:1: error: line 0 (\"quay\"), cell 8, region \"late\": field \"at\" is held "
	                      "to 1, but the counter has "
	                      "state 8, with 0 there [counted-conflict]\n");
	bench_destroy(bench);
}

static void test_signal(void **state)
{
	(void)state;
	struct bench *bench = create_counter(3);
	const size_t top = bench_field(bench, "top", 2, 2);
	const size_t sync = bench_coded(bench, "sync", top, (const uint32_t[]){1}, 1);
	bench_region(bench, "line", 5, 0);
	bench_region(bench, "sync", 2, SIGNAL(sync));
	assert_null(bench_table(bench));
	assert_printed(bench, "board.yaml:10:1: error: line 0 (\"quay\"), cell 4, region \"line\": wanted \"sync\" not "
	                      "asserted, but the counter has "
	                      "state 4, with 1 in field \"top\" [counted-conflict]\n");
	bench_destroy(bench);
}

static void test_short(void **state)
{
	(void)state;
	struct bench *bench = create_counter(2);
	bench_data(bench, "x");
	bench_region(bench, "a", 3, 0);
	bench_region(bench, "b", 2, 1);
	assert_null(bench_table(bench));
	assert_printed(bench,
	               "board.yaml:1:1: error: the frame needs 5 states, but a counter of 2 bits has 4 [counter-short]\n"
	               "  hint: state: 3 bits would do\n");
	bench_destroy(bench);
}

// Four states are enough for four cells, but not with one to clear the counter in.
static void test_short_by_one(void **state)
{
	(void)state;
	struct bench *bench = create_counter(2);
	bench->plan.machine.line.clear = CLEAR_ASYNC;
	bench_data(bench, "x");
	bench_region(bench, "a", 3, 0);
	bench_region(bench, "b", 1, 1);
	assert_null(bench_table(bench));
	assert_printed(bench, "board.yaml:1:1: error: the frame needs 5 states, one of them to clear the counter in, but a "
	                      "counter of 2 bits has 4 "
	                      "[counter-short]\n"
	                      "  hint: state: 3 bits would do\n");
	bench_destroy(bench);
}

// The frame repeats after two cells, so the counter runs through two states.
static void test_period(void **state)
{
	(void)state;
	struct bench *bench = create_counter(2);
	bench_data(bench, "x");
	for (int line = 0; line < 8; line++) {
		bench_region(bench, "a", 1, 0);
		bench_region(bench, "b", 1, 1);
	}
	const struct table *table = bench_table(bench);
	assert_states(table, (const uint32_t[]){0, 1}, 2);
	assert_row(table_row(table, STAGE_LINE, 0), 0, false, 1);
	assert_row(table_row(table, STAGE_LINE, 1), 0, true, 0);
	bench_destroy(bench);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_agreement),
		cmocka_unit_test(test_automatic),
		cmocka_unit_test(test_automatic_conflict),
		cmocka_unit_test(test_start),
		cmocka_unit_test(test_hold),
		cmocka_unit_test(test_signal),
		cmocka_unit_test(test_short),
		cmocka_unit_test(test_short_by_one),
		cmocka_unit_test(test_period),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
