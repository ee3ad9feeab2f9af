#include <getopt.h>
#include <stdio.h>
#include <string.h>

#include "command/command.h"

static const char help[] =
	"Usage: scanlatch list [options] parts\n"
	"\n"
	"Prints the catalogue of parts: memories with their access times, and the latches, counters and\n"
	"decoders around them with theirs. Every value has its source. A plan adds memories under parts.\n"
	"\n"
	"Options:\n"
	"      --json         one JSON document instead of text\n"
	"      --color WHEN   auto, always or never\n"
	"  -h, --help         print this help\n"
	"  -V, --version      print the version\n";

static const struct option long_options[] = {COMMON_LONG_OPTIONS, {NULL, 0, NULL, 0}};

static const struct option_table table = {"list", help, "hV", long_options, NULL};

int command_list(int argument_count, char **arguments)
{
	struct common_options options = {0};
	const int parsed = parse_options(&table, argument_count, arguments, &options);
	if (parsed != PARSED)
		return parsed;
	if (argument_count - optind != 1)
		return usage_error("list", "wanted one catalogue (parts), found %d", argument_count - optind);
	const char *what = arguments[optind];
	if (strcmp(what, "standards") == 0 || strcmp(what, "crystals") == 0)
		return usage_error("list", "the catalogue of %s is not in this version yet", what);
	if (strcmp(what, "parts") != 0)
		return usage_error("list", "there is no catalogue of \"%s\": wanted parts", what);
	return print_string(options.json ? scanlatch_parts_json() : scanlatch_parts_text());
}
