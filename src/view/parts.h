// The catalogue of parts for people and for programs.
#ifndef SCANLATCH_VIEW_PARTS_H
#define SCANLATCH_VIEW_PARTS_H

#include <jansson.h>

struct catalogue;
struct text;

// Puts the catalogue as tables of at most 100 characters a line: memories, then the logic around them, each followed by the
// source of every value. When memory is out, out->failed is set.
void view_parts(struct text *out, const struct catalogue *catalogue);

// The catalogue as
//   { "memories": [MEMORY…],
//     "latches": [LOGIC…], "counters": [LOGIC…], "decoders": [LOGIC…] }
//   MEMORY: { "name", "organisation", "bytes", "address_pins", "data_pins", "package", "source", "pinout": { "pins": [name…] from pin 1 on,
//             "source" } or null, "access": [TIME…] }
//   LOGIC: { "name", "conditions", "delay": TIME, "setup": TIME } (a decoder has no setup)
//   TIME:  { "time": "150 ns" (exact), "seconds": "3/20000000" (exact), "ns": 150 (rounded), "source" }
// A new reference, owned by the caller; NULL when memory is out.
json_t *view_parts_json(const struct catalogue *catalogue);

#endif
