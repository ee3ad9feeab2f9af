#include "plan/read.h"

#include <assert.h>
#include <string.h>

#include "base/arena.h"
#include "base/text.h"

#define KEYS_LIMIT 64 // of a kind of mapping

const struct shape text_shape = {.kind = SHAPE_TEXT, .also = ALSO_NUMBER | ALSO_TRUTH};
const struct shape note_shape = {.kind = SHAPE_NOTE};
const struct shape true_shape = {.kind = SHAPE_TRUE};
const struct shape time_shape = {.kind = SHAPE_QUANTITY, .dimensions = IN_SECONDS, .sign = QUANTITY_POSITIVE};
const struct shape bits_shape = {.kind = SHAPE_TEXT, .pattern = BIT_RANGE_PATTERN, .also = ALSO_WHOLE};

static const char *const kind_words[] = {
	[NODE_SCALAR] = "a single value",
	[NODE_LIST] = "a list",
	[NODE_MAPPING] = "a mapping",
};

void *reader_array(struct reader *reader, size_t count, size_t size)
{
	void *array = arena_array(reader->arena, count, size);
	if (array == NULL)
		diagnose(reader->diagnostics, RULE_OUT_OF_MEMORY, (struct place){reader->plan->source, 0, 0}, "memory is out");
	return array;
}

bool expect_kind(struct reader *reader, const struct node *node, enum node_kind kind, const char *what)
{
	if (node->kind == kind)
		return true;
	const bool absent = node->kind == NODE_SCALAR && node->length == 0;
	diagnose(reader->diagnostics, RULE_NODE_KIND, node->place, "%s: wanted %s, found %s", what, kind_words[kind],
	         absent ? "nothing" : kind_words[node->kind]);
	const char *colon = node->kind == NODE_SCALAR ? strchr(node->text, ':') : NULL;
	if (kind == NODE_MAPPING && colon != NULL && colon[1] != ' ' && colon[1] != '\0')
		diagnose_hint(reader->diagnostics, "put a space after ':'");
	else if (kind == NODE_MAPPING)
		diagnose_hint(reader->diagnostics, "a mapping is { key: value, ... }, or key: value on lines of their own");
	return false;
}

bool expect_values(struct reader *reader, const struct node *node, const char *what)
{
	if (expect_kind(reader, node, NODE_LIST, what))
		return true;
	if (node->kind == NODE_SCALAR && node->length > 0)
		diagnose_hint(reader->diagnostics, "write [%s]", SHORT(node->text));
	return false;
}

static size_t find_key(const struct key *keys, size_t count, const char *name)
{
	for (size_t index = 0; index < count; index++)
		if (keys[index].need != KEY_UNUSED && strcmp(keys[index].name, name) == 0)
			return index;
	return SIZE_MAX;
}

// Collects the names of the keys that a mapping may have.
static size_t key_names(const struct key *keys, size_t count, const char *names[KEYS_LIMIT])
{
	size_t name_count = 0;
	for (size_t index = 0; index < count && name_count < KEYS_LIMIT; index++)
		if (keys[index].need == KEY_OPTIONAL || keys[index].need == KEY_REQUIRED)
			names[name_count++] = keys[index].name;
	return name_count;
}

// The key that stands before a ':' without the space that YAML wants after it ("cells:3"), or NULL.
static const char *glued_key(const char *text, const char *const *names, size_t count)
{
	const char *colon = strchr(text, ':');
	for (size_t index = 0; colon != NULL && index < count; index++)
		if (strlen(names[index]) == (size_t)(colon - text) && strncmp(names[index], text, (size_t)(colon - text)) == 0)
			return names[index];
	return NULL;
}

static void report_unknown_key(struct reader *reader, const struct node *key, const char *what, const struct key *keys,
                               size_t count)
{
	const char *names[KEYS_LIMIT];
	const size_t name_count = key_names(keys, count, names);
	diagnose(reader->diagnostics, RULE_UNKNOWN_KEY, key->place, "%s has no key \"%s\"", what, SHORT(key->text));
	if (glued_key(key->text, names, name_count) != NULL)
		diagnose_hint(reader->diagnostics, "put a space after ':'");
	else
		hint_words(reader, key->text, names, name_count);
}

