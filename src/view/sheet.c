#include "view/sheet.h"

#include <inttypes.h>
#include <stdio.h>
#include <string.h>

#include "base/text.h"
#include "scanlatch/scanlatch.h"
#include "view/page.h"
#include "view/page_data.h"
#include "view/palette.h"
#include "view/sheet_parts.h"

#define MARK_BYTES 16

// A section has a heading that can be linked to.
struct section {
	const char *id, *heading;
};

static const struct section common_sections[] = {
	{"job", "The job"},       {"burn", "Burn list"},        {"wiring", "Wiring: the chips"},
	{"logic", "Wiring: latches, counters and decoders"},
};
static const struct section bank_sections[] = {
	{"proofs", "Proofs"}, {"bring-up", "Bring-up"}, {"divider", "Divider"}, {"lines", "Lines and frame"}, {"limits", "Limits"},
	{"pictures", "Pictures"},
};
static const struct section last_sections[] = {{"cautions", "Cautions"}, {"glossary", "Words"}};

enum { COMMON_JOB, COMMON_BURN, COMMON_WIRING, COMMON_LOGIC };
enum { BANK_PROOFS, BANK_BRING_UP, BANK_DIVIDER, BANK_LINES, BANK_LIMITS, BANK_PICTURES, BANK_SECTIONS };
enum { LAST_CAUTIONS, LAST_GLOSSARY };

static void begin_section(struct text *out, const struct section *section, const char *mark)
{
	text_printf(out, "<section id=\"%s%s\" class=\"about-%s\">\n", section->id, mark, section->id);
	page_element(out, "h2", "", "%s", section->heading);
}

static void end_section(struct text *out)
{
	text_put(out, "</section>\n");
}

static void put_style(struct text *out)
{
	text_put(out, "<style>/*<![CDATA[*/\n");
	text_put_bytes(out, (const char *)page_sheet_css, page_sheet_css_length);
	palette_put_style(out);
	text_put(out, "/*]]>*/</style>\n");
}

static void put_script(struct text *out)
{
	text_put(out, "<script>//<![CDATA[\n");
	text_put_bytes(out, (const char *)page_sheet_js, page_sheet_js_length);
	text_put(out, "//]]></script>\n");
}

// The policy forbids whatever would have to be loaded.
static void put_head(struct text *out, const struct sheet *sheet)
{
	text_put(out, "<!DOCTYPE html>\n<html xmlns=\"http://www.w3.org/1999/xhtml\" lang=\"en\">\n<head>\n<meta charset=\"utf-8\"/>\n"
	              "<meta http-equiv=\"Content-Security-Policy\" content=\"default-src 'none'; style-src 'unsafe-inline'; "
	              "script-src 'unsafe-inline'\"/>\n"
	              "<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\"/>\n"
	              "<meta name=\"color-scheme\" content=\"light dark\"/>\n");
	page_element(out, "title", "", "%s%s: build sheet", sheet_refused(sheet) ? "NOT APPROVED: " : "", sheet_name(sheet));
	put_style(out);
	text_put(out, "</head>\n");
}

static const char *note_of(const struct sheet *sheet)
{
	return sheet->view->set != NULL ? sheet->view->set->note : sheet_plan(sheet)->note;
}

// The plan's own words may have line breaks.
static void put_note(struct text *out, const char *note)
{
	struct text words = {0};
	text_put(&words, note);
	for (size_t index = 0; index < words.length; index++)
		if (words.bytes[index] == '\n')
			words.bytes[index] = ' ';
	page_element_of(out, "p", " class=\"note\"", &words);
}

static void put_title(struct text *out, const struct sheet *sheet)
{
	const struct set *set = sheet->view->set;
	const struct plan *plan = sheet_plan(sheet);
	text_put(out, "<header>\n<p class=\"what\">Build sheet</p>\n");
	page_element(out, "h1", "", "%s", sheet_name(sheet));
	if (note_of(sheet)[0] != '\0')
		put_note(out, note_of(sheet));
	page_element(out, "p", " class=\"revision\"", "%s %s, revision %08" PRIx32 " (CRC-32 of the file); scanlatch %s", set != NULL ? "Set" : "Plan",
	             set != NULL ? set->file_name : plan->file_name, set != NULL ? set->source_crc32 : plan->source_crc32, SCANLATCH_VERSION);
	text_put(out, "</header>\n");
}

static void put_links(struct text *out, const struct section *sections, size_t count, const char *mark)
{
	for (size_t index = 0; index < count; index++) {
		text_printf(out, "<li><a href=\"#%s%s\">", sections[index].id, mark);
		text_put(out, sections[index].heading);
		text_put(out, "</a></li>\n");
	}
}

