// All proofs together: what fails them, banks, and that no bit of a used row may flip unseen.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "by_hand.h"

static void names(void **test)
{
	(void)test;
	static const char *const expected[] = {"closure", "signals", "colour", "power-up", "upset", "limits", "glitches", "speed", "sweep"};
	static const bool must[] = {true, true, true, true, false, false, false, false, true};
	assert_int_equal(PROOF_COUNT, 9);
	for (unsigned kind = 0; kind < PROOF_COUNT; kind++) {
		assert_string_equal(proof_name(kind), expected[kind]);
		assert_int_equal(proof_is_must(kind), must[kind]);
	}
}

static void good_images(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	struct proofs *proofs = prove(hand, 0);
	assert_false(proofs_failed(proofs, true));
	assert_int_equal(proofs->banks, 1);
	assert_ptr_equal(proofs->timeline, &hand->timeline);
	proofs_destroy(proofs);
	proofs_destroy(NULL);
	by_hand_destroy(hand);
}

// Flips every wired bit at one address of every chip, one at a time; each must fail a must.
static unsigned flip_bits(struct by_hand *hand, uint32_t state, uint32_t start, uint64_t kinds)
{
	unsigned flips = 0;
	for (size_t index = 0; index < hand->plan.chip_count; index++) {
		const struct chip *chip = &hand->chips[index];
		uint8_t *byte = &hand->images[index].bytes[wired_address(chip, state, 0)];
		for (unsigned pin = 0; pin < 8; pin++) {
			if ((kinds >> chip->data[pin].kind & 1) == 0)
				continue;
			*byte = (uint8_t)(*byte ^ 1u << pin);
			struct proofs *proofs = prove(hand, start);
			assert_true(proofs_failed(proofs, false));
			proofs_destroy(proofs);
			*byte = (uint8_t)(*byte ^ 1u << pin);
			flips++;
		}
	}
	struct proofs *proofs = prove(hand, start);
	assert_false(proofs_failed(proofs, false));
	proofs_destroy(proofs);
	return flips;
}

#define USED_KINDS ((uint64_t)1 << DATA_NEXT | (uint64_t)1 << DATA_CLEAR | (uint64_t)1 << DATA_SIGNAL)

// The last state is 0, whose neighbours 1, 2 and 4 are all used: see the next test.
static void flips_in_a_table(enum outputs outputs)
{
	static const uint32_t states[SMALL_CELLS] = {7, 1, 2, 4, 0};
	struct by_hand *hand = small_board();
	hand->plan.machine.line.outputs = outputs;
	add_straight_chips(hand);
	burn_small(hand, states);
	unsigned flips = 0;
	for (uint32_t cell = 0; cell < SMALL_CELLS; cell++)
		flips += flip_bits(hand, states[cell], 7, USED_KINDS);
	assert_int_equal(flips, SMALL_CELLS * 5); // three next bits and two signals
	by_hand_destroy(hand);
}

static void flips_in_tables(void **test)
{
	(void)test;
	flips_in_a_table(OUTPUTS_REGISTERED);
	flips_in_a_table(OUTPUTS_DIRECT);
}

// Spare rows are the last cell's row over again. If the row before the last leads to one of them instead, the board
// makes the same raster, cell by cell: nothing is wrong with it, and nothing is found.
static void a_spare_state_as_good_as_the_last(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 3, 6, small_pins[4]);
	struct proofs *proofs = prove(hand, 0);
	assert_false(proofs_failed(proofs, true));
	assert_int_equal(proofs->closure.period_cells, 5);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// With a hold on the last cell, the state is not free, and the flip is found.
static void a_held_last_state(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	set_hold(hand, 4, add_field(hand, "at", 1, 0), 0);
	burn(hand, 3, 6, small_pins[4]);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_FAIL);
	assert_true(proofs_failed(proofs, false));
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

