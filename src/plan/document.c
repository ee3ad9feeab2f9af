#include "plan/document.h"

#include <stdbool.h>
#include <string.h>

#include <yaml.h>

#include "base/arena.h"
#include "plan/characters.h"
#include "plan/syntax.h"
#include "plan/tree.h"

// Hands the parser's events to the tree.
struct reader {
	const struct source *source;
	struct diagnostics *diagnostics;
	struct tree *tree;
	struct position position; // of the last event
	bool document_closed;     // by "..."
};

// Functions that return bool say whether reading can go on.

static bool out_of_memory(struct reader *reader)
{
	diagnose(reader->diagnostics, RULE_OUT_OF_MEMORY, (struct place){.source = reader->source},
	         "wanted memory for reading the plan, found none");
	return false;
}

// The anchor and the tag that stand before a node's content.
struct properties {
	struct place content; // or where the event ends, if that comes first
	struct position tag;
	bool has_tag;
};

static void skip_word(struct position *position)
{
	while (position_byte(position) != '\0' && strchr(" \t\r\n", position_byte(position)) == NULL)
		position_step(position);
}

static void skip_comment(struct position *position)
{
	while (position_byte(position) != '\0' && position_byte(position) != '\n')
		position_step(position);
}

// Walks over the properties from the event's start to its content, which begins before the character `end`.
static struct properties find_properties(struct position position, size_t end)
{
	struct properties properties = {.has_tag = false};

	while (position.index < end) {
		const char byte = position_byte(&position);
		if (byte == '!' && !properties.has_tag) {
			properties.has_tag = true;
			properties.tag = position;
		}
		if (byte == '!' || byte == '&')
			skip_word(&position);
		else if (byte == '#')
			skip_comment(&position);
		else if (byte != '\0' && strchr(" \t\r\n", byte) != NULL)
			position_step(&position);
		else
			break;
	}
	properties.content = position_place(&position);
	return properties;
}

static void diagnose_tag(struct reader *reader, const struct position *position)
{
	struct position end = *position;
	char buffer[QUOTATION_BYTES];

	skip_word(&end);
	diagnose(reader->diagnostics, RULE_YAML_TAG, position_place(position), "wanted no tag, found %s",
	         quotation(buffer, reader->source->bytes + position->offset, end.offset - position->offset));
	diagnose_hint(reader->diagnostics, "quote a text that begins with '!'");
}

// An absent value has no content; it may still have an anchor.
static bool is_absent(const yaml_event_t *event)
{
	return event->type == YAML_SCALAR_EVENT && event->data.scalar.style == YAML_PLAIN_SCALAR_STYLE &&
	       event->data.scalar.length == 0;
}

// The place of a node; a tag, if there is one, is reported.
static struct place node_place(struct reader *reader, const yaml_event_t *event, const yaml_char_t *anchor,
                               const yaml_char_t *tag)
{
	const struct place start = position_place(&reader->position);

	if (anchor == NULL && tag == NULL)
		return start;
	const struct properties properties = find_properties(reader->position, event->end_mark.index);
	if (tag != NULL || properties.has_tag)
		diagnose_tag(reader, properties.has_tag ? &properties.tag : &reader->position);
	return is_absent(event) ? start : properties.content;
}

// Escapes of double quotes can bring in what the text itself may not hold.
static void check_escapes(struct reader *reader, const yaml_event_t *event, struct place place)
{
	uint32_t character = 0;

	if (event->data.scalar.style == YAML_DOUBLE_QUOTED_SCALAR_STYLE &&
	    characters_forbidden((const char *)event->data.scalar.value, event->data.scalar.length, &character))
		diagnose(reader->diagnostics, RULE_FILE_BINARY, place,
		         "wanted text, found an escape that stands for the control character U+%04X", (unsigned)character);
}

