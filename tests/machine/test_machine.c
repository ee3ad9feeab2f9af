#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdlib.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "machine/machine.h"

static const struct part two_pins = {.name = "two pins", .address_pins = 2, .data_pins = 8};
static const struct part three_pins = {.name = "three pins", .address_pins = 3, .data_pins = 8};
static const struct part four_pins = {.name = "four pins", .address_pins = 4, .data_pins = 8};
static const struct part wide = {.name = "wide", .address_pins = 2, .data_pins = 16};

static void assert_row(const struct machine *machine, uint32_t state, uint32_t next, bool clear, uint64_t levels)
{
	struct row row = machine_row(machine, STAGE_LINE, state);
	assert_int_equal(row.next, next);
	assert_int_equal(row.clear, clear);
	assert_int_equal(row.levels, levels);
}

static struct machine *create(struct arena *arena, const struct wiring *wiring, const struct image *images, uint32_t bank)
{
	struct machine *machine = machine_create(arena, wiring, images, bank);
	assert_non_null(machine);
	return machine;
}

// One chip wired straight: next on D0 and D1, signal 0 on D2, signal 1 on D3, nothing on D4 to D7.
static void straight_rows(void **test)
{
	(void)test;
	uint8_t bytes[] = {
		0xF1, // state 0: next 01, signals low low
		0xF6, // state 1: next 10, signal 0 high
		0xFB, // state 2: next 11, signal 1 high
		0xFC, // state 3: next 00, both high
	};
	struct image image = {bytes, sizeof bytes};
	struct chip chip = {.label = "rom0", .part = &two_pins, .address = {{ADDRESS_STATE, 0}, {ADDRESS_STATE, 1}},
	                    .data = {{DATA_NEXT, 0}, {DATA_NEXT, 1}, {DATA_SIGNAL, 0}, {DATA_SIGNAL, 1}}};
	struct wiring wiring = {.chips = &chip, .chip_count = 1, .line.state_bits = 2, .line.data_signals = 3};
	struct arena *arena = arena_create();
	struct machine *machine = create(arena, &wiring, &image, 0);
	assert_row(machine, 0, 1, false, 0);
	assert_row(machine, 1, 2, false, 1);
	assert_row(machine, 2, 3, false, 2);
	assert_row(machine, 3, 0, false, 3);
	for (uint32_t state = 0; state < 4; state++) {
		assert_int_equal(machine_next(machine, state), (state + 1) % 4);
		assert_int_equal(machine_settle(machine, state), state);
		assert_int_equal(machine_address(machine, state, 0), state);
	}
	arena_destroy(arena);
}

// Two chips, each with wires in an order of its own. Chip 0: A0 is state 1, A1 state 0; D7 is next 0, D0 signal 5. Chip
// 1: A0 low, A1 state 1, A2 state 0; D3 is next 1, D4 signal 2.
static void scrambled_rows(void **test)
{
	(void)test;
	uint8_t first[] = {
		0x80, // state 0: next 0 is 1, signal 5 low
		0x01, // address 1, state 2: next 0 is 0, signal 5 high
		0x00, // address 2, state 1: next 0 is 0, signal 5 low
		0x81, // state 3: next 0 is 1, signal 5 high
	};
	uint8_t second[] = {
		0x00, // state 0: next 1 is 0, signal 2 low
		0xFF, // A0 is low: never read
		0x10, // address 2, state 2: next 1 is 0, signal 2 high
		0xFF,
		0x08, // address 4, state 1: next 1 is 1, signal 2 low
		0xFF,
		0x18, // address 6, state 3: next 1 is 1, signal 2 high
		0xFF,
	};
	struct image images[] = {{first, sizeof first}, {second, sizeof second}};
	struct chip chips[] = {
		{.label = "U7", .part = &two_pins, .address = {{ADDRESS_STATE, 1}, {ADDRESS_STATE, 0}},
		 .data = {[0] = {DATA_SIGNAL, 5}, [7] = {DATA_NEXT, 0}}},
		{.label = "U8", .part = &three_pins, .address = {{ADDRESS_LOW, 0}, {ADDRESS_STATE, 1}, {ADDRESS_STATE, 0}},
		 .data = {[3] = {DATA_NEXT, 1}, [4] = {DATA_SIGNAL, 2}}},
	};
	struct wiring wiring = {.chips = chips, .chip_count = 2, .line.state_bits = 2, .line.data_signals = 0x24};
	struct arena *arena = arena_create();
	struct machine *machine = create(arena, &wiring, images, 0);
	assert_row(machine, 0, 1, false, 0x00);
	assert_row(machine, 1, 2, false, 0x00);
	assert_row(machine, 2, 0, false, 0x24);
	assert_row(machine, 3, 3, false, 0x24);
	assert_int_equal(machine_address(machine, 1, 0), 2);
	assert_int_equal(machine_address(machine, 1, 1), 4);
	arena_destroy(arena);
}

