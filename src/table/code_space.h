// The decoded bits of the state, pressed together to a code, and the pattern of field signals that each code shows.
// For the table's own use.
#ifndef SCANLATCH_TABLE_CODE_SPACE_H
#define SCANLATCH_TABLE_CODE_SPACE_H

#include "table/constraints.h"

struct code_space {
	const struct constraints *constraints;
	uint32_t count;            // 2^(number of decoded bits)
	uint32_t states_each;      // states with the same code
	uint32_t compress[3][256]; // a byte of the state to its part of the code
	uint32_t expand[3][256];   // a byte of the code to its part of the state
	uint64_t *levels;          // [count]: asserted field signals
	uint32_t *pattern_of_code; // [count]; NO_PATTERN where no cell has this pattern
	uint32_t *pattern_start;   // [patterns + 1]: where a pattern's codes begin in pattern_codes
	uint32_t *pattern_codes;   // ascending in each pattern
};

// Codes chosen for one field: value v asserts the signals asserted[v], beside those that list it.
struct code_choice {
	const struct field *field;
	const uint64_t *asserted;
};

// A code space without patterns yet. Memory is the arena's; false when it is out.
bool code_space_create(struct code_space *space, struct arena *arena, const struct constraints *constraints);

// Finds each code's pattern, from listed codes and from `count` choices. Cannot fail.
void code_space_fill(struct code_space *space, const struct code_choice *choices, size_t count);

// The code of a state, and a state that has a code and is 0 elsewhere. Cannot fail.
static inline uint32_t code_of_state(const struct code_space *space, uint32_t state)
{
	return space->compress[0][state & 255] | space->compress[1][state >> 8 & 255] | space->compress[2][state >> 16];
}

static inline uint32_t state_of_code(const struct code_space *space, uint32_t code)
{
	return space->expand[0][code & 255] | space->expand[1][code >> 8 & 255] | space->expand[2][code >> 16];
}

// How many codes of a pattern a held mask and value allow. Cannot fail.
uint32_t codes_allowed(const struct code_space *space, uint32_t mask, uint32_t value, uint32_t pattern);

// How many states a class may use. Cannot fail.
uint32_t class_states(const struct code_space *space, uint32_t class);

// The next subset of `set` after `subset`, ascending; 0 after the last. Cannot fail.
static inline uint32_t next_subset(uint32_t subset, uint32_t set)
{
	return (subset - set) & set;
}

#endif
