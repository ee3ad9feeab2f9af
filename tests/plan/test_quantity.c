#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "plan/quantity.h"

#define COUNT(array) (sizeof(array) / sizeof((array)[0]))

struct good_quantity {
	const char *text;
	enum dimension dimension;
	int64_t numerator;
	int64_t denominator;
};

// Prefixes: SI Brochure, 9th edition (2019), table 7: k 10^3, M 10^6, m 10^-3, u (micro) 10^-6, n 10^-9.
static const struct good_quantity good_quantities[] = {
	{"60 Hz", DIMENSION_FREQUENCY, 60, 1},
	{"0.5 kHz", DIMENSION_FREQUENCY, 500, 1},
	{"315/22 MHz", DIMENSION_FREQUENCY, 157500000, 11},  // 315,000,000/22, reduced by 2
	{"315 / 22 MHz", DIMENSION_FREQUENCY, 157500000, 11},
	{"315/22MHz", DIMENSION_FREQUENCY, 157500000, 11},
	{"315/  22    MHz", DIMENSION_FREQUENCY, 157500000, 11},
	{"17.734475 MHz", DIMENSION_FREQUENCY, 17734475, 1},
	{"4.43361875 MHz", DIMENSION_FREQUENCY, 17734475, 4}, // 4,433,618.75
	{"60000/1001 Hz", DIMENSION_FREQUENCY, 60000, 1001},
	{"2 s", DIMENSION_TIME, 2, 1},
	{"1.5/2.5 ms", DIMENSION_TIME, 3, 5000},              // 0.6 ms
	{"64us", DIMENSION_TIME, 1, 15625},                   // 64/1,000,000
	{"4.7 us", DIMENSION_TIME, 47, 10000000},
	{"4.70000000000000000000000000 us", DIMENSION_TIME, 47, 10000000},
	{"150 ns", DIMENSION_TIME, 3, 20000000},
	{"0.000000001 ns", DIMENSION_TIME, 1, 1000000000000000000},
	{"-4.7 us", DIMENSION_TIME, -47, 10000000},
	{"-1/3 s", DIMENSION_TIME, -1, 3},
	{"1 tick", DIMENSION_TICKS, 1, 1},
	{"910 ticks", DIMENSION_TICKS, 910, 1},
	{"2.5 ticks", DIMENSION_TICKS, 5, 2},
	{"0 ticks", DIMENSION_TICKS, 0, 1},
	{"-0 ticks", DIMENSION_TICKS, 0, 1},
	{"9223372036854775807 ticks", DIMENSION_TICKS, INT64_MAX, 1},
	{"-9223372036854775807 ticks", DIMENSION_TICKS, -INT64_MAX, 1},
	{"1 dot", DIMENSION_DOTS, 1, 1},
	{"455/2 cycles", DIMENSION_CYCLES, 455, 2},
	{"6 pulses", DIMENSION_PULSES, 6, 1},
	{"1 pulse", DIMENSION_PULSES, 1, 1},
	{"009 dots", DIMENSION_DOTS, 9, 1},
	{"1 cell", DIMENSION_CELLS, 1, 1},
	{"3 cells", DIMENSION_CELLS, 3, 1},
	{"1 line", DIMENSION_LINES, 1, 1},
	{"2 lines", DIMENSION_LINES, 2, 1},
	{"1 bit", DIMENSION_BITS, 1, 1},
	{"16 bits", DIMENSION_BITS, 16, 1},
	{"50 ppm", DIMENSION_PPM, 50, 1},
};

struct bad_quantity {
	const char *text;
	enum quantity_status status;
};

