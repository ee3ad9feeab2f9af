#include "view/check.h"

#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "base/excerpt.h"
#include "base/text.h"
#include "layout/timeline.h"
#include "proof/proof.h"
#include "view/chips.h"
#include "view/columns.h"
#include "view/divider.h"
#include "view/figures.h"
#include "view/limits.h"
#include "view/placement.h"
#include "view/proofs.h"

enum { COLUMN_REGION, COLUMN_CELL, COLUMN_CELLS, COLUMN_TICKS, COLUMN_START, COLUMN_LENGTH, COLUMN_ASKED, COLUMN_ROUNDED, COLUMN_ASSERTED };

static const struct column region_columns[] = {
	[COLUMN_REGION] = {"region", false},       [COLUMN_CELL] = {"cell", true},       [COLUMN_CELLS] = {"cells", true},
	[COLUMN_TICKS] = {"ticks", true},          [COLUMN_START] = {"start us", true},  [COLUMN_LENGTH] = {"us", true},
	[COLUMN_ASKED] = {"asked us", true},       [COLUMN_ROUNDED] = {"off by us", true}, [COLUMN_ASSERTED] = {"asserted", false},
};

// Puts microseconds with three places; "?" for a time that does not fit a fraction.
static void put_microseconds(struct text *out, const struct clock *clock, struct fraction ticks)
{
	struct fraction value;
	if (fraction_divide(ticks, clock->master_hz, &value) && fraction_multiply(value, fraction_whole(1000000), &value))
		text_put_decimal(out, value, 3);
	else
		text_put(out, "?");
}

// What the region is longer than asked; 0 for a fill, which takes what there is. False if it does not fit.
static bool rounding_of(const struct line_view *view, size_t row, struct fraction *ticks)
{
	const struct laid_region *laid = &view->laid->regions[row];
	*ticks = FRACTION_ZERO;
	return view->type->regions[row].length == LENGTH_FILL || fraction_subtract(fraction_whole(laid->ticks), laid->asked_ticks, ticks);
}

static void put_asserted(struct text *out, const struct line_view *view, size_t row)
{
	const struct plan *plan = view->timeline->plan;
	const struct laid_region *laid = &view->laid->regions[row];
	const uint64_t mask = view->type->regions[row].assert_mask;
	bool first = true;
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		if ((mask >> signal & 1) == 0)
			continue;
		text_printf(out, "%s%s", first ? "" : " ", plan->signals[signal].name);
		first = false;
	}
	if (laid->stretched > 0)
		text_printf(out, "%s(%" PRIu32 " stretched)", first ? "" : " ", laid->stretched);
}

static void put_region_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct line_view *view = context;
	const struct clock *clock = &view->timeline->plan->clock;
	const struct region *region = &view->type->regions[row];
	const struct laid_region *laid = &view->laid->regions[row];
	struct fraction rounding;
	switch (column) {
	case COLUMN_REGION:
		text_put(out, region->name);
		break;
	case COLUMN_CELL:
		text_printf(out, "%" PRIu32, laid->first_cell);
		break;
	case COLUMN_CELLS:
		text_printf(out, "%" PRIu32, laid->cells);
		break;
	case COLUMN_TICKS:
		text_printf(out, "%" PRId64, laid->ticks);
		break;
	case COLUMN_START:
		put_microseconds(out, clock, fraction_whole(laid->start_ticks));
		break;
	case COLUMN_LENGTH:
		put_microseconds(out, clock, fraction_whole(laid->ticks));
		break;
	case COLUMN_ASKED:
		if (region->length == LENGTH_FILL)
			text_put(out, "fill");
		else
			put_microseconds(out, clock, laid->asked_ticks);
		break;
	case COLUMN_ROUNDED:
		if (rounding_of(view, row, &rounding))
			put_microseconds(out, clock, rounding);
		break;
	default:
		put_asserted(out, view, row);
	}
}

uint32_t *count_uses(const struct timeline *timeline, struct arena *arena)
{
	uint32_t *uses = arena_array(arena, timeline->plan->line_count, sizeof *uses);
	for (uint32_t line = 0; uses != NULL && line < timeline->line_count; line++)
		uses[timeline->lines[line].type]++;
	return uses;
}

// The cycles of subcarrier in a line, where there is one and they fit a fraction.
static void put_cycles(struct text *out, const struct clock *clock, int64_t ticks)
{
	struct fraction cycles;
	if (!cycles_of_ticks(clock, ticks, &cycles))
		return;
	text_put(out, ", ");
	text_put_exact(out, cycles);
	text_put(out, " cycles");
}

struct line_view line_view_of(const struct timeline *timeline, size_t type)
{
	return (struct line_view){timeline, &timeline->plan->lines[type], &timeline->types[type]};
}

struct columns regions_table(const struct line_view *view)
{
	return (struct columns){region_columns, sizeof region_columns / sizeof *region_columns, view->type->region_count, put_region_cell, view};
}

void put_line_figures(struct text *out, const struct line_view *view, uint32_t uses)
{
	const struct clock *clock = &view->timeline->plan->clock;
	text_put_count(out, view->laid->cells, "cell", "cells");
	text_put(out, ", ");
	text_put_count(out, (uint64_t)view->laid->ticks, "tick", "ticks");
	text_put(out, ", ");
	put_microseconds(out, clock, fraction_whole(view->laid->ticks));
	text_put(out, " us");
	put_cycles(out, clock, view->laid->ticks);
	text_put(out, "; ");
	text_put_count(out, uses, "line", "lines");
	text_put(out, " of the frame");
}

