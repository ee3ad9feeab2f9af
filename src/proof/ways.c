// Chains of unvisited states are followed until they meet a state whose way is known. The cost is the chase itself:
// each step waits for a far read. So every state is read and marked in one visit, and several lanes follow chains of
// their own in turn, while the reads of the others are under way. The way back over a chain, which fills in the ways,
// goes over a short list of the states visited last. Where a chain outgrows the list, its part so far becomes a closed
// segment: its records keep their place in the segment, and only the segment learns where it leads. Where a chain meets
// another that is still being followed, its states take places in that one's segment.
#include "proof/ways.h"

#include "base/arena.h"
#include "machine/machine.h"
#include "proof/segments.h"

#define LANES 16u
#define BLOCKS 256u
// So many states before it is marked, the state after a state is asked for.
#define LOOK_AHEAD 16u

// Follows one chain at a time, starting from the unvisited states of a block.
struct lane {
	bool running;
	uint32_t cursor, end;              // of the block
	uint32_t start;                    // of the chain
	uint32_t state;                    // to be visited next
	uint32_t segment;                  // under way
	uint32_t recent_count;
	uint32_t recent[SEGMENT_STATES];   // the states of the segment
};

struct chase {
	struct ways *ways;
	struct way_record *records;
	uint32_t states;
	struct segments segments;
	uint32_t next_block, block_states;
	struct lane lanes[LANES];
};

static void fetch(const struct way_record *record)
{
	__builtin_prefetch(record, 1, 3);
}

// A segment that others refer to keeps its number when its chain ends. Chains that cross each other over and over could
// use up the numbers; when those left are all that closed segments may need, one lane goes on alone, which nothing can
// cross.
static bool is_crowded(const struct chase *chase)
{
	return chase->segments.capacity - chase->segments.count < chase->states / SEGMENT_STATES + 2 * LANES;
}

static uint32_t lane_number(const struct chase *chase, const struct lane *lane)
{
	return (uint32_t)(lane - chase->lanes);
}

static void start_chain(struct chase *chase, struct lane *lane, uint32_t state)
{
	lane->start = lane->state = state;
	lane->recent_count = 0;
	if (lane->segment == NO_SEGMENT)
		lane->segment = segment_open(&chase->segments, lane_number(chase, lane), NO_SEGMENT, 0);
}

// Starts a chain in the block; false if the block has no unvisited state left. Most spare states are one cell from
// home: they need no chain.
static bool start_in_block(struct chase *chase, struct lane *lane)
{
	struct way_record *records = chase->records;
	while (lane->cursor < lane->end) {
		uint32_t state = lane->cursor++, ahead = (state + LOOK_AHEAD) & (chase->states - 1);
		fetch(&records[records[ahead].subject & (chase->states - 1)]);
		if (records[state].way != WAY_UNKNOWN)
			continue;
		struct way_record after = records[records[state].subject];
		if ((after.way & WAY_KIND) != WAY_HOME) {
			start_chain(chase, lane, state);
			return true;
		}
		records[state] = (struct way_record){.subject = after.subject, .way = after.way + 1};
		note_longest(chase->ways, (after.way & ~WAY_KIND) + 1, state);
	}
	return false;
}

static bool lane_start(struct chase *chase, struct lane *lane)
{
	for (;;) {
		if (lane != chase->lanes && is_crowded(chase))
			return false;
		if (start_in_block(chase, lane))
			return true;
		if (chase->next_block * chase->block_states >= chase->states)
			return false;
		lane->cursor = chase->next_block++ * chase->block_states;
		lane->end = lane->cursor + chase->block_states;
	}
}

// Visits one state of the chain; false if it was visited before.
static bool lane_step(struct chase *chase, struct lane *lane)
{
	struct way_record *place = &chase->records[lane->state];
	if (place->way != WAY_UNKNOWN)
		return false;
	if (lane->recent_count == SEGMENT_STATES) {
		uint32_t position = chase->segments.list[lane->segment].position + SEGMENT_STATES;
		lane->segment = segment_open(&chase->segments, lane_number(chase, lane), lane->segment, position);
		lane->recent_count = 0;
	}
	uint32_t next = place->subject;
	*place = (struct way_record){.subject = lane->segment, .way = WAY_SEGMENT | (WAY_PLACE_0 + lane->recent_count)};
	lane->recent[lane->recent_count++] = lane->state;
	lane->state = next;
	fetch(&chase->records[next]);
	return true;
}

