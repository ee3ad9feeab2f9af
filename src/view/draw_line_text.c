// A line in the terminal: a column for each cell, two rows for each signal.
#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "view/columns.h"
#include "view/figures.h"
#include "view/line_limits.h"
#include "view/line_shape.h"
#include "view/pictures.h"
#include "view/ruler.h"

#define LEAST_COLUMNS 20u
#define MOST_LABEL 16u
#define MOST_PANELS 8u
#define WIDE_ENOUGH 56u    // for the table of regions with what is asserted
#define MOST_SCALE 4       // columns of a normal cell

// What the rows are drawn with.
struct glyphs {
	const char *space, *level, *rise_top, *rise_bottom, *fall_top, *fall_bottom; // of a trace
	const char *high_level;        // on the upper row
	const char *busy_top, *busy_bottom; // cells of a column differ
	const char *bar, *picture, *burst, *stretched;
	const char *cut;               // a name's end is missing
};

static const struct glyphs unicode = {" ", "\xE2\x94\x80", "\xE2\x94\x8C", "\xE2\x94\x98", "\xE2\x94\x90", "\xE2\x94\x94", "\xE2\x94\x80",
                                      "\xE2\x95\xB3", "\xE2\x95\xB3", "\xE2\x94\x82", "\xE2\x96\x92", "\xE2\x96\x9A", "\xE2\x96\xB2",
                                      "\xE2\x80\xA6"};
static const struct glyphs ascii_glyphs = {" ", "_", " ", "|", " ", "|", "_", "X", "X", "|", "#", "%", "^", "~"};

// A column of the drawing: the cells from one on to the next column's.
struct line_chart {
	struct text *out;
	struct line_shape shape;
	const struct glyphs *glyphs;
	bool ascii;
	size_t columns;                // of the terminal
	size_t label;                  // columns at the left
	uint32_t *cell_of_column;      // [width + 1]: a stretched cell has several columns
	uint32_t width;                // columns of the whole line
	uint32_t panel;                // columns of a panel
	int64_t scale;                 // columns of a normal cell; 1 too where a column has several cells
};

static size_t characters_of(const char *words)
{
	size_t count = 0;
	for (; *words != '\0'; words++)
		count += ((unsigned char)*words & 0xC0u) != 0x80u;
	return count;
}

// Puts words; in ASCII a character apart from it is '?'.
static void put_words(const struct line_chart *chart, const char *words)
{
	struct text shown = {0};
	for (; *words != '\0'; words++) {
		if (!chart->ascii || (unsigned char)*words < 0x80u)
			text_put_bytes(&shown, words, 1);
		else if (((unsigned char)*words & 0xC0u) != 0x80u)
			text_put(&shown, "?");
	}
	text_put(chart->out, text_string(&shown));
	chart->out->failed = chart->out->failed || shown.failed;
	text_release(&shown);
}

// Puts at most so many characters of words, and fills up with spaces.
static void put_padded(const struct line_chart *chart, const char *words, size_t width)
{
	const size_t characters = characters_of(words), shown = characters <= width ? characters : width - 1;
	struct text cut = {0};
	size_t length = 0;
	for (size_t left = shown; left > 0; left--)
		do
			length++;
		while (((unsigned char)words[length] & 0xC0u) == 0x80u);
	text_put_bytes(&cut, words, length);
	put_words(chart, text_string(&cut));
	if (shown < characters)
		text_put(chart->out, chart->glyphs->cut);
	text_put_repeated(chart->out, ' ', width - shown - (shown < characters));
	chart->out->failed = chart->out->failed || cut.failed;
	text_release(&cut);
}

static void put_label(const struct line_chart *chart, const char *words)
{
	put_padded(chart, words, chart->label - 1);
	text_put(chart->out, " ");
}

static void trim_spaces(struct text *out)
{
	while (out->length > 0 && out->bytes[out->length - 1] == ' ')
		out->bytes[--out->length] = '\0';
}

static void end_row(const struct line_chart *chart)
{
	trim_spaces(chart->out);
	text_put(chart->out, "\n");
}

static bool asserted_at(const struct line_chart *chart, size_t signal, uint32_t cell)
{
	return (chart->shape.pins[cell] >> signal & 1) != 0;
}

