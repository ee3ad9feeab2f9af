// Attempts at an assignment of states, with the codes that are to be chosen for it. For the table's own use.
#ifndef SCANLATCH_TABLE_ATTEMPT_H
#define SCANLATCH_TABLE_ATTEMPT_H

#include "table/assignment.h"
#include "table/automatic.h"

struct solver {
	struct arena *arena;
	const struct constraints *constraints;
	struct code_space codes;
	struct code_choice *choices;       // [field_count]
	struct automatic_field *automatic; // [automatic_count]
	size_t automatic_count;
	struct assignment assignment;
};

// A solver with no codes chosen. Memory is the arena's; false when it is out. state_of_cell is [period].
bool solver_create(struct solver *solver, struct arena *arena, const struct constraints *constraints,
                   uint32_t *state_of_cell);

// Fills the code space with the codes as they are. Cannot fail.
void solver_fill_codes(struct solver *solver);

// Chooses codes, where there are any to choose, and states; the first cell's is `start` if it is fixed. False with
// faults if none were found.
bool attempt_start(struct solver *solver, bool start_fixed, uint32_t start, struct faults *faults);

// The same, under the codes as they are.
bool attempt_start_again(struct solver *solver, bool start_fixed, uint32_t start, struct faults *faults);

#endif
