#include <stdint.h>

#include "base/arena.h"
#include "layout/placement.h"
#include "layout/timeline.h"
#include "proof/proof.h"
#include "view/check.h"
#include "view/chips.h"
#include "view/divider.h"
#include "view/figures.h"
#include "view/frame.h"
#include "view/placement.h"
#include "view/proofs.h"

// Sets NAME_hz, exact, and NAME_mhz, rounded.
static void put_frequency(json_t **object, const char *exact_key, const char *rounded_key, struct fraction hertz)
{
	struct fraction megahertz;
	json_put(object, exact_key, json_fraction(hertz));
	if (fraction_divide(hertz, fraction_whole(1000000), &megahertz))
		json_put(object, rounded_key, json_rounded(megahertz));
}

// Sets a key to the microseconds of ticks, rounded; leaves it out if they do not fit.
static void put_microseconds(json_t **object, const char *key, const struct clock *clock, struct fraction ticks)
{
	struct fraction seconds;
	if (fraction_divide(ticks, clock->master_hz, &seconds))
		json_put(object, key, json_time(seconds, UNIT_MICROSECONDS));
}

static json_t *asserted_json(const struct plan *plan, uint64_t mask)
{
	json_t *names = json_array();
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if ((mask >> signal & 1) != 0)
			json_append(&names, json_string(plan->signals[signal].name));
	return names;
}

static json_t *region_json(const struct plan *plan, const struct region *region, const struct laid_region *laid)
{
	json_t *object = json_object();
	json_put(&object, "name", json_string(region->name));
	json_put(&object, "first_cell", json_integer(laid->first_cell));
	json_put(&object, "cells", json_integer(laid->cells));
	json_put(&object, "stretched_cells", json_integer(laid->stretched));
	json_put(&object, "start_ticks", json_ticks(laid->start_ticks));
	put_microseconds(&object, "start_us", &plan->clock, fraction_whole(laid->start_ticks));
	json_put(&object, "ticks", json_ticks(laid->ticks));
	put_microseconds(&object, "us", &plan->clock, fraction_whole(laid->ticks));
	struct fraction rounding;
	if (region->length != LENGTH_FILL && fraction_subtract(fraction_whole(laid->ticks), laid->asked_ticks, &rounding)) {
		json_put(&object, "asked_ticks", json_fraction(laid->asked_ticks));
		put_microseconds(&object, "asked_us", &plan->clock, laid->asked_ticks);
		json_put(&object, "rounding_ticks", json_fraction(rounding));
		put_microseconds(&object, "rounding_us", &plan->clock, rounding);
	}
	json_put(&object, "asserted", asserted_json(plan, region->assert_mask));
	return object;
}

static json_t *line_json(const struct timeline *timeline, size_t type, uint32_t uses)
{
	const struct line_type *line = &timeline->plan->lines[type];
	const struct laid_line *laid = &timeline->types[type];
	json_t *object = json_object(), *regions = json_array();
	uint32_t stretched = 0;
	struct fraction cycles;
	for (size_t index = 0; index < line->region_count; index++) {
		json_append(&regions, region_json(timeline->plan, &line->regions[index], &laid->regions[index]));
		stretched += laid->regions[index].stretched;
	}
	json_put(&object, "name", json_string(line->name));
	json_put(&object, "cells", json_integer(laid->cells));
	json_put(&object, "ticks", json_ticks(laid->ticks));
	put_microseconds(&object, "us", &timeline->plan->clock, fraction_whole(laid->ticks));
	if (cycles_of_ticks(&timeline->plan->clock, laid->ticks, &cycles))
		json_put_fraction(&object, "cycles", cycles);
	json_put(&object, "stretched_cells", json_integer(stretched));
	json_put(&object, "used", json_integer(uses));
	json_put(&object, "regions", regions);
	return object;
}

