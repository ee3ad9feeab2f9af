#include "table/table.h"

#include "base/arena.h"
#include "table/guard.h"
#include "table/line_frame.h"
#include "table/solve.h"

static bool report_memory(const struct plan *plan, struct diagnostics *diagnostics)
{
	diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){plan->source, 0, 0}, "memory is out");
	return false;
}

// A counter has state i in cell i of the period.
static bool count_period(struct table *table, const struct constraints *constraints, struct arena *scratch, struct faults *faults)
{
	const uint32_t needed = table->period + (table->wiring.line.clear == CLEAR_ASYNC);
	if (needed > constraints->state_count) {
		struct fault fault = fault_at(RULE_COUNTER_SHORT, NO_CELL);
		fault.needed = needed;
		fault.available = constraints->state_count;
		faults_add(faults, fault);
		return false;
	}
	for (uint32_t cell = 0; cell < table->period; cell++)
		table->state_of_cell[cell] = cell;
	return count_states(constraints, scratch, table->state_of_cell, faults);
}

// States that cells of the table's period are to keep.
static const uint32_t *preferred_states(const struct table *table)
{
	return table->preference != NULL ? table->preference->state_of_cell : NULL;
}

static bool solve_period(struct table *table, const struct timeline *folded, struct arena *scratch, struct faults *faults)
{
	struct constraints constraints;
	if (!constraints_create(&constraints, scratch, folded, table->pins, table->period, table->wiring.line.address_bits))
		return faults_memory(faults);
	if (table->wiring.line.advance == ADVANCE_COUNT)
		return count_period(table, &constraints, scratch, faults);
	if (!solve_states(&constraints, scratch, preferred_states(table), table->state_of_cell, faults))
		return false;
	bool *used = guard_states(&constraints, scratch, table->state_of_cell);
	if (used == NULL)
		return faults_memory(faults);
	guard_last_state(&constraints, used, 0, table->period - 1, constraints.state_mask, table->state_of_cell);
	return true;
}

// The timeline with the holds of all laps of the table's period in each. False if they contradict each other.
static bool fold_timeline(const struct table *table, struct arena *scratch, struct timeline *folded, bool *memory_out)
{
	const uint32_t period = table->period;
	*folded = *table->timeline;
	if (!folded->has_holds || period == folded->cell_count)
		return true;
	folded->hold_mask = arena_array(scratch, period, sizeof *folded->hold_mask);
	folded->hold_value = arena_array(scratch, period, sizeof *folded->hold_value);
	*memory_out = folded->hold_mask == NULL || folded->hold_value == NULL;
	return !*memory_out && timeline_fold_holds(table->timeline, period, folded->hold_mask, folded->hold_value);
}

// Tries the table's period. *faults is filled only if the holds of its laps agree, so that the next longer one may be judged on its own.
static bool try_period(struct table *table, struct faults *faults)
{
	struct arena *scratch = arena_create();
	struct timeline folded;
	bool memory_out = scratch == NULL, solved = false;
	if (!memory_out && fold_timeline(table, scratch, &folded, &memory_out)) {
		*faults = (struct faults){.count = 0};
		solved = solve_period(table, &folded, scratch, faults);
	}
	arena_destroy(scratch);
	return memory_out ? faults_memory(faults) : solved;
}

