// What is taken straight from the EEPROMs: for how long it is unsettled after an edge, and what the passing state of an
// asynchronous clear does to it.
#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "proof/trial.h"

// Nanoseconds of data sheets: far from 64 bits. Should they not fit, the second alone stands.
static struct fraction sum(struct fraction left, struct fraction right)
{
	struct fraction result = right;
	fraction_add(left, right, &result);
	return result;
}

static struct fraction delay_of(const struct trial *trial, enum stage stage)
{
	const struct timing *timing = &trial->timeline->plan->timing;
	return wiring_stage(&trial->wiring, stage)->advance == ADVANCE_COUNT ? timing->counter_delay_s[stage] : timing->latch_delay_s;
}

// From a step until the frame stage's chips have answered with the kind; an async clear is looked up before.
static struct fraction answer_time_of_kind(const struct trial *trial)
{
	const struct wiring *wiring = &trial->wiring;
	const struct fraction delay_s = delay_of(trial, STAGE_FRAME);
	const struct fraction kind_s = sum(delay_s, wiring->chips[slowest_chip(wiring, STAGE_FRAME, 1u << DATA_KIND)].access_s);
	if (!clears_at_once(&wiring->frame))
		return kind_s;
	return sum(sum(delay_s, wiring->chips[slowest_chip(wiring, STAGE_FRAME, 1u << DATA_CLEAR)].access_s), kind_s);
}

// From an edge until a chip of a stage has answered. The line stage's address is complete only when the kind is there, from its
// latch or, if it is not latched, straight from the frame stage's chips.
static struct fraction answer_time(const struct trial *trial, enum stage stage, size_t chip)
{
	const struct wiring *wiring = &trial->wiring;
	struct fraction address_s = delay_of(trial, stage);
	if (stage == STAGE_LINE && wiring->kind_bits > 0) {
		struct fraction kind_s = trial->timeline->plan->timing.latch_delay_s;
		if (wiring->frame.outputs == OUTPUTS_DIRECT)
			kind_s = answer_time_of_kind(trial);
		if (fraction_compare(kind_s, address_s) > 0)
			address_s = kind_s;
	}
	return sum(address_s, wiring->chips[chip].access_s);
}

// Clear is never latched. An asynchronous pin obeys it while the address settles; a synchronous one looks only at the edge.
static void measure_stage(const struct trial *trial, enum stage stage, struct stage_glitches *result)
{
	const struct stage_wiring *wired = wiring_stage(&trial->wiring, stage);
	const struct chip *chips = trial->wiring.chips;
	const size_t shown = slowest_chip(&trial->wiring, stage, 1u << DATA_SIGNAL | 1u << DATA_KIND | 1u << DATA_STEP);
	const size_t clears = clears_at_once(wired) ? slowest_chip(&trial->wiring, stage, 1u << DATA_CLEAR) : SIZE_MAX;
	if (wired->outputs == OUTPUTS_DIRECT && shown != SIZE_MAX) {
		result->direct = true;
		result->unsettled_part = chips[shown].label;
		result->unsettled_s = answer_time(trial, stage, shown);
	}
	if (clears != SIZE_MAX) {
		result->async_clear = true;
		result->clear_part = chips[clears].label;
		result->clear_unsettled_s = answer_time(trial, stage, clears);
	}
}

static uint64_t direct_pins(const struct trial *trial, enum stage stage, uint32_t state)
{
	const struct stage_wiring *wired = wiring_stage(&trial->wiring, stage);
	if (wired->outputs != OUTPUTS_DIRECT || (stage == STAGE_FRAME && trial->wiring.form == FORM_LOOP))
		return 0;
	const uint64_t levels = machine_row(trial->machine, stage, machine_row_address(trial->machine, stage, state)).levels;
	return (levels ^ levels_of(trial->timeline->plan, 0)) & wired->data_signals;
}

static uint64_t all_direct_pins(const struct trial *trial, uint32_t state)
{
	return direct_pins(trial, STAGE_LINE, state) | direct_pins(trial, STAGE_FRAME, state);
}

// A pin that has one level in the cells on both sides of an edge spikes if the passing state between them says another.
static void note_passing(struct trial *trial, enum stage stage, uint32_t from, uint32_t passing, uint32_t to)
{
	struct stage_glitches *result = &trial->proofs->glitches.stages[stage];
	const uint64_t between = all_direct_pins(trial, passing);
	if (!result->passes)
		result->passing_address = machine_row_address(trial->machine, stage, passing);
	result->passes = true;
	result->passing_pins |= (between ^ all_direct_pins(trial, from)) & (between ^ all_direct_pins(trial, to));
}

static void find_passing(struct trial *trial)
{
	const struct lap *lap = &trial->lap;
	const uint32_t line_mask = low_bits(trial->wiring.line.state_bits);
	for (uint32_t cell = 0; cell < trial->timeline->cell_count; cell++) {
		const uint32_t from = lap->states[cell], passing = machine_passing(trial->machine, from);
		const uint32_t to = cell + 1 < trial->timeline->cell_count ? lap->states[cell + 1] : lap->state_after;
		if (((passing ^ to) & line_mask) != 0)
			note_passing(trial, STAGE_LINE, from, passing, to);
		if ((passing ^ to) >> trial->at.frame != 0 && trial->wiring.form == FORM_LINE_FRAME)
			note_passing(trial, STAGE_FRAME, from, passing, to);
	}
}

void measure_unsettled(struct trial *trial)
{
	struct glitch_result *result = &trial->proofs->glitches;
	const unsigned stages = machine_stages(&trial->timeline->plan->machine);
	for (unsigned stage = 0; stage < stages; stage++)
		measure_stage(trial, (enum stage)stage, &result->stages[stage]);
	if (result->stages[STAGE_LINE].async_clear || result->stages[STAGE_FRAME].async_clear)
		find_passing(trial);
}