static void flips_in_a_counter(enum outputs outputs, enum clear_kind clear)
{
	struct by_hand *hand = small_board();
	bool direct = outputs == OUTPUTS_DIRECT, async = clear == CLEAR_ASYNC;
	hand->plan.machine.line.outputs = outputs;
	hand->plan.machine.line.advance = ADVANCE_COUNT;
	hand->plan.machine.line.clear = clear;
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 8; state++)
		burn_count(hand, state, async ? state > 4 : state >= 4, small_pins[(state + !direct) % SMALL_CELLS]);
	unsigned flips = 0;
	for (uint32_t state = 0; state < SMALL_CELLS; state++)
		flips += flip_bits(hand, state, 0, USED_KINDS);
	assert_int_equal(flips, SMALL_CELLS * 3); // clear and two signals
	if (async)
		assert_int_equal(flip_bits(hand, 5, 0, (uint64_t)1 << DATA_CLEAR), 1); // the passing state's clear
	by_hand_destroy(hand);
}

static void flips_in_counters(void **test)
{
	(void)test;
	flips_in_a_counter(OUTPUTS_REGISTERED, CLEAR_SYNC);
	flips_in_a_counter(OUTPUTS_REGISTERED, CLEAR_ASYNC);
	flips_in_a_counter(OUTPUTS_DIRECT, CLEAR_SYNC);
	flips_in_a_counter(OUTPUTS_DIRECT, CLEAR_ASYNC);
}

// Sixteen states, all used, four decoded cells, a stretch signal and a scrambled pair of chips: every bit of every row.
static void flips_in_a_full_machine(void **test)
{
	(void)test;
	struct by_hand *hand = by_hand_create(4);
	uint64_t stretch = add_stretch(hand, 3), sync = add_signal(hand, "sync", false);
	static const uint32_t codes[] = {3};
	uint64_t blank = add_decoded(hand, "blank", add_field(hand, "top", 3, 2), codes, 1);
	uint64_t asserted[16] = {0};
	for (uint32_t cell = 0; cell < 16; cell++)
		asserted[cell] = (cell == 2 ? stretch : 0) | (cell % 5 == 1 ? sync : 0) | (cell >= 12 ? blank : 0);
	size_t line = add_line(hand, "line", 16, asserted);
	set_frame(hand, 1, &line);
	hand->signals[1].lead_cells = 2;
	struct chip *first = add_chip(hand, "U7"), *second = add_chip(hand, "U8");
	first->address[0] = (struct address_wire){ADDRESS_STATE, 3};
	first->address[3] = (struct address_wire){ADDRESS_STATE, 0};
	first->data[7] = (struct data_wire){DATA_NEXT, 0};
	first->data[2] = (struct data_wire){DATA_SIGNAL, 0};
	first->data[3] = (struct data_wire){DATA_NEXT, 3};
	second->data[1] = (struct data_wire){DATA_NEXT, 1};
	second->data[4] = (struct data_wire){DATA_SIGNAL, 1};
	second->data[6] = (struct data_wire){DATA_NEXT, 2};
	for (uint32_t state = 0; state < 16; state++) {
		uint32_t next = (state + 1) % 16;
		burn(hand, state, next, (asserted[next] & stretch) | (asserted[(next + 2) % 16] & sync));
	}
	unsigned flips = 0;
	for (uint32_t state = 0; state < 16; state++)
		flips += flip_bits(hand, state, 0, USED_KINDS);
	assert_int_equal(flips, 16 * 6);
	by_hand_destroy(hand);
}

