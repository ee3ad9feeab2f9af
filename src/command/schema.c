#include <getopt.h>
#include <stdio.h>
#include <string.h>

#include "base/text.h"
#include "command/command.h"

static const char help[] =
	"Usage: scanlatch schema [options] [NAME]\n"
	"\n"
	"Prints a JSON Schema (draft 2020-12), for editors and validators. A language is judged as a YAML\n"
	"parser reads it, so that an editor marks a key that is misspelt while it is written. Without a\n"
	"name: plan.\n"
	"\n"
	"  plan, set, board                the languages of these files\n"
	"  check, build, prove, diff,      what these commands print with --json\n"
	"  sheet, fit, lift\n"
	"  parts, standards, crystals      what list prints of these with --json\n"
	"  manifest                        the manifest that build writes beside the images\n"
	"\n"
	"Options:\n"
	"      --json         changes nothing: a schema is JSON\n"
	"      --color WHEN   auto, always or never\n"
	"  -h, --help         print this help\n"
	"  -V, --version      print the version\n";

static const struct option long_options[] = {COMMON_LONG_OPTIONS, {NULL, 0, NULL, 0}};

static const struct option_table table = {"schema", help, "hV", long_options, NULL};

static int unknown_schema(const char *name)
{
	const size_t count = scanlatch_schema_count();
	struct text names = {0};
	for (size_t schema = 0; schema < count; schema++)
		text_printf(&names, "%s %s", schema == 0 ? "" : ",", scanlatch_schema_name(schema));
	const int code = usage_error("schema", "there is no schema of \"%s\"; there are%s", name, text_string(&names));
	text_release(&names);
	return code;
}

int command_schema(int argument_count, char **arguments)
{
	struct common_options options = {0};
	const int parsed = parse_options(&table, argument_count, arguments, &options);
	if (parsed != PARSED)
		return parsed;
	if (argument_count - optind > 1)
		return usage_error("schema", "wanted at most one name, found %d", argument_count - optind);
	const char *name = optind < argument_count ? arguments[optind] : "plan";
	for (size_t schema = 0; schema < scanlatch_schema_count(); schema++)
		if (strcmp(name, scanlatch_schema_name(schema)) == 0)
			return print_string(scanlatch_schema_json(schema));
	return unknown_schema(name);
}
