// States for cells whose constraints overlap, worked out by hand; what is said when there are none; and large frames.

#include "builder.h"

static void assert_printed(const struct bench *bench, const char *expected)
{
	assert_null(bench->table);
	assert_string_equal(text_string(&bench->printed), expected);
}

// Cell 0 holds bit 1 at 0 (states 0, 1), cell 1 bit 0 at 0 (states 0, 2), cell 2 is held to 2. Whoever gives cell 0 the
// lowest state has none left for cell 1.
static void test_greedy_fails(void **state)
{
	(void)state;
	struct bench *bench = bench_create(2, 4);
	const size_t high = bench_field(bench, "high", 1, 1), low = bench_field(bench, "low", 0, 0),
				 at = bench_field(bench, "at", 1, 0);
	bench_data(bench, "x");
	bench_region(bench, "a", 1, 1);
	bench_hold(bench, high, 0, 0);
	bench_region(bench, "b", 1, 0);
	bench_hold(bench, low, 0, 0);
	bench_region(bench, "c", 1, 0);
	bench_hold(bench, at, 2, 0);
	const struct table *table = bench_table(bench);
	assert_states(table, (const uint32_t[]){1, 0, 2}, 3);
	bench_destroy(bench);
}

// The start has state 0, cell 1 may have 0 or 1, cells 2 and 3 may have 1 or 3: four cells in a chain for three states.
// State 2 is of no use.
static void test_chain_short(void **state)
{
	(void)state;
	struct bench *bench = bench_create(2, 5);
	const size_t high = bench_field(bench, "high", 1, 1), low = bench_field(bench, "low", 0, 0);
	bench_data(bench, "x");
	bench_start(bench, 0);
	bench_region(bench, "zero", 1, 1);
	bench_region(bench, "a", 1, 0);
	bench_hold(bench, high, 0, 0); // {0, 1}, of which 0 is the start
	bench_region(bench, "b", 2, 0);
	bench_hold(bench, low, 1, 0); // {1, 3}
	assert_null(bench_table(bench));
	// Cell 1 got 1, cell 2 got 3, and nobody can move.
	assert_printed(
		bench, "board.yaml:121:1: error: line 0 (\"quay\"), cell 3, region \"b\": 4 states needed for this cell and "
			   "those that compete with it, 3 available under the hold of \"low\" [states-short]\n");
	bench_destroy(bench);
}

static void test_hold_short(void **state)
{
	(void)state;
	struct bench *bench = bench_create(2, 4);
	const size_t high = bench_field(bench, "high", 1, 1);
	bench_data(bench, "x");
	bench_region(bench, "picture", 3, 0);
	bench_hold(bench, high, 0, 0);
	bench_region(bench, "porch", 1, 1);
	assert_null(bench_table(bench));
	assert_printed(bench,
	               "board.yaml:101:1: error: line 0 (\"quay\"), cell 2, region \"picture\": 3 states needed for this "
	               "cell and those that compete with it, 2 available under the hold of \"high\" [states-short]\n");
	bench_destroy(bench);
}

static void test_codes_leave_too_few(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 8);
	const size_t top = bench_field(bench, "top", 2, 1);
	const size_t blank = bench_coded(bench, "blank", top, (const uint32_t[]){3}, 1);
	bench_region(bench, "porch", 3, SIGNAL(blank));
	bench_region(bench, "picture", 2, 0);
	assert_null(bench_table(bench));
	assert_printed(bench,
	               "board.yaml:100:1: error: line 0 (\"quay\"), cell 0, region \"porch\": 3 states needed for this "
	               "cell and those that compete with it, 2 available under the codes of \"top\" [states-short]\n");
	bench_destroy(bench);
}

