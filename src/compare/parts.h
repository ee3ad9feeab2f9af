// Inside compare/: what its parts share. Every function below that returns nothing notes lack of memory in comparing->failed.
#ifndef SCANLATCH_COMPARE_PARTS_H
#define SCANLATCH_COMPARE_PARTS_H

#include "base/text.h"
#include "compare/compare.h"

#define NONE SIZE_MAX

struct noted_change;

struct comparing {
	struct arena *arena;
	const struct timeline *old_timeline, *now_timeline;
	const struct plan *old, *now;
	struct noted_change *first, *last; // changes as they were added
	struct noted_change **buckets;     // of those with line types, by what they say
	size_t count;
	struct fact *facts;
	size_t fact_count;
	size_t *signal_of;     // [old->signal_count]: the new plan's signal that an old one is, or NONE
	size_t *line_of;       // [old->line_count]: the same of line types
	size_t *old_line_of;   // [now->line_count]
	size_t *field_of;      // [old fields]
	size_t *old_chip_of;   // [now->chip_count]
	bool *old_used, *now_used; // [line types]: the frame has lines of them
	bool same_clock;       // a tick and a cell last as long
	bool same_holds;       // every cell holds what it held
	bool rotated;          // both frames are one loop, begun at other cells or cut into other lines;
	bool same_loop;        // and it is cut into other lines
	uint32_t loop_cell;    // then: the old frame's cell at which the new one begins
	size_t work_left;      // steps that alignments may still take
	bool failed;
};

// Adds a change. One that differs from an earlier one only in its line types joins it; change.lines has one or none.
void add_change(struct comparing *comparing, struct change change);
// Drops the changes of the sections that `drops` picks.
void drop_sections(struct comparing *comparing, bool drops(enum change_section section));
// Moves the changes of the sections that `moves` picks into another.
void move_sections(struct comparing *comparing, bool moves(enum change_section section), enum change_section into);
// The changes in the order of sections, as an array in the arena; NULL when memory is out.
struct change *sorted_changes(struct comparing *comparing);

// Adds "changed", "added" or "removed" if two values differ as text; NULL or "" stands for a value that is not there. Takes and releases
// both texts.
void compare_texts(struct comparing *comparing, enum change_section section, const char *what, struct text *old, struct text *now);
// The same of strings that are kept by others.
void compare_words(struct comparing *comparing, enum change_section section, const char *what, const char *old, const char *now);

// A text as a string in the arena; releases it. "" when memory is out.
const char *keep_text(struct comparing *comparing, struct text *text);
// A formatted string in the arena; "" when memory is out.
__attribute__((format(printf, 2, 3)))
const char *keep_words(struct comparing *comparing, const char *format, ...);

// Two lists that are held against each other in order.
struct alignment {
	size_t old_count, now_count;
	size_t *now_of;        // [old_count]: what an old item is in the new list, or NONE
	size_t *old_of;        // [now_count]
};

// What it is worth to take two items for the same: 0 if they cannot be, at most `whole`, which is for items alike in everything.
typedef uint32_t pair_worth(const void *context, size_t old, size_t now);

// Aligns two lists so that the sum of what pairs are worth is largest. False if there is too much to compare, or memory is out
// (comparing->failed); then what is alike at both ends is aligned.
bool align_lists(struct comparing *comparing, pair_worth *worth, uint32_t whole, const void *context, struct alignment *alignment);
// Makes the arrays of an alignment; its counts are set. False when memory is out.
bool alignment_begin(struct comparing *comparing, struct alignment *alignment);

// The ticks by which a cell is longer. Cannot fail.
int64_t stretch_of(const struct plan *plan, uint64_t asserted);

// Whether the state of the frame's first cell is set, and not whichever suits. Cannot fail.
bool pins_first_cell(const struct plan *plan);

// Whether both frames are one and the same loop: the same signals, holds and ticks in cells that follow each other alike. Sets *first to the
// old frame's cell at which the new one begins. All signals must be the same. Linear time.
bool frames_are_rotated(struct comparing *comparing, uint32_t *first);

void match_signals(struct comparing *comparing);
void match_lines(struct comparing *comparing);
// Takes an old and a new line type for the same.
void pair_lines(struct comparing *comparing, size_t old, size_t now);
// Line types that took each other's names, in renamed.c; `shown_by`: for each old one that its name does not match with the same, a new one of its own that
// shows the same, or NONE.
void match_renamed(struct comparing *comparing, const size_t *shown_by);
// Line types that are left over and like enough to be the same, edited: in alike.c.
void match_alike(struct comparing *comparing);
void match_fields(struct comparing *comparing);
// Whether an old and a new line type show the same, cell by cell.
bool line_shows_same(const struct comparing *comparing, size_t old, size_t now);
// The old plan's signals in the new one's numbers; signals that are gone are left out.
uint64_t map_signals(const struct comparing *comparing, uint64_t asserted);

void compare_clock(struct comparing *comparing);
void compare_standard(struct comparing *comparing);
void compare_signals(struct comparing *comparing);
void compare_lines(struct comparing *comparing);
// What each region of a line type asserts, in the new plan's numbers; `maps`: the line type is the old plan's. In the arena; NULL when memory is out.
const uint64_t *map_regions(struct comparing *comparing, const struct line_type *line, bool maps);
// The regions of an old and a new line type that are the same one.
void compare_regions(struct comparing *comparing, size_t old_line, size_t now_line);
void compare_blocks(struct comparing *comparing);
void compare_machine(struct comparing *comparing);
void compare_chips(struct comparing *comparing);
void compare_timing(struct comparing *comparing);
void compare_verdicts(struct comparing *comparing);

// Of two regions that are the same one: whether what they hold in the fields of a pair is the same wherever the new plan has the region.
bool holds_agree(const struct comparing *comparing, const struct hold *old, const struct hold *now, size_t now_line, size_t now_region);

// What stands between regions that were aligned, in regions.c, lengths.c.
struct line_pair {
	struct comparing *comparing;
	const struct line_type *old_line, *now_line;
	const struct laid_line *old_laid, *now_laid;
	size_t old_index, now_index;
	const uint64_t *mapped;  // [old regions]: what they assert, in the new plan's numbers
	bool does_same;          // every cell does: what is told of it is words only
	struct alignment regions;
};

// Adds a change of the line type that a pair is.
void add_of_line(const struct line_pair *pair, struct change change);
// Regions that came or went, and lengths: in groups, so that one moved edge is one change.
void compare_lengths(const struct line_pair *pair);

// Puts the names of signals: "blank and sync"; "nothing" for none.
void put_asserted(struct text *out, const struct plan *plan, uint64_t mask);

#endif
