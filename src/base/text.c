#include "base/text.h"

#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#define SMALLEST_CAPACITY 256

void text_release(struct text *text)
{
	free(text->bytes);
	*text = (struct text){0};
}

const char *text_string(const struct text *text)
{
	return text->bytes == NULL ? "" : text->bytes;
}

// The capacity that holds `needed` bytes: at least twice the old one, so that many small puts stay linear.
static size_t grown_capacity(size_t capacity, size_t needed)
{
	size_t grown = capacity > SIZE_MAX / 2 ? needed : capacity * 2;
	if (grown < SMALLEST_CAPACITY)
		grown = SMALLEST_CAPACITY;
	return grown < needed ? needed : grown;
}

bool text_reserve(struct text *text, size_t more)
{
	if (text->failed)
		return false;
	if (more < text->capacity - text->length)
		return true;
	char *bytes = NULL;
	if (more < SIZE_MAX - text->length) {
		size_t capacity = grown_capacity(text->capacity, text->length + more + 1);
		bytes = realloc(text->bytes, capacity);
		if (bytes != NULL) {
			bytes[text->length] = '\0';
			text->bytes = bytes;
			text->capacity = capacity;
		}
	}
	text->failed = bytes == NULL;
	return !text->failed;
}

void text_put_bytes(struct text *text, const char *bytes, size_t length)
{
	if (!text_reserve(text, length))
		return;
	if (length > 0)
		memcpy(text->bytes + text->length, bytes, length);
	text->length += length;
	text->bytes[text->length] = '\0';
}

void text_put(struct text *text, const char *string)
{
	text_put_bytes(text, string, strlen(string));
}

void text_put_repeated(struct text *text, char byte, size_t count)
{
	if (!text_reserve(text, count))
		return;
	memset(text->bytes + text->length, byte, count);
	text->length += count;
	text->bytes[text->length] = '\0';
}

void text_vprintf(struct text *text, const char *format, va_list arguments)
{
	// The first try goes into the room at hand; most strings are short and fit.
	if (!text_reserve(text, 64))
		return;
	va_list again;
	va_copy(again, arguments);
	size_t room = text->capacity - text->length;
	int length = vsnprintf(text->bytes + text->length, room, format, arguments);
	if (length >= 0 && (size_t)length >= room && text_reserve(text, (size_t)length))
		length = vsnprintf(text->bytes + text->length, (size_t)length + 1, format, again);
	va_end(again);
	if (length < 0)
		text->failed = true;
	if (!text->failed)
		text->length += (size_t)length;
	text->bytes[text->length] = '\0';
}

void text_printf(struct text *text, const char *format, ...)
{
	va_list arguments;
	va_start(arguments, format);
	text_vprintf(text, format, arguments);
	va_end(arguments);
}
