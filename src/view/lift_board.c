// A board's document as YAML in the house's style.
#include <string.h>

#include "base/text.h"
#include "view/figures.h"
#include "view/lift.h"

#define FLOW_CHARACTERS 100 // of what stands in one line

static bool is_plain_byte(unsigned char byte, bool flow)
{
	if ((byte >= 'a' && byte <= 'z') || (byte >= 'A' && byte <= 'Z') || (byte >= '0' && byte <= '9'))
		return true;
	return byte != '\0' && strchr(flow ? " _.+-*/()%" : " _.+-*/()%,", byte) != NULL;
}

// Whether YAML reads a text back as it is without quotes: what may only stand inside a plain scalar is quoted at its ends too.
static bool is_plain(const char *value, bool flow)
{
	const size_t length = strlen(value);
	if (strcmp(value, "-") == 0)
		return flow;
	if (length == 0 || strchr(" +-*%,", value[0]) != NULL || value[length - 1] == ' ' || strncmp(value, "...", 3) == 0)
		return false;
	for (size_t index = 0; index < length; index++)
		if (!is_plain_byte((unsigned char)value[index], flow))
			return false;
	return true;
}

// What stands escaped between double quotes. (No document holds other control characters, or line breaks of Unicode's own.)
static void put_quoted(struct text *out, char byte)
{
	if (byte == '\n')
		text_put(out, "\\n");
	else if (byte == '\t')
		text_put(out, "\\t");
	else
		text_printf(out, byte == '"' || byte == '\\' ? "\\%c" : "%c", byte);
}

void text_put_scalar(struct text *out, const char *value, bool flow)
{
	if (is_plain(value, flow)) {
		text_put(out, value);
		return;
	}
	text_put(out, "\"");
	for (; *value != '\0'; value++)
		put_quoted(out, *value);
	text_put(out, "\"");
}

// A collection that is being put, and how far it is.
struct opened {
	const struct node *node;
	size_t next;
};

static void put_leaf(struct text *out, const struct node *node)
{
	if (node->kind == NODE_SCALAR)
		text_put_scalar(out, node->text, true);
	else
		text_put(out, node->kind == NODE_LIST ? "[]" : "{}");
}

void text_put_flow(struct text *out, const struct node *node)
{
	struct opened stack[DOCUMENT_LIMIT_DEPTH + 1];
	size_t depth = 0;
	if (node->kind == NODE_SCALAR || node->count == 0) {
		put_leaf(out, node);
		return;
	}
	stack[depth++] = (struct opened){node, 0};
	text_put(out, node->kind == NODE_LIST ? "[" : "{ ");
	while (depth > 0) {
		struct opened *top = &stack[depth - 1];
		const bool list = top->node->kind == NODE_LIST;
		if (top->next == top->node->count) {
			text_put(out, list ? "]" : " }");
			depth--;
			continue;
		}
		text_put(out, top->next > 0 ? ", " : "");
		const struct node *value = list ? top->node->items[top->next] : top->node->pairs[top->next].value;
		if (!list) {
			text_put_scalar(out, top->node->pairs[top->next].key->text, true);
			text_put(out, ": ");
		}
		top->next++;
		if (value->kind == NODE_SCALAR || value->count == 0 || depth == DOCUMENT_LIMIT_DEPTH) {
			put_leaf(out, value);
			continue;
		}
		text_put(out, value->kind == NODE_LIST ? "[" : "{ ");
		stack[depth++] = (struct opened){value, 0};
	}
}

// What is measured for `out`, which fails with it.
static size_t flow_length(struct text *out, const struct node *node)
{
	struct text text = {0};
	text_put_flow(&text, node);
	const size_t length = text.length;
	out->failed = out->failed || text.failed;
	text_release(&text);
	return length;
}

static bool all_scalars(const struct node *mapping)
{
	for (size_t pair = 0; pair < mapping->count; pair++)
		if (mapping->pairs[pair].value->kind != NODE_SCALAR)
			return false;
	return true;
}

static void put_pair(struct text *out, const char *indent, const struct node_pair *pair)
{
	text_put(out, indent);
	text_put_scalar(out, pair->key->text, false);
	text_put(out, ": ");
	text_put_flow(out, pair->value);
	text_put(out, "\n");
}

static size_t longest_key(const struct node *mapping)
{
	size_t longest = 0;
	for (size_t pair = 0; pair < mapping->count; pair++)
		if (mapping->pairs[pair].key->length > longest)
			longest = mapping->pairs[pair].key->length;
	return longest;
}

// Mappings of mappings, such as signals, below each other.
static void put_mapping(struct text *out, const struct node *mapping)
{
	const bool aligned = mapping->count > 0 && mapping->pairs[0].value->kind == NODE_MAPPING;
	const size_t longest = aligned ? longest_key(mapping) : 0;
	for (size_t pair = 0; pair < mapping->count; pair++) {
		struct text key = {0};
		text_put_scalar(&key, mapping->pairs[pair].key->text, false);
		text_printf(out, "  %s: ", text_string(&key));
		out->failed = out->failed || key.failed;
		text_release(&key);
		if (mapping->pairs[pair].key->length < longest)
			text_put_repeated(out, ' ', longest - mapping->pairs[pair].key->length);
		text_put_flow(out, mapping->pairs[pair].value);
		text_put(out, "\n");
	}
}

static void put_list(struct text *out, const struct node *list)
{
	for (size_t index = 0; index < list->count; index++) {
		const struct node *item = list->items[index];
		if (item->kind != NODE_MAPPING || item->count == 0 || flow_length(out, item) <= FLOW_CHARACTERS) {
			text_put(out, "  - ");
			text_put_flow(out, item);
			text_put(out, "\n");
			continue;
		}
		for (size_t pair = 0; pair < item->count; pair++)
			put_pair(out, pair == 0 ? "  - " : "    ", &item->pairs[pair]);
	}
}

void view_board_key(struct text *out, const char *key, const struct node *node)
{
	const bool is_mapping = node->kind == NODE_MAPPING && node->count > 0, is_list = node->kind == NODE_LIST && node->count > 0;
	const bool is_short = is_mapping && strcmp(key, "clock") != 0 && all_scalars(node) && flow_length(out, node) <= FLOW_CHARACTERS;
	text_printf(out, "%s:", key);
	if ((is_mapping && !is_short) || is_list) {
		text_put(out, "\n");
		(is_mapping ? put_mapping : put_list)(out, node);
		return;
	}
	text_put(out, " ");
	if (node->kind == NODE_SCALAR)
		text_put_scalar(out, node->text, false);
	else
		text_put_flow(out, node);
	text_put(out, "\n");
}
