// Pins the state of every cell: each region is divided into runs of cells whose states have equal steps, each block of lines into parts
// in which every run begins with an expression of the row, and each run is held to what that tells. Greedy, in linear time.
#include <string.h>

#include "base/arena.h"
#include "base/diagnostics.h"
#include "base/text.h"
#include "proof/lift_grid.h"

// Cells of a line, within a region, whose states have one step.
struct run {
	size_t region;                 // of the content
	uint32_t first_cell, cells;    // in the line
	int64_t step;
	struct sequence rows;          // of its first state
};

struct runs {
	struct run *list;              // [longest line]
	size_t count;
};

static uint32_t state_at(const struct lifting *lifting, uint32_t line, uint32_t cell)
{
	return lifting->lift->states[lifting->lines[line].first_cell + cell] & low_bits(lifting->wiring.line.state_bits);
}

static int64_t step_at(const struct lifting *lifting, uint32_t line, uint32_t cell)
{
	return (int64_t)state_at(lifting, line, cell + 1) - state_at(lifting, line, cell);
}

// How many cells from a cell to `end` have one step. A lone step before cells that count up is none.
static uint32_t run_cells(const struct lifting *lifting, uint32_t line, uint32_t cell, uint32_t end)
{
	if (cell + 1 == end)
		return 1;
	const int64_t step = step_at(lifting, line, cell);
	uint32_t last = cell + 1;
	if (step != 1 && last + 1 < end && step_at(lifting, line, last) == 1)
		return 1;
	while (last + 1 < end && step_at(lifting, line, last) == step)
		last++;
	return last + 1 - cell;
}

static void list_runs(const struct lifting *lifting, uint32_t line, struct runs *runs)
{
	const struct content *content = &lifting->contents[lifting->lines[line].content];
	runs->count = 0;
	for (size_t index = 0; index < content->region_count; index++) {
		const uint32_t end = content->regions[index].first_cell + content->regions[index].cells;
		for (uint32_t cell = content->regions[index].first_cell; cell < end;) {
			struct run *run = &runs->list[runs->count++];
			*run = (struct run){.region = index, .first_cell = cell, .cells = run_cells(lifting, line, cell, end)};
			run->step = run->cells > 1 ? step_at(lifting, line, cell) : 0;
			run->rows = sequence_start(0);
			sequence_add(&run->rows, state_at(lifting, line, cell));
			cell += run->cells;
		}
	}
}

// Whether a line keeps to the runs. Of a line-frame machine, it must have the same states.
static bool keeps_to(const struct lifting *lifting, uint32_t line, const struct runs *runs)
{
	for (size_t index = 0; index < runs->count; index++) {
		const struct run *run = &runs->list[index];
		const uint32_t state = state_at(lifting, line, run->first_cell);
		if (!sequence_takes(&run->rows, state) || (lifting->ends != NULL && state != run->rows.first))
			return false;
		for (uint32_t cell = 1; cell < run->cells; cell++)
			if (step_at(lifting, line, run->first_cell + cell - 1) != run->step)
				return false;
	}
	return true;
}

static bool pin_run(struct lifting *lifting, const struct run *run, const struct lift_field *field, struct lift_region *region)
{
	struct arena *arena = lifting->lift->arena;
	struct sequence columns = sequence_start(0);
	struct text text = {0};
	for (uint32_t cell = 0; cell < run->cells && cell < 2; cell++)
		sequence_add(&columns, cell * run->step);
	sequences_put(&text, &run->rows, "row", &columns, "col", 0);
	region->holds = arena_array(arena, 1, sizeof *region->holds);
	const char *expression = text.failed ? NULL : arena_copy(arena, text_string(&text), text.length);
	text_release(&text);
	if (region->holds == NULL || expression == NULL)
		return lift_memory(lifting);
	region->holds[region->hold_count++] = (struct lift_hold){field->name, expression};
	return true;
}

// Stretched cells are the first of a region, and so they are of its runs.
static struct lift_region region_of(const struct content *content, const struct run *run)
{
	const struct lift_region *from = &content->regions[run->region];
	const uint32_t passed = run->first_cell - from->first_cell;
	uint32_t stretched = from->stretched > passed ? from->stretched - passed : 0;
	if (stretched > run->cells)
		stretched = run->cells;
	return (struct lift_region){.first_cell = run->first_cell, .cells = run->cells, .stretched = stretched, .asserted = from->asserted};
}

