#include <getopt.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/ioctl.h>
#include <unistd.h>

#include "command/command.h"

static const char help[] =
	"Usage: scanlatch draw [options] line|frame|table|phase PLAN|SET\n"
	"\n"
	"Draws a plan as SVG, for any browser; of a set the plan of one bank. PLAN or SET may be - for standard\n"
	"input.\n"
	"\n"
	"  line    the signals of a line at their pins, to scale: regions, rulers, limits of the standard that\n"
	"          the plan names, and the level of composite video\n"
	"  frame   the whole frame, cells across, lines down: sync, burst, blanking, picture, stretched cells\n"
	"  table   the addresses of the EEPROMs: rows of each line type, spare rows, codes of decoders, banks\n"
	"  phase   the phase of the subcarrier at the start of each line, until it repeats\n"
	"\n"
	"Options:\n"
	"  -o, --output FILE  where the picture goes; - is standard output, as without it. Folders\n"
	"                     that are missing are made\n"
	"      --line N|TYPE  of line: which; a line of the frame, from 0, or the first of a line type. Without it\n"
	"                     the first of the type that most lines have\n"
	"      --text         of line: as text for a terminal, as wide as that is (COLUMNS, or 80)\n"
	"      --ascii        with --text: nothing but ASCII\n"
	"      --interleave   of frame: the lines of both fields between each other, as the tube shows them\n"
	"      --bank N       of a set: the bank whose plan is drawn; 0 without it\n"
	"      --color WHEN   auto, always or never: of messages\n"
	"  -h, --help         print this help\n"
	"  -V, --version      print the version\n";

static const struct option long_options[] = {
	{"help", no_argument, NULL, 'h'},
	{"version", no_argument, NULL, 'V'},
	{"color", required_argument, NULL, OPTION_COLOUR},
	{"output", required_argument, NULL, 'o'},
	{"line", required_argument, NULL, OPTION_LINE},
	{"text", no_argument, NULL, OPTION_TEXT},
	{"ascii", no_argument, NULL, OPTION_ASCII},
	{"interleave", no_argument, NULL, OPTION_INTERLEAVE},
	{"bank", required_argument, NULL, OPTION_BANK},
	{NULL, 0, NULL, 0},
};

struct draw_options {
	struct common_options common;
	const char *output;  // NULL: standard output
	const char *line;    // NULL: the commonest
	unsigned bank;
	bool text, ascii, interleave;
};

// Columns of the terminal: what COLUMNS says, or else standard output, or 80.
static unsigned terminal_columns(void)
{
	const char *said = getenv("COLUMNS");
	struct winsize size;
	char *end;
	if (said != NULL && said[0] >= '1' && said[0] <= '9') {
		const unsigned long columns = strtoul(said, &end, 10);
		if (*end == '\0' && columns <= 10000)
			return (unsigned)columns;
	}
	if (ioctl(STDOUT_FILENO, TIOCGWINSZ, &size) == 0 && size.ws_col > 0)
		return size.ws_col;
	return 80;
}

static char *draw_line(const scanlatch_plan *plan, const struct draw_options *options, scanlatch_messages *messages)
{
	if (options->text)
		return scanlatch_draw_line_text(plan, options->bank, options->line, terminal_columns(), options->ascii, messages);
	return scanlatch_draw_line(plan, options->bank, options->line, messages);
}

static char *draw_frame(const scanlatch_plan *plan, const struct draw_options *options, scanlatch_messages *messages)
{
	return scanlatch_draw_frame(plan, options->bank, options->interleave, messages);
}

static char *draw_table(const scanlatch_plan *plan, const struct draw_options *options, scanlatch_messages *messages)
{
	scanlatch_images *images = scanlatch_images_make(plan, messages);
	char *picture = images != NULL ? scanlatch_draw_table(images, options->bank, messages) : NULL;
	scanlatch_images_destroy(images);
	return picture;
}

static char *draw_phase(const scanlatch_plan *plan, const struct draw_options *options, scanlatch_messages *messages)
{
	return scanlatch_draw_phase(plan, options->bank, messages);
}