static void test_frame_too_long(void **state)
{
	(void)state;
	struct bench *bench = bench_create(2, 8);
	bench_data(bench, "x");
	bench_region(bench, "a", 4, 0);
	bench_region(bench, "b", 1, 1);
	assert_null(bench_table(bench));
	assert_printed(bench, "board.yaml:1:1: error: the frame needs 5 states, one for each cell, but 2 bits of state "
	                      "have 4 [states-short]\n"
	                      "  hint: state: 3 bits would do\n");
	bench_destroy(bench);
}

static void test_state_shared(void **state)
{
	(void)state;
	struct bench *bench = bench_create(4, 8);
	const size_t at = bench_field(bench, "at", 3, 0);
	bench_data(bench, "x");
	bench_region(bench, "left", 2, 0);
	bench_hold(bench, at, 10, 1);
	bench_region(bench, "middle", 1, 1);
	bench_region(bench, "right", 2, 0);
	bench_hold(bench, at, 11, 1);
	assert_null(bench_table(bench));
	assert_printed(
		bench,
		"board.yaml:101:1: error: line 0 (\"quay\"), cell 1, region \"left\", and line 0 (\"quay\"), cell 3, region "
		"\"right\", are held to one state, 0xB, but their rows differ [state-shared]\n"
		"board.yaml:121:1: note: the second of the two is held here\n"
		"  hint: hold a further field that tells the cells apart, or leave some bits free\n");
	bench_destroy(bench);
}

// Two cells hold three bits, and the codes of a signal leave one value of the fourth.
static void test_state_shared_by_codes(void **state)
{
	(void)state;
	struct bench *bench = bench_create(4, 8);
	const size_t at = bench_field(bench, "at", 2, 0), top = bench_field(bench, "top", 3, 3);
	const size_t load = bench_coded(bench, "load", top, (const uint32_t[]){1}, 1);
	bench_region(bench, "left", 1, SIGNAL(load));
	bench_hold(bench, at, 5, 0);
	bench_region(bench, "middle", 1, 0);
	bench_region(bench, "right", 1, SIGNAL(load));
	bench_hold(bench, at, 5, 0);
	bench_region(bench, "end", 2, 0);
	assert_null(bench_table(bench));
	assert_printed(
		bench,
		"board.yaml:101:1: error: line 0 (\"quay\"), cell 0, region \"left\", and line 0 (\"quay\"), cell 2, region "
		"\"right\", are held to one state, 0xD, but their rows differ [state-shared]\n"
		"board.yaml:121:1: note: the second of the two is held here\n"
		"  hint: hold a further field that tells the cells apart, or leave some bits free\n");
	bench_destroy(bench);
}

static void test_start_taken(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 8);
	const size_t at = bench_field(bench, "at", 2, 0);
	bench_data(bench, "x");
	bench_start(bench, 3);
	bench_region(bench, "porch", 1, 1);
	bench_region(bench, "picture", 2, 0);
	bench_hold(bench, at, 2, 1);
	assert_null(bench_table(bench));
	assert_printed(
		bench,
		"board.yaml:2:1: error: line 0 (\"quay\"), cell 0, region \"porch\", and line 0 (\"quay\"), cell 2, region "
		"\"picture\", are held to one state, 0x3, but their rows differ [state-shared]\n"
		"board.yaml:111:1: note: the second of the two is held here\n"
		"  hint: hold a further field that tells the cells apart, or leave some bits free\n");
	bench_destroy(bench);
}

static void test_start_against_hold(void **state)
{
	(void)state;
	struct bench *bench = bench_create(4, 8);
	const size_t page = bench_field(bench, "page", 3, 2), at = bench_field(bench, "at", 1, 0);
	bench_data(bench, "x");
	bench_start(bench, 0xA);
	bench_region(bench, "picture", 2, 0);
	bench_hold(bench, page, 2, 0);
	bench_hold(bench, at, 1, 1);
	bench_region(bench, "porch", 1, 1);
	assert_null(bench_table(bench));
	assert_printed(bench, "board.yaml:2:1: error: start has 2 in field \"at\", but line 0 (\"quay\"), cell 0, region "
	                      "\"picture\", holds it "
	                      "to 1 [start-conflict]\n"
	                      "board.yaml:102:1: note: the first cell is held here\n");
	bench_destroy(bench);
}

