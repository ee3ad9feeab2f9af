// What images do, told in the terms of a plan that they are held against: as the plan that they could have been made from.
//
// Images have no names. So their lines are aligned with the plan's by what they show, cut where the plan's begin, and divided into the
// plan's regions where these agree best; an edge that no pin sees is where the plan has it. Holds are the plan's own where the
// states of the images keep them. What then differs from the plan are the edits that lie between the two, as far as pins show them.
#ifndef SCANLATCH_COMPARE_SEEN_H
#define SCANLATCH_COMPARE_SEEN_H

#include "image/image.h"
#include "layout/timeline.h"

struct seen_options {
	uint32_t bank;             // setting of the bank jumpers
	bool has_start;            // the state of the frame's first cell is known
	uint32_t start;
	bool start_is_planned;     // the plan names it, and it is not only what another build has
	const uint32_t *const *codes; // [signals]: what stands for `codes: auto`, where any were found in the images
	const size_t *code_counts;
};

struct seen {
	struct arena *arena;
	struct plan *plan;         // the plan, but for line types and blocks
	struct timeline *timeline; // of it: cell by cell what the images show
};

// Reads images, all of them there, of the chips of the timeline's plan. NULL after reporting: they are no raster, their loop is too long, they
// cannot be told in the plan's terms, or memory is out. Freed with seen_destroy; the timeline must outlive it. Time is
// linear in cells and states but for the alignment of lines and of regions, whose steps have a limit.
struct seen *seen_create(const struct timeline *planned, const struct image *images, struct seen_options options,
                         struct diagnostics *diagnostics);
void seen_destroy(struct seen *seen);

#endif
