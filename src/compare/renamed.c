// Line types that took each other's names. By name, each would be told as many edits; if a line type shows what one of another name did, and
// that one what a third did, and so on, until the last has a name that was free or the first's, all are only renamed.
#include "base/arena.h"
#include "compare/parts.h"

struct renaming {
	struct comparing *comparing;
	const size_t *shown_by; // [old line types]: the new one that shows the same, of those that names do not match with the same; or NONE
	size_t *line_of;        // [old line types]: with the new names
	size_t *path;           // [old line types]: room for one
	bool *visited;          // [old line types]
	bool *awaited;          // [old line types]: another one shows now under its name
	bool found;
};

// Old line types from one on, each going where the next one was; how many, or 0 where that ends without a place for all of them.
static size_t follow(struct renaming *renaming, size_t start)
{
	const struct comparing *comparing = renaming->comparing;
	size_t count = 0;
	for (size_t old = start;;) {
		const size_t now = renaming->shown_by[old];
		renaming->visited[old] = true;
		renaming->path[count++] = old;
		if (now == NONE)
			return 0;
		old = comparing->old_line_of[now];
		if (old == NONE)
			return count;
		if (renaming->visited[old])
			return old == start ? count : 0;
	}
}

// One alone takes no one's name.
static void rename_from(struct renaming *renaming, size_t start)
{
	const size_t count = renaming->visited[start] ? 0 : follow(renaming, start);
	for (size_t index = 0; count > 1 && index < count; index++)
		renaming->line_of[renaming->path[index]] = renaming->shown_by[renaming->path[index]];
	renaming->found = renaming->found || count > 1;
}

static size_t agreement(const struct comparing *comparing, const size_t *line_of)
{
	const struct timeline *old = comparing->old_timeline, *now = comparing->now_timeline;
	const uint32_t lines = old->line_count < now->line_count ? old->line_count : now->line_count;
	size_t count = 0;
	for (uint32_t line = 0; line < lines; line++) {
		count += line_of[old->lines[line].type] == now->lines[line].type;
		count += line_of[old->lines[old->line_count - 1 - line].type] == now->lines[now->line_count - 1 - line].type;
	}
	return count;
}

static bool make_renaming(struct comparing *comparing, struct renaming *renaming)
{
	const size_t count = comparing->old->line_count;
	renaming->line_of = arena_array(comparing->arena, count, sizeof *renaming->line_of);
	renaming->path = arena_array(comparing->arena, count, sizeof *renaming->path);
	renaming->visited = arena_array(comparing->arena, count, sizeof *renaming->visited);
	renaming->awaited = arena_array(comparing->arena, count, sizeof *renaming->awaited);
	comparing->failed = comparing->failed || renaming->line_of == NULL || renaming->path == NULL || renaming->visited == NULL ||
	                    renaming->awaited == NULL;
	for (size_t old = 0; !comparing->failed && old < count; old++) {
		const size_t now = renaming->shown_by[old], other = now != NONE ? comparing->old_line_of[now] : NONE;
		renaming->line_of[old] = comparing->line_of[old];
		if (other != NONE)
			renaming->awaited[other] = true;
	}
	return !comparing->failed;
}

static void take(const struct renaming *renaming)
{
	struct comparing *comparing = renaming->comparing;
	for (size_t now = 0; now < comparing->now->line_count; now++)
		comparing->old_line_of[now] = NONE;
	for (size_t old = 0; old < comparing->old->line_count; old++)
		if (renaming->line_of[old] != NONE)
			pair_lines(comparing, old, renaming->line_of[old]);
}

void match_renamed(struct comparing *comparing, const size_t *shown_by)
{
	struct renaming renaming = {.comparing = comparing, .shown_by = shown_by};
	const size_t count = comparing->old->line_count;
	if (!make_renaming(comparing, &renaming))
		return;
	for (size_t old = 0; old < count; old++)
		if (!renaming.awaited[old])
			rename_from(&renaming, old);
	for (size_t old = 0; old < count; old++) // what is left goes round
		rename_from(&renaming, old);
	// In the frame they must stand where they stood: otherwise it is the lines that were edited.
	if (renaming.found && agreement(comparing, renaming.line_of) > agreement(comparing, comparing->line_of))
		take(&renaming);
}
