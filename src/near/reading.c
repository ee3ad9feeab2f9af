// How old rows were meant. A plan whose polarities were edited shows the same cells by other levels.
#include "base/arena.h"
#include "near/near.h"

// Latched pins are in the row of the cell before.
void old_frame_read(struct old_frame *frame, uint64_t inverted)
{
	frame->inverted = inverted;
	for (uint32_t cell = 0; cell < frame->cell_count; cell++) {
		const uint32_t before = cell == 0 ? frame->cell_count - 1 : cell - 1;
		frame->pins[cell] = ((frame->rows[frame->latched ? before : cell] ^ inverted) & frame->data) | frame->decoded[cell];
	}
}

static uint32_t count_asserted(const uint64_t *pins, uint32_t cells, unsigned signal)
{
	uint32_t count = 0;
	for (uint32_t cell = 0; cell < cells; cell++)
		count += (pins[cell] >> signal & 1) != 0;
	return count;
}

static uint64_t difference(uint64_t left, uint64_t right)
{
	return left > right ? left - right : right - left;
}

// Data signals that are asserted in the new frame about as long as they are not in the old one.
static uint64_t find_inverted(const struct old_frame *frame, const struct timeline *timeline, const uint64_t *pins)
{
	uint64_t inverted = 0;
	for (unsigned signal = 0; signal < timeline->plan->signal_count; signal++) {
		if ((frame->data >> signal & 1) == 0)
			continue;
		const uint64_t old = count_asserted(frame->rows, frame->cell_count, signal);
		const uint64_t now = (uint64_t)count_asserted(pins, timeline->cell_count, signal) * frame->cell_count;
		if (difference((frame->cell_count - old) * timeline->cell_count, now) < difference(old * timeline->cell_count, now))
			inverted |= (uint64_t)1 << signal;
	}
	return inverted;
}

static bool read_likest(struct arena *arena, struct old_frame *frame, const struct timeline *timeline)
{
	const uint64_t *pins = timeline_pins(timeline, arena);
	uint64_t as_planned, alike;
	if (pins == NULL)
		return false;
	const uint64_t inverted = find_inverted(frame, timeline, pins);
	if (inverted == 0)
		return true;
	if (!near_likeness(arena, timeline, frame, &as_planned))
		return false;
	old_frame_read(frame, inverted);
	if (!near_likeness(arena, timeline, frame, &alike))
		return false;
	if (alike <= as_planned)
		old_frame_read(frame, 0);
	return true;
}

bool old_frame_read_likest(struct old_frame *frame, const struct timeline *timeline)
{
	struct arena *arena = arena_create();
	const bool good = arena != NULL && read_likest(arena, frame, timeline);
	arena_destroy(arena);
	return good;
}
