// Quiet codes: from cell to cell at most one bit of a decoded field changes, wherever that can be.

#include "builder.h"

// The codes of a field along the period.
static void assert_codes_run(const struct table *table, const struct field *field, const uint32_t *codes,
                             uint32_t count)
{
	assert_non_null(table);
	assert_int_equal(table->period, count);
	for (uint32_t cell = 0; cell < count; cell++)
		assert_int_equal(field_value(field, table->state_of_cell[cell]), codes[cell]);
}

// Blank cells between pictures held at 000 and at 011 step through 001, the lowest code on the way, and back the same
// way.
static void test_between_held_codes(void **state)
{
	(void)state;
	struct bench *bench = bench_create(6, 16);
	const size_t page = bench_field(bench, "page", 5, 3);
	const size_t picture = bench_coded(bench, "picture", page, (const uint32_t[]){0, 3}, 2);
	bench_region(bench, "left", 2, SIGNAL(picture));
	bench_hold(bench, page, 0, 0);
	bench_region(bench, "gap", 3, 0);
	bench_region(bench, "right", 2, SIGNAL(picture));
	bench_hold(bench, page, 3, 0);
	bench_region(bench, "end", 2, 0);
	const struct table *table = bench_table(bench);
	assert_codes_run(table, &bench->fields[page], (const uint32_t[]){0, 0, 1, 1, 1, 3, 3, 1, 1}, 9);
	assert_valid(bench);
	bench_destroy(bench);
}

// Between 000 and 111 lie two codes; the way is begun in time.
static void test_longer_way(void **state)
{
	(void)state;
	struct bench *bench = bench_create(6, 16);
	const size_t page = bench_field(bench, "page", 5, 3);
	const size_t picture = bench_coded(bench, "picture", page, (const uint32_t[]){0, 7}, 2);
	bench_region(bench, "left", 1, SIGNAL(picture));
	bench_hold(bench, page, 0, 0);
	bench_region(bench, "gap", 4, 0);
	bench_region(bench, "right", 1, SIGNAL(picture));
	bench_hold(bench, page, 7, 0);
	bench_region(bench, "end", 2, 0);
	const struct table *table = bench_table(bench);
	assert_codes_run(table, &bench->fields[page], (const uint32_t[]){0, 1, 1, 1, 3, 7, 3, 1}, 8);
	bench_destroy(bench);
}

// A one-of-eight decoder: sync at 001, burst at 010, picture at 100, all else blank. Every way leads over 000, even of
// one cell.
static void test_one_of_eight(void **state)
{
	(void)state;
	struct bench *bench = bench_create(9, 512);
	const size_t select = bench_field(bench, "select", 8, 6);
	const size_t sync = bench_coded(bench, "sync", select, (const uint32_t[]){1}, 1);
	const size_t burst = bench_coded(bench, "burst", select, (const uint32_t[]){2}, 1);
	const size_t picture = bench_coded(bench, "picture", select, (const uint32_t[]){4}, 1);
	for (uint32_t line = 0; line < 6; line++) {
		bench_region(bench, "front porch", 2 + line % 2, 0);
		bench_region(bench, "sync", 4, SIGNAL(sync));
		bench_region(bench, "breezeway", 1, 0);
		bench_region(bench, "burst", 3, SIGNAL(burst));
		bench_region(bench, "back porch", 3 + line, 0);
		bench_region(bench, "picture", 8, SIGNAL(picture));
	}
	assert_non_null(bench_table(bench));
	assert_valid(bench);
	assert_int_equal(count_jumps(bench->table, &bench->fields[select]), 0);
	bench_destroy(bench);
}

// The start is far from the code that the second cell should have; the last cell comes back to it bit by bit.
static void test_back_to_start(void **state)
{
	(void)state;
	struct bench *bench = bench_create(6, 16);
	const size_t select = bench_field(bench, "select", 5, 3);
	const size_t sync = bench_coded(bench, "sync", select, (const uint32_t[]){1}, 1);
	bench_start(bench, 7 << 3);
	bench_region(bench, "porch", 3, 0);
	bench_region(bench, "sync", 3, SIGNAL(sync));
	bench_region(bench, "rest", 4, 0);
	const struct table *table = bench_table(bench);
	// Of 101 and 011, both between 111 and 001, the lower is taken; from 001 on, 000 leaves time enough to come back.
	assert_codes_run(table, &bench->fields[select], (const uint32_t[]){7, 7, 3, 1, 1, 1, 0, 0, 2, 3}, 10);
	bench_destroy(bench);
}

