// The table: a state for each cell that needs one, and the rows of every stage.
#ifndef SCANLATCH_TABLE_TABLE_H
#define SCANLATCH_TABLE_TABLE_H

#include "layout/timeline.h"
#include "table/wiring.h"

#define NO_LINE UINT32_MAX
#define NO_STATE UINT32_MAX

struct table {
	struct arena *arena;
	const struct timeline *timeline;
	struct wiring wiring;
	uint32_t period;                // rows of the line stage: in a loop machine cells that need a state of their own
	uint32_t *state_of_cell;        // [period]: states of the line stage, without the kind
	const uint32_t **codes;         // [signal_count]: for a FROM_FIELD signal its codes, ascending (chosen ones for codes: auto); else NULL
	size_t *code_counts;            // [signal_count]
	const uint64_t *pins;           // [cell_count]: timeline_pins
	const struct preference *preference; // while states are chosen; NULL: none
	struct row spare[STAGE_COUNT];  // the row of every state that is not on the frame; see table_spare
	// FORM_LINE_FRAME only, else NULL. Rows of the line stage are those of each line type's cells, in the order of `lines`.
	uint32_t *first_row;            // [plan->line_count + 1]: where a type's rows begin; one that the frame does not use has none
	uint32_t *line_of_type;         // [plan->line_count]: the first line of the frame that has the type; NO_LINE: none
};

// States that cells had before. The new table keeps those that still satisfy its constraints; see `build --near`.
struct preference {
	const uint32_t *state_of_cell;  // [cell_count]: of the line stage, without the kind; NO_STATE: none. No state stands twice within a period of
	                                // a loop, or within the first line of a type of a line-frame machine
};

// Chooses states and codes that satisfy all constraints of design page 1.3 (for counted stages: checks page 1.5; for
// line-frame machines page 1.4 too), if any exist; else NULL with diagnostics. Deterministic. Freed with table_destroy; the
// timeline must outlive it.
struct table *table_create(const struct timeline *timeline, struct diagnostics *diagnostics);
// The same, keeping states and codes as far as that costs no search: what stands in the way of an assignment is given up. There is one
// whenever table_create finds one. `preference` may be NULL.
struct table *table_create_near(const struct timeline *timeline, const struct preference *preference, struct diagnostics *diagnostics);
void table_destroy(struct table *table);

// The rows of a stage that are on the frame. All others are spare. A loop machine has those of the line stage alone. Cannot fail.
uint32_t table_row_count(const struct table *table, enum stage stage);

// The address of a row, below 2^address_bits of its stage: the state, and above it the kind where the stage sees one.
// Addresses of a stage's rows differ. Cannot fail for index < table_row_count.
uint32_t table_row_address(const struct table *table, enum stage stage, uint32_t index);

// A row. With registered outputs it holds the levels (and the kind and step) of the cell or line that follows. Cannot fail
// for index < table_row_count.
struct row table_row(const struct table *table, enum stage stage, uint32_t index);

// The row of all spare states of a stage, in the line stage under one kind. Cannot fail for kind < 2^kind_bits; frame stages
// and loop machines have kind 0 alone.
struct row table_spare(const struct table *table, enum stage stage, uint32_t kind);

// Whether lines of this kind are in the frame: only then has the line stage rows under it. Cannot fail.
bool table_uses_kind(const struct table *table, uint32_t kind);

// The index of the line stage's row that a cell of a line of the frame uses. Cannot fail.
uint32_t table_cell_row(const struct table *table, uint32_t line, uint32_t cell);

#endif
