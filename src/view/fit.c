#include "view/fit.h"

#include <inttypes.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "catalogue/crystals.h"
#include "view/columns.h"
#include "view/figures.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))
#define NEAREST_SHOWN 10

struct found {
	const struct fit_space *space;
	const struct fit_result *result;
};

static const char *const region_names[FIT_REGIONS] = {
	[FIT_SYNC] = "sync",             [FIT_BREEZEWAY] = "breezeway", [FIT_BURST] = "burst",
	[FIT_BACK_PORCH] = "back porch", [FIT_PICTURE] = "picture",     [FIT_FRONT_PORCH] = "front porch",
};

const char *fit_region_name(enum fit_region region)
{
	return region_names[region];
}

void put_fit_phase(struct text *out, const struct fit_space *space)
{
	if (space->phase_lines == 0)
		text_put(out, "free");
	else if (space->phase_lines == 1)
		text_put(out, "every line");
	else
		text_printf(out, "every %" PRId64 " lines", space->phase_lines);
}

static const struct fit_layout *layout_of(const void *context, size_t row)
{
	return &((const struct found *)context)->result->layouts[row];
}

static const struct crystal *crystal_of(const void *context, size_t row)
{
	return &((const struct found *)context)->space->crystals[layout_of(context, row)->line.crystal];
}

static void put_whole(struct text *out, int64_t value)
{
	text_printf(out, "%" PRId64, value);
}

static const struct column line_columns[] = {
	{"", true}, {"crystal", false}, {"dot", false}, {"cell", false}, {"cells", true}, {"stretched", false}, {"ticks", true},
	{"kept", false}, {"margin", true}, {"of", false},
};

static void put_margin(struct text *out, const struct fit_layout *layout)
{
	if (layout->has_share)
		text_put_rounded(out, layout->share, 3);
	else
		text_put(out, "-");
}

static void put_line_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct fit_layout *layout = layout_of(context, row);
	const struct fit_line *line = &layout->line;
	switch (column) {
	case 0: text_printf(out, "%zu", row + 1); break;
	case 1: text_put(out, crystal_of(context, row)->name); break;
	case 2: text_put_count(out, (uint64_t)line->dot_ticks, "tick", "ticks"); break;
	case 3: text_put_count(out, (uint64_t)line->cell_dots, "dot", "dots"); break;
	case 4: put_whole(out, line->cells); break;
	case 5:
		if (line->stretched > 0)
			text_printf(out, "%" PRId64 " by %" PRId64, line->stretched, line->stretch_dots);
		else
			text_put(out, "-");
		break;
	case 6: put_whole(out, line->ticks); break;
	case 7: text_printf(out, "%u/%u", layout->kept, layout->binding); break;
	case 8: put_margin(out, layout); break;
	default: text_put(out, layout->has_share ? limit_item_facts(layout->tightest)->name : "-"); break;
	}
}

static const struct column rate_columns[] = {
	{"", true}, {"line Hz", true}, {"field Hz", true}, {"lines", true}, {"cycles a line", true}, {"picture us", true}, {"of its width", true},
	{"chips", false},
};

// False, with nothing put, if the standard does not tell the width.
static bool put_width_share(struct text *out, const struct fit_space *space, struct fraction picture_s)
{
	struct fraction full_s, percent;
	if (!fit_full_width(space->standard, &full_s) || !fraction_divide(picture_s, full_s, &percent) ||
	    !fraction_multiply(percent, fraction_whole(100), &percent))
		return false;
	text_printf(out, "%" PRId64 " %%", fraction_nearest(percent));
	return true;
}

static void put_cycles(struct text *out, const struct fit_line *line)
{
	struct fraction cycles;
	if (line->cycle_ticks != 0 && fraction_make(line->ticks, line->cycle_ticks, &cycles))
		text_put_fraction(out, cycles);
	else
		text_put(out, "-");
}

static void put_chips(struct text *out, const struct fit_memory *memory)
{
	text_printf(out, "%u of %s, ", memory->chips, memory->part->name);
	text_put_time_in(out, memory->access_s, UNIT_NANOSECONDS);
}

static void put_rate_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct fit_space *space = ((const struct found *)context)->space;
	const struct fit_layout *layout = layout_of(context, row);
	const struct fit_line *line = &layout->line;
	const struct fraction master_hz = crystal_of(context, row)->frequency_hz;
	struct fraction line_hz = FRACTION_ZERO, field_hz = FRACTION_ZERO, picture_s = FRACTION_ZERO;
	if (!fraction_divide(master_hz, fraction_whole(line->ticks), &line_hz) ||
	    !fraction_divide(line_hz, fraction_whole(layout->frame.lines), &field_hz) ||
	    !fraction_divide(fraction_whole(space->columns * line->cell_ticks), master_hz, &picture_s)) {
		text_put(out, "-");
		return;
	}
	switch (column) {
	case 0: text_printf(out, "%zu", row + 1); break;
	case 1: text_put_rounded(out, line_hz, 3); break;
	case 2: text_put_rounded(out, field_hz, 3); break;
	case 3: put_whole(out, layout->frame.lines); break;
	case 4: put_cycles(out, line); break;
	case 5: text_put_time_number(out, picture_s, UNIT_MICROSECONDS); break;
	case 6:
		if (!put_width_share(out, space, picture_s))
			text_put(out, "-");
		break;
	default: put_chips(out, &layout->memory); break;
	}
}

