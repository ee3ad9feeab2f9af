#include "base/file.h"

#include <errno.h>
#include <fcntl.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>
#include <zlib.h>

#include "base/arena.h"

#define FIRST_READ_BYTES ((size_t)64 * 1024)

struct growing {
	char *bytes;
	size_t used;
	size_t capacity;
};

// Twice the room, but never more than `most`.
static bool grow(struct arena *arena, struct growing *buffer, size_t most)
{
	size_t capacity = buffer->capacity > most / 2 ? most : buffer->capacity * 2;
	char *bytes = arena_alloc(arena, capacity);
	if (bytes == NULL)
		return false;
	memcpy(bytes, buffer->bytes, buffer->used);
	buffer->bytes = bytes;
	buffer->capacity = capacity;
	return true;
}

// Reads to the end of the file. The buffer always has room for one byte more than `limit`, which tells "too large" and
// later holds the NUL.
static enum read_status read_to_end(struct arena *arena, int descriptor, size_t limit, struct growing *buffer)
{
	for (;;) {
		if (buffer->used > limit)
			return READ_TOO_LARGE;
		if (buffer->used == buffer->capacity && !grow(arena, buffer, limit + 1))
			return READ_MEMORY;
		ssize_t got = read(descriptor, buffer->bytes + buffer->used, buffer->capacity - buffer->used);
		if (got == 0)
			return READ_OK;
		if (got > 0)
			buffer->used += (size_t)got;
		else if (errno != EINTR)
			return errno == EISDIR ? READ_IS_DIRECTORY : READ_SYSTEM;
	}
}

static enum read_status read_descriptor(struct arena *arena, int descriptor, size_t limit, struct growing *buffer)
{
	struct stat status;
	if (fstat(descriptor, &status) != 0)
		return READ_SYSTEM;
	if (S_ISDIR(status.st_mode))
		return READ_IS_DIRECTORY;
	size_t expected = FIRST_READ_BYTES;
	if (S_ISREG(status.st_mode) && status.st_size > 0) {
		if ((uintmax_t)status.st_size > limit)
			return READ_TOO_LARGE;
		// One byte more, so that the end is met without growing.
		expected = (size_t)status.st_size + 1;
	}
	buffer->capacity = expected > limit + 1 ? limit + 1 : expected;
	buffer->bytes = arena_alloc(arena, buffer->capacity);
	return buffer->bytes == NULL ? READ_MEMORY : read_to_end(arena, descriptor, limit, buffer);
}

enum read_status file_read(struct arena *arena, const char *path, size_t limit, char **bytes, size_t *length)
{
	bool is_standard_input = strcmp(path, "-") == 0;
	int descriptor = is_standard_input ? STDIN_FILENO : open(path, O_RDONLY | O_CLOEXEC | O_NOCTTY);
	if (descriptor < 0)
		return READ_SYSTEM;
	struct growing buffer = {0};
	size_t bounded = limit > SIZE_MAX / 2 ? SIZE_MAX / 2 : limit;
	enum read_status status = read_descriptor(arena, descriptor, bounded, &buffer);
	int reason = errno;
	if (!is_standard_input)
		close(descriptor);
	errno = reason;
	if (status != READ_OK)
		return status;
	buffer.bytes[buffer.used] = '\0';
	*bytes = buffer.bytes;
	*length = buffer.used;
	return READ_OK;
}

uint32_t file_crc32(const void *bytes, size_t length)
{
	// zlib counts in unsigned int.
	const size_t most = (size_t)1 << 30;
	const unsigned char *next = bytes;
	uLong crc = crc32(0, NULL, 0);
	while (length > 0) {
		size_t part = length < most ? length : most;
		crc = crc32(crc, next, (uInt)part);
		next += part;
		length -= part;
	}
	return (uint32_t)crc;
}
