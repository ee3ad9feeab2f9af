#include "view/limits.h"

#include <inttypes.h>
#include <string.h>

#include "base/text.h"
#include "view/columns.h"
#include "view/figures.h"
#include "view/proofs_shared.h"
#include "view/standards.h"

static enum limit_grade other_grade(const struct proofs *proofs)
{
	return plan_of(proofs)->grade == GRADE_STUDIO ? GRADE_MONITOR : GRADE_STUDIO;
}

static const struct limit *limit_at(const struct proofs *proofs, enum limit_item item, enum limit_grade grade)
{
	return standard_limit(plan_of(proofs)->standard, item, grade);
}

// Values at 3 decimals, as times are everywhere; frequencies below 100 at 6, since the limits of field rates are as narrow as that.
static unsigned places_of(enum limit_item item, struct fraction scaled)
{
	const int64_t size = scaled.numerator / scaled.denominator;
	return limit_item_facts(item)->dimension == DIMENSION_FREQUENCY && size > -100 && size < 100 ? 6 : 3;
}

// More places than usual, where a missed value would otherwise look like its bound.
#define MOST_PLACES 9u     // that text_put_rounded has
#define EXACT MOST_PLACES  // more than these: the fraction itself

static void put_scaled(struct text *out, enum limit_item item, struct fraction scaled, unsigned more)
{
	const unsigned places = places_of(item, scaled) + more;
	if (more == EXACT)
		text_put_fraction(out, scaled);
	else
		text_put_rounded(out, scaled, places < MOST_PLACES ? places : MOST_PLACES);
}

static void put_value_at(struct text *out, enum limit_item item, struct fraction value, unsigned more)
{
	struct fraction scaled;
	if (limit_item_facts(item)->is_polarity)
		put_limit_value(out, item, value);
	else if (limit_value_in_unit(item, value, &scaled))
		put_scaled(out, item, scaled, more);
	else
		text_put(out, "?");
}

static void put_value(struct text *out, enum limit_item item, struct fraction value)
{
	put_value_at(out, item, value, 0);
}

static void put_interval_at(struct text *out, enum limit_item item, struct interval values, unsigned more)
{
	struct text low = {0}, high = {0};
	put_value_at(&low, item, values.low, more);
	put_value_at(&high, item, values.high, more);
	text_put(out, text_string(&low));
	if (strcmp(text_string(&low), text_string(&high)) != 0)
		text_printf(out, " to %s", text_string(&high));
	out->failed = out->failed || low.failed || high.failed;
	text_release(&low);
	text_release(&high);
}

static void put_interval(struct text *out, enum limit_item item, struct interval values)
{
	put_interval_at(out, item, values, 0);
}

// The unit of a number that was put as `number`: 1 line, but 2 lines.
static void put_unit(struct text *out, enum limit_item item, const char *number)
{
	const char *unit = limit_item_facts(item)->unit;
	const enum dimension dimension = limit_item_facts(item)->dimension;
	const bool counted = dimension == DIMENSION_LINES || dimension == DIMENSION_CYCLES || dimension == DIMENSION_PULSES;
	const size_t length = strlen(unit) - (counted && unit[0] != '\0' && strcmp(number, "1") == 0);
	if (length > 0)
		text_printf(out, " %.*s", (int)length, unit);
}

static void put_interval_unit_at(struct text *out, enum limit_item item, struct interval values, unsigned more)
{
	struct text numbers = {0};
	put_interval_at(&numbers, item, values, more);
	text_put(out, text_string(&numbers));
	put_unit(out, item, text_string(&numbers));
	out->failed = out->failed || numbers.failed;
	text_release(&numbers);
}

static void put_interval_unit(struct text *out, enum limit_item item, struct interval values)
{
	put_interval_unit_at(out, item, values, 0);
}

static void put_value_unit(struct text *out, enum limit_item item, struct fraction value)
{
	put_interval_unit(out, item, (struct interval){value, value});
}

// The table.

enum { COLUMN_ITEM, COLUMN_UNIT, COLUMN_MEASURED, COLUMN_NOMINAL, COLUMN_LOW, COLUMN_HIGH, COLUMN_MARGIN, COLUMN_VERDICT, COLUMN_OTHER };

_Static_assert(COLUMN_OTHER + 1 == LIMITS_COLUMNS, "the header has room for the columns");

static bool has_limit(const struct proofs *proofs, enum limit_item item)
{
	const struct limit_verdict *grades = proofs->limits.rows[item].grades;
	return grades[GRADE_STUDIO].has_limit || grades[GRADE_MONITOR].has_limit;
}

