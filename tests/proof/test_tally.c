// Edges and high times of machines made by hand, counted by hand.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "line_frame_by_hand.h"
#include "proof/tally.h"

struct expected_net {
	enum net_kind kind;
	enum stage stage;
	unsigned index;
	uint64_t rises;
	int64_t high_ticks;
	bool level;
	uint64_t spikes;
};

static struct tally *count(const struct by_hand *hand, const struct proofs *proofs)
{
	struct tally *tally = NULL;
	assert_true(tally_run(proofs, hand->images, &tally));
	assert_non_null(tally);
	return tally;
}

static void assert_nets(const struct tally *tally, const struct expected_net *expected, size_t count)
{
	assert_int_equal(tally->net_count, count);
	for (size_t index = 0; index < count; index++) {
		const struct net_tally *net = &tally->nets[index];
		assert_int_equal(net->kind, expected[index].kind);
		assert_int_equal(net->stage, expected[index].stage);
		assert_int_equal(net->index, expected[index].index);
		assert_int_equal(net->rises, expected[index].rises);
		assert_int_equal(net->high_ticks, expected[index].high_ticks);
		assert_int_equal(net->level, expected[index].level);
		assert_int_equal(net->spikes, expected[index].spikes);
	}
}

// States 0 to 4, ten ticks each:
//     bit 0   0 1 0 1 0   rises twice
//     bit 1   0 0 1 1 0
//     bit 2   0 0 0 0 1
//     sync    0 1 1 0 1   the pin is low in cells 0 and 3
//     blank   1 1 0 1 1   stays high from cell 4 to cell 0
static void loop(void **test)
{
	(void)test;
	static const struct expected_net expected[] = {
		{NET_STATE, STAGE_LINE, 0, 2, 20, false, 0}, {NET_STATE, STAGE_LINE, 1, 1, 20, false, 0},
		{NET_STATE, STAGE_LINE, 2, 1, 10, false, 0}, {NET_SIGNAL, STAGE_LINE, 0, 2, 30, false, 0},
		{NET_SIGNAL, STAGE_LINE, 1, 1, 40, true, 0},
	};
	struct by_hand *hand = small_burned();
	struct proofs *proofs = prove(hand, 0);
	struct tally *tally = count(hand, proofs);
	struct fraction value = FRACTION_ZERO;
	assert_nets(tally, expected, 5);
	assert_int_equal(tally->ticks, 50);
	assert_int_equal(tally->cells, 5);
	assert_int_equal(tally->stretched, 0);
	assert_true(tally_frequency(tally, &tally->nets[0], hand->plan.clock.master_hz, &value));
	assert_ratio(value, 40000, 1); // two in 50 us
	assert_true(tally_duty(tally, &tally->nets[3], &value));
	assert_ratio(value, 3, 5);
	tally_destroy(tally);
	end(hand, proofs);
}

// Cells of 10 ticks, the second stretched by 3: stretch is asserted, low, while the state is 1.
static void stretched(void **test)
{
	(void)test;
	static const struct expected_net expected[] = {
		{NET_STATE, STAGE_LINE, 0, 1, 13, false, 0}, {NET_STATE, STAGE_LINE, 1, 1, 10, false, 0}, {NET_SIGNAL, STAGE_LINE, 0, 1, 20, true, 0},
	};
	struct by_hand *hand = by_hand_create(2);
	const uint64_t asserted[3] = {0, add_stretch(hand, 3), 0};
	const size_t line = add_line(hand, "line", 3, asserted);
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 4; state++)
		burn(hand, state, state < 2 ? state + 1 : 0, asserted[state < 2 ? state + 1 : 0]);
	struct proofs *proofs = prove(hand, 0);
	struct tally *tally = count(hand, proofs);
	assert_nets(tally, expected, 3);
	assert_int_equal(tally->ticks, 33);
	assert_int_equal(tally->stretched, 1);
	tally_destroy(tally);
	end(hand, proofs);
}

