// One step of dynamic programming over codes: what it costs to come from each code. For the table's own use.
#ifndef SCANLATCH_TABLE_RELAX_H
#define SCANLATCH_TABLE_RELAX_H

#include "table/code_space.h"

#define RELAX_BLOCKED 200 // above every cost there is, with room for one more jump in each field

// A step from code to code costs 1 for each field of which more than one bit changes. Fields that share bits count as
// one.
struct relaxer {
	uint32_t count;                // of codes
	uint32_t fields[LIMIT_FIELDS]; // bits of the code, disjoint
	size_t field_count;
	uint8_t *costs;  // [count], for relaxer_step
	uint8_t *lowest; // [count], for relaxer_step
};

// Memory is the arena's; false when it is out.
bool relaxer_create(struct relaxer *relaxer, struct arena *arena, const struct code_space *codes);

// The cost of a step. Cannot fail.
unsigned relaxer_jumps(const struct relaxer *relaxer, uint32_t from, uint32_t to);

// result[q] = the least, over all codes c, of the cost of q → c plus max(next[c], blocked[c]); less the least result,
// which is returned. Costs in `next` are at most LIMIT_FIELDS, blocked is 0 or RELAX_BLOCKED. Cannot fail.
uint8_t relaxer_step(const struct relaxer *relaxer, const uint8_t *next, const uint8_t *blocked, uint8_t *result);

#endif