// The level in a column; -1 if its cells differ.
static int level_in_column(const struct line_chart *chart, size_t index, uint32_t column)
{
	const struct signal *signal = &chart->shape.plan->signals[index];
	const uint32_t first = chart->cell_of_column[column], end = chart->cell_of_column[column + 1];
	const bool asserted = asserted_at(chart, index, first);
	for (uint32_t cell = first + 1; cell < end; cell++)
		if (asserted_at(chart, index, cell) != asserted)
			return -1;
	return (int)shape_level(signal, asserted);
}

// The level of the cell before a column, or of its own where there is none.
static int level_before(const struct line_chart *chart, size_t index, uint32_t column)
{
	const uint32_t first = chart->cell_of_column[column];
	return (int)shape_level(&chart->shape.plan->signals[index], asserted_at(chart, index, first > 0 ? first - 1 : 0));
}

static void put_trace_column(const struct line_chart *chart, size_t signal, uint32_t column, bool top)
{
	const struct glyphs *glyphs = chart->glyphs;
	const bool repeats = column > 0 && chart->cell_of_column[column] == chart->cell_of_column[column - 1];
	const int level = level_in_column(chart, signal, column), before = repeats ? level : level_before(chart, signal, column);
	const char *glyph;
	if (level < 0)
		glyph = top ? glyphs->busy_top : glyphs->busy_bottom;
	else if (level == before)
		glyph = (level == 1) != top ? glyphs->space : top ? glyphs->high_level : glyphs->level;
	else if (level == 1)
		glyph = top ? glyphs->rise_top : glyphs->rise_bottom;
	else
		glyph = top ? glyphs->fall_top : glyphs->fall_bottom;
	text_put(chart->out, glyph);
}

static void put_trace(const struct line_chart *chart, size_t signal, uint32_t from, uint32_t end)
{
	const struct signal *shown = &chart->shape.plan->signals[signal];
	put_label(chart, shown->name);
	for (uint32_t column = from; column < end; column++)
		put_trace_column(chart, signal, column, true);
	end_row(chart);
	put_label(chart, shown->active_high ? "" : "active low");
	for (uint32_t column = from; column < end; column++)
		put_trace_column(chart, signal, column, false);
	end_row(chart);
}

// Row 0 has picture, row 1 blanking and burst, row 2 sync.
static void put_level_row(const struct line_chart *chart, unsigned row, uint32_t from, uint32_t end)
{
	const struct composite_levels *levels = composite_levels_of(chart->shape.timeline);
	const int64_t values[] = {levels->white, levels->blanking, levels->sync};
	struct text label = {0};
	text_printf(&label, "%" PRId64 " %s", values[row] / 1000, levels->unit);
	put_label(chart, text_string(&label));
	for (uint32_t column = from; column < end; column++) {
		const enum hue kind = shape_kind(chart->shape.plan, chart->shape.asserted[chart->cell_of_column[column]]);
		const unsigned own = kind == HUE_SYNC || kind == HUE_VERTICAL ? 2 : kind == HUE_PICTURE || kind == HUE_OTHER ? 0 : 1;
		const char *glyph = kind == HUE_BURST ? chart->glyphs->burst : own == 0 ? chart->glyphs->picture : chart->glyphs->level;
		text_put(chart->out, own == row ? glyph : " ");
	}
	end_row(chart);
	chart->out->failed = chart->out->failed || label.failed;
	text_release(&label);
}

static bool begins_region(const struct line_chart *chart, uint32_t column)
{
	const uint32_t cell = chart->cell_of_column[column];
	const bool repeats = column > 0 && cell == chart->cell_of_column[column - 1];
	return cell == 0 ? !repeats : !repeats && chart->shape.laid->region_of_cell[cell] != chart->shape.laid->region_of_cell[cell - 1];
}

// Names of regions, each behind the bar at its beginning as far as there is room.
static void put_regions(const struct line_chart *chart, uint32_t from, uint32_t end)
{
	put_label(chart, "regions");
	for (uint32_t column = from; column < end;) {
		const uint16_t region = chart->shape.laid->region_of_cell[chart->cell_of_column[column]];
		uint32_t next = column + 1;
		while (next < end && !begins_region(chart, next))
			next++;
		const bool bar = begins_region(chart, column);
		text_put(chart->out, bar ? chart->glyphs->bar : "");
		if (next - column > bar)
			put_padded(chart, chart->shape.type->regions[region].name, next - column - bar);
		column = next;
	}
	end_row(chart);
}

