// Machines made by hand: a plan, a timeline and chips filled row by row through the wires, with nothing of the maker's.
#ifndef SCANLATCH_TESTS_PROOF_BY_HAND_H
#define SCANLATCH_TESTS_PROOF_BY_HAND_H

#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "proof/proof.h"

#define HAND_SIGNALS 4
#define HAND_LINES 4

struct by_hand {
	struct arena *arena;
	struct plan plan;
	struct signal signals[HAND_SIGNALS];
	struct field fields[4];
	struct line_type lines[HAND_LINES];
	struct laid_line types[HAND_LINES];
	struct sweep sweeps[2];
	struct part part;
	struct chip chips[4];
	struct image images[4];
	struct timeline timeline;
};

// A table machine with registered outputs, a 1 MHz clock and cells of 10 ticks, 10 us; no signals and no lines yet.
static inline struct by_hand *by_hand_create(unsigned state_bits)
{
	struct arena *arena = arena_create();
	assert_non_null(arena);
	struct by_hand *hand = arena_alloc(arena, sizeof *hand);
	assert_non_null(hand);
	hand->arena = arena;
	struct plan *plan = &hand->plan;
	plan->signals = hand->signals;
	plan->lines = hand->lines;
	plan->sweeps = hand->sweeps;
	plan->chips = hand->chips;
	plan->machine.fields = hand->fields;
	plan->machine.line.state_bits = state_bits;
	plan->clock.master_hz = fraction_whole(1000000);
	plan->clock.cell_ticks = 10;
	for (int role = 0; role < ROLE_COUNT; role++)
		plan->role_signal[role] = -1;
	struct timing *timing = &plan->timing;
	timing->latch_delay_s = timing->latch_setup_s = timing->counter_delay_s[STAGE_LINE] = timing->counter_setup_s[STAGE_LINE] = FRACTION_ZERO;
	timing->decoder_delay_s = timing->margin_s = FRACTION_ZERO;
	timing->share = fraction_whole(1);
	hand->timeline.plan = plan;
	hand->timeline.types = hand->types;
	return hand;
}

static inline void by_hand_destroy(struct by_hand *hand)
{
	arena_destroy(hand->arena);
}

// Adds a signal; returns its bit in masks of asserted signals.
static inline uint64_t add_signal(struct by_hand *hand, const char *name, bool active_high)
{
	size_t index = hand->plan.signal_count++;
	hand->signals[index] = (struct signal){.name = name, .active_high = active_high, .origin = FROM_DATA};
	return (uint64_t)1 << index;
}

// The stretch signal, active low, which makes a cell `ticks` longer.
static inline uint64_t add_stretch(struct by_hand *hand, int64_t ticks)
{
	hand->plan.role_signal[ROLE_STRETCH] = (int)hand->plan.signal_count;
	hand->plan.clock.stretch_ticks = ticks;
	return add_signal(hand, "stretch", false);
}

static inline size_t add_field(struct by_hand *hand, const char *name, unsigned high, unsigned low)
{
	size_t index = hand->plan.machine.field_count++;
	hand->fields[index] = (struct field){.name = name, .high = high, .low = low};
	return index;
}

// An active high signal decoded from a field; `codes` NULL: the codes are to be read out of the images.
static inline uint64_t add_decoded(struct by_hand *hand, const char *name, size_t field, const uint32_t *codes, size_t count)
{
	size_t index = hand->plan.signal_count++;
	hand->signals[index] = (struct signal){.name = name, .active_high = true, .origin = FROM_FIELD, .field = field,
	                                       .auto_codes = codes == NULL, .codes = codes, .code_count = count};
	return (uint64_t)1 << index;
}

static inline int64_t planned_ticks(const struct by_hand *hand, uint64_t asserted)
{
	int stretch = hand->plan.role_signal[ROLE_STRETCH];
	bool is_long = stretch >= 0 && (asserted >> stretch & 1);
	return hand->plan.clock.cell_ticks + (is_long ? hand->plan.clock.stretch_ticks : 0);
}

// Adds a line type with the signals asserted in each cell; returns its index.
static inline size_t add_line(struct by_hand *hand, const char *name, uint32_t cells, const uint64_t *asserted)
{
	size_t index = hand->plan.line_count++;
	hand->lines[index] = (struct line_type){.name = name};
	struct laid_line *type = &hand->types[index];
	type->cells = cells;
	type->asserted = arena_array(hand->arena, cells, sizeof *type->asserted);
	type->region_of_cell = arena_array(hand->arena, cells, sizeof *type->region_of_cell); // all in one region
	assert_non_null(type->asserted);
	assert_non_null(type->region_of_cell);
	for (uint32_t cell = 0; cell < cells; cell++) {
		type->asserted[cell] = asserted[cell];
		type->ticks += planned_ticks(hand, asserted[cell]);
	}
	return index;
}

