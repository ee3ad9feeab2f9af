#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "by_hand.h"

// A frame of one line without signals: `cells` states in the order given, then the other states' next ones.
static struct by_hand *bare_loop(unsigned state_bits, const uint32_t *next, uint32_t cells)
{
	struct by_hand *hand = by_hand_create(state_bits);
	uint64_t mark = add_signal(hand, "mark", true);
	uint64_t *asserted = arena_array(hand->arena, cells, sizeof *asserted);
	assert_non_null(asserted);
	asserted[0] = mark;
	size_t line = add_line(hand, "line", cells, asserted);
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 1u << state_bits; state++)
		burn(hand, state, next[state], next[state] == 0 ? mark : 0);
	return hand;
}

// 0 → 1 → 2 → 3 → 0, all states used: every flip lands in the frame, bit 0 one cell off, bit 1 two.
static void every_state_used(void **test)
{
	(void)test;
	struct by_hand *hand = bare_loop(2, (uint32_t[]){1, 2, 3, 0}, 4);
	struct proofs *proofs = prove(hand, 0);
	const struct upset_result *result = &proofs->upset;
	assert_verdict(proofs, PROOF_UPSET, VERDICT_PASS);
	assert_int_equal(result->upsets, 8);
	assert_int_equal(result->worst_cells, 0);
	assert_ratio(result->mean_cells, 0, 1);
	assert_int_equal(result->worst_slip_cells, 2);
	assert_int_equal(result->worst_slip_cell, 0);
	assert_int_equal(result->worst_slip_bit, 1);
	assert_ratio(result->mean_slip_cells, 3, 2);
	assert_ratio(result->worst_slip_lines, 1, 2); // a line has 4 cells
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// 0 → 1 → 2 → 0, and 3 → 0. Bit 0 and bit 1 of each state in turn:
//     0: to 1, one ahead; to 2, one behind        1: to 0, one behind; to 3, a cell later at 0 for 2: one ahead
//     2: to 3, a cell later at 0 as it should be; to 0, one ahead
static void one_spare_state(void **test)
{
	(void)test;
	struct by_hand *hand = bare_loop(2, (uint32_t[]){1, 2, 0, 0}, 3);
	struct proofs *proofs = prove(hand, 0);
	const struct upset_result *result = &proofs->upset;
	assert_verdict(proofs, PROOF_UPSET, VERDICT_PASS);
	assert_int_equal(result->upsets, 6);
	assert_int_equal(result->worst_cells, 1);
	assert_int_equal(result->worst_cell, 1);
	assert_int_equal(result->worst_bit, 1);
	assert_ratio(result->mean_cells, 1, 3); // 2 of 6
	assert_int_equal(result->worst_slip_cells, 1);
	assert_int_equal(result->worst_slip_cell, 0);
	assert_int_equal(result->worst_slip_bit, 0);
	assert_ratio(result->mean_slip_cells, 5, 6);
	assert_ratio(result->worst_slip_lines, 1, 3);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// 3 → 3: the flip of bit 1 in cell 1 loses the frame, and so does that of bit 0 in cell 2. Figures are of the others.
static void frame_lost(void **test)
{
	(void)test;
	struct by_hand *hand = bare_loop(2, (uint32_t[]){1, 2, 0, 3}, 3);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_UPSET, VERDICT_FAIL);
	const struct counterexample *found = &proofs->proof[PROOF_UPSET].counterexample;
	assert_true(found->present);
	assert_int_equal(found->cell, 1);
	assert_int_equal(found->state, 3);
	assert_string_equal(found->what, "with bit 1 flipped, state 0x1 becomes 0x3, from which the frame is never regained: state 0x3 "
	                    "is on a second loop, its next state is 0x3 (rom0 0x0003: 0xFB), expected one that leads to the frame, "
	                    "such as its first, 0x0");
	assert_true(found->byte_known); // next 3, no mark, five open pins
	assert_int_equal(found->byte.chip, 0);
	assert_int_equal(found->byte.address, 3);
	assert_int_equal(found->byte.value, 0xFB);
	assert_int_equal(proofs->upset.upsets, 6);
	assert_ratio(proofs->upset.mean_slip_cells, 1, 1);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// 5 → 6 → 7 → 6: the flip of bit 2 in cell 1 leads to 5, whose row is not at fault: 6 or 7 is on the loop.
static void frame_lost_by_way_of_another_state(void **test)
{
	(void)test;
	struct by_hand *hand = bare_loop(3, (uint32_t[]){1, 2, 0, 0, 0, 6, 7, 6}, 3);
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = &proofs->proof[PROOF_UPSET].counterexample;
	assert_verdict(proofs, PROOF_UPSET, VERDICT_FAIL);
	assert_int_equal(found->cell, 1);
	assert_true(found->state == 6 || found->state == 7);
	assert_int_equal(found->byte.address, found->state);
	assert_int_equal(found->byte.value, found->state == 6 ? 0xF7 : 0xF6);
	assert_non_null(strstr(found->what, "with bit 2 flipped, state 0x1 becomes 0x5, from which"));
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// The frame may take its states several times: positions are modulo the shortest loop.
static void repeating_frame(void **test)
{
	(void)test;
	struct by_hand *hand = by_hand_create(1);
	uint64_t mark = add_signal(hand, "mark", true);
	size_t line = add_line(hand, "line", 2, (uint64_t[]){mark, 0});
	set_frame(hand, 3, (size_t[]){line, line, line});
	add_straight_chips(hand);
	burn(hand, 0, 1, 0);
	burn(hand, 1, 0, mark);
	struct proofs *proofs = prove(hand, 0);
	assert_int_equal(proofs->upset.upsets, 2);
	assert_int_equal(proofs->upset.worst_slip_cells, 1);
	assert_ratio(proofs->upset.worst_slip_lines, 1, 2);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// An async counter of 5 cells; 5, 6 and 7 fall to 0. A flip to one of them is a fall to cell 0: bit 0 of 4, bit 2 of 1,
// 2 and 3. Slips of bit 0, 1, 2: 0: 1 2 1 (4 is one behind); 1: 1 2 1 (to 5); 2: 1 2 2 (to 6); 3: 1 2 2 (to 7); 4: 1
// (to 5) 1 (to 6) 1.
static void passing_states(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	hand->plan.machine.line.advance = ADVANCE_COUNT;
	hand->plan.machine.line.clear = CLEAR_ASYNC;
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 8; state++)
		burn_count(hand, state, state > 4, small_pins[(state + 1) % 5]);
	struct proofs *proofs = prove(hand, 0);
	const struct upset_result *result = &proofs->upset;
	assert_verdict(proofs, PROOF_UPSET, VERDICT_PASS);
	assert_int_equal(result->upsets, 15);
	assert_int_equal(result->worst_cells, 0);
	assert_int_equal(result->worst_slip_cells, 2);
	assert_int_equal(result->worst_slip_cell, 0);
	assert_int_equal(result->worst_slip_bit, 1);
	assert_ratio(result->mean_slip_cells, 7, 5); // 21 of 15
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

struct figures {
	uint32_t worst, worst_cell, worst_slip, worst_slip_cell;
	unsigned worst_bit, worst_slip_bit;
	int64_t cells, slips;
};

static void add_upset(struct figures *figures, uint32_t cell, unsigned bit, uint32_t cells, uint32_t slip)
{
	figures->cells += cells;
	figures->slips += slip;
	if (cells > figures->worst) {
		figures->worst = cells;
		figures->worst_cell = cell;
		figures->worst_bit = bit;
	}
	if (slip > figures->worst_slip) {
		figures->worst_slip = slip;
		figures->worst_slip_cell = cell;
		figures->worst_slip_bit = bit;
	}
}

// Two machines side by side, one flipped, one not, until the flipped one is in the frame.
static struct figures side_by_side(const uint32_t *next, const uint32_t *order, uint32_t cells, unsigned state_bits)
{
	struct figures figures = {0};
	static uint32_t place[1 << 10];
	for (uint32_t state = 0; state < 1u << state_bits; state++)
		place[state] = cells;
	for (uint32_t cell = 0; cell < cells; cell++)
		place[order[cell]] = cell;
	for (uint32_t cell = 0; cell < cells; cell++) {
		for (unsigned bit = 0; bit < state_bits; bit++) {
			uint32_t flipped = order[cell] ^ 1u << bit, whole = order[cell], taken = 0;
			for (; place[flipped] == cells; taken++) {
				flipped = next[flipped];
				whole = next[whole];
			}
			uint32_t apart = place[flipped] > place[whole] ? place[flipped] - place[whole]
			                                               : place[whole] - place[flipped];
			add_upset(&figures, cell, bit, taken, apart < cells - apart ? apart : cells - apart);
		}
	}
	return figures;
}

// Frames that fill little and much of the state space.
static void random_machines(void **test)
{
	(void)test;
	static uint32_t order[1 << 10], next[1 << 10];
	uint64_t seed = 21;
	for (unsigned round = 0; round < 60; round++) {
		unsigned state_bits = 2 + round % 9;
		uint32_t states = 1u << state_bits;
		uint32_t cells = 1 + random_below(&seed, round % 2 == 0 ? states : (states + 19) / 20);
		for (uint32_t index = 0; index < states; index++)
			order[index] = index;
		for (uint32_t index = states; index-- > 1;) {
			uint32_t other = random_below(&seed, index + 1), kept = order[index];
			order[index] = order[other];
			order[other] = kept;
		}
		// Spares lead to a state earlier in the order, so that none is lost.
		for (uint32_t index = 0; index < states; index++)
			next[order[index]] = index < cells ? order[(index + 1) % cells] : order[random_below(&seed, index)];
		struct figures expected = side_by_side(next, order, cells, state_bits);
		struct by_hand *hand = by_hand_create(state_bits);
		uint64_t mark = add_signal(hand, "mark", true), *asserted = arena_array(hand->arena, cells, sizeof *asserted);
		assert_non_null(asserted);
		asserted[0] = mark;
		size_t line = add_line(hand, "line", cells, asserted);
		set_frame(hand, 1, &line);
		add_straight_chips(hand);
		for (uint32_t state = 0; state < states; state++)
			burn(hand, state, next[state], next[state] == order[0] ? mark : 0);
		struct proofs *proofs = prove(hand, order[0]);
		const struct upset_result *result = &proofs->upset;
		assert_verdict(proofs, PROOF_UPSET, VERDICT_PASS);
		assert_int_equal(result->worst_cells, expected.worst);
		assert_int_equal(result->worst_cell, expected.worst_cell);
		assert_int_equal(result->worst_bit, expected.worst_bit);
		assert_int_equal(result->worst_slip_cells, expected.worst_slip);
		assert_int_equal(result->worst_slip_cell, expected.worst_slip_cell);
		assert_int_equal(result->worst_slip_bit, expected.worst_slip_bit);
		struct fraction mean = ratio(expected.cells, cells * state_bits), slip = ratio(expected.slips, cells * state_bits);
		assert_ratio(result->mean_cells, mean.numerator, mean.denominator);
		assert_ratio(result->mean_slip_cells, slip.numerator, slip.denominator);
		proofs_destroy(proofs);
		by_hand_destroy(hand);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(every_state_used),
		cmocka_unit_test(one_spare_state),
		cmocka_unit_test(frame_lost),
		cmocka_unit_test(frame_lost_by_way_of_another_state),
		cmocka_unit_test(repeating_frame),
		cmocka_unit_test(passing_states),
		cmocka_unit_test(random_machines),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
