#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "command/diff.h"

// What git calls with: PATH OLD HEX MODE NEW HEX MODE, and of a renamed file the new path and how alike the two are.
enum { GIT_PATH, GIT_OLD, GIT_OLD_HEX, GIT_OLD_MODE, GIT_NEW, GIT_NEW_HEX, GIT_NEW_MODE, GIT_COUNT, GIT_RENAMED = 9 };

// A file of a pair. git hands over a set's own file alone, so its plans are read from the working tree, at whose top git runs us.
struct git_file {
	const char *path;    // that holds its bytes
	const char *name;    // as git calls it
	const char *source;  // as seen from the top of the working tree
	char *plans;         // of a set: see scanlatch_set_plans; otherwise NULL
};

static size_t count_plans(const char *plans, bool there)
{
	size_t count = 0;
	for (; plans != NULL && *plans != '\0'; plans += strlen(plans) + 1)
		count += exists(plans) == there;
	return count;
}

// What --relative takes away from the names of files. It shows where one of the two is the working tree's own; otherwise it can only be the
// folder that git was called in, which it can be without --relative too.
static const char *folder_left_out(struct arena *arena, char **arguments, const char *name)
{
	const char *const new_path = arguments[GIT_NEW], *called_in = getenv("GIT_PREFIX");
	const size_t whole = strlen(new_path), length = strlen(name);
	if (new_path[0] != '/' && whole >= length && strcmp(new_path + whole - length, name) == 0)
		return arena_copy(arena, new_path, whole - length);
	return called_in != NULL ? called_in : "";
}

// Settles where a set's plans are: where git's name says, unless more of them are in the folder that it may have left out. False when memory is out.
static bool find_plans(struct arena *arena, struct git_file *file, const char *folder)
{
	file->source = file->name;
	if (!scanlatch_set_plans(file->path, file->name, &file->plans))
		return false;
	if (file->plans == NULL || folder[0] == '\0')
		return true;
	const char *longer = arena_format(arena, "%s%s", folder, file->name);
	char *plans = NULL;
	if (longer == NULL || !scanlatch_set_plans(file->path, longer, &plans))
		return false;
	if (count_plans(plans, true) > count_plans(file->plans, true)) {
		char *const fewer = file->plans;
		file->source = longer;
		file->plans = plans;
		plans = fewer;
	}
	scanlatch_free(plans);
	return true;
}

// Puts a plan's path unless it is listed. True if it was put.
static bool put_once(struct text *out, const char *const *listed, size_t count, const char *plan)
{
	for (size_t index = 0; index < count; index++)
		if (strcmp(listed[index], plan) == 0)
			return false;
	text_printf(out, "%s%s", count > 0 ? ", " : "", plan);
	return true;
}

// Puts the plans of both sets that are there, or those that are not, each once.
static void put_plans(struct arena *arena, struct text *out, const struct git_file files[2], bool there)
{
	const size_t most = count_plans(files[0].plans, there) + count_plans(files[1].plans, there);
	const char **listed = arena_array(arena, most, sizeof *listed);
	size_t count = 0;
	for (int side = 0; listed != NULL && side < 2; side++)
		for (const char *plan = files[side].plans; plan != NULL && *plan != '\0'; plan += strlen(plan) + 1)
			if (count < most && exists(plan) == there && put_once(out, listed, count, plan))
				listed[count++] = plan;
	out->failed = out->failed || listed == NULL;
}

static void print_heading(char **arguments, const char *name)
{
	const bool moded = strcmp(arguments[GIT_OLD_MODE], ".") != 0 && strcmp(arguments[GIT_NEW_MODE], ".") != 0 &&
	                   strcmp(arguments[GIT_OLD_MODE], arguments[GIT_NEW_MODE]) != 0;
	const bool renamed = strcmp(name, arguments[GIT_PATH]) != 0;
	print_line(stdout, "scanlatch diff %s%s%s%s%s%s%s", arguments[GIT_PATH], renamed ? " to " : "", renamed ? name : "",
	           moded ? ", mode " : "", moded ? arguments[GIT_NEW_MODE] : "", moded ? ", was " : "", moded ? arguments[GIT_OLD_MODE] : "");
	fflush(stdout); // messages follow on standard error
}

// Says which plans a comparison of sets was made with: without that, what it says of bytes would not be true. False when
// memory is out.
static bool print_plans(struct arena *arena, const struct git_file files[2])
{
	struct text plans = {0};
	put_plans(arena, &plans, files, true);
	const bool good = !plans.failed;
	if (plans.length > 0) {
		print_line(stdout, "both sides have the plans of the working tree: %s", text_string(&plans));
		puts("what changed in these plans is not compared; chips may have to be burned again for it all the same");
		fflush(stdout);
	}
	text_release(&plans);
	return good;
}

static void print_refusal(struct arena *arena, const struct git_file files[2])
{
	struct text plans = {0};
	put_plans(arena, &plans, files, false);
	if (plans.length > 0)
		print_line(stdout, "not compared: git hands over a set without its plans, and the working tree has none now of this name: %s",
		           text_string(&plans));
	else
		puts("not compared, the messages say why; \"git diff --no-ext-diff\" shows the text");
	text_release(&plans);
}

static int diff_pair(struct arena *arena, struct git_file files[2], const struct diff_options *options, scanlatch_messages *messages)
{
	const char *old_source = arena_format(arena, "%s (old)", files[0].source);
	const char *const paths[2] = {files[0].path, files[1].path}, *const names[2] = {files[0].name, files[1].name};
	const char *const sources[2] = {old_source, files[1].source};
	const bool lacks = count_plans(files[0].plans, false) + count_plans(files[1].plans, false) > 0;
	if (old_source == NULL || (!lacks && !print_plans(arena, files)))
		return memory_error();
	const int code = diff_files(paths, names, sources, options, messages);
	if (code == EXIT_BAD)
		print_refusal(arena, files);
	return code == EXIT_SYSTEM ? EXIT_SYSTEM : EXIT_GOOD;
}

static int diff_changed(char **arguments, const char *name, const struct diff_options *options, scanlatch_messages *messages)
{
	struct arena *arena = arena_create();
	struct git_file files[2] = {{arguments[GIT_OLD], arguments[GIT_PATH], NULL, NULL}, {arguments[GIT_NEW], name, NULL, NULL}};
	const char *folder = arena != NULL ? folder_left_out(arena, arguments, name) : NULL;
	const bool good = folder != NULL && find_plans(arena, &files[0], folder) && find_plans(arena, &files[1], folder);
	const int code = good ? diff_pair(arena, files, options, messages) : memory_error();
	scanlatch_free(files[0].plans);
	scanlatch_free(files[1].plans);
	arena_destroy(arena);
	return code;
}

int diff_git(char **arguments, int count, const struct diff_options *options, scanlatch_messages *messages)
{
	if (count == 1) {
		print_line(stdout, "scanlatch diff %s", arguments[GIT_PATH]);
		puts("not merged yet");
		return EXIT_GOOD;
	}
	if (count != GIT_COUNT && count != GIT_RENAMED)
		return usage_error("diff", "--git: wanted the seven arguments of git's external diff, found %d", count);
	const char *name = count == GIT_RENAMED ? arguments[GIT_COUNT] : arguments[GIT_PATH];
	const bool added = strcmp(arguments[GIT_OLD], "/dev/null") == 0, removed = strcmp(arguments[GIT_NEW], "/dev/null") == 0;
	print_heading(arguments, name);
	if (!added && !removed)
		return diff_changed(arguments, name, options, messages);
	puts(added ? "the file is new" : "the file is gone");
	return EXIT_GOOD;
}
