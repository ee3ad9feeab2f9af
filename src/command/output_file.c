#include <errno.h>
#include <signal.h>
#include <stdio.h>
#include <string.h>

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

int write_result(const char *path, const char *result)
{
	struct arena *arena = arena_create();
	const char *folder = arena != NULL ? folder_of(arena, path) : NULL;
	const char *slash = strrchr(path, '/');
	struct output_file file = {slash != NULL ? slash + 1 : path, result, strlen(result), false};
	struct write_failure failure;
	sigset_t before;
	int code = EXIT_GOOD;
	hold_ending_signals(&before);
	if (folder == NULL) {
		code = memory_error();
	} else if (file_write_all(arena, folder, &file, 1, &failure)) {
		printf("%-5s %s (%zu bytes)\n", file.kept ? "kept" : "wrote", path, file.length);
	} else {
		fprintf(stderr, "scanlatch: cannot %s %s: %s; nothing was written\n", failure.step, failure.path, strerror(failure.error));
		code = EXIT_SYSTEM;
	}
	pthread_sigmask(SIG_SETMASK, &before, NULL);
	arena_destroy(arena);
	return code;
}
