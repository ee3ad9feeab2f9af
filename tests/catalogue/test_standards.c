// The catalogue of standards: what it holds, against the published figures.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "catalogue/standards.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

struct fixture {
	struct arena *arena;
	struct diagnostics *diagnostics;
	const struct standards *standards;
};

static int set_up(void **state)
{
	static struct fixture fixture;
	fixture.arena = arena_create();
	fixture.diagnostics = diagnostics_create();
	fixture.standards = standards_load(fixture.arena, fixture.diagnostics);
	*state = &fixture;
	return fixture.standards != NULL && diagnostics_count(fixture.diagnostics) == 0 ? 0 : -1;
}

static int tear_down(void **state)
{
	struct fixture *fixture = *state;
	diagnostics_destroy(fixture->diagnostics);
	arena_destroy(fixture->arena);
	return 0;
}

static const struct standards *standards_of(void *const *state)
{
	return ((const struct fixture *)*state)->standards;
}

static const struct limit *limit_of(const struct standards *standards, const char *name, enum limit_item item,
                                    enum limit_grade grade)
{
	const struct standard *standard = catalogue_standard(standards, name);
	assert_non_null(standard);
	const struct limit *limit = standard_limit(standard, item, grade);
	assert_non_null(limit);
	return limit;
}

static void assert_quantity(bool given, struct fraction value, const char *wanted)
{
	struct quantity quantity;
	assert_int_equal(given, wanted != NULL);
	if (!given)
		return;
	assert_int_equal(quantity_parse(wanted, &quantity), QUANTITY_OK);
	assert_int_equal(fraction_compare(value, quantity.value), 0);
}

// Published figures, written as their documents have them. NULL: there is none.
struct figure {
	const char *standard;
	enum limit_item item;
	enum limit_grade grade;
	const char *nominal, *low, *high;
};

#define STUDIO(name, item, nominal, low, high) {name, item, GRADE_STUDIO, nominal, low, high}
#define MONITOR(name, item, nominal, low, high) {name, item, GRADE_MONITOR, nominal, low, high}

