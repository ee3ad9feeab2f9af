// Inside layout: the steps from a line type to its cells.
#ifndef SCANLATCH_LAYOUT_LAYOUT_H
#define SCANLATCH_LAYOUT_LAYOUT_H

#include "layout/line_faults.h"
#include "layout/timeline.h"

struct layout {
	struct arena *arena;
	const struct plan *plan;
	struct diagnostics *diagnostics;
	struct line_faults *faults; // of line types; for the others, diagnostics
	struct laid_line *types;
	uint64_t laid_cells;   // over all line types, kept within LIMIT_CELLS
};

// Finds the edges of a line type's regions on whole cells (page 2.5). False after reporting.
bool layout_regions(struct layout *layout, size_t type);

// Fills the cells of a line type whose regions are laid: regions, asserted signals, stretched cells (page 2.5), ticks. False after reporting.
bool layout_cells(struct layout *layout, size_t type);

// Finds lengths and positions of a line type's regions from its stretched cells. Cannot fail.
void layout_measure_line(struct layout *layout, size_t type);

// Stretches the fewest cells that `stretch: auto` allows for the line to meet its phase, leftmost. False after reporting.
bool layout_auto_stretch(struct layout *layout, size_t type);

// Evaluates the holds of every cell of the frame into the timeline. False after reporting.
bool layout_holds(struct timeline *timeline, struct line_faults *faults, struct diagnostics *diagnostics);

#endif
