// Power-up and upset of line-frame machines: by hand, and against a walk that is as plain as it can be.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "line_frame_by_hand.h"
#include "machine/machine.h"
#include "proof/ways.h"

static const struct counterexample *lost(const struct proofs *proofs, uint64_t states)
{
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_FAIL);
	assert_int_equal(proofs->power_up.lost_states, states);
	return &proofs->proof[PROOF_POWER_UP].counterexample;
}

static void assert_row(const struct counterexample *found, enum stage stage, uint32_t row, uint32_t byte)
{
	assert_true(found->present);
	assert_int_equal(found->stage, stage);
	assert_int_equal(found->state, row);
	assert_true(found->byte_known);
	assert_int_equal(found->byte.chip, stage == STAGE_LINE ? PIER_LINE : PIER_FRAME);
	assert_int_equal(found->byte.address, row);
	assert_int_equal(found->byte.value, byte);
}

// Direct tables: H in bits 0 to 2, V in 3 and 4. The frame has H 0 to 2 of V 0 and 1, and H 0 and 1 of V 2. V 3 is of kind 0,
// and leads to V 0 after three cells, so H 3 to 7 of V 3, whose rows lead to H 0, take 4. The mean line has 8/3 cells.
static void longest_way(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_direct, table_direct);
	struct proofs *proofs = prove_pier(hand);
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_PASS);
	assert_int_equal(proofs->power_up.states, 32);
	assert_int_equal(proofs->power_up.frame_states, 8);
	assert_int_equal(proofs->power_up.cleared_states, 0);
	assert_int_equal(proofs->power_up.longest_cells, 4);
	assert_int_equal(proofs->power_up.longest_state, 3 | 3 << 3);
	assert_ratio(proofs->power_up.longest_lines, 3, 2);
	end(hand, proofs);
	// H 3 to 6 lead to the one above, 7 to 0: from H 3 of V 3 five cells to H 0, and three to the end of that line. V 3 may lead
	// to V 2 instead of V 0: its first cell is the frame's as well.
	hand = pier(table_direct, table_direct);
	struct pier_row row = frame_row(hand, 3);
	row.next = 2;
	burn_frame(hand, 3, row);
	for (uint32_t h = 3; h < 7; h++) {
		row = line_row(hand, PICTURE, h);
		row.next = h + 1;
		burn_line(hand, PICTURE, h, row);
	}
	proofs = prove_pier(hand);
	assert_int_equal(proofs->power_up.longest_cells, 5 + 3);
	assert_int_equal(proofs->power_up.longest_state, 3 | 3 << 3);
	assert_ratio(proofs->power_up.longest_lines, 3, 1);
	end(hand, proofs);
}

// Asynchronous counters, direct: H 3 to 7 fall to 0 in each V, and V 3 falls to 0. What is left are the frame's nine states.
static void cleared_states(void **test)
{
	(void)test;
	struct by_hand *hand = pier(async_direct, async_direct);
	struct proofs *proofs = prove_pier(hand);
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_PASS);
	assert_int_equal(proofs->power_up.states, 32);
	assert_int_equal(proofs->power_up.frame_states, 9);
	assert_int_equal(proofs->power_up.cleared_states, 3 * 5 + 8);
	assert_int_equal(proofs->power_up.longest_cells, 0);
	// What falls to a state of the frame is none of it.
	assert_int_equal(proofs->upset.upsets, 9 * 5);
	assert_ratio(proofs->upset.mean_cells, 0, 1);
	end(hand, proofs);
}

