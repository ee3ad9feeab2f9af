// Closure: every line takes its cells and ticks, and the frame returns to its first cell after exactly its cells and
// ticks.
#include <inttypes.h>

#include "base/arena.h"
#include "proof/exchange.h"
#include "proof/jump.h"

// Of the frame, in which a machine with exchanged chips must have gone wrong.
#define FIRST_CELLS 256u

// `bytes`: the bytes that hold the next state, in words: " (…)", or nothing.
static const char *back_too_early(const struct trial *trial, const char *bytes)
{
	const struct lap *lap = &trial->lap;
	return arena_format(trial->proofs->arena, "the next state is 0x%" PRIX32 "%s, the frame's first: it came back after %"
	                    PRIu32 " cell%s, expected after %s%" PRIu32, lap->states[0], bytes, lap->return_cells,
	                    lap->return_cells == 1 ? "" : "s",
	                    trial->period < trial->timeline->cell_count ? "a multiple of " : "", trial->period);
}

static const char *back_elsewhere(const struct trial *trial, const char *bytes, uint32_t next, uint32_t used_at)
{
	const struct lap *lap = &trial->lap;
	return arena_format(trial->proofs->arena, "the next state is 0x%" PRIX32 "%s, which cell %" PRIu32
	                    " of the frame had already: expected a way back to the first state 0x%" PRIX32, next, bytes,
	                    used_at, lap->states[0]);
}

static const char *not_back(const struct trial *trial, const char *bytes)
{
	const struct lap *lap = &trial->lap;
	return arena_format(trial->proofs->arena, "the next state after the frame's %" PRIu32 " cells is 0x%" PRIX32
	                    "%s, expected the first state 0x%" PRIX32, trial->timeline->cell_count, lap->state_after, bytes,
	                    lap->states[0]);
}

static uint32_t state_after_cell(const struct lap *lap, uint32_t cell, uint32_t cells)
{
	return cell + 1 == cells ? lap->state_after : lap->states[cell + 1];
}

// The first cell whose next state the lap had before: *used_at is where. False if there is none; *memory_out tells why.
static bool find_repeat(const struct trial *trial, uint32_t *cell, uint32_t *used_at, bool *memory_out)
{
	const struct lap *lap = &trial->lap;
	const uint32_t cells = trial->timeline->cell_count;
	uint32_t *used = arena_array(trial->arena, (size_t)1 << trial->wiring.line.state_bits, sizeof *used);
	*memory_out = used == NULL;
	for (uint32_t index = 0; used != NULL && index < cells; index++) {
		used[lap->states[index]] = index + 1;
		uint32_t next = state_after_cell(lap, index, cells);
		if (used[next] == 0)
			continue;
		*cell = index;
		*used_at = used[next] - 1;
		return true;
	}
	return false;
}

// The bytes that hold the next state of a state, unless they are healthy. NULL when memory is out.
static const char *bytes_to_blame(const struct trial *trial, uint32_t state, bool healthy)
{
	const char *bytes = healthy ? "" : next_bytes(trial, STAGE_LINE, state);
	return healthy || bytes == NULL ? bytes : arena_format(trial->proofs->arena, " (%s)", bytes);
}

// Why the states are no loop that fits the frame. The words are NULL when memory is out. A pin or held bit that is
// wrong before says that the machine went astray earlier, unseen: then the row where it shows is as it should be.
static struct counterexample loop_fault(const struct trial *trial, uint32_t wrong_before)
{
	const struct lap *lap = &trial->lap;
	const uint32_t cells = trial->timeline->cell_count;
	uint32_t cell = cells - 1, used_at = 0, wrong_bits = UINT32_MAX;
	bool memory_out = false, repeats = false;
	if (lap->return_cells != 0)
		cell = lap->return_cells - 1;
	else
		repeats = find_repeat(trial, &cell, &used_at, &memory_out);
	uint32_t next = state_after_cell(lap, cell, cells);
	if (lap->return_cells == 0 && !repeats)
		wrong_bits = next ^ lap->states[0];
	struct counterexample found = blame_next(trial, cell, wrong_bits);
	const char *bytes = memory_out ? NULL : bytes_to_blame(trial, found.state, wrong_before <= cell);
	if (bytes == NULL)
		return found;
	found.what = lap->return_cells != 0 ? back_too_early(trial, bytes)
	             : repeats ? back_elsewhere(trial, bytes, next, used_at) : not_back(trial, bytes);
	return found;
}

static bool planned_long(const struct trial *trial, uint32_t cell)
{
	int stretch = trial->timeline->plan->role_signal[ROLE_STRETCH];
	return stretch >= 0 && (trial->timeline->asserted[cell] >> stretch & 1);
}

// The first cell of a line whose length is not as planned; the line's first if there is none.
static uint32_t wrong_length_cell(const struct trial *trial, const struct frame_line *line)
{
	const struct clock *clock = &trial->timeline->plan->clock;
	uint32_t cells = trial->timeline->types[line->type].cells;
	for (uint32_t cell = line->first_cell; cell < line->first_cell + cells; cell++) {
		int64_t planned = clock->cell_ticks + (planned_long(trial, cell) ? clock->stretch_ticks : 0);
		if (lap_cell_ticks(trial, cell) != planned)
			return cell;
	}
	return line->first_cell;
}

