#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "parsing.h"

static struct parsed *parse_good(const char *text)
{
	struct parsed *const parsed = parse_string(text);

	if (parsed->root == NULL)
		fail_msg("%s", text_string(&parsed->printed));
	return parsed;
}

static void assert_place(const struct parsed *parsed, const struct node *node, unsigned line, unsigned column)
{
	assert_ptr_equal(node->place.source, &parsed->source);
	assert_int_equal(node->place.line, line);
	assert_int_equal(node->place.column, column);
}

static void assert_scalar(const struct node *node, const char *text)
{
	assert_non_null(node);
	assert_int_equal(node->kind, NODE_SCALAR);
	assert_string_equal(node->text, text);
	assert_int_equal(node->length, strlen(text));
}

static void gives_the_nodes(void **state)
{
	struct parsed *const parsed = parse_good(
		"name: tide-board\n"
		"clock:\n"
		"  master: 315/22 MHz # exact\n"
		"  phase:\n"
		"blocks:\n"
		"  - {repeat: 2, line: \"high water\"}\n"
		"  - [-, 'it''s', -]\n"
		"empty: {}\n"
		"none: []\n");
	const struct node *const root = parsed->root;
	const struct node *const clock = node_value(root, "clock");
	const struct node *const blocks = node_value(root, "blocks");

	(void)state;
	assert_int_equal(root->kind, NODE_MAPPING);
	assert_int_equal(root->count, 5);
	assert_scalar(root->pairs[0].key, "name");
	assert_scalar(root->pairs[0].value, "tide-board");
	assert_place(parsed, root, 1, 1);
	assert_place(parsed, root->pairs[0].value, 1, 7);
	assert_int_equal(clock->kind, NODE_MAPPING);
	assert_place(parsed, clock, 3, 3);
	assert_scalar(node_value(clock, "master"), "315/22 MHz");
	assert_place(parsed, node_value(clock, "master"), 3, 11);
	assert_scalar(node_value(clock, "phase"), "");
	assert_int_equal(blocks->kind, NODE_LIST);
	assert_int_equal(blocks->count, 2);
	assert_place(parsed, blocks, 6, 3);
	assert_place(parsed, blocks->items[0], 6, 5);
	assert_scalar(node_value(blocks->items[0], "line"), "high water");
	assert_place(parsed, node_value(blocks->items[0], "line"), 6, 23);
	assert_int_equal(blocks->items[1]->count, 3);
	assert_scalar(blocks->items[1]->items[0], "-");
	assert_scalar(blocks->items[1]->items[1], "it's");
	assert_int_equal(node_value(root, "empty")->kind, NODE_MAPPING);
	assert_int_equal(node_value(root, "empty")->count, 0);
	assert_int_equal(node_value(root, "none")->kind, NODE_LIST);
	assert_int_equal(node_value(root, "none")->count, 0);
	assert_null(node_value(root, "nam"));
	assert_null(node_value(root, "names"));
	parsed_release(parsed);
}

static void gives_scalars_of_all_styles(void **state)
{
	struct parsed *const parsed = parse_good(
		"- plain text\n"
		"- 'single'\n"
		"- \"double \\u00e9\\t\\\"\"\n"
		"- |\n"
		"  two\n"
		"  lines\n"
		"- >-\n"
		"  folded\n"
		"  lines\n"
		"-\n"
		"- ''\n"
		"- ~\n");
	const struct node *const *const items = parsed->root->items;

	(void)state;
	assert_int_equal(parsed->root->kind, NODE_LIST);
	assert_int_equal(parsed->root->count, 8);
	assert_scalar(items[0], "plain text");
	assert_scalar(items[1], "single");
	assert_scalar(items[2], "double \xC3\xA9\t\"");
	assert_scalar(items[3], "two\nlines\n");
	assert_scalar(items[4], "folded lines");
	assert_scalar(items[5], "");
	assert_scalar(items[6], "");
	assert_scalar(items[7], "~");
	parsed_release(parsed);
}

static void shares_aliased_nodes(void **state)
{
	struct parsed *const parsed = parse_good(
		"porch: &porch\n"
		"  {cells: 2}\n"
		"key: &key   # named\n"
		"  sync\n"
		"nothing: &nothing\n"
		"block: &block\n"
		"\n"
		"  cells: 3\n"
		"again: [*porch, *block, *nothing]\n"
		"*key : 1\n"
		"later: &porch tide\n"
		"last: *porch\n");
	const struct node *const root = parsed->root;
	const struct node *const again = node_value(root, "again");

	(void)state;
	assert_int_equal(root->count, 8);
	assert_ptr_equal(again->items[0], node_value(root, "porch"));
	assert_ptr_equal(again->items[1], node_value(root, "block"));
	assert_ptr_equal(again->items[2], node_value(root, "nothing"));
	// Places are of what the anchor stands before.
	assert_place(parsed, node_value(root, "porch"), 2, 3);
	assert_place(parsed, node_value(root, "key"), 4, 3);
	assert_place(parsed, node_value(root, "nothing"), 5, 10);
	assert_place(parsed, node_value(root, "block"), 8, 3);
	// An alias as key has a place of its own.
	assert_scalar(node_value(root, "sync"), "1");
	assert_place(parsed, root->pairs[5].key, 10, 1);
	// The anchor that was defined last counts.
	assert_scalar(node_value(root, "last"), "tide");
	parsed_release(parsed);
}