static void put_given(struct text *out, enum limit_item item, bool given, struct fraction value)
{
	if (given)
		put_value(out, item, value);
	else
		text_put(out, "-");
}

static void put_verdict(struct text *out, const struct limit_verdict *verdict)
{
	if (!verdict->has_limit)
		text_put(out, "-");
	else if (!verdict->known)
		text_put(out, "unknown");
	else if (!verdict->judgement.binds)
		text_put(out, "info");
	else
		text_put(out, verdict->judgement.kept ? "kept" : "MISSED");
}

static void put_limit_column(struct text *out, enum limit_item item, const struct limit *limit, size_t column)
{
	if (limit == NULL)
		text_put(out, "-");
	else if (column == COLUMN_NOMINAL)
		put_given(out, item, limit->has_nominal, limit->nominal);
	else if (column == COLUMN_LOW)
		put_given(out, item, limit->has_low, limit->low);
	else
		put_given(out, item, limit->has_high, limit->high);
}

static void put_table_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct limits_view *view = context;
	const struct proofs *proofs = view->proofs;
	const enum limit_item item = view->items[row];
	const struct limit_verdict *verdicts = proofs->limits.rows[item].grades;
	const struct limit_verdict *verdict = &verdicts[plan_of(proofs)->grade];
	switch (column) {
	case COLUMN_ITEM: text_put(out, limit_item_facts(item)->name); break;
	case COLUMN_UNIT: text_put(out, limit_item_facts(item)->unit); break;
	case COLUMN_MEASURED: put_interval(out, item, proofs->limits.measurement->items[item].values); break;
	case COLUMN_MARGIN:
		if (verdict->known && verdict->judgement.has_margin && !limit_item_facts(item)->is_polarity)
			put_value(out, item, verdict->judgement.margin);
		else
			text_put(out, "-");
		break;
	case COLUMN_VERDICT: put_verdict(out, verdict); break;
	case COLUMN_OTHER: put_verdict(out, &verdicts[other_grade(proofs)]); break;
	default: put_limit_column(out, item, limit_at(proofs, item, plan_of(proofs)->grade), column); break;
	}
}

static void put_standard_name(struct text *out, const struct proofs *proofs)
{
	const struct standard *standard = plan_of(proofs)->standard;
	text_put(out, standard->name);
	if (standard->own_limits > 0 && strcmp(standard->name, "own") != 0) {
		text_put(out, " with ");
		text_put_count(out, standard->own_limits, "limit of the plan's own", "limits of the plan's own");
	}
}

// Puts the names of all items that were not measured for one reason, from the first that has it.
static void put_unmeasured(struct text *out, const struct proofs *proofs, size_t first, put_note *put)
{
	const struct measured *items = proofs->limits.measurement->items;
	struct text words = {0};
	text_printf(&words, "not measured, as %s:", items[first].why);
	for (size_t item = first; item < ITEM_COUNT; item++)
		if (has_limit(proofs, (enum limit_item)item) && !items[item].known && strcmp(items[item].why, items[first].why) == 0)
			text_printf(&words, "%s %s", item == first ? "" : ",", limit_item_facts((enum limit_item)item)->name);
	put(out, &words);
}

static void put_all_unmeasured(struct text *out, const struct proofs *proofs, put_note *put)
{
	const struct measured *items = proofs->limits.measurement->items;
	for (size_t item = 0; item < ITEM_COUNT; item++) {
		bool told = items[item].known || !has_limit(proofs, (enum limit_item)item);
		for (size_t before = 0; before < item && !told; before++)
			told = has_limit(proofs, (enum limit_item)before) && !items[before].known && strcmp(items[before].why, items[item].why) == 0;
		if (!told)
			put_unmeasured(out, proofs, item, put);
	}
}

#define MOST_RUNS 8u // of lines without burst, in text; JSON has them all

static void put_burstless(struct text *out, const struct measurement *measurement, put_note *put)
{
	struct text words = {0};
	if (!measurement->items[ITEM_LINES_WITHOUT_BURST].known || !measurement->numbered)
		return;
	text_put(&words, "lines without burst, by the standard's numbers:");
	for (uint32_t run = 0; run < measurement->burstless_count && run < MOST_RUNS; run++) {
		const struct burstless *lines = &measurement->burstless[run];
		text_printf(&words, "%s %" PRId64, run > 0 ? "," : "", lines->first_line);
		if (lines->last_line != lines->first_line)
			text_printf(&words, " to %" PRId64, lines->last_line);
	}
	if (measurement->burstless_count > MOST_RUNS)
		text_printf(&words, " and %" PRIu32 " more runs", measurement->burstless_count - MOST_RUNS);
	if (measurement->burstless_count == 0)
		text_put(&words, " none");
	text_put(&words, measurement->pauses_kept ? ", as the standard has it" : "; the standard has others");
	put(out, &words);
}