// Lays out the frame from line types in order.
static inline void set_frame(struct by_hand *hand, uint32_t count, const size_t *types)
{
	struct timeline *timeline = &hand->timeline;
	timeline->line_count = count;
	timeline->lines = arena_array(hand->arena, count, sizeof *timeline->lines);
	for (uint32_t line = 0; line < count; line++)
		timeline->cell_count += hand->types[types[line]].cells;
	timeline->asserted = arena_array(hand->arena, timeline->cell_count, sizeof *timeline->asserted);
	assert_non_null(timeline->lines);
	assert_non_null(timeline->asserted);
	uint32_t first = 0;
	for (uint32_t line = 0; line < count; line++) {
		const struct laid_line *type = &hand->types[types[line]];
		timeline->lines[line] = (struct frame_line){.type = (uint32_t)types[line], .first_cell = first,
		                                            .first_tick = timeline->tick_count};
		memcpy(&timeline->asserted[first], type->asserted, type->cells * sizeof *type->asserted);
		first += type->cells;
		timeline->tick_count += type->ticks;
	}
}

// Holds a field in one cell of the frame.
static inline void set_hold(struct by_hand *hand, uint32_t cell, size_t field, uint32_t value)
{
	struct timeline *timeline = &hand->timeline;
	if (!timeline->has_holds) {
		timeline->has_holds = true;
		timeline->hold_mask = arena_array(hand->arena, timeline->cell_count, sizeof *timeline->hold_mask);
		timeline->hold_value = arena_array(hand->arena, timeline->cell_count, sizeof *timeline->hold_value);
		assert_non_null(timeline->hold_mask);
		assert_non_null(timeline->hold_value);
	}
	timeline->hold_mask[cell] |= field_mask(&hand->fields[field]);
	timeline->hold_value[cell] |= value << hand->fields[field].low;
}

// Adds an erased 8-bit chip: A0… take the state bits and then the bank bits, nothing is on its data pins.
static inline struct chip *add_chip(struct by_hand *hand, const char *label)
{
	unsigned state_bits = hand->plan.machine.line.state_bits, pins = state_bits + hand->plan.bank_bits;
	hand->part = (struct part){.name = "hand", .address_pins = pins, .data_pins = 8};
	size_t index = hand->plan.chip_count++;
	struct chip *chip = &hand->chips[index];
	*chip = (struct chip){.label = label, .part = &hand->part, .access_s = FRACTION_ZERO};
	for (unsigned pin = 0; pin < pins; pin++)
		chip->address[pin] = pin < state_bits ? (struct address_wire){ADDRESS_STATE, pin}
		                                      : (struct address_wire){ADDRESS_BANK, pin - state_bits};
	struct image *image = &hand->images[index];
	image->length = (size_t)1 << pins;
	image->bytes = arena_alloc(hand->arena, image->length);
	assert_non_null(image->bytes);
	memset(image->bytes, 0xFF, image->length);
	return chip;
}

// Chips rom0, rom1, … wired straight: next bits (or clear), then the data signals in order.
static inline void add_straight_chips(struct by_hand *hand)
{
	static const char *const labels[] = {"rom0", "rom1", "rom2", "rom3"};
	bool counts = hand->plan.machine.line.advance == ADVANCE_COUNT;
	unsigned used = 8;
	for (unsigned bit = 0; bit < (counts ? 1 : hand->plan.machine.line.state_bits); bit++) {
		if (used == 8) {
			add_chip(hand, labels[hand->plan.chip_count]);
			used = 0;
		}
		hand->chips[hand->plan.chip_count - 1].data[used++] =
			(struct data_wire){counts ? DATA_CLEAR : DATA_NEXT, bit};
	}
	for (unsigned signal = 0; signal < hand->plan.signal_count; signal++) {
		if (hand->signals[signal].origin != FROM_DATA)
			continue;
		if (used == 8) {
			add_chip(hand, labels[hand->plan.chip_count]);
			used = 0;
		}
		hand->chips[hand->plan.chip_count - 1].data[used++] = (struct data_wire){DATA_SIGNAL, signal};
	}
}

static inline size_t wired_address(const struct chip *chip, uint32_t state, uint32_t bank)
{
	size_t address = 0;
	for (unsigned pin = 0; pin < chip->part->address_pins; pin++) {
		const struct address_wire *wire = &chip->address[pin];
		bool high = wire->kind == ADDRESS_HIGH || (wire->kind == ADDRESS_STATE && (state >> wire->index & 1)) ||
		            (wire->kind == ADDRESS_BANK && (bank >> wire->index & 1));
		address |= (size_t)high << pin;
	}
	return address;
}

static inline bool wired_level(const struct by_hand *hand, struct data_wire wire, uint32_t next, bool clear, uint64_t asserted)
{
	switch (wire.kind) {
	case DATA_NEXT:
		return next >> wire.index & 1;
	case DATA_CLEAR:
		return clear;
	case DATA_SIGNAL:
		return (asserted >> wire.index & 1) == hand->signals[wire.index].active_high;
	default:
		return true;
	}
}

