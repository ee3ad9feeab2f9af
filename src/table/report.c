#include "table/faults.h"

#include "base/arena.h"
#include "base/text.h"

// Faults in the words of someone at a bench. Texts are put together in the arena.
struct reporter {
	struct arena *arena;
	const struct timeline *timeline;
	const struct plan *plan;
	const uint64_t *pins;
	struct diagnostics *diagnostics;
};

static const char *or_unnamed(const char *words)
{
	return words != NULL ? words : "(memory is out)";
}

static bool has_line_types(const struct reporter *reporter)
{
	return reporter->plan->machine.form == FORM_LINE_FRAME;
}

static const char *cell_words(const struct reporter *reporter, uint32_t cell)
{
	const struct cell_place place = timeline_place(reporter->timeline, cell);
	if (has_line_types(reporter))
		return or_unnamed(arena_format(reporter->arena, "line type \"%s\", cell %u, region \"%s\"",
		                               timeline_line_name(reporter->timeline, cell), place.cell,
		                               timeline_region_name(reporter->timeline, cell)));
	return or_unnamed(arena_format(reporter->arena, "line %u (\"%s\"), cell %u, region \"%s\"", place.line,
	                               timeline_line_name(reporter->timeline, cell), place.cell,
	                               timeline_region_name(reporter->timeline, cell)));
}

static bool is_start(const struct reporter *reporter, uint32_t cell)
{
	const bool first = has_line_types(reporter) ? timeline_place(reporter->timeline, cell).cell == 0 : cell == 0;
	return first && reporter->plan->machine.has_start;
}

static uint32_t state_mask(const struct reporter *reporter)
{
	return ((uint32_t)1 << reporter->plan->machine.line.state_bits) - 1;
}

// What is held of the state; kind bits, which no plan speaks of, are left out.
static uint32_t mask_at(const struct reporter *reporter, uint32_t cell)
{
	return reporter->timeline->has_holds ? reporter->timeline->hold_mask[cell] & state_mask(reporter) : 0;
}

static uint32_t value_at(const struct reporter *reporter, uint32_t cell)
{
	return reporter->timeline->has_holds ? reporter->timeline->hold_value[cell] & state_mask(reporter) : 0;
}

// Where the plan says what holds a cell's state: its start, its region's first hold, or the region.
static struct place hold_place(const struct reporter *reporter, uint32_t cell)
{
	const struct region *region = timeline_region(reporter->timeline, cell);
	if (is_start(reporter, cell))
		return reporter->plan->machine.start_place;
	return region->hold_count > 0 ? region->holds[0].place : region->place;
}

// The place of the hold that has to do with a field: the first that shares bits with it. Otherwise as above.
static struct place field_place(const struct reporter *reporter, uint32_t cell, size_t field)
{
	const struct region *region = timeline_region(reporter->timeline, cell);
	const struct field *fields = reporter->plan->machine.fields;
	for (size_t index = 0; field != NO_SUBJECT && index < region->hold_count; index++)
		if ((field_mask(&fields[region->holds[index].field]) & field_mask(&fields[field])) != 0)
			return region->holds[index].place;
	return hold_place(reporter, cell);
}

static const char *field_name(const struct reporter *reporter, size_t field)
{
	return reporter->plan->machine.fields[field].name;
}

static void hint_bits(const struct reporter *reporter, uint32_t needed)
{
	if (bits_for(needed) <= LIMIT_STATE_BITS)
		diagnose_hint(reporter->diagnostics, "state: %u bits would do", bits_for(needed));
}

static void put_name(struct text *text, const char *name)
{
	text_printf(text, "%s\"%s\"", text->length > 0 ? ", " : "", name);
}

