// Limits: what the pins show, against the standard that the plan names, at both grades.
#include <inttypes.h>

#include "base/arena.h"
#include "proof/trial.h"

// Which edge sets an item, and what happens to the item when it comes later.
struct setting {
	enum limit_move move;
	bool at_start;       // of what is measured, not at its end
	int sign;            // 1: the value grows
};

static const struct setting settings[ITEM_COUNT] = {
	[ITEM_LINE_RATE] = {MOVE_LENGTH, true, 1}, // of the period
	[ITEM_CYCLES_PER_LINE] = {MOVE_LENGTH, true, 1},
	[ITEM_FRONT_PORCH] = {MOVE_EDGE, true, -1},
	[ITEM_SYNC_WIDTH] = {MOVE_EDGE, false, 1},
	[ITEM_BREEZEWAY] = {MOVE_EDGE, false, 1},
	[ITEM_BURST_START] = {MOVE_EDGE, false, 1},
	[ITEM_BURST_START_CYCLES] = {MOVE_EDGE, false, 1},
	[ITEM_BURST_LENGTH] = {MOVE_EDGE, false, 1},
	[ITEM_BURST_LENGTH_CYCLES] = {MOVE_EDGE, false, 1},
	[ITEM_BURST_TO_PICTURE] = {MOVE_EDGE, false, 1},
	[ITEM_BACK_PORCH] = {MOVE_EDGE, false, 1},
	[ITEM_HORIZONTAL_BLANKING] = {MOVE_EDGE, false, 1},
	[ITEM_PICTURE_START] = {MOVE_EDGE, false, 1},
	[ITEM_PICTURE_WIDTH] = {MOVE_EDGE, false, 1},
	[ITEM_HORIZONTAL_CENTRE] = {MOVE_PICTURE, false, 1},
	[ITEM_EQUALISING_WIDTH] = {MOVE_EDGE, false, 1},
	[ITEM_BROAD_WIDTH] = {MOVE_EDGE, false, 1},
	[ITEM_SERRATION_WIDTH] = {MOVE_EDGE, true, -1},
};

// An item that whole cells shift, in a unit in which they do so evenly: a rate is turned into a period.
struct shift {
	const struct clock *clock;
	enum dimension dimension;
	struct interval values;    // measured, not widened
	struct limit limit;
	struct fraction cell;      // what a normal cell adds
};

static bool turn(struct fraction *value)
{
	return value->numerator == 0 || fraction_divide(fraction_whole(1), *value, value);
}

// A rate of 0 or less bounds no period.
static bool turn_rate(struct shift *shift)
{
	const struct interval rates = shift->values;
	const struct limit limit = shift->limit;
	shift->values = (struct interval){rates.high, rates.low};
	shift->limit.has_low = limit.has_high;
	shift->limit.low = limit.high;
	shift->limit.has_high = limit.has_low && limit.low.numerator > 0;
	shift->limit.high = limit.low;
	shift->dimension = DIMENSION_TIME;
	return turn(&shift->values.low) && turn(&shift->values.high) && turn(&shift->limit.nominal) && turn(&shift->limit.low) &&
	       turn(&shift->limit.high);
}

static bool make_shift(const struct clock *clock, enum limit_item item, struct interval values, const struct limit *limit,
                       struct shift *shift)
{
	*shift = (struct shift){clock, limit_item_facts(item)->dimension, values, *limit, FRACTION_ZERO};
	if (!fraction_divide(fraction_whole(clock->cell_ticks), clock->master_hz, &shift->cell))
		return false;
	if (shift->dimension == DIMENSION_CYCLES)
		return fraction_multiply(shift->cell, clock->subcarrier_hz, &shift->cell);
	return shift->dimension != DIMENSION_FREQUENCY || turn_rate(shift);
}

// Whether the limit is kept after a shift by so many cells; *moved is what would be measured. False if it does not fit, too.
static bool keeps_shifted(const struct shift *shift, int64_t cells, struct interval *moved)
{
	struct fraction by;
	if (!fraction_multiply(shift->cell, fraction_whole(cells), &by) || !fraction_add(shift->values.low, by, &moved->low) ||
	    !fraction_add(shift->values.high, by, &moved->high))
		return false;
	if (shift->clock->has_accuracy && !interval_widen(moved, shift->dimension, shift->clock->accuracy_ppm))
		return false;
	return limit_judge(&shift->limit, *moved).kept;
}

