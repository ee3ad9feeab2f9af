// The picture of the colour phase: where in its cycle the subcarrier is at the start of each line.
#include <inttypes.h>

#include "base/text.h"
#include "view/figures.h"
#include "view/pictures.h"
#include "view/ruler.h"

#define PHASE_LEFT PX(92)
#define PHASE_TOP PX(110)     // of the first plot
#define PHASE_WIDTH PX(960)
#define PHASE_HEIGHT PX(240)
#define PHASE_PITCH PX(336)   // from plot to plot
#define PHASE_RIGHT PX(120)
#define MOST_LINES 1000
#define LEAST_LINES 16
#define CLOSE_LINES 32        // of the first plot, where there are two
#define MOST_WITH_RISERS 200

struct phase_drawing {
	struct svg *svg;
	const struct timeline *timeline;
	const struct colour_result *colour;
	int64_t lines;             // that are drawn
	int64_t top;               // of the plot
};

static int64_t line_x(const struct phase_drawing *drawing, int64_t line)
{
	return PHASE_LEFT + svg_share(PHASE_WIDTH, line, drawing->lines);
}

// 0 is at the bottom, a whole cycle at the top. A large fraction is put by its leading digits: places are thousandths of a pixel.
static int64_t phase_y(const struct phase_drawing *drawing, struct fraction phase)
{
	return drawing->top + PHASE_HEIGHT - svg_share(PHASE_HEIGHT, phase.numerator, phase.denominator);
}

// Whole rounds of what repeats, enough of them to be seen; the first lines where that is too much.
static int64_t lines_drawn(const struct colour_result *colour)
{
	if (!colour->repeats_known || colour->repeats_lines > MOST_LINES)
		return MOST_LINES;
	return (LEAST_LINES + colour->repeats_lines - 1) / colour->repeats_lines * colour->repeats_lines;
}

// Lines from one on that start at the same phase.
static int64_t same_phase(const struct phase_drawing *drawing, int64_t line, struct fraction phase)
{
	int64_t end = line + 1;
	while (end < drawing->lines && fraction_compare(line_phase(&drawing->colour->phases, end), phase) == 0)
		end++;
	return end - line;
}

// "lines 0 to 15 start at 0 of a cycle (0 degrees)".
static void draw_run(const struct phase_drawing *drawing, int64_t line, int64_t lines, struct fraction phase)
{
	struct svg *svg = drawing->svg;
	struct fraction degrees;
	struct text words = {0}, exact = {0};
	text_put_fraction(&exact, phase);
	svg_open(svg, "rect");
	svg_attribute(svg, "class", "run");
	svg_length(svg, "x", line_x(drawing, line));
	svg_length(svg, "y", drawing->top);
	svg_length(svg, "width", line_x(drawing, line + lines) - line_x(drawing, line));
	svg_length(svg, "height", PHASE_HEIGHT);
	svg_whole(svg, "data-line", line);
	svg_whole(svg, "data-lines", lines);
	svg_attribute(svg, "data-phase", text_string(&exact));
	text_printf(&words, lines == 1 ? "line %" PRId64 " starts" : "lines %" PRId64, line);
	if (lines > 1)
		text_printf(&words, " to %" PRId64 " start", line + lines - 1);
	text_printf(&words, " at %s of a cycle", text_string(&exact));
	if (fraction_multiply(phase, fraction_whole(360), &degrees)) {
		text_put(&words, " (");
		text_put_rounded(&words, degrees, 3);
		text_put(&words, " degrees)");
	}
	svg_title(svg, text_string(&words));
	svg_close(svg);
	svg_release(svg, &words);
	svg_release(svg, &exact);
}

// Heavy steps, a line each; thin risers where the phase moves by less than half a cycle.
static void draw_steps(const struct phase_drawing *drawing)
{
	struct svg *svg = drawing->svg;
	struct text steps = {0}, risers = {0};
	int64_t before = -1;
	for (int64_t line = 0; line < drawing->lines;) {
		const struct fraction phase = line_phase(&drawing->colour->phases, line);
		const int64_t lines = same_phase(drawing, line, phase), x = line_x(drawing, line), y = phase_y(drawing, phase);
		const int64_t moved = before < 0 ? 0 : y > before ? y - before : before - y;
		text_put(&steps, "M");
		svg_put_length(&steps, x);
		text_put(&steps, " ");
		svg_put_length(&steps, y);
		text_put(&steps, "H");
		svg_put_length(&steps, line_x(drawing, line + lines));
		if (moved > 0 && moved <= PHASE_HEIGHT / 2 && drawing->lines <= MOST_WITH_RISERS) {
			text_put(&risers, "M");
			svg_put_length(&risers, x);
			text_put(&risers, " ");
			svg_put_length(&risers, before);
			text_put(&risers, "V");
			svg_put_length(&risers, y);
		}
		before = y;
		line += lines;
	}
	svg_open(svg, "path");
	svg_attribute(svg, "class", "hair");
	svg_attribute(svg, "d", text_string(&risers));
	svg_close(svg);
	svg_open(svg, "path");
	svg_attribute(svg, "class", drawing->lines <= MOST_WITH_RISERS ? "phase sync trace-line" : "phase sync trace-line dots");
	svg_attribute(svg, "d", text_string(&steps));
	svg_close(svg);
	svg_release(svg, &steps);
	svg_release(svg, &risers);
}

