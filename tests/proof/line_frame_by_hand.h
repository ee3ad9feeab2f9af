// A line-frame board made by hand: a pier with two pictures' lines and a quiet one, which says that it is night.
//
// Signals: sync, active low, and blank, active high, of the line stage; night, active high, of the frame stage. H has three
// bits, V two, kind one. The frame, three lines and eight cells (sync, blank, night: S, B, N):
//
//     line       0 picture       1 picture       2 quiet
//     cell       0    1    2     3    4    5     6     7
//     pins       SB   B    -     SB   B    -     SBN   BN
//
// An asynchronous clear of the line stage needs lines of equal length: then the quiet line has a third cell, BN, and the frame nine.
//
// The line stage's chip, "line": A0 to A2 H, A3 kind; D0 to D2 next (of a table), D3 step, D4 clear (of a counter), D5 sync, D6
// blank. The frame stage's, "frame": A0 and A1 V; D0 and D1 next, D2 kind, D3 clear, D4 night. What is unwired stores 1.
#ifndef SCANLATCH_TESTS_PROOF_LINE_FRAME_BY_HAND_H
#define SCANLATCH_TESTS_PROOF_LINE_FRAME_BY_HAND_H

#include "by_hand.h"

enum { PIER_LINE, PIER_FRAME };       // its chips
enum { PICTURE, QUIET };              // its line types, and their kinds
enum { SYNC = 1, BLANK = 2, NIGHT = 4 };

struct stage_kind {
	enum advance advance;
	enum clear_kind clear;
	enum outputs outputs;
};

static const struct stage_kind table_latched = {ADVANCE_TABLE, CLEAR_SYNC, OUTPUTS_REGISTERED};
static const struct stage_kind table_direct = {ADVANCE_TABLE, CLEAR_SYNC, OUTPUTS_DIRECT};
static const struct stage_kind sync_latched = {ADVANCE_COUNT, CLEAR_SYNC, OUTPUTS_REGISTERED};
static const struct stage_kind sync_direct = {ADVANCE_COUNT, CLEAR_SYNC, OUTPUTS_DIRECT};
static const struct stage_kind async_latched = {ADVANCE_COUNT, CLEAR_ASYNC, OUTPUTS_REGISTERED};
static const struct stage_kind async_direct = {ADVANCE_COUNT, CLEAR_ASYNC, OUTPUTS_DIRECT};

static const uint64_t pier_pins[2][3] = {{SYNC | BLANK, BLANK, 0}, {SYNC | BLANK | NIGHT, BLANK | NIGHT, BLANK | NIGHT}};
static const size_t pier_lines[3] = {PICTURE, PICTURE, QUIET};

// What a row holds. `next` says nothing of a counter, `clear` nothing of a table.
struct pier_row {
	uint32_t next, kind;
	bool step, clear;
	uint64_t asserted;
};

static inline uint8_t pier_bit(bool level, unsigned pin)
{
	return (uint8_t)(level ? 1u << pin : 0u);
}

static inline void burn_line(struct by_hand *hand, uint32_t kind, uint32_t h, struct pier_row row)
{
	const bool counts = hand->plan.machine.line.advance == ADVANCE_COUNT;
	uint8_t byte = (uint8_t)(counts ? 0x87u : 0x90u | row.next);
	byte = (uint8_t)(byte | pier_bit(row.step, 3) | (counts ? pier_bit(row.clear, 4) : 0));
	byte = (uint8_t)(byte | pier_bit(!(row.asserted & SYNC), 5) | pier_bit(row.asserted & BLANK, 6));
	hand->images[PIER_LINE].bytes[h + 8 * kind] = byte;
}

static inline void burn_frame(struct by_hand *hand, uint32_t v, struct pier_row row)
{
	const bool counts = hand->plan.machine.frame.advance == ADVANCE_COUNT;
	uint8_t byte = (uint8_t)(counts ? 0xE3u : 0xE8u | row.next);
	byte = (uint8_t)(byte | pier_bit(row.kind, 2) | (counts ? pier_bit(row.clear, 3) : 0) | pier_bit(row.asserted & NIGHT, 4));
	hand->images[PIER_FRAME].bytes[v] = byte;
}

// What the rows of the plan hold.
static inline uint32_t pier_cells(const struct by_hand *hand, uint32_t kind)
{
	return hand->types[kind].cells;
}

static inline struct pier_row line_row(const struct by_hand *hand, uint32_t kind, uint32_t h)
{
	const struct stage_plan *line = &hand->plan.machine.line;
	const uint32_t cells = pier_cells(hand, kind);
	const bool direct = line->outputs == OUTPUTS_DIRECT;
	const uint32_t shown = direct ? h : h + 1;
	struct pier_row row = {.next = h + 1 < cells ? h + 1 : 0, .step = shown == cells - 1,
	                       .asserted = h >= cells && direct ? BLANK : pier_pins[kind][shown < cells ? shown : 0]};
	row.clear = line->clear == CLEAR_ASYNC ? h >= cells : h + 1 >= cells;
	return row;
}

static inline struct pier_row frame_row(const struct by_hand *hand, uint32_t v)
{
	const struct stage_plan *frame = &hand->plan.machine.frame;
	const uint32_t shown = v > 2 ? 0 : frame->outputs == OUTPUTS_DIRECT ? v : (v + 1) % 3;
	struct pier_row row = {.next = v < 2 ? v + 1 : 0, .kind = (uint32_t)pier_lines[shown]};
	row.asserted = pier_pins[row.kind][0];
	row.clear = frame->clear == CLEAR_ASYNC ? v > 2 : v >= 2;
	return row;
}

