#include "view/columns.h"

#include <assert.h>
#include <stdint.h>
#include <string.h>

#include "base/text.h"

#define GAP 2

// Characters of UTF-8 text: every byte but the continuation bytes starts one.
static size_t character_count(const char *bytes, size_t length)
{
	size_t count = 0;
	for (size_t index = 0; index < length; index++)
		count += ((unsigned char)bytes[index] & 0xC0u) != 0x80u;
	return count;
}

// Makes `cell` the text of a cell; row SIZE_MAX is the headings'.
static void make_cell(struct text *cell, const struct columns *table, size_t row, size_t column)
{
	cell->length = 0;
	text_put(cell, ""); // ends what was left of the last cell
	if (row == SIZE_MAX)
		text_put(cell, table->columns[column].heading);
	else
		table->put_cell(cell, table->context, row, column);
}

static size_t column_width(const struct columns *table, size_t column, struct text *cell)
{
	size_t widest = character_count(table->columns[column].heading, strlen(table->columns[column].heading));
	for (size_t row = 0; row < table->row_count; row++) {
		make_cell(cell, table, row, column);
		const size_t characters = character_count(text_string(cell), cell->length);
		if (characters > widest)
			widest = characters;
	}
	return widest;
}

// Puts words, with a new line indented by `indent` before each that would pass `width`.
static void put_broken(struct text *out, const char *words, size_t indent, size_t width)
{
	size_t used = indent;
	for (size_t length; *words != '\0'; words += length) {
		words += strspn(words, " ");
		length = strcspn(words, " ");
		const size_t characters = character_count(words, length);
		if (length == 0)
			break;
		if (used > indent && used + 1 + characters > width) {
			text_put(out, "\n");
			text_put_repeated(out, ' ', indent);
			used = indent;
		} else if (used > indent) {
			text_put(out, " ");
			used++;
		}
		text_put_bytes(out, words, length);
		used += characters;
	}
}

static void drop_spaces_at_end(struct text *out)
{
	while (out->length > 0 && out->bytes[out->length - 1] == ' ')
		out->bytes[--out->length] = '\0';
}

static void put_row(struct text *out, const struct columns *table, size_t row, const size_t *widths, size_t width,
                    struct text *cell)
{
	size_t indent = 0;
	for (size_t column = 0; column + 1 < table->column_count; column++) {
		make_cell(cell, table, row, column);
		const size_t characters = character_count(text_string(cell), cell->length);
		const size_t padding = characters < widths[column] ? widths[column] - characters : 0;
		text_put_repeated(out, ' ', table->columns[column].to_the_right ? padding : 0);
		text_put(out, text_string(cell));
		text_put_repeated(out, ' ', (table->columns[column].to_the_right ? 0 : padding) + GAP);
		indent += widths[column] + GAP;
	}
	make_cell(cell, table, row, table->column_count - 1);
	put_broken(out, text_string(cell), indent, width);
	drop_spaces_at_end(out);
	text_put(out, "\n");
}

void view_columns(struct text *out, const struct columns *table, size_t width)
{
	size_t widths[COLUMN_LIMIT] = {0};
	struct text cell = {0};
	assert(table->column_count >= 1 && table->column_count <= COLUMN_LIMIT);
	for (size_t column = 0; column + 1 < table->column_count; column++)
		widths[column] = column_width(table, column, &cell);
	put_row(out, table, SIZE_MAX, widths, width, &cell);
	for (size_t row = 0; row < table->row_count; row++)
		put_row(out, table, row, widths, width, &cell);
	out->failed = out->failed || cell.failed;
	text_release(&cell);
}
