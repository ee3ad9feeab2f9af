// Figures in words and in JSON; expected values are worked out by hand.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdlib.h>
#include <string.h>

#include "base/text.h"
#include "plan/plan.h"
#include "view/figures.h"

// Asserts what was put, and releases it.
static void assert_text(struct text *text, const char *expected)
{
	assert_false(text->failed);
	assert_string_equal(text_string(text), expected);
	text_release(text);
}

static void assert_rounded(struct fraction value, unsigned places, const char *expected)
{
	struct text text = {0};
	text_put_rounded(&text, value, places);
	assert_text(&text, expected);
}

static void decimals_round_and_lose_zeros_at_their_end(void **state)
{
	(void)state;
	assert_rounded((struct fraction){455, 2}, 3, "227.5");
	assert_rounded((struct fraction){228, 1}, 3, "228");
	assert_rounded((struct fraction){100, 1}, 0, "100");
	assert_rounded((struct fraction){50, 101}, 3, "0.495"); // 0.49504…
	assert_rounded((struct fraction){2, 3}, 6, "0.666667");
	assert_rounded((struct fraction){9999, 10000}, 3, "1");
	assert_rounded((struct fraction){0, 1}, 3, "0");
}

static void halves_round_away_from_zero(void **state)
{
	(void)state;
	assert_rounded((struct fraction){1, 2}, 0, "1");
	assert_rounded((struct fraction){-1, 2}, 0, "-1");
	assert_rounded((struct fraction){-5, 4}, 1, "-1.3");
}

static void a_small_value_is_never_put_as_zero(void **state)
{
	(void)state;
	assert_rounded((struct fraction){1, 25000}, 3, "0.00004");
	assert_rounded((struct fraction){-1, 3000000}, 0, "-0.0000003");
	assert_rounded((struct fraction){1, 10000000000}, 3, "0"); // below what 9 places show
}

// 2^63 - 1 and its opposite; the most digits that there are.
static void large_values_keep_all_digits(void **state)
{
	(void)state;
	assert_rounded((struct fraction){INT64_MAX, 1}, 9, "9223372036854775807");
	assert_rounded((struct fraction){INT64_MIN, 1}, 9, "-9223372036854775808");
	assert_rounded((struct fraction){INT64_MAX, 2}, 3, "4611686018427387903.5");
	struct text text = {0};
	text_put_time_in(&text, (struct fraction){INT64_MAX, 1}, UNIT_NANOSECONDS);
	assert_text(&text, "9223372036854775807000000000 ns");
}

static void assert_time(struct fraction seconds, const char *expected)
{
	struct text text = {0};
	text_put_time(&text, seconds);
	assert_text(&text, expected);
}

static void times_choose_the_unit_in_which_they_are_at_least_one(void **state)
{
	(void)state;
	assert_time((struct fraction){5, 2}, "2.5 s");
	assert_time((struct fraction){1, 1}, "1 s");
	assert_time((struct fraction){27379, 1640625}, "16.688 ms"); // 238944 ticks of 315/22 MHz
	assert_time((struct fraction){1, 1000}, "1 ms");
	assert_time((struct fraction){999, 1000000}, "999 us");
	assert_time((struct fraction){-47, 10000000}, "-4.7 us");
	assert_time((struct fraction){1, 1000000}, "1 us");
	assert_time((struct fraction){11, 17500000}, "628.571 ns"); // 9 ticks of 315/22 MHz
	assert_time((struct fraction){1, 3000000000}, "0.333 ns");
	assert_time((struct fraction){0, 1}, "0 ns");
}

static void times_stand_in_a_given_unit(void **state)
{
	(void)state;
	struct text text = {0};
	text_put_time_in(&text, (struct fraction){3, 2000000}, UNIT_NANOSECONDS);
	assert_text(&text, "1500 ns");
	text_put_time_number(&text, (struct fraction){3, 2000000}, UNIT_MILLISECONDS);
	assert_text(&text, "0.002"); // 0.0015
	text_put_time_number(&text, (struct fraction){3, 2000000}, UNIT_SECONDS);
	assert_text(&text, "0.000002"); // 0.0000015
}

// 315/22 MHz: 63 ticks take 63 × 22/315000000 s = 11/2500000 s.
static void ticks_become_seconds(void **state)
{
	(void)state;
	const struct clock clock = {.master_hz = {157500000, 11}};
	struct fraction seconds = {7, 1};
	assert_true(seconds_of_ticks(&clock, 63, &seconds));
	assert_int_equal(seconds.numerator, 11);
	assert_int_equal(seconds.denominator, 2500000);
}

