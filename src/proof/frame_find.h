// Finds the frame in a machine whose start is not known.
#ifndef SCANLATCH_PROOF_FRAME_FIND_H
#define SCANLATCH_PROOF_FRAME_FIND_H

#include "machine/machine.h"
#include "proof/decoder.h"

// Spare rows lead to the frame's first cell, so of the loop that state 0 falls into the state that most states lead to
// is tried first. If it is not the first cell, the loop is turned until its pins (those of data signals and of known
// decoders) and held state bits agree with the timeline, and codes that are not known can be read out of it; where no
// turn does, the one whose pins agree longest from the first cell on. expected[] is timeline_pins. *start becomes the
// state of the frame's first cell. False when memory is out.
//
// If the loop's length does not fit the frame, the state that most of all states lead to is taken. Pins, and bits that are held in every
// cell, are matched in linear time. Other held bits are compared at each turn whose pins agree and that has a rare held value
// in its place; for images made to defeat that, the comparisons are cut off at a multiple of the frame, and the best
// turn so far stands.
bool frame_find(struct arena *arena, const struct timeline *timeline, const struct wiring *wiring,
                const struct machine *machine, const uint64_t *expected, const struct decoders *decoders, uint32_t *start);

#endif
