// codes: auto, where cells are to keep their states: each value goes to the pattern that it was used for before.
#include "table/automatic.h"

#include "base/arena.h"

// For each value the pattern that most of the cells have that are to keep a state with it: the candidate of Boyer and Moore's vote (1981).
static bool vote(const struct automatic_field *field, const uint32_t *preferred, struct arena *arena, uint32_t *wanted)
{
	uint32_t *votes = arena_array(arena, field->values, sizeof *votes);
	for (uint32_t value = 0; value < field->values; value++)
		wanted[value] = NO_PATTERN;
	for (uint32_t cell = 0; votes != NULL && cell < field->constraints->period; cell++) {
		if (preferred[cell] == NO_STATE)
			continue;
		const uint32_t pattern = key_map_find(&field->patterns, cell_levels(field->constraints, cell) & field->signals);
		const uint32_t value = field_value(field->field, preferred[cell]);
		if (votes[value] == 0)
			wanted[value] = pattern;
		votes[value] += wanted[value] == pattern ? 1 : UINT32_MAX;
	}
	return votes != NULL;
}

// Whether a value can be the pattern's: no cell holds it, and the listed signals that it asserts are those that the pattern asks for.
static bool may_have(const struct automatic_field *field, uint32_t value, uint32_t pattern)
{
	return field->holder[value] == 0 && field->group_of_value[value] == field->shares[pattern].group;
}

static void relabel(struct automatic_field *field, uint32_t value, uint32_t pattern)
{
	if (field->label[value] != NO_PATTERN)
		field->shares[field->label[value]].values--;
	if (pattern != NO_PATTERN)
		field->shares[pattern].values++;
	field->label[value] = pattern;
}

// What a pattern lacks it takes first from values that no cell is to keep, then from patterns that have more than they must.
static void top_up(struct automatic_field *field, const uint32_t *wanted, uint32_t pattern, bool kept_too)
{
	struct share *share = &field->shares[pattern];
	for (uint32_t value = 0; value < field->values && share->values < share->least; value++) {
		const uint32_t label = field->label[value];
		if (label == pattern || !may_have(field, value, pattern) || (!kept_too && wanted[value] != NO_PATTERN) ||
		    (label != NO_PATTERN && field->shares[label].values <= field->shares[label].least))
			continue;
		relabel(field, value, pattern);
	}
}

bool automatic_prefer(struct automatic_field *field, const uint32_t *preferred, struct arena *arena)
{
	uint32_t *wanted = arena_array(arena, field->values, sizeof *wanted);
	if (wanted == NULL || !vote(field, preferred, arena, wanted))
		return false;
	for (uint32_t value = 0; value < field->values; value++)
		if (wanted[value] != NO_PATTERN && may_have(field, value, wanted[value]))
			relabel(field, value, wanted[value]);
	for (unsigned kept_too = 0; kept_too < 2; kept_too++)
		for (uint32_t pattern = 0; pattern < field->patterns.count; pattern++)
			top_up(field, wanted, pattern, kept_too != 0);
	return true;
}
