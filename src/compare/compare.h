// What changed between two plans, in the builder's terms: by meaning, not by text.
#ifndef SCANLATCH_COMPARE_COMPARE_H
#define SCANLATCH_COMPARE_COMPARE_H

#include "layout/timeline.h"
#include "proof/proof.h"

enum change_section {
	CHANGE_VERDICTS,   // what the machine still does, or no longer: colour, speed
	CHANGE_LIMITS,     // limits that went from kept to missed or back
	CHANGE_CLOCK,
	CHANGE_STANDARD,
	CHANGE_SIGNALS,
	CHANGE_LINES,
	CHANGE_FRAME,
	CHANGE_MACHINE,
	CHANGE_CHIPS,      // parts and wiring
	CHANGE_TIMING,
	CHANGE_WORDS,      // names and notes: nothing at the bench changes
	CHANGE_SECTIONS
};

// The section as reports have it ("lines"). Cannot fail.
const char *change_section_name(enum change_section section);

struct change {
	enum change_section section;
	const char *kind;      // stable and kebab-case: "edge-moved", "region-added", "changed", …
	const char *lines;     // line types that it is of, quoted and joined by ", "; NULL if of none
	const char *what;      // the edge, region, signal, chip or property
	const char *old, *now; // values in words; NULL: there was none, or is none
	bool shifted;          // the two below mean something
	int64_t cells;         // later or longer; negative: earlier or shorter
	int64_t ticks;         // the same, by the new clock
};

struct comparison {
	struct arena *arena;
	const struct timeline *old, *now;
	struct change *changes;   // in the order of sections; within them in that of the plans
	size_t count;
	bool same_timeline;       // the same signals, holds and ticks in every cell, at the same clock
	bool same_meaning;        // no change but those of CHANGE_WORDS
};

// Compares two plans that were laid out. NULL when memory is out; freed with comparison_destroy. The timelines must outlive it.
struct comparison *comparison_create(const struct timeline *old, const struct timeline *now);
void comparison_destroy(struct comparison *comparison);

// Puts a change in words: "edge between …: 1 cell later (9 ticks, 0.629 us)". When memory is out, out->failed is set.
struct text;
void text_put_change(struct text *out, const struct comparison *comparison, const struct change *change);

#endif
