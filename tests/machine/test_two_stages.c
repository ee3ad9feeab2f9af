// The machine of two stages, worked out by hand row by row, and against a step function that is written here from what the
// two stages are said to do.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "machine/machine.h"

// A board: H has two bits, V two, kind one. The line stage's chip: A0 and A1 H, A2 kind; D0 and D1 next (of a table), D2
// step, D3 clear (of a counter), D4 signal 0. The frame stage's: A0 and A1 V; D0 and D1 next, D2 kind, D3 clear, D4
// signal 1.
static const struct part three_pins = {.name = "three pins", .address_pins = 3, .data_pins = 8};
static const struct part two_pins = {.name = "two pins", .address_pins = 2, .data_pins = 8};

struct board {
	struct arena *arena;
	struct chip chips[2];
	uint8_t line[8], frame[4];
	struct image images[2];
	struct wiring wiring;
	const struct machine *machine;
};

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

static struct stage_wiring stage_of(struct stage_kind kind, unsigned state_bits, unsigned kind_bits, uint64_t signals)
{
	return (struct stage_wiring){.state_bits = state_bits, .address_bits = state_bits + kind_bits, .advance = kind.advance,
	                             .clear = kind.clear, .outputs = kind.outputs, .data_signals = signals};
}

static void wire_chip(struct chip *chip, const struct part *part, enum stage stage, bool counts)
{
	*chip = (struct chip){.label = stage == STAGE_LINE ? "line" : "frame", .stage = stage, .part = part,
	                      .address = {{ADDRESS_STATE, 0}, {ADDRESS_STATE, 1}}};
	if (stage == STAGE_LINE)
		chip->address[2] = (struct address_wire){ADDRESS_KIND, 0};
	if (!counts) {
		chip->data[0] = (struct data_wire){DATA_NEXT, 0};
		chip->data[1] = (struct data_wire){DATA_NEXT, 1};
	}
	chip->data[2] = (struct data_wire){stage == STAGE_LINE ? DATA_STEP : DATA_KIND, 0};
	if (counts)
		chip->data[3] = (struct data_wire){DATA_CLEAR, 0};
	chip->data[4] = (struct data_wire){DATA_SIGNAL, stage == STAGE_LINE ? 0 : 1};
}

static void power(struct board *board)
{
	board->machine = machine_create(board->arena, &board->wiring, board->images, 0);
	assert_non_null(board->machine);
}

static void build(struct board *board, struct stage_kind line, struct stage_kind frame, const uint8_t *line_bytes,
                  const uint8_t *frame_bytes)
{
	*board = (struct board){.arena = arena_create()};
	assert_non_null(board->arena);
	memcpy(board->line, line_bytes, sizeof board->line);
	memcpy(board->frame, frame_bytes, sizeof board->frame);
	board->images[0] = (struct image){board->line, sizeof board->line};
	board->images[1] = (struct image){board->frame, sizeof board->frame};
	wire_chip(&board->chips[0], &three_pins, STAGE_LINE, line.advance == ADVANCE_COUNT);
	wire_chip(&board->chips[1], &two_pins, STAGE_FRAME, frame.advance == ADVANCE_COUNT);
	board->wiring = (struct wiring){.chips = board->chips, .chip_count = 2, .form = FORM_LINE_FRAME, .kind_bits = 1,
	                                .line = stage_of(line, 2, 1, 1), .frame = stage_of(frame, 2, 0, 2)};
	power(board);
}

static void scrap(struct board *board)
{
	arena_destroy(board->arena);
}

// States in the order that the machine numbers them: H from bit 0 on, then the step latch, the kind latch and V.
static uint32_t latched(uint32_t h, uint32_t step, uint32_t kind, uint32_t v)
{
	return h | step << 2 | kind << 3 | v << 4;
}

static uint32_t no_latches(uint32_t h, uint32_t v)
{
	return h | v << 2;
}

// Bits of rows, for the tables below.
enum { STEP = 4, KIND = 4, CLEAR = 8, HIGH = 16 };

static const uint8_t counts_only[4] = {0};

