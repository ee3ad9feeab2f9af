#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <string.h>

#include "base/arena.h"

#define MANY 3000

static void allocations_are_aligned_zeroed_and_apart(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	assert_non_null(arena);
	unsigned char *blocks[MANY];
	for (size_t index = 0; index < MANY; index++) {
		// Sizes 0 … 100 and, now and then, one with a chunk of its own.
		size_t size = index % 500 == 499 ? 70000 : index % 101;
		blocks[index] = arena_alloc(arena, size);
		assert_non_null(blocks[index]);
		assert_int_equal((uintptr_t)blocks[index] % _Alignof(max_align_t), 0);
		for (size_t offset = 0; offset < size; offset++)
			assert_int_equal(blocks[index][offset], 0);
		memset(blocks[index], (int)(index % 255) + 1, size);
	}
	for (size_t index = 0; index < MANY; index++) {
		size_t size = index % 500 == 499 ? 70000 : index % 101;
		for (size_t offset = 0; offset < size; offset++)
			assert_int_equal(blocks[index][offset], index % 255 + 1);
	}
	arena_destroy(arena);
}

static void an_empty_allocation_has_an_address_of_its_own(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	const char *first = arena_alloc(arena, 0);
	const char *second = arena_alloc(arena, 0);
	const char *third = arena_array(arena, 0, 8);
	assert_non_null(first);
	assert_non_null(third);
	assert_ptr_not_equal(first, second);
	assert_ptr_not_equal(second, third);
	arena_destroy(arena);
}

static void a_large_allocation_is_zeroed_to_its_end(void **state)
{
	(void)state;
	// A table of 2^24 rows of eight bytes: 128 MiB.
	const size_t size = (size_t)128 * 1024 * 1024;
	struct arena *arena = arena_create();
	unsigned char *small = arena_alloc(arena, 3);
	unsigned char *large = arena_array(arena, size / 8, 8);
	unsigned char *after = arena_alloc(arena, 3);
	assert_non_null(large);
	for (size_t offset = 0; offset < size; offset += 1048575)
		assert_int_equal(large[offset], 0);
	assert_int_equal(large[size - 1], 0);
	large[0] = large[size - 1] = 7;
	// The chunk of small allocations goes on being used: both lie within one chunk's 64 KiB.
	assert_true((uintptr_t)after > (uintptr_t)small && (uintptr_t)after - (uintptr_t)small < 65536);
	assert_int_equal(small[2], 0);
	assert_int_equal(after[0], 0);
	arena_destroy(arena);
}

static void sizes_that_overflow_are_refused(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	assert_null(arena_alloc(arena, SIZE_MAX));
	assert_null(arena_alloc(arena, SIZE_MAX - 8));
	assert_null(arena_array(arena, SIZE_MAX / 2 + 2, 2));
	assert_null(arena_array(arena, 2, SIZE_MAX / 2 + 2));
	assert_null(arena_array(arena, (size_t)1 << (sizeof(size_t) * 4), (size_t)1 << (sizeof(size_t) * 4)));
	assert_null(arena_copy(arena, "", SIZE_MAX));
	assert_non_null(arena_array(arena, 3, 5));
	arena_destroy(arena);
}

static void a_copy_ends_with_nul(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	char *copy = arena_copy(arena, "ebb\0flood and more", 9);
	assert_memory_equal(copy, "ebb\0flood\0", 10);
	assert_string_equal(arena_copy(arena, NULL, 0), "");
	arena_destroy(arena);
}

static void a_formatted_string_has_any_length(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	assert_string_equal(arena_format(arena, "line %d, %s", 17, "porch"), "line 17, porch");
	assert_string_equal(arena_format(arena, "%s", ""), "");
	const char *wide = arena_format(arena, "%99999d", 5);
	assert_non_null(wide);
	assert_int_equal(strlen(wide), 99999);
	assert_int_equal(wide[99998], '5');
	arena_destroy(arena);
}

static void no_arena_may_be_destroyed(void **state)
{
	(void)state;
	arena_destroy(NULL);
	struct arena *arena = arena_create();
	assert_non_null(arena);
	arena_destroy(arena);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(allocations_are_aligned_zeroed_and_apart),
		cmocka_unit_test(an_empty_allocation_has_an_address_of_its_own),
		cmocka_unit_test(a_large_allocation_is_zeroed_to_its_end),
		cmocka_unit_test(sizes_that_overflow_are_refused),
		cmocka_unit_test(a_copy_ends_with_nul),
		cmocka_unit_test(a_formatted_string_has_any_length),
		cmocka_unit_test(no_arena_may_be_destroyed),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
