// The catalogues of standards and of crystals as tables and as JSON: of small ones worked out by hand, and of those built in.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "catalogue/crystals.h"
#include "catalogue/standards.h"
#include "view/crystals.h"
#include "view/standards.h"

#define NONE {0, 1}

static const struct limit harbour_limits[] = {
	{ITEM_LINE_RATE, GRADE_STUDIO, true, true, true, {2250000, 143}, {15734, 1}, {31469, 2}, "sheet one"},
	{ITEM_LINE_RATE, GRADE_MONITOR, true, false, false, {15734, 1}, NONE, NONE, "from memory"},
	{ITEM_SYNC_WIDTH, GRADE_STUDIO, true, true, false, {47, 10000000}, {23, 5000000}, NONE, "sheet one"}, // 4.7, 4.6 us
	{ITEM_SYNC_WIDTH, GRADE_MONITOR, false, false, true, NONE, NONE, {1, 210000}, "from memory"},        // 100/21 us
	{ITEM_HORIZONTAL_POLARITY, GRADE_STUDIO, true, true, true, {-1, 1}, {-1, 1}, {-1, 1}, "sheet two"},
	{ITEM_HORIZONTAL_POLARITY, GRADE_MONITOR, true, false, false, {1, 1}, NONE, NONE, "sheet two"},
};
static const struct burst_pause harbour_pauses[] = {{2, 264, 272, "sheet three"}};
static const char *const harbour_notes[] = {"one sheet says this, another that; this was taken"};
static const struct standard harbour_standards[] = {
	{"quay-525", "signals of the quay", "sheets one to three", 2, 4, harbour_limits, 6, harbour_pauses, 1, harbour_notes, 1, 0},
	{"lock", "signals of the lock", "none", 1, 0, harbour_limits, 2, NULL, 0, NULL, 0, 0},
};
static const struct standards harbour = {harbour_standards, 2};

static const struct crystal harbour_crystals[] = {
	{"14.31818 MHz", {157500000, 11}, "the board", "sheet one"},
	{"20 MHz", {20000000, 1}, "nothing yet", "from memory"},
};
static const struct crystals drawer = {harbour_crystals, 2};

static void a_standard_is_a_table_with_its_sources(void **state)
{
	(void)state;
	struct text out = {0};
	view_standards(&out, &harbour);
	assert_false(out.failed);
	const char *text = strstr(text_string(&out), "quay-525: ");
	assert_non_null(text);
	const char *wanted =
		"quay-525: signals of the quay\n"
		"documents: sheets one to three\n"
		"\n"
		"item                      grade         nominal       low      high  unit  source\n"
		"line rate                 studio   15734.265734     15734   15734.5  Hz    [1]\n"
		"line rate                 monitor         15734         -         -  Hz    [2]\n"
		"horizontal sync width     studio            4.7       4.6         -  us    [1]\n"
		"horizontal sync width     monitor             -         -  4.761905  us    [2]\n"
		"horizontal sync polarity  studio       negative  negative  negative        [3]\n"
		"horizontal sync polarity  monitor      positive         -         -        [3]\n"
		"\n"
		" [1]  sheet one\n"
		" [2]  from memory\n"
		" [3]  sheet two\n"
		"   -  no burst in lines 264 to 272 of field 2: sheet three\n"
		"   -  one sheet says this, another that; this was taken\n"
		"\n"
		"lock: signals of the lock\n"
		"documents: none\n"
		"\n"
		"item       grade         nominal    low     high  unit  source\n"
		"line rate  studio   15734.265734  15734  15734.5  Hz    [1]\n"
		"line rate  monitor         15734      -        -  Hz    [2]\n"
		"\n"
		" [1]  sheet one\n"
		" [2]  from memory\n"
		"\n"
		"What is measured ";
	char *end = strstr(text, "What is measured ");
	assert_non_null(end);
	end[strlen("What is measured ")] = '\0';
	assert_string_equal(text, wanted);
	text_release(&out);
}

// 2^62 seconds do not fit as a 64-bit number of microseconds.
static void a_value_that_no_unit_holds_is_put_rounded(void **state)
{
	(void)state;
	struct text out = {0};
	put_limit_value(&out, ITEM_SYNC_WIDTH, (struct fraction){INT64_C(4611686018427387904), 1});
	assert_string_equal(text_string(&out), "4.61169e+24");
	text_release(&out);
}

static const char *string_of(const json_t *object, const char *key)
{
	const char *string = json_string_value(json_object_get(object, key));
	assert_non_null(string);
	return string;
}

