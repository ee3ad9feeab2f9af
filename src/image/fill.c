#include "image/image.h"

#include <string.h>

#include "base/arena.h"
#include "base/file.h"
#include "catalogue/catalogue.h"
#include "table/table.h"

// A chip in terms of the machine: lanes of rows, and the row and bank that each address means.
struct lane_writer {
	const struct chip *chip;
	unsigned address_bits; // of its stage
	unsigned state_bits;
	uint32_t next[3][256]; // a byte of the next state to its part of the lane
	uint32_t kind[3][256]; // and of the kind
	uint32_t clear, step;  // their pins
	uint64_t known_levels; // levels of which the lane is known, so that few are taken apart
	uint32_t known_lane;
	uint8_t *lanes;        // [2^address_bits] bytes, or twice as many with the low byte first
	uint32_t rows[4][256]; // a byte of the address to its part of the row's address
	uint8_t banks[4][256]; // and of the bank
};

// The banks that hold the same table.
struct banks {
	const struct table *const *tables;
	uint32_t count;
	const struct table *current;
};

static size_t chip_width(const struct chip *chip)
{
	return chip->part->data_pins / 8;
}

// The lane of levels; pins that carry neither a signal nor next nor clear store 1.
static uint32_t lane_of_levels(const struct chip *chip, uint64_t levels)
{
	uint32_t lane = 0;
	for (unsigned pin = 0; pin < chip->part->data_pins; pin++) {
		const struct data_wire wire = chip->data[pin];
		const bool high = wire.kind == DATA_OPEN || (wire.kind == DATA_SIGNAL && (levels >> wire.index & 1) != 0);
		lane |= (uint32_t)high << pin;
	}
	return lane;
}

static uint32_t lane_of_row(struct lane_writer *writer, const struct row *row)
{
	if (row->levels != writer->known_levels) {
		writer->known_levels = row->levels;
		writer->known_lane = lane_of_levels(writer->chip, row->levels);
	}
	return writer->known_lane | writer->next[0][row->next & 255] | writer->next[1][row->next >> 8 & 255] |
	       writer->next[2][row->next >> 16] | writer->kind[0][row->kind & 255] | writer->kind[1][row->kind >> 8 & 255] |
	       writer->kind[2][row->kind >> 16] | (row->clear ? writer->clear : 0) | (row->step ? writer->step : 0);
}

static void spread_number(uint32_t lanes[3][256], unsigned bit, unsigned pin)
{
	for (unsigned byte = 0; byte < 256; byte++)
		if (byte >> bit % 8 & 1)
			lanes[bit / 8][byte] |= (uint32_t)1 << pin;
}

static void add_data_wire(struct lane_writer *writer, struct data_wire wire, unsigned pin)
{
	switch (wire.kind) {
	case DATA_NEXT: spread_number(writer->next, wire.index, pin); break;
	case DATA_KIND: spread_number(writer->kind, wire.index, pin); break;
	case DATA_CLEAR: writer->clear |= (uint32_t)1 << pin; break;
	case DATA_STEP: writer->step |= (uint32_t)1 << pin; break;
	case DATA_OPEN:
	case DATA_SIGNAL: break;
	}
}

static void add_address_wire(struct lane_writer *writer, struct address_wire wire, unsigned pin)
{
	for (unsigned byte = 0; byte < 256; byte++) {
		if ((byte >> pin % 8 & 1) == 0)
			continue;
		if (wire.kind == ADDRESS_STATE)
			writer->rows[pin / 8][byte] |= (uint32_t)1 << wire.index;
		else if (wire.kind == ADDRESS_KIND)
			writer->rows[pin / 8][byte] |= (uint32_t)1 << (writer->state_bits + wire.index);
		else if (wire.kind == ADDRESS_BANK)
			writer->banks[pin / 8][byte] |= (uint8_t)(1u << wire.index);
	}
}

static bool create_writer(struct lane_writer *writer, struct arena *arena, const struct chip *chip,
                          const struct wiring *wiring)
{
	const struct stage_wiring *stage = wiring_stage(wiring, chip->stage);
	*writer = (struct lane_writer){.chip = chip, .address_bits = stage->address_bits, .state_bits = stage->state_bits,
	                               .known_lane = lane_of_levels(chip, 0)};
	for (unsigned pin = 0; pin < chip->part->data_pins; pin++)
		add_data_wire(writer, chip->data[pin], pin);
	for (unsigned pin = 0; pin < chip->part->address_pins; pin++)
		add_address_wire(writer, chip->address[pin], pin);
	writer->lanes = arena_array(arena, (size_t)1 << stage->address_bits, chip_width(chip));
	return writer->lanes != NULL;
}

static void put_lane(struct lane_writer *writer, uint32_t row, uint32_t lane)
{
	if (chip_width(writer->chip) == 1) {
		writer->lanes[row] = (uint8_t)lane;
		return;
	}
	writer->lanes[2 * (size_t)row] = (uint8_t)lane;
	writer->lanes[2 * (size_t)row + 1] = (uint8_t)(lane >> 8);
}

// Fills all rows of a kind with the spare one.
static void put_spare(struct lane_writer *writer, uint32_t kind, const struct row *spare)
{
	const uint32_t lane = lane_of_row(writer, spare);
	const uint32_t states = (uint32_t)1 << writer->state_bits, first = kind << writer->state_bits;
	if (chip_width(writer->chip) == 1) {
		memset(writer->lanes + first, (int)lane, states);
		return;
	}
	for (uint32_t state = 0; state < states; state++)
		put_lane(writer, first + state, lane);
}

