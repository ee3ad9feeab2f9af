// States that cells are to keep, worked out by hand: kept where they may be, given up where they stand in the way, and never in the way of an
// assignment.

#include "builder.h"

#define NONE NO_STATE

// The table with preferred states, one for each cell.
static const struct table *near_table(struct bench *bench, const uint32_t *states)
{
	const struct preference preference = {states};
	bench_lay(bench);
	bench->table = table_create_near(&bench->timeline, &preference, bench->diagnostics);
	diagnostics_print(bench->diagnostics, &bench->printed, false);
	return bench->table;
}

static struct bench *three_cells(void)
{
	struct bench *bench = bench_create(3, 4);
	bench_data(bench, "x");
	bench_region(bench, "a", 1, 1);
	bench_region(bench, "b", 2, 0);
	return bench;
}

// Also what no cleared latch holds; cells that prefer nothing get the lowest that are left. (State 6 differs from 7 in one bit: guard.c has
// nothing to do.)
static void test_kept(void **state)
{
	(void)state;
	struct bench *bench = three_cells();
	assert_states(near_table(bench, (const uint32_t[]){5, 6, 7}), (const uint32_t[]){5, 6, 7}, 3);
	assert_valid(bench);
	bench_destroy(bench);
	bench = three_cells();
	assert_states(near_table(bench, (const uint32_t[]){6, NONE, 1}), (const uint32_t[]){6, 0, 1}, 3);
	bench_destroy(bench);
	bench = three_cells();
	assert_valid((near_table(bench, (const uint32_t[]){NONE, NONE, NONE}), bench));
	bench_destroy(bench);
}

// No states at all, and states that two cells prefer: the first has it.
static void test_nonsense(void **state)
{
	(void)state;
	struct bench *bench = three_cells();
	near_table(bench, (const uint32_t[]){8, 1u << 24, 0xFFFFFFFE});
	assert_valid(bench);
	bench_destroy(bench);
	bench = three_cells();
	const struct table *table = near_table(bench, (const uint32_t[]){3, 4, 4});
	assert_valid(bench);
	assert_int_equal(table->state_of_cell[1], 4);
	bench_destroy(bench);
}

// The plan's start comes first, and so do held bits and codes.
static void test_given_up(void **state)
{
	(void)state;
	static const uint32_t two[] = {2};
	struct bench *bench = bench_create(3, 8);
	const size_t top = bench_field(bench, "top", 2, 1), low = bench_field(bench, "low", 0, 0);
	const size_t mark = bench_coded(bench, "mark", top, two, 1);
	bench_start(bench, 1);
	bench_region(bench, "first", 1, 0);
	bench_region(bench, "held", 1, 0);
	bench_hold(bench, low, 0, 0);
	bench_region(bench, "marked", 2, SIGNAL(mark)); // states 4 and 5
	bench_region(bench, "rest", 1, 0);
	const struct table *table = near_table(bench, (const uint32_t[]){6, 3, 5, 7, 2});
	assert_valid(bench);
	assert_int_equal(table->state_of_cell[0], 1); // not 6
	assert_int_equal(table->state_of_cell[1] & 1, 0); // not 3
	assert_int_equal(table->state_of_cell[2], 5);
	assert_int_equal(table->state_of_cell[3], 4); // not 7
	bench_destroy(bench);
}

// Cell 0 may have 0 and 1, cell 1 0 and 2, cell 2 only 2. Whatever the first two prefer, there is one solution.
static void test_in_the_way(void **state)
{
	(void)state;
	const uint32_t preferred[][3] = {{0, 2, NONE}, {0, 0, 2}, {1, 2, 3}, {0, NONE, NONE}, {NONE, 2, NONE}};
	for (size_t index = 0; index < sizeof preferred / sizeof *preferred; index++) {
		struct bench *bench = bench_create(2, 4);
		const size_t high = bench_field(bench, "high", 1, 1), low = bench_field(bench, "low", 0, 0), at = bench_field(bench, "at", 1, 0);
		bench_data(bench, "x");
		bench_region(bench, "a", 1, 1);
		bench_hold(bench, high, 0, 0);
		bench_region(bench, "b", 1, 0);
		bench_hold(bench, low, 0, 0);
		bench_region(bench, "c", 1, 0);
		bench_hold(bench, at, 2, 0);
		assert_states(near_table(bench, preferred[index]), (const uint32_t[]){1, 0, 2}, 3);
		bench_destroy(bench);
	}
}

// A free cell may not keep what a held one needs.
static void test_free_cells_yield(void **state)
{
	(void)state;
	struct bench *bench = bench_create(2, 4);
	const size_t high = bench_field(bench, "high", 1, 1);
	bench_data(bench, "x");
	bench_region(bench, "free", 2, 1);
	bench_region(bench, "held", 2, 0);
	bench_hold(bench, high, 0, 0); // states 0 and 1
	const struct table *table = near_table(bench, (const uint32_t[]){0, 1, NONE, NONE});
	assert_valid(bench);
	assert_true(table->state_of_cell[2] < 2 && table->state_of_cell[3] < 2);
	bench_destroy(bench);
}

// Codes that were chosen before stay: here not those that would be chosen anew.
static void test_codes(void **state)
{
	(void)state;
	struct bench *bench = bench_create(4, 16);
	const size_t select = bench_field(bench, "select", 3, 2);
	const size_t blank = bench_coded(bench, "blank", select, NULL, 0);
	bench_region(bench, "picture", 3, 0);
	bench_region(bench, "porch", 3, SIGNAL(blank));
	const struct table *table = near_table(bench, (const uint32_t[]){4, 5, NONE, 12, 13, 14});
	assert_valid(bench);
	assert_int_equal(table->state_of_cell[0], 4);
	assert_int_equal(table->state_of_cell[3], 12);
	assert_codes(table, blank, (const uint32_t[]){3}, 1);
	bench_destroy(bench);
}

// Five blank cells need two codes of four states, and code 3 was theirs alone; a code that one porch cell and three picture cells kept is the
// picture's.
static void test_codes_that_do_not_suffice(void **state)
{
	(void)state;
	struct bench *bench = bench_create(4, 16);
	const size_t select = bench_field(bench, "select", 3, 2);
	const size_t blank = bench_coded(bench, "blank", select, NULL, 0);
	bench_region(bench, "picture", 4, 0);
	bench_region(bench, "porch", 5, SIGNAL(blank));
	const struct table *table = near_table(bench, (const uint32_t[]){4, 5, 6, NONE, 7, 12, 13, 14, 15});
	assert_valid(bench);
	assert_int_equal(table->state_of_cell[0], 4);
	for (uint32_t cell = 5; cell < 9; cell++)
		assert_int_equal(table->state_of_cell[cell], 7 + cell);
	assert_int_equal(table->code_counts[blank], 2);
	bench_destroy(bench);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_kept),       cmocka_unit_test(test_nonsense), cmocka_unit_test(test_given_up),
		cmocka_unit_test(test_in_the_way), cmocka_unit_test(test_free_cells_yield), cmocka_unit_test(test_codes),
		cmocka_unit_test(test_codes_that_do_not_suffice),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