struct subject {
	const char *name;
	char *(*draw)(const scanlatch_plan *plan, const struct draw_options *options, scanlatch_messages *messages);
};

static const struct subject subjects[] = {
	{"line", draw_line},
	{"frame", draw_frame},
	{"table", draw_table},
	{"phase", draw_phase},
};

static const struct subject *find_subject(const char *name)
{
	for (size_t index = 0; index < sizeof subjects / sizeof *subjects; index++)
		if (strcmp(subjects[index].name, name) == 0)
			return &subjects[index];
	return NULL;
}

static int draw(const struct subject *subject, const char *path, const struct draw_options *options, scanlatch_messages *messages)
{
	struct progress progress = PROGRESS_NONE;
	progress_begin(&progress, "drawing");
	scanlatch_plan *plan = scanlatch_plan_read_file(path, messages);
	char *picture = plan != NULL ? subject->draw(plan, options, messages) : NULL;
	progress_end(&progress);
	int code = print_messages(messages, options->common.colour);
	if (code == EXIT_GOOD && picture == NULL)
		code = memory_error();
	else if (code == EXIT_GOOD && options->output != NULL)
		code = write_result(options->output, picture);
	else if (code == EXIT_GOOD)
		fputs(picture, stdout);
	scanlatch_free(picture);
	scanlatch_plan_destroy(plan);
	return code;
}

static bool take_bank(struct draw_options *options, const char *value)
{
	char *end;
	const unsigned long bank = strtoul(value, &end, 10);
	if (value[0] < '0' || value[0] > '9' || *end != '\0' || bank > 255) {
		usage_error("draw", "--bank: wanted a number from 0 to 255, found \"%s\"", value);
		return false;
	}
	options->bank = (unsigned)bank;
	return true;
}

static bool take_option(void *context, int option, const char *value)
{
	struct draw_options *options = context;
	if (option == OPTION_BANK)
		return take_bank(options, value);
	if (option == 'o')
		options->output = strcmp(value, "-") == 0 ? NULL : value;
	if (option == OPTION_LINE)
		options->line = value;
	options->text = options->text || option == OPTION_TEXT;
	options->ascii = options->ascii || option == OPTION_ASCII;
	options->interleave = options->interleave || option == OPTION_INTERLEAVE;
	return true;
}

// Options that the picture has no use for are refused: who gives them expects something.
static int check_options(const struct draw_options *options, const struct subject *subject)
{
	const bool line = subject->draw == draw_line;
	if (options->output != NULL && options->output[0] == '\0')
		return usage_error("draw", "-o: wanted the name of a file, found nothing");
	if (options->line != NULL && !line)
		return usage_error("draw", "--line is for draw line, not for draw %s", subject->name);
	if (options->text && !line)
		return usage_error("draw", "--text is for draw line, not for draw %s", subject->name);
	if (options->ascii && !options->text)
		return usage_error("draw", "--ascii is for draw line with --text");
	if (options->interleave && subject->draw != draw_frame)
		return usage_error("draw", "--interleave is for draw frame, not for draw %s", subject->name);
	return EXIT_GOOD;
}

static const struct option_table table = {"draw", help, "hVo:", long_options, take_option};

int command_draw(int argument_count, char **arguments)
{
	struct draw_options options = {0};
	const int parsed = parse_options(&table, argument_count, arguments, &options);
	if (parsed != PARSED)
		return parsed;
	if (argument_count == optind)
		return usage_error("draw", "wanted what to draw (line, frame, table or phase) and a plan, found nothing");
	const struct subject *subject = find_subject(arguments[optind]);
	if (subject == NULL)
		return usage_error("draw", "there is no picture of \"%s\": wanted line, frame, table or phase", arguments[optind]);
	if (argument_count - optind != 2)
		return usage_error("draw", "wanted one plan, found %d", argument_count - optind - 1);
	int code = check_options(&options, subject);
	if (code != EXIT_GOOD)
		return code;
	scanlatch_messages *messages = scanlatch_messages_create();
	if (messages == NULL)
		return memory_error();
	code = draw(subject, arguments[optind + 1], &options, messages);
	scanlatch_messages_destroy(messages);
	return code;
}
