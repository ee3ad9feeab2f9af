#include "plan/read.h"

#include <string.h>

#include "base/arena.h"
#include "plan/expression.h"

enum { REGION_NAME, REGION_CELLS, REGION_TIME, REGION_FILL, REGION_ASSERT, REGION_STRETCH, REGION_HOLD, REGION_KEYS };

const struct shape expression_shape = {.kind = SHAPE_TEXT, .pattern = EXPRESSION_PATTERN, .also = ALSO_WHOLE};
static const struct shape line_frame_expression_shape = {
	.kind = SHAPE_TEXT, .pattern = LINE_FRAME_EXPRESSION_PATTERN, .also = ALSO_WHOLE,
};

static const char *const auto_word[] = {"auto"};

#define REGION_KEYS_WITH(expression) \
	[REGION_NAME] = {"region", KEY_REQUIRED, &printable_name_shape, "Its name"}, \
	[REGION_CELLS] = {"cells", KEY_OPTIONAL, WHOLE(1, LIMIT_CELLS), "Its length in cells"}, \
	[REGION_TIME] = {"time", KEY_OPTIONAL, QUANTITY(IN_SECONDS | IN_TICKS | IN_DOTS | IN_CELLS, QUANTITY_POSITIVE), \
	                 "Its length as a time, or in ticks, dots or cells; its edges go to the nearest boundary of normal cells"}, \
	[REGION_FILL] = {"fill", KEY_OPTIONAL, &true_shape, "true: its length is what the others leave of the line's cells"}, \
	[REGION_ASSERT] = {"assert", KEY_OPTIONAL, SET_OF(&identifier_shape, 0, INT64_MAX), \
	                   "The signals that are asserted in all its cells; none if left out"}, \
	[REGION_STRETCH] = {"stretch", KEY_OPTIONAL, EITHER(WHOLE(0, LIMIT_CELLS), CHOICE(auto_word)), \
	                    "How many of its first cells are stretched; auto: the program stretches cells here so that the line " \
	                    "meets the clock's phase"}, \
	[REGION_HOLD] = {"hold", KEY_OPTIONAL, \
	                 SHAPE(.kind = SHAPE_NAMED, .name = &identifier_shape, .item = &(expression), .most = INT64_MAX), \
	                 "Fields of the state and their values in each cell, as expressions with line, row (in its block), cell and " \
	                 "col (in the region); of a line-frame machine with cell and col"}

static const struct key region_keys[REGION_KEYS] = {REGION_KEYS_WITH(expression_shape)};
static const struct key line_frame_region_keys[REGION_KEYS] = {REGION_KEYS_WITH(line_frame_expression_shape)};

#define LENGTHS .first = REGION_CELLS, .count = REGION_FILL - REGION_CELLS + 1
#define REGION_OF(table, of) \
	SHAPE(.kind = SHAPE_MAPPING, .title = "region" of, .about = "A run of cells in which the same signals are asserted", \
	      .keys = (table), .key_count = REGION_KEYS, .group = {LENGTHS, .one = true})
#define CHANGE_OF(table, of) \
	SHAPE(.kind = SHAPE_MAPPING, .title = "change" of, .about = "A region of the line type that this one is like, with the keys that differ", \
	      .keys = (table), .key_count = REGION_KEYS, .group = {LENGTHS, .one = false})

enum { LINE_CELLS, LINE_REGIONS, LINE_LIKE, LINE_CHANGE, LINE_KEYS };

#define LINE_KEYS_WITH(regions, of) \
	[LINE_CELLS] = {"cells", KEY_OPTIONAL, WHOLE(1, LIMIT_CELLS), "How many cells the line has; the sum of its regions if left out"}, \
	[LINE_REGIONS] = {"regions", KEY_OPTIONAL, \
	                  SHAPE(.kind = SHAPE_LIST, .item = REGION_OF(regions, of), .least = 1, .most = UINT16_MAX, .once = "fill"), \
	                  "The regions of the line, end to end"}, \
	[LINE_LIKE] = {"like", KEY_OPTIONAL, &printable_name_shape, "Another line type, whose regions this one has with changes"}, \
	[LINE_CHANGE] = {"change", KEY_OPTIONAL, \
	                 SHAPE(.kind = SHAPE_LIST, .item = CHANGE_OF(regions, of), .most = INT64_MAX, .once = "fill"), \
	                 "The regions that differ, by name"}

