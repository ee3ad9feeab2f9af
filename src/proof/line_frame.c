#include "proof/line_frame.h"

#include <string.h>

#include "base/arena.h"

// Starts of lines that are tried, should a fault let lines start differently.
#define MOST_STARTS 8u

// Whether the line stage's state is the number of the cell.
static bool numbers_cells(const struct trial *trial)
{
	if (trial->wiring.line.advance == ADVANCE_COUNT)
		return true;
	return !trial->timeline->has_holds && trial->decoders->count == 0 && !trial->timeline->plan->machine.has_start;
}

bool line_frame_number(struct trial *trial)
{
	const struct timeline *timeline = trial->timeline;
	const bool cells = numbers_cells(trial);
	uint32_t *numbered = arena_array(trial->proofs->arena, timeline->cell_count, sizeof *numbered);
	if (numbered == NULL)
		return false;
	for (uint32_t line = 0; line < timeline->line_count; line++) {
		const struct frame_line *place = &timeline->lines[line];
		for (uint32_t cell = 0; cell < timeline->types[place->type].cells; cell++)
			numbered[place->first_cell + cell] = line << trial->at.frame | (cells ? cell : 0);
	}
	trial->numbered = numbered;
	trial->numbered_bits = low_bits(trial->at.bits) & ~low_bits(trial->at.frame);
	if (cells)
		trial->numbered_bits |= low_bits(trial->wiring.line.state_bits);
	return true;
}

// What the pins of a stage show, as asserted signals.
static uint64_t stage_pins(const struct trial *trial, enum stage stage, uint32_t state)
{
	const uint64_t levels = machine_row(trial->machine, stage, machine_row_address(trial->machine, stage, state)).levels;
	return (levels ^ levels_of(trial->timeline->plan, 0)) & wiring_stage(&trial->wiring, stage)->data_signals;
}

// For how many cells a machine keeps to the frame, as far as the frame stage's state, held bits and the line stage's data
// outputs tell.
static uint32_t kept_cells(const struct trial *trial, uint32_t state)
{
	const uint32_t cells = trial->timeline->cell_count;
	const bool latched = trial->wiring.line.outputs == OUTPUTS_REGISTERED;
	for (uint32_t cell = 0; cell < cells; cell++) {
		const uint32_t shown_at = latched ? cell + 1 : cell;
		if ((state ^ trial->numbered[cell]) >> trial->at.frame != 0 || wrong_held_bits(trial, cell, state) != 0)
			return cell;
		if (shown_at < cells && ((stage_pins(trial, STAGE_LINE, state) ^ trial->expected[shown_at]) & trial->wiring.line.data_signals) != 0)
			return cell;
		state = machine_next(trial->machine, state);
	}
	return cells;
}

struct start_search {
	const struct trial *trial;
	uint32_t rest;              // of the state, but for the line stage's
	unsigned tried;
	uint32_t states[MOST_STARTS];
	uint32_t best, best_cells;
};

// True if there is no need to look further.
static bool try_start(struct start_search *search, uint32_t line_state)
{
	for (unsigned index = 0; index < search->tried; index++)
		if (search->states[index] == line_state)
			return false;
	search->states[search->tried++] = line_state;
	const uint32_t cells = kept_cells(search->trial, machine_settle(search->trial->machine, search->rest | line_state));
	if (search->tried == 1 || cells > search->best_cells) {
		search->best = line_state;
		search->best_cells = cells;
	}
	return search->best_cells == search->trial->timeline->cell_count || search->tried == MOST_STARTS;
}

// The state that most of the line stage's rows lead to: those of the last cells, and the spare ones. 0 when memory is out.
static uint32_t commonest_next(const struct trial *trial)
{
	const uint32_t mask = low_bits(trial->wiring.line.state_bits);
	uint32_t *counts = arena_array(trial->arena, (size_t)mask + 1, sizeof *counts), commonest = 0;
	for (uint32_t address = 0; counts != NULL && address >> trial->wiring.line.address_bits == 0; address++) {
		const uint32_t next = machine_row(trial->machine, STAGE_LINE, address).next;
		if (++counts[next] > counts[commonest])
			commonest = next;
	}
	return commonest;
}

