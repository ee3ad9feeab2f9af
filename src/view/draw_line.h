// Inside the picture of a line: what its parts share.
#ifndef SCANLATCH_VIEW_DRAW_LINE_H
#define SCANLATCH_VIEW_DRAW_LINE_H

#include "view/line_limits.h"
#include "view/line_shape.h"
#include "view/svg.h"

#define LINE_LEFT PX(236)
#define LINE_PLOT PX(900)    // at most
#define LINE_RIGHT PX(104)
#define MOST_RUNS 4000u      // drawn of all traces together
#define MOST_REGIONS 400u
#define MOST_STRETCHED 100u  // runs of stretched cells

// The name of a region that is too narrow for it, above the strip of regions.
struct callout {
	size_t region;
	unsigned row;
	bool before;                 // it ends at its leader, and does not begin there
	int64_t leader, x, width;
};

struct line_drawing {
	struct svg *svg;
	struct line_shape shape;
	struct line_limit limits[MOST_LINE_LIMITS];
	size_t limit_count;
	bool has_composite;          // the plan makes composite sync
	int64_t width;               // of the plot: a whole number of thousandths a tick, unless there are too many ticks
	uint32_t most_runs;          // of a trace
	struct callout *callouts;    // [callout_count], at most MOST_REGIONS
	size_t callout_count;
	uint32_t callout_rows;
	size_t unnamed;              // regions for whose names there is no room
};

// Where a tick of the line is drawn. Cannot fail.
static inline int64_t line_x(const struct line_drawing *drawing, int64_t tick)
{
	return LINE_LEFT + svg_share(drawing->width, tick, drawing->shape.ticks);
}

// Traces and the composite level: the heights they take, and how they are drawn from a height on. Cannot fail but for memory.
int64_t line_traces_height(const struct line_drawing *drawing);
void draw_line_traces(struct line_drawing *drawing, int64_t y);
int64_t line_composite_height(const struct line_drawing *drawing);
void draw_line_composite(struct line_drawing *drawing, int64_t y);

// Puts a run's attributes, and closes nothing.
void line_run_attributes(const struct line_drawing *drawing, const struct shape_run *run);

#endif
