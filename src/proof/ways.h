// The way home from every state: after how many cells, and where, it enters the frame. Internal to proof/.
#ifndef SCANLATCH_PROOF_WAYS_H
#define SCANLATCH_PROOF_WAYS_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

struct arena;
struct machine;
struct wiring;

// What the upper bits of a record's `way` say; the lower ones hold a count of cells, or a place plus WAY_PLACE_0.
#define WAY_KIND 0xE0000000u
#define WAY_UNKNOWN 0u             // subject: the next state
#define WAY_PASSING 0x20000000u    // a counter's passing state: falls to 0 at once and shares its way
#define WAY_SEGMENT 0x40000000u    // subject: the segment; then its place in it
#define WAY_LOST 0x60000000u
#define WAY_HOME 0x80000000u       // subject: where it enters the frame; count: cells until then

// No place lies farther from place 0 than there are states.
#define WAY_PLACE_0 0x01000000u

// The first word is what machine_all_next fills in.
struct way_record {
	uint32_t subject;
	uint32_t way;
};

// Where place 0 of a segment of a long chain leads.
struct way_segment {
	bool lost;
	uint32_t entry;
	uint32_t cells;
};

// Of a line-frame machine, whose states may be more: 48 bits a state, of which the lower entry_bits are where it enters
// the frame and the others the count of cells until then. The largest numbers say something else.
struct compact_ways {
	uint32_t *low;                  // [2^feedback bits]; NULL for a loop machine
	uint16_t *high;
	unsigned entry_bits;
};

#define COMPACT_UNKNOWN 0xFFFFFFFFFFFFull
#define COMPACT_LOST 0xFFFFFFFFFFFEull
#define COMPACT_OPEN 0xFFFFF0000000ull  // plus the state before it on the way that is being followed
#define COMPACT_MOST 0xFFFFEFFFFFFFull  // of a way home

struct ways {
	struct way_record *records;     // [2^state_bits]; NULL for a line-frame machine
	struct way_segment *segments;
	struct compact_ways compact;
	bool too_long;                  // some way home is longer than can be told; then it counts as lost
	uint32_t longest_cells;         // the longest way, and the lowest state that has it
	uint32_t longest_state;
	uint64_t lost_states;           // states that never reach the frame
	uint32_t second_loop_state;     // the first other loop that came up, if any state is lost
	uint32_t second_loop_cells;
};

struct way {
	bool lost;         // never reaches the frame; then the rest says nothing
	uint32_t cells;    // 0 for a state of the frame
	uint32_t entry;    // position in frame_states where it enters
};

// Follows every state of the machine until it meets the frame, whose states are frame_states[frame_count], a loop in order,
// all different. 8 bytes a state, and a fraction of a byte more, in the arena, or 6 for a line-frame machine; time linear in the
// states: each is read once from where its predecessor led. NULL when memory is out.
struct ways *ways_find(struct arena *arena, const struct machine *machine, const struct wiring *wiring,
                       const uint32_t *frame_states, uint32_t frame_count);

// The same for a line-frame machine. Internal to the search for ways.
struct ways *stage_ways_find(struct arena *arena, const struct machine *machine, const struct wiring *wiring,
                             const uint32_t *frame_states, uint32_t frame_count);

static inline uint64_t compact_get(const struct compact_ways *compact, uint32_t state)
{
	return (uint64_t)compact->high[state] << 32 | compact->low[state];
}

static inline struct way compact_way(const struct compact_ways *compact, uint32_t state)
{
	const uint64_t way = compact_get(compact, state);
	if (way > COMPACT_MOST)
		return (struct way){.lost = true};
	return (struct way){.cells = (uint32_t)(way >> compact->entry_bits),
	                    .entry = (uint32_t)(way & (((uint64_t)1 << compact->entry_bits) - 1))};
}

// The way of a state. Cannot fail.
static inline struct way ways_of(const struct ways *ways, uint32_t state)
{
	if (ways->compact.low != NULL)
		return compact_way(&ways->compact, state);
	struct way_record record = ways->records[state];
	uint32_t kind = record.way & WAY_KIND, count = record.way & ~WAY_KIND;
	if (kind == WAY_HOME)
		return (struct way){.cells = count, .entry = record.subject};
	if (kind != WAY_SEGMENT || ways->segments[record.subject].lost)
		return (struct way){.lost = true};
	const struct way_segment *segment = &ways->segments[record.subject];
	return (struct way){.cells = segment->cells + WAY_PLACE_0 - count, .entry = segment->entry};
}

#endif
