// Verdicts by limits, and what would mend a miss. All plans have cells of 10 us and lines of 16 cells; limits are set by hand.
//
//     line   0 broad     sync 0-13, rest 14-15
//            1 plain     sync 0-1, rest 2-15
//            2-4 picture sync 0-1, breezeway 2, burst 3-4, porch 5, picture 6-13, front 14-15
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "catalogue/catalogue.h"
#include "library/library.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

#define LINES \
	"lines:\n" \
	"  broad: { regions: [ { region: sync, cells: 14, assert: [sync, blank] }, { region: rest, cells: 2, assert: [blank] } ] }\n" \
	"  plain: { regions: [ { region: sync, cells: 2, assert: [sync, blank] }, { region: rest, cells: 14, assert: [blank] } ] }\n" \
	"  stray: { regions: [ { region: sync, cells: 2, assert: [sync, blank] }, { region: rest, cells: 4, assert: [blank] }," \
	" { region: again, cells: 2, assert: [sync, blank] }, { region: more, cells: 8, assert: [blank] } ] }\n" \
	"  close: { regions: [ { region: sync, cells: 2, assert: [sync, blank] }, { region: burst, cells: 2, assert: [blank, burst] }," \
	" { region: rest, cells: 12, assert: [blank] } ] }\n" \
	"  long: { regions: [ { region: sync, cells: 2, assert: [sync, blank] }, { region: rest, cells: 15, assert: [blank] } ] }\n" \
	"  less: { regions: [ { region: sync, cells: 2, assert: [sync, blank] }, { region: rest, cells: 4, assert: [blank] }," \
	" { region: picture, cells: 7 }, { region: front, cells: 3, assert: [blank] } ] }\n" \
	"  picture:\n    regions:\n" \
	"      - { region: sync, cells: 2, assert: [sync, blank] }\n" \
	"      - { region: breezeway, cells: 1, assert: [blank] }\n" \
	"      - { region: burst, cells: 2, assert: [blank, burst] }\n" \
	"      - { region: porch, cells: 1, assert: [blank] }\n" \
	"      - { region: picture, cells: 8 }\n" \
	"      - { region: front, cells: 2, assert: [blank] }\n"

#define SIGNALS \
	"signals:\n" \
	"  sync: { role: composite sync, active: low }\n" \
	"  blank: { role: blanking, active: high, lead: 3 cells }\n" \
	"  burst: { role: burst gate, active: high, lead: -1 cell }\n"

#define FRAME "frame: [ { repeat: 1, line: broad }, { repeat: 1, line: plain }, { repeat: 3, line: picture } ]\n"

struct board {
	scanlatch_messages *messages;
	scanlatch_plan *read;
	struct plan *plan;
	struct proofs *proofs;         // of the plan
	struct limit limits[10];
	struct standard standard;
};

static struct board *board_of(const char *clock, const char *signals, const char *frame, const char *chips)
{
	struct board *board = calloc(1, sizeof *board);
	char text[4096];
	assert_non_null(board);
	const int length = snprintf(text, sizeof text,
	                            "scanlatch: 1\nname: quay\nclock: { master: 1 MHz, cell: 10 ticks, dot: 5 ticks, subcarrier: 125 kHz, phase: free%s }\n"
	                            "%s%s%smachine: { form: loop, state: 7 bits }\nchips: %s\n", clock, signals, LINES, frame, chips);
	assert_true(length > 0 && (size_t)length < sizeof text);
	board->messages = scanlatch_messages_create();
	assert_non_null(board->messages);
	board->read = scanlatch_plan_read("quay.yaml", text, (size_t)length, board->messages);
	if (board->read == NULL)
		fputs(scanlatch_messages_text(board->messages, false), stderr);
	assert_non_null(board->read);
	board->plan = board->read->plan;
	board->standard = (struct standard){.name = "quay", .fields = 1, .limits = board->limits};
	board->plan->standard = &board->standard;
	return board;
}

