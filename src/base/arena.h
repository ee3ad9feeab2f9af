// Arena: memory that is freed all at once. Every object of the pipeline owns one.
#ifndef SCANLATCH_BASE_ARENA_H
#define SCANLATCH_BASE_ARENA_H

#include <stddef.h>

struct arena;

// A new, empty arena; NULL when memory is out. Owned by the caller.
struct arena *arena_create(void);

// Frees the arena and everything allocated from it. NULL is allowed. Cannot fail.
void arena_destroy(struct arena *arena);

// `size` zeroed bytes, aligned for any type; NULL when memory is out. Never NULL for size 0.
void *arena_alloc(struct arena *arena, size_t size);

// `count` zeroed elements of `size` bytes; NULL when memory is out or the product overflows.
void *arena_array(struct arena *arena, size_t count, size_t size);

// A copy of `length` bytes of `bytes` with a NUL after them; NULL when memory is out.
char *arena_copy(struct arena *arena, const char *bytes, size_t length);

// A formatted string; NULL when memory is out.
__attribute__((format(printf, 2, 3)))
char *arena_format(struct arena *arena, const char *format, ...);

#endif
