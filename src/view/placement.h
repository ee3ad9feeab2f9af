// What `stretch: auto` chose, for people and for programs.
#ifndef SCANLATCH_VIEW_PLACEMENT_H
#define SCANLATCH_VIEW_PLACEMENT_H

#include <jansson.h>

#include "layout/timeline.h"

struct text;

// Puts what the limits made of the best placement and of the second best; nothing where they did not decide.
void view_placement(struct text *out, const struct timeline *timeline);

// { "limits": that bind and that lines show, "exhausted": no other way can be better, "best", "second" (if there is another way): PLACEMENT };
//   PLACEMENT: { "kept", "share" (exact; and share_rounded: the smallest margin of what is kept and moves, as a share of the
//                tolerance; left out if none moves),
//                "stretched": [ { "line", "region": that the first of them is in, "first_cell", "cells" } ] }
// A new reference; json_null where the limits did not decide; NULL when memory is out.
json_t *view_placement_json(const struct timeline *timeline);

#endif
