// Colour, limits and speed of a plan that has no images yet: the lap is the timeline itself, without states.
#include "base/arena.h"
#include "proof/trial.h"

static int64_t shortest_cell(const struct timeline *timeline)
{
	const struct clock *clock = &timeline->plan->clock;
	const int stretch = timeline->plan->role_signal[ROLE_STRETCH];
	for (uint32_t cell = 0; cell < timeline->cell_count; cell++)
		if (stretch < 0 || (timeline->asserted[cell] >> stretch & 1) == 0)
			return clock->cell_ticks;
	return clock->cell_ticks + clock->stretch_ticks;
}

static bool lap_of_plan(struct trial *trial)
{
	const struct timeline *timeline = trial->timeline;
	struct lap *lap = &trial->lap;
	lap->line_ticks = arena_array(trial->arena, timeline->line_count, sizeof *lap->line_ticks);
	if (lap->line_ticks == NULL)
		return false;
	for (uint32_t line = 0; line < timeline->line_count; line++)
		lap->line_ticks[line] = timeline->types[timeline->lines[line].type].ticks;
	lap->ticks = timeline->tick_count;
	lap->shortest_ticks = shortest_cell(timeline);
	lap->closed = true;
	return true;
}

struct proofs *proofs_of_plan(const struct timeline *timeline)
{
	struct proofs *proofs = proofs_alloc(timeline);
	if (proofs == NULL)
		return NULL;
	for (unsigned kind = 0; kind < PROOF_COUNT; kind++)
		if (kind != PROOF_COLOUR && kind != PROOF_LIMITS && kind != PROOF_SPEED)
			proofs->proof[kind].verdict = VERDICT_ABSENT;
	struct trial trial = {.proofs = proofs, .timeline = timeline, .first = true, .arena = arena_create(), .wiring = wiring_of(timeline->plan)};
	const bool judged = trial.arena != NULL && lap_of_plan(&trial) && prove_colour(&trial) && prove_limits(&trial) && prove_speed(&trial);
	arena_destroy(trial.arena);
	if (judged)
		return proofs;
	proofs_destroy(proofs);
	return NULL;
}
