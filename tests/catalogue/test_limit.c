// The forms in which limits are written.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <string.h>

#include "catalogue/standards.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

struct good_limit {
	const char *text;
	enum limit_item item;
	const char *nominal, *low, *high; // "": none; in the base unit, as fractions
};

static const struct good_limit good_limits[] = {
	{"4.7 us", ITEM_SYNC_WIDTH, "47/10000000", "", ""},
	{"4.7 us +- 0.3 us", ITEM_SYNC_WIDTH, "47/10000000", "44/10000000", "5/1000000"},
	{"4.7us+-0.3us", ITEM_SYNC_WIDTH, "47/10000000", "44/10000000", "5/1000000"},
	{"4.7 us +- 300 ns", ITEM_SYNC_WIDTH, "47/10000000", "44/10000000", "5/1000000"},
	{"15625 Hz +- 1 ppm", ITEM_LINE_RATE, "15625/1", "999999/64", "1000001/64"}, // 15625/10^6 = 1/64
	{"9.2 us (9.1 us to 9.4 us)", ITEM_PICTURE_START, "92/10000000", "91/10000000", "94/10000000"},
	{"9.2 us (at least 9.1 us)", ITEM_PICTURE_START, "92/10000000", "91/10000000", ""},
	{"9.2 us (at most 9.4 us)", ITEM_PICTURE_START, "92/10000000", "", "94/10000000"},
	{"1.27 us to 2.54 us", ITEM_FRONT_PORCH, "", "127/100000000", "254/100000000"},
	{"at least 0.38 us", ITEM_BREEZEWAY, "", "38/100000000", ""},
	{"at most 2 lines", ITEM_VERTICAL_SYNC, "", "", "2/1"},
	{"exactly 525/2 lines", ITEM_LINES_PER_FIELD, "525/2", "525/2", "525/2"},
	{"19 cycles +- 1/36 cycle", ITEM_BURST_START_CYCLES, "19/1", "683/36", "685/36"},
	{"exactly 6 pulses", ITEM_BROAD_PULSES, "6/1", "6/1", "6/1"},
	{"positive", ITEM_HORIZONTAL_POLARITY, "1/1", "1/1", "1/1"},
	{"negative", ITEM_VERTICAL_POLARITY, "-1/1", "-1/1", "-1/1"},
	{"at least 0 us", ITEM_BURST_TO_PICTURE, "", "0/1", ""},
	{"3 lines (3 lines to 3 lines)", ITEM_VERTICAL_SYNC, "3/1", "3/1", "3/1"},
};

// "N/D" or "", as above.
static void assert_value(bool given, struct fraction value, const char *wanted)
{
	assert_int_equal(given, wanted[0] != '\0');
	if (!given)
		return;
	int64_t numerator = 0, denominator = 0;
	const int64_t sign = wanted[0] == '-' ? -1 : 1;
	const char *digit = wanted[0] == '-' ? wanted + 1 : wanted;
	for (; *digit != '/'; digit++)
		numerator = numerator * 10 + (*digit - '0');
	for (digit++; *digit != '\0'; digit++)
		denominator = denominator * 10 + (*digit - '0');
	struct fraction exact;
	assert_true(fraction_make(sign * numerator, denominator, &exact));
	assert_int_equal(fraction_compare(value, exact), 0);
}

static void every_form_is_read_exactly(void **state)
{
	(void)state;
	for (size_t index = 0; index < COUNT_OF(good_limits); index++) {
		struct limit limit = {.grade = GRADE_MONITOR, .source = "kept"};
		assert_int_equal(limit_parse(good_limits[index].text, good_limits[index].item, &limit), LIMIT_OK);
		assert_int_equal(limit.item, good_limits[index].item);
		assert_int_equal(limit.grade, GRADE_MONITOR);
		assert_string_equal(limit.source, "kept");
		assert_value(limit.has_nominal, limit.nominal, good_limits[index].nominal);
		assert_value(limit.has_low, limit.low, good_limits[index].low);
		assert_value(limit.has_high, limit.high, good_limits[index].high);
	}
}

struct bad_limit {
	const char *text;
	enum limit_item item;
	enum limit_status status;
};