static void release(struct board *board)
{
	proofs_destroy(board->proofs);
	scanlatch_plan_destroy(board->read);
	scanlatch_messages_destroy(board->messages);
	free(board);
}

// Adds a limit; limits must be added in the order of items, studio first.
static void add_limit(struct board *board, enum limit_item item, enum limit_grade grade, const char *text)
{
	assert_true(board->standard.limit_count < COUNT_OF(board->limits));
	struct limit *limit = &board->limits[board->standard.limit_count++];
	*limit = (struct limit){.grade = grade, .source = "by hand", .nominal = FRACTION_ZERO, .low = FRACTION_ZERO, .high = FRACTION_ZERO};
	assert_int_equal(limit_parse(text, item, limit), LIMIT_OK);
}

static const struct limits_result *judge(struct board *board)
{
	proofs_destroy(board->proofs);
	board->proofs = proofs_of_plan(board->read->members[0].timeline);
	assert_non_null(board->proofs);
	return &board->proofs->limits;
}

static void assert_fraction(struct fraction found, const char *wanted)
{
	const char *slash = strchr(wanted, '/');
	struct fraction value;
	assert_true(fraction_make(atoll(wanted), slash != NULL ? atoll(slash + 1) : 1, &value));
	assert_int_equal(found.numerator, value.numerator);
	assert_int_equal(found.denominator, value.denominator);
}

// In microseconds; of what is no time, in its unit.
static void assert_times(struct interval found, enum limit_item item, const char *low, const char *high)
{
	if (limit_item_facts(item)->dimension != DIMENSION_CYCLES) {
		assert_true(fraction_multiply(found.low, fraction_whole(1000000), &found.low));
		assert_true(fraction_multiply(found.high, fraction_whole(1000000), &found.high));
	}
	assert_fraction(found.low, low);
	assert_fraction(found.high, high);
}

struct moved {
	const char *clock;
	enum limit_item item;
	const char *limit;
	enum limit_move move;
	int64_t cells;
	uint32_t cell;
	const char *low, *high;        // what would be measured; of a rate, its period
};

