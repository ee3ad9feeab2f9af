// The picture of a difference: what it means in words, and line types that differ, old over new.
#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "base/excerpt.h"
#include "base/text.h"
#include "view/diff.h"
#include "view/draw_diff.h"
#include "view/figures.h"
#include "view/pictures.h"

#define PAGE_WIDTH (LINE_LEFT + LINE_PLOT + LINE_RIGHT)
#define MARGIN PX(16)
#define SENTENCE PX(21)
#define HEADING PX(38)
#define MOST_PAIRS 8u
#define MOST_SENTENCES 12u // of one kind
#define NONE SIZE_MAX

struct diff_drawing {
	struct svg *svg;
	int64_t y;
	struct text words;     // a sentence, made whole before it is drawn
	bool unseen;           // what some images do cannot be told
	const char *drawn[MOST_PAIRS]; // [drawn_count]: the line types of a pair of plans that are drawn
	size_t drawn_count;
	size_t pairs, left_out; // line types that are drawn, and that differ too
};

static void draw_words(struct diff_drawing *drawing, const char *class, unsigned size, int64_t height)
{
	struct text printable = {0};
	excerpt_put_printable(text_string(&drawing->words), drawing->words.length, &printable);
	svg_fitted(drawing->svg, class, MARGIN, drawing->y + height - PX(8), ANCHOR_START, PAGE_WIDTH - 2 * MARGIN, size,
	           text_string(&printable));
	drawing->y += height;
	svg_release(drawing->svg, &printable);
	drawing->words.length = 0;
	text_put(&drawing->words, "");
}

static void draw_sentence(struct diff_drawing *drawing)
{
	draw_words(drawing, "sentence", 15, SENTENCE);
}

static void draw_fact(struct diff_drawing *drawing, const struct fact *fact)
{
	text_printf(&drawing->words, "%s: ", fact->what);
	text_put_fact_value(&drawing->words, fact);
	draw_sentence(drawing);
}

static void draw_more(struct diff_drawing *drawing, size_t count)
{
	if (count <= MOST_SENTENCES)
		return;
	text_printf(&drawing->words, "and %zu more; \"scanlatch diff\" lists all", count - MOST_SENTENCES);
	draw_sentence(drawing);
}

static void draw_change(struct diff_drawing *drawing, const struct comparison *comparison, const struct change *change, size_t *count)
{
	if ((*count)++ >= MOST_SENTENCES)
		return;
	text_put_change(&drawing->words, comparison, change);
	draw_sentence(drawing);
}

bool change_is_of_line(const struct change *change, const char *name)
{
	for (size_t index = 0; index < change->line_count; index++)
		if (strcmp(change->lines[index], name) == 0)
			return true;
	return false;
}

static void draw_set(struct diff_drawing *drawing, const struct difference *difference)
{
	size_t count = 0;
	for (size_t index = 0; index < difference->set_change_count; index++)
		draw_change(drawing, NULL, &difference->set_changes[index], &count);
	draw_more(drawing, count);
}

// The chips, and what the machine does.
static void draw_chips(struct diff_drawing *drawing, const struct difference *difference)
{
	for (size_t index = 0; index < difference->chip_count; index++) {
		text_printf(&drawing->words, "%s: ", difference->chips[index].label);
		put_chip_fate(&drawing->words, &difference->chips[index]);
		draw_sentence(drawing);
	}
	if (chips_advice(difference) == NULL)
		return;
	text_put(&drawing->words, chips_advice(difference));
	draw_sentence(drawing);
}

static void draw_facts(struct diff_drawing *drawing, const struct plan_difference *plan)
{
	const struct fact musts = musts_fact(plan), unlisted = unlisted_fact(plan);
	draw_fact(drawing, &musts);
	if (unlisted.what != NULL)
		draw_fact(drawing, &unlisted);
	for (size_t index = 0; tells_facts(plan) && index < plan->comparison->fact_count; index++)
		if (!plan->comparison->facts[index].same)
			draw_fact(drawing, &plan->comparison->facts[index]);
}