static void check_merge_key(struct reader *reader, const yaml_event_t *event, struct place place)
{
	if (!tree_wants_key(reader->tree) || event->data.scalar.style != YAML_PLAIN_SCALAR_STYLE ||
	    strcmp((const char *)event->data.scalar.value, "<<") != 0)
		return;
	diagnose(reader->diagnostics, RULE_YAML_MERGE_KEY, place, "wanted a key, found the merge key '<<'");
	diagnose_hint(reader->diagnostics, "write the keys out; a line type takes another's regions with 'like'");
}

static bool take_scalar(struct reader *reader, const yaml_event_t *event)
{
	const struct place place = node_place(reader, event, event->data.scalar.anchor, event->data.scalar.tag);

	check_escapes(reader, event, place);
	check_merge_key(reader, event, place);
	return tree_add_scalar(reader->tree, place, (const char *)event->data.scalar.value, event->data.scalar.length,
	                       (const char *)event->data.scalar.anchor);
}

static bool take_list(struct reader *reader, const yaml_event_t *event)
{
	const yaml_char_t *const anchor = event->data.sequence_start.anchor;
	const struct place place = node_place(reader, event, anchor, event->data.sequence_start.tag);

	return tree_open(reader->tree, NODE_LIST, place, (const char *)anchor);
}

static bool take_mapping(struct reader *reader, const yaml_event_t *event)
{
	const yaml_char_t *const anchor = event->data.mapping_start.anchor;
	const struct place place = node_place(reader, event, anchor, event->data.mapping_start.tag);

	return tree_open(reader->tree, NODE_MAPPING, place, (const char *)anchor);
}

// True at the start of a line that begins with the word.
static bool line_begins(const struct position *position, const char *word)
{
	const size_t length = strlen(word);

	return position->column == 1 && position->source->length - position->offset >= length &&
	       memcmp(position->source->bytes + position->offset, word, length) == 0;
}

// Looks for %TAG between documents, from the position on. libyaml compares each of these directives with all before it, and
// many would take it minutes; so none may get there. True if there is none.
static bool check_directives(struct reader *reader, struct position position)
{
	while (position_byte(&position) != '\0') {
		const char byte = position_byte(&position);
		if (line_begins(&position, "%TAG")) {
			diagnose(reader->diagnostics, RULE_YAML_TAG, position_place(&position),
			         "wanted no directive but %%YAML, found %%TAG");
			return false;
		}
		if (byte == '#' || line_begins(&position, "%"))
			skip_comment(&position);
		else if (line_begins(&position, "..."))
			skip_word(&position);
		else if (strchr(" \t\r\n", byte) != NULL)
			position_step(&position);
		else
			break;
	}
	return true;
}

static bool start_document(struct reader *reader)
{
	const struct node *const root = tree_root(reader->tree);

	if (root != NULL) {
		diagnose(reader->diagnostics, RULE_YAML_SECOND_DOCUMENT, position_place(&reader->position),
		         "wanted one document, found the start of a second");
		diagnose_also(reader->diagnostics, root->place, "the first begins here");
		return false;
	}
	return true;
}

static bool end_document(struct reader *reader, const yaml_event_t *event)
{
	reader->document_closed = !event->data.document_end.implicit;
	position_seek(&reader->position, event->end_mark.index);
	return check_directives(reader, reader->position);
}

static bool take_event(struct reader *reader, const yaml_event_t *event)
{
	position_seek(&reader->position, event->start_mark.index);
	switch (event->type) {
	case YAML_DOCUMENT_START_EVENT:
		return start_document(reader);
	case YAML_DOCUMENT_END_EVENT:
		return end_document(reader, event);
	case YAML_ALIAS_EVENT:
		return tree_add_alias(reader->tree, position_place(&reader->position),
		                      (const char *)event->data.alias.anchor);
	case YAML_SCALAR_EVENT:
		return take_scalar(reader, event);
	case YAML_SEQUENCE_START_EVENT:
		return take_list(reader, event);
	case YAML_MAPPING_START_EVENT:
		return take_mapping(reader, event);
	case YAML_SEQUENCE_END_EVENT:
	case YAML_MAPPING_END_EVENT:
		return tree_close(reader->tree);
	case YAML_NO_EVENT:
	case YAML_STREAM_START_EVENT:
	case YAML_STREAM_END_EVENT:
		break;
	}
	return true;
}

