// The regions of a line: a strip, and the names of narrow ones above it.
#include "view/draw_line.h"

#include "base/text.h"
#include "view/figures.h"

#define CALLOUT_HEIGHT PX(21)
#define MOST_CALLOUT_ROWS 9u
#define STRIP_HEIGHT PX(44)
#define FOOT_LINE PX(20)
#define GAP PX(10)

void line_put_region_words(const struct line_drawing *drawing, struct text *words, size_t index)
{
	const struct laid_region *laid = &drawing->shape.laid->regions[index];
	text_put_lengths(words, &drawing->shape.plan->clock, laid->cells, laid->ticks);
}

static struct shape_run run_of_region(const struct line_drawing *drawing, size_t index)
{
	const struct laid_region *laid = &drawing->shape.laid->regions[index];
	return (struct shape_run){laid->first_cell, laid->cells, laid->start_ticks, laid->ticks, 0};
}

static int64_t region_width(const struct line_drawing *drawing, size_t index)
{
	const struct shape_run run = run_of_region(drawing, index);
	return line_x(drawing, run.tick + run.ticks) - line_x(drawing, run.tick);
}

static int64_t callout_width(const struct line_drawing *drawing, size_t index)
{
	struct text words = {0};
	line_put_region_words(drawing, &words, index);
	const int64_t width = svg_words_width(drawing->shape.type->regions[index].name, SVG_NAME_SIZE) +
	                      svg_words_width(text_string(&words), 13) + PX(24);
	svg_release(drawing->svg, &words);
	return width;
}

static bool fits_in_box(const struct line_drawing *drawing, size_t index)
{
	struct text words = {0};
	line_put_region_words(drawing, &words, index);
	const int64_t lengths = svg_words_width(text_string(&words), 13);
	const int64_t name = svg_words_width(drawing->shape.type->regions[index].name, SVG_NAME_SIZE);
	svg_release(drawing->svg, &words);
	return (lengths > name ? lengths : name) + PX(8) <= region_width(drawing, index);
}

// Rows of callouts above the strip, the first on top. A leader goes straight down from its name: from its beginning, or at the
// picture's right side, where a name stands before its region, from its end. No leader may cross a name.
struct callout_room {
	int64_t ends[MOST_CALLOUT_ROWS];    // of names with the leader at their beginning, so far
	int64_t leaders[MOST_CALLOUT_ROWS]; // the last of them
	int64_t starts[MOST_CALLOUT_ROWS];  // of names with the leader at their end, the leftmost so far
};

// The highest row that is free from x on, so that nothing below reaches there.
static unsigned row_from_left(struct callout_room *room, const struct callout *callout)
{
	unsigned row = MOST_CALLOUT_ROWS;
	while (row > 0 && room->ends[row - 1] <= callout->x)
		row--;
	if (row < MOST_CALLOUT_ROWS) {
		room->ends[row] = callout->x + callout->width;
		room->leaders[row] = callout->leader;
	}
	return row;
}

// The same seen from the right; leaders from the left may not be in the way.
static unsigned row_from_right(struct callout_room *room, const struct callout *callout)
{
	unsigned row = MOST_CALLOUT_ROWS;
	while (row > 0 && room->starts[row - 1] >= callout->leader)
		row--;
	for (; row < MOST_CALLOUT_ROWS; row++) {
		bool free = room->ends[row] <= callout->x;
		for (unsigned above = 0; above < row; above++)
			free = free && room->leaders[above] <= callout->x;
		if (free)
			break;
	}
	if (row < MOST_CALLOUT_ROWS)
		room->starts[row] = callout->x;
	return row;
}

// Gives a region its row, or counts it as one that has no name.
static void place_callout(struct line_drawing *drawing, struct callout_room *room, struct callout *callout)
{
	callout->row = callout->before ? row_from_right(room, callout) : row_from_left(room, callout);
	if (callout->row == MOST_CALLOUT_ROWS)
		drawing->unnamed++;
	else if (callout->row + 1 > drawing->callout_rows)
		drawing->callout_rows = callout->row + 1;
}

static void list_callouts(struct line_drawing *drawing)
{
	const size_t count = drawing->shape.type->region_count;
	const int64_t end = LINE_LEFT + drawing->width + LINE_RIGHT;
	drawing->unnamed = count > MOST_REGIONS ? count - MOST_REGIONS : 0;
	for (size_t index = 0; index < count && index < MOST_REGIONS; index++) {
		if (fits_in_box(drawing, index))
			continue;
		struct callout *callout = &drawing->callouts[drawing->callout_count++];
		const int64_t leader = line_x(drawing, run_of_region(drawing, index).tick) + PX(1), width = callout_width(drawing, index);
		const bool before = leader + width > end;
		*callout = (struct callout){.region = index, .leader = leader, .width = width, .before = before,
		                            .x = before ? leader - width : leader};
	}
}

