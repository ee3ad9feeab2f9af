// The limits of a plan's standard at the edges of one line: where each edge is, where it may be, and the verdict.
#ifndef SCANLATCH_VIEW_LINE_LIMITS_H
#define SCANLATCH_VIEW_LINE_LIMITS_H

#include "view/line_shape.h"

struct arena;

// Ticks are from the line's start; they may lie before it or past its end.
struct line_limit {
	enum limit_item item;
	const struct limit *limit;     // of the plan's grade
	struct fraction value;         // in the unit of the item's dimension
	bool kept;                     // with the clock's accuracy
	int64_t from_tick, to_tick;    // between which it was measured
	bool at_start;                 // it is the first edge that sets the value: there stands the interval
	bool has_low, has_high;
	int64_t low_tick, high_tick;   // the edge may lie from here to there, to the nearest tick; low_tick <= high_tick
};

#define MOST_LINE_LIMITS ITEM_COUNT

// Fills in the limits of the line, in the order of the items, each for the first of its edges there: *count of them, at most
// MOST_LINE_LIMITS. None where the plan names no standard. False when memory is out.
bool line_limits_find(const struct line_shape *shape, struct arena *arena, struct line_limit limits[MOST_LINE_LIMITS], size_t *count);

// Puts a value of an item with its unit: "4.610 us", "9 cycles".
void text_put_item_value(struct text *out, enum limit_item item, struct fraction value);
// Puts what a limit allows: "4.19 to 5.71 us", "at least 0.38 us", "exactly …".
void text_put_allowed(struct text *out, const struct limit *limit);

#endif
