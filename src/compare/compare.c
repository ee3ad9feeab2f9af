#include "compare/compare.h"

#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "compare/parts.h"
#include "view/figures.h"

static const char *const section_names[CHANGE_SECTIONS] = {
	[CHANGE_VERDICTS] = "verdicts", [CHANGE_LIMITS] = "limits",   [CHANGE_CLOCK] = "clock",   [CHANGE_STANDARD] = "standard",
	[CHANGE_SIGNALS] = "signals",   [CHANGE_LINES] = "lines",     [CHANGE_FRAME] = "frame",   [CHANGE_MACHINE] = "machine",
	[CHANGE_CHIPS] = "chips",       [CHANGE_TIMING] = "timing",   [CHANGE_WORDS] = "words",
};

const char *change_section_name(enum change_section section)
{
	return section_names[section];
}

static bool same_string(const char *left, const char *right)
{
	return left == right || (left != NULL && right != NULL && strcmp(left, right) == 0);
}

static bool differ_in_lines_only(const struct change *left, const struct change *right)
{
	return left->section == right->section && strcmp(left->kind, right->kind) == 0 && same_string(left->what, right->what) &&
	       same_string(left->old, right->old) && same_string(left->now, right->now) && left->shifted == right->shifted &&
	       left->cells == right->cells && left->ticks == right->ticks && left->lines != NULL && right->lines != NULL;
}

static bool grow(struct comparing *comparing)
{
	if (comparing->count < comparing->capacity)
		return true;
	const size_t capacity = comparing->capacity == 0 ? 32 : 2 * comparing->capacity;
	struct change *changes = arena_array(comparing->arena, capacity, sizeof *changes);
	if (changes == NULL)
		return false;
	if (comparing->count > 0)
		memcpy(changes, comparing->changes, comparing->count * sizeof *changes);
	comparing->changes = changes;
	comparing->capacity = capacity;
	return true;
}

void add_change(struct comparing *comparing, struct change change)
{
	for (size_t index = 0; index < comparing->count; index++) {
		struct change *other = &comparing->changes[index];
		if (!differ_in_lines_only(other, &change))
			continue;
		other->lines = arena_format(comparing->arena, "%s, %s", other->lines, change.lines);
		comparing->failed = comparing->failed || other->lines == NULL;
		return;
	}
	if (grow(comparing))
		comparing->changes[comparing->count++] = change;
	else
		comparing->failed = true;
}

const char *keep_text(struct comparing *comparing, struct text *text)
{
	const char *kept = text->failed ? NULL : arena_copy(comparing->arena, text_string(text), text->length);
	text_release(text);
	comparing->failed = comparing->failed || kept == NULL;
	return kept;
}

void compare_words(struct comparing *comparing, enum change_section section, const char *what, const char *old, const char *now)
{
	if (!same_string(old, now))
		add_change(comparing, (struct change){.section = section, .kind = old == NULL ? "added" : now == NULL ? "removed" : "changed",
		                                      .what = what, .old = old, .now = now});
}

void compare_texts(struct comparing *comparing, enum change_section section, const char *what, struct text *old, struct text *now)
{
	const char *left = keep_text(comparing, old), *right = keep_text(comparing, now);
	if (left != NULL && right != NULL)
		compare_words(comparing, section, what, left[0] == '\0' ? NULL : left, right[0] == '\0' ? NULL : right);
}

uint64_t map_signals(const struct comparing *comparing, uint64_t asserted)
{
	uint64_t mapped = 0;
	for (size_t index = 0; index < comparing->old->signal_count; index++)
		if ((asserted >> index & 1) != 0 && comparing->signal_of[index] != NONE)
			mapped |= (uint64_t)1 << comparing->signal_of[index];
	return mapped;
}

static bool hold_is_same(const struct timeline *old, const struct timeline *now, uint32_t cell)
{
	const uint32_t old_mask = old->has_holds ? old->hold_mask[cell] : 0, now_mask = now->has_holds ? now->hold_mask[cell] : 0;
	return old_mask == now_mask && (old_mask == 0 || old->hold_value[cell] == now->hold_value[cell]);
}

static bool holds_are_same(const struct timeline *old, const struct timeline *now)
{
	bool same = old->cell_count == now->cell_count;
	for (uint32_t cell = 0; same && cell < old->cell_count; cell++)
		same = hold_is_same(old, now, cell);
	return same;
}

static bool is_stretched(const struct plan *plan, uint64_t asserted)
{
	const int signal = plan->role_signal[ROLE_STRETCH];
	return signal >= 0 && (asserted >> signal & 1) != 0;
}

