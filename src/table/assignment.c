#include "table/assignment.h"

#include <string.h>

#include "base/arena.h"

bool assignment_create(struct assignment *assignment, struct arena *arena, const struct code_space *codes,
                       uint32_t *state_of_cell)
{
	const struct constraints *constraints = codes->constraints;
	*assignment = (struct assignment){.constraints = constraints, .codes = codes, .state_of_cell = state_of_cell};
	assignment->owner = arena_array(arena, constraints->state_count, sizeof *assignment->owner);
	assignment->remaining = arena_array(arena, codes->count, sizeof *assignment->remaining);
	return assignment->owner != NULL && assignment->remaining != NULL;
}

static void clear(struct assignment *assignment)
{
	memset(assignment->owner, 0, assignment->constraints->state_count * sizeof *assignment->owner);
	for (uint32_t code = 0; code < assignment->codes->count; code++)
		assignment->remaining[code] = assignment->codes->states_each;
	for (uint32_t cell = 0; cell < assignment->constraints->period; cell++)
		assignment->state_of_cell[cell] = NO_STATE;
}

static bool levels_agree(const struct assignment *assignment, uint32_t cell, uint32_t state)
{
	return cell_levels(assignment->constraints, cell) ==
	       assignment->codes->levels[code_of_state(assignment->codes, state)];
}

static void place_start(struct assignment *assignment, struct faults *faults)
{
	const struct constraints *constraints = assignment->constraints;
	const uint32_t start = assignment->start;
	if ((start & cell_mask(constraints, 0)) == cell_value(constraints, 0) && levels_agree(assignment, 0, start)) {
		assignment_place(assignment, 0, start);
		return;
	}
	struct fault fault = fault_at(RULE_START_CONFLICT, 0);
	fault.state = start;
	faults_add(faults, fault);
}

// Gives a cell the only state that it may have.
static void place_only(struct assignment *assignment, uint32_t cell, uint32_t state, struct faults *faults)
{
	if (assignment->owner[state] == 0) {
		assignment_place(assignment, cell, state);
		return;
	}
	const uint32_t owner = assignment->owner[state] - 1;
	struct fault fault = fault_at(RULE_STATE_SHARED, owner < cell ? owner : cell);
	fault.other = owner < cell ? cell : owner;
	fault.state = state;
	faults_add(faults, fault);
}

static void place_fixed(struct assignment *assignment, struct faults *faults)
{
	const struct constraints *constraints = assignment->constraints;
	for (uint32_t cell = assignment->start_fixed; cell < constraints->period; cell++) {
		if (constraints->class_of_cell[cell] != CLASS_FIXED)
			continue;
		const uint32_t state = cell_value(constraints, cell);
		if (levels_agree(assignment, cell, state))
			place_only(assignment, cell, state, faults);
		else
			faults_add(faults, fault_at(RULE_CODE_CONFLICT, cell));
	}
}

// The first cell of a class, from `cell` on, that has no state; NO_CELL if there is none.
static uint32_t next_cell(const struct assignment *assignment, uint32_t class, uint32_t cell)
{
	const struct constraints *constraints = assignment->constraints;
	while (cell < constraints->period &&
	       (constraints->class_of_cell[cell] != class || assignment->state_of_cell[cell] != NO_STATE))
		cell++;
	return cell < constraints->period ? cell : NO_CELL;
}

// The only state of a class that has one.
static uint32_t only_state(const struct assignment *assignment, uint32_t class)
{
	const struct constraints *constraints = assignment->constraints;
	const uint32_t value = class_value(constraints, class);
	const uint32_t free = constraints->decoder_mask & ~class_mask(constraints, class);
	uint32_t subset = 0;
	while (assignment->codes->pattern_of_code[code_of_state(assignment->codes, value | subset)] !=
	       class_pattern(constraints, class))
		subset = next_subset(subset, free);
	return value | subset;
}

// All `cells` cells of a class share its only state, so more than one is a fault.
static void place_single(struct assignment *assignment, uint32_t class, uint32_t cells, struct faults *faults)
{
	const uint32_t state = only_state(assignment, class);
	uint32_t cell = assignment->constraints->class_first[class];
	for (; cells > 0 && !faults_full(faults, RULE_STATE_SHARED); cells--, cell++) {
		cell = next_cell(assignment, class, cell);
		place_only(assignment, cell, state, faults);
	}
}

// A held class may have a single state though not every bit is held; a free one is left to compare_counts.
static void place_singles(struct assignment *assignment, struct faults *faults)
{
	const struct constraints *constraints = assignment->constraints;
	for (uint32_t class = 0; class < constraints->classes.count; class++) {
		const bool has_start = assignment->start_fixed && constraints->class_of_cell[0] == class;
		const uint32_t cells = constraints->class_cells[class] - has_start;
		if (cells == 0)
			continue;
		const uint32_t states = class_states(assignment->codes, class);
		if (states == 1 && class_mask(constraints, class) != 0)
			place_single(assignment, class, cells, faults);
		else if (states == 0 && !faults_full(faults, RULE_CODE_CONFLICT))
			faults_add(faults,
			           fault_at(RULE_CODE_CONFLICT, next_cell(assignment, class, constraints->class_first[class])));
	}
}

static void compare_counts(const struct assignment *assignment, struct faults *faults)
{
	const struct constraints *constraints = assignment->constraints;
	const uint32_t *start = assignment->codes->pattern_start;
	for (uint32_t pattern = 0; pattern < constraints->patterns.count; pattern++) {
		const uint32_t states = (start[pattern + 1] - start[pattern]) * assignment->codes->states_each;
		if (constraints->pattern_cells[pattern] <= states)
			continue;
		struct fault fault = fault_at(RULE_STATES_SHORT, constraints->pattern_first[pattern]);
		fault.needed = constraints->pattern_cells[pattern];
		fault.available = states;
		faults_add(faults, fault);
	}
}

static bool suits(const struct assignment *assignment, uint32_t cell, uint32_t state)
{
	const struct constraints *constraints = assignment->constraints;
	return state <= constraints->state_mask && assignment->owner[state] == 0 &&
	       ((state ^ cell_value(constraints, cell)) & cell_mask(constraints, cell)) == 0 && levels_agree(assignment, cell, state);
}

void assignment_prefer(struct assignment *assignment, bool held)
{
	const struct constraints *constraints = assignment->constraints;
	for (uint32_t cell = 0; assignment->preferred != NULL && cell < constraints->period; cell++)
		if (assignment->preferred[cell] != NO_STATE && assignment->state_of_cell[cell] == NO_STATE &&
		    (cell_mask(constraints, cell) != 0) == held && suits(assignment, cell, assignment->preferred[cell]))
			assignment_place(assignment, cell, assignment->preferred[cell]);
}

bool assignment_begin(struct assignment *assignment, struct faults *faults)
{
	const size_t before = faults->count;
	clear(assignment);
	if (assignment->start_fixed)
		place_start(assignment, faults);
	place_fixed(assignment, faults);
	place_singles(assignment, faults);
	// Where there are kinds every cell is held, and only matching tells how many states it may have.
	if (faults->count == before && assignment->constraints->kind_mask == 0)
		compare_counts(assignment, faults);
	return faults->count == before;
}
