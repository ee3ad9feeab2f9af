#include "plan/quantity.h"

#include <string.h>

struct unit {
	const char *name;
	enum dimension dimension;
	int64_t multiplier; // the unit is multiplier/divisor of the dimension's base (hertz, second, one)
	int64_t divisor;
};

// Hz, s and their prefixes: SI Brochure, 9th edition (2019), tables 4 and 7.
static const struct unit units[] = {
	{"Hz", DIMENSION_FREQUENCY, 1, 1},
	{"kHz", DIMENSION_FREQUENCY, 1000, 1},
	{"MHz", DIMENSION_FREQUENCY, 1000000, 1},
	{"s", DIMENSION_TIME, 1, 1},
	{"ms", DIMENSION_TIME, 1, 1000},
	{"us", DIMENSION_TIME, 1, 1000000},
	{"ns", DIMENSION_TIME, 1, 1000000000},
	{"tick", DIMENSION_TICKS, 1, 1},
	{"ticks", DIMENSION_TICKS, 1, 1},
	{"dot", DIMENSION_DOTS, 1, 1},
	{"dots", DIMENSION_DOTS, 1, 1},
	{"cell", DIMENSION_CELLS, 1, 1},
	{"cells", DIMENSION_CELLS, 1, 1},
	{"line", DIMENSION_LINES, 1, 1},
	{"lines", DIMENSION_LINES, 1, 1},
	{"bit", DIMENSION_BITS, 1, 1},
	{"bits", DIMENSION_BITS, 1, 1},
	{"cycle", DIMENSION_CYCLES, 1, 1},
	{"cycles", DIMENSION_CYCLES, 1, 1},
	{"pulse", DIMENSION_PULSES, 1, 1},
	{"pulses", DIMENSION_PULSES, 1, 1},
	{"ppm", DIMENSION_PPM, 1, 1},
};

static bool is_digit(char byte)
{
	return byte >= '0' && byte <= '9';
}

static const char *skip_digits(const char *text)
{
	while (is_digit(*text))
		text++;
	return text;
}

static const char *skip_spaces(const char *text)
{
	while (*text == ' ')
		text++;
	return text;
}

// Reads DIGITS[.DIGITS] at *text and moves *text past it.
static enum quantity_status read_number(const char **text, struct fraction *result)
{
	const char *const start = *text;
	const char *end = skip_digits(start);

	if (end == start)
		return QUANTITY_MALFORMED;
	if (*end == '.') {
		const char *const decimals = end + 1;
		end = skip_digits(decimals);
		if (end == decimals)
			return QUANTITY_MALFORMED;
	}
	if (!fraction_parse_decimal(start, (size_t)(end - start), result))
		return QUANTITY_OVERFLOW;
	*text = end;
	return QUANTITY_OK;
}

// Reads NUMBER[/NUMBER] at *text and moves *text past it and the spaces that follow.
static enum quantity_status read_ratio(const char **text, struct fraction *result)
{
	struct fraction divisor;
	enum quantity_status status = read_number(text, result);

	if (status != QUANTITY_OK)
		return status;
	*text = skip_spaces(*text);
	if (**text != '/')
		return QUANTITY_OK;
	*text = skip_spaces(*text + 1);
	status = read_number(text, &divisor);
	if (status != QUANTITY_OK)
		return status;
	if (divisor.numerator == 0)
		return QUANTITY_MALFORMED;
	*text = skip_spaces(*text);
	return fraction_divide(*result, divisor, result) ? QUANTITY_OK : QUANTITY_OVERFLOW;
}

// A word that somebody may have meant as a unit, as against a text of another form ("1 us + 2", "1 / / 2").
static bool looks_like_unit(const char *text)
{
	return !is_digit(*text) && strpbrk(text, " \t/.,+-*()") == NULL;
}

static enum quantity_status read_unit(const char *text, const struct unit **result)
{
	if (*text == '\0')
		return QUANTITY_NO_UNIT;
	for (size_t index = 0; index < sizeof units / sizeof units[0]; index++) {
		if (strcmp(text, units[index].name) == 0) {
			*result = &units[index];
			return QUANTITY_OK;
		}
	}
	return looks_like_unit(text) ? QUANTITY_UNKNOWN_UNIT : QUANTITY_MALFORMED;
}

enum quantity_status quantity_parse(const char *text, struct quantity *result)
{
	const bool negative = *text == '-';
	const struct unit *unit = NULL;
	struct fraction value, scale;
	enum quantity_status status;