// Of what is measured, 0H and so on are those of the first line that shows it: line 1 for sync, line 2 (from cell 32) for burst and picture.
static const struct moved moves[] = {
	// Sync is 20 us; its end may come later by up to 13 cells, and earlier by one.
	{"", ITEM_SYNC_WIDTH, "at least 20.1 us", MOVE_EDGE, 1, 18, "30", "30"},
	{"", ITEM_SYNC_WIDTH, "at least 30 us", MOVE_EDGE, 1, 18, "30", "30"},
	{"", ITEM_SYNC_WIDTH, "at least 30.1 us", MOVE_EDGE, 2, 18, "40", "40"},
	{"", ITEM_SYNC_WIDTH, "at least 150 us", MOVE_EDGE, 13, 18, "150", "150"},
	{"", ITEM_SYNC_WIDTH, "at least 151 us", MOVE_NONE, 0, 0, NULL, NULL},
	{"", ITEM_SYNC_WIDTH, "at most 10 us", MOVE_EDGE, -1, 18, "10", "10"},
	{"", ITEM_SYNC_WIDTH, "at most 9 us", MOVE_NONE, 0, 0, NULL, NULL},
	{"", ITEM_SYNC_WIDTH, "22 us to 28 us", MOVE_NONE, 0, 0, NULL, NULL}, // no whole cell
	{"", ITEM_SYNC_WIDTH, "22 us to 30 us", MOVE_EDGE, 1, 18, "30", "30"},
	// What ends at 0H or at a pulse is set by its start, which comes earlier to make it longer.
	{"", ITEM_FRONT_PORCH, "at least 30 us", MOVE_EDGE, -1, 46, "30", "30"},
	{"", ITEM_FRONT_PORCH, "at least 101 us", MOVE_NONE, 0, 0, NULL, NULL}, // the picture has 8 cells
	{"", ITEM_FRONT_PORCH, "at least 90 us", MOVE_EDGE, -7, 46, "90", "90"},
	{"", ITEM_FRONT_PORCH, "at most 10 us", MOVE_EDGE, 1, 46, "10", "10"},
	{"", ITEM_SERRATION_WIDTH, "at least 30 us", MOVE_EDGE, -1, 14, "30", "30"},
	// What ends at an edge of its own is set by that: burst ends in cell 5, picture begins in 6 and ends in 14.
	{"", ITEM_BROAD_WIDTH, "at most 125 us", MOVE_EDGE, -2, 14, "120", "120"},
	{"", ITEM_BREEZEWAY, "at least 11 us", MOVE_EDGE, 1, 35, "20", "20"},
	{"", ITEM_BURST_START, "at least 31 us", MOVE_EDGE, 1, 35, "40", "40"},
	{"", ITEM_BURST_START_CYCLES, "at least 5 cycles", MOVE_EDGE, 1, 35, "5", "5"}, // 3.75, and 1.25 a cell
	{"", ITEM_BURST_LENGTH, "at most 15 us", MOVE_EDGE, -1, 37, "10", "10"},
	{"", ITEM_BURST_LENGTH_CYCLES, "at most 2 cycles", MOVE_EDGE, -1, 37, "5/4", "5/4"},
	{"", ITEM_BURST_TO_PICTURE, "at least 15 us", MOVE_EDGE, 1, 38, "20", "20"},
	{"", ITEM_BACK_PORCH, "at least 45 us", MOVE_EDGE, 1, 38, "50", "50"},
	{"", ITEM_HORIZONTAL_BLANKING, "at least 85 us", MOVE_EDGE, 1, 54, "90", "90"}, // of the next line
	{"", ITEM_PICTURE_START, "at least 70 us", MOVE_EDGE, 1, 38, "70", "70"},
	{"", ITEM_PICTURE_WIDTH, "at most 70 us", MOVE_EDGE, -1, 46, "70", "70"},
	{"", ITEM_HORIZONTAL_CENTRE, "at least 115 us", MOVE_PICTURE, 2, 38, "120", "120"},
	{"", ITEM_HORIZONTAL_CENTRE, "at most 99 us", MOVE_PICTURE, -1, 38, "90", "90"},
	// Lines are 160 us, 6.25 kHz: for less they must be longer.
	{"", ITEM_LINE_RATE, "at most 6 kHz", MOVE_LENGTH, 1, 16, "170", "170"},
	{"", ITEM_LINE_RATE, "0 Hz to 6 kHz", MOVE_LENGTH, 1, 16, "170", "170"},
	{"", ITEM_LINE_RATE, "at least 6.5 kHz", MOVE_LENGTH, -1, 16, "150", "150"},
	{"", ITEM_CYCLES_PER_LINE, "exactly 22.5 cycles", MOVE_LENGTH, 2, 16, "45/2", "45/2"},
	{"", ITEM_CYCLES_PER_LINE, "exactly 22 cycles", MOVE_NONE, 0, 0, NULL, NULL},
	// Nothing that edges of cells set.
	{"", ITEM_VERTICAL_BLANKING, "at least 5 lines", MOVE_NONE, 0, 0, NULL, NULL},
	{"", ITEM_FIELD_RATE, "at most 1 kHz", MOVE_NONE, 0, 0, NULL, NULL},
	// 1 % of accuracy: 20 us may be 20/1.01; 30 us would be kept but for it, and so a second cell is asked.
	{", accuracy: 10000 ppm", ITEM_SYNC_WIDTH, "at least 29.9 us", MOVE_EDGE, 2, 18, "4000/101", "4000/99"},
	{", accuracy: 10000 ppm", ITEM_SYNC_WIDTH, "at least 29 us", MOVE_EDGE, 1, 18, "1000/33", "1000/33"},
	{", accuracy: 10000 ppm", ITEM_LINE_RATE, "at most 6 kHz", MOVE_LENGTH, 1, 16, "17000/101", "17000/99"},
	{", accuracy: 10000 ppm", ITEM_CYCLES_PER_LINE, "at least 21 cycles", MOVE_LENGTH, 1, 16, "85/4", "85/4"},
	// A fifth: each cell of the 13 that 20 us need to be 120 even where the clock is fast counts for 8.3 us.
	{", accuracy: 200000 ppm", ITEM_SYNC_WIDTH, "at least 120 us", MOVE_EDGE, 13, 18, "125", "375/2"},
	// What the accuracy alone makes too wide no shift mends.
	{", accuracy: 10000 ppm", ITEM_SYNC_WIDTH, "19.9 us to 20.1 us", MOVE_NONE, 0, 0, NULL, NULL},
};

