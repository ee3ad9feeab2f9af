// Signals: every pin has the planned level in every cell, and every held state bit its value.
#include <inttypes.h>

#include "base/arena.h"
#include "proof/trial.h"

static const char *level_word(bool high)
{
	return high ? "high" : "low";
}

static size_t lowest_bit(uint64_t bits)
{
	size_t bit = 0;
	while ((bits >> bit & 1) == 0)
		bit++;
	return bit;
}

static const char *pin_words(const struct trial *trial, uint32_t cell, size_t index)
{
	const struct plan *plan = trial->timeline->plan;
	const struct signal *signal = &plan->signals[index];
	bool high = (trial->lap.pins[cell] >> index & 1) == signal->active_high;
	if (signal->origin == FROM_DATA)
		return arena_format(trial->proofs->arena, "%s is %s, expected %s", signal->name, level_word(high),
		                    level_word(!high));
	const struct field *field = &plan->machine.fields[signal->field];
	return arena_format(trial->proofs->arena, "%s is %s, expected %s: %s is 0x%" PRIX32 ", which stands for %s%s", signal->name,
	                    level_word(high), level_word(!high), field->name, field_value(field, trial->lap.states[cell]),
	                    level_word(high), signal->auto_codes ? " elsewhere in the frame" : "");
}

uint32_t first_judged_cell(const struct trial *trial)
{
	return trial->lap.closed || trial->wiring.line.outputs == OUTPUTS_DIRECT ? 0 : 1;
}

// The cells in which latched pins show what the lap came to at its end: of a line-frame machine, the first line.
static uint32_t latched_cells(const struct trial *trial)
{
	if (trial->wiring.form == FORM_LINE_FRAME && trial->wiring.frame.outputs == OUTPUTS_REGISTERED)
		return trial->timeline->types[trial->timeline->lines[0].type].cells;
	return 1;
}

uint64_t sure_pins(const struct trial *trial, uint32_t cell)
{
	if (trial->lap.closed || cell >= latched_cells(trial))
		return UINT64_MAX;
	const uint64_t line = cell < first_judged_cell(trial) ? trial->wiring.line.data_signals : 0;
	return ~(trial->wiring.frame.outputs == OUTPUTS_REGISTERED ? trial->wiring.frame.data_signals | line : line);
}

static uint64_t wrong_pins(const struct trial *trial, uint32_t cell)
{
	return (trial->lap.pins[cell] ^ trial->expected[cell]) & sure_pins(trial, cell);
}

// The first cell with a wrong pin; UINT32_MAX if there is none. Cell 0 is the last where it is not judged.
static uint32_t first_wrong_pin(const struct trial *trial)
{
	const uint32_t cells = trial->timeline->cell_count, first = first_judged_cell(trial);
	for (uint32_t index = 0; index < cells; index++) {
		const uint32_t cell = (first + index) % cells;
		if (wrong_pins(trial, cell) != 0)
			return cell;
	}
	return UINT32_MAX;
}

// The first cell with a wrong pin that is judged last; UINT32_MAX if there is none.
static uint32_t first_unsure_pin(const struct trial *trial)
{
	for (uint32_t cell = 0; cell < latched_cells(trial); cell++)
		if (trial->lap.pins[cell] != trial->expected[cell])
			return cell;
	return UINT32_MAX;
}

static struct counterexample pin_fault(const struct trial *trial, uint32_t cell, uint64_t wrong)
{
	size_t signal = lowest_bit(wrong);
	struct counterexample found = blame_pin(trial, cell, signal);
	found.what = pin_words(trial, cell, signal);
	return found;
}

static const char *held_words(const struct trial *trial, uint32_t cell, uint32_t wrong)
{
	const struct machine_plan *machine = &trial->timeline->plan->machine;
	const uint32_t mask_of_stage = (uint32_t)(((uint64_t)1 << trial->wiring.line.state_bits) - 1);
	const uint32_t state = trial->lap.states[cell] & mask_of_stage, held = trial->timeline->hold_value[cell];
	const char *name = trial->wiring.form == FORM_LOOP ? "state" : "H";
	for (size_t index = 0; index < machine->field_count; index++) {
		const struct field *field = &machine->fields[index];
		uint32_t mask = field_mask(field);
		if ((mask & wrong) != 0 && (mask & ~trial->timeline->hold_mask[cell]) == 0)
			return arena_format(trial->proofs->arena, "%s is %" PRIu32 ", expected %" PRIu32 " (%s 0x%" PRIX32 ")",
			                    field->name, field_value(field, state), field_value(field, held), name, state);
	}
	return arena_format(trial->proofs->arena, "held bits of %s 0x%" PRIX32 " are 0x%" PRIX32 ", expected 0x%" PRIX32,
	                    name, state, state & trial->timeline->hold_mask[cell], held);
}

uint32_t wrong_held_bits(const struct trial *trial, uint32_t cell, uint32_t state)
{
	const struct timeline *timeline = trial->timeline;
	return timeline->hold_mask == NULL ? 0 : (state ^ timeline->hold_value[cell]) & timeline->hold_mask[cell];
}

