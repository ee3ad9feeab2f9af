// Line types: which of the old plan is which of the new one.
#include <inttypes.h>
#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "compare/parts.h"
#include "plan/name_tree.h"

// A line type that no name has matched, by what it shows.
struct left_over {
	uint64_t hash;
	size_t line;
};

bool line_shows_same(const struct comparing *comparing, size_t old, size_t now)
{
	const struct laid_line *left = &comparing->old_timeline->types[old], *right = &comparing->now_timeline->types[now];
	uint64_t seen = 0, mapped = 0;
	bool same = left->cells == right->cells;
	for (uint32_t cell = 0; same && cell < left->cells; cell++) {
		if (cell == 0 || left->asserted[cell] != seen)
			mapped = map_signals(comparing, left->asserted[cell]);
		seen = left->asserted[cell];
		same = mapped == right->asserted[cell];
	}
	return same;
}

// A number that line types share if they show the same. `maps`: the line type is the old plan's.
static uint64_t hash_line(const struct comparing *comparing, const struct laid_line *line, bool maps)
{
	uint64_t hash = line->cells, seen = 0, shown = 0;
	for (uint32_t cell = 0; cell < line->cells; cell++) {
		if (cell == 0 || line->asserted[cell] != seen)
			shown = maps ? map_signals(comparing, line->asserted[cell]) : line->asserted[cell];
		seen = line->asserted[cell];
		hash = (hash ^ shown) * 0x9E3779B97F4A7C15u;
		hash ^= hash >> 29;
	}
	return hash;
}

static int by_hash(const void *left, const void *right)
{
	const struct left_over *first = left, *second = right;
	if (first->hash != second->hash)
		return first->hash < second->hash ? -1 : 1;
	return first->line < second->line ? -1 : first->line > second->line;
}

// The line types that `open` picks, by what they show.
static struct left_over *list_left(struct comparing *comparing, bool is_old, const bool *open, size_t *count)
{
	const struct plan *plan = is_old ? comparing->old : comparing->now;
	const struct laid_line *types = is_old ? comparing->old_timeline->types : comparing->now_timeline->types;
	struct left_over *list = arena_array(comparing->arena, plan->line_count, sizeof *list);
	*count = 0;
	comparing->failed = comparing->failed || list == NULL;
	for (size_t line = 0; list != NULL && line < plan->line_count; line++)
		if (open[line])
			list[(*count)++] = (struct left_over){hash_line(comparing, &types[line], is_old), line};
	if (list != NULL)
		qsort(list, *count, sizeof *list, by_hash);
	return list;
}

void pair_lines(struct comparing *comparing, size_t old, size_t now)
{
	comparing->line_of[old] = now;
	comparing->old_line_of[now] = old;
}

static size_t *no_matches(struct comparing *comparing, size_t count)
{
	size_t *matches = arena_array(comparing->arena, count, sizeof *matches);
	comparing->failed = comparing->failed || matches == NULL;
	for (size_t index = 0; matches != NULL && index < count; index++)
		matches[index] = NONE;
	return matches;
}

// Line types that no name has matched with what shows the same.
struct open_lines {
	bool *old, *now;
};

static bool list_open(struct comparing *comparing, struct open_lines *open)
{
	open->old = arena_array(comparing->arena, comparing->old->line_count, sizeof *open->old);
	open->now = arena_array(comparing->arena, comparing->now->line_count, sizeof *open->now);
	comparing->failed = comparing->failed || open->old == NULL || open->now == NULL;
	for (size_t now = 0; !comparing->failed && now < comparing->now->line_count; now++)
		open->now[now] = comparing->old_line_of[now] == NONE;
	for (size_t old = 0; !comparing->failed && old < comparing->old->line_count; old++) {
		const size_t now = comparing->line_of[old];
		open->old[old] = now == NONE || !line_shows_same(comparing, old, now);
		if (now != NONE)
			open->now[now] = open->old[old];
	}
	return !comparing->failed;
}

