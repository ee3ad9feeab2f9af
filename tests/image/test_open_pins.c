// Whether an image depends on an address pin to which nothing is wired.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "catalogue/catalogue.h"
#include "image/image.h"

static const struct part narrow = {.name = "narrow", .address_pins = 3, .data_pins = 8};
static const struct part wide = {.name = "wide", .address_pins = 2, .data_pins = 16};

// A chip of the part, the pins of `open` (a bit each) open and the others wired to state bits.
static struct chip chip_of(const struct part *part, unsigned open)
{
	struct chip chip = {.label = "U1", .part = part};
	for (unsigned pin = 0; pin < part->address_pins; pin++)
		chip.address[pin] = (struct address_wire){open >> pin & 1 ? ADDRESS_OPEN : ADDRESS_STATE, pin};
	return chip;
}

static void assert_reads(const struct part *part, unsigned open, uint8_t bytes[8], unsigned expected_pin, size_t expected_offset)
{
	const struct chip chip = chip_of(part, open);
	const struct image image = {bytes, 8};
	unsigned pin = 77;
	size_t offset = 77, count = 77;
	assert_true(image_reads_open_pin(&chip, &image, &pin, &offset, &count));
	assert_int_equal(pin, expected_pin);
	assert_int_equal(offset, expected_offset);
}

static void assert_reads_none(const struct part *part, unsigned open, uint8_t bytes[8])
{
	const struct chip chip = chip_of(part, open);
	const struct image image = {bytes, 8};
	unsigned pin = 77;
	size_t offset = 77, count = 77;
	assert_false(image_reads_open_pin(&chip, &image, &pin, &offset, &count));
	assert_int_equal(pin, 77);
	assert_int_equal(offset, 77);
	assert_int_equal(count, 77);
}

// A0 open: bytes 0 and 1 are alike, 2 and 3 are not.
static void the_lowest_pin(void **state)
{
	(void)state;
	assert_reads(&narrow, 1, (uint8_t[]){5, 5, 6, 7, 8, 8, 9, 9}, 0, 2);
	assert_reads(&narrow, 1, (uint8_t[]){5, 5, 6, 6, 8, 8, 9, 0}, 0, 6);
	assert_reads_none(&narrow, 1, (uint8_t[]){5, 5, 6, 6, 8, 8, 9, 9});
}

// A1 open: byte n against n + 2, in each half; A2 open: byte n against n + 4.
static void higher_pins(void **state)
{
	(void)state;
	assert_reads(&narrow, 2, (uint8_t[]){1, 2, 1, 0, 3, 4, 3, 4}, 1, 1);
	assert_reads(&narrow, 2, (uint8_t[]){1, 2, 1, 2, 3, 4, 3, 0}, 1, 5);
	assert_reads_none(&narrow, 2, (uint8_t[]){1, 2, 1, 2, 3, 4, 3, 4});
	assert_reads(&narrow, 4, (uint8_t[]){1, 2, 3, 4, 1, 2, 3, 0}, 2, 3);
	assert_reads_none(&narrow, 4, (uint8_t[]){1, 2, 3, 4, 1, 2, 3, 4});
}

// The first of several open pins on which something depends; pins that are wired, if only to a level, do not count.
static void of_several_pins(void **state)
{
	(void)state;
	assert_reads(&narrow, 6, (uint8_t[]){1, 2, 1, 2, 3, 4, 3, 4}, 2, 0);
	assert_reads(&narrow, 7, (uint8_t[]){1, 1, 1, 1, 1, 1, 2, 2}, 1, 4);
	assert_reads_none(&narrow, 0, (uint8_t[]){1, 2, 3, 4, 5, 6, 7, 8});
	struct chip chip = chip_of(&narrow, 0);
	chip.address[0].kind = ADDRESS_LOW;
	chip.address[1].kind = ADDRESS_HIGH;
	chip.address[2].kind = ADDRESS_BANK;
	unsigned pin;
	size_t offset, count;
	assert_false(image_reads_open_pin(&chip, &(struct image){(uint8_t[]){1, 2, 3, 4, 5, 6, 7, 8}, 8}, &pin, &offset, &count));
}

// Two bytes at each address: A0 is the words at 0 and 2, 4 and 6; the high byte of the second pair differs.
static void words(void **state)
{
	(void)state;
	assert_reads(&wide, 1, (uint8_t[]){1, 2, 1, 2, 3, 4, 3, 0}, 0, 5);
	assert_reads(&wide, 2, (uint8_t[]){1, 2, 3, 4, 1, 2, 0, 4}, 1, 2);
	assert_reads_none(&wide, 1, (uint8_t[]){1, 2, 1, 2, 3, 4, 3, 4});
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(the_lowest_pin),
		cmocka_unit_test(higher_pins),
		cmocka_unit_test(of_several_pins),
		cmocka_unit_test(words),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
