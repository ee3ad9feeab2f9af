#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "library/library.h"
#include "view/check.h"
#include "view/figures.h"
#include "view/set.h"

const struct source *keep_source(struct arena *arena, const char *name, const char *bytes, size_t length)
{
	struct source *source = arena_alloc(arena, sizeof *source);
	if (source == NULL)
		return NULL;
	source->name = arena_copy(arena, name, strlen(name));
	source->bytes = arena_copy(arena, bytes, length);
	source->length = length;
	return source->name != NULL && source->bytes != NULL ? source : NULL;
}

static scanlatch_plan *new_plan(size_t members)
{
	struct arena *arena = arena_create();
	scanlatch_plan *plan = arena != NULL ? arena_alloc(arena, sizeof *plan) : NULL;
	struct member *list = plan != NULL ? arena_array(arena, members, sizeof *list) : NULL;
	if (list == NULL) {
		arena_destroy(arena);
		return NULL;
	}
	*plan = (scanlatch_plan){.arena = arena, .members = list, .member_count = members};
	return plan;
}

// The banks that show a listed bank's plan: of a plan alone, all that its jumpers tell apart.
static bool list_banks(scanlatch_plan *plan, size_t index)
{
	struct member *member = &plan->members[index];
	const unsigned banks = 1u << plan->plan->bank_bits;
	member->banks = arena_array(plan->arena, banks, sizeof *member->banks);
	for (unsigned bank = 0; member->banks != NULL && bank < banks; bank++)
		if (plan->set == NULL || set_bank_shown(plan->set->set, bank) == index)
			member->banks[member->bank_count++] = bank;
	return member->banks != NULL;
}

// Lays out the members, whose plans are there, so that all that is wrong with any is told.
static bool lay_out(scanlatch_plan *plan, struct diagnostics *diagnostics)
{
	bool good = true;
	plan->plan = plan->members[0].plan;
	for (size_t index = 0; index < plan->member_count; index++) {
		plan->members[index].timeline = timeline_create(plan->members[index].plan, diagnostics);
		good = good && plan->members[index].timeline != NULL;
		if (!list_banks(plan, index)) {
			diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "memory is out");
			good = false;
		}
	}
	return good;
}

// The catalogue stays with the messages: one that memory did not suffice for is what they quote.
static bool load_plan(scanlatch_plan *plan, scanlatch_messages *messages)
{
	const struct catalogue *catalogue = catalogue_load(messages->names, messages->diagnostics);
	if (catalogue == NULL)
		return false;
	plan->members[0].plan = plan_read(plan->source, catalogue, messages->diagnostics);
	return plan->members[0].plan != NULL && lay_out(plan, messages->diagnostics);
}

// A board has no timeline.
static bool load_board(scanlatch_plan *plan, scanlatch_messages *messages)
{
	struct diagnostics *diagnostics = messages->diagnostics;
	const struct catalogue *catalogue = catalogue_load(messages->names, diagnostics);
	if (catalogue == NULL)
		return false;
	plan->plan = plan->members[0].plan = board_read(plan->source, catalogue, diagnostics);
	if (plan->plan == NULL)
		return false;
	if (list_banks(plan, 0))
		return true;
	diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "memory is out");
	return false;
}

static scanlatch_plan *read_text(const char *name, const char *bytes, size_t length, scanlatch_messages *messages,
                                 bool (*load)(scanlatch_plan *plan, scanlatch_messages *messages))
{
	const struct source *source = keep_source(messages->names, name, bytes, length);
	scanlatch_plan *plan = source != NULL ? new_plan(1) : NULL;
	if (plan == NULL) {
		diagnose(messages->diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "memory is out");
		return NULL;
	}
	plan->source = source;
	if (load(plan, messages))
		return plan;
	scanlatch_plan_destroy(plan);
	return NULL;
}

scanlatch_plan *scanlatch_plan_read(const char *name, const char *bytes, size_t length, scanlatch_messages *messages)
{
	return read_text(name, bytes, length, messages, load_plan);
}