static void what_would_mend_a_miss(void **state)
{
	(void)state;
	for (size_t index = 0; index < COUNT_OF(moves); index++) {
		const struct moved *moved = &moves[index];
		struct board *board = board_of(moved->clock, SIGNALS, FRAME, "{ part: 28C64 }");
		add_limit(board, moved->item, GRADE_MONITOR, moved->limit);
		const struct limits_result *limits = judge(board);
		const struct limit_verdict *verdict = &limits->rows[moved->item].grades[GRADE_MONITOR];
		board->plan->grade = GRADE_MONITOR;
		assert_true(verdict->known);
		assert_false(verdict->judgement.kept);
		if (verdict->move != moved->move || verdict->move_cells != moved->cells)
			fail_msg("%s, %s: %d by %lld", limit_item_facts(moved->item)->name, moved->limit, verdict->move, (long long)verdict->move_cells);
		if (moved->move != MOVE_NONE) {
			assert_int_equal(verdict->move_cell, moved->cell);
			if (strcmp(moved->low, moved->high) != 0 || moved->clock[0] == '\0')
				assert_times(verdict->moved, moved->item, moved->low, moved->high);
		}
		release(board);
	}
}

// Where lines differ, it is the one that misses that is shown, and all of them move: lines of 160 and 170 us, front porches of 20 and 30 us.
static void what_would_mend_one_line_of_several(void **state)
{
	(void)state;
	static const char frame[] = "frame: [ { repeat: 1, line: broad }, { repeat: 1, line: plain }, { repeat: 2, line: less }, "
	                            "{ repeat: 2, line: picture }, { repeat: 2, line: long }, { repeat: 1, line: plain } ]\n";
	struct board *board = board_of("", SIGNALS, frame, "{ part: 28C64 }");
	add_limit(board, ITEM_LINE_RATE, GRADE_MONITOR, "5 kHz to 6 kHz");
	add_limit(board, ITEM_FRONT_PORCH, GRADE_MONITOR, "at least 25 us");
	const struct limits_result *limits = judge(board);
	const struct limit_verdict *rate = &limits->rows[ITEM_LINE_RATE].grades[GRADE_MONITOR];
	const struct limit_verdict *porch = &limits->rows[ITEM_FRONT_PORCH].grades[GRADE_MONITOR];
	assert_int_equal(rate->move_cells, 1);
	assert_int_equal(rate->move_cell, 16);
	assert_times(rate->moved, ITEM_LINE_RATE, "170", "180");
	assert_int_equal(porch->move_cells, -1);
	assert_int_equal(porch->move_cell, 64 + 14); // of the first line "picture"
	assert_times(porch->moved, ITEM_FRONT_PORCH, "30", "40");
	release(board);
}