// The fields that a cell's region holds and those that have codes: what its states depend on.
static const char *limits_words(const struct reporter *reporter, uint32_t cell)
{
	const struct plan *plan = reporter->plan;
	const struct region *region = timeline_region(reporter->timeline, cell);
	struct text held = {0}, decoded = {0};
	for (size_t index = 0; index < region->hold_count; index++)
		put_name(&held, field_name(reporter, region->holds[index].field));
	for (size_t field = 0; field < plan->machine.field_count; field++)
		for (size_t signal = 0; signal < plan->signal_count; signal++)
			if (plan->signals[signal].origin == FROM_FIELD && plan->signals[signal].field == field) {
				put_name(&decoded, plan->machine.fields[field].name);
				break;
			}
	const bool both = held.length > 0 && decoded.length > 0;
	const char *words =
		arena_format(reporter->arena, "%s%s%s%s%s", held.length > 0 ? "the hold of " : "", text_string(&held),
	                 both ? " and " : "", decoded.length > 0 ? "the codes of " : "", text_string(&decoded));
	text_release(&held);
	text_release(&decoded);
	return or_unnamed(words);
}

static void report_states_short(const struct reporter *reporter, const struct fault *fault)
{
	if (fault->cell == NO_CELL) {
		diagnose(reporter->diagnostics, RULE_STATES_SHORT, reporter->plan->machine.place,
		         "the frame needs %u states, one for each cell, but %u bits of state have %u", fault->needed,
		         reporter->plan->machine.line.state_bits, fault->available);
		hint_bits(reporter, fault->needed);
		return;
	}
	diagnose(reporter->diagnostics, RULE_STATES_SHORT, hold_place(reporter, fault->cell),
	         "%s: %u states needed for this cell and those that compete with it, %u available under %s",
	         cell_words(reporter, fault->cell), fault->needed, fault->available, limits_words(reporter, fault->cell));
}

static void report_state_shared(const struct reporter *reporter, const struct fault *fault)
{
	diagnose(reporter->diagnostics, RULE_STATE_SHARED, hold_place(reporter, fault->cell),
	         "%s, and %s, are held to one state, 0x%0*X, but their rows differ", cell_words(reporter, fault->cell),
	         cell_words(reporter, fault->other), (int)(reporter->plan->machine.line.state_bits + 3) / 4,
	         fault->state & state_mask(reporter));
	diagnose_also(reporter->diagnostics, hold_place(reporter, fault->other), "the second of the two is held here");
	diagnose_hint(reporter->diagnostics, "hold a further field that tells the cells apart, or leave some bits free");
}

static bool lists_code(const struct signal *signal, uint32_t code)
{
	for (size_t index = 0; index < signal->code_count; index++)
		if (signal->codes[index] == code)
			return true;
	return false;
}

// True if a code of a field gives its signals with listed codes the levels that `asserted` says.
static bool code_agrees(const struct reporter *reporter, size_t field, uint32_t code, uint64_t asserted)
{
	for (size_t index = 0; index < reporter->plan->signal_count; index++) {
		const struct signal *signal = &reporter->plan->signals[index];
		if (signal->origin == FROM_FIELD && signal->field == field && !signal->auto_codes &&
		    lists_code(signal, code) != (bool)(asserted >> index & 1))
			return false;
	}
	return true;
}

// The first field that no code allowed by the cell's held bits serves; NO_SUBJECT if only fields together leave none.
static size_t culprit(const struct reporter *reporter, uint32_t cell, uint64_t asserted)
{
	const struct machine_plan *machine = &reporter->plan->machine;
	for (size_t index = 0; index < machine->field_count; index++) {
		const struct field *field = &machine->fields[index];
		const uint32_t held = (mask_at(reporter, cell) & field_mask(field)) >> field->low;
		const uint32_t value = field_value(field, value_at(reporter, cell));
		bool served = false;
		for (uint32_t code = 0; code <= field_mask(field) >> field->low && !served; code++)
			served = ((code ^ value) & held) == 0 && code_agrees(reporter, index, code, asserted);
		if (!served)
			return index;
	}
	return NO_SUBJECT;
}

