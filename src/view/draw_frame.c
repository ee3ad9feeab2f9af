// The picture of a frame: heading, rulers, panels with the picture's box, legend.
#include "view/draw_frame.h"

#include <inttypes.h>

#include "base/arena.h"
#include "base/text.h"
#include "view/figures.h"
#include "view/line_shape.h"
#include "view/pictures.h"
#include "view/ruler.h"

#define HEAD_HEIGHT PX(76)
#define RULER_HEIGHT PX(30)
#define PANEL_HEAD PX(30)
#define CAPTION_HEIGHT PX(28)
#define LEGEND_HEIGHT PX(64)
#define TALLEST_ROW PX(12)

// A scale of whole thousandths, three digits of them, where there is room for it.
static int64_t plot_length(int64_t most, int64_t count)
{
	int64_t scale = most / count, unit = 1;
	if (scale < 50)
		return most;
	while (scale / unit >= 1000)
		unit *= 10;
	return scale / unit * unit * count;
}

static bool row_shows(const struct frame_drawing *drawing, const struct frame_row *row, uint32_t *first, uint32_t *end)
{
	bool any = false;
	for (uint32_t cell = 0; cell < row->cells; cell++) {
		if (shape_kind(drawing->rows.timeline->plan, drawing->rows.pins[row->first_cell + cell]) != HUE_PICTURE)
			continue;
		*first = any ? *first : cell;
		*end = cell + 1;
		any = true;
	}
	return any;
}

static struct picture_box box_of_field(const struct frame_drawing *drawing, const struct frame_field *field)
{
	struct picture_box box = {0};
	for (uint32_t row = 0; row < field->rows; row++) {
		uint32_t first = 0, end = 0;
		if (!row_shows(drawing, &drawing->rows.rows[field_row(&drawing->rows, field, row)], &first, &end))
			continue;
		box.first_cell = !box.any || first < box.first_cell ? first : box.first_cell;
		box.end_cell = end > box.end_cell ? end : box.end_cell;
		box.first_row = box.any ? box.first_row : row;
		box.last_row = row;
		box.rows++;
		box.any = true;
	}
	return box;
}

// Ticks of the box across, in its first row, and down, from there to the last row's end.
static void box_ticks(const struct frame_drawing *drawing, const struct frame_field *field, const struct picture_box *box,
                      int64_t *across, int64_t *down)
{
	const struct timeline *timeline = drawing->rows.timeline;
	const struct frame_row *first = &drawing->rows.rows[field_row(&drawing->rows, field, box->first_row)];
	const uint32_t after = field_row(&drawing->rows, field, box->last_row + 1);
	const int64_t start = timeline->lines[first->line].first_tick, end = timeline->lines[drawing->rows.rows[after].line].first_tick;
	*across = tick_in_frame(timeline, first->line, box->end_cell) - tick_in_frame(timeline, first->line, box->first_cell);
	*down = end > start ? end - start : end + timeline->tick_count - start;
}

static void put_decimal_time(struct svg *svg, const char *name, const struct clock *clock, int64_t ticks, int64_t scale)
{
	struct fraction seconds;
	if (seconds_of_ticks(clock, ticks, &seconds) && fraction_multiply(seconds, fraction_whole(scale), &seconds))
		svg_decimal(svg, name, seconds);
}

static void put_time(struct text *words, const struct clock *clock, int64_t ticks)
{
	struct fraction seconds;
	if (seconds_of_ticks(clock, ticks, &seconds))
		text_put_time(words, seconds);
}

static const char *rows_word(const struct frame_drawing *drawing, uint32_t count)
{
	const bool lines = drawing->rows.count == drawing->rows.timeline->line_count;
	return lines ? (count == 1 ? "line" : "lines") : count == 1 ? "row" : "rows";
}

