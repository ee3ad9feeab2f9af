#include "view/listing.h"

#include <stdlib.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "image/image.h"
#include "table/table.h"

// A stage of a table, in words.
struct stage_view {
	struct text *out;
	const struct table *table;
	const struct image *images;
	const struct plan *plan;
	const struct stage_wiring *wiring;
	enum stage stage;
	bool two;           // the machine has another stage
	uint32_t bank;      // the jumpers' setting
};

// The chip's word at an address of its stage: the first chip address that reads it, with open pins low.
static size_t address_of(const struct stage_view *view, const struct chip *chip, uint32_t row)
{
	size_t address = 0;
	for (unsigned pin = 0; pin < chip->part->address_pins; pin++) {
		const struct address_wire *wire = &chip->address[pin];
		const bool high = wire->kind == ADDRESS_HIGH || (wire->kind == ADDRESS_STATE && (row >> wire->index & 1) != 0) ||
		                  (wire->kind == ADDRESS_BANK && (view->bank >> wire->index & 1) != 0) ||
		                  (wire->kind == ADDRESS_KIND && (row >> view->wiring->state_bits >> wire->index & 1) != 0);
		address |= (size_t)high << pin;
	}
	return address;
}

static void put_chip(const struct stage_view *view, size_t number, uint32_t row)
{
	const struct chip *chip = &view->plan->chips[number];
	const struct image *image = &view->images[number];
	const size_t address = address_of(view, chip, row);
	const unsigned digits = (chip->part->address_pins + 3) / 4;
	text_printf(view->out, "  %0*zX:", (int)digits, address);
	if (chip->part->data_pins == 8)
		text_printf(view->out, "%02X", image->bytes[address]);
	else
		text_printf(view->out, "%02X%02X", image->bytes[2 * address + 1], image->bytes[2 * address]);
}

static int digits_of(unsigned bits)
{
	return (int)(bits + 3) / 4;
}

static bool has_kind(const struct stage_view *view)
{
	return view->two && view->table->wiring.kind_bits > 0;
}

// Puts a row's bits in the order of the word: next, kind, step, clear, levels.
static void put_word(const struct stage_view *view, const struct row *row)
{
	text_put(view->out, "  ");
	if (view->wiring->advance == ADVANCE_TABLE)
		text_printf(view->out, "%0*X ", digits_of(view->wiring->state_bits), (unsigned)row->next);
	if (view->stage == STAGE_FRAME && has_kind(view))
		text_printf(view->out, "%0*X ", digits_of(view->table->wiring.kind_bits), (unsigned)row->kind);
	if (view->stage == STAGE_LINE && view->two)
		text_printf(view->out, "%d ", row->step);
	if (view->wiring->advance == ADVANCE_COUNT)
		text_printf(view->out, "%d ", row->clear);
	for (size_t signal = 0; signal < view->plan->signal_count; signal++)
		if ((view->wiring->data_signals >> signal & 1) != 0)
			text_put(view->out, (row->levels >> signal & 1) != 0 ? "1" : "0");
}

// Whether a signal is decoded from a field of the stage's state.
static bool is_decoded(const struct stage_view *view, size_t field)
{
	for (size_t signal = 0; signal < view->plan->signal_count && view->stage == STAGE_LINE; signal++)
		if (view->plan->signals[signal].origin == FROM_FIELD && view->plan->signals[signal].field == field)
			return true;
	return false;
}

// Puts the state of a row's address, the code of each decoded field in it, and the kind that the stage sees.
static void put_state(const struct stage_view *view, uint32_t address)
{
	const uint32_t state = address & (((uint32_t)1 << view->wiring->state_bits) - 1);
	text_printf(view->out, "%0*X", digits_of(view->wiring->state_bits), (unsigned)state);
	for (size_t field = 0; field < view->plan->machine.field_count; field++)
		if (is_decoded(view, field))
			text_printf(view->out, " %u", (unsigned)field_value(&view->plan->machine.fields[field], state));
	if (view->stage == STAGE_LINE && has_kind(view))
		text_printf(view->out, " %0*X", digits_of(view->table->wiring.kind_bits), (unsigned)(address >> view->wiring->state_bits));
}

