// The commands: each parses its own options and returns the program's exit code.
#ifndef SCANLATCH_COMMAND_COMMAND_H
#define SCANLATCH_COMMAND_COMMAND_H

#include <pthread.h>
#include <signal.h>
#include <stdbool.h>
#include <stddef.h>
#include <stdio.h>

#include "scanlatch/scanlatch.h"

// The same in every command (design page 3).
enum exit_code {
	EXIT_GOOD = 0,   // nothing wrong
	EXIT_FOUND = 1,  // it ran and found something
	EXIT_BAD = 2,    // the plan, image or command line is bad
	EXIT_SYSTEM = 3, // the system refused
};

enum colour_choice { COLOUR_AUTO, COLOUR_ALWAYS, COLOUR_NEVER };

// The options that commands share.
struct common_options {
	enum colour_choice colour;
	bool json;
	bool strict;
};

struct command {
	const char *name;
	const char *summary;
	int (*run)(int argument_count, char **arguments);
};

extern const struct command commands[];
extern const size_t command_count;

int command_build(int argument_count, char **arguments);
int command_check(int argument_count, char **arguments);
int command_fit(int argument_count, char **arguments);
int command_draw(int argument_count, char **arguments);
int command_lift(int argument_count, char **arguments);
int command_diff(int argument_count, char **arguments);
int command_list(int argument_count, char **arguments);
int command_prove(int argument_count, char **arguments);
int command_schema(int argument_count, char **arguments);
int command_sheet(int argument_count, char **arguments);

// Long options without a short one: values above any character.
enum { OPTION_COLOUR = 1000, OPTION_JSON, OPTION_STRICT, OPTION_UNPROVEN, OPTION_FORMAT, OPTION_RECORD, OPTION_LISTING,
       OPTION_LINE, OPTION_BANK, OPTION_TEXT, OPTION_ASCII, OPTION_INTERLEAVE, OPTION_CUT, OPTION_NEAR, OPTION_GIT, OPTION_MARKDOWN, OPTION_SVG };

// The options that every command has, for its table.
#define COMMON_LONG_OPTIONS                                                                                                \
	{"help", no_argument, NULL, 'h'}, {"version", no_argument, NULL, 'V'}, {"color", required_argument, NULL, OPTION_COLOUR}, \
		{"json", no_argument, NULL, OPTION_JSON}

struct option;

// What a command's options are.
struct option_table {
	const char *command;
	const char *help;                  // the whole text of --help
	const char *short_options;         // "hV" and the command's own
	const struct option *long_options; // COMMON_LONG_OPTIONS, the command's own, and zeros
	// Takes an option of the command's own. False after saying why its value is wrong. NULL if there are none.
	bool (*take)(void *options, int option, const char *value);
};

#define PARSED (-1)

// Parses the options; `options` begins with a struct common_options. PARSED: go on with the arguments from optind on; otherwise the
// exit code with which the command ends (help or version were printed, or an error).
int parse_options(const struct option_table *table, int argument_count, char **arguments, void *options);

// Prints the version to standard output. Returns EXIT_GOOD.
int print_version(void);

// Prints a line that names what is not ours, such as paths: what could command a terminal, newlines too, is printed as '?'; if memory is
// out, all that is not ASCII, and at most 1023 bytes.
__attribute__((format(printf, 2, 3)))
void print_line(FILE *out, const char *format, ...);

// "scanlatch COMMAND: …" and where to find help, on standard error. Returns EXIT_BAD.
__attribute__((format(printf, 2, 3)))
int usage_error(const char *command, const char *format, ...);

bool colour_on(enum colour_choice choice, int descriptor);

// Prints messages to standard error and gives the exit code that their errors ask for: EXIT_GOOD without errors.
int print_messages(const scanlatch_messages *messages, enum colour_choice colour);

// Writes a string to standard output and frees it; "memory is out" if it is NULL. Returns EXIT_GOOD or EXIT_SYSTEM.
int print_string(char *string);

// Lets the signals that would end the program wait, so that no temporary file is left; *before is what to restore.
void hold_ending_signals(sigset_t *before);

// Writes a file, whole or not at all, and makes the folders that it lacks; *kept says that it held these bytes already and was left alone. A device or
// pipe is written into, not replaced. False after saying on standard error what was refused.
bool write_output(const char *path, const char *bytes, size_t length, bool *kept);

// Says on standard output that a file was written, or kept.
void print_written(const char *path, size_t length, bool kept);

// The same as write_output for a result, says so on standard output, and of a refusal why. Returns EXIT_GOOD or EXIT_SYSTEM.
int write_result(const char *path, const char *result);

// "scanlatch: memory is out" on standard error. Returns EXIT_SYSTEM.
int memory_error(void);

bool is_folder(const char *path);
bool exists(const char *path);

// Checks the arguments of a command that takes a plan (or what it calls so) and images: a folder, or LABEL=FILE for each chip. EXIT_GOOD,
// or EXIT_BAD after saying what is wrong.
int check_image_arguments(const char *command, const char *what, char **arguments, int count);

// Reads the images that such arguments name, after the plan. False if one could not be read or is missing; the messages say why.
bool read_images(scanlatch_images *images, char **arguments, int count, scanlatch_messages *messages);

// The worse of two exit codes: a refusal of the system before bad input before findings. Cannot fail.
int worse(int left, int right);

// Shows on standard error, if it is a terminal and work takes over half a second, what is going on.
struct progress {
	pthread_t thread;
	pthread_mutex_t lock;
	pthread_cond_t ended;
	bool running;     // the thread exists
	bool over;        // the thread is to end
	const char *work; // a constant
};

#define PROGRESS_NONE {.lock = PTHREAD_MUTEX_INITIALIZER, .ended = PTHREAD_COND_INITIALIZER}

// Names the work that begins now. The progress must stay where it is until progress_end.
void progress_begin(struct progress *progress, const char *work);
void progress_end(struct progress *progress);

#endif
