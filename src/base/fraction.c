#include "base/fraction.h"

#include <assert.h>
#include <inttypes.h>

#include "base/text.h"

__extension__ typedef __int128 wide;
__extension__ typedef unsigned __int128 unsigned_wide;

static unsigned_wide wide_magnitude(wide value)
{
	return value < 0 ? 0 - (unsigned_wide)value : (unsigned_wide)value;
}

// Euclid's algorithm; a 128-bit division costs ten times a 64-bit one, so it goes down to 64 bits as soon as it can.
static unsigned_wide wide_common_divisor(unsigned_wide left, unsigned_wide right)
{
	while (right != 0 && (left > UINT64_MAX || right > UINT64_MAX)) {
		unsigned_wide rest = left % right;
		left = right;
		right = rest;
	}
	if (right == 0)
		return left;
	uint64_t larger = (uint64_t)left, smaller = (uint64_t)right;
	while (smaller != 0) {
		uint64_t rest = larger % smaller;
		larger = smaller;
		smaller = rest;
	}
	return larger;
}

// Both arguments stay below 2^127 in magnitude: the callers multiply 64-bit values, and add two such products at most.
static bool fraction_reduce(wide numerator, wide denominator, struct fraction *result)
{
	if (denominator == 0)
		return false;
	if (denominator < 0) {
		numerator = -numerator;
		denominator = -denominator;
	}
	wide divisor = (wide)wide_common_divisor(wide_magnitude(numerator), (unsigned_wide)denominator);
	numerator /= divisor;
	denominator /= divisor;
	if (numerator < INT64_MIN || numerator > INT64_MAX || denominator > INT64_MAX)
		return false;
	*result = (struct fraction){(int64_t)numerator, (int64_t)denominator};
	return true;
}

bool fraction_make(int64_t numerator, int64_t denominator, struct fraction *result)
{
	return fraction_reduce(numerator, denominator, result);
}

struct fraction fraction_whole(int64_t value)
{
	return (struct fraction){value, 1};
}

bool fraction_add(struct fraction left, struct fraction right, struct fraction *result)
{
	wide numerator = (wide)left.numerator * right.denominator + (wide)right.numerator * left.denominator;
	return fraction_reduce(numerator, (wide)left.denominator * right.denominator, result);
}

bool fraction_subtract(struct fraction left, struct fraction right, struct fraction *result)
{
	wide numerator = (wide)left.numerator * right.denominator - (wide)right.numerator * left.denominator;
	return fraction_reduce(numerator, (wide)left.denominator * right.denominator, result);
}

bool fraction_multiply(struct fraction left, struct fraction right, struct fraction *result)
{
	return fraction_reduce((wide)left.numerator * right.numerator, (wide)left.denominator * right.denominator, result);
}

bool fraction_divide(struct fraction left, struct fraction right, struct fraction *result)
{
	return fraction_reduce((wide)left.numerator * right.denominator, (wide)left.denominator * right.numerator, result);
}

int fraction_compare(struct fraction left, struct fraction right)
{
	wide left_part = (wide)left.numerator * right.denominator;
	wide right_part = (wide)right.numerator * left.denominator;
	return (left_part > right_part) - (left_part < right_part);
}

bool fraction_is_whole(struct fraction value)
{
	return value.denominator == 1;
}

// C's division goes towards zero; this one goes down. The divisor is positive.
static wide floor_divide(wide dividend, wide divisor)
{
	wide quotient = dividend / divisor;
	return dividend % divisor < 0 ? quotient - 1 : quotient;
}

int64_t fraction_floor(struct fraction value)
{
	return (int64_t)floor_divide(value.numerator, value.denominator);
}

int64_t fraction_nearest(struct fraction value)
{
	return (int64_t)floor_divide((wide)value.numerator * 2 + value.denominator, (wide)value.denominator * 2);
}

int64_t greatest_common_divisor(int64_t left, int64_t right)
{
	unsigned_wide divisor = wide_common_divisor(wide_magnitude(left), wide_magnitude(right));
	assert(divisor <= INT64_MAX);
	return (int64_t)divisor;
}

static bool is_digit(char byte)
{
	return byte >= '0' && byte <= '9';
}

static size_t count_digits(const char *bytes, size_t length)
{
	size_t count = 0;
	while (count < length && is_digit(bytes[count]))
		count++;
	return count;
}

static bool parse_whole(const char *digits, size_t count, int64_t *result)
{
	int64_t value = 0;
	for (size_t index = 0; index < count; index++) {
		int digit = digits[index] - '0';
		if (value > (INT64_MAX - digit) / 10)
			return false;
		value = value * 10 + digit;
	}
	*result = value;
	return true;
}

// From the last digit to the first: each step holds the fractional part of value * 10^n, whose denominator divides
// that of the value. So no step overflows unless the value itself does not fit, however many digits there are.
static bool parse_places(const char *digits, size_t count, struct fraction *result)
{
	struct fraction value = FRACTION_ZERO;
	for (size_t index = count; index-- > 0;) {
		wide numerator = (wide)value.denominator * (digits[index] - '0') + value.numerator;
		if (!fraction_reduce(numerator, (wide)value.denominator * 10, &value))
			return false;
	}
	*result = value;
	return true;
}

bool fraction_parse_decimal(const char *bytes, size_t length, struct fraction *result)
{
	size_t whole_digits = count_digits(bytes, length);
	size_t places = 0;
	if (whole_digits == 0)
		return false;
	if (whole_digits < length) {
		places = count_digits(bytes + whole_digits + 1, length - whole_digits - 1);
		if (bytes[whole_digits] != '.' || places == 0 || whole_digits + 1 + places != length)
			return false;
	}
	int64_t whole;
	struct fraction rest = FRACTION_ZERO;
	if (!parse_whole(bytes, whole_digits, &whole))
		return false;
	if (places > 0 && !parse_places(bytes + whole_digits + 1, places, &rest))
		return false;
	return fraction_add(fraction_whole(whole), rest, result);
}

void text_put_fraction(struct text *text, struct fraction value)
{
	text_printf(text, "%" PRId64, value.numerator);
	if (!fraction_is_whole(value))
		text_printf(text, "/%" PRId64, value.denominator);
}

void text_put_decimal(struct text *text, struct fraction value, unsigned places)
{
	assert(places <= 12);
	uint64_t scale = 1;
	for (unsigned place = 0; place < places; place++)
		scale *= 10;
	// At most 2^63 * 10^12 * 2, far below 2^127.
	unsigned_wide denominator = (unsigned_wide)value.denominator;
	unsigned_wide scaled = wide_magnitude(value.numerator) * scale;
	unsigned_wide rounded = (scaled * 2 + denominator) / (denominator * 2);
	const char *sign = value.numerator < 0 && rounded != 0 ? "-" : "";
	text_printf(text, "%s%" PRIu64, sign, (uint64_t)(rounded / scale));
	if (places > 0)
		text_printf(text, ".%0*" PRIu64, (int)places, (uint64_t)(rounded % scale));
}

double fraction_rounded(struct fraction value)
{
	return (double)value.numerator / (double)value.denominator;
}
