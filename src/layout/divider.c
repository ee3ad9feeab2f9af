#include "layout/divider.h"

#include <inttypes.h>

#include "plan/plan.h"

// What is shown of a normal cell, and of what a stretched one adds.
enum { SHOWN_WHOLE = 32, SHOWN_FIRST = 24, SHOWN_LAST = 8, STRETCH_WHOLE = 16, STRETCH_FIRST = 8, STRETCH_LAST = 8 };

static unsigned bits_of(int64_t value)
{
	unsigned bits = 0;
	for (; value > 0; value >>= 1)
		bits++;
	return bits;
}

// Chooses the source of a tap whose cycle is a whole number of ticks, and judges what the stretch does to it.
static void choose_source(const struct clock *clock, int64_t period, int64_t step, struct divider_tap *tap)
{
	tap->source = TAP_DIVIDER;
	if (period == 1)
		tap->source = TAP_MASTER;
	else if (clock->cell_ticks % step == 0)
		tap->source = TAP_COUNTER;
	if (tap->source != TAP_COUNTER)
		return;
	tap->step_ticks = step;
	tap->in_step = clock->stretch_ticks % step == 0;
}

static struct divider_tap dot_tap(const struct clock *clock)
{
	const int64_t dot = clock->dot_ticks;
	struct divider_tap tap = {.exact = true, .in_step = true, .period_ticks = fraction_whole(dot)};
	// Both terms are at most 2 * LIMIT_CELL_TICKS: they fit.
	fraction_make(clock->cell_ticks, dot, &tap.cell_cycles);
	fraction_make(clock->cell_ticks + clock->stretch_ticks, dot, &tap.stretched_cycles);
	choose_source(clock, dot, dot, &tap);
	if (tap.source == TAP_DIVIDER)
		tap.in_step = false;
	return tap;
}

static struct divider_tap subcarrier_tap(const struct clock *clock)
{
	struct divider_tap tap = {TAP_NONE, true, true, FRACTION_ZERO, FRACTION_ZERO, FRACTION_ZERO, 0};
	struct fraction period, cell, stretched;
	if (!clock->has_subcarrier)
		return tap;
	tap.source = TAP_OSCILLATOR;
	tap.exact = false;
	if (!fraction_divide(clock->master_hz, clock->subcarrier_hz, &period) ||
	    !fraction_divide(fraction_whole(clock->cell_ticks), period, &cell) ||
	    !fraction_divide(fraction_whole(clock->cell_ticks + clock->stretch_ticks), period, &stretched))
		return tap;
	tap.exact = true;
	tap.period_ticks = period;
	tap.cell_cycles = cell;
	tap.stretched_cycles = stretched;
	if (fraction_is_whole(period))
		choose_source(clock, period.numerator, period.numerator % 2 == 0 ? period.numerator / 2 : period.numerator, &tap);
	return tap;
}

struct divider divider_of_clock(const struct clock *clock)
{
	return (struct divider){
		.cell_ticks = clock->cell_ticks,
		.stretch_ticks = clock->stretch_ticks,
		.bits = bits_of(clock->cell_ticks + clock->stretch_ticks - 1),
		.dot = dot_tap(clock),
		.subcarrier = subcarrier_tap(clock),
	};
}

bool divider_tap_has_levels(const struct divider_tap *tap)
{
	return tap->source == TAP_COUNTER || tap->source == TAP_DIVIDER;
}

bool divider_tap_is_high(const struct divider_tap *tap, int64_t count)
{
	const int64_t period = tap->period_ticks.numerator;
	return count % period < period - period / 2;
}

// Adds the counts from first to last, only their beginning and end if there are more than `whole`.
static size_t add_spans(struct divider_span *spans, struct divider_span all, int64_t whole, int64_t beginning, int64_t end)
{
	spans[0] = all;
	if (all.last - all.first < whole)
		return 1;
	spans[0].last = all.first + beginning - 1;
	spans[1] = all;
	spans[1].first = all.last - end + 1;
	return 2;
}