// The field signals of a cell with their levels; of one field, or of all if field is NO_SUBJECT.
static const char *levels_words(const struct reporter *reporter, size_t field, uint64_t asserted)
{
	struct text text = {0};
	for (size_t index = 0; index < reporter->plan->signal_count; index++) {
		const struct signal *signal = &reporter->plan->signals[index];
		if (signal->origin != FROM_FIELD || (field != NO_SUBJECT && signal->field != field))
			continue;
		put_name(&text, signal->name);
		text_put(&text, asserted >> index & 1 ? " asserted" : " not asserted");
	}
	const char *words = arena_copy(reporter->arena, text_string(&text), text.length);
	text_release(&text);
	return or_unnamed(words);
}

static void also_codes(const struct reporter *reporter, size_t field)
{
	for (size_t index = 0; index < reporter->plan->signal_count; index++) {
		const struct signal *signal = &reporter->plan->signals[index];
		if (signal->origin != FROM_FIELD || signal->auto_codes || (field != NO_SUBJECT && signal->field != field))
			continue;
		diagnose_also(reporter->diagnostics, signal->place, "signal \"%s\" has its codes here", signal->name);
		return;
	}
}

static bool same_place(struct place left, struct place right)
{
	return left.source == right.source && left.line == right.line && left.column == right.column;
}

static bool stands_before(struct place left, struct place right)
{
	return left.line < right.line || (left.line == right.line && left.column < right.column);
}

// The region in which a hold is written: of those that have it, the nearest before it. NULL if the place is no hold's.
static const struct region *region_of_hold(const struct reporter *reporter, struct place place)
{
	const struct region *nearest = NULL;
	for (size_t line = 0; line < reporter->plan->line_count; line++)
		for (size_t index = 0; index < reporter->plan->lines[line].region_count; index++) {
			const struct region *region = &reporter->plan->lines[line].regions[index];
			bool has = false;
			for (size_t hold = 0; hold < region->hold_count; hold++)
				has |= same_place(region->holds[hold].place, place);
			if (has && stands_before(region->place, place) &&
			    (nearest == NULL || stands_before(nearest->place, region->place)))
				nearest = region;
		}
	return nearest;
}

// Points at the change of a region that asserts other signals than the one in which its hold is written.
static void also_change(const struct reporter *reporter, uint32_t cell, struct place hold)
{
	const struct region *region = timeline_region(reporter->timeline, cell);
	const struct region *written = region_of_hold(reporter, hold);
	if (written != NULL && !same_place(written->place, region->place) && written->assert_mask != region->assert_mask)
		diagnose_also(reporter->diagnostics, region->place, "what region \"%s\" asserts is changed here", region->name);
}

// Two cells hold one code. The start, too, holds one.
static void report_code_twice(const struct reporter *reporter, const struct fault *fault)
{
	const bool start = is_start(reporter, fault->cell);
	diagnose(reporter->diagnostics, RULE_CODE_CONFLICT,
	         start ? hold_place(reporter, fault->cell) : field_place(reporter, fault->cell, fault->field),
	         "%s, and %s, are held to one code, %u, of field \"%s\", but differ in its signals, which have codes: auto",
	         cell_words(reporter, fault->cell), cell_words(reporter, fault->other), fault->available,
	         field_name(reporter, fault->field));
	if (!start)
		also_change(reporter, fault->cell, field_place(reporter, fault->cell, fault->field));
	diagnose_also(reporter->diagnostics, field_place(reporter, fault->other, fault->field),
	              "the second of the two is held here");
	also_change(reporter, fault->other, field_place(reporter, fault->other, fault->field));
}