static void takes_quoted_merge_key_as_text(void **state)
{
	struct parsed *const parsed = parse_good("'<<': [<<]\nx: <<\n");

	(void)state;
	assert_scalar(node_value(parsed->root, "<<")->items[0], "<<");
	assert_scalar(node_value(parsed->root, "x"), "<<");
	parsed_release(parsed);
}

static void counts_columns_in_characters(void **state)
{
	// Two, three and four bytes for a character.
	struct parsed *const parsed = parse_good("{\xC3\xA9: \xE2\x82\xAC, \xF0\x9D\x84\x9E: x,\n \xC3\xA9\xC3\xA9: y}\n");

	(void)state;
	assert_place(parsed, parsed->root->pairs[0].value, 1, 5);
	assert_place(parsed, parsed->root->pairs[1].key, 1, 8);
	assert_place(parsed, parsed->root->pairs[1].value, 1, 11);
	assert_place(parsed, parsed->root->pairs[2].value, 2, 6);
	assert_scalar(node_value(parsed->root, "\xF0\x9D\x84\x9E"), "x");
	parsed_release(parsed);
}

static void takes_byte_order_mark_and_line_ends(void **state)
{
	struct parsed *const parsed = parse_good("\xEF\xBB\xBFname: a\r\n# rem\xC3\xA4rk\r\n\r\nnote: |\r\n  b\r\n  c\r\nend: d");
	const struct node *const root = parsed->root;

	(void)state;
	assert_place(parsed, root, 1, 1);
	assert_place(parsed, node_value(root, "name"), 1, 7);
	assert_scalar(node_value(root, "name"), "a");
	assert_scalar(node_value(root, "note"), "b\nc\n");
	assert_place(parsed, node_value(root, "end"), 7, 6);
	parsed_release(parsed);
}

static void takes_directives_and_document_marks(void **state)
{
	struct parsed *const parsed = parse_good("%YAML 1.2\n---\nname: a\n...\n# end\n");

	(void)state;
	assert_scalar(node_value(parsed->root, "name"), "a");
	assert_place(parsed, node_value(parsed->root, "name"), 3, 7);
	parsed_release(parsed);
	parsed_release(parse_good("%YAML 1.1\n--- {a: 1}\n"));
	parsed_release(parse_good("--- 'a\n%TAG ! x'\n"));
}

// ---- Limits ----

// Exactly one diagnostic, of that rule; RULE_COUNT: none. Releases the text.
static void assert_outcome(struct text *text, enum rule rule)
{
	assert_false(text->failed);
	struct parsed *const parsed = parse_bytes(text->bytes, text->length);
	const size_t expected = rule == RULE_COUNT ? 0 : 1;

	if (diagnostics_count(parsed->diagnostics) != expected)
		fail_msg("%zu diagnostics: %.500s", diagnostics_count(parsed->diagnostics), text_string(&parsed->printed));
	if (expected == 1)
		assert_string_equal(rule_row(diagnostics_rule(parsed->diagnostics, 0))->id, rule_row(rule)->id);
	parsed_release(parsed);
	text_release(text);
}

static void put_repeated_text(struct text *text, const char *piece, size_t count)
{
	for (size_t index = 0; index < count; index++)
		text_put(text, piece);
}

static void limits_the_levels(void **state)
{
	struct text text = {0};

	(void)state;
	text_put_repeated(&text, '[', 32);
	text_put_repeated(&text, ']', 32);
	assert_outcome(&text, RULE_COUNT);
	text_put_repeated(&text, '[', 33);
	text_put_repeated(&text, ']', 33);
	assert_outcome(&text, RULE_YAML_TOO_DEEP);
	for (unsigned level = 0; level < 33; level++) {
		text_put_repeated(&text, ' ', level);
		text_put(&text, "a:\n");
	}
	assert_outcome(&text, RULE_YAML_TOO_DEEP);
	// A level costs one byte: the whole file, with nothing that closes.
	text_put_repeated(&text, '[', DOCUMENT_LIMIT_BYTES);
	assert_outcome(&text, RULE_YAML_TOO_DEEP);
	put_repeated_text(&text, "{a: ", DOCUMENT_LIMIT_BYTES / 4);
	assert_outcome(&text, RULE_YAML_TOO_DEEP);
	put_repeated_text(&text, "- ", DOCUMENT_LIMIT_BYTES / 2);
	assert_outcome(&text, RULE_YAML_TOO_DEEP);
}