// Should the kind come up as one that no line has, rows are read that no line reads. If none of them steps, it stays.
static void trapped_in_a_spare_kind(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_direct, table_latched); // H, kind in bit 3, V in bits 4 and 5
	for (size_t line = 0; line < 3; line++) {
		hand->timeline.lines[line].type = PICTURE;
		hand->timeline.lines[line].first_cell = (uint32_t)(3 * line);
	}
	uint64_t asserted[9];
	for (uint32_t cell = 0; cell < 9; cell++)
		asserted[cell] = pier_pins[PICTURE][cell % 3];
	hand->timeline.asserted = asserted;
	hand->timeline.cell_count = 9;
	for (uint32_t v = 0; v < 4; v++) {
		struct pier_row row = frame_row(hand, v);
		row.kind = PICTURE;
		row.asserted = 0;
		burn_frame(hand, v, row);
	}
	for (uint32_t h = 0; h < 8; h++)
		burn_line(hand, QUIET, h, (struct pier_row){.next = 0, .step = true, .asserted = BLANK});
	struct proofs *proofs = prove_pier(hand);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_PASS);
	proofs_destroy(proofs);
	for (uint32_t h = 0; h < 8; h++)
		burn_line(hand, QUIET, h, (struct pier_row){.next = 0, .step = false, .asserted = BLANK});
	proofs = prove_pier(hand);
	const struct counterexample *found = lost(proofs, 32); // kind 1: each H and V
	assert_string_equal(found->what, "state H 0x0, kind 1, V 0x0 is on a second loop of 1 cell: no row of it asserts step, expected one "
	                                 "that does, so that the line ends");
	assert_row(found, STAGE_LINE, 8, 0xF0);
	assert_int_equal(proofs->power_up.second_loop_state, 8);
	assert_int_equal(proofs->power_up.second_loop_cells, 1);
	found = &proofs->proof[PROOF_UPSET].counterexample;
	assert_verdict(proofs, PROOF_UPSET, VERDICT_FAIL);
	assert_string_equal(found->what, "with one bit flipped, state H 0x0, kind 0, V 0x0 becomes H 0x0, kind 1, V 0x0, from which the frame is "
	                                 "never regained: state H 0x0, kind 1, V 0x0 is on a second loop, no row of it asserts step, expected "
	                                 "one that does, so that the line ends");
	assert_row(found, STAGE_LINE, 8, 0xF0);
	end(hand, proofs);
}

// A spare H that leads to itself.
static void trapped_in_a_spare_h(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_direct, table_direct);
	struct pier_row row = line_row(hand, QUIET, 5);
	row.next = 5;
	burn_line(hand, QUIET, 5, row);
	struct proofs *proofs = prove_pier(hand);
	assert_string_equal(lost(proofs, 1)->what, "state H 0x5, V 0x2 is on a second loop of 1 cell: its next state is H 0x5, V 0x2 (line 0x000D: "
	                                           "0xF5), expected one that leads to the frame, such as its first, H 0x0, V 0x0");
	assert_row(lost(proofs, 1), STAGE_LINE, 13, 0xF5);
	end(hand, proofs);
	// With step, it ends its line in the wrong H: of kind 0 and 1 alike, it keeps all lines to one cell.
	hand = pier(table_direct, table_direct);
	for (uint32_t kind = 0; kind < 2; kind++)
		burn_line(hand, kind, 5, (struct pier_row){.next = 5, .step = true, .asserted = BLANK});
	proofs = prove_pier(hand);
	assert_string_equal(lost(proofs, 4)->what, "state H 0x5, V 0x0 is on a second loop of 3 cells: its next state is H 0x5, V 0x1 (line 0x0005: "
	                                           "0xFD), expected one that leads to the frame, such as its first, H 0x0, V 0x0");
	assert_row(lost(proofs, 4), STAGE_LINE, 5, 0xFD);
	end(hand, proofs);
}

// A spare V that leads to itself: its lines are as good as those of the frame, so it is the frame stage's row that is at fault.
static void trapped_in_a_spare_v(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_latched, table_latched); // H, step, kind in bit 4, V in bits 5 and 6
	struct pier_row row = frame_row(hand, 3);
	row.next = 3;
	burn_frame(hand, 3, row);
	struct proofs *proofs = prove_pier(hand);
	const struct counterexample *found = lost(proofs, 32);
	assert_string_equal(found->what, "state H 0x0, step 0, kind 0, V 0x3 is on a second loop of 3 cells: from V 0x3, which is no line of the "
	                                 "frame, the next V is 0x3 (frame 0x0003: 0xEB), expected one that leads to the frame, such as its "
	                                 "first, 0x0");
	assert_row(found, STAGE_FRAME, 3, 0xEB);
	end(hand, proofs);
	// A counter that is not cleared goes on and overflows: no trap.
	hand = pier(table_latched, sync_latched);
	row = frame_row(hand, 3);
	row.clear = false;
	burn_frame(hand, 3, row);
	proofs = prove_pier(hand);
	assert_verdict(proofs, PROOF_POWER_UP, VERDICT_PASS);
	end(hand, proofs);
}

