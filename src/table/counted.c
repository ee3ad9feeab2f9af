#include "table/solve.h"

#include "base/arena.h"
#include "table/code_space.h"

#define REPORTED UINT32_MAX

struct counter {
	const struct constraints *constraints;
	const uint32_t *states; // [period]
};

static struct fault conflict_at(const struct counter *counter, uint32_t cell)
{
	struct fault fault = fault_at(RULE_COUNTED_CONFLICT, cell);
	fault.state = counter->states[cell];
	return fault;
}

static void check_start(const struct counter *counter, struct faults *faults)
{
	const struct machine_plan *machine = &counter->constraints->plan->machine;
	if (!machine->has_start || machine->start == 0)
		return;
	struct fault fault = conflict_at(counter, 0);
	fault.available = machine->start;
	faults_add(faults, fault);
}

// The field of a cell's hold that differs from the counter's state.
static void report_hold(const struct counter *counter, uint32_t cell, struct faults *faults)
{
	const struct constraints *constraints = counter->constraints;
	const struct field *fields = constraints->plan->machine.fields;
	const struct region *region = timeline_region(constraints->timeline, cell);
	struct fault fault = conflict_at(counter, cell);
	for (size_t index = 0; index < region->hold_count && fault.field == NO_SUBJECT; index++) {
		const struct field *field = &fields[region->holds[index].field];
		if (field_value(field, fault.state) == field_value(field, cell_value(constraints, cell)))
			continue;
		fault.field = region->holds[index].field;
		fault.needed = field_value(field, cell_value(constraints, cell));
		fault.available = field_value(field, fault.state);
	}
	faults_add(faults, fault);
}

static void report_signals(const struct counter *counter, uint32_t cell, uint64_t wrong, struct faults *faults)
{
	const struct plan *plan = counter->constraints->plan;
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		if ((wrong >> signal & 1) == 0)
			continue;
		struct fault fault = conflict_at(counter, cell);
		fault.signal = signal;
		fault.field = plan->signals[signal].field;
		fault.needed = (uint32_t)(cell_levels(counter->constraints, cell) >> signal & 1);
		fault.available = field_value(&plan->machine.fields[fault.field], fault.state);
		faults_add(faults, fault);
	}
}

static uint64_t listed_signals(const struct constraints *constraints)
{
	uint64_t listed = constraints->field_signals;
	for (size_t signal = 0; signal < constraints->plan->signal_count; signal++)
		if (constraints->plan->signals[signal].auto_codes)
			listed &= ~((uint64_t)1 << signal);
	return listed;
}

static bool check_cells(const struct counter *counter, struct arena *arena, struct faults *faults)
{
	const struct constraints *constraints = counter->constraints;
	const uint64_t listed = listed_signals(constraints);
	struct code_space codes;
	if (!code_space_create(&codes, arena, constraints))
		return faults_memory(faults);
	code_space_fill(&codes, NULL, 0);
	for (uint32_t cell = 0; cell < constraints->period && !faults_full(faults, RULE_COUNTED_CONFLICT); cell++) {
		const uint32_t state = counter->states[cell];
		const uint64_t levels = codes.levels[code_of_state(&codes, state)];
		const uint64_t wrong = (levels ^ cell_levels(constraints, cell)) & listed;
		if ((state & cell_mask(constraints, cell)) != cell_value(constraints, cell))
			report_hold(counter, cell, faults);
		if (wrong != 0)
			report_signals(counter, cell, wrong, faults);
	}
	return true;
}

// A code may not come up both in a cell where the signal is asserted and in one where it is not.
static bool check_automatic(const struct counter *counter, struct arena *arena, size_t signal, struct faults *faults)
{
	const struct constraints *constraints = counter->constraints;
	const size_t index = constraints->plan->signals[signal].field;
	const struct field *field = &constraints->plan->machine.fields[index];
	const size_t values = (size_t)(field_mask(field) >> field->low) + 1;
	uint32_t *first = arena_array(arena, values, sizeof *first); // cell + 1
	if (first == NULL)
		return faults_memory(faults);
	for (uint32_t cell = 0; cell < constraints->period && !faults_full(faults, RULE_COUNTED_CONFLICT); cell++) {
		const uint32_t value = field_value(field, counter->states[cell]);
		if (first[value] == REPORTED)
			continue;
		if (first[value] == 0)
			first[value] = cell + 1;
		const uint64_t change = cell_levels(constraints, cell) ^ cell_levels(constraints, first[value] - 1);
		if ((change >> signal & 1) == 0)
			continue;
		struct fault fault = conflict_at(counter, first[value] - 1);
		fault.other = cell;
		fault.signal = signal;
		fault.field = index;
		fault.available = value;
		faults_add(faults, fault);
		first[value] = REPORTED;
	}
	return true;
}

bool count_states(const struct constraints *constraints, struct arena *arena, const uint32_t *state_of_cell,
                  struct faults *faults)
{
	const struct plan *plan = constraints->plan;
	const struct counter counter = {constraints, state_of_cell};
	check_start(&counter, faults);
	if (!check_cells(&counter, arena, faults))
		return false;
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (plan->signals[signal].auto_codes && !check_automatic(&counter, arena, signal, faults))
			return false;
	return faults->count == 0;
}