// A 16-bit chip stores the low byte first (design page 1.6). D0 is next 0, D9 next 1, D15 signal 0.
static void wide_chip(void **test)
{
	(void)test;
	uint8_t bytes[] = {
		0x01, 0x00, // state 0: next 1
		0x00, 0x02, // state 1: next 2
		0x01, 0x82, // state 2: next 3, signal high
		0xFE, 0x7D, // state 3: next 0; every unwired bit set
	};
	struct image image = {bytes, sizeof bytes};
	struct chip chip = {.label = "rom0", .part = &wide, .address = {{ADDRESS_STATE, 0}, {ADDRESS_STATE, 1}},
	                    .data = {[0] = {DATA_NEXT, 0}, [9] = {DATA_NEXT, 1}, [15] = {DATA_SIGNAL, 0}}};
	struct wiring wiring = {.chips = &chip, .chip_count = 1, .line.state_bits = 2, .line.data_signals = 1};
	struct arena *arena = arena_create();
	struct machine *machine = create(arena, &wiring, &image, 0);
	assert_row(machine, 0, 1, false, 0);
	assert_row(machine, 1, 2, false, 0);
	assert_row(machine, 2, 3, false, 1);
	assert_row(machine, 3, 0, false, 0);
	assert_int_equal(machine_address(machine, 3, 0), 6);
	arena_destroy(arena);
}

// A0 is the state, A1 tied high, A2 a bank jumper, A3 open and so low: bank 0 reads addresses 2 and 3, bank 1 reads 6
// and 7.
static void pins_that_no_state_drives(void **test)
{
	(void)test;
	uint8_t bytes[16] = {[2] = 1, [3] = 0, [6] = 0, [7] = 1};
	struct image image = {bytes, sizeof bytes};
	struct chip chip = {.label = "rom0", .part = &four_pins, .data = {{DATA_NEXT, 0}},
	                    .address = {{ADDRESS_STATE, 0}, {ADDRESS_HIGH, 0}, {ADDRESS_BANK, 0}, {ADDRESS_OPEN, 0}}};
	struct wiring wiring = {.chips = &chip, .chip_count = 1, .line.state_bits = 1, .bank_bits = 1};
	struct arena *arena = arena_create();
	struct machine *machine = create(arena, &wiring, &image, 0), *jumpered = create(arena, &wiring, &image, 1);
	assert_row(machine, 0, 1, false, 0);
	assert_row(machine, 1, 0, false, 0);
	assert_row(jumpered, 0, 0, false, 0);
	assert_row(jumpered, 1, 1, false, 0);
	assert_int_equal(machine_address(machine, 1, 0), 3);
	assert_int_equal(machine_address(jumpered, 1, 0), 7);
	arena_destroy(arena);
}

// A counter: clear on D0, a signal on D1.
static struct chip counted_chip(void)
{
	return (struct chip){.label = "rom0", .part = &two_pins, .address = {{ADDRESS_STATE, 0}, {ADDRESS_STATE, 1}},
	                     .data = {{DATA_CLEAR, 0}, {DATA_SIGNAL, 0}}};
}

static void counter_with_sync_clear(void **test)
{
	(void)test;
	uint8_t bytes[] = {
		0xFC, // state 0: counts
		0xFE, // state 1: counts, signal high
		0xFD, // state 2: clears: 0 is next
		0xFC, // state 3: counts, and the counter overflows to 0
	};
	struct image image = {bytes, sizeof bytes};
	struct chip chip = counted_chip();
	struct wiring wiring = {.chips = &chip, .chip_count = 1, .line.state_bits = 2, .line.advance = ADVANCE_COUNT, .line.clear = CLEAR_SYNC,
	                        .line.data_signals = 1};
	struct arena *arena = arena_create();
	struct machine *machine = create(arena, &wiring, &image, 0);
	assert_row(machine, 1, 0, false, 1);
	assert_row(machine, 2, 0, true, 0);
	assert_int_equal(machine_next(machine, 0), 1);
	assert_int_equal(machine_next(machine, 1), 2);
	assert_int_equal(machine_next(machine, 2), 0);
	assert_int_equal(machine_next(machine, 3), 0);
	assert_int_equal(machine_settle(machine, 2), 2);
	arena_destroy(arena);
}

static void counter_with_async_clear(void **test)
{
	(void)test;
	uint8_t bytes[] = {
		0xFC, // state 0
		0xFC, // state 1: the edge leads to 2, which falls to 0
		0xFD, // state 2: clears
		0xFC, // state 3: a state of its own, should the counter hold it; overflows to 0
	};
	struct image image = {bytes, sizeof bytes};
	struct chip chip = counted_chip();
	struct wiring wiring = {.chips = &chip, .chip_count = 1, .line.state_bits = 2, .line.advance = ADVANCE_COUNT, .line.clear = CLEAR_ASYNC,
	                        .line.data_signals = 1};
	struct arena *arena = arena_create();
	struct machine *machine = create(arena, &wiring, &image, 0);
	assert_int_equal(machine_settle(machine, 2), 0);
	assert_int_equal(machine_settle(machine, 3), 3);
	assert_int_equal(machine_next(machine, 0), 1);
	assert_int_equal(machine_next(machine, 1), 0);
	assert_int_equal(machine_next(machine, 2), 1); // it is at 0 already
	assert_int_equal(machine_next(machine, 3), 0);
	bytes[0] = 0xFD; // clear asserted at 0 too: the counter never leaves
	assert_int_equal(machine_settle(machine, 0), 0);
	assert_int_equal(machine_next(machine, 0), 0);
	assert_int_equal(machine_next(machine, 3), 0);
	arena_destroy(arena);
}

