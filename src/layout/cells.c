#include "layout/layout.h"

#include "base/arena.h"

static bool fill_region(struct layout *layout, const struct line_type *line, struct laid_line *laid, size_t index)
{
	const struct region *region = &line->regions[index];
	struct laid_region *place = &laid->regions[index];
	const int stretch_signal = layout->plan->role_signal[ROLE_STRETCH];
	const uint64_t stretch = stretch_signal >= 0 ? (uint64_t)1 << stretch_signal : 0;
	const int64_t stretched = region->stretch == STRETCH_COUNT ? region->stretch_cells : 0;
	if (stretched > place->cells) {
		struct line_fault *fault =
			line_faults_add(layout->faults, RULE_STRETCH_TOO_LONG, region->stretch_place, line,
			                "region \"%s\" of line type \"%s\" is to have %lld cells stretched, but has %u",
			                region->name, line->name, (long long)stretched, place->cells);
		line_fault_also(layout->faults, fault, region->length_place, "its length is given here");
		return false;
	}
	for (uint32_t cell = 0; cell < place->cells; cell++) {
		laid->region_of_cell[place->first_cell + cell] = (uint16_t)index;
		laid->asserted[place->first_cell + cell] = region->assert_mask | (cell < stretched ? stretch : 0);
	}
	return true;
}

static bool is_stretched(const struct plan *plan, uint64_t asserted)
{
	const int signal = plan->role_signal[ROLE_STRETCH];
	return signal >= 0 && (asserted >> signal & 1) != 0;
}

void layout_measure_line(struct layout *layout, size_t type)
{
	const struct plan *plan = layout->plan;
	const struct line_type *line = &plan->lines[type];
	struct laid_line *laid = &layout->types[type];
	laid->ticks = 0;
	for (size_t index = 0; index < line->region_count; index++) {
		struct laid_region *place = &laid->regions[index];
		place->start_ticks = laid->ticks;
		place->stretched = 0;
		for (uint32_t cell = 0; cell < place->cells; cell++)
			place->stretched += is_stretched(plan, laid->asserted[place->first_cell + cell]);
		place->ticks = place->cells * plan->clock.cell_ticks + place->stretched * plan->clock.stretch_ticks;
		laid->ticks += place->ticks;
	}
}

bool layout_cells(struct layout *layout, size_t type)
{
	const struct line_type *line = &layout->plan->lines[type];
	struct laid_line *laid = &layout->types[type];
	laid->region_of_cell = arena_array(layout->arena, laid->cells, sizeof *laid->region_of_cell);
	laid->asserted = arena_array(layout->arena, laid->cells, sizeof *laid->asserted);
	if (laid->region_of_cell == NULL || laid->asserted == NULL) {
		diagnose(layout->diagnostics, RULE_OUT_OF_MEMORY, (struct place){layout->plan->source, 0, 0}, "memory is out");
		return false;
	}
	bool good = true;
	for (size_t index = 0; index < line->region_count; index++)
		good = fill_region(layout, line, laid, index) && good;
	if (!good)
		return false;
	layout_measure_line(layout, type);
	if (!layout_auto_stretch(layout, type))
		return false;
	layout_measure_line(layout, type);
	return true;
}
