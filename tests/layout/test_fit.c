// The search of layouts. Figures from outside:
//   DMT    VESA DMT 1.0 rev. 13: dots of line and lines of frame of modes 04h, 08h, 09h
//   S170   SMPTE 170M-2004 11.2: 455/2 cycles of subcarrier a line
// Everything else follows from fit.h. That nothing is missed is shown in tests/reference/fit.sh.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "catalogue/crystals.h"
#include "layout/fit_choices.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

struct shelf {
	struct arena *arena;
	struct diagnostics *diagnostics;
	const struct standards *standards;
	const struct crystals *crystals;
	const struct catalogue *parts;
};

static struct shelf open_shelf(void)
{
	struct shelf shelf = {.arena = arena_create(), .diagnostics = diagnostics_create()};
	assert_non_null(shelf.arena);
	shelf.standards = standards_load(shelf.arena, shelf.diagnostics);
	shelf.crystals = crystals_load(shelf.arena, shelf.diagnostics);
	shelf.parts = catalogue_load(shelf.arena, shelf.diagnostics);
	assert_non_null(shelf.standards);
	assert_non_null(shelf.crystals);
	assert_non_null(shelf.parts);
	return shelf;
}

static void close_shelf(struct shelf *shelf)
{
	diagnostics_destroy(shelf->diagnostics);
	arena_destroy(shelf->arena);
}

static const int64_t dot_ticks[] = {1, 2, 3, 4};
static const int64_t cell_dots[] = {6, 7, 8, 9, 10, 11, 12, 13, 14, 15, 16};

// The space that the command has by default; of one crystal, if it is named.
static struct fit_space space_of(const struct shelf *shelf, const char *standard, const char *crystal, int64_t columns)
{
	struct fit_space space = {
		.standard = catalogue_standard(shelf->standards, standard), .grade = GRADE_MONITOR,
		.crystals = shelf->crystals->crystals, .crystal_count = shelf->crystals->count, .parts = shelf->parts,
		.dot_ticks = dot_ticks, .dot_tick_count = COUNT_OF(dot_ticks), .cell_dots = cell_dots, .cell_dot_count = COUNT_OF(cell_dots),
		.columns = columns, .least_percent = 50, .most_stretched = 4, .phase_lines = 1, .top = 10,
	};
	assert_non_null(space.standard);
	space.picture_lines = fit_default_lines(space.standard);
	if (crystal != NULL) {
		space.crystals = catalogue_crystal(shelf->crystals, crystal);
		space.crystal_count = 1;
		assert_non_null(space.crystals);
	}
	return space;
}

static struct fraction one_over(int64_t divisor)
{
	return (struct fraction){1, divisor};
}

static struct fit_mark kept(struct fraction share)
{
	return (struct fit_mark){true, true, true, share};
}

static void standings_are_sorted_and_compared_from_the_smallest(void **state)
{
	(void)state;
	struct fit_standing left = {0}, right = {0};
	const struct fit_mark half = kept(one_over(2)), third = kept(one_over(3)), exact = {true, true, false, {0, 1}},
	                      missed = {true, false, false, {0, 1}};
	assert_int_equal(fraction_compare(fit_standing_share(&left), fraction_whole(1)), 0);
	fit_standing_add(&left, &half);
	fit_standing_add(&left, &third);
	fit_standing_add(&left, &missed);
	fit_standing_add(&left, NULL);
	assert_int_equal(left.kept, 2);
	assert_int_equal(left.count, 2);
	assert_int_equal(fraction_compare(left.shares[0], one_over(3)), 0);
	fit_standing_add(&right, &third);
	assert_int_equal(fit_standing_compare(&left, &right, 2), 1); // kept comes first
	fit_standing_add(&right, &exact);
	assert_int_equal(fit_standing_compare(&left, &right, 1), 0);
	assert_int_equal(fit_standing_compare(&left, &right, 2), -1); // a share that is not there is 1
	fit_standing_join(&right, &left);
	assert_int_equal(right.kept, 4);
	assert_int_equal(right.count, 3);
	assert_int_equal(fraction_compare(right.shares[1], one_over(3)), 0);
}

static void states_need_bits(void **state)
{
	(void)state;
	assert_int_equal(fit_state_bits(1), 1);
	assert_int_equal(fit_state_bits(2), 1);
	assert_int_equal(fit_state_bits(3), 2);
	assert_int_equal(fit_state_bits(32768), 15);
	assert_int_equal(fit_state_bits(32769), 16);
}

