// Closure and signals of line-frame machines: each fault names the line, the cell, the stage, the row, the chip and the byte.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "line_frame_by_hand.h"

// Where a fault is said to be: the cell of the frame, the row's stage and address, and the byte of that stage's chip.
static void assert_fault(const struct proofs *proofs, enum proof_kind kind, uint32_t cell, enum stage stage, uint32_t row, uint32_t byte,
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
static void assert_follows(const struct proofs *proofs, enum proof_kind kind, const char *what)
{
	assert_verdict(proofs, kind, VERDICT_FAIL);
	assert_string_equal(proofs->proof[kind].counterexample.what, what);
	assert_false(proofs->proof[kind].counterexample.byte_known);
	assert_int_equal(proofs->proof[kind].counterexample.state, NO_STATE);
}

static void end(struct by_hand *hand, struct proofs *proofs)
{
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// The bytes of the board itself. Line stage, D7 to D0: 1 blank sync 1 step next; frame stage: 111 night 1 kind next.
static void bytes_by_hand(void **test)
{
	(void)test;
	static const uint8_t line[16] = {
		0xF1,                         // H 0 of kind 0: next 1; cell 1 is blank
		0xBA,                         // H 1: next 2; cell 2 steps, and is picture
		0xD0,                         // H 2: next 0; the next line begins with sync and blank
		0xD0, 0xD0, 0xD0, 0xD0, 0xD0, // spare
		0xF9,                         // H 0 of kind 1: next 1; cell 1 steps, and is blank
		0xD0,                         // H 1: next 0
		0xD0, 0xD0, 0xD0, 0xD0, 0xD0, 0xD0,
	};
	static const uint8_t frame[4] = {
		0xE9, // V 0: next 1, which is of kind 0
		0xFE, // V 1: next 2, which is of kind 1, at night
		0xE8, // V 2: next 0, of kind 0
		0xE8, // V 3, spare: next 0
	};
	struct by_hand *hand = pier(table_latched, table_latched);
	assert_memory_equal(hand->images[PIER_LINE].bytes, line, sizeof line);
	assert_memory_equal(hand->images[PIER_FRAME].bytes, frame, sizeof frame);
	by_hand_destroy(hand);
	// Counted and direct. Line stage: 1 blank sync clear step 111; frame stage: 111 night clear kind 11.
	static const uint8_t counted_line[16] = {
		0xC7, 0xE7, 0xBF, 0xF7, 0xF7, 0xF7, 0xF7, 0xF7, // cell 2 steps and clears; spare rows clear, blank
		0xC7, 0xFF, 0xF7, 0xF7, 0xF7, 0xF7, 0xF7, 0xF7,
	};
	static const uint8_t counted_frame[4] = {0xE3, 0xE3, 0xFF, 0xEB}; // V 2 is of kind 1, at night, and clears
	hand = pier(sync_direct, sync_direct);
	assert_memory_equal(hand->images[PIER_LINE].bytes, counted_line, sizeof counted_line);
	assert_memory_equal(hand->images[PIER_FRAME].bytes, counted_frame, sizeof counted_frame);
	by_hand_destroy(hand);
}

static const struct stage_kind *const all_kinds[] = {&table_latched, &table_direct, &sync_latched, &sync_direct, &async_latched, &async_direct};

static void every_combination_proves(void **test)
{
	(void)test;
	for (unsigned combination = 0; combination < 36; combination++) {
		const struct stage_kind line = *all_kinds[combination % 6], frame = *all_kinds[combination / 6];
		struct by_hand *hand = pier(line, frame);
		struct proofs *proofs = prove_pier(hand);
		const uint32_t cells = line.clear == CLEAR_ASYNC ? 9 : 8;
		assert_false(proofs_failed(proofs, false));
		assert_int_equal(proofs->closure.lines, 3);
		assert_int_equal(proofs->closure.cells, cells);
		assert_int_equal(proofs->closure.ticks, 10 * cells);
		assert_int_equal(proofs->closure.period_cells, cells);
		assert_int_equal(proofs->closure.start_state, 0);
		assert_int_equal(proofs->signals.comparisons, 3 * cells);
		const int bits = 5 + (line.outputs == OUTPUTS_REGISTERED) + (frame.outputs == OUTPUTS_REGISTERED);
		assert_int_equal(proofs->power_up.states, 1 << bits);
		assert_int_equal(proofs->power_up.frame_states, cells);
		end(hand, proofs);
	}
}

// Step is missing in the last cell of line 0. Latched, the row of the cell before stores it.
static void missing_step(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_direct, table_latched);
	struct pier_row row = line_row(hand, PICTURE, 2);
	row.step = false;
	burn_line(hand, PICTURE, 2, row);
	struct proofs *proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 2, STAGE_LINE, 2, 0xB0, "step is not asserted in this last cell of the line");
	end(hand, proofs);
	hand = pier(table_latched, table_latched);
	row = line_row(hand, PICTURE, 1);
	row.step = false;
	burn_line(hand, PICTURE, 1, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 2, STAGE_LINE, 1, 0xB2, "step is not asserted in this last cell of the line");
	end(hand, proofs);
	// In the frame's last line. Night is still on when the frame should begin again, and that is no fault of another row.
	hand = pier(table_latched, table_latched);
	row = line_row(hand, QUIET, 0);
	row.step = false;
	burn_line(hand, QUIET, 0, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 7, STAGE_LINE, 8, 0xF1, "step is not asserted in this last cell of the line");
	assert_follows(proofs, PROOF_SIGNALS, "night is high, expected low; this may follow from the earlier fault under closure");
	assert_int_equal(proofs->proof[PROOF_SIGNALS].counterexample.cell, 0);
	assert_string_equal(proofs->proof[PROOF_POWER_UP].counterexample.what, "not judged: the frame does not close");
	end(hand, proofs);
}

