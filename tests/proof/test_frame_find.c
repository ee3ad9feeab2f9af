// The frame is found without a known start.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "by_hand.h"

static struct proofs *find(const struct by_hand *hand)
{
	struct proofs *proofs = proofs_run(&hand->timeline, hand->images, false, 0);
	assert_non_null(proofs);
	return proofs;
}

static void assert_found(const struct by_hand *hand, uint32_t start)
{
	struct proofs *proofs = find(hand);
	assert_int_equal(proofs->closure.start_state, start);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_PASS);
	proofs_destroy(proofs);
}

// Five states in any order; state 0 may be a spare or any cell.
static void any_start(void **test)
{
	(void)test;
	static const uint32_t orders[][SMALL_CELLS] = {{0, 1, 2, 3, 4}, {3, 4, 0, 1, 2}, {7, 5, 3, 2, 1}, {6, 1, 5, 2, 0}};
	for (size_t index = 0; index < sizeof orders / sizeof *orders; index++) {
		struct by_hand *hand = small_board();
		add_straight_chips(hand);
		burn_small(hand, orders[index]);
		assert_found(hand, orders[index][0]);
		hand->plan.machine.line.outputs = OUTPUTS_DIRECT;
		burn_small(hand, orders[index]);
		assert_found(hand, orders[index][0]);
		by_hand_destroy(hand);
	}
}

// Three equal lines, six states: the pins fit at every other cell, only the hold of cell 3 says which is the first.
static void holds_decide(void **test)
{
	(void)test;
	for (uint32_t held = 0; held < 8; held++) {
		struct by_hand *hand = by_hand_create(3);
		uint64_t mark = add_signal(hand, "mark", true);
		size_t line = add_line(hand, "line", 2, (uint64_t[]){mark, 0});
		set_frame(hand, 3, (size_t[]){line, line, line});
		size_t at = add_field(hand, "at", 2, 0);
		set_hold(hand, 3, at, held);
		add_straight_chips(hand);
		for (uint32_t state = 0; state < 8; state++)
			burn(hand, state, state < 5 ? state + 1 : 0, state % 2 == 1 ? mark : 0);
		// Cells of even states are marked; cell 3 is to be `held`, so cell 0 is held + 3 modulo 6 if that is even.
		struct proofs *proofs = find(hand);
		bool possible = held < 6 && held % 2 == 1;
		assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
		assert_verdict(proofs, PROOF_SIGNALS, possible ? VERDICT_PASS : VERDICT_FAIL);
		if (possible)
			assert_int_equal(proofs->closure.start_state, (held + 3) % 6);
		proofs_destroy(proofs);
		by_hand_destroy(hand);
	}
}

// No turn fits: the one that agrees longest is taken. The row of cell 2 has lost the sync of cell 3; from any other
// turn the pins differ sooner. State 0, where the walk begins, is cell 2.
static void longest_agreement(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	add_straight_chips(hand);
	burn_small(hand, (uint32_t[]){3, 4, 0, 1, 2});
	burn(hand, 0, 1, SMALL_BLANK);
	struct proofs *proofs = find(hand);
	assert_int_equal(proofs->closure.start_state, 3);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_FAIL);
	assert_int_equal(proofs->proof[PROOF_SIGNALS].counterexample.cell, 3);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// The loop may be shorter than the frame (a timeline that repeats) or longer.
static void loops_of_other_lengths(void **test)
{
	(void)test;
	struct by_hand *hand = by_hand_create(3);
	uint64_t mark = add_signal(hand, "mark", true);
	size_t line = add_line(hand, "line", 2, (uint64_t[]){0, mark});
	set_frame(hand, 3, (size_t[]){line, line, line});
	add_straight_chips(hand);
	burn(hand, 0, 5, 0);
	burn(hand, 5, 2, mark); // cell 2 is marked
	burn(hand, 2, 5, 0);
	for (uint32_t state = 0; state < 8; state++)
		if (state != 0 && state != 2 && state != 5)
			burn(hand, state, 5, 0);
	struct proofs *proofs = find(hand);
	assert_int_equal(proofs->closure.start_state, 5);
	assert_int_equal(proofs->closure.period_cells, 2);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	proofs_destroy(proofs);
	for (uint32_t state = 0; state < 8; state++)
		burn(hand, state, (state + 1) % 8, state % 2 == 0 ? mark : 0);
	proofs = find(hand);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_FAIL); // 8 cells, and the frame has 6
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Decoded signals take part where their codes are listed; where they are to be read, the data signals must do.
static void decoded_signals(void **test)
{
	(void)test;
	static const uint32_t codes[] = {3};
	struct by_hand *hand = by_hand_create(2);
	uint64_t gate = add_decoded(hand, "gate", add_field(hand, "state", 1, 0), codes, 1);
	size_t line = add_line(hand, "line", 4, (uint64_t[]){0, gate, 0, 0});
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 4; state++)
		burn(hand, state, (state + 1) % 4, 0);
	assert_found(hand, 2);
	by_hand_destroy(hand);
}

// Loops of random pins with random holds: turned by any amount, the frame is found and proved.
static void random_loops(void **test)
{
	(void)test;
	uint64_t seed = 31;
	for (unsigned round = 0; round < 300; round++) {
		uint32_t order[64], cells = 1 + random_below(&seed, 40);
		uint64_t asserted[64];
		for (uint32_t index = 0; index < 64; index++)
			order[index] = index;
		for (uint32_t index = 64; index-- > 1;) {
			uint32_t other = random_below(&seed, index + 1), kept = order[index];
			order[index] = order[other];
			order[other] = kept;
		}
		struct by_hand *hand = by_hand_create(6);
		uint64_t mark = add_signal(hand, "mark", false);
		uint32_t repeated = 1 + random_below(&seed, cells); // few or many turns that nearly fit
		for (uint32_t cell = 0; cell < cells; cell++)
			asserted[cell] = cell < repeated ? (random_below(&seed, 2) ? mark : 0) : asserted[cell - repeated];
		size_t line = add_line(hand, "line", cells, asserted), low = add_field(hand, "low", 3, 0);
		set_frame(hand, 1, &line);
		size_t whole = add_field(hand, "whole", 5, 0);
		for (uint32_t cell = 0; cell < cells; cell++)
			if (random_below(&seed, 3) == 0)
				set_hold(hand, cell, low, order[cell] & 15);
		if (!hand->timeline.has_holds || round % 4 == 0)
			set_hold(hand, 0, whole, order[0]);
		add_straight_chips(hand);
		for (uint32_t index = 0; index < 64; index++) {
			uint32_t next = index + 1 < cells ? index + 1 : 0;
			burn(hand, order[index], order[next], asserted[next]);
		}
		struct proofs *proofs = find(hand);
		assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
		assert_verdict(proofs, PROOF_POWER_UP, VERDICT_PASS);
		proofs_destroy(proofs);
		by_hand_destroy(hand);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(any_start),
		cmocka_unit_test(holds_decide),
		cmocka_unit_test(longest_agreement),
		cmocka_unit_test(loops_of_other_lengths),
		cmocka_unit_test(decoded_signals),
		cmocka_unit_test(random_loops),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
