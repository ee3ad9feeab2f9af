// Two lists in order, aligned so that what pairs are worth sums to the most: by the classic table, between what both ends have in
// common. The table takes steps for each pair, so there is a limit to all that one comparison may take.
#include <stdlib.h>

#include "base/arena.h"
#include "compare/parts.h"

#define MOST_PAIRS 4000000u // of one table

bool alignment_begin(struct comparing *comparing, struct alignment *alignment)
{
	alignment->now_of = arena_array(comparing->arena, alignment->old_count, sizeof *alignment->now_of);
	alignment->old_of = arena_array(comparing->arena, alignment->now_count, sizeof *alignment->old_of);
	comparing->failed = comparing->failed || alignment->now_of == NULL || alignment->old_of == NULL;
	for (size_t index = 0; !comparing->failed && index < alignment->old_count; index++)
		alignment->now_of[index] = NONE;
	for (size_t index = 0; !comparing->failed && index < alignment->now_count; index++)
		alignment->old_of[index] = NONE;
	return !comparing->failed;
}

static void pair(struct alignment *alignment, size_t old, size_t now)
{
	alignment->now_of[old] = now;
	alignment->old_of[now] = old;
}

// What stands between the ends that are alike.
struct middle {
	pair_worth *worth;
	const void *context;
	size_t start, rows, columns; // of the old list, of the new one
	uint32_t *best;              // [rows + 1][columns + 1]: of what is left from there on
};

static uint32_t *best_at(const struct middle *middle, size_t row, size_t column)
{
	return &middle->best[row * (middle->columns + 1) + column];
}

static uint32_t worth_at(const struct middle *middle, size_t row, size_t column)
{
	return middle->worth(middle->context, middle->start + row, middle->start + column);
}

static void fill_table(const struct middle *middle)
{
	for (size_t row = middle->rows; row-- > 0;)
		for (size_t column = middle->columns; column-- > 0;) {
			const uint32_t down = *best_at(middle, row + 1, column), right = *best_at(middle, row, column + 1);
			const uint32_t worth = worth_at(middle, row, column), paired = worth + *best_at(middle, row + 1, column + 1);
			const uint32_t alone = down > right ? down : right;
			*best_at(middle, row, column) = worth > 0 && paired > alone ? paired : alone;
		}
}

// Of equal sums, the one that pairs what comes first.
static void walk_table(const struct middle *middle, struct alignment *alignment)
{
	for (size_t row = 0, column = 0; row < middle->rows && column < middle->columns;) {
		const uint32_t best = *best_at(middle, row, column), worth = worth_at(middle, row, column);
		if (worth > 0 && best == worth + *best_at(middle, row + 1, column + 1))
			pair(alignment, middle->start + row++, middle->start + column++);
		else if (best == *best_at(middle, row + 1, column))
			row++;
		else
			column++;
	}
}

static bool align_middle(struct comparing *comparing, struct middle *middle, struct alignment *alignment)
{
	if (middle->rows == 0 || middle->columns == 0)
		return true;
	if (middle->rows > MOST_PAIRS / middle->columns || middle->rows * middle->columns > comparing->work_left)
		return false;
	comparing->work_left -= middle->rows * middle->columns;
	middle->best = calloc((middle->rows + 1) * (middle->columns + 1), sizeof *middle->best);
	comparing->failed = comparing->failed || middle->best == NULL;
	if (middle->best == NULL)
		return false;
	fill_table(middle);
	walk_table(middle, alignment);
	free(middle->best);
	return true;
}

bool align_lists(struct comparing *comparing, pair_worth *worth, uint32_t whole, const void *context, struct alignment *alignment)
{
	size_t start = 0, old_end = alignment->old_count, now_end = alignment->now_count;
	for (; start < old_end && start < now_end && worth(context, start, start) == whole; start++)
		pair(alignment, start, start);
	for (; old_end > start && now_end > start && worth(context, old_end - 1, now_end - 1) == whole; old_end--, now_end--)
		pair(alignment, old_end - 1, now_end - 1);
	struct middle middle = {worth, context, start, old_end - start, now_end - start, NULL};
	return align_middle(comparing, &middle, alignment);
}