static uint32_t chain_steps(const struct chase *chase, const struct lane *lane)
{
	return chase->segments.list[lane->segment].position + lane->recent_count;
}

// The chain ran into itself: from its end to its end again, by way of the state that it met.
static void note_loop(struct chase *chase, const struct lane *lane, const struct segment *root, int32_t place)
{
	struct ways *ways = chase->ways;
	if (ways->second_loop_cells != 0 && ways->second_loop_state <= lane->state)
		return;
	ways->second_loop_state = lane->state;
	ways->second_loop_cells = (uint32_t)((int32_t)(chain_steps(chase, lane) - root->position) - place);
}

// Where the chain leads that met a visited state.
static struct outcome lane_outcome(struct chase *chase, const struct lane *lane)
{
	struct way_record record = chase->records[lane->state];
	uint32_t count = record.way & ~WAY_KIND;
	if ((record.way & WAY_KIND) == WAY_HOME)
		return (struct outcome){.kind = SEGMENT_HOME, .entry = record.subject, .cells = count};
	if ((record.way & WAY_KIND) == WAY_LOST)
		return (struct outcome){.kind = SEGMENT_LOST};
	int32_t place = (int32_t)(count - WAY_PLACE_0);
	uint32_t index = segment_root(&chase->segments, record.subject, &place);
	struct segment *root = &chase->segments.list[index];
	if (root->kind == SEGMENT_HOME)
		return (struct outcome){.kind = SEGMENT_HOME, .entry = root->entry,
		                        .cells = (uint32_t)((int32_t)root->cells - place)};
	if (root->kind == SEGMENT_LOST)
		return (struct outcome){.kind = SEGMENT_LOST};
	if (root->lane == lane_number(chase, lane)) {
		note_loop(chase, lane, root, place);
		return (struct outcome){.kind = SEGMENT_LOST};
	}
	root->referred = true;
	return (struct outcome){.kind = SEGMENT_LINKED, .target = index, .place = place};
}

// The record of a state that comes `distance` cells before the one that its chain met.
static struct way_record settled_record(const struct outcome *outcome, uint32_t distance)
{
	if (outcome->kind == SEGMENT_HOME)
		return (struct way_record){.subject = outcome->entry, .way = WAY_HOME | (outcome->cells + distance)};
	if (outcome->kind == SEGMENT_LOST)
		return (struct way_record){.way = WAY_LOST};
	uint32_t place = WAY_PLACE_0 + (uint32_t)outcome->place - distance;
	return (struct way_record){.subject = outcome->target, .way = WAY_SEGMENT | place};
}

// Settles the chain: the states of the segment under way one by one, the closed segments as such. The number of the one
// under way serves the next chain, unless others refer to it.
static void lane_finish(struct chase *chase, struct lane *lane)
{
	struct segments *segments = &chase->segments;
	struct outcome outcome = lane_outcome(chase, lane);
	segments_count(segments, &outcome, chain_steps(chase, lane), lane->start);
	for (uint32_t index = 0; index < lane->recent_count; index++)
		chase->records[lane->recent[index]] = settled_record(&outcome, lane->recent_count - index);
	uint32_t distance = lane->recent_count, previous = segments->list[lane->segment].previous;
	if (segments->list[lane->segment].referred) {
		segment_settle(segments, lane->segment, &outcome, distance);
		lane->segment = NO_SEGMENT;
	} else {
		segments->list[lane->segment].previous = NO_SEGMENT;
		segments->list[lane->segment].position = 0;
	}
	while (previous != NO_SEGMENT) {
		distance += SEGMENT_STATES;
		segment_settle(segments, previous, &outcome, distance);
		previous = segments->list[previous].previous;
	}
}