	if (negative)
		text++;
	status = read_ratio(&text, &value);
	if (status != QUANTITY_OK)
		return status;
	status = read_unit(text, &unit);
	if (status != QUANTITY_OK)
		return status;
	if (!fraction_make(unit->multiplier, unit->divisor, &scale) || !fraction_multiply(value, scale, &value))
		return QUANTITY_OVERFLOW;
	if (negative)
		value.numerator = -value.numerator;
	result->value = value;
	result->dimension = unit->dimension;
	return QUANTITY_OK;
}

const char *quantity_status_words(enum quantity_status status)
{
	switch (status) {
	case QUANTITY_OK:
		return "the quantity is well-formed";
	case QUANTITY_MALFORMED:
		return "a quantity is a number or a fraction, then a unit";
	case QUANTITY_NO_UNIT:
		return "a number needs a unit";
	case QUANTITY_UNKNOWN_UNIT:
		return "there is no such unit";
	case QUANTITY_OVERFLOW:
		return "the number is too large, or has too many digits, to be kept exactly";
	}
	return "the quantity is wrong";
}

// "tick" has the plural right after it in the table.
static bool has_plural(size_t index)
{
	const size_t length = strlen(units[index].name);
	const struct unit *next = index + 1 < sizeof units / sizeof units[0] ? &units[index + 1] : NULL;
	return next != NULL && strncmp(next->name, units[index].name, length) == 0 && strcmp(next->name + length, "s") == 0;
}

size_t dimension_units(enum dimension dimension, const char **names)
{
	size_t count = 0;
	for (size_t index = 0; index < sizeof units / sizeof units[0]; index++)
		if (units[index].dimension == dimension && !has_plural(index))
			names[count++] = units[index].name;
	return count;
}

size_t dimension_all_units(enum dimension dimension, const char **names)
{
	size_t count = 0;
	for (size_t index = 0; index < sizeof units / sizeof units[0]; index++)
		if (units[index].dimension == dimension)
			names[count++] = units[index].name;
	return count;
}

static char lower_case(char byte)
{
	return byte >= 'A' && byte <= 'Z' ? (char)(byte - 'A' + 'a') : byte;
}

static bool equal_but_case(const char *left, const char *right)
{
	while (*left != '\0' && lower_case(*left) == lower_case(*right)) {
		left++;
		right++;
	}
	return *left == *right;
}

const char *unit_meant(const char *text, const char *const *names, size_t count)
{
	const char *unit = text + strcspn(text, "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz\xC2\xCE");
	if (strcmp(unit, "\xC2\xB5s") == 0 || strcmp(unit, "\xCE\xBCs") == 0) // U+00B5, micro sign, and U+03BC, Greek mu
		unit = "us";
	for (size_t index = 0; index < count; index++)
		if (equal_but_case(unit, names[index]))
			return names[index];
	return NULL;
}

// The value of a digit of any base up to 16, or 16 if the byte is none.
static int64_t digit_value(char byte)
{
	if (is_digit(byte))
		return byte - '0';
	if (byte >= 'a' && byte <= 'f')
		return byte - 'a' + 10;
	if (byte >= 'A' && byte <= 'F')
		return byte - 'A' + 10;
	return 16;
}

bool whole_number_parse(const char *text, int64_t *result)
{
	const bool hexadecimal = text[0] == '0' && text[1] == 'x';
	const int64_t base = hexadecimal ? 16 : 10;
	int64_t value = 0;

	if (hexadecimal)
		text += 2;
	if (*text == '\0')
		return false;
	for (; *text != '\0'; text++) {
		const int64_t digit = digit_value(*text);
		if (digit >= base || __builtin_mul_overflow(value, base, &value) ||
		    __builtin_add_overflow(value, digit, &value))
			return false;
	}
	*result = value;
	return true;
}

#define BIT_LIMIT 1000

// Reads decimal digits at *text, at most BIT_LIMIT, and moves *text past them.
static bool read_bit(const char **text, unsigned *result)
{
	unsigned value = 0;

	if (!is_digit(**text))
		return false;
	for (; is_digit(**text); (*text)++) {
		value = value * 10 + (unsigned)(**text - '0');
		if (value > BIT_LIMIT)
			return false;
	}
	*result = value;
	return true;
}

bool bit_range_parse(const char *text, unsigned *high, unsigned *low)
{
	unsigned first, last;

	if (!read_bit(&text, &first))
		return false;
	last = first;
	if (text[0] == '.' && text[1] == '.') {
		text += 2;
		if (!read_bit(&text, &last))
			return false;
	}
	if (*text != '\0' || first < last)
		return false;
	*high = first;
	*low = last;
	return true;
}

bool truth_parse(const char *text, bool *result)
{
	const bool is_true = strcmp(text, "true") == 0;

	if (!is_true && strcmp(text, "false") != 0)
		return false;
	*result = is_true;
	return true;
}
