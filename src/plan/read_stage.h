// The keys of a stage: of a loop machine's only one, which are the machine's own, and of each of a line-frame machine's two.
#ifndef SCANLATCH_PLAN_READ_STAGE_H
#define SCANLATCH_PLAN_READ_STAGE_H

#include "plan/read.h"

extern const struct shape state_bits_shape, outputs_shape, advance_shape, count_shape, clear_shape;

#define STATE_KEY {"state", KEY_REQUIRED, &state_bits_shape, "The bits of the state"}
#define OUTPUTS_KEY \
	{"outputs", KEY_OPTIONAL, &outputs_shape, \
	 "registered (what it is when left out): the signals are latched together with the next state; direct: the EEPROM's own outputs"}
#define ADVANCE_KEY \
	{"advance", KEY_OPTIONAL, &advance_shape, \
	 "table (what it is when left out): the word holds the next state; count: a binary counter holds it, and the word its clear"}
// Only a counter is cleared.
#define CLEAR_BOND {.key = "clear", .needs = "advance", .shape = &count_shape}
#define CLEAR_KEY \
	{"clear", KEY_OPTIONAL, &clear_shape, \
	 "Of a counter: sync (74x163 style; what it is when left out) acts at the clock edge, async (74x161 style) at once"}

#endif
