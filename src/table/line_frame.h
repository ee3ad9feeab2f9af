// Tables of line-frame machines. For the table's own use.
#ifndef SCANLATCH_TABLE_LINE_FRAME_H
#define SCANLATCH_TABLE_LINE_FRAME_H

#include "table/table.h"

// Fills first_row, line_of_type, period, state_of_cell and spare of a table that has its timeline, wiring and pins. False
// after reporting everything that stands against it.
bool line_frame_fill(struct table *table, struct arena *scratch, struct diagnostics *diagnostics);

// The cell of the frame that stands for a row of the line stage: it and what follows it are alike wherever the row is used,
// as far as the row holds it. Cannot fail.
uint32_t line_row_cell(const struct table *table, uint32_t index);

// See table_row and table_row_address. Cannot fail.
struct row line_stage_row(const struct table *table, uint32_t index);
struct row frame_stage_row(const struct table *table, uint32_t index);
uint32_t line_row_address(const struct table *table, uint32_t index);

// Reports each line-stage signal of each line type whose row, or decoded state, would have to be another in one line of the
// frame than in another (page 1.4), and each frame-stage signal that changes within a line. *fields_agree: nothing stands
// against decoded signals. False after reporting.
bool look_ahead_check(const struct table *table, struct arena *scratch, struct diagnostics *diagnostics, bool *fields_agree);

// Chooses the line stage's states, or checks those that a counter has. False after reporting.
bool line_states_choose(struct table *table, struct arena *scratch, struct diagnostics *diagnostics);

#endif
