// Line types and their regions: what was edited is told as one change, worked out by hand here.
#include "compared.h"
#include "compare/parts.h"

#define ONE "  - { repeat: 3, line: a }\n"

// "name cells asserts;": regions as the language has them.
static struct compared compare(const char *old, const char *now)
{
	return compare_clocks("", old, ONE, "", now, ONE);
}

#define LINE(regions) "  a: { regions: [" regions "] }\n"
#define SYNC(n) "{ region: sync, cells: " #n ", assert: [sync] }, "
#define GAP(n) "{ region: gap, cells: " #n " }, "
#define MARK(n) "{ region: mark, cells: " #n ", assert: [mark] }, "
#define LOAD(n) "{ region: load, cells: " #n ", assert: [load] }, "

static void test_same(void **state)
{
	(void)state;
	assert_compared(compare(LINE(SYNC(2) GAP(3) LOAD(4)), LINE(SYNC(2) GAP(3) LOAD(4))), "", true, true);
}

static void test_edge(void **state)
{
	(void)state;
	assert_compared(compare(LINE(SYNC(2) GAP(3) LOAD(4)), LINE(SYNC(3) GAP(2) LOAD(4))),
	                "lines edge-moved: \"a\": edge between \"sync\" and \"gap\": 1 cell later (10 ticks, 1 us)\n", false, false);
	assert_compared(compare(LINE(SYNC(4) GAP(3) LOAD(4)), LINE(SYNC(2) GAP(5) LOAD(4))),
	                "lines edge-moved: \"a\": edge between \"sync\" and \"gap\": 2 cells earlier (20 ticks, 2 us)\n", false, false);
}

// Two edges far from each other are two changes; a region between two edges that move alike is one.
static void test_edges(void **state)
{
	(void)state;
	assert_compared(compare(LINE(SYNC(2) GAP(3) MARK(4) LOAD(5)), LINE(SYNC(3) GAP(2) MARK(5) LOAD(4))),
	                "lines edge-moved: \"a\": edge between \"sync\" and \"gap\": 1 cell later (10 ticks, 1 us)\n"
	                "lines edge-moved: \"a\": edge between \"mark\" and \"load\": 1 cell later (10 ticks, 1 us)\n", false, false);
	assert_compared(compare(LINE(SYNC(2) GAP(3) MARK(4) LOAD(5)), LINE(SYNC(3) GAP(3) MARK(3) LOAD(5))),
	                "lines region-moved: \"a\": \"gap\", between \"sync\" and \"mark\": 1 cell later (10 ticks, 1 us)\n", false, false);
	assert_compared(compare(LINE(SYNC(2) GAP(3) MARK(4) LOAD(5)), LINE(SYNC(3) GAP(3) MARK(4) LOAD(4))),
	                "lines regions-moved: \"a\": \"gap\" to \"mark\", between \"sync\" and \"load\": 1 cell later (10 ticks, 1 us)\n", false,
	                false);
}

// Lengths that do not sum to nothing are told one by one, and so is the line's.
static void test_lengths(void **state)
{
	(void)state;
	assert_compared(compare(LINE(SYNC(2) GAP(3) LOAD(4)), LINE(SYNC(2) GAP(3) LOAD(6))),
	                "lines length: \"a\": \"load\": 2 cells longer (20 ticks, 2 us); the line is 2 cells longer\n", false, false);
	assert_compared(compare(LINE(SYNC(2) GAP(3) LOAD(4)), LINE(SYNC(3) GAP(5) LOAD(3))),
	                "lines length: \"a\": \"sync\": 1 cell longer (10 ticks, 1 us)\n"
	                "lines length: \"a\": \"gap\": 2 cells longer (20 ticks, 2 us)\n"
	                "lines length: \"a\": \"load\": 1 cell shorter (10 ticks, 1 us)\n"
	                "lines line-length: \"a\": the line: 2 cells longer (20 ticks, 2 us)\n", false, false);
}

