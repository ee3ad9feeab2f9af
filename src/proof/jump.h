// Finds the row behind a jump. Internal to proof/.
#ifndef SCANLATCH_PROOF_JUMP_H
#define SCANLATCH_PROOF_JUMP_H

#include "proof/trial.h"

// For a lap that is not closed, whose states first go wrong after `loop_cell`: if a single wrong next state explains it, fills *found with its
// row and what it should be; otherwise leaves *found as it was. Linear in states. False when memory is out.
bool find_jump(const struct trial *trial, uint32_t loop_cell, struct counterexample *found);

#endif
