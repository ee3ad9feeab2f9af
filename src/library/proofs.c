#include <stdlib.h>

#include "library/library.h"
#include "view/figures.h"
#include "view/set.h"

static struct set_view view_of(const scanlatch_proofs *proofs)
{
	const scanlatch_plan *plan = proofs->images->plan;
	return (struct set_view){plan->set != NULL ? plan->set->set : NULL, (const struct proofs *const *)proofs->proofs, plan->member_count};
}

scanlatch_proofs *scanlatch_prove(const scanlatch_images *images)
{
	const size_t count = images->plan->member_count;
	scanlatch_proofs *proofs = malloc(sizeof *proofs);
	if (proofs == NULL)
		return NULL;
	proofs->images = images;
	proofs->proofs = calloc(count, sizeof(struct proofs *));
	bool good = proofs->proofs != NULL;
	for (size_t index = 0; good && index < count; index++) {
		const struct member *member = &images->plan->members[index];
		proofs->proofs[index] = proofs_run_banks(member->timeline, images->images, member->banks, member->bank_count,
		                                         images->members[index].has_start, images->members[index].start);
		good = proofs->proofs[index] != NULL;
	}
	if (good)
		return proofs;
	scanlatch_proofs_destroy(proofs);
	return NULL;
}

void scanlatch_proofs_destroy(scanlatch_proofs *proofs)
{
	if (proofs == NULL)
		return;
	for (size_t index = 0; proofs->proofs != NULL && index < proofs->images->plan->member_count; index++)
		proofs_destroy(proofs->proofs[index]);
	free(proofs->proofs);
	free(proofs);
}

bool scanlatch_proofs_failed(const scanlatch_proofs *proofs, bool strict)
{
	for (size_t index = 0; index < proofs->images->plan->member_count; index++)
		if (proofs_failed(proofs->proofs[index], strict))
			return true;
	return false;
}

char *scanlatch_proofs_text(const scanlatch_proofs *proofs, bool colour)
{
	struct text text = {0};
	const struct set_view view = view_of(proofs);
	view_set_proofs(&text, &view, colour);
	return take_string(&text);
}

char *scanlatch_proofs_missed(const scanlatch_proofs *proofs)
{
	struct text text = {0};
	const struct set_view view = view_of(proofs);
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		if (set_misses(&view, kind))
			text_printf(&text, "%s%s", text.length == 0 ? "" : ", ", proof_name(kind));
	return take_string(&text);
}

char *scanlatch_proofs_json(const scanlatch_proofs *proofs)
{
	const struct set_view view = view_of(proofs);
	return take_json(view_set_json(&view));
}

char *scanlatch_manifest(const scanlatch_proofs *proofs, unsigned files)
{
	const struct set_view view = view_of(proofs);
	return take_json(view_manifest(&view, proofs->images->images, files));
}
