// Line types that neither a name nor what they show has matched: by how much of their cells is alike, and by where they are in the frame. They
// are aligned in the order of the frame, so that what is bounded in align.c is bounded here.
#include <stdlib.h>

#include "base/arena.h"
#include "compare/parts.h"

#define WHOLE 1000u       // likeness of lines that show the same
#define LEAST 500u        // of lines that are one, edited, where the frame has them in the same place
#define LEAST_ALONE 900u  // where it has not
#define WORTH_PLACE 500u

// One of them, and where it is in the frame.
struct lonely {
	size_t line;
	const struct laid_line *laid;
	const uint64_t *asserted;  // [regions], in the new plan's numbers
	size_t regions;
	int64_t lines;             // of the frame; 0: it is not used
	size_t before, after;      // the line types beside its first block; the frame goes round
};

struct lonelies {
	struct lonely *list;
	size_t count;
	size_t regions;            // of all
};

static bool is_left(const struct comparing *comparing, const struct plan *plan, size_t line)
{
	return (plan == comparing->old ? comparing->line_of : comparing->old_line_of)[line] == NONE;
}

static struct lonely lonely_of(struct comparing *comparing, const struct plan *plan, size_t line)
{
	const bool old = plan == comparing->old;
	const struct timeline *timeline = old ? comparing->old_timeline : comparing->now_timeline;
	return (struct lonely){.line = line, .laid = &timeline->types[line], .asserted = map_regions(comparing, &plan->lines[line], old),
	                       .regions = plan->lines[line].region_count, .before = NONE, .after = NONE};
}

static void append(struct comparing *comparing, const struct plan *plan, size_t line, struct lonelies *lonelies, size_t *place_of)
{
	place_of[line] = lonelies->count;
	lonelies->list[lonelies->count] = lonely_of(comparing, plan, line);
	lonelies->regions += lonelies->list[lonelies->count++].regions;
}

// In the order of the frame; those that it does not use come last.
static void list_all(struct comparing *comparing, const struct plan *plan, struct lonelies *lonelies, size_t *place_of)
{
	for (size_t line = 0; line < plan->line_count; line++)
		place_of[line] = NONE;
	for (size_t block = 0; block < plan->block_count && !comparing->failed; block++) {
		const size_t line = plan->blocks[block].line_type;
		if (!is_left(comparing, plan, line))
			continue;
		if (place_of[line] == NONE) {
			append(comparing, plan, line, lonelies, place_of);
			lonelies->list[place_of[line]].before = plan->blocks[block > 0 ? block - 1 : plan->block_count - 1].line_type;
			lonelies->list[place_of[line]].after = plan->blocks[block + 1 < plan->block_count ? block + 1 : 0].line_type;
		}
		lonelies->list[place_of[line]].lines += plan->blocks[block].repeat;
	}
	for (size_t line = 0; line < plan->line_count && !comparing->failed; line++)
		if (place_of[line] == NONE && is_left(comparing, plan, line))
			append(comparing, plan, line, lonelies, place_of);
}

static bool list_lonely(struct comparing *comparing, const struct plan *plan, struct lonelies *lonelies)
{
	size_t *place_of = arena_array(comparing->arena, plan->line_count, sizeof *place_of);
	*lonelies = (struct lonelies){arena_array(comparing->arena, plan->line_count, sizeof *lonelies->list), 0, 0};
	comparing->failed = comparing->failed || place_of == NULL || lonelies->list == NULL;
	if (!comparing->failed)
		list_all(comparing, plan, lonelies, place_of);
	return !comparing->failed;
}

// How many cells show the same where the old line is shifted by so many.
static int64_t cells_alike(const struct lonely *old, const struct lonely *now, int64_t shift)
{
	int64_t alike = 0;
	for (size_t left = 0, right = 0; left < old->regions && right < now->regions;) {
		const struct laid_region *before = &old->laid->regions[left], *after = &now->laid->regions[right];
		const int64_t old_start = before->first_cell + shift, now_start = after->first_cell;
		const int64_t old_end = old_start + before->cells, now_end = now_start + after->cells;
		const int64_t start = old_start > now_start ? old_start : now_start, end = old_end < now_end ? old_end : now_end;
		if (end > start && old->asserted[left] == now->asserted[right])
			alike += end - start;
		left += old_end <= now_end;
		right += now_end <= old_end;
	}
	return alike;
}

