// Aligned tables for a terminal.
#ifndef SCANLATCH_VIEW_COLUMNS_H
#define SCANLATCH_VIEW_COLUMNS_H

#include <stdbool.h>
#include <stddef.h>

struct text;

#define COLUMN_LIMIT 16

struct column {
	const char *heading;
	bool to_the_right; // cells end, rather than start, at the same place
};

// A table whose cells are put when they are needed. The last column is never put to the right.
struct columns {
	const struct column *columns;
	size_t column_count;       // 1 … COLUMN_LIMIT
	size_t row_count;
	void (*put_cell)(struct text *out, const void *context, size_t row, size_t column);
	const void *context;       // for put_cell
};

// Puts the headings and then the rows, two spaces between columns, no spaces at a line's end. The last column is broken
// between words so that lines keep within `width` characters where words allow it. Text is UTF-8, a character a column.
// When memory is out, out->failed is set.
void view_columns(struct text *out, const struct columns *table, size_t width);

#endif
