// What normal lines show: those that begin with a normal pulse and end with any.
#include <string.h>

#include "base/arena.h"
#include "measure/tally.h"

static void note_instance(struct instrument *instrument, struct measured_instance instance)
{
	struct measured_instances *all = instrument->instances;
	if (all->count == all->capacity) {
		const size_t capacity = all->capacity == 0 ? 1024 : 2 * all->capacity;
		struct measured_instance *list = arena_array(instrument->results, capacity, sizeof *list);
		instrument->out_of_memory = instrument->out_of_memory || list == NULL;
		if (list == NULL)
			return;
		if (all->count > 0)
			memcpy(list, all->list, all->count * sizeof *list);
		all->list = list;
		all->capacity = capacity;
	}
	all->list[all->count++] = instance;
}

void tally_add(struct instrument *instrument, enum limit_item item, int64_t raw, uint32_t from_cell, uint32_t to_cell)
{
	if (instrument->instances != NULL && item_is_of_line(item))
		note_instance(instrument, (struct measured_instance){item, raw, from_cell, to_cell});
	struct tally *tally = &instrument->tallies[item];
	const struct extreme found = {raw, {from_cell, to_cell}};
	if (!tally->any || raw < tally->least.raw)
		tally->least = found;
	if (!tally->any || raw > tally->most.raw)
		tally->most = found;
	tally->any = true;
}

// From one edge to another.
static void add_time(struct instrument *instrument, enum limit_item item, int64_t ticks, uint32_t from_cell, uint32_t to_cell)
{
	tally_add(instrument, item, 2 * ticks, from_cell, to_cell);
}

static void measure_burst(struct instrument *instrument, const struct raster_line *line, const struct line_view *view)
{
	const struct pulse *sync = &instrument->trace->of[TRACED_SYNC].list[line->pulse];
	const int64_t sync_end = line->start + (sync->end - sync->start);
	add_time(instrument, ITEM_BREEZEWAY, view->burst_first - sync_end, sync->end_cell, view->burst_first_cell);
	add_time(instrument, ITEM_BURST_START, view->burst_first - line->start, sync->start_cell, view->burst_first_cell);
	add_time(instrument, ITEM_BURST_START_CYCLES, view->burst_first - line->start, sync->start_cell, view->burst_first_cell);
	add_time(instrument, ITEM_BURST_LENGTH, view->burst_last - view->burst_first, view->burst_first_cell, view->burst_last_cell);
	add_time(instrument, ITEM_BURST_LENGTH_CYCLES, view->burst_last - view->burst_first, view->burst_first_cell,
	         view->burst_last_cell);
	if (view->whole)
		add_time(instrument, ITEM_BURST_TO_PICTURE, view->picture_first - view->burst_last, view->burst_last_cell,
		         view->picture_first_cell);
}

// `next` is the pulse that ends the line.
static void measure_picture(struct instrument *instrument, const struct raster_line *line, const struct line_view *view,
                            const struct pulse *next)
{
	const struct pulse *sync = &instrument->trace->of[TRACED_SYNC].list[line->pulse];
	const int64_t start = view->picture_first - line->start, width = view->picture_last - view->picture_first;
	add_time(instrument, ITEM_PICTURE_START, start, sync->start_cell, view->picture_first_cell);
	add_time(instrument, ITEM_BACK_PORCH, start - (sync->end - sync->start), sync->end_cell, view->picture_first_cell);
	add_time(instrument, ITEM_PICTURE_WIDTH, width, view->picture_first_cell, view->picture_last_cell);
	add_time(instrument, ITEM_FRONT_PORCH, line->end - view->picture_last, view->picture_last_cell, next->start_cell);
	tally_add(instrument, ITEM_HORIZONTAL_CENTRE, 2 * start + width, sync->start_cell, view->picture_first_cell);
}

static void measure_line(struct instrument *instrument, uint32_t index)
{
	const struct raster *raster = &instrument->raster;
	const struct pulse *list = instrument->trace->of[TRACED_SYNC].list;
	const struct raster_line *line = &raster->lines[index];
	const uint32_t following = index + 1 == raster->line_count ? 0 : index + 1;
	const struct line_view *view = &instrument->views[index], *other = &instrument->views[following];
	const struct pulse *next = &list[raster->lines[following].pulse];
	tally_add(instrument, ITEM_LINE_RATE, line->end - line->start, list[line->pulse].start_cell, next->start_cell);
	add_time(instrument, ITEM_CYCLES_PER_LINE, line->end - line->start, list[line->pulse].start_cell, next->start_cell);
	if (view->has_burst)
		measure_burst(instrument, line, view);
	if (!view->whole)
		return;
	measure_picture(instrument, line, view, next);
	if (raster->lines[following].normal && other->whole)
		add_time(instrument, ITEM_HORIZONTAL_BLANKING,
		         line->end - view->picture_last + other->picture_first - raster->lines[following].start, view->picture_last_cell,
		         other->picture_first_cell);
}

void measure_lines(struct instrument *instrument)
{
	const struct raster *raster = &instrument->raster;
	const struct pulses *sync = &instrument->trace->of[TRACED_SYNC];
	for (uint32_t index = 0; index < raster->line_count; index++)
		if (raster->lines[index].normal)
			measure_line(instrument, index);
	for (uint32_t index = 0; index < sync->count; index++) {
		const struct pulse *pulse = &sync->list[index];
		if (raster->kinds[index] == PULSE_NORMAL)
			add_time(instrument, ITEM_SYNC_WIDTH, pulse->end - pulse->start, pulse->start_cell, pulse->end_cell);
	}
	tally_add(instrument, ITEM_HORIZONTAL_POLARITY, sync->active_high ? 1 : -1, sync->list[0].start_cell, sync->list[0].end_cell);
}
