// The figures of each proof, as phrases that a stranger at a bench understands.
#include <inttypes.h>

#include "base/text.h"
#include "view/limits.h"
#include "view/proofs_shared.h"
#include "view/states.h"

#define PLACES 3

static void put_bank(struct text *out, const struct proofs *proofs, uint32_t bank)
{
	if (proofs->banks > 1)
		text_printf(out, " in bank %" PRIu32, bank);
}

static void put_banks(struct text *out, const struct proofs *proofs, const char *words)
{
	if (proofs->banks > 1)
		text_printf(out, " %s %" PRIu32 " banks", words, proofs->banks);
}

// "1/101 line", "0.396 lines", "3 lines".
static void put_lines(struct text *out, struct fraction lines)
{
	if (lines.numerator == 1)
		text_put_fraction(out, lines);
	else
		text_put_rounded(out, lines, PLACES);
	text_put(out, lines.numerator == 1 ? " line" : " lines");
}

static void put_frame(struct text *out, uint32_t lines, uint32_t cells, int64_t ticks)
{
	text_put_count(out, lines, "line", "lines");
	text_put(out, ", ");
	text_put_count(out, cells, "cell", "cells");
	text_put(out, ", ");
	text_put_count(out, (uint64_t)ticks, "tick", "ticks");
}

static void put_closure(struct text *out, const struct proofs *proofs)
{
	const struct closure_result *closure = &proofs->closure;
	const struct timeline *timeline = proofs->timeline;
	struct fraction seconds;
	if (proof_failed(proofs, PROOF_CLOSURE)) {
		text_put(out, "the machine does not keep to the frame of ");
		put_frame(out, timeline->line_count, timeline->cell_count, timeline->tick_count);
		return;
	}
	put_frame(out, closure->lines, closure->cells, closure->ticks);
	text_put(out, "; home in ");
	put_state(out, proofs, closure->start_state);
	if (seconds_of_ticks(&plan_of(proofs)->clock, closure->ticks, &seconds)) {
		text_put(out, " after ");
		text_put_time(out, seconds);
	}
	if (closure->period_cells != closure->cells) {
		text_put(out, "; the states repeat every ");
		text_put_count(out, closure->period_cells, "cell", "cells");
	}
	put_banks(out, proofs, "in each of");
}

static void put_signals(struct text *out, const struct proofs *proofs)
{
	const struct signals_result *signals = &proofs->signals;
	const bool failed = proof_failed(proofs, PROOF_SIGNALS);
	text_put(out, failed ? "not all of " : "");
	text_put_count(out, signals->comparisons, "pin level", "pin levels");
	if (signals->held_comparisons > 0) {
		text_put(out, " and ");
		text_put_count(out, signals->held_comparisons, "held address", "held addresses");
	}
	text_put(out, failed ? " are as planned" : " as planned");
	put_banks(out, proofs, "in");
}

static void put_longest_way(struct text *out, const struct proofs *proofs)
{
	const struct power_up_result *power_up = &proofs->power_up;
	struct fraction seconds;
	text_put(out, ", the longest way ");
	text_put_count(out, power_up->longest_cells, "cell", "cells");
	text_put(out, " (");
	put_lines(out, power_up->longest_lines);
	if (seconds_of_ticks(&plan_of(proofs)->clock, power_up->longest_ticks, &seconds)) {
		text_put(out, ", ");
		text_put_time_in(out, seconds, UNIT_MICROSECONDS);
	}
	text_put(out, ") from ");
	put_state(out, proofs, power_up->longest_state);
	put_bank(out, proofs, power_up->longest_bank);
}

// Where no state has a way home to go, because it is one of the frame or clears the counter at once.
static void put_at_home(struct text *out, const struct power_up_result *power_up)
{
	const uint64_t at_home = power_up->states - power_up->cleared_states;
	if (power_up->cleared_states == 0)
		text_put(out, ": all are states of the frame");
	else
		text_printf(out, ": %" PRIu64 " %s of the frame, %" PRIu64 " at once, by clearing the counter", at_home,
		            at_home == 1 ? "is a state" : "are states", power_up->cleared_states);
}

static void put_power_up(struct text *out, const struct proofs *proofs)
{
	const struct power_up_result *power_up = &proofs->power_up;
	if (power_up->lost_states > 0) {
		text_printf(out, "%" PRIu64 " of ", power_up->lost_states);
		text_put_count(out, power_up->states, "state", "states");
		put_banks(out, proofs, "in");
		text_put(out, power_up->lost_states == 1 ? " never comes home" : " never come home");
		return;
	}
	text_put(out, "all ");
	text_put_count(out, power_up->states, "state", "states");
	put_banks(out, proofs, "in");
	text_put(out, " come home");
	if (power_up->longest_cells == 0)
		put_at_home(out, power_up);
	else
		put_longest_way(out, proofs);
}

