// What regions hold: what the plan says wherever the states of the images keep it.
#include <string.h>

#include "base/arena.h"
#include "compare/seen_work.h"
#include "plan/expression.h"

// Where in a frame a region is held.
struct spot {
	uint32_t first_cell;       // of the region, in the images' circle
	uint32_t in_line, cells;
	int64_t line, row;
};

static const struct region *planned_region(const struct seeing *seeing, const struct seen_type *type, size_t region)
{
	const size_t from = type->lines > 0 ? type->region_of[region] : NONE;
	return from != NONE ? &seeing->planned->plan->lines[type->planned].regions[from] : NULL;
}

// Whether the states keep an expression at a spot. `values_only`: only whether the field can hold its values.
static bool keeps(const struct seeing *seeing, const struct spot *spot, const struct hold *hold, bool values_only)
{
	const struct field *field = &seeing->planned->plan->machine.fields[hold->field];
	int64_t variables[VARIABLE_COUNT] = {[VARIABLE_LINE] = spot->line, [VARIABLE_ROW] = spot->row};
	for (uint32_t col = 0; col < spot->cells; col++) {
		int64_t value = 0;
		variables[VARIABLE_COL] = col;
		variables[VARIABLE_CELL] = spot->in_line + col;
		if (expression_value(hold->expression, variables, &value) != EXPRESSION_OK || value > field_mask(field) >> field->low)
			return false;
		if (!values_only && value != field_value(field, seeing->states[spot->first_cell + col]))
			return false;
	}
	return true;
}

// Cells of a region in its line.
struct extent {
	uint32_t first, cells;
};

static struct extent extent_of(const struct line_type *line, struct extent before, size_t region)
{
	return (struct extent){before.first + before.cells, (uint32_t)line->regions[region].cells};
}

static struct spot spot_at(const struct seeing *seeing, size_t line, struct extent extent, uint32_t row)
{
	return (struct spot){seeing->lines[line].first + extent.first, extent.first, extent.cells, (int64_t)line, row};
}

bool seen_row_fits(const struct seeing *seeing, size_t line, uint32_t row)
{
	const struct seen_type *type = &seeing->types[seeing->lines[line].type];
	const struct line_type *seen = &seeing->seen->plan->lines[seeing->lines[line].type];
	struct extent extent = {0, 0};
	bool fits = true;
	for (size_t region = 0; fits && region < seen->region_count; region++) {
		const struct region *planned = planned_region(seeing, type, region);
		extent = extent_of(seen, extent, region);
		const struct spot spot = spot_at(seeing, line, extent, row);
		for (size_t hold = 0; fits && planned != NULL && hold < planned->hold_count; hold++)
			fits = !expression_uses(planned->holds[hold].expression, VARIABLE_ROW) || keeps(seeing, &spot, &planned->holds[hold], false);
	}
	return fits;
}

// How far a hold of the plan is kept in all lines of a type.
enum keeping {
	KEPT,
	KEPT_AS_PLANNED,           // counted in the plan's lines, though the images have these elsewhere
	NOT_KEPT
};

static enum keeping keeping_of(const struct seeing *seeing, const struct seen_type *type, struct extent extent, const struct hold *hold)
{
	enum keeping keeping = KEPT;
	for (size_t index = type->first_line; index != NONE; index = seeing->lines[index].next) {
		const struct seen_line *line = &seeing->lines[index];
		struct spot spot = spot_at(seeing, index, extent, line->row);
		if (keeps(seeing, &spot, hold, false))
			continue;
		if (line->planned == NONE || !keeps(seeing, &spot, hold, true))
			return NOT_KEPT;
		spot.line = (int64_t)line->planned;
		spot.row = seeing->planned->lines[line->planned].row;
		if (!keeps(seeing, &spot, hold, false))
			return NOT_KEPT;
		keeping = KEPT_AS_PLANNED;
	}
	return keeping;
}

// The expression of a field over the first block of a type, if it is that of all its lines. False when memory is out.
static bool find_expression(struct seeing *seeing, const struct seen_type *type, struct extent extent, struct hold *hold)
{
	const struct field *field = &seeing->planned->plan->machine.fields[hold->field];
	uint32_t *cells = arena_array(seeing->arena, type->lines, sizeof *cells);
	size_t lines = 0, offset;
	if (cells == NULL)
		return false;
	for (size_t line = type->first_line; line != NONE && (lines == 0 || !seeing->lines[line].begins_block); line = seeing->lines[line].next)
		cells[lines++] = seeing->lines[line].first + extent.first;
	const char *text = lift_expression(seeing->seen->arena, seeing->states, field->high, field->low, cells, lines, extent.cells);
	if (text == NULL || expression_compile(seeing->seen->arena, text, &hold->expression, &offset) != EXPRESSION_OK)
		return true;
	if (keeping_of(seeing, type, extent, hold) == KEPT)
		hold->text = text;
	return true;
}

// Values that no expression tells stand as what the field has in the region's first cell.
static bool find_values(struct seeing *seeing, const struct seen_type *type, struct extent extent, struct hold *hold)
{
	const struct field *field = &seeing->planned->plan->machine.fields[hold->field];
	const char *text = arena_format(seeing->seen->arena, "%u",
	                                (unsigned)field_value(field, seeing->states[seeing->lines[type->first_line].first + extent.first]));
	size_t offset;
	hold->text = "other values";
	return text != NULL && expression_compile(seeing->seen->arena, text, &hold->expression, &offset) == EXPRESSION_OK;
}

static bool hold_region(struct seeing *seeing, const struct seen_type *type, struct extent extent, const struct region *planned,
                        struct region *seen)
{
	struct hold *holds = arena_array(seeing->seen->arena, planned->hold_count, sizeof *holds);
	if (holds == NULL)
		return seen_memory(seeing);
	for (size_t index = 0; index < planned->hold_count; index++) {
		holds[index] = planned->holds[index];
		if (keeping_of(seeing, type, extent, &planned->holds[index]) != NOT_KEPT)
			continue;
		holds[index].text = NULL;
		if (!find_expression(seeing, type, extent, &holds[index]) ||
		    (holds[index].text == NULL && !find_values(seeing, type, extent, &holds[index])))
			return seen_memory(seeing);
	}
	seen->holds = holds;
	seen->hold_count = planned->hold_count;
	return true;
}

static bool hold_type(struct seeing *seeing, size_t index)
{
	const struct seen_type *type = &seeing->types[index];
	struct line_type *seen = &seeing->seen->plan->lines[index];
	struct extent extent = {0, 0};
	for (size_t region = 0; type->lines > 0 && region < seen->region_count; region++) {
		const struct region *planned = planned_region(seeing, type, region);
		extent = extent_of(seen, extent, region);
		if (planned != NULL && planned->hold_count > 0 && !hold_region(seeing, type, extent, planned, &seen->regions[region]))
			return false;
	}
	return true;
}

bool seen_hold(struct seeing *seeing)
{
	for (size_t type = 0; type < seeing->type_count; type++)
		if (!hold_type(seeing, type))
			return false;
	return true;
}
