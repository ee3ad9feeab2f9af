#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <errno.h>
#include <fcntl.h>
#include <signal.h>
#include <sys/resource.h>
#include <sys/wait.h>

#include "base/arena.h"
#include "base/file.h"
#include "scratch.h"

// Reads "name" of the scratch directory with a limit, expecting `text`.
static void assert_reads(const char *scratch, const char *name, size_t limit, const char *text)
{
	char path[SCRATCH_PATH_BYTES];
	struct arena *arena = arena_create();
	char *bytes = NULL;
	size_t length = 0;
	assert_int_equal(file_read(arena, join_path(scratch, name, path), limit, &bytes, &length), READ_OK);
	assert_int_equal(length, strlen(text));
	assert_string_equal(bytes, text);
	arena_destroy(arena);
}

static void assert_read_fails(const char *path, size_t limit, enum read_status expected)
{
	struct arena *arena = arena_create();
	char untouched;
	char *bytes = &untouched;
	size_t length = 99;
	assert_int_equal(file_read(arena, path, limit, &bytes, &length), expected);
	int reason = errno;
	assert_ptr_equal(bytes, &untouched);
	assert_int_equal(length, 99);
	arena_destroy(arena);
	errno = reason;
}

static void a_file_is_read_whole(void **state)
{
	const char *scratch = *state;
	put_file(scratch, "plan", "dot: 1 tick\n");
	assert_reads(scratch, "plan", 1000, "dot: 1 tick\n");
	assert_reads(scratch, "plan", 12, "dot: 1 tick\n");
	assert_reads(scratch, "plan", SIZE_MAX, "dot: 1 tick\n");
	put_file(scratch, "empty", "");
	assert_reads(scratch, "empty", 10, "");
	assert_reads(scratch, "empty", 0, "");
}

static void what_cannot_be_read_is_told_apart(void **state)
{
	const char *scratch = *state;
	char path[SCRATCH_PATH_BYTES];
	put_file(scratch, "plan", "dot: 1 tick\n");
	assert_read_fails(join_path(scratch, "plan", path), 11, READ_TOO_LARGE);
	assert_read_fails(path, 0, READ_TOO_LARGE);
	assert_read_fails(scratch, 100, READ_IS_DIRECTORY);
	assert_read_fails(join_path(scratch, "nowhere", path), 100, READ_SYSTEM);
	assert_int_equal(errno, ENOENT);
	assert_read_fails(join_path(scratch, "plan/below", path), 100, READ_SYSTEM);
	assert_int_equal(errno, ENOTDIR);
}

// A child writes `length` bytes 0, 1, … 250, 0, … into a pipe that becomes our standard input.
static pid_t feed_standard_input(size_t length)
{
	int ends[2];
	assert_int_equal(pipe(ends), 0);
	pid_t child = fork();
	assert_true(child >= 0);
	if (child == 0) {
		close(ends[0]);
		FILE *file = fdopen(ends[1], "wb");
		for (size_t index = 0; file != NULL && index < length; index++)
			fputc((int)(index % 251), file);
		_exit(file == NULL || fclose(file) != 0);
	}
	close(ends[1]);
	assert_int_equal(dup2(ends[0], STDIN_FILENO), STDIN_FILENO);
	close(ends[0]);
	return child;
}

static void standard_input_is_read_to_its_end(void **state)
{
	(void)state;
	const size_t sizes[] = {0, 1, 65535, 65536, 65537, 300000};
	int kept = dup(STDIN_FILENO);
	for (size_t index = 0; index < sizeof(sizes) / sizeof(sizes[0]); index++) {
		struct arena *arena = arena_create();
		char *bytes = NULL;
		size_t length = 0;
		pid_t child = feed_standard_input(sizes[index]);
		assert_int_equal(file_read(arena, "-", 300000, &bytes, &length), READ_OK);
		assert_int_equal(waitpid(child, NULL, 0), child);
		assert_int_equal(length, sizes[index]);
		for (size_t offset = 0; offset < length; offset++)
			assert_int_equal((uint8_t)bytes[offset], offset % 251);
		assert_int_equal(bytes[length], 0);
		arena_destroy(arena);
	}
	pid_t child = feed_standard_input(2000);
	assert_read_fails("-", 1999, READ_TOO_LARGE);
	assert_int_equal(waitpid(child, NULL, 0), child);
	assert_int_equal(dup2(kept, STDIN_FILENO), STDIN_FILENO);
	close(kept);
}