// The root's mapping, then 15 levels in &a; in &b, 15 levels around *a, or 16.
static void put_nested_anchors(struct text *text, size_t outer)
{
	text_put(text, "a: &a ");
	text_put_repeated(text, '[', 15);
	text_put_repeated(text, ']', 15);
	text_put(text, "\nb: &b ");
	text_put_repeated(text, '[', outer);
	text_put(text, "*a");
	text_put_repeated(text, ']', outer);
	text_put(text, "\n");
}

static void limits_the_levels_through_aliases(void **state)
{
	struct text text = {0};

	(void)state;
	put_nested_anchors(&text, 16);                // 1 + 16 + 15
	assert_outcome(&text, RULE_COUNT);
	put_nested_anchors(&text, 17);
	assert_outcome(&text, RULE_YAML_TOO_DEEP);
	put_nested_anchors(&text, 15);
	text_put(&text, "c: [*b]\n");                 // 1 + 1 + 15 + 15
	assert_outcome(&text, RULE_COUNT);
	put_nested_anchors(&text, 15);
	text_put(&text, "c: [{x: *b}]\n");            // 1 + 2 + 15 + 15
	assert_outcome(&text, RULE_YAML_TOO_DEEP);
}

// A list of `count` scalars is count + 1 nodes.
static void put_list(struct text *text, size_t count)
{
	text_put(text, "[");
	for (size_t index = 0; index < count; index++)
		text_put(text, "x,");
	text_put(text, "]");
}

static void limits_the_nodes(void **state)
{
	struct text text = {0};

	(void)state;
	put_list(&text, DOCUMENT_LIMIT_NODES - 1);
	assert_outcome(&text, RULE_COUNT);
	put_list(&text, DOCUMENT_LIMIT_NODES);
	assert_outcome(&text, RULE_YAML_TOO_MANY_NODES);
}

// Mapping, two keys, list of 1 + 9,999, list of aliases: 1 + 2 + 10,000 + 1 + aliases * 10,000 + scalars.
static void put_aliased_list(struct text *text, size_t scalars)
{
	text_put(text, "a: &a ");
	put_list(text, 9999);
	text_put(text, "\nb: [");
	for (size_t index = 0; index < 8; index++)
		text_put(text, "*a, ");
	for (size_t index = 0; index < scalars; index++)
		text_put(text, "y, ");
	text_put(text, "]\n");
}

static void limits_the_nodes_through_aliases(void **state)
{
	struct text text = {0};

	(void)state;
	put_aliased_list(&text, 9996); // 4 + 90,000 + 9,996
	assert_outcome(&text, RULE_COUNT);
	put_aliased_list(&text, 9997);
	assert_outcome(&text, RULE_YAML_TOO_MANY_NODES);
}

// Mapping and two keys, a text of so many bytes, a list of aliases of it or of a list that holds it.
static void put_aliased_text(struct text *text, size_t bytes, const char *open, const char *close, size_t aliases)
{
	text_printf(text, "a: &a %s", open);
	text_put_repeated(text, 'x', bytes);
	text_printf(text, "%s\nb: [", close);
	put_repeated_text(text, "*a, ", aliases);
	text_put(text, "]\n");
}

// An alias of a list of two aliases, each of which counts 201.
static void put_nested_texts(struct text *text, size_t aliases)
{
	put_aliased_text(text, 64 * 200, "", "", 0);
	text_put(text, "c: &c [*a, *a]\nd: [");
	put_repeated_text(text, "*c, ", aliases);
	text_put(text, "]\n");
}

static void limits_the_texts_of_aliases(void **state)
{
	struct text text = {0};

	(void)state;
	put_aliased_text(&text, 63, "", "", 99995);             // 5 + 99,995
	assert_outcome(&text, RULE_COUNT);
	put_aliased_text(&text, 64 * 32, "", "", 3030);         // 5 + 3,030 * 33
	assert_outcome(&text, RULE_COUNT);
	put_aliased_text(&text, 64 * 32, "", "", 3031);
	assert_outcome(&text, RULE_YAML_TOO_MANY_NODES);
	put_aliased_text(&text, 64 * 31, "[", "]", 3030);       // 6 + 3,030 * (2 + 31)
	assert_outcome(&text, RULE_COUNT);
	put_aliased_text(&text, 64 * 31, "[", "]", 3031);
	assert_outcome(&text, RULE_YAML_TOO_MANY_NODES);
	// What an alias counts is counted again where that is repeated: 5 + 1 + 403 + 2 + 247 * 403.
	put_nested_texts(&text, 247);
	assert_outcome(&text, RULE_COUNT);
	put_nested_texts(&text, 248);
	assert_outcome(&text, RULE_YAML_TOO_MANY_NODES);
}

