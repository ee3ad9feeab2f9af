#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "by_hand.h"

#define NS(value) ratio(value, 1000000000)

// Cells of 10 ticks at 20 MHz, 500 ns.
static struct by_hand *timed(enum outputs outputs, enum advance advance, enum clear_kind clear)
{
	struct by_hand *hand = small_board();
	hand->plan.machine.line.outputs = outputs;
	hand->plan.machine.line.advance = advance;
	hand->plan.machine.line.clear = clear;
	hand->plan.clock.master_hz = fraction_whole(20000000);
	struct timing *timing = &hand->plan.timing;
	timing->latch_delay_s = NS(30);
	timing->latch_setup_s = NS(15);
	timing->counter_delay_s[STAGE_LINE] = NS(40);
	timing->counter_setup_s[STAGE_LINE] = NS(25);
	timing->margin_s = NS(20);
	add_straight_chips(hand);
	hand->chips[0].access_s = NS(150);
	bool direct = outputs == OUTPUTS_DIRECT;
	for (uint32_t state = 0; state < 8; state++)
		burn_count(hand, state, clear == CLEAR_ASYNC ? state > 4 : state >= 4, small_pins[(state + !direct) % 5]);
	if (advance == ADVANCE_TABLE)
		burn_small(hand, small_states);
	return hand;
}

static void assert_needed(struct by_hand *hand, int64_t needed_ns, int64_t slack_ns)
{
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_verdict(proofs, PROOF_SPEED, slack_ns < 0 ? VERDICT_FAIL : VERDICT_PASS);
	struct fraction needed = NS(needed_ns), slack = NS(slack_ns);
	assert_ratio(proofs->speed.needed_s, needed.numerator, needed.denominator);
	assert_ratio(proofs->speed.slack_s, slack.numerator, slack.denominator);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// 30 + 150 + 15 + 20.
static void table(void **test)
{
	(void)test;
	assert_needed(timed(OUTPUTS_REGISTERED, ADVANCE_TABLE, CLEAR_SYNC), 215, 285);
	assert_needed(timed(OUTPUTS_DIRECT, ADVANCE_TABLE, CLEAR_SYNC), 215, 285);
}

// 40 + 150 + 25 + 20: the counter's setup is the larger; with registered outputs the latch's counts where it is.
static void counter_with_sync_clear(void **test)
{
	(void)test;
	assert_needed(timed(OUTPUTS_DIRECT, ADVANCE_COUNT, CLEAR_SYNC), 235, 265);
	assert_needed(timed(OUTPUTS_REGISTERED, ADVANCE_COUNT, CLEAR_SYNC), 235, 265);
	struct by_hand *hand = timed(OUTPUTS_REGISTERED, ADVANCE_COUNT, CLEAR_SYNC);
	hand->plan.timing.latch_setup_s = NS(28);
	assert_needed(hand, 238, 262);
	hand = timed(OUTPUTS_DIRECT, ADVANCE_COUNT, CLEAR_SYNC);
	hand->plan.timing.latch_setup_s = NS(28);
	assert_needed(hand, 235, 265);
}

// 2 × (40 + 150) + 25 + 20: the passing state is read before the first cell is.
static void counter_with_async_clear(void **test)
{
	(void)test;
	assert_needed(timed(OUTPUTS_REGISTERED, ADVANCE_COUNT, CLEAR_ASYNC), 425, 75);
}

static void all_figures(void **test)
{
	(void)test;
	struct by_hand *hand = timed(OUTPUTS_REGISTERED, ADVANCE_TABLE, CLEAR_SYNC);
	hand->plan.timing.share = ratio(1, 2);
	struct proofs *proofs = prove(hand, 0);
	const struct speed_result *result = &proofs->speed;
	assert_ratio(result->cell_s, 1, 2000000);
	assert_ratio(result->available_s, 1, 4000000);
	assert_int_equal(result->pass_count, 1);
	assert_true(result->passes[0].has_delay);
	assert_false(result->passes[0].counter);
	assert_ratio(result->passes[0].delay_s, 3, 100000000);
	assert_ratio(result->passes[0].access_s, 3, 20000000);
	assert_ratio(result->setup_s, 3, 200000000);
	assert_ratio(result->margin_s, 1, 50000000);
	assert_int_equal(result->passes[0].chip, 0);
	assert_false(result->of_line);
	assert_verdict(proofs, PROOF_SPEED, VERDICT_PASS);
	proofs_destroy(proofs);
	hand->chips[0].access_s = NS(185); // exactly the 250 ns that there are
	assert_needed(hand, 250, 0);
	hand = timed(OUTPUTS_REGISTERED, ADVANCE_TABLE, CLEAR_SYNC);
	hand->plan.timing.share = ratio(1, 2);
	hand->chips[0].access_s = NS(186);
	proofs = prove(hand, 0);
	assert_true(proofs_failed(proofs, true));
	assert_false(proofs_failed(proofs, false)); // advice
	proofs_destroy(proofs);
	assert_needed(hand, 251, -1);
}

// The slowest of the chips counts, also if it carries signals only.
static void slowest_chip(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	struct chip *chips[3] = {add_chip(hand, "U7"), add_chip(hand, "U8"), add_chip(hand, "U9")};
	for (unsigned bit = 0; bit < 3; bit++)
		chips[0]->data[bit] = (struct data_wire){DATA_NEXT, bit};
	chips[1]->data[0] = (struct data_wire){DATA_SIGNAL, 0};
	chips[2]->data[0] = (struct data_wire){DATA_SIGNAL, 1};
	chips[0]->access_s = NS(70);
	chips[1]->access_s = NS(200);
	chips[2]->access_s = NS(150);
	burn_small(hand, small_states);
	struct proofs *proofs = prove(hand, 0);
	assert_int_equal(proofs->speed.passes[0].chip, 1);
	assert_ratio(proofs->speed.passes[0].access_s, 1, 5000000);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Only the frame's cells count: with every cell long, the shortest is long.
static void shortest_cell(void **test)
{
	(void)test;
	struct by_hand *hand = by_hand_create(1);
	uint64_t stretch = add_stretch(hand, 5);
	size_t line = add_line(hand, "long", 2, (uint64_t[]){stretch, stretch});
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	burn(hand, 0, 1, stretch);
	burn(hand, 1, 0, stretch);
	struct proofs *proofs = prove(hand, 0);
	assert_ratio(proofs->speed.cell_s, 3, 200000);
	proofs_destroy(proofs);
	burn(hand, 1, 0, 0);
	proofs = prove(hand, 0);
	assert_ratio(proofs->speed.cell_s, 1, 100000);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(table),
		cmocka_unit_test(counter_with_sync_clear),
		cmocka_unit_test(counter_with_async_clear),
		cmocka_unit_test(all_figures),
		cmocka_unit_test(slowest_chip),
		cmocka_unit_test(shortest_cell),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
