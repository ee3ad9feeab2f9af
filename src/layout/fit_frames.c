// The numbers of a frame: how many lines, broad pulses, and where the picture is. All but the rates are counts, whatever the clock is.
#include "base/arena.h"
#include "layout/fit_parts.h"

// The best frame of so many lines.
struct fit_counted {
	bool known;
	bool fits;
	struct fit_frame frame;
	struct fit_standing standing;
};

// Counts are in half lines, those of pulses whole.
static void open_counts(struct fit_meter *meter)
{
	static const enum limit_item halves[] = {
		ITEM_LINES_PER_FIELD, ITEM_VERTICAL_SYNC, ITEM_VERTICAL_FRONT_PORCH, ITEM_VERTICAL_BACK_PORCH, ITEM_VERTICAL_BLANKING,
		ITEM_PICTURE_TOP, ITEM_PICTURE_HEIGHT, ITEM_VERTICAL_CENTRE, ITEM_LINES_WITHOUT_BURST,
	};
	const struct fraction half = {1, 2};
	for (size_t index = 0; index < sizeof halves / sizeof *halves; index++)
		fit_meter_open(meter, halves[index], half, 2 * FIT_LIMIT_LINES);
	fit_meter_open(meter, ITEM_BROAD_PULSES, fraction_whole(1), FIT_LIMIT_LINES);
}

// The published whole number of an item of lines; 0 if there is none.
static int64_t published(const struct standard *standard, enum limit_item item)
{
	const struct limit *limit = standard_limit(standard, item, GRADE_STUDIO);
	return limit != NULL && limit->has_nominal ? fraction_floor(limit->nominal) : 0;
}

bool fit_frames_begin(struct fit_frames *frames, struct arena *arena, const struct fit_space *space)
{
	*frames = (struct fit_frames){.picture_lines = space->picture_lines, .separate = fit_has_separate_sync(space->standard)};
	fit_meter_begin(&frames->meter, arena, space->standard, space->grade);
	open_counts(&frames->meter);
	frames->counted = arena_array(arena, FIT_LIMIT_LINES + 1, sizeof *frames->counted);
	if (frames->separate) {
		frames->lines = published(space->standard, ITEM_LINES_PER_FIELD);
		frames->broad_lines = published(space->standard, ITEM_VERTICAL_SYNC);
	}
	return frames->counted != NULL && !frames->meter.failed;
}

// Marks what the lines of a frame come to.
static struct fit_standing stand(struct fit_frames *frames, const struct fit_frame *frame)
{
	struct fit_meter *meter = &frames->meter;
	struct fit_standing standing = {0};
	const struct { enum limit_item item; int64_t count; } counts[] = {
		{ITEM_LINES_PER_FIELD, 2 * frame->lines},
		{ITEM_VERTICAL_SYNC, 2 * frame->broad_lines},
		{ITEM_VERTICAL_FRONT_PORCH, 2 * (frame->lines - frame->top - frame->picture_lines)},
		{ITEM_VERTICAL_BACK_PORCH, 2 * (frame->top - frame->broad_lines)},
		{ITEM_VERTICAL_BLANKING, 2 * (frame->lines - frame->picture_lines)},
		{ITEM_PICTURE_TOP, 2 * frame->top},
		{ITEM_PICTURE_HEIGHT, 2 * frame->picture_lines},
		{ITEM_VERTICAL_CENTRE, 2 * frame->top + frame->picture_lines},
		{ITEM_LINES_WITHOUT_BURST, 2 * frame->broad_lines},
		{ITEM_BROAD_PULSES, frame->broad_lines},
	};
	for (size_t index = 0; index < sizeof counts / sizeof *counts; index++)
		fit_standing_add(&standing, fit_meter_mark(meter, counts[index].item, counts[index].count));
	return standing;
}

static void count_frame(struct fit_frames *frames, int64_t lines, struct fit_counted *counted)
{
	const int64_t room = lines - frames->picture_lines;
	const int64_t least = frames->separate ? frames->broad_lines : 1, most = frames->separate ? least : FIT_BROAD_LINES;
	counted->known = true;
	for (int64_t broad = least; broad <= most && broad <= room; broad++)
		for (int64_t top = broad; top <= room; top++) {
			const struct fit_frame frame = {lines, broad, top, frames->picture_lines};
			const struct fit_standing standing = stand(frames, &frame);
			if (counted->fits && fit_standing_compare(&standing, &counted->standing, FIT_STANDING_SHARES) <= 0)
				continue;
			counted->fits = true;
			counted->frame = frame;
			counted->standing = standing;
		}
}

static const enum limit_item rate_items[] = {ITEM_FIELD_RATE, ITEM_FRAME_RATE};
#define RATES (sizeof rate_items / sizeof *rate_items)

static struct fraction distance(const struct limit *limit, struct fraction value)
{
	struct fraction missed = FRACTION_ZERO;
	if (limit->has_low && fraction_compare(value, limit->low) < 0)
		(void)fraction_subtract(limit->low, value, &missed);
	if (limit->has_high && fraction_compare(value, limit->high) > 0)
		(void)fraction_subtract(value, limit->high, &missed);
	return missed;
}

