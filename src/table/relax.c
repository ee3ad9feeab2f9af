#include "table/relax.h"

#include <string.h>

#include "base/arena.h"

// Adds a field's bits, together with those of the fields that share some of them.
static void add_field(struct relaxer *relaxer, uint32_t bits)
{
	size_t kept = 0;
	for (size_t index = 0; index < relaxer->field_count; index++) {
		if ((relaxer->fields[index] & bits) != 0)
			bits |= relaxer->fields[index];
		else
			relaxer->fields[kept++] = relaxer->fields[index];
	}
	relaxer->fields[kept] = bits;
	relaxer->field_count = kept + 1;
}

bool relaxer_create(struct relaxer *relaxer, struct arena *arena, const struct code_space *codes)
{
	const struct plan *plan = codes->constraints->plan;
	*relaxer = (struct relaxer){.count = codes->count};
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (plan->signals[signal].origin == FROM_FIELD)
			add_field(relaxer, code_of_state(codes, field_mask(&plan->machine.fields[plan->signals[signal].field])));
	relaxer->costs = arena_array(arena, codes->count, 1);
	relaxer->lowest = arena_array(arena, codes->count, 1);
	return relaxer->costs != NULL && relaxer->lowest != NULL;
}

unsigned relaxer_jumps(const struct relaxer *relaxer, uint32_t from, uint32_t to)
{
	unsigned jumps = 0;
	for (size_t index = 0; index < relaxer->field_count; index++) {
		const uint32_t change = (from ^ to) & relaxer->fields[index];
		jumps += (change & (change - 1)) != 0;
	}
	return jumps;
}

static uint8_t lesser(uint8_t left, uint8_t right)
{
	return left < right ? left : right;
}

// Both of each two values whose codes differ in `bit` become the lesser of them.
static void spread_bit(uint8_t *values, uint32_t count, uint32_t bit)
{
	for (uint32_t block = 0; block < count; block += 2 * bit)
		for (uint32_t code = block; code < block + bit; code++)
			values[code] = values[code + bit] = lesser(values[code], values[code + bit]);
}

// result[c] becomes at most costs[c with `bit` changed].
static void step_bit(uint8_t *restrict result, const uint8_t *restrict costs, uint32_t count, uint32_t bit)
{
	for (uint32_t block = 0; block < count; block += 2 * bit)
		for (uint32_t code = block; code < block + bit; code++) {
			result[code] = lesser(result[code], costs[code + bit]);
			result[code + bit] = lesser(result[code + bit], costs[code]);
		}
}

// A step within one field: stay, change one bit, or jump anywhere for 1.
static void relax_field(const struct relaxer *relaxer, uint32_t field, uint8_t *result)
{
	const uint32_t count = relaxer->count;
	uint8_t *costs = relaxer->costs, *lowest = relaxer->lowest;
	memcpy(costs, result, count);
	memcpy(lowest, result, count);
	for (uint32_t bit = 1; bit < count; bit <<= 1)
		if ((field & bit) != 0)
			spread_bit(lowest, count, bit);
	for (uint32_t code = 0; code < count; code++)
		result[code] = lesser(result[code], (uint8_t)(lowest[code] + 1));
	for (uint32_t bit = 1; bit < count; bit <<= 1)
		if ((field & bit) != 0)
			step_bit(result, costs, count, bit);
}

uint8_t relaxer_step(const struct relaxer *relaxer, const uint8_t *next, const uint8_t *blocked, uint8_t *result)
{
	uint8_t least = UINT8_MAX;
	for (uint32_t code = 0; code < relaxer->count; code++)
		result[code] = next[code] > blocked[code] ? next[code] : blocked[code];
	for (size_t index = 0; index < relaxer->field_count; index++)
		relax_field(relaxer, relaxer->fields[index], result);
	for (uint32_t code = 0; code < relaxer->count; code++)
		least = lesser(least, result[code]);
	for (uint32_t code = 0; code < relaxer->count; code++)
		result[code] = (uint8_t)(result[code] - least);
	return least;
}
