// Where `stretch: auto` places its stretched cells (page 2.5): so that the most limits of the plan's standard are kept, then with the
// largest smallest margin, then leftmost. How many each line type has is known, and with it the length of every line.
#ifndef SCANLATCH_LAYOUT_PLACEMENT_H
#define SCANLATCH_LAYOUT_PLACEMENT_H

#include "layout/layout.h"

// Cells of a line type that may be stretched and between which sync, blanking and burst do not change: which of them are stretched makes
// no difference to any limit, so the first are.
struct stretch_segment {
	size_t type;                  // index of the line type
	const uint32_t *cells;        // of the line type, ascending; `capacity` of them
	uint32_t capacity;
};

// A way to place them.
struct placement {
	const uint32_t *counts;       // [segment_count]: how many of each segment are stretched
	unsigned kept;                // limits
	bool has_share;               // the placement moves some limit's value that is kept
	struct fraction share;        // the smallest margin of these, as a share of the limit's tolerance (see judge.h)
};

struct placements {
	bool unweighed;               // there is a choice, but what it does to the limits could not be reckoned: it would take too long, or
	                              // pulses change their kinds with it; they stay leftmost
	bool judged;                  // the limits decided; otherwise there is nothing below
	const struct stretch_segment *segments; // in the order of line types and cells
	size_t segment_count;
	unsigned limits;              // of the line that bind and could be measured
	struct placement best, second;
	bool has_second;              // there is another way
	bool exhausted;               // all ways were tried or are proved to be no better; otherwise the search was cut short
};

// Places the stretched cells of all line types in the laid-out types, which have them leftmost, and says what it chose. Does nothing where the
// plan names no standard, or there is no choice. False when memory is out.
bool layout_place_stretch(struct layout *layout, struct placements *placements);

// Inside: what the limits make of a placement. A group is an item's value in some lines: raw + Σ counts × weights (in raw units, see measure.h).
struct placement_group {
	enum limit_item item;
	int64_t raw;
	const int64_t *weights;       // [segment_count]
	bool varies;                  // with the placement
};

// The segments of a line type that has stretched cells.
struct placement_type {
	size_t type;
	size_t first, end;            // segments
	uint32_t cells;               // to be stretched
};

struct placement_model {
	struct arena *arena;
	const struct plan *plan;
	const struct laid_line *types;
	struct stretch_segment *segments;
	size_t segment_count;
	struct placement_type *placed;
	size_t placed_count;
	struct placement_group *groups;
	size_t group_count;
};

// Lists segments: of regions that may be stretched, but for those that assert the stretch signal by name and are long already. False when
// memory is out.
bool placement_segments(struct placement_model *model);
// Measures what each segment does to each item. *linear: the limits can be reckoned so. False when memory is out.
bool placement_groups(struct placement_model *model, bool *linear);
// Finds the best and the second best; *placements stays as it is if no limit decides. False when memory is out.
bool placement_search(const struct placement_model *model, struct placements *placements);

#endif
