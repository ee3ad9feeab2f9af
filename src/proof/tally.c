#include "proof/tally.h"

#include "base/arena.h"
#include "proof/line_frame.h"
#include "proof/trial.h"

// Where nets that are no signals stand in a word of levels: first the bits of the whole state.
#define WORD_STEP 32u
#define WORD_CLEAR 33u // of the line stage; that of the frame stage follows
#define WORD_KIND 36u

// The levels of all nets in a cell: of what is no signal, and of signals.
struct levels {
	uint64_t word, signals;
};

struct counting {
	const struct trial *trial;
	struct net_tally *of_word[64];    // NULL where nothing stands
	struct net_tally *of_signal[LIMIT_SIGNALS];
};

static bool counts(const struct trial *trial, enum stage stage)
{
	return wiring_stage(&trial->wiring, stage)->advance == ADVANCE_COUNT;
}

static uint64_t clear_level(const struct trial *trial, enum stage stage, uint32_t state)
{
	if (!counts(trial, stage))
		return 0;
	return machine_row(trial->machine, stage, machine_row_address(trial->machine, stage, state)).clear;
}

// Step and kind are read at their pins, latched or not.
static struct levels levels_at(const struct trial *trial, uint32_t cell, uint64_t inverted)
{
	const uint32_t state = trial->lap.states[cell];
	uint64_t word = state | clear_level(trial, STAGE_LINE, state) << WORD_CLEAR;
	if (trial->wiring.form == FORM_LINE_FRAME) {
		word |= (uint64_t)machine_steps(trial->machine, state) << WORD_STEP;
		word |= clear_level(trial, STAGE_FRAME, state) << (WORD_CLEAR + 1);
		word |= (uint64_t)(machine_row_address(trial->machine, STAGE_LINE, state) >> trial->wiring.line.state_bits) << WORD_KIND;
	}
	return (struct levels){word, trial->lap.pins[cell] ^ inverted};
}

// The high time of a net grows by the tick of each fall, less that of each rise.
static void count_edges(struct net_tally *const *nets, uint64_t before, uint64_t after, int64_t tick)
{
	for (uint64_t changed = before ^ after; changed != 0; changed &= changed - 1) {
		const unsigned bit = (unsigned)__builtin_ctzll(changed);
		const bool rises = (after >> bit & 1) != 0;
		if (nets[bit] == NULL)
			continue;
		nets[bit]->rises += rises;
		nets[bit]->high_ticks += rises ? -tick : tick;
	}
}

// At the frame's ends: whether a net rises there, and its high time before the first tick and after the last.
static void count_ends(struct net_tally *const *nets, uint64_t first, uint64_t last, int64_t ticks)
{
	for (unsigned bit = 0; bit < 64; bit++) {
		if (nets[bit] == NULL)
			continue;
		nets[bit]->level = (first >> bit & 1) != 0;
		nets[bit]->rises += (first & ~last) >> bit & 1;
		nets[bit]->high_ticks += (last >> bit & 1) != 0 ? ticks : 0;
	}
}

// A bit is disturbed if it is the same before and after an edge, but not while an asynchronous clear strikes.
static void count_spikes(struct counting *counting, uint32_t state)
{
	const struct trial *trial = counting->trial;
	const uint32_t passing = machine_passing(trial->machine, state), next = machine_next(trial->machine, state);
	const uint32_t line_mask = low_bits(trial->wiring.line.state_bits), frame_mask = ~low_bits(trial->at.frame);
	for (uint32_t bits = (passing ^ next) & ~(state ^ next); bits != 0; bits &= bits - 1) {
		struct net_tally *net = counting->of_word[__builtin_ctz(bits)];
		if (net != NULL)
			net->spikes++;
	}
	if (clears_at_once(&trial->wiring.line) && ((passing ^ next) & line_mask) != 0)
		counting->of_word[WORD_CLEAR]->spikes++;
	if (trial->wiring.form == FORM_LINE_FRAME && clears_at_once(&trial->wiring.frame) && ((passing ^ next) & frame_mask) != 0)
		counting->of_word[WORD_CLEAR + 1]->spikes++;
}

static void count_lap(struct counting *counting, struct tally *tally)
{
	const struct trial *trial = counting->trial;
	const uint64_t inverted = levels_of(trial->timeline->plan, 0);
	const bool spikes = clears_at_once(&trial->wiring.line) ||
	                    (trial->wiring.form == FORM_LINE_FRAME && clears_at_once(&trial->wiring.frame));
	const struct levels first = levels_at(trial, 0, inverted);
	struct levels before = first;
	for (uint32_t cell = 0; cell < trial->timeline->cell_count; cell++) {
		const struct levels levels = levels_at(trial, cell, inverted);
		const int64_t ticks = lap_cell_ticks(trial, cell);
		count_edges(counting->of_word, before.word, levels.word, tally->ticks);
		count_edges(counting->of_signal, before.signals, levels.signals, tally->ticks);
		if (spikes)
			count_spikes(counting, trial->lap.states[cell]);
		tally->ticks += ticks;
		tally->stretched += ticks > trial->timeline->plan->clock.cell_ticks;
		before = levels;
	}
	tally->cells = trial->timeline->cell_count;
	count_ends(counting->of_word, first.word, before.word, tally->ticks);
	count_ends(counting->of_signal, first.signals, before.signals, tally->ticks);
}