// A frame of one line, V 0, to which a counter always falls back: nothing but step loads the frame stage's latches.
static void missing_step_of_the_only_line(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_direct, async_latched);
	hand->timeline.line_count = 1;
	hand->timeline.cell_count = 3;
	hand->timeline.tick_count = 30;
	for (uint32_t v = 0; v < 4; v++)
		burn_frame(hand, v, (struct pier_row){.kind = PICTURE, .clear = v > 0});
	struct proofs *proofs = prove_pier(hand);
	assert_false(proofs_failed(proofs, false));
	proofs_destroy(proofs);
	struct pier_row row = line_row(hand, PICTURE, 2);
	row.step = false;
	burn_line(hand, PICTURE, 2, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 2, STAGE_LINE, 2, 0xB0, "step is not asserted in this last cell of the line");
	end(hand, proofs);
}

static void step_in_mid_line(void **test)
{
	(void)test;
	const char *what = "step is asserted, expected only in the last cell of a line";
	struct by_hand *hand = pier(table_latched, table_latched);
	struct pier_row row = line_row(hand, PICTURE, 0);
	row.step = true;
	burn_line(hand, PICTURE, 0, row);
	struct proofs *proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 1, STAGE_LINE, 0, 0xF9, what);
	end(hand, proofs);
	hand = pier(sync_direct, sync_direct);
	row = line_row(hand, QUIET, 0);
	row.step = true;
	burn_line(hand, QUIET, 0, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 6, STAGE_LINE, 8, 0xCF, what);
	end(hand, proofs);
	// Stored in the last cell, it acts in the first cell of the line after: of the frame, once it has begun again.
	hand = pier(table_latched, table_latched);
	row = line_row(hand, PICTURE, 2);
	row.step = true;
	burn_line(hand, PICTURE, 2, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 3, STAGE_LINE, 2, 0xD8, what);
	end(hand, proofs);
	hand = pier(table_latched, table_latched);
	row = line_row(hand, QUIET, 1);
	row.step = true;
	burn_line(hand, QUIET, 1, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 7, STAGE_LINE, 9, 0xD8,
	             "the state after the frame is H 0x0, step 1, kind 0, V 0x0, expected the first, H 0x0, step 0, kind 0, V 0x0");
	end(hand, proofs);
}

