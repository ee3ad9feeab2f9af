// Ways of a line-frame machine. Its states need no more than a few small tables to be followed, and one line's lie side by
// side, so that ways are followed one by one. While a way is followed, each of its states keeps where it was come from, so
// that no list of them is needed.
#include <string.h>

#include "base/arena.h"
#include "machine/machine.h"
#include "proof/ways.h"

#define FIRST_ON_WAY ((1u << 27) - 1) // instead of a state before it

struct follower {
	const struct machine *machine;
	struct ways *ways;
	uint32_t states;
	bool passes;      // states may fall to another at once
};

static void put(struct ways *ways, uint32_t state, uint64_t way)
{
	ways->compact.low[state] = (uint32_t)way;
	ways->compact.high[state] = (uint16_t)(way >> 32);
}

static bool is_open(uint64_t way)
{
	return way >= COMPACT_OPEN && way < COMPACT_LOST;
}

// The way led to a state that is on it.
static void note_loop(struct follower *follower, uint32_t state)
{
	struct ways *ways = follower->ways;
	if (ways->second_loop_cells != 0)
		return;
	ways->second_loop_state = state;
	uint32_t at = state;
	do {
		at = machine_next(follower->machine, at);
		ways->second_loop_cells++;
	} while (at != state);
}

// One cell longer.
static uint64_t lengthen(struct follower *follower, uint64_t way, uint32_t state)
{
	struct ways *ways = follower->ways;
	const uint64_t longer = way + ((uint64_t)1 << ways->compact.entry_bits);
	if (longer > COMPACT_MOST) {
		ways->too_long = true;
		return COMPACT_LOST;
	}
	const uint32_t cells = (uint32_t)(longer >> ways->compact.entry_bits);
	if (cells > ways->longest_cells || (cells == ways->longest_cells && state < ways->longest_state)) {
		ways->longest_cells = cells;
		ways->longest_state = state;
	}
	return longer;
}

// Gives the states of a way, from the last back to the first, what the state has that they led to.
static void settle_back(struct follower *follower, uint32_t state, uint64_t way)
{
	struct ways *ways = follower->ways;
	while (state != FIRST_ON_WAY) {
		const uint32_t before = (uint32_t)(compact_get(&ways->compact, state) - COMPACT_OPEN);
		if (way <= COMPACT_MOST)
			way = lengthen(follower, way, state);
		ways->lost_states += way == COMPACT_LOST;
		put(ways, state, way);
		state = before;
	}
}

static void follow(struct follower *follower, uint32_t state)
{
	struct ways *ways = follower->ways;
	uint32_t before = FIRST_ON_WAY;
	uint64_t way = COMPACT_UNKNOWN;
	while (way == COMPACT_UNKNOWN) {
		put(ways, state, COMPACT_OPEN + before);
		before = state;
		state = machine_next(follower->machine, state);
		way = compact_get(&ways->compact, state);
	}
	if (is_open(way)) {
		note_loop(follower, state);
		way = COMPACT_LOST;
	}
	settle_back(follower, before, way);
}

static bool is_passing(const struct follower *follower, uint32_t state)
{
	return follower->passes && machine_settle(follower->machine, state) != state;
}

// A passing state shares the way of the state that it falls to.
static void finish_passing(struct follower *follower)
{
	struct ways *ways = follower->ways;
	for (uint32_t state = 0; state < follower->states; state++) {
		if (!is_passing(follower, state))
			continue;
		const uint64_t way = compact_get(&ways->compact, machine_settle(follower->machine, state));
		ways->lost_states += way == COMPACT_LOST;
		put(ways, state, way);
	}
}

static bool create_compact(struct compact_ways *compact, struct arena *arena, uint32_t states, uint32_t frame_count)
{
	while (frame_count > (uint64_t)1 << compact->entry_bits)
		compact->entry_bits++;
	compact->low = arena_array(arena, states, sizeof *compact->low);
	compact->high = arena_array(arena, states, sizeof *compact->high);
	if (compact->low == NULL || compact->high == NULL)
		return false;
	memset(compact->low, 0xFF, states * sizeof *compact->low);
	memset(compact->high, 0xFF, states * sizeof *compact->high);
	return true;
}

struct ways *stage_ways_find(struct arena *arena, const struct machine *machine, const struct wiring *wiring,
                             const uint32_t *frame_states, uint32_t frame_count)
{
	struct ways *ways = arena_alloc(arena, sizeof *ways);
	struct follower follower = {.machine = machine, .ways = ways, .states = (uint32_t)1 << feedback_of(wiring).bits,
	                            .passes = clears_at_once(&wiring->line) || clears_at_once(&wiring->frame)};
	if (ways == NULL || !create_compact(&ways->compact, arena, follower.states, frame_count))
		return NULL;
	ways->longest_state = frame_states[0];
	for (uint32_t index = 0; index < frame_count; index++)
		put(ways, frame_states[index], index);
	for (uint32_t state = 0; state < follower.states; state++)
		if (compact_get(&ways->compact, state) == COMPACT_UNKNOWN && !is_passing(&follower, state))
			follow(&follower, state);
	if (follower.passes)
		finish_passing(&follower);
	return ways;
}
