#include "table/assignment.h"

#include <string.h>

#include "base/arena.h"

#define NO_LEVEL UINT32_MAX
#define NO_CLASS UINT32_MAX

// Hopcroft and Karp (1973): in each phase a breadth-first search from all cells without a state gives classes their
// distance, then a depth-first search finds as many shortest paths to free states as there are without a state in
// common. Cells of a class are interchangeable, so the graph's nodes are classes; its edges are found by running
// through a class's states.
struct search {
	struct assignment *assignment;
	uint32_t *unmatched; // cells without a state
	uint32_t unmatched_count;
	uint32_t *level;      // [classes]: distance from an unmatched cell
	uint32_t nearest;     // level of the nearest classes with a free state, or NO_LEVEL
	uint32_t *subset;     // [classes]: how far a class has run through its states in this phase
	bool *exhausted;      // [classes]: it is through
	uint32_t *queue;      // [classes]
	uint32_t *path_class; // [classes + 1]
	uint32_t *path_state; // [classes + 1]
};

// Runs through the states of a class, ascending.
struct walk {
	uint32_t free, value, pattern;
};

static struct walk walk_of(const struct constraints *constraints, uint32_t class)
{
	return (struct walk){constraints->state_mask & ~class_mask(constraints, class), class_value(constraints, class),
	                     class_pattern(constraints, class)};
}

static bool walk_allows(const struct assignment *assignment, const struct walk *walk, uint32_t state)
{
	return assignment->codes->pattern_of_code[code_of_state(assignment->codes, state)] == walk->pattern;
}

// The class of a state's owner, or NO_CLASS if the owner cannot be moved.
static uint32_t owner_class(const struct assignment *assignment, uint32_t state)
{
	const uint32_t cell = assignment->owner[state] - 1;
	return cell_is_fixed(assignment, cell) ? NO_CLASS : assignment->constraints->class_of_cell[cell];
}

static bool search_create(struct search *search, struct arena *arena, struct assignment *assignment)
{
	const struct constraints *constraints = assignment->constraints;
	const size_t classes = constraints->classes.count;
	const uint32_t held = constraints->held_start[classes];
	*search = (struct search){.assignment = assignment};
	search->unmatched = arena_array(arena, held, sizeof(uint32_t));
	search->level = arena_array(arena, classes, sizeof(uint32_t));
	search->subset = arena_array(arena, classes, sizeof(uint32_t));
	search->exhausted = arena_array(arena, classes, sizeof(bool));
	search->queue = arena_array(arena, classes, sizeof(uint32_t));
	search->path_class = arena_array(arena, classes + 1, sizeof(uint32_t));
	search->path_state = arena_array(arena, classes + 1, sizeof(uint32_t));
	if (search->unmatched == NULL || search->level == NULL || search->subset == NULL || search->exhausted == NULL ||
	    search->queue == NULL || search->path_class == NULL || search->path_state == NULL)
		return false;
	for (uint32_t cell = 0; cell < constraints->period; cell++)
		if (cell_mask(constraints, cell) != 0 && assignment->state_of_cell[cell] == NO_STATE)
			search->unmatched[search->unmatched_count++] = cell;
	return true;
}

static void reset(struct search *search)
{
	const size_t classes = search->assignment->constraints->classes.count;
	memset(search->level, 0xFF, classes * sizeof *search->level);
	memset(search->subset, 0, classes * sizeof *search->subset);
	memset(search->exhausted, 0, classes * sizeof *search->exhausted);
}

// Gives the classes that a class can reach in one step their level; true if it can reach a free state.
static bool spread(struct search *search, uint32_t class, uint32_t *tail)
{
	const struct assignment *assignment = search->assignment;
	const struct walk walk = walk_of(assignment->constraints, class);
	uint32_t subset = 0;
	do {
		const uint32_t state = walk.value | subset;
		subset = next_subset(subset, walk.free);
		if (!walk_allows(assignment, &walk, state))
			continue;
		if (assignment->owner[state] == 0)
			return true;
		const uint32_t owner = owner_class(assignment, state);
		if (owner == NO_CLASS || search->level[owner] != NO_LEVEL)
			continue;
		search->level[owner] = search->level[class] + 1;
		search->queue[(*tail)++] = owner;
	} while (subset != 0);
	return false;
}

// Levels up to that of the nearest class with a free state; false if there is no such class.
static bool find_levels(struct search *search)
{
	const uint32_t *class_of_cell = search->assignment->constraints->class_of_cell;
	uint32_t head = 0, tail = 0;
	reset(search);
	search->nearest = NO_LEVEL;
	for (uint32_t index = 0; index < search->unmatched_count; index++) {
		const uint32_t class = class_of_cell[search->unmatched[index]];
		if (search->level[class] == NO_LEVEL)
			search->queue[tail++] = class;
		search->level[class] = 0;
	}
	while (head < tail && search->level[search->queue[head]] <= search->nearest) {
		const uint32_t class = search->queue[head++];
		if (spread(search, class, &tail))
			search->nearest = search->level[class];
	}
	return search->nearest != NO_LEVEL;
}

