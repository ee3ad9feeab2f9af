// Tables of line-frame plans from text, for tests: the reader and the catalogue are the real ones.
#ifndef SCANLATCH_TESTS_TABLE_DRAWN_H
#define SCANLATCH_TESTS_TABLE_DRAWN_H

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
#include "table/table.h"

struct drawn {
	struct arena *arena;
	struct source source;
	struct diagnostics *diagnostics;
	struct text printed;       // the diagnostics
	struct plan *plan;
	struct timeline *timeline;
	struct table *table;       // NULL if it could not be made
};

// Reads a plan and makes its table. `machine` are the keys of the machine but its form, `rest` the plan's keys but name, clock
// and machine. The plan must be one that can be laid out.
static inline struct drawn *draw(const char *machine, const char *rest)
{
	struct arena *arena = arena_create();
	struct drawn *drawn = arena_alloc(arena, sizeof *drawn);
	assert_non_null(drawn);
	*drawn = (struct drawn){.arena = arena, .diagnostics = diagnostics_create()};
	const char *text = arena_format(arena,
	                                "scanlatch: 1\n"
	                                "name: mole-light\n"
	                                "clock: { master: 10 MHz, cell: 10 ticks }\n"
	                                "machine:\n  form: line-frame\n%s"
	                                "%s", machine, rest);
	assert_non_null(text);
	assert_non_null(drawn->diagnostics);
	drawn->source = (struct source){"mole.yaml", text, strlen(text)};
	drawn->plan = plan_read(&drawn->source, catalogue_load(arena, drawn->diagnostics), drawn->diagnostics);
	drawn->timeline = drawn->plan != NULL ? timeline_create(drawn->plan, drawn->diagnostics) : NULL;
	drawn->table = drawn->timeline != NULL ? table_create(drawn->timeline, drawn->diagnostics) : NULL;
	diagnostics_print(drawn->diagnostics, &drawn->printed, false);
	if (drawn->timeline == NULL)
		fputs(text_string(&drawn->printed), stderr);
	assert_non_null(drawn->timeline);
	assert_int_equal(drawn->table == NULL, diagnostics_error_count(drawn->diagnostics) > 0);
	return drawn;
}

static inline void drawn_destroy(struct drawn *drawn)
{
	table_destroy(drawn->table);
	timeline_destroy(drawn->timeline);
	plan_destroy(drawn->plan);
	text_release(&drawn->printed);
	diagnostics_destroy(drawn->diagnostics);
	arena_destroy(drawn->arena);
}

// The table must have been made.
static inline void assert_drawn(const struct drawn *drawn)
{
	if (drawn->table == NULL)
		fputs(text_string(&drawn->printed), stderr);
	assert_non_null(drawn->table);
}

// The table must have been refused for reasons of one rule, of which there are `count`.
static inline void assert_refused(const struct drawn *drawn, enum rule rule, size_t count)
{
	assert_null(drawn->table);
	if (diagnostics_error_count(drawn->diagnostics) != count)
		fputs(text_string(&drawn->printed), stderr);
	assert_int_equal(diagnostics_error_count(drawn->diagnostics), count);
	for (size_t index = 0; index < count; index++)
		assert_int_equal(diagnostics_rule(drawn->diagnostics, index), rule);
}

// The diagnostics must hold a text.
static inline void assert_says(const struct drawn *drawn, const char *words)
{
	if (strstr(text_string(&drawn->printed), words) == NULL)
		fprintf(stderr, "wanted \"%s\" in\n%s", words, text_string(&drawn->printed));
	assert_non_null(strstr(text_string(&drawn->printed), words));
}

// A row of the line stage that is on the frame.
static inline void assert_line_row(const struct drawn *drawn, uint32_t index, uint32_t address, struct row expected)
{
	const struct row row = table_row(drawn->table, STAGE_LINE, index);
	assert_int_equal(table_row_address(drawn->table, STAGE_LINE, index), address);
	assert_int_equal(row.next, expected.next);
	assert_int_equal(row.clear, expected.clear);
	assert_int_equal(row.step, expected.step);
	assert_int_equal(row.levels, expected.levels);
	assert_int_equal(row.kind, 0);
}

static inline void assert_frame_row(const struct drawn *drawn, uint32_t index, struct row expected)
{
	const struct row row = table_row(drawn->table, STAGE_FRAME, index);
	assert_int_equal(table_row_address(drawn->table, STAGE_FRAME, index), index);
	assert_int_equal(row.next, expected.next);
	assert_int_equal(row.kind, expected.kind);
	assert_int_equal(row.clear, expected.clear);
	assert_int_equal(row.levels, expected.levels);
	assert_false(row.step);
}

#endif
