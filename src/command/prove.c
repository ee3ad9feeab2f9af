#include <getopt.h>
#include <stdio.h>
#include <unistd.h>

#include "command/command.h"

static const char help[] =
	"Usage: scanlatch prove [options] PLAN|SET FOLDER\n"
	"       scanlatch prove [options] PLAN|SET LABEL=FILE...\n"
	"\n"
	"Reads images and proves them against their plan, or each bank of a set against its plan. FOLDER holds\n"
	"NAME.LABEL.bin or NAME.LABEL.hex (or both, which must agree) for each chip, as build writes them, NAME\n"
	"being the plan's or the set's. FILE is binary or Intel HEX, told apart by content, for the chip with\n"
	"that LABEL. PLAN, SET or FILE may be - for standard input; the plans of such a set are looked for in\n"
	"the current folder.\n"
	"\n"
	"Options:\n"
	"      --json         one JSON document instead of text\n"
	"      --strict       advice that fails (upset, limits, glitches, speed) counts like a must:\n"
	"                     exit code 1\n"
	"      --color WHEN   auto, always or never\n"
	"  -h, --help         print this help\n"
	"  -V, --version      print the version\n";

static const struct option long_options[] = {
	COMMON_LONG_OPTIONS,
	{"strict", no_argument, NULL, OPTION_STRICT},
	{NULL, 0, NULL, 0},
};

static int report_proofs(const scanlatch_images *images, const struct common_options *options)
{
	struct progress progress = PROGRESS_NONE;
	progress_begin(&progress, "proving");
	scanlatch_proofs *proofs = scanlatch_prove(images);
	progress_end(&progress);
	if (proofs == NULL)
		return memory_error();
	int code = print_string(options->json ? scanlatch_proofs_json(proofs)
	                                      : scanlatch_proofs_text(proofs, colour_on(options->colour, STDOUT_FILENO)));
	if (code == EXIT_GOOD && scanlatch_proofs_failed(proofs, options->strict))
		code = EXIT_FOUND;
	scanlatch_proofs_destroy(proofs);
	return code;
}

static int prove(const char *path, char **arguments, int count, const struct common_options *options, scanlatch_messages *messages)
{
	struct progress progress = PROGRESS_NONE;
	progress_begin(&progress, "reading");
	scanlatch_plan *plan = scanlatch_plan_read_file(path, messages);
	scanlatch_images *images = plan != NULL ? scanlatch_images_create(plan) : NULL;
	int code = EXIT_GOOD;
	if (plan != NULL && images == NULL)
		code = memory_error();
	if (images != NULL)
		read_images(images, arguments, count, messages);
	progress_end(&progress);
	code = worse(code, print_messages(messages, options->colour));
	if (code == EXIT_GOOD)
		code = report_proofs(images, options);
	scanlatch_images_destroy(images);
	scanlatch_plan_destroy(plan);
	return code;
}

static const struct option_table table = {"prove", help, "hV", long_options, NULL};

int command_prove(int argument_count, char **arguments)
{
	struct common_options options = {0};
	const int parsed = parse_options(&table, argument_count, arguments, &options);
	if (parsed != PARSED)
		return parsed;
	int code = check_image_arguments("prove", "plan", arguments + optind, argument_count - optind);
	if (code != EXIT_GOOD)
		return code;
	scanlatch_messages *messages = scanlatch_messages_create();
	if (messages == NULL)
		return memory_error();
	code = prove(arguments[optind], arguments + optind + 1, argument_count - optind - 1, &options, messages);
	scanlatch_messages_destroy(messages);
	return code;
}
