// The wiring: which word bit each pin of each chip carries, in a form that maker and prover both read. It knows nothing of
// regions, lines or states; the machine includes this header of table/ and no other.
#ifndef SCANLATCH_TABLE_WIRING_H
#define SCANLATCH_TABLE_WIRING_H

#include "plan/plan.h"

// A row of the table: what a stage's EEPROM answers at one address.
struct row {
	uint32_t next;     // ADVANCE_TABLE: the next state
	uint32_t kind;     // frame stage: the line type's code
	bool clear;        // ADVANCE_COUNT: clear asserted (stored as 1)
	bool step;         // line stage of a line-frame machine: step asserted (stored as 1)
	uint64_t levels;   // electrical level of data signal s in bit s
};

struct stage_wiring {
	unsigned state_bits;
	unsigned address_bits;  // of a row's address: the state, and above it the kind where the stage sees one
	enum advance advance;
	enum clear_kind clear;
	enum outputs outputs;
	uint64_t data_signals;  // bit s: signal s has a bit in the stage's word
};

struct wiring {
	const struct chip *chips;
	size_t chip_count;      // of all stages
	unsigned bank_bits;
	enum machine_form form;
	unsigned kind_bits;
	struct stage_wiring line, frame;
};

// Where the parts of a machine's feedback state, everything that its latches and counters hold, lie in its number. The
// line stage's state begins at bit 0. A loop machine has nothing else.
struct feedback {
	unsigned bits;          // in all
	bool has_step;          // the line stage's outputs are latched, and step with them
	unsigned step;          // its bit
	unsigned kind;          // first bit of the latched kind
	unsigned kind_bits;     // 0 where the kind is not latched
	unsigned frame;         // first bit of the frame stage's state
};

// Cannot fail.
struct feedback feedback_of(const struct wiring *wiring);

// A mask of so many lowest bits, at most 32. Cannot fail.
static inline uint32_t low_bits(unsigned bits)
{
	return (uint32_t)(((uint64_t)1 << bits) - 1);
}

// One of the stages. Cannot fail.
static inline const struct stage_wiring *wiring_stage(const struct wiring *wiring, enum stage stage)
{
	return stage == STAGE_LINE ? &wiring->line : &wiring->frame;
}

// True if a stage's counter falls to 0 while its row asserts clear. Cannot fail.
static inline bool clears_at_once(const struct stage_wiring *stage)
{
	return stage->advance == ADVANCE_COUNT && stage->clear == CLEAR_ASYNC;
}

// The wiring of a plan's chips, already checked by plan_read. Cannot fail.
struct wiring wiring_of(const struct plan *plan);

// Bytes of one chip's image. Cannot fail.
size_t chip_bytes(const struct chip *chip);

#endif
