#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "by_hand.h"
#include "proof/decoder.h"

// A decoder by itself: a field of so many bits at state bit 0, and its codes.
struct bench {
	struct by_hand *hand;
	const struct decoder *decoder;
};

static struct bench decoder_of(unsigned width, const uint32_t *codes, size_t count)
{
	struct bench bench = {.hand = by_hand_create(width)};
	add_decoded(bench.hand, "gate", add_field(bench.hand, "code", width - 1, 0), codes, count);
	struct decoders *decoders = decoders_create(bench.hand->arena, &bench.hand->plan);
	assert_non_null(decoders);
	assert_int_equal(decoders->count, 1);
	bench.decoder = &decoders->list[0];
	return bench;
}

static void assert_flickers(unsigned width, const uint32_t *codes, size_t count, uint32_t from, uint32_t to, uint32_t expected)
{
	struct bench bench = decoder_of(width, codes, count);
	uint32_t between = 0;
	assert_true(decoder_flickers(bench.decoder, from, to, &between));
	assert_int_equal(between, expected);
	by_hand_destroy(bench.hand);
}

static void assert_quiet(unsigned width, const uint32_t *codes, size_t count, uint32_t from, uint32_t to)
{
	struct bench bench = decoder_of(width, codes, count);
	uint32_t between = 77;
	assert_false(decoder_flickers(bench.decoder, from, to, &between));
	assert_int_equal(between, 77);
	by_hand_destroy(bench.hand);
}

// Asserted at 3 alone.
static void one_code(void **test)
{
	(void)test;
	static const uint32_t codes[] = {3};
	assert_flickers(3, codes, 1, 1, 6, 3); // 001 → 110 may pass 011
	assert_quiet(3, codes, 1, 1, 5);       // one bit
	assert_quiet(3, codes, 1, 0, 6);       // bit 0 stays low
	assert_quiet(3, codes, 1, 0, 3);       // in between are 1 and 2: still not asserted
	assert_quiet(3, codes, 1, 3, 0);
	assert_flickers(3, codes, 1, 0, 7, 3); // asserted for a moment
	assert_quiet(3, codes, 1, 3, 3);
}

// Asserted at 1 and 2: from one to the other it may fall at 0 or 3.
static void both_ends_asserted(void **test)
{
	(void)test;
	struct bench bench = decoder_of(2, (const uint32_t[]){1, 2}, 2);
	uint32_t between = 77;
	assert_true(decoder_flickers(bench.decoder, 1, 2, &between));
	assert_true(between == 0 || between == 3);
	by_hand_destroy(bench.hand);
	assert_quiet(2, (const uint32_t[]){0, 1, 2, 3}, 4, 1, 2);
	// All of the lower four of eight: what lies in between has bit 2 low too.
	assert_quiet(3, (const uint32_t[]){0, 1, 2, 3}, 4, 0, 3);
}

// Different ends: it may reach the new level at one code and fall back at the next.
static void level_changes(void **test)
{
	(void)test;
	// 000 → 111, asserted at 001 and 111: 001 asserts, then 011 or 101 falls back.
	struct bench bench = decoder_of(3, (const uint32_t[]){1, 7}, 2);
	uint32_t between = 77;
	assert_true(decoder_flickers(bench.decoder, 0, 7, &between));
	assert_true(between == 3 || between == 5);
	by_hand_destroy(bench.hand);
	// Asserted at 001, 011, 101 and 111: once reached, kept.
	assert_quiet(3, (const uint32_t[]){1, 3, 5, 7}, 4, 0, 7);
	// The other way: released at 110, and asserted again at 100, is a flicker of a release.
	assert_flickers(3, (const uint32_t[]){4, 7}, 2, 7, 0, 4);
	assert_quiet(3, (const uint32_t[]){4, 5, 6, 7}, 4, 7, 0);
	// In between only one step: early or late, but once.
	assert_quiet(2, (const uint32_t[]){1, 3}, 2, 0, 3);
	assert_quiet(2, (const uint32_t[]){3}, 1, 0, 3);
	assert_quiet(2, (const uint32_t[]){0}, 1, 0, 3);
}

