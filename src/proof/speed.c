// Speed: does the EEPROM path finish within the share of the shortest cell that it is given?
#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "proof/trial.h"

static bool carries(const struct chip *chip, unsigned kinds)
{
	for (unsigned pin = 0; pin < chip->part->data_pins; pin++)
		if (kinds >> chip->data[pin].kind & 1)
			return true;
	return false;
}

size_t slowest_chip(const struct wiring *wiring, enum stage stage, unsigned kinds)
{
	size_t slowest = SIZE_MAX;
	for (size_t chip = 0; chip < wiring->chip_count; chip++)
		if (wiring->chips[chip].stage == stage && carries(&wiring->chips[chip], kinds) &&
		    (slowest == SIZE_MAX || fraction_compare(wiring->chips[chip].access_s, wiring->chips[slowest].access_s) > 0))
			slowest = chip;
	return slowest;
}

static struct fraction larger(struct fraction left, struct fraction right)
{
	return fraction_compare(left, right) < 0 ? right : left;
}

// What must be stable before the next edge: the latch's inputs, the counter's clear, or both.
static struct fraction setup_of(const struct trial *trial, enum stage stage)
{
	const struct timing *timing = &trial->timeline->plan->timing;
	const struct stage_wiring *wired = wiring_stage(&trial->wiring, stage);
	if (wired->advance == ADVANCE_TABLE)
		return timing->latch_setup_s;
	if (wired->outputs == OUTPUTS_REGISTERED)
		return larger(timing->counter_setup_s[stage], timing->latch_setup_s);
	return timing->counter_setup_s[stage];
}

// What holds a stage's address: its own latch or counter, and for the line stage the latch of the kind too, the slower of both.
static struct fraction address_delay(const struct trial *trial, enum stage stage, bool *counter)
{
	const struct wiring *wiring = &trial->wiring;
	const struct timing *timing = &trial->timeline->plan->timing;
	const bool counts = wiring_stage(wiring, stage)->advance == ADVANCE_COUNT;
	const struct fraction own_s = counts ? timing->counter_delay_s[stage] : timing->latch_delay_s;
	const bool kind_latched = stage == STAGE_LINE && wiring->kind_bits > 0 && wiring->frame.outputs == OUTPUTS_REGISTERED;
	*counter = counts && !(kind_latched && fraction_compare(timing->latch_delay_s, own_s) > 0);
	return *counter || !counts ? own_s : timing->latch_delay_s;
}

// A look-up by the slowest of a stage's chips that carries one of some wires, at the address that is held or (without `delay`) that
// another chip answers.
static void add_pass(const struct trial *trial, enum stage stage, unsigned kinds, bool delay, struct speed_result *result)
{
	struct speed_pass *pass = &result->passes[result->pass_count++];
	*pass = (struct speed_pass){.has_delay = delay, .chip = slowest_chip(&trial->wiring, stage, kinds)};
	pass->delay_s = address_delay(trial, stage, &pass->counter);
	if (!delay)
		pass->delay_s = FRACTION_ZERO;
	pass->access_s = trial->wiring.chips[pass->chip].access_s;
}

// A stage's own look-ups. An asynchronous clear is looked up before the row of the state that it leads to.
static void add_stage(const struct trial *trial, enum stage stage, unsigned kinds, bool delay, struct speed_result *result)
{
	const bool clears = clears_at_once(wiring_stage(&trial->wiring, stage));
	if (clears)
		add_pass(trial, stage, 1u << DATA_CLEAR, delay, result);
	add_pass(trial, stage, kinds, delay || clears, result);
	if (!clears)
		return;
	// Once cleared, the counter alone moves: the kind has been there.
	struct speed_pass *cleared = &result->passes[result->pass_count - 1];
	cleared->counter = true;
	cleared->delay_s = trial->timeline->plan->timing.counter_delay_s[stage];
}

// Sums up. False if a figure does not fit 64 bits.
static bool finish(const struct trial *trial, int64_t ticks, struct speed_result *result)
{
	const struct plan *plan = trial->timeline->plan;
	struct fraction needed_s = result->setup_s;
	result->margin_s = plan->timing.margin_s;
	if (!fraction_divide(fraction_whole(ticks), plan->clock.master_hz, &result->cell_s) ||
	    !fraction_multiply(plan->timing.share, result->cell_s, &result->available_s))
		return false;
	for (unsigned pass = 0; pass < result->pass_count; pass++)
		if (!fraction_add(needed_s, result->passes[pass].delay_s, &needed_s) ||
		    !fraction_add(needed_s, result->passes[pass].access_s, &needed_s))
			return false;
	return fraction_add(needed_s, result->margin_s, &result->needed_s) &&
	       fraction_subtract(result->available_s, result->needed_s, &result->slack_s);
}

// The line stage's way; with `waits`, after that of a frame stage whose kind is not latched: both move at the end of a line.
static bool measure_cell(const struct trial *trial, bool waits, struct speed_result *result)
{
	const struct wiring *wiring = &trial->wiring;
	*result = (struct speed_result){.setup_s = setup_of(trial, STAGE_LINE)};
	if (wiring->form == FORM_LINE_FRAME && wiring->line.outputs == OUTPUTS_DIRECT) // step goes straight to the frame stage
		result->setup_s = larger(result->setup_s, setup_of(trial, STAGE_FRAME));
	if (waits)
		add_stage(trial, STAGE_FRAME, 1u << DATA_KIND, true, result);
	add_stage(trial, STAGE_LINE, ANY_WIRE, !waits, result);
	return finish(trial, trial->lap.shortest_ticks, result);
}

// The frame stage's own way, for which it has a whole line.
static bool measure_line(const struct trial *trial, struct speed_result *result)
{
	int64_t shortest = INT64_MAX;
	for (uint32_t line = 0; line < trial->timeline->line_count; line++)
		if (trial->lap.line_ticks[line] < shortest)
			shortest = trial->lap.line_ticks[line];
	*result = (struct speed_result){.of_line = true, .setup_s = setup_of(trial, STAGE_FRAME)};
	add_stage(trial, STAGE_FRAME, ANY_WIRE, true, result);
	return finish(trial, shortest, result);
}

static void keep_slower(struct speed_result *slowest, const struct speed_result *other)
{
	if (fraction_compare(other->slack_s, slowest->slack_s) < 0)
		*slowest = *other;
}

// The way with the least slack. False if a figure does not fit 64 bits.
static bool measure(const struct trial *trial, struct speed_result *result)
{
	const struct wiring *wiring = &trial->wiring;
	struct speed_result other;
	if (!measure_cell(trial, false, result))
		return false;
	if (wiring->form == FORM_LOOP)
		return true;
	if (!measure_line(trial, &other))
		return false;
	keep_slower(result, &other);
	if (wiring->kind_bits == 0 || wiring->frame.outputs == OUTPUTS_REGISTERED)
		return true;
	if (!measure_cell(trial, true, &other))
		return false;
	keep_slower(result, &other);
	return true;
}

bool prove_speed(struct trial *trial)
{
	struct speed_result result;
	if (!measure(trial, &result)) {
		proof_not_judged(trial, PROOF_SPEED, "not judged: the times do not fit fractions of 64 bits");
		return true;
	}
	struct proofs *proofs = trial->proofs;
	if (proofs->speed.pass_count == 0 || fraction_compare(result.slack_s, proofs->speed.slack_s) < 0)
		proofs->speed = result;
	if (result.slack_s.numerator < 0)
		proofs->proof[PROOF_SPEED].verdict = VERDICT_FAIL;
	return true;
}
