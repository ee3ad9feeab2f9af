#include <dirent.h>
#include <errno.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>

#include "base/arena.h"
#include "base/file.h"
#include "library/library.h"
#include "plan/characters.h"

#define MOST_NAMED 4u // files

static bool report(scanlatch_messages *messages, const char *path, enum read_status status, int error, const char *what, size_t limit)
{
	const struct place place = {source_of_name(messages, path), 0, 0};
	if (status == READ_MEMORY || place.source == NULL)
		diagnose(messages->diagnostics, RULE_OUT_OF_MEMORY, place, "memory is out");
	else if (status == READ_IS_DIRECTORY)
		diagnose(messages->diagnostics, RULE_FILE_IS_DIRECTORY, place, "wanted %s, found a directory", what);
	else if (status == READ_TOO_LARGE)
		diagnose(messages->diagnostics, RULE_FILE_TOO_LARGE, place, "%s has at most %zu bytes, but this file has more", what, limit);
	else
		diagnose(messages->diagnostics, RULE_FILE_UNREADABLE, place, "cannot read %s: %s", what, strerror(error));
	return false;
}

// Reads a file into an arena. False after reporting.
static bool read_file(struct arena *arena, const char *path, const char *what, size_t limit, char **bytes, size_t *length,
                      scanlatch_messages *messages)
{
	const enum read_status status = file_read(arena, path, limit, bytes, length);
	return status == READ_OK || report(messages, path, status, errno, what, limit);
}

bool read_plan_file(struct arena *arena, const char *path, char **bytes, size_t *length, scanlatch_messages *messages)
{
	return read_file(arena, path, "a plan", SCANLATCH_PLAN_BYTES, bytes, length, messages);
}

static scanlatch_plan *read_set(const char *name, const char *bytes, size_t length, scanlatch_messages *messages)
{
	struct plan_set *set = plan_set_load(name, bytes, length, messages);
	return set != NULL ? plan_of_set(set, messages) : NULL;
}

static scanlatch_plan *read_any(const char *path, const char *name, scanlatch_messages *messages, bool as_board)
{
	struct arena *arena = arena_create();
	char *bytes;
	size_t length;
	scanlatch_plan *plan = NULL;
	if (arena == NULL) {
		report(messages, path, READ_MEMORY, 0, "", 0);
	} else if (read_plan_file(arena, path, &bytes, &length, messages)) {
		const struct source seen = {name, bytes, length};
		if (source_is_set(&seen))
			plan = read_set(seen.name, bytes, length, messages);
		else
			plan = (as_board ? board_read_text : scanlatch_plan_read)(seen.name, bytes, length, messages);
	}
	arena_destroy(arena);
	return plan;
}

scanlatch_plan *scanlatch_plan_read_file(const char *path, scanlatch_messages *messages)
{
	return read_any(path, source_label(path), messages, false);
}

scanlatch_plan *scanlatch_plan_read_file_as(const char *path, const char *name, scanlatch_messages *messages)
{
	return read_any(path, name, messages, false);
}

scanlatch_plan *scanlatch_board_read_file(const char *path, scanlatch_messages *messages)
{
	return read_any(path, source_label(path), messages, true);
}

// Intel HEX takes about 2.8 characters a byte; several times the capacity leaves room for short records.
static size_t file_limit(const scanlatch_plan *plan)
{
	size_t largest = 0;
	for (size_t chip = 0; chip < scanlatch_plan_chips(plan); chip++)
		if (scanlatch_plan_chip_bytes(plan, chip) > largest)
			largest = scanlatch_plan_chip_bytes(plan, chip);
	return largest * 16 + 65536;
}

bool scanlatch_images_read_file(scanlatch_images *images, const char *label, const char *path, scanlatch_messages *messages)
{
	struct arena *arena = arena_create();
	char *bytes;
	size_t length;
	bool good = false;
	if (arena == NULL)
		report(messages, path, READ_MEMORY, 0, "", 0);
	else if (read_file(arena, path, "an image", file_limit(images->plan), &bytes, &length, messages))
		good = scanlatch_images_read(images, label, path, bytes, length, messages);
	arena_destroy(arena);
	return good;
}

static int is_image_name(const struct dirent *entry)
{
	const char *ending = strrchr(entry->d_name, '.');
	return ending != NULL && (strcmp(ending, ".bin") == 0 || strcmp(ending, ".hex") == 0);
}

// Whether it is a file that the plan's images are read from.
static bool is_of_plan(const scanlatch_plan *plan, const char *file)
{
	const char *name = scanlatch_plan_name(plan);
	const size_t length = strlen(name);
	bool found = false;
	for (size_t chip = 0; chip < scanlatch_plan_chips(plan) && !found; chip++) {
		const char *label = scanlatch_plan_chip_label(plan, chip);
		const size_t end = length + 1 + strlen(label);
		found = strlen(file) == end + 4 && strncmp(file, name, length) == 0 && file[length] == '.' &&
		        strncmp(file + length + 1, label, strlen(label)) == 0;
	}
	return found;
}

void put_other_images(const scanlatch_plan *plan, const char *folder, struct text *out)
{
	struct dirent **entries;
	const int count = scandir(folder, &entries, is_image_name, alphasort);
	unsigned shown = 0, left = 0;
	for (int index = 0; index < count; index++) {
		if (!is_of_plan(plan, entries[index]->d_name) && shown == MOST_NAMED)
			left++;
		else if (!is_of_plan(plan, entries[index]->d_name))
			text_printf(out, "%s%s", shown++ == 0 ? "; it has " : ", ", SHORT(entries[index]->d_name));
		free(entries[index]);
	}
	if (count >= 0)
		free(entries);
	if (left > 0)
		text_printf(out, " and %u more", left);
}

// Whether there is such a folder. False after reporting.
static bool open_folder(const char *folder, scanlatch_messages *messages)
{
	DIR *stream = opendir(folder);
	if (stream == NULL)
		return report(messages, folder, READ_SYSTEM, errno, "a folder of images", 0);
	closedir(stream);
	return true;
}

bool scanlatch_images_read_folder(scanlatch_images *images, const char *folder, scanlatch_messages *messages)
{
	static const char *const endings[] = {"bin", "hex"};
	const scanlatch_plan *plan = images->plan;
	bool good = true;
	if (!open_folder(folder, messages))
		return false;
	for (size_t chip = 0; chip < scanlatch_plan_chips(plan); chip++) {
		for (size_t ending = 0; ending < sizeof endings / sizeof *endings; ending++) {
			const char *label = scanlatch_plan_chip_label(plan, chip);
			const char *path = arena_format(images->arena, "%s/%s.%s.%s", folder, scanlatch_plan_name(plan), label, endings[ending]);
			struct stat status;
			if (path == NULL)
				return report(messages, folder, READ_MEMORY, 0, "", 0);
			if (stat(path, &status) != 0 && errno == ENOENT)
				continue;
			good = scanlatch_images_read_file(images, label, path, messages) && good;
		}
	}
	return good && images_complete(images, folder, messages);
}
