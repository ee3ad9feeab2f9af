// Rates and cycles as the program reckons them, against published constants and what follows from them exactly.
// Sources:
//   S170   SMPTE 170M-2004, clause 11 and table 2 (also Rec. ITU-R BT.1700 (2005), annex 2)
//   S244   SMPTE 244M-2003, 4.1.1 and tables 4 and 5
//   B470   Rec. ITU-R BT.470-6 (1998), annex 1, tables 1 and 1-1
//   B1700  Rec. ITU-R BT.1700 (2005), part B, table 1 and figure 8
//   B601   Rec. ITU-R BT.601-5 (1995), part A, table 2
//   E3280  EBU Tech. 3280-E (April 1995), 1.1 and 1.2
//   DMT    VESA DMT 1.0 rev. 13
// Lines of 912 and 1136 ticks are common practice of boards without a half line, and no standard's.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <math.h>
#include <stdio.h>
#include <string.h>

#include <jansson.h>

#include "scanlatch/scanlatch.h"

// 4 × 315/88 MHz (S170 11.1), and 4 × 4.433 618 75 MHz (E3280 table 1).
#define FOUR_525 "315/22 MHz"
#define FOUR_625 "17.734475 MHz"

// A plan of equal lines of one-tick cells: `clock` are further keys of the clock, each with a comma before it.
static const char plan_text[] =
	"scanlatch: 1\n"
	"name: rates\n"
	"clock: { master: %s, cell: 1 tick%s }\n"
	"signals: { sync: { role: composite sync, active: low } }\n"
	"lines:\n"
	"  only:\n"
	"    cells: %u\n"
	"    regions: [ { region: sync, time: %s, assert: [sync] }, { region: rest, fill: true } ]\n"
	"frame: [ { repeat: %u, line: only } ]\n"
	"machine: { form: loop, state: 20 bits }\n"
	"chips: { part: 27C080 }\n";

// What `check` reports of such a plan; freed with json_decref.
static json_t *check_plan(const char *text)
{
	scanlatch_messages *messages = scanlatch_messages_create();
	scanlatch_plan *plan = scanlatch_plan_read("rates.yaml", text, strlen(text), messages);
	assert_non_null(plan);
	char *report = scanlatch_plan_json(plan, NULL, NULL);
	assert_non_null(report);
	json_t *document = json_loads(report, 0, NULL);
	assert_non_null(document);
	scanlatch_free(report);
	scanlatch_plan_destroy(plan);
	scanlatch_messages_destroy(messages);
	return document;
}

static json_t *check_sync(const char *master, const char *clock, unsigned ticks, unsigned lines, const char *sync)
{
	char text[1024];
	const int length = snprintf(text, sizeof text, plan_text, master, clock, ticks, sync, lines);
	assert_in_range(length, 1, sizeof text - 1);
	return check_plan(text);
}

static json_t *check(const char *master, const char *clock, unsigned ticks, unsigned lines)
{
	return check_sync(master, clock, ticks, lines, "4.7 us");
}

static void assert_rate(json_t *document, const char *fraction)
{
	const json_t *rate = json_object_get(json_object_get(document, "frame"), "rate");
	assert_string_equal(json_string_value(json_object_get(rate, "fraction")), fraction);
	json_decref(document);
}

// The decimal that was published, to as many places as `unit` says.
static void assert_published(json_t *document, double published, double unit)
{
	const json_t *rate = json_object_get(json_object_get(document, "frame"), "rate");
	assert_true(fabs(json_number_value(json_object_get(rate, "decimal")) - published) <= unit / 2);
	json_decref(document);
}

static void assert_colour(json_t *document, const char *cycles, int lines, int frames)
{
	const json_t *colour = json_object_get(json_object_get(document, "proofs"), "colour");
	assert_string_equal(json_string_value(json_object_get(colour, "cycles_per_line")), cycles);
	assert_int_equal(json_integer_value(json_object_get(colour, "repeats_lines")), lines);
	assert_int_equal(json_integer_value(json_object_get(colour, "repeats_frames")), frames);
	json_decref(document);
}

// The cells that the sync region comes out at.
static long long sync_cells(json_t *document)
{
	const json_t *line = json_array_get(json_object_get(document, "lines"), 0);
	const json_t *region = json_array_get(json_object_get(line, "regions"), 0);
	const long long cells = json_integer_value(json_object_get(region, "cells"));
	json_decref(document);
	return cells;
}