bool key_is_misspelt(const struct node *mapping, const struct key *keys, size_t count, size_t wanted)
{
	const char *names[KEYS_LIMIT];
	const size_t name_count = key_names(keys, count, names);
	for (size_t pair = 0; pair < mapping->count; pair++) {
		const char *text = mapping->pairs[pair].key->text;
		if (find_key(keys, count, text) != SIZE_MAX)
			continue;
		const char *glued = glued_key(text, names, name_count);
		if ((glued != NULL ? glued : nearest_word(text, names, name_count)) == keys[wanted].name)
			return true;
	}
	return false;
}

bool report_elsewhere(struct reader *reader, const struct node *node, const char *what, const struct stray_key *strays, size_t count)
{
	const char *told = NULL;
	for (size_t pair = 0; node->kind == NODE_MAPPING && pair < node->count; pair++)
		for (size_t stray = 0; stray < count; stray++) {
			const struct node *key = node->pairs[pair].key;
			if (strcmp(key->text, strays[stray].name) != 0 || (told != NULL && strcmp(strays[stray].hint, told) == 0))
				continue;
			told = strays[stray].hint;
			diagnose(reader->diagnostics, RULE_UNKNOWN_KEY, key->place, "%s has no key \"%s\"", what, key->text);
			diagnose_hint(reader->diagnostics, "%s", told);
		}
	return told == NULL;
}

bool read_mapping(struct reader *reader, const struct node *node, const char *what, const struct key *keys, size_t count,
                  const struct node **values)
{
	for (size_t index = 0; index < count; index++)
		values[index] = NULL;
	if (!expect_kind(reader, node, NODE_MAPPING, what))
		return false;
	bool complete = true;
	for (size_t pair = 0; pair < node->count; pair++) {
		const struct node *key = node->pairs[pair].key;
		const size_t index = find_key(keys, count, key->text);
		if (index == SIZE_MAX)
			report_unknown_key(reader, key, what, keys, count);
		else if (keys[index].need == KEY_ELSEWHERE)
			complete = false;
		else
			values[index] = node->pairs[pair].value;
	}
	for (size_t index = 0; complete && index < count; index++)
		if (keys[index].need == KEY_REQUIRED && values[index] == NULL && !key_is_misspelt(node, keys, count, index))
			diagnose(reader->diagnostics, RULE_MISSING_KEY, node->place, "%s needs the key \"%s\"", what, keys[index].name);
	return true;
}

bool read_scalar(struct reader *reader, const struct node *node, const char *what, const char **result)
{
	if (!expect_kind(reader, node, NODE_SCALAR, what))
		return false;
	if (node->length == 0) {
		diagnose(reader->diagnostics, RULE_NODE_KIND, node->place, "%s: wanted a single value, found nothing", what);
		return false;
	}
	*result = node->text;
	return true;
}

bool read_whole(struct reader *reader, const struct node *node, const char *what, int64_t least, int64_t most, int64_t *result)
{
	const char *text;
	if (!read_scalar(reader, node, what, &text))
		return false;
	int64_t value;
	if (!whole_number_parse(text, &value)) {
		diagnose(reader->diagnostics, RULE_BAD_NUMBER, node->place, "%s: wanted a whole number from %lld to %lld, found \"%s\"",
		         what, (long long)least, (long long)most, SHORT(text));
		struct quantity quantity;
		if (quantity_parse(text, &quantity) == QUANTITY_OK)
			diagnose_hint(reader->diagnostics, "write the number without a unit");
		return false;
	}
	if (value < least || value > most) {
		diagnose(reader->diagnostics, RULE_BAD_NUMBER, node->place, "%s: wanted a whole number from %lld to %lld, found %s",
		         what, (long long)least, (long long)most, SHORT(text));
		return false;
	}
	*result = value;
	return true;
}

bool read_truth(struct reader *reader, const struct node *node, const char *what, bool *result)
{
	const char *text;
	if (!read_scalar(reader, node, what, &text))
		return false;
	if (truth_parse(text, result))
		return true;
	diagnose(reader->diagnostics, RULE_BAD_CHOICE, node->place, "%s: wanted true or false, found \"%s\"", what, SHORT(text));
	return false;
}

