// The frame's blocks, in order.
#include <inttypes.h>

#include "base/arena.h"
#include "compare/parts.h"
#include "plan/expression.h"

// Blocks of one line type that follow each other are one, unless what they hold tells them apart.
struct run {
	size_t type;           // the new plan's line type; NONE: one that is gone
	size_t own_type;       // in the plan that has the block
	size_t block;          // the first of them, from 0
	int64_t repeat;
};

struct runs {
	struct run *list;
	size_t count;
};

struct frames {
	struct comparing *comparing;
	struct runs old, now;
	struct alignment runs;
};

// Whether lines of a type hold something that counts the lines of their block.
static bool counts_rows(const struct line_type *line)
{
	for (size_t region = 0; region < line->region_count; region++)
		for (size_t hold = 0; hold < line->regions[region].hold_count; hold++)
			if (expression_uses(line->regions[region].holds[hold].expression, VARIABLE_ROW))
				return true;
	return false;
}

// Where every cell holds what it held, it does not matter how blocks are cut.
static bool joins(const struct comparing *comparing, const struct plan *plan, const struct run *last, size_t own_type)
{
	return last != NULL && last->own_type == own_type && (comparing->same_holds || !counts_rows(&plan->lines[own_type]));
}

static struct runs list_runs(struct comparing *comparing, const struct plan *plan)
{
	struct runs runs = {arena_array(comparing->arena, plan->block_count, sizeof(struct run)), 0};
	comparing->failed = comparing->failed || runs.list == NULL;
	for (size_t index = 0; runs.list != NULL && index < plan->block_count; index++) {
		const size_t own = plan->blocks[index].line_type;
		struct run *last = runs.count > 0 ? &runs.list[runs.count - 1] : NULL;
		if (joins(comparing, plan, last, own))
			last->repeat += plan->blocks[index].repeat;
		else
			runs.list[runs.count++] = (struct run){plan == comparing->old ? comparing->line_of[own] : own, own, index,
			                                       plan->blocks[index].repeat};
	}
	return runs;
}

static bool same_type(const struct run *old, const struct run *now)
{
	return old->type != NONE && old->type == now->type;
}

// Of two alignments that match as many blocks, the one that matches more repeats too.
static uint32_t worth_of_blocks(const void *context, size_t old, size_t now)
{
	const struct frames *frames = context;
	const struct run *left = &frames->old.list[old], *right = &frames->now.list[now];
	return !same_type(left, right) ? 0 : left->repeat == right->repeat ? 3 : 2;
}

// Blocks that are gone have a number in the old frame alone; "block" without a word is of the new one.
static const char *block_words(struct comparing *comparing, const struct plan *plan, const struct run *run)
{
	return keep_words(comparing, "%sblock %zu, \"%s\"", plan == comparing->old ? "old " : "", run->block + 1, plan->lines[run->own_type].name);
}

static const char *matched_words(struct comparing *comparing, const struct run *old, const struct run *now)
{
	return old->block == now->block ? block_words(comparing, comparing->now, now)
	                                : keep_words(comparing, "block %zu (old block %zu), \"%s\"", now->block + 1, old->block + 1,
	                                             comparing->now->lines[now->own_type].name);
}

static const char *lines_words(struct comparing *comparing, int64_t repeat)
{
	return keep_words(comparing, "%" PRId64 " line%s", repeat, repeat == 1 ? "" : "s");
}

static void add_block(struct comparing *comparing, const char *kind, const char *what, const char *old, const char *now)
{
	add_change(comparing, (struct change){.section = CHANGE_FRAME, .kind = kind, .what = what, .old = old, .now = now});
}

// A block that is gone at one place and new at another was moved; the new one's number, or NONE. Looks at a limited number.
static size_t find_moved(const struct frames *frames, size_t old)
{
	const struct run *gone = &frames->old.list[old];
	for (size_t now = 0, looks = 0; now < frames->now.count && looks < 1000; now++) {
		const struct run *run = &frames->now.list[now];
		if (frames->runs.old_of[now] != NONE)
			continue;
		if (same_type(gone, run) && gone->repeat == run->repeat)
			return now;
		looks++;
	}
	return NONE;
}

static void tell_gone(struct frames *frames, size_t old)
{
	struct comparing *comparing = frames->comparing;
	const struct run *run = &frames->old.list[old];
	const size_t now = find_moved(frames, old);
	if (now == NONE) {
		add_block(comparing, "block-removed", block_words(comparing, comparing->old, run), lines_words(comparing, run->repeat), NULL);
		return;
	}
	frames->runs.now_of[old] = now;
	frames->runs.old_of[now] = old;
	add_block(comparing, "block-moved", keep_words(comparing, "%s of \"%s\"", lines_words(comparing, run->repeat),
	                                               comparing->now->lines[run->type].name),
	          keep_words(comparing, "block %zu", run->block + 1), keep_words(comparing, "block %zu", frames->now.list[now].block + 1));
}

static void tell_blocks(struct frames *frames)
{
	struct comparing *comparing = frames->comparing;
	for (size_t old = 0; old < frames->old.count && !comparing->failed; old++) {
		const struct run *run = &frames->old.list[old];
		if (frames->runs.now_of[old] == NONE) {
			tell_gone(frames, old);
			continue;
		}
		const struct run *match = &frames->now.list[frames->runs.now_of[old]];
		if (run->repeat != match->repeat)
			add_block(comparing, "repeat", matched_words(comparing, run, match), lines_words(comparing, run->repeat),
			          lines_words(comparing, match->repeat));
	}
	for (size_t now = 0; now < frames->now.count && !comparing->failed; now++)
		if (frames->runs.old_of[now] == NONE)
			add_block(comparing, "block-added", block_words(comparing, comparing->now, &frames->now.list[now]), NULL,
			          lines_words(comparing, frames->now.list[now].repeat));
}

void compare_blocks(struct comparing *comparing)
{
	struct frames frames = {.comparing = comparing, .old = list_runs(comparing, comparing->old), .now = list_runs(comparing, comparing->now)};
	frames.runs.old_count = frames.old.count;
	frames.runs.now_count = frames.now.count;
	if (comparing->failed || !alignment_begin(comparing, &frames.runs))
		return;
	if (align_lists(comparing, worth_of_blocks, 3, &frames, &frames.runs))
		tell_blocks(&frames);
	else if (!comparing->failed)
		add_block(comparing, "blocks", "blocks", keep_words(comparing, "%zu", frames.old.count),
		          keep_words(comparing, "%zu, too many to compare one by one", frames.now.count));
}