bool limits_view_make(const struct proofs *proofs, struct limits_view *view)
{
	if (proofs->limits.measurement == NULL || proofs->limits.measurement->flaw != NULL)
		return false;
	const enum limit_grade grade = plan_of(proofs)->grade;
	const struct column columns[LIMITS_COLUMNS] = {
		[COLUMN_ITEM] = {"item", false},     [COLUMN_UNIT] = {"unit", false}, [COLUMN_MEASURED] = {"measured", true},
		[COLUMN_NOMINAL] = {"nominal", true}, [COLUMN_LOW] = {"low", true},    [COLUMN_HIGH] = {"high", true},
		[COLUMN_MARGIN] = {"margin", true},  [COLUMN_VERDICT] = {limit_grade_name(grade), false},
		[COLUMN_OTHER] = {limit_grade_name(other_grade(proofs)), false},
	};
	*view = (struct limits_view){.proofs = proofs};
	memcpy(view->columns, columns, sizeof columns);
	for (size_t item = 0; item < ITEM_COUNT; item++)
		if (has_limit(proofs, (enum limit_item)item) && proofs->limits.measurement->items[item].known)
			view->items[view->count++] = (enum limit_item)item;
	return true;
}

struct columns limits_table(const struct limits_view *view)
{
	return (struct columns){view->columns, LIMITS_COLUMNS, view->count, put_table_cell, view};
}

void put_limits_heading(struct text *out, const struct proofs *proofs)
{
	text_put(out, "limits of ");
	put_standard_name(out, proofs);
	text_printf(out, ", grade %s%s", limit_grade_name(plan_of(proofs)->grade),
	            plan_of(proofs)->clock.has_accuracy ? "; margins with the clock's accuracy" : "");
}

static void put_wrapped_note(struct text *out, struct text *words)
{
	text_put_wrapped(out, text_string(words), 0, 2);
	text_put(out, "\n");
	out->failed = out->failed || words->failed;
	text_release(words);
}

// How far the picture's middle is from the standard's, at its farther end. False if it is not known.
static bool find_offset(const struct proofs *proofs, enum limit_item item, struct fraction *offset)
{
	const struct measured *measured = &proofs->limits.measurement->items[item];
	const struct limit *limit = limit_at(proofs, item, plan_of(proofs)->grade);
	struct fraction low, high, both;
	if (limit == NULL || !limit->has_nominal || !measured->known || !fraction_subtract(measured->values.low, limit->nominal, &low) ||
	    !fraction_subtract(measured->values.high, limit->nominal, &high) || !fraction_add(low, high, &both))
		return false;
	*offset = both.numerator < 0 ? low : high;
	return true;
}

static void put_offset(struct text *words, enum limit_item item, struct fraction offset, const char *less, const char *more)
{
	const bool is_less = offset.numerator < 0;
	if (offset.numerator == 0) {
		text_printf(words, "neither %s nor %s", less, more);
		return;
	}
	if (is_less)
		offset.numerator = -offset.numerator;
	put_value_unit(words, item, offset);
	text_printf(words, " %s", is_less ? less : more);
}

static void put_centring(struct text *out, const struct proofs *proofs, put_note *put)
{
	struct fraction across, down;
	struct text words = {0};
	if (!find_offset(proofs, ITEM_HORIZONTAL_CENTRE, &across) || !find_offset(proofs, ITEM_VERTICAL_CENTRE, &down))
		return;
	if (across.numerator == 0 && down.numerator == 0) {
		text_put(&words, "the picture's middle is where the standard has it");
	} else {
		text_put(&words, "the picture's middle, from the standard's: ");
		put_offset(&words, ITEM_HORIZONTAL_CENTRE, across, "to the left", "to the right");
		text_put(&words, ", ");
		put_offset(&words, ITEM_VERTICAL_CENTRE, down, "up", "down");
	}
	put(out, &words);
}

void put_limits_notes(struct text *out, const struct proofs *proofs, put_note *put)
{
	put_centring(out, proofs, put);
	put_all_unmeasured(out, proofs, put);
	put_burstless(out, proofs->limits.measurement, put);
}