static const struct figure figures[] = {
	// SMPTE 170M-2004 11.1 (315/88 MHz +- 10 Hz), 11.2 (2/455 of it), 11.3 (2/525 of that); 47 CFR 73.682(a)(6): +-0.044 Hz.
	STUDIO("composite-525", ITEM_SUBCARRIER, "315/88 MHz", "39374890/11 Hz", "39375110/11 Hz"),
	STUDIO("composite-525", ITEM_LINE_RATE, "4.5/286 MHz", "562498427/35750 Hz", "562501573/35750 Hz"),
	STUDIO("composite-525", ITEM_CYCLES_PER_LINE, "455/2 cycles", "455/2 cycles", "455/2 cycles"),
	STUDIO("composite-525", ITEM_LINES_PER_FIELD, "525/2 lines", "525/2 lines", "525/2 lines"),
	// SMPTE 170M-2004 table 2.
	STUDIO("composite-525", ITEM_FRONT_PORCH, "1.5 us", "1.4 us", "1.6 us"),
	STUDIO("composite-525", ITEM_SYNC_WIDTH, "4.7 us", "4.6 us", "4.8 us"),
	STUDIO("composite-525", ITEM_PICTURE_START, "9.2 us", "9.1 us", "9.4 us"),
	STUDIO("composite-525", ITEM_BURST_LENGTH_CYCLES, "9 cycles", "8 cycles", "10 cycles"),
	// Table 2: 19 cycles, whose phase at 0H is within 10 of 360 degrees.
	STUDIO("composite-525", ITEM_BURST_START_CYCLES, "19 cycles", "683/36 cycles", "685/36 cycles"),
	// Its sum of 1.5 +- 0.1 and 9.2 + 0.2 - 0.1; BT.470-6 table 1-1 a has 10.9 +- 0.2 us.
	STUDIO("composite-525", ITEM_HORIZONTAL_BLANKING, "10.7 us", "10.5 us", "11.0 us"),
	// BT.470-6 2.14g: 4.71 to 5.71 us, at least 0.38 us after sync.
	STUDIO("composite-525", ITEM_BURST_START, "1672/315 us", "4.71 us", "5.71 us"),
	STUDIO("composite-525", ITEM_BREEZEWAY, "191.5/315 us", "0.38 us", NULL),
	// SMPTE 170M-2004 13.3 and table 3.
	STUDIO("composite-525", ITEM_EQUALISING_WIDTH, "2.3 us", "2.2 us", "2.4 us"),
	STUDIO("composite-525", ITEM_SERRATION_WIDTH, "4.7 us", "4.6 us", "4.8 us"),
	STUDIO("composite-525", ITEM_PRE_EQUALISING_PULSES, "6 pulses", "6 pulses", "6 pulses"),
	STUDIO("composite-525", ITEM_BROAD_PULSES, "6 pulses", "6 pulses", "6 pulses"),
	STUDIO("composite-525", ITEM_POST_EQUALISING_LINES, "3 lines", "3 lines", "3 lines"),
	STUDIO("composite-525", ITEM_VERTICAL_BLANKING, "20 lines", "19 lines", "21 lines"),
	STUDIO("composite-525", ITEM_LINES_WITHOUT_BURST, "9 lines", "9 lines", "9 lines"),
	// TDA8362 (March 1994) p. 18: 488 to 722 lines a frame; p. 19: 300 Hz; burst key from 5.2 us for 3.3 us.
	MONITOR("composite-525", ITEM_LINES_PER_FIELD, "525/2 lines", "244 lines", "361 lines"),
	MONITOR("composite-525", ITEM_SUBCARRIER, "315/88 MHz", "39371700/11 Hz", "39378300/11 Hz"),
	MONITOR("composite-525", ITEM_BURST_START, "1672/315 us", "4.71 us", "1973.5/315 us"),
	// TDA8376 (26 Jan 1996) p. 21: 15.625 kHz +- 2 %, 0.6 kHz. AN5192K p. 9: 56 to 64 Hz, 46 to 54 Hz.
	MONITOR("composite-525", ITEM_LINE_RATE, "4.5/286 MHz", "15337.5 Hz", "15912.5 Hz"),
	MONITOR("composite-525", ITEM_FIELD_RATE, "60000/1001 Hz", "56 Hz", "64 Hz"),
	MONITOR("composite-625", ITEM_FIELD_RATE, "50 Hz", "46 Hz", "54 Hz"),
	// BT.470-6 table 1-1 d, monochrome column.
	MONITOR("composite-525", ITEM_SYNC_WIDTH, "4.7 us", "4.19 us", "5.71 us"),
	// BT.470-6 table 1 (B, G colour: +-0.0001 %), 2.11 (+-5 Hz), 2.11b (1135/4 + 1/625).
	STUDIO("composite-625", ITEM_LINE_RATE, "15625 Hz", "999999/64 Hz", "1000001/64 Hz"),
	STUDIO("composite-625", ITEM_SUBCARRIER, "4433618.75 Hz", "4433613.75 Hz", "4433623.75 Hz"),
	STUDIO("composite-625", ITEM_CYCLES_PER_LINE, "709379/2500 cycles", "709379/2500 cycles", "709379/2500 cycles"),
	// BT.470-6 table 1-1 a, c, d; 2.14 g, h.
	STUDIO("composite-625", ITEM_HORIZONTAL_BLANKING, "12 us", "11.7 us", "12 us"),
	STUDIO("composite-625", ITEM_FRONT_PORCH, "1.5 us", "1.5 us", "1.8 us"),
	STUDIO("composite-625", ITEM_SYNC_WIDTH, "4.7 us", "4.5 us", "4.9 us"),
	STUDIO("composite-625", ITEM_BURST_START, "5.6 us", "5.5 us", "5.7 us"),
	STUDIO("composite-625", ITEM_BURST_LENGTH, "2.25 us", "2.02 us", "2.48 us"),
	STUDIO("composite-625", ITEM_BURST_LENGTH_CYCLES, "10 cycles", "9 cycles", "11 cycles"),
	// BT.470-6 table 1-2 j, l, m, n, p, r; q 27.3 us, nominal.
	STUDIO("composite-625", ITEM_VERTICAL_BLANKING, "25 lines", "25 lines", "25 lines"),
	STUDIO("composite-625", ITEM_PRE_EQUALISING_LINES, "2.5 lines", "2.5 lines", "2.5 lines"),
	STUDIO("composite-625", ITEM_VERTICAL_SYNC, "2.5 lines", "2.5 lines", "2.5 lines"),
	STUDIO("composite-625", ITEM_BROAD_PULSES, "5 pulses", "5 pulses", "5 pulses"),
	STUDIO("composite-625", ITEM_EQUALISING_WIDTH, "2.35 us", "2.25 us", "2.45 us"),
	STUDIO("composite-625", ITEM_BROAD_WIDTH, "27.3 us", "27.1 us", "27.5 us"),
	STUDIO("composite-625", ITEM_SERRATION_WIDTH, "4.7 us", "4.5 us", "4.9 us"),
	// BT.470-6 table 1-1 a to d, monochrome column; nominal sync RS-170 (from memory), 0.075 of 1/15750 s.
	STUDIO("mono-525", ITEM_HORIZONTAL_BLANKING, NULL, "10.2 us", "11.4 us"),
	STUDIO("mono-525", ITEM_PICTURE_START, NULL, "8.9 us", "10.3 us"),
	STUDIO("mono-525", ITEM_FRONT_PORCH, NULL, "1.27 us", "2.54 us"),
	STUDIO("mono-525", ITEM_SYNC_WIDTH, "0.075/15750 s", "4.19 us", "5.71 us"),
	STUDIO("mono-525", ITEM_LINE_RATE, "15750 Hz", "4.5/286 MHz", "15750 Hz"),
	// RS-170, from memory: 0.07 +- 0.01 H; at most 0.04 H, and 0.45 of a sync.
	STUDIO("mono-525", ITEM_SERRATION_WIDTH, "0.07/15750 s", "0.06/15750 s", "0.08/15750 s"),
	STUDIO("mono-525", ITEM_EQUALISING_WIDTH, NULL, "0.03375/15750 s", "0.04/15750 s"),
	// BT.601-5 part A table 2 and appendix 1: 16 + 122 of 858 samples, 12 + 132 of 864.
	STUDIO("component-525", ITEM_FRONT_PORCH, "16/13.5 us", "15.5/13.5 us", "16.5/13.5 us"),
	STUDIO("component-525", ITEM_PICTURE_START, "122/13.5 us", "121.5/13.5 us", "122.5/13.5 us"),
	STUDIO("component-525", ITEM_HORIZONTAL_BLANKING, "138/13.5 us", "137.5/13.5 us", "138.5/13.5 us"),
	STUDIO("component-525", ITEM_SYNC_WIDTH, "4.7 us", "4.6 us", "4.8 us"),
	STUDIO("component-625", ITEM_FRONT_PORCH, "12/13.5 us", "11.5/13.5 us", "12.5/13.5 us"),
	STUDIO("component-625", ITEM_PICTURE_START, "132/13.5 us", "131.5/13.5 us", "132.5/13.5 us"),
	STUDIO("component-625", ITEM_PICTURE_WIDTH, "720/13.5 us", "719.5/13.5 us", "720.5/13.5 us"),
	STUDIO("component-625", ITEM_SYNC_WIDTH, "4.7 us", "4.5 us", "4.9 us"),
};

