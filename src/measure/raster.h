// The raster as the pins show it: kinds of sync pulses, lines and fields. Inside measure/.
#ifndef SCANLATCH_MEASURE_RASTER_H
#define SCANLATCH_MEASURE_RASTER_H

#include "measure/trace.h"

// What a sync pulse is, told by its width and its neighbours. A line's period is the distance of sync pulses that takes the most of
// the time, a normal pulse's width the one that takes the most of the time among pulses so far apart.
enum pulse_kind {
	PULSE_NORMAL,
	PULSE_EQUALISING,  // narrower than 3/4 of a normal one, or half a line from both its neighbours; next to broad or other such pulses
	PULSE_BROAD,       // a quarter of a line or more
	PULSE_STRAY        // belongs to nothing: the second in a normal line, or a narrow one on its own
};

// Positions in the raster, in steps of which half a line has line_ticks (so that a line's nominal place is exact). Pulses that come
// within 1/16 of a line of half a line's multiples after the one before are put there: lines that are stretched or a cell too long
// still count as lines. `place` of a pulse grows over the trace from 0 at the first that is no stray.
struct raster {
	struct arena *arena;
	const struct trace *trace;
	int64_t line_ticks;            // a line's period
	enum pulse_kind *kinds;        // [sync pulses]
	int64_t *places;               // [sync pulses]; of strays: of the pulse before
	int64_t place_total;           // after the trace the places begin again, so much higher
	uint32_t first;                // the first pulse that is no stray
	uint32_t stray_count;
	uint32_t first_stray;          // index of a pulse, if there is any stray
	struct raster_line *lines;     // in the order of their places, from the first normal pulse on
	uint32_t line_count;
	struct raster_field *fields;
	uint32_t field_count;
};

// A line from 0H to the next. One that begins in a vertical interval without a pulse of its own begins where it should.
struct raster_line {
	int64_t place;                 // may be place_total or higher, past the trace's end
	int64_t start, end;            // ticks; may be past the trace's end
	bool normal;                   // begins with a normal pulse, and the line after it with a pulse too, of whatever kind
	uint32_t pulse;                // that it begins with; UINT32_MAX if it begins without
};

// A field, from 0V to the next.
struct raster_field {
	int64_t zero, sync_end;        // places of 0V and of vertical sync's end
	int64_t zero_ticks;
	uint32_t cell;                 // of the frame, that begins at 0V
	bool at_half;                  // 0V is half way through a line
	uint32_t broad, broad_count;   // of composite sync: pulses, by the index of the first
	uint32_t before, before_count; // equalising pulses, the same
	uint32_t after_count;          // that follow the broad ones
};

// Why there is no raster in a trace; NULL if there is one.
const char *trace_flaw(const struct trace *trace);

// Finds lines and fields. *raster belongs to the arena. False when memory is out; with *flaw not NULL if the pulses are no raster.
bool raster_find(struct arena *arena, const struct trace *trace, struct raster *raster, const char **flaw);

// True if the frame has an odd number of half lines: then it must be traced over two laps to come back to the same 0H. Cannot fail.
bool raster_is_odd(const struct raster *raster);

// Inside raster_find. The pulse after one, and the ticks from its start to that one's.
uint32_t pulse_after(const struct trace *trace, uint32_t index);
uint32_t pulse_before(const struct trace *trace, uint32_t index);
int64_t ticks_to_next(const struct trace *trace, uint32_t index);
// A pulse that is no stray, its place, and its tick, which go on growing past the trace's end.
struct cursor {
	uint32_t pulse;
	int64_t place, tick;
};
struct cursor cursor_at(const struct raster *raster, uint32_t pulse);
void cursor_next(const struct raster *raster, struct cursor *cursor);
// A place put to a multiple of half a line where it is within 1/16 of a line of it.
int64_t place_snapped(const struct raster *raster, int64_t place);
bool raster_kinds(struct raster *raster);
bool raster_lines(struct raster *raster, const char **flaw);
bool raster_fields(struct raster *raster);

#endif
