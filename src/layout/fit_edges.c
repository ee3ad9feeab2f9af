// The edges of a line and its serration, placed one after the other; partial lines that cannot become better are left.
#include "layout/fit_parts.h"

// What the edges decide, in the order in which they are placed.
enum { LEVEL_PICTURE, LEVEL_SYNC, LEVEL_BURST, LEVEL_BURST_END, LEVELS };

#define LEVEL_ITEMS 3
static const enum limit_item level_items[LEVELS][LEVEL_ITEMS] = {
	[LEVEL_PICTURE] = {ITEM_FRONT_PORCH, ITEM_PICTURE_START, ITEM_HORIZONTAL_CENTRE},
	[LEVEL_SYNC] = {ITEM_SYNC_WIDTH, ITEM_BACK_PORCH, ITEM_COUNT},
	[LEVEL_BURST] = {ITEM_BREEZEWAY, ITEM_BURST_START, ITEM_BURST_START_CYCLES},
	[LEVEL_BURST_END] = {ITEM_BURST_LENGTH, ITEM_BURST_LENGTH_CYCLES, ITEM_BURST_TO_PICTURE},
};

// A search of edges; each position is of the cells before the edge.
struct edges {
	struct fit_meter *meter;
	const struct fit_line *line;
	int64_t columns;
	bool colour;
	struct fit_standing floor;
	unsigned depth;
	unsigned open[LEVELS];            // limits that bind on the levels that follow
	struct fit_cells at[LEVELS];      // the edges that are placed
	bool found;
	struct fit_standing best;
	struct fit_cells best_at[LEVELS];
};

int64_t fit_ticks(const struct fit_line *line, struct fit_cells cells)
{
	return cells.cells * line->cell_ticks + cells.stretched * line->stretch_ticks;
}

int64_t fit_blank_regions(bool colour)
{
	return colour ? FIT_REGIONS - 1 : 3;
}

void fit_edges_open(struct fit_meter *meter, struct fraction master_hz, int64_t cycle_ticks, int64_t most)
{
	static const enum limit_item times[] = {
		ITEM_FRONT_PORCH, ITEM_SYNC_WIDTH, ITEM_BREEZEWAY, ITEM_BURST_START, ITEM_BURST_LENGTH, ITEM_BURST_TO_PICTURE,
		ITEM_BACK_PORCH, ITEM_PICTURE_START, ITEM_BROAD_WIDTH, ITEM_SERRATION_WIDTH,
	};
	static const enum limit_item cycles[] = {ITEM_BURST_START_CYCLES, ITEM_BURST_LENGTH_CYCLES};
	struct fraction tick_s, half_tick_s, tick_cycles;
	if (!fraction_divide(fraction_whole(1), master_hz, &tick_s) ||
	    !fraction_divide(tick_s, fraction_whole(2), &half_tick_s)) {
		meter->unfit = true;
		return;
	}
	for (size_t index = 0; index < sizeof times / sizeof *times; index++)
		fit_meter_open(meter, times[index], tick_s, most);
	fit_meter_open(meter, ITEM_HORIZONTAL_CENTRE, half_tick_s, 2 * most);
	if (cycle_ticks == 0 || !fraction_make(1, cycle_ticks, &tick_cycles))
		return;
	for (size_t index = 0; index < sizeof cycles / sizeof *cycles; index++)
		fit_meter_open(meter, cycles[index], tick_cycles, most);
}

static unsigned level_most(const struct fit_meter *meter, size_t level)
{
	unsigned count = 0;
	for (size_t index = 0; index < LEVEL_ITEMS; index++) {
		const enum limit_item item = level_items[level][index];
		count += item != ITEM_COUNT && meter->gauges[item].limit != NULL;
	}
	return count;
}

unsigned fit_edges_most(const struct fit_meter *meter)
{
	unsigned count = 0;
	for (size_t level = 0; level < LEVELS; level++)
		count += level_most(meter, level);
	return count;
}

// Is it worth going on from a level with this standing? It is not if even with all that is open kept at a share of 1 it would be
// worse than the floor, or no better than the best.
static bool promises(const struct edges *edges, const struct fit_standing *standing, size_t level)
{
	struct fit_standing bound = *standing;
	bound.kept += edges->open[level];
	return fit_standing_compare(&bound, &edges->floor, 1) >= 0 &&
	       (!edges->found || fit_standing_compare(&bound, &edges->best, edges->depth) > 0);
}