// "picture: 80 cells, 50.286 us, by 216 lines, 13.757 ms; from cell 21 of line 18 on".
static void put_box_words(const struct frame_drawing *drawing, const struct frame_field *field, const struct picture_box *box,
                          struct text *words)
{
	const struct clock *clock = &drawing->rows.timeline->plan->clock;
	int64_t across, down;
	box_ticks(drawing, field, box, &across, &down);
	text_put(words, "picture: ");
	text_put_count(words, box->end_cell - box->first_cell, "cell", "cells");
	text_put(words, ", ");
	text_put_ticks_us(words, clock, across);
	text_printf(words, " us, by %" PRIu32 " %s, ", box->rows, rows_word(drawing, box->rows));
	put_time(words, clock, down);
	text_printf(words, "; from cell %" PRIu32 " of line %" PRIu32 " on", box->first_cell,
	            drawing->rows.rows[field_row(&drawing->rows, field, box->first_row)].line);
}

// The box's outline, and inside it what it measures.
static void draw_box(const struct frame_drawing *drawing, const struct panel *panel, unsigned placed, const struct picture_box *box)
{
	const struct panel_field *at = &panel->fields[placed];
	const struct frame_field *field = &drawing->rows.fields[at->field];
	const struct clock *clock = &drawing->rows.timeline->plan->clock;
	const int64_t left = frame_x(drawing, box->first_cell), right = frame_x(drawing, box->end_cell);
	const int64_t top = panel_y(panel, at->first + box->first_row * at->step),
	              bottom = panel_y(panel, at->first + box->last_row * at->step + 1);
	int64_t across, down;
	struct svg *svg = drawing->svg;
	box_ticks(drawing, field, box, &across, &down);
	svg_open(svg, "rect");
	svg_attribute(svg, "class", placed == 0 ? "box rule" : "box hair");
	svg_length(svg, "x", left);
	svg_length(svg, "y", top);
	svg_length(svg, "width", right - left);
	svg_length(svg, "height", bottom - top);
	svg_whole(svg, "data-cell", box->first_cell);
	svg_whole(svg, "data-cells", box->end_cell - box->first_cell);
	svg_whole(svg, "data-row", box->first_row);
	svg_whole(svg, "data-rows", box->rows);
	put_decimal_time(svg, "data-us", clock, across, 1000000);
	put_decimal_time(svg, "data-ms", clock, down, 1000);
	svg_close(svg);
	if (placed > 0 || right - left < PX(320) || bottom - top < PX(80))
		return;
	struct text words = {0};
	const int64_t x = (left + right) / 2, y = (top + bottom) / 2;
	svg_box(svg, "plate", x - PX(150), y - PX(32), PX(300), PX(64));
	text_printf(&words, "%" PRIu32 " cells \xC3\x97 %" PRIu32 " %s%s", box->end_cell - box->first_cell, box->rows,
	            rows_word(drawing, box->rows), panel->field_count > 1 ? " a field" : "");
	svg_text(svg, "name", x, y - PX(6), ANCHOR_MIDDLE, text_string(&words));
	words.length = 0;
	text_put_ticks_us(&words, clock, across);
	text_put(&words, " us \xC3\x97 ");
	put_time(&words, clock, down);
	svg_text(svg, "note", x, y + PX(18), ANCHOR_MIDDLE, text_string(&words));
	svg_release(svg, &words);
}

static void draw_boxes(const struct frame_drawing *drawing, const struct panel *panel)
{
	for (unsigned placed = 0; placed < panel->field_count; placed++) {
		const struct frame_field *field = &drawing->rows.fields[panel->fields[placed].field];
		const struct picture_box box = box_of_field(drawing, field);
		if (!box.any)
			continue;
		struct text words = {0};
		if (panel->field_count > 1)
			text_printf(&words, "field %u, ", panel->fields[placed].field + 1);
		put_box_words(drawing, field, &box, &words);
		draw_box(drawing, panel, placed, &box);
		svg_text(drawing->svg, "small", FRAME_LEFT, panel->y + frame_blocks_height(drawing, panel) + PX(20) + (int64_t)placed * PX(18),
		         ANCHOR_START, text_string(&words));
		svg_release(drawing->svg, &words);
	}
}

