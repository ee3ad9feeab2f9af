#include "view/diff.h"

#include <inttypes.h>
#include <string.h>

#include "base/excerpt.h"
#include "base/text.h"
#include "view/figures.h"
#include "view/proofs.h"

static bool plan_differs(const struct plan_difference *plan)
{
	if (plan->comparison == NULL || !plan->comparison->same_meaning)
		return true;
	return plan->images != NULL ? plan->images_musts[0] != '\0' : strcmp(plan->old_musts, plan->now_musts) != 0;
}

bool difference_found(const struct difference *difference)
{
	for (size_t index = 0; index < difference->plan_count; index++)
		if (plan_differs(&difference->plans[index]))
			return true;
	return false;
}

bool same_timeline(const struct plan_difference *plan)
{
	return plan->comparison != NULL && plan->unseen == NULL && plan->comparison->same_timeline;
}

bool same_timelines(const struct difference *difference)
{
	for (size_t index = 0; index < difference->plan_count; index++)
		if (!same_timeline(&difference->plans[index]))
			return false;
	return true;
}

bool same_images(const struct difference *difference)
{
	for (size_t index = 0; index < difference->chip_count; index++)
		if (difference->chips[index].fate != CHIP_STAYS)
			return false;
	return true;
}

static size_t count_edits(const struct difference *difference)
{
	size_t count = difference->set_change_count;
	for (size_t index = 0; index < difference->plan_count; index++)
		count += difference->plans[index].comparison != NULL ? difference->plans[index].comparison->edits : 1;
	return count;
}

void put_difference_headline(struct text *out, const struct difference *difference)
{
	const size_t edits = count_edits(difference);
	text_put(out, difference->old_name);
	if (strcmp(difference->old_name, difference->now_name) != 0)
		text_printf(out, " to %s", difference->now_name);
	text_put(out, ": ");
	if (difference->alone) {
		text_put(out, difference_found(difference) ? "the images do not do what the plan says" : "the images do what the plan says");
		if (edits > 0) {
			text_put(out, ", ");
			text_put_count(out, edits, "change", "changes");
		}
	} else {
		text_put(out, same_timelines(difference) ? "same timeline, " : "another timeline, ");
		if (edits == 0)
			text_put(out, "nothing changed");
		else
			text_put_count(out, edits, "change", "changes");
		if (edits > 0 && !difference_found(difference))
			text_put(out, " in words only");
	}
	text_put(out, same_images(difference) ? "; the images are the same bytes" : "; the images are not the same bytes");
}

struct fact musts_fact(const struct plan_difference *plan)
{
	if (plan->images != NULL)
		return (struct fact){"musts in the images", NULL, plan->images_words, false};
	return (struct fact){"musts", plan->old_words, plan->now_words, strcmp(plan->old_musts, plan->now_musts) == 0};
}

struct fact unlisted_fact(const struct plan_difference *plan)
{
	if (plan->images == NULL || plan->images_musts[0] == '\0' || plan->comparison->edits > 0)
		return (struct fact){NULL, NULL, NULL, false};
	return (struct fact){plan->unseen != NULL ? "changes cannot be told" : "changes", NULL,
	                     plan->unseen != NULL ? plan->unseen : "none in what the images' loop shows and holds", false};
}

bool tells_facts(const struct plan_difference *plan)
{
	return plan->images == NULL || plan->seen != NULL;
}

struct fact advice_fact(const struct plan_difference *plan)
{
	return (struct fact){"advice missed", plan->old_advice[0] == '\0' ? "none" : plan->old_advice,
	                     plan->now_advice[0] == '\0' ? "none" : plan->now_advice, strcmp(plan->old_advice, plan->now_advice) == 0};
}

void put_chip_fate(struct text *out, const struct chip_difference *chip)
{
	if (chip->old_label != NULL)
		text_printf(out, "was %s; ", chip->old_label);
	switch (chip->fate) {
	case CHIP_STAYS: text_put(out, "stays as it is"); break;
	case CHIP_BURN: text_put(out, "burn it again, "); break;
	case CHIP_OTHER_BYTES: break;
	case CHIP_NEW: text_printf(out, "is new, burn its %zu bytes", chip->bytes); break;
	case CHIP_GONE: text_put(out, "is not used any more"); break;
	case CHIP_OTHER_PART: text_printf(out, "is another part, burn its %zu bytes", chip->bytes); break;
	}
	if (chip->fate == CHIP_BURN || chip->fate == CHIP_OTHER_BYTES)
		text_printf(out, "%zu of %zu bytes differ, the first at 0x%zX", chip->differing, chip->bytes, chip->first);
}

const char *chips_advice(const struct difference *difference)
{
	for (size_t index = 0; index < difference->chip_count; index++)
		if (difference->chips[index].fate == CHIP_OTHER_BYTES)
			return "no chip must be burned again, for either side's do the same; but do not mix them: burn all that differ, or none";
	return NULL;
}

static void put_bank_plans(struct text *out, const struct plan_difference *plan)
{
	const char *name = plan->now_plan != NULL ? plan->now_plan : plan->old_plan;
	text_printf(out, " (%s", name);
	if (plan->old_plan != NULL && strcmp(plan->old_plan, name) != 0)
		text_printf(out, ", was %s", plan->old_plan);
	text_put(out, ")");
}

void put_bank_numbers(struct text *out, const struct plan_difference *plan)
{
	text_put(out, plan->bank_count == 1 ? "bank" : "banks");
	for (size_t index = 0; index < plan->bank_count; index++) {
		size_t last = index;
		while (last + 1 < plan->bank_count && plan->banks[last + 1] == plan->banks[last] + 1)
			last++;
		text_printf(out, "%s %" PRIu32, index == 0 ? "" : last + 1 == plan->bank_count ? " and" : ",", plan->banks[index]);
		if (last > index + 1) {
			text_printf(out, " to %" PRIu32, plan->banks[last]);
			index = last;
		}
	}
	put_bank_plans(out, plan);
}

