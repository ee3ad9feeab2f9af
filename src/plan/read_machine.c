#include "plan/read.h"

#include <string.h>

#include "base/arena.h"
#include "plan/read_stage.h"

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

static const char *const forms[] = {[FORM_LOOP] = "loop", [FORM_LINE_FRAME] = "line-frame"};

#define ONE_FORM(form) SHAPE(.kind = SHAPE_CHOICE, .words = &forms[form], .word_count = 1)
#define FORM_KEY(form) \
	{"form", KEY_REQUIRED, ONE_FORM(form), \
	 "loop: one stage, with a state for each cell of the frame; line-frame: two, one for the line and one for the frame"}
#define FIELDS_KEY {"fields", KEY_OPTIONAL, &fields_shape, "Names for bits of the (line stage's) state, as { at: 10..0 }"}
#define START_KEY \
	{"start", KEY_OPTIONAL, WHOLE(0, (1 << LIMIT_STATE_BITS) - 1), \
	 "The (line stage's) state in the first cell of the frame (of every line): what a cleared latch holds"}
#define ELSEWHERE(name) {name, KEY_ELSEWHERE, NULL, NULL}

static const struct shape fields_shape = {
	.kind = SHAPE_NAMED, .name = &identifier_shape, .item = &bits_shape, .most = LIMIT_FIELDS,
};

static const struct key loop_keys[MACHINE_KEYS] = {
	[MACHINE_FORM] = FORM_KEY(FORM_LOOP),
	[MACHINE_STATE] = STATE_KEY,
	[MACHINE_FIELDS] = FIELDS_KEY,
	[MACHINE_START] = START_KEY,
	[MACHINE_OUTPUTS] = OUTPUTS_KEY,
	[MACHINE_ADVANCE] = ADVANCE_KEY,
	[MACHINE_CLEAR] = CLEAR_KEY,
	[MACHINE_LINE] = ELSEWHERE("line"),
	[MACHINE_FRAME] = ELSEWHERE("frame"),
	[MACHINE_KIND] = ELSEWHERE("kind"),
};

#define TWO_STAGES_ONLY "a loop machine has one stage and no kinds: give state and the rest here, or make it form: line-frame"

static const struct stray_key loop_strays[] = {
	{"line", TWO_STAGES_ONLY},
	{"frame", TWO_STAGES_ONLY},
	{"kind", TWO_STAGES_ONLY},
};

#define LINE_FRAME_KEYS(need) \
	[MACHINE_FORM] = FORM_KEY(FORM_LINE_FRAME), \
	[MACHINE_STATE] = ELSEWHERE("state"), \
	[MACHINE_FIELDS] = FIELDS_KEY, \
	[MACHINE_START] = START_KEY, \
	[MACHINE_OUTPUTS] = ELSEWHERE("outputs"), \
	[MACHINE_ADVANCE] = ELSEWHERE("advance"), \
	[MACHINE_CLEAR] = ELSEWHERE("clear"), \
	[MACHINE_LINE] = {"line", KEY_REQUIRED, &stage_shape, "The line stage: goes through the cells of a line"}, \
	[MACHINE_FRAME] = {"frame", KEY_REQUIRED, &stage_shape, "The frame stage: goes from line to line"}, \
	[MACHINE_KIND] = {"kind", need, BIT_COUNT(0, LIMIT_KIND_BITS), \
	                  "The bits that tell line types apart; when left out, as many as the line types need"}

static const struct key line_frame_keys[MACHINE_KEYS] = {LINE_FRAME_KEYS(KEY_OPTIONAL)};
static const struct key lineless_line_frame_keys[MACHINE_KEYS] = {LINE_FRAME_KEYS(KEY_REQUIRED)};

static const struct shape loop_machine_shape = {
	.kind = SHAPE_MAPPING, .title = "loop machine", .keys = loop_keys, .key_count = MACHINE_KEYS, BONDS(CLEAR_BOND),
};
static const struct shape line_frame_machine_shape = {
	.kind = SHAPE_MAPPING, .title = "line-frame machine", .keys = line_frame_keys, .key_count = MACHINE_KEYS,
};
// settle_board looks for the kind.
static const struct shape lineless_line_frame_shape = {
	.kind = SHAPE_MAPPING, .title = "line-frame machine of a board without lines", .keys = lineless_line_frame_keys, .key_count = MACHINE_KEYS,
};
static const struct shape *const machine_shapes[] = {&loop_machine_shape, &line_frame_machine_shape};
static const struct shape *const lineless_machine_shapes[] = {&loop_machine_shape, &lineless_line_frame_shape};

