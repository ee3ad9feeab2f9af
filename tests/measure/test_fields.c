// Fields of composite sync and of a vertical sync of its own. A cell is 10 ticks; a line of 16 cells has 320 places.
#include "drawn.h"
#include "measure/raster.h"

static struct raster found_in(struct drawn *drawn, uint32_t laps)
{
	struct raster raster;
	const char *flaw;
	const struct trace *trace = trace_make(drawn->arena, &drawn->recording, laps);
	assert_non_null(trace);
	assert_true(raster_find(drawn->arena, trace, &raster, &flaw));
	assert_null(flaw);
	return raster;
}

static void assert_field(const struct raster *raster, uint32_t index, int64_t zero, int64_t sync_end, int64_t ticks, uint32_t cell,
                         bool at_half)
{
	assert_true(index < raster->field_count);
	const struct raster_field *field = &raster->fields[index];
	assert_int_equal(field->zero, zero);
	assert_int_equal(field->sync_end, sync_end);
	assert_int_equal(field->zero_ticks, ticks);
	assert_int_equal(field->cell, cell);
	assert_int_equal(field->at_half, at_half);
}

// Half lines: 0 and 1 broad, 2 equalising, 3 nothing, then two lines; at half 8 a normal pulse and at 9 an equalising one; then three broad
// ones from half 10, two equalising, and from 15, in the middle of the line at 14, three lines more. Each field has so many pulses before, of and after it.
static void fields_of_composite_sync(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("ssssss--ssssss--", "s---------------", "ss--------------", "ss--------------", "ss------s-------",
	                           "ssssss--ssssss--", "ssssss--s-------", "s-------", "ss--------------", "ss--------------",
	                           "ss--------------");
	const struct raster raster = found_in(drawn, 1);
	assert_int_equal(raster.line_ticks, 160);
	assert_int_equal(raster.field_count, 2);
	assert_field(&raster, 0, 10 * 160, 13 * 160, 10 * 80, 80, false);
	assert_int_equal(raster.fields[0].before_count, 1);
	assert_int_equal(raster.fields[0].broad_count, 3);
	assert_int_equal(raster.fields[0].after_count, 2);
	// The other is found when the trace has come around: the frame has 21 half lines. Lines are counted from the last normal pulse, at 19.
	assert_field(&raster, 1, 21 * 160, 23 * 160, 21 * 80, 0, false);
	assert_int_equal(raster.fields[1].before_count, 0);
	assert_int_equal(raster.fields[1].broad_count, 2);
	assert_int_equal(raster.fields[1].after_count, 1);
	assert_true(raster_is_odd(&raster));
	erase(drawn);
}

// 0V is half way through a line if it is more than a quarter of a line from where lines begin.
static void half_way_is_from_a_quarter_to_three_quarters(void **state)
{
	(void)state;
	static const struct {
		const char *line;
		bool at_half;
	} cases[] = {
		{"ss--ssssssssssss", false}, {"ss----ssssssssss", true}, {"ss--------ssssss", true}, {"ss----------ssss", false},
	};
	for (size_t index = 0; index < COUNT_OF(cases); index++) {
		struct drawn *drawn = DRAW("ss--------------", "ss--------------", cases[index].line, "----------------", "ss--------------",
		                           "ss--------------", "ss--------------", "ss--------------");
		const struct raster raster = found_in(drawn, 1);
		assert_int_equal(raster.field_count, 1);
		assert_int_equal(raster.fields[0].at_half, cases[index].at_half);
		erase(drawn);
	}
}

// Vertical sync begins two cells after 0H of line 1 and lasts two lines; and ten cells after 0H of line 5, which is half a line later: what
// the nearer of the two is off is taken from both. Of 9 lines, 0V is at 1 and at 5 1/2.
static void vertical_sync_that_begins_late(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("hh--------------", "hhvvvvvvvvvvvvvv", "wwvvvvvvvvvvvvvv", "ww--------------", "hh--------------",
	                           "hh--------vvvvvv", "wwvvvvvvvvvvvvvv", "wwvvvvvvvv------", "hh--------------");
	struct raster raster = found_in(drawn, 1);
	assert_int_equal(raster.field_count, 2);
	assert_field(&raster, 0, 320, 3 * 320, 180, 18, false);
	assert_field(&raster, 1, 5 * 320 + 160, 7 * 320 + 160, 900, 90, true);
	erase(drawn);
}

// Vertical sync that begins with the trace's first line is the first field's.
static void vertical_sync_at_the_first_line(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("wwvvvvvvvvvvvvvv", "hh--------------", "hh--------------", "wwvvvvvvvvvvvvvv", "hh--------------");
	struct raster raster = found_in(drawn, 1);
	assert_int_equal(raster.field_count, 2);
	assert_field(&raster, 0, 0, 320, 0, 0, false);
	assert_field(&raster, 1, 3 * 320, 4 * 320, 480, 48, false);
	erase(drawn);
}

