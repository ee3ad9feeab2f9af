#include "plan/characters.h"

#include <stdio.h>
#include <string.h>

#define BYTE_ORDER_MARK 0xFEFF
#define QUOTED_CHARACTERS 32
#define LINE_SEPARATOR 0x2028
#define PARAGRAPH_SEPARATOR 0x2029

static uint8_t byte_at(const char *bytes, size_t offset)
{
	return (uint8_t)bytes[offset];
}

// Bytes of the character that begins with this one (RFC 3629, section 4); 0 if none does.
static size_t announced_length(uint8_t lead)
{
	if (lead < 0x80)
		return 1;
	if (lead >= 0xC2 && lead <= 0xDF)
		return 2;
	if (lead >= 0xE0 && lead <= 0xEF)
		return 3;
	return lead >= 0xF0 && lead <= 0xF4 ? 4 : 0;
}

// Reads one character of the `length` > 0 bytes and returns how many bytes it has; 0 if they do not begin with UTF-8.
static size_t decode(const char *bytes, size_t length, uint32_t *character)
{
	static const uint32_t least[] = {0, 0, 0x80, 0x800, 0x10000};
	static const uint8_t lead_bits[] = {0, 0x7F, 0x1F, 0x0F, 0x07};
	const size_t size = announced_length(byte_at(bytes, 0));

	if (size == 0 || size > length)
		return 0;
	uint32_t value = byte_at(bytes, 0) & lead_bits[size];
	for (size_t index = 1; index < size; index++) {
		if ((byte_at(bytes, index) & 0xC0) != 0x80)
			return 0;
		value = value << 6 | (byte_at(bytes, index) & 0x3F);
	}
	// Overlong forms, surrogates, and what lies beyond Unicode.
	if (value < least[size] || (value >= 0xD800 && value <= 0xDFFF) || value > 0x10FFFF)
		return 0;
	*character = value;
	return size;
}

// CR is judged apart. U+2028, U+2029 and U+0085 end a line for YAML 1.1 (section 4.2) but not for most editors, so that
// a comment could hide a key.
static bool is_forbidden(uint32_t character)
{
	return (character < 0x20 && character != '\t' && character != '\n' && character != '\r') ||
	       (character >= 0x7F && character <= 0x9F) || character == LINE_SEPARATOR ||
	       character == PARAGRAPH_SEPARATOR || character == BYTE_ORDER_MARK || character == 0xFFFE ||
	       character == 0xFFFF;
}

static bool is_stray_return(const char *bytes, size_t length)
{
	return bytes[0] == '\r' && (length < 2 || bytes[1] != '\n');
}

bool characters_forbidden(const char *bytes, size_t length, uint32_t *character)
{
	for (size_t offset = 0; offset < length;) {
		uint32_t found = 0;
		const size_t size = decode(bytes + offset, length - offset, &found);
		if (size == 0 || is_forbidden(found) || is_stray_return(bytes + offset, length - offset)) {
			*character = found;
			return true;
		}
		offset += size;
	}
	return false;
}

size_t character_bytes(const char *bytes, size_t length)
{
	size_t size = length > 0 ? 1 : 0;

	while (size < length && ((uint8_t)bytes[size] & 0xC0) == 0x80)
		size++;
	return size;
}

const char *quotation(char buffer[QUOTATION_BYTES], const char *bytes, size_t length)
{
	size_t shown = 0;

	for (size_t count = 0; count < QUOTED_CHARACTERS && shown < length; count++)
		shown += character_bytes(bytes + shown, length - shown);
	snprintf(buffer, QUOTATION_BYTES, "'%.*s'%s", (int)shown, bytes, shown < length ? "..." : "");
	return buffer;
}

// Bytes of the first characters of a string, no more than so many. Bytes that begin no character count as one each.
static size_t bytes_of_first(const char *text, size_t characters)
{
	size_t bytes = 0;

	for (; characters > 0 && text[bytes] != '\0'; characters--) {
		uint32_t found;
		const size_t size = decode(text + bytes, strnlen(text + bytes, 4), &found);
		bytes += size > 0 ? size : 1;
	}
	return bytes;
}

const char *shortened(char buffer[SHORT_BYTES], const char *text)
{
	const size_t bytes = bytes_of_first(text, SHORT_CHARACTERS);

	if (text[bytes] == '\0')
		return text;
	snprintf(buffer, SHORT_BYTES, "%.*s...", (int)bytes, text);
	return buffer;
}

static bool begins_with(const struct source *source, const char *bytes, size_t length)
{
	return source->length >= length && memcmp(source->bytes, bytes, length) == 0;
}

