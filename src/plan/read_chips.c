#include "plan/read.h"

#include <string.h>

#include "base/arena.h"

enum { SHORT_PART, SHORT_SPEED, SHORT_LINE, SHORT_FRAME, SHORT_KEYS };

#define PART_KEY {"part", KEY_REQUIRED, &part_name_shape, "A part of the catalogue, or one of the plan's parts"}
#define SPEED_KEY {"speed", KEY_OPTIONAL, &time_shape, "Its access time, as 150 ns; its slowest grade if left out"}

static const struct shape part_name_shape = {.kind = SHAPE_LISTED, .listed = LISTED_MEMORIES, .own_too = true};

static const struct key part_and_speed_keys[SHORT_KEYS] = {
	[SHORT_PART] = PART_KEY,
	[SHORT_SPEED] = SPEED_KEY,
	[SHORT_LINE] = {"line", KEY_ELSEWHERE, NULL, NULL},
	[SHORT_FRAME] = {"frame", KEY_ELSEWHERE, NULL, NULL},
};

static const struct shape part_and_speed_shape = {
	.kind = SHAPE_MAPPING,
	.title = "straight chips",
	.about = "As many chips of a part as the word needs, wired straight",
	.keys = part_and_speed_keys,
	.key_count = SHORT_KEYS,
};

static const struct key two_stages_keys[SHORT_KEYS] = {
	[SHORT_PART] = {"part", KEY_ELSEWHERE, NULL, NULL},
	[SHORT_SPEED] = {"speed", KEY_ELSEWHERE, NULL, NULL},
	[SHORT_LINE] = {"line", KEY_REQUIRED, &part_and_speed_shape, "The chips of the line stage"},
	[SHORT_FRAME] = {"frame", KEY_REQUIRED, &part_and_speed_shape, "The chips of the frame stage"},
};

static const struct shape two_stages_shape = {
	.kind = SHAPE_MAPPING,
	.title = "straight chips of two stages",
	.about = "The chips of each stage of a line-frame machine, wired straight",
	.keys = two_stages_keys,
	.key_count = SHORT_KEYS,
};

#define ONE_STAGE "a loop machine has one stage: write { part: ..., speed: ... }, or make it form: line-frame"

static const struct stray_key loop_strays[] = {{"line", ONE_STAGE}, {"frame", ONE_STAGE}};

#define TWO_STAGES "each stage has chips of its own: write { line: { part: ..., speed: ... }, frame: { part: ..., speed: ... } }"

static const struct stray_key line_frame_strays[] = {{"part", TWO_STAGES}, {"speed", TWO_STAGES}};

enum { CHIP_LABEL, CHIP_PART, CHIP_SPEED, CHIP_ADDRESS, CHIP_DATA, CHIP_STAGE, CHIP_KEYS };

#define LONGEST_LABEL 100
#define LETTERS "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz"

static const struct shape label_shape = {
	.kind = SHAPE_TEXT, .pattern = "[A-Za-z0-9_-]+", .most = LONGEST_LABEL, .also = ALSO_NUMBER | ALSO_TRUTH,
};

#define LONG_FORM_KEYS \
	[CHIP_LABEL] = {"label", KEY_REQUIRED, &label_shape, "What the chip is called, on the board and in file names"}, \
	[CHIP_PART] = PART_KEY, \
	[CHIP_SPEED] = SPEED_KEY, \
	[CHIP_ADDRESS] = {"address", KEY_REQUIRED, LIST_OF(&address_wire_shape, 0, LIMIT_ADDRESS_PINS), \
	                  "What drives each address pin, A0 first: state.N, kind.N, bank.N, low, high, or - for an open pin"}, \
	[CHIP_DATA] = {"data", KEY_REQUIRED, LIST_OF(&data_wire_shape, 0, LIMIT_DATA_PINS), \
	               "What each data pin carries, D0 first: next.N, kind.N, step, clear, a signal, or - for an open pin"}

