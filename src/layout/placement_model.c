// What each stretched cell does to each limit: measured, by stretching one cell of one segment at a time.
#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "layout/placement.h"
#include "measure/measure.h"

// Of a block so many lines are measured: more of the same show nothing new, and the rest must not hide what vertical intervals show.
#define MOST_REPEATS 64

static uint64_t traced_signals(const struct plan *plan)
{
	static const enum role roles[] = {ROLE_COMPOSITE_SYNC, ROLE_HORIZONTAL_SYNC, ROLE_VERTICAL_SYNC, ROLE_BLANKING, ROLE_BURST_GATE};
	uint64_t mask = 0;
	for (size_t index = 0; index < sizeof roles / sizeof *roles; index++)
		if (plan->role_signal[roles[index]] >= 0)
			mask |= (uint64_t)1 << plan->role_signal[roles[index]];
	return mask;
}

static uint64_t stretch_bit(const struct plan *plan)
{
	return (uint64_t)1 << plan->role_signal[ROLE_STRETCH];
}

// Whether an edge of what is traced begins a cell.
static bool is_edge(const struct laid_line *laid, uint32_t cell, uint64_t traced)
{
	return cell > 0 && ((laid->asserted[cell] ^ laid->asserted[cell - 1]) & traced) != 0;
}

// Puts the segments of a line type into *segments, which has room for as many as it has cells that may be stretched. Returns how many.
static size_t put_segments(const struct placement_model *model, size_t type, struct stretch_segment *segments, uint32_t *cells)
{
	const struct line_type *line = &model->plan->lines[type];
	const struct laid_line *laid = &model->types[type];
	const uint64_t traced = traced_signals(model->plan);
	size_t count = 0;
	bool open = false;
	for (uint32_t cell = 0; cell < laid->cells; cell++) {
		open = open && !is_edge(laid, cell, traced);
		const struct region *region = &line->regions[laid->region_of_cell[cell]];
		if (region->stretch != STRETCH_AUTO || (region->assert_mask & stretch_bit(model->plan)) != 0)
			continue;
		if (!open)
			segments[count++] = (struct stretch_segment){type, cells, 0};
		open = true;
		*cells++ = cell;
		segments[count - 1].capacity++;
	}
	return count;
}

bool placement_segments(struct placement_model *model)
{
	uint64_t total = 0;
	for (size_t type = 0; type < model->plan->line_count; type++)
		total += model->types[type].auto_stretched > 0 ? model->types[type].cells : 0;
	uint32_t *cells = arena_array(model->arena, total, sizeof *cells);
	model->segments = arena_array(model->arena, total, sizeof *model->segments);
	model->placed = arena_array(model->arena, model->plan->line_count, sizeof *model->placed);
	if (cells == NULL || model->segments == NULL || model->placed == NULL)
		return false;
	for (size_t type = 0; type < model->plan->line_count; type++) {
		if (model->types[type].auto_stretched == 0)
			continue;
		struct placement_type *placed = &model->placed[model->placed_count++];
		*placed = (struct placement_type){type, model->segment_count, 0, model->types[type].auto_stretched};
		model->segment_count += put_segments(model, type, model->segments + model->segment_count, cells);
		placed->end = model->segment_count;
		cells += model->types[type].cells;
	}
	return true;
}

// The frame with repeats cut short, cell by cell, without the cells that were placed.
struct sample {
	uint64_t *asserted;
	uint32_t cells;
	uint32_t *first_cells;        // of each line, and its type
	size_t *line_types;
	size_t lines;
};

static size_t repeats_of(const struct block *block)
{
	return block->repeat < MOST_REPEATS ? (size_t)block->repeat : MOST_REPEATS;
}

static void clear_placed(const struct placement_model *model, size_t type, uint64_t *asserted)
{
	for (size_t segment = 0; segment < model->segment_count; segment++)
		for (uint32_t index = 0; model->segments[segment].type == type && index < model->segments[segment].capacity; index++)
			asserted[model->segments[segment].cells[index]] &= ~stretch_bit(model->plan);
}

static void put_line(const struct placement_model *model, size_t type, struct sample *sample)
{
	const struct laid_line *laid = &model->types[type];
	uint64_t *asserted = sample->asserted + sample->cells;
	memcpy(asserted, laid->asserted, laid->cells * sizeof *asserted);
	clear_placed(model, type, asserted);
	sample->first_cells[sample->lines] = sample->cells;
	sample->line_types[sample->lines++] = type;
	sample->cells += laid->cells;
}

static uint64_t cells_of_sample(const struct placement_model *model)
{
	const struct plan *plan = model->plan;
	uint64_t cells = 0;
	for (size_t index = 0; index < plan->block_count; index++)
		cells += (uint64_t)repeats_of(&plan->blocks[index]) * model->types[plan->blocks[index].line_type].cells;
	return cells;
}

static bool make_sample(const struct placement_model *model, struct arena *arena, struct sample *sample)
{
	const struct plan *plan = model->plan;
	uint64_t lines = 0;
	for (size_t index = 0; index < plan->block_count; index++)
		lines += repeats_of(&plan->blocks[index]);
	*sample = (struct sample){.asserted = arena_array(arena, cells_of_sample(model), sizeof(uint64_t)),
	                          .first_cells = arena_array(arena, lines, sizeof(uint32_t)),
	                          .line_types = arena_array(arena, lines, sizeof(size_t))};
	if (sample->asserted == NULL || sample->first_cells == NULL || sample->line_types == NULL)
		return false;
	for (size_t index = 0; index < plan->block_count; index++)
		for (size_t repeat = 0; repeat < repeats_of(&plan->blocks[index]); repeat++)
			put_line(model, plan->blocks[index].line_type, sample);
	return true;
}

