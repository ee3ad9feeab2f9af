// Sweep: every value of some state bits comes up within a given time, so that a raster can refresh dynamic memory.
#include <inttypes.h>

#include "base/arena.h"
#include "base/text.h"
#include "proof/trial.h"

#define NEVER (-1)

struct gaps {
	int64_t *last_tick;        // [value]: when it came up last; NEVER
	uint32_t value_count;
	int64_t worst_ticks;
	uint32_t worst_value;
	uint32_t worst_cell;       // the cell that ends the gap
	uint64_t missing;
	uint32_t first_missing;
};

// Twice around the loop, so that the gap over its end is seen.
static void measure_gaps(const struct trial *trial, const struct sweep *sweep, struct gaps *gaps)
{
	int64_t tick = 0;
	for (unsigned lap = 0; lap < 2; lap++) {
		for (uint32_t cell = 0; cell < trial->timeline->cell_count; cell++) {
			uint32_t value = trial->lap.states[cell] >> sweep->low & (gaps->value_count - 1);
			int64_t gap = gaps->last_tick[value] == NEVER ? 0 : tick - gaps->last_tick[value];
			if (gap > gaps->worst_ticks) {
				gaps->worst_ticks = gap;
				gaps->worst_value = value;
				gaps->worst_cell = cell;
			}
			gaps->last_tick[value] = tick;
			tick += lap_cell_ticks(trial, cell);
		}
	}
}

static void count_missing(struct gaps *gaps)
{
	for (uint32_t value = 0; value < gaps->value_count; value++) {
		if (gaps->last_tick[value] != NEVER)
			continue;
		if (gaps->missing == 0)
			gaps->first_missing = value;
		gaps->missing++;
	}
}

static const char *missing_words(const struct trial *trial, const struct sweep *sweep, const struct gaps *gaps)
{
	return arena_format(trial->proofs->arena, "%" PRIu64 " of %" PRIu32 " values of %s never come up, expected all: the first "
	                    "is %" PRIu32, gaps->missing, gaps->value_count, sweep->text, gaps->first_missing);
}

static void put_time(struct text *text, struct fraction seconds)
{
	struct fraction microseconds = seconds;
	bool fits = fraction_multiply(seconds, fraction_whole(1000000), &microseconds);
	text_put_decimal(text, microseconds, 3);
	text_put(text, fits ? " us" : " s");
}

static const char *late_words(const struct trial *trial, const struct sweep *sweep, const struct gaps *gaps,
                              struct fraction gap_s)
{
	struct text text = {0};
	text_printf(&text, "value %" PRIu32 " of %s comes up again only after ", gaps->worst_value, sweep->text);
	put_time(&text, gap_s);
	text_put(&text, ", expected within ");
	put_time(&text, sweep->within_s);
	const char *words = text.failed ? NULL : arena_copy(trial->proofs->arena, text_string(&text), text.length);
	text_release(&text);
	return words;
}

static bool sweep_fails(struct trial *trial, const struct sweep *sweep, const struct gaps *gaps, struct fraction gap_s)
{
	struct counterexample found = {.bank = trial->bank, .signal = SIZE_MAX};
	if (gaps->missing > 0) {
		found.what = missing_words(trial, sweep, gaps);
		return proof_fails(trial, PROOF_SWEEP, found);
	}
	found.present = true;
	found.cell = gaps->worst_cell;
	found.state = trial->lap.states[gaps->worst_cell];
	found.what = late_words(trial, sweep, gaps, gap_s);
	return proof_fails(trial, PROOF_SWEEP, found);
}

static void note_worst(struct sweep_result *result, const struct gaps *gaps, struct fraction gap_s)
{
	result->values = gaps->value_count;
	if (gaps->missing > result->missing) {
		result->missing = gaps->missing;
		result->first_missing = gaps->first_missing;
	}
	if (fraction_compare(gap_s, result->worst_gap_s) > 0) {
		result->worst_gap_s = gap_s;
		result->worst_value = gaps->worst_value;
	}
}

static bool prove_one(struct trial *trial, size_t index)
{
	const struct plan *plan = trial->timeline->plan;
	const struct sweep *sweep = &plan->sweeps[index];
	struct gaps gaps = {.value_count = (uint32_t)1 << (sweep->high - sweep->low + 1)};
	gaps.last_tick = arena_array(trial->arena, gaps.value_count, sizeof *gaps.last_tick);
	if (gaps.last_tick == NULL)
		return false;
	for (uint32_t value = 0; value < gaps.value_count; value++)
		gaps.last_tick[value] = NEVER;
	measure_gaps(trial, sweep, &gaps);
	count_missing(&gaps);
	struct fraction gap_s;
	if (!fraction_divide(fraction_whole(gaps.worst_ticks), plan->clock.master_hz, &gap_s)) {
		proof_not_judged(trial, PROOF_SWEEP, "not judged: the times do not fit fractions of 64 bits");
		return true;
	}
	note_worst(&trial->proofs->sweeps[index], &gaps, gap_s);
	if (gaps.missing == 0 && fraction_compare(gap_s, sweep->within_s) <= 0)
		return true;
	return sweep_fails(trial, sweep, &gaps, gap_s);
}

bool prove_sweep(struct trial *trial)
{
	const struct plan *plan = trial->timeline->plan;
	if (plan->sweep_count == 0) {
		trial->proofs->proof[PROOF_SWEEP].verdict = VERDICT_ABSENT;
		return true;
	}
	if (!trial->lap.closed) {
		proof_not_judged(trial, PROOF_SWEEP, "not judged: the frame does not close");
		return true;
	}
	for (size_t index = 0; index < plan->sweep_count; index++)
		if (!prove_one(trial, index))
			return false;
	return true;
}