void view_limits(struct text *out, const struct proofs *proofs)
{
	struct limits_view view;
	if (!limits_view_make(proofs, &view))
		return;
	const struct columns table = limits_table(&view);
	put_limits_heading(out, proofs);
	text_put(out, "\n");
	view_columns(out, &table, TERMINAL_CHARACTERS);
	put_limits_notes(out, proofs, put_wrapped_note);
}

// In words.

static void put_grade_counts(struct text *out, const struct limits_result *limits, enum limit_grade grade)
{
	const unsigned judged = limits->kept[grade] + limits->missed[grade];
	if (judged == 0)
		text_printf(out, "no limit was judged at %s grade", limit_grade_name(grade));
	else if (limits->missed[grade] == 0)
		text_printf(out, "all %u limits kept at %s grade", judged, limit_grade_name(grade));
	else
		text_printf(out, "%u of %u limits kept at %s grade", limits->kept[grade], judged, limit_grade_name(grade));
}

void put_limits_figures(struct text *out, const struct proofs *proofs)
{
	const struct limits_result *limits = &proofs->limits;
	const enum limit_grade grade = plan_of(proofs)->grade;
	if (plan_of(proofs)->standard == NULL) {
		text_put(out, "the plan names no standard");
		return;
	}
	put_standard_name(out, proofs);
	text_put(out, ": ");
	put_grade_counts(out, limits, grade);
	text_put(out, "; ");
	put_grade_counts(out, limits, other_grade(proofs));
	if (limits->unknown[grade] > 0)
		text_printf(out, "; %u could not be measured", limits->unknown[grade]);
}

bool limit_is_missed(const struct proofs *proofs, enum limit_item item)
{
	if (plan_of(proofs)->standard == NULL)
		return false;
	const struct limit_verdict *verdict = &proofs->limits.rows[item].grades[plan_of(proofs)->grade];
	return verdict->known && verdict->judgement.binds && !verdict->judgement.kept;
}

static void put_allowed(struct text *out, const struct limit *limit, unsigned more)
{
	const bool range = limit->has_low && limit->has_high && fraction_compare(limit->low, limit->high) != 0;
	const struct fraction last = limit->has_high ? limit->high : limit->low;
	if (!limit->has_low || !limit->has_high)
		text_put(out, limit->has_low ? "at least " : "at most ");
	if (range) {
		put_value_at(out, limit->item, limit->low, more);
		text_put(out, " to ");
	}
	put_interval_unit_at(out, limit->item, (struct interval){last, last}, more);
}

// Whether what was measured is too low, rather than too high; of both, whichever is worse.
static bool is_too_low(const struct proofs *proofs, const struct limit *limit)
{
	const struct limit_row *row = &proofs->limits.rows[limit->item];
	struct fraction above;
	return limit->has_low && fraction_subtract(row->values.low, limit->low, &above) && above.numerator < 0 &&
	       fraction_compare(above, row->grades[limit->grade].judgement.margin) == 0;
}

// Where an exact clock would keep the limit: what misses it is the accuracy.
static bool accuracy_misses(const struct proofs *proofs, const struct limit *limit)
{
	const struct limit_row *row = &proofs->limits.rows[limit->item];
	return row->widened && !row->grades[limit->grade].judgement.kept &&
	       limit_judge(limit, proofs->limits.measurement->items[limit->item].values).kept;
}

static bool looks_same(enum limit_item item, struct fraction left, struct fraction right, unsigned more)
{
	struct text first = {0}, second = {0};
	put_value_at(&first, item, left, more);
	put_value_at(&second, item, right, more);
	const bool same = !first.failed && !second.failed && strcmp(text_string(&first), text_string(&second)) == 0;
	text_release(&first);
	text_release(&second);
	return same;
}

// How many places more than usual a value outside its limit needs, so as not to look like the bound: at most EXACT.
static unsigned more_places(const struct limit *limit, struct interval values)
{
	const bool low = limit->has_low && fraction_compare(values.low, limit->low) < 0;
	const bool high = limit->has_high && fraction_compare(values.high, limit->high) > 0;
	unsigned more = 0;
	while (more < EXACT && ((low && looks_same(limit->item, values.low, limit->low, more)) ||
	                        (high && looks_same(limit->item, values.high, limit->high, more))))
		more++;
	return more;
}

