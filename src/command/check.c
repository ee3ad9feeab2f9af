#include <getopt.h>
#include <stdio.h>
#include <stdlib.h>

#include "command/command.h"

static const char help[] =
	"Usage: scanlatch check [options] PLAN|SET...\n"
	"\n"
	"Reads plans, lays out their lines and reports the tick divider, lengths, positions, roundings,\n"
	"wiring, the limits of the standard that the plan names, colour and speed. A plan for whose cells no\n"
	"states can be found is an error here too. Of a set, all plans are read, and whether they agree on their\n"
	"chips. Writes no images. PLAN or SET may be - for standard input; the plans of such a set are looked for\n"
	"in the current folder.\n"
	"\n"
	"Options:\n"
	"      --json         one JSON document instead of text (a list of them for several plans)\n"
	"      --strict       advice that fails (limits, speed) counts like a must: exit code 1\n"
	"      --color WHEN   auto, always or never\n"
	"  -h, --help         print this help\n"
	"  -V, --version      print the version\n";

static const struct option long_options[] = {
	COMMON_LONG_OPTIONS,
	{"strict", no_argument, NULL, OPTION_STRICT},
	{NULL, 0, NULL, 0},
};

// Checks one plan and gives its report; *code becomes the exit code. NULL if there is none.
static char *check_plan(const char *path, const struct common_options *options, int *code)
{
	scanlatch_messages *messages = scanlatch_messages_create();
	if (messages == NULL) {
		*code = memory_error();
		return NULL;
	}
	struct progress progress = PROGRESS_NONE;
	progress_begin(&progress, "checking");
	scanlatch_plan *plan = scanlatch_plan_read_file(path, messages);
	scanlatch_images *images = plan != NULL ? scanlatch_images_make(plan, messages) : NULL;
	bool kept = true, advice_kept = true;
	char *report = NULL;
	if (plan != NULL)
		report = options->json ? scanlatch_plan_json(plan, &kept, &advice_kept) : scanlatch_plan_text(plan, &kept, &advice_kept);
	progress_end(&progress);
	*code = print_messages(messages, options->colour);
	if (*code == EXIT_GOOD && report == NULL)
		*code = memory_error();
	if (*code == EXIT_GOOD && (!kept || (options->strict && !advice_kept)))
		*code = EXIT_FOUND;
	scanlatch_images_destroy(images);
	scanlatch_plan_destroy(plan);
	scanlatch_messages_destroy(messages);
	return report;
}

static int check_plans(char **paths, int count, const struct common_options *options)
{
	int code = EXIT_GOOD;
	const bool list = options->json && count > 1;
	bool first = true;
	if (list)
		fputs("[\n", stdout);
	for (int index = 0; index < count; index++) {
		int plan_code;
		char *report = check_plan(paths[index], options, &plan_code);
		code = worse(code, plan_code);
		if (report == NULL)
			continue;
		if (!first)
			fputs(list ? ",\n" : "\n", stdout);
		first = false;
		print_string(report);
	}
	if (list)
		fputs("]\n", stdout);
	return code;
}

static const struct option_table table = {"check", help, "hV", long_options, NULL};

int command_check(int argument_count, char **arguments)
{
	struct common_options options = {0};
	const int parsed = parse_options(&table, argument_count, arguments, &options);
	if (parsed != PARSED)
		return parsed;
	if (optind == argument_count)
		return usage_error("check", "wanted at least one plan, found none");
	return check_plans(arguments + optind, argument_count - optind, &options);
}