static void test_regions_come_and_go(void **state)
{
	(void)state;
	assert_compared(compare(LINE(SYNC(2) GAP(5) LOAD(4)), LINE(SYNC(2) GAP(3) MARK(2) LOAD(4))),
	                "lines region-added: \"a\": \"mark\": new, 2 cells from cell 5, asserts mark; \"gap\" is 2 cells shorter\n", false, false);
	assert_compared(compare(LINE(SYNC(2) GAP(5) LOAD(4)), LINE(SYNC(2) MARK(1) GAP(5) LOAD(3))),
	                "lines region-added: \"a\": \"mark\": new, 1 cell from cell 2, asserts mark; \"load\" is 1 cell shorter, \"gap\" comes 1"
	                " cell later\n", false, false);
	assert_compared(compare(LINE(SYNC(2) MARK(3) GAP(5) LOAD(4)), LINE(SYNC(2) GAP(5) LOAD(4))),
	                "lines region-removed: \"a\": \"mark\": gone, was 3 cells from cell 2, asserts mark; the line is 3 cells shorter\n", false,
	                false);
	assert_compared(compare(LINE(SYNC(2) MARK(3) LOAD(4)), LINE(SYNC(2) GAP(3) LOAD(4))),
	                "lines region-removed: \"a\": \"mark\": gone, was 3 cells from cell 2, asserts mark\n"
	                "lines region-added: \"a\": \"gap\": new, 3 cells from cell 2, asserts nothing\n", false, false);
	assert_compared(compare(LINE(SYNC(2) MARK(3) LOAD(4)), LINE(MARK(3) SYNC(2) LOAD(4))),
	                "lines region-reordered: \"a\": \"sync\": from cell 3, was from cell 0\n", false, false);
}

// Regions of one name: which came is told by what they assert and how long they are.
static void test_names_twice(void **state)
{
	(void)state;
	assert_compared(compare(LINE(GAP(5) SYNC(2) GAP(3) LOAD(4)), LINE(GAP(5) MARK(1) GAP(2) SYNC(2) GAP(3) LOAD(4))),
	                "lines region-added: \"a\": \"mark\": new, 1 cell from cell 5, asserts mark\n"
	                "lines region-added: \"a\": \"gap\": new, 2 cells from cell 6, asserts nothing\n"
	                "lines line-length: \"a\": the line: 3 cells longer (30 ticks, 3 us)\n", false, false);
	assert_compared(compare(LINE(GAP(5) SYNC(2) GAP(3) LOAD(4)), LINE(SYNC(2) GAP(3) LOAD(4))),
	                "lines region-removed: \"a\": \"gap\": gone, was 5 cells from cell 0, asserts nothing; the line is 5 cells shorter\n", false,
	                false);
}

static void test_words_only(void **state)
{
	(void)state;
	assert_compared(compare(LINE(SYNC(2) GAP(3) LOAD(4)), LINE(SYNC(2) "{ region: rest, cells: 3 }, " LOAD(4))),
	                "in words only region-renamed: \"a\": a region's name: \"rest\", was \"gap\"\n", true, true);
	assert_compared(compare(LINE(SYNC(2) GAP(3) LOAD(4)), LINE(SYNC(2) GAP(1) GAP(2) LOAD(4))),
	                "in words only regions-divided: \"a\": the same 3 cells from cell 2: \"gap\" and \"gap\", was \"gap\"\n", true, true);
	assert_compared(compare_clocks("", LINE(SYNC(2) LOAD(4)), ONE, "", "  b: { regions: [" SYNC(2) LOAD(4) "] }\n", "  - { repeat: 3, line: b }\n"),
	                "in words only line-renamed: a line type's name: \"b\", was \"a\"\n", true, true);
	assert_compared(compare(LINE(SYNC(2) LOAD(4)), LINE(SYNC(2) LOAD(4)) "  b: { regions: [" SYNC(2) GAP(4) "] }\n"),
	                "in words only line-added: line type \"b\": new, 6 cells, 60 ticks, not in the frame\n", true, true);
}