// The lines of the plan in a row: from its first to before the next row's.
static uint32_t end_line(const struct frame_drawing *drawing, uint32_t row)
{
	return row + 1 < drawing->rows.count ? drawing->rows.rows[row + 1].line : drawing->rows.timeline->line_count;
}

// Marks at the rows that hold lines of round numbers.
static void draw_row_ruler(const struct frame_drawing *drawing, const struct panel *panel)
{
	const struct panel_field *placed = &panel->fields[0];
	const struct frame_field *field = &drawing->rows.fields[placed->field];
	const int64_t step = ruler_step(field->rows, panel->height / PX(24) + 1);
	struct text words = {0};
	for (uint32_t row = 0; row < field->rows; row++) {
		const uint32_t index = field_row(&drawing->rows, field, row), first = drawing->rows.rows[index].line;
		const int64_t mark = (first + step - 1) / step * step, y = panel_y(panel, placed->first + row * placed->step);
		if (mark >= end_line(drawing, index))
			continue;
		words.length = 0;
		text_printf(&words, "%" PRId64, mark);
		svg_line(drawing->svg, "rule", FRAME_LEFT - PX(8), y, FRAME_LEFT - PX(1), y);
		svg_text(drawing->svg, "small", FRAME_LEFT - PX(13), y + PX(5), ANCHOR_END, text_string(&words));
	}
	svg_release(drawing->svg, &words);
}

static void draw_cell_ruler(const struct frame_drawing *drawing, int64_t y)
{
	const int64_t cells = drawing->rows.widest, coarse = ruler_step(cells, 12), fine = ruler_step(cells, 120);
	struct text words = {0};
	svg_text(drawing->svg, "name", PX(16), y - PX(8), ANCHOR_START, "cells");
	for (int64_t cell = 0; cell <= cells; cell += fine) {
		const int64_t x = frame_x(drawing, cell);
		svg_line(drawing->svg, "rule", x, y - (cell % coarse == 0 ? PX(9) : PX(5)), x, y - PX(1));
		words.length = 0;
		text_printf(&words, "%" PRId64, cell);
		if (cell % coarse == 0)
			svg_text(drawing->svg, "small", x, y - PX(14), ANCHOR_MIDDLE, text_string(&words));
	}
	svg_release(drawing->svg, &words);
}

static void draw_panel(struct frame_drawing *drawing, const struct panel *panel)
{
	struct svg *svg = drawing->svg;
	struct text words = {0};
	svg_group(svg, "field");
	svg_whole(svg, "data-field", panel->fields[0].field + 1);
	if (drawing->rows.field_count > 1) {
		if (drawing->interleaved)
			text_put(&words, "fields 1 and 2, line by line; line numbers are those of field 1");
		else
			text_printf(&words, "field %u", panel->fields[0].field + 1);
		svg_text(svg, "name", FRAME_LEFT, panel->y - PX(42), ANCHOR_START, text_string(&words));
	}
	draw_cell_ruler(drawing, panel->y);
	svg_text(svg, "name", PX(16), panel->y + PX(12), ANCHOR_START, "line");
	draw_row_ruler(drawing, panel);
	draw_frame_cells(drawing, panel);
	draw_boxes(drawing, panel);
	draw_frame_blocks(drawing, panel);
	svg_close(svg);
	svg_release(svg, &words);
}

