// Images that are not where they belong: what to look for when the frame does not close. Internal to proof/.
#ifndef SCANLATCH_PROOF_EXCHANGE_H
#define SCANLATCH_PROOF_EXCHANGE_H

#include "proof/trial.h"

// For a lap that fails: if the frame closes and all pins are right once the images of two chips of one part are
// exchanged, *hint says which; else, if more than a few of the first cells are wrong, it asks whether the images belong
// to the plan; else it is NULL. Each pair of chips takes a lap that ends at its first fault, and where the start is not
// known a search for it, linear in states; that is left out where there are too many states for all pairs. False when
// memory is out.
bool find_exchange(const struct trial *trial, const char **hint);

#endif
