#include "view/parts.h"

#include <stdint.h>
#include <string.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "view/columns.h"
#include "view/figures.h"

#define LINE_CHARACTERS 100
#define MOST_PLACES 6

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

static const char *const kind_words[] = {
	[LOGIC_LATCH] = "latch", [LOGIC_COUNTER] = "counter", [LOGIC_DECODER] = "decoder",
};

// Puts a time in nanoseconds without unit, exactly: as few decimal places as it takes, a fraction if they would not end.
// False, with nothing put, for a time too large to be written so.
static bool put_nanoseconds(struct text *out, struct fraction seconds)
{
	struct fraction scaled, nanoseconds;
	if (!fraction_multiply(seconds, fraction_whole(1000000000), &nanoseconds))
		return false;
	scaled = nanoseconds;
	for (unsigned places = 0; places <= MOST_PLACES; places++) {
		if (fraction_is_whole(scaled)) {
			text_put_decimal(out, nanoseconds, places);
			return true;
		}
		if (!fraction_multiply(scaled, fraction_whole(10), &scaled))
			break;
	}
	text_put_fraction(out, nanoseconds);
	return true;
}

static void put_time(struct text *out, struct fraction seconds)
{
	if (put_nanoseconds(out, seconds)) {
		text_put(out, " ns");
		return;
	}
	text_put_fraction(out, seconds);
	text_put(out, " s");
}

// "32K x 8": words of the part, in the trade's K and M of 1024.
static void put_organisation(struct text *out, const struct part *part)
{
	const size_t words = (size_t)1 << part->address_pins;
	if (part->address_pins >= 20)
		text_printf(out, "%zuM", words >> 20);
	else if (part->address_pins >= 10)
		text_printf(out, "%zuK", words >> 10);
	else
		text_printf(out, "%zu", words);
	text_printf(out, " x %u", part->data_pins);
}

// Puts times as "70, 90, 120 ns".
static void put_grades(struct text *out, const struct access_grade *grades, size_t count)
{
	for (size_t index = 0; index < count; index++) {
		text_put(out, index == 0 ? "" : ", ");
		if (index + 1 < count && put_nanoseconds(out, grades[index].access_s))
			continue;
		put_time(out, grades[index].access_s);
	}
}

static const struct column part_columns[] = {
	{"name", false}, {"organisation", true}, {"bytes", true}, {"address", true}, {"data", true}, {"package", false},
	{"access", false},
};

static void put_part_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct part *part = &((const struct catalogue *)context)->parts[row];
	switch (column) {
	case 0: text_put(out, part->name); break;
	case 1: put_organisation(out, part); break;
	case 2: text_printf(out, "%zu", part_bytes(part)); break;
	case 3: text_printf(out, "%u", part->address_pins); break;
	case 4: text_printf(out, "%u", part->data_pins); break;
	case 5: text_put(out, part->package); break;
	default: put_grades(out, part->grades, part->grade_count); break;
	}
}

static const struct column source_columns[] = {{"name", false}, {"value", false}, {"source", false}};

// How many grades from `first` on have one source.
static size_t grades_of_one_source(const struct part *part, size_t first)
{
	size_t end = first + 1;
	while (end < part->grade_count && strcmp(part->grades[end].source, part->grades[first].source) == 0)
		end++;
	return end - first;
}

// A part has one row for its organisation, one for its pinout if that is known, and one for each run of grades that have the same source.
static size_t source_rows(const struct part *part)
{
	size_t rows = part->pins != NULL ? 2 : 1;
	for (size_t grade = 0; grade < part->grade_count; grade += grades_of_one_source(part, grade))
		rows++;
	return rows;
}

static void put_part_source(struct text *out, const struct part *part, size_t row, size_t column)
{
	const size_t before_grades = part->pins != NULL ? 2 : 1;
	size_t first = 0;
	for (size_t earlier = before_grades; earlier < row; earlier++)
		first += grades_of_one_source(part, first);
	if (column == 0)
		text_put(out, part->name);
	else if (row == 0)
		text_put(out, column == 1 ? "organisation, package" : part->source);
	else if (row < before_grades)
		text_put(out, column == 1 ? "pinout" : part->pinout_source);
	else if (column == 1)
		put_grades(out, &part->grades[first], grades_of_one_source(part, first));
	else
		text_put(out, part->grades[first].source);
}

static void put_part_source_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct part *part = ((const struct catalogue *)context)->parts;
	for (size_t rows = source_rows(part); row >= rows; rows = source_rows(part)) {
		row -= rows;
		part++;
	}
	put_part_source(out, part, row, column);
}

static const struct column logic_columns[] = {
	{"name", false}, {"kind", false}, {"delay", true}, {"setup", true}, {"conditions", false},
};

static void put_logic_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct logic_part *part = &((const struct catalogue *)context)->logic[row];
	switch (column) {
	case 0: text_put(out, part->name); break;
	case 1: text_put(out, kind_words[part->kind]); break;
	case 2: put_time(out, part->delay_s); break;
	case 3:
		if (part->kind == LOGIC_DECODER)
			text_put(out, "-");
		else
			put_time(out, part->setup_s);
		break;
	default: text_put(out, part->conditions); break;
	}
}

// A part has a row for its delay and one for its setup; a decoder has only the first.
static void put_logic_source_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct logic_part *part = ((const struct catalogue *)context)->logic;
	for (size_t rows = part->kind == LOGIC_DECODER ? 1 : 2; row >= rows; rows = part->kind == LOGIC_DECODER ? 1 : 2) {
		row -= rows;
		part++;
	}
	switch (column) {
	case 0: text_put(out, part->name); break;
	case 1:
		text_put(out, row == 0 ? "delay " : "setup ");
		put_time(out, row == 0 ? part->delay_s : part->setup_s);
		break;
	default: text_put(out, row == 0 ? part->delay_source : part->setup_source); break;
	}
}