// Writes two files a.bin and b.bin into scratch/name.
static bool write_two(const char *scratch, const char *name, const char *first, const char *second, bool kept[2],
                      struct write_failure *failure)
{
	char path[SCRATCH_PATH_BYTES];
	struct arena *arena = arena_create();
	struct output_file files[] = {{"a.bin", first, strlen(first), kept[0]}, {"b.bin", second, strlen(second), kept[1]}};
	bool done = file_write_all(arena, join_path(scratch, name, path), files, 2, failure);
	kept[0] = files[0].kept;
	kept[1] = files[1].kept;
	if (!done) {
		assert_non_null(failure->path);
		assert_int_equal(strncmp(failure->path, scratch, strlen(scratch)), 0);
		failure->path = NULL;
	}
	arena_destroy(arena);
	return done;
}

static void assert_two_fail(const char *scratch, const char *name, const char *step, int error)
{
	bool kept[2] = {true, false};
	struct write_failure failure = {0};
	assert_false(write_two(scratch, name, "new a", "new b", kept, &failure));
	assert_string_equal(failure.step, step);
	assert_int_equal(failure.error, error);
	assert_true(kept[0] && !kept[1]);
}

static void a_set_is_written_and_its_directories_made(void **state)
{
	const char *scratch = *state;
	char path[SCRATCH_PATH_BYTES];
	bool kept[2] = {true, true};
	struct write_failure failure = {0};
	assert_true(write_two(scratch, "deep//er/out/", "one", "", kept, &failure));
	assert_false(kept[0] || kept[1]);
	join_path(scratch, "deep/er/out", path);
	assert_int_equal(count_entries(path), 2);
	assert_true(file_holds_text(path, "a.bin", "one"));
	assert_true(file_holds_text(path, "b.bin", ""));
	assert_null(failure.step);
}

static void an_empty_set_makes_the_directory(void **state)
{
	const char *scratch = *state;
	char path[SCRATCH_PATH_BYTES];
	struct arena *arena = arena_create();
	struct write_failure failure = {0};
	assert_true(file_write_all(arena, join_path(scratch, "out", path), NULL, 0, &failure));
	assert_int_equal(count_entries(path), 0);
	arena_destroy(arena);
}

static void files_with_the_same_bytes_are_left_alone(void **state)
{
	const char *scratch = *state;
	char path[SCRATCH_PATH_BYTES];
	struct stat before, after;
	bool kept[2] = {false, false};
	struct write_failure failure = {0};
	assert_true(write_two(scratch, ".", "same", "old", kept, &failure));
	assert_int_equal(stat(join_path(scratch, "a.bin", path), &before), 0);
	assert_true(write_two(scratch, ".", "same", "new", kept, &failure));
	assert_true(kept[0] && !kept[1]);
	assert_int_equal(stat(path, &after), 0);
	assert_true(before.st_ino == after.st_ino);
	assert_true(before.st_mtim.tv_sec == after.st_mtim.tv_sec && before.st_mtim.tv_nsec == after.st_mtim.tv_nsec);
	assert_true(file_holds_text(scratch, "b.bin", "new"));
	// Same length, a last byte that differs; then a file that only begins with the bytes.
	assert_true(write_two(scratch, ".", "samt", "new and more", kept, &failure));
	assert_true(!kept[0] && !kept[1]);
	assert_true(write_two(scratch, ".", "samt", "new", kept, &failure));
	assert_true(kept[0] && !kept[1]);
	assert_true(file_holds_text(scratch, "b.bin", "new"));
	assert_int_equal(count_entries(scratch), 2);
}

static void large_files_are_compared_to_the_last_byte(void **state)
{
	const char *scratch = *state;
	const size_t length = 3 * 1024 * 1024 + 5;
	char *bytes = malloc(length);
	assert_non_null(bytes);
	memset(bytes, 0x5A, length);
	struct arena *arena = arena_create();
	struct write_failure failure = {0};
	struct output_file file = {"rom", bytes, length, true};
	assert_true(file_write_all(arena, scratch, &file, 1, &failure));
	assert_false(file.kept);
	assert_true(file_holds(scratch, "rom", bytes, length));
	assert_true(file_write_all(arena, scratch, &file, 1, &failure));
	assert_true(file.kept);
	bytes[length - 1] = 0x5B;
	assert_true(file_write_all(arena, scratch, &file, 1, &failure));
	assert_false(file.kept);
	assert_true(file_holds(scratch, "rom", bytes, length));
	arena_destroy(arena);
	free(bytes);
}