// The first cell with a wrong held bit; UINT32_MAX if there is none.
static uint32_t first_wrong_held(const struct trial *trial)
{
	for (uint32_t cell = 0; cell < trial->timeline->cell_count; cell++)
		if (wrong_held_bits(trial, cell, trial->lap.states[cell]) != 0)
			return cell;
	return UINT32_MAX;
}

static struct counterexample held_fault(const struct trial *trial, uint32_t cell)
{
	uint32_t wrong = wrong_held_bits(trial, cell, trial->lap.states[cell]);
	struct counterexample found = blame_next(trial, cell_before(trial, cell), wrong);
	found.cell = cell;
	found.what = held_words(trial, cell, wrong);
	return found;
}

static uint64_t held_cells(const struct timeline *timeline)
{
	uint64_t count = 0;
	for (uint32_t cell = 0; timeline->hold_mask != NULL && cell < timeline->cell_count; cell++)
		count += timeline->hold_mask[cell] != 0;
	return count;
}

uint32_t signals_first_cell(const struct trial *trial)
{
	const uint32_t pin_cell = first_wrong_pin(trial), held_cell = first_wrong_held(trial);
	const bool pin_is_last = pin_cell < first_judged_cell(trial);
	return pin_is_last || held_cell < pin_cell ? held_cell : pin_cell;
}

// Whether the frame stage stepped at the edge that begins a cell although no line does, or the other way round.
static bool stepped_wrongly(const struct trial *trial, uint32_t cell)
{
	return machine_steps(trial->machine, trial->lap.states[cell - 1]) != (timeline_place(trial->timeline, cell).cell == 0);
}

// Whether a fault shows the states of a machine that went astray before, rather than a wrong byte. A latched pin of the
// first cell off the way is stored in the row that leads there, and one of the lap's first cells comes from its end.
static bool is_astray(const struct trial *trial, uint32_t cell, const struct counterexample *found)
{
	const bool data_pin = found->signal != SIZE_MAX && signal_is_data(&trial->timeline->plan->signals[found->signal]);
	const bool direct = wiring_stage(&trial->wiring, found->stage)->outputs == OUTPUTS_DIRECT;
	const uint32_t from_end = found->stage == STAGE_LINE ? 1 : latched_cells(trial);
	if (data_pin && !direct && cell < from_end)
		return trial->departed_cell != UINT32_MAX;
	if (cell != trial->departed_cell || found->signal == SIZE_MAX)
		return cell > trial->departed_cell;
	if (!data_pin) // whose codes are read only before
		return trial->wiring.form == FORM_LINE_FRAME && trial->timeline->plan->signals[found->signal].auto_codes;
	return direct || (found->stage == STAGE_FRAME && stepped_wrongly(trial, cell));
}

// The fault of the first cell that has one, or (with cell UINT32_MAX) of the latched pins that are judged last.
static struct counterexample first_fault(const struct trial *trial, uint32_t cell)
{
	if (cell == UINT32_MAX) {
		const uint32_t last_cell = first_unsure_pin(trial);
		struct counterexample last = pin_fault(trial, last_cell, trial->lap.pins[last_cell] ^ trial->expected[last_cell]);
		blame_other_proof(trial, PROOF_CLOSURE, &last);
		return last;
	}
	const bool pin = cell >= first_judged_cell(trial) && wrong_pins(trial, cell) != 0;
	struct counterexample found = pin ? pin_fault(trial, cell, wrong_pins(trial, cell)) : held_fault(trial, cell);
	if (is_astray(trial, cell, &found))
		blame_other_proof(trial, PROOF_CLOSURE, &found);
	return found;
}

#define FEW_CELLS 8u

// How many cells show something else than planned, each state counted once.
static uint32_t count_wrong_cells(const struct trial *trial)
{
	uint32_t count = 0;
	for (uint32_t cell = 0; cell < trial->lap.return_cells; cell++)
		count += trial->lap.pins[cell] != trial->expected[cell] || wrong_held_bits(trial, cell, trial->lap.states[cell]) != 0;
	return count;
}

// More wrong cells than a byte or two would make, in a frame that closes, are another plan's. NULL if there are few, or memory is out.
static const char *other_plan_hint(const struct trial *trial)
{
	const bool counts = trial->wiring.form == FORM_LOOP && trial->lap.closed; // a row of a line stage shows in many lines
	const uint32_t wrong = counts ? count_wrong_cells(trial) : 0;
	if (wrong <= FEW_CELLS)
		return NULL;
	return arena_format(trial->proofs->arena, "%" PRIu32 " states show something else than planned: are these images of this "
	                    "plan? compare the CRC-32 in its manifest", wrong);
}

bool prove_signals(struct trial *trial)
{
	struct signals_result *result = &trial->proofs->signals;
	const struct timeline *timeline = trial->timeline;
	result->comparisons += (uint64_t)timeline->cell_count * timeline->plan->signal_count;
	result->held_comparisons += held_cells(timeline);
	const uint32_t cell = signals_first_cell(trial);
	if (cell == UINT32_MAX && first_unsure_pin(trial) == UINT32_MAX)
		return true;
	struct counterexample found = first_fault(trial, cell);
	if (found.hint == NULL)
		found.hint = other_plan_hint(trial);
	return proof_fails(trial, PROOF_SIGNALS, found);
}
