// Lines without burst: whose field they are, their numbers, and whether they are the standard's.
#include "drawn.h"

#define BURST "ss-b------------"
#define FOUR_BURSTS BURST, BURST, BURST, BURST
#define PLAIN "ss--------------"
#define BROAD "ssssssssssssss--"
#define HALF_BROAD "ssssss--"
#define HALF_EQUALISING "s-------"

struct run {
	uint32_t field;
	int64_t first, last;
};

static void assert_runs(const struct measurement *found, const struct run *runs, size_t count)
{
	assert_int_equal(found->burstless_count, count);
	for (size_t index = 0; index < count; index++) {
		assert_int_equal(found->burstless[index].field, runs[index].field);
		assert_int_equal(found->burstless[index].first_line, runs[index].first);
		assert_int_equal(found->burstless[index].last_line, runs[index].last);
	}
}

#define ASSERT_RUNS(found, ...) \
	assert_runs(found, (const struct run[]){__VA_ARGS__}, sizeof(const struct run[]){__VA_ARGS__} / sizeof(struct run))

// 0V is at line 4, by the standard; lines 4, 5, 6 and the two before, 2 and 3, have none, of 8. A run over the trace's end is one.
static void a_run_around_0v(void **state)
{
	(void)state;
	for (uint32_t cell = 0; cell < 128; cell++) {
		struct drawn *drawn = DRAW(PLAIN, PLAIN, BROAD, PLAIN, PLAIN, BURST, BURST, BURST);
		drawn->standard.vertical_sync_line = 4;
		rotate(drawn, cell);
		const struct measurement *found = measure(drawn);
		assert_true(found->numbered);
		assert_int_equal(found->fields[0].burstless_lines, 5);
		ASSERT_RUNS(found, {0, 2, 6});
		assert_item(found, ITEM_LINES_WITHOUT_BURST, "5", "5");
		erase(drawn);
	}
}

// Numbers start anew after the frame's last: of 5 lines, 0V at line 4, those without burst are 3, 4, 5, 1.
static void numbers_go_around(void **state)
{
	(void)state;
	for (uint32_t cell = 0; cell < 80; cell++) {
		struct drawn *drawn = DRAW(PLAIN, BROAD, PLAIN, PLAIN, BURST);
		drawn->standard.vertical_sync_line = 4;
		rotate(drawn, cell);
		ASSERT_RUNS(measure(drawn), {0, 3, 1});
		erase(drawn);
	}
}

// A frame most of which is its vertical interval: from the first normal line on, 0V comes late, and the lines after it are of the next lap.
static void a_long_vertical_interval(void **state)
{
	(void)state;
	for (uint32_t cell = 0; cell < 96; cell++) {
		struct drawn *drawn = DRAW(BROAD, BROAD, BROAD, BROAD, BURST, BURST);
		drawn->standard.vertical_sync_line = 1;
		rotate(drawn, cell);
		const struct measurement *found = measure(drawn);
		assert_int_equal(found->field_count, 1);
		ASSERT_RUNS(found, {0, 1, 4});
		assert_int_equal(found->fields[0].burstless_lines, 4);
		erase(drawn);
	}
}

// Two fields of 3 1/2 lines. 0V of the first, at half 0, is at line 1; that of the second is half way through the line at halves 6 and 7,
// number 4. The line at 6 is half before it and half after, and nearer to it than to half 14; that at 10 is as near to 7 as to 14 (its
// middle is at 11, theirs at 10 1/2), so it is the next field's.
#define INTERLACED HALF_BROAD, HALF_EQUALISING, BURST, PLAIN, HALF_EQUALISING, HALF_BROAD, HALF_EQUALISING, "--------", PLAIN, "ss-b----", \
	HALF_EQUALISING

static const struct burst_pause pauses[] = {{1, 1, 1, ""}, {1, 6, 6, ""}, {2, 3, 5, ""}};

static void lines_belong_to_the_nearest_field(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(INTERLACED);
	drawn->standard.fields = 2;
	drawn->standard.vertical_sync_line = 1;
	const struct measurement *found = measure(drawn);
	// Lines 2 to 7 begin at halves 2, 4, … 12; fields are counted from that at half 7.
	ASSERT_RUNS(found, {0, 3, 5}, {1, 6, 6}, {1, 1, 1});
	assert_int_equal(found->fields[0].burstless_lines, 3);
	assert_int_equal(found->fields[1].burstless_lines, 2);
	assert_item(found, ITEM_LINES_WITHOUT_BURST, "2", "3");
	assert_false(found->pauses_kept); // the standard has none
	erase(drawn);
}

// A line half way between two fields is the later one's: of 5 lines, the third.
static void a_line_half_way_between_fields(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(BROAD, BURST, PLAIN, BURST, BURST, BROAD, BURST, BURST, BURST, BURST);
	const struct measurement *found = measure(drawn);
	assert_int_equal(found->field_count, 2);
	assert_int_equal(found->fields[0].burstless_lines, 2); // that at line 5
	assert_int_equal(found->fields[1].burstless_lines, 1);
	erase(drawn);
}

