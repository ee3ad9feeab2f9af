// The edges of a signal in a line, before and after: which is which.
#include "compare/edges.h"

#include "base/arena.h"
#include "compare/parts.h"

#define MOST_EDGE_PAIRS 1000000u
#define WORTH_SAME_PLACE 1000u
#define FARTHEST 4 // an edge that has moved by more than this part of the line is another

struct edge_lists {
	const struct signal_edge *old, *now;
	int64_t length;
};

static uint32_t worth_of_edges(const void *context, size_t old, size_t now)
{
	const struct edge_lists *lists = context;
	const struct signal_edge *before = &lists->old[old], *after = &lists->now[now];
	const int64_t distance = before->place < after->place ? after->place - before->place : before->place - after->place;
	if (before->asserts != after->asserts || distance > lists->length / FARTHEST)
		return 0;
	return WORTH_SAME_PLACE - (uint32_t)(distance * (WORTH_SAME_PLACE - 1) / (lists->length / FARTHEST + 1));
}

bool edges_match(struct arena *arena, const struct signal_edge *old, size_t old_count, const struct signal_edge *now, size_t now_count,
                 int64_t length, const size_t **now_of)
{
	const struct edge_lists lists = {old, now, length};
	struct comparing comparing = {.arena = arena, .work_left = MOST_EDGE_PAIRS};
	struct alignment alignment = {.old_count = old_count, .now_count = now_count};
	if (alignment_begin(&comparing, &alignment))
		(void)align_lists(&comparing, worth_of_edges, WORTH_SAME_PLACE, &lists, &alignment); // what is too much stays apart
	if (comparing.failed)
		return false;
	*now_of = alignment.now_of;
	return true;
}