static void limits_are_the_published_ones(void **state)
{
	for (size_t index = 0; index < COUNT_OF(figures); index++) {
		const struct figure *figure = &figures[index];
		const struct limit *limit = limit_of(standards_of(state), figure->standard, figure->item, figure->grade);
		assert_quantity(limit->has_nominal, limit->nominal, figure->nominal);
		assert_quantity(limit->has_low, limit->low, figure->low);
		assert_quantity(limit->has_high, limit->high, figure->high);
	}
}

static struct fraction nominal(const struct standards *standards, const char *name, enum limit_item item)
{
	const struct limit *limit = limit_of(standards, name, item, GRADE_STUDIO);
	assert_true(limit->has_nominal);
	return limit->nominal;
}

static struct fraction sum(struct fraction left, struct fraction right)
{
	struct fraction result;
	assert_true(fraction_add(left, right, &result));
	return result;
}

static struct fraction difference(struct fraction left, struct fraction right)
{
	struct fraction result;
	assert_true(fraction_subtract(left, right, &result));
	return result;
}

static struct fraction product(struct fraction left, struct fraction right)
{
	struct fraction result;
	assert_true(fraction_multiply(left, right, &result));
	return result;
}

static struct fraction quotient(struct fraction left, struct fraction right)
{
	struct fraction result;
	assert_true(fraction_divide(left, right, &result));
	return result;
}

static void assert_equal(struct fraction left, struct fraction right)
{
	assert_int_equal(fraction_compare(left, right), 0);
}

static const char *const rasters[] = {"composite-525", "composite-625", "component-525", "component-625"};

// a = b + c of BT.470-6 table 1-1, the rest of the line, and its middle.
static void parts_of_a_line_make_up_the_line(void **state)
{
	const struct standards *standards = standards_of(state);
	for (size_t index = 0; index < COUNT_OF(rasters); index++) {
		const char *name = rasters[index];
		const struct fraction line = quotient(fraction_whole(1), nominal(standards, name, ITEM_LINE_RATE));
		const struct fraction start = nominal(standards, name, ITEM_PICTURE_START);
		const struct fraction blanking = nominal(standards, name, ITEM_HORIZONTAL_BLANKING);
		const struct fraction width = nominal(standards, name, ITEM_PICTURE_WIDTH);
		assert_equal(blanking, sum(nominal(standards, name, ITEM_FRONT_PORCH), start));
		assert_equal(width, difference(line, blanking));
		assert_equal(nominal(standards, name, ITEM_BACK_PORCH), difference(start, nominal(standards, name, ITEM_SYNC_WIDTH)));
		assert_equal(nominal(standards, name, ITEM_HORIZONTAL_CENTRE), sum(start, quotient(width, fraction_whole(2))));
	}
}

