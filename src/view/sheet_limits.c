// The measured limits with their margins.
#include "base/text.h"
#include "view/limits.h"
#include "view/page.h"
#include "view/proofs_shared.h"
#include "view/sheet_parts.h"

static void put_note_paragraph(struct text *out, struct text *words)
{
	page_element_of(out, "p", "", words);
}

static void put_exact_bound(struct text *words, const char *name, bool given, struct fraction value)
{
	if (!given)
		return;
	text_printf(words, "; %s ", name);
	text_put_fraction(words, value);
}

// The exact values, in the unit of the item's dimension: seconds, hertz, cycles, lines.
static void put_exact(struct text *words, const struct proofs *proofs, enum limit_item item)
{
	const struct measured *measured = &proofs->limits.measurement->items[item];
	const struct limit *limit = standard_limit(plan_of(proofs)->standard, item, plan_of(proofs)->grade);
	text_printf(words, "%s: measured ", limit_item_facts(item)->name);
	text_put_fraction(words, measured->values.low);
	if (fraction_compare(measured->values.low, measured->values.high) != 0) {
		text_put(words, " to ");
		text_put_fraction(words, measured->values.high);
	}
	if (limit != NULL) {
		put_exact_bound(words, "low", limit->has_low, limit->low);
		put_exact_bound(words, "high", limit->has_high, limit->high);
	}
	if (limit != NULL && (limit->has_low || limit->has_high) && proofs->limits.rows[item].grades[limit->grade].known)
		put_exact_bound(words, "margin", true, proofs->limits.rows[item].grades[limit->grade].judgement.margin);
}

static void put_limit_attributes(struct text *out, const void *context, size_t row)
{
	const struct limits_view *view = context;
	struct text words = {0};
	if (limit_is_missed(view->proofs, view->items[row]))
		text_put(out, " class=\"miss\"");
	put_exact(&words, view->proofs, view->items[row]);
	page_attribute(out, "title", &words);
}

static void put_misses(struct text *out, const struct proofs *proofs)
{
	struct text items = {0};
	put_proof_details(&items, proofs, PROOF_LIMITS, put_note_paragraph);
	if (items.length > 0)
		text_printf(out, "<div class=\"misses\">%s</div>\n", text_string(&items));
	out->failed = out->failed || items.failed;
	text_release(&items);
}

void sheet_limits(struct text *out, const struct proofs *proofs)
{
	struct limits_view view;
	struct text words = {0};
	if (!limits_view_make(proofs, &view)) {
		page_element(out, "p", "", "%s", plan_of(proofs)->standard == NULL ? "The plan names no standard: nothing was measured against limits."
		                                                                   : "Nothing could be measured.");
		return;
	}
	const struct page_table table = {NULL, "limits", limits_table(&view), put_limit_attributes};
	put_limits_heading(&words, proofs);
	text_put(&words, ". A margin is what is left to the nearer bound; below zero the limit is missed.");
	page_element_of(out, "p", "", &words);
	page_table(out, &table);
	put_limits_notes(out, proofs, put_note_paragraph);
	put_misses(out, proofs);
}
