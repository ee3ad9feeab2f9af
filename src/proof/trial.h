// A trial: the machine with one setting of its bank jumpers, its simulated lap, and what the proofs find there.
// Internal to proof/.
#ifndef SCANLATCH_PROOF_TRIAL_H
#define SCANLATCH_PROOF_TRIAL_H

#include "machine/machine.h"
#include "proof/decoder.h"
#include "proof/proof.h"

struct ways;

// As many cells as the frame has, from the first cell on, as the machine takes them.
struct lap {
	uint32_t *states;         // [cell_count]; NULL for a plan without images
	uint64_t *pins;           // [cell_count]: bit s: signal s is asserted at its pin
	uint32_t state_after;     // the state that follows the last cell
	uint32_t return_cells;    // after so many cells the first state came back for the first time; 0: never in the lap
	bool closed;              // the states are a loop that fits the frame
	int64_t *line_ticks;      // [line_count]
	int64_t ticks;            // of the whole lap
	int64_t shortest_ticks;   // of a cell
};

// Sums over the upsets of all trials so far that regained the frame. They stay below 2^24 states × 24 bits × 2^24 cells
// × 2^8 banks < 2^61.
struct upset_sums {
	uint64_t regained;
	uint64_t cells;
	uint64_t slip_cells;
};

struct trial {
	struct proofs *proofs;
	const struct timeline *timeline;
	const uint64_t *expected;     // [cell_count]: the pins as planned
	uint32_t period;              // the timeline's shortest
	struct decoders *decoders;
	struct arena *arena;          // of this trial; words of counterexamples go to the proofs' arena
	const struct image *images;
	struct wiring wiring;
	struct feedback at;           // where the parts of a state lie
	const struct machine *machine;
	const uint32_t *numbered;     // [cell_count]: the bits of the state that count lines and cells, as planned; NULL in a loop machine
	uint32_t numbered_bits;       // which bits these are
	uint32_t bank;                // the jumpers' setting
	bool first;                   // of the trials of these proofs
	bool has_start;               // the plan's; otherwise `start` was found in the images
	uint32_t start;
	struct lap lap;
	uint32_t departed_cell;       // found by closure (line-frame: with the lap): the first cell that the states should not have come to;
	                              // UINT32_MAX if there is none
	struct counterexample departure; // line-frame: the fault there; `present` is false if there is none
	bool departure_certain;
	struct ways *ways;            // found by power-up for upset; NULL if the lap is not closed
	struct upset_sums upset_sums;
};

// Proofs without results yet: every figure zero, every verdict pass. NULL when memory is out.
struct proofs *proofs_alloc(const struct timeline *timeline);

// Runs the lap from a state: states, then (once the decoders are known, with lap_finish) pins and ticks.
// False when memory is out.
bool lap_run(struct trial *trial, uint32_t start);
bool lap_finish(struct trial *trial);

// The ticks that a cell takes: long if the pin of the stretch signal was asserted `lead` cells before. Cannot fail.
int64_t lap_cell_ticks(const struct trial *trial, uint32_t cell);
// The cell whose pin decides the length of a cell. Only for plans with a stretch signal. Cannot fail.
uint32_t lap_stretch_cell(const struct trial *trial, uint32_t cell);

// The proofs, one file each. They add to the results of the trials before. False when memory is out.
bool prove_closure(struct trial *trial);
bool prove_signals(struct trial *trial);
bool prove_colour(struct trial *trial);
bool prove_power_up(struct trial *trial);
bool prove_upset(struct trial *trial);
bool prove_limits(struct trial *trial);
bool prove_glitches(struct trial *trial);
bool prove_speed(struct trial *trial);
bool prove_sweep(struct trial *trial);

// The ticks that a way of so many cells takes from a state on. Cannot fail.
int64_t way_ticks(const struct trial *trial, uint32_t state, uint32_t cells);

// What glitches has to say of direct outputs and asynchronous clears. Cannot fail.
void measure_unsettled(struct trial *trial);

// A proof fails: its verdict, and the counterexample if it is the first. `found` must have its words; NULL words mean
// that memory is out, and give false.
bool proof_fails(struct trial *trial, enum proof_kind kind, struct counterexample found);
// A proof that cannot be judged, for a reason in words, fails. Cannot fail.
void proof_not_judged(struct trial *trial, enum proof_kind kind, const char *reason);

// A counterexample at a cell, without words yet: the pin of a signal there, or a bit of the state in which the cell's
// successor finds itself. They name the state whose row was read and the byte that stands there. Cannot fail.
struct counterexample blame_pin(const struct trial *trial, uint32_t cell, size_t signal);
struct counterexample blame_next(const struct trial *trial, uint32_t cell, uint32_t wrong_bits);
// The same for the pin of step at a cell.
struct counterexample blame_step(const struct trial *trial, uint32_t cell);
// The same for the kind of a line, at its first cell.
struct counterexample blame_kind(const struct trial *trial, uint32_t line, uint32_t wrong_bits);
// Turns a counterexample whose words are made into one that may only follow from an earlier fault that another proof
// shows: it names no row and no byte. Its words are NULL when memory is out.
void blame_other_proof(const struct trial *trial, enum proof_kind kind, struct counterexample *found);
// The pins of a cell that can be judged, whether the lap ended well or not. Cannot fail.
uint64_t sure_pins(const struct trial *trial, uint32_t cell);
// From which cell on pins are judged, 0 or 1: the latched pins of cell 0 come from where the lap ended, so that they
// are judged last if it did not end well. Cannot fail.
uint32_t first_judged_cell(const struct trial *trial);
// The held bits of a cell that a state has wrong. Cannot fail.
uint32_t wrong_held_bits(const struct trial *trial, uint32_t cell, uint32_t state);
// The first cell of the lap, from there on, at which a pin or a held bit is wrong; UINT32_MAX if there is none. Cannot
// fail.
uint32_t signals_first_cell(const struct trial *trial);
// The bytes of all chips that carry the next state (or clear) of a state, in words: "U7 0x01A3: 0x5B and U8 0x01A3:
// 0x00". In the proofs' arena; NULL when memory is out.
const char *next_bytes(const struct trial *trial, enum stage stage, uint32_t address);
// A state in words: "0x1A3"; of a line-frame machine "H 0x5, step 0, kind 1, V 0x20C". In the proofs' arena; NULL when memory is out.
const char *state_words(const struct trial *trial, uint32_t state);
// A counterexample at a state of a second loop, without a cell. Its words, "its next state is …", say what would mend its
// row (of a line-frame machine, one of its rows: "no row of it asserts step, …"), and are NULL when memory is out.
struct counterexample blame_loop(const struct trial *trial, uint32_t state);
#define ANY_WIRE (~0u)
// The chip of a stage with the longest access time among those that carry one of some wires (1u << enum data_wire_kind, or ANY_WIRE); of
// equals, the first. SIZE_MAX if none does. Cannot fail.
size_t slowest_chip(const struct wiring *wiring, enum stage stage, unsigned kinds);
// The cell before, around the frame. Cannot fail.
uint32_t cell_before(const struct trial *trial, uint32_t cell);

#endif