#define OF_LINE_FRAME " of a line-frame machine"

static const struct key line_keys[LINE_KEYS] = {LINE_KEYS_WITH(region_keys, "")};
static const struct key line_frame_line_keys[LINE_KEYS] = {LINE_KEYS_WITH(line_frame_region_keys, OF_LINE_FRAME)};

// Regions or like.
#define LINES_OF(table, of) \
	.kind = SHAPE_NAMED, .name = &printable_name_shape, .least = 1, .most = INT64_MAX, \
	.item = SHAPE(.kind = SHAPE_MAPPING, .title = "line type" of, .keys = (table), .key_count = LINE_KEYS, \
	              .group = {.first = LINE_REGIONS, .count = 2, .one = true}, \
	              BONDS({.key = "change", .needs = "like"}, {.key = "regions", .holding = "fill", .needs = "cells"}))

const struct shape lines_shape = {LINES_OF(line_keys, ""), .in_line_frame = SHAPE(LINES_OF(line_frame_line_keys, OF_LINE_FRAME))};

// A line type while `like` is being resolved: its values, and how far it is.
struct pending_line {
	const struct node *values[LINE_KEYS];
	size_t like;          // index of the type it derives from; SIZE_MAX if none
	bool good;            // its mapping could be read
	enum { WAITING, OPEN, DONE } progress;
};

static void read_region_time(struct reader *reader, const struct node *node, struct region *region)
{
	const struct clock *clock = &reader->plan->clock;
	struct quantity quantity;
	if (!key_quantity(reader, &region_keys[REGION_TIME], node, &quantity) || !reader->clock_known)
		return;
	struct fraction unit = fraction_whole(1);
	if (quantity.dimension == DIMENSION_TIME)
		unit = clock->master_hz;
	else if (quantity.dimension == DIMENSION_DOTS)
		unit = fraction_whole(clock->dot_ticks);
	else if (quantity.dimension == DIMENSION_CELLS)
		unit = fraction_whole(clock->cell_ticks);
	struct fraction ticks;
	const bool fits = fraction_multiply(quantity.value, unit, &ticks);
	if (!fits || ticks.numerator <= 0 || fraction_floor(ticks) / clock->cell_ticks >= LIMIT_CELLS) {
		diagnose(reader->diagnostics, RULE_BAD_QUANTITY, node->place, "time: wanted more than nothing and at most %d cells, found \"%s\"",
		         LIMIT_CELLS, SHORT(node->text));
		return;
	}
	region->ticks = ticks;
}

static void read_region_length(struct reader *reader, const struct node *node, const struct node **values, struct region *region)
{
	const int given = (values[REGION_CELLS] != NULL) + (values[REGION_TIME] != NULL) + (values[REGION_FILL] != NULL);
	if (given > 1) {
		diagnose(reader->diagnostics, RULE_REGION_LENGTH, node->place, "region \"%s\" has %d lengths, wanted one of cells, time and fill",
		         region->name, given);
		return;
	}
	if (values[REGION_CELLS] != NULL) {
		region->length = LENGTH_CELLS;
		region->length_place = values[REGION_CELLS]->place;
		key_whole(reader, &region_keys[REGION_CELLS], values[REGION_CELLS], &region->cells);
	} else if (values[REGION_TIME] != NULL) {
		region->length = LENGTH_TIME;
		region->length_place = values[REGION_TIME]->place;
		read_region_time(reader, values[REGION_TIME], region);
	} else if (values[REGION_FILL] != NULL) {
		bool fill = true;
		region->length = LENGTH_FILL;
		region->length_place = values[REGION_FILL]->place;
		if (key_truth(reader, &region_keys[REGION_FILL], values[REGION_FILL], &fill) && !fill) {
			diagnose(reader->diagnostics, RULE_REGION_LENGTH, values[REGION_FILL]->place,
			         "region \"%s\" has fill: false and so no length", region->name);
			diagnose_hint(reader->diagnostics, "give it cells or time, or fill: true");
		}
	}
}