static void wrong_next_h(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_direct, table_direct);
	struct pier_row row = line_row(hand, PICTURE, 1);
	row.next = 3;
	burn_line(hand, PICTURE, 1, row);
	struct proofs *proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 1, STAGE_LINE, 1, 0xF3, "the next H is 0x3 (line 0x0001: 0xF3), expected 0x2");
	assert_follows(proofs, PROOF_SIGNALS, "blank is high, expected low; this may follow from the earlier fault under closure");
	end(hand, proofs);
	// The last row of a kind, by which each line of it hands over to the next.
	hand = pier(table_latched, table_direct);
	row = line_row(hand, PICTURE, 2);
	row.next = 4;
	burn_line(hand, PICTURE, 2, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 2, STAGE_LINE, 2, 0xD4, "the next H is 0x4 (line 0x0002: 0xD4), expected 0x0");
	end(hand, proofs);
	hand = pier(table_direct, table_latched);
	row = line_row(hand, QUIET, 1);
	row.next = 1;
	burn_line(hand, QUIET, 1, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 7, STAGE_LINE, 9, 0xF9, "the next H is 0x1 (line 0x0009: 0xF9), expected 0x0");
	end(hand, proofs);
}

static void wrong_next_v(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_latched, table_latched);
	struct pier_row row = frame_row(hand, 1);
	row.next = 3;
	burn_frame(hand, 1, row);
	struct proofs *proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 5, STAGE_FRAME, 1, 0xFF, "the next V is 0x3 (frame 0x0001: 0xFF), expected 0x2");
	end(hand, proofs);
	hand = pier(table_direct, table_direct); // the frame does not begin again
	row = frame_row(hand, 2);
	row.next = 1;
	burn_frame(hand, 2, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 7, STAGE_FRAME, 2, 0xFD, "the next V is 0x1 (frame 0x0002: 0xFD), expected 0x0");
	end(hand, proofs);
}

// Line 2 is read as a picture's. Latched, its kind is in the row of line 1; direct, in its own.
static void wrong_kind(void **test)
{
	(void)test;
	const char *what = "this line is of kind 0, expected 1 (quiet)";
	struct by_hand *hand = pier(table_latched, table_latched);
	struct pier_row row = frame_row(hand, 1);
	row.kind = 0;
	burn_frame(hand, 1, row);
	struct proofs *proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 6, STAGE_FRAME, 1, 0xFA, what);
	end(hand, proofs);
	hand = pier(table_direct, table_direct);
	row = frame_row(hand, 2);
	row.kind = 0;
	burn_frame(hand, 2, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 6, STAGE_FRAME, 2, 0xF8, what);
	end(hand, proofs);
	// Of the frame's first line: the last line's row stores it, and the lap begins with it.
	hand = pier(sync_latched, sync_latched);
	row = frame_row(hand, 2);
	row.kind = 1;
	burn_frame(hand, 2, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 0, STAGE_FRAME, 2, 0xEF, "this line is of kind 1, expected 0 (picture)");
	end(hand, proofs);
	// Lines of equal length: only the pins tell, those of the frame's last line in part after its end.
	for (unsigned direct = 0; direct < 2; direct++) {
		hand = pier(direct ? async_direct : async_latched, async_latched);
		row = frame_row(hand, 1);
		row.kind = 0;
		burn_frame(hand, 1, row);
		proofs = prove_pier(hand);
		assert_fault(proofs, PROOF_CLOSURE, 6, STAGE_FRAME, 1, 0xF3, what);
		assert_follows(proofs, PROOF_SIGNALS, "blank is low, expected high; this may follow from the earlier fault under closure");
		end(hand, proofs);
	}
}

// A line of the wrong kind that shows only in the latched pins after it: in the frame's first cell, once it has begun again. (No plan asks
// for these pins; blank is off in cell 8, and in cell 0 after a quiet line.)
static void wrong_kind_shown_in_the_first_cell(void **test)
{
	(void)test;
	struct by_hand *hand = pier(async_latched, async_latched);
	hand->timeline.asserted[0] = SYNC;
	hand->timeline.asserted[8] = NIGHT;
	struct pier_row row = line_row(hand, QUIET, 1);
	row.asserted = 0;
	burn_line(hand, QUIET, 1, row);
	row = line_row(hand, QUIET, 2);
	row.asserted = SYNC;
	burn_line(hand, QUIET, 2, row);
	struct proofs *proofs = prove_pier(hand);
	assert_false(proofs_failed(proofs, false));
	proofs_destroy(proofs);
	row = frame_row(hand, 1);
	row.kind = 0;
	burn_frame(hand, 1, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 6, STAGE_FRAME, 1, 0xF3, "this line is of kind 0, expected 1 (quiet)");
	assert_follows(proofs, PROOF_SIGNALS, "blank is high, expected low; this may follow from the earlier fault under closure");
	assert_int_equal(proofs->proof[PROOF_SIGNALS].counterexample.cell, 0);
	end(hand, proofs);
}

