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

int command_list(int argument_count, char **arguments)
{
	struct common_options options = {0};
	int option;
	while ((option = getopt_long(argument_count, arguments, "hV", long_options, NULL)) != -1) {
		if (option == 'h') {
			fputs(help, stdout);
			return EXIT_GOOD;
		}
		if (option == 'V')
			return print_version();
		if (option == '?')
			return option_error("list ");
		if (!take_common_option(&options, option, optarg, "list"))
			return EXIT_BAD;
	}
	if (argument_count - optind != 1)
		return usage_error("list", "wanted one catalogue (parts), found %d", argument_count - optind);
	const char *what = arguments[optind];
	if (strcmp(what, "standards") == 0 || strcmp(what, "crystals") == 0)
		return usage_error("list", "the catalogue of %s is not in this version yet", what);
	if (strcmp(what, "parts") != 0)
		return usage_error("list", "there is no catalogue of \"%s\": wanted parts", what);
	return print_string(options.json ? scanlatch_parts_json() : scanlatch_parts_text());
}