static void diagnose_parser(struct reader *reader, const yaml_parser_t *parser)
{
	if (parser->error == YAML_MEMORY_ERROR || parser->problem == NULL) {
		out_of_memory(reader);
		return;
	}
	struct syntax_fault fault = {.problem = parser->problem, .context = parser->context,
	                             .document_closed = reader->document_closed};
	fault.found = reader->position;
	position_seek(&fault.found, parser->problem_mark.index);
	fault.opened = fault.found;
	if (parser->context != NULL)
		position_seek(&fault.opened, parser->context_mark.index);
	syntax_diagnose(reader->diagnostics, &fault);
}

static void take_events(struct reader *reader, yaml_parser_t *parser)
{
	bool goes_on = true;

	while (goes_on) {
		yaml_event_t event;
		if (!yaml_parser_parse(parser, &event)) {
			diagnose_parser(reader, parser);
			return;
		}
		goes_on = take_event(reader, &event) && event.type != YAML_STREAM_END_EVENT;
		yaml_event_delete(&event);
	}
}

static void read_events(struct reader *reader)
{
	const size_t start = reader->position.offset;
	yaml_parser_t parser;

	if (!check_directives(reader, reader->position))
		return;
	if (!yaml_parser_initialize(&parser)) {
		out_of_memory(reader);
		return;
	}
	yaml_parser_set_encoding(&parser, YAML_UTF8_ENCODING);
	yaml_parser_set_input_string(&parser, (const unsigned char *)reader->source->bytes + start,
	                             reader->source->length - start);
	take_events(reader, &parser);
	yaml_parser_delete(&parser);
}

// The root of what could be read, NULL if there is none.
static const struct node *read_tree(struct arena *arena, const struct source *source, struct diagnostics *diagnostics)
{
	struct reader reader = {.source = source, .diagnostics = diagnostics, .position = position_start(source)};
	struct arena *const scratch = arena_create();
	const struct node *root = NULL;

	if (scratch != NULL)
		reader.tree = tree_create(arena, scratch, diagnostics);
	if (reader.tree == NULL) {
		out_of_memory(&reader);
	} else {
		read_events(&reader);
		root = tree_root(reader.tree);
	}
	arena_destroy(scratch);
	return root;
}

static bool check_file(const struct source *source, struct diagnostics *diagnostics)
{
	const struct place whole = {.source = source};

	if (source->length > DOCUMENT_LIMIT_BYTES) {
		diagnose(diagnostics, RULE_FILE_TOO_LARGE, whole, "wanted at most %d bytes, found %zu", DOCUMENT_LIMIT_BYTES,
		         source->length);
		return false;
	}
	if (source->bytes == NULL || source->length == 0) {
		diagnose(diagnostics, RULE_FILE_EMPTY, whole, "wanted a plan, found an empty file");
		return false;
	}
	return characters_check(source, diagnostics);
}

// No document at all, or one of "---" alone.
static bool is_empty(const struct node *root)
{
	return root == NULL || (root->kind == NODE_SCALAR && root->length == 0);
}

const struct node *document_parse(struct arena *arena, const struct source *source, struct diagnostics *diagnostics)
{
	const size_t errors = diagnostics_error_count(diagnostics);

	if (!check_file(source, diagnostics))
		return NULL;
	const struct node *const root = read_tree(arena, source, diagnostics);
	if (diagnostics_error_count(diagnostics) == errors && is_empty(root))
		diagnose(diagnostics, RULE_FILE_EMPTY, (struct place){.source = source},
		         "wanted a plan, found nothing but comments and blanks");
	return diagnostics_error_count(diagnostics) == errors ? root : NULL;
}

const struct node *node_value(const struct node *mapping, const char *key)
{
	const size_t length = strlen(key);

	for (size_t index = 0; index < mapping->count; index++) {
		const struct node *const candidate = mapping->pairs[index].key;
		if (candidate->length == length && memcmp(candidate->text, key, length) == 0)
			return mapping->pairs[index].value;
	}
	return NULL;
}
