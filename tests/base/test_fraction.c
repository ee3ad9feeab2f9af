#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <string.h>

#include "base/fraction.h"
#include "base/text.h"

#define assert_fraction(value, expected_numerator, expected_denominator) \
	do { \
		assert_true((value).numerator == (expected_numerator)); \
		assert_true((value).denominator == (expected_denominator)); \
	} while (0)

static struct fraction ratio(int64_t numerator, int64_t denominator)
{
	struct fraction result = FRACTION_ZERO;
	assert_true(fraction_make(numerator, denominator, &result));
	return result;
}

static struct fraction times(struct fraction left, struct fraction right)
{
	struct fraction result = FRACTION_ZERO;
	assert_true(fraction_multiply(left, right, &result));
	return result;
}

static struct fraction over(struct fraction left, struct fraction right)
{
	struct fraction result = FRACTION_ZERO;
	assert_true(fraction_divide(left, right, &result));
	return result;
}

// SMPTE 170M-2004, 11.1 to 11.3: subcarrier 5 MHz x 63/88, line rate 2/455 of it, field rate 2/525 of that.
// ITU-R BT.470-6, table 1, gives the line rate as 4.5 MHz/286; table 2, 2.11b, 455/2 cycles a line.
static void rates_of_525_lines(void **state)
{
	(void)state;
	struct fraction subcarrier = times(fraction_whole(5000000), ratio(63, 88));
	assert_fraction(subcarrier, 39375000, 11);
	assert_fraction(times(ratio(315, 88), fraction_whole(1000000)), 39375000, 11);
	struct fraction line_rate = times(subcarrier, ratio(2, 455));
	assert_int_equal(fraction_compare(line_rate, ratio(4500000, 286)), 0);
	assert_fraction(line_rate, 2250000, 143);
	assert_fraction(times(line_rate, ratio(2, 525)), 60000, 1001);
	assert_fraction(over(subcarrier, line_rate), 455, 2);
	// Line period 63.5555… us (SMPTE 170M-2004, table 2: 63.556).
	assert_fraction(over(fraction_whole(1000000), line_rate), 572, 9);
}

// ITU-R BT.470-6, table 2, 2.11 and 2.11b: 4 433 618.75 Hz, (1135/4 + 1/625) cycles a line; table 1: 15 625 lines a
// second.
static void subcarrier_of_625_lines(void **state)
{
	(void)state;
	struct fraction cycles, parsed;
	assert_true(fraction_add(ratio(1135, 4), ratio(1, 625), &cycles));
	assert_fraction(cycles, 709379, 2500);
	assert_true(fraction_parse_decimal("4433618.75", 10, &parsed));
	assert_fraction(parsed, 17734475, 4);
	assert_int_equal(fraction_compare(times(cycles, fraction_whole(15625)), parsed), 0);
}

static void fractions_are_reduced(void **state)
{
	(void)state;
	assert_fraction(ratio(6, 4), 3, 2);
	assert_fraction(ratio(-6, 4), -3, 2);
	assert_fraction(ratio(6, -4), -3, 2);
	assert_fraction(ratio(-6, -4), 3, 2);
	assert_fraction(ratio(0, -7), 0, 1);
	assert_fraction(ratio(INT64_MAX, INT64_MAX), 1, 1);
	assert_fraction(fraction_whole(-5), -5, 1);
}