static void put_line(struct text *out, const struct timeline *timeline, size_t type, uint32_t uses)
{
	const struct line_view view = line_view_of(timeline, type);
	const struct columns table = regions_table(&view);
	text_printf(out, "\nline \"%s\": ", view.type->name);
	put_line_figures(out, &view, uses);
	text_put(out, "\n");
	if (view.laid->auto_stretched > 0)
		text_printf(out, "stretch: auto chose %" PRIu32 " stretched, the fewest that meet the phase\n", view.laid->auto_stretched);
	view_columns(out, &table, TERMINAL_CHARACTERS);
}

void put_hertz(struct text *out, struct fraction hertz)
{
	struct fraction megahertz;
	text_put_fraction(out, hertz);
	text_put(out, " Hz");
	if (fraction_divide(hertz, fraction_whole(1000000), &megahertz)) {
		text_put(out, " (");
		text_put_rounded(out, megahertz, 6);
		text_put(out, " MHz)");
	}
}

static void put_head(struct text *out, const struct plan *plan)
{
	const struct clock *clock = &plan->clock;
	text_put(out, plan->name);
	if (plan->note[0] != '\0') {
		text_put(out, ": ");
		excerpt_put_printable(plan->note, strlen(plan->note), out);
	}
	text_put(out, "\nclock: ");
	put_hertz(out, clock->master_hz);
	if (clock->has_accuracy) {
		text_put(out, " within ");
		text_put_rounded(out, clock->accuracy_ppm, 6);
		text_put(out, " ppm");
	}
	text_put(out, "; a cell is ");
	text_put_count(out, (uint64_t)clock->cell_ticks, "tick", "ticks");
	if (clock->stretch_ticks > 0)
		text_printf(out, ", stretched %" PRId64, clock->cell_ticks + clock->stretch_ticks);
	text_put(out, "\n");
	if (clock->has_subcarrier) {
		text_put(out, "subcarrier: ");
		put_hertz(out, clock->subcarrier_hz);
		text_put(out, "\n");
	}
}

void put_frame_figures(struct text *out, const struct timeline *timeline)
{
	struct fraction seconds, rate;
	text_put_count(out, timeline->line_count, "line", "lines");
	text_put(out, ", ");
	text_put_count(out, timeline->cell_count, "cell", "cells");
	text_put(out, ", ");
	text_put_count(out, (uint64_t)timeline->tick_count, "tick", "ticks");
	if (seconds_of_ticks(&timeline->plan->clock, timeline->tick_count, &seconds) &&
	    fraction_divide(fraction_whole(1), seconds, &rate)) {
		text_put(out, ", ");
		text_put_time(out, seconds);
		text_put(out, ", ");
		text_put_rounded(out, rate, 6);
		text_put(out, " Hz");
	}
}

// Says which signals of the line stage could as well come from the frame stage. False when memory is out.
static bool put_suggestion(struct text *out, const struct timeline *timeline, struct arena *arena)
{
	const struct plan *plan = timeline->plan;
	const uint64_t *pins = timeline_pins(timeline, arena);
	const uint64_t suited = pins != NULL ? signals_for_frame(timeline, pins) : 0;
	struct text words = {0};
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (suited >> signal & 1)
			text_printf(&words, "%s%s", words.length > 0 ? ", " : "", plan->signals[signal].name);
	if (suited != 0) {
		text_printf(&words, ": never changes within a line; with stage: frame it would need no bit in the line stage's word");
		text_put_wrapped(out, text_string(&words), 0, 2);
		text_put(out, "\n");
	}
	out->failed = out->failed || words.failed;
	text_release(&words);
	return pins != NULL;
}

bool view_check(struct text *out, const struct timeline *timeline, bool *kept, bool *advice_kept)
{
	const struct plan *plan = timeline->plan;
	struct arena *arena = arena_create();
	const uint32_t *uses = arena != NULL ? count_uses(timeline, arena) : NULL;
	struct proofs *proofs = proofs_of_plan(timeline);
	bool good = uses != NULL && proofs != NULL;
	if (good) {
		put_head(out, plan);
		text_put(out, "\n");
		view_divider(out, &plan->clock);
		for (size_t type = 0; type < plan->line_count; type++)
			put_line(out, timeline, type, uses[type]);
		text_put(out, "\nframe: ");
		put_frame_figures(out, timeline);
		text_put(out, "\n");
		view_placement(out, timeline);
		good = put_suggestion(out, timeline, arena);
		text_put(out, "\n");
		view_chips(out, plan);
		text_put(out, "\n");
		if (plan->standard != NULL) {
			view_limits(out, proofs);
			text_put(out, "\n");
		}
		view_proof(out, proofs, PROOF_COLOUR, false);
		view_proof(out, proofs, PROOF_LIMITS, false);
		view_proof(out, proofs, PROOF_SPEED, false);
		view_counting(out, proofs);
		if (kept != NULL)
			*kept = !proofs_failed(proofs, false);
		if (advice_kept != NULL)
			*advice_kept = !proofs_failed(proofs, true);
	}
	proofs_destroy(proofs);
	arena_destroy(arena);
	return good;
}