void line_place_callouts(struct line_drawing *drawing)
{
	struct callout_room room = {{0}, {0}, {0}};
	for (unsigned row = 0; row < MOST_CALLOUT_ROWS; row++)
		room.starts[row] = INT64_MAX;
	list_callouts(drawing);
	for (size_t index = 0; index < drawing->callout_count; index++)
		if (!drawing->callouts[index].before)
			place_callout(drawing, &room, &drawing->callouts[index]);
	for (size_t index = drawing->callout_count; index-- > 0;)
		if (drawing->callouts[index].before)
			place_callout(drawing, &room, &drawing->callouts[index]);
}

int64_t line_regions_height(const struct line_drawing *drawing)
{
	return (int64_t)drawing->callout_rows * CALLOUT_HEIGHT + STRIP_HEIGHT + GAP + (drawing->unnamed > 0 ? FOOT_LINE : 0);
}

static void draw_callout(const struct line_drawing *drawing, const struct callout *callout, int64_t y)
{
	struct svg *svg = drawing->svg;
	struct text words = {0};
	const int64_t base = y + (int64_t)callout->row * CALLOUT_HEIGHT + PX(15);
	const int64_t strip = y + (int64_t)drawing->callout_rows * CALLOUT_HEIGHT;
	svg_line(svg, "hair", callout->leader, base - PX(11), callout->leader, strip);
	line_put_region_words(drawing, &words, callout->region);
	svg_named(svg, callout->before ? callout->leader - PX(5) : callout->leader + PX(5), base,
	          callout->before ? ANCHOR_END : ANCHOR_START, callout->width, drawing->shape.type->regions[callout->region].name,
	          text_string(&words));
	svg_release(svg, &words);
}

static void draw_region_box(struct line_drawing *drawing, size_t index, int64_t y)
{
	const struct shape_run run = run_of_region(drawing, index);
	const char *name = drawing->shape.type->regions[index].name;
	struct svg *svg = drawing->svg;
	struct text words = {0};
	const int64_t x = line_x(drawing, run.tick), width = region_width(drawing, index);
	line_put_region_words(drawing, &words, index);
	svg_open(svg, "rect");
	svg_attribute(svg, "class", "region rule spare");
	svg_length(svg, "x", x);
	svg_length(svg, "y", y);
	svg_length(svg, "width", width);
	svg_length(svg, "height", STRIP_HEIGHT);
	svg_attribute(svg, "data-region", name);
	line_run_attributes(drawing, &run);
	struct text title = {0};
	text_printf(&title, "%s: %s", name, text_string(&words));
	svg_title(svg, text_string(&title));
	svg_close(svg);
	if (fits_in_box(drawing, index)) {
		svg_text(svg, "name", x + width / 2, y + PX(19), ANCHOR_MIDDLE, name);
		svg_text(svg, "small", x + width / 2, y + PX(36), ANCHOR_MIDDLE, text_string(&words));
	}
	svg_release(svg, &title);
	svg_release(svg, &words);
}

void draw_line_regions(struct line_drawing *drawing, int64_t y, const char *label)
{
	const int64_t strip = y + (int64_t)drawing->callout_rows * CALLOUT_HEIGHT;
	struct svg *svg = drawing->svg;
	svg_group(svg, "regions");
	svg_text(svg, "name", PX(16), strip + PX(27), ANCHOR_START, label);
	for (size_t index = 0; index < drawing->shape.type->region_count && index < MOST_REGIONS; index++)
		draw_region_box(drawing, index, strip);
	for (size_t index = 0; index < drawing->callout_count; index++)
		if (drawing->callouts[index].row < MOST_CALLOUT_ROWS)
			draw_callout(drawing, &drawing->callouts[index], y);
	if (drawing->unnamed > 0) {
		struct text words = {0};
		text_put_count(&words, drawing->unnamed, "region is", "regions are");
		text_put(&words, " not named or not drawn, for want of room; \"scanlatch check\" lists all");
		svg_text(svg, "small", LINE_LEFT, strip + STRIP_HEIGHT + PX(16), ANCHOR_START, text_string(&words));
		svg_release(svg, &words);
	}
	svg_close(svg);
}

void draw_line_guides(struct line_drawing *drawing, int64_t from, int64_t to)
{
	struct svg *svg = drawing->svg;
	struct text data = {0};
	for (size_t index = 0; index <= drawing->shape.type->region_count && index <= MOST_REGIONS; index++) {
		const int64_t tick = index < drawing->shape.type->region_count ? run_of_region(drawing, index).tick : drawing->shape.ticks;
		text_put(&data, "M");
		svg_put_length(&data, line_x(drawing, tick));
		text_put(&data, " ");
		svg_put_length(&data, from);
		text_put(&data, "V");
		svg_put_length(&data, to);
	}
	svg_open(svg, "path");
	svg_attribute(svg, "class", "guide");
	svg_attribute(svg, "d", text_string(&data));
	svg_close(svg);
	svg_release(svg, &data);
}