#define MOST_TRIES 1000 // one or two for any clock that a board has

// How many cells a miss asks at least, and how many are sure to be enough for it: with the accuracy a cell counts for more or less.
static bool bound_cells(const struct shift *shift, struct fraction miss, int64_t *least, int64_t *enough)
{
	struct interval cell = {shift->cell, shift->cell};
	struct fraction fewest, most;
	if (shift->clock->has_accuracy && !interval_widen(&cell, shift->dimension, shift->clock->accuracy_ppm))
		return false;
	if (!fraction_divide(miss, cell.high, &fewest) || !fraction_divide(miss, cell.low, &most))
		return false;
	*least = -fraction_floor(fewest);
	*enough = -fraction_floor(most);
	return true;
}

// The fewest cells whose shift keeps the limit; 0 if none does.
static int64_t fewest_cells(const struct shift *shift, struct interval *moved)
{
	struct interval measured = shift->values;
	struct fraction below;
	int64_t least, enough;
	if (shift->clock->has_accuracy && !interval_widen(&measured, shift->dimension, shift->clock->accuracy_ppm))
		return 0;
	const struct judgement judgement = limit_judge(&shift->limit, measured);
	if (!judgement.has_margin || !bound_cells(shift, judgement.margin, &least, &enough))
		return 0;
	const bool too_small = shift->limit.has_low && fraction_subtract(measured.low, shift->limit.low, &below) && below.numerator < 0;
	for (int64_t count = least; count <= enough && count - least < MOST_TRIES; count++)
		if (keeps_shifted(shift, too_small ? count : -count, moved))
			return too_small ? count : -count;
	return 0;
}

static uint32_t cells_of_region(const struct timeline *timeline, uint32_t cell)
{
	const struct cell_place place = timeline_place(timeline, cell);
	return timeline->types[timeline->lines[place.line].type].regions[place.region].cells;
}

// An edge may not move over a whole region: then it is another edge that is wrong.
static bool has_room(const struct timeline *timeline, uint32_t cell, int64_t cells)
{
	const uint32_t shrinks = cells > 0 ? cell : cell == 0 ? timeline->cell_count - 1 : cell - 1;
	return (cells < 0 ? -cells : cells) < cells_of_region(timeline, shrinks);
}

static void find_move(const struct trial *trial, enum limit_item item, const struct measured *measured, const struct limit *limit,
                      struct limit_verdict *verdict)
{
	const struct setting *setting = &settings[item];
	struct shift shift;
	struct interval moved;
	if (setting->move == MOVE_NONE || !make_shift(&trial->timeline->plan->clock, item, measured->values, limit, &shift))
		return;
	const int64_t cells = setting->sign * fewest_cells(&shift, &moved);
	if (cells == 0)
		return;
	// The line with the highest rate is the one with the lowest period.
	const bool of_low = (cells * setting->sign > 0) != (limit_item_facts(item)->dimension == DIMENSION_FREQUENCY);
	const struct measured_at *at = of_low ? &measured->low_at : &measured->high_at;
	const uint32_t cell = setting->at_start ? at->from_cell : at->to_cell;
	if (cell == UINT32_MAX || (setting->move == MOVE_EDGE && !has_room(trial->timeline, cell, cells)))
		return;
	verdict->move = setting->move;
	verdict->move_cells = cells;
	verdict->move_cell = cell;
	verdict->moved = moved;
}

// Which lines are without burst matters where the standard numbers them.
static void judge_pauses(const struct measurement *measurement, const struct limit *limit, struct judgement *judgement)
{
	if (limit->item == ITEM_LINES_WITHOUT_BURST && limit->grade == GRADE_STUDIO && measurement->numbered && !measurement->pauses_kept)
		judgement->kept = false;
}