struct position position_start(const struct source *source)
{
	const bool marked = begins_with(source, "\xEF\xBB\xBF", 3);

	return (struct position){.source = source, .offset = marked ? 3 : 0, .line = 1, .column = 1};
}

char position_byte(const struct position *position)
{
	return position->offset < position->source->length ? position->source->bytes[position->offset] : '\0';
}

struct place position_place(const struct position *position)
{
	return (struct place){position->source, position->line, position->column};
}

// Moves over one character of `size` bytes.
static void advance(struct position *position, size_t size)
{
	const bool ends_line = position_byte(position) == '\n';

	position->offset += size;
	position->index++;
	position->column = ends_line ? 1 : position->column + 1;
	position->line += ends_line ? 1 : 0;
}

void position_step(struct position *position)
{
	const size_t size = character_bytes(position->source->bytes + position->offset,
	                                    position->source->length - position->offset);

	if (size > 0)
		advance(position, size);
}

void position_seek(struct position *position, size_t index)
{
	if (index < position->index)
		*position = position_start(position->source);
	while (position->index < index && position->offset < position->source->length)
		position_step(position);
}

static bool is_letter_pair(const char *bytes, size_t letter, size_t nul)
{
	return byte_at(bytes, letter) >= 0x09 && byte_at(bytes, letter) < 0x7F && bytes[nul] == '\0';
}

// The byte order marks of UTF-16 and UTF-32 (Unicode 15.0, table 2-4), or two ASCII characters in UTF-16.
static bool is_wide_encoding(const struct source *source)
{
	const char *const bytes = source->bytes;

	if (begins_with(source, "\xFF\xFE", 2) || begins_with(source, "\xFE\xFF", 2) ||
	    begins_with(source, "\0\0\xFE\xFF", 4))
		return true;
	return source->length >= 4 && ((is_letter_pair(bytes, 0, 1) && is_letter_pair(bytes, 2, 3)) ||
	                               (is_letter_pair(bytes, 1, 0) && is_letter_pair(bytes, 3, 2)));
}

static void diagnose_forbidden(struct diagnostics *diagnostics, struct place place, uint32_t character)
{
	if (character == 0) {
		diagnose(diagnostics, RULE_FILE_BINARY, place, "wanted text, found a NUL byte");
	} else if (character == '\r') {
		diagnose(diagnostics, RULE_FILE_BINARY, place, "wanted a line feed, found a carriage return without one");
		diagnose_hint(diagnostics, "save the file with line ends LF or CR LF");
	} else if (character == LINE_SEPARATOR || character == PARAGRAPH_SEPARATOR || character == 0x85) {
		diagnose(diagnostics, RULE_FILE_BINARY, place, "wanted LF or CR LF as line ends, found the line end U+%04X",
		         (unsigned)character);
	} else if (character == BYTE_ORDER_MARK) {
		diagnose(diagnostics, RULE_FILE_BINARY, place, "wanted text, found a byte order mark inside of it");
	} else if (character >= 0xFFFE) {
		diagnose(diagnostics, RULE_FILE_BINARY, place, "wanted text, found U+%04X, which is no character",
		         (unsigned)character);
	} else {
		diagnose(diagnostics, RULE_FILE_BINARY, place, "wanted text, found the control character U+%04X",
		         (unsigned)character);
	}
}

bool characters_check(const struct source *source, struct diagnostics *diagnostics)
{
	struct position position = position_start(source);

	if (is_wide_encoding(source)) {
		diagnose(diagnostics, RULE_FILE_ENCODING, (struct place){.source = source},
		         "wanted UTF-8, found what looks like UTF-16 or UTF-32");
		diagnose_hint(diagnostics, "save the file as UTF-8");
		return false;
	}
	while (position.offset < source->length) {
		const char *const bytes = source->bytes + position.offset;
		const size_t length = source->length - position.offset;
		uint32_t character = 0;
		const size_t size = decode(bytes, length, &character);
		if (size == 0) {
			diagnose(diagnostics, RULE_FILE_ENCODING, position_place(&position),
			         "wanted UTF-8, found byte 0x%02x, which begins no character here",
			         (unsigned)byte_at(bytes, 0));
			diagnose_hint(diagnostics, "save the file as UTF-8");
			return false;
		}
		if (is_forbidden(character) || is_stray_return(bytes, length)) {
			diagnose_forbidden(diagnostics, position_place(&position), character);
			return false;
		}
		advance(&position, size);
	}
	return true;
}
