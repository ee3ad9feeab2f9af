#include "plan/read.h"

#include <string.h>

#include "base/arena.h"

enum {
	MACHINE_FORM,
	MACHINE_STATE,
	MACHINE_FIELDS,
	MACHINE_START,
	MACHINE_OUTPUTS,
	MACHINE_ADVANCE,
	MACHINE_CLEAR,
	MACHINE_LINE,
	MACHINE_FRAME,
	MACHINE_KIND,
	MACHINE_KEYS
};

static const struct key machine_keys[MACHINE_KEYS] = {
	[MACHINE_FORM] = {"form", KEY_REQUIRED},       [MACHINE_STATE] = {"state", KEY_REQUIRED},
	[MACHINE_FIELDS] = {"fields", KEY_OPTIONAL},   [MACHINE_START] = {"start", KEY_OPTIONAL},
	[MACHINE_OUTPUTS] = {"outputs", KEY_OPTIONAL}, [MACHINE_ADVANCE] = {"advance", KEY_OPTIONAL},
	[MACHINE_CLEAR] = {"clear", KEY_OPTIONAL},     [MACHINE_LINE] = {"line", KEY_LATER},
	[MACHINE_FRAME] = {"frame", KEY_LATER},        [MACHINE_KIND] = {"kind", KEY_LATER},
};

static void read_state_bits(struct reader *reader, const struct node *node)
{
	struct quantity quantity;
	if (!read_quantity(reader, node, "state", 1u << DIMENSION_BITS, &quantity))
		return;
	if (!fraction_is_whole(quantity.value) || quantity.value.numerator < 1 || quantity.value.numerator > LIMIT_STATE_BITS) {
		diagnose(reader->diagnostics, RULE_BAD_NUMBER, node->place, "state: wanted 1 to %d bits, found \"%s\"", LIMIT_STATE_BITS,
		         SHORT(node->text));
		return;
	}
	reader->plan->machine.line.state_bits = (unsigned)quantity.value.numerator;
}

static void read_fields(struct reader *reader, const struct node *node)
{
	struct machine_plan *machine = &reader->plan->machine;
	if (!expect_kind(reader, node, NODE_MAPPING, "fields"))
		return;
	if (node->count > LIMIT_FIELDS) {
		diagnose(reader->diagnostics, RULE_TOO_MANY, node->place, "fields: wanted at most %d, found %zu", LIMIT_FIELDS, node->count);
		return;
	}
	machine->fields = reader_array(reader, node->count, sizeof *machine->fields);
	if (machine->fields == NULL)
		return;
	for (size_t index = 0; index < node->count; index++) {
		const struct node *key = node->pairs[index].key, *value = node->pairs[index].value;
		struct field *field = &machine->fields[index];
		const char *text;
		field->name = key->text;
		field->place = key->place;
		machine->field_count = index + 1;
		if (check_identifier(reader, key, "field") && read_scalar(reader, value, "field", &text) && machine->line.state_bits > 0)
			read_bits(reader, value, text, "field", machine->line.state_bits, &field->high, &field->low);
	}
}

static void read_start(struct reader *reader, const struct node *node)
{
	struct machine_plan *machine = &reader->plan->machine;
	int64_t start;
	if (machine->line.state_bits == 0 || !read_whole(reader, node, "start", 0, ((int64_t)1 << machine->line.state_bits) - 1, &start))
		return;
	machine->has_start = true;
	machine->start = (uint32_t)start;
	machine->start_place = node->place;
}

static void read_advance(struct reader *reader, const struct node *advance, const struct node *clear)
{
	struct machine_plan *machine = &reader->plan->machine;
	static const char *const advances[] = {[ADVANCE_TABLE] = "table", [ADVANCE_COUNT] = "count"};
	static const char *const clears[] = {[CLEAR_SYNC] = "sync", [CLEAR_ASYNC] = "async"};
	size_t choice;
	bool known = true;
	if (advance != NULL) {
		known = read_choice(reader, advance, "advance", advances, COUNT_OF(advances), &choice);
		machine->line.advance = known ? (enum advance)choice : ADVANCE_TABLE;
	}
	if (clear == NULL || !read_choice(reader, clear, "clear", clears, COUNT_OF(clears), &choice))
		return;
	machine->line.clear = (enum clear_kind)choice;
	if (known && machine->line.advance == ADVANCE_TABLE) {
		diagnose(reader->diagnostics, RULE_CLEAR_WITHOUT_COUNT, clear->place, "clear is for a counter, but this machine advances by table");
		diagnose_hint(reader->diagnostics, "add advance: count, or leave clear out");
	}
}

// True if the form is one that this version carries out.
static bool read_form(struct reader *reader, const struct node *node)
{
	static const char *const forms[] = {"loop", "line-frame"};
	size_t choice = 0;
	const bool known = read_choice(reader, node, "form", forms, COUNT_OF(forms), &choice);
	reader->line_frame = choice == 1;
	if (reader->line_frame)
		diagnose(reader->diagnostics, RULE_NOT_YET, node->place, "form: line-frame is not carried out by this version yet");
	return known && choice == 0;
}

static const struct node *form_of(const struct node *machine)
{
	const struct node *form = machine->kind == NODE_MAPPING ? node_value(machine, "form") : NULL;
	return form != NULL && form->kind == NODE_SCALAR ? form : NULL;
}

void read_machine(struct reader *reader, const struct node *node)
{
	struct machine_plan *machine = &reader->plan->machine;
	const struct node *values[MACHINE_KEYS];
	const size_t errors_before = diagnostics_error_count(reader->diagnostics);
	machine->place = node->place;
	const struct node *form = form_of(node);
	if (form != NULL && !read_form(reader, form))
		return;
	if (!read_mapping(reader, node, "machine", machine_keys, MACHINE_KEYS, values))
		return;
	if (values[MACHINE_FORM] != NULL && form == NULL)
		read_form(reader, values[MACHINE_FORM]);
	if (values[MACHINE_STATE] != NULL)
		read_state_bits(reader, values[MACHINE_STATE]);
	if (values[MACHINE_FIELDS] != NULL)
		read_fields(reader, values[MACHINE_FIELDS]);
	reader->machine_known = diagnostics_error_count(reader->diagnostics) == errors_before;
	if (values[MACHINE_START] != NULL)
		read_start(reader, values[MACHINE_START]);
	static const char *const outputs[] = {[OUTPUTS_REGISTERED] = "registered", [OUTPUTS_DIRECT] = "direct"};
	size_t choice;
	if (values[MACHINE_OUTPUTS] != NULL &&
	    read_choice(reader, values[MACHINE_OUTPUTS], "outputs", outputs, COUNT_OF(outputs), &choice))
		machine->line.outputs = (enum outputs)choice;
	read_advance(reader, values[MACHINE_ADVANCE], values[MACHINE_CLEAR]);
}

const char *stage_name(enum stage stage)
{
	return stage == STAGE_LINE ? "line" : "frame";
}

unsigned machine_stages(const struct machine_plan *machine)
{
	return machine->form == FORM_LINE_FRAME ? STAGE_COUNT : 1;
}

const struct stage_plan *machine_stage(const struct machine_plan *machine, enum stage stage)
{
	return stage == STAGE_LINE ? &machine->line : &machine->frame;
}

uint32_t field_mask(const struct field *field)
{
	const uint32_t ones = (uint32_t)(((uint64_t)1 << (field->high - field->low + 1)) - 1);
	return ones << field->low;
}

uint32_t field_value(const struct field *field, uint32_t state)
{
	return (state & field_mask(field)) >> field->low;
}
