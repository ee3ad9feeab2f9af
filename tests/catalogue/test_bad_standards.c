// Reading other catalogues of standards and of crystals. A bad one differs from a good one in one line.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdio.h>
#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "catalogue/crystals.h"
#include "catalogue/standards.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

#define RULE_PAIR "{ studio: { low: 0.5, high: 2, source: r }, monitor: { source: r } }\n"
#define GOOD_RULES \
	"mode limits:\n" \
	"  line rate: " RULE_PAIR "  frame rate: " RULE_PAIR "  lines per field: " RULE_PAIR "  pixel clock: " RULE_PAIR \
	"  front porch: " RULE_PAIR "  horizontal sync width: " RULE_PAIR "  back porch: " RULE_PAIR \
	"  horizontal blanking: " RULE_PAIR "  picture start: " RULE_PAIR "  picture width: " RULE_PAIR \
	"  horizontal centre: " RULE_PAIR "  vertical sync length: " RULE_PAIR "  vertical front porch: " RULE_PAIR \
	"  vertical back porch: " RULE_PAIR "  vertical blanking: " RULE_PAIR "  picture top: " RULE_PAIR \
	"  picture height: " RULE_PAIR "  vertical centre: " RULE_PAIR "  vertical sync polarity: " RULE_PAIR
#define LAST_RULE "  horizontal sync polarity: " RULE_PAIR
#define GOOD_LIMITS "{ breezeway: { studio: { limit: 1 us, source: s }, monitor: { limit: at least 0.5 us, source: t } } }"
#define STANDARD(more) "  s: { title: t, documents: d, fields: 2, vertical sync line: 4, " more " }\n"
#define MODE(clock, dots, polarity, more) \
	"  m: { title: t, documents: d, pixel clock: " clock ", dots: " dots ", lines: [5, 1, 2, 4], horizontal sync: " polarity \
	", vertical sync: negative, source: s" more " }\n"
#define GOOD_MODE MODE("10 MHz", "[100, 10, 20, 30]", "positive", "")
#define ALL(standards, rules, modes) "standards:\n" standards GOOD_RULES rules "modes:\n" modes
#define WITH_STANDARD(more) ALL(STANDARD(more), LAST_RULE, GOOD_MODE)
#define WITH_LIMITS(limits) WITH_STANDARD("limits: " limits)
#define WITH_STUDIO(studio) WITH_LIMITS("{ breezeway: { studio: " studio ", monitor: { limit: 1 us, source: s } } }")
#define WITH_MODE(mode) ALL(STANDARD("limits: " GOOD_LIMITS), LAST_RULE, mode)
#define GOOD WITH_LIMITS(GOOD_LIMITS)

struct reading {
	struct arena *arena;
	struct diagnostics *diagnostics;
	struct source source;
};

static struct reading open_reading(const char *bytes)
{
	struct reading reading = {arena_create(), diagnostics_create(), {"test.yaml", bytes, strlen(bytes)}};
	assert_non_null(reading.arena);
	assert_non_null(reading.diagnostics);
	return reading;
}

static void close_reading(struct reading *reading)
{
	diagnostics_destroy(reading->diagnostics);
	arena_destroy(reading->arena);
}

static void values_keep_their_sources(void **state)
{
	(void)state;
	struct reading reading = open_reading(WITH_STANDARD(
		"limits: " GOOD_LIMITS ", burst pauses: [ { field: 2, first line: 7, last line: 3, source: u } ], notes: [ n, o ]"));
	const struct standards *standards = standards_read(reading.arena, &reading.source, reading.diagnostics);
	assert_non_null(standards);
	const struct standard *standard = catalogue_standard(standards, "s");
	assert_string_equal(standard->title, "t");
	assert_string_equal(standard->documents, "d");
	assert_int_equal(standard->fields, 2);
	assert_int_equal(standard->vertical_sync_line, 4);
	assert_int_equal(standard->limit_count, 2);
	assert_string_equal(standard_limit(standard, ITEM_BREEZEWAY, GRADE_STUDIO)->source, "s");
	assert_string_equal(standard_limit(standard, ITEM_BREEZEWAY, GRADE_MONITOR)->source, "t");
	assert_null(standard_limit(standard, ITEM_FRONT_PORCH, GRADE_STUDIO));
	assert_int_equal(standard->pause_count, 1);
	assert_int_equal(standard->pauses[0].field, 2);
	assert_int_equal(standard->pauses[0].first_line, 7);
	assert_int_equal(standard->pauses[0].last_line, 3);
	assert_string_equal(standard->pauses[0].source, "u");
	assert_int_equal(standard->note_count, 2);
	assert_string_equal(standard->notes[1], "o");
	close_reading(&reading);
}

