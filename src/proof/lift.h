// Lifting: reads line types, regions, frame and held states back out of images. The only thing that it takes from a plan is the
// board: clock, signals, machine, chips.
#ifndef SCANLATCH_PROOF_LIFT_H
#define SCANLATCH_PROOF_LIFT_H

#include "image/image.h"
#include "plan/plan.h"

struct diagnostics;

struct lift_options {
	size_t cut_signal;             // lines begin at its leading edge; SIZE_MAX: at that of composite or horizontal sync
	bool near;                     // pin the state of every cell
	bool without_holds;            // look for none
	uint32_t bank;                 // setting of the bank jumpers
};

struct lift_hold {
	const char *field;
	const char *expression;
};

// What a region shows, judged by roles.
enum lift_class { CLASS_BLANK, CLASS_SYNC, CLASS_BURST, CLASS_PICTURE };

struct lift_region {
	const char *name;              // unique in its line type
	enum lift_class class;
	uint32_t first_cell, cells;    // in the line
	uint32_t stretched;            // how many of its first cells are stretched
	uint64_t asserted;             // without the stretch signal
	struct lift_hold *holds;
	size_t hold_count;
};

struct lift_type {
	const char *name;              // unique
	uint32_t cells;
	int64_t ticks;
	uint32_t lines;                // of a frame; 0 for one that only keeps a kind's place
	uint32_t content;              // types of one content differ in holds alone
	uint64_t hash;                 // of content and holds
	struct lift_region *regions;
	size_t region_count;
};

struct lift_block {
	uint32_t repeat;
	uint32_t type;
};

struct lift_field {
	const char *name;
	unsigned high, low;
};

// A loop of the machine that is not the one that was lifted.
struct lift_loop {
	uint32_t state;                // one of its states
	uint64_t cells;
};

#define LIFT_LOOPS 8 // that are listed

// Where the frame begins.
enum lift_first {
	FIRST_AFTER_SYNC,              // after vertical sync
	FIRST_FREE,                    // anywhere, as there is none
	FIRST_COUNTED,                 // where the counter of a loop is 0
	FIRST_NUMBERED,                // where the state of a frame stage is 0
	FIRST_HOME                     // where spare rows lead, since states are pinned
};

struct lift {
	struct arena *arena;
	const struct plan *plan;       // the board
	struct lift_options options;
	unsigned state_bits;           // of the machine's whole state: both stages', with step and kind where these are latched
	uint32_t power_up_state;       // where the walk began: start, or everything 0
	uint32_t lead_in_cells;        // from there to the loop
	uint32_t cell_count;           // of the loop
	int64_t tick_count;
	uint32_t *states;              // [cell_count], from the frame's first cell on
	uint64_t *asserted;            // [cell_count]: as a timeline has it, leads undone
	uint32_t line_count;           // of the loop
	uint32_t copies;               // laps of the loop in the frame: as many as the clock's phase asks
	enum lift_first first;
	bool vertical_sync;            // there is a line of it
	bool has_start;                // the plan is to name the state of its first cell
	uint32_t start;
	bool renumbered;               // the images number their lines otherwise than a plan's frame stage does
	bool uneven_starts;            // line stage: lines do not all begin in one state
	bool pinned;                   // line stage: states are pinned without being asked for, as a plan without holds would number cells
	struct lift_type *types;
	size_t type_count;
	struct lift_block *blocks;     // of one lap
	size_t block_count;
	struct lift_field *fields;     // that the board does not name
	size_t field_count;
	struct lift_loop loops[LIFT_LOOPS];
	uint64_t loop_count;           // other loops in all
	uint64_t lost_states;          // that lead into them
};

// Lifts a plan from images, all of them there, of the board's chips. NULL after reporting: the loop is too long or no raster, or
// memory is out. Freed with lift_destroy; the board and the diagnostics' sources must outlive it. Time is linear in the loop's cells (for each
// bit of the state, where the board names no fields) and in the machine's states.
struct lift *lift_images(const struct plan *board, const struct image *images, struct lift_options options,
                         struct diagnostics *diagnostics);
void lift_destroy(struct lift *lift);

struct arena;

// The expression in row and col that the bits of the states have over lines whose columns begin at these cells, `width` of each, in the
// arena; NULL if they have none, or memory is out.
const char *lift_expression(struct arena *arena, const uint32_t *states, unsigned high, unsigned low, const uint32_t *first_cells,
                            size_t lines, uint32_t width);

#endif
