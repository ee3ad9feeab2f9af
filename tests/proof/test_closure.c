#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "by_hand.h"

static const struct counterexample *failed(const struct proofs *proofs)
{
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_FAIL);
	const struct counterexample *found = &proofs->proof[PROOF_CLOSURE].counterexample;
	assert_true(found->present);
	return found;
}

static void assert_place(const struct counterexample *found, uint32_t cell, uint32_t state, size_t chip, size_t address,
                         uint32_t value)
{
	assert_int_equal(found->cell, cell);
	assert_int_equal(found->state, state);
	assert_true(found->byte_known);
	assert_int_equal(found->byte.chip, chip);
	assert_int_equal(found->byte.address, address);
	assert_int_equal(found->byte.value, value);
}

static void closed_frame(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_int_equal(proofs->closure.lines, 2);
	assert_int_equal(proofs->closure.cells, 5);
	assert_int_equal(proofs->closure.ticks, 50);
	assert_int_equal(proofs->closure.period_cells, 5);
	assert_int_equal(proofs->closure.start_state, 0);
	assert_false(proofs->proof[PROOF_CLOSURE].counterexample.present);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Row 2 leads to 0: three cells and not five. Row 3 is left without a predecessor, so row 2 should have led there.
static void back_too_early(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 2, 0, small_pins[3]);
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_place(found, 2, 2, 0, 2, 0xF0);
	assert_int_equal(found->signal, SIZE_MAX);
	assert_string_equal(found->what, "the next state is 0x0, expected 0x3, which nothing else leads to");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Rows 2 and 3 both lead to 0: two faults, and no telling where row 2 should lead.
static void back_too_early_for_two_reasons(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 2, 0, small_pins[3]);
	burn(hand, 3, 0, small_pins[4]);
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_place(found, 2, 2, 0, 2, 0xF0);
	assert_string_equal(found->what, "the next state is 0x0 (rom0 0x0002: 0xF0), the frame's first: it came back after 3 "
	                    "cells, expected after 5");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Row 0 leads to the spare state 6, and so home: the pins differ two cells later, but row 0 is to blame.
static void jump_to_a_spare_state(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 0, 6, small_pins[1]);
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_int_equal(found->cell, 0);
	assert_int_equal(found->state, 0);
	assert_string_equal(found->what, "the next state is 0x6, expected 0x1, which nothing else leads to");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Row 0 leads to 3, over two cells: row 1 is left without a predecessor.
static void jump_ahead(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 0, 3, small_pins[1]);
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_int_equal(found->cell, 0);
	assert_int_equal(found->state, 0);
	assert_string_equal(found->what, "the next state is 0x3, expected 0x1, which nothing else leads to");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Row 1 has blank wrong, which shows in cell 2. Row 2 leads home, and so does row 3, so that nothing tells where the
// machine went astray: the pin comes first, and closure blames no byte.
static void wrong_pin_before(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 1, 2, SMALL_BLANK);
	burn(hand, 2, 0, small_pins[3]);
	burn(hand, 3, 0, small_pins[4]);
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_int_equal(found->cell, 2);
	assert_false(found->byte_known);
	assert_int_equal(found->state, NO_STATE);
	assert_string_equal(found->what, "the next state is 0x0, the frame's first: it came back after 3 cells, expected after 5; this may "
	                    "follow from the earlier fault under signals");
	const struct counterexample *pin = &proofs->proof[PROOF_SIGNALS].counterexample;
	assert_place(pin, 2, 1, 0, 1, 0xEA | 0x10);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Cell 1 is held to 2, where the state is 1; the line grows only in cell 2, whose stretch pin row 1 sets.
static void wrong_held_bits_before_a_long_line(void **test)
{
	(void)test;
	struct by_hand *hand = by_hand_create(2);
	uint64_t stretch = add_stretch(hand, 5);
	size_t line = add_line(hand, "plain", 3, (uint64_t[]){0, 0, 0});
	set_frame(hand, 1, &line);
	set_hold(hand, 1, add_field(hand, "at", 1, 0), 2);
	add_straight_chips(hand);
	burn(hand, 0, 1, 0);
	burn(hand, 1, 3, stretch);
	burn(hand, 3, 0, 0);
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_int_equal(found->cell, 2);
	assert_false(found->byte_known);
	assert_string_equal(found->what, "the line takes 35 ticks, expected 30: this cell takes 15; this may follow from the earlier fault "
	                    "under signals");
	// Row 0: next 1, stretch (active low) on D2 high, the rest erased.
	assert_place(&proofs->proof[PROOF_SIGNALS].counterexample, 1, 0, 0, 0, 0xFD);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Row 0 leads to 3: all that comes after shows the wrong states, and no wrong byte.
static void signals_after_a_jump(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 0, 3, small_pins[1]);
	struct proofs *proofs = prove(hand, 0);
	assert_place(failed(proofs), 0, 0, 0, 0, 0xFB);
	const struct counterexample *pin = &proofs->proof[PROOF_SIGNALS].counterexample;
	assert_int_equal(pin->cell, 2);
	assert_false(pin->byte_known);
	assert_string_equal(pin->what, "blank is high, expected low; this may follow from the earlier fault under closure");
	// Row 2 has a wrong pin besides, so that two bytes are wrong. Mended, the jump still closes the frame.
	proofs_destroy(proofs);
	burn(hand, 2, 3, 0);
	proofs = prove(hand, 0);
	assert_place(failed(proofs), 0, 0, 0, 0, 0xFB);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Row 3 leads to 2: cells 2 and 3 follow each other for ever.
static void back_elsewhere(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 3, 2, small_pins[4]);
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_place(found, 3, 3, 0, 3, 0xFA);
	assert_string_equal(found->what, "the next state is 0x2 (rom0 0x0003: 0xFA), which cell 2 of the frame had already: "
	                    "expected a way back to the first state 0x0");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Row 4 leads to the spare state 5, which leads home: six cells. Next bit 0 and 2 are wrong, bit 0 is on the chip
// named.
static void back_too_late(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 4, 5, small_pins[0]);
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_place(found, 4, 4, 0, 4, 0xF5);
	assert_string_equal(found->what, "the next state after the frame's 5 cells is 0x5 (rom0 0x0004: 0xF5), expected the first "
	                    "state 0x0");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Next bits on two chips, next 2 on U8 alone: the wrong bit is there.
static void blames_the_chip_of_the_wrong_bit(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	struct chip *first = add_chip(hand, "U7"), *second = add_chip(hand, "U8");
	first->data[0] = (struct data_wire){DATA_NEXT, 0};
	first->data[5] = (struct data_wire){DATA_NEXT, 1};
	first->data[6] = (struct data_wire){DATA_SIGNAL, 0};
	second->data[7] = (struct data_wire){DATA_NEXT, 2};
	second->data[3] = (struct data_wire){DATA_SIGNAL, 1};
	burn_small(hand, (uint32_t[]){1, 0, 2, 3, 4});
	burn(hand, 4, 5, small_pins[0]);
	struct proofs *proofs = prove(hand, 1);
	const struct counterexample *found = failed(proofs);
	// U8 at 4: D7 is next 2, wrongly 1; D3 is blank, 1; the others erased.
	assert_place(found, 4, 4, 1, 4, 0xFF);
	assert_string_equal(found->what, "the next state after the frame's 5 cells is 0x5 (U7 0x0004: 0x9F and U8 0x0004: 0xFF), "
	                    "expected the first state 0x1");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Three times the quiet line: 6 cells, the timeline repeats after 2. A loop of 2 states closes, and so does one of 6.
static struct by_hand *quiet_lines(void)
{
	struct by_hand *hand = by_hand_create(3);
	add_signal(hand, "sync", false);
	add_signal(hand, "blank", true);
	size_t quiet = add_line(hand, "quiet", 2, small_pins + 3);
	set_frame(hand, 3, (size_t[]){quiet, quiet, quiet});
	add_straight_chips(hand);
	return hand;
}

static void burn_quiet_loop(struct by_hand *hand, uint32_t cells)
{
	for (uint32_t state = 0; state < cells; state++)
		burn(hand, state, (state + 1) % cells, small_pins[3 + (state + 1) % 2]);
}

static void repeating_frame(void **test)
{
	(void)test;
	struct by_hand *hand = quiet_lines();
	burn_quiet_loop(hand, 2);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_int_equal(proofs->closure.period_cells, 2);
	assert_int_equal(proofs->closure.cells, 6);
	proofs_destroy(proofs);
	burn_quiet_loop(hand, 6);
	proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_int_equal(proofs->closure.period_cells, 6);
	proofs_destroy(proofs);
	burn_quiet_loop(hand, 3);
	proofs = prove(hand, 0);
	assert_string_equal(failed(proofs)->what, "the next state is 0x0 (rom0 0x0002: 0xF8), the frame's first: it came back after "
	                    "3 cells, expected after a multiple of 2");
	proofs_destroy(proofs);
	burn_quiet_loop(hand, 4);
	proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_int_equal(found->cell, 3);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Two cells, the second long: 10 + 15 ticks. The stretch pin of a cell is stored in the row before.
static void line_ticks(void **test)
{
	(void)test;
	struct by_hand *hand = by_hand_create(1);
	uint64_t stretch = add_stretch(hand, 5);
	size_t line = add_line(hand, "long", 2, (uint64_t[]){0, stretch});
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	burn(hand, 0, 1, stretch);
	burn(hand, 1, 0, 0);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_int_equal(proofs->closure.ticks, 25);
	proofs_destroy(proofs);
	burn(hand, 0, 1, 0);
	proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_place(found, 1, 0, 0, 0, 0xFF);
	assert_int_equal(found->signal, 0);
	assert_string_equal(found->what, "the line takes 20 ticks, expected 25: this cell takes 10");
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_FAIL);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Lead 1: the pin shows one cell early what the next cell is to be. Cell 1 is long, so the pin of cell 0 is asserted,
// which row 1 stores.
static void leading_stretch(void **test)
{
	(void)test;
	struct by_hand *hand = by_hand_create(1);
	uint64_t stretch = add_stretch(hand, 5);
	hand->signals[0].lead_cells = 1;
	size_t line = add_line(hand, "long", 2, (uint64_t[]){0, stretch});
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	burn(hand, 0, 1, 0);
	burn(hand, 1, 0, stretch);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	assert_int_equal(proofs->closure.ticks, 25);
	proofs_destroy(proofs);
	burn(hand, 1, 0, 0);
	proofs = prove(hand, 0);
	assert_place(failed(proofs), 1, 1, 0, 1, 0xFE);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// A counter's byte is the one with clear. Sync: row 4 has not cleared, so that 5 comes, whose row clears.
static void counter_runs_on(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	hand->plan.machine.line.advance = ADVANCE_COUNT;
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 8; state++)
		burn_count(hand, state, state > 4, small_pins[(state + 1) % 5]);
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	// D0 clear low, D1 sync (active low, asserted) low, D2 blank high.
	assert_place(found, 4, 4, 0, 4, 0xFC);
	assert_string_equal(found->what, "the next state after the frame's 5 cells is 0x5 (rom0 0x0004: 0xFC), expected the first "
	                    "state 0x0");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(closed_frame),
		cmocka_unit_test(back_too_early),
		cmocka_unit_test(back_too_early_for_two_reasons),
		cmocka_unit_test(jump_to_a_spare_state),
		cmocka_unit_test(jump_ahead),
		cmocka_unit_test(wrong_pin_before),
		cmocka_unit_test(wrong_held_bits_before_a_long_line),
		cmocka_unit_test(signals_after_a_jump),
		cmocka_unit_test(back_elsewhere),
		cmocka_unit_test(back_too_late),
		cmocka_unit_test(blames_the_chip_of_the_wrong_bit),
		cmocka_unit_test(repeating_frame),
		cmocka_unit_test(line_ticks),
		cmocka_unit_test(leading_stretch),
		cmocka_unit_test(counter_runs_on),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