static void test_start_against_signal(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 8);
	const size_t top = bench_field(bench, "top", 2, 1);
	const size_t blank = bench_coded(bench, "blank", top, (const uint32_t[]){1, 2}, 2);
	bench_start(bench, 7);
	bench_region(bench, "porch", 1, SIGNAL(blank));
	bench_region(bench, "picture", 2, 0);
	assert_null(bench_table(bench));
	assert_printed(bench, "board.yaml:2:1: error: start has 3 in field \"top\", with which \"blank\" is not asserted, "
	                      "but line 0 (\"quay\"), "
	                      "cell 0, region \"porch\", wants it asserted [start-conflict]\n"
	                      "board.yaml:10:1: note: signal \"blank\" has its codes here\n");
	bench_destroy(bench);
}

static void test_hold_without_code(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 8);
	const size_t top = bench_field(bench, "top", 2, 1);
	const size_t blank = bench_coded(bench, "blank", top, (const uint32_t[]){2, 3}, 2);
	bench_region(bench, "porch", 2, SIGNAL(blank));
	bench_region(bench, "picture", 2, 0);
	bench_hold(bench, top, 1, 1);
	assert_null(bench_table(bench));
	assert_printed(bench, "board.yaml:111:1: error: line 0 (\"quay\"), cell 3, region \"picture\": field \"top\" has "
	                      "no code that the hold "
	                      "allows for \"blank\" not asserted [code-conflict]\n"
	                      "board.yaml:10:1: note: signal \"blank\" has its codes here\n");
	bench_destroy(bench);
}

static void test_listed_codes_exclude(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 8);
	const size_t top = bench_field(bench, "top", 2, 1);
	const size_t blank = bench_coded(bench, "blank", top, (const uint32_t[]){2}, 1);
	const size_t sync = bench_coded(bench, "sync", top, (const uint32_t[]){3}, 1);
	bench_region(bench, "sync", 1, SIGNAL(blank) | SIGNAL(sync));
	bench_region(bench, "picture", 2, 0);
	assert_null(bench_table(bench));
	assert_printed(
		bench,
		"board.yaml:100:1: error: line 0 (\"quay\"), cell 0, region \"sync\": field \"top\" has no code for \"blank\" "
		"asserted, \"sync\" asserted [code-conflict]\n"
		"board.yaml:10:1: note: signal \"blank\" has its codes here\n");
	bench_destroy(bench);
}

// Each field has codes enough, but the bit that they share would have to be 1 and 0.
static void test_overlapping_codes_exclude(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 8);
	const size_t upper = bench_field(bench, "upper", 2, 1), lower = bench_field(bench, "lower", 1, 0);
	const size_t blank = bench_coded(bench, "blank", upper, (const uint32_t[]){1, 3}, 2);
	const size_t sync = bench_coded(bench, "sync", lower, (const uint32_t[]){0, 1}, 2);
	bench_region(bench, "sync", 1, SIGNAL(blank) | SIGNAL(sync));
	bench_region(bench, "picture", 2, SIGNAL(sync));
	assert_null(bench_table(bench));
	assert_printed(
		bench,
		"board.yaml:100:1: error: line 0 (\"quay\"), cell 0, region \"sync\": the decoded fields together have no code "
		"for \"blank\" asserted, \"sync\" asserted [code-conflict]\n"
		"board.yaml:10:1: note: signal \"blank\" has its codes here\n");
	bench_destroy(bench);
}

