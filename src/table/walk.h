// Walks over the cells of the period that hand out codes and states in the cells' order. For the table's own use.
#ifndef SCANLATCH_TABLE_WALK_H
#define SCANLATCH_TABLE_WALK_H

#include "table/assignment.h"

// True if some held cell may have a choice of codes, so that walk_wish is of use. Cannot fail.
bool walk_has_wishes(const struct constraints *constraints);

// Fills wanted[period] with the codes that would be quiet for held cells; NO_CODE: no wish. False when memory is out.
bool walk_wish(const struct assignment *assignment, struct arena *arena, uint32_t *wanted);

// Gives every cell that has no state, all of them free, the lowest state of a quiet code. False when memory is out.
bool walk_place(struct assignment *assignment, struct arena *arena);

#endif