static bool asserts(uint64_t set, uint32_t code)
{
	return set >> code & 1;
}

// By the words of the definition, over all codes in between.
static bool flickers_by_enumeration(uint64_t set, uint32_t from, uint32_t to)
{
	uint32_t changing = from ^ to;
	bool old_level = asserts(set, from), new_level = asserts(set, to);
	for (uint32_t early = 1; early < changing; early++) {
		if ((early & ~changing) != 0 || early == changing)
			continue;
		bool level = asserts(set, from ^ early);
		if (old_level == new_level && level != old_level)
			return true;
		if (old_level == new_level || level != new_level)
			continue;
		for (uint32_t late = 1; late < changing; late++)
			if ((late & ~changing) == 0 && (early & ~late) == 0 && asserts(set, from ^ late) == old_level)
				return true;
	}
	return false;
}

// What is given as between is in between and wrong: unlike the equal ends, or like the old one after the new level was
// there.
static bool between_is_wrong(uint64_t set, uint32_t from, uint32_t to, uint32_t between)
{
	uint32_t changing = from ^ to, flipped = from ^ between;
	if ((flipped & ~changing) != 0 || flipped == 0 || flipped == changing || asserts(set, between) == asserts(set, to))
		return false;
	if (asserts(set, from) == asserts(set, to))
		return true;
	for (uint32_t early = 1; early < flipped; early++)
		if ((early & ~flipped) == 0 && asserts(set, from ^ early) == asserts(set, to))
			return true;
	return false;
}

static void compare_all_pairs(unsigned width, uint64_t set)
{
	uint32_t codes[64];
	size_t count = 0;
	for (uint32_t code = 0; code < 1u << width; code++)
		if (asserts(set, code))
			codes[count++] = code;
	struct bench bench = decoder_of(width, codes, count);
	for (uint32_t from = 0; from < 1u << width; from++) {
		for (uint32_t to = 0; to < 1u << width; to++) {
			uint32_t between = 0;
			bool found = decoder_flickers(bench.decoder, from, to, &between);
			assert_int_equal(found, flickers_by_enumeration(set, from, to));
			assert_true(!found || between_is_wrong(set, from, to, between));
		}
	}
	by_hand_destroy(bench.hand);
}

static uint64_t random_set(uint64_t *seed, uint32_t codes, uint32_t one_in)
{
	uint64_t set = 0;
	for (uint32_t code = 0; code < codes; code++)
		set |= (uint64_t)(random_below(seed, one_in) == 0) << code;
	return set;
}

// All sets of codes of up to 3 bits, random ones of up to 6: sparse, dense, and without some bit's say.
static void against_enumeration(void **test)
{
	(void)test;
	uint64_t seed = 3;
	for (unsigned width = 1; width <= 3; width++)
		for (uint64_t set = 0; set < (uint64_t)1 << (1u << width); set++)
			compare_all_pairs(width, set);
	for (unsigned round = 0; round < 60; round++) {
		unsigned width = 4 + round % 3;
		uint64_t set = random_set(&seed, 1u << width, 1 + round % 10);
		compare_all_pairs(width, round % 2 == 0 ? set : ~set & (width == 6 ? UINT64_MAX : ((uint64_t)1 << (1u << width)) - 1));
		uint64_t half = random_set(&seed, 1u << (width - 1), 3);
		compare_all_pairs(width, half | half << (1u << (width - 1)));
	}
}

// A loop of four cells with a gate on the upper two of three state bits, asserted in cells 1 and 2.
static struct by_hand *gated(const uint32_t *codes, size_t count, const uint32_t *states, size_t repeat)
{
	struct by_hand *hand = by_hand_create(3);
	uint64_t gate = add_decoded(hand, "gate", add_field(hand, "top", 2, 1), codes, count);
	size_t line = add_line(hand, "line", 4, (uint64_t[]){0, gate, gate, 0});
	size_t lines[3] = {line, line, line};
	set_frame(hand, (uint32_t)repeat, lines);
	add_straight_chips(hand);
	for (uint32_t cell = 0; cell < 4; cell++)
		burn(hand, states[cell], states[(cell + 1) % 4], 0);
	return hand;
}

