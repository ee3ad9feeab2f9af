// The proofs of design page 1.7: from image bytes, against the timeline. One file for each proof; this header has their results.
// The prover shares with the maker only the timeline and the wiring.
#ifndef SCANLATCH_PROOF_PROOF_H
#define SCANLATCH_PROOF_PROOF_H

#include "image/image.h"
#include "layout/timeline.h"
#include "measure/measure.h"
#include "proof/line_phases.h"

enum proof_kind {
	PROOF_CLOSURE,
	PROOF_SIGNALS,
	PROOF_COLOUR,
	PROOF_POWER_UP,
	PROOF_UPSET,
	PROOF_LIMITS,
	PROOF_GLITCHES,
	PROOF_SPEED,
	PROOF_SWEEP,
	PROOF_COUNT
};

enum verdict {
	VERDICT_PASS,
	VERDICT_FAIL,
	VERDICT_ABSENT,   // nothing to prove: the plan does not ask
};

// The name of a proof as page 1.7 has it ("power-up"). Cannot fail.
const char *proof_name(enum proof_kind kind);
// True for closure, signals, colour, power-up and sweep: if one fails, the images are wrong.
bool proof_is_must(enum proof_kind kind);

#define NO_STATE UINT32_MAX

// Where an image byte is: for counterexamples.
struct byte_place {
	size_t chip;
	size_t address;        // chip address (for 16-bit parts the word address), as device programmers show it
	uint32_t value;        // the byte or word that is there
};

// A counterexample: everything that a person at a bench needs. Without a cell or state to show (`present` false) a failed proof may
// still have words and a bank: why it could not be judged, or what is missing.
struct counterexample {
	bool present;
	uint32_t bank;
	uint32_t cell;         // index in the frame; power-up has none
	enum stage stage;      // whose row was read when the fault came about
	uint32_t state;        // the address of that row: the stage's state (of a second loop: one of its states), and above it the kind
	                       // where the stage sees one; NO_STATE if no row is at fault here
	size_t signal;         // of a pin fault; SIZE_MAX if none
	bool byte_known;
	struct byte_place byte;
	const char *what;      // what went wrong, in words, with expected and found
	const char *hint;      // what may help; NULL if nothing is known
};

struct closure_result {
	uint32_t lines, cells;
	int64_t ticks;
	uint32_t period_cells;     // cells of the frame that the states run through once
	uint32_t start_state;
};

struct signals_result {
	uint64_t comparisons;      // F × signals, over all banks
	uint64_t held_comparisons; // cells whose held bits were compared
};

// The first line that does not start in the phase that the plan asks for.
struct out_of_step {
	bool present;
	uint32_t line;             // in its frame
	int64_t frame;             // 0: the first
	struct fraction by;        // of a cycle, above 0 and below 1
};

struct colour_result {
	bool uniform;              // every line has the same number of cycles
	struct fraction cycles_per_line;   // of the first line; 0 if it does not fit 64 bits
	struct fraction cycles_per_frame;  // 0 if it does not fit 64 bits
	bool repeats_known;        // false if repeats_lines does not fit 64 bits
	int64_t repeats_lines;     // the phase at line starts repeats after this many lines
	int64_t repeats_frames;
	struct line_phases phases; // at the starts of lines
	struct out_of_step out_of_step;
};

struct power_up_result {
	uint64_t states;           // examined, over all banks
	uint32_t frame_states;     // in one bank
	uint64_t cleared_states;   // with async clear, over all banks: fall to 0 at once and are never a cell
	uint32_t longest_cells;    // the longest way to a state of the frame
	struct fraction longest_lines; // cells / mean cells of a line
	int64_t longest_ticks;     // see way_time.c
	uint32_t longest_state;
	uint32_t longest_bank;
	uint64_t lost_states;      // states that never reach the frame
	uint32_t second_loop_state;// one state of a second loop, if lost_states > 0
	uint32_t second_loop_cells;
};

struct upset_result {
	uint64_t upsets;           // frame states × bits
	uint32_t worst_cells;      // until the frame is regained
	uint32_t worst_cell;       // frame cell of that upset
	unsigned worst_bit;
	struct fraction mean_cells;
	uint32_t worst_slip_cells; // absolute, the shorter way round the period
	struct fraction worst_slip_lines;
	struct fraction mean_slip_cells;
	uint32_t worst_slip_cell;
	unsigned worst_slip_bit;
};

// What would keep a limit that is missed.
enum limit_move {
	MOVE_NONE,                 // no whole number of cells does, or it is nothing that edges of regions set
	MOVE_EDGE,                 // the edge of a region, in every line that has it
	MOVE_PICTURE,              // both edges of the picture
	MOVE_LENGTH                // the lines' ends
};

struct limit_verdict {
	bool has_limit;            // the standard has one for the item, at this grade
	bool known;                // it was judged: the item was measured, and numbers fit
	struct judgement judgement;
	enum limit_move move;
	int64_t move_cells;        // later if positive; of lines: longer
	uint32_t move_cell;        // of the frame: where the edge is, the picture begins, or a line that is too short or too long
	struct interval moved;     // what would be measured then, accuracy included
};