// Which regions became which: each part by itself, as short as can be.
static void test_divided(void **state)
{
	(void)state;
	assert_compared(compare(LINE("{ region: rest, cells: 1 }, " SYNC(2) GAP(3) GAP(3) LOAD(4)),
	                        LINE("{ region: east, cells: 1 }, " SYNC(1) SYNC(1) GAP(2) GAP(2) GAP(2) LOAD(1) LOAD(1) LOAD(2))),
	                "in words only region-renamed: \"a\": a region's name: \"east\", was \"rest\"\n"
	                "in words only regions-divided: \"a\": the same 2 cells from cell 1: \"sync\" and \"sync\", was \"sync\"\n"
	                "in words only regions-divided: \"a\": the same 6 cells from cell 3: \"gap\", \"gap\" and \"gap\", was \"gap\" and \"gap\"\n"
	                "in words only regions-divided: \"a\": the same 4 cells from cell 9: \"load\", \"load\" and \"load\", was \"load\"\n", true,
	                true);
	assert_compared(compare(LINE(SYNC(2) GAP(8)), LINE(SYNC(2) GAP(1) GAP(1) GAP(1) GAP(1) GAP(1) GAP(1) GAP(2))),
	                "in words only regions-divided: \"a\": the same 8 cells from cell 2: \"gap\", \"gap\", \"gap\", \"gap\", \"gap\" and 2 more,"
	                " was \"gap\"\n", true, true);
}

#define BOTH "  - { repeat: 3, line: a }\n  - { repeat: 1, line: b }\n"

// An edge that a line type shows and another has between regions that do the same: of the latter it is words only. What is held is not only said.
static void test_unseen(void **state)
{
	(void)state;
	const char *dark = "  b: { regions: [" SYNC(2) GAP(3) "{ region: load, cells: 4 } ] }\n";
	const char *edited = "  b: { regions: [" SYNC(2) GAP(4) "{ region: load, cells: 3 } ] }\n";
	char old[500], now[500];
	snprintf(old, sizeof old, "%s%s", LINE(SYNC(2) GAP(3) LOAD(4)), dark);
	snprintf(now, sizeof now, "%s%s", LINE(SYNC(2) GAP(4) LOAD(3)), edited);
	assert_compared(compare_clocks("", old, BOTH, "", now, BOTH),
	                "lines edge-moved: \"a\": edge between \"gap\" and \"load\": 1 cell later (10 ticks, 1 us)\n"
	                "in words only edge-moved: \"b\": edge between \"gap\" and \"load\": 1 cell later (10 ticks, 1 us)\n", false, false);
	assert_compared(compare(LINE(SYNC(2) GAP(3) "{ region: rest, cells: 4, hold: { at: col } }, "),
	                        LINE(SYNC(2) GAP(4) "{ region: rest, cells: 3, hold: { at: col } }, ")),
	                "lines edge-moved: \"a\": edge between \"gap\" and \"rest\": 1 cell later (10 ticks, 1 us)\n", false, false);
}

#define NAMED(name, regions) "  " name ": { regions: [" regions "] }\n"
#define X SYNC(2) GAP(3) LOAD(4)
#define Y SYNC(5) GAP(4)

