#include "compare/compare.h"

#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "compare/parts.h"

#define MOST_WORK 16000000u // pairs that alignments look at

static uint64_t map_by(const size_t *signal_of, size_t signals, uint64_t asserted)
{
	uint64_t mapped = 0;
	for (size_t index = 0; index < signals; index++)
		if ((asserted >> index & 1) != 0 && signal_of[index] != NONE)
			mapped |= (uint64_t)1 << signal_of[index];
	return mapped;
}

uint64_t map_signals(const struct comparing *comparing, uint64_t asserted)
{
	return map_by(comparing->signal_of, comparing->old->signal_count, asserted);
}

uint64_t comparison_map_signals(const struct comparison *comparison, uint64_t asserted)
{
	return map_by(comparison->signal_of, comparison->old->plan->signal_count, asserted);
}

static bool hold_is_same(const struct timeline *old, const struct timeline *now, uint32_t cell)
{
	const uint32_t old_mask = old->has_holds ? old->hold_mask[cell] : 0, now_mask = now->has_holds ? now->hold_mask[cell] : 0;
	return old_mask == now_mask && (old_mask == 0 || old->hold_value[cell] == now->hold_value[cell]);
}

static bool holds_are_same(const struct timeline *old, const struct timeline *now)
{
	bool same = old->cell_count == now->cell_count;
	for (uint32_t cell = 0; same && cell < old->cell_count && (old->has_holds || now->has_holds); cell++)
		same = hold_is_same(old, now, cell);
	return same;
}

int64_t stretch_of(const struct plan *plan, uint64_t asserted)
{
	const int signal = plan->role_signal[ROLE_STRETCH];
	return signal >= 0 && (asserted >> signal & 1) != 0 ? plan->clock.stretch_ticks : 0;
}

static bool all_signals_stay(const struct comparing *comparing)
{
	bool stay = comparing->old->signal_count == comparing->now->signal_count;
	for (size_t index = 0; stay && index < comparing->old->signal_count; index++)
		stay = comparing->signal_of[index] != NONE;
	return stay;
}

static bool lines_start_alike(const struct timeline *old, const struct timeline *now)
{
	bool same = old->line_count == now->line_count && old->cell_count == now->cell_count;
	for (uint32_t line = 0; same && line < old->line_count; line++)
		same = old->lines[line].first_cell == now->lines[line].first_cell;
	return same;
}

static bool cells_are_same(const struct comparing *comparing)
{
	const struct timeline *old = comparing->old_timeline, *now = comparing->now_timeline;
	bool same = true;
	uint64_t seen = 0, mapped = 0;
	for (uint32_t cell = 0; same && cell < old->cell_count; cell++) {
		if (cell == 0 || old->asserted[cell] != seen)
			mapped = map_signals(comparing, old->asserted[cell]);
		seen = old->asserted[cell];
		same = mapped == now->asserted[cell] && stretch_of(comparing->old, seen) == stretch_of(comparing->now, mapped);
	}
	return same;
}

static bool clocks_are_same(const struct clock *old, const struct clock *now)
{
	return fraction_compare(old->master_hz, now->master_hz) == 0 && old->cell_ticks == now->cell_ticks;
}

static bool timelines_are_same(const struct comparing *comparing)
{
	return comparing->same_loop ||
	       (comparing->same_clock && comparing->same_holds && all_signals_stay(comparing) &&
	       lines_start_alike(comparing->old_timeline, comparing->now_timeline) && cells_are_same(comparing));
}

// Where every pin does in every cell what it did, other regions, line types and blocks only say so in other words.
static bool is_only_said(enum change_section section)
{
	return section == CHANGE_LINES || section == CHANGE_FRAME;
}

// Whether the lines that the old frame is cut into begin where those of the new one do, which begins at its cell `first`.
static bool is_cut_alike(const struct comparing *comparing, uint32_t first)
{
	const struct timeline *old = comparing->old_timeline, *now = comparing->now_timeline;
	const uint32_t from = timeline_place(old, first).line;
	bool same = old->line_count == now->line_count;
	for (uint32_t line = 0; same && line < now->line_count; line++)
		same = (now->lines[line].first_cell + first) % old->cell_count == old->lines[(from + line) % old->line_count].first_cell;
	return same;
}

// The same loop of cells, begun at another cell or cut into other lines. Where only whole blocks stand in another order, it is not taken for the
// same timeline: the frame begins with another line. Two stages have rows for their lines, so that others are another machine.
static void find_loop(struct comparing *comparing)
{
	const bool loops = comparing->old->machine.form == FORM_LOOP && comparing->now->machine.form == FORM_LOOP;
	if (comparing->failed || !loops || !all_signals_stay(comparing) || timelines_are_same(comparing))
		return;
	comparing->rotated = frames_are_rotated(comparing, &comparing->loop_cell);
	comparing->same_loop = comparing->rotated && !is_cut_alike(comparing, comparing->loop_cell);
}