static void read_assert(struct reader *reader, const struct node *node, struct region *region)
{
	const struct plan *plan = reader->plan;
	region->assert_mask = 0;
	if (!expect_values(reader, node, "assert"))
		return;
	for (size_t index = 0; index < node->count; index++) {
		const char *name;
		if (!read_scalar(reader, node->items[index], "assert", &name))
			continue;
		const size_t signal = find_signal(plan, name);
		if (signal == SIZE_MAX && plan->signal_count == 0 && !reader->signals_known)
			continue; // `signals` itself was reported
		if (signal == SIZE_MAX) {
			const char *names[LIMIT_SIGNALS];
			for (size_t other = 0; other < plan->signal_count; other++)
				names[other] = plan->signals[other].name;
			diagnose(reader->diagnostics, RULE_UNKNOWN_SIGNAL, node->items[index]->place, "there is no signal \"%s\"", SHORT(name));
			hint_words(reader, name, names, plan->signal_count);
			continue;
		}
		if ((region->assert_mask >> signal & 1) != 0)
			diagnose(reader->diagnostics, RULE_DOUBLED_NAME, node->items[index]->place, "signal \"%s\" is listed twice",
			         SHORT(name));
		region->assert_mask |= (uint64_t)1 << signal;
	}
}

static void read_stretch(struct reader *reader, const struct node *node, struct region *region)
{
	const struct plan *plan = reader->plan;
	const char *text;
	region->stretch = STRETCH_COUNT;
	region->stretch_cells = 0;
	region->stretch_place = node->place;
	if (!read_scalar(reader, node, "stretch", &text))
		return;
	if (strcmp(text, "auto") == 0)
		region->stretch = STRETCH_AUTO;
	else if (!read_whole(reader, node, "stretch (or auto)", 0, LIMIT_CELLS, &region->stretch_cells))
		return;
	if (region->stretch == STRETCH_COUNT && region->stretch_cells == 0)
		return;
	if (reader->signals_known && plan->role_signal[ROLE_STRETCH] < 0) {
		diagnose(reader->diagnostics, RULE_STRETCH_WITHOUT_SIGNAL, node->place,
		         "region \"%s\" has stretched cells, but no signal has role stretch", region->name);
		diagnose_hint(reader->diagnostics, "add a signal such as stretch: { role: stretch, active: low }");
	}
	if (region->stretch == STRETCH_AUTO && reader->clock_known &&
	    (!plan->clock.has_subcarrier || plan->clock.phase != PHASE_LINES)) {
		diagnose(reader->diagnostics, RULE_STRETCH_AUTO, node->place,
		         "stretch: auto needs a subcarrier and a phase counted in lines, which the clock does not have");
		diagnose_hint(reader->diagnostics, "add subcarrier and phase: every line (or every N lines) to clock, or say how many cells");
	}
}

static void report_expression(struct reader *reader, const struct node *node, enum expression_status status, size_t offset)
{
	const char *text = SHORT(node->text);
	const char *rest = node->text + offset;
	const char *words = expression_status_words(status);
	if (status == EXPRESSION_MEMORY)
		diagnose(reader->diagnostics, RULE_OUT_OF_MEMORY, node->place, "memory is out");
	else if (*rest == '\0')
		diagnose(reader->diagnostics, RULE_BAD_EXPRESSION, node->place, "expression \"%s\", at its end: %s", text, words);
	else if (offset == 0)
		diagnose(reader->diagnostics, RULE_BAD_EXPRESSION, node->place, "expression \"%s\": %s", text, words);
	else
		diagnose(reader->diagnostics, RULE_BAD_EXPRESSION, node->place, "expression \"%s\", at \"%s\": %s", text,
		         SHORT(rest), words);
}

// The rows of a line type serve all its lines: in a line-frame machine no hold can tell them apart.
static bool check_variables(struct reader *reader, const struct hold *hold)
{
	if (reader->plan->machine.form == FORM_LOOP)
		return true;
	const bool line = expression_uses(hold->expression, VARIABLE_LINE);
	if (!line && !expression_uses(hold->expression, VARIABLE_ROW))
		return true;
	diagnose(reader->diagnostics, RULE_BAD_EXPRESSION, hold->place,
	         "expression \"%s\": wanted no variables but cell and col in a line-frame machine, found \"%s\"", hold->text,
	         variable_name(line ? VARIABLE_LINE : VARIABLE_ROW));
	diagnose_hint(reader->diagnostics, "all lines of a type have the same states in the line stage: what differs from line to line"
	                                   " is the frame stage's");
	return false;
}

