#include "layout/layout.h"

#include "base/arena.h"
#include "plan/characters.h"
#include "plan/expression.h"

// Where in the frame a region's holds are being evaluated.
struct held_region {
	struct timeline *timeline;
	struct line_faults *faults;
	const struct region *region;
	const struct laid_region *laid;
	const struct frame_line *line;
	uint32_t line_number;
};

static const struct line_type *type_of(const struct held_region *held)
{
	return &held->timeline->plan->lines[held->line->type];
}

static bool report_value(const struct held_region *held, const struct hold *hold, uint32_t col, enum expression_status status,
                         int64_t value)
{
	const struct field *field = &held->timeline->plan->machine.fields[hold->field];
	const struct line_type *type = type_of(held);
	const unsigned cell = held->laid->first_cell + col;
	if (status != EXPRESSION_OK)
		line_faults_add(held->faults, RULE_HOLD_VALUE, hold->place, type,
		                "\"%s\": %s, first in line %u (\"%s\"), cell %u (col %u)", SHORT(hold->text),
		                expression_status_words(status), held->line_number, type->name, cell, col);
	else
		line_faults_add(held->faults, RULE_HOLD_VALUE, hold->place, type,
		                "\"%s\" is %lld, but field \"%s\" of %u bits holds at most %u; first in line %u (\"%s\"),"
		                " cell %u (col %u)", SHORT(hold->text), (long long)value, field->name, field->high - field->low + 1,
		                (unsigned)(field_mask(field) >> field->low), held->line_number, type->name, cell, col);
	return false;
}

static bool report_conflict(const struct held_region *held, const struct hold *hold, uint32_t col)
{
	const struct plan *plan = held->timeline->plan;
	const struct field *field = &plan->machine.fields[hold->field];
	const struct line_type *type = type_of(held);
	struct line_fault *fault =
		line_faults_add(held->faults, RULE_HOLD_CONFLICT, hold->place, type,
		                "field \"%s\" shares bits with a field that is held to another value, first in line %u"
		                " (\"%s\"), cell %u (col %u)", field->name, held->line_number, type->name,
		                held->laid->first_cell + col, col);
	for (const struct hold *other = held->region->holds; other < hold; other++)
		if ((field_mask(field) & field_mask(&plan->machine.fields[other->field])) != 0)
			line_fault_also(held->faults, fault, other->place, "field \"%s\" is held here", plan->machine.fields[other->field].name);
	return false;
}

static bool hold_cell(const struct held_region *held, uint32_t col)
{
	struct timeline *timeline = held->timeline;
	const uint32_t cell = held->laid->first_cell + col;
	const int64_t variables[VARIABLE_COUNT] = {
		[VARIABLE_LINE] = held->line_number,
		[VARIABLE_CELL] = cell,
		[VARIABLE_COL] = col,
		[VARIABLE_ROW] = held->line->row,
	};
	uint32_t mask = 0, bits = 0;
	for (size_t index = 0; index < held->region->hold_count; index++) {
		const struct hold *hold = &held->region->holds[index];
		const struct field *field = &timeline->plan->machine.fields[hold->field];
		const uint32_t here = field_mask(field);
		int64_t value = 0;
		const enum expression_status status = expression_value(hold->expression, variables, &value);
		if (status != EXPRESSION_OK || value > (int64_t)(here >> field->low))
			return report_value(held, hold, col, status, value);
		const uint32_t placed = (uint32_t)value << field->low;
		if (((bits ^ placed) & mask & here) != 0)
			return report_conflict(held, hold, col);
		mask |= here;
		bits |= placed;
	}
	timeline->hold_mask[held->line->first_cell + cell] = mask;
	timeline->hold_value[held->line->first_cell + cell] = bits;
	return true;
}

static bool has_holds(const struct plan *plan)
{
	for (size_t block = 0; block < plan->block_count; block++) {
		const struct line_type *line = &plan->lines[plan->blocks[block].line_type];
		for (size_t index = 0; index < line->region_count; index++)
			if (line->regions[index].hold_count > 0)
				return true;
	}
	return false;
}

// Evaluates a line; *wrong[type][region] keeps a region from being reported once for every line.
static bool hold_line(struct timeline *timeline, struct line_faults *faults, uint32_t line_number, bool *const *wrong)
{
	const struct frame_line *line = &timeline->lines[line_number];
	const struct line_type *type = &timeline->plan->lines[line->type];
	bool good = true;
	for (size_t index = 0; index < type->region_count; index++) {
		const struct held_region held = {timeline, faults, &type->regions[index], &timeline->types[line->type].regions[index],
		                                 line, line_number};
		if (held.region->hold_count == 0 || wrong[line->type][index])
			continue;
		for (uint32_t col = 0; col < held.laid->cells && !wrong[line->type][index]; col++)
			wrong[line->type][index] = !hold_cell(&held, col);
		good = good && !wrong[line->type][index];
	}
	return good;
}

static bool **make_flags(struct timeline *timeline, struct arena *arena)
{
	const struct plan *plan = timeline->plan;
	bool **wrong = arena_array(arena, plan->line_count, sizeof *wrong);
	for (size_t type = 0; wrong != NULL && type < plan->line_count; type++) {
		wrong[type] = arena_array(arena, plan->lines[type].region_count, sizeof **wrong);
		if (wrong[type] == NULL)
			return NULL;
	}
	return wrong;
}

bool layout_holds(struct timeline *timeline, struct line_faults *faults, struct diagnostics *diagnostics)
{
	timeline->has_holds = has_holds(timeline->plan);
	if (!timeline->has_holds)
		return true;
	timeline->hold_mask = arena_array(timeline->arena, timeline->cell_count, sizeof *timeline->hold_mask);
	timeline->hold_value = arena_array(timeline->arena, timeline->cell_count, sizeof *timeline->hold_value);
	bool **wrong = make_flags(timeline, timeline->arena);
	if (timeline->hold_mask == NULL || timeline->hold_value == NULL || wrong == NULL) {
		diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){timeline->plan->source, 0, 0}, "memory is out");
		return false;
	}
	bool good = true;
	for (uint32_t line = 0; line < timeline->line_count; line++)
		good = hold_line(timeline, faults, line, wrong) && good;
	return good;
}
