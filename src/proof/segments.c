#include "proof/segments.h"

void note_longest(struct ways *ways, uint32_t cells, uint32_t state)
{
	if (cells < ways->longest_cells || (cells == ways->longest_cells && state >= ways->longest_state))
		return;
	ways->longest_cells = cells;
	ways->longest_state = state;
}

uint32_t segment_open(struct segments *segments, uint32_t lane, uint32_t previous, uint32_t position)
{
	segments->list[segments->count] = (struct segment){.kind = SEGMENT_OPEN, .lane = lane, .previous = previous,
	                                                   .position = position};
	return segments->count++;
}

// Halves the path on the way, so that long chains of links stay cheap.
uint32_t segment_root(struct segments *segments, uint32_t segment, int32_t *place)
{
	struct segment *list = segments->list;
	while (list[segment].kind == SEGMENT_LINKED) {
		const struct segment *target = &list[list[segment].target];
		if (target->kind == SEGMENT_LINKED) {
			list[segment].shift += target->shift;
			list[segment].target = target->target;
		}
		*place += list[segment].shift;
		segment = list[segment].target;
	}
	return segment;
}

static void add_guests(struct segment *segment, uint32_t guests, int32_t far_place, uint32_t far_state)
{
	if (guests == 0)
		return;
	bool farther = segment->guests == 0 || far_place < segment->far_place ||
	               (far_place == segment->far_place && far_state < segment->far_state);
	if (farther) {
		segment->far_place = far_place;
		segment->far_state = far_state;
	}
	segment->guests += guests;
}

void segment_settle(struct segments *segments, uint32_t index, const struct outcome *outcome, uint32_t distance)
{
	struct segment *segment = &segments->list[index];
	segment->kind = outcome->kind;
	switch (outcome->kind) {
	case SEGMENT_HOME:
		segment->entry = outcome->entry;
		segment->cells = outcome->cells + distance;
		if (segment->guests > 0)
			note_longest(segments->ways, (uint32_t)((int32_t)segment->cells - segment->far_place), segment->far_state);
		break;
	case SEGMENT_LOST:
		segments->ways->lost_states += segment->guests;
		break;
	case SEGMENT_LINKED:
		segment->target = outcome->target;
		segment->shift = outcome->place - (int32_t)distance;
		add_guests(&segments->list[outcome->target], segment->guests, segment->far_place + segment->shift,
		           segment->far_state);
		break;
	case SEGMENT_OPEN:
		break;
	}
}

void segments_count(struct segments *segments, const struct outcome *outcome, uint32_t steps, uint32_t start)
{
	if (outcome->kind == SEGMENT_HOME)
		note_longest(segments->ways, outcome->cells + steps, start);
	else if (outcome->kind == SEGMENT_LOST)
		segments->ways->lost_states += steps;
	else
		add_guests(&segments->list[outcome->target], steps, outcome->place - (int32_t)steps, start);
}