static void feedback_is_numbered(void **test)
{
	(void)test;
	struct wiring wiring = {.form = FORM_LINE_FRAME, .kind_bits = 3, .line = stage_of(table_latched, 7, 3, 0),
	                        .frame = stage_of(table_latched, 10, 0, 0)};
	struct feedback at = feedback_of(&wiring);
	assert_true(at.has_step);
	assert_int_equal(at.step, 7);
	assert_int_equal(at.kind, 8);
	assert_int_equal(at.kind_bits, 3);
	assert_int_equal(at.frame, 11);
	assert_int_equal(at.bits, 21);
	wiring.line.outputs = OUTPUTS_DIRECT; // no step latch
	at = feedback_of(&wiring);
	assert_false(at.has_step);
	assert_int_equal(at.kind, 7);
	assert_int_equal(at.frame, 10);
	assert_int_equal(at.bits, 20);
	wiring.frame.outputs = OUTPUTS_DIRECT; // nor kind latches
	at = feedback_of(&wiring);
	assert_int_equal(at.kind_bits, 0);
	assert_int_equal(at.frame, 7);
	assert_int_equal(at.bits, 17);
	wiring.line.outputs = OUTPUTS_REGISTERED;
	at = feedback_of(&wiring);
	assert_int_equal(at.step, 7);
	assert_int_equal(at.kind_bits, 0);
	assert_int_equal(at.frame, 8);
	assert_int_equal(at.bits, 18);
	wiring.form = FORM_LOOP;
	assert_int_equal(feedback_of(&wiring).bits, 7);
}

// Two tables, all latched. Step is in the row before the cell at whose end it acts; kind comes from the row of the V that
// is left.
static void latched_tables(void **test)
{
	(void)test;
	static const uint8_t line[8] = {
		1,               // H 0 of kind 0: next 1
		2 | STEP | HIGH, // H 1: next 2, step and the signal latched for the cell after
		0,               // H 2: next 0
		3,               // H 3: itself
		2,               // the same of kind 1: next 2
		3,               // next 3
		1 | STEP,        // next 1, step
		0 | HIGH,        // next 0
	};
	static const uint8_t frame[4] = {
		1,               // V 0: next 1, kind 0
		3 | KIND | HIGH, // V 1: next 3, kind 1
		2,               // V 2: itself
		0 | KIND,        // V 3: next 0, kind 1
	};
	struct board board;
	build(&board, table_latched, table_latched, line, frame);
	const struct machine *machine = board.machine;
	// V 1, kind 0, without step: H 0, 1, 2; step comes into its latch with H 2.
	assert_int_equal(machine_next(machine, latched(0, 0, 0, 1)), latched(1, 0, 0, 1));
	assert_int_equal(machine_next(machine, latched(1, 0, 0, 1)), latched(2, 1, 0, 1));
	// Now it acts: V 1 goes to 3, and the kind that its own row holds is latched.
	assert_int_equal(machine_next(machine, latched(2, 1, 0, 1)), latched(0, 0, 1, 3));
	// Under kind 1 other rows are read: H 0 to 2, 2 to 1 with step, 1 to 3, and V 3 leads to 0, kind still 1.
	assert_int_equal(machine_next(machine, latched(0, 0, 1, 3)), latched(2, 0, 1, 3));
	assert_int_equal(machine_next(machine, latched(2, 0, 1, 3)), latched(1, 1, 1, 3));
	assert_int_equal(machine_next(machine, latched(1, 1, 1, 3)), latched(3, 0, 1, 0));
	// V 0 holds kind 0.
	assert_int_equal(machine_next(machine, latched(3, 1, 1, 0)), latched(0, 0, 0, 1));
	for (uint32_t state = 0; state < 64; state++) {
		assert_int_equal(machine_settle(machine, state), state);
		assert_int_equal(machine_passing(machine, state), machine_next(machine, state));
		assert_int_equal(machine_steps(machine, state), state >> 2 & 1);
		assert_int_equal(machine_row_address(machine, STAGE_LINE, state), (state & 3) | (state >> 3 & 1) << 2);
		assert_int_equal(machine_row_address(machine, STAGE_FRAME, state), state >> 4);
	}
	assert_int_equal(machine_row(machine, STAGE_LINE, 1).levels, 1);
	assert_true(machine_row(machine, STAGE_LINE, 1).step);
	assert_int_equal(machine_row(machine, STAGE_FRAME, 1).levels, 2);
	assert_int_equal(machine_row(machine, STAGE_FRAME, 1).kind, 1);
	assert_int_equal(machine_address(machine, 5, 0), 5);
	scrap(&board);
}

