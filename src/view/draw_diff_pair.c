// A line before and after: regions and traces over each other, to one scale of time, and marks from where an edge was to where it is.
#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "compare/edges.h"
#include "view/draw_diff.h"
#include "view/figures.h"

#define GAP PX(12)
#define NONE SIZE_MAX
#define MOST_MARKS 200u // of a signal
#define LABEL_Y PX(49)  // in the gap between both traces

struct edge {
	uint32_t cell;
	int64_t tick;
};

struct edge_list {
	size_t count;
	struct edge *edges;
	struct signal_edge *places; // on the picture
};

// The two lines of a pair, to one scale.
struct pair_drawing {
	struct svg *svg;
	const struct drawn_pair *pair;
	struct line_drawing old, now;
	struct arena *arena;
	bool to_scale;         // lengths are to scale: they could be compared
	bool failed;           // memory is out
};

// The share of a plot of the longer line that each is wide: exact; false where the times do not fit.
static bool share_widths(struct pair_drawing *drawing)
{
	struct fraction old, now, share;
	const struct line_shape *before = &drawing->old.shape, *after = &drawing->now.shape;
	if (!seconds_of_ticks(&before->plan->clock, before->ticks, &old) || !seconds_of_ticks(&after->plan->clock, after->ticks, &now))
		return false;
	const bool old_longer = fraction_compare(old, now) > 0;
	if (!(old_longer ? fraction_divide(now, old, &share) : fraction_divide(old, now, &share)))
		return false;
	struct line_drawing *longer = old_longer ? &drawing->old : &drawing->now, *shorter = old_longer ? &drawing->now : &drawing->old;
	longer->width = line_plot_width(longer->shape.ticks);
	shorter->width = svg_share(longer->width, share.numerator, share.denominator);
	return true;
}

static bool prepare(struct pair_drawing *drawing)
{
	const struct drawn_pair *pair = drawing->pair;
	if (!line_shape_make_of(&drawing->old.shape, pair->comparison->old, pair->old_pins, pair->old_line, drawing->arena) ||
	    !line_shape_make_of(&drawing->now.shape, pair->comparison->now, pair->now_pins, pair->now_line, drawing->arena))
		return false;
	drawing->old.svg = drawing->now.svg = drawing->svg;
	drawing->old.width = drawing->now.width = LINE_PLOT;
	drawing->to_scale = share_widths(drawing);
	drawing->old.most_runs = line_runs_of_a_trace(drawing->old.shape.plan);
	drawing->now.most_runs = line_runs_of_a_trace(drawing->now.shape.plan);
	drawing->old.callouts = arena_array(drawing->arena, MOST_REGIONS, sizeof *drawing->old.callouts);
	if (drawing->old.callouts == NULL)
		return false;
	line_place_callouts(&drawing->old);
	return true;
}

// The edges of a signal in a line: where its level changes, not where the line begins.
static bool list_edges(struct pair_drawing *drawing, const struct line_drawing *line, size_t signal, struct edge_list *list)
{
	const uint32_t runs = shape_signal_runs(&line->shape, signal, line->most_runs + 1);
	*list = (struct edge_list){.count = 0};
	list->edges = arena_array(drawing->arena, runs, sizeof *list->edges);
	list->places = arena_array(drawing->arena, runs, sizeof *list->places);
	if (list->edges == NULL || list->places == NULL)
		return false;
	for (uint32_t cell = 0; runs <= line->most_runs && cell < line->shape.cells;) {
		const struct shape_run run = shape_signal_run(&line->shape, signal, cell);
		if (cell > 0) {
			list->edges[list->count] = (struct edge){run.cell, run.tick};
			list->places[list->count++] = (struct signal_edge){run.value == 1, line_x(line, run.tick) - LINE_LEFT};
		}
		cell = run.cell + run.cells;
	}
	return true;
}

// Time.

static void put_at(struct text *out, const struct line_shape *shape, const struct edge *edge)
{
	text_printf(out, "cell %" PRIu32 ", ", edge->cell);
	text_put_ticks_us(out, &shape->plan->clock, edge->tick);
	text_put(out, " us");
}

