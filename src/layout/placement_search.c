// The search for the best placement. Segment by segment, from the left, each takes as many cells as it may and then fewer, so that of
// equals the leftmost comes first. A branch is left only where no way to finish it can be better than the second best so far: every
// limit is given the value that suits it best among those that the cells still to be placed can bring about, each limit for itself.
// A margin's share rises towards the middle of the limit's range and falls behind it, so that the best of a range of values is the one
// that is nearest to the peak.
#include "base/arena.h"
#include "catalogue/judge.h"
#include "layout/placement.h"
#include "measure/measure.h"

#define MOST_VALUES 1000000u   // that are judged before the search
#define MOST_BOUNDS 30000000u  // of groups, over all branches: about a second

// What a group's limit makes of each value that placements can bring about, from `lowest` on in steps of a stretch.
struct scale {
	int64_t lowest;
	uint32_t size;
	uint32_t kept_from, kept_to;  // the values that are kept; kept_to is the first that is not
	uint32_t peak;                // of the shares
	struct fraction *shares;      // [size]
	bool has_share;
	int64_t *least, *most;        // [segment_count + 1]: weight of the segments of a type from one on
};

struct range {
	int64_t low, high;
};

struct search {
	const struct placement_model *model;
	struct arena *arena;
	struct scale *scales;         // [group_count]
	int64_t unit;
	int64_t *values;              // [group_count]: with what is placed
	struct range *later;          // [group_count × placed_count]: what the types after one add
	uint32_t *counts, *left, *fewest; // [segment_count]: of a segment; to be placed there and after it in its type
	size_t *type_of;              // [segment_count]: index into model->placed
	uint64_t bounds;
	struct placement best, second;
	uint32_t *best_counts, *second_counts;
	bool has_best, has_second;
	unsigned limits;
};

// Better by limits, then by share; equals are not better.
static bool is_better(const struct placement *left, const struct placement *right)
{
	if (left->kept != right->kept)
		return left->kept > right->kept;
	if (!left->has_share || !right->has_share)
		return left->has_share && !right->has_share;
	return fraction_compare(left->share, right->share) > 0;
}

// The values of a group over all placements of one type.
static struct range range_of_type(const struct placement_group *group, const struct placement_type *placed)
{
	int64_t least = group->weights[placed->first], most = least;
	for (size_t segment = placed->first; segment < placed->end; segment++) {
		least = group->weights[segment] < least ? group->weights[segment] : least;
		most = group->weights[segment] > most ? group->weights[segment] : most;
	}
	return (struct range){least * placed->cells, most * placed->cells};
}

// False if the value does not fit.
static bool judge_value(const struct search *search, const struct placement_group *group, int64_t raw, struct judgement *judgement)
{
	const struct plan *plan = search->model->plan;
	struct interval values;
	if (!measured_value(&plan->clock, group->item, raw, &values.low))
		return false;
	values.high = values.low;
	if (plan->clock.has_accuracy &&
	    !interval_widen(&values, limit_item_facts(group->item)->dimension, plan->clock.accuracy_ppm))
		return false;
	*judgement = limit_judge(standard_limit(plan->standard, group->item, plan->grade), values);
	return true;
}

// False when memory is out. A value whose judgement does not fit 64 bits counts as missed.
static bool make_scale(const struct search *search, const struct placement_group *group, struct range range, struct scale *scale)
{
	*scale = (struct scale){.lowest = range.low, .size = (uint32_t)((range.high - range.low) / search->unit + 1)};
	scale->shares = arena_array(search->arena, scale->size, sizeof *scale->shares);
	if (scale->shares == NULL)
		return false;
	for (uint32_t index = 0; index < scale->size; index++) {
		struct judgement judgement;
		scale->shares[index] = FRACTION_ZERO;
		if (!judge_value(search, group, range.low + index * search->unit, &judgement))
			continue;
		scale->has_share = judgement.has_share && group->varies;
		scale->shares[index] = judgement.share;
		if (fraction_compare(judgement.share, scale->shares[scale->peak]) > 0)
			scale->peak = index;
		if (!judgement.kept)
			continue;
		if (scale->kept_to == 0)
			scale->kept_from = index;
		scale->kept_to = index + 1;
	}
	return true;
}

