// The memory of a layout: the chips that a loop of its cells needs.
#include "catalogue/catalogue.h"
#include "layout/fit_parts.h"

unsigned fit_state_bits(int64_t values)
{
	unsigned bits = 1;
	while (bits < 62 && (int64_t)1 << bits < values)
		bits++;
	return bits;
}

bool fit_memory_access(const struct catalogue *parts, struct fraction cell_s, struct fraction *access_s)
{
	const struct logic_part *latch = catalogue_logic(parts, FIT_LATCH);
	struct fraction needed, left_s;
	if (latch == NULL || !fraction_make(FIT_MARGIN_NS, 1000000000, &needed) || !fraction_add(needed, latch->delay_s, &needed) ||
	    !fraction_add(needed, latch->setup_s, &needed) || !fraction_subtract(cell_s, needed, &left_s))
		return false;
	*access_s = left_s;
	return true;
}

// The slowest grade of a part that will do; NULL if none will.
static const struct access_grade *find_grade(const struct part *part, struct fraction access_s)
{
	for (size_t index = part->grade_count; index > 0; index--)
		if (fraction_compare(part->grades[index - 1].access_s, access_s) <= 0)
			return &part->grades[index - 1];
	return NULL;
}

static bool is_better(const struct fit_memory *memory, const struct fit_memory *other)
{
	if (memory->chips != other->chips)
		return memory->chips < other->chips;
	if (memory->part->address_pins != other->part->address_pins)
		return memory->part->address_pins < other->part->address_pins;
	return fraction_compare(memory->access_s, other->access_s) > 0;
}

bool fit_memory_find(const struct catalogue *parts, int64_t cells, unsigned signals, struct fraction access_s,
                     struct fit_memory *memory)
{
	const unsigned bits = fit_state_bits(cells);
	struct fit_memory best = {0};
	for (size_t index = 0; index < parts->part_count; index++) {
		const struct part *part = &parts->parts[index];
		const struct access_grade *grade = find_grade(part, access_s);
		if (part->address_pins < bits || grade == NULL)
			continue;
		const unsigned word = bits + signals, chips = (word + part->data_pins - 1) / part->data_pins;
		const struct fit_memory found = {part, grade->access_s, bits, word, chips};
		if (best.part == NULL || is_better(&found, &best))
			best = found;
	}
	if (best.part == NULL)
		return false;
	*memory = best;
	return true;
}
