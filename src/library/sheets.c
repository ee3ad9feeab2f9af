#include "library/library.h"
#include "view/sheet.h"

// Counts the bits of every member's machine. False when memory is out; what was counted is in tallies all the same.
static bool count_members(const scanlatch_proofs *proofs, struct tally **tallies)
{
	for (size_t index = 0; index < proofs->images->plan->member_count; index++)
		if (!tally_run(proofs->proofs[index], proofs->images->images, &tallies[index]))
			return false;
	return true;
}

char *scanlatch_sheet(const scanlatch_proofs *proofs, const scanlatch_images *made, bool strict)
{
	const scanlatch_plan *plan = proofs->images->plan;
	struct tally *tallies[1u << LIMIT_BANK_BITS] = {NULL};
	const struct table *tables[1u << LIMIT_BANK_BITS] = {NULL};
	const struct set_view view = {plan->set != NULL ? plan->set->set : NULL, (const struct proofs *const *)proofs->proofs, plan->member_count};
	const struct sheet sheet = {&view, proofs->images->images, (const struct tally *const *)tallies, tables, strict};
	struct text text = {0};
	for (size_t index = 0; made != NULL && index < plan->member_count; index++)
		tables[index] = made->members[index].table;
	if (count_members(proofs, tallies))
		view_sheet(&text, &sheet);
	else
		text.failed = true;
	for (size_t index = 0; index < plan->member_count; index++)
		tally_destroy(tallies[index]);
	return take_string(&text);
}
