// The choices of a crystal: everything of a layout but its edges, with the conditions that it must meet.
#include "layout/fit_choices.h"

#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "catalogue/crystals.h"

static const struct limit *limit_of(const struct fit_crystal *crystal, enum limit_item item)
{
	return standard_limit(crystal->space->standard, item, crystal->space->grade);
}

static bool has_colour(const struct fit_crystal *crystal)
{
	return fit_has_colour(crystal->space->standard);
}

// Is there still a need to know what comes nearest, and is the condition far enough?
static bool wants_note(const struct fit_crystal *crystal, enum fit_condition condition)
{
	return crystal->met == 0 && (!crystal->noted || condition >= crystal->obstacle.condition);
}

// Notes an obstacle if it is nearer than the one that is noted.
static void note(struct fit_crystal *crystal, struct fit_obstacle obstacle)
{
	const struct fit_obstacle *noted = &crystal->obstacle;
	obstacle.crystal = crystal->index;
	if (crystal->noted && (obstacle.condition < noted->condition ||
	                       (obstacle.condition == noted->condition && fraction_compare(obstacle.missed, noted->missed) >= 0)))
		return;
	crystal->noted = true;
	crystal->obstacle = obstacle;
}

static void note_numbers(struct fit_crystal *crystal)
{
	note(crystal, (struct fit_obstacle){.condition = FIT_NUMBERS, .found = crystal->master_hz, .low = FRACTION_ZERO,
	                                    .high = FRACTION_ZERO, .missed = FRACTION_ZERO});
}

// How far a value lies outside a limit: 0 within.
static struct fraction miss_of(const struct limit *limit, struct fraction value)
{
	struct fraction missed = FRACTION_ZERO;
	if (limit->has_low && fraction_compare(value, limit->low) < 0)
		(void)fraction_subtract(limit->low, value, &missed);
	else if (limit->has_high && fraction_compare(value, limit->high) > 0)
		(void)fraction_subtract(value, limit->high, &missed);
	return missed;
}

static void note_rate(struct fit_crystal *crystal, enum fit_condition condition, enum limit_item item,
                      const struct fit_line *line, int64_t lines, struct fraction found)
{
	const struct limit *limit = limit_of(crystal, item);
	struct fit_obstacle obstacle = {.condition = condition, .item = item, .lines = lines, .found = found,
	                                .low = limit->low, .high = limit->high, .missed = miss_of(limit, found)};
	if (line != NULL)
		obstacle.line = *line;
	note(crystal, obstacle);
}

// Chooses the subcarrier, the whole part of the crystal nearest to the nominal. (For two within a receiver's 300 Hz a crystal had to
// be more than 5,000 times it, and its lines beyond FIT_LIMIT_TICKS.) False after a note.
static bool choose_subcarrier(struct fit_crystal *crystal)
{
	const struct limit *limit = limit_of(crystal, ITEM_SUBCARRIER);
	struct fraction ratio, subcarrier_hz;
	if (!has_colour(crystal))
		return true;
	if (!fraction_divide(crystal->master_hz, limit->nominal, &ratio)) {
		note_numbers(crystal);
		return false;
	}
	const int64_t whole = fraction_nearest(ratio) > 0 ? fraction_nearest(ratio) : 1;
	if (!fraction_divide(crystal->master_hz, fraction_whole(whole), &subcarrier_hz)) {
		note_numbers(crystal);
		return false;
	}
	if (miss_of(limit, subcarrier_hz).numerator > 0) {
		const struct fit_line line = {.crystal = crystal->index, .cycle_ticks = whole};
		note_rate(crystal, FIT_SUBCARRIER, ITEM_SUBCARRIER, &line, 0, subcarrier_hz);
		return false;
	}
	crystal->cycle_ticks = whole;
	return true;
}

// The lengths of lines that meet the limit of their rate. There may be none: then least is above most. False after a note.
static bool find_lengths(struct fit_crystal *crystal)
{
	const struct limit *limit = limit_of(crystal, ITEM_LINE_RATE);
	struct fraction shortest, longest;
	if (!fraction_divide(crystal->master_hz, limit->high, &shortest) ||
	    !fraction_divide(crystal->master_hz, limit->low, &longest) || fraction_floor(longest) > FIT_LIMIT_TICKS) {
		note_numbers(crystal);
		return false;
	}
	crystal->least_ticks = fraction_floor(shortest) + !fraction_is_whole(shortest);
	crystal->most_ticks = fraction_floor(longest);
	return true;
}

