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

// The first cell with a wrong pin; UINT32_MAX if there is none. The latched pins of cell 0 come from where the lap ended: if it did not end well
// they are judged last, since what went wrong before says more.
static uint32_t first_wrong_pin(const struct trial *trial)
{
	const uint32_t cells = trial->timeline->cell_count, first = trial->lap.closed ? 0 : 1;
	for (uint32_t index = 0; index < cells; index++) {
		const uint32_t cell = (first + index) % cells;
		if (trial->lap.pins[cell] != trial->expected[cell])
			return cell;
	}
	return UINT32_MAX;
}

static struct counterexample pin_fault(const struct trial *trial, uint32_t cell)
{
	size_t signal = lowest_bit(trial->lap.pins[cell] ^ trial->expected[cell]);
	struct counterexample found = blame_pin(trial, cell, signal);
	found.what = pin_words(trial, cell, signal);
	return found;
}

static const char *held_words(const struct trial *trial, uint32_t cell, uint32_t wrong)
{
	const struct machine_plan *machine = &trial->timeline->plan->machine;
	uint32_t state = trial->lap.states[cell], held = trial->timeline->hold_value[cell];
	for (size_t index = 0; index < machine->field_count; index++) {
		const struct field *field = &machine->fields[index];
		uint32_t mask = field_mask(field);
		if ((mask & wrong) != 0 && (mask & ~trial->timeline->hold_mask[cell]) == 0)
			return arena_format(trial->proofs->arena, "%s is %" PRIu32 ", expected %" PRIu32 " (state 0x%" PRIX32 ")",
			                    field->name, field_value(field, state), field_value(field, held), state);
	}
	return arena_format(trial->proofs->arena, "held bits of state 0x%" PRIX32 " are 0x%" PRIX32 ", expected 0x%" PRIX32,
	                    state, state & trial->timeline->hold_mask[cell], held);
}

static uint32_t wrong_held_bits(const struct trial *trial, uint32_t cell)
{
	const struct timeline *timeline = trial->timeline;
	return (trial->lap.states[cell] ^ timeline->hold_value[cell]) & timeline->hold_mask[cell];
}

// The first cell with a wrong held bit; UINT32_MAX if there is none.
static uint32_t first_wrong_held(const struct trial *trial)
{
	if (trial->timeline->hold_mask == NULL)
		return UINT32_MAX;
	for (uint32_t cell = 0; cell < trial->timeline->cell_count; cell++)
		if (wrong_held_bits(trial, cell) != 0)
			return cell;
	return UINT32_MAX;
}

static struct counterexample held_fault(const struct trial *trial, uint32_t cell)
{
	uint32_t wrong = wrong_held_bits(trial, cell);
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

bool prove_signals(struct trial *trial)
{
	struct signals_result *result = &trial->proofs->signals;
	const struct timeline *timeline = trial->timeline;
	result->comparisons += (uint64_t)timeline->cell_count * timeline->plan->signal_count;
	result->held_comparisons += held_cells(timeline);
	uint32_t pin_cell = first_wrong_pin(trial), held_cell = first_wrong_held(trial);
	if (pin_cell == UINT32_MAX && held_cell == UINT32_MAX)
		return true;
	return proof_fails(trial, PROOF_SIGNALS,
	                   held_cell < pin_cell ? held_fault(trial, held_cell) : pin_fault(trial, pin_cell));
}
