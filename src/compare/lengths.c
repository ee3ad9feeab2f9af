// Lengths of regions, and regions that came or went. What lengthens one region and shortens another moves all that is between them:
// that is one change, and so is a region whose line grows with it.
#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "compare/parts.h"

// A region of either line, in order.
struct step {
	size_t old, now;     // NONE: the line has it not
	int64_t cells;       // by so many the new line is longer here
};

struct steps {
	const struct line_pair *pair;
	struct step *list;
	size_t count;
};

static struct step next_step(const struct line_pair *pair, size_t old, size_t now)
{
	const struct alignment *regions = &pair->regions;
	if (old < regions->old_count && regions->now_of[old] == NONE)
		return (struct step){old, NONE, -(int64_t)pair->old_laid->regions[old].cells};
	if (now < regions->now_count && regions->old_of[now] == NONE)
		return (struct step){NONE, now, pair->now_laid->regions[now].cells};
	return (struct step){old, now, (int64_t)pair->now_laid->regions[now].cells - (int64_t)pair->old_laid->regions[old].cells};
}

static bool list_steps(const struct line_pair *pair, struct steps *steps)
{
	const struct alignment *regions = &pair->regions;
	steps->pair = pair;
	steps->count = 0;
	steps->list = arena_array(pair->comparing->arena, regions->old_count + regions->now_count, sizeof *steps->list);
	pair->comparing->failed = pair->comparing->failed || steps->list == NULL;
	for (size_t old = 0, now = 0; steps->list != NULL && (old < regions->old_count || now < regions->now_count);) {
		const struct step step = next_step(pair, old, now);
		old += step.old != NONE;
		now += step.now != NONE;
		steps->list[steps->count++] = step;
	}
	return steps->list != NULL;
}

static const char *name_of(const struct steps *steps, size_t index)
{
	const struct step *step = &steps->list[index];
	return step->now != NONE ? steps->pair->now_line->regions[step->now].name : steps->pair->old_line->regions[step->old].name;
}

static bool is_matched(const struct steps *steps, size_t index)
{
	return steps->list[index].old != NONE && steps->list[index].now != NONE;
}

static int64_t ticks_of_cells(const struct steps *steps, int64_t cells)
{
	return cells * steps->pair->comparing->now->clock.cell_ticks;
}

// How much later a region that was matched starts.
static int64_t ticks_later(const struct steps *steps, size_t index, int64_t cells)
{
	const struct step *step = &steps->list[index];
	if (!steps->pair->comparing->same_clock)
		return ticks_of_cells(steps, cells);
	return steps->pair->now_laid->regions[step->now].start_ticks - steps->pair->old_laid->regions[step->old].start_ticks;
}

static int64_t ticks_longer(const struct steps *steps, size_t index)
{
	const struct step *step = &steps->list[index];
	if (!steps->pair->comparing->same_clock)
		return ticks_of_cells(steps, step->cells);
	return steps->pair->now_laid->regions[step->now].ticks - steps->pair->old_laid->regions[step->old].ticks;
}

// All regions between two, in words: "a", or "a" to "b".
static const char *span_words(const struct steps *steps, size_t first, size_t last)
{
	struct comparing *comparing = steps->pair->comparing;
	return first == last ? keep_words(comparing, "\"%s\"", name_of(steps, first))
	                     : keep_words(comparing, "\"%s\" to \"%s\"", name_of(steps, first), name_of(steps, last));
}

static const char *cells_words(const struct steps *steps, int64_t cells)
{
	const int64_t size = cells < 0 ? -cells : cells;
	return keep_words(steps->pair->comparing, "%" PRId64 " cell%s", size, size == 1 ? "" : "s");
}

// The edges from the end of one region to the start of another were moved alike.
static void add_moved(const struct steps *steps, size_t grown, size_t shrunk)
{
	struct comparing *comparing = steps->pair->comparing;
	const int64_t cells = steps->list[grown].cells;
	struct change change = {.section = CHANGE_LINES, .shifted = true, .cells = cells, .ticks = ticks_later(steps, grown + 1, cells)};
	if (shrunk == grown + 1) {
		change.kind = "edge-moved";
		change.what = keep_words(comparing, "edge between \"%s\" and \"%s\"", name_of(steps, grown), name_of(steps, shrunk));
	} else {
		change.kind = shrunk == grown + 2 ? "region-moved" : "regions-moved";
		change.what = keep_words(comparing, "%s, between \"%s\" and \"%s\"", span_words(steps, grown + 1, shrunk - 1),
		                         name_of(steps, grown), name_of(steps, shrunk));
	}
	add_of_line(steps->pair, change);
}

static void add_longer(const struct steps *steps, size_t index, const char *also)
{
	add_of_line(steps->pair, (struct change){.section = CHANGE_LINES, .kind = "length", .what = span_words(steps, index, index), .also = also,
	                                         .shifted = true, .longer = true, .cells = steps->list[index].cells,
	                                         .ticks = ticks_longer(steps, index)});
}

static const char *describe(const struct steps *steps, const struct plan *plan, const struct region *region, const struct laid_region *laid)
{
	struct text words = {0};
	text_printf(&words, "%" PRIu32 " cell%s from cell %" PRIu32 ", asserts ", laid->cells, laid->cells == 1 ? "" : "s", laid->first_cell);
	put_asserted(&words, plan, region->assert_mask);
	return keep_text(steps->pair->comparing, &words);
}

