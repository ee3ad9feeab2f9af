// The states of the cells. For the table's own use.
#ifndef SCANLATCH_TABLE_SOLVE_H
#define SCANLATCH_TABLE_SOLVE_H

#include "table/constraints.h"
#include "table/faults.h"

// Chooses states, and with them codes for signals with codes: auto, for a machine that advances by table, as quietly
// (see quiet.h) as is cheap to find. The first cell gets the plan's start or else, wherever that is possible and no
// noisier than another, state 0, which a cleared latch holds. False with faults if no assignment was found; without
// codes: auto there is none then, with it see automatic.h and search.c. state_of_cell[period] is then unspecified.
//
// preferred[period], or NULL: states that cells are to have where nothing stands against it, the first cell's before all else that is
// said here; NO_STATE: none.
bool solve_states(const struct constraints *constraints, struct arena *arena, const uint32_t *preferred, uint32_t *state_of_cell,
                  struct faults *faults);

// Checks that everything agrees with a counter whose states state_of_cell[period] are. False with faults if not.
bool count_states(const struct constraints *constraints, struct arena *arena, const uint32_t *state_of_cell,
                  struct faults *faults);

#endif
