// What each line shows of picture and burst.
#include "base/arena.h"
#include "measure/tally.h"

// Goes through pulses in the order of time, around the trace.
struct runner {
	const struct pulses *pulses;
	int64_t trace_ticks;
	uint32_t index;
	int64_t offset;                // of the pulse at `index`
};

// From a lap before the trace on: a pulse may reach from there into it.
static struct runner runner_start(const struct trace *trace, enum traced traced)
{
	return (struct runner){&trace->of[traced], trace->ticks, 0, -trace->ticks};
}

static struct pulse runner_pulse(const struct runner *runner)
{
	struct pulse pulse = runner->pulses->list[runner->index];
	pulse.start += runner->offset;
	pulse.end += runner->offset;
	return pulse;
}

static void runner_next(struct runner *runner)
{
	if (++runner->index < runner->pulses->count)
		return;
	runner->index = 0;
	runner->offset += runner->trace_ticks;
}

// Notes the picture of a line, from a runner that stands at the first that ends after the line begins.
static void note_picture(const struct raster *raster, const struct raster_line *line, struct line_view *view, struct runner runner)
{
	// Within 1/16 of a line of its middle a picture ends, or begins, half way.
	const int64_t line_ticks = raster->line_ticks;
	for (struct pulse pulse = runner_pulse(&runner); pulse.start < line->end; runner_next(&runner), pulse = runner_pulse(&runner)) {
		if (!view->has_picture) {
			view->picture_first = pulse.start > line->start ? pulse.start : line->start;
			view->picture_first_cell = pulse.start_cell;
		}
		view->has_picture = true;
		view->picture_last = pulse.end < line->end ? pulse.end : line->end;
		view->picture_last_cell = pulse.end_cell;
		view->in_first_half = view->in_first_half || (pulse.start - line->start) * 16 < 7 * line_ticks;
		view->in_second_half = view->in_second_half || (pulse.end - line->start) * 16 > 9 * line_ticks;
	}
}

static void note_always(const struct raster_line *line, struct line_view *view)
{
	view->has_picture = view->in_first_half = view->in_second_half = true;
	view->picture_first = line->start;
	view->picture_last = line->end;
	view->picture_first_cell = view->picture_last_cell = UINT32_MAX;
}

static void view_pictures(struct instrument *instrument)
{
	const struct pulses *pictures = &instrument->trace->of[TRACED_PICTURE];
	struct runner runner = runner_start(instrument->trace, TRACED_PICTURE);
	for (uint32_t index = 0; index < instrument->raster.line_count; index++) {
		const struct raster_line *line = &instrument->raster.lines[index];
		if (pictures->always)
			note_always(line, &instrument->views[index]);
		if (pictures->count == 0)
			continue;
		while (runner_pulse(&runner).end <= line->start)
			runner_next(&runner);
		note_picture(&instrument->raster, line, &instrument->views[index], runner);
	}
}

// A burst is the line's in which it begins.
static void view_bursts(struct instrument *instrument)
{
	if (instrument->trace->of[TRACED_BURST].count == 0)
		return;
	struct runner runner = runner_start(instrument->trace, TRACED_BURST);
	for (uint32_t index = 0; index < instrument->raster.line_count; index++) {
		const struct raster_line *line = &instrument->raster.lines[index];
		struct line_view *view = &instrument->views[index];
		while (runner_pulse(&runner).start < line->start)
			runner_next(&runner);
		for (; runner_pulse(&runner).start < line->end; runner_next(&runner)) {
			const struct pulse pulse = runner_pulse(&runner);
			if (!view->has_burst) {
				view->burst_first = pulse.start;
				view->burst_first_cell = pulse.start_cell;
			}
			view->has_burst = true;
			view->burst_last = pulse.end;
			view->burst_last_cell = pulse.end_cell;
		}
	}
}

// A picture may leave one half of its lines empty; but where most lines use both, one that uses a half is half a line of picture.
static void find_halves(struct instrument *instrument)
{
	uint32_t pictures = 0, first = 0, second = 0;
	for (uint32_t index = 0; index < instrument->raster.line_count; index++) {
		pictures += instrument->views[index].has_picture;
		first += instrument->views[index].in_first_half;
		second += instrument->views[index].in_second_half;
	}
	instrument->first_half_used = first * 2 >= pictures;
	instrument->second_half_used = second * 2 >= pictures;
	for (uint32_t index = 0; index < instrument->raster.line_count; index++) {
		struct line_view *view = &instrument->views[index];
		view->whole = view->has_picture && (view->in_first_half || !instrument->first_half_used) &&
		              (view->in_second_half || !instrument->second_half_used);
	}
}

bool view_lines(struct instrument *instrument)
{
	instrument->views = arena_array(instrument->arena, instrument->raster.line_count, sizeof *instrument->views);
	if (instrument->views == NULL)
		return false;
	view_pictures(instrument);
	view_bursts(instrument);
	find_halves(instrument);
	return true;
}
