// A growing string. Failure is sticky: after memory ran out, puts do nothing and `failed` stays set,
// so that a writer checks once, at the end.
#ifndef SCANLATCH_BASE_TEXT_H
#define SCANLATCH_BASE_TEXT_H

#include <stdarg.h>
#include <stdbool.h>
#include <stddef.h>

struct text {
	char *bytes;     // NUL-terminated once anything was put; owned by this struct
	size_t length;   // without the NUL
	size_t capacity;
	bool failed;     // memory ran out
};

// Frees the bytes and empties the text. Cannot fail.
void text_release(struct text *text);

// The bytes as a string, "" when empty. Valid until the next put.
const char *text_string(const struct text *text);

void text_put(struct text *text, const char *string);
void text_put_bytes(struct text *text, const char *bytes, size_t length);
void text_put_repeated(struct text *text, char byte, size_t count);

// Makes room for `more` further bytes, so that a large writer allocates once. False (and failed) when memory is out.
bool text_reserve(struct text *text, size_t more);

__attribute__((format(printf, 2, 3)))
void text_printf(struct text *text, const char *format, ...);
__attribute__((format(printf, 2, 0)))
void text_vprintf(struct text *text, const char *format, va_list arguments);

#endif
