// Line types, region by region: regions are matched by name and order, and lengths are compared so that one moved edge reads as one
// change and not as two regions that changed.
#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "compare/parts.h"

#define MOST_ALIGNED 4000000u // products of region counts; beyond, regions are matched from both ends alone

// A line type in both plans.
struct line_pair {
	struct comparing *comparing;
	const struct line_type *old_line, *now_line;
	const struct laid_line *old_laid, *now_laid;
	size_t *now_of;        // [old regions]: the new line's region that an old one is, or NONE
	size_t *old_of;        // [new regions]
	const char *name;      // quoted
};

static size_t find_line(const struct plan *plan, const char *name)
{
	for (size_t index = 0; index < plan->line_count; index++)
		if (strcmp(plan->lines[index].name, name) == 0)
			return index;
	return NONE;
}

// Whether two line types show the same, cell by cell.
static bool shows_same(const struct comparing *comparing, size_t old, size_t now)
{
	const struct laid_line *left = &comparing->old_timeline->types[old], *right = &comparing->now_timeline->types[now];
	bool same = left->cells == right->cells;
	for (uint32_t cell = 0; same && cell < left->cells; cell++)
		same = map_signals(comparing, left->asserted[cell]) == right->asserted[cell];
	return same;
}

static bool is_taken(const struct comparing *comparing, size_t now)
{
	for (size_t old = 0; old < comparing->old->line_count; old++)
		if (comparing->line_of[old] == now)
			return true;
	return false;
}

// By name; what is left over is the same if it shows the same.
void match_lines(struct comparing *comparing)
{
	const struct plan *old = comparing->old, *now = comparing->now;
	comparing->line_of = arena_array(comparing->arena, old->line_count, sizeof *comparing->line_of);
	comparing->failed = comparing->failed || comparing->line_of == NULL;
	if (comparing->failed)
		return;
	for (size_t index = 0; index < old->line_count; index++)
		comparing->line_of[index] = find_line(now, old->lines[index].name);
	for (size_t index = 0; index < old->line_count; index++)
		for (size_t other = 0; comparing->line_of[index] == NONE && other < now->line_count; other++)
			if (find_line(old, now->lines[other].name) == NONE && !is_taken(comparing, other) && shows_same(comparing, index, other))
				comparing->line_of[index] = other;
}

// The longest common subsequence of region names, by the classic table.
static void align_middle(struct line_pair *pair, size_t start, size_t old_end, size_t now_end)
{
	const size_t rows = old_end - start, columns = now_end - start;
	if (rows == 0 || columns == 0 || rows > MOST_ALIGNED / columns)
		return;
	uint32_t *longest = arena_array(pair->comparing->arena, (rows + 1) * (columns + 1), sizeof *longest);
	pair->comparing->failed = pair->comparing->failed || longest == NULL;
	if (longest == NULL)
		return;
	for (size_t row = rows; row-- > 0;)
		for (size_t column = columns; column-- > 0;) {
			const uint32_t down = longest[(row + 1) * (columns + 1) + column], right = longest[row * (columns + 1) + column + 1];
			const bool same = strcmp(pair->old_line->regions[start + row].name, pair->now_line->regions[start + column].name) == 0;
			longest[row * (columns + 1) + column] =
				same ? longest[(row + 1) * (columns + 1) + column + 1] + 1 : down > right ? down : right;
		}
	for (size_t row = 0, column = 0; row < rows && column < columns;) {
		if (strcmp(pair->old_line->regions[start + row].name, pair->now_line->regions[start + column].name) == 0) {
			pair->now_of[start + row] = start + column;
			pair->old_of[start + column] = start + row;
			row++;
			column++;
		} else if (longest[(row + 1) * (columns + 1) + column] >= longest[row * (columns + 1) + column + 1]) {
			row++;
		} else {
			column++;
		}
	}
}

static void pair_regions(struct line_pair *pair, size_t old, size_t now)
{
	pair->now_of[old] = now;
	pair->old_of[now] = old;
}

// What stands alone between the same neighbours has another name now.
static void align_renamed(struct line_pair *pair)
{
	const size_t old_count = pair->old_line->region_count, now_count = pair->now_line->region_count;
	for (size_t old = 0, now = 0; old < old_count && now < now_count;) {
		if (pair->now_of[old] != NONE) {
			now = pair->now_of[old++] + 1;
			continue;
		}
		if (pair->old_of[now] != NONE) {
			old++;
			continue;
		}
		const bool alone = (old + 1 == old_count || pair->now_of[old + 1] != NONE) && (now + 1 == now_count || pair->old_of[now + 1] != NONE);
		const bool asserts_same = map_signals(pair->comparing, pair->old_line->regions[old].assert_mask) ==
		                          pair->now_line->regions[now].assert_mask;
		if (!alone && !asserts_same) {
			old++;
			continue;
		}
		pair_regions(pair, old++, now++);
	}
}

