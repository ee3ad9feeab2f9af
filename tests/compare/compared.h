// Two plans from text that are compared, and their changes as words.
#ifndef SCANLATCH_TESTS_COMPARE_COMPARED_H
#define SCANLATCH_TESTS_COMPARE_COMPARED_H

#include "../layout/laid.h"

#include "compare/compare.h"

struct compared {
	struct laid old, now;
	struct comparison *comparison;
	struct text words;      // every change, a line each: "section kind: words"
};

static inline void put_words(struct compared *compared)
{
	for (size_t index = 0; index < compared->comparison->count; index++) {
		const struct change *change = &compared->comparison->changes[index];
		text_printf(&compared->words, "%s %s: ", change_section_name(change->section), change->kind);
		text_put_change(&compared->words, compared->comparison, change);
		text_put(&compared->words, "\n");
	}
	assert_false(compared->words.failed);
}

static inline struct compared compare_laid(struct laid old, struct laid now)
{
	struct compared compared = {.old = old, .now = now, .words = {0}};
	assert_laid(&compared.old);
	assert_laid(&compared.now);
	compared.comparison = comparison_create(compared.old.timeline, compared.now.timeline);
	assert_non_null(compared.comparison);
	put_words(&compared);
	return compared;
}

// Plans of laid.h: their clock's further keys, lines and frames.
static inline struct compared compare_clocks(const char *old_clock, const char *old_lines, const char *old_frame, const char *now_clock,
                                             const char *now_lines, const char *now_frame)
{
	return compare_laid(lay(old_clock, old_lines, old_frame), lay(now_clock, now_lines, now_frame));
}

static inline void forget(struct compared *compared)
{
	comparison_destroy(compared->comparison);
	text_release(&compared->words);
	release(&compared->old);
	release(&compared->now);
}

// What a comparison says, and whether timeline and meaning are the same.
static inline void assert_compared(struct compared compared, const char *words, bool same_timeline, bool same_meaning)
{
	assert_string_equal(text_string(&compared.words), words);
	assert_int_equal(compared.comparison->same_timeline, same_timeline);
	assert_int_equal(compared.comparison->same_meaning, same_meaning);
	forget(&compared);
}

#endif