// What is kept at one grade may be missed at the other; the plan's counts.
static void the_grade_of_the_plan_counts(void **state)
{
	(void)state;
	for (unsigned grade = 0; grade < GRADE_COUNT; grade++) {
		struct board *board = board_of("", SIGNALS, FRAME, "{ part: 28C64 }");
		board->plan->grade = (enum limit_grade)grade;
		add_limit(board, ITEM_FRONT_PORCH, GRADE_STUDIO, "1 us");             // for information
		add_limit(board, ITEM_FRONT_PORCH, GRADE_MONITOR, "at least 20 us");
		add_limit(board, ITEM_SYNC_WIDTH, GRADE_STUDIO, "22 us to 24 us");
		add_limit(board, ITEM_SYNC_WIDTH, GRADE_MONITOR, "20 us to 24 us");
		add_limit(board, ITEM_EQUALISING_WIDTH, GRADE_STUDIO, "at most 1 us"); // there are none
		add_limit(board, ITEM_SERRATION_WIDTH, GRADE_STUDIO, "1 us");
		const struct limits_result *limits = judge(board);
		assert_int_equal(limits->kept[GRADE_STUDIO], 0);
		assert_int_equal(limits->missed[GRADE_STUDIO], 1);
		assert_int_equal(limits->unknown[GRADE_STUDIO], 1);
		assert_int_equal(limits->kept[GRADE_MONITOR], 2);
		assert_int_equal(limits->missed[GRADE_MONITOR], 0);
		assert_int_equal(limits->unknown[GRADE_MONITOR], 0);
		assert_false(limits->rows[ITEM_EQUALISING_WIDTH].grades[GRADE_STUDIO].known);
		assert_true(limits->rows[ITEM_EQUALISING_WIDTH].grades[GRADE_STUDIO].has_limit);
		assert_false(limits->rows[ITEM_EQUALISING_WIDTH].grades[GRADE_MONITOR].has_limit);
		assert_true(limits->rows[ITEM_FRONT_PORCH].grades[GRADE_STUDIO].known);
		const bool missed = grade == GRADE_STUDIO;
		assert_int_equal(board->proofs->proof[PROOF_LIMITS].verdict, missed ? VERDICT_FAIL : VERDICT_PASS);
		assert_false(proof_is_must(PROOF_LIMITS));
		assert_false(proofs_failed(board->proofs, false));
		assert_int_equal(proofs_failed(board->proofs, true), missed);
		release(board);
	}
}

// What could not be measured is no miss.
static void what_is_unknown_is_not_missed(void **state)
{
	(void)state;
	struct board *board = board_of("", SIGNALS, FRAME, "{ part: 28C64 }");
	board->plan->grade = GRADE_MONITOR;
	add_limit(board, ITEM_EQUALISING_WIDTH, GRADE_STUDIO, "1 us"); // for information: nothing is amiss without it
	add_limit(board, ITEM_EQUALISING_WIDTH, GRADE_MONITOR, "at most 1 us");
	// The margin needs more than 64 bits, but the verdict does not.
	board->limits[2] = (struct limit){.item = ITEM_BROAD_WIDTH, .grade = GRADE_MONITOR, .has_low = true, .low = {1, INT64_MAX},
	                                  .nominal = FRACTION_ZERO, .high = FRACTION_ZERO};
	board->standard.limit_count = 3;
	const struct limits_result *limits = judge(board);
	assert_int_equal(limits->unknown[GRADE_MONITOR], 1);
	assert_int_equal(limits->kept[GRADE_MONITOR], 1);
	assert_int_equal(limits->missed[GRADE_MONITOR], 0);
	assert_int_equal(limits->unknown[GRADE_STUDIO], 0);
	assert_int_equal(board->proofs->proof[PROOF_LIMITS].verdict, VERDICT_PASS);
	release(board);
}

