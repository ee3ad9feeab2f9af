// What colour found, for people and for programs.
#include <inttypes.h>

#include "base/text.h"
#include "view/proofs.h"
#include "view/proofs_shared.h"

static void put_every(struct text *out, int64_t count, const char *one, const char *many)
{
	if (count == 1)
		text_printf(out, "every %s", one);
	else
		text_printf(out, "every %" PRId64 " %s", count, many);
}

static void put_phase(struct text *out, const struct clock *clock)
{
	switch (clock->phase) {
	case PHASE_FREE: text_put(out, "free"); break;
	case PHASE_LINES: put_every(out, clock->phase_count, "line", "lines"); break;
	case PHASE_FRAMES: put_every(out, clock->phase_count, "frame", "frames"); break;
	}
}

static void put_cycles(struct text *out, const struct colour_result *colour)
{
	if (colour->cycles_per_line.numerator == 0 || colour->cycles_per_frame.numerator == 0) {
		text_put(out, "cycles a line or frame do not fit 64 bits");
	} else if (colour->uniform) {
		text_put_exact(out, colour->cycles_per_line);
		text_put(out, " cycles a line");
	} else {
		text_put(out, "lines differ, the first has ");
		text_put_exact(out, colour->cycles_per_line);
		text_put(out, " cycles; ");
		text_put_exact(out, colour->cycles_per_frame);
		text_put(out, " cycles a frame");
	}
}

static void put_repeats(struct text *out, const struct colour_result *colour)
{
	if (!colour->repeats_known) {
		text_put(out, "repeats too seldom to count");
		return;
	}
	text_put(out, "repeats ");
	put_every(out, colour->repeats_lines, "line", "lines");
	text_put(out, " and ");
	put_every(out, colour->repeats_frames, "frame", "frames");
}

// What stands before the value number `index` of so many: ", ", or at last " and ".
static const char *between(size_t index, size_t count, const char *last)
{
	return index == 0 ? "" : index + 1 == count ? last : ", ";
}

// The phases of all lines until they repeat, in their order.
static void put_turns(struct text *out, const struct colour_result *colour)
{
	const size_t count = (size_t)colour->repeats_lines;
	text_put(out, "lines start at ");
	for (size_t line = 0; line < count; line++) {
		text_put(out, between(line, count, " and "));
		text_put_fraction(out, line_phase(&colour->phases, (int64_t)line));
	}
	text_put(out, " of a cycle in turn; the phase ");
	put_repeats(out, colour);
}

#define STEPS_SHOWN 3

// The lines of a period that advance the phase alike.
struct step {
	int64_t advance;
	uint32_t lines;
	uint32_t first_line;
};

struct step_list {
	struct step steps[STEPS_SHOWN];
	size_t count;
	uint32_t other_lines;
};

static void note_step(struct step_list *list, const struct phase_run *run)
{
	for (size_t index = 0; index < list->count; index++) {
		if (list->steps[index].advance == run->advance) {
			list->steps[index].lines += run->lines;
			return;
		}
	}
	if (list->count < STEPS_SHOWN)
		list->steps[list->count++] = (struct step){run->advance, run->lines, run->first_line};
	else
		list->other_lines += run->lines;
}

// Of a long fraction it is the decimal that tells a reader something.
static void put_advance(struct text *out, struct fraction advance)
{
	if (advance.denominator < 100)
		text_put_fraction(out, advance);
	else
		text_put_exact(out, advance);
}

// "stays", "advances by 3/4 of a cycle", and shorter where a step before it said as much.
static void put_move(struct text *out, const struct line_phases *phases, const struct step_list *list, size_t index)
{
	const bool goes_on = index > 0 && list->steps[index - 1].advance != 0;
	if (list->steps[index].advance == 0) {
		text_put(out, "stays");
		return;
	}
	text_put(out, goes_on ? "by " : "advances by ");
	put_advance(out, phase_fraction(phases, list->steps[index].advance));
	text_put(out, goes_on || index > 1 ? "" : " of a cycle");
}

// How lines of several kinds move the phase, counted over the frame: "stays in 248 lines and advances by 3/4 of a cycle in 14 (line 83
// first)".
static void put_steps(struct text *out, const struct line_phases *phases, uint32_t periods)
{
	struct step_list list = {.count = 0};
	for (uint32_t run = 0; run < phases->run_count; run++)
		note_step(&list, &phases->runs[run]);
	for (size_t index = 0; index < list.count; index++) {
		const struct step *step = &list.steps[index];
		const uint32_t lines = step->lines * periods;
		text_put(out, between(index, list.count, list.other_lines > 0 ? ", " : " and "));
		put_move(out, phases, &list, index);
		text_put(out, " in ");
		if (index == 0)
			text_put_count(out, lines, "line", "lines");
		else
			text_printf(out, "%" PRIu32 " (line %" PRIu32 "%s)", lines, step->first_line, lines == 1 ? "" : " first");
	}
	if (list.other_lines > 0)
		text_printf(out, " and otherwise in %" PRIu32, list.other_lines * periods);
}