static void json_has_exact_limits_beside_rounded_ones(void **state)
{
	(void)state;
	json_t *root = view_standards_json(&harbour);
	assert_non_null(root);
	assert_int_equal(json_object_size(root), 2);
	assert_int_equal(json_array_size(json_object_get(root, "items")), ITEM_COUNT);
	const json_t *standard = json_array_get(json_object_get(root, "standards"), 0);
	assert_string_equal(string_of(standard, "name"), "quay-525");
	assert_string_equal(string_of(standard, "title"), "signals of the quay");
	assert_string_equal(string_of(standard, "documents"), "sheets one to three");
	assert_int_equal(json_integer_value(json_object_get(standard, "fields")), 2);
	assert_int_equal(json_integer_value(json_object_get(standard, "vertical_sync_line")), 4);
	const json_t *limits = json_object_get(standard, "limits");
	assert_int_equal(json_array_size(limits), 6);
	const json_t *width = json_array_get(limits, 3);
	assert_string_equal(string_of(width, "item"), "horizontal sync width");
	assert_string_equal(string_of(width, "grade"), "monitor");
	assert_string_equal(string_of(width, "unit"), "us");
	assert_string_equal(string_of(width, "high"), "100/21");
	const double error = json_number_value(json_object_get(width, "high_rounded")) - 4.761905;
	assert_true(error < 1e-9 && error > -1e-9);
	assert_null(json_object_get(width, "nominal"));
	assert_null(json_object_get(width, "low"));
	assert_string_equal(string_of(width, "source"), "from memory");
	const json_t *polarity = json_array_get(limits, 4);
	assert_string_equal(string_of(polarity, "nominal"), "negative");
	assert_null(json_object_get(polarity, "nominal_rounded"));
	const json_t *pause = json_array_get(json_object_get(standard, "burst_pauses"), 0);
	assert_int_equal(json_integer_value(json_object_get(pause, "last_line")), 272);
	assert_string_equal(string_of(pause, "source"), "sheet three");
	assert_int_equal(json_array_size(json_object_get(standard, "notes")), 1);
	assert_null(json_object_get(json_array_get(json_object_get(root, "standards"), 1), "vertical_sync_line"));
	json_decref(root);
}

static void crystals_are_a_table_with_sources(void **state)
{
	(void)state;
	struct text out = {0};
	view_crystals(&out, &drawer);
	assert_false(out.failed);
	assert_string_equal(text_string(&out),
		"Crystals and oscillators, by what is printed on them\n"
		"\n"
		"name              exact Hz               Hz  use\n"
		"14.31818 MHz  157500000/11  14318181.818182  the board\n"
		"20 MHz            20000000         20000000  nothing yet\n"
		"\n"
		"Sources of their values\n"
		"\n"
		"name          source of the frequency\n"
		"14.31818 MHz  sheet one\n"
		"20 MHz        from memory\n");
	text_release(&out);
}

static void json_of_crystals_is_exact(void **state)
{
	(void)state;
	json_t *root = view_crystals_json(&drawer);
	assert_non_null(root);
	const json_t *crystals = json_object_get(root, "crystals");
	assert_int_equal(json_array_size(crystals), 2);
	const json_t *crystal = json_array_get(crystals, 0);
	assert_string_equal(string_of(crystal, "name"), "14.31818 MHz");
	assert_string_equal(string_of(crystal, "hz"), "157500000/11");
	const double error = json_number_value(json_object_get(crystal, "hz_rounded")) - 14318181.818182;
	assert_true(error < 1e-6 && error > -1e-6);
	assert_string_equal(string_of(crystal, "use"), "the board");
	assert_string_equal(string_of(crystal, "source"), "sheet one");
	json_decref(root);
}

static void assert_lines_fit(const char *text, size_t limit)
{
	for (const char *line = text; *line != '\0'; line += strcspn(line, "\n") + 1)
		assert_true(strcspn(line, "\n") <= limit);
}

static void the_built_in_catalogues_fit_a_terminal(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	struct diagnostics *diagnostics = diagnostics_create();
	const struct standards *standards = standards_load(arena, diagnostics);
	const struct crystals *crystals = crystals_load(arena, diagnostics);
	assert_true(standards != NULL && crystals != NULL);
	struct text out = {0};
	view_standards(&out, standards);
	// SMPTE 170M-2004 table 2: 4.70 +- 0.10 us; VESA DMT 1.0 rev. 13, 04h: 25.175 MHz/800 = 31.46875 kHz.
	assert_non_null(strstr(text_string(&out),
	                       "\nhorizontal sync width       studio            4.7           4.6           4.8  us "));
	assert_non_null(strstr(text_string(&out), "\nline rate                 studio    31468.75  31311.40625  31626.09375  Hz "));
	view_crystals(&out, crystals);
	assert_non_null(strstr(text_string(&out), "\n14.31818 MHz   157500000/11  14318181.818182  4 times the subcarrier"));
	assert_false(out.failed);
	assert_lines_fit(text_string(&out), 100);
	text_release(&out);
	json_t *root = view_standards_json(standards);
	assert_int_equal(json_array_size(json_object_get(root, "standards")), standards->count);
	json_decref(root);
	root = view_crystals_json(crystals);
	assert_int_equal(json_array_size(json_object_get(root, "crystals")), crystals->count);
	json_decref(root);
	diagnostics_destroy(diagnostics);
	arena_destroy(arena);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(a_standard_is_a_table_with_its_sources),
		cmocka_unit_test(a_value_that_no_unit_holds_is_put_rounded),
		cmocka_unit_test(json_has_exact_limits_beside_rounded_ones),
		cmocka_unit_test(crystals_are_a_table_with_sources),
		cmocka_unit_test(json_of_crystals_is_exact),
		cmocka_unit_test(the_built_in_catalogues_fit_a_terminal),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