// 100 + 10 + 20 + 30 dots of 100 ns; low half of it and high twice.
static void a_mode_is_worked_out_by_the_rules(void **state)
{
	(void)state;
	struct reading reading = open_reading(GOOD);
	const struct standards *standards = standards_read(reading.arena, &reading.source, reading.diagnostics);
	assert_non_null(standards);
	const struct limit *rate = standard_limit(catalogue_standard(standards, "m"), ITEM_LINE_RATE, GRADE_STUDIO);
	assert_int_equal(fraction_compare(rate->nominal, fraction_whole(62500)), 0);
	assert_int_equal(fraction_compare(rate->low, fraction_whole(31250)), 0);
	assert_int_equal(fraction_compare(rate->high, fraction_whole(125000)), 0);
	assert_string_equal(rate->source, "s; r");
	const struct limit *open = standard_limit(catalogue_standard(standards, "m"), ITEM_LINE_RATE, GRADE_MONITOR);
	assert_true(open->has_nominal && !open->has_low && !open->has_high);
	close_reading(&reading);
}

struct bad_catalogue {
	const char *bytes;
	enum rule rule;
};

static const struct bad_catalogue bad_standards[] = {
	{"", RULE_FILE_EMPTY},
	{"standards:\n" STANDARD("limits: " GOOD_LIMITS) GOOD_RULES LAST_RULE, RULE_MISSING_KEY},
	{GOOD "parts: {}\n", RULE_UNKNOWN_KEY},
	{ALL("  []\n", LAST_RULE, GOOD_MODE), RULE_NODE_KIND},
	{ALL("  {}\n", LAST_RULE, GOOD_MODE), RULE_TOO_MANY},
	{ALL("  S: { title: t, documents: d, fields: 2, vertical sync line: 4, limits: " GOOD_LIMITS " }\n", LAST_RULE, GOOD_MODE),
	 RULE_BAD_NAME},
	{ALL("  m: { title: t, documents: d, fields: 2, vertical sync line: 4, limits: " GOOD_LIMITS " }\n", LAST_RULE, GOOD_MODE),
	 RULE_DOUBLED_NAME},
	{ALL("  s: { title: t, documents: d, fields: 3, vertical sync line: 4, limits: " GOOD_LIMITS " }\n", LAST_RULE, GOOD_MODE),
	 RULE_BAD_NUMBER},
	{ALL("  s: { title: t, documents: d, fields: 2, vertical sync line: 0, limits: " GOOD_LIMITS " }\n", LAST_RULE, GOOD_MODE),
	 RULE_BAD_NUMBER},
	{ALL("  s: { title: t, fields: 2, vertical sync line: 4, limits: " GOOD_LIMITS " }\n", LAST_RULE, GOOD_MODE), RULE_MISSING_KEY},
	{WITH_LIMITS("{}"), RULE_TOO_MANY},
	{WITH_LIMITS("3 us"), RULE_NODE_KIND},
	{WITH_LIMITS("{ briezeway: { studio: { limit: 1 us, source: s }, monitor: { limit: 1 us, source: s } } }"), RULE_UNKNOWN_KEY},
	{WITH_LIMITS("{ breezeway: { studio: { limit: 1 us, source: s } } }"), RULE_MISSING_KEY},
	{WITH_LIMITS("{ breezeway: { monitor: { limit: 1 us, source: s } } }"), RULE_MISSING_KEY},
	{WITH_STUDIO("1 us"), RULE_NODE_KIND},
	{WITH_STUDIO("{ limit: 1 us }"), RULE_MISSING_KEY},
	{WITH_STUDIO("{ limit: 1 us, source: }"), RULE_NODE_KIND},
	{WITH_STUDIO("{ source: s }"), RULE_MISSING_KEY},
	{WITH_STUDIO("{ limit: 1, source: s }"), RULE_BAD_QUANTITY},
	{WITH_STUDIO("{ limit: 1 Hz, source: s }"), RULE_BAD_QUANTITY},
	{WITH_STUDIO("{ limit: 2 us to 1 us, source: s }"), RULE_LIMIT_ORDER},
	{WITH_STUDIO("{ limit: 1 us (2 us to 3 us), source: s }"), RULE_LIMIT_ORDER},
	{WITH_STANDARD("limits: " GOOD_LIMITS ", burst pauses: []"), RULE_TOO_MANY},
	{WITH_STANDARD("limits: " GOOD_LIMITS ", burst pauses: [ { field: 1, first line: 1, last line: 2 } ]"), RULE_MISSING_KEY},
	{WITH_STANDARD("limits: " GOOD_LIMITS ", burst pauses: [ { field: 0, first line: 1, last line: 2, source: s } ]"),
	 RULE_BAD_NUMBER},
	{WITH_STANDARD("limits: " GOOD_LIMITS ", notes: n"), RULE_NODE_KIND},
	{ALL(STANDARD("limits: " GOOD_LIMITS), "", GOOD_MODE), RULE_MISSING_KEY},
	{ALL(STANDARD("limits: " GOOD_LIMITS), LAST_RULE "  breezeway: " RULE_PAIR, GOOD_MODE), RULE_UNKNOWN_KEY},
	{ALL(STANDARD("limits: " GOOD_LIMITS),
	     "  horizontal sync polarity: { studio: { source: r }, monitor: { low: 1 } }\n", GOOD_MODE), RULE_MISSING_KEY},
	{ALL(STANDARD("limits: " GOOD_LIMITS),
	     "  horizontal sync polarity: { studio: { low: 1.1, source: r }, monitor: { source: r } }\n", GOOD_MODE), RULE_BAD_NUMBER},
	{ALL(STANDARD("limits: " GOOD_LIMITS),
	     "  horizontal sync polarity: { studio: { low: half, source: r }, monitor: { source: r } }\n", GOOD_MODE), RULE_BAD_NUMBER},
	{WITH_MODE(MODE("0 MHz", "[100, 10, 20, 30]", "positive", "")), RULE_BAD_QUANTITY},
	{WITH_MODE(MODE("10 us", "[100, 10, 20, 30]", "positive", "")), RULE_BAD_QUANTITY},
	{WITH_MODE(MODE("10 MHz", "[100, 10, 20]", "positive", "")), RULE_TOO_MANY},
	{WITH_MODE(MODE("10 MHz", "[100, 10, 0, 30]", "positive", "")), RULE_BAD_NUMBER},
	{WITH_MODE(MODE("10 MHz", "100", "positive", "")), RULE_NODE_KIND},
	{WITH_MODE(MODE("10 MHz", "[100, 10, 20, 30]", "up", "")), RULE_BAD_CHOICE},
	{WITH_MODE(MODE("10 MHz", "[100, 10, 20, 30]", "positive", ", note: [n]")), RULE_NODE_KIND},
	{WITH_MODE(MODE("10 MHz", "[100, 10, 20, 30]", "positive", ", fields: 1")), RULE_UNKNOWN_KEY},
	// 1/(7 * 10^18) Hz, divided into dots and lines, is beyond 64-bit fractions.
	{WITH_MODE(MODE("1/7000000000000000000 Hz", "[100, 10, 20, 30]", "positive", "")), RULE_BAD_QUANTITY},
};