static const struct column edge_columns[] = {
	{"", true}, {"sync", true}, {"breezeway", true}, {"burst", true}, {"back porch", true}, {"picture", true},
	{"front porch", true}, {"serration", true}, {"frame", false},
};

static void put_region(struct text *out, struct fit_cells region)
{
	if (region.cells == 0)
		text_put(out, "-");
	else if (region.stretched > 0)
		text_printf(out, "%" PRId64 " (%" PRId64 ")", region.cells, region.stretched);
	else
		put_whole(out, region.cells);
}

static void put_edge_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct fit_layout *layout = layout_of(context, row);
	const struct fit_frame *frame = &layout->frame;
	if (column == 0)
		text_printf(out, "%zu", row + 1);
	else if (column <= FIT_REGIONS)
		put_region(out, layout->regions[column - 1]);
	else if (column == FIT_REGIONS + 1)
		put_region(out, layout->serration);
	else
		text_printf(out, "%" PRId64 "+%" PRId64 "+%" PRId64 "+%" PRId64, frame->broad_lines, frame->top - frame->broad_lines,
		            frame->picture_lines, frame->lines - frame->top - frame->picture_lines);
}

static void put_heading(struct text *out, const struct fit_space *space, const struct fit_result *result)
{
	text_printf(out, "%s: %" PRId64 " columns by %" PRId64 " lines, limits of grade %s", space->standard->name, space->columns,
	            space->picture_lines, limit_grade_name(space->grade));
	if (fit_has_colour(space->standard)) {
		text_put(out, ", phase ");
		put_fit_phase(out, space);
	}
	text_put(out, "\n");
	text_put_count(out, space->crystal_count, "crystal", "crystals");
	text_put(out, "; ");
	text_put_count(out, result->choices, "choice meets", "choices meet");
	text_printf(out, " all conditions, of %" PRIu64 " the edges were sought\n", result->judged);
}

static void put_tables(struct text *out, const struct found *found)
{
	const size_t count = found->result->layout_count;
	const struct columns lines = {line_columns, COUNT_OF(line_columns), count, put_line_cell, found};
	const struct columns rates = {rate_columns, COUNT_OF(rate_columns), count, put_rate_cell, found};
	const struct columns edges = {edge_columns, COUNT_OF(edge_columns), count, put_edge_cell, found};
	text_put(out, "\n");
	view_columns(out, &lines, TERMINAL_CHARACTERS);
	text_put(out, "\n");
	view_columns(out, &rates, TERMINAL_CHARACTERS);
	text_put(out, "\nCells from 0H, (stretched) of them; lines of the frame from 0V: sync, border, picture, border\n\n");
	view_columns(out, &edges, TERMINAL_CHARACTERS);
}

static void put_nearest(struct text *out, const struct fit_space *space, const struct fit_result *result)
{
	text_put(out, "\nNo layout meets all conditions. What comes nearest, and what it fails:\n");
	for (size_t index = 0; index < result->obstacle_count && index < NEAREST_SHOWN; index++) {
		const struct fit_obstacle *obstacle = &result->obstacles[index];
		struct text words = {0};
		text_printf(&words, "%s: %s: ", space->crystals[obstacle->crystal].name, fit_condition_name(obstacle->condition));
		put_fit_obstacle(&words, space, obstacle);
		text_put(out, "  ");
		text_put_wrapped(out, text_string(&words), 2, 4);
		text_put(out, "\n");
		out->failed = out->failed || words.failed;
		text_release(&words);
	}
	if (result->obstacle_count > NEAREST_SHOWN)
		text_printf(out, "  and %zu crystals that fail earlier or by more; --json has them all\n",
		            result->obstacle_count - NEAREST_SHOWN);
}

// How many crystals give no layout, by what they fail.
static void put_others(struct text *out, const struct fit_result *result)
{
	struct text words = {0};
	size_t counts[FIT_CONDITIONS] = {0};
	if (result->obstacle_count == 0)
		return;
	for (size_t index = 0; index < result->obstacle_count; index++)
		counts[result->obstacles[index].condition]++;
	text_put_count(&words, result->obstacle_count, "crystal gives", "crystals give");
	text_put(&words, " no layout, for");
	const char *separator = " ";
	for (size_t condition = 0; condition < FIT_CONDITIONS; condition++)
		if (counts[condition] > 0) {
			text_printf(&words, "%s%s (%zu)", separator, fit_condition_name((enum fit_condition)condition), counts[condition]);
			separator = ", ";
		}
	text_put(out, "\n");
	text_put_wrapped(out, text_string(&words), 0, 0);
	text_put(out, "\n");
	out->failed = out->failed || words.failed;
	text_release(&words);
}

void view_fit(struct text *out, const struct fit_space *space, const struct fit_result *result)
{
	const struct found found = {space, result};
	put_heading(out, space, result);
	if (result->layout_count == 0) {
		put_nearest(out, space, result);
		return;
	}
	put_tables(out, &found);
	put_others(out, result);
}
