#include "proof/frame_find.h"

#include "base/arena.h"

// Held comparisons may take so many times the cells of frame and loop, and in any case so many cells: a second or so.
#define BUDGET_LAPS 64u
#define BUDGET_CELLS ((uint64_t)1 << 28)

// What is seen of a decoder whose codes are not known: attempt * 2 + level, where the code came up last.
struct unknown_decoder {
	const struct decoder *decoder;
	uint32_t *seen;            // [codes]
};

struct finder {
	struct arena *arena;
	const struct timeline *timeline;
	const struct wiring *wiring;
	const struct machine *machine;
	const uint64_t *expected;
	uint64_t compared;         // signals whose pins are known
	uint32_t *states;          // [length]: the loop
	uint64_t *pins;            // [length]
	uint32_t length;
	uint32_t *border;          // [cells]: of the expected pins and the bits that are always held
	uint32_t always_held;      // state bits that are held in every cell: they are matched like pins
	bool anchored;             // some cell is held
	uint32_t anchor;           // the cell whose held value is rarest in the loop
	uint64_t budget;
	struct unknown_decoder *unknown;
	size_t unknown_count;
	uint32_t attempt;          // of reading codes, from 1
	uint32_t best_turn, best_cells;
};

// Lists the loop that state 0 falls into: the walk there from the first state that comes up again.
static bool list_loop(struct finder *finder)
{
	size_t states = (size_t)1 << finder->wiring->line.state_bits;
	uint32_t *seen = arena_array(finder->arena, states, sizeof *seen);
	uint32_t *walk = arena_array(finder->arena, states, sizeof *walk);
	if (seen == NULL || walk == NULL)
		return false;
	uint32_t state = machine_settle(finder->machine, 0), steps = 0;
	for (; seen[state] == 0; state = machine_next(finder->machine, state)) {
		walk[steps] = state;
		seen[state] = ++steps;
	}
	finder->states = walk + (seen[state] - 1);
	finder->length = steps - (seen[state] - 1);
	return true;
}

static bool read_pins(struct finder *finder, const struct decoders *decoders)
{
	finder->pins = arena_array(finder->arena, finder->length, sizeof *finder->pins);
	if (finder->pins == NULL)
		return false;
	const uint64_t inverted = levels_of(finder->timeline->plan, 0);
	finder->compared = finder->wiring->line.data_signals;
	for (size_t index = 0; index < decoders->count; index++)
		finder->compared |= (uint64_t)decoders->list[index].known << decoders->list[index].signal;
	for (uint32_t index = 0; index < finder->length; index++) {
		uint64_t levels = machine_row(finder->machine, STAGE_LINE, finder->states[index]).levels;
		uint32_t shown_at = index;
		if (finder->wiring->line.outputs == OUTPUTS_REGISTERED)
			shown_at = index + 1 == finder->length ? 0 : index + 1;
		finder->pins[shown_at] |= (levels ^ inverted) & finder->wiring->line.data_signals;
		finder->pins[index] |= decoders_pins(decoders, finder->states[index]);
	}
	return true;
}

static bool list_unknown(struct finder *finder, const struct decoders *decoders)
{
	finder->unknown = arena_array(finder->arena, decoders->count, sizeof *finder->unknown);
	for (size_t index = 0; finder->unknown != NULL && index < decoders->count; index++) {
		const struct decoder *decoder = &decoders->list[index];
		if (decoder->known)
			continue;
		struct unknown_decoder *unknown = &finder->unknown[finder->unknown_count++];
		unknown->decoder = decoder;
		unknown->seen = arena_array(finder->arena, (size_t)decoder->code_mask + 1, sizeof *unknown->seen);
		if (unknown->seen == NULL)
			return false;
	}
	return finder->unknown != NULL;
}

// Whether two cells of the frame want the same of known pins and of bits that are always held.
static bool same_cells(const struct finder *finder, uint32_t left, uint32_t right)
{
	const struct timeline *timeline = finder->timeline;
	if (((finder->expected[left] ^ finder->expected[right]) & finder->compared) != 0)
		return false;
	return finder->always_held == 0 || ((timeline->hold_value[left] ^ timeline->hold_value[right]) & finder->always_held) == 0;
}

