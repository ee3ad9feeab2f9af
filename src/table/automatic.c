#include "table/automatic.h"

#include <string.h>

#include "base/arena.h"

static bool allocate_field(struct automatic_field *field, struct arena *arena)
{
	const size_t patterns = field->constraints->patterns.count;
	field->pattern_of = arena_array(arena, patterns, sizeof(uint32_t));
	field->shares = arena_array(arena, patterns, sizeof(struct share));
	field->group_size = arena_array(arena, patterns, sizeof(uint32_t));
	field->group_of_value = arena_array(arena, field->values, sizeof(uint32_t));
	field->holder = arena_array(arena, field->values, sizeof(uint32_t));
	field->label = arena_array(arena, field->values, sizeof(uint32_t));
	field->asserted = arena_array(arena, field->values, sizeof(uint64_t));
	return field->pattern_of != NULL && field->shares != NULL && field->group_size != NULL &&
	       field->group_of_value != NULL && field->holder != NULL && field->label != NULL && field->asserted != NULL &&
	       key_map_create(&field->patterns, arena, patterns, 0) && key_map_create(&field->groups, arena, patterns, 0);
}

static void find_patterns(struct automatic_field *field)
{
	const struct key_map *all = &field->constraints->patterns;
	for (uint32_t pattern = 0; pattern < all->count; pattern++) {
		const uint64_t levels = all->keys[pattern] & field->signals;
		field->pattern_of[pattern] = key_map_add(&field->patterns, levels);
		field->shares[field->pattern_of[pattern]].group = key_map_add(&field->groups, levels & ~field->automatic);
	}
}

static void find_groups(struct automatic_field *field)
{
	const struct plan *plan = field->constraints->plan;
	uint64_t *listed = field->asserted;
	for (size_t index = 0; index < plan->signal_count; index++) {
		const struct signal *signal = &plan->signals[index];
		if (signal->origin == FROM_FIELD && signal->field == field->index && !signal->auto_codes)
			for (size_t code = 0; code < signal->code_count; code++)
				listed[signal->codes[code]] |= (uint64_t)1 << index;
	}
	for (uint32_t value = 0; value < field->values; value++) {
		field->group_of_value[value] = key_map_find(&field->groups, listed[value]);
		if (field->group_of_value[value] != KEY_ABSENT)
			field->group_size[field->group_of_value[value]]++;
	}
}

static bool create_field(struct automatic_field *field, struct arena *arena, const struct constraints *constraints,
                         size_t index)
{
	const struct plan *plan = constraints->plan;
	*field = (struct automatic_field){
		.constraints = constraints, .field = &plan->machine.fields[index], .index = index, .signal = NO_SUBJECT};
	field->values = (field_mask(field->field) >> field->field->low) + 1;
	field->states_each = constraints->state_count / field->values;
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		if (plan->signals[signal].origin != FROM_FIELD || plan->signals[signal].field != index)
			continue;
		field->signals |= (uint64_t)1 << signal;
		if (!plan->signals[signal].auto_codes)
			continue;
		field->automatic |= (uint64_t)1 << signal;
		if (field->signal == NO_SUBJECT)
			field->signal = signal;
	}
	if (field->automatic == 0)
		return true;
	if (!allocate_field(field, arena))
		return false;
	find_patterns(field);
	find_groups(field);
	return true;
}

bool automatic_create(struct arena *arena, const struct constraints *constraints, struct automatic_field **fields,
                      size_t *count)
{
	const struct machine_plan *machine = &constraints->plan->machine;
	*count = 0;
	*fields = arena_array(arena, machine->field_count, sizeof **fields);
	if (*fields == NULL)
		return false;
	for (size_t index = 0; index < machine->field_count; index++) {
		struct automatic_field *field = &(*fields)[*count];
		if (!create_field(field, arena, constraints, index))
			return false;
		*count += field->automatic != 0;
	}
	return true;
}