// What follows the name of a bank's sections; nothing for a plan alone.
static void make_mark(char mark[MARK_BYTES], const struct sheet *sheet, size_t member)
{
	mark[0] = '\0';
	if (sheet->view->set != NULL)
		snprintf(mark, MARK_BYTES, "-%u", sheet->view->set->banks[member].number);
}

static void put_contents(struct text *out, const struct sheet *sheet)
{
	char mark[MARK_BYTES];
	text_put(out, "<nav aria-label=\"Sections\"><ul>\n");
	put_links(out, common_sections, sizeof common_sections / sizeof *common_sections, "");
	if (sheet->view->set != NULL)
		put_links(out, last_sections, sizeof last_sections / sizeof *last_sections, "");
	for (size_t member = 0; member < sheet->view->count; member++) {
		make_mark(mark, sheet, member);
		if (sheet->view->set != NULL)
			page_element(out, "li", " class=\"bank\"", "Bank %u:", sheet->view->set->banks[member].number);
		put_links(out, bank_sections, BANK_SECTIONS, mark);
	}
	if (sheet->view->set == NULL)
		put_links(out, last_sections, sizeof last_sections / sizeof *last_sections, "");
	text_put(out, "</ul></nav>\n");
}

static void put_common(struct text *out, const struct sheet *sheet)
{
	begin_section(out, &common_sections[COMMON_JOB], "");
	sheet_job(out, sheet);
	end_section(out);
	begin_section(out, &common_sections[COMMON_BURN], "");
	sheet_burn(out, sheet);
	sheet_banks(out, sheet);
	end_section(out);
	begin_section(out, &common_sections[COMMON_WIRING], "");
	sheet_pins(out, sheet_plan(sheet));
	end_section(out);
	begin_section(out, &common_sections[COMMON_LOGIC], "");
	sheet_logic(out, sheet_plan(sheet));
	sheet_decoders(out, sheet->view->proofs[0]);
	end_section(out);
}

static void put_bank_section(struct text *out, const struct sheet *sheet, size_t member, unsigned section, const char *mark)
{
	const struct proofs *proofs = sheet->view->proofs[member];
	switch (section) {
	case BANK_PROOFS: sheet_proofs(out, proofs); break;
	case BANK_BRING_UP: sheet_bring_up(out, proofs, sheet->tallies[member]); break;
	case BANK_DIVIDER: sheet_divider(out, &proofs->timeline->plan->clock); break;
	case BANK_LINES: sheet_lines(out, proofs->timeline); break;
	case BANK_LIMITS: sheet_limits(out, proofs); break;
	case BANK_PICTURES: sheet_pictures(out, sheet, member, mark); break;
	}
}

static void put_bank_heading(struct text *out, const struct sheet *sheet, size_t member)
{
	const struct plan *plan = sheet->view->proofs[member]->timeline->plan;
	text_put(out, "<div class=\"bank\">\n");
	page_element(out, "h2", " class=\"bank\"", "Bank %u: %s", sheet->view->set->banks[member].number, plan->name);
	if (plan->note[0] != '\0')
		put_note(out, plan->note);
	page_element(out, "p", " class=\"revision\"", "Plan %s, revision %08" PRIx32, plan->file_name, plan->source_crc32);
	struct text words = {0};
	sheet_clock_words(&words, sheet->view->proofs[member]->timeline);
	page_element_of(out, "p", "", &words);
	text_put(out, "</div>\n");
}

static void put_bank(struct text *out, const struct sheet *sheet, size_t member)
{
	char mark[MARK_BYTES];
	make_mark(mark, sheet, member);
	if (sheet->view->set != NULL)
		put_bank_heading(out, sheet, member);
	for (unsigned section = 0; section < BANK_SECTIONS; section++) {
		begin_section(out, &bank_sections[section], mark);
		put_bank_section(out, sheet, member, section, mark);
		end_section(out);
	}
}

void view_sheet(struct text *out, const struct sheet *sheet)
{
	put_head(out, sheet);
	const size_t body = out->length;
	text_printf(out, "<body class=\"%s\">\n", sheet_refused(sheet) ? "refused" : "approved");
	put_title(out, sheet);
	sheet_verdict(out, sheet);
	put_contents(out, sheet);
	text_put(out, "<main>\n");
	put_common(out, sheet);
	for (size_t member = 0; member < sheet->view->count; member++)
		put_bank(out, sheet, member);
	begin_section(out, &last_sections[LAST_CAUTIONS], "");
	sheet_cautions(out);
	end_section(out);
	begin_section(out, &last_sections[LAST_GLOSSARY], "");
	sheet_glossary(out, text_string(out) + (out->failed ? 0 : body));
	end_section(out);
	text_put(out, "</main>\n");
	put_script(out);
	text_put(out, "</body>\n</html>\n");
}
