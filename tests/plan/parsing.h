// A document parsed from bytes that end where their memory ends, for tests.
#ifndef SCANLATCH_TESTS_PLAN_PARSING_H
#define SCANLATCH_TESTS_PLAN_PARSING_H

#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "base/diagnostics.h"
#include "base/text.h"
#include "plan/document.h"

struct parsed {
	char *bytes;
	struct source source;
	struct arena *arena;
	struct diagnostics *diagnostics;
	const struct node *root;
	struct text printed; // the diagnostics
};

// Released with parsed_release. The source is called "plan".
static inline struct parsed *parse_bytes(const char *bytes, size_t length)
{
	struct parsed *const parsed = calloc(1, sizeof(*parsed));

	assert_non_null(parsed);
	// No byte more than the text has, so that a sanitizer sees a read beyond it.
	parsed->bytes = malloc(length > 0 ? length : 1);
	assert_non_null(parsed->bytes);
	if (length > 0)
		memcpy(parsed->bytes, bytes, length);
	parsed->source = (struct source){"plan", parsed->bytes, length};
	parsed->arena = arena_create();
	parsed->diagnostics = diagnostics_create();
	assert_non_null(parsed->arena);
	assert_non_null(parsed->diagnostics);
	parsed->root = document_parse(parsed->arena, &parsed->source, parsed->diagnostics);
	diagnostics_print(parsed->diagnostics, &parsed->printed, false);
	assert_false(parsed->printed.failed);
	assert_int_equal(parsed->root == NULL, diagnostics_error_count(parsed->diagnostics) > 0);
	return parsed;
}

static inline struct parsed *parse_string(const char *text)
{
	return parse_bytes(text, strlen(text));
}

static inline void parsed_release(struct parsed *parsed)
{
	text_release(&parsed->printed);
	diagnostics_destroy(parsed->diagnostics);
	arena_destroy(parsed->arena);
	free(parsed->bytes);
	free(parsed);
}

#endif
