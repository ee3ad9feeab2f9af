#include "base/text.h"
#include "view/limits.h"
#include "view/proofs.h"
#include "view/proofs_shared.h"
#include "view/states.h"

static json_t *count(uint64_t value)
{
	return json_integer((json_int_t)value);
}

static json_t *truth(bool value)
{
	return json_boolean(value);
}

void json_put_place(json_t **object, const struct timeline *timeline, uint32_t cell)
{
	const struct cell_place place = timeline_place(timeline, cell);
	json_put(object, "line", count(place.line));
	json_put(object, "line_type", json_string(timeline_line_name(timeline, cell)));
	json_put(object, "cell", count(place.cell));
	json_put(object, "region", json_string(timeline_region_name(timeline, cell)));
	json_put(object, "frame_cell", count(cell));
}

static void put_chip(json_t **object, const struct plan *plan, const struct byte_place *byte)
{
	json_put(object, "chip", json_string(plan->chips[byte->chip].label));
	json_put(object, "address", count(byte->address));
	json_put(object, "byte", count(byte->value));
}

static json_t *counterexample_json(const struct proofs *proofs, enum proof_kind kind)
{
	const struct counterexample *found = &proofs->proof[kind].counterexample;
	const struct plan *plan = plan_of(proofs);
	json_t *object = json_object();
	json_put(&object, "what", json_string(found->what));
	json_put(&object, "bank", count(found->bank));
	if (found->hint != NULL)
		json_put(&object, "hint", json_string(found->hint));
	if (!found->present)
		return object;
	if (has_place(proofs, kind))
		json_put_place(&object, proofs->timeline, found->cell);
	if (found->state != NO_STATE)
		json_put_row_state(&object, proofs, found->stage, found->state);
	if (found->signal != SIZE_MAX)
		json_put(&object, "signal", json_string(plan->signals[found->signal].name));
	if (found->byte_known)
		put_chip(&object, plan, &found->byte);
	return object;
}

static void put_closure(json_t **object, const struct proofs *proofs)
{
	const struct closure_result *closure = &proofs->closure;
	struct fraction seconds;
	json_put(object, "lines", count(closure->lines));
	json_put(object, "cells", count(closure->cells));
	json_put(object, "ticks", json_fraction(fraction_whole(closure->ticks)));
	if (seconds_of_ticks(&plan_of(proofs)->clock, closure->ticks, &seconds))
		json_put_time(object, "frame", seconds, UNIT_MILLISECONDS);
	json_put(object, "period_cells", count(closure->period_cells));
	json_put(object, "start_state", state_json(proofs, closure->start_state));
	json_put(object, "banks", count(proofs->banks));
}

static json_t *codes_json(const struct proofs *proofs)
{
	const struct plan *plan = plan_of(proofs);
	json_t *object = json_object();
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		if (plan->signals[signal].origin != FROM_FIELD)
			continue;
		json_t *codes = json_array();
		for (size_t index = 0; index < proofs->code_counts[signal]; index++)
			json_append(&codes, count(proofs->codes[signal][index]));
		json_put(&object, plan->signals[signal].name, codes);
	}
	return object;
}

static void put_signals(json_t **object, const struct proofs *proofs)
{
	json_put(object, "comparisons", count(proofs->signals.comparisons));
	json_put(object, "held_comparisons", count(proofs->signals.held_comparisons));
	json_put(object, "codes", codes_json(proofs));
}

static void put_power_up(json_t **object, const struct proofs *proofs)
{
	const struct power_up_result *power_up = &proofs->power_up;
	struct fraction seconds;
	json_put(object, "states", count(power_up->states));
	json_put(object, "frame_states", count(power_up->frame_states));
	json_put(object, "cleared_states", count(power_up->cleared_states));
	json_put(object, "longest_cells", count(power_up->longest_cells));
	json_put_fraction(object, "longest_lines", power_up->longest_lines);
	json_put(object, "longest_ticks", json_fraction(fraction_whole(power_up->longest_ticks)));
	if (seconds_of_ticks(&plan_of(proofs)->clock, power_up->longest_ticks, &seconds))
		json_put_time(object, "longest", seconds, UNIT_MICROSECONDS);
	json_put(object, "longest_state", state_json(proofs, power_up->longest_state));
	json_put(object, "longest_bank", count(power_up->longest_bank));
	json_put(object, "lost_states", count(power_up->lost_states));
	if (power_up->lost_states == 0)
		return;
	json_t *loop = json_object();
	json_put(&loop, "state", state_json(proofs, power_up->second_loop_state));
	json_put(&loop, "cells", count(power_up->second_loop_cells));
	json_put(object, "second_loop", loop);
}

