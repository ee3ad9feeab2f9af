#include "plan/read.h"

#include <stdlib.h>
#include <string.h>

#include "base/arena.h"

enum { SIGNAL_ROLE, SIGNAL_ACTIVE, SIGNAL_LEAD, SIGNAL_FROM, SIGNAL_STAGE, SIGNAL_KEYS };

enum { FROM_KEY_FIELD, FROM_KEY_CODES, FROM_KEYS };

static const char *const auto_word[] = {"auto"};
static const char *const data_word[] = {"data"};
static const char *const levels[] = {"low", "high"};

static const char *const role_words[ROLE_COUNT] = {
	[ROLE_PLAIN] = "plain",
	[ROLE_COMPOSITE_SYNC] = "composite sync",
	[ROLE_HORIZONTAL_SYNC] = "horizontal sync",
	[ROLE_VERTICAL_SYNC] = "vertical sync",
	[ROLE_BLANKING] = "blanking",
	[ROLE_BURST_GATE] = "burst gate",
	[ROLE_STRETCH] = "stretch",
};

static const struct key from_keys[FROM_KEYS] = {
	[FROM_KEY_FIELD] = {"field", KEY_REQUIRED, &identifier_shape, "A field of the (line stage's) state"},
	[FROM_KEY_CODES] = {"codes", KEY_REQUIRED,
	                    EITHER(SET_OF(WHOLE(0, (1 << LIMIT_STATE_BITS) - 1), 1, INT64_MAX), CHOICE(auto_word)),
	                    "The codes of the field at which the signal is asserted; auto: the program chooses them"},
};

static const struct shape from_field_shape = {
	.kind = SHAPE_MAPPING, .title = "field and codes", .keys = from_keys, .key_count = FROM_KEYS,
};

#define SIGNAL_KEYS_OF_BOTH \
	[SIGNAL_ROLE] = {"role", KEY_REQUIRED, CHOICE(role_words), "What the signal is for; each role but plain at most once"}, \
	[SIGNAL_ACTIVE] = {"active", KEY_REQUIRED, CHOICE(levels), "The level of the asserted pin"}, \
	[SIGNAL_LEAD] = {"lead", KEY_OPTIONAL, QUANTITY(IN_CELLS, QUANTITY_SIGNED), \
	                 "How many cells before the timeline the pin must show it, as hardware further down delays it; 0 if left out"}, \
	[SIGNAL_FROM] = {"from", KEY_OPTIONAL, EITHER(CHOICE(data_word), &from_field_shape), \
	                 "data (what it is when left out): a bit of its own in the word; { field, codes }: decoded from the state"}

static const struct key signal_keys[SIGNAL_KEYS] = {
	SIGNAL_KEYS_OF_BOTH,
	[SIGNAL_STAGE] = {"stage", KEY_OPTIONAL, &stage_word_shape,
	                  "Of a line-frame machine: line (what it is when left out) or frame, the stage whose word has the signal"},
};

static const struct key loop_signal_keys[SIGNAL_KEYS] = {
	SIGNAL_KEYS_OF_BOTH,
	[SIGNAL_STAGE] = {"stage", KEY_ELSEWHERE, NULL, NULL},
};

static const struct shape signal_shape = {
	.kind = SHAPE_MAPPING, .title = "signal", .keys = signal_keys, .key_count = SIGNAL_KEYS,
	BONDS({.key = "stage", .with = "frame", .needs = "from", .optional = true, .shape = CHOICE(data_word)}),
};
static const struct shape loop_signal_shape = {
	.kind = SHAPE_MAPPING, .title = "signal of a loop machine", .keys = loop_signal_keys, .key_count = SIGNAL_KEYS,
};

#define SIGNALS_OF(shape) .kind = SHAPE_NAMED, .name = &identifier_shape, .item = &(shape), .most = LIMIT_SIGNALS

const struct shape signals_shape = {SIGNALS_OF(signal_shape), .in_loop = SHAPE(SIGNALS_OF(loop_signal_shape))};

static const struct stray_key loop_signal_strays[] = {
	{"stage", "a loop machine has one stage: leave stage out, or make the machine form: line-frame"},
};

const char *role_name(enum role role)
{
	return role_words[role];
}

bool signal_is_data(const struct signal *signal)
{
	return signal->origin == FROM_DATA;
}

