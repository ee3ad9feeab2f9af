// Where a line-frame machine leaves the frame: its stages count lines and cells, so that the first wrong number tells.
#include <inttypes.h>

#include "base/arena.h"
#include "proof/line_frame.h"

static const char *number_words(const struct trial *trial, const struct counterexample *found, const char *name, uint32_t number,
                                uint32_t expected)
{
	const char *bytes = next_bytes(trial, found->stage, found->state);
	if (bytes == NULL)
		return NULL;
	return arena_format(trial->proofs->arena, "the next %s is 0x%" PRIX32 " (%s), expected 0x%" PRIX32, name, number, bytes, expected);
}

// The frame stage steps where it should not, or the other way round; or it goes to another line.
static struct counterexample frame_fault(const struct trial *trial, uint32_t cell, uint32_t state, uint32_t planned, bool line_ends)
{
	const bool steps = machine_steps(trial->machine, trial->lap.states[cell]);
	const unsigned shift = trial->at.frame;
	struct counterexample found;
	if (steps != line_ends) {
		found = blame_step(trial, cell);
		found.what = steps ? "step is asserted, expected only in the last cell of a line" : "step is not asserted in this last cell of the line";
		return found;
	}
	found = blame_next(trial, cell, (state ^ planned) >> shift << shift);
	found.what = number_words(trial, &found, "V", state >> shift, planned >> shift);
	return found;
}

static struct counterexample line_fault(const struct trial *trial, uint32_t cell, uint32_t state, uint32_t planned)
{
	const uint32_t mask = ((uint32_t)1 << trial->wiring.line.state_bits) - 1;
	struct counterexample found = blame_next(trial, cell, (state ^ planned) & mask);
	found.what = number_words(trial, &found, "H", state & mask, planned & mask);
	return found;
}

// The lap's numbers are right, but it ends with another kind or step than it began with, or in another cell.
static struct counterexample end_fault(const struct trial *trial)
{
	const struct lap *lap = &trial->lap;
	struct counterexample found = blame_next(trial, trial->timeline->cell_count - 1, lap->state_after ^ lap->states[0]);
	const char *after = state_words(trial, lap->state_after), *first = state_words(trial, lap->states[0]);
	if (after != NULL && first != NULL)
		found.what = arena_format(trial->proofs->arena, "the state after the frame is %s, expected the first, %s", after, first);
	return found;
}

struct counterexample line_frame_departure(const struct trial *trial)
{
	const struct timeline *timeline = trial->timeline;
	const struct lap *lap = &trial->lap;
	const uint32_t frame_bits = trial->numbered_bits >> trial->at.frame << trial->at.frame;
	for (uint32_t line = 0, cell = 0; line < timeline->line_count; line++) {
		const uint32_t end = timeline->lines[line].first_cell + timeline->types[timeline->lines[line].type].cells;
		for (; cell < end; cell++) {
			const uint32_t after = cell + 1 == timeline->cell_count ? 0 : cell + 1;
			const uint32_t state = cell + 1 == timeline->cell_count ? lap->state_after : lap->states[cell + 1];
			const uint32_t wrong = (state ^ trial->numbered[after]) & trial->numbered_bits;
			if ((wrong & frame_bits) != 0)
				return frame_fault(trial, cell, state, trial->numbered[after], cell + 1 == end);
			if (wrong != 0)
				return line_fault(trial, cell, state, trial->numbered[after]);
		}
	}
	return lap->state_after != lap->states[0] ? end_fault(trial) : (struct counterexample){.present = false};
}
