// The sections of the build sheet, a file each. Internal to view/. When memory is out, out->failed is set.
#ifndef SCANLATCH_VIEW_SHEET_PARTS_H
#define SCANLATCH_VIEW_SHEET_PARTS_H

#include "plan/set.h"
#include "view/sheet.h"

struct clock;

static inline const struct plan *sheet_plan(const struct sheet *sheet)
{
	return sheet->view->proofs[0]->timeline->plan;
}

static inline const char *sheet_name(const struct sheet *sheet)
{
	return sheet->view->set != NULL ? sheet->view->set->name : sheet_plan(sheet)->name;
}

// Whether something failed that counts. Cannot fail.
bool sheet_refused(const struct sheet *sheet);

// Of all banks together: the verdict in words, first thing on the page; the job; the files to burn; the jumpers.
void sheet_verdict(struct text *out, const struct sheet *sheet);
void sheet_job(struct text *out, const struct sheet *sheet);
void sheet_burn(struct text *out, const struct sheet *sheet);
void sheet_banks(struct text *out, const struct sheet *sheet);

// Of the chips and the logic around them, which all banks share. The codes of decoders may have been found in the images.
void sheet_pins(struct text *out, const struct plan *plan);
void sheet_logic(struct text *out, const struct plan *plan);
void sheet_decoders(struct text *out, const struct proofs *proofs);

// Of one bank.
void sheet_clock_words(struct text *out, const struct timeline *timeline);
void sheet_proofs(struct text *out, const struct proofs *proofs);
void sheet_divider(struct text *out, const struct clock *clock);
void sheet_lines(struct text *out, const struct timeline *timeline);
void sheet_limits(struct text *out, const struct proofs *proofs);
void sheet_bring_up(struct text *out, const struct proofs *proofs, const struct tally *tally);

// `mark` is what follows the names of a bank's sections and pictures.
void sheet_pictures(struct text *out, const struct sheet *sheet, size_t member, const char *mark);

void sheet_cautions(struct text *out);
// The terms that the page has used; `page` is what was put so far.
void sheet_glossary(struct text *out, const char *page);

#endif