static uint32_t pattern_at(const struct automatic_field *field, uint32_t cell)
{
	return key_map_find(&field->patterns, cell_levels(field->constraints, cell) & field->signals);
}

// Cells of two patterns hold one value; told once for each value.
static void report_two(const struct automatic_field *field, uint32_t value, uint32_t cell, struct faults *faults)
{
	for (size_t index = 0; index < faults->count; index++)
		if (faults->list[index].field == field->index && faults->list[index].available == value)
			return;
	struct fault fault = fault_at(RULE_CODE_CONFLICT, field->holder[value] - 1);
	fault.other = cell;
	fault.field = field->index;
	fault.available = value;
	faults_add(faults, fault);
}

// Gives a held value to its cell's pattern, unless that is impossible.
static void hold_value(struct automatic_field *field, uint32_t value, uint32_t cell, uint32_t pattern,
                       struct faults *faults)
{
	struct share *share = &field->shares[pattern];
	if (field->group_of_value[value] != share->group) {
		faults_add(faults, fault_at(RULE_CODE_CONFLICT, cell));
		return;
	}
	if (field->holder[value] != 0) {
		if (field->label[value] != pattern)
			report_two(field, value, cell, faults);
		return;
	}
	field->holder[value] = cell + 1;
	field->label[value] = pattern;
	share->held_values++;
}

// Looks at every cell: which values are held, and how many cells of each pattern hold none.
static void hold_values(struct automatic_field *field, const struct assignment *assignment, struct faults *faults)
{
	const struct constraints *constraints = field->constraints;
	const uint32_t mask = field_mask(field->field);
	uint32_t pattern = 0;
	for (uint32_t cell = 0; cell < constraints->period; cell++) {
		const bool start = cell == 0 && assignment->start_fixed;
		if (cell == 0 || cell_levels(constraints, cell) != cell_levels(constraints, cell - 1))
			pattern = pattern_at(field, cell);
		if (!start && (mask & ~cell_mask(constraints, cell)) != 0) {
			field->shares[pattern].other_cells++;
			continue;
		}
		field->shares[pattern].held_cells++;
		hold_value(field, start ? field->start : field_value(field->field, cell_value(constraints, cell)), cell,
		           pattern, faults);
	}
}

static void clear_field(struct automatic_field *field)
{
	for (uint32_t pattern = 0; pattern < field->patterns.count; pattern++)
		field->shares[pattern] = (struct share){.group = field->shares[pattern].group};
	memset(field->holder, 0, field->values * sizeof *field->holder);
	memset(field->label, 0xFF, field->values * sizeof *field->label);
}

// A pattern's values must have states enough for its cells.
static void find_least(struct automatic_field *field)
{
	for (uint32_t pattern = 0; pattern < field->patterns.count; pattern++) {
		struct share *share = &field->shares[pattern];
		const uint64_t cells = (uint64_t)share->held_cells + share->other_cells;
		const uint64_t states = (uint64_t)share->held_values * field->states_each;
		share->least = share->held_values;
		if (cells > states)
			share->least += (uint32_t)((cells - states + field->states_each - 1) / field->states_each);
		share->values = share->least;
	}
}

struct sum {
	uint64_t least, other_cells;
};

static struct sum sum_group(const struct automatic_field *field, uint32_t group)
{
	struct sum sum = {0, 0};
	for (uint32_t pattern = 0; pattern < field->patterns.count; pattern++)
		if (field->shares[pattern].group == group) {
			sum.least += field->shares[pattern].least;
			sum.other_cells += field->shares[pattern].other_cells;
		}
	return sum;
}

