// What a line of the frame shows at the pins: runs of one level, in cells and ticks. For the pictures of a line.
#ifndef SCANLATCH_VIEW_LINE_SHAPE_H
#define SCANLATCH_VIEW_LINE_SHAPE_H

#include "layout/timeline.h"
#include "view/palette.h"

struct text;

struct line_shape {
	const struct timeline *timeline;
	const struct plan *plan;
	uint32_t line;                 // in the frame
	const struct line_type *type;
	const struct laid_line *laid;
	uint32_t cells;
	int64_t ticks;
	const uint64_t *pins;          // [cells]: bit s: signal s is asserted at its pin
	const uint64_t *asserted;      // [cells]: in the timeline: at the pins, leads made up for
	int64_t *tick_of_cell;         // [cells + 1]: where a cell begins
};

// A run of cells.
struct shape_run {
	uint32_t cell, cells;
	int64_t tick, ticks;
	unsigned value;                // of what runs: see the functions
};

// Makes the shape of a line in the arena, which must outlive it. False when memory is out.
bool line_shape_make(struct line_shape *shape, const struct timeline *timeline, uint32_t line, struct arena *arena);
// The same of a timeline whose pins (timeline_pins) the caller has; they must outlive the shape.
bool line_shape_make_of(struct line_shape *shape, const struct timeline *timeline, const uint64_t *pins, uint32_t line, struct arena *arena);

// The run of a signal that begins at a cell: value 1 where it is asserted. Cannot fail for from < cells.
struct shape_run shape_signal_run(const struct line_shape *shape, size_t signal, uint32_t from);
// How many runs a signal has, at most `most`. Cannot fail.
uint32_t shape_signal_runs(const struct line_shape *shape, size_t signal, uint32_t most);

// What a board makes of asserted signals: stretch is no matter. Blanking where blanking is asserted; picture where it is not; other where the plan
// has no blanking. Cannot fail.
enum hue shape_kind(const struct plan *plan, uint64_t asserted);
// The run of one kind, of the timeline, that begins at a cell: value is the enum hue. Cannot fail for from < cells.
struct shape_run shape_kind_run(const struct line_shape *shape, uint32_t from);
uint32_t shape_kind_runs(const struct line_shape *shape, uint32_t most);

// The run of stretched cells that begins at a cell or after it; cells is 0 where there is none. Cannot fail.
struct shape_run shape_stretched_run(const struct line_shape *shape, uint32_t from);

// The pin's level, 1 for high, where a signal is asserted or not. Cannot fail.
static inline unsigned shape_level(const struct signal *signal, unsigned asserted)
{
	return signal->active_high ? asserted : !asserted;
}

// The tick of the frame at which a cell of a line of it begins; cell may be one past the last. Cannot fail.
int64_t tick_in_frame(const struct timeline *timeline, uint32_t line, uint32_t cell);

// Puts ticks as microseconds: "4.610". "?" for a time that does not fit.
void text_put_ticks_us(struct text *out, const struct clock *clock, int64_t ticks);
// Puts "7 cells, 66 ticks, 4.610 us".
void text_put_lengths(struct text *out, const struct clock *clock, uint32_t cells, int64_t ticks);

// The levels of composite video, in whole thousandths of the unit.
struct composite_levels {
	const char *unit, *standard;   // "IRE"; "525 lines"
	int64_t sync, blanking, black, white, burst; // burst: from blanking to either peak
	const char *source;
};

// Those of 525 lines or of 625, as fields come at about 60 Hz or at about 50; a standard that the plan names and that is of either
// decides. Cannot fail.
const struct composite_levels *composite_levels_of(const struct timeline *timeline);

#endif
