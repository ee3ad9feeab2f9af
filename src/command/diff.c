#define _XOPEN_SOURCE 700 // realpath

#include <getopt.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>

#include "command/diff.h"

static const char help[] =
	"Usage: scanlatch diff [options] OLD NEW\n"
	"       scanlatch diff --git PATH OLD HEX MODE NEW HEX MODE\n"
	"\n"
	"Says what changed between two plans or two sets: first what matters at the bench (whether the frame\n"
	"closes and colour is in step, limits kept or missed now, for each chip whether it must be burned\n"
	"again), then the changes: clock, signals, edges and regions of each line type, blocks of the frame,\n"
	"machine, wiring. Plans are compared by what they mean: one that is only written otherwise has the same\n"
	"timeline. One of OLD and NEW may be a folder of images, as build writes them, or - for standard\n"
	"input. Images that do not do what the plan says are read back: what they do otherwise is told as\n"
	"changes in the plan's own lines and regions, or why it cannot be.\n"
	"\n"
	"Exit code 0: the same, but for words such as names and notes; images do what the plan says. 1: they\n"
	"differ, or the images do not. With --git it is 0 in both cases.\n"
	"\n"
	"Options:\n"
	"      --git          take the arguments of git's external diff: see gitattributes(5)\n"
	"      --json         one JSON document instead of text\n"
	"      --markdown     tables for a review instead of text\n"
	"      --svg          a picture instead of text: lines that differ, the old over the new, with marks from\n"
	"                     where an edge was to where it is\n"
	"      --color WHEN   auto, always or never: of messages\n"
	"  -h, --help         print this help\n"
	"  -V, --version      print the version\n";

static const struct option long_options[] = {
	COMMON_LONG_OPTIONS,
	{"git", no_argument, NULL, OPTION_GIT},
	{"markdown", no_argument, NULL, OPTION_MARKDOWN},
	{"svg", no_argument, NULL, OPTION_SVG},
	{NULL, 0, NULL, 0},
};

static bool take(void *options, int option, const char *value)
{
	struct diff_options *diff = options;
	(void)value;
	diff->git = diff->git || option == OPTION_GIT;
	diff->markdown = diff->markdown || option == OPTION_MARKDOWN;
	diff->svg = diff->svg || option == OPTION_SVG;
	return true;
}

static const struct option_table table = {"diff", help, "hV", long_options, take};

// A plan or set with images that were proved: its own, or those of a folder.
struct side {
	scanlatch_plan *plan;   // NULL for a folder of the other's images
	scanlatch_images *images;
	scanlatch_proofs *proofs;
};

static void side_release(struct side *side)
{
	scanlatch_proofs_destroy(side->proofs);
	scanlatch_images_destroy(side->images);
	scanlatch_plan_destroy(side->plan);
}

// Proves what images there are. False when memory is out.
static bool side_prove(struct side *side)
{
	side->proofs = side->images != NULL ? scanlatch_prove(side->images) : NULL;
	return side->images == NULL || side->proofs != NULL;
}

static bool side_read(struct side *side, const char *path, const char *name, scanlatch_messages *messages)
{
	side->plan = scanlatch_plan_read_file_as(path, name, messages);
	side->images = side->plan != NULL ? scanlatch_images_make(side->plan, messages) : NULL;
	return side_prove(side);
}

// The images of a folder, of the other side's plan.
static bool side_read_folder(struct side *side, const struct side *other, const char *path, scanlatch_messages *messages)
{
	if (other->images == NULL)
		return true;
	side->images = scanlatch_images_create(other->plan);
	if (side->images == NULL)
		return false;
	if (scanlatch_images_read_folder(side->images, path, messages))
		return side_prove(side);
	scanlatch_images_destroy(side->images);
	side->images = NULL;
	return true;
}

static char *report(const scanlatch_difference *difference, const struct diff_options *options)
{
	if (options->common.json)
		return scanlatch_difference_json(difference);
	if (options->svg)
		return scanlatch_difference_svg(difference);
	return options->markdown ? scanlatch_difference_markdown(difference) : scanlatch_difference_text(difference);
}

static int compare(const char *const names[2], const struct side *sides, const struct diff_options *options)
{
	scanlatch_difference *difference = scanlatch_compare(names[0], sides[0].proofs, names[1], sides[1].proofs);
	if (difference == NULL)
		return memory_error();
	int code = print_string(report(difference, options));
	if (code == EXIT_GOOD && scanlatch_difference_found(difference))
		code = EXIT_FOUND;
	scanlatch_difference_destroy(difference);
	return code;
}

