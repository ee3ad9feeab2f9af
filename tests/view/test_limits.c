// What is said of limits and of placed cells, word for word. Cells are 10 us; the frame has a line with a broad pulse of 140 us, one with nothing
// but sync, and three with burst and picture.
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "layout/placement.h"
#include "library/library.h"
#include "view/limits.h"
#include "view/placement.h"
#include "view/proofs.h"

struct board {
	scanlatch_messages *messages;
	scanlatch_plan *read;
	struct proofs *proofs;
};

static struct board board_of_text(const char *text)
{
	struct board board = {.messages = scanlatch_messages_create()};
	assert_non_null(board.messages);
	board.read = scanlatch_plan_read("quay.yaml", text, strlen(text), board.messages);
	if (board.read == NULL)
		fputs(scanlatch_messages_text(board.messages, false), stderr);
	assert_non_null(board.read);
	board.proofs = proofs_of_plan(board.read->members[0].timeline);
	assert_non_null(board.proofs);
	return board;
}

static struct board board_of(const char *standard, const char *accuracy)
{
	static const char rest[] =
		"clock: { master: 1 MHz%s, dot: 5 ticks, cell: 10 ticks, subcarrier: 125 kHz, phase: free }\n"
		"signals:\n"
		"  sync: { role: composite sync, active: low }\n"
		"  blank: { role: blanking, active: high }\n"
		"  burst: { role: burst gate, active: high }\n"
		"lines:\n"
		"  broad: { regions: [ { region: sync, cells: 14, assert: [sync, blank] }, { region: rest, cells: 2, assert: [blank] } ] }\n"
		"  plain: { regions: [ { region: sync, cells: 2, assert: [sync, blank] }, { region: rest, cells: 14, assert: [blank] } ] }\n"
		"  picture:\n"
		"    regions:\n"
		"      - { region: sync, cells: 2, assert: [sync, blank] }\n"
		"      - { region: breezeway, cells: 1, assert: [blank] }\n"
		"      - { region: burst, cells: 2, assert: [blank, burst] }\n"
		"      - { region: porch, cells: 1, assert: [blank] }\n"
		"      - { region: picture, cells: 8 }\n"
		"      - { region: front, cells: 2, assert: [blank] }\n"
		"frame: [ { repeat: 1, line: broad }, { repeat: 1, line: plain }, { repeat: 3, line: picture } ]\n"
		"machine: { form: loop, state: 7 bits }\n"
		"chips: { part: 28C64 }\n";
	char text[4096], end[2048];
	assert_true(snprintf(end, sizeof end, rest, accuracy) < (int)sizeof end);
	assert_true(snprintf(text, sizeof text, "scanlatch: 1\nname: quay\n%s\n%s", standard, end) < (int)sizeof text);
	return board_of_text(text);
}

static void release(struct board *board)
{
	proofs_destroy(board->proofs);
	scanlatch_plan_destroy(board->read);
	scanlatch_messages_destroy(board->messages);
}

static void assert_table(const struct board *board, const char *expected)
{
	struct text out = {0};
	view_limits(&out, board->proofs);
	assert_false(out.failed);
	assert_string_equal(text_string(&out), expected);
	text_release(&out);
}

static void assert_proof(const struct board *board, const char *expected)
{
	struct text out = {0};
	view_proof(&out, board->proofs, PROOF_LIMITS, false);
	assert_false(out.failed);
	assert_string_equal(text_string(&out), expected);
	text_release(&out);
}

static const char many[] =
	"standard:\n"
	"  limits:\n"
	"    line rate: at most 6 kHz\n"
	"    pixel clock: exactly 0.2 MHz\n"
	"    front porch: 15 us to 25 us\n"
	"    horizontal sync width: 22 us (21 us to 40 us)\n"
	"    burst length in cycles: at most 2 cycles\n"
	"    horizontal centre: exactly 110 us\n"
	"    broad pulses: 6 pulses\n"
	"    broad pulse width: 100 us to 125 us\n"
	"    equalising pulse width: at most 20 us\n"
	"    vertical sync length: exactly 2 lines\n"
	"    lines without burst: exactly 2 lines\n"
	"    horizontal sync polarity: positive\n"
	"    vertical sync polarity: negative\n";

