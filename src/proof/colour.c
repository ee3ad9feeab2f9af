// Colour: subcarrier cycles of every line, the phase at its start, and after how many lines and frames it repeats. Exact: what counts
// is the rest of tick counts modulo the denominator of cycles per tick.
#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "proof/modulo.h"
#include "proof/trial.h"

__extension__ typedef unsigned __int128 wide;

static bool multiply_checked(int64_t left, int64_t right, int64_t *product)
{
	wide value = (wide)left * (wide)right;
	if (value > INT64_MAX)
		return false;
	*product = (int64_t)value;
	return true;
}

// The ticks of a line and of any number of lines from it on, modulo the denominator of cycles per tick.
struct phases {
	const struct trial *trial;
	struct fraction cycles_per_tick;
	int64_t modulus;
	int64_t frame_rest;
};

static int64_t line_rest(const struct phases *phases, uint32_t line)
{
	return phases->trial->lap.line_ticks[line] % phases->modulus;
}

// Of the runs of so many lines, those that are no whole number of cycles.
struct broken_runs {
	uint32_t first_line;
	uint32_t count;
	int64_t rest;              // of the ticks of the first one
};

static struct broken_runs find_broken(const struct phases *phases, int64_t count)
{
	const uint32_t lines = phases->trial->timeline->line_count;
	const int64_t modulus = phases->modulus;
	struct broken_runs broken = {0};
	int64_t rest = multiply_modulo(count / lines % modulus, phases->frame_rest, modulus);
	uint32_t end = (uint32_t)(count % lines);
	for (uint32_t line = 0; line < end; line++)
		rest = add_modulo(rest, line_rest(phases, line), modulus);
	for (uint32_t line = 0; line < lines; line++) {
		if (rest != 0 && broken.count++ == 0) {
			broken.first_line = line;
			broken.rest = rest;
		}
		rest = add_modulo(rest, modulus - line_rest(phases, line), modulus);
		rest = add_modulo(rest, line_rest(phases, end), modulus);
		end = end + 1 == lines ? 0 : end + 1;
	}
	return broken;
}

static void measure_repeats(const struct phases *phases, struct colour_result *result)
{
	const int64_t modulus = phases->modulus, advance = result->phases.period_advance;
	result->repeats_frames = modulus / greatest_common_divisor(modulus, phases->frame_rest);
	result->repeats_known = multiply_checked(result->phases.period_lines, modulus / greatest_common_divisor(modulus, advance),
	                                         &result->repeats_lines);
}

static bool all_lines_equal(const struct trial *trial)
{
	for (uint32_t line = 1; line < trial->timeline->line_count; line++)
		if (trial->lap.line_ticks[line] != trial->lap.line_ticks[0])
			return false;
	return true;
}

// Cycles of so many ticks. False if they do not fit.
static bool cycles_of(const struct phases *phases, int64_t ticks, struct fraction *cycles)
{
	return fraction_multiply(fraction_whole(ticks), phases->cycles_per_tick, cycles);
}

static int64_t window_ticks(const struct phases *phases, uint32_t first, int64_t count)
{
	const struct lap *lap = &phases->trial->lap;
	const uint32_t lines = phases->trial->timeline->line_count;
	int64_t ticks = 0;
	if (!multiply_checked(count / lines, lap->ticks, &ticks))
		return -1;
	for (int64_t index = 0; index < count % lines; index++)
		if (__builtin_add_overflow(ticks, lap->line_ticks[(first + index) % lines], &ticks))
			return -1;
	return ticks;
}

// What is demanded and not met.
struct broken_phase {
	bool frames;
	int64_t count;             // of lines or frames
	struct broken_runs runs;   // of lines
	int64_t ticks;             // -1 if they do not fit
};

// "line 3 takes", "2 lines from line 3 on take", "1 frame takes".
static void put_run(struct text *text, const struct broken_phase *broken)
{
	if (!broken->frames && broken->count == 1)
		text_printf(text, "line %" PRIu32 " takes ", broken->runs.first_line);
	else if (!broken->frames)
		text_printf(text, "%" PRId64 " lines from line %" PRIu32 " on take ", broken->count, broken->runs.first_line);
	else
		text_printf(text, "%" PRId64 " frame%s ", broken->count, broken->count == 1 ? " takes" : "s take");
}

