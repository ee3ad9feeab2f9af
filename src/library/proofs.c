#include <stdlib.h>

#include "library/library.h"
#include "view/figures.h"
#include "view/manifest.h"
#include "view/proofs.h"

scanlatch_proofs *scanlatch_prove(const scanlatch_images *images)
{
	scanlatch_proofs *proofs = malloc(sizeof *proofs);
	if (proofs == NULL)
		return NULL;
	proofs->images = images;
	proofs->proofs = proofs_run(images->plan->timeline, images->images, images->has_start, images->start);
	if (proofs->proofs != NULL)
		return proofs;
	free(proofs);
	return NULL;
}

void scanlatch_proofs_destroy(scanlatch_proofs *proofs)
{
	if (proofs == NULL)
		return;
	proofs_destroy(proofs->proofs);
	free(proofs);
}

bool scanlatch_proofs_failed(const scanlatch_proofs *proofs, bool strict)
{
	return proofs_failed(proofs->proofs, strict);
}

char *scanlatch_proofs_text(const scanlatch_proofs *proofs, bool colour)
{
	struct text text = {0};
	view_proofs(&text, proofs->proofs, colour);
	return take_string(&text);
}

static bool is_missed(const struct proofs *proofs, enum proof_kind kind)
{
	return proofs->proof[kind].verdict == VERDICT_FAIL && !proof_is_must(kind);
}

char *scanlatch_proofs_missed(const scanlatch_proofs *proofs)
{
	struct text text = {0};
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		if (is_missed(proofs->proofs, kind))
			text_printf(&text, "%s%s", text.length == 0 ? "" : ", ", proof_name(kind));
	return take_string(&text);
}

char *scanlatch_proofs_json(const scanlatch_proofs *proofs)
{
	json_t *document = json_object(), *missed = json_array();
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		if (is_missed(proofs->proofs, kind))
			json_append(&missed, json_string(proof_name(kind)));
	json_put(&document, "name", json_string(proofs->images->plan->plan->name));
	json_put(&document, "failed", json_boolean(proofs_failed(proofs->proofs, false)));
	json_put(&document, "missed", missed);
	json_put(&document, "proofs", view_proofs_json(proofs->proofs));
	return take_json(document);
}

char *scanlatch_manifest(const scanlatch_proofs *proofs, unsigned files)
{
	return take_json(view_manifest(proofs->proofs, proofs->images->images, files));
}
