// codes: auto, worked out by hand.

#include "builder.h"

static void assert_printed(const struct bench *bench, const char *expected)
{
	assert_null(bench->table);
	assert_string_equal(text_string(&bench->printed), expected);
}

// One signal, two patterns: state 0 is the first cell's, so code 0 is the picture's, and what is left is dealt out
// along 0, 1, 3, 2.
static void test_one_signal(void **state)
{
	(void)state;
	struct bench *bench = bench_create(4, 16);
	const size_t select = bench_field(bench, "select", 3, 2);
	const size_t blank = bench_coded(bench, "blank", select, NULL, 0);
	bench_region(bench, "picture", 3, 0);
	bench_region(bench, "porch", 3, SIGNAL(blank));
	const struct table *table = bench_table(bench);
	assert_valid(bench);
	assert_int_equal(table->state_of_cell[0], 0);
	assert_int_equal(count_jumps(table, &bench->fields[select]), 0);
	bench_destroy(bench);
}

// Codes that no cell came to use are left out of the signal's codes, so that images alone tell them too.
static void test_trimmed(void **state)
{
	(void)state;
	struct bench *bench = bench_create(6, 16);
	const size_t select = bench_field(bench, "select", 5, 3);
	const size_t blank = bench_coded(bench, "blank", select, NULL, 0);
	bench_region(bench, "picture", 1, 0);
	bench_region(bench, "porch", 1, SIGNAL(blank));
	const struct table *table = bench_table(bench);
	assert_valid(bench);
	assert_int_equal(table->code_counts[blank], 1);
	assert_int_equal(table->codes[blank][0], field_value(&bench->fields[select], table->state_of_cell[1]));
	bench_destroy(bench);
}

// A whole board on one decoder: no step of any line, nor between lines, changes two bits.
static void test_board(void **state)
{
	(void)state;
	struct bench *bench = bench_create(9, 512);
	const size_t select = bench_field(bench, "select", 8, 6);
	const size_t sync = bench_coded(bench, "sync", select, NULL, 0),
				 blank = bench_coded(bench, "blank", select, NULL, 0);
	const size_t burst = bench_coded(bench, "burst", select, NULL, 0);
	for (uint32_t line = 0; line < 5; line++) {
		bench_region(bench, "picture", 40, 0);
		bench_region(bench, "front porch", 2 + line % 2, SIGNAL(blank));
		bench_region(bench, "sync", 8, SIGNAL(blank) | SIGNAL(sync));
		bench_region(bench, "breezeway", 1, SIGNAL(blank));
		bench_region(bench, "burst", 5, SIGNAL(blank) | SIGNAL(burst));
		bench_region(bench, "back porch", 6, SIGNAL(blank));
	}
	assert_non_null(bench_table(bench));
	assert_valid(bench);
	assert_int_equal(count_jumps(bench->table, &bench->fields[select]), 0);
	bench_destroy(bench);
}

// A held picture fixes its codes; blanking finds its own around them.
static void test_held_codes(void **state)
{
	(void)state;
	struct bench *bench = bench_create(5, 32);
	const size_t page = bench_field(bench, "page", 4, 3), at = bench_field(bench, "at", 2, 0);
	const size_t load = bench_coded(bench, "load", page, NULL, 0);
	bench_region(bench, "porch", 4, 0);
	bench_region(bench, "left", 3, SIGNAL(load));
	bench_hold(bench, page, 2, 0);
	bench_hold(bench, at, 0, 1);
	bench_region(bench, "gap", 2, 0);
	bench_region(bench, "right", 3, SIGNAL(load));
	bench_hold(bench, page, 2, 0);
	bench_hold(bench, at, 3, 1);
	const struct table *table = bench_table(bench);
	assert_valid(bench);
	assert_codes(table, load, (const uint32_t[]){2}, 1);
	assert_int_equal(count_jumps(table, &bench->fields[page]), 0);
	bench_destroy(bench);
}

