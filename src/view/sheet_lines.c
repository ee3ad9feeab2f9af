// The lines and the frame as tables. Exact values stand in the titles of rows, where a pointer finds them.
#include <inttypes.h>

#include "base/arena.h"
#include "base/text.h"
#include "layout/timeline.h"
#include "view/check.h"
#include "view/figures.h"
#include "view/page.h"
#include "view/sheet_parts.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

// Longer tables are for programs to read.
#define MOST_ROWS 120u
#define MOST_TYPES 40u

static void put_rest(struct text *out, size_t count, const char *what)
{
	if (count > 0)
		page_element(out, "p", "", "%zu more %s are left out here; scanlatch check --json has them all.", count, what);
}

// "66 ticks", exactly "11/2500000 s".
static void put_exact_ticks(struct text *words, const struct clock *clock, int64_t ticks)
{
	struct fraction seconds;
	text_put_count(words, (uint64_t)ticks, "tick", "ticks");
	if (!seconds_of_ticks(clock, ticks, &seconds))
		return;
	text_put(words, " = ");
	text_put_fraction(words, seconds);
	text_put(words, " s");
}

static void put_region_title(struct text *out, const void *context, size_t row)
{
	const struct line_view *view = context;
	const struct clock *clock = &view->timeline->plan->clock;
	const struct laid_region *laid = &view->laid->regions[row];
	struct text words = {0};
	text_printf(&words, "%s: starts at ", view->type->regions[row].name);
	put_exact_ticks(&words, clock, laid->start_ticks);
	text_put(&words, "; lasts ");
	put_exact_ticks(&words, clock, laid->ticks);
	if (view->type->regions[row].length != LENGTH_FILL) {
		text_put(&words, "; asked ");
		text_put_fraction(&words, laid->asked_ticks);
		text_put(&words, " ticks");
	}
	page_attribute(out, "title", &words);
}

static void put_type(struct text *out, const struct timeline *timeline, size_t type, uint32_t uses)
{
	const struct line_view view = line_view_of(timeline, type);
	struct page_table table = {NULL, "regions", regions_table(&view), put_region_title};
	const size_t regions = table.columns.row_count;
	struct text words = {0};
	text_put(out, "<div class=\"line\">\n");
	page_element(out, "h3", "", "%s", view.type->name);
	put_line_figures(&words, &view, uses);
	if (view.laid->auto_stretched > 0)
		text_printf(&words, "; stretch: auto chose %" PRIu32 " stretched, the fewest that meet the phase", view.laid->auto_stretched);
	page_element_of(out, "p", "", &words);
	table.columns.row_count = regions < MOST_ROWS ? regions : MOST_ROWS;
	page_table(out, &table);
	put_rest(out, regions - table.columns.row_count, "regions");
	text_put(out, "</div>\n");
}

enum { BLOCK_LINES, BLOCK_TYPE, BLOCK_COUNT, BLOCK_TICKS, BLOCK_START, BLOCK_TIME };

static const struct column block_columns[] = {
	[BLOCK_LINES] = {"lines", false},  [BLOCK_TYPE] = {"line type", false}, [BLOCK_COUNT] = {"how many", true},
	[BLOCK_TICKS] = {"ticks", true}, [BLOCK_START] = {"start ms", true}, [BLOCK_TIME] = {"ms", true},
};

struct frame_view {
	const struct timeline *timeline;
	const uint32_t *first_lines; // [block_count]
};

static void put_milliseconds(struct text *out, const struct clock *clock, int64_t ticks)
{
	struct fraction seconds;
	if (seconds_of_ticks(clock, ticks, &seconds))
		text_put_time_number(out, seconds, UNIT_MILLISECONDS);
	else
		text_put(out, "?");
}

static void put_block_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct frame_view *view = context;
	const struct plan *plan = view->timeline->plan;
	const struct block *block = &plan->blocks[row];
	const uint32_t first = view->first_lines[row];
	const int64_t ticks = view->timeline->types[block->line_type].ticks * block->repeat;
	switch (column) {
	case BLOCK_LINES:
		text_printf(out, "%" PRIu32, first);
		if (block->repeat > 1)
			text_printf(out, " to %" PRId64, first + block->repeat - 1);
		break;
	case BLOCK_TYPE: text_put(out, plan->lines[block->line_type].name); break;
	case BLOCK_COUNT: text_printf(out, "%" PRId64, block->repeat); break;
	case BLOCK_TICKS: text_printf(out, "%" PRId64, ticks); break;
	case BLOCK_START: put_milliseconds(out, &plan->clock, view->timeline->lines[first].first_tick); break;
	default: put_milliseconds(out, &plan->clock, ticks); break;
	}
}

static void put_frame(struct text *out, const struct timeline *timeline, uint32_t *first_lines)
{
	const struct plan *plan = timeline->plan;
	const size_t shown = plan->block_count < MOST_ROWS ? plan->block_count : MOST_ROWS;
	const struct frame_view view = {timeline, first_lines};
	const struct page_table table = {NULL, "blocks", {block_columns, COUNT_OF(block_columns), shown, put_block_cell, &view}, NULL};
	struct text words = {0};
	uint32_t line = 0;
	for (size_t block = 0; block < plan->block_count; line += (uint32_t)plan->blocks[block].repeat, block++)
		first_lines[block] = line;
	page_element(out, "h3", "", "The frame");
	put_frame_figures(&words, timeline);
	text_put(&words, ". Lines are counted from 0.");
	page_element_of(out, "p", "", &words);
	page_table(out, &table);
	put_rest(out, plan->block_count - shown, "blocks");
}

void sheet_lines(struct text *out, const struct timeline *timeline)
{
	struct arena *arena = arena_create();
	const uint32_t *uses = arena != NULL ? count_uses(timeline, arena) : NULL;
	uint32_t *first_lines = arena != NULL ? arena_array(arena, timeline->plan->block_count, sizeof *first_lines) : NULL;
	out->failed = out->failed || uses == NULL || first_lines == NULL;
	const size_t types = timeline->plan->line_count, shown = types < MOST_TYPES ? types : MOST_TYPES;
	for (size_t type = 0; uses != NULL && type < shown; type++)
		put_type(out, timeline, type, uses[type]);
	put_rest(out, types - shown, "line types");
	if (first_lines != NULL)
		put_frame(out, timeline, first_lines);
	arena_destroy(arena);
}
