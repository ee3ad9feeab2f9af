// Every item of frames drawn cell by cell, reckoned by hand. Lines are 16 cells, 160 ticks; half a line is 8 cells.
#include "drawn.h"

#define PICTURE   "ss-bb-........--"  // sync 0 to 20, burst 30 to 50, picture 60 to 140
#define BURST     "ss-bb-----------"
#define PLAIN     "ss--------------"
#define BROAD     "ssssssssssssss--"  // one pulse of 140, then 20
#define HALF_BROAD "ssssss--"         // 60, then 20
#define HALF_EQUALISING "s-------"    // 10, half the width of a normal one
#define HALF_PICTURE "ss-bb-.."       // the first half of a line
#define HALF_BLANK "--------"

// Six lines, 960 ticks, 0V at the broad pulse. Of the normal pulses only the last is not followed by another at a line's distance, so lines 1
// to 4 are normal. Without burst are lines 0 and 1.
#define PROGRESSIVE BROAD, PLAIN, BURST, PICTURE, PICTURE, PICTURE

static const struct item_values progressive[] = {
	{ITEM_LINE_RATE, "160", NULL},
	{ITEM_FIELD_RATE, "960", NULL},
	{ITEM_FRAME_RATE, "960", NULL},
	{ITEM_LINES_PER_FIELD, "6", NULL},
	{ITEM_CYCLES_PER_LINE, "20", NULL},
	{ITEM_FRONT_PORCH, "20", NULL},
	{ITEM_SYNC_WIDTH, "20", NULL},
	{ITEM_BREEZEWAY, "10", NULL},
	{ITEM_BURST_START, "30", NULL},
	{ITEM_BURST_START_CYCLES, "15/4", NULL},
	{ITEM_BURST_LENGTH, "20", NULL},
	{ITEM_BURST_LENGTH_CYCLES, "5/2", NULL},
	{ITEM_BURST_TO_PICTURE, "10", NULL},
	{ITEM_BACK_PORCH, "40", NULL},
	{ITEM_HORIZONTAL_BLANKING, "80", NULL},
	{ITEM_PICTURE_START, "60", NULL},
	{ITEM_PICTURE_WIDTH, "80", NULL},
	{ITEM_HORIZONTAL_CENTRE, "100", NULL},
	{ITEM_PRE_EQUALISING_PULSES, "0", NULL},
	{ITEM_PRE_EQUALISING_LINES, "0", NULL},
	{ITEM_BROAD_PULSES, "1", NULL},
	{ITEM_VERTICAL_SYNC, "1", NULL},       // to the pulse of line 1
	{ITEM_POST_EQUALISING_PULSES, "0", NULL},
	{ITEM_POST_EQUALISING_LINES, "0", NULL},
	{ITEM_BROAD_WIDTH, "140", NULL},
	{ITEM_SERRATION_WIDTH, "20", NULL},
	{ITEM_VERTICAL_FRONT_PORCH, "0", NULL}, // line 5 has picture
	{ITEM_VERTICAL_BACK_PORCH, "2", NULL},  // lines 1 and 2
	{ITEM_VERTICAL_BLANKING, "3", NULL},
	{ITEM_PICTURE_TOP, "3", NULL},
	{ITEM_PICTURE_HEIGHT, "3", NULL},
	{ITEM_VERTICAL_CENTRE, "9/2", NULL},
	{ITEM_LINES_WITHOUT_BURST, "2", NULL},
	{ITEM_HORIZONTAL_POLARITY, "1", NULL},
	{ITEM_VERTICAL_POLARITY, "1", NULL},
};

