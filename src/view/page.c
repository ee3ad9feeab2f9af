#include "view/page.h"

#include <string.h>

#include "base/text.h"
#include "view/markup.h"

static void put_small(struct text *out, char *rest)
{
	for (char *end; rest != NULL; rest = end) {
		end = strchr(rest, '\n');
		if (end != NULL)
			*end++ = '\0';
		text_put(out, "<br/><small>");
		text_put_markup(out, rest);
		text_put(out, "</small>");
	}
}

void page_words(struct text *out, struct text *words)
{
	char *bytes = words->bytes, *rest = bytes != NULL ? strchr(bytes, '\n') : NULL;
	if (rest != NULL)
		*rest++ = '\0';
	if (bytes != NULL)
		text_put_markup(out, bytes);
	put_small(out, rest);
	out->failed = out->failed || words->failed;
	text_release(words);
}

void page_element_of(struct text *out, const char *tag, const char *attributes, struct text *words)
{
	text_printf(out, "<%s%s>", tag, attributes);
	page_words(out, words);
	text_printf(out, "</%s>\n", tag);
}

void page_element(struct text *out, const char *tag, const char *attributes, const char *format, ...)
{
	struct text words = {0};
	va_list arguments;
	va_start(arguments, format);
	text_vprintf(&words, format, arguments);
	va_end(arguments);
	page_element_of(out, tag, attributes, &words);
}

void page_attribute(struct text *out, const char *name, struct text *words)
{
	text_printf(out, " %s=\"", name);
	text_put_markup(out, text_string(words));
	text_put(out, "\"");
	out->failed = out->failed || words->failed;
	text_release(words);
}

static void put_cell(struct text *out, const struct page_table *table, size_t row, size_t column)
{
	const struct columns *columns = &table->columns;
	const char *tag = column == 0 ? "th" : "td";
	struct text words = {0};
	columns->put_cell(&words, columns->context, row, column);
	text_printf(out, "<%s%s%s>", tag, column == 0 ? " scope=\"row\"" : "", columns->columns[column].to_the_right ? " class=\"number\"" : "");
	page_words(out, &words);
	text_printf(out, "</%s>", tag);
}

static void put_headings(struct text *out, const struct page_table *table)
{
	text_put(out, "<thead><tr>");
	for (size_t column = 0; column < table->columns.column_count; column++) {
		const struct column *heading = &table->columns.columns[column];
		text_printf(out, "<th scope=\"col\"%s>", heading->to_the_right ? " class=\"number\"" : "");
		text_put_markup(out, heading->heading);
		text_put(out, "</th>");
	}
	text_put(out, "</tr></thead>\n");
}

void page_table(struct text *out, const struct page_table *table)
{
	const struct columns *columns = &table->columns;
	text_printf(out, "<div class=\"wide\"><table class=\"%s\">\n", table->name);
	if (table->caption != NULL)
		page_element(out, "caption", "", "%s", table->caption);
	put_headings(out, table);
	text_put(out, "<tbody>\n");
	for (size_t row = 0; row < columns->row_count; row++) {
		text_put(out, "<tr");
		if (table->put_attributes != NULL)
			table->put_attributes(out, columns->context, row);
		text_put(out, ">");
		for (size_t column = 0; column < columns->column_count; column++)
			put_cell(out, table, row, column);
		text_put(out, "</tr>\n");
	}
	text_put(out, "</tbody></table></div>\n");
}
