#include "catalogue/reading.h"

#include "base/arena.h"

void catalogue_text(struct reader *reader, const struct node *node, const char *what, const char **result)
{
	if (node != NULL)
		read_scalar(reader, node, what, result);
}

bool catalogue_count(struct reader *reader, const struct node *node, const char *what, size_t limit)
{
	if (node->count >= 1 && node->count <= limit)
		return true;
	diagnose(reader->diagnostics, RULE_TOO_MANY, node->place, "%s: wanted 1 to %zu, found %zu", what, limit, node->count);
	return false;
}

const struct source *catalogue_source(struct arena *arena, const char *name, const unsigned char *bytes, size_t length,
                                      struct diagnostics *diagnostics)
{
	struct source *source = arena_alloc(arena, sizeof *source);
	if (source == NULL) {
		diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){NULL, 0, 0}, "memory is out");
		return NULL;
	}
	*source = (struct source){name, (const char *)bytes, length};
	return source;
}