static inline void add_pier_chip(struct by_hand *hand, const char *label, enum stage stage, const struct part *part, bool counts)
{
	const size_t index = hand->plan.chip_count++;
	struct chip *chip = &hand->chips[index];
	*chip = (struct chip){.label = label, .stage = stage, .part = part, .access_s = FRACTION_ZERO};
	const unsigned state_bits = stage == STAGE_LINE ? 3 : 2;
	for (unsigned bit = 0; bit < state_bits; bit++) {
		chip->address[bit] = (struct address_wire){ADDRESS_STATE, bit};
		chip->data[bit] = (struct data_wire){counts ? DATA_OPEN : DATA_NEXT, bit};
	}
	if (stage == STAGE_LINE)
		chip->address[3] = (struct address_wire){ADDRESS_KIND, 0};
	chip->data[state_bits] = (struct data_wire){stage == STAGE_LINE ? DATA_STEP : DATA_KIND, 0};
	chip->data[state_bits + 1] = (struct data_wire){counts ? DATA_CLEAR : DATA_OPEN, 0};
	chip->data[state_bits + 2] = (struct data_wire){DATA_SIGNAL, stage == STAGE_LINE ? 0 : 2};
	if (stage == STAGE_LINE)
		chip->data[6] = (struct data_wire){DATA_SIGNAL, 1};
	hand->images[index] = (struct image){arena_alloc(hand->arena, (size_t)1 << part->address_pins), (size_t)1 << part->address_pins};
	assert_non_null(hand->images[index].bytes);
}

static inline struct stage_plan pier_stage(struct stage_kind kind, unsigned state_bits)
{
	return (struct stage_plan){.state_bits = state_bits, .outputs = kind.outputs, .advance = kind.advance, .clear = kind.clear};
}

static inline void burn_pier(struct by_hand *hand)
{
	for (uint32_t kind = 0; kind < 2; kind++)
		for (uint32_t h = 0; h < 8; h++)
			burn_line(hand, kind, h, line_row(hand, kind, h));
	for (uint32_t v = 0; v < 4; v++)
		burn_frame(hand, v, frame_row(hand, v));
}

// The board with its chips burned as the plan wants them.
static inline struct by_hand *pier(struct stage_kind line, struct stage_kind frame)
{
	static const struct part line_part = {.name = "four pins", .address_pins = 4, .data_pins = 8};
	static const struct part frame_part = {.name = "two pins", .address_pins = 2, .data_pins = 8};
	struct by_hand *hand = by_hand_create(3);
	struct machine_plan *machine = &hand->plan.machine;
	machine->form = FORM_LINE_FRAME;
	machine->kind_bits = 1;
	machine->line = pier_stage(line, 3);
	machine->frame = pier_stage(frame, 2);
	hand->plan.timing.counter_delay_s[STAGE_FRAME] = hand->plan.timing.counter_setup_s[STAGE_FRAME] = FRACTION_ZERO;
	add_signal(hand, "sync", false);
	add_signal(hand, "blank", true);
	add_signal(hand, "night", true);
	hand->signals[2].stage = STAGE_FRAME;
	add_line(hand, "picture", 3, pier_pins[PICTURE]);
	add_line(hand, "quiet", line.clear == CLEAR_ASYNC ? 3 : 2, pier_pins[QUIET]);
	set_frame(hand, 3, pier_lines);
	add_pier_chip(hand, "line", STAGE_LINE, &line_part, line.advance == ADVANCE_COUNT);
	add_pier_chip(hand, "frame", STAGE_FRAME, &frame_part, frame.advance == ADVANCE_COUNT);
	burn_pier(hand);
	return hand;
}

// Proves it as images that were read from files are: only a counter's start is known.
static inline struct proofs *prove_pier(const struct by_hand *hand)
{
	struct proofs *proofs = proofs_run(&hand->timeline, hand->images, hand->plan.machine.line.advance == ADVANCE_COUNT, 0);
	assert_non_null(proofs);
	return proofs;
}

// Where a fault is said to be: the cell of the frame, the row's stage and address, and the byte of that stage's chip.
static inline void assert_fault(const struct proofs *proofs, enum proof_kind kind, uint32_t cell, enum stage stage, uint32_t row, uint32_t byte,
                         const char *what)
{
	assert_verdict(proofs, kind, VERDICT_FAIL);
	const struct counterexample *found = &proofs->proof[kind].counterexample;
	assert_true(found->present);
	assert_string_equal(found->what, what);
	assert_int_equal(found->cell, cell);
	assert_int_equal(found->stage, stage);
	assert_int_equal(found->state, row);
	assert_true(found->byte_known);
	assert_int_equal(found->byte.chip, stage == STAGE_LINE ? PIER_LINE : PIER_FRAME);
	assert_int_equal(found->byte.address, row);
	assert_int_equal(found->byte.value, byte);
}

// A proof that fails only because another does names no byte.
static inline void assert_follows(const struct proofs *proofs, enum proof_kind kind, const char *what)
{
	assert_verdict(proofs, kind, VERDICT_FAIL);
	assert_string_equal(proofs->proof[kind].counterexample.what, what);
	assert_false(proofs->proof[kind].counterexample.byte_known);
	assert_int_equal(proofs->proof[kind].counterexample.state, NO_STATE);
}

static inline void end(struct by_hand *hand, struct proofs *proofs)
{
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

#endif
