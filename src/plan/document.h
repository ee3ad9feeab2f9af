// A YAML document with positions. The only user of libyaml; hands out strings, never values.
#ifndef SCANLATCH_PLAN_DOCUMENT_H
#define SCANLATCH_PLAN_DOCUMENT_H

#include <stddef.h>

#include "base/diagnostics.h"

struct arena;

enum node_kind { NODE_SCALAR, NODE_LIST, NODE_MAPPING };

struct node_pair {
	const struct node *key;   // always a scalar
	const struct node *value;
};

// A node. An alias is the node of its anchor, shared; as key, a copy with a place of its own. All memory is the arena's.
struct node {
	enum node_kind kind;
	struct place place;          // of the node's first character, after an anchor
	const char *text;            // NODE_SCALAR: the value, NUL-terminated (no NUL inside); quoted and plain alike
	size_t length;               // NODE_SCALAR: bytes of text; an absent value is a scalar of length 0
	const struct node **items;   // NODE_LIST
	struct node_pair *pairs;     // NODE_MAPPING, in the order of the text
	size_t count;                // of items or pairs
};

#define DOCUMENT_LIMIT_BYTES (1024 * 1024)
#define DOCUMENT_LIMIT_NODES 100000
#define DOCUMENT_LIMIT_DEPTH 32

// Parses the source's bytes (already read). Checks everything that page 2 asks of the form: UTF-8, no NUL or other
// control characters (FILE_BINARY, FILE_ENCODING), not empty (FILE_EMPTY), at most DOCUMENT_LIMIT_BYTES (FILE_TOO_LARGE),
// well-formed (YAML_SYNTAX), one document, no duplicate keys (with the place of the first), no tags, merge keys, cyclic
// aliases, at most 100,000 nodes after expansion of aliases (64 bytes of a text that an alias repeats are one more), at most
// 32 levels, scalar keys. Errors are added with their place; independent ones (several duplicate keys) are all reported.
// Returns NULL if there was any error.
const struct node *document_parse(struct arena *arena, const struct source *source, struct diagnostics *diagnostics);

// The value of `key` in a mapping, or NULL. Cannot fail.
const struct node *node_value(const struct node *mapping, const char *key);

#endif