// How much later an edge is: 0 where the times do not fit.
static struct fraction later_by(const struct pair_drawing *drawing, const struct edge *old, const struct edge *now)
{
	struct fraction before, after, later = {0, 1};
	if (!seconds_of_ticks(&drawing->old.shape.plan->clock, old->tick, &before) ||
	    !seconds_of_ticks(&drawing->now.shape.plan->clock, now->tick, &after) || !fraction_subtract(after, before, &later))
		return (struct fraction){0, 1};
	return later;
}

static bool is_moved(const struct pair_drawing *drawing, const struct edge *old, const struct edge *now)
{
	return later_by(drawing, old, now).numerator != 0 || (drawing->pair->comparison->same_clock && old->cell != now->cell);
}

static uint64_t size_of(int64_t value)
{
	return value < 0 ? 0 - (uint64_t)value : (uint64_t)value;
}

// "+1 cell"; where cells do not tell, "+3 ticks"; with another clock, "+0.126 us".
static void put_shift(const struct pair_drawing *drawing, struct text *out, const struct edge *old, const struct edge *now)
{
	const int64_t cells = (int64_t)now->cell - old->cell, ticks = now->tick - old->tick;
	if (!drawing->pair->comparison->same_clock) {
		const struct fraction later = later_by(drawing, old, now);
		text_put(out, later.numerator > 0 ? "+" : "");
		text_put_time_in(out, later, UNIT_MICROSECONDS);
	} else if (cells != 0) {
		text_put(out, cells > 0 ? "+" : "-");
		text_put_count(out, size_of(cells), "cell", "cells");
	} else {
		text_put(out, ticks > 0 ? "+" : "-");
		text_put_count(out, size_of(ticks), "tick", "ticks");
	}
}

// Marks.

// A mark and its words, which stand beside it where there is room.
struct mark {
	const struct edge *old, *now; // NULL: there was none, or is none
	int64_t left, right;
};

static int64_t x_of(const struct line_drawing *line, const struct edge *edge)
{
	return line_x(line, edge->tick);
}

static void draw_move(const struct pair_drawing *drawing, const struct mark *mark, int64_t y)
{
	struct text data = {0};
	text_put(&data, "M");
	svg_put_length(&data, x_of(&drawing->old, mark->old));
	text_put(&data, " ");
	svg_put_length(&data, y + LINE_LOW_Y);
	text_put(&data, "L");
	svg_put_length(&data, x_of(&drawing->now, mark->now));
	text_put(&data, " ");
	svg_put_length(&data, y + LINE_TRACE_HEIGHT + LINE_HIGH_Y);
	text_put(&data, "m-4-7l4 7 4-7");
	svg_attribute(drawing->svg, "d", text_string(&data));
	svg_release(drawing->svg, &data);
}

// A ring around an edge that has no other.
static void draw_ring(const struct pair_drawing *drawing, const struct mark *mark, int64_t y)
{
	const int64_t x = mark->left, middle = y + (LINE_HIGH_Y + LINE_LOW_Y) / 2 + (mark->old == NULL ? LINE_TRACE_HEIGHT : 0);
	struct text data = {0};
	text_put(&data, "M");
	svg_put_length(&data, x - PX(7));
	text_put(&data, " ");
	svg_put_length(&data, middle);
	text_put(&data, "a7 7 0 1 0 14 0a7 7 0 1 0-14 0");
	svg_attribute(drawing->svg, "d", text_string(&data));
	svg_release(drawing->svg, &data);
}

static void put_mark_words(const struct pair_drawing *drawing, struct text *words, const char *name, bool asserts, const struct mark *mark)
{
	text_printf(words, "%s %s at ", name, asserts ? "begins" : "ends");
	if (mark->now == NULL) {
		put_at(words, &drawing->old.shape, mark->old);
		text_put(words, ": gone");
		return;
	}
	put_at(words, &drawing->now.shape, mark->now);
	if (mark->old == NULL) {
		text_put(words, ": new");
		return;
	}
	text_put(words, "; was at ");
	put_at(words, &drawing->old.shape, mark->old);
	text_put(words, ": ");
	put_shift(drawing, words, mark->old, mark->now);
}