static const struct key long_keys[CHIP_KEYS] = {
	LONG_FORM_KEYS,
	[CHIP_STAGE] = {"stage", KEY_OPTIONAL, &stage_word_shape, "The stage that the chip belongs to, of a line-frame machine's"},
};

static const struct key loop_long_keys[CHIP_KEYS] = {
	LONG_FORM_KEYS,
	[CHIP_STAGE] = {"stage", KEY_ELSEWHERE, NULL, NULL},
};

#define CHIPS_ABOUT "Chips one by one, with what is wired to each of their pins"
#define CHIPS_OF(chip, key) \
	SHAPE(.kind = SHAPE_LIST, .about = CHIPS_ABOUT, .item = &(chip), .least = 1, .most = LIMIT_CHIPS, .each = (key))

static const struct shape chip_shape = {.kind = SHAPE_MAPPING, .title = "chip", .keys = long_keys, .key_count = CHIP_KEYS};
static const struct shape loop_chip_shape = {
	.kind = SHAPE_MAPPING, .title = "chip of a loop machine", .keys = loop_long_keys, .key_count = CHIP_KEYS,
};
// read_chip_stage looks for the stage.
static const struct shape staged_chip_shape = {
	.kind = SHAPE_MAPPING, .title = "chip of a line-frame machine", .keys = long_keys, .key_count = CHIP_KEYS,
	.group = {.first = CHIP_STAGE, .count = 1, .one = true},
};
static const struct shape *const chips_shapes[] = {&part_and_speed_shape, &two_stages_shape, CHIPS_OF(chip_shape, NULL)};

const struct shape chips_shape = {
	.kind = SHAPE_EITHER,
	.shapes = chips_shapes,
	.shape_count = COUNT_OF(chips_shapes),
	.in_loop = EITHER(&part_and_speed_shape, CHIPS_OF(loop_chip_shape, NULL)),
	.in_line_frame = EITHER(&two_stages_shape, CHIPS_OF(staged_chip_shape, &long_keys[CHIP_STAGE])),
};

static const struct stray_key loop_long_strays[] = {
	{"stage", "a loop machine has one stage: leave stage out, or make the machine form: line-frame"},
};

// What the short form says of a stage's chips.
struct straight {
	const struct node *node;
	const struct part *part;   // NULL: not known
	struct fraction access_s;
	struct data_wire word[LIMIT_WORD_BITS];
	size_t bits;               // of the word
	size_t count;              // of chips
};

// Reads part and speed of a stage's chips. False if they cannot be wired.
static bool read_straight(struct reader *reader, const struct node *node, const struct node *part, const struct node *speed,
                          enum stage stage, struct straight *straight)
{
	straight->node = node;
	straight->part = read_chip_part(reader, part, speed, &straight->access_s);
	if (straight->part == NULL || !reader->words_known || !reader->signals_known ||
	    !check_part_size(reader, part, straight->part, stage))
		return false;
	straight->bits = word_of(reader->plan, stage, straight->word);
	straight->count = (straight->bits + straight->part->data_pins - 1) / straight->part->data_pins;
	return true;
}

_Static_assert((LIMIT_FEEDBACK_BITS + LIMIT_KIND_BITS + 3 + LIMIT_SIGNALS + 2 * 7) / 8 <= LIMIT_CHIPS,
               "the words of both stages are never too long for the chips of the short form");

// Wires a stage's chips straight, from chip `first` on.
static void wire_straight(struct reader *reader, const struct straight *straight, enum stage stage, size_t first)
{
	struct plan *plan = reader->plan;
	struct address_wire address[LIMIT_ADDRESS_BITS];
	const size_t address_bits = address_of(plan, stage, reader->set_bits, address);
	const unsigned pins = straight->part->data_pins;
	for (size_t index = 0; index < straight->count; index++) {
		struct chip *chip = &plan->chips[first + index];
		chip->label = arena_format(reader->arena, "rom%zu", first + index);
		chip->stage = stage;
		chip->part = straight->part;
		chip->access_s = straight->access_s;
		chip->place = straight->node->place;
		memcpy(chip->address, address, address_bits * sizeof *address);
		for (unsigned pin = 0; pin < pins && index * pins + pin < straight->bits; pin++)
			chip->data[pin] = straight->word[index * pins + pin];
	}
}

