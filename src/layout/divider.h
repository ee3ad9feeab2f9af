// The tick divider: the counter that makes cells of the master clock, and the taps that give dots and subcarrier, as a builder
// must wire them. Computed from the plan's clock alone.
//
// The counter counts the ticks of a cell from 0. A normal cell ends after count cell_ticks - 1. That is the count that
// lengthens: while it lasts, the divider looks at the stretch pin (as it was `lead` cells before), and where that is asserted
// the counter does not start over but counts on, to cell_ticks + stretch_ticks - 1. All that is decoded from lower counts
// comes at the same tick of every cell.
//
// A tap is in step
//   * for dots: if every cell starts as a dot starts, that is, if the cell and its stretch are whole numbers of dots;
//   * for the subcarrier: if it turns over every half cycle, through stretched cells too. A tap from the counter turns over at
//     the counts that are multiples of a half cycle, so it needs whole half cycles in the cell (else it has a divider of its
//     own) and in the stretch (else its last half cycle is cut short). A cycle of an odd number of ticks has no halves: then
//     whole cycles. A divider or an oscillator of its own runs on whatever the counter does; only its phase at the cells'
//     starts moves.
#ifndef SCANLATCH_LAYOUT_DIVIDER_H
#define SCANLATCH_LAYOUT_DIVIDER_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#include "base/fraction.h"

struct clock;
struct diagnostics;

enum tap_source {
	TAP_NONE,       // the plan has no subcarrier
	TAP_MASTER,     // a cycle is one tick
	TAP_COUNTER,    // the counter of the cells gives it
	TAP_DIVIDER,    // a divider of its own, that no cell starts over
	TAP_OSCILLATOR, // a cycle is no whole number of ticks: no divider gives it
};

// A cycle is a dot of the dot tap, a cycle of the subcarrier of the other.
struct divider_tap {
	enum tap_source source;
	bool exact;                       // the fractions fit 64 bits; else they are 0, and the source is an oscillator
	bool in_step;                     // see above
	struct fraction period_ticks;     // of a cycle
	struct fraction cell_cycles;      // by so many the phase at the next cell's start is further
	struct fraction stretched_cycles; // the same over a stretched cell; equal where there are none
	int64_t step_ticks;               // from the counter: of this many ticks cells and stretches are to be multiples; else 0
};

struct divider {
	int64_t cell_ticks;               // a normal cell counts 0 … cell_ticks - 1
	int64_t stretch_ticks;            // a stretched one goes on for so many counts; 0: there are none
	unsigned bits;                    // of the counter: 0 if all cells are one tick
	struct divider_tap dot;           // never TAP_NONE nor TAP_OSCILLATOR
	struct divider_tap subcarrier;
};

// The divider for a clock that was read without errors. Cannot fail.
struct divider divider_of_clock(const struct clock *clock);

// True if a tap has a level for each count: it has a divider, or the counter, for a source.
bool divider_tap_has_levels(const struct divider_tap *tap);

// The level of a tap that has them, at a count >= 0 of a cell that starts as the tap rises. It is high for the first half of its
// cycle; if that is an odd number of ticks, high is the longer part. Cannot fail.
bool divider_tap_is_high(const struct divider_tap *tap, int64_t count);

// A run of counts that is worth showing.
struct divider_span {
	int64_t first;
	int64_t last;
	bool stretched;                   // only a stretched cell comes to these counts
};

#define DIVIDER_SPANS 4

// The sequence of counts in order, up to 48 of them: where it is long, the beginning and the end of the normal cell and of what a
// stretched one adds. Returns how many spans there are; none holds counts of both kinds. Cannot fail.
size_t divider_spans(const struct divider *divider, struct divider_span spans[DIVIDER_SPANS]);

// Reports, as notices at their places in the clock, what puts a tap out of step. A stretch is spoken of only if the plan has
// `stretched` cells.
void divider_report(const struct clock *clock, bool stretched, struct diagnostics *diagnostics);

#endif
