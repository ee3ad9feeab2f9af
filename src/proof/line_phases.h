// The phase of the subcarrier at the start of each line, relative to line 0 of the frame: exact, and short where lines are alike.
#ifndef SCANLATCH_PROOF_LINE_PHASES_H
#define SCANLATCH_PROOF_LINE_PHASES_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#include "base/fraction.h"

struct arena;

// Lines that follow each other and advance the phase alike.
struct phase_run {
	uint32_t first_line;
	uint32_t lines;
	int64_t phase;             // at the start of its first line, in parts of a cycle
	int64_t advance;           // of each of its lines, in parts of a cycle: what is left of its whole cycles
};

struct line_phases {
	int64_t parts;             // of a cycle: all phases and advances are 0 … parts-1 of them. 0 where nothing was measured
	uint32_t period_lines;     // after so many lines the advances begin again; divides the lines of the frame
	int64_t period_advance;    // of so many lines, in parts of a cycle
	const struct phase_run *runs; // of one period, in the order of its lines
	uint32_t run_count;
};

// Measures lines of so many ticks, repeated for ever. Linear time; what is found is in the arena. False, with *phases as it was,
// when memory is out.
bool line_phases_measure(const int64_t *line_ticks, uint32_t lines, struct fraction cycles_per_tick, struct arena *arena,
                         struct line_phases *phases);

// The phase at the start of a line, in cycles: 0 or more, below 1. Lines count on from frame to frame, from 0. Only for phases that
// were measured. Cannot fail.
struct fraction line_phase(const struct line_phases *phases, int64_t line);

// So many parts as a fraction of a cycle. Cannot fail.
struct fraction phase_fraction(const struct line_phases *phases, int64_t parts);

#define PHASES_LISTED 8

// The phases at which lines ever start, ascending, each once; how many there are, or 0 if they are more than PHASES_LISTED.
// Time linear in the runs. Cannot fail.
size_t line_phases_distinct(const struct line_phases *phases, struct fraction values[PHASES_LISTED]);

#endif