// Each rank counts only among equals of all before it.
static void ranks_are_total(void **state)
{
	(void)state;
	const struct fit_line line = {.crystal = 1, .dot_ticks = 2, .cell_dots = 8, .cells = 100, .stretched = 1, .stretch_ticks = 4,
	                              .cycle_ticks = 4};
	const struct fit_rank first = {.line = line, .frame = {.lines = 262}, .memory = {.chips = 2}, .kept = 9, .share = {1, 2}};
	struct fit_rank ranks[10];
	for (size_t index = 0; index < COUNT_OF(ranks); index++)
		ranks[index] = first;
	ranks[0].kept = 8;
	ranks[1].share = one_over(3);
	ranks[2].frame.lines = 263;
	ranks[3].memory.chips = 3;
	ranks[4].line.stretched = 2;
	ranks[5].line.stretch_ticks = 6;
	ranks[6].line.crystal = 2;
	ranks[7].line.dot_ticks = 3;
	ranks[8].line.cell_dots = 9;
	ranks[9].line.cells = 131; // 200 lines: as many cells of the frame
	ranks[9].frame.lines = 200;
	assert_int_equal(fit_rank_compare(&first, &first), 0);
	for (size_t index = 0; index < COUNT_OF(ranks); index++) {
		assert_true(fit_rank_compare(&first, &ranks[index]) < 0);
		assert_true(fit_rank_compare(&ranks[index], &first) > 0);
		for (size_t later = index + 1; later < COUNT_OF(ranks); later++)
			assert_true(fit_rank_compare(&ranks[index], &ranks[later]) > 0);
	}
	fit_ranks_sort(ranks, COUNT_OF(ranks));
	assert_int_equal(ranks[0].line.cells, 131);
	assert_int_equal(ranks[9].kept, 8);
}

struct published_mode {
	const char *standard, *crystal;
	int64_t columns, front_porch, sync, back_porch; // characters of 8 dots
	int64_t lines, sync_lines, top;
};

static const struct published_mode modes[] = {
	{"dmt-640x480-60", "25.175 MHz", 80, 2, 12, 6, 525, 2, 35},   // DMT: 16, 96, 48 dots; 2 + 33 lines
	{"dmt-800x600-60", "40 MHz", 100, 5, 16, 11, 628, 4, 27},     // DMT: 40, 128, 88 dots; 4 + 23 lines
	{"dmt-800x600-56", "36 MHz", 100, 3, 9, 16, 625, 2, 24},      // DMT: 24, 72, 128 dots; 2 + 22 lines
};

// With a mode's own clock and character the search finds the published mode again, at either grade's limits of the studio.
static void published_modes_are_found_again(void **state)
{
	(void)state;
	struct shelf shelf = open_shelf();
	static const int64_t one = 1, eight = 8;
	for (size_t index = 0; index < COUNT_OF(modes); index++) {
		const struct published_mode *mode = &modes[index];
		struct fit_space space = space_of(&shelf, mode->standard, mode->crystal, mode->columns);
		struct fit_result result;
		space.grade = GRADE_STUDIO;
		space.dot_ticks = &one;
		space.cell_dots = &eight;
		space.dot_tick_count = space.cell_dot_count = 1;
		assert_int_equal(fit_search(shelf.arena, &space, &result), FIT_OK);
		assert_true(result.layout_count > 0);
		const struct fit_layout *layout = &result.layouts[0];
		assert_int_equal(layout->kept, layout->binding);
		assert_int_equal(layout->regions[FIT_FRONT_PORCH].cells, mode->front_porch);
		assert_int_equal(layout->regions[FIT_SYNC].cells, mode->sync);
		assert_int_equal(layout->regions[FIT_BACK_PORCH].cells, mode->back_porch);
		assert_int_equal(layout->regions[FIT_BURST].cells, 0);
		assert_int_equal(layout->serration.cells, 0);
		assert_int_equal(layout->frame.lines, mode->lines);
		assert_int_equal(layout->frame.broad_lines, mode->sync_lines);
		assert_int_equal(layout->frame.top, mode->top);
	}
	close_shelf(&shelf);
}

