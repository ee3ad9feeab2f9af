// The figures of pictures: rows and fields of frames, uses of addresses, steps of the phase. Worked out by hand.
#include "../layout/laid.h"

#include <stdlib.h>

#include "proof/proof.h"
#include "view/address_use.h"
#include "view/frame_rows.h"
#include "view/pictures.h"

static const struct picture inline_picture = {"p", false};

// A plan read from whole text.
static struct laid lay_text(const char *text)
{
	struct laid laid = {.arena = arena_create(), .diagnostics = diagnostics_create()};
	struct source *source = arena_alloc(laid.arena, sizeof *source);
	*source = (struct source){"berth.yaml", text, strlen(text)};
	laid.plan = plan_read(source, catalogue_load(laid.arena, laid.diagnostics), laid.diagnostics);
	laid.timeline = laid.plan != NULL ? timeline_create(laid.plan, laid.diagnostics) : NULL;
	assert_laid(&laid);
	return laid;
}

// Lines of 20 cells and halves of 10: two fields, the first of which ends with half a line of picture, in whose other half the second begins.
static const char interlaced_plan[] =
	"scanlatch: 1\n"
	"name: berth\n"
	"clock: { master: 1 MHz, cell: 1 tick }\n"
	"signals:\n"
	"  sync: { role: composite sync, active: low }\n"
	"  blank: { role: blanking, active: high }\n"
	"lines:\n"
	"  broad: { regions: [ { region: pulse, cells: 8, assert: [sync, blank] }, { region: rest, cells: 2, assert: [blank] } ] }\n"
	"  narrow: { regions: [ { region: pulse, cells: 1, assert: [sync, blank] }, { region: rest, cells: 9, assert: [blank] } ] }\n"
	"  picture: { regions: [ { region: sync, cells: 2, assert: [sync, blank] }, { region: porch, cells: 2, assert: [blank] },\n"
	"    { region: picture, cells: 15 }, { region: front, cells: 1, assert: [blank] } ] }\n"
	"  half: { regions: [ { region: sync, cells: 2, assert: [sync, blank] }, { region: porch, cells: 2, assert: [blank] },\n"
	"    { region: picture, cells: 6 } ] }\n"
	"frame:\n"
	"  - { repeat: 2, line: broad }\n"
	"  - { repeat: 2, line: narrow }\n"
	"  - { repeat: 8, line: picture }\n"
	"  - { repeat: 1, line: half }\n"
	"  - { repeat: 1, line: narrow }\n"
	"  - { repeat: 2, line: broad }\n"
	"  - { repeat: 3, line: narrow }\n"
	"  - { repeat: 7, line: picture }\n"
	"machine: { form: line-frame, line: { state: 5 bits }, frame: { state: 5 bits } }\n"
	"chips: { line: { part: 28C16 }, frame: { part: 28C16 } }\n";

static void half_lines_share_rows_and_fields_part_there(void **state)
{
	(void)state;
	struct laid laid = lay_text(interlaced_plan);
	struct frame_rows rows;
	assert_true(frame_rows_make(&rows, laid.timeline, laid.arena));
	assert_int_equal(rows.widest, 20);
	// 1 + 1 + 8, half + narrow, broad + broad, narrow + narrow, and one narrow alone.
	assert_int_equal(rows.rows[0].cells, 20);
	assert_int_equal(rows.rows[10].line, 12);
	assert_int_equal(rows.rows[10].cells, 20);
	assert_int_equal(rows.rows[11].line, 14);
	release(&laid);
}

// An interlaced frame has its second field half a row lower than its first.
static void a_real_interlaced_frame_has_two_fields(void **state)
{
	(void)state;
	FILE *file = fopen("plans/harbour-mouth.yaml", "r");
	assert_non_null(file);
	char text[8192];
	const size_t length = fread(text, 1, sizeof text - 1, file);
	fclose(file);
	text[length] = '\0';
	struct laid laid = lay_text(text);
	struct frame_rows rows;
	bool interlaced = false;
	assert_true(frame_rows_make(&rows, laid.timeline, laid.arena));
	// 525 rows; by the plan's comments field 1 has lines 1 to 263, the last with half a line of picture, field 2 lines 264 to 525.
	assert_int_equal(rows.count, 525);
	assert_int_equal(rows.field_count, 2);
	assert_int_equal(rows.fields[0].first_row, 0);
	assert_int_equal(rows.fields[0].rows, 263);
	assert_int_equal(rows.fields[1].first_row, 263);
	assert_int_equal(rows.fields[1].rows, 262);
	// 0V is at line 4 of field 1 and in the middle of line 266: three rows, and two and a half.
	assert_int_equal(rows.fields[0].offset_halves, -6);
	assert_int_equal(rows.fields[1].offset_halves, -5);
	assert_true(rows.interlaced);
	assert_true(picture_interlaced(laid.timeline, &interlaced));
	assert_true(interlaced);
	release(&laid);
}

static struct laid lay_plain(void)
{
	return lay("",
	           "  plain:\n"
	           "    regions:\n"
	           "      - { region: sync, cells: 3, assert: [sync], stretch: 1 }\n"
	           "      - { region: rest, cells: 7, assert: [load] }\n"
	           "  other:\n"
	           "    like: plain\n"
	           "    change: [ { region: rest, cells: 6 } ]\n",
	           "  - { repeat: 4, line: plain }\n"
	           "  - { repeat: 2, line: other }\n");
}