// Direct tables, 8 states of 5 bits. Flips of H, in cells home and slip: of V 0 and V 1, where 0, 1, 2 are cells and 3 to 7
// lead to 0,
//     H 0:  1: 0, 1    2: 0, 2    4: 1, 1         H 1:  0: 0, 1    3: 1, 2    5: 1, 2       H 2:  3: 1, 3    0: 0, 2    6: 1, 3
// together 5 and 17 for each; of V 2, where 2 to 7 lead to 0,
//     H 0:  1: 0, 1    2: 1, 1    4: 1, 1         H 1:  0: 0, 1    3: 1, 2    5: 1, 2
// together 4 and 8. Flips of V, for each H of the line:
//     V 0:  1: 0, 3    0, 3    0, 3      2: 0, 2    0, 2    1, 3        together 1 and 16
//     V 1:  0: 0, 3    0, 3    0, 3      3: 3, 2    2, 2    1, 2        together 6 and 15
//     V 2:  3: 3, 1    2, 1              0: 0, 2    0, 2                together 5 and 6
// All in all 5 + 5 + 4 + 1 + 6 + 5 = 26 cells and 17 + 17 + 8 + 16 + 15 + 6 = 79 of slip in 40 flips.
static void upsets_by_hand(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_direct, table_direct);
	struct proofs *proofs = prove_pier(hand);
	const struct upset_result *upset = &proofs->upset;
	assert_verdict(proofs, PROOF_UPSET, VERDICT_PASS);
	assert_int_equal(upset->upsets, 40);
	assert_ratio(upset->mean_cells, 13, 20);
	assert_ratio(upset->mean_slip_cells, 79, 40);
	assert_int_equal(upset->worst_cells, 3); // from V 1 to V 3
	assert_int_equal(upset->worst_cell, 3);
	assert_int_equal(upset->worst_bit, 4);
	assert_int_equal(upset->worst_slip_cells, 3); // a line, at once: from V 0 to V 1
	assert_int_equal(upset->worst_slip_cell, 0);
	assert_int_equal(upset->worst_slip_bit, 3);
	assert_ratio(upset->worst_slip_lines, 9, 8);
	end(hand, proofs);
}

// ---- random machines against a plain walk

static struct by_hand *random_pier(struct stage_kind line, struct stage_kind frame, uint64_t *seed)
{
	struct by_hand *hand = pier(line, frame);
	for (size_t chip = 0; chip < 2; chip++)
		for (size_t byte = 0; byte < hand->images[chip].length; byte++)
			hand->images[chip].bytes[byte] = (uint8_t)random_below(seed, 256);
	return hand;
}

// The loop that state 0 falls into, as if it were the frame.
static uint32_t find_loop(const struct machine *machine, uint32_t states, uint32_t *loop)
{
	uint32_t state = machine_settle(machine, 0), count = 0;
	for (uint32_t step = 0; step < states; step++)
		state = machine_next(machine, state);
	const uint32_t first = state;
	do {
		loop[count++] = state;
		state = machine_next(machine, state);
	} while (state != first);
	return count;
}

static uint32_t place_in(const uint32_t *loop, uint32_t count, uint32_t state)
{
	uint32_t place = 0;
	while (place < count && loop[place] != state)
		place++;
	return place;
}

struct tally {
	uint32_t longest, longest_state;
	uint64_t lost;
};

