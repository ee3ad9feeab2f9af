// Lines and fields, from sync pulses whose kinds are known.
#include "measure/raster.h"

#include "base/arena.h"

#define MOST_RASTER_LINES (4u * LIMIT_LINES)

const char *trace_flaw(const struct trace *trace)
{
	const struct pulses *sync = &trace->of[TRACED_SYNC];
	if (!sync->has_signal)
		return "no signal has the role composite sync or horizontal sync";
	if (sync->always)
		return "sync is asserted all the time";
	return sync->count == 0 ? "sync is never asserted" : NULL;
}

int64_t place_snapped(const struct raster *raster, int64_t place)
{
	const int64_t half = raster->line_ticks;
	int64_t rest = place % half;
	if (rest < 0)
		rest += half;
	if (rest * 8 <= half)
		return place - rest;
	return (half - rest) * 8 <= half ? place + half - rest : place;
}

// The first pulse that is no stray: there is one, since the first of two near normal pulses is none.
static uint32_t first_sync(const struct raster *raster)
{
	uint32_t index = 0;
	while (raster->kinds[index] == PULSE_STRAY && index + 1 < raster->trace->of[TRACED_SYNC].count)
		index++;
	return index;
}

static void find_places(struct raster *raster)
{
	const uint32_t count = raster->trace->of[TRACED_SYNC].count;
	raster->first = first_sync(raster);
	int64_t place = 0, since = 0;
	uint32_t index = raster->first;
	for (uint32_t passed = 0; passed < count; passed++) {
		if (raster->kinds[index] != PULSE_STRAY) {
			place += place_snapped(raster, 2 * since);
			since = 0;
		}
		raster->places[index] = place;
		since += ticks_to_next(raster->trace, index);
		index = pulse_after(raster->trace, index);
	}
	raster->place_total = place + place_snapped(raster, 2 * since);
}

bool raster_is_odd(const struct raster *raster)
{
	return raster->place_total % (2 * raster->line_ticks) == raster->line_ticks;
}

static uint32_t first_normal(const struct raster *raster)
{
	const uint32_t count = raster->trace->of[TRACED_SYNC].count;
	uint32_t index = raster->first;
	for (uint32_t passed = 0; passed < count; passed++) {
		if (raster->kinds[index] == PULSE_NORMAL)
			return index;
		index = pulse_after(raster->trace, index);
	}
	return UINT32_MAX;
}

struct cursor cursor_at(const struct raster *raster, uint32_t pulse)
{
	return (struct cursor){pulse, raster->places[pulse], raster->trace->of[TRACED_SYNC].list[pulse].start};
}

void cursor_next(const struct raster *raster, struct cursor *cursor)
{
	const int64_t before = raster->places[cursor->pulse];
	do {
		cursor->tick += ticks_to_next(raster->trace, cursor->pulse);
		cursor->pulse = pulse_after(raster->trace, cursor->pulse);
	} while (raster->kinds[cursor->pulse] == PULSE_STRAY);
	cursor->place += raster->places[cursor->pulse] - before + (cursor->pulse == raster->first ? raster->place_total : 0);
}

// Goes on to the next normal pulse.
static struct cursor next_normal(const struct raster *raster, struct cursor cursor)
{
	do
		cursor_next(raster, &cursor);
	while (raster->kinds[cursor.pulse] != PULSE_NORMAL);
	return cursor;
}

// How many lines begin from a normal pulse on to before the next. A rest of a quarter of a line is none.
static int64_t lines_between(const struct raster *raster, int64_t distance)
{
	const int64_t line = 2 * raster->line_ticks;
	const int64_t lines = (distance + line - line / 4 - 1) / line;
	return lines < 1 ? 1 : lines;
}

// Of a frame: from the first normal pulse on, around the trace, to it again.
static int64_t count_lines(const struct raster *raster, uint32_t normal)
{
	int64_t lines = 0;
	struct cursor at = cursor_at(raster, normal);
	do {
		const struct cursor next = next_normal(raster, at);
		lines += lines_between(raster, next.place - at.place);
		at = next;
	} while (at.pulse != normal && lines <= MOST_RASTER_LINES);
	return lines;
}

// Puts the lines from a normal pulse to the next.
static void put_lines(struct raster *raster, struct cursor from, struct cursor to)
{
	const int64_t lines = lines_between(raster, to.place - from.place);
	struct cursor at = from, next = from;
	cursor_next(raster, &next);
	for (int64_t index = 0; index < lines; index++) {
		struct raster_line *line = &raster->lines[raster->line_count++];
		const int64_t place = from.place + 2 * index * raster->line_ticks;
		while (next.place <= place && next.pulse != to.pulse) {
			at = next;
			cursor_next(raster, &next);
		}
		*line = (struct raster_line){.place = place, .start = at.tick + (place - at.place) / 2, .end = to.tick, .normal = lines == 1,
		                             .pulse = at.place == place ? at.pulse : UINT32_MAX};
		if (index > 0)
			line[-1].end = line->start;
		if (index == 1)
			line[-1].normal = line->pulse != UINT32_MAX;
	}
}

bool raster_lines(struct raster *raster, const char **flaw)
{
	const uint32_t normal = first_normal(raster);
	if (normal == UINT32_MAX) {
		*flaw = "no sync pulse is that of a normal line";
		return true;
	}
	const int64_t count = count_lines(raster, normal);
	if (count > MOST_RASTER_LINES) {
		*flaw = "sync pulses come too unevenly to tell lines";
		return true;
	}
	raster->lines = arena_array(raster->arena, (size_t)count, sizeof *raster->lines);
	if (raster->lines == NULL)
		return false;
	struct cursor at = cursor_at(raster, normal);
	do {
		const struct cursor next = next_normal(raster, at);
		put_lines(raster, at, next);
		at = next;
	} while (at.pulse != normal);
	return true;
}

bool raster_find(struct arena *arena, const struct trace *trace, struct raster *raster, const char **flaw)
{
	*raster = (struct raster){.arena = arena, .trace = trace};
	*flaw = trace_flaw(trace);
	if (*flaw != NULL)
		return true;
	if (!raster_kinds(raster))
		return false;
	raster->places = arena_array(arena, trace->of[TRACED_SYNC].count, sizeof *raster->places);
	if (raster->places == NULL)
		return false;
	find_places(raster);
	if (!raster_lines(raster, flaw))
		return false;
	return *flaw != NULL || raster_fields(raster);
}