// Whether a place of the loop shows what a cell of the frame wants of them.
static bool shows_cell(const struct finder *finder, uint32_t place, uint32_t cell)
{
	if (((finder->pins[place] ^ finder->expected[cell]) & finder->compared) != 0)
		return false;
	return finder->always_held == 0 ||
	       ((finder->states[place] ^ finder->timeline->hold_value[cell]) & finder->always_held) == 0;
}

static void find_always_held(struct finder *finder)
{
	const struct timeline *timeline = finder->timeline;
	if (timeline->hold_mask == NULL)
		return;
	finder->always_held = UINT32_MAX;
	for (uint32_t cell = 0; cell < timeline->cell_count; cell++)
		finder->always_held &= timeline->hold_mask[cell];
}

// border[i]: how many cells at the start of the frame agree with as many that end at cell i, less than all: the failure
// function of Knuth, Morris and Pratt (1977).
static bool find_borders(struct finder *finder)
{
	const uint32_t cells = finder->timeline->cell_count;
	finder->border = arena_array(finder->arena, cells, sizeof *finder->border);
	if (finder->border == NULL)
		return false;
	uint32_t length = 0;
	for (uint32_t cell = 1; cell < cells; cell++) {
		while (length > 0 && !same_cells(finder, cell, length))
			length = finder->border[length - 1];
		length += same_cells(finder, cell, length);
		finder->border[cell] = length;
	}
	return true;
}

static unsigned bit_count(uint32_t bits)
{
	unsigned count = 0;
	for (; bits != 0; bits &= bits - 1)
		count++;
	return count;
}

// Of the cells that are held in the most bits, the one whose value the fewest states of the loop have.
static bool choose_anchor(struct finder *finder)
{
	const struct timeline *timeline = finder->timeline;
	if (timeline->hold_mask == NULL)
		return true;
	uint32_t mask = 0;
	for (uint32_t cell = 0; cell < timeline->cell_count; cell++)
		if (timeline->hold_mask[cell] != mask && bit_count(timeline->hold_mask[cell]) > bit_count(mask))
			mask = timeline->hold_mask[cell];
	uint32_t *uses = arena_array(finder->arena, (size_t)1 << finder->wiring->line.state_bits, sizeof *uses);
	if (uses == NULL)
		return false;
	for (uint32_t index = 0; index < finder->length; index++)
		uses[finder->states[index] & mask]++;
	for (uint32_t cell = 0; mask != 0 && cell < timeline->cell_count; cell++) {
		if (timeline->hold_mask[cell] != mask)
			continue;
		if (!finder->anchored || uses[timeline->hold_value[cell]] < uses[timeline->hold_value[finder->anchor]])
			finder->anchor = cell;
		finder->anchored = true;
	}
	return true;
}

static uint32_t turned_state(const struct finder *finder, uint32_t turn, uint32_t cell)
{
	return finder->states[((uint64_t)turn + cell) % finder->length];
}

static bool held_agrees(const struct finder *finder, uint32_t turn, uint32_t cell)
{
	const struct timeline *timeline = finder->timeline;
	uint32_t wrong = turned_state(finder, turn, cell) ^ timeline->hold_value[cell];
	return (wrong & timeline->hold_mask[cell]) == 0;
}

// Whether no code of a decoder that is not known has come up under the other level in this attempt.
static bool codes_agree(const struct finder *finder, uint32_t turn, uint32_t cell)
{
	const uint32_t state = turned_state(finder, turn, cell);
	for (size_t index = 0; index < finder->unknown_count; index++) {
		const struct decoder *decoder = finder->unknown[index].decoder;
		uint32_t *seen = &finder->unknown[index].seen[decoder_code(decoder, state)];
		const uint32_t now = finder->attempt * 2 + (uint32_t)(finder->expected[cell] >> decoder->signal & 1);
		if ((*seen ^ now) == 1)
			return false;
		*seen = now;
	}
	return true;
}

// How many cells from the first on agree in their held bits and in codes that are not known.
static uint32_t held_cells(struct finder *finder, uint32_t turn)
{
	uint32_t cell = 0;
	finder->attempt++;
	while (cell < finder->timeline->cell_count && (!finder->anchored || held_agrees(finder, turn, cell)) &&
	       codes_agree(finder, turn, cell))
		cell++;
	finder->budget -= cell < finder->budget ? cell : finder->budget;
	return cell;
}

