#include "table/key_map.h"

#include "base/arena.h"

bool key_map_create(struct key_map *map, struct arena *arena, size_t limit)
{
	unsigned bits = 3;
	while (((size_t)1 << bits) < 2 * limit)
		bits++;
	uint64_t *keys = arena_array(arena, limit, sizeof *keys);
	uint32_t *slots = arena_array(arena, (size_t)1 << bits, sizeof *slots);
	if (keys == NULL || slots == NULL)
		return false;
	*map = (struct key_map){.keys = keys, .slots = slots, .shift = 64 - bits};
	return true;
}

// The slot that holds the key, or the empty one where it belongs. Fibonacci hashing: 2^64 divided by the golden ratio.
static uint32_t *slot_of(const struct key_map *map, uint64_t key)
{
	const uint64_t last = UINT64_MAX >> map->shift;
	uint64_t slot = (key * UINT64_C(0x9E3779B97F4A7C15)) >> map->shift;
	while (map->slots[slot] != 0 && map->keys[map->slots[slot] - 1] != key)
		slot = (slot + 1) & last;
	return &map->slots[slot];
}

uint32_t key_map_add(struct key_map *map, uint64_t key)
{
	uint32_t *slot = slot_of(map, key);
	if (*slot == 0) {
		map->keys[map->count++] = key;
		*slot = map->count;
	}
	return *slot - 1;
}

uint32_t key_map_find(const struct key_map *map, uint64_t key)
{
	const uint32_t number = *slot_of(map, key);
	return number == 0 ? KEY_ABSENT : number - 1;
}