// The house example: 101 cells of nine dots, one stretched by three, are 912 ticks and 228 cycles.
static void the_house_example_is_a_choice(void **state)
{
	(void)state;
	struct shelf shelf = open_shelf();
	struct fit_space space = space_of(&shelf, "composite-525", "14.31818 MHz", 80);
	struct fit_result result;
	static const int64_t nine = 9;
	bool found = false;
	space.cell_dots = &nine;
	space.cell_dot_count = 1;
	space.top = 1000;
	assert_int_equal(fit_search(shelf.arena, &space, &result), FIT_OK);
	for (size_t index = 0; index < result.layout_count; index++) {
		const struct fit_line *line = &result.layouts[index].line;
		assert_int_equal(line->ticks % 4, 0);
		assert_int_equal(line->ticks, line->cells * 9 + line->stretched * line->stretch_ticks);
		found = found || (line->cells == 101 && line->stretched == 1 && line->stretch_dots == 3 && line->ticks == 912);
	}
	assert_true(found);
	close_shelf(&shelf);
}

// 455/2 cycles (S170) need two lines to close; a frame of whole lines then misses the field rate.
static void the_studio_wants_half_cycles_and_half_lines(void **state)
{
	(void)state;
	struct shelf shelf = open_shelf();
	struct fit_space space = space_of(&shelf, "composite-525", "14.31818 MHz", 80);
	struct fit_result result;
	space.grade = GRADE_STUDIO;
	assert_int_equal(fit_search(shelf.arena, &space, &result), FIT_OK);
	assert_int_equal(result.layout_count, 0);
	assert_int_equal(result.obstacle_count, 1);
	assert_int_equal(result.obstacles[0].condition, FIT_COLOUR);
	assert_int_equal(result.obstacles[0].line.ticks, 910);
	assert_int_equal(fraction_compare(result.obstacles[0].found, (struct fraction){455, 2}), 0);
	space.phase_lines = 2;
	assert_int_equal(fit_search(shelf.arena, &space, &result), FIT_OK);
	assert_int_equal(result.layout_count, 0);
	assert_int_equal(result.obstacles[0].condition, FIT_FIELD_RATE);
	assert_int_equal(result.obstacles[0].item, ITEM_FIELD_RATE);
	assert_int_equal(result.obstacles[0].lines, 263); // 59.826 Hz; 262 miss by a little more
	close_shelf(&shelf);
}

struct failing {
	const char *crystal;
	int64_t columns, lines, cell;
	enum fit_condition condition;
};

// 3.579545 MHz: 233 ticks at most a line, so 80 cells of 6 are too long; 25 MHz is 6.98 times the subcarrier; 8 cells of 16 ticks of
// 14.3 MHz are 9 us; its lines have 900 to 933 ticks, between 14 and 15 cells of 64; 300 lines do not fit into those of 56 Hz; cells of one tick of 28.6 MHz last 35 ns each.
static const struct failing failing[] = {
	{"25 MHz", 80, 242, 8, FIT_SUBCARRIER},
	{"3.579545 MHz", 80, 242, 6, FIT_ROOM},
	{"14.31818 MHz", 8, 242, 16, FIT_WIDTH},
	{"14.31818 MHz", 8, 242, 64, FIT_LINE_RATE},
	{"14.31818 MHz", 80, 300, 9, FIT_HEIGHT},
	{"28.63636 MHz", 1000, 242, 1, FIT_MEMORY},
};

static void each_condition_is_told(void **state)
{
	(void)state;
	struct shelf shelf = open_shelf();
	static const int64_t one = 1;
	for (size_t index = 0; index < COUNT_OF(failing); index++) {
		const struct failing *is = &failing[index];
		struct fit_space space = space_of(&shelf, "composite-525", is->crystal, is->columns);
		struct fit_result result;
		space.dot_ticks = &one;
		space.dot_tick_count = 1;
		space.cell_dots = &is->cell;
		space.cell_dot_count = 1;
		space.picture_lines = is->lines;
		space.most_stretched = is->condition == FIT_LINE_RATE ? 0 : 4;
		space.least_percent = is->condition == FIT_LINE_RATE ? 0 : 50;
		assert_int_equal(fit_search(shelf.arena, &space, &result), FIT_OK);
		assert_int_equal(result.layout_count, 0);
		assert_int_equal(result.choices, 0);
		assert_int_equal(result.obstacle_count, 1);
		assert_int_equal(result.obstacles[0].condition, is->condition);
	}
	close_shelf(&shelf);
}

