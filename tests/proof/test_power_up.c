#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "by_hand.h"
#include "machine/machine.h"
#include "proof/ways.h"

static void all_spares_lead_home(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	struct proofs *proofs = prove(hand, 0);
	const struct power_up_result *result = &proofs->power_up;
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_PASS);
	assert_int_equal(result->states, 8);
	assert_int_equal(result->frame_states, 5);
	assert_int_equal(result->longest_cells, 1);
	assert_int_equal(result->longest_state, 5);
	assert_ratio(result->longest_lines, 2, 5); // 1 cell; 5 cells are 2 lines
	assert_int_equal(result->lost_states, 0);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// 6 → 7 → 5 → 0: three cells from 6.
static void the_longest_way(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 6, 7, 0);
	burn(hand, 7, 5, 0);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_PASS);
	assert_int_equal(proofs->power_up.longest_cells, 3);
	assert_int_equal(proofs->power_up.longest_state, 6);
	assert_ratio(proofs->power_up.longest_lines, 6, 5);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// 4 → 5 → 6 → 0, cells of 10 ticks, 15 where stretched; rows 4 and 6 assert the stretch.
static void assert_way_ticks(enum outputs outputs, int64_t lead_cells, int64_t ticks)
{
	struct by_hand *hand = by_hand_create(3);
	const uint64_t stretch = add_stretch(hand, 5);
	const size_t line = add_line(hand, "even", 2, (uint64_t[]){0, 0});
	hand->signals[0].lead_cells = lead_cells;
	hand->plan.machine.line.outputs = outputs;
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	const uint32_t next[] = {1, 0, 0, 0, 5, 6, 0, 0};
	for (uint32_t state = 0; state < 8; state++)
		burn(hand, state, next[state], state == 4 || state == 6 ? stretch : 0);
	struct proofs *proofs = prove(hand, 0);
	assert_int_equal(proofs->power_up.longest_cells, 3);
	assert_int_equal(proofs->power_up.longest_state, 4);
	assert_int_equal(proofs->power_up.longest_ticks, ticks);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

static void the_longest_way_in_ticks(void **test)
{
	(void)test;
	assert_way_ticks(OUTPUTS_DIRECT, 0, 15 + 10 + 15);
	assert_way_ticks(OUTPUTS_REGISTERED, 0, 10 + 15 + 10); // what the pin shows in 4 nobody knows; in 5 it is what row 4 has
	assert_way_ticks(OUTPUTS_REGISTERED, 1, 10 + 10 + 15); // the pin of 5 lengthens 6
	assert_way_ticks(OUTPUTS_REGISTERED, -1, 15 + 10 + 15); // the pins of 5, 6 and 0 lengthen 4, 5 and 6
}

// 5 → 6 → 7 → 6: three states are lost, two of them are the loop.
static void a_second_loop(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 5, 6, 0);
	burn(hand, 6, 7, 0);
	burn(hand, 7, 6, 0);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_FAIL);
	assert_int_equal(proofs->power_up.lost_states, 3);
	assert_int_equal(proofs->power_up.second_loop_state, 6);
	assert_int_equal(proofs->power_up.second_loop_cells, 2);
	assert_int_equal(proofs->power_up.longest_cells, 0);
	const struct counterexample *found = &proofs->proof[PROOF_POWER_UP].counterexample;
	assert_true(found->present);
	assert_int_equal(found->state, 6);
	assert_string_equal(found->what, "state 0x6 is on a second loop of 2 cells: its next state is 0x7 (rom0 0x0006: 0xEF), "
	                    "expected one that leads to the frame, such as its first, 0x0");
	// Next 7, sync released, blank not asserted, and three open pins.
	assert_true(found->byte_known);
	assert_int_equal(found->byte.chip, 0);
	assert_int_equal(found->byte.address, 6);
	assert_int_equal(found->byte.value, 0xEF);
	assert_true(proofs_failed(proofs, false));
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// 7 → 7, and 5 → 5: two loops of one state; the first is shown. 6 still leads home.
static void loops_of_one_state(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 5, 5, 0);
	burn(hand, 7, 7, 0);
	struct proofs *proofs = prove(hand, 0);
	assert_int_equal(proofs->power_up.lost_states, 2);
	assert_int_equal(proofs->power_up.second_loop_state, 5);
	assert_int_equal(proofs->power_up.second_loop_cells, 1);
	assert_int_equal(proofs->power_up.longest_cells, 1);
	assert_int_equal(proofs->power_up.longest_state, 6);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// 6 → 6, and home is 0: bits 1 and 2 are wrong, which U8 holds. Bit 0 of U7 is as in any spare row.