static void align_regions(struct line_pair *pair)
{
	const size_t old_count = pair->old_line->region_count, now_count = pair->now_line->region_count;
	size_t start = 0, old_end = old_count, now_end = now_count;
	for (size_t index = 0; index < old_count; index++)
		pair->now_of[index] = NONE;
	for (size_t index = 0; index < now_count; index++)
		pair->old_of[index] = NONE;
	while (start < old_end && start < now_end && strcmp(pair->old_line->regions[start].name, pair->now_line->regions[start].name) == 0) {
		pair_regions(pair, start, start);
		start++;
	}
	while (old_end > start && now_end > start &&
	       strcmp(pair->old_line->regions[old_end - 1].name, pair->now_line->regions[now_end - 1].name) == 0)
		pair_regions(pair, --old_end, --now_end);
	align_middle(pair, start, old_end, now_end);
	align_renamed(pair);
}

static const char *quoted(struct comparing *comparing, const char *name)
{
	const char *words = arena_format(comparing->arena, "\"%s\"", name);
	comparing->failed = comparing->failed || words == NULL;
	return words != NULL ? words : "";
}

static void add_of_line(struct line_pair *pair, struct change change)
{
	change.section = change.section == CHANGE_VERDICTS ? CHANGE_LINES : change.section;
	change.lines = pair->name;
	pair->comparing->failed = pair->comparing->failed || change.what == NULL;
	if (!pair->comparing->failed)
		add_change(pair->comparing, change);
}

// Lengths.

static int64_t longer_by(const struct line_pair *pair, size_t old)
{
	return (int64_t)pair->now_laid->regions[pair->now_of[old]].cells - (int64_t)pair->old_laid->regions[old].cells;
}

// Whether a region and the one before it are next to each other in both lines.
static bool follows(const struct line_pair *pair, size_t old)
{
	return pair->now_of[old] != NONE && pair->now_of[old - 1] != NONE && pair->now_of[old] == pair->now_of[old - 1] + 1;
}

static const char *now_name(const struct line_pair *pair, size_t old)
{
	return pair->now_line->regions[pair->now_of[old]].name;
}

// The edges from the end of one region to the start of another were moved alike.
static void add_moved(struct line_pair *pair, size_t grown, size_t shrunk, int64_t cells)
{
	struct comparing *comparing = pair->comparing;
	struct change change = {.shifted = true, .cells = cells, .ticks = cells * comparing->now->clock.cell_ticks};
	if (shrunk == grown + 1) {
		change.kind = "edge-moved";
		change.what = arena_format(comparing->arena, "edge between \"%s\" and \"%s\"", now_name(pair, grown), now_name(pair, shrunk));
	} else if (shrunk == grown + 2) {
		change.kind = "region-moved";
		change.what = arena_format(comparing->arena, "\"%s\", between \"%s\" and \"%s\"", now_name(pair, grown + 1), now_name(pair, grown),
		                           now_name(pair, shrunk));
	} else {
		change.kind = "regions-moved";
		change.what = arena_format(comparing->arena, "\"%s\" to \"%s\", between \"%s\" and \"%s\"", now_name(pair, grown + 1),
		                           now_name(pair, shrunk - 1), now_name(pair, grown), now_name(pair, shrunk));
	}
	add_of_line(pair, change);
}

static void add_longer(struct line_pair *pair, size_t old, int64_t cells)
{
	add_of_line(pair, (struct change){.kind = "length", .what = quoted(pair->comparing, now_name(pair, old)), .shifted = true,
	                                  .cells = cells, .ticks = cells * pair->comparing->now->clock.cell_ticks});
}

// The next region after one, next to next, whose length changed; NONE if there is a region between that came or went, or none.
static size_t next_changed(const struct line_pair *pair, size_t old)
{
	for (size_t next = old + 1; next < pair->old_line->region_count && follows(pair, next); next++)
		if (longer_by(pair, next) != 0)
			return next;
	return NONE;
}