static void names_of_any_allowed_length_work(void **state)
{
	const char *scratch = *state;
	char name[256];
	memset(name, 'n', 255);
	name[255] = '\0';
	struct arena *arena = arena_create();
	struct write_failure failure = {0};
	struct output_file file = {name, "x", 1, false};
	assert_true(file_write_all(arena, scratch, &file, 1, &failure));
	assert_true(file_holds_text(scratch, name, "x"));
	assert_int_equal(count_entries(scratch), 1);
	arena_destroy(arena);
}

static void names_that_leave_the_directory_are_refused(void **state)
{
	const char *scratch = *state;
	static const char *const names[] = {"", ".", "..", "a/b", "../b", "/b"};
	for (size_t index = 0; index < sizeof(names) / sizeof(names[0]); index++) {
		struct arena *arena = arena_create();
		struct write_failure failure = {0};
		struct output_file files[] = {{"first", "x", 1, false}, {names[index], "x", 1, false}};
		assert_false(file_write_all(arena, scratch, files, 2, &failure));
		assert_string_equal(failure.step, "create");
		assert_int_equal(failure.error, EINVAL);
		assert_int_equal(count_entries(scratch), 0);
		arena_destroy(arena);
	}
}

static void leftovers_of_a_crash_are_no_hindrance(void **state)
{
	const char *scratch = *state;
	char stale[64];
	snprintf(stale, sizeof(stale), ".a.bin.tmp-%ld-0", (long)getpid());
	put_file(scratch, stale, "stale");
	bool kept[2] = {false, false};
	struct write_failure failure = {0};
	assert_true(write_two(scratch, ".", "one", "two", kept, &failure));
	assert_true(file_holds_text(scratch, "a.bin", "one"));
	assert_true(file_holds_text(scratch, stale, "stale"));
	assert_int_equal(count_entries(scratch), 3);
}

static void a_directory_in_a_files_place_stops_the_set(void **state)
{
	const char *scratch = *state;
	char path[SCRATCH_PATH_BYTES];
	put_file(scratch, "a.bin", "old a");
	assert_int_equal(mkdir(join_path(scratch, "b.bin", path), 0777), 0);
	assert_two_fail(scratch, ".", "create", EISDIR);
	assert_true(file_holds_text(scratch, "a.bin", "old a"));
	assert_int_equal(count_entries(scratch), 2);
}

static void a_file_in_the_directorys_place_stops_the_set(void **state)
{
	const char *scratch = *state;
	put_file(scratch, "out", "a file");
	assert_two_fail(scratch, "out", "make directory", ENOTDIR);
	assert_two_fail(scratch, "out/below", "make directory", ENOTDIR);
	assert_true(file_holds_text(scratch, "out", "a file"));
	assert_int_equal(count_entries(scratch), 1);
}

static void links_and_pipes_are_replaced_not_followed(void **state)
{
	const char *scratch = *state;
	char path[SCRATCH_PATH_BYTES];
	struct stat status;
	bool kept[2] = {false, false};
	struct write_failure failure = {0};
	put_file(scratch, "elsewhere", "precious");
	assert_int_equal(symlink("elsewhere", join_path(scratch, "a.bin", path)), 0);
	assert_int_equal(mkfifo(join_path(scratch, "b.bin", path), 0666), 0);
	assert_true(write_two(scratch, ".", "one", "two", kept, &failure));
	assert_true(file_holds_text(scratch, "elsewhere", "precious"));
	assert_true(file_holds_text(scratch, "a.bin", "one"));
	assert_int_equal(lstat(join_path(scratch, "a.bin", path), &status), 0);
	assert_true(S_ISREG(status.st_mode));
	assert_int_equal(lstat(join_path(scratch, "b.bin", path), &status), 0);
	assert_true(S_ISREG(status.st_mode));
	assert_int_equal(count_entries(scratch), 3);
}

