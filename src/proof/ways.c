// Chains of unvisited states are followed until they meet a state whose way is known. The cost is the chase itself: each step waits
// for a far read. So every state is read and marked once, in one visit; the way back over a chain, which fills in the ways, goes
// over a short list of the states visited last. Where a chain outgrows the list, its part so far becomes a segment: its
// records keep their place in the segment, and only the segment learns where it leads.
#include "proof/ways.h"

#include "base/arena.h"
#include "machine/machine.h"

#define SEGMENT_STATES 4096u

struct chase {
	struct ways *ways;
	uint32_t recent[SEGMENT_STATES];   // the states of the segment under way
	uint32_t recent_count;
	uint32_t segment;                  // its number
	uint32_t chain_segment;            // number of the chain's first segment
	uint32_t steps;                    // states of the chain
};

// Walks on from an unvisited state, marking, until a marked one; returns that one.
static uint32_t chase_follow(struct chase *chase, uint32_t start)
{
	struct way_record *records = chase->ways->records;
	uint32_t state = start, count = 0, segment = chase->segment;
	chase->chain_segment = segment;
	chase->steps = 0;
	for (struct way_record record = records[state]; record.way == WAY_UNKNOWN; record = records[state]) {
		if (count == SEGMENT_STATES) {
			chase->steps += count;
			count = 0;
			segment++;
		}
		records[state] = (struct way_record){.subject = segment, .way = WAY_SEGMENT | count};
		chase->recent[count++] = state;
		state = record.subject;
	}
	chase->steps += count;
	chase->recent_count = count;
	chase->segment = segment;
	return state;
}

// The chain ran into itself: what lies between the two visits is a loop of its own.
static void note_loop(struct chase *chase, uint32_t state)
{
	struct way_record record = chase->ways->records[state];
	uint32_t place = (record.subject - chase->chain_segment) * SEGMENT_STATES + (record.way & ~WAY_KIND);
	if (chase->ways->second_loop_cells != 0)
		return;
	chase->ways->second_loop_state = state;
	chase->ways->second_loop_cells = chase->steps - place;
}

// Gives the chain's states the way of the state that it met, each a cell longer than the one after it.
static void chase_settle(struct chase *chase, struct way way)
{
	struct ways *ways = chase->ways;
	uint32_t kind = way.lost ? WAY_LOST : WAY_HOME, cells = way.cells;
	for (uint32_t index = chase->recent_count; index-- > 0;) {
		cells = way.lost ? 0 : cells + 1;
		ways->records[chase->recent[index]] = (struct way_record){.subject = way.entry, .way = kind | cells};
	}
	for (uint32_t segment = chase->segment; segment-- > chase->chain_segment;) {
		cells += SEGMENT_STATES;
		ways->segments[segment] = (struct way_segment){.lost = way.lost, .entry = way.entry, .cells = cells};
	}
}

static void follow_chain(struct chase *chase, uint32_t start)
{
	struct ways *ways = chase->ways;
	uint32_t met = chase_follow(chase, start);
	struct way_record record = ways->records[met];
	struct way way = {.lost = true};
	if ((record.way & WAY_KIND) == WAY_SEGMENT && record.subject >= chase->chain_segment)
		note_loop(chase, met);
	else
		way = ways_of(ways, met);
	chase_settle(chase, way);
	if (way.lost) {
		ways->lost_states += chase->steps;
	} else if (way.cells + chase->steps > ways->longest_cells) {
		ways->longest_cells = way.cells + chase->steps;
		ways->longest_state = start;
	}
}

static void mark_passing(struct ways *ways, const struct machine *machine, uint32_t states)
{
	for (uint32_t state = 0; state < states; state++)
		if (machine_settle(machine, state) != state)
			ways->records[state].way = WAY_PASSING;
}

// Passing states are on no chain; 0 is settled by definition.
static void finish_passing(struct ways *ways, uint32_t states)
{
	bool lost = ways_of(ways, 0).lost;
	for (uint32_t state = 1; state < states; state++) {
		if (ways->records[state].way != WAY_PASSING)
			continue;
		ways->records[state] = ways->records[0];
		ways->lost_states += lost;
	}
}

static struct ways *ways_alloc(struct arena *arena, uint32_t states)
{
	struct ways *ways = arena_alloc(arena, sizeof *ways);
	if (ways == NULL)
		return NULL;
	ways->records = arena_array(arena, states, sizeof *ways->records);
	// A closed segment is full, and no state is in two.
	ways->segments = arena_array(arena, states / SEGMENT_STATES + 1, sizeof *ways->segments);
	return ways->records != NULL && ways->segments != NULL ? ways : NULL;
}

struct ways *ways_find(struct arena *arena, const struct machine *machine, const struct wiring *wiring,
                       const uint32_t *frame_states, uint32_t frame_count)
{
	const uint32_t states = (uint32_t)1 << wiring->state_bits;
	struct chase *chase = arena_alloc(arena, sizeof *chase);
	struct ways *ways = ways_alloc(arena, states);
	if (chase == NULL || ways == NULL)
		return NULL;
	const bool passes = wiring->advance == ADVANCE_COUNT && wiring->clear == CLEAR_ASYNC;
	chase->ways = ways;
	machine_all_next(machine, &ways->records[0].subject, sizeof *ways->records / sizeof(uint32_t));
	if (passes)
		mark_passing(ways, machine, states);
	ways->longest_state = frame_states[0];
	for (uint32_t index = 0; index < frame_count; index++)
		ways->records[frame_states[index]] = (struct way_record){.subject = index, .way = WAY_HOME};
	for (uint32_t state = 0; state < states; state++)
		if (ways->records[state].way == WAY_UNKNOWN)
			follow_chain(chase, state);
	if (passes)
		finish_passing(ways, states);
	return ways;
}
