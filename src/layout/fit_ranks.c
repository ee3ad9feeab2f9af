#include "layout/fit_ranks.h"

#include <stdlib.h>

static int compare_whole(int64_t left, int64_t right)
{
	return (left > right) - (left < right);
}

static int compare_choices(const struct fit_line *left, const struct fit_line *right)
{
	int order = compare_whole(left->stretched, right->stretched);
	if (order == 0)
		order = compare_whole(left->stretch_ticks, right->stretch_ticks);
	if (order == 0)
		order = compare_whole((int64_t)left->crystal, (int64_t)right->crystal);
	if (order == 0)
		order = compare_whole(left->cycle_ticks, right->cycle_ticks);
	if (order == 0)
		order = compare_whole(left->dot_ticks, right->dot_ticks);
	if (order == 0)
		order = compare_whole(left->cell_dots, right->cell_dots);
	return order != 0 ? order : compare_whole(left->cells, right->cells);
}

int fit_rank_compare(const struct fit_rank *left, const struct fit_rank *right)
{
	int order = compare_whole(right->kept, left->kept);
	if (order == 0)
		order = fraction_compare(right->share, left->share);
	if (order == 0)
		order = compare_whole(left->line.cells * left->frame.lines, right->line.cells * right->frame.lines);
	if (order == 0)
		order = compare_whole(left->memory.chips, right->memory.chips);
	return order != 0 ? order : compare_choices(&left->line, &right->line);
}

static int compare(const void *left, const void *right)
{
	return fit_rank_compare(left, right);
}

void fit_ranks_sort(struct fit_rank *ranks, size_t count)
{
	if (count > 1)
		qsort(ranks, count, sizeof *ranks, compare);
}

bool fit_best_wants(const struct fit_best *best, const struct fit_rank *rank)
{
	return best->count < best->top || fit_rank_compare(rank, &best->ranks[best->count - 1]) < 0;
}

void fit_best_take(struct fit_best *best, const struct fit_rank *rank)
{
	size_t place = best->count < best->top ? best->count++ : best->count - 1;
	for (; place > 0 && fit_rank_compare(rank, &best->ranks[place - 1]) < 0; place--)
		best->ranks[place] = best->ranks[place - 1];
	best->ranks[place] = *rank;
}
