// The measuring instrument: what the pins show, in the items of the catalogue's limits. It knows roles and levels, not the names of
// regions and line types; normal, equalising and broad pulses are told apart by their widths (see raster.h).
#ifndef SCANLATCH_MEASURE_MEASURE_H
#define SCANLATCH_MEASURE_MEASURE_H

#include "catalogue/judge.h"
#include "measure/trace.h"

// Between which cells' beginnings a value was measured. Counts, rates and lines have the pulse or line from which it was.
struct measured_at {
	uint32_t from_cell, to_cell; // of the frame
};

struct measured {
	bool known;
	const char *why;               // if it is not known: why not, in words
	struct interval values;        // the lowest and the highest of the frame, exact, in the unit of the item's dimension
	struct measured_at low_at, high_at; // the first of the lowest and of the highest
};

// Lines without burst that follow each other, by the standard's numbers.
struct burstless {
	uint32_t field;                // from 0: index of the field nearest to them
	int64_t first_line, last_line;
};

struct measured_field {
	uint32_t cell;                 // of the frame, that begins at 0V
	bool at_half;                  // 0V is half way through a line
	int64_t burstless_lines;
};

struct measurement {
	const char *flaw;              // why nothing can be measured, in words; NULL if it can
	struct measured items[ITEM_COUNT];
	bool separate;                 // sync is horizontal and vertical
	uint32_t frames;               // that were measured: 2 if the frame has an odd number of half lines
	uint64_t strays;               // sync pulses of a frame that belong to nothing
	uint32_t stray_cell;           // where the first begins
	const struct measured_field *fields; // [field_count], from the first 0V after the frame's first normal line
	uint32_t field_count;
	bool numbered;                 // lines have numbers: the standard gives them, and a field begins at a line
	const struct burstless *burstless; // [burstless_count]
	uint32_t burstless_count;
	bool pauses_kept;              // the lines without burst are those of the standard, field by field
};

// Measures a frame as one that repeats for ever. The standard says how many fields a frame has, how lines are numbered, and, by its
// items, whether separate sync signals are preferred to composite sync. NULL when memory is out; it belongs to the arena.
const struct measurement *measure_recording(struct arena *arena, const struct recording *recording, const struct standard *standard);

// One value of an item, among those of a frame.
struct measured_instance {
	enum limit_item item;
	int64_t raw;                   // in raw units, see measured_value
	uint32_t from_cell, to_cell;
};

struct measured_instances {
	struct measured_instance *list;
	size_t count, capacity;
};

// Every value that a line shows of items that are times or subcarrier cycles, and of the line rate, in a frame, always in the same order. An
// empty list if there is no raster in the frame. False when memory is out; the list belongs to the arena.
bool measure_instances(struct arena *arena, const struct recording *recording, const struct standard *standard,
                       struct measured_instances *instances);

// A raw value of such an item in the unit of the item's dimension. False, with *value as it was, if it does not fit.
bool measured_value(const struct clock *clock, enum limit_item item, int64_t raw, struct fraction *value);

#endif
