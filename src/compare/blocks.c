// The frame's blocks, in order.
#include <inttypes.h>

#include "base/arena.h"
#include "compare/parts.h"

#define MOST_ALIGNED 4000000u // products of block counts; beyond, what differs is told as a whole

// Blocks with the new plan's line types; neighbours of one type are one block.
struct run {
	size_t type;           // NONE: a type that is gone
	size_t old_type;       // of the old plan's blocks
	int64_t repeat;
	size_t match;          // in the other list, or NONE
};

struct runs {
	struct run *list;
	size_t count;
};

static struct runs list_runs(struct comparing *comparing, const struct plan *plan, bool is_old)
{
	struct runs runs = {arena_array(comparing->arena, plan->block_count, sizeof(struct run)), 0};
	comparing->failed = comparing->failed || runs.list == NULL;
	for (size_t index = 0; !comparing->failed && index < plan->block_count; index++) {
		const size_t own = plan->blocks[index].line_type, type = is_old ? comparing->line_of[own] : own;
		struct run *last = runs.count > 0 ? &runs.list[runs.count - 1] : NULL;
		if (last != NULL && last->type == type && (type != NONE || last->old_type == own))
			last->repeat += plan->blocks[index].repeat;
		else
			runs.list[runs.count++] = (struct run){type, own, plan->blocks[index].repeat, NONE};
	}
	return runs;
}

static bool same_type(const struct run *old, const struct run *now)
{
	return old->type != NONE && old->type == now->type;
}

// Of two alignments that match as many types, the one that matches more repeats too.
static uint32_t worth(const struct run *old, const struct run *now)
{
	return old->repeat == now->repeat ? 3 : 2;
}

static void match_runs(struct run *old, struct run *now, size_t old_index, size_t now_index)
{
	old->match = now_index;
	now->match = old_index;
}

// Weighted alignment by the classic table, between what both ends have in common.
static bool align_middle(struct comparing *comparing, struct runs *old, struct runs *now, size_t start, size_t old_end, size_t now_end)
{
	const size_t rows = old_end - start, columns = now_end - start;
	if (rows == 0 || columns == 0)
		return true;
	if (rows > MOST_ALIGNED / columns)
		return false;
	uint32_t *best = arena_array(comparing->arena, (rows + 1) * (columns + 1), sizeof *best);
	comparing->failed = comparing->failed || best == NULL;
	if (best == NULL)
		return true;
#define BEST(row, column) best[(row) * (columns + 1) + (column)]
	for (size_t row = rows; row-- > 0;)
		for (size_t column = columns; column-- > 0;) {
			uint32_t value = BEST(row + 1, column) > BEST(row, column + 1) ? BEST(row + 1, column) : BEST(row, column + 1);
			const struct run *left = &old->list[start + row], *right = &now->list[start + column];
			if (same_type(left, right) && BEST(row + 1, column + 1) + worth(left, right) > value)
				value = BEST(row + 1, column + 1) + worth(left, right);
			BEST(row, column) = value;
		}
	for (size_t row = 0, column = 0; row < rows && column < columns;) {
		struct run *left = &old->list[start + row], *right = &now->list[start + column];
		if (same_type(left, right) && BEST(row, column) == BEST(row + 1, column + 1) + worth(left, right)) {
			match_runs(left, right, start + row, start + column);
			row++;
			column++;
		} else if (BEST(row, column) == BEST(row + 1, column)) {
			row++;
		} else {
			column++;
		}
	}
#undef BEST
	return true;
}

// False if there are too many to be matched.
static bool align(struct comparing *comparing, struct runs *old, struct runs *now)
{
	size_t start = 0, old_end = old->count, now_end = now->count;
	while (start < old_end && start < now_end && same_type(&old->list[start], &now->list[start]) &&
	       old->list[start].repeat == now->list[start].repeat) {
		match_runs(&old->list[start], &now->list[start], start, start);
		start++;
	}
	while (old_end > start && now_end > start && same_type(&old->list[old_end - 1], &now->list[now_end - 1]) &&
	       old->list[old_end - 1].repeat == now->list[now_end - 1].repeat) {
		old_end--;
		now_end--;
		match_runs(&old->list[old_end], &now->list[now_end], old_end, now_end);
	}
	return align_middle(comparing, old, now, start, old_end, now_end);
}

static const char *block_words(struct comparing *comparing, size_t number, const char *line)
{
	const char *words = arena_format(comparing->arena, "block %zu, \"%s\"", number, line);
	comparing->failed = comparing->failed || words == NULL;
	return words;
}

static const char *repeat_words(struct comparing *comparing, int64_t repeat)
{
	const char *words = arena_format(comparing->arena, "%" PRId64 " line%s", repeat, repeat == 1 ? "" : "s");
	comparing->failed = comparing->failed || words == NULL;
	return words;
}

static void add_block(struct comparing *comparing, const char *kind, const char *what, const char *old, const char *now)
{
	if (!comparing->failed)
		add_change(comparing, (struct change){.section = CHANGE_FRAME, .kind = kind, .what = what, .old = old, .now = now});
}

// A block that is gone at one place and new at another was moved. The index of the new one, or NONE.
static size_t find_moved(const struct runs *now, const struct run *gone)
{
	for (size_t index = 0; index < now->count; index++)
		if (now->list[index].match == NONE && same_type(gone, &now->list[index]) && gone->repeat == now->list[index].repeat)
			return index;
	return NONE;
}

static void tell_gone(struct comparing *comparing, struct runs *old, struct runs *now, size_t index)
{
	struct run *run = &old->list[index];
	const char *what = block_words(comparing, index + 1, comparing->old->lines[run->old_type].name);
	const size_t moved = find_moved(now, run);
	if (moved == NONE) {
		add_block(comparing, "block-removed", what, repeat_words(comparing, run->repeat), NULL);
		return;
	}
	match_runs(run, &now->list[moved], index, moved);
	const char *place = arena_format(comparing->arena, "block %zu", moved + 1);
	comparing->failed = comparing->failed || place == NULL;
	add_block(comparing, "block-moved", what, "there", place);
}

static void tell_blocks(struct comparing *comparing, struct runs *old, struct runs *now)
{
	for (size_t index = 0; index < old->count; index++) {
		const struct run *run = &old->list[index];
		if (run->match == NONE)
			tell_gone(comparing, old, now, index);
		else if (run->repeat != now->list[run->match].repeat)
			add_block(comparing, "repeat", block_words(comparing, run->match + 1, comparing->now->lines[run->type].name),
			          repeat_words(comparing, run->repeat), repeat_words(comparing, now->list[run->match].repeat));
	}
	for (size_t index = 0; index < now->count; index++)
		if (now->list[index].match == NONE)
			add_block(comparing, "block-added", block_words(comparing, index + 1, comparing->now->lines[now->list[index].type].name), NULL,
			          repeat_words(comparing, now->list[index].repeat));
}

void compare_blocks(struct comparing *comparing)
{
	struct runs old = list_runs(comparing, comparing->old, true), now = list_runs(comparing, comparing->now, false);
	if (comparing->failed)
		return;
	if (align(comparing, &old, &now))
		tell_blocks(comparing, &old, &now);
	else
		add_block(comparing, "blocks", "the order of the blocks", arena_format(comparing->arena, "%zu blocks", old.count),
		          arena_format(comparing->arena, "%zu blocks", now.count));
}