static void judge_item(struct trial *trial, struct limits_result *limits, enum limit_item item)
{
	const struct plan *plan = trial->timeline->plan;
	const struct measured *measured = &limits->measurement->items[item];
	struct limit_row *row = &limits->rows[item];
	row->values = measured->values;
	bool fits = measured->known;
	if (fits && plan->clock.has_accuracy) {
		fits = interval_widen(&row->values, limit_item_facts(item)->dimension, plan->clock.accuracy_ppm);
		row->widened = fraction_compare(row->values.low, measured->values.low) != 0 ||
		               fraction_compare(row->values.high, measured->values.high) != 0;
	}
	for (unsigned grade = 0; grade < GRADE_COUNT; grade++) {
		struct limit_verdict *verdict = &row->grades[grade];
		const struct limit *limit = standard_limit(plan->standard, item, (enum limit_grade)grade);
		verdict->has_limit = limit != NULL;
		if (limit == NULL)
			continue;
		verdict->known = fits;
		verdict->judgement = limit_judge(limit, row->values);
		const bool binds = limit->has_low || limit->has_high;
		limits->unknown[grade] += binds && !verdict->known;
		if (!verdict->known || !binds)
			continue;
		judge_pauses(limits->measurement, limit, &verdict->judgement);
		limits->kept[grade] += verdict->judgement.kept;
		limits->missed[grade] += !verdict->judgement.kept;
		if (!verdict->judgement.kept)
			find_move(trial, item, measured, limit, verdict);
	}
}

static bool strays_fail(struct trial *trial, const struct measurement *measurement)
{
	struct counterexample found = {.present = true, .bank = trial->bank, .cell = measurement->stray_cell, .state = NO_STATE,
	                               .signal = SIZE_MAX};
	found.what = arena_format(trial->proofs->arena, "%" PRIu64 " sync pulse%s of no line and of no vertical interval (the second in "
	                          "its line, or one that is too narrow)", measurement->strays, measurement->strays == 1 ? " is" : "s are");
	return proof_fails(trial, PROOF_LIMITS, found);
}

static bool flaw_fails(struct trial *trial, const char *flaw)
{
	const char *reason = arena_format(trial->proofs->arena, "not judged: %s", flaw);
	if (reason != NULL)
		proof_not_judged(trial, PROOF_LIMITS, reason);
	return reason != NULL;
}

static bool limit_binds(const struct plan *plan, enum limit_item item)
{
	const struct limit *limit = standard_limit(plan->standard, item, plan->grade);
	return limit != NULL && (limit->has_low || limit->has_high);
}

// A monitor that never sees a field begin shows nothing that stands still.
static bool lacks_vertical_sync(const struct plan *plan, const struct measurement *measurement)
{
	return measurement->flaw == NULL && measurement->field_count == 0 &&
	       (!measurement->separate || plan->role_signal[ROLE_VERTICAL_SYNC] >= 0) &&
	       (limit_binds(plan, ITEM_FIELD_RATE) || limit_binds(plan, ITEM_FRAME_RATE));
}

static const struct measurement *measure_trial(const struct trial *trial)
{
	const struct timeline *timeline = trial->timeline;
	const struct plan *plan = timeline->plan;
	const bool at_pins = trial->lap.pins != NULL;
	const struct recording recording = {.plan = plan, .asserted = at_pins ? trial->lap.pins : timeline->asserted, .at_pins = at_pins,
	                                    .cells = timeline->cell_count};
	return measure_recording(trial->proofs->arena, &recording, plan->standard);
}

bool prove_limits(struct trial *trial)
{
	struct proof *proof = &trial->proofs->proof[PROOF_LIMITS];
	const struct plan *plan = trial->timeline->plan;
	if (plan->standard == NULL) {
		proof->verdict = VERDICT_ABSENT;
		return true;
	}
	if (!trial->lap.closed) {
		proof_not_judged(trial, PROOF_LIMITS, "not judged: the frame does not close");
		return true;
	}
	struct limits_result limits = {.measurement = measure_trial(trial)};
	const bool failed_before = proof->verdict == VERDICT_FAIL;
	if (limits.measurement == NULL)
		return false;
	for (unsigned item = 0; item < ITEM_COUNT; item++)
		judge_item(trial, &limits, (enum limit_item)item);
	if (limits.measurement->flaw != NULL && !flaw_fails(trial, limits.measurement->flaw))
		return false;
	if (limits.measurement->strays > 0 && !strays_fail(trial, limits.measurement))
		return false;
	limits.no_vertical_sync = lacks_vertical_sync(plan, limits.measurement);
	if (limits.missed[plan->grade] > 0 || limits.no_vertical_sync)
		proof->verdict = VERDICT_FAIL;
	if (trial->first || (proof->verdict == VERDICT_FAIL && !failed_before))
		trial->proofs->limits = limits;
	return true;
}
