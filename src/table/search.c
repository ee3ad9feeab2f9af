#include "table/search.h"

#include "base/arena.h"
#include "table/relaxed.h"

#define WORK ((uint64_t)1 << 26)     // states that are looked at in all attempts
#define ATTEMPT ((uint64_t)1 << 18)  // and in the first one; the next ones may take twice as many each

// Depth first. All cells are matched with states, where values that are not decided suit every pattern; while some
// value is shared by cells of two patterns, one such value is decided, and its other cells are matched anew. Where that
// is impossible, the value gets its next pattern, or the decision before is changed. So the search is complete, and
// ends with labels or with the proof that there are none, exactly if one of its attempts (each has twice the work of
// the one before, and decides sooner what made trouble) comes to its end before WORK is done. Small machines, of 6 bits
// and three automatic fields, always did in tests. It is not to be expected where dozens of values contend for hardly
// more states than there are cells; nor for a shortage that shows only when values are counted, since every deal of
// them would have to be tried. Wide fields as such do no harm: where few cells share a value, none has to be decided.
struct decision {
	uint32_t field, value;
	uint32_t first; // the pattern that was tried first
	uint32_t tried; // how many patterns were tried, in a circle from the first on
};

struct label_search {
	struct relaxed relaxed;
	struct decision *stack;
	uint32_t depth;
	uint32_t random;
	uint32_t least_loose; // of all dead ends: the fewest cells without a state
	struct fault *fault;  // there
};

static bool create_search(struct label_search *search, struct arena *arena, struct assignment *assignment,
                          struct automatic_field *fields, size_t count)
{
	size_t values = 0;
	for (size_t index = 0; index < count; index++)
		values += fields[index].values;
	search->stack = arena_array(arena, values, sizeof *search->stack);
	return search->stack != NULL && relaxed_create(&search->relaxed, arena, assignment, fields, count);
}

// A random number below `limit`. (Multiplier and increment: Numerical Recipes, 1992.)
static uint32_t below(struct label_search *search, uint32_t limit)
{
	search->random = search->random * 1664525u + 1013904223u;
	return (uint32_t)((uint64_t)search->random * limit >> 32);
}

// Keeps the fault of the dead end at which the fewest cells had no state.
static void note_dead_end(struct label_search *search, uint32_t field)
{
	const struct relaxed *relaxed = &search->relaxed;
	if (relaxed->loose_count == 0 || relaxed->loose_count >= search->least_loose)
		return;
	uint32_t cell = relaxed->loose[0];
	for (uint32_t index = 1; index < relaxed->loose_count; index++)
		if (relaxed->loose[index] < cell)
			cell = relaxed->loose[index];
	search->least_loose = relaxed->loose_count;
	*search->fault = fault_at(RULE_CODES_SHORT, cell);
	search->fault->field = relaxed->fields[field].field->index;
	search->fault->signal = relaxed->fields[field].field->signal;
}

// Finds the value that is to be decided next: one that made trouble before, of those one that many cells share. False
// if no value is shared by two patterns.
static bool find_dispute(struct label_search *search, struct decision *decision)
{
	uint64_t best = 0;
	for (uint32_t index = 0; index < search->relaxed.field_count; index++) {
		const struct relaxed_field *field = &search->relaxed.fields[index];
		for (uint32_t value = 0; value < field->field->values; value++) {
			const uint64_t weight = ((uint64_t)field->weight[value] + 1) * field->cells[value];
			if (!is_disputed(field, value) || weight <= best)
				continue;
			best = weight;
			*decision = (struct decision){.field = index, .value = value};
		}
		search->relaxed.work += field->field->values;
	}
	return best > 0;
}

// The next pattern to try for a decision; NO_PATTERN when all were tried.
static uint32_t next_pattern(struct label_search *search, struct decision *decision)
{
	const struct automatic_field *field = search->relaxed.fields[decision->field].field;
	while (decision->tried < field->patterns.count) {
		const uint32_t pattern = (decision->first + decision->tried++) % field->patterns.count;
		if (field->shares[pattern].group == field->group_of_value[decision->value])
			return pattern;
	}
	return NO_PATTERN;
}