// Fields that are off their lines by two cells and by four: what the second is off more, a sixteenth of a line and more, stays. Its own line
// is still its first, with the number that the standard has for it.
static void vertical_sync_that_is_uneven(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("hhvv--..........", "hhb---..........", "hhb-------------", "hhb-vv..........", "hhb---..........", "hhb-------------");
	drawn->standard.vertical_sync_line = 4;
	const struct measurement *found = measure(drawn);
	assert_int_equal(found->field_count, 2);
	assert_item(found, ITEM_PICTURE_TOP, "-1/8", "0"); // two cells of 16
	assert_item(found, ITEM_LINES_PER_FIELD, "23/8", "25/8");
	assert_int_equal(found->burstless_count, 1);
	assert_int_equal(found->burstless[0].field, 0);
	assert_int_equal(found->burstless[0].first_line, 1);
	erase(drawn);
	drawn = DRAW("hhvv------------", "hhb-------------", "hhb-------------", "hh--vv----------", "hh--------------", "hhb-------------");
	drawn->standard.vertical_sync_line = 1;
	found = measure(drawn);
	assert_int_equal(found->burstless_count, 2);
	for (uint32_t run = 0; run < 2; run++) {
		assert_int_equal(found->burstless[run].field, run);
		assert_int_equal(found->burstless[run].first_line, 1);
		assert_int_equal(found->burstless[run].last_line, 1 + run);
	}
	erase(drawn);
}

// The same, early: two cells before 0H.
static void vertical_sync_that_begins_early(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("hh------------vv", "wwvvvvvvvvvvvv--", "hh--------------", "hh----vvvvvvvvvv", "wwvvvv----------",
	                           "hh--------------", "hh--------------");
	struct raster raster = found_in(drawn, 1);
	assert_int_equal(raster.field_count, 2);
	assert_field(&raster, 0, 320, 2 * 320, 140, 14, false);
	assert_field(&raster, 1, 3 * 320 + 160, 4 * 320 + 160, 540, 54, true);
	erase(drawn);
}

// Every cell may be the first of the frame: a field's 0V is the same way off a line, and it has the same lines.
static void vertical_sync_from_any_cell(void **state)
{
	(void)state;
	for (uint32_t cell = 0; cell < 7 * 16; cell++) {
		struct drawn *drawn = DRAW("hh------------vv", "wwvvvvvvvvvvvv--", "hh--......------", "hh----vvvvvvvvvv", "wwvvvv----------",
		                           "hh--......------", "hh--......------");
		drawn->standard.fields = 2;
		rotate(drawn, cell);
		const struct measurement *found = measure(drawn);
		assert_int_equal(found->field_count, 2);
		assert_true(found->separate);
		assert_int_not_equal(found->fields[0].at_half, found->fields[1].at_half);
		assert_item(found, ITEM_VERTICAL_SYNC, "1", "1");
		assert_item(found, ITEM_FIELD_RATE, "720", "400"); // 140 to 540, and on to 1260
		assert_item(found, ITEM_LINES_PER_FIELD, "5/2", "9/2");
		assert_item(found, ITEM_FRAME_RATE, "1120", "1120");
		// Lines 2 and 5 and 6: from 2 to 3, and from 5 to 7; 0V at 1 and 3 1/2, vertical sync to 2 and 4 1/2.
		assert_item(found, ITEM_VERTICAL_BACK_PORCH, "0", "1/2");
		assert_item(found, ITEM_VERTICAL_FRONT_PORCH, "1/2", "1");
		assert_item(found, ITEM_VERTICAL_BLANKING, "2", "2");
		assert_item(found, ITEM_PICTURE_HEIGHT, "1", "2");
		assert_item(found, ITEM_PICTURE_TOP, "1", "3/2");
		assert_item(found, ITEM_BROAD_PULSES, NULL, NULL);
		assert_string_equal(found->items[ITEM_BROAD_WIDTH].why, "sync is horizontal and vertical, not composite");
		assert_item(found, ITEM_HORIZONTAL_POLARITY, "1", "1");
		erase(drawn);
	}
}

// Vertical sync that no line holds, and none at all.
static void vertical_sync_that_is_never_asserted(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("hh--", "hh--", "hh--");
	const struct measurement *found = measure(drawn);
	assert_int_equal(found->field_count, 0);
	assert_string_equal(found->items[ITEM_FIELD_RATE].why, "there is no vertical sync: no broad pulse, or vertical sync is never asserted");
	take_signal(drawn, DRAWN_VERTICAL);
	found = measure(drawn);
	assert_string_equal(found->items[ITEM_FIELD_RATE].why, "no signal has the role vertical sync");
	assert_item(found, ITEM_LINE_RATE, "40", "40");
	erase(drawn);
}

// Horizontal sync is never broad, and so never equalising; the second in a line is a stray all the same.
static void horizontal_sync_of_any_width(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("hhhhhhhh--------", "hh--------------", "hh------hh------", "h---------------", "wwvv------------");
	const struct measurement *found = measure(drawn);
	assert_item(found, ITEM_SYNC_WIDTH, "10", "80");
	assert_item(found, ITEM_LINES_PER_FIELD, "5", "5");
	assert_int_equal(found->strays, 1);
	erase(drawn);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(fields_of_composite_sync),
		cmocka_unit_test(half_way_is_from_a_quarter_to_three_quarters),
		cmocka_unit_test(vertical_sync_that_begins_late),
		cmocka_unit_test(vertical_sync_at_the_first_line),
		cmocka_unit_test(vertical_sync_that_is_uneven),
		cmocka_unit_test(vertical_sync_that_begins_early),
		cmocka_unit_test(vertical_sync_from_any_cell),
		cmocka_unit_test(vertical_sync_that_is_never_asserted),
		cmocka_unit_test(horizontal_sync_of_any_width),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
