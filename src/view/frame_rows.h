// The frame as the tube shows it: rows of cells, two lines of half a length in one row, and rows in fields. For the picture of a frame.
#ifndef SCANLATCH_VIEW_FRAME_ROWS_H
#define SCANLATCH_VIEW_FRAME_ROWS_H

#include "layout/timeline.h"
#include "view/palette.h"

// One line of the plan, or two of half the length of its longest.
struct frame_row {
	uint32_t line;                 // the first
	uint32_t first_cell, cells;    // of the frame
};

#define MOST_FIELDS 2u

// A field: rows that follow each other, around the frame. 0V is the beginning of its vertical sync.
struct frame_field {
	uint32_t first_row, rows;
	int64_t offset_halves;         // where its first row is below 0V, in halves of a row; mostly negative
};

struct frame_rows {
	const struct timeline *timeline;
	const uint64_t *pins;          // [cells of the frame]
	struct frame_row *rows;
	uint32_t count;
	uint32_t widest;               // cells of the longest row
	struct frame_field fields[MOST_FIELDS];
	unsigned field_count;          // 1 or 2
	bool interlaced;               // the second field's 0V is half way through a row where the first's is not, or the other way round
};

// Makes the rows in the arena. False when memory is out.
bool frame_rows_make(struct frame_rows *rows, const struct timeline *timeline, struct arena *arena);

// The row that a field's row is, counted around the frame. Cannot fail.
static inline uint32_t field_row(const struct frame_rows *rows, const struct frame_field *field, uint32_t row)
{
	return (uint32_t)(((uint64_t)field->first_row + row) % rows->count);
}

// What a cell of the frame does at the pins; stretched before all else. Cannot fail.
enum hue frame_hue(const struct frame_rows *rows, uint32_t cell);

// Whether two rows look alike. Cannot fail.
bool frame_rows_alike(const struct frame_rows *rows, uint32_t left, uint32_t right);

#endif