// From either end on, so that a region more or less spoils only one of them.
static uint32_t likeness(const struct lonely *old, const struct lonely *now)
{
	const int64_t shift = (int64_t)now->laid->cells - (int64_t)old->laid->cells, longer = shift > 0 ? now->laid->cells : old->laid->cells;
	const int64_t front = cells_alike(old, now, 0), back = shift != 0 ? cells_alike(old, now, shift) : front;
	return (uint32_t)((front > back ? front : back) * WHOLE / longer);
}

static bool same_neighbour(const struct comparing *comparing, const struct lonely *old, size_t old_neighbour, const struct lonely *now,
                           size_t now_neighbour)
{
	if (old_neighbour == old->line || now_neighbour == now->line)
		return old_neighbour == old->line && now_neighbour == now->line;
	return comparing->line_of[old_neighbour] == now_neighbour;
}

static bool same_place(const struct comparing *comparing, const struct lonely *old, const struct lonely *now)
{
	if (old->lines == 0 || now->lines == 0)
		return old->lines == now->lines;
	return old->lines == now->lines || (same_neighbour(comparing, old, old->before, now, now->before) &&
	                                    same_neighbour(comparing, old, old->after, now, now->after));
}

struct worths {
	uint32_t *list;            // [old lonely][new lonely]
	size_t columns;
};

static uint32_t worth_of_lines(const void *context, size_t old, size_t now)
{
	const struct worths *worths = context;
	return worths->list[old * worths->columns + now];
}

static void fill_worths(const struct comparing *comparing, const struct lonelies *old, const struct lonelies *now, struct worths *worths)
{
	for (size_t left = 0; left < old->count; left++)
		for (size_t right = 0; right < now->count; right++) {
			const bool place = same_place(comparing, &old->list[left], &now->list[right]);
			const uint32_t alike = likeness(&old->list[left], &now->list[right]);
			worths->list[left * worths->columns + right] = alike < (place ? LEAST : LEAST_ALONE) ? 0 : alike + (place ? WORTH_PLACE : 0);
		}
}

// Holding each against each takes a step for each region; false if these are too many. Half of what is left is for the alignments to come.
static bool take_steps(struct comparing *comparing, const struct lonelies *old, const struct lonelies *now)
{
	const size_t most = comparing->work_left / 2;
	if (old->regions > most / now->count || now->regions > most / old->count)
		return false;
	const size_t steps = old->regions * now->count + now->regions * old->count;
	if (steps > most)
		return false;
	comparing->work_left -= steps;
	return true;
}

static void align_lonely(struct comparing *comparing, const struct lonelies *old, const struct lonelies *now, struct worths *worths)
{
	struct alignment alignment = {.old_count = old->count, .now_count = now->count};
	fill_worths(comparing, old, now, worths);
	if (!alignment_begin(comparing, &alignment))
		return;
	(void)align_lists(comparing, worth_of_lines, WHOLE + WORTH_PLACE, worths, &alignment); // what is too much stays apart
	for (size_t index = 0; index < old->count; index++)
		if (alignment.now_of[index] != NONE)
			pair_lines(comparing, old->list[index].line, now->list[alignment.now_of[index]].line);
}

void match_alike(struct comparing *comparing)
{
	struct lonelies old, now;
	if (!list_lonely(comparing, comparing->old, &old) || !list_lonely(comparing, comparing->now, &now))
		return;
	if (old.count == 0 || now.count == 0 || !take_steps(comparing, &old, &now))
		return;
	struct worths worths = {calloc(old.count * now.count, sizeof *worths.list), now.count};
	comparing->failed = comparing->failed || worths.list == NULL;
	if (worths.list != NULL)
		align_lonely(comparing, &old, &now, &worths);
	free(worths.list);
}
