// Stretches of cells, numbered by what they show: an open hash table.
#include <string.h>

#include "base/arena.h"
#include "compare/seen_work.h"

struct shown {
	const uint64_t *asserted;
	uint32_t cells;
	uint64_t mask, hash;
};

struct shelf {
	struct shown *shown;
	uint32_t count;
	uint32_t *slots;           // numbers + 1
	size_t last_slot;
};

struct shelf *shelf_create(struct arena *arena, size_t most)
{
	struct shelf *shelf = arena_alloc(arena, sizeof *shelf);
	size_t last = 1;
	while (last < 2 * most)
		last = last << 1 | 1;
	if (shelf == NULL)
		return NULL;
	*shelf = (struct shelf){.shown = arena_array(arena, most, sizeof *shelf->shown), .last_slot = last,
	                        .slots = arena_array(arena, last + 1, sizeof *shelf->slots)};
	return shelf->shown != NULL && shelf->slots != NULL ? shelf : NULL;
}

static uint64_t hash_cells(const uint64_t *asserted, uint32_t cells, uint64_t mask)
{
	uint64_t hash = 0xCBF29CE484222325u ^ cells; // FNV-1a (Fowler, Noll, Vo), a word at a time
	for (uint32_t cell = 0; cell < cells; cell++)
		hash = (hash ^ (asserted[cell] & mask)) * 0x100000001B3u;
	return hash ^ hash >> 32;
}

static bool same_cells(const struct shown *shown, const uint64_t *asserted)
{
	for (uint32_t cell = 0; cell < shown->cells; cell++)
		if (((shown->asserted[cell] ^ asserted[cell]) & shown->mask) != 0)
			return false;
	return true;
}

uint32_t shelf_number(struct shelf *shelf, const uint64_t *asserted, uint32_t cells, uint64_t mask)
{
	const uint64_t hash = hash_cells(asserted, cells, mask);
	size_t slot = (size_t)hash & shelf->last_slot;
	for (; shelf->slots[slot] != 0; slot = (slot + 1) & shelf->last_slot) {
		const struct shown *shown = &shelf->shown[shelf->slots[slot] - 1];
		if (shown->hash == hash && shown->cells == cells && shown->mask == mask && same_cells(shown, asserted))
			return shelf->slots[slot] - 1;
	}
	shelf->shown[shelf->count] = (struct shown){asserted, cells, mask, hash};
	shelf->slots[slot] = ++shelf->count;
	return shelf->count - 1;
}

void *turned_copy(struct arena *arena, const void *list, size_t count, size_t size, size_t first)
{
	char *copy = arena_array(arena, count, size);
	const char *bytes = list;
	if (copy == NULL)
		return NULL;
	memcpy(copy, bytes + first * size, (count - first) * size);
	memcpy(copy + (count - first) * size, bytes, first * size);
	return copy;
}
