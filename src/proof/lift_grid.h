// The values of some state bits over lines and columns, of which each line has the same steps. Internal to lifting.
#ifndef SCANLATCH_PROOF_LIFT_GRID_H
#define SCANLATCH_PROOF_LIFT_GRID_H

#include "proof/lift_fit.h"
#include "proof/lift_work.h"

struct grid {
	const uint32_t *states;        // of the loop
	unsigned low;                  // the bits
	uint32_t mask;                 // of a value
	uint32_t first_cell, width;    // of the first line's columns
	struct sequence rows, columns;
};

// Begins with a line whose columns are the cells first_cell …; false if these have no expression.
bool grid_start(struct grid *grid, const uint32_t *states, unsigned high, unsigned low, uint32_t first_cell, uint32_t width,
                bool by_modulus);
// Whether the line whose columns begin at a cell may follow; then it is taken. Cannot fail.
bool grid_take(struct grid *grid, uint32_t first_cell);
// The expression, in the lift's arena; NULL when memory is out. Of a line-frame machine, which has no rows, there is one line.
const char *grid_expression(const struct grid *grid, struct arena *arena);

#endif