static const struct bad_limit bad_limits[] = {
	{"", ITEM_SYNC_WIDTH, LIMIT_MALFORMED},
	{"about 4.7 us", ITEM_SYNC_WIDTH, LIMIT_MALFORMED},
	{"4.7", ITEM_SYNC_WIDTH, LIMIT_NO_UNIT},
	{"4.7 us +- 0.1", ITEM_SYNC_WIDTH, LIMIT_NO_UNIT},
	{"4.7 us +-", ITEM_SYNC_WIDTH, LIMIT_MALFORMED},
	{"4.7 us +- 0.1 us to 3 us", ITEM_SYNC_WIDTH, LIMIT_MALFORMED},
	{"4.7 us (4.6 us to 4.8 us", ITEM_SYNC_WIDTH, LIMIT_MALFORMED},
	{"4.7 us (4.6 us)", ITEM_SYNC_WIDTH, LIMIT_MALFORMED},
	{"(4.6 us to 4.8 us)", ITEM_SYNC_WIDTH, LIMIT_MALFORMED},
	{"4.6 to 4.8 us", ITEM_SYNC_WIDTH, LIMIT_NO_UNIT},
	{"4.6 us to", ITEM_SYNC_WIDTH, LIMIT_MALFORMED},
	{"at most", ITEM_SYNC_WIDTH, LIMIT_MALFORMED},
	{"at odds 3 us", ITEM_SYNC_WIDTH, LIMIT_MALFORMED},
	{"exactly", ITEM_SYNC_WIDTH, LIMIT_MALFORMED},
	{"4.7 Hz", ITEM_SYNC_WIDTH, LIMIT_UNIT},
	{"4.7 fortnights", ITEM_SYNC_WIDTH, LIMIT_UNIT},
	{"4.7 us +- 1 line", ITEM_SYNC_WIDTH, LIMIT_UNIT},
	{"1.5 us +- 1 ppm", ITEM_LINE_RATE, LIMIT_UNIT},
	{"at least 3 us", ITEM_VERTICAL_SYNC, LIMIT_UNIT},
	{"3 ppm", ITEM_LINE_RATE, LIMIT_UNIT},
	{"4.8 us to 4.6 us", ITEM_SYNC_WIDTH, LIMIT_ORDER},
	{"4.5 us (4.6 us to 4.8 us)", ITEM_SYNC_WIDTH, LIMIT_ORDER},
	{"4.9 us (4.6 us to 4.8 us)", ITEM_SYNC_WIDTH, LIMIT_ORDER},
	{"4.5 us (at least 4.6 us)", ITEM_SYNC_WIDTH, LIMIT_ORDER},
	{"4.7 us +- -0.1 us", ITEM_SYNC_WIDTH, LIMIT_ORDER},
	{"0.1 us +- 0.2 us", ITEM_SYNC_WIDTH, LIMIT_ORDER},
	{"-1 us", ITEM_SYNC_WIDTH, LIMIT_ORDER},
	{"99999999999999999999 us", ITEM_SYNC_WIDTH, LIMIT_OVERFLOW},
	{"9223372036854775807 lines +- 1 line", ITEM_VERTICAL_SYNC, LIMIT_OVERFLOW},
	{"high", ITEM_HORIZONTAL_POLARITY, LIMIT_MALFORMED},
	{"1 pulse", ITEM_HORIZONTAL_POLARITY, LIMIT_MALFORMED},
	{"positive", ITEM_SYNC_WIDTH, LIMIT_MALFORMED},
	{"1234567890123456789012345678901234567890123456789012345678901234567890 us", ITEM_SYNC_WIDTH, LIMIT_MALFORMED},
};

static void what_is_no_limit_is_told_and_changes_nothing(void **state)
{
	(void)state;
	for (size_t index = 0; index < COUNT_OF(bad_limits); index++) {
		const struct limit before = {ITEM_COUNT, GRADE_STUDIO, true, false, true, {1, 3}, {1, 5}, {1, 7}, "kept"};
		struct limit limit = before;
		assert_int_equal(limit_parse(bad_limits[index].text, bad_limits[index].item, &limit), bad_limits[index].status);
		assert_int_equal(limit.item, before.item);
		assert_true(limit.has_nominal && !limit.has_low && limit.has_high);
		assert_int_equal(fraction_compare(limit.nominal, before.nominal), 0);
		assert_int_equal(fraction_compare(limit.high, before.high), 0);
		assert_string_equal(limit.source, "kept");
		assert_true(strlen(limit_status_words(bad_limits[index].status)) > 0);
	}
}

static void items_are_found_by_their_names(void **state)
{
	(void)state;
	for (size_t index = 0; index < ITEM_COUNT; index++) {
		const struct limit_item_facts *facts = limit_item_facts((enum limit_item)index);
		enum limit_item found = ITEM_COUNT;
		assert_true(limit_item_find(facts->name, &found));
		assert_int_equal(found, index);
		assert_true(strlen(facts->measures) > 0);
		assert_int_equal(facts->unit[0] == '\0', facts->is_polarity);
	}
	enum limit_item found = ITEM_BREEZEWAY;
	assert_false(limit_item_find("Breezeway", &found));
	assert_false(limit_item_find("", &found));
	assert_int_equal(found, ITEM_BREEZEWAY);
	// The design's own name.
	assert_true(limit_item_find("horizontal sync width", &found));
	assert_int_equal(found, ITEM_SYNC_WIDTH);
}

// The unit in which an item is shown is one of its dimension.
static void units_fit_the_items(void **state)
{
	(void)state;
	for (size_t index = 0; index < ITEM_COUNT; index++) {
		const struct limit_item_facts *facts = limit_item_facts((enum limit_item)index);
		const char *units[UNITS_LIMIT];
		const size_t count = dimension_units(facts->dimension, units);
		bool found = facts->is_polarity;
		for (size_t unit = 0; unit < count; unit++)
			found = found || strcmp(units[unit], facts->unit) == 0;
		assert_true(found);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(every_form_is_read_exactly),
		cmocka_unit_test(what_is_no_limit_is_told_and_changes_nothing),
		cmocka_unit_test(items_are_found_by_their_names),
		cmocka_unit_test(units_fit_the_items),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
