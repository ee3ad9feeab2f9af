#include <string.h>

#include "base/text.h"
#include "view/diff.h"
#include "view/figures.h"
#include "view/proofs.h"

static json_t *strings_json(const char *const *strings, size_t count)
{
	json_t *list = json_array();
	for (size_t index = 0; index < count; index++)
		json_append(&list, json_string(strings[index]));
	return list;
}

static void put_string(json_t **object, const char *key, const char *string)
{
	if (string != NULL)
		json_put(object, key, json_string(string));
}

static void put_shift(json_t **object, const struct comparison *comparison, const struct change *change)
{
	struct fraction seconds;
	json_put(object, "cells", json_integer(change->cells));
	json_put(object, "ticks", json_ticks(change->ticks));
	if (seconds_of_ticks(&comparison->now->plan->clock, change->ticks, &seconds))
		json_put_time(object, "shift", seconds, UNIT_MICROSECONDS);
}

static json_t *change_json(const struct comparison *comparison, const struct change *change)
{
	json_t *object = json_object();
	struct text words = {0};
	text_put_change(&words, comparison, change);
	json_put(&object, "section", json_string(change_section_name(change->section)));
	json_put(&object, "kind", json_string(change->kind));
	if (change->line_count > 0)
		json_put(&object, "lines", strings_json(change->lines, change->line_count));
	json_put(&object, "what", json_string(change->what));
	put_string(&object, "old", change->old);
	put_string(&object, "new", change->now);
	put_string(&object, "also", change->also);
	if (change->shifted)
		put_shift(&object, comparison, change);
	json_put(&object, "words", words.failed ? NULL : json_string(text_string(&words)));
	text_release(&words);
	return object;
}

// A list of names that are joined by ", ".
static json_t *names_json(const char *names)
{
	json_t *list = json_array();
	while (*names != '\0') {
		const size_t length = strcspn(names, ",");
		json_append(&list, json_stringn(names, length));
		names += length;
		names += strspn(names, ", ");
	}
	return list;
}

static json_t *both_json(const char *old, const char *now)
{
	json_t *object = json_object();
	json_put(&object, "old", names_json(old));
	json_put(&object, "new", names_json(now));
	return object;
}

static json_t *fact_json(const struct fact *fact)
{
	json_t *object = json_object();
	json_put(&object, "what", json_string(fact->what));
	json_put(&object, "old", json_string(fact->old));
	json_put(&object, "new", json_string(fact->now));
	json_put(&object, "same", json_boolean(fact->same));
	return object;
}

static void put_comparison(json_t **object, const struct comparison *comparison)
{
	json_t *facts = json_array(), *changes = json_array();
	for (size_t index = 0; index < comparison->fact_count; index++)
		json_append(&facts, fact_json(&comparison->facts[index]));
	for (size_t index = 0; index < comparison->count; index++)
		json_append(&changes, change_json(comparison, &comparison->changes[index]));
	json_put(object, "facts", facts);
	json_put(object, "changes", changes);
}

// The musts that fail in images.
static json_t *failures_json(const struct proofs *proofs)
{
	json_t *object = json_object();
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		if (proof_is_must(kind) && proofs->proof[kind].verdict == VERDICT_FAIL)
			json_put(&object, proof_name(kind), view_proof_json(proofs, kind));
	return object;
}

static json_t *plan_json(const struct plan_difference *plan)
{
	json_t *object = json_object(), *banks = json_array();
	for (size_t index = 0; index < plan->bank_count; index++)
		json_append(&banks, json_integer(plan->banks[index]));
	if (plan->bank_count > 0)
		json_put(&object, "banks", banks);
	else
		json_decref(banks);
	if (plan->comparison == NULL) {
		json_put(&object, "only", json_string(plan->only));
		return object;
	}
	json_put(&object, "same_timeline", json_boolean(same_timeline(plan)));
	json_put(&object, "musts", both_json(plan->old_musts, plan->now_musts));
	json_put(&object, "advice", both_json(plan->old_advice, plan->now_advice));
	put_string(&object, "changes_unknown", plan->unseen);
	if (plan->images != NULL && plan->images_musts[0] != '\0')
		json_put(&object, "failures", failures_json(plan->images));
	put_comparison(&object, plan->comparison);
	return object;
}

static json_t *chip_json(const struct chip_difference *chip)
{
	static const char *const fates[] = {
		[CHIP_STAYS] = "stays", [CHIP_BURN] = "burn", [CHIP_OTHER_BYTES] = "other bytes",
		[CHIP_NEW] = "new",     [CHIP_GONE] = "gone", [CHIP_OTHER_PART] = "other part",
	};
	json_t *object = json_object();
	json_put(&object, "label", json_string(chip->label));
	put_string(&object, "old_label", chip->old_label);
	json_put(&object, "fate", json_string(fates[chip->fate]));
	json_put(&object, "bytes", json_integer((json_int_t)chip->bytes));
	if (chip->differing > 0) {
		json_put(&object, "differing", json_integer((json_int_t)chip->differing));
		json_put(&object, "first", json_integer((json_int_t)chip->first));
	}
	return object;
}

static json_t *set_json(const struct difference *difference)
{
	json_t *changes = json_array();
	for (size_t index = 0; index < difference->set_change_count; index++)
		json_append(&changes, change_json(NULL, &difference->set_changes[index]));
	return changes;
}

json_t *view_difference_json(const struct difference *difference)
{
	json_t *object = json_object(), *plans = json_array(), *chips = json_array();
	json_put(&object, "old", json_string(difference->old_name));
	json_put(&object, "new", json_string(difference->now_name));
	json_put(&object, "differs", json_boolean(difference_found(difference)));
	json_put(&object, "same_timeline", json_boolean(same_timelines(difference)));
	json_put(&object, "same_bytes", json_boolean(same_images(difference)));
	for (size_t index = 0; index < difference->plan_count; index++)
		json_append(&plans, plan_json(&difference->plans[index]));
	for (size_t index = 0; index < difference->chip_count; index++)
		json_append(&chips, chip_json(&difference->chips[index]));
	json_put(&object, "plans", plans);
	if (difference->set_change_count > 0)
		json_put(&object, "set", set_json(difference));
	json_put(&object, "chips", chips);
	return object;
}
