#include "layout/layout.h"

#include "base/arena.h"

// What a walk from one end of a line type has passed so far.
struct walk {
	struct fraction cells; // exact sum of the requested lengths, in cells
};

static bool report_inexact(struct layout *layout, const struct line_type *line, const struct region *region)
{
	struct line_fault *fault =
		line_faults_add(layout->faults, RULE_BAD_QUANTITY, region->length_place, line,
		                "region \"%s\": the exact position of its edge needs numbers beyond 64 bits", region->name);
	line_fault_hint(layout->faults, fault, "give the time, or the clock's frequency, with fewer digits");
	return false;
}

// The requested length of a region in cells, exact. False if it does not fit.
static bool requested_cells(const struct plan *plan, const struct region *region, struct fraction *cells)
{
	if (region->length == LENGTH_CELLS) {
		*cells = fraction_whole(region->cells);
		return true;
	}
	return fraction_divide(region->ticks, fraction_whole(plan->clock.cell_ticks), cells);
}

static bool walk_region(struct layout *layout, struct walk *walk, const struct line_type *line, const struct region *region)
{
	struct fraction cells;
	if (requested_cells(layout->plan, region, &cells) && fraction_add(walk->cells, cells, &walk->cells))
		return true;
	return report_inexact(layout, line, region);
}

// A change may make a region a fill that stands before the other: the later place in the file is the fault.
static void report_fills(struct layout *layout, const struct line_type *line, const struct region *left, const struct region *right)
{
	const bool changed = left->length_place.line > right->length_place.line;
	const struct region *first = changed ? right : left, *second = changed ? left : right;
	struct line_fault *fault =
		line_faults_add(layout->faults, RULE_DOUBLED_FILL, second->length_place, line,
		                "line type \"%s\" has a second fill, in region \"%s\"", line->name, second->name);
	line_fault_also(layout->faults, fault, first->length_place, "the first, in region \"%s\"", first->name);
}

static size_t find_fill(struct layout *layout, const struct line_type *line, bool *good)
{
	size_t fill = SIZE_MAX;
	for (size_t index = 0; index < line->region_count; index++) {
		if (line->regions[index].length != LENGTH_FILL)
			continue;
		if (fill != SIZE_MAX) {
			report_fills(layout, line, &line->regions[fill], &line->regions[index]);
			*good = false;
			return fill;
		}
		fill = index;
	}
	if (fill != SIZE_MAX && !line->has_cells) {
		const struct region *region = &line->regions[fill];
		struct line_fault *fault =
			line_faults_add(layout->faults, RULE_FILL_WITHOUT_CELLS, region->length_place, line,
			                "region \"%s\" fills line type \"%s\", which does not say how many cells it has",
			                region->name, line->name);
		line_fault_hint(layout->faults, fault, "add cells: N to the line type");
		*good = false;
	}
	return fill;
}

// Edges before the fill from the start, edges after it back from the end; edges[region_count + 1].
static bool find_edges(struct layout *layout, const struct line_type *line, size_t fill, int64_t *edges)
{
	const size_t count = line->region_count;
	const size_t forward = fill == SIZE_MAX ? count : fill;
	struct walk walk = {FRACTION_ZERO};
	edges[0] = 0;
	for (size_t index = 0; index < forward; index++) {
		if (!walk_region(layout, &walk, line, &line->regions[index]))
			return false;
		edges[index + 1] = fraction_nearest(walk.cells);
	}
	if (fill == SIZE_MAX)
		return true;
	walk.cells = FRACTION_ZERO;
	edges[count] = line->cells;
	for (size_t index = count - 1; index > fill; index--) {
		struct fraction edge;
		if (!walk_region(layout, &walk, line, &line->regions[index]))
			return false;
		if (!fraction_subtract(fraction_whole(line->cells), walk.cells, &edge))
			return report_inexact(layout, line, &line->regions[index]);
		edges[index] = fraction_nearest(edge);
	}
	return true;
}