// 2^62 ticks at 1/4 Hz are 2^64 s.
static void seconds_that_do_not_fit_are_refused(void **state)
{
	(void)state;
	const struct clock clock = {.master_hz = {1, 4}};
	struct fraction seconds = {7, 1};
	assert_false(seconds_of_ticks(&clock, (int64_t)1 << 62, &seconds));
	assert_int_equal(seconds.numerator, 7);
}

// 4 tick periods a cycle: 910 ticks are 455/2 cycles.
static void ticks_become_cycles_of_a_subcarrier(void **state)
{
	(void)state;
	struct clock clock = {.master_hz = {157500000, 11}, .has_subcarrier = true, .subcarrier_hz = {39375000, 11}};
	struct fraction cycles = {7, 1};
	assert_true(cycles_of_ticks(&clock, 910, &cycles));
	assert_int_equal(cycles.numerator, 455);
	assert_int_equal(cycles.denominator, 2);
	clock.subcarrier_hz = (struct fraction){INT64_MAX, 1}; // times 910 ticks
	assert_false(cycles_of_ticks(&clock, 910, &cycles));
	assert_int_equal(cycles.numerator, 455);
	clock.has_subcarrier = false;
	assert_false(cycles_of_ticks(&clock, 1, &cycles));
	assert_int_equal(cycles.numerator, 455);
}

static void exact_values_have_their_decimal_beside_them(void **state)
{
	(void)state;
	struct text text = {0};
	text_put_exact(&text, (struct fraction){455, 2});
	assert_text(&text, "455/2 (227.5)");
	text_put_exact(&text, (struct fraction){709379, 2500});
	assert_text(&text, "709379/2500 (283.7516)");
	text_put_exact(&text, (struct fraction){228, 1});
	assert_text(&text, "228");
}

static void counts_agree_with_their_noun(void **state)
{
	(void)state;
	struct text text = {0};
	text_put_count(&text, 1, "cell", "cells");
	assert_text(&text, "1 cell");
	text_put_count(&text, 0, "cell", "cells");
	assert_text(&text, "0 cells");
	text_put_count(&text, UINT64_MAX, "cell", "cells");
	assert_text(&text, "18446744073709551615 cells");
}

static void assert_hex(uint64_t value, unsigned bits, const char *expected)
{
	struct text text = {0};
	text_put_hex(&text, value, bits);
	assert_text(&text, expected);
}

static void hexadecimal_has_a_digit_for_every_four_bits(void **state)
{
	(void)state;
	assert_hex(0xF, 8, "0x0F");
	assert_hex(1, 1, "0x1");
	assert_hex(0x1ABCD, 17, "0x1ABCD");
	assert_hex(0x8000, 16, "0x8000");
	assert_hex(UINT64_MAX, 64, "0xFFFFFFFFFFFFFFFF");
}

// Nine words of 10 characters with their gaps are 98 characters, eight are 87.
static void words_wrap_at_a_hundred_characters(void **state)
{
	(void)state;
	struct text text = {0};
	const char *words = "0123456789 0123456789 0123456789 0123456789 0123456789 0123456789 0123456789 0123456789 0123456789";
	text_put_wrapped(&text, words, 10, 4);
	assert_text(&text, "0123456789 0123456789 0123456789 0123456789 0123456789 0123456789 0123456789 0123456789\n"
	                   "    0123456789");
	// After 2 characters the last word ends at character 100, after 3 it would at 101.
	text_put_wrapped(&text, words, 2, 4);
	assert_text(&text, words);
	text_put_wrapped(&text, words, 3, 4);
	assert_text(&text, "0123456789 0123456789 0123456789 0123456789 0123456789 0123456789 0123456789 0123456789\n"
	                   "    0123456789");
}

static void a_word_too_long_for_a_line_stands_whole(void **state)
{
	(void)state;
	struct text text = {0};
	char word[121];
	memset(word, 'x', 120);
	word[120] = '\0';
	text_put_wrapped(&text, word, 10, 4);
	assert_text(&text, word);
}

// 49 letters of two bytes each, a space and 50 such letters: 100 characters.
static void wrapping_counts_characters_and_not_bytes(void **state)
{
	(void)state;
	struct text text = {0};
	char words[256] = "";
	for (size_t index = 0; index < 99; index++)
		strcat(words, index == 49 ? " \xC3\xA9" : "\xC3\xA9");
	text_put_wrapped(&text, words, 0, 0);
	assert_text(&text, words);
}

static void spaces_inside_a_name_are_kept(void **state)
{
	(void)state;
	struct text text = {0};
	text_put_wrapped(&text, "low  tide ", 0, 0);
	assert_text(&text, "low  tide");
	text_put_wrapped(&text, "", 0, 0);
	assert_text(&text, "");
}