// Two settings of a jumper. Bank 1 is wrong in one row: found, and said of which bank.
static void banks(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	hand->plan.bank_bits = 1;
	add_straight_chips(hand);
	for (uint32_t bank = 0; bank < 2; bank++)
		for (uint32_t state = 0; state < 8; state++)
			burn_row(hand, bank, state, state < 4 ? state + 1 : 0, false, small_pins[state < 4 ? state + 1 : 0]);
	struct proofs *proofs = prove(hand, 0);
	assert_false(proofs_failed(proofs, true));
	assert_int_equal(proofs->banks, 2);
	assert_int_equal(proofs->signals.comparisons, 20);
	assert_int_equal(proofs->power_up.states, 16);
	assert_int_equal(proofs->power_up.longest_bank, 0);
	assert_int_equal(proofs->upset.upsets, 30);
	proofs_destroy(proofs);
	burn_row(hand, 1, 7, 6, false, 0);
	proofs = prove(hand, 0);
	assert_false(proofs_failed(proofs, true));
	assert_int_equal(proofs->power_up.longest_cells, 2);
	assert_int_equal(proofs->power_up.longest_state, 7);
	assert_int_equal(proofs->power_up.longest_bank, 1);
	proofs_destroy(proofs);
	burn_row(hand, 1, 1, 2, false, SMALL_SYNC);
	proofs = prove(hand, 0);
	assert_true(proofs_failed(proofs, false));
	assert_int_equal(proofs->proof[PROOF_SIGNALS].counterexample.bank, 1);
	assert_int_equal(proofs->proof[PROOF_SIGNALS].counterexample.cell, 2);
	assert_int_equal(proofs->proof[PROOF_SIGNALS].counterexample.byte.address, 9); // A3 is the jumper
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Bank 1 does not close: its power-up cannot be judged, whatever bank 0 did.
static void a_bank_that_does_not_close(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	hand->plan.bank_bits = 1;
	add_straight_chips(hand);
	for (uint32_t bank = 0; bank < 2; bank++)
		for (uint32_t state = 0; state < 8; state++)
			burn_row(hand, bank, state, state < 4 ? state + 1 : 0, false, small_pins[state < 4 ? state + 1 : 0]);
	burn_row(hand, 1, 1, 0, false, small_pins[2]);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_FAIL);
	assert_verdict(proofs, PROOF_UPSET, VERDICT_FAIL);
	assert_int_equal(proofs->proof[PROOF_CLOSURE].counterexample.bank, 1);
	assert_int_equal(proofs->proof[PROOF_UPSET].counterexample.bank, 1);
	assert_string_equal(proofs->proof[PROOF_UPSET].counterexample.what, "not judged: the frame does not close");
	assert_int_equal(proofs->upset.upsets, 15); // of bank 0
	assert_int_equal(proofs->power_up.states, 8);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Means are over all banks: in bank 1 the spare 3 takes two cells home, by way of no other, so flips to it take longer.
static void means_over_banks(void **test)
{
	(void)test;
	struct by_hand *hand = by_hand_create(2);
	hand->plan.bank_bits = 1;
	uint64_t mark = add_signal(hand, "mark", true);
	size_t line = add_line(hand, "line", 2, (uint64_t[]){mark, 0});
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	for (uint32_t bank = 0; bank < 2; bank++) {
		burn_row(hand, bank, 0, 1, false, 0);
		burn_row(hand, bank, 1, 0, false, mark);
		burn_row(hand, bank, 2, 0, false, mark);
		burn_row(hand, bank, 3, bank == 0 ? 0 : 2, false, mark);
	}
	struct proofs *proofs = prove(hand, 0);
	// Cells until the frame is regained, bits 0 and 1 of states 0 and 1. Bank 0: 0, 1 (by 2); 0, 1 (by 3). Bank 1: 0, 1; 0, 2.
	assert_int_equal(proofs->upset.upsets, 8);
	assert_ratio(proofs->upset.mean_cells, 5, 8);
	assert_int_equal(proofs->upset.worst_cells, 2);
	assert_int_equal(proofs->upset.worst_cell, 1);
	assert_int_equal(proofs->upset.worst_bit, 1);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(names),
		cmocka_unit_test(good_images),
		cmocka_unit_test(flips_in_tables),
		cmocka_unit_test(a_spare_state_as_good_as_the_last),
		cmocka_unit_test(a_held_last_state),
		cmocka_unit_test(flips_in_counters),
		cmocka_unit_test(flips_in_a_full_machine),
		cmocka_unit_test(banks),
		cmocka_unit_test(a_bank_that_does_not_close),
		cmocka_unit_test(means_over_banks),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
