// What changed between two plans or sets, for people and for programs.
#ifndef SCANLATCH_VIEW_DIFF_H
#define SCANLATCH_VIEW_DIFF_H

#include <jansson.h>

#include "compare/compare.h"

struct text;

enum chip_fate {
	CHIP_STAYS,        // its bytes are the same
	CHIP_BURN,         // same part and size, other bytes
	CHIP_NEW,
	CHIP_GONE,
	CHIP_OTHER_SIZE    // the part has another capacity now
};

struct chip_difference {
	const char *label;
	enum chip_fate fate;
	size_t bytes;          // of the new chip; of one that is gone, of the old
	size_t differing;      // bytes, of CHIP_BURN
	size_t first;          // the first of them
};

// A pair of plans, of sets those of one bank.
struct plan_difference {
	const char *banks;     // "bank 0", "banks 1 and 3"; NULL for plans alone
	struct comparison *comparison; // NULL where only one of the two has the bank
	const char *only;      // then: which, in words
	const char *old_musts, *now_musts;   // names of musts that fail, joined by ", "; "" if none; NULL: not proved
};

struct difference {
	const char *old_name, *now_name; // of the files
	const struct plan_difference *plans;
	size_t plan_count;
	bool has_chips;        // images were compared
	const struct chip_difference *chips;
	size_t chip_count;
	bool alone;            // the plans are one and the same: a plan and images were compared
};

// True if anything changed but words. Cannot fail.
bool difference_found(const struct difference *difference);

// For a terminal, at most 100 characters a line.
void view_difference(struct text *out, const struct difference *difference);

// For a review: a heading, a sentence, and tables.
void view_difference_markdown(struct text *out, const struct difference *difference);

// { "old", "new": names, "differs", "same_timeline", "same_bytes" (where images were compared),
//   "plans": [ { "banks" (of sets), "only" (in words, where one of the sets lacks the bank), "same_timeline",
//                "musts": { "old": [names of musts that fail], "new": […] },
//                "changes": [ { "section", "kind", "lines" (names, quoted and joined), "what", "old", "new", "cells", "ticks": TICKS,
//                             "words": the change in words } ] } ],
//   "chips": [ { "label", "fate": "stays", "burn", "new", "gone" or "other size", "bytes", "differing", "first" } ] }
// What is not there is left out. A new reference; NULL when memory is out.
json_t *view_difference_json(const struct difference *difference);

#endif
