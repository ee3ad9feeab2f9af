// Diagnostics: collected where a fault is found, printed by the program in file order.
#ifndef SCANLATCH_BASE_DIAGNOSTICS_H
#define SCANLATCH_BASE_DIAGNOSTICS_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#include "base/rules.h"

struct text;

// A text that places point into. `name` is what the user called it.
struct source {
	const char *name;
	const char *bytes; // may be NULL (unreadable file)
	size_t length;
};

// A place in a source, both counted from 1, column in characters. Line 0: the source as a whole.
struct place {
	const struct source *source;
	uint32_t line;
	uint32_t column;
};

struct diagnostics;

// NULL when memory is out. Owned by the caller.
struct diagnostics *diagnostics_create(void);
void diagnostics_destroy(struct diagnostics *diagnostics);

// Adds a diagnostic: lower case, no full stop: what was wanted, what was found. Its severity is the rule's.
// A message beyond 600 characters is cut, and diagnostics beyond 1,000 are only counted.
// Sources must outlive the diagnostics' printing. When memory is out, a fixed out-of-memory diagnostic stands instead.
__attribute__((format(printf, 4, 5)))
void diagnose(struct diagnostics *diagnostics, enum rule rule, struct place place, const char *format, ...);

// Adds a hint (what would be right) to the diagnostic added last.
__attribute__((format(printf, 2, 3)))
void diagnose_hint(struct diagnostics *diagnostics, const char *format, ...);

// False if a hint to the diagnostic added last would go nowhere, since that one was not kept: then none need be sought. Cannot fail.
bool diagnostics_take_hint(const struct diagnostics *diagnostics);

// Adds a second place to the diagnostic added last ("first defined here").
__attribute__((format(printf, 3, 4)))
void diagnose_also(struct diagnostics *diagnostics, struct place place, const char *format, ...);

size_t diagnostics_error_count(const struct diagnostics *diagnostics);
size_t diagnostics_count(const struct diagnostics *diagnostics);

// The rule of diagnostic `index` (0 … count-1 in the order added), for tests.
enum rule diagnostics_rule(const struct diagnostics *diagnostics, size_t index);
// The message of diagnostic `index`, as it was added; owned by the diagnostics.
const char *diagnostics_message(const struct diagnostics *diagnostics, size_t index);

// The message of the first error, without place, hint and rule, for reports that go on without what it refused; NULL if there is
// none. The diagnostics own it.
const char *diagnostics_first_error(const struct diagnostics *diagnostics);

// True if any error's rule stands for a refusal of the system (read, write, memory) and not for a bad input.
bool diagnostics_has_system_error(const struct diagnostics *diagnostics);

// Puts all diagnostics in file order (source name in order of first use, then line, column, then order added), each as
//     file:line:col: error: message [rule-id]
//       <source line, tabs as one space, cut to 100 characters around the marker>
//       <spaces>^
//     file:line:col: note: second place
//       hint: …
// Control characters of the source line print as '?'. With `colour`, severity words are coloured by ANSI codes.
void diagnostics_print(const struct diagnostics *diagnostics, struct text *out, bool colour);

#endif
