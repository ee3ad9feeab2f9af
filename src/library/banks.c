// The banks of a set in the chips that they share.
#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "library/library.h"

static bool same_codes(const struct table *left, const struct table *right, size_t signal)
{
	const size_t count = left->code_counts[signal];
	return count == right->code_counts[signal] && memcmp(left->codes[signal], right->codes[signal], count * sizeof(uint32_t)) == 0;
}

// A decoder is wired for the same codes in all banks.
static bool codes_agree(const scanlatch_images *images, struct diagnostics *diagnostics)
{
	const struct plan *plan = images->plan->plan;
	bool agree = true;
	for (size_t index = 1; index < images->plan->member_count; index++)
		for (size_t signal = 0; signal < plan->signal_count; signal++) {
			const struct signal *other = &images->plan->members[index].plan->signals[signal];
			if (!other->auto_codes || same_codes(images->members[0].table, images->members[index].table, signal))
				continue;
			diagnose(diagnostics, RULE_SET_DISAGREES, other->place, "signal \"%s\": the codes that are found for plan \"%s\" are not those of "
			         "plan \"%s\" of the same set", other->name, images->plan->members[index].plan->name, plan->name);
			diagnose_also(diagnostics, plan->signals[signal].place, "the signal in that plan");
			diagnose_hint(diagnostics, "list the codes in both plans");
			agree = false;
		}
	return agree;
}

static bool sees_all_banks(const struct plan *plan, const struct chip *chip)
{
	unsigned seen = 0;
	for (unsigned pin = 0; pin < chip->part->address_pins; pin++)
		seen += chip->address[pin].kind == ADDRESS_BANK;
	return seen == plan->bank_bits;
}

// A chip that a jumper does not reach has the same bytes for all the banks that it cannot tell apart.
static bool chip_agrees(const scanlatch_images *images, size_t index, size_t chip, const struct image *alone, struct diagnostics *diagnostics)
{
	const struct plan *plan = images->plan->plan;
	if (sees_all_banks(plan, &plan->chips[chip]) || memcmp(alone->bytes, images->images[chip].bytes, alone->length) == 0)
		return true;
	diagnose(diagnostics, RULE_SET_DISAGREES, images->plan->members[index].plan->chips[chip].place,
	         "chip \"%s\" does not see all bank bits, but plan \"%s\" needs other bytes in it than plan \"%s\"", plan->chips[chip].label,
	         images->plan->members[index].plan->name, plan->name);
	diagnose_hint(diagnostics, "wire every bank.N to the chips of this stage");
	return false;
}

static bool unbanked_chips_agree(const scanlatch_images *images, struct diagnostics *diagnostics)
{
	const size_t chips = images->plan->plan->chip_count;
	bool agree = true;
	for (size_t index = 1; index < images->plan->member_count; index++) {
		struct arena *arena = arena_create();
		struct image *alone = arena != NULL ? arena_array(arena, chips, sizeof *alone) : NULL;
		const struct table *table = images->members[index].table;
		if (alone == NULL || !images_fill(&table, 1, arena, alone)) {
			diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "memory is out");
			agree = false;
		}
		for (size_t chip = 0; agree && chip < chips; chip++)
			agree = chip_agrees(images, index, chip, &alone[chip], diagnostics);
		arena_destroy(arena);
	}
	return agree;
}

static bool any_unbanked(const struct plan *plan)
{
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		if (!sees_all_banks(plan, &plan->chips[chip]))
			return true;
	return false;
}

bool banks_fill(scanlatch_images *images, scanlatch_messages *messages)
{
	const scanlatch_plan *plan = images->plan;
	const struct table *tables[1u << LIMIT_BANK_BITS];
	const unsigned banks = plan->set != NULL ? 1u << plan->plan->bank_bits : 1;
	if (plan->set != NULL && !codes_agree(images, messages->diagnostics))
		return false;
	for (unsigned bank = 0; bank < banks; bank++)
		tables[bank] = images->members[plan->set != NULL ? set_bank_shown(plan->set->set, bank) : 0].table;
	if (!images_fill(tables, banks, images->arena, images->images)) {
		diagnose(messages->diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "memory is out");
		return false;
	}
	return plan->set == NULL || !any_unbanked(plan->plan) || unbanked_chips_agree(images, messages->diagnostics);
}