static json_t *flip_json(const struct proofs *proofs, uint32_t cell, unsigned bit)
{
	json_t *object = json_object();
	json_put_place(&object, proofs->timeline, cell);
	json_put_state_bit(&object, proofs, bit);
	return object;
}

static void put_upset(json_t **object, const struct proofs *proofs)
{
	const struct upset_result *upset = &proofs->upset;
	json_put(object, "upsets", count(upset->upsets));
	json_put(object, "worst_cells", count(upset->worst_cells));
	json_put(object, "worst", flip_json(proofs, upset->worst_cell, upset->worst_bit));
	json_put_fraction(object, "mean_cells", upset->mean_cells);
	json_put(object, "worst_slip_cells", count(upset->worst_slip_cells));
	json_put_fraction(object, "worst_slip_lines", upset->worst_slip_lines);
	json_put(object, "worst_slip", flip_json(proofs, upset->worst_slip_cell, upset->worst_slip_bit));
	json_put_fraction(object, "mean_slip_cells", upset->mean_slip_cells);
}

static json_t *edge_json(const struct proofs *proofs, const struct glitch_edge *edge)
{
	json_t *object = json_object();
	json_put(&object, "signal", json_string(plan_of(proofs)->signals[edge->signal].name));
	json_put(&object, "edges", count(edge->count));
	json_put_place(&object, proofs->timeline, edge->cell);
	json_put(&object, "from_state", state_json(proofs, edge->from_state));
	json_put(&object, "to_state", state_json(proofs, edge->to_state));
	json_put(&object, "from_code", count(edge->from_code));
	json_put(&object, "between_code", count(edge->between_code));
	json_put(&object, "to_code", count(edge->to_code));
	return object;
}

// The state that an async clear passes through, and the direct signals that spike meanwhile.
static json_t *passing_json(const struct proofs *proofs, enum stage stage)
{
	const struct plan *plan = plan_of(proofs);
	const struct stage_glitches *glitches = &proofs->glitches.stages[stage];
	json_t *object = json_object(), *pins = json_array();
	json_put_row_state(&object, proofs, stage, glitches->passing_address);
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (glitches->passing_pins >> signal & 1)
			json_append(&pins, json_string(plan->signals[signal].name));
	json_put(&object, "spikes", pins);
	return object;
}

static void put_stage_glitches(json_t **object, const struct proofs *proofs, enum stage stage)
{
	const struct stage_glitches *glitches = &proofs->glitches.stages[stage];
	json_put(object, "direct", truth(glitches->direct));
	if (glitches->direct) {
		json_put_time(object, "unsettled", glitches->unsettled_s, UNIT_NANOSECONDS);
		json_put(object, "unsettled_chip", json_string(glitches->unsettled_part));
	}
	json_put(object, "async_clear", truth(glitches->async_clear));
	if (glitches->async_clear) {
		json_put_time(object, "clear_unsettled", glitches->clear_unsettled_s, UNIT_NANOSECONDS);
		json_put(object, "clear_chip", json_string(glitches->clear_part));
	}
	if (glitches->passes)
		json_put(object, "passing", passing_json(proofs, stage));
}

static void put_glitches(json_t **object, const struct proofs *proofs)
{
	const struct glitch_result *glitches = &proofs->glitches;
	json_t *disturbed = json_array();
	for (size_t index = 0; index < glitches->disturbed; index++)
		json_append(&disturbed, edge_json(proofs, &glitches->first[index]));
	json_put(object, "decoded", truth(glitches->has_field_signals));
	json_put(object, "edges", count(glitches->edges));
	json_put(object, "multi_bit_edges", count(glitches->multi_bit_edges));
	json_put(object, "disturbed", disturbed);
	if (glitches->has_field_signals)
		json_put_time(object, "settle", glitches->settle_s, UNIT_NANOSECONDS);
	put_stage_glitches(object, proofs, STAGE_LINE);
	if (plan_of(proofs)->machine.form == FORM_LOOP)
		return;
	json_t *frame = json_object();
	put_stage_glitches(&frame, proofs, STAGE_FRAME);
	json_put(object, "frame", frame);
}

static json_t *pass_json(const struct proofs *proofs, const struct speed_pass *pass)
{
	json_t *object = json_object();
	json_put(&object, "chip", json_string(plan_of(proofs)->chips[pass->chip].label));
	json_put(&object, "counter", truth(pass->counter));
	json_put_time(&object, "delay", pass->delay_s, UNIT_NANOSECONDS);
	json_put_time(&object, "access", pass->access_s, UNIT_NANOSECONDS);
	return object;
}