// A kind that comes to the same is none to find fault with.
static void other_kind_of_the_same_raster(void **test)
{
	(void)test;
	struct by_hand *hand = pier(async_latched, table_latched);
	for (uint32_t h = 0; h < 8; h++)
		burn_line(hand, QUIET, h, line_row(hand, PICTURE, h));
	for (uint32_t cell = 6; cell < 9; cell++)
		hand->timeline.asserted[cell] = pier_pins[PICTURE][cell - 6] | NIGHT;
	struct pier_row row = frame_row(hand, 1);
	row.kind = 0;
	burn_frame(hand, 1, row);
	struct proofs *proofs = prove_pier(hand);
	assert_false(proofs_failed(proofs, false));
	end(hand, proofs);
}

static void wrong_clear_of_the_line_stage(void **test)
{
	(void)test;
	struct by_hand *hand = pier(sync_latched, sync_latched);
	struct pier_row row = line_row(hand, PICTURE, 2);
	row.clear = false;
	burn_line(hand, PICTURE, 2, row);
	struct proofs *proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 2, STAGE_LINE, 2, 0xC7, "the next H is 0x3 (line 0x0002: 0xC7), expected 0x0");
	end(hand, proofs);
	// Asynchronous: the row that is passed through, under the kind of the line that follows.
	hand = pier(async_direct, sync_direct);
	row = line_row(hand, QUIET, 3);
	row.clear = false;
	burn_line(hand, QUIET, 3, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 5, STAGE_LINE, 11, 0xE7, "the next H is 0x3 (line 0x000B: 0xE7), expected 0x0");
	end(hand, proofs);
	hand = pier(async_direct, async_latched); // too early
	row = line_row(hand, PICTURE, 1);
	row.clear = true;
	burn_line(hand, PICTURE, 1, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 0, STAGE_LINE, 1, 0xF7, "the next H is 0x0 (line 0x0001: 0xF7), expected 0x1");
	end(hand, proofs);
	hand = pier(async_direct, async_latched); // in row 0, which holds the counter there
	row = line_row(hand, PICTURE, 0);
	row.clear = true;
	burn_line(hand, PICTURE, 0, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 0, STAGE_LINE, 0, 0xD7, "the next H is 0x0 (line 0x0000: 0xD7), expected 0x1");
	end(hand, proofs);
}

static void wrong_clear_of_the_frame_stage(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_direct, sync_latched);
	struct pier_row row = frame_row(hand, 2);
	row.clear = false;
	burn_frame(hand, 2, row);
	struct proofs *proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 7, STAGE_FRAME, 2, 0xE3, "the next V is 0x3 (frame 0x0002: 0xE3), expected 0x0");
	end(hand, proofs);
	hand = pier(table_direct, async_direct);
	row = frame_row(hand, 3);
	row.clear = false;
	burn_frame(hand, 3, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 7, STAGE_FRAME, 3, 0xE3, "the next V is 0x3 (frame 0x0003: 0xE3), expected 0x0");
	end(hand, proofs);
	hand = pier(sync_latched, async_latched);
	row = frame_row(hand, 0);
	row.clear = true;
	burn_frame(hand, 0, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 2, STAGE_FRAME, 0, 0xEB, "the next V is 0x0 (frame 0x0000: 0xEB), expected 0x1");
	end(hand, proofs);
}

// Line 1's last cell should not have been the frame's: H and V are right, but only after eight cells.
static void lines_of_another_number(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_latched, table_latched);
	struct pier_row row = frame_row(hand, 0);
	row.next = 0;
	burn_frame(hand, 0, row);
	struct proofs *proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 2, STAGE_FRAME, 0, 0xE8, "the next V is 0x0 (frame 0x0000: 0xE8), expected 0x1");
	end(hand, proofs);
}

// ---- signals

