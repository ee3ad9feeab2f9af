// All next states at once, against the table that was burned and against the machine's one by one.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "machine/machine.h"

#define MAX_CHIPS 4
#define GUARD 0xDEADBEEFu

struct board {
	struct part part;
	struct chip chips[MAX_CHIPS];
	struct image images[MAX_CHIPS];
	struct wiring wiring;
	unsigned spare_pins;   // address pins that no state bit drives
};

// A fixed sequence: Marsaglia's xorshift64 (2003), shifts 13, 7, 17.
static uint32_t random_below(uint64_t *seed, uint32_t bound)
{
	*seed ^= *seed << 13;
	*seed ^= *seed >> 7;
	*seed ^= *seed << 17;
	return (uint32_t)((*seed >> 32) * bound >> 32);
}

static void shuffle(unsigned *values, unsigned count, uint64_t *seed)
{
	for (unsigned index = count; index-- > 1;) {
		unsigned other = random_below(seed, index + 1), kept = values[index];
		values[index] = values[other];
		values[other] = kept;
	}
}

static void wire_address(struct board *board, struct chip *chip, bool scrambled, uint64_t *seed)
{
	unsigned order[LIMIT_ADDRESS_PINS], pins = board->part.address_pins;
	for (unsigned pin = 0; pin < pins; pin++)
		order[pin] = pin;
	if (scrambled)
		shuffle(order, pins, seed);
	for (unsigned pin = 0; pin < pins; pin++) {
		bool driven = order[pin] < board->wiring.line.state_bits;
		chip->address[pin] = driven ? (struct address_wire){ADDRESS_STATE, order[pin]}
		                            : (struct address_wire){random_below(seed, 2) ? ADDRESS_HIGH : ADDRESS_OPEN, 0};
	}
}

// Word bits 0 … state_bits - 1 are the next state (for a counter bit 0 alone is clear); each goes on some data pin of
// some chip.
static void board_init(struct board *board, unsigned state_bits, unsigned data_pins, bool scrambled, uint64_t *seed)
{
	*board = (struct board){.spare_pins = scrambled ? 2 : 0};
	board->part = (struct part){.name = "board", .address_pins = state_bits + board->spare_pins, .data_pins = data_pins};
	board->wiring = (struct wiring){.chips = board->chips, .line.state_bits = state_bits, .line.advance = ADVANCE_TABLE};
	board->wiring.chip_count = scrambled ? MAX_CHIPS : (state_bits + data_pins - 1) / data_pins;
	unsigned pins = (unsigned)board->wiring.chip_count * data_pins, order[MAX_CHIPS * LIMIT_DATA_PINS];
	for (unsigned pin = 0; pin < pins; pin++)
		order[pin] = pin;
	if (scrambled)
		shuffle(order, pins, seed);
	for (unsigned index = 0; index < board->wiring.chip_count; index++) {
		struct chip *chip = &board->chips[index];
		*chip = (struct chip){.label = "chip", .part = &board->part};
		wire_address(board, chip, scrambled, seed);
		for (unsigned pin = 0; pin < data_pins; pin++)
			if (order[index * data_pins + pin] < state_bits)
				chip->data[pin] = (struct data_wire){DATA_NEXT, order[index * data_pins + pin]};
		size_t length = ((size_t)1 << board->part.address_pins) * data_pins / 8;
		board->images[index] = (struct image){malloc(length), length};
		assert_non_null(board->images[index].bytes);
		for (size_t byte = 0; byte < length; byte++)
			board->images[index].bytes[byte] = (uint8_t)random_below(seed, 256);
	}
}

static void board_release(struct board *board)
{
	for (size_t chip = 0; chip < board->wiring.chip_count; chip++)
		free(board->images[chip].bytes);
}

