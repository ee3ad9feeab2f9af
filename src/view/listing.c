#include "view/listing.h"

#include <stdlib.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "image/image.h"
#include "table/table.h"

// The chip's word at a state: the first chip address that reads it, with open and bank pins low.
static size_t address_of(const struct chip *chip, uint32_t state)
{
	size_t address = 0;
	for (unsigned pin = 0; pin < chip->part->address_pins; pin++) {
		const struct address_wire *wire = &chip->address[pin];
		const bool high = wire->kind == ADDRESS_HIGH || (wire->kind == ADDRESS_STATE && (state >> wire->index & 1) != 0);
		address |= (size_t)high << pin;
	}
	return address;
}

static void put_chip(struct text *out, const struct chip *chip, const struct image *image, uint32_t state)
{
	const size_t address = address_of(chip, state);
	const unsigned digits = (chip->part->address_pins + 3) / 4;
	text_printf(out, "  %0*zX:", (int)digits, address);
	if (chip->part->data_pins == 8)
		text_printf(out, "%02X", image->bytes[address]);
	else
		text_printf(out, "%02X%02X", image->bytes[2 * address + 1], image->bytes[2 * address]);
}

static void put_row(struct text *out, const struct table *table, const struct row *row)
{
	const struct plan *plan = table->timeline->plan;
	if (plan->machine.line.advance == ADVANCE_TABLE)
		text_printf(out, "  %0*X ", (int)(plan->machine.line.state_bits + 3) / 4, (unsigned)row->next);
	else
		text_printf(out, "  %d ", row->clear);
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (signal_is_data(&plan->signals[signal]))
			text_put(out, (row->levels >> signal & 1) != 0 ? "1" : "0");
}

static void put_chips(struct text *out, const struct plan *plan, const struct image *images, uint32_t state)
{
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		put_chip(out, &plan->chips[chip], &images[chip], state);
	text_put(out, "\n");
}

// Whether a signal is decoded from a field.
static bool is_decoded(const struct plan *plan, size_t field)
{
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (plan->signals[signal].origin == FROM_FIELD && plan->signals[signal].field == field)
			return true;
	return false;
}

// Puts a state, and the code of each decoded field in it.
static void put_state(struct text *out, const struct plan *plan, uint32_t state)
{
	text_printf(out, "%0*X", (int)(plan->machine.line.state_bits + 3) / 4, (unsigned)state);
	for (size_t field = 0; field < plan->machine.field_count; field++)
		if (is_decoded(plan, field))
			text_printf(out, " %u", (unsigned)field_value(&plan->machine.fields[field], state));
}

static void put_word_heading(struct text *out, const struct plan *plan)
{
	text_printf(out, ", word (%s", plan->machine.line.advance == ADVANCE_TABLE ? "next state" : "clear");
	bool first = true;
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		if (!signal_is_data(&plan->signals[signal]))
			continue;
		text_printf(out, "%s %s", first ? ", then the levels of" : "", plan->signals[signal].name);
		first = false;
	}
	text_put(out, "), then ");
}

static void put_heading(struct text *out, const struct plan *plan)
{
	text_printf(out, "# %s: every row of the frame\n# line type, line, cell, region, state", plan->name);
	for (size_t field = 0; field < plan->machine.field_count; field++)
		if (is_decoded(plan, field))
			text_printf(out, ", field %s", plan->machine.fields[field].name);
	put_word_heading(out, plan);
	for (size_t chip = 0; chip < plan->chip_count; chip++) {
		const bool wide = plan->chips[chip].part->data_pins > 8;
		if (chip == 0 || wide != (plan->chips[chip - 1].part->data_pins > 8))
			text_printf(out, "%saddress:%s in", chip == 0 ? "" : ", ", wide ? "word" : "byte");
		text_printf(out, " %s", plan->chips[chip].label);
	}
	text_put(out, "\n");
	if (wiring_of(plan).line.data_signals != 0)
		text_printf(out, "# levels are electrical, 1 is high; %s\n", plan->machine.line.outputs == OUTPUTS_REGISTERED
		            ? "they are latched at the end of a cell: those in a row are the pins of the next cell"
		            : "outputs are direct: those in a row are the pins of its own cell");
}

// The first state that is not on the frame, whose row stands for all spare rows; 2^state_bits if there is none.
static uint32_t first_spare(const struct table *table, uint32_t states, uint8_t *used)
{
	for (uint32_t cell = 0; cell < table->period; cell++)
		used[table->state_of_cell[cell] / 8] |= (uint8_t)(1u << table->state_of_cell[cell] % 8);
	uint32_t state = 0;
	while (state < states && (used[state / 8] >> state % 8 & 1) != 0)
		state++;
	return state;
}

static void put_spare(struct text *out, const struct table *table, const struct image *images)
{
	const struct plan *plan = table->timeline->plan;
	const uint32_t states = (uint32_t)1 << plan->machine.line.state_bits;
	uint8_t *used = calloc(states / 8 + 1, 1);
	if (used == NULL) {
		out->failed = true;
		return;
	}
	const uint32_t spare = first_spare(table, states, used);
	free(used);
	if (spare == states)
		return;
	text_printf(out, "# the %u states that are not on the frame have this row:\nspare ", (unsigned)(states - table->period));
	put_state(out, plan, spare);
	put_row(out, table, &table->spare[STAGE_LINE]);
	put_chips(out, plan, images, spare);
}

void view_listing(struct text *out, const struct table *table, const struct image *images)
{
	const struct timeline *timeline = table->timeline;
	const struct plan *plan = timeline->plan;
	put_heading(out, plan);
	for (uint32_t number = 0; number < timeline->line_count; number++) {
		const struct frame_line *line = &timeline->lines[number];
		const struct laid_line *type = &timeline->types[line->type];
		for (uint32_t cell = 0; cell < type->cells; cell++) {
			const uint32_t at = (line->first_cell + cell) % table->period;
			const struct row row = table_row(table, STAGE_LINE, at);
			text_printf(out, "\"%s\" %u %u \"%s\" ", plan->lines[line->type].name, (unsigned)number, (unsigned)cell,
			            plan->lines[line->type].regions[type->region_of_cell[cell]].name);
			put_state(out, plan, table->state_of_cell[at]);
			put_row(out, table, &row);
			put_chips(out, plan, images, table->state_of_cell[at]);
		}
	}
	put_spare(out, table, images);
}
