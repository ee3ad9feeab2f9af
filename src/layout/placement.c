#include "layout/placement.h"

#include "base/arena.h"

static bool has_choice(const struct placement_model *model)
{
	for (size_t placed = 0; placed < model->placed_count; placed++)
		if (model->placed[placed].end - model->placed[placed].first > 1)
			return true;
	return false;
}

static void place(struct layout *layout, const struct placements *placements)
{
	const uint64_t stretch = (uint64_t)1 << layout->plan->role_signal[ROLE_STRETCH];
	for (size_t index = 0; index < placements->segment_count; index++) {
		const struct stretch_segment *segment = &placements->segments[index];
		uint64_t *asserted = layout->types[segment->type].asserted;
		for (uint32_t cell = 0; cell < segment->capacity; cell++) {
			asserted[segment->cells[cell]] &= ~stretch;
			asserted[segment->cells[cell]] |= cell < placements->best.counts[index] ? stretch : 0;
		}
	}
	for (size_t type = 0; type < layout->plan->line_count; type++)
		layout_measure_line(layout, type);
}

bool layout_place_stretch(struct layout *layout, struct placements *placements)
{
	struct placement_model model = {.arena = layout->arena, .plan = layout->plan, .types = layout->types};
	bool linear = false;
	*placements = (struct placements){0};
	if (layout->plan->standard == NULL)
		return true;
	if (!placement_segments(&model))
		return false;
	if (!has_choice(&model))
		return true;
	if (!placement_groups(&model, &linear))
		return false;
	placements->unweighed = !linear;
	if (linear && !placement_search(&model, placements))
		return false;
	if (placements->judged)
		place(layout, placements);
	return true;
}
