// A plan's text as characters: which it may hold, and positions counted in characters.
#ifndef SCANLATCH_PLAN_CHARACTERS_H
#define SCANLATCH_PLAN_CHARACTERS_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#include "base/diagnostics.h"

// Room for a quotation of a text.
#define QUOTATION_BYTES 140

// Puts 'text', cut to 32 characters, into the buffer and returns the buffer. Cannot fail.
const char *quotation(char buffer[QUOTATION_BYTES], const char *bytes, size_t length);

// Room for a text cut to SHORT_CHARACTERS, with "..." and a NUL.
#define SHORT_CHARACTERS 60
#define SHORT_BYTES (4 * SHORT_CHARACTERS + 4)

// A text out of a plan as messages show it, so that a long one leaves room for what is wrong with it: the text itself, or, if it
// has more than SHORT_CHARACTERS, so many and "..." in the buffer. Cannot fail.
const char *shortened(char buffer[SHORT_BYTES], const char *text);

// The same in a buffer of the enclosing block, for the arguments of a message.
#define SHORT(text) shortened((char[SHORT_BYTES]){""}, (text))

// Bytes of the first character of `length` bytes of UTF-8; 0 if length is 0. Cannot fail.
size_t character_bytes(const char *bytes, size_t length);

// Where a character stands in a text that characters_check let pass.
struct position {
	const struct source *source;
	size_t offset;   // in bytes from the source's first; at most its length
	size_t index;    // in characters, a byte order mark at the start not counted
	uint32_t line;   // from 1
	uint32_t column; // from 1, in characters
};

// True if the source is UTF-8 (a byte order mark at its start is allowed) without control characters (tab, LF and CR LF are
// allowed). Else the first fault is added, as FILE_ENCODING or FILE_BINARY.
bool characters_check(const struct source *source, struct diagnostics *diagnostics);

// True if `length` bytes of UTF-8 hold a character that a plan may not have; *character is the first. Cannot fail.
bool characters_forbidden(const char *bytes, size_t length, uint32_t *character);

// The first character, after a byte order mark. Cannot fail.
struct position position_start(const struct source *source);

// Moves one character on; at the end of the text does nothing. Cannot fail.
void position_step(struct position *position);

// Moves to the character with that index, or to the end. Cheap when that is ahead: a pass in text order costs one
// walk over the text; going back starts again from the top. Cannot fail.
void position_seek(struct position *position, size_t index);

// The byte at the position, NUL at the end. Cannot fail.
char position_byte(const struct position *position);

struct place position_place(const struct position *position);

#endif