// Flips a signal in a row and asks for the fault: `cell` shows it, `row` of `stage` holds it.
static void assert_pin(struct stage_kind line, struct stage_kind frame, enum stage stage, uint32_t row, uint8_t pin, uint32_t cell,
                       const char *what)
{
	struct by_hand *hand = pier(line, frame);
	uint8_t *byte = &hand->images[stage == STAGE_LINE ? PIER_LINE : PIER_FRAME].bytes[row];
	*byte ^= (uint8_t)(1u << pin);
	struct proofs *proofs = prove_pier(hand);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_fault(proofs, PROOF_SIGNALS, cell, stage, row, *byte, what);
	assert_true(proofs_failed(proofs, false));
	end(hand, proofs);
}

static void pins_of_the_line_stage(void **test)
{
	(void)test;
	assert_pin(table_direct, table_direct, STAGE_LINE, 1, 5, 1, "sync is low, expected high");
	assert_pin(table_direct, table_direct, STAGE_LINE, 9, 6, 7, "blank is low, expected high");
	// Latched, the row of the cell before stores it: of the first cell of a line, that of the line before.
	assert_pin(table_latched, table_latched, STAGE_LINE, 1, 6, 2, "blank is high, expected low");
	assert_pin(sync_latched, async_direct, STAGE_LINE, 2, 5, 3, "sync is high, expected low");
	assert_pin(table_latched, table_direct, STAGE_LINE, 9, 5, 0, "sync is high, expected low");
}

static void pins_of_the_frame_stage(void **test)
{
	(void)test;
	assert_pin(table_latched, table_direct, STAGE_FRAME, 2, 4, 6, "night is low, expected high");
	assert_pin(table_latched, table_latched, STAGE_FRAME, 1, 4, 6, "night is low, expected high");
	assert_pin(async_latched, sync_latched, STAGE_FRAME, 0, 4, 3, "night is high, expected low");
	assert_pin(sync_direct, async_latched, STAGE_FRAME, 2, 4, 0, "night is high, expected low");
	assert_pin(sync_direct, async_direct, STAGE_FRAME, 0, 4, 0, "night is high, expected low");
}

// In mid line a latch of the frame stage shows what it was loaded with at the line's beginning.
static void latch_in_mid_line(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_latched, table_latched);
	hand->timeline.asserted[4] |= NIGHT;
	struct proofs *proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_SIGNALS, 4, STAGE_FRAME, 0, 0xE9, "night is low, expected high");
	end(hand, proofs);
}

// Where the step is missing that should load a latch, no row of the frame stage is at fault.
static void latch_that_is_not_loaded(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_direct, table_latched);
	for (uint32_t cell = 3; cell < 6; cell++)
		hand->timeline.asserted[cell] |= NIGHT;
	struct pier_row row = frame_row(hand, 0);
	row.asserted = NIGHT;
	burn_frame(hand, 0, row);
	row = line_row(hand, PICTURE, 2);
	row.step = false;
	burn_line(hand, PICTURE, 2, row);
	struct proofs *proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 2, STAGE_LINE, 2, 0xB0, "step is not asserted in this last cell of the line");
	assert_follows(proofs, PROOF_SIGNALS, "night is low, expected high; this may follow from the earlier fault under closure");
	assert_int_equal(proofs->proof[PROOF_SIGNALS].counterexample.cell, 3);
	end(hand, proofs);
}

// Spare rows, what is passed through and the bits that are not wired may hold any signals.
static void rows_off_the_frame(void **test)
{
	(void)test;
	struct by_hand *hand = pier(async_direct, async_direct);
	hand->images[PIER_LINE].bytes[3] ^= 0x68; // step, sync and blank of the passing row
	hand->images[PIER_LINE].bytes[7] ^= 0x68;
	hand->images[PIER_LINE].bytes[0] ^= 0x87; // unwired
	hand->images[PIER_FRAME].bytes[3] ^= 0x14; // kind and night of the passing row
	hand->images[PIER_FRAME].bytes[1] ^= 0xE3;
	struct proofs *proofs = prove_pier(hand);
	assert_false(proofs_failed(proofs, false));
	end(hand, proofs);
}

