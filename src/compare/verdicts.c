// What the machine does, by the proofs that need no images: colour, limits, speed, and the frame as a whole.
#include <inttypes.h>

#include "base/arena.h"
#include "compare/parts.h"
#include "view/figures.h"

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

static const char *verdict_word(const struct proofs *proofs, enum proof_kind kind)
{
	switch (proofs->proof[kind].verdict) {
	case VERDICT_PASS: return "kept";
	case VERDICT_FAIL: return "not kept";
	case VERDICT_ABSENT: break;
	}
	return NULL;
}

static void put_cycles(struct text *out, const struct proofs *proofs)
{
	const struct colour_result *colour = &proofs->colour;
	if (proofs->proof[PROOF_COLOUR].verdict == VERDICT_ABSENT || colour->cycles_per_line.numerator == 0)
		return;
	text_put_fraction(out, colour->cycles_per_line);
	text_put(out, colour->uniform ? " cycles a line" : " cycles in the first line");
	if (colour->repeats_known)
		text_printf(out, ", repeats after %" PRId64 " line%s and %" PRId64 " frame%s", colour->repeats_lines,
		            colour->repeats_lines == 1 ? "" : "s", colour->repeats_frames, colour->repeats_frames == 1 ? "" : "s");
}

// "kept", "missed", or NULL for what is not judged.
static const char *limit_word(const struct proofs *proofs, enum limit_item item)
{
	const struct plan *plan = proofs->timeline->plan;
	if (plan->standard == NULL)
		return NULL;
	const struct limit_verdict *verdict = &proofs->limits.rows[item].grades[plan->grade];
	return !verdict->known || !verdict->judgement.binds ? NULL : verdict->judgement.kept ? "kept" : "missed";
}

static void compare_proofs(struct comparing *comparing, const struct proofs *old, const struct proofs *now)
{
	struct text left = {0}, right = {0};
	compare_words(comparing, CHANGE_VERDICTS, "the colour phase that is asked", verdict_word(old, PROOF_COLOUR), verdict_word(now, PROOF_COLOUR));
	put_cycles(&left, old);
	put_cycles(&right, now);
	compare_texts(comparing, CHANGE_VERDICTS, "colour", &left, &right);
	compare_words(comparing, CHANGE_VERDICTS, "the time that the EEPROM has", verdict_word(old, PROOF_SPEED), verdict_word(now, PROOF_SPEED));
	compare_words(comparing, CHANGE_VERDICTS, "the limits of the standard", verdict_word(old, PROOF_LIMITS), verdict_word(now, PROOF_LIMITS));
	for (unsigned item = 0; item < ITEM_COUNT; item++)
		compare_words(comparing, CHANGE_LIMITS, limit_item_facts((enum limit_item)item)->name, limit_word(old, (enum limit_item)item),
		              limit_word(now, (enum limit_item)item));
}

void compare_verdicts(struct comparing *comparing)
{
	struct proofs *old = proofs_of_plan(comparing->old_timeline), *now = proofs_of_plan(comparing->now_timeline);
	struct text left = {0}, right = {0};
	put_frame(&left, comparing->old_timeline);
	put_frame(&right, comparing->now_timeline);
	compare_texts(comparing, CHANGE_VERDICTS, "the frame", &left, &right);
	if (old != NULL && now != NULL)
		compare_proofs(comparing, old, now);
	comparing->failed = comparing->failed || old == NULL || now == NULL;
	proofs_destroy(old);
	proofs_destroy(now);
}