// When a code's states run out, the cells go on with a neighbour.
static void test_code_runs_out(void **state)
{
	(void)state;
	struct bench *bench = bench_create(4, 16);
	const size_t select = bench_field(bench, "select", 3, 2);
	const size_t sync = bench_coded(bench, "sync", select, (const uint32_t[]){1}, 1);
	bench_region(bench, "rest", 12, 0);
	bench_region(bench, "sync", 4, SIGNAL(sync));
	assert_non_null(bench_table(bench));
	assert_valid(bench);
	// 00, 10 and 11 must all be used up; from 00 by way of 10 to 11 and 01 no step is a jump.
	assert_int_equal(count_jumps(bench->table, &bench->fields[select]), 0);
	bench_destroy(bench);
}

// Held cells that may choose among codes choose quiet ones too: 01 in one line and, since that line has these states,
// 10 in the other.
static void test_held_cells_choose(void **state)
{
	(void)state;
	struct bench *bench = bench_create(6, 32);
	const size_t page = bench_field(bench, "page", 5, 4), at = bench_field(bench, "at", 3, 0);
	const size_t blank = bench_coded(bench, "blank", page, (const uint32_t[]){3}, 1);
	bench_region(bench, "picture", 6, 0);
	bench_hold(bench, at, 0, 1);
	bench_region(bench, "porch", 3, SIGNAL(blank));
	bench_region(bench, "picture", 6, 0);
	bench_hold(bench, at, 0, 1);
	bench_region(bench, "porch", 2, SIGNAL(blank));
	bench_start(bench, 0x10);
	assert_non_null(bench_table(bench));
	assert_valid(bench);
	assert_int_equal(count_jumps(bench->table, &bench->fields[page]), 0);
	bench_destroy(bench);
}

// Two decoders at once: each changes by a bit at most.
static void test_two_decoders(void **state)
{
	(void)state;
	struct bench *bench = bench_create(9, 64);
	const size_t left = bench_field(bench, "left", 8, 7), right = bench_field(bench, "right", 6, 4);
	const size_t sync = bench_coded(bench, "sync", left, (const uint32_t[]){3}, 1);
	const size_t load = bench_coded(bench, "load", right, (const uint32_t[]){6, 7}, 2);
	bench_start(bench, 1 << 7);
	bench_region(bench, "a", 3, 0);
	bench_region(bench, "b", 3, SIGNAL(sync));
	bench_region(bench, "c", 3, SIGNAL(sync) | SIGNAL(load));
	bench_region(bench, "d", 2, SIGNAL(load));
	bench_region(bench, "e", 2, SIGNAL(sync));
	assert_non_null(bench_table(bench));
	assert_valid(bench);
	assert_int_equal(count_jumps(bench->table, &bench->fields[left]), 0);
	assert_int_equal(count_jumps(bench->table, &bench->fields[right]), 0);
	bench_destroy(bench);
}

// A field too wide to look ahead in still goes bit by bit where it can see how: the codes of the picture are all that
// begin with 1.
static void test_wide_field(void **state)
{
	(void)state;
	struct bench *bench = bench_create(15, 16);
	const size_t wide = bench_field(bench, "wide", 14, 3);
	uint32_t codes[2048];
	for (uint32_t index = 0; index < 2048; index++)
		codes[index] = 2048 + index;
	const size_t picture = bench_coded(bench, "picture", wide, codes, 2048);
	bench_region(bench, "porch", 2, 0);
	bench_region(bench, "picture", 3, SIGNAL(picture));
	bench_region(bench, "porch", 1, 0);
	bench_region(bench, "picture", 2, SIGNAL(picture));
	assert_non_null(bench_table(bench));
	assert_valid(bench);
	assert_int_equal(count_jumps(bench->table, &bench->fields[wide]), 0);
	bench_destroy(bench);
}

// Nothing lies a bit away from either code of "on", so the second follows when the first is used up.
static void test_wide_field_jumps(void **state)
{
	(void)state;
	struct bench *bench = bench_create(12, 16);
	const size_t wide = bench_field(bench, "wide", 11, 1);
	const size_t on = bench_coded(bench, "on", wide, (const uint32_t[]){0, 3}, 2);
	bench_region(bench, "on", 4, SIGNAL(on));
	bench_region(bench, "off", 3, 0);
	const struct table *table = bench_table(bench);
	assert_codes_run(table, &bench->fields[wide], (const uint32_t[]){0, 0, 3, 3, 2, 2, 6}, 7);
	assert_valid(bench);
	bench_destroy(bench);
}