// The lightest and the heaviest segment from each on to the end of its type.
static bool make_suffixes(const struct search *search, const struct placement_group *group, struct scale *scale)
{
	const struct placement_model *model = search->model;
	scale->least = arena_array(search->arena, model->segment_count + 1, sizeof *scale->least);
	scale->most = arena_array(search->arena, model->segment_count + 1, sizeof *scale->most);
	if (scale->least == NULL || scale->most == NULL)
		return false;
	for (size_t segment = model->segment_count; segment-- > 0;) {
		const int64_t weight = group->weights[segment];
		const bool last = segment + 1 == model->placed[search->type_of[segment]].end;
		scale->least[segment] = last || weight < scale->least[segment + 1] ? weight : scale->least[segment + 1];
		scale->most[segment] = last || weight > scale->most[segment + 1] ? weight : scale->most[segment + 1];
	}
	return true;
}

static bool prepare_group(struct search *search, size_t index)
{
	const struct placement_model *model = search->model;
	const struct placement_group *group = &model->groups[index];
	struct range *later = search->later + index * model->placed_count, all = {0, 0};
	for (size_t placed = model->placed_count; placed-- > 0;) {
		const struct range of_type = range_of_type(group, &model->placed[placed]);
		later[placed] = all;
		all.low += of_type.low;
		all.high += of_type.high;
	}
	search->values[index] = group->raw;
	all.low += group->raw;
	all.high += group->raw;
	return make_scale(search, group, all, &search->scales[index]) && make_suffixes(search, group, &search->scales[index]);
}

static bool prepare(struct search *search)
{
	const struct placement_model *model = search->model;
	const size_t segments = model->segment_count;
	search->unit = model->plan->clock.stretch_ticks;
	search->scales = arena_array(search->arena, model->group_count, sizeof *search->scales);
	search->values = arena_array(search->arena, model->group_count, sizeof *search->values);
	search->later = arena_array(search->arena, model->group_count * model->placed_count, sizeof *search->later);
	search->counts = arena_array(search->arena, segments, sizeof *search->counts);
	search->left = arena_array(search->arena, segments, sizeof *search->left);
	search->fewest = arena_array(search->arena, segments, sizeof *search->fewest);
	search->type_of = arena_array(search->arena, segments, sizeof *search->type_of);
	search->best_counts = arena_array(model->arena, segments, sizeof *search->best_counts);
	search->second_counts = arena_array(model->arena, segments, sizeof *search->second_counts);
	if (search->scales == NULL || search->values == NULL || search->later == NULL || search->counts == NULL || search->left == NULL ||
	    search->fewest == NULL || search->type_of == NULL || search->best_counts == NULL || search->second_counts == NULL)
		return false;
	for (size_t placed = 0; placed < model->placed_count; placed++)
		for (size_t segment = model->placed[placed].first; segment < model->placed[placed].end; segment++)
			search->type_of[segment] = placed;
	for (size_t group = 0; group < model->group_count; group++) {
		search->limits += group == 0 || model->groups[group].item != model->groups[group - 1].item;
		if (!prepare_group(search, group))
			return false;
	}
	return true;
}

// The best that a group can come to, after a segment was filled. *kept: its limit can be kept.
static struct fraction best_of_group(const struct search *search, size_t segment, size_t group, bool *kept)
{
	const struct scale *scale = &search->scales[group];
	const size_t placed = search->type_of[segment];
	const struct range later = search->later[group * search->model->placed_count + placed];
	const int64_t left = search->left[segment] - search->counts[segment];
	const bool last = segment + 1 == search->model->placed[placed].end;
	const int64_t low = search->values[group] + later.low + (last ? 0 : left * scale->least[segment + 1]);
	const int64_t high = search->values[group] + later.high + (last ? 0 : left * scale->most[segment + 1]);
	const uint32_t from = (uint32_t)((low - scale->lowest) / search->unit), to = (uint32_t)((high - scale->lowest) / search->unit);
	*kept = scale->kept_from < scale->kept_to && from < scale->kept_to && to >= scale->kept_from;
	return scale->shares[scale->peak < from ? from : scale->peak > to ? to : scale->peak];
}

// A bound on what can come of the branch; when the last segment is filled, what comes of it.
static struct placement best_of_branch(const struct search *search, size_t segment)
{
	const struct placement_model *model = search->model;
	struct placement bound = {.kept = 0, .share = FRACTION_ZERO};
	for (size_t group = 0; group < model->group_count;) {
		const enum limit_item item = model->groups[group].item;
		bool all_kept = true, has_share = false, kept;
		struct fraction smallest = FRACTION_ZERO;
		for (; group < model->group_count && model->groups[group].item == item; group++) {
			const struct fraction share = best_of_group(search, segment, group, &kept);
			all_kept = all_kept && kept;
			if (!search->scales[group].has_share)
				continue;
			if (!has_share || fraction_compare(share, smallest) < 0)
				smallest = share;
			has_share = true;
		}
		bound.kept += all_kept;
		if (all_kept && has_share && (!bound.has_share || fraction_compare(smallest, bound.share) < 0)) {
			bound.share = smallest;
			bound.has_share = true;
		}
	}
	return bound;
}