static void a_progressive_frame(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(PROGRESSIVE);
	const struct measurement *found = measure(drawn);
	assert_null(found->flaw);
	assert_all(found, progressive, COUNT_OF(progressive));
	assert_item(found, ITEM_PIXEL_CLOCK, "5", "5"); // a dot is 5 ticks
	assert_item(found, ITEM_SUBCARRIER, "8", "8");
	assert_false(found->separate);
	assert_int_equal(found->frames, 1);
	assert_int_equal(found->strays, 0);
	assert_int_equal(found->field_count, 1);
	assert_false(found->fields[0].at_half);
	assert_false(found->numbered);
	// From where to where: the first line with picture is line 3, from cell 48 on; line 4 begins at 64.
	assert_int_equal(found->items[ITEM_FRONT_PORCH].low_at.from_cell, 48 + 14);
	assert_int_equal(found->items[ITEM_FRONT_PORCH].low_at.to_cell, 64);
	assert_int_equal(found->items[ITEM_HORIZONTAL_BLANKING].high_at.from_cell, 48 + 14);
	assert_int_equal(found->items[ITEM_HORIZONTAL_BLANKING].high_at.to_cell, 64 + 6);
	assert_int_equal(found->items[ITEM_BURST_START].low_at.from_cell, 32);
	assert_int_equal(found->items[ITEM_BURST_START].low_at.to_cell, 35);
	assert_int_equal(found->items[ITEM_LINE_RATE].low_at.from_cell, 16);
	assert_int_equal(found->items[ITEM_LINE_RATE].low_at.to_cell, 32);
	assert_int_equal(found->items[ITEM_SERRATION_WIDTH].low_at.from_cell, 14);
	assert_int_equal(found->items[ITEM_SERRATION_WIDTH].low_at.to_cell, 16);
	erase(drawn);
}

// Seven lines in two fields, in halves from 0:
//     0 broad   1 equalising   2-3, 4-5 picture   6 equalising   7 broad   8 equalising   9 nothing   10-11 picture
//     12 picture of half a line   13 equalising
// 0V is at half 0, where a line begins, and at half 7, half way through line 6-7. Normal are 2-3, 4-5, 10-11 and 12-13.
#define INTERLACED HALF_BROAD, HALF_EQUALISING, PICTURE, PICTURE, HALF_EQUALISING, HALF_BROAD, HALF_EQUALISING, HALF_BLANK, PICTURE, \
	HALF_PICTURE, HALF_EQUALISING

static const struct item_values interlaced[] = {
	{ITEM_LINE_RATE, "160", NULL},
	{ITEM_FIELD_RATE, "560", NULL},
	{ITEM_FRAME_RATE, "1120", NULL},
	{ITEM_LINES_PER_FIELD, "7/2", NULL},
	{ITEM_CYCLES_PER_LINE, "20", NULL},
	{ITEM_FRONT_PORCH, "20", NULL},
	{ITEM_SYNC_WIDTH, "20", NULL},
	{ITEM_BREEZEWAY, "10", NULL},
	{ITEM_BURST_START, "30", NULL},
	{ITEM_BURST_START_CYCLES, "15/4", NULL},
	{ITEM_BURST_LENGTH, "20", NULL},
	{ITEM_BURST_LENGTH_CYCLES, "5/2", NULL},
	{ITEM_BURST_TO_PICTURE, "10", NULL},
	{ITEM_BACK_PORCH, "40", NULL},
	{ITEM_HORIZONTAL_BLANKING, "80", NULL}, // 20 and 60, of the line at 2 and that at 4
	{ITEM_PICTURE_START, "60", NULL},
	{ITEM_PICTURE_WIDTH, "80", NULL},
	{ITEM_HORIZONTAL_CENTRE, "100", NULL},
	{ITEM_PRE_EQUALISING_PULSES, "1", NULL},
	{ITEM_PRE_EQUALISING_LINES, "1/2", NULL},
	{ITEM_BROAD_PULSES, "1", NULL},
	{ITEM_VERTICAL_SYNC, "1/2", NULL},
	{ITEM_POST_EQUALISING_PULSES, "1", NULL},
	{ITEM_POST_EQUALISING_LINES, "1/2", NULL},
	{ITEM_EQUALISING_WIDTH, "10", NULL},
	{ITEM_BROAD_WIDTH, "60", NULL},
	{ITEM_SERRATION_WIDTH, "20", NULL},
	// The picture of the field at half 0 is from 2 to 6, that of the field at 7 from 10 to 13 (half a line).
	{ITEM_VERTICAL_FRONT_PORCH, "1/2", NULL}, // 6 to 7, 13 to 14
	{ITEM_VERTICAL_BACK_PORCH, "1/2", "1"},   // 1 to 2, 8 to 10
	{ITEM_VERTICAL_BLANKING, "3/2", "2"},     // 13 to 16, 6 to 10
	{ITEM_PICTURE_TOP, "1", "3/2"},           // 0 to 2, 7 to 10
	{ITEM_PICTURE_HEIGHT, "3/2", "2"},
	{ITEM_VERTICAL_CENTRE, "2", "9/4"},       // 0 to 4, 7 to 11.5
	{ITEM_LINES_WITHOUT_BURST, "1", "2"},     // the line at 0; those at 6 and 8
	{ITEM_HORIZONTAL_POLARITY, "1", NULL},
	{ITEM_VERTICAL_POLARITY, "1", NULL},
};

