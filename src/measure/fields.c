// Fields: from 0V, the first broad pulse or the start of a vertical sync of its own, to the next.
#include "base/arena.h"
#include "measure/raster.h"

// Of composite sync.

static bool begins_field(const struct raster *raster, uint32_t pulse)
{
	return raster->kinds[pulse] == PULSE_BROAD && raster->kinds[pulse_before(raster->trace, pulse)] != PULSE_BROAD;
}

// The field of a first broad pulse.
static struct raster_field composite_field(const struct raster *raster, struct cursor broad)
{
	struct cursor at = broad;
	struct raster_field field = {.zero = at.place, .zero_ticks = at.tick, .broad = broad.pulse, .before = broad.pulse};
	field.cell = raster->trace->of[TRACED_SYNC].list[broad.pulse].start_cell;
	for (; raster->kinds[at.pulse] == PULSE_BROAD; field.broad_count++)
		cursor_next(raster, &at);
	field.sync_end = at.place;
	for (; raster->kinds[at.pulse] == PULSE_EQUALISING; field.after_count++)
		cursor_next(raster, &at);
	for (uint32_t pulse = pulse_before(raster->trace, broad.pulse); raster->kinds[pulse] == PULSE_EQUALISING;
	     pulse = pulse_before(raster->trace, pulse)) {
		field.before = pulse;
		field.before_count++;
	}
	return field;
}

static bool composite_fields(struct raster *raster)
{
	const uint32_t count = raster->trace->of[TRACED_SYNC].count;
	uint32_t fields = 0;
	for (uint32_t pulse = 0; pulse < count; pulse++)
		fields += begins_field(raster, pulse);
	raster->fields = arena_array(raster->arena, fields, sizeof *raster->fields);
	if (raster->fields == NULL)
		return false;
	struct cursor at = cursor_at(raster, raster->lines[0].pulse);
	while (raster->field_count < fields) {
		if (begins_field(raster, at.pulse))
			raster->fields[raster->field_count++] = composite_field(raster, at);
		cursor_next(raster, &at);
	}
	return true;
}

// Of a vertical sync of its own.

// The last line that begins at or before a tick, which is not before the first line. Of a place in the same way, if by_place.
static const struct raster_line *line_at(const struct raster *raster, int64_t value, bool by_place)
{
	uint32_t low = 0, high = raster->line_count - 1;
	while (low < high) {
		const uint32_t middle = low + (high - low + 1) / 2;
		if ((by_place ? raster->lines[middle].place : raster->lines[middle].start) <= value)
			low = middle;
		else
			high = middle - 1;
	}
	return &raster->lines[low];
}

// Where a tick, which is not before the first line's, lies.
static int64_t place_of_tick(const struct raster *raster, int64_t tick)
{
	const int64_t laps = (tick - raster->lines[0].start) / raster->trace->ticks;
	tick -= laps * raster->trace->ticks;
	const struct raster_line *line = line_at(raster, tick, false);
	return line->place + 2 * (tick - line->start) + laps * raster->place_total;
}

// How far a place is from where the nearest line begins: from half a line before to half a line after.
static int64_t off_line(const struct raster *raster, int64_t place)
{
	const int64_t period = 2 * raster->line_ticks;
	const int64_t off = (place - line_at(raster, place, true)->place) % period;
	return off * 2 > period ? off - period : off;
}

static int64_t absolute(int64_t value)
{
	return value < 0 ? -value : value;
}

// A vertical sync need not begin just at 0H: the smallest offset of all fields is taken for where it should.
static void take_offset(struct raster *raster)
{
	int64_t offset = INT64_MAX;
	for (uint32_t index = 0; index < raster->field_count; index++) {
		const int64_t off = off_line(raster, raster->fields[index].zero);
		if (absolute(off) < absolute(offset))
			offset = off;
	}
	for (uint32_t index = 0; index < raster->field_count; index++) {
		struct raster_field *field = &raster->fields[index];
		field->zero = place_snapped(raster, field->zero - offset);
		field->sync_end = place_snapped(raster, field->sync_end - offset);
	}
}

static bool separate_fields(struct raster *raster)
{
	const struct pulses *vertical = &raster->trace->of[TRACED_VERTICAL];
	raster->fields = arena_array(raster->arena, vertical->count, sizeof *raster->fields);
	if (raster->fields == NULL)
		return false;
	uint32_t first = 0;
	while (first < vertical->count && vertical->list[first].start < raster->lines[0].start)
		first++;
	for (uint32_t passed = 0; passed < vertical->count; passed++) {
		const uint32_t index = (first + passed) % vertical->count;
		const struct pulse *pulse = &vertical->list[index];
		const int64_t past = pulse->start < raster->lines[0].start ? raster->trace->ticks : 0;
		struct raster_field *field = &raster->fields[raster->field_count++];
		field->cell = pulse->start_cell;
		field->zero_ticks = pulse->start + past;
		field->zero = place_of_tick(raster, field->zero_ticks);
		field->sync_end = place_of_tick(raster, pulse->end + past);
	}
	take_offset(raster);
	return true;
}

bool raster_fields(struct raster *raster)
{
	if (!(raster->trace->separate ? separate_fields(raster) : composite_fields(raster)))
		return false;
	for (uint32_t index = 0; index < raster->field_count; index++) {
		struct raster_field *field = &raster->fields[index];
		// A place that was put back may lie before the first line.
		const int64_t place = field->zero < raster->lines[0].place ? field->zero + raster->place_total : field->zero;
		field->at_half = absolute(off_line(raster, place)) * 2 > raster->line_ticks;
	}
	return true;
}
