// A comparison as Markdown, for a review: tables that also read well as plain text.
#include <string.h>

#include "base/excerpt.h"
#include "base/text.h"
#include "view/diff.h"

// Nothing that a plan says can end a cell or begin markup.
static void put_escaped(struct text *out, const char *words)
{
	static const char marks[] = "\\`*_{}[]<>#|~&!";
	for (; *words != '\0'; words++) {
		if (strchr(marks, *words) != NULL)
			text_put(out, "\\");
		text_put_bytes(out, words, 1);
	}
}

// Words are made first, and escaped when they are whole.
struct page {
	struct text *out;
	struct text words;
};

static void end_words(struct page *page, const char *after)
{
	struct text printable = {0};
	excerpt_put_printable(text_string(&page->words), page->words.length, &printable);
	put_escaped(page->out, text_string(&printable));
	page->out->failed = page->out->failed || printable.failed;
	text_release(&printable);
	text_put(page->out, after);
	page->words.length = 0;
	text_put(&page->words, "");
}

static void put_cell(struct page *page, const char *words)
{
	text_put(&page->words, words);
	end_words(page, " | ");
}

static void begin_table(struct page *page, const char *first, const char *second)
{
	text_printf(page->out, "| %s | %s |\n|---|---|\n", first, second);
}

static void put_fact(struct page *page, const struct fact *fact)
{
	text_put(page->out, "| ");
	put_cell(page, fact->what);
	text_put_fact_value(&page->words, fact);
	end_words(page, " |\n");
}

static void put_change(struct page *page, const struct comparison *comparison, const struct change *change)
{
	text_put(page->out, "| ");
	if (change->section != CHANGE_LIMITS)
		put_cell(page, change_section_name(change->section));
	text_put_change_subject(&page->words, change);
	end_words(page, " | ");
	text_put_change_value(&page->words, comparison, change);
	end_words(page, " |\n");
}

static void put_heading(struct page *page, const struct plan_difference *plan, const char *what)
{
	if (plan->bank_count == 0)
		return;
	text_printf(page->out, "### %s", what);
	put_bank_numbers(&page->words, plan);
	end_words(page, "\n\n");
}

static void put_facts(struct page *page, const struct plan_difference *plan)
{
	const struct comparison *comparison = plan->comparison;
	put_heading(page, plan, "");
	if (comparison == NULL) {
		text_printf(page->out, "Only the %s set has %s.\n\n", plan->only, plan->bank_count == 1 ? "it" : "them");
		return;
	}
	const struct fact musts = musts_fact(plan), unlisted = unlisted_fact(plan), advice = advice_fact(plan);
	begin_table(page, "at the bench", "");
	put_fact(page, &musts);
	if (unlisted.what != NULL)
		put_fact(page, &unlisted);
	for (size_t index = 0; tells_facts(plan) && index < comparison->fact_count; index++)
		put_fact(page, &comparison->facts[index]);
	for (size_t index = 0; index < comparison->count; index++)
		if (comparison->changes[index].section == CHANGE_LIMITS)
			put_change(page, comparison, &comparison->changes[index]);
	if (!advice.same && plan->images == NULL)
		put_fact(page, &advice);
	text_put(page->out, "\n");
}

static void put_chips(struct page *page, const struct difference *difference)
{
	const char *advice = chips_advice(difference);
	begin_table(page, "chip", "");
	for (size_t index = 0; index < difference->chip_count; index++) {
		text_put(page->out, "| ");
		put_cell(page, difference->chips[index].label);
		put_chip_fate(&page->words, &difference->chips[index]);
		end_words(page, " |\n");
	}
	if (advice != NULL)
		text_printf(page->out, "\n%s\n", advice);
	text_put(page->out, "\n");
}

static void begin_changes(struct page *page)
{
	text_put(page->out, "| | what | change |\n|---|---|---|\n");
}

static void put_set(struct page *page, const struct difference *difference)
{
	if (difference->set_change_count == 0)
		return;
	text_put(page->out, "### the set\n\n");
	begin_changes(page);
	for (size_t index = 0; index < difference->set_change_count; index++)
		put_change(page, NULL, &difference->set_changes[index]);
	text_put(page->out, "\n");
}

static void put_changes(struct page *page, const struct plan_difference *plan)
{
	if (plan->comparison == NULL || plan->comparison->edits == 0)
		return;
	put_heading(page, plan, "changes in ");
	begin_changes(page);
	for (size_t index = 0; index < plan->comparison->count; index++)
		if (plan->comparison->changes[index].section != CHANGE_LIMITS)
			put_change(page, plan->comparison, &plan->comparison->changes[index]);
	text_put(page->out, "\n");
}

static size_t longest_run(const char *words, char mark)
{
	size_t longest = 0, run = 0;
	for (; *words != '\0'; words++) {
		run = *words == mark ? run + 1 : 0;
		longest = run > longest ? run : longest;
	}
	return longest;
}

// As in a terminal, in a fence that nothing in it can end.
static void put_proofs(struct page *page, const struct plan_difference *plan)
{
	struct text proofs = {0};
	put_failures(&proofs, plan);
	if (proofs.length > 0) {
		const size_t run = longest_run(text_string(&proofs), '`'), fence = run < 3 ? 3 : run + 1;
		put_heading(page, plan, "proofs of ");
		text_put_repeated(page->out, '`', fence);
		text_printf(page->out, "text\n%s", text_string(&proofs));
		text_put_repeated(page->out, '`', fence);
		text_put(page->out, "\n\n");
	}
	page->out->failed = page->out->failed || proofs.failed;
	text_release(&proofs);
}

void view_difference_markdown(struct text *out, const struct difference *difference)
{
	struct page page = {out, {0}};
	text_put(out, "**");
	put_difference_headline(&page.words, difference);
	end_words(&page, "**\n\n");
	for (size_t index = 0; index < difference->plan_count; index++)
		put_facts(&page, &difference->plans[index]);
	put_chips(&page, difference);
	put_set(&page, difference);
	for (size_t index = 0; index < difference->plan_count; index++) {
		put_changes(&page, &difference->plans[index]);
		put_proofs(&page, &difference->plans[index]);
	}
	out->failed = out->failed || page.words.failed;
	text_release(&page.words);
}