static void an_interlaced_frame(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(INTERLACED);
	drawn->standard.fields = 2;
	drawn->standard.vertical_sync_line = 1;
	const struct measurement *found = measure(drawn);
	assert_all(found, interlaced, COUNT_OF(interlaced));
	assert_int_equal(found->frames, 1);
	assert_int_equal(found->field_count, 2);
	// From the first 0V after the first normal line: that at half 7.
	assert_true(found->fields[0].at_half);
	assert_false(found->fields[1].at_half);
	assert_int_equal(found->fields[0].burstless_lines, 2);
	assert_int_equal(found->fields[1].burstless_lines, 1);
	erase(drawn);
}

// Where a frame begins changes nothing: its first cell may be inside any pulse, and any pulse may go over its end.
static void rotate_all(const char *const *texts, unsigned fields, const struct item_values *values, size_t count)
{
	struct drawn *drawn = draw(texts);
	const uint32_t cells = drawn->cells;
	erase(drawn);
	for (uint32_t cell = 0; cell < cells; cell++) {
		drawn = draw(texts);
		drawn->standard.fields = fields;
		rotate(drawn, cell);
		assert_all(measure(drawn), values, count);
		erase(drawn);
	}
}

static void any_cell_may_be_the_first(void **state)
{
	(void)state;
	rotate_all((const char *const[]){PROGRESSIVE, NULL}, 1, progressive, COUNT_OF(progressive));
	rotate_all((const char *const[]){INTERLACED, NULL}, 2, interlaced, COUNT_OF(interlaced));
}

static void pins_that_lead_are_measured_as_the_timeline(void **state)
{
	(void)state;
	static const int64_t leads[][DRAWN_SIGNALS] = {{1, 0, 0, 0, 0, 0}, {0, 0, 0, 3, -2, 0}, {-5, 0, 0, 7, 7, 1}, {200, 0, 0, -201, 112, 5}};
	for (size_t index = 0; index < COUNT_OF(leads); index++) {
		struct drawn *drawn = DRAW(INTERLACED);
		drawn->standard.fields = 2;
		record_pins(drawn, leads[index]);
		assert_all(measure(drawn), interlaced, COUNT_OF(interlaced));
		erase(drawn);
	}
}

