// What changed between two plans or sets, for people and for programs.
#ifndef SCANLATCH_VIEW_DIFF_H
#define SCANLATCH_VIEW_DIFF_H

#include <jansson.h>

#include "compare/compare.h"

struct seen;
struct text;

enum chip_fate {
	CHIP_STAYS,        // its bytes are the same
	CHIP_BURN,         // same part and size, other bytes
	CHIP_OTHER_BYTES,  // the same, but all chips of either side do what the other's do
	CHIP_NEW,
	CHIP_GONE,
	CHIP_OTHER_PART    // in its socket
};

struct chip_difference {
	const char *label;
	const char *old_label; // NULL if it is the same
	enum chip_fate fate;
	size_t bytes;          // of the new chip; of one that is gone, of the old
	size_t differing;      // bytes, of CHIP_BURN and CHIP_OTHER_BYTES
	size_t first;          // the first of them
};

// A pair of plans, of sets those of some banks.
struct plan_difference {
	const uint32_t *banks;         // [bank_count] that show the pair; none for plans alone
	size_t bank_count;
	const char *old_plan, *now_plan; // then: the names of the plans that they show; NULL where the set has no such banks
	struct comparison *comparison; // NULL where only one of the two has the banks
	const char *only;              // then: which, in words
	const char *old_musts, *now_musts;   // names of proofs that fail, of musts and of advice, joined by ", "; "" if none
	const char *old_words, *now_words;   // of the musts: "FAIL: colour", or that all hold
	const char *old_advice, *now_advice;
	const struct proofs *images;   // where a plan is compared with images that were read: their proofs; otherwise NULL
	const char *images_words;
	const char *images_musts;      // then: of old_musts and now_musts, those of the images
	struct seen *seen;             // then, where a must fails: what they do, which the comparison has for their side; NULL if it
	const char *unseen;            // cannot be read out of them: why, in words
};

struct difference {
	const char *old_name, *now_name; // of the files
	const struct plan_difference *plans;
	size_t plan_count;
	const struct chip_difference *chips;
	size_t chip_count;
	const struct change *set_changes; // of two sets: name, note, banks that came or went; words, for what banks show is compared
	size_t set_change_count;
	bool alone;            // the plans are one and the same: a plan and images were compared
};

// True if the machine that is meant is another one: anything changed but words; of a plan and images, if a must fails in the images.
// Cannot fail.
bool difference_found(const struct difference *difference);

// For a terminal, at most 100 characters a line.
void view_difference(struct text *out, const struct difference *difference);

// For a review: a heading, and tables.
void view_difference_markdown(struct text *out, const struct difference *difference);

// A picture: what matters in words, and line types that differ at the pins, the old line over the new one; at most eight, and it says so if there are more.
// See pictures.h. In it, for each: g.plot[data-old, data-new: the line types; data-old-line, data-new-line: of the frame; data-old-ticks,
// data-new-ticks, data-left, data-old-width, data-new-width]; in it g.trace[data-trace: signal], in it g.side[data-side: "old", "new", "as
// before", "old only" or "new only"] with the runs of view_line_svg, and path.moved[data-edge: "begins" or "ends" (to be asserted), data-old-cell,
// data-old-tick: where it was, data-cell, data-tick: where it is]; one of either where the edge is gone or new.
// False when memory is out.
struct picture;
bool view_difference_svg(struct text *out, const struct picture *picture, const struct difference *difference);

// { "old", "new": names, "differs": see difference_found, "same_timeline", "same_bytes": of all images,
//   "plans": [ { "banks": [numbers] (of sets), "only": "old" or "new" where only that set has the banks; then no further keys
//                "same_timeline", "musts", "advice": { "old": [names of proofs that fail], "new": […] },
//                "changes_unknown": why what images do cannot be read out of them, so that their changes are not listed,
//                "failures": { NAME: the proof's result, as view_proofs_json has it } of the musts that fail in images,
//                "facts": [ { "what": "frame", "colour", "speed of the chips" or "limits", "old", "new": in words, "same" } ],
//                "changes": [ { "section", "kind", "lines": [names of the line types that it is of; only in section "lines"], "what", "old",
//                               "new", "also": what goes with it, "cells": later or longer, "ticks": TICKS, exact time shift (_s, _us);
//                               "words": all of it in a sentence } ] } ],
//   "set": [ changes as above, of the set alone; only of two sets ],
//   "chips": [ { "label", "old_label" (where it had another), "fate": "stays", "burn", "other bytes", "new", "gone" or "other part", "bytes",
//                "differing", "first" } ] }
// What is not there is left out. A new reference; NULL when memory is out.
json_t *view_difference_json(const struct difference *difference);

// Inside view: what the forms share.

// "a.yaml to b.yaml: another timeline, 2 changes; …".
void put_difference_headline(struct text *out, const struct difference *difference);
// Each as a fact: see struct fact. Of a plan and images, `old` is NULL.
struct fact musts_fact(const struct plan_difference *plan);
// Of images in which a must fails, if no change is listed: why; otherwise its `what` is NULL.
struct fact unlisted_fact(const struct plan_difference *plan);
struct fact advice_fact(const struct plan_difference *plan);
// "525 lines, as before".
void text_put_fact_value(struct text *out, const struct fact *fact);
// "only the old set has it": of a plan without a comparison.
void put_only(struct text *out, const struct plan_difference *plan);
// "burn it again, …". What follows on all chips, in words; NULL if nothing does.
void put_chip_fate(struct text *out, const struct chip_difference *chip);
const char *chips_advice(const struct difference *difference);
// "bank 0 (harbour)", "banks 0, 2 and 3 (harbour, was pier)".
void put_bank_numbers(struct text *out, const struct plan_difference *plan);
// Why images do not do what the plan says: the musts that fail in them, each as view_proof puts it. Nothing of other pairs.
void put_failures(struct text *out, const struct plan_difference *plan);
// Whether facts and verdicts are of two machines: of images, if what they do was read out of them.
bool tells_facts(const struct plan_difference *plan);
bool same_timeline(const struct plan_difference *plan);
bool same_timelines(const struct difference *difference);
bool same_images(const struct difference *difference);

#endif
