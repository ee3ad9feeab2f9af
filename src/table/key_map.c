#include "table/key_map.h"

#include "base/arena.h"

#define LINE_BITS 4 // 16 slots of four bytes: a cache line of most processors

bool key_map_create(struct key_map *map, struct arena *arena, size_t limit, unsigned grain)
{
	unsigned bits = LINE_BITS + 1;
	while (((size_t)1 << bits) < 2 * limit)
		bits++;
	uint64_t *keys = arena_array(arena, limit, sizeof *keys);
	uint32_t *slots = arena_array(arena, (size_t)1 << bits, sizeof *slots);
	if (keys == NULL || slots == NULL)
		return false;
	*map = (struct key_map){.keys = keys, .slots = slots, .shift = 64 - bits, .grain = grain};
	return true;
}

// The slot that holds the key, or the empty one where it belongs. Fibonacci hashing (2^64 divided by the golden ratio)
// finds the line of slots, the key's own bits the slot in it: frames count video addresses up, and those then share a
// line.
static uint32_t *slot_of(const struct key_map *map, uint64_t key)
{
	const uint64_t last = UINT64_MAX >> map->shift;
	const uint64_t grains = key >> map->grain;
	const uint64_t line = ((grains >> LINE_BITS) * UINT64_C(0x9E3779B97F4A7C15)) >> (map->shift + LINE_BITS);
	uint64_t slot = line << LINE_BITS | (grains & ((1u << LINE_BITS) - 1));
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
