// How long a way home takes: a cell of it is stretched if the stretch pin was asserted `lead` cells before. What the pin showed
// before the way began nobody knows; it counts as not asserted.
#include "base/arena.h"
#include "proof/trial.h"

// The stretch signal along the way.
struct stretch_pin {
	const struct trial *trial;
	const struct signal *signal;
	uint64_t bit;
	bool latched;
	bool shown;      // by the latch
};

// What the row that a state reads says of the pin.
static bool row_asserts(const struct stretch_pin *pin, uint32_t state)
{
	const struct machine *machine = pin->trial->machine;
	const enum stage stage = pin->signal->stage;
	const uint64_t levels = machine_row(machine, stage, machine_row_address(machine, stage, state)).levels;
	return ((levels ^ levels_of(pin->trial->timeline->plan, 0)) & pin->bit) != 0;
}

static bool pin_asserted(const struct stretch_pin *pin, uint32_t state)
{
	if (pin->signal->origin == FROM_FIELD)
		return (decoders_pins(pin->trial->decoders, state) & pin->bit) != 0;
	return pin->latched ? pin->shown : row_asserts(pin, state);
}

// The edge that ends a state's cell: latches of the line stage follow each, those of the frame stage its steps.
static void pass_edge(struct stretch_pin *pin, uint32_t state)
{
	if (pin->latched && (pin->signal->stage == STAGE_LINE || machine_steps(pin->trial->machine, state)))
		pin->shown = row_asserts(pin, state);
}

int64_t way_ticks(const struct trial *trial, uint32_t state, uint32_t cells)
{
	const struct plan *plan = trial->timeline->plan;
	const int stretch = plan->role_signal[ROLE_STRETCH];
	int64_t ticks = cells * plan->clock.cell_ticks;
	if (stretch < 0)
		return ticks;
	struct stretch_pin pin = {.trial = trial, .signal = &plan->signals[stretch], .bit = (uint64_t)1 << stretch};
	pin.latched = wiring_stage(&trial->wiring, pin.signal->stage)->outputs == OUTPUTS_REGISTERED;
	const int64_t end = (int64_t)cells - pin.signal->lead_cells;
	for (int64_t cell = 0; cell < end; cell++) {
		if (cell + pin.signal->lead_cells >= 0 && pin_asserted(&pin, state))
			ticks += plan->clock.stretch_ticks;
		pass_edge(&pin, state);
		state = machine_next(trial->machine, state);
	}
	return ticks;
}
