// What a layout's items come to, from its cells alone: the figures of a report, in one place and apart from the search.
#include "catalogue/crystals.h"
#include "layout/fit_parts.h"

struct figures {
	const struct fit_space *space;
	const struct fit_layout *layout;
	struct fraction master_hz, line_hz;
	int64_t sync, breezeway, burst, back_porch, picture, front_porch, serration; // ticks
};

static struct figures figures_of(const struct fit_space *space, const struct fit_layout *layout)
{
	const struct fit_line *line = &layout->line;
	const struct fit_cells *regions = layout->regions;
	struct figures figures = {
		.space = space, .layout = layout, .master_hz = space->crystals[line->crystal].frequency_hz,
		.sync = fit_ticks(line, regions[FIT_SYNC]), .breezeway = fit_ticks(line, regions[FIT_BREEZEWAY]),
		.burst = fit_ticks(line, regions[FIT_BURST]), .back_porch = fit_ticks(line, regions[FIT_BACK_PORCH]),
		.picture = fit_ticks(line, regions[FIT_PICTURE]), .front_porch = fit_ticks(line, regions[FIT_FRONT_PORCH]),
		.serration = fit_ticks(line, layout->serration),
	};
	return figures;
}

// Half ticks of an item that is a time; 0 if it is none.
static int64_t half_ticks(const struct figures *of, enum limit_item item)
{
	const int64_t porch = of->breezeway + of->burst + of->back_porch;
	switch (item) {
	case ITEM_FRONT_PORCH: return 2 * of->front_porch;
	case ITEM_SYNC_WIDTH: return 2 * of->sync;
	case ITEM_BREEZEWAY: return 2 * of->breezeway;
	case ITEM_BURST_START: return 2 * (of->sync + of->breezeway);
	case ITEM_BURST_LENGTH: return 2 * of->burst;
	case ITEM_BURST_TO_PICTURE: return 2 * of->back_porch;
	case ITEM_BACK_PORCH: return 2 * porch;
	case ITEM_HORIZONTAL_BLANKING: return 2 * (of->front_porch + of->sync + porch);
	case ITEM_PICTURE_START: return 2 * (of->sync + porch);
	case ITEM_PICTURE_WIDTH: return 2 * of->picture;
	case ITEM_HORIZONTAL_CENTRE: return 2 * (of->sync + porch) + of->picture;
	case ITEM_BROAD_WIDTH: return 2 * (of->layout->line.ticks - of->serration);
	case ITEM_SERRATION_WIDTH: return 2 * of->serration;
	default: return 0;
	}
}

// Ticks of an item in cycles of the subcarrier; 0 if it is none.
static int64_t cycle_item_ticks(const struct figures *of, enum limit_item item)
{
	switch (item) {
	case ITEM_CYCLES_PER_LINE: return of->layout->line.ticks;
	case ITEM_BURST_START_CYCLES: return of->sync + of->breezeway;
	case ITEM_BURST_LENGTH_CYCLES: return of->burst;
	default: return 0;
	}
}

static int64_t half_lines(const struct fit_frame *frame, enum limit_item item)
{
	switch (item) {
	case ITEM_LINES_PER_FIELD: return 2 * frame->lines;
	case ITEM_VERTICAL_SYNC: return 2 * frame->broad_lines;
	case ITEM_VERTICAL_FRONT_PORCH: return 2 * (frame->lines - frame->top - frame->picture_lines);
	case ITEM_VERTICAL_BACK_PORCH: return 2 * (frame->top - frame->broad_lines);
	case ITEM_VERTICAL_BLANKING: return 2 * (frame->lines - frame->picture_lines);
	case ITEM_PICTURE_TOP: return 2 * frame->top;
	case ITEM_PICTURE_HEIGHT: return 2 * frame->picture_lines;
	case ITEM_VERTICAL_CENTRE: return 2 * frame->top + frame->picture_lines;
	default: return 2 * frame->broad_lines; // lines without burst
	}
}

static bool frequency(const struct figures *of, enum limit_item item, struct fraction *value)
{
	const struct fit_line *line = &of->layout->line;
	switch (item) {
	case ITEM_LINE_RATE: *value = of->line_hz; return true;
	case ITEM_PIXEL_CLOCK: return fraction_divide(of->master_hz, fraction_whole(line->dot_ticks), value);
	case ITEM_SUBCARRIER: return fraction_divide(of->master_hz, fraction_whole(line->cycle_ticks), value);
	default: return fraction_divide(of->line_hz, fraction_whole(of->layout->frame.lines), value);
	}
}

