#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "compare/seen.h"
#include "library/library.h"
#include "plan/read.h"
#include "view/diff.h"
#include "view/figures.h"
#include "view/svg.h"

struct scanlatch_difference {
	struct arena *arena;
	struct difference difference;
};

// A side of a comparison.
struct side {
	const scanlatch_plan *plan;
	const scanlatch_images *images;
	const scanlatch_proofs *proofs;
};

// The member of a plan or set that a bank shows; a plan alone shows in every bank.
static size_t member_of(const scanlatch_plan *plan, unsigned bank)
{
	return plan->set != NULL ? set_bank_shown(plan->set->set, bank) : 0;
}

static unsigned banks_of(const struct side *old, const struct side *now)
{
	const unsigned before = old->plan->set != NULL ? 1u << old->plan->plan->bank_bits : 1;
	const unsigned after = now->plan->set != NULL ? 1u << now->plan->plan->bank_bits : 1;
	return before > after ? before : after;
}

// The member of a bank, or SIZE_MAX where the set has fewer banks.
static size_t shown_in(const struct side *side, unsigned bank)
{
	return side->plan->set != NULL && bank >= 1u << side->plan->plan->bank_bits ? SIZE_MAX : member_of(side->plan, bank);
}

// The names of proofs that fail, of musts or of advice, or NULL when memory is out.
static const char *failed_proofs(struct arena *arena, const struct side *side, size_t member, bool musts)
{
	struct text names = {0};
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		if (proof_is_must(kind) == musts && side->proofs->proofs[member]->proof[kind].verdict == VERDICT_FAIL)
			text_printf(&names, "%s%s", names.length > 0 ? ", " : "", proof_name(kind));
	const char *kept = names.failed ? NULL : arena_copy(arena, text_string(&names), names.length);
	text_release(&names);
	return kept;
}

static const char *musts_words(struct arena *arena, const char *failed)
{
	return failed[0] == '\0' ? "all hold, the frame closes" : arena_format(arena, "FAIL: %s", failed);
}

static bool name_failures(struct arena *arena, const struct side *old, size_t before, const struct side *now, size_t after,
                          struct plan_difference *plan)
{
	plan->old_musts = failed_proofs(arena, old, before, true);
	plan->now_musts = failed_proofs(arena, now, after, true);
	plan->old_advice = failed_proofs(arena, old, before, false);
	plan->now_advice = failed_proofs(arena, now, after, false);
	if (plan->old_musts == NULL || plan->now_musts == NULL || plan->old_advice == NULL || plan->now_advice == NULL)
		return false;
	plan->old_words = musts_words(arena, plan->old_musts);
	plan->now_words = musts_words(arena, plan->now_musts);
	return plan->old_words != NULL && plan->now_words != NULL;
}

// All banks that show the same two members as the first.
static bool list_banks(struct arena *arena, const struct side *old, const struct side *now, unsigned first, struct plan_difference *plan)
{
	uint32_t *banks = arena_array(arena, banks_of(old, now), sizeof *banks);
	for (unsigned bank = first; banks != NULL && bank < banks_of(old, now); bank++)
		if (shown_in(old, bank) == shown_in(old, first) && shown_in(now, bank) == shown_in(now, first))
			banks[plan->bank_count++] = bank;
	plan->banks = banks;
	return banks != NULL;
}

static bool is_told(const struct side *old, const struct side *now, unsigned bank)
{
	for (unsigned before = 0; before < bank; before++)
		if (shown_in(old, before) == shown_in(old, bank) && shown_in(now, before) == shown_in(now, bank))
			return true;
	return false;
}

// The setting of the jumpers in which a must fails first.
static unsigned failing_bank(const struct side *read, size_t member)
{
	const struct proofs *proofs = read->proofs->proofs[member];
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		if (proof_is_must(kind) && proofs->proof[kind].verdict == VERDICT_FAIL)
			return proofs->proof[kind].counterexample.bank;
	return 0;
}

