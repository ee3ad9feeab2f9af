#include "table/automatic.h"

// How a pattern that is short of states gets further values of a field.
struct taker {
	struct automatic_field *field;
	uint32_t pattern;
	uint32_t mask, value; // what its cell holds
};

static unsigned count_bits(uint32_t bits)
{
	unsigned count = 0;
	for (; bits != 0; bits &= bits - 1)
		count++;
	return count;
}

// True if the value would do for the pattern, but is another's or nobody's.
static bool is_elsewhere(const struct taker *taker, uint32_t value)
{
	const struct automatic_field *field = taker->field;
	return field->group_of_value[value] == field->shares[taker->pattern].group && field->label[value] != taker->pattern;
}

static bool can_take(const struct taker *taker, uint32_t value)
{
	const struct automatic_field *field = taker->field;
	if (!is_elsewhere(taker, value) || field->holder[value] != 0)
		return false;
	const uint32_t label = field->label[value];
	return label == NO_PATTERN || field->shares[label].values > field->shares[label].least;
}

static bool fits_hold(const struct taker *taker, uint32_t value)
{
	return ((value << taker->field->field->low ^ taker->value) & taker->mask & field_mask(taker->field->field)) == 0;
}

// How many bits the value is away from the nearest one of the pattern; 0 where finding that would take too long.
static unsigned distance_to(const struct taker *taker, uint32_t value)
{
	unsigned distance = LIMIT_STATE_BITS;
	if (taker->field->values > 1024)
		return 0;
	for (uint32_t other = 0; other < taker->field->values; other++)
		if (taker->field->label[other] == taker->pattern && count_bits(value ^ other) < distance)
			distance = count_bits(value ^ other);
	return distance;
}

// The best value to take: one that suits the cell's own hold, then the nearest, then the lowest; NO_CODE if there is
// none.
static uint32_t best_value(const struct taker *taker)
{
	uint32_t best = NO_CODE;
	unsigned best_rate = UINT32_MAX;
	for (uint32_t value = 0; value < taker->field->values && best_rate > 0; value++) {
		if (!can_take(taker, value))
			continue;
		const unsigned rate = (fits_hold(taker, value) ? 0 : LIMIT_STATE_BITS + 1) + distance_to(taker, value);
		if (rate < best_rate) {
			best_rate = rate;
			best = value;
		}
	}
	return best;
}

static void take(const struct taker *taker, uint32_t value)
{
	struct automatic_field *field = taker->field;
	if (field->label[value] != NO_PATTERN)
		field->shares[field->label[value]].values--;
	field->label[value] = taker->pattern;
	field->shares[taker->pattern].values++;
}

// How many values the pattern could take at once.
static uint64_t count_takeable(const struct taker *taker)
{
	const struct automatic_field *field = taker->field;
	uint64_t count = 0;
	for (uint32_t value = 0; value < field->values; value++)
		count += is_elsewhere(taker, value) && field->label[value] == NO_PATTERN;
	for (uint32_t pattern = 0; pattern < field->patterns.count; pattern++)
		if (pattern != taker->pattern && field->shares[pattern].group == field->shares[taker->pattern].group &&
		    field->shares[pattern].values > field->shares[pattern].least)
			count += field->shares[pattern].values - field->shares[pattern].least;
	return count;
}

static bool has_all(const struct taker *taker)
{
	for (uint32_t value = 0; value < taker->field->values; value++)
		if (is_elsewhere(taker, value))
			return false;
	return true;
}

enum repair automatic_repair(struct automatic_field *field, const struct fault *fault)
{
	const struct constraints *constraints = field->constraints;
	const uint64_t levels = cell_levels(constraints, fault->cell) & field->signals;
	const struct taker taker = {field, key_map_find(&field->patterns, levels), cell_mask(constraints, fault->cell),
	                            cell_value(constraints, fault->cell)};
	struct share *share = &field->shares[taker.pattern];
	const uint32_t lacking = fault->rule == RULE_STATES_SHORT ? fault->needed - fault->available : 1;
	const uint32_t more = (lacking + field->states_each - 1) / field->states_each;
	if (has_all(&taker))
		return REPAIR_HOPELESS;
	share->least = share->values + more;
	if (count_takeable(&taker) < more)
		return REPAIR_SHORT;
	for (uint32_t taken = 0; taken < more; taken++)
		take(&taker, best_value(&taker));
	return REPAIR_DONE;
}
