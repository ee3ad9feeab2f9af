// What a plan lays out: the divider, lines, regions, positions, roundings, frame, chips and their wiring, colour, limits and speed.
#ifndef SCANLATCH_VIEW_CHECK_H
#define SCANLATCH_VIEW_CHECK_H

#include <jansson.h>
#include <stdbool.h>
#include <stdint.h>

#include "view/columns.h"

struct arena;
struct fraction;
struct text;
struct timeline;

// A line type of a timeline, and the table of its regions.
struct line_view {
	const struct timeline *timeline;
	const struct line_type *type;
	const struct laid_line *laid;
};
struct line_view line_view_of(const struct timeline *timeline, size_t type);
// The view must outlive the table. Cannot fail.
struct columns regions_table(const struct line_view *view);

// How many lines of the frame have each type: an array in the arena. NULL when memory is out.
uint32_t *count_uses(const struct timeline *timeline, struct arena *arena);

// In words, without line breaks: a line type, used by so many lines; the frame; "157500000/11 Hz (14.318182 MHz)".
void put_line_figures(struct text *out, const struct line_view *view, uint32_t uses);
void put_frame_figures(struct text *out, const struct timeline *timeline);
void put_hertz(struct text *out, struct fraction hertz);

// Puts the report of `check` for a terminal. *kept (may be NULL): colour is what the plan demands; *advice_kept (may be NULL): limits are kept and
// the speed suffices. False when memory is out.
bool view_check(struct text *out, const struct timeline *timeline, bool *kept, bool *advice_kept);

// The same as
//   { "plan": { "name", "file", "crc32", "note" },
//     "clock": { "master_hz", "master_mhz", "cell_ticks", "stretch_ticks", "dot_ticks", "accuracy_ppm" (if given),
//                "subcarrier_hz", "subcarrier_mhz" (if given) },
//     "divider": see view/divider.h,
//     "lines": [ { "name", "cells", "ticks", "us", "cycles", "cycles_rounded" (of the subcarrier; left out if there is none
//                  or they do not fit 64 bits), "stretched_cells", "used": lines of the frame,
//                  "regions": [ { "name", "first_cell", "cells", "stretched_cells", "start_ticks", "start_us", "ticks", "us",
//                                 "asked_ticks", "asked_us", "rounding_ticks", "rounding_us" (not of a fill),
//                                 "asserted": [signal…] } ] } ],
//     "frame": see view/frame.h,
//     "stretch_auto": see view/placement.h (only where limits decided it),
//     "suits_frame_stage": [signals of the line stage that never change within a line] (of a line-frame machine),
//     "chips": [ { "label", "part", "access_s", "access_ns", "address": [wire…], "data": [wire…] } ]: see view/chips.h,
//     "proofs": { "colour", "limits", "speed" } as in view/proofs.h }
// Exact values are strings (ticks, fractions); rounded ones are numbers. A new reference; NULL when memory is out.
json_t *view_check_json(const struct timeline *timeline, bool *kept, bool *advice_kept);

#endif
