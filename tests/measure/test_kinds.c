// Kinds of sync pulses and the lines that they make. Half a line is 8 cells; a normal pulse has 4 cells, so that narrow ones can have
// 3 and 2 (three quarters of 4 is 3); a quarter of a line is 4 cells as well, so lines here are of 32 cells: half a line is 16.
#include "drawn.h"
#include "measure/raster.h"

static struct raster find(struct drawn *drawn, const char **flaw)
{
	struct raster raster;
	const struct trace *trace = trace_make(drawn->arena, &drawn->recording, 1);
	assert_non_null(trace);
	assert_true(raster_find(drawn->arena, trace, &raster, flaw));
	return raster;
}

static struct raster found_in(struct drawn *drawn)
{
	const char *flaw;
	const struct raster raster = find(drawn, &flaw);
	assert_null(flaw);
	return raster;
}

// The kinds of all pulses in order: N, E, B, S.
static void assert_kinds(const struct raster *raster, const char *kinds)
{
	char found[100] = "";
	const uint32_t count = raster->trace->of[TRACED_SYNC].count;
	assert_true(count < sizeof found);
	for (uint32_t pulse = 0; pulse < count; pulse++)
		found[pulse] = "NEBS"[raster->kinds[pulse]];
	assert_string_equal(found, kinds);
}

// Cells after cells of a pulse: "ssss" and so on to so many cells.
static const char *padded(struct drawn *drawn, const char *start, int cells)
{
	return arena_format(drawn->arena, "%s%.*s", start, cells - (int)strlen(start), "-------------------------------------------------");
}

struct kinds_case {
	const char *starts[12];  // of lines of 32 cells
	const char *kinds;
};

static const struct kinds_case cases[] = {
	// A lone pulse of half the width; one of three quarters is normal still. Broad from 8 cells on.
	{{"ssss", "ssss", "ss", "ssss", "sss"}, "NNSNN"},
	{{"ssss", "ssss", "sssssss", "ssss"}, "NNNN"},
	{{"ssss", "ssss", "ssssssss", "ssss"}, "NNBN"},
	// Narrow ones next to broad ones are equalising, on either side, as far as they go on.
	{{"ssss", "ssss", "ss", "ss", "ssssssss", "ssssssss", "ss", "ssss", "ssss", "ss", "ssss"}, "NNEEBBENNSN"},
	{{"ssssssss", "ss", "ssss", "ssss", "ssss", "ss"}, "BENNNE"},
	{{"ss", "ssss", "ssss", "ssss", "ss", "ssssssssssssss"}, "ENNNEB"},
	// As wide as normal ones, but half a line from both neighbours: the last before a half line distance and the first after are normal.
	{{"ssss", "ssss------------ssss", "ssss------------ssssssss", "ssssssss--------ssss", "ssss------------ssss", "ssss", "ssss", "ssss",
	  "ssss"}, "NNEEBBEEENNNN"},
	// Half a line apart but next to no broad pulse, each second one is a stray; and so is the second of a line wherever it comes, up to
	// three quarters of it. A pulse that comes later begins a line.
	{{"ssss", "ssss------------ssss", "ssss", "ssss"}, "NNSNN"},
	{{"ssss", "ssss-------------------ssss", "ssss", "ssss"}, "NNSNN"},
	{{"ssss", "ssss----ssss----ssss", "ssss", "ssss"}, "NNSSNN"},
	{{"ssss", "ssss--------------------ssss", "ssss", "ssss", "ssss"}, "NNNSNN"},
	// A pulse that comes early after a broad one is no second in its line; one that comes early after that is.
	{{"ssss", "ssss", "ssssssss--------ssss", "ssss", "ssss"}, "NNBENN"},
	{{"ssss", "ssss", "ssssssss------------ssss", "ssss", "ssss"}, "NNBNSN"},
	// A pulse is half a line from both its neighbours within a sixteenth of a line, two cells.
	{{"ssss", "ssss", "ssssssss----------ssss", "ssss", "ssss"}, "NNBENN"},
	{{"ssss", "ssss", "ssssssss-----------ssss", "ssss", "ssss"}, "NNBNSN"},
	{{"ssss", "ssss", "ssssssss------ssss", "ssss", "ssss"}, "NNBENN"},
	{{"ssss", "ssss", "ssssssss-----ssss", "ssss", "ssss"}, "NNBNSN"},
	// So that two strays of a line before the vertical interval are none of its pulses.
	{{"ssss", "ssss------ssss", "ssss------ssss", "ssssssss", "ssss", "ssss"}, "NNSNSBNN"},
};

