#include <stdlib.h>

#include "library/library.h"
#include "view/manifest.h"
#include "view/proofs.h"

scanlatch_proofs *scanlatch_prove(const scanlatch_images *images)
{
	scanlatch_proofs *proofs = malloc(sizeof *proofs);
	if (proofs == NULL)
		return NULL;
	const struct machine_plan *machine = &images->plan->plan->machine;
	const bool counted = machine->advance == ADVANCE_COUNT;
	proofs->images = images;
	proofs->proofs = proofs_run(images->plan->timeline, images->images, machine->has_start || counted, counted ? 0 : machine->start);
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

char *scanlatch_proofs_json(const scanlatch_proofs *proofs)
{
	return take_json(view_proofs_json(proofs->proofs));
}

char *scanlatch_manifest(const scanlatch_proofs *proofs, unsigned files)
{
	return take_json(view_manifest(proofs->proofs, proofs->images->images, files));
}
