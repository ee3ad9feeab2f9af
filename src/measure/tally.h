// The lowest and highest of what is measured, item by item, in raw whole units. Inside measure/.
#ifndef SCANLATCH_MEASURE_TALLY_H
#define SCANLATCH_MEASURE_TALLY_H

#include "measure/measure.h"
#include "measure/raster.h"

// Raw units: of times and cycles half a tick; of rates the ticks of a period; of lines a quarter of raster.line_ticks' half line, that is
// 1/(4 × line_ticks) of a line; of pulses and polarities 1.
struct extreme {
	int64_t raw;
	struct measured_at at;
};

struct tally {
	bool any;
	struct extreme least, most;    // of rates: of the period
};

// What a line shows of picture and burst. Ticks are on the scale of the raster's lines; `last` is where it ends.
struct line_view {
	bool has_picture, in_first_half, in_second_half;
	bool whole;                    // the picture is in the halves of the line in which most lines have it
	int64_t picture_first, picture_last;
	uint32_t picture_first_cell, picture_last_cell;
	bool has_burst;                // one begins in the line
	int64_t burst_first, burst_last;
	uint32_t burst_first_cell, burst_last_cell;
};

struct instrument {
	struct arena *arena;           // its own, gone when all is measured
	struct arena *results;         // the caller's
	const struct standard *standard;
	const struct trace *trace;
	struct raster raster;
	struct line_view *views;       // [raster.line_count]
	bool first_half_used, second_half_used; // by the picture of most lines
	struct tally tallies[ITEM_COUNT];
	struct measured_instances *instances; // to be noted too; NULL if not
	bool out_of_memory;            // there was no room for an instance
};

// True for times, cycles and the line rate. Cannot fail.
bool item_is_of_line(enum limit_item item);

void tally_add(struct instrument *instrument, enum limit_item item, int64_t raw, uint32_t from_cell, uint32_t to_cell);

// Looks at every line. False when memory is out.
bool view_lines(struct instrument *instrument);
// Measures what normal lines show.
void measure_lines(struct instrument *instrument);
// Measures pulses of vertical intervals, fields, and where in them the picture is.
void measure_fields(struct instrument *instrument);
// Finds the lines without burst. False when memory is out.
bool measure_burstless(struct instrument *instrument, struct measurement *result);

// The field after one, around the trace, and how much later it begins than the trace's own.
struct field_step {
	const struct raster_field *field;
	int64_t place, ticks;          // to be added to those of *field
};
struct field_step field_after(const struct raster *raster, uint32_t index, uint32_t steps);

#endif
