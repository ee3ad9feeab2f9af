#include "base/file.h"

#include <errno.h>
#include <fcntl.h>
#include <stdio.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#include "base/arena.h"

#define COMPARED_BYTES ((size_t)16 * 1024)
// Names a crashed run with the same process number may have left behind.
#define TEMPORARY_NAMES_TRIED 100
#define TEMPORARY_NAME_BYTES 256

// What becomes of one file of the set, kept apart from the caller's array until all has gone well.
struct pending {
	bool kept;
	bool made;                            // a temporary exists
	char temporary[TEMPORARY_NAME_BYTES];
};

struct writing {
	struct arena *arena;
	const char *directory;
	int descriptor; // of the directory
	struct pending *pending;
};

// Records the failure of a step at a path, with errno's reason. Always false, to be returned.
static bool report(struct write_failure *failure, const char *step, const char *path)
{
	*failure = (struct write_failure){.step = step, .path = path, .error = errno};
	return false;
}

static bool report_file(const struct writing *writing, struct write_failure *failure, const char *step,
                        const char *name)
{
	int reason = errno;
	size_t length = strlen(writing->directory);
	const char *slash = length > 0 && writing->directory[length - 1] == '/' ? "" : "/";
	const char *path = arena_format(writing->arena, "%s%s%s", writing->directory, slash, name);
	errno = reason;
	return report(failure, step, path == NULL ? writing->directory : path);
}

static bool is_directory(const char *path)
{
	struct stat status;
	return stat(path, &status) == 0 && S_ISDIR(status.st_mode);
}

// Makes the directory and its parents. On failure errno says why, and *failed is the path (in the arena).
static bool make_directories(struct arena *arena, const char *directory, const char **failed)
{
	char *path = arena_copy(arena, directory, strlen(directory));
	*failed = directory;
	if (path == NULL) {
		errno = ENOMEM;
		return false;
	}
	*failed = path;
	for (char *end = path; *end != '\0';) {
		end += strspn(end, "/");
		end += strcspn(end, "/");
		char ended_by = *end;
		*end = '\0';
		// A parent that is there may refuse mkdir with another reason than EEXIST: it may be on a read-only mount.
		if (mkdir(path, 0777) != 0) {
			int reason = errno;
			if (!is_directory(path)) {
				errno = reason == EEXIST ? ENOTDIR : reason;
				return false;
			}
		}
		*end = ended_by;
	}
	return true;
}

static bool open_directory(struct writing *writing, struct write_failure *failure)
{
	const char *path = writing->directory;
	if (!is_directory(path) && !make_directories(writing->arena, writing->directory, &path))
		return report(failure, "make directory", path);
	writing->descriptor = open(writing->directory, O_RDONLY | O_DIRECTORY | O_CLOEXEC);
	return writing->descriptor >= 0 || report(failure, "make directory", path);
}

// Reads up to `size` bytes; fewer only at the file's end. -1 on error.
static ssize_t read_block(int descriptor, char *buffer, size_t size)
{
	size_t used = 0;
	while (used < size) {
		ssize_t got = read(descriptor, buffer + used, size - used);
		if (got == 0)
			break;
		if (got > 0)
			used += (size_t)got;
		else if (errno != EINTR)
			return -1;
	}
	return (ssize_t)used;
}

static bool holds_bytes(int descriptor, const char *bytes, size_t length)
{
	char buffer[COMPARED_BYTES];
	for (size_t offset = 0; offset < length;) {
		size_t part = length - offset < sizeof(buffer) ? length - offset : sizeof(buffer);
		if (read_block(descriptor, buffer, part) != (ssize_t)part || memcmp(buffer, bytes + offset, part) != 0)
			return false;
		offset += part;
	}
	return true;
}

// A file that cannot be read counts as different: it is then replaced.
static bool is_same(int directory, const struct output_file *file)
{
	// O_NONBLOCK, so that a pipe of that name cannot hold us up.
	int descriptor = openat(directory, file->name, O_RDONLY | O_CLOEXEC | O_NOCTTY | O_NONBLOCK);
	if (descriptor < 0)
		return false;
	struct stat status;
	bool same = fstat(descriptor, &status) == 0 && S_ISREG(status.st_mode) &&
	            (uintmax_t)status.st_size == file->length && holds_bytes(descriptor, file->bytes, file->length);
	close(descriptor);
	return same;
}

// A rename onto a directory would fail only after others had been done; so it is refused beforehand.
static bool is_taken_by_directory(int directory, const char *name)
{
	struct stat status;
	if (fstatat(directory, name, &status, AT_SYMLINK_NOFOLLOW) != 0 || !S_ISDIR(status.st_mode))
		return false;
	errno = EISDIR;
	return true;
}

static bool is_plain_name(const char *name)
{
	bool is_plain = name[0] != '\0' && strchr(name, '/') == NULL && strcmp(name, ".") != 0 && strcmp(name, "..") != 0;
	if (!is_plain)
		errno = EINVAL;
	return is_plain;
}