// INT64_MIN has no negative of its own: -2^63 fits, 2^63 does not.
static void the_smallest_integer_is_no_trap(void **state)
{
	(void)state;
	struct fraction result = {3, 7};
	assert_fraction(ratio(INT64_MIN, 1), INT64_MIN, 1);
	assert_fraction(ratio(INT64_MIN, INT64_MIN), 1, 1);
	assert_fraction(ratio(2, INT64_MIN), -1, INT64_C(1) << 62);
	assert_fraction(ratio(INT64_MIN, 6), -(INT64_C(1) << 62), 3);
	assert_false(fraction_make(INT64_MIN, -1, &result));
	assert_false(fraction_make(1, INT64_MIN, &result));
	assert_false(fraction_subtract(FRACTION_ZERO, fraction_whole(INT64_MIN), &result));
	assert_false(fraction_multiply(fraction_whole(INT64_MIN), fraction_whole(-1), &result));
	assert_false(fraction_multiply(fraction_whole(INT64_MIN), fraction_whole(INT64_MIN), &result));
	assert_false(fraction_divide(fraction_whole(INT64_MIN), fraction_whole(-1), &result));
	assert_fraction(result, 3, 7);
	assert_true(fraction_subtract(fraction_whole(INT64_MIN), fraction_whole(INT64_MIN), &result));
	assert_fraction(result, 0, 1);
	assert_fraction(times(fraction_whole(INT64_MIN), ratio(1, INT64_C(1) << 62)), -2, 1);
	assert_fraction(over(fraction_whole(INT64_MIN), fraction_whole(INT64_MIN)), 1, 1);
}

static void what_does_not_fit_leaves_the_result_alone(void **state)
{
	(void)state;
	struct fraction result = {3, 7};
	const struct fraction largest = fraction_whole(INT64_MAX);
	assert_false(fraction_make(1, 0, &result));
	assert_false(fraction_make(0, 0, &result));
	assert_false(fraction_divide(largest, FRACTION_ZERO, &result));
	assert_false(fraction_add(largest, fraction_whole(1), &result));
	assert_false(fraction_add(fraction_whole(INT64_MIN), fraction_whole(INT64_MIN), &result));
	assert_false(fraction_subtract(fraction_whole(INT64_MIN), fraction_whole(1), &result));
	assert_false(fraction_multiply(largest, fraction_whole(2), &result));
	// 1/(2^63-1) + 1/(2^63-2): the denominators have no common factor.
	assert_false(fraction_add(ratio(1, INT64_MAX), ratio(1, INT64_MAX - 1), &result));
	assert_fraction(result, 3, 7);
}

// Intermediates of 126 bits whose result fits.
static void wide_intermediates_are_exact(void **state)
{
	(void)state;
	assert_fraction(times(ratio(INT64_MAX, INT64_MAX - 1), ratio(INT64_MAX - 1, INT64_MAX)), 1, 1);
	struct fraction sum;
	assert_true(fraction_add(ratio(INT64_MAX - 1, INT64_MAX), ratio(1, INT64_MAX), &sum));
	assert_fraction(sum, 1, 1);
	assert_true(fraction_subtract(ratio(1, INT64_MAX), ratio(1, INT64_MAX), &sum));
	assert_fraction(sum, 0, 1);
}

static void a_result_may_be_an_operand(void **state)
{
	(void)state;
	struct fraction value = {1, 3};
	assert_true(fraction_add(value, value, &value));
	assert_fraction(value, 2, 3);
	assert_true(fraction_divide(value, value, &value));
	assert_fraction(value, 1, 1);
}

static void comparison_is_exact(void **state)
{
	(void)state;
	// (n-1)/n grows with n; as doubles these two are equal.
	assert_int_equal(fraction_compare(ratio(INT64_MAX - 1, INT64_MAX), ratio(INT64_MAX - 2, INT64_MAX - 1)), 1);
	assert_int_equal(fraction_compare(ratio(INT64_MAX - 2, INT64_MAX - 1), ratio(INT64_MAX - 1, INT64_MAX)), -1);
	assert_int_equal(fraction_compare(ratio(-1, 2), ratio(1, 3)), -1);
	assert_int_equal(fraction_compare(ratio(-1, 2), ratio(-1, 3)), -1);
	assert_int_equal(fraction_compare(ratio(2, 4), ratio(1, 2)), 0);
	assert_int_equal(fraction_compare(fraction_whole(INT64_MIN), fraction_whole(INT64_MAX)), -1);
}

