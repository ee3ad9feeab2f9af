#include "catalogue/standards.h"

#include <string.h>

#include "catalogue/data.h"
#include "catalogue/modes.h"
#include "catalogue/reading.h"

#define LIMIT_STANDARDS 200
#define LIMIT_NOTES 32
#define LIMIT_PAUSES 16
#define MOST_LINES 10000

enum { FILE_STANDARDS, FILE_MODE_LIMITS, FILE_MODES, FILE_KEY_COUNT };
enum {
	STANDARD_TITLE, STANDARD_DOCUMENTS, STANDARD_FIELDS, STANDARD_SYNC_LINE, STANDARD_LIMITS, STANDARD_PAUSES, STANDARD_NOTES,
	STANDARD_KEY_COUNT
};
enum { VALUE_LIMIT, VALUE_SOURCE, VALUE_KEY_COUNT };
enum { PAUSE_FIELD, PAUSE_FIRST, PAUSE_LAST, PAUSE_SOURCE, PAUSE_KEY_COUNT };

static const struct key file_keys[FILE_KEY_COUNT] = {
	[FILE_STANDARDS] = PLAIN_KEY("standards", KEY_REQUIRED),
	[FILE_MODE_LIMITS] = PLAIN_KEY("mode limits", KEY_REQUIRED),
	[FILE_MODES] = PLAIN_KEY("modes", KEY_REQUIRED),
};
static const struct key standard_keys[STANDARD_KEY_COUNT] = {
	[STANDARD_TITLE] = PLAIN_KEY("title", KEY_REQUIRED),
	[STANDARD_DOCUMENTS] = PLAIN_KEY("documents", KEY_REQUIRED),
	[STANDARD_FIELDS] = PLAIN_KEY("fields", KEY_REQUIRED),
	[STANDARD_SYNC_LINE] = PLAIN_KEY("vertical sync line", KEY_REQUIRED),
	[STANDARD_LIMITS] = PLAIN_KEY("limits", KEY_REQUIRED),
	[STANDARD_PAUSES] = PLAIN_KEY("burst pauses", KEY_OPTIONAL),
	[STANDARD_NOTES] = PLAIN_KEY("notes", KEY_OPTIONAL),
};
static const struct key grade_keys[GRADE_COUNT] = {
	[GRADE_STUDIO] = PLAIN_KEY("studio", KEY_REQUIRED),
	[GRADE_MONITOR] = PLAIN_KEY("monitor", KEY_REQUIRED),
};
static const struct key value_keys[VALUE_KEY_COUNT] = {
	[VALUE_LIMIT] = PLAIN_KEY("limit", KEY_REQUIRED),
	[VALUE_SOURCE] = PLAIN_KEY("source", KEY_REQUIRED),
};
static const struct key pause_keys[PAUSE_KEY_COUNT] = {
	[PAUSE_FIELD] = PLAIN_KEY("field", KEY_REQUIRED),
	[PAUSE_FIRST] = PLAIN_KEY("first line", KEY_REQUIRED),
	[PAUSE_LAST] = PLAIN_KEY("last line", KEY_REQUIRED),
	[PAUSE_SOURCE] = PLAIN_KEY("source", KEY_REQUIRED),
};

// The read_… functions below report what is wrong and read on; what they leave behind is used only if nothing was reported.

static unsigned read_number(struct reader *reader, const struct node *node, const char *what, int64_t least, int64_t most)
{
	int64_t value = least;
	if (node != NULL)
		read_whole(reader, node, what, least, most, &value);
	return (unsigned)value;
}

static void read_value(struct reader *reader, const struct node *node, enum limit_item item, enum limit_grade grade,
                       struct limit *limit)
{
	const struct node *values[VALUE_KEY_COUNT];
	*limit = (struct limit){.item = item, .grade = grade, .source = ""};
	if (node == NULL || !read_mapping(reader, node, limit_item_facts(item)->name, value_keys, VALUE_KEY_COUNT, values))
		return;
	catalogue_text(reader, values[VALUE_SOURCE], "source", &limit->source);
	if (values[VALUE_LIMIT] != NULL)
		read_limit(reader, values[VALUE_LIMIT], item, limit);
}

