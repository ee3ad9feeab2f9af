#include "table/walk.h"

#include "base/arena.h"

#define ATTEMPTS                                                                                                       \
	16 // so many codes are tried for a held cell before it is left to be served without regard to quiet codes

// For each class and code where the search for a free state has come to.
struct cursors {
	struct key_map map; // class * number of codes + code
	uint32_t *subsets;  // of the free bits that are not decoded
	bool *exhausted;
	size_t limit;
};

static bool create_cursors(struct cursors *cursors, struct arena *arena, size_t limit)
{
	*cursors = (struct cursors){.limit = limit};
	cursors->subsets = arena_array(arena, limit, sizeof *cursors->subsets);
	cursors->exhausted = arena_array(arena, limit, sizeof *cursors->exhausted);
	return cursors->subsets != NULL && cursors->exhausted != NULL && key_map_create(&cursors->map, arena, limit, 0);
}

// The lowest state of a class with some code that nobody owns; NO_STATE if there is none (or no cursor is left to look
// with).
static uint32_t pick(const struct assignment *assignment, struct cursors *cursors, uint32_t class, uint32_t code)
{
	const struct constraints *constraints = assignment->constraints;
	const uint32_t decoder = constraints->decoder_mask;
	const uint32_t free = constraints->state_mask & ~(class_mask(constraints, class) | decoder);
	const uint32_t base = (class_value(constraints, class) & ~decoder) | state_of_code(assignment->codes, code);
	if (cursors->map.count == cursors->limit)
		return NO_STATE;
	const uint32_t cursor = key_map_add(&cursors->map, (uint64_t)class * assignment->codes->count + code);
	while (!cursors->exhausted[cursor] && assignment->owner[base | cursors->subsets[cursor]] != 0) {
		cursors->subsets[cursor] = next_subset(cursors->subsets[cursor], free);
		cursors->exhausted[cursor] = cursors->subsets[cursor] == 0;
	}
	return cursors->exhausted[cursor] ? NO_STATE : base | cursors->subsets[cursor];
}

static void place(struct assignment *assignment, struct quiet *quiet, uint32_t cell, uint32_t state)
{
	assignment_place(assignment, cell, state);
	if (assignment->remaining[code_of_state(assignment->codes, state)] == 0)
		quiet_replan(quiet);
}

// Chooses a cell's code, and with it its state if the cell is one of those that get theirs now.
static uint32_t choose_and_place(struct assignment *assignment, struct quiet *quiet, struct cursors *cursors,
                                 uint32_t cell, uint32_t previous, uint32_t first)
{
	uint32_t code = quiet_choose(quiet, cell, previous, first);
	for (unsigned attempt = 0; cursors != NULL && code != NO_CODE && attempt < ATTEMPTS; attempt++) {
		const uint32_t state = pick(assignment, cursors, assignment->constraints->class_of_cell[cell], code);
		if (state != NO_STATE) {
			place(assignment, quiet, cell, state);
			break;
		}
		quiet_exclude(quiet, cell, code);
		code = quiet_choose(quiet, cell, previous, first);
	}
	return code;
}

static unsigned count_bits(uint32_t bits)
{
	unsigned count = 0;
	for (; bits != 0; bits &= bits - 1)
		count++;
	return count;
}

// True if some cell that holds `width` bits has a choice of codes.
static bool has_choice(const struct constraints *constraints, unsigned width)
{
	for (uint32_t family = 0; family < constraints->families.count; family++) {
		const uint32_t mask = (uint32_t)(constraints->families.keys[family] >> 24);
		if (count_bits(mask) == width && (constraints->decoder_mask & ~mask) != 0)
			return true;
	}
	return false;
}

bool walk_hold(struct assignment *assignment, struct quiet *quiet, unsigned width, struct arena *arena)
{
	const struct constraints *constraints = assignment->constraints;
	const size_t held = constraints->held_start[constraints->classes.count];
	struct cursors cursors;
	uint32_t previous = NO_CODE, first = NO_CODE;
	if (!quiet_looks_ahead(quiet) || !has_choice(constraints, width))
		return true;
	if (!create_cursors(&cursors, arena, 2 * held))
		return false;
	quiet_begin(quiet);
	for (uint32_t cell = 0; cell < constraints->period && quiet_looks_ahead(quiet); cell++) {
		uint32_t code = quiet_settled(quiet, cell);
		const bool now = code == NO_CODE && count_bits(cell_mask(constraints, cell)) == width;
		if (code == NO_CODE)
			code = choose_and_place(assignment, quiet, now ? &cursors : NULL, cell, previous, first);
		if (cell == 0)
			first = code;
		previous = code;
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

bool walk_place(struct assignment *assignment, struct quiet *quiet, struct arena *arena)
{
	uint32_t *subsets = arena_array(arena, assignment->codes->count, sizeof *subsets);
	uint32_t previous = NO_CODE, first = NO_CODE;
	if (subsets == NULL)
		return false;
	quiet_begin(quiet);
	for (uint32_t cell = 0; cell < assignment->constraints->period; cell++) {
		uint32_t code = quiet_settled(quiet, cell);
		if (assignment->state_of_cell[cell] == NO_STATE) {
			if (code == NO_CODE)
				code = quiet_choose(quiet, cell, previous, first);
			place(assignment, quiet, cell, lowest_free(assignment, code, &subsets[code]));
		}
		if (cell == 0)
			first = code;
		previous = code;
	}
	return true;
}
