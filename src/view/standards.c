#include "view/standards.h"

#include <assert.h>
#include <string.h>

#include "base/text.h"
#include "view/columns.h"
#include "view/figures.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))
#define PLACES 6
#define MOST_VALUES (ITEM_COUNT * GRADE_COUNT)

// A standard with its sources numbered in the order in which they first stand.
struct numbered {
	const struct standard *standard;
	size_t numbers[MOST_VALUES]; // of each limit's source, from 0
	const char *sources[MOST_VALUES];
	size_t source_count;
};

bool limit_value_in_unit(enum limit_item item, struct fraction value, struct fraction *result)
{
	const char *unit = limit_item_facts(item)->unit;
	if (strcmp(unit, "us") == 0)
		return fraction_multiply(value, fraction_whole(1000000), result);
	if (strcmp(unit, "MHz") == 0)
		return fraction_divide(value, fraction_whole(1000000), result);
	*result = value;
	return true;
}

static const char *polarity_word(struct fraction value)
{
	return value.numerator > 0 ? "positive" : "negative";
}

void put_limit_value(struct text *out, enum limit_item item, struct fraction value)
{
	struct fraction scaled;
	if (limit_item_facts(item)->is_polarity)
		text_put(out, polarity_word(value));
	else if (limit_value_in_unit(item, value, &scaled))
		text_put_rounded(out, scaled, PLACES);
	else
		text_printf(out, "%g", fraction_rounded(value) * (limit_item_facts(item)->dimension == DIMENSION_TIME ? 1e6 : 1e-6));
}

static const struct column limit_columns[] = {
	{"item", false}, {"grade", false}, {"nominal", true}, {"low", true}, {"high", true}, {"unit", false}, {"source", false},
};

static void put_given(struct text *out, enum limit_item item, bool given, struct fraction value)
{
	if (given)
		put_limit_value(out, item, value);
	else
		text_put(out, "-");
}

static void put_limit_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct numbered *numbered = context;
	const struct limit *limit = &numbered->standard->limits[row];
	switch (column) {
	case 0: text_put(out, limit_item_facts(limit->item)->name); break;
	case 1: text_put(out, limit_grade_name(limit->grade)); break;
	case 2: put_given(out, limit->item, limit->has_nominal, limit->nominal); break;
	case 3: put_given(out, limit->item, limit->has_low, limit->low); break;
	case 4: put_given(out, limit->item, limit->has_high, limit->high); break;
	case 5: text_put(out, limit_item_facts(limit->item)->unit); break;
	default: text_printf(out, "[%zu]", numbered->numbers[row] + 1); break;
	}
}

// Sources are few and short to compare: each limit is looked up among those before it.
static void number_sources(struct numbered *numbered)
{
	const struct standard *standard = numbered->standard;
	assert(standard->limit_count <= MOST_VALUES);
	for (size_t index = 0; index < standard->limit_count; index++) {
		size_t number = 0;
		while (number < numbered->source_count && strcmp(numbered->sources[number], standard->limits[index].source) != 0)
			number++;
		numbered->numbers[index] = number;
		if (number == numbered->source_count)
			numbered->sources[numbered->source_count++] = standard->limits[index].source;
	}
}

// Puts a mark, and words that are wrapped beside it.
static void put_marked(struct text *out, const char *mark, const char *words)
{
	text_put(out, mark);
	text_put_repeated(out, ' ', 2);
	text_put_wrapped(out, words, strlen(mark) + 2, strlen(mark) + 2);
	text_put(out, "\n");
}

static void put_sources(struct text *out, const struct numbered *numbered)
{
	struct text mark = {0};
	for (size_t index = 0; index < numbered->source_count; index++) {
		mark.length = 0;
		text_printf(&mark, "%s[%zu]", index < 9 ? " " : "", index + 1);
		put_marked(out, text_string(&mark), numbered->sources[index]);
	}
	out->failed = out->failed || mark.failed;
	text_release(&mark);
}

static void put_pauses(struct text *out, const struct standard *standard)
{
	struct text words = {0};
	for (size_t index = 0; index < standard->pause_count; index++) {
		const struct burst_pause *pause = &standard->pauses[index];
		words.length = 0;
		text_printf(&words, "no burst in lines %u to %u of field %u: %s", pause->first_line, pause->last_line, pause->field,
		            pause->source);
		put_marked(out, "   -", text_string(&words));
	}
	out->failed = out->failed || words.failed;
	text_release(&words);
}

