#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "by_hand.h"

static const struct counterexample *failed(const struct proofs *proofs)
{
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_FAIL);
	const struct counterexample *found = &proofs->proof[PROOF_SIGNALS].counterexample;
	assert_true(found->present);
	return found;
}

static void all_as_planned(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	assert_int_equal(proofs->signals.comparisons, 10);
	assert_int_equal(proofs->signals.held_comparisons, 0);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Registered: cell 2 shows what row 1 holds. Blank is asserted there, and should not be.
static void registered_pin(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 1, 2, SMALL_BLANK);
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_int_equal(found->cell, 2);
	assert_int_equal(found->state, 1);
	assert_int_equal(found->signal, 1);
	assert_true(found->byte_known);
	assert_int_equal(found->byte.address, 1);
	assert_int_equal(found->byte.value, 0xFA);
	assert_string_equal(found->what, "blank is high, expected low");
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// The pins of cell 0 are those that the last row of the lap delivers.
static void first_cell_around_the_frame(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 4, 0, SMALL_BLANK);
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_int_equal(found->cell, 0);
	assert_int_equal(found->state, 4);
	assert_int_equal(found->signal, 0);
	assert_int_equal(found->byte.value, 0xF8);
	assert_string_equal(found->what, "sync is high, expected low");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Direct: cell 2 shows what row 2 holds.
static void direct_pin(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	hand->plan.machine.line.outputs = OUTPUTS_DIRECT;
	add_straight_chips(hand);
	burn_small(hand, small_states);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	proofs_destroy(proofs);
	burn(hand, 2, 3, SMALL_SYNC);
	proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_int_equal(found->cell, 2);
	assert_int_equal(found->state, 2);
	assert_int_equal(found->byte.address, 2);
	assert_int_equal(found->byte.value, 0xE3);
	assert_string_equal(found->what, "sync is low, expected high");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Lead 2 for sync: its pin shows at cell i what the timeline has at i + 2, so at 1 (for 3) and at 3 (for 0).
static void leading_pin(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	hand->signals[0].lead_cells = 2;
	add_straight_chips(hand);
	burn(hand, 0, 1, SMALL_SYNC | SMALL_BLANK); // cell 1
	burn(hand, 1, 2, 0);                        // cell 2
	burn(hand, 2, 3, SMALL_SYNC | SMALL_BLANK); // cell 3
	burn(hand, 3, 4, SMALL_BLANK);              // cell 4
	burn(hand, 4, 0, SMALL_BLANK);              // cell 0
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	proofs_destroy(proofs);
	hand->signals[0].lead_cells = -3; // the same, around the frame
	proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	proofs_destroy(proofs);
	hand->signals[0].lead_cells = -2;
	proofs = prove(hand, 0);
	assert_int_equal(failed(proofs)->cell, 0);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// A board whose gate hangs on the upper two of three state bits, asserted in cells 1 and 2 of four.
static struct by_hand *decoded_board(const uint32_t *codes, size_t count, const uint32_t *states)
{
	struct by_hand *hand = by_hand_create(3);
	uint64_t gate = add_decoded(hand, "gate", add_field(hand, "top", 2, 1), codes, count);
	size_t line = add_line(hand, "line", 4, (uint64_t[]){0, gate, gate, 0});
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	for (uint32_t cell = 0; cell < 4; cell++)
		burn(hand, states[cell], states[(cell + 1) % 4], 0);
	return hand;
}

static void listed_codes(void **test)
{
	(void)test;
	static const uint32_t codes[] = {1, 3};
	// Codes 0, 1, 3, 2.
	struct by_hand *hand = decoded_board(codes, 2, (uint32_t[]){0, 2, 6, 4});
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	assert_int_equal(proofs->signals.comparisons, 4);
	assert_int_equal(proofs->code_counts[0], 2);
	assert_int_equal(proofs->codes[0][0], 1);
	assert_int_equal(proofs->codes[0][1], 3);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
	// Codes 0, 1, 2, 0: cell 2 has no code of the list. Row 2 led there.
	hand = decoded_board(codes, 2, (uint32_t[]){0, 2, 4, 1});
	proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_int_equal(found->cell, 2);
	assert_int_equal(found->state, 2);
	assert_int_equal(found->byte.address, 2);
	assert_string_equal(found->what, "gate is low, expected high: top is 0x2, which stands for low");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Direct outputs or not, a state comes from the row before.
static void codes_with_direct_outputs(void **test)
{
	(void)test;
	static const uint32_t codes[] = {1, 3};
	struct by_hand *hand = decoded_board(codes, 2, (uint32_t[]){0, 2, 4, 1});
	hand->plan.machine.line.outputs = OUTPUTS_DIRECT;
	struct proofs *proofs = prove(hand, 0);
	assert_int_equal(failed(proofs)->cell, 2);
	assert_int_equal(failed(proofs)->state, 2);
	assert_int_equal(failed(proofs)->byte.address, 2);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

static void codes_out_of_the_images(void **test)
{
	(void)test;
	// Codes 0, 2, 3, 1: asserted are 2 and 3.
	struct by_hand *hand = decoded_board(NULL, 0, (uint32_t[]){0, 4, 6, 2});
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	assert_int_equal(proofs->code_counts[0], 2);
	assert_int_equal(proofs->codes[0][0], 2);
	assert_int_equal(proofs->codes[0][1], 3);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
	// Codes 0, 2, 3, 3: 3 stands for both levels.
	hand = decoded_board(NULL, 0, (uint32_t[]){0, 4, 6, 7});
	proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_int_equal(found->cell, 3);
	assert_int_equal(found->state, 6);
	assert_int_equal(found->signal, 0);
	assert_string_equal(found->what, "gate is high, expected low: top is 0x3, which stands for high elsewhere in the frame");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// A decoded signal that leads: its codes are those of the cells before.
static void leading_codes(void **test)
{
	(void)test;
	struct by_hand *hand = decoded_board(NULL, 0, (uint32_t[]){0, 4, 6, 2});
	hand->signals[0].lead_cells = 1; // asserted at the pin in cells 0 and 1, codes 0 and 2
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	assert_int_equal(proofs->code_counts[0], 2);
	assert_int_equal(proofs->codes[0][0], 0);
	assert_int_equal(proofs->codes[0][1], 2);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// The cells 1 and 2 hold the field `at`, state bits 1 and 0.
static void held_bits(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	size_t at = add_field(hand, "at", 1, 0);
	set_hold(hand, 1, at, 1);
	set_hold(hand, 2, at, 2);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	assert_int_equal(proofs->signals.held_comparisons, 2);
	proofs_destroy(proofs);
	burn_small(hand, (uint32_t[]){0, 1, 7, 3, 4}); // at is 3 in cell 2
	proofs = prove(hand, 0);
	const struct counterexample *found = failed(proofs);
	assert_int_equal(found->cell, 2);
	assert_int_equal(found->state, 1);
	assert_int_equal(found->byte.address, 1);
	assert_string_equal(found->what, "at is 3, expected 2 (state 0x7)");
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Both kinds of fault: the one in the earlier cell is shown.
static void shows_the_earlier_fault(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	size_t at = add_field(hand, "at", 1, 0);
	set_hold(hand, 3, at, 2);
	burn(hand, 1, 2, SMALL_BLANK);
	struct proofs *proofs = prove(hand, 0);
	assert_int_equal(failed(proofs)->cell, 2);
	assert_int_equal(failed(proofs)->signal, 1);
	proofs_destroy(proofs);
	set_hold(hand, 1, at, 3);
	proofs = prove(hand, 0);
	assert_int_equal(failed(proofs)->cell, 1);
	assert_int_equal(failed(proofs)->signal, SIZE_MAX);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// A counter's states need no row: signals are registered all the same.
static void counted_pins(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	hand->plan.machine.line.advance = ADVANCE_COUNT;
	hand->plan.machine.line.clear = CLEAR_ASYNC;
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 8; state++)
		burn_count(hand, state, state > 4, small_pins[(state + 1) % 5]);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	proofs_destroy(proofs);
	burn_count(hand, 0, false, 0);
	proofs = prove(hand, 0);
	assert_int_equal(failed(proofs)->cell, 1);
	assert_int_equal(failed(proofs)->byte.address, 0);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(all_as_planned),
		cmocka_unit_test(registered_pin),
		cmocka_unit_test(first_cell_around_the_frame),
		cmocka_unit_test(direct_pin),
		cmocka_unit_test(leading_pin),
		cmocka_unit_test(listed_codes),
		cmocka_unit_test(codes_with_direct_outputs),
		cmocka_unit_test(codes_out_of_the_images),
		cmocka_unit_test(leading_codes),
		cmocka_unit_test(held_bits),
		cmocka_unit_test(shows_the_earlier_fault),
		cmocka_unit_test(counted_pins),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
