// A map from names to things that belong to them, as a tree of bytes: each step costs one character of a name, whatever
// names a hostile text has chosen.
#ifndef SCANLATCH_PLAN_NAME_TREE_H
#define SCANLATCH_PLAN_NAME_TREE_H

#include <stdbool.h>

struct arena;

struct name_branch;

// Starts as {0}. Its memory is the arena's that name_tree_find is given.
struct name_tree {
	struct name_branch *first;
};

// The slot of the name, made (holding NULL) if it is not there; NULL when memory is out. The slot stays where it is.
void **name_tree_slot(struct arena *arena, struct name_tree *tree, const char *name);

#endif