const struct shape machine_shape = {.kind = SHAPE_EITHER, .shapes = machine_shapes, .shape_count = COUNT_OF(machine_shapes)};
const struct shape lineless_machine_shape = {
	.kind = SHAPE_EITHER, .shapes = lineless_machine_shapes, .shape_count = COUNT_OF(lineless_machine_shapes),
};

#define EACH_STAGE_HAS_ITS_OWN(key) "each stage has its own: write line: { " key ": ... } and frame: { " key ": ... }"

static const struct stray_key line_frame_strays[] = {
	{"state", EACH_STAGE_HAS_ITS_OWN("state")},
	{"outputs", EACH_STAGE_HAS_ITS_OWN("outputs")},
	{"advance", EACH_STAGE_HAS_ITS_OWN("advance")},
	{"clear", EACH_STAGE_HAS_ITS_OWN("clear")},
};

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

// Settles the form. False after reporting; a form that is missing is left to read_mapping.
static bool read_form(struct reader *reader, const struct node *node)
{
	struct machine_plan *machine = &reader->plan->machine;
	size_t choice = FORM_LOOP;
	if (node->kind != NODE_MAPPING)
		return true;
	const struct node *form = node_value(node, "form");
	if (form != NULL && !read_choice(reader, form, "form", forms, COUNT_OF(forms), &choice))
		return false;
	if (form == NULL && (node_value(node, "line") != NULL || node_value(node, "frame") != NULL))
		choice = FORM_LINE_FRAME;
	machine->form = (enum machine_form)choice;
	reader->form_known = true;
	return true;
}

// Sorts the machine's keys, and each stage's own. False if it is no mapping.
static bool read_nodes(struct reader *reader, const struct node *node, const struct node **values, struct stage_nodes *line,
                       struct stage_nodes *frame)
{
	const bool is_said = node->kind == NODE_MAPPING && node_value(node, "form") != NULL;
	if (reader->plan->machine.form == FORM_LOOP) {
		const char *what = is_said ? "a loop machine" : "a machine";
		report_elsewhere(reader, node, what, loop_strays, COUNT_OF(loop_strays));
		if (!read_mapping(reader, node, what, loop_keys, MACHINE_KEYS, values))
			return false;
		*line = (struct stage_nodes){values[MACHINE_STATE], values[MACHINE_OUTPUTS], values[MACHINE_ADVANCE], values[MACHINE_CLEAR]};
		return true;
	}
	const char *what = is_said ? "a line-frame machine" : "a machine";
	report_elsewhere(reader, node, what, line_frame_strays, COUNT_OF(line_frame_strays));
	if (!read_mapping(reader, node, what, line_frame_keys, MACHINE_KEYS, values))
		return false;
	if (values[MACHINE_LINE] != NULL)
		read_stage_nodes(reader, values[MACHINE_LINE], STAGE_LINE, line);
	if (values[MACHINE_FRAME] != NULL)
		read_stage_nodes(reader, values[MACHINE_FRAME], STAGE_FRAME, frame);
	reader->kind = values[MACHINE_KIND];
	return true;
}

void read_machine(struct reader *reader, const struct node *node)
{
	struct machine_plan *machine = &reader->plan->machine;
	const struct node *values[MACHINE_KEYS];
	struct stage_nodes line = {0}, frame = {0};
	const size_t errors_before = diagnostics_error_count(reader->diagnostics);
	machine->place = node->place;
	if (!read_form(reader, node) || !read_nodes(reader, node, values, &line, &frame))
		return;
	read_state_bits(reader, line.state, &machine->line);
	read_state_bits(reader, frame.state, &machine->frame);
	if (values[MACHINE_FIELDS] != NULL)
		read_fields(reader, values[MACHINE_FIELDS]);
	reader->machine_known = diagnostics_error_count(reader->diagnostics) == errors_before;
	if (values[MACHINE_START] != NULL)
		read_start(reader, values[MACHINE_START]);
	read_outputs(reader, line.outputs, &machine->line);
	read_outputs(reader, frame.outputs, &machine->frame);
	const bool line_known = read_advance(reader, &line, STAGE_LINE), frame_known = read_advance(reader, &frame, STAGE_FRAME);
	reader->words_known = reader->machine_known && line_known && frame_known;
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
