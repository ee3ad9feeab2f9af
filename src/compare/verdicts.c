// What the machine does, by the proofs that need no images: the frame, colour, speed, limits.
#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "compare/parts.h"
#include "view/figures.h"
#include "view/limits.h"

#define MOST_FACTS 4

// `absent` stands for a side that has no such thing.
static void add_fact(struct comparing *comparing, const char *what, const char *absent, struct text *old, struct text *now)
{
	const char *left = keep_text(comparing, old), *right = keep_text(comparing, now);
	if (comparing->failed || (left[0] == '\0' && right[0] == '\0'))
		return;
	comparing->facts[comparing->fact_count++] = (struct fact){what, left[0] != '\0' ? left : absent, right[0] != '\0' ? right : absent,
	                                                          strcmp(left, right) == 0};
}

static void put_frame(struct text *out, const struct timeline *timeline)
{
	struct fraction seconds, rate;
	text_put_count(out, timeline->line_count, "line", "lines");
	text_put(out, ", ");
	text_put_count(out, timeline->cell_count, "cell", "cells");
	text_put(out, ", ");
	text_put_count(out, (uint64_t)timeline->tick_count, "tick", "ticks");
	if (seconds_of_ticks(&timeline->plan->clock, timeline->tick_count, &seconds) && fraction_divide(fraction_whole(1), seconds, &rate)) {
		text_put(out, ", ");
		text_put_rounded(out, rate, 3);
		text_put(out, " Hz");
	}
}

// Puts why a proof could not be judged, which fails it too: then it has no figures. False if it was judged.
static bool put_not_judged(struct text *out, const struct proof *proof)
{
	if (proof->verdict != VERDICT_FAIL || proof->counterexample.present || proof->counterexample.what == NULL)
		return false;
	text_put(out, proof->counterexample.what);
	return true;
}

static void put_colour(struct text *out, const struct proofs *proofs)
{
	const struct colour_result *colour = &proofs->colour;
	const enum verdict verdict = proofs->proof[PROOF_COLOUR].verdict;
	if (!proofs->timeline->plan->clock.has_subcarrier || put_not_judged(out, &proofs->proof[PROOF_COLOUR]))
		return;
	text_put(out, verdict == VERDICT_FAIL ? "NOT in step as asked" : verdict == VERDICT_PASS ? "in step as asked" : "no phase is asked");
	if (colour->cycles_per_line.numerator != 0) {
		text_put(out, ", ");
		text_put_exact(out, colour->cycles_per_line);
		text_put(out, colour->uniform ? " cycles a line" : " cycles in the first line");
	}
	if (!colour->repeats_known)
		return;
	text_put(out, ", repeats after ");
	text_put_count(out, (uint64_t)colour->repeats_lines, "line", "lines");
	text_put(out, " and ");
	text_put_count(out, (uint64_t)colour->repeats_frames, "frame", "frames");
}

static void put_speed(struct text *out, const struct proofs *proofs)
{
	const struct speed_result *speed = &proofs->speed;
	struct fraction slack = speed->slack_s;
	if (proofs->proof[PROOF_SPEED].verdict == VERDICT_ABSENT || put_not_judged(out, &proofs->proof[PROOF_SPEED]))
		return;
	const bool fails = proofs->proof[PROOF_SPEED].verdict == VERDICT_FAIL;
	slack.numerator = slack.numerator < 0 ? -slack.numerator : slack.numerator;
	text_put(out, fails ? "TOO SLOW by " : "in time, ");
	text_put_time_in(out, slack, UNIT_NANOSECONDS);
	text_put(out, fails ? "" : " to spare");
}

static void put_limits(struct text *out, const struct proofs *proofs)
{
	const struct plan *plan = proofs->timeline->plan;
	const struct limits_result *limits = &proofs->limits;
	if (plan->standard == NULL || put_not_judged(out, &proofs->proof[PROOF_LIMITS]))
		return;
	text_printf(out, "%u of %u kept at %s grade of %s", limits->kept[plan->grade], limits->kept[plan->grade] + limits->missed[plan->grade],
	            limit_grade_name(plan->grade), strcmp(plan->standard->name, "own") == 0 ? "the plan's own" : plan->standard->name);
	if (limits->unknown[plan->grade] > 0)
		text_printf(out, ", %u not measured", limits->unknown[plan->grade]);
	if (proofs->proof[PROOF_LIMITS].counterexample.present)
		text_printf(out, "; %s", proofs->proof[PROOF_LIMITS].counterexample.what);
	if (limits->no_vertical_sync)
		text_put(out, "; vertical sync never comes");
}

