// What the state of each cell of the period must satisfy, with cells of equal constraint put together in classes.
// For the table's own use.
#ifndef SCANLATCH_TABLE_CONSTRAINTS_H
#define SCANLATCH_TABLE_CONSTRAINTS_H

#include "layout/timeline.h"
#include "table/key_map.h"
#include "table/table.h"

#define NO_CELL UINT32_MAX
#define NO_CODE UINT32_MAX
#define NO_PATTERN KEY_ABSENT
#define CLASS_FIXED UINT32_MAX

// A pattern is a set of field signals that a cell must show asserted, all others not. A family is a hold mask with a
// pattern; a class is a family with a hold value: every state with these held bits and this pattern will do for any of
// its cells.
struct constraints {
	const struct timeline *timeline;
	const struct plan *plan;
	const uint64_t *pins;
	uint32_t period;
	uint32_t state_count;    // 2^state_bits; in a line-frame machine 2^(state and kind bits)
	uint32_t state_mask;     // all of these bits
	uint32_t kind_mask;      // those of the kind, which every cell holds
	uint64_t field_signals;  // bit s: signal s comes from a field
	uint32_t decoder_mask;   // the state bits of fields that signals come from
	struct key_map patterns; // asserted field signals
	uint32_t *pattern_cells; // [patterns.count]: cells of the pattern, fixed ones included
	uint32_t *pattern_first; // [patterns.count]: the first of them
	struct key_map families; // hold mask << 24 | pattern
	struct key_map classes;  // family << 24 | hold value
	uint32_t *class_first;   // [classes.count]: first cell
	uint32_t *class_cells;   // [classes.count]: number of cells
	uint32_t *class_of_cell; // [period]; CLASS_FIXED where every bit is held
	uint32_t *held_start;    // [classes.count + 1]: where a class begins in held_cells; free ones have no cells there
	uint32_t *held_cells;    // ascending in each class
};

// Sorts the cells of the period into classes. State bits above those of the line stage are the kind's. Memory is the
// arena's; false when it is out. Linear time.
bool constraints_create(struct constraints *constraints, struct arena *arena, const struct timeline *timeline,
                        const uint64_t *pins, uint32_t period, unsigned state_bits);

// How many bits it takes to number so many states. Cannot fail.
static inline unsigned bits_for(uint32_t states)
{
	unsigned bits = 0;
	while (((uint64_t)1 << bits) < states)
		bits++;
	return bits;
}

// The held bits of a cell and their values. Cannot fail.
static inline uint32_t cell_mask(const struct constraints *constraints, uint32_t cell)
{
	return constraints->timeline->has_holds ? constraints->timeline->hold_mask[cell] : 0;
}

static inline uint32_t cell_value(const struct constraints *constraints, uint32_t cell)
{
	return constraints->timeline->has_holds ? constraints->timeline->hold_value[cell] : 0;
}

// The field signals that a cell must show. Cannot fail.
static inline uint64_t cell_levels(const struct constraints *constraints, uint32_t cell)
{
	return constraints->pins[cell] & constraints->field_signals;
}

static inline uint32_t class_value(const struct constraints *constraints, uint32_t class)
{
	return (uint32_t)(constraints->classes.keys[class] & 0xFFFFFF);
}

static inline uint32_t class_family(const struct constraints *constraints, uint32_t class)
{
	return (uint32_t)(constraints->classes.keys[class] >> 24);
}

static inline uint32_t class_mask(const struct constraints *constraints, uint32_t class)
{
	return (uint32_t)(constraints->families.keys[class_family(constraints, class)] >> 24);
}

static inline uint32_t class_pattern(const struct constraints *constraints, uint32_t class)
{
	return (uint32_t)(constraints->families.keys[class_family(constraints, class)] & 0xFFFFFF);
}

#endif