static void wire_all_straight(struct reader *reader, const struct straight *line, const struct straight *frame)
{
	struct plan *plan = reader->plan;
	plan->chips = reader_array(reader, line->count + frame->count, sizeof *plan->chips);
	if (plan->chips == NULL)
		return;
	plan->chip_count = line->count + frame->count;
	wire_straight(reader, line, STAGE_LINE, 0);
	if (frame->count > 0)
		wire_straight(reader, frame, STAGE_FRAME, line->count);
}

static void read_loop_chips(struct reader *reader, const struct node *node)
{
	const struct node *values[SHORT_KEYS];
	struct straight line = {.count = 0};
	const struct straight frame = {.count = 0};
	report_elsewhere(reader, node, "the short form of chips for a loop machine", loop_strays, COUNT_OF(loop_strays));
	if (read_mapping(reader, node, "chips", part_and_speed_keys, SHORT_KEYS, values) &&
	    read_straight(reader, node, values[SHORT_PART], values[SHORT_SPEED], STAGE_LINE, &line))
		wire_all_straight(reader, &line, &frame);
}

// Reads the chips of one stage of two. False if they cannot be wired.
static bool read_stage_chips(struct reader *reader, const struct node *node, enum stage stage, struct straight *straight)
{
	const struct node *values[SHORT_KEYS];
	const char *what = stage == STAGE_LINE ? "\"line\" of chips" : "\"frame\" of chips";
	const size_t count = SHORT_SPEED + 1; // no stages within a stage
	return node != NULL && read_mapping(reader, node, what, part_and_speed_keys, count, values) &&
	       read_straight(reader, node, values[SHORT_PART], values[SHORT_SPEED], stage, straight);
}

static void read_line_frame_chips(struct reader *reader, const struct node *node)
{
	const struct node *values[SHORT_KEYS];
	struct straight line = {.count = 0}, frame = {.count = 0};
	report_elsewhere(reader, node, "the short form of chips for a line-frame machine", line_frame_strays, COUNT_OF(line_frame_strays));
	if (!read_mapping(reader, node, "the short form of chips for a line-frame machine", two_stages_keys, SHORT_KEYS, values))
		return;
	const bool line_good = read_stage_chips(reader, values[SHORT_LINE], STAGE_LINE, &line);
	const bool frame_good = read_stage_chips(reader, values[SHORT_FRAME], STAGE_FRAME, &frame);
	if (line_good && frame_good)
		wire_all_straight(reader, &line, &frame);
}

static bool read_label(struct reader *reader, const struct node *node, struct chip *chip, size_t index)
{
	const char *text;
	if (node == NULL || !read_scalar(reader, node, "label", &text))
		return false;
	const size_t good = strspn(text, LETTERS "0123456789_-");
	if (good != strlen(text) || good > LONGEST_LABEL) {
		diagnose(reader->diagnostics, RULE_BAD_NAME, node->place, "label \"%s\": wanted 1 to %d letters, digits, _ and -",
		         SHORT(text), LONGEST_LABEL);
		return false;
	}
	for (size_t other = 0; other < index; other++)
		if (reader->plan->chips[other].label != NULL && strcmp(reader->plan->chips[other].label, text) == 0) {
			diagnose(reader->diagnostics, RULE_DOUBLED_NAME, node->place, "label \"%s\" is the label of an earlier chip",
			         SHORT(text));
			diagnose_also(reader->diagnostics, reader->plan->chips[other].place, "the earlier chip");
			return false;
		}
	chip->label = text;
	return true;
}

