// The manifest that `build` writes beside the images.
#ifndef SCANLATCH_VIEW_MANIFEST_H
#define SCANLATCH_VIEW_MANIFEST_H

#include <jansson.h>

struct image;
struct proofs;
struct timeline;

// The manifest as
//   { "format": 1, "name",
//     "plan": { "file", "crc32" },
//     "chips": [ { "label", "part", "bytes", "crc32", "sum16", "files": [NAME…],
//                  "address": [wire…], "data": [wire…]: see view/chips.h } ],
//     "start": [ { "bank", "stage", "state" } ],
//     "frame": { "lines", "cells", "ticks" (string), "rate": { "fraction" (Hz), "decimal" } },
//     "proofs": see view/proofs.h }
// `files`: bit 0 .bin, bit 1 .hex. A new reference; NULL when memory is out.
json_t *view_manifest(const struct proofs *proofs, const struct image *images, unsigned files);

// The frame's figures as in the manifest. A new reference; NULL when memory is out.
json_t *view_frame_json(const struct timeline *timeline);

#endif
