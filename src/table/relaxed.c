#include "table/relaxed.h"

#include <string.h>

#include "base/arena.h"

#define DISPUTE UINT32_MAX // the cost of sharing a value with another pattern
#define LOOK 1024          // states that are looked at after one that will do, for a better one

// Runs through the states of a class.
struct walk {
	uint32_t free, value;
	uint64_t levels; // that the class asks of signals with listed codes
	uint32_t pattern;
};

static bool create_field(struct relaxed_field *relaxed, struct arena *arena, struct automatic_field *field)
{
	relaxed->field = field;
	relaxed->decided = arena_array(arena, field->values, sizeof(uint32_t));
	relaxed->cells = arena_array(arena, field->values, sizeof(uint32_t));
	relaxed->pattern = arena_array(arena, field->values, sizeof(uint32_t));
	relaxed->agreed = arena_array(arena, field->values, sizeof(uint32_t));
	relaxed->weight = arena_array(arena, field->values, sizeof(uint32_t));
	return relaxed->decided != NULL && relaxed->cells != NULL && relaxed->pattern != NULL && relaxed->agreed != NULL &&
	       relaxed->weight != NULL;
}

bool relaxed_create(struct relaxed *relaxed, struct arena *arena, struct assignment *assignment,
                    struct automatic_field *fields, size_t count)
{
	const struct constraints *constraints = assignment->constraints;
	const size_t classes = constraints->classes.count;
	*relaxed = (struct relaxed){.assignment = assignment, .field_count = count, .listed = constraints->field_signals};
	relaxed->fields = arena_array(arena, count, sizeof *relaxed->fields);
	relaxed->loose = arena_array(arena, constraints->period, sizeof(uint32_t));
	relaxed->cursor = arena_array(arena, classes, sizeof(uint32_t));
	relaxed->from_class = arena_array(arena, classes, sizeof(uint32_t));
	relaxed->from_state = arena_array(arena, classes, sizeof(uint32_t));
	relaxed->seen = arena_array(arena, classes, sizeof(uint32_t));
	relaxed->queue = arena_array(arena, classes, sizeof(uint32_t));
	if (relaxed->fields == NULL || relaxed->loose == NULL || relaxed->cursor == NULL || relaxed->from_class == NULL ||
	    relaxed->from_state == NULL || relaxed->seen == NULL || relaxed->queue == NULL)
		return false;
	for (size_t index = 0; index < count; index++) {
		relaxed->listed &= ~fields[index].automatic;
		if (!create_field(&relaxed->fields[index], arena, &fields[index]))
			return false;
	}
	return true;
}

static uint32_t pattern_of_cell(const struct relaxed *relaxed, uint32_t cell)
{
	const struct constraints *constraints = relaxed->assignment->constraints;
	const uint32_t class = constraints->class_of_cell[cell];
	if (class != CLASS_FIXED)
		return class_pattern(constraints, class);
	return key_map_find(&constraints->patterns, cell_levels(constraints, cell));
}

// Notes that a cell of a pattern came to have a state.
static void count_cell(struct relaxed *relaxed, uint32_t cell, uint32_t state)
{
	const uint32_t all = pattern_of_cell(relaxed, cell);
	for (size_t index = 0; index < relaxed->field_count; index++) {
		struct relaxed_field *field = &relaxed->fields[index];
		const uint32_t value = field_value(field->field->field, state), pattern = field->field->pattern_of[all];
		if (field->cells[value]++ == 0) {
			field->pattern[value] = pattern;
			field->agreed[value] = 0;
		}
		field->agreed[value] += field->pattern[value] == pattern;
	}
}

static void discount_cell(struct relaxed *relaxed, uint32_t cell, uint32_t state)
{
	const uint32_t all = pattern_of_cell(relaxed, cell);
	for (size_t index = 0; index < relaxed->field_count; index++) {
		struct relaxed_field *field = &relaxed->fields[index];
		const uint32_t value = field_value(field->field->field, state);
		field->cells[value]--;
		field->agreed[value] -= field->pattern[value] == field->field->pattern_of[all];
	}
}

