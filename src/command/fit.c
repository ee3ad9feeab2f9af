#include <getopt.h>
#include <limits.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "command/command.h"

static const char help[] =
	"Usage: scanlatch fit [options] --standard NAME --columns N [--write K FILE]\n"
	"\n"
	"Searches layouts of lines that suit a standard: crystal, ticks of a dot, dots of a cell, cells of a\n"
	"line, stretched cells, and the cell of every edge. Kept are those that meet line and field rate,\n"
	"close in colour, and have a memory that is fast enough. Ranked by limits kept, then by the smallest\n"
	"margin, then by fewer cells and chips. The search is exact: no layout of the space that is better\n"
	"is missed. Exit code 1: it found none, and says what the nearest ones fail.\n"
	"\n"
	"What is asked:\n"
	"      --standard NAME       a standard of \"scanlatch list standards\"\n"
	"      --columns N           cells with picture in a line\n"
	"      --lines N             lines with picture (default: a field of the standard, halves left out)\n"
	"      --grade GRADE         limits to keep: studio, or monitor (the default)\n"
	"      --phase PHASE         \"every line\" (the default), \"every 2 lines\" or \"free\": when the\n"
	"                            subcarrier must be in step again, where the standard has one\n"
	"      --width PERCENT       the picture is no narrower than so much of the published width\n"
	"                            (default: 50; a narrow one has large margins)\n"
	"The space:\n"
	"      --crystal LIST        crystals of \"scanlatch list crystals\" or frequencies (default: all of\n"
	"                            the list)\n"
	"      --ticks-per-dot LIST  numbers or ranges of them, 1 to 256 (default: 1-4)\n"
	"      --dots-per-cell LIST  the same (default: 6-16)\n"
	"      --stretched N         cells of a line that may be stretched at most, by 1 dot to a whole cell,\n"
	"                            where there is a subcarrier: 0 to 64 (default: 4)\n"
	"What is done with it:\n"
	"      --top N               layouts to keep, 1 to 1000 (default: 10)\n"
	"      --write K FILE        write the K-th as a plan to FILE, in place of the report; - is standard\n"
	"                            output. Folders that are missing are made\n"
	"      --json                one JSON document instead of text, also with --write\n"
	"      --color WHEN          auto, always or never\n"
	"  -h, --help                print this help\n"
	"  -V, --version             print the version\n";

enum {
	FIT_STANDARD = 2000, FIT_COLUMNS, FIT_LINES, FIT_GRADE, FIT_PHASE, FIT_WIDTH, FIT_CRYSTAL, FIT_TICKS, FIT_DOTS, FIT_STRETCHED,
	FIT_TOP, FIT_WRITE
};

static const struct option long_options[] = {
	COMMON_LONG_OPTIONS,
	{"standard", required_argument, NULL, FIT_STANDARD},
	{"columns", required_argument, NULL, FIT_COLUMNS},
	{"lines", required_argument, NULL, FIT_LINES},
	{"grade", required_argument, NULL, FIT_GRADE},
	{"phase", required_argument, NULL, FIT_PHASE},
	{"width", required_argument, NULL, FIT_WIDTH},
	{"crystal", required_argument, NULL, FIT_CRYSTAL},
	{"ticks-per-dot", required_argument, NULL, FIT_TICKS},
	{"dots-per-cell", required_argument, NULL, FIT_DOTS},
	{"stretched", required_argument, NULL, FIT_STRETCHED},
	{"top", required_argument, NULL, FIT_TOP},
	{"write", required_argument, NULL, FIT_WRITE},
	{NULL, 0, NULL, 0},
};

struct fit_options {
	struct common_options common;
	scanlatch_fit_request request;
	unsigned write;    // from 1; 0: not asked
	const char *file;
};

static bool take_number(const char *name, const char *value, unsigned *number)
{
	char *end;
	const unsigned long parsed = strtoul(value, &end, 10);
	if (value[0] < '0' || value[0] > '9' || *end != '\0' || parsed > INT_MAX) {
		usage_error("fit", "--%s: wanted a whole number, found \"%s\"", name, value);
		return false;
	}
	*number = (unsigned)parsed;
	return true;
}

static bool take_positive(const char *name, const char *value, unsigned *number)
{
	if (!take_number(name, value, number))
		return false;
	if (*number > 0)
		return true;
	usage_error("fit", "--%s: wanted a number above 0, found 0", name);
	return false;
}

