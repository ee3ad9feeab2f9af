#include <string.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "view/figures.h"
#include "view/lift.h"

static void put_sources(struct text *out, const struct lift *lift, const struct lift_sources *sources)
{
	const struct plan *plan = lift->plan;
	text_printf(out, "# Lifted out of images against the board %s. CRC-32 of each chip's bytes:\n", sources->board);
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		text_printf(out, "#   %s  %08X  %s\n", plan->chips[chip].label, (unsigned)image_crc32(&sources->images[chip]),
		            sources->files[chip]);
	if (plan->bank_bits > 0)
		text_printf(out, "# Bank %u of the jumpers.\n", (unsigned)lift->options.bank);
}

// Where the images have the state that the board names as start, which the plan has another one for.
static void put_board_start(struct text *out, const struct lift *lift)
{
	const struct machine_plan *machine = &lift->plan->machine;
	uint32_t cell = 0;
	while (cell < lift->cell_count && lift->states[cell] != machine->start)
		cell++;
	text_put(out, "# The board starts in state ");
	text_put_hex(out, machine->start, machine->line.state_bits);
	text_put(out, ", ");
	if (cell < lift->cell_count)
		text_put_count(out, cell, "cell into this frame", "cells into this frame");
	else
		text_put(out, "from which the images come to this frame");
	text_put(out, "; start below is the state of the frame's first cell.\n");
}

static void put_remarks(struct text *out, const struct lift *lift)
{
	const struct machine_plan *machine = &lift->plan->machine;
	text_put(out, "#\n# Names of lines and regions are guesses by the roles of signals.");
	if (lift->options.near && machine->line.advance == ADVANCE_TABLE)
		text_put(out, " Holds pin the state of every cell, so that a\n# build gives back the same rows.");
	text_put(out, "\n");
	if (lift->pinned)
		text_put(out, "# Holds pin the state of every cell: without any, the line stage of a plan numbers the cells, and the images' does not.\n");
	if (lift->copies > 1)
		text_printf(out, "# The frame is %u laps of the images' loop: after so many the subcarrier is where it was.\n",
		            (unsigned)lift->copies);
	if (view_lift_first(lift) != NULL)
		text_printf(out, "# Start of the frame: %s.\n", view_lift_first(lift));
	if (lift->has_start && machine->has_start && lift->start != machine->start)
		put_board_start(out, lift);
	if (lift->renumbered)
		text_put(out, "# The images number the frame's lines otherwise than from 0 up, as every plan does.\n");
	if (lift->uneven_starts)
		text_put(out, "# The lines of the images begin in different states of the line stage; those of a plan begin in one.\n");
	text_put(out, "\n");
}

static bool has_hold_of(const struct lift *lift, const char *field)
{
	for (size_t type = 0; type < lift->type_count; type++)
		for (size_t region = 0; region < lift->types[type].region_count; region++)
			for (size_t hold = 0; hold < lift->types[type].regions[region].hold_count; hold++)
				if (strcmp(lift->types[type].regions[region].holds[hold].field, field) == 0)
					return true;
	return false;
}

// The board's fields and those that were added and are held.
static void put_fields(struct text *out, const struct lift *lift, const struct node *fields)
{
	bool any = false;
	const size_t named = fields != NULL && fields->kind == NODE_MAPPING ? fields->count : 0;
	for (size_t pair = 0; pair < named; pair++) {
		text_printf(out, any ? ", %s: " : "  fields: { %s: ", fields->pairs[pair].key->text);
		text_put_flow(out, fields->pairs[pair].value);
		any = true;
	}
	for (size_t index = 0; index < lift->field_count; index++) {
		const struct lift_field *field = &lift->fields[index];
		if (!has_hold_of(lift, field->name))
			continue;
		text_printf(out, any ? ", %s: " : "  fields: { %s: ", field->name);
		text_printf(out, field->high > field->low ? "%u..%u" : "%u", field->high, field->low);
		any = true;
	}
	text_put(out, any ? " }\n" : "");
}

// Fields and start, beside the state that they are of.
static void put_state_keys(struct text *out, const struct lift *lift, const struct node *machine)
{
	put_fields(out, lift, node_value(machine, "fields"));
	if (lift->has_start) {
		text_put(out, "  start: ");
		text_put_hex(out, lift->start, lift->plan->machine.line.state_bits);
		text_put(out, "\n");
	} else if (lift->plan->machine.line.advance == ADVANCE_COUNT && node_value(machine, "start") != NULL) {
		text_put(out, "  start: 0\n");
	}
}

static void put_machine(struct text *out, const struct lift *lift, const struct node *machine)
{
	const bool loop = lift->plan->machine.form == FORM_LOOP;
	text_put(out, "machine:\n");
	for (size_t pair = 0; pair < machine->count; pair++) {
		const char *key = machine->pairs[pair].key->text;
		if (strcmp(key, "fields") == 0 || strcmp(key, "start") == 0)
			continue;
		text_printf(out, "  %s: ", key);
		text_put_flow(out, machine->pairs[pair].value);
		text_put(out, "\n");
		if (loop && strcmp(key, "state") == 0)
			put_state_keys(out, lift, machine);
	}
	if (!loop && node_value(machine, "kind") == NULL) // a plan in a board's place: its lines settled them
		text_printf(out, "  kind: %u bit%s\n", lift->plan->machine.kind_bits, lift->plan->machine.kind_bits == 1 ? "" : "s");
	if (!loop)
		put_state_keys(out, lift, machine);
}

