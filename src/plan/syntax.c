#include "plan/syntax.h"

#include <string.h>

// A problem that fixed words explain: "WANTED, found '…'".
struct phrase {
	const char *problem; // NULL: any problem of the context
	const char *context; // NULL: any
	enum rule rule;
	bool at_opening; // the place is where the context begins, not where the parser gave up
	const char *wanted;
	const char *hint; // or NULL
};

static const char tag_hint[] = "quote a text that begins with '!'";
static const char directive_hint[] = "quote a text that begins with '%'";
static const char bracket_hint[] = "no bracket is open here that this one could close";
static const char space_hint[] = "put a space after ':'";
static const char indent_hint[] = "give keys that belong to one mapping, and items of one list, the same indentation";
static const char tab_hint[] = "indent with spaces only";

static const struct phrase phrases[] = {
	{"found a tab character that violates indentation", NULL, RULE_YAML_SYNTAX, false,
	 "wanted spaces as indentation", tab_hint},
	{"found a tab character where an indentation space is expected", NULL, RULE_YAML_SYNTAX, false,
	 "wanted spaces as indentation", tab_hint},
	{"found unexpected ':'", NULL, RULE_YAML_SYNTAX, false, "wanted a space after ':'",
	 "write a space after the ':' that ends a key, or quote the text"},
	{"mapping keys are not allowed in this context", NULL, RULE_YAML_SYNTAX, false, "wanted a value",
	 "quote a text that begins with '?'"},
	{"block sequence entries are not allowed in this context", NULL, RULE_YAML_SYNTAX, false, "wanted a value",
	 "begin a list on a line of its own, or write it as [a, b, c]; an unwired pin in there is '-'"},
	{"found unexpected document indicator", NULL, RULE_YAML_SYNTAX, false, "wanted a closing quote", NULL},
	{"found unknown escape character", NULL, RULE_YAML_SYNTAX, false, "wanted one of YAML's escapes after '\\'",
	 "write \\\\ for a backslash, or put the text in single quotes"},
	{"did not find expected hexdecimal number", NULL, RULE_YAML_SYNTAX, false,
	 "wanted hexadecimal digits in the escape", NULL},
	{"found invalid Unicode character escape code", NULL, RULE_YAML_SYNTAX, false,
	 "wanted an escape that stands for a character", NULL},
	{NULL, "while scanning an alias", RULE_YAML_SYNTAX, false, "wanted the name of an anchor after '*'",
	 "quote a text that begins with '*'"},
	{NULL, "while scanning an anchor", RULE_YAML_SYNTAX, false, "wanted a name after '&'",
	 "quote a text that begins with '&'"},
	{"found an indentation indicator equal to 0", NULL, RULE_YAML_SYNTAX, false,
	 "wanted an indentation of 1 to 9 after '|' or '>'", NULL},
	{NULL, "while scanning a block scalar", RULE_YAML_SYNTAX, false, "wanted the end of the line after '|' or '>'",
	 "quote a text that begins with '|' or '>'"},
	{NULL, "while scanning a tag", RULE_YAML_TAG, true, "wanted no tag", tag_hint},
	{NULL, "while parsing a tag", RULE_YAML_TAG, true, "wanted no tag", tag_hint},
	{"found undefined tag handle", NULL, RULE_YAML_TAG, true, "wanted no tag", tag_hint},
	{NULL, "while scanning a tag directive", RULE_YAML_TAG, true, "wanted no directive but %YAML", NULL},
	{NULL, "while scanning a %TAG directive", RULE_YAML_TAG, true, "wanted no directive but %YAML", NULL},
	{NULL, "while parsing a %TAG directive", RULE_YAML_TAG, true, "wanted no directive but %YAML", NULL},
	{NULL, "while scanning a directive", RULE_YAML_SYNTAX, true, "wanted no directive but %YAML", directive_hint},
	{NULL, "while scanning a %YAML directive", RULE_YAML_SYNTAX, true, "wanted '%YAML 1.1' or '%YAML 1.2'", NULL},
	{"found duplicate %YAML directive", NULL, RULE_YAML_SYNTAX, true, "wanted %YAML once", NULL},
	{"found incompatible YAML document", NULL, RULE_YAML_SYNTAX, true, "wanted '%YAML 1.1' or '%YAML 1.2'", NULL},
};

static bool is_end_of_line(char byte)
{
	return byte == '\0' || byte == '\n' || byte == '\r';
}

