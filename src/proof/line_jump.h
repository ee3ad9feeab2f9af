// Finds the row behind a jump of a line stage whose states do not number the cells. Internal to proof/.
#ifndef SCANLATCH_PROOF_LINE_JUMP_H
#define SCANLATCH_PROOF_LINE_JUMP_H

#include "proof/trial.h"

// For a lap whose stages first go wrong after found->cell and whose pins or held bits in the cell wrong_at (UINT32_MAX:
// nowhere): if a single wrong next H explains it, fills *found with its row; otherwise leaves *found as it was. *certain
// tells whether *found is at fault for certain. Linear in the line stage's states. False when memory is out.
bool find_line_jump(const struct trial *trial, uint32_t wrong_at, struct counterexample *found, bool *certain);

#endif