static void read_limits(struct reader *reader, const struct node *node, struct standard *standard)
{
	struct key keys[ITEM_COUNT];
	const struct node *values[ITEM_COUNT], *grades[GRADE_COUNT];
	for (size_t item = 0; item < ITEM_COUNT; item++)
		keys[item] = (struct key)PLAIN_KEY(limit_item_facts((enum limit_item)item)->name, KEY_OPTIONAL);
	if (node == NULL || !read_mapping(reader, node, "limits", keys, ITEM_COUNT, values) ||
	    !catalogue_count(reader, node, "limits", ITEM_COUNT))
		return;
	struct limit *limits = reader_array(reader, node->count * GRADE_COUNT, sizeof *limits);
	if (limits == NULL)
		return;
	standard->limits = limits;
	for (size_t item = 0; item < ITEM_COUNT; item++)
		if (values[item] != NULL && read_mapping(reader, values[item], keys[item].name, grade_keys, GRADE_COUNT, grades))
			for (size_t grade = 0; grade < GRADE_COUNT; grade++)
				read_value(reader, grades[grade], (enum limit_item)item, (enum limit_grade)grade,
				           &limits[standard->limit_count++]);
}

static void read_pause(struct reader *reader, const struct node *node, struct burst_pause *pause)
{
	const struct node *values[PAUSE_KEY_COUNT];
	*pause = (struct burst_pause){0, 0, 0, ""};
	if (!read_mapping(reader, node, "a burst pause", pause_keys, PAUSE_KEY_COUNT, values))
		return;
	pause->field = read_number(reader, values[PAUSE_FIELD], "field", 1, LIMIT_PAUSES);
	pause->first_line = read_number(reader, values[PAUSE_FIRST], "first line", 1, MOST_LINES);
	pause->last_line = read_number(reader, values[PAUSE_LAST], "last line", 1, MOST_LINES);
	catalogue_text(reader, values[PAUSE_SOURCE], "source", &pause->source);
}

static void read_pauses(struct reader *reader, const struct node *node, struct standard *standard)
{
	if (node == NULL || !expect_kind(reader, node, NODE_LIST, "burst pauses") ||
	    !catalogue_count(reader, node, "burst pauses", LIMIT_PAUSES))
		return;
	struct burst_pause *pauses = reader_array(reader, node->count, sizeof *pauses);
	if (pauses == NULL)
		return;
	for (size_t index = 0; index < node->count; index++)
		read_pause(reader, node->items[index], &pauses[index]);
	standard->pauses = pauses;
	standard->pause_count = node->count;
}

static void read_notes(struct reader *reader, const struct node *node, struct standard *standard)
{
	if (node == NULL || !expect_values(reader, node, "notes") || !catalogue_count(reader, node, "notes", LIMIT_NOTES))
		return;
	const char **notes = reader_array(reader, node->count, sizeof *notes);
	if (notes == NULL)
		return;
	for (size_t index = 0; index < node->count; index++)
		catalogue_text(reader, node->items[index], "a note", &notes[index]);
	standard->notes = notes;
	standard->note_count = node->count;
}

static void read_standard(struct reader *reader, const struct node_pair *pair, struct standard *standard)
{
	const struct node *values[STANDARD_KEY_COUNT];
	*standard = (struct standard){.name = pair->key->text, .title = "", .documents = ""};
	if (!read_mapping(reader, pair->value, "a standard", standard_keys, STANDARD_KEY_COUNT, values))
		return;
	catalogue_text(reader, values[STANDARD_TITLE], "title", &standard->title);
	catalogue_text(reader, values[STANDARD_DOCUMENTS], "documents", &standard->documents);
	standard->fields = read_number(reader, values[STANDARD_FIELDS], "fields", 1, 2);
	standard->vertical_sync_line = read_number(reader, values[STANDARD_SYNC_LINE], "vertical sync line", 1, MOST_LINES);
	read_limits(reader, values[STANDARD_LIMITS], standard);
	read_pauses(reader, values[STANDARD_PAUSES], standard);
	read_notes(reader, values[STANDARD_NOTES], standard);
}