// Line 1 has a cell of sync stretched, lines 3 and 4 one of picture and line 4 one of the front porch: lines of 160, 164 and 168 ticks.
// Line 4 is normal, since line 5 follows. All are within a sixteenth of 160, so that each counts as one line.
static void stretched_cells(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(BROAD, "sS--------------", BURST, "ss-bb-....:...--", "ss-bb-...:....-=", PICTURE);
	const struct measurement *found = measure(drawn);
	assert_item(found, ITEM_LINE_RATE, "168", "160"); // the lowest rate is of the longest line
	assert_int_equal(found->items[ITEM_LINE_RATE].low_at.from_cell, 64);
	assert_int_equal(found->items[ITEM_LINE_RATE].high_at.from_cell, 32);
	assert_item(found, ITEM_CYCLES_PER_LINE, "20", "21");
	assert_item(found, ITEM_SYNC_WIDTH, "20", "24");
	assert_int_equal(found->items[ITEM_SYNC_WIDTH].high_at.from_cell, 16);
	assert_int_equal(found->items[ITEM_SYNC_WIDTH].high_at.to_cell, 18);
	assert_item(found, ITEM_PICTURE_WIDTH, "80", "84"); // the last line has no stretched cell
	assert_item(found, ITEM_HORIZONTAL_CENTRE, "100", "102"); // 60 + 80/2, 60 + 84/2
	assert_item(found, ITEM_FRONT_PORCH, "20", "24");
	assert_item(found, ITEM_FIELD_RATE, "976", "976");
	assert_item(found, ITEM_LINES_PER_FIELD, "6", "6");
	assert_item(found, ITEM_PICTURE_TOP, "3", "3");
	erase(drawn);
}

// Five half lines: the frame comes back to the same 0H after two, and both are measured.
#define ODD HALF_BROAD, PICTURE, PICTURE

static void a_frame_of_an_odd_number_of_half_lines(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(ODD);
	drawn->standard.fields = 2;
	const struct measurement *found = measure(drawn);
	assert_int_equal(found->frames, 2);
	assert_int_equal(found->field_count, 2);
	assert_item(found, ITEM_FIELD_RATE, "400", "400");
	assert_item(found, ITEM_FRAME_RATE, "800", "800");
	assert_item(found, ITEM_LINES_PER_FIELD, "5/2", "5/2");
	assert_item(found, ITEM_VERTICAL_SYNC, "1/2", "1/2");
	assert_item(found, ITEM_PICTURE_WIDTH, "80", "80");
	assert_int_equal(found->items[ITEM_PICTURE_WIDTH].low_at.from_cell, 14); // of the first lap
	erase(drawn);
}

// Strays are counted in one frame, though two were measured.
static void strays_of_two_laps_count_once(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(HALF_BROAD, PICTURE, "ss--s-........--", PICTURE);
	const struct measurement *found = measure(drawn);
	assert_int_equal(found->frames, 2);
	assert_int_equal(found->strays, 1);
	assert_int_equal(found->stray_cell, 28);
	erase(drawn);
}

// A second normal pulse 60 ticks into line 2, and a narrow one alone in line 3: neither starts a line.
static void strays(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(BROAD, PLAIN, "ss----ss--------", "ss------s-------", PLAIN, PLAIN);
	const struct measurement *found = measure(drawn);
	assert_int_equal(found->strays, 2);
	assert_int_equal(found->stray_cell, 32 + 6);
	assert_item(found, ITEM_LINE_RATE, "160", "160");
	assert_item(found, ITEM_LINES_PER_FIELD, "6", "6");
	assert_item(found, ITEM_SYNC_WIDTH, "20", "20");
	assert_item(found, ITEM_EQUALISING_WIDTH, NULL, NULL);
	erase(drawn);
}

// Line 3 has no pulse: the line before it is none from 0H to 0H, but the field has as many lines as ever.
static void a_missing_pulse(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(BROAD, PLAIN, PICTURE, "------........--", PICTURE, PICTURE, PICTURE);
	const struct measurement *found = measure(drawn);
	assert_item(found, ITEM_LINE_RATE, "160", "160");
	assert_item(found, ITEM_LINES_PER_FIELD, "7", "7");
	assert_item(found, ITEM_PICTURE_HEIGHT, "5", "5");
	assert_item(found, ITEM_LINES_WITHOUT_BURST, "3", "3");
	// Lines 2 and 6 are not normal, 4 and 5 are; but 4 follows no line with picture that is.
	assert_item(found, ITEM_HORIZONTAL_BLANKING, "80", "80");
	assert_int_equal(found->items[ITEM_HORIZONTAL_BLANKING].low_at.from_cell, 64 + 14);
	erase(drawn);
}

