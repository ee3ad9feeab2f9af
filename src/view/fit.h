// What fit found: as tables, in JSON, and as a plan.
//
// The JSON document:
//   { "standard", "grade", "phase" (with colour only), "columns", "picture_lines", "crystals": how many were searched,
//     "choices": that meet all conditions, "judged": of those whose edges were sought,
//     "layouts": best first, [ { "rank": from 1, "crystal", "master_hz", "dot_ticks", "cell_dots", "cell_ticks", "cells",
//         "stretched": cells of a line, "stretch_dots", "stretch_ticks" (both only if there are any), "ticks",
//         "subcarrier_divisor", "cycles" of a line (both with colour only), "picture_share" of the published width, "line_hz",
//         "field_hz",
//         "regions": from 0H, [ { "region", "cells", "stretched", "ticks", "start_s", "start_us", "length_s", "length_us" } ], "serration": the same without
//         start (composite sync only),
//         "frame": { "lines", "cells", "broad_lines" or "vertical_sync_lines", "picture_top", "picture_lines" },
//         "memory": { "part", "access_s", "access_ns", "state_bits", "word_bits", "chips" },
//         "limits": { "binding", "kept", "share" and "tightest" (the smallest of times, rates and cycles, and whose it is; absent if no
//             limit that is kept has one), "items": [ { "item", "unit", "value", "kept", "margin", "share" } ] } } ],
//     "nearest": crystals without a layout, nearest first, [ { "crystal", "condition", "why" } ] }
// Fractions are strings, and NAME_rounded is their decimal. In "items" values and margins are in the item's unit; kept, margin and
// share are there if the limit binds, share if the limit is not one value.
#ifndef SCANLATCH_VIEW_FIT_H
#define SCANLATCH_VIEW_FIT_H

#include <jansson.h>

#include "layout/fit.h"

struct text;

// "numbers", "subcarrier", "room" … Cannot fail.
const char *fit_condition_name(enum fit_condition condition);

// Puts why a crystal gives no layout, in words. When memory is out, out->failed is set, as by all below.
void put_fit_obstacle(struct text *out, const struct fit_space *space, const struct fit_obstacle *obstacle);

void view_fit(struct text *out, const struct fit_space *space, const struct fit_result *result);

// NULL when memory is out.
json_t *view_fit_json(const struct fit_space *space, const struct fit_result *result);

// Puts the layout of an index as a complete plan.
void view_fit_plan(struct text *out, const struct fit_space *space, const struct fit_layout *layout);

// "sync", "breezeway" … Cannot fail.
const char *fit_region_name(enum fit_region region);

// Puts "every line", "every N lines" or "free".
void put_fit_phase(struct text *out, const struct fit_space *space);

#endif
