// The line stage's states: a timeline in which every line type of the frame stands once, with the kind's bits above the
// state held to the type's code, and the same state in every type's first cell.
#include <string.h>

#include "base/arena.h"
#include "table/attempt.h"
#include "table/closing.h"
#include "table/guard.h"
#include "table/line_frame.h"
#include "table/solve.h"

#define WORK_TO_FIND ((uint64_t)1 << 27)  // cells and states of all attempts until some first state does
#define WORK_TO_QUIET ((uint64_t)1 << 24) // and of those that only look for a quieter one

struct types {
	struct table *table;
	const struct plan *plan;
	struct arena *arena;
	struct timeline timeline; // each line type of the frame once
	uint64_t *pins;           // [period]: what its cells show
	uint32_t *states;         // [period]: of the current attempt, with the kind
	uint32_t *preferred;      // [period]: states to be kept where that is possible, with the kind, NO_STATE: none; NULL: of no cell
	uint32_t *first_masks;    // [timeline.line_count]: what the plan holds in the first cells
	uint32_t *first_values;
	uint32_t state_mask;      // of the state, without the kind
	uint32_t kind_mask;
	uint32_t mask, value;     // what any first cell holds of the state
};

static uint32_t kind_bits_of(const struct types *types, uint32_t line)
{
	return types->kind_mask == 0 ? 0 : types->timeline.lines[line].type << types->plan->machine.line.state_bits;
}

static bool allocate(struct types *types)
{
	const uint32_t period = types->table->period;
	struct timeline *timeline = &types->timeline;
	for (size_t type = 0; type < types->plan->line_count; type++)
		timeline->line_count += types->table->line_of_type[type] != NO_LINE;
	timeline->lines = arena_array(types->arena, timeline->line_count, sizeof *timeline->lines);
	timeline->hold_mask = arena_array(types->arena, period, sizeof *timeline->hold_mask);
	timeline->hold_value = arena_array(types->arena, period, sizeof *timeline->hold_value);
	types->pins = arena_array(types->arena, period, sizeof *types->pins);
	types->states = arena_array(types->arena, period, sizeof *types->states);
	types->first_masks = arena_array(types->arena, timeline->line_count, sizeof *types->first_masks);
	types->first_values = arena_array(types->arena, timeline->line_count, sizeof *types->first_values);
	return timeline->lines != NULL && timeline->hold_mask != NULL && timeline->hold_value != NULL && types->pins != NULL &&
	       types->states != NULL && types->first_masks != NULL && types->first_values != NULL;
}

// Copies a line's cells from the frame, and holds them to the line's kind. (Holds speak of cells and columns only, so that
// they are the same in all lines of a type.)
static void lay_type(struct types *types, uint32_t line)
{
	const struct timeline *frame = types->table->timeline;
	struct timeline *timeline = &types->timeline;
	const struct frame_line *in_frame = &frame->lines[types->table->line_of_type[timeline->lines[line].type]];
	const uint32_t first = timeline->lines[line].first_cell, kind = kind_bits_of(types, line);
	for (uint32_t cell = 0; cell < frame->types[in_frame->type].cells; cell++) {
		const uint32_t at = in_frame->first_cell + cell;
		types->pins[first + cell] = types->table->pins[at];
		timeline->hold_mask[first + cell] = types->kind_mask | (frame->has_holds ? frame->hold_mask[at] : 0);
		timeline->hold_value[first + cell] = kind | (frame->has_holds ? frame->hold_value[at] : 0);
	}
	types->first_masks[line] = timeline->hold_mask[first];
	types->first_values[line] = timeline->hold_value[first];
}

// What cells of the first line of each type are to keep.
static bool lay_preferred(struct types *types)
{
	const struct preference *preference = types->table->preference;
	const struct timeline *timeline = &types->timeline;
	if (preference == NULL)
		return true;
	types->preferred = arena_array(types->arena, types->table->period, sizeof *types->preferred);
	for (uint32_t line = 0; types->preferred != NULL && line < timeline->line_count; line++) {
		const uint32_t first = timeline->lines[line].first_cell;
		for (uint32_t cell = 0; cell < timeline->types[timeline->lines[line].type].cells; cell++) {
			const uint32_t state = preference->state_of_cell[line_row_cell(types->table, first + cell)];
			types->preferred[first + cell] = state == NO_STATE ? NO_STATE : state | kind_bits_of(types, line);
		}
	}
	return types->preferred != NULL;
}

