// How long the power-up proof takes over 2^24 states, from the images of four chips, against one plain walk through an
// array of that size whose every step depends on the one before. Prints the ratios; all in one run, on one core.
#include <inttypes.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "machine/machine.h"
#include "proof/ways.h"
#include "walk.h"

#define STATE_BITS 24u
#define STATES ((uint32_t)1 << STATE_BITS)
#define CHIPS 4u
#define FRAME_CELLS 400000u
#define PARALLEL_CHAINS 256u

// Where the state bits and next bits of a machine go.
struct board {
	struct part part;
	struct chip chips[CHIPS];
	struct image images[CHIPS];
	struct wiring wiring;
};

static void shuffle(unsigned *values, unsigned count, uint64_t *seed)
{
	for (unsigned index = count - 1; index > 0; index--) {
		unsigned other = random_below(seed, index + 1), kept = values[index];
		values[index] = values[other];
		values[other] = kept;
	}
}

// Straight: A0… take state.0…, and the first three chips the next bits in order. Scrambled: any state bit on any
// address pin, another order for each chip, and the next bits on any data pin of any chip.
static void board_init(struct board *board, bool scrambled, uint64_t *seed)
{
	unsigned data[CHIPS * 8], address[STATE_BITS];
	for (unsigned pin = 0; pin < CHIPS * 8; pin++)
		data[pin] = pin;
	for (unsigned pin = 0; pin < STATE_BITS; pin++)
		address[pin] = pin;
	if (scrambled)
		shuffle(data, CHIPS * 8, seed);
	board->part = (struct part){.name = "bench", .address_pins = STATE_BITS, .data_pins = 8};
	for (unsigned chip = 0; chip < CHIPS; chip++) {
		if (scrambled)
			shuffle(address, STATE_BITS, seed);
		board->chips[chip] = (struct chip){.label = "bench", .part = &board->part};
		for (unsigned pin = 0; pin < STATE_BITS; pin++)
			board->chips[chip].address[pin] = (struct address_wire){ADDRESS_STATE, address[pin]};
		for (unsigned pin = 0; pin < 8; pin++)
			if (data[chip * 8 + pin] < STATE_BITS)
				board->chips[chip].data[pin] = (struct data_wire){DATA_NEXT, data[chip * 8 + pin]};
		board->images[chip] = (struct image){need(malloc(STATES)), STATES};
	}
	board->wiring = (struct wiring){.chips = board->chips, .chip_count = CHIPS, .line.state_bits = STATE_BITS,
	                                .line.advance = ADVANCE_TABLE};
}

// Burns a table of next states, bit by bit through the wires.
static void burn(struct board *board, const uint32_t *next)
{
	for (unsigned chip = 0; chip < CHIPS; chip++) {
		const struct chip *wires = &board->chips[chip];
		for (uint32_t state = 0; state < STATES; state++) {
			uint32_t address = 0;
			uint8_t byte = 0;
			for (unsigned pin = 0; pin < STATE_BITS; pin++)
				address |= (state >> wires->address[pin].index & 1) << pin;
			for (unsigned pin = 0; pin < 8; pin++)
				if (wires->data[pin].kind == DATA_OPEN || next[state] >> wires->data[pin].index & 1)
					byte |= (uint8_t)(1u << pin);
			board->images[chip].bytes[address] = byte;
		}
	}
}

// The first FRAME_CELLS states of the order are the frame. The others lead home at once.
static void spares_to_start(uint32_t *next, const uint32_t *order)
{
	for (uint32_t index = 0; index < STATES; index++)
		next[order[index]] = order[index + 1 < FRAME_CELLS ? index + 1 : 0];
}

// The others are chains through random places, each of which leads home at its end.
static void spares_in_chains(uint32_t *next, const uint32_t *order, uint32_t chains)
{
	const uint32_t length = (STATES - FRAME_CELLS) / chains;
	spares_to_start(next, order);
	for (uint32_t index = FRAME_CELLS; index + 1 < STATES; index++)
		if ((index - FRAME_CELLS + 1) % length != 0)
			next[order[index]] = order[index + 1];
}

// The others go anywhere: trees, and loops of their own.
static void spares_anywhere(uint32_t *next, const uint32_t *order, uint64_t *seed)
{
	spares_to_start(next, order);
	for (uint32_t index = FRAME_CELLS; index < STATES; index++)
		next[order[index]] = random_below(seed, STATES);
}

static void measure(const char *name, struct board *board, const uint32_t *next, const uint32_t *frame, double walk)
{
	burn(board, next);
	double start = now();
	struct arena *arena = need(arena_create());
	const struct machine *machine = need(machine_create(arena, &board->wiring, board->images, 0));
	const struct ways *ways = need(ways_find(arena, machine, &board->wiring, frame, FRAME_CELLS));
	uint32_t longest = ways->longest_cells;
	uint64_t lost = ways->lost_states;
	arena_destroy(arena);
	double seconds = now() - start;
	printf("%-34s %6.3f s  %5.2f x the walk   (longest way %" PRIu32 " cells, lost states %" PRIu64 ")\n", name, seconds,
	       seconds / walk, longest, lost);
}

int main(void)
{
	uint64_t seed = 20240229;
	struct board straight, scrambled;
	board_init(&straight, false, &seed);
	board_init(&scrambled, true, &seed);
	uint32_t *order = random_order(&seed, STATES), *next = need(malloc(STATES * sizeof *next));
	const double walk = best_walk(order, STATES);
	printf("%-34s %6.3f s\n", "plain dependent walk, 2^24 steps", walk);
	spares_to_start(next, order);
	measure("straight, spares lead home", &straight, next, order, walk);
	measure("scrambled, spares lead home", &scrambled, next, order, walk);
	spares_anywhere(next, order, &seed);
	measure("straight, spares lead anywhere", &straight, next, order, walk);
	spares_in_chains(next, order, PARALLEL_CHAINS);
	measure("straight, 256 long chains", &straight, next, order, walk);
	spares_in_chains(next, order, 1);
	measure("straight, one chain of all", &straight, next, order, walk);
	measure("scrambled, one chain of all", &scrambled, next, order, walk);
	for (unsigned chip = 0; chip < CHIPS; chip++) {
		free(straight.images[chip].bytes);
		free(scrambled.images[chip].bytes);
	}
	free(order);
	free(next);
	return 0;
}