static void numbers_that_do_not_fit_are_told(void **state)
{
	(void)state;
	struct shelf shelf = open_shelf();
	struct fit_space space = space_of(&shelf, "composite-525", NULL, 80);
	// A line of 1,200 times the subcarrier has 273,000 ticks; the next cannot even be divided by the subcarrier; the last has rates, but
	// its ticks in seconds leave no room for the fractions of limits, which shows when a good crystal's layouts are there already.
	const struct crystal crystals[] = {
		*catalogue_crystal(shelf.crystals, "28.63636 MHz"), {"4.3 GHz", {47250000000, 11}, "", ""},
		{"odd", {1431818181818181823, 100000000000}, "", ""}, {"near", {1431818181819, 100000}, "", ""},
	};
	struct fit_result result;
	space.crystals = crystals;
	space.crystal_count = COUNT_OF(crystals);
	space.top = 1000; // of which the good crystal has fewer
	assert_int_equal(fit_search(shelf.arena, &space, &result), FIT_OK);
	assert_true(result.layout_count > 0 && result.layout_count < space.top);
	for (size_t index = 0; index < result.layout_count; index++)
		assert_int_equal(result.layouts[index].line.crystal, 0);
	assert_int_equal(result.obstacle_count, 3);
	for (size_t index = 0; index < result.obstacle_count; index++)
		assert_int_equal(result.obstacles[index].condition, FIT_NUMBERS);
	close_shelf(&shelf);
}

// Limits that the search takes for granted: a line rate with both bounds, and a field or frame rate with both.
static void standards_have_what_the_search_needs(void **state)
{
	(void)state;
	struct shelf shelf = open_shelf();
	for (size_t index = 0; index < shelf.standards->count; index++)
		for (size_t grade = 0; grade < GRADE_COUNT; grade++) {
			const struct standard *standard = &shelf.standards->standards[index];
			const struct limit *line = standard_limit(standard, ITEM_LINE_RATE, (enum limit_grade)grade);
			const struct limit *field = standard_limit(standard, ITEM_FIELD_RATE, (enum limit_grade)grade);
			const struct limit *frame = standard_limit(standard, ITEM_FRAME_RATE, (enum limit_grade)grade);
			struct fraction width_s;
			assert_true(line != NULL && line->has_low && line->has_high && line->low.numerator > 0);
			assert_true((field != NULL && field->has_low && field->has_high) ||
			            (frame != NULL && frame->has_low && frame->has_high));
			assert_true(fit_default_lines(standard) > 0);
			assert_true(fit_full_width(standard, &width_s));
			if (fit_has_colour(standard))
				assert_true(standard_limit(standard, ITEM_SUBCARRIER, (enum limit_grade)grade)->has_nominal);
		}
	close_shelf(&shelf);
}

static void assert_same_layout(const struct fit_layout *left, const struct fit_layout *right)
{
	assert_memory_equal(&left->line, &right->line, sizeof left->line);
	assert_memory_equal(left->regions, right->regions, sizeof left->regions);
	assert_memory_equal(&left->frame, &right->frame, sizeof left->frame);
	assert_int_equal(left->kept, right->kept);
}

static void assert_in_order(const struct fit_result *result)
{
	for (size_t index = 1; index < result->layout_count; index++) {
		const struct fit_layout *before = &result->layouts[index - 1], *after = &result->layouts[index];
		assert_true(before->kept >= after->kept);
		if (before->kept == after->kept && before->has_share && after->has_share)
			assert_true(fraction_compare(before->share, after->share) >= 0);
	}
}