static void compare_lengths(struct line_pair *pair)
{
	for (size_t old = 0; old < pair->old_line->region_count; old++) {
		const int64_t cells = pair->now_of[old] != NONE ? longer_by(pair, old) : 0;
		if (cells == 0)
			continue;
		const size_t other = next_changed(pair, old);
		if (other != NONE && longer_by(pair, other) == -cells) {
			add_moved(pair, old, other, cells);
			old = other;
		} else {
			add_longer(pair, old, cells);
		}
	}
	const int64_t cells = (int64_t)pair->now_laid->cells - (int64_t)pair->old_laid->cells;
	if (cells != 0)
		add_of_line(pair, (struct change){.kind = "line-length", .what = "the line", .shifted = true, .cells = cells,
		                                  .ticks = pair->now_laid->ticks - pair->old_laid->ticks});
}

// Regions that came or went.

static void put_asserted(struct text *out, const struct plan *plan, uint64_t mask)
{
	bool first = true;
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		if ((mask >> signal & 1) == 0)
			continue;
		text_printf(out, "%s%s", first ? "" : " ", plan->signals[signal].name);
		first = false;
	}
	if (first)
		text_put(out, "nothing");
}

static const char *describe(struct comparing *comparing, const struct plan *plan, const struct region *region,
                            const struct laid_region *laid)
{
	struct text words = {0};
	text_printf(&words, "%" PRIu32 " cell%s from cell %" PRIu32 ", asserts ", laid->cells, laid->cells == 1 ? "" : "s", laid->first_cell);
	put_asserted(&words, plan, region->assert_mask);
	return keep_text(comparing, &words);
}

static void compare_presence(struct line_pair *pair)
{
	struct comparing *comparing = pair->comparing;
	for (size_t old = 0; old < pair->old_line->region_count; old++) {
		const struct region *region = &pair->old_line->regions[old];
		if (pair->now_of[old] == NONE)
			add_of_line(pair, (struct change){.kind = "region-removed", .what = quoted(comparing, region->name),
			                                  .old = describe(comparing, comparing->old, region, &pair->old_laid->regions[old])});
	}
	for (size_t now = 0; now < pair->now_line->region_count; now++) {
		const struct region *region = &pair->now_line->regions[now];
		if (pair->old_of[now] == NONE)
			add_of_line(pair, (struct change){.kind = "region-added", .what = quoted(comparing, region->name),
			                                  .now = describe(comparing, comparing->now, region, &pair->now_laid->regions[now])});
	}
}

// What regions assert, stretch and hold.

static void compare_asserted(struct line_pair *pair, const struct region *old, const struct region *now)
{
	struct comparing *comparing = pair->comparing;
	// That a signal is gone is told once, as such; where a new one is asserted is told of each region.
	if (map_signals(comparing, old->assert_mask) == now->assert_mask)
		return;
	struct text left = {0}, right = {0};
	put_asserted(&left, comparing->old, old->assert_mask);
	put_asserted(&right, comparing->now, now->assert_mask);
	add_of_line(pair, (struct change){.kind = "asserts", .what = arena_format(comparing->arena, "\"%s\" asserts", now->name),
	                                  .old = keep_text(comparing, &left), .now = keep_text(comparing, &right)});
}

static void compare_stretched(struct line_pair *pair, size_t old)
{
	struct comparing *comparing = pair->comparing;
	const uint32_t before = pair->old_laid->regions[old].stretched, after = pair->now_laid->regions[pair->now_of[old]].stretched;
	if (before == after)
		return;
	add_of_line(pair, (struct change){.kind = "stretched", .what = arena_format(comparing->arena, "stretched cells of \"%s\"", now_name(pair, old)),
	                                  .old = arena_format(comparing->arena, "%" PRIu32, before),
	                                  .now = arena_format(comparing->arena, "%" PRIu32, after)});
}

static void put_squeezed(struct text *out, const char *words)
{
	for (; *words != '\0'; words++)
		if (*words != ' ')
			text_put_bytes(out, words, 1);
}

static void put_holds(struct text *out, const struct plan *plan, const struct region *region)
{
	for (size_t field = 0; field < plan->machine.field_count; field++)
		for (size_t index = 0; index < region->hold_count; index++) {
			if (region->holds[index].field != field)
				continue;
			text_printf(out, "%s%s: ", out->length > 0 ? ", " : "", plan->machine.fields[field].name);
			put_squeezed(out, region->holds[index].text);
		}
}