static bool column_stretched(const struct line_chart *chart, uint32_t column)
{
	const struct shape_run run = shape_stretched_run(&chart->shape, chart->cell_of_column[column]);
	return run.cells > 0 && run.cell < chart->cell_of_column[column] + 1;
}

static void put_stretched(const struct line_chart *chart, uint32_t from, uint32_t end)
{
	bool any = false;
	for (uint32_t column = from; column < end && !any; column++)
		any = column_stretched(chart, column);
	if (!any)
		return;
	put_label(chart, "stretched");
	for (uint32_t column = from; column < end; column++)
		text_put(chart->out, column_stretched(chart, column) ? chart->glyphs->stretched : " ");
	end_row(chart);
}

// Puts marks of numbers: `number_at` gives what stands at a column, or -1.
static void put_numbers(const struct line_chart *chart, const char *label, uint32_t from, uint32_t end,
                        int64_t (*number_at)(const struct line_chart *chart, uint32_t column))
{
	size_t column = from;
	put_label(chart, label);
	while (column < end) {
		struct text words = {0};
		const int64_t number = number_at(chart, (uint32_t)column);
		text_put(&words, " ");
		if (number >= 0) {
			words.length = 0;
			text_printf(&words, "%s%" PRId64, chart->glyphs->bar, number);
		}
		const size_t taken = characters_of(text_string(&words));
		if (column + taken <= end)
			text_put(chart->out, text_string(&words));
		else
			text_put(chart->out, number >= 0 ? chart->glyphs->bar : " ");
		column += column + taken <= end ? taken : 1;
		chart->out->failed = chart->out->failed || words.failed;
		text_release(&words);
	}
	end_row(chart);
}

static bool repeats_column(const struct line_chart *chart, uint32_t column)
{
	return column > 0 && chart->cell_of_column[column] == chart->cell_of_column[column - 1];
}

static int64_t cell_number(const struct line_chart *chart, uint32_t column)
{
	const int64_t step = ruler_step(chart->width, (int64_t)chart->width / 10 + 1);
	const uint32_t cell = chart->cell_of_column[column], next = chart->cell_of_column[column + 1];
	const int64_t mark = (cell + step - 1) / step * step;
	return !repeats_column(chart, column) && (mark == cell || mark < next) ? mark : -1;
}

// Whole steps of microseconds at the column in which they fall.
static int64_t time_number(const struct line_chart *chart, uint32_t column)
{
	const struct clock *clock = &chart->shape.plan->clock;
	struct fraction first, last, whole, million = fraction_whole(1000000);
	const int64_t tick = chart->shape.tick_of_cell[chart->cell_of_column[column]];
	const int64_t end = chart->shape.tick_of_cell[chart->cell_of_column[column] == chart->cell_of_column[column + 1]
	                                                      ? chart->cell_of_column[column] + 1 : chart->cell_of_column[column + 1]];
	if (repeats_column(chart, column) || !seconds_of_ticks(clock, tick, &first) || !seconds_of_ticks(clock, end, &last) ||
	    !seconds_of_ticks(clock, chart->shape.ticks, &whole) || !fraction_multiply(first, million, &first) ||
	    !fraction_multiply(last, million, &last) || !fraction_multiply(whole, million, &whole))
		return -1;
	const int64_t step = ruler_step(fraction_floor(whole), (int64_t)chart->width / 10 + 1);
	const int64_t floor = fraction_floor(first), up = floor + !fraction_is_whole(first), mark = (up + step - 1) / step * step;
	return fraction_compare(fraction_whole(mark), last) < 0 ? mark : -1;
}

static void put_panel(const struct line_chart *chart, uint32_t from, uint32_t end)
{
	const struct plan *plan = chart->shape.plan;
	text_put(chart->out, "\n");
	put_regions(chart, from, end);
	put_stretched(chart, from, end);
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		put_trace(chart, signal, from, end);
	for (unsigned row = 0; plan->role_signal[ROLE_COMPOSITE_SYNC] >= 0 && row < 3; row++)
		put_level_row(chart, row, from, end);
	put_numbers(chart, "cell", from, end, cell_number);
	put_numbers(chart, "us", from, end, time_number);
}

