// Where a line-frame machine leaves the frame: its stages count lines and cells, so that the first wrong number tells.
#include <inttypes.h>

#include "base/arena.h"
#include "proof/line_frame.h"
#include "proof/line_jump.h"

// As wide as the stage's state everywhere else.
static const char *number_words(const struct trial *trial, const struct counterexample *found, const char *name, uint32_t number,
                                uint32_t expected)
{
	const int digits = (int)(wiring_stage(&trial->wiring, found->stage)->state_bits + 3) / 4;
	const char *bytes = next_bytes(trial, found->stage, found->state);
	if (bytes == NULL)
		return NULL;
	return arena_format(trial->proofs->arena, "the next %s is 0x%0*" PRIX32 " (%s), expected 0x%0*" PRIX32, name, digits, number, bytes,
	                    digits, expected);
}

// Step is asserted where it should not be, or the other way round.
static struct counterexample step_fault(const struct trial *trial, uint32_t cell, bool steps)
{
	struct counterexample found = blame_step(trial, cell);
	found.what = steps ? "step is asserted, expected only in the last cell of a line" : "step is not asserted in this last cell of the line";
	return found;
}

// The frame stage steps where it should not, or the other way round; or it goes to another line.
static struct counterexample frame_fault(const struct trial *trial, uint32_t cell, uint32_t state, uint32_t planned, bool line_ends)
{
	const bool steps = machine_steps(trial->machine, trial->lap.states[cell]);
	const unsigned shift = trial->at.frame;
	if (steps != line_ends)
		return step_fault(trial, cell, steps);
	struct counterexample found = blame_next(trial, cell, (state ^ planned) >> shift << shift);
	found.what = number_words(trial, &found, "V", state >> shift, planned >> shift);
	return found;
}

// The only line of a frame leads to itself, stepped or not; but latches of the frame stage that are never loaded hold
// what they came up with.
static bool never_loads(const struct trial *trial, uint32_t cell)
{
	return trial->timeline->line_count == 1 && trial->wiring.frame.outputs == OUTPUTS_REGISTERED &&
	       !machine_steps(trial->machine, trial->lap.states[cell]);
}

static struct counterexample line_fault(const struct trial *trial, uint32_t cell, uint32_t state, uint32_t planned)
{
	const uint32_t mask = low_bits(trial->wiring.line.state_bits);
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

static struct counterexample find_departure(const struct trial *trial)
{
	const struct timeline *timeline = trial->timeline;
	const struct lap *lap = &trial->lap;
	const uint32_t frame_bits = trial->numbered_bits >> trial->at.frame << trial->at.frame;
	const uint32_t line_mask = low_bits(trial->wiring.line.state_bits);
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
			if (cell + 1 == end && never_loads(trial, cell))
				return step_fault(trial, cell, false);
			if (cell + 1 == end && ((state ^ lap->states[0]) & line_mask) != 0)
				return line_fault(trial, cell, state, lap->states[0]);
		}
	}
	return lap->state_after != lap->states[0] ? end_fault(trial) : (struct counterexample){.present = false};
}

// The first cell with a held bit, a data pin or a pin of known codes wrong; UINT32_MAX if there is none. The latched pins of cell 0 come from the
// last cell, and count as wrong after it.
static uint32_t first_wrong_cell(const struct trial *trial)
{
	const uint64_t data = trial->wiring.line.data_signals | trial->wiring.frame.data_signals;
	const uint32_t cells = trial->timeline->cell_count;
	const bool latched = trial->wiring.line.outputs == OUTPUTS_REGISTERED;
	const uint64_t known = decoders_known(trial->decoders);
	bool at_end = false;
	for (uint32_t cell = 0; cell < cells; cell++) {
		const uint64_t decoded = (decoders_pins(trial->decoders, trial->lap.states[cell]) ^ trial->expected[cell]) & known;
		const uint64_t wrong = (trial->lap.pins[cell] ^ trial->expected[cell]) & data & sure_pins(trial, cell);
		const bool held = wrong_held_bits(trial, cell, trial->lap.states[cell]) != 0;
		at_end = at_end || (cell == 0 && latched && wrong != 0);
		if (held || decoded != 0 || (wrong != 0 && !(cell == 0 && latched)))
			return cell;
	}
	return at_end ? cells : UINT32_MAX;
}

// The first line of another kind than its type's number, no later than some cell.
static struct counterexample find_wrong_kind(const struct trial *trial, uint32_t until)
{
	const struct timeline *timeline = trial->timeline;
	struct counterexample found = {.present = false};
	for (uint32_t line = 0; line < timeline->line_count && timeline->lines[line].first_cell <= until; line++) {
		const uint32_t state = trial->lap.states[timeline->lines[line].first_cell], type = timeline->lines[line].type;
		const uint32_t kind = machine_row_address(trial->machine, STAGE_LINE, state) >> trial->wiring.line.state_bits;
		if (kind == type || trial->wiring.kind_bits == 0)
			continue;
		found = blame_kind(trial, line, kind ^ type);
		found.what = arena_format(trial->proofs->arena, "this line is of kind %" PRIu32 ", expected %" PRIu32 " (%s)", kind, type,
		                          timeline->plan->lines[type].name);
		break;
	}
	return found;
}

bool line_frame_depart(struct trial *trial)
{
	struct counterexample found = find_departure(trial), kind = {.present = false};
	const uint32_t wrong_at = first_wrong_cell(trial);
	bool certain = false;
	if (found.present && !find_line_jump(trial, wrong_at, &found, &certain))
		return false;
	if (found.present || wrong_at != UINT32_MAX)
		kind = find_wrong_kind(trial, found.present && found.cell < wrong_at ? found.cell : wrong_at);
	trial->departed_cell = kind.present ? kind.cell : found.present ? found.cell + 1 : UINT32_MAX;
	trial->departure = kind.present ? kind : found;
	trial->departure_certain = kind.present || certain;
	return !trial->departure.present || trial->departure.what != NULL;
}