static void kinds_by_width_and_neighbours(void **state)
{
	(void)state;
	for (size_t index = 0; index < COUNT_OF(cases); index++) {
		struct drawn *pads = DRAW("-");
		const char *texts[13] = {NULL};
		for (size_t line = 0; cases[index].starts[line] != NULL; line++)
			texts[line] = padded(pads, cases[index].starts[line], 32);
		struct drawn *drawn = draw(texts);
		const struct raster raster = found_in(drawn);
		assert_int_equal(raster.line_ticks, 320);
		assert_kinds(&raster, cases[index].kinds);
		erase(drawn);
		erase(pads);
	}
}

// The first pulse of the trace is the second of the last line: cells 30 and 31 begin it, 12 cells into the line that began at 20.
static void a_stray_may_be_the_first_pulse(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("--ss----------------", "ss------------------", "ss------------------", "ss----------------");
	// Pulses at 2, 20, 40, 60 of 78: from 60 over the end to 2 are 20 cells. None is a stray; a line is 20 cells.
	struct raster raster = found_in(drawn);
	assert_kinds(&raster, "NNNN");
	erase(drawn);
	drawn = DRAW("--ss------", "ss------------------", "ss------------------", "ss------------------", "ss------");
	// Pulses at 2, 10, 30, 50, 70 of 78: 70 to 2 are 10 cells, 2 to 10 are 8; the lines are of 20 cells.
	raster = found_in(drawn);
	assert_kinds(&raster, "SNNNN");
	assert_int_equal(raster.first, 1);
	assert_int_equal(raster.stray_count, 1);
	assert_int_equal(raster.first_stray, 0);
	// Its place is that of the pulse before, at 70: 3 lines after the first.
	assert_int_equal(raster.places[0], 3 * 400);
	// From the pulse at 70 to that at 10 are 18 cells, too few for a line: the lap is 3.9 lines.
	assert_int_equal(raster.place_total, 3 * 400 + 360);
	assert_int_equal(raster.line_count, 4);
	erase(drawn);
}

// The same with two lines from the last pulse, at 90 of 100, to that at 30: the stray comes 12 cells after the first of them.
static void a_line_over_the_end_behind_a_stray(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("--ss--------------------------", "ss------------------", "ss------------------", "ss------------------",
	                           "ss--------");
	const struct raster raster = found_in(drawn);
	assert_kinds(&raster, "SNNNN");
	assert_int_equal(raster.line_count, 5);
	for (uint32_t line = 0; line < 5; line++)
		assert_int_equal(raster.lines[line].place, 400 * line);
	assert_int_equal(raster.place_total, 2000);
	erase(drawn);
}

// The period is the distance that takes the most time, not the one that comes most often: of 4 half lines and 3 whole ones, the whole.
static void the_period_is_by_time(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("s---", "s---", "s---", "s---", "s-------", "s-------", "s-------");
	assert_int_equal(found_in(drawn).line_ticks, 80);
	erase(drawn);
	// Of distances that take equal time, the shortest: two of 40 and one of 80.
	drawn = DRAW("s---", "s---", "s-------");
	assert_int_equal(found_in(drawn).line_ticks, 40);
	erase(drawn);
}

