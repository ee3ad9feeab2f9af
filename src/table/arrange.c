#include "table/automatic.h"

#include "base/arena.h"

#define ARRANGED_VALUES 64     // a set of values is a bit set
#define ARRANGED_PATTERNS 16
#define PASSES 8

// The values of each pattern as a bit set, and how often one pattern follows another, either way round.
struct arrangement {
	struct automatic_field *field;
	uint64_t sets[ARRANGED_PATTERNS];
	uint32_t follows[ARRANGED_PATTERNS][ARRANGED_PATTERNS];
	uint32_t changes[ARRANGED_PATTERNS];   // how often a pattern begins or ends
};

// For each bit of a value: the values in which it is 0.
static const uint64_t without_bit[6] = {
	UINT64_C(0x5555555555555555), UINT64_C(0x3333333333333333), UINT64_C(0x0F0F0F0F0F0F0F0F),
	UINT64_C(0x00FF00FF00FF00FF), UINT64_C(0x0000FFFF0000FFFF), UINT64_C(0x00000000FFFFFFFF),
};

// The set and all values one bit away from it. (Bits beyond the field lead to values that are in no set.)
static uint64_t grow(uint64_t set)
{
	uint64_t grown = set;
	for (unsigned bit = 0; bit < 6; bit++)
		grown |= (set & without_bit[bit]) << (1u << bit) | (set >> (1u << bit) & without_bit[bit]);
	return grown;
}

static unsigned distance(uint64_t left, uint64_t right)
{
	unsigned steps = 0;
	for (; (left & right) == 0; steps++)
		left = grow(left);
	return steps;
}

// How many connected parts a set has.
static unsigned count_parts(uint64_t set)
{
	unsigned parts = 0;
	for (; set != 0; parts++) {
		uint64_t part = set & (~set + 1), before = 0;
		while (part != before) {
			before = part;
			part = grow(part) & set;
		}
		set &= ~part;
	}
	return parts;
}

static uint64_t cost_of(const struct arrangement *arrangement)
{
	const uint32_t patterns = arrangement->field->patterns.count;
	uint64_t cost = 0;
	for (uint32_t left = 0; left < patterns; left++) {
		const uint64_t set = arrangement->sets[left];
		if (set == 0)
			continue;
		cost += (uint64_t)arrangement->changes[left] * (count_parts(set) - 1);
		for (uint32_t right = left + 1; right < patterns; right++)
			if (arrangement->follows[left][right] > 0 && arrangement->sets[right] != 0)
				cost += (uint64_t)arrangement->follows[left][right] * (distance(set, arrangement->sets[right]) - 1);
	}
	return cost;
}

static void count_changes(struct arrangement *arrangement)
{
	const struct constraints *constraints = arrangement->field->constraints;
	const struct automatic_field *field = arrangement->field;
	uint64_t before = cell_levels(constraints, constraints->period - 1) & field->signals;
	for (uint32_t cell = 0; cell < constraints->period; cell++) {
		const uint64_t levels = cell_levels(constraints, cell) & field->signals;
		if (levels == before)
			continue;
		const uint32_t from = key_map_find(&field->patterns, before), to = key_map_find(&field->patterns, levels);
		arrangement->follows[from][to]++;
		arrangement->follows[to][from]++;
		arrangement->changes[from]++;
		arrangement->changes[to]++;
		before = levels;
	}
}

static void exchange(struct arrangement *arrangement, uint32_t left, uint32_t right)
{
	uint32_t *label = arrangement->field->label;
	const uint64_t both = (uint64_t)1 << left | (uint64_t)1 << right;
	const uint32_t kept = label[left];
	if (label[left] != NO_PATTERN)
		arrangement->sets[label[left]] ^= both;
	if (label[right] != NO_PATTERN)
		arrangement->sets[label[right]] ^= both;
	label[left] = label[right];
	label[right] = kept;
}

static bool may_exchange(const struct automatic_field *field, uint32_t left, uint32_t right)
{
	return field->holder[left] == 0 && field->holder[right] == 0 && field->label[left] != field->label[right] &&
	       field->group_of_value[left] == field->group_of_value[right];
}

// Tries every exchange once and keeps those that lower the cost, which it returns.
static uint64_t improve(struct arrangement *arrangement, uint64_t cost)
{
	const uint32_t values = arrangement->field->values;
	for (uint32_t left = 0; left < values; left++)
		for (uint32_t right = left + 1; right < values; right++) {
			if (!may_exchange(arrangement->field, left, right))
				continue;
			exchange(arrangement, left, right);
			const uint64_t changed = cost_of(arrangement);
			if (changed < cost)
				cost = changed;
			else
				exchange(arrangement, left, right);
		}
	return cost;
}

bool automatic_arrange(struct automatic_field *field, struct arena *arena)
{
	if (field->values > ARRANGED_VALUES || field->patterns.count > ARRANGED_PATTERNS)
		return true;
	struct arrangement *arrangement = arena_alloc(arena, sizeof *arrangement);
	if (arrangement == NULL)
		return false;
	arrangement->field = field;
	for (uint32_t value = 0; value < field->values; value++)
		if (field->label[value] != NO_PATTERN)
			arrangement->sets[field->label[value]] |= (uint64_t)1 << value;
	count_changes(arrangement);
	uint64_t cost = cost_of(arrangement), before = UINT64_MAX;
	for (unsigned pass = 0; pass < PASSES && cost > 0 && cost < before; pass++) {
		before = cost;
		cost = improve(arrangement, cost);
	}
	return true;
}
