#include "measure/measure.h"

#include "base/arena.h"
#include "measure/tally.h"

// What an item is measured on.
enum base { BASE_TIME, BASE_CYCLES, BASE_RATE, BASE_LINES, BASE_COUNT, BASE_CLOCK };

// Which signals it needs beside sync.
enum need { NEED_NOTHING, NEED_PICTURE = 1, NEED_BURST = 2, NEED_BOTH = 3, NEED_FIELDS = 4, NEED_FIELD_PICTURE = 5, NEED_FIELD_BURST = 6,
            NEED_COMPOSITE = 12 };

struct item_row {
	enum base base;
	enum need need;
	const char *absent;            // why nothing was found, though the signals are there
};

#define NO_LINE "no normal line follows another"
#define NO_PICTURE "no normal line has picture"
#define NO_BURST "no burst begins in a normal line"
#define NO_FIELD "there is no vertical sync: no broad pulse, or vertical sync is never asserted"

static const struct item_row rows[ITEM_COUNT] = {
	[ITEM_LINE_RATE] = {BASE_RATE, NEED_NOTHING, NO_LINE},
	[ITEM_FIELD_RATE] = {BASE_RATE, NEED_FIELDS, NO_FIELD},
	[ITEM_FRAME_RATE] = {BASE_RATE, NEED_FIELDS, NO_FIELD},
	[ITEM_LINES_PER_FIELD] = {BASE_LINES, NEED_FIELDS, NO_FIELD},
	[ITEM_PIXEL_CLOCK] = {BASE_CLOCK, NEED_NOTHING, ""},
	[ITEM_SUBCARRIER] = {BASE_CLOCK, NEED_NOTHING, ""},
	[ITEM_CYCLES_PER_LINE] = {BASE_CYCLES, NEED_NOTHING, NO_LINE},
	[ITEM_FRONT_PORCH] = {BASE_TIME, NEED_PICTURE, NO_PICTURE},
	[ITEM_SYNC_WIDTH] = {BASE_TIME, NEED_NOTHING, NO_LINE},
	[ITEM_BREEZEWAY] = {BASE_TIME, NEED_BURST, NO_BURST},
	[ITEM_BURST_START] = {BASE_TIME, NEED_BURST, NO_BURST},
	[ITEM_BURST_START_CYCLES] = {BASE_CYCLES, NEED_BURST, NO_BURST},
	[ITEM_BURST_LENGTH] = {BASE_TIME, NEED_BURST, NO_BURST},
	[ITEM_BURST_LENGTH_CYCLES] = {BASE_CYCLES, NEED_BURST, NO_BURST},
	[ITEM_BURST_TO_PICTURE] = {BASE_TIME, NEED_BOTH, "no normal line has both burst and picture"},
	[ITEM_BACK_PORCH] = {BASE_TIME, NEED_PICTURE, NO_PICTURE},
	[ITEM_HORIZONTAL_BLANKING] = {BASE_TIME, NEED_PICTURE, "no normal line with picture follows another"},
	[ITEM_PICTURE_START] = {BASE_TIME, NEED_PICTURE, NO_PICTURE},
	[ITEM_PICTURE_WIDTH] = {BASE_TIME, NEED_PICTURE, NO_PICTURE},
	[ITEM_HORIZONTAL_CENTRE] = {BASE_TIME, NEED_PICTURE, NO_PICTURE},
	[ITEM_PRE_EQUALISING_PULSES] = {BASE_COUNT, NEED_COMPOSITE, NO_FIELD},
	[ITEM_PRE_EQUALISING_LINES] = {BASE_LINES, NEED_COMPOSITE, NO_FIELD},
	[ITEM_BROAD_PULSES] = {BASE_COUNT, NEED_COMPOSITE, NO_FIELD},
	[ITEM_VERTICAL_SYNC] = {BASE_LINES, NEED_FIELDS, NO_FIELD},
	[ITEM_POST_EQUALISING_PULSES] = {BASE_COUNT, NEED_COMPOSITE, NO_FIELD},
	[ITEM_POST_EQUALISING_LINES] = {BASE_LINES, NEED_COMPOSITE, NO_FIELD},
	[ITEM_EQUALISING_WIDTH] = {BASE_TIME, NEED_COMPOSITE, "there are no equalising pulses"},
	[ITEM_BROAD_WIDTH] = {BASE_TIME, NEED_COMPOSITE, NO_FIELD},
	[ITEM_SERRATION_WIDTH] = {BASE_TIME, NEED_COMPOSITE, NO_FIELD},
	[ITEM_VERTICAL_FRONT_PORCH] = {BASE_LINES, NEED_FIELD_PICTURE, "no line of a field has picture"},
	[ITEM_VERTICAL_BACK_PORCH] = {BASE_LINES, NEED_FIELD_PICTURE, "no line of a field has picture"},
	[ITEM_VERTICAL_BLANKING] = {BASE_LINES, NEED_FIELD_PICTURE, "no line of a field has picture"},
	[ITEM_PICTURE_TOP] = {BASE_LINES, NEED_FIELD_PICTURE, "no line of a field has picture"},
	[ITEM_PICTURE_HEIGHT] = {BASE_LINES, NEED_FIELD_PICTURE, "no line of a field has picture"},
	[ITEM_VERTICAL_CENTRE] = {BASE_LINES, NEED_FIELD_PICTURE, "no line of a field has picture"},
	[ITEM_LINES_WITHOUT_BURST] = {BASE_LINES, NEED_FIELD_BURST, NO_FIELD},
	[ITEM_HORIZONTAL_POLARITY] = {BASE_COUNT, NEED_NOTHING, ""},
	[ITEM_VERTICAL_POLARITY] = {BASE_COUNT, NEED_FIELDS, NO_FIELD},
};

