// Signals of line-frame machines, and closure of those whose line stage has states that are no numbers.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "line_frame_by_hand.h"

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