// q + r = H/2 of BT.470-6 table 1-2; the field; its middle.
static void parts_of_a_field_make_up_the_field(void **state)
{
	const struct standards *standards = standards_of(state);
	for (size_t index = 0; index < COUNT_OF(rasters); index++) {
		const char *name = rasters[index];
		const struct fraction rate = nominal(standards, name, ITEM_LINE_RATE);
		const struct fraction height = nominal(standards, name, ITEM_PICTURE_HEIGHT);
		const struct fraction top = nominal(standards, name, ITEM_PICTURE_TOP);
		assert_equal(sum(nominal(standards, name, ITEM_BROAD_WIDTH), nominal(standards, name, ITEM_SERRATION_WIDTH)),
		             quotient(fraction_whole(1), product(fraction_whole(2), rate)));
		assert_equal(nominal(standards, name, ITEM_FIELD_RATE), quotient(rate, nominal(standards, name, ITEM_LINES_PER_FIELD)));
		assert_equal(nominal(standards, name, ITEM_LINES_PER_FIELD), sum(height, nominal(standards, name, ITEM_VERTICAL_BLANKING)));
		assert_equal(nominal(standards, name, ITEM_VERTICAL_BLANKING),
		             sum(top, nominal(standards, name, ITEM_PRE_EQUALISING_LINES)));
		assert_equal(nominal(standards, name, ITEM_VERTICAL_CENTRE), sum(top, quotient(height, fraction_whole(2))));
		assert_equal(nominal(standards, name, ITEM_VERTICAL_SYNC),
		             quotient(nominal(standards, name, ITEM_BROAD_PULSES), fraction_whole(2)));
	}
}

static struct fraction half(struct fraction value)
{
	return quotient(value, fraction_whole(2));
}

static void assert_bounds(const struct limit *limit, struct fraction low, struct fraction high)
{
	assert_true(limit->has_low && limit->has_high);
	assert_equal(limit->low, low);
	assert_equal(limit->high, high);
}

// The rest of a range: what is left of `whole` after the other range took its most and its least.
static void assert_rest(const struct limit *limit, struct fraction whole, const struct limit *other)
{
	assert_bounds(limit, difference(whole, other->high), difference(whole, other->low));
}

// Derived low and high are the widest that the published ones leave.
static void derived_bounds_follow_from_the_published_ones(void **state)
{
	static const char *const names[] = {"composite-525", "composite-625", "component-525", "component-625", "mono-525"};
	const struct standards *standards = standards_of(state);
	for (size_t index = 0; index < COUNT_OF(names); index++) {
		const struct standard *standard = catalogue_standard(standards, names[index]);
		const struct limit *of[ITEM_COUNT];
		for (size_t item = 0; item < ITEM_COUNT; item++)
			of[item] = standard_limit(standard, (enum limit_item)item, GRADE_STUDIO);
		const struct fraction line = quotient(fraction_whole(1), of[ITEM_LINE_RATE]->nominal);
		const struct limit *start = of[ITEM_PICTURE_START], *porch = of[ITEM_FRONT_PORCH], *sync = of[ITEM_SYNC_WIDTH];
		assert_rest(of[ITEM_PICTURE_WIDTH], line, of[ITEM_HORIZONTAL_BLANKING]);
		assert_rest(of[ITEM_BROAD_WIDTH], half(line), of[ITEM_SERRATION_WIDTH]);
		assert_rest(of[ITEM_PICTURE_HEIGHT], of[ITEM_LINES_PER_FIELD]->nominal, of[ITEM_VERTICAL_BLANKING]);
		assert_bounds(of[ITEM_HORIZONTAL_CENTRE], half(sum(start->low, difference(line, porch->high))),
		              half(sum(start->high, difference(line, porch->low))));
		assert_bounds(of[ITEM_BACK_PORCH], difference(start->low, sync->high), difference(start->high, sync->low));
		const struct fraction before = of[ITEM_PRE_EQUALISING_LINES]->nominal;
		assert_bounds(of[ITEM_PICTURE_TOP], difference(of[ITEM_VERTICAL_BLANKING]->low, before),
		              difference(of[ITEM_VERTICAL_BLANKING]->high, before));
		// The picture ends where the pulses before 0V begin, so its middle moves half as far as its top.
		const struct fraction field = difference(of[ITEM_LINES_PER_FIELD]->nominal, before);
		assert_bounds(of[ITEM_VERTICAL_CENTRE], half(sum(of[ITEM_PICTURE_TOP]->low, field)),
		              half(sum(of[ITEM_PICTURE_TOP]->high, field)));
	}
}

