#include "table/constraints.h"

#include "base/arena.h"

// How often pattern, family and class change from a cell to the next: no more of them can there be.
struct changes {
	size_t patterns, families, classes;
	uint32_t bits; // held bits that ever differ from one cell to the next
};

static struct changes count_changes(const struct constraints *constraints)
{
	struct changes changes = {1, 1, 1, 0};
	for (uint32_t cell = 1; cell < constraints->period; cell++) {
		const uint32_t mask = cell_mask(constraints, cell);
		const bool pattern = cell_levels(constraints, cell) != cell_levels(constraints, cell - 1);
		const bool family = pattern || mask != cell_mask(constraints, cell - 1);
		const bool class = family || cell_value(constraints, cell) != cell_value(constraints, cell - 1);
		changes.patterns += pattern;
		changes.families += family;
		changes.classes += class && mask != constraints->state_mask;
		changes.bits |= cell_value(constraints, cell) ^ cell_value(constraints, cell - 1);
	}
	return changes;
}

static unsigned lowest_bit(uint32_t bits)
{
	unsigned bit = 0;
	while (bits != 0 && (bits >> bit & 1) == 0)
		bit++;
	return bit;
}

static bool allocate(struct constraints *constraints, struct arena *arena)
{
	const struct changes changes = count_changes(constraints);
	constraints->pattern_cells = arena_array(arena, changes.patterns, sizeof(uint32_t));
	constraints->pattern_first = arena_array(arena, changes.patterns, sizeof(uint32_t));
	constraints->class_first = arena_array(arena, changes.classes, sizeof(uint32_t));
	constraints->class_cells = arena_array(arena, changes.classes, sizeof(uint32_t));
	constraints->class_of_cell = arena_array(arena, constraints->period, sizeof(uint32_t));
	return constraints->pattern_cells != NULL && constraints->pattern_first != NULL &&
	       constraints->class_first != NULL && constraints->class_cells != NULL && constraints->class_of_cell != NULL &&
	       key_map_create(&constraints->patterns, arena, changes.patterns, 0) &&
	       key_map_create(&constraints->families, arena, changes.families, 0) &&
	       key_map_create(&constraints->classes, arena, changes.classes, lowest_bit(changes.bits));
}

static uint32_t add_pattern(struct constraints *constraints, uint32_t cell)
{
	const uint32_t known = constraints->patterns.count;
	const uint32_t pattern = key_map_add(&constraints->patterns, cell_levels(constraints, cell));
	if (pattern == known)
		constraints->pattern_first[pattern] = cell;
	return pattern;
}

static uint32_t add_class(struct constraints *constraints, uint32_t cell, uint32_t pattern)
{
	const uint64_t family = (uint64_t)cell_mask(constraints, cell) << 24 | pattern;
	const uint64_t number = key_map_add(&constraints->families, family);
	const uint32_t known = constraints->classes.count;
	const uint32_t class = key_map_add(&constraints->classes, number << 24 | cell_value(constraints, cell));
	if (class == known)
		constraints->class_first[class] = cell;
	return class;
}

static bool same_as_before(const struct constraints *constraints, uint32_t cell)
{
	return cell > 0 && cell_levels(constraints, cell) == cell_levels(constraints, cell - 1) &&
	       cell_mask(constraints, cell) == cell_mask(constraints, cell - 1) &&
	       cell_value(constraints, cell) == cell_value(constraints, cell - 1);
}

static void sort_cells(struct constraints *constraints)
{
	uint32_t pattern = 0, class = 0;
	for (uint32_t cell = 0; cell < constraints->period; cell++) {
		const bool fixed = cell_mask(constraints, cell) == constraints->state_mask;
		if (cell == 0 || cell_levels(constraints, cell) != cell_levels(constraints, cell - 1))
			pattern = add_pattern(constraints, cell);
		if (!fixed && !same_as_before(constraints, cell))
			class = add_class(constraints, cell, pattern);
		constraints->pattern_cells[pattern]++;
		constraints->class_of_cell[cell] = fixed ? CLASS_FIXED : class;
		if (!fixed)
			constraints->class_cells[class]++;
	}
}

// A counting sort of the held cells by class.
static bool list_held(struct constraints *constraints, struct arena *arena)
{
	const uint32_t classes = constraints->classes.count;
	uint32_t *start = arena_array(arena, (size_t)classes + 1, sizeof *start);
	if (start == NULL)
		return false;
	uint32_t total = 0;
	for (uint32_t class = 0; class < classes; class++) {
		start[class] = total;
		total += class_mask(constraints, class) == 0 ? 0 : constraints->class_cells[class];
	}
	uint32_t *cells = arena_array(arena, total, sizeof *cells);
	if (cells == NULL)
		return false;
	for (uint32_t cell = 0; total > 0 && cell < constraints->period; cell++)
		if (constraints->class_of_cell[cell] != CLASS_FIXED && cell_mask(constraints, cell) != 0)
			cells[start[constraints->class_of_cell[cell]]++] = cell;
	// Filling moved each start to the next class's; move them back.
	for (uint32_t class = classes; class > 0; class--)
		start[class] = start[class - 1];
	start[0] = 0;
	constraints->held_start = start;
	constraints->held_cells = cells;
	return true;
}

bool constraints_create(struct constraints *constraints, struct arena *arena, const struct timeline *timeline,
                        const uint64_t *pins, uint32_t period, unsigned state_bits)
{
	const struct plan *plan = timeline->plan;
	const uint32_t state_count = (uint32_t)1 << state_bits;
	*constraints = (struct constraints){.timeline = timeline,
	                                    .plan = plan,
	                                    .pins = pins,
	                                    .period = period,
	                                    .state_count = state_count,
	                                    .state_mask = state_count - 1,
	                                    .kind_mask = state_count - ((uint32_t)1 << plan->machine.line.state_bits)};
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (plan->signals[signal].origin == FROM_FIELD) {
			constraints->field_signals |= (uint64_t)1 << signal;
			constraints->decoder_mask |= field_mask(&plan->machine.fields[plan->signals[signal].field]);
		}
	if (!allocate(constraints, arena))
		return false;
	sort_cells(constraints);
	return list_held(constraints, arena);
}
