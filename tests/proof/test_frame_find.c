// The frame is found without a known start.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdio.h>

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

// Six cells of eight states, 4 and 7 spare; "mark" in the cells 0, 3 and 4. No pin and no hold says more of where cells are.
#define SIX_CELLS 6u
static const uint32_t six_states[SIX_CELLS] = {3, 5, 0, 6, 1, 2};

static uint64_t six_mark(uint32_t cell)
{
	return cell % SIX_CELLS == 0 || cell % SIX_CELLS == 3 || cell % SIX_CELLS == 4;
}

static struct by_hand *six_burned(void)
{
	struct by_hand *hand = by_hand_create(3);
	const uint64_t mark = add_signal(hand, "mark", true);
	const size_t first = add_line(hand, "first", 3, (uint64_t[]){mark, 0, 0});
	const size_t second = add_line(hand, "second", 3, (uint64_t[]){mark, mark, 0});
	set_frame(hand, 2, (size_t[]){first, second});
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 8; state++)
		burn(hand, state, six_states[0], mark);
	for (uint32_t cell = 0; cell < SIX_CELLS; cell++)
		burn(hand, six_states[cell], six_states[(cell + 1) % SIX_CELLS], six_mark(cell + 1));
	return hand;
}

// The spare row 7 leads to itself: the frame closes all the same, but power-up may be caught there.
static void spare_row_that_leads_to_itself(void **test)
{
	(void)test;
	struct by_hand *hand = six_burned();
	assert_found(hand, 3);
	burn(hand, 7, 7, 1);
	struct proofs *proofs = find(hand);
	assert_int_equal(proofs->closure.start_state, 3);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_FAIL);
	assert_int_equal(proofs->power_up.lost_states, 1);
	assert_int_equal(proofs->power_up.second_loop_state, 7);
	assert_int_equal(proofs->power_up.second_loop_cells, 1);
	assert_int_equal(proofs->proof[PROOF_POWER_UP].counterexample.byte.address, 7);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Closure, from state 3 on, blames a row, in words that begin so.
static void assert_blamed(const struct by_hand *hand, uint32_t cell, const char *words)
{
	struct proofs *proofs = find(hand);
	const struct counterexample *found = &proofs->proof[PROOF_CLOSURE].counterexample;
	assert_int_equal(proofs->closure.start_state, six_states[0]);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_FAIL);
	assert_int_equal(found->cell, cell);
	assert_int_equal(found->state, six_states[cell]);
	assert_true(found->byte_known);
	assert_int_equal(found->byte.address, six_states[cell]);
	assert_int_equal(strncmp(found->what, words, strlen(words)), 0);
	proofs_destroy(proofs);
}

// A row of the frame leads elsewhere, so that the loop is shorter, or none of the frame's. The start is what most states lead to: the
// two spare ones and that of cell 5. The state that is left out leads on and nothing leads there: it is what was expected.
static void rows_that_shorten_the_loop(void **test)
{
	(void)test;
	for (uint32_t cell = 0; cell < 4; cell++) {
		const uint32_t right = six_states[cell + 1];
		for (uint32_t wrong = 0; wrong < 8; wrong++) {
			char words[80];
			if (wrong == right)
				continue;
			struct by_hand *hand = six_burned();
			burn(hand, six_states[cell], wrong, six_mark(cell + 1));
			snprintf(words, sizeof words, "the next state is 0x%X, expected 0x%X, which nothing else leads to", wrong, right);
			assert_blamed(hand, cell, words);
			by_hand_destroy(hand);
		}
	}
}

// What cell 4 leaves out leads home itself, as spare states do: there is no telling which of them was expected.
static void row_before_the_last(void **test)
{
	(void)test;
	struct by_hand *hand = six_burned();
	burn(hand, 1, 3, 0);
	assert_blamed(hand, 4, "the next state is 0x3 (rom0 0x0001: 0xF3), the frame's first: it came back after 5 cells, expected after 6");
	burn(hand, 1, 5, 0);
	assert_blamed(hand, 4, "the next state is 0x5 (rom0 0x0001: 0xF5), which cell 1 of the frame had already");
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
		cmocka_unit_test(spare_row_that_leads_to_itself),
		cmocka_unit_test(rows_that_shorten_the_loop),
		cmocka_unit_test(row_before_the_last),
		cmocka_unit_test(random_loops),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
