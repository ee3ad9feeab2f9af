#include <string.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "catalogue/crystals.h"
#include "view/figures.h"
#include "view/fit.h"

// Sets a key to what a text holds, and releases it.
static void json_put_text(json_t **object, const char *key, struct text *text)
{
	json_put(object, key, text->failed ? NULL : json_string(text_string(text)));
	text_release(text);
}

static void json_put_whole(json_t **object, const char *key, int64_t value)
{
	json_put(object, key, json_integer((json_int_t)value));
}

// Sets KEY to left / right, which fit.
static void json_put_ratio(json_t **object, const char *key, struct fraction left, struct fraction right)
{
	struct fraction ratio;
	if (fraction_divide(left, right, &ratio))
		json_put_fraction(object, key, ratio);
}

static void json_put_ticks(json_t **object, const char *key, int64_t ticks, struct fraction master_hz)
{
	struct fraction seconds;
	if (fraction_divide(fraction_whole(ticks), master_hz, &seconds))
		json_put_time(object, key, seconds, UNIT_MICROSECONDS);
}

// A value of an item, in its unit.
static void json_put_value(json_t **object, const char *key, enum limit_item item, struct fraction value)
{
	const char *unit = limit_item_facts(item)->unit;
	struct fraction scaled = value;
	const bool fits = strcmp(unit, "us") == 0 ? fraction_multiply(value, fraction_whole(1000000), &scaled)
	                                          : strcmp(unit, "MHz") != 0 || fraction_divide(value, fraction_whole(1000000), &scaled);
	if (fits)
		json_put_fraction(object, key, scaled);
}

static json_t *json_of_item(const struct fit_item *item)
{
	const struct limit_item_facts *facts = limit_item_facts(item->item);
	json_t *object = json_pack("{s:s, s:s}", "item", facts->name, "unit", facts->unit);
	json_put_value(&object, "value", item->item, item->value);
	if (!item->judgement.binds)
		return object;
	json_put(&object, "kept", json_boolean(item->judgement.kept));
	json_put_value(&object, "margin", item->item, item->judgement.margin);
	if (item->judgement.has_share)
		json_put_fraction(&object, "share", item->judgement.share);
	return object;
}

static json_t *json_of_limits(const struct fit_layout *layout)
{
	json_t *object = json_pack("{s:i, s:i}", "binding", (int)layout->binding, "kept", (int)layout->kept), *items = json_array();
	if (layout->has_share) {
		json_put_fraction(&object, "share", layout->share);
		json_put(&object, "tightest", json_string(limit_item_facts(layout->tightest)->name));
	}
	for (size_t index = 0; index < layout->item_count; index++)
		json_append(&items, json_of_item(&layout->items[index]));
	json_put(&object, "items", items);
	return object;
}

static json_t *json_of_cells(const struct fit_space *space, const struct fit_line *line, struct fit_cells cells, const char *name,
                             int64_t start)
{
	const struct fraction master_hz = space->crystals[line->crystal].frequency_hz;
	const int64_t ticks = cells.cells * line->cell_ticks + cells.stretched * line->stretch_ticks;
	json_t *object = json_object();
	if (name != NULL)
		json_put(&object, "region", json_string(name));
	json_put_whole(&object, "cells", cells.cells);
	json_put_whole(&object, "stretched", cells.stretched);
	json_put_whole(&object, "ticks", ticks);
	if (start >= 0)
		json_put_ticks(&object, "start", start, master_hz);
	json_put_ticks(&object, "length", ticks, master_hz);
	return object;
}

static json_t *json_of_regions(const struct fit_space *space, const struct fit_layout *layout)
{
	json_t *array = json_array();
	int64_t start = 0;
	for (size_t region = 0; region < FIT_REGIONS; region++) {
		const struct fit_cells cells = layout->regions[region];
		if (cells.cells == 0)
			continue;
		json_append(&array, json_of_cells(space, &layout->line, cells, fit_region_name((enum fit_region)region), start));
		start += cells.cells * layout->line.cell_ticks + cells.stretched * layout->line.stretch_ticks;
	}
	return array;
}

static json_t *json_of_frame(const struct fit_space *space, const struct fit_layout *layout)
{
	const struct fit_frame *frame = &layout->frame;
	json_t *object = json_object();
	json_put_whole(&object, "lines", frame->lines);
	json_put_whole(&object, "cells", frame->lines * layout->line.cells);
	json_put_whole(&object, fit_has_separate_sync(space->standard) ? "vertical_sync_lines" : "broad_lines", frame->broad_lines);
	json_put_whole(&object, "picture_top", frame->top);
	json_put_whole(&object, "picture_lines", frame->picture_lines);
	return object;
}