// Bytes from the position to the end of its line or to a comment, without trailing blanks.
static size_t rest_of_line(const struct position *position)
{
	const char *const bytes = position->source->bytes + position->offset;
	const size_t limit = position->source->length - position->offset;
	size_t length = 0;
	size_t used = 0;

	for (; length < limit && !is_end_of_line(bytes[length]); length++) {
		const bool is_blank = bytes[length] == ' ' || bytes[length] == '\t';
		if (bytes[length] == '#' && length > 0 && used < length)
			break;
		if (!is_blank)
			used = length + 1;
	}
	return used;
}

// Words for what stands at the position.
static const char *found_words(char buffer[QUOTATION_BYTES], const struct position *position)
{
	size_t length = rest_of_line(position);
	const char *bytes = position->source->bytes + position->offset;

	if (position->offset == position->source->length)
		return "the end of the file";
	if (position_byte(position) == '\t')
		return "a tab";
	if (length == 0)
		return "the end of the line";
	for (; *bytes == ' '; bytes++)
		length--;
	return quotation(buffer, bytes, length);
}

static bool begins_line(const struct position *position)
{
	size_t offset = position->offset;

	while (offset > 0 && (position->source->bytes[offset - 1] == ' ' || position->source->bytes[offset - 1] == '\t'))
		offset--;
	return offset == 0 || position->source->bytes[offset - 1] == '\n' || position->column == 1;
}

// True if nothing but blanks, line ends and comments follows.
static bool at_end(struct position position)
{
	for (; position.offset < position.source->length; position_step(&position)) {
		if (position_byte(&position) == '#' && begins_line(&position)) {
			while (!is_end_of_line(position_byte(&position)))
				position_step(&position);
		} else if (strchr(" \t\r\n", position_byte(&position)) == NULL) {
			return false;
		}
	}
	return true;
}

static void explain_phrase(struct diagnostics *diagnostics, const struct syntax_fault *fault,
                           const struct phrase *phrase)
{
	char buffer[QUOTATION_BYTES];
	const struct position *const position = phrase->at_opening ? &fault->opened : &fault->found;

	diagnose(diagnostics, phrase->rule, position_place(position), "%s, found %s", phrase->wanted,
	         found_words(buffer, position));
	if (phrase->hint != NULL)
		diagnose_hint(diagnostics, "%s", phrase->hint);
}

static void explain_quote(struct diagnostics *diagnostics, const struct syntax_fault *fault)
{
	diagnose(diagnostics, RULE_YAML_SYNTAX, position_place(&fault->opened),
	         "wanted a closing quote to this one, found the end of the file");
}

// The offset of the first ':' from the position to the end of its line if no blank follows it, as in "cell:16"; else 0.
static size_t glued_colon(const struct position *position)
{
	const char *const bytes = position->source->bytes;
	const size_t end = position->offset + rest_of_line(position);
	for (size_t offset = position->offset; offset + 1 < end; offset++)
		if (bytes[offset] == ':')
			return bytes[offset + 1] == ' ' || bytes[offset + 1] == '\t' ? 0 : offset;
	return 0;
}

static void report_missing_colon(struct diagnostics *diagnostics, const struct position *key)
{
	char buffer[QUOTATION_BYTES];

	diagnose(diagnostics, RULE_YAML_SYNTAX, position_place(key), "wanted ':' after the key %s", found_words(buffer, key));
	if (glued_colon(key) > 0)
		diagnose_hint(diagnostics, "%s", space_hint);
}

static void explain_key(struct diagnostics *diagnostics, const struct syntax_fault *fault)
{
	report_missing_colon(diagnostics, &fault->opened);
}

// True if the line holds another ": " before the position, so that the position's is a second one.
static bool has_earlier_colon(const struct position *position)
{
	const char *const bytes = position->source->bytes;
	size_t offset = position->offset;

	while (offset > 0 && bytes[offset - 1] != '\n') {
		offset--;
		if (bytes[offset] == ':' && offset + 1 < position->offset &&
		    (bytes[offset + 1] == ' ' || bytes[offset + 1] == '\t'))
			return true;
	}
	return false;
}

static bool begins_item(struct position position)
{
	if (position_byte(&position) != '-')
		return false;
	position_step(&position);
	return position_byte(&position) == ' ';
}

// The first character of the position's line that is neither a blank nor a list's '-': where its key begins.
static struct position line_content(struct position position)
{
	const char *const bytes = position.source->bytes;
	while (position.offset > 0 && position.column > 1) {
		position.offset--;
		if (((unsigned char)bytes[position.offset] & 0xC0u) != 0x80u) // a character's first byte
			position.column--;
	}
	while (position_byte(&position) == ' ' || position_byte(&position) == '\t' || begins_item(position))
		position_step(&position);
	return position;
}

