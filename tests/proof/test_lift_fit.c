// Expressions for sequences of values, and for grids of them.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <string.h>

#include "base/text.h"
#include "plan/expression.h"
#include "base/arena.h"
#include "proof/lift_fit.h"

#define MOST 64

static struct sequence sequence_of(const int64_t *values, size_t count, int64_t modulus, size_t *taken)
{
	struct sequence sequence = sequence_start(modulus);
	for (*taken = 0; *taken < count && sequence_takes(&sequence, values[*taken]); (*taken)++)
		sequence_add(&sequence, values[*taken]);
	return sequence;
}

// What the expression of a sequence is worth, by the language's own evaluation.
static void assert_worth(const char *text, const int64_t *values, size_t count, int64_t modulus)
{
	struct arena *arena = arena_create();
	const struct expression *expression;
	size_t offset;
	assert_int_equal(expression_compile(arena, text, &expression, &offset), EXPRESSION_OK);
	for (size_t index = 0; index < count; index++) {
		const int64_t variables[VARIABLE_COUNT] = {[VARIABLE_ROW] = (int64_t)index};
		int64_t value = -1;
		assert_int_equal(expression_value(expression, variables, &value), EXPRESSION_OK);
		assert_int_equal(value, modulus == 0 ? values[index] : values[index] % modulus);
	}
	arena_destroy(arena);
}

// The sequence takes so many of the values, and its expression is `wanted`.
static void assert_fits(const int64_t *values, size_t count, int64_t modulus, size_t wanted_taken, const char *wanted)
{
	size_t taken;
	const struct sequence sequence = sequence_of(values, count, modulus, &taken);
	struct sequence none = sequence_start(0);
	struct text text = {0};
	sequence_add(&none, 0);
	assert_int_equal(taken, wanted_taken);
	sequences_put(&text, &sequence, "row", &none, "col", modulus);
	assert_string_equal(text_string(&text), wanted);
	assert_worth(text_string(&text), values, taken, modulus);
	for (size_t index = 0; index < taken; index++)
		assert_int_equal((sequence_at(&sequence, (uint32_t)index) - values[index]) % (modulus == 0 ? INT64_MAX : modulus), 0);
	text_release(&text);
}

#define FITS(taken, wanted, ...)                                                                                 \
	do {                                                                                                         \
		const int64_t values[] = {__VA_ARGS__};                                                                  \
		assert_fits(values, sizeof values / sizeof *values, 0, taken, wanted);                                   \
	} while (0)

static void straight_sequences(void **test)
{
	(void)test;
	FITS(1, "7", 7);
	FITS(4, "0", 0, 0, 0, 0);
	FITS(4, "5", 5, 5, 5, 5);
	FITS(4, "row", 0, 1, 2, 3);
	FITS(4, "3*row", 0, 3, 6, 9);
	FITS(3, "0x100 + 80*row", 256, 336, 416);
	FITS(3, "9 - 2*row", 9, 7, 5);
	FITS(2, "255 - 255*row", 255, 0);
}

static void broken_sequences(void **test)
{
	(void)test;
	FITS(9, "row%3", 0, 1, 2, 0, 1, 2, 0, 1, 2);
	FITS(9, "row/3", 0, 0, 0, 1, 1, 1, 2, 2, 2);
	FITS(8, "5 + 40*(row/2)", 5, 5, 45, 45, 85, 85, 125, 125);
	FITS(9, "100*(row/3) + 7*(row%3)", 0, 7, 14, 100, 107, 114, 200, 207, 214);
	// Begun in the middle of a period.
	FITS(8, "(row + 1)%3", 1, 2, 0, 1, 2, 0, 1, 2);
	FITS(7, "(row + 1)/3", 0, 0, 1, 1, 1, 2, 2);
	// One jump: as late as it may be, or as early.
	FITS(5, "row/4", 0, 0, 0, 0, 1);
	FITS(6, "(row + 2)/4", 0, 0, 1, 1, 1, 1);
}

static void sequences_that_end(void **test)
{
	(void)test;
	FITS(6, "row/3", 0, 0, 0, 1, 1, 1, 5);       // another jump
	FITS(8, "row/3", 0, 0, 0, 1, 1, 1, 2, 2, 3); // too early
	FITS(7, "row/3", 0, 0, 0, 1, 1, 1, 2, 3);
	FITS(9, "row/3", 0, 0, 0, 1, 1, 1, 2, 2, 2, 2); // too late
	FITS(4, "row/3", 0, 0, 0, 1, 2);             // the second part is shorter than the first
}

static void modular_sequences(void **test)
{
	(void)test;
	const int64_t wrapping[] = {14, 15, 0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12, 13, 14, 15, 0};
	assert_fits(wrapping, 19, 16, 19, "(14 + row) % 16");
	const int64_t steps[] = {0, 80 % 64, 160 % 64, 240 % 64, 320 % 64, 400 % 64};
	assert_fits(steps, 6, 64, 6, "(16*row) % 64");
	const int64_t down[] = {1, 0, 7, 6, 5};
	assert_fits(down, 5, 8, 5, "(1 - row) % 8");
}

static void grids(void **test)
{
	(void)test;
	struct sequence rows = sequence_start(0), columns = sequence_start(0);
	struct text text = {0};
	for (int64_t row = 0; row < 12; row++)
		sequence_add(&rows, 0x400 + 80 * (row / 4));
	for (int64_t column = 0; column < 6; column++)
		sequence_add(&columns, 0x400 + column);
	sequences_put(&text, &rows, "row", &columns, "col", 0);
	assert_string_equal(text_string(&text), "0x400 + 80*(row/4) + col");
	text_release(&text);
}

// Random forms are found again, up to what cannot be told apart: the values are the same.
static void random_sequences(void **test)
{
	(void)test;
	uint64_t seed = 88172645463325252u; // Marsaglia's xorshift64 (2003)
	for (int round = 0; round < 20000; round++) {
		int64_t values[MOST];
		uint64_t draws[5];
		for (size_t index = 0; index < 5; index++) {
			seed ^= seed << 13;
			seed ^= seed >> 7;
			seed ^= seed << 17;
			draws[index] = seed >> 33;
		}
		const int64_t period = 2 + (int64_t)(draws[0] % 9), phase = (int64_t)(draws[1] % (uint64_t)period);
		const int64_t a = (int64_t)(draws[2] % 200), b = (int64_t)(draws[3] % 20), c = (int64_t)(draws[4] % 1000);
		for (int64_t index = 0; index < MOST; index++)
			values[index] = c + a * ((index + phase) / period) + b * ((index + phase) % period);
		if (phase == period - 1) // the first step is the jump: it takes a part of its own
			continue;
		size_t taken;
		const struct sequence sequence = sequence_of(values, MOST, 0, &taken);
		struct sequence none = sequence_start(0);
		struct text text = {0};
		sequence_add(&none, 0);
		assert_int_equal(taken, MOST);
		sequences_put(&text, &sequence, "row", &none, "col", 0);
		assert_worth(text_string(&text), values, MOST, 0);
		text_release(&text);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(straight_sequences), cmocka_unit_test(broken_sequences), cmocka_unit_test(sequences_that_end),
		cmocka_unit_test(modular_sequences),  cmocka_unit_test(grids),            cmocka_unit_test(random_sequences),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
