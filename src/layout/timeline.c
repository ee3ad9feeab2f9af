#include "layout/layout.h"

#include <string.h>

#include "base/arena.h"
#include "layout/divider.h"
#include "layout/placement.h"

static bool report_memory(const struct plan *plan, struct diagnostics *diagnostics)
{
	diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){plan->source, 0, 0}, "memory is out");
	return false;
}

static bool lay_types(struct timeline *timeline, struct line_faults *faults, struct diagnostics *diagnostics)
{
	const struct plan *plan = timeline->plan;
	timeline->types = arena_array(timeline->arena, plan->line_count, sizeof *timeline->types);
	if (timeline->types == NULL)
		return report_memory(plan, diagnostics);
	struct layout layout = {timeline->arena, plan, diagnostics, faults, timeline->types, 0};
	struct placements *placements = arena_alloc(timeline->arena, sizeof *placements);
	bool good = true;
	for (size_t type = 0; type < plan->line_count; type++)
		good = layout_regions(&layout, type) && layout_cells(&layout, type) && good;
	if (good && (placements == NULL || !layout_place_stretch(&layout, placements)))
		return report_memory(plan, diagnostics);
	timeline->placements = placements;
	return good;
}

// Counts lines and cells of the frame; reports a frame that is too large.
static bool measure_frame(struct timeline *timeline, struct diagnostics *diagnostics)
{
	const struct plan *plan = timeline->plan;
	int64_t lines = 0, cells = 0;
	for (size_t index = 0; index < plan->block_count; index++) {
		const struct block *block = &plan->blocks[index];
		lines += block->repeat;
		cells += block->repeat * timeline->types[block->line_type].cells;
		if (cells <= LIMIT_CELLS)
			continue;
		diagnose(diagnostics, RULE_FRAME_SIZE, block->place, "the frame has more than %d cells", LIMIT_CELLS);
		return false;
	}
	timeline->line_count = (uint32_t)lines;
	timeline->cell_count = (uint32_t)cells;
	return true;
}

static void lay_line(struct timeline *timeline, struct frame_line *line)
{
	const struct laid_line *type = &timeline->types[line->type];
	line->first_cell = timeline->cell_count;
	line->first_tick = timeline->tick_count;
	memcpy(timeline->asserted + line->first_cell, type->asserted, type->cells * sizeof *type->asserted);
	timeline->cell_count += type->cells;
	timeline->tick_count += type->ticks;
}

static bool lay_frame(struct timeline *timeline, struct diagnostics *diagnostics)
{
	const struct plan *plan = timeline->plan;
	timeline->lines = arena_array(timeline->arena, timeline->line_count, sizeof *timeline->lines);
	timeline->asserted = arena_array(timeline->arena, timeline->cell_count, sizeof *timeline->asserted);
	if (timeline->lines == NULL || timeline->asserted == NULL)
		return report_memory(plan, diagnostics);
	struct frame_line *line = timeline->lines;
	timeline->cell_count = 0;
	for (size_t block = 0; block < plan->block_count; block++)
		for (uint32_t row = 0; row < plan->blocks[block].repeat; row++, line++) {
			line->type = (uint32_t)plan->blocks[block].line_type;
			line->block = (uint32_t)block;
			line->row = row;
			lay_line(timeline, line);
		}
	return true;
}

static bool has_stretched_cells(const struct timeline *timeline)
{
	return timeline->tick_count > timeline->cell_count * timeline->plan->clock.cell_ticks;
}

static bool lay_out(struct timeline *timeline, struct diagnostics *diagnostics)
{
	struct line_faults *faults = line_faults_create(timeline->arena, diagnostics);
	if (faults == NULL)
		return report_memory(timeline->plan, diagnostics);
	const bool framed = lay_types(timeline, faults, diagnostics) && measure_frame(timeline, diagnostics) &&
	                    lay_frame(timeline, diagnostics);
	if (framed)
		divider_report(&timeline->plan->clock, has_stretched_cells(timeline), diagnostics);
	const bool good = framed && layout_holds(timeline, faults, diagnostics);
	line_faults_report(faults);
	return good;
}

struct timeline *timeline_create(const struct plan *plan, struct diagnostics *diagnostics)
{
	struct arena *arena = arena_create();
	struct timeline *timeline = arena != NULL ? arena_alloc(arena, sizeof *timeline) : NULL;
	if (timeline == NULL) {
		report_memory(plan, diagnostics);
		arena_destroy(arena);
		return NULL;
	}
	timeline->arena = arena;
	timeline->plan = plan;
	if (lay_out(timeline, diagnostics))
		return timeline;
	arena_destroy(arena);
	return NULL;
}

void timeline_destroy(struct timeline *timeline)
{
	if (timeline != NULL)
		arena_destroy(timeline->arena);
}

// pins[i] |= asserted[(i + lead) mod count] & mask, for all i.
static void put_led(const struct timeline *timeline, uint64_t *pins, int64_t lead, uint64_t mask)
{
	const int64_t count = timeline->cell_count;
	const uint32_t shift = (uint32_t)(((lead % count) + count) % count);
	const uint32_t first = timeline->cell_count - shift;
	for (uint32_t cell = 0; cell < first; cell++)
		pins[cell] |= timeline->asserted[cell + shift] & mask;
	for (uint32_t cell = first; cell < timeline->cell_count; cell++)
		pins[cell] |= timeline->asserted[cell - first] & mask;
}

static bool has_leads(const struct plan *plan)
{
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (plan->signals[signal].lead_cells != 0)
			return true;
	return false;
}

const uint64_t *timeline_pins(const struct timeline *timeline, struct arena *arena)
{
	const struct plan *plan = timeline->plan;
	if (!has_leads(plan))
		return timeline->asserted;
	uint64_t *pins = arena_array(arena, timeline->cell_count, sizeof *pins);
	uint64_t done = 0;
	if (pins == NULL)
		return NULL;
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		uint64_t mask = 0;
		for (size_t other = signal; other < plan->signal_count; other++)
			if (plan->signals[other].lead_cells == plan->signals[signal].lead_cells)
				mask |= (uint64_t)1 << other;
		mask &= ~done;
		if (mask != 0)
			put_led(timeline, pins, plan->signals[signal].lead_cells, mask);
		done |= mask;
	}
	return pins;
}

uint64_t levels_of(const struct plan *plan, uint64_t asserted)
{
	uint64_t inverted = 0;
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (!plan->signals[signal].active_high)
			inverted |= (uint64_t)1 << signal;
	return asserted ^ inverted;
}

struct cell_place timeline_place(const struct timeline *timeline, uint32_t cell)
{
	uint32_t low = 0, high = timeline->line_count - 1;
	while (low < high) {
		const uint32_t middle = low + (high - low + 1) / 2;
		if (timeline->lines[middle].first_cell <= cell)
			low = middle;
		else
			high = middle - 1;
	}
	const struct frame_line *line = &timeline->lines[low];
	const uint32_t in_line = cell - line->first_cell;
	return (struct cell_place){low, in_line, timeline->types[line->type].region_of_cell[in_line]};
}

const char *timeline_line_name(const struct timeline *timeline, uint32_t cell)
{
	return timeline->plan->lines[timeline->lines[timeline_place(timeline, cell).line].type].name;
}

const struct region *timeline_region(const struct timeline *timeline, uint32_t cell)
{
	const struct cell_place place = timeline_place(timeline, cell);
	return &timeline->plan->lines[timeline->lines[place.line].type].regions[place.region];
}

const char *timeline_region_name(const struct timeline *timeline, uint32_t cell)
{
	return timeline_region(timeline, cell)->name;
}
