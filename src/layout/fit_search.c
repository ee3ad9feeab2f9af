#include <assert.h>
#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "catalogue/crystals.h"
#include "layout/fit_choices.h"

struct search {
	struct arena *arena;       // of the result
	const struct fit_space *space;
	struct fit_frames frames;
	struct fit_best best;
	struct fit_rank *before;   // [top]: the best before the crystal that is being searched
	size_t before_count;
	struct fit_result result;
};

// Judges a choice with its edges; `depth` as of fit_edges_find. False if it does not stand like the floor.
static bool judge(struct fit_crystal *crystal, const struct fit_line *line, const struct fit_standing *floor, unsigned depth,
                  struct fit_layout *layout, struct fit_standing *standing)
{
	const struct fit_space *space = crystal->space;
	*standing = fit_choice_base(crystal, line);
	layout->serration = (struct fit_cells){0, 0};
	if (!fit_has_separate_sync(space->standard) && !fit_serration_find(&crystal->meter, line, &layout->serration, standing))
		return false;
	return fit_edges_find(&crystal->meter, line, space->columns, crystal->cycle_ticks != 0, floor, depth, layout->regions, standing);
}

// What the edges of a choice must stand like to come among the best.
static struct fit_standing floor_of(const struct fit_best *best, unsigned counts)
{
	struct fit_standing floor = {.count = 1, .shares = {{0, 1}}};
	if (best->count < best->top)
		return floor;
	const struct fit_rank *last = &best->ranks[best->count - 1];
	floor.kept = last->kept > counts ? last->kept - counts : 0;
	floor.shares[0] = last->share;
	return floor;
}

// Judges a crystal's choices in the order of their bounds, until none that follows can come among the best.
static void judge_choices(struct search *search, struct fit_crystal *crystal)
{
	fit_ranks_sort(crystal->choices, crystal->choice_count);
	for (size_t index = 0; index < crystal->choice_count; index++) {
		struct fit_rank *rank = &crystal->choices[index];
		const unsigned counts = fit_choice_counts(crystal, &rank->line);
		const struct fit_standing floor = floor_of(&search->best, counts);
		struct fit_layout layout;
		struct fit_standing standing;
		if (!fit_best_wants(&search->best, rank))
			break;
		search->result.judged++;
		if (!judge(crystal, &rank->line, &floor, 1, &layout, &standing))
			continue;
		rank->kept = standing.kept + counts;
		rank->share = fit_standing_share(&standing);
		if (fit_best_wants(&search->best, rank))
			fit_best_take(&search->best, rank);
	}
}

static struct fit_crystal begin_crystal(struct search *search, struct arena *arena, size_t index)
{
	return (struct fit_crystal){.arena = arena, .space = search->space, .frames = &search->frames, .best = &search->best,
	                            .index = index, .master_hz = search->space->crystals[index].frequency_hz};
}

// Numbers that do not fit may show only when edges are judged. Then what was found is taken back: the best are as they were before.
static void take_back(struct search *search, struct fit_crystal *crystal)
{
	if (search->before_count > 0)
		memcpy(search->best.ranks, search->before, search->before_count * sizeof *search->before);
	search->best.count = search->before_count;
	fit_crystal_give_up(crystal);
}

static enum fit_status search_crystal(struct search *search, struct fit_crystal *crystal)
{
	bool good;
	enum fit_status status = fit_crystal_open(crystal, &good);
	if (status == FIT_OK && good)
		status = fit_choices_find(crystal);
	if (status != FIT_OK)
		return status;
	search->before_count = search->best.count;
	if (search->best.count > 0)
		memcpy(search->before, search->best.ranks, search->best.count * sizeof *search->before);
	judge_choices(search, crystal);
	if (fit_crystal_is_unfit(crystal))
		take_back(search, crystal);
	search->result.choices += crystal->met;
	if (crystal->met == 0 && crystal->noted)
		search->result.obstacles[search->result.obstacle_count++] = crystal->obstacle;
	return FIT_OK;
}

static enum fit_status search_crystals(struct search *search)
{
	enum fit_status status = FIT_OK;
	for (size_t index = 0; index < search->space->crystal_count && status == FIT_OK; index++) {
		struct arena *arena = arena_create(); // of one crystal, so that memory does not grow with their number
		struct fit_crystal crystal = begin_crystal(search, arena, index);
		status = arena != NULL ? search_crystal(search, &crystal) : FIT_OUT_OF_MEMORY;
		arena_destroy(arena);
	}
	return status;
}

