#include "plan/tree.h"

#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "plan/characters.h"
#include "plan/name_tree.h"

// A text that an alias repeats is read again, so it counts a node more for so many bytes.
#define ALIAS_TEXT_BYTES 64

// What a name was last anchored to.
struct anchor {
	const struct node *node;
	size_t nodes;    // what an alias of it counts; 0 while the subtree is not complete
	unsigned height; // levels of collections in it
};

// A collection whose end has not come yet.
struct frame {
	struct node *node;
	struct anchor *anchor; // or NULL
	size_t first_child;    // its children so far are the tree's from here on
	size_t nodes_before;   // the tree's counts before this collection
	size_t texts_before;
	unsigned height;       // levels of collections in it so far, itself included
};

struct tree {
	struct arena *arena;
	struct arena *scratch;
	struct diagnostics *diagnostics;
	struct frame frames[DOCUMENT_LIMIT_DEPTH];
	unsigned depth;
	const struct node **children; // of all open collections, in the order of the text, keys before their values
	size_t child_count;
	size_t child_capacity;
	size_t nodes; // aliases expanded
	size_t texts; // what the texts so far count on top of that wherever an alias repeats them
	struct name_tree anchors;
	const struct node *root;
};

struct tree *tree_create(struct arena *arena, struct arena *scratch, struct diagnostics *diagnostics)
{
	struct tree *const tree = arena_alloc(scratch, sizeof(*tree));

	if (tree == NULL)
		return NULL;
	tree->arena = arena;
	tree->scratch = scratch;
	tree->diagnostics = diagnostics;
	return tree;
}

const struct node *tree_root(const struct tree *tree)
{
	return tree->root;
}

static bool out_of_memory(struct tree *tree)
{
	diagnose(tree->diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "wanted memory for the nodes of a plan, found none");
	return false;
}

static bool count_nodes(struct tree *tree, struct place place, size_t nodes)
{
	if (nodes > DOCUMENT_LIMIT_NODES - tree->nodes) {
		diagnose(tree->diagnostics, RULE_YAML_TOO_MANY_NODES, place,
		         "wanted at most %d nodes, each alias counted as all that it stands for, and as one more for every %d"
		         " bytes of a text; found more from here on", DOCUMENT_LIMIT_NODES, ALIAS_TEXT_BYTES);
		return false;
	}
	tree->nodes += nodes;
	return true;
}

static bool reserve_child(struct tree *tree)
{
	if (tree->child_count < tree->child_capacity)
		return true;
	const size_t capacity = tree->child_capacity == 0 ? 256 : tree->child_capacity * 2;
	const struct node **const children = arena_array(tree->scratch, capacity, sizeof(children[0]));
	if (children == NULL)
		return out_of_memory(tree);
	if (tree->child_count > 0)
		memcpy(children, tree->children, tree->child_count * sizeof(children[0]));
	tree->children = children;
	tree->child_capacity = capacity;
	return true;
}

bool tree_wants_key(const struct tree *tree)
{
	if (tree->depth == 0)
		return false;
	const struct frame *const frame = &tree->frames[tree->depth - 1];
	return frame->node->kind == NODE_MAPPING && (tree->child_count - frame->first_child) % 2 == 0;
}

// Adds a node to the innermost open collection, or as the root.
static bool attach(struct tree *tree, const struct node *node, struct place place)
{
	if (tree_wants_key(tree) && node->kind != NODE_SCALAR) {
		diagnose(tree->diagnostics, RULE_YAML_KEY_NOT_SCALAR, place, "wanted a text as key, found a %s",
		         node->kind == NODE_LIST ? "list" : "mapping");
		diagnose_hint(tree->diagnostics, "quote a key that begins with '%c'",
		              node->kind == NODE_LIST ? '[' : '{');
	}
	if (tree->depth == 0) {
		tree->root = node;
		return true;
	}
	if (!reserve_child(tree))
		return false;
	tree->children[tree->child_count++] = node;
	return true;
}

static struct node *new_node(struct tree *tree, enum node_kind kind, struct place place)
{
	struct node *const node = arena_alloc(tree->arena, sizeof(*node));

	if (node == NULL) {
		out_of_memory(tree);
		return NULL;
	}
	node->kind = kind;
	node->place = place;
	return node;
}

