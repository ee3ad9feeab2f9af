#include "view/placement.h"

#include <inttypes.h>

#include "base/text.h"
#include "layout/placement.h"
#include "view/figures.h"

static const char *region_of(const struct timeline *timeline, const struct stretch_segment *segment)
{
	const struct laid_line *laid = &timeline->types[segment->type];
	return timeline->plan->lines[segment->type].regions[laid->region_of_cell[segment->cells[0]]].name;
}

// "picture: 1 in sync, 2 in back porch; border: …".
static void put_placement(struct text *words, const struct timeline *timeline, const struct placement *placement)
{
	const struct placements *placements = timeline->placements;
	size_t type = SIZE_MAX;
	for (size_t index = 0; index < placements->segment_count; index++) {
		const struct stretch_segment *segment = &placements->segments[index];
		if (placement->counts[index] == 0)
			continue;
		if (segment->type != type)
			text_printf(words, "%s\"%s\": ", type == SIZE_MAX ? "" : "; ", timeline->plan->lines[segment->type].name);
		else
			text_put(words, ", ");
		type = segment->type;
		text_printf(words, "%" PRIu32 " in \"%s\"", placement->counts[index], region_of(timeline, segment));
	}
	text_printf(words, " (%u of %u limits of the line kept", placement->kept, placements->limits);
	if (placement->has_share) {
		struct fraction percent;
		text_put(words, ", smallest margin ");
		if (fraction_multiply(placement->share, fraction_whole(100), &percent))
			text_put_rounded(words, percent, 1);
		text_put(words, " % of a tolerance");
	}
	text_put(words, ")");
}

void view_placement(struct text *out, const struct timeline *timeline)
{
	const struct placements *placements = timeline->placements;
	struct text words = {0};
	if (placements != NULL && placements->unweighed)
		text_put(out, "stretch: auto placed leftmost: what each way does to the limits could not be reckoned\n");
	if (placements == NULL || !placements->judged)
		return;
	text_put(&words, "stretch: auto placed, by limits: ");
	put_placement(&words, timeline, &placements->best);
	if (placements->has_second) {
		text_put(&words, "; second best: ");
		put_placement(&words, timeline, &placements->second);
	}
	if (!placements->exhausted)
		text_put(&words, "; there were too many ways to try all: mark fewer regions");
	text_put_wrapped(out, text_string(&words), 0, 2);
	text_put(out, "\n");
	out->failed = out->failed || words.failed;
	text_release(&words);
}

static json_t *placement_json(const struct timeline *timeline, const struct placement *placement)
{
	const struct placements *placements = timeline->placements;
	json_t *object = json_object(), *stretched = json_array();
	json_put(&object, "kept", json_integer((json_int_t)placement->kept));
	if (placement->has_share)
		json_put_fraction(&object, "share", placement->share);
	for (size_t index = 0; index < placements->segment_count; index++) {
		const struct stretch_segment *segment = &placements->segments[index];
		if (placement->counts[index] == 0)
			continue;
		json_t *place = json_object();
		json_put(&place, "line", json_string(timeline->plan->lines[segment->type].name));
		json_put(&place, "region", json_string(region_of(timeline, segment)));
		json_put(&place, "first_cell", json_integer((json_int_t)segment->cells[0]));
		json_put(&place, "cells", json_integer((json_int_t)placement->counts[index]));
		json_append(&stretched, place);
	}
	json_put(&object, "stretched", stretched);
	return object;
}

json_t *view_placement_json(const struct timeline *timeline)
{
	const struct placements *placements = timeline->placements;
	if (placements == NULL || !placements->judged)
		return json_null();
	json_t *object = json_object();
	json_put(&object, "limits", json_integer((json_int_t)placements->limits));
	json_put(&object, "exhausted", json_boolean(placements->exhausted));
	json_put(&object, "best", placement_json(timeline, &placements->best));
	if (placements->has_second)
		json_put(&object, "second", placement_json(timeline, &placements->second));
	return object;
}