// A turn whose pins agree with the whole frame. True if it is the one.
static bool try_turn(struct finder *finder, uint32_t turn)
{
	const uint32_t cells = finder->timeline->cell_count;
	uint32_t agreeing = cells;
	if (finder->anchored && !held_agrees(finder, turn, finder->anchor))
		agreeing = 0;
	else if ((finder->anchored || finder->unknown_count > 0) && finder->budget > 0)
		agreeing = held_cells(finder, turn);
	else if (finder->anchored || finder->unknown_count > 0)
		agreeing = 0;
	// Any turn whose pins agree is better than one whose pins do not.
	if (finder->best_cells < cells || agreeing > finder->best_cells - cells) {
		finder->best_turn = turn;
		finder->best_cells = cells + agreeing;
	}
	return agreeing == cells;
}

static void match_turns(struct finder *finder)
{
	const uint32_t cells = finder->timeline->cell_count;
	const uint64_t end = (uint64_t)finder->length + cells - 1;
	uint32_t matched = 0, place = 0;
	for (uint64_t index = 0; index < end; index++) {
		if (matched == cells)
			matched = finder->border[cells - 1];
		while (matched > 0 && !shows_cell(finder, place, matched))
			matched = finder->border[matched - 1];
		matched += shows_cell(finder, place, matched);
		place = place + 1 == finder->length ? 0 : place + 1;
		if (matched == cells) {
			if (try_turn(finder, (uint32_t)((index + 1 - cells) % finder->length)))
				return;
		} else if (matched > finder->best_cells) {
			finder->best_turn = (uint32_t)((index + 1 - matched) % finder->length);
			finder->best_cells = matched;
		}
	}
}

// The states that the most states lead to, since spare rows lead to the frame's first cell.
struct most_led_to {
	uint32_t state, rank;           // of all states, and how many lead there
	uint32_t turn, turn_rank;       // of those of the loop
};

static bool find_most_led_to(struct finder *finder, struct most_led_to *most)
{
	const size_t states = (size_t)1 << finder->wiring->line.state_bits;
	uint32_t *next = arena_array(finder->arena, states, sizeof *next);
	uint32_t *counts = arena_array(finder->arena, states, sizeof *counts);
	if (next == NULL || counts == NULL)
		return false;
	machine_all_next(finder->machine, next, 1);
	for (size_t state = 0; state < states; state++)
		counts[next[state]]++;
	for (size_t state = 0; state < states; state++)
		if (counts[state] > most->rank) {
			most->state = (uint32_t)state;
			most->rank = counts[state];
		}
	for (uint32_t index = 0; index < finder->length; index++)
		if (counts[finder->states[index]] > most->turn_rank) {
			most->turn = index;
			most->turn_rank = counts[finder->states[index]];
		}
	return true;
}

// Whether the frame's known pins agree with the loop at a turn.
static bool pins_agree(const struct finder *finder, uint32_t turn)
{
	uint32_t place = turn;
	for (uint32_t cell = 0; cell < finder->timeline->cell_count; cell++) {
		if (!shows_cell(finder, place, cell))
			return false;
		place = place + 1 == finder->length ? 0 : place + 1;
	}
	return true;
}

bool frame_find(struct arena *arena, const struct timeline *timeline, const struct wiring *wiring,
                const struct machine *machine, const uint64_t *expected, const struct decoders *decoders, uint32_t *start)
{
	struct finder finder = {.arena = arena, .timeline = timeline, .wiring = wiring, .machine = machine,
	                        .expected = expected};
	struct most_led_to most = {0};
	const uint32_t period = timeline_period(timeline);
	if (period == 0 || !list_loop(&finder) || !read_pins(&finder, decoders) || !list_unknown(&finder, decoders) ||
	    !choose_anchor(&finder) || !find_most_led_to(&finder, &most))
		return false;
	if (finder.length % period != 0 && most.rank > 1) {
		*start = most.state; // the loop is none of the frame's: what spare rows lead to is left
		return true;
	}
	find_always_held(&finder);
	const uint64_t budget = BUDGET_LAPS * ((uint64_t)timeline->cell_count + finder.length);
	finder.budget = budget > BUDGET_CELLS ? budget : BUDGET_CELLS;
	const bool led_to_first = most.turn_rank > 1 && pins_agree(&finder, most.turn) && try_turn(&finder, most.turn);
	if (!led_to_first && !find_borders(&finder))
		return false;
	if (!led_to_first)
		match_turns(&finder);
	*start = finder.states[finder.best_turn];
	return true;
}