// True if a shortest path may go on from a class to one that it displaces.
static bool leads_on(const struct search *search, uint32_t class, uint32_t owner)
{
	return owner != NO_CLASS && !search->exhausted[owner] && search->level[class] < search->nearest &&
	       search->level[owner] == search->level[class] + 1;
}

// The next state that leads a class on, left under its cursor; NO_STATE when it is exhausted.
static uint32_t next_state(struct search *search, uint32_t class)
{
	const struct assignment *assignment = search->assignment;
	const struct walk walk = walk_of(assignment->constraints, class);
	while (!search->exhausted[class]) {
		const uint32_t state = walk.value | search->subset[class];
		if (walk_allows(assignment, &walk, state) &&
		    (assignment->owner[state] == 0 || leads_on(search, class, owner_class(assignment, state))))
			return state;
		search->subset[class] = next_subset(search->subset[class], walk.free);
		search->exhausted[class] = search->subset[class] == 0;
	}
	return NO_STATE;
}

// Moves every cell of the path to the state after its own, and `cell` to the path's first.
static void shift(struct search *search, uint32_t cell, uint32_t last)
{
	struct assignment *assignment = search->assignment;
	assignment->remaining[code_of_state(assignment->codes, search->path_state[last])]--;
	for (uint32_t step = last + 1; step-- > 0;) {
		const uint32_t state = search->path_state[step];
		const uint32_t mover = step > 0 ? assignment->owner[search->path_state[step - 1]] - 1 : cell;
		assignment->owner[state] = mover + 1;
		assignment->state_of_cell[mover] = state;
	}
}

static bool find_path(struct search *search, uint32_t cell)
{
	const struct assignment *assignment = search->assignment;
	uint32_t depth = 0;
	search->path_class[0] = assignment->constraints->class_of_cell[cell];
	for (;;) {
		const uint32_t state = next_state(search, search->path_class[depth]);
		if (state == NO_STATE && depth == 0)
			return false;
		if (state == NO_STATE) {
			depth--;
			continue;
		}
		search->path_state[depth] = state;
		if (assignment->owner[state] == 0) {
			shift(search, cell, depth);
			return true;
		}
		search->path_class[++depth] = owner_class(assignment, state);
	}
}

static void run_phase(struct search *search)
{
	uint32_t kept = 0;
	for (uint32_t index = 0; index < search->unmatched_count; index++) {
		const uint32_t cell = search->unmatched[index];
		if (!find_path(search, cell))
			search->unmatched[kept++] = cell;
	}
	search->unmatched_count = kept;
}

// The states that the classes reached from one class may use, each counted once: all are owned, by cells of those
// classes or by fixed ones. `seen` has a bit for each state.
static uint32_t count_reached(struct search *search, uint32_t class, uint8_t *seen)
{
	const struct assignment *assignment = search->assignment;
	uint32_t head = 0, tail = 0, states = 0;
	reset(search);
	memset(seen, 0, assignment->constraints->state_count / 8 + 1);
	search->level[class] = 0;
	search->queue[tail++] = class;
	while (head < tail) {
		const struct walk walk = walk_of(assignment->constraints, search->queue[head]);
		uint32_t subset = 0;
		spread(search, search->queue[head++], &tail);
		do {
			const uint32_t state = walk.value | subset;
			if (walk_allows(assignment, &walk, state) && (seen[state / 8] >> state % 8 & 1) == 0) {
				seen[state / 8] |= (uint8_t)(1 << state % 8);
				states++;
			}
			subset = next_subset(subset, walk.free);
		} while (subset != 0);
	}
	return states;
}

// Hall's condition fails for the classes that an unmatched class reaches. Each unmatched cell belongs to one fault.
static void report_short(struct search *search, uint8_t *seen, struct faults *faults)
{
	const uint32_t *class_of_cell = search->assignment->constraints->class_of_cell;
	while (search->unmatched_count > 0 && !faults_full(faults, RULE_STATES_SHORT)) {
		struct fault fault = fault_at(RULE_STATES_SHORT, search->unmatched[0]);
		uint32_t kept = 0;
		fault.available = count_reached(search, class_of_cell[fault.cell], seen);
		fault.needed = fault.available;
		for (uint32_t index = 0; index < search->unmatched_count; index++) {
			const uint32_t cell = search->unmatched[index];
			if (search->level[class_of_cell[cell]] == NO_LEVEL)
				search->unmatched[kept++] = cell;
			else
				fault.needed++;
		}
		search->unmatched_count = kept;
		faults_add(faults, fault);
	}
}

bool assignment_augment(struct assignment *assignment, struct arena *arena, struct faults *faults)
{
	struct search search;
	if (!search_create(&search, arena, assignment))
		return faults_memory(faults);
	while (search.unmatched_count > 0 && find_levels(&search))
		run_phase(&search);
	if (search.unmatched_count == 0)
		return true;
	uint8_t *seen = arena_array(arena, (size_t)assignment->constraints->state_count / 8 + 1, 1);
	if (seen == NULL)
		return faults_memory(faults);
	report_short(&search, seen, faults);
	return false;
}