// Stretches or releases the first cell of a segment in every line that has it.
static void toggle(const struct placement_model *model, const struct stretch_segment *segment, struct sample *sample)
{
	for (size_t line = 0; line < sample->lines; line++)
		if (sample->line_types[line] == segment->type)
			sample->asserted[sample->first_cells[line] + segment->cells[0]] ^= stretch_bit(model->plan);
}

static bool measure_sample(const struct placement_model *model, struct arena *arena, const struct sample *sample,
                           struct measured_instances *instances)
{
	const struct recording recording = {.plan = model->plan, .asserted = sample->asserted, .cells = sample->cells};
	return measure_instances(arena, &recording, model->plan->standard, instances);
}

static bool same_instances(const struct measured_instances *left, const struct measured_instances *right)
{
	bool same = left->count == right->count;
	for (size_t index = 0; same && index < left->count; index++)
		same = left->list[index].item == right->list[index].item && left->list[index].from_cell == right->list[index].from_cell &&
		       left->list[index].to_cell == right->list[index].to_cell;
	return same;
}

// Instances with their weights beside them, to be sorted.
struct weighted {
	const struct measured_instance *instance;
	const int64_t *weights;
	size_t count;
};

static int compare_weights(const struct weighted *left, const struct weighted *right)
{
	if (left->instance->item != right->instance->item)
		return left->instance->item < right->instance->item ? -1 : 1;
	for (size_t index = 0; index < left->count; index++)
		if (left->weights[index] != right->weights[index])
			return left->weights[index] < right->weights[index] ? -1 : 1;
	return 0;
}

static int compare_weighted(const void *left, const void *right)
{
	const struct weighted *one = left, *other = right;
	const int order = compare_weights(one, other);
	const int64_t difference = order != 0 ? order : one->instance->raw - other->instance->raw;
	return (difference > 0) - (difference < 0);
}

static bool weights_vary(const struct placement_model *model, const int64_t *weights)
{
	for (size_t index = 0; index < model->placed_count; index++)
		for (size_t segment = model->placed[index].first; segment < model->placed[index].end; segment++)
			if (weights[segment] != weights[model->placed[index].first])
				return true;
	return false;
}

static bool binds(const struct plan *plan, enum limit_item item)
{
	const struct limit *limit = standard_limit(plan->standard, item, plan->grade);
	return limit != NULL && (limit->has_low || limit->has_high);
}

// Of instances of an item that move alike only the lowest and the highest matter. `all` is sorted.
static bool put_groups(struct placement_model *model, const struct weighted *all, size_t count)
{
	model->groups = arena_array(model->arena, count, sizeof *model->groups);
	if (model->groups == NULL)
		return false;
	for (size_t index = 0; index < count; index++) {
		const bool first = index == 0 || compare_weights(&all[index - 1], &all[index]) != 0;
		const bool last = index + 1 == count || compare_weights(&all[index], &all[index + 1]) != 0;
		if ((!first && !last) || !binds(model->plan, all[index].instance->item))
			continue;
		int64_t *weights = arena_array(model->arena, model->segment_count, sizeof *weights);
		if (weights == NULL)
			return false;
		memcpy(weights, all[index].weights, model->segment_count * sizeof *weights);
		model->groups[model->group_count++] = (struct placement_group){all[index].instance->item, all[index].instance->raw, weights,
		                                                                weights_vary(model, weights)};
	}
	return true;
}

static bool find_weights(const struct placement_model *model, struct sample *sample, const struct measured_instances *base,
                         int64_t *weights, bool *linear)
{
	for (size_t segment = 0; segment < model->segment_count && *linear; segment++) {
		struct arena *scratch = arena_create();
		struct measured_instances one;
		toggle(model, &model->segments[segment], sample);
		const bool measured = scratch != NULL && measure_sample(model, scratch, sample, &one);
		toggle(model, &model->segments[segment], sample);
		*linear = measured && same_instances(base, &one);
		for (size_t index = 0; *linear && index < base->count; index++)
			weights[index * model->segment_count + segment] = one.list[index].raw - base->list[index].raw;
		arena_destroy(scratch);
		if (!measured)
			return false;
	}
	return true;
}

#define MOST_WEIGHTS 16777216u // so that giant frames do not take memory without end
#define MOST_MEASURED 50000000u // cells, over all segments: some seconds; a board takes less than a million

static bool weigh(struct placement_model *model, struct arena *arena, bool *linear)
{
	struct sample sample;
	struct measured_instances base;
	if (!make_sample(model, arena, &sample) || !measure_sample(model, arena, &sample, &base))
		return false;
	*linear = base.count > 0 && base.count <= MOST_WEIGHTS / model->segment_count;
	if (!*linear)
		return true;
	int64_t *weights = arena_array(arena, base.count * model->segment_count, sizeof *weights);
	struct weighted *all = arena_array(arena, base.count, sizeof *all);
	if (weights == NULL || all == NULL || !find_weights(model, &sample, &base, weights, linear))
		return false;
	for (size_t index = 0; index < base.count; index++)
		all[index] = (struct weighted){&base.list[index], weights + index * model->segment_count, model->segment_count};
	qsort(all, base.count, sizeof *all, compare_weighted);
	return !*linear || put_groups(model, all, base.count);
}

bool placement_groups(struct placement_model *model, bool *linear)
{
	*linear = false;
	if (cells_of_sample(model) * (uint64_t)(model->segment_count + 1) > MOST_MEASURED)
		return true;
	struct arena *arena = arena_create();
	const bool weighed = arena != NULL && weigh(model, arena, linear);
	arena_destroy(arena);
	return weighed;
}