// Two tables, nothing latched. Step acts at the end of the cell whose row it is in, and kind is that of V's own row.
static void direct_tables(void **test)
{
	(void)test;
	static const uint8_t line[8] = {
		1,        // H 0 of kind 0: next 1
		0 | STEP, // H 1: next 0, step
		0,        // H 2
		0,        // H 3
		3,        // H 0 of kind 1: next 3
		0,        // H 1
		2 | STEP, // H 2: itself, step
		2,        // H 3: next 2
	};
	static const uint8_t frame[4] = {
		2,        // V 0: next 2, kind 0
		1,        // V 1
		0 | KIND, // V 2: next 0, kind 1
		3 | KIND, // V 3: itself, kind 1
	};
	struct board board;
	build(&board, table_direct, table_direct, line, frame);
	const struct machine *machine = board.machine;
	assert_false(machine_steps(machine, no_latches(0, 0)));
	assert_int_equal(machine_next(machine, no_latches(0, 0)), no_latches(1, 0));
	assert_true(machine_steps(machine, no_latches(1, 0)));
	assert_int_equal(machine_next(machine, no_latches(1, 0)), no_latches(0, 2));
	// V 2 is of kind 1 at once: H 0 leads to 3, and on to 2, which steps.
	assert_int_equal(machine_row_address(machine, STAGE_LINE, no_latches(0, 2)), 4);
	assert_int_equal(machine_next(machine, no_latches(0, 2)), no_latches(3, 2));
	assert_int_equal(machine_next(machine, no_latches(3, 2)), no_latches(2, 2));
	assert_true(machine_steps(machine, no_latches(2, 2)));
	assert_int_equal(machine_next(machine, no_latches(2, 2)), no_latches(2, 0));
	assert_int_equal(machine_next(machine, no_latches(2, 0)), no_latches(0, 0));
	scrap(&board);
}

// The line stage direct, the frame stage latched: step acts in its own cell, kind is the row's of the V before.
static void mixed_outputs(void **test)
{
	(void)test;
	static const uint8_t line[8] = {1, 0 | STEP, 0, 0, /* kind 1: */ 0 | STEP, 0, 0, 0};
	static const uint8_t frame[4] = {1 | KIND, 0, 0, 0}; // V 0: next 1, and its line is of kind 1; V 1: next 0, kind 0
	struct board board;
	build(&board, table_direct, table_latched, line, frame);
	// H, kind, V from bit 0 on: no step latch.
	assert_int_equal(machine_next(board.machine, 1 | 0 << 2 | 0 << 3), 0 | 1 << 2 | 1 << 3);
	assert_int_equal(machine_next(board.machine, 0 | 1 << 2 | 1 << 3), 0 | 0 << 2 | 0 << 3);
	scrap(&board);
	// The other way round: H, step, V. In V 0 the kind is 1.
	build(&board, table_latched, table_direct, line, frame);
	assert_int_equal(machine_next(board.machine, 0 | 0 << 2 | 0 << 3), 0 | 1 << 2 | 0 << 3);
	assert_int_equal(machine_next(board.machine, 0 | 1 << 2 | 0 << 3), 0 | 1 << 2 | 1 << 3); // the row of kind 1 again: step
	assert_int_equal(machine_next(board.machine, 0 | 1 << 2 | 1 << 3), 1 | 0 << 2 | 0 << 3); // V 1 is of kind 0
	scrap(&board);
}