// The same with marks that are not added yet, at less cost; true where promises must decide.
static bool may_promise(const struct edges *edges, const struct fit_standing *standing,
                        const struct fit_mark *const marks[LEVEL_ITEMS], size_t level)
{
	const struct fit_standing *least = edges->found ? &edges->best : &edges->floor;
	unsigned kept = standing->kept + edges->open[level];
	for (size_t index = 0; index < LEVEL_ITEMS; index++)
		kept += marks[index] != NULL && marks[index]->kept;
	if (kept != least->kept)
		return kept > least->kept;
	for (size_t index = 0; index < LEVEL_ITEMS && least->count > 0; index++)
		if (marks[index] != NULL && marks[index]->has_share && fraction_compare(marks[index]->share, least->shares[0]) < 0)
			return false;
	return true;
}

// Adds a level's marks to what there was before it. False if it is not worth going on.
static bool advance(const struct edges *edges, const struct fit_standing *before,
                    const struct fit_mark *const marks[LEVEL_ITEMS], size_t level, struct fit_standing *standing)
{
	if (!may_promise(edges, before, marks, level))
		return false;
	*standing = *before;
	for (size_t index = 0; index < LEVEL_ITEMS; index++)
		fit_standing_add(standing, marks[index]);
	return promises(edges, standing, level);
}

static void keep_best(struct edges *edges, const struct fit_standing *standing)
{
	edges->found = true;
	edges->best = *standing;
	for (size_t level = 0; level < LEVELS; level++)
		edges->best_at[level] = edges->at[level];
}

// How many of `cells` may be stretched if `from` lies before them and `to` after.
struct choice {
	int64_t least, most;
};

static struct choice choose_stretched(struct fit_cells from, int64_t cells, struct fit_cells to)
{
	const int64_t least = to.stretched - (to.cells - cells), most = from.stretched + (cells - from.cells);
	return (struct choice){least > from.stretched ? least : from.stretched, most < to.stretched ? most : to.stretched};
}

static void place_burst_end(struct edges *edges, const struct fit_standing *before)
{
	const struct fit_cells from = edges->at[LEVEL_BURST], to = edges->at[LEVEL_PICTURE];
	const int64_t start = fit_ticks(edges->line, from), end = fit_ticks(edges->line, to);
	struct fit_cells *at = &edges->at[LEVEL_BURST_END];
	for (at->cells = from.cells + 1; at->cells < to.cells; at->cells++) {
		const struct choice choice = choose_stretched(from, at->cells, to);
		for (at->stretched = choice.least; at->stretched <= choice.most; at->stretched++) {
			const int64_t ticks = fit_ticks(edges->line, *at);
			const struct fit_mark *const marks[LEVEL_ITEMS] = {
				fit_meter_mark(edges->meter, ITEM_BURST_LENGTH, ticks - start),
				fit_meter_mark(edges->meter, ITEM_BURST_LENGTH_CYCLES, ticks - start),
				fit_meter_mark(edges->meter, ITEM_BURST_TO_PICTURE, end - ticks),
			};
			struct fit_standing standing;
			if (advance(edges, before, marks, LEVEL_BURST_END, &standing))
				keep_best(edges, &standing);
		}
	}
}

static void place_burst(struct edges *edges, const struct fit_standing *before)
{
	const struct fit_cells from = edges->at[LEVEL_SYNC], to = edges->at[LEVEL_PICTURE];
	const int64_t sync = fit_ticks(edges->line, from);
	struct fit_cells *at = &edges->at[LEVEL_BURST];
	for (at->cells = from.cells + 1; at->cells + 1 < to.cells; at->cells++) {
		const struct choice choice = choose_stretched(from, at->cells, to);
		for (at->stretched = choice.least; at->stretched <= choice.most; at->stretched++) {
			const int64_t ticks = fit_ticks(edges->line, *at);
			const struct fit_mark *const marks[LEVEL_ITEMS] = {
				fit_meter_mark(edges->meter, ITEM_BREEZEWAY, ticks - sync),
				fit_meter_mark(edges->meter, ITEM_BURST_START, ticks),
				fit_meter_mark(edges->meter, ITEM_BURST_START_CYCLES, ticks),
			};
			struct fit_standing standing;
			if (advance(edges, before, marks, LEVEL_BURST, &standing))
				place_burst_end(edges, &standing);
		}
	}
}

static void place_sync(struct edges *edges, const struct fit_standing *before)
{
	const struct fit_cells from = {0, 0}, to = edges->at[LEVEL_PICTURE];
	const int64_t end = fit_ticks(edges->line, to), regions_after = edges->colour ? 3 : 1;
	struct fit_cells *at = &edges->at[LEVEL_SYNC];
	for (at->cells = 1; at->cells + regions_after <= to.cells; at->cells++) {
		const struct choice choice = choose_stretched(from, at->cells, to);
		for (at->stretched = choice.least; at->stretched <= choice.most; at->stretched++) {
			const int64_t ticks = fit_ticks(edges->line, *at);
			const struct fit_mark *const marks[LEVEL_ITEMS] = {
				fit_meter_mark(edges->meter, ITEM_SYNC_WIDTH, ticks),
				fit_meter_mark(edges->meter, ITEM_BACK_PORCH, end - ticks),
			};
			struct fit_standing standing;
			if (!advance(edges, before, marks, LEVEL_SYNC, &standing))
				continue;
			if (edges->colour)
				place_burst(edges, &standing);
			else
				keep_best(edges, &standing);
		}
	}
}