static bool pin_lines(struct lifting *lifting, uint32_t first, uint32_t lines, const struct runs *runs, const struct lift_field *field)
{
	const uint32_t content = lifting->lines[first].content;
	struct lift_region *regions = arena_array(lifting->lift->arena, runs->count, sizeof *regions);
	if (regions == NULL)
		return lift_memory(lifting);
	if (runs->count > UINT16_MAX) {
		diagnose(lifting->diagnostics, RULE_LIFT_SIZE, lifting->place,
		         "the states of a line are pinned by %zu regions, wanted at most %d", runs->count, UINT16_MAX);
		return false;
	}
	for (size_t index = 0; index < runs->count; index++) {
		regions[index] = region_of(&lifting->contents[content], &runs->list[index]);
		if (!pin_run(lifting, &runs->list[index], field, &regions[index]))
			return false;
	}
	return lift_add_block(lifting, content, lines, regions, runs->count);
}

// The field of the whole state: the board's, if it has one, or one that is added.
static bool find_field(struct lifting *lifting, struct lift_field *field)
{
	const struct machine_plan *machine = &lifting->plan->machine;
	const unsigned high = lifting->wiring.line.state_bits - 1;
	struct lift *lift = lifting->lift;
	unsigned number = 1;
	*field = (struct lift_field){"pinned", high, 0};
	for (size_t index = 0; index < machine->field_count; index++)
		if (machine->fields[index].high == high && machine->fields[index].low == 0) {
			field->name = machine->fields[index].name;
			return true;
		}
	for (size_t index = 0; index < machine->field_count; index++)
		if (strcmp(machine->fields[index].name, field->name) == 0) {
			field->name = arena_format(lift->arena, "pinned_%u", ++number);
			if (field->name == NULL)
				return lift_memory(lifting);
			index = SIZE_MAX; // and once more from the first
		}
	lift->fields = arena_array(lift->arena, 1, sizeof *lift->fields);
	if (lift->fields == NULL)
		return lift_memory(lifting);
	lift->fields[lift->field_count++] = *field;
	return true;
}

static bool pin_run_of_lines(struct lifting *lifting, uint32_t first, uint32_t end, struct runs *runs, const struct lift_field *field)
{
	while (first < end) {
		uint32_t next = first + 1;
		list_runs(lifting, first, runs);
		while (next < end && keeps_to(lifting, next, runs)) {
			for (size_t index = 0; index < runs->count; index++)
				sequence_add(&runs->list[index].rows, state_at(lifting, next, runs->list[index].first_cell));
			next++;
		}
		if (!pin_lines(lifting, first, next - first, runs, field))
			return false;
		first = next;
	}
	return true;
}

// Whether a plan's states might be others than the images', were they not pinned: not those of counters, nor those of a line stage
// that just numbers the cells.
static bool has_choice(const struct lifting *lifting)
{
	if (lifting->wiring.line.advance == ADVANCE_COUNT)
		return false;
	for (size_t signal = 0; signal < lifting->plan->signal_count; signal++)
		if (!signal_is_data(&lifting->plan->signals[signal]))
			return true;
	return lifting->wiring.form == FORM_LOOP || !lift_numbers_cells(lifting);
}

bool lift_pin(struct lifting *lifting)
{
	const struct lift *lift = lifting->lift;
	struct lift_field field;
	struct runs runs = {0};
	uint32_t longest = 0;
	if (!has_choice(lifting))
		return lift_hold(lifting);
	for (uint32_t line = 0; line < lift->line_count; line++)
		longest = lifting->lines[line].cells > longest ? lifting->lines[line].cells : longest;
	runs.list = arena_array(lifting->arena, longest, sizeof *runs.list);
	if (runs.list == NULL)
		return lift_memory(lifting);
	if (!find_field(lifting, &field))
		return false;
	for (uint32_t line = 0, lines; line < lift->line_count; line += lines) {
		lines = lift_run(lifting, line);
		if (!pin_run_of_lines(lifting, line, line + lines, &runs, &field))
			return false;
	}
	return true;
}