// A counter needs no kinds: its states are only compared with what cells ask.
static bool create_types(struct types *types, struct table *table, struct arena *arena)
{
	const struct wiring *wiring = &table->wiring;
	const uint32_t addresses = (uint32_t)1 << wiring->line.address_bits;
	*types = (struct types){.table = table, .plan = table->timeline->plan, .arena = arena};
	types->state_mask = ((uint32_t)1 << wiring->line.state_bits) - 1;
	types->kind_mask = wiring->line.advance == ADVANCE_COUNT ? 0 : (addresses - 1) & ~types->state_mask;
	types->timeline = (struct timeline){.plan = types->plan, .types = table->timeline->types, .cell_count = table->period,
	                                    .has_holds = true};
	if (!allocate(types))
		return false;
	for (uint32_t type = 0, line = 0; type < types->plan->line_count; type++) {
		if (table->line_of_type[type] == NO_LINE)
			continue;
		types->timeline.lines[line] = (struct frame_line){.type = type, .first_cell = table->first_row[type]};
		lay_type(types, line++);
	}
	return lay_preferred(types);
}

// Holds all first cells to one state, or as the plan has it if `state` is NO_STATE.
static void hold_first(struct types *types, uint32_t state)
{
	for (uint32_t line = 0; line < types->timeline.line_count; line++) {
		const uint32_t cell = types->timeline.lines[line].first_cell;
		const bool held = state != NO_STATE;
		types->timeline.hold_mask[cell] = held ? types->state_mask | types->kind_mask : types->first_masks[line];
		types->timeline.hold_value[cell] = held ? state | kind_bits_of(types, line) : types->first_values[line];
	}
}

static bool constrain(struct types *types, struct arena *arena, struct constraints *constraints)
{
	unsigned bits = types->plan->machine.line.state_bits;
	if (types->kind_mask != 0)
		bits = types->table->wiring.line.address_bits;
	return constraints_create(constraints, arena, &types->timeline, types->pins, types->table->period, bits);
}

// Keeps a wrong bit before the end of any line from going unseen.
static bool guard_lines(struct types *types, const struct constraints *constraints, struct arena *arena)
{
	const struct timeline *timeline = &types->timeline;
	bool *used = guard_states(constraints, arena, types->states);
	for (uint32_t line = 0; used != NULL && line < timeline->line_count; line++) {
		const uint32_t first = timeline->lines[line].first_cell, end = first + timeline->types[timeline->lines[line].type].cells;
		guard_last_state(constraints, used, first, end - 1, types->state_mask, types->states);
	}
	return used != NULL;
}

// Looks for states with all first cells in one state, or free of each other for NO_STATE. *jumps is how many edges are not
// quiet. False with faults if there are none.
static bool attempt(struct types *types, uint32_t first, uint64_t *jumps, struct faults *faults)
{
	struct arena *arena = arena_create();
	struct constraints constraints;
	struct solver solver;
	faults->count = 0;
	hold_first(types, first);
	bool found = arena != NULL && constrain(types, arena, &constraints) &&
	             solver_create(&solver, arena, &constraints, types->states);
	if (!found)
		faults->memory_out = true;
	else
		solver.assignment.preferred = types->preferred;
	found = found && attempt_start(&solver, false, 0, faults);
	if (found && (!closing_count(&solver.assignment, arena, jumps) || !guard_lines(types, &constraints, arena)))
		found = faults_memory(faults);
	arena_destroy(arena);
	return found;
}

static void keep(struct types *types)
{
	for (uint32_t row = 0; row < types->table->period; row++)
		types->table->state_of_cell[row] = types->states[row] & types->state_mask;
}

// The states that first cells may begin in.
struct candidates {
	struct code_space codes;
	uint64_t listed;   // decoded signals with listed codes
	uint64_t levels;   // of them, in all first cells
	uint8_t *taken;    // [2^state_bits]: some other cell holds every bit of this state
	uint32_t varied;   // state bits that may make one candidate better than another
};

