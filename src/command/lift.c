#include <errno.h>
#include <getopt.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "base/excerpt.h"
#include "base/file.h"
#include "base/text.h"
#include "command/command.h"

#define MOST_FILE_BYTES ((size_t)512 << 20) // git has no textconv of larger files either, unless it is told to

static const char help[] =
	"Usage: scanlatch lift [options] BOARD FOLDER\n"
	"       scanlatch lift [options] BOARD LABEL=FILE...\n"
	"       scanlatch lift --text|--git BOARD FILE\n"
	"\n"
	"Reads a plan back out of images: walks them from power-up into their loop, cuts it into lines at the\n"
	"leading edge of sync, finds regions, line types, blocks of the frame and held state bits, and writes\n"
	"them as a plan. BOARD is a plan without lines and frame, a plan, whose lines and frame are passed\n"
	"over, or a set. FOLDER holds NAME.LABEL.bin or NAME.LABEL.hex for each chip, NAME being the board's or\n"
	"the set's; FILE is binary or Intel HEX. BOARD or FILE may be - for standard input.\n"
	"\n"
	"The plan goes to standard output, or with -o to a file; then what was found is reported. With --text\n"
	"and a single FILE, a chip's image is put in words: its chip is the one whose LABEL stands in the\n"
	"file's name, as in NAME.LABEL.bin.\n"
	"\n"
	"Options:\n"
	"  -o, --output FILE  where the plan goes; folders that are missing are made\n"
	"      --cut SIGNAL   cut lines at the leading edge of this signal\n"
	"      --near         pin the state of every cell, so that the plan gives back the same bytes\n"
	"      --bank N       lift what the chips hold with the jumpers set to N (default 0)\n"
	"      --text         print what was found, in words, and no plan\n"
	"      --git          the same of a FILE as a textconv of git, see gitattributes(5): of one that is no image\n"
	"                     of the board it says so, with length and CRC-32, and the exit code is 0\n"
	"      --json         one JSON document instead: what was found, and the plan\n"
	"      --color WHEN   auto, always or never\n"
	"  -h, --help         print this help\n"
	"  -V, --version      print the version\n";

static const struct option long_options[] = {
	COMMON_LONG_OPTIONS,
	{"output", required_argument, NULL, 'o'},
	{"cut", required_argument, NULL, OPTION_CUT},
	{"near", no_argument, NULL, OPTION_NEAR},
	{"bank", required_argument, NULL, OPTION_BANK},
	{"text", no_argument, NULL, OPTION_TEXT},
	{"git", no_argument, NULL, OPTION_GIT},
	{NULL, 0, NULL, 0},
};

struct options {
	struct common_options common;
	struct scanlatch_lift_options lift;
	const char *output;
	bool text;
	bool git;
};

static bool take_bank(struct options *options, const char *value)
{
	char *end;
	const long number = strtol(value, &end, 10);
	if (value[0] < '0' || value[0] > '9' || *end != '\0' || number > 255) {
		usage_error("lift", "--bank: wanted a number from 0 to 255, found \"%s\"", value);
		return false;
	}
	options->lift.bank = (unsigned)number;
	return true;
}

static bool take(void *target, int option, const char *value)
{
	struct options *options = target;
	if (option == 'o')
		options->output = value;
	else if (option == OPTION_CUT)
		options->lift.cut = value;
	else if (option == OPTION_NEAR)
		options->lift.near = true;
	else if (option == OPTION_TEXT)
		options->text = true;
	else if (option == OPTION_GIT)
		options->git = options->text = true;
	else
		return take_bank(options, value);
	return true;
}

// Writes the plan whole or not at all. A JSON document stays alone on standard output.
static int write_plan(const struct options *options, const char *plan)
{
	bool kept;
	if (!options->common.json)
		return write_result(options->output, plan);
	return write_output(options->output, plan, strlen(plan), &kept) ? EXIT_GOOD : EXIT_SYSTEM;
}