static const struct bad_quantity bad_quantities[] = {
	{"", QUANTITY_MALFORMED},
	{" ", QUANTITY_MALFORMED},
	{"us", QUANTITY_MALFORMED},
	{"-", QUANTITY_MALFORMED},
	{"- 4 us", QUANTITY_MALFORMED},
	{"--4 us", QUANTITY_MALFORMED},
	{"+4 us", QUANTITY_MALFORMED},
	{" 4 us", QUANTITY_MALFORMED},
	{"4 us ", QUANTITY_MALFORMED},
	{"4\tus", QUANTITY_MALFORMED},
	{".5 us", QUANTITY_MALFORMED},
	{"5. us", QUANTITY_MALFORMED},
	{"4.7.1 us", QUANTITY_MALFORMED},
	{"4,7us", QUANTITY_MALFORMED},
	{"1/ us", QUANTITY_MALFORMED},
	{"/2 us", QUANTITY_MALFORMED},
	{"1/-2 us", QUANTITY_MALFORMED},
	{"1//2 us", QUANTITY_MALFORMED},
	{"1/2/3 us", QUANTITY_MALFORMED},
	{"1/0 us", QUANTITY_MALFORMED},
	{"1/0.00 us", QUANTITY_MALFORMED},
	{"1e3 Hz", QUANTITY_MALFORMED},
	{"0x10 ticks", QUANTITY_MALFORMED},
	{"4 us us", QUANTITY_MALFORMED},
	{"4.7 us +- 0.3 us", QUANTITY_MALFORMED},
	{"master / 4", QUANTITY_MALFORMED},
	{"5", QUANTITY_NO_UNIT},
	{"-5", QUANTITY_NO_UNIT},
	{"4.7", QUANTITY_NO_UNIT},
	{"315/22", QUANTITY_NO_UNIT},
	{"5 ", QUANTITY_NO_UNIT},
	{"5 fathoms", QUANTITY_UNKNOWN_UNIT},
	{"5 mhz", QUANTITY_UNKNOWN_UNIT},
	{"5 mHz", QUANTITY_UNKNOWN_UNIT},
	{"5 KHz", QUANTITY_UNKNOWN_UNIT},
	{"5 Us", QUANTITY_UNKNOWN_UNIT},
	{"5 tickss", QUANTITY_UNKNOWN_UNIT},
	{"5 tic", QUANTITY_UNKNOWN_UNIT},
	{"4.7 \xC2\xB5s", QUANTITY_UNKNOWN_UNIT}, // U+00B5, micro sign
	{"50 %", QUANTITY_UNKNOWN_UNIT},
	{"9223372036854775808 ticks", QUANTITY_OVERFLOW},
	{"9223372036855 MHz", QUANTITY_OVERFLOW},            // 9,223,372,036,855 * 10^6 > 2^63 - 1
	{"0.0000000001 ns", QUANTITY_OVERFLOW},              // 10^-19
	{"1/9223372036854775807 ns", QUANTITY_OVERFLOW},
	{"99999999999999999999999999999999 s", QUANTITY_OVERFLOW},
	{"1/99999999999999999999999999999999 s", QUANTITY_OVERFLOW},
};

static void reads_quantities(void **state)
{
	(void)state;
	for (size_t index = 0; index < COUNT(good_quantities); index++) {
		const struct good_quantity *const expected = &good_quantities[index];
		struct quantity found = {0};
		if (quantity_parse(expected->text, &found) != QUANTITY_OK)
			fail_msg("'%s' is refused", expected->text);
		if (found.value.numerator != expected->numerator || found.value.denominator != expected->denominator)
			fail_msg("'%s' is read as %lld/%lld", expected->text, (long long)found.value.numerator,
			         (long long)found.value.denominator);
		assert_int_equal(found.dimension, expected->dimension);
	}
}

static void refuses_quantities(void **state)
{
	(void)state;
	for (size_t index = 0; index < COUNT(bad_quantities); index++) {
		struct quantity found = {.value = {7, 3}, .dimension = DIMENSION_PPM};
		const enum quantity_status status = quantity_parse(bad_quantities[index].text, &found);
		if (status != bad_quantities[index].status)
			fail_msg("'%s' has status %d", bad_quantities[index].text, (int)status);
		assert_true(found.value.numerator == 7 && found.value.denominator == 3);
		assert_int_equal(found.dimension, DIMENSION_PPM);
	}
}

static void assert_units(enum dimension dimension, const char *const *wanted, size_t count)
{
	const char *names[UNITS_LIMIT];
	assert_int_equal(dimension_units(dimension, names), count);
	for (size_t index = 0; index < count; index++)
		assert_string_equal(names[index], wanted[index]);
}

static void names_units(void **state)
{
	(void)state;
	assert_units(DIMENSION_FREQUENCY, (const char *const[]){"Hz", "kHz", "MHz"}, 3);
	assert_units(DIMENSION_TIME, (const char *const[]){"s", "ms", "us", "ns"}, 4);
	assert_units(DIMENSION_TICKS, (const char *const[]){"ticks"}, 1);
	assert_units(DIMENSION_DOTS, (const char *const[]){"dots"}, 1);
	assert_units(DIMENSION_CELLS, (const char *const[]){"cells"}, 1);
	assert_units(DIMENSION_LINES, (const char *const[]){"lines"}, 1);
	assert_units(DIMENSION_BITS, (const char *const[]){"bits"}, 1);
	assert_units(DIMENSION_CYCLES, (const char *const[]){"cycles"}, 1);
	assert_units(DIMENSION_PULSES, (const char *const[]){"pulses"}, 1);
	assert_units(DIMENSION_PPM, (const char *const[]){"ppm"}, 1);
}

