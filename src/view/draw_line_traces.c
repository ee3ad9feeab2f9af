// The traces of a line's signals, its stretched cells, and the level of composite video.
#include <inttypes.h>

#include "base/text.h"
#include "view/draw_line.h"
#include "view/figures.h"

#define COMPOSITE_HEIGHT PX(170)
#define COMPOSITE_TOP PX(16)
#define COMPOSITE_PLOT PX(130)

static void put_us(const struct line_drawing *drawing, const char *name, int64_t ticks)
{
	struct fraction seconds, value;
	if (seconds_of_ticks(&drawing->shape.plan->clock, ticks, &seconds) && fraction_multiply(seconds, fraction_whole(1000000), &value))
		svg_decimal(drawing->svg, name, value);
}

void line_run_attributes(const struct line_drawing *drawing, const struct shape_run *run)
{
	svg_whole(drawing->svg, "data-cell", run->cell);
	svg_whole(drawing->svg, "data-cells", run->cells);
	svg_whole(drawing->svg, "data-tick", run->tick);
	svg_whole(drawing->svg, "data-ticks", run->ticks);
	put_us(drawing, "data-start-us", run->tick);
	put_us(drawing, "data-us", run->ticks);
}

// An open rectangle over a run.
static void open_run(const struct line_drawing *drawing, const char *class, const struct shape_run *run, int64_t y, int64_t height)
{
	const int64_t x = line_x(drawing, run->tick);
	svg_open(drawing->svg, "rect");
	svg_attribute(drawing->svg, "class", class);
	svg_length(drawing->svg, "x", x);
	svg_length(drawing->svg, "y", y);
	svg_length(drawing->svg, "width", line_x(drawing, run->tick + run->ticks) - x);
	svg_length(drawing->svg, "height", height);
	line_run_attributes(drawing, run);
}

// "sync low, asserted: cells 2 to 8; 7 cells, 66 ticks, 4.610 us from 1.257 us on".
static void put_run_words(const struct line_drawing *drawing, struct text *words, const struct shape_run *run)
{
	const struct clock *clock = &drawing->shape.plan->clock;
	text_printf(words, ": cell%s %" PRIu32, run->cells == 1 ? "" : "s", run->cell);
	if (run->cells > 1)
		text_printf(words, " to %" PRIu32, run->cell + run->cells - 1);
	text_put(words, "; ");
	text_put_lengths(words, clock, run->cells, run->ticks);
	text_put(words, ", from ");
	text_put_ticks_us(words, clock, run->tick);
	text_put(words, " us on");
}

static void draw_signal_run(const struct line_drawing *drawing, const struct signal *signal, const struct shape_run *run, int64_t y)
{
	struct svg *svg = drawing->svg;
	struct text words = {0};
	const unsigned level = shape_level(signal, run->value);
	if (run->value == 1) {
		text_printf(&words, "%s soft", palette_hue(palette_of_role(signal->role))->name);
		const int64_t x = line_x(drawing, run->tick);
		svg_box(svg, text_string(&words), x, y + LINE_HIGH_Y, line_x(drawing, run->tick + run->ticks) - x, LINE_LOW_Y - LINE_HIGH_Y);
		words.length = 0;
	}
	open_run(drawing, "run", run, y, LINE_TRACE_HEIGHT);
	svg_whole(svg, "data-level", level);
	svg_whole(svg, "data-asserted", run->value);
	text_printf(&words, "%s %s, %sasserted", signal->name, level == 1 ? "high" : "low", run->value == 1 ? "" : "not ");
	put_run_words(drawing, &words, run);
	svg_title(svg, text_string(&words));
	svg_close(svg);
	svg_release(svg, &words);
}