// A width counts as normal by the number of pulses a line apart: three of 2 cells, two of 3. Of a tie, the narrowest.
static void the_normal_width_is_by_number(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("ss--------------", "sss-------------", "ss--------------", "sss-------------", "ss--------------",
	                           "s---------------");
	struct raster raster = found_in(drawn);
	assert_kinds(&raster, "NNNNNS"); // 1 is less than 3/4 of 2
	erase(drawn);
	drawn = DRAW("ss--------------", "sss-------------");
	raster = found_in(drawn);
	assert_kinds(&raster, "NN"); // of normal width 3, 2 would be narrow
	erase(drawn);
	// Where nothing narrower than a quarter of a line comes, wide pulses are normal.
	drawn = DRAW("ssss------------", "sssssss---------", "sssssss---------");
	raster = found_in(drawn);
	assert_kinds(&raster, "SNN");
	erase(drawn);
}

// Lines of 40 cells, 400 ticks, have 800 places. A sixteenth of one is 25 ticks: six stretched cells make it 24 longer, two cells less 20
// shorter, and it still counts as one line; three cells more make it 30 longer, and then, as with three quarters of a line, the place is where
// the pulse is.
static void places_are_put_to_half_lines(void **state)
{
	(void)state;
	struct drawn *pads = DRAW("-");
	struct drawn *drawn = DRAW(padded(pads, "ss", 40), padded(pads, "ss======", 40), padded(pads, "ss", 38), padded(pads, "ss", 30),
	                           padded(pads, "ss", 43), padded(pads, "ss", 40), padded(pads, "ss", 40));
	const struct raster raster = found_in(drawn);
	const int64_t wanted[] = {0, 800, 1600, 2400, 3000, 3860, 4660};
	assert_int_equal(raster.line_ticks, 400);
	assert_int_equal(raster.trace->of[TRACED_SYNC].count, COUNT_OF(wanted));
	for (size_t pulse = 0; pulse < COUNT_OF(wanted); pulse++)
		assert_int_equal(raster.places[pulse], wanted[pulse]);
	assert_int_equal(raster.place_total, 5460);
	erase(drawn);
	erase(pads);
}

static void the_snap_is_a_sixteenth_of_a_line(void **state)
{
	(void)state;
	const struct raster raster = {.line_ticks = 80}; // half a line is 80 places, a sixteenth of a line 10
	static const int64_t cases_of[][2] = {{0, 0}, {10, 0}, {11, 11}, {69, 69}, {70, 80}, {80, 80}, {90, 80}, {149, 149}, {150, 160},
	                                      {-10, 0}, {-11, -11}, {-69, -69}, {-70, -80}, {-80, -80}, {-90, -80}};
	for (size_t index = 0; index < COUNT_OF(cases_of); index++)
		assert_int_equal(place_snapped(&raster, cases_of[index][0]), cases_of[index][1]);
}

static void assert_line(const struct raster *raster, uint32_t index, int64_t place, int64_t start, int64_t end, bool normal)
{
	assert_true(index < raster->line_count);
	const struct raster_line *line = &raster->lines[index];
	assert_int_equal(line->place, place);
	assert_int_equal(line->start, start);
	assert_int_equal(line->end, end);
	assert_int_equal(line->normal, normal);
}

// Lines of 160 ticks, 320 places. Pulses at ticks 0 and 80 broad; 160, 320, 480 and 640 normal, then none for a line; 960 normal; 1120 and
// 1200 equalising (before the broad ones); 1280 in all.
static void lines_without_a_pulse_of_their_own(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("ssssss--ssssss--", "ss--------------", "ss--------------", "ss--------------", "ss--------------",
	                           "----------------", "ss--------------", "s-------s-------");
	const struct raster raster = found_in(drawn);
	assert_kinds(&raster, "BBNNNNNEE");
	assert_int_equal(raster.line_count, 8);
	for (uint32_t line = 0; line < 8; line++)
		assert_line(&raster, line, 320 + 320 * line, 160 + 160 * line, 320 + 160 * line, line < 3 || line == 5);
	static const uint32_t pulses[] = {2, 3, 4, 5, UINT32_MAX, 6, 7, 0};
	for (uint32_t line = 0; line < 8; line++)
		assert_int_equal(raster.lines[line].pulse, pulses[line]);
	erase(drawn);
}