// The line stage's state after a step of a machine that is let run: from the second on even one that came up anywhere is
// at the start of a line. Should lines start differently or never end, the one from which the frame is kept to the longest.
static uint32_t find_line_start(const struct trial *trial, uint32_t rest)
{
	const uint32_t mask = low_bits(trial->wiring.line.state_bits);
	struct start_search search = {.trial = trial, .rest = rest};
	uint32_t state = machine_settle(trial->machine, rest);
	unsigned steps = 0;
	for (uint64_t left = 2 * (uint64_t)trial->timeline->cell_count + 4 * ((uint64_t)mask + 1); left > 0; left--) {
		const bool stepped = machine_steps(trial->machine, state);
		state = machine_next(trial->machine, state);
		steps += stepped && steps < 2;
		if (stepped && steps == 2 && try_start(&search, state & mask))
			return search.best;
	}
	try_start(&search, commonest_next(trial));
	return search.best;
}

uint32_t line_frame_start(const struct trial *trial, bool has_start, uint32_t line_start)
{
	const struct timeline *timeline = trial->timeline;
	const struct feedback *at = &trial->at;
	uint32_t state = 0;
	if (at->has_step && timeline->types[timeline->lines[0].type].cells == 1)
		state |= (uint32_t)1 << at->step;
	if (at->kind_bits > 0)
		state |= (machine_row(trial->machine, STAGE_FRAME, timeline->line_count - 1).kind & low_bits(at->kind_bits)) << at->kind;
	if (has_start)
		return state | line_start;
	return numbers_cells(trial) ? state : state | find_line_start(trial, state);
}

// The pins of the frame stage, looked up when it steps.
struct frame_pins {
	bool latched;
	uint64_t row;        // of its state's row
	uint64_t shown;      // at the pins
	uint32_t first_cell; // latched: from which cell on they are known
};

static void frame_steps(const struct trial *trial, struct frame_pins *pins, uint32_t cell_after, uint32_t state_after)
{
	pins->shown = pins->row;
	pins->row = stage_pins(trial, STAGE_FRAME, state_after);
	if (!pins->latched)
		pins->shown = pins->row;
	else if (pins->first_cell > cell_after)
		pins->first_cell = cell_after;
}

void line_frame_lap(struct trial *trial, uint32_t start)
{
	struct lap *lap = &trial->lap;
	const struct machine *machine = trial->machine;
	const uint32_t cells = trial->timeline->cell_count, first = machine_settle(machine, start);
	const bool line_latched = trial->wiring.line.outputs == OUTPUTS_REGISTERED;
	struct frame_pins frame = {.latched = trial->wiring.frame.outputs == OUTPUTS_REGISTERED, .first_cell = cells};
	uint32_t state = first;
	frame.row = stage_pins(trial, STAGE_FRAME, state);
	frame.shown = frame.latched ? 0 : frame.row;
	memset(lap->pins, 0, cells * sizeof *lap->pins);
	lap->return_cells = 0;
	for (uint32_t cell = 0; cell < cells; cell++) {
		const bool steps = machine_steps(machine, state);
		lap->states[cell] = state;
		lap->pins[!line_latched ? cell : cell + 1 == cells ? 0 : cell + 1] |= stage_pins(trial, STAGE_LINE, state);
		lap->pins[cell] |= frame.shown;
		state = machine_next(machine, state);
		if (steps)
			frame_steps(trial, &frame, cell + 1, state);
		if (state == first && lap->return_cells == 0)
			lap->return_cells = cell + 1;
	}
	// What the latch shows in the first line it got at the end of the lap before.
	for (uint32_t cell = 0; frame.latched && cell < frame.first_cell; cell++)
		lap->pins[cell] |= frame.shown;
	lap->state_after = state;
	lap->closed = state == first && lap->return_cells % trial->period == 0;
}