static bool all_signals_stay(const struct comparing *comparing)
{
	bool stay = comparing->old->signal_count == comparing->now->signal_count;
	for (size_t index = 0; stay && index < comparing->old->signal_count; index++)
		stay = comparing->signal_of[index] != NONE;
	return stay;
}

static bool timelines_are_same(const struct comparing *comparing)
{
	const struct timeline *old = comparing->old_timeline, *now = comparing->now_timeline;
	const struct clock *before = &comparing->old->clock, *after = &comparing->now->clock;
	bool same = comparing->same_holds && all_signals_stay(comparing) && old->tick_count == now->tick_count &&
	            fraction_compare(before->master_hz, after->master_hz) == 0 && before->cell_ticks == after->cell_ticks;
	uint64_t seen = 0, mapped = 0;
	for (uint32_t cell = 0; same && cell < old->cell_count; cell++) {
		if (cell == 0 || old->asserted[cell] != seen)
			mapped = map_signals(comparing, old->asserted[cell]);
		seen = old->asserted[cell];
		same = mapped == now->asserted[cell] &&
		       (before->stretch_ticks == after->stretch_ticks || !is_stretched(comparing->now, now->asserted[cell]));
	}
	return same;
}

static void sort_sections(struct comparing *comparing)
{
	struct change *sorted = arena_array(comparing->arena, comparing->count, sizeof *sorted);
	size_t count = 0;
	comparing->failed = comparing->failed || sorted == NULL;
	for (unsigned section = 0; sorted != NULL && section < CHANGE_SECTIONS; section++)
		for (size_t index = 0; index < comparing->count; index++)
			if (comparing->changes[index].section == section)
				sorted[count++] = comparing->changes[index];
	comparing->changes = sorted;
}

static void compare_names(struct comparing *comparing)
{
	compare_words(comparing, CHANGE_WORDS, "name", comparing->old->name, comparing->now->name);
	compare_words(comparing, CHANGE_WORDS, "note", comparing->old->note[0] != '\0' ? comparing->old->note : NULL,
	              comparing->now->note[0] != '\0' ? comparing->now->note : NULL);
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
	sort_sections(comparing);
}

struct comparison *comparison_create(const struct timeline *old, const struct timeline *now)
{
	struct arena *arena = arena_create();
	struct comparison *comparison = arena != NULL ? arena_alloc(arena, sizeof *comparison) : NULL;
	struct comparing comparing = {.arena = arena, .old_timeline = old, .now_timeline = now, .old = old->plan, .now = now->plan};
	if (comparison == NULL) {
		arena_destroy(arena);
		return NULL;
	}
	match_signals(&comparing);
	match_lines(&comparing);
	comparing.same_holds = holds_are_same(old, now);
	if (!comparing.failed)
		compare_all(&comparing);
	if (comparing.failed) {
		arena_destroy(arena);
		return NULL;
	}
	*comparison = (struct comparison){arena, old, now, comparing.changes, comparing.count, timelines_are_same(&comparing), true};
	for (size_t index = 0; index < comparing.count; index++)
		comparison->same_meaning = comparison->same_meaning && comparing.changes[index].section == CHANGE_WORDS;
	return comparison;
}

void comparison_destroy(struct comparison *comparison)
{
	if (comparison != NULL)
		arena_destroy(comparison->arena);
}

static void put_shift(struct text *out, const struct comparison *comparison, const struct change *change)
{
	const bool length = strcmp(change->kind, "length") == 0 || strcmp(change->kind, "line-length") == 0;
	const int64_t cells = change->cells < 0 ? -change->cells : change->cells, ticks = change->ticks < 0 ? -change->ticks : change->ticks;
	struct fraction seconds;
	text_put(out, ": ");
	text_put_count(out, (uint64_t)cells, "cell", "cells");
	text_put(out, change->cells < 0 ? (length ? " shorter" : " earlier") : length ? " longer" : " later");
	text_put(out, " (");
	text_put_count(out, (uint64_t)ticks, "tick", "ticks");
	if (seconds_of_ticks(&comparison->now->plan->clock, ticks, &seconds)) {
		text_put(out, ", ");
		text_put_time_in(out, seconds, UNIT_MICROSECONDS);
	}
	text_put(out, ")");
}

void text_put_change(struct text *out, const struct comparison *comparison, const struct change *change)
{
	if (change->lines != NULL)
		text_printf(out, "%s: ", change->lines);
	text_put(out, change->what);
	if (change->shifted)
		put_shift(out, comparison, change);
	if (change->old != NULL && change->now != NULL)
		text_printf(out, ": %s, was %s", change->now, change->old);
	else if (change->old != NULL)
		text_printf(out, " is gone: was %s", change->old);
	else if (change->now != NULL)
		text_printf(out, " is new: %s", change->now);
}
