#include "base/excerpt.h"

#include <string.h>

#include "base/text.h"

#define SHOWN_CHARACTERS 100
#define SHOWN_BEFORE 50
#define NOT_UTF8 UINT32_MAX

static uint8_t byte_at(const char *bytes, size_t offset)
{
	return (uint8_t)bytes[offset];
}

// Bytes of a character by its first byte (RFC 3629, section 4); 0 if no character starts so.
static size_t announced_length(uint8_t first)
{
	if (first < 0x80)
		return 1;
	if (first >= 0xC2 && first <= 0xDF)
		return 2;
	if (first >= 0xE0 && first <= 0xEF)
		return 3;
	return first >= 0xF0 && first <= 0xF4 ? 4 : 0;
}

// The character at `bytes`, of which `room` (above 0) are left, and its length; a byte that is not UTF-8 counts as a
// character of its own.
static size_t decode_character(const char *bytes, size_t room, uint32_t *code)
{
	static const uint32_t smallest[] = {0, 0, 0x80, 0x800, 0x10000};
	static const uint8_t first_mask[] = {0, 0x7F, 0x1F, 0x0F, 0x07};
	size_t length = announced_length(byte_at(bytes, 0));
	*code = NOT_UTF8;
	if (length == 0 || length > room)
		return 1;
	uint32_t value = byte_at(bytes, 0) & first_mask[length];
	for (size_t index = 1; index < length; index++) {
		if ((byte_at(bytes, index) & 0xC0) != 0x80)
			return 1;
		value = value << 6 | (byte_at(bytes, index) & 0x3F);
	}
	if (value < smallest[length] || value > 0x10FFFF || (value >= 0xD800 && value <= 0xDFFF))
		return 1;
	*code = value;
	return length;
}

// C0, DEL and C1; then those that steer the line's direction or break it (Unicode property Bidi_Control, and U+2028,
// U+2029), since they could make the terminal show something else than what stands there.
static bool is_control(uint32_t code)
{
	return code < 0x20 || (code >= 0x7F && code <= 0x9F) || code == 0x061C || code == 0x200E || code == 0x200F ||
	       (code >= 0x2028 && code <= 0x202E) || (code >= 0x2066 && code <= 0x2069);
}

// Puts the character at `bytes` and returns its length there.
static size_t put_character(const char *bytes, size_t room, struct text *out)
{
	uint32_t code;
	size_t length = decode_character(bytes, room, &code);
	if (code == '\t')
		text_put_bytes(out, " ", 1);
	else if (code == NOT_UTF8 || is_control(code))
		text_put_bytes(out, "?", 1);
	else
		text_put_bytes(out, bytes, length);
	return length;
}

void excerpt_put_printable(const char *bytes, size_t length, struct text *out)
{
	for (size_t offset = 0; offset < length;)
		offset += put_character(bytes + offset, length - offset, out);
}

// Bytes of the line break at the cursor, 0 if there is none. The breaks are those of YAML 1.1 (LF, CR, CR LF, NEL, LS, PS;
// section 4.1.4, from memory), as libyaml counts the lines of a plan.
static size_t break_length(const struct excerpt_cursor *cursor)
{
	const char *bytes = cursor->source->bytes + cursor->offset;
	size_t room = cursor->source->length - cursor->offset;
	if (room > 0 && bytes[0] == '\n')
		return 1;
	if (room > 0 && bytes[0] == '\r')
		return room > 1 && bytes[1] == '\n' ? 2 : 1;
	if (room > 1 && memcmp(bytes, "\xC2\x85", 2) == 0)
		return 2;
	if (room > 2 && (memcmp(bytes, "\xE2\x80\xA8", 3) == 0 || memcmp(bytes, "\xE2\x80\xA9", 3) == 0))
		return 3;
	return 0;
}

static bool at_line_end(const struct excerpt_cursor *cursor)
{
	return cursor->offset == cursor->source->length || break_length(cursor) > 0;
}

static void step_character(struct excerpt_cursor *cursor)
{
	uint32_t code;
	cursor->offset += decode_character(cursor->source->bytes + cursor->offset,
	                                   cursor->source->length - cursor->offset, &code);
	cursor->column++;
}

// To that column of the line, or to the line's end.
static void seek_column(struct excerpt_cursor *cursor, uint32_t column)
{
	while (cursor->column < column && !at_line_end(cursor))
		step_character(cursor);
}

static void note_line_length(struct excerpt_cursor *cursor)
{
	struct excerpt_cursor ahead = *cursor;
	seek_column(&ahead, cursor->column + SHOWN_CHARACTERS);
	cursor->line_is_long = !at_line_end(&ahead);
}

static void start_source(struct excerpt_cursor *cursor, const struct source *source)
{
	// A byte order mark is no character of the first line.
	bool marked = source->length >= 3 && memcmp(source->bytes, "\xEF\xBB\xBF", 3) == 0;
	*cursor = (struct excerpt_cursor){.source = source, .offset = marked ? 3 : 0, .line = 1, .column = 1};
	note_line_length(cursor);
}

// To the first column of a line that is further down. False if the source has no such line.
static bool seek_line(struct excerpt_cursor *cursor, uint32_t line)
{
	if (cursor->line == line)
		return true;
	while (cursor->line < line) {
		while (!at_line_end(cursor))
			cursor->offset++;
		if (cursor->offset == cursor->source->length)
			return false;
		cursor->offset += break_length(cursor);
		cursor->line++;
		cursor->column = 1;
	}
	note_line_length(cursor);
	return true;
}

// To the first character that the excerpt of `place` shows.
static bool seek_excerpt(struct excerpt_cursor *cursor, struct place place)
{
	uint32_t column = place.column > SHOWN_BEFORE ? place.column - SHOWN_BEFORE : 1;
	bool behind = place.line < cursor->line || (place.line == cursor->line && column < cursor->column);
	if (cursor->source != place.source || behind)
		start_source(cursor, place.source);
	if (!seek_line(cursor, place.line)) {
		*cursor = (struct excerpt_cursor){0};
		return false;
	}
	if (cursor->line_is_long)
		seek_column(cursor, column);
	return cursor->column > 1 || !at_line_end(cursor);
}

void excerpt_put(struct excerpt_cursor *cursor, struct place place, struct text *out)
{
	if (place.source == NULL || place.source->bytes == NULL || place.line == 0 || !seek_excerpt(cursor, place))
		return;
	struct excerpt_cursor ahead = *cursor;
	text_put(out, "  ");
	for (size_t shown = 0; shown < SHOWN_CHARACTERS && !at_line_end(&ahead); shown++) {
		put_character(ahead.source->bytes + ahead.offset, ahead.source->length - ahead.offset, out);
		step_character(&ahead);
	}
	uint32_t marked = place.column < ahead.column ? place.column : ahead.column;
	text_put(out, "\n  ");
	text_put_repeated(out, ' ', marked > cursor->column ? marked - cursor->column : 0);
	text_put(out, "^\n");
}