static struct node *new_scalar(struct tree *tree, struct place place, const char *text, size_t length)
{
	struct node *const node = new_node(tree, NODE_SCALAR, place);

	if (node == NULL)
		return NULL;
	node->text = text;
	node->length = length;
	return node;
}

// Makes *anchor what the name stands for from here on, not complete yet; NULL if the node has no anchor.
static bool define_anchor(struct tree *tree, const char *name, const struct node *node, struct anchor **result)
{
	*result = NULL;
	if (name == NULL)
		return true;
	struct anchor *const anchor = arena_alloc(tree->scratch, sizeof(*anchor));
	void **const slot = name_tree_slot(tree->scratch, &tree->anchors, name);
	if (anchor == NULL || slot == NULL)
		return out_of_memory(tree);
	anchor->node = node;
	*slot = anchor;
	*result = anchor;
	return true;
}

bool tree_add_scalar(struct tree *tree, struct place place, const char *text, size_t length, const char *name)
{
	struct anchor *anchor;

	if (!count_nodes(tree, place, 1))
		return false;
	const char *const copy = arena_copy(tree->arena, text, length);
	if (copy == NULL)
		return out_of_memory(tree);
	struct node *const node = new_scalar(tree, place, copy, length);
	if (node == NULL || !define_anchor(tree, name, node, &anchor))
		return false;
	if (anchor != NULL)
		anchor->nodes = 1 + length / ALIAS_TEXT_BYTES;
	tree->texts += length / ALIAS_TEXT_BYTES;
	return attach(tree, node, place);
}

static bool too_deep(struct tree *tree, struct place place)
{
	diagnose(tree->diagnostics, RULE_YAML_TOO_DEEP, place,
	         "wanted at most %d levels of lists and mappings, found more from here on", DOCUMENT_LIMIT_DEPTH);
	return false;
}

// The innermost open collection has a child of that many levels.
static void note_height(struct tree *tree, unsigned height)
{
	if (tree->depth > 0 && tree->frames[tree->depth - 1].height < height + 1)
		tree->frames[tree->depth - 1].height = height + 1;
}

// An alias as key is a copy of its scalar, so that a fault of the key is shown where the key stands.
static bool attach_aliased(struct tree *tree, const struct anchor *anchor, struct place place)
{
	const struct node *node = anchor->node;

	if (!count_nodes(tree, place, anchor->nodes))
		return false;
	if (anchor->height + tree->depth > DOCUMENT_LIMIT_DEPTH)
		return too_deep(tree, place);
	note_height(tree, anchor->height);
	if (node->kind == NODE_SCALAR && tree_wants_key(tree)) {
		node = new_scalar(tree, place, node->text, node->length);
		if (node == NULL)
			return false;
	}
	return attach(tree, node, place);
}

// An empty scalar stands for an alias that means nothing, so that the rest can be judged.
static bool attach_nothing(struct tree *tree, struct place place)
{
	const struct node *const node = new_scalar(tree, place, "", 0);

	return node != NULL && count_nodes(tree, place, 1) && attach(tree, node, place);
}

bool tree_add_alias(struct tree *tree, struct place place, const char *name)
{
	void **const slot = name_tree_slot(tree->scratch, &tree->anchors, name);
	char buffer[QUOTATION_BYTES];

	if (slot == NULL)
		return out_of_memory(tree);
	const struct anchor *const anchor = *slot;
	if (anchor == NULL) {
		diagnose(tree->diagnostics, RULE_YAML_ALIAS, place,
		         "wanted an alias of an anchor further up, found no anchor %s", quotation(buffer, name, strlen(name)));
		diagnose_hint(tree->diagnostics, "quote a text that begins with '*'");
		return attach_nothing(tree, place);
	}
	if (anchor->nodes == 0) {
		diagnose(tree->diagnostics, RULE_YAML_ALIAS, place,
		         "wanted an alias of an anchor that is complete, found %s inside of what it stands for",
		         quotation(buffer, name, strlen(name)));
		diagnose_also(tree->diagnostics, anchor->node->place, "what it stands for begins here");
		return attach_nothing(tree, place);
	}
	return attach_aliased(tree, anchor, place);
}