// A signal with listed codes and one with automatic codes on one field: of the codes 0 and 1, which are left to "mute",
// one is its and one is not; 2 and 3 are blank's, with mute and without.
static void test_listed_beside_automatic(void **state)
{
	(void)state;
	struct bench *bench = bench_create(4, 16);
	const size_t select = bench_field(bench, "select", 3, 2);
	const size_t blank = bench_coded(bench, "blank", select, (const uint32_t[]){2, 3}, 2),
				 mute = bench_coded(bench, "mute", select, NULL, 0);
	bench_region(bench, "a", 3, 0);
	bench_region(bench, "b", 3, SIGNAL(mute));
	bench_region(bench, "c", 3, SIGNAL(mute) | SIGNAL(blank));
	bench_region(bench, "d", 3, SIGNAL(blank));
	const struct table *table = bench_table(bench);
	assert_valid(bench);
	assert_codes(table, blank, (const uint32_t[]){2, 3}, 2);
	assert_codes(table, mute, (const uint32_t[]){1, 3}, 2); // a 0, b 1, c 3, d 2: round the square
	assert_int_equal(count_jumps(table, &bench->fields[select]), 0);
	bench_destroy(bench);
}

// The start's code is its first cell's.
static void test_start(void **state)
{
	(void)state;
	struct bench *bench = bench_create(4, 16);
	const size_t select = bench_field(bench, "select", 3, 2);
	const size_t blank = bench_coded(bench, "blank", select, NULL, 0);
	bench_start(bench, 0xB);
	bench_region(bench, "porch", 4, SIGNAL(blank));
	bench_region(bench, "picture", 9, 0);
	const struct table *table = bench_table(bench);
	assert_valid(bench);
	assert_codes(table, blank, (const uint32_t[]){2},
	             1); // nine picture cells need three codes, so one is left for four of blank
	bench_destroy(bench);
}

// Three cells hold the same low bits, so they need three codes, though one has states enough; four free cells need one.
// By numbers alone either would have got two.
static void test_share_is_raised(void **state)
{
	(void)state;
	struct bench *bench = bench_create(4, 16);
	const size_t select = bench_field(bench, "select", 3, 2), at = bench_field(bench, "at", 1, 0);
	const size_t load = bench_coded(bench, "load", select, NULL, 0);
	bench_region(bench, "a", 1, SIGNAL(load));
	bench_hold(bench, at, 0, 0);
	bench_region(bench, "b", 2, 0);
	bench_region(bench, "c", 2, SIGNAL(load));
	bench_hold(bench, at, 0, 0);
	bench_region(bench, "d", 2, 0);
	const struct table *table = bench_table(bench);
	assert_valid(bench);
	assert_int_equal(table->code_counts[load], 3);
	bench_destroy(bench);
}

// With five free cells these need two codes: five in all.
static void test_shares_too_large(void **state)
{
	(void)state;
	struct bench *bench = bench_create(4, 16);
	const size_t select = bench_field(bench, "select", 3, 2), at = bench_field(bench, "at", 1, 0);
	const size_t load = bench_coded(bench, "load", select, NULL, 0);
	bench_region(bench, "a", 1, SIGNAL(load));
	bench_hold(bench, at, 0, 0);
	bench_region(bench, "b", 2, 0);
	bench_region(bench, "c", 2, SIGNAL(load));
	bench_hold(bench, at, 0, 0);
	bench_region(bench, "d", 3, 0);
	assert_null(bench_table(bench));
	assert_printed(bench, "board.yaml:10:1: error: codes: auto needs 5 codes of field \"select\", but 4 are available; "
	                      "the cells that lack "
	                      "them begin at line 0 (\"quay\"), cell 4, region \"c\" [codes-short]\n"
	                      "  hint: give the field or the state another bit\n");
	bench_destroy(bench);
}

static void test_more_patterns_than_codes(void **state)
{
	(void)state;
	struct bench *bench = bench_create(5, 16);
	const size_t select = bench_field(bench, "select", 4, 3);
	for (int signal = 0; signal < 3; signal++)
		bench_coded(bench, "signal", select, NULL, 0);
	for (uint64_t pattern = 0; pattern < 5; pattern++)
		bench_region(bench, "region", 1, pattern);
	assert_null(bench_table(bench));
	assert_printed(bench, "board.yaml:10:1: error: codes: auto needs 5 codes of field \"select\", but 4 are available; "
	                      "the cells that lack "
	                      "them begin at line 0 (\"quay\"), cell 0, region \"region\" [codes-short]\n"
	                      "  hint: give the field or the state another bit\n");
	bench_destroy(bench);
}

static void test_code_held_twice(void **state)
{
	(void)state;
	struct bench *bench = bench_create(5, 16);
	const size_t page = bench_field(bench, "page", 4, 3);
	const size_t load = bench_coded(bench, "load", page, NULL, 0);
	bench_region(bench, "left", 2, SIGNAL(load));
	bench_hold(bench, page, 2, 0);
	bench_region(bench, "right", 2, 0);
	bench_hold(bench, page, 1, 1);
	assert_null(bench_table(bench));
	assert_printed(bench, "board.yaml:101:1: error: line 0 (\"quay\"), cell 0, region \"left\", and line 0 (\"quay\"), "
	                      "cell 3, region \"right\", "
	                      "are held to one code, 2, of field \"page\", but differ in its signals, which have codes: "
	                      "auto [code-conflict]\n"
	                      "board.yaml:111:1: note: the second of the two is held here\n");
	bench_destroy(bench);
}