// A synchronous clear is obeyed at the edge; that of the frame stage only at an edge at which it steps.
static void synchronous_clears(void **test)
{
	(void)test;
	static const uint8_t line[8] = {
		0,            // H 0 of kind 0: counts
		STEP,         // H 1: counts, and the frame stage steps
		CLEAR,        // H 2: clears
		STEP | CLEAR, // H 3: both
		0, 0, 0, 0,   // kind 1 counts to 3 and overflows
	};
	static const uint8_t frame[4] = {
		0,            // V 0: counts, kind 0
		CLEAR,        // V 1: clears
		KIND,         // V 2: counts, kind 1
		0,            // V 3: counts, and overflows to 0
	};
	struct board board;
	build(&board, sync_direct, sync_direct, line, frame);
	const struct machine *machine = board.machine;
	assert_int_equal(machine_next(machine, no_latches(0, 0)), no_latches(1, 0));
	assert_int_equal(machine_next(machine, no_latches(1, 0)), no_latches(2, 1));
	assert_int_equal(machine_next(machine, no_latches(2, 1)), no_latches(0, 1)); // V's row clears, but there is no step
	assert_int_equal(machine_next(machine, no_latches(1, 1)), no_latches(2, 0));
	assert_int_equal(machine_next(machine, no_latches(3, 3)), no_latches(0, 0)); // cleared, and counted over the end
	assert_int_equal(machine_next(machine, no_latches(3, 2)), no_latches(0, 2)); // of kind 1: over the end without a step
	assert_int_equal(machine_settle(machine, no_latches(3, 1)), no_latches(3, 1));
	assert_int_equal(machine_passing(machine, no_latches(2, 0)), no_latches(0, 0));
	scrap(&board);
}

// An asynchronous clear is obeyed at once, by the frame stage even without a step, and by the line stage under the kind that
// the frame stage falls to.
static void asynchronous_clears(void **test)
{
	(void)test;
	static const uint8_t line[8] = {
		0,           // H 0 of kind 0
		STEP,        // H 1: steps
		CLEAR,       // H 2: falls to 0
		0,           // H 3
		0,           // H 0 of kind 1
		0,           // H 1
		0,           // H 2: of this kind a cell
		STEP | HIGH, // H 3
	};
	static const uint8_t frame[4] = {
		0,            // V 0: kind 0
		KIND,         // V 1: kind 1
		CLEAR | KIND, // V 2: falls to 0
		KIND,         // V 3
	};
	struct board board;
	build(&board, async_direct, async_direct, line, frame);
	const struct machine *machine = board.machine;
	assert_int_equal(machine_settle(machine, no_latches(2, 0)), no_latches(0, 0));
	assert_int_equal(machine_settle(machine, no_latches(2, 1)), no_latches(2, 1));
	assert_int_equal(machine_settle(machine, no_latches(2, 2)), no_latches(0, 0)); // V falls to 0, of kind 0, and so does H
	assert_int_equal(machine_settle(machine, no_latches(3, 2)), no_latches(3, 0));
	// H 1 of V 0 steps to H 2 of V 1, whose kind has that cell.
	assert_int_equal(machine_next(machine, no_latches(1, 0)), no_latches(2, 1));
	assert_int_equal(machine_passing(machine, no_latches(1, 0)), no_latches(2, 1));
	// H 3 of V 1 steps to V 2, which is never a cell.
	assert_int_equal(machine_passing(machine, no_latches(3, 1)), no_latches(0, 2));
	assert_int_equal(machine_next(machine, no_latches(3, 1)), no_latches(0, 0));
	// Both fall: H 1 of V 3, were it of kind 0.
	board.frame[3] = 0;
	board.frame[0] = CLEAR; // and clear asserted at 0 too: V stays there
	power(&board);
	assert_int_equal(machine_passing(board.machine, no_latches(1, 3)), no_latches(2, 0));
	assert_int_equal(machine_next(board.machine, no_latches(1, 3)), no_latches(0, 0));
	assert_int_equal(machine_next(board.machine, no_latches(1, 0)), no_latches(0, 0));
	assert_int_equal(machine_passing(board.machine, no_latches(1, 0)), no_latches(2, 0));
	scrap(&board);
}