// A file may grow to 100,000 bytes, as if the disk then were full.
static void a_full_disk_leaves_everything_as_it_was(void **state)
{
	const char *scratch = *state;
	static char large[200000];
	struct rlimit old, small;
	struct arena *arena = arena_create();
	struct write_failure failure = {0};
	struct output_file files[] = {{"a.bin", "new a", 5, false}, {"b.bin", large, sizeof(large), false}};
	put_file(scratch, "a.bin", "old a");
	put_file(scratch, "b.bin", "old b");
	struct sigaction ignore = {.sa_handler = SIG_IGN}, before;
	assert_int_equal(getrlimit(RLIMIT_FSIZE, &old), 0);
	small = (struct rlimit){.rlim_cur = 100000, .rlim_max = old.rlim_max};
	sigaction(SIGXFSZ, &ignore, &before);
	assert_int_equal(setrlimit(RLIMIT_FSIZE, &small), 0);
	bool done = file_write_all(arena, scratch, files, 2, &failure);
	assert_int_equal(setrlimit(RLIMIT_FSIZE, &old), 0);
	sigaction(SIGXFSZ, &before, NULL);
	assert_false(done);
	assert_string_equal(failure.step, "write");
	assert_int_equal(failure.error, EFBIG);
	assert_string_equal(strrchr(failure.path, '/'), "/b.bin");
	assert_true(file_holds_text(scratch, "a.bin", "old a"));
	assert_true(file_holds_text(scratch, "b.bin", "old b"));
	assert_int_equal(count_entries(scratch), 2);
	arena_destroy(arena);
}

// In a child, for root may write anywhere and has to become somebody else first. Returns errno of the failed step, 0 if
// there was no failure, -1 if it was another step or no other user could be had.
static int write_error_without_rights(const char *directory, const char *step)
{
	if (geteuid() == 0 && setuid(65534) != 0)
		return -1;
	struct arena *arena = arena_create();
	struct write_failure failure = {0};
	struct output_file file = {"a.bin", "x", 1, false};
	if (arena == NULL || file_write_all(arena, directory, &file, 1, &failure))
		return 0;
	return strcmp(failure.step, step) == 0 ? failure.error : -1;
}

static void assert_denied(const char *directory, const char *step)
{
	pid_t child = fork();
	int status;
	assert_true(child >= 0);
	if (child == 0)
		_exit(write_error_without_rights(directory, step) == EACCES ? 0 : 1);
	assert_int_equal(waitpid(child, &status, 0), child);
	assert_true(WIFEXITED(status));
	assert_int_equal(WEXITSTATUS(status), 0);
}

static void a_directory_without_rights_stops_the_set(void **state)
{
	const char *scratch = *state;
	char path[SCRATCH_PATH_BYTES], below[SCRATCH_PATH_BYTES];
	put_file(scratch, "kept", "kept");
	assert_int_equal(chmod(scratch, 0755), 0);
	assert_int_equal(mkdir(join_path(scratch, "out", path), 0777), 0);
	assert_int_equal(chmod(path, 0555), 0);
	assert_denied(path, "create");
	assert_denied(join_path(path, "below/it", below), "make directory");
	assert_int_equal(count_entries(path), 0);
	assert_int_equal(chmod(path, 0755), 0);
	assert_int_equal(count_entries(scratch), 2);
}

// "123456789" gives CBF43926: the check value of CRC-32/ISO-HDLC, as catalogues of CRC algorithms list it (from memory);
// 32 zero bytes and 32 bytes FF from zlib itself by way of Python's binascii.crc32.
static void checksums_are_those_of_zlib(void **state)
{
	(void)state;
	uint8_t bytes[32] = {0};
	assert_int_equal(file_crc32("123456789", 9), 0xCBF43926);
	assert_int_equal(file_crc32("", 0), 0);
	assert_int_equal(file_crc32(bytes, sizeof(bytes)), 0x190A55AD);
	memset(bytes, 0xFF, sizeof(bytes));
	assert_int_equal(file_crc32(bytes, sizeof(bytes)), 0xFF6CAB0B);
}

#define in_scratch(test) cmocka_unit_test_setup_teardown(test, scratch_setup, scratch_teardown)

int main(void)
{
	const struct CMUnitTest tests[] = {
		in_scratch(a_file_is_read_whole),
		in_scratch(what_cannot_be_read_is_told_apart),
		cmocka_unit_test(standard_input_is_read_to_its_end),
		in_scratch(a_set_is_written_and_its_directories_made),
		in_scratch(an_empty_set_makes_the_directory),
		in_scratch(files_with_the_same_bytes_are_left_alone),
		in_scratch(large_files_are_compared_to_the_last_byte),
		in_scratch(names_of_any_allowed_length_work),
		in_scratch(names_that_leave_the_directory_are_refused),
		in_scratch(leftovers_of_a_crash_are_no_hindrance),
		in_scratch(a_directory_in_a_files_place_stops_the_set),
		in_scratch(a_file_in_the_directorys_place_stops_the_set),
		in_scratch(links_and_pipes_are_replaced_not_followed),
		in_scratch(a_full_disk_leaves_everything_as_it_was),
		in_scratch(a_directory_without_rights_stops_the_set),
		cmocka_unit_test(checksums_are_those_of_zlib),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