// Wherever the frame begins, and so whichever field is found first.
static void pauses_of_the_standard(void **state)
{
	(void)state;
	for (uint32_t cell = 0; cell < 112; cell++) {
		struct drawn *drawn = DRAW(INTERLACED);
		drawn->standard.fields = 2;
		drawn->standard.vertical_sync_line = 1;
		drawn->standard.pauses = pauses;
		drawn->standard.pause_count = COUNT_OF(pauses);
		rotate(drawn, cell);
		assert_true(measure(drawn)->pauses_kept);
		erase(drawn);
	}
}

static bool keeps(const struct burst_pause *list, size_t count)
{
	struct drawn *drawn = DRAW(INTERLACED);
	drawn->standard.fields = 2;
	drawn->standard.vertical_sync_line = 1;
	drawn->standard.pauses = list;
	drawn->standard.pause_count = count;
	const bool kept = measure(drawn)->pauses_kept;
	erase(drawn);
	return kept;
}

static void pauses_that_differ(void **state)
{
	(void)state;
	assert_true(keeps(pauses, COUNT_OF(pauses)));
	assert_false(keeps(pauses, 2));                                                                 // a field without
	assert_false(keeps((const struct burst_pause[]){{1, 1, 1, ""}, {2, 3, 5, ""}}, 2));             // one too few
	assert_false(keeps((const struct burst_pause[]){{1, 1, 1, ""}, {1, 6, 6, ""}, {2, 3, 4, ""}}, 3)); // another last
	assert_false(keeps((const struct burst_pause[]){{1, 1, 1, ""}, {1, 6, 6, ""}, {2, 4, 5, ""}}, 3)); // another first
	assert_false(keeps((const struct burst_pause[]){{1, 1, 1, ""}, {1, 6, 6, ""}, {1, 7, 7, ""}, {2, 3, 5, ""}}, 4)); // one too many
	// The fields change places: a frame may begin with any field.
	assert_true(keeps((const struct burst_pause[]){{2, 1, 1, ""}, {2, 6, 6, ""}, {1, 3, 5, ""}}, 3));
	// A sequence of four fields of which this frame has only two in turn.
	assert_false(keeps((const struct burst_pause[]){{1, 1, 1, ""}, {2, 3, 5, ""}, {3, 1, 1, ""}, {4, 3, 5, ""}}, 4));
}

// A sequence of four fields, in frames of four and of two.
static void sequences_of_four_fields(void **state)
{
	(void)state;
	static const struct burst_pause four[] = {{1, 1, 2, ""}, {2, 1, 1, ""}, {3, 1, 2, ""}, {4, 1, 3, ""}};
	for (uint32_t cell = 0; cell < 24 * 16; cell++) {
		struct drawn *drawn = DRAW(BROAD, PLAIN, FOUR_BURSTS, BROAD, BURST, FOUR_BURSTS, BROAD, PLAIN, FOUR_BURSTS, BROAD, PLAIN, PLAIN,
		                           BURST, BURST, BURST);
		drawn->standard.vertical_sync_line = 1;
		drawn->standard.pauses = four;
		drawn->standard.pause_count = COUNT_OF(four);
		rotate(drawn, cell);
		const struct measurement *found = measure(drawn);
		assert_int_equal(found->field_count, 4);
		assert_item(found, ITEM_LINES_WITHOUT_BURST, "1", "3");
		assert_true(found->pauses_kept);
		erase(drawn);
	}
	struct drawn *drawn = DRAW(BROAD, PLAIN, FOUR_BURSTS, BROAD, BURST, FOUR_BURSTS);
	drawn->standard.vertical_sync_line = 1;
	drawn->standard.pauses = four;
	drawn->standard.pause_count = COUNT_OF(four);
	assert_false(measure(drawn)->pauses_kept); // two of them again and again are no sequence of four
	erase(drawn);
}

// A frame whose fields all begin half way through lines has no line to count from.
static void lines_without_numbers(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(BURST, PLAIN, "ss------", HALF_BROAD, "--------", HALF_EQUALISING, BURST);
	drawn->standard.vertical_sync_line = 4;
	const struct measurement *found = measure(drawn);
	assert_true(found->fields[0].at_half);
	assert_false(found->numbered);
	assert_int_equal(found->fields[0].burstless_lines, 3);
	ASSERT_RUNS(found, {0, 0, 0});
	assert_false(found->pauses_kept);
	erase(drawn);
}

// No field: no lines of fields.
static void no_fields(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW(BURST, PLAIN);
	drawn->standard.vertical_sync_line = 4;
	const struct measurement *found = measure(drawn);
	assert_int_equal(found->field_count, 0);
	assert_int_equal(found->burstless_count, 0);
	assert_false(found->numbered);
	erase(drawn);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(a_run_around_0v),
		cmocka_unit_test(numbers_go_around),
		cmocka_unit_test(a_long_vertical_interval),
		cmocka_unit_test(lines_belong_to_the_nearest_field),
		cmocka_unit_test(a_line_half_way_between_fields),
		cmocka_unit_test(pauses_of_the_standard),
		cmocka_unit_test(pauses_that_differ),
		cmocka_unit_test(sequences_of_four_fields),
		cmocka_unit_test(lines_without_numbers),
		cmocka_unit_test(no_fields),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