// A latched kind does not follow a counter that falls to 0: it is what the row before held.
static void kind_latch_and_falling_counter(void **test)
{
	(void)test;
	static const uint8_t line[8] = {0, 0, 0, 0, 0, 0, CLEAR, 0}; // H 2 of kind 1 clears
	static const uint8_t frame[4] = {0, KIND, CLEAR, 0};         // V 1 holds kind 1; V 2 falls to 0
	struct board board;
	build(&board, async_latched, async_latched, line, frame);
	assert_int_equal(machine_passing(board.machine, latched(1, 1, 0, 1)), latched(2, 0, 1, 2));
	assert_int_equal(machine_next(board.machine, latched(1, 1, 0, 1)), latched(0, 0, 1, 0));
	assert_int_equal(machine_settle(board.machine, latched(2, 1, 0, 2)), latched(2, 1, 0, 0)); // latches keep what they hold
	assert_int_equal(machine_settle(board.machine, latched(2, 1, 1, 2)), latched(0, 1, 1, 0));
	scrap(&board);
}

// Clear asserted in the row of H 0 of one kind only: there the counter is held, until the kind changes.
static void counter_held_at_0(void **test)
{
	(void)test;
	static const uint8_t line[8] = {STEP | CLEAR, 0, 0, 0, /* kind 1: */ 0, CLEAR, 0, 0};
	static const uint8_t frame[4] = {0, 0, KIND, 0};
	struct board board;
	build(&board, async_direct, sync_direct, line, frame);
	assert_int_equal(machine_next(board.machine, no_latches(0, 0)), no_latches(0, 1));
	assert_int_equal(machine_next(board.machine, no_latches(0, 1)), no_latches(0, 2));
	assert_int_equal(machine_passing(board.machine, no_latches(0, 2)), no_latches(1, 2)); // of kind 1 it counts
	assert_int_equal(machine_next(board.machine, no_latches(0, 2)), no_latches(0, 2));
	assert_int_equal(machine_settle(board.machine, no_latches(0, 0)), 0);
	scrap(&board);
	build(&board, sync_latched, sync_latched, line, counts_only); // a synchronous clear at 0: held there as well
	assert_int_equal(machine_next(board.machine, latched(0, 0, 0, 0)), latched(0, 1, 0, 0));
	assert_int_equal(machine_next(board.machine, latched(0, 1, 0, 0)), latched(0, 1, 0, 1));
	scrap(&board);
}

