// Power-up: whatever the latches hold when the supply comes up, the machine reaches the frame.
#include <inttypes.h>

#include "base/arena.h"
#include "proof/trial.h"
#include "proof/ways.h"

static const char not_closed[] = "not judged: the frame does not close";

static void note_longest(struct trial *trial, struct power_up_result *result)
{
	const struct timeline *timeline = trial->timeline;
	if (!trial->first && trial->ways->longest_cells <= result->longest_cells)
		return;
	result->longest_cells = trial->ways->longest_cells;
	result->longest_state = trial->ways->longest_state;
	result->longest_bank = trial->bank;
	result->longest_ticks = way_ticks(trial, result->longest_state, result->longest_cells);
	// A frame has more cells than lines, so that both products keep below 2^48.
	fraction_make((int64_t)result->longest_cells * timeline->line_count, timeline->cell_count, &result->longest_lines);
}

// The states that a counter with an async clear passes through in no time.
static uint64_t count_cleared(const struct trial *trial)
{
	const uint32_t states = (uint32_t)1 << trial->at.bits;
	uint64_t count = 0;
	if (clears_at_once(&trial->wiring.line) || clears_at_once(&trial->wiring.frame))
		for (uint32_t state = 0; state < states; state++)
			count += machine_settle(trial->machine, state) != state;
	return count;
}

static bool loop_fails(struct trial *trial)
{
	const struct ways *ways = trial->ways;
	struct counterexample found = blame_loop(trial, ways->second_loop_state);
	const char *state = state_words(trial, ways->second_loop_state);
	if (state == NULL)
		found.what = NULL;
	if (found.what != NULL)
		found.what = arena_format(trial->proofs->arena, "state %s is on a second loop of %" PRIu32 " cell%s: %s", state,
		                          ways->second_loop_cells, ways->second_loop_cells == 1 ? "" : "s", found.what);
	return proof_fails(trial, PROOF_POWER_UP, found);
}

bool prove_power_up(struct trial *trial)
{
	struct power_up_result *result = &trial->proofs->power_up;
	if (!trial->lap.closed) {
		proof_not_judged(trial, PROOF_POWER_UP, not_closed);
		return true;
	}
	trial->ways = ways_find(trial->arena, trial->machine, &trial->wiring, trial->lap.states, trial->lap.return_cells);
	if (trial->ways == NULL)
		return false;
	result->states += (uint64_t)1 << trial->at.bits;
	result->cleared_states += count_cleared(trial);
	if (trial->lap.return_cells > result->frame_states)
		result->frame_states = trial->lap.return_cells;
	note_longest(trial, result);
	if (trial->ways->lost_states == 0)
		return true;
	if (result->lost_states == 0) {
		result->second_loop_state = trial->ways->second_loop_state;
		result->second_loop_cells = trial->ways->second_loop_cells;
	}
	result->lost_states += trial->ways->lost_states;
	return loop_fails(trial);
}