// One state, followed for as many steps as there are states.
static void compare_way(const struct machine *machine, const struct ways *ways, const uint32_t *loop, uint32_t count, uint32_t states,
                        uint32_t from, struct tally *tally)
{
	uint32_t state = machine_settle(machine, from), cells = 0;
	const struct way way = ways_of(ways, from);
	while (cells < states && place_in(loop, count, state) == count) {
		state = machine_next(machine, state);
		cells++;
	}
	assert_int_equal(way.lost, cells == states);
	tally->lost += way.lost;
	if (way.lost)
		return;
	assert_int_equal(way.cells, cells);
	assert_int_equal(way.entry, place_in(loop, count, state));
	if (cells > tally->longest) {
		tally->longest = cells;
		tally->longest_state = from;
	}
}

static void compare_ways(const struct by_hand *hand)
{
	const struct wiring wiring = wiring_of(&hand->plan);
	const uint32_t states = (uint32_t)1 << feedback_of(&wiring).bits;
	const struct machine *machine = machine_create(hand->arena, &wiring, hand->images, 0);
	assert_non_null(machine);
	uint32_t loop[128];
	assert_true(states <= 128);
	const uint32_t count = find_loop(machine, states, loop);
	const struct ways *ways = ways_find(hand->arena, machine, &wiring, loop, count);
	assert_non_null(ways);
	struct tally tally = {.longest_state = loop[0]};
	for (uint32_t from = 0; from < states; from++)
		compare_way(machine, ways, loop, count, states, from, &tally);
	assert_int_equal(ways->lost_states, tally.lost);
	assert_int_equal(ways->longest_cells, tally.longest);
	assert_int_equal(ways->longest_state, tally.longest_state);
	assert_false(ways->too_long);
	if (tally.lost == 0)
		return;
	uint32_t state = ways->second_loop_state, cells = 0;
	assert_int_equal(place_in(loop, count, state), count);
	do {
		state = machine_next(machine, state);
		cells++;
	} while (state != ways->second_loop_state && cells <= states);
	assert_int_equal(cells, ways->second_loop_cells);
}

static void ways_of_random_machines(void **test)
{
	(void)test;
	const struct stage_kind kinds[] = {table_latched, table_direct, sync_latched, sync_direct, async_latched, async_direct};
	uint64_t seed = 1904;
	for (unsigned combination = 0; combination < 36 * 30; combination++) {
		struct by_hand *hand = random_pier(kinds[combination % 6], kinds[combination / 6 % 6], &seed);
		compare_ways(hand);
		by_hand_destroy(hand);
	}
}

// A way of as many cells as there are states but one, in which each leads to the next: H and V run through all of theirs.
static void one_long_way(void **test)
{
	(void)test;
	struct by_hand *hand = pier(table_direct, table_direct);
	for (uint32_t kind = 0; kind < 2; kind++)
		for (uint32_t h = 0; h < 8; h++)
			burn_line(hand, kind, h, (struct pier_row){.next = (h + 1) % 8, .step = h == 7, .asserted = 0});
	for (uint32_t v = 0; v < 4; v++)
		burn_frame(hand, v, (struct pier_row){.next = v < 3 ? v + 1 : 3});
	const struct wiring wiring = wiring_of(&hand->plan);
	const struct machine *machine = machine_create(hand->arena, &wiring, hand->images, 0);
	const uint32_t loop[8] = {24, 25, 26, 27, 28, 29, 30, 31};
	const struct ways *ways = ways_find(hand->arena, machine, &wiring, loop, 8);
	assert_non_null(ways);
	assert_int_equal(ways->longest_cells, 24);
	assert_int_equal(ways->longest_state, 0);
	assert_int_equal(ways_of(ways, 0).entry, 0);
	assert_int_equal(ways_of(ways, 23).cells, 1);
	by_hand_destroy(hand);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(longest_way),
		cmocka_unit_test(cleared_states),
		cmocka_unit_test(trapped_in_a_spare_kind),
		cmocka_unit_test(trapped_in_a_spare_h),
		cmocka_unit_test(trapped_in_a_spare_v),
		cmocka_unit_test(upsets_by_hand),
		cmocka_unit_test(ways_of_random_machines),
		cmocka_unit_test(one_long_way),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
