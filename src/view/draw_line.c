// The picture of a line: heading, regions, rulers, limits.
#include "view/draw_line.h"

#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "view/figures.h"
#include "view/pictures.h"
#include "view/ruler.h"

#define HEAD_HEIGHT PX(76)
#define CALLOUT_HEIGHT PX(21)
#define MOST_CALLOUT_ROWS 9u
#define STRIP_HEIGHT PX(44)
#define LIMIT_HEIGHT PX(30)
#define FOOT_LINE PX(20)
#define GAP PX(10)
#define LINE_RULERS_HEIGHT PX(84)

// A region's name with its lengths, and whether it fits into its box.
static void put_region_words(const struct line_drawing *drawing, struct text *words, size_t index)
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
	put_region_words(drawing, &words, index);
	const int64_t width = svg_words_width(drawing->shape.type->regions[index].name, SVG_NAME_SIZE) +
	                      svg_words_width(text_string(&words), 13) + PX(24);
	svg_release(drawing->svg, &words);
	return width;
}

static bool fits_in_box(const struct line_drawing *drawing, size_t index)
{
	struct text words = {0};
	put_region_words(drawing, &words, index);
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

static void place_callouts(struct line_drawing *drawing)
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

static int64_t regions_height(const struct line_drawing *drawing)
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
	put_region_words(drawing, &words, callout->region);
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
	put_region_words(drawing, &words, index);
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

static void draw_regions(struct line_drawing *drawing, int64_t y)
{
	const int64_t strip = y + (int64_t)drawing->callout_rows * CALLOUT_HEIGHT;
	struct svg *svg = drawing->svg;
	svg_group(svg, "regions");
	svg_text(svg, "name", PX(16), strip + PX(27), ANCHOR_START, "regions");
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

// Dotted lines down from the beginnings of regions.
static void draw_guides(struct line_drawing *drawing, int64_t from, int64_t to)
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

static void draw_mark(struct line_drawing *drawing, int64_t x, int64_t y, bool long_mark, const char *words)
{
	svg_line(drawing->svg, "rule", x, y, x, y + (long_mark ? PX(9) : PX(5)));
	if (long_mark)
		svg_text(drawing->svg, "small", x, y + PX(23), ANCHOR_MIDDLE, words);
}

static void draw_cell_ruler(struct line_drawing *drawing, int64_t y)
{
	const int64_t cells = drawing->shape.cells, fine = ruler_step(cells, 200), coarse = ruler_step(cells, 16);
	struct text words = {0};
	svg_text(drawing->svg, "name", PX(16), y + PX(16), ANCHOR_START, "cells");
	svg_line(drawing->svg, "rule", LINE_LEFT, y, LINE_LEFT + drawing->width, y);
	for (int64_t cell = 0; cell <= cells; cell += fine) {
		words.length = 0;
		text_printf(&words, "%" PRId64, cell);
		draw_mark(drawing, line_x(drawing, drawing->shape.tick_of_cell[cell]), y, cell % coarse == 0, text_string(&words));
	}
	svg_release(drawing->svg, &words);
}

// Marks at whole multiples of a step of 1, 2 or 5 times a power of ten of nanoseconds.
static void draw_time_ruler(struct line_drawing *drawing, int64_t y)
{
	const struct clock *clock = &drawing->shape.plan->clock;
	struct fraction seconds, nanoseconds, offset;
	struct text words = {0};
	if (!seconds_of_ticks(clock, drawing->shape.ticks, &seconds) ||
	    !fraction_multiply(seconds, fraction_whole(1000000000), &nanoseconds))
		return;
	const int64_t length = fraction_floor(nanoseconds), coarse = ruler_step(length, 14), fine = ruler_step(length, 140);
	svg_text(drawing->svg, "name", PX(16), y + PX(16), ANCHOR_START, "us");
	svg_line(drawing->svg, "rule", LINE_LEFT, y, LINE_LEFT + drawing->width, y);
	for (int64_t at = 0; at <= length; at += fine) {
		struct fraction time = {0, 1};
		if (!fraction_make(at, 1000000000, &seconds) || !fraction_divide(fraction_whole(at), nanoseconds, &offset) ||
		    !fraction_multiply(seconds, fraction_whole(1000000), &time))
			break;
		words.length = 0;
		text_put_rounded(&words, time, 3);
		draw_mark(drawing, LINE_LEFT + svg_share(drawing->width, offset.numerator, offset.denominator), y, at % coarse == 0,
		          text_string(&words));
	}
	svg_release(drawing->svg, &words);
}

static void draw_rulers(struct line_drawing *drawing, int64_t y)
{
	svg_group(drawing->svg, "ruler");
	draw_cell_ruler(drawing, y + PX(6));
	svg_close(drawing->svg);
	svg_group(drawing->svg, "ruler");
	draw_time_ruler(drawing, y + PX(44));
	svg_close(drawing->svg);
}

static int64_t limits_height(const struct line_drawing *drawing)
{
	return drawing->limit_count > 0 ? (int64_t)drawing->limit_count * LIMIT_HEIGHT + PX(40) : 0;
}

// A place on the picture, kept within the plot: edges may lie in the lines around.
static int64_t limit_x(const struct line_drawing *drawing, int64_t tick)
{
	const int64_t inside = tick < 0 ? 0 : tick > drawing->shape.ticks ? drawing->shape.ticks : tick;
	return line_x(drawing, inside);
}

// The interval in which the edge may lie. Without a bound on one side it is open there, and reaches past the edge.
static void draw_interval(const struct line_drawing *drawing, const struct line_limit *limit, int64_t y, int64_t *left, int64_t *right)
{
	struct svg *svg = drawing->svg;
	const int64_t edge = limit_x(drawing, limit->at_start ? limit->from_tick : limit->to_tick);
	*left = limit_x(drawing, limit->has_low ? limit->low_tick : limit->high_tick);
	*right = limit_x(drawing, limit->has_high ? limit->high_tick : limit->low_tick);
	if (!limit->has_low)
		*left = (edge < *left ? edge : *left) - PX(16);
	if (!limit->has_high)
		*right = (edge > *right ? edge : *right) + PX(16);
	if (*right < *left + PX(1))
		*right = *left + PX(1);
	svg_box(svg, limit->kept ? "allowed" : "missed-box", *left, y + PX(6), *right - *left, PX(16));
	if (limit->has_low)
		svg_line(svg, "rule", *left, y + PX(3), *left, y + PX(25));
	if (limit->has_high)
		svg_line(svg, "rule", *right, y + PX(3), *right, y + PX(25));
}

static void put_limit_words(struct text *words, const struct line_limit *limit)
{
	text_put_item_value(words, limit->item, limit->value);
	text_put(words, limit->kept ? ", kept: " : ", MISSED: ");
	text_put_allowed(words, limit->limit);
}

// The item's length from edge to edge, and a diamond at the edge that sets it.
static void draw_measured(const struct line_drawing *drawing, const struct line_limit *limit, int64_t y)
{
	struct svg *svg = drawing->svg;
	const int64_t from = limit_x(drawing, limit->from_tick), to = limit_x(drawing, limit->to_tick), middle = y + PX(14);
	const int64_t edge = limit->at_start ? from : to;
	struct text data = {0};
	svg_line(svg, "rule", from, middle, to, middle);
	svg_line(svg, "rule", limit->at_start ? to : from, middle - PX(5), limit->at_start ? to : from, middle + PX(5));
	text_put(&data, "M");
	svg_put_length(&data, edge - PX(5));
	text_put(&data, " ");
	svg_put_length(&data, middle);
	text_put(&data, "l5-6 5 6-5 6z");
	svg_open(svg, "path");
	svg_attribute(svg, "class", "rule diamond");
	svg_attribute(svg, "d", text_string(&data));
	svg_close(svg);
	svg_release(svg, &data);
}

static void put_exact(struct svg *svg, const char *name, struct fraction value)
{
	struct text words = {0};
	text_put_fraction(&words, value);
	svg_attribute(svg, name, text_string(&words));
	svg_release(svg, &words);
}

// Behind what is drawn, or before it, or on it: where there is room.
static void draw_limit_words(const struct line_drawing *drawing, const struct line_limit *limit, int64_t left, int64_t right, int64_t y,
                             const char *words)
{
	const int64_t width = svg_words_width(words, limit->kept ? 13 : 15) + PX(8); // missed ones are heavy
	const char *class = limit->kept ? "small" : "small missed";
	struct svg *svg = drawing->svg;
	if (right + width <= LINE_LEFT + drawing->width + LINE_RIGHT) {
		svg_text(svg, class, right, y + PX(19), ANCHOR_START, words);
	} else if (left - width >= LINE_LEFT) {
		svg_text(svg, class, left, y + PX(19), ANCHOR_END, words);
	} else {
		svg_box(svg, "plate", (left + right - width) / 2, y + PX(5), width, PX(20));
		svg_text(svg, class, (left + right) / 2, y + PX(19), ANCHOR_MIDDLE, words);
	}
}

static void draw_limit(const struct line_drawing *drawing, const struct line_limit *limit, int64_t y)
{
	struct svg *svg = drawing->svg;
	struct text words = {0};
	int64_t left, right;
	const int64_t from = limit_x(drawing, limit->from_tick), to = limit_x(drawing, limit->to_tick);
	put_limit_words(&words, limit);
	svg_group(svg, "limit");
	svg_attribute(svg, "data-item", limit_item_facts(limit->item)->name);
	put_exact(svg, "data-value", limit->value);
	if (limit->limit->has_low)
		put_exact(svg, "data-low", limit->limit->low);
	if (limit->limit->has_high)
		put_exact(svg, "data-high", limit->limit->high);
	svg_attribute(svg, "data-unit", limit_item_facts(limit->item)->dimension == DIMENSION_TIME ? "s" : "cycles");
	svg_whole(svg, "data-kept", limit->kept);
	svg_fitted(svg, "small", PX(16), y + PX(19), ANCHOR_START, LINE_LEFT - PX(20), 13, limit_item_facts(limit->item)->name);
	draw_interval(drawing, limit, y, &left, &right);
	draw_measured(drawing, limit, y);
	if (left > from)
		left = from;
	if (right < to)
		right = to;
	draw_limit_words(drawing, limit, left - PX(10), right + PX(10), y, text_string(&words));
	svg_close(svg);
	svg_release(svg, &words);
}

static void draw_limits(struct line_drawing *drawing, int64_t y)
{
	const struct plan *plan = drawing->shape.plan;
	struct text words = {0};
	if (drawing->limit_count == 0)
		return;
	text_printf(&words, "limits of %s, grade %s: the bar is where the edge may be, the diamond where it is", plan->standard->name,
	            limit_grade_name(plan->grade));
	svg_text(drawing->svg, "name", PX(16), y + PX(24), ANCHOR_START, text_string(&words));
	for (size_t index = 0; index < drawing->limit_count; index++)
		draw_limit(drawing, &drawing->limits[index], y + PX(36) + (int64_t)index * LIMIT_HEIGHT);
	svg_release(drawing->svg, &words);
}

// The plot's width: whole thousandths a tick, three digits of them, where that is possible.
static int64_t plot_width(int64_t ticks)
{
	int64_t scale = LINE_PLOT / ticks, unit = 1;
	if (scale < 50)
		return LINE_PLOT;
	while (scale / unit >= 1000)
		unit *= 10;
	return scale / unit * unit * ticks;
}

static void put_heading(const struct line_shape *shape, struct text *title)
{
	text_printf(title, "%s, line %" PRIu32 ", \"%s\": ", shape->plan->name, shape->line, shape->type->name);
	text_put_lengths(title, &shape->plan->clock, shape->cells, shape->ticks);
}

static void put_description(const struct line_drawing *drawing, struct text *words)
{
	const struct plan *plan = drawing->shape.plan;
	text_put(words, "The levels of ");
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		text_printf(words, "%s%s", signal == 0 ? "" : ", ", plan->signals[signal].name);
	text_put(words, " at their pins over one line, to scale in ticks. Regions: ");
	for (size_t index = 0; index < drawing->shape.type->region_count && index < 32; index++) {
		text_printf(words, "%s%s ", index == 0 ? "" : "; ", drawing->shape.type->regions[index].name);
		put_region_words(drawing, words, index);
	}
	text_put(words, drawing->shape.type->region_count > 32 ? "; and more." : ".");
	if (shape_stretched_run(&drawing->shape, 0).cells > 0)
		text_printf(words, " Stretched cells are %" PRId64 " ticks longer.", plan->clock.stretch_ticks);
}

static void draw_foot(const struct line_drawing *drawing, int64_t y)
{
	struct svg *svg = drawing->svg;
	struct text words = {0};
	text_put(&words, "1 and 0 are levels at the pins; lines and cells are counted from 0");
	if (shape_stretched_run(&drawing->shape, 0).cells > 0)
		text_printf(&words, "; dotted columns are stretched cells, %" PRId64 " ticks longer than the %" PRId64 " of others",
		            drawing->shape.plan->clock.stretch_ticks, drawing->shape.plan->clock.cell_ticks);
	svg_text(svg, "small", PX(16), y + PX(14), ANCHOR_START, text_string(&words));
	if (drawing->has_composite)
		svg_text(svg, "small", PX(16), y + PX(34), ANCHOR_START, composite_levels_of(drawing->shape.timeline)->source);
	svg_release(svg, &words);
}

static void draw_parts(struct line_drawing *drawing, const char *title)
{
	struct svg *svg = drawing->svg;
	const struct plan *plan = drawing->shape.plan;
	const int64_t room = LINE_LEFT + drawing->width + LINE_RIGHT - PX(32);
	svg_fitted(svg, "title", PX(16), PX(34), ANCHOR_START, room, SVG_TITLE_SIZE, title);
	svg_fitted(svg, "note", PX(16), PX(58), ANCHOR_START, room, 15, plan->note);
	int64_t y = HEAD_HEIGHT + regions_height(drawing);
	const int64_t traces = y, composite = traces + line_traces_height(drawing), rulers = composite + line_composite_height(drawing);
	svg_group(svg, "plot");
	svg_whole(svg, "data-ticks", drawing->shape.ticks);
	svg_length(svg, "data-left", LINE_LEFT);
	svg_length(svg, "data-width", drawing->width);
	draw_guides(drawing, y - GAP, rulers + PX(6));
	draw_regions(drawing, HEAD_HEIGHT);
	draw_line_traces(drawing, traces);
	draw_line_composite(drawing, composite);
	draw_rulers(drawing, rulers);
	y = rulers + LINE_RULERS_HEIGHT;
	draw_limits(drawing, y);
	svg_close(svg);
	draw_foot(drawing, y + limits_height(drawing) + GAP);
}

static uint32_t runs_of_a_trace(const struct plan *plan)
{
	return MOST_RUNS / (uint32_t)plan->signal_count;
}

static bool prepare(struct line_drawing *drawing, const struct timeline *timeline, uint32_t line, struct arena *arena)
{
	if (!line_shape_make(&drawing->shape, timeline, line, arena) ||
	    !line_limits_find(&drawing->shape, arena, drawing->limits, &drawing->limit_count))
		return false;
	drawing->has_composite = timeline->plan->role_signal[ROLE_COMPOSITE_SYNC] >= 0;
	drawing->width = plot_width(drawing->shape.ticks);
	drawing->most_runs = runs_of_a_trace(timeline->plan);
	drawing->callouts = arena_array(arena, MOST_REGIONS, sizeof *drawing->callouts);
	if (drawing->callouts == NULL)
		return false;
	place_callouts(drawing);
	return true;
}

bool view_line_svg(struct text *out, const struct picture *picture, const struct timeline *timeline, uint32_t line)
{
	struct arena *arena = arena_create();
	struct svg svg = {.out = out, .picture = picture};
	struct line_drawing drawing = {.svg = &svg};
	const bool made = arena != NULL && prepare(&drawing, timeline, line, arena);
	if (made) {
		struct text title = {0}, description = {0};
		const int64_t height = HEAD_HEIGHT + regions_height(&drawing) + line_traces_height(&drawing) +
		                       line_composite_height(&drawing) + LINE_RULERS_HEIGHT + limits_height(&drawing) + GAP + (drawing.has_composite ? 2 : 1) * FOOT_LINE + PX(12);
		put_heading(&drawing.shape, &title);
		put_description(&drawing, &description);
		svg_begin(&svg, out, picture, LINE_LEFT + drawing.width + LINE_RIGHT, height, text_string(&title), text_string(&description));
		draw_parts(&drawing, text_string(&title));
		svg_end(&svg);
		svg_release(&svg, &title);
		svg_release(&svg, &description);
	}
	arena_destroy(arena);
	return made && !out->failed;
}
