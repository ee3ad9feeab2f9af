#include <getopt.h>
#include <jansson.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "command/command.h"
#include "view/figures.h"

static const char help[] =
	"Usage: scanlatch sheet [options] PLAN|SET -o FILE.html\n"
	"\n"
	"Plans, fills the tables and proves them as build does, writes no images, and writes the build sheet: one\n"
	"page, to be read in a browser or printed, with the verdicts of all proofs, the files to burn, the wire\n"
	"of every pin, the divider's counts, lines, limits with their margins, and what a counter or scope must\n"
	"show when the board is brought up. It loads nothing from anywhere. If a must fails, the page is written\n"
	"all the same, says so at its top, and the exit code is 1. PLAN or SET may be - for standard input; the\n"
	"plans of such a set are looked for in the current folder.\n"
	"\n"
	"Options:\n"
	"  -o, --output FILE  where the page goes, folders that are missing are made; - for standard output\n"
	"      --strict       advice that fails counts like a must, on the page too\n"
	"      --json         one JSON document instead of text, of what was written\n"
	"      --color WHEN   auto, always or never\n"
	"  -h, --help         print this help\n"
	"  -V, --version      print the version\n";

static const struct option long_options[] = {
	COMMON_LONG_OPTIONS,
	{"output", required_argument, NULL, 'o'},
	{"strict", no_argument, NULL, OPTION_STRICT},
	{NULL, 0, NULL, 0},
};

struct sheet_options {
	struct common_options common;
	const char *output;
};

// What becomes of a plan on its way to its page.
struct sheet_job {
	scanlatch_plan *plan;
	scanlatch_images *made;    // by the planner
	scanlatch_images *proved;  // read back from the bytes of the files that build writes
	scanlatch_proofs *proofs;
	char *page, *missed;
	bool failed;               // a proof that counts failed
};

static bool is_standard_output(const struct sheet_options *options)
{
	return strcmp(options->output, "-") == 0;
}

// The files' bytes, read back as build reads them. False after adding messages.
static bool read_back(struct sheet_job *job, scanlatch_messages *messages)
{
	for (size_t chip = 0; chip < scanlatch_plan_chips(job->plan); chip++) {
		const char *label = scanlatch_plan_chip_label(job->plan, chip);
		size_t length;
		const uint8_t *bytes = scanlatch_images_bytes(job->made, chip, &length);
		if (!scanlatch_images_read(job->proved, label, label, bytes, length, messages))
			return false;
	}
	return scanlatch_images_complete(job->proved, messages);
}

// Makes the page. Returns an exit code other than EXIT_FOUND; job->failed says how the proofs went.
static int make_page(struct sheet_job *job, const char *path, bool strict, struct progress *progress, scanlatch_messages *messages)
{
	progress_begin(progress, "planning");
	job->plan = scanlatch_plan_read_file(path, messages);
	job->made = job->plan != NULL ? scanlatch_images_make(job->plan, messages) : NULL;
	if (job->made == NULL)
		return EXIT_BAD;
	job->proved = scanlatch_images_create(job->plan);
	if (job->proved == NULL)
		return EXIT_SYSTEM;
	if (!read_back(job, messages))
		return EXIT_BAD;
	scanlatch_images_begin_as(job->proved, job->made);
	progress_begin(progress, "proving");
	job->proofs = scanlatch_prove(job->proved);
	if (job->proofs == NULL)
		return EXIT_SYSTEM;
	job->failed = scanlatch_proofs_failed(job->proofs, strict);
	job->missed = scanlatch_proofs_missed(job->proofs);
	job->page = scanlatch_sheet(job->proofs, job->made, strict);
	return job->page != NULL && job->missed != NULL ? EXIT_GOOD : EXIT_SYSTEM;
}

// "limits, speed" as a list.
static json_t *missed_json(const char *missed)
{
	json_t *list = json_array();
	for (size_t length; *missed != '\0'; missed += length + strspn(missed + length, ", ")) {
		length = strcspn(missed, ",");
		json_append(&list, json_stringn(missed, length));
	}
	return list;
}