// " at worst (bit 3 in line 0, cell 5)".
static void put_worst(struct text *out, const struct proofs *proofs, uint32_t cell, unsigned bit)
{
	const struct cell_place place = timeline_place(proofs->timeline, cell);
	text_put(out, " at worst (");
	put_state_bit(out, proofs, bit);
	text_printf(out, " in line %" PRIu32 ", cell %" PRIu32 ")", place.line, place.cell);
}

static void put_mean(struct text *out, struct fraction mean)
{
	text_put(out, ", ");
	text_put_rounded(out, mean, PLACES);
	text_put(out, " in the mean");
}

static void put_regained(struct text *out, const struct proofs *proofs)
{
	const struct upset_result *upset = &proofs->upset;
	if (upset->worst_cells == 0) {
		text_put(out, " home at once");
		return;
	}
	text_put(out, " home after ");
	text_put_count(out, upset->worst_cells, "cell", "cells");
	put_worst(out, proofs, upset->worst_cell, upset->worst_bit);
	put_mean(out, upset->mean_cells);
}

static void put_upset(struct text *out, const struct proofs *proofs)
{
	const struct upset_result *upset = &proofs->upset;
	text_put_count(out, upset->upsets, "flip of one bit", "flips of one bit");
	text_put(out, proof_failed(proofs, PROOF_UPSET) ? ", some of which never come home; the others" : ":");
	put_regained(out, proofs);
	text_put(out, "; the raster ");
	if (upset->worst_slip_cells == 0) {
		text_put(out, "does not slip");
		return;
	}
	text_put(out, "slips ");
	text_put_count(out, upset->worst_slip_cells, "cell", "cells");
	text_put(out, " (");
	put_lines(out, upset->worst_slip_lines);
	text_put(out, ")");
	put_worst(out, proofs, upset->worst_slip_cell, upset->worst_slip_bit);
	put_mean(out, upset->mean_slip_cells);
}

// When a decoded pin has its level. An async clear strikes once the passing state has been looked up.
static void put_settled(struct text *out, const struct proofs *proofs)
{
	const struct plan *plan = plan_of(proofs);
	const struct glitch_result *glitches = &proofs->glitches;
	const bool counts = plan->machine.line.advance == ADVANCE_COUNT;
	text_put(out, "; decoded pins settle after ");
	text_put_time_in(out, glitches->settle_s, UNIT_NANOSECONDS);
	text_put(out, counts ? " (counter " : " (latch ");
	text_put_time_number(out, counts ? plan->timing.counter_delay_s[STAGE_LINE] : plan->timing.latch_delay_s, UNIT_NANOSECONDS);
	text_put(out, " + decoder ");
	text_put_time_number(out, plan->timing.decoder_delay_s, UNIT_NANOSECONDS);
	text_put(out, ")");
	if (!glitches->stages[STAGE_LINE].async_clear)
		return;
	text_put(out, ", ");
	text_put_time_in(out, glitches->stages[STAGE_LINE].clear_unsettled_s, UNIT_NANOSECONDS);
	text_put(out, " later where the counter is cleared");
}

static void put_decoded(struct text *out, const struct proofs *proofs)
{
	const struct glitch_result *glitches = &proofs->glitches;
	if (!glitches->has_field_signals) {
		text_put(out, "no signal is decoded from the state");
		return;
	}
	text_put_count(out, glitches->edges, "cell edge", "cell edges");
	text_printf(out, ", %" PRIu64 " with more than one bit of a decoded field changing; ", glitches->multi_bit_edges);
	if (glitches->disturbed == 0)
		text_put(out, "no decoded signal can flicker");
	else
		text_put_count(out, glitches->disturbed, "decoded signal may flicker", "decoded signals may flicker");
	put_settled(out, proofs);
}

static void put_unsettled(struct text *out, struct fraction seconds, enum stage stage)
{
	text_put(out, "unsettled for ");
	text_put_time_in(out, seconds, UNIT_NANOSECONDS);
	text_put(out, stage == STAGE_LINE ? " after each edge" : " after each step");
}