static void report_code_conflict(const struct reporter *reporter, const struct fault *fault)
{
	if (fault->other != NO_CELL) {
		report_code_twice(reporter, fault);
		return;
	}
	const uint64_t asserted = reporter->pins[fault->cell];
	const size_t field = culprit(reporter, fault->cell, asserted);
	const bool held = mask_at(reporter, fault->cell) != 0;
	const char *what = field == NO_SUBJECT
	                       ? "the decoded fields together have"
	                       : or_unnamed(arena_format(reporter->arena, "field \"%s\" has", field_name(reporter, field)));
	diagnose(reporter->diagnostics, RULE_CODE_CONFLICT, field_place(reporter, fault->cell, field),
	         "%s: %s no code%s for %s", cell_words(reporter, fault->cell), what, held ? " that the hold allows" : "",
	         levels_words(reporter, field, asserted));
	also_change(reporter, fault->cell, field_place(reporter, fault->cell, field));
	also_codes(reporter, field);
}

static void report_start_hold(const struct reporter *reporter, const struct fault *fault)
{
	const struct region *region = timeline_region(reporter->timeline, fault->cell);
	for (size_t index = 0; index < region->hold_count; index++) {
		const struct field *field = &reporter->plan->machine.fields[region->holds[index].field];
		if (field_value(field, fault->state) == field_value(field, value_at(reporter, fault->cell)))
			continue;
		diagnose(reporter->diagnostics, RULE_START_CONFLICT, reporter->plan->machine.start_place,
		         "start has %u in field \"%s\", but %s, holds it to %u", field_value(field, fault->state), field->name,
		         cell_words(reporter, fault->cell), field_value(field, value_at(reporter, fault->cell)));
		diagnose_also(reporter->diagnostics, region->holds[index].place, "the first cell is held here");
		return;
	}
}

static void report_start_signal(const struct reporter *reporter, const struct fault *fault)
{
	const uint64_t asserted = reporter->pins[fault->cell];
	for (size_t index = 0; index < reporter->plan->signal_count; index++) {
		const struct signal *signal = &reporter->plan->signals[index];
		const bool wanted = asserted >> index & 1;
		if (signal->origin != FROM_FIELD || signal->auto_codes)
			continue;
		const struct field *field = &reporter->plan->machine.fields[signal->field];
		const uint32_t code = field_value(field, fault->state);
		if (lists_code(signal, code) == wanted)
			continue;
		diagnose(reporter->diagnostics, RULE_START_CONFLICT, reporter->plan->machine.start_place,
		         "start has %u in field \"%s\", with which \"%s\" is %sasserted, but %s, wants it %sasserted", code,
		         field->name, signal->name, wanted ? "not " : "", cell_words(reporter, fault->cell), wanted ? "" : "not ");
		diagnose_also(reporter->diagnostics, signal->place, "signal \"%s\" has its codes here", signal->name);
		return;
	}
}

static void report_start_conflict(const struct reporter *reporter, const struct fault *fault)
{
	if ((fault->state & mask_at(reporter, fault->cell)) != value_at(reporter, fault->cell))
		report_start_hold(reporter, fault);
	else
		report_start_signal(reporter, fault);
}

static void report_codes_not_found(const struct reporter *reporter, const struct fault *fault,
                                   const struct signal *signal)
{
	diagnose(reporter->diagnostics, RULE_CODES_SHORT, signal->place,
	         "codes: auto: %s of field \"%s\" for \"%s\" with which every cell has a state of its own; the first cell "
	         "without one is %s",
	         fault->proved ? "there are no codes" : "found no codes", field_name(reporter, fault->field), signal->name,
	         cell_words(reporter, fault->cell));
	diagnose_hint(reporter->diagnostics, "list the codes, or give the field or the state another bit");
}

static void report_codes_short(const struct reporter *reporter, const struct fault *fault)
{
	const struct signal *signal = &reporter->plan->signals[fault->signal];
	if (fault->needed == 0) {
		report_codes_not_found(reporter, fault, signal);
		return;
	}
	diagnose(reporter->diagnostics, RULE_CODES_SHORT, signal->place,
	         "codes: auto needs %u codes of field \"%s\", but %u are available; the cells that lack them begin at %s",
	         fault->needed, field_name(reporter, fault->field), fault->available, cell_words(reporter, fault->cell));
	diagnose_hint(reporter->diagnostics, "give the field or the state another bit");
}

