// Finding expressions for held fields: a sequence of values as a*((x + p)/n) + b*((x + p)%n) + c, and a grid of them, lines by
// columns, as the sum of two such. Exact, in whole numbers; internal to lifting.
#ifndef SCANLATCH_PROOF_LIFT_FIT_H
#define SCANLATCH_PROOF_LIFT_FIT_H

#include <stdbool.h>
#include <stdint.h>

struct arena;
struct text;

// A sequence that is read value by value. Steps from one value to the next are all `slope`, but for jumps of one size at equal
// distances; the first may come earlier.
struct sequence {
	int64_t modulus;           // steps count modulo this, a power of two; 0: exactly
	int64_t first, last;
	int64_t slope, jump;
	uint32_t count;
	uint32_t first_jump;       // index of the value after it; 0 if there was none
	uint32_t period;           // between jumps; 0 if it is not known yet
};

// An empty sequence. Cannot fail.
struct sequence sequence_start(int64_t modulus);
// Whether a value may follow. Cannot fail.
bool sequence_takes(const struct sequence *sequence, int64_t value);
// Takes a value that may follow. Cannot fail.
void sequence_add(struct sequence *sequence, int64_t value);
// The value at an index below `count`, up to a multiple of the modulus. Cannot fail.
int64_t sequence_at(const struct sequence *sequence, uint32_t index);

// How many terms a sequence's expression has beside its constant: 0, 1 or 2. Cannot fail.
unsigned sequence_terms(const struct sequence *sequence);

// Puts the sum of two sequences as an expression in two variables, "0x4B17 + 80*(row/9) + col"; of the second, the steps
// alone count. A sequence of one value has none. With a modulus, the sum is taken modulo it: "(12 + row) % 16". Failure is text's.
void sequences_put(struct text *out, const struct sequence *rows, const char *row, const struct sequence *columns, const char *column,
                   int64_t modulus);

#endif