static void put_others(struct text *text, const struct broken_phase *broken, uint32_t lines)
{
	if (broken->frames || lines == 1)
		return;
	if (broken->runs.count == 1)
		text_put(text, broken->count == 1 ? "; all other lines are whole" : "; all other such runs are whole");
	else
		text_printf(text, "; %" PRIu32 " of %" PRIu32 " %s are not whole", broken->runs.count, lines,
		            broken->count == 1 ? "lines" : "such runs");
}

// A copy in the proofs' arena; NULL when memory is out. Releases the text.
static const char *take_words(const struct phases *phases, struct text *text)
{
	const char *words = text->failed ? NULL : arena_copy(phases->trial->proofs->arena, text_string(text), text->length);
	text_release(text);
	return words;
}

// The first line whose start has not the phase that it should.
static struct out_of_step first_out_of_step(const struct phases *phases, const struct broken_phase *broken,
                                            const struct line_phases *measured)
{
	const int64_t lines = phases->trial->timeline->line_count, line = broken->runs.first_line + broken->count % lines;
	const int64_t cycles = phases->cycles_per_tick.numerator % phases->modulus;
	struct out_of_step first = {.present = true,
	                            .by = phase_fraction(measured, multiply_modulo(broken->runs.rest, cycles, phases->modulus))};
	first.line = broken->frames ? 0 : (uint32_t)(line % lines);
	first.frame = broken->frames ? broken->count : broken->count / lines + line / lines;
	return first;
}

// ", so line 3 starts 1/2 of a cycle out of step", "line 3 of the next frame", "line 3 of frame 2".
static void put_out_of_step(struct text *text, const struct out_of_step *first)
{
	text_printf(text, ", so line %" PRIu32, first->line);
	if (first->frame == 1)
		text_put(text, " of the next frame");
	else if (first->frame > 1)
		text_printf(text, " of frame %" PRId64, first->frame);
	text_put(text, " starts ");
	text_put_fraction(text, first->by);
	text_put(text, " of a cycle out of step");
}

static const char *phase_words(const struct phases *phases, const struct broken_phase *broken, const struct out_of_step *first)
{
	struct fraction cycles;
	struct text text = {0};
	put_run(&text, broken);
	if (broken->ticks < 0 || !cycles_of(phases, broken->ticks, &cycles)) {
		text_put(&text, "no whole number of subcarrier cycles");
	} else {
		text_printf(&text, "%" PRId64 " ticks, ", broken->ticks);
		text_put_fraction(&text, cycles);
		text_put(&text, " cycles, expected a whole number");
	}
	put_out_of_step(&text, first);
	put_others(&text, broken, phases->trial->timeline->line_count);
	return take_words(phases, &text);
}

// A line must be a multiple of so many ticks for the demand to be met, if all lines are alike; 0 if that is not known.
static int64_t closing_step(const struct phases *phases, const struct broken_phase *broken, bool uniform)
{
	int64_t lines = broken->count;
	if (broken->frames && !multiply_checked(lines, phases->trial->timeline->line_count, &lines))
		return 0;
	const bool each_for_itself = !broken->frames && broken->count == 1;
	return uniform || each_for_itself ? phases->modulus / greatest_common_divisor(phases->modulus, lines) : 0;
}

static void put_lengths(struct text *text, int64_t ticks, int64_t step)
{
	const int64_t below = ticks / step * step, above = below > INT64_MAX - step ? 0 : below + step;
	text_put(text, "lines of ");
	if (below > 0)
		text_printf(text, "%" PRId64, below);
	if (above > 0)
		text_printf(text, "%s%" PRId64, below > 0 ? " or " : "", above);
	text_put(text, " ticks would meet it");
}

// How the plan could be mended; *hint is NULL where the machine, and not the plan, is at fault. False when memory is out.
static bool phase_hint(const struct phases *phases, const struct broken_phase *broken, const struct colour_result *result,
                       const char **hint)
{
	const struct timeline *timeline = phases->trial->timeline;
	const uint32_t line = broken->runs.first_line;
	const int64_t ticks = phases->trial->lap.line_ticks[line], step = closing_step(phases, broken, result->uniform);
	struct text text = {0};
	*hint = NULL;
	if (ticks != timeline->types[timeline->lines[line].type].ticks)
		return true;
	if (step > 0)
		put_lengths(&text, ticks, step);
	if (result->repeats_known && result->repeats_lines <= timeline->line_count)
		text_printf(&text, "%s \"every %" PRId64 " lines\"", text.length > 0 ? "; as they are, they meet" : "the lines meet",
		            result->repeats_lines);
	if (text.length > 0 || text.failed) {
		*hint = take_words(phases, &text);
		return *hint != NULL;
	}
	return true;
}

