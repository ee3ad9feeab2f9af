// Inside the picture of a difference: what its parts share.
#ifndef SCANLATCH_VIEW_DRAW_DIFF_H
#define SCANLATCH_VIEW_DRAW_DIFF_H

#include "compare/compare.h"
#include "view/draw_line.h"

// A line type of both plans, by a line of either's frame.
struct drawn_pair {
	const struct comparison *comparison;
	size_t old_type, now_type;
	uint32_t old_line, now_line;
	const uint64_t *old_pins, *now_pins; // of the whole frames
};

// Draws a pair's lines over each other from a height on, and moves that below. False when memory is out.
bool draw_line_pair(struct svg *svg, const struct drawn_pair *pair, int64_t *y);

// Whether a change is told beside a line type of the new plan. Cannot fail.
bool change_is_of_line(const struct change *change, const char *name);

#endif
