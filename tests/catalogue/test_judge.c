// Margins and shares, by limits and intervals reckoned by hand.
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdlib.h>
#include <string.h>

#include "catalogue/judge.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

// "N" or "N/D", perhaps with a minus sign.
static struct fraction value_of(const char *text)
{
	const char *slash = strchr(text, '/');
	struct fraction value;
	assert_true(fraction_make(atoll(text), slash != NULL ? atoll(slash + 1) : 1, &value));
	return value;
}

static void assert_fraction(struct fraction found, const char *wanted)
{
	const struct fraction value = value_of(wanted);
	assert_int_equal(found.numerator, value.numerator);
	assert_int_equal(found.denominator, value.denominator);
}

struct judged {
	const char *nominal, *low, *high; // of the limit; NULL where there is none
	const char *from, *to;            // measured
	bool kept;
	const char *margin, *share;       // NULL: there is no share
};

static struct limit limit_of(const struct judged *judged)
{
	struct limit limit = {.nominal = FRACTION_ZERO, .low = FRACTION_ZERO, .high = FRACTION_ZERO};
	limit.has_nominal = judged->nominal != NULL;
	limit.has_low = judged->low != NULL;
	limit.has_high = judged->high != NULL;
	limit.nominal = limit.has_nominal ? value_of(judged->nominal) : FRACTION_ZERO;
	limit.low = limit.has_low ? value_of(judged->low) : FRACTION_ZERO;
	limit.high = limit.has_high ? value_of(judged->high) : FRACTION_ZERO;
	return limit;
}

static const struct judged cases[] = {
	// Two bounds: the scale is half the range, 2, wherever the nominal is.
	{NULL, "4", "8", "6", "6", true, "2", "1"},
	{"5", "4", "8", "6", "6", true, "2", "1"},
	{NULL, "4", "8", "5", "5", true, "1", "1/2"},
	{NULL, "4", "8", "7", "7", true, "1", "1/2"},
	{NULL, "4", "8", "4", "4", true, "0", "0"},
	{NULL, "4", "8", "8", "8", true, "0", "0"},
	{NULL, "4", "8", "3", "3", false, "-1", "-1/2"},
	{NULL, "4", "8", "13", "13", false, "-5", "-5/2"},
	{NULL, "4", "8", "-1", "-1", false, "-5", "-5/2"},
	// Of an interval, the end that is nearer to its bound: 5 is 1 above, 7.5 only 1/2 below.
	{NULL, "4", "8", "5", "15/2", true, "1/2", "1/4"},
	{NULL, "4", "8", "9/2", "7", true, "1/2", "1/4"},
	{NULL, "4", "8", "3", "7", false, "-1", "-1/2"},
	{NULL, "4", "8", "5", "9", false, "-1", "-1/2"},
	{NULL, "4", "8", "3", "10", false, "-2", "-1"},
	// One bound: the scale is from the nominal to it; a share is at most 1.
	{"6", "4", NULL, "5", "5", true, "1", "1/2"},
	{"6", "4", NULL, "6", "6", true, "2", "1"},
	{"6", "4", NULL, "100", "100", true, "96", "1"},
	{"6", "4", NULL, "3", "100", false, "-1", "-1/2"},
	{"6", NULL, "8", "7", "7", true, "1", "1/2"},
	{"6", NULL, "8", "0", "0", true, "8", "1"},
	{"6", NULL, "8", "1", "9", false, "-1", "-1/2"},
	// One bound without a nominal apart from it: the scale is the bound, without its sign.
	{NULL, NULL, "8", "6", "6", true, "2", "1/4"},
	{NULL, NULL, "8", "10", "10", false, "-2", "-1/4"},
	{"8", NULL, "8", "6", "6", true, "2", "1/4"},
	{NULL, "8", NULL, "6", "6", false, "-2", "-1/4"},
	{"8", "8", NULL, "10", "10", true, "2", "1/4"},
	{NULL, "-8", NULL, "-6", "-6", true, "2", "1/4"},
	{NULL, NULL, "-8", "-10", "-10", true, "2", "1/4"},
	// A bound of 0 alone has no scale: above it 1, on it 0, below it -1.
	{NULL, "0", NULL, "1/7", "1/7", true, "1/7", "1"},
	{NULL, "0", NULL, "0", "5", true, "0", "0"},
	{NULL, "0", NULL, "-1/7", "5", false, "-1/7", "-1"},
	{"0", "0", NULL, "3", "3", true, "3", "1"},
	{NULL, NULL, "0", "0", "0", true, "0", "0"},
	{NULL, NULL, "0", "2", "2", false, "-2", "-1"},
	// But with a nominal apart from it, it has one.
	{"2", "0", NULL, "1", "1", true, "1", "1/2"},
	// Exactly: kept or not.
	{"6", "6", "6", "6", "6", true, "0", NULL},
	{"6", "6", "6", "6", "7", false, "-1", NULL},
	{"6", "6", "6", "11/2", "6", false, "-1/2", NULL},
	{"0", "0", "0", "0", "0", true, "0", NULL},
};

