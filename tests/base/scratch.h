// A scratch directory for tests that write files, and looks into it. Include after cmocka.h.
#ifndef TESTS_BASE_SCRATCH_H
#define TESTS_BASE_SCRATCH_H

#include <dirent.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#define SCRATCH_PATH_BYTES 1024

// "directory/name" in a buffer of SCRATCH_PATH_BYTES; returns the buffer.
static inline const char *join_path(const char *directory, const char *name, char *buffer)
{
	int length = snprintf(buffer, SCRATCH_PATH_BYTES, "%s/%s", directory, name);
	assert_true(length > 0 && length < SCRATCH_PATH_BYTES);
	return buffer;
}

static inline bool is_dots(const char *name)
{
	return strcmp(name, ".") == 0 || strcmp(name, "..") == 0;
}

static inline size_t count_entries(const char *path)
{
	DIR *directory = opendir(path);
	assert_non_null(directory);
	size_t count = 0;
	for (const struct dirent *entry = readdir(directory); entry != NULL; entry = readdir(directory))
		count += !is_dots(entry->d_name);
	closedir(directory);
	return count;
}

// The tests make directories a few levels deep.
static inline void remove_tree(const char *path)
{
	char inner[SCRATCH_PATH_BYTES];
	DIR *directory = opendir(path);
	assert_non_null(directory);
	for (const struct dirent *entry = readdir(directory); entry != NULL; entry = readdir(directory))
		if (!is_dots(entry->d_name) && unlink(join_path(path, entry->d_name, inner)) != 0)
			remove_tree(inner);
	closedir(directory);
	assert_int_equal(rmdir(path), 0);
}

// cmocka's setup: an empty directory, its path (malloc) in *state.
static inline int scratch_setup(void **state)
{
	const char *parent = getenv("TMPDIR");
	char *path = malloc(SCRATCH_PATH_BYTES);
	assert_non_null(path);
	join_path(parent == NULL || parent[0] == '\0' ? "/tmp" : parent, "scanlatch-test-XXXXXX", path);
	assert_non_null(mkdtemp(path));
	*state = path;
	return 0;
}

static inline int scratch_teardown(void **state)
{
	remove_tree(*state);
	free(*state);
	return 0;
}

// Writes a file by plain stdio.
static inline void put_file(const char *directory, const char *name, const char *text)
{
	char path[SCRATCH_PATH_BYTES];
	FILE *file = fopen(join_path(directory, name, path), "wb");
	assert_non_null(file);
	assert_int_equal(fwrite(text, 1, strlen(text), file), strlen(text));
	assert_int_equal(fclose(file), 0);
}

// The file is there and holds exactly these bytes.
static inline bool file_holds(const char *directory, const char *name, const char *bytes, size_t length)
{
	char path[SCRATCH_PATH_BYTES];
	FILE *file = fopen(join_path(directory, name, path), "rb");
	char *found = malloc(length + 1);
	assert_non_null(found);
	bool holds = file != NULL && fread(found, 1, length + 1, file) == length && memcmp(found, bytes, length) == 0;
	free(found);
	if (file != NULL)
		fclose(file);
	return holds;
}

static inline bool file_holds_text(const char *directory, const char *name, const char *text)
{
	return file_holds(directory, name, text, strlen(text));
}

#endif