static void read_lead(struct reader *reader, const struct node *node, struct signal *signal)
{
	struct quantity quantity;
	if (!key_quantity(reader, &signal_keys[SIGNAL_LEAD], node, &quantity))
		return;
	if (!fraction_is_whole(quantity.value) || llabs(quantity.value.numerator) > LIMIT_LEAD_CELLS) {
		diagnose(reader->diagnostics, RULE_BAD_QUANTITY, node->place,
		         "lead: wanted a whole number of cells from -%d to %d, found \"%s\"", LIMIT_LEAD_CELLS, LIMIT_LEAD_CELLS,
		         SHORT(node->text));
		return;
	}
	signal->lead_cells = quantity.value.numerator;
}

static int compare_codes(const void *left, const void *right)
{
	const uint32_t a = *(const uint32_t *)left, b = *(const uint32_t *)right;
	return (a > b) - (a < b);
}

static void read_code_list(struct reader *reader, const struct node *node, struct signal *signal)
{
	const struct field *field = &reader->plan->machine.fields[signal->field];
	const int64_t most = ((int64_t)1 << (field->high - field->low + 1)) - 1;
	if (node->count == 0) {
		diagnose(reader->diagnostics, RULE_BAD_CODE, node->place, "codes: wanted at least one code, found none");
		return;
	}
	uint32_t *codes = reader_array(reader, node->count, sizeof *codes);
	if (codes == NULL)
		return;
	for (size_t index = 0; index < node->count; index++) {
		const struct node *item = node->items[index];
		int64_t value;
		const char *text;
		if (!read_scalar(reader, item, "code", &text))
			return;
		if (!whole_number_parse(text, &value) || value > most) {
			diagnose(reader->diagnostics, RULE_BAD_CODE, item->place, "code: wanted 0 to %lld, which field \"%s\" holds, found \"%s\"",
			         (long long)most, SHORT(field->name), SHORT(text));
			return;
		}
		codes[index] = (uint32_t)value;
	}
	qsort(codes, node->count, sizeof *codes, compare_codes);
	for (size_t index = 1; index < node->count; index++)
		if (codes[index] == codes[index - 1]) {
			diagnose(reader->diagnostics, RULE_BAD_CODE, node->place, "codes: code %u is listed twice", (unsigned)codes[index]);
			return;
		}
	signal->codes = codes;
	signal->code_count = node->count;
}

static void read_field_origin(struct reader *reader, const struct node *node, struct signal *signal)
{
	const struct node *values[FROM_KEYS];
	const char *name;
	signal->origin = FROM_FIELD;
	if (!read_mapping(reader, node, "from", from_keys, FROM_KEYS, values) || values[FROM_KEY_FIELD] == NULL ||
	    !read_scalar(reader, values[FROM_KEY_FIELD], "field", &name) || !reader->machine_known)
		return;
	signal->field = find_field(reader->plan, name);
	if (signal->field == SIZE_MAX) {
		const char *names[LIMIT_FIELDS];
		for (size_t index = 0; index < reader->plan->machine.field_count; index++)
			names[index] = reader->plan->machine.fields[index].name;
		diagnose(reader->diagnostics, RULE_UNKNOWN_FIELD, values[FROM_KEY_FIELD]->place, "the machine has no field \"%s\"",
		         SHORT(name));
		hint_words(reader, name, names, reader->plan->machine.field_count);
		signal->field = 0;
		return;
	}
	const struct node *codes = values[FROM_KEY_CODES];
	if (codes == NULL)
		return;
	if (codes->kind == NODE_SCALAR && strcmp(codes->text, "auto") == 0)
		signal->auto_codes = true;
	else if (expect_values(reader, codes, "codes (or auto)"))
		read_code_list(reader, codes, signal);
}

static void read_origin(struct reader *reader, const struct node *node, struct signal *signal)
{
	if (node->kind == NODE_SCALAR && strcmp(node->text, "data") == 0)
		return;
	if (node->kind == NODE_MAPPING) {
		read_field_origin(reader, node, signal);
		return;
	}
	if (expect_kind(reader, node, NODE_SCALAR, "from (data, or a mapping with field and codes)"))
		diagnose(reader->diagnostics, RULE_BAD_CHOICE, node->place, "from: wanted data or { field: NAME, codes: [...] }, found \"%s\"",
		         SHORT(node->text));
}