static void put_rows(struct lane_writer *writers, const struct table *table, enum stage stage)
{
	const size_t chips = table->wiring.chip_count;
	const struct stage_wiring *wiring = wiring_stage(&table->wiring, stage);
	const uint32_t rows = table_row_count(table, stage);
	for (uint32_t kind = 0; kind < (uint32_t)1 << (wiring->address_bits - wiring->state_bits); kind++) {
		const struct row spare = table_spare(table, stage, kind);
		for (size_t chip = 0; chip < chips; chip++)
			if (writers[chip].chip->stage == stage)
				put_spare(&writers[chip], kind, &spare);
	}
	for (uint32_t index = 0; index < rows; index++) {
		const struct row row = table_row(table, stage, index);
		const uint32_t address = table_row_address(table, stage, index);
		for (size_t chip = 0; chip < chips; chip++)
			if (writers[chip].chip->stage == stage)
				put_lane(&writers[chip], address, lane_of_row(&writers[chip], &row));
	}
}

// True if the bits of the stage's address are on the lowest address pins in order.
static bool is_straight(const struct lane_writer *writer)
{
	for (unsigned pin = 0; pin < writer->address_bits; pin++) {
		const struct address_wire *wire = &writer->chip->address[pin];
		const bool state = pin < writer->state_bits;
		if (wire->kind != (state ? ADDRESS_STATE : ADDRESS_KIND) || wire->index != (state ? pin : pin - writer->state_bits))
			return false;
	}
	return true;
}

// Whether the bank that an address selects holds the current table.
static bool is_current(const struct lane_writer *writer, const struct banks *banks, size_t address)
{
	const uint32_t bank = writer->banks[0][address & 255] | writer->banks[1][address >> 8 & 255] |
	                      writer->banks[2][address >> 16 & 255] | writer->banks[3][address >> 24];
	return banks->tables[bank & (banks->count - 1)] == banks->current;
}

static void copy_straight(const struct lane_writer *writer, const struct banks *banks, const struct image *image)
{
	const size_t width = chip_width(writer->chip), bytes = width << writer->address_bits;
	for (size_t start = 0; start < image->length; start += bytes)
		if (is_current(writer, banks, start / width))
			memcpy(image->bytes + start, writer->lanes, bytes);
}

// Looks up each address's row. Pins that no bit of the stage's address drives have no part in it, so contents repeat over
// them.
static void copy_scattered(const struct lane_writer *writer, const struct banks *banks, const struct image *image)
{
	const size_t width = chip_width(writer->chip), addresses = image->length / width;
	for (size_t start = 0; start < addresses; start += 256) {
		const uint32_t high =
			writer->rows[1][start >> 8 & 255] | writer->rows[2][start >> 16 & 255] | writer->rows[3][start >> 24];
		for (size_t low = 0; low < 256 && start + low < addresses; low++) {
			const size_t row = high | writer->rows[0][low];
			if (!is_current(writer, banks, start + low))
				continue;
			for (size_t byte = 0; byte < width; byte++)
				image->bytes[(start + low) * width + byte] = writer->lanes[row * width + byte];
		}
	}
}

static bool allocate_images(const struct wiring *wiring, struct arena *arena, struct image *images)
{
	for (size_t chip = 0; chip < wiring->chip_count; chip++) {
		images[chip].length = chip_bytes(&wiring->chips[chip]);
		images[chip].bytes = arena_alloc(arena, images[chip].length);
		if (images[chip].bytes == NULL)
			return false;
	}
	return true;
}

static void fill_banks(struct lane_writer *writers, const struct banks *banks, const struct image *images)
{
	const struct wiring *wiring = &banks->current->wiring;
	put_rows(writers, banks->current, STAGE_LINE);
	if (wiring->form == FORM_LINE_FRAME)
		put_rows(writers, banks->current, STAGE_FRAME);
	for (size_t chip = 0; chip < wiring->chip_count; chip++) {
		if (is_straight(&writers[chip]))
			copy_straight(&writers[chip], banks, &images[chip]);
		else
			copy_scattered(&writers[chip], banks, &images[chip]);
	}
}

static bool stands_before(const struct table *const *tables, uint32_t bank)
{
	for (uint32_t other = 0; other < bank; other++)
		if (tables[other] == tables[bank])
			return true;
	return false;
}

static bool fill(const struct table *const *tables, uint32_t bank_count, struct arena *scratch, const struct image *images)
{
	const struct wiring *wiring = &tables[0]->wiring;
	struct lane_writer *writers = arena_array(scratch, wiring->chip_count, sizeof *writers);
	if (writers == NULL)
		return false;
	for (size_t chip = 0; chip < wiring->chip_count; chip++)
		if (!create_writer(&writers[chip], scratch, &wiring->chips[chip], wiring))
			return false;
	for (uint32_t bank = 0; bank < bank_count; bank++) {
		const struct banks banks = {tables, bank_count, tables[bank]};
		if (!stands_before(tables, bank))
			fill_banks(writers, &banks, images);
	}
	return true;
}

bool images_fill(const struct table *const *tables, uint32_t bank_count, struct arena *arena, struct image *images)
{
	const struct wiring *wiring = &tables[0]->wiring;
	struct image filled[LIMIT_CHIPS];
	struct arena *scratch = arena_create();
	const bool good = scratch != NULL && allocate_images(wiring, arena, filled) && fill(tables, bank_count, scratch, filled);
	arena_destroy(scratch);
	for (size_t chip = 0; good && chip < wiring->chip_count; chip++)
		images[chip] = filled[chip];
	return good;
}

uint32_t image_crc32(const struct image *image)
{
	return file_crc32(image->bytes, image->length);
}

uint16_t image_sum16(const struct image *image)
{
	uint32_t sum = 0;
	for (size_t index = 0; index < image->length; index++)
		sum += image->bytes[index];
	return (uint16_t)sum;
}
