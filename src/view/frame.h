// The frame's figures as JSON.
#ifndef SCANLATCH_VIEW_FRAME_H
#define SCANLATCH_VIEW_FRAME_H

#include <jansson.h>

struct timeline;

// { "lines", "cells", "ticks" (string), "rate": { "fraction" (Hz), "decimal" } or null if it does not fit 64 bits }. A new reference; NULL
// when memory is out.
json_t *view_frame_json(const struct timeline *timeline);

#endif
