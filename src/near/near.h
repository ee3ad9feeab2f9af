// The states that old images give to the cells of a frame, and which cell of a new timeline each of them is: so that a new table can keep
// them. The old plan is not needed. What comes of this is a preference only: whatever the old images hold, tables built near to them are
// as good as any.
#ifndef SCANLATCH_NEAR_NEAR_H
#define SCANLATCH_NEAR_NEAR_H

#include "image/image.h"
#include "layout/timeline.h"
#include "table/table.h"

struct arena;

// What is known of old images. They are of the new plan's chips, and wired alike but for signals.
struct old_machine {
	const struct plan *plan;       // the new one
	const struct image *images;    // [chip_count]
	uint32_t bank;
	bool has_start;                // of a loop: it is known in which state the frame begins
	uint32_t start;
	uint64_t known;                // bit s: data signal s was on the pin where it is now
	const uint32_t *const *codes;  // [signal_count]: of signals that come from a field, those that asserted them; NULL: not known
	const size_t *code_counts;
};

// A frame as a machine walks it.
struct old_frame {
	bool closed;               // it came back to its first cell
	uint32_t cell_count;
	uint32_t *states;          // [cell_count]: of the line stage, without the kind
	uint64_t *rows;            // [cell_count]: data signals that the row of each cell asserts, with the polarities of the plan
	uint64_t *decoded;         // [cell_count]: signals from fields that are asserted
	uint64_t *pins;            // [cell_count]: signals that are asserted at their pins, of the line stage, as the rows are read
	bool latched;              // a row shows while the next cell does
	uint64_t inverted;         // data signals that are read with the other polarity than the plan's
	uint64_t data;             // data signals that are known
	uint64_t known;            // the same, and the decoded signals that are known
	uint32_t *lines;           // [line_count]: the first cell of each line of a line-frame machine; a loop's are not known
	uint32_t line_count;
};

// Walks the frame of old images from its first cell, into the arena. Of a loop without a start, from the state that most states lead to, as
// spare rows do. One that does not close is as long as no state comes twice, and may be empty. False when memory is out.
bool old_frame_walk(struct arena *arena, const struct old_machine *machine, struct old_frame *frame);

// Fills a frame's pins from its rows. Cannot fail.
void old_frame_read(struct old_frame *frame, uint64_t inverted);

// The same, with the polarities that an edit of `active` may have left: signals whose times on and off changed places are read the other way round if
// cells are liker to those of the new timeline so, and suit better what is held there. False when memory is out.
bool old_frame_read_likest(struct old_frame *frame, const struct timeline *timeline);

// How cells are matched. Which is best depends on what changed: data signals that move change the fewest bytes if cells keep their places, while
// decoded ones need states with other codes then.
enum near_way {
	NEAR_LINES,  // lines, of a loop from leading edge to leading edge of sync, in order, by what they show; in each, cells by their places
	NEAR_SHOWN,  // the same lines; in each, cells by what they show
	NEAR_FRAME,  // cells by their places in the frame
	NEAR_WAYS
};

// Finds the old state of each cell of a timeline. In the arena; NULL when memory is out. Linear in cells, but for lines that all differ.
const struct preference *near_preference(struct arena *arena, const struct timeline *timeline, const struct old_frame *old, enum near_way way);

// How alike the cells of an old frame and a timeline are, lines matched as by NEAR_LINES: those that show the same, and held ones whose state suits
// the hold. False when memory is out, for which the arena is used.
bool near_likeness(struct arena *arena, const struct timeline *timeline, const struct old_frame *old, uint64_t *alike);

#endif
