// Figures in words and in JSON: times, counts, fractions and hexadecimal numbers. Rounding is done in integers, so that
// output is the same on every machine. Every text function sets text->failed when memory is out; none fails otherwise.
#ifndef SCANLATCH_VIEW_FIGURES_H
#define SCANLATCH_VIEW_FIGURES_H

#include <jansson.h>
#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#include "base/fraction.h"

struct clock;
struct text;

#define TERMINAL_CHARACTERS 100 // of a line, at most, where words allow it

enum time_unit { UNIT_SECONDS, UNIT_MILLISECONDS, UNIT_MICROSECONDS, UNIT_NANOSECONDS };

// The seconds that so many ticks last, exact. False, with *seconds as it was, if they do not fit.
bool seconds_of_ticks(const struct clock *clock, int64_t ticks, struct fraction *seconds);

// The cycles of the subcarrier in so many ticks, exact. False, with *cycles as it was, if there is none or they do not fit.
bool cycles_of_ticks(const struct clock *clock, int64_t ticks, struct fraction *cycles);

// Puts a decimal rounded to `places` (0 to 9), halves away from zero, without zeros at its end. A value that would be put
// as 0, though it is not, gets the places that show its first digit, up to 9.
void text_put_rounded(struct text *text, struct fraction value, unsigned places);

// Puts "455/2 (227.5)", "228": the exact value, and where that is no whole number its decimal of up to 6 places.
void text_put_exact(struct text *text, struct fraction value);

// Puts the number of a time in a unit, rounded to 3 places as above: "16.688".
void text_put_time_number(struct text *text, struct fraction seconds, enum time_unit unit);
// The same with its unit: "16.688 ms".
void text_put_time_in(struct text *text, struct fraction seconds, enum time_unit unit);
// The same in the largest unit in which the time is at least 1.
void text_put_time(struct text *text, struct fraction seconds);

// Puts "1 cell" or "2 cells".
void text_put_count(struct text *text, uint64_t count, const char *one, const char *many);

// Puts a value of so many bits (1 to 64) as "0x0F": a digit for every four bits.
void text_put_hex(struct text *text, uint64_t value, unsigned bits);

// Puts words, with a new line indented by `indent` in place of the spaces before each word that would pass
// TERMINAL_CHARACTERS. `used` characters of the first line are taken already. Text is UTF-8, a character a column.
void text_put_wrapped(struct text *text, const char *words, size_t used, size_t indent);

// JSON. Each function makes a new reference, owned by the caller; NULL when memory is out.
json_t *json_fraction(struct fraction value);                    // "455/2", exact
json_t *json_rounded(struct fraction value);                     // 227.5: a real, rounded to 6 decimals
json_t *json_time(struct fraction seconds, enum time_unit unit); // in that unit: a real, rounded to 6 decimals
json_t *json_ticks(int64_t ticks);                               // "912": a string, as all of them have to be exact
json_t *json_of_text(struct text *text);                         // a string; the text is released

// Sets a key of an object, or appends to an array. The value's reference is taken. Where memory is out (a NULL value says
// so too), *object is given up and becomes NULL; a NULL *object drops the value: so a writer checks once, at the end.
void json_put(json_t **object, const char *key, json_t *value);
void json_append(json_t **array, json_t *value);

// The document as text that ends with a newline; malloc'd, owned by the caller. NULL when memory is out or document is NULL.
char *json_text(json_t *document);

// Sets NAME to the exact fraction and NAME_rounded to its decimal.
void json_put_fraction(json_t **object, const char *name, struct fraction value);
// Sets NAME_s to the exact seconds and NAME_ms (s_rounded, us, ns: the unit) to the decimal in that unit.
void json_put_time(json_t **object, const char *name, struct fraction seconds, enum time_unit unit);

#endif
