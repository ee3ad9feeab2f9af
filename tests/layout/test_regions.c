// Edges of regions on whole cells (design page 2.5), worked out by hand. A cell is 1 us.
#include "laid.h"

static void assert_cells(const struct laid *laid, size_t type, const uint32_t *cells, size_t count)
{
	assert_laid(laid);
	assert_int_equal(laid->plan->lines[type].region_count, count);
	uint32_t first = 0;
	for (size_t index = 0; index < count; index++) {
		const struct laid_region *region = &laid->timeline->types[type].regions[index];
		assert_int_equal(region->first_cell, first);
		assert_int_equal(region->cells, cells[index]);
		first += cells[index];
	}
	assert_int_equal(laid->timeline->types[type].cells, first);
}

#define FRAME "  - { repeat: 1, line: a }\n"

// Exact sums 1.4, 2.8, 4.2 give edges 1, 3, 4: rounding errors do not add up.
static void edges_round_the_exact_sum(void **state)
{
	(void)state;
	struct laid laid = lay("",
	                       "  a:\n    regions:\n"
	                       "      - { region: p, time: 1.4 us }\n"
	                       "      - { region: q, time: 1.4 us }\n"
	                       "      - { region: r, time: 1.4 us }\n",
	                       FRAME);
	assert_cells(&laid, 0, (const uint32_t[]){1, 2, 1}, 3);
	release(&laid);
}

// Exact sums 2.5, 3.5, 4.5 give edges 3, 4, 5.
static void halves_go_up_from_the_start(void **state)
{
	(void)state;
	struct laid laid = lay("",
	                       "  a:\n    regions:\n"
	                       "      - { region: p, time: 2.5 us }\n"
	                       "      - { region: q, cells: 1 }\n"
	                       "      - { region: r, time: 1 us }\n",
	                       FRAME);
	assert_cells(&laid, 0, (const uint32_t[]){3, 1, 1}, 3);
	release(&laid);
}

// Back from the end at 20: r begins at 20 - 2.5 = 17.5, which goes up to 18; q at 17.5 - 1.5 = 16; p fills 4 to 16.
static void after_the_fill_edges_go_back_from_the_end(void **state)
{
	(void)state;
	struct laid laid = lay("",
	                       "  a:\n    cells: 20\n    regions:\n"
	                       "      - { region: o, time: 3.5 us }\n"
	                       "      - { region: p, fill: true }\n"
	                       "      - { region: q, time: 1.5 us }\n"
	                       "      - { region: r, time: 2.5 us }\n",
	                       FRAME);
	assert_cells(&laid, 0, (const uint32_t[]){4, 12, 2, 2}, 4);
	// The fill was asked what the others leave: 200 - 35 - 15 - 25 ticks.
	assert_int_equal(laid.timeline->types[0].regions[1].asked_ticks.numerator, 125);
	release(&laid);
}

// Times in ticks, dots (of one tick) and cells mean the same as in microseconds.
static void times_have_other_units(void **state)
{
	(void)state;
	struct laid laid = lay("",
	                       "  a:\n    regions:\n"
	                       "      - { region: p, time: 26 ticks }\n"
	                       "      - { region: q, time: 0.0026 ms }\n"
	                       "      - { region: r, time: 26 dots }\n"
	                       "      - { region: s, time: 2.6 cells }\n",
	                       FRAME);
	assert_cells(&laid, 0, (const uint32_t[]){3, 2, 3, 2}, 4); // edges 2.6 5.2 7.8 10.4
	release(&laid);
}

static void a_region_rounded_to_nothing_is_refused(void **state)
{
	(void)state;
	struct laid laid = lay("",
	                       "  a:\n    regions:\n"
	                       "      - { region: p, cells: 3 }\n"
	                       "      - { region: q, time: 0.49 us }\n"
	                       "      - { region: r, cells: 3 }\n",
	                       FRAME);
	assert_refused(&laid, RULE_REGION_EMPTY);
	release(&laid);
}

static void lengths_that_do_not_add_up_are_refused(void **state)
{
	(void)state;
	struct laid laid = lay("", "  a: { cells: 10, regions: [ { region: p, cells: 3 }, { region: q, time: 6 us } ] }\n", FRAME);
	assert_refused(&laid, RULE_LINE_LENGTH);
	release(&laid);
	laid = lay("", "  a: { cells: 9, regions: [ { region: p, cells: 3 }, { region: q, time: 6 us } ] }\n", FRAME);
	assert_cells(&laid, 0, (const uint32_t[]){3, 6}, 2);
	release(&laid);
	laid = lay("", "  a: { cells: 9, regions: [ { region: p, cells: 9 }, { region: q, fill: true } ] }\n", FRAME);
	assert_refused(&laid, RULE_LINE_LENGTH);
	release(&laid);
}

// A derived type: the fill becomes a time, the time a fill, and the type has cells of its own.
static void changes_replace_lengths(void **state)
{
	(void)state;
	struct laid laid = lay("",
	                       "  b:\n    like: a\n    cells: 30\n    change:\n"
	                       "      - { region: p, time: 4.6 us }\n"
	                       "      - { region: q, fill: true }\n"
	                       "  a:\n    cells: 20\n    regions:\n"
	                       "      - { region: p, fill: true }\n"
	                       "      - { region: q, time: 2.2 us }\n"
	                       "      - { region: r, cells: 4 }\n",
	                       "  - { repeat: 1, line: a }\n  - { repeat: 1, line: b }\n");
	assert_cells(&laid, 0, (const uint32_t[]){5, 21, 4}, 3);
	assert_cells(&laid, 1, (const uint32_t[]){14, 2, 4}, 3); // 20 - 4 - 2.2 = 13.8
	release(&laid);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(edges_round_the_exact_sum),
		cmocka_unit_test(halves_go_up_from_the_start),
		cmocka_unit_test(after_the_fill_edges_go_back_from_the_end),
		cmocka_unit_test(times_have_other_units),
		cmocka_unit_test(a_region_rounded_to_nothing_is_refused),
		cmocka_unit_test(lengths_that_do_not_add_up_are_refused),
		cmocka_unit_test(changes_replace_lengths),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
