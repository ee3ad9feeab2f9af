// The measured limits for people and for programs.
#ifndef SCANLATCH_VIEW_LIMITS_H
#define SCANLATCH_VIEW_LIMITS_H

#include <jansson.h>

#include "proof/proof.h"
#include "view/columns.h"

struct text;

#define LIMITS_COLUMNS 9

// The table of limits, and what it is made of.
struct limits_view {
	const struct proofs *proofs;
	enum limit_item items[ITEM_COUNT]; // that were measured and have a limit, a row each
	size_t count;
	struct column columns[LIMITS_COLUMNS];
};

// False, with *view as it was, where nothing was measured against a standard.
bool limits_view_make(const struct proofs *proofs, struct limits_view *view);
// The view must outlive the table. Cannot fail.
struct columns limits_table(const struct limits_view *view);
// Puts what the table is, in words; and, note by note, what could not be measured and the lines without burst. `put` releases the words.
void put_limits_heading(struct text *out, const struct proofs *proofs);
typedef void put_note(struct text *out, struct text *words);
void put_limits_notes(struct text *out, const struct proofs *proofs, put_note *put);

// Puts a table of what was measured beside the standard's limits at the plan's grade, with the verdict of the other grade in the last
// column; then what could not be measured, and the lines without burst. Only where the plan names a standard that was measured. When memory is
// out, out->failed is set.
void view_limits(struct text *out, const struct proofs *proofs);

// Puts the counts, in words, without line breaks.
void put_limits_figures(struct text *out, const struct proofs *proofs);

// True if a limit that binds is missed at the plan's grade. Cannot fail.
bool limit_is_missed(const struct proofs *proofs, enum limit_item item);

// Puts what was measured of a limit that was judged at the plan's grade, and what is allowed: "4.19 us, allowed 4.4 to 5 us". Where it is missed by the
// clock's accuracy alone, also what it comes to with that; and as many places as tell what misses from the bound.
void put_limit_measured(struct text *out, const struct proofs *proofs, enum limit_item item);

// Puts a missed limit, in words, without line breaks: measured, allowed, where.
void put_limit_miss(struct text *out, const struct proofs *proofs, enum limit_item item);
// The same: which edge to move to keep it. False, with nothing put, if no whole number of cells does.
bool put_limit_move(struct text *out, const struct proofs *proofs, enum limit_item item);

// Sets the keys that limits has beside those of every proof, see view/proofs.h.
void json_put_limits(json_t **object, const struct proofs *proofs);

#endif