// 16-bit parts, the low byte first, and kinds of more than one bit whose wires cross. Line stage: A0 kind 1, A1 H 0, A2 kind
// 0; D0 next 0, D9 step, D15 signal 0. Frame stage: A0 V 0, A1 high, A2 a jumper; D8 next 0, D1 kind 1, D14 kind 0.
static void wide_parts(void **test)
{
	(void)test;
	static const struct part wide = {.name = "wide", .address_pins = 3, .data_pins = 16};
	uint8_t line[16] = {
		[2 * 2] = 0x00, [2 * 2 + 1] = 0x02, // address 2, H 1 of kind 0: next 0, step
		[2 * 0] = 0x01, [2 * 0 + 1] = 0x80, // address 0, H 0 of kind 0: next 1, signal
		[2 * 4] = 0x01,                     // address 4, H 0 of kind 1: next 1
		[2 * 6 + 1] = 0x02,                 // address 6, H 1 of kind 1: next 0, step
		[2 * 1 + 1] = 0x02,                 // address 1, H 0 of kind 2: next 0, step
	};
	uint8_t frame[16] = {
		[2 * 2] = 0x00, [2 * 2 + 1] = 0x41, // address 2, V 0: next 1, kind 1
		[2 * 3] = 0x02, [2 * 3 + 1] = 0x00, // address 3, V 1: next 0, kind 2
		[2 * 6] = 0x02, [2 * 6 + 1] = 0x00, // jumper high, V 0: itself, kind 2
	};
	struct image images[] = {{line, sizeof line}, {frame, sizeof frame}};
	struct chip chips[] = {
		{.label = "U1", .stage = STAGE_LINE, .part = &wide, .address = {{ADDRESS_KIND, 1}, {ADDRESS_STATE, 0}, {ADDRESS_KIND, 0}},
		 .data = {[0] = {DATA_NEXT, 0}, [9] = {DATA_STEP, 0}, [15] = {DATA_SIGNAL, 0}}},
		{.label = "U2", .stage = STAGE_FRAME, .part = &wide, .address = {{ADDRESS_STATE, 0}, {ADDRESS_HIGH, 0}, {ADDRESS_BANK, 0}},
		 .data = {[8] = {DATA_NEXT, 0}, [1] = {DATA_KIND, 1}, [14] = {DATA_KIND, 0}}},
	};
	struct wiring wiring = {.chips = chips, .chip_count = 2, .form = FORM_LINE_FRAME, .kind_bits = 2, .bank_bits = 1,
	                        .line = stage_of(table_direct, 1, 2, 1), .frame = stage_of(table_direct, 1, 0, 0)};
	struct arena *arena = arena_create();
	struct machine *machine = machine_create(arena, &wiring, images, 0), *jumpered = machine_create(arena, &wiring, images, 1);
	assert_non_null(machine);
	assert_non_null(jumpered);
	// H in bit 0, V in bit 1. V 0 is of kind 1: two cells. V 1 is of kind 2: one.
	assert_int_equal(machine_next(machine, 0), 1);
	assert_int_equal(machine_next(machine, 1), 2);
	assert_int_equal(machine_next(machine, 2), 0);
	assert_int_equal(machine_row_address(machine, STAGE_LINE, 1), 3);
	assert_int_equal(machine_address(machine, 3, 0), 12); // the byte address of word 6
	assert_int_equal(machine_address(machine, 1, 1), 6);
	assert_int_equal(machine_row(machine, STAGE_LINE, 0).levels, 1);
	assert_int_equal(machine_next(jumpered, 0), 0); // V 0 is of kind 2, and leads to itself
	assert_int_equal(machine_address(jumpered, 1, 1), 14);
	arena_destroy(arena);
}

// No kinds at all: the line stage sees only H, and what the frame stage's chips hold beside V is not read.
static void one_kind(void **test)
{
	(void)test;
	static const uint8_t line[8] = {1, 0 | STEP, 0, 0, 0xFF, 0xFF, 0xFF, 0xFF};
	static const uint8_t frame[4] = {1, 0, 0, 0};
	struct board board;
	build(&board, table_direct, table_latched, line, frame);
	board.chips[0].address[2] = (struct address_wire){ADDRESS_OPEN, 0};
	board.chips[1].data[2] = (struct data_wire){DATA_OPEN, 0};
	board.wiring.kind_bits = 0;
	board.wiring.line.address_bits = 2;
	power(&board);
	assert_int_equal(feedback_of(&board.wiring).bits, 4);
	assert_int_equal(machine_next(board.machine, no_latches(0, 0)), no_latches(1, 0));
	assert_int_equal(machine_next(board.machine, no_latches(1, 0)), no_latches(0, 1));
	assert_int_equal(machine_next(board.machine, no_latches(1, 1)), no_latches(0, 0));
	assert_int_equal(machine_row_address(board.machine, STAGE_LINE, no_latches(1, 1)), 1);
	scrap(&board);
}

// ---- against a step function of its own

struct parts {
	uint32_t h, step, kind, v;
};

static struct parts split(const struct board *board, uint32_t state)
{
	struct parts parts = {.h = state & 3};
	state >>= 2;
	if (board->wiring.line.outputs == OUTPUTS_REGISTERED) {
		parts.step = state & 1;
		state >>= 1;
	}
	if (board->wiring.frame.outputs == OUTPUTS_REGISTERED) {
		parts.kind = state & 1;
		state >>= 1;
	}
	parts.v = state;
	return parts;
}

static uint32_t joined(const struct board *board, struct parts parts)
{
	uint32_t state = parts.v;
	if (board->wiring.frame.outputs == OUTPUTS_REGISTERED)
		state = state << 1 | parts.kind;
	if (board->wiring.line.outputs == OUTPUTS_REGISTERED)
		state = state << 1 | parts.step;
	return state << 2 | parts.h;
}

