// After how many cells the frame repeats.
#include "base/arena.h"
#include "layout/timeline.h"

static bool cells_equal(const struct timeline *timeline, uint32_t left, uint32_t right, bool held_too)
{
	return timeline->asserted[left] == timeline->asserted[right] &&
	       (!held_too || (timeline->hold_mask[left] == timeline->hold_mask[right] &&
	                      timeline->hold_value[left] == timeline->hold_value[right]));
}

// The failure function of Knuth, Morris and Pratt (1977): the longest proper border of the frame gives its shortest period.
static uint32_t shortest_period(const struct timeline *timeline, bool held_too)
{
	const uint32_t count = timeline->cell_count;
	struct arena *arena = arena_create();
	uint32_t *border = arena != NULL ? arena_array(arena, count, sizeof *border) : NULL;
	uint32_t period = 0;
	if (border != NULL) {
		uint32_t length = 0;
		for (uint32_t cell = 1; cell < count; cell++) {
			while (length > 0 && !cells_equal(timeline, cell, length, held_too))
				length = border[length - 1];
			length += cells_equal(timeline, cell, length, held_too);
			border[cell] = length;
		}
		period = count - border[count - 1];
		if (count % period != 0)
			period = count;
	}
	arena_destroy(arena);
	return period;
}

uint32_t timeline_period(const struct timeline *timeline)
{
	return shortest_period(timeline, false);
}

uint32_t timeline_held_period(const struct timeline *timeline)
{
	return shortest_period(timeline, timeline->has_holds);
}

bool timeline_fold_holds(const struct timeline *timeline, uint32_t period, uint32_t *mask, uint32_t *value)
{
	for (uint32_t cell = 0; cell < period; cell++) {
		mask[cell] = timeline->hold_mask[cell];
		value[cell] = timeline->hold_value[cell];
	}
	for (uint32_t cell = period, folded = 0; cell < timeline->cell_count; cell++) {
		const uint32_t both = mask[folded] & timeline->hold_mask[cell];
		if (((value[folded] ^ timeline->hold_value[cell]) & both) != 0)
			return false;
		mask[folded] |= timeline->hold_mask[cell];
		value[folded] |= timeline->hold_value[cell];
		folded = folded + 1 == period ? 0 : folded + 1;
	}
	return true;
}