static void margins_and_shares(void **state)
{
	(void)state;
	for (size_t index = 0; index < COUNT_OF(cases); index++) {
		const struct limit limit = limit_of(&cases[index]);
		const struct interval measured = {value_of(cases[index].from), value_of(cases[index].to)};
		const struct judgement judgement = limit_judge(&limit, measured);
		assert_true(judgement.has_margin);
		assert_true(judgement.binds);
		assert_int_equal(judgement.kept, cases[index].kept);
		assert_fraction(judgement.margin, cases[index].margin);
		assert_int_equal(judgement.has_share, cases[index].share != NULL);
		if (judgement.has_share)
			assert_fraction(judgement.share, cases[index].share);
	}
}

static void a_nominal_alone_does_not_bind(void **state)
{
	(void)state;
	const struct limit limit = {.has_nominal = true, .nominal = {6, 1}, .low = FRACTION_ZERO, .high = FRACTION_ZERO};
	assert_false(limit_judge(&limit, (struct interval){{1, 1}, {99, 1}}).binds);
}

// A difference of denominators without common factor near 2^62, and a share whose margin fits but that does not.
static void a_verdict_holds_where_its_margin_does_not_fit(void **state)
{
	(void)state;
	const struct limit odd = {.has_low = true, .low = {1, INT64_MAX}, .high = FRACTION_ZERO, .nominal = FRACTION_ZERO};
	const struct limit tiny = {.has_high = true, .high = {1, INT64_MAX}, .low = FRACTION_ZERO, .nominal = FRACTION_ZERO};
	const struct limit wide = {.has_low = true, .has_high = true, .low = {INT64_MIN + 1, 1}, .high = {INT64_MAX, 1}, .nominal = FRACTION_ZERO};
	const struct judgement judgements[] = {limit_judge(&odd, (struct interval){{1, INT64_MAX - 1}, {1, 1}}),
	                                       limit_judge(&tiny, (struct interval){{0, 1}, {3, 1}}),
	                                       limit_judge(&wide, (struct interval){{0, 1}, {0, 1}})};
	for (size_t index = 0; index < COUNT_OF(judgements); index++) {
		assert_true(judgements[index].binds);
		assert_int_equal(judgements[index].kept, index != 1);
		assert_false(judgements[index].has_margin || judgements[index].has_share);
		assert_fraction(judgements[index].margin, "0");
	}
}

struct widened {
	enum dimension dimension;
	const char *ppm;
	const char *from, *to, *low, *high;
};

static const struct widened widenings[] = {
	// 250,000 ppm are a quarter. A frequency of 100 is 75 to 125; a time is divided by these: 100 / 1.25 to 100 / 0.75.
	{DIMENSION_FREQUENCY, "250000", "100", "100", "75", "125"},
	{DIMENSION_FREQUENCY, "250000", "80", "100", "60", "125"},
	{DIMENSION_TIME, "250000", "100", "100", "80", "400/3"},
	{DIMENSION_TIME, "250000", "75", "90", "60", "120"},
	// A time below zero grows away from it where the clock is slow.
	{DIMENSION_TIME, "250000", "-75", "90", "-100", "120"},
	{DIMENSION_TIME, "250000", "-90", "-75", "-120", "-60"},
	{DIMENSION_FREQUENCY, "250000", "-80", "-80", "-100", "-60"},
	{DIMENSION_TIME, "250000", "0", "0", "0", "0"},
	// 50 ppm of 4.7 us.
	{DIMENSION_TIME, "50", "47/10000000", "47/10000000", "94/20001000", "94/19999000"},
	// What is no time and no frequency stays, and so does everything with a clock that is exact.
	{DIMENSION_LINES, "250000", "100", "101", "100", "101"},
	{DIMENSION_CYCLES, "250000", "100", "101", "100", "101"},
	{DIMENSION_PULSES, "250000", "6", "6", "6", "6"},
	{DIMENSION_TIME, "0", "100", "101", "100", "101"},
};

static void widening_by_accuracy(void **state)
{
	(void)state;
	for (size_t index = 0; index < COUNT_OF(widenings); index++) {
		struct interval interval = {value_of(widenings[index].from), value_of(widenings[index].to)};
		assert_true(interval_widen(&interval, widenings[index].dimension, value_of(widenings[index].ppm)));
		assert_fraction(interval.low, widenings[index].low);
		assert_fraction(interval.high, widenings[index].high);
	}
}

// A clock that may stand still makes times without end.
static void widening_that_does_not_fit_changes_nothing(void **state)
{
	(void)state;
	struct interval interval = {{3, 7}, {5, 7}};
	assert_false(interval_widen(&interval, DIMENSION_TIME, fraction_whole(1000000)));
	assert_fraction(interval.low, "3/7");
	assert_fraction(interval.high, "5/7");
	interval = (struct interval){{1, INT64_MAX}, {2, INT64_MAX}};
	assert_false(interval_widen(&interval, DIMENSION_FREQUENCY, (struct fraction){1, 999983}));
	assert_int_equal(interval.low.denominator, INT64_MAX);
	assert_int_equal(interval.high.numerator, 2);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(margins_and_shares),
		cmocka_unit_test(a_nominal_alone_does_not_bind),
		cmocka_unit_test(a_verdict_holds_where_its_margin_does_not_fit),
		cmocka_unit_test(widening_by_accuracy),
		cmocka_unit_test(widening_that_does_not_fit_changes_nothing),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