static int print_json(const struct sheet_options *options, const struct sheet_job *job, bool kept)
{
	json_t *document = json_object();
	json_put(&document, "name", json_string(scanlatch_plan_name(job->plan)));
	json_put(&document, "failed", json_boolean(job->failed));
	json_put(&document, "missed", missed_json(job->missed));
	json_put(&document, "file", json_string(options->output));
	json_put(&document, "bytes", json_integer((json_int_t)strlen(job->page)));
	json_put(&document, "kept", json_boolean(kept));
	char *string = json_text(document);
	json_decref(document);
	return print_string(string);
}

// What the proofs came to, where the page itself does not go.
static void print_outcome(FILE *out, const struct sheet_job *job)
{
	const char *name = scanlatch_plan_name(job->plan);
	if (job->failed)
		fprintf(out, "%s: a proof failed: the sheet is not approved and says why\n", name);
	else if (job->missed[0] != '\0')
		fprintf(out, "%s: advice missed: %s\n", name, job->missed);
}

static int write_page(const struct sheet_options *options, const struct sheet_job *job)
{
	bool kept;
	if (is_standard_output(options)) {
		fputs(job->page, stdout);
		print_outcome(stderr, job);
		return EXIT_GOOD;
	}
	if (!write_output(options->output, job->page, strlen(job->page), &kept))
		return EXIT_SYSTEM;
	if (options->common.json)
		return print_json(options, job, kept);
	print_written(options->output, strlen(job->page), kept);
	print_outcome(stdout, job);
	return EXIT_GOOD;
}

static int write_sheet(const char *path, const struct sheet_options *options, scanlatch_messages *messages)
{
	struct sheet_job job = {0};
	struct progress progress = PROGRESS_NONE;
	int code = make_page(&job, path, options->common.strict, &progress, messages);
	progress_end(&progress);
	const int message_code = print_messages(messages, options->common.colour);
	if (code == EXIT_SYSTEM && message_code == EXIT_GOOD)
		memory_error();
	if (message_code != EXIT_GOOD)
		code = message_code;
	if (code == EXIT_GOOD)
		code = write_page(options, &job);
	if (code == EXIT_GOOD && job.failed)
		code = EXIT_FOUND;
	scanlatch_free(job.page);
	scanlatch_free(job.missed);
	scanlatch_proofs_destroy(job.proofs);
	scanlatch_images_destroy(job.proved);
	scanlatch_images_destroy(job.made);
	scanlatch_plan_destroy(job.plan);
	return code;
}

static bool take_option(void *context, int option, const char *value)
{
	struct sheet_options *options = context;
	if (option == 'o')
		options->output = value;
	return true;
}

static int check_arguments(const struct sheet_options *options, char **arguments, int count)
{
	if (count != 1)
		return count == 0 ? usage_error("sheet", "wanted a plan, found none")
		                  : usage_error("sheet", "wanted one plan, found \"%s\" too", arguments[1]);
	if (options->output == NULL || options->output[0] == '\0')
		return usage_error("sheet", "wanted -o FILE.html, the file that the page goes to; - for standard output");
	if (options->output[strlen(options->output) - 1] == '/')
		return usage_error("sheet", "-o: wanted a file, found the folder \"%s\"", options->output);
	if (options->common.json && is_standard_output(options))
		return usage_error("sheet", "--json and -o - would both go to standard output");
	return EXIT_GOOD;
}

static const struct option_table table = {"sheet", help, "hVo:", long_options, take_option};

int command_sheet(int argument_count, char **arguments)
{
	struct sheet_options options = {0};
	const int parsed = parse_options(&table, argument_count, arguments, &options);
	if (parsed != PARSED)
		return parsed;
	int code = check_arguments(&options, arguments + optind, argument_count - optind);
	if (code != EXIT_GOOD)
		return code;
	scanlatch_messages *messages = scanlatch_messages_create();
	if (messages == NULL)
		return memory_error();
	code = write_sheet(arguments[optind], &options, messages);
	scanlatch_messages_destroy(messages);
	return code;
}