static bool read_hold(struct reader *reader, const struct node *field, const struct node *value, struct hold *hold)
{
	const struct plan *plan = reader->plan;
	size_t offset = 0;
	if (!read_scalar(reader, value, "hold", &hold->text))
		return false;
	hold->place = value->place;
	const enum expression_status status = expression_compile(reader->arena, hold->text, &hold->expression, &offset);
	if (status != EXPRESSION_OK)
		report_expression(reader, value, status, offset);
	if (!reader->machine_known)
		return false;
	hold->field = find_field(plan, field->text);
	if (hold->field != SIZE_MAX)
		return status == EXPRESSION_OK && check_variables(reader, hold);
	const char *names[LIMIT_FIELDS];
	for (size_t index = 0; index < plan->machine.field_count; index++)
		names[index] = plan->machine.fields[index].name;
	diagnose(reader->diagnostics, RULE_UNKNOWN_FIELD, field->place, "the machine has no field \"%s\"", SHORT(field->text));
	hint_words(reader, field->text, names, plan->machine.field_count);
	return false;
}

static void read_holds(struct reader *reader, const struct node *node, struct region *region)
{
	region->holds = NULL;
	region->hold_count = 0;
	if (!expect_kind(reader, node, NODE_MAPPING, "hold"))
		return;
	struct hold *holds = reader_array(reader, node->count, sizeof *holds);
	if (holds == NULL)
		return;
	size_t count = 0;
	for (size_t pair = 0; pair < node->count; pair++)
		if (read_hold(reader, node->pairs[pair].key, node->pairs[pair].value, &holds[count]))
			count++;
	region->holds = holds;
	region->hold_count = count;
}

// Reads the keys that a region or a change gives, over what the region has already.
static void read_region_keys(struct reader *reader, const struct node *node, const struct node **values, struct region *region)
{
	region->place = node->place;
	read_region_length(reader, node, values, region);
	if (values[REGION_ASSERT] != NULL)
		read_assert(reader, values[REGION_ASSERT], region);
	if (values[REGION_STRETCH] != NULL)
		read_stretch(reader, values[REGION_STRETCH], region);
	if (values[REGION_HOLD] != NULL)
		read_holds(reader, values[REGION_HOLD], region);
}

// True if a region has a length, or a misspelt one, which was reported.
static bool has_length(const struct node *node, const struct node **values)
{
	bool found = false;
	for (size_t key = REGION_CELLS; key <= REGION_FILL; key++)
		found = found || values[key] != NULL || key_is_misspelt(node, region_keys, REGION_KEYS, key);
	return found;
}

static void read_region(struct reader *reader, const struct node *node, struct region *region)
{
	const struct node *values[REGION_KEYS];
	region->name = "";
	region->cells = 1;
	region->ticks = fraction_whole(1);
	region->place = region->length_place = region->stretch_place = node->place;
	if (!read_mapping(reader, node, "a region", region_keys, REGION_KEYS, values))
		return;
	if (values[REGION_NAME] != NULL && expect_kind(reader, values[REGION_NAME], NODE_SCALAR, "region") &&
	    check_printable_name(reader, values[REGION_NAME], "region"))
		region->name = values[REGION_NAME]->text;
	if (!has_length(node, values)) {
		diagnose(reader->diagnostics, RULE_REGION_LENGTH, node->place, "region \"%s\" has no length", region->name);
		diagnose_hint(reader->diagnostics, "give it one of cells: N, time: T and fill: true");
	}
	read_region_keys(reader, node, values, region);
}

// An array of regions for a line type, or NULL after reporting that there are too many in all.
static struct region *make_regions(struct reader *reader, size_t count, struct place place)
{
	if (count > LIMIT_REGIONS - reader->region_count) {
		diagnose(reader->diagnostics, RULE_TOO_MANY, place, "regions: wanted at most %d in all line types, found more", LIMIT_REGIONS);
		return NULL;
	}
	reader->region_count += count;
	return reader_array(reader, count, sizeof(struct region));
}

static void read_regions(struct reader *reader, const struct node *node, struct line_type *line)
{
	if (!expect_kind(reader, node, NODE_LIST, "regions"))
		return;
	if (node->count == 0 || node->count > UINT16_MAX) {
		diagnose(reader->diagnostics, RULE_TOO_MANY, node->place, "regions: wanted 1 to %d, found %zu", UINT16_MAX, node->count);
		return;
	}
	line->regions = make_regions(reader, node->count, node->place);
	if (line->regions == NULL)
		return;
	line->region_count = node->count;
	for (size_t index = 0; index < node->count; index++)
		read_region(reader, node->items[index], &line->regions[index]);
}