static void compare_facts(struct comparing *comparing, const struct proofs *old, const struct proofs *now)
{
	static const struct {
		const char *what, *absent;
		void (*put)(struct text *out, const struct proofs *proofs);
	} kinds[] = {
		{"colour", "no subcarrier", put_colour},
		{"speed of the chips", "not asked", put_speed},
		{"limits", "no standard", put_limits},
	};
	for (size_t kind = 0; kind < sizeof kinds / sizeof *kinds; kind++) {
		struct text left = {0}, right = {0};
		kinds[kind].put(&left, old);
		kinds[kind].put(&right, now);
		add_fact(comparing, kinds[kind].what, kinds[kind].absent, &left, &right);
	}
}

// Limits one by one, where the verdict changed.

enum limit_state { LIMIT_NOT_JUDGED, LIMIT_KEPT, LIMIT_MISSED };

static enum limit_state limit_state(const struct proofs *proofs, enum limit_item item)
{
	const struct plan *plan = proofs->timeline->plan;
	if (plan->standard == NULL)
		return LIMIT_NOT_JUDGED;
	const struct limit_verdict *verdict = &proofs->limits.rows[item].grades[plan->grade];
	return !verdict->known || !verdict->judgement.binds ? LIMIT_NOT_JUDGED : verdict->judgement.kept ? LIMIT_KEPT : LIMIT_MISSED;
}

static const char *limit_words(struct comparing *comparing, const struct proofs *proofs, enum limit_item item)
{
	static const char *const words[] = {[LIMIT_NOT_JUDGED] = "not judged", [LIMIT_KEPT] = "kept", [LIMIT_MISSED] = "MISSED"};
	const enum limit_state state = limit_state(proofs, item);
	struct text text = {0};
	text_put(&text, words[state]);
	if (state != LIMIT_NOT_JUDGED) {
		text_put(&text, " (");
		put_limit_measured(&text, proofs, item);
		text_put(&text, ")");
	}
	return keep_text(comparing, &text);
}

static void compare_one_by_one(struct comparing *comparing, const struct proofs *old, const struct proofs *now)
{
	for (unsigned index = 0; index < ITEM_COUNT; index++) {
		const enum limit_item item = (enum limit_item)index;
		if (limit_state(old, item) == limit_state(now, item))
			continue;
		add_change(comparing, (struct change){.section = CHANGE_LIMITS, .kind = limit_state(now, item) == LIMIT_MISSED ? "missed" :
		                                      limit_state(now, item) == LIMIT_KEPT ? "kept" : "not-judged",
		                                      .what = limit_item_facts(item)->name, .old = limit_words(comparing, old, item),
		                                      .now = limit_words(comparing, now, item)});
	}
}

// "2 (line rate, burst length)".
static const char *missed_words(struct comparing *comparing, const struct proofs *proofs)
{
	struct text names = {0};
	unsigned count = 0;
	if (proofs->timeline->plan->standard == NULL || (proofs->limits.measurement != NULL && proofs->limits.measurement->flaw != NULL))
		return "not judged";
	for (unsigned item = 0; item < ITEM_COUNT; item++)
		if (limit_state(proofs, (enum limit_item)item) == LIMIT_MISSED)
			text_printf(&names, "%s%s", count++ > 0 ? ", " : "", limit_item_facts((enum limit_item)item)->name);
	const char *kept = keep_text(comparing, &names);
	return count > 0 ? keep_words(comparing, "%u (%s)", count, kept) : "none";
}

// Against another standard or grade most limits have other bounds, and that verdicts differ follows from these, not from the plan: then it is
// only told which are missed.
static void compare_limits(struct comparing *comparing, const struct proofs *old, const struct proofs *now)
{
	const struct standard *before = comparing->old->standard, *after = comparing->now->standard;
	if (before != NULL && after != NULL && strcmp(before->name, after->name) == 0 && comparing->old->grade == comparing->now->grade)
		compare_one_by_one(comparing, old, now);
	else if (after != NULL)
		compare_words(comparing, CHANGE_LIMITS, "limits missed", missed_words(comparing, old), missed_words(comparing, now));
}

void compare_verdicts(struct comparing *comparing)
{
	struct proofs *old = proofs_of_plan(comparing->old_timeline), *now = proofs_of_plan(comparing->now_timeline);
	struct text left = {0}, right = {0};
	comparing->facts = arena_array(comparing->arena, MOST_FACTS, sizeof *comparing->facts);
	comparing->failed = comparing->failed || old == NULL || now == NULL || comparing->facts == NULL;
	put_frame(&left, comparing->old_timeline);
	put_frame(&right, comparing->now_timeline);
	add_fact(comparing, "frame", "none", &left, &right);
	if (!comparing->failed) {
		compare_facts(comparing, old, now);
		compare_limits(comparing, old, now);
	}
	proofs_destroy(old);
	proofs_destroy(now);
}
