#include "table/solve.h"

#include <string.h>

#include "base/arena.h"
#include "table/attempt.h"
#include "table/closing.h"

// Without a start the first cell's state is free. Quiet edges come first: state 0, which a cleared latch holds, is
// taken where no other costs fewer jumps.
struct choice {
	struct solver *solver;
	struct arena *arena;
	uint32_t *states; // [period]: the quietest assignment so far
	uint64_t jumps;   // in it
	bool found;
};

// Keeps the solver's assignment if it is the quietest so far; of two alike, the one with state 0. False when memory is
// out.
static bool keep_if_quieter(struct choice *choice)
{
	const struct assignment *assignment = &choice->solver->assignment;
	const bool zero = assignment->state_of_cell[0] == 0;
	uint64_t jumps;
	if (!closing_count(assignment, choice->arena, &jumps))
		return false;
	if (choice->found && (jumps > choice->jumps || (jumps == choice->jumps && !zero)))
		return true;
	memcpy(choice->states, assignment->state_of_cell, assignment->constraints->period * sizeof *choice->states);
	choice->found = true;
	choice->jumps = jumps;
	return true;
}

// Tries a start under the codes as they are, and keeps what it finds if that is quieter.
static bool try_start(struct choice *choice, bool start_fixed, uint32_t start, struct faults *faults)
{
	struct faults failed = {.count = 0};
	if (attempt_start_again(choice->solver, start_fixed, start, &failed))
		return keep_if_quieter(choice) || faults_memory(faults);
	if (!choice->found)
		*faults = failed;
	return !failed.memory_out || faults_memory(faults);
}

// The lowest state with a code that the first cell may have and no other cell must; NO_STATE if there is none.
static uint32_t first_state(const struct assignment *assignment, uint32_t code)
{
	const struct constraints *constraints = assignment->constraints;
	const uint32_t decoder = constraints->decoder_mask;
	const uint32_t free = constraints->state_mask & ~(cell_mask(constraints, 0) | decoder);
	const uint32_t base = (cell_value(constraints, 0) & ~decoder) | state_of_code(assignment->codes, code);
	uint32_t subset = 0;
	do {
		if (assignment->owner[base | subset] == 0)
			return base | subset;
		subset = next_subset(subset, free);
	} while (subset != 0);
	return NO_STATE;
}

// A state for the first cell with which the frame can be closed most quietly: 0 if that is one; NO_STATE if none is
// known.
static uint32_t quietest_start(const struct assignment *assignment, const struct closing *closing)
{
	const uint32_t codes = assignment->codes->count;
	for (uint32_t code = 0; code < codes && closing->known; code++)
		if (closing->costs[code] == 0 && first_state(assignment, code) != NO_STATE)
			return first_state(assignment, code);
	return NO_STATE;
}

// Tries starts under the codes as they are, as far as one may be quieter than another. False when memory is out.
static bool try_starts(struct choice *choice, struct faults *faults)
{
	struct solver *solver = choice->solver;
	struct closing closing;
	solver->assignment.start_fixed = false;
	solver_fill_codes(solver);
	if (!assignment_begin(&solver->assignment, faults))
		return true;
	if (solver->assignment.state_of_cell[0] != NO_STATE)
		return try_start(choice, false, 0, faults);
	if (!closing_find(&closing, choice->arena, &solver->assignment))
		return faults_memory(faults);
	const uint32_t start = quietest_start(&solver->assignment, &closing);
	if (start != NO_STATE && start != 0 && !try_start(choice, true, start, faults))
		return false;
	if (!try_start(choice, true, 0, faults))
		return false;
	return (choice->found && closing.known) || try_start(choice, false, 0, faults);
}

// Chooses codes for state 0, and if that is not quiet enough, for any start.
static bool try_automatic(struct choice *choice, struct faults *faults)
{
	struct solver *solver = choice->solver;
	struct faults ignored = {.count = 0};
	if (attempt_start(solver, true, 0, &ignored) && !keep_if_quieter(choice))
		return faults_memory(faults);
	if (ignored.memory_out)
		return faults_memory(faults);
	if (choice->found && choice->jumps == 0)
		return true;
	if (attempt_start(solver, false, 0, choice->found ? &ignored : faults))
		return keep_if_quieter(choice) ? try_starts(choice, faults) : faults_memory(faults);
	return !ignored.memory_out || faults_memory(faults);
}

static bool choose_start(struct solver *solver, struct arena *arena, struct faults *faults)
{
	struct choice choice = {.solver = solver, .arena = arena};
	const size_t size = solver->constraints->period * sizeof *choice.states;
	choice.states = arena_array(arena, solver->constraints->period, sizeof *choice.states);
	if (choice.states == NULL)
		return faults_memory(faults);
	if (!(solver->automatic_count > 0 ? try_automatic(&choice, faults) : try_starts(&choice, faults)) || !choice.found)
		return false;
	memcpy(solver->assignment.state_of_cell, choice.states, size);
	faults->count = 0;
	return true;
}

// The start that the first cell had before, if that will do. False if not, or if memory is out, which `faults` says.
static bool keep_start(struct solver *solver, struct faults *faults)
{
	const uint32_t *preferred = solver->assignment.preferred;
	struct faults ignored = {.count = 0};
	const bool kept = preferred != NULL && preferred[0] <= solver->constraints->state_mask && attempt_start(solver, true, preferred[0], &ignored);
	faults->memory_out = faults->memory_out || ignored.memory_out;
	return kept;
}

bool solve_states(const struct constraints *constraints, struct arena *arena, const uint32_t *preferred, uint32_t *state_of_cell,
                  struct faults *faults)
{
	const struct machine_plan *machine = &constraints->plan->machine;
	struct solver solver;
	if (constraints->period > constraints->state_count) {
		struct fault fault = fault_at(RULE_STATES_SHORT, NO_CELL);
		fault.needed = constraints->period;
		fault.available = constraints->state_count;
		faults_add(faults, fault);
		return false;
	}
	if (!solver_create(&solver, arena, constraints, state_of_cell))
		return faults_memory(faults);
	solver.assignment.preferred = preferred;
	if (machine->has_start)
		return attempt_start(&solver, true, machine->start, faults);
	if (keep_start(&solver, faults))
		return true;
	return !faults->memory_out && choose_start(&solver, arena, faults);
}
