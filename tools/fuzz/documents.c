// Documents: whatever the bytes are, they are a sound tree or refused with an error whose place lies within the text.
#include "driver.h"

#include "base/arena.h"
#include "base/text.h"
#include "plan/document.h"

static const char *const words[] = {
	"&a", "*a", "&b", "*b", "!tag", "!!str", "<<", "[", "]", "{", "}", ",", ":", ": ", "- ", "? ", "|", ">",
	"|-", ">+", "'", "\"", "---", "...", "%YAML 1.2", "%TAG", "\\x00", "\\u0000", "\\uD800", "\\U0010FFFF", "~",
	"null", "#", "\t", "  ", "\n", "\r\n", "\xC2\x85", "\xE2\x80\xA8", "\xEF\xBB\xBF", "\xC0\x80",
	"\xED\xA0\x80", "\xF4\x90\x80\x80", "\xFF", NULL,
};

// A node on the way through the tree.
struct visit {
	const struct node *node;
	size_t next; // child
};

static void require_place(const struct source *source, struct place place)
{
	size_t lines = 1;
	for (size_t index = 0; index < source->length; index++)
		lines += source->bytes[index] == '\n' || source->bytes[index] == '\r';
	FUZZ_REQUIRE(place.source == source);
	FUZZ_REQUIRE(place.line >= 1 && place.line <= lines);
	FUZZ_REQUIRE(place.column >= 1 && place.column <= source->length + 1);
}

static void require_distinct_keys(const struct node *mapping)
{
	for (size_t index = 0; index < mapping->count && mapping->count < 200; index++) {
		const struct node *key = mapping->pairs[index].key;
		for (size_t other = 0; other < index; other++)
			FUZZ_REQUIRE(strcmp(mapping->pairs[other].key->text, key->text) != 0);
		FUZZ_REQUIRE(key->kind == NODE_SCALAR && strlen(key->text) == key->length);
		FUZZ_REQUIRE(node_value(mapping, key->text) == mapping->pairs[index].value);
	}
}

static void require_node(const struct source *source, const struct node *node)
{
	FUZZ_REQUIRE(node != NULL && node->kind <= NODE_MAPPING);
	require_place(source, node->place);
	if (node->kind == NODE_SCALAR)
		FUZZ_REQUIRE(strlen(node->text) == node->length);
	else if (node->kind == NODE_MAPPING)
		require_distinct_keys(node);
}

// Depth first, as the tree would expand.
static void require_tree(const struct source *source, const struct node *root)
{
	struct visit visits[DOCUMENT_LIMIT_DEPTH + 1];
	size_t depth = 0, nodes = 0;
	visits[depth++] = (struct visit){root, 0};
	while (depth > 0) {
		struct visit *visit = &visits[depth - 1];
		if (visit->next == 0) {
			if (nodes * source->length < 1000000)
				require_node(source, visit->node);
			FUZZ_REQUIRE(++nodes <= DOCUMENT_LIMIT_NODES);
		}
		if (visit->node->kind == NODE_SCALAR || visit->next == visit->node->count) {
			depth--;
			continue;
		}
		const bool list = visit->node->kind == NODE_LIST;
		const struct node *child = list ? visit->node->items[visit->next] : visit->node->pairs[visit->next].value;
		visit->next++;
		FUZZ_REQUIRE(depth < DOCUMENT_LIMIT_DEPTH + (child->kind == NODE_SCALAR));
		visits[depth++] = (struct visit){child, 0};
	}
}

static bool judge(void *context, const uint8_t *bytes, size_t length)
{
	(void)context;
	struct arena *arena = fuzz_need(arena_create());
	struct diagnostics *diagnostics = fuzz_need(diagnostics_create());
	const struct source source = {"fuzz.yaml", (const char *)bytes, length};
	const struct node *root = document_parse(arena, &source, diagnostics);
	struct text text = {0};
	diagnostics_print(diagnostics, &text, length % 2 == 0);
	FUZZ_REQUIRE(!text.failed);
	FUZZ_REQUIRE((root == NULL) == (diagnostics_error_count(diagnostics) > 0));
	FUZZ_REQUIRE(root != NULL || !diagnostics_has_system_error(diagnostics));
	for (size_t index = 0; index < text.length; index++) {
		const unsigned char byte = (unsigned char)text.bytes[index];
		FUZZ_REQUIRE(byte >= ' ' || byte == '\n' || byte == '\033');
	}
	if (root != NULL)
		require_tree(&source, root);
	text_release(&text);
	diagnostics_destroy(diagnostics);
	arena_destroy(arena);
	return root != NULL;
}

static const struct fuzz fuzz = {.judge = judge, .words = words};

FUZZ_MAIN(fuzz)