static bool find_candidates(struct types *types, const struct constraints *constraints, struct candidates *candidates)
{
	const struct timeline *timeline = &types->timeline;
	*candidates = (struct candidates){.varied = constraints->decoder_mask, .listed = constraints->field_signals};
	candidates->taken = arena_alloc(types->arena, (size_t)types->state_mask + 1);
	if (candidates->taken == NULL || !code_space_create(&candidates->codes, types->arena, constraints))
		return false;
	code_space_fill(&candidates->codes, NULL, 0);
	for (size_t signal = 0; signal < types->plan->signal_count; signal++)
		if (types->plan->signals[signal].auto_codes)
			candidates->listed &= ~((uint64_t)1 << signal);
	candidates->levels = types->pins[0] & candidates->listed;
	for (uint32_t line = 0; line < timeline->line_count; line++) {
		const uint32_t first = timeline->lines[line].first_cell, cells = timeline->types[timeline->lines[line].type].cells;
		for (uint32_t cell = first + 1; cell < first + cells; cell++) {
			const uint32_t mask = timeline->hold_mask[cell] & types->state_mask;
			if (mask == types->state_mask)
				candidates->taken[timeline->hold_value[cell] & types->state_mask] = 1;
			else
				candidates->varied |= mask;
		}
	}
	return true;
}

static bool suits(const struct types *types, const struct candidates *candidates, uint32_t state)
{
	const uint64_t levels = candidates->codes.levels[code_of_state(&candidates->codes, state)];
	return (state & types->mask) == types->value && ((levels ^ candidates->levels) & candidates->listed) == 0 &&
	       candidates->taken[state] == 0;
}

// The lowest candidate whose varied bits are `varied`; NO_STATE if there is none.
static uint32_t lowest_candidate(const struct types *types, const struct candidates *candidates, uint32_t varied)
{
	const uint32_t free = types->state_mask & ~candidates->varied;
	uint32_t subset = 0;
	if (((varied ^ types->value) & types->mask & candidates->varied) != 0)
		return NO_STATE;
	do {
		if (suits(types, candidates, varied | subset))
			return varied | subset;
		subset = next_subset(subset, free);
	} while (subset != 0);
	return NO_STATE;
}

// The best of the attempts so far.
struct best {
	bool found;
	uint64_t jumps;
	uint64_t work;
};

// Tries one first state. False when no further need be tried.
static bool try_first(struct types *types, uint32_t state, struct best *best, struct faults *faults)
{
	struct faults failed = {.count = 0};
	uint64_t jumps;
	best->work += types->table->period + types->state_mask + types->kind_mask + 1;
	if (attempt(types, state, &jumps, &failed) && (!best->found || jumps < best->jumps)) {
		best->found = true;
		best->jumps = jumps;
		keep(types);
	}
	faults->memory_out |= failed.memory_out;
	if (best->found)
		return !failed.memory_out && best->jumps > 0 && best->work < WORK_TO_QUIET;
	return !failed.memory_out && best->work < WORK_TO_FIND;
}

static const char *line_name(const struct types *types, uint32_t line)
{
	return types->plan->lines[types->timeline.lines[line].type].name;
}

static struct place line_place(const struct types *types, uint32_t line)
{
	return types->plan->lines[types->timeline.lines[line].type].place;
}

static bool report_no_start(const struct types *types, struct diagnostics *diagnostics)
{
	const uint32_t last = types->timeline.line_count - 1;
	diagnose(diagnostics, RULE_LINE_START, types->plan->machine.line.place,
	         "found no state that the first cells of all line types, from \"%s\" to \"%s\", can have together", line_name(types, 0),
	         line_name(types, last));
	diagnose_hint(diagnostics,
	              "every line begins in one state: leave some state free of holds in all line types, or give the state another bit");
	return false;
}

// Reports faults with the first cells as the plan has them.
static bool report_faults(struct types *types, const struct faults *faults, struct diagnostics *diagnostics)
{
	hold_first(types, NO_STATE);
	faults_report(faults, &types->timeline, types->pins, diagnostics);
	return false;
}

