// A layout as a plan: a loop whose lines begin at 0H, and whose frame begins at 0V.
#include <inttypes.h>
#include <string.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "catalogue/crystals.h"
#include "view/figures.h"
#include "view/fit.h"

#define COMMENT_CHARACTERS 100

struct writing {
	struct text *out;
	const struct fit_space *space;
	const struct fit_layout *layout;
	bool separate, colour, stretches;
};

static bool is_positive(const struct writing *writing, enum limit_item item)
{
	return standard_limit(writing->space->standard, item, GRADE_STUDIO)->nominal.numerator > 0;
}

// Puts words as a comment, broken between them.
static void put_comment(struct text *out, const char *words)
{
	size_t used = 1;
	text_put(out, "#");
	while (*words != '\0') {
		const size_t length = strcspn(words, " ");
		if (used > 1 && used + 1 + length > COMMENT_CHARACTERS) {
			text_put(out, "\n#");
			used = 1;
		}
		text_put(out, " ");
		text_put_bytes(out, words, length);
		used += 1 + length;
		words += length + strspn(words + length, " ");
	}
	text_put(out, "\n");
}

static void put_line_words(struct text *words, const struct writing *writing)
{
	const struct fit_line *line = &writing->layout->line;
	struct fraction cycles;
	text_printf(words, "A line is %" PRId64 " cells of %" PRId64 " dot%s", line->cells, line->cell_dots,
	            line->cell_dots == 1 ? "" : "s");
	if (line->stretched > 0)
		text_printf(words, ", %" PRId64 " of them stretched by %" PRId64 ",", line->stretched, line->stretch_dots);
	text_printf(words, " at %s: %" PRId64 " ticks", writing->space->crystals[line->crystal].name, line->ticks);
	if (line->cycle_ticks > 0 && fraction_make(line->ticks, line->cycle_ticks, &cycles)) {
		text_put(words, ", ");
		text_put_fraction(words, cycles);
		text_put(words, " cycles of the subcarrier");
	}
	text_put(words, ".");
}

static void put_limit_words(struct text *words, const struct writing *writing)
{
	const struct fit_layout *layout = writing->layout;
	text_printf(words, "Of the limits of %s at grade %s that bind, %u of %u are kept", writing->space->standard->name,
	            limit_grade_name(writing->space->grade), layout->kept, layout->binding);
	if (layout->has_share) {
		text_put(words, "; the smallest margin of a time, rate or count of cycles is that of ");
		text_printf(words, "%s, ", limit_item_facts(layout->tightest)->name);
		text_put_rounded(words, layout->share, 3);
		text_put(words, " (1: amid its range or as published, 0: on its bound)");
	}
	text_put(words, ".");
}

static void put_opening(const struct writing *writing)
{
	const struct fit_space *space = writing->space;
	struct text words = {0};
	text_printf(&words, "Lines of %s with %" PRId64 " columns, written by scanlatch fit. ", space->standard->name, space->columns);
	put_line_words(&words, writing);
	put_comment(writing->out, text_string(&words));
	text_put(writing->out, "#\n");
	words.length = 0;
	put_limit_words(&words, writing);
	put_comment(writing->out, text_string(&words));
	text_put(writing->out, "#\n");
	put_comment(writing->out, "Lines begin at 0H, the frame at 0V. What fetches the picture is to be added: signals with a lead, hold.");
	text_printf(writing->out, "scanlatch: 1\nname: %s-%" PRId64 "x%" PRId64 "\nstandard: %s\ngrade: %s\n", space->standard->name,
	            space->columns, space->picture_lines, space->standard->name, limit_grade_name(space->grade));
	writing->out->failed = writing->out->failed || words.failed;
	text_release(&words);
}

static void put_clock(const struct writing *writing)
{
	const struct fit_line *line = &writing->layout->line;
	const struct crystal *crystal = &writing->space->crystals[line->crystal];
	struct text *out = writing->out;
	text_put(out, "\nclock:\n  master: ");
	text_put_fraction(out, crystal->frequency_hz);
	text_printf(out, " Hz   # %s\n  dot: ", crystal->name);
	text_put_count(out, (uint64_t)line->dot_ticks, "tick", "ticks");
	text_put(out, "\n  cell: ");
	text_put_count(out, (uint64_t)line->cell_dots, "dot", "dots");
	if (writing->stretches) {
		text_put(out, "\n  stretch: ");
		text_put_count(out, (uint64_t)line->stretch_dots, "dot", "dots");
	}
	if (writing->colour) {
		text_printf(out, "\n  subcarrier: master / %" PRId64 "\n  phase: ", line->cycle_ticks);
		put_fit_phase(out, writing->space);
	}
	text_put(out, "\n");
}

