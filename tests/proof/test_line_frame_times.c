// Glitches and speed of line-frame machines, worked out by hand.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "line_frame_by_hand.h"

#define NS(value) ratio(value, 1000000000)

// Cells of 10 ticks at 20 MHz, 500 ns; the shortest line has two, with an asynchronous line stage three. In nanoseconds: latch
// 30, setup 15; the line stage's counter 40, 25, the frame stage's 45, 28; margin 20; access 150 of "line", 100 of "frame".
static struct by_hand *timed(struct stage_kind line, struct stage_kind frame)
{
	struct by_hand *hand = pier(line, frame);
	hand->plan.clock.master_hz = fraction_whole(20000000);
	struct timing *timing = &hand->plan.timing;
	timing->latch_delay_s = NS(30);
	timing->latch_setup_s = NS(15);
	timing->counter_delay_s[STAGE_LINE] = NS(40);
	timing->counter_setup_s[STAGE_LINE] = NS(25);
	timing->counter_delay_s[STAGE_FRAME] = NS(45);
	timing->counter_setup_s[STAGE_FRAME] = NS(28);
	timing->decoder_delay_s = NS(12);
	timing->margin_s = NS(20);
	hand->chips[PIER_LINE].access_s = NS(150);
	hand->chips[PIER_FRAME].access_s = NS(100);
	return hand;
}

static void assert_ns(struct fraction found, int64_t expected)
{
	const struct fraction wanted = NS(expected);
	assert_ratio(found, wanted.numerator, wanted.denominator);
}

static void assert_pass(const struct speed_pass *pass, bool has_delay, bool counter, int64_t delay_ns, size_t chip, int64_t access_ns)
{
	assert_int_equal(pass->has_delay, has_delay);
	assert_int_equal(pass->counter, counter);
	assert_ns(pass->delay_s, delay_ns);
	assert_int_equal(pass->chip, chip);
	assert_ns(pass->access_s, access_ns);
}

// The way with the least slack: of a cell or line, how many look-ups, what it needs and what is left.
static struct proofs *assert_slowest(const struct by_hand *hand, bool of_line, unsigned passes, int64_t needed_ns, int64_t slack_ns)
{
	struct proofs *proofs = prove_pier(hand);
	const struct speed_result *speed = &proofs->speed;
	assert_verdict(proofs, PROOF_SPEED, slack_ns < 0 ? VERDICT_FAIL : VERDICT_PASS);
	assert_int_equal(speed->of_line, of_line);
	assert_int_equal(speed->pass_count, passes);
	assert_ns(speed->needed_s, needed_ns);
	assert_ns(speed->slack_s, slack_ns);
	return proofs;
}

static void assert_speed(struct by_hand *hand, bool of_line, unsigned passes, int64_t needed_ns, int64_t slack_ns)
{
	proofs_destroy(assert_slowest(hand, of_line, passes, needed_ns, slack_ns));
	by_hand_destroy(hand);
}

// 30 + 150 + 15 + 20.
static void latched_stages(void **test)
{
	(void)test;
	struct by_hand *hand = timed(table_latched, table_latched);
	struct proofs *proofs = assert_slowest(hand, false, 1, 215, 285);
	assert_pass(&proofs->speed.passes[0], true, false, 30, PIER_LINE, 150);
	assert_ns(proofs->speed.cell_s, 500);
	assert_ns(proofs->speed.setup_s, 15);
	proofs_destroy(proofs);
	hand->plan.timing.share = ratio(1, 2);
	proofs = assert_slowest(hand, false, 1, 215, 35);
	assert_ns(proofs->speed.available_s, 250);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
	assert_speed(timed(sync_latched, table_latched), false, 1, 40 + 150 + 25 + 20, 265);
	// An asynchronous clear: the passing state is read before the first cell is.
	assert_speed(timed(async_latched, table_latched), false, 2, 2 * (40 + 150) + 25 + 20, 75);
}

