// The cells of a frame as runs of one hue over rows that are alike.
#include "base/text.h"
#include "view/draw_frame.h"

// A rectangle of one hue: cells of a row, over so many slots.
typedef void run_visit(void *context, enum hue hue, uint32_t cell, uint32_t cells, int64_t slot, int64_t slots);

static void visit_row(const struct frame_drawing *drawing, uint32_t index, int64_t slot, int64_t slots, run_visit *visit, void *context)
{
	const struct frame_row *row = &drawing->rows.rows[index];
	const uint32_t step = drawing->cell_step;
	for (uint32_t cell = 0; cell < row->cells;) {
		const enum hue hue = frame_hue(&drawing->rows, row->first_cell + cell);
		uint32_t end = cell;
		do
			end += row->cells - end < step ? row->cells - end : step;
		while (end < row->cells && frame_hue(&drawing->rows, row->first_cell + end) == hue);
		visit(context, hue, cell, end - cell, slot, slots);
		cell = end;
	}
}

// Visits the runs of a field; rows that follow each other and are alike are one.
static void visit_field(const struct frame_drawing *drawing, const struct panel_field *placed, run_visit *visit, void *context)
{
	const struct frame_field *field = &drawing->rows.fields[placed->field];
	for (uint32_t row = 0; row < field->rows;) {
		const uint32_t first = field_row(&drawing->rows, field, row);
		uint32_t end = row;
		do
			end += field->rows - end < drawing->row_step ? field->rows - end : drawing->row_step;
		while (end < field->rows && placed->step == 1 &&
		       frame_rows_alike(&drawing->rows, first, field_row(&drawing->rows, field, end)));
		visit_row(drawing, first, placed->first + (int64_t)row * placed->step, end - row, visit, context);
		row = end;
	}
}

struct run_count {
	uint64_t runs;
};

static void count_run(void *context, enum hue hue, uint32_t cell, uint32_t cells, int64_t slot, int64_t slots)
{
	(void)hue;
	(void)cell;
	(void)cells;
	(void)slot;
	(void)slots;
	((struct run_count *)context)->runs++;
}

static uint64_t count_runs(const struct frame_drawing *drawing)
{
	struct run_count count = {0};
	for (unsigned index = 0; index < drawing->panel_count; index++)
		for (unsigned field = 0; field < drawing->panels[index].field_count; field++)
			visit_field(drawing, &drawing->panels[index].fields[field], count_run, &count);
	return count.runs;
}

// Rows and cells that are less than a pixel go first, then those that are more of it.
void choose_frame_steps(struct frame_drawing *drawing)
{
	drawing->row_step = drawing->cell_step = 1;
	while (count_runs(drawing) > MOST_FRAME_RUNS) {
		if (drawing->rows.count / drawing->row_step > drawing->rows.widest / drawing->cell_step)
			drawing->row_step *= 2;
		else
			drawing->cell_step *= 2;
	}
}

// The data of a path for each hue.
struct hue_paths {
	struct frame_drawing *drawing;
	const struct panel *panel;
	struct text data[HUE_COUNT];
};

static void put_run(void *context, enum hue hue, uint32_t cell, uint32_t cells, int64_t slot, int64_t slots)
{
	struct hue_paths *paths = context;
	struct text *data = &paths->data[hue];
	const int64_t left = frame_x(paths->drawing, cell), right = frame_x(paths->drawing, (int64_t)cell + cells);
	text_put(data, "M");
	svg_put_length(data, left);
	text_put(data, " ");
	svg_put_length(data, panel_y(paths->panel, slot));
	text_put(data, "H");
	svg_put_length(data, right);
	text_put(data, "V");
	svg_put_length(data, panel_y(paths->panel, slot + slots));
	text_put(data, "H");
	svg_put_length(data, left);
	text_put(data, "z");
	paths->drawing->used[hue] = true;
}

void draw_frame_cells(struct frame_drawing *drawing, const struct panel *panel)
{
	struct hue_paths paths = {.drawing = drawing, .panel = panel};
	struct svg *svg = drawing->svg;
	for (unsigned field = 0; field < panel->field_count; field++)
		visit_field(drawing, &panel->fields[field], put_run, &paths);
	for (unsigned hue = 0; hue < HUE_COUNT; hue++) {
		if (paths.data[hue].length > 0) {
			struct text class = {0};
			text_printf(&class, "hue-%s", palette_hue((enum hue)hue)->name);
			svg_group(svg, text_string(&class));
			svg_open(svg, "path");
			svg_reference(svg, "fill", palette_hue((enum hue)hue)->name);
			svg_attribute(svg, "d", text_string(&paths.data[hue]));
			svg_close(svg);
			svg_close(svg);
			svg_release(svg, &class);
		}
		svg_release(svg, &paths.data[hue]);
	}
}
