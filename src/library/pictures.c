// Pictures of a plan, or of a bank of a set.
#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "library/library.h"
#include "plan/read.h"
#include "view/pictures.h"

static const struct picture alone = {.id = "picture", .standalone = true};

static struct place whole_of(const scanlatch_plan *plan)
{
	return (struct place){plan->source, 0, 0};
}

static void report_memory(const scanlatch_plan *plan, scanlatch_messages *messages)
{
	diagnose(messages->diagnostics, RULE_OUT_OF_MEMORY, whole_of(plan), "memory is out");
}

// The member that a bank shows. NULL after reporting that there is no such bank.
static const struct member *member_of_bank(const scanlatch_plan *plan, unsigned bank, scanlatch_messages *messages)
{
	const unsigned bits = plan->plan->bank_bits;
	if (bank >> bits == 0)
		return &plan->members[plan->set != NULL ? set_bank_shown(plan->set->set, bank) : 0];
	diagnose(messages->diagnostics, RULE_UNKNOWN_BANK, whole_of(plan), "there is no bank %u", bank);
	if (bits == 0)
		diagnose_hint(messages->diagnostics, "the plan is no set, and has bank 0 alone");
	else
		diagnose_hint(messages->diagnostics, "banks are 0 to %u", (1u << bits) - 1);
	return NULL;
}

// Reads a line's number. False if it is no number.
static bool read_number(const char *words, uint64_t *number)
{
	uint64_t value = 0;
	if (words[0] == '\0' || strlen(words) > 18 || strspn(words, "0123456789") != strlen(words))
		return false;
	for (const char *digit = words; *digit != '\0'; digit++)
		value = value * 10 + (uint64_t)(*digit - '0');
	*number = value;
	return true;
}

static void hint_types(const struct plan *plan, const char *wanted, struct diagnostics *diagnostics)
{
	struct arena *arena = arena_create();
	const char **names = arena != NULL ? arena_array(arena, plan->line_count, sizeof *names) : NULL;
	for (size_t type = 0; names != NULL && type < plan->line_count; type++)
		names[type] = plan->lines[type].name;
	const char *nearest = names != NULL ? nearest_word(wanted, names, plan->line_count) : NULL;
	struct text list = {0};
	for (size_t type = 0; type < plan->line_count && type < 8; type++)
		text_printf(&list, "%s\"%s\"", type == 0 ? "" : ", ", plan->lines[type].name);
	if (nearest != NULL)
		diagnose_hint(diagnostics, "did you mean \"%s\"?", nearest);
	else
		diagnose_hint(diagnostics, "line types are %s%s", text_string(&list), plan->line_count > 8 ? " and others" : "");
	text_release(&list);
	arena_destroy(arena);
}

// The line of the frame that words name: a type's first line, or a number. False after reporting.
static bool find_line(const scanlatch_plan *plan, const struct timeline *timeline, const char *words, uint32_t *line,
                      scanlatch_messages *messages)
{
	uint64_t number;
	for (size_t type = 0; type < timeline->plan->line_count; type++) {
		if (strcmp(timeline->plan->lines[type].name, words) != 0)
			continue;
		*line = picture_line_of_type(timeline, type);
		if (*line == UINT32_MAX)
			diagnose(messages->diagnostics, RULE_NOT_DRAWN, whole_of(plan), "line type \"%s\" is in no line of the frame", words);
		return *line != UINT32_MAX;
	}
	if (!read_number(words, &number)) {
		diagnose(messages->diagnostics, RULE_UNKNOWN_LINE, whole_of(plan), "there is no line type \"%s\"", SHORT(words));
		hint_types(timeline->plan, words, messages->diagnostics);
		return false;
	}
	if (number >= timeline->line_count) {
		diagnose(messages->diagnostics, RULE_UNKNOWN_LINE, whole_of(plan), "there is no line %" PRIu64, number);
		if (timeline->line_count == 1)
			diagnose_hint(messages->diagnostics, "the frame has line 0 alone");
		else
			diagnose_hint(messages->diagnostics, "the frame's lines are 0 to %" PRIu32, timeline->line_count - 1);
		return false;
	}
	*line = (uint32_t)number;
	return true;
}

// The line that is asked for, of a bank; NULL words: the commonest. NULL after reporting.
static const struct timeline *find_drawn(const scanlatch_plan *plan, unsigned bank, const char *words, uint32_t *line,
                                         scanlatch_messages *messages)
{
	const struct member *member = member_of_bank(plan, bank, messages);
	if (member == NULL)
		return NULL;
	if (words == NULL)
		*line = picture_common_line(member->timeline);
	else if (!find_line(plan, member->timeline, words, line, messages))
		return NULL;
	return member->timeline;
}