// The region of a name in a line type, or NULL after reporting.
static struct region *changed_region(struct reader *reader, const struct node *name, const struct line_type *line)
{
	struct region *found = NULL;
	for (size_t index = 0; index < line->region_count; index++) {
		struct region *region = &line->regions[index];
		if (strcmp(region->name, name->text) != 0)
			continue;
		if (found != NULL) {
			diagnose(reader->diagnostics, RULE_AMBIGUOUS_REGION, name->place, "region \"%s\" exists more than once in line type \"%s\"",
			         SHORT(name->text), SHORT(line->name));
			diagnose_also(reader->diagnostics, found->place, "the first");
			diagnose_also(reader->diagnostics, region->place, "the second");
			diagnose_hint(reader->diagnostics, "give the regions different names, or write the line type out");
			return NULL;
		}
		found = region;
	}
	if (found != NULL || line->region_count == 0)
		return found;
	const char *names[64];
	const size_t count = line->region_count < COUNT_OF(names) ? line->region_count : COUNT_OF(names);
	for (size_t index = 0; index < count; index++)
		names[index] = line->regions[index].name;
	diagnose(reader->diagnostics, RULE_UNKNOWN_REGION, name->place, "line type \"%s\" has no region \"%s\" to change",
	         SHORT(line->name), SHORT(name->text));
	hint_words(reader, name->text, names, count);
	return NULL;
}

// True if no earlier change names the region; *change is where that one does, or NULL.
static bool is_first_change(struct reader *reader, const struct node *name, const struct node **change)
{
	if (*change != NULL) {
		diagnose(reader->diagnostics, RULE_DOUBLED_NAME, name->place, "region \"%s\" is changed twice", SHORT(name->text));
		diagnose_also(reader->diagnostics, (*change)->place, "the first change");
		diagnose_hint(reader->diagnostics, "put all keys that change into one of them");
		return false;
	}
	*change = name;
	return true;
}

static void read_changes(struct reader *reader, const struct node *node, struct line_type *line)
{
	if (!expect_kind(reader, node, NODE_LIST, "change"))
		return;
	const struct node **changes = reader_array(reader, line->region_count, sizeof *changes);
	if (changes == NULL)
		return;
	for (size_t index = 0; index < node->count; index++) {
		const struct node *values[REGION_KEYS];
		if (!read_mapping(reader, node->items[index], "a change", region_keys, REGION_KEYS, values) || values[REGION_NAME] == NULL ||
		    !expect_kind(reader, values[REGION_NAME], NODE_SCALAR, "region"))
			continue;
		struct region *region = changed_region(reader, values[REGION_NAME], line);
		if (region != NULL && is_first_change(reader, values[REGION_NAME], &changes[region - line->regions]))
			read_region_keys(reader, node->items[index], values, region);
	}
}

static bool copy_regions(struct reader *reader, const struct line_type *from, struct line_type *line)
{
	line->regions = make_regions(reader, from->region_count, line->place);
	if (line->regions == NULL)
		return false;
	if (from->region_count > 0)
		memcpy(line->regions, from->regions, from->region_count * sizeof *line->regions);
	line->region_count = from->region_count;
	line->has_cells = from->has_cells;
	line->cells = from->cells;
	line->cells_place = line->place; // what does not fit is this type, not the one that it derives from
	return true;
}

static void read_line_cells(struct reader *reader, const struct node *node, struct line_type *line)
{
	if (!key_whole(reader, &line_keys[LINE_CELLS], node, &line->cells))
		return;
	line->has_cells = true;
	line->cells_place = node->place;
}

// Reads a line type whose base, if it has one, is done.
static void read_line(struct reader *reader, struct pending_line *pending, size_t index)
{
	struct line_type *line = &reader->plan->lines[index];
	const struct node **values = pending[index].values;
	pending[index].progress = DONE;
	if (!pending[index].good)
		return;
	if (pending[index].like != SIZE_MAX && !copy_regions(reader, &reader->plan->lines[pending[index].like], line))
		return;
	read_line_cells(reader, values[LINE_CELLS], line);
	if (values[LINE_REGIONS] != NULL)
		read_regions(reader, values[LINE_REGIONS], line);
	if (values[LINE_CHANGE] != NULL && values[LINE_LIKE] != NULL)
		read_changes(reader, values[LINE_CHANGE], line);
}