// Shares out what the needs leave of a group's values in proportion to the cells that may choose.
static bool share_out(struct automatic_field *field, uint32_t group)
{
	const struct sum sum = sum_group(field, group);
	if (sum.least > field->group_size[group])
		return false;
	const uint64_t spare = field->group_size[group] - sum.least;
	uint64_t left = sum.other_cells == 0 ? 0 : spare;
	for (uint32_t pattern = 0; pattern < field->patterns.count && left > 0; pattern++) {
		struct share *share = &field->shares[pattern];
		if (share->group != group)
			continue;
		const uint32_t more = (uint32_t)(spare * share->other_cells / sum.other_cells);
		share->values += more;
		left -= more;
	}
	// Rounding down leaves fewer values than there are patterns with cells that may choose.
	for (uint32_t pattern = 0; pattern < field->patterns.count && left > 0; pattern++)
		if (field->shares[pattern].group == group && field->shares[pattern].other_cells > 0) {
			field->shares[pattern].values++;
			left--;
		}
	return true;
}

// Deals a group's free values out along the reflected binary (Gray) code, so that each pattern gets a path of one-bit
// steps, and patterns lie in the order in which they first come up.
static void deal(struct automatic_field *field, uint32_t group)
{
	uint32_t pattern = 0, dealt = 0;
	for (uint32_t index = 0; index < field->values; index++) {
		const uint32_t value = index ^ index >> 1;
		if (field->group_of_value[value] != group || field->holder[value] != 0)
			continue;
		while (pattern < field->patterns.count &&
		       (field->shares[pattern].group != group ||
		        field->shares[pattern].held_values + dealt >= field->shares[pattern].values)) {
			pattern++;
			dealt = 0;
		}
		if (pattern == field->patterns.count)
			return;
		field->label[value] = pattern;
		dealt++;
	}
}

// A cell that asks for a value of the group.
static uint32_t cell_of_group(const struct automatic_field *field, uint32_t group)
{
	uint32_t pattern = 0;
	while (field->shares[field->pattern_of[pattern]].group != group)
		pattern++;
	return field->constraints->pattern_first[pattern];
}

bool automatic_label(struct automatic_field *field, const struct assignment *assignment, struct arena *arena,
                     struct faults *faults)
{
	const size_t before = faults->count;
	clear_field(field);
	field->start = assignment->start_fixed ? field_value(field->field, assignment->start) : NO_CODE;
	hold_values(field, assignment, faults);
	if (faults->count > before)
		return false;
	find_least(field);
	for (uint32_t group = 0; group < field->groups.count; group++) {
		if (!share_out(field, group)) {
			faults_add(faults, automatic_fault(field, cell_of_group(field, group)));
			return false;
		}
		deal(field, group);
	}
	return automatic_arrange(field, arena) || faults_memory(faults);
}

bool automatic_is_uncut(const struct automatic_field *field)
{
	const struct constraints *constraints = field->constraints;
	const struct plan *plan = constraints->plan;
	const uint32_t mask = field_mask(field->field);
	for (uint32_t family = 0; family < constraints->families.count; family++) {
		const uint32_t held = (uint32_t)(constraints->families.keys[family] >> 24) & mask;
		if (held != 0 && held != mask)
			return false;
	}
	for (size_t index = 0; index < plan->signal_count; index++) {
		const struct signal *signal = &plan->signals[index];
		if (signal->origin == FROM_FIELD && signal->field != field->index &&
		    (field_mask(&plan->machine.fields[signal->field]) & mask) != 0)
			return false;
	}
	return true;
}

void automatic_assert(struct automatic_field *field)
{
	for (uint32_t value = 0; value < field->values; value++) {
		const uint32_t label = field->label[value];
		field->asserted[value] = label == NO_PATTERN ? 0 : field->patterns.keys[label] & field->automatic;
	}
}

struct fault automatic_fault(const struct automatic_field *field, uint32_t cell)
{
	struct fault fault = fault_at(RULE_CODES_SHORT, cell);
	const uint32_t group = field->shares[pattern_at(field, cell)].group;
	fault.field = field->index;
	fault.signal = field->signal;
	fault.needed = (uint32_t)sum_group(field, group).least;
	fault.available = field->group_size[group];
	return fault;
}
