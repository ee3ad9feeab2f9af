// What a frequency counter and a scope must show at the pins of the running machine: for every net that its chips drive, the rising
// edges and the high time of one frame, counted over the simulated lap. Levels are electrical, and taken where they have settled.
#ifndef SCANLATCH_PROOF_TALLY_H
#define SCANLATCH_PROOF_TALLY_H

#include "proof/proof.h"

enum net_kind {
	NET_STATE,    // a bit of a stage's state, at its latch or counter
	NET_STEP,     // the pin that makes the frame stage step
	NET_KIND,     // a bit of the kind, as the line stage sees it
	NET_CLEAR,    // of a counted stage, as its EEPROM gives it: high asserts
	NET_SIGNAL
};

struct net_tally {
	enum net_kind kind;
	enum stage stage;
	unsigned index;        // of the bit; of a signal its index in the plan
	uint64_t rises;        // rising edges in a frame
	int64_t high_ticks;    // of a frame
	bool level;            // in the frame's first cell: of a net that never changes, its level
	uint64_t spikes;       // in a frame: of an asynchronous clear, and what it leaves on the bits of its counter. Not among the rises
};

struct tally {
	struct arena *arena;
	int64_t ticks;             // of a frame, as the machine takes them
	uint64_t cells, stretched; // of a frame; the second are among the first
	struct net_tally *nets;    // [net_count]: each stage's state, step, kind, clears, then signals in the order of the plan
	size_t net_count;
};

// Counts a frame of a machine whose proofs were run from these images, in the first of its banks. `*tally` is NULL if it does not
// keep to the frame, so that there is nothing to count. Freed with tally_destroy. False, with *tally as it was, when memory is out.
bool tally_run(const struct proofs *proofs, const struct image *images, struct tally **tally);
void tally_destroy(struct tally *tally);

// The net's mean frequency in hertz, or which part of the time it is high. False, with *result as it was, if that does not fit.
bool tally_frequency(const struct tally *tally, const struct net_tally *net, struct fraction master_hz, struct fraction *result);
bool tally_duty(const struct tally *tally, const struct net_tally *net, struct fraction *result);

#endif
