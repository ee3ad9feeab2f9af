// The conversion of an image file between binary and Intel HEX, and nothing else, to be timed against another
// program's.
//
//     hex_convert to-hex|to-binary FROM TO
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "base/file.h"
#include "base/text.h"
#include "image/codec.h"

#define FILE_LIMIT ((size_t)1 << 30)
#define CAPACITY ((size_t)16 << 20)

static int fail(const char *what)
{
	fprintf(stderr, "hex_convert: error: %s\n", what);
	return 1;
}

static int store(const char *path, const void *bytes, size_t length)
{
	FILE *file = fopen(path, "wb");
	if (file == NULL)
		return fail("cannot write");
	const int wrong = fwrite(bytes, 1, length, file) != length;
	return fclose(file) != 0 || wrong ? fail("cannot write") : 0;
}

static int to_hex(const char *bytes, size_t length, const char *path)
{
	struct text text = {0};
	hex_encode((const uint8_t *)bytes, length, 16, &text);
	const int status = text.failed ? fail("memory is out") : store(path, text.bytes, text.length);
	text_release(&text);
	return status;
}

static int to_binary(const char *bytes, size_t length, const char *path)
{
	struct hex_result result;
	uint8_t *image = malloc(CAPACITY);
	if (image == NULL)
		return fail("memory is out");
	memset(image, 0xFF, CAPACITY);
	const bool good = hex_decode(bytes, length, image, CAPACITY, &result) == HEX_OK;
	const int status = good ? store(path, image, CAPACITY) : fail("no Intel HEX");
	free(image);
	return status;
}

int main(int count, char **arguments)
{
	char *bytes;
	size_t length;
	if (count != 4)
		return fail("usage: hex_convert to-hex|to-binary FROM TO");
	struct arena *arena = arena_create();
	if (arena == NULL || file_read(arena, arguments[2], FILE_LIMIT, &bytes, &length) != READ_OK)
		return fail("cannot read");
	const bool encodes = strcmp(arguments[1], "to-hex") == 0;
	const int status = encodes ? to_hex(bytes, length, arguments[3]) : to_binary(bytes, length, arguments[3]);
	arena_destroy(arena);
	return status;
}
