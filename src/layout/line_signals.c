// Signals that keep their level over each line.
#include "layout/timeline.h"

uint64_t timeline_line_signals(const struct timeline *timeline, const uint64_t *pins)
{
	uint64_t constant = UINT64_MAX;
	for (uint32_t line = 0; line < timeline->line_count && constant != 0; line++) {
		const uint64_t *first = pins + timeline->lines[line].first_cell;
		for (uint32_t cell = 1; cell < timeline->types[timeline->lines[line].type].cells; cell++)
			constant &= ~(first[cell] ^ first[0]);
	}
	return constant;
}

uint64_t signals_for_frame(const struct timeline *timeline, const uint64_t *pins)
{
	const struct plan *plan = timeline->plan;
	const uint64_t constant = timeline_line_signals(timeline, pins);
	uint64_t suit = 0;
	for (size_t index = 0; index < plan->signal_count; index++) {
		const struct signal *signal = &plan->signals[index];
		if (signal_is_data(signal) && signal->stage == STAGE_LINE && signal->role != ROLE_STRETCH)
			suit |= constant & (uint64_t)1 << index;
	}
	return suit;
}