static void the_chip_with_the_wrong_bits(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	struct chip *first = add_chip(hand, "U7"), *second = add_chip(hand, "U8");
	first->data[0] = (struct data_wire){DATA_NEXT, 0};
	first->data[1] = (struct data_wire){DATA_SIGNAL, 0};
	second->data[0] = (struct data_wire){DATA_SIGNAL, 1};
	second->data[1] = (struct data_wire){DATA_NEXT, 2};
	second->data[2] = (struct data_wire){DATA_NEXT, 1};
	burn_small(hand, small_states);
	burn(hand, 6, 6, 0);
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = &proofs->proof[PROOF_POWER_UP].counterexample;
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_FAIL);
	assert_string_equal(found->what, "state 0x6 is on a second loop of 1 cell: its next state is 0x6 (U7 0x0006: 0xFE and U8 "
	                    "0x0006: 0xFE), expected one that leads to the frame, such as its first, 0x0");
	assert_true(found->byte_known);
	assert_int_equal(found->byte.chip, 1);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Four banks. In bank 1, 5 → 6 → 7 → 6: three states are lost; in bank 2, 7 → 7: one. Bank 1 is shown, whose rows are at
// addresses 8 to 15.
static void lost_states_of_all_banks(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	hand->plan.bank_bits = 2;
	add_straight_chips(hand);
	for (uint32_t bank = 0; bank < 4; bank++)
		for (uint32_t state = 0; state < 8; state++)
			burn_row(hand, bank, state, state < 4 ? state + 1 : 0, false, small_pins[state < 4 ? state + 1 : 0]);
	burn_row(hand, 1, 5, 6, false, 0);
	burn_row(hand, 1, 6, 7, false, 0);
	burn_row(hand, 1, 7, 6, false, 0);
	burn_row(hand, 2, 7, 7, false, 0);
	struct proofs *proofs = prove(hand, 0);
	const struct power_up_result *result = &proofs->power_up;
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_FAIL);
	assert_int_equal(result->states, 32);
	assert_int_equal(result->lost_states, 4);
	assert_int_equal(result->second_loop_state, 6);
	assert_int_equal(result->second_loop_cells, 2);
	const struct counterexample *found = &proofs->proof[PROOF_POWER_UP].counterexample;
	assert_int_equal(found->bank, 1);
	assert_int_equal(found->state, 6);
	assert_int_equal(found->byte.address, 14);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

static void not_judged_unless_closed(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	burn(hand, 2, 0, 0);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_FAIL);
	assert_verdict(proofs, PROOF_UPSET, VERDICT_FAIL);
	assert_false(proofs->proof[PROOF_POWER_UP].counterexample.present);
	assert_string_equal(proofs->proof[PROOF_POWER_UP].counterexample.what, "not judged: the frame does not close");
	assert_string_equal(proofs->proof[PROOF_UPSET].counterexample.what, "not judged: the frame does not close");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// An async counter of 5 cells: 5 and 7 fall to 0 at once and are at home; 6 counts to 7, which falls to 0: one cell.
static void passing_states_settle_first(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	hand->plan.machine.line.advance = ADVANCE_COUNT;
	hand->plan.machine.line.clear = CLEAR_ASYNC;
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 8; state++)
		burn_count(hand, state, state == 5 || state == 7, small_pins[(state + 1) % 5]);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_PASS);
	assert_int_equal(proofs->power_up.states, 8);
	assert_int_equal(proofs->power_up.frame_states, 5);
	assert_int_equal(proofs->power_up.cleared_states, 2);
	assert_int_equal(proofs->power_up.longest_cells, 1);
	assert_int_equal(proofs->power_up.longest_state, 6);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// A sync counter whose spare rows do not clear: 5, 6 and 7 count on and overflow to 0.
static void counter_overflows(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	hand->plan.machine.line.advance = ADVANCE_COUNT;
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 8; state++)
		burn_count(hand, state, state == 4, small_pins[(state + 1) % 5]);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_PASS);
	assert_int_equal(proofs->power_up.longest_cells, 3);
	assert_int_equal(proofs->power_up.longest_state, 5);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// A machine made of a list of next states.
