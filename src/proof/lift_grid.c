#include "proof/lift_grid.h"

#include "base/arena.h"
#include "base/text.h"

static int64_t value_at(const struct grid *grid, uint32_t cell)
{
	return grid->states[cell] >> grid->low & grid->mask;
}

bool grid_start(struct grid *grid, const uint32_t *states, unsigned high, unsigned low, uint32_t first_cell, uint32_t width,
                bool by_modulus)
{
	const uint32_t mask = low_bits(high - low + 1);
	const int64_t modulus = by_modulus ? (int64_t)mask + 1 : 0;
	*grid = (struct grid){.states = states, .low = low, .mask = mask, .first_cell = first_cell, .width = width};
	grid->rows = grid->columns = sequence_start(modulus);
	for (uint32_t column = 0; column < width; column++) {
		if (!sequence_takes(&grid->columns, value_at(grid, first_cell + column)))
			return false;
		sequence_add(&grid->columns, value_at(grid, first_cell + column));
	}
	sequence_add(&grid->rows, value_at(grid, first_cell));
	return true;
}

bool grid_take(struct grid *grid, uint32_t first_cell)
{
	const int64_t apart = value_at(grid, first_cell) - value_at(grid, grid->first_cell), modulus = grid->rows.modulus;
	if (!sequence_takes(&grid->rows, value_at(grid, first_cell)))
		return false;
	for (uint32_t column = 1; column < grid->width; column++) {
		const int64_t off = value_at(grid, first_cell + column) - value_at(grid, grid->first_cell + column) - apart;
		if (modulus == 0 ? off != 0 : off % modulus != 0)
			return false;
	}
	sequence_add(&grid->rows, value_at(grid, first_cell));
	return true;
}

const char *grid_expression(const struct grid *grid, struct arena *arena)
{
	struct text text = {0};
	const char *copy = NULL;
	sequences_put(&text, &grid->rows, "row", &grid->columns, "col", grid->rows.modulus);
	if (!text.failed)
		copy = arena_copy(arena, text_string(&text), text.length);
	text_release(&text);
	return copy;
}

const char *lift_expression(struct arena *arena, const uint32_t *states, unsigned high, unsigned low, const uint32_t *first_cells,
                            size_t lines, uint32_t width)
{
	for (unsigned by_modulus = 0; by_modulus < 2; by_modulus++) {
		struct grid grid;
		size_t line = 1;
		if (!grid_start(&grid, states, high, low, first_cells[0], width, by_modulus == 1))
			continue;
		while (line < lines && grid_take(&grid, first_cells[line]))
			line++;
		if (line == lines)
			return grid_expression(&grid, arena);
	}
	return NULL;
}