static void knows_what_unit_is_meant(void **state)
{
	(void)state;
	static const char *const times[] = {"s", "ms", "us", "ns"};
	static const char *const frequencies[] = {"Hz", "kHz", "MHz"};
	assert_string_equal(unit_meant("4.7 \xC2\xB5s", times, 4), "us");
	assert_string_equal(unit_meant("4.7\xCE\xBCs", times, 4), "us");
	assert_string_equal(unit_meant("4.7 US", times, 4), "us");
	assert_string_equal(unit_meant("315/22 MHZ", frequencies, 3), "MHz");
	assert_string_equal(unit_meant("1 khz", frequencies, 3), "kHz");
	assert_null(unit_meant("4.7 usec", times, 4));
	assert_null(unit_meant("4.7 m", times, 4));
	assert_null(unit_meant("4.7", times, 4));
	assert_null(unit_meant("4.7 \xC2\xB5s", frequencies, 3));
}

static void names_statuses(void **state)
{
	(void)state;
	assert_string_equal(quantity_status_words(QUANTITY_NO_UNIT), "a number needs a unit");
	assert_string_equal(quantity_status_words(QUANTITY_UNKNOWN_UNIT), "there is no such unit");
}

struct good_number {
	const char *text;
	int64_t value;
};

static const struct good_number good_numbers[] = {
	{"0", 0}, {"7", 7}, {"007", 7}, {"1000000", 1000000}, {"0x0", 0}, {"0x8000", 32768}, {"0xfF", 255},
	{"9223372036854775807", INT64_MAX}, {"0x7fffffffffffffff", INT64_MAX}, {"0x00000000000000000001", 1},
};

static const char *const bad_numbers[] = {
	"", "0x", "0X10", "x10", "-1", "+1", " 1", "1 ", "1.0", "1e3", "12a", "0xg", "1_000", "0b1", "1,000",
	"9223372036854775808", "0x8000000000000000", "99999999999999999999999", "true",
};

static void reads_whole_numbers(void **state)
{
	(void)state;
	for (size_t index = 0; index < COUNT(good_numbers); index++) {
		int64_t value = -1;
		if (!whole_number_parse(good_numbers[index].text, &value) || value != good_numbers[index].value)
			fail_msg("'%s' is read as %lld", good_numbers[index].text, (long long)value);
	}
	for (size_t index = 0; index < COUNT(bad_numbers); index++) {
		int64_t value = -1;
		if (whole_number_parse(bad_numbers[index], &value) || value != -1)
			fail_msg("'%s' is not refused", bad_numbers[index]);
	}
}

struct good_range {
	const char *text;
	unsigned high;
	unsigned low;
};

static const struct good_range good_ranges[] = {
	{"0", 0, 0}, {"15", 15, 15}, {"14..11", 14, 11}, {"11..11", 11, 11}, {"1000..0", 1000, 0}, {"1000", 1000, 1000},
};

static const char *const bad_ranges[] = {
	"", "..", "11..14", "1001", "1001..0", "14.11", "14...11", "14..", "..11", "-1", "14..-1", "a", "14 .. 11", " 1",
	"0x3", "14..11 ", "14..11..3", "99999999999999999999..0", "4294967296",
};

static void reads_bit_ranges(void **state)
{
	(void)state;
	for (size_t index = 0; index < COUNT(good_ranges); index++) {
		unsigned high = 77, low = 77;
		if (!bit_range_parse(good_ranges[index].text, &high, &low))
			fail_msg("'%s' is refused", good_ranges[index].text);
		assert_int_equal(high, good_ranges[index].high);
		assert_int_equal(low, good_ranges[index].low);
	}
	for (size_t index = 0; index < COUNT(bad_ranges); index++) {
		unsigned high = 77, low = 77;
		if (bit_range_parse(bad_ranges[index], &high, &low) || high != 77 || low != 77)
			fail_msg("'%s' is not refused", bad_ranges[index]);
	}
}

static const char *const no_truths[] = {
	"", "True", "TRUE", "yes", "no", "on", "off", "1", "0", "true ", " true", "truee", "tru", "y",
};

static void reads_truth_values(void **state)
{
	bool value = false;

	(void)state;
	assert_true(truth_parse("true", &value));
	assert_true(value);
	assert_true(truth_parse("false", &value));
	assert_false(value);
	for (size_t index = 0; index < COUNT(no_truths); index++) {
		value = true;
		if (truth_parse(no_truths[index], &value) || !value)
			fail_msg("'%s' is not refused", no_truths[index]);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(reads_quantities),
		cmocka_unit_test(refuses_quantities),
		cmocka_unit_test(names_units),
		cmocka_unit_test(knows_what_unit_is_meant),
		cmocka_unit_test(names_statuses),
		cmocka_unit_test(reads_whole_numbers),
		cmocka_unit_test(reads_bit_ranges),
		cmocka_unit_test(reads_truth_values),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
