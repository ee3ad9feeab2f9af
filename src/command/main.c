#include <errno.h>
#include <signal.h>
#include <stdio.h>
#include <string.h>

#include "base/text.h"
#include "command/command.h"

const struct command commands[] = {
	{"check", "read plans or sets, lay out their lines and report, without images", command_check},
	{"build", "make the images of plans or sets, prove them and write them", command_build},
	{"prove", "prove images that are there against their plan or set", command_prove},
	{"diff", "what changed between two plans, sets, or a plan and images", command_diff},
	{"draw", "draw a line, the frame, the tables or the colour phase of a plan", command_draw},
	{"sheet", "write the build sheet of a plan or set, a page to print and keep at the bench", command_sheet},
	{"fit", "search line layouts that suit a standard, and write one as a plan", command_fit},
	{"lift", "read a plan back out of images", command_lift},
	{"list", "print a catalogue: parts, standards or crystals", command_list},
	{"schema", "print a JSON Schema of plans, sets, boards or reports", command_schema},
};
const size_t command_count = sizeof commands / sizeof *commands;

// Commands that the design has and this version does not.
static const char *const later_commands[] = {"readback", "probe", "export"};

static void print_help(FILE *out)
{
	fputs("Usage: scanlatch COMMAND [options] ARGUMENTS\n"
	      "\n"
	      "Fills the EEPROMs of discrete-logic video sequencers from a plan, and proves them.\n"
	      "\n"
	      "Commands:\n",
	      out);
	for (size_t index = 0; index < command_count; index++)
		fprintf(out, "  %-8s %s\n", commands[index].name, commands[index].summary);
	fputs("\n"
	      "Options:\n"
	      "  -h, --help     print this help; \"scanlatch COMMAND --help\" tells of a command\n"
	      "  -V, --version  print the version\n"
	      "\n"
	      "Exit codes: 0 nothing wrong; 1 something was found; 2 bad plan, image or command line;\n"
	      "3 the system refused.\n",
	      out);
}

static int suggest_help(void)
{
	fputs("scanlatch: try \"scanlatch --help\"\n", stderr);
	return EXIT_BAD;
}

static int unknown_command(const char *name)
{
	for (size_t index = 0; index < sizeof later_commands / sizeof *later_commands; index++)
		if (strcmp(name, later_commands[index]) == 0) {
			print_line(stderr, "scanlatch: the command \"%s\" is not carried out by this version yet", name);
			return EXIT_BAD;
		}
	struct text names = {0};
	for (size_t index = 0; index < command_count; index++)
		text_printf(&names, "%s %s", index == 0 ? "" : ",", commands[index].name);
	print_line(stderr, "scanlatch: there is no command \"%s\"; the commands are%s", name, text_string(&names));
	text_release(&names);
	return suggest_help();
}

static int run(int argument_count, char **arguments)
{
	if (argument_count < 2) {
		print_help(stderr);
		return EXIT_BAD;
	}
	const char *name = arguments[1];
	if (strcmp(name, "-h") == 0 || strcmp(name, "--help") == 0) {
		print_help(stdout);
		return EXIT_GOOD;
	}
	if (strcmp(name, "-V") == 0 || strcmp(name, "--version") == 0)
		return print_version();
	if (name[0] == '-') {
		print_line(stderr, "scanlatch: unknown option \"%s\" before a command", name);
		return suggest_help();
	}
	for (size_t index = 0; index < command_count; index++)
		if (strcmp(name, commands[index].name) == 0)
			return commands[index].run(argument_count - 1, arguments + 1);
	return unknown_command(name);
}

int main(int argument_count, char **arguments)
{
	// A file that outgrows a limit must be an error to report, not the end of the program.
	signal(SIGXFSZ, SIG_IGN);
	const int code = run(argument_count, arguments);
	// A result that did not reach standard output is a refusal of the system.
	if (fflush(stdout) != 0 || ferror(stdout)) {
		fprintf(stderr, "scanlatch: cannot write standard output: %s\n", strerror(errno));
		return EXIT_SYSTEM;
	}
	return code;
}