static int report(const scanlatch_lift *lift, const struct options *options)
{
	const bool to_file = options->output != NULL && strcmp(options->output, "-") != 0;
	int code = EXIT_GOOD;
	if (options->common.json)
		code = print_string(scanlatch_lift_json(lift));
	else if (options->text || to_file)
		code = print_string(scanlatch_lift_text(lift));
	else
		fputs(scanlatch_lift_plan(lift), stdout);
	if (code == EXIT_GOOD && to_file)
		code = write_plan(options, scanlatch_lift_plan(lift));
	return code == EXIT_GOOD && scanlatch_lift_found(lift) ? EXIT_FOUND : code;
}

static const char *last_part(const char *path)
{
	const char *slash = strrchr(path, '/');
	return slash != NULL ? slash + 1 : path;
}

// The chip whose label is the last but one part of a file's name, as in NAME.LABEL.bin, or the only one; SIZE_MAX if there is none.
static size_t chip_of_file(const scanlatch_plan *board, const char *path)
{
	const char *name = last_part(path);
	const size_t chips = scanlatch_plan_chips(board);
	for (size_t chip = 0; chip < chips; chip++) {
		const char *label = scanlatch_plan_chip_label(board, chip), *ending = strrchr(name, '.');
		const size_t length = strlen(label);
		if (ending != NULL && (size_t)(ending - name) > length && ending[-(ptrdiff_t)length - 1] == '.' &&
		    strncmp(ending - length, label, length) == 0)
			return chip;
	}
	return chips == 1 ? 0 : SIZE_MAX;
}

static int report_chip(const scanlatch_plan *board, scanlatch_images *images, const char *file, const struct options *options,
                       scanlatch_messages *messages)
{
	const size_t chip = chip_of_file(board, file);
	if (chip == SIZE_MAX && exists(file))
		return usage_error("lift", "\"%s\" does not say which chip it is of: wanted a name as NAME.LABEL.bin, with the label of a chip "
		                   "of the board", file);
	scanlatch_images_read_file(images, scanlatch_plan_chip_label(board, chip == SIZE_MAX ? 0 : chip), file, messages);
	const int code = print_messages(messages, options->common.colour);
	return code != EXIT_GOOD ? code : print_string(scanlatch_images_chip_text(images, chip));
}

// A file in git's hands.
struct blob {
	const char *name; // without folders: git gives it another one each time
	char *bytes;
	size_t length;
};

// Of a file that is no image of the board, or where there is no board: what tells it from others.
static int describe_blob(const struct blob *blob, scanlatch_messages *messages)
{
	struct text name = {0};
	excerpt_put_printable(blob->name, strlen(blob->name), &name);
	printf("%s: no image of a chip of the board; %zu bytes, CRC-32 %08X\n", text_string(&name), blob->length,
	       (unsigned)file_crc32(blob->bytes, blob->length));
	text_release(&name);
	return scanlatch_messages_count(messages) == 0 ? EXIT_GOOD : print_string(scanlatch_messages_text(messages, false));
}

static int show_blob(const struct blob *blob, const char *board_path, const struct options *options, scanlatch_messages *messages)
{
	scanlatch_plan *board = scanlatch_board_read_file(board_path, messages);
	scanlatch_images *images = board != NULL ? scanlatch_images_create(board) : NULL;
	const size_t chip = board != NULL ? chip_of_file(board, blob->name) : SIZE_MAX;
	int code = board != NULL && images == NULL ? memory_error() : EXIT_GOOD;
	if (code == EXIT_GOOD && (chip == SIZE_MAX || !scanlatch_images_read(images, scanlatch_plan_chip_label(board, chip), blob->name,
	                                                                     blob->bytes, blob->length, messages)))
		code = describe_blob(blob, messages);
	else if (code == EXIT_GOOD && (code = print_messages(messages, options->common.colour)) == EXIT_GOOD)
		code = print_string(scanlatch_images_chip_text(images, chip));
	scanlatch_images_destroy(images);
	scanlatch_plan_destroy(board);
	return code;
}