static void place(struct relaxed *relaxed, uint32_t cell, uint32_t state)
{
	relaxed->assignment->state_of_cell[cell] = state;
	relaxed->assignment->owner[state] = cell + 1;
	count_cell(relaxed, cell, state);
}

static void release(struct relaxed *relaxed, uint32_t cell)
{
	const uint32_t state = relaxed->assignment->state_of_cell[cell];
	relaxed->assignment->owner[state] = 0;
	relaxed->assignment->state_of_cell[cell] = NO_STATE;
	discount_cell(relaxed, cell, state);
}

static struct walk walk_of(const struct relaxed *relaxed, uint32_t class)
{
	const struct constraints *constraints = relaxed->assignment->constraints;
	const uint32_t pattern = class_pattern(constraints, class);
	return (struct walk){constraints->state_mask & ~class_mask(constraints, class), class_value(constraints, class),
	                     constraints->patterns.keys[pattern] & relaxed->listed, pattern};
}

static bool suits(const struct relaxed *relaxed, const struct walk *walk, uint32_t state)
{
	const struct code_space *codes = relaxed->assignment->codes;
	if ((codes->levels[code_of_state(codes, state)] & relaxed->listed) != walk->levels)
		return false;
	for (size_t index = 0; index < relaxed->field_count; index++) {
		const struct relaxed_field *field = &relaxed->fields[index];
		const uint32_t decided = field->decided[field_value(field->field->field, state)];
		if (decided != NO_PATTERN && decided != field->field->pattern_of[walk->pattern])
			return false;
	}
	return true;
}

// What taking a state costs cells of other patterns: the states of values that it is the first to use. DISPUTE where
// another pattern uses one of its values.
static uint32_t cost_of(const struct relaxed *relaxed, const struct walk *walk, uint32_t state)
{
	uint32_t cost = 0;
	for (size_t index = 0; index < relaxed->field_count; index++) {
		const struct relaxed_field *field = &relaxed->fields[index];
		const uint32_t value = field_value(field->field->field, state);
		if (field->cells[value] == 0)
			cost += field->decided[value] == NO_PATTERN ? field->field->states_each - 1 : 0;
		else if (is_disputed(field, value) || field->pattern[value] != field->field->pattern_of[walk->pattern])
			return DISPUTE;
	}
	return cost;
}

// The cheapest free state of a class, from where the last was found on, looking not much further than the first that
// disputes no value; NO_STATE if there is none that does not.
static uint32_t cheapest(struct relaxed *relaxed, uint32_t class)
{
	const struct walk walk = walk_of(relaxed, class);
	uint32_t best = NO_STATE, least = DISPUTE, look = LOOK, subset = relaxed->cursor[class];
	do {
		const uint32_t state = walk.value | subset;
		relaxed->work++;
		look -= best != NO_STATE;
		if (relaxed->assignment->owner[state] == 0 && suits(relaxed, &walk, state)) {
			const uint32_t cost = cost_of(relaxed, &walk, state);
			if (cost < least) {
				best = state;
				least = cost;
				relaxed->cursor[class] = subset;
			}
		}
		subset = next_subset(subset, walk.free);
	} while (subset != relaxed->cursor[class] && least > 0 && look > 0);
	return best;
}

static bool is_movable(const struct relaxed *relaxed, uint32_t cell)
{
	return !cell_is_fixed(relaxed->assignment, cell);
}

// Queues the classes whose cells a class could displace; returns a free state that suits it, or NO_STATE.
static uint32_t spread(struct relaxed *relaxed, uint32_t class)
{
	const struct assignment *assignment = relaxed->assignment;
	const struct walk walk = walk_of(relaxed, class);
	uint32_t subset = 0;
	do {
		const uint32_t state = walk.value | subset;
		subset = next_subset(subset, walk.free);
		relaxed->work++;
		if (!suits(relaxed, &walk, state))
			continue;
		if (assignment->owner[state] == 0)
			return state;
		const uint32_t cell = assignment->owner[state] - 1;
		const uint32_t owner = assignment->constraints->class_of_cell[cell];
		if (!is_movable(relaxed, cell) || relaxed->seen[owner] == relaxed->search)
			continue;
		relaxed->seen[owner] = relaxed->search;
		relaxed->from_class[owner] = class;
		relaxed->from_state[owner] = state;
		relaxed->queue[relaxed->queued++] = owner;
	} while (subset != 0);
	return NO_STATE;
}