// Ten to the power of 30 nodes.
static void stands_an_alias_bomb(void **state)
{
	struct text text = {0};

	(void)state;
	text_put(&text, "- &a0 [x, x, x, x, x, x, x, x, x, x]\n");
	for (unsigned level = 1; level < 30; level++) {
		text_printf(&text, "- &a%u [", level);
		for (unsigned index = 0; index < 10; index++)
			text_printf(&text, "*a%u, ", level - 1);
		text_put(&text, "]\n");
	}
	assert_outcome(&text, RULE_YAML_TOO_MANY_NODES);
}

// As many keys as the nodes allow, in an order that is neither rising nor falling; all differ.
static void put_keys(struct text *text, size_t count)
{
	for (size_t index = 0; index < count; index++)
		text_printf(text, "k%zu: x\n", index * 7919 % 49999);
}

static void takes_a_mapping_of_many_keys(void **state)
{
	struct text text = {0};

	(void)state;
	put_keys(&text, 49999);
	assert_outcome(&text, RULE_COUNT);
	put_keys(&text, 49998);
	text_put(&text, "k0: again\n");
	assert_outcome(&text, RULE_YAML_DUPLICATE_KEY);
}

static void reports_each_of_many_duplicates(void **state)
{
	struct text text = {0};

	(void)state;
	for (size_t index = 0; index < 20000; index++)
		text_put(&text, "same: x\n");
	struct parsed *const parsed = parse_bytes(text.bytes, text.length);
	assert_int_equal(diagnostics_error_count(parsed->diagnostics), 19999);
	assert_int_equal(diagnostics_rule(parsed->diagnostics, 999), RULE_YAML_DUPLICATE_KEY);
	assert_null(parsed->root);
	parsed_release(parsed);
	text_release(&text);
}

static void takes_many_anchors(void **state)
{
	struct text text = {0};

	(void)state;
	for (size_t index = 0; index < 40000; index++)
		text_printf(&text, "- &a%zu x\n", index);
	for (size_t index = 0; index < 40000; index++)
		text_printf(&text, "- *a%zu\n", index);
	assert_outcome(&text, RULE_COUNT);
}

static void limits_the_bytes(void **state)
{
	struct text text = {0};

	(void)state;
	text_put(&text, "a: b\n#");
	text_put_repeated(&text, '-', DOCUMENT_LIMIT_BYTES - text.length);
	assert_outcome(&text, RULE_COUNT);
	text_put(&text, "a: b\n#");
	text_put_repeated(&text, '-', DOCUMENT_LIMIT_BYTES + 1 - text.length);
	assert_outcome(&text, RULE_FILE_TOO_LARGE);
	text_put_repeated(&text, '\0', 2 * DOCUMENT_LIMIT_BYTES);
	assert_outcome(&text, RULE_FILE_TOO_LARGE);
}

static void refuses_a_source_without_bytes(void **state)
{
	struct arena *const arena = arena_create();
	struct diagnostics *const diagnostics = diagnostics_create();
	const struct source source = {"plan", NULL, 0};

	(void)state;
	assert_null(document_parse(arena, &source, diagnostics));
	assert_int_equal(diagnostics_count(diagnostics), 1);
	assert_int_equal(diagnostics_rule(diagnostics, 0), RULE_FILE_EMPTY);
	diagnostics_destroy(diagnostics);
	arena_destroy(arena);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(gives_the_nodes),
		cmocka_unit_test(gives_scalars_of_all_styles),
		cmocka_unit_test(shares_aliased_nodes),
		cmocka_unit_test(takes_quoted_merge_key_as_text),
		cmocka_unit_test(counts_columns_in_characters),
		cmocka_unit_test(takes_byte_order_mark_and_line_ends),
		cmocka_unit_test(takes_directives_and_document_marks),
		cmocka_unit_test(limits_the_levels),
		cmocka_unit_test(limits_the_levels_through_aliases),
		cmocka_unit_test(limits_the_nodes),
		cmocka_unit_test(limits_the_nodes_through_aliases),
		cmocka_unit_test(limits_the_texts_of_aliases),
		cmocka_unit_test(stands_an_alias_bomb),
		cmocka_unit_test(takes_a_mapping_of_many_keys),
		cmocka_unit_test(reports_each_of_many_duplicates),
		cmocka_unit_test(takes_many_anchors),
		cmocka_unit_test(limits_the_bytes),
		cmocka_unit_test(refuses_a_source_without_bytes),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
