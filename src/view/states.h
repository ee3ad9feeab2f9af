// States of a machine in words and as JSON. A loop machine's is a number; that of a line-frame machine is all that its latches and
// counters hold: H, the line stage's state; step, where it is latched; kind, where it is latched; V, the frame stage's state.
// Internal to view/. When memory is out, out->failed is set, and an object becomes NULL.
#ifndef SCANLATCH_VIEW_STATES_H
#define SCANLATCH_VIEW_STATES_H

#include <jansson.h>

#include "proof/proof.h"

struct text;

// "state 0x8000", "H 0x50, step 0, kind 1, V 0x000".
void put_state(struct text *out, const struct proofs *proofs, uint32_t state);
// The address of a stage's row: "state 0x8000", "H 0x50 of kind 1", "V 0x20C".
void put_row_state(struct text *out, const struct proofs *proofs, enum stage stage, uint32_t address);
// A bit of the state: "bit 3", "bit 3 of H", "the step latch".
void put_state_bit(struct text *out, const struct proofs *proofs, unsigned bit);

// An integer, or { "H", "step", "kind", "V" } without what is not latched.
json_t *state_json(const struct proofs *proofs, uint32_t state);
// "state", and in a line-frame machine "stage": "line" or "frame" and, of the line stage, "kind".
void json_put_row_state(json_t **object, const struct proofs *proofs, enum stage stage, uint32_t address);
// "bit", and in a line-frame machine "part": "H", "step", "kind" or "V", whose bit it is.
void json_put_state_bit(json_t **object, const struct proofs *proofs, unsigned bit);

#endif