// Opens the gauges of everything in a line. False when memory is out.
static bool open_gauges(struct fit_crystal *crystal)
{
	struct fit_meter *meter = &crystal->meter;
	const int64_t most = crystal->most_ticks, count = most - crystal->least_ticks + 1;
	struct fraction tick_s;
	fit_meter_begin(meter, crystal->arena, crystal->space->standard, crystal->space->grade);
	fit_edges_open(meter, crystal->master_hz, crystal->cycle_ticks, most);
	if (fraction_divide(fraction_whole(1), crystal->master_hz, &tick_s)) {
		fit_meter_open(meter, ITEM_HORIZONTAL_BLANKING, tick_s, most);
		fit_meter_open(meter, ITEM_PICTURE_WIDTH, tick_s, most);
	}
	crystal->lengths = arena_array(crystal->arena, count > 0 ? (size_t)count : 1, sizeof *crystal->lengths);
	return crystal->lengths != NULL && !meter->failed;
}

static void add_judged(struct fit_crystal *crystal, enum limit_item item, struct fraction value, struct fit_standing *standing)
{
	const struct fit_mark mark = fit_meter_judge(&crystal->meter, item, value);
	fit_standing_add(standing, &mark);
}

static unsigned polarities(const struct fit_crystal *crystal)
{
	return fit_has_separate_sync(crystal->space->standard) ? 2 : 0;
}

// What all lines of so many ticks have in common. The ticks are within the limit of the line rate.
static struct fit_length *length_of(struct fit_crystal *crystal, int64_t ticks)
{
	struct fit_length *length = &crystal->lengths[ticks - crystal->least_ticks];
	struct fraction line_hz, cycles, subcarrier_hz;
	if (length->known)
		return length;
	length->known = true;
	if (!fraction_divide(crystal->master_hz, fraction_whole(ticks), &line_hz)) {
		crystal->meter.unfit = true;
		return length;
	}
	add_judged(crystal, ITEM_LINE_RATE, line_hz, &length->standing);
	if (crystal->cycle_ticks != 0 && fraction_make(ticks, crystal->cycle_ticks, &cycles) &&
	    fraction_divide(crystal->master_hz, fraction_whole(crystal->cycle_ticks), &subcarrier_hz)) {
		add_judged(crystal, ITEM_SUBCARRIER, subcarrier_hz, &length->standing);
		add_judged(crystal, ITEM_CYCLES_PER_LINE, cycles, &length->standing);
	}
	length->framing = fit_frames_find(crystal->frames, &crystal->meter, line_hz);
	fit_standing_join(&length->standing, &length->framing.rates);
	length->counts = length->framing.counts.kept + polarities(crystal);
	return length;
}

struct fit_standing fit_choice_base(struct fit_crystal *crystal, const struct fit_line *line)
{
	const int64_t picture = crystal->space->columns * line->cell_ticks;
	struct fit_standing standing = length_of(crystal, line->ticks)->standing;
	struct fraction dot_hz;
	if (fraction_divide(crystal->master_hz, fraction_whole(line->dot_ticks), &dot_hz))
		add_judged(crystal, ITEM_PIXEL_CLOCK, dot_hz, &standing);
	fit_standing_add(&standing, fit_meter_mark(&crystal->meter, ITEM_HORIZONTAL_BLANKING, line->ticks - picture));
	fit_standing_add(&standing, fit_meter_mark(&crystal->meter, ITEM_PICTURE_WIDTH, picture));
	return standing;
}

unsigned fit_choice_counts(struct fit_crystal *crystal, const struct fit_line *line)
{
	return length_of(crystal, line->ticks)->counts;
}

// Keeps a choice. False when memory is out or there are too many.
static bool keep(struct fit_crystal *crystal, const struct fit_rank *rank)
{
	if (crystal->choice_count == crystal->choice_room) {
		const size_t room = crystal->choice_room > 0 ? 2 * crystal->choice_room : 1024;
		struct fit_rank *choices = room <= FIT_LIMIT_CHOICES ? arena_array(crystal->arena, room, sizeof *choices) : NULL;
		crystal->too_many = room > FIT_LIMIT_CHOICES;
		if (choices == NULL)
			return false;
		if (crystal->choice_count > 0)
			memcpy(choices, crystal->choices, crystal->choice_count * sizeof *choices);
		crystal->choices = choices;
		crystal->choice_room = room;
	}
	crystal->choices[crystal->choice_count++] = *rank;
	return true;
}

static unsigned signals_of(const struct fit_crystal *crystal, const struct fit_line *line)
{
	return 2 + polarities(crystal) / 2 + (has_colour(crystal) ? 1 : 0) + (line->stretched > 0 ? 1 : 0);
}

