#include "view/diff.h"

#include <inttypes.h>
#include <string.h>

#include "base/text.h"
#include "view/figures.h"

bool difference_found(const struct difference *difference)
{
	for (size_t index = 0; index < difference->plan_count; index++)
		if (difference->plans[index].comparison == NULL || !difference->plans[index].comparison->same_meaning)
			return true;
	for (size_t index = 0; index < difference->chip_count; index++)
		if (difference->chips[index].fate != CHIP_STAYS)
			return true;
	return false;
}

// Words are made first, and wrapped when they are whole.
struct report {
	struct text *out;
	struct text words;
};

static void put_words(struct report *report, size_t indent)
{
	text_put_repeated(report->out, ' ', indent);
	text_put_wrapped(report->out, text_string(&report->words), indent, indent + 2);
	text_put(report->out, "\n");
	report->words.length = 0;
	text_put(&report->words, "");
}

static size_t count_changes(const struct difference *difference)
{
	size_t count = 0;
	for (size_t index = 0; index < difference->plan_count; index++)
		count += difference->plans[index].comparison != NULL ? difference->plans[index].comparison->count : 1;
	return count;
}

static bool same_timelines(const struct difference *difference)
{
	for (size_t index = 0; index < difference->plan_count; index++)
		if (difference->plans[index].comparison == NULL || !difference->plans[index].comparison->same_timeline)
			return false;
	return true;
}

static bool same_bytes(const struct difference *difference)
{
	for (size_t index = 0; index < difference->chip_count; index++)
		if (difference->chips[index].fate != CHIP_STAYS)
			return false;
	return true;
}

static void put_headline(struct text *words, const struct difference *difference)
{
	const size_t changes = count_changes(difference);
	text_printf(words, "%s to %s: ", difference->old_name, difference->now_name);
	if (!difference->alone) {
		text_put(words, same_timelines(difference) ? "same timeline" : "another timeline");
		text_put(words, changes == 0 ? ", nothing changed" : ", ");
		if (changes > 0)
			text_put_count(words, changes, "change", "changes");
	} else {
		text_put(words, "a plan and images");
	}
	if (difference->has_chips)
		text_put(words, same_bytes(difference) ? "; the images are the same bytes" : "; the images are not the same bytes");
}

// Musts.

static void put_musts(struct text *words, const struct plan_difference *plan)
{
	const bool held = plan->old_musts[0] == '\0', holds = plan->now_musts[0] == '\0';
	if (held && holds)
		text_put(words, "every must holds, before and after: the frame closes");
	else if (holds)
		text_printf(words, "every must holds now; before, these failed: %s", plan->old_musts);
	else if (held)
		text_printf(words, "musts that fail now, and did not before: %s", plan->now_musts);
	else
		text_printf(words, "musts that fail now: %s; before: %s", plan->now_musts, plan->old_musts);
}

// Chips.

static void put_chip(struct text *words, const struct chip_difference *chip)
{
	text_printf(words, "%s", chip->label);
	switch (chip->fate) {
	case CHIP_STAYS: text_put(words, " stays"); break;
	case CHIP_BURN: text_printf(words, ": burn again, %zu of %zu bytes differ, from 0x%zX on", chip->differing, chip->bytes, chip->first); break;
	case CHIP_NEW: text_printf(words, " is new: burn its %zu bytes", chip->bytes); break;
	case CHIP_GONE: text_put(words, " is gone"); break;
	case CHIP_OTHER_SIZE: text_printf(words, " is another part: burn its %zu bytes", chip->bytes); break;
	}
}

static void put_chips(struct report *report, const struct difference *difference)
{
	if (!difference->has_chips)
		return;
	text_put(report->out, "chips to burn\n");
	for (size_t index = 0; index < difference->chip_count; index++) {
		put_chip(&report->words, &difference->chips[index]);
		put_words(report, 2);
	}
}

// Changes.

static void put_changes(struct report *report, const struct comparison *comparison)
{
	unsigned section = CHANGE_SECTIONS;
	for (size_t index = 0; index < comparison->count; index++) {
		const struct change *change = &comparison->changes[index];
		if (change->section != section)
			text_printf(report->out, "%s\n", change_section_name(change->section));
		section = change->section;
		text_put_change(&report->words, comparison, change);
		put_words(report, 2);
	}
}

static void put_plan(struct report *report, const struct plan_difference *plan)
{
	if (plan->banks != NULL)
		text_printf(report->out, "\n%s\n", plan->banks);
	if (plan->only != NULL) {
		text_put(&report->words, plan->only);
		put_words(report, 2);
	}
	if (plan->old_musts != NULL && plan->now_musts != NULL) {
		put_musts(&report->words, plan);
		put_words(report, 0);
	}
	if (plan->comparison != NULL)
		put_changes(report, plan->comparison);
}

void view_difference(struct text *out, const struct difference *difference)
{
	struct report report = {out, {0}};
	put_headline(&report.words, difference);
	put_words(&report, 0);
	for (size_t index = 0; index < difference->plan_count; index++)
		put_plan(&report, &difference->plans[index]);
	put_chips(&report, difference);
	out->failed = out->failed || report.words.failed;
	text_release(&report.words);
}

// Markdown: characters that would end a cell or begin markup are escaped.
static void put_cell(struct text *out, const char *words)
{
	static const char marks[] = "\\`*_{}[]<>#|";
	for (; words != NULL && *words != '\0'; words++) {
		if (strchr(marks, *words) != NULL)
			text_put(out, "\\");
		text_put_bytes(out, words, 1);
	}
}