#define WRAPPED_INDENT 4

// Words are made first, and wrapped when they are whole.
struct report {
	struct text *out;
	struct text words;
};

static void put_words(struct report *report, size_t indent)
{
	struct text printable = {0};
	excerpt_put_printable(text_string(&report->words), report->words.length, &printable);
	text_put_repeated(report->out, ' ', indent);
	text_put_wrapped(report->out, text_string(&printable), indent, WRAPPED_INDENT);
	text_put(report->out, "\n");
	report->out->failed = report->out->failed || printable.failed;
	text_release(&printable);
	report->words.length = 0;
	text_put(&report->words, "");
}

void text_put_fact_value(struct text *out, const struct fact *fact)
{
	text_put(out, fact->now);
	if (fact->same)
		text_put(out, ", as before");
	else if (fact->old != NULL)
		text_printf(out, ", was %s", fact->old);
}

static void put_fact(struct report *report, const struct fact *fact)
{
	text_printf(&report->words, "%s: ", fact->what);
	text_put_fact_value(&report->words, fact);
	put_words(report, 2);
}

static void put_change(struct report *report, const struct comparison *comparison, const struct change *change)
{
	text_put_change(&report->words, comparison, change);
	put_words(report, 2);
}

// What the machine does: first what matters at the bench.
static void put_plan_facts(struct report *report, const struct plan_difference *plan)
{
	const struct fact musts = musts_fact(plan), unlisted = unlisted_fact(plan), advice = advice_fact(plan);
	const struct comparison *comparison = plan->comparison;
	put_fact(report, &musts);
	if (unlisted.what != NULL)
		put_fact(report, &unlisted);
	for (size_t index = 0; tells_facts(plan) && index < comparison->fact_count; index++)
		put_fact(report, &comparison->facts[index]);
	for (size_t index = 0; index < comparison->count; index++)
		if (comparison->changes[index].section == CHANGE_LIMITS)
			put_change(report, comparison, &comparison->changes[index]);
	if (!advice.same && plan->images == NULL)
		put_fact(report, &advice);
}

static void put_heading(struct report *report, const struct plan_difference *plan, const char *what)
{
	if (plan->bank_count == 0)
		return;
	text_put(&report->words, what);
	put_bank_numbers(&report->words, plan);
	put_words(report, 0);
}

void put_only(struct text *out, const struct plan_difference *plan)
{
	text_printf(out, "only the %s set has %s", plan->only, plan->bank_count == 1 ? "it" : "them");
}

static void put_facts(struct report *report, const struct plan_difference *plan)
{
	put_heading(report, plan, "");
	if (plan->comparison != NULL) {
		put_plan_facts(report, plan);
		return;
	}
	put_only(&report->words, plan);
	put_words(report, 2);
}

static void put_chips(struct report *report, const struct difference *difference)
{
	const char *advice = chips_advice(difference);
	text_put(report->out, "chips\n");
	for (size_t index = 0; index < difference->chip_count; index++) {
		text_printf(&report->words, "%s: ", difference->chips[index].label);
		put_chip_fate(&report->words, &difference->chips[index]);
		put_words(report, 2);
	}
	if (advice != NULL) {
		text_put(&report->words, advice);
		put_words(report, 2);
	}
}

// What a set is, apart from the plans of its banks.
static void put_set(struct report *report, const struct difference *difference)
{
	if (difference->set_change_count > 0)
		text_put(report->out, "set\n");
	for (size_t index = 0; index < difference->set_change_count; index++)
		put_change(report, NULL, &difference->set_changes[index]);
}

static void put_changes(struct report *report, const struct comparison *comparison)
{
	unsigned section = CHANGE_LIMITS;
	for (size_t index = 0; index < comparison->count; index++) {
		const struct change *change = &comparison->changes[index];
		if (change->section == CHANGE_LIMITS)
			continue;
		if (change->section != section)
			text_printf(report->out, "%s\n", change_section_name(change->section));
		section = change->section;
		put_change(report, comparison, change);
	}
}

void put_failures(struct text *out, const struct plan_difference *plan)
{
	for (enum proof_kind kind = PROOF_CLOSURE; plan->images != NULL && kind < PROOF_COUNT; kind++)
		if (proof_is_must(kind) && plan->images->proof[kind].verdict == VERDICT_FAIL)
			view_proof(out, plan->images, kind, false);
}

static void put_plan(struct report *report, const struct plan_difference *plan)
{
	if (plan->comparison == NULL || (plan->bank_count > 0 && plan->comparison->edits == 0 && plan->images == NULL))
		return;
	if (plan->images == NULL || plan->images_musts[0] != '\0')
		put_heading(report, plan, plan->comparison->edits > 0 ? "changes in " : "");
	put_changes(report, plan->comparison);
	put_failures(report->out, plan);
}

void view_difference(struct text *out, const struct difference *difference)
{
	struct report report = {out, {0}};
	put_difference_headline(&report.words, difference);
	put_words(&report, 0);
	for (size_t index = 0; index < difference->plan_count; index++)
		put_facts(&report, &difference->plans[index]);
	put_chips(&report, difference);
	put_set(&report, difference);
	for (size_t index = 0; index < difference->plan_count; index++)
		put_plan(&report, &difference->plans[index]);
	out->failed = out->failed || report.words.failed;
	text_release(&report.words);
}