static void line_rate_of_525_lines(void **state)
{
	(void)state;
	// fH = 4.5 MHz / 286 = fsc × 2/455, fsc = 5 MHz × 63/88 = 315/88 MHz (S170 11.1, 11.2): 15 734.265 734… Hz = 2
	// 250 000/143.
	assert_rate(check("4.5 MHz", "", 286, 1), "2250000/143");
	assert_rate(check("315/88 MHz", "", 455, 1), "1125000/143");
	assert_rate(check("315/44 MHz", "", 455, 1), "2250000/143");
	// 910 clocks of 4 fsc (S244 4.1.1), 858 of 13.5 MHz (B601 table 2).
	assert_rate(check(FOUR_525, "", 910, 1), "2250000/143");
	assert_rate(check("13.5 MHz", "", 858, 1), "2250000/143");
	assert_published(check(FOUR_525, "", 910, 1), 15734.264, 2 * 0.047); // B470 table 1: +-0.0003 %, 0.047 Hz
	// A field is fH × 2/525 = 60 000/1001 Hz (S170 11.3), so a frame half of that.
	assert_rate(check(FOUR_525, "", 910, 525), "30000/1001");
}

static void line_rate_of_625_lines(void **state)
{
	(void)state;
	// 15 625 Hz, 50 fields (B470 table 1, B1700 table 1); 864 clocks of 13.5 MHz (B601 table 2).
	assert_rate(check("13.5 MHz", "", 864, 1), "15625");
	assert_rate(check("13.5 MHz", "", 864, 625), "25");
}

static void line_rate_of_monochrome(void **state)
{
	(void)state;
	// 15 750 Hz may be used for monochrome (B470 table 1; 47 CFR 73.682(a)(6)); 525 × 30.
	assert_rate(check("12.096 MHz", "", 768, 1), "15750");
	assert_rate(check("12.096 MHz", "", 768, 525), "30");
	assert_rate(check("7.56 MHz", "", 480, 1), "15750");
	// 262 lines: 15 750 / 262 = 7875/131, derived.
	assert_rate(check("12.096 MHz", "", 768, 262), "7875/131");
}

static void frames_without_a_half_line(void **state)
{
	(void)state;
	// Exact from the clocks above; the decimals are those of a table worked out beside them.
	assert_rate(check(FOUR_525, "", 910, 262), "1125000/18733");
	assert_published(check(FOUR_525, "", 910, 262), 60.0544, 1e-4);
	assert_rate(check(FOUR_525, "", 910, 263), "2250000/37609");
	assert_published(check(FOUR_525, "", 910, 263), 59.8261, 1e-4);
	assert_rate(check(FOUR_525, "", 912, 1), "3281250/209");
	assert_published(check(FOUR_525, "", 912, 1), 15699.761, 1e-3);
	assert_rate(check(FOUR_525, "", 912, 262), "1640625/27379");
	assert_published(check(FOUR_525, "", 912, 262), 59.9228, 1e-4);
	assert_published(check(FOUR_525, "", 912, 263), 59.6949, 1e-4);
	assert_rate(check(FOUR_625, "", 1135, 1), "3546895/227");
	assert_published(check(FOUR_625, "", 1135, 1), 15625.088, 1e-3);
	assert_published(check(FOUR_625, "", 1135, 312), 50.0804, 1e-4);
	assert_published(check(FOUR_625, "", 1135, 313), 49.9204, 1e-4);
	assert_rate(check(FOUR_625, "", 1136, 1), "17734475/1136");
	assert_published(check(FOUR_625, "", 1136, 1), 15611.334, 1e-3);
	assert_published(check(FOUR_625, "", 1136, 312), 50.0363, 1e-4);
	assert_published(check(FOUR_625, "", 1136, 313), 49.8765, 1e-4);
}

static void rates_of_monitor_modes(void **state)
{
	(void)state;
	// DMT: pixel clock, total pixels, total lines, and the rates printed there (kHz and Hz to three places).
	static const struct {
		const char *clock;
		unsigned pixels, lines;
		double line_khz, frame_hz;
	} modes[] = {
		{"25.175 MHz", 800, 525, 31.469, 59.940},
		{"31.5 MHz", 832, 520, 37.861, 72.809},
		{"31.5 MHz", 840, 500, 37.500, 75.000},
		{"36 MHz", 1024, 625, 35.156, 56.250},
		{"40 MHz", 1056, 628, 37.879, 60.317},
		{"65 MHz", 1344, 806, 48.363, 60.004},
	};
	for (size_t index = 0; index < sizeof modes / sizeof *modes; index++) {
		const char *clock = modes[index].clock;
		const unsigned pixels = modes[index].pixels, lines = modes[index].lines;
		assert_published(check_sync(clock, "", pixels, 1, "96 ticks"), modes[index].line_khz * 1000, 1);
		assert_published(check_sync(clock, "", pixels, lines, "96 ticks"), modes[index].frame_hz, 1e-3);
	}
}