// Whatever the catalogue has: its figures fit, the best three of three are those of a thousand, and what fit_measure finds of each is in
// the order of the ranks that the search gave them.
static void few_layouts_are_the_first_of_many(void **state)
{
	(void)state;
	struct shelf shelf = open_shelf();
	for (size_t index = 0; index < shelf.standards->count; index++) {
		struct fit_space space = space_of(&shelf, shelf.standards->standards[index].name, NULL, 80);
		struct fit_result few, many;
		space.top = 3;
		assert_int_equal(fit_search(shelf.arena, &space, &few), FIT_OK);
		space.top = FIT_LIMIT_TOP;
		assert_int_equal(fit_search(shelf.arena, &space, &many), FIT_OK);
		assert_int_equal(few.layout_count, 3);
		assert_int_equal(few.choices, many.choices);
		assert_true(few.judged <= many.judged);
		assert_true(few.judged < few.choices || few.choices < 100); // bounds do spare something
		assert_in_order(&many);
		for (size_t place = 0; place < few.layout_count; place++)
			assert_same_layout(&few.layouts[place], &many.layouts[place]);
		for (size_t place = 0; place < many.obstacle_count; place++)
			assert_int_not_equal(many.obstacles[place].condition, FIT_NUMBERS);
	}
	close_shelf(&shelf);
}

// A floor that no edges reach leaves everything as it was.
static void edges_below_the_floor_are_not_taken(void **state)
{
	(void)state;
	struct shelf shelf = open_shelf();
	const struct standard *standard = catalogue_standard(shelf.standards, "dmt-640x480-60");
	const struct fit_line line = {.dot_ticks = 1, .cell_dots = 8, .cell_ticks = 8, .cells = 100, .ticks = 800};
	const struct fit_standing floor = {.kept = 100, .count = 0};
	struct fit_standing standing = {.kept = 7};
	struct fit_cells regions[FIT_REGIONS] = {{5, 5}};
	struct fit_meter meter;
	fit_meter_begin(&meter, shelf.arena, standard, GRADE_MONITOR);
	fit_edges_open(&meter, (struct fraction){25175000, 1}, 0, 800);
	assert_int_equal(fit_edges_most(&meter), 5); // front porch, sync, back porch, picture start, centre
	assert_false(fit_edges_find(&meter, &line, 80, false, &floor, 1, regions, &standing));
	assert_int_equal(standing.kept, 7);
	assert_int_equal(regions[FIT_SYNC].cells, 5);
	assert_true(fit_edges_find(&meter, &line, 80, false, NULL, 1, regions, &standing));
	assert_int_equal(standing.kept, 12);
	close_shelf(&shelf);
}

// 52,500 cells take 16 address pins; 16 bits of state and three signals are three bytes or two words of 16 bits. A cell of
// 317.8 ns less latch (41 ns), its inputs (25) and 20 leaves 231.8 ns; one of 120 ns leaves 34, and no part is so fast.
static void memories_are_wide_and_fast_enough(void **state)
{
	(void)state;
	struct shelf shelf = open_shelf();
	struct fit_memory memory = {0};
	struct fraction access_s;
	assert_true(fit_memory_access(shelf.parts, (struct fraction){8, 25175000}, &access_s));
	assert_true(fit_memory_find(shelf.parts, 52500, 3, access_s, &memory));
	assert_string_equal(memory.part->name, "27C1024");
	assert_int_equal(memory.chips, 2);
	assert_int_equal(memory.word_bits, 19);
	assert_int_equal(memory.state_bits, 16);
	memory.chips = 9;
	assert_true(fit_memory_access(shelf.parts, (struct fraction){120, 1000000000}, &access_s));
	assert_int_equal(fraction_compare(access_s, (struct fraction){34, 1000000000}), 0);
	assert_false(fit_memory_find(shelf.parts, 52500, 3, access_s, &memory));
	assert_int_equal(memory.chips, 9);
	assert_false(fit_memory_find(shelf.parts, (int64_t)1 << 40, 3, (struct fraction){1, 1000}, &memory));
	close_shelf(&shelf);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(standings_are_sorted_and_compared_from_the_smallest),
		cmocka_unit_test(states_need_bits),
		cmocka_unit_test(ranks_are_total),
		cmocka_unit_test(published_modes_are_found_again),
		cmocka_unit_test(the_house_example_is_a_choice),
		cmocka_unit_test(the_studio_wants_half_cycles_and_half_lines),
		cmocka_unit_test(each_condition_is_told),
		cmocka_unit_test(numbers_that_do_not_fit_are_told),
		cmocka_unit_test(standards_have_what_the_search_needs),
		cmocka_unit_test(few_layouts_are_the_first_of_many),
		cmocka_unit_test(edges_below_the_floor_are_not_taken),
		cmocka_unit_test(memories_are_wide_and_fast_enough),
	};
	return cmocka_run_group_tests_name("layout/fit", tests, NULL, NULL);
}
