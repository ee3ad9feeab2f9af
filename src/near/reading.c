// How old rows were meant. A plan whose `outputs` or polarities were edited shows the same cells by other rows.
#include "base/arena.h"
#include "near/near.h"

// Latched pins are in the row of the cell before.
void old_frame_read(struct old_frame *frame, struct reading reading)
{
	frame->read = reading;
	for (uint32_t cell = 0; cell < frame->cell_count; cell++) {
		const uint32_t before = cell == 0 ? frame->cell_count - 1 : cell - 1;
		frame->pins[cell] = ((frame->rows[reading.latched ? before : cell] ^ reading.inverted) & frame->data) | frame->decoded[cell];
	}
}

static uint32_t count_asserted(const uint64_t *pins, uint32_t cells, unsigned signal)
{
	uint32_t count = 0;
	for (uint32_t cell = 0; cell < cells; cell++)
		count += pins[cell] >> signal & 1;
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

// The likest reading so far.
struct choice {
	struct old_frame *frame;
	const struct timeline *timeline;
	struct reading reading;
	struct likeness likeness;
};

static bool try_reading(struct choice *choice, struct reading reading)
{
	struct arena *arena = arena_create();
	struct likeness likeness;
	old_frame_read(choice->frame, reading);
	const bool good = arena != NULL && near_likeness(arena, choice->timeline, choice->frame, &likeness);
	arena_destroy(arena);
	if (good && (choice->likeness.most == 0 || likeness.alike > choice->likeness.alike)) {
		choice->reading = reading;
		choice->likeness = likeness;
	}
	return good;
}

static bool try_others(struct choice *choice)
{
	const bool latched = choice->frame->planned.latched;
	struct arena *arena = arena_create();
	const uint64_t *pins = arena != NULL ? timeline_pins(choice->timeline, arena) : NULL;
	const uint64_t inverted = pins != NULL ? find_inverted(choice->frame, choice->timeline, pins) : 0;
	bool good = pins != NULL;
	arena_destroy(arena);
	if (inverted != 0)
		good = good && try_reading(choice, (struct reading){latched, inverted});
	// The stages of a line-frame machine would run otherwise too.
	if (choice->timeline->plan->machine.form == FORM_LOOP)
		good = good && try_reading(choice, (struct reading){!latched, choice->reading.inverted});
	return good;
}

bool old_frame_read_likest(struct old_frame *frame, const struct timeline *timeline)
{
	struct choice choice = {frame, timeline, frame->planned, {0, 0}};
	bool good = try_reading(&choice, frame->planned);
	// Frames that are much the same were meant the same.
	if (good && choice.likeness.alike < choice.likeness.most - choice.likeness.most / 8)
		good = try_others(&choice);
	old_frame_read(frame, choice.reading);
	return good;
}
