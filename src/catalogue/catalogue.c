#include "catalogue/catalogue.h"

#include <string.h>

#include "catalogue/data.h"
#include "catalogue/reading.h"

#define LIMIT_PARTS 1000   // of a section
#define LIMIT_GRADES 32    // of a part

enum { SECTION_MEMORIES, SECTION_LATCHES, SECTION_COUNTERS, SECTION_DECODERS, SECTION_COUNT };
enum { PART_ADDRESS_PINS, PART_DATA_PINS, PART_PACKAGE, PART_SOURCE, PART_ACCESS, PART_KEY_COUNT };
enum { LOGIC_CONDITIONS, LOGIC_DELAY, LOGIC_SETUP, LOGIC_KEY_COUNT };
enum { TIME_TIME, TIME_SOURCE, TIME_KEY_COUNT };

static const struct key section_keys[SECTION_COUNT] = {
	[SECTION_MEMORIES] = PLAIN_KEY("memories", KEY_REQUIRED),
	[SECTION_LATCHES] = PLAIN_KEY("latches", KEY_REQUIRED),
	[SECTION_COUNTERS] = PLAIN_KEY("counters", KEY_REQUIRED),
	[SECTION_DECODERS] = PLAIN_KEY("decoders", KEY_REQUIRED),
};
static const struct key part_keys[PART_KEY_COUNT] = {
	[PART_ADDRESS_PINS] = PLAIN_KEY("address pins", KEY_REQUIRED),
	[PART_DATA_PINS] = PLAIN_KEY("data pins", KEY_REQUIRED),
	[PART_PACKAGE] = PLAIN_KEY("package", KEY_REQUIRED),
	[PART_SOURCE] = PLAIN_KEY("source", KEY_REQUIRED),
	[PART_ACCESS] = PLAIN_KEY("access", KEY_REQUIRED),
};
// A decoder has all but the last.
static const struct key logic_keys[LOGIC_KEY_COUNT] = {
	[LOGIC_CONDITIONS] = PLAIN_KEY("conditions", KEY_REQUIRED),
	[LOGIC_DELAY] = PLAIN_KEY("delay", KEY_REQUIRED),
	[LOGIC_SETUP] = PLAIN_KEY("setup", KEY_REQUIRED),
};
static const struct key time_keys[TIME_KEY_COUNT] = {
	[TIME_TIME] = PLAIN_KEY("time", KEY_REQUIRED),
	[TIME_SOURCE] = PLAIN_KEY("source", KEY_REQUIRED),
};

// The read_… functions below report what is wrong and read on; what they leave behind is used only if nothing was reported.

// { time: …, source: … }; the node may be absent, which has been reported then.
static void read_sourced_time(struct reader *reader, const struct node *node, const char *what, struct fraction *seconds,
                              const char **source)
{
	const struct node *values[TIME_KEY_COUNT];
	if (node == NULL || !read_mapping(reader, node, what, time_keys, TIME_KEY_COUNT, values))
		return;
	if (values[TIME_TIME] != NULL)
		read_time(reader, values[TIME_TIME], what, true, seconds);
	catalogue_text(reader, values[TIME_SOURCE], "source", source);
}

// Puts a grade among `count` that are there already, fastest first.
static void insert_grade(struct access_grade *grades, size_t count, struct access_grade grade)
{
	size_t place = count;
	for (; place > 0 && fraction_compare(grade.access_s, grades[place - 1].access_s) < 0; place--)
		grades[place] = grades[place - 1];
	grades[place] = grade;
}

static bool has_grade(const struct access_grade *grades, size_t count, struct fraction access_s)
{
	for (size_t index = 0; index < count; index++)
		if (fraction_compare(grades[index].access_s, access_s) == 0)
			return true;
	return false;
}

