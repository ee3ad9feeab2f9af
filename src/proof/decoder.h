// Decoders: which codes of a state's field assert a signal. Internal to proof/.
#ifndef SCANLATCH_PROOF_DECODER_H
#define SCANLATCH_PROOF_DECODER_H

#include "layout/timeline.h"

// The decoder of one FROM_FIELD signal.
struct decoder {
	size_t signal;
	unsigned low;              // lowest state bit of its field
	uint32_t code_mask;        // a code's bits, from bit 0
	bool known;                // false: codes not read out of the images yet
	const uint32_t *codes;     // ascending
	size_t code_count;
	uint64_t *members;         // bit set of the codes
	uint32_t relevant;         // code bits on which the level can depend
};

struct decoders {
	struct decoder *list;
	size_t count;
};

// Decoders for every FROM_FIELD signal of a plan, known where the plan lists the codes. In the arena; NULL when memory
// is out.
struct decoders *decoders_create(struct arena *arena, const struct plan *plan);

// Reads the codes that are not known yet: those of the states (one for each of `cells` cells) at which expected[] says
// asserted. False when memory is out.
bool decoders_read(struct decoders *decoders, struct arena *arena, const uint32_t *states, const uint64_t *expected,
                   uint32_t cells);

// The code of a state. Cannot fail.
static inline uint32_t decoder_code(const struct decoder *decoder, uint32_t state)
{
	return state >> decoder->low & decoder->code_mask;
}

// Whether a code asserts the signal. Cannot fail.
static inline bool decoder_asserts(const struct decoder *decoder, uint32_t code)
{
	return decoder->members[code / 64] >> code % 64 & 1;
}

// The signals whose codes are known. Cannot fail.
static inline uint64_t decoders_known(const struct decoders *decoders)
{
	uint64_t known = 0;
	for (size_t index = 0; index < decoders->count; index++)
		known |= (uint64_t)decoders->list[index].known << decoders->list[index].signal;
	return known;
}

// The signals that known decoders assert in a state. Cannot fail.
uint64_t decoders_pins(const struct decoders *decoders, uint32_t state);

// Whether the signal may flicker while the code goes from one value to another, its bits changing in any order: with equal
// levels at both ends, some code in between has the other level; with different levels, the signal may reach its new level
// and fall back. Then *between is a code in between at which the signal is wrong. Cannot fail.
bool decoder_flickers(const struct decoder *decoder, uint32_t from, uint32_t to, uint32_t *between);

#endif
