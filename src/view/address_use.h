// What the addresses of a stage are for: the rows of each line type, counted in bins of equal size. For the picture of a table.
#ifndef SCANLATCH_VIEW_ADDRESS_USE_H
#define SCANLATCH_VIEW_ADDRESS_USE_H

#include "table/table.h"

#define NAMED_USES 6u             // line types that have a use of their own, those with the most rows
#define USE_OTHERS NAMED_USES     // all other types together
#define USE_SPARE (NAMED_USES + 1)
#define USE_COUNT (NAMED_USES + 2)
#define MOST_BIN_BITS 12u         // bins are at most so many bits

struct address_use {
	enum stage stage;
	unsigned bits;                // of an address
	unsigned bin_bits;            // 2^bin_bits bins of 2^(bits - bin_bits) addresses
	size_t types[NAMED_USES];     // line types, by falling number of rows
	unsigned type_count;
	size_t other_types;           // how many there are beside them
	uint32_t rows[USE_COUNT];     // addresses of each use
	uint32_t first[USE_COUNT], last[USE_COUNT]; // addresses; of uses that have rows, but for USE_SPARE
	uint32_t (*bins)[USE_COUNT];  // [2^bin_bits]
};

// Counts in the arena. False when memory is out.
bool address_use_count(struct address_use *use, const struct table *table, enum stage stage, struct arena *arena);

// The use of most addresses of a bin that are used at all; *whole: of all of them. Cannot fail.
unsigned bin_use(const struct address_use *use, uint32_t bin, bool *whole);

// Adds up how many rows of the line stage have each code in a field: counts has as many as the field has codes. Cannot fail.
void rows_by_code(const struct table *table, const struct field *field, uint32_t *counts);

#endif
