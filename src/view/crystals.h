// The catalogue of crystals for people and for programs.
#ifndef SCANLATCH_VIEW_CRYSTALS_H
#define SCANLATCH_VIEW_CRYSTALS_H

#include <jansson.h>

struct crystals;
struct text;

// Puts the catalogue as a table of at most 100 characters a line, followed by the source of every value. When memory is out,
// out->failed is set.
void view_crystals(struct text *out, const struct crystals *crystals);

// The catalogue as { "crystals": [{ "name", "hz": "157500000/11" (exact), "hz_rounded": 14318181.818182, "use", "source" }…] }.
// A new reference, owned by the caller; NULL when memory is out.
json_t *view_crystals_json(const struct crystals *crystals);

#endif