// Puts "a, b or c".
static void put_alternatives(struct text *text, const char *const *words, size_t count)
{
	for (size_t index = 0; index < count; index++)
		text_printf(text, "%s%s", index == 0 ? "" : index + 1 == count ? " or " : ", ", words[index]);
}

static void hint_choices(struct reader *reader, const char *text, const char *const *words, size_t count)
{
	if (!diagnostics_take_hint(reader->diagnostics))
		return;
	const char *near = nearest_word(text, words, count);
	if (near != NULL) {
		diagnose_hint(reader->diagnostics, "did you mean \"%s\"?", near);
		return;
	}
	struct text list = {0};
	put_alternatives(&list, words, count);
	diagnose_hint(reader->diagnostics, "write %s", text_string(&list));
	text_release(&list);
}

bool read_choice(struct reader *reader, const struct node *node, const char *what, const char *const *words, size_t count,
                 size_t *result)
{
	const char *text;
	if (!read_scalar(reader, node, what, &text))
		return false;
	for (size_t index = 0; index < count; index++) {
		if (strcmp(words[index], text) == 0) {
			*result = index;
			return true;
		}
	}
	diagnose(reader->diagnostics, RULE_BAD_CHOICE, node->place, "%s: \"%s\" is none of its choices", what, SHORT(text));
	hint_choices(reader, text, words, count);
	return false;
}

static void hint_units(struct reader *reader, const char *text, enum quantity_status status, unsigned allowed)
{
	const char *names[UNITS_LIMIT];
	size_t count = 0;
	for (unsigned dimension = DIMENSION_FREQUENCY; dimension <= DIMENSION_PPM; dimension++)
		if ((allowed & (1u << dimension)) != 0)
			count += dimension_units((enum dimension)dimension, names + count);
	const char *meant = status == QUANTITY_UNKNOWN_UNIT ? unit_meant(text, names, count) : NULL;
	struct text units = {0};
	put_alternatives(&units, meant != NULL ? &meant : names, meant != NULL ? 1 : count);
	diagnose_hint(reader->diagnostics, meant != NULL ? "write %s" : "give it in %s", text_string(&units));
	text_release(&units);
}

static void hint_quantity(struct reader *reader, const char *text, enum quantity_status status, unsigned allowed)
{
	if (status == QUANTITY_OVERFLOW)
		diagnose_hint(reader->diagnostics, "give it with fewer digits");
	else if (status == QUANTITY_MALFORMED && strchr(text, ',') != NULL)
		diagnose_hint(reader->diagnostics, "decimals follow a point, not a comma");
	else
		hint_units(reader, text, status, allowed);
}

bool read_quantity(struct reader *reader, const struct node *node, const char *what, unsigned allowed, struct quantity *result)
{
	const char *text;
	if (!read_scalar(reader, node, what, &text))
		return false;
	struct quantity quantity;
	const enum quantity_status status = quantity_parse(text, &quantity);
	if (status == QUANTITY_OK && (allowed & (1u << quantity.dimension)) != 0) {
		*result = quantity;
		return true;
	}
	if (status != QUANTITY_OK)
		diagnose(reader->diagnostics, RULE_BAD_QUANTITY, node->place, "%s: %s, found \"%s\"", what,
		         quantity_status_words(status), SHORT(text));
	else
		diagnose(reader->diagnostics, RULE_BAD_QUANTITY, node->place, "%s: \"%s\" has a unit that does not fit here", what,
		         SHORT(text));
	hint_quantity(reader, text, status, allowed);
	return false;
}

bool read_bit_count(struct reader *reader, const struct node *node, const char *what, int64_t least, int64_t most, unsigned *bits)
{
	struct quantity quantity;
	if (!read_quantity(reader, node, what, 1u << DIMENSION_BITS, &quantity))
		return false;
	if (!fraction_is_whole(quantity.value) || quantity.value.numerator < least || quantity.value.numerator > most) {
		diagnose(reader->diagnostics, RULE_BAD_NUMBER, node->place, "%s: wanted %lld to %lld bits, found \"%s\"", what,
		         (long long)least, (long long)most, node->text);
		return false;
	}
	*bits = (unsigned)quantity.value.numerator;
	return true;
}