static void a_bad_catalogue_of_standards_is_refused_with_its_reason(void **state)
{
	(void)state;
	struct reading good = open_reading(GOOD);
	assert_non_null(standards_read(good.arena, &good.source, good.diagnostics));
	assert_int_equal(diagnostics_count(good.diagnostics), 0);
	close_reading(&good);
	for (size_t index = 0; index < COUNT_OF(bad_standards); index++) {
		struct reading reading = open_reading(bad_standards[index].bytes);
		assert_null(standards_read(reading.arena, &reading.source, reading.diagnostics));
		if (diagnostics_error_count(reading.diagnostics) != 1)
			print_message("of catalogue %zu\n", index);
		assert_int_equal(diagnostics_error_count(reading.diagnostics), 1);
		assert_int_equal(diagnostics_rule(reading.diagnostics, 0), bad_standards[index].rule);
		close_reading(&reading);
	}
}

// What a limit of one's own will be told.
static void a_bad_limit_is_told_with_what_would_be_right(void **state)
{
	(void)state;
	static const char *const told[][2] = {
		{WITH_STUDIO("{ limit: 1, source: s }"), "breezeway: a number needs a unit, found \"1\" [bad-quantity]"},
		{WITH_STUDIO("{ limit: 1 Hz, source: s }"), "hint: give it in us"},
		{WITH_STUDIO("{ limit: 2 us to 1 us, source: s }"), "breezeway: low, nominal and high must rise from zero on"},
		{WITH_STUDIO("{ limit: some us, source: s }"), "hint: write NOMINAL +- TOLERANCE"},
		{WITH_LIMITS("{ briezeway: { studio: { limit: 1 us, source: s }, monitor: { limit: 1 us, source: s } } }"),
		 "did you mean \"breezeway\"?"},
	};
	for (size_t index = 0; index < COUNT_OF(told); index++) {
		struct reading reading = open_reading(told[index][0]);
		struct text text = {0};
		assert_null(standards_read(reading.arena, &reading.source, reading.diagnostics));
		diagnostics_print(reading.diagnostics, &text, false);
		assert_non_null(strstr(text_string(&text), told[index][1]));
		text_release(&text);
		close_reading(&reading);
	}
}

