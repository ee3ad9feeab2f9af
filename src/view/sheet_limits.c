// The measured limits with their margins.
#include "base/text.h"
#include "view/limits.h"
#include "view/page.h"
#include "view/proofs_shared.h"
#include "view/sheet_parts.h"
#include "view/standards.h"

static void put_note_paragraph(struct text *out, struct text *words)
{
	page_element_of(out, "p", "", words);
}

// In the item's unit, as JSON has it.
static void put_in_unit(struct text *words, enum limit_item item, struct fraction value)
{
	struct fraction scaled = value;
	if (limit_item_facts(item)->is_polarity || limit_value_in_unit(item, value, &scaled))
		text_put_fraction(words, scaled);
	else
		text_put(words, "?");
}

static void put_bound(struct text *words, const char *name, bool given, enum limit_item item, struct fraction value)
{
	if (!given)
		return;
	text_printf(words, "; %s ", name);
	put_in_unit(words, item, value);
}

static void put_bounds(struct text *words, const struct proofs *proofs, const struct limit *limit)
{
	const struct limit_verdict *verdict = &proofs->limits.rows[limit->item].grades[limit->grade];
	put_bound(words, "low", limit->has_low, limit->item, limit->low);
	put_bound(words, "high", limit->has_high, limit->item, limit->high);
	put_bound(words, "margin", verdict->known && verdict->judgement.binds, limit->item, verdict->judgement.margin);
}

// "front porch, in us: measured 176/35; low 8/9; margin 1304/315".
static void put_exact(struct text *words, const struct proofs *proofs, enum limit_item item)
{
	const struct interval values = proofs->limits.measurement->items[item].values;
	const struct limit *limit = standard_limit(plan_of(proofs)->standard, item, plan_of(proofs)->grade);
	const char *unit = limit_item_facts(item)->unit;
	text_printf(words, "%s%s%s: measured ", limit_item_facts(item)->name, unit[0] != '\0' ? ", in " : "", unit);
	put_in_unit(words, item, values.low);
	if (fraction_compare(values.low, values.high) != 0) {
		text_put(words, " to ");
		put_in_unit(words, item, values.high);
	}
	if (limit != NULL)
		put_bounds(words, proofs, limit);
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