// Opens a file that was not there, and leaves its name in `pending`. -1 on error.
static int create_temporary(int directory, const char *name, struct pending *pending)
{
	int descriptor = -1;
	errno = EEXIST;
	for (int attempt = 0; descriptor < 0 && errno == EEXIST && attempt < TEMPORARY_NAMES_TRIED; attempt++) {
		// A long name is cut here, lest the temporary's is too long for the file system.
		snprintf(pending->temporary, sizeof(pending->temporary), ".%.200s.tmp-%ld-%d", name, (long)getpid(), attempt);
		descriptor = openat(directory, pending->temporary, O_WRONLY | O_CREAT | O_EXCL | O_CLOEXEC, 0666);
	}
	pending->made = descriptor >= 0;
	return descriptor;
}

static bool write_bytes(int descriptor, const char *bytes, size_t length)
{
	while (length > 0) {
		ssize_t put = write(descriptor, bytes, length);
		if (put < 0 && errno == EINTR)
			continue;
		if (put <= 0) {
			// A device that takes nothing and gives no reason is full.
			if (put == 0)
				errno = ENOSPC;
			return false;
		}
		bytes += put;
		length -= (size_t)put;
	}
	return true;
}

static bool flush(int descriptor)
{
	int status;
	do
		status = fsync(descriptor);
	while (status != 0 && errno == EINTR);
	return status == 0;
}

// Interrupted or not, the descriptor is gone on the systems at hand, and the bytes have been flushed before.
static bool close_flushed(int descriptor)
{
	return close(descriptor) == 0 || errno == EINTR;
}

// NULL, or the step that failed, with errno's reason. Always closes the descriptor.
static const char *fill_temporary(int descriptor, const struct output_file *file)
{
	const char *step = NULL;
	if (!write_bytes(descriptor, file->bytes, file->length))
		step = "write";
	else if (!flush(descriptor))
		step = "flush";
	if (step == NULL)
		return close_flushed(descriptor) ? NULL : "close";
	int reason = errno;
	close(descriptor);
	errno = reason;
	return step;
}

static bool prepare(const struct writing *writing, const struct output_file *file, struct pending *pending,
                    struct write_failure *failure)
{
	if (!is_plain_name(file->name) || is_taken_by_directory(writing->descriptor, file->name))
		return report_file(writing, failure, "create", file->name);
	pending->kept = is_same(writing->descriptor, file);
	if (pending->kept)
		return true;
	int descriptor = create_temporary(writing->descriptor, file->name, pending);
	if (descriptor < 0)
		return report_file(writing, failure, "create", file->name);
	const char *step = fill_temporary(descriptor, file);
	return step == NULL || report_file(writing, failure, step, file->name);
}

static bool rename_all(const struct writing *writing, const struct output_file *files, size_t count,
                       struct write_failure *failure)
{
	bool renamed = false;
	for (size_t index = 0; index < count; index++) {
		struct pending *pending = &writing->pending[index];
		if (!pending->made)
			continue;
		if (renameat(writing->descriptor, pending->temporary, writing->descriptor, files[index].name) != 0) {
			report_file(writing, failure, "rename", files[index].name);
			failure->begun = true;
			return false;
		}
		pending->made = false;
		renamed = true;
	}
	// Some file systems cannot flush a directory, and say so with EINVAL; the renames are as safe there as they get.
	if (!renamed || flush(writing->descriptor) || errno == EINVAL)
		return true;
	report(failure, "flush", writing->directory);
	failure->begun = true;
	return false;
}

static bool write_set(const struct writing *writing, const struct output_file *files, size_t count,
                      struct write_failure *failure)
{
	for (size_t index = 0; index < count; index++)
		if (!prepare(writing, &files[index], &writing->pending[index], failure))
			return false;
	return rename_all(writing, files, count, failure);
}

static void remove_temporaries(const struct writing *writing, size_t count)
{
	for (size_t index = 0; index < count; index++)
		if (writing->pending[index].made)
			unlinkat(writing->descriptor, writing->pending[index].temporary, 0);
}

bool file_write_all(struct arena *arena, const char *directory, struct output_file *files, size_t count,
                    struct write_failure *failure)
{
	struct writing writing = {
		.arena = arena,
		.directory = arena_copy(arena, directory, strlen(directory)),
		.pending = arena_array(arena, count, sizeof(struct pending)),
	};
	if (writing.directory == NULL || writing.pending == NULL) {
		errno = ENOMEM;
		return report(failure, "create", directory);
	}
	if (!open_directory(&writing, failure))
		return false;
	bool done = write_set(&writing, files, count, failure);
	remove_temporaries(&writing, count);
	close(writing.descriptor);
	for (size_t index = 0; done && index < count; index++)
		files[index].kept = writing.pending[index].kept;
	return done;
}
