#include "view/line_shape.h"

#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "view/figures.h"
#include "view/pictures.h"

static bool is_stretched(const struct line_shape *shape, uint32_t cell)
{
	const int stretch = shape->plan->role_signal[ROLE_STRETCH];
	return stretch >= 0 && (shape->asserted[cell] >> stretch & 1) != 0;
}

bool line_shape_make(struct line_shape *shape, const struct timeline *timeline, uint32_t line, struct arena *arena)
{
	const uint64_t *pins = timeline_pins(timeline, arena);
	return pins != NULL && line_shape_make_of(shape, timeline, pins, line, arena);
}

bool line_shape_make_of(struct line_shape *shape, const struct timeline *timeline, const uint64_t *pins, uint32_t line, struct arena *arena)
{
	const struct frame_line *in_frame = &timeline->lines[line];
	const struct clock *clock = &timeline->plan->clock;
	*shape = (struct line_shape){.timeline = timeline, .plan = timeline->plan, .line = line,
	                             .type = &timeline->plan->lines[in_frame->type], .laid = &timeline->types[in_frame->type]};
	shape->cells = shape->laid->cells;
	shape->ticks = shape->laid->ticks;
	shape->asserted = timeline->asserted + in_frame->first_cell;
	shape->tick_of_cell = arena_array(arena, (size_t)shape->cells + 1, sizeof *shape->tick_of_cell);
	if (shape->tick_of_cell == NULL)
		return false;
	shape->pins = pins + in_frame->first_cell;
	for (uint32_t cell = 0; cell < shape->cells; cell++)
		shape->tick_of_cell[cell + 1] =
			shape->tick_of_cell[cell] + clock->cell_ticks + (is_stretched(shape, cell) ? clock->stretch_ticks : 0);
	return true;
}

static struct shape_run run_between(const struct line_shape *shape, uint32_t from, uint32_t end, unsigned value)
{
	const int64_t tick = shape->tick_of_cell[from];
	return (struct shape_run){from, end - from, tick, shape->tick_of_cell[end] - tick, value};
}

struct shape_run shape_signal_run(const struct line_shape *shape, size_t signal, uint32_t from)
{
	const unsigned asserted = shape->pins[from] >> signal & 1;
	uint32_t end = from + 1;
	while (end < shape->cells && (shape->pins[end] >> signal & 1) == asserted)
		end++;
	return run_between(shape, from, end, asserted);
}

uint32_t shape_signal_runs(const struct line_shape *shape, size_t signal, uint32_t most)
{
	uint32_t runs = 1;
	for (uint32_t cell = 1; cell < shape->cells && runs < most; cell++)
		runs += ((shape->pins[cell] ^ shape->pins[cell - 1]) >> signal & 1) != 0;
	return runs;
}

static bool role_asserted(const struct plan *plan, enum role role, uint64_t asserted)
{
	const int signal = plan->role_signal[role];
	return signal >= 0 && (asserted >> signal & 1) != 0;
}

enum hue shape_kind(const struct plan *plan, uint64_t asserted)
{
	if (role_asserted(plan, ROLE_COMPOSITE_SYNC, asserted) || role_asserted(plan, ROLE_HORIZONTAL_SYNC, asserted))
		return HUE_SYNC;
	if (role_asserted(plan, ROLE_VERTICAL_SYNC, asserted))
		return HUE_VERTICAL;
	if (role_asserted(plan, ROLE_BURST_GATE, asserted))
		return HUE_BURST;
	if (plan->role_signal[ROLE_BLANKING] < 0)
		return HUE_OTHER;
	return role_asserted(plan, ROLE_BLANKING, asserted) ? HUE_BLANKING : HUE_PICTURE;
}

struct shape_run shape_kind_run(const struct line_shape *shape, uint32_t from)
{
	const enum hue kind = shape_kind(shape->plan, shape->asserted[from]);
	uint32_t end = from + 1;
	while (end < shape->cells && shape_kind(shape->plan, shape->asserted[end]) == kind)
		end++;
	return run_between(shape, from, end, kind);
}

uint32_t shape_kind_runs(const struct line_shape *shape, uint32_t most)
{
	uint32_t runs = 1;
	for (uint32_t cell = 1; cell < shape->cells && runs < most; cell++)
		runs += shape_kind(shape->plan, shape->asserted[cell]) != shape_kind(shape->plan, shape->asserted[cell - 1]);
	return runs;
}