// A region that came or went.
static void add_presence(const struct steps *steps, size_t index, const char *also)
{
	const struct line_pair *pair = steps->pair;
	const struct step *step = &steps->list[index];
	struct change change = {.section = CHANGE_LINES, .kind = step->old == NONE ? "region-added" : "region-removed",
	                        .what = span_words(steps, index, index), .also = also};
	if (step->old == NONE)
		change.now = describe(steps, pair->comparing->now, &pair->now_line->regions[step->now], &pair->now_laid->regions[step->now]);
	else
		change.old = describe(steps, pair->comparing->old, &pair->old_line->regions[step->old], &pair->old_laid->regions[step->old]);
	add_of_line(pair, change);
}

// A region that is gone in one place and new in another stands elsewhere: where, or NONE. Looks at a limited number.
static size_t find_elsewhere(const struct steps *steps, size_t gone)
{
	const struct line_pair *pair = steps->pair;
	const struct step *step = &steps->list[gone];
	for (size_t index = 0, looks = 0; step->now == NONE && index < steps->count && looks < 1000; index++) {
		const size_t now = steps->list[index].now;
		if (steps->list[index].old != NONE)
			continue;
		if (strcmp(name_of(steps, gone), name_of(steps, index)) == 0 && steps->list[index].cells == -step->cells &&
		    pair->mapped[step->old] == pair->now_line->regions[now].assert_mask)
			return index;
		looks++;
	}
	return NONE;
}

static void add_elsewhere(struct steps *steps, size_t gone, size_t there)
{
	struct comparing *comparing = steps->pair->comparing;
	struct step *from = &steps->list[gone], *to = &steps->list[there];
	add_of_line(steps->pair, (struct change){.section = CHANGE_LINES, .kind = "region-reordered", .what = span_words(steps, gone, gone),
	                                         .old = keep_words(comparing, "from cell %" PRIu32, steps->pair->old_laid->regions[from->old].first_cell),
	                                         .now = keep_words(comparing, "from cell %" PRIu32, steps->pair->now_laid->regions[to->now].first_cell)});
	from->cells = to->cells = 0;
}

// Regions in another order are told as such, and then change no length.
static void tell_order(struct steps *steps)
{
	for (size_t index = 0; index < steps->count && !steps->pair->comparing->failed; index++) {
		const size_t there = find_elsewhere(steps, index);
		if (there != NONE && steps->list[there].cells != 0)
			add_elsewhere(steps, index, there);
	}
}

// What the neighbours do: the room that a region takes or leaves is another's, and what is between comes later or earlier.
static const char *room_words(const struct steps *steps, size_t first, size_t last)
{
	struct comparing *comparing = steps->pair->comparing;
	const size_t other = is_matched(steps, first) ? first : last;
	const int64_t cells = steps->list[other].cells, shift = steps->list[first].cells;
	struct text words = {0};
	text_printf(&words, "\"%s\" is %s %s", name_of(steps, other), cells_words(steps, cells), cells < 0 ? "shorter" : "longer");
	if (last > first + 1)
		text_printf(&words, ", %s come%s %s %s", span_words(steps, first + 1, last - 1), last == first + 2 ? "s" : "",
		            cells_words(steps, shift), shift < 0 ? "earlier" : "later");
	return keep_text(comparing, &words);
}

static void add_line_length(const struct steps *steps, int64_t cells)
{
	const struct line_pair *pair = steps->pair;
	add_of_line(pair, (struct change){.section = CHANGE_LINES, .kind = "line-length", .what = "the line", .shifted = true, .longer = true,
	                                  .cells = cells,
	                                  .ticks = pair->comparing->same_clock ? pair->now_laid->ticks - pair->old_laid->ticks
	                                                                       : ticks_of_cells(steps, cells)});
}

static void add_step(const struct steps *steps, size_t index, const char *also)
{
	if (is_matched(steps, index))
		add_longer(steps, index, also);
	else
		add_presence(steps, index, also);
}

// Steps that belong together, since until the last of them edges are elsewhere: `count` of them change a length, the first and the last
// as given; in sum they are `cells` longer, which the line is then too.
static void add_group(const struct steps *steps, size_t first, size_t last, size_t count, int64_t cells)
{
	const bool two = count == 2 && cells == 0;
	if (two && is_matched(steps, first) && is_matched(steps, last)) {
		add_moved(steps, first, last);
	} else if (two && (is_matched(steps, first) || is_matched(steps, last))) {
		add_presence(steps, is_matched(steps, first) ? last : first, room_words(steps, first, last));
	} else if (count == 1) {
		add_step(steps, first, keep_words(steps->pair->comparing, "the line is %s %s", cells_words(steps, cells), cells < 0 ? "shorter" : "longer"));
	} else {
		for (size_t index = first; index <= last && !steps->pair->comparing->failed; index++)
			if (steps->list[index].cells != 0)
				add_step(steps, index, NULL);
		if (cells != 0)
			add_line_length(steps, cells);
	}
}

void compare_lengths(const struct line_pair *pair)
{
	struct steps steps;
	size_t first = NONE, last = NONE, count = 0;
	int64_t cells = 0;
	if (!list_steps(pair, &steps))
		return;
	tell_order(&steps);
	for (size_t index = 0; index < steps.count && !pair->comparing->failed; index++) {
		if (steps.list[index].cells == 0)
			continue;
		first = count++ == 0 ? index : first;
		last = index;
		cells += steps.list[index].cells;
		if (cells != 0)
			continue;
		add_group(&steps, first, last, count, 0);
		count = 0;
	}
	if (count > 0)
		add_group(&steps, first, last, count, cells);
}
