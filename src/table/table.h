// The table: a state for each cell of the frame's shortest period, and the rows.
#ifndef SCANLATCH_TABLE_TABLE_H
#define SCANLATCH_TABLE_TABLE_H

#include "layout/timeline.h"
#include "table/wiring.h"

struct table {
	struct arena *arena;
	const struct timeline *timeline;
	struct wiring wiring;
	uint32_t period;                // cells that need a state of their own
	uint32_t *state_of_cell;        // [period]
	const uint32_t **codes;         // [signal_count]: for a FROM_FIELD signal its codes, ascending (chosen ones for codes: auto); else NULL
	size_t *code_counts;            // [signal_count]
	uint64_t *pins;                 // [cell_count]: timeline_pins
	struct row spare;               // the row of every state that is not on the frame
};

// Chooses states and codes that satisfy all constraints of design page 1.3 (for counted stages: checks page 1.5), if any exist;
// else NULL with diagnostics. Deterministic. Freed with table_destroy; the timeline must outlive it.
struct table *table_create(const struct timeline *timeline, struct diagnostics *diagnostics);
void table_destroy(struct table *table);

// The row used in cell `cell` of the period: with registered outputs it holds the levels of the next cell. Cannot fail.
struct row table_row(const struct table *table, uint32_t cell);

#endif