struct shape_run shape_stretched_run(const struct line_shape *shape, uint32_t from)
{
	while (from < shape->cells && !is_stretched(shape, from))
		from++;
	uint32_t end = from;
	while (end < shape->cells && is_stretched(shape, end))
		end++;
	return run_between(shape, from, end, 1);
}

int64_t tick_in_frame(const struct timeline *timeline, uint32_t line, uint32_t cell)
{
	const struct frame_line *at = &timeline->lines[line];
	const struct clock *clock = &timeline->plan->clock;
	const int stretch = timeline->plan->role_signal[ROLE_STRETCH];
	int64_t stretched = 0;
	for (uint32_t index = 0; stretch >= 0 && index < cell; index++)
		stretched += (timeline->asserted[at->first_cell + index] >> stretch & 1) != 0;
	return at->first_tick + cell * clock->cell_ticks + stretched * clock->stretch_ticks;
}

void text_put_ticks_us(struct text *out, const struct clock *clock, int64_t ticks)
{
	struct fraction seconds;
	if (seconds_of_ticks(clock, ticks, &seconds) && fraction_multiply(seconds, fraction_whole(1000000), &seconds))
		text_put_decimal(out, seconds, 3);
	else
		text_put(out, "?");
}

void text_put_lengths(struct text *out, const struct clock *clock, uint32_t cells, int64_t ticks)
{
	text_put_count(out, cells, "cell", "cells");
	text_put(out, ", ");
	text_put_count(out, (uint64_t)ticks, "tick", "ticks");
	text_put(out, ", ");
	text_put_ticks_us(out, clock, ticks);
	text_put(out, " us");
}

static const struct composite_levels levels_525 = {
	"IRE", "525 lines", -40000, 0, 7500, 100000, 20000,
	"levels of 525 lines: SMPTE 170M-2004 table 1 (sync -40, setup 7.5, white 100, burst 40 peak to peak; 140 IRE are 1 V)"};
static const struct composite_levels levels_625 = {
	"mV", "625 lines", -300000, 0, 0, 700000, 150000,
	"levels of 625 lines: Rec. ITU-R BT.1700 (2005) part B (sync -300, white 700, burst 300 mV peak to peak, no setup)"};

// Frames of one field come at 50 or 60 Hz, those of two at half of that: 55 parts them, and 40 frames of one field from those of two.
static bool is_50_hertz(const struct timeline *timeline)
{
	struct fraction rate;
	if (!fraction_divide(timeline->plan->clock.master_hz, fraction_whole(timeline->tick_count), &rate))
		return false;
	const bool whole = fraction_compare(rate, fraction_whole(40)) >= 0;
	return fraction_compare(rate, whole ? fraction_whole(55) : (struct fraction){55, 2}) < 0;
}

const struct composite_levels *composite_levels_of(const struct timeline *timeline)
{
	const struct standard *standard = timeline->plan->standard;
	if (standard != NULL && strstr(standard->name, "525") != NULL)
		return &levels_525;
	if (standard != NULL && strstr(standard->name, "625") != NULL)
		return &levels_625;
	return is_50_hertz(timeline) ? &levels_625 : &levels_525;
}

uint32_t picture_line_of_type(const struct timeline *timeline, size_t type)
{
	const uint32_t count = timeline->line_count;
	uint32_t first = UINT32_MAX;
	for (uint32_t line = 0; line < count; line++) {
		if (timeline->lines[line].type != type)
			continue;
		const uint32_t before = line == 0 ? count - 1 : line - 1, after = line + 1 == count ? 0 : line + 1;
		if (timeline->lines[before].type == type && timeline->lines[after].type == type)
			return line;
		first = first == UINT32_MAX ? line : first;
	}
	return first;
}

uint32_t picture_common_line(const struct timeline *timeline)
{
	struct arena *arena = arena_create();
	uint32_t *uses = arena != NULL ? arena_array(arena, timeline->plan->line_count, sizeof *uses) : NULL;
	size_t common = 0;
	for (uint32_t line = 0; uses != NULL && line < timeline->line_count; line++)
		uses[timeline->lines[line].type]++;
	for (size_t type = 0; uses != NULL && type < timeline->plan->line_count; type++)
		if (uses[type] > uses[common])
			common = type;
	arena_destroy(arena);
	const uint32_t line = picture_line_of_type(timeline, common);
	return line != UINT32_MAX ? line : 0;
}