#define TOO_LONG "its value needs numbers beyond 64 bits"

// The signal that an item needs and the plan does not have; NULL if it has all.
static const char *missing_signal(const struct instrument *instrument, enum need need)
{
	const struct trace *trace = instrument->trace;
	if ((need & NEED_PICTURE) != 0 && !trace->of[TRACED_PICTURE].has_signal)
		return "no signal has the role blanking";
	if ((need & NEED_BURST) != 0 && !trace->of[TRACED_BURST].has_signal)
		return "no signal has the role burst gate";
	if ((need & NEED_FIELDS) == 0)
		return NULL;
	if (trace->separate && !trace->of[TRACED_VERTICAL].has_signal)
		return "no signal has the role vertical sync";
	return need == NEED_COMPOSITE && trace->separate ? "sync is horizontal and vertical, not composite" : NULL;
}

bool item_is_of_line(enum limit_item item)
{
	return rows[item].base == BASE_TIME || rows[item].base == BASE_CYCLES || item == ITEM_LINE_RATE;
}

// Raw values are half ticks; of a rate the ticks of its period.
bool measured_value(const struct clock *clock, enum limit_item item, int64_t raw, struct fraction *value)
{
	struct fraction half_ticks, cycles_per_tick;
	if (rows[item].base == BASE_RATE)
		return fraction_divide(clock->master_hz, fraction_whole(raw), value);
	if (!fraction_make(raw, 2, &half_ticks))
		return false;
	if (rows[item].base == BASE_TIME)
		return fraction_divide(half_ticks, clock->master_hz, value);
	return fraction_divide(clock->subcarrier_hz, clock->master_hz, &cycles_per_tick) &&
	       fraction_multiply(cycles_per_tick, half_ticks, value);
}

// A raw value in the unit of the item's dimension. False if it does not fit.
static bool value_of(const struct instrument *instrument, enum limit_item item, int64_t raw, struct fraction *value)
{
	const struct clock *clock = &instrument->trace->plan->clock;
	switch (rows[item].base) {
	case BASE_LINES:
		return fraction_make(raw, 4 * instrument->raster.line_ticks, value);
	case BASE_COUNT:
	case BASE_CLOCK:
		*value = fraction_whole(raw);
		return true;
	case BASE_RATE:
	case BASE_TIME:
	case BASE_CYCLES:
		break;
	}
	return measured_value(clock, item, raw, value);
}

// Of rates the raw values are periods: the least of these is the highest rate.
static void settle_item(const struct instrument *instrument, enum limit_item item, struct measured *result)
{
	const struct item_row *row = &rows[item];
	const struct tally *tally = &instrument->tallies[item];
	const bool turned = row->base == BASE_RATE;
	const struct extreme *low = turned ? &tally->most : &tally->least, *high = turned ? &tally->least : &tally->most;
	result->why = missing_signal(instrument, row->need);
	if (result->why == NULL && row->base == BASE_CYCLES && !instrument->trace->plan->clock.has_subcarrier)
		result->why = "the plan has no subcarrier";
	if (result->why == NULL && !tally->any)
		result->why = row->absent;
	if (result->why != NULL)
		return;
	if (!value_of(instrument, item, low->raw, &result->values.low) ||
	    !value_of(instrument, item, high->raw, &result->values.high)) {
		result->why = TOO_LONG;
		return;
	}
	result->known = true;
	result->low_at = low->at;
	result->high_at = high->at;
}

