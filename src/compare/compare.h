// What changed between two plans, in the builder's terms: by meaning, not by text.
#ifndef SCANLATCH_COMPARE_COMPARE_H
#define SCANLATCH_COMPARE_COMPARE_H

#include "layout/timeline.h"
#include "proof/proof.h"

enum change_section {
	CHANGE_LIMITS,     // limits that went from kept to missed or back: they follow from other changes
	CHANGE_CLOCK,
	CHANGE_STANDARD,
	CHANGE_SIGNALS,
	CHANGE_LINES,
	CHANGE_FRAME,
	CHANGE_MACHINE,
	CHANGE_CHIPS,      // parts and wiring
	CHANGE_TIMING,
	CHANGE_WORDS,      // names, notes, line types that the frame does not use: nothing at the bench changes
	CHANGE_SECTIONS
};

// The section as reports have it ("lines"). Cannot fail.
const char *change_section_name(enum change_section section);

struct change {
	enum change_section section;
	const char *kind;      // stable and kebab-case: "edge-moved", "region-added", "changed", …
	const char *const *lines; // [line_count]: names of the line types that it is of; none of other sections
	size_t line_count;
	const char *what;      // the edge, region, signal, chip or property
	const char *old, *now; // values in words; NULL: there was none, or is none
	const char *also;      // what goes with it, in words; NULL: nothing
	bool shifted;          // the two below mean something
	bool longer;           // they are of a length, otherwise of a place
	int64_t cells;         // later or longer; negative: earlier or shorter
	int64_t ticks;         // the same; with other clocks, so many cells by the new one
};

// What the machine does, before and after, whether it changed or not: the frame, colour, speed, limits.
struct fact {
	const char *what;
	const char *old, *now; // in words
	bool same;             // the two are equal
};

struct comparison {
	struct arena *arena;
	const struct timeline *old, *now;
	const struct fact *facts;
	size_t fact_count;
	const struct change *changes; // in the order of sections; within them in that of the plans
	size_t count;
	size_t edits;             // of them those that do not follow from others: all but CHANGE_LIMITS
	bool same_clock;          // a tick and a cell last as long
	bool same_timeline;       // the same signals, holds and ticks in every cell of the loop, at the same clock; where it begins, and how it is cut into
	                          // lines, is told in words
	bool same_meaning;        // no change but those of CHANGE_WORDS
	bool same_deeds;          // the same meaning, or a frame of no set start that only begins with another of its lines: images of either do for both
	const size_t *old_chip_of; // [now's chips]: the old plan's chip that a chip was, or SIZE_MAX
	const size_t *line_of;     // [old's line types]: the new plan's line type that an old one is, or SIZE_MAX
	const size_t *signal_of;   // [old's signals]: the same of signals
};

// Compares two plans that were laid out. NULL when memory is out; freed with comparison_destroy. The timelines must outlive it.
struct comparison *comparison_create(const struct timeline *old, const struct timeline *now);
void comparison_destroy(struct comparison *comparison);

// The old plan's signals in the new one's numbers; signals that are gone are left out. Cannot fail.
uint64_t comparison_map_signals(const struct comparison *comparison, uint64_t asserted);

// Puts what a change is of, and what became of it, in words: "edge between …" and "1 cell later (9 ticks, 0.629 us)". When memory is
// out, out->failed is set.
struct text;
void text_put_change_subject(struct text *out, const struct change *change);
void text_put_change_value(struct text *out, const struct comparison *comparison, const struct change *change);
// Both, as a sentence.
void text_put_change(struct text *out, const struct comparison *comparison, const struct change *change);

#endif
