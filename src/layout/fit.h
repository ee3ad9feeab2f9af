// Fit: the layouts of lines and frames that suit a standard, best first. Exact: no layout of the space that is better than one
// found is missed.
//
// The space. A line begins at 0H with its sync: sync, breezeway, burst, back porch, picture, front porch; without a subcarrier
// sync, back porch, picture, front porch. Each of them is one cell or longer. A choice is
//
//     crystal, ticks of a dot, dots of a cell, cells of a line, how many of them are stretched, by how many dots (1 to a cell)
//
// and is what is ranked. What a choice leaves open takes its best values: where the edges are, in cells, and in which regions
// the stretched cells are (never in the picture, where they would be seen); where the serration is, and how many lines the
// frame has, how many of them are broad pulses, and where the picture begins. A frame is progressive, of whole lines, and
// begins at 0V: lines that are one broad pulse up to a serration, border, picture, border. Standards that fix the polarity of
// sync have horizontal and vertical sync of their own, and their published lines of the frame and of vertical sync.
//
// A choice counts only if it meets all conditions of enum fit_condition. Choices are ranked by
//
//  1. limits kept at the grade, of those that bind and that the layout can be measured for;
//  2. the smallest share of a margin (judge.h) of those kept, over times, rates and cycles. Counts of lines and pulses count as
//     kept or not, but have no say here: they do not drift. (Three lines of vertical sync are all that whole lines allow,
//     and lie on the bound: with them all choices would be equal.)
//  3. fewer cells of the frame, then fewer chips;
//  4. so that the order is total: fewer stretched cells, a shorter stretch, the earlier crystal, fewer ticks of a dot, fewer
//     dots of a cell, fewer cells of a line.
//
// Within a choice, edges are compared by limits kept, then by the smallest share, then by the smallest but one, and so on (of
// all limits that are kept); of equal ones the first is taken, by the start of the picture (cells before it, then stretched ones
// of them), the end of sync, the start of burst, its end. A serration the same: of equal ones with fewer cells, then fewer of
// them stretched. The frame: limits kept; shares of rates; shares of counts, both in the same way; fewer lines, fewer
// broad ones, earlier picture.
//
// Why pruning misses nothing. The limits of a layout fall into groups: those that follow from line length, cell and picture
// width alone; those of the frame, which know only how long a line is; those of the edges. Kept limits add up and the smallest share
// is the smallest of the groups', so the score of a partial layout, with every limit that is still open counted as kept with a
// share of 1, is never below that of any layout that it can become.
//  * The choices of a crystal are tried in the order of such bounds. Ranks 3 and 4 are known beforehand. When `top` layouts were
//    found and the next bound ranks behind the last of them, so do all that follow, and the layouts behind them.
//  * Edges are placed one by one, and a partial line is left as soon as its bound is below what is asked, or not above the
//    best line that was found.
#ifndef SCANLATCH_LAYOUT_FIT_H
#define SCANLATCH_LAYOUT_FIT_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#include "base/fraction.h"
#include "catalogue/judge.h"

struct arena;
struct catalogue;
struct crystal;
struct part;

// The latch and the margin of the plans that are written, and of the speed that memories are chosen for.
#define FIT_LATCH "74HC574"
#define FIT_MARGIN_NS 20

#define FIT_LIMIT_COLUMNS 4096
#define FIT_LIMIT_LINES 4096      // of a frame
#define FIT_LIMIT_DOTS 256        // of a cell, and ticks of a dot
#define FIT_LIMIT_STRETCHED 64
#define FIT_LIMIT_TOP 1000
#define FIT_LIMIT_TICKS 65536     // of a line: faster crystals are not tried
#define FIT_LIMIT_CELLS 1000000   // of a space: ticks of a dot x dots of a cell x stretches of a cell x stretched cells
#define FIT_LIMIT_CHOICES 4000000 // of a crystal, that meet all conditions and may yet be among the best
#define FIT_BROAD_LINES 8         // at most, where the standard does not fix the lines of the frame

// What is searched. All must stay as it is while the result is used.
struct fit_space {
	const struct standard *standard;
	enum limit_grade grade;
	const struct crystal *crystals;
	size_t crystal_count;
	const struct catalogue *parts;
	const int64_t *dot_ticks;      // ascending, without doubles; 1 … FIT_LIMIT_DOTS
	size_t dot_tick_count;
	const int64_t *cell_dots;      // the same
	size_t cell_dot_count;
	int64_t columns;               // cells of picture in a line, 1 … FIT_LIMIT_COLUMNS
	int64_t picture_lines;         // 1 … FIT_LIMIT_LINES
	int64_t least_percent;         // of the published width of the picture, 0 … 100: narrower ones do not count
	int64_t most_stretched;        // cells of a line, 0 … FIT_LIMIT_STRETCHED
	int64_t phase_lines;           // the phase repeats after so many lines; 0: it is free
	size_t top;                    // 1 … FIT_LIMIT_TOP: so many layouts are kept
};