static void compare_holds(struct line_pair *pair, const struct region *old, const struct region *now)
{
	struct comparing *comparing = pair->comparing;
	struct text left = {0}, right = {0};
	put_holds(&left, comparing->old, old);
	put_holds(&right, comparing->now, now);
	const char *before = keep_text(comparing, &left), *after = keep_text(comparing, &right);
	if (before == NULL || after == NULL || comparing->same_holds || strcmp(before, after) == 0)
		return;
	add_of_line(pair, (struct change){.kind = "hold", .what = arena_format(comparing->arena, "\"%s\" holds", now->name),
	                                  .old = before[0] != '\0' ? before : "nothing", .now = after[0] != '\0' ? after : "nothing"});
}

static void compare_pair(struct line_pair *pair)
{
	struct comparing *comparing = pair->comparing;
	align_regions(pair);
	compare_presence(pair);
	compare_lengths(pair);
	for (size_t old = 0; old < pair->old_line->region_count && !comparing->failed; old++) {
		if (pair->now_of[old] == NONE)
			continue;
		const struct region *before = &pair->old_line->regions[old], *after = &pair->now_line->regions[pair->now_of[old]];
		if (strcmp(before->name, after->name) != 0)
			add_of_line(pair, (struct change){.section = CHANGE_WORDS, .kind = "region-renamed", .what = "a region's name",
			                                  .old = quoted(comparing, before->name), .now = quoted(comparing, after->name)});
		compare_asserted(pair, before, after);
		compare_stretched(pair, old);
		compare_holds(pair, before, after);
	}
}

// Whether a line type that shows the same and holds the same is only described by other regions.
static bool says_same(const struct comparing *comparing, size_t old, size_t now)
{
	return comparing->same_holds && shows_same(comparing, old, now) &&
	       comparing->old->lines[old].region_count != comparing->now->lines[now].region_count;
}

static void compare_line(struct comparing *comparing, size_t old, size_t now)
{
	struct line_pair pair = {.comparing = comparing, .old_line = &comparing->old->lines[old], .now_line = &comparing->now->lines[now],
	                         .old_laid = &comparing->old_timeline->types[old], .now_laid = &comparing->now_timeline->types[now]};
	pair.now_of = arena_array(comparing->arena, pair.old_line->region_count, sizeof *pair.now_of);
	pair.old_of = arena_array(comparing->arena, pair.now_line->region_count, sizeof *pair.old_of);
	pair.name = quoted(comparing, pair.now_line->name);
	comparing->failed = comparing->failed || pair.now_of == NULL || pair.old_of == NULL;
	if (comparing->failed)
		return;
	if (strcmp(pair.old_line->name, pair.now_line->name) != 0)
		add_change(comparing, (struct change){.section = CHANGE_WORDS, .kind = "line-renamed", .what = "a line type's name",
		                                      .old = quoted(comparing, pair.old_line->name), .now = pair.name});
	if (says_same(comparing, old, now))
		add_change(comparing, (struct change){.section = CHANGE_WORDS, .kind = "regions-divided", .lines = pair.name,
		                                      .what = "the same cells are divided into other regions"});
	else
		compare_pair(&pair);
}

static const char *line_facts(struct comparing *comparing, const struct laid_line *laid)
{
	const char *words = arena_format(comparing->arena, "%" PRIu32 " cells, %" PRId64 " ticks", laid->cells, laid->ticks);
	comparing->failed = comparing->failed || words == NULL;
	return words;
}

static const char *line_words(struct comparing *comparing, const char *name)
{
	const char *words = arena_format(comparing->arena, "line type \"%s\"", name);
	comparing->failed = comparing->failed || words == NULL;
	return words;
}

void compare_lines(struct comparing *comparing)
{
	for (size_t old = 0; old < comparing->old->line_count && !comparing->failed; old++) {
		if (comparing->line_of[old] != NONE)
			compare_line(comparing, old, comparing->line_of[old]);
		else
			add_change(comparing, (struct change){.section = CHANGE_LINES, .kind = "line-removed",
			                                      .what = line_words(comparing, comparing->old->lines[old].name),
			                                      .old = line_facts(comparing, &comparing->old_timeline->types[old])});
	}
	for (size_t now = 0; now < comparing->now->line_count && !comparing->failed; now++)
		if (!is_taken(comparing, now))
			add_change(comparing, (struct change){.section = CHANGE_LINES, .kind = "line-added",
			                                      .what = line_words(comparing, comparing->now->lines[now].name),
			                                      .now = line_facts(comparing, &comparing->now_timeline->types[now])});
}