static bool count(const struct figures *of, enum limit_item item, struct fraction *value)
{
	switch (item) {
	case ITEM_BROAD_PULSES: *value = fraction_whole(of->layout->frame.broad_lines); return true;
	case ITEM_HORIZONTAL_POLARITY:
	case ITEM_VERTICAL_POLARITY: *value = standard_limit(of->space->standard, item, GRADE_STUDIO)->nominal; return true;
	default: *value = FRACTION_ZERO; return true; // no equalising pulses
	}
}

static bool value_of(const struct figures *of, enum limit_item item, struct fraction *value)
{
	switch (limit_item_facts(item)->dimension) {
	case DIMENSION_FREQUENCY: return frequency(of, item, value);
	case DIMENSION_CYCLES: return fraction_make(cycle_item_ticks(of, item), of->layout->line.cycle_ticks, value);
	case DIMENSION_PULSES: return count(of, item, value);
	case DIMENSION_LINES:
		if (item == ITEM_PRE_EQUALISING_LINES || item == ITEM_POST_EQUALISING_LINES)
			return count(of, item, value);
		return fraction_make(half_lines(&of->layout->frame, item), 2, value);
	default:
		return fraction_divide(fraction_whole(half_ticks(of, item)), of->master_hz, value) &&
		       fraction_divide(*value, fraction_whole(2), value);
	}
}

// Is there anything of which the item could be measured?
static bool is_measured(const struct fit_layout *layout, bool separate, enum limit_item item)
{
	switch (item) {
	case ITEM_SUBCARRIER:
	case ITEM_CYCLES_PER_LINE:
		return layout->line.cycle_ticks != 0;
	case ITEM_BREEZEWAY:
	case ITEM_BURST_START:
	case ITEM_BURST_START_CYCLES:
	case ITEM_BURST_LENGTH:
	case ITEM_BURST_LENGTH_CYCLES:
	case ITEM_BURST_TO_PICTURE:
	case ITEM_LINES_WITHOUT_BURST:
		return layout->regions[FIT_BURST].cells > 0;
	case ITEM_BROAD_PULSES:
	case ITEM_BROAD_WIDTH:
	case ITEM_SERRATION_WIDTH:
	case ITEM_PRE_EQUALISING_PULSES:
	case ITEM_PRE_EQUALISING_LINES:
	case ITEM_POST_EQUALISING_PULSES:
	case ITEM_POST_EQUALISING_LINES:
		return !separate;
	case ITEM_HORIZONTAL_POLARITY:
	case ITEM_VERTICAL_POLARITY:
		return separate;
	case ITEM_EQUALISING_WIDTH:
		return false;
	default:
		return true;
	}
}

// Counts do not drift: their shares have no say in ranks.
static bool drifts(enum limit_item item)
{
	const enum dimension dimension = limit_item_facts(item)->dimension;
	return dimension != DIMENSION_LINES && dimension != DIMENSION_PULSES;
}

static void count_judgement(struct fit_layout *layout, const struct fit_item *item)
{
	const struct judgement *judgement = &item->judgement;
	layout->binding += judgement->binds;
	if (!judgement->binds || !judgement->kept)
		return;
	layout->kept++;
	if (!judgement->has_share || !drifts(item->item) ||
	    (layout->has_share && fraction_compare(judgement->share, layout->share) >= 0))
		return;
	layout->has_share = true;
	layout->share = judgement->share;
	layout->tightest = item->item;
}

bool fit_measure(const struct fit_space *space, struct fit_layout *layout)
{
	struct figures figures = figures_of(space, layout);
	const bool separate = fit_has_separate_sync(space->standard);
	layout->item_count = 0;
	layout->binding = layout->kept = 0;
	layout->has_share = false;
	if (!fraction_divide(figures.master_hz, fraction_whole(layout->line.ticks), &figures.line_hz))
		return false;
	for (size_t index = 0; index < ITEM_COUNT; index++) {
		struct fit_item *item = &layout->items[layout->item_count];
		*item = (struct fit_item){.item = (enum limit_item)index,
		                          .limit = standard_limit(space->standard, (enum limit_item)index, space->grade)};
		if (item->limit == NULL || !is_measured(layout, separate, item->item))
			continue;
		if (!value_of(&figures, item->item, &item->value))
			return false;
		item->judgement = limit_judge(item->limit, (struct interval){item->value, item->value});
		if (item->judgement.binds && !item->judgement.has_margin)
			return false;
		layout->item_count++;
		count_judgement(layout, item);
	}
	return true;
}
