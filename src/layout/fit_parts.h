// Inside fit: the parts of a layout that its search puts together.
#ifndef SCANLATCH_LAYOUT_FIT_PARTS_H
#define SCANLATCH_LAYOUT_FIT_PARTS_H

#include "layout/fit_meter.h"

// The ticks of so many cells of a line, some of them stretched. Cannot fail.
int64_t fit_ticks(const struct fit_line *line, struct fit_cells cells);

// Opens the gauges of a line's edges for lines of up to `most` ticks of a master clock, `cycle_ticks` (0: none) to a cycle.
void fit_edges_open(struct fit_meter *meter, struct fraction master_hz, int64_t cycle_ticks, int64_t most);

// How many regions a line has beside the picture; each takes a cell at least. Cannot fail.
int64_t fit_blank_regions(bool colour);

// The most limits that the edges of a line can keep. Cannot fail.
unsigned fit_edges_most(const struct fit_meter *meter);

// Finds the best edges of a line with `columns` cells of picture, as fit.h says. *standing is what the rest of the layout is like, and gets
// the edges' shares. Compares shares to `depth` from the smallest on. False, with nothing changed, if none stand at least like `floor`
// (NULL: any) in limits kept and smallest share.
bool fit_edges_find(struct fit_meter *meter, const struct fit_line *line, int64_t columns, bool colour,
                    const struct fit_standing *floor, unsigned depth, struct fit_cells regions[FIT_REGIONS],
                    struct fit_standing *standing);

// Finds the best serration of lines that are broad pulses: shorter than half the line. Adds its shares. False, with nothing
// changed, if there is no cell for one.
bool fit_serration_find(struct fit_meter *meter, const struct fit_line *line, struct fit_cells *serration,
                        struct fit_standing *standing);

// The frames of a standard, by the number of their lines.
struct fit_frames {
	struct fit_meter meter;    // of counts
	int64_t picture_lines;
	bool separate;             // the standard fixes the lines of the frame and of vertical sync
	int64_t lines, broad_lines; // if it does
	struct fit_counted *counted; // [FIT_LIMIT_LINES + 1]: the best of each number of lines
};

// False when memory is out.
bool fit_frames_begin(struct fit_frames *frames, struct arena *arena, const struct fit_space *space);

// What a frame of lines of a line rate comes to.
struct fit_framing {
	bool found;                // some number of lines meets the limits of field and frame rate
	bool fits;                 // and the picture's lines fit into one of them
	struct fit_frame frame;    // if it does; otherwise only the lines, of those that come nearest
	struct fit_standing rates; // field and frame rate
	struct fit_standing counts;
	enum limit_item item;      // without: the rate that misses its limit by the least
	struct fraction rate_hz, missed;
};

// Finds the best frame of lines of a rate. The meter is that of the crystal, for the rates.
struct fit_framing fit_frames_find(struct fit_frames *frames, struct fit_meter *meter, struct fraction line_hz);

// The bits of a state of so many values, 1 at least. Cannot fail.
unsigned fit_state_bits(int64_t values);

// What latch, setup and margin leave of a cell for the memory; it may be negative. False, with *access_s as it was, if it does not fit.
bool fit_memory_access(const struct catalogue *parts, struct fraction cell_s, struct fraction *access_s);

// Chooses a memory for a loop of so many cells and signals that answers in access_s: the fewest chips, then the fewest address
// pins, then the slowest grade that will do. False, with *memory as it was, if no part will.
bool fit_memory_find(const struct catalogue *parts, int64_t cells, unsigned signals, struct fraction access_s,
                     struct fit_memory *memory);

// Measures a layout's items and judges them at the space's grade. False if a number does not fit.
bool fit_measure(const struct fit_space *space, struct fit_layout *layout);

#endif