static struct fraction slowest_access(const struct speed_result *speed)
{
	struct fraction slowest = speed->passes[0].access_s;
	for (unsigned pass = 1; pass < speed->pass_count; pass++)
		if (fraction_compare(speed->passes[pass].access_s, slowest) > 0)
			slowest = speed->passes[pass].access_s;
	return slowest;
}

static void put_speed(json_t **object, const struct proofs *proofs)
{
	const struct speed_result *speed = &proofs->speed;
	json_t *passes = json_array();
	for (unsigned pass = 0; pass < speed->pass_count; pass++)
		json_append(&passes, pass_json(proofs, &speed->passes[pass]));
	json_put(object, "of", json_string(speed->of_line ? "line" : "cell"));
	json_put_time(object, speed->of_line ? "line" : "cell", speed->cell_s, UNIT_NANOSECONDS);
	json_put_time(object, "available", speed->available_s, UNIT_NANOSECONDS);
	json_put_time(object, "delay", speed->passes[0].delay_s, UNIT_NANOSECONDS);
	json_put_time(object, "access", slowest_access(speed), UNIT_NANOSECONDS);
	json_put(object, "passes", passes);
	json_put_time(object, "setup", speed->setup_s, UNIT_NANOSECONDS);
	json_put_time(object, "margin", speed->margin_s, UNIT_NANOSECONDS);
	json_put_time(object, "needed", speed->needed_s, UNIT_NANOSECONDS);
	json_put_time(object, "slack", speed->slack_s, UNIT_NANOSECONDS);
}

static json_t *sweep_json(const struct sweep *asked, const struct sweep_result *sweep)
{
	json_t *object = json_object();
	json_put(&object, "bits", json_string(asked->text));
	json_put(&object, "kept", truth(sweep_kept(sweep)));
	json_put(&object, "values", count(sweep->values));
	json_put(&object, "missing", count(sweep->missing));
	if (sweep->missing > 0)
		json_put(&object, "first_missing", count(sweep->first_missing));
	json_put_time(&object, "worst_gap", sweep->worst_gap_s, UNIT_MILLISECONDS);
	json_put(&object, "worst_value", count(sweep->worst_value));
	json_put_time(&object, "within", sweep->within_s, UNIT_MILLISECONDS);
	return object;
}

static void put_sweeps(json_t **object, const struct proofs *proofs)
{
	const struct plan *plan = plan_of(proofs);
	json_t *sweeps = json_array();
	for (size_t index = 0; index < plan->sweep_count; index++)
		json_append(&sweeps, sweep_json(&plan->sweeps[index], &proofs->sweeps[index]));
	json_put(object, "sweeps", sweeps);
}

static void put_figures(json_t **object, const struct proofs *proofs, enum proof_kind kind)
{
	switch (kind) {
	case PROOF_CLOSURE: put_closure(object, proofs); break;
	case PROOF_SIGNALS: put_signals(object, proofs); break;
	case PROOF_COLOUR: json_put_colour(object, proofs); break;
	case PROOF_POWER_UP: put_power_up(object, proofs); break;
	case PROOF_UPSET: put_upset(object, proofs); break;
	case PROOF_LIMITS: json_put_limits(object, proofs); break;
	case PROOF_GLITCHES: put_glitches(object, proofs); break;
	case PROOF_SPEED: put_speed(object, proofs); break;
	case PROOF_SWEEP: put_sweeps(object, proofs); break;
	case PROOF_COUNT: break;
	}
}

json_t *view_proof_json(const struct proofs *proofs, enum proof_kind kind)
{
	static const char *const verdict_words[] = {
		[VERDICT_PASS] = "pass", [VERDICT_FAIL] = "fail", [VERDICT_ABSENT] = "absent",
	};
	const struct proof *proof = &proofs->proof[kind];
	const char *reason = reason_of(proofs, kind);
	json_t *object = json_object();
	json_put(&object, "verdict", json_string(verdict_words[proof->verdict]));
	json_put(&object, "must", truth(proof_is_must(kind)));
	if (reason != NULL) {
		json_put(&object, "reason", json_string(reason));
		return object;
	}
	if (proof->verdict != VERDICT_ABSENT)
		put_figures(&object, proofs, kind);
	if (proof->verdict == VERDICT_FAIL && proof->counterexample.what != NULL)
		json_put(&object, "counterexample", counterexample_json(proofs, kind));
	return object;
}

json_t *view_proofs_json(const struct proofs *proofs)
{
	json_t *object = json_object();
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		json_put(&object, proof_name(kind), view_proof_json(proofs, kind));
	return object;
}
