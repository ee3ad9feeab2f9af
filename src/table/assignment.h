// The states that cells have been given so far. For the table's own use.
//
// Why a complete assignment is found whenever there is one. A state shows one pattern, so cells of different patterns
// never compete, and a cell on which nothing is held may use every state of its pattern. Hence held cells come first:
// fixed ones, then held classes, greedily in order of falling number of held bits, and what then lacks a state is
// matched by Hopcroft and Karp's algorithm, which is complete. Where masks are nested the greedy order alone is: of two
// classes that share states, one's states are all the other's too. What the held cells leave of a pattern serves its
// free cells in any way, so these need only be as few as those states.
#ifndef SCANLATCH_TABLE_ASSIGNMENT_H
#define SCANLATCH_TABLE_ASSIGNMENT_H

#include "table/code_space.h"
#include "table/faults.h"

struct quiet;

struct assignment {
	const struct constraints *constraints;
	const struct code_space *codes;
	uint32_t *state_of_cell; // [period]; NO_STATE: none yet
	uint32_t *owner;         // [state_count]: cell + 1, or 0
	uint32_t *remaining;     // [codes->count]: states with the code that no cell owns
	const uint32_t *preferred; // [period]: states to be kept where that is possible, NO_STATE: none; NULL: of no cell
	bool start_fixed;        // cell 0 has the state `start`
	uint32_t start;
};

// An assignment of no cells. Memory is the arena's; false when it is out. state_of_cell is [period].
bool assignment_create(struct assignment *assignment, struct arena *arena, const struct code_space *codes,
                       uint32_t *state_of_cell);

// Starts afresh: gives fixed cells and classes with a single state their states, and compares each pattern's cells with
// its states. False with faults where that fails.
bool assignment_begin(struct assignment *assignment, struct faults *faults);

// Gives cells that have no state those that they prefer, if they are allowed and free: the held cells, or the others. What held cells are given
// so, assignment_augment can still change. Cannot fail.
void assignment_prefer(struct assignment *assignment, bool held);

// Gives states to the held cells that have none, in quiet codes where `quiet` is not NULL. False with faults where not
// all of them can have a state. Memory is taken from the arena.
bool assignment_hold(struct assignment *assignment, struct arena *arena, struct quiet *quiet, struct faults *faults);

// Matches the held cells that are left. False with faults where not all of them can have a state.
bool assignment_augment(struct assignment *assignment, struct arena *arena, struct faults *faults);

// Gives a state that nobody owns to a cell that has none. Cannot fail.
static inline void assignment_place(struct assignment *assignment, uint32_t cell, uint32_t state)
{
	assignment->state_of_cell[cell] = state;
	assignment->owner[state] = cell + 1;
	assignment->remaining[code_of_state(assignment->codes, state)]--;
}

// True if a cell's state cannot be changed: all its bits are held, or it is the start. Cannot fail.
static inline bool cell_is_fixed(const struct assignment *assignment, uint32_t cell)
{
	return assignment->constraints->class_of_cell[cell] == CLASS_FIXED || (cell == 0 && assignment->start_fixed);
}

#endif
