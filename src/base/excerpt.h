// The source line that a diagnostic points at, made safe to print.
#ifndef SCANLATCH_BASE_EXCERPT_H
#define SCANLATCH_BASE_EXCERPT_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#include "base/diagnostics.h"

// How far a source has been read. Starts as {0}. Places asked for in file order cost one pass over the source
// altogether; a place further back starts again from its top.
struct excerpt_cursor {
	const struct source *source;
	size_t offset;       // of the character at line, column
	uint32_t line;
	uint32_t column;
	bool line_is_long;   // the line has more characters than an excerpt shows
};

// Puts the line of `place`, indented by two spaces, and below it the marker: tabs as one space, control characters and
// bytes that are not UTF-8 as '?'. Of a line above 100 characters at most 100 are shown: 50 before the place, the rest
// from it on. A column beyond the line's end is marked right behind it. Puts nothing if the source has no such line, or
// the line is empty.
void excerpt_put(struct excerpt_cursor *cursor, struct place place, struct text *out);

// Puts `length` bytes with the same replacements, so that no name out of a plan can command a terminal.
#define UNPRINTABLE_PATTERN \
	"[\\u0000-\\u001f\\u007f-\\u009f\\u061c\\u200e\\u200f\\u2028-\\u202e\\u2066-\\u2069]" // what is replaced, of UTF-8
void excerpt_put_printable(const char *bytes, size_t length, struct text *out);

#endif