static bool phase_fails(const struct phases *phases, struct trial *trial, const struct broken_phase *broken,
                        const struct colour_result *result)
{
	const uint32_t cell = trial->timeline->lines[broken->runs.first_line].first_cell;
	struct counterexample found = {.present = true, .bank = trial->bank, .cell = cell,
	                               .state = trial->lap.states != NULL ? trial->lap.states[cell] : NO_STATE,
	                               .signal = SIZE_MAX};
	found.what = phase_words(phases, broken, &result->out_of_step);
	return phase_hint(phases, broken, result, &found.hint) && proof_fails(trial, PROOF_COLOUR, found);
}

static bool demand_phase(struct trial *trial, const struct phases *phases, struct colour_result *result)
{
	const struct clock *clock = &trial->timeline->plan->clock;
	struct broken_phase broken = {.frames = clock->phase == PHASE_FRAMES, .count = clock->phase_count};
	if (clock->phase == PHASE_FREE)
		return true;
	if (broken.frames) {
		broken.runs.rest = multiply_modulo(clock->phase_count % phases->modulus, phases->frame_rest, phases->modulus);
		if (broken.runs.rest == 0)
			return true;
		if (!multiply_checked(broken.count, trial->lap.ticks, &broken.ticks))
			broken.ticks = -1;
	} else {
		broken.runs = find_broken(phases, clock->phase_count);
		if (broken.runs.count == 0)
			return true;
		broken.ticks = window_ticks(phases, broken.runs.first_line, broken.count);
	}
	result->out_of_step = first_out_of_step(phases, &broken, &result->phases);
	return phase_fails(phases, trial, &broken, result);
}

// Keeps a result in the proofs' arena, where a trial's own memory does not reach. False when memory is out.
static bool keep_result(struct proofs *proofs, const struct colour_result *result)
{
	const uint32_t count = result->phases.run_count;
	struct phase_run *runs = arena_array(proofs->arena, count, sizeof *runs);
	if (runs == NULL)
		return false;
	memcpy(runs, result->phases.runs, count * sizeof *runs);
	proofs->colour = *result;
	proofs->colour.phases.runs = runs;
	return true;
}

bool prove_colour(struct trial *trial)
{
	const struct clock *clock = &trial->timeline->plan->clock;
	struct proofs *proofs = trial->proofs;
	if (!clock->has_subcarrier) {
		proofs->proof[PROOF_COLOUR].verdict = VERDICT_ABSENT;
		return true;
	}
	struct phases phases = {.trial = trial};
	struct colour_result result = {.uniform = all_lines_equal(trial), .cycles_per_line = FRACTION_ZERO,
	                               .cycles_per_frame = FRACTION_ZERO, .out_of_step.by = FRACTION_ZERO};
	if (!fraction_divide(clock->subcarrier_hz, clock->master_hz, &phases.cycles_per_tick)) {
		proof_not_judged(trial, PROOF_COLOUR, "not judged: subcarrier cycles per tick do not fit 64 bits");
		return true;
	}
	phases.modulus = phases.cycles_per_tick.denominator;
	phases.frame_rest = trial->lap.ticks % phases.modulus;
	if (!line_phases_measure(trial->lap.line_ticks, trial->timeline->line_count, phases.cycles_per_tick, trial->arena, &result.phases))
		return false;
	measure_repeats(&phases, &result);
	// What does not fit stays 0.
	(void)cycles_of(&phases, trial->lap.line_ticks[0], &result.cycles_per_line);
	(void)cycles_of(&phases, trial->lap.ticks, &result.cycles_per_frame);
	bool failed_before = proofs->proof[PROOF_COLOUR].verdict == VERDICT_FAIL;
	if (!demand_phase(trial, &phases, &result))
		return false;
	bool fails_first = proofs->proof[PROOF_COLOUR].verdict == VERDICT_FAIL && !failed_before;
	return !(trial->first || fails_first) || keep_result(proofs, &result);
}
