// Walks over the cells of the period that hand out codes and states in the cells' order. For the table's own use.
#ifndef SCANLATCH_TABLE_WALK_H
#define SCANLATCH_TABLE_WALK_H

#include "table/assignment.h"
#include "table/quiet.h"

// Gives states of quiet codes to those held cells that have a choice of codes and hold `width` bits, as far as there
// are any. False when memory is out.
bool walk_hold(struct assignment *assignment, struct quiet *quiet, unsigned width, struct arena *arena);

// Gives every cell that has no state, all of them free, the lowest state of a quiet code. False when memory is out.
bool walk_place(struct assignment *assignment, struct quiet *quiet, struct arena *arena);

#endif