static bool has_colon(const struct position *position)
{
	return memchr(position->source->bytes + position->offset, ':', rest_of_line(position)) != NULL;
}

// Where the content of the nearest line above begins that has any and is no comment. False if there is none.
static bool content_above(const struct position *position, struct position *result)
{
	struct position walk = position_start(position->source);
	bool found = false;
	while (walk.line < position->line) {
		const struct position content = line_content(walk);
		if (!is_end_of_line(position_byte(&content)) && position_byte(&content) != '#') {
			*result = content;
			found = true;
		}
		for (const uint32_t line = walk.line; walk.line == line;)
			position_step(&walk);
	}
	return found;
}

// A key where the line above leaves none: that line's value, or one of the two indentations, is wrong.
static void explain_misplaced_key(struct diagnostics *diagnostics, const struct position *key)
{
	struct position above;
	const bool found = content_above(key, &above);
	if (found && (glued_colon(&above) > 0 || (above.column < key->column && !has_colon(&above)))) {
		report_missing_colon(diagnostics, &above);
	} else if (found && above.column != key->column) {
		diagnose(diagnostics, RULE_YAML_SYNTAX, position_place(key),
		         "wanted a key in the column of the line above, %lu, found one in column %lu", (unsigned long)above.column,
		         (unsigned long)key->column);
		diagnose_also(diagnostics, position_place(&above), "the line above begins here");
		diagnose_hint(diagnostics, "one of the two is indented differently from its neighbours");
	} else {
		diagnose(diagnostics, RULE_YAML_SYNTAX, position_place(key),
		         "wanted more of the value that a line above began, found a key");
		diagnose_hint(diagnostics, "end the line above with ':' if the key is part of it; quote a value that has ': ' in it");
	}
}

static void explain_colon(struct diagnostics *diagnostics, const struct syntax_fault *fault)
{
	if (has_earlier_colon(&fault->found)) {
		diagnose(diagnostics, RULE_YAML_SYNTAX, position_place(&fault->found),
		         "wanted one key on a line, found a second ':'");
		diagnose_hint(diagnostics, "quote a value that has ': ' in it, or write a mapping as {key: value}");
	} else {
		const struct position key = line_content(fault->found);
		explain_misplaced_key(diagnostics, &key);
	}
}

static void explain_missing_value(struct diagnostics *diagnostics, const struct syntax_fault *fault)
{
	char buffer[QUOTATION_BYTES];
	const char byte = position_byte(&fault->found);

	diagnose(diagnostics, RULE_YAML_SYNTAX, position_place(&fault->found), "wanted a value, found %s",
	         found_words(buffer, &fault->found));
	if (byte == '\0')
		diagnose_hint(diagnostics, "is a ']' or a '}' missing further up?");
	else if (byte == '-')
		diagnose_hint(diagnostics, "in a list in brackets, an unwired pin is a '-' directly before ',' or ']', "
		                           "or a quoted one");
	else if (byte == ',')
		diagnose_hint(diagnostics, "between two commas there is a value; an unwired pin is '-'");
	else if (byte == ']' || byte == '}')
		diagnose_hint(diagnostics, "%s", bracket_hint);
}

static void explain_character(struct diagnostics *diagnostics, const struct syntax_fault *fault)
{
	char buffer[QUOTATION_BYTES];

	if (position_byte(&fault->found) == '\t') {
		diagnose(diagnostics, RULE_YAML_SYNTAX, position_place(&fault->found),
		         "wanted spaces as indentation, found a tab");
		diagnose_hint(diagnostics, "%s", tab_hint);
	} else {
		const char *const bytes = fault->found.source->bytes + fault->found.offset;
		const size_t length = fault->found.source->length - fault->found.offset;
		const char *const character = quotation(buffer, bytes, character_bytes(bytes, length));
		diagnose(diagnostics, RULE_YAML_SYNTAX, position_place(&fault->found),
		         "wanted a key or a value, found %s, with which none can begin", character);
		diagnose_hint(diagnostics, "quote a text that begins with %s", character);
	}
}