static json_t *lines_json(const struct timeline *timeline)
{
	struct arena *arena = arena_create();
	uint32_t *uses = arena != NULL ? arena_array(arena, timeline->plan->line_count, sizeof *uses) : NULL;
	json_t *lines = uses != NULL ? json_array() : NULL;
	for (uint32_t line = 0; lines != NULL && line < timeline->line_count; line++)
		uses[timeline->lines[line].type]++;
	for (size_t type = 0; lines != NULL && type < timeline->plan->line_count; type++)
		json_append(&lines, line_json(timeline, type, uses[type]));
	arena_destroy(arena);
	return lines;
}

static json_t *clock_json(const struct clock *clock)
{
	json_t *object = json_object();
	put_frequency(&object, "master_hz", "master_mhz", clock->master_hz);
	json_put(&object, "dot_ticks", json_ticks(clock->dot_ticks));
	json_put(&object, "cell_ticks", json_ticks(clock->cell_ticks));
	json_put(&object, "stretch_ticks", json_ticks(clock->stretch_ticks));
	if (clock->has_accuracy)
		json_put(&object, "accuracy_ppm", json_fraction(clock->accuracy_ppm));
	if (clock->has_subcarrier)
		put_frequency(&object, "subcarrier_hz", "subcarrier_mhz", clock->subcarrier_hz);
	return object;
}

static json_t *plan_json(const struct plan *plan)
{
	json_t *object = json_object();
	json_put(&object, "name", json_string(plan->name));
	json_put(&object, "file", json_string(plan->file_name));
	json_put(&object, "crc32", json_sprintf("%08x", (unsigned)plan->source_crc32));
	json_put(&object, "note", json_string(plan->note));
	return object;
}

// Colour and speed, as the plan is laid out.
static json_t *judgement_json(const struct timeline *timeline, bool *kept, bool *advice_kept)
{
	struct proofs *proofs = proofs_of_plan(timeline);
	if (proofs == NULL)
		return NULL;
	json_t *all = view_proofs_json(proofs), *object = json_object();
	json_put(&object, "colour", json_incref(json_object_get(all, "colour")));
	json_put(&object, "limits", json_incref(json_object_get(all, "limits")));
	json_put(&object, "speed", json_incref(json_object_get(all, "speed")));
	json_decref(all);
	if (kept != NULL)
		*kept = !proofs_failed(proofs, false);
	if (advice_kept != NULL)
		*advice_kept = !proofs_failed(proofs, true);
	proofs_destroy(proofs);
	return object;
}

// Signals of the line stage that could as well come from the frame stage.
static json_t *suited_json(const struct timeline *timeline)
{
	struct arena *arena = arena_create();
	const uint64_t *pins = arena != NULL ? timeline_pins(timeline, arena) : NULL;
	const uint64_t suited = pins != NULL ? signals_for_frame(timeline, pins) : 0;
	json_t *names = pins != NULL ? json_array() : NULL;
	for (size_t signal = 0; signal < timeline->plan->signal_count; signal++)
		if (suited >> signal & 1)
			json_append(&names, json_string(timeline->plan->signals[signal].name));
	arena_destroy(arena);
	return names;
}

json_t *view_check_json(const struct timeline *timeline, bool *kept, bool *advice_kept)
{
	json_t *object = json_object();
	json_put(&object, "plan", plan_json(timeline->plan));
	json_put(&object, "clock", clock_json(&timeline->plan->clock));
	json_put(&object, "divider", view_divider_json(&timeline->plan->clock));
	json_put(&object, "lines", lines_json(timeline));
	json_put(&object, "frame", view_frame_json(timeline));
	if (timeline->placements != NULL && timeline->placements->judged)
		json_put(&object, "stretch_auto", view_placement_json(timeline));
	if (timeline->plan->machine.form == FORM_LINE_FRAME)
		json_put(&object, "suits_frame_stage", suited_json(timeline));
	json_put(&object, "chips", view_chips_json(timeline->plan));
	json_put(&object, "proofs", judgement_json(timeline, kept, advice_kept));
	return object;
}
