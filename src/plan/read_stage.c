#include "plan/read_stage.h"

enum { STAGED_STATE, STAGED_OUTPUTS, STAGED_ADVANCE, STAGED_CLEAR, STAGED_FIELDS, STAGED_START, STAGED_HOLD, STAGED_KEYS };

static const char *const outputs_words[] = {[OUTPUTS_REGISTERED] = "registered", [OUTPUTS_DIRECT] = "direct"};
static const char *const advance_words[] = {[ADVANCE_TABLE] = "table", [ADVANCE_COUNT] = "count"};
static const char *const clear_words[] = {[CLEAR_SYNC] = "sync", [CLEAR_ASYNC] = "async"};
static const char *const stage_words[] = {[STAGE_LINE] = "line", [STAGE_FRAME] = "frame"};

const struct shape state_bits_shape = {.kind = SHAPE_BIT_COUNT, .least = 1, .most = LIMIT_STATE_BITS};
const struct shape outputs_shape = {.kind = SHAPE_CHOICE, .words = outputs_words, .word_count = COUNT_OF(outputs_words)};
const struct shape advance_shape = {.kind = SHAPE_CHOICE, .words = advance_words, .word_count = COUNT_OF(advance_words)};
const struct shape count_shape = {.kind = SHAPE_CHOICE, .words = &advance_words[ADVANCE_COUNT], .word_count = 1};
const struct shape clear_shape = {.kind = SHAPE_CHOICE, .words = clear_words, .word_count = COUNT_OF(clear_words)};
const struct shape stage_word_shape = {.kind = SHAPE_CHOICE, .words = stage_words, .word_count = COUNT_OF(stage_words)};

static const struct key stage_keys[STAGED_KEYS] = {
	[STAGED_STATE] = STATE_KEY,
	[STAGED_OUTPUTS] = OUTPUTS_KEY,
	[STAGED_ADVANCE] = ADVANCE_KEY,
	[STAGED_CLEAR] = CLEAR_KEY,
	[STAGED_FIELDS] = {"fields", KEY_ELSEWHERE, NULL, NULL},
	[STAGED_START] = {"start", KEY_ELSEWHERE, NULL, NULL},
	[STAGED_HOLD] = {"hold", KEY_ELSEWHERE, NULL, NULL},
};

const struct shape stage_shape = {
	.kind = SHAPE_MAPPING, .title = "stage", .keys = stage_keys, .key_count = STAGED_KEYS, BONDS(CLEAR_BOND),
};

#define IN_REGIONS "hold stands in the regions of lines, and holds fields of the line stage's state"

static const struct stray_key line_strays[] = {
	{"fields", "fields of the line stage's state stand in machine, beside line and frame"},
	{"start", "start, a state of the line stage, stands in machine, beside line and frame"},
	{"hold", IN_REGIONS},
};

static const struct stray_key frame_strays[] = {
	{"fields", "only the line stage's state has fields: they stand in machine, beside line and frame"},
	{"start", "start is a state of the line stage and stands in machine, beside line and frame; the frame stage starts at 0"},
	{"hold", IN_REGIONS},
};

void read_stage_nodes(struct reader *reader, const struct node *node, enum stage stage, struct stage_nodes *nodes)
{
	const struct node *values[STAGED_KEYS];
	const char *what = stage == STAGE_LINE ? "the line stage" : "the frame stage";
	if (stage == STAGE_LINE)
		report_elsewhere(reader, node, what, line_strays, COUNT_OF(line_strays));
	else
		report_elsewhere(reader, node, what, frame_strays, COUNT_OF(frame_strays));
	if (read_mapping(reader, node, what, stage_keys, STAGED_KEYS, values))
		*nodes = (struct stage_nodes){values[STAGED_STATE], values[STAGED_OUTPUTS], values[STAGED_ADVANCE], values[STAGED_CLEAR]};
}

void read_state_bits(struct reader *reader, const struct node *node, struct stage_plan *stage)
{
	if (node == NULL)
		return;
	stage->place = node->place;
	key_bit_count(reader, &stage_keys[STAGED_STATE], node, &stage->state_bits);
}

void read_outputs(struct reader *reader, const struct node *node, struct stage_plan *stage)
{
	size_t choice;
	if (key_choice(reader, &stage_keys[STAGED_OUTPUTS], node, &choice))
		stage->outputs = (enum outputs)choice;
}