static void draw_trace_path(const struct line_drawing *drawing, size_t index, int64_t y)
{
	const struct signal *signal = &drawing->shape.plan->signals[index];
	struct svg *svg = drawing->svg;
	struct text data = {0}, class = {0};
	for (uint32_t cell = 0; cell < drawing->shape.cells;) {
		const struct shape_run run = shape_signal_run(&drawing->shape, index, cell);
		const int64_t level_y = y + (shape_level(signal, run.value) == 1 ? LINE_HIGH_Y : LINE_LOW_Y);
		text_put(&data, cell == 0 ? "M" : "V");
		if (cell == 0) {
			svg_put_length(&data, line_x(drawing, 0));
			text_put(&data, " ");
		}
		svg_put_length(&data, level_y);
		text_put(&data, "H");
		svg_put_length(&data, line_x(drawing, run.tick + run.ticks));
		cell = run.cell + run.cells;
	}
	text_printf(&class, "%s trace-line", palette_hue(palette_of_role(signal->role))->name);
	svg_open(svg, "path");
	svg_attribute(svg, "class", text_string(&class));
	svg_attribute(svg, "d", text_string(&data));
	svg_close(svg);
	svg_release(svg, &data);
	svg_release(svg, &class);
}

void line_put_signal_words(struct text *words, const struct signal *signal)
{
	if (signal->role != ROLE_PLAIN)
		text_printf(words, "%s, ", role_name(signal->role));
	text_printf(words, "active %s", signal->active_high ? "high" : "low");
	if (signal->lead_cells != 0) {
		text_put(words, ", ");
		text_put_count(words, (uint64_t)(signal->lead_cells < 0 ? -signal->lead_cells : signal->lead_cells), "cell", "cells");
		text_put(words, signal->lead_cells < 0 ? " late" : " early");
	}
}

static void draw_trace_label(const struct line_drawing *drawing, const struct signal *signal, int64_t y)
{
	struct svg *svg = drawing->svg;
	struct text words = {0};
	svg_fitted(svg, "name", PX(16), y + PX(18), ANCHOR_START, LINE_LEFT - PX(36), SVG_NAME_SIZE, signal->name);
	line_put_signal_words(&words, signal);
	svg_fitted(svg, "small", PX(16), y + PX(36), ANCHOR_START, LINE_LEFT - PX(36), 13, text_string(&words));
	svg_text(svg, "small", LINE_LEFT - PX(6), y + LINE_HIGH_Y + PX(5), ANCHOR_END, "1");
	svg_text(svg, "small", LINE_LEFT - PX(6), y + LINE_LOW_Y + PX(5), ANCHOR_END, "0");
	svg_release(svg, &words);
}

// A trace whose edges are too many: a band, and words.
static void draw_busy(const struct line_drawing *drawing, const struct signal *signal, int64_t y)
{
	struct svg *svg = drawing->svg;
	struct text words = {0};
	text_printf(&words, "%s soft", palette_hue(palette_of_role(signal->role))->name);
	svg_box(svg, text_string(&words), LINE_LEFT, y + LINE_HIGH_Y, drawing->width, LINE_LOW_Y - LINE_HIGH_Y);
	words.length = 0;
	text_printf(&words, "more than %" PRIu32 " edges: too close to be drawn", drawing->most_runs - 1);
	svg_text(svg, "small", LINE_LEFT + drawing->width / 2, y + PX(26), ANCHOR_MIDDLE, text_string(&words));
	svg_release(svg, &words);
}

bool draw_line_trace(const struct line_drawing *drawing, size_t index, int64_t y)
{
	const struct signal *signal = &drawing->shape.plan->signals[index];
	if (shape_signal_runs(&drawing->shape, index, drawing->most_runs + 1) > drawing->most_runs) {
		draw_busy(drawing, signal, y);
		return false;
	}
	for (uint32_t cell = 0; cell < drawing->shape.cells;) {
		const struct shape_run run = shape_signal_run(&drawing->shape, index, cell);
		draw_signal_run(drawing, signal, &run, y);
		cell = run.cell + run.cells;
	}
	draw_trace_path(drawing, index, y);
	return true;
}