bool tree_open(struct tree *tree, enum node_kind kind, struct place place, const char *name)
{
	const size_t nodes_before = tree->nodes;
	struct anchor *anchor;

	if (tree->depth == DOCUMENT_LIMIT_DEPTH)
		return too_deep(tree, place);
	if (!count_nodes(tree, place, 1))
		return false;
	struct node *const node = new_node(tree, kind, place);
	if (node == NULL || !define_anchor(tree, name, node, &anchor) || !attach(tree, node, place))
		return false;
	tree->frames[tree->depth++] = (struct frame){.node = node, .anchor = anchor, .height = 1,
	                                             .first_child = tree->child_count,
	                                             .nodes_before = nodes_before, .texts_before = tree->texts};
	return true;
}

// By text, then by place in the mapping.
static int compare_pairs(const void *left_item, const void *right_item)
{
	const struct node_pair *const left = *(const struct node_pair *const *)left_item;
	const struct node_pair *const right = *(const struct node_pair *const *)right_item;
	const size_t left_length = left->key->length;
	const size_t right_length = right->key->length;
	int order = 0;

	if (left->key->text != right->key->text)
		order = memcmp(left->key->text, right->key->text, left_length < right_length ? left_length : right_length);
	if (order == 0)
		order = (left_length > right_length) - (left_length < right_length);
	return order == 0 ? (left > right) - (left < right) : order;
}

static bool same_key(const struct node_pair *left, const struct node_pair *right)
{
	return left->key->length == right->key->length &&
	       (left->key->text == right->key->text ||
	        memcmp(left->key->text, right->key->text, left->key->length) == 0);
}

static void diagnose_duplicate(struct tree *tree, const struct node *key, const struct node *first)
{
	char buffer[QUOTATION_BYTES];

	diagnose(tree->diagnostics, RULE_YAML_DUPLICATE_KEY, key->place,
	         "wanted each key of a mapping once, found %s again", quotation(buffer, key->text, key->length));
	diagnose_also(tree->diagnostics, first->place, "first defined here");
}

static bool check_duplicates(struct tree *tree, const struct node *mapping)
{
	const struct node_pair **const sorted = arena_array(tree->scratch, mapping->count, sizeof(sorted[0]));
	size_t count = 0;
	size_t first = 0;

	if (sorted == NULL)
		return out_of_memory(tree);
	for (size_t index = 0; index < mapping->count; index++) {
		if (mapping->pairs[index].key->kind == NODE_SCALAR)
			sorted[count++] = &mapping->pairs[index];
	}
	qsort(sorted, count, sizeof(sorted[0]), compare_pairs);
	for (size_t index = 1; index < count; index++) {
		if (same_key(sorted[first], sorted[index]))
			diagnose_duplicate(tree, sorted[index]->key, sorted[first]->key);
		else
			first = index;
	}
	return true;
}

static bool fill_list(struct tree *tree, struct node *list, const struct node **children, size_t count)
{
	list->items = arena_array(tree->arena, count, sizeof(list->items[0]));
	if (list->items == NULL)
		return out_of_memory(tree);
	if (count > 0)
		memcpy(list->items, children, count * sizeof(children[0]));
	list->count = count;
	return true;
}

static bool fill_mapping(struct tree *tree, struct node *mapping, const struct node **children, size_t count)
{
	mapping->pairs = arena_array(tree->arena, count / 2, sizeof(mapping->pairs[0]));
	if (mapping->pairs == NULL)
		return out_of_memory(tree);
	mapping->count = count / 2;
	for (size_t index = 0; index < mapping->count; index++)
		mapping->pairs[index] = (struct node_pair){children[2 * index], children[2 * index + 1]};
	return mapping->count < 2 || check_duplicates(tree, mapping);
}

bool tree_close(struct tree *tree)
{
	const struct frame *const frame = &tree->frames[--tree->depth];
	const struct node **const children = tree->children == NULL ? NULL : tree->children + frame->first_child;
	const size_t count = tree->child_count - frame->first_child;

	tree->child_count = frame->first_child;
	if (frame->anchor != NULL) {
		frame->anchor->nodes = tree->nodes - frame->nodes_before + tree->texts - frame->texts_before;
		frame->anchor->height = frame->height;
	}
	note_height(tree, frame->height);
	return frame->node->kind == NODE_LIST ? fill_list(tree, frame->node, children, count)
	                                      : fill_mapping(tree, frame->node, children, count);
}