bool read_advance(struct reader *reader, const struct stage_nodes *nodes, enum stage stage)
{
	struct machine_plan *machine = &reader->plan->machine;
	struct stage_plan *plan = stage == STAGE_LINE ? &machine->line : &machine->frame;
	size_t choice = ADVANCE_TABLE;
	const bool known = nodes->advance == NULL || key_choice(reader, &stage_keys[STAGED_ADVANCE], nodes->advance, &choice);
	plan->advance = (enum advance)choice;
	if (!key_choice(reader, &stage_keys[STAGED_CLEAR], nodes->clear, &choice))
		return known;
	plan->clear = (enum clear_kind)choice;
	if (known && plan->advance == ADVANCE_TABLE) {
		diagnose(reader->diagnostics, RULE_CLEAR_WITHOUT_COUNT, nodes->clear->place,
		         "clear is for a counter, but %s advances by table", machine->form == FORM_LOOP ? "this machine"
		                                                             : stage == STAGE_LINE     ? "the line stage"
		                                                                                       : "the frame stage");
		diagnose_hint(reader->diagnostics, "add advance: count, or leave clear out");
	}
	return known;
}

bool read_stage_word(struct reader *reader, const struct node *node, enum stage *result)
{
	size_t choice;
	if (!read_choice(reader, node, "stage", stage_words, COUNT_OF(stage_words), &choice))
		return false;
	*result = (enum stage)choice;
	return true;
}

// Reads how many kind bits there are, at least `needed`. False after reporting.
static bool read_kind_bits(struct reader *reader, unsigned needed, unsigned *bits)
{
	const size_t types = reader->plan->line_count;
	unsigned asked;
	if (!read_bit_count(reader, reader->kind, "kind", 0, LIMIT_KIND_BITS, &asked))
		return false;
	if (asked < needed) {
		diagnose(reader->diagnostics, RULE_KIND_SHORT, reader->kind->place, "kind: %zu line types need %u bit%s, found \"%s\"", types,
		         needed, needed == 1 ? "" : "s", reader->kind->text);
		diagnose_hint(reader->diagnostics, "write kind: %u bit%s, or leave kind out: it then has as many as the line types need", needed,
		              needed == 1 ? "" : "s");
		return false;
	}
	*bits = asked;
	return true;
}

static bool check_address_bits(struct reader *reader)
{
	const struct machine_plan *machine = &reader->plan->machine;
	const unsigned bits = machine->line.state_bits + machine->kind_bits;
	if (bits <= LIMIT_STATE_BITS)
		return true;
	diagnose(reader->diagnostics, RULE_MACHINE_SIZE, reader->kind != NULL ? reader->kind->place : machine->line.place,
	         "state and kind address the line stage by %u bits (%u and %u), wanted at most %d", bits, machine->line.state_bits,
	         machine->kind_bits, LIMIT_STATE_BITS);
	if (reader->kind != NULL)
		diagnose_hint(reader->diagnostics, "leave kind out: it then has as many bits as the line types need");
	return false;
}

static bool check_feedback_bits(struct reader *reader)
{
	const struct machine_plan *machine = &reader->plan->machine;
	const unsigned step = machine->line.outputs == OUTPUTS_REGISTERED;
	const unsigned kind = machine->frame.outputs == OUTPUTS_REGISTERED ? machine->kind_bits : 0;
	const unsigned bits = machine->line.state_bits + step + kind + machine->frame.state_bits;
	if (bits <= LIMIT_FEEDBACK_BITS)
		return true;
	diagnose(reader->diagnostics, RULE_MACHINE_SIZE, machine->frame.place,
	         "latches and counters hold %u bits (line state %u, step %u, kind %u, frame state %u), wanted at most %d", bits,
	         machine->line.state_bits, step, kind, machine->frame.state_bits, LIMIT_FEEDBACK_BITS);
	diagnose_hint(reader->diagnostics, "a proof goes through every value of them: use fewer state bits");
	return false;
}

void settle_kinds(struct reader *reader)
{
	struct plan *plan = reader->plan;
	if (plan->machine.form == FORM_LOOP)
		return;
	unsigned needed = 0;
	while (((size_t)1 << needed) < plan->line_count)
		needed++;
	plan->machine.kind_bits = needed;
	bool known = plan->line_count > 0 || (reader->board && reader->kind != NULL);
	if (reader->kind != NULL)
		known = read_kind_bits(reader, needed, &plan->machine.kind_bits) && known;
	if (known && reader->machine_known)
		known = check_address_bits(reader) && check_feedback_bits(reader);
	reader->words_known = reader->words_known && known;
}
