#include "view/set.h"

#include <inttypes.h>

#include "base/text.h"
#include "plan/set.h"
#include "proof/proof.h"
#include "view/proofs.h"
#include "view/proofs_shared.h"

bool set_comes_home(const struct set_view *view)
{
	for (size_t member = 0; member < view->count; member++)
		if (proof_failed(view->proofs[member], PROOF_POWER_UP))
			return false;
	return true;
}

bool set_misses(const struct set_view *view, enum proof_kind kind)
{
	for (size_t member = 0; member < view->count; member++)
		if (proof_failed(view->proofs[member], kind) && !proof_is_must(kind))
			return true;
	return false;
}

void view_banks(struct text *out, const struct plan *plan, const uint32_t *banks, size_t count)
{
	text_put(out, count == 1 ? "bank " : "banks ");
	for (size_t index = 0; index < count; index++)
		text_printf(out, "%s%" PRIu32, index == 0 ? "" : index + 1 == count ? " and " : ", ", banks[index]);
	text_printf(out, ": %s (%s)\n", plan->name, plan->file_name);
}

static const char *jumpers_words(const struct set_view *view)
{
	for (size_t member = 0; member < view->count; member++)
		if (reason_of(view->proofs[member], PROOF_POWER_UP) != NULL)
			return "not judged: some bank's frame does not close";
	return set_comes_home(view) ? "may change at any moment: every state of every bank comes home, as power-up shows"
	                            : "may not change while the machine runs: some state of some bank never comes home, as power-up shows";
}

static void put_jumpers(struct text *out, const struct set_view *view, bool colour)
{
	view_must(out, "jumpers", set_comes_home(view), jumpers_words(view), colour);
}

void view_set_proofs(struct text *out, const struct set_view *view, bool colour)
{
	for (size_t member = 0; member < view->count; member++) {
		const struct proofs *proofs = view->proofs[member];
		if (view->set != NULL)
			view_banks(out, proofs->timeline->plan, proofs->bank_numbers, proofs->banks);
		view_proofs(out, proofs, colour);
	}
	if (view->set != NULL)
		put_jumpers(out, view, colour);
}
