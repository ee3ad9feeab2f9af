#include <stdlib.h>

#include "base/arena.h"
#include "library/library.h"
#include "view/figures.h"
#include "view/set.h"

static struct set_view view_of(const scanlatch_proofs *proofs)
{
	const scanlatch_plan *plan = proofs->images->plan;
	return (struct set_view){plan->set != NULL ? plan->set->set : NULL, (const struct proofs *const *)proofs->proofs, plan->member_count};
}

#define MOST_OTHERS 16u // plans of a set that are tried in a bank that has the rows of none of its own

static bool keeps_to(const struct proofs *proofs)
{
	return proofs->proof[PROOF_CLOSURE].verdict == VERDICT_PASS && proofs->proof[PROOF_SIGNALS].verdict == VERDICT_PASS;
}

// The proofs of one member's first bank against another's plan.
static struct proofs *prove_as(const scanlatch_images *images, size_t member, size_t other)
{
	return proofs_run_banks(images->plan->members[other].timeline, images->images, images->plan->members[member].banks, 1,
	                        images->members[other].has_start, images->members[other].start);
}

// Should a bank that fails have another plan's rows, says so. False when memory is out.
static bool hint_other_plan(const scanlatch_images *images, size_t member, struct proofs *failed)
{
	bool found = false, good = true;
	for (size_t other = 0; good && !found && other < images->plan->member_count && other < MOST_OTHERS; other++) {
		if (other == member)
			continue;
		struct proofs *proofs = prove_as(images, member, other);
		good = proofs != NULL;
		found = good && keeps_to(proofs);
		proofs_destroy(proofs);
		if (!found)
			continue;
		const enum proof_kind kind = failed->proof[PROOF_CLOSURE].verdict == VERDICT_FAIL ? PROOF_CLOSURE : PROOF_SIGNALS;
		failed->proof[kind].counterexample.hint = arena_format(failed->arena, "this bank holds the rows of \"%s\": are banks exchanged?",
		                                                       images->plan->members[other].plan->name);
		good = failed->proof[kind].counterexample.hint != NULL;
	}
	return good;
}

// Of a set: what is seen only when plans are held against one another. False when memory is out.
static bool compare_members(const scanlatch_proofs *proofs)
{
	bool good = true;
	for (size_t member = 0; good && member < proofs->images->plan->member_count; member++) {
		if (!keeps_to(proofs->proofs[member]))
			good = hint_other_plan(proofs->images, member, proofs->proofs[member]);
		else if (member > 0)
			good = proofs_compare_codes(proofs->proofs[0], proofs->proofs[member]);
	}
	return good;
}

scanlatch_proofs *scanlatch_prove(const scanlatch_images *images)
{
	const size_t count = images->plan->member_count;
	scanlatch_proofs *proofs = images->plan->members[0].timeline != NULL ? malloc(sizeof *proofs) : NULL;
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
	if (good && (images->plan->set == NULL || compare_members(proofs)))
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