bool pins_first_cell(const struct plan *plan)
{
	return plan->machine.has_start || plan->machine.line.advance == ADVANCE_COUNT;
}

// What lines and blocks are is only said in other words then, and these would be all of them.
static void compare_loops(struct comparing *comparing)
{
	const struct cell_place place = timeline_place(comparing->old_timeline, comparing->loop_cell);
	const char *where = comparing->loop_cell == 0
		? "where it began" : keep_words(comparing, "at what was line %" PRIu32 ", cell %" PRIu32, place.line, place.cell);
	drop_sections(comparing, is_only_said);
	add_change(comparing, (struct change){.section = CHANGE_WORDS, .kind = "rotated",
	                                      .what = keep_words(comparing, "the frame is the same loop, begun %s; its lines are cut elsewhere", where)});
}

static void compare_names(struct comparing *comparing)
{
	compare_words(comparing, CHANGE_WORDS, "the plan's name", comparing->old->name, comparing->now->name);
	compare_words(comparing, CHANGE_WORDS, "the plan's note", comparing->old->note[0] != '\0' ? comparing->old->note : NULL,
	              comparing->now->note[0] != '\0' ? comparing->now->note : NULL);
}

// Should the timelines differ though nothing that was compared does, that must not pass for nothing.
static void compare_remainder(struct comparing *comparing)
{
	bool told = false;
	for (const struct change *change = sorted_changes(comparing), *end = change + comparing->count; change != NULL && change < end; change++)
		told = told || (change->section != CHANGE_WORDS && change->section != CHANGE_LIMITS);
	if (!told)
		add_change(comparing, (struct change){.section = CHANGE_FRAME, .kind = "cells", .what = "cells of the frame",
		                                      .also = "they do other things, though all that was compared is the same"});
}

static void compare_all(struct comparing *comparing)
{
	compare_verdicts(comparing);
	compare_clock(comparing);
	compare_standard(comparing);
	compare_signals(comparing);
	compare_lines(comparing);
	compare_blocks(comparing);
	compare_machine(comparing);
	compare_chips(comparing);
	compare_timing(comparing);
	compare_names(comparing);
	if (comparing->failed)
		return;
	if (comparing->same_loop)
		compare_loops(comparing);
	else if (timelines_are_same(comparing))
		move_sections(comparing, is_only_said, CHANGE_WORDS);
	else
		compare_remainder(comparing);
}

static void summarize(struct comparing *comparing, struct comparison *comparison)
{
	*comparison = (struct comparison){.arena = comparing->arena, .old = comparing->old_timeline, .now = comparing->now_timeline,
	                                  .facts = comparing->facts, .fact_count = comparing->fact_count, .count = comparing->count,
	                                  .changes = sorted_changes(comparing), .same_clock = comparing->same_clock,
	                                  .same_timeline = timelines_are_same(comparing), .same_meaning = true,
	                                  .old_chip_of = comparing->old_chip_of, .line_of = comparing->line_of,
	                                  .signal_of = comparing->signal_of};
	comparing->failed = comparing->failed || comparison->changes == NULL;
	comparison->same_deeds = comparing->rotated && !pins_first_cell(comparing->old) && !pins_first_cell(comparing->now);
	for (size_t index = 0; !comparing->failed && index < comparison->count; index++) {
		const enum change_section section = comparison->changes[index].section;
		comparison->edits += section != CHANGE_LIMITS;
		comparison->same_meaning = comparison->same_meaning && section == CHANGE_WORDS;
		comparison->same_deeds = comparison->same_deeds && (section == CHANGE_WORDS || section == CHANGE_FRAME);
	}
	comparison->same_deeds = comparison->same_deeds || comparison->same_meaning;
}

struct comparison *comparison_create(const struct timeline *old, const struct timeline *now)
{
	struct arena *arena = arena_create();
	struct comparison *comparison = arena != NULL ? arena_alloc(arena, sizeof *comparison) : NULL;
	struct comparing comparing = {.arena = arena, .old_timeline = old, .now_timeline = now, .old = old->plan, .now = now->plan,
	                              .work_left = MOST_WORK};
	if (comparison == NULL) {
		arena_destroy(arena);
		return NULL;
	}
	comparing.same_clock = clocks_are_same(&old->plan->clock, &now->plan->clock);
	comparing.same_holds = holds_are_same(old, now);
	match_fields(&comparing);
	match_signals(&comparing);
	find_loop(&comparing);
	match_lines(&comparing);
	if (!comparing.failed)
		compare_all(&comparing);
	if (!comparing.failed)
		summarize(&comparing, comparison);
	if (!comparing.failed)
		return comparison;
	arena_destroy(arena);
	return NULL;
}

void comparison_destroy(struct comparison *comparison)
{
	if (comparison != NULL)
		arena_destroy(comparison->arena);
}