// Words broken to the terminal's width.
static void put_sentence(const struct line_chart *chart, const char *words)
{
	size_t used = 0;
	for (size_t length; *words != '\0'; words += length) {
		words += strspn(words, " ");
		length = strcspn(words, " ");
		struct text word = {0};
		text_put_bytes(&word, words, length);
		const size_t characters = characters_of(text_string(&word));
		if (used > 0)
			text_put(chart->out, used + 1 + characters > chart->columns ? "\n" : " ");
		used = used > 0 && used + 1 + characters <= chart->columns ? used + 1 + characters : characters;
		put_words(chart, text_string(&word));
		chart->out->failed = chart->out->failed || word.failed;
		text_release(&word);
	}
	text_put(chart->out, "\n");
}

static void put_heading(const struct line_chart *chart)
{
	struct text words = {0};
	text_printf(&words, "%s, line %" PRIu32 ", \"%s\": ", chart->shape.plan->name, chart->shape.line, chart->shape.type->name);
	text_put_lengths(&words, &chart->shape.plan->clock, chart->shape.cells, chart->shape.ticks);
	put_sentence(chart, text_string(&words));
	chart->out->failed = chart->out->failed || words.failed;
	text_release(&words);
}

static uint32_t cells_of_column(const struct line_chart *chart)
{
	uint32_t most = 0;
	for (uint32_t column = 0; column < chart->width; column++) {
		const uint32_t cells = chart->cell_of_column[column + 1] - chart->cell_of_column[column];
		most = cells > most ? cells : most;
	}
	return most;
}

// What a column is, and whether the line is folded.
static void put_scale(const struct line_chart *chart)
{
	const uint32_t cells = cells_of_column(chart), parts = (chart->width + chart->panel - 1) / chart->panel;
	struct text words = {0};
	if (cells <= 1) {
		text_put(&words, "a cell is ");
		text_put_count(&words, (uint64_t)chart->scale, "column", "columns");
		text_put(&words, shape_stretched_run(&chart->shape, 0).cells > 0 ? ", a stretched one more" : "");
	} else {
		text_put(&words, "a column is ");
		text_put_count(&words, cells, "cell", "cells");
		text_printf(&words, ", and %s where they differ", chart->glyphs->busy_top);
	}
	if (parts > 1) {
		text_printf(&words, "; too wide for %zu columns: folded into ", chart->columns);
		text_put_count(&words, parts, "part", "parts");
	}
	put_sentence(chart, text_string(&words));
	chart->out->failed = chart->out->failed || words.failed;
	text_release(&words);
}

enum { REGION_NAME, REGION_CELLS, REGION_TICKS, REGION_US, REGION_ASSERTED };

static const struct column region_columns[] = {
	{"region", false}, {"cells", true}, {"ticks", true}, {"us", true}, {"asserted", false},
};

static void put_asserted(struct text *out, const struct plan *plan, uint64_t mask)
{
	bool first = true;
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		if ((mask >> signal & 1) == 0)
			continue;
		text_printf(out, "%s%s", first ? "" : " ", plan->signals[signal].name);
		first = false;
	}
}

static void put_region_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct line_chart *chart = context;
	const struct laid_region *laid = &chart->shape.laid->regions[row];
	struct line_chart into = *chart;
	into.out = out;
	if (column == REGION_NAME)
		put_words(&into, chart->shape.type->regions[row].name);
	else if (column == REGION_CELLS)
		text_printf(out, "%" PRIu32, laid->cells);
	else if (column == REGION_TICKS)
		text_printf(out, "%" PRId64, laid->ticks);
	else if (column == REGION_US)
		text_put_ticks_us(out, &chart->shape.plan->clock, laid->ticks);
	else
		put_asserted(out, chart->shape.plan, chart->shape.type->regions[row].assert_mask);
}

static void put_limits(const struct line_chart *chart, const struct line_limit *limits, size_t count)
{
	const struct plan *plan = chart->shape.plan;
	if (count == 0)
		return;
	text_printf(chart->out, "\nlimits of %s, grade %s\n", plan->standard->name, limit_grade_name(plan->grade));
	for (size_t index = 0; index < count; index++) {
		struct text words = {0};
		text_printf(&words, "%s %s ", limits[index].kept ? "kept " : "MISSED", limit_item_facts(limits[index].item)->name);
		text_put_item_value(&words, limits[index].item, limits[index].value);
		text_put(&words, ", allowed ");
		text_put_allowed(&words, limits[index].limit);
		put_sentence(chart, text_string(&words));
		chart->out->failed = chart->out->failed || words.failed;
		text_release(&words);
	}
}