// Reads the stage of a chip. False if it is not known.
static bool read_chip_stage(struct reader *reader, const struct node *node, const struct node *value, struct chip *chip)
{
	if (!reader->form_known || reader->plan->machine.form == FORM_LOOP)
		return reader->form_known;
	if (value != NULL)
		return read_stage_word(reader, value, &chip->stage);
	if (!key_is_misspelt(node, long_keys, CHIP_KEYS, CHIP_STAGE)) {
		diagnose(reader->diagnostics, RULE_MISSING_KEY, node->place, "a chip of a line-frame machine needs the key \"stage\"");
		diagnose_hint(reader->diagnostics, "write stage: line or stage: frame");
	}
	return false;
}

static void read_chip(struct reader *reader, const struct node *node, size_t index)
{
	struct chip *chip = &reader->plan->chips[index];
	const struct node *values[CHIP_KEYS];
	const bool loop = reader->form_known && reader->plan->machine.form == FORM_LOOP;
	chip->place = node->place;
	if (loop)
		report_elsewhere(reader, node, "a chip of a loop machine", loop_long_strays, COUNT_OF(loop_long_strays));
	if (!read_mapping(reader, node, "a chip", loop ? loop_long_keys : long_keys, CHIP_KEYS, values))
		return;
	read_label(reader, values[CHIP_LABEL], chip, index);
	const bool stage_known = read_chip_stage(reader, node, values[CHIP_STAGE], chip);
	chip->part = read_chip_part(reader, values[CHIP_PART], values[CHIP_SPEED], &chip->access_s);
	if (chip->part == NULL || !stage_known || !reader->words_known ||
	    !check_part_size(reader, values[CHIP_PART], chip->part, chip->stage))
		return;
	if (values[CHIP_ADDRESS] != NULL)
		read_address_wires(reader, values[CHIP_ADDRESS], chip);
	if (values[CHIP_DATA] != NULL && reader->signals_known)
		read_data_wires(reader, values[CHIP_DATA], chip);
}

// True if each stage of the machine has a chip.
static bool check_stages_have_chips(struct reader *reader, const struct node *node)
{
	const struct plan *plan = reader->plan;
	bool found[STAGE_COUNT] = {false};
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		found[plan->chips[chip].stage] = true;
	for (unsigned stage = 0; stage < machine_stages(&plan->machine); stage++)
		if (!found[stage]) {
			diagnose(reader->diagnostics, RULE_WIRE_MISSING, node->place, "the %s stage has no chip", stage_name((enum stage)stage));
			diagnose_hint(reader->diagnostics, "add one with stage: %s", stage_name((enum stage)stage));
			return false;
		}
	return true;
}

static void read_long_chips(struct reader *reader, const struct node *node)
{
	struct plan *plan = reader->plan;
	if (node->count == 0 || node->count > LIMIT_CHIPS) {
		diagnose(reader->diagnostics, RULE_TOO_MANY_CHIPS, node->place, "chips: wanted 1 to %d, found %zu", LIMIT_CHIPS, node->count);
		return;
	}
	const size_t errors_before = diagnostics_error_count(reader->diagnostics);
	plan->chips = reader_array(reader, node->count, sizeof *plan->chips);
	if (plan->chips == NULL)
		return;
	for (size_t index = 0; index < node->count; index++) {
		plan->chip_count = index + 1;
		read_chip(reader, node->items[index], index);
	}
	if (!reader->words_known || !reader->signals_known)
		return;
	check_data_doubled(reader, node, diagnostics_error_count(reader->diagnostics) == errors_before);
	if (diagnostics_error_count(reader->diagnostics) == errors_before && check_stages_have_chips(reader, node))
		check_word_wired(reader, node);
}

void read_chips(struct reader *reader, const struct node *node)
{
	const bool line_frame = reader->plan->machine.form == FORM_LINE_FRAME;
	if (node->kind == NODE_MAPPING && reader->form_known)
		line_frame ? read_line_frame_chips(reader, node) : read_loop_chips(reader, node);
	else if (node->kind != NODE_MAPPING &&
	         expect_kind(reader, node, NODE_LIST, line_frame ? "chips (a mapping with line and frame, or a list of chips)"
	                                                         : "chips (a mapping with part, or a list of chips)"))
		read_long_chips(reader, node);
}
