// Which old cell each new one is: frames put together by hand, one letter a cell, as pins show it. s: sync, l: load, p: neither.
#include "../layout/laid.h"

#include "near/near.h"

#define NONE NO_STATE

enum { SYNC = 1, LOAD = 4 }; // signals of laid.h

static uint64_t pins_of(char letter)
{
	return letter == 's' ? SYNC : letter == 'l' ? LOAD : 0;
}

// An old frame whose cell i has state 100 + i.
static struct old_frame old_frame(struct arena *arena, const char *letters)
{
	struct old_frame frame = {.closed = true, .cell_count = (uint32_t)strlen(letters), .known = SYNC | LOAD};
	frame.states = arena_array(arena, frame.cell_count, sizeof *frame.states);
	frame.pins = arena_array(arena, frame.cell_count, sizeof *frame.pins);
	assert_true(frame.states != NULL && frame.pins != NULL);
	for (uint32_t cell = 0; cell < frame.cell_count; cell++) {
		frame.states[cell] = 100 + cell;
		frame.pins[cell] = pins_of(letters[cell]);
	}
	return frame;
}

// A new frame whose only line type shows letters. load has a lead of one cell: it is asserted in the cell after.
static struct laid new_frame(const char *letters, unsigned repeat)
{
	struct arena *arena = arena_create();
	struct text regions = {0}, frame = {0};
	assert_non_null(arena);
	text_put(&regions, "  a:\n    regions:\n");
	for (size_t cell = 0, cells = strlen(letters); cell < cells; cell++)
		text_printf(&regions, "      - { region: r, cells: 1, assert: [%s%s] }\n", letters[cell] == 's' ? "sync, " : "",
		            letters[(cell + cells - 1) % cells] == 'l' ? "load" : "");
	text_printf(&frame, "  - { repeat: %u, line: a }\n", repeat);
	struct laid laid = lay("", text_string(&regions), text_string(&frame));
	assert_laid(&laid);
	text_release(&regions);
	text_release(&frame);
	arena_destroy(arena);
	return laid;
}

// The old cell of each new one, less 100, as letters from a on; "." for none.
static void matched(enum near_way way, const char *old, const char *now, unsigned repeat, const char *wanted)
{
	struct arena *arena = arena_create();
	char found[64] = "";
	assert_non_null(arena);
	const struct old_frame frame = old_frame(arena, old);
	struct laid laid = new_frame(now, repeat);
	const struct preference *preference = near_preference(arena, laid.timeline, &frame, way);
	assert_non_null(preference);
	for (uint32_t cell = 0; cell < laid.timeline->cell_count; cell++) {
		const uint32_t state = preference->state_of_cell[cell];
		found[cell] = (char)(state == NONE ? '.' : 'a' + (state - 100));
	}
	assert_string_equal(found, wanted);
	release(&laid);
	arena_destroy(arena);
}

static void test_same(void **state)
{
	(void)state;
	for (enum near_way way = NEAR_LINES; way < NEAR_WAYS; way++)
		matched(way, "sspppp", "sspppp", 1, "abcdef");
	matched(NEAR_LINES, "ssppssppsspp", "sspp", 3, "abcdefghijkl");
	matched(NEAR_SHOWN, "ssppssppsspp", "sspp", 3, "abcdefghijkl");
}

// A line more, and one less: those that are there stay.
static void test_lines(void **state)
{
	(void)state;
	matched(NEAR_LINES, "sspssp", "ssp", 3, "abcdef...");
	matched(NEAR_LINES, "sspsspssp", "ssp", 2, "abcdef");
	matched(NEAR_FRAME, "sspssp", "ssp", 3, "abcdef...");
	// Of lines that show the same, others may have come to differ, or differ no more.
	matched(NEAR_LINES, "sspsppsspspp", "ssp", 4, "abcdefghijkl");
}

// A longer pulse: by place all cells stay, by what they show the picture's first is gone, and a cell before the pulse's last new.
static void test_moved_edge(void **state)
{
	(void)state;
	matched(NEAR_LINES, "sspppssppp", "ssspp", 2, "abcdefghij");
	matched(NEAR_SHOWN, "ssppp", "ssspp", 1, "a.bde");
	matched(NEAR_SHOWN, "sssppp", "sspppp", 1, "ac.def");
}

