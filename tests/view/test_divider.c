// The tick divider in words and in JSON. Levels, fractions and counts were worked out by hand from the clocks.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdlib.h>
#include <string.h>

#include "base/text.h"
#include "plan/plan.h"
#include "view/divider.h"

static void assert_view(struct clock clock, const char *wanted)
{
	struct text out = {0};
	clock.master_hz = (struct fraction){27000000, 1};
	view_divider(&out, &clock);
	assert_string_equal(text_string(&out), wanted);
	text_release(&out);
}

static void monochrome_is_two_lines(void **state)
{
	(void)state;
	assert_view((struct clock){.dot_ticks = 1, .cell_ticks = 8},
	            "divider of 3 bits: counts 0 to 7\n"
	            "dot tap         1 tick, the master clock itself\n");
	assert_view((struct clock){.dot_ticks = 1, .cell_ticks = 1},
	            "divider: none, a cell is one tick\n"
	            "dot tap         1 tick, the master clock itself\n");
}

// 13 ticks of two a dot are 13/2, with 3 more 8. A subcarrier of 27 / 5 MHz has 5 ticks a cycle: 13/5 and 16/5 cycles.
static void levels_stand_above_the_words(void **state)
{
	(void)state;
	assert_view((struct clock){.dot_ticks = 2, .cell_ticks = 13, .stretch_ticks = 3, .has_subcarrier = true,
	                           .subcarrier_hz = {5400000, 1}},
	            "divider of 4 bits: counts 0 to 12; in a stretched cell count 12 lengthens by 3 ticks, counts 13 to\n"
	            "  15\n"
	            "count           0               13\n"
	            "dot tap         HLHLHLHLHLHLH | LHL\n"
	            "                2 ticks, from a divider of its own that runs on; a cell is 13/2, a stretched one 8\n"
	            "                dots: out of step\n"
	            "subcarrier tap  HHHLLHHHLLHHH | LLH\n"
	            "                5 ticks, from a divider of its own that runs on; a cell moves its phase by 3/5\n"
	            "                cycle, a stretched one moves it by 1/5 cycle\n");
}

// A cycle of two ticks turns over at each. 1200 are 200 cycles of six, of which 1192 = 6 * 198 + 4 is late in the last but one;
// two more are a third, and half a dot of four.
static void the_counter_gives_taps(void **state)
{
	(void)state;
	assert_view((struct clock){.dot_ticks = 1, .cell_ticks = 1, .stretch_ticks = 1, .has_subcarrier = true,
	                           .subcarrier_hz = {13500000, 1}},
	            "divider of 1 bit: count 0; in a stretched cell count 0 lengthens by 1 tick, count 1\n"
	            "count           0   1\n"
	            "dot tap         1 tick, the master clock itself\n"
	            "subcarrier tap  H | L\n"
	            "                2 ticks, from this counter; a cell moves its phase by 1/2 cycle, a stretched one\n"
	            "                keeps it: in step\n");
	assert_view((struct clock){.dot_ticks = 4, .cell_ticks = 1200, .stretch_ticks = 2, .has_subcarrier = true,
	                           .subcarrier_hz = {4500000, 1}},
	            "divider of 11 bits: counts 0 to 1199; in a stretched cell count 1199 lengthens by 2 ticks, counts\n"
	            "  1200 to 1201\n"
	            "count           0                           1192       1200\n"
	            "dot tap         HHLLHHLLHHLLHHLLHHLLHHLL .. HHLLHHLL | HH\n"
	            "                4 ticks, from this counter; a cell is 300, a stretched one 601/2 dots: out of step\n"
	            "subcarrier tap  HHHLLLHHHLLLHHHLLLHHHLLL .. LLHHHLLL | HH\n"
	            "                6 ticks, from this counter; a cell keeps its phase, a stretched one moves it by 1/3\n"
	            "                cycle: out of step\n");
}

static void assert_json(struct clock clock, const char *wanted)
{
	clock.master_hz = (struct fraction){27000000, 1};
	json_t *document = view_divider_json(&clock);
	char *found = json_dumps(document, JSON_COMPACT | JSON_SORT_KEYS);
	assert_non_null(found);
	assert_string_equal(found, wanted);
	free(found);
	json_decref(document);
}

static void json_is_exact(void **state)
{
	(void)state;
	assert_json((struct clock){.dot_ticks = 2, .cell_ticks = 8, .stretch_ticks = 3, .has_subcarrier = true,
	                           .subcarrier_hz = {6750000, 1}},
	            "{\"bits\":4,\"cell_counts\":\"8\","
	            "\"dot\":{\"cell_cycles\":\"4\",\"from\":\"counter\",\"in_step\":false,\"period_ticks\":\"2\","
	            "\"stretched_cell_cycles\":\"11/2\"},\"lengthens\":\"7\","
	            "\"sequence\":[{\"dot\":\"HLHLHLHL\",\"first\":\"0\",\"last\":\"7\",\"stretched\":false,"
	            "\"subcarrier\":\"HHLLHHLL\"},"
	            "{\"dot\":\"HLH\",\"first\":\"8\",\"last\":\"10\",\"stretched\":true,\"subcarrier\":\"HHL\"}],"
	            "\"stretched_cell_counts\":\"11\","
	            "\"subcarrier\":{\"cell_cycles\":\"2\",\"cell_phase\":\"0\",\"from\":\"counter\",\"in_step\":false,"
	            "\"period_ticks\":\"4\",\"stretched_cell_cycles\":\"11/4\",\"stretched_cell_phase\":\"3/4\"}}");
	assert_json((struct clock){.dot_ticks = 1, .cell_ticks = 3},
	            "{\"bits\":2,\"cell_counts\":\"3\","
	            "\"dot\":{\"cell_cycles\":\"3\",\"from\":\"master\",\"in_step\":true,\"period_ticks\":\"1\"},"
	            "\"sequence\":[{\"first\":\"0\",\"last\":\"2\",\"stretched\":false}]}");
}

// Ticks a cycle that do not fit: no fractions, and no divider.
static void what_does_not_fit_is_left_out(void **state)
{
	(void)state;
	struct clock clock = {.master_hz = {INT64_MAX, 2}, .dot_ticks = 1, .cell_ticks = 3, .has_subcarrier = true,
	                      .subcarrier_hz = {1000003, 1000000000}};
	struct text out = {0};
	view_divider(&out, &clock);
	assert_non_null(strstr(text_string(&out),
	                       "subcarrier tap  from an oscillator or a loop of its own; ticks a cycle do not fit 64 bits\n"));
	text_release(&out);
	json_t *document = view_divider_json(&clock);
	json_t *subcarrier = json_object_get(document, "subcarrier");
	assert_string_equal(json_string_value(json_object_get(subcarrier, "from")), "oscillator");
	assert_int_equal(json_object_size(subcarrier), 2);
	json_decref(document);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(monochrome_is_two_lines),
		cmocka_unit_test(levels_stand_above_the_words),
		cmocka_unit_test(the_counter_gives_taps),
		cmocka_unit_test(json_is_exact),
		cmocka_unit_test(what_does_not_fit_is_left_out),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
