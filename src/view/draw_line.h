// Inside the pictures of lines, of one and of two compared: what their parts share.
#ifndef SCANLATCH_VIEW_DRAW_LINE_H
#define SCANLATCH_VIEW_DRAW_LINE_H

#include "view/line_limits.h"
#include "view/line_shape.h"
#include "view/svg.h"

#define LINE_LEFT PX(236)
#define LINE_PLOT PX(900)    // at most
#define LINE_RIGHT PX(104)
#define LINE_RULERS_HEIGHT PX(84)
#define LINE_TRACE_HEIGHT PX(48)
#define LINE_HIGH_Y PX(7)    // of a trace's height: where the levels are
#define LINE_LOW_Y PX(35)
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

// The width of a plot of so many ticks: whole thousandths a tick, three digits of them, where that is possible. Cannot fail.
int64_t line_plot_width(int64_t ticks);
// Runs that are drawn of each trace, at most. Cannot fail.
uint32_t line_runs_of_a_trace(const struct plan *plan);

// Regions: drawing->callouts has room for MOST_REGIONS; placing them sets their rows, by which the height is.
void line_place_callouts(struct line_drawing *drawing);
int64_t line_regions_height(const struct line_drawing *drawing);
void draw_line_regions(struct line_drawing *drawing, int64_t y, const char *label);
// Puts a region's lengths.
void line_put_region_words(const struct line_drawing *drawing, struct text *words, size_t index);
// Dotted lines down from the beginnings of regions.
void draw_line_guides(struct line_drawing *drawing, int64_t from, int64_t to);
// Rulers of cells, with what they are called, and of time.
void draw_line_rulers(struct line_drawing *drawing, int64_t y, const char *cells);

// Puts what a signal is: "blanking, active high"; "active low, 1 cell early".
void line_put_signal_words(struct text *words, const struct signal *signal);

// One trace, without its name: runs that take the pointer, and the path of its level; or, where its edges are too many, words. Returns
// whether it is drawn whole.
bool draw_line_trace(const struct line_drawing *drawing, size_t signal, int64_t y);

// Puts a run's attributes, and closes nothing.
void line_run_attributes(const struct line_drawing *drawing, const struct shape_run *run);

#endif