static void take_role(struct reader *reader, const struct node *node, size_t index, enum role role)
{
	struct plan *plan = reader->plan;
	plan->signals[index].role = role;
	if (role == ROLE_PLAIN)
		return;
	if (plan->role_signal[role] >= 0) {
		const struct signal *other = &plan->signals[plan->role_signal[role]];
		diagnose(reader->diagnostics, RULE_DOUBLED_ROLE, node->place, "signal \"%s\" has role %s, which signal \"%s\" has already",
		         SHORT(plan->signals[index].name), role_words[role], SHORT(other->name));
		diagnose_also(reader->diagnostics, other->place, "signal \"%s\"", SHORT(other->name));
		return;
	}
	plan->role_signal[role] = (int)index;
}

// Reads the stage of a signal whose origin is known.
static void read_signal_stage(struct reader *reader, const struct node *node, struct signal *signal)
{
	enum stage stage;
	if (!read_stage_word(reader, node, &stage))
		return;
	signal->stage = stage;
	if (stage == STAGE_LINE || signal->origin == FROM_DATA)
		return;
	diagnose(reader->diagnostics, RULE_FRAME_FIELD, node->place,
	         "signal \"%s\" comes from a field, which is of the line stage's state, and yet has stage: frame", signal->name);
	diagnose_hint(reader->diagnostics, "leave stage out, or from: a frame signal has a bit of its own in the frame stage's word");
}

static void read_signal(struct reader *reader, const struct node *node, size_t index)
{
	struct signal *signal = &reader->plan->signals[index];
	const struct node *values[SIGNAL_KEYS];
	const bool loop = reader->form_known && reader->plan->machine.form == FORM_LOOP;
	if (loop)
		report_elsewhere(reader, node, "a signal of a loop machine", loop_signal_strays, COUNT_OF(loop_signal_strays));
	if (!read_mapping(reader, node, "a signal", loop ? loop_signal_keys : signal_keys, SIGNAL_KEYS, values))
		return;
	size_t choice;
	if (key_choice(reader, &signal_keys[SIGNAL_ROLE], values[SIGNAL_ROLE], &choice))
		take_role(reader, values[SIGNAL_ROLE], index, (enum role)choice);
	if (key_choice(reader, &signal_keys[SIGNAL_ACTIVE], values[SIGNAL_ACTIVE], &choice))
		signal->active_high = choice == 1;
	read_lead(reader, values[SIGNAL_LEAD], signal);
	if (values[SIGNAL_FROM] != NULL)
		read_origin(reader, values[SIGNAL_FROM], signal);
	if (values[SIGNAL_STAGE] != NULL)
		read_signal_stage(reader, values[SIGNAL_STAGE], signal);
}

static void check_stretch_signal(struct reader *reader)
{
	const struct plan *plan = reader->plan;
	const int index = plan->role_signal[ROLE_STRETCH];
	if (index < 0 || !reader->clock_known || plan->clock.stretch_ticks > 0)
		return;
	diagnose(reader->diagnostics, RULE_STRETCH_WITHOUT_LENGTH, plan->signals[index].place,
	         "signal \"%s\" has role stretch, but the clock does not say how long a stretch is",
	         SHORT(plan->signals[index].name));
	diagnose_hint(reader->diagnostics, "add stretch: N dots (or ticks) to clock");
}

void read_signals(struct reader *reader, const struct node *node)
{
	struct plan *plan = reader->plan;
	const size_t errors_before = diagnostics_error_count(reader->diagnostics);
	if (!expect_kind(reader, node, NODE_MAPPING, "signals"))
		return;
	if (node->count > LIMIT_SIGNALS) {
		diagnose(reader->diagnostics, RULE_TOO_MANY, node->place, "signals: wanted at most %d, found %zu", LIMIT_SIGNALS, node->count);
		return;
	}
	plan->signals = reader_array(reader, node->count, sizeof *plan->signals);
	if (plan->signals == NULL)
		return;
	for (size_t index = 0; index < node->count; index++) {
		const struct node *key = node->pairs[index].key;
		plan->signals[index].name = key->text;
		plan->signals[index].place = key->place;
		plan->signal_count = index + 1;
		check_identifier(reader, key, "signal");
		read_signal(reader, node->pairs[index].value, index);
	}
	check_stretch_signal(reader);
	reader->signals_known = diagnostics_error_count(reader->diagnostics) == errors_before;
}