// Names that went round among line types: as such, if the frame has them where they were.
static void test_names_exchanged(void **state)
{
	(void)state;
	assert_compared(compare_clocks("", NAMED("a", X) NAMED("b", Y), BOTH, "", NAMED("b", X) NAMED("a", Y),
	                               "  - { repeat: 3, line: b }\n  - { repeat: 1, line: a }\n"),
	                "in words only line-renamed: a line type's name: \"b\", was \"a\"\n"
	                "in words only line-renamed: a line type's name: \"a\", was \"b\"\n", true, true);
	assert_compared(compare_clocks("", NAMED("a", X) NAMED("b", Y), BOTH, "", NAMED("b", X) NAMED("c", Y),
	                               "  - { repeat: 2, line: b }\n  - { repeat: 1, line: c }\n"),
	                "frame repeat: block 1, \"b\": 2 lines, was 3 lines\n"
	                "in words only line-renamed: a line type's name: \"b\", was \"a\"\n"
	                "in words only line-renamed: a line type's name: \"c\", was \"b\"\n", false, false);
	assert_compared(compare_clocks("", NAMED("b", Y) NAMED("a", X), BOTH, "", NAMED("a", MARK(9)) NAMED("b", X) NAMED("c", Y),
	                               "  - { repeat: 1, line: a }\n  - { repeat: 3, line: b }\n  - { repeat: 1, line: c }\n"),
	                "lines line-added: line type \"a\": new, 9 cells, 90 ticks\n"
	                "frame block-added: block 1, \"a\": new, 1 line\n"
	                "in words only line-renamed: a line type's name: \"c\", was \"b\"\n"
	                "in words only line-renamed: a line type's name: \"b\", was \"a\"\n", false, false);
	// What shows there has changed: the lines were edited.
	assert_compared(compare_clocks("", NAMED("a", SYNC(2) GAP(3) LOAD(4)) NAMED("b", SYNC(3) GAP(2) LOAD(4)), BOTH, "",
	                               NAMED("a", SYNC(3) GAP(2) LOAD(4)) NAMED("b", SYNC(2) GAP(3) LOAD(4)), BOTH),
	                "lines edge-moved: \"a\": edge between \"sync\" and \"gap\": 1 cell later (10 ticks, 1 us)\n"
	                "lines edge-moved: \"b\": edge between \"sync\" and \"gap\": 1 cell earlier (10 ticks, 1 us)\n", false, false);
	// A copy under another name, and the first one edited, is a new line type.
	assert_compared(compare_clocks("", NAMED("a", X), ONE, "", NAMED("a", SYNC(3) GAP(2) LOAD(4)) NAMED("b", X), BOTH),
	                "lines edge-moved: \"a\": edge between \"sync\" and \"gap\": 1 cell later (10 ticks, 1 us)\n"
	                "lines line-added: line type \"b\": new, 9 cells, 90 ticks\n"
	                "frame block-added: block 2, \"b\": new, 1 line\n", false, false);
}

#define OTHERS NAMED("y", SYNC(7) MARK(2)) NAMED("z", SYNC(6) MARK(3))

// Another name and edits too: how much is alike, of 9 or 11 cells, and the place in the frame. 8 of 9 do where the frame has it between the same line
// types or as often; 4 of 9 never do.
static void test_renamed_and_edited(void **state)
{
	(void)state;
	const char *frame = "  - { repeat: 3, line: a }\n  - { repeat: 1, line: y }\n  - { repeat: 1, line: z }\n";
	assert_compared(compare_clocks("", NAMED("a", X), ONE, "", NAMED("b", SYNC(3) GAP(2) LOAD(4)), "  - { repeat: 3, line: b }\n"),
	                "lines edge-moved: \"b\": edge between \"sync\" and \"gap\": 1 cell later (10 ticks, 1 us)\n"
	                "in words only line-renamed: a line type's name: \"b\", was \"a\"\n", false, false);
	assert_compared(compare_clocks("", NAMED("a", X), ONE, "", NAMED("b", MARK(2) SYNC(2) GAP(3) LOAD(4)), "  - { repeat: 3, line: b }\n"),
	                "lines region-added: \"b\": \"mark\": new, 2 cells from cell 0, asserts mark; the line is 2 cells longer\n"
	                "in words only line-renamed: a line type's name: \"b\", was \"a\"\n", false, false);
	assert_compared(compare_clocks("", NAMED("a", X) OTHERS, frame, "", NAMED("b", SYNC(3) GAP(2) LOAD(4)) OTHERS,
	                               "  - { repeat: 2, line: b }\n  - { repeat: 1, line: y }\n  - { repeat: 1, line: z }\n"),
	                "lines edge-moved: \"b\": edge between \"sync\" and \"gap\": 1 cell later (10 ticks, 1 us)\n"
	                "frame repeat: block 1, \"b\": 2 lines, was 3 lines\n"
	                "in words only line-renamed: a line type's name: \"b\", was \"a\"\n", false, false);
	assert_compared(compare_clocks("", NAMED("a", X) OTHERS, frame, "", NAMED("b", SYNC(3) GAP(2) LOAD(4)) OTHERS,
	                               "  - { repeat: 1, line: y }\n  - { repeat: 2, line: b }\n  - { repeat: 1, line: z }\n"),
	                "lines line-removed: line type \"a\": gone, was 9 cells, 90 ticks\n"
	                "lines line-added: line type \"b\": new, 9 cells, 90 ticks\n"
	                "frame block-removed: old block 1, \"a\": gone, was 3 lines\n"
	                "frame block-added: block 2, \"b\": new, 2 lines\n", false, false);
	assert_compared(compare_clocks("", NAMED("a", X), ONE, "", NAMED("b", SYNC(4) MARK(3) GAP(2)), "  - { repeat: 3, line: b }\n"),
	                "lines line-removed: line type \"a\": gone, was 9 cells, 90 ticks\n"
	                "lines line-added: line type \"b\": new, 9 cells, 90 ticks\n"
	                "frame block-removed: old block 1, \"a\": gone, was 3 lines\n"
	                "frame block-added: block 1, \"b\": new, 3 lines\n", false, false);
}

