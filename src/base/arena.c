#include "base/arena.h"

#include <stdarg.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

// Chunks are big enough that a plan needs a few; whatever is larger than a quarter of one gets a chunk of its own,
// straight from calloc, so that untouched pages of a large table cost nothing.
#define CHUNK_BYTES ((size_t)64 * 1024)
#define LARGE_BYTES (CHUNK_BYTES / 4)

struct chunk {
	struct chunk *next;
	size_t used;
	size_t size;
	max_align_t bytes[];
};

// The list starts with the chunk that small allocations come from, if there is one.
struct arena {
	struct chunk *first;
};

struct arena *arena_create(void)
{
	return calloc(1, sizeof(struct arena));
}

void arena_destroy(struct arena *arena)
{
	if (arena == NULL)
		return;
	struct chunk *chunk = arena->first;
	while (chunk != NULL) {
		struct chunk *next = chunk->next;
		free(chunk);
		chunk = next;
	}
	free(arena);
}

static struct chunk *chunk_create(size_t size)
{
	struct chunk *chunk = calloc(1, sizeof(struct chunk) + size);
	if (chunk != NULL)
		chunk->size = size;
	return chunk;
}

// A chunk wholly taken by one allocation goes behind the first, which may still have room.
static void *alloc_large(struct arena *arena, size_t size)
{
	struct chunk *chunk = chunk_create(size);
	if (chunk == NULL)
		return NULL;
	chunk->used = size;
	if (arena->first == NULL) {
		arena->first = chunk;
	} else {
		chunk->next = arena->first->next;
		arena->first->next = chunk;
	}
	return chunk->bytes;
}

void *arena_alloc(struct arena *arena, size_t size)
{
	const size_t alignment = _Alignof(max_align_t);
	if (size > SIZE_MAX / 2)
		return NULL;
	// Size 0 takes a place of its own too, so that the result is never NULL nor another's address.
	size_t padded = size == 0 ? alignment : (size + alignment - 1) / alignment * alignment;
	if (padded > LARGE_BYTES)
		return alloc_large(arena, padded);
	if (arena->first == NULL || arena->first->size - arena->first->used < padded) {
		struct chunk *chunk = chunk_create(CHUNK_BYTES);
		if (chunk == NULL)
			return NULL;
		chunk->next = arena->first;
		arena->first = chunk;
	}
	char *bytes = (char *)arena->first->bytes + arena->first->used;
	arena->first->used += padded;
	return bytes;
}

void *arena_array(struct arena *arena, size_t count, size_t size)
{
	if (size != 0 && count > SIZE_MAX / size)
		return NULL;
	return arena_alloc(arena, count * size);
}

char *arena_copy(struct arena *arena, const char *bytes, size_t length)
{
	if (length == SIZE_MAX)
		return NULL;
	char *copy = arena_alloc(arena, length + 1);
	if (copy != NULL && length > 0)
		memcpy(copy, bytes, length);
	return copy;
}

char *arena_format(struct arena *arena, const char *format, ...)
{
	va_list arguments;
	va_start(arguments, format);
	int length = vsnprintf(NULL, 0, format, arguments);
	va_end(arguments);
	if (length < 0)
		return NULL;
	char *string = arena_alloc(arena, (size_t)length + 1);
	if (string == NULL)
		return NULL;
	va_start(arguments, format);
	vsnprintf(string, (size_t)length + 1, format, arguments);
	va_end(arguments);
	return string;
}