// A longer line: what is alike at both ends stays there; by what they show, each span's ends.
static void test_longer_line(void **state)
{
	(void)state;
	matched(NEAR_LINES, "sspplp", "ssppplp", 1, "abcd.ef");
	matched(NEAR_SHOWN, "sspplp", "ssppplp", 1, "abc.def");
	matched(NEAR_LINES, "ssppplp", "sspplp", 1, "abcdfg");
	matched(NEAR_LINES, "ssppsp", "sspppsp", 1, "abcd.ef");
	matched(NEAR_LINES, "sspp", "sspppp", 1, "abcd..");
	matched(NEAR_SHOWN, "sspp", "sspppp", 1, "abc..d");
	matched(NEAR_LINES, "sspppp", "sspp", 1, "abcd");
}

// A region that went to another place of the line: its cells give their states to those that are new and show the same, those before the last of
// a span, as the last one's row has what the next span shows.
static void test_spliced(void **state)
{
	(void)state;
	matched(NEAR_SHOWN, "ssppllpppp", "ssppppllpp", 1, "abcghdefij");
	matched(NEAR_SHOWN, "ssplpplp", "ssplplpp", 1, "abcdfgeh");
}

// Lines begin with sync, wherever the frame begins: a front porch that is longer by a cell leaves the other cells where they were.
static void test_begins_before_sync(void **state)
{
	(void)state;
	matched(NEAR_LINES, "pssppssp", "ppsspp", 1, "a.bcde");
	matched(NEAR_FRAME, "psspp", "ppssp", 1, "abcde");
}

// No frame: nothing to keep.
static void test_empty(void **state)
{
	(void)state;
	for (enum near_way way = NEAR_LINES; way < NEAR_WAYS; way++)
		matched(way, "", "ssp", 1, "...");
}

// rows: those of an old frame, latched or not, whose bits in `inverted` are turned over. What is read are the cells as they were meant.
static void read_as(const char *rows, bool latched, uint64_t inverted, const char *now, unsigned repeat)
{
	struct arena *arena = arena_create();
	assert_non_null(arena);
	struct old_frame frame = old_frame(arena, rows);
	const uint32_t count = frame.cell_count;
	struct laid laid = new_frame(now, repeat);
	frame.latched = latched;
	frame.data = frame.known;
	frame.rows = arena_array(arena, count, sizeof *frame.rows);
	frame.decoded = arena_array(arena, count, sizeof *frame.decoded);
	assert_true(frame.rows != NULL && frame.decoded != NULL);
	for (uint32_t cell = 0; cell < count; cell++) {
		frame.rows[cell] = pins_of(rows[cell]) ^ inverted;
		frame.decoded[cell] = 0;
	}
	old_frame_read(&frame, 0);
	assert_true(old_frame_read_likest(&frame, laid.timeline));
	assert_int_equal(frame.inverted, inverted);
	for (uint32_t cell = 0; cell < count; cell++)
		assert_int_equal(frame.pins[cell], pins_of(rows[latched ? (cell + count - 1) % count : cell]));
	release(&laid);
	arena_destroy(arena);
}

static void test_read(void **state)
{
	(void)state;
	for (unsigned inverted = 0; inverted < 4; inverted++) {
		const uint64_t signals = (inverted & 1 ? SYNC : 0) | (inverted & 2 ? LOAD : 0);
		read_as("spppls" "spppls", true, signals, "sspppl", 2);
		read_as("sspppl" "sspppl", false, signals, "sspppl", 2);
		// A line more is no reason to read otherwise, and neither is an edge that moved.
		read_as("spppls" "spppls", true, signals, "sspppl", 3);
		read_as("sspppl" "sspppl", false, signals, "ssppll", 2);
	}
	// Not by times alone: sync that is longer by half a line is asserted as long as it was not before.
	read_as("ssplplpl" "ssplplpl", false, 0, "ssssslpl", 2);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_same),        cmocka_unit_test(test_lines), cmocka_unit_test(test_moved_edge),
		cmocka_unit_test(test_longer_line), cmocka_unit_test(test_begins_before_sync), cmocka_unit_test(test_empty),
		cmocka_unit_test(test_spliced),      cmocka_unit_test(test_read),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