static uint32_t seen_kind(const struct board *board, struct parts parts)
{
	return board->wiring.frame.outputs == OUTPUTS_REGISTERED ? parts.kind : (board->frame[parts.v] & KIND) != 0;
}

static uint8_t line_byte(const struct board *board, struct parts parts)
{
	return board->line[parts.h + 4 * seen_kind(board, parts)];
}

static uint32_t plain_advance(const struct stage_wiring *stage, uint32_t state, uint8_t byte)
{
	if (stage->advance == ADVANCE_TABLE)
		return byte & 3;
	if (byte & CLEAR)
		return 0;
	return (state + 1) % 4;
}

static struct parts plain_settled(const struct board *board, struct parts parts)
{
	const struct stage_wiring *line = &board->wiring.line, *frame = &board->wiring.frame;
	if (frame->advance == ADVANCE_COUNT && frame->clear == CLEAR_ASYNC && (board->frame[parts.v] & CLEAR))
		parts.v = 0;
	if (line->advance == ADVANCE_COUNT && line->clear == CLEAR_ASYNC && (line_byte(board, parts) & CLEAR))
		parts.h = 0;
	return parts;
}

static bool plain_steps(const struct board *board, struct parts old)
{
	return board->wiring.line.outputs == OUTPUTS_REGISTERED ? old.step : (line_byte(board, old) & STEP) != 0;
}

static struct parts plain_edge(const struct board *board, struct parts old)
{
	struct parts new = old;
	new.h = plain_advance(&board->wiring.line, old.h, line_byte(board, old));
	new.step = (line_byte(board, old) & STEP) != 0;
	if (plain_steps(board, old)) {
		new.v = plain_advance(&board->wiring.frame, old.v, board->frame[old.v]);
		new.kind = (board->frame[old.v] & KIND) != 0;
	}
	return new;
}

static void compare_all(const struct board *board)
{
	const uint32_t states = (uint32_t)1 << feedback_of(&board->wiring).bits;
	for (uint32_t state = 0; state < states; state++) {
		const struct parts parts = split(board, state);
		const uint32_t settled = joined(board, plain_settled(board, parts));
		assert_int_equal(machine_settle(board->machine, state), settled);
		assert_int_equal(machine_row_address(board->machine, STAGE_LINE, state), parts.h + 4 * seen_kind(board, parts));
		assert_int_equal(machine_row_address(board->machine, STAGE_FRAME, state), parts.v);
		if (settled != state)
			continue;
		const struct parts edge = plain_edge(board, parts);
		assert_int_equal(machine_steps(board->machine, state), plain_steps(board, parts));
		assert_int_equal(machine_passing(board->machine, state), joined(board, edge));
		assert_int_equal(machine_next(board->machine, state), joined(board, plain_settled(board, edge)));
	}
}

// Every state of 40 machines for each of the 36 combinations. Marsaglia's xorshift64 (2003), shifts 13, 7, 17.
static void random_machines(void **test)
{
	(void)test;
	const struct stage_kind kinds[] = {table_latched, table_direct, sync_latched, sync_direct, async_latched, async_direct};
	uint64_t seed = 1887;
	for (unsigned combination = 0; combination < 36 * 40; combination++) {
		uint8_t line[8], frame[4];
		for (unsigned byte = 0; byte < 12; byte++) {
			seed ^= seed << 13;
			seed ^= seed >> 7;
			seed ^= seed << 17;
			*(byte < 8 ? &line[byte] : &frame[byte - 8]) = (uint8_t)(seed >> 32);
		}
		struct board board;
		build(&board, kinds[combination % 6], kinds[combination / 6 % 6], line, frame);
		compare_all(&board);
		scrap(&board);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(feedback_is_numbered),
		cmocka_unit_test(latched_tables),
		cmocka_unit_test(direct_tables),
		cmocka_unit_test(mixed_outputs),
		cmocka_unit_test(synchronous_clears),
		cmocka_unit_test(asynchronous_clears),
		cmocka_unit_test(kind_latch_and_falling_counter),
		cmocka_unit_test(counter_held_at_0),
		cmocka_unit_test(wide_parts),
		cmocka_unit_test(one_kind),
		cmocka_unit_test(random_machines),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