static void put_memories(struct text *out, const struct catalogue *catalogue)
{
	struct columns parts = {part_columns, COUNT_OF(part_columns), catalogue->part_count, put_part_cell, catalogue};
	struct columns sources = {source_columns, COUNT_OF(source_columns), 0, put_part_source_cell, catalogue};
	for (size_t index = 0; index < catalogue->part_count; index++)
		sources.row_count += source_rows(&catalogue->parts[index]);
	text_put(out, "Memories (address, data: pins; K = 1024, M = 1024 K)\n\n");
	view_columns(out, &parts, LINE_CHARACTERS);
	text_put(out, "\nSources of the memories' values\n\n");
	view_columns(out, &sources, LINE_CHARACTERS);
}

static void put_logic(struct text *out, const struct catalogue *catalogue)
{
	struct columns parts = {logic_columns, COUNT_OF(logic_columns), catalogue->logic_count, put_logic_cell, catalogue};
	struct columns sources = {source_columns, COUNT_OF(source_columns), 0, put_logic_source_cell, catalogue};
	for (size_t index = 0; index < catalogue->logic_count; index++)
		sources.row_count += catalogue->logic[index].kind == LOGIC_DECODER ? 1 : 2;
	text_put(out, "Latches, counters and decoders (delay: clock, or a decoder's address, to output)\n\n");
	view_columns(out, &parts, LINE_CHARACTERS);
	text_put(out, "\nSources of their values\n\n");
	view_columns(out, &sources, LINE_CHARACTERS);
}

void view_parts(struct text *out, const struct catalogue *catalogue)
{
	put_memories(out, catalogue);
	text_put(out, "\n");
	put_logic(out, catalogue);
}

static json_t *number_of_nanoseconds(struct fraction seconds)
{
	struct fraction nanoseconds;
	if (!fraction_multiply(seconds, fraction_whole(1000000000), &nanoseconds))
		return json_real(fraction_rounded(seconds) * 1e9);
	return fraction_is_whole(nanoseconds) ? json_integer(nanoseconds.numerator) : json_real(fraction_rounded(nanoseconds));
}

static json_t *json_of_time(struct fraction seconds, const char *source)
{
	struct text time = {0}, exact = {0};
	put_time(&time, seconds);
	text_put_fraction(&exact, seconds);
	return json_pack("{s:o, s:o, s:o, s:s}", "time", json_of_text(&time), "seconds", json_of_text(&exact), "ns",
	                 number_of_nanoseconds(seconds), "source", source);
}

// Appends `value` (NULL: memory is out) to `array`, which is given up and becomes NULL on failure. False on failure.
static bool append(json_t **array, json_t *value)
{
	if (json_array_append_new(*array, value) == 0)
		return true;
	json_decref(*array);
	*array = NULL;
	return false;
}

// null where it is not known.
static json_t *json_of_pinout(const struct part *part)
{
	if (part->pins == NULL)
		return json_null();
	json_t *pins = json_array();
	for (unsigned pin = 0; pin < part->pin_count; pin++)
		if (!append(&pins, json_string(part->pins[pin].name)))
			break;
	return json_pack("{s:o, s:s}", "pins", pins, "source", part->pinout_source);
}

static json_t *json_of_part(const struct part *part)
{
	struct text organisation = {0};
	put_organisation(&organisation, part);
	json_t *access = json_array();
	for (size_t index = 0; index < part->grade_count; index++)
		if (!append(&access, json_of_time(part->grades[index].access_s, part->grades[index].source)))
			break;
	return json_pack("{s:s, s:o, s:I, s:i, s:i, s:s, s:s, s:o, s:o}", "name", part->name, "organisation",
	                 json_of_text(&organisation), "bytes", (json_int_t)part_bytes(part), "address_pins",
	                 (int)part->address_pins, "data_pins", (int)part->data_pins, "package", part->package, "source",
	                 part->source, "pinout", json_of_pinout(part), "access", access);
}

static json_t *json_of_logic_part(const struct logic_part *part)
{
	json_t *object = json_pack("{s:s, s:s, s:o}", "name", part->name, "conditions", part->conditions, "delay",
	                           json_of_time(part->delay_s, part->delay_source));
	if (object == NULL || part->kind == LOGIC_DECODER ||
	    json_object_set_new(object, "setup", json_of_time(part->setup_s, part->setup_source)) == 0)
		return object;
	json_decref(object);
	return NULL;
}

static json_t *json_of_memories(const struct catalogue *catalogue)
{
	json_t *array = json_array();
	for (size_t index = 0; index < catalogue->part_count; index++)
		if (!append(&array, json_of_part(&catalogue->parts[index])))
			break;
	return array;
}

static json_t *json_of_kind(const struct catalogue *catalogue, enum logic_kind kind)
{
	json_t *array = json_array();
	for (size_t index = 0; index < catalogue->logic_count; index++)
		if (catalogue->logic[index].kind == kind && !append(&array, json_of_logic_part(&catalogue->logic[index])))
			break;
	return array;
}

json_t *view_parts_json(const struct catalogue *catalogue)
{
	return json_pack("{s:o, s:o, s:o, s:o}", "memories", json_of_memories(catalogue), "latches",
	                 json_of_kind(catalogue, LOGIC_LATCH), "counters", json_of_kind(catalogue, LOGIC_COUNTER), "decoders",
	                 json_of_kind(catalogue, LOGIC_DECODER));
}
