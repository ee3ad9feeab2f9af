// The nodes of a document, built from its parts in the order of the text. Counts, levels, aliases and keys are checked
// here; the parts themselves are whoever reads the text's.
#ifndef SCANLATCH_PLAN_TREE_H
#define SCANLATCH_PLAN_TREE_H

#include <stdbool.h>
#include <stddef.h>

#include "plan/document.h"

struct tree;

// An empty tree. Nodes are made in `arena`; what is needed only while building, the tree itself included, in `scratch`.
// NULL when memory is out.
struct tree *tree_create(struct arena *arena, struct arena *scratch, struct diagnostics *diagnostics);

// Each of these takes the next part. `anchor` is the anchor's name or NULL. Faults are added as diagnostics. They return
// false when no further part can be taken: memory is out (OUT_OF_MEMORY), or there are too many nodes or levels.
bool tree_add_scalar(struct tree *tree, struct place place, const char *text, size_t length, const char *anchor);
bool tree_add_alias(struct tree *tree, struct place place, const char *anchor);
bool tree_open(struct tree *tree, enum node_kind kind, struct place place, const char *anchor);
// Closes the collection that was opened last; there must be one.
bool tree_close(struct tree *tree);

// True if the next node is a key. Cannot fail.
bool tree_wants_key(const struct tree *tree);

// The first node, NULL before there is one. Cannot fail.
const struct node *tree_root(const struct tree *tree);

#endif
