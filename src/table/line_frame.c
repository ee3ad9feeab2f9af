#include "table/line_frame.h"

#include "base/arena.h"
#include "table/constraints.h"

static bool report_memory(const struct table *table, struct diagnostics *diagnostics)
{
	diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){table->timeline->plan->source, 0, 0}, "memory is out");
	return false;
}

static bool list_types(struct table *table)
{
	const struct timeline *timeline = table->timeline;
	const size_t types = timeline->plan->line_count;
	table->line_of_type = arena_array(table->arena, types, sizeof *table->line_of_type);
	table->first_row = arena_array(table->arena, types + 1, sizeof *table->first_row);
	if (table->line_of_type == NULL || table->first_row == NULL)
		return false;
	for (size_t type = 0; type < types; type++)
		table->line_of_type[type] = NO_LINE;
	for (uint32_t line = timeline->line_count; line-- > 0;)
		table->line_of_type[timeline->lines[line].type] = line;
	for (size_t type = 0; type < types; type++)
		table->first_row[type + 1] =
			table->first_row[type] + (table->line_of_type[type] != NO_LINE ? timeline->types[type].cells : 0);
	table->period = table->first_row[types];
	table->state_of_cell = arena_array(table->arena, table->period, sizeof *table->state_of_cell);
	return table->state_of_cell != NULL;
}

// Says how many state bits a stage would need, if it may have so many.
static void hint_bits(const struct table *table, enum stage stage, uint32_t needed, struct diagnostics *diagnostics)
{
	const unsigned bits = bits_for(needed);
	if (bits + (stage == STAGE_LINE ? table->wiring.kind_bits : 0) <= LIMIT_STATE_BITS)
		diagnose_hint(diagnostics, "%s: { state: %u bits } would do", stage_name(stage), bits);
}

static uint32_t longest_type(const struct table *table)
{
	const struct timeline *timeline = table->timeline;
	uint32_t longest = timeline->lines[0].type;
	for (uint32_t type = 0; type < timeline->plan->line_count; type++)
		if (table->line_of_type[type] != NO_LINE && timeline->types[type].cells > timeline->types[longest].cells)
			longest = type;
	return longest;
}

// One state more than cells is needed where the counter is cleared in a state of its own.
static uint32_t states_needed(const struct stage_wiring *wiring, uint32_t count)
{
	return count + clears_at_once(wiring);
}

static const char *plural(uint32_t count)
{
	return count == 1 ? "" : "s";
}

static const char *passing_words(const struct stage_wiring *wiring)
{
	return clears_at_once(wiring) ? ", one of them to clear the counter in" : "";
}

static bool check_line_bits(const struct table *table, struct diagnostics *diagnostics)
{
	const struct plan *plan = table->timeline->plan;
	const struct stage_wiring *wiring = &table->wiring.line;
	const uint32_t type = longest_type(table), states = (uint32_t)1 << wiring->state_bits;
	const uint32_t needed = states_needed(wiring, table->timeline->types[type].cells);
	if (needed <= states)
		return true;
	if (wiring->advance == ADVANCE_TABLE)
		diagnose(diagnostics, RULE_STATES_SHORT, plan->machine.line.place,
		         "line type \"%s\" needs %u states, one for each cell, but %u bit%s of state of the line stage have %u",
		         plan->lines[type].name, needed, wiring->state_bits, plural(wiring->state_bits), states);
	else
		diagnose(diagnostics, RULE_COUNTER_SHORT, plan->machine.line.place,
		         "line type \"%s\" needs %u states%s, but the line stage's counter of %u bit%s has %u", plan->lines[type].name,
		         needed, passing_words(wiring), wiring->state_bits, plural(wiring->state_bits), states);
	hint_bits(table, STAGE_LINE, needed, diagnostics);
	return false;
}

static bool check_frame_bits(const struct table *table, struct diagnostics *diagnostics)
{
	const struct machine_plan *machine = &table->timeline->plan->machine;
	const struct stage_wiring *wiring = &table->wiring.frame;
	const uint32_t lines = table->timeline->line_count, states = (uint32_t)1 << wiring->state_bits;
	const uint32_t needed = states_needed(wiring, lines);
	if (needed <= states)
		return true;
	if (wiring->advance == ADVANCE_TABLE)
		diagnose(diagnostics, RULE_STATES_SHORT, machine->frame.place,
		         "the frame has %u lines, each of which needs a state, but %u bit%s of state of the frame stage have %u", lines,
		         wiring->state_bits, plural(wiring->state_bits), states);
	else
		diagnose(diagnostics, RULE_COUNTER_SHORT, machine->frame.place,
		         "the frame has %u lines and needs %u states%s, but the frame stage's counter of %u bit%s has %u", lines, needed,
		         passing_words(wiring), wiring->state_bits, plural(wiring->state_bits), states);
	hint_bits(table, STAGE_FRAME, needed, diagnostics);
	return false;
}

