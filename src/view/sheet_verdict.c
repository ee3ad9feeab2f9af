// What the proofs came to: in words at the top, and proof by proof.
#include <inttypes.h>

#include "base/text.h"
#include "view/page.h"
#include "view/proofs.h"
#include "view/proofs_shared.h"
#include "view/sheet_parts.h"

bool sheet_refused(const struct sheet *sheet)
{
	for (size_t member = 0; member < sheet->view->count; member++)
		if (proofs_failed(sheet->view->proofs[member], sheet->strict))
			return true;
	return false;
}

// Puts the names of failed proofs of all banks, musts or advice. False if there are none.
static bool put_failed(struct text *words, const struct sheet *sheet, bool musts)
{
	bool any = false;
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		for (size_t member = 0; member < sheet->view->count; member++) {
			if (proof_is_must(kind) != musts || !proof_failed(sheet->view->proofs[member], kind))
				continue;
			text_printf(words, "%s%s", any ? ", " : "", proof_name(kind));
			if (sheet->view->set != NULL)
				text_printf(words, " (bank %u)", sheet->view->set->banks[member].number);
			any = true;
		}
	return any;
}

static void put_advice(struct text *out, const struct sheet *sheet)
{
	struct text words = {0}, missed = {0};
	if (put_failed(&missed, sheet, false))
		text_printf(&words, "Advice missed: %s.%s", text_string(&missed), sheet->strict ? " It was asked to count like a must (--strict)." : "");
	else
		text_put(&words, "No advice is missed.");
	words.failed = words.failed || missed.failed;
	text_release(&missed);
	page_element_of(out, "p", "", &words);
}

void sheet_verdict(struct text *out, const struct sheet *sheet)
{
	const bool refused = sheet_refused(sheet);
	struct text words = {0}, failed = {0};
	text_printf(out, "<div id=\"verdict\" class=\"verdict %s\" role=\"%s\">\n", refused ? "refused" : "approved", refused ? "alert" : "status");
	page_element(out, "p", " class=\"word\"", "%s", refused ? "✗ NOT APPROVED" : "✓ Proved");
	if (put_failed(&failed, sheet, true))
		text_printf(&words, "A proof that must hold FAILED: %s. The machine does not do what the plan says. Do not burn these images and do not "
		                    "build from this sheet; it shows what is wrong.", text_string(&failed));
	else
		text_put(&words, "Every proof that must hold holds, from the bytes of the images as they are burned.");
	words.failed = words.failed || failed.failed;
	text_release(&failed);
	page_element_of(out, "p", "", &words);
	put_advice(out, sheet);
	text_put(out, "</div>\n");
}

static void put_detail_item(struct text *out, struct text *words)
{
	page_element_of(out, "li", "", words);
}

static const char *verdict_class(const char *word)
{
	return word[0] == 'p' ? "pass" : word[0] == 'F' ? "fail" : word[0] == 'm' ? "miss" : "none";
}

static const char *verdict_sign(const char *word)
{
	return word[0] == 'p' ? "✓" : word[0] == 'F' ? "✗" : word[0] == 'm' ? "!" : "–";
}

static void put_proof(struct text *out, const struct proofs *proofs, enum proof_kind kind)
{
	const char *word = verdict_word(proofs, kind), *reason = reason_of(proofs, kind);
	struct text figures = {0}, details = {0};
	text_printf(out, "<tr class=\"%s\"><th scope=\"row\">%s</th><td class=\"sign\">%s %s</td><td>%s</td><td>", verdict_class(word), proof_name(kind),
	            verdict_sign(word), word, proof_is_must(kind) ? "must" : "advice");
	if (reason != NULL)
		text_put(&figures, reason);
	else
		put_proof_figures(&figures, proofs, kind);
	page_words(out, &figures);
	put_proof_details(&details, proofs, kind, put_detail_item);
	if (details.length > 0)
		text_printf(out, "\n<ul>%s</ul>", text_string(&details));
	out->failed = out->failed || details.failed;
	text_release(&details);
	text_put(out, "</td></tr>\n");
}

void sheet_proofs(struct text *out, const struct proofs *proofs)
{
	struct text counting = {0};
	text_put(out, "<div class=\"wide\"><table class=\"proofs\">\n<thead><tr><th scope=\"col\">proof</th><th scope=\"col\">verdict</th>"
	              "<th scope=\"col\">counts as</th><th scope=\"col\">figures</th></tr></thead>\n<tbody>\n");
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		put_proof(out, proofs, kind);
	text_put(out, "</tbody></table></div>\n");
	view_counting(&counting, proofs);
	if (counting.length > 0)
		counting.bytes[counting.length - 1] = '\0'; // it ends a line for terminals
	if (counting.length > 0)
		page_element(out, "p", "", "%s", counting.bytes);
	out->failed = out->failed || counting.failed;
	text_release(&counting);
}