static void report_counted_automatic(const struct reporter *reporter, const struct fault *fault)
{
	const struct signal *signal = &reporter->plan->signals[fault->signal];
	const bool asserted = reporter->pins[fault->cell] >> fault->signal & 1;
	diagnose(reporter->diagnostics, RULE_COUNTED_CONFLICT, signal->place,
	         "signal \"%s\" is %sasserted in %s, and %sasserted in %s, but the counter has %u in field \"%s\" in both",
	         signal->name, asserted ? "" : "not ", cell_words(reporter, fault->cell), asserted ? "not " : "",
	         cell_words(reporter, fault->other), fault->available, field_name(reporter, fault->field));
}

static void report_counted_conflict(const struct reporter *reporter, const struct fault *fault)
{
	if (fault->field == NO_SUBJECT)
		diagnose(reporter->diagnostics, RULE_COUNTED_CONFLICT, reporter->plan->machine.start_place,
		         "wanted start 0, since a counter begins %s there, found %u",
		         has_line_types(reporter) ? "each line" : "its frame", fault->available);
	else if (fault->other != NO_CELL)
		report_counted_automatic(reporter, fault);
	else if (fault->signal == NO_SUBJECT)
		diagnose(reporter->diagnostics, RULE_COUNTED_CONFLICT, field_place(reporter, fault->cell, fault->field),
		         "%s: field \"%s\" is held to %u, but the counter has state %u, with %u there",
		         cell_words(reporter, fault->cell), field_name(reporter, fault->field), fault->needed, fault->state,
		         fault->available);
	else
		diagnose(reporter->diagnostics, RULE_COUNTED_CONFLICT, reporter->plan->signals[fault->signal].place,
		         "%s: wanted \"%s\" %sasserted, but the counter has state %u, with %u in field \"%s\"",
		         cell_words(reporter, fault->cell), reporter->plan->signals[fault->signal].name,
		         fault->needed != 0 ? "" : "not ", fault->state, fault->available, field_name(reporter, fault->field));
}

static void report_counter_short(const struct reporter *reporter, const struct fault *fault)
{
	const bool passing = reporter->plan->machine.line.clear == CLEAR_ASYNC;
	diagnose(reporter->diagnostics, RULE_COUNTER_SHORT, reporter->plan->machine.place,
	         "the frame needs %u states%s, but a counter of %u bits has %u", fault->needed,
	         passing ? ", one of them to clear the counter in" : "", reporter->plan->machine.line.state_bits,
	         fault->available);
	hint_bits(reporter, fault->needed);
}

static void report_fault(const struct reporter *reporter, const struct fault *fault)
{
	switch (fault->rule) {
	case RULE_STATES_SHORT: report_states_short(reporter, fault); break;
	case RULE_STATE_SHARED: report_state_shared(reporter, fault); break;
	case RULE_CODE_CONFLICT: report_code_conflict(reporter, fault); break;
	case RULE_START_CONFLICT: report_start_conflict(reporter, fault); break;
	case RULE_CODES_SHORT: report_codes_short(reporter, fault); break;
	case RULE_COUNTED_CONFLICT: report_counted_conflict(reporter, fault); break;
	default: report_counter_short(reporter, fault); break;
	}
}

void faults_report(const struct faults *faults, const struct timeline *timeline, const uint64_t *pins,
                   struct diagnostics *diagnostics)
{
	struct reporter reporter = {arena_create(), timeline, timeline->plan, pins, diagnostics};
	if (reporter.arena == NULL || faults->memory_out)
		diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){timeline->plan->source, 0, 0}, "memory is out");
	for (size_t index = 0; index < faults->count && reporter.arena != NULL && !faults->memory_out; index++)
		report_fault(&reporter, &faults->list[index]);
	arena_destroy(reporter.arena);
}
