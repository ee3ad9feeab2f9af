// What is wrong with a text that is no YAML, in words for somebody who does not know the parser.
#ifndef SCANLATCH_PLAN_SYNTAX_H
#define SCANLATCH_PLAN_SYNTAX_H

#include <stdbool.h>

#include "plan/characters.h"

// A fault as libyaml reports it.
struct syntax_fault {
	const char *problem;    // "did not find expected ',' or ']'"
	const char *context;    // "while parsing a flow sequence", or NULL
	struct position found;  // where the problem is
	struct position opened; // where what the context names begins; `found` without context
	bool document_closed;   // a "..." ended the document before it
};

// Adds the fault (mostly YAML_SYNTAX, else the more particular rule), with its hint and second place. Problems that are not
// known by their text are passed on in the parser's words. Cannot fail.
void syntax_diagnose(struct diagnostics *diagnostics, const struct syntax_fault *fault);

#endif
