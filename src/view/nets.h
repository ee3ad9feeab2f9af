// How the logic around the EEPROMs is packed for wiring: latched bits into octal latches in order, counted ones into counters of four
// bits, and what each wire is called from end to end. Internal to view/. When memory is out, out->failed is set.
#ifndef SCANLATCH_VIEW_NETS_H
#define SCANLATCH_VIEW_NETS_H

#include "plan/plan.h"

struct text;

// Every latch of the catalogue is an octal, every counter a 161 or 163 of four bits, every decoder a 138 of eight outputs.
#define LATCH_BITS 8u
#define COUNTER_BITS 4u
#define DECODER_INPUTS 3u
#define DECODER_OUTPUTS 8u

// A wire from the data pin of an EEPROM, as in the plan's wiring (`kind` DATA_…).
struct stage_nets {
	enum stage stage;
	bool counted;                  // the state comes from counters
	bool latched;                  // outputs are registered
	struct data_wire latch[LIMIT_STATE_BITS + LIMIT_KIND_BITS + 1 + LIMIT_SIGNALS]; // bit b: D and Q (b mod 8) of latch b/8
	unsigned latch_bits;
	struct data_wire straight[LIMIT_KIND_BITS + 2 + LIMIT_SIGNALS]; // not latched
	unsigned straight_count;
};

// The nets of one of a plan's stages: next, kind, step, signals in the order of the plan; clear is never latched. Cannot fail.
struct stage_nets nets_of_stage(const struct plan *plan, enum stage stage);

unsigned nets_latches(const struct stage_nets *nets);
unsigned nets_counters(const struct stage_nets *nets, const struct plan *plan);

// Puts "next.3", "kind.0", "step", a signal's name.
void put_data_net(struct text *out, const struct plan *plan, struct data_wire wire);
// What it is called behind the latch: "state.3" for next.3.
void put_latched_net(struct text *out, const struct plan *plan, struct data_wire wire);
// Puts "latch 1, D3" (`pin` D) or "frame latch 2, Q0".
void put_latch_pin(struct text *out, const struct plan *plan, const struct stage_nets *nets, unsigned bit, char pin);
// Puts where a bit of a stage's state, or of the kind, comes from: "latch 1, Q3", "line counter 2, Q0", "D2 (pin 11) of rom3".
void put_state_source(struct text *out, const struct plan *plan, enum stage stage, unsigned bit);
void put_kind_source(struct text *out, const struct plan *plan, unsigned bit);
// Puts where a net of an EEPROM's data pin can be probed: behind its latch, or at the pin itself.
void put_data_source(struct text *out, const struct plan *plan, const struct stage_nets *nets, struct data_wire wire);
// Puts where a data net goes: "latch 1, D3", "the counters' clear, inverted", "the line stage's address".
void put_data_sink(struct text *out, const struct plan *plan, const struct stage_nets *nets, struct data_wire wire);
// Puts the data pins that carry a wire: "D3 (pin 15) of rom0".
void put_data_pin(struct text *out, const struct plan *plan, enum stage stage, struct data_wire wire);
// Puts the address pins of all chips to which a wire goes, those of one number together: "A3 (pin 9) of rom0, rom1". False, with nothing put, if
// there are none.
bool put_address_pins(struct text *out, const struct plan *plan, enum stage stage, enum address_wire_kind kind, unsigned index);

#endif