static void assert_real(json_t *number, double expected)
{
	assert_true(json_is_real(number));
	assert_true(json_real_value(number) == expected);
	json_decref(number);
}

// The double nearest to the decimal is the one that the compiler makes of its digits.
static void numbers_have_six_decimals(void **state)
{
	(void)state;
	assert_real(json_rounded((struct fraction){2, 3}), 0.666667);
	assert_real(json_rounded((struct fraction){-2, 3}), -0.666667);
	assert_real(json_rounded((struct fraction){455, 2}), 227.5);
	assert_real(json_rounded((struct fraction){1, 3000000}), 0.0);
	assert_real(json_time((struct fraction){11, 17500000}, UNIT_NANOSECONDS), 628.571429);
	assert_real(json_time((struct fraction){27379, 1640625}, UNIT_MILLISECONDS), 16.688152);
	assert_real(json_time((struct fraction){27379, 1640625}, UNIT_MICROSECONDS), 16688.152381);
	assert_real(json_time((struct fraction){27379, 1640625}, UNIT_SECONDS), 0.016688);
}

static void fractions_are_exact_strings(void **state)
{
	(void)state;
	json_t *string = json_fraction((struct fraction){455, 2});
	assert_string_equal(json_string_value(string), "455/2");
	json_decref(string);
	string = json_fraction((struct fraction){-240240, 1});
	assert_string_equal(json_string_value(string), "-240240");
	json_decref(string);
}

static void assert_dump(json_t *value, const char *expected)
{
	char *dump = json_dumps(value, JSON_COMPACT | JSON_REAL_PRECISION(12));
	assert_non_null(dump);
	assert_string_equal(dump, expected);
	free(dump);
	json_decref(value);
}

static void exact_and_rounded_stand_side_by_side(void **state)
{
	(void)state;
	json_t *object = json_object();
	json_put_fraction(&object, "cycles", (struct fraction){455, 2});
	json_put_time(&object, "cell", (struct fraction){11, 17500000}, UNIT_NANOSECONDS);
	json_put_time(&object, "wait", (struct fraction){1, 4}, UNIT_SECONDS);
	assert_dump(object, "{\"cycles\":\"455/2\",\"cycles_rounded\":227.5,\"cell_s\":\"11/17500000\",\"cell_ns\":628.571429,"
	                    "\"wait_s\":\"1/4\",\"wait_s_rounded\":0.25}");
}

static void arrays_grow(void **state)
{
	(void)state;
	json_t *array = json_array();
	json_append(&array, json_integer(5));
	json_append(&array, json_string("tide"));
	assert_dump(array, "[5,\"tide\"]");
}

// A NULL value says that memory was out when it was made.
static void a_missing_value_gives_up_the_whole(void **state)
{
	(void)state;
	json_t *object = json_object(), *array = json_array();
	json_put(&object, "low", NULL);
	assert_null(object);
	json_put(&object, "high", json_integer(4));
	assert_null(object);
	json_append(&array, NULL);
	assert_null(array);
	json_append(&array, json_integer(4));
	assert_null(array);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(decimals_round_and_lose_zeros_at_their_end),
		cmocka_unit_test(halves_round_away_from_zero),
		cmocka_unit_test(a_small_value_is_never_put_as_zero),
		cmocka_unit_test(large_values_keep_all_digits),
		cmocka_unit_test(times_choose_the_unit_in_which_they_are_at_least_one),
		cmocka_unit_test(times_stand_in_a_given_unit),
		cmocka_unit_test(ticks_become_seconds),
		cmocka_unit_test(seconds_that_do_not_fit_are_refused),
		cmocka_unit_test(ticks_become_cycles_of_a_subcarrier),
		cmocka_unit_test(exact_values_have_their_decimal_beside_them),
		cmocka_unit_test(counts_agree_with_their_noun),
		cmocka_unit_test(hexadecimal_has_a_digit_for_every_four_bits),
		cmocka_unit_test(words_wrap_at_a_hundred_characters),
		cmocka_unit_test(a_word_too_long_for_a_line_stands_whole),
		cmocka_unit_test(wrapping_counts_characters_and_not_bytes),
		cmocka_unit_test(spaces_inside_a_name_are_kept),
		cmocka_unit_test(numbers_have_six_decimals),
		cmocka_unit_test(fractions_are_exact_strings),
		cmocka_unit_test(exact_and_rounded_stand_side_by_side),
		cmocka_unit_test(arrays_grow),
		cmocka_unit_test(a_missing_value_gives_up_the_whole),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
