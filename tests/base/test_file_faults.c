// Writing a set of files when the system refuses a step, at every single call in turn. The unit is compiled into this
// program with system calls that fail on demand, are interrupted, and write less than they are asked to.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <errno.h>
#include <fcntl.h>
#include <sys/stat.h>

#include "base/arena.h"
#include "base/file.h"
#include "scratch.h"

static struct {
	size_t calls_left;      // then one call fails
	bool has_failed;
	bool interrupt;         // every other call that may be is interrupted first
	bool interrupted;       // the last one was
	size_t most_bytes;      // that one read or write moves
	int directory_error;    // with which the flush of a directory fails; 0 if it does not
} faults;

static void no_faults(void)
{
	faults.calls_left = SIZE_MAX;
	faults.has_failed = faults.interrupt = faults.interrupted = false;
	faults.most_bytes = SIZE_MAX;
	faults.directory_error = 0;
}

static bool call_fails(void)
{
	if (faults.calls_left > 0) {
		faults.calls_left--;
		return false;
	}
	faults.calls_left = SIZE_MAX;
	faults.has_failed = true;
	errno = EIO;
	return true;
}

static bool call_is_interrupted(void)
{
	faults.interrupted = faults.interrupt && !faults.interrupted;
	if (faults.interrupted)
		errno = EINTR;
	return faults.interrupted;
}

static size_t at_most(size_t length)
{
	return length < faults.most_bytes ? length : faults.most_bytes;
}

static int faulty_mkdir(const char *path, mode_t mode)
{
	return call_fails() ? -1 : mkdir(path, mode);
}

static int faulty_open(const char *path, int flags)
{
	return call_fails() ? -1 : open(path, flags);
}

static int faulty_openat(int directory, const char *path, int flags, mode_t mode)
{
	return call_fails() ? -1 : openat(directory, path, flags, mode);
}

static ssize_t faulty_read(int descriptor, void *buffer, size_t length)
{
	return call_is_interrupted() || call_fails() ? -1 : read(descriptor, buffer, at_most(length));
}

static ssize_t faulty_write(int descriptor, const void *bytes, size_t length)
{
	return call_is_interrupted() || call_fails() ? -1 : write(descriptor, bytes, at_most(length));
}

static bool is_a_directory(int descriptor)
{
	struct stat status;
	return fstat(descriptor, &status) == 0 && S_ISDIR(status.st_mode);
}

static int faulty_fsync(int descriptor)
{
	if (faults.directory_error != 0 && is_a_directory(descriptor)) {
		errno = faults.directory_error;
		return -1;
	}
	return call_is_interrupted() || call_fails() ? -1 : fsync(descriptor);
}

// Fails as close does: the descriptor is gone all the same.
static int faulty_close(int descriptor)
{
	close(descriptor);
	return call_is_interrupted() || call_fails() ? -1 : 0;
}

static int faulty_renameat(int old_directory, const char *old_name, int new_directory, const char *new_name)
{
	return call_fails() ? -1 : renameat(old_directory, old_name, new_directory, new_name);
}

#define PICK_OPENAT(directory, path, flags, mode, ...) faulty_openat(directory, path, flags, mode)
#define mkdir(path, mode) faulty_mkdir(path, mode)
#define open(path, flags) faulty_open(path, flags)
#define openat(...) PICK_OPENAT(__VA_ARGS__, 0, 0)
#define read(descriptor, buffer, length) faulty_read(descriptor, buffer, length)
#define write(descriptor, bytes, length) faulty_write(descriptor, bytes, length)
#define fsync(descriptor) faulty_fsync(descriptor)
#define close(descriptor) faulty_close(descriptor)
#define renameat(old_directory, old_name, new_directory, new_name) \
	faulty_renameat(old_directory, old_name, new_directory, new_name)
#include "base/file_write.c"
#undef mkdir
#undef open
#undef openat
#undef read
#undef write
#undef fsync
#undef close
#undef renameat

static bool write_three(struct arena *arena, const char *directory, bool kept[3], struct write_failure *failure)
{
	struct output_file files[] = {{"a", "new a", 5, false}, {"same", "same", 4, false}, {"c", "new c", 5, false}};
	bool done = file_write_all(arena, directory, files, 3, failure);
	for (size_t index = 0; index < 3; index++)
		kept[index] = files[index].kept;
	return done;
}

static void put_old(const char *directory)
{
	put_file(directory, "a", "old a");
	put_file(directory, "same", "same");
	put_file(directory, "c", "old c");
}

static bool old_or_new(const char *directory, const char *name)
{
	char old_text[] = "old ?", new_text[] = "new ?";
	old_text[4] = new_text[4] = name[0];
	return file_holds_text(directory, name, old_text) || file_holds_text(directory, name, new_text);
}

// After a fault at any call: no temporary, whole files, and before the first rename nothing but old files.
static void assert_nothing_is_half_written(const char *directory, bool done, const struct write_failure *failure)
{
	assert_int_equal(count_entries(directory), 3);
	assert_true(file_holds_text(directory, "same", "same"));
	assert_true(old_or_new(directory, "a") && old_or_new(directory, "c"));
	if (done) {
		assert_true(file_holds_text(directory, "a", "new a") && file_holds_text(directory, "c", "new c"));
		return;
	}
	assert_int_equal(failure->error, EIO);
	bool after_renaming = strcmp(failure->step, "flush") == 0 && strcmp(failure->path, directory) == 0;
	if (!done)
		assert_int_equal(failure->begun, strcmp(failure->step, "rename") == 0 || after_renaming);
	if (strcmp(failure->step, "rename") != 0 && !after_renaming)
		assert_true(file_holds_text(directory, "a", "old a") && file_holds_text(directory, "c", "old c"));
	if (after_renaming)
		assert_true(file_holds_text(directory, "a", "new a") && file_holds_text(directory, "c", "new c"));
}