// Reads what the images of a member do; where they cannot be read, why. False when memory is out.
static bool see_images(struct arena *arena, const struct side *read, size_t member, struct plan_difference *plan)
{
	const struct timeline *timeline = read->plan->members[member].timeline;
	const struct machine_plan *machine = &timeline->plan->machine;
	const struct member_images *images = &read->images->members[member];
	const struct seen_options options = {
		.bank = failing_bank(read, member), .has_start = images->has_start, .start = images->start,
		.start_is_planned = machine->has_start || machine->line.advance == ADVANCE_COUNT,
		.codes = read->proofs->proofs[member]->codes, .code_counts = read->proofs->proofs[member]->code_counts};
	struct diagnostics *refusals = diagnostics_create();
	if (refusals == NULL)
		return false;
	plan->seen = seen_create(timeline, read->images->images, options, refusals);
	const char *why = plan->seen == NULL ? diagnostics_first_error(refusals) : NULL;
	plan->unseen = why != NULL ? arena_copy(arena, why, strlen(why)) : NULL;
	const bool good = !diagnostics_has_system_error(refusals) && (why == NULL || plan->unseen != NULL);
	diagnostics_destroy(refusals);
	return good;
}

// Of a plan and images: what the proofs say of these; and where a must fails, they are compared by what they do.
static bool judge_images(struct arena *arena, const struct side *read, size_t member, bool is_old, struct plan_difference *plan)
{
	plan->images = read->proofs->proofs[member];
	plan->images_musts = is_old ? plan->old_musts : plan->now_musts;
	plan->images_words = is_old ? plan->old_words : plan->now_words;
	return plan->images_musts[0] == '\0' || see_images(arena, read, member, plan);
}

static const char *plan_name(const struct side *side, size_t member)
{
	return member != SIZE_MAX ? side->plan->members[member].plan->name : NULL;
}

static void name_plans(const struct side *old, size_t before, const struct side *now, size_t after, struct plan_difference *plan)
{
	plan->old_plan = plan_name(old, before);
	plan->now_plan = plan_name(now, after);
}

static bool compare_members(struct arena *arena, const struct side *old, const struct side *now, unsigned bank, struct plan_difference *plan)
{
	const size_t before = shown_in(old, bank), after = shown_in(now, bank);
	const bool alone = old->plan == now->plan, old_was_read = alone && old->images->members[before].table == NULL;
	*plan = (struct plan_difference){.banks = NULL};
	if ((old->plan->set != NULL || now->plan->set != NULL) && !list_banks(arena, old, now, bank, plan))
		return false;
	if (before == SIZE_MAX || after == SIZE_MAX) {
		plan->only = before == SIZE_MAX ? "new" : "old";
		name_plans(old, before, now, after, plan);
		return true;
	}
	name_plans(old, before, now, after, plan);
	if (!name_failures(arena, old, before, now, after, plan) ||
	    (alone && !judge_images(arena, old_was_read ? old : now, before, old_was_read, plan)))
		return false;
	const struct timeline *seen = plan->seen != NULL ? plan->seen->timeline : NULL;
	plan->comparison = comparison_create(seen != NULL && old_was_read ? seen : old->plan->members[before].timeline,
	                                     seen != NULL && !old_was_read ? seen : now->plan->members[after].timeline);
	return plan->comparison != NULL;
}

static bool compare_plans(struct scanlatch_difference *result, const struct side *old, const struct side *now)
{
	struct plan_difference *plans = arena_array(result->arena, banks_of(old, now), sizeof *plans);
	if (plans == NULL)
		return false;
	result->difference.plans = plans;
	for (unsigned bank = 0; bank < banks_of(old, now); bank++)
		if (!is_told(old, now, bank) && !compare_members(result->arena, old, now, bank, &plans[result->difference.plan_count++]))
			return false;
	return true;
}

static void compare_bytes(const struct image *old, const struct image *now, struct chip_difference *chip)
{
	chip->fate = CHIP_STAYS;
	for (size_t index = 0; index < now->length; index++) {
		if (old->bytes[index] == now->bytes[index])
			continue;
		if (chip->differing++ == 0)
			chip->first = index;
		chip->fate = CHIP_BURN;
	}
}