// Five cells of a counter that falls from 5 to 0 at once: bit 0, low in cells 4 and 0, is high for an instant between them.
static void spike_of_an_asynchronous_clear(void **test)
{
	(void)test;
	static const struct expected_net expected[] = {
		{NET_STATE, STAGE_LINE, 0, 2, 20, false, 1}, {NET_STATE, STAGE_LINE, 1, 1, 20, false, 0},
		{NET_STATE, STAGE_LINE, 2, 1, 10, false, 0}, {NET_CLEAR, STAGE_LINE, 0, 0, 0, false, 1},
		{NET_SIGNAL, STAGE_LINE, 0, 2, 30, false, 0}, {NET_SIGNAL, STAGE_LINE, 1, 1, 40, true, 0},
	};
	struct by_hand *hand = small_board();
	hand->plan.machine.line.advance = ADVANCE_COUNT;
	hand->plan.machine.line.clear = CLEAR_ASYNC;
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 8; state++)
		burn_count(hand, state, state > 4, small_pins[(state + 1) % 5]);
	struct proofs *proofs = prove(hand, 0);
	struct tally *tally = count(hand, proofs);
	assert_nets(tally, expected, 6);
	tally_destroy(tally);
	end(hand, proofs);
}

// The pier's frame of eight cells; counters of both stages clear by the edge:
//     cell     0 1 2  3 4 5  6 7
//     H        0 1 2  0 1 2  0 1
//     V        0      1      2      kind 0 0 1
//     step     in cells 2, 5 and 7; clear of the line in the same, for it is direct; clear of the frame all through line 2
static void two_counters(void **test)
{
	(void)test;
	static const struct expected_net expected[] = {
		{NET_STATE, STAGE_LINE, 0, 3, 30, false, 0},  {NET_STATE, STAGE_LINE, 1, 2, 20, false, 0}, {NET_STATE, STAGE_LINE, 2, 0, 0, false, 0},
		{NET_STEP, STAGE_LINE, 0, 3, 30, false, 0},   {NET_STATE, STAGE_FRAME, 0, 1, 30, false, 0}, {NET_STATE, STAGE_FRAME, 1, 1, 20, false, 0},
		{NET_KIND, STAGE_FRAME, 0, 1, 20, false, 0},  {NET_CLEAR, STAGE_LINE, 0, 3, 30, false, 0}, {NET_CLEAR, STAGE_FRAME, 0, 1, 20, false, 0},
		{NET_SIGNAL, STAGE_LINE, 0, 3, 50, false, 0}, {NET_SIGNAL, STAGE_LINE, 1, 2, 60, true, 0}, {NET_SIGNAL, STAGE_FRAME, 2, 1, 20, false, 0},
	};
	const struct stage_kind kinds[][2] = {{sync_latched, sync_latched}, {sync_latched, sync_direct}, {sync_direct, sync_latched}};
	for (size_t index = 0; index < 3; index++) { // the pins do not tell what is latched
		struct by_hand *hand = pier(kinds[index][0], kinds[index][1]);
		struct proofs *proofs = prove_pier(hand);
		struct tally *tally = count(hand, proofs);
		assert_nets(tally, expected, 12);
		tally_destroy(tally);
		end(hand, proofs);
	}
}

// Nine cells, H of all lines 0 1 2 and then 3 for an instant: bit 0, low in cells 2 and 0, spikes three times a frame. V passes 3 once: bit 0
// is 0 in line 2 and in line 0.
static void spikes_of_both_stages(void **test)
{
	(void)test;
	struct by_hand *hand = pier(async_latched, async_latched);
	struct proofs *proofs = prove_pier(hand);
	struct tally *tally = count(hand, proofs);
	const uint64_t spikes[] = {3, 0, 0, 0, 1, 0, 0, 3, 1, 0, 0, 0};
	assert_int_equal(tally->net_count, 12);
	for (size_t index = 0; index < 12; index++)
		assert_int_equal(tally->nets[index].spikes, spikes[index]);
	assert_int_equal(tally->nets[0].rises, 3);
	tally_destroy(tally);
	end(hand, proofs);
}

static void no_figures_where_the_frame_is_not_kept(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 2, 0, small_pins[3]);
	struct proofs *proofs = prove(hand, 0);
	struct tally *tally = (struct tally *)hand;
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_FAIL);
	assert_true(tally_run(proofs, hand->images, &tally));
	assert_null(tally);
	end(hand, proofs);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(loop),
		cmocka_unit_test(stretched),
		cmocka_unit_test(spike_of_an_asynchronous_clear),
		cmocka_unit_test(two_counters),
		cmocka_unit_test(spikes_of_both_stages),
		cmocka_unit_test(no_figures_where_the_frame_is_not_kept),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