static void colour_fits_the_line(void **state)
{
	const struct standards *standards = standards_of(state);
	for (size_t index = 0; index < 2; index++) {
		const char *name = rasters[index];
		const struct fraction start = nominal(standards, name, ITEM_BURST_START);
		const struct fraction end = sum(start, nominal(standards, name, ITEM_BURST_LENGTH));
		assert_equal(nominal(standards, name, ITEM_BREEZEWAY), difference(start, nominal(standards, name, ITEM_SYNC_WIDTH)));
		assert_equal(nominal(standards, name, ITEM_BURST_TO_PICTURE), difference(nominal(standards, name, ITEM_PICTURE_START), end));
		assert_equal(nominal(standards, name, ITEM_SUBCARRIER),
		             product(nominal(standards, name, ITEM_CYCLES_PER_LINE), nominal(standards, name, ITEM_LINE_RATE)));
	}
	// SMPTE 170M-2004 table 2: 19 and 9 cycles, in microseconds too.
	const struct fraction cycles = nominal(standards, "composite-525", ITEM_SUBCARRIER);
	assert_equal(product(nominal(standards, "composite-525", ITEM_BURST_START), cycles), fraction_whole(19));
	assert_equal(product(nominal(standards, "composite-525", ITEM_BURST_LENGTH), cycles), fraction_whole(9));
}

// BT.601-5 part A table 2: 858 and 864 samples a line.
static void sampling_divides_into_lines(void **state)
{
	const struct standards *standards = standards_of(state);
	assert_equal(nominal(standards, "component-525", ITEM_PIXEL_CLOCK),
	             product(fraction_whole(858), nominal(standards, "component-525", ITEM_LINE_RATE)));
	assert_equal(nominal(standards, "component-625", ITEM_PIXEL_CLOCK),
	             product(fraction_whole(864), nominal(standards, "component-625", ITEM_LINE_RATE)));
}

// SMPTE 170M-2004 fig. 7; BT.1700 part B fig. 8: nine lines each, which in the fourth column end in the next frame.
static void burst_pauses_are_the_published_ones(void **state)
{
	static const unsigned lines_525[][2] = {{1, 9}, {264, 272}};
	static const unsigned lines_625[][2] = {{623, 6}, {310, 318}, {622, 5}, {311, 319}};
	const struct standard *colour_525 = catalogue_standard(standards_of(state), "composite-525");
	const struct standard *colour_625 = catalogue_standard(standards_of(state), "composite-625");
	assert_int_equal(colour_525->pause_count, COUNT_OF(lines_525));
	assert_int_equal(colour_625->pause_count, COUNT_OF(lines_625));
	for (size_t index = 0; index < COUNT_OF(lines_625); index++) {
		const struct burst_pause *pause = &colour_625->pauses[index];
		assert_int_equal(pause->field, index + 1);
		assert_int_equal(pause->first_line, lines_625[index][0]);
		assert_int_equal(pause->last_line, lines_625[index][1]);
		assert_int_equal((pause->last_line + 625 - pause->first_line) % 625 + 1, 9);
		if (index >= COUNT_OF(lines_525))
			continue;
		assert_int_equal(colour_525->pauses[index].field, index + 1);
		assert_int_equal(colour_525->pauses[index].first_line, lines_525[index][0]);
		assert_int_equal(colour_525->pauses[index].last_line, lines_525[index][1]);
	}
	assert_int_equal(colour_525->vertical_sync_line, 4);
	assert_int_equal(colour_625->vertical_sync_line, 1);
	assert_int_equal(colour_525->fields, 2);
}

// VESA DMT 1.0 rev. 13: clock, counts and, in its own rounding, the rates that it prints (kHz and Hz). The last three are from
// memory. Polarities from a kernel's table made from the DMT.
struct display_mode {
	const char *name;
	int64_t kilohertz;
	int64_t dots[4], lines[4];
	int64_t horizontal_polarity, vertical_polarity;
	const char *line_khz, *frame_hz;
};

static const struct display_mode display_modes[] = {
	{"dmt-640x350-85", 31500, {640, 32, 64, 96}, {350, 32, 3, 60}, 1, -1, "37.861", "85.080"},
	{"dmt-640x400-85", 31500, {640, 32, 64, 96}, {400, 1, 3, 41}, -1, 1, "37.861", "85.080"},
	{"dmt-720x400-85", 35500, {720, 36, 72, 108}, {400, 1, 3, 42}, -1, 1, "37.927", "85.039"},
	{"dmt-640x480-60", 25175, {640, 16, 96, 48}, {480, 10, 2, 33}, -1, -1, "31.469", "59.940"},
	{"dmt-640x480-72", 31500, {640, 24, 40, 128}, {480, 9, 3, 28}, -1, -1, "37.861", "72.809"},
	{"dmt-640x480-75", 31500, {640, 16, 64, 120}, {480, 1, 3, 16}, -1, -1, "37.500", "75.000"},
	{"dmt-640x480-85", 36000, {640, 56, 56, 80}, {480, 1, 3, 25}, -1, -1, "43.269", "85.008"},
	{"dmt-800x600-56", 36000, {800, 24, 72, 128}, {600, 1, 2, 22}, 1, 1, "35.156", "56.250"},
	{"dmt-800x600-60", 40000, {800, 40, 128, 88}, {600, 1, 4, 23}, 1, 1, "37.879", "60.317"},
	{"dmt-1024x768-60", 65000, {1024, 24, 136, 160}, {768, 3, 6, 29}, -1, -1, "48.363", "60.004"},
	{"mode-640x400-70", 25175, {640, 16, 96, 48}, {400, 12, 2, 35}, -1, 1, "31.469", "70.086"},
	{"mode-720x400-70", 28322, {720, 18, 108, 54}, {400, 12, 2, 35}, -1, 1, "31.469", "70.087"},
	{"mode-640x350-70", 25175, {640, 16, 96, 48}, {350, 37, 2, 60}, 1, -1, "31.469", "70.086"},
};