static void read_grades(struct reader *reader, const struct node *node, struct part *part)
{
	if (node == NULL || !expect_kind(reader, node, NODE_LIST, "access") || !catalogue_count(reader, node, "access", LIMIT_GRADES))
		return;
	struct access_grade *grades = reader_array(reader, node->count, sizeof *grades);
	if (grades == NULL)
		return;
	for (size_t index = 0; index < node->count; index++) {
		struct access_grade grade = {FRACTION_ZERO, ""};
		read_sourced_time(reader, node->items[index], "access time", &grade.access_s, &grade.source);
		if (grade.access_s.numerator != 0 && has_grade(grades, index, grade.access_s))
			diagnose(reader->diagnostics, RULE_BAD_QUANTITY, node->items[index]->place, "access time is listed twice");
		insert_grade(grades, index, grade);
	}
	part->grades = grades;
	part->grade_count = node->count;
}

static unsigned read_address_pins(struct reader *reader, const struct node *node)
{
	int64_t pins = 0;
	if (node != NULL)
		read_whole(reader, node, "address pins", 1, LIMIT_ADDRESS_PINS, &pins);
	return (unsigned)pins;
}

static unsigned read_data_pins(struct reader *reader, const struct node *node)
{
	static const char *const widths[] = {"8", "16"};
	size_t choice = 0;
	if (node != NULL)
		read_choice(reader, node, "data pins", widths, COUNT_OF(widths), &choice);
	return choice == 0 ? 8 : 16;
}

static void read_part(struct reader *reader, const struct node_pair *pair, struct part *part)
{
	const struct node *values[PART_KEY_COUNT];
	part->name = pair->key->text;
	if (!check_printable_name(reader, pair->key, "memory") ||
	    !read_mapping(reader, pair->value, "a memory", part_keys, PART_KEY_COUNT, values))
		return;
	part->address_pins = read_address_pins(reader, values[PART_ADDRESS_PINS]);
	part->data_pins = read_data_pins(reader, values[PART_DATA_PINS]);
	catalogue_text(reader, values[PART_PACKAGE], "package", &part->package);
	catalogue_text(reader, values[PART_SOURCE], "source", &part->source);
	read_grades(reader, values[PART_ACCESS], part);
}

static bool check_section(struct reader *reader, const struct node *node, size_t section)
{
	const char *name = section_keys[section].name;
	return node != NULL && expect_kind(reader, node, NODE_MAPPING, name) && catalogue_count(reader, node, name, LIMIT_PARTS);
}

static void read_memories(struct reader *reader, const struct node *node, struct catalogue *catalogue)
{
	if (!check_section(reader, node, SECTION_MEMORIES))
		return;
	struct part *parts = reader_array(reader, node->count, sizeof *parts);
	if (parts == NULL)
		return;
	for (size_t index = 0; index < node->count; index++)
		read_part(reader, &node->pairs[index], &parts[index]);
	catalogue->parts = parts;
	catalogue->part_count = node->count;
}

static void read_logic_part(struct reader *reader, const struct node_pair *pair, enum logic_kind kind,
                            struct logic_part *part)
{
	const struct node *values[LOGIC_KEY_COUNT] = {NULL};
	const size_t key_count = kind == LOGIC_DECODER ? LOGIC_SETUP : LOGIC_KEY_COUNT;
	*part = (struct logic_part){pair->key->text, kind, FRACTION_ZERO, FRACTION_ZERO, "", "", ""};
	if (!check_printable_name(reader, pair->key, "part") ||
	    !read_mapping(reader, pair->value, "a part", logic_keys, key_count, values))
		return;
	catalogue_text(reader, values[LOGIC_CONDITIONS], "conditions", &part->conditions);
	read_sourced_time(reader, values[LOGIC_DELAY], "delay", &part->delay_s, &part->delay_source);
	read_sourced_time(reader, values[LOGIC_SETUP], "setup", &part->setup_s, &part->setup_source);
}