// Moves the cells on the path from class `from` to a free state, each to the state of the next, and `cell` to the
// first's.
static void shift(struct relaxed *relaxed, uint32_t cell, uint32_t from, uint32_t state)
{
	for (uint32_t class = from; relaxed->from_class[class] != class; class = relaxed->from_class[class]) {
		const uint32_t given_up = relaxed->from_state[class];
		const uint32_t mover = relaxed->assignment->owner[given_up] - 1;
		release(relaxed, mover);
		place(relaxed, mover, state);
		state = given_up;
	}
	place(relaxed, cell, state);
}

// A breadth-first search for the shortest path from a cell to a free state.
static bool augment(struct relaxed *relaxed, uint32_t cell)
{
	const uint32_t root = relaxed->assignment->constraints->class_of_cell[cell];
	relaxed->search++;
	relaxed->seen[root] = relaxed->search;
	relaxed->from_class[root] = root;
	relaxed->queue[0] = root;
	relaxed->queued = 1;
	for (uint32_t head = 0; head < relaxed->queued; head++) {
		const uint32_t class = relaxed->queue[head];
		const uint32_t state = spread(relaxed, class);
		if (state != NO_STATE) {
			shift(relaxed, cell, class, state);
			return true;
		}
	}
	return false;
}

static bool settle_cell(struct relaxed *relaxed, uint32_t cell)
{
	const uint32_t state = cheapest(relaxed, relaxed->assignment->constraints->class_of_cell[cell]);
	if (state == NO_STATE)
		return augment(relaxed, cell);
	place(relaxed, cell, state);
	return true;
}

bool relaxed_settle(struct relaxed *relaxed)
{
	uint32_t kept = 0, index = 0;
	for (; index < relaxed->loose_count && kept == 0 && relaxed->work <= relaxed->limit; index++)
		if (!settle_cell(relaxed, relaxed->loose[index]))
			relaxed->loose[kept++] = relaxed->loose[index];
	while (index < relaxed->loose_count)
		relaxed->loose[kept++] = relaxed->loose[index++];
	relaxed->loose_count = kept;
	return kept == 0;
}

void relaxed_decide(struct relaxed *relaxed, size_t index, uint32_t value, uint32_t pattern)
{
	struct relaxed_field *field = &relaxed->fields[index];
	const uint32_t mask = field_mask(field->field->field);
	const uint32_t others = relaxed->assignment->constraints->state_mask & ~mask;
	uint32_t subset = 0;
	field->decided[value] = pattern;
	do {
		const uint32_t owner = relaxed->assignment->owner[value << field->field->field->low | subset];
		relaxed->work++;
		subset = next_subset(subset, others);
		if (owner == 0 || field->field->pattern_of[pattern_of_cell(relaxed, owner - 1)] == pattern)
			continue;
		release(relaxed, owner - 1);
		relaxed->loose[relaxed->loose_count++] = owner - 1;
	} while (subset != 0 && field->cells[value] > 0);
	// All that are left have this pattern.
	field->pattern[value] = pattern;
	field->agreed[value] = field->cells[value];
}

// Boyer and Moore's majority vote (1981): the pattern of more than half of the cells, if there is one.
uint32_t relaxed_majority(struct relaxed *relaxed, size_t index, uint32_t value)
{
	const struct relaxed_field *field = &relaxed->fields[index];
	const uint32_t others = relaxed->assignment->constraints->state_mask & ~field_mask(field->field->field);
	uint32_t best = field->pattern[value], votes = 0, subset = 0;
	do {
		const uint32_t owner = relaxed->assignment->owner[value << field->field->field->low | subset];
		relaxed->work++;
		subset = next_subset(subset, others);
		if (owner == 0)
			continue;
		const uint32_t pattern = field->field->pattern_of[pattern_of_cell(relaxed, owner - 1)];
		if (votes == 0)
			best = pattern;
		votes = pattern == best ? votes + 1 : votes - 1;
	} while (subset != 0);
	return best;
}