scanlatch_plan *board_read_text(const char *name, const char *bytes, size_t length, scanlatch_messages *messages)
{
	return read_text(name, bytes, length, messages, load_board);
}

scanlatch_plan *plan_of_set(struct plan_set *set, scanlatch_messages *messages)
{
	scanlatch_plan *plan = new_plan(set->set->bank_count);
	if (plan == NULL) {
		diagnose(messages->diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "memory is out");
		plan_set_destroy(set);
		return NULL;
	}
	plan->source = set->set->source;
	plan->set = set;
	for (size_t index = 0; index < plan->member_count; index++)
		plan->members[index].plan = set->plans[index];
	if (lay_out(plan, messages->diagnostics))
		return plan;
	scanlatch_plan_destroy(plan);
	return NULL;
}

void scanlatch_plan_destroy(scanlatch_plan *plan)
{
	if (plan == NULL)
		return;
	for (size_t index = 0; index < plan->member_count; index++) {
		timeline_destroy(plan->members[index].timeline);
		if (plan->set == NULL)
			plan_destroy(plan->members[index].plan);
	}
	plan_set_destroy(plan->set);
	arena_destroy(plan->arena);
}

const char *scanlatch_plan_name(const scanlatch_plan *plan)
{
	return plan->set != NULL ? plan->set->set->name : plan->plan->name;
}

size_t scanlatch_plan_chips(const scanlatch_plan *plan)
{
	return plan->plan->chip_count;
}

const char *scanlatch_plan_chip_label(const scanlatch_plan *plan, size_t chip)
{
	return plan->plan->chips[chip].label;
}

size_t scanlatch_plan_chip_bytes(const scanlatch_plan *plan, size_t chip)
{
	return chip_bytes(&plan->plan->chips[chip]);
}

// What is kept of one of several is kept of all.
static void keep_both(bool *kept, bool also)
{
	if (kept != NULL)
		*kept = *kept && also;
}

char *scanlatch_plan_text(const scanlatch_plan *plan, bool *kept, bool *advice_kept)
{
	struct text text = {0};
	if (plan->members[0].timeline == NULL)
		return NULL;
	if (plan->set == NULL) {
		if (!view_check(&text, plan->members[0].timeline, kept, advice_kept))
			text.failed = true;
		return take_string(&text);
	}
	for (size_t index = 0; index < plan->member_count; index++) {
		const struct member *member = &plan->members[index];
		bool colour_kept = true, advised = true;
		text_put(&text, index > 0 ? "\n" : "");
		view_banks(&text, member->plan, member->banks, member->bank_count);
		if (!view_check(&text, member->timeline, &colour_kept, &advised))
			text.failed = true;
		keep_both(kept, colour_kept);
		keep_both(advice_kept, advised);
	}
	return take_string(&text);
}

static json_t *member_json(const struct member *member, bool *kept, bool *advice_kept)
{
	json_t *object = json_object(), *banks = json_array();
	for (uint32_t index = 0; index < member->bank_count; index++)
		json_append(&banks, json_integer(member->banks[index]));
	json_put(&object, "banks", banks);
	json_put(&object, "check", view_check_json(member->timeline, kept, advice_kept));
	return object;
}

char *scanlatch_plan_json(const scanlatch_plan *plan, bool *kept, bool *advice_kept)
{
	if (plan->members[0].timeline == NULL)
		return NULL;
	if (plan->set == NULL)
		return take_json(view_check_json(plan->members[0].timeline, kept, advice_kept));
	json_t *object = json_object(), *banks = json_array();
	for (size_t index = 0; index < plan->member_count; index++) {
		bool colour_kept = true, advised = true;
		json_append(&banks, member_json(&plan->members[index], &colour_kept, &advised));
		keep_both(kept, colour_kept);
		keep_both(advice_kept, advised);
	}
	json_put(&object, "name", json_string(scanlatch_plan_name(plan)));
	json_put(&object, "banks", banks);
	return take_json(object);
}
