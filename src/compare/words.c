// Changes in words.
#include <inttypes.h>

#include "base/text.h"
#include "compare/compare.h"
#include "view/figures.h"

#define MOST_LINES 6u // line types that words name; JSON names them all

static const char *const section_names[CHANGE_SECTIONS] = {
	[CHANGE_LIMITS] = "limits",   [CHANGE_CLOCK] = "clock", [CHANGE_STANDARD] = "standard", [CHANGE_SIGNALS] = "signals",
	[CHANGE_LINES] = "lines",     [CHANGE_FRAME] = "frame", [CHANGE_MACHINE] = "machine",   [CHANGE_CHIPS] = "wiring",
	[CHANGE_TIMING] = "timing",   [CHANGE_WORDS] = "in words only",
};

const char *change_section_name(enum change_section section)
{
	return section_names[section];
}

void text_put_change_subject(struct text *out, const struct change *change)
{
	const size_t named = change->line_count > MOST_LINES ? MOST_LINES - 1 : change->line_count;
	for (size_t index = 0; index < named; index++)
		text_printf(out, "%s\"%s\"", index > 0 ? ", " : "", change->lines[index]);
	if (named < change->line_count)
		text_printf(out, " and %zu more line types", change->line_count - named);
	if (change->line_count > 0)
		text_put(out, ": ");
	text_put(out, change->what);
}

static uint64_t size_of(int64_t value)
{
	return value < 0 ? (uint64_t)-value : (uint64_t)value;
}

static void put_shift(struct text *out, const struct comparison *comparison, const struct change *change)
{
	const struct clock *clock = &comparison->now->plan->clock;
	const int64_t ticks = change->ticks < 0 ? -change->ticks : change->ticks;
	struct fraction seconds;
	text_put_count(out, size_of(change->cells), "cell", "cells");
	text_put(out, change->cells < 0 ? (change->longer ? " shorter" : " earlier") : change->longer ? " longer" : " later");
	text_put(out, " (");
	text_put_count(out, (uint64_t)ticks, "tick", "ticks");
	if (seconds_of_ticks(clock, ticks, &seconds)) {
		text_put(out, ", ");
		text_put_time_in(out, seconds, UNIT_MICROSECONDS);
	}
	text_put(out, comparison->same_clock ? ")" : ", by the new clock)");
}

void text_put_change_value(struct text *out, const struct comparison *comparison, const struct change *change)
{
	if (change->shifted)
		put_shift(out, comparison, change);
	else if (change->old != NULL && change->now != NULL)
		text_printf(out, "%s, was %s", change->now, change->old);
	else if (change->old != NULL)
		text_printf(out, "gone, was %s", change->old);
	else if (change->now != NULL)
		text_printf(out, "new, %s", change->now);
	if (change->also != NULL)
		text_printf(out, "%s%s", change->shifted || change->old != NULL || change->now != NULL ? "; " : "", change->also);
}

void text_put_change(struct text *out, const struct comparison *comparison, const struct change *change)
{
	text_put_change_subject(out, change);
	if (change->shifted || change->old != NULL || change->now != NULL || change->also != NULL)
		text_put(out, ": ");
	text_put_change_value(out, comparison, change);
}
