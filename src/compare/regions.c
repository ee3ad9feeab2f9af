// The regions of a line type: matched by name and position; then what they assert, stretch and hold.
#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "compare/parts.h"

// What makes regions the same: above all their name, then what they assert, then their length. A region of another name can be the
// same one, renamed, if it asserts the same.
#define WORTH_NAME 32u
#define WORTH_ASSERTED 2u
#define WORTH_LENGTH 1u
#define WORTH_WHOLE (WORTH_NAME + WORTH_ASSERTED + WORTH_LENGTH)

static uint32_t worth_of_regions(const void *context, size_t old, size_t now)
{
	const struct line_pair *pair = context;
	const struct region *before = &pair->old_line->regions[old], *after = &pair->now_line->regions[now];
	const bool named = strcmp(before->name, after->name) == 0, asserted = pair->mapped[old] == after->assert_mask;
	const bool length = pair->old_laid->regions[old].cells == pair->now_laid->regions[now].cells;
	return !named && !asserted ? 0
	                           : (named ? WORTH_NAME : 0) + (asserted ? WORTH_ASSERTED : 0) + (length ? WORTH_LENGTH : 0);
}

void add_of_line(const struct line_pair *pair, struct change change)
{
	const bool used = pair->comparing->old_used[pair->old_index] || pair->comparing->now_used[pair->now_index];
	change.section = used && !pair->does_same ? change.section : CHANGE_WORDS;
	change.lines = &pair->now_line->name;
	change.line_count = 1;
	if (!pair->comparing->failed)
		add_change(pair->comparing, change);
}

static const char *now_name(const struct line_pair *pair, size_t old)
{
	return pair->now_line->regions[pair->regions.now_of[old]].name;
}

void put_asserted(struct text *out, const struct plan *plan, uint64_t mask)
{
	bool first = true;
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		if ((mask >> signal & 1) == 0)
			continue;
		mask &= ~((uint64_t)1 << signal);
		text_printf(out, "%s%s", first ? "" : mask == 0 ? " and " : ", ", plan->signals[signal].name);
		first = false;
	}
	if (first)
		text_put(out, "nothing");
}

static void compare_asserted(const struct line_pair *pair, size_t old)
{
	struct comparing *comparing = pair->comparing;
	const struct region *before = &pair->old_line->regions[old], *after = &pair->now_line->regions[pair->regions.now_of[old]];
	// That a signal is gone is told once, as such; where a new one is asserted is told of each region.
	if (pair->mapped[old] == after->assert_mask)
		return;
	struct text left = {0}, right = {0};
	put_asserted(&left, comparing->old, before->assert_mask);
	put_asserted(&right, comparing->now, after->assert_mask);
	add_of_line(pair, (struct change){.section = CHANGE_LINES, .kind = "asserts",
	                                  .what = keep_words(comparing, "\"%s\" asserts", after->name),
	                                  .old = keep_text(comparing, &left), .now = keep_text(comparing, &right)});
}

// Stretched cells.

static int64_t more_stretched(const struct line_pair *pair, size_t old)
{
	const size_t now = pair->regions.now_of[old];
	return now == NONE ? 0 : (int64_t)pair->now_laid->regions[now].stretched - (int64_t)pair->old_laid->regions[old].stretched;
}

// What the line takes longer by its stretched cells alone; NULL where more has changed.
static const char *longer_words(const struct line_pair *pair)
{
	const int64_t ticks = pair->now_laid->ticks - pair->old_laid->ticks, size = ticks < 0 ? -ticks : ticks;
	if (!pair->comparing->same_clock || pair->now_laid->cells != pair->old_laid->cells || ticks == 0)
		return NULL;
	return keep_words(pair->comparing, "the line is %" PRId64 " tick%s %s", size, size == 1 ? "" : "s", ticks < 0 ? "shorter" : "longer");
}

static void add_stretched(const struct line_pair *pair, size_t old, const char *also)
{
	struct comparing *comparing = pair->comparing;
	const uint32_t before = pair->old_laid->regions[old].stretched, after = pair->now_laid->regions[pair->regions.now_of[old]].stretched;
	add_of_line(pair, (struct change){.section = CHANGE_LINES, .kind = "stretched",
	                                  .what = keep_words(comparing, "stretched cells of \"%s\"", now_name(pair, old)),
	                                  .old = keep_words(comparing, "%" PRIu32, before), .now = keep_words(comparing, "%" PRIu32, after),
	                                  .also = also});
}

