// What a frequency counter and a scope must show, row by row, in an order in which a board is sensibly brought up: clock, divider, states
// from the lowest bit on, what the stages tell each other, sync, and the other signals. Internal to view/.
#ifndef SCANLATCH_VIEW_BRING_UP_H
#define SCANLATCH_VIEW_BRING_UP_H

#include "proof/tally.h"

struct text;

enum bring_up_kind {
	BRING_UP_MASTER,
	BRING_UP_DOT,
	BRING_UP_SUBCARRIER,
	BRING_UP_DIVIDER,     // a bit of the divider's counter
	BRING_UP_CELL,        // the edges that end cells
	BRING_UP_NET          // a net of the tally
};

struct bring_up_row {
	enum bring_up_kind kind;
	unsigned bit;                  // of the divider
	const struct net_tally *net;
	bool known;                    // its figures fit 64 bits
	struct fraction hertz;         // mean over a frame
	bool has_duty;
	struct fraction duty;          // 0 to 1
};

struct bring_up {
	const struct proofs *proofs;
	const struct tally *tally;
	struct bring_up_row *rows;     // [count], in the tally's arena
	size_t count;
};

// Makes the rows of a bank. False, with *bring_up as it was, when memory is out.
bool bring_up_make(const struct proofs *proofs, const struct tally *tally, struct bring_up *bring_up);

// What a bit of a binary counter does that counts 0 … counts-1 and starts over: how often it rises, and for how many counts it is
// high. Cannot fail.
int64_t counter_bit_rises(int64_t counts, unsigned bit);
int64_t counter_bit_high(int64_t counts, unsigned bit);

// Puts the row's net, "state.3", "frame state.0", "counter bit 2"; where it can be probed; what a wrong value suggests. When memory is
// out, out->failed is set.
void put_bring_up_net(struct text *out, const struct bring_up *bring_up, const struct bring_up_row *row);
void put_bring_up_place(struct text *out, const struct bring_up *bring_up, const struct bring_up_row *row);
void put_bring_up_fault(struct text *out, const struct bring_up *bring_up, const struct bring_up_row *row);

// Puts a frequency in Hz, kHz or MHz, with up to 6 decimals: "15.734266 kHz".
void put_rate(struct text *out, struct fraction hertz);
// Puts a part as a percentage with up to 4 decimals: "7.3529 %".
void put_percent(struct text *out, struct fraction part);

#endif
