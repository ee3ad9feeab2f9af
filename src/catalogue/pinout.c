// The pins of packages.
#include <stdio.h>
#include <string.h>

#include "catalogue/reading.h"

#define LIMIT_PINS 64u

enum { PINOUT_PINS, PINOUT_SOURCE, PINOUT_KEY_COUNT };

static const struct key pinout_keys[PINOUT_KEY_COUNT] = {
	[PINOUT_PINS] = PLAIN_KEY("pins", KEY_REQUIRED),
	[PINOUT_SOURCE] = PLAIN_KEY("source", KEY_REQUIRED),
};

// Pins that are neither address nor data, as they are while a chip is read all the time. A programming voltage's pin is at the supply then.
static const struct package_pin other_pins[] = {
	{"GND", PIN_GROUND, 0},       {"VCC", PIN_SUPPLY, 0},     {"/CE", PIN_TIED_LOW, 0},   {"/OE", PIN_TIED_LOW, 0},
	{"/OE/VPP", PIN_TIED_LOW, 0}, {"/WE", PIN_TIED_HIGH, 0},  {"/PGM", PIN_TIED_HIGH, 0}, {"VPP", PIN_TIED_HIGH, 0},
	{"NC", PIN_OPEN, 0},          {"RDY", PIN_OPEN, 0},
};

// "A12" of a part with so many of that letter. False if it is not such a name.
static bool is_numbered(const char *name, char letter, unsigned count, unsigned *index)
{
	char wanted[16];
	for (*index = 0; *index < count; ++*index) {
		snprintf(wanted, sizeof wanted, "%c%u", letter, *index);
		if (strcmp(name, wanted) == 0)
			return true;
	}
	return false;
}

static bool find_pin(const struct part *part, const char *name, struct package_pin *pin)
{
	*pin = (struct package_pin){name, PIN_ADDRESS, 0};
	if (is_numbered(name, 'A', part->address_pins, &pin->index))
		return true;
	pin->kind = PIN_DATA;
	if (is_numbered(name, 'D', part->data_pins, &pin->index))
		return true;
	for (size_t index = 0; index < COUNT_OF(other_pins); index++)
		if (strcmp(name, other_pins[index].name) == 0) {
			*pin = other_pins[index];
			return true;
		}
	return false;
}

static bool stands_twice(const struct package_pin *pins, unsigned count, struct package_pin pin)
{
	for (unsigned before = 0; before < count; before++)
		if ((pin.kind == PIN_ADDRESS || pin.kind == PIN_DATA) && pins[before].kind == pin.kind && pins[before].index == pin.index)
			return true;
	return false;
}

// False after reporting a pin that the part has not, has twice, or lacks.
static bool check_pins(struct reader *reader, const struct node *list, const struct part *part, struct package_pin *pins)
{
	unsigned numbered = 0;
	for (unsigned index = 0; index < list->count; index++) {
		const struct node *node = list->items[index];
		if (!find_pin(part, node->text, &pins[index])) {
			diagnose(reader->diagnostics, RULE_BAD_CHOICE, node->place, "pin %u: the part has no pin \"%s\"", index + 1, SHORT(node->text));
			return false;
		}
		if (stands_twice(pins, index, pins[index])) {
			diagnose(reader->diagnostics, RULE_DOUBLED_NAME, node->place, "pin %u: \"%s\" is another pin too", index + 1, node->text);
			return false;
		}
		numbered += pins[index].kind == PIN_ADDRESS || pins[index].kind == PIN_DATA;
	}
	if (numbered == part->address_pins + part->data_pins)
		return true;
	diagnose(reader->diagnostics, RULE_BAD_CHOICE, list->place, "pinout: wanted all %u address and %u data pins, found %u of them",
	         part->address_pins, part->data_pins, numbered);
	return false;
}

void read_pinout(struct reader *reader, const struct node *node, struct part *part)
{
	const struct node *values[PINOUT_KEY_COUNT];
	const char *source = "";
	if (!read_mapping(reader, node, "a pinout", pinout_keys, PINOUT_KEY_COUNT, values))
		return;
	catalogue_text(reader, values[PINOUT_SOURCE], "source", &source);
	const struct node *list = values[PINOUT_PINS];
	if (list == NULL || !expect_values(reader, list, "pins") || !catalogue_count(reader, list, "pins", LIMIT_PINS))
		return;
	struct package_pin *pins = reader_array(reader, list->count, sizeof *pins);
	if (pins == NULL || !check_pins(reader, list, part, pins))
		return;
	part->pins = pins;
	part->pin_count = (unsigned)list->count;
	part->pinout_source = source;
}

unsigned part_pin_number(const struct part *part, enum pin_kind kind, unsigned index)
{
	for (unsigned pin = 0; pin < part->pin_count; pin++)
		if (part->pins[pin].kind == kind && part->pins[pin].index == index)
			return pin + 1;
	return 0;
}
