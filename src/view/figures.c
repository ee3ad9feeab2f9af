#include "view/figures.h"

#include <assert.h>
#include <inttypes.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/text.h"
#include "plan/plan.h"

#define MOST_PLACES 9
#define TIME_PLACES 3
#define JSON_PLACES 6
#define KEY_BYTES 64

__extension__ typedef unsigned __int128 wide;

// The power of ten that takes seconds to the unit, and its names.
struct unit_row {
	unsigned exponent;
	const char *name;
	const char *key; // what a JSON key of the rounded number ends in
};

static const struct unit_row units[] = {
	[UNIT_SECONDS] = {0, "s", "s_rounded"},
	[UNIT_MILLISECONDS] = {3, "ms", "ms"},
	[UNIT_MICROSECONDS] = {6, "us", "us"},
	[UNIT_NANOSECONDS] = {9, "ns", "ns"},
};

bool seconds_of_ticks(const struct clock *clock, int64_t ticks, struct fraction *seconds)
{
	return fraction_divide(fraction_whole(ticks), clock->master_hz, seconds);
}

bool cycles_of_ticks(const struct clock *clock, int64_t ticks, struct fraction *cycles)
{
	struct fraction cycles_per_tick;
	return clock->has_subcarrier && fraction_divide(clock->subcarrier_hz, clock->master_hz, &cycles_per_tick) &&
	       fraction_multiply(fraction_whole(ticks), cycles_per_tick, cycles);
}

static wide power_of_ten(unsigned exponent)
{
	wide power = 1;
	for (unsigned index = 0; index < exponent; index++)
		power *= 10;
	return power;
}

// |value| * 10^exponent to the nearest whole number, halves up. With exponents up to 18 products stay below 2^124.
static wide scaled_magnitude(struct fraction value, unsigned exponent)
{
	assert(exponent <= 18);
	const wide denominator = (wide)value.denominator;
	const wide magnitude = value.numerator < 0 ? 0 - (wide)value.numerator : (wide)value.numerator;
	return (magnitude * power_of_ten(exponent) * 2 + denominator) / (denominator * 2);
}

static void put_wide(struct text *text, wide value)
{
	const wide half = power_of_ten(18);
	if (value >= half)
		text_printf(text, "%" PRIu64 "%018" PRIu64, (uint64_t)(value / half), (uint64_t)(value % half));
	else
		text_printf(text, "%" PRIu64, (uint64_t)value);
}

static void put_scaled(struct text *text, struct fraction value, unsigned exponent, unsigned places)
{
	wide digits = scaled_magnitude(value, exponent + places);
	while (digits == 0 && value.numerator != 0 && places < MOST_PLACES)
		digits = scaled_magnitude(value, exponent + ++places);
	for (; places > 0 && digits % 10 == 0; places--)
		digits /= 10;
	const wide scale = power_of_ten(places);
	text_put(text, value.numerator < 0 && digits != 0 ? "-" : "");
	put_wide(text, digits / scale);
	if (places > 0)
		text_printf(text, ".%0*" PRIu64, (int)places, (uint64_t)(digits % scale));
}

void text_put_rounded(struct text *text, struct fraction value, unsigned places)
{
	assert(places <= MOST_PLACES);
	put_scaled(text, value, 0, places);
}

void text_put_exact(struct text *text, struct fraction value)
{
	text_put_fraction(text, value);
	if (fraction_is_whole(value))
		return;
	text_put(text, " (");
	text_put_rounded(text, value, 6);
	text_put(text, ")");
}

void text_put_time_number(struct text *text, struct fraction seconds, enum time_unit unit)
{
	put_scaled(text, seconds, units[unit].exponent, TIME_PLACES);
}

void text_put_time_in(struct text *text, struct fraction seconds, enum time_unit unit)
{
	text_put_time_number(text, seconds, unit);
	text_printf(text, " %s", units[unit].name);
}

void text_put_time(struct text *text, struct fraction seconds)
{
	const wide magnitude = seconds.numerator < 0 ? 0 - (wide)seconds.numerator : (wide)seconds.numerator;
	enum time_unit unit = UNIT_SECONDS;
	while (unit < UNIT_NANOSECONDS && magnitude * power_of_ten(units[unit].exponent) < (wide)seconds.denominator)
		unit++;
	text_put_time_in(text, seconds, unit);
}