// Is a frame of so many lines within the limits of its rates? If not, notes what misses, if it is nearer than what is noted.
static bool meets_rates(struct fit_meter *meter, struct fraction line_hz, int64_t lines, struct fit_framing *framing,
                        struct fit_standing *rates)
{
	struct fraction rate_hz;
	*rates = (struct fit_standing){0};
	if (!fraction_divide(line_hz, fraction_whole(lines), &rate_hz)) {
		meter->unfit = true;
		return false;
	}
	for (size_t index = 0; index < RATES; index++) {
		const struct limit *limit = standard_limit(meter->standard, rate_items[index], meter->grade);
		const struct fit_mark mark = fit_meter_judge(meter, rate_items[index], rate_hz);
		if (!mark.judged || mark.kept) {
			fit_standing_add(rates, &mark);
			continue;
		}
		const struct fraction missed = distance(limit, rate_hz);
		if (!framing->found && (framing->frame.lines == 0 || fraction_compare(missed, framing->missed) < 0)) {
			framing->frame.lines = lines;
			framing->item = rate_items[index];
			framing->rate_hz = rate_hz;
			framing->missed = missed;
		}
		return false;
	}
	return true;
}

// -1, 0, 1 as fit_standing_compare: kept of both, then shares of the rates, then of the counts.
static int compare_frames(const struct fit_standing *rates, const struct fit_standing *counts, const struct fit_framing *other)
{
	const unsigned kept = rates->kept + counts->kept, others = other->rates.kept + other->counts.kept;
	if (kept != others)
		return kept < others ? -1 : 1;
	const int order = fit_standing_compare(rates, &other->rates, FIT_STANDING_SHARES);
	return order != 0 ? order : fit_standing_compare(counts, &other->counts, FIT_STANDING_SHARES);
}

static void try_lines(struct fit_frames *frames, struct fit_meter *meter, struct fraction line_hz, int64_t lines,
                      struct fit_framing *framing)
{
	struct fit_counted *counted = &frames->counted[lines];
	struct fit_standing rates;
	if (!meets_rates(meter, line_hz, lines, framing, &rates))
		return;
	if (!framing->found)
		framing->frame = (struct fit_frame){.lines = lines};
	framing->found = true;
	if (!counted->known)
		count_frame(frames, lines, counted);
	if (!counted->fits || (framing->fits && compare_frames(&rates, &counted->standing, framing) <= 0))
		return;
	framing->fits = true;
	framing->frame = counted->frame;
	framing->rates = rates;
	framing->counts = counted->standing;
}

// The numbers of lines that are near enough to a rate's limit to be tried: those within it, and one on either side.
static void widen(const struct limit *limit, struct fraction line_hz, int64_t *least, int64_t *most)
{
	struct fraction lines;
	if (limit == NULL)
		return;
	if (limit->has_high && fraction_divide(line_hz, limit->high, &lines) && fraction_floor(lines) > *least)
		*least = fraction_floor(lines);
	if (limit->has_low && limit->low.numerator > 0 && fraction_divide(line_hz, limit->low, &lines) &&
	    fraction_floor(lines) + 1 < *most)
		*most = fraction_floor(lines) + 1;
}

struct fit_framing fit_frames_find(struct fit_frames *frames, struct fit_meter *meter, struct fraction line_hz)
{
	struct fit_framing framing = {.item = ITEM_FIELD_RATE};
	int64_t least = 1, most = FIT_LIMIT_LINES;
	for (size_t index = 0; index < RATES; index++)
		widen(standard_limit(meter->standard, rate_items[index], meter->grade), line_hz, &least, &most);
	if (frames->separate)
		least = most = frames->lines;
	for (int64_t lines = least; lines <= most && lines <= FIT_LIMIT_LINES; lines++)
		try_lines(frames, meter, line_hz, lines, &framing);
	return framing;
}

int64_t fit_default_lines(const struct standard *standard)
{
	const struct limit *limit = standard_limit(standard, ITEM_PICTURE_HEIGHT, GRADE_STUDIO);
	struct fraction middle;
	if (limit == NULL)
		return 0;
	if (limit->has_nominal)
		return fraction_floor(limit->nominal);
	if (!limit->has_low || !limit->has_high || !fraction_add(limit->low, limit->high, &middle) ||
	    !fraction_divide(middle, fraction_whole(2), &middle))
		return 0;
	return fraction_floor(middle);
}

bool fit_full_width(const struct standard *standard, struct fraction *width_s)
{
	const struct limit *limit = standard_limit(standard, ITEM_PICTURE_WIDTH, GRADE_STUDIO);
	struct fraction sum;
	if (limit == NULL)
		return false;
	if (limit->has_nominal) {
		*width_s = limit->nominal;
		return true;
	}
	return limit->has_low && limit->has_high && fraction_add(limit->low, limit->high, &sum) &&
	       fraction_divide(sum, fraction_whole(2), width_s);
}

bool fit_has_colour(const struct standard *standard)
{
	return standard_limit(standard, ITEM_SUBCARRIER, GRADE_STUDIO) != NULL;
}

bool fit_has_separate_sync(const struct standard *standard)
{
	return standard_limit(standard, ITEM_HORIZONTAL_POLARITY, GRADE_STUDIO) != NULL &&
	       standard_limit(standard, ITEM_VERTICAL_POLARITY, GRADE_STUDIO) != NULL;
}