// Finds the memory of a choice. False after a note.
static bool choose_memory(struct fit_crystal *crystal, struct fit_rank *rank)
{
	const struct fit_line *line = &rank->line;
	const int64_t cells = line->cells * rank->frame.lines;
	struct fraction cell_s, access_s;
	if (!fraction_divide(fraction_whole(line->cell_ticks), crystal->master_hz, &cell_s) ||
	    !fit_memory_access(crystal->space->parts, cell_s, &access_s)) {
		crystal->meter.unfit = true;
		return false;
	}
	if (fit_memory_find(crystal->space->parts, cells, signals_of(crystal, line), access_s, &rank->memory))
		return true;
	if (wants_note(crystal, FIT_MEMORY))
		note(crystal, (struct fit_obstacle){.condition = FIT_MEMORY, .line = *line, .lines = rank->frame.lines,
		                                    .found = access_s, .low = FRACTION_ZERO, .high = FRACTION_ZERO,
		                                    .missed = fraction_whole(0)});
	return false;
}

// A line that meets rate and colour: does it meet the other conditions? False when memory is out or there are too many.
static bool try_line(struct fit_crystal *crystal, const struct fit_line *line)
{
	const struct fit_length *length = length_of(crystal, line->ticks);
	const struct fit_framing *framing = &length->framing;
	struct fit_rank rank = {.line = *line, .frame = framing->frame};
	if (!framing->found) {
		if (framing->frame.lines > 0 && wants_note(crystal, FIT_FIELD_RATE))
			note_rate(crystal, FIT_FIELD_RATE, framing->item, line, framing->frame.lines, framing->rate_hz);
		return true;
	}
	if (!framing->fits) {
		if (wants_note(crystal, FIT_HEIGHT))
			note(crystal, (struct fit_obstacle){.condition = FIT_HEIGHT, .line = *line, .lines = framing->frame.lines,
			                                    .found = FRACTION_ZERO, .low = FRACTION_ZERO, .high = FRACTION_ZERO,
			                                    .missed = fraction_whole(0)});
		return true;
	}
	if (!choose_memory(crystal, &rank))
		return true;
	crystal->met++;
	const struct fit_standing base = fit_choice_base(crystal, line);
	rank.kept = base.kept + length->counts + fit_edges_most(&crystal->meter) +
	            (crystal->meter.gauges[ITEM_BROAD_WIDTH].limit != NULL) + (crystal->meter.gauges[ITEM_SERRATION_WIDTH].limit != NULL);
	rank.share = fit_standing_share(&base);
	return !fit_best_wants(crystal->best, &rank) || keep(crystal, &rank);
}

// Lines close in colour if they are a multiple of so many ticks.
static int64_t closing_ticks(const struct fit_crystal *crystal)
{
	const int64_t lines = crystal->space->phase_lines;
	if (crystal->cycle_ticks == 0 || lines == 0)
		return 1;
	return crystal->cycle_ticks / greatest_common_divisor(crystal->cycle_ticks, lines);
}

static void note_colour(struct fit_crystal *crystal, const struct fit_line *line)
{
	const int64_t lines = crystal->space->phase_lines;
	struct fit_obstacle obstacle = {.condition = FIT_COLOUR, .line = *line, .low = FRACTION_ZERO, .high = FRACTION_ZERO};
	if (!wants_note(crystal, FIT_COLOUR) || !fraction_make(line->ticks * lines, line->cycle_ticks, &obstacle.found))
		return;
	const struct fraction nearest = fraction_whole(fraction_nearest(obstacle.found));
	if (!fraction_subtract(obstacle.found, nearest, &obstacle.missed))
		return;
	if (obstacle.missed.numerator < 0)
		obstacle.missed.numerator = -obstacle.missed.numerator;
	note(crystal, obstacle);
}

static void note_line_rate(struct fit_crystal *crystal, struct fit_line line, int64_t cells)
{
	struct fraction line_hz;
	line.cells = cells;
	line.ticks = cells * line.cell_ticks + line.stretched * line.stretch_ticks;
	if (wants_note(crystal, FIT_LINE_RATE) && fraction_divide(crystal->master_hz, fraction_whole(line.ticks), &line_hz))
		note_rate(crystal, FIT_LINE_RATE, ITEM_LINE_RATE, &line, 0, line_hz);
}