// Night in line 0 comes from the row of line 2, at the end of the lap.
static void latch_loaded_by_the_last_line(void **test)
{
	(void)test;
	for (unsigned wrong = 0; wrong < 2; wrong++) {
		struct by_hand *hand = pier(table_latched, table_latched);
		for (uint32_t cell = 0; cell < 3; cell++)
			hand->timeline.asserted[cell] |= NIGHT;
		struct pier_row row = frame_row(hand, 2);
		row.asserted = wrong ? 0 : NIGHT;
		burn_frame(hand, 2, row);
		struct proofs *proofs = prove_pier(hand);
		if (wrong)
			assert_fault(proofs, PROOF_SIGNALS, 0, STAGE_FRAME, 2, 0xE8, "night is low, expected high");
		else
			assert_false(proofs_failed(proofs, false));
		end(hand, proofs);
	}
}

// Three lines of one cell each: each steps, the first too.
static void lines_of_one_cell(void **test)
{
	(void)test;
	for (unsigned direct = 0; direct < 2; direct++) {
		struct by_hand *hand = pier(direct ? table_direct : table_latched, table_latched);
		uint64_t asserted[3] = {SYNC | BLANK, SYNC | BLANK, SYNC | BLANK};
		hand->types[PICTURE].cells = 1;
		hand->types[PICTURE].ticks = 10;
		hand->timeline.asserted = asserted;
		hand->timeline.cell_count = 3;
		hand->timeline.tick_count = 30;
		for (uint32_t line = 0; line < 3; line++) {
			hand->timeline.lines[line].type = PICTURE;
			hand->timeline.lines[line].first_cell = line;
			burn_frame(hand, line, (struct pier_row){.next = (line + 1) % 3, .kind = PICTURE});
		}
		for (uint32_t h = 0; h < 8; h++)
			burn_line(hand, PICTURE, h, (struct pier_row){.next = 0, .step = true, .asserted = SYNC | BLANK});
		struct proofs *proofs = prove_pier(hand);
		assert_false(proofs_failed(proofs, false));
		assert_int_equal(proofs->closure.start_state, direct ? 0 : 8); // the step latch
		assert_int_equal(proofs->closure.ticks, 30);
		end(hand, proofs);
	}
}

// ---- a line stage whose states are no numbers

// Holds H in every cell of the frame to state[cell of the line], in a field of its own, and burns the rows to suit.
static struct by_hand *held_pier(struct stage_kind line, const uint32_t states[3])
{
	struct by_hand *hand = pier(line, table_direct);
	const size_t field = add_field(hand, "at", 0, 0);
	for (uint32_t cell = 0; cell < 8; cell++)
		set_hold(hand, cell, field, states[cell < 6 ? cell % 3 : cell - 6] & 1);
	for (uint32_t kind = 0; kind < 2; kind++) {
		for (uint32_t h = 0; h < 8; h++) {
			struct pier_row spare = line_row(hand, kind, 7);
			spare.next = states[0];
			burn_line(hand, kind, h, spare);
		}
		for (uint32_t cell = 0; cell < pier_cells(hand, kind); cell++) {
			struct pier_row row = line_row(hand, kind, cell);
			row.next = states[row.next];
			burn_line(hand, kind, states[cell], row);
		}
	}
	return hand;
}

static const uint32_t free_states[3] = {5, 2, 6};

// The start is not known: every line begins in the same state.
static void start_is_found(void **test)
{
	(void)test;
	for (unsigned direct = 0; direct < 2; direct++) {
		struct by_hand *hand = held_pier(direct ? table_direct : table_latched, free_states);
		struct proofs *proofs = prove_pier(hand);
		assert_false(proofs_failed(proofs, false));
		assert_int_equal(proofs->closure.start_state, 5);
		assert_int_equal(proofs->signals.held_comparisons, 8);
		end(hand, proofs);
	}
}

// The way from H 2 to 6 is lost, which nothing else leads to.
static void jump_in_a_line(void **test)
{
	(void)test;
	struct by_hand *hand = held_pier(table_direct, free_states);
	hand->images[PIER_LINE].bytes[2] ^= 0x04; // next 6 becomes 2: for ever
	struct proofs *proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 1, STAGE_LINE, 2, 0xF2, "the next H is 0x2, expected 0x6, which nothing else leads to");
	assert_follows(proofs, PROOF_SIGNALS, "blank is high, expected low; this may follow from the earlier fault under closure");
	end(hand, proofs);
	// The last cell hands over to another state than the one in which every line begins.
	hand = held_pier(table_direct, free_states);
	hand->images[PIER_LINE].bytes[8 + 2] ^= 0x02; // next 5 becomes 7
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 7, STAGE_LINE, 10, 0xFF, "the next H is 0x7 (line 0x000A: 0xFF), expected 0x5");
	end(hand, proofs);
}

