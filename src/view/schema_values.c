// Schemas of single values: which kinds YAML can take them for, and their forms as regular expressions.
#include <inttypes.h>
#include <string.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "view/figures.h"
#include "view/schema.h"

#define RATIO(first) first "( */ *" ABOVE_ZERO_PATTERN ")?"

// Puts a regular expression of the whole of a text under a key, and releases it.
static void put_pattern(json_t **object, const char *key, struct text *pattern)
{
	const bool good = !pattern->failed;
	json_put(object, key, good ? json_pack("s++", "^(", text_string(pattern), ")$") : NULL);
	text_release(pattern);
}

// Puts a quantity of the dimensions; `least` is its number's pattern.
static void put_quantity(struct text *pattern, const char *number, unsigned dimensions)
{
	const char *units[UNITS_LIMIT];
	size_t count = 0;
	for (unsigned dimension = DIMENSION_FREQUENCY; dimension <= DIMENSION_PPM; dimension++)
		if ((dimensions & (1u << dimension)) != 0)
			count += dimension_all_units((enum dimension)dimension, units + count);
	text_printf(pattern, "%s *(", number);
	for (size_t unit = 0; unit < count; unit++)
		text_printf(pattern, "%s%s", unit == 0 ? "" : "|", units[unit]);
	text_put(pattern, ")");
}

static json_t *quantity_schema(unsigned dimensions, enum quantity_sign sign)
{
	static const char *const numbers[] = {
		[QUANTITY_POSITIVE] = RATIO(ABOVE_ZERO_PATTERN),
		[QUANTITY_NOT_NEGATIVE] = RATIO(NUMBER_PATTERN),
		[QUANTITY_SIGNED] = "-?" RATIO(NUMBER_PATTERN),
	};
	json_t *object = json_pack("{s:s}", "type", "string");
	struct text pattern = {0};
	put_quantity(&pattern, numbers[sign], dimensions);
	put_pattern(&object, "pattern", &pattern);
	return object;
}

// A whole number in its range, or a ratio, which no pattern compares with it.
static json_t *bit_count_schema(int64_t least, int64_t most)
{
	json_t *object = json_pack("{s:s}", "type", "string");
	struct text number = {0}, pattern = {0};
	text_put(&number, "(0*(");
	for (int64_t count = least; count <= most; count++)
		text_printf(&number, "%s%" PRId64, count == least ? "" : "|", count);
	text_printf(&number, ")(\\.0+)?|%s */ *" ABOVE_ZERO_PATTERN ")", least > 0 ? ABOVE_ZERO_PATTERN : NUMBER_PATTERN);
	put_quantity(&pattern, text_string(&number), 1u << DIMENSION_BITS);
	pattern.failed = pattern.failed || number.failed;
	put_pattern(&object, "pattern", &pattern);
	text_release(&number);
	return object;
}

static json_t *words_of(const char *const *words, size_t count)
{
	json_t *array = json_array();
	for (size_t word = 0; word < count; word++)
		json_append(&array, json_string(words[word]));
	return array;
}

// A word that is a number stands there as one too.
static json_t *choice_schema(const struct shape *shape)
{
	json_t *object = json_object(), *words = json_array();
	for (size_t word = 0; word < shape->word_count; word++) {
		int64_t number;
		if (whole_number_parse(shape->words[word], &number))
			json_append(&words, json_integer(number));
		json_append(&words, json_string(shape->words[word]));
	}
	json_put(&object, "enum", words);
	return object;
}

static json_t *text_types(unsigned also)
{
	json_t *types = json_array();
	json_append(&types, json_string("string"));
	if ((also & (ALSO_NUMBER | ALSO_SHARE)) != 0)
		json_append(&types, json_string("number"));
	else if ((also & ALSO_WHOLE) != 0)
		json_append(&types, json_string("integer"));
	if ((also & ALSO_TRUTH) != 0)
		json_append(&types, json_string("boolean"));
	return types;
}

static void put_number_range(json_t **object, unsigned also)
{
	if ((also & ALSO_WHOLE) != 0)
		json_put(object, "minimum", json_integer(0));
	if ((also & ALSO_SHARE) != 0) {
		json_put(object, "exclusiveMinimum", json_integer(0));
		json_put(object, "maximum", json_integer(1));
	}
}

static json_t *text_schema(const struct shape *shape)
{
	json_t *object = json_object();
	json_put(&object, "type", text_types(shape->also));
	if (shape->pattern != NULL)
		json_put(&object, "pattern", json_pack("s++", "^(", shape->pattern, ")$"));
	else
		json_put(&object, "minLength", json_integer(1));
	if (shape->most > 0)
		json_put(&object, "maxLength", json_integer(shape->most));
	put_number_range(&object, shape->also);
	if (shape->never != NULL)
		json_put(&object, "not", json_pack("{s:s,s:s}", "type", "string", "pattern", shape->never));
	else if (shape->forbidden_count > 0)
		json_put(&object, "not", json_pack("{s:o}", "enum", words_of(shape->forbidden, shape->forbidden_count)));
	return object;
}