// The state that an async clear passes through, and what spikes meanwhile.
static void put_passing(struct text *out, const struct proofs *proofs, enum stage stage)
{
	const struct plan *plan = plan_of(proofs);
	const struct stage_glitches *glitches = &proofs->glitches.stages[stage];
	bool any = false;
	text_put(out, "; it passes through ");
	put_row_state(out, proofs, stage, glitches->passing_address);
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		if ((glitches->passing_pins >> signal & 1) == 0)
			continue;
		text_printf(out, "%s%s", any ? ", " : ", which spikes ", plan->signals[signal].name);
		any = true;
	}
	if (!any)
		text_put(out, glitches->direct ? ", in which no data output spikes" : "");
}

static void put_stage_glitches(struct text *out, const struct proofs *proofs, enum stage stage)
{
	const struct stage_glitches *glitches = &proofs->glitches.stages[stage];
	const bool two = plan_of(proofs)->machine.form == FORM_LINE_FRAME;
	const char *of = !two ? "" : stage == STAGE_LINE ? " of the line stage" : " of the frame stage";
	if (glitches->direct) {
		text_printf(out, "; the data outputs%s are taken straight from the EEPROMs and are ", of);
		put_unsettled(out, glitches->unsettled_s, stage);
		text_printf(out, " (%s)", glitches->unsettled_part);
	}
	if (!glitches->async_clear)
		return;
	text_printf(out, "; clear%s is taken straight from %s into an asynchronous pin and is ", of, glitches->clear_part);
	put_unsettled(out, glitches->clear_unsettled_s, stage);
	text_put(out, ", when a spike on it clears the counter too early: gate it, or use clear: sync");
	if (glitches->passes)
		put_passing(out, proofs, stage);
}

// "The data outputs are latched" is said only where nothing else is to be said: it must not outshine an unsettled clear.
static void put_glitches(struct text *out, const struct proofs *proofs)
{
	const struct glitch_result *glitches = &proofs->glitches;
	const struct stage_glitches *line = &glitches->stages[STAGE_LINE], *frame = &glitches->stages[STAGE_FRAME];
	put_decoded(out, proofs);
	put_stage_glitches(out, proofs, STAGE_LINE);
	if (plan_of(proofs)->machine.form == FORM_LINE_FRAME)
		put_stage_glitches(out, proofs, STAGE_FRAME);
	if (!line->direct && !line->async_clear && !frame->direct && !frame->async_clear && !glitches->has_field_signals)
		text_put(out, ", and the data outputs are latched");
	const struct machine_plan *machine = &plan_of(proofs)->machine;
	if (machine->form == FORM_LINE_FRAME && machine->frame.advance == ADVANCE_COUNT && machine->frame.clear == CLEAR_SYNC)
		text_put(out, "; gate clear of the frame stage with step: a 74x163 obeys it at every edge, enabled or not");
}

// " of the shortest cell's 628.571 ns", " of 314.286 ns (1/2 of the shortest cell)"; or line.
static void put_available(struct text *out, const struct proofs *proofs)
{
	const struct speed_result *speed = &proofs->speed;
	const struct fraction share = plan_of(proofs)->timing.share;
	const bool whole = fraction_compare(share, fraction_whole(1)) == 0;
	const char *what = speed->of_line ? "line" : "cell";
	if (whole)
		text_printf(out, " of the shortest %s's ", what);
	else
		text_put(out, " of ");
	text_put_time_in(out, speed->available_s, UNIT_NANOSECONDS);
	if (whole)
		return;
	text_put(out, " (");
	text_put_fraction(out, share);
	text_printf(out, " of the shortest %s)", what);
}

// "latch 41 + access 150 of rom0".
static void put_pass(struct text *out, const struct proofs *proofs, const struct speed_pass *pass)
{
	if (pass->has_delay) {
		text_put(out, pass->counter ? "counter " : "latch ");
		text_put_time_number(out, pass->delay_s, UNIT_NANOSECONDS);
		text_put(out, " + ");
	}
	text_put(out, "access ");
	text_put_time_number(out, pass->access_s, UNIT_NANOSECONDS);
	text_printf(out, " of %s", plan_of(proofs)->chips[pass->chip].label);
}