// The counter passes through the state after a line's last under the kind of the line that follows, so that this state must
// be no cell of any line.
static bool check_lengths(const struct table *table, struct diagnostics *diagnostics)
{
	const struct timeline *timeline = table->timeline;
	const struct plan *plan = timeline->plan;
	const uint32_t first = timeline->lines[0].type;
	for (uint32_t line = 0; line < timeline->line_count && clears_at_once(&table->wiring.line); line++) {
		const uint32_t type = timeline->lines[line].type;
		if (timeline->types[type].cells == timeline->types[first].cells)
			continue;
		diagnose(diagnostics, RULE_LINES_DIFFER, plan->lines[type].place,
		         "with clear: async in the line stage all line types want as many cells, but \"%s\" has %u, and \"%s\" has %u",
		         plan->lines[first].name, timeline->types[first].cells, plan->lines[type].name, timeline->types[type].cells);
		diagnose_also(diagnostics, plan->lines[first].place, "line type \"%s\" is here", plan->lines[first].name);
		diagnose_hint(diagnostics, "with clear: sync they may differ");
		return false;
	}
	return true;
}

// A latched step that ends a line of one cell comes from the line before. Without it the machine would stay in the line, unless
// all lines have one cell, so that every row holds a step.
static bool check_single_cells(const struct table *table, struct diagnostics *diagnostics)
{
	const struct timeline *timeline = table->timeline;
	bool good = true;
	if (table->wiring.line.outputs == OUTPUTS_DIRECT || timeline->types[longest_type(table)].cells == 1)
		return true;
	for (size_t type = 0; type < timeline->plan->line_count; type++) {
		if (table->line_of_type[type] == NO_LINE || timeline->types[type].cells > 1)
			continue;
		diagnose(diagnostics, RULE_LINE_SINGLE, timeline->plan->lines[type].place,
		         "line type \"%s\" has one cell, beside longer lines: the step that ends it would be latched in the line before, and a "
		         "machine that powers up in it without that never leaves it", timeline->plan->lines[type].name);
		diagnose_hint(diagnostics, "give it two cells, or give the line stage outputs: direct");
		good = false;
	}
	return good;
}

bool line_frame_fill(struct table *table, struct arena *scratch, struct diagnostics *diagnostics)
{
	bool fields_agree = false;
	if (!list_types(table))
		return report_memory(table, diagnostics);
	bool good = check_line_bits(table, diagnostics);
	good = check_frame_bits(table, diagnostics) && good;
	good = check_lengths(table, diagnostics) && good;
	good = check_single_cells(table, diagnostics) && good;
	const bool agrees = look_ahead_check(table, scratch, diagnostics, &fields_agree);
	return good && fields_agree && line_states_choose(table, scratch, diagnostics) && agrees;
}

// The line type that a row of the line stage belongs to: the last that begins at or before it. (One without rows begins where the
// next one does.)
static uint32_t type_of_row(const struct table *table, uint32_t index)
{
	uint32_t low = 0, high = (uint32_t)table->timeline->plan->line_count - 1;
	while (low < high) {
		const uint32_t middle = low + (high - low + 1) / 2;
		if (table->first_row[middle] <= index)
			low = middle;
		else
			high = middle - 1;
	}
	return low;
}

uint32_t line_row_cell(const struct table *table, uint32_t index)
{
	if (table->wiring.form == FORM_LOOP)
		return index;
	const uint32_t type = type_of_row(table, index);
	return table->timeline->lines[table->line_of_type[type]].first_cell + index - table->first_row[type];
}

uint32_t line_row_address(const struct table *table, uint32_t index)
{
	return table->state_of_cell[index] | type_of_row(table, index) << table->wiring.line.state_bits;
}

static uint64_t levels_at(const struct table *table, uint32_t cell, uint64_t data_signals)
{
	return levels_of(table->timeline->plan, table->pins[cell]) & data_signals;
}

// Whether step is asserted at its pin in the cell that a row of the line stage holds the levels of.
static bool holds_step(const struct table *table, uint32_t line, uint32_t cell)
{
	const struct timeline *timeline = table->timeline;
	const uint32_t cells = timeline->types[timeline->lines[line].type].cells;
	if (table->wiring.line.outputs == OUTPUTS_DIRECT)
		return cell + 1 == cells;
	if (cell + 1 < cells)
		return cell + 2 == cells;
	return timeline->types[timeline->lines[(line + 1) % timeline->line_count].type].cells == 1;
}

struct row line_stage_row(const struct table *table, uint32_t index)
{
	const struct timeline *timeline = table->timeline;
	const struct stage_wiring *wiring = &table->wiring.line;
	const uint32_t type = type_of_row(table, index), line = table->line_of_type[type];
	const uint32_t cell = index - table->first_row[type];
	const uint32_t shown = timeline->lines[line].first_cell + cell + (wiring->outputs == OUTPUTS_REGISTERED);
	const bool counts = wiring->advance == ADVANCE_COUNT, last = cell + 1 == timeline->types[type].cells;
	return (struct row){
		.next = counts ? 0 : table->state_of_cell[last ? 0 : index + 1],
		.clear = counts && wiring->clear == CLEAR_SYNC && last,
		.step = holds_step(table, line, cell),
		.levels = levels_at(table, shown % timeline->cell_count, wiring->data_signals),
	};
}

struct row frame_stage_row(const struct table *table, uint32_t index)
{
	const struct timeline *timeline = table->timeline;
	const struct stage_wiring *wiring = &table->wiring.frame;
	const uint32_t next = (index + 1) % timeline->line_count;
	const struct frame_line *shown = &timeline->lines[wiring->outputs == OUTPUTS_REGISTERED ? next : index];
	const bool counts = wiring->advance == ADVANCE_COUNT;
	return (struct row){
		.next = counts ? 0 : next,
		.kind = shown->type,
		.clear = counts && wiring->clear == CLEAR_SYNC && next == 0,
		.levels = levels_at(table, shown->first_cell, wiring->data_signals),
	};
}