// Two that were renamed and edited are told apart by what is alike, in the order of the frame; and there is a limit to the steps.
static void test_renamed_and_edited_both(void **state)
{
	(void)state;
	const char *frame = "  - { repeat: 3, line: c }\n  - { repeat: 1, line: d }\n";
	const char *now = NAMED("d", SYNC(4) GAP(5)) NAMED("c", SYNC(3) GAP(2) LOAD(4));
	struct compared compared = compare_clocks("", NAMED("a", X) NAMED("b", Y), BOTH, "", now, frame);
	struct comparing comparing = {.arena = arena_create(), .old_timeline = compared.old.timeline, .now_timeline = compared.now.timeline,
	                              .old = compared.old.plan, .now = compared.now.plan, .work_left = 39};
	match_signals(&comparing);
	match_lines(&comparing);
	assert_false(comparing.failed);
	assert_int_equal(comparing.line_of[0], NONE);
	comparing.work_left = 40; // half of it: 2 + 3 regions against 2 each, both ways
	match_lines(&comparing);
	assert_int_equal(comparing.line_of[0], 1);
	assert_int_equal(comparing.line_of[1], 0);
	assert_false(comparing.failed);
	arena_destroy(comparing.arena);
	assert_compared(compared,
	                "lines edge-moved: \"c\": edge between \"sync\" and \"gap\": 1 cell later (10 ticks, 1 us)\n"
	                "lines edge-moved: \"d\": edge between \"sync\" and \"gap\": 1 cell earlier (10 ticks, 1 us)\n"
	                "in words only line-renamed: a line type's name: \"c\", was \"a\"\n"
	                "in words only line-renamed: a line type's name: \"d\", was \"b\"\n", false, false);
}

// The same edit of several line types is one change; beyond six, words name five of them.
static void test_several_lines(void **state)
{
	(void)state;
	const char *more = "  b: { like: a }\n  c: { like: a }\n  d: { like: a }\n  e: { like: a }\n  f: { like: a }\n  g: { like: a }\n";
	const char *frame = "  - { repeat: 1, line: a }\n  - { repeat: 1, line: b }\n  - { repeat: 1, line: c }\n  - { repeat: 1, line: d }\n"
	                    "  - { repeat: 1, line: e }\n  - { repeat: 1, line: f }\n  - { repeat: 1, line: g }\n";
	char old[1000], now[1000];
	snprintf(old, sizeof old, "%s%s", LINE(SYNC(2) GAP(3) LOAD(4)), more);
	snprintf(now, sizeof now, "%s%s", LINE(SYNC(2) GAP(2) LOAD(5)), more);
	struct compared compared = compare_clocks("", old, frame, "", now, frame);
	assert_int_equal(compared.comparison->count, 1);
	assert_int_equal(compared.comparison->changes[0].line_count, 7);
	assert_string_equal(compared.comparison->changes[0].lines[6], "g");
	assert_compared(compared, "lines edge-moved: \"a\", \"b\", \"c\", \"d\", \"e\" and 2 more line types: edge between \"gap\" and \"load\": 1"
	                " cell earlier (10 ticks, 1 us)\n", false, false);
}

