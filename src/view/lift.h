// What was lifted out of images: as a plan, in words, and as JSON.
#ifndef SCANLATCH_VIEW_LIFT_H
#define SCANLATCH_VIEW_LIFT_H

#include <jansson.h>

#include "image/image.h"
#include "plan/document.h"
#include "proof/lift.h"

struct text;

// Where the images came from.
struct lift_sources {
	const char *board;                 // file name without folder
	const struct image *images;        // of each chip of the board
	const char *const *files;          // the file names that they were read from, without folders
};

// Puts the plan. `root` is the board's document: everything but lines, frame, and fields and start of the machine, is as it stands there,
// without comments. On top, a comment names the board and each chip's file and CRC-32. Failure is text's.
void view_lift_plan(struct text *out, const struct lift *lift, const struct node *root, const struct lift_sources *sources);

// Why the frame does not begin after vertical sync, as "arbitrary, as there is no vertical sync"; NULL if it does.
const char *view_lift_first(const struct lift *lift);

// Puts what was found in words: the loop, the frame, the line types. Failure is text's.
void view_lift_text(struct text *out, const struct lift *lift);

// {
//   "name", "board": file name,
//   "images": [ { "label", "file", "crc32" } ],
//   "loop": { "state": of the frame's first cell, "cells", "ticks", "lines", "power_up_state", "lead_in_cells" },
//   "laps": of the loop in the frame,
//   "other_loops": [ { "state", "cells" } ], "other_loop_count", "lost_states",
//   "lines": [ { "name", "cells", "ticks", "used", "regions": [ { "name", "first_cell", "cells", "stretched_cells",
//       "asserted": [names], "hold": { field: expression } } ] } ],
//   "frame": [ { "repeat", "line" } ],
//   "near": whether states are pinned,
//   "plan": the whole text of the plan
// }
// Ticks are strings, states hexadecimal strings as plans have them. A new reference; NULL when memory is out.
json_t *view_lift_json(const struct lift *lift, const struct lift_sources *sources, const char *plan);

// Puts a chip's image in words, a line for each run of addresses whose rows follow each other alike: what a textconv of git compares.
// Failure is text's.
void view_chip_rows(struct text *out, const struct plan *board, size_t chip, const struct image *image);

// Puts a node as YAML in one line: scalars plain where that is safe, else quoted. Failure is text's.
void text_put_flow(struct text *out, const struct node *node);
// Puts a scalar's text so that it is read back as it is; `flow`: between { } or [ ]. Failure is text's.
void text_put_scalar(struct text *out, const char *value, bool flow);

// Puts a top-level key of a document in the house's style. Failure is text's.
void view_board_key(struct text *out, const char *key, const struct node *node);

#endif
