#include "table/attempt.h"

#include <string.h>

#include "base/arena.h"
#include "table/search.h"
#include "table/walk.h"

void solver_fill_codes(struct solver *solver)
{
	for (size_t index = 0; index < solver->automatic_count; index++) {
		automatic_assert(&solver->automatic[index]);
		solver->choices[index] =
			(struct code_choice){solver->automatic[index].field, solver->automatic[index].asserted};
	}
	code_space_fill(&solver->codes, solver->choices, solver->automatic_count);
}

static bool assign(struct assignment *assignment, struct arena *arena, bool quietly, struct faults *faults)
{
	struct quiet *quiet = NULL;
	if (!assignment_begin(assignment, faults))
		return false;
	assignment_prefer(assignment, true);
	if (quietly && (quiet = quiet_create(arena, assignment)) == NULL)
		return faults_memory(faults);
	if (!assignment_hold(assignment, arena, quiet, faults))
		return false;
	assignment_prefer(assignment, false);
	return !quietly || walk_place(assignment, quiet, arena) || faults_memory(faults);
}

// Assigns states under the codes as they are. Without `quietly` it only finds out whether that can be done.
static bool try_codes(struct solver *solver, bool quietly, struct faults *faults)
{
	struct arena *arena = arena_create();
	if (arena == NULL)
		return faults_memory(faults);
	solver_fill_codes(solver);
	const bool assigned = assign(&solver->assignment, arena, quietly, faults);
	arena_destroy(arena);
	return assigned;
}

// Gives the pattern of a fault's cell more codes of some field. *shortage becomes a fault of the first field that has
// none to spare.
static enum repair repair_codes(struct solver *solver, const struct fault *fault, struct fault *shortage)
{
	enum repair best = REPAIR_HOPELESS;
	for (size_t index = 0; index < solver->automatic_count && best != REPAIR_DONE; index++) {
		const enum repair repair = automatic_repair(&solver->automatic[index], fault);
		if (repair == REPAIR_SHORT && best == REPAIR_HOPELESS)
			*shortage = automatic_fault(&solver->automatic[index], fault->cell);
		if (repair != REPAIR_HOPELESS)
			best = repair;
	}
	return best;
}

// Copies the labels of all fields to or from `labels`.
static void copy_labels(struct solver *solver, uint32_t *labels, bool back)
{
	for (size_t index = 0; index < solver->automatic_count; index++) {
		const struct automatic_field *field = &solver->automatic[index];
		if (back)
			memcpy(field->label, labels, field->values * sizeof *labels);
		else
			memcpy(labels, field->label, field->values * sizeof *labels);
		labels += field->values;
	}
}

// Tries labels that were found for quieter ones, which may be too few for the cells, and falls back on them.
static bool try_arranged(struct solver *solver, struct arena *arena, struct faults *faults)
{
	struct faults ignored = {.count = 0};
	size_t values = 0;
	for (size_t index = 0; index < solver->automatic_count; index++)
		values += solver->automatic[index].values;
	uint32_t *labels = arena_array(arena, values, sizeof *labels);
	if (labels == NULL)
		return faults_memory(faults);
	copy_labels(solver, labels, false);
	for (size_t index = 0; index < solver->automatic_count; index++)
		if (!automatic_arrange(&solver->automatic[index], arena))
			return faults_memory(faults);
	if (try_codes(solver, true, &ignored))
		return true;
	copy_labels(solver, labels, true);
	return ignored.memory_out ? faults_memory(faults) : try_codes(solver, true, faults);
}

static bool search_codes_in(struct solver *solver, struct arena *arena, struct faults *faults)
{
	struct fault fault;
	code_space_fill(&solver->codes, NULL, 0);
	const enum search_result result =
		search_labels(solver->automatic, solver->automatic_count, &solver->assignment, arena, &fault);
	if (result == SEARCH_MEMORY)
		return faults_memory(faults);
	faults->count = 0;
	if (result == SEARCH_FOUND)
		return try_arranged(solver, arena, faults);
	faults_add(faults, fault);
	return false;
}

static bool search_codes(struct solver *solver, struct faults *faults)
{
	struct arena *arena = arena_create();
	const bool found = arena != NULL ? search_codes_in(solver, arena, faults) : faults_memory(faults);
	arena_destroy(arena);
	return found;
}

static bool label_fields(struct solver *solver, struct faults *faults)
{
	bool good = true;
	for (size_t index = 0; index < solver->automatic_count; index++)
		good = automatic_label(&solver->automatic[index], &solver->assignment, solver->arena, faults) && good;
	return good;
}

// True if a cell's hold, or the start, fixes all bits of fields with automatic codes.
static bool holds_codes(const struct solver *solver, uint32_t cell)
{
	uint32_t bits = 0;
	for (size_t index = 0; index < solver->automatic_count; index++)
		bits |= field_mask(solver->automatic[index].field);
	return cell_is_fixed(&solver->assignment, cell) || (bits & ~cell_mask(solver->constraints, cell)) == 0;
}

// True if under the listed codes alone some code would do for a cell.
static bool listed_codes_allow(const struct solver *solver, uint32_t cell)
{
	const struct constraints *constraints = solver->constraints;
	const uint32_t decoder = constraints->decoder_mask;
	const uint32_t free = decoder & ~cell_mask(constraints, cell);
	uint64_t listed = constraints->field_signals;
	uint32_t subset = 0;
	for (size_t index = 0; index < solver->automatic_count; index++)
		listed &= ~solver->automatic[index].automatic;
	do {
		const uint32_t code = code_of_state(&solver->codes, (cell_value(constraints, cell) & decoder) | subset);
		if (((solver->codes.levels[code] ^ cell_levels(constraints, cell)) & listed) == 0)
			return true;
		subset = next_subset(subset, free);
	} while (subset != 0);
	return false;
}

