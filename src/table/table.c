#include "table/table.h"

#include "base/arena.h"
#include "table/solve.h"

static bool report_memory(const struct plan *plan, struct diagnostics *diagnostics)
{
	diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){plan->source, 0, 0}, "memory is out");
	return false;
}

static bool choose_states(struct table *table, struct arena *scratch, struct faults *faults)
{
	struct constraints constraints;
	if (!constraints_create(&constraints, scratch, table->timeline, table->pins, table->period))
		return faults_memory(faults);
	if (table->wiring.advance == ADVANCE_COUNT)
		return count_states(&constraints, scratch, table->state_of_cell, faults);
	return solve_states(&constraints, scratch, table->state_of_cell, faults);
}

// The codes that come up in cells where a signal is asserted: what a reader of the images alone finds too.
static bool collect_codes(struct table *table, struct arena *scratch, size_t signal)
{
	const struct plan *plan = table->timeline->plan;
	const struct field *field = &plan->machine.fields[plan->signals[signal].field];
	const uint32_t values = (field_mask(field) >> field->low) + 1;
	bool *used = arena_array(scratch, values, sizeof *used);
	size_t count = 0;
	if (used == NULL)
		return false;
	for (uint32_t cell = 0; cell < table->period; cell++)
		if (table->pins[cell] >> signal & 1)
			used[field_value(field, table->state_of_cell[cell])] = true;
	for (uint32_t value = 0; value < values; value++)
		count += used[value];
	uint32_t *codes = arena_array(table->arena, count, sizeof *codes);
	if (codes == NULL)
		return false;
	for (uint32_t value = 0; value < values; value++)
		if (used[value])
			codes[table->code_counts[signal]++] = value;
	table->codes[signal] = codes;
	return true;
}

static bool fill_codes(struct table *table, struct arena *scratch)
{
	const struct plan *plan = table->timeline->plan;
	table->codes = arena_array(table->arena, plan->signal_count, sizeof *table->codes);
	table->code_counts = arena_array(table->arena, plan->signal_count, sizeof *table->code_counts);
	if (table->codes == NULL || table->code_counts == NULL)
		return false;
	for (size_t index = 0; index < plan->signal_count; index++) {
		const struct signal *signal = &plan->signals[index];
		if (signal->origin == FROM_DATA)
			continue;
		table->codes[index] = signal->codes;
		table->code_counts[index] = signal->code_count;
		if (signal->auto_codes) {
			table->code_counts[index] = 0;
			if (!collect_codes(table, scratch, index))
				return false;
		}
	}
	return true;
}

static uint64_t data_levels(const struct table *table, uint64_t asserted)
{
	return levels_of(table->timeline->plan, asserted) & table->wiring.data_signals;
}

// A spare row leads to the frame's first cell, with the data signals as they are there, or at rest and blanked.
static struct row spare_row(const struct table *table)
{
	const int blanking = table->timeline->plan->role_signal[ROLE_BLANKING];
	const uint64_t at_rest = blanking < 0 ? 0 : (uint64_t)1 << blanking;
	const bool counts = table->wiring.advance == ADVANCE_COUNT;
	return (struct row){
		.next = counts ? 0 : table->state_of_cell[0],
		.clear = counts,
		.levels = data_levels(table, table->wiring.outputs == OUTPUTS_REGISTERED ? table->pins[0] : at_rest),
	};
}

// True if everything went well; otherwise the faults or lack of memory are reported.
static bool fill_table(struct table *table, struct arena *scratch, struct diagnostics *diagnostics)
{
	const struct plan *plan = table->timeline->plan;
	struct faults faults = {.count = 0};
	table->wiring = wiring_of(plan);
	table->period = timeline_period(table->timeline);
	table->pins = timeline_pins(table->timeline, table->arena);
	table->state_of_cell = arena_array(table->arena, table->period, sizeof *table->state_of_cell);
	if (table->period == 0 || table->pins == NULL || table->state_of_cell == NULL)
		return report_memory(plan, diagnostics);
	if (!choose_states(table, scratch, &faults)) {
		faults_report(&faults, table->timeline, diagnostics);
		return false;
	}
	if (!fill_codes(table, scratch))
		return report_memory(plan, diagnostics);
	table->spare = spare_row(table);
	return true;
}

static struct table *new_table(const struct timeline *timeline)
{
	struct arena *arena = arena_create();
	struct table *table = arena != NULL ? arena_alloc(arena, sizeof *table) : NULL;
	if (table == NULL) {
		arena_destroy(arena);
		return NULL;
	}
	table->arena = arena;
	table->timeline = timeline;
	return table;
}

struct table *table_create(const struct timeline *timeline, struct diagnostics *diagnostics)
{
	struct arena *scratch = arena_create();
	struct table *table = scratch != NULL ? new_table(timeline) : NULL;
	bool filled = false;
	if (table == NULL)
		report_memory(timeline->plan, diagnostics);
	else
		filled = fill_table(table, scratch, diagnostics);
	arena_destroy(scratch);
	if (filled)
		return table;
	table_destroy(table);
	return NULL;
}

void table_destroy(struct table *table)
{
	if (table != NULL)
		arena_destroy(table->arena);
}

struct row table_row(const struct table *table, uint32_t cell)
{
	const uint32_t frame_next = (cell + 1) % table->timeline->cell_count;
	const uint32_t next = (cell + 1) % table->period;
	const bool counts = table->wiring.advance == ADVANCE_COUNT;
	return (struct row){
		.next = counts ? 0 : table->state_of_cell[next],
		.clear = counts && table->wiring.clear == CLEAR_SYNC && next == 0,
		.levels = data_levels(table, table->pins[table->wiring.outputs == OUTPUTS_REGISTERED ? frame_next : cell]),
	};
}