// Codes 0, 1, 3, 2 and around: one bit at each edge.
static void quiet_loop(void **test)
{
	(void)test;
	struct by_hand *hand = gated((const uint32_t[]){1, 3}, 2, (uint32_t[]){0, 2, 6, 4}, 1);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_GLITCHES, VERDICT_PASS);
	assert_true(proofs->glitches.has_field_signals);
	assert_false(proofs->glitches.stages[STAGE_LINE].direct);
	assert_int_equal(proofs->glitches.edges, 4);
	assert_int_equal(proofs->glitches.multi_bit_edges, 0);
	assert_int_equal(proofs->glitches.disturbed, 0);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Codes 0, 1, 2, 3, asserted 1 and 2. Into cell 2, 01 → 10, it may fall; into cell 0, 11 → 00, it may rise: 3 lines, 6
// edges.
static void disturbed_loop(void **test)
{
	(void)test;
	struct by_hand *hand = gated(NULL, 0, (uint32_t[]){0, 2, 4, 6}, 3);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_GLITCHES, VERDICT_FAIL);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	const struct glitch_result *result = &proofs->glitches;
	assert_int_equal(result->edges, 12);
	assert_int_equal(result->multi_bit_edges, 6);
	assert_int_equal(result->disturbed, 1);
	assert_int_equal(result->first[0].signal, 0);
	assert_int_equal(result->first[0].cell, 0);
	assert_int_equal(result->first[0].from_state, 6);
	assert_int_equal(result->first[0].to_state, 0);
	assert_int_equal(result->first[0].from_code, 3);
	assert_int_equal(result->first[0].to_code, 0);
	assert_true(result->first[0].between_code == 1 || result->first[0].between_code == 2);
	assert_int_equal(result->first[0].count, 6);
	assert_int_equal(proofs->proof[PROOF_GLITCHES].counterexample.cell, 0);
	assert_int_equal(proofs->proof[PROOF_GLITCHES].counterexample.signal, 0);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// A counter of 5 cells, states 0 to 4; the gate is asserted at codes 0 and 2 of the upper two bits: cells 0, 1 and 4.
// Its passing state 5 has code 2 as well, the way down from 10 to 00 is one bit. With 6 cells, the passing state is 6,
// code 3: it is reached through one bit (5 → 6: 10 → 11) and left through two, with both ends asserted.
static struct by_hand *passing_counter(uint32_t cells, const uint32_t *codes, size_t count)
{
	struct by_hand *hand = by_hand_create(3);
	hand->plan.machine.line.advance = ADVANCE_COUNT;
	hand->plan.machine.line.clear = CLEAR_ASYNC;
	uint64_t gate = add_decoded(hand, "gate", add_field(hand, "top", 2, 1), codes, count);
	uint64_t asserted[8] = {0};
	for (uint32_t cell = 0; cell < cells; cell++)
		for (size_t code = 0; code < count; code++)
			asserted[cell] |= codes[code] == cell >> 1 ? gate : 0;
	size_t line = add_line(hand, "line", cells, asserted);
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 8; state++)
		burn_count(hand, state, state >= cells, 0);
	return hand;
}

