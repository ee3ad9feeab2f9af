#include <string.h>

#include "view/figures.h"
#include "view/limits.h"
#include "view/proofs_shared.h"
#include "view/standards.h"

// Sets NAME and NAME_rounded, in the item's unit; leaves them out if they do not fit.
static void put_value(json_t **object, const char *name, enum limit_item item, struct fraction value)
{
	struct fraction scaled;
	if (limit_value_in_unit(item, value, &scaled))
		json_put_fraction(object, name, scaled);
}

static void put_move(json_t **object, const struct timeline *timeline, const struct limit_verdict *verdict)
{
	static const char *const names[] = {[MOVE_EDGE] = "edge", [MOVE_PICTURE] = "picture", [MOVE_LENGTH] = "line length"};
	if (verdict->move == MOVE_NONE)
		return;
	const uint32_t cell = verdict->move_cell;
	json_t *move = json_object();
	json_put(&move, "what", json_string(names[verdict->move]));
	json_put(&move, "cells", json_integer(verdict->move_cells));
	json_put(&move, "line_type", json_string(timeline_line_name(timeline, cell)));
	if (verdict->move == MOVE_EDGE) {
		json_put(&move, "after_region", json_string(timeline_region_name(timeline, cell == 0 ? timeline->cell_count - 1 : cell - 1)));
		json_put(&move, "before_region", json_string(timeline_region_name(timeline, cell)));
	}
	json_put(object, "move", move);
}

// Of the picture's middle, how far it is from the standard's.
static void put_offset(json_t **object, const struct proofs *proofs, const struct limit *limit)
{
	const struct measured *measured = &proofs->limits.measurement->items[limit->item];
	struct fraction low, high;
	const bool centre = limit->item == ITEM_HORIZONTAL_CENTRE || limit->item == ITEM_VERTICAL_CENTRE;
	if (!centre || !limit->has_nominal || !measured->known || !fraction_subtract(measured->values.low, limit->nominal, &low) ||
	    !fraction_subtract(measured->values.high, limit->nominal, &high))
		return;
	put_value(object, "offset_low", limit->item, low);
	put_value(object, "offset_high", limit->item, high);
}

static json_t *verdict_json(const struct proofs *proofs, const struct limit *limit)
{
	const struct limit_verdict *verdict = &proofs->limits.rows[limit->item].grades[limit->grade];
	json_t *object = json_object();
	if (limit->has_nominal)
		put_value(&object, "nominal", limit->item, limit->nominal);
	if (limit->has_low)
		put_value(&object, "low", limit->item, limit->low);
	if (limit->has_high)
		put_value(&object, "high", limit->item, limit->high);
	put_offset(&object, proofs, limit);
	if (!verdict->known || !verdict->judgement.binds)
		return object;
	json_put(&object, "kept", json_boolean(verdict->judgement.kept));
	if (verdict->judgement.has_margin)
		put_value(&object, "margin", limit->item, verdict->judgement.margin);
	if (verdict->judgement.has_share)
		json_put_fraction(&object, "share", verdict->judgement.share);
	put_move(&object, proofs->timeline, verdict);
	return object;
}

static void put_at(json_t **object, const char *key, const struct timeline *timeline, uint32_t cell)
{
	if (cell == UINT32_MAX)
		return;
	json_t *place = json_object();
	json_put_place(&place, timeline, cell);
	json_put(object, key, place);
}

static void put_measured(json_t **object, const struct proofs *proofs, enum limit_item item)
{
	const struct measured *measured = &proofs->limits.measurement->items[item];
	const struct limit_row *row = &proofs->limits.rows[item];
	put_value(object, "low", item, measured->values.low);
	put_value(object, "high", item, measured->values.high);
	if (row->widened) {
		put_value(object, "accuracy_low", item, row->values.low);
		put_value(object, "accuracy_high", item, row->values.high);
	}
	if (item == ITEM_PIXEL_CLOCK || item == ITEM_SUBCARRIER)
		return;
	put_at(object, "low_at", proofs->timeline, measured->low_at.from_cell);
	put_at(object, "high_at", proofs->timeline, measured->high_at.from_cell);
}

static json_t *item_json(const struct proofs *proofs, enum limit_item item)
{
	const struct measured *measured = &proofs->limits.measurement->items[item];
	const struct limit_item_facts *facts = limit_item_facts(item);
	json_t *object = json_object();
	json_put(&object, "item", json_string(facts->name));
	json_put(&object, "unit", json_string(facts->unit));
	if (measured->known)
		put_measured(&object, proofs, item);
	else
		json_put(&object, "not_measured", json_string(measured->why));
	for (unsigned grade = 0; grade < GRADE_COUNT; grade++) {
		const struct limit *limit = standard_limit(plan_of(proofs)->standard, item, (enum limit_grade)grade);
		if (limit != NULL)
			json_put(&object, limit_grade_name((enum limit_grade)grade), verdict_json(proofs, limit));
	}
	return object;
}

static json_t *counts_json(const unsigned counts[GRADE_COUNT])
{
	json_t *object = json_object();
	for (unsigned grade = 0; grade < GRADE_COUNT; grade++)
		json_put(&object, limit_grade_name((enum limit_grade)grade), json_integer((json_int_t)counts[grade]));
	return object;
}

static json_t *field_json(const struct measurement *measurement, uint32_t index)
{
	json_t *object = json_object(), *runs = json_array();
	json_put(&object, "begins", json_string(measurement->fields[index].at_half ? "half way through a line" : "at a line"));
	if (!measurement->items[ITEM_LINES_WITHOUT_BURST].known || !measurement->numbered) {
		json_decref(runs);
		return object;
	}
	for (uint32_t run = 0; run < measurement->burstless_count; run++)
		if (measurement->burstless[run].field == index)
			json_append(&runs, json_pack("[I, I]", (json_int_t)measurement->burstless[run].first_line,
			                             (json_int_t)measurement->burstless[run].last_line));
	json_put(&object, "lines_without_burst", runs);
	return object;
}

#define MOST_FIELDS 16u // that are listed one by one: a colour sequence has at most 8

void json_put_limits(json_t **object, const struct proofs *proofs)
{
	const struct limits_result *limits = &proofs->limits;
	const struct measurement *measurement = limits->measurement;
	json_t *items = json_array(), *fields = json_array();
	json_put(object, "standard", json_string(plan_of(proofs)->standard->name));
	json_put(object, "own_limits", json_integer((json_int_t)plan_of(proofs)->standard->own_limits));
	json_put(object, "grade", json_string(limit_grade_name(plan_of(proofs)->grade)));
	json_put(object, "kept", counts_json(limits->kept));
	json_put(object, "missed", counts_json(limits->missed));
	json_put(object, "not_measured", counts_json(limits->unknown));
	for (unsigned item = 0; item < ITEM_COUNT; item++)
		if (limits->rows[item].grades[GRADE_STUDIO].has_limit || limits->rows[item].grades[GRADE_MONITOR].has_limit)
			json_append(&items, item_json(proofs, (enum limit_item)item));
	json_put(object, "items", items);
	if (limits->no_vertical_sync)
		json_put(object, "no_vertical_sync", json_true());
	for (uint32_t index = 0; index < measurement->field_count && index < MOST_FIELDS; index++)
		json_append(&fields, field_json(measurement, index));
	json_put(object, "fields", fields);
	if (measurement->items[ITEM_LINES_WITHOUT_BURST].known && measurement->numbered)
		json_put(object, "burst_pauses_kept", json_boolean(measurement->pauses_kept));
}
