// Faults of line types: one report for each place and rule.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "base/arena.h"
#include "base/text.h"
#include "layout/line_faults.h"
#include "plan/plan.h"

static const struct source source = {"quay", "a\nb\nc\nd\ne\nf\n", 12};

static struct place at(uint32_t line)
{
	return (struct place){&source, line, 1};
}

struct collected {
	struct arena *arena;
	struct diagnostics *diagnostics;
	struct line_faults *faults;
};

static struct collected collect(void)
{
	struct collected collected = {.arena = arena_create(), .diagnostics = diagnostics_create()};
	assert_non_null(collected.arena);
	assert_non_null(collected.diagnostics);
	collected.faults = line_faults_create(collected.arena, collected.diagnostics);
	assert_non_null(collected.faults);
	return collected;
}

// Reports the faults and compares what is printed.
static void assert_printed(struct collected *collected, const char *wanted)
{
	struct text text = {0};
	line_faults_report(collected->faults);
	diagnostics_print(collected->diagnostics, &text, false);
	assert_string_equal(text_string(&text), wanted);
	text_release(&text);
}

static void release(struct collected *collected)
{
	diagnostics_destroy(collected->diagnostics);
	arena_destroy(collected->arena);
}

// Types a to e have a fault at one place, b also one of another rule there, which is no repetition.
static void names_other_types_once(void **state)
{
	(void)state;
	static const struct line_type types[] = {
		{.name = "a", .place = {&source, 1, 1}}, {.name = "b", .place = {&source, 2, 1}}, {.name = "c", .place = {&source, 3, 1}},
		{.name = "d", .place = {&source, 4, 1}}, {.name = "e", .place = {&source, 5, 1}},
	};
	struct collected collected = collect();
	for (size_t type = 0; type < sizeof types / sizeof types[0]; type++) {
		struct line_fault *fault =
			line_faults_add(collected.faults, RULE_REGION_EMPTY, at(6), &types[type], "\"%s\" is empty", types[type].name);
		assert_true((fault != NULL) == (type == 0));
		line_fault_also(collected.faults, fault, at(1), "it is here");
		line_fault_hint(collected.faults, fault, "make it longer");
		assert_null(line_faults_add(collected.faults, RULE_REGION_EMPTY, at(6), &types[type], "again"));
	}
	assert_non_null(line_faults_add(collected.faults, RULE_LINE_LENGTH, at(6), &types[1], "too long"));
	assert_int_equal(diagnostics_count(collected.diagnostics), 0);
	assert_printed(&collected, "quay:6:1: error: \"a\" is empty [region-empty]\n"
	                           "  f\n"
	                           "  ^\n"
	                           "quay:1:1: note: it is here\n"
	                           "quay:2:1: note: and in line types \"b\", \"c\", \"d\" and 1 more\n"
	                           "  hint: make it longer\n"
	                           "quay:6:1: error: too long [line-length]\n"
	                           "  f\n"
	                           "  ^\n");
	release(&collected);
}

static void reports_once(void **state)
{
	(void)state;
	static const struct line_type type = {.name = "a"};
	struct collected collected = collect();
	assert_non_null(line_faults_add(collected.faults, RULE_REGION_EMPTY, at(2), &type, "empty"));
	line_faults_report(collected.faults);
	assert_printed(&collected, "quay:2:1: error: empty [region-empty]\n"
	                           "  b\n"
	                           "  ^\n");
	release(&collected);
}

// The diagnostics keep 1,000; every further one is an error all the same.
static void counts_what_is_beyond_the_limit(void **state)
{
	(void)state;
	static const struct line_type type = {.name = "a"};
	struct collected collected = collect();
	for (uint32_t line = 1; line <= 1500; line++) {
		const struct line_fault *fault = line_faults_add(collected.faults, RULE_REGION_EMPTY, at(line), &type, "empty");
		assert_true((fault != NULL) == (line <= 1000));
	}
	line_faults_report(collected.faults);
	assert_int_equal(diagnostics_error_count(collected.diagnostics), 1500);
	assert_int_equal(diagnostics_count(collected.diagnostics), 1000);
	release(&collected);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(names_other_types_once),
		cmocka_unit_test(reports_once),
		cmocka_unit_test(counts_what_is_beyond_the_limit),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
