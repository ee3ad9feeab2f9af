// Words and tables in pages.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "base/text.h"
#include "view/page.h"

static void assert_put(struct text *out, const char *expected)
{
	assert_false(out->failed);
	assert_string_equal(text_string(out), expected);
	text_release(out);
}

static void elements_escape_their_words(void **state)
{
	(void)state;
	struct text out = {0};
	page_element(&out, "p", " class=\"note\"", "%s & %s", "<script>", "\"'");
	assert_put(&out, "<p class=\"note\">&lt;script&gt; &amp; &quot;&#39;</p>\n");
}

static void further_lines_are_small(void **state)
{
	(void)state;
	struct text out = {0}, words = {0};
	text_put(&words, "a<b\nc&d\ne");
	page_words(&out, &words);
	assert_null(words.bytes);
	assert_put(&out, "a&lt;b<br/><small>c&amp;d</small><br/><small>e</small>");
}

static void no_words_are_no_words(void **state)
{
	(void)state;
	struct text out = {0};
	page_element(&out, "h2", "", "%s", "");
	assert_put(&out, "<h2></h2>\n");
}

static void attributes_cannot_end(void **state)
{
	(void)state;
	struct text out = {0}, words = {0};
	text_put(&words, "x\" onclick=\"y'>");
	page_attribute(&out, "title", &words);
	assert_put(&out, " title=\"x&quot; onclick=&quot;y&#39;&gt;\"");
}

static const struct column columns[] = {{"<name>", false}, {"tons", true}};

static void put_cell(struct text *out, const void *context, size_t row, size_t column)
{
	(void)context;
	text_printf(out, column == 0 ? "quay <%zu>" : "%zu00", row);
}

static void put_row(struct text *out, const void *context, size_t row)
{
	(void)context;
	if (row == 1)
		text_put(out, " class=\"full\"");
}

static void tables_head_rows_and_columns(void **state)
{
	(void)state;
	struct text out = {0};
	const struct page_table table = {"ships & boats", "ships", {columns, 2, 2, put_cell, NULL}, put_row};
	page_table(&out, &table);
	assert_put(&out,
		"<div class=\"wide\"><table class=\"ships\">\n"
		"<caption>ships &amp; boats</caption>\n"
		"<thead><tr><th scope=\"col\">&lt;name&gt;</th><th scope=\"col\" class=\"number\">tons</th></tr></thead>\n"
		"<tbody>\n"
		"<tr><th scope=\"row\">quay &lt;0&gt;</th><td class=\"number\">000</td></tr>\n"
		"<tr class=\"full\"><th scope=\"row\">quay &lt;1&gt;</th><td class=\"number\">100</td></tr>\n"
		"</tbody></table></div>\n");
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(elements_escape_their_words),
		cmocka_unit_test(further_lines_are_small),
		cmocka_unit_test(no_words_are_no_words),
		cmocka_unit_test(attributes_cannot_end),
		cmocka_unit_test(tables_head_rows_and_columns),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
