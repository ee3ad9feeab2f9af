#include "view/line_limits.h"

#include "base/arena.h"
#include "base/text.h"
#include "catalogue/judge.h"
#include "measure/measure.h"
#include "view/figures.h"

// Items whose value is set by the edge at which they begin.
static bool set_at_start(enum limit_item item)
{
	return item == ITEM_FRONT_PORCH || item == ITEM_SERRATION_WIDTH;
}

// Those that are the same edge in another unit, or no edge at all, are not drawn.
static bool is_drawn(const struct standard *standard, enum limit_grade grade, enum limit_item item)
{
	const struct limit *time = NULL;
	if (item == ITEM_HORIZONTAL_CENTRE)
		return false;
	if (item == ITEM_BURST_START_CYCLES)
		time = standard_limit(standard, ITEM_BURST_START, grade);
	if (item == ITEM_BURST_LENGTH_CYCLES)
		time = standard_limit(standard, ITEM_BURST_LENGTH, grade);
	return time == NULL || (!time->has_low && !time->has_high);
}

static int64_t tick_of_cell(const struct timeline *timeline, uint32_t cell)
{
	const struct cell_place place = timeline_place(timeline, cell == timeline->cell_count ? 0 : cell);
	return tick_in_frame(timeline, place.line, place.cell);
}

// Ticks that a value lasts, to the nearest; false if they do not fit.
static bool ticks_of_value(const struct clock *clock, enum dimension dimension, struct fraction value, int64_t *ticks)
{
	struct fraction seconds = value, exact;
	if (dimension == DIMENSION_CYCLES && !fraction_divide(value, clock->subcarrier_hz, &seconds))
		return false;
	if (!fraction_multiply(seconds, clock->master_hz, &exact))
		return false;
	*ticks = fraction_nearest(exact);
	return true;
}

// Where the edge may be.
static bool place_interval(const struct clock *clock, struct line_limit *limit)
{
	const enum dimension dimension = limit_item_facts(limit->item)->dimension;
	int64_t low = 0, high = 0;
	if ((limit->has_low && !ticks_of_value(clock, dimension, limit->limit->low, &low)) ||
	    (limit->has_high && !ticks_of_value(clock, dimension, limit->limit->high, &high)))
		return false;
	limit->low_tick = limit->from_tick + low;
	limit->high_tick = limit->from_tick + high;
	if (!limit->at_start)
		return true;
	limit->low_tick = limit->to_tick - high;
	limit->high_tick = limit->to_tick - low;
	limit->has_low = limit->limit->has_high;
	limit->has_high = limit->limit->has_low;
	return true;
}

static bool judge(const struct clock *clock, struct line_limit *limit)
{
	struct interval value = {limit->value, limit->value};
	if (clock->has_accuracy && !interval_widen(&value, limit_item_facts(limit->item)->dimension, clock->accuracy_ppm))
		return false;
	const struct judgement judgement = limit_judge(limit->limit, value);
	limit->kept = judgement.kept;
	return judgement.binds;
}

// Whether the edge that sets the item is in the line. One between two lines is of the line that it begins or ends something in.
static bool is_here(const struct line_shape *shape, uint32_t cell, bool at_start)
{
	const uint32_t first = shape->timeline->lines[shape->line].first_cell, total = shape->timeline->cell_count;
	return (cell + total - first + total - !at_start) % total < shape->cells;
}

static bool make_limit(const struct line_shape *shape, const struct measured_instance *instance, struct line_limit *limit)
{
	const struct timeline *timeline = shape->timeline;
	const int64_t start = timeline->lines[shape->line].first_tick, lap = timeline->tick_count;
	// What binds the line's length binds no edge in it.
	if (instance->item == ITEM_LINE_RATE || instance->item == ITEM_CYCLES_PER_LINE)
		return false;
	*limit = (struct line_limit){.item = instance->item, .at_start = set_at_start(instance->item),
	                             .limit = standard_limit(shape->plan->standard, instance->item, shape->plan->grade)};
	if (limit->limit == NULL || (!limit->limit->has_low && !limit->limit->has_high) || instance->from_cell == UINT32_MAX ||
	    instance->to_cell == UINT32_MAX || !is_here(shape, limit->at_start ? instance->from_cell : instance->to_cell, limit->at_start))
		return false;
	limit->has_low = limit->limit->has_low;
	limit->has_high = limit->limit->has_high;
	limit->from_tick = tick_of_cell(timeline, instance->from_cell) - start;
	limit->to_tick = tick_of_cell(timeline, instance->to_cell) - start;
	int64_t *here = limit->at_start ? &limit->from_tick : &limit->to_tick;
	*here += *here < (limit->at_start ? 0 : 1) ? lap : 0;
	if (limit->at_start && limit->to_tick <= limit->from_tick)
		limit->to_tick += lap;
	if (!limit->at_start && limit->from_tick >= limit->to_tick)
		limit->from_tick -= lap;
	return measured_value(&shape->plan->clock, instance->item, instance->raw, &limit->value) && judge(&shape->plan->clock, limit) &&
	       place_interval(&shape->plan->clock, limit);
}

bool line_limits_find(const struct line_shape *shape, struct arena *arena, struct line_limit limits[MOST_LINE_LIMITS], size_t *count)
{
	const struct plan *plan = shape->plan;
	const struct recording recording = {.plan = plan, .asserted = shape->timeline->asserted, .cells = shape->timeline->cell_count};
	struct measured_instances all;
	bool found[ITEM_COUNT] = {false};
	struct line_limit of_item[ITEM_COUNT];
	*count = 0;
	if (plan->standard == NULL)
		return true;
	if (!measure_instances(arena, &recording, plan->standard, &all))
		return false;
	for (size_t index = 0; index < all.count; index++) {
		const enum limit_item item = all.list[index].item;
		if (!found[item] && is_drawn(plan->standard, plan->grade, item))
			found[item] = make_limit(shape, &all.list[index], &of_item[item]);
	}
	for (unsigned item = 0; item < ITEM_COUNT; item++)
		if (found[item])
			limits[(*count)++] = of_item[item];
	return true;
}

// Times in microseconds, cycles as they are.
void text_put_item_value(struct text *out, enum limit_item item, struct fraction value)
{
	const bool time = limit_item_facts(item)->dimension == DIMENSION_TIME;
	struct fraction shown = value;
	if (time && !fraction_multiply(value, fraction_whole(1000000), &shown)) {
		text_put(out, "?");
		return;
	}
	if (time)
		text_put_decimal(out, shown, 3);
	else
		text_put_rounded(out, shown, 3);
	text_put(out, time ? " us" : " cycles");
}

void text_put_allowed(struct text *out, const struct limit *limit)
{
	if (limit->has_low && limit->has_high && fraction_compare(limit->low, limit->high) == 0) {
		text_put(out, "exactly ");
		text_put_item_value(out, limit->item, limit->low);
	} else if (limit->has_low && limit->has_high) {
		text_put_item_value(out, limit->item, limit->low);
		text_put(out, " to ");
		text_put_item_value(out, limit->item, limit->high);
	} else {
		text_put(out, limit->has_low ? "at least " : "at most ");
		text_put_item_value(out, limit->item, limit->has_low ? limit->low : limit->high);
	}
}
