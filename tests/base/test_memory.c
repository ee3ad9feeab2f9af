// What happens when memory runs out, at every single allocation in turn. The units are compiled into this program with
// allocators that fail on demand, so that the test works under every sanitizer and needs no limits of the system.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdbool.h>
#include <stdlib.h>
#include <string.h>

static size_t allocations_left = SIZE_MAX;
static bool any_refused;

static bool may_allocate(void)
{
	if (allocations_left == 0) {
		any_refused = true;
		return false;
	}
	allocations_left--;
	return true;
}

static void *test_calloc_or_fail(size_t count, size_t size)
{
	return may_allocate() ? calloc(count, size) : NULL;
}

static void *test_realloc_or_fail(void *bytes, size_t size)
{
	return may_allocate() ? realloc(bytes, size) : NULL;
}

static void *test_malloc_or_fail(size_t size)
{
	return may_allocate() ? malloc(size) : NULL;
}

#define calloc test_calloc_or_fail
#define realloc test_realloc_or_fail
#define malloc test_malloc_or_fail
#include "base/arena.c"
#include "base/diagnostics.c"
#include "base/text.c"
#undef calloc
#undef realloc
#undef malloc

static void an_arena_returns_null(void **state)
{
	(void)state;
	allocations_left = 0;
	assert_null(arena_create());
	allocations_left = 1;
	struct arena *arena = arena_create();
	assert_non_null(arena);
	assert_null(arena_alloc(arena, 1));
	assert_null(arena_alloc(arena, 1000000));
	assert_null(arena_array(arena, 2, 2));
	assert_null(arena_copy(arena, "x", 1));
	assert_null(arena_format(arena, "%d", 1));
	allocations_left = 1;
	assert_non_null(arena_alloc(arena, 1));
	// The chunk at hand still serves.
	assert_string_equal(arena_format(arena, "%d", 17), "17");
	assert_null(arena_alloc(arena, 1000000));
	allocations_left = SIZE_MAX;
	assert_non_null(arena_alloc(arena, 1000000));
	arena_destroy(arena);
}

static void a_text_fails_once_and_for_all(void **state)
{
	(void)state;
	struct text text = {0};
	allocations_left = 0;
	text_printf(&text, "%d", 1);
	allocations_left = SIZE_MAX;
	assert_true(text.failed);
	text_put(&text, "later");
	assert_string_equal(text_string(&text), "");
	text_release(&text);

	text_put(&text, "kept");
	allocations_left = 0;
	text_printf(&text, "%5000d", 1);
	allocations_left = SIZE_MAX;
	assert_true(text.failed);
	assert_string_equal(text_string(&text), "kept");
	text_release(&text);
}

// The same 40 diagnostics each time, long enough to need several chunks.
static void diagnose_many(struct diagnostics *diagnostics, const struct source *source)
{
	for (uint32_t index = 0; index < 40; index++) {
		diagnose(diagnostics, RULE_BAD_NUMBER, (struct place){source, 1, 1}, "%2000u", (unsigned)index);
		diagnose_hint(diagnostics, "%2000u", (unsigned)index);
		diagnose_also(diagnostics, (struct place){source, 1, 2}, "%2000u", (unsigned)index);
	}
}

static bool ends_in(const struct text *text, const char *last)
{
	size_t length = strlen(last);
	return text->length >= length && strcmp(text->bytes + text->length - length, last) == 0;
}

static void a_lost_diagnostic_is_replaced_by_out_of_memory(void **state)
{
	(void)state;
	const struct source source = {"a", "bc\n", 3};
	bool complete = false;
	for (size_t allowed = 0; !complete; allowed++) {
		allocations_left = allowed;
		any_refused = false;
		struct diagnostics *diagnostics = diagnostics_create();
		if (diagnostics == NULL) {
			assert_true(allowed < 2);
			continue;
		}
		diagnose_many(diagnostics, &source);
		complete = !any_refused;
		allocations_left = SIZE_MAX;
		size_t count = diagnostics_count(diagnostics);
		assert_int_equal(diagnostics_error_count(diagnostics), count);
		assert_int_equal(diagnostics_has_system_error(diagnostics), !complete);
		if (complete)
			assert_int_equal(count, 40);
		else
			assert_int_equal(diagnostics_rule(diagnostics, count - 1), RULE_OUT_OF_MEMORY);
		struct text text = {0};
		diagnostics_print(diagnostics, &text, false);
		assert_int_equal(ends_in(&text, "scanlatch: error: out of memory [out-of-memory]\n"), !complete);
		text_release(&text);
		diagnostics_destroy(diagnostics);
	}
}

// What belonged to the lost one must not be taken for a remark of the one before.
static void a_hint_does_not_move_to_another_diagnostic(void **state)
{
	(void)state;
	const struct source source = {"a", "bc\n", 3};
	struct diagnostics *diagnostics = diagnostics_create();
	diagnose(diagnostics, RULE_BAD_NUMBER, (struct place){&source, 1, 1}, "kept");
	allocations_left = 0;
	diagnose(diagnostics, RULE_BAD_NUMBER, (struct place){&source, 1, 2}, "lost");
	allocations_left = SIZE_MAX;
	diagnose_hint(diagnostics, "of the lost one");
	diagnose(diagnostics, RULE_BAD_NUMBER, (struct place){&source, 1, 3}, "later");
	diagnose_hint(diagnostics, "of the later one");
	struct text text = {0};
	diagnostics_print(diagnostics, &text, false);
	assert_string_equal(text_string(&text), "a:1:1: error: kept [bad-number]\n  bc\n  ^\n"
	                                        "a:1:3: error: later [bad-number]\n  bc\n    ^\n  hint: of the later one\n"
	                                        "scanlatch: error: out of memory [out-of-memory]\n");
	text_release(&text);
	allocations_left = 0;
	diagnostics_print(diagnostics, &text, false);
	allocations_left = SIZE_MAX;
	assert_true(text.failed);
	text_release(&text);
	diagnostics_destroy(diagnostics);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(an_arena_returns_null),
		cmocka_unit_test(a_text_fails_once_and_for_all),
		cmocka_unit_test(a_lost_diagnostic_is_replaced_by_out_of_memory),
		cmocka_unit_test(a_hint_does_not_move_to_another_diagnostic),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
