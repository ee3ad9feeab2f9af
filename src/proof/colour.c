// Colour: subcarrier cycles of every line, and after how many lines and frames the phase repeats. Exact: what counts is the
// rest of tick counts modulo the denominator of cycles per tick.
#include <inttypes.h>

#include "base/arena.h"
#include "base/text.h"
#include "proof/trial.h"

__extension__ typedef unsigned __int128 wide;

static int64_t multiply_modulo(int64_t left, int64_t right, int64_t modulus)
{
	return (int64_t)((wide)left * (wide)right % (wide)modulus);
}

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

static int64_t add_modulo(int64_t left, int64_t right, int64_t modulus)
{
	return left >= modulus - right ? left - (modulus - right) : left + right;
}

// Of the runs of so many lines, those that are no whole number of cycles.
struct broken_runs {
	uint32_t first_line;
	uint32_t count;
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
		if (rest != 0 && broken.count++ == 0)
			broken.first_line = line;
		rest = add_modulo(rest, modulus - line_rest(phases, line), modulus);
		rest = add_modulo(rest, line_rest(phases, end), modulus);
		end = end + 1 == lines ? 0 : end + 1;
	}
	return broken;
}

// The smallest shift that maps the rests of the lines onto themselves, around the frame: the classic failure function of a
// string gives its shortest period, which counts here only if it divides the length. 0 when memory is out.
static uint32_t rest_period(const struct phases *phases)
{
	const uint32_t lines = phases->trial->timeline->line_count;
	uint32_t *border = arena_array(phases->trial->arena, lines, sizeof *border);
	if (border == NULL)
		return 0;
	uint32_t length = 0;
	for (uint32_t line = 1; line < lines; line++) {
		while (length > 0 && line_rest(phases, line) != line_rest(phases, length))
			length = border[length - 1];
		length += line_rest(phases, line) == line_rest(phases, length);
		border[line] = length;
	}
	uint32_t period = lines - border[lines - 1];
	return lines % period == 0 ? period : lines;
}

// After `period` lines the rests repeat; after so many periods their sum is whole too.
static bool measure_repeats(const struct phases *phases, struct colour_result *result)
{
	uint32_t period = rest_period(phases);
	if (period == 0)
		return false;
	int64_t sum = 0;
	for (uint32_t line = 0; line < period; line++)
		sum = add_modulo(sum, line_rest(phases, line), phases->modulus);
	result->repeats_frames = phases->modulus / greatest_common_divisor(phases->modulus, phases->frame_rest);
	result->repeats_known = multiply_checked(period, phases->modulus / greatest_common_divisor(phases->modulus, sum),
	                                         &result->repeats_lines);
	return true;
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

static const char *phase_words(const struct phases *phases, const struct broken_phase *broken)
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
	found.what = phase_words(phases, broken);
	return phase_hint(phases, broken, result, &found.hint) && proof_fails(trial, PROOF_COLOUR, found);
}

static bool demand_phase(struct trial *trial, const struct phases *phases, const struct colour_result *result)
{
	const struct clock *clock = &trial->timeline->plan->clock;
	struct broken_phase broken = {.frames = clock->phase == PHASE_FRAMES, .count = clock->phase_count};
	if (clock->phase == PHASE_FREE)
		return true;
	if (broken.frames) {
		if (multiply_modulo(clock->phase_count % phases->modulus, phases->frame_rest, phases->modulus) == 0)
			return true;
		if (!multiply_checked(broken.count, trial->lap.ticks, &broken.ticks))
			broken.ticks = -1;
	} else {
		broken.runs = find_broken(phases, clock->phase_count);
		if (broken.runs.count == 0)
			return true;
		broken.ticks = window_ticks(phases, broken.runs.first_line, broken.count);
	}
	return phase_fails(phases, trial, &broken, result);
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
	struct colour_result result = {all_lines_equal(trial), FRACTION_ZERO, FRACTION_ZERO, false, 0, 0};
	if (!fraction_divide(clock->subcarrier_hz, clock->master_hz, &phases.cycles_per_tick)) {
		proof_not_judged(trial, PROOF_COLOUR, "not judged: subcarrier cycles per tick do not fit 64 bits");
		return true;
	}
	phases.modulus = phases.cycles_per_tick.denominator;
	phases.frame_rest = trial->lap.ticks % phases.modulus;
	if (!measure_repeats(&phases, &result))
		return false;
	if (!cycles_of(&phases, trial->lap.line_ticks[0], &result.cycles_per_line) ||
	    !cycles_of(&phases, trial->lap.ticks, &result.cycles_per_frame))
		result.repeats_known = false;
	bool failed_before = proofs->proof[PROOF_COLOUR].verdict == VERDICT_FAIL;
	if (!demand_phase(trial, &phases, &result))
		return false;
	bool fails_first = proofs->proof[PROOF_COLOUR].verdict == VERDICT_FAIL && !failed_before;
	if (trial->first || fails_first)
		proofs->colour = result;
	return true;
}