static void place_picture(struct edges *edges, const struct fit_standing *before)
{
	const struct fit_line *line = edges->line;
	const struct fit_cells from = {0, 0}, to = {line->cells - edges->columns, line->stretched};
	const int64_t width = edges->columns * line->cell_ticks, regions_before = fit_blank_regions(edges->colour) - 1;
	struct fit_cells *at = &edges->at[LEVEL_PICTURE];
	for (at->cells = regions_before; at->cells < to.cells; at->cells++) {
		const struct choice choice = choose_stretched(from, at->cells, to);
		for (at->stretched = choice.least; at->stretched <= choice.most; at->stretched++) {
			const int64_t ticks = fit_ticks(line, *at);
			const struct fit_mark *const marks[LEVEL_ITEMS] = {
				fit_meter_mark(edges->meter, ITEM_FRONT_PORCH, line->ticks - width - ticks),
				fit_meter_mark(edges->meter, ITEM_PICTURE_START, ticks),
				fit_meter_mark(edges->meter, ITEM_HORIZONTAL_CENTRE, 2 * ticks + width),
			};
			struct fit_standing standing;
			if (advance(edges, before, marks, LEVEL_PICTURE, &standing))
				place_sync(edges, &standing);
		}
	}
}

static struct fit_cells between(struct fit_cells from, struct fit_cells to)
{
	return (struct fit_cells){to.cells - from.cells, to.stretched - from.stretched};
}

static void take_regions(const struct edges *edges, struct fit_cells regions[FIT_REGIONS])
{
	const struct fit_cells *at = edges->best_at, none = {0, 0};
	const struct fit_cells blank = {edges->line->cells - edges->columns, edges->line->stretched};
	regions[FIT_SYNC] = at[LEVEL_SYNC];
	regions[FIT_BREEZEWAY] = edges->colour ? between(at[LEVEL_SYNC], at[LEVEL_BURST]) : none;
	regions[FIT_BURST] = edges->colour ? between(at[LEVEL_BURST], at[LEVEL_BURST_END]) : none;
	regions[FIT_BACK_PORCH] = between(at[edges->colour ? LEVEL_BURST_END : LEVEL_SYNC], at[LEVEL_PICTURE]);
	regions[FIT_PICTURE] = (struct fit_cells){edges->columns, 0};
	regions[FIT_FRONT_PORCH] = between(at[LEVEL_PICTURE], blank);
}

bool fit_edges_find(struct fit_meter *meter, const struct fit_line *line, int64_t columns, bool colour,
                    const struct fit_standing *floor, unsigned depth, struct fit_cells regions[FIT_REGIONS],
                    struct fit_standing *standing)
{
	static const struct fit_standing none = {.count = 1, .shares = {{0, 1}}};
	struct edges edges = {.meter = meter, .line = line, .columns = columns, .colour = colour, .depth = depth};
	const size_t last = colour ? LEVEL_BURST_END : LEVEL_SYNC;
	edges.floor = floor != NULL ? *floor : none;
	for (size_t level = last; level > 0; level--)
		edges.open[level - 1] = edges.open[level] + level_most(meter, level);
	place_picture(&edges, standing);
	if (!edges.found)
		return false;
	take_regions(&edges, regions);
	*standing = edges.best;
	return true;
}

bool fit_serration_find(struct fit_meter *meter, const struct fit_line *line, struct fit_cells *serration,
                        struct fit_standing *standing)
{
	const struct fit_cells all = {line->cells, line->stretched};
	bool found = false;
	struct fit_standing best = {0};
	for (struct fit_cells at = {1, 0}; at.cells < line->cells && 2 * at.cells * line->cell_ticks < line->ticks; at.cells++) {
		const struct choice choice = choose_stretched((struct fit_cells){0, 0}, at.cells, all);
		for (at.stretched = choice.least; at.stretched <= choice.most; at.stretched++) {
			const int64_t ticks = fit_ticks(line, at);
			struct fit_standing mine = {0};
			if (2 * ticks >= line->ticks)
				continue;
			fit_standing_add(&mine, fit_meter_mark(meter, ITEM_SERRATION_WIDTH, ticks));
			fit_standing_add(&mine, fit_meter_mark(meter, ITEM_BROAD_WIDTH, line->ticks - ticks));
			if (found && fit_standing_compare(&mine, &best, FIT_STANDING_SHARES) <= 0)
				continue;
			found = true;
			best = mine;
			*serration = at;
		}
	}
	if (!found)
		return false;
	fit_standing_join(standing, &best);
	return true;
}