// Puts what follows the place of a row: its address, its word, and the chips that hold it.
static void put_row(const struct stage_view *view, uint32_t address, struct row row)
{
	put_state(view, address);
	put_word(view, &row);
	for (size_t chip = 0; chip < view->plan->chip_count; chip++)
		if (view->plan->chips[chip].stage == view->stage)
			put_chip(view, chip, address);
	text_put(view->out, "\n");
}

static void put_word_heading(const struct stage_view *view)
{
	const bool counts = view->wiring->advance == ADVANCE_COUNT;
	text_printf(view->out, ", word (%s", counts ? "" : "next state");
	if (view->stage == STAGE_FRAME && has_kind(view))
		text_put(view->out, counts ? "kind, " : ", kind");
	if (view->stage == STAGE_LINE && view->two)
		text_put(view->out, counts ? "step, " : ", step");
	text_put(view->out, counts ? "clear" : "");
	bool first = true;
	for (size_t signal = 0; signal < view->plan->signal_count; signal++) {
		if ((view->wiring->data_signals >> signal & 1) == 0)
			continue;
		text_printf(view->out, "%s %s", first ? ", then the levels of" : "", view->plan->signals[signal].name);
		first = false;
	}
	text_put(view->out, "), then ");
}

static void put_chips_heading(const struct stage_view *view)
{
	const struct chip *before = NULL;
	for (size_t number = 0; number < view->plan->chip_count; number++) {
		const struct chip *chip = &view->plan->chips[number];
		const bool wide = chip->part->data_pins > 8;
		if (chip->stage != view->stage)
			continue;
		if (before == NULL || wide != (before->part->data_pins > 8))
			text_printf(view->out, "%saddress:%s in", before == NULL ? "" : ", ", wide ? "word" : "byte");
		text_printf(view->out, " %s", chip->label);
		before = chip;
	}
	text_put(view->out, "\n");
}

// When what a row holds comes to the pins. Step and kind are latched with the signals.
static void put_outputs(const struct stage_view *view)
{
	const char *unit = view->stage == STAGE_LINE ? "cell" : "line";
	const char *with = !view->two ? "" : view->stage == STAGE_LINE ? " and step" : has_kind(view) ? " and kind" : "";
	if (view->wiring->data_signals == 0 && with[0] == '\0')
		return;
	text_put(view->out, "# levels are electrical, 1 is high; ");
	if (view->wiring->outputs == OUTPUTS_REGISTERED)
		text_printf(view->out, "they%s are latched at the end of a %s: those in a row are the pins of the next %s\n", with, unit, unit);
	else
		text_printf(view->out, "outputs are direct: those in a row are the pins of its own %s\n", unit);
}

static void put_columns(const struct stage_view *view)
{
	text_printf(view->out, "# line type, line%s, state", view->stage == STAGE_LINE ? ", cell, region" : "");
	for (size_t field = 0; field < view->plan->machine.field_count; field++)
		if (is_decoded(view, field))
			text_printf(view->out, ", field %s", view->plan->machine.fields[field].name);
	if (view->stage == STAGE_LINE && has_kind(view))
		text_put(view->out, ", kind");
	put_word_heading(view);
	put_chips_heading(view);
	put_outputs(view);
}

static uint8_t *mark_used(const struct stage_view *view)
{
	uint8_t *used = calloc(((size_t)1 << view->wiring->address_bits) / 8 + 1, 1);
	for (uint32_t index = 0; used != NULL && index < table_row_count(view->table, view->stage); index++) {
		const uint32_t address = table_row_address(view->table, view->stage, index);
		used[address / 8] |= (uint8_t)(1u << address % 8);
	}
	return used;
}