// The state that first cells had before, if that will do. False if not, or if memory is out, which `faults` says.
static bool keep_first(struct types *types, const struct candidates *candidates, struct faults *faults)
{
	struct faults ignored = {.count = 0};
	uint64_t jumps;
	if (types->preferred == NULL || types->preferred[0] == NO_STATE)
		return false;
	const uint32_t state = types->preferred[0] & types->state_mask;
	const bool kept = suits(types, candidates, state) && attempt(types, state, &jumps, &ignored);
	faults->memory_out = faults->memory_out || ignored.memory_out;
	if (kept)
		keep(types);
	return kept;
}

// Without a start: 0, which a cleared latch holds, where no other state is quieter; else the lowest of the quietest.
static bool search_first(struct types *types, struct diagnostics *diagnostics)
{
	struct constraints constraints;
	struct candidates candidates;
	struct faults faults = {.count = 0};
	struct best best = {.found = false};
	uint64_t jumps;
	bool further = true;
	if (!constrain(types, types->arena, &constraints) || !find_candidates(types, &constraints, &candidates)) {
		faults.memory_out = true;
		return report_faults(types, &faults, diagnostics);
	}
	if (keep_first(types, &candidates, &faults) || faults.memory_out)
		return !faults.memory_out || report_faults(types, &faults, diagnostics);
	if (suits(types, &candidates, 0))
		further = try_first(types, 0, &best, &faults);
	// What fails with first cells free of each other fails for every state.
	if (!best.found && !faults.memory_out && !attempt(types, NO_STATE, &jumps, &faults))
		return report_faults(types, &faults, diagnostics);
	uint32_t varied = 0;
	do {
		const uint32_t state = further ? lowest_candidate(types, &candidates, varied) : NO_STATE;
		if (state != NO_STATE && state != 0)
			further = try_first(types, state, &best, &faults);
		varied = next_subset(varied, candidates.varied);
	} while (further && varied != 0);
	if (faults.memory_out)
		return report_faults(types, &faults, diagnostics);
	return best.found || report_no_start(types, diagnostics);
}

// Reports the first decoded signal that is not the same in the first cells of two line types.
static bool report_signal(const struct types *types, uint32_t line, uint64_t differ, struct diagnostics *diagnostics)
{
	size_t signal = 0;
	while ((differ >> signal & 1) == 0)
		signal++;
	const bool asserted = types->pins[0] >> signal & 1;
	diagnose(diagnostics, RULE_LINE_START, line_place(types, line),
	         "every line begins in the same state, but \"%s\", which is decoded from the state, is %s in the first cell of \"%s\""
	         " and %s in that of \"%s\"",
	         types->plan->signals[signal].name, asserted ? "asserted" : "not asserted", line_name(types, 0),
	         asserted ? "not asserted" : "asserted", line_name(types, line));
	diagnose_also(diagnostics, line_place(types, 0), "line type \"%s\" is here", line_name(types, 0));
	diagnose_hint(diagnostics, "start the lines elsewhere, say in the front porch, so that they begin alike");
	return false;
}

static struct place hold_place(const struct types *types, uint32_t line)
{
	const struct region *region = timeline_region(&types->timeline, types->timeline.lines[line].first_cell);
	return region->hold_count > 0 ? region->holds[0].place : region->place;
}

// Reports a line type whose first cell holds a bit otherwise than an earlier one's.
static bool report_hold(const struct types *types, uint32_t line, struct diagnostics *diagnostics)
{
	const uint32_t mask = types->first_masks[line] & types->state_mask;
	uint32_t other = 0;
	while (((types->first_values[other] ^ types->first_values[line]) & types->first_masks[other] & mask) == 0)
		other++;
	diagnose(diagnostics, RULE_LINE_START, hold_place(types, line),
	         "every line begins in the same state, but the holds of the first cells of \"%s\" and \"%s\" contradict each other",
	         line_name(types, other), line_name(types, line));
	diagnose_also(diagnostics, hold_place(types, other), "the first cell of \"%s\" is held here", line_name(types, other));
	diagnose_hint(diagnostics, "start the lines elsewhere, say in the front porch, where nothing is held");
	return false;
}

