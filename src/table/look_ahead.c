// What a row of the line stage holds, and what its state shows, must be the same wherever its line type stands.
#include "base/arena.h"
#include "table/line_frame.h"

#define REPORTS 200 // so many are put into words

struct comparison {
	const struct table *table;
	struct diagnostics *diagnostics;
	uint64_t *reported;      // [line types]: signals that need no second report
	unsigned reports;
	uint64_t steady;         // signals that never change within a line
	bool fields_agree;
};

// Two lines of one type, of which a row would have to differ.
struct difference {
	uint32_t left, right; // lines of the frame
	uint32_t cell;
	size_t signal;
	int64_t ahead;        // how many cells after this one the row, or the state, shows
};

static const struct timeline *timeline_of(const struct comparison *comparison)
{
	return comparison->table->timeline;
}

static bool is_registered(const struct comparison *comparison)
{
	return comparison->table->wiring.line.outputs == OUTPUTS_REGISTERED;
}

// The cell of the frame that is `ahead` cells after a cell of a line.
static uint32_t cell_ahead(const struct timeline *timeline, uint32_t line, uint32_t cell, int64_t ahead)
{
	const int64_t count = timeline->cell_count;
	return (uint32_t)(((timeline->lines[line].first_cell + cell + ahead) % count + count) % count);
}

static bool asserted_at(const struct timeline *timeline, uint32_t cell, size_t signal)
{
	return (timeline->asserted[cell] >> signal & 1) != 0;
}

// True if with `ahead` two lines of a type have the same levels of a signal for each of their cells.
static bool lines_agree(const struct timeline *timeline, uint32_t left, uint32_t right, size_t signal, int64_t ahead)
{
	const uint32_t cells = timeline->types[timeline->lines[left].type].cells, count = timeline->cell_count;
	uint32_t left_at = cell_ahead(timeline, left, 0, ahead), right_at = cell_ahead(timeline, right, 0, ahead);
	for (uint32_t cell = 0; cell < cells; cell++) {
		if (asserted_at(timeline, left_at, signal) != asserted_at(timeline, right_at, signal))
			return false;
		left_at = left_at + 1 == count ? 0 : left_at + 1;
		right_at = right_at + 1 == count ? 0 : right_at + 1;
	}
	return true;
}

// True if with `ahead` all lines of a type have the same levels of a signal for each of their cells.
static bool would_agree(const struct timeline *timeline, uint32_t first, size_t signal, int64_t ahead)
{
	const uint32_t type = timeline->lines[first].type;
	for (uint32_t line = first + 1; line < timeline->line_count; line++)
		if (timeline->lines[line].type == type && !lines_agree(timeline, first, line, signal, ahead))
			return false;
	return true;
}

static struct place block_place(const struct timeline *timeline, uint32_t line)
{
	return timeline->plan->blocks[timeline->lines[line].block].place;
}

static void also_block(const struct comparison *comparison, uint32_t line)
{
	const struct timeline *timeline = timeline_of(comparison);
	diagnose_also(comparison->diagnostics, block_place(timeline, line), "line %u (\"%s\") is of this block", line,
	              timeline->plan->lines[timeline->lines[line].type].name);
}

static void hint_remedies(const struct comparison *comparison, const struct difference *difference, bool is_data)
{
	const struct timeline *timeline = timeline_of(comparison);
	const bool registered = is_registered(comparison);
	const int64_t other = difference->ahead + (registered ? -1 : 1);
	const char *outputs = registered ? "direct" : "registered";
	if (is_data && (comparison->steady >> difference->signal & 1) != 0) {
		diagnose_hint(comparison->diagnostics, "\"%s\" never changes within a line: give it stage: frame",
		              timeline->plan->signals[difference->signal].name);
		return;
	}
	const bool helps = is_data && would_agree(timeline, difference->left, difference->signal, other);
	const char *alike = difference->ahead > 0 ? "what follows them begins" : "what comes before them ends";
	if (helps)
		diagnose_hint(comparison->diagnostics,
		              "start the lines elsewhere, say in the front porch, so that %s alike, or give the line stage outputs: %s",
		              alike, outputs);
	else
		diagnose_hint(comparison->diagnostics, "start the lines elsewhere, say in the front porch, so that %s alike", alike);
}