// Of many faults of a kind, five are told.
static void test_handful(void **state)
{
	(void)state;
	struct bench *bench = bench_create(6, 64);
	const size_t at = bench_field(bench, "at", 5, 0);
	bench_data(bench, "x");
	bench_region(bench, "left", 20, 0);
	bench_hold(bench, at, 0, 1);
	bench_region(bench, "middle", 1, 1);
	bench_region(bench, "right", 20, 0);
	bench_hold(bench, at, 0, 1);
	assert_null(bench_table(bench));
	assert_int_equal(diagnostics_error_count(bench->diagnostics), 5);
	for (size_t index = 0; index < 5; index++)
		assert_int_equal(diagnostics_rule(bench->diagnostics, index), RULE_STATE_SHARED);
	bench_destroy(bench);
}

// A machine of `bits` bits in which every cell holds all bits but the lowest or all but the highest, drawn from an
// assignment of all states: nobody has a choice between more than two, and the only assignments are far apart.
static void make_crossed(struct bench *bench, unsigned bits)
{
	const uint32_t count = (uint32_t)1 << bits;
	const size_t upper = bench_field(bench, "upper", bits - 1, 1), lower = bench_field(bench, "lower", bits - 2, 0);
	uint32_t number = 1;
	bench_data(bench, "x");
	bench_region(bench, "all", count, 0);
	bench_add_hold(bench, upper);
	bench_add_hold(bench, lower);
	for (uint32_t cell = 0; cell < count; cell++) {
		number = number * 1664525u + 1013904223u; // Numerical Recipes' generator
		const uint32_t mask = field_mask(&bench->fields[number >> 30 & 1 ? upper : lower]);
		bench->laid.asserted[cell] = number >> 29 & 1;
		bench->timeline.hold_mask[cell] = mask;
		bench->timeline.hold_value[cell] = (cell * 40503u & (count - 1)) & mask; // odd, so a permutation
	}
}

static void test_crossed_holds(void **state)
{
	(void)state;
	struct bench *bench = bench_create(14, 1 << 14);
	make_crossed(bench, 14);
	assert_non_null(bench_table(bench));
	assert_valid(bench);
	bench_destroy(bench);
}

// A thousand lines of a thousand cells in 20 bits: the picture is held to its addresses, and three signals are decoded.
static void test_million_cells(void **state)
{
	(void)state;
	struct bench *bench = bench_create(20, 1000000);
	const size_t page = bench_field(bench, "page", 19, 17), at = bench_field(bench, "at", 18, 0);
	const size_t blank = bench_coded(bench, "blank", page, (const uint32_t[]){4, 5, 6, 7}, 4);
	const size_t sync = bench_coded(bench, "sync", page, (const uint32_t[]){6}, 1);
	uint32_t address = 0;
	bench_region(bench, "all", 1000000, 0);
	bench_add_hold(bench, at);
	for (uint32_t cell = 0; cell < 1000000; cell++) {
		const uint32_t column = cell % 1000;
		const bool picture = column >= 400 && column < 900 && cell >= 10000;
		bench->laid.asserted[cell] = picture ? 0 : SIGNAL(blank) | (column < 120 ? SIGNAL(sync) : 0);
		if (picture) {
			bench->timeline.hold_mask[cell] = field_mask(&bench->fields[at]);
			bench->timeline.hold_value[cell] = address++;
		}
	}
	assert_non_null(bench_table(bench));
	assert_int_equal(bench->table->period, 1000000);
	assert_valid(bench);
	bench_destroy(bench);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_greedy_fails),
		cmocka_unit_test(test_chain_short),
		cmocka_unit_test(test_hold_short),
		cmocka_unit_test(test_codes_leave_too_few),
		cmocka_unit_test(test_frame_too_long),
		cmocka_unit_test(test_state_shared),
		cmocka_unit_test(test_state_shared_by_codes),
		cmocka_unit_test(test_start_taken),
		cmocka_unit_test(test_start_against_hold),
		cmocka_unit_test(test_start_against_signal),
		cmocka_unit_test(test_hold_without_code),
		cmocka_unit_test(test_listed_codes_exclude),
		cmocka_unit_test(test_overlapping_codes_exclude),
		cmocka_unit_test(test_handful),
		cmocka_unit_test(test_crossed_holds),
		cmocka_unit_test(test_million_cells),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
