// Vertical intervals and fields, and where in them the picture is.
#include "measure/tally.h"

struct field_step field_after(const struct raster *raster, uint32_t index, uint32_t steps)
{
	const int64_t laps = (index + steps) / raster->field_count;
	return (struct field_step){&raster->fields[(index + steps) % raster->field_count], laps * raster->place_total,
	                           laps * raster->trace->ticks};
}

static void add_at(struct instrument *instrument, enum limit_item item, int64_t raw, uint32_t cell)
{
	tally_add(instrument, item, raw, cell, cell);
}

static void add_lines(struct instrument *instrument, enum limit_item item, int64_t places, uint32_t cell)
{
	add_at(instrument, item, 2 * places, cell);
}

static void measure_pulses(struct instrument *instrument)
{
	const struct raster *raster = &instrument->raster;
	const struct pulses *sync = &instrument->trace->of[TRACED_SYNC];
	for (uint32_t index = 0; index < sync->count; index++) {
		const struct pulse *pulse = &sync->list[index];
		const int64_t width = pulse->end - pulse->start;
		if (raster->kinds[index] == PULSE_EQUALISING)
			tally_add(instrument, ITEM_EQUALISING_WIDTH, 2 * width, pulse->start_cell, pulse->end_cell);
		if (raster->kinds[index] != PULSE_BROAD)
			continue;
		tally_add(instrument, ITEM_BROAD_WIDTH, 2 * width, pulse->start_cell, pulse->end_cell);
		tally_add(instrument, ITEM_SERRATION_WIDTH, 2 * (ticks_to_next(instrument->trace, index) - width), pulse->end_cell,
		          sync->list[pulse_after(instrument->trace, index)].start_cell);
	}
}

// From the place of a pulse to a later one, which may be past the trace's end.
static int64_t places_between(const struct raster *raster, uint32_t from, int64_t place)
{
	return (place - raster->places[from]) % raster->place_total;
}

// From the first equalising pulse after the broad ones to half a line after the last: where the next pulse comes depends on the field.
static int64_t places_after(const struct raster *raster, const struct raster_field *field)
{
	struct cursor at = cursor_at(raster, field->broad);
	for (uint32_t pulse = 0; pulse < field->broad_count; pulse++)
		cursor_next(raster, &at);
	const int64_t from = at.place;
	for (uint32_t pulse = 1; pulse < field->after_count; pulse++)
		cursor_next(raster, &at);
	return field->after_count == 0 ? 0 : at.place - from + raster->line_ticks;
}

static void measure_composite(struct instrument *instrument, const struct raster_field *field)
{
	const struct raster *raster = &instrument->raster;
	add_at(instrument, ITEM_PRE_EQUALISING_PULSES, field->before_count, field->cell);
	add_lines(instrument, ITEM_PRE_EQUALISING_LINES, places_between(raster, field->before, field->zero), field->cell);
	add_at(instrument, ITEM_BROAD_PULSES, field->broad_count, field->cell);
	add_at(instrument, ITEM_POST_EQUALISING_PULSES, field->after_count, field->cell);
	add_lines(instrument, ITEM_POST_EQUALISING_LINES, places_after(raster, field), field->cell);
}

// Where the picture of a field is, in places.
struct picture_extent {
	bool any;
	int64_t first, last;
};

// The first line that begins a quarter of a line before the field, or later.
static uint32_t first_line_of(const struct raster *raster, int64_t zero)
{
	uint32_t low = 0, high = raster->line_count;
	while (low < high) {
		const uint32_t middle = low + (high - low) / 2;
		if (raster->lines[middle].place * 2 < zero * 2 - raster->line_ticks)
			low = middle + 1;
		else
			high = middle;
	}
	return low;
}

static struct picture_extent picture_of(const struct instrument *instrument, uint32_t field)
{
	const struct raster *raster = &instrument->raster;
	const struct field_step next = field_after(raster, field, 1);
	const uint32_t first = first_line_of(raster, raster->fields[field].zero);
	const uint32_t end = first_line_of(raster, next.field->zero) + (next.place > 0 ? raster->line_count : 0);
	struct picture_extent extent = {false, 0, 0};
	for (uint32_t index = first; index < end; index++) {
		const bool wrapped = index >= raster->line_count;
		const struct line_view *view = &instrument->views[wrapped ? index - raster->line_count : index];
		if (!view->has_picture)
			continue;
		int64_t place = raster->lines[wrapped ? index - raster->line_count : index].place + (wrapped ? raster->place_total : 0);
		if (!extent.any)
			extent.first = place + (instrument->first_half_used && !view->in_first_half ? raster->line_ticks : 0);
		extent.last = place + 2 * raster->line_ticks - (instrument->second_half_used && !view->in_second_half ? raster->line_ticks : 0);
		extent.any = true;
	}
	return extent;
}

// `last` is where the picture of the field before ended.
static void measure_extent(struct instrument *instrument, const struct raster_field *field, struct picture_extent before,
                           struct picture_extent extent)
{
	if (before.any)
		add_lines(instrument, ITEM_VERTICAL_FRONT_PORCH, field->zero - before.last, field->cell);
	if (before.any && extent.any)
		add_lines(instrument, ITEM_VERTICAL_BLANKING, extent.first - before.last, field->cell);
	if (!extent.any)
		return;
	add_lines(instrument, ITEM_VERTICAL_BACK_PORCH, extent.first - field->sync_end, field->cell);
	add_lines(instrument, ITEM_PICTURE_TOP, extent.first - field->zero, field->cell);
	add_lines(instrument, ITEM_PICTURE_HEIGHT, extent.last - extent.first, field->cell);
	add_at(instrument, ITEM_VERTICAL_CENTRE, 2 * (extent.first - field->zero) + extent.last - extent.first, field->cell);
}

static void measure_field(struct instrument *instrument, uint32_t index)
{
	const struct raster *raster = &instrument->raster;
	const struct raster_field *field = &raster->fields[index];
	const struct field_step next = field_after(raster, index, 1);
	const struct field_step frame = field_after(raster, index, instrument->standard->fields);
	add_at(instrument, ITEM_FIELD_RATE, next.field->zero_ticks + next.ticks - field->zero_ticks, field->cell);
	add_at(instrument, ITEM_FRAME_RATE, frame.field->zero_ticks + frame.ticks - field->zero_ticks, field->cell);
	add_lines(instrument, ITEM_LINES_PER_FIELD, next.field->zero + next.place - field->zero, field->cell);
	add_lines(instrument, ITEM_VERTICAL_SYNC, field->sync_end - field->zero, field->cell);
	if (!raster->trace->separate)
		measure_composite(instrument, field);
}

void measure_fields(struct instrument *instrument)
{
	const struct raster *raster = &instrument->raster;
	const struct pulses *vertical = &instrument->trace->of[TRACED_VERTICAL];
	measure_pulses(instrument);
	if (raster->field_count == 0)
		return;
	struct picture_extent before = picture_of(instrument, raster->field_count - 1);
	before.last -= raster->place_total;
	for (uint32_t index = 0; index < raster->field_count; index++) {
		measure_field(instrument, index);
		const struct picture_extent extent = picture_of(instrument, index);
		measure_extent(instrument, &raster->fields[index], before, extent);
		before = extent;
	}
	const uint32_t cell = raster->fields[0].cell;
	if (raster->trace->separate)
		add_at(instrument, ITEM_VERTICAL_POLARITY, vertical->active_high ? 1 : -1, cell);
	else
		add_at(instrument, ITEM_VERTICAL_POLARITY, instrument->trace->of[TRACED_SYNC].active_high ? 1 : -1, cell);
}