// More changes than the look ahead takes in at once: a field of 10 bits that changes its pattern every few cells. Codes
// with an odd number of ones assert, so that every change of one bit changes the pattern.
static void test_many_runs(void **state)
{
	(void)state;
	struct bench *bench = bench_create(13, 600);
	const size_t wide = bench_field(bench, "wide", 12, 3);
	uint32_t codes[512], count = 0, number = 5;
	for (uint32_t code = 0; code < 1024; code++) {
		uint32_t parity = code;
		for (unsigned shift = 8; shift > 0; shift /= 2)
			parity ^= parity >> shift;
		if ((parity & 1) != 0)
			codes[count++] = code;
	}
	assert_int_equal(count, 512);
	bench_coded(bench, "on", wide, codes, 512);
	bench_region(bench, "all", 600, 0);
	for (uint32_t cell = 0, left = 0, on = 0; cell < 600; cell++, left--) {
		if (left == 0) {
			number = number * 1664525u + 1013904223u;
			left = 1 + (number >> 30);
			on = !on;
		}
		bench->laid.asserted[cell] = on;
	}
	assert_non_null(bench_table(bench));
	assert_valid(bench);
	assert_int_equal(count_jumps(bench->table, &bench->fields[wide]), 0);
	bench_destroy(bench);
}

#define FIELD_BITS 3
#define CODES (1u << FIELD_BITS)

// The least number of jumps, by going through all codes of all cells: worst case of the dynamic programming that is
// under test, but forwards, over every cell, and without a thought for runs.
static uint32_t least_jumps(const struct bench *bench, uint64_t signal_codes, uint32_t first_code)
{
	uint32_t cost[CODES], next[CODES];
	for (uint32_t code = 0; code < CODES; code++)
		cost[code] = code == first_code ? 0 : 1000;
	for (uint32_t cell = 1; cell <= bench->cells; cell++) {
		for (uint32_t code = 0; code < CODES; code++) {
			const bool allowed =
				cell == bench->cells ? code == first_code : (signal_codes >> code & 1) == bench->laid.asserted[cell];
			next[code] = 1000;
			for (uint32_t from = 0; from < CODES && allowed; from++) {
				const uint32_t change = from ^ code;
				const uint32_t here = cost[from] + ((change & (change - 1)) != 0);
				if (here < next[code])
					next[code] = here;
			}
		}
		memcpy(cost, next, sizeof cost);
	}
	return cost[first_code];
}

// Where states are plentiful, there are as few jumps as there can be.
static void test_fewest_jumps(void **state)
{
	(void)state;
	uint32_t number = 7;
	for (uint32_t machine = 0; machine < 2000; machine++) {
		struct bench *bench = bench_create(FIELD_BITS + 6, 48);
		const size_t select = bench_field(bench, "select", FIELD_BITS + 5, 6);
		uint32_t codes[CODES], code_count = 0, signal_codes = 0;
		for (uint32_t code = 0; code < CODES; code++) {
			number = number * 1664525u + 1013904223u;
			if (number >> 30 != 0)
				continue;
			codes[code_count++] = code;
			signal_codes |= 1u << code;
		}
		if (code_count == 0 || code_count == CODES) {
			bench_destroy(bench);
			continue;
		}
		const size_t on = bench_coded(bench, "on", select, codes, code_count);
		for (uint32_t region = 0; region < 12; region++) {
			number = number * 1664525u + 1013904223u;
			bench_region(bench, "region", 1 + (number >> 30), region % 2 == 0 ? SIGNAL(on) : 0);
		}
		bench_start(bench, codes[number % code_count] << 6);
		const struct table *table = bench_table(bench);
		assert_valid(bench);
		if (table->period == bench->cells)
			assert_int_equal(count_jumps(table, &bench->fields[select]),
			                 least_jumps(bench, signal_codes, bench->plan.machine.start >> 6));
		bench_destroy(bench);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_between_held_codes), cmocka_unit_test(test_longer_way),
		cmocka_unit_test(test_one_of_eight),       cmocka_unit_test(test_back_to_start),
		cmocka_unit_test(test_code_runs_out),      cmocka_unit_test(test_held_cells_choose),
		cmocka_unit_test(test_two_decoders),       cmocka_unit_test(test_wide_field),
		cmocka_unit_test(test_wide_field_jumps),   cmocka_unit_test(test_many_runs),
		cmocka_unit_test(test_fewest_jumps),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
