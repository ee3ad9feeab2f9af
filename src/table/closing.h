// The edge that closes the frame: which code the first cell should have. For the table's own use.
#ifndef SCANLATCH_TABLE_CLOSING_H
#define SCANLATCH_TABLE_CLOSING_H

#include "table/assignment.h"

#define CLOSING_UNKNOWN UINT32_MAX

// How much more a round of the period costs, for each code that the first cell begins and ends it in, than for the best
// of them: in jumps as in relax.h, if states are plentiful. CLOSING_UNKNOWN where the first cell cannot have the code.
struct closing {
	uint32_t *costs; // [codes->count]
	bool known;      // false when it would take too long to find them
};

// The costs for an assignment in which only cells without a choice have states; the first has none. Linear time. Memory
// is the arena's; false when it is out.
bool closing_find(struct closing *closing, struct arena *arena, const struct assignment *assignment);

// The jumps of a whole assignment, the closing edge included. Memory is the arena's; false when it is out.
bool closing_count(const struct assignment *assignment, struct arena *arena, uint64_t *jumps);

#endif