// A broad pulse in the middle changes nothing for its line, which is from 0H to 0H. And a line whose pulse comes a cell late begins with it.
static void lines_in_a_vertical_interval(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("ss------ssssss--", "ss--------------", "-ssssssssssssss-", "ss--------------", "ss--------------");
	const struct raster raster = found_in(drawn);
	assert_kinds(&raster, "NBNBNN");
	assert_int_equal(raster.line_count, 5);
	assert_line(&raster, 0, 0, 0, 160, true);
	assert_line(&raster, 1, 320, 160, 330, true);
	assert_line(&raster, 2, 640, 330, 480, false);
	assert_line(&raster, 3, 960, 480, 640, true);
	erase(drawn);
}

// A rest of a quarter of a line is none of its own, but one of more is; a line at half a line's distance is a line.
static void rests_of_lines(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("ss--------------", "ss------------------", "ss--------------", "ss--------------");
	struct raster raster = found_in(drawn);
	assert_int_equal(raster.line_count, 4); // 20 cells are 1 1/4 lines
	assert_true(raster.lines[1].normal);
	assert_line(&raster, 1, 320, 160, 360, true);
	erase(drawn);
	drawn = DRAW("ss--------------", "ss-------------------", "ss--------------", "ss--------------");
	raster = found_in(drawn);
	assert_int_equal(raster.line_count, 5);
	assert_line(&raster, 1, 320, 160, 320, false);
	assert_line(&raster, 2, 640, 320, 370, false);
	assert_int_equal(raster.lines[2].pulse, UINT32_MAX);
	erase(drawn);
}

// A single pulse is a raster of one line.
static void one_pulse_alone(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("---ss---");
	const struct raster raster = found_in(drawn);
	assert_kinds(&raster, "N");
	assert_int_equal(raster.line_ticks, 80);
	assert_int_equal(raster.line_count, 1);
	assert_line(&raster, 0, 0, 30, 110, true);
	assert_false(raster_is_odd(&raster));
	erase(drawn);
}

static void odd_numbers_of_half_lines(void **state)
{
	(void)state;
	struct drawn *drawn = DRAW("ss------", "ss--", "ss------");
	struct raster raster = found_in(drawn);
	assert_kinds(&raster, "NNS"); // the third comes half a line after the second
	assert_true(raster_is_odd(&raster));
	erase(drawn);
	drawn = DRAW("ss------", "ss------", "ss------");
	raster = found_in(drawn);
	assert_false(raster_is_odd(&raster));
	erase(drawn);
	// A line and three quarters more is neither.
	drawn = DRAW("ss------", "ss------", "ss----");
	raster = found_in(drawn);
	assert_false(raster_is_odd(&raster));
	erase(drawn);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(kinds_by_width_and_neighbours),
		cmocka_unit_test(a_stray_may_be_the_first_pulse),
		cmocka_unit_test(a_line_over_the_end_behind_a_stray),
		cmocka_unit_test(the_period_is_by_time),
		cmocka_unit_test(the_normal_width_is_by_number),
		cmocka_unit_test(places_are_put_to_half_lines),
		cmocka_unit_test(the_snap_is_a_sixteenth_of_a_line),
		cmocka_unit_test(lines_without_a_pulse_of_their_own),
		cmocka_unit_test(lines_in_a_vertical_interval),
		cmocka_unit_test(rests_of_lines),
		cmocka_unit_test(one_pulse_alone),
		cmocka_unit_test(odd_numbers_of_half_lines),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
