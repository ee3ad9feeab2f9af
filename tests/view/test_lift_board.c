// A board's document, written again, is read as it was.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "view/lift.h"

static const struct node *parse(struct arena *arena, const char *bytes)
{
	struct source *source = arena_alloc(arena, sizeof *source);
	struct diagnostics *diagnostics = diagnostics_create();
	*source = (struct source){"board.yaml", bytes, strlen(bytes)};
	const struct node *root = document_parse(arena, source, diagnostics);
	if (root == NULL) {
		struct text text = {0};
		diagnostics_print(diagnostics, &text, false);
		fail_msg("%s", text_string(&text));
	}
	diagnostics_destroy(diagnostics);
	return root;
}

static void assert_same_nodes(const struct node *left, const struct node *right)
{
	assert_int_equal(left->kind, right->kind);
	if (left->kind == NODE_SCALAR) {
		assert_string_equal(left->text, right->text);
		return;
	}
	assert_int_equal(left->count, right->count);
	for (size_t index = 0; index < left->count; index++) {
		if (left->kind == NODE_LIST) {
			assert_same_nodes(left->items[index], right->items[index]);
			continue;
		}
		assert_string_equal(left->pairs[index].key->text, right->pairs[index].key->text);
		assert_same_nodes(left->pairs[index].value, right->pairs[index].value);
	}
}

static const char *const scalars[] = {
	"picture", "4.7 us", "315/22 MHz", "master / 4", "-", "-1 cell", "- dash", "", " ", "a ", " a", "a: b", "a:b", "#5", "a #5", "a#5", "[x]",
	"{y}", "*star", "&and", "!bang", "%", "80*(row/9) + col", "row%9", "comma, too", "null", "true", "~", "\"quoted\"", "it's", "back\\slash",
	"...", "---", "tab\there", "two\nlines", "caf\xC3\xA9 3/4", "quay \xE2\x86\x94 pier", 
	"? key", "| bar", "> fold", "@at", "`tick`", "=", "<<", "0x8000", ",",
};

static void scalars_come_back(void **test)
{
	(void)test;
	for (size_t index = 0; index < sizeof scalars / sizeof *scalars; index++) {
		struct arena *arena = arena_create();
		struct text text = {0};
		text_put(&text, "block: ");
		text_put_scalar(&text, scalars[index], false);
		text_put(&text, "\nflow: { a: ");
		text_put_scalar(&text, scalars[index], true);
		text_put(&text, ", b: [");
		text_put_scalar(&text, scalars[index], true);
		text_put(&text, ", x] }\n");
		const struct node *root = parse(arena, text_string(&text)), *flow = node_value(root, "flow");
		assert_string_equal(node_value(root, "block")->text, scalars[index]);
		assert_string_equal(node_value(flow, "a")->text, scalars[index]);
		assert_string_equal(node_value(flow, "b")->items[0]->text, scalars[index]);
		text_release(&text);
		arena_destroy(arena);
	}
}

static void plain_where_it_may_be(void **test)
{
	(void)test;
	static const char *const plain[] = {"4.7 us", "315/22 MHz", "master / 4", "state.12", "28C256", "16 bits", "14..11"};
	for (size_t index = 0; index < sizeof plain / sizeof *plain; index++) {
		struct text text = {0};
		text_put_scalar(&text, plain[index], true);
		assert_string_equal(text_string(&text), plain[index]);
		text_release(&text);
	}
}

static void documents_come_back(void **test)
{
	(void)test;
	static const char board[] =
		"name: pier\n"
		"note: 'two, three: # four'\n"
		"clock: { master: 10 MHz, cell: [a, {b: []}, {}] }\n"
		"signals:\n"
		"  long_name: &role { role: plain, \"active\": high }\n"
		"  x: *role\n"
		"chips:\n"
		"  - { label: U3, part: 28C256, speed: 200 ns, address: [state.4, state.0, state.7, state.12, state.2, state.9, state.1, -], data: [next.3] }\n"
		"  - { label: U4, part: short }\n"
		"  - alone\n"
		"parts: { 'a: b': { address pins: 3 } }\n"
		"timing: { margin: 5 ns }\n"
		"empty: {}\n"
		"none: []\n"
		"absent:\n";
	struct arena *arena = arena_create();
	const struct node *root = parse(arena, board);
	struct text text = {0};
	for (size_t pair = 0; pair < root->count; pair++)
		view_board_key(&text, root->pairs[pair].key->text, root->pairs[pair].value);
	assert_false(text.failed);
	assert_same_nodes(root, parse(arena, text_string(&text)));
	assert_non_null(strstr(text_string(&text), "signals:\n  long_name: { role: plain, active: high }\n  x:         { role: plain, active: high }\n"));
	assert_non_null(strstr(text_string(&text), "chips:\n  - label: U3\n    part: 28C256\n"));
	assert_non_null(strstr(text_string(&text), "  - { label: U4, part: short }\n"));
	assert_non_null(strstr(text_string(&text), "timing: { margin: 5 ns }\n"));
	text_release(&text);
	arena_destroy(arena);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(scalars_come_back),
		cmocka_unit_test(plain_where_it_may_be),
		cmocka_unit_test(documents_come_back),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
