// Inside fit: what of a crystal can be chosen, and why nothing can.
#ifndef SCANLATCH_LAYOUT_FIT_CHOICES_H
#define SCANLATCH_LAYOUT_FIT_CHOICES_H

#include "layout/fit_ranks.h"

// What all lines of a length have in common.
struct fit_length {
	bool known;
	struct fit_framing framing;
	struct fit_standing standing; // line rate, cycles, subcarrier and the rates of the frame
	unsigned counts;              // limits kept of counts and polarities
};

struct fit_crystal {
	struct arena *arena;
	const struct fit_space *space;
	struct fit_frames *frames;
	const struct fit_best *best;
	size_t index;
	struct fraction master_hz;
	int64_t cycle_ticks;          // of the subcarrier; 0 without
	int64_t least_ticks, most_ticks; // of a line that meets the limit of its rate
	struct fit_meter meter;
	struct fit_length *lengths;   // [most_ticks - least_ticks + 1]
	struct fit_rank *choices;     // those that may come among the best
	size_t choice_count, choice_room;
	bool too_many;
	uint64_t met;                 // choices that meet all conditions
	bool noted;                   // without any: there is an obstacle
	struct fit_obstacle obstacle;
};

// Opens a crystal of which arena, space, frames, best, index and master_hz are set, all else zero: its subcarrier, the lengths of
// its lines and its gauges. *good: false if that failed for a reason that is noted. The arena must live as long as it.
enum fit_status fit_crystal_open(struct fit_crystal *crystal, bool *good);

// Finds the choices of a crystal that is open. FIT_OK even if there is none: then `noted`.
enum fit_status fit_choices_find(struct fit_crystal *crystal);

// Numbers of the crystal did not fit: takes back all that was found. Cannot fail.
void fit_crystal_give_up(struct fit_crystal *crystal);

// Did they not? Cannot fail.
bool fit_crystal_is_unfit(const struct fit_crystal *crystal);

// What a choice has without its edges. Cannot fail.
struct fit_standing fit_choice_base(struct fit_crystal *crystal, const struct fit_line *line);

// The limits kept of counts and polarities for lines of a choice. Cannot fail.
unsigned fit_choice_counts(struct fit_crystal *crystal, const struct fit_line *line);

#endif