static const char *asserted_words(bool asserted)
{
	return asserted ? "asserted" : "not asserted";
}

// Says what the row or state of a cell shows, and how that differs between two lines.
static void report(struct comparison *comparison, const struct difference *difference)
{
	const struct timeline *timeline = timeline_of(comparison);
	const struct plan *plan = timeline->plan;
	const struct line_type *type = &plan->lines[timeline->lines[difference->left].type];
	const bool is_data = signal_is_data(&plan->signals[difference->signal]);
	const uint32_t left = cell_ahead(timeline, difference->left, difference->cell, difference->ahead);
	const uint32_t right = cell_ahead(timeline, difference->right, difference->cell, difference->ahead);
	const struct cell_place left_place = timeline_place(timeline, left), right_place = timeline_place(timeline, right);
	const int64_t distance = difference->ahead < 0 ? -difference->ahead : difference->ahead;
	if (comparison->reports++ >= REPORTS)
		return;
	diagnose(comparison->diagnostics, RULE_LOOK_AHEAD, type->place,
	         "line type \"%s\", cell %u: its %s shows \"%s\" as it is %lld cell%s %s, which differs with what %s: %s in line %u "
	         "(\"%s\"), cell %u, but %s in line %u (\"%s\"), cell %u",
	         type->name, difference->cell, is_data ? "row" : "state",
	         plan->signals[difference->signal].name, (long long)distance,
	         distance == 1 ? "" : "s", difference->ahead < 0 ? "earlier" : "later",
	         difference->ahead < 0 ? "comes before" : "follows", asserted_words(asserted_at(timeline, left, difference->signal)),
	         left_place.line, timeline_line_name(timeline, left), left_place.cell,
	         asserted_words(asserted_at(timeline, right, difference->signal)), right_place.line,
	         timeline_line_name(timeline, right), right_place.cell);
	also_block(comparison, left_place.line);
	if (timeline->lines[left_place.line].block != timeline->lines[right_place.line].block)
		also_block(comparison, right_place.line);
	hint_remedies(comparison, difference, is_data);
}

static void report_signals(struct comparison *comparison, struct difference difference, uint64_t signals, bool is_data)
{
	const struct plan *plan = timeline_of(comparison)->plan;
	const uint32_t type = timeline_of(comparison)->lines[difference.left].type;
	signals &= ~comparison->reported[type];
	comparison->reported[type] |= signals;
	for (size_t signal = 0; signal < plan->signal_count && signals != 0; signal++) {
		if ((signals >> signal & 1) == 0)
			continue;
		difference.signal = signal;
		difference.ahead = plan->signals[signal].lead_cells + (is_data && is_registered(comparison));
		report(comparison, &difference);
	}
}

static uint64_t field_signals(const struct plan *plan)
{
	uint64_t signals = 0;
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (!signal_is_data(&plan->signals[signal]))
			signals |= (uint64_t)1 << signal;
	return signals;
}

static void compare_lines(struct comparison *comparison, uint32_t left, uint32_t right, uint64_t decoded)
{
	const struct timeline *timeline = timeline_of(comparison);
	const uint64_t *pins = comparison->table->pins, data = comparison->table->wiring.line.data_signals;
	const uint32_t registered = is_registered(comparison), count = timeline->cell_count;
	const uint32_t left_cell = timeline->lines[left].first_cell, right_cell = timeline->lines[right].first_cell;
	for (uint32_t cell = 0; cell < timeline->types[timeline->lines[left].type].cells; cell++) {
		const struct difference difference = {.left = left, .right = right, .cell = cell};
		const uint64_t in_state = (pins[left_cell + cell] ^ pins[right_cell + cell]) & decoded;
		const uint64_t in_row =
			(pins[(left_cell + cell + registered) % count] ^ pins[(right_cell + cell + registered) % count]) & data;
		if (in_row != 0)
			report_signals(comparison, difference, in_row, true);
		if (in_state == 0)
			continue;
		comparison->fields_agree = false;
		report_signals(comparison, difference, in_state, false);
	}
}