// Tries all numbers of cells of which so many are stretched, as the line says. False when memory is out or there are too many.
static bool try_cells(struct fit_crystal *crystal, struct fit_line line)
{
	const int64_t regions = fit_blank_regions(has_colour(crystal)), closing = closing_ticks(crystal);
	const int64_t blank = regions > line.stretched ? regions : line.stretched, least = crystal->space->columns + blank;
	const int64_t stretch = line.stretched * line.stretch_ticks, above = crystal->least_ticks - stretch - 1;
	int64_t first = above >= 0 ? above / line.cell_ticks + 1 : 1;
	const int64_t last = (crystal->most_ticks - stretch) / line.cell_ticks;
	if (first < least)
		first = least;
	if (crystal->most_ticks < stretch || last < first) { // the nearest on either side
		if (first > least)
			note_line_rate(crystal, line, first - 1);
		note_line_rate(crystal, line, first);
		return true;
	}
	for (line.cells = first; line.cells <= last; line.cells++) {
		line.ticks = line.cells * line.cell_ticks + stretch;
		if (line.ticks % closing != 0)
			note_colour(crystal, &line);
		else if (!try_line(crystal, &line))
			return false;
	}
	return true;
}

// Is the picture wide enough? False after a note.
static bool fills_width(struct fit_crystal *crystal, const struct fit_line *line)
{
	struct fit_obstacle obstacle = {.condition = FIT_WIDTH, .line = *line, .high = FRACTION_ZERO};
	struct fraction full_s, share;
	if (!fit_full_width(crystal->space->standard, &full_s) || !fraction_make(crystal->space->least_percent, 100, &share))
		return true;
	if (!fraction_multiply(full_s, share, &obstacle.low) ||
	    !fraction_divide(fraction_whole(crystal->space->columns * line->cell_ticks), crystal->master_hz, &obstacle.found)) {
		crystal->meter.unfit = true;
		return false;
	}
	if (fraction_compare(obstacle.found, obstacle.low) >= 0)
		return true;
	if (wants_note(crystal, FIT_WIDTH) && fraction_subtract(obstacle.low, obstacle.found, &obstacle.missed))
		note(crystal, obstacle);
	return false;
}

// Tries all lines of a cell. False when memory is out or there are too many.
static bool try_cell(struct fit_crystal *crystal, int64_t dot_ticks, int64_t cell_dots)
{
	const int64_t regions = fit_blank_regions(has_colour(crystal)), cells = crystal->space->columns + regions;
	const struct fit_line line = {.crystal = crystal->index, .dot_ticks = dot_ticks, .cell_dots = cell_dots,
	                              .cell_ticks = dot_ticks * cell_dots, .cycle_ticks = crystal->cycle_ticks};
	if (cells * line.cell_ticks > crystal->most_ticks) {
		struct fit_obstacle obstacle = {.condition = FIT_ROOM, .line = line, .low = FRACTION_ZERO};
		const int64_t lacking = cells * line.cell_ticks - crystal->most_ticks;
		if (wants_note(crystal, FIT_ROOM) &&
		    fraction_divide(fraction_whole(cells * line.cell_ticks), crystal->master_hz, &obstacle.found) &&
		    fraction_divide(fraction_whole(crystal->most_ticks), crystal->master_hz, &obstacle.high) &&
		    fraction_divide(fraction_whole(lacking), crystal->master_hz, &obstacle.missed))
			note(crystal, obstacle);
		return true;
	}
	if (!fills_width(crystal, &line))
		return true;
	if (!try_cells(crystal, line))
		return false;
	const int64_t most = crystal->cycle_ticks != 0 ? crystal->space->most_stretched : 0;
	for (int64_t dots = 1; most > 0 && dots <= cell_dots; dots++)
		for (int64_t stretched = 1; stretched <= most; stretched++) {
			struct fit_line longer = line;
			longer.stretch_dots = dots;
			longer.stretch_ticks = dots * dot_ticks;
			longer.stretched = stretched;
			if (!try_cells(crystal, longer))
				return false;
		}
	return true;
}

enum fit_status fit_crystal_open(struct fit_crystal *crystal, bool *good)
{
	*good = choose_subcarrier(crystal) && find_lengths(crystal);
	if (!*good || open_gauges(crystal))
		return FIT_OK;
	return FIT_OUT_OF_MEMORY;
}

bool fit_crystal_is_unfit(const struct fit_crystal *crystal)
{
	return crystal->meter.unfit || crystal->frames->meter.unfit;
}

void fit_crystal_give_up(struct fit_crystal *crystal)
{
	crystal->frames->meter.unfit = false;
	crystal->met = 0;
	crystal->choice_count = 0;
	crystal->noted = false;
	note_numbers(crystal);
}

enum fit_status fit_choices_find(struct fit_crystal *crystal)
{
	const struct fit_space *space = crystal->space;
	for (size_t dot = 0; dot < space->dot_tick_count; dot++)
		for (size_t cell = 0; cell < space->cell_dot_count; cell++)
			if (!try_cell(crystal, space->dot_ticks[dot], space->cell_dots[cell]))
				return crystal->too_many ? FIT_TOO_MANY : FIT_OUT_OF_MEMORY;
	return FIT_OK;
}
