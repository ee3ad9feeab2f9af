// codes: auto where fields overlap each other and holds cut through them.

#include "random_machine.h"

#define MACHINES 1000

// Machines with an assignment that was drawn beforehand, codes included: each has a table.
static void check_hidden(unsigned bits, unsigned fields, unsigned automatic, bool full, uint64_t seed)
{
	struct numbers numbers = {seed};
	for (uint32_t number = 0; number < MACHINES; number++) {
		struct bench *bench = bench_create(bits, STATES);
		add_fields(bench, &numbers, bits, fields, bits);
		add_signals(bench, &numbers, automatic + below(&numbers, 2), automatic);
		add_cells(bench, &numbers, full ? 1u << bits : 1 + below(&numbers, 1u << bits), false);
		bench_table(bench);
		assert_valid(bench);
		bench_destroy(bench);
	}
}

static void test_two_fields(void **state)
{
	(void)state;
	check_hidden(4, 2, 2, false, 30261);
	check_hidden(5, 2, 2, false, 30262);
}

static void test_three_fields(void **state)
{
	(void)state;
	check_hidden(5, 3, 3, false, 30263);
	check_hidden(6, 3, 3, false, 30264);
}

// Every state is some cell's.
static void test_full(void **state)
{
	(void)state;
	check_hidden(4, 2, 2, true, 30265);
	check_hidden(5, 3, 3, true, 30266);
}

// One cell holds all bits but one of a field that is the whole state; 15 cells, 16 states.
static void test_hold_cuts_whole_state(void **state)
{
	(void)state;
	struct bench *bench = bench_create(4, 16);
	const size_t all = bench_field(bench, "all", 3, 0), high = bench_field(bench, "high", 3, 1);
	const size_t lamp = bench_coded(bench, "lamp", all, NULL, 0), bell = bench_coded(bench, "bell", all, NULL, 0);
	bench_region(bench, "a", 7, SIGNAL(lamp));
	bench_region(bench, "b", 1, SIGNAL(bell));
	bench_hold(bench, high, 4, 0);
	bench_region(bench, "c", 7, SIGNAL(bell));
	const struct table *table = bench_table(bench);
	assert_valid(bench);
	assert_int_equal(table->state_of_cell[7] >> 1, 4);
	assert_int_equal(table->code_counts[lamp], 7);
	assert_int_equal(table->code_counts[bell], 8);
	bench_destroy(bench);
}

// A large board: 31,500 of 65,536 states, two decoders of 4 bits that share one bit, and a hold that cuts through both.
static void test_large(void **state)
{
	(void)state;
	struct bench *bench = bench_create(16, 32000);
	const size_t left = bench_field(bench, "left", 15, 12), right = bench_field(bench, "right", 12, 9);
	const size_t at = bench_field(bench, "at", 13, 0);
	const size_t sync = bench_coded(bench, "sync", left, NULL, 0), blank = bench_coded(bench, "blank", left, NULL, 0);
	const size_t load = bench_coded(bench, "load", right, NULL, 0);
	bench_region(bench, "picture", 3500, SIGNAL(load));
	bench_hold(bench, at, 0, 1);
	bench_region(bench, "front porch", 9000, SIGNAL(blank));
	bench_region(bench, "sync", 4000, SIGNAL(blank) | SIGNAL(sync));
	bench_region(bench, "back porch", 9000, SIGNAL(blank));
	bench_region(bench, "rest", 6000, 0);
	bench_table(bench);
	assert_valid(bench);
	bench_destroy(bench);
}

// "lamp" leaves two codes of "right" to the four cells of a and d, which differ in "bell": two states for a's three
// cells. What is proved is said to be so, and without a count.
static void test_none(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 16);
	const size_t left = bench_field(bench, "left", 2, 2), right = bench_field(bench, "right", 2, 1);
	const size_t lamp = bench_coded(bench, "lamp", left, NULL, 0), bell = bench_coded(bench, "bell", right, NULL, 0);
	bench_region(bench, "a", 3, SIGNAL(lamp));
	bench_region(bench, "b", 2, SIGNAL(bell));
	bench_region(bench, "c", 1, 0);
	bench_region(bench, "d", 1, SIGNAL(lamp) | SIGNAL(bell));
	assert_null(bench_table(bench));
	assert_string_equal(text_string(&bench->printed),
	                    "board.yaml:11:1: error: codes: auto: there are no codes of field \"right\" for \"bell\" with "
	                    "which every cell has a state of its own; the first cell without "
	                    "one is line 0 (\"quay\"), cell 1, "
	                    "region \"a\" [codes-short]\n"
	                    "  hint: list the codes, or give the field or the state another bit\n");
	bench_destroy(bench);
}

// 33 cells of "lamp" that hold the other bits need 33 codes, 32 without it another 32: one more than there are. The
// search, which decides code by code, does not see that, and must not say that it did.
static void test_gives_up(void **state)
{
	(void)state;
	struct bench *bench = bench_create(8, 128);
	const size_t select = bench_field(bench, "select", 5, 0), at = bench_field(bench, "at", 7, 6);
	const size_t odd = bench_field(bench, "odd", 0, 0), lamp = bench_coded(bench, "lamp", select, NULL, 0);
	bench_start(bench, 0xC0);
	bench_region(bench, "rest", 1, 0);
	bench_region(bench, "odd", 1, 0);
	bench_hold(bench, odd, 1, 0);
	bench_region(bench, "a", 33, SIGNAL(lamp));
	bench_hold(bench, at, 0, 0);
	bench_region(bench, "b", 32, 0);
	bench_hold(bench, at, 1, 0);
	assert_null(bench_table(bench));
	assert_string_equal(text_string(&bench->printed),
	                    "board.yaml:10:1: error: codes: auto: found no codes of field \"select\" for \"lamp\" with "
	                    "which every cell has a state of its own; the first cell without "
	                    "one is line 0 (\"quay\"), cell 66, "
	                    "region \"b\" [codes-short]\n"
	                    "  hint: list the codes, or give the field or the state another bit\n");
	bench_destroy(bench);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_two_fields),
		cmocka_unit_test(test_three_fields),
		cmocka_unit_test(test_full),
		cmocka_unit_test(test_hold_cuts_whole_state),
		cmocka_unit_test(test_large),
		cmocka_unit_test(test_none),
		cmocka_unit_test(test_gives_up),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