static bool check_length(struct layout *layout, const struct line_type *line, size_t fill, const int64_t *edges)
{
	const int64_t total = edges[line->region_count];
	if (fill != SIZE_MAX && edges[fill + 1] <= edges[fill]) {
		line_faults_add(layout->faults, RULE_LINE_LENGTH, line->regions[fill].length_place, line,
		                "line type \"%s\" has %lld cells, but its other regions take %lld and leave none for the"
		                " fill \"%s\"", line->name, (long long)line->cells,
		                (long long)(line->cells - (edges[fill + 1] - edges[fill])), line->regions[fill].name);
		return false;
	}
	if (fill == SIZE_MAX && line->has_cells && total != line->cells) {
		diagnose(layout->diagnostics, RULE_LINE_LENGTH, line->cells_place, "line type \"%s\" has %lld cells, but its regions make %lld",
		         line->name, (long long)line->cells, (long long)total);
		diagnose_hint(layout->diagnostics, "give one region fill: true, or leave cells out of the line type");
		return false;
	}
	if (total > LIMIT_CELLS || layout->laid_cells + (uint64_t)total > LIMIT_CELLS) {
		diagnose(layout->diagnostics, RULE_FRAME_SIZE, line->place, "the line types have more than %d cells in all", LIMIT_CELLS);
		return false;
	}
	return true;
}

static bool check_regions(struct layout *layout, const struct line_type *line, size_t fill, const int64_t *edges)
{
	bool good = true;
	for (size_t index = 0; index < line->region_count; index++) {
		const struct region *region = &line->regions[index];
		if (index == fill || edges[index + 1] > edges[index])
			continue;
		line_faults_add(layout->faults, RULE_REGION_EMPTY, region->length_place, line,
		                "region \"%s\" of line type \"%s\" is rounded to nothing: both its edges fall on cell %lld",
		                region->name, line->name, (long long)edges[index]);
		good = false;
	}
	return good;
}

static bool set_asked_ticks(struct layout *layout, const struct line_type *line, size_t fill, struct laid_line *laid)
{
	struct fraction others = FRACTION_ZERO;
	const struct fraction cell = fraction_whole(layout->plan->clock.cell_ticks);
	for (size_t index = 0; index < line->region_count; index++) {
		if (index == fill)
			continue;
		const struct region *region = &line->regions[index];
		struct fraction cells, *asked = &laid->regions[index].asked_ticks;
		if (!requested_cells(layout->plan, region, &cells) || !fraction_multiply(cells, cell, asked) ||
		    !fraction_add(others, *asked, &others))
			return report_inexact(layout, line, region);
	}
	struct fraction whole = fraction_whole(line->cells * layout->plan->clock.cell_ticks);
	if (fill != SIZE_MAX && !fraction_subtract(whole, others, &laid->regions[fill].asked_ticks))
		return report_inexact(layout, line, &line->regions[fill]);
	return true;
}

static bool report_memory(struct layout *layout)
{
	diagnose(layout->diagnostics, RULE_OUT_OF_MEMORY, (struct place){layout->plan->source, 0, 0}, "memory is out");
	return false;
}

bool layout_regions(struct layout *layout, size_t type)
{
	const struct line_type *line = &layout->plan->lines[type];
	struct laid_line *laid = &layout->types[type];
	int64_t *edges = arena_array(layout->arena, line->region_count + 1, sizeof *edges);
	laid->regions = arena_array(layout->arena, line->region_count, sizeof *laid->regions);
	if (edges == NULL || laid->regions == NULL)
		return report_memory(layout);
	bool good = true;
	const size_t fill = find_fill(layout, line, &good);
	if (!good || !find_edges(layout, line, fill, edges))
		return false;
	if (!check_length(layout, line, fill, edges) || !check_regions(layout, line, fill, edges))
		return false;
	laid->cells = (uint32_t)edges[line->region_count];
	layout->laid_cells += laid->cells;
	for (size_t index = 0; index < line->region_count; index++) {
		laid->regions[index].first_cell = (uint32_t)edges[index];
		laid->regions[index].cells = (uint32_t)(edges[index + 1] - edges[index]);
	}
	return set_asked_ticks(layout, line, fill, laid);
}