// For each old line type that is open, a new one of its own that shows the same, or NONE. NULL when memory is out.
static const size_t *find_shown(struct comparing *comparing)
{
	struct open_lines open;
	size_t old_count = 0, now_count = 0, *shown_by = no_matches(comparing, comparing->old->line_count);
	if (comparing->failed || !list_open(comparing, &open))
		return NULL;
	const struct left_over *old = list_left(comparing, true, open.old, &old_count), *now = list_left(comparing, false, open.now, &now_count);
	for (size_t left = 0, right = 0; !comparing->failed && left < old_count && right < now_count;) {
		if (old[left].hash == now[right].hash && line_shows_same(comparing, old[left].line, now[right].line))
			shown_by[old[left++].line] = now[right++].line;
		else if (old[left].hash < now[right].hash)
			left++;
		else
			right++;
	}
	return comparing->failed ? NULL : shown_by;
}

// What no name has matched is the same line type if it shows the same.
static void match_shown(struct comparing *comparing, const size_t *shown_by)
{
	for (size_t old = 0; old < comparing->old->line_count; old++)
		if (comparing->line_of[old] == NONE && shown_by[old] != NONE && comparing->old_line_of[shown_by[old]] == NONE)
			pair_lines(comparing, old, shown_by[old]);
}

static void match_named(struct comparing *comparing)
{
	struct name_tree names = {NULL};
	for (size_t now = 0; now < comparing->now->line_count && !comparing->failed; now++) {
		void **slot = name_tree_slot(comparing->arena, &names, comparing->now->lines[now].name);
		comparing->failed = slot == NULL;
		if (slot != NULL)
			*slot = &comparing->old_line_of[now];
	}
	for (size_t old = 0; old < comparing->old->line_count && !comparing->failed; old++) {
		void **slot = name_tree_slot(comparing->arena, &names, comparing->old->lines[old].name);
		comparing->failed = slot == NULL;
		if (slot != NULL && *slot != NULL)
			pair_lines(comparing, old, (size_t)((size_t *)*slot - comparing->old_line_of));
	}
}

static bool *used_lines(struct comparing *comparing, const struct plan *plan)
{
	bool *used = arena_array(comparing->arena, plan->line_count, sizeof *used);
	comparing->failed = comparing->failed || used == NULL;
	for (size_t block = 0; used != NULL && block < plan->block_count; block++)
		used[plan->blocks[block].line_type] = true;
	return used;
}

// By name; what is left over is the same if it shows the same, or else is like enough.
void match_lines(struct comparing *comparing)
{
	const size_t *shown_by = NULL;
	comparing->line_of = no_matches(comparing, comparing->old->line_count);
	comparing->old_line_of = no_matches(comparing, comparing->now->line_count);
	comparing->old_used = used_lines(comparing, comparing->old);
	comparing->now_used = used_lines(comparing, comparing->now);
	if (!comparing->failed)
		match_named(comparing);
	if (!comparing->failed)
		shown_by = find_shown(comparing);
	if (shown_by == NULL)
		return;
	match_renamed(comparing, shown_by);
	match_shown(comparing, shown_by);
	match_alike(comparing);
}

// A line type of one plan alone. What the frame does not use changes nothing at the bench.
static void add_alone(struct comparing *comparing, const char *kind, const struct plan *plan, const struct laid_line *types, size_t line,
                      bool used)
{
	const bool removed = plan == comparing->old;
	const char *facts = keep_words(comparing, "%" PRIu32 " cells, %" PRId64 " ticks%s", types[line].cells, types[line].ticks,
	                               used ? "" : ", not in the frame");
	add_change(comparing, (struct change){.section = used ? CHANGE_LINES : CHANGE_WORDS, .kind = kind,
	                                      .what = keep_words(comparing, "line type \"%s\"", plan->lines[line].name),
	                                      .old = removed ? facts : NULL, .now = removed ? NULL : facts});
}

void compare_lines(struct comparing *comparing)
{
	for (size_t old = 0; old < comparing->old->line_count && !comparing->failed; old++) {
		if (comparing->line_of[old] != NONE)
			compare_regions(comparing, old, comparing->line_of[old]);
		else
			add_alone(comparing, "line-removed", comparing->old, comparing->old_timeline->types, old, comparing->old_used[old]);
	}
	for (size_t now = 0; now < comparing->now->line_count && !comparing->failed; now++)
		if (comparing->old_line_of[now] == NONE)
			add_alone(comparing, "line-added", comparing->now, comparing->now_timeline->types, now, comparing->now_used[now]);
}
