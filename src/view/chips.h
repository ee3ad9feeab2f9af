// The chips of a plan and what is wired to each of their pins.
#ifndef SCANLATCH_VIEW_CHIPS_H
#define SCANLATCH_VIEW_CHIPS_H

#include <jansson.h>

struct chip;
struct plan;
struct text;

// Puts for each chip a line with its label, part, access time and (of a line-frame machine) stage, and then, wrapped, what goes to its address pins and
// what comes from its data pins: "A0 state.0  …  A16 open (tie low)", "D0 next.0  …  D7 -". When memory is out,
// out->failed is set.
void view_chips(struct text *out, const struct plan *plan);

// The wires of a chip's pins, A0 or D0 first, as the language names them; "-" for a pin to which nothing is wired. A
// new reference; NULL when memory is out.
json_t *view_address_json(const struct chip *chip);
json_t *view_data_json(const struct plan *plan, const struct chip *chip);

// All chips as [ { "label", "part", "stage" (of a line-frame machine), "access_s" (exact), "access_ns", "address": as above, "data": as above } ]. A new
// reference; NULL when memory is out.
json_t *view_chips_json(const struct plan *plan);

#endif
