#include "image/image.h"

#include <string.h>

#include "base/arena.h"
#include "base/file.h"
#include "catalogue/catalogue.h"
#include "table/table.h"

// A chip in terms of the machine: lanes of rows, and the state that each address means.
struct lane_writer {
	const struct chip *chip;
	const struct wiring *wiring;
	uint32_t next[3][256]; // a byte of the next state to its part of the lane
	uint64_t known_levels; // levels of which the lane is known, so that few are taken apart
	uint32_t known_lane;
	uint8_t *lanes;          // [2^state_bits] bytes, or twice as many with the low byte first
	uint32_t states[4][256]; // a byte of the address to its part of the state
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

static uint32_t lane_of_clear(const struct chip *chip)
{
	uint32_t lane = 0;
	for (unsigned pin = 0; pin < chip->part->data_pins; pin++)
		if (chip->data[pin].kind == DATA_CLEAR)
			lane |= (uint32_t)1 << pin;
	return lane;
}

static uint32_t lane_of_row(struct lane_writer *writer, const struct row *row)
{
	if (row->levels != writer->known_levels) {
		writer->known_levels = row->levels;
		writer->known_lane = lane_of_levels(writer->chip, row->levels);
	}
	return writer->known_lane | writer->next[0][row->next & 255] | writer->next[1][row->next >> 8 & 255] |
	       writer->next[2][row->next >> 16] | (row->clear ? lane_of_clear(writer->chip) : 0);
}

static void make_tables(struct lane_writer *writer)
{
	const struct chip *chip = writer->chip;
	for (unsigned pin = 0; pin < chip->part->data_pins; pin++)
		for (unsigned byte = 0; byte < 256 && chip->data[pin].kind == DATA_NEXT; byte++)
			if (byte >> chip->data[pin].index % 8 & 1)
				writer->next[chip->data[pin].index / 8][byte] |= (uint32_t)1 << pin;
	for (unsigned pin = 0; pin < chip->part->address_pins; pin++)
		for (unsigned byte = 0; byte < 256 && chip->address[pin].kind == ADDRESS_STATE; byte++)
			if (byte >> pin % 8 & 1)
				writer->states[pin / 8][byte] |= (uint32_t)1 << chip->address[pin].index;
}

static bool create_writer(struct lane_writer *writer, struct arena *arena, const struct chip *chip,
                          const struct wiring *wiring)
{
	*writer = (struct lane_writer){.chip = chip, .wiring = wiring, .known_lane = lane_of_levels(chip, 0)};
	make_tables(writer);
	writer->lanes = arena_array(arena, (size_t)1 << wiring->line.state_bits, chip_width(chip));
	return writer->lanes != NULL;
}

static void put_lane(struct lane_writer *writer, uint32_t state, uint32_t lane)
{
	if (chip_width(writer->chip) == 1) {
		writer->lanes[state] = (uint8_t)lane;
		return;
	}
	writer->lanes[2 * (size_t)state] = (uint8_t)lane;
	writer->lanes[2 * (size_t)state + 1] = (uint8_t)(lane >> 8);
}

static void put_spare(struct lane_writer *writer, const struct row *spare)
{
	const uint32_t lane = lane_of_row(writer, spare);
	const uint32_t states = (uint32_t)1 << writer->wiring->line.state_bits;
	if (chip_width(writer->chip) == 1) {
		memset(writer->lanes, (int)lane, states);
		return;
	}
	for (uint32_t state = 0; state < states; state++)
		put_lane(writer, state, lane);
}

static void put_rows(struct lane_writer *writers, const struct table *table)
{
	const size_t chips = table->wiring.chip_count;
	for (size_t chip = 0; chip < chips; chip++)
		put_spare(&writers[chip], &table->spare);
	for (uint32_t cell = 0; cell < table->period; cell++) {
		const struct row row = table_row(table, cell);
		for (size_t chip = 0; chip < chips; chip++)
			put_lane(&writers[chip], table->state_of_cell[cell], lane_of_row(&writers[chip], &row));
	}
}

// True if the state's bits are on the lowest address pins in order.
static bool is_straight(const struct lane_writer *writer)
{
	for (unsigned pin = 0; pin < writer->wiring->line.state_bits; pin++)
		if (writer->chip->address[pin].kind != ADDRESS_STATE || writer->chip->address[pin].index != pin)
			return false;
	return true;
}

static void copy_straight(const struct lane_writer *writer, const struct image *image)
{
	const size_t bytes = chip_width(writer->chip) << writer->wiring->line.state_bits;
	for (size_t start = 0; start < image->length; start += bytes)
		memcpy(image->bytes + start, writer->lanes, bytes);
}

// Looks up each address's state. Pins that no state bit drives have no part in it, so contents repeat over them.
static void copy_scattered(const struct lane_writer *writer, const struct image *image)
{
	const size_t width = chip_width(writer->chip), addresses = image->length / width;
	for (size_t start = 0; start < addresses; start += 256) {
		const uint32_t high =
			writer->states[1][start >> 8 & 255] | writer->states[2][start >> 16 & 255] | writer->states[3][start >> 24];
		for (size_t low = 0; low < 256 && start + low < addresses; low++) {
			const size_t state = high | writer->states[0][low];
			for (size_t byte = 0; byte < width; byte++)
				image->bytes[(start + low) * width + byte] = writer->lanes[state * width + byte];
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

static bool fill(const struct table *table, struct arena *scratch, const struct image *images)
{
	const struct wiring *wiring = &table->wiring;
	struct lane_writer *writers = arena_array(scratch, wiring->chip_count, sizeof *writers);
	if (writers == NULL)
		return false;
	for (size_t chip = 0; chip < wiring->chip_count; chip++)
		if (!create_writer(&writers[chip], scratch, &wiring->chips[chip], wiring))
			return false;
	put_rows(writers, table);
	for (size_t chip = 0; chip < wiring->chip_count; chip++) {
		if (is_straight(&writers[chip]))
			copy_straight(&writers[chip], &images[chip]);
		else
			copy_scattered(&writers[chip], &images[chip]);
	}
	return true;
}

bool images_fill(const struct table *table, struct arena *arena, struct image *images)
{
	struct image filled[LIMIT_CHIPS];
	struct arena *scratch = arena_create();
	const bool good = scratch != NULL && allocate_images(&table->wiring, arena, filled) && fill(table, scratch, filled);
	arena_destroy(scratch);
	for (size_t chip = 0; good && chip < table->wiring.chip_count; chip++)
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