struct listed {
	struct by_hand *hand;
	struct arena *arena;
	struct wiring wiring;
	uint32_t states;
	const uint32_t *next;
	struct ways *ways;
};

static struct listed list_machine(unsigned state_bits, const uint32_t *next, const uint32_t *frame, uint32_t frame_count)
{
	struct listed listed = {.hand = by_hand_create(state_bits), .arena = arena_create(), .states = 1u << state_bits,
	                        .next = next};
	add_straight_chips(listed.hand);
	for (uint32_t state = 0; state < listed.states; state++)
		burn(listed.hand, state, next[state], 0);
	listed.wiring = wiring_of(&listed.hand->plan);
	struct machine *machine = machine_create(listed.arena, &listed.wiring, listed.hand->images, 0);
	assert_non_null(machine);
	listed.ways = ways_find(listed.arena, machine, &listed.wiring, frame, frame_count);
	assert_non_null(listed.ways);
	return listed;
}

static void release(struct listed *listed)
{
	arena_destroy(listed->arena);
	by_hand_destroy(listed->hand);
}

// Step by step from every state: whether, after how many cells, and where the frame is met.
static void compare_with_steps(const struct listed *listed, const uint32_t *frame, uint32_t frame_count)
{
	uint32_t *place = arena_array(listed->arena, listed->states, sizeof *place), longest = 0, longest_state = frame[0];
	uint64_t lost = 0;
	assert_non_null(place);
	for (uint32_t index = 0; index < frame_count; index++)
		place[frame[index]] = index + 1;
	for (uint32_t start = 0; start < listed->states; start++) {
		uint32_t state = start, cells = 0;
		for (; place[state] == 0 && cells <= listed->states; cells++)
			state = listed->next[state];
		struct way way = ways_of(listed->ways, start);
		assert_int_equal(way.lost, place[state] == 0);
		lost += place[state] == 0;
		if (place[state] == 0)
			continue;
		assert_int_equal(way.cells, cells);
		assert_int_equal(way.entry, place[state] - 1);
		if (cells > longest)
			longest_state = start;
		longest = cells > longest ? cells : longest;
	}
	assert_int_equal(listed->ways->lost_states, lost);
	assert_int_equal(listed->ways->longest_cells, longest);
	assert_int_equal(listed->ways->longest_state, longest_state);
	assert_int_equal(listed->ways->second_loop_cells > 0, lost > 0);
}

// The loop that is shown is a loop, of that length, off the frame.
static void check_second_loop(const struct listed *listed)
{
	if (listed->ways->lost_states == 0)
		return;
	uint32_t state = listed->ways->second_loop_state, cells = 0;
	assert_true(ways_of(listed->ways, state).lost);
	do {
		state = listed->next[state];
		cells++;
		assert_true(cells <= listed->ways->second_loop_cells);
	} while (state != listed->ways->second_loop_state);
	assert_int_equal(cells, listed->ways->second_loop_cells);
}

static void shuffled(uint32_t *order, uint32_t count, uint64_t *seed)
{
	for (uint32_t index = 0; index < count; index++)
		order[index] = index;
	for (uint32_t index = count; index-- > 1;) {
		uint32_t other = random_below(seed, index + 1), kept = order[index];
		order[index] = order[other];
		order[other] = kept;
	}
}

static void random_machines(void **test)
{
	(void)test;
	static uint32_t order[1 << 12], next[1 << 12];
	uint64_t seed = 11;
	for (unsigned round = 0; round < 400; round++) {
		unsigned state_bits = 1 + round % 12;
		uint32_t states = 1u << state_bits, frame = 1 + random_below(&seed, round % 3 == 0 ? states : (states + 7) / 8);
		uint32_t homing = random_below(&seed, 4); // some machines mostly lead home, some hardly
		shuffled(order, states, &seed);
		for (uint32_t index = 0; index < states; index++)
			next[order[index]] = index + 1 < frame ? order[index + 1]
			                     : index + 1 == frame || random_below(&seed, 4) < homing ? order[0]
			                                                                            : random_below(&seed, states);
		struct listed listed = list_machine(state_bits, next, order, frame);
		compare_with_steps(&listed, order, frame);
		check_second_loop(&listed);
		release(&listed);
	}
}