static void put_edge_attributes(struct svg *svg, const char *cell, const char *tick, const struct edge *edge)
{
	if (edge == NULL)
		return;
	svg_whole(svg, cell, edge->cell);
	svg_whole(svg, tick, edge->tick);
}

static void draw_mark(const struct pair_drawing *drawing, const char *name, bool asserts, const struct mark *mark, int64_t y)
{
	struct svg *svg = drawing->svg;
	struct text words = {0};
	svg_open(svg, "path");
	svg_attribute(svg, "class", "moved");
	svg_attribute(svg, "data-edge", asserts ? "begins" : "ends");
	put_edge_attributes(svg, "data-old-cell", "data-old-tick", mark->old);
	put_edge_attributes(svg, "data-cell", "data-tick", mark->now);
	if (mark->old != NULL && mark->now != NULL)
		draw_move(drawing, mark, y);
	else
		draw_ring(drawing, mark, y);
	put_mark_words(drawing, &words, name, asserts, mark);
	svg_title(svg, text_string(&words));
	svg_close(svg);
	svg_release(svg, &words);
}

// Beside the mark, behind it or else before it, if no other mark or label is there. *free: the end of what has been drawn.
static void draw_label(const struct pair_drawing *drawing, const struct mark *mark, const struct mark *next, int64_t y, int64_t *free)
{
	struct text words = {0};
	if (mark->old != NULL && mark->now != NULL)
		put_shift(drawing, &words, mark->old, mark->now);
	else
		text_put(&words, mark->now == NULL ? "gone" : "new");
	const int64_t width = svg_words_width(text_string(&words), 13) + PX(8);
	const int64_t end = next != NULL ? next->left - PX(5) : LINE_LEFT + LINE_PLOT + LINE_RIGHT;
	const int64_t right = mark->right + PX(7), left = mark->left - PX(7);
	if (right + width <= end) {
		svg_text(drawing->svg, "small", right, y + LABEL_Y, ANCHOR_START, text_string(&words));
		*free = right + width;
	} else {
		if (left - width >= *free)
			svg_text(drawing->svg, "small", left, y + LABEL_Y, ANCHOR_END, text_string(&words));
		*free = mark->right;
	}
	svg_release(drawing->svg, &words);
}

static struct mark mark_of(const struct pair_drawing *drawing, const struct edge *old, const struct edge *now)
{
	const int64_t before = old != NULL ? x_of(&drawing->old, old) : x_of(&drawing->now, now);
	const int64_t after = now != NULL ? x_of(&drawing->now, now) : before;
	return (struct mark){old, now, before < after ? before : after, before < after ? after : before};
}

struct mark_list {
	struct mark *marks;
	bool *asserts;
	size_t count;
};

static void add_mark(const struct pair_drawing *drawing, struct mark_list *list, bool asserts, const struct edge *old, const struct edge *now)
{
	if (old != NULL && now != NULL && !is_moved(drawing, old, now))
		return;
	list->asserts[list->count] = asserts;
	list->marks[list->count++] = mark_of(drawing, old, now);
}

// In the order of the line: old edges with what they are now; before each, those that are new.
static bool list_marks(struct pair_drawing *drawing, const struct edge_list *old, const struct edge_list *now, struct mark_list *list)
{
	const int64_t length = drawing->old.width > drawing->now.width ? drawing->old.width : drawing->now.width;
	const size_t *now_of = NULL;
	size_t next = 0;
	*list = (struct mark_list){arena_array(drawing->arena, old->count + now->count, sizeof *list->marks),
	                           arena_array(drawing->arena, old->count + now->count, sizeof *list->asserts), 0};
	if (list->marks == NULL || list->asserts == NULL ||
	    !edges_match(drawing->arena, old->places, old->count, now->places, now->count, length, &now_of))
		return false;
	for (size_t index = 0; index < old->count; index++) {
		for (; now_of[index] != NONE && next < now_of[index]; next++)
			add_mark(drawing, list, now->places[next].asserts, NULL, &now->edges[next]);
		add_mark(drawing, list, old->places[index].asserts, &old->edges[index], now_of[index] != NONE ? &now->edges[next] : NULL);
		next += now_of[index] != NONE;
	}
	for (; next < now->count; next++)
		add_mark(drawing, list, now->places[next].asserts, NULL, &now->edges[next]);
	return true;
}