static void add_stretched_moved(const struct line_pair *pair, size_t from, size_t to, int64_t cells)
{
	struct comparing *comparing = pair->comparing;
	add_of_line(pair, (struct change){.section = CHANGE_LINES, .kind = "stretched-moved",
	                                  .what = cells == 1 ? "a stretched cell" : keep_words(comparing, "%" PRId64 " stretched cells", cells),
	                                  .old = keep_words(comparing, "in \"%s\"", now_name(pair, from)),
	                                  .now = keep_words(comparing, "in \"%s\"", now_name(pair, to))});
}

static void compare_stretched(const struct line_pair *pair)
{
	size_t first = NONE, second = NONE, count = 0;
	for (size_t old = 0; old < pair->old_line->region_count; old++) {
		if (more_stretched(pair, old) == 0)
			continue;
		if (count++ == 0)
			first = old;
		else
			second = old;
	}
	const int64_t cells = count == 2 ? more_stretched(pair, first) : 0;
	if (cells != 0 && more_stretched(pair, second) == -cells) {
		add_stretched_moved(pair, cells < 0 ? first : second, cells < 0 ? second : first, cells < 0 ? -cells : cells);
		return;
	}
	for (size_t old = 0; count > 0 && old < pair->old_line->region_count; old++)
		if (more_stretched(pair, old) != 0)
			add_stretched(pair, old, count == 1 ? longer_words(pair) : NULL);
}

// Holds.

static const struct hold *hold_of(const struct region *region, size_t field)
{
	for (size_t index = 0; index < region->hold_count; index++)
		if (region->holds[index].field == field)
			return &region->holds[index];
	return NULL;
}

static void compare_hold(const struct line_pair *pair, size_t now, const char *field, const struct hold *before, const struct hold *after)
{
	struct comparing *comparing = pair->comparing;
	const bool both = before != NULL && after != NULL;
	if ((before == NULL && after == NULL) || (both && holds_agree(comparing, before, after, pair->now_index, now)))
		return;
	add_of_line(pair, (struct change){.section = CHANGE_LINES, .kind = "hold",
	                                  .what = keep_words(comparing, "\"%s\" holds %s", pair->now_line->regions[now].name, field),
	                                  .old = before != NULL ? before->text : "nothing", .now = after != NULL ? after->text : "nothing"});
}

// Field by field: the old plan's, then those that are new.
static void compare_holds(const struct line_pair *pair, size_t old)
{
	const struct comparing *comparing = pair->comparing;
	const size_t now = pair->regions.now_of[old];
	const struct region *before = &pair->old_line->regions[old], *after = &pair->now_line->regions[now];
	const struct machine_plan *old_machine = &comparing->old->machine, *now_machine = &comparing->now->machine;
	uint64_t told = 0;
	for (size_t field = 0; field < old_machine->field_count && (before->hold_count > 0 || after->hold_count > 0); field++) {
		const size_t match = comparing->field_of[field];
		if (match != NONE)
			told |= (uint64_t)1 << match;
		compare_hold(pair, now, match != NONE ? now_machine->fields[match].name : old_machine->fields[field].name, hold_of(before, field),
		             match != NONE ? hold_of(after, match) : NULL);
	}
	for (size_t field = 0; field < now_machine->field_count && after->hold_count > 0; field++)
		if ((told >> field & 1) == 0)
			compare_hold(pair, now, now_machine->fields[field].name, NULL, hold_of(after, field));
}

static void add_renamed(const struct line_pair *pair, size_t old, size_t now)
{
	struct comparing *comparing = pair->comparing;
	const char *before = pair->old_line->regions[old].name, *after = pair->now_line->regions[now].name;
	if (strcmp(before, after) != 0)
		add_of_line(pair, (struct change){.section = CHANGE_WORDS, .kind = "region-renamed", .what = "a region's name",
		                                  .old = keep_words(comparing, "\"%s\"", before), .now = keep_words(comparing, "\"%s\"", after)});
}

static void compare_pair(struct line_pair *pair)
{
	if (!align_lists(pair->comparing, worth_of_regions, WORTH_WHOLE, pair, &pair->regions)) {
		add_of_line(pair, (struct change){.section = CHANGE_LINES, .kind = "regions", .what = "regions",
		                                  .old = keep_words(pair->comparing, "%zu", pair->regions.old_count),
		                                  .now = keep_words(pair->comparing, "%zu, too many to compare one by one", pair->regions.now_count)});
		return;
	}
	compare_lengths(pair);
	compare_stretched(pair);
	for (size_t old = 0; old < pair->old_line->region_count && !pair->comparing->failed; old++) {
		if (pair->regions.now_of[old] == NONE)
			continue;
		add_renamed(pair, old, pair->regions.now_of[old]);
		compare_asserted(pair, old);
		compare_holds(pair, old);
	}
}

static bool has_holds(const struct line_type *line)
{
	for (size_t index = 0; index < line->region_count; index++)
		if (line->regions[index].hold_count > 0)
			return true;
	return false;
}

