// Pictures in the build sheet, each a figure. Without the script they show all traces, and titles by themselves.
#include "base/text.h"
#include "view/page.h"
#include "view/pictures.h"
#include "view/sheet_parts.h"

#define MOST_LINES 12u // pictures of line types

// A figure that is being put: its picture's name, which is the page's alone.
struct figure {
	struct text id;
	struct picture picture;
};

// `kind` is of its class and of its name.
static void begin_figure(struct text *out, struct figure *figure, const char *kind, const char *mark)
{
	*figure = (struct figure){.id = {0}};
	text_printf(&figure->id, "picture-%s%s", kind, mark);
	figure->picture = (struct picture){.id = text_string(&figure->id)};
	text_printf(out, "<figure class=\"picture of-%s\">\n", kind);
}

static void end_figure(struct text *out, struct figure *figure, bool drawn)
{
	text_put(out, "</figure>\n");
	out->failed = out->failed || !drawn || figure->id.failed;
	text_release(&figure->id);
}

// Each type that a line of the frame has.
static void put_lines(struct text *out, const struct timeline *timeline, const char *mark)
{
	size_t drawn = 0;
	for (size_t type = 0; type < timeline->plan->line_count && drawn < MOST_LINES; type++) {
		const uint32_t line = picture_line_of_type(timeline, type);
		struct figure figure;
		struct text mark_of_line = {0};
		if (line == UINT32_MAX)
			continue;
		text_printf(&mark_of_line, "-%zu%s", type, mark);
		begin_figure(out, &figure, "line", text_string(&mark_of_line));
		end_figure(out, &figure, view_line_svg(out, &figure.picture, timeline, line));
		out->failed = out->failed || mark_of_line.failed;
		text_release(&mark_of_line);
		drawn++;
	}
}

static void put_frame(struct text *out, const struct timeline *timeline, const char *mark)
{
	struct figure figure;
	begin_figure(out, &figure, "frame", mark);
	end_figure(out, &figure, view_frame_svg(out, &figure.picture, timeline, false));
}

static void put_phase(struct text *out, const struct proofs *proofs, const char *mark)
{
	struct figure figure;
	if (proofs->colour.phases.parts == 0)
		return;
	begin_figure(out, &figure, "phase", mark);
	end_figure(out, &figure, view_phase_svg(out, &figure.picture, proofs->timeline, &proofs->colour));
}

static void list_banks(const struct sheet *sheet, size_t member, struct bank_words *banks)
{
	const struct proofs *proofs = sheet->view->proofs[member];
	for (uint32_t index = 0; index < proofs->banks; index++)
		banks[proofs->bank_numbers[index]] = (struct bank_words){proofs->bank_numbers[index], proofs->timeline->plan->name};
}

static void put_addresses(struct text *out, const struct sheet *sheet, size_t member, const char *mark)
{
	struct bank_words banks[1u << LIMIT_BANK_BITS] = {{0, ""}};
	const unsigned bits = sheet_plan(sheet)->bank_bits, bank = sheet->view->proofs[member]->bank_numbers[0];
	struct figure figure;
	if (sheet->tables[member] == NULL)
		return;
	for (size_t other = 0; other < sheet->view->count; other++)
		list_banks(sheet, other, banks);
	begin_figure(out, &figure, "table", mark);
	end_figure(out, &figure, view_table_svg(out, &figure.picture, sheet->tables[member], bank, banks, bits > 0 ? (size_t)1 << bits : 0));
}

void sheet_pictures(struct text *out, const struct sheet *sheet, size_t member, const char *mark)
{
	const struct proofs *proofs = sheet->view->proofs[member];
	put_lines(out, proofs->timeline, mark);
	put_frame(out, proofs->timeline, mark);
	put_phase(out, proofs, mark);
	put_addresses(out, sheet, member, mark);
}