static void explain_bracket(struct diagnostics *diagnostics, const struct syntax_fault *fault)
{
	char buffer[QUOTATION_BYTES];
	const bool is_list = strcmp(fault->problem, "did not find expected ',' or ']'") == 0;
	const char open = is_list ? '[' : '{';
	const char close = is_list ? ']' : '}';

	if (at_end(fault->found)) {
		diagnose(diagnostics, RULE_YAML_SYNTAX, position_place(&fault->opened),
		         "wanted '%c' to close this '%c', found the end of the file", close, open);
		return;
	}
	diagnose(diagnostics, RULE_YAML_SYNTAX, position_place(&fault->found), "wanted ',' or '%c', found %s", close,
	         found_words(buffer, &fault->found));
	diagnose_also(diagnostics, position_place(&fault->opened), "the '%c' is here", open);
	if (fault->found.line > fault->opened.line)
		diagnose_hint(diagnostics, "is a '%c' or a ',' missing further up?", close);
	else if (position_byte(&fault->found) == ':')
		diagnose_hint(diagnostics, "is a ',' missing before the key, or are quotes missing around the value?");
}

// A block mapping or list goes on with something else than a key or a '-' in its column.
static void explain_indentation(struct diagnostics *diagnostics, const struct syntax_fault *fault)
{
	char buffer[QUOTATION_BYTES];
	const bool is_list = strcmp(fault->problem, "did not find expected '-' indicator") == 0;
	const struct place place = position_place(&fault->found);
	const char *const found = found_words(buffer, &fault->found);

	if (!begins_line(&fault->found)) {
		diagnose(diagnostics, RULE_YAML_SYNTAX, place, "wanted the end of the line after the value, found %s",
		         found);
		if (strchr("]}", position_byte(&fault->found)) != NULL)
			diagnose_hint(diagnostics, "%s", bracket_hint);
		else
			diagnose_hint(diagnostics, "put the whole value in quotes if all of it is meant");
	} else if (fault->found.column != fault->opened.column) {
		diagnose(diagnostics, RULE_YAML_SYNTAX, place, "wanted %s in column %lu, found %s in column %lu",
		         is_list ? "'- '" : "a key", (unsigned long)fault->opened.column, found,
		         (unsigned long)fault->found.column);
		diagnose_also(diagnostics, position_place(&fault->opened), "the %s begins here",
		              is_list ? "list" : "mapping");
		diagnose_hint(diagnostics, "%s", indent_hint);
	} else {
		diagnose(diagnostics, RULE_YAML_SYNTAX, place, "wanted %s, found %s", is_list ? "'- '" : "a key", found);
		diagnose_also(diagnostics, position_place(&fault->opened), "the %s begins here",
		              is_list ? "list" : "mapping");
	}
}

static void explain_rest(struct diagnostics *diagnostics, const struct syntax_fault *fault)
{
	char buffer[QUOTATION_BYTES];

	if (fault->document_closed)
		diagnose(diagnostics, RULE_YAML_SECOND_DOCUMENT, position_place(&fault->found),
		         "wanted the end of the file after '...', found a second document");
	else
		diagnose(diagnostics, RULE_YAML_SYNTAX, position_place(&fault->found),
		         "wanted the end of the file after its value, found %s",
		         found_words(buffer, &fault->found));
}

struct explanation {
	const char *problem;
	void (*explain)(struct diagnostics *diagnostics, const struct syntax_fault *fault);
};

static const struct explanation explanations[] = {
	{"could not find expected ':'", explain_key},
	{"found unexpected end of stream", explain_quote},
	{"mapping values are not allowed in this context", explain_colon},
	{"did not find expected node content", explain_missing_value},
	{"found character that cannot start any token", explain_character},
	{"did not find expected ',' or ']'", explain_bracket},
	{"did not find expected ',' or '}'", explain_bracket},
	{"did not find expected key", explain_indentation},
	{"did not find expected '-' indicator", explain_indentation},
	{"did not find expected <document start>", explain_rest},
};

static bool phrase_fits(const struct phrase *phrase, const struct syntax_fault *fault)
{
	if (phrase->problem != NULL && strcmp(phrase->problem, fault->problem) != 0)
		return false;
	return phrase->context == NULL || (fault->context != NULL && strcmp(phrase->context, fault->context) == 0);
}

void syntax_diagnose(struct diagnostics *diagnostics, const struct syntax_fault *fault)
{
	for (size_t index = 0; index < sizeof(explanations) / sizeof(explanations[0]); index++) {
		if (strcmp(explanations[index].problem, fault->problem) == 0) {
			explanations[index].explain(diagnostics, fault);
			return;
		}
	}
	for (size_t index = 0; index < sizeof(phrases) / sizeof(phrases[0]); index++) {
		if (phrase_fits(&phrases[index], fault)) {
			explain_phrase(diagnostics, fault, &phrases[index]);
			return;
		}
	}
	diagnose(diagnostics, RULE_YAML_SYNTAX, position_place(&fault->found), "%s%s%s", fault->problem,
	         fault->context == NULL ? "" : " ", fault->context == NULL ? "" : fault->context);
}
