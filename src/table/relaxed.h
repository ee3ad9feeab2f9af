// Cells matched with states while codes are still being chosen. For the table's own use.
//
// A value of a field with automatic codes is decided once it has a label; an undecided one suits every pattern. So more
// states suit a cell than will in the end, and where not even these are enough for all cells, no choice of the values
// still undecided can help.
#ifndef SCANLATCH_TABLE_RELAXED_H
#define SCANLATCH_TABLE_RELAXED_H

#include "table/automatic.h"

// The values of one field.
struct relaxed_field {
	struct automatic_field *field;
	uint32_t *decided; // [values]: the pattern that alone may have the value, or NO_PATTERN
	uint32_t *cells;   // [values]: cells whose states have the value
	uint32_t *pattern; // [values]: of the first of them
	uint32_t *agreed;  // [values]: how many of them have this pattern
	uint32_t *weight;  // [values]: how often the value was decided in vain
};

struct relaxed {
	struct assignment *assignment; // whose states and owners are used
	struct relaxed_field *fields;
	size_t field_count;
	uint64_t listed; // signals with listed codes
	uint64_t work;   // states looked at so far
	uint64_t limit;  // of work
	uint32_t *loose; // [period]: cells without a state
	uint32_t loose_count;
	uint32_t *cursor;     // [classes]: where the last state was found
	uint32_t *from_class; // [classes]: the class before it on the path, itself at the path's begin
	uint32_t *from_state; // [classes]: the state that it gives up on the path
	uint32_t *seen;       // [classes]: the search that it was last reached in
	uint32_t *queue;      // [classes]
	uint32_t queued;
	uint32_t search;
};

// Fields as automatic_label has left them. Memory is the arena's; false when it is out.
bool relaxed_create(struct relaxed *relaxed, struct arena *arena, struct assignment *assignment,
                    struct automatic_field *fields, size_t count);

// Starts afresh: only held values are decided, and only fixed cells have states. False, with *cell one that does not go
// with the others, if that is impossible.
bool relaxed_begin(struct relaxed *relaxed, uint32_t *cell);

// Decides a value, and takes the states that have it from cells of other patterns. Cannot fail.
void relaxed_decide(struct relaxed *relaxed, size_t field, uint32_t value, uint32_t pattern);

// Gives states to all loose cells, preferably such that no value is shared by two patterns. False if that is impossible
// or the work is done; the cells that could have none stay loose. Memory is never taken.
bool relaxed_settle(struct relaxed *relaxed);

// After relaxed_settle has failed: how many states there are for a loose cell and those that it competes with, and how
// many cells these are. Memory is the arena's; false when it is out.
bool relaxed_count(struct relaxed *relaxed, struct arena *arena, uint32_t cell, uint32_t *needed, uint32_t *available);

// True if the cells that share a value are of more than one pattern. Cannot fail.
static inline bool is_disputed(const struct relaxed_field *field, uint32_t value)
{
	return field->cells[value] != field->agreed[value];
}

// The pattern of the most cells with a value that has cells. Cannot fail.
uint32_t relaxed_majority(struct relaxed *relaxed, size_t field, uint32_t value);

#endif
