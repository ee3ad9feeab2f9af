// A set of 64-bit keys, numbered from 0 in the order in which they were added. For the table's own use.
#ifndef SCANLATCH_TABLE_KEY_MAP_H
#define SCANLATCH_TABLE_KEY_MAP_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

struct arena;

#define KEY_ABSENT UINT32_MAX

struct key_map {
	uint64_t *keys; // [count], in the order added
	uint32_t count;
	uint32_t *slots; // open addressing: number + 1, or 0
	unsigned shift;  // 64 - log2 of the number of slots
	unsigned grain;
};

// An empty map with room for `limit` (at most 2^24 + 1) keys. Keys that are close to each other when their `grain`
// lowest bits are left out lie close in memory. Memory is the arena's; false when it is out.
bool key_map_create(struct key_map *map, struct arena *arena, size_t limit, unsigned grain);

// The number of a key, which is added if it is new. The caller adds no more keys than there is room for. Cannot fail.
uint32_t key_map_add(struct key_map *map, uint64_t key);

// The number of a key, or KEY_ABSENT. Cannot fail.
uint32_t key_map_find(const struct key_map *map, uint64_t key);

#endif
