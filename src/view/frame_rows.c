#include "view/frame_rows.h"

#include "base/arena.h"
#include "measure/measure.h"
#include "view/line_shape.h"
#include "view/pictures.h"

static uint32_t widest_line(const struct timeline *timeline)
{
	uint32_t widest = 0;
	for (uint32_t line = 0; line < timeline->line_count; line++) {
		const uint32_t cells = timeline->types[timeline->lines[line].type].cells;
		widest = cells > widest ? cells : widest;
	}
	return widest;
}

static uint32_t cells_of_line(const struct timeline *timeline, uint32_t line)
{
	return timeline->types[timeline->lines[line].type].cells;
}

// Two lines that follow each other share a row if each is half of the longest.
static bool share_row(const struct frame_rows *rows, uint32_t line)
{
	const struct timeline *timeline = rows->timeline;
	return line + 1 < timeline->line_count && cells_of_line(timeline, line) * (uint64_t)2 == rows->widest &&
	       cells_of_line(timeline, line + 1) * (uint64_t)2 == rows->widest;
}

static void fill_rows(struct frame_rows *rows)
{
	const struct timeline *timeline = rows->timeline;
	for (uint32_t line = 0; line < timeline->line_count;) {
		const bool both = share_row(rows, line);
		rows->rows[rows->count++] = (struct frame_row){line, timeline->lines[line].first_cell,
		                                               cells_of_line(timeline, line) + (both ? cells_of_line(timeline, line + 1) : 0)};
		line += both ? 2 : 1;
	}
}

// The row that holds a cell of the frame.
static uint32_t row_of_cell(const struct frame_rows *rows, uint32_t cell)
{
	uint32_t low = 0, high = rows->count;
	while (high - low > 1) {
		const uint32_t middle = low + (high - low) / 2;
		if (rows->rows[middle].first_cell <= cell)
			low = middle;
		else
			high = middle;
	}
	return low;
}

static bool has_picture(const struct frame_rows *rows, uint32_t row)
{
	const struct frame_row *at = &rows->rows[row];
	for (uint32_t cell = at->first_cell; cell < at->first_cell + at->cells; cell++)
		if (shape_kind(rows->timeline->plan, rows->pins[cell]) == HUE_PICTURE)
			return true;
	return false;
}

// The first of the rows before a row that follow each other without picture: there the vertical interval begins.
static uint32_t interval_start(const struct frame_rows *rows, uint32_t row)
{
	for (uint32_t steps = 0; steps < rows->count; steps++) {
		const uint32_t before = row == 0 ? rows->count - 1 : row - 1;
		if (has_picture(rows, before))
			break;
		row = before;
	}
	return row;
}

// Where a cell is in its row: 0 in the first half, 1 in the second, to the nearest half.
static int64_t half_of_cell(const struct frame_rows *rows, uint32_t row, uint32_t cell)
{
	return ((int64_t)(cell - rows->rows[row].first_cell) * 4 + rows->widest) / (2 * (int64_t)rows->widest);
}

static void lay_fields(struct frame_rows *rows, const struct measured_field *fields)
{
	uint32_t zero[MOST_FIELDS], start[MOST_FIELDS];
	int64_t half[MOST_FIELDS];
	for (unsigned field = 0; field < MOST_FIELDS; field++) {
		zero[field] = row_of_cell(rows, fields[field].cell);
		half[field] = half_of_cell(rows, zero[field], fields[field].cell);
		start[field] = interval_start(rows, zero[field]);
	}
	if (start[0] == start[1])
		return;
	const unsigned first = start[0] < start[1] ? 0 : 1;
	for (unsigned index = 0; index < MOST_FIELDS; index++) {
		const unsigned field = first ^ index, other = field ^ 1u;
		const uint32_t before = (zero[field] + rows->count - start[field]) % rows->count;
		rows->fields[index] = (struct frame_field){start[field], (start[other] + rows->count - start[field]) % rows->count,
		                                           -2 * (int64_t)before - half[field]};
	}
	rows->field_count = MOST_FIELDS;
	rows->interlaced = (half[0] + half[1]) % 2 != 0;
}

// Measuring needs a standard for its numbers alone.
static const struct standard no_standard = {.name = "none", .fields = 1};

bool frame_rows_make(struct frame_rows *rows, const struct timeline *timeline, struct arena *arena)
{
	const struct recording recording = {.plan = timeline->plan, .asserted = timeline->asserted, .cells = timeline->cell_count};
	*rows = (struct frame_rows){.timeline = timeline, .pins = timeline_pins(timeline, arena), .widest = widest_line(timeline),
	                            .field_count = 1};
	rows->rows = arena_array(arena, timeline->line_count, sizeof *rows->rows);
	const struct measurement *measured = measure_recording(arena, &recording, &no_standard);
	if (rows->pins == NULL || rows->rows == NULL || measured == NULL)
		return false;
	fill_rows(rows);
	rows->fields[0] = (struct frame_field){0, rows->count, 0};
	if (measured->flaw == NULL && measured->frames == 1 && measured->field_count == MOST_FIELDS)
		lay_fields(rows, measured->fields);
	return true;
}

bool picture_interlaced(const struct timeline *timeline, bool *interlaced)
{
	struct arena *arena = arena_create();
	struct frame_rows rows;
	const bool made = arena != NULL && frame_rows_make(&rows, timeline, arena);
	if (made)
		*interlaced = rows.interlaced;
	arena_destroy(arena);
	return made;
}

enum hue frame_hue(const struct frame_rows *rows, uint32_t cell)
{
	const struct plan *plan = rows->timeline->plan;
	const int stretch = plan->role_signal[ROLE_STRETCH];
	if (stretch >= 0 && (rows->pins[cell] >> stretch & 1) != 0)
		return HUE_STRETCH;
	return shape_kind(plan, rows->pins[cell]);
}

bool frame_rows_alike(const struct frame_rows *rows, uint32_t left, uint32_t right)
{
	const struct frame_row *first = &rows->rows[left], *second = &rows->rows[right];
	if (first->cells != second->cells)
		return false;
	for (uint32_t cell = 0; cell < first->cells; cell++)
		if (frame_hue(rows, first->first_cell + cell) != frame_hue(rows, second->first_cell + cell))
			return false;
	return true;
}