// What a chip was; the chips of all plans of a set are the same.
static size_t old_chip(const struct difference *difference, size_t chip)
{
	return difference->plans[0].comparison->old_chip_of[chip];
}

static struct chip_difference compare_chip(const struct difference *difference, const struct side *old, const struct side *now, size_t index)
{
	const struct chip *chip = &now->plan->plan->chips[index];
	const size_t before = old_chip(difference, index);
	struct chip_difference result = {.label = chip->label, .bytes = now->images->images[index].length, .fate = CHIP_NEW};
	if (before == SIZE_MAX)
		return result;
	if (strcmp(old->plan->plan->chips[before].label, chip->label) != 0)
		result.old_label = old->plan->plan->chips[before].label;
	if (strcmp(old->plan->plan->chips[before].part->name, chip->part->name) != 0 || old->images->images[before].length != result.bytes)
		result.fate = CHIP_OTHER_PART;
	else
		compare_bytes(&old->images->images[before], &now->images->images[index], &result);
	return result;
}

static bool is_gone(const struct difference *difference, const struct side *now, size_t old)
{
	for (size_t chip = 0; chip < now->plan->plan->chip_count; chip++)
		if (old_chip(difference, chip) == old)
			return false;
	return true;
}

// Whether images of either plan do what the other says.
static bool does_same(const struct plan_difference *plan)
{
	if (plan->comparison == NULL || !plan->comparison->same_deeds)
		return false;
	return plan->images != NULL ? plan->images_musts[0] == '\0' : strcmp(plan->old_musts, plan->now_musts) == 0;
}

// Where the machine that is meant is the same, chips with other bytes have it in another allotment of states: they do.
static void spare_chips(const struct difference *difference, struct chip_difference *chips)
{
	for (size_t index = 0; index < difference->chip_count; index++)
		if (chips[index].fate != CHIP_STAYS && chips[index].fate != CHIP_BURN)
			return;
	for (size_t index = 0; index < difference->plan_count; index++)
		if (!does_same(&difference->plans[index]))
			return;
	for (size_t index = 0; index < difference->chip_count; index++)
		if (chips[index].fate == CHIP_BURN)
			chips[index].fate = CHIP_OTHER_BYTES;
}

static bool compare_chips(struct scanlatch_difference *result, const struct side *old, const struct side *now)
{
	const size_t before = old->plan->plan->chip_count, after = now->plan->plan->chip_count;
	struct chip_difference *chips = arena_array(result->arena, before + after, sizeof *chips);
	struct difference *difference = &result->difference;
	if (chips == NULL)
		return false;
	difference->chips = chips;
	for (size_t index = 0; index < after; index++)
		chips[difference->chip_count++] = compare_chip(difference, old, now, index);
	for (size_t index = 0; index < before; index++)
		if (is_gone(difference, now, index))
			chips[difference->chip_count++] = (struct chip_difference){
				.label = old->plan->plan->chips[index].label, .fate = CHIP_GONE, .bytes = old->images->images[index].length};
	spare_chips(difference, chips);
	return true;
}

// A set's own bank of a number: the name of its plan; NULL where the set lists none.
static const char *listed_plan(const struct side *side, unsigned number)
{
	const struct set *set = side->plan->set->set;
	for (size_t index = 0; index < set->bank_count; index++)
		if (set->banks[index].number == number)
			return plan_name(side, index);
	return NULL;
}

static const char *or_null(const char *words)
{
	return words[0] != '\0' ? words : NULL;
}

// Adds a change of words if they differ; NULL: there were none, or are none.
static void add_set_change(struct difference *difference, struct change *changes, const char *what, const char *old, const char *now)
{
	if (old == now || (old != NULL && now != NULL && strcmp(old, now) == 0))
		return;
	changes[difference->set_change_count++] = (struct change){
		.section = CHANGE_WORDS, .kind = old == NULL ? "added" : now == NULL ? "removed" : "changed", .what = what, .old = old, .now = now};
}