// True if no choice of codes can mend a fault.
static bool is_beyond_codes(const struct solver *solver, const struct fault *fault)
{
	if (fault->rule == RULE_CODE_CONFLICT)
		return holds_codes(solver, fault->cell) || !listed_codes_allow(solver, fault->cell);
	if (fault->rule == RULE_STATE_SHARED)
		return holds_codes(solver, fault->cell) && holds_codes(solver, fault->other);
	return fault->rule == RULE_START_CONFLICT;
}

static bool has_fault_at(const struct faults *faults, uint32_t cell)
{
	for (size_t index = 0; index < faults->count; index++)
		if (faults->list[index].cell == cell || faults->list[index].other == cell)
			return true;
	return false;
}

// Drops the faults that a choice of codes may mend, if there are others, which it returns.
static size_t keep_beyond_codes(const struct solver *solver, struct faults *faults)
{
	size_t kept = 0;
	for (size_t index = 0; index < faults->count; index++)
		if (is_beyond_codes(solver, &faults->list[index]))
			faults->list[kept++] = faults->list[index];
	if (kept > 0)
		faults->count = kept;
	return kept;
}

// Adds the conflicts that codes chosen otherwise would leave too, of cells that have no fault yet.
static void add_listed_faults(struct solver *solver, struct faults *faults)
{
	struct faults more = {.count = 0};
	try_codes(solver, false, &more);
	for (size_t index = 0; index < more.count; index++) {
		const struct fault *fault = &more.list[index];
		const bool listed = fault->rule == RULE_START_CONFLICT ||
		                    (fault->rule == RULE_CODE_CONFLICT && !listed_codes_allow(solver, fault->cell));
		if (listed && !has_fault_at(faults, fault->cell))
			faults_add(faults, *fault);
	}
	faults->memory_out |= more.memory_out;
}

// Tries codes, with more of them for the cells at fault, as long as that is possible.
static enum repair try_repairs(struct solver *solver, struct fault *shortage, struct faults *faults)
{
	enum repair repair = REPAIR_DONE;
	while (repair == REPAIR_DONE) {
		faults->count = 0;
		if (try_codes(solver, true, faults))
			return REPAIR_DONE;
		if (faults->memory_out || keep_beyond_codes(solver, faults) > 0)
			return REPAIR_BEYOND;
		repair = repair_codes(solver, &faults->list[0], shortage);
	}
	return repair;
}

// Tries the codes that were there before. False if they will not do, or memory is out, which `faults` says.
static bool try_preferred(struct solver *solver, struct faults *faults)
{
	const uint32_t *preferred = solver->assignment.preferred;
	struct faults ignored = {.count = 0};
	bool good = preferred != NULL && label_fields(solver, &ignored);
	for (size_t index = 0; good && index < solver->automatic_count; index++)
		good = automatic_prefer(&solver->automatic[index], preferred, solver->arena) || faults_memory(&ignored);
	good = good && try_codes(solver, true, &ignored);
	faults->memory_out = faults->memory_out || ignored.memory_out;
	return good;
}

// Finds codes and states together. Faults that no codes can mend are left as they are.
static bool try_automatic(struct solver *solver, struct faults *faults)
{
	struct fault shortage = fault_at(RULE_CODES_SHORT, NO_CELL);
	if (try_preferred(solver, faults))
		return true;
	if (faults->memory_out)
		return false;
	if (!label_fields(solver, faults)) {
		add_listed_faults(solver, faults);
		return false;
	}
	const enum repair repair = try_repairs(solver, &shortage, faults);
	if (repair == REPAIR_DONE || repair == REPAIR_BEYOND)
		return repair == REPAIR_DONE;
	if (solver->automatic_count > 1 || !automatic_is_uncut(&solver->automatic[0]))
		return search_codes(solver, faults);
	if (repair == REPAIR_SHORT) {
		faults->count = 0;
		faults_add(faults, shortage);
	}
	return false;
}

bool attempt_start_again(struct solver *solver, bool start_fixed, uint32_t start, struct faults *faults)
{
	solver->assignment.start_fixed = start_fixed;
	solver->assignment.start = start;
	return try_codes(solver, true, faults);
}

bool attempt_start(struct solver *solver, bool start_fixed, uint32_t start, struct faults *faults)
{
	solver->assignment.start_fixed = start_fixed;
	solver->assignment.start = start;
	return solver->automatic_count > 0 ? try_automatic(solver, faults) : try_codes(solver, true, faults);
}

bool solver_create(struct solver *solver, struct arena *arena, const struct constraints *constraints,
                   uint32_t *state_of_cell)
{
	*solver = (struct solver){.arena = arena, .constraints = constraints};
	solver->choices = arena_array(arena, constraints->plan->machine.field_count, sizeof *solver->choices);
	return solver->choices != NULL && code_space_create(&solver->codes, arena, constraints) &&
	       assignment_create(&solver->assignment, arena, &solver->codes, state_of_cell) &&
	       automatic_create(arena, constraints, &solver->automatic, &solver->automatic_count);
}
