#include "machine/chips.h"

#include "catalogue/catalogue.h"

// The byte address bits that address pin `pin` adds when it is high: a 16-bit part has two bytes at each address.
static uint32_t pin_weight(const struct chip_reader *reader, unsigned pin)
{
	return (uint32_t)reader->width << pin;
}

// Pins that no bit of the stage's address drives are constant: they go into the first table, which every look-up reads.
static void add_constant(struct chip_reader *reader, uint32_t weight)
{
	for (unsigned byte = 0; byte < 256; byte++)
		reader->address[0][byte] |= weight;
}

static void add_state_bit(struct chip_reader *reader, unsigned bit, uint32_t weight)
{
	uint32_t *table = reader->address[bit / 8];
	for (unsigned byte = 0; byte < 256; byte++)
		if (byte >> bit % 8 & 1)
			table[byte] |= weight;
}

static void add_address_wire(struct chip_reader *reader, struct address_wire wire, uint32_t weight, unsigned state_bits,
                             uint32_t bank)
{
	switch (wire.kind) {
	case ADDRESS_OPEN:
	case ADDRESS_LOW:
		break;
	case ADDRESS_HIGH:
		add_constant(reader, weight);
		break;
	case ADDRESS_STATE:
		add_state_bit(reader, wire.index, weight);
		break;
	case ADDRESS_KIND:
		add_state_bit(reader, state_bits + wire.index, weight);
		break;
	case ADDRESS_BANK:
		if (bank >> wire.index & 1)
			add_constant(reader, weight);
		break;
	}
}

// What a data pin adds while it is high.
static void add_high(struct chip_reader *reader, struct data_wire wire, unsigned lane, unsigned byte)
{
	switch (wire.kind) {
	case DATA_OPEN:
		break;
	case DATA_NEXT:
		reader->next[lane][byte] |= (uint32_t)1 << wire.index;
		break;
	case DATA_KIND:
		reader->kind[lane][byte] |= (uint32_t)1 << wire.index;
		break;
	case DATA_STEP:
		reader->control[lane][byte] |= CONTROL_STEP;
		break;
	case DATA_CLEAR:
		reader->control[lane][byte] |= CONTROL_CLEAR;
		break;
	case DATA_SIGNAL:
		reader->levels[lane][byte] |= (uint64_t)1 << wire.index;
		break;
	}
}

static void add_data_wire(struct chip_reader *reader, struct data_wire wire, unsigned pin)
{
	for (unsigned byte = 0; byte < 256; byte++)
		if (byte >> pin % 8 & 1)
			add_high(reader, wire, pin / 8, byte);
	reader->carries_next |= wire.kind == DATA_NEXT;
	reader->carries_levels |= wire.kind == DATA_SIGNAL;
	reader->carries_clear |= wire.kind == DATA_CLEAR;
}

void chip_reader_init(struct chip_reader *reader, const struct wiring *wiring, size_t index, const struct image *image, uint32_t bank)
{
	const struct chip *chip = &wiring->chips[index];
	const struct part *part = chip->part;
	const unsigned state_bits = wiring_stage(wiring, chip->stage)->state_bits;
	*reader = (struct chip_reader){.stage = chip->stage, .bytes = image->bytes, .width = part->data_pins / 8};
	for (unsigned pin = 0; pin < part->address_pins; pin++)
		add_address_wire(reader, chip->address[pin], pin_weight(reader, pin), state_bits, bank);
	for (unsigned pin = 0; pin < part->data_pins; pin++)
		add_data_wire(reader, chip->data[pin], pin);
}
