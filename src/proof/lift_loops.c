#include "base/arena.h"
#include "base/diagnostics.h"
#include "proof/lift_work.h"
#include "proof/ways.h"

// A chain of states, numbered from 1, followed from one that no chain has passed.
struct marks {
	uint32_t *chain;           // [2^feedback bits]: which chain passed a state first; 0: none did
	uint32_t count;
};

// Follows a chain. True if it runs into a loop that no chain found before: then *state is one of it.
static bool follow(const struct lifting *lifting, struct marks *marks, uint32_t *state)
{
	const uint32_t chain = ++marks->count;
	while (marks->chain[*state] == 0) {
		marks->chain[*state] = chain;
		*state = machine_next(lifting->machine, *state);
	}
	return marks->chain[*state] == chain;
}

static uint64_t loop_cells(const struct lifting *lifting, uint32_t first)
{
	uint64_t cells = 0;
	uint32_t state = first;
	do {
		state = machine_next(lifting->machine, state);
		cells++;
	} while (state != first);
	return cells;
}

// Lists the loops besides the one that was lifted: a chain that ends in itself, and not in an earlier one, has found one.
static bool list_loops(struct lifting *lifting)
{
	struct lift *lift = lifting->lift;
	const uint64_t states = (uint64_t)1 << lifting->at.bits;
	struct marks marks = {.chain = arena_array(lifting->arena, (size_t)states, sizeof(uint32_t))};
	if (marks.chain == NULL)
		return lift_memory(lifting);
	marks.count = 1;
	for (uint32_t cell = 0; cell < lift->cell_count; cell++)
		marks.chain[lift->states[cell]] = marks.count;
	for (uint64_t start = 0; start < states; start++) {
		uint32_t state = machine_settle(lifting->machine, (uint32_t)start);
		if (!follow(lifting, &marks, &state))
			continue;
		if (lift->loop_count < LIFT_LOOPS)
			lift->loops[lift->loop_count] = (struct lift_loop){state, loop_cells(lifting, state)};
		lift->loop_count++;
	}
	return true;
}

void lift_report_loops(struct lifting *lifting)
{
	const struct lift *lift = lifting->lift;
	if (lift->loop_count == 0)
		return;
	const unsigned digits = (lifting->at.bits + 3) / 4;
	diagnose(lifting->diagnostics, RULE_LIFT_LOOPS, lifting->place,
	         "the images have %llu loop%s besides the one of %u cells that power-up leads to; %llu states never come home",
	         (unsigned long long)lift->loop_count, lift->loop_count == 1 ? "" : "s", lift->cell_count,
	         (unsigned long long)lift->lost_states);
	for (uint64_t index = 0; index < lift->loop_count && index < LIFT_LOOPS; index++)
		diagnose_hint(lifting->diagnostics, "a loop of %llu cell%s goes through state 0x%0*X",
		              (unsigned long long)lift->loops[index].cells, lift->loops[index].cells == 1 ? "" : "s", (int)digits,
		              (unsigned)lift->loops[index].state);
	if (lift->loop_count > LIFT_LOOPS)
		diagnose_hint(lifting->diagnostics, "and %llu more", (unsigned long long)lift->loop_count - LIFT_LOOPS);
}

bool lift_find_loops(struct lifting *lifting)
{
	struct lift *lift = lifting->lift;
	const struct ways *ways = ways_find(lifting->arena, lifting->machine, &lifting->wiring, lift->states, lift->cell_count);
	if (ways == NULL)
		return lift_memory(lifting);
	lifting->comes_home = ways->lost_states == 0;
	lifting->way_cells = ways->longest_cells;
	if (lifting->comes_home)
		return true;
	if (!list_loops(lifting))
		return false;
	if (lift->loop_count == 0) // ways home that are too long to be told count as lost
		return true;
	lift->lost_states = ways->lost_states;
	return true;
}