// Changes that are of no line type.
static void draw_general(struct diff_drawing *drawing, const struct comparison *comparison)
{
	size_t count = 0;
	for (size_t index = 0; index < comparison->count; index++)
		if (comparison->changes[index].line_count == 0)
			draw_change(drawing, comparison, &comparison->changes[index], &count);
	draw_more(drawing, count);
}

static bool is_drawn(const struct diff_drawing *drawing, const struct change *change)
{
	for (size_t index = 0; index < drawing->drawn_count; index++)
		if (change_is_of_line(change, drawing->drawn[index]))
			return true;
	return false;
}

// Changes of line types that are not drawn, such as of what they hold.
static void draw_others(struct diff_drawing *drawing, const struct comparison *comparison)
{
	size_t count = 0;
	for (size_t index = 0; index < comparison->count; index++)
		if (comparison->changes[index].line_count > 0 && !is_drawn(drawing, &comparison->changes[index]))
			draw_change(drawing, comparison, &comparison->changes[index], &count);
	draw_more(drawing, count);
}

// Line types.

static bool signals_are_same(const struct comparison *comparison)
{
	const struct plan *old = comparison->old->plan, *now = comparison->now->plan;
	bool same = old->signal_count == now->signal_count;
	for (size_t index = 0; same && index < old->signal_count; index++) {
		const struct signal *before = &old->signals[index];
		const struct signal *after = comparison->signal_of[index] != NONE ? &now->signals[comparison->signal_of[index]] : NULL;
		same = after != NULL && before->active_high == after->active_high && before->lead_cells == after->lead_cells;
	}
	return same;
}

static bool is_same(const struct comparison *comparison, const struct laid_line *old, const struct laid_line *now)
{
	bool same = comparison->same_clock && old->cells == now->cells && old->ticks == now->ticks;
	for (uint32_t cell = 0; same && cell < old->cells; cell++)
		same = comparison_map_signals(comparison, old->asserted[cell]) == now->asserted[cell];
	return same;
}

static void put_pair_heading(struct text *out, const struct drawn_pair *pair)
{
	const struct timeline *old = pair->comparison->old, *now = pair->comparison->now;
	const struct laid_line *before = &old->types[pair->old_type], *after = &now->types[pair->now_type];
	const char *name = now->plan->lines[pair->now_type].name, *was = old->plan->lines[pair->old_type].name;
	text_printf(out, "\"%s\"", name);
	if (strcmp(name, was) != 0)
		text_printf(out, ", was \"%s\"", was);
	text_printf(out, ", line %" PRIu32 ": ", pair->now_line);
	text_put_lengths(out, &now->plan->clock, after->cells, after->ticks);
	if (pair->comparison->same_clock && before->cells == after->cells && before->ticks == after->ticks) {
		text_put(out, ", as before");
		return;
	}
	text_put(out, "; was ");
	text_put_lengths(out, &old->plan->clock, before->cells, before->ticks);
}

static bool draw_pair(struct diff_drawing *drawing, const struct drawn_pair *pair)
{
	const char *name = pair->comparison->now->plan->lines[pair->now_type].name;
	size_t count = 0;
	drawing->pairs++;
	drawing->drawn[drawing->drawn_count++] = name;
	drawing->y += PX(14);
	put_pair_heading(&drawing->words, pair);
	draw_words(drawing, "name", SVG_NAME_SIZE, HEADING);
	for (size_t index = 0; index < pair->comparison->count; index++)
		if (change_is_of_line(&pair->comparison->changes[index], name))
			draw_change(drawing, pair->comparison, &pair->comparison->changes[index], &count);
	draw_more(drawing, count);
	drawing->y += PX(8);
	return draw_line_pair(drawing->svg, pair, &drawing->y);
}

static bool is_in_both(struct drawn_pair *pair)
{
	pair->old_line = picture_line_of_type(pair->comparison->old, pair->old_type);
	pair->now_line = picture_line_of_type(pair->comparison->now, pair->now_type);
	return pair->old_line != UINT32_MAX && pair->now_line != UINT32_MAX;
}

