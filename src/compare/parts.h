// Inside compare/: what its parts share. Every function below that returns nothing notes lack of memory in comparing->failed.
#ifndef SCANLATCH_COMPARE_PARTS_H
#define SCANLATCH_COMPARE_PARTS_H

#include "base/text.h"
#include "compare/compare.h"

#define NONE SIZE_MAX

struct comparing {
	struct arena *arena;
	const struct timeline *old_timeline, *now_timeline;
	const struct plan *old, *now;
	struct change *changes;
	size_t count, capacity;
	size_t *signal_of;     // [old->signal_count]: the new plan's signal that an old one is, or NONE
	size_t *line_of;       // [old->line_count]: the same of line types
	bool same_holds;       // every cell holds what it held
	bool failed;
};

// Adds a change. One that differs from an earlier one of the same section only in its line types joins it.
void add_change(struct comparing *comparing, struct change change);

// Adds "changed" if two values differ as text; NULL stands for a value that is not there. Takes and releases both texts.
void compare_texts(struct comparing *comparing, enum change_section section, const char *what, struct text *old, struct text *now);
// The same of strings that are kept by others.
void compare_words(struct comparing *comparing, enum change_section section, const char *what, const char *old, const char *now);

// A text as a string in the arena; releases it. NULL when memory is out.
const char *keep_text(struct comparing *comparing, struct text *text);

void match_signals(struct comparing *comparing);
void match_lines(struct comparing *comparing);
// The old plan's signals in the new one's numbers; signals that are gone are left out.
uint64_t map_signals(const struct comparing *comparing, uint64_t asserted);

void compare_clock(struct comparing *comparing);
void compare_standard(struct comparing *comparing);
void compare_signals(struct comparing *comparing);
void compare_lines(struct comparing *comparing);
void compare_blocks(struct comparing *comparing);
void compare_machine(struct comparing *comparing);
void compare_chips(struct comparing *comparing);
void compare_timing(struct comparing *comparing);
void compare_verdicts(struct comparing *comparing);

#endif