static void draw_legend(const struct frame_drawing *drawing, int64_t y)
{
	struct svg *svg = drawing->svg;
	int64_t x = FRAME_LEFT;
	for (unsigned hue = 0; hue < HUE_COUNT; hue++) {
		const struct hue_row *row = palette_hue((enum hue)hue);
		if (!drawing->used[hue])
			continue;
		svg_open(svg, "rect");
		svg_length(svg, "x", x);
		svg_length(svg, "y", y);
		svg_length(svg, "width", PX(32));
		svg_length(svg, "height", PX(18));
		svg_reference(svg, "fill", row->name);
		svg_close(svg);
		svg_text(svg, "note", x + PX(40), y + PX(14), ANCHOR_START, row->words);
		x += PX(62) + svg_words_width(row->words, 15);
	}
	struct text words = {0};
	text_put(&words, "what the pins do in each cell; lines and cells are counted from 0");
	if (drawing->rows.count < drawing->rows.timeline->line_count)
		text_put(&words, "; two lines of half a length stand in one row");
	svg_text(svg, "small", FRAME_LEFT, y + PX(42), ANCHOR_START, text_string(&words));
	svg_release(svg, &words);
}

// What is left out, where the frame is too large.
static void draw_left_out(const struct frame_drawing *drawing, int64_t y)
{
	struct text words = {0};
	if (drawing->row_step == 1 && drawing->cell_step == 1)
		return;
	text_put(&words, "left out, for want of room: ");
	if (drawing->row_step > 1)
		text_printf(&words, "all but one of %" PRIu32 " %s", drawing->row_step, rows_word(drawing, 2));
	text_put(&words, drawing->row_step > 1 && drawing->cell_step > 1 ? " and " : "");
	if (drawing->cell_step > 1)
		text_printf(&words, "all but one of %" PRIu32 " cells", drawing->cell_step);
	svg_text(drawing->svg, "name", FRAME_LEFT, y, ANCHOR_START, text_string(&words));
	svg_release(drawing->svg, &words);
}

static void put_title(const struct timeline *timeline, struct text *title)
{
	struct fraction rate;
	text_printf(title, "%s, frame: ", timeline->plan->name);
	text_put_count(title, timeline->line_count, "line", "lines");
	text_put(title, ", ");
	text_put_count(title, timeline->cell_count, "cell", "cells");
	text_put(title, ", ");
	put_time(title, &timeline->plan->clock, timeline->tick_count);
	if (fraction_divide(timeline->plan->clock.master_hz, fraction_whole(timeline->tick_count), &rate)) {
		text_put(title, ", ");
		text_put_rounded(title, rate, 3);
		text_put(title, " Hz");
	}
}

static void put_description(const struct frame_drawing *drawing, struct text *words)
{
	const struct plan *plan = drawing->rows.timeline->plan;
	text_put(words, "The frame, cells across and lines down. Blocks from the top: ");
	for (size_t block = 0; block < plan->block_count && block < 32; block++) {
		text_put(words, block == 0 ? "" : "; ");
		text_put_count(words, (uint64_t)plan->blocks[block].repeat, "line", "lines");
		text_printf(words, " %s", plan->lines[plan->blocks[block].line_type].name);
	}
	text_put(words, plan->block_count > 32 ? "; and more." : ".");
	for (unsigned index = 0; index < drawing->rows.field_count; index++) {
		const struct picture_box box = box_of_field(drawing, &drawing->rows.fields[index]);
		if (!box.any)
			continue;
		text_put(words, " ");
		if (drawing->rows.field_count > 1)
			text_printf(words, "Field %u, ", index + 1);
		put_box_words(drawing, &drawing->rows.fields[index], &box, words);
		text_put(words, ".");
	}
}

