// Tells sync pulses apart by their pins: normal, equalising, broad, stray.
#include <stdlib.h>

#include "base/arena.h"
#include "measure/raster.h"

static const struct pulses *sync_of(const struct raster *raster)
{
	return &raster->trace->of[TRACED_SYNC];
}

uint32_t pulse_after(const struct trace *trace, uint32_t index)
{
	return index + 1 == trace->of[TRACED_SYNC].count ? 0 : index + 1;
}

uint32_t pulse_before(const struct trace *trace, uint32_t index)
{
	return index == 0 ? trace->of[TRACED_SYNC].count - 1 : index - 1;
}

int64_t ticks_to_next(const struct trace *trace, uint32_t index)
{
	const struct pulse *list = trace->of[TRACED_SYNC].list;
	const uint32_t next = pulse_after(trace, index);
	return list[next].start - list[index].start + (next <= index ? trace->ticks : 0);
}

static int64_t width_of(const struct pulse *pulse)
{
	return pulse->end - pulse->start;
}

static int compare_ticks(const void *left, const void *right)
{
	const int64_t a = *(const int64_t *)left, b = *(const int64_t *)right;
	return (a > b) - (a < b);
}

// A length of some list, and the time that it counts for.
struct length {
	int64_t ticks;
	int64_t weight;
};

// The value whose occurrences weigh the most; of equals the smallest. `values` is sorted. With each_its_own a value weighs
// itself, else one.
static int64_t heaviest(int64_t *values, uint32_t count, bool each_its_own)
{
	struct length best = {0, -1};
	qsort(values, count, sizeof *values, compare_ticks);
	for (uint32_t index = 0; index < count;) {
		struct length run = {values[index], 0};
		for (; index < count && values[index] == run.ticks; index++)
			run.weight += each_its_own ? run.ticks : 1;
		if (run.weight > best.weight)
			best = run;
	}
	return best.ticks;
}

static bool about_a_line(const struct raster *raster, int64_t ticks)
{
	return ticks * 16 >= raster->line_ticks * 15 && ticks * 16 <= raster->line_ticks * 17;
}

static bool is_wide(const struct raster *raster, int64_t width)
{
	return width * 4 >= raster->line_ticks;
}

// The width of a normal pulse: of those a line apart, rather of narrow ones.
static int64_t normal_width(const struct raster *raster, int64_t *widths)
{
	const struct pulses *sync = sync_of(raster);
	for (unsigned wide_too = 0; wide_too < 2; wide_too++) {
		uint32_t count = 0;
		for (uint32_t index = 0; index < sync->count; index++) {
			const int64_t width = width_of(&sync->list[index]);
			if (about_a_line(raster, ticks_to_next(raster->trace, index)) && (wide_too || !is_wide(raster, width)))
				widths[count++] = width;
		}
		if (count > 0)
			return heaviest(widths, count, false);
	}
	return width_of(&sync->list[0]);
}

static void kinds_by_width(struct raster *raster, int64_t normal)
{
	const struct pulses *sync = sync_of(raster);
	const bool normal_is_wide = is_wide(raster, normal);
	for (uint32_t index = 0; index < sync->count; index++) {
		const int64_t width = width_of(&sync->list[index]);
		raster->kinds[index] = !normal_is_wide && is_wide(raster, width) ? PULSE_BROAD :
		                       width * 4 < normal * 3 ? PULSE_STRAY : PULSE_NORMAL;
	}
}

static bool half_a_line_on(const struct raster *raster, uint32_t index)
{
	const int64_t twice = 2 * ticks_to_next(raster->trace, index);
	return twice * 8 >= raster->line_ticks * 7 && twice * 8 <= raster->line_ticks * 9;
}

// Whether a pulse, next to a broad or equalising one, is equalising too: narrow, or amid pulses half a line apart.
static bool is_equalising(const struct raster *raster, uint32_t index)
{
	if (raster->kinds[index] == PULSE_NORMAL)
		return half_a_line_on(raster, index) && half_a_line_on(raster, pulse_before(raster->trace, index));
	return raster->kinds[index] == PULSE_STRAY;
}

// Narrow pulses count as strays until they are found to go with broad ones.
static void find_equalising(struct raster *raster)
{
	const struct trace *trace = raster->trace;
	const uint32_t count = sync_of(raster)->count;
	for (uint32_t index = 0; index < count; index++) {
		if (raster->kinds[index] != PULSE_BROAD)
			continue;
		for (uint32_t next = pulse_after(trace, index); is_equalising(raster, next); next = pulse_after(trace, next))
			raster->kinds[next] = PULSE_EQUALISING;
		for (uint32_t last = pulse_before(trace, index); is_equalising(raster, last); last = pulse_before(trace, last))
			raster->kinds[last] = PULSE_EQUALISING;
	}
}

// A normal pulse that comes too early after the one before is the second of its line. A first round finds out what the last pulse
// of the trace is to the first.
static void find_strays(struct raster *raster)
{
	const struct trace *trace = raster->trace;
	const uint32_t count = sync_of(raster)->count;
	int64_t since = raster->line_ticks;
	bool after_normal = false;
	for (unsigned round = 0; round < 2; round++)
		for (uint32_t index = 0; index < count; index++) {
			enum pulse_kind kind = raster->kinds[index];
			if (kind == PULSE_NORMAL && after_normal && since * 4 < raster->line_ticks * 3)
				kind = PULSE_STRAY;
			if (kind != PULSE_STRAY) {
				after_normal = kind == PULSE_NORMAL;
				since = 0;
			}
			since += ticks_to_next(trace, index);
			if (round == 1)
				raster->kinds[index] = kind;
		}
}

// The period, and of composite sync the kinds by width. `ticks` has room for as many lengths as there are pulses.
static void measure_pulses(struct raster *raster, int64_t *ticks)
{
	const uint32_t count = sync_of(raster)->count;
	for (uint32_t index = 0; index < count; index++)
		ticks[index] = ticks_to_next(raster->trace, index);
	raster->line_ticks = heaviest(ticks, count, true);
	if (!raster->trace->separate)
		kinds_by_width(raster, normal_width(raster, ticks));
}

bool raster_kinds(struct raster *raster)
{
	const uint32_t count = sync_of(raster)->count;
	struct arena *scratch = arena_create();
	int64_t *ticks = scratch != NULL ? arena_array(scratch, count, sizeof *ticks) : NULL;
	raster->kinds = arena_array(raster->arena, count, sizeof *raster->kinds);
	const bool measured = ticks != NULL && raster->kinds != NULL;
	if (measured)
		measure_pulses(raster, ticks);
	arena_destroy(scratch);
	if (!measured)
		return false;
	if (!raster->trace->separate)
		find_equalising(raster);
	find_strays(raster);
	for (uint32_t index = 0; index < count; index++)
		if (raster->kinds[index] == PULSE_STRAY && raster->stray_count++ == 0)
			raster->first_stray = index;
	return true;
}