// Burns one row: its next state (or clear), and the signals asserted in it.
static inline void burn_row(struct by_hand *hand, uint32_t bank, uint32_t state, uint32_t next, bool clear, uint64_t asserted)
{
	for (size_t index = 0; index < hand->plan.chip_count; index++) {
		const struct chip *chip = &hand->chips[index];
		size_t address = wired_address(chip, state, bank), bytes = chip->part->data_pins / 8;
		for (unsigned pin = 0; pin < chip->part->data_pins; pin++) {
			uint8_t *byte = &hand->images[index].bytes[address * bytes + pin / 8];
			uint8_t bit = (uint8_t)(1u << pin % 8);
			*byte = (uint8_t)(wired_level(hand, chip->data[pin], next, clear, asserted) ? *byte | bit : *byte & ~bit);
		}
	}
}

static inline void burn(struct by_hand *hand, uint32_t state, uint32_t next, uint64_t asserted)
{
	burn_row(hand, 0, state, next, false, asserted);
}

static inline void burn_count(struct by_hand *hand, uint32_t state, bool clear, uint64_t asserted)
{
	burn_row(hand, 0, state, 0, clear, asserted);
}

// A small board, 3 state bits, sync active low (bit 0) and blank active high (bit 1). A frame of two lines and five cells:
//     cell    0 picture   1 picture   2 picture   3 quiet     4 quiet
//     pins    sync blank  blank       -           sync blank  blank
#define SMALL_SYNC ((uint64_t)1)
#define SMALL_BLANK ((uint64_t)2)
#define SMALL_CELLS 5u
static const uint64_t small_pins[SMALL_CELLS] = {SMALL_SYNC | SMALL_BLANK, SMALL_BLANK, 0, SMALL_SYNC | SMALL_BLANK, SMALL_BLANK};

static inline struct by_hand *small_board(void)
{
	struct by_hand *hand = by_hand_create(3);
	add_signal(hand, "sync", false);
	add_signal(hand, "blank", true);
	size_t picture = add_line(hand, "picture", 3, small_pins), quiet = add_line(hand, "quiet", 2, small_pins + 3);
	set_frame(hand, 2, (size_t[]){picture, quiet});
	return hand;
}

// Burns the table of the small board for states in the order of the cells; all other states lead to the first.
static inline void burn_small(struct by_hand *hand, const uint32_t *states)
{
	bool direct = hand->plan.machine.line.outputs == OUTPUTS_DIRECT;
	for (uint32_t state = 0; state < 8; state++)
		burn(hand, state, states[0], direct ? SMALL_BLANK : small_pins[0]);
	for (uint32_t cell = 0; cell < SMALL_CELLS; cell++) {
		uint32_t next = (cell + 1) % SMALL_CELLS;
		burn(hand, states[cell], states[next], small_pins[direct ? cell : next]);
	}
}

static const uint32_t small_states[SMALL_CELLS] = {0, 1, 2, 3, 4};

// The small board, one chip wired straight: D0 to D2 next, D3 sync, D4 blank, the others unwired and set. By address:
//     0: 0xF9 (next 1, blank)   1: 0xEA (next 2, neither)   2: 0xF3 (next 3, sync blank)   3: 0xFC (next 4, blank)
//     4: 0xF0 (next 0, sync blank), and the same in the spare rows 5 to 7
static inline struct by_hand *small_burned(void)
{
	struct by_hand *hand = small_board();
	add_straight_chips(hand);
	burn_small(hand, small_states);
	return hand;
}

static inline struct proofs *prove(const struct by_hand *hand, uint32_t start)
{
	struct proofs *proofs = proofs_run(&hand->timeline, hand->images, true, start);
	assert_non_null(proofs);
	return proofs;
}

static inline struct fraction ratio(int64_t numerator, int64_t denominator)
{
	struct fraction result = FRACTION_ZERO;
	assert_true(fraction_make(numerator, denominator, &result));
	return result;
}

#define assert_ratio(value, expected_numerator, expected_denominator) \
	do { \
		assert_int_equal((value).numerator, (expected_numerator)); \
		assert_int_equal((value).denominator, (expected_denominator)); \
	} while (0)

#define assert_verdict(proofs, kind, expected) assert_int_equal((proofs)->proof[kind].verdict, (expected))

// A fixed sequence: Marsaglia's xorshift64 (2003), shifts 13, 7, 17.
static inline uint32_t random_below(uint64_t *seed, uint32_t bound)
{
	*seed ^= *seed << 13;
	*seed ^= *seed >> 7;
	*seed ^= *seed << 17;
	return (uint32_t)((*seed >> 32) * bound >> 32);
}

#endif
