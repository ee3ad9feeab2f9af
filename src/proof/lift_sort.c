#include <string.h>

#include "base/arena.h"
#include "base/diagnostics.h"
#include "proof/lift_work.h"

#define EMPTY 0u

// Lines by what they show: an open hash table of contents, numbered from 1.
struct shelf {
	uint32_t *slots;
	uint32_t mask;
};

static uint64_t hash_line(const struct lifting *lifting, const struct lifted_line *line)
{
	const uint64_t *asserted = lifting->lift->asserted + line->first_cell;
	uint64_t hash = 0xCBF29CE484222325u ^ line->kind; // FNV-1a (Fowler, Noll, Vo), a word at a time
	for (uint32_t cell = 0; cell < line->cells; cell++)
		hash = (hash ^ asserted[cell]) * 0x100000001B3u;
	return hash ^ hash >> 32;
}

static bool shows_same(const struct lifting *lifting, const struct lifted_line *left, const struct lifted_line *right)
{
	const uint64_t *asserted = lifting->lift->asserted;
	return left->cells == right->cells && left->kind == right->kind &&
	       memcmp(asserted + left->first_cell, asserted + right->first_cell, left->cells * sizeof *asserted) == 0;
}

static void place_line(struct lifting *lifting, struct shelf *shelf, uint32_t index)
{
	struct lifted_line *line = &lifting->lines[index];
	uint32_t slot = (uint32_t)hash_line(lifting, line) & shelf->mask;
	while (shelf->slots[slot] != EMPTY &&
	       !shows_same(lifting, line, &lifting->lines[lifting->contents[shelf->slots[slot] - 1].line]))
		slot = (slot + 1) & shelf->mask;
	if (shelf->slots[slot] == EMPTY) {
		lifting->contents[lifting->content_count] = (struct content){.line = index, .cells = line->cells, .kind = line->kind};
		shelf->slots[slot] = (uint32_t)++lifting->content_count;
	}
	line->content = shelf->slots[slot] - 1;
	lifting->contents[line->content].lines++;
}

// Whether a region ends before a cell: other signals but stretch, or a stretched cell after one that is not.
static bool divides(const struct lifting *lifting, const uint64_t *asserted, uint32_t cell)
{
	const uint64_t stretch = lifting->stretch_mask;
	return ((asserted[cell] ^ asserted[cell - 1]) & ~stretch) != 0 ||
	       ((asserted[cell] & stretch) != 0 && (asserted[cell - 1] & stretch) == 0);
}

static bool divide_content(struct lifting *lifting, struct content *content)
{
	const uint64_t *asserted = lifting->lift->asserted + lifting->lines[content->line].first_cell;
	size_t count = 1;
	for (uint32_t cell = 1; cell < content->cells; cell++)
		count += divides(lifting, asserted, cell);
	if (count > UINT16_MAX) {
		diagnose(lifting->diagnostics, RULE_LIFT_SIZE, lifting->place, "a line of %u cells has %zu regions, wanted at most %d",
		         content->cells, count, UINT16_MAX);
		return false;
	}
	content->regions = arena_array(lifting->arena, count, sizeof *content->regions);
	if (content->regions == NULL)
		return lift_memory(lifting);
	for (uint32_t cell = 0; cell < content->cells; cell++) {
		if (cell == 0 || divides(lifting, asserted, cell)) {
			content->regions[content->region_count++] =
				(struct lift_region){.first_cell = cell, .asserted = asserted[cell] & ~lifting->stretch_mask};
		}
		struct lift_region *region = &content->regions[content->region_count - 1];
		region->cells++;
		region->stretched += (asserted[cell] & lifting->stretch_mask) != 0;
		content->ticks += lifted_cell_ticks(lifting, asserted[cell]);
	}
	return true;
}

bool lift_place(struct lifting *lifting)
{
	const uint32_t lines = lifting->lift->line_count;
	struct shelf shelf = {.mask = 1};
	while (shelf.mask < 2 * lines)
		shelf.mask = shelf.mask << 1 | 1;
	shelf.slots = arena_array(lifting->arena, (size_t)shelf.mask + 1, sizeof *shelf.slots);
	lifting->contents = arena_array(lifting->arena, lines, sizeof *lifting->contents);
	lifting->content_count = 0;
	if (shelf.slots == NULL || lifting->contents == NULL)
		return lift_memory(lifting);
	for (uint32_t line = 0; line < lines; line++)
		place_line(lifting, &shelf, line);
	return true;
}

bool lift_divide(struct lifting *lifting)
{
	for (size_t content = 0; content < lifting->content_count; content++)
		if (!divide_content(lifting, &lifting->contents[content]))
			return false;
	return true;
}

uint32_t lift_run(const struct lifting *lifting, uint32_t first)
{
	uint32_t end = first + 1;
	while (end < lifting->lift->line_count && lifting->lines[end].content == lifting->lines[first].content)
		end++;
	return end - first;
}
