// What a plan lays out: the divider, lines, regions, positions, roundings, frame, chips and their wiring, colour, limits and speed.
#ifndef SCANLATCH_VIEW_CHECK_H
#define SCANLATCH_VIEW_CHECK_H

#include <jansson.h>
#include <stdbool.h>

struct text;
struct timeline;

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