static void put_row(struct text *out, const struct comparison *comparison, const struct change *change)
{
	struct text words = {0};
	text_put_change(&words, comparison, change);
	text_printf(out, "| %s | ", change_section_name(change->section));
	put_cell(out, text_string(&words));
	text_put(out, " |\n");
	out->failed = out->failed || words.failed;
	text_release(&words);
}

static void put_plan_table(struct text *out, const struct plan_difference *plan)
{
	if (plan->banks != NULL)
		text_printf(out, "### %s\n\n", plan->banks);
	if (plan->only != NULL)
		text_printf(out, "%s\n\n", plan->only);
	if (plan->old_musts != NULL && plan->now_musts != NULL) {
		put_musts(out, plan);
		text_put(out, ".\n\n");
	}
	if (plan->comparison == NULL || plan->comparison->count == 0)
		return;
	text_put(out, "| | change |\n|---|---|\n");
	for (size_t index = 0; index < plan->comparison->count; index++)
		put_row(out, plan->comparison, &plan->comparison->changes[index]);
	text_put(out, "\n");
}

void view_difference_markdown(struct text *out, const struct difference *difference)
{
	struct text words = {0};
	put_headline(&words, difference);
	text_put(out, "**");
	put_cell(out, text_string(&words));
	text_put(out, "**\n\n");
	for (size_t index = 0; index < difference->plan_count; index++)
		put_plan_table(out, &difference->plans[index]);
	if (difference->has_chips)
		text_put(out, "| chip | |\n|---|---|\n");
	for (size_t index = 0; index < difference->chip_count; index++) {
		words.length = 0;
		put_chip(&words, &difference->chips[index]);
		const size_t label = strlen(difference->chips[index].label);
		text_put(out, "| ");
		put_cell(out, difference->chips[index].label);
		text_put(out, " | ");
		put_cell(out, text_string(&words) + label + (text_string(&words)[label] == ':' ? 2 : 1));
		text_put(out, " |\n");
	}
	out->failed = out->failed || words.failed;
	text_release(&words);
}

static json_t *change_json(const struct comparison *comparison, const struct change *change)
{
	json_t *object = json_object();
	struct text words = {0};
	text_put_change(&words, comparison, change);
	json_put(&object, "section", json_string(change_section_name(change->section)));
	json_put(&object, "kind", json_string(change->kind));
	if (change->lines != NULL)
		json_put(&object, "lines", json_string(change->lines));
	json_put(&object, "what", json_string(change->what));
	if (change->old != NULL)
		json_put(&object, "old", json_string(change->old));
	if (change->now != NULL)
		json_put(&object, "new", json_string(change->now));
	if (change->shifted) {
		json_put(&object, "cells", json_integer(change->cells));
		json_put(&object, "ticks", json_sprintf("%" PRId64, change->ticks));
	}
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

static json_t *plan_json(const struct plan_difference *plan)
{
	json_t *object = json_object(), *changes = json_array();
	if (plan->banks != NULL)
		json_put(&object, "banks", json_string(plan->banks));
	if (plan->only != NULL)
		json_put(&object, "only", json_string(plan->only));
	if (plan->old_musts != NULL && plan->now_musts != NULL) {
		json_t *musts = json_object();
		json_put(&musts, "old", names_json(plan->old_musts));
		json_put(&musts, "new", names_json(plan->now_musts));
		json_put(&object, "musts", musts);
	}
	if (plan->comparison != NULL) {
		json_put(&object, "same_timeline", json_boolean(plan->comparison->same_timeline));
		for (size_t index = 0; index < plan->comparison->count; index++)
			json_append(&changes, change_json(plan->comparison, &plan->comparison->changes[index]));
	}
	json_put(&object, "changes", changes);
	return object;
}

static json_t *chip_json(const struct chip_difference *chip)
{
	static const char *const fates[] = {
		[CHIP_STAYS] = "stays", [CHIP_BURN] = "burn", [CHIP_NEW] = "new", [CHIP_GONE] = "gone", [CHIP_OTHER_SIZE] = "other size",
	};
	json_t *object = json_object();
	json_put(&object, "label", json_string(chip->label));
	json_put(&object, "fate", json_string(fates[chip->fate]));
	json_put(&object, "bytes", json_integer((json_int_t)chip->bytes));
	if (chip->fate == CHIP_BURN) {
		json_put(&object, "differing", json_integer((json_int_t)chip->differing));
		json_put(&object, "first", json_integer((json_int_t)chip->first));
	}
	return object;
}

json_t *view_difference_json(const struct difference *difference)
{
	json_t *object = json_object(), *plans = json_array(), *chips = json_array();
	json_put(&object, "old", json_string(difference->old_name));
	json_put(&object, "new", json_string(difference->now_name));
	json_put(&object, "differs", json_boolean(difference_found(difference)));
	json_put(&object, "same_timeline", json_boolean(same_timelines(difference)));
	if (difference->has_chips)
		json_put(&object, "same_bytes", json_boolean(same_bytes(difference)));
	for (size_t index = 0; index < difference->plan_count; index++)
		json_append(&plans, plan_json(&difference->plans[index]));
	for (size_t index = 0; index < difference->chip_count; index++)
		json_append(&chips, chip_json(&difference->chips[index]));
	json_put(&object, "plans", plans);
	if (difference->has_chips)
		json_put(&object, "chips", chips);
	else
		json_decref(chips);
	return object;
}