static void assert_decimal(struct fraction value, const char *wanted)
{
	struct text text = {0};
	text_put_decimal(&text, value, 3);
	assert_string_equal(text_string(&text), wanted);
	text_release(&text);
}

static void modes_have_the_published_rates(void **state)
{
	const struct standards *standards = standards_of(state);
	for (size_t index = 0; index < COUNT_OF(display_modes); index++) {
		const struct display_mode *mode = &display_modes[index];
		assert_decimal(quotient(nominal(standards, mode->name, ITEM_LINE_RATE), fraction_whole(1000)), mode->line_khz);
		assert_decimal(nominal(standards, mode->name, ITEM_FRAME_RATE), mode->frame_hz);
		assert_equal(nominal(standards, mode->name, ITEM_PIXEL_CLOCK), fraction_whole(mode->kilohertz * 1000));
		assert_equal(nominal(standards, mode->name, ITEM_HORIZONTAL_POLARITY), fraction_whole(mode->horizontal_polarity));
		assert_equal(nominal(standards, mode->name, ITEM_VERTICAL_POLARITY), fraction_whole(mode->vertical_polarity));
		assert_int_equal(catalogue_standard(standards, mode->name)->fields, 1);
	}
}

// Dots, or lines, that a limit's nominal is.
static void assert_dots(const struct standards *standards, const struct display_mode *mode, enum limit_item item, int64_t dots)
{
	assert_equal(product(nominal(standards, mode->name, item), fraction_whole(mode->kilohertz * 1000)), fraction_whole(dots));
}

static void assert_lines(const struct standards *standards, const struct display_mode *mode, enum limit_item item, int64_t lines)
{
	assert_equal(nominal(standards, mode->name, item), fraction_whole(lines));
}

static void modes_have_the_published_counts(void **state)
{
	const struct standards *standards = standards_of(state);
	for (size_t index = 0; index < COUNT_OF(display_modes); index++) {
		const struct display_mode *mode = &display_modes[index];
		const int64_t *dots = mode->dots, *lines = mode->lines;
		assert_dots(standards, mode, ITEM_PICTURE_WIDTH, dots[0]);
		assert_dots(standards, mode, ITEM_FRONT_PORCH, dots[1]);
		assert_dots(standards, mode, ITEM_SYNC_WIDTH, dots[2]);
		assert_dots(standards, mode, ITEM_BACK_PORCH, dots[3]);
		assert_dots(standards, mode, ITEM_HORIZONTAL_BLANKING, dots[1] + dots[2] + dots[3]);
		assert_dots(standards, mode, ITEM_PICTURE_START, dots[2] + dots[3]);
		assert_dots(standards, mode, ITEM_HORIZONTAL_CENTRE, dots[2] + dots[3] + dots[0] / 2);
		assert_lines(standards, mode, ITEM_PICTURE_HEIGHT, lines[0]);
		assert_lines(standards, mode, ITEM_VERTICAL_FRONT_PORCH, lines[1]);
		assert_lines(standards, mode, ITEM_VERTICAL_SYNC, lines[2]);
		assert_lines(standards, mode, ITEM_VERTICAL_BACK_PORCH, lines[3]);
		assert_lines(standards, mode, ITEM_VERTICAL_BLANKING, lines[1] + lines[2] + lines[3]);
		assert_lines(standards, mode, ITEM_PICTURE_TOP, lines[2] + lines[3]);
		assert_lines(standards, mode, ITEM_VERTICAL_CENTRE, lines[2] + lines[3] + lines[0] / 2);
		assert_lines(standards, mode, ITEM_LINES_PER_FIELD, lines[0] + lines[1] + lines[2] + lines[3]);
	}
}