struct limit_row {
	bool widened;              // the clock has an accuracy that matters here
	struct interval values;    // measured, and widened by the accuracy
	struct limit_verdict grades[GRADE_COUNT];
};

struct limits_result {
	const struct measurement *measurement; // NULL without a standard, or if the frame does not close
	struct limit_row rows[ITEM_COUNT];
	bool no_vertical_sync;     // though there is a signal for it, and the standard asks for a rate of fields or frames
	unsigned kept[GRADE_COUNT], missed[GRADE_COUNT], unknown[GRADE_COUNT]; // limits that bind
};

struct glitch_edge {
	size_t signal;
	uint32_t cell;             // the edge that begins this cell
	uint32_t from_state, to_state;
	uint32_t from_code, to_code;
	uint32_t between_code;     // a code that may show in between
	uint64_t count;            // how many edges of the frame disturb this signal
};

// What a stage takes straight from its EEPROMs.
struct stage_glitches {
	bool direct;                 // data outputs are direct
	struct fraction unsettled_s; // for direct outputs: from an edge until they are settled
	const char *unsettled_part;  // label of the slowest chip
	bool async_clear;            // clear goes from the EEPROM straight into an asynchronous pin
	struct fraction clear_unsettled_s; // then: from an edge until clear is settled
	const char *clear_part;      // label of the slowest chip that carries clear
	bool passes;                 // with an async clear: the frame comes by a state that falls to 0
	uint32_t passing_address;    // of its row: the state, and above it the kind where the stage sees one
	uint64_t passing_pins;       // direct signals, of either stage, that spike while it lasts
};

struct glitch_result {
	bool has_field_signals;
	uint64_t edges;            // examined
	uint64_t multi_bit_edges;  // more than one bit of some decoded field changes
	struct glitch_edge *first; // for each disturbed signal its first edge
	size_t disturbed;
	struct fraction settle_s;    // pins decoded from the state: latch or counter delay + decoder delay
	struct stage_glitches stages[STAGE_COUNT];
};

#define SPEED_PASSES 4

// A look-up on the way that must finish in time: what holds the address settles, then the chip answers.
struct speed_pass {
	bool has_delay;                // false where the address is another chip's answer
	bool counter;                  // a counter holds the address, else a latch
	struct fraction delay_s;
	struct fraction access_s;
	size_t chip;                   // the slowest of the stage
};

struct speed_result {
	bool of_line;                  // the way is the frame stage's own, which has the shortest line for it
	struct fraction cell_s;        // shortest cell, or line
	struct fraction available_s;   // share of that
	struct speed_pass passes[SPEED_PASSES]; // an async clear and a direct frame stage before the line stage take more than one
	unsigned pass_count;
	struct fraction setup_s, margin_s;
	struct fraction needed_s;
	struct fraction slack_s;       // available - needed; negative fails
};

struct sweep_result {
	uint64_t values;               // that must come up
	uint64_t missing;              // that never do
	uint32_t first_missing;
	struct fraction worst_gap_s;   // longest time between two uses of a value
	uint32_t worst_value;
	struct fraction within_s;
};

struct proof {
	enum verdict verdict;
	struct counterexample counterexample;
};

struct proofs {
	struct arena *arena;
	const struct timeline *timeline;
	const uint32_t *bank_numbers;            // [banks]: the settings of the jumpers that were proved
	uint32_t banks;
	struct proof proof[PROOF_COUNT];
	struct closure_result closure;
	struct signals_result signals;
	struct colour_result colour;
	struct power_up_result power_up;
	struct upset_result upset;
	struct limits_result limits;
	struct glitch_result glitches;
	struct speed_result speed;
	struct sweep_result *sweeps;             // [plan->sweep_count]
	const uint32_t **codes;                  // [signal_count]: codes of FROM_FIELD signals; for codes: auto, as read out of the images
	size_t *code_counts;
};

// Proves images (one for each chip of the plan, of its capacity) against a timeline, in each of the plan's banks. `start_state` is where the line stage's state begins, if has_start says that it is known: the plan's start, or 0 for a
// counter; otherwise the prover finds the frame itself: see frame_find. NULL when memory is out.
struct proofs *proofs_run(const struct timeline *timeline, const struct image *images, bool has_start, uint32_t start_state);
// The same in the given banks alone: of a set, those that show a plan. NULL: 0 … banks-1.
struct proofs *proofs_run_banks(const struct timeline *timeline, const struct image *images, const uint32_t *bank_numbers, uint32_t banks,
                                bool has_start, uint32_t start_state);
// What can be said of a plan without images: colour, limits and speed, as its timeline has them; all other proofs are absent. NULL when memory is
// out. Freed with proofs_destroy.
struct proofs *proofs_of_plan(const struct timeline *timeline);

// Of two plans of a set, proved before: signals fails in the second where codes that were read out of its images are not those of the first.
// False when memory is out.
bool proofs_compare_codes(const struct proofs *first, struct proofs *other);

void proofs_destroy(struct proofs *proofs);

// True if a must failed (or, with strict, any proof). Cannot fail.
bool proofs_failed(const struct proofs *proofs, bool strict);

#endif
