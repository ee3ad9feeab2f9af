// Frames that are one and the same loop, begun at another cell or cut into other lines.
#include <inttypes.h>

#include "base/arena.h"
#include "compare/parts.h"

// What a cell does, in the new plan's terms.
struct deed {
	uint64_t asserted;
	int64_t stretch;
	uint32_t hold_mask, hold_value;
};

struct loops {
	const struct comparing *comparing;
	uint32_t cells;
	const uint64_t *mapped; // [cells]: what the old frame asserts, in the new plan's numbers
};

static struct deed deed_of(const struct timeline *timeline, uint64_t asserted, uint64_t mapped, uint32_t cell)
{
	const uint32_t mask = timeline->has_holds ? timeline->hold_mask[cell] : 0;
	return (struct deed){mapped, stretch_of(timeline->plan, asserted), mask, mask != 0 ? timeline->hold_value[cell] : 0};
}

static struct deed old_deed(const struct loops *loops, uint64_t cell)
{
	const struct timeline *timeline = loops->comparing->old_timeline;
	const uint32_t at = (uint32_t)(cell % loops->cells);
	return deed_of(timeline, timeline->asserted[at], loops->mapped[at], at);
}

static struct deed now_deed(const struct loops *loops, uint64_t cell)
{
	const struct timeline *timeline = loops->comparing->now_timeline;
	const uint32_t at = (uint32_t)(cell % loops->cells);
	return deed_of(timeline, timeline->asserted[at], timeline->asserted[at], at);
}

static int order_of(const struct deed *left, const struct deed *right)
{
	if (left->asserted != right->asserted)
		return left->asserted < right->asserted ? -1 : 1;
	if (left->stretch != right->stretch)
		return left->stretch < right->stretch ? -1 : 1;
	if (left->hold_mask != right->hold_mask)
		return left->hold_mask < right->hold_mask ? -1 : 1;
	return left->hold_value < right->hold_value ? -1 : left->hold_value > right->hold_value;
}

static uint64_t hash_deed(const struct deed *deed)
{
	uint64_t hash = deed->asserted * 0x9E3779B97F4A7C15u + (uint64_t)deed->stretch;
	hash = (hash ^ hash >> 29) * 0xBF58476D1CE4E5B9u + ((uint64_t)deed->hold_mask << 32 | deed->hold_value);
	return (hash ^ hash >> 32) * 0x94D049BB133111EBu;
}

// Whether both do the same things, in whatever order: most that differ do so here.
static bool same_deeds(const struct loops *loops)
{
	uint64_t old_sum = 0, now_sum = 0;
	for (uint32_t cell = 0; cell < loops->cells; cell++) {
		const struct deed old = old_deed(loops, cell), now = now_deed(loops, cell);
		old_sum += hash_deed(&old);
		now_sum += hash_deed(&now);
	}
	return old_sum == now_sum;
}

// Steps through the rotations of both at once, and leaves out those that cannot be the least of all; after at most three times the cells
// both stand on their least rotation, or the loops differ. Sets *first to the old frame's cell that is the new one's first.
static bool find_rotation(const struct loops *loops, uint32_t *first)
{
	uint64_t old = 0, now = 0, length = 0;
	while (old < loops->cells && now < loops->cells && length < loops->cells) {
		const struct deed left = old_deed(loops, old + length), right = now_deed(loops, now + length);
		const int order = order_of(&left, &right);
		if (order == 0) {
			length++;
			continue;
		}
		*(order > 0 ? &old : &now) += length + 1;
		length = 0;
	}
	*first = (uint32_t)((old + loops->cells - now % loops->cells) % loops->cells);
	return length == loops->cells;
}

static const uint64_t *map_cells(struct comparing *comparing)
{
	const struct timeline *old = comparing->old_timeline;
	uint64_t *mapped = arena_array(comparing->arena, old->cell_count, sizeof *mapped);
	comparing->failed = comparing->failed || mapped == NULL;
	for (uint32_t cell = 0; mapped != NULL && cell < old->cell_count; cell++)
		mapped[cell] = cell > 0 && old->asserted[cell] == old->asserted[cell - 1] ? mapped[cell - 1] : map_signals(comparing, old->asserted[cell]);
	return mapped;
}

bool frames_are_rotated(struct comparing *comparing, uint32_t *first)
{
	const struct timeline *old = comparing->old_timeline, *now = comparing->now_timeline;
	if (!comparing->same_clock || old->cell_count != now->cell_count || old->tick_count != now->tick_count)
		return false;
	const struct loops loops = {comparing, old->cell_count, map_cells(comparing)};
	return loops.mapped != NULL && same_deeds(&loops) && find_rotation(&loops, first);
}