// The line stage's address waits for the frame stage's answer: 30 + 100 + 150 + 15 + 20.
static void direct_kind(void **test)
{
	(void)test;
	struct by_hand *hand = timed(table_latched, table_direct);
	struct proofs *proofs = assert_slowest(hand, false, 2, 315, 185);
	assert_pass(&proofs->speed.passes[0], true, false, 30, PIER_FRAME, 100);
	assert_pass(&proofs->speed.passes[1], false, false, 0, PIER_LINE, 150);
	proofs_destroy(proofs);
	hand->plan.timing.share = ratio(1, 2);
	proofs_destroy(assert_slowest(hand, false, 2, 315, -65));
	by_hand_destroy(hand);
	assert_speed(timed(table_latched, sync_direct), false, 2, 45 + 100 + 150 + 15 + 20, 170);
	// Both stages cleared asynchronously: each is read twice, 45 + 100 + 45 + 100 + 150 + 40 + 150 + 25 + 20.
	hand = timed(async_latched, async_direct);
	proofs = assert_slowest(hand, false, 4, 675, -175);
	assert_pass(&proofs->speed.passes[1], true, true, 45, PIER_FRAME, 100);
	assert_pass(&proofs->speed.passes[2], false, true, 0, PIER_LINE, 150);
	assert_pass(&proofs->speed.passes[3], true, true, 40, PIER_LINE, 150);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
}

// A latched kind comes at the latch's time, should the line stage's counter be faster: 50 + 150 + 25 + 20, and 40 where it is not.
static void latched_kind(void **test)
{
	(void)test;
	struct by_hand *hand = timed(sync_latched, table_latched);
	hand->plan.timing.latch_delay_s = NS(50);
	struct proofs *proofs = assert_slowest(hand, false, 1, 245, 255);
	assert_pass(&proofs->speed.passes[0], true, false, 50, PIER_LINE, 150);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
	assert_speed(timed(sync_latched, table_latched), false, 1, 40 + 150 + 25 + 20, 265);
	// Once cleared, the counter alone moves: 50 + 150 + 40 + 150 + 25 + 20.
	hand = timed(async_latched, table_latched);
	hand->plan.timing.latch_delay_s = NS(50);
	assert_speed(hand, false, 2, 435, 65);
}

// Without kinds nothing waits for the frame stage.
static void no_kind_to_wait_for(void **test)
{
	(void)test;
	struct by_hand *hand = timed(table_latched, table_direct);
	hand->plan.machine.kind_bits = 0;
	hand->chips[PIER_LINE].address[3] = (struct address_wire){ADDRESS_OPEN, 0};
	hand->chips[PIER_FRAME].data[2] = (struct data_wire){DATA_OPEN, 0};
	assert_speed(hand, false, 1, 215, 285);
}

// Step goes straight to the frame stage, whose counter needs it 28 before the edge.
static void direct_step(void **test)
{
	(void)test;
	assert_speed(timed(table_direct, sync_latched), false, 1, 30 + 150 + 28 + 20, 272);
	assert_speed(timed(table_direct, table_latched), false, 1, 215, 285);
	assert_speed(timed(table_latched, sync_latched), false, 1, 215, 285);
}

// The frame stage has a line of two cells: 30 + 900 + 15 + 20 of 1000.
static void frame_stage_alone(void **test)
{
	(void)test;
	struct by_hand *hand = timed(table_latched, table_latched);
	hand->chips[PIER_FRAME].access_s = NS(900);
	struct proofs *proofs = assert_slowest(hand, true, 1, 965, 35);
	assert_ns(proofs->speed.cell_s, 1000);
	assert_pass(&proofs->speed.passes[0], true, false, 30, PIER_FRAME, 900);
	proofs_destroy(proofs);
	by_hand_destroy(hand);
	hand = timed(table_latched, async_latched); // 2 × (45 + 400) + 28 + 20
	hand->chips[PIER_FRAME].access_s = NS(400);
	assert_speed(hand, true, 2, 938, 62);
}

// ---- glitches