static void assert_flaw(struct drawn *drawn, const char *flaw)
{
	const struct measurement *found = measure(drawn);
	assert_string_equal(found->flaw, flaw);
	for (unsigned item = 0; item < ITEM_COUNT; item++)
		if (item != ITEM_PIXEL_CLOCK && item != ITEM_SUBCARRIER)
			assert_string_equal(found->items[item].why, flaw);
	assert_item(found, ITEM_PIXEL_CLOCK, "5", "5");
	erase(drawn);
}

static void frames_without_a_raster(void **state)
{
	(void)state;
	assert_flaw(DRAW("----"), "sync is never asserted");
	assert_flaw(DRAW("nnSS"), "sync is asserted all the time");
	struct drawn *drawn = DRAW("s--s");
	take_signal(drawn, DRAWN_SYNC);
	assert_flaw(drawn, "no signal has the role composite sync or horizontal sync");
}

// Whatever is missing, what it would be needed for is not measured, and says why.
static void signals_that_are_missing(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(PROGRESSIVE);
	take_signal(drawn, DRAWN_BLANK);
	const struct measurement *found = measure(drawn);
	assert_string_equal(found->items[ITEM_FRONT_PORCH].why, "no signal has the role blanking");
	assert_string_equal(found->items[ITEM_BURST_TO_PICTURE].why, "no signal has the role blanking");
	assert_string_equal(found->items[ITEM_PICTURE_TOP].why, "no signal has the role blanking");
	assert_item(found, ITEM_BURST_START, "30", "30");
	take_signal(drawn, DRAWN_BURST);
	drawn->plan.clock.has_subcarrier = false;
	found = measure(drawn);
	assert_string_equal(found->items[ITEM_BREEZEWAY].why, "no signal has the role burst gate");
	assert_string_equal(found->items[ITEM_LINES_WITHOUT_BURST].why, "no signal has the role burst gate");
	assert_string_equal(found->items[ITEM_CYCLES_PER_LINE].why, "the plan has no subcarrier");
	assert_string_equal(found->items[ITEM_SUBCARRIER].why, "the plan has no subcarrier");
	assert_item(found, ITEM_LINE_RATE, "160", "160");
	erase(drawn);
	// Sync without broad pulses.
	drawn = DRAW(PICTURE, PICTURE);
	found = measure(drawn);
	assert_item(found, ITEM_HORIZONTAL_BLANKING, "80", "80");
	assert_int_equal(found->field_count, 0);
	assert_null(strstr(found->items[ITEM_FIELD_RATE].why, "signal"));
	assert_item(found, ITEM_LINES_WITHOUT_BURST, NULL, NULL);
	erase(drawn);
}

// Blanking that is never asserted: picture from 0H to 0H, with no edge to stand at.
static void picture_without_end(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("nn..............", "nn..............", "nnnnnnnnnnnnnn..");
	const struct measurement *found = measure(drawn);
	assert_item(found, ITEM_PICTURE_WIDTH, "160", "160");
	assert_item(found, ITEM_PICTURE_START, "0", "0");
	assert_item(found, ITEM_FRONT_PORCH, "0", "0");
	assert_item(found, ITEM_PICTURE_HEIGHT, "3", "3");
	assert_item(found, ITEM_VERTICAL_BLANKING, "0", "0");
	assert_int_equal(found->items[ITEM_PICTURE_START].low_at.to_cell, UINT32_MAX);
	assert_int_equal(found->items[ITEM_PICTURE_START].low_at.from_cell, 0);
	erase(drawn);
}