static size_t wired_address(const struct board *board, const struct chip *chip, uint32_t state)
{
	size_t address = 0;
	for (unsigned pin = 0; pin < board->part.address_pins; pin++)
		if (chip->address[pin].kind == ADDRESS_HIGH ||
		    (chip->address[pin].kind == ADDRESS_STATE && (state >> chip->address[pin].index & 1)))
			address |= (size_t)1 << pin;
	return address;
}

// The next state read wire by wire.
static uint32_t wired_next(const struct board *board, uint32_t state)
{
	uint32_t next = 0;
	for (size_t index = 0; index < board->wiring.chip_count; index++) {
		const struct chip *chip = &board->chips[index];
		size_t width = board->part.data_pins / 8, address = wired_address(board, chip, state) * width;
		for (unsigned pin = 0; pin < board->part.data_pins; pin++) {
			uint32_t level = (uint32_t)board->images[index].bytes[address + pin / 8] >> pin % 8 & 1;
			if (chip->data[pin].kind == DATA_NEXT)
				next |= level << chip->data[pin].index;
		}
	}
	return next;
}

static void compare_stride(const struct board *board, const struct machine *machine, size_t stride)
{
	size_t states = (size_t)1 << board->wiring.line.state_bits;
	uint32_t *next = malloc(states * stride * sizeof *next);
	assert_non_null(next);
	for (size_t word = 0; word < states * stride; word++)
		next[word] = GUARD;
	machine_all_next(machine, next, stride);
	for (uint32_t state = 0; state < states; state++) {
		assert_int_equal(next[state * stride], machine_next(machine, state));
		if (board->wiring.line.advance == ADVANCE_TABLE)
			assert_int_equal(next[state * stride], wired_next(board, state));
		for (size_t word = 1; word < stride; word++)
			assert_int_equal(next[state * stride + word], GUARD);
	}
	free(next);
}

static void compare(const struct board *board)
{
	struct arena *arena = arena_create();
	struct machine *machine = machine_create(arena, &board->wiring, board->images, 0);
	assert_non_null(machine);
	compare_stride(board, machine, 1);
	compare_stride(board, machine, 2);
	arena_destroy(arena);
}

static void compare_tables(unsigned data_pins, bool scrambled)
{
	uint64_t seed = 7 + data_pins + scrambled;
	for (unsigned state_bits = 1; state_bits <= 15; state_bits++) {
		struct board board;
		board_init(&board, state_bits, data_pins, scrambled, &seed);
		compare(&board);
		board_release(&board);
	}
}

static void tables(void **test)
{
	(void)test;
	compare_tables(8, false);
	compare_tables(16, false);
	compare_tables(8, true);
	compare_tables(16, true);
}

// Counters whose rows clear at random: `one_in` rows for each that clears.
static void compare_counters(enum clear_kind clear, bool scrambled, uint32_t one_in)
{
	uint64_t seed = 99 + one_in + scrambled;
	for (unsigned state_bits = 1; state_bits <= 13; state_bits++) {
		struct board board;
		board_init(&board, state_bits, 8, scrambled, &seed);
		board.wiring.line.advance = ADVANCE_COUNT;
		board.wiring.line.clear = clear;
		for (size_t chip = 0; chip < board.wiring.chip_count; chip++)
			memset(board.chips[chip].data, 0, sizeof board.chips[chip].data);
		board.chips[0].data[3] = (struct data_wire){DATA_CLEAR, 0};
		for (size_t byte = 0; byte < board.images[0].length; byte++)
			board.images[0].bytes[byte] = random_below(&seed, one_in) == 0 ? 0xFF : 0xF7;
		compare(&board);
		board_release(&board);
	}
}

static void counters(void **test)
{
	(void)test;
	for (uint32_t one_in = 1; one_in <= 5; one_in++) {
		compare_counters(CLEAR_SYNC, false, one_in);
		compare_counters(CLEAR_SYNC, true, one_in);
		compare_counters(CLEAR_ASYNC, false, one_in);
		compare_counters(CLEAR_ASYNC, true, one_in);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(tables),
		cmocka_unit_test(counters),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
