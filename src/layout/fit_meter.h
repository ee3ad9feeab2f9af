// Inside fit: judging counts of a unit by a standard's limits, each once.
#ifndef SCANLATCH_LAYOUT_FIT_METER_H
#define SCANLATCH_LAYOUT_FIT_METER_H

#include "layout/fit.h"

// How a value of an item fares.
struct fit_mark {
	bool judged;
	bool kept;                 // the limit binds, and is kept
	bool has_share;            // and has a share
	struct fraction share;
};

// The marks of an item whose values are whole multiples of a unit.
struct fit_gauge {
	const struct limit *limit; // NULL if there is none that binds
	struct fraction unit;
	struct fit_mark *marks;    // [most + 1]
	int64_t most;
};

struct fit_meter {
	struct arena *arena;
	const struct standard *standard;
	enum limit_grade grade;
	struct fit_gauge gauges[ITEM_COUNT];
	bool failed;               // memory was out
	bool unfit;                // a number did not fit: its limit was not judged
};

void fit_meter_begin(struct fit_meter *meter, struct arena *arena, const struct standard *standard, enum limit_grade grade);

// Opens the gauge of an item for 0 … most units; without a limit that binds nothing happens. Sets failed when memory is out.
void fit_meter_open(struct fit_meter *meter, enum limit_item item, struct fraction unit, int64_t most);

// The mark of a count of an opened gauge, 0 … most. NULL if no limit binds or the meter failed or is unfit.
const struct fit_mark *fit_meter_mark(struct fit_meter *meter, enum limit_item item, int64_t count);

// The mark of a value of any item, not kept for the next time. Not judged if no limit binds.
struct fit_mark fit_meter_judge(struct fit_meter *meter, enum limit_item item, struct fraction value);

#define FIT_STANDING_SHARES 24

// How a layout, or a part of one, stands: limits kept, and the shares of their margins in rising order.
struct fit_standing {
	unsigned kept;
	unsigned count;
	struct fraction shares[FIT_STANDING_SHARES];
};

// Adds a mark; one that is NULL or not kept changes nothing. Cannot fail.
void fit_standing_add(struct fit_standing *standing, const struct fit_mark *mark);

// Adds all of another part. Cannot fail.
void fit_standing_join(struct fit_standing *standing, const struct fit_standing *other);

// The smallest share, 1 if there is none. Cannot fail.
struct fraction fit_standing_share(const struct fit_standing *standing);

// -1, 0, 1: left is worse than right, equal, better. By kept, then by the shares up to `depth` from the smallest on; those that one has
// not are 1. Cannot fail.
int fit_standing_compare(const struct fit_standing *left, const struct fit_standing *right, unsigned depth);

#endif