// What was measured, with as many places as tell it from what is allowed. `widened`: also with the accuracy, if it is that which misses.
// Sets *more to the places that what is allowed needs.
static void put_told_apart(struct text *out, const struct proofs *proofs, const struct limit *limit, bool widened, unsigned *more)
{
	const struct limit_row *row = &proofs->limits.rows[limit->item];
	const struct interval measured = proofs->limits.measurement->items[limit->item].values;
	const bool accuracy = accuracy_misses(proofs, limit);
	*more = more_places(limit, widened && accuracy ? row->values : measured);
	put_interval_unit_at(out, limit->item, measured, *more);
	if (accuracy)
		text_put(out, " by an exact clock");
	if (!accuracy || !widened)
		return;
	text_put(out, ", ");
	put_interval_at(out, limit->item, row->values, *more);
	text_put(out, " at ");
	text_put_fraction(out, plan_of(proofs)->clock.accuracy_ppm);
	text_put(out, " ppm");
}

static void put_miss_by(struct text *out, const struct proofs *proofs, const struct limit *limit)
{
	struct fraction off = proofs->limits.rows[limit->item].grades[limit->grade].judgement.margin;
	if (off.numerator >= 0 && limit->item == ITEM_LINES_WITHOUT_BURST)
		text_put(out, ", but they are not those that the standard has");
	if (off.numerator >= 0 || limit_item_facts(limit->item)->is_polarity)
		return;
	off.numerator = -off.numerator;
	text_put(out, ": ");
	put_value_unit(out, limit->item, off);
	text_put(out, is_too_low(proofs, limit) ? " too little" : " too much");
}

void put_limit_measured(struct text *out, const struct proofs *proofs, enum limit_item item)
{
	const struct limit *limit = limit_at(proofs, item, plan_of(proofs)->grade);
	unsigned more;
	put_told_apart(out, proofs, limit, true, &more);
	text_put(out, ", allowed ");
	put_allowed(out, limit, more);
}

void put_limit_miss(struct text *out, const struct proofs *proofs, enum limit_item item)
{
	const struct limit *limit = limit_at(proofs, item, plan_of(proofs)->grade);
	const struct measured *measured = &proofs->limits.measurement->items[item];
	const uint32_t cell = is_too_low(proofs, limit) ? measured->low_at.from_cell : measured->high_at.from_cell;
	unsigned more;
	text_printf(out, "%s is ", limit_item_facts(item)->name);
	put_told_apart(out, proofs, limit, false, &more);
	text_put(out, ", allowed ");
	put_allowed(out, limit, more);
	put_miss_by(out, proofs, limit);
	if (cell == UINT32_MAX || item == ITEM_PIXEL_CLOCK || item == ITEM_SUBCARRIER)
		return;
	text_put(out, "; at ");
	put_place(out, proofs->timeline, cell);
}

static void put_direction(struct text *out, int64_t cells, const char *less, const char *more)
{
	text_put(out, " ");
	text_put_count(out, (uint64_t)(cells < 0 ? -cells : cells), "cell", "cells");
	text_printf(out, " %s", cells < 0 ? less : more);
}

// Whether it is not the length of all lines that misses, but one line that is unlike the others.
static bool lines_differ(const struct proofs *proofs, enum limit_item item)
{
	const struct interval *values = &proofs->limits.measurement->items[item].values;
	return (item == ITEM_LINE_RATE || item == ITEM_CYCLES_PER_LINE) && fraction_compare(values->low, values->high) != 0;
}

bool put_limit_move(struct text *out, const struct proofs *proofs, enum limit_item item)
{
	const struct limit_verdict *verdict = &proofs->limits.rows[item].grades[plan_of(proofs)->grade];
	const struct timeline *timeline = proofs->timeline;
	const uint32_t cell = verdict->move_cell, before = cell == 0 ? timeline->cell_count - 1 : cell - 1;
	if (lines_differ(proofs, item)) {
		text_put(out, "lines differ: let all line types last as long, and sync begin at the same place in each");
		return true;
	}
	switch (verdict->move) {
	case MOVE_NONE:
		return false;
	case MOVE_EDGE:
		text_printf(out, "move the edge between \"%s\" and \"%s\"", timeline_region_name(timeline, before), timeline_region_name(timeline, cell));
		if (timeline_place(timeline, cell).cell == 0)
			text_put(out, ", where lines begin,");
		put_direction(out, verdict->move_cells, "earlier", "later");
		break;
	case MOVE_PICTURE:
		text_put(out, "move the picture");
		put_direction(out, verdict->move_cells, "earlier", "later");
		break;
	case MOVE_LENGTH:
		text_put(out, "make the lines");
		put_direction(out, verdict->move_cells, "shorter", "longer");
		break;
	}
	if (item == ITEM_LINE_RATE)
		return true;
	text_put(out, ": then ");
	put_interval_unit(out, item, verdict->moved);
	return true;
}
