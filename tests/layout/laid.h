// Plans from text, laid out, for tests: the reader and the catalogue are the real ones.
#ifndef SCANLATCH_TESTS_LAYOUT_LAID_H
#define SCANLATCH_TESTS_LAYOUT_LAID_H

#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdio.h>
#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "catalogue/catalogue.h"
#include "layout/timeline.h"

struct laid {
	struct arena *arena;
	struct source source;
	struct diagnostics *diagnostics;
	struct plan *plan;
	struct timeline *timeline; // NULL if the plan could not be read or laid out
};

// A whole plan; the text is copied.
static inline struct laid lay_whole(const char *text)
{
	struct laid laid = {.arena = arena_create(), .diagnostics = diagnostics_create()};
	assert_non_null(laid.arena);
	assert_non_null(laid.diagnostics);
	const char *copy = arena_copy(laid.arena, text, strlen(text));
	assert_non_null(copy);
	laid.source = (struct source){"quay.yaml", copy, strlen(copy)};
	struct source *source = arena_alloc(laid.arena, sizeof *source);
	assert_non_null(source);
	*source = laid.source;
	const struct catalogue *catalogue = catalogue_load(laid.arena, laid.diagnostics);
	assert_non_null(catalogue);
	laid.plan = plan_read(source, catalogue, laid.diagnostics);
	laid.timeline = laid.plan != NULL ? timeline_create(laid.plan, laid.diagnostics) : NULL;
	return laid;
}

// A plan whose cells are 10 ticks of 10 MHz, 1 us, stretched by 4 ticks; `lines` and `frame` are the bodies of those keys.
static inline struct laid lay(const char *clock_keys, const char *lines, const char *frame)
{
	struct text text = {0};
	text_printf(&text,
	            "scanlatch: 1\n"
	            "name: quay\n"
	            "clock: { master: 10 MHz, cell: 10 ticks, stretch: 4 ticks%s }\n"
	            "signals:\n"
	            "  sync: { role: composite sync, active: low }\n"
	            "  late: { role: stretch, active: high }\n"
	            "  load: { role: plain, active: high, lead: 1 cell }\n"
	            "  mark: { role: plain, active: high, lead: -2 cells }\n"
	            "machine: { form: loop, state: 12 bits, fields: { at: 5..0, all: 11..0, top: 11..4 } }\n"
	            "chips: { part: 28C64, speed: 150 ns }\n"
	            "lines:\n%s"
	            "frame:\n%s",
	            clock_keys, lines, frame);
	assert_false(text.failed);
	struct laid laid = lay_whole(text_string(&text));
	text_release(&text);
	return laid;
}

static inline void release(struct laid *laid)
{
	timeline_destroy(laid->timeline);
	plan_destroy(laid->plan);
	diagnostics_destroy(laid->diagnostics);
	arena_destroy(laid->arena);
}

// The plan must have been laid out; what was wrong is printed if not.
static inline void assert_laid(const struct laid *laid)
{
	if (laid->timeline == NULL) {
		struct text text = {0};
		diagnostics_print(laid->diagnostics, &text, false);
		fputs(text_string(&text), stderr);
		text_release(&text);
	}
	assert_non_null(laid->timeline);
}

// The plan must have been refused for exactly one reason.
static inline void assert_refused(const struct laid *laid, enum rule rule)
{
	assert_null(laid->timeline);
	assert_int_equal(diagnostics_error_count(laid->diagnostics), 1);
	assert_int_equal(diagnostics_rule(laid->diagnostics, 0), rule);
}

#endif
