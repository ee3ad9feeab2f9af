// The divider's counts, one a row, with what its counter and taps show.
#include <inttypes.h>

#include "base/text.h"
#include "layout/divider.h"
#include "plan/plan.h"
#include "view/divider.h"
#include "view/page.h"
#include "view/sheet_parts.h"

#define COUNT_COLUMNS 5
#define MOST_COUNTS 64u // more than divider_spans ever shows

struct count_view {
	struct divider divider;
	int64_t counts[MOST_COUNTS];      // that are shown
	bool gap[MOST_COUNTS];            // counts before this one are left out
	size_t count;
	struct column columns[COUNT_COLUMNS];
	const struct divider_tap *taps[COUNT_COLUMNS]; // of a column; NULL of others
	size_t column_count;
};

enum { COUNT_NUMBER, COUNT_BITS, COUNT_FIRST_TAP };

static void put_end(struct text *out, const struct divider *divider, int64_t count)
{
	const bool stretches = divider->stretch_ticks > 0;
	if (count == divider->cell_ticks - 1)
		text_put(out, stretches ? "looks at stretch: the cell ends here, or counts on if it is stretched" : "the cell ends here");
	else if (count == divider->cell_ticks + divider->stretch_ticks - 1)
		text_put(out, "the stretched cell ends here");
	else if (count >= divider->cell_ticks)
		text_put(out, "only in a stretched cell");
	else if (count == 0)
		text_put(out, "the cell begins");
}

static void put_count_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct count_view *view = context;
	const int64_t count = view->counts[row];
	if (column == COUNT_NUMBER) {
		text_printf(out, "%s%" PRId64, view->gap[row] ? "… " : "", count);
	} else if (column == COUNT_BITS) {
		for (unsigned bit = view->divider.bits; bit-- > 0;)
			text_put(out, count >> bit & 1 ? "1" : "0");
	} else if (view->taps[column] != NULL) {
		text_put(out, divider_tap_is_high(view->taps[column], count) ? "H" : "L");
	} else {
		put_end(out, &view->divider, count);
	}
}

static void add_column(struct count_view *view, const char *heading, const struct divider_tap *tap)
{
	view->taps[view->column_count] = tap;
	view->columns[view->column_count++] = (struct column){heading, false};
}

static void list_counts(struct count_view *view)
{
	struct divider_span spans[DIVIDER_SPANS];
	const size_t span_count = divider_spans(&view->divider, spans);
	int64_t next = 0;
	for (size_t span = 0; span < span_count; span++)
		for (int64_t count = spans[span].first; count <= spans[span].last && view->count < MOST_COUNTS; count++) {
			view->gap[view->count] = count != next;
			view->counts[view->count++] = count;
			next = count + 1;
		}
}

static void put_stretched_row(struct text *out, const void *context, size_t row)
{
	const struct count_view *view = context;
	if (view->counts[row] >= view->divider.cell_ticks)
		text_put(out, " class=\"stretched\"");
}

static void put_counts(struct text *out, const struct divider *divider)
{
	struct count_view view = {.divider = *divider};
	list_counts(&view);
	add_column(&view, "count", NULL);
	add_column(&view, "counter", NULL);
	if (divider_tap_has_levels(&divider->dot))
		add_column(&view, "dot", &view.divider.dot);
	if (divider_tap_has_levels(&divider->subcarrier))
		add_column(&view, "subcarrier", &view.divider.subcarrier);
	add_column(&view, "", NULL);
	const struct page_table table = {NULL, "counts", {view.columns, view.column_count, view.count, put_count_cell, &view}, put_stretched_row};
	page_table(out, &table);
}

void sheet_divider(struct text *out, const struct clock *clock)
{
	const struct divider divider = divider_of_clock(clock);
	struct text counts = {0}, dot = {0}, subcarrier = {0};
	put_divider_counts(&counts, &divider);
	text_put(&counts, divider.bits > 0 ? ". A count is a tick of the master clock." : ".");
	page_element_of(out, "p", "", &counts);
	if (divider.bits > 0)
		put_counts(out, &divider);
	text_put(&dot, "Dots: ");
	put_dot_words(&dot, &divider);
	text_put(&dot, ".");
	page_element_of(out, "p", "", &dot);
	if (divider.subcarrier.source == TAP_NONE)
		return;
	text_put(&subcarrier, "Subcarrier: ");
	put_subcarrier_words(&subcarrier, &divider);
	text_put(&subcarrier, divider.subcarrier.source == TAP_DIVIDER ? "; in the table it begins with a cell in which both rise together." : ".");
	page_element_of(out, "p", "", &subcarrier);
}
