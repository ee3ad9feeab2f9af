// Glitches: cell edges at which the code of a decoded field changes in more than one bit, so that the decoder may see a
// code in between and flicker; when decoded pins settle; and what is taken straight from the EEPROM, and is unsettled
// after each edge.
#include <string.h>

#include "base/arena.h"
#include "proof/trial.h"

#define MEMO_SIZE 4096u

// Judged pairs of codes, the latest in each place.
struct memo {
	bool filled;
	bool flickers;
	uint32_t from, to, between;
};

struct search {
	struct trial *trial;
	const struct decoder *decoder;
	struct memo memo[MEMO_SIZE];
	struct glitch_edge edge;       // the first disturbed edge, and the count of all
};

static bool memo_flickers(struct search *search, uint32_t from, uint32_t to, uint32_t *between)
{
	uint32_t changing = from ^ to;
	if ((changing & (changing - 1)) == 0)
		return false;
	struct memo *memo = &search->memo[(from * 2654435761u ^ to * 40503u) % MEMO_SIZE];
	if (!memo->filled || memo->from != from || memo->to != to) {
		*memo = (struct memo){.filled = true, .from = from, .to = to};
		memo->flickers = decoder_flickers(search->decoder, from, to, &memo->between);
	}
	if (memo->flickers)
		*between = memo->between;
	return memo->flickers;
}

// The state that a counter shows for an instant on its way from one cell to the next, with an async clear; the state
// before the edge if there is none.
static uint32_t passing_state(const struct trial *trial, uint32_t from, uint32_t to)
{
	if (!clears_at_once(&trial->wiring.line))
		return from;
	const uint32_t counted = machine_passing(trial->machine, from);
	return counted == to ? from : counted;
}

static bool edge_flickers(struct search *search, uint32_t from_state, uint32_t to_state, uint32_t *between)
{
	const struct decoder *decoder = search->decoder;
	uint32_t from = decoder_code(decoder, from_state), to = decoder_code(decoder, to_state);
	uint32_t passing = decoder_code(decoder, passing_state(search->trial, from_state, to_state));
	if (memo_flickers(search, from, passing, between) || memo_flickers(search, passing, to, between))
		return true;
	bool level = decoder_asserts(decoder, from);
	*between = passing;
	return decoder_asserts(decoder, to) == level && decoder_asserts(decoder, passing) != level;
}

// The frame's edges: once around the loop if there is one, else those inside the lap.
static uint32_t first_edge(const struct lap *lap)
{
	return lap->closed ? 0 : 1;
}

static uint32_t edge_end(const struct trial *trial)
{
	return trial->lap.closed ? trial->lap.return_cells : trial->timeline->cell_count;
}

// How often the frame takes each edge.
static uint64_t edge_repeats(const struct trial *trial)
{
	return trial->lap.closed ? trial->timeline->cell_count / trial->lap.return_cells : 1;
}

static void search_signal(struct search *search)
{
	const struct trial *trial = search->trial;
	const uint32_t *states = trial->lap.states;
	for (uint32_t cell = first_edge(&trial->lap); cell < edge_end(trial); cell++) {
		uint32_t from = states[cell_before(trial, cell)], to = states[cell], between = 0;
		if (!edge_flickers(search, from, to, &between))
			continue;
		if (search->edge.count == 0)
			search->edge = (struct glitch_edge){search->decoder->signal, cell, from, to,
			                                    decoder_code(search->decoder, from),
			                                    decoder_code(search->decoder, to), between, 0};
		search->edge.count += edge_repeats(trial);
	}
}

static bool changes_many_bits(const struct trial *trial, uint32_t from, uint32_t to)
{
	for (size_t index = 0; index < trial->decoders->count; index++) {
		const struct decoder *decoder = &trial->decoders->list[index];
		uint32_t changing = decoder_code(decoder, from ^ to);
		if ((changing & (changing - 1)) != 0)
			return true;
	}
	return false;
}

static void count_edges(const struct trial *trial, struct glitch_result *result)
{
	const uint32_t *states = trial->lap.states;
	uint64_t edges = 0, multi = 0;
	for (uint32_t cell = first_edge(&trial->lap); cell < edge_end(trial); cell++) {
		uint32_t from = states[cell_before(trial, cell)], to = states[cell];
		uint32_t passing = passing_state(trial, from, to);
		edges++;
		multi += changes_many_bits(trial, from, passing) || changes_many_bits(trial, passing, to);
	}
	result->edges += edges * edge_repeats(trial);
	result->multi_bit_edges += multi * edge_repeats(trial);
}

// Adds a disturbed signal to those of the trials before.
static bool add_edge(struct trial *trial, struct glitch_edge edge)
{
	struct glitch_result *result = &trial->proofs->glitches;
	for (size_t index = 0; index < result->disturbed; index++) {
		if (result->first[index].signal == edge.signal) {
			result->first[index].count += edge.count;
			return true;
		}
	}
	result->first[result->disturbed++] = edge;
	const struct plan *plan = trial->timeline->plan;
	struct counterexample found = {.present = true, .bank = trial->bank, .cell = edge.cell, .state = edge.from_state,
	                               .signal = edge.signal};
	found.what = arena_format(trial->proofs->arena, "%s may flicker at the edge that begins this cell: %s goes from 0x%X to "
	                          "0x%X and may pass 0x%X", plan->signals[edge.signal].name,
	                          plan->machine.fields[plan->signals[edge.signal].field].name, edge.from_code, edge.to_code,
	                          edge.between_code);
	return proof_fails(trial, PROOF_GLITCHES, found);
}

static bool search_all(struct trial *trial)
{
	struct glitch_result *result = &trial->proofs->glitches;
	struct search *search = arena_alloc(trial->arena, sizeof *search);
	if (result->first == NULL)
		result->first = arena_array(trial->proofs->arena, trial->decoders->count, sizeof *result->first);
	if (search == NULL || result->first == NULL)
		return false;
	for (size_t index = 0; index < trial->decoders->count; index++) {
		memset(search, 0, sizeof *search);
		search->trial = trial;
		search->decoder = &trial->decoders->list[index];
		search_signal(search);
		if (search->edge.count > 0 && !add_edge(trial, search->edge))
			return false;
	}
	count_edges(trial, result);
	return true;
}

// When what hangs on the line stage's state has its level.
static struct fraction settle_time(const struct trial *trial)
{
	const struct timing *timing = &trial->timeline->plan->timing;
	const struct fraction delay_s = trial->wiring.line.advance == ADVANCE_COUNT ? timing->counter_delay_s[STAGE_LINE] : timing->latch_delay_s;
	// Nanoseconds of data sheets: far from 64 bits. Should they not fit, the decoder's alone stands.
	struct fraction sum_s = timing->decoder_delay_s;
	fraction_add(delay_s, timing->decoder_delay_s, &sum_s);
	return sum_s;
}

bool prove_glitches(struct trial *trial)
{
	struct glitch_result *result = &trial->proofs->glitches;
	bool unsettled = false;
	result->has_field_signals = trial->decoders->count > 0;
	if (result->has_field_signals)
		result->settle_s = settle_time(trial);
	measure_unsettled(trial);
	for (unsigned stage = 0; stage < STAGE_COUNT; stage++)
		unsettled = unsettled || result->stages[stage].direct || result->stages[stage].async_clear;
	if (!result->has_field_signals && !unsettled)
		trial->proofs->proof[PROOF_GLITCHES].verdict = VERDICT_ABSENT;
	return !result->has_field_signals || search_all(trial);
}