// Whether a line type does the same in every cell; other regions then only say it in other words.
static bool does_same(const struct line_pair *pair)
{
	const struct comparing *comparing = pair->comparing;
	return (comparing->same_holds || (!has_holds(pair->old_line) && !has_holds(pair->now_line))) &&
	       line_shows_same(comparing, pair->old_index, pair->now_index);
}

// Regions of both lines that are the same cells.
struct part {
	size_t old, old_count, now, now_count;
	uint32_t first_cell, end_cell;
};

static uint32_t end_of(const struct laid_line *line, size_t region)
{
	return line->regions[region].first_cell + line->regions[region].cells;
}

// The next part, as short as can be.
static struct part next_part(const struct line_pair *pair, size_t old, size_t now)
{
	struct part part = {old, 1, now, 1, pair->old_laid->regions[old].first_cell, 0};
	uint32_t old_end = end_of(pair->old_laid, old), now_end = end_of(pair->now_laid, now);
	while (old_end != now_end) {
		if (old_end < now_end)
			old_end = end_of(pair->old_laid, old + part.old_count++);
		else
			now_end = end_of(pair->now_laid, now + part.now_count++);
	}
	part.end_cell = old_end;
	return part;
}

#define MOST_NAMES 6u // of regions of one part

static const char *region_names(struct comparing *comparing, const struct line_type *line, size_t first, size_t count)
{
	const size_t named = count > MOST_NAMES ? MOST_NAMES - 1 : count;
	struct text text = {0};
	for (size_t index = 0; index < named; index++)
		text_printf(&text, "%s\"%s\"", index == 0 ? "" : index + 1 == count ? " and " : ", ", line->regions[first + index].name);
	if (named < count)
		text_printf(&text, " and %zu more", count - named);
	return keep_text(comparing, &text);
}

static void tell_part(const struct line_pair *pair, const struct part *part)
{
	struct comparing *comparing = pair->comparing;
	const uint32_t cells = part->end_cell - part->first_cell;
	if (part->old_count == 1 && part->now_count == 1) {
		add_renamed(pair, part->old, part->now);
		return;
	}
	add_of_line(pair, (struct change){.section = CHANGE_WORDS, .kind = "regions-divided",
	                                  .what = keep_words(comparing, "the same %" PRIu32 " cell%s from cell %" PRIu32, cells, cells == 1 ? "" : "s",
	                                                     part->first_cell),
	                                  .old = region_names(comparing, pair->old_line, part->old, part->old_count),
	                                  .now = region_names(comparing, pair->now_line, part->now, part->now_count)});
}

// Of a line type that does the same with more regions or fewer: which became of which.
static void tell_divided(const struct line_pair *pair)
{
	for (size_t old = 0, now = 0; old < pair->old_line->region_count && now < pair->now_line->region_count && !pair->comparing->failed;) {
		const struct part part = next_part(pair, old, now);
		tell_part(pair, &part);
		old += part.old_count;
		now += part.now_count;
	}
}

const uint64_t *map_regions(struct comparing *comparing, const struct line_type *line, bool maps)
{
	uint64_t *mapped = arena_array(comparing->arena, line->region_count, sizeof *mapped);
	comparing->failed = comparing->failed || mapped == NULL;
	for (size_t index = 0; mapped != NULL && index < line->region_count; index++)
		mapped[index] = maps ? map_signals(comparing, line->regions[index].assert_mask) : line->regions[index].assert_mask;
	return mapped;
}

void compare_regions(struct comparing *comparing, size_t old_line, size_t now_line)
{
	struct line_pair pair = {.comparing = comparing, .old_line = &comparing->old->lines[old_line], .now_line = &comparing->now->lines[now_line],
	                         .old_laid = &comparing->old_timeline->types[old_line], .now_laid = &comparing->now_timeline->types[now_line],
	                         .old_index = old_line, .now_index = now_line, .mapped = map_regions(comparing, &comparing->old->lines[old_line], true)};
	pair.regions.old_count = pair.old_line->region_count;
	pair.regions.now_count = pair.now_line->region_count;
	if (comparing->failed || !alignment_begin(comparing, &pair.regions))
		return;
	if (strcmp(pair.old_line->name, pair.now_line->name) != 0)
		add_change(comparing, (struct change){.section = CHANGE_WORDS, .kind = "line-renamed", .what = "a line type's name",
		                                      .old = keep_words(comparing, "\"%s\"", pair.old_line->name),
		                                      .now = keep_words(comparing, "\"%s\"", pair.now_line->name)});
	pair.does_same = does_same(&pair);
	if (pair.does_same && pair.old_line->region_count != pair.now_line->region_count)
		tell_divided(&pair);
	else
		compare_pair(&pair);
}
