// Upset: one bit of the state flips. How long until the frame is regained, and how far has the raster slipped by then?
#include <inttypes.h>

#include "base/arena.h"
#include "proof/trial.h"
#include "proof/ways.h"

struct tally {
	struct upset_sums *sums;
	struct upset_result *result;
	bool lost;
	uint32_t lost_cell;          // the first frame cell from which an upset loses the frame
	unsigned lost_bit;
};

// Whether one upset comes before another as a counterexample: by cell, then by bit.
static bool comes_before(uint32_t cell, unsigned bit, uint32_t other_cell, unsigned other_bit)
{
	return cell < other_cell || (cell == other_cell && bit < other_bit);
}

static void tally_lost(struct tally *tally, uint32_t cell, unsigned bit)
{
	if (tally->lost && !comes_before(cell, bit, tally->lost_cell, tally->lost_bit))
		return;
	tally->lost = true;
	tally->lost_cell = cell;
	tally->lost_bit = bit;
}

static void note_worst(struct upset_result *worst, uint32_t cell, unsigned bit, uint32_t cells, uint32_t slip)
{
	if (cells > worst->worst_cells ||
	    (cells == worst->worst_cells && comes_before(cell, bit, worst->worst_cell, worst->worst_bit))) {
		worst->worst_cells = cells;
		worst->worst_cell = cell;
		worst->worst_bit = bit;
	}
	if (slip > worst->worst_slip_cells ||
	    (slip == worst->worst_slip_cells && comes_before(cell, bit, worst->worst_slip_cell, worst->worst_slip_bit))) {
		worst->worst_slip_cells = slip;
		worst->worst_slip_cell = cell;
		worst->worst_slip_bit = bit;
	}
}

// The shorter way round between where the raster is and where it would have been.
static uint32_t slip_of(uint32_t entry, uint32_t cell, uint32_t cells, uint32_t period)
{
	uint32_t undisturbed = cell + cells;
	if (undisturbed >= period)
		undisturbed -= period;
	if (undisturbed >= period)
		undisturbed %= period;
	uint32_t ahead = entry >= undisturbed ? entry - undisturbed : entry + (period - undisturbed);
	return ahead <= period - ahead ? ahead : period - ahead;
}

// The sums are kept at hand, since this is done a billion times.
static void upset_state(const struct trial *trial, struct tally *tally, uint32_t state, uint32_t cell)
{
	const uint32_t period = trial->lap.return_cells;
	struct upset_sums sums = {0};
	for (unsigned bit = 0; bit < trial->at.bits; bit++) {
		struct way way = ways_of(trial->ways, state ^ (uint32_t)1 << bit);
		if (way.lost) {
			tally_lost(tally, cell, bit);
			continue;
		}
		const uint32_t slip = slip_of(way.entry, cell, way.cells, period);
		note_worst(tally->result, cell, bit, way.cells, slip);
		sums.regained++;
		sums.cells += way.cells;
		sums.slip_cells += slip;
	}
	tally->sums->regained += sums.regained;
	tally->sums->cells += sums.cells;
	tally->sums->slip_cells += sums.slip_cells;
	tally->result->upsets += trial->at.bits;
}

// All states of the frame: in their order around it, or, where it fills much of the state space, in ascending order, in
// which the neighbours that differ in one bit are read as so many streams. Passing states have the way of another
// state.
static void upset_frame(const struct trial *trial, struct tally *tally)
{
	const uint32_t period = trial->lap.return_cells, states = (uint32_t)1 << trial->at.bits;
	const bool passes = clears_at_once(&trial->wiring.line) || clears_at_once(&trial->wiring.frame);
	if (period < states / 16 || passes) {
		for (uint32_t cell = 0; cell < period; cell++)
			upset_state(trial, tally, trial->lap.states[cell], cell);
		return;
	}
	for (uint32_t state = 0; state < states; state++) {
		struct way way = ways_of(trial->ways, state);
		if (!way.lost && way.cells == 0)
			upset_state(trial, tally, state, way.entry);
	}
}

static void finish_figures(const struct trial *trial, struct upset_result *result)
{
	const struct timeline *timeline = trial->timeline;
	const struct upset_sums *sums = &trial->upset_sums;
	if (sums->regained > 0) {
		fraction_make((int64_t)sums->cells, (int64_t)sums->regained, &result->mean_cells);
		fraction_make((int64_t)sums->slip_cells, (int64_t)sums->regained, &result->mean_slip_cells);
	}
	// A frame has more cells than lines, so that both terms keep below 2^48.
	fraction_make((int64_t)result->worst_slip_cells * timeline->line_count, timeline->cell_count,
	              &result->worst_slip_lines);
}

// A state of the loop that the machine falls into from a state on, by Brent's search for cycles (1980): in a few times
// the steps of the way there and once around.
static uint32_t state_of_loop(const struct machine *machine, uint32_t state)
{
	uint32_t waiting = state, ahead = machine_next(machine, state);
	for (uint64_t steps = 1, limit = 1; ahead != waiting; steps++) {
		if (steps == limit) {
			waiting = ahead;
			limit *= 2;
			steps = 0;
		}
		ahead = machine_next(machine, ahead);
	}
	return waiting;
}

static bool upset_fails(struct trial *trial, const struct tally *tally)
{
	const uint32_t before = trial->lap.states[tally->lost_cell], after = before ^ (uint32_t)1 << tally->lost_bit;
	const uint32_t looping = state_of_loop(trial->machine, after);
	struct counterexample found = blame_loop(trial, looping);
	const char *was = state_words(trial, before), *is = state_words(trial, after), *loops = state_words(trial, looping);
	found.cell = tally->lost_cell;
	if (was == NULL || is == NULL || loops == NULL)
		found.what = NULL;
	const char *bit = trial->wiring.form == FORM_LOOP ? arena_format(trial->proofs->arena, "bit %u", tally->lost_bit) : "one bit";
	if (bit == NULL)
		found.what = NULL;
	if (found.what != NULL)
		found.what = arena_format(trial->proofs->arena, "with %s flipped, state %s becomes %s, from which the frame is never "
		                          "regained: state %s is on a second loop, %s", bit, was, is, loops, found.what);
	return proof_fails(trial, PROOF_UPSET, found);
}

bool prove_upset(struct trial *trial)
{
	if (trial->ways == NULL) {
		proof_not_judged(trial, PROOF_UPSET, "not judged: the frame does not close");
		return true;
	}
	struct tally tally = {.sums = &trial->upset_sums, .result = &trial->proofs->upset};
	upset_frame(trial, &tally);
	finish_figures(trial, &trial->proofs->upset);
	return !tally.lost || upset_fails(trial, &tally);
}
