// Numbers, quantities, bit ranges and truth values, read exactly from the text of a value.
#ifndef SCANLATCH_PLAN_QUANTITY_H
#define SCANLATCH_PLAN_QUANTITY_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#include "base/fraction.h"

enum dimension {
	DIMENSION_FREQUENCY, // value in hertz
	DIMENSION_TIME,      // value in seconds
	DIMENSION_TICKS,
	DIMENSION_DOTS,
	DIMENSION_CELLS,
	DIMENSION_LINES,
	DIMENSION_BITS,
	DIMENSION_CYCLES, // of the subcarrier
	DIMENSION_PULSES,
	DIMENSION_PPM,
};

struct quantity {
	struct fraction value;
	enum dimension dimension;
};

enum quantity_status {
	QUANTITY_OK,
	QUANTITY_MALFORMED,   // not NUMBER[/NUMBER] UNIT
	QUANTITY_NO_UNIT,     // a number without a unit
	QUANTITY_UNKNOWN_UNIT,
	QUANTITY_OVERFLOW,    // does not fit a 64-bit fraction
};

// Reads `[-]NUMBER[/NUMBER] UNIT`, NUMBER being DIGITS[.DIGITS]; spaces around "/" and before the unit are free, but the
// unit may also follow the number at once. Units: Hz kHz MHz, s ms us ns, tick(s) dot(s) cell(s) line(s) bit(s) cycle(s) pulse(s) ppm.
// Division by zero is QUANTITY_MALFORMED. *result is set only on QUANTITY_OK.
enum quantity_status quantity_parse(const char *text, struct quantity *result);

// What a status means, as words for a diagnostic ("a number needs a unit"). Cannot fail.
const char *quantity_status_words(enum quantity_status status);

#define UNITS_LIMIT 22 // of all dimensions

// Puts the names of the units of a dimension, for messages, the plural of those that have one; returns how many. Cannot fail.
size_t dimension_units(enum dimension dimension, const char **names);

// The same of all its units, singular and plural.
size_t dimension_all_units(enum dimension dimension, const char **names);

// The unit among the candidates that a text with an unknown one seems to mean: in other case ("MHZ"), or with the micro
// sign for us. NULL if none. Cannot fail.
const char *unit_meant(const char *text, const char *const *names, size_t count);

// Reads a whole number, decimal or 0x…, unsigned, no sign and no spaces, all of text. False if malformed or above 2^63-1.
bool whole_number_parse(const char *text, int64_t *result);

// Reads "hi..lo" or "n" (decimal, each at most 1000) with hi >= lo. False if malformed.
#define BIT_RANGE_PATTERN "[0-9]+(\\.\\.[0-9]+)?" // the same as a regular expression, but for the order
bool bit_range_parse(const char *text, unsigned *high, unsigned *low);

// Reads exactly "true" or "false".
bool truth_parse(const char *text, bool *result);

#endif