static void rounding_has_a_name(void **state)
{
	(void)state;
	static const struct {
		int64_t numerator, denominator, floor, nearest;
	} rows[] = {
		{7, 2, 3, 4},
		{5, 2, 2, 3},
		{1, 2, 0, 1},
		{49, 100, 0, 0},
		{0, 1, 0, 0},
		{-49, 100, -1, 0},
		{-1, 2, -1, 0},
		{-51, 100, -1, -1},
		{-3, 2, -2, -1},
		{-5, 3, -2, -2},
		{-4, 1, -4, -4},
		{INT64_MAX, 1, INT64_MAX, INT64_MAX},
		{INT64_MIN, 1, INT64_MIN, INT64_MIN},
		// 2^63-1 is odd: its half is 4611686018427387903 1/2.
		{INT64_MAX, 2, INT64_C(4611686018427387903), INT64_C(4611686018427387904)},
		{1, INT64_MAX, 0, 0},
		{-1, INT64_MAX, -1, 0},
	};
	for (size_t index = 0; index < sizeof(rows) / sizeof(rows[0]); index++) {
		struct fraction value = ratio(rows[index].numerator, rows[index].denominator);
		assert_true(fraction_floor(value) == rows[index].floor);
		assert_true(fraction_nearest(value) == rows[index].nearest);
	}
	assert_true(fraction_is_whole(ratio(8, 4)));
	assert_false(fraction_is_whole(ratio(8, 3)));
}

static void common_divisors(void **state)
{
	(void)state;
	assert_int_equal(greatest_common_divisor(0, 0), 0);
	assert_int_equal(greatest_common_divisor(0, -9), 9);
	assert_int_equal(greatest_common_divisor(9, 0), 9);
	assert_int_equal(greatest_common_divisor(-12, 18), 6);
	assert_int_equal(greatest_common_divisor(910, 1136), 2);
	assert_true(greatest_common_divisor(INT64_MAX, INT64_MAX) == INT64_MAX);
	assert_int_equal(greatest_common_divisor(INT64_MIN, 12), 4);
}

static void decimals_are_read_exactly(void **state)
{
	(void)state;
	static const struct {
		const char *text;
		int64_t numerator, denominator;
	} rows[] = {
		{"0", 0, 1},
		{"000", 0, 1},
		{"0.0", 0, 1},
		{"7", 7, 1},
		{"007.50", 15, 2},
		{"4.7", 47, 10},
		{"0.1", 1, 10},
		// 4 x the subcarrier of 625 lines, MHz (EBU Tech. 3280-E, table 1).
		{"17.734475", 709379, 40000},
		{"9223372036854775807", INT64_MAX, 1},
		{"0.000000000000000001", 1, INT64_C(1000000000000000000)},
		{"1.00000000000000000000000000000000000000000000", 1, 1},
		{"0000000000000000000000000000000000000000000012.5", 25, 2},
		// 2^-62 has 62 places and still fits.
		{"0.00000000000000000021684043449710088680149056017398834228515625", 1, INT64_C(1) << 62},
	};
	for (size_t index = 0; index < sizeof(rows) / sizeof(rows[0]); index++) {
		struct fraction value = {3, 7};
		assert_true(fraction_parse_decimal(rows[index].text, strlen(rows[index].text), &value));
		assert_fraction(value, rows[index].numerator, rows[index].denominator);
	}
}