// A picture that goes on over 0H is cut there: from 0 to 140 in a line, but nothing before.
static void picture_over_the_end_of_a_line(void **state)
{
	(void)state;
	for (uint32_t cell = 0; cell < 96; cell++) {
		struct drawn *drawn = DRAW(BROAD, PLAIN, "ss--------------", "ss--....------..", "nn............--", PLAIN);
		rotate(drawn, cell);
		const struct measurement *found = measure(drawn);
		// Line 3 has picture from 40 to 80 and from 140 on: both are its own, together 40 to 160. Line 4 has it from 0 to 140.
		assert_item(found, ITEM_PICTURE_START, "0", "40");
		assert_item(found, ITEM_PICTURE_WIDTH, "120", "140");
		assert_item(found, ITEM_FRONT_PORCH, "0", "20");
		erase(drawn);
	}
}

// A burst is that of the line in which it begins: from 150 of line 2 to 30 of line 3.
static void a_burst_over_the_end_of_a_line(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(BROAD, PLAIN, "ss-------------b", "ssb-------------", PLAIN);
	for (uint32_t cell = 48; cell < 50; cell++)
		drawn->asserted[cell] |= 1u << DRAWN_BURST;
	const struct measurement *found = measure(drawn);
	assert_item(found, ITEM_BURST_START, "150", "150");
	assert_item(found, ITEM_BURST_LENGTH, "40", "40");
	assert_item(found, ITEM_LINES_WITHOUT_BURST, "4", "4");
	erase(drawn);
}

// A burst may begin at 0H.
static void a_burst_with_sync(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(BROAD, PLAIN, PLAIN, PLAIN);
	drawn->asserted[32] |= 1u << DRAWN_BURST;
	const struct measurement *found = measure(drawn);
	assert_item(found, ITEM_BURST_START, "0", "0");
	assert_item(found, ITEM_BREEZEWAY, "-20", "-20");
	assert_item(found, ITEM_LINES_WITHOUT_BURST, "3", "3");
	erase(drawn);
}

// Two bursts in a line count from the first to the last.
static void two_bursts_in_a_line(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(BROAD, PLAIN, "ss-b-bb-........", PLAIN, PLAIN);
	const struct measurement *found = measure(drawn);
	assert_item(found, ITEM_BREEZEWAY, "10", "10");
	assert_item(found, ITEM_BURST_LENGTH, "40", "40");
	assert_item(found, ITEM_BURST_TO_PICTURE, "10", "10");
	erase(drawn);
}

// Where most lines have picture in their second half alone, those lines are whole, and one with picture in the first too is as well; but a
// line with picture in the first half alone is half a line of picture: nothing is measured on it.
static void a_picture_in_one_half_of_its_lines(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(BROAD, "ss------....----", "ss--------....--", "ss--------....--", "ss-.....--------", "ss--------....--", PLAIN);
	const struct measurement *found = measure(drawn);
	assert_item(found, ITEM_PICTURE_START, "80", "100");
	assert_item(found, ITEM_PICTURE_WIDTH, "40", "40");
	// The first half is not used, so that every line counts whole at its start; the line without its second half ends after half a line,
	// but it is not the last.
	assert_item(found, ITEM_PICTURE_TOP, "1", "1");
	assert_item(found, ITEM_PICTURE_HEIGHT, "5", "5");
	erase(drawn);
}

// The same with the first half alone; and where just half of the lines use a half, it is used.
static void a_picture_in_the_first_half(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(BROAD, PLAIN, "ss-bb-..--------", "ss-bb-..--------", "ss-bb-..--------", PLAIN);
	const struct measurement *found = measure(drawn);
	assert_item(found, ITEM_PICTURE_WIDTH, "20", "20");
	assert_item(found, ITEM_PICTURE_HEIGHT, "3", "3");
	assert_item(found, ITEM_VERTICAL_FRONT_PORCH, "1", "1");
	erase(drawn);
	drawn = DRAW(BROAD, PLAIN, "ss-bb-..........", "ss-bb-..........", "ss-bb-----......", "ss-bb-----......", PLAIN);
	found = measure(drawn);
	assert_item(found, ITEM_PICTURE_START, "60", "60");
	erase(drawn);
}