static void draw_axes(const struct phase_drawing *drawing)
{
	static const char *const cycles[] = {"0", "1/4", "1/2", "3/4", "1"}, *const degrees[] = {"0", "90", "180", "270", "360"};
	struct svg *svg = drawing->svg;
	for (int64_t quarter = 0; quarter <= 4; quarter++) {
		const int64_t y = drawing->top + PHASE_HEIGHT - quarter * (PHASE_HEIGHT / 4);
		svg_line(svg, quarter % 4 == 0 ? "rule" : "hair", PHASE_LEFT, y, PHASE_LEFT + PHASE_WIDTH, y);
		svg_text(svg, "note", PHASE_LEFT - PX(10), y + PX(5), ANCHOR_END, cycles[quarter]);
		svg_text(svg, "note", PHASE_LEFT + PHASE_WIDTH + PX(10), y + PX(5), ANCHOR_START, degrees[quarter]);
	}
	svg_text(svg, "name", PHASE_LEFT - PX(10), drawing->top - PX(16), ANCHOR_END, "cycle");
	svg_text(svg, "name", PHASE_LEFT + PHASE_WIDTH + PX(10), drawing->top - PX(16), ANCHOR_START, "degrees");
}

static void draw_ruler(const struct phase_drawing *drawing)
{
	struct svg *svg = drawing->svg;
	const int64_t coarse = ruler_step(drawing->lines, 16), fine = ruler_step(drawing->lines, 160);
	const int64_t y = drawing->top + PHASE_HEIGHT + PX(10);
	struct text words = {0};
	svg_text(svg, "name", PHASE_LEFT - PX(10), y + PX(23), ANCHOR_END, "line");
	for (int64_t line = 0; line <= drawing->lines; line += fine) {
		const int64_t x = line_x(drawing, line);
		svg_line(svg, "rule", x, y, x, y + (line % coarse == 0 ? PX(9) : PX(5)));
		words.length = 0;
		text_printf(&words, "%" PRId64, line);
		if (line % coarse == 0)
			svg_text(svg, "small", x, y + PX(23), ANCHOR_MIDDLE, text_string(&words));
	}
	svg_release(svg, &words);
}

// Where frames begin, if they do within the picture.
static void draw_frames(const struct phase_drawing *drawing)
{
	const int64_t lines = drawing->timeline->line_count;
	struct text words = {0};
	if (lines >= drawing->lines || drawing->lines / lines > 40)
		return;
	for (int64_t frame = 0; frame * lines < drawing->lines; frame++) {
		const int64_t x = line_x(drawing, frame * lines);
		svg_line(drawing->svg, "guide", x, drawing->top - PX(10), x, drawing->top + PHASE_HEIGHT);
		words.length = 0;
		text_printf(&words, "frame %" PRId64, frame);
		svg_fitted(drawing->svg, "small", x + PX(4), drawing->top - PX(6), ANCHOR_START, line_x(drawing, lines) - PHASE_LEFT, 13,
		           text_string(&words));
	}
	svg_release(drawing->svg, &words);
}

static void put_repeats(const struct colour_result *colour, struct text *words)
{
	if (!colour->repeats_known) {
		text_put(words, "the phase repeats only after more lines than 64 bits count");
		return;
	}
	if (colour->repeats_lines == 1) {
		text_put(words, "every line starts at the same phase");
		return;
	}
	text_printf(words, "the phase repeats every %" PRId64 " lines and every ", colour->repeats_lines);
	text_put(words, colour->repeats_frames == 1 ? "frame" : "");
	if (colour->repeats_frames != 1)
		text_put_count(words, (uint64_t)colour->repeats_frames, "frame", "frames");
}

// "228 cycles a line; every line starts at the same phase".
static void put_figures(const struct colour_result *colour, struct text *words)
{
	text_put(words, colour->uniform ? "" : "lines differ, the first has ");
	text_put_exact(words, colour->cycles_per_line);
	text_put(words, colour->uniform ? " cycles of the subcarrier a line" : " cycles of the subcarrier");
}