// No choice of codes parts two cells that hold every bit.
static void test_shared_all_the_same(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 16);
	const size_t all = bench_field(bench, "all", 2, 0), select = bench_field(bench, "select", 2, 1);
	const size_t load = bench_coded(bench, "load", select, NULL, 0);
	bench_region(bench, "a", 1, SIGNAL(load));
	bench_hold(bench, all, 4, 0);
	bench_region(bench, "b", 1, 0);
	bench_region(bench, "c", 2, SIGNAL(load));
	bench_hold(bench, all, 4, 1);
	assert_null(bench_table(bench));
	assert_int_equal(diagnostics_error_count(bench->diagnostics), 1);
	assert_int_equal(diagnostics_rule(bench->diagnostics, 0), RULE_STATE_SHARED);
	bench_destroy(bench);
}

// Holds that cut through a field: each pattern needs a code that begins with 0 and one that begins with 1. Only a
// search finds that those must be crossed: whoever takes 00 and 01 leaves none.
static void test_holds_cut_field(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 16);
	const size_t select = bench_field(bench, "select", 2, 1), first = bench_field(bench, "first", 2, 2);
	const size_t load = bench_coded(bench, "load", select, NULL, 0);
	for (uint32_t half = 0; half < 2; half++) {
		bench_region(bench, "a", 2, SIGNAL(load));
		bench_hold(bench, first, half, 0);
		bench_region(bench, "b", 2, 0);
		bench_hold(bench, first, half, 0);
	}
	const struct table *table = bench_table(bench);
	assert_valid(bench);
	assert_int_equal(table->code_counts[load], 2);
	assert_true(table->codes[load][0] < 2 && table->codes[load][1] >= 2);
	bench_destroy(bench);
}

// A field of 2,048 codes: 600 cells need a code each, though by their number 150 codes would have states enough.
static void test_wide_field(void **state)
{
	(void)state;
	struct bench *bench = bench_create(13, 4700);
	const size_t select = bench_field(bench, "select", 12, 2), at = bench_field(bench, "at", 1, 0);
	const size_t load = bench_coded(bench, "load", select, NULL, 0);
	bench_region(bench, "picture", 600, SIGNAL(load));
	bench_hold(bench, at, 0, 0);
	bench_region(bench, "porch", 4000, 0);
	const struct table *table = bench_table(bench);
	assert_valid(bench);
	assert_int_equal(table->code_counts[load], 600);
	bench_destroy(bench);
}

// Forty cells hold the first bit of a field at 0, which leaves them 32 states: no codes help, which is proved without
// trying any.
static void test_half_too_small(void **state)
{
	(void)state;
	struct bench *bench = bench_create(6, 64);
	const size_t select = bench_field(bench, "select", 5, 1), first = bench_field(bench, "first", 5, 5);
	const size_t load = bench_coded(bench, "load", select, NULL, 0);
	bench_region(bench, "a", 20, SIGNAL(load));
	bench_hold(bench, first, 0, 0);
	bench_region(bench, "b", 20, 0);
	bench_hold(bench, first, 0, 0);
	assert_null(bench_table(bench));
	assert_printed(bench, "board.yaml:111:1: error: line 0 (\"quay\"), cell 32, region \"b\": 40 states needed for "
	                      "this cell and those that compete with it, 32 available under the hold of "
	                      "\"first\" and the codes of \"select\" [states-short]\n");
	bench_destroy(bench);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_one_signal),
		cmocka_unit_test(test_trimmed),
		cmocka_unit_test(test_board),
		cmocka_unit_test(test_held_codes),
		cmocka_unit_test(test_listed_beside_automatic),
		cmocka_unit_test(test_start),
		cmocka_unit_test(test_share_is_raised),
		cmocka_unit_test(test_shares_too_large),
		cmocka_unit_test(test_more_patterns_than_codes),
		cmocka_unit_test(test_code_held_twice),
		cmocka_unit_test(test_shared_all_the_same),
		cmocka_unit_test(test_holds_cut_field),
		cmocka_unit_test(test_wide_field),
		cmocka_unit_test(test_half_too_small),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
