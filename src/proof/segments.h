// Segments: parts of chains whose states share one account of where they lead. A state's record names its segment and
// its place in it: the state of place p leads to place p + 1. States of other chains that join a segment count back
// from where they join, into negative places. Internal to the search for ways.
#ifndef SCANLATCH_PROOF_SEGMENTS_H
#define SCANLATCH_PROOF_SEGMENTS_H

#include "proof/ways.h"

#define SEGMENT_STATES 1024u
#define NO_SEGMENT UINT32_MAX

enum segment_kind {
	SEGMENT_OPEN,      // its chain is still being followed
	SEGMENT_LINKED,    // its chain ran into an open segment of another
	SEGMENT_HOME,
	SEGMENT_LOST,
};

struct segment {
	enum segment_kind kind;
	bool referred;         // by states or segments of other chains
	uint32_t lane;         // open: who follows the chain
	uint32_t previous;     // open: the segment before it in the chain, or NO_SEGMENT
	uint32_t position;     // open: of place 0 in the chain
	uint32_t target;       // linked: the segment it ran into
	int32_t shift;         // linked: place 0 is place `shift` of the target
	uint32_t entry;        // home: where place 0 enters the frame
	uint32_t cells;        // home: after how many cells
	uint32_t guests;       // states of other chains that lead here
	int32_t far_place;     // the farthest of them, if there are any, and its state, the lowest of equals
	uint32_t far_state;
};

// Where a chain leads: the way of the state that it met, or that state's place in an open segment.
struct outcome {
	enum segment_kind kind;
	uint32_t entry, cells;     // home
	uint32_t target;           // linked
	int32_t place;
};

struct segments {
	struct ways *ways;         // whose longest way and lost states are kept
	struct segment *list;
	uint32_t count;
	uint32_t capacity;
};

// A new open segment; *segments has room for as many as the caller asks for. Cannot fail.
uint32_t segment_open(struct segments *segments, uint32_t lane, uint32_t previous, uint32_t position);

// Follows links from a place in a segment to one that is not linked; *place becomes the place there. Cannot fail.
uint32_t segment_root(struct segments *segments, uint32_t segment, int32_t *place);

// Says where a segment leads, whose place 0 comes `distance` cells before the state that its chain met. Cannot fail.
void segment_settle(struct segments *segments, uint32_t segment, const struct outcome *outcome, uint32_t distance);

// Counts the states of a chain, `steps` of them from `start` to the state that it met. Cannot fail.
void segments_count(struct segments *segments, const struct outcome *outcome, uint32_t steps, uint32_t start);

// Notes a way that may be the longest so far. Cannot fail.
void note_longest(struct ways *ways, uint32_t cells, uint32_t state);

#endif
