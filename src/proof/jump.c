// A jump: the machine leaves the frame's order because of a wrong next state. The faulty row itself looks innocent, and
// what goes wrong shows cells later; but in a machine that closes, every state of the frame has one predecessor and no
// spare state has any.
#include "proof/jump.h"

#include <inttypes.h>

#include "base/arena.h"

// How many states that are not spare lead to each state, at most 2. A spare state is one that leads to the first.
static uint8_t *count_predecessors(const struct trial *trial, const uint32_t *next)
{
	const size_t states = (size_t)1 << trial->wiring.line.state_bits;
	uint8_t *counts = arena_array(trial->arena, states, sizeof *counts);
	for (size_t state = 0; counts != NULL && state < states; state++)
		if (next[state] != trial->lap.states[0] && counts[next[state]] < 2)
			counts[next[state]]++;
	return counts;
}

// The only state that leads on, and that nothing leads to: where the jump should have gone. False if there is no or
// more than one.
static bool find_orphan(const struct trial *trial, const uint32_t *next, const uint8_t *counts, uint32_t *orphan)
{
	const size_t states = (size_t)1 << trial->wiring.line.state_bits;
	const uint32_t first = trial->lap.states[0];
	size_t found = 0;
	for (size_t state = 0; state < states && found < 2; state++) {
		if (state == first || next[state] == first || counts[state] > 0)
			continue;
		*orphan = (uint32_t)state;
		found++;
	}
	return found == 1;
}

// Not cell 0, whose latched pins come from wherever the lap ended.
static uint32_t first_wrong_pin(const struct trial *trial)
{
	uint32_t cell = 1;
	while (cell < trial->timeline->cell_count && trial->lap.pins[cell] == trial->expected[cell])
		cell++;
	return cell;
}

// What is known before the search for the row at fault.
struct search {
	const struct trial *trial;
	const uint32_t *next;
	const uint8_t *counts;
	uint32_t limit;      // the first cell with a wrong pin
	bool frame_is_whole; // as many states lead on as a frame has: so a state that leads home is spare, and no row of the frame gone wrong
};

static size_t count_leading_on(const struct trial *trial, const uint32_t *next)
{
	const size_t states = (size_t)1 << trial->wiring.line.state_bits;
	size_t count = 0;
	for (size_t state = 0; state < states; state++)
		count += next[state] != trial->lap.states[0];
	return count;
}

// The first cell, before anything shows at the pins, whose successor has a second predecessor or is spare. Leaves
// *cell, where the states first went wrong, if there is none.
static void find_departure(const struct search *search, uint32_t *cell)
{
	const struct lap *lap = &search->trial->lap;
	if (lap->return_cells == 0 && *cell < search->limit)
		return; // a state came again before anything showed: the row that leads there is at fault
	for (uint32_t index = 0; index < search->limit && index + 2 < search->trial->period; index++) {
		const uint32_t after = lap->states[index + 1];
		if (after != lap->states[0] && search->counts[after] < 2 && !(search->frame_is_whole && search->next[after] == lap->states[0]))
			continue;
		*cell = index;
		return;
	}
}

// Whether the frame closes once a state leads to another.
static bool mends(const struct search *search, uint32_t state, uint32_t successor)
{
	const struct trial *trial = search->trial;
	uint32_t at = trial->lap.states[0];
	for (uint32_t cells = 1; cells <= trial->timeline->cell_count; cells++) {
		at = at == state ? successor : search->next[at];
		if (at == trial->lap.states[0])
			return cells % trial->period == 0;
	}
	return false;
}

bool find_jump(const struct trial *trial, struct counterexample *found, bool *certain)
{
	const size_t states = (size_t)1 << trial->wiring.line.state_bits;
	uint32_t orphan = 0, cell = found->cell;
	*certain = false;
	if (trial->wiring.line.advance != ADVANCE_TABLE)
		return true;
	uint32_t *next = arena_array(trial->arena, states, sizeof *next);
	if (next == NULL)
		return false;
	machine_all_next(trial->machine, next, 1);
	const uint8_t *counts = count_predecessors(trial, next);
	if (counts == NULL)
		return false;
	if (!find_orphan(trial, next, counts, &orphan))
		return true;
	const struct search search = {trial, next, counts, first_wrong_pin(trial), count_leading_on(trial, next) + 1 >= trial->period};
	find_departure(&search, &cell);
	if (!mends(&search, trial->lap.states[cell], orphan))
		return true;
	const uint32_t after = next[trial->lap.states[cell]];
	struct counterexample jump = blame_next(trial, cell, after ^ orphan);
	jump.what = arena_format(trial->proofs->arena, "the next state is 0x%" PRIX32 ", expected 0x%" PRIX32
	                         ", which nothing else leads to", after, orphan);
	if (jump.what == NULL)
		return false;
	*found = jump;
	*certain = true;
	return true;
}