// Banks of both sets that one lists and the other does not, in which that one's repeats bank 0.
static bool compare_banks(struct scanlatch_difference *result, const struct side *old, const struct side *now, struct change *changes)
{
	for (unsigned bank = 0; bank < banks_of(old, now); bank++) {
		const char *before = listed_plan(old, bank), *after = listed_plan(now, bank);
		const bool both = shown_in(old, bank) != SIZE_MAX && shown_in(now, bank) != SIZE_MAX;
		if (!both || (before == NULL) == (after == NULL))
			continue;
		const char *what = arena_format(result->arena, "bank %u", bank);
		if (what == NULL)
			return false;
		add_set_change(&result->difference, changes, what, before != NULL ? before : "a repeat of bank 0", after != NULL ? after : "a repeat of bank 0");
	}
	return true;
}

static bool compare_sets(struct scanlatch_difference *result, const struct side *old, const struct side *now)
{
	struct difference *difference = &result->difference;
	if (old->plan == now->plan || old->plan->set == NULL || now->plan->set == NULL)
		return true;
	const struct set *before = old->plan->set->set, *after = now->plan->set->set;
	struct change *changes = arena_array(result->arena, 2 + banks_of(old, now), sizeof *changes);
	if (changes == NULL)
		return false;
	difference->set_changes = changes;
	add_set_change(difference, changes, "the set's name", before->name, after->name);
	add_set_change(difference, changes, "the set's note", or_null(before->note), or_null(after->note));
	return compare_banks(result, old, now, changes);
}

static bool name_sides(struct scanlatch_difference *result, const char *old_name, const char *now_name)
{
	result->difference.old_name = printable_base_name(result->arena, old_name);
	result->difference.now_name = printable_base_name(result->arena, now_name);
	return result->difference.old_name != NULL && result->difference.now_name != NULL;
}

static bool compare_sides(struct scanlatch_difference *result, const struct side *old, const struct side *now)
{
	result->difference.alone = old->plan == now->plan;
	return compare_plans(result, old, now) && compare_chips(result, old, now) && compare_sets(result, old, now);
}

scanlatch_difference *scanlatch_compare(const char *old_name, const scanlatch_proofs *old, const char *new_name, const scanlatch_proofs *now)
{
	const struct side before = {old->images->plan, old->images, old}, after = {now->images->plan, now->images, now};
	struct arena *arena = arena_create();
	scanlatch_difference *result = arena != NULL ? arena_alloc(arena, sizeof *result) : NULL;
	if (result == NULL) {
		arena_destroy(arena);
		return NULL;
	}
	result->arena = arena;
	if (name_sides(result, old_name, new_name) && compare_sides(result, &before, &after))
		return result;
	scanlatch_difference_destroy(result);
	return NULL;
}

void scanlatch_difference_destroy(scanlatch_difference *difference)
{
	if (difference == NULL)
		return;
	for (size_t index = 0; index < difference->difference.plan_count; index++) {
		comparison_destroy(difference->difference.plans[index].comparison);
		seen_destroy(difference->difference.plans[index].seen);
	}
	arena_destroy(difference->arena);
}

bool scanlatch_difference_found(const scanlatch_difference *difference)
{
	return difference_found(&difference->difference);
}

char *scanlatch_difference_text(const scanlatch_difference *difference)
{
	struct text text = {0};
	view_difference(&text, &difference->difference);
	return take_string(&text);
}

char *scanlatch_difference_markdown(const scanlatch_difference *difference)
{
	struct text text = {0};
	view_difference_markdown(&text, &difference->difference);
	return take_string(&text);
}

char *scanlatch_difference_svg(const scanlatch_difference *difference)
{
	struct text text = {0};
	static const struct picture alone = {.id = "difference", .standalone = true};
	text.failed = !view_difference_svg(&text, &alone, &difference->difference);
	return take_string(&text);
}

char *scanlatch_difference_json(const scanlatch_difference *difference)
{
	return take_json(view_difference_json(&difference->difference));
}
