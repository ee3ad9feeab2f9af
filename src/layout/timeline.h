// The timeline: the frame laid out cell by cell. It is what the plan means, and the only oracle of the prover.
#ifndef SCANLATCH_LAYOUT_TIMELINE_H
#define SCANLATCH_LAYOUT_TIMELINE_H

#include <stdint.h>

#include "plan/plan.h"

// A region laid out in its line type.
struct laid_region {
	uint32_t first_cell;
	uint32_t cells;
	uint32_t stretched;            // how many of its cells are stretched
	struct fraction asked_ticks;   // the length that was asked, exact; for a fill: what the others leave
	int64_t start_ticks;           // from the start of the line
	int64_t ticks;
};

struct laid_line {
	uint32_t cells;
	int64_t ticks;
	struct laid_region *regions;   // as many as the line type has regions
	uint16_t *region_of_cell;      // [cells]
	uint64_t *asserted;            // [cells]: bit s: signal s is asserted in the timeline
	uint32_t auto_stretched;       // how many cells `stretch: auto` stretched
};

// A line of the frame.
struct frame_line {
	uint32_t type;                 // index into plan->lines and timeline->types
	uint32_t block;
	uint32_t row;                  // lines of the block before this one
	uint32_t first_cell;           // index in the frame
	int64_t first_tick;
};

struct timeline {
	struct arena *arena;
	const struct plan *plan;
	struct laid_line *types;       // [plan->line_count]
	struct frame_line *lines;      // [line_count]
	uint32_t line_count;
	uint32_t cell_count;           // F
	int64_t tick_count;            // T
	uint64_t *asserted;            // [cell_count]
	const struct placements *placements; // how `stretch: auto` chose, see placement.h
	bool has_holds;
	uint32_t *hold_mask;           // [cell_count], NULL without holds: the state bits that are held
	uint32_t *hold_value;          // [cell_count]: their values (0 elsewhere)
};

struct placements;

// Lays out a plan. NULL with diagnostics on any error. Freed with timeline_destroy; the plan must outlive it.
struct timeline *timeline_create(const struct plan *plan, struct diagnostics *diagnostics);
void timeline_destroy(struct timeline *timeline);

// What the pins must show at each cell: bit s is set if signal s is asserted at its pin, that is, asserted in the timeline
// `lead` cells later. [cell_count] in the arena, or the timeline's own if no signal has a lead; NULL when memory is out.
const uint64_t *timeline_pins(const struct timeline *timeline, struct arena *arena);

// The signals whose pins, as timeline_pins gives them, keep their level over each line of the frame. Linear time. Cannot fail.
uint64_t timeline_line_signals(const struct timeline *timeline, const uint64_t *pins);

// Those of them that a line-frame machine has as data of its line stage, but for the stretch signal: its frame stage would do
// for them as well. Cannot fail.
uint64_t signals_for_frame(const struct timeline *timeline, const uint64_t *pins);

// The electrical levels (1 = high) of a set of asserted signals. Cannot fail.
uint64_t levels_of(const struct plan *plan, uint64_t asserted);

// Where a cell of the frame lies. Cannot fail for cell < cell_count.
struct cell_place {
	uint32_t line;                 // in the frame, from 0
	uint32_t cell;                 // in the line, from 0
	uint32_t region;               // index in the line type
};
struct cell_place timeline_place(const struct timeline *timeline, uint32_t cell);

// The names for a cell, for messages. Cannot fail.
const char *timeline_line_name(const struct timeline *timeline, uint32_t cell);
const char *timeline_region_name(const struct timeline *timeline, uint32_t cell);
const struct region *timeline_region(const struct timeline *timeline, uint32_t cell);

// The shortest period of the frame in cells: the smallest p dividing cell_count such that asserted signals repeat after p cells. Linear time. 0 when
// memory is out.
uint32_t timeline_period(const struct timeline *timeline);

// The same, counting held bits too: then the whole frame is no harder to find states for than this much of it.
uint32_t timeline_held_period(const struct timeline *timeline);

// Folds the holds of all laps of a period into one: mask[period] and value[period], to be given by the caller, hold what any lap holds. False if two
// laps hold a bit to different values. Only for timelines with holds.
bool timeline_fold_holds(const struct timeline *timeline, uint32_t period, uint32_t *mask, uint32_t *value);

#endif