static void draw_marks(const struct pair_drawing *drawing, const char *name, const struct mark_list *list, int64_t y)
{
	int64_t free = LINE_LEFT;
	for (size_t index = 0; index < list->count && index < MOST_MARKS; index++) {
		draw_mark(drawing, name, list->asserts[index], &list->marks[index], y);
		draw_label(drawing, &list->marks[index], index + 1 < list->count ? &list->marks[index + 1] : NULL, y, &free);
	}
	if (list->count > MOST_MARKS)
		svg_text(drawing->svg, "small", LINE_LEFT + LINE_PLOT + PX(8), y + LABEL_Y, ANCHOR_START, "more than are marked");
}

// Traces.

static void draw_name(const struct pair_drawing *drawing, const struct signal *signal, int64_t y)
{
	struct svg *svg = drawing->svg;
	struct text words = {0};
	svg_fitted(svg, "name", PX(16), y + PX(18), ANCHOR_START, LINE_LEFT - PX(20), SVG_NAME_SIZE, signal->name);
	line_put_signal_words(&words, signal);
	svg_fitted(svg, "small", PX(16), y + PX(36), ANCHOR_START, LINE_LEFT - PX(20), 13, text_string(&words));
	svg_release(svg, &words);
}

static void draw_side(const struct line_drawing *line, size_t signal, const char *label, bool was, int64_t y)
{
	svg_group(line->svg, was ? "side was" : "side");
	svg_attribute(line->svg, "data-side", label);
	svg_text(line->svg, "small", LINE_LEFT + line->width + PX(10), y + PX(26), ANCHOR_START, label);
	(void)draw_line_trace(line, signal, y);
	svg_close(line->svg);
}

static bool levels_are_same(const struct pair_drawing *drawing, size_t old, size_t now)
{
	const struct line_shape *before = &drawing->old.shape, *after = &drawing->now.shape;
	return drawing->old.width == drawing->now.width && before->plan->signals[old].active_high == after->plan->signals[now].active_high &&
	       (before->pins[0] >> old & 1) == (after->pins[0] >> now & 1);
}

static bool draw_both(struct pair_drawing *drawing, size_t old, size_t now, int64_t *y)
{
	const struct signal *signal = &drawing->now.shape.plan->signals[now];
	struct edge_list before, after;
	struct mark_list marks;
	if (!list_edges(drawing, &drawing->old, old, &before) || !list_edges(drawing, &drawing->now, now, &after) ||
	    !list_marks(drawing, &before, &after, &marks))
		return false;
	draw_name(drawing, signal, *y);
	if (marks.count == 0 && levels_are_same(drawing, old, now)) {
		draw_side(&drawing->now, now, "as before", false, *y);
		*y += LINE_TRACE_HEIGHT;
		return true;
	}
	draw_side(&drawing->old, old, "old", true, *y);
	draw_side(&drawing->now, now, "new", false, *y + LINE_TRACE_HEIGHT);
	draw_marks(drawing, signal->name, &marks, *y);
	*y += 2 * LINE_TRACE_HEIGHT;
	return true;
}

static void draw_alone(const struct pair_drawing *drawing, const struct line_drawing *line, size_t signal, int64_t *y)
{
	const bool was = line == &drawing->old;
	draw_name(drawing, &line->shape.plan->signals[signal], *y);
	draw_side(line, signal, was ? "old only" : "new only", was, *y);
	*y += LINE_TRACE_HEIGHT;
}

static size_t old_of(const struct comparison *comparison, size_t now)
{
	for (size_t old = 0; old < comparison->old->plan->signal_count; old++)
		if (comparison->signal_of[old] == now)
			return old;
	return NONE;
}

