// What sync, blanking and burst gate do at the pins over a frame that repeats for ever, as pulses at exact ticks. All that is
// measured is measured on it.
#ifndef SCANLATCH_MEASURE_TRACE_H
#define SCANLATCH_MEASURE_TRACE_H

#include <stdbool.h>
#include <stdint.h>

#include "plan/plan.h"

struct arena;

// A run of ticks. It may end after the trace does; then its rest is at the beginning.
struct pulse {
	int64_t start, end;            // ticks, 0 <= start < end
	uint32_t start_cell, end_cell; // of the frame: the cells that begin at these ticks
};

struct pulses {
	bool has_signal;               // the plan has a signal for it
	bool active_high;              // level of that signal's pin in a pulse
	bool always;                   // it lasts for ever; then there are no pulses
	struct pulse *list;            // in the order of their starts, count of them
	uint32_t count;
};

enum traced { TRACED_SYNC, TRACED_VERTICAL, TRACED_BURST, TRACED_PICTURE, TRACED_COUNT };

struct trace {
	const struct plan *plan;
	uint32_t laps;                 // so many frames one after the other
	int64_t ticks;                 // of them all
	bool separate;                 // TRACED_SYNC is horizontal sync, and vertical sync is a signal of its own
	struct pulses of[TRACED_COUNT];// TRACED_PICTURE: where blanking is not asserted
};

// A frame as it was recorded, cell by cell.
struct recording {
	const struct plan *plan;
	const uint64_t *asserted;      // [cells]: bit s: signal s is asserted
	bool at_pins;                  // `lead` cells before the timeline; the trace undoes it
	uint32_t cells;
	bool prefer_separate;          // where the plan has composite sync and separate ones as well, the latter are measured
};

// Traces `laps` (1 or more) frames; cells last as the stretch signal says. *trace and its pulses belong to the arena. NULL when memory is
// out.
const struct trace *trace_make(struct arena *arena, const struct recording *recording, uint32_t laps);

#endif
