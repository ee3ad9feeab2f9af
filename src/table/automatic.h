// codes: auto. Gives each value of a field to one of the patterns that cells ask of the field. For the table's own use.
//
// With nothing held in the field but whole values, and no other field with signals sharing its bits, all values that
// no cell holds are alike, and patterns do not compete but for their number; each pattern then gets as few as it must,
// growing only when matching has shown that it needs more. For a single such field codes are found whenever there are
// any, and a shortage is proved. Otherwise labels are found so where that goes well, and searched for where it does
// not.
#ifndef SCANLATCH_TABLE_AUTOMATIC_H
#define SCANLATCH_TABLE_AUTOMATIC_H

#include "table/assignment.h"

// What a pattern has of its field's values.
struct share {
	uint32_t group;      // listed signals that it asks: of the values only those will do that assert just these
	uint32_t held_cells; // cells that hold the whole field
	uint32_t other_cells;
	uint32_t held_values; // values that they hold
	uint32_t values;      // values that it has
	uint32_t least;       // values that it must have
};

struct automatic_field {
	const struct constraints *constraints;
	const struct field *field;
	size_t index;             // of the field
	size_t signal;            // the first with automatic codes
	uint32_t values;          // 2^(bits of the field)
	uint32_t states_each;     // states with one value
	uint64_t signals;         // all signals of the field
	uint64_t automatic;       // those with automatic codes
	struct key_map patterns;  // what cells ask of `signals`
	struct key_map groups;    // what they ask of the listed ones
	uint32_t *pattern_of;     // [constraints->patterns.count]: the field's pattern
	struct share *shares;     // [patterns.count]
	uint32_t *group_size;     // [groups.count]: values that will do
	uint32_t *group_of_value; // [values]; KEY_ABSENT: no cell asks for it
	uint32_t *holder;         // [values]: cell + 1 that holds this value, or 0
	uint32_t start;           // the value in the first cell's state if that is fixed, else NO_CODE
	uint32_t *label;          // [values]: the pattern that has it, or NO_PATTERN
	uint64_t *asserted;       // [values]: automatic signals of the label
};

// The fields of a plan that have signals with automatic codes, *count of them. Memory is the arena's; false when it is
// out.
bool automatic_create(struct arena *arena, const struct constraints *constraints, struct automatic_field **fields,
                      size_t *count);

// First labels: held values as they must be, the others by need, along a Gray code, so that patterns which follow each
// other are a bit apart. False with faults when that is impossible. Memory is taken from the arena.
bool automatic_label(struct automatic_field *field, const struct assignment *assignment, struct arena *arena,
                     struct faults *faults);

// After automatic_label: gives values the patterns that the preferred states of the cells have had them for, as far as each pattern keeps as
// many values as it must have. Values that cells hold stay. Memory is taken from the arena; false when it is out.
bool automatic_prefer(struct automatic_field *field, const uint32_t *preferred, struct arena *arena);

enum repair { REPAIR_DONE, REPAIR_SHORT, REPAIR_HOPELESS, REPAIR_BEYOND };

// REPAIR_BEYOND is the solver's: no codes can mend the fault.
//
// After a fault at a cell: gives its pattern more values of the field. REPAIR_SHORT: no other pattern can spare them;
// REPAIR_HOPELESS: its pattern has all values that will do. Neither changes labels.
enum repair automatic_repair(struct automatic_field *field, const struct fault *fault);

// True if all values that no cell holds are alike, so that for a field on its own a shortage is proved. Cannot fail.
bool automatic_is_uncut(const struct automatic_field *field);

// The fault of a field whose patterns need more values than there are. Cannot fail.
struct fault automatic_fault(const struct automatic_field *field, uint32_t cell);

// Sets `asserted` from the labels. Cannot fail.
void automatic_assert(struct automatic_field *field);

// Moves labels between values of the same group so that patterns which follow each other are a bit apart and the values
// of one pattern are connected, as far as that is cheap to find. Memory is taken from the arena; false when it is out.
bool automatic_arrange(struct automatic_field *field, struct arena *arena);

#endif