// Blanking is measured from one line with picture to the next, if that is a normal one with picture.
static void blanking_before_a_line_without_picture(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(BROAD, PLAIN, PICTURE, BURST, PICTURE, BURST, PLAIN);
	const struct measurement *found = measure(drawn);
	assert_string_equal(found->items[ITEM_HORIZONTAL_BLANKING].why, "no normal line with picture follows another");
	assert_item(found, ITEM_FRONT_PORCH, "20", "20");
	erase(drawn);
}

// Half lines of picture at the top and at the bottom.
static void a_picture_from_half_a_line_to_half_a_line(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(BROAD, PLAIN, "ss------......--", PICTURE, PICTURE, PICTURE, "ss-bb-..--------", PLAIN);
	const struct measurement *found = measure(drawn);
	assert_item(found, ITEM_PICTURE_TOP, "5/2", "5/2");
	assert_item(found, ITEM_PICTURE_HEIGHT, "4", "4");
	assert_item(found, ITEM_VERTICAL_FRONT_PORCH, "3/2", "3/2");
	assert_item(found, ITEM_PICTURE_START, "60", "60");
	assert_item(found, ITEM_PICTURE_WIDTH, "80", "80");
	erase(drawn);
}

// Active low sync: negative polarity, of both.
static void polarity(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(PROGRESSIVE);
	drawn->signals[DRAWN_SYNC].active_high = false;
	const struct measurement *found = measure(drawn);
	assert_item(found, ITEM_HORIZONTAL_POLARITY, "-1", "-1");
	assert_item(found, ITEM_VERTICAL_POLARITY, "-1", "-1");
	erase(drawn);
	drawn = DRAW("hh..", "hh..", "wwvv", "hh..");
	drawn->signals[DRAWN_VERTICAL].active_high = false;
	found = measure(drawn);
	assert_item(found, ITEM_HORIZONTAL_POLARITY, "1", "1");
	assert_item(found, ITEM_VERTICAL_POLARITY, "-1", "-1");
	erase(drawn);
}

// The standard decides which sync is measured where a plan has both, by its polarity.
static void standards_that_prefer_separate_sync(void **state)
{
	(void)state;
	static const struct limit polarity_limit = {.item = ITEM_HORIZONTAL_POLARITY, .grade = GRADE_STUDIO, .has_nominal = true,
	                                            .nominal = {1, 1}, .low = {0, 1}, .high = {0, 1}};
	struct drawn *drawn = DRAW("hh..", "hh..", "wwvv", "hh..");
	drawn->plan.role_signal[ROLE_COMPOSITE_SYNC] = DRAWN_SYNC;
	assert_string_equal(measure(drawn)->flaw, "sync is never asserted");
	drawn->standard.limits = &polarity_limit;
	drawn->standard.limit_count = 1;
	const struct measurement *found = measure(drawn);
	assert_null(found->flaw);
	assert_true(found->separate);
	erase(drawn);
}

static struct measured_instances instances_of(struct drawn *drawn)
{
	struct measured_instances instances;
	assert_true(measure_instances(drawn->arena, &drawn->recording, &drawn->standard, &instances));
	return instances;
}

// The instances of an item, in raw units of half a tick.
static void assert_instances(const struct measured_instances *found, enum limit_item item, size_t count, int64_t low, int64_t high)
{
	size_t seen = 0;
	int64_t least = INT64_MAX, most = INT64_MIN;
	for (size_t index = 0; index < found->count; index++) {
		if (found->list[index].item != item)
			continue;
		seen++;
		least = found->list[index].raw < least ? found->list[index].raw : least;
		most = found->list[index].raw > most ? found->list[index].raw : most;
	}
	assert_int_equal(seen, count);
	if (count == 0)
		return;
	assert_int_equal(least, low);
	assert_int_equal(most, high);
}

