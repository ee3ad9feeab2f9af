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

// The first line from which `count` lines are no whole number of cycles; UINT32_MAX if there is none.
static uint32_t first_broken_window(const struct phases *phases, int64_t count)
{
	const uint32_t lines = phases->trial->timeline->line_count;
	const int64_t modulus = phases->modulus;
	int64_t rest = multiply_modulo(count / lines % modulus, phases->frame_rest, modulus);
	uint32_t end = (uint32_t)(count % lines);
	for (uint32_t line = 0; line < end; line++)
		rest = add_modulo(rest, line_rest(phases, line), modulus);
	for (uint32_t line = 0; line < lines; line++) {
		if (rest != 0)
			return line;
		rest = add_modulo(rest, modulus - line_rest(phases, line), modulus);
		rest = add_modulo(rest, line_rest(phases, end), modulus);
		end = end + 1 == lines ? 0 : end + 1;
	}
	return UINT32_MAX;
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

static const char *phase_words(const struct phases *phases, uint32_t first, int64_t count, bool frames, int64_t ticks)
{
	struct fraction cycles;
	struct arena *arena = phases->trial->proofs->arena;
	const char *unit = frames ? count == 1 ? "frame" : "frames" : count == 1 ? "line" : "lines";
	if (ticks < 0 || !cycles_of(phases, ticks, &cycles))
		return arena_format(arena, "%" PRId64 " %s from line %" PRIu32 " on are no whole number of subcarrier cycles",
		                    count, unit, first);
	struct text text = {0};
	text_printf(&text, "%" PRId64 " %s from line %" PRIu32 " on take %" PRId64 " ticks, which are ", count, unit, first,
	            ticks);
	text_put_fraction(&text, cycles);
	text_put(&text, " subcarrier cycles, expected a whole number");
	const char *words = text.failed ? NULL : arena_copy(arena, text_string(&text), text.length);
	text_release(&text);
	return words;
}

static bool phase_fails(struct trial *trial, const struct phases *phases, uint32_t line, bool frames)
{
	int64_t count = trial->timeline->plan->clock.phase_count, ticks = -1;
	if (!frames)
		ticks = window_ticks(phases, line, count);
	else if (!multiply_checked(count, trial->lap.ticks, &ticks))
		ticks = -1;
	uint32_t cell = trial->timeline->lines[line].first_cell;
	struct counterexample found = {.present = true, .bank = trial->bank, .cell = cell,
	                               .state = trial->lap.states != NULL ? trial->lap.states[cell] : NO_STATE,
	                               .signal = SIZE_MAX};
	found.what = phase_words(phases, line, count, frames, ticks);
	return proof_fails(trial, PROOF_COLOUR, found);
}

static bool demand_phase(struct trial *trial, const struct phases *phases)
{
	const struct clock *clock = &trial->timeline->plan->clock;
	if (clock->phase == PHASE_FRAMES &&
	    multiply_modulo(clock->phase_count % phases->modulus, phases->frame_rest, phases->modulus) != 0)
		return phase_fails(trial, phases, 0, true);
	if (clock->phase != PHASE_LINES)
		return true;
	uint32_t broken = first_broken_window(phases, clock->phase_count);
	return broken == UINT32_MAX || phase_fails(trial, phases, broken, false);
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
	if (!demand_phase(trial, &phases))
		return false;
	bool fails_first = proofs->proof[PROOF_COLOUR].verdict == VERDICT_FAIL && !failed_before;
	if (trial->bank == 0 || fails_first)
		proofs->colour = result;
	return true;
}
