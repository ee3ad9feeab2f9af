// Keeps a single wrong bit from going unseen. For the table's own use.
#ifndef SCANLATCH_TABLE_GUARD_H
#define SCANLATCH_TABLE_GUARD_H

#include "table/constraints.h"

// The last row of a loop's frame, or of a line of a line-frame machine, leads home with the first cell's signals, as spare rows do; so a wrong
// bit in the row before it, if it leads to a spare state, gives the same raster and no proof can tell. This gives the states that differ from the
// last cell's in one bit of `bits` to other cells between `first` and `last`, as far as their constraints allow, without changing any cell's code.
// `first`, where the machine comes home to, keeps its state. `used` are the states of all cells, see guard_states. Cannot fail.
void guard_last_state(const struct constraints *constraints, bool *used, uint32_t first, uint32_t last, uint32_t bits, uint32_t *state_of_cell);

// Marks the states of the cells: [state_count] in the arena. NULL when memory is out.
bool *guard_states(const struct constraints *constraints, struct arena *arena, const uint32_t *state_of_cell);

#endif
