#include "base/arena.h"
#include "base/diagnostics.h"
#include "layout/timeline.h"
#include "proof/decoder.h"
#include "proof/lift_work.h"

// The whole state after power-up: what a cleared latch holds, or the plan's start.
static uint32_t power_up_state(const struct lifting *lifting)
{
	const struct machine_plan *machine = &lifting->plan->machine;
	const bool counts = machine->line.advance == ADVANCE_COUNT;
	return machine_settle(lifting->machine, machine->has_start && !counts ? machine->start : 0);
}

static bool mark(uint64_t *seen, uint32_t state)
{
	const uint64_t bit = (uint64_t)1 << state % 64;
	const bool first = (seen[state / 64] & bit) == 0;
	seen[state / 64] |= bit;
	return first;
}

// Finds a state of the loop, and how long the loop and the way there are.
static bool find_loop(struct lifting *lifting, uint32_t *in_loop)
{
	struct lift *lift = lifting->lift;
	uint64_t *seen = arena_array(lifting->arena, ((size_t)1 << lifting->at.bits) / 64 + 1, sizeof *seen);
	if (seen == NULL)
		return lift_memory(lifting);
	uint32_t state = lift->power_up_state, steps = 0, length = 0;
	for (; mark(seen, state); steps++)
		state = machine_next(lifting->machine, state);
	*in_loop = state;
	do {
		state = machine_next(lifting->machine, state);
		length++;
	} while (state != *in_loop);
	lift->cell_count = length;
	lift->lead_in_cells = steps - length;
	if (length <= LIMIT_CELLS)
		return true;
	diagnose(lifting->diagnostics, RULE_LIFT_LOOP, lifting->place, "the loop of the images has %u cells, wanted at most %d", length,
	         LIMIT_CELLS);
	return false;
}

static uint64_t stage_pins(const struct lifting *lifting, enum stage stage, uint32_t state)
{
	const uint64_t levels = machine_row(lifting->machine, stage, machine_row_address(lifting->machine, stage, state)).levels;
	return (levels ^ levels_of(lifting->plan, 0)) & wiring_stage(&lifting->wiring, stage)->data_signals;
}

// What the frame stage's latch shows after each line of the loop is what its rows held during that line: pins[] gets them, from the first
// step on and around.
static void put_frame_pins(const struct lifting *lifting, uint64_t *pins)
{
	const struct lift *lift = lifting->lift;
	const bool latched = lifting->wiring.frame.outputs == OUTPUTS_REGISTERED;
	uint64_t shown = 0, row = 0;
	uint32_t first = 0;
	while (first < lift->cell_count && !lifting->ends[first])
		first++;
	if (first == lift->cell_count)
		return;
	row = stage_pins(lifting, STAGE_FRAME, lift->states[first]);
	for (uint32_t step = 0, cell = first; step < lift->cell_count; step++) {
		const uint32_t next = cell + 1 == lift->cell_count ? 0 : cell + 1;
		if (lifting->ends[cell]) {
			shown = row;
			row = stage_pins(lifting, STAGE_FRAME, lift->states[next]);
		}
		pins[next] |= latched ? shown : row;
		cell = next;
	}
}

static bool read_pins(struct lifting *lifting, uint64_t *pins)
{
	const struct lift *lift = lifting->lift;
	const bool latched = lifting->wiring.line.outputs == OUTPUTS_REGISTERED;
	struct decoders *decoders = decoders_create(lifting->arena, lifting->plan);
	if (decoders == NULL)
		return false;
	for (uint32_t cell = 0; cell < lift->cell_count; cell++) {
		const uint32_t state = lift->states[cell], next = cell + 1 == lift->cell_count ? 0 : cell + 1;
		pins[latched ? next : cell] |= stage_pins(lifting, STAGE_LINE, state);
		if (decoders->count > 0)
			pins[cell] |= decoders_pins(decoders, state);
	}
	if (lifting->ends != NULL)
		put_frame_pins(lifting, pins);
	return true;
}

// The timeline has at a cell what the pin showed `lead` cells before.
static void undo_leads(struct lifting *lifting, const uint64_t *pins)
{
	const struct lift *lift = lifting->lift;
	const int64_t count = lift->cell_count;
	uint64_t unled = 0;
	for (size_t index = 0; index < lifting->plan->signal_count; index++) {
		const int64_t lead = lifting->plan->signals[index].lead_cells;
		const uint64_t signal = (uint64_t)1 << index;
		uint32_t from = (uint32_t)(((-lead % count) + count) % count);
		unled |= lead == 0 ? signal : 0;
		for (uint32_t cell = 0; lead != 0 && cell < lift->cell_count; cell++) {
			lift->asserted[cell] |= pins[from] & signal;
			from = from + 1 == lift->cell_count ? 0 : from + 1;
		}
	}
	for (uint32_t cell = 0; cell < lift->cell_count; cell++)
		lift->asserted[cell] |= pins[cell] & unled;
}

static void list_states(struct lifting *lifting, uint32_t state)
{
	struct lift *lift = lifting->lift;
	for (uint32_t cell = 0; cell < lift->cell_count; cell++) {
		lift->states[cell] = state;
		if (lifting->ends != NULL)
			lifting->ends[cell] = machine_steps(lifting->machine, state);
		state = machine_next(lifting->machine, state);
	}
}

int64_t lifted_cell_ticks(const struct lifting *lifting, uint64_t asserted)
{
	const struct clock *clock = &lifting->plan->clock;
	return clock->cell_ticks + ((asserted & lifting->stretch_mask) != 0 ? clock->stretch_ticks : 0);
}

bool lift_walk(struct lifting *lifting)
{
	struct lift *lift = lifting->lift;
	uint32_t in_loop = 0;
	lift->power_up_state = power_up_state(lifting);
	if (!find_loop(lifting, &in_loop))
		return false;
	lift->states = arena_array(lift->arena, lift->cell_count, sizeof *lift->states);
	lift->asserted = arena_array(lift->arena, lift->cell_count, sizeof *lift->asserted);
	uint64_t *pins = arena_array(lifting->arena, lift->cell_count, sizeof *pins);
	if (lifting->wiring.form == FORM_LINE_FRAME) {
		lifting->ends = arena_alloc(lifting->arena, lift->cell_count);
		if (lifting->ends == NULL)
			return lift_memory(lifting);
	}
	if (lift->states == NULL || lift->asserted == NULL || pins == NULL)
		return lift_memory(lifting);
	list_states(lifting, in_loop);
	if (!read_pins(lifting, pins))
		return lift_memory(lifting);
	undo_leads(lifting, pins);
	for (uint32_t cell = 0; cell < lift->cell_count; cell++)
		lift->tick_count += lifted_cell_ticks(lifting, lift->asserted[cell]);
	return true;
}