static void what_is_no_decimal_is_refused(void **state)
{
	(void)state;
	static const char *const rows[] = {
		"", ".", "1.", ".5", "-1", "+1", " 1", "1 ", "1e3", "0x10", "1,5", "1.2.3", "1..2", "1_000", "one", "1.5x",
		"9223372036854775808",
		"92233720368547758070",
		"9223372036854775807.5",
		"0.0000000000000000001",
		"3.14159265358979323846264338327950288",
	};
	struct fraction value = {3, 7};
	for (size_t index = 0; index < sizeof(rows) / sizeof(rows[0]); index++)
		assert_false(fraction_parse_decimal(rows[index], strlen(rows[index]), &value));
	assert_false(fraction_parse_decimal("1\0002", 3, &value));
	assert_fraction(value, 3, 7);
	// Only `length` bytes count.
	assert_true(fraction_parse_decimal("12x", 2, &value));
	assert_fraction(value, 12, 1);
}

static void fractions_are_printed(void **state)
{
	(void)state;
	struct text text = {0};
	text_put_fraction(&text, ratio(4500000, 286));
	text_put(&text, " ");
	text_put_fraction(&text, ratio(-1, 2));
	text_put(&text, " ");
	text_put_fraction(&text, fraction_whole(INT64_MIN));
	text_put(&text, " ");
	text_put_fraction(&text, FRACTION_ZERO);
	assert_string_equal(text_string(&text), "2250000/143 -1/2 -9223372036854775808 0");
	text_release(&text);
}

static void decimals_are_printed_rounded(void **state)
{
	(void)state;
	static const struct {
		int64_t numerator, denominator;
		unsigned places;
		const char *expected;
	} rows[] = {
		// 15 734.265 734 Hz and 59.940 059 94 Hz (SMPTE 170M-2004, 11.2 and 11.3, carried on).
		{2250000, 143, 6, "15734.265734"},
		{2250000, 143, 0, "15734"},
		{60000, 1001, 8, "59.94005994"},
		{60000, 1001, 3, "59.940"},
		{1, 2, 0, "1"},
		{-1, 2, 0, "-1"},
		{49, 100, 0, "0"},
		{-49, 100, 0, "0"},
		{5, 1000, 2, "0.01"},
		{-5, 1000, 2, "-0.01"},
		{-4, 1000, 2, "0.00"},
		{999, 1000, 2, "1.00"},
		{1, 3, 12, "0.333333333333"},
		{2, 3, 12, "0.666666666667"},
		{0, 1, 3, "0.000"},
		{INT64_MIN, 1, 12, "-9223372036854775808.000000000000"},
		{INT64_MAX, 2, 1, "4611686018427387903.5"},
		{1, INT64_MAX, 12, "0.000000000000"},
	};
	for (size_t index = 0; index < sizeof(rows) / sizeof(rows[0]); index++) {
		struct text text = {0};
		text_put_decimal(&text, ratio(rows[index].numerator, rows[index].denominator), rows[index].places);
		assert_string_equal(text_string(&text), rows[index].expected);
		text_release(&text);
	}
}

static void a_rounded_double_is_the_nearest(void **state)
{
	(void)state;
	assert_true(fraction_rounded(ratio(1, 4)) == 0.25);
	assert_true(fraction_rounded(ratio(-47, 10)) == -4.7);
	assert_true(fraction_rounded(fraction_whole(INT64_MIN)) == -9223372036854775808.0);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(rates_of_525_lines),
		cmocka_unit_test(subcarrier_of_625_lines),
		cmocka_unit_test(fractions_are_reduced),
		cmocka_unit_test(the_smallest_integer_is_no_trap),
		cmocka_unit_test(what_does_not_fit_leaves_the_result_alone),
		cmocka_unit_test(wide_intermediates_are_exact),
		cmocka_unit_test(a_result_may_be_an_operand),
		cmocka_unit_test(comparison_is_exact),
		cmocka_unit_test(rounding_has_a_name),
		cmocka_unit_test(common_divisors),
		cmocka_unit_test(decimals_are_read_exactly),
		cmocka_unit_test(what_is_no_decimal_is_refused),
		cmocka_unit_test(fractions_are_printed),
		cmocka_unit_test(decimals_are_printed_rounded),
		cmocka_unit_test(a_rounded_double_is_the_nearest),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
