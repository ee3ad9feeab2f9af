#include <inttypes.h>

#include "base/text.h"
#include "catalogue/crystals.h"
#include "view/figures.h"
#include "view/fit.h"

#define PLACES 3

static const char *const condition_names[FIT_CONDITIONS] = {
	[FIT_NUMBERS] = "numbers",       [FIT_SUBCARRIER] = "subcarrier", [FIT_ROOM] = "room",
	[FIT_WIDTH] = "picture width",   [FIT_LINE_RATE] = "line rate",   [FIT_COLOUR] = "colour",
	[FIT_FIELD_RATE] = "field rate", [FIT_HEIGHT] = "picture height", [FIT_MEMORY] = "memory",
};

const char *fit_condition_name(enum fit_condition condition)
{
	return condition_names[condition];
}

static void put_hertz(struct text *out, struct fraction hertz)
{
	text_put_rounded(out, hertz, PLACES);
	text_put(out, " Hz");
}

// Rates may differ from their limits by little: all of a message have the places that tell them apart.
static void put_range(struct text *out, const struct fit_obstacle *obstacle)
{
	text_put_rounded(out, obstacle->found, 6);
	text_put(out, " Hz, wanted ");
	text_put_rounded(out, obstacle->low, 6);
	text_put(out, " to ");
	text_put_rounded(out, obstacle->high, 6);
	text_put(out, " Hz");
}

// "101 cells of 9 ticks, 1 of them stretched by 3"
static void put_cells(struct text *out, const struct fit_line *line)
{
	text_put_count(out, (uint64_t)line->cells, "cell", "cells");
	text_put(out, " of ");
	text_put_count(out, (uint64_t)line->cell_ticks, "tick", "ticks");
	if (line->stretched > 0)
		text_printf(out, ", %" PRId64 " of them stretched by %" PRId64 ",", line->stretched, line->stretch_ticks);
}

static void put_colour(struct text *out, const struct fit_space *space, const struct fit_obstacle *obstacle)
{
	put_cells(out, &obstacle->line);
	text_printf(out, " are %" PRId64 " ticks: ", obstacle->line.ticks);
	text_put_fraction(out, obstacle->found);
	text_put(out, space->phase_lines == 1 ? " cycles a line" : " cycles in ");
	if (space->phase_lines != 1)
		text_put_count(out, (uint64_t)space->phase_lines, "line", "lines");
	text_put(out, ", wanted a whole number");
}

static void put_room(struct text *out, const struct fit_space *space, const struct fit_obstacle *obstacle)
{
	text_printf(out, "%" PRId64 " cells of picture and one for each other region, of ", space->columns);
	text_put_count(out, (uint64_t)obstacle->line.cell_ticks, "tick", "ticks");
	text_put(out, ", last ");
	text_put_time_in(out, obstacle->found, UNIT_MICROSECONDS);
	text_put(out, ", the longest line ");
	text_put_time_in(out, obstacle->high, UNIT_MICROSECONDS);
}

static void put_width(struct text *out, const struct fit_space *space, const struct fit_obstacle *obstacle)
{
	text_printf(out, "%" PRId64 " cells of ", space->columns);
	text_put_count(out, (uint64_t)obstacle->line.cell_ticks, "tick", "ticks");
	text_put(out, " last ");
	text_put_time_in(out, obstacle->found, UNIT_MICROSECONDS);
	text_put(out, ", wanted at least ");
	text_put_time_in(out, obstacle->low, UNIT_MICROSECONDS);
	text_printf(out, ", %" PRId64 " %% of the published width", space->least_percent);
}

static void put_memory(struct text *out, const struct fit_obstacle *obstacle)
{
	text_printf(out, "%" PRId64 " lines of ", obstacle->lines);
	put_cells(out, &obstacle->line);
	text_printf(out, " need a part with address pins for %" PRId64 " cells that answers in ",
	            obstacle->lines * obstacle->line.cells);
	text_put_time_in(out, obstacle->found, UNIT_NANOSECONDS);
}

void put_fit_obstacle(struct text *out, const struct fit_space *space, const struct fit_obstacle *obstacle)
{
	switch (obstacle->condition) {
	case FIT_NUMBERS:
		text_printf(out, "a line is longer than %d ticks, or figures do not fit fractions of 64 bits", FIT_LIMIT_TICKS);
		break;
	case FIT_SUBCARRIER:
		put_hertz(out, space->crystals[obstacle->crystal].frequency_hz);
		text_printf(out, " / %" PRId64 " is ", obstacle->line.cycle_ticks);
		put_range(out, obstacle);
		break;
	case FIT_ROOM: put_room(out, space, obstacle); break;
	case FIT_WIDTH: put_width(out, space, obstacle); break;
	case FIT_LINE_RATE:
		put_cells(out, &obstacle->line);
		text_put(out, " are ");
		put_range(out, obstacle);
		break;
	case FIT_COLOUR: put_colour(out, space, obstacle); break;
	case FIT_FIELD_RATE:
		text_printf(out, "%" PRId64 " lines of %" PRId64 " ticks: a %s of ", obstacle->lines, obstacle->line.ticks,
		            limit_item_facts(obstacle->item)->name);
		put_range(out, obstacle);
		break;
	case FIT_HEIGHT:
		text_printf(out, "%" PRId64 " lines of picture and vertical sync do not fit into the %" PRId64 " that the field rate allows",
		            space->picture_lines, obstacle->lines);
		break;
	default: put_memory(out, obstacle); break;
	}
}