// A clock of 1000 ppm: 6250 Hz may be 6256.25; 20 us from 19.980 to 20.020, 140 us up to 140.140.
static void a_table_and_what_is_missed(void **state)
{
	(void)state;
	struct board board = board_of(many, ", accuracy: 1000 ppm");
	assert_table(&board,
		"limits of own, grade monitor; margins with the clock's accuracy\n"
		"item                      unit    measured   nominal       low      high   margin  monitor  studio\n"
		"line rate                 Hz          6250         -         -      6000  -256.25  MISSED   MISSED\n"
		"pixel clock               MHz          0.2       0.2       0.2       0.2  -0.0002  MISSED   MISSED\n"
		"front porch               us            20         -        15        25     4.98  kept     kept\n"
		"horizontal sync width     us            20        22        21        40    -1.02  MISSED   MISSED\n"
		"burst length in cycles    cycles       2.5         -         -         2     -0.5  MISSED   MISSED\n"
		"horizontal centre         us           100       110       110       110    -10.1  MISSED   MISSED\n"
		"broad pulses              pulses         1         6         -         -        -  info     info\n"
		"vertical sync length      lines          1         2         2         2       -1  MISSED   MISSED\n"
		"broad pulse width         us           140         -       100       125   -15.14  MISSED   MISSED\n"
		"lines without burst       lines          2         2         2         2        0  kept     kept\n"
		"horizontal sync polarity          negative  positive  positive  positive        -  MISSED   MISSED\n"
		"vertical sync polarity            negative  negative  negative  negative        -  kept     kept\n"
		"not measured, as there are no equalising pulses: equalising pulse width\n");
	assert_proof(&board,
		"miss  limits    own: 3 of 11 limits kept at monitor grade; 3 of 11 limits kept at studio grade; 1\n"
		"                could not be measured\n"
		"      line rate is 6250 Hz, allowed at most 6000 Hz: 256.25 Hz too much; at line 1 (plain), cell 0\n"
		"        (sync)\n"
		"      hint: make the lines 1 cell longer\n"
		"      pixel clock is 0.2 MHz by an exact clock, allowed 0.2 MHz: 0.0002 MHz too little\n"
		"      horizontal sync width is 20 us, allowed 21 to 40 us: 1.02 us too little; at line 1 (plain),\n"
		"        cell 0 (sync)\n"
		"      hint: move the edge between \"sync\" and \"rest\" 1 cell later: then 29.97 to 30.03 us\n"
		"      burst length in cycles is 2.5 cycles, allowed at most 2 cycles: 0.5 cycles too much; at line 2\n"
		"        (picture), cell 3 (burst)\n"
		"      hint: move the edge between \"burst\" and \"porch\" 1 cell earlier: then 1.25 cycles\n"
		"      horizontal centre is 100 us, allowed 110 us: 10.1 us too little; at line 2 (picture), cell 0\n"
		"        (sync)\n"
		"      vertical sync length is 1 line, allowed 2 lines: 1 line too little; at line 0 (broad), cell 0\n"
		"        (sync)\n"
		"      broad pulse width is 140 us, allowed 100 to 125 us: 15.14 us too much; at line 0 (broad), cell\n"
		"        0 (sync)\n"
		"      hint: move the edge between \"sync\" and \"rest\" 2 cells earlier: then 119.88 to 120.12 us\n"
		"      horizontal sync polarity is negative, allowed positive; at line 0 (broad), cell 0 (sync)\n");
	release(&board);
}

// 19 to 30 us where 20 to 25 are allowed: of both ends the worse is said.
static void of_two_ends_the_worse_is_said(void **state)
{
	(void)state;
	struct board board = board_of("standard: { limits: { serration width: 20 us } }", "");
	struct limit limit = {.item = ITEM_SYNC_WIDTH, .grade = GRADE_MONITOR, .has_low = true, .has_high = true, .low = {20, 1000000},
	                      .high = {25, 1000000}, .nominal = FRACTION_ZERO};
	const struct standard standard = {.name = "quay", .fields = 1, .limits = &limit, .limit_count = 1};
	board.read->plan->standard = &standard;
	struct limits_result *limits = &board.proofs->limits;
	struct measured measured = {.known = true, .values = {{19, 1000000}, {30, 1000000}}, .low_at = {16, 18}, .high_at = {32, 34}};
	struct measurement measurement = *limits->measurement;
	measurement.items[ITEM_SYNC_WIDTH] = measured;
	limits->measurement = &measurement;
	struct limit_row *row = &limits->rows[ITEM_SYNC_WIDTH];
	row->values = measured.values;
	row->grades[GRADE_MONITOR].judgement = limit_judge(&limit, row->values);
	struct text out = {0};
	put_limit_miss(&out, board.proofs, ITEM_SYNC_WIDTH);
	assert_string_equal(text_string(&out), "horizontal sync width is 19 to 30 us, allowed 20 to 25 us: 5 us too much; at line 2 (picture), cell 0 (sync)");
	text_release(&out);
	limit.high = (struct fraction){29500, 1000000000}; // 29.5 us
	row->grades[GRADE_MONITOR].judgement = limit_judge(&limit, row->values);
	put_limit_miss(&out, board.proofs, ITEM_SYNC_WIDTH);
	assert_string_equal(text_string(&out), "horizontal sync width is 19 to 30 us, allowed 20 to 29.5 us: 1 us too little; at line 1 (plain), cell 0 (sync)");
	text_release(&out);
	release(&board);
}

