#include <getopt.h>
#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

#include "base/excerpt.h"
#include "base/text.h"
#include "command/command.h"

static bool take_colour(struct common_options *options, const char *value, const char *command)
{
	static const char *const words[] = {[COLOUR_AUTO] = "auto", [COLOUR_ALWAYS] = "always", [COLOUR_NEVER] = "never"};
	for (size_t index = 0; index < sizeof words / sizeof *words; index++)
		if (strcmp(value, words[index]) == 0) {
			options->colour = (enum colour_choice)index;
			return true;
		}
	usage_error(command, "--color: wanted auto, always or never, found \"%s\"", value);
	return false;
}

int print_version(void)
{
	printf("scanlatch %s\n", scanlatch_version());
	return EXIT_GOOD;
}

static bool is_printable(const char *words)
{
	struct text printable = {0};
	excerpt_put_printable(words, strlen(words), &printable);
	const bool same = !printable.failed && strcmp(text_string(&printable), words) == 0;
	text_release(&printable);
	return same;
}

// getopt_long prints options as they are: of those that could command a terminal it is not to speak.
static bool are_printable(char *const *arguments)
{
	while (*arguments != NULL && is_printable(*arguments))
		arguments++;
	return *arguments == NULL;
}

static int option_error(const char *command, const char *argument)
{
	if (opterr == 0)
		return usage_error(command, "wanted an option as the help has them, found '%s'", argument);
	print_line(stderr, "scanlatch: try \"scanlatch %s --help\"", command);
	return EXIT_BAD;
}

int parse_options(const struct option_table *table, int argument_count, char **arguments, void *options)
{
	struct common_options *common = options;
	char name[32]; // getopt_long begins its messages with it
	int option;
	snprintf(name, sizeof name, "scanlatch %s", table->command);
	arguments[0] = name;
	opterr = are_printable(arguments);
	while ((option = getopt_long(argument_count, arguments, table->short_options, table->long_options, NULL)) != -1) {
		bool good = true;
		if (option == 'h') {
			fputs(table->help, stdout);
			return EXIT_GOOD;
		} else if (option == 'V') {
			return print_version();
		} else if (option == '?') {
			return option_error(table->command, arguments[optind - 1]);
		} else if (option == OPTION_COLOUR) {
			good = take_colour(common, optarg, table->command);
		} else if (option == OPTION_JSON) {
			common->json = true;
		} else if (option == OPTION_STRICT) {
			common->strict = true;
		} else {
			good = table->take(options, option, optarg);
		}
		if (!good)
			return EXIT_BAD;
	}
	return PARSED;
}

// Where there is no memory to tell characters apart, or for a long line: ASCII, cut off.
__attribute__((format(printf, 3, 0)))
static void put_plain_line(FILE *out, const char *before, const char *format, va_list arguments)
{
	char line[1024];
	vsnprintf(line, sizeof line, format, arguments);
	for (char *byte = line; *byte != '\0'; byte++)
		if (*byte < ' ' || *byte > '~')
			*byte = '?';
	fprintf(out, "%s%s\n", before, line);
}

__attribute__((format(printf, 3, 0)))
static void put_line(FILE *out, const char *before, const char *format, va_list arguments)
{
	struct text line = {0}, printable = {0};
	va_list again;
	va_copy(again, arguments);
	text_put(&line, before);
	text_vprintf(&line, format, arguments);
	excerpt_put_printable(text_string(&line), line.length, &printable);
	if (!line.failed && !printable.failed)
		fprintf(out, "%s\n", text_string(&printable));
	else
		put_plain_line(out, before, format, again);
	va_end(again);
	text_release(&line);
	text_release(&printable);
}

void print_line(FILE *out, const char *format, ...)
{
	va_list arguments;
	va_start(arguments, format);
	put_line(out, "", format, arguments);
	va_end(arguments);
}

int usage_error(const char *command, const char *format, ...)
{
	char before[32];
	va_list arguments;
	snprintf(before, sizeof before, "scanlatch %s: ", command);
	va_start(arguments, format);
	put_line(stderr, before, format, arguments);
	va_end(arguments);
	print_line(stderr, "scanlatch: try \"scanlatch %s --help\"", command);
	return EXIT_BAD;
}

bool colour_on(enum colour_choice choice, int descriptor)
{
	const char *no_colour = getenv("NO_COLOR"), *terminal = getenv("TERM");
	if (choice != COLOUR_AUTO)
		return choice == COLOUR_ALWAYS;
	if ((no_colour != NULL && no_colour[0] != '\0') || (terminal != NULL && strcmp(terminal, "dumb") == 0))
		return false;
	return isatty(descriptor) == 1;
}

int memory_error(void)
{
	fputs("scanlatch: memory is out\n", stderr);
	return EXIT_SYSTEM;
}

int print_messages(const scanlatch_messages *messages, enum colour_choice colour)
{
	char *text = scanlatch_messages_text(messages, colour_on(colour, STDERR_FILENO));
	if (text == NULL)
		return memory_error();
	fputs(text, stderr);
	scanlatch_free(text);
	if (scanlatch_messages_errors(messages) == 0)
		return EXIT_GOOD;
	return scanlatch_messages_system(messages) ? EXIT_SYSTEM : EXIT_BAD;
}

int print_string(char *string)
{
	if (string == NULL)
		return memory_error();
	fputs(string, stdout);
	scanlatch_free(string);
	return EXIT_GOOD;
}

int worse(int left, int right)
{
	return left > right ? left : right;
}