static void clear(struct relaxed *relaxed)
{
	const struct constraints *constraints = relaxed->assignment->constraints;
	memset(relaxed->assignment->owner, 0, constraints->state_count * sizeof(uint32_t));
	memset(relaxed->assignment->state_of_cell, 0xFF, constraints->period * sizeof(uint32_t));
	memset(relaxed->cursor, 0, constraints->classes.count * sizeof *relaxed->cursor);
	relaxed->loose_count = 0;
	for (size_t index = 0; index < relaxed->field_count; index++) {
		struct relaxed_field *field = &relaxed->fields[index];
		memset(field->cells, 0, field->field->values * sizeof *field->cells);
		memset(field->agreed, 0, field->field->values * sizeof *field->agreed);
		for (uint32_t value = 0; value < field->field->values; value++)
			field->decided[value] = field->field->holder[value] != 0 ? field->field->label[value] : NO_PATTERN;
	}
}

static bool place_fixed(struct relaxed *relaxed, uint32_t cell)
{
	const struct assignment *assignment = relaxed->assignment;
	const uint32_t state = cell == 0 && assignment->start_fixed ? assignment->start :
	                                                              cell_value(assignment->constraints, cell);
	const uint32_t pattern = pattern_of_cell(relaxed, cell);
	const struct walk walk = {.levels = assignment->constraints->patterns.keys[pattern] & relaxed->listed,
	                          .pattern = pattern};
	if (assignment->owner[state] != 0 || !suits(relaxed, &walk, state))
		return false;
	place(relaxed, cell, state);
	return true;
}

static void loosen_class(struct relaxed *relaxed, uint32_t class)
{
	const struct constraints *constraints = relaxed->assignment->constraints;
	for (uint32_t index = constraints->held_start[class]; index < constraints->held_start[class + 1]; index++)
		if (is_movable(relaxed, constraints->held_cells[index]))
			relaxed->loose[relaxed->loose_count++] = constraints->held_cells[index];
}

bool relaxed_begin(struct relaxed *relaxed, uint32_t *cell)
{
	const struct constraints *constraints = relaxed->assignment->constraints;
	clear(relaxed);
	for (*cell = 0; *cell < constraints->period; (*cell)++)
		if (!is_movable(relaxed, *cell) && !place_fixed(relaxed, *cell))
			return false;
	for (unsigned width = LIMIT_STATE_BITS; width > 0; width--)
		for (uint32_t class = 0; class < constraints->classes.count; class++)
			if (__builtin_popcount(class_mask(constraints, class)) == (int)width)
				loosen_class(relaxed, class);
	for (uint32_t free = 0; free < constraints->period; free++)
		if (cell_mask(constraints, free) == 0 && is_movable(relaxed, free))
			relaxed->loose[relaxed->loose_count++] = free;
	return true;
}

bool relaxed_count(struct relaxed *relaxed, struct arena *arena, uint32_t cell, uint32_t *needed, uint32_t *available)
{
	const struct constraints *constraints = relaxed->assignment->constraints;
	uint8_t *counted = arena_array(arena, constraints->state_count, 1);
	if (counted == NULL || augment(relaxed, cell))
		return false;
	*available = 0;
	for (uint32_t index = 0; index < relaxed->queued; index++) {
		const struct walk walk = walk_of(relaxed, relaxed->queue[index]);
		uint32_t subset = 0;
		do {
			const uint32_t state = walk.value | subset;
			subset = next_subset(subset, walk.free);
			if (counted[state] == 0 && suits(relaxed, &walk, state)) {
				counted[state] = 1;
				(*available)++;
			}
		} while (subset != 0);
	}
	*needed = *available;
	for (uint32_t index = 0; index < relaxed->loose_count; index++)
		*needed += relaxed->seen[constraints->class_of_cell[relaxed->loose[index]]] == relaxed->search;
	return true;
}
