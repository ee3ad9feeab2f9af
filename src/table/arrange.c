#include "table/automatic.h"

#include <string.h>

#include "base/arena.h"

#define ARRANGED_VALUES 64 // a set of values is a bit set
#define ARRANGED_PATTERNS 16
#define START ARRANGED_PATTERNS // stands for the value of a fixed first cell, as if it were a pattern
#define PASSAGES 64
#define LONG_RUN 15 // longer runs count as so long
#define PASSES 8
#define RESTARTS 32 // for fields of few values
#define RESTARTED_VALUES 16

// A run of cells of one pattern between two others: `count` of the same kind.
struct passage {
	uint32_t from, through, to;
	uint32_t cells; // at most LONG_RUN
	uint64_t count;
};

// The values of each pattern as a bit set, and the passages that they should make quiet.
struct arrangement {
	struct automatic_field *field;
	uint64_t sets[ARRANGED_PATTERNS + 1];
	uint64_t follows[ARRANGED_PATTERNS][ARRANGED_PATTERNS]; // how often one pattern borders on another
	struct passage passages[PASSAGES];
	size_t passage_count;
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

// True if a passage can be made in steps of one bit.
static bool is_quiet(const struct arrangement *arrangement, const struct passage *passage)
{
	const uint64_t through = arrangement->sets[passage->through];
	uint64_t reached = grow(arrangement->sets[passage->from]) & through, before = 0;
	for (uint32_t cell = 1; cell < passage->cells && reached != before; cell++) {
		before = reached;
		reached = grow(reached) & through;
	}
	return (grow(reached) & arrangement->sets[passage->to]) != 0;
}

// Weighs passages that need a jump, and, so that exchanges lead towards quiet ones, how far apart their patterns are.
static uint64_t cost_of(const struct arrangement *arrangement)
{
	const uint32_t patterns = arrangement->field->patterns.count;
	uint64_t cost = 0;
	for (uint32_t left = 0; left < patterns; left++)
		for (uint32_t right = left + 1; right < patterns; right++)
			if (arrangement->follows[left][right] > 0)
				cost += arrangement->follows[left][right] *
				        (distance(arrangement->sets[left], arrangement->sets[right]) - 1);
	for (size_t index = 0; index < arrangement->passage_count; index++)
		if (!is_quiet(arrangement, &arrangement->passages[index]))
			cost += arrangement->passages[index].count;
	return cost;
}

static void add_passage(struct arrangement *arrangement, struct passage passage)
{
	size_t index = 0;
	if (passage.cells > LONG_RUN)
		passage.cells = LONG_RUN;
	for (; index < arrangement->passage_count; index++) {
		struct passage *known = &arrangement->passages[index];
		if (known->from == passage.from && known->through == passage.through && known->to == passage.to &&
		    known->cells == passage.cells) {
			known->count++;
			return;
		}
	}
	if (index < PASSAGES)
		arrangement->passages[arrangement->passage_count++] = passage;
}

// Walks once around the period, and on until the passage over its end is known.
static void count_passages(struct arrangement *arrangement)
{
	const struct automatic_field *field = arrangement->field;
	const struct constraints *constraints = field->constraints;
	const uint32_t period = constraints->period;
	uint64_t before = cell_levels(constraints, period - 1) & field->signals;
	struct passage passage = {.from = NO_PATTERN, .through = NO_PATTERN, .count = 1};
	uint32_t began = NO_CELL;
	for (uint32_t step = 0; step < 2 * period; step++) {
		const uint64_t levels = cell_levels(constraints, step % period) & field->signals;
		if (levels == before)
			continue;
		const uint32_t from = key_map_find(&field->patterns, before), to = key_map_find(&field->patterns, levels);
		if (began != NO_CELL) {
			passage.through = from;
			passage.to = to;
			passage.cells = step - began;
			add_passage(arrangement, passage);
			passage.to = START;
			if (step == period && field->start != NO_CODE)
				add_passage(arrangement, passage);
		}
		if (step >= period)
			return;
		arrangement->follows[from][to]++;
		arrangement->follows[to][from]++;
		passage.from = from;
		began = step;
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

static uint64_t descend(struct arrangement *arrangement)
{
	uint64_t cost = cost_of(arrangement), before = UINT64_MAX;
	for (unsigned pass = 0; pass < PASSES && cost > 0 && cost < before; pass++) {
		before = cost;
		cost = improve(arrangement, cost);
	}
	return cost;
}

// Shuffles what may be exchanged; the same way for the same number. (Multiplier and increment: Knuth's MMIX, 1999.)
static void shuffle(struct arrangement *arrangement, uint64_t number)
{
	uint64_t random = number;
	for (uint32_t right = arrangement->field->values; right-- > 1;) {
		random = random * UINT64_C(6364136223846793005) + UINT64_C(1442695040888963407);
		const uint32_t left = (uint32_t)((random >> 33) % (right + 1));
		if (may_exchange(arrangement->field, left, right))
			exchange(arrangement, left, right);
	}
}

static void arrange(struct arrangement *arrangement)
{
	const uint32_t values = arrangement->field->values;
	uint32_t *label = arrangement->field->label, best[ARRANGED_VALUES];
	uint64_t least = descend(arrangement);
	memcpy(best, label, values * sizeof *label);
	for (unsigned restart = 1; restart < RESTARTS && values <= RESTARTED_VALUES && least > 0; restart++) {
		shuffle(arrangement, restart);
		const uint64_t cost = descend(arrangement);
		if (cost >= least)
			continue;
		least = cost;
		memcpy(best, label, values * sizeof *label);
	}
	memcpy(label, best, values * sizeof *label);
}

bool automatic_arrange(struct automatic_field *field, struct arena *arena)
{
	if (field->values > ARRANGED_VALUES || field->patterns.count > ARRANGED_PATTERNS)
		return true;
	struct arrangement *arrangement = arena_alloc(arena, sizeof *arrangement);
	if (arrangement == NULL)
		return false;
	arrangement->field = field;
	if (field->start != NO_CODE)
		arrangement->sets[START] = (uint64_t)1 << field->start;
	for (uint32_t value = 0; value < field->values; value++)
		if (field->label[value] != NO_PATTERN)
			arrangement->sets[field->label[value]] |= (uint64_t)1 << value;
	for (uint32_t pattern = 0; pattern < field->patterns.count; pattern++)
		if (arrangement->sets[pattern] == 0)
			return true;
	count_passages(arrangement);
	arrange(arrangement);
	return true;
}
