#include "table/search.h"

#include "base/arena.h"

#define CHOICES ((uint64_t)1 << 16)
#define WORK ((uint64_t)1 << 27)

// One value whose label may be chosen, among the patterns of its group.
struct wheel {
	struct automatic_field *field;
	uint32_t value;
};

struct label_search {
	struct wheel *wheels;
	size_t count;
};

// The first pattern from `pattern` on that the value would do for; NO_PATTERN if there is none.
static uint32_t next_pattern(const struct wheel *wheel, uint32_t pattern)
{
	const struct automatic_field *field = wheel->field;
	while (pattern < field->patterns.count && field->shares[pattern].group != field->group_of_value[wheel->value])
		pattern++;
	return pattern < field->patterns.count ? pattern : NO_PATTERN;
}

static bool is_free(const struct automatic_field *field, uint32_t value)
{
	return field->holder[value] == 0 && field->group_of_value[value] != KEY_ABSENT;
}

// The product of all values' choices, or CHOICES + 1 if it is larger than CHOICES; *wheels: how many values have a
// choice.
static uint64_t count_choices(struct automatic_field *fields, size_t count, size_t *wheels)
{
	uint64_t choices = 1;
	*wheels = 0;
	for (size_t index = 0; index < count; index++)
		for (uint32_t value = 0; value < fields[index].values; value++) {
			const struct wheel wheel = {&fields[index], value};
			uint32_t patterns = 0;
			if (!is_free(&fields[index], value))
				continue;
			for (uint32_t pattern = next_pattern(&wheel, 0); pattern != NO_PATTERN;
			     pattern = next_pattern(&wheel, pattern + 1))
				patterns++;
			choices *= patterns;
			if (choices > CHOICES)
				return CHOICES + 1;
			(*wheels)++;
		}
	return choices;
}

struct label_search *label_search_create(struct arena *arena, struct automatic_field *fields, size_t count,
                                         uint64_t work, bool *too_many)
{
	size_t wheels;
	const uint64_t choices = count_choices(fields, count, &wheels);
	*too_many = choices > CHOICES || choices * work > WORK;
	if (*too_many)
		return NULL;
	struct label_search *search = arena_alloc(arena, sizeof *search);
	struct wheel *list = arena_array(arena, wheels, sizeof *list);
	if (search == NULL || list == NULL)
		return NULL;
	*search = (struct label_search){.wheels = list};
	for (size_t index = 0; index < count; index++)
		for (uint32_t value = 0; value < fields[index].values; value++)
			if (is_free(&fields[index], value)) {
				const struct wheel wheel = {&fields[index], value};
				fields[index].label[value] = next_pattern(&wheel, 0);
				list[search->count++] = wheel;
			}
	return search;
}

bool label_search_next(struct label_search *search)
{
	for (size_t index = 0; index < search->count; index++) {
		struct wheel *wheel = &search->wheels[index];
		uint32_t *label = &wheel->field->label[wheel->value];
		*label = next_pattern(wheel, *label + 1);
		if (*label != NO_PATTERN)
			return true;
		*label = next_pattern(wheel, 0);
	}
	return false;
}
