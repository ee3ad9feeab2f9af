// Subcarrier cycles and phases against published figures. Sources: S170 = SMPTE 170M-2004; B470 = Rec. ITU-R BT.470-6 (1998);
// E3280 = EBU Tech. 3280-E (1995); S244 = SMPTE 244M-2003. Lines of 912 and 1136 ticks: common practice, no standard.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "by_hand.h"

// S170 11.1: 315/88 MHz. B470 table 2, 2.11: 4 433 618.75 Hz.
#define SUBCARRIER_525 ratio(315000000, 88)
#define SUBCARRIER_625 ratio(443361875, 100)

// A frame of lines of one cell each, counted. Lines whose bit in `longer` (repeating) is set are `extra` ticks longer.
static struct by_hand *lines_of(uint32_t lines, int64_t ticks, int64_t extra, const bool *longer, struct fraction subcarrier)
{
	unsigned bits = 1;
	while ((1u << bits) < lines)
		bits++;
	struct by_hand *hand = by_hand_create(bits);
	hand->plan.machine.line.advance = ADVANCE_COUNT;
	hand->plan.clock.cell_ticks = ticks;
	hand->plan.clock.has_subcarrier = true;
	hand->plan.clock.subcarrier_hz = subcarrier;
	assert_true(fraction_multiply(subcarrier, fraction_whole(4), &hand->plan.clock.master_hz));
	uint64_t stretch = add_stretch(hand, extra);
	size_t types[2] = {add_line(hand, "short", 1, (uint64_t[]){0}), add_line(hand, "long", 1, &stretch)};
	size_t *frame = arena_array(hand->arena, lines, sizeof *frame);
	assert_non_null(frame);
	for (uint32_t line = 0; line < lines; line++)
		frame[line] = types[longer != NULL && longer[line]];
	set_frame(hand, lines, frame);
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 1u << bits; state++) {
		uint32_t shown = state + 1 < lines ? state + 1 : 0;
		burn_count(hand, state, state + 1 >= lines, hand->timeline.asserted[shown]);
	}
	return hand;
}

static void demand(struct by_hand *hand, enum phase_kind kind, int64_t count, enum verdict expected)
{
	hand->plan.clock.phase = kind;
	hand->plan.clock.phase_count = count;
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_CLOSURE, VERDICT_PASS);
	assert_verdict(proofs, PROOF_COLOUR, expected);
	proofs_destroy(proofs);
}

static void assert_cycles(struct by_hand *hand, int64_t numerator, int64_t denominator, int64_t lines, int64_t frames)
{
	struct proofs *proofs = prove(hand, 0);
	assert_ratio(proofs->colour.cycles_per_line, numerator, denominator);
	assert_true(proofs->colour.repeats_known);
	assert_int_equal(proofs->colour.repeats_lines, lines);
	assert_int_equal(proofs->colour.repeats_frames, frames);
	proofs_destroy(proofs);
}

static void assert_out_of_step(const struct colour_result *colour, int64_t frame, uint32_t line, int64_t numerator, int64_t denominator)
{
	assert_true(colour->out_of_step.present);
	assert_int_equal(colour->out_of_step.frame, frame);
	assert_int_equal(colour->out_of_step.line, line);
	assert_ratio(colour->out_of_step.by, numerator, denominator);
}

// Phases at the starts of lines from line 0 on, counted in quarters of a cycle.
static void assert_quarters(const struct colour_result *colour, const char *quarters)
{
	for (size_t line = 0; quarters[line] != '\0'; line++) {
		struct fraction phase;
		assert_true(fraction_multiply(line_phase(&colour->phases, (int64_t)line), fraction_whole(4), &phase));
		assert_ratio(phase, quarters[line] - '0', 1);
	}
}

static void prove_quarters(struct by_hand *hand, const char *quarters)
{
	struct proofs *proofs = prove(hand, 0);
	assert_quarters(&proofs->colour, quarters);
	proofs_destroy(proofs);
}

