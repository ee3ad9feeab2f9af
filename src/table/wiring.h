// The wiring: which word bit each pin of each chip carries, in a form that maker and prover both read. It knows nothing of
// regions, lines or states; the machine includes this header of table/ and no other.
#ifndef SCANLATCH_TABLE_WIRING_H
#define SCANLATCH_TABLE_WIRING_H

#include "plan/plan.h"

// A row of the table: what a stage's EEPROM answers at one state.
struct row {
	uint32_t next;     // ADVANCE_TABLE: the next state
	bool clear;        // ADVANCE_COUNT: clear asserted (stored as 1)
	uint64_t levels;   // electrical level of data signal s in bit s
};

struct wiring {
	const struct chip *chips;
	size_t chip_count;
	unsigned state_bits;
	unsigned bank_bits;
	enum advance advance;
	enum clear_kind clear;
	enum outputs outputs;
	uint64_t data_signals;  // bit s: signal s has a word bit
};

// The wiring of a plan's chips, already checked by plan_read. Cannot fail.
struct wiring wiring_of(const struct plan *plan);

// Bytes of one chip's image. Cannot fail.
size_t chip_bytes(const struct chip *chip);

#endif