static json_t *whole_schema(const struct shape *shape)
{
	return json_pack("{s:[s,s],s:I,s:I,s:s}", "type", "integer", "string", "minimum", (json_int_t)shape->least, "maximum",
	                 (json_int_t)shape->most, "pattern", "^" WHOLE_PATTERN "$");
}

static json_t *logic_names(const struct catalogue *catalogue, enum logic_kind kind)
{
	json_t *names = json_array();
	for (size_t index = 0; index < catalogue->logic_count; index++)
		if (catalogue->logic[index].kind == kind)
			json_append(&names, json_string(catalogue->logic[index].name));
	return names;
}

static json_t *listed_names(enum listed_names listed, const struct schema_names *names)
{
	json_t *array = json_array();
	switch (listed) {
	case LISTED_STANDARDS:
		for (size_t index = 0; index < names->standards->count; index++)
			json_append(&array, json_string(names->standards->standards[index].name));
		return array;
	case LISTED_MEMORIES:
		for (size_t index = 0; index < names->parts->part_count; index++)
			json_append(&array, json_string(names->parts->parts[index].name));
		return array;
	case LISTED_LATCHES: case LISTED_COUNTERS: case LISTED_DECODERS: break;
	}
	json_decref(array);
	return logic_names(names->parts, listed == LISTED_LATCHES ? LOGIC_LATCH : listed == LISTED_COUNTERS ? LOGIC_COUNTER : LOGIC_DECODER);
}

static json_t *listed_schema(const struct shape *shape, const struct schema_names *names)
{
	json_t *object = shape->own_too ? text_schema(&text_shape) : json_object();
	json_put(&object, shape->own_too ? "examples" : "enum", listed_names(shape->listed, names));
	return object;
}

json_t *view_value_schema(const struct shape *shape, const struct schema_names *names)
{
	switch (shape->kind) {
	case SHAPE_TEXT: return text_schema(shape);
	case SHAPE_NOTE: return json_pack("{s:[s,s,s,s]}", "type", "string", "number", "boolean", "null");
	case SHAPE_WHOLE: return whole_schema(shape);
	case SHAPE_TRUE: return json_pack("{s:[b,s]}", "enum", 1, "true");
	case SHAPE_CHOICE: return choice_schema(shape);
	case SHAPE_LISTED: return listed_schema(shape, names);
	case SHAPE_QUANTITY: return quantity_schema(shape->dimensions, shape->sign);
	case SHAPE_BIT_COUNT: return bit_count_schema(shape->least, shape->most);
	case SHAPE_LIST: case SHAPE_MAPPING: case SHAPE_NAMED: case SHAPE_LIMITS: case SHAPE_EITHER: break;
	}
	return NULL;
}

// The forms of limit_parse, whose order low, nominal, high no pattern can see.
static void put_limit(struct text *pattern, const char *value, const char *tolerance)
{
	struct text range = {0};
	text_printf(&range, "at least +%s *|at most +%s *|%s +to +%s *", value, value, value, value);
	text_printf(pattern, "%s *|%s *\\+- *%s *|%s *\\((%s)\\)|exactly +%s *|%s", value, value, tolerance, value, text_string(&range), value,
	            text_string(&range));
	pattern->failed = pattern->failed || range.failed;
	text_release(&range);
}

static json_t *limit_schema(const struct limit_item_facts *facts)
{
	if (facts->is_polarity)
		return json_pack("{s:[s,s]}", "enum", "positive", "negative");
	json_t *object = json_pack("{s:s}", "type", "string");
	struct text value = {0}, tolerance = {0}, pattern = {0};
	put_quantity(&value, RATIO(NUMBER_PATTERN), 1u << facts->dimension);
	put_quantity(&tolerance, RATIO(NUMBER_PATTERN), 1u << facts->dimension | IN_PPM);
	put_limit(&pattern, text_string(&value), text_string(&tolerance));
	pattern.failed = pattern.failed || value.failed || tolerance.failed;
	put_pattern(&object, "pattern", &pattern);
	text_release(&value);
	text_release(&tolerance);
	return object;
}

json_t *view_limits_schema(void)
{
	json_t *object = json_pack("{s:s}", "type", "object"), *properties = json_object();
	for (size_t item = 0; item < ITEM_COUNT; item++) {
		const struct limit_item_facts *facts = limit_item_facts((enum limit_item)item);
		json_t *value = limit_schema(facts);
		json_put(&value, "description", json_string(facts->measures));
		json_put(&properties, facts->name, value);
	}
	json_put(&object, "properties", properties);
	json_put(&object, "additionalProperties", json_false());
	return object;
}
