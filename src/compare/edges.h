// Which edge of a signal in a line is which edge of it in another.
#ifndef SCANLATCH_COMPARE_EDGES_H
#define SCANLATCH_COMPARE_EDGES_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

struct arena;

struct signal_edge {
	bool asserts;          // the signal is asserted from there on
	int64_t place;         // in any unit that both lines are measured in, from their beginning on; 0 or more, at most 2^53
};

// Pairs edges of one direction, in order, so that as many as can be are paired and they are as near to each other as can be; an edge farther away
// than a quarter of `length`, of a line in that unit, is another. Sets *now_of to an array in the arena, [old_count]: the index of what an
// old edge is now, or SIZE_MAX if it is gone. Of lists too long to compare, only what is alike at both ends is paired. False when memory
// is out, with *now_of as it was.
bool edges_match(struct arena *arena, const struct signal_edge *old, size_t old_count, const struct signal_edge *now, size_t now_count,
                 int64_t length, const size_t **now_of);

#endif
