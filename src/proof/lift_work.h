// Inside lifting: what its steps share. Each step is a file, in the order of the functions below.
#ifndef SCANLATCH_PROOF_LIFT_WORK_H
#define SCANLATCH_PROOF_LIFT_WORK_H

#include "machine/machine.h"
#include "proof/lift.h"

#define NO_INDEX UINT32_MAX

// A line of the loop.
struct lifted_line {
	uint32_t first_cell, cells;
	uint32_t kind;                 // of a line-frame machine
	uint32_t content;
};

// Lines that show the same, cell by cell.
struct content {
	uint32_t line;                 // the first that has it
	uint32_t cells, kind;
	uint32_t lines;
	int64_t ticks;
	struct lift_region *regions;   // as its signals tell them apart, names yet to come
	size_t region_count;
	const char *name;              // of its line types, without number
};

// An open hash table of the lift's line types, numbered from 1.
struct type_table {
	uint32_t *slots;
	uint32_t mask;
};

struct lifting {
	struct lift *lift;
	struct arena *arena;           // of this work; results go to the lift's
	const struct plan *plan;
	const struct image *images;
	const struct machine *machine;
	struct wiring wiring;
	struct feedback at;
	struct diagnostics *diagnostics;
	struct place place;            // the board as a whole, for messages
	uint64_t stretch_mask;         // the stretch signal; 0 if there is none
	int cut_signal;                // -1: there is none (line-frame)
	uint8_t *ends;                 // [cell_count]: line-frame: the frame stage steps after this cell
	bool comes_home;               // every state leads into the loop, after so many cells at most
	uint32_t way_cells;
	uint32_t home_cell;            // where the frame has to begin, if it is fixed; NO_INDEX
	struct lifted_line *lines;     // [lift->line_count]
	struct content *contents;
	size_t content_count;
	uint32_t normal_cells;         // the length of the commonest line, by time
	int64_t normal_ticks;
	uint32_t length_count;         // of lines in cells
	struct type_table types;
	size_t region_count;           // of all types so far
	size_t node_count;             // of YAML, that types and blocks so far take at least
};

// Each returns false after reporting.

// Walks from power-up into the loop and around it: states, signals, ends of lines.
bool lift_walk(struct lifting *lifting);
// Looks for other loops, and how far it is to this one.
bool lift_find_loops(struct lifting *lifting);
// Cuts the loop into lines, and turns it so that the frame's first cell is cell 0.
bool lift_cut(struct lifting *lifting);
// Whether the lines are a raster's; and says that there are none (returns false).
bool lift_check_raster(struct lifting *lifting);
bool lift_report_no_lines(struct lifting *lifting);
// Reports the other loops, if there are any. Cannot fail.
void lift_report_loops(struct lifting *lifting);
// Sorts lines by what they show, into contents; and divides these into regions.
bool lift_place(struct lifting *lifting);
bool lift_divide(struct lifting *lifting);
// Whether a plan can hold so many contents with their regions, and runs of them.
bool lift_check_size(struct lifting *lifting);
// Names regions and contents.
bool lift_name(struct lifting *lifting);
// Makes blocks and line types, with holds where picture is shown (near: without any), or that pin every state.
bool lift_hold(struct lifting *lifting);
bool lift_pin(struct lifting *lifting);
// Names line types and their regions.
bool lift_name_types(struct lifting *lifting);

// Whether the line stage of a line-frame machine begins every line in one state. Cannot fail.
bool lift_starts_evenly(const struct lifting *lifting);
// Whether it numbers the cells of every line from 0. Cannot fail.
bool lift_numbers_cells(const struct lifting *lifting);

// "memory is out"; returns false.
bool lift_memory(struct lifting *lifting);

// The ticks of a cell that shows these signals, and of a line. Cannot fail.
int64_t lifted_cell_ticks(const struct lifting *lifting, uint64_t asserted);
int64_t lifted_line_ticks(const struct lifting *lifting, const struct lifted_line *line);
// Whether more than half of a line is sync. There is a signal to cut at. Cannot fail.
bool lifted_mostly_sync(const struct lifting *lifting, const struct lifted_line *line);

// Appends a block of so many lines of a content, whose regions (in the lift's arena, with holds and without names) make a line type;
// one that is there already is taken again. False after reporting that memory is out, or that they are more than a plan holds.
bool lift_add_block(struct lifting *lifting, uint32_t content, uint32_t lines, struct lift_region *regions, size_t count);

// The lines from `first` on that show the same as it, up to the loop's end. Cannot fail.
uint32_t lift_run(const struct lifting *lifting, uint32_t first);

#endif
