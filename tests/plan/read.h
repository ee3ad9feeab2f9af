// Plans and sets read from text, for tests of the reader; the catalogue is the real one.
#ifndef SCANLATCH_TESTS_PLAN_READ_H
#define SCANLATCH_TESTS_PLAN_READ_H

#include <stdio.h>
#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "catalogue/catalogue.h"
#include "plan/set.h"

#define SOURCES 8

struct reading {
	struct arena *arena;
	struct diagnostics *diagnostics;
	const struct catalogue *catalogue;
	struct source sources[SOURCES];
	size_t source_count;
};

static inline struct reading *begin_reading(void)
{
	struct arena *arena = arena_create();
	assert_non_null(arena);
	struct reading *reading = arena_alloc(arena, sizeof *reading);
	assert_non_null(reading);
	reading->arena = arena;
	reading->diagnostics = diagnostics_create();
	assert_non_null(reading->diagnostics);
	reading->catalogue = catalogue_load(arena, reading->diagnostics);
	assert_non_null(reading->catalogue);
	return reading;
}

static inline void end_reading(struct reading *reading)
{
	diagnostics_destroy(reading->diagnostics);
	arena_destroy(reading->arena);
}

static inline const struct source *add_source(struct reading *reading, const char *name, const char *text)
{
	assert_true(reading->source_count < SOURCES);
	reading->sources[reading->source_count] = (struct source){name, text, strlen(text)};
	return &reading->sources[reading->source_count++];
}

// What was wrong, if anything, is printed.
static inline void assert_no_errors(const struct reading *reading)
{
	struct text text = {0};
	diagnostics_print(reading->diagnostics, &text, false);
	fputs(text_string(&text), stderr);
	text_release(&text);
	assert_int_equal(diagnostics_error_count(reading->diagnostics), 0);
}

// A plan of `types` line types with the given bodies of signals, machine and chips, and what else stands at the top.
static inline const char *plan_text(struct reading *reading, size_t types, const char *signals, const char *machine, const char *chips,
                                    const char *more)
{
	struct text lines = {0}, frame = {0};
	for (size_t type = 0; type < types; type++) {
		text_printf(&lines, "  type %zu: { regions: [{ region: all, cells: 4 }] }\n", type);
		text_printf(&frame, "  - { repeat: 1, line: type %zu }\n", type);
	}
	const char *plan = arena_format(reading->arena,
	                                "scanlatch: 1\nname: quay\nclock: { master: 10 MHz, cell: 10 ticks }\n"
	                                "signals: { %s }\nmachine: { %s }\nchips: %s\n%slines:\n%sframe:\n%s",
	                                signals, machine, chips, more, text_string(&lines), text_string(&frame));
	text_release(&lines);
	text_release(&frame);
	assert_non_null(plan);
	return plan;
}

#endif
