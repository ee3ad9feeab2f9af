// Limits at the edges of a line; places worked out by hand.
#include "../layout/laid.h"

#include "view/line_limits.h"

// 10 MHz, cells of 10 ticks: 1 us each, 64 a line. Sync 5 us from 0H, picture from 12 to 62 us, front porch the last 2.
static struct laid lay_standard(const char *limits)
{
	struct laid laid = {.arena = arena_create(), .diagnostics = diagnostics_create()};
	const char *text = arena_format(laid.arena,
	                                "scanlatch: 1\n"
	                                "name: quay\n"
	                                "standard: { limits: { %s } }\n"
	                                "clock: { master: 10 MHz, cell: 10 ticks }\n"
	                                "signals:\n"
	                                "  sync: { role: composite sync, active: low }\n"
	                                "  blank: { role: blanking, active: high }\n"
	                                "lines:\n"
	                                "  picture:\n"
	                                "    regions:\n"
	                                "      - { region: sync, cells: 5, assert: [sync, blank] }\n"
	                                "      - { region: porch, cells: 7, assert: [blank] }\n"
	                                "      - { region: picture, cells: 50 }\n"
	                                "      - { region: front, cells: 2, assert: [blank] }\n"
	                                "  border: { like: picture, change: [ { region: picture, assert: [blank] } ] }\n"
	                                "frame:\n"
	                                "  - { repeat: 10, line: border }\n"
	                                "  - { repeat: 20, line: picture }\n"
	                                "machine: { form: loop, state: 12 bits }\n"
	                                "chips: { part: 28C64, speed: 150 ns }\n",
	                                limits);
	struct source *source = arena_alloc(laid.arena, sizeof *source);
	*source = (struct source){"quay.yaml", text, strlen(text)};
	laid.plan = plan_read(source, catalogue_load(laid.arena, laid.diagnostics), laid.diagnostics);
	laid.timeline = laid.plan != NULL ? timeline_create(laid.plan, laid.diagnostics) : NULL;
	assert_laid(&laid);
	return laid;
}

// The only limit of a line.
static struct line_limit limit_of(const char *limits, uint32_t line)
{
	struct laid laid = lay_standard(limits);
	struct line_shape shape;
	struct line_limit found[MOST_LINE_LIMITS];
	size_t count;
	assert_true(line_shape_make(&shape, laid.timeline, line, laid.arena));
	assert_true(line_limits_find(&shape, laid.arena, found, &count));
	assert_int_equal(count, 1);
	release(&laid);
	return found[0];
}

static size_t limits_of(const char *limits, uint32_t line)
{
	struct laid laid = lay_standard(limits);
	struct line_shape shape;
	struct line_limit found[MOST_LINE_LIMITS];
	size_t count;
	assert_true(line_shape_make(&shape, laid.timeline, line, laid.arena));
	assert_true(line_limits_find(&shape, laid.arena, found, &count));
	release(&laid);
	return count;
}

static void a_width_may_end_in_its_interval(void **state)
{
	(void)state;
	const struct line_limit sync = limit_of("horizontal sync width: 4.7 us +- 0.2 us", 12);
	assert_int_equal(sync.from_tick, 0);
	assert_int_equal(sync.to_tick, 50);
	assert_false(sync.at_start);
	assert_true(sync.has_low && sync.has_high);
	assert_int_equal(sync.low_tick, 45);
	assert_int_equal(sync.high_tick, 49);
	assert_false(sync.kept);
}

// The front porch is set where it begins: at least 1.5 us before the next line's 0H at tick 640, at most 2.5 us.
static void the_front_porch_may_begin_in_its_interval(void **state)
{
	(void)state;
	const struct line_limit porch = limit_of("front porch: 2 us (1.5 us to 2.5 us)", 12);
	assert_true(porch.at_start);
	assert_int_equal(porch.from_tick, 620);
	assert_int_equal(porch.to_tick, 640);
	assert_int_equal(porch.low_tick, 615);
	assert_int_equal(porch.high_tick, 625);
	assert_true(porch.kept);
}

// One bound: a porch of at least 1.5 us begins at most at 625, one of at most 2.5 us at least at 615.
static void bounds_of_a_beginning_change_sides(void **state)
{
	(void)state;
	const struct line_limit least = limit_of("front porch: at least 1.5 us", 12), most = limit_of("front porch: at most 2.5 us", 12);
	assert_true(least.has_high && !least.has_low);
	assert_int_equal(least.high_tick, 625);
	assert_true(most.has_low && !most.has_high);
	assert_int_equal(most.low_tick, 615);
}

// Blanking begins in the line before, and its end is where it is set. The first line of picture has none before it that has picture.
static void an_edge_may_hang_on_the_line_before(void **state)
{
	(void)state;
	const struct line_limit blanking = limit_of("horizontal blanking: 14 us +- 1 us", 12);
	assert_int_equal(blanking.from_tick, -20);
	assert_int_equal(blanking.to_tick, 120);
	assert_int_equal(blanking.low_tick, 110);
	assert_int_equal(blanking.high_tick, 130);
	assert_int_equal(limits_of("horizontal blanking: 14 us +- 1 us", 10), 0);
	assert_int_equal(limits_of("picture width: 50 us +- 1 us", 3), 0); // a border
	assert_int_equal(limits_of("picture width: 50 us", 12), 0);        // for information
}

static void what_is_allowed_is_put_in_words(void **state)
{
	(void)state;
	static const char *const pairs[][2] = {
		{"4.7 us +- 0.2 us", "4.500 us to 4.900 us"},
		{"at least 1.5 us", "at least 1.500 us"},
		{"at most 5/3 us", "at most 1.667 us"},
		{"exactly 5 us", "exactly 5.000 us"},
	};
	for (size_t index = 0; index < sizeof pairs / sizeof *pairs; index++) {
		struct limit limit = {.item = ITEM_SYNC_WIDTH};
		struct text words = {0};
		assert_int_equal(limit_parse(pairs[index][0], ITEM_SYNC_WIDTH, &limit), LIMIT_OK);
		text_put_allowed(&words, &limit);
		assert_string_equal(text_string(&words), pairs[index][1]);
		text_release(&words);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(a_width_may_end_in_its_interval),
		cmocka_unit_test(the_front_porch_may_begin_in_its_interval),
		cmocka_unit_test(bounds_of_a_beginning_change_sides),
		cmocka_unit_test(an_edge_may_hang_on_the_line_before),
		cmocka_unit_test(what_is_allowed_is_put_in_words),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