static void copy_counts(const struct search *search, uint32_t *counts, const uint32_t *from)
{
	for (size_t segment = 0; segment < search->model->segment_count; segment++)
		counts[segment] = from[segment];
}

static void record(struct search *search, const struct placement *found)
{
	if (!search->has_best || is_better(found, &search->best)) {
		search->has_second = search->has_best;
		search->second = search->best;
		copy_counts(search, search->second_counts, search->best_counts);
		search->best = *found;
		search->has_best = true;
		copy_counts(search, search->best_counts, search->counts);
	} else if (!search->has_second || is_better(found, &search->second)) {
		search->second = *found;
		search->has_second = true;
		copy_counts(search, search->second_counts, search->counts);
	}
}

static void put_cells(struct search *search, size_t segment, int64_t cells)
{
	for (size_t group = 0; group < search->model->group_count; group++)
		search->values[group] += cells * search->model->groups[group].weights[segment];
}

// Fills a segment with as many cells as it may have.
static void open_segment(struct search *search, size_t segment)
{
	const struct placement_model *model = search->model;
	const struct placement_type *placed = &model->placed[search->type_of[segment]];
	const bool first = segment == placed->first;
	const uint32_t left = first ? placed->cells : search->left[segment - 1] - search->counts[segment - 1];
	uint64_t room = 0;
	for (size_t after = segment + 1; after < placed->end && room < left; after++)
		room += model->segments[after].capacity;
	search->left[segment] = left;
	search->fewest[segment] = room >= left ? 0 : left - (uint32_t)room;
	search->counts[segment] = left < model->segments[segment].capacity ? left : model->segments[segment].capacity;
	put_cells(search, segment, search->counts[segment]);
}

// Takes a cell out of a segment; if it may not have fewer, takes out all and gives false.
static bool next_count(struct search *search, size_t segment)
{
	if (search->counts[segment] > search->fewest[segment]) {
		search->counts[segment]--;
		put_cells(search, segment, -1);
		return true;
	}
	put_cells(search, segment, -(int64_t)search->counts[segment]);
	return false;
}

// False if the search was cut short.
static bool run(struct search *search)
{
	const size_t last = search->model->segment_count - 1;
	size_t segment = 0;
	open_segment(search, 0);
	for (;;) {
		const struct placement bound = best_of_branch(search, segment);
		search->bounds += search->model->group_count;
		if (search->bounds > MOST_BOUNDS)
			return false;
		if (!search->has_second || is_better(&bound, &search->second)) {
			if (segment < last) {
				open_segment(search, ++segment);
				continue;
			}
			record(search, &bound);
		}
		while (!next_count(search, segment)) {
			if (segment == 0)
				return true;
			segment--;
		}
	}
}

// Whether the values that the groups can come to are few enough to be judged each.
static bool few_values(const struct placement_model *model)
{
	uint64_t values = 0;
	for (size_t group = 0; group < model->group_count && values <= MOST_VALUES; group++) {
		values++;
		for (size_t placed = 0; placed < model->placed_count; placed++) {
			const struct range range = range_of_type(&model->groups[group], &model->placed[placed]);
			values += (uint64_t)((range.high - range.low) / model->plan->clock.stretch_ticks);
		}
	}
	return values <= MOST_VALUES;
}

bool placement_search(const struct placement_model *model, struct placements *placements)
{
	if (model->group_count == 0)
		return true;
	placements->unweighed = !few_values(model);
	if (placements->unweighed)
		return true;
	struct search search = {.model = model, .arena = arena_create(), .best = {.share = FRACTION_ZERO}, .second = {.share = FRACTION_ZERO}};
	if (search.arena == NULL || !prepare(&search)) {
		arena_destroy(search.arena);
		return false;
	}
	placements->exhausted = run(&search);
	placements->judged = search.has_best;
	placements->segments = model->segments;
	placements->segment_count = model->segment_count;
	placements->limits = search.limits;
	placements->best = search.best;
	placements->best.counts = search.best_counts;
	placements->second = search.second;
	placements->second.counts = search.second_counts;
	placements->has_second = search.has_second;
	arena_destroy(search.arena);
	return true;
}