#define CRYSTALS(crystal) "crystals:\n" crystal
#define GOOD_CRYSTAL "  C: { frequency: 315/22 MHz, use: u, source: s }\n"

static const struct bad_catalogue bad_crystals[] = {
	{"crystals: 3\n", RULE_NODE_KIND},
	{"crystals: {}\n", RULE_TOO_MANY},
	{CRYSTALS(GOOD_CRYSTAL) "parts: {}\n", RULE_UNKNOWN_KEY},
	{CRYSTALS(GOOD_CRYSTAL GOOD_CRYSTAL), RULE_YAML_DUPLICATE_KEY},
	{CRYSTALS("  C: { frequency: 1 MHz, use: u }\n"), RULE_MISSING_KEY},
	{CRYSTALS("  C: { frequency: 1 MHz, source: s }\n"), RULE_MISSING_KEY},
	{CRYSTALS("  C: { use: u, source: s }\n"), RULE_MISSING_KEY},
	{CRYSTALS("  C: { frequency: 1 MHz, use: u, source: }\n"), RULE_NODE_KIND},
	{CRYSTALS("  C: { frequency: 0 MHz, use: u, source: s }\n"), RULE_BAD_QUANTITY},
	{CRYSTALS("  C: { frequency: -1 MHz, use: u, source: s }\n"), RULE_BAD_QUANTITY},
	{CRYSTALS("  C: { frequency: 1 us, use: u, source: s }\n"), RULE_BAD_QUANTITY},
	{CRYSTALS("  C: { frequency: 1, use: u, source: s }\n"), RULE_BAD_QUANTITY},
};

static void a_bad_catalogue_of_crystals_is_refused_with_its_reason(void **state)
{
	(void)state;
	struct reading good = open_reading(CRYSTALS(GOOD_CRYSTAL));
	const struct crystals *crystals = crystals_read(good.arena, &good.source, good.diagnostics);
	assert_non_null(crystals);
	assert_string_equal(catalogue_crystal(crystals, "C")->use, "u");
	assert_string_equal(catalogue_crystal(crystals, "C")->source, "s");
	assert_null(catalogue_crystal(crystals, "c"));
	close_reading(&good);
	for (size_t index = 0; index < COUNT_OF(bad_crystals); index++) {
		struct reading reading = open_reading(bad_crystals[index].bytes);
		assert_null(crystals_read(reading.arena, &reading.source, reading.diagnostics));
		assert_int_equal(diagnostics_error_count(reading.diagnostics), 1);
		assert_int_equal(diagnostics_rule(reading.diagnostics, 0), bad_crystals[index].rule);
		close_reading(&reading);
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(values_keep_their_sources),
		cmocka_unit_test(a_mode_is_worked_out_by_the_rules),
		cmocka_unit_test(a_bad_catalogue_of_standards_is_refused_with_its_reason),
		cmocka_unit_test(a_bad_limit_is_told_with_what_would_be_right),
		cmocka_unit_test(a_bad_catalogue_of_crystals_is_refused_with_its_reason),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
