// Exact fractions of 64-bit integers, always reduced, denominator > 0. Intermediates are 128 bits wide;
// an operation whose result does not fit returns false and leaves *result as it was.
// No floating point decides anything in this program; fraction_decimal only prints.
#ifndef SCANLATCH_BASE_FRACTION_H
#define SCANLATCH_BASE_FRACTION_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

struct text;

struct fraction {
	int64_t numerator;
	int64_t denominator; // > 0; numerator and denominator have no common factor
};

#define FRACTION_ZERO ((struct fraction){0, 1})

// numerator/denominator, reduced. False if denominator is 0 or the result does not fit.
bool fraction_make(int64_t numerator, int64_t denominator, struct fraction *result);

// A whole number. Cannot fail.
struct fraction fraction_whole(int64_t value);

bool fraction_add(struct fraction left, struct fraction right, struct fraction *result);
bool fraction_subtract(struct fraction left, struct fraction right, struct fraction *result);
bool fraction_multiply(struct fraction left, struct fraction right, struct fraction *result);
// False if right is 0 too.
bool fraction_divide(struct fraction left, struct fraction right, struct fraction *result);

// -1, 0 or 1, as left is less than, equal to or greater than right. Cannot fail.
int fraction_compare(struct fraction left, struct fraction right);

bool fraction_is_whole(struct fraction value);

// The largest whole number that is not above value. Cannot fail.
int64_t fraction_floor(struct fraction value);

// The nearest whole number, halves up (towards positive infinity). Cannot fail.
int64_t fraction_nearest(struct fraction value);

// Greatest common divisor of the absolute values; gcd(0, 0) is 0. Cannot fail (INT64_MIN is not allowed).
int64_t greatest_common_divisor(int64_t left, int64_t right);

// Reads DIGITS[.DIGITS], an unsigned decimal number without exponent, all `length` bytes, exactly.
// False when the form is wrong or the value does not fit.
bool fraction_parse_decimal(const char *bytes, size_t length, struct fraction *result);

// Puts "n" or "n/d".
void text_put_fraction(struct text *text, struct fraction value);

// Puts the decimal value rounded to `places` (0 to 12), halves away from zero; computed in integers. Cannot fail.
void text_put_decimal(struct text *text, struct fraction value, unsigned places);

// The same decimal as a number for JSON, where a rounded value stands beside the exact one. Prints only.
double fraction_rounded(struct fraction value);

#endif
