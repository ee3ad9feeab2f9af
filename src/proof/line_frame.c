#include "proof/line_frame.h"

#include <string.h>

#include "base/arena.h"

static uint32_t low_bits(unsigned bits)
{
	return (uint32_t)(((uint64_t)1 << bits) - 1);
}

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

// The line stage's state after the second step of a machine that is let run: by then even one that came up anywhere is
// at the start of a line.
static uint32_t find_line_start(const struct trial *trial, uint32_t state)
{
	const uint32_t mask = low_bits(trial->wiring.line.state_bits);
	unsigned steps = 0;
	state = machine_settle(trial->machine, state);
	for (uint64_t left = 2 * (uint64_t)trial->timeline->cell_count + 4 * ((uint64_t)mask + 1); left > 0 && steps < 2; left--) {
		steps += machine_steps(trial->machine, state);
		state = machine_next(trial->machine, state);
	}
	return steps == 2 ? state & mask : 0;
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
	return state | (has_start ? line_start : find_line_start(trial, state));
}

// What the pins of a stage show, as asserted signals.
static uint64_t stage_pins(const struct trial *trial, enum stage stage, uint32_t state)
{
	const uint64_t levels = machine_row(trial->machine, stage, machine_row_address(trial->machine, stage, state)).levels;
	return (levels ^ levels_of(trial->timeline->plan, 0)) & wiring_stage(&trial->wiring, stage)->data_signals;
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