// What the plan asks, and whether it is so.
static void put_asked(const struct phase_drawing *drawing, struct text *words)
{
	const struct clock *clock = &drawing->timeline->plan->clock;
	const struct out_of_step *out = &drawing->colour->out_of_step;
	const char *unit = clock->phase == PHASE_LINES ? "line" : "frame";
	if (clock->phase == PHASE_FREE) {
		text_put(words, "the plan asks for no phase");
		return;
	}
	text_put(words, "asked: the same phase every ");
	if (clock->phase_count == 1)
		text_put(words, unit);
	else
		text_printf(words, "%" PRId64 " %ss", clock->phase_count, unit);
	if (!out->present) {
		text_put(words, ", which is kept");
		return;
	}
	text_printf(words, ", which is MISSED: line %" PRIu32 " of frame %" PRId64 " starts ", out->line, out->frame);
	text_put_fraction(words, out->by);
	text_put(words, " of a cycle out of step");
}

static void draw_words(const struct phase_drawing *drawing, const char *title, const char *figures)
{
	struct svg *svg = drawing->svg;
	const int64_t room = PHASE_LEFT + PHASE_WIDTH + PHASE_RIGHT - PX(32);
	int64_t y = drawing->top + PHASE_HEIGHT + PX(66);
	struct text words = {0};
	svg_fitted(svg, "title", PX(16), PX(34), ANCHOR_START, room, SVG_TITLE_SIZE, title);
	svg_fitted(svg, "note", PX(16), PX(58), ANCHOR_START, room, 15, drawing->timeline->plan->note);
	svg_fitted(svg, "", PHASE_LEFT, y, ANCHOR_START, room - PHASE_LEFT, 15, figures);
	y += PX(24);
	put_repeats(drawing->colour, &words);
	svg_fitted(svg, "", PHASE_LEFT, y, ANCHOR_START, room - PHASE_LEFT, 15, text_string(&words));
	words.length = 0;
	y += PX(24);
	put_asked(drawing, &words);
	svg_fitted(svg, drawing->colour->out_of_step.present ? "missed" : "", PHASE_LEFT, y, ANCHOR_START, room - PHASE_LEFT, 15,
	           text_string(&words));
	words.length = 0;
	text_put(&words, "relative to line 0 of frame 0; lines are counted on from frame to frame");
	if (!drawing->colour->repeats_known || drawing->colour->repeats_lines > MOST_LINES)
		text_printf(&words, "; only the first %d lines are drawn", MOST_LINES);
	svg_text(svg, "small", PHASE_LEFT, y + PX(24), ANCHOR_START, text_string(&words));
	svg_release(svg, &words);
}

static void draw_plot(const struct phase_drawing *drawing)
{
	struct svg *svg = drawing->svg;
	svg_group(svg, "plot");
	svg_whole(svg, "data-lines", drawing->lines);
	draw_axes(drawing);
	draw_frames(drawing);
	draw_ruler(drawing);
	draw_steps(drawing);
	for (int64_t line = 0; drawing->lines <= MOST_WITH_RISERS && line < drawing->lines;) {
		const struct fraction phase = line_phase(&drawing->colour->phases, line);
		const int64_t lines = same_phase(drawing, line, phase);
		draw_run(drawing, line, lines, phase);
		line += lines;
	}
	svg_close(svg);
}

// Many lines are drawn once more, the first of them close by.
bool view_phase_svg(struct text *out, const struct picture *picture, const struct timeline *timeline,
                    const struct colour_result *colour)
{
	struct svg svg = {.out = out, .picture = picture};
	struct phase_drawing drawing = {&svg, timeline, colour, lines_drawn(colour), PHASE_TOP};
	const bool both = drawing.lines > 2 * CLOSE_LINES;
	struct text title = {0}, figures = {0}, told = {0};
	text_printf(&title, "%s: phase of the subcarrier at the start of each line", timeline->plan->name);
	put_figures(colour, &figures);
	text_printf(&told, "%s; ", text_string(&figures));
	put_repeats(colour, &told);
	text_put(&told, "; ");
	put_asked(&drawing, &told);
	svg_begin(&svg, out, picture, PHASE_LEFT + PHASE_WIDTH + PHASE_RIGHT, PHASE_TOP + PHASE_HEIGHT + PX(156) + (both ? PHASE_PITCH : 0),
	          text_string(&title), text_string(&told));
	if (both) {
		const struct phase_drawing near = {&svg, timeline, colour, CLOSE_LINES, PHASE_TOP};
		draw_plot(&near);
		drawing.top += PHASE_PITCH;
	}
	draw_plot(&drawing);
	draw_words(&drawing, text_string(&title), text_string(&figures));
	svg_end(&svg);
	svg_release(&svg, &title);
	svg_release(&svg, &figures);
	svg_release(&svg, &told);
	return !out->failed;
}