static void nothing_unsettled(void **test)
{
	(void)test;
	struct by_hand *hand = timed(table_latched, sync_latched);
	struct proofs *proofs = prove_pier(hand);
	assert_verdict(proofs, PROOF_GLITCHES, VERDICT_ABSENT);
	end(hand, proofs);
}

static void direct_outputs(void **test)
{
	(void)test;
	struct by_hand *hand = timed(sync_direct, table_latched);
	struct proofs *proofs = prove_pier(hand);
	const struct stage_glitches *line = &proofs->glitches.stages[STAGE_LINE], *frame = &proofs->glitches.stages[STAGE_FRAME];
	assert_true(line->direct);
	assert_false(frame->direct);
	assert_ns(line->unsettled_s, 40 + 150);
	assert_string_equal(line->unsettled_part, "line");
	end(hand, proofs);
	hand = timed(table_latched, sync_direct);
	proofs = prove_pier(hand);
	line = &proofs->glitches.stages[STAGE_LINE];
	frame = &proofs->glitches.stages[STAGE_FRAME];
	assert_false(line->direct);
	assert_true(frame->direct);
	assert_ns(frame->unsettled_s, 45 + 100);
	assert_string_equal(frame->unsettled_part, "frame");
	end(hand, proofs);
	// The line stage's answer comes after the kind's.
	hand = timed(table_direct, table_direct);
	proofs = prove_pier(hand);
	assert_ns(proofs->glitches.stages[STAGE_LINE].unsettled_s, 30 + 100 + 150);
	end(hand, proofs);
}

// The passing state of the line stage is H 3, of kind 0 before lines 0 and 1 and of kind 1 before line 2. Blank is on at the
// end of line 2 and at the beginning of line 0, and must be on in between.
static void passing_line_state(void **test)
{
	(void)test;
	struct by_hand *hand = timed(async_direct, table_latched);
	struct proofs *proofs = prove_pier(hand);
	const struct stage_glitches *line = &proofs->glitches.stages[STAGE_LINE];
	assert_verdict(proofs, PROOF_GLITCHES, VERDICT_PASS);
	assert_true(line->async_clear);
	assert_ns(line->clear_unsettled_s, 40 + 150);
	assert_string_equal(line->clear_part, "line");
	assert_true(line->passes);
	assert_int_equal(line->passing_address, 3);
	assert_int_equal(line->passing_pins, 0);
	assert_false(proofs->glitches.stages[STAGE_FRAME].passes);
	proofs_destroy(proofs);
	struct pier_row row = line_row(hand, PICTURE, 3);
	row.asserted = 0;
	burn_line(hand, PICTURE, 3, row);
	proofs = prove_pier(hand);
	assert_int_equal(proofs->glitches.stages[STAGE_LINE].passing_pins, BLANK);
	proofs_destroy(proofs);
	row.asserted = BLANK;
	burn_line(hand, PICTURE, 3, row);
	row = line_row(hand, QUIET, 3);
	row.asserted = 0; // before line 2: neither is on before it, and both after: no spike
	burn_line(hand, QUIET, 3, row);
	proofs = prove_pier(hand);
	assert_int_equal(proofs->glitches.stages[STAGE_LINE].passing_pins, 0);
	end(hand, proofs);
	hand = timed(async_latched, table_latched); // latched outputs do not see it
	burn_line(hand, PICTURE, 3, (struct pier_row){.clear = true});
	proofs = prove_pier(hand);
	assert_true(proofs->glitches.stages[STAGE_LINE].passes);
	assert_int_equal(proofs->glitches.stages[STAGE_LINE].passing_pins, 0);
	end(hand, proofs);
}