// Follows `like` from a line type to one that can be read, then reads them on the way back; no recursion.
static void read_line_chain(struct reader *reader, struct pending_line *pending, size_t first, size_t *chain)
{
	size_t length = 0, index = first;
	while (index != SIZE_MAX && pending[index].progress == WAITING) {
		pending[index].progress = OPEN;
		chain[length++] = index;
		index = pending[index].like;
	}
	if (index != SIZE_MAX && pending[index].progress == OPEN) {
		const size_t last = chain[length - 1];
		const struct line_type *lines = reader->plan->lines;
		diagnose(reader->diagnostics, RULE_LIKE_LOOP, pending[last].values[LINE_LIKE]->place,
		         last == index ? "line type \"%s\" derives from itself" : "line type \"%s\" derives from itself, by way of \"%s\"",
		         SHORT(lines[index].name), SHORT(lines[last].name));
		pending[last].good = false;
	}
	while (length > 0)
		read_line(reader, pending, chain[--length]);
}

static bool is_misspelt(const struct node *node, const struct node **values, size_t key)
{
	return values[key] == NULL && key_is_misspelt(node, line_keys, LINE_KEYS, key);
}

static void read_line_head(struct reader *reader, const struct node *node, struct pending_line *pending)
{
	const struct plan *plan = reader->plan;
	const struct node **values = pending->values;
	pending->like = SIZE_MAX;
	pending->good = read_mapping(reader, node, "a line type", line_keys, LINE_KEYS, values);
	if (!pending->good)
		return;
	if (is_misspelt(node, values, LINE_REGIONS) || is_misspelt(node, values, LINE_LIKE)) {
		pending->good = false;
	} else if ((values[LINE_REGIONS] == NULL) == (values[LINE_LIKE] == NULL)) {
		diagnose(reader->diagnostics, RULE_MISSING_KEY, node->place, "a line type needs either \"regions\" or \"like\"%s",
		         values[LINE_LIKE] != NULL ? ", not both" : "");
		pending->good = false;
	} else if (values[LINE_CHANGE] != NULL && values[LINE_LIKE] == NULL) {
		diagnose(reader->diagnostics, RULE_MISSING_KEY, values[LINE_CHANGE]->place, "\"change\" needs \"like\"");
		pending->good = false;
	}
	const char *name;
	if (!pending->good || values[LINE_LIKE] == NULL)
		return;
	pending->good = read_scalar(reader, values[LINE_LIKE], "like", &name);
	for (size_t index = 0; pending->good && index < plan->line_count; index++)
		if (strcmp(plan->lines[index].name, name) == 0)
			pending->like = index;
	if (!pending->good || pending->like != SIZE_MAX)
		return;
	const char *names[64];
	const size_t count = plan->line_count < COUNT_OF(names) ? plan->line_count : COUNT_OF(names);
	for (size_t index = 0; index < count; index++)
		names[index] = plan->lines[index].name;
	diagnose(reader->diagnostics, RULE_UNKNOWN_LINE, values[LINE_LIKE]->place, "there is no line type \"%s\"", SHORT(name));
	hint_words(reader, name, names, count);
	pending->good = false;
}

void read_lines(struct reader *reader, const struct node *node)
{
	struct plan *plan = reader->plan;
	if (!expect_kind(reader, node, NODE_MAPPING, "lines"))
		return;
	if (node->count == 0) {
		diagnose(reader->diagnostics, RULE_MISSING_KEY, node->place, "lines: wanted at least one line type, found none");
		return;
	}
	plan->lines = reader_array(reader, node->count, sizeof *plan->lines);
	struct pending_line *pending = reader_array(reader, node->count, sizeof *pending);
	size_t *chain = reader_array(reader, node->count, sizeof *chain);
	if (plan->lines == NULL || pending == NULL || chain == NULL)
		return;
	plan->line_count = node->count;
	for (size_t index = 0; index < node->count; index++) {
		plan->lines[index].name = node->pairs[index].key->text;
		plan->lines[index].place = plan->lines[index].cells_place = node->pairs[index].key->place;
		check_printable_name(reader, node->pairs[index].key, "line type");
	}
	for (size_t index = 0; index < node->count; index++)
		read_line_head(reader, node->pairs[index].value, &pending[index]);
	for (size_t index = 0; index < node->count; index++)
		read_line_chain(reader, pending, index, chain);
}
