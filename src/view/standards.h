// The catalogue of standards for people and for programs.
#ifndef SCANLATCH_VIEW_STANDARDS_H
#define SCANLATCH_VIEW_STANDARDS_H

#include <jansson.h>

#include "catalogue/standards.h"

struct text;

// Puts a value of an item in the item's unit, which it does not name, rounded to 6 decimals; of a polarity "positive" or
// "negative". When memory is out, out->failed is set.
void put_limit_value(struct text *out, enum limit_item item, struct fraction value);

// A value in the item's unit. False, with *result as it was, if it does not fit.
bool limit_value_in_unit(enum limit_item item, struct fraction value, struct fraction *result);

// Puts every standard as a table of its limits, at most 100 characters a line, followed by the source of every value, and at the
// end what each item is. When memory is out, out->failed is set.
void view_standards(struct text *out, const struct standards *standards);

// The catalogue as
//   { "standards": [STANDARD…], "items": [{ "item", "unit" ("" for a polarity), "measures" }…] }
//   STANDARD: { "name", "title", "documents", "fields" (of a frame), "vertical_sync_line" (only where the standard numbers lines),
//               "limits": [LIMIT…], "burst_pauses": [{ "field", "first_line", "last_line", "source" }…], "notes": [STRING…] }
//   LIMIT:    { "item", "grade": "studio" or "monitor", "unit", "source", and of nominal, low and high those that there are:
//               "nominal": "47/10" (exact), "nominal_rounded": 4.7, …; of a polarity "nominal": "positive", … }
// A new reference, owned by the caller; NULL when memory is out.
json_t *view_standards_json(const struct standards *standards);

#endif