// Takes what was drawn; NULL after reporting that memory is out.
static char *take_picture(struct text *text, bool drawn, const scanlatch_plan *plan, scanlatch_messages *messages)
{
	text->failed = text->failed || !drawn;
	char *string = take_string(text);
	if (string == NULL)
		report_memory(plan, messages);
	return string;
}

char *scanlatch_draw_line(const scanlatch_plan *plan, unsigned bank, const char *line, scanlatch_messages *messages)
{
	struct text text = {0};
	uint32_t number;
	const struct timeline *timeline = find_drawn(plan, bank, line, &number, messages);
	return timeline != NULL ? take_picture(&text, view_line_svg(&text, &alone, timeline, number), plan, messages) : NULL;
}

char *scanlatch_draw_line_text(const scanlatch_plan *plan, unsigned bank, const char *line, unsigned columns, bool ascii,
                               scanlatch_messages *messages)
{
	struct text text = {0};
	uint32_t number;
	const struct timeline *timeline = find_drawn(plan, bank, line, &number, messages);
	return timeline != NULL ? take_picture(&text, view_line_text(&text, timeline, number, columns, ascii), plan, messages) : NULL;
}

char *scanlatch_draw_frame(const scanlatch_plan *plan, unsigned bank, bool interleaved, scanlatch_messages *messages)
{
	struct text text = {0};
	const struct member *member = member_of_bank(plan, bank, messages);
	bool interlaced = false;
	if (member == NULL)
		return NULL;
	if (interleaved && !picture_interlaced(member->timeline, &interlaced)) {
		report_memory(plan, messages);
		return NULL;
	}
	if (interleaved && !interlaced) {
		diagnose(messages->diagnostics, RULE_NOT_DRAWN, whole_of(plan),
		         "there are no fields to interleave: the frame of \"%s\" is not interlaced", member->plan->name);
		return NULL;
	}
	return take_picture(&text, view_frame_svg(&text, &alone, member->timeline, interleaved), plan, messages);
}

char *scanlatch_draw_phase(const scanlatch_plan *plan, unsigned bank, scanlatch_messages *messages)
{
	struct text text = {0};
	const struct member *member = member_of_bank(plan, bank, messages);
	if (member == NULL)
		return NULL;
	struct proofs *proofs = proofs_of_plan(member->timeline);
	const char *why = member->plan->clock.has_subcarrier ? "has a subcarrier whose cycles per tick do not fit 64 bits" : "has no subcarrier";
	char *string = NULL;
	if (proofs != NULL && proofs->colour.phases.parts == 0) {
		diagnose(messages->diagnostics, RULE_NOT_DRAWN, whole_of(plan), "there is no phase to draw: \"%s\" %s", member->plan->name, why);
	} else {
		const bool drawn = proofs != NULL && view_phase_svg(&text, &alone, member->timeline, &proofs->colour);
		string = take_picture(&text, drawn, plan, messages);
	}
	proofs_destroy(proofs);
	return string;
}

// The banks of a set, or those of a plan that has pins for some.
static struct bank_words *list_banks(const scanlatch_plan *plan, struct arena *arena, size_t *count)
{
	*count = plan->plan->bank_bits > 0 ? (size_t)1 << plan->plan->bank_bits : 0;
	struct bank_words *banks = arena_array(arena, *count, sizeof *banks);
	for (unsigned bank = 0; banks != NULL && bank < *count; bank++)
		banks[bank] = (struct bank_words){
			bank, plan->members[plan->set != NULL ? set_bank_shown(plan->set->set, bank) : 0].plan->name};
	return banks;
}

char *scanlatch_draw_table(const scanlatch_images *images, unsigned bank, scanlatch_messages *messages)
{
	const scanlatch_plan *plan = images->plan;
	struct text text = {0};
	size_t count;
	const struct member *member = member_of_bank(plan, bank, messages);
	const struct table *table = member != NULL ? images->members[member - plan->members].table : NULL;
	if (table == NULL)
		return NULL;
	struct arena *arena = arena_create();
	const struct bank_words *banks = arena != NULL ? list_banks(plan, arena, &count) : NULL;
	char *string = take_picture(&text, banks != NULL && view_table_svg(&text, &alone, table, bank, banks, count), plan, messages);
	arena_destroy(arena);
	return string;
}