static void widened_by_the_accuracy(void **state)
{
	(void)state;
	struct board *board = board_of(", accuracy: 250000 ppm", SIGNALS, FRAME, "{ part: 28C64 }");
	add_limit(board, ITEM_SYNC_WIDTH, GRADE_MONITOR, "16 us to 27 us");
	const struct limits_result *limits = judge(board);
	assert_true(limits->rows[ITEM_SYNC_WIDTH].widened);
	assert_times(limits->rows[ITEM_SYNC_WIDTH].values, ITEM_SYNC_WIDTH, "16", "80/3");
	assert_times(limits->measurement->items[ITEM_SYNC_WIDTH].values, ITEM_SYNC_WIDTH, "20", "20");
	assert_int_equal(limits->kept[GRADE_MONITOR], 1);
	assert_false(limits->rows[ITEM_LINES_PER_FIELD].widened);
	assert_false(limits->rows[ITEM_EQUALISING_WIDTH].widened);
	release(board);
	// A breezeway from 0 to 10 us: only one of its ends moves.
	board = board_of(", accuracy: 250000 ppm", SIGNALS, "frame: [ { repeat: 1, line: broad }, { repeat: 1, line: plain }, "
	                 "{ repeat: 2, line: picture }, { repeat: 2, line: close } ]\n", "{ part: 28C64 }");
	limits = judge(board);
	assert_true(limits->rows[ITEM_BREEZEWAY].widened);
	assert_times(limits->rows[ITEM_BREEZEWAY].values, ITEM_BREEZEWAY, "0", "40/3");
	release(board);
}

// Lines without burst are judged by their numbers at studio grade.
static void pauses_count_at_studio_grade(void **state)
{
	(void)state;
	static const struct burst_pause right = {1, 1, 2, ""}, wrong = {1, 2, 3, ""};
	for (unsigned kept = 0; kept < 2; kept++) {
		struct board *board = board_of("", SIGNALS, FRAME, "{ part: 28C64 }");
		board->plan->grade = GRADE_STUDIO;
		board->standard.vertical_sync_line = 1;
		board->standard.pauses = kept ? &right : &wrong;
		board->standard.pause_count = 1;
		add_limit(board, ITEM_LINES_WITHOUT_BURST, GRADE_STUDIO, "exactly 2 lines");
		add_limit(board, ITEM_LINES_WITHOUT_BURST, GRADE_MONITOR, "exactly 2 lines");
		const struct limits_result *limits = judge(board);
		assert_int_equal(limits->kept[GRADE_STUDIO], kept);
		assert_int_equal(limits->kept[GRADE_MONITOR], 1);
		board->standard.vertical_sync_line = 0; // no numbers: nothing to judge by
		assert_int_equal(judge(board)->kept[GRADE_STUDIO], 1);
		release(board);
	}
}

// Only where the standard asks for a rate of fields, and there is a signal that could show it.
static void no_vertical_sync_is_a_miss(void **state)
{
	(void)state;
	static const char frame[] = "frame: [ { repeat: 1, line: plain }, { repeat: 2, line: picture } ]\n";
	struct board *board = board_of("", SIGNALS, frame, "{ part: 28C64 }");
	add_limit(board, ITEM_SYNC_WIDTH, board->plan->grade, "at least 1 us");
	assert_false(judge(board)->no_vertical_sync);
	assert_int_equal(board->proofs->proof[PROOF_LIMITS].verdict, VERDICT_PASS);
	release(board);
	board = board_of("", SIGNALS, frame, "{ part: 28C64 }");
	add_limit(board, ITEM_FIELD_RATE, board->plan->grade, "at least 1 Hz");
	assert_true(judge(board)->no_vertical_sync);
	assert_int_equal(board->proofs->proof[PROOF_LIMITS].verdict, VERDICT_FAIL);
	release(board);
}

static void strays_are_a_miss(void **state)
{
	(void)state;
	struct board *board = board_of("", SIGNALS, "frame: [ { repeat: 1, line: broad }, { repeat: 1, line: plain }, { repeat: 1, line: stray }, "
	                               "{ repeat: 1, line: picture } ]\n", "{ part: 28C64 }");
	judge(board);
	const struct proof *proof = &board->proofs->proof[PROOF_LIMITS];
	assert_int_equal(proof->verdict, VERDICT_FAIL);
	assert_true(proof->counterexample.present);
	assert_int_equal(proof->counterexample.cell, 38);
	assert_int_equal(proof->counterexample.state, NO_STATE);
	assert_string_equal(proof->counterexample.what, "1 sync pulse is of no line and of no vertical interval (the second in its line, or one that is "
	                    "too narrow)");
	release(board);
	board = board_of("", SIGNALS, "frame: [ { repeat: 1, line: broad }, { repeat: 1, line: plain }, { repeat: 2, line: stray } ]\n",
	                 "{ part: 28C64 }");
	judge(board);
	assert_non_null(strstr(board->proofs->proof[PROOF_LIMITS].counterexample.what, "2 sync pulses are of no line"));
	release(board);
}