static void add_net(struct tally *tally, struct net_tally **place, enum net_kind kind, enum stage stage, unsigned index)
{
	*place = &tally->nets[tally->net_count++];
	**place = (struct net_tally){.kind = kind, .stage = stage, .index = index};
}

static void add_stage(struct tally *tally, struct counting *counting, enum stage stage)
{
	const struct wiring *wiring = &counting->trial->wiring;
	const unsigned first = stage == STAGE_LINE ? 0 : counting->trial->at.frame;
	for (unsigned bit = 0; bit < wiring_stage(wiring, stage)->state_bits; bit++)
		add_net(tally, &counting->of_word[first + bit], NET_STATE, stage, bit);
}

// False when memory is out.
static bool list_nets(struct tally *tally, struct counting *counting)
{
	const struct trial *trial = counting->trial;
	const struct plan *plan = trial->timeline->plan;
	tally->nets = arena_array(tally->arena, LIMIT_FEEDBACK_BITS + 1 + LIMIT_KIND_BITS + STAGE_COUNT + plan->signal_count, sizeof *tally->nets);
	if (tally->nets == NULL)
		return false;
	add_stage(tally, counting, STAGE_LINE);
	if (trial->wiring.form == FORM_LINE_FRAME) {
		add_net(tally, &counting->of_word[WORD_STEP], NET_STEP, STAGE_LINE, 0);
		add_stage(tally, counting, STAGE_FRAME);
		for (unsigned bit = 0; bit < trial->wiring.kind_bits; bit++)
			add_net(tally, &counting->of_word[WORD_KIND + bit], NET_KIND, STAGE_FRAME, bit);
	}
	for (enum stage stage = STAGE_LINE; stage < machine_stages(&plan->machine); stage++)
		if (counts(trial, stage))
			add_net(tally, &counting->of_word[WORD_CLEAR + (unsigned)stage], NET_CLEAR, stage, 0);
	for (unsigned signal = 0; signal < plan->signal_count; signal++)
		add_net(tally, &counting->of_signal[signal], NET_SIGNAL, plan->signals[signal].stage, signal);
	return true;
}

static bool run_lap(struct trial *trial, const struct proofs *proofs)
{
	trial->machine = machine_create(trial->arena, &trial->wiring, trial->images, trial->bank);
	trial->expected = timeline_pins(trial->timeline, trial->arena);
	trial->decoders = decoders_create(trial->arena, trial->timeline->plan);
	if (trial->machine == NULL || trial->expected == NULL || trial->decoders == NULL)
		return false;
	if (trial->wiring.form == FORM_LINE_FRAME && !line_frame_number(trial))
		return false;
	return lap_run(trial, proofs->closure.start_state) && lap_finish(trial);
}

// Runs the lap once more, in proofs of its own that hold no results.
static bool count_frame(const struct proofs *proofs, const struct image *images, struct tally *tally)
{
	struct trial trial = {.timeline = proofs->timeline, .images = images, .bank = proofs->bank_numbers[0], .first = true,
	                      .departed_cell = UINT32_MAX, .has_start = true, .wiring = wiring_of(proofs->timeline->plan)};
	trial.at = feedback_of(&trial.wiring);
	trial.period = trial.wiring.form == FORM_LINE_FRAME ? proofs->timeline->cell_count : timeline_period(proofs->timeline);
	trial.proofs = proofs_alloc(proofs->timeline);
	trial.arena = arena_create();
	struct counting counting = {.trial = &trial};
	const bool good = trial.proofs != NULL && trial.arena != NULL && trial.period != 0 && run_lap(&trial, proofs) &&
	                  list_nets(tally, &counting);
	if (good)
		count_lap(&counting, tally);
	arena_destroy(trial.arena);
	proofs_destroy(trial.proofs);
	return good;
}

bool tally_run(const struct proofs *proofs, const struct image *images, struct tally **tally)
{
	if (proofs->proof[PROOF_CLOSURE].verdict != VERDICT_PASS) {
		*tally = NULL;
		return true;
	}
	struct arena *arena = arena_create();
	struct tally *counted = arena != NULL ? arena_alloc(arena, sizeof *counted) : NULL;
	if (counted != NULL)
		counted->arena = arena;
	if (counted == NULL || !count_frame(proofs, images, counted)) {
		arena_destroy(arena);
		return false;
	}
	*tally = counted;
	return true;
}

void tally_destroy(struct tally *tally)
{
	if (tally != NULL)
		arena_destroy(tally->arena);
}

bool tally_frequency(const struct tally *tally, const struct net_tally *net, struct fraction master_hz, struct fraction *result)
{
	struct fraction per_tick;
	return fraction_make((int64_t)net->rises, tally->ticks, &per_tick) && fraction_multiply(per_tick, master_hz, result);
}

bool tally_duty(const struct tally *tally, const struct net_tally *net, struct fraction *result)
{
	return fraction_make(net->high_ticks, tally->ticks, result);
}