static void rows_alike_have_the_same_hues(void **state)
{
	(void)state;
	struct laid laid = lay_plain();
	struct frame_rows rows;
	bool interlaced = true;
	assert_laid(&laid);
	assert_true(frame_rows_make(&rows, laid.timeline, laid.arena));
	assert_int_equal(rows.count, 6);
	assert_int_equal(rows.field_count, 1);
	assert_true(frame_rows_alike(&rows, 0, 3));
	assert_false(frame_rows_alike(&rows, 3, 4));
	assert_int_equal(frame_hue(&rows, 0), HUE_STRETCH);
	assert_int_equal(frame_hue(&rows, 1), HUE_SYNC);
	assert_int_equal(frame_hue(&rows, 3), HUE_OTHER);
	assert_true(picture_interlaced(laid.timeline, &interlaced));
	assert_false(interlaced);
	release(&laid);
}

// 40 cells of "plain" and 18 of "other" of 4096 states.
static void addresses_are_counted_by_line_type(void **state)
{
	(void)state;
	struct laid laid = lay_plain();
	struct address_use use;
	assert_laid(&laid);
	struct table *table = table_create(laid.timeline, laid.diagnostics);
	assert_non_null(table);
	assert_true(address_use_count(&use, table, STAGE_LINE, laid.arena));
	assert_int_equal(use.bits, 12);
	assert_int_equal(use.bin_bits, 12);
	assert_int_equal(use.type_count, 2);
	assert_int_equal(use.types[0], 0);
	assert_int_equal(use.rows[0], 40);
	assert_int_equal(use.rows[1], 18);
	assert_int_equal(use.rows[USE_OTHERS], 0);
	assert_int_equal(use.rows[USE_SPARE], 4096 - 58);
	bool whole;
	unsigned counts[USE_COUNT] = {0};
	for (uint32_t bin = 0; bin < 4096; bin++) {
		counts[bin_use(&use, bin, &whole)]++;
		assert_true(whole); // of one address each
	}
	assert_int_equal(counts[0], 40);
	assert_int_equal(counts[1], 18);
	table_destroy(table);
	release(&laid);
}

// Both stages of a machine: the line stage has each used type once, the frame stage a row a line.
static void both_stages_are_counted(void **state)
{
	(void)state;
	struct laid laid = lay_text(interlaced_plan);
	struct address_use use;
	struct table *table = table_create(laid.timeline, laid.diagnostics);
	assert_non_null(table);
	assert_true(address_use_count(&use, table, STAGE_LINE, laid.arena));
	assert_int_equal(use.bits, 7);
	assert_int_equal(use.rows[0], 20); // picture
	assert_int_equal(use.rows[1] + use.rows[2] + use.rows[3], 30);
	assert_int_equal(use.rows[USE_SPARE], 128 - 50);
	assert_true(address_use_count(&use, table, STAGE_FRAME, laid.arena));
	assert_int_equal(use.bits, 5);
	assert_int_equal(use.rows[0], 15); // lines of picture
	assert_int_equal(use.rows[USE_SPARE], 32 - 26);
	table_destroy(table);
	release(&laid);
}

// The text of the picture's phase path and plots.
static char *phase_of(const char *clock)
{
	struct laid laid = lay(clock,
	                       "  plain:\n"
	                       "    regions:\n"
	                       "      - { region: sync, cells: 3, assert: [sync] }\n"
	                       "      - { region: rest, cells: 6, assert: [load] }\n",
	                       "  - { repeat: 3, line: plain }\n");
	struct text text = {0};
	assert_laid(&laid);
	struct proofs *proofs = proofs_of_plan(laid.timeline);
	assert_non_null(proofs);
	assert_true(view_phase_svg(&text, &inline_picture, laid.timeline, &proofs->colour));
	proofs_destroy(proofs);
	release(&laid);
	return text.bytes;
}

// 90 ticks a line are 9 cycles of a tenth of the clock: flat. Of a quarter they are 22 1/2: by turns 0 and 1/2. 60 pixels a line, 240 a cycle.
static void the_phase_is_flat_or_steps(void **state)
{
	(void)state;
	char *flat = phase_of(", subcarrier: master / 10"), *turns = phase_of(", subcarrier: master / 4");
	assert_non_null(strstr(flat, "data-line=\"0\" data-lines=\"16\" data-phase=\"0\""));
	assert_non_null(strstr(flat, "d=\"M92 350H1052\"")); // from side to side at the bottom
	assert_non_null(strstr(turns, "data-line=\"0\" data-lines=\"1\" data-phase=\"0\""));
	assert_non_null(strstr(turns, "data-line=\"1\" data-lines=\"1\" data-phase=\"1/2\""));
	assert_non_null(strstr(turns, "d=\"M92 350H152M152 230H212M212 350H272"));
	free(flat);
	free(turns);
}

// 90 ticks of 10 MHz are 270/997 of a cycle of 30000/997 kHz, so it takes 997 lines; with 1009 there are more than are drawn.
static void a_long_phase_is_bounded(void **state)
{
	(void)state;
	char *picture = phase_of(", subcarrier: 30000/997 kHz");
	assert_non_null(strstr(picture, "data-lines=\"32\""));  // close by
	assert_non_null(strstr(picture, "data-lines=\"997\"")); // and all
	assert_true(strlen(picture) < 100000);
	free(picture);
	picture = phase_of(", subcarrier: 30000/1009 kHz");
	assert_non_null(strstr(picture, "data-lines=\"1000\""));
	assert_non_null(strstr(picture, "only the first 1000 lines are drawn"));
	free(picture);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(half_lines_share_rows_and_fields_part_there),
		cmocka_unit_test(a_real_interlaced_frame_has_two_fields),
		cmocka_unit_test(rows_alike_have_the_same_hues),
		cmocka_unit_test(addresses_are_counted_by_line_type),
		cmocka_unit_test(both_stages_are_counted),
		cmocka_unit_test(the_phase_is_flat_or_steps),
		cmocka_unit_test(a_long_phase_is_bounded),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
