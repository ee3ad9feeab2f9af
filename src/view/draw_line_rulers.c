// The rulers of a line: cells and microseconds.
#include <inttypes.h>

#include "base/text.h"
#include "view/draw_line.h"
#include "view/figures.h"
#include "view/ruler.h"

static void draw_mark(struct line_drawing *drawing, int64_t x, int64_t y, bool long_mark, const char *words)
{
	svg_line(drawing->svg, "rule", x, y, x, y + (long_mark ? PX(9) : PX(5)));
	if (long_mark)
		svg_text(drawing->svg, "small", x, y + PX(23), ANCHOR_MIDDLE, words);
}

static void draw_cell_ruler(struct line_drawing *drawing, int64_t y, const char *label)
{
	const int64_t cells = drawing->shape.cells, fine = ruler_step(cells, 200), coarse = ruler_step(cells, 16);
	struct text words = {0};
	svg_text(drawing->svg, "name", PX(16), y + PX(16), ANCHOR_START, label);
	svg_line(drawing->svg, "rule", LINE_LEFT, y, LINE_LEFT + drawing->width, y);
	for (int64_t cell = 0; cell <= cells; cell += fine) {
		words.length = 0;
		text_printf(&words, "%" PRId64, cell);
		draw_mark(drawing, line_x(drawing, drawing->shape.tick_of_cell[cell]), y, cell % coarse == 0, text_string(&words));
	}
	svg_release(drawing->svg, &words);
}

// Marks at whole multiples of a step of 1, 2 or 5 times a power of ten of nanoseconds.
static void draw_time_ruler(struct line_drawing *drawing, int64_t y)
{
	const struct clock *clock = &drawing->shape.plan->clock;
	struct fraction seconds, nanoseconds, offset;
	struct text words = {0};
	if (!seconds_of_ticks(clock, drawing->shape.ticks, &seconds) ||
	    !fraction_multiply(seconds, fraction_whole(1000000000), &nanoseconds))
		return;
	const int64_t length = fraction_floor(nanoseconds), coarse = ruler_step(length, 14), fine = ruler_step(length, 140);
	svg_text(drawing->svg, "name", PX(16), y + PX(16), ANCHOR_START, "us");
	svg_line(drawing->svg, "rule", LINE_LEFT, y, LINE_LEFT + drawing->width, y);
	for (int64_t at = 0; at <= length; at += fine) {
		struct fraction time = {0, 1};
		if (!fraction_make(at, 1000000000, &seconds) || !fraction_divide(fraction_whole(at), nanoseconds, &offset) ||
		    !fraction_multiply(seconds, fraction_whole(1000000), &time))
			break;
		words.length = 0;
		text_put_rounded(&words, time, 3);
		draw_mark(drawing, LINE_LEFT + svg_share(drawing->width, offset.numerator, offset.denominator), y, at % coarse == 0,
		          text_string(&words));
	}
	svg_release(drawing->svg, &words);
}

void draw_line_rulers(struct line_drawing *drawing, int64_t y, const char *cells)
{
	svg_group(drawing->svg, "ruler");
	draw_cell_ruler(drawing, y + PX(6), cells);
	svg_close(drawing->svg);
	svg_group(drawing->svg, "ruler");
	draw_time_ruler(drawing, y + PX(44));
	svg_close(drawing->svg);
}