static void put_standard(struct text *out, const struct standard *standard)
{
	struct numbered numbered = {.standard = standard};
	const struct columns table = {limit_columns, COUNT_OF(limit_columns), standard->limit_count, put_limit_cell, &numbered};
	number_sources(&numbered);
	text_printf(out, "%s: ", standard->name);
	text_put_wrapped(out, standard->title, strlen(standard->name) + 2, 2);
	text_put(out, "\ndocuments: ");
	text_put_wrapped(out, standard->documents, strlen("documents: "), 2);
	text_put(out, "\n\n");
	view_columns(out, &table, TERMINAL_CHARACTERS);
	text_put(out, "\n");
	put_sources(out, &numbered);
	put_pauses(out, standard);
	for (size_t index = 0; index < standard->note_count; index++)
		put_marked(out, "   -", standard->notes[index]);
	text_put(out, "\n");
}

static const struct column item_columns[] = {{"item", false}, {"unit", false}, {"measures", false}};

static void put_item_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct limit_item_facts *facts = limit_item_facts((enum limit_item)row);
	(void)context;
	text_put(out, column == 0 ? facts->name : column == 1 ? facts->unit : facts->measures);
}

void view_standards(struct text *out, const struct standards *standards)
{
	const struct columns items = {item_columns, COUNT_OF(item_columns), ITEM_COUNT, put_item_cell, NULL};
	text_put(out, "Limits at two grades: studio is the published figure, monitor what receivers and monitors accept. A\n"
	              "nominal value alone is for information. Values are rounded to 6 decimals; --json has them exactly.\n\n");
	for (size_t index = 0; index < standards->count; index++)
		put_standard(out, &standards->standards[index]);
	text_put(out, "What is measured (0H: leading edge of line sync; 0V: that of a field's first broad pulse or of its\n"
	              "vertical sync)\n\n");
	view_columns(out, &items, TERMINAL_CHARACTERS);
}

static void json_put_value(json_t **object, const char *key, enum limit_item item, bool given, struct fraction value)
{
	struct fraction scaled;
	if (!given)
		return;
	if (limit_item_facts(item)->is_polarity)
		json_put(object, key, json_string(polarity_word(value)));
	else if (limit_value_in_unit(item, value, &scaled))
		json_put_fraction(object, key, scaled);
}

static json_t *json_of_limit(const struct limit *limit)
{
	const struct limit_item_facts *facts = limit_item_facts(limit->item);
	json_t *object = json_pack("{s:s, s:s, s:s}", "item", facts->name, "grade", limit_grade_name(limit->grade), "unit", facts->unit);
	json_put_value(&object, "nominal", limit->item, limit->has_nominal, limit->nominal);
	json_put_value(&object, "low", limit->item, limit->has_low, limit->low);
	json_put_value(&object, "high", limit->item, limit->has_high, limit->high);
	json_put(&object, "source", json_string(limit->source));
	return object;
}

static json_t *json_of_limits(const struct standard *standard)
{
	json_t *array = json_array();
	for (size_t index = 0; index < standard->limit_count; index++)
		json_append(&array, json_of_limit(&standard->limits[index]));
	return array;
}

static json_t *json_of_pauses(const struct standard *standard)
{
	json_t *array = json_array();
	for (size_t index = 0; index < standard->pause_count; index++) {
		const struct burst_pause *pause = &standard->pauses[index];
		json_append(&array, json_pack("{s:i, s:i, s:i, s:s}", "field", (int)pause->field, "first_line", (int)pause->first_line,
		                              "last_line", (int)pause->last_line, "source", pause->source));
	}
	return array;
}

static json_t *json_of_standard(const struct standard *standard)
{
	json_t *notes = json_array();
	json_t *object = json_pack("{s:s, s:s, s:s, s:i}", "name", standard->name, "title", standard->title, "documents",
	                           standard->documents, "fields", (int)standard->fields);
	if (standard->vertical_sync_line > 0)
		json_put(&object, "vertical_sync_line", json_integer((json_int_t)standard->vertical_sync_line));
	json_put(&object, "limits", json_of_limits(standard));
	json_put(&object, "burst_pauses", json_of_pauses(standard));
	for (size_t index = 0; index < standard->note_count; index++)
		json_append(&notes, json_string(standard->notes[index]));
	json_put(&object, "notes", notes);
	return object;
}

json_t *view_standards_json(const struct standards *standards)
{
	json_t *object = json_object(), *list = json_array(), *items = json_array();
	for (size_t index = 0; index < standards->count; index++)
		json_append(&list, json_of_standard(&standards->standards[index]));
	for (size_t item = 0; item < ITEM_COUNT; item++) {
		const struct limit_item_facts *facts = limit_item_facts((enum limit_item)item);
		json_append(&items, json_pack("{s:s, s:s, s:s}", "item", facts->name, "unit", facts->unit, "measures", facts->measures));
	}
	json_put(&object, "standards", list);
	json_put(&object, "items", items);
	return object;
}