// Names that plans write: lower-case letters, digits and '-'. Modes may not be named as standards.
static void check_name(struct reader *reader, const struct node *key, const struct node *standards)
{
	if (key->length == 0 || key->text[strspn(key->text, "abcdefghijklmnopqrstuvwxyz0123456789-")] != '\0')
		diagnose(reader->diagnostics, RULE_BAD_NAME, key->place, "standard \"%s\": wanted a-z, 0-9 and -", SHORT(key->text));
	else if (standards != NULL && node_value(standards, key->text) != NULL)
		diagnose(reader->diagnostics, RULE_DOUBLED_NAME, key->place, "\"%s\" is one of the standards too", key->text);
}

static bool check_section(struct reader *reader, const struct node *node, const char *name)
{
	return node != NULL && expect_kind(reader, node, NODE_MAPPING, name) && catalogue_count(reader, node, name, LIMIT_STANDARDS);
}

static void read_all(struct reader *reader, const struct node *const *sections, struct standards *standards)
{
	const struct node *const named = sections[FILE_STANDARDS], *const modes = sections[FILE_MODES];
	const bool named_good = check_section(reader, named, "standards"), modes_good = check_section(reader, modes, "modes");
	struct mode_rules *rules = reader_array(reader, 1, sizeof *rules);
	struct standard *all = reader_array(reader, (named_good ? named->count : 0) + (modes_good ? modes->count : 0), sizeof *all);
	if (rules == NULL || all == NULL)
		return;
	standards->standards = all;
	read_mode_rules(reader, sections[FILE_MODE_LIMITS], rules);
	for (size_t index = 0; named_good && index < named->count; index++) {
		check_name(reader, named->pairs[index].key, NULL);
		read_standard(reader, &named->pairs[index], &all[standards->count++]);
	}
	for (size_t index = 0; modes_good && index < modes->count; index++) {
		check_name(reader, modes->pairs[index].key, named_good ? named : NULL);
		read_mode(reader, &modes->pairs[index], rules, &all[standards->count++]);
	}
}

const struct standards *standards_read(struct arena *arena, const struct source *source, struct diagnostics *diagnostics)
{
	struct plan plan = {.arena = arena, .source = source}; // the plan's reader wants to know what it reads
	struct reader reader = {.arena = arena, .plan = &plan, .diagnostics = diagnostics};
	const size_t errors_before = diagnostics_error_count(diagnostics);
	const struct node *document = document_parse(arena, source, diagnostics);
	const struct node *sections[FILE_KEY_COUNT];
	if (document == NULL || !read_mapping(&reader, document, "a catalogue", file_keys, FILE_KEY_COUNT, sections))
		return NULL;
	struct standards *standards = reader_array(&reader, 1, sizeof *standards);
	if (standards == NULL)
		return NULL;
	read_all(&reader, sections, standards);
	return diagnostics_error_count(diagnostics) == errors_before ? standards : NULL;
}

const struct standards *standards_load(struct arena *arena, struct diagnostics *diagnostics)
{
	const struct source *source =
		catalogue_source(arena, "standards.yaml", catalogue_standards, catalogue_standards_length, diagnostics);
	return source != NULL ? standards_read(arena, source, diagnostics) : NULL;
}

const struct standard *catalogue_standard(const struct standards *standards, const char *name)
{
	for (size_t index = 0; index < standards->count; index++)
		if (strcmp(standards->standards[index].name, name) == 0)
			return &standards->standards[index];
	return NULL;
}

const struct limit *standard_limit(const struct standard *standard, enum limit_item item, enum limit_grade grade)
{
	for (size_t index = 0; index < standard->limit_count; index++)
		if (standard->limits[index].item == item && standard->limits[index].grade == grade)
			return &standard->limits[index];
	return NULL;
}