static void begin_trace(const struct pair_drawing *drawing, const char *name)
{
	svg_group(drawing->svg, "trace");
	svg_attribute(drawing->svg, "data-trace", name);
}

static bool draw_traces(struct pair_drawing *drawing, int64_t *y)
{
	const struct comparison *comparison = drawing->pair->comparison;
	const struct plan *old_plan = comparison->old->plan, *now_plan = comparison->now->plan;
	bool drawn = true;
	for (size_t now = 0; drawn && now < now_plan->signal_count; now++) {
		const size_t old = old_of(comparison, now);
		begin_trace(drawing, now_plan->signals[now].name);
		if (old != NONE)
			drawn = draw_both(drawing, old, now, y);
		else
			draw_alone(drawing, &drawing->now, now, y);
		svg_close(drawing->svg);
	}
	for (size_t old = 0; drawn && old < old_plan->signal_count; old++) {
		if (comparison->signal_of[old] != NONE)
			continue;
		begin_trace(drawing, old_plan->signals[old].name);
		draw_alone(drawing, &drawing->old, old, y);
		svg_close(drawing->svg);
	}
	return drawn;
}

static bool same_regions(const struct pair_drawing *drawing)
{
	const struct line_shape *old = &drawing->old.shape, *now = &drawing->now.shape;
	bool same = drawing->pair->comparison->same_clock && old->type->region_count == now->type->region_count;
	for (size_t index = 0; same && index < old->type->region_count; index++)
		same = strcmp(old->type->regions[index].name, now->type->regions[index].name) == 0 &&
		       old->laid->regions[index].cells == now->laid->regions[index].cells &&
		       old->laid->regions[index].ticks == now->laid->regions[index].ticks;
	return same;
}

static void draw_strips(struct pair_drawing *drawing, int64_t *y)
{
	const bool same = same_regions(drawing);
	if (!same)
		svg_group(drawing->svg, "side was");
	draw_line_regions(&drawing->old, *y, same ? "regions, as before" : "regions, old");
	*y += line_regions_height(&drawing->old);
	if (same)
		return;
	svg_close(drawing->svg);
	draw_line_regions(&drawing->now, *y, "regions, new");
	*y += line_regions_height(&drawing->now);
}

// What is measured.
static void put_plot(const struct pair_drawing *drawing)
{
	struct svg *svg = drawing->svg;
	svg_group(svg, "plot");
	svg_attribute(svg, "data-old", drawing->old.shape.type->name);
	svg_attribute(svg, "data-new", drawing->now.shape.type->name);
	svg_whole(svg, "data-old-line", drawing->pair->old_line);
	svg_whole(svg, "data-new-line", drawing->pair->now_line);
	svg_whole(svg, "data-old-ticks", drawing->old.shape.ticks);
	svg_whole(svg, "data-new-ticks", drawing->now.shape.ticks);
	svg_length(svg, "data-left", LINE_LEFT);
	svg_length(svg, "data-old-width", drawing->old.width);
	svg_length(svg, "data-new-width", drawing->now.width);
}

static void draw_rulers(struct pair_drawing *drawing, int64_t *y)
{
	draw_line_rulers(&drawing->now, *y, drawing->pair->comparison->same_clock ? "cells" : "cells, new");
	*y += LINE_RULERS_HEIGHT;
	if (!drawing->to_scale) {
		svg_text(drawing->svg, "small", LINE_LEFT, *y, ANCHOR_START, "not to one scale: the times of both do not fit");
		*y += PX(20);
	}
}

bool draw_line_pair(struct svg *svg, const struct drawn_pair *pair, int64_t *y)
{
	struct pair_drawing drawing = {.svg = svg, .pair = pair, .arena = arena_create()};
	bool drawn = drawing.arena != NULL && prepare(&drawing);
	if (drawn) {
		put_plot(&drawing);
		draw_strips(&drawing, y);
		*y += GAP;
		drawn = draw_traces(&drawing, y);
		*y += GAP;
		draw_rulers(&drawing, y);
		svg_close(svg);
	}
	arena_destroy(drawing.arena);
	return drawn;
}
