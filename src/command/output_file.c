#include <errno.h>
#include <fcntl.h>
#include <signal.h>
#include <stdio.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#include "base/arena.h"
#include "base/file.h"
#include "command/command.h"

void hold_ending_signals(sigset_t *before)
{
	static const int ending[] = {SIGINT, SIGTERM, SIGHUP, SIGQUIT};
	sigset_t waiting;
	sigemptyset(&waiting);
	for (size_t index = 0; index < sizeof ending / sizeof *ending; index++)
		sigaddset(&waiting, ending[index]);
	pthread_sigmask(SIG_BLOCK, &waiting, before);
}

// The folder of a path: "." without one, "/" of the root.
static const char *folder_of(struct arena *arena, const char *path)
{
	const char *slash = strrchr(path, '/');
	if (slash == NULL)
		return ".";
	return arena_copy(arena, path, slash == path ? 1 : (size_t)(slash - path));
}

static void report_failure(const struct write_failure *failure, const char *after)
{
	print_line(stderr, "scanlatch: cannot %s %s: %s%s", failure->step, failure->path, strerror(failure->error), after);
}

static bool write_bytes(int descriptor, const char *bytes, size_t length)
{
	while (length > 0) {
		const ssize_t written = write(descriptor, bytes, length);
		if (written < 0 && errno != EINTR)
			return false;
		bytes += written > 0 ? written : 0;
		length -= written > 0 ? (size_t)written : 0;
	}
	return true;
}

// A device or a pipe must not be replaced by a file: its bytes go into it.
static bool is_stream(const char *path)
{
	struct stat status;
	return stat(path, &status) == 0 && !S_ISREG(status.st_mode) && !S_ISDIR(status.st_mode);
}

static bool write_stream(const char *path, const char *bytes, size_t length)
{
	struct write_failure failure = {.step = "write", .path = path};
	const int descriptor = open(path, O_WRONLY | O_CLOEXEC);
	bool good = descriptor >= 0 && write_bytes(descriptor, bytes, length);
	failure.error = errno;
	if (descriptor >= 0 && close(descriptor) != 0 && good) {
		failure.error = errno;
		good = false;
	}
	if (!good)
		report_failure(&failure, "");
	return good;
}

static bool write_file(struct arena *arena, const char *path, const char *bytes, size_t length, bool *kept)
{
	const char *folder = folder_of(arena, path), *slash = strrchr(path, '/');
	struct output_file file = {slash != NULL ? slash + 1 : path, bytes, length, false};
	struct write_failure failure;
	if (folder == NULL) {
		memory_error();
		return false;
	}
	if (!file_write_all(arena, folder, &file, 1, &failure)) {
		report_failure(&failure, "; nothing was written");
		return false;
	}
	*kept = file.kept;
	return true;
}

bool write_output(const char *path, const char *bytes, size_t length, bool *kept)
{
	struct arena *arena = arena_create();
	sigset_t before;
	bool good = false;
	*kept = false;
	if (arena == NULL) {
		memory_error();
		return false;
	}
	hold_ending_signals(&before);
	good = is_stream(path) ? write_stream(path, bytes, length) : write_file(arena, path, bytes, length, kept);
	pthread_sigmask(SIG_SETMASK, &before, NULL);
	arena_destroy(arena);
	return good;
}

void print_written(const char *path, size_t length, bool kept)
{
	print_line(stdout, "%-5s %s (%zu bytes)", kept ? "kept" : "wrote", path, length);
}

int write_result(const char *path, const char *result)
{
	bool kept;
	if (!write_output(path, result, strlen(result), &kept))
		return EXIT_SYSTEM;
	print_written(path, strlen(result), kept);
	return EXIT_GOOD;
}