// The largest parts, the state on their highest pins A24 and A25, with A1 high: a byte of each quarter of 64 MiB, a word
// of each of 128. Most of the memory is never touched.
static void highest_pins(void **test)
{
	(void)test;
	static const struct part parts[] = {{.name = "narrow", .address_pins = 26, .data_pins = 8},
	                                    {.name = "wide", .address_pins = 26, .data_pins = 16}};
	for (size_t index = 0; index < 2; index++) {
		const size_t width = index + 1, quarter = ((size_t)1 << 24) * width;
		struct image image = {calloc(4, quarter), 4 * quarter};
		assert_non_null(image.bytes);
		struct chip chip = {.label = "rom0", .part = &parts[index], .data = {{DATA_NEXT, 0}, {DATA_NEXT, 1}, {DATA_SIGNAL, 0}}};
		chip.address[1].kind = ADDRESS_HIGH;
		chip.address[24] = (struct address_wire){ADDRESS_STATE, 1};
		chip.address[25] = (struct address_wire){ADDRESS_STATE, 0};
		image.bytes[2 * width] = 0x01;               // state 0: next 01
		image.bytes[2 * quarter + 2 * width] = 0x06; // A25, state 1: next 10, signal high
		image.bytes[quarter + 2 * width] = 0x07;     // A24, state 2: next 11, signal high
		image.bytes[3 * quarter + 2 * width] = 0x00; // both, state 3: next 00
		struct wiring wiring = {.chips = &chip, .chip_count = 1, .line.state_bits = 2, .line.data_signals = 1};
		struct arena *arena = arena_create();
		struct machine *machine = create(arena, &wiring, &image, 0);
		uint32_t next[4];
		machine_all_next(machine, next, 1);
		for (uint32_t state = 0; state < 4; state++) {
			assert_row(machine, state, (state + 1) % 4, false, state == 1 || state == 2);
			assert_int_equal(machine_next(machine, state), (state + 1) % 4);
			assert_int_equal(next[state], (state + 1) % 4);
		}
		assert_int_equal(machine_address(machine, 3, 0), 3 * quarter + 2 * width);
		arena_destroy(arena);
		free(image.bytes);
	}
}

// As many state bits as there may be: 0x800000 → 0x7FFFFF → 0x800000, and everything else leads to 0. Next 23 is D0
// of the first chip, next 22 D1, and so on to next 0, D7 of the third.
static void highest_state_bit(void **test)
{
	(void)test;
	static const struct part part = {.name = "large", .address_pins = 24, .data_pins = 8};
	struct image images[3];
	struct chip chips[3];
	for (unsigned chip = 0; chip < 3; chip++) {
		images[chip] = (struct image){calloc(1, (size_t)1 << 24), (size_t)1 << 24};
		assert_non_null(images[chip].bytes);
		chips[chip] = (struct chip){.label = "rom", .part = &part};
		for (unsigned pin = 0; pin < 24; pin++)
			chips[chip].address[pin] = (struct address_wire){ADDRESS_STATE, pin};
		for (unsigned pin = 0; pin < 8; pin++)
			chips[chip].data[pin] = (struct data_wire){DATA_NEXT, 23 - (chip * 8 + pin)};
		images[chip].bytes[0x800000] = chip == 0 ? 0xFE : 0xFF;
		images[chip].bytes[0x7FFFFF] = chip == 0 ? 0x01 : 0x00;
	}
	struct wiring wiring = {.chips = chips, .chip_count = 3, .line.state_bits = 24};
	struct arena *arena = arena_create();
	struct machine *machine = create(arena, &wiring, images, 0);
	assert_int_equal(machine_next(machine, 0x800000), 0x7FFFFF);
	assert_int_equal(machine_next(machine, 0x7FFFFF), 0x800000);
	assert_row(machine, 0x7FFFFF, 0x800000, false, 0);
	assert_row(machine, 0x800000, 0x7FFFFF, false, 0);
	assert_int_equal(machine_next(machine, 0), 0);
	assert_int_equal(machine_next(machine, 0xFFFFFF), 0);
	arena_destroy(arena);
	for (unsigned chip = 0; chip < 3; chip++)
		free(images[chip].bytes);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(straight_rows),
		cmocka_unit_test(scrambled_rows),
		cmocka_unit_test(wide_chip),
		cmocka_unit_test(pins_that_no_state_drives),
		cmocka_unit_test(counter_with_sync_clear),
		cmocka_unit_test(counter_with_async_clear),
		cmocka_unit_test(highest_pins),
		cmocka_unit_test(highest_state_bit),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
