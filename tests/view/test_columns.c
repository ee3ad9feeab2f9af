// Aligned tables; the expected text is worked out by hand.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "base/text.h"
#include "view/columns.h"

#define COLUMNS 3

struct grid {
	const char *(*cells)[COLUMNS];
};

static void put_cell(struct text *out, const void *context, size_t row, size_t column)
{
	text_put(out, ((const struct grid *)context)->cells[row][column]);
}

static const struct column headings[COLUMNS] = {{"tide", false}, {"cm", true}, {"note", false}};

static void assert_table(const char *(*cells)[COLUMNS], size_t row_count, size_t width, const char *expected)
{
	const struct grid grid = {cells};
	const struct columns table = {headings, COLUMNS, row_count, put_cell, &grid};
	struct text out = {0};
	view_columns(&out, &table, width);
	assert_false(out.failed);
	assert_string_equal(text_string(&out), expected);
	text_release(&out);
}

static void columns_are_as_wide_as_their_widest_cell(void **state)
{
	(void)state;
	const char *cells[][COLUMNS] = {{"high water", "412", "a"}, {"low", "7", "b"}};
	assert_table(cells, 2, 80,
	             "tide         cm  note\n"
	             "high water  412  a\n"
	             "low           7  b\n");
}

static void a_table_without_rows_has_its_headings(void **state)
{
	(void)state;
	assert_table(NULL, 0, 80, "tide  cm  note\n");
}

static void an_empty_last_cell_leaves_no_spaces(void **state)
{
	(void)state;
	const char *cells[][COLUMNS] = {{"low", "", ""}, {"", "7", ""}};
	assert_table(cells, 2, 80, "tide  cm  note\nlow\n       7\n");
}

// "ebb" is three characters, "dépth" five in six bytes: columns count characters.
static void characters_count_and_not_bytes(void **state)
{
	(void)state;
	const char *cells[][COLUMNS] = {{"d\xC3\xA9pth", "1", "a"}, {"ebb", "22", "b"}};
	assert_table(cells, 2, 80, "tide   cm  note\nd\xC3\xA9pth   1  a\nebb    22  b\n");
}

// The last column starts at character 10; "one two" ends exactly at 17.
static void the_last_column_breaks_between_words(void **state)
{
	(void)state;
	const char *cells[][COLUMNS] = {{"x", "1", "one two  three"}};
	assert_table(cells, 1, 17, "tide  cm  note\nx      1  one two\n          three\n");
	assert_table(cells, 1, 16, "tide  cm  note\nx      1  one\n          two\n          three\n");
}

static void a_word_that_is_too_long_stands_whole(void **state)
{
	(void)state;
	const char *cells[][COLUMNS] = {{"x", "1", "breakwater to"}};
	assert_table(cells, 1, 14, "tide  cm  note\nx      1  breakwater\n          to\n");
}

static void a_text_that_failed_stays_failed(void **state)
{
	(void)state;
	const struct columns table = {headings, COLUMNS, 0, put_cell, NULL};
	struct text out = {.failed = true};
	view_columns(&out, &table, 80);
	assert_true(out.failed);
	assert_int_equal(out.length, 0);
	text_release(&out);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(columns_are_as_wide_as_their_widest_cell),
		cmocka_unit_test(a_table_without_rows_has_its_headings),
		cmocka_unit_test(an_empty_last_cell_leaves_no_spaces),
		cmocka_unit_test(characters_count_and_not_bytes),
		cmocka_unit_test(the_last_column_breaks_between_words),
		cmocka_unit_test(a_word_that_is_too_long_stands_whole),
		cmocka_unit_test(a_text_that_failed_stays_failed),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