// As a textconv: whatever is in the file or wrong with the board, git goes on with what is printed.
static int show_in_git(char **arguments, const struct options *options, scanlatch_messages *messages)
{
	struct arena *arena = arena_create();
	struct blob blob = {.name = last_part(arguments[1])};
	int code = EXIT_GOOD;
	const enum read_status status =
		arena != NULL ? file_read(arena, arguments[1], MOST_FILE_BYTES, &blob.bytes, &blob.length) : READ_MEMORY;
	if (status == READ_OK)
		code = show_blob(&blob, arguments[0], options, messages);
	else if (status == READ_TOO_LARGE)
		printf("no image of a chip of the board; more than %zu bytes\n", MOST_FILE_BYTES);
	else if (status == READ_MEMORY)
		code = memory_error();
	else {
		print_line(stderr, "scanlatch: cannot read %s: %s", arguments[1], strerror(status == READ_IS_DIRECTORY ? EISDIR : errno));
		code = EXIT_SYSTEM;
	}
	arena_destroy(arena);
	return code;
}

static int lift_plan(const scanlatch_images *images, const struct options *options, scanlatch_messages *messages)
{
	struct progress progress = PROGRESS_NONE;
	progress_begin(&progress, "lifting");
	scanlatch_lift *lift = scanlatch_lift_images(images, &options->lift, messages);
	progress_end(&progress);
	int code = print_messages(messages, options->common.colour);
	if (lift != NULL && code == EXIT_GOOD)
		code = report(lift, options);
	scanlatch_lift_destroy(lift);
	return code;
}

// A single file that is given without a label.
static bool is_chip_file(const struct options *options, char **arguments, int count)
{
	return count == 2 && (options->git || (options->text && strchr(arguments[1], '=') == NULL && !is_folder(arguments[1])));
}

static int run(char **arguments, int count, const struct options *options, scanlatch_messages *messages)
{
	scanlatch_plan *board = scanlatch_board_read_file(arguments[0], messages);
	scanlatch_images *images = board != NULL ? scanlatch_images_create(board) : NULL;
	int code = EXIT_GOOD;
	if (board == NULL)
		code = print_messages(messages, options->common.colour);
	else if (images == NULL)
		code = memory_error();
	else if (is_chip_file(options, arguments, count))
		code = report_chip(board, images, arguments[1], options, messages);
	else if (read_images(images, arguments + 1, count - 1, messages))
		code = lift_plan(images, options, messages);
	else
		code = print_messages(messages, options->common.colour);
	scanlatch_images_destroy(images);
	scanlatch_plan_destroy(board);
	return code;
}

static const struct option_table table = {"lift", help, "hVo:", long_options, take};

int command_lift(int argument_count, char **arguments)
{
	struct options options = {.output = NULL};
	const int parsed = parse_options(&table, argument_count, arguments, &options);
	if (parsed != PARSED)
		return parsed;
	char **given = arguments + optind;
	const int count = argument_count - optind;
	int code = EXIT_GOOD;
	if (options.git && count != 2)
		code = usage_error("lift", "--git takes a board and one file, as git's textconv gives it");
	else if (!is_chip_file(&options, given, count))
		code = check_image_arguments("lift", "board", given, count);
	if (code == EXIT_GOOD && options.text && (options.common.json || options.output != NULL))
		code = usage_error("lift", "--text writes no plan: leave --json and -o out");
	if (code != EXIT_GOOD)
		return code;
	scanlatch_messages *messages = scanlatch_messages_create();
	if (messages == NULL)
		return memory_error();
	code = options.git ? show_in_git(given, &options, messages) : run(given, count, &options, messages);
	scanlatch_messages_destroy(messages);
	return code;
}
