#include "base/arena.h"
#include "proof/line_frame.h"

static bool lap_alloc(struct trial *trial)
{
	const struct timeline *timeline = trial->timeline;
	struct lap *lap = &trial->lap;
	lap->states = arena_array(trial->arena, timeline->cell_count, sizeof *lap->states);
	lap->pins = arena_array(trial->arena, timeline->cell_count, sizeof *lap->pins);
	lap->line_ticks = arena_array(trial->arena, timeline->line_count, sizeof *lap->line_ticks);
	return lap->states != NULL && lap->pins != NULL && lap->line_ticks != NULL;
}

bool lap_run(struct trial *trial, uint32_t start)
{
	if (!lap_alloc(trial))
		return false;
	if (trial->wiring.form == FORM_LINE_FRAME) {
		line_frame_lap(trial, start);
		return true;
	}
	struct lap *lap = &trial->lap;
	const uint32_t cells = trial->timeline->cell_count;
	const uint64_t data = trial->wiring.line.data_signals, inverted = levels_of(trial->timeline->plan, 0);
	const bool registered = trial->wiring.line.outputs == OUTPUTS_REGISTERED;
	const bool counts = trial->wiring.line.advance == ADVANCE_COUNT;
	const uint32_t first = machine_settle(trial->machine, start);
	uint32_t state = first;
	lap->return_cells = 0;
	for (uint32_t cell = 0; cell < cells; cell++) {
		struct row row = machine_row(trial->machine, STAGE_LINE, state);
		uint32_t shown_at = !registered ? cell : cell + 1 == cells ? 0 : cell + 1;
		lap->states[cell] = state;
		lap->pins[shown_at] = (row.levels ^ inverted) & data;
		state = counts ? machine_next(trial->machine, state) : row.next;
		if (state == first && lap->return_cells == 0)
			lap->return_cells = cell + 1;
	}
	lap->state_after = state;
	lap->closed = state == first && lap->return_cells % trial->period == 0;
	return true;
}

uint32_t lap_stretch_cell(const struct trial *trial, uint32_t cell)
{
	const struct plan *plan = trial->timeline->plan;
	int64_t cells = trial->timeline->cell_count;
	int64_t shifted = (cell - plan->signals[plan->role_signal[ROLE_STRETCH]].lead_cells) % cells;
	return (uint32_t)(shifted < 0 ? shifted + cells : shifted);
}

int64_t lap_cell_ticks(const struct trial *trial, uint32_t cell)
{
	const struct plan *plan = trial->timeline->plan;
	int stretch = plan->role_signal[ROLE_STRETCH];
	if (stretch < 0 || (trial->lap.pins[lap_stretch_cell(trial, cell)] >> stretch & 1) == 0)
		return plan->clock.cell_ticks;
	return plan->clock.cell_ticks + plan->clock.stretch_ticks;
}

bool lap_finish(struct trial *trial)
{
	const struct timeline *timeline = trial->timeline;
	struct lap *lap = &trial->lap;
	const bool two = trial->wiring.form == FORM_LINE_FRAME;
	if (two && !line_frame_depart(trial))
		return false;
	// Off the frame states say nothing of codes.
	const uint32_t cells = two && trial->departed_cell < timeline->cell_count ? trial->departed_cell : timeline->cell_count;
	if (!decoders_read(trial->decoders, trial->proofs->arena, lap->states, trial->expected, cells))
		return false;
	if (trial->decoders->count > 0)
		for (uint32_t cell = 0; cell < timeline->cell_count; cell++)
			lap->pins[cell] |= decoders_pins(trial->decoders, lap->states[cell]);
	lap->ticks = 0;
	lap->shortest_ticks = INT64_MAX;
	for (uint32_t index = 0; index < timeline->line_count; index++) {
		const struct frame_line *line = &timeline->lines[index];
		uint32_t end = line->first_cell + timeline->types[line->type].cells;
		lap->line_ticks[index] = 0;
		for (uint32_t cell = line->first_cell; cell < end; cell++) {
			int64_t ticks = lap_cell_ticks(trial, cell);
			lap->line_ticks[index] += ticks;
			if (ticks < lap->shortest_ticks)
				lap->shortest_ticks = ticks;
		}
		lap->ticks += lap->line_ticks[index];
	}
	return true;
}