static void lines_without_burst_by_number(void **state)
{
	(void)state;
	struct board board = board_of("standard: composite-525\ngrade: studio", "");
	struct limit limit = {.item = ITEM_LINES_WITHOUT_BURST, .grade = GRADE_STUDIO, .has_nominal = true, .has_low = true, .has_high = true,
	                      .low = {2, 1}, .high = {2, 1}, .nominal = {2, 1}};
	static const struct burst_pause pauses[] = {{1, 4, 5, ""}, {1, 2, 3, ""}};
	struct standard standard = {.name = "quay", .fields = 1, .limits = &limit, .limit_count = 1, .vertical_sync_line = 4, .pauses = pauses,
	                            .pause_count = 1};
	board.read->plan->standard = &standard;
	proofs_destroy(board.proofs);
	board.proofs = proofs_of_plan(board.read->members[0].timeline);
	assert_table(&board,
		"limits of quay, grade studio\n"
		"item                 unit   measured  nominal  low  high  margin  studio  monitor\n"
		"lines without burst  lines         2        2    2     2       0  kept    -\n"
		"lines without burst, by the standard's numbers: 4 to 5, as the standard has it\n");
	standard.pauses = &pauses[1];
	proofs_destroy(board.proofs);
	board.proofs = proofs_of_plan(board.read->members[0].timeline);
	assert_table(&board,
		"limits of quay, grade studio\n"
		"item                 unit   measured  nominal  low  high  margin  studio  monitor\n"
		"lines without burst  lines         2        2    2     2       0  MISSED  -\n"
		"lines without burst, by the standard's numbers: 4 to 5; the standard has others\n");
	assert_proof(&board,
		"miss  limits    quay: 0 of 1 limits kept at studio grade; no limit was judged at monitor grade\n"
		"      lines without burst is 2 lines, allowed 2 lines, but they are not those that the standard has;\n"
		"        at line 0 (broad), cell 0 (sync)\n");
	release(&board);
}

static void what_is_not_judged(void **state)
{
	(void)state;
	struct board board = board_of("", "");
	assert_table(&board, "");
	assert_proof(&board, "none  limits    the plan names no standard\n");
	release(&board);
}

static json_t *limits_of(const struct board *board)
{
	char *text = scanlatch_plan_json(board->read, NULL, NULL);
	assert_non_null(text);
	json_t *document = json_loads(text, 0, NULL);
	scanlatch_free(text);
	assert_non_null(document);
	json_t *limits = json_incref(json_object_get(json_object_get(document, "proofs"), "limits"));
	json_decref(document);
	assert_non_null(limits);
	return limits;
}

static json_t *item_of(const json_t *limits, const char *name)
{
	size_t index;
	json_t *item;
	json_array_foreach(json_object_get(limits, "items"), index, item)
		if (strcmp(json_string_value(json_object_get(item, "item")), name) == 0)
			return item;
	fail_msg("no item %s", name);
	return NULL;
}

// A value of an item's object, by keys down to it, as JSON text without layout.
static void assert_json(json_t *object, const char *first, const char *second, const char *expected)
{
	json_t *value = json_object_get(object, first);
	if (second != NULL)
		value = json_object_get(value, second);
	if (expected == NULL) {
		assert_null(value);
		return;
	}
	char *text = json_dumps(value, JSON_ENCODE_ANY | JSON_COMPACT);
	assert_non_null(text);
	assert_string_equal(text, expected);
	free(text);
}