static void draw_trace(const struct line_drawing *drawing, size_t index, int64_t y)
{
	const struct signal *signal = &drawing->shape.plan->signals[index];
	struct svg *svg = drawing->svg;
	svg_group(svg, "trace");
	svg_attribute(svg, "data-trace", signal->name);
	svg_attribute(svg, "data-role", role_name(signal->role));
	svg_attribute(svg, "data-active", signal->active_high ? "high" : "low");
	svg_whole(svg, "data-lead", signal->lead_cells);
	draw_trace_label(drawing, signal, y);
	draw_line_trace(drawing, index, y);
	svg_close(svg);
}

// "cell 2 is stretched by 3 ticks": a column through all traces.
static void draw_stretched(const struct line_drawing *drawing, int64_t y, int64_t height)
{
	const struct clock *clock = &drawing->shape.plan->clock;
	struct svg *svg = drawing->svg;
	unsigned count = 0;
	struct shape_run run = shape_stretched_run(&drawing->shape, 0);
	for (; run.cells > 0 && count < MOST_STRETCHED; count++) {
		struct text words = {0};
		open_run(drawing, "stretched", &run, y, height);
		svg_reference(svg, "fill", "stretch");
		svg_attribute(svg, "fill-opacity", ".5");
		text_printf(&words, "stretched by %" PRId64 " ticks", clock->stretch_ticks);
		put_run_words(drawing, &words, &run);
		svg_title(svg, text_string(&words));
		svg_close(svg);
		svg_release(svg, &words);
		run = shape_stretched_run(&drawing->shape, run.cell + run.cells);
	}
	if (run.cells > 0)
		svg_text(svg, "small", LINE_LEFT + drawing->width, y - PX(4), ANCHOR_END, "more stretched cells than are marked here");
}

int64_t line_traces_height(const struct line_drawing *drawing)
{
	return (int64_t)drawing->shape.plan->signal_count * LINE_TRACE_HEIGHT + PX(8);
}

void draw_line_traces(struct line_drawing *drawing, int64_t y)
{
	draw_stretched(drawing, y, line_traces_height(drawing));
	for (size_t signal = 0; signal < drawing->shape.plan->signal_count; signal++)
		draw_trace(drawing, signal, y + (int64_t)signal * LINE_TRACE_HEIGHT);
}

int64_t line_composite_height(const struct line_drawing *drawing)
{
	return drawing->has_composite ? COMPOSITE_HEIGHT : 0;
}

// The place of a level, from white at the top to sync at the bottom.
static int64_t level_y(const struct composite_levels *levels, int64_t level)
{
	return COMPOSITE_TOP + svg_share(COMPOSITE_PLOT, levels->white - level, levels->white - levels->sync);
}

// What a kind shows: a level, or a band from one to another.
static void levels_of_kind(const struct composite_levels *levels, enum hue kind, int64_t *low, int64_t *high)
{
	*low = *high = levels->blanking;
	if (kind == HUE_SYNC || kind == HUE_VERTICAL)
		*low = *high = levels->sync;
	if (kind == HUE_BURST) {
		*low = levels->blanking - levels->burst;
		*high = levels->blanking + levels->burst;
	}
	if (kind == HUE_PICTURE || kind == HUE_OTHER) {
		*low = levels->black;
		*high = levels->white;
	}
}

static void draw_level_run(const struct line_drawing *drawing, const struct composite_levels *levels, const struct shape_run *run,
                           int64_t y)
{
	const enum hue kind = (enum hue)run->value;
	const struct hue_row *hue = palette_hue(kind);
	struct svg *svg = drawing->svg;
	struct text words = {0};
	int64_t low, high;
	levels_of_kind(levels, kind, &low, &high);
	if (low != high) {
		const int64_t x = line_x(drawing, run->tick), top = y + level_y(levels, high);
		svg_open(svg, "rect");
		svg_length(svg, "x", x);
		svg_length(svg, "y", top);
		svg_length(svg, "width", line_x(drawing, run->tick + run->ticks) - x);
		svg_length(svg, "height", y + level_y(levels, low) - top);
		svg_reference(svg, "fill", hue->name);
		svg_attribute(svg, "fill-opacity", ".55");
		svg_close(svg);
	}
	open_run(drawing, "run", run, y, COMPOSITE_HEIGHT - PX(10));
	svg_attribute(svg, "data-kind", hue->name);
	text_printf(&words, "%s, ", hue->words);
	svg_put_length(&words, low);
	if (low != high) {
		text_put(&words, " to ");
		svg_put_length(&words, high);
	}
	text_printf(&words, " %s", levels->unit);
	put_run_words(drawing, &words, run);
	svg_title(svg, text_string(&words));
	svg_close(svg);
	svg_release(svg, &words);
}