static void every_value_is_an_instance(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(INTERLACED);
	const struct measured_instances found = instances_of(drawn);
	assert_instances(&found, ITEM_SYNC_WIDTH, 4, 40, 40);
	assert_instances(&found, ITEM_EQUALISING_WIDTH, 4, 20, 20);
	assert_instances(&found, ITEM_BROAD_WIDTH, 2, 120, 120);
	assert_instances(&found, ITEM_BURST_LENGTH_CYCLES, 4, 40, 40);
	assert_instances(&found, ITEM_HORIZONTAL_CENTRE, 3, 200, 200);
	// A stretched cell before 0H changes where it is among lines of other types. Of rates the raw value is the period in ticks.
	assert_instances(&found, ITEM_LINE_RATE, 4, 160, 160);
	assert_instances(&found, ITEM_CYCLES_PER_LINE, 4, 320, 320);
	assert_instances(&found, ITEM_PICTURE_TOP, 0, 0, 0);
	struct fraction value;
	assert_true(measured_value(&drawn->plan.clock, ITEM_BROAD_WIDTH, 120, &value));
	assert_true(value.numerator == 3 && value.denominator == 50000); // 60 us
	assert_true(measured_value(&drawn->plan.clock, ITEM_BURST_LENGTH_CYCLES, 41, &value));
	assert_true(value.numerator == 41 && value.denominator == 16); // 20.5 ticks
	erase(drawn);
	drawn = DRAW("----");
	assert_int_equal(instances_of(drawn).count, 0);
	erase(drawn);
}

// More than fit into the first room for them: 1500 lines have 1500 normal pulses, and one that is broad.
static void instances_without_number(void **state)
{
	(void)state;
	static const char *texts[1502];
	texts[0] = BROAD;
	for (size_t line = 1; line < 1501; line++)
		texts[line] = PICTURE;
	struct drawn *drawn = draw(texts);
	const struct measured_instances found = instances_of(drawn);
	assert_instances(&found, ITEM_SYNC_WIDTH, 1500, 40, 40);
	assert_instances(&found, ITEM_FRONT_PORCH, 1500, 40, 40);
	assert_instances(&found, ITEM_HORIZONTAL_BLANKING, 1499, 160, 160);
	assert_int_equal(found.list[0].item, ITEM_LINE_RATE);
	assert_int_equal(found.list[0].from_cell, 16);
	erase(drawn);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(a_progressive_frame),
		cmocka_unit_test(an_interlaced_frame),
		cmocka_unit_test(any_cell_may_be_the_first),
		cmocka_unit_test(pins_that_lead_are_measured_as_the_timeline),
		cmocka_unit_test(stretched_cells),
		cmocka_unit_test(a_frame_of_an_odd_number_of_half_lines),
		cmocka_unit_test(strays_of_two_laps_count_once),
		cmocka_unit_test(strays),
		cmocka_unit_test(a_missing_pulse),
		cmocka_unit_test(frames_without_a_raster),
		cmocka_unit_test(signals_that_are_missing),
		cmocka_unit_test(picture_without_end),
		cmocka_unit_test(picture_over_the_end_of_a_line),
		cmocka_unit_test(a_burst_over_the_end_of_a_line),
		cmocka_unit_test(a_burst_with_sync),
		cmocka_unit_test(two_bursts_in_a_line),
		cmocka_unit_test(a_picture_in_the_first_half),
		cmocka_unit_test(blanking_before_a_line_without_picture),
		cmocka_unit_test(a_picture_in_one_half_of_its_lines),
		cmocka_unit_test(a_picture_from_half_a_line_to_half_a_line),
		cmocka_unit_test(polarity),
		cmocka_unit_test(standards_that_prefer_separate_sync),
		cmocka_unit_test(every_value_is_an_instance),
		cmocka_unit_test(instances_without_number),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