// Tries further patterns for the decision on top of the stack, and for those below it, until all cells have states.
// False when there are none left, or the work is done.
static bool advance(struct label_search *search)
{
	struct relaxed *relaxed = &search->relaxed;
	while (search->depth > 0 && relaxed->work <= relaxed->limit) {
		struct decision *decision = &search->stack[search->depth - 1];
		struct relaxed_field *field = &relaxed->fields[decision->field];
		const uint32_t pattern = next_pattern(search, decision);
		if (pattern == NO_PATTERN) {
			field->decided[decision->value] = NO_PATTERN;
			search->depth--;
			continue;
		}
		relaxed_decide(relaxed, decision->field, decision->value, pattern);
		if (relaxed_settle(relaxed))
			return true;
		field->weight[decision->value]++;
		note_dead_end(search, decision->field);
	}
	return false;
}

// SEARCH_GAVE_UP when the work is done.
static enum search_result attempt(struct label_search *search, bool first)
{
	struct relaxed *relaxed = &search->relaxed;
	struct decision decision;
	while (find_dispute(search, &decision)) {
		decision.first = relaxed_majority(relaxed, decision.field, decision.value);
		if (!first && below(search, 4) == 0)
			decision.first = below(search, relaxed->fields[decision.field].field->patterns.count);
		search->stack[search->depth++] = decision;
		if (!advance(search))
			return relaxed->work > relaxed->limit ? SEARCH_GAVE_UP : SEARCH_NONE;
	}
	return SEARCH_FOUND;
}

static void shuffle_loose(struct label_search *search)
{
	uint32_t *loose = search->relaxed.loose;
	for (uint32_t index = search->relaxed.loose_count; index-- > 1;) {
		const uint32_t other = below(search, index + 1), kept = loose[index];
		loose[index] = loose[other];
		loose[other] = kept;
	}
}

// A cell of which no choice of codes can change that it lacks a state.
static enum search_result prove_short(struct label_search *search, struct arena *arena)
{
	struct relaxed *relaxed = &search->relaxed;
	if (relaxed->work > relaxed->limit)
		return SEARCH_GAVE_UP;
	*search->fault = fault_at(RULE_STATES_SHORT, relaxed->loose[0]);
	return relaxed_count(relaxed, arena, search->fault->cell, &search->fault->needed, &search->fault->available) ?
	           SEARCH_NONE :
	           SEARCH_MEMORY;
}

// Gives a value without cells the pattern of a neighbour, for quiet edges' sake.
static uint32_t spare_label(const struct relaxed_field *relaxed, uint32_t value)
{
	const struct automatic_field *field = relaxed->field;
	for (uint32_t bit = 1; bit < field->values; bit <<= 1) {
		const uint32_t near = value ^ bit;
		if (relaxed->cells[near] > 0 && field->group_of_value[near] == field->group_of_value[value])
			return relaxed->pattern[near];
	}
	return NO_PATTERN;
}

static void set_labels(const struct relaxed_field *relaxed)
{
	struct automatic_field *field = relaxed->field;
	for (uint32_t value = 0; value < field->values; value++) {
		if (relaxed->decided[value] != NO_PATTERN)
			field->label[value] = relaxed->decided[value];
		else
			field->label[value] = relaxed->cells[value] > 0 ? relaxed->pattern[value] : spare_label(relaxed, value);
	}
}

static enum search_result run(struct label_search *search, struct arena *arena)
{
	struct relaxed *relaxed = &search->relaxed;
	enum search_result result = SEARCH_GAVE_UP;
	uint64_t share = ATTEMPT + (uint64_t)8 * relaxed->assignment->constraints->state_count;
	for (bool first = true; result == SEARCH_GAVE_UP && relaxed->work < WORK; first = false) {
		uint32_t cell;
		relaxed->limit = relaxed->work + share < WORK ? relaxed->work + share : WORK;
		search->depth = 0;
		share *= 2;
		if (!relaxed_begin(relaxed, &cell)) {
			*search->fault = fault_at(RULE_CODE_CONFLICT, cell);
			return SEARCH_NONE;
		}
		if (!first)
			shuffle_loose(search);
		result = relaxed_settle(relaxed) ? attempt(search, first) : prove_short(search, arena);
	}
	return result;
}

enum search_result search_labels(struct automatic_field *fields, size_t count, struct assignment *assignment,
                                 struct arena *arena, struct fault *fault)
{
	struct label_search search = {.random = 1, .least_loose = UINT32_MAX, .fault = fault};
	if (!create_search(&search, arena, assignment, fields, count))
		return SEARCH_MEMORY;
	*fault = fault_at(RULE_CODES_SHORT, 0);
	fault->field = fields[0].index;
	fault->signal = fields[0].signal;
	const enum search_result result = run(&search, arena);
	fault->proved = result == SEARCH_NONE;
	for (size_t index = 0; result == SEARCH_FOUND && index < count; index++)
		set_labels(&search.relaxed.fields[index]);
	return result;
}