// How many columns a cell takes: a stretched one in proportion, but one more at least, and not more than 8 cells.
static uint32_t columns_of_cell(const struct line_chart *chart, uint32_t cell)
{
	const struct line_shape *shape = &chart->shape;
	const int64_t ticks = shape->tick_of_cell[cell + 1] - shape->tick_of_cell[cell], normal = shape->plan->clock.cell_ticks;
	if (ticks == normal)
		return (uint32_t)chart->scale;
	const int64_t cells = ticks > 8 * normal ? 8 * normal : ticks, columns = (cells * chart->scale + normal / 2) / normal;
	return (uint32_t)(columns > chart->scale ? columns : chart->scale + 1);
}

static uint64_t columns_of_line(const struct line_chart *chart)
{
	uint64_t columns = 0;
	for (uint32_t cell = 0; cell < chart->shape.cells; cell++)
		columns += columns_of_cell(chart, cell);
	return columns;
}

// As many columns for each cell as fit into one panel; at least one, if that does not take too many panels; otherwise several
// cells a column.
static bool lay_columns(struct line_chart *chart, struct arena *arena)
{
	const struct line_shape *shape = &chart->shape;
	const uint64_t most = (uint64_t)chart->panel * MOST_PANELS;
	for (chart->scale = MOST_SCALE; chart->scale > 1 && columns_of_line(chart) > chart->panel;)
		chart->scale--;
	const uint64_t wanted = columns_of_line(chart);
	const uint32_t step = wanted <= most ? 0 : (uint32_t)((shape->cells + most - 1) / most);
	const uint64_t width = step == 0 ? wanted : (shape->cells + step - 1) / step;
	chart->cell_of_column = arena_array(arena, (size_t)width + 1, sizeof *chart->cell_of_column);
	if (chart->cell_of_column == NULL)
		return false;
	for (uint32_t cell = 0; cell < shape->cells; cell += step == 0 ? 1 : step)
		for (uint32_t count = step == 0 ? columns_of_cell(chart, cell) : 1; count > 0; count--)
			chart->cell_of_column[chart->width++] = cell;
	chart->cell_of_column[chart->width] = shape->cells;
	const uint32_t panels = (chart->width + chart->panel - 1) / chart->panel;
	chart->panel = (chart->width + panels - 1) / panels; // all about as wide
	return true;
}

static size_t label_columns(const struct plan *plan, size_t columns)
{
	size_t most = 10; // "active low"
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		const size_t characters = characters_of(plan->signals[signal].name);
		most = characters > most ? characters : most;
	}
	most = most > MOST_LABEL ? MOST_LABEL : most;
	return (most > columns / 3 ? columns / 3 : most) + 1;
}

static void put_chart(const struct line_chart *chart, const struct line_limit *limits, size_t count)
{
	const size_t all = sizeof region_columns / sizeof *region_columns;
	const struct columns regions = {region_columns, chart->columns < WIDE_ENOUGH ? all - 1 : all, chart->shape.type->region_count,
	                                put_region_cell, chart}; // the drawing shows what is asserted
	put_heading(chart);
	put_scale(chart);
	for (uint32_t column = 0; column < chart->width; column += chart->panel)
		put_panel(chart, column, column + chart->panel < chart->width ? column + chart->panel : chart->width);
	text_put(chart->out, "\n");
	view_columns(chart->out, &regions, chart->columns);
	put_limits(chart, limits, count);
}

bool view_line_text(struct text *out, const struct timeline *timeline, uint32_t line, size_t columns, bool ascii)
{
	struct arena *arena = arena_create();
	struct line_limit limits[MOST_LINE_LIMITS];
	size_t count;
	struct line_chart chart = {.out = out, .glyphs = ascii ? &ascii_glyphs : &unicode, .ascii = ascii,
	                           .columns = columns < LEAST_COLUMNS ? LEAST_COLUMNS : columns};
	bool made = arena != NULL && line_shape_make(&chart.shape, timeline, line, arena) &&
	            line_limits_find(&chart.shape, arena, limits, &count);
	if (made) {
		chart.label = label_columns(timeline->plan, chart.columns);
		chart.panel = (uint32_t)(chart.columns - chart.label);
		made = lay_columns(&chart, arena);
	}
	if (made)
		put_chart(&chart, limits, count);
	arena_destroy(arena);
	return made && !out->failed;
}