static void limits_as_json(void **state)
{
	(void)state;
	struct board board = board_of(many, ", accuracy: 1000 ppm");
	json_t *limits = limits_of(&board);
	assert_json(limits, "verdict", NULL, "\"fail\"");
	assert_json(limits, "standard", NULL, "\"own\"");
	assert_json(limits, "own_limits", NULL, "13");
	assert_json(limits, "kept", "monitor", "3");
	assert_json(limits, "missed", "studio", "8");
	assert_json(limits, "not_measured", "monitor", "1");
	assert_json(limits, "burst_pauses_kept", NULL, NULL); // lines have no numbers
	assert_json(limits, "fields", NULL, "[{\"begins\":\"at a line\"}]");
	json_t *item = item_of(limits, "line rate");
	assert_json(item, "low", NULL, "\"6250\"");
	assert_json(item, "accuracy_high", NULL, "\"25025/4\"");
	assert_json(item, "monitor", "margin", "\"-1025/4\"");
	assert_json(item, "monitor", "share", "\"-41/960\"");
	assert_json(item, "monitor", "low", NULL);
	assert_json(item, "studio", "move", "{\"what\":\"line length\",\"cells\":1,\"line_type\":\"plain\"}");
	item = item_of(limits, "horizontal sync width");
	assert_json(item, "low_at", NULL, "{\"line\":1,\"line_type\":\"plain\",\"cell\":0,\"region\":\"sync\",\"frame_cell\":16}");
	assert_json(item, "monitor", "move",
	            "{\"what\":\"edge\",\"cells\":1,\"line_type\":\"plain\",\"after_region\":\"sync\",\"before_region\":\"rest\"}");
	assert_json(item_of(limits, "equalising pulse width"), "not_measured", NULL, "\"there are no equalising pulses\"");
	item = item_of(limits, "broad pulses");
	assert_json(item, "monitor", "nominal", "\"6\"");
	assert_json(item, "monitor", "kept", NULL);
	item = item_of(limits, "pixel clock");
	assert_json(item, "low_at", NULL, NULL);
	assert_json(item, "monitor", "share", NULL); // exactly
	assert_json(item, "monitor", "kept", "false");
	json_decref(limits);
	release(&board);
}

// The plan of layout's tests: 18 cells of 9 us, of which two are stretched to 12; burst may be 20 to 22 us, and is 21 with one of them.
static void placed_cells(void **state)
{
	(void)state;
	static const char text[] =
		"scanlatch: 1\nname: quay\nstandard: { limits: { burst length: 20 us to 22 us } }\n"
		"clock: { master: 1 MHz, cell: 9 ticks, stretch: 3 ticks, subcarrier: master / 4, phase: every line }\n"
		"signals:\n  sync: { role: composite sync, active: low }\n  blank: { role: blanking, active: high }\n"
		"  burst: { role: burst gate, active: high }\n  late: { role: stretch, active: high }\n"
		"lines:\n  picture:\n    regions:\n"
		"      - { region: sync, cells: 2, assert: [sync, blank], stretch: auto }\n"
		"      - { region: breezeway, cells: 1, assert: [blank], stretch: auto }\n"
		"      - { region: burst, cells: 2, assert: [blank, burst], stretch: auto }\n"
		"      - { region: picture, cells: 13 }\n"
		"frame: [ { repeat: 5, line: picture } ]\nmachine: { form: loop, state: 7 bits }\nchips: { part: 28C64 }\n";
	struct board board = board_of_text(text);
	const struct timeline *timeline = board.read->members[0].timeline;
	struct text out = {0};
	view_placement(&out, timeline);
	assert_string_equal(text_string(&out),
		"stretch: auto placed, by limits: \"picture\": 1 in \"sync\", 1 in \"burst\" (1 of 1 limits of the line\n"
		"  kept, smallest margin 100 % of a tolerance); second best: \"picture\": 1 in \"breezeway\", 1 in\n"
		"  \"burst\" (1 of 1 limits of the line kept, smallest margin 100 % of a tolerance)\n");
	text_release(&out);
	json_t *placed = view_placement_json(timeline);
	assert_json(placed, "best", NULL,
	            "{\"kept\":1,\"share\":\"1\",\"share_rounded\":1.0,\"stretched\":["
	            "{\"line\":\"picture\",\"region\":\"sync\",\"first_cell\":0,\"cells\":1},"
	            "{\"line\":\"picture\",\"region\":\"burst\",\"first_cell\":3,\"cells\":1}]}");
	assert_json(placed, "limits", NULL, "1");
	assert_json(placed, "exhausted", NULL, "true");
	json_decref(placed);
	struct placements placements = {.unweighed = true, .best.share = FRACTION_ZERO, .second.share = FRACTION_ZERO};
	struct timeline unweighed = *timeline;
	unweighed.placements = &placements;
	view_placement(&out, &unweighed);
	assert_string_equal(text_string(&out), "stretch: auto placed leftmost: what each way does to the limits could not be reckoned\n");
	text_release(&out);
	placed = view_placement_json(&unweighed);
	assert_true(json_is_null(placed));
	json_decref(placed);
	release(&board);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(a_table_and_what_is_missed),
		cmocka_unit_test(of_two_ends_the_worse_is_said),
		cmocka_unit_test(lines_without_burst_by_number),
		cmocka_unit_test(what_is_not_judged),
		cmocka_unit_test(limits_as_json),
		cmocka_unit_test(placed_cells),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