// Latches, counters and decoders, in this order.
static void read_logic(struct reader *reader, const struct node *const *sections, struct catalogue *catalogue)
{
	static const enum logic_kind kinds[SECTION_COUNT] = {
		[SECTION_LATCHES] = LOGIC_LATCH, [SECTION_COUNTERS] = LOGIC_COUNTER, [SECTION_DECODERS] = LOGIC_DECODER,
	};
	bool good[SECTION_COUNT] = {false};
	size_t count = 0;
	for (size_t section = SECTION_LATCHES; section < SECTION_COUNT; section++) {
		good[section] = check_section(reader, sections[section], section);
		count += good[section] ? sections[section]->count : 0;
	}
	struct logic_part *parts = reader_array(reader, count, sizeof *parts);
	if (parts == NULL)
		return;
	catalogue->logic = parts;
	for (size_t section = SECTION_LATCHES; section < SECTION_COUNT; section++)
		for (size_t index = 0; good[section] && index < sections[section]->count; index++)
			read_logic_part(reader, &sections[section]->pairs[index], kinds[section], &parts[catalogue->logic_count++]);
}

// The first section before `section` that has the name, or `section` itself if none has.
static size_t earlier_section(const struct node *const *sections, size_t section, const char *name)
{
	size_t earlier = 0;
	while (earlier < section && (sections[earlier] == NULL || sections[earlier]->kind != NODE_MAPPING ||
	                             node_value(sections[earlier], name) == NULL))
		earlier++;
	return earlier;
}

// Within a section the document's own check keeps names apart; this one does so between sections.
static void check_names(struct reader *reader, const struct node *const *sections)
{
	for (size_t section = 1; section < SECTION_COUNT; section++) {
		const struct node *node = sections[section];
		const size_t count = node != NULL && node->kind == NODE_MAPPING ? node->count : 0;
		for (size_t index = 0; index < count; index++) {
			const struct node *key = node->pairs[index].key;
			const size_t earlier = earlier_section(sections, section, key->text);
			if (earlier < section)
				diagnose(reader->diagnostics, RULE_DOUBLED_NAME, key->place, "\"%s\" is one of the %s too", SHORT(key->text),
				         section_keys[earlier].name);
		}
	}
}

const struct catalogue *catalogue_read(struct arena *arena, const struct source *source, struct diagnostics *diagnostics)
{
	struct plan plan = {.arena = arena, .source = source}; // the plan's reader wants to know what it reads
	struct reader reader = {.arena = arena, .plan = &plan, .diagnostics = diagnostics};
	const size_t errors_before = diagnostics_error_count(diagnostics);
	const struct node *document = document_parse(arena, source, diagnostics);
	const struct node *sections[SECTION_COUNT];
	if (document == NULL || !read_mapping(&reader, document, "a catalogue", section_keys, SECTION_COUNT, sections))
		return NULL;
	struct catalogue *catalogue = reader_array(&reader, 1, sizeof *catalogue);
	if (catalogue == NULL)
		return NULL;
	read_memories(&reader, sections[SECTION_MEMORIES], catalogue);
	read_logic(&reader, sections, catalogue);
	check_names(&reader, sections);
	return diagnostics_error_count(diagnostics) == errors_before ? catalogue : NULL;
}

const struct catalogue *catalogue_load(struct arena *arena, struct diagnostics *diagnostics)
{
	const struct source *source =
		catalogue_source(arena, "parts.yaml", catalogue_parts, catalogue_parts_length, diagnostics);
	return source != NULL ? catalogue_read(arena, source, diagnostics) : NULL;
}

const struct part *catalogue_part(const struct catalogue *catalogue, const char *name)
{
	for (size_t index = 0; index < catalogue->part_count; index++)
		if (strcmp(catalogue->parts[index].name, name) == 0)
			return &catalogue->parts[index];
	return NULL;
}

const struct logic_part *catalogue_logic(const struct catalogue *catalogue, const char *name)
{
	for (size_t index = 0; index < catalogue->logic_count; index++)
		if (strcmp(catalogue->logic[index].name, name) == 0)
			return &catalogue->logic[index];
	return NULL;
}

size_t part_bytes(const struct part *part)
{
	return ((size_t)1 << part->address_pins) * (part->data_pins / 8);
}