static void put_signals(const struct writing *writing)
{
	struct text *out = writing->out;
	text_put(out, "\nsignals:\n");
	if (writing->separate)
		text_printf(out,
		            "  hsync:   { role: horizontal sync, active: %s }\n"
		            "  vsync:   { role: vertical sync, active: %s }\n",
		            is_positive(writing, ITEM_HORIZONTAL_POLARITY) ? "high" : "low",
		            is_positive(writing, ITEM_VERTICAL_POLARITY) ? "high" : "low");
	else
		text_put(out, "  sync:    { role: composite sync, active: low }\n");
	text_put(out, "  blank:   { role: blanking, active: high }\n");
	if (writing->colour)
		text_put(out, "  burst:   { role: burst gate, active: high }\n");
	if (writing->stretches)
		text_put(out, "  stretch: { role: stretch, active: low }\n");
}

static void put_region(struct text *out, const char *name, struct fit_cells region, const char *asserted)
{
	text_printf(out, "      - { region: %s, cells: %" PRId64, name, region.cells);
	if (asserted[0] != '\0')
		text_printf(out, ", assert: [%s]", asserted);
	if (region.stretched > 0)
		text_printf(out, ", stretch: %" PRId64, region.stretched);
	text_put(out, " }\n");
}

static const char *asserted_in(const struct writing *writing, enum fit_region region)
{
	switch (region) {
	case FIT_SYNC: return writing->separate ? "hsync, blank" : "sync, blank";
	case FIT_BURST: return "blank, burst";
	case FIT_PICTURE: return "";
	default: return "blank";
	}
}

static void put_picture_line(const struct writing *writing)
{
	text_put(writing->out, "  picture:\n    regions:\n");
	for (size_t region = 0; region < FIT_REGIONS; region++)
		if (writing->layout->regions[region].cells > 0)
			put_region(writing->out, fit_region_name((enum fit_region)region), writing->layout->regions[region],
			           asserted_in(writing, (enum fit_region)region));
}

// A line whose composite sync is one broad pulse up to a serration.
static void put_broad_line(const struct writing *writing)
{
	const struct fit_line *line = &writing->layout->line;
	const struct fit_cells serration = writing->layout->serration;
	const struct fit_cells broad = {line->cells - serration.cells, line->stretched - serration.stretched};
	text_put(writing->out, "  vertical:\n    regions:\n");
	put_region(writing->out, "broad pulse", broad, "sync, blank");
	put_region(writing->out, "serration", serration, "blank");
}

// A line through which vertical sync of its own is asserted.
static void put_sync_line(const struct writing *writing)
{
	text_put(writing->out, "  vertical:\n    like: picture\n    change:\n");
	for (size_t region = 0; region < FIT_REGIONS; region++)
		if (writing->layout->regions[region].cells > 0)
			text_printf(writing->out, "      - { region: %s, assert: [%s, vsync] }\n", fit_region_name((enum fit_region)region),
			            region == FIT_SYNC ? "hsync, blank" : "blank");
}

static int64_t lines_below(const struct fit_frame *frame)
{
	return frame->lines - frame->top - frame->picture_lines;
}

static void put_lines(const struct writing *writing)
{
	const struct fit_frame *frame = &writing->layout->frame;
	text_put(writing->out, "\nlines:\n");
	put_picture_line(writing);
	if (frame->top > frame->broad_lines || lines_below(frame) > 0)
		text_put(writing->out, "  border:\n    like: picture\n    change:\n      - { region: picture, assert: [blank] }\n");
	if (writing->separate)
		put_sync_line(writing);
	else
		put_broad_line(writing);
}

static void put_block(struct text *out, int64_t repeat, const char *line)
{
	if (repeat > 0)
		text_printf(out, "  - { repeat: %" PRId64 ", line: %s }\n", repeat, line);
}

static void put_frame(const struct writing *writing)
{
	const struct fit_frame *frame = &writing->layout->frame;
	text_put(writing->out, "\nframe:\n");
	put_block(writing->out, frame->broad_lines, "vertical");
	put_block(writing->out, frame->top - frame->broad_lines, "border");
	put_block(writing->out, frame->picture_lines, "picture");
	put_block(writing->out, lines_below(frame), "border");
}

static void put_machine(const struct writing *writing)
{
	const struct fit_memory *memory = &writing->layout->memory;
	struct text *out = writing->out;
	text_put(out, "\nmachine:\n  form: loop\n  state: ");
	text_put_count(out, memory->state_bits, "bit", "bits");
	text_printf(out, "\n  start: 0\n  outputs: registered\n\nchips: { part: %s, speed: ", memory->part->name);
	text_put_time_in(out, memory->access_s, UNIT_NANOSECONDS);
	text_printf(out, " }\n\ntiming: { latch: %s, margin: %d ns }\n", FIT_LATCH, FIT_MARGIN_NS);
}

void view_fit_plan(struct text *out, const struct fit_space *space, const struct fit_layout *layout)
{
	const struct writing writing = {out, space, layout, fit_has_separate_sync(space->standard), layout->line.cycle_ticks > 0,
	                                layout->line.stretched > 0};
	put_opening(&writing);
	put_clock(&writing);
	put_signals(&writing);
	put_lines(&writing);
	put_frame(&writing);
	put_machine(&writing);
}