// S170 11.2 and B470 2.11b: 455/2 cycles a line; S244 4.1.1: 910 clocks of 4 × subcarrier a line.
static void lines_of_910_ticks(void **test)
{
	(void)test;
	struct by_hand *hand = lines_of(262, 910, 1, NULL, SUBCARRIER_525);
	assert_cycles(hand, 455, 2, 2, 1);
	prove_quarters(hand, "0202020202");
	demand(hand, PHASE_LINES, 1, VERDICT_FAIL);
	demand(hand, PHASE_LINES, 2, VERDICT_PASS);
	demand(hand, PHASE_LINES, 3, VERDICT_FAIL);
	demand(hand, PHASE_LINES, 1000, VERDICT_PASS);
	demand(hand, PHASE_LINES, 1001, VERDICT_FAIL);
	demand(hand, PHASE_FRAMES, 1, VERDICT_PASS);
	by_hand_destroy(hand);
	// 525 lines a frame, as the standard has them: in step after two frames.
	hand = lines_of(525, 910, 1, NULL, SUBCARRIER_525);
	assert_cycles(hand, 455, 2, 2, 2);
	demand(hand, PHASE_FRAMES, 1, VERDICT_FAIL);
	demand(hand, PHASE_FRAMES, 2, VERDICT_PASS);
	struct proofs *proofs = prove(hand, 0);
	assert_true(proofs->colour.uniform);
	assert_ratio(proofs->colour.cycles_per_frame, 238875, 2); // 525 × 455/2
	assert_ratio(line_phase(&proofs->colour.phases, 524), 0, 1);
	assert_ratio(line_phase(&proofs->colour.phases, 525), 1, 2); // line 0 of the second frame
	assert_ratio(line_phase(&proofs->colour.phases, 1050), 0, 1);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Common practice, no source: 228 cycles a line, 15 699.76 Hz, colour that repeats on every line.
static void lines_of_912_ticks(void **test)
{
	(void)test;
	struct by_hand *hand = lines_of(262, 912, 1, NULL, SUBCARRIER_525);
	assert_cycles(hand, 228, 1, 1, 1);
	prove_quarters(hand, "0000000000");
	demand(hand, PHASE_LINES, 1, VERDICT_PASS);
	demand(hand, PHASE_LINES, 7, VERDICT_PASS);
	by_hand_destroy(hand);
}

// 1135 clocks of 4 × subcarrier: 283.75 cycles, as B470 2.11b has without its 1/625.
static void lines_of_1135_ticks(void **test)
{
	(void)test;
	struct by_hand *hand = lines_of(312, 1135, 1, NULL, SUBCARRIER_625);
	assert_cycles(hand, 1135, 4, 4, 1);
	prove_quarters(hand, "032103210321");
	demand(hand, PHASE_LINES, 2, VERDICT_FAIL);
	demand(hand, PHASE_LINES, 4, VERDICT_PASS);
	by_hand_destroy(hand);
	hand = lines_of(313, 1135, 1, NULL, SUBCARRIER_625);
	assert_cycles(hand, 1135, 4, 4, 4);
	demand(hand, PHASE_FRAMES, 2, VERDICT_FAIL);
	demand(hand, PHASE_FRAMES, 4, VERDICT_PASS);
	by_hand_destroy(hand);
}

static void lines_of_1136_ticks(void **test)
{
	(void)test;
	struct by_hand *hand = lines_of(312, 1136, 1, NULL, SUBCARRIER_625);
	assert_cycles(hand, 284, 1, 1, 1);
	demand(hand, PHASE_LINES, 1, VERDICT_PASS);
	by_hand_destroy(hand);
}

// E3280 1.2: 709 379 samples a frame, lines 313 and 625 two longer than the others' 1135. So a frame has 625 × (1135/4
// + 1/625) cycles (B470 2.11b), 709379/4, and four frames are a whole number.
static void frame_of_625_lines(void **test)
{
	(void)test;
	static bool longer[625];
	longer[312] = longer[624] = true;
	struct by_hand *hand = lines_of(625, 1135, 2, longer, SUBCARRIER_625);
	struct proofs *proofs = prove(hand, 0);
	assert_int_equal(proofs->closure.ticks, 709379);
	assert_false(proofs->colour.uniform);
	assert_ratio(proofs->colour.cycles_per_frame, 709379, 4);
	assert_int_equal(proofs->colour.repeats_frames, 4);
	assert_int_equal(proofs->colour.repeats_lines, 2500); // no shift within the frame maps the long lines onto themselves
	assert_quarters(&proofs->colour, "03210321");
	// Line 312 starts at 312 × 3/4, whole, and takes 1137 ticks, 1/4; the other line of 1137 begins at 624 × 3/4 + 1/2.
	assert_int_equal(proofs->colour.phases.run_count, 4);
	assert_ratio(line_phase(&proofs->colour.phases, 312), 0, 1);
	assert_ratio(line_phase(&proofs->colour.phases, 313), 1, 4);
	assert_ratio(line_phase(&proofs->colour.phases, 624), 1, 2);
	for (int64_t frame = 0; frame < 8; frame++) // 709379/4 cycles each: three quarters on
		assert_true(fraction_compare(line_phase(&proofs->colour.phases, 625 * frame), ratio(frame * 3 % 4, 4)) == 0);
	proofs_destroy(proofs);
	demand(hand, PHASE_FRAMES, 1, VERDICT_FAIL);
	demand(hand, PHASE_FRAMES, 2, VERDICT_FAIL);
	demand(hand, PHASE_FRAMES, 4, VERDICT_PASS);
	demand(hand, PHASE_LINES, 4, VERDICT_FAIL);
	demand(hand, PHASE_LINES, 625, VERDICT_FAIL);
	demand(hand, PHASE_LINES, 2500, VERDICT_PASS);
	by_hand_destroy(hand);
}

// 910, 912, 910, 912: rests 2, 0 modulo 4. Two lines are 1822 ticks, 455 1/2 cycles; four are whole.
static void unequal_lines(void **test)
{
	(void)test;
	struct by_hand *hand = lines_of(4, 910, 2, (bool[]){false, true, false, true}, SUBCARRIER_525);
	assert_cycles(hand, 455, 2, 4, 1);
	demand(hand, PHASE_LINES, 1, VERDICT_FAIL);
	demand(hand, PHASE_LINES, 2, VERDICT_FAIL);
	demand(hand, PHASE_LINES, 4, VERDICT_PASS);
	demand(hand, PHASE_LINES, 8, VERDICT_PASS);
	demand(hand, PHASE_LINES, 6, VERDICT_FAIL);
	by_hand_destroy(hand);
	// 912, 912, 910, 910: the window of two lines from line 0 is whole, the one from line 1 is not.
	hand = lines_of(4, 910, 2, (bool[]){true, true, false, false}, SUBCARRIER_525);
	hand->plan.clock.phase = PHASE_LINES;
	hand->plan.clock.phase_count = 2;
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_COLOUR, VERDICT_FAIL);
	const struct counterexample *found = &proofs->proof[PROOF_COLOUR].counterexample;
	assert_true(found->present);
	assert_int_equal(found->cell, 1);
	assert_string_equal(found->what, "2 lines from line 1 on take 1822 ticks, 911/2 cycles, expected a whole number, so line 3 starts "
	                    "1/2 of a cycle out of step; 2 of 4 such runs are not whole");
	assert_out_of_step(&proofs->colour, 0, 3, 1, 2);
	// Two unequal lengths have no nearest length; four lines are whole.
	assert_string_equal(found->hint, "the lines meet \"every 4 lines\"");
	assert_int_equal(proofs->colour.repeats_lines, 4);
	proofs_destroy(proofs);
	hand->plan.clock.phase = PHASE_FRAMES;
	hand->plan.clock.phase_count = 1;
	demand(hand, PHASE_FRAMES, 1, VERDICT_PASS);
	by_hand_destroy(hand);
}