// A panel for each field, or one for both, whose rows take every second slot from the highest one on.
static void make_panels(struct frame_drawing *drawing)
{
	const struct frame_rows *rows = &drawing->rows;
	drawing->panel_count = drawing->interleaved ? 1 : rows->field_count;
	for (unsigned index = 0; index < drawing->panel_count; index++)
		drawing->panels[index] = (struct panel){.fields = {{index, 0, 1}}, .field_count = 1, .slots = rows->fields[index].rows};
	if (!drawing->interleaved)
		return;
	struct panel *panel = &drawing->panels[0];
	const int64_t first = rows->fields[0].offset_halves, second = rows->fields[1].offset_halves, top = first < second ? first : second;
	panel->field_count = 2;
	panel->fields[0] = (struct panel_field){0, first - top, 2};
	panel->fields[1] = (struct panel_field){1, second - top, 2};
	panel->slots = 0;
	for (unsigned index = 0; index < 2; index++) {
		const int64_t end = panel->fields[index].first + 2 * (int64_t)(rows->fields[index].rows - 1) + 1;
		panel->slots = end > panel->slots ? end : panel->slots;
	}
}

static int64_t place_panels(struct frame_drawing *drawing)
{
	int64_t slots = 0, y = HEAD_HEIGHT + RULER_HEIGHT;
	for (unsigned index = 0; index < drawing->panel_count; index++)
		slots += drawing->panels[index].slots;
	int64_t height = plot_length(FRAME_HEIGHT, slots);
	height = height > slots * TALLEST_ROW ? slots * TALLEST_ROW : height;
	for (unsigned index = 0; index < drawing->panel_count; index++) {
		struct panel *panel = &drawing->panels[index];
		y += drawing->rows.field_count > 1 ? PANEL_HEAD : 0;
		panel->y = y;
		panel->height = svg_share(height, panel->slots, slots);
		y += frame_blocks_height(drawing, panel) + CAPTION_HEIGHT + (panel->field_count > 1 ? PX(18) : 0);
		y += index + 1 < drawing->panel_count ? RULER_HEIGHT : 0;
	}
	return y;
}

static bool prepare(struct frame_drawing *drawing, const struct timeline *timeline, struct arena *arena)
{
	if (!frame_rows_make(&drawing->rows, timeline, arena))
		return false;
	drawing->interleaved = drawing->interleaved && drawing->rows.interlaced;
	drawing->width = plot_length(FRAME_PLOT, drawing->rows.widest);
	make_panels(drawing);
	choose_frame_steps(drawing);
	return true;
}

static void draw_whole(struct frame_drawing *drawing, struct text *out, const struct picture *picture)
{
	const struct timeline *timeline = drawing->rows.timeline;
	const int64_t panels_end = place_panels(drawing), width = FRAME_LEFT + drawing->width + FRAME_SIDE;
	const bool left_out = drawing->row_step > 1 || drawing->cell_step > 1;
	struct svg *svg = drawing->svg;
	struct text title = {0}, description = {0};
	put_title(timeline, &title);
	put_description(drawing, &description);
	svg_begin(svg, out, picture, width, panels_end + LEGEND_HEIGHT + (left_out ? PX(24) : 0), text_string(&title),
	          text_string(&description));
	svg_fitted(svg, "title", PX(16), PX(34), ANCHOR_START, width - PX(32), SVG_TITLE_SIZE, text_string(&title));
	svg_fitted(svg, "note", PX(16), PX(58), ANCHOR_START, width - PX(32), 15, timeline->plan->note);
	for (unsigned index = 0; index < drawing->panel_count; index++)
		draw_panel(drawing, &drawing->panels[index]);
	draw_legend(drawing, panels_end + PX(8));
	draw_left_out(drawing, panels_end + LEGEND_HEIGHT + PX(10));
	svg_end(svg);
	svg_release(svg, &title);
	svg_release(svg, &description);
}

bool view_frame_svg(struct text *out, const struct picture *picture, const struct timeline *timeline, bool interleaved)
{
	struct arena *arena = arena_create();
	struct svg svg = {.out = out, .picture = picture};
	struct frame_drawing drawing = {.svg = &svg, .interleaved = interleaved};
	const bool made = arena != NULL && prepare(&drawing, timeline, arena);
	if (made)
		draw_whole(&drawing, out, picture);
	arena_destroy(arena);
	return made && !out->failed;
}