void text_put_count(struct text *text, uint64_t count, const char *one, const char *many)
{
	text_printf(text, "%" PRIu64 " %s", count, count == 1 ? one : many);
}

void text_put_hex(struct text *text, uint64_t value, unsigned bits)
{
	text_printf(text, "0x%0*" PRIX64, (int)((bits + 3) / 4), value);
}

// Characters of UTF-8 text: every byte but the continuation bytes starts one.
static size_t character_count(const char *bytes, size_t length)
{
	size_t count = 0;
	for (size_t index = 0; index < length; index++)
		count += ((unsigned char)bytes[index] & 0xC0u) != 0x80u;
	return count;
}

void text_put_wrapped(struct text *text, const char *words, size_t used, size_t indent)
{
	bool first = true;
	while (*words != '\0') {
		const size_t spaces = strspn(words, " ");
		const size_t length = strcspn(words + spaces, " ");
		const size_t characters = character_count(words + spaces, length);
		if (length == 0)
			break;
		if (!first && used + spaces + characters > TERMINAL_CHARACTERS) {
			text_put(text, "\n");
			text_put_repeated(text, ' ', indent);
			used = indent;
		} else if (!first) {
			text_put_repeated(text, ' ', spaces);
			used += spaces;
		}
		text_put_bytes(text, words + spaces, length);
		used += characters;
		words += spaces + length;
		first = false;
	}
}

json_t *json_fraction(struct fraction value)
{
	struct text text = {0};
	text_put_fraction(&text, value);
	json_t *string = text.failed ? NULL : json_string(text_string(&text));
	text_release(&text);
	return string;
}

// Below 2^53 millionths the quotient is the double nearest to the decimal: whole numbers convert exactly, and IEEE 754
// (2019), 5.4.1, has division rounded correctly.
static json_t *json_scaled(struct fraction value, unsigned exponent)
{
	const double magnitude = (double)scaled_magnitude(value, exponent + JSON_PLACES) / 1e6;
	return json_real(value.numerator < 0 && magnitude > 0 ? -magnitude : magnitude);
}

json_t *json_rounded(struct fraction value)
{
	return json_scaled(value, 0);
}

json_t *json_time(struct fraction seconds, enum time_unit unit)
{
	return json_scaled(seconds, units[unit].exponent);
}

json_t *json_ticks(int64_t ticks)
{
	return json_sprintf("%" PRId64, ticks);
}

json_t *json_of_text(struct text *text)
{
	json_t *string = text->failed ? NULL : json_string(text_string(text));
	text_release(text);
	return string;
}

// Both functions of jansson take the value's reference even if they fail, and fail for a NULL value.
void json_put(json_t **object, const char *key, json_t *value)
{
	if (json_object_set_new(*object, key, value) == 0)
		return;
	json_decref(*object);
	*object = NULL;
}

void json_append(json_t **array, json_t *value)
{
	if (json_array_append_new(*array, value) == 0)
		return;
	json_decref(*array);
	*array = NULL;
}

static void put_named(json_t **object, const char *name, const char *ending, json_t *value)
{
	char key[KEY_BYTES];
	const int length = snprintf(key, sizeof key, "%s_%s", name, ending);
	assert(length > 0 && length < KEY_BYTES);
	(void)length;
	json_put(object, key, value);
}

void json_put_fraction(json_t **object, const char *name, struct fraction value)
{
	json_put(object, name, json_fraction(value));
	put_named(object, name, "rounded", json_rounded(value));
}

void json_put_time(json_t **object, const char *name, struct fraction seconds, enum time_unit unit)
{
	put_named(object, name, "s", json_fraction(seconds));
	put_named(object, name, units[unit].key, json_time(seconds, unit));
}

char *json_text(json_t *document)
{
	const size_t flags = JSON_INDENT(2) | JSON_REAL_PRECISION(12);
	char *dump = document != NULL ? json_dumps(document, flags) : NULL;
	char *again = dump != NULL ? json_dumps(document, flags) : NULL; // jansson can leave out a key where memory is out
	struct text text = {0};
	if (again != NULL && strcmp(dump, again) == 0) {
		text_put(&text, dump);
		text_put(&text, "\n");
	}
	free(dump);
	free(again);
	if (!text.failed && text.length > 0)
		return text.bytes;
	text_release(&text);
	return NULL;
}