int diff_files(const char *const paths[2], const char *const names[2], const char *const sources[2], const struct diff_options *options,
               scanlatch_messages *messages)
{
	struct side sides[2] = {{NULL, NULL, NULL}, {NULL, NULL, NULL}};
	struct progress progress = PROGRESS_NONE;
	progress_begin(&progress, "comparing");
	const int folder = is_folder(paths[0]) ? 0 : is_folder(paths[1]) ? 1 : -1;
	bool good = true;
	for (int index = 0; index < 2; index++)
		good = good && (index == folder || side_read(&sides[index], paths[index], sources[index], messages));
	if (folder >= 0)
		good = good && side_read_folder(&sides[folder], &sides[1 - folder], paths[folder], messages);
	progress_end(&progress);
	int code = print_messages(messages, options->common.colour);
	if (!good)
		code = worse(code, memory_error());
	if (code == EXIT_GOOD)
		code = compare(names, sides, options);
	// What was read from the folder refers to the other side's plan.
	side_release(&sides[folder >= 0 ? folder : 0]);
	side_release(&sides[folder >= 0 ? 1 - folder : 1]);
	return code;
}

// The name of a folder that is given as a way to it, "." or one that ends in "..", or NULL; to be freed.
static char *resolve_folder(const char *path)
{
	size_t end = strlen(path);
	while (end > 1 && path[end - 1] == '/')
		end--;
	const bool dots = end > 0 && path[end - 1] == '.' && (end == 1 || path[end - 2] == '/' || path[end - 2] == '.');
	return dots && is_folder(path) ? realpath(path, NULL) : NULL;
}

static const char *label_of(const char *path)
{
	return strcmp(path, "-") == 0 ? "standard input" : path[0] == '\0' ? "\"\"" : path;
}

// True if a file's first bytes are no text, or a record of Intel HEX: then it is likely an image, which is no plan.
static bool is_like_image(const char *path)
{
	struct stat status;
	char bytes[4096];
	FILE *file = stat(path, &status) == 0 && S_ISREG(status.st_mode) ? fopen(path, "rb") : NULL;
	if (file == NULL)
		return false;
	const size_t count = fread(bytes, 1, sizeof bytes - 1, file);
	fclose(file);
	bytes[count] = '\0';
	for (size_t index = 0; index < count; index++) {
		const unsigned char byte = (unsigned char)bytes[index];
		if ((byte < ' ' && strchr("\t\n\r", byte) == NULL) || byte == 0 || byte > 0xF7) // never in UTF-8
			return true;
	}
	return bytes[0] == ':' && strspn(bytes + 1, "0123456789ABCDEFabcdef") >= 10;
}

static int diff_labelled(char **arguments, const char *const labels[2], const struct diff_options *options, scanlatch_messages *messages)
{
	const char *const paths[2] = {arguments[0], arguments[1]};
	const int code = diff_files(paths, labels, labels, options, messages);
	for (int side = 0; code == EXIT_BAD && side < 2; side++)
		if (is_like_image(paths[side]))
			print_line(stderr, "scanlatch diff: \"%s\" looks like an image: images are given as the folder that has one for each chip", paths[side]);
	return code;
}

static int diff_two(char **arguments, int count, const struct diff_options *options, scanlatch_messages *messages)
{
	if (count != 2)
		return usage_error("diff", "wanted OLD and NEW, found %d argument%s", count, count == 1 ? "" : "s");
	if (is_folder(arguments[0]) && is_folder(arguments[1]))
		return usage_error("diff", "wanted at least one plan or set, found two folders");
	if (strcmp(arguments[0], "-") == 0 && strcmp(arguments[1], "-") == 0)
		return usage_error("diff", "only one of OLD and NEW can be standard input");
	char *const folders[2] = {resolve_folder(arguments[0]), resolve_folder(arguments[1])};
	const char *const labels[2] = {folders[0] != NULL ? folders[0] : label_of(arguments[0]), folders[1] != NULL ? folders[1] : label_of(arguments[1])};
	const int code = diff_labelled(arguments, labels, options, messages);
	free(folders[0]);
	free(folders[1]);
	return code;
}

int command_diff(int argument_count, char **arguments)
{
	struct diff_options options = {.git = false};
	const int parsed = parse_options(&table, argument_count, arguments, &options);
	if (parsed != PARSED)
		return parsed;
	if (options.common.json + options.markdown + options.svg + options.git > 1)
		return usage_error("diff", "wanted at most one of --git, --json, --markdown and --svg");
	scanlatch_messages *messages = scanlatch_messages_create();
	if (messages == NULL)
		return memory_error();
	const int code = (options.git ? diff_git : diff_two)(arguments + optind, argument_count - optind, &options, messages);
	scanlatch_messages_destroy(messages);
	return code;
}
