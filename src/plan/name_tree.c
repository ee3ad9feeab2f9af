#include "plan/name_tree.h"

#include <stddef.h>

#include "base/arena.h"

struct name_branch {
	char byte;
	void *value;
	struct name_branch *sibling;
	struct name_branch *child;
};

// The branch for `byte` among the siblings, added if it is not there; NULL when memory is out.
static struct name_branch *find_branch(struct arena *arena, struct name_branch **siblings, char byte)
{
	while (*siblings != NULL && (*siblings)->byte != byte)
		siblings = &(*siblings)->sibling;
	if (*siblings == NULL) {
		*siblings = arena_alloc(arena, sizeof(**siblings));
		if (*siblings != NULL)
			(*siblings)->byte = byte;
	}
	return *siblings;
}

void **name_tree_slot(struct arena *arena, struct name_tree *tree, const char *name)
{
	struct name_branch **siblings = &tree->first;
	struct name_branch *branch;

	// The terminating NUL is a branch too, and holds the value.
	do {
		branch = find_branch(arena, siblings, *name);
		if (branch == NULL)
			return NULL;
		siblings = &branch->child;
	} while (*name++ != '\0');
	return &branch->value;
}
