// Inside seen: what its steps share. Each step is a file, in the order of the functions below.
#ifndef SCANLATCH_COMPARE_SEEN_WORK_H
#define SCANLATCH_COMPARE_SEEN_WORK_H

#include "compare/parts.h"
#include "compare/seen.h"
#include "proof/lift.h"

// What lies between two cuts of a frame: a line where all lines have their sync, and begin, alike.
struct segment {
	uint32_t first, cells;
	uint32_t content;          // a number that segments of both frames share if they show the same
};

// A frame, of the plan or of the images, turned so that a segment begins in its cell 0.
struct circle {
	uint64_t *asserted;        // [cells]
	uint32_t cells;
	uint32_t turned;           // its cell 0 is this cell of the timeline, or of the images' loop
	struct segment *segments;
	size_t count;
};

// A line of the images.
struct seen_line {
	uint32_t first, cells;     // in the images' circle
	size_t planned;            // the plan's line of the frame that it is; NONE
	size_t planned_type;       // the plan's line type that it is, in whatever shape; NONE
	size_t type;               // of the plan that is seen
	uint32_t row;              // in its block
	bool begins_block;
	size_t next;               // line of the same type, or NONE
};

// A line type of the plan that is seen.
struct seen_type {
	size_t planned;            // the plan's line type that it is, or is a variant of; NONE
	bool is_variant;           // more lines, or those that show what the plan says, are of another shape
	uint32_t first, cells;     // of its first line, in the images' circle
	size_t first_line;
	uint32_t lines;            // 0: of a type that the plan's frame has none of either
	size_t *region_of;         // [regions]: the plan's region that one is, or NONE
	uint32_t *cells_of;        // [the plan's regions]: how long one is here; 0: it is not. NULL: not divided yet, or the plan has it not
};

// A line as it was lifted, which has names by roles.
struct named_line {
	uint32_t first;            // in the loop
	uint32_t type;
};

// How lines of a loop machine, whose ends no pin tells, are looked for. What leaves fewer changes is told.
enum seen_try {
	TRY_SYNC,                  // as far before sync as in the line of the plan that one is
	TRY_CUTS,                  // as far before sync as most lines of the plan
	TRY_AS_READ,               // the same as the first, with levels and leads of signals as planned
	TRY_PLANNED_LINES          // as long as the plan's, of a frame that is as long as the plan's
};

struct seeing {
	struct arena *arena;       // of this work
	struct seen *seen;
	const struct timeline *planned;
	struct seen_options options;
	const struct lift *lift;
	enum seen_try try;
	uint32_t near_start;       // TRY_PLANNED_LINES: the cell of the loop near which the frame begins
	uint64_t cut;              // the signal at whose leading edge lines are cut; 0: where a line-frame machine steps
	uint64_t stretch;          // the stretch signal; 0 if there is none
	uint32_t laps;             // of the loop in the frame
	uint64_t inverted;         // signals whose active level is the other one
	bool inverts;              // some signal was taken for such a one
	struct circle plan, images;
	uint32_t *states;          // [images.cells]
	size_t start_segment;      // of the images: where the frame begins; NONE if that is not known
	struct alignment segments; // the images' are the old ones
	struct seen_line *lines;
	size_t line_count;
	struct seen_type *types;
	size_t type_count;
	struct named_line *named; // [lift->line_count]
	struct comparing steps;    // arena, failed, and steps that alignments may still take
	struct diagnostics *diagnostics;
};

// Each returns false after reporting.

// Cuts both frames into segments.
bool seen_cut(struct seeing *seeing);
// Turns the images' frame so that it begins where the plan's does.
bool seen_turn(struct seeing *seeing);
// Finds signals with another active level or lead, and undoes these.
bool seen_signals(struct seeing *seeing);
// Numbers and aligns the segments, and cuts the images' frame into lines.
bool seen_pair(struct seeing *seeing);
// Finds line types, and divides them into regions.
bool seen_sort(struct seeing *seeing);
bool seen_divide(struct seeing *seeing);
// Divides the frame into blocks.
bool seen_blocks(struct seeing *seeing);
// Gives regions what they hold.
bool seen_hold(struct seeing *seeing);

// The signals that may be the other way round: asserted about as long as the plan has them not. Cannot fail.
uint64_t seen_inverted(const struct seeing *seeing, const uint64_t *asserted, uint32_t cells);

// Whether a line may be so many lines after the first of its block, by what holds that count rows say. Cannot fail.
bool seen_row_fits(const struct seeing *seeing, size_t line, uint32_t row);

// The signals that are sync, of any kind. Cannot fail.
uint64_t seen_sync(const struct seeing *seeing);

// Gives segments of both frames their numbers, by signals of a mask. False after reporting.
bool seen_number(struct seeing *seeing, uint64_t mask);

// Numbers stretches of cells by what they show.
struct shelf;
struct shelf *shelf_create(struct arena *arena, size_t most);
// The number of so many cells, of signals of a mask: that of equal ones before, or a new one. `asserted` must outlive the shelf. Cannot fail.
uint32_t shelf_number(struct shelf *shelf, const uint64_t *asserted, uint32_t cells, uint64_t mask);

// A part of a line of the images in which all signals but stretch stay.
struct piece {
	uint32_t first, cells;     // in the line
	uint64_t asserted;         // without stretch
	size_t region;             // the plan's that it is, or NONE
};

// Takes the pieces of a line for the regions of a line type of the plan; one that is several regions, between which no pin sees an edge, is
// cut where the plan has the edges. *pieces and *count are replaced. False after reporting.
bool seen_match_regions(struct seeing *seeing, size_t planned_type, struct piece **pieces, size_t *count);

// Turns so many elements so that the one at `first` becomes the first; in the arena, NULL when memory is out.
void *turned_copy(struct arena *arena, const void *list, size_t count, size_t size, size_t first);

// "memory is out", and why else images cannot be told in the plan's terms; returns false.
bool seen_memory(struct seeing *seeing);
bool seen_refuse(struct seeing *seeing, const char *why);

#endif
