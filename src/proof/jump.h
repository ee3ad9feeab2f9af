// Finds the row behind a jump. Internal to proof/.
#ifndef SCANLATCH_PROOF_JUMP_H
#define SCANLATCH_PROOF_JUMP_H

#include "proof/trial.h"

// For a lap that is not closed, whose states first go wrong after found->cell: if a single wrong next state explains
// it, so that the frame closes once it is mended, fills *found with its row and what it should be; otherwise leaves
// *found as it was. *certain tells which. Linear in states. False when memory is out.
bool find_jump(const struct trial *trial, struct counterexample *found, bool *certain);

#endif