static void put_names(struct text *out, const struct lift *lift, uint64_t signals)
{
	bool any = false;
	for (size_t signal = 0; signal < lift->plan->signal_count; signal++) {
		if ((signals >> signal & 1) == 0)
			continue;
		text_printf(out, "%s%s", any ? ", " : "", lift->plan->signals[signal].name);
		any = true;
	}
}

static void put_holds(struct text *out, const struct lift_region *region)
{
	text_put(out, " hold: { ");
	for (size_t hold = 0; hold < region->hold_count; hold++)
		text_printf(out, "%s%s: %s", hold > 0 ? ", " : "", region->holds[hold].field, region->holds[hold].expression);
	text_put(out, " }");
}

static unsigned digits_of(uint32_t value)
{
	unsigned digits = 1;
	for (; value >= 10; value /= 10)
		digits++;
	return digits;
}

// Columns of the regions of a line type.
struct widths {
	size_t name, cells, shown;
};

// What a region asserts and stretches: "assert: [sync, blank], stretch: 1".
static void put_shown(struct text *out, const struct lift *lift, const struct lift_region *region)
{
	text_put(out, "assert: [");
	put_names(out, lift, region->asserted);
	text_put(out, "]");
	if (region->stretched > 0)
		text_printf(out, ", stretch: %u", (unsigned)region->stretched);
}

// What is measured for `out`, which fails with it.
static size_t shown_length(struct text *out, const struct lift *lift, const struct lift_region *region)
{
	struct text text = {0};
	put_shown(&text, lift, region);
	const size_t length = text.length;
	out->failed = out->failed || text.failed;
	text_release(&text);
	return length;
}

static struct widths measure(struct text *out, const struct lift *lift, const struct lift_type *type)
{
	struct widths widths = {0};
	for (size_t index = 0; index < type->region_count; index++) {
		const struct lift_region *region = &type->regions[index];
		const size_t shown = shown_length(out, lift, region);
		if (strlen(region->name) > widths.name)
			widths.name = strlen(region->name);
		if (digits_of(region->cells) > widths.cells)
			widths.cells = digits_of(region->cells);
		if (region->hold_count > 0 && shown > widths.shown)
			widths.shown = shown;
	}
	return widths;
}

static void put_padding(struct text *out, size_t length, size_t width)
{
	if (length < width)
		text_put_repeated(out, ' ', width - length);
}

static void put_region(struct text *out, const struct lift *lift, const struct lift_region *region, const struct widths *widths)
{
	text_printf(out, "      - { region: %s, ", region->name);
	put_padding(out, strlen(region->name), widths->name);
	text_printf(out, "cells: %u, ", (unsigned)region->cells);
	put_padding(out, digits_of(region->cells), widths->cells);
	put_shown(out, lift, region);
	if (region->hold_count > 0) {
		text_put(out, ",");
		put_padding(out, shown_length(out, lift, region), widths->shown);
		put_holds(out, region);
	}
	text_put(out, " }\n");
}

static void put_lines(struct text *out, const struct lift *lift)
{
	text_put(out, "lines:\n");
	for (size_t index = 0; index < lift->type_count; index++) {
		const struct lift_type *type = &lift->types[index];
		const struct widths widths = measure(out, lift, type);
		text_printf(out, "  %s:\n    cells: %u\n    regions:\n", type->name, (unsigned)type->cells);
		for (size_t region = 0; region < type->region_count; region++)
			put_region(out, lift, &type->regions[region], &widths);
	}
}

static void put_frame(struct text *out, const struct lift *lift)
{
	unsigned widest = 1;
	for (size_t block = 0; block < lift->block_count; block++)
		if (digits_of(lift->blocks[block].repeat) > widest)
			widest = digits_of(lift->blocks[block].repeat);
	text_put(out, "frame:\n");
	for (uint32_t copy = 0; copy < lift->copies; copy++)
		for (size_t index = 0; index < lift->block_count; index++) {
			const struct lift_block *block = &lift->blocks[index];
			text_printf(out, "  - { repeat: %u, ", (unsigned)block->repeat);
			put_padding(out, digits_of(block->repeat), widest);
			text_printf(out, "line: %s }\n", lift->types[block->type].name);
		}
}

static bool begins_part(const char *key)
{
	static const char *const keys[] = {"scanlatch", "name", "note", "grade"};
	for (size_t index = 0; index < sizeof keys / sizeof *keys; index++)
		if (strcmp(key, keys[index]) == 0)
			return false;
	return true;
}

// The parts of a plan in the house's order; lines and frame are what was lifted.
void view_lift_plan(struct text *out, const struct lift *lift, const struct node *root, const struct lift_sources *sources)
{
	static const char *const order[] = {"scanlatch", "name",  "note",    "standard", "grade", "clock",  "signals",
	                                    "lines",     "frame", "machine", "parts",    "chips", "timing", "sweep"};
	put_sources(out, lift, sources);
	put_remarks(out, lift);
	for (size_t index = 0; index < sizeof order / sizeof *order; index++) {
		const char *key = order[index];
		const struct node *node = node_value(root, key);
		const bool lines = strcmp(key, "lines") == 0, frame = strcmp(key, "frame") == 0;
		if (node == NULL && !lines && !frame)
			continue;
		text_put(out, begins_part(key) ? "\n" : "");
		if (lines)
			put_lines(out, lift);
		else if (frame)
			put_frame(out, lift);
		else if (strcmp(key, "machine") == 0)
			put_machine(out, lift, node);
		else
			view_board_key(out, key, node);
	}
}