static void without_a_raster_nothing_is_judged(void **state)
{
	(void)state;
	struct board *board = board_of("", "signals: { sync: { role: plain, active: low }, blank: { role: plain, active: high }, burst: { role: plain, active: high } }\n", FRAME,
	                               "{ part: 28C64 }");
	add_limit(board, ITEM_SYNC_WIDTH, GRADE_MONITOR, "at most 1 us");
	const struct limits_result *limits = judge(board);
	const struct proof *proof = &board->proofs->proof[PROOF_LIMITS];
	assert_int_equal(proof->verdict, VERDICT_FAIL);
	assert_false(proof->counterexample.present);
	assert_string_equal(proof->counterexample.what, "not judged: no signal has the role composite sync or horizontal sync");
	assert_int_equal(limits->unknown[GRADE_MONITOR], 1);
	release(board);
}

static void without_a_standard_there_is_nothing_to_prove(void **state)
{
	(void)state;
	struct board *board = board_of("", SIGNALS, FRAME, "{ part: 28C64 }");
	board->plan->standard = NULL;
	assert_null(judge(board)->measurement);
	assert_int_equal(board->proofs->proof[PROOF_LIMITS].verdict, VERDICT_ABSENT);
	release(board);
}

// Images.

static scanlatch_images *images_of(struct board *board)
{
	scanlatch_images *images = scanlatch_images_make(board->read, board->messages);
	assert_non_null(images);
	return images;
}

// Flips the bits of a signal's pin in the row before a cell (state: a cell's number), in the half of the chip that a bank sees.
static void spoil(scanlatch_images *images, const char *name, uint32_t cell, uint32_t bank)
{
	const struct plan *plan = images->plan->plan;
	for (unsigned pin = 0; pin < plan->chips[1].part->data_pins; pin++)
		if (plan->chips[1].data[pin].kind == DATA_SIGNAL && strcmp(plan->signals[plan->chips[1].data[pin].index].name, name) == 0)
			images->images[1].bytes[(bank << 7) + (cell == 0 ? 79 : cell - 1)] ^= (uint8_t)(1u << pin);
}

#define CHIPS \
	"[ { label: low, part: 28C64, address: [state.0, state.1, state.2, state.3, state.4, state.5, state.6, bank.0]," \
	" data: [next.0, next.1, next.2, next.3, next.4, next.5, next.6] }," \
	" { label: pins, part: 28C64, address: [state.0, state.1, state.2, state.3, state.4, state.5, state.6, bank.0]," \
	" data: [sync, blank, burst] } ]"

// Leads are undone: the pins show what was planned.
static void pins_are_measured_as_planned(void **state)
{
	(void)state;
	struct board *board = board_of("", SIGNALS, FRAME, CHIPS);
	add_limit(board, ITEM_SYNC_WIDTH, GRADE_MONITOR, "exactly 20 us");
	add_limit(board, ITEM_BURST_TO_PICTURE, GRADE_MONITOR, "exactly 10 us");
	scanlatch_images *images = images_of(board);
	scanlatch_proofs *proofs = scanlatch_prove(images);
	assert_non_null(proofs);
	assert_int_equal(proofs->proofs[0]->proof[PROOF_LIMITS].verdict, VERDICT_PASS);
	assert_int_equal(proofs->proofs[0]->limits.kept[GRADE_MONITOR], 2);
	scanlatch_proofs_destroy(proofs);
	scanlatch_images_destroy(images);
	release(board);
}