// Puts the spare row at its first address, if there is one among the kinds that the frame uses, or among the others.
static void put_spare(const struct stage_view *view, const uint8_t *used, bool used_kinds)
{
	const uint32_t addresses = (uint32_t)1 << view->wiring->address_bits;
	uint32_t count = 0, first = 0;
	for (uint32_t address = addresses; address-- > 0;) {
		const bool of_kind = view->stage == STAGE_FRAME || table_uses_kind(view->table, address >> view->wiring->state_bits);
		if (of_kind != used_kinds || (used[address / 8] >> address % 8 & 1) != 0)
			continue;
		count++;
		first = address;
	}
	if (count == 0)
		return;
	if (view->stage == STAGE_LINE && has_kind(view))
		text_printf(view->out, used_kinds ? "# row of the %u state%s of the frame's kinds that the frame does not use:\nspare " :
		                                    "# row of the %u state%s of all other kinds, which ends the line:\nspare ",
		            (unsigned)count, count == 1 ? "" : "s");
	else
		text_printf(view->out, "# the %u states that are not on the frame have this row:\nspare ", (unsigned)count);
	put_row(view, first, table_spare(view->table, view->stage, view->stage == STAGE_LINE ? first >> view->wiring->state_bits : 0));
}

static void put_spares(const struct stage_view *view)
{
	uint8_t *used = mark_used(view);
	if (used == NULL) {
		view->out->failed = true;
		return;
	}
	put_spare(view, used, true);
	put_spare(view, used, false);
	free(used);
}

static void put_line(const struct stage_view *view, uint32_t number)
{
	const struct timeline *timeline = view->table->timeline;
	const struct line_type *type = &view->plan->lines[timeline->lines[number].type];
	const struct laid_line *laid = &timeline->types[timeline->lines[number].type];
	for (uint32_t cell = 0; cell < laid->cells; cell++) {
		const uint32_t index = table_cell_row(view->table, number, cell);
		text_printf(view->out, "\"%s\" %u %u \"%s\" ", type->name, (unsigned)number, (unsigned)cell,
		            type->regions[laid->region_of_cell[cell]].name);
		put_row(view, table_row_address(view->table, STAGE_LINE, index), table_row(view->table, STAGE_LINE, index));
	}
}

static struct stage_view view_stage(struct text *out, const struct table *table, const struct image *images, uint32_t bank, enum stage stage)
{
	return (struct stage_view){.out = out, .table = table, .images = images, .plan = table->timeline->plan,
	                           .wiring = wiring_stage(&table->wiring, stage), .stage = stage,
	                           .two = table->wiring.form == FORM_LINE_FRAME, .bank = bank};
}

static void put_frame_stage(const struct stage_view *view)
{
	const struct timeline *timeline = view->table->timeline;
	text_put(view->out, "# the frame stage:\n");
	put_columns(view);
	for (uint32_t number = 0; number < timeline->line_count; number++) {
		text_printf(view->out, "\"%s\" %u ", view->plan->lines[timeline->lines[number].type].name, (unsigned)number);
		put_row(view, table_row_address(view->table, STAGE_FRAME, number), table_row(view->table, STAGE_FRAME, number));
	}
	put_spares(view);
}

void view_listing(struct text *out, const struct table *table, const struct image *images, uint32_t bank)
{
	const struct stage_view line = view_stage(out, table, images, bank, STAGE_LINE);
	const struct stage_view frame = view_stage(out, table, images, bank, STAGE_FRAME);
	text_printf(out, "# %s: every row of the frame\n%s", line.plan->name, line.two ? "# the line stage:\n" : "");
	put_columns(&line);
	for (uint32_t number = 0; number < table->timeline->line_count; number++)
		put_line(&line, number);
	put_spares(&line);
	if (line.two)
		put_frame_stage(&frame);
}