static void run_lanes(struct chase *chase, uint32_t lanes)
{
	uint32_t running = 0;
	for (uint32_t index = 0; index < lanes; index++) {
		chase->lanes[index].running = lane_start(chase, &chase->lanes[index]);
		running += chase->lanes[index].running;
	}
	while (running > 0) {
		for (uint32_t index = 0; index < lanes; index++) {
			struct lane *lane = &chase->lanes[index];
			if (!lane->running || lane_step(chase, lane))
				continue;
			lane_finish(chase, lane);
			lane->running = lane_start(chase, lane);
			running -= !lane->running;
		}
	}
}

static void run_chase(struct chase *chase)
{
	run_lanes(chase, LANES);
	// What other lanes may have left undone when it became crowded.
	chase->lanes[0].cursor = 0;
	chase->lanes[0].end = chase->states;
	run_lanes(chase, 1);
}

// Every chain has ended now, so that every segment leads home or nowhere.
static void finish_segments(struct chase *chase)
{
	for (uint32_t index = 0; index < chase->segments.count; index++) {
		int32_t place = 0;
		const struct segment *root = &chase->segments.list[segment_root(&chase->segments, index, &place)];
		chase->ways->segments[index] = (struct way_segment){.lost = root->kind == SEGMENT_LOST, .entry = root->entry,
		                                                    .cells = (uint32_t)((int32_t)root->cells - place)};
	}
}

static void mark_passing(struct chase *chase, const struct machine *machine)
{
	for (uint32_t state = 0; state < chase->states; state++)
		if (machine_settle(machine, state) != state)
			chase->records[state].way = WAY_PASSING;
}

// Passing states are on no chain. Whatever loop a counter is in, it comes by 0, which is settled by definition: 0 is in
// the frame.
static void finish_passing(struct chase *chase)
{
	for (uint32_t state = 1; state < chase->states; state++)
		if (chase->records[state].way == WAY_PASSING)
			chase->records[state] = chase->records[0];
}

static struct chase *chase_create(struct arena *arena, uint32_t states)
{
	struct ways *ways = arena_alloc(arena, sizeof *ways);
	struct chase *chase = arena_alloc(arena, sizeof *chase);
	if (ways == NULL || chase == NULL)
		return NULL;
	// A closed segment is full, and no state is in two; the rest is for segments that others refer to.
	uint32_t capacity = states / SEGMENT_STATES + states / BLOCKS + 4 * LANES;
	chase->ways = ways;
	chase->states = states;
	chase->block_states = states < BLOCKS ? 1 : states / BLOCKS;
	chase->segments = (struct segments){.ways = ways, .capacity = capacity};
	chase->segments.list = arena_array(arena, capacity, sizeof *chase->segments.list);
	ways->segments = arena_array(arena, capacity, sizeof *ways->segments);
	ways->records = chase->records = arena_array(arena, states, sizeof *ways->records);
	for (uint32_t index = 0; index < LANES; index++)
		chase->lanes[index].segment = NO_SEGMENT;
	return chase->segments.list != NULL && ways->segments != NULL && ways->records != NULL ? chase : NULL;
}

struct ways *ways_find(struct arena *arena, const struct machine *machine, const struct wiring *wiring,
                       const uint32_t *frame_states, uint32_t frame_count)
{
	if (wiring->form == FORM_LINE_FRAME)
		return stage_ways_find(arena, machine, wiring, frame_states, frame_count);
	struct chase *chase = chase_create(arena, (uint32_t)1 << wiring->line.state_bits);
	if (chase == NULL)
		return NULL;
	const bool passes = wiring->line.advance == ADVANCE_COUNT && wiring->line.clear == CLEAR_ASYNC;
	machine_all_next(machine, &chase->records[0].subject, sizeof *chase->records / sizeof(uint32_t));
	if (passes)
		mark_passing(chase, machine);
	chase->ways->longest_state = frame_states[0];
	for (uint32_t index = 0; index < frame_count; index++)
		chase->records[frame_states[index]] = (struct way_record){.subject = index, .way = WAY_HOME};
	run_chase(chase);
	finish_segments(chase);
	if (passes)
		finish_passing(chase);
	return chase->ways;
}
