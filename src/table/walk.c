#include "table/walk.h"

#include "base/arena.h"
#include "table/quiet.h"

bool walk_has_wishes(const struct constraints *constraints)
{
	for (uint32_t family = 0; family < constraints->families.count; family++) {
		const uint32_t mask = (uint32_t)(constraints->families.keys[family] >> 24);
		if (mask != 0 && (constraints->decoder_mask & ~mask) != 0)
			return true;
	}
	return false;
}

bool walk_wish(const struct assignment *assignment, struct arena *arena, uint32_t *wanted)
{
	struct quiet *quiet = quiet_create(arena, assignment);
	uint32_t previous = NO_CODE, first = NO_CODE;
	if (quiet == NULL)
		return false;
	for (uint32_t cell = 0; cell < assignment->constraints->period; cell++) {
		uint32_t code = quiet_looks_ahead(quiet) ? quiet_settled(quiet, cell) : NO_CODE;
		if (code == NO_CODE && quiet_looks_ahead(quiet))
			code = quiet_choose(quiet, cell, previous, first);
		if (cell == 0)
			first = code;
		wanted[cell] = previous = code;
	}
	return true;
}

// The lowest state with the code that nobody owns; there is one. `subset` is where to search from.
static uint32_t lowest_free(const struct assignment *assignment, uint32_t code, uint32_t *subset)
{
	const uint32_t free = assignment->constraints->state_mask & ~assignment->constraints->decoder_mask;
	const uint32_t base = state_of_code(assignment->codes, code);
	while (assignment->owner[base | *subset] != 0)
		*subset = next_subset(*subset, free);
	return base | *subset;
}

bool walk_place(struct assignment *assignment, struct arena *arena)
{
	struct quiet *quiet = quiet_create(arena, assignment);
	uint32_t *subsets = arena_array(arena, assignment->codes->count, sizeof *subsets);
	uint32_t previous = NO_CODE, first = NO_CODE;
	if (quiet == NULL || subsets == NULL)
		return false;
	for (uint32_t cell = 0; cell < assignment->constraints->period; cell++) {
		uint32_t code = quiet_settled(quiet, cell);
		if (assignment->state_of_cell[cell] == NO_STATE) {
			if (code == NO_CODE)
				code = quiet_choose(quiet, cell, previous, first);
			assignment_place(assignment, cell, lowest_free(assignment, code, &subsets[code]));
			if (assignment->remaining[code] == 0)
				quiet_replan(quiet);
		}
		if (cell == 0)
			first = code;
		previous = code;
	}
	return true;
}
