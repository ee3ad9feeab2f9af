// Keeps a single wrong bit from going unseen. For the table's own use.
#ifndef SCANLATCH_TABLE_GUARD_H
#define SCANLATCH_TABLE_GUARD_H

#include "table/constraints.h"

// The last row of the frame leads home with the first cell's signals, as spare rows do; so a wrong bit in the row before it, if it leads to a
// spare state, gives the same raster and no proof can tell. This gives the states that differ from the last cell's in one bit to other cells of the
// frame, as far as their constraints allow, without changing any cell's code. False when memory is out.
bool guard_last_state(const struct constraints *constraints, struct arena *arena, uint32_t *state_of_cell);

#endif