static void test_asserts_and_stretches(void **state)
{
	(void)state;
	assert_compared(compare(LINE(SYNC(2) GAP(3) LOAD(4)), LINE(SYNC(2) "{ region: gap, cells: 3, assert: [mark, sync] }, " LOAD(4))),
	                "lines asserts: \"a\": \"gap\" asserts: sync and mark, was nothing\n", false, false);
	assert_compared(compare(LINE(SYNC(2) GAP(3) "{ region: load, cells: 4, stretch: 2 }, "),
	                        LINE(SYNC(2) "{ region: gap, cells: 3, stretch: 2 }, { region: load, cells: 4 }, ")),
	                "lines stretched-moved: \"a\": 2 stretched cells: in \"gap\", was in \"load\"\n", false, false);
	assert_compared(compare(LINE(SYNC(2) GAP(3)), LINE(SYNC(2) "{ region: gap, cells: 3, stretch: 2 }, ")),
	                "lines stretched: \"a\": stretched cells of \"gap\": 2, was 0; the line is 8 ticks longer\n", false, false);
	// An edge behind a region whose cells are stretched moves by normal ones.
	assert_compared(compare(LINE("{ region: sync, cells: 2, assert: [sync], stretch: 2 }, " GAP(3)),
	                        LINE("{ region: sync, cells: 3, assert: [sync], stretch: 2 }, " GAP(2))),
	                "lines edge-moved: \"a\": edge between \"sync\" and \"gap\": 1 cell later (10 ticks, 1 us)\n", false, false);
}

#define HELD(expression) LINE(SYNC(2) "{ region: load, cells: 4, assert: [load], hold: { at: " expression " } }, ")

// Holds by what they come to: 6 cells a line, 3 lines.
static void test_holds(void **state)
{
	(void)state;
	assert_compared(compare(HELD("4*row + col"), HELD("col+row * 4")), "", true, true);
	assert_compared(compare(HELD("4*row + col"), HELD("4*line + cell - 2")), "", true, true);
	assert_compared(compare(HELD("4*row + col"), HELD("5*row + col")),
	                "lines hold: \"a\": \"load\" holds at: 5*row + col, was 4*row + col\n", false, false);
	assert_compared(compare(HELD("4*row + col"), LINE(SYNC(2) LOAD(4))), "lines hold: \"a\": \"load\" holds at: nothing, was 4*row + col\n",
	                false, false);
	// With another edit, what is only written otherwise is still no change.
	assert_compared(compare(LINE(SYNC(2) GAP(2) "{ region: load, cells: 4, assert: [load], hold: { at: 4*row + col } }, "),
	                        LINE(SYNC(3) GAP(1) "{ region: load, cells: 4, assert: [load], hold: { at: col + row*4 } }, ")),
	                "lines edge-moved: \"a\": edge between \"sync\" and \"gap\": 1 cell later (10 ticks, 1 us)\n", false, false);
}

// What a clock changes is told as such; cells are cells, ticks and times are the new clock's.
static void test_clocks(void **state)
{
	(void)state;
	assert_compared(compare_clocks("", LINE(SYNC(2) GAP(3)), ONE, ", accuracy: 9 ppm", LINE(SYNC(2) GAP(3)), ONE),
	                "clock added: accuracy: new, 9 ppm\n", true, false);
	struct compared compared = compare_clocks("", LINE(SYNC(2) GAP(3)), ONE, ", dot: 2 ticks", LINE(SYNC(3) GAP(2)), ONE);
	assert_true(compared.comparison->same_clock);
	assert_compared(compared, "clock changed: dot: 2 ticks, was 1 tick\n"
	                "lines edge-moved: \"a\": edge between \"sync\" and \"gap\": 1 cell later (10 ticks, 1 us)\n", false, false);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_same),          cmocka_unit_test(test_edge),
		cmocka_unit_test(test_edges),         cmocka_unit_test(test_lengths),
		cmocka_unit_test(test_regions_come_and_go), cmocka_unit_test(test_names_twice),
		cmocka_unit_test(test_words_only),    cmocka_unit_test(test_several_lines),
		cmocka_unit_test(test_asserts_and_stretches), cmocka_unit_test(test_holds),
		cmocka_unit_test(test_clocks),        cmocka_unit_test(test_divided),
		cmocka_unit_test(test_unseen),        cmocka_unit_test(test_names_exchanged),
		cmocka_unit_test(test_renamed_and_edited), cmocka_unit_test(test_renamed_and_edited_both),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