static void passing_state(void **test)
{
	(void)test;
	static const uint32_t codes[] = {0, 2};
	struct by_hand *hand = passing_counter(5, codes, 2);
	struct proofs *proofs = prove(hand, 0);
	// 01 → 10 into cell 4 may pass 00 and 11: rising, it may rise early at 00 and fall back at no code after that.
	assert_verdict(proofs, PROOF_GLITCHES, VERDICT_PASS);
	assert_int_equal(proofs->glitches.edges, 5);
	assert_int_equal(proofs->glitches.multi_bit_edges, 1);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
	hand = passing_counter(6, codes, 2);
	proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	assert_verdict(proofs, PROOF_GLITCHES, VERDICT_FAIL);
	assert_int_equal(proofs->glitches.multi_bit_edges, 2); // 3 → 4, and 5 → 6 → 0
	assert_int_equal(proofs->glitches.first[0].cell, 0);
	assert_int_equal(proofs->glitches.first[0].from_state, 5);
	assert_int_equal(proofs->glitches.first[0].to_state, 0);
	assert_int_equal(proofs->glitches.first[0].between_code, 3); // the passing state itself
	assert_int_equal(proofs->glitches.first[0].count, 1);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Asserted at 3 alone: a counter of 6 cells never has it, but passes it.
static void passing_code_of_its_own(void **test)
{
	(void)test;
	struct by_hand *hand = passing_counter(6, (const uint32_t[]){3}, 1);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_GLITCHES, VERDICT_FAIL);
	assert_int_equal(proofs->glitches.first[0].from_code, 2);
	assert_int_equal(proofs->glitches.first[0].to_code, 0);
	assert_int_equal(proofs->glitches.first[0].between_code, 3);
	assert_int_equal(proofs->glitches.first[0].count, 2); // and 01 → 10 into cell 4
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// 4 cells: the passing state is 4, code 2, reached from code 1 by way of 3 or 0, and left through one bit.
static void on_the_way_to_the_passing_state(void **test)
{
	(void)test;
	struct by_hand *hand = passing_counter(4, (const uint32_t[]){3}, 1);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_GLITCHES, VERDICT_FAIL);
	assert_int_equal(proofs->glitches.multi_bit_edges, 1);
	assert_int_equal(proofs->glitches.first[0].cell, 0);
	assert_int_equal(proofs->glitches.first[0].from_code, 1);
	assert_int_equal(proofs->glitches.first[0].to_code, 0);
	assert_int_equal(proofs->glitches.first[0].between_code, 3);
	assert_int_equal(proofs->glitches.first[0].count, 1);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Edges that look alike in their lower bits are judged each for itself. Asserted at 0x1001 alone; codes 3, 0, 0x1003, 0
// and around: 3 → 0 passes 1 and 2; 0 → 0x1003 and 0x1003 → 0 may pass 0x1001; 0 → 3 passes 1 and 2.
static void edges_alike(void **test)
{
	(void)test;
	static const uint32_t codes[] = {0x1001}, states[] = {3, 0, 0x1003, 0x2000};
	struct by_hand *hand = by_hand_create(14);
	add_decoded(hand, "gate", add_field(hand, "lower", 12, 0), codes, 1);
	size_t line = add_line(hand, "line", 4, (uint64_t[]){0, 0, 0, 0});
	set_frame(hand, 1, &line);
	add_straight_chips(hand);
	for (uint32_t cell = 0; cell < 4; cell++)
		burn(hand, states[cell], states[(cell + 1) % 4], 0);
	struct proofs *proofs = prove(hand, 3);
	assert_int_equal(proofs->glitches.multi_bit_edges, 4);
	assert_int_equal(proofs->glitches.disturbed, 1);
	assert_int_equal(proofs->glitches.first[0].cell, 2);
	assert_int_equal(proofs->glitches.first[0].between_code, 0x1001);
	assert_int_equal(proofs->glitches.first[0].count, 2);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// The decoder answers 38 ns after the latch, 15 ns, or the counter, 51 ns.
static void decoded_pins_settle(void **test)
{
	(void)test;
	struct by_hand *hand = gated((const uint32_t[]){1, 3}, 2, (uint32_t[]){0, 2, 6, 4}, 1);
	hand->plan.timing.latch_delay_s = ratio(15, 1000000000);
	hand->plan.timing.counter_delay_s[STAGE_LINE] = ratio(51, 1000000000);
	hand->plan.timing.decoder_delay_s = ratio(38, 1000000000);
	struct proofs *proofs = prove(hand, 0);
	assert_ratio(proofs->glitches.settle_s, 53, 1000000000);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
	hand = passing_counter(5, (const uint32_t[]){0, 2}, 2);
	hand->plan.timing.latch_delay_s = ratio(15, 1000000000);
	hand->plan.timing.counter_delay_s[STAGE_LINE] = ratio(51, 1000000000);
	hand->plan.timing.decoder_delay_s = ratio(38, 1000000000);
	proofs = prove(hand, 0);
	assert_ratio(proofs->glitches.settle_s, 89, 1000000000);
	assert_ratio(proofs->glitches.stages[STAGE_LINE].clear_unsettled_s, 51, 1000000000);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

static void nothing_to_disturb(void **test)
{
	(void)test;
	struct by_hand *hand = small_burned();
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_GLITCHES, VERDICT_ABSENT);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Direct: 13 ns of the latch and 150 ns of the slower chip after each edge. No failure by itself.
static void direct_outputs_settle(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	hand->plan.machine.line.outputs = OUTPUTS_DIRECT;
	hand->plan.timing.latch_delay_s = ratio(13, 1000000000);
	struct chip *first = add_chip(hand, "U7"), *second = add_chip(hand, "U8");
	first->access_s = ratio(120, 1000000000);
	second->access_s = ratio(150, 1000000000);
	for (unsigned bit = 0; bit < 3; bit++)
		first->data[bit] = (struct data_wire){DATA_NEXT, bit};
	second->data[0] = (struct data_wire){DATA_SIGNAL, 0};
	second->data[1] = (struct data_wire){DATA_SIGNAL, 1};
	burn_small(hand, small_states);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_GLITCHES, VERDICT_PASS);
	assert_true(proofs->glitches.stages[STAGE_LINE].direct);
	assert_ratio(proofs->glitches.stages[STAGE_LINE].unsettled_s, 163, 1000000000);
	assert_string_equal(proofs->glitches.stages[STAGE_LINE].unsettled_part, "U8");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// An async clear is taken from U8: 51 ns of the counter and 150 ns of the chip. U7 is slower, but carries no clear.
static void async_clear_settles(void **test)
{
	(void)test;
	struct by_hand *hand = small_board();
	hand->plan.machine.line.advance = ADVANCE_COUNT;
	hand->plan.machine.line.clear = CLEAR_ASYNC;
	hand->plan.timing.counter_delay_s[STAGE_LINE] = ratio(51, 1000000000);
	struct chip *first = add_chip(hand, "U7"), *second = add_chip(hand, "U8");
	first->access_s = ratio(250, 1000000000);
	second->access_s = ratio(150, 1000000000);
	first->data[0] = (struct data_wire){DATA_SIGNAL, 0};
	first->data[1] = (struct data_wire){DATA_SIGNAL, 1};
	second->data[0] = (struct data_wire){DATA_CLEAR, 0};
	for (uint32_t state = 0; state < 8; state++)
		burn_count(hand, state, state > 4, small_pins[(state + 1) % 5]);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_SIGNALS, VERDICT_PASS);
	assert_verdict(proofs, PROOF_GLITCHES, VERDICT_PASS);
	assert_false(proofs->glitches.stages[STAGE_LINE].direct);
	assert_true(proofs->glitches.stages[STAGE_LINE].async_clear);
	assert_ratio(proofs->glitches.stages[STAGE_LINE].clear_unsettled_s, 201, 1000000000);
	assert_string_equal(proofs->glitches.stages[STAGE_LINE].clear_part, "U8");
	assert_int_equal(proofs->power_up.cleared_states, 3);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(one_code),
		cmocka_unit_test(both_ends_asserted),
		cmocka_unit_test(level_changes),
		cmocka_unit_test(against_enumeration),
		cmocka_unit_test(quiet_loop),
		cmocka_unit_test(disturbed_loop),
		cmocka_unit_test(passing_state),
		cmocka_unit_test(passing_code_of_its_own),
		cmocka_unit_test(on_the_way_to_the_passing_state),
		cmocka_unit_test(edges_alike),
		cmocka_unit_test(decoded_pins_settle),
		cmocka_unit_test(nothing_to_disturb),
		cmocka_unit_test(direct_outputs_settle),
		cmocka_unit_test(async_clear_settles),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
