#include <getopt.h>
#include <stdio.h>
#include <string.h>

#include "command/command.h"

static const char help[] =
	"Usage: scanlatch list [options] parts|standards|crystals\n"
	"\n"
	"Prints a catalogue; every value has its source, \"from memory\" and \"common practice\" being sources\n"
	"too.\n"
	"\n"
	"  parts       memories with their access times, and the latches, counters and decoders around them;\n"
	"              a plan adds memories under parts\n"
	"  standards   limits of published standards for lines and fields, and what monitors accept\n"
	"  crystals    crystals and oscillators with their exact frequencies\n"
	"\n"
	"Options:\n"
	"      --json         one JSON document instead of text\n"
	"      --color WHEN   auto, always or never\n"
	"  -h, --help         print this help\n"
	"  -V, --version      print the version\n";

static const struct option long_options[] = {COMMON_LONG_OPTIONS, {NULL, 0, NULL, 0}};

static const struct option_table table = {"list", help, "hV", long_options, NULL};

static const struct {
	const char *name;
	char *(*text)(void);
	char *(*json)(void);
} catalogues[] = {
	{"parts", scanlatch_parts_text, scanlatch_parts_json},
	{"standards", scanlatch_standards_text, scanlatch_standards_json},
	{"crystals", scanlatch_crystals_text, scanlatch_crystals_json},
};

int command_list(int argument_count, char **arguments)
{
	struct common_options options = {0};
	const int parsed = parse_options(&table, argument_count, arguments, &options);
	if (parsed != PARSED)
		return parsed;
	if (argument_count - optind != 1)
		return usage_error("list", "wanted one catalogue (parts, standards or crystals), found %d", argument_count - optind);
	const char *what = arguments[optind];
	for (size_t index = 0; index < sizeof catalogues / sizeof *catalogues; index++)
		if (strcmp(what, catalogues[index].name) == 0)
			return print_string(options.json ? catalogues[index].json() : catalogues[index].text());
	return usage_error("list", "there is no catalogue of \"%s\": wanted parts, standards or crystals", what);
}
