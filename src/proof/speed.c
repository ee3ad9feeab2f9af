// Speed: does the EEPROM path finish within the share of the shortest cell that it is given?
#include "base/arena.h"
#include "proof/trial.h"

size_t slowest_chip(const struct wiring *wiring)
{
	size_t slowest = 0;
	for (size_t chip = 1; chip < wiring->chip_count; chip++)
		if (fraction_compare(wiring->chips[chip].access_s, wiring->chips[slowest].access_s) > 0)
			slowest = chip;
	return slowest;
}

static struct fraction larger(struct fraction left, struct fraction right)
{
	return fraction_compare(left, right) < 0 ? right : left;
}

// What must be stable before the next edge: the latch's inputs, the counter's clear, or both.
static struct fraction setup_of(const struct wiring *wiring, const struct timing *timing)
{
	if (wiring->line.advance == ADVANCE_TABLE)
		return timing->latch_setup_s;
	if (wiring->line.outputs == OUTPUTS_REGISTERED)
		return larger(timing->counter_setup_s[STAGE_LINE], timing->latch_setup_s);
	return timing->counter_setup_s[STAGE_LINE];
}

// False if a figure does not fit 64 bits.
static bool measure(const struct trial *trial, struct speed_result *result)
{
	const struct plan *plan = trial->timeline->plan;
	const struct timing *timing = &plan->timing;
	const bool counts = trial->wiring.line.advance == ADVANCE_COUNT;
	result->slowest_chip = slowest_chip(&trial->wiring);
	result->delay_s = counts ? timing->counter_delay_s[STAGE_LINE] : timing->latch_delay_s;
	result->access_s = trial->wiring.chips[result->slowest_chip].access_s;
	result->setup_s = setup_of(&trial->wiring, timing);
	result->margin_s = timing->margin_s;
	result->second_pass = counts && trial->wiring.line.clear == CLEAR_ASYNC;
	struct fraction pass_s, needed_s;
	if (!fraction_divide(fraction_whole(trial->lap.shortest_ticks), plan->clock.master_hz, &result->cell_s) ||
	    !fraction_multiply(timing->share, result->cell_s, &result->available_s) ||
	    !fraction_add(result->delay_s, result->access_s, &pass_s))
		return false;
	needed_s = pass_s;
	if (result->second_pass && !fraction_add(needed_s, pass_s, &needed_s))
		return false;
	return fraction_add(needed_s, result->setup_s, &needed_s) &&
	       fraction_add(needed_s, result->margin_s, &result->needed_s) &&
	       fraction_subtract(result->available_s, result->needed_s, &result->slack_s);
}

bool prove_speed(struct trial *trial)
{
	struct speed_result result = {FRACTION_ZERO, FRACTION_ZERO, FRACTION_ZERO, FRACTION_ZERO, FRACTION_ZERO, FRACTION_ZERO,
	                              false, FRACTION_ZERO, FRACTION_ZERO, 0};
	if (!measure(trial, &result)) {
		proof_not_judged(trial, PROOF_SPEED, "not judged: the times do not fit fractions of 64 bits");
		return true;
	}
	struct proofs *proofs = trial->proofs;
	if (trial->bank == 0 || fraction_compare(result.slack_s, proofs->speed.slack_s) < 0)
		proofs->speed = result;
	if (result.slack_s.numerator < 0)
		proofs->proof[PROOF_SPEED].verdict = VERDICT_FAIL;
	return true;
}
