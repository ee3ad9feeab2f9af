// Judging a measured value by a limit: kept or missed, and by how much. All in exact fractions.
#ifndef SCANLATCH_CATALOGUE_JUDGE_H
#define SCANLATCH_CATALOGUE_JUDGE_H

#include "catalogue/standards.h"

// From the lowest to the highest value that was measured, low <= high, in the unit of the item's dimension.
struct interval {
	struct fraction low, high;
};

struct judgement {
	bool binds;             // false: the limit is for information, and nothing below means anything
	bool kept;              // the whole interval lies within the limit
	bool has_margin;        // the two below fit 64-bit fractions
	struct fraction margin; // from the interval to the nearer bound, in the unit of the item's dimension: how far the value
	                        // may still move; below zero: by how much it misses
	bool has_share;         // false where the bounds are one value ("exactly"): then it is kept or not, and there is no nearer
	struct fraction share;  // the margin as a share of its scale, at most 1: 1 is the middle of the range, 0 the bound
};

// The scale of a margin makes margins of different units comparable. It is half the range where there are two bounds; with one
// bound it is the distance from the nominal to it, or the bound itself where there is no nominal apart from it. (A bound of 0
// alone has none: then the share is 1 above it, 0 on it, -1 below it.)

// Judges an interval by a limit. Cannot fail: the verdict holds even where the margin does not fit.
struct judgement limit_judge(const struct limit *limit, struct interval measured);

// Widens an interval by the accuracy of the clock that it was measured with: frequencies grow and times shrink with it; counts
// and subcarrier cycles stay. False, with *interval as it was, where a number does not fit.
bool interval_widen(struct interval *interval, enum dimension dimension, struct fraction accuracy_ppm);

#endif
