// The picture of a line: heading and limits, and where its parts stand.
#include "view/draw_line.h"

#include <inttypes.h>

#include "base/arena.h"
#include "base/text.h"
#include "view/figures.h"
#include "view/pictures.h"

#define HEAD_HEIGHT PX(76)
#define LIMIT_HEIGHT PX(30)
#define FOOT_LINE PX(20)
#define GAP PX(10)

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

int64_t line_plot_width(int64_t ticks)
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
		line_put_region_words(drawing, words, index);
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
	int64_t y = HEAD_HEIGHT + line_regions_height(drawing);
	const int64_t traces = y, composite = traces + line_traces_height(drawing), rulers = composite + line_composite_height(drawing);
	svg_group(svg, "plot");
	svg_whole(svg, "data-ticks", drawing->shape.ticks);
	svg_length(svg, "data-left", LINE_LEFT);
	svg_length(svg, "data-width", drawing->width);
	draw_line_guides(drawing, y - GAP, rulers + PX(6));
	draw_line_regions(drawing, HEAD_HEIGHT, "regions");
	draw_line_traces(drawing, traces);
	draw_line_composite(drawing, composite);
	draw_line_rulers(drawing, rulers, "cells");
	y = rulers + LINE_RULERS_HEIGHT;
	draw_limits(drawing, y);
	svg_close(svg);
	draw_foot(drawing, y + limits_height(drawing) + GAP);
}

uint32_t line_runs_of_a_trace(const struct plan *plan)
{
	return MOST_RUNS / (uint32_t)plan->signal_count;
}

static bool prepare(struct line_drawing *drawing, const struct timeline *timeline, uint32_t line, struct arena *arena)
{
	if (!line_shape_make(&drawing->shape, timeline, line, arena) ||
	    !line_limits_find(&drawing->shape, arena, drawing->limits, &drawing->limit_count))
		return false;
	drawing->has_composite = timeline->plan->role_signal[ROLE_COMPOSITE_SYNC] >= 0;
	drawing->width = line_plot_width(drawing->shape.ticks);
	drawing->most_runs = line_runs_of_a_trace(timeline->plan);
	drawing->callouts = arena_array(arena, MOST_REGIONS, sizeof *drawing->callouts);
	if (drawing->callouts == NULL)
		return false;
	line_place_callouts(drawing);
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
		const int64_t height = HEAD_HEIGHT + line_regions_height(&drawing) + line_traces_height(&drawing) +
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