// +-0.5 % of VESA CVT 1.1 and DMT, from memory: 25.2 MHz is within, 25 MHz is not, but monitors show it (common practice).
static void a_clock_near_the_mode_is_told_from_one_further_off(void **state)
{
	const struct standards *standards = standards_of(state);
	const struct limit *studio = limit_of(standards, "dmt-640x480-60", ITEM_LINE_RATE, GRADE_STUDIO);
	const struct limit *monitor = limit_of(standards, "dmt-640x480-60", ITEM_LINE_RATE, GRADE_MONITOR);
	assert_true(fraction_compare(fraction_whole(31500), studio->high) <= 0);
	assert_true(fraction_compare(fraction_whole(31250), studio->low) < 0);
	assert_true(fraction_compare(fraction_whole(31250), monitor->low) >= 0);
}

// Times of a mode whose clock is 0.5 % off are still within.
static void times_follow_the_clock(void **state)
{
	const struct standards *standards = standards_of(state);
	const struct limit *width = limit_of(standards, "dmt-800x600-60", ITEM_SYNC_WIDTH, GRADE_STUDIO);
	assert_true(fraction_compare(quotient(fraction_whole(128), fraction_whole(39800000)), width->high) <= 0);
	assert_true(fraction_compare(quotient(fraction_whole(128), fraction_whole(40200000)), width->low) >= 0);
	assert_true(fraction_compare(quotient(fraction_whole(129), fraction_whole(40000000)), width->high) > 0);
	assert_true(fraction_compare(quotient(fraction_whole(127), fraction_whole(40000000)), width->low) < 0);
}

static bool mentions(const char *source, const char *const *words, size_t count)
{
	for (size_t index = 0; index < count; index++)
		if (strstr(source, words[index]) != NULL)
			return true;
	return false;
}

// A document, or an honest word that there is none.
static bool is_source(const char *source)
{
	static const char *const words[] = {"SMPTE", "BT.470-6", "BT.601-5", "BT.1700", "47 CFR", "VESA DMT", "TDA83", "AN5192K",
	                                    "from memory", "common practice", "derived", "second-hand"};
	return mentions(source, words, COUNT_OF(words));
}

// What receivers accept is no published figure: their data sheets say it, or practice, or a standard that is wider.
static void every_value_has_a_source(void **state)
{
	const struct standards *standards = standards_of(state);
	for (size_t index = 0; index < standards->count; index++) {
		const struct standard *standard = &standards->standards[index];
		assert_true(strlen(standard->title) > 0 && strlen(standard->documents) > 0);
		for (size_t limit = 0; limit < standard->limit_count; limit++)
			assert_true(is_source(standard->limits[limit].source));
		for (size_t pause = 0; pause < standard->pause_count; pause++)
			assert_true(is_source(standard->pauses[pause].source));
	}
}

// RS-170 was not read: wherever its figures stand, they are marked.
static void what_was_not_read_says_so(void **state)
{
	const struct standards *standards = standards_of(state);
	size_t marked = 0;
	for (size_t index = 0; index < standards->count; index++)
		for (size_t limit = 0; limit < standards->standards[index].limit_count; limit++) {
			const char *source = standards->standards[index].limits[limit].source;
			if (strstr(source, "RS-170") == NULL && strstr(source, "73.699") == NULL && strstr(source, "CVT") == NULL)
				continue;
			assert_non_null(strstr(source, "from memory"));
			marked++;
		}
	assert_true(marked > 20);
}

static void disagreements_are_told(void **state)
{
	const struct standards *standards = standards_of(state);
	// SMPTE 170M-2004's 10.7 us, by sum, against BT.470-6's 10.9 +- 0.2 us.
	assert_non_null(strstr(limit_of(standards, "composite-525", ITEM_HORIZONTAL_BLANKING, GRADE_STUDIO)->source, "10.9 +- 0.2 us"));
	// BT.1700 part B table 2 prints a front porch of 1.2 us; system I has 1.65 us.
	const char *porch = limit_of(standards, "composite-625", ITEM_FRONT_PORCH, GRADE_STUDIO)->source;
	assert_true(strstr(porch, "1.2 + 0.32") != NULL && strstr(porch, "1.65 +- 0.1") != NULL);
	// RS-170's sync, from memory, is narrower than BT.470-6's.
	assert_non_null(strstr(limit_of(standards, "mono-525", ITEM_SYNC_WIDTH, GRADE_STUDIO)->source, "+-0.005 H"));
	assert_true(catalogue_standard(standards, "composite-525")->note_count >= 3);
	assert_true(catalogue_standard(standards, "composite-625")->note_count >= 3);
	assert_true(catalogue_standard(standards, "mono-525")->note_count >= 3);
}