// Chains of many thousand states in random order, straight home or into a second loop, joined by side branches: their
// ways are known by construction.
static void compare_chain(uint32_t frame, uint32_t tail_to, uint64_t seed)
{
	enum { STATE_BITS = 16, STATES = 1 << STATE_BITS };
	static uint32_t order[STATES], next[STATES];
	const uint32_t branches = 1000, chain_end = STATES - branches;
	shuffled(order, STATES, &seed);
	for (uint32_t index = 0; index < chain_end; index++)
		next[order[index]] = order[index + 1 < chain_end ? index + 1 : tail_to];
	next[order[frame - 1]] = order[0];
	for (uint32_t index = chain_end; index < STATES; index++)
		next[order[index]] = order[random_below(&seed, chain_end)];
	struct listed listed = list_machine(STATE_BITS, next, order, frame);
	bool lost = tail_to >= frame;
	for (uint32_t index = 0; index < chain_end; index++) {
		struct way way = ways_of(listed.ways, order[index]);
		assert_int_equal(way.lost, index >= frame && lost);
		if (way.lost)
			continue;
		assert_int_equal(way.cells, index < frame ? 0 : chain_end - index);
		assert_int_equal(way.entry, index < frame ? index : tail_to);
	}
	for (uint32_t index = chain_end; index < STATES; index++) {
		struct way way = ways_of(listed.ways, order[index]), after = ways_of(listed.ways, next[order[index]]);
		assert_int_equal(way.lost, after.lost);
		assert_true(way.lost || (way.cells == after.cells + 1 && way.entry == after.entry));
	}
	if (lost)
		assert_int_equal(listed.ways->second_loop_cells, chain_end - tail_to);
	check_second_loop(&listed);
	release(&listed);
}

static void long_chains(void **test)
{
	(void)test;
	compare_chain(100, 0, 1);
	compare_chain(100, 37, 2);
	compare_chain(1, 0, 3);
	compare_chain(30000, 29999, 4);
	compare_chain(100, 100, 5);
	compare_chain(100, 5000, 6);
	compare_chain(100, 64000, 7);
}

// Every state leads `step` states on, but 0 is the frame. With an odd step all states lead home, from -k × step in k
// cells; an even one leaves loops of odd states. Chains cross each other in step, more often than there is room for.
static void compare_steps(uint32_t step, uint32_t lost)
{
	enum { STATE_BITS = 14, STATES = 1 << STATE_BITS };
	static uint32_t next[STATES];
	const uint32_t frame = 0;
	for (uint32_t state = 1; state < STATES; state++)
		next[state] = (state + step) % STATES;
	struct listed listed = list_machine(STATE_BITS, next, &frame, 1);
	assert_int_equal(listed.ways->lost_states, lost);
	uint32_t state = 0, cells = 0;
	do {
		struct way way = ways_of(listed.ways, state);
		assert_false(way.lost);
		assert_int_equal(way.cells, cells);
		assert_int_equal(way.entry, 0);
		state = (state + STATES - step % STATES) % STATES;
		cells++;
	} while (state != 0);
	assert_int_equal(cells, STATES - lost);
	assert_int_equal(listed.ways->longest_cells, cells - 1);
	assert_int_equal(listed.ways->longest_state, step % STATES);
	for (uint32_t other = 1; lost > 0 && other < STATES; other += 2)
		assert_true(ways_of(listed.ways, other).lost);
	check_second_loop(&listed);
	release(&listed);
}

static void chains_in_step(void **test)
{
	(void)test;
	enum { STATES = 1 << 14 };
	compare_steps(1, 0);
	compare_steps(STATES - 1, 0);
	compare_steps(63, 0);
	compare_steps(STATES - 63, 0);
	compare_steps(65, 0);
	compare_steps(STATES / 2 + 1, 0);
	compare_steps(2, STATES / 2);
	compare_steps(64, STATES / 64 * 63);
	compare_steps(STATES - 64, STATES / 64 * 63);
	compare_steps(1024, STATES / 1024 * 1023);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(all_spares_lead_home),
		cmocka_unit_test(the_longest_way),
		cmocka_unit_test(the_longest_way_in_ticks),
		cmocka_unit_test(a_second_loop),
		cmocka_unit_test(loops_of_one_state),
		cmocka_unit_test(the_chip_with_the_wrong_bits),
		cmocka_unit_test(lost_states_of_all_banks),
		cmocka_unit_test(not_judged_unless_closed),
		cmocka_unit_test(passing_states_settle_first),
		cmocka_unit_test(counter_overflows),
		cmocka_unit_test(random_machines),
		cmocka_unit_test(long_chains),
		cmocka_unit_test(chains_in_step),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