static void colour_of_525_lines(void **state)
{
	(void)state;
	static const char colour[] = ", subcarrier: master / 4";
	// 455/2 cycles a line (S170 11.2). With 525 lines a frame the phase takes two frames, which are the four fields
	// of S170.
	assert_colour(check(FOUR_525, colour, 910, 525), "455/2", 2, 2);
	assert_colour(check("13.5 MHz", ", subcarrier: 315/88 MHz", 858, 525), "455/2", 2, 2);
	// 227.5 × 262 is whole: it repeats each frame. × 263 it is not. Derived.
	assert_colour(check(FOUR_525, colour, 910, 262), "455/2", 2, 1);
	assert_colour(check(FOUR_525, colour, 910, 263), "455/2", 2, 2);
	// 912 ticks are 228 cycles: common practice.
	assert_colour(check(FOUR_525, colour, 912, 262), "228", 1, 1);
}

static void colour_of_625_lines(void **state)
{
	(void)state;
	static const char colour[] = ", subcarrier: 4.43361875 MHz";
	// 1135/4 + 1/625 = 283.7516 cycles a line (B1700 table 1, B470 2.11b), and eight fields, four frames, until it
	// repeats (B1700 figure 8).
	assert_colour(check("27 MHz", colour, 1728, 625), "709379/2500", 2500, 4);
	// 1135 and 1136 ticks of 4 × subcarrier: 283.75 and 284 cycles. 283.75 × 312 is whole, × 313 is not. Derived.
	assert_colour(check(FOUR_625, colour, 1135, 312), "1135/4", 4, 1);
	assert_colour(check(FOUR_625, colour, 1135, 313), "1135/4", 4, 4);
	assert_colour(check(FOUR_625, ", subcarrier: master / 4", 1136, 312), "284", 1, 1);
}

static void line_periods(void **state)
{
	(void)state;
	// 63.5555… us, exactly 572/9 (S170 table 2 prints 63.556), and 64 us (B470).
	json_t *document = check(FOUR_525, "", 910, 1);
	const json_t *line = json_array_get(json_object_get(document, "lines"), 0);
	assert_true(fabs(json_number_value(json_object_get(line, "us")) - 572.0 / 9) <= 0.5e-6);
	json_decref(document);
	document = check("13.5 MHz", "", 864, 1);
	line = json_array_get(json_object_get(document, "lines"), 0);
	assert_true(json_number_value(json_object_get(line, "us")) == 64.0);
	json_decref(document);
}

static void widths_in_samples(void **state)
{
	(void)state;
	// S170's times come out at the samples that S244 tables 4 and 5 give: a sync of 67.0 samples, an equalising pulse
	// of 33.0, a serration of 67.0, a broad pulse of 388.0 (455 - 67), nine cycles of burst 36.
	assert_int_equal(sync_cells(check_sync(FOUR_525, "", 910, 1, "4.70 us")), 67);
	assert_int_equal(sync_cells(check_sync(FOUR_525, "", 910, 1, "2.30 us")), 33);
	assert_int_equal(sync_cells(check_sync(FOUR_525, "", 910, 1, "27.1 us")), 388);
	assert_int_equal(sync_cells(check_sync(FOUR_525, "", 910, 1, "2.51429 us")), 36);
	// 19 cycles from the edge of sync to the burst (S170 table 2) are 76 ticks of 4 fsc.
	assert_int_equal(sync_cells(check_sync(FOUR_525, "", 910, 1, "5.30794 us")), 76);
	// In 625 lines, 4.7 us are 83.35 samples and 2.25 us are 39.90, ten cycles (E3280, B470 2.14h).
	assert_int_equal(sync_cells(check_sync(FOUR_625, "", 1135, 1, "4.7 us")), 83);
	assert_int_equal(sync_cells(check_sync(FOUR_625, "", 1135, 1, "2.25 us")), 40);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(line_rate_of_525_lines), cmocka_unit_test(line_rate_of_625_lines),
		cmocka_unit_test(line_rate_of_monochrome), cmocka_unit_test(frames_without_a_half_line),
		cmocka_unit_test(rates_of_monitor_modes), cmocka_unit_test(colour_of_525_lines),
		cmocka_unit_test(colour_of_625_lines), cmocka_unit_test(line_periods),
		cmocka_unit_test(widths_in_samples),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