// The phases at which lines start, if they are few.
static void put_starts(struct text *out, const struct line_phases *phases)
{
	struct fraction values[PHASES_LISTED];
	const size_t count = line_phases_distinct(phases, values);
	for (size_t index = 0; index < count; index++) {
		text_put(out, index == 0 ? "; lines start at " : between(index, count, " or "));
		text_put_fraction(out, values[index]);
	}
}

static void put_phases(struct text *out, const struct colour_result *colour, uint32_t lines)
{
	const struct line_phases *phases = &colour->phases;
	if (colour->repeats_known && colour->repeats_lines == 1) {
		text_put(out, "the phase is the same at every line and frame");
	} else if (colour->repeats_known && colour->repeats_lines <= PHASES_LISTED) {
		put_turns(out, colour);
	} else if (phases->period_lines == 1) {
		text_put(out, "the phase advances by ");
		text_put_exact(out, phase_fraction(phases, phases->period_advance));
		text_put(out, " of a cycle a line and ");
		put_repeats(out, colour);
	} else {
		text_put(out, "the phase ");
		put_steps(out, phases, lines / phases->period_lines);
		put_starts(out, phases);
		text_put(out, "; the phase ");
		put_repeats(out, colour);
	}
}

void put_colour(struct text *out, const struct proofs *proofs)
{
	if (proofs->proof[PROOF_COLOUR].verdict == VERDICT_ABSENT) {
		text_put(out, "the plan has no subcarrier");
		return;
	}
	put_cycles(out, &proofs->colour);
	text_put(out, "; ");
	put_phases(out, &proofs->colour, proofs->timeline->line_count);
	text_put(out, "; asked: ");
	put_phase(out, &plan_of(proofs)->clock);
}

static json_t *asked_json(const struct clock *clock)
{
	struct text words = {0};
	put_phase(&words, clock);
	json_t *string = words.failed ? NULL : json_string(text_string(&words));
	text_release(&words);
	return string;
}

static json_t *run_json(const struct line_phases *phases, const struct phase_run *run)
{
	json_t *object = json_object();
	json_put(&object, "line", json_integer(run->first_line));
	json_put(&object, "lines", json_integer(run->lines));
	json_put(&object, "phase", json_fraction(phase_fraction(phases, run->phase)));
	json_put(&object, "advance", json_fraction(phase_fraction(phases, run->advance)));
	return object;
}

static json_t *phases_json(const struct line_phases *phases)
{
	json_t *object = json_object(), *runs = json_array();
	const uint32_t shown = phases->run_count < COLOUR_RUNS ? phases->run_count : COLOUR_RUNS;
	for (uint32_t run = 0; run < shown; run++)
		json_append(&runs, run_json(phases, &phases->runs[run]));
	json_put(&object, "period", json_integer(phases->period_lines));
	json_put(&object, "advance", json_fraction(phase_fraction(phases, phases->period_advance)));
	json_put(&object, "runs", runs);
	if (shown < phases->run_count)
		json_put(&object, "more_runs", json_integer(phases->run_count - shown));
	return object;
}

static json_t *out_of_step_json(const struct out_of_step *first)
{
	json_t *object = json_object();
	json_put(&object, "line", json_integer(first->line));
	json_put(&object, "frame", json_integer(first->frame));
	json_put(&object, "by", json_fraction(first->by));
	return object;
}

void json_put_colour(json_t **object, const struct proofs *proofs)
{
	const struct colour_result *colour = &proofs->colour;
	json_put(object, "uniform", json_boolean(colour->uniform));
	if (colour->cycles_per_line.numerator != 0)
		json_put_fraction(object, "cycles_per_line", colour->cycles_per_line);
	if (colour->cycles_per_frame.numerator != 0)
		json_put_fraction(object, "cycles_per_frame", colour->cycles_per_frame);
	if (colour->repeats_known)
		json_put(object, "repeats_lines", json_integer(colour->repeats_lines));
	json_put(object, "repeats_frames", json_integer(colour->repeats_frames));
	json_put(object, "phases", phases_json(&colour->phases));
	if (colour->out_of_step.present)
		json_put(object, "out_of_step", out_of_step_json(&colour->out_of_step));
	json_put(object, "asked", asked_json(&plan_of(proofs)->clock));
}