// The shortest period of the signals is tried first. What one lap leaves free another may hold, so where its constraints contradict each other or find no
// states, longer ones follow, up to that at which the holds repeat too: from there on, nothing becomes easier.
static bool choose_states(struct table *table, struct faults *faults)
{
	const struct timeline *timeline = table->timeline;
	const uint32_t shortest = timeline_period(timeline), longest = timeline_held_period(timeline);
	if (shortest == 0 || longest == 0)
		return faults_memory(faults);
	for (table->period = shortest; table->period < longest; table->period += shortest)
		if (longest % table->period == 0 && try_period(table, faults))
			return true;
	table->period = longest;
	return try_period(table, faults);
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
	for (uint32_t row = 0; row < table->period; row++)
		if (table->pins[line_row_cell(table, row)] >> signal & 1)
			used[field_value(field, table->state_of_cell[row])] = true;
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

static uint64_t data_levels(const struct table *table, enum stage stage, uint64_t asserted)
{
	return levels_of(table->timeline->plan, asserted) & wiring_stage(&table->wiring, stage)->data_signals;
}

// A spare row leads to the frame's first cell, with the data signals as they are there, or at rest and blanked.
static struct row spare_row(const struct table *table, enum stage stage)
{
	const struct stage_wiring *wiring = wiring_stage(&table->wiring, stage);
	const struct frame_line *first = &table->timeline->lines[0];
	const int blanking = table->timeline->plan->role_signal[ROLE_BLANKING];
	const uint64_t at_rest = blanking < 0 ? 0 : (uint64_t)1 << blanking;
	const bool counts = wiring->advance == ADVANCE_COUNT, two = table->wiring.form == FORM_LINE_FRAME;
	const bool registered = wiring->outputs == OUTPUTS_REGISTERED;
	return (struct row){
		.next = counts || stage == STAGE_FRAME ? 0 : table->state_of_cell[0],
		.kind = stage == STAGE_FRAME ? first->type : 0,
		.clear = counts,
		.step = two && stage == STAGE_LINE && registered && table->timeline->types[first->type].cells == 1,
		.levels = data_levels(table, stage, registered ? table->pins[0] : at_rest),
	};
}

static bool choose_loop(struct table *table, struct diagnostics *diagnostics)
{
	struct faults faults = {.count = 0};
	table->state_of_cell = arena_array(table->arena, table->timeline->cell_count, sizeof *table->state_of_cell);
	if (table->state_of_cell == NULL)
		return report_memory(table->timeline->plan, diagnostics);
	if (choose_states(table, &faults))
		return true;
	faults_report(&faults, table->timeline, table->pins, diagnostics);
	return false;
}

// True if everything went well; otherwise the faults or lack of memory are reported.
static bool fill_table(struct table *table, struct arena *scratch, struct diagnostics *diagnostics)
{
	const struct plan *plan = table->timeline->plan;
	table->wiring = wiring_of(plan);
	table->pins = timeline_pins(table->timeline, table->arena);
	if (table->pins == NULL)
		return report_memory(plan, diagnostics);
	if (!(plan->machine.form == FORM_LOOP ? choose_loop(table, diagnostics) : line_frame_fill(table, scratch, diagnostics)))
		return false;
	if (!fill_codes(table, scratch))
		return report_memory(plan, diagnostics);
	for (unsigned stage = 0; stage < machine_stages(&plan->machine); stage++)
		table->spare[stage] = spare_row(table, (enum stage)stage);
	return true;
}

static struct table *new_table(const struct timeline *timeline, const struct preference *preference)
{
	struct arena *arena = arena_create();
	struct table *table = arena != NULL ? arena_alloc(arena, sizeof *table) : NULL;
	if (table == NULL) {
		arena_destroy(arena);
		return NULL;
	}
	table->arena = arena;
	table->timeline = timeline;
	table->preference = preference;
	return table;
}

struct table *table_create(const struct timeline *timeline, struct diagnostics *diagnostics)
{
	return table_create_near(timeline, NULL, diagnostics);
}

struct table *table_create_near(const struct timeline *timeline, const struct preference *preference, struct diagnostics *diagnostics)
{
	struct arena *scratch = arena_create();
	struct table *table = scratch != NULL ? new_table(timeline, preference) : NULL;
	bool filled = false;
	if (table == NULL)
		report_memory(timeline->plan, diagnostics);
	else
		filled = fill_table(table, scratch, diagnostics);
	arena_destroy(scratch);
	if (table != NULL)
		table->preference = NULL;
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

static struct row loop_row(const struct table *table, uint32_t cell)
{
	const uint32_t frame_next = (cell + 1) % table->timeline->cell_count;
	const uint32_t next = (cell + 1) % table->period;
	const bool counts = table->wiring.line.advance == ADVANCE_COUNT;
	const bool registered = table->wiring.line.outputs == OUTPUTS_REGISTERED;
	return (struct row){
		.next = counts ? 0 : table->state_of_cell[next],
		.clear = counts && table->wiring.line.clear == CLEAR_SYNC && next == 0,
		.levels = data_levels(table, STAGE_LINE, table->pins[registered ? frame_next : cell]),
	};
}

uint32_t table_row_count(const struct table *table, enum stage stage)
{
	if (stage == STAGE_LINE)
		return table->period;
	return table->wiring.form == FORM_LOOP ? 0 : table->timeline->line_count;
}

uint32_t table_row_address(const struct table *table, enum stage stage, uint32_t index)
{
	if (stage == STAGE_FRAME)
		return index;
	return table->wiring.form == FORM_LOOP ? table->state_of_cell[index] : line_row_address(table, index);
}

struct row table_row(const struct table *table, enum stage stage, uint32_t index)
{
	if (table->wiring.form == FORM_LOOP)
		return loop_row(table, index);
	return stage == STAGE_LINE ? line_stage_row(table, index) : frame_stage_row(table, index);
}

bool table_uses_kind(const struct table *table, uint32_t kind)
{
	if (table->wiring.form == FORM_LOOP)
		return kind == 0;
	return kind < table->timeline->plan->line_count && table->line_of_type[kind] != NO_LINE;
}

struct row table_spare(const struct table *table, enum stage stage, uint32_t kind)
{
	struct row row = table->spare[stage];
	// A line of a kind that should not be ends at once, so that the frame stage moves on.
	if (stage == STAGE_LINE && !table_uses_kind(table, kind))
		row.step = true;
	return row;
}

uint32_t table_cell_row(const struct table *table, uint32_t line, uint32_t cell)
{
	const struct frame_line *in_frame = &table->timeline->lines[line];
	if (table->wiring.form == FORM_LOOP)
		return (in_frame->first_cell + cell) % table->period;
	return table->first_row[in_frame->type] + cell;
}