static void settle_clock(const struct plan *plan, struct measured *items)
{
	struct fraction dots;
	struct measured *pixel = &items[ITEM_PIXEL_CLOCK], *subcarrier = &items[ITEM_SUBCARRIER];
	*pixel = *subcarrier = (struct measured){.values = {FRACTION_ZERO, FRACTION_ZERO}};
	pixel->known = fraction_divide(plan->clock.master_hz, fraction_whole(plan->clock.dot_ticks), &dots);
	if (pixel->known)
		pixel->values.low = pixel->values.high = dots;
	else
		pixel->why = TOO_LONG;
	subcarrier->known = plan->clock.has_subcarrier;
	if (subcarrier->known)
		subcarrier->values.low = subcarrier->values.high = plan->clock.subcarrier_hz;
	else
		subcarrier->why = "the plan has no subcarrier";
}

static bool measure_raster(struct instrument *instrument, struct measurement *result)
{
	if (!view_lines(instrument))
		return false;
	measure_lines(instrument);
	measure_fields(instrument);
	return measure_burstless(instrument, result);
}

static void settle(const struct instrument *instrument, struct measurement *result)
{
	for (unsigned item = 0; item < ITEM_COUNT; item++) {
		result->items[item] = (struct measured){.values = {FRACTION_ZERO, FRACTION_ZERO}};
		if (result->flaw != NULL)
			result->items[item].why = result->flaw;
		else
			settle_item(instrument, (enum limit_item)item, &result->items[item]);
	}
	settle_clock(instrument->trace->plan, result->items);
	result->separate = instrument->trace->separate;
	result->frames = instrument->trace->laps;
	// Of one frame: each lap has the same.
	result->strays = (instrument->raster.stray_count + result->frames - 1) / result->frames;
	if (result->strays > 0)
		result->stray_cell = instrument->trace->of[TRACED_SYNC].list[instrument->raster.first_stray].start_cell;
}

// Traces so many laps and finds the raster there, in an arena of its own. False when memory is out.
static bool look(struct instrument *instrument, const struct recording *recording, uint32_t laps, const char **flaw)
{
	arena_destroy(instrument->arena);
	instrument->arena = arena_create();
	instrument->trace = instrument->arena != NULL ? trace_make(instrument->arena, recording, laps) : NULL;
	return instrument->trace != NULL && raster_find(instrument->arena, instrument->trace, &instrument->raster, flaw);
}

// Looks at a frame, at two laps of it if it is odd. False when memory is out.
static bool look_well(struct instrument *instrument, const struct recording *recording, const char **flaw)
{
	struct recording preferring = *recording;
	preferring.prefer_separate = standard_limit(instrument->standard, ITEM_HORIZONTAL_POLARITY, GRADE_STUDIO) != NULL;
	return look(instrument, &preferring, 1, flaw) &&
	       (*flaw != NULL || !raster_is_odd(&instrument->raster) || look(instrument, &preferring, 2, flaw));
}

static bool note_instances(struct instrument *instrument, const struct recording *recording)
{
	const char *flaw;
	if (!look_well(instrument, recording, &flaw))
		return false;
	if (flaw != NULL)
		return true;
	if (!view_lines(instrument))
		return false;
	measure_lines(instrument);
	measure_fields(instrument);
	return !instrument->out_of_memory;
}

bool measure_instances(struct arena *arena, const struct recording *recording, const struct standard *standard,
                       struct measured_instances *instances)
{
	struct instrument instrument = {.results = arena, .standard = standard, .instances = instances};
	*instances = (struct measured_instances){NULL, 0, 0};
	const bool noted = note_instances(&instrument, recording);
	arena_destroy(instrument.arena);
	return noted;
}

static bool measure_all(struct instrument *instrument, const struct recording *recording, struct measurement *result)
{
	if (!look_well(instrument, recording, &result->flaw) || (result->flaw == NULL && !measure_raster(instrument, result)))
		return false;
	settle(instrument, result);
	return true;
}

const struct measurement *measure_recording(struct arena *arena, const struct recording *recording, const struct standard *standard)
{
	struct measurement *result = arena_alloc(arena, sizeof *result);
	struct instrument instrument = {.results = arena, .standard = standard};
	const bool measured = result != NULL && measure_all(&instrument, recording, result);
	arena_destroy(instrument.arena);
	return measured ? result : NULL;
}