// The step from sync to blanking and back; of burst and picture their mean, and of picture its black.
static void draw_level_path(const struct line_drawing *drawing, const struct composite_levels *levels, int64_t y)
{
	struct svg *svg = drawing->svg;
	struct text data = {0};
	for (uint32_t cell = 0; cell < drawing->shape.cells;) {
		const struct shape_run run = shape_kind_run(&drawing->shape, cell);
		int64_t low, high;
		levels_of_kind(levels, (enum hue)run.value, &low, &high);
		const int64_t level = run.value == HUE_BURST ? levels->blanking : low;
		text_put(&data, cell == 0 ? "M" : "V");
		if (cell == 0) {
			svg_put_length(&data, line_x(drawing, 0));
			text_put(&data, " ");
		}
		svg_put_length(&data, y + level_y(levels, level));
		text_put(&data, "H");
		svg_put_length(&data, line_x(drawing, run.tick + run.ticks));
		cell = run.cell + run.cells;
	}
	svg_open(svg, "path");
	svg_attribute(svg, "class", "edge");
	svg_attribute(svg, "d", text_string(&data));
	svg_close(svg);
	svg_release(svg, &data);
}

// A level's line, and beside it its name; black and blanking are near each other, so names may stand a little off.
static void draw_level(const struct line_drawing *drawing, const struct composite_levels *levels, int64_t level, const char *name,
                       int64_t y, int64_t off)
{
	struct text words = {0};
	const int64_t at = y + level_y(levels, level), end = LINE_LEFT + drawing->width;
	svg_line(drawing->svg, "guide", LINE_LEFT, at, end, at);
	svg_put_length(&words, level);
	text_printf(&words, " %s", name);
	svg_text(drawing->svg, "small", end + PX(8), at + PX(5) + off, ANCHOR_START, text_string(&words));
	svg_release(drawing->svg, &words);
}

void draw_line_composite(struct line_drawing *drawing, int64_t y)
{
	const struct composite_levels *levels = composite_levels_of(drawing->shape.timeline);
	struct svg *svg = drawing->svg;
	if (!drawing->has_composite)
		return;
	svg_group(svg, "composite");
	svg_text(svg, "name", PX(16), y + PX(50), ANCHOR_START, "composite");
	svg_text(svg, "small", PX(16), y + PX(68), ANCHOR_START, levels->unit);
	svg_text(svg, "small", PX(16), y + PX(86), ANCHOR_START, "leads made up for");
	const bool setup = levels->black != levels->blanking;
	draw_level(drawing, levels, levels->white, "white", y, 0);
	if (setup)
		draw_level(drawing, levels, levels->black, "black", y, PX(-5));
	draw_level(drawing, levels, levels->blanking, "blanking", y, setup ? PX(7) : 0);
	draw_level(drawing, levels, levels->sync, "sync", y, 0);
	if (shape_kind_runs(&drawing->shape, MOST_RUNS + 1) <= MOST_RUNS) {
		for (uint32_t cell = 0; cell < drawing->shape.cells;) {
			const struct shape_run run = shape_kind_run(&drawing->shape, cell);
			draw_level_run(drawing, levels, &run, y);
			cell = run.cell + run.cells;
		}
		draw_level_path(drawing, levels, y);
	}
	svg_close(svg);
}
