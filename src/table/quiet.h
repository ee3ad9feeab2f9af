// Quiet codes: choosing codes so that from cell to cell at most one bit of each decoded field changes. For the table's
// own use.
#ifndef SCANLATCH_TABLE_QUIET_H
#define SCANLATCH_TABLE_QUIET_H

#include "table/assignment.h"

struct quiet;

// A chooser for the cells of an assignment, whose states it reads as they are when it plans ahead. Memory is the
// arena's; NULL when it is out.
struct quiet *quiet_create(struct arena *arena, const struct assignment *assignment);

// False when the fields have too many bits, or the frame changes too often, to look ahead; then only the code before
// counts. Cannot fail.
bool quiet_looks_ahead(const struct quiet *quiet);

// The code of a cell if it has a state or its hold leaves but one code, else NO_CODE. Cannot fail.
uint32_t quiet_settled(const struct quiet *quiet, uint32_t cell);

// Starts a walk over the cells; it may be one of several. Cannot fail.
void quiet_begin(struct quiet *quiet);

// Chooses the code of a cell that is not settled: one that its class allows, of which states remain, and which is not
// excluded; or NO_CODE if there is none. `previous` is the code of the cell before (NO_CODE for the first cell),
// `first` that of the first cell. Calls are for ascending cells. Cannot fail.
uint32_t quiet_choose(struct quiet *quiet, uint32_t cell, uint32_t previous, uint32_t first);

// Says that a code will not do for a cell, which is to be chosen for again. Cannot fail.
void quiet_exclude(struct quiet *quiet, uint32_t cell, uint32_t code);

// Says that the states of some code are used up, so that the plan made ahead no longer holds. Cannot fail.
void quiet_replan(struct quiet *quiet);

#endif