// Finds what the first cells of all types hold together. False after reporting that they contradict each other.
static bool merge_first(struct types *types, struct diagnostics *diagnostics)
{
	const uint32_t lines = types->timeline.line_count;
	uint64_t decoded = 0;
	for (size_t signal = 0; signal < types->plan->signal_count; signal++)
		if (!signal_is_data(&types->plan->signals[signal]))
			decoded |= (uint64_t)1 << signal;
	for (uint32_t line = 0; line < lines; line++) {
		const uint64_t differ = (types->pins[types->timeline.lines[line].first_cell] ^ types->pins[0]) & decoded;
		const uint32_t mask = types->first_masks[line] & types->state_mask;
		const uint32_t value = types->first_values[line] & types->state_mask;
		if (differ != 0)
			return report_signal(types, line, differ, diagnostics);
		if (((types->value ^ value) & types->mask & mask) != 0)
			return report_hold(types, line, diagnostics);
		types->mask |= mask;
		types->value |= value;
	}
	return true;
}

// Reports the line types whose first cell does not suit the plan's start.
static bool check_start(struct types *types, struct diagnostics *diagnostics)
{
	const uint32_t start = types->plan->machine.start;
	struct faults faults = {.count = 0};
	struct constraints constraints;
	struct candidates candidates;
	if (!constrain(types, types->arena, &constraints) || !find_candidates(types, &constraints, &candidates))
		faults.memory_out = true;
	for (uint32_t line = 0; line < types->timeline.line_count && !faults.memory_out; line++) {
		const uint32_t cell = types->timeline.lines[line].first_cell;
		const uint64_t levels = candidates.codes.levels[code_of_state(&candidates.codes, start)];
		struct fault fault = fault_at(RULE_START_CONFLICT, cell);
		fault.state = start;
		if (((start ^ types->first_values[line]) & types->first_masks[line] & types->state_mask) != 0 ||
		    ((levels ^ types->pins[cell]) & candidates.listed) != 0)
			faults_add(&faults, fault);
	}
	return faults.count == 0 && !faults.memory_out ? true : report_faults(types, &faults, diagnostics);
}

static bool solve_with_start(struct types *types, struct diagnostics *diagnostics)
{
	struct faults faults = {.count = 0};
	uint64_t jumps;
	if (!check_start(types, diagnostics) || !merge_first(types, diagnostics))
		return false;
	if (!attempt(types, types->plan->machine.start, &jumps, &faults))
		return report_faults(types, &faults, diagnostics);
	keep(types);
	return true;
}

// Cell i of each line type has state i.
static void number_cells(struct table *table)
{
	for (size_t type = 0; type < table->timeline->plan->line_count; type++)
		for (uint32_t row = table->first_row[type]; row < table->first_row[type + 1]; row++)
			table->state_of_cell[row] = row - table->first_row[type];
}

static bool check_counted(struct types *types, struct diagnostics *diagnostics)
{
	struct faults faults = {.count = 0};
	struct constraints constraints;
	if (!constrain(types, types->arena, &constraints))
		faults.memory_out = true;
	else if (count_states(&constraints, types->arena, types->table->state_of_cell, &faults))
		return true;
	return report_faults(types, &faults, diagnostics);
}

static bool has_field_signals(const struct plan *plan)
{
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (!signal_is_data(&plan->signals[signal]))
			return true;
	return false;
}

bool line_states_choose(struct table *table, struct arena *scratch, struct diagnostics *diagnostics)
{
	const struct machine_plan *machine = &table->timeline->plan->machine;
	const bool counts = table->wiring.line.advance == ADVANCE_COUNT;
	const bool starts = machine->has_start && machine->start != 0;
	struct types types;
	number_cells(table);
	if (!starts && !table->timeline->has_holds && !has_field_signals(table->timeline->plan))
		return true;
	if (!create_types(&types, table, scratch)) {
		diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){table->timeline->plan->source, 0, 0}, "memory is out");
		return false;
	}
	if (counts)
		return check_counted(&types, diagnostics);
	if (machine->has_start)
		return solve_with_start(&types, diagnostics);
	return merge_first(&types, diagnostics) && search_first(&types, diagnostics);
}