// Windows of lines that pass the frame's end, once and twice.
static void windows_around_the_frame(void **test)
{
	(void)test;
	struct by_hand *hand = lines_of(3, 910, 2, (bool[]){false, true, false}, SUBCARRIER_525);
	hand->plan.clock.phase = PHASE_LINES;
	// 910, 912, 910: 2, 0, 2 quarters, whole together, as any three lines are. Phases 0 2 2 and again.
	demand(hand, PHASE_LINES, 3, VERDICT_PASS);
	prove_quarters(hand, "022022");
	// Two lines: 2 from line 0, 2 from line 1, 0 from line 2 (and line 0 of the next frame).
	hand->plan.clock.phase_count = 2;
	struct proofs *proofs = prove(hand, 0);
	assert_string_equal(proofs->proof[PROOF_COLOUR].counterexample.what, "2 lines from line 0 on take 1822 ticks, 911/2 cycles, "
	                    "expected a whole number, so line 2 starts 1/2 of a cycle out of step; 2 of 3 such runs are not whole");
	proofs_destroy(proofs);
	// Four lines: a frame, and one more: 2, 0, 2. The first that is broken ends in line 1 of the next frame.
	hand->plan.clock.phase_count = 4;
	proofs = prove(hand, 0);
	assert_string_equal(proofs->proof[PROOF_COLOUR].counterexample.what, "4 lines from line 0 on take 3642 ticks, 1821/2 cycles, "
	                    "expected a whole number, so line 1 of the next frame starts 1/2 of a cycle out of step; 2 of 3 such runs are "
	                    "not whole");
	assert_out_of_step(&proofs->colour, 1, 1, 1, 2);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
	// 912, 910, 910: 0, 2, 2. Of windows of one line and two frames the second is the first to be broken: it ends in frame 2.
	hand = lines_of(3, 910, 2, (bool[]){true, false, false}, SUBCARRIER_525);
	hand->plan.clock.phase = PHASE_LINES;
	hand->plan.clock.phase_count = 7;
	proofs = prove(hand, 0);
	assert_string_equal(proofs->proof[PROOF_COLOUR].counterexample.what, "7 lines from line 1 on take 6374 ticks, 3187/2 cycles, "
	                    "expected a whole number, so line 2 of frame 2 starts 1/2 of a cycle out of step; 2 of 3 such runs are not "
	                    "whole");
	assert_out_of_step(&proofs->colour, 2, 2, 1, 2);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// Three frames are asked of lines of 911 ticks, 3/4: a frame of three is 9/4, three are 27/4. Four would do, and so would eight.
static void frames_that_are_asked(void **test)
{
	(void)test;
	struct by_hand *hand = lines_of(3, 911, 2, NULL, SUBCARRIER_525);
	demand(hand, PHASE_FRAMES, 4, VERDICT_PASS);
	demand(hand, PHASE_FRAMES, 8, VERDICT_PASS);
	demand(hand, PHASE_FRAMES, 2, VERDICT_FAIL);
	hand->plan.clock.phase_count = 3;
	struct proofs *proofs = prove(hand, 0);
	assert_string_equal(proofs->proof[PROOF_COLOUR].counterexample.what, "3 frames take 8199 ticks, 8199/4 cycles, expected a whole "
	                    "number, so line 0 of frame 3 starts 3/4 of a cycle out of step");
	assert_out_of_step(&proofs->colour, 3, 0, 3, 4);
	assert_quarters(&proofs->colour, "032103210321");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// 912, 910, 912: line 1 alone is not whole. The phase repeats after six lines, more than the frame has.
static void words_for_one_line(void **test)
{
	(void)test;
	struct by_hand *hand = lines_of(3, 910, 2, (bool[]){true, false, true}, SUBCARRIER_525);
	hand->plan.clock.phase = PHASE_LINES;
	hand->plan.clock.phase_count = 1;
	struct proofs *proofs = prove(hand, 0);
	const struct counterexample *found = &proofs->proof[PROOF_COLOUR].counterexample;
	assert_int_equal(found->cell, 1);
	assert_string_equal(found->what, "line 1 takes 910 ticks, 455/2 cycles, expected a whole number, so line 2 starts 1/2 of a cycle out "
	                    "of step; all other lines are whole");
	assert_out_of_step(&proofs->colour, 0, 2, 1, 2);
	assert_string_equal(found->hint, "lines of 908 or 912 ticks would meet it");
	proofs_destroy(proofs);
	// Planned as 912 ticks like the others, the plan is right and the machine wrong: nothing to mend in the plan.
	hand->types[hand->timeline.lines[1].type].ticks = 912;
	proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_COLOUR, VERDICT_FAIL);
	assert_null(proofs->proof[PROOF_COLOUR].counterexample.hint);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

static void words_for_frames(void **test)
{
	(void)test;
	struct by_hand *hand = lines_of(3, 910, 2, NULL, SUBCARRIER_525);
	hand->plan.clock.phase = PHASE_FRAMES;
	hand->plan.clock.phase_count = 1;
	struct proofs *proofs = prove(hand, 0);
	assert_string_equal(proofs->proof[PROOF_COLOUR].counterexample.what, "1 frame takes 2730 ticks, 1365/2 cycles, expected a whole "
	                    "number, so line 0 of the next frame starts 1/2 of a cycle out of step");
	assert_out_of_step(&proofs->colour, 1, 0, 1, 2);
	// A frame is 3 lines: 2730 is no multiple of 4, and neither is a line; 908 and 912 are. Two lines are 455 cycles.
	assert_string_equal(proofs->proof[PROOF_COLOUR].counterexample.hint, "lines of 908 or 912 ticks would meet it; as they are, they "
	                    "meet \"every 2 lines\"");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

static void nothing_demanded(void **test)
{
	(void)test;
	struct by_hand *hand = lines_of(3, 911, 2, NULL, SUBCARRIER_525);
	demand(hand, PHASE_FREE, 0, VERDICT_PASS);
	assert_cycles(hand, 911, 4, 4, 4);
	struct proofs *proofs = prove(hand, 0);
	assert_quarters(&proofs->colour, "032103210321");
	assert_false(proofs->colour.out_of_step.present);
	proofs_destroy(proofs);
	hand->plan.clock.has_subcarrier = false;
	demand(hand, PHASE_FREE, 0, VERDICT_ABSENT);
	by_hand_destroy(hand);
}

// The ticks come from the pins: a stretch bit that is not burned makes the line, and its colour, wrong.
static void ticks_come_from_the_pins(void **test)
{
	(void)test;
	struct by_hand *hand = lines_of(2, 910, 2, (bool[]){true, true}, SUBCARRIER_525);
	demand(hand, PHASE_LINES, 1, VERDICT_PASS);
	burn_count(hand, 0, false, 0);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_COLOUR, VERDICT_FAIL);
	assert_int_equal(proofs->proof[PROOF_COLOUR].counterexample.cell, 1);
	assert_ratio(proofs->colour.cycles_per_frame, 911, 2);
	assert_quarters(&proofs->colour, "0022002");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// One of two settings of a jumper shows a long line that is not long. What is kept is what failed first, beyond that bank's proofs.
static void phases_of_the_bank_that_fails(void **test)
{
	(void)test;
	struct by_hand *hand = lines_of(2, 910, 2, (bool[]){true, true}, SUBCARRIER_525);
	hand->plan.bank_bits = 1;
	hand->plan.chip_count = 0;
	add_straight_chips(hand);
	hand->plan.clock.phase = PHASE_LINES;
	hand->plan.clock.phase_count = 1;
	for (uint32_t bank = 0; bank < 2; bank++)
		for (uint32_t state = 0; state < 2; state++)
			burn_row(hand, bank, state, 0, state == 1, bank == 1 && state == 0 ? 0 : hand->timeline.asserted[0]);
	struct proofs *proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_COLOUR, VERDICT_FAIL);
	assert_int_equal(proofs->proof[PROOF_COLOUR].counterexample.bank, 1);
	assert_quarters(&proofs->colour, "0022002");
	assert_out_of_step(&proofs->colour, 1, 0, 1, 2);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

static bool windows_are_whole(const struct by_hand *hand, uint32_t count)
{
	const struct timeline *timeline = &hand->timeline;
	for (uint32_t line = 0; line < timeline->line_count; line++) {
		int64_t ticks = 0;
		for (uint32_t index = 0; index < count; index++)
			ticks += hand->types[timeline->lines[(line + index) % timeline->line_count].type].ticks;
		struct fraction cycles;
		assert_true(fraction_multiply(hand->plan.clock.subcarrier_hz, fraction_whole(ticks), &cycles));
		assert_true(fraction_divide(cycles, hand->plan.clock.master_hz, &cycles));
		if (!fraction_is_whole(cycles))
			return false;
	}
	return true;
}

// Against the definition: the smallest N such that all windows of N lines are whole.
static void repeats_by_trial(void **test)
{
	(void)test;
	uint64_t seed = 5;
	for (unsigned round = 0; round < 200; round++) {
		bool longer[8];
		uint32_t lines = 1 + random_below(&seed, 8), divisor = 1 + random_below(&seed, 12);
		uint32_t repeated = 1 + random_below(&seed, lines);
		for (uint32_t line = 0; line < lines; line++)
			longer[line] = line < repeated ? random_below(&seed, 2) : longer[line - repeated];
		struct by_hand *hand = lines_of(lines, 900 + random_below(&seed, 20), 1 + random_below(&seed, 9), longer,
		                                SUBCARRIER_525);
		assert_true(fraction_multiply(SUBCARRIER_525, ratio(divisor, 5), &hand->plan.clock.master_hz));
		uint32_t smallest = 1;
		while (!windows_are_whole(hand, smallest))
			smallest++;
		struct proofs *proofs = prove(hand, 0);
		assert_int_equal(proofs->colour.repeats_lines, smallest);
		proofs_destroy(proofs);
		for (uint32_t count = 1; count < 20; count++)
			demand(hand, PHASE_LINES, count, windows_are_whole(hand, count) ? VERDICT_PASS : VERDICT_FAIL);
		by_hand_destroy(hand);
	}
}

// Figures past 64 bits. Phases are always known: p = 2^63 - 1, and a line of t ticks moves them by 2t/p.
static void figures_that_do_not_fit(void **test)
{
	(void)test;
	struct by_hand *hand = lines_of(3, 910, 1, (bool[]){true, false, false}, SUBCARRIER_525);
	hand->plan.clock.master_hz = fraction_whole(INT64_MAX);
	hand->plan.clock.subcarrier_hz = fraction_whole(2);
	struct proofs *proofs = prove(hand, 0);
	assert_false(proofs->colour.repeats_known);
	assert_int_equal(proofs->colour.repeats_frames, INT64_MAX); // 5462 and p have no common factor: p = 7² 73 127 337 92737 649657
	assert_verdict(proofs, PROOF_COLOUR, VERDICT_PASS);
	assert_ratio(line_phase(&proofs->colour.phases, 2), 3642, INT64_MAX);
	assert_ratio(line_phase(&proofs->colour.phases, 3), 5462, INT64_MAX);
	proofs_destroy(proofs);
	// The other way round: more cycles a line than 64 bits count, and yet they are halves.
	hand->plan.clock.master_hz = fraction_whole(2);
	hand->plan.clock.subcarrier_hz = fraction_whole(INT64_MAX);
	proofs = prove(hand, 0);
	assert_ratio(proofs->colour.cycles_per_line, 0, 1);
	assert_ratio(proofs->colour.cycles_per_frame, 0, 1);
	assert_true(proofs->colour.repeats_known);
	assert_int_equal(proofs->colour.repeats_lines, 6); // 911, 910 and 910 ticks
	assert_int_equal(proofs->colour.repeats_frames, 2);
	assert_quarters(&proofs->colour, "022200022");
	hand->plan.clock.phase = PHASE_LINES;
	hand->plan.clock.phase_count = 1;
	proofs_destroy(proofs);
	proofs = prove(hand, 0);
	assert_string_equal(proofs->proof[PROOF_COLOUR].counterexample.what, "line 0 takes no whole number of subcarrier cycles, so line 1 "
	                    "starts 1/2 of a cycle out of step; all other lines are whole");
	proofs_destroy(proofs);
	hand->plan.clock.phase = PHASE_FREE;
	hand->plan.clock.master_hz = fraction_whole(INT64_MAX);
	hand->plan.clock.subcarrier_hz = ratio(2, INT64_MAX);
	proofs = prove(hand, 0);
	assert_verdict(proofs, PROOF_COLOUR, VERDICT_FAIL);
	assert_false(proofs->proof[PROOF_COLOUR].counterexample.present);
	assert_string_equal(proofs->proof[PROOF_COLOUR].counterexample.what,
	                    "not judged: subcarrier cycles per tick do not fit 64 bits");
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(lines_of_910_ticks),
		cmocka_unit_test(lines_of_912_ticks),
		cmocka_unit_test(lines_of_1135_ticks),
		cmocka_unit_test(lines_of_1136_ticks),
		cmocka_unit_test(frame_of_625_lines),
		cmocka_unit_test(unequal_lines),
		cmocka_unit_test(windows_around_the_frame),
		cmocka_unit_test(frames_that_are_asked),
		cmocka_unit_test(words_for_one_line),
		cmocka_unit_test(words_for_frames),
		cmocka_unit_test(nothing_demanded),
		cmocka_unit_test(ticks_come_from_the_pins),
		cmocka_unit_test(phases_of_the_bank_that_fails),
		cmocka_unit_test(repeats_by_trial),
		cmocka_unit_test(figures_that_do_not_fit),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
