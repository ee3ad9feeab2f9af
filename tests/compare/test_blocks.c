// The frame's blocks, and alignments.
#include "compared.h"
#include "compare/parts.h"

#define LINES "  a: { regions: [ { region: r, cells: 2, assert: [sync] }, { region: s, cells: 2 } ] }\n" \
              "  b: { regions: [ { region: r, cells: 4, assert: [load] } ] }\n" \
              "  c: { regions: [ { region: r, cells: 4, assert: [mark], hold: { at: row } } ] }\n"

static void frames(const char *old, const char *now, const char *words, bool same)
{
	assert_compared(compare_clocks("", LINES, old, "", LINES, now), words, same, same);
}

static void test_repeats(void **state)
{
	(void)state;
	frames("  - { repeat: 3, line: a }\n  - { repeat: 1, line: b }\n", "  - { repeat: 4, line: a }\n  - { repeat: 1, line: b }\n",
	       "frame repeat: block 1, \"a\": 4 lines, was 3 lines\n", false);
	frames("  - { repeat: 3, line: a }\n", "  - { repeat: 1, line: a }\n  - { repeat: 2, line: a }\n", "", true);
	// Blocks are named by their number in the new plan, joined or not, and where it is another, that in the old one too.
	frames("  - { repeat: 3, line: a }\n  - { repeat: 2, line: b }\n",
	       "  - { repeat: 1, line: a }\n  - { repeat: 2, line: a }\n  - { repeat: 1, line: b }\n",
	       "frame repeat: block 3 (old block 2), \"b\": 1 line, was 2 lines\n", false);
}

static void test_come_and_go(void **state)
{
	(void)state;
	frames("  - { repeat: 3, line: a }\n  - { repeat: 2, line: b }\n", "  - { repeat: 3, line: a }\n",
	       "frame block-removed: old block 2, \"b\": gone, was 2 lines\n", false);
	frames("  - { repeat: 3, line: a }\n", "  - { repeat: 1, line: b }\n  - { repeat: 3, line: a }\n",
	       "frame block-added: block 1, \"b\": new, 1 line\n", false);
	frames("  - { repeat: 3, line: a }\n  - { repeat: 2, line: b }\n  - { repeat: 1, line: c }\n",
	       "  - { repeat: 2, line: b }\n  - { repeat: 1, line: c }\n  - { repeat: 3, line: a }\n",
	       "frame block-moved: 3 lines of \"a\": block 3, was block 1\n", false);
}

// Where lines hold what counts the rows of their block, a cut is a change; nothing else is then to be seen.
static void test_rows(void **state)
{
	(void)state;
	frames("  - { repeat: 3, line: c }\n  - { repeat: 1, line: a }\n",
	       "  - { repeat: 2, line: c }\n  - { repeat: 1, line: c }\n  - { repeat: 1, line: a }\n",
	       "frame repeat: block 1, \"c\": 2 lines, was 3 lines\n"
	       "frame block-added: block 2, \"c\": new, 1 line\n", false);
}

// Lines of four cells, sync in two: the same loop, cut where sync ends, or in the middle of a line; and one cell of another.
static void test_cut(void **state)
{
	(void)state;
	static const char cut[] = "  a: { regions: [ { region: s, cells: 2 }, { region: r, cells: 2, assert: [sync] } ] }\n"
	                          "  b: { regions: [ { region: r, cells: 4, assert: [load] } ] }\n"
	                          "  d: { regions: [ { region: s, cells: 2 } ] }\n"
	                          "  e: { regions: [ { region: r, cells: 2, assert: [sync] } ] }\n";
	static const char frame[] = "  - { repeat: 3, line: a }\n  - { repeat: 2, line: b }\n";
	assert_compared(compare_clocks("", LINES, frame, "", cut,
	                               "  - { repeat: 2, line: a }\n  - { repeat: 1, line: d }\n  - { repeat: 2, line: b }\n  - { repeat: 1, line: e }\n"),
	                "in words only line-removed: line type \"c\": gone, was 4 cells, 40 ticks, not in the frame\n"
	                "in words only rotated: the frame is the same loop, begun at what was line 0, cell 2; its lines are cut elsewhere\n", true, true);
	struct compared other =
		compare_clocks("", LINES, frame, "", cut,
	                       "  - { repeat: 2, line: a }\n  - { repeat: 1, line: e }\n  - { repeat: 2, line: b }\n  - { repeat: 1, line: e }\n");
	assert_false(other.comparison->same_timeline);
	assert_false(other.comparison->same_meaning);
	forget(&other);
}

// Alignments.

struct lists {
	int old[8], now[8];
};

static uint32_t same_number(const void *context, size_t old, size_t now)
{
	const struct lists *lists = context;
	return lists->old[old] == lists->now[now] ? 2 : lists->old[old] / 10 == lists->now[now] / 10 ? 1 : 0;
}

static void align(struct lists lists, size_t old_count, size_t now_count, const size_t *wanted)
{
	struct comparing comparing = {.arena = arena_create(), .work_left = 1000};
	struct alignment alignment = {.old_count = old_count, .now_count = now_count};
	assert_true(alignment_begin(&comparing, &alignment));
	assert_true(align_lists(&comparing, same_number, 2, &lists, &alignment));
	for (size_t old = 0; old < old_count; old++)
		assert_int_equal(alignment.now_of[old], wanted[old]);
	for (size_t now = 0; now < now_count; now++)
		assert_true(alignment.old_of[now] == NONE || alignment.now_of[alignment.old_of[now]] == now);
	arena_destroy(comparing.arena);
}

static void test_alignment(void **state)
{
	(void)state;
	align((struct lists){{10, 20, 30}, {10, 20, 30}}, 3, 3, (const size_t[]){0, 1, 2});
	align((struct lists){{10, 20, 30}, {10, 30}}, 3, 2, (const size_t[]){0, NONE, 1});
	align((struct lists){{10, 21, 30}, {20, 10, 22, 30}}, 3, 4, (const size_t[]){1, 2, 3});
	align((struct lists){{10, 11, 12}, {12, 10}}, 3, 2, (const size_t[]){0, 1, NONE});
	align((struct lists){{10, 20}, {30, 40}}, 2, 2, (const size_t[]){NONE, NONE});
}

// With too much to look at, what is alike at the ends is aligned, and that it was not all is told.
static void test_alignment_limit(void **state)
{
	(void)state;
	const struct lists lists = {{10, 20, 30, 40}, {10, 30, 20, 40}};
	struct comparing comparing = {.arena = arena_create(), .work_left = 3};
	struct alignment alignment = {.old_count = 4, .now_count = 4};
	assert_true(alignment_begin(&comparing, &alignment));
	assert_false(align_lists(&comparing, same_number, 2, &lists, &alignment));
	assert_false(comparing.failed);
	assert_int_equal(alignment.now_of[0], 0);
	assert_int_equal(alignment.now_of[3], 3);
	assert_int_equal(alignment.now_of[1], NONE);
	arena_destroy(comparing.arena);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_repeats),   cmocka_unit_test(test_come_and_go), cmocka_unit_test(test_rows), cmocka_unit_test(test_cut),
		cmocka_unit_test(test_alignment), cmocka_unit_test(test_alignment_limit),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
