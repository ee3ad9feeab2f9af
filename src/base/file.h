// Reading whole files, and writing sets of files that appear whole or not at all.
#ifndef SCANLATCH_BASE_FILE_H
#define SCANLATCH_BASE_FILE_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

struct arena;

enum read_status { READ_OK, READ_SYSTEM, READ_TOO_LARGE, READ_MEMORY, READ_IS_DIRECTORY };

// Reads all of `path` ("-": standard input) into the arena, at most `limit` bytes; a NUL follows the bytes.
// On READ_SYSTEM errno says why. A directory is READ_IS_DIRECTORY.
enum read_status file_read(struct arena *arena, const char *path, size_t limit, char **bytes, size_t *length);

// One file to be written: `name` (no slash) in the directory of the set.
struct output_file {
	const char *name;
	const void *bytes;
	size_t length;
	bool kept; // out: a file of that name already held these bytes and was left alone
};

// What went wrong in file_write_all: the step ("create", "write", "flush", "close", "rename", "make directory"),
// the path (in `arena`) and errno.
struct write_failure {
	const char *step;
	const char *path;
	int error;
	bool begun; // files before it may be new already: a rename failed, or the flush of the directory after them
};

// Writes `count` files into `directory` (made, with its parents, if it is not there): each to a temporary file beside its
// final name, flushed (fsync) and closed; only when all temporaries are complete are they renamed, in order.
// On failure no temporary is left, and no file that was there before is changed unless a rename failed midway.
// Files that already hold the same bytes are left alone and marked kept. Returns false with *failure filled.
bool file_write_all(struct arena *arena, const char *directory, struct output_file *files, size_t count,
                    struct write_failure *failure);

// CRC-32 (ISO-HDLC, as zlib computes it) of `length` bytes, any size. Cannot fail.
uint32_t file_crc32(const void *bytes, size_t length);

#endif