// Reports the frame-stage signals that change at a cell of a line, each once for its line type.
static void report_changes(struct comparison *comparison, uint32_t line, uint32_t cell, uint64_t signals)
{
	const struct timeline *timeline = timeline_of(comparison);
	const struct plan *plan = timeline->plan;
	const uint32_t type = timeline->lines[line].type, first = timeline->lines[line].first_cell;
	signals &= ~comparison->reported[type];
	comparison->reported[type] |= signals;
	for (size_t index = 0; index < plan->signal_count && signals != 0; index++) {
		const struct signal *signal = &plan->signals[index];
		if ((signals >> index & 1) == 0 || comparison->reports++ >= REPORTS)
			continue;
		diagnose(comparison->diagnostics, RULE_FRAME_SIGNAL, signal->place,
		         "signal \"%s\" of the frame stage changes within line %u (\"%s\"): %s in cell 0, but %s in cell %u, region \"%s\"",
		         signal->name, line, plan->lines[type].name, asserted_words(comparison->table->pins[first] >> index & 1),
		         asserted_words(comparison->table->pins[first + cell] >> index & 1), cell, timeline_region_name(timeline, first + cell));
		diagnose_also(comparison->diagnostics, plan->lines[type].place, "line type \"%s\" is here", plan->lines[type].name);
		if (signal->lead_cells != 0)
			diagnose_hint(comparison->diagnostics,
			              "its lead of %lld cell%s moves its edges away from the lines' ends; leave it out, or give it stage: line",
			              (long long)signal->lead_cells, signal->lead_cells == 1 || signal->lead_cells == -1 ? "" : "s");
		else if (signal->role == ROLE_STRETCH)
			diagnose_hint(comparison->diagnostics, "give it stage: line");
		else
			diagnose_hint(comparison->diagnostics, "assert it in all regions of the line type or in none, or give it stage: line");
	}
}

static void check_constant(struct comparison *comparison, uint32_t line)
{
	const struct frame_line *in_frame = &timeline_of(comparison)->lines[line];
	const uint64_t *pins = comparison->table->pins + in_frame->first_cell;
	for (uint32_t cell = 1; cell < timeline_of(comparison)->types[in_frame->type].cells; cell++) {
		const uint64_t change = (pins[cell] ^ pins[0]) & comparison->table->wiring.frame.data_signals;
		if (change != 0)
			report_changes(comparison, line, cell, change);
	}
}

bool look_ahead_check(const struct table *table, struct arena *scratch, struct diagnostics *diagnostics, bool *fields_agree)
{
	const struct timeline *timeline = table->timeline;
	const uint64_t decoded = field_signals(timeline->plan);
	struct comparison comparison = {.table = table, .diagnostics = diagnostics, .fields_agree = true};
	comparison.steady = timeline_line_signals(timeline, timeline->asserted);
	comparison.reported = arena_array(scratch, timeline->plan->line_count, sizeof *comparison.reported);
	if (comparison.reported == NULL) {
		diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){timeline->plan->source, 0, 0}, "memory is out");
		return false;
	}
	for (uint32_t line = 0; line < timeline->line_count; line++) {
		const uint32_t first = table->line_of_type[timeline->lines[line].type];
		if (first != line)
			compare_lines(&comparison, first, line, decoded);
		check_constant(&comparison, line);
	}
	*fields_agree = comparison.fields_agree;
	return comparison.reports == 0;
}