static bool take_option(void *context, int option, const char *value)
{
	struct fit_options *options = context;
	scanlatch_fit_request *request = &options->request;
	switch (option) {
	case FIT_STANDARD: request->standard = value; return true;
	case FIT_GRADE: request->grade = value; return true;
	case FIT_PHASE: request->phase = value; return true;
	case FIT_CRYSTAL: request->crystal = value; return true;
	case FIT_TICKS: request->ticks_per_dot = value; return true;
	case FIT_DOTS: request->dots_per_cell = value; return true;
	case FIT_COLUMNS: return take_positive("columns", value, &request->columns);
	case FIT_LINES: return take_positive("lines", value, &request->lines);
	case FIT_WIDTH: return take_number("width", value, &request->width);
	case FIT_STRETCHED: return take_number("stretched", value, &request->stretched);
	case FIT_TOP: return take_positive("top", value, &request->top);
	default: return take_positive("write", value, &options->write);
	}
}

static const struct option_table table = {"fit", help, "hV", long_options, take_option};

static int write_plan(const struct fit_options *options, const scanlatch_fit *fit)
{
	size_t length;
	bool kept;
	char *plan = scanlatch_fit_plan(fit, options->write - 1, &length);
	if (plan == NULL)
		return memory_error();
	if (strcmp(options->file, "-") == 0)
		return print_string(plan);
	const bool good = write_output(options->file, plan, length, &kept);
	if (good && !options->common.json)
		print_written(options->file, length, kept);
	scanlatch_free(plan);
	return good ? EXIT_GOOD : EXIT_SYSTEM;
}

static int finish(const struct fit_options *options, const scanlatch_fit *fit)
{
	const size_t count = scanlatch_fit_count(fit);
	const bool writes = options->write > 0 && options->write <= count, lacks = count > 0 && options->write > count;
	int code = count > 0 && !lacks ? EXIT_GOOD : EXIT_FOUND;
	if (options->common.json || (!writes && !lacks))
		code = worse(code, print_string(options->common.json ? scanlatch_fit_json(fit) : scanlatch_fit_text(fit)));
	if (lacks)
		fprintf(stderr, "scanlatch fit: --write: wanted one of %zu layout%s, found %u; nothing was written\n", count,
		        count == 1 ? "" : "s", options->write);
	return writes ? worse(code, write_plan(options, fit)) : code;
}

static int search(const struct fit_options *options)
{
	struct progress progress = PROGRESS_NONE;
	char *why;
	progress_begin(&progress, "searching");
	scanlatch_fit *fit = scanlatch_fit_search(&options->request, &why);
	progress_end(&progress);
	if (fit == NULL && why == NULL)
		return memory_error();
	if (fit == NULL) {
		usage_error("fit", "--%s", why);
		scanlatch_free(why);
		return EXIT_BAD;
	}
	const int code = finish(options, fit);
	scanlatch_fit_destroy(fit);
	return code;
}

int command_fit(int argument_count, char **arguments)
{
	struct fit_options options = {.request = scanlatch_fit_defaults()};
	const int parsed = parse_options(&table, argument_count, arguments, &options);
	if (parsed != PARSED)
		return parsed;
	const int wanted = options.write > 0 ? 1 : 0, found = argument_count - optind;
	if (options.request.standard == NULL)
		return usage_error("fit", "wanted --standard NAME, found none");
	if (options.request.columns == 0)
		return usage_error("fit", "wanted --columns N, the cells with picture in a line, found none");
	if (wanted == 1 && found == 0)
		return usage_error("fit", "--write: wanted a number and a file, found no file");
	if (found > wanted)
		return usage_error("fit", "\"%s\" is no option, and a file is wanted only with --write", arguments[argument_count - 1]);
	if (options.write > options.request.top)
		options.request.top = options.write;
	options.file = wanted == 1 ? arguments[optind] : NULL;
	if (wanted == 1 && (options.file[0] == '\0' || options.file[strlen(options.file) - 1] == '/'))
		return usage_error("fit", "--write: wanted a file, found \"%s\"", options.file);
	if (wanted == 1 && options.common.json && strcmp(options.file, "-") == 0)
		return usage_error("fit", "--write: wanted a file, as the JSON document goes to standard output");
	return search(&options);
}
