#include "table/guard.h"

#include "base/arena.h"

// Cells that are looked at for each bit: enough to pass a line of held cells.
#define CELLS_LIMIT 65536

static bool may_have(const struct constraints *constraints, const uint32_t *state_of_cell, uint32_t cell, uint32_t state)
{
	const uint32_t wrong_held = (state ^ cell_value(constraints, cell)) & cell_mask(constraints, cell);
	return wrong_held == 0 && ((state ^ state_of_cell[cell]) & constraints->decoder_mask) == 0;
}

static bool differ_in_one_bit(uint32_t left, uint32_t right)
{
	return __builtin_popcount(left ^ right) == 1;
}

// The last cell before `last` that may have the state and does not guard with its own; NO_CELL if there is none.
static uint32_t find_guard(const struct constraints *constraints, const uint32_t *state_of_cell, uint32_t first, uint32_t last, uint32_t state)
{
	for (uint32_t cell = last - 1, seen = 0; cell > first && seen < CELLS_LIMIT; cell--, seen++)
		if (may_have(constraints, state_of_cell, cell, state) && !differ_in_one_bit(state_of_cell[cell], state_of_cell[last]))
			return cell;
	return NO_CELL;
}

bool *guard_states(const struct constraints *constraints, struct arena *arena, const uint32_t *state_of_cell)
{
	bool *used = arena_array(arena, constraints->state_count, sizeof *used);
	for (uint32_t cell = 0; used != NULL && cell < constraints->period; cell++)
		used[state_of_cell[cell]] = true;
	return used;
}

void guard_last_state(const struct constraints *constraints, bool *used, uint32_t first, uint32_t last, uint32_t bits, uint32_t *state_of_cell)
{
	for (uint32_t bit = 1; last > first + 1 && bit != 0 && bit <= bits; bit <<= 1) {
		const uint32_t neighbour = state_of_cell[last] ^ bit;
		// A flipped bit that is held would show.
		if ((bit & bits) == 0 || used[neighbour] || (cell_mask(constraints, last) & bit) != 0)
			continue;
		const uint32_t cell = find_guard(constraints, state_of_cell, first, last, neighbour);
		if (cell == NO_CELL)
			continue;
		used[state_of_cell[cell]] = false;
		used[neighbour] = true;
		state_of_cell[cell] = neighbour;
	}
}