static bool draw_differing(struct diff_drawing *drawing, const struct comparison *comparison, struct drawn_pair *pair)
{
	const bool all = !signals_are_same(comparison);
	bool drawn = true;
	for (size_t old = 0; drawn && old < comparison->old->plan->line_count; old++) {
		const size_t now = comparison->line_of[old];
		if (now == NONE || (!all && is_same(comparison, &comparison->old->types[old], &comparison->now->types[now])))
			continue;
		pair->old_type = old;
		pair->now_type = now;
		if (drawing->pairs >= MOST_PAIRS)
			drawing->left_out++;
		else if (is_in_both(pair))
			drawn = draw_pair(drawing, pair);
	}
	return drawn;
}

static bool draw_lines(struct diff_drawing *drawing, const struct comparison *comparison)
{
	struct arena *arena = arena_create();
	struct drawn_pair pair = {.comparison = comparison};
	if (arena != NULL) {
		pair.old_pins = timeline_pins(comparison->old, arena);
		pair.now_pins = timeline_pins(comparison->now, arena);
	}
	const bool drawn = pair.old_pins != NULL && pair.now_pins != NULL && draw_differing(drawing, comparison, &pair);
	arena_destroy(arena);
	return drawn;
}

// The whole.

static bool draw_plan(struct diff_drawing *drawing, const struct plan_difference *plan)
{
	if (plan->bank_count > 0) {
		drawing->y += PX(10);
		put_bank_numbers(&drawing->words, plan);
		draw_words(drawing, "name", SVG_NAME_SIZE, HEADING);
	}
	if (plan->comparison == NULL) {
		put_only(&drawing->words, plan);
		draw_sentence(drawing);
		return true;
	}
	draw_facts(drawing, plan);
	draw_general(drawing, plan->comparison);
	drawing->unseen = drawing->unseen || plan->unseen != NULL;
	drawing->drawn_count = 0;
	if (plan->unseen == NULL && !draw_lines(drawing, plan->comparison))
		return false;
	draw_others(drawing, plan->comparison);
	return true;
}

static void draw_foot(struct diff_drawing *drawing)
{
	drawing->y += PX(10);
	if (drawing->left_out > 0) {
		text_put_count(&drawing->words, drawing->left_out, "line type more differs, and is not drawn", "line types more differ, and are not drawn");
		draw_words(drawing, "small", 13, SENTENCE);
	}
	if (drawing->pairs == 0 && drawing->unseen)
		return;
	text_put(&drawing->words, drawing->pairs > 0 ? "levels are those at the pins, to one scale of time; arrows go from where an edge was to where it is, rings are "
	                                               "around edges that are new or gone"
	                                             : "no line type that both frames have differs at the pins");
	draw_words(drawing, "small", 13, SENTENCE);
}

static bool draw_body(struct diff_drawing *drawing, const struct difference *difference)
{
	bool drawn = true;
	put_difference_headline(&drawing->words, difference);
	const bool fits = svg_words_width(text_string(&drawing->words), SVG_TITLE_SIZE) <= PAGE_WIDTH - 2 * MARGIN;
	draw_words(drawing, fits ? "title" : "name", fits ? SVG_TITLE_SIZE : SVG_NAME_SIZE, PX(48));
	draw_chips(drawing, difference);
	draw_set(drawing, difference);
	for (size_t index = 0; drawn && index < difference->plan_count; index++)
		drawn = draw_plan(drawing, &difference->plans[index]);
	draw_foot(drawing);
	return drawn;
}

bool view_difference_svg(struct text *out, const struct picture *picture, const struct difference *difference)
{
	struct text body = {0}, title = {0};
	struct svg body_svg = {.out = &body, .picture = picture}, svg = {.out = out, .picture = picture};
	struct diff_drawing drawing = {.svg = &body_svg};
	const bool drawn = draw_body(&drawing, difference);
	put_difference_headline(&title, difference);
	svg_begin(&svg, out, picture, PAGE_WIDTH, drawing.y + PX(10), text_string(&title),
	          "Line types that differ: regions and signals of the old line above those of the new one, to one scale of time, with marks from "
	          "where an edge was to where it is.");
	svg_put_drawn(&svg, &body);
	svg_end(&svg);
	svg_release(&svg, &title);
	svg_release(&svg, &drawing.words);
	return drawn && !out->failed;
}