// The passing state of the frame stage, V 3, lies between lines 2 and 0. Were it night in both, night would spike; and so does a
// pin of a direct line stage that reads another row under the passing kind.
static void passing_frame_state(void **test)
{
	(void)test;
	struct by_hand *hand = timed(table_direct, async_direct);
	struct proofs *proofs = prove_pier(hand);
	const struct stage_glitches *frame = &proofs->glitches.stages[STAGE_FRAME];
	assert_true(frame->async_clear);
	assert_ns(frame->clear_unsettled_s, 45 + 100);
	assert_string_equal(frame->clear_part, "frame");
	assert_true(frame->passes);
	assert_int_equal(frame->passing_address, 3);
	assert_int_equal(frame->passing_pins, 0);
	assert_false(proofs->glitches.stages[STAGE_LINE].async_clear);
	assert_false(proofs->glitches.stages[STAGE_LINE].passes);
	proofs_destroy(proofs);
	struct pier_row row = frame_row(hand, 0);
	row.asserted = NIGHT;
	burn_frame(hand, 0, row);
	proofs = prove_pier(hand);
	assert_int_equal(proofs->glitches.stages[STAGE_FRAME].passing_pins, NIGHT);
	proofs_destroy(proofs);
	burn_pier(hand);
	row = frame_row(hand, 3);
	row.kind = QUIET;
	burn_frame(hand, 3, row);
	row = line_row(hand, QUIET, 0);
	row.asserted = SYNC;
	burn_line(hand, QUIET, 0, row);
	proofs = prove_pier(hand);
	assert_int_equal(proofs->glitches.stages[STAGE_FRAME].passing_pins, BLANK);
	end(hand, proofs);
	// Clear of the line stage, read under a direct kind, settles after it.
	hand = timed(async_latched, sync_direct);
	proofs = prove_pier(hand);
	assert_ns(proofs->glitches.stages[STAGE_LINE].clear_unsettled_s, 45 + 100 + 150);
	end(hand, proofs);
}

// A decoder on bits 1 and 0 of H, of which code 3 is never used: from 1 to 2 it may pass it, in lines 0 and 1. V and kind change
// at the same edges as H, and do not matter.
static void decoder_on_h(void **test)
{
	(void)test;
	static const uint32_t codes[] = {3};
	struct by_hand *hand = timed(table_latched, table_latched);
	add_decoded(hand, "gate", add_field(hand, "code", 1, 0), codes, 1);
	struct proofs *proofs = prove_pier(hand);
	const struct glitch_result *glitches = &proofs->glitches;
	assert_verdict(proofs, PROOF_GLITCHES, VERDICT_FAIL);
	assert_int_equal(glitches->edges, 8);
	assert_int_equal(glitches->multi_bit_edges, 2);
	assert_int_equal(glitches->disturbed, 1);
	assert_int_equal(glitches->first[0].count, 2);
	assert_int_equal(glitches->first[0].cell, 2);
	assert_int_equal(glitches->first[0].from_code, 1);
	assert_int_equal(glitches->first[0].to_code, 2);
	assert_int_equal(glitches->first[0].between_code, 3);
	assert_ns(glitches->settle_s, 30 + 12);
	assert_false(glitches->stages[STAGE_LINE].direct);
	end(hand, proofs);
	// Counted with an asynchronous clear: H passes 3 on its way from 2 to 0, at each edge between lines, besides.
	hand = timed(async_latched, table_latched);
	add_decoded(hand, "gate", add_field(hand, "code", 1, 0), codes, 1);
	proofs = prove_pier(hand);
	assert_int_equal(proofs->glitches.edges, 9);
	assert_int_equal(proofs->glitches.first[0].count, 6);
	assert_int_equal(proofs->glitches.first[0].cell, 0);
	assert_ns(proofs->glitches.settle_s, 40 + 12);
	end(hand, proofs);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(latched_stages),
		cmocka_unit_test(direct_kind),
		cmocka_unit_test(latched_kind),
		cmocka_unit_test(no_kind_to_wait_for),
		cmocka_unit_test(direct_step),
		cmocka_unit_test(frame_stage_alone),
		cmocka_unit_test(nothing_unsettled),
		cmocka_unit_test(direct_outputs),
		cmocka_unit_test(passing_line_state),
		cmocka_unit_test(passing_frame_state),
		cmocka_unit_test(decoder_on_h),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