// "latch 41 + access 150 of rom0 + setup 15 + margin 20", in nanoseconds.
static void put_sum(struct text *out, const struct proofs *proofs)
{
	const struct speed_result *speed = &proofs->speed;
	const bool twice = plan_of(proofs)->machine.form == FORM_LOOP && speed->pass_count == 2 && speed->passes[0].chip == speed->passes[1].chip;
	text_put(out, twice ? "2 x (" : "");
	for (unsigned pass = 0; pass < (twice ? 1 : speed->pass_count); pass++) {
		text_put(out, pass > 0 ? " + " : "");
		put_pass(out, proofs, &speed->passes[pass]);
	}
	text_put(out, twice ? ") + setup " : " + setup ");
	text_put_time_number(out, speed->setup_s, UNIT_NANOSECONDS);
	text_put(out, " + margin ");
	text_put_time_number(out, speed->margin_s, UNIT_NANOSECONDS);
}

static void put_speed(struct text *out, const struct proofs *proofs)
{
	const struct speed_result *speed = &proofs->speed;
	struct fraction slack_s = speed->slack_s;
	text_put(out, "needed ");
	text_put_time_in(out, speed->needed_s, UNIT_NANOSECONDS);
	put_available(out, proofs);
	text_put(out, ": ");
	put_sum(out, proofs);
	text_put(out, slack_s.numerator < 0 ? "; short by " : "; slack ");
	if (slack_s.numerator < 0)
		slack_s.numerator = -slack_s.numerator;
	text_put_time_in(out, slack_s, UNIT_NANOSECONDS);
}

static void put_asked(struct text *out, struct fraction within_s)
{
	text_put(out, "; asked: every ");
	text_put_time(out, within_s);
}

static void put_late(struct text *out, const struct sweep *asked, const struct sweep_result *sweep, unsigned bits)
{
	struct fraction excess_s;
	text_put(out, "value ");
	text_put_hex(out, sweep->worst_value, bits);
	text_printf(out, " of %s stays away for ", asked->text);
	text_put_time(out, sweep->worst_gap_s);
	if (fraction_subtract(sweep->worst_gap_s, sweep->within_s, &excess_s)) {
		text_put(out, ", ");
		text_put_time(out, excess_s);
		text_put(out, " too long");
	}
	put_asked(out, sweep->within_s);
}

static void put_missing(struct text *out, const struct sweep *asked, const struct sweep_result *sweep, unsigned bits)
{
	text_printf(out, "%" PRIu64 " of %" PRIu64 " values of %s never come up, the first is ", sweep->missing, sweep->values,
	            asked->text);
	text_put_hex(out, sweep->first_missing, bits);
	put_asked(out, sweep->within_s);
}

void put_sweep(struct text *out, const struct sweep *asked, const struct sweep_result *sweep)
{
	const unsigned bits = asked->high - asked->low + 1;
	if (sweep->missing > 0) {
		put_missing(out, asked, sweep, bits);
		return;
	}
	if (!sweep_kept(sweep)) {
		put_late(out, asked, sweep, bits);
		return;
	}
	text_printf(out, "all %" PRIu64 " values of %s come up at least every ", sweep->values, asked->text);
	text_put_time(out, sweep->worst_gap_s);
	text_put(out, ", the slowest ");
	text_put_hex(out, sweep->worst_value, bits);
	put_asked(out, sweep->within_s);
}

static void put_sweeps(struct text *out, const struct proofs *proofs)
{
	const size_t count = plan_of(proofs)->sweep_count;
	size_t kept = 0;
	if (count == 0) {
		text_put(out, "the plan asks for none");
		return;
	}
	if (count == 1) {
		put_sweep(out, &plan_of(proofs)->sweeps[0], &proofs->sweeps[0]);
		return;
	}
	for (size_t index = 0; index < count; index++)
		kept += sweep_kept(&proofs->sweeps[index]);
	if (kept == count)
		text_printf(out, "all %zu sweeps are kept", count);
	else
		text_printf(out, "%zu of %zu sweeps are kept", kept, count);
}

void put_proof_figures(struct text *out, const struct proofs *proofs, enum proof_kind kind)
{
	switch (kind) {
	case PROOF_CLOSURE: put_closure(out, proofs); break;
	case PROOF_SIGNALS: put_signals(out, proofs); break;
	case PROOF_COLOUR: put_colour(out, proofs); break;
	case PROOF_POWER_UP: put_power_up(out, proofs); break;
	case PROOF_UPSET: put_upset(out, proofs); break;
	case PROOF_LIMITS: put_limits_figures(out, proofs); break;
	case PROOF_GLITCHES: put_glitches(out, proofs); break;
	case PROOF_SPEED: put_speed(out, proofs); break;
	case PROOF_SWEEP: put_sweeps(out, proofs); break;
	case PROOF_COUNT: break;
	}
}
