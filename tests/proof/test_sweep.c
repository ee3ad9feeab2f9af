#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "by_hand.h"

// A loop of `cells` states, cells of 10 us, with a sweep over state bits.
static struct by_hand *swept(unsigned state_bits, const uint32_t *states, uint32_t cells, unsigned high, unsigned low,
                             int64_t within_us)
{
	struct by_hand *hand = by_hand_create(state_bits);
	uint64_t mark = add_signal(hand, "mark", true), *asserted = arena_array(hand->arena, cells, sizeof *asserted);
	assert_non_null(asserted);
	asserted[0] = mark;
	size_t line = add_line(hand, "line", cells, asserted);
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	for (uint32_t cell = 0; cell < cells; cell++)
		burn(hand, states[cell], states[(cell + 1) % cells], asserted[(cell + 1) % cells]);
	hand->plan.sweep_count = 1;
	hand->sweeps[0] = (struct sweep){.high = high, .low = low, .text = "at.1..0", .within_s = ratio(within_us, 1000000)};
	return hand;
}

static void absent(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SWEEP, VERDICT_ABSENT);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Bits 1 and 0 in turn: 0 1 2 3 0 2. The gaps in cells, around the loop: 0: 4, 2; 1: 6; 2: 3, 3; 3: 6.
static void largest_gap(void **test)
{
	(void)test;
	static const uint32_t states[] = {0, 1, 2, 3, 4, 6};
	struct by_hand *hand = swept(3, states, 6, 1, 0, 60);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SWEEP, VERDICT_PASS);
	assert_int_equal(proofs->sweeps[0].values, 4);
	assert_int_equal(proofs->sweeps[0].missing, 0);
	assert_ratio(proofs->sweeps[0].worst_gap_s, 3, 50000);
	assert_int_equal(proofs->sweeps[0].worst_value, 1);
	assert_ratio(proofs->sweeps[0].within_s, 3, 50000);
	proofs_destroy(proofs);
	hand->sweeps[0].within_s = ratio(59, 1000000);
	proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SWEEP, VERDICT_FAIL);
	const struct counterexample *found = &proofs->proof[PROOF_SWEEP].counterexample;
	assert_true(found->present);
	assert_int_equal(found->cell, 1); // where value 1 comes up again, one lap later
	assert_int_equal(found->state, 1);
	assert_string_equal(found->what, "value 1 of at.1..0 comes up again only after 60.000 us, expected within 59.000 us");
	assert_true(proofs_failed(proofs, false));
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// The same with bit 0 alone: 0 1 0 1 0 0. The largest gap is from cell 3 over the end to cell 1: 4 cells, 40 us.
static void gap_over_the_end(void **test)
{
	(void)test;
	static const uint32_t states[] = {0, 1, 2, 3, 4, 6};
	struct by_hand *hand = swept(3, states, 6, 0, 0, 40);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SWEEP, VERDICT_PASS);
	assert_int_equal(proofs->sweeps[0].values, 2);
	assert_ratio(proofs->sweeps[0].worst_gap_s, 1, 25000);
	assert_int_equal(proofs->sweeps[0].worst_value, 1);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

static void missing_values(void **test)
{
	(void)test;
	static const uint32_t states[] = {0, 1, 5, 4};
	struct by_hand *hand = swept(3, states, 4, 2, 1, 1000);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SWEEP, VERDICT_FAIL);
	assert_int_equal(proofs->sweeps[0].values, 4);
	assert_int_equal(proofs->sweeps[0].missing, 2); // 1 and 3
	assert_int_equal(proofs->sweeps[0].first_missing, 1);
	assert_false(proofs->proof[PROOF_SWEEP].counterexample.present);
	assert_string_equal(proofs->proof[PROOF_SWEEP].counterexample.what,
	                    "2 of 4 values of at.1..0 never come up, expected all: the first is 1");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// A long cell counts with its ticks: 0 1 with cell 0 long, 15 + 10 us.
static void long_cells(void **test)
{
	(void)test;
	struct by_hand *hand = by_hand_create(1);
	uint64_t stretch = add_stretch(hand, 5);
	size_t line = add_line(hand, "line", 2, (uint64_t[]){stretch, 0});
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	burn(hand, 0, 1, 0);
	burn(hand, 1, 0, stretch);
	hand->plan.sweep_count = 1;
	hand->sweeps[0] = (struct sweep){.high = 0, .low = 0, .text = "state.0", .within_s = ratio(25, 1000000)};
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SWEEP, VERDICT_PASS);
	assert_ratio(proofs->sweeps[0].worst_gap_s, 1, 40000);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Two sweeps: each has its figures, one failing fails the proof.
static void two_sweeps(void **test)
{
	(void)test;
	static const uint32_t states[] = {0, 1, 2, 3, 4, 6};
	struct by_hand *hand = swept(3, states, 6, 0, 0, 40);
	hand->plan.sweep_count = 2;
	hand->sweeps[1] = (struct sweep){.high = 2, .low = 0, .text = "state.2..0", .within_s = ratio(1, 1)};
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SWEEP, VERDICT_FAIL);
	assert_int_equal(proofs->sweeps[0].missing, 0);
	assert_int_equal(proofs->sweeps[1].values, 8);
	assert_int_equal(proofs->sweeps[1].missing, 2);
	assert_int_equal(proofs->sweeps[1].first_missing, 5);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

static void not_judged_unless_closed(void **test)
{
	(void)test;
	static const uint32_t states[] = {0, 1, 2, 3};
	struct by_hand *hand = swept(2, states, 4, 1, 0, 1000);
	burn(hand, 2, 0, 0);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SWEEP, VERDICT_FAIL);
	assert_string_equal(proofs->proof[PROOF_SWEEP].counterexample.what, "not judged: the frame does not close");
	assert_int_equal(proofs->sweeps[0].values, 0);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(absent),
		cmocka_unit_test(largest_gap),
		cmocka_unit_test(gap_over_the_end),
		cmocka_unit_test(missing_values),
		cmocka_unit_test(long_cells),
		cmocka_unit_test(two_sweeps),
		cmocka_unit_test(not_judged_unless_closed),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