enum fit_region { FIT_SYNC, FIT_BREEZEWAY, FIT_BURST, FIT_BACK_PORCH, FIT_PICTURE, FIT_FRONT_PORCH, FIT_REGIONS };

// Cells of a region, or before an edge, and how many of them are stretched.
struct fit_cells {
	int64_t cells;
	int64_t stretched;
};

struct fit_line {
	size_t crystal;                // index into the space's
	int64_t dot_ticks, cell_dots, stretch_dots; // the last 0 without stretched cells
	int64_t cell_ticks, stretch_ticks;
	int64_t cells, stretched;
	int64_t ticks;                 // = cells × cell_ticks + stretched × stretch_ticks
	int64_t cycle_ticks;           // of the subcarrier; 0 if there is none
};

struct fit_frame {
	int64_t lines;                 // all in all
	int64_t broad_lines;           // or, of a vertical sync of its own, its lines
	int64_t top;                   // lines from 0V to the first with picture
	int64_t picture_lines;
};

struct fit_memory {
	const struct part *part;
	struct fraction access_s;      // one of the part's grades
	unsigned state_bits;
	unsigned word_bits;
	unsigned chips;
};

// An item of the standard that was measured, with its limit at the space's grade.
struct fit_item {
	enum limit_item item;
	struct fraction value;         // in the unit of the item's dimension
	const struct limit *limit;
	struct judgement judgement;
};

struct fit_layout {
	struct fit_line line;
	struct fit_cells regions[FIT_REGIONS]; // 0 cells: not there
	struct fit_cells serration;            // 0 cells: vertical sync has a signal of its own
	struct fit_frame frame;
	struct fit_memory memory;
	struct fit_item items[ITEM_COUNT];     // in the order of the items
	size_t item_count;
	unsigned binding;              // of the items, those whose limits bind
	unsigned kept;                 // of those
	bool has_share;                // some limit that is kept has a share, not counting lines and pulses
	struct fraction share;         // the smallest
	enum limit_item tightest;      // whose it is
};

// What a layout must meet, in the order in which it is asked.
enum fit_condition {
	FIT_NUMBERS,     // frequencies fit 64-bit fractions, and a line FIT_LIMIT_TICKS
	FIT_SUBCARRIER,  // the crystal is a whole multiple of a subcarrier within the limit
	FIT_ROOM,        // the columns and a cell of each other region are no longer than the longest line
	FIT_WIDTH,       // the picture is wide enough
	FIT_LINE_RATE,   // some number of cells meets the limit
	FIT_COLOUR,      // a line of that rate closes in colour
	FIT_FIELD_RATE,  // some number of lines meets the limits of field and frame rate
	FIT_HEIGHT,      // the picture's lines fit into such a frame
	FIT_MEMORY,      // a part of the catalogue has the address pins and is fast enough
	FIT_CONDITIONS
};

// What came nearest with a crystal of which no choice meets all conditions: the first condition that it fails.
struct fit_obstacle {
	size_t crystal;
	enum fit_condition condition;  // of all choices the last
	struct fit_line line;          // as far as it was chosen: of a subcarrier cycle_ticks, of room the cell
	int64_t lines;                 // of the frame, from FIT_FIELD_RATE on
	enum limit_item item;          // of rates: which
	struct fraction found;         // hertz; of room, width and memory seconds; of colour cycles of phase_lines lines
	struct fraction low, high;     // what was wanted, in the same unit (0 where there is no bound)
	struct fraction missed;        // by how much: the nearest has the least
};

struct fit_result {
	struct fit_layout *layouts;    // best first
	size_t layout_count;           // up to space->top
	struct fit_obstacle *obstacles; // nearest first: by condition from the last, then by what was missed, then by crystal
	size_t obstacle_count;
	uint64_t choices;              // that meet all conditions
	uint64_t judged;               // of them, those whose edges were sought
};

enum fit_status { FIT_OK, FIT_OUT_OF_MEMORY, FIT_TOO_MANY, FIT_UNFIT };

// Searches the space; the result is in the arena. Nothing is changed unless it is FIT_OK. FIT_TOO_MANY: it has more than
// FIT_LIMIT_CELLS kinds of cells, or a crystal more than FIT_LIMIT_CHOICES choices. FIT_UNFIT: a limit of a layout that was found
// could not be judged in 64-bit fractions.
enum fit_status fit_search(struct arena *arena, const struct fit_space *space, struct fit_result *result);

// Lines with picture that a standard has, halves left out: the published height of a field, or the middle of its range. 0 if it
// has none.
int64_t fit_default_lines(const struct standard *standard);

// The published width of the picture, or the middle of its range. False, with *width_s as it was, if there is none.
bool fit_full_width(const struct standard *standard, struct fraction *width_s);

// True if the standard has a subcarrier. Cannot fail.
bool fit_has_colour(const struct standard *standard);

// True if the standard fixes polarities, and so has horizontal and vertical sync of their own. Cannot fail.
bool fit_has_separate_sync(const struct standard *standard);

#endif