static void every_failing_call_leaves_whole_files(void **state)
{
	static const char *const steps[] = {"make directory", "create", "write", "flush", "close", "rename"};
	const char *scratch = *state;
	bool seen[sizeof(steps) / sizeof(steps[0])] = {false};
	bool all_calls_done = false;
	for (size_t allowed = 0; !all_calls_done; allowed++) {
		struct arena *arena = arena_create();
		struct write_failure failure = {0};
		bool kept[3];
		put_old(scratch);
		no_faults();
		faults.calls_left = allowed;
		bool done = write_three(arena, scratch, kept, &failure);
		all_calls_done = !faults.has_failed;
		no_faults();
		assert_nothing_is_half_written(scratch, done, &failure);
		assert_true(done || !(kept[0] || kept[1] || kept[2]));
		for (size_t step = 0; !done && step < sizeof(steps) / sizeof(steps[0]); step++)
			seen[step] = seen[step] || strcmp(steps[step], failure.step) == 0;
		arena_destroy(arena);
	}
	for (size_t step = 0; step < sizeof(steps) / sizeof(steps[0]); step++)
		assert_true(seen[step]);
}

static void a_failing_mkdir_names_the_directory(void **state)
{
	const char *scratch = *state;
	char path[SCRATCH_PATH_BYTES], expected[SCRATCH_PATH_BYTES];
	join_path(scratch, "one", expected);
	join_path(expected, "two", path);
	struct arena *arena = arena_create();
	struct write_failure failure = {0};
	bool kept[3];
	// Each parent on the way is tried first; those that are there do not mind.
	no_faults();
	size_t parents = 0;
	for (const char *next = scratch; *next != '\0'; next++)
		parents += *next != '/' && (next == scratch || next[-1] == '/');
	faults.calls_left = parents;
	assert_false(write_three(arena, path, kept, &failure));
	no_faults();
	assert_string_equal(failure.step, "make directory");
	assert_string_equal(failure.path, expected);
	assert_int_equal(failure.error, EIO);
	assert_int_equal(count_entries(scratch), 0);
	arena_destroy(arena);
}

static void interruptions_and_short_writes_do_no_harm(void **state)
{
	const char *scratch = *state;
	for (size_t most = 1; most < 8; most++) {
		struct arena *arena = arena_create();
		struct write_failure failure = {0};
		bool kept[3];
		put_old(scratch);
		no_faults();
		faults.interrupt = true;
		faults.most_bytes = most;
		bool done = write_three(arena, scratch, kept, &failure);
		no_faults();
		assert_true(done);
		assert_true(!kept[0] && kept[1] && !kept[2]);
		assert_nothing_is_half_written(scratch, done, &failure);
		arena_destroy(arena);
	}
}

// Then the files stand under their names, but may not outlive a loss of power.
static void a_directory_that_is_not_flushed_is_a_failure(void **state)
{
	const char *scratch = *state;
	struct arena *arena = arena_create();
	struct write_failure failure = {0};
	bool kept[3];
	put_old(scratch);
	no_faults();
	faults.directory_error = EIO;
	bool done = write_three(arena, scratch, kept, &failure);
	no_faults();
	assert_false(done);
	assert_string_equal(failure.step, "flush");
	assert_true(failure.begun);
	assert_string_equal(failure.path, scratch);
	assert_int_equal(failure.error, EIO);
	assert_nothing_is_half_written(scratch, done, &failure);
	// Nothing was renamed, nothing is to be flushed.
	faults.directory_error = EIO;
	done = write_three(arena, scratch, kept, &failure);
	no_faults();
	assert_true(done && kept[0] && kept[1] && kept[2]);
	arena_destroy(arena);
}

static void a_directory_that_cannot_be_flushed_is_none(void **state)
{
	const char *scratch = *state;
	struct arena *arena = arena_create();
	struct write_failure failure = {0};
	bool kept[3];
	put_old(scratch);
	no_faults();
	faults.directory_error = EINVAL;
	bool done = write_three(arena, scratch, kept, &failure);
	no_faults();
	assert_true(done);
	assert_nothing_is_half_written(scratch, done, &failure);
	arena_destroy(arena);
}

static void a_disk_that_takes_nothing_is_full(void **state)
{
	const char *scratch = *state;
	struct arena *arena = arena_create();
	struct write_failure failure = {0};
	struct output_file file = {"a", "new a", 5, false};
	no_faults();
	faults.most_bytes = 0;
	bool done = file_write_all(arena, scratch, &file, 1, &failure);
	no_faults();
	assert_false(done);
	assert_string_equal(failure.step, "write");
	assert_int_equal(failure.error, ENOSPC);
	assert_int_equal(count_entries(scratch), 0);
	arena_destroy(arena);
}

#define in_scratch(test) cmocka_unit_test_setup_teardown(test, scratch_setup, scratch_teardown)

int main(void)
{
	const struct CMUnitTest tests[] = {
		in_scratch(every_failing_call_leaves_whole_files),
		in_scratch(a_failing_mkdir_names_the_directory),
		in_scratch(interruptions_and_short_writes_do_no_harm),
		in_scratch(a_directory_that_is_not_flushed_is_a_failure),
		in_scratch(a_directory_that_cannot_be_flushed_is_none),
		in_scratch(a_disk_that_takes_nothing_is_full),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
