#include "table/code_space.h"

#include <string.h>

#include "base/arena.h"

static void make_tables(struct code_space *space, uint32_t decoder_mask)
{
	unsigned position = 0;
	for (unsigned bit = 0; bit < LIMIT_STATE_BITS; bit++) {
		if ((decoder_mask >> bit & 1) == 0)
			continue;
		for (unsigned byte = 0; byte < 256; byte++) {
			if (byte >> bit % 8 & 1)
				space->compress[bit / 8][byte] |= (uint32_t)1 << position;
			if (byte >> position % 8 & 1)
				space->expand[position / 8][byte] |= (uint32_t)1 << bit;
		}
		position++;
	}
	space->count = (uint32_t)1 << position;
}

bool code_space_create(struct code_space *space, struct arena *arena, const struct constraints *constraints)
{
	*space = (struct code_space){.constraints = constraints};
	make_tables(space, constraints->decoder_mask);
	space->states_each = constraints->state_count / space->count;
	space->levels = arena_array(arena, space->count, sizeof *space->levels);
	space->pattern_of_code = arena_array(arena, space->count, sizeof *space->pattern_of_code);
	space->pattern_start = arena_array(arena, (size_t)constraints->patterns.count + 1, sizeof *space->pattern_start);
	space->pattern_codes = arena_array(arena, space->count, sizeof *space->pattern_codes);
	return space->levels != NULL && space->pattern_of_code != NULL && space->pattern_start != NULL &&
	       space->pattern_codes != NULL;
}

// Asserts signals in every code whose field holds `value`.
static void assert_value(struct code_space *space, const struct field *field, uint32_t value, uint64_t signals)
{
	const uint32_t others = space->constraints->decoder_mask & ~field_mask(field);
	uint32_t subset = 0;
	do {
		space->levels[code_of_state(space, value << field->low | subset)] |= signals;
		subset = next_subset(subset, others);
	} while (subset != 0);
}

static void assert_all(struct code_space *space, const struct code_choice *choices, size_t count)
{
	const struct plan *plan = space->constraints->plan;
	memset(space->levels, 0, space->count * sizeof *space->levels);
	for (size_t index = 0; index < plan->signal_count; index++) {
		const struct signal *signal = &plan->signals[index];
		if (signal->origin == FROM_FIELD && !signal->auto_codes)
			for (size_t code = 0; code < signal->code_count; code++)
				assert_value(space, &plan->machine.fields[signal->field], signal->codes[code], (uint64_t)1 << index);
	}
	for (size_t index = 0; index < count; index++) {
		const struct field *field = choices[index].field;
		for (uint32_t value = 0; value <= field_mask(field) >> field->low; value++)
			if (choices[index].asserted[value] != 0)
				assert_value(space, field, value, choices[index].asserted[value]);
	}
}

// A counting sort of the codes by pattern.
static void list_codes(struct code_space *space)
{
	const uint32_t patterns = space->constraints->patterns.count;
	uint32_t *start = space->pattern_start;
	memset(start, 0, ((size_t)patterns + 1) * sizeof *start);
	for (uint32_t code = 0; code < space->count; code++)
		if (space->pattern_of_code[code] != NO_PATTERN)
			start[space->pattern_of_code[code] + 1]++;
	for (uint32_t pattern = 0; pattern < patterns; pattern++)
		start[pattern + 1] += start[pattern];
	for (uint32_t code = 0; code < space->count; code++)
		if (space->pattern_of_code[code] != NO_PATTERN)
			space->pattern_codes[start[space->pattern_of_code[code]]++] = code;
	// Filling moved each start to the next pattern's; move them back.
	for (uint32_t pattern = patterns; pattern > 0; pattern--)
		start[pattern] = start[pattern - 1];
	start[0] = 0;
}

void code_space_fill(struct code_space *space, const struct code_choice *choices, size_t count)
{
	assert_all(space, choices, count);
	for (uint32_t code = 0; code < space->count; code++)
		space->pattern_of_code[code] = key_map_find(&space->constraints->patterns, space->levels[code]);
	list_codes(space);
}

uint32_t codes_allowed(const struct code_space *space, uint32_t mask, uint32_t value, uint32_t pattern)
{
	const uint32_t decoder = space->constraints->decoder_mask;
	const uint32_t free = decoder & ~mask;
	if (free == decoder)
		return space->pattern_start[pattern + 1] - space->pattern_start[pattern];
	uint32_t subset = 0, count = 0;
	do {
		count += space->pattern_of_code[code_of_state(space, (value & decoder) | subset)] == pattern;
		subset = next_subset(subset, free);
	} while (subset != 0);
	return count;
}

uint32_t class_states(const struct code_space *space, uint32_t class)
{
	const struct constraints *constraints = space->constraints;
	const uint32_t mask = class_mask(constraints, class);
	const uint32_t free = constraints->state_mask & ~(mask | constraints->decoder_mask);
	uint32_t states = codes_allowed(space, mask, class_value(constraints, class), class_pattern(constraints, class));
	for (uint32_t rest = free; rest != 0; rest &= rest - 1)
		states *= 2;
	return states;
}