static void assert_ordered(const struct limit *limit)
{
	if (limit->has_low && limit->has_nominal)
		assert_true(fraction_compare(limit->low, limit->nominal) <= 0);
	if (limit->has_nominal && limit->has_high)
		assert_true(fraction_compare(limit->nominal, limit->high) <= 0);
	if (limit->has_low && limit->has_high)
		assert_true(fraction_compare(limit->low, limit->high) <= 0);
	assert_true(limit->has_nominal || limit->has_low || limit->has_high);
}

static void limits_are_ordered_and_in_both_grades(void **state)
{
	const struct standards *standards = standards_of(state);
	for (size_t index = 0; index < standards->count; index++) {
		const struct standard *standard = &standards->standards[index];
		assert_true(standard->limit_count > 0 && standard->limit_count % GRADE_COUNT == 0);
		for (size_t place = 0; place < standard->limit_count; place += GRADE_COUNT) {
			const struct limit *studio = &standard->limits[place], *monitor = studio + 1;
			assert_int_equal(studio->grade, GRADE_STUDIO);
			assert_int_equal(monitor->grade, GRADE_MONITOR);
			assert_int_equal(studio->item, monitor->item);
			assert_true(place == 0 || studio[-1].item < studio->item);
			assert_ordered(studio);
			assert_ordered(monitor);
			assert_true(studio->has_low || studio->has_high);
			assert_ptr_equal(standard_limit(standard, studio->item, GRADE_STUDIO), studio);
			assert_ptr_equal(standard_limit(standard, studio->item, GRADE_MONITOR), monitor);
		}
	}
}

// Whatever keeps the published limits, a monitor accepts.
static void monitors_accept_what_studios_make(void **state)
{
	const struct standards *standards = standards_of(state);
	for (size_t index = 0; index < standards->count; index++)
		for (size_t place = 0; place < standards->standards[index].limit_count; place += GRADE_COUNT) {
			const struct limit *studio = &standards->standards[index].limits[place], *monitor = studio + 1;
			if (monitor->has_low)
				assert_true(studio->has_low && fraction_compare(monitor->low, studio->low) <= 0);
			if (monitor->has_high)
				assert_true(studio->has_high && fraction_compare(monitor->high, studio->high) >= 0);
		}
}

static void standards_have_the_items_of_their_signals(void **state)
{
	const struct standards *standards = standards_of(state);
	assert_int_equal(standards->count, 5 + COUNT_OF(display_modes));
	for (size_t index = 0; index < standards->count; index++) {
		const struct standard *standard = &standards->standards[index];
		const bool colour = strncmp(standard->name, "composite", 9) == 0, interlaced = standard->fields == 2;
		assert_int_equal(standard_limit(standard, ITEM_SUBCARRIER, GRADE_STUDIO) != NULL, colour);
		assert_int_equal(standard_limit(standard, ITEM_BURST_START, GRADE_MONITOR) != NULL, colour);
		assert_int_equal(standard_limit(standard, ITEM_SERRATION_WIDTH, GRADE_STUDIO) != NULL, interlaced);
		assert_int_equal(standard_limit(standard, ITEM_HORIZONTAL_POLARITY, GRADE_STUDIO) != NULL, !interlaced);
		assert_int_equal(standard->pause_count > 0, colour);
		assert_int_equal(standard->vertical_sync_line > 0, interlaced);
		assert_non_null(standard_limit(standard, ITEM_SYNC_WIDTH, GRADE_STUDIO));
		assert_non_null(standard_limit(standard, ITEM_HORIZONTAL_CENTRE, GRADE_MONITOR));
		assert_ptr_equal(catalogue_standard(standards, standard->name), standard);
	}
	assert_null(catalogue_standard(standards, "composite"));
	assert_null(catalogue_standard(standards, "Composite-525"));
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(limits_are_the_published_ones),
		cmocka_unit_test(parts_of_a_line_make_up_the_line),
		cmocka_unit_test(parts_of_a_field_make_up_the_field),
		cmocka_unit_test(derived_bounds_follow_from_the_published_ones),
		cmocka_unit_test(colour_fits_the_line),
		cmocka_unit_test(sampling_divides_into_lines),
		cmocka_unit_test(burst_pauses_are_the_published_ones),
		cmocka_unit_test(modes_have_the_published_rates),
		cmocka_unit_test(modes_have_the_published_counts),
		cmocka_unit_test(a_clock_near_the_mode_is_told_from_one_further_off),
		cmocka_unit_test(times_follow_the_clock),
		cmocka_unit_test(every_value_has_a_source),
		cmocka_unit_test(what_was_not_read_says_so),
		cmocka_unit_test(disagreements_are_told),
		cmocka_unit_test(limits_are_ordered_and_in_both_grades),
		cmocka_unit_test(monitors_accept_what_studios_make),
		cmocka_unit_test(standards_have_the_items_of_their_signals),
	};
	return cmocka_run_group_tests(tests, set_up, tear_down);
}