// Only a stretch signal makes lines longer or shorter.
static struct counterexample line_fault(const struct trial *trial, uint32_t line_index)
{
	const struct frame_line *line = &trial->timeline->lines[line_index];
	const uint32_t cell = wrong_length_cell(trial, line);
	const int stretch = trial->timeline->plan->role_signal[ROLE_STRETCH];
	struct counterexample found = blame_pin(trial, lap_stretch_cell(trial, cell), (size_t)stretch);
	found.cell = cell;
	found.what = arena_format(trial->proofs->arena, "the line takes %" PRId64 " ticks, expected %" PRId64
	                          ": this cell takes %" PRId64, trial->lap.line_ticks[line_index],
	                          trial->timeline->types[line->type].ticks, lap_cell_ticks(trial, cell));
	return found;
}

static bool find_wrong_line(const struct trial *trial, uint32_t *wrong)
{
	for (uint32_t index = 0; index < trial->timeline->line_count; index++) {
		if (trial->lap.line_ticks[index] != trial->timeline->types[trial->timeline->lines[index].type].ticks) {
			*wrong = index;
			return true;
		}
	}
	return false;
}

// A line of the wrong length, and the cell at whose pins that shows; UINT32_MAX if there is none. The latched pins of
// cell 0 come from where the lap ended, and say nothing if it did not end well.
struct line_fault {
	struct counterexample found;
	uint32_t shown_at;
};

static struct line_fault find_line_fault(const struct trial *trial)
{
	uint32_t line = 0;
	struct line_fault fault = {.shown_at = UINT32_MAX};
	if (!find_wrong_line(trial, &line))
		return fault;
	fault.found = line_fault(trial, line);
	const uint32_t cell = lap_stretch_cell(trial, fault.found.cell);
	const int stretch = trial->timeline->plan->role_signal[ROLE_STRETCH];
	if (cell >= first_judged_cell(trial) && (sure_pins(trial, cell) >> stretch & 1) != 0)
		fault.shown_at = cell;
	return fault;
}

// The loop that does not fit, unless the wrong line shows first. What may follow from a pin or held bit that is wrong
// before is not blamed on a byte, but a jump is certain.
static bool loop_fails(struct trial *trial, const struct line_fault *line, uint32_t wrong_before)
{
	bool certain = false;
	struct counterexample found = loop_fault(trial, wrong_before);
	if (!find_jump(trial, &found, &certain))
		return false;
	trial->departed_cell = found.cell + 1;
	const bool line_first = line->shown_at <= found.cell;
	const uint32_t shown_at = line_first ? line->shown_at : trial->departed_cell;
	if (line_first)
		found = line->found;
	if (wrong_before < shown_at && (line_first || !certain))
		blame_other_proof(trial, PROOF_SIGNALS, &found);
	if (!certain && !find_exchange(trial, &found.hint))
		return false;
	return proof_fails(trial, PROOF_CLOSURE, found);
}

static bool line_fails(struct trial *trial, struct line_fault *line, uint32_t wrong_before)
{
	if (wrong_before < line->shown_at)
		blame_other_proof(trial, PROOF_SIGNALS, &line->found);
	if (!find_exchange(trial, &line->found.hint))
		return false;
	return proof_fails(trial, PROOF_CLOSURE, line->found);
}

// What the lap found of the two stages.
static bool stages_fail(struct trial *trial, struct line_fault *line, uint32_t wrong_before)
{
	struct counterexample found = trial->departure;
	if (!found.present && !trial->lap.closed)
		return loop_fails(trial, line, wrong_before);
	if (!found.present)
		return !line->found.present || line_fails(trial, line, wrong_before);
	if (line->shown_at < trial->departed_cell)
		return line_fails(trial, line, wrong_before);
	if (!trial->departure_certain && wrong_before < trial->departed_cell)
		blame_other_proof(trial, PROOF_SIGNALS, &found);
	// Exchanged chips, and those of another plan, go wrong at once.
	if (trial->departed_cell <= FIRST_CELLS && !find_exchange(trial, &found.hint))
		return false;
	return proof_fails(trial, PROOF_CLOSURE, found);
}

bool prove_closure(struct trial *trial)
{
	struct closure_result *result = &trial->proofs->closure;
	if (trial->first) {
		*result = (struct closure_result){.lines = trial->timeline->line_count, .cells = trial->timeline->cell_count,
		                                  .ticks = trial->lap.ticks, .period_cells = trial->lap.return_cells,
		                                  .start_state = trial->lap.states[0]};
	}
	struct line_fault line = find_line_fault(trial);
	const uint32_t wrong_before = signals_first_cell(trial);
	if (trial->wiring.form == FORM_LINE_FRAME)
		return stages_fail(trial, &line, wrong_before);
	if (!trial->lap.closed)
		return loop_fails(trial, &line, wrong_before);
	return !line.found.present || line_fails(trial, &line, wrong_before);
}