bool read_time(struct reader *reader, const struct node *node, const char *what, bool positive, struct fraction *seconds)
{
	struct quantity quantity;
	if (!read_quantity(reader, node, what, 1u << DIMENSION_TIME, &quantity))
		return false;
	if (quantity.value.numerator < 0 || (positive && quantity.value.numerator == 0)) {
		diagnose(reader->diagnostics, RULE_BAD_QUANTITY, node->place, "%s: must %s, found \"%s\"", what,
		         positive ? "be above zero" : "not be negative", SHORT(node->text));
		return false;
	}
	*seconds = quantity.value;
	return true;
}

static const struct shape *shape_of(const struct key *key, enum shape_kind kind)
{
	assert(key->shape != NULL && key->shape->kind == kind);
	(void)kind;
	return key->shape;
}

bool key_whole(struct reader *reader, const struct key *key, const struct node *node, int64_t *result)
{
	const struct shape *shape = shape_of(key, SHAPE_WHOLE);
	return node != NULL && read_whole(reader, node, key->name, shape->least, shape->most, result);
}

bool key_truth(struct reader *reader, const struct key *key, const struct node *node, bool *result)
{
	shape_of(key, SHAPE_TRUE);
	return node != NULL && read_truth(reader, node, key->name, result);
}

bool key_choice(struct reader *reader, const struct key *key, const struct node *node, size_t *result)
{
	const struct shape *shape = shape_of(key, SHAPE_CHOICE);
	return node != NULL && read_choice(reader, node, key->name, shape->words, shape->word_count, result);
}

bool key_quantity(struct reader *reader, const struct key *key, const struct node *node, struct quantity *result)
{
	const struct shape *shape = shape_of(key, SHAPE_QUANTITY);
	return node != NULL && read_quantity(reader, node, key->name, shape->dimensions, result);
}

bool key_bit_count(struct reader *reader, const struct key *key, const struct node *node, unsigned *bits)
{
	const struct shape *shape = shape_of(key, SHAPE_BIT_COUNT);
	return node != NULL && read_bit_count(reader, node, key->name, shape->least, shape->most, bits);
}

bool key_time(struct reader *reader, const struct key *key, const struct node *node, struct fraction *seconds)
{
	const struct shape *shape = shape_of(key, SHAPE_QUANTITY);
	return node != NULL && read_time(reader, node, key->name, shape->sign == QUANTITY_POSITIVE, seconds);
}

// For "13..15": the same range as the language writes it.
static void hint_reversed(struct reader *reader, const char *text)
{
	unsigned first, last, unused;
	const char *dots = strstr(text, "..");
	const size_t length = dots != NULL ? (size_t)(dots - text) : 0;
	char low[8];
	if (length == 0 || length >= sizeof low)
		return;
	memcpy(low, text, length);
	low[length] = '\0';
	if (bit_range_parse(low, &first, &unused) && bit_range_parse(dots + 2, &last, &unused) && strstr(dots + 2, "..") == NULL)
		diagnose_hint(reader->diagnostics, "the highest bit comes first: %u..%u", last, first);
}

bool read_bits(struct reader *reader, const struct node *node, const char *text, const char *what, unsigned bits, unsigned *high,
               unsigned *low)
{
	unsigned top, bottom;
	if (!bit_range_parse(text, &top, &bottom)) {
		diagnose(reader->diagnostics, RULE_BAD_BITS, node->place, "%s: wanted one bit or hi..lo, found \"%s\"", what, SHORT(text));
		hint_reversed(reader, text);
		return false;
	}
	if (top >= bits) {
		diagnose(reader->diagnostics, RULE_BAD_BITS, node->place, "%s: there is no bit %u: the highest is %u", what, top, bits - 1);
		return false;
	}
	*high = top;
	*low = bottom;
	return true;
}

size_t find_signal(const struct plan *plan, const char *name)
{
	for (size_t index = 0; index < plan->signal_count; index++)
		if (strcmp(plan->signals[index].name, name) == 0)
			return index;
	return SIZE_MAX;
}

size_t find_field(const struct plan *plan, const char *name)
{
	for (size_t index = 0; index < plan->machine.field_count; index++)
		if (strcmp(plan->machine.fields[index].name, name) == 0)
			return index;
	return SIZE_MAX;
}