static json_t *json_of_memory(const struct fit_memory *memory)
{
	json_t *object = json_pack("{s:s}", "part", memory->part->name);
	json_put_time(&object, "access", memory->access_s, UNIT_NANOSECONDS);
	json_put_whole(&object, "state_bits", memory->state_bits);
	json_put_whole(&object, "word_bits", memory->word_bits);
	json_put_whole(&object, "chips", memory->chips);
	return object;
}

static void json_put_line(json_t **object, const struct fit_space *space, const struct fit_line *line)
{
	struct fraction full_s, picture_s;
	const struct crystal *crystal = &space->crystals[line->crystal];
	json_put(object, "crystal", json_string(crystal->name));
	json_put_fraction(object, "master_hz", crystal->frequency_hz);
	json_put_whole(object, "dot_ticks", line->dot_ticks);
	json_put_whole(object, "cell_dots", line->cell_dots);
	json_put_whole(object, "cell_ticks", line->cell_ticks);
	json_put_whole(object, "cells", line->cells);
	json_put_whole(object, "stretched", line->stretched);
	if (line->stretched > 0) {
		json_put_whole(object, "stretch_dots", line->stretch_dots);
		json_put_whole(object, "stretch_ticks", line->stretch_ticks);
	}
	json_put_whole(object, "ticks", line->ticks);
	if (line->cycle_ticks > 0) {
		json_put_whole(object, "subcarrier_divisor", line->cycle_ticks);
		json_put_ratio(object, "cycles", fraction_whole(line->ticks), fraction_whole(line->cycle_ticks));
	}
	if (fit_full_width(space->standard, &full_s) &&
	    fraction_divide(fraction_whole(space->columns * line->cell_ticks), crystal->frequency_hz, &picture_s))
		json_put_ratio(object, "picture_share", picture_s, full_s);
}

static json_t *json_of_layout(const struct fit_space *space, const struct fit_layout *layout, size_t rank)
{
	const struct fit_line *line = &layout->line;
	const struct fraction master_hz = space->crystals[line->crystal].frequency_hz;
	json_t *object = json_pack("{s:i}", "rank", (int)rank);
	json_put_line(&object, space, line);
	json_put_ratio(&object, "line_hz", master_hz, fraction_whole(line->ticks));
	json_put_ratio(&object, "field_hz", master_hz, fraction_whole(line->ticks * layout->frame.lines));
	json_put(&object, "regions", json_of_regions(space, layout));
	if (layout->serration.cells > 0)
		json_put(&object, "serration", json_of_cells(space, line, layout->serration, NULL, -1));
	json_put(&object, "frame", json_of_frame(space, layout));
	json_put(&object, "memory", json_of_memory(&layout->memory));
	json_put(&object, "limits", json_of_limits(layout));
	return object;
}

static json_t *json_of_obstacle(const struct fit_space *space, const struct fit_obstacle *obstacle)
{
	struct text why = {0};
	json_t *object = json_pack("{s:s, s:s}", "crystal", space->crystals[obstacle->crystal].name, "condition",
	                           fit_condition_name(obstacle->condition));
	put_fit_obstacle(&why, space, obstacle);
	json_put_text(&object, "why", &why);
	return object;
}

json_t *view_fit_json(const struct fit_space *space, const struct fit_result *result)
{
	json_t *object = json_pack("{s:s, s:s}", "standard", space->standard->name, "grade", limit_grade_name(space->grade));
	json_t *layouts = json_array(), *nearest = json_array();
	if (fit_has_colour(space->standard)) {
		struct text phase = {0};
		put_fit_phase(&phase, space);
		json_put_text(&object, "phase", &phase);
	}
	json_put_whole(&object, "columns", space->columns);
	json_put_whole(&object, "picture_lines", space->picture_lines);
	json_put_whole(&object, "crystals", (int64_t)space->crystal_count);
	json_put_whole(&object, "choices", (int64_t)result->choices);
	json_put_whole(&object, "judged", (int64_t)result->judged);
	for (size_t index = 0; index < result->layout_count; index++)
		json_append(&layouts, json_of_layout(space, &result->layouts[index], index + 1));
	for (size_t index = 0; index < result->obstacle_count; index++)
		json_append(&nearest, json_of_obstacle(space, &result->obstacles[index]));
	json_put(&object, "layouts", layouts);
	json_put(&object, "nearest", nearest);
	return object;
}
