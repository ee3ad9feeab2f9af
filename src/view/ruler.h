// Rulers: where to put marks on a scale so that they can be read.
#ifndef SCANLATCH_VIEW_RULER_H
#define SCANLATCH_VIEW_RULER_H

#include <stdint.h>

// The smallest step of 1, 2 or 5 times a power of ten of which at most `most` (1 or more) fit into a length; at least 1. Cannot fail for
// 0 <= length.
int64_t ruler_step(int64_t length, int64_t most);

#endif
