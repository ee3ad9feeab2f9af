// Inside the command diff: what its own files share.
#ifndef SCANLATCH_COMMAND_DIFF_H
#define SCANLATCH_COMMAND_DIFF_H

#include "command/command.h"

struct diff_options {
	struct common_options common;
	bool git;
	bool markdown;
	bool svg;
};

// Reads both sides, compares them and prints the report. `names` are what reports call the two, `sources` what messages do; the plans of a
// set are looked for in the folder of its source. Returns the exit code.
int diff_files(const char *const paths[2], const char *const names[2], const char *const sources[2], const struct diff_options *options,
               scanlatch_messages *messages);

// diff --git: takes the arguments that git calls its external diff with. Returns the exit code; never EXIT_FOUND, which git takes for a failure.
int diff_git(char **arguments, int count, const struct diff_options *options, scanlatch_messages *messages);

#endif