// Latched, the last cell's row can not be told from a spare one; but a state that comes again in a line is one too many.
static void state_comes_again(void **test)
{
	(void)test;
	struct by_hand *hand = held_pier(table_latched, free_states);
	hand->images[PIER_LINE].bytes[2] ^= 0x04; // next 6 becomes 2
	struct proofs *proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 1, STAGE_LINE, 2, 0xBA, "the next H is 0x2 (line 0x0002: 0xBA), which cell 1 of this line had already");
	end(hand, proofs);
}

// Codes that are read out of the images are those of the cells before the machine went astray: in the second cell of each line H is 1, and
// gate is asserted. The way from H 0 to 1 leads to 2 instead; in what follows, H 0 comes where gate should be.
static void codes_before_a_jump(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_direct, table_direct);
	const uint64_t gate = add_decoded(hand, "gate", add_field(hand, "code", 1, 0), NULL, 0);
	for (uint32_t cell = 1; cell < 8; cell += 3)
		hand->timeline.asserted[cell] |= gate;
	struct proofs *proofs = prove_pier(hand);
	assert_false(proofs_failed(proofs, false));
	assert_int_equal(proofs->code_counts[3], 1);
	assert_int_equal(proofs->codes[3][0], 1);
	proofs_destroy(proofs);
	struct pier_row row = line_row(hand, PICTURE, 0);
	row.next = 2;
	burn_line(hand, PICTURE, 0, row);
	proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 0, STAGE_LINE, 0, 0xD2, "the next H is 0x2, expected 0x1, which nothing else leads to");
	assert_int_equal(proofs->proof[PROOF_SIGNALS].counterexample.cell, 1);
	assert_false(proofs->proof[PROOF_SIGNALS].counterexample.byte_known);
	end(hand, proofs);
}

// A held bit that is wrong is the fault of the row that leads there.
static void wrong_held_bit(void **test)
{
	(void)test;
	struct by_hand *hand = held_pier(table_direct, free_states);
	hand->images[PIER_LINE].bytes[2] ^= 0x01; // next 6 becomes 7, a spare state: two faults that one byte explains
	struct proofs *proofs = prove_pier(hand);
	assert_fault(proofs, PROOF_CLOSURE, 1, STAGE_LINE, 2, 0xF7, "the next H is 0x7, expected 0x6, which nothing else leads to");
	end(hand, proofs);
	hand = held_pier(table_latched, free_states); // latched, it does for a last cell but for the held bit
	hand->images[PIER_LINE].bytes[2] ^= 0x01;
	proofs = prove_pier(hand);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_fault(proofs, PROOF_SIGNALS, 2, STAGE_LINE, 2, 0xBF, "at is 1, expected 0 (H 0x7)");
	end(hand, proofs);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(bytes_by_hand),
		cmocka_unit_test(every_combination_proves),
		cmocka_unit_test(missing_step),
		cmocka_unit_test(missing_step_of_the_only_line),
		cmocka_unit_test(step_in_mid_line),
		cmocka_unit_test(wrong_next_h),
		cmocka_unit_test(wrong_next_v),
		cmocka_unit_test(wrong_kind),
		cmocka_unit_test(wrong_kind_shown_in_the_first_cell),
		cmocka_unit_test(other_kind_of_the_same_raster),
		cmocka_unit_test(wrong_clear_of_the_line_stage),
		cmocka_unit_test(wrong_clear_of_the_frame_stage),
		cmocka_unit_test(lines_of_another_number),
		cmocka_unit_test(pins_of_the_line_stage),
		cmocka_unit_test(pins_of_the_frame_stage),
		cmocka_unit_test(latch_in_mid_line),
		cmocka_unit_test(latch_that_is_not_loaded),
		cmocka_unit_test(rows_off_the_frame),
		cmocka_unit_test(latch_loaded_by_the_last_line),
		cmocka_unit_test(lines_of_one_cell),
		cmocka_unit_test(start_is_found),
		cmocka_unit_test(jump_in_a_line),
		cmocka_unit_test(state_comes_again),
		cmocka_unit_test(codes_before_a_jump),
		cmocka_unit_test(wrong_held_bit),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
