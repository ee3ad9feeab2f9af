// What the text and the JSON of proofs share. Internal to view/.
#ifndef SCANLATCH_VIEW_PROOFS_SHARED_H
#define SCANLATCH_VIEW_PROOFS_SHARED_H

#include "catalogue/catalogue.h"
#include "proof/proof.h"
#include "view/figures.h"

static inline const struct plan *plan_of(const struct proofs *proofs)
{
	return proofs->timeline->plan;
}

static inline unsigned state_bits(const struct proofs *proofs)
{
	return plan_of(proofs)->machine.line.state_bits;
}

static inline bool proof_failed(const struct proofs *proofs, enum proof_kind kind)
{
	return proofs->proof[kind].verdict == VERDICT_FAIL;
}

// Whether a sweep does what the plan asks. Cannot fail.
static inline bool sweep_kept(const struct sweep_result *sweep)
{
	return sweep->missing == 0 && fraction_compare(sweep->worst_gap_s, sweep->within_s) <= 0;
}

// Why a proof could not be judged, in words; NULL if it was. Such a failure has words but no place. So has that of a sweep
// whose values never come up, but a sweep that was judged counts its values. Cannot fail.
static inline const char *reason_of(const struct proofs *proofs, enum proof_kind kind)
{
	const struct counterexample *found = &proofs->proof[kind].counterexample;
	if (!proof_failed(proofs, kind) || found->present || found->what == NULL)
		return NULL;
	if (kind != PROOF_SWEEP)
		return found->what;
	for (size_t index = 0; index < plan_of(proofs)->sweep_count; index++)
		if (proofs->sweeps[index].values == 0)
			return found->what;
	return NULL;
}

// Whether a counterexample lies in a cell of the frame: power-up's is a state off the frame. Cannot fail.
static inline bool has_place(const struct proofs *proofs, enum proof_kind kind)
{
	return proofs->proof[kind].counterexample.present && kind != PROOF_POWER_UP;
}

// In proofs_colour.c: the figures of colour, as put_proof_figures and view_proofs_json have them.
void put_colour(struct text *out, const struct proofs *proofs);
void json_put_colour(json_t **object, const struct proofs *proofs);

// In proofs_figures.c. When memory is out, out->failed is set.

// Puts what came of one sweep, in words.
void put_sweep(struct text *out, const struct sweep *asked, const struct sweep_result *sweep);

// Puts the figures of a proof, in words, without line breaks. Not for proofs that have a reason_of.
void put_proof_figures(struct text *out, const struct proofs *proofs, enum proof_kind kind);

// In proofs_text.c. The word of a verdict: "pass", "FAIL", "miss" or "none". Cannot fail.
const char *verdict_word(const struct proofs *proofs, enum proof_kind kind);
// Puts where a cell of the frame is: "line 17 (picture), cell 3 (sync)". When memory is out, words->failed is set.
void put_place(struct text *words, const struct timeline *timeline, uint32_t cell);
// Gives the details of a failed proof, and the codes that were found, to `put` one by one; it releases the words.
typedef void put_detail(struct text *out, struct text *words);
void put_proof_details(struct text *out, const struct proofs *proofs, enum proof_kind kind, put_detail *put);

// In proofs_json.c: sets the five keys of a PLACE, see view/proofs.h.
void json_put_place(json_t **object, const struct timeline *timeline, uint32_t cell);

#endif
