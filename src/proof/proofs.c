#include "proof/proof.h"

#include "base/arena.h"
#include "proof/frame_find.h"
#include "proof/line_frame.h"

struct proof_row {
	const char *name;
	bool must;
	bool (*prove)(struct trial *trial);
};

// In the order of design page 1.7; upset comes after power-up, whose ways it reads.
static const struct proof_row proof_rows[PROOF_COUNT] = {
	[PROOF_CLOSURE] = {"closure", true, prove_closure},
	[PROOF_SIGNALS] = {"signals", true, prove_signals},
	[PROOF_COLOUR] = {"colour", true, prove_colour},
	[PROOF_POWER_UP] = {"power-up", true, prove_power_up},
	[PROOF_UPSET] = {"upset", false, prove_upset},
	[PROOF_LIMITS] = {"limits", false, prove_limits},
	[PROOF_GLITCHES] = {"glitches", false, prove_glitches},
	[PROOF_SPEED] = {"speed", false, prove_speed},
	[PROOF_SWEEP] = {"sweep", true, prove_sweep},
};

const char *proof_name(enum proof_kind kind)
{
	return proof_rows[kind].name;
}

bool proof_is_must(enum proof_kind kind)
{
	return proof_rows[kind].must;
}

bool proofs_failed(const struct proofs *proofs, bool strict)
{
	for (unsigned kind = 0; kind < PROOF_COUNT; kind++)
		if (proofs->proof[kind].verdict == VERDICT_FAIL && (strict || proof_rows[kind].must))
			return true;
	return false;
}

static void zero_figures(struct proofs *proofs)
{
	const struct fraction zero = FRACTION_ZERO;
	proofs->colour.cycles_per_line = proofs->colour.cycles_per_frame = proofs->colour.out_of_step.by = zero;
	proofs->power_up.longest_lines = zero;
	proofs->upset.mean_cells = proofs->upset.worst_slip_lines = proofs->upset.mean_slip_cells = zero;
	proofs->glitches.settle_s = zero;
	for (unsigned stage = 0; stage < STAGE_COUNT; stage++)
		proofs->glitches.stages[stage].unsettled_s = proofs->glitches.stages[stage].clear_unsettled_s = zero;
	proofs->speed = (struct speed_result){.cell_s = zero, .available_s = zero, .setup_s = zero, .margin_s = zero, .needed_s = zero,
	                                      .slack_s = zero};
	for (unsigned kind = 0; kind < PROOF_COUNT; kind++)
		proofs->proof[kind].counterexample.signal = SIZE_MAX;
}

struct proofs *proofs_alloc(const struct timeline *timeline)
{
	const struct plan *plan = timeline->plan;
	const struct fraction zero = FRACTION_ZERO;
	struct arena *arena = arena_create();
	struct proofs *proofs = arena == NULL ? NULL : arena_alloc(arena, sizeof *proofs);
	if (proofs == NULL) {
		arena_destroy(arena);
		return NULL;
	}
	proofs->arena = arena;
	proofs->timeline = timeline;
	proofs->sweeps = arena_array(arena, plan->sweep_count, sizeof *proofs->sweeps);
	proofs->codes = arena_array(arena, plan->signal_count, sizeof *proofs->codes);
	proofs->code_counts = arena_array(arena, plan->signal_count, sizeof *proofs->code_counts);
	if (proofs->sweeps == NULL || proofs->codes == NULL || proofs->code_counts == NULL) {
		arena_destroy(arena);
		return NULL;
	}
	zero_figures(proofs);
	for (size_t index = 0; index < plan->sweep_count; index++)
		proofs->sweeps[index] = (struct sweep_result){.worst_gap_s = zero, .within_s = plan->sweeps[index].within_s};
	return proofs;
}

static bool trial_prove(struct trial *trial, bool has_start, uint32_t start)
{
	trial->machine = machine_create(trial->arena, &trial->wiring, trial->images, trial->bank);
	if (trial->machine == NULL)
		return false;
	if (trial->wiring.form == FORM_LINE_FRAME)
		start = line_frame_start(trial, has_start, start);
	else if (!has_start && !frame_find(trial->arena, trial->timeline, &trial->wiring, trial->machine, trial->expected,
	                              trial->decoders, &start))
		return false;
	trial->has_start = has_start;
	trial->start = start;
	if (!lap_run(trial, start) || !lap_finish(trial))
		return false;
	for (unsigned kind = 0; kind < PROOF_COUNT; kind++)
		if (!proof_rows[kind].prove(trial))
			return false;
	return true;
}

// One bank after the other, each in memory of its own.
static bool prove_banks(struct trial *trial, bool has_start, uint32_t start_state)
{
	bool proved = true;
	for (uint32_t index = 0; proved && index < trial->proofs->banks; index++) {
		trial->bank = trial->proofs->bank_numbers[index];
		trial->first = index == 0;
		trial->lap = (struct lap){0};
		trial->departed_cell = UINT32_MAX;
		trial->ways = NULL;
		trial->arena = arena_create();
		proved = trial->arena != NULL && trial_prove(trial, has_start, start_state);
		arena_destroy(trial->arena);
	}
	return proved;
}

static void show_codes(const struct trial *trial)
{
	for (size_t index = 0; index < trial->decoders->count; index++) {
		const struct decoder *decoder = &trial->decoders->list[index];
		trial->proofs->codes[decoder->signal] = decoder->codes;
		trial->proofs->code_counts[decoder->signal] = decoder->code_count;
	}
}

// Lists the banks: the given ones, or all from 0 on. False when memory is out.
static bool list_banks(struct proofs *proofs, const uint32_t *bank_numbers, uint32_t banks)
{
	uint32_t *list = arena_array(proofs->arena, banks, sizeof *list);
	for (uint32_t index = 0; list != NULL && index < banks; index++)
		list[index] = bank_numbers != NULL ? bank_numbers[index] : index;
	proofs->bank_numbers = list;
	proofs->banks = banks;
	return list != NULL;
}

struct proofs *proofs_run(const struct timeline *timeline, const struct image *images, bool has_start, uint32_t start_state)
{
	return proofs_run_banks(timeline, images, NULL, (uint32_t)1 << timeline->plan->bank_bits, has_start, start_state);
}

struct proofs *proofs_run_banks(const struct timeline *timeline, const struct image *images, const uint32_t *bank_numbers, uint32_t banks,
                                bool has_start, uint32_t start_state)
{
	struct proofs *proofs = proofs_alloc(timeline);
	if (proofs == NULL || !list_banks(proofs, bank_numbers, banks)) {
		proofs_destroy(proofs);
		return NULL;
	}
	struct trial trial = {.proofs = proofs, .timeline = timeline, .images = images};
	trial.wiring = wiring_of(timeline->plan);
	trial.expected = timeline_pins(timeline, proofs->arena);
	trial.at = feedback_of(&trial.wiring);
	trial.period = trial.wiring.form == FORM_LINE_FRAME ? timeline->cell_count : timeline_period(timeline);
	trial.decoders = decoders_create(proofs->arena, timeline->plan);
	bool ready = trial.expected != NULL && trial.period != 0 && trial.decoders != NULL &&
	             (trial.wiring.form == FORM_LOOP || line_frame_number(&trial));
	if (!ready || !prove_banks(&trial, has_start, start_state)) {
		proofs_destroy(proofs);
		return NULL;
	}
	show_codes(&trial);
	return proofs;
}

void proofs_destroy(struct proofs *proofs)
{
	if (proofs != NULL)
		arena_destroy(proofs->arena);
}
