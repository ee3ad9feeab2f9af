// Inside fit: the order of choices, and the best of them.
#ifndef SCANLATCH_LAYOUT_FIT_RANKS_H
#define SCANLATCH_LAYOUT_FIT_RANKS_H

#include "layout/fit_parts.h"

// A choice and what it stands for, or, before it is judged, at best.
struct fit_rank {
	struct fit_line line;
	struct fit_frame frame;
	struct fit_memory memory;
	unsigned kept;             // of all groups
	struct fraction share;     // the smallest of times, rates and cycles
};

// Below 0: left ranks before right; above 0: behind. 0 only for the same choice. Cannot fail.
int fit_rank_compare(const struct fit_rank *left, const struct fit_rank *right);

// Sorts, best first. Cannot fail.
void fit_ranks_sort(struct fit_rank *ranks, size_t count);

// The best that were found, in order.
struct fit_best {
	struct fit_rank *ranks;    // [top]
	size_t count, top;
};

// Can a choice of this rank still come among the best? Cannot fail.
bool fit_best_wants(const struct fit_best *best, const struct fit_rank *rank);

// Puts a choice that is wanted in its place; the last makes room.
void fit_best_take(struct fit_best *best, const struct fit_rank *rank);

#endif