// The best edges of a layout that was found, by all shares, and what its items come to. False if numbers do not fit.
static bool complete(struct search *search, struct fit_crystal *crystal, const struct fit_rank *rank, struct fit_layout *layout)
{
	const unsigned kept = rank->kept - fit_choice_counts(crystal, &rank->line);
	const struct fit_standing floor = {.kept = kept, .count = 1, .shares = {rank->share}};
	struct fit_standing standing;
	*layout = (struct fit_layout){.line = rank->line, .frame = rank->frame, .memory = rank->memory};
	if (!judge(crystal, &rank->line, &floor, FIT_STANDING_SHARES, layout, &standing) || !fit_measure(search->space, layout) ||
	    fit_crystal_is_unfit(crystal))
		return false;
	assert(layout->kept == rank->kept); // two ways to reckon the same
	assert(!layout->has_share || fraction_compare(layout->share, rank->share) == 0);
	return true;
}

static enum fit_status complete_crystal(struct search *search, size_t index, struct arena *arena)
{
	struct fit_crystal crystal = begin_crystal(search, arena, index);
	bool good, open = false;
	for (size_t place = 0; place < search->best.count; place++) {
		const struct fit_rank *rank = &search->best.ranks[place];
		if (rank->line.crystal != index)
			continue;
		if (!open && fit_crystal_open(&crystal, &good) != FIT_OK)
			return FIT_OUT_OF_MEMORY;
		open = true;
		if (!complete(search, &crystal, rank, &search->result.layouts[place]))
			return FIT_UNFIT;
	}
	return FIT_OK;
}

static enum fit_status complete_layouts(struct search *search)
{
	enum fit_status status = FIT_OK;
	for (size_t index = 0; index < search->space->crystal_count && status == FIT_OK; index++) {
		struct arena *arena = arena_create();
		status = arena != NULL ? complete_crystal(search, index, arena) : FIT_OUT_OF_MEMORY;
		arena_destroy(arena);
	}
	search->result.layout_count = search->best.count;
	return status;
}

static int compare_obstacles(const void *left_pointer, const void *right_pointer)
{
	const struct fit_obstacle *left = left_pointer, *right = right_pointer;
	if (left->condition != right->condition)
		return left->condition > right->condition ? -1 : 1;
	const int order = fraction_compare(left->missed, right->missed);
	return order != 0 ? order : (left->crystal > right->crystal) - (left->crystal < right->crystal);
}

static bool begin_search(struct search *search)
{
	struct arena *arena = search->arena;
	const struct fit_space *space = search->space;
	search->best.top = space->top;
	search->best.ranks = arena_array(arena, space->top, sizeof *search->best.ranks);
	search->before = arena_array(arena, space->top, sizeof *search->before);
	search->result.layouts = arena_array(arena, space->top, sizeof *search->result.layouts);
	search->result.obstacles = arena_array(arena, space->crystal_count, sizeof *search->result.obstacles);
	return search->best.ranks != NULL && search->before != NULL && search->result.layouts != NULL &&
	       search->result.obstacles != NULL && fit_frames_begin(&search->frames, arena, space);
}

// Is the space small enough to be gone through? Counts are within the limits of fit.h, so that their product fits.
static bool is_small(const struct fit_space *space)
{
	const int64_t stretches = fit_has_colour(space->standard) ? space->cell_dots[space->cell_dot_count - 1] * space->most_stretched : 0;
	return (int64_t)(space->dot_tick_count * space->cell_dot_count) * (stretches + 1) <= FIT_LIMIT_CELLS;
}

enum fit_status fit_search(struct arena *arena, const struct fit_space *space, struct fit_result *result)
{
	struct search search = {.arena = arena, .space = space};
	if (!is_small(space))
		return FIT_TOO_MANY;
	enum fit_status status = begin_search(&search) ? search_crystals(&search) : FIT_OUT_OF_MEMORY;
	if (status == FIT_OK)
		status = complete_layouts(&search);
	if (status != FIT_OK)
		return status;
	if (search.result.obstacle_count > 1)
		qsort(search.result.obstacles, search.result.obstacle_count, sizeof *search.result.obstacles, compare_obstacles);
	*result = search.result;
	return FIT_OK;
}