// What is measured is what the images show, not what the plan says; of banks, the first that fails is shown.
static void the_images_are_measured(void **state)
{
	(void)state;
	for (uint32_t bank = 0; bank < 2; bank++) {
		struct board *board = board_of("", SIGNALS, FRAME, CHIPS);
		board->plan->grade = GRADE_MONITOR;
		add_limit(board, ITEM_SYNC_WIDTH, GRADE_MONITOR, "exactly 20 us");
		scanlatch_images *images = images_of(board);
		assert_int_equal(images->members[0].table->state_of_cell[5], 5); // rows are where `spoil` expects them
		spoil(images, "sync", 34, bank);
		scanlatch_proofs *proofs = scanlatch_prove(images);
		assert_non_null(proofs);
		const struct limits_result *limits = &proofs->proofs[0]->limits;
		assert_int_equal(proofs->proofs[0]->proof[PROOF_LIMITS].verdict, VERDICT_FAIL);
		assert_times(limits->measurement->items[ITEM_SYNC_WIDTH].values, ITEM_SYNC_WIDTH, "20", "30");
		assert_int_equal(limits->measurement->items[ITEM_SYNC_WIDTH].high_at.to_cell, 35);
		assert_int_equal(limits->missed[GRADE_MONITOR], 1);
		scanlatch_proofs_destroy(proofs);
		scanlatch_images_destroy(images);
		release(board);
	}
}

// A stray pulse names its bank.
static void a_stray_in_a_bank(void **state)
{
	(void)state;
	struct board *board = board_of("", SIGNALS, FRAME, CHIPS);
	scanlatch_images *images = images_of(board);
	spoil(images, "sync", 40, 1);
	scanlatch_proofs *proofs = scanlatch_prove(images);
	assert_non_null(proofs);
	const struct counterexample *found = &proofs->proofs[0]->proof[PROOF_LIMITS].counterexample;
	assert_true(found->present);
	assert_int_equal(found->bank, 1);
	assert_int_equal(found->cell, 40);
	scanlatch_proofs_destroy(proofs);
	scanlatch_images_destroy(images);
	release(board);
}

static void a_frame_that_does_not_close_is_not_judged(void **state)
{
	(void)state;
	struct board *board = board_of("", SIGNALS, FRAME, CHIPS);
	scanlatch_images *images = images_of(board);
	images->images[0].bytes[20] ^= 1;
	images->images[0].bytes[128 + 20] ^= 1;
	scanlatch_proofs *proofs = scanlatch_prove(images);
	assert_non_null(proofs);
	assert_int_equal(proofs->proofs[0]->proof[PROOF_LIMITS].verdict, VERDICT_FAIL);
	assert_string_equal(proofs->proofs[0]->proof[PROOF_LIMITS].counterexample.what, "not judged: the frame does not close");
	assert_null(proofs->proofs[0]->limits.measurement);
	scanlatch_proofs_destroy(proofs);
	scanlatch_images_destroy(images);
	release(board);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(what_would_mend_a_miss),
		cmocka_unit_test(what_would_mend_one_line_of_several),
		cmocka_unit_test(the_grade_of_the_plan_counts),
		cmocka_unit_test(what_is_unknown_is_not_missed),
		cmocka_unit_test(widened_by_the_accuracy),
		cmocka_unit_test(pauses_count_at_studio_grade),
		cmocka_unit_test(no_vertical_sync_is_a_miss),
		cmocka_unit_test(strays_are_a_miss),
		cmocka_unit_test(without_a_raster_nothing_is_judged),
		cmocka_unit_test(without_a_standard_there_is_nothing_to_prove),
		cmocka_unit_test(pins_are_measured_as_planned),
		cmocka_unit_test(the_images_are_measured),
		cmocka_unit_test(a_stray_in_a_bank),
		cmocka_unit_test(a_frame_that_does_not_close_is_not_judged),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