size_t divider_spans(const struct divider *divider, struct divider_span spans[DIVIDER_SPANS])
{
	const int64_t cell = divider->cell_ticks, stretch = divider->stretch_ticks;
	size_t count = add_spans(spans, (struct divider_span){0, cell - 1, false}, SHOWN_WHOLE, SHOWN_FIRST, SHOWN_LAST);
	if (stretch > 0)
		count += add_spans(spans + count, (struct divider_span){cell, cell + stretch - 1, true}, STRETCH_WHOLE, STRETCH_FIRST,
		                   STRETCH_LAST);
	return count;
}

static const char *plural(int64_t count)
{
	return count == 1 ? "" : "s";
}

// Offers the whole numbers of dots on both sides of what is none, as far as the language allows them.
static void hint_dots(struct diagnostics *diagnostics, const char *key, int64_t ticks, int64_t dot)
{
	const int64_t below = ticks / dot * dot, above = below + dot;
	if (below > 0 && above <= LIMIT_CELL_TICKS)
		diagnose_hint(diagnostics, "make %s whole dots: %" PRId64 " or %" PRId64 " ticks", key, below, above);
	else
		diagnose_hint(diagnostics, "make %s whole dots: %" PRId64 " ticks", key, below > 0 ? below : above);
}

static void report_dot_cell(const struct clock *clock, const struct divider_tap *dot, struct diagnostics *diagnostics)
{
	diagnose(diagnostics, RULE_DOT_OUT_OF_STEP, clock->cell_place,
	         "a cell of %" PRId64 " tick%s is %" PRId64 "/%" PRId64 " dots: cells do not all start as a dot starts",
	         clock->cell_ticks, plural(clock->cell_ticks), dot->cell_cycles.numerator, dot->cell_cycles.denominator);
	hint_dots(diagnostics, "cell", clock->cell_ticks, clock->dot_ticks);
}

// What a stretch is in cycles of a tap that has whole ticks a cycle.
static struct fraction stretch_cycles(const struct clock *clock, const struct divider_tap *tap)
{
	struct fraction cycles = FRACTION_ZERO;
	fraction_divide(fraction_whole(clock->stretch_ticks), tap->period_ticks, &cycles);
	return cycles;
}

static void report_dot_stretch(const struct clock *clock, const struct divider_tap *dot, struct diagnostics *diagnostics)
{
	const struct fraction dots = stretch_cycles(clock, dot);
	diagnose(diagnostics, RULE_DOT_OUT_OF_STEP, clock->stretch_place,
	         "a stretch of %" PRId64 " tick%s is %" PRId64 "/%" PRId64 " dots: the cell after a stretched one starts within a dot",
	         clock->stretch_ticks, plural(clock->stretch_ticks), dots.numerator, dots.denominator);
	hint_dots(diagnostics, "stretch", clock->stretch_ticks, clock->dot_ticks);
}

static void report_subcarrier(const struct clock *clock, const struct divider_tap *subcarrier, struct diagnostics *diagnostics)
{
	const struct fraction cycles = stretch_cycles(clock, subcarrier);
	const int64_t period = subcarrier->period_ticks.numerator;
	diagnose(diagnostics, RULE_SUBCARRIER_OUT_OF_STEP, clock->stretch_place,
	         "a stretch of %" PRId64 " tick%s is %" PRId64 "/%" PRId64 " of a subcarrier cycle: a subcarrier from the cell counter, "
	         "in step with normal cells, is cut short by stretched ones",
	         clock->stretch_ticks, plural(clock->stretch_ticks), cycles.numerator, cycles.denominator);
	diagnose_hint(diagnostics,
	              "give the subcarrier a divider of its own, by %" PRId64 ", or make stretch a multiple of %" PRId64 " ticks",
	              period, subcarrier->step_ticks);
}

void divider_report(const struct clock *clock, bool stretched, struct diagnostics *diagnostics)
{
	const struct divider divider = divider_of_clock(clock);
	if (divider.dot.source == TAP_DIVIDER)
		report_dot_cell(clock, &divider.dot, diagnostics);
	else if (!divider.dot.in_step && stretched)
		report_dot_stretch(clock, &divider.dot, diagnostics);
	if (!divider.subcarrier.in_step && stretched)
		report_subcarrier(clock, &divider.subcarrier, diagnostics);
}
