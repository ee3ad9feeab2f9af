// All next states at once. The states are walked in blocks that keep few cache lines busy at both ends, whatever the
// order of the address wires, so that every line of chips and result is fetched once.
#include <string.h>

#include "machine/chips.h"

#define BLOCK_BITS 12
#define BLOCK_SIZE (1u << BLOCK_BITS)
// Bits of a position inside a cache line: of a byte in an image, and of a state in the result.
#define LINE_BITS 6

// What the bytes of a chip stand for: next bits, or clear (CONTROL_CLEAR).
typedef const uint32_t (*meaning)[256];

// A block: the states base | state[k], at the addresses (of base) | address[k].
struct block_plan {
	uint32_t mask;                 // the state bits that run inside a block
	uint32_t size;
	bool straight;                 // state[k] is k, address[k] is address[0] + k
	uint32_t state[BLOCK_SIZE];
	uint32_t address[BLOCK_SIZE];
};

// Chips that see the same address, and where their results go.
struct group {
	const struct machine *machine;
	size_t chips[LIMIT_CHIPS];
	size_t count;
	bool first;                    // nothing was stored yet
	uint32_t *next;
	size_t stride;
};

static meaning chip_meaning(const struct machine *machine, size_t chip)
{
	const struct chip_reader *reader = &machine->readers[chip];
	return machine->wiring.line.advance == ADVANCE_COUNT ? reader->control : reader->next;
}

// The state bits that should run inside a block: the lowest, those on the chip's lowest address pins, and others to
// fill up.
static uint32_t block_mask(const struct chip_reader *reader, uint32_t state_mask)
{
	uint32_t mask = ((1u << LINE_BITS) - 1) & state_mask;
	for (unsigned bit = 0; bit < LIMIT_STATE_BITS; bit++) {
		uint32_t weight = reader->address[bit / 8][1u << bit % 8] & ~reader->address[bit / 8][0];
		if (weight != 0 && weight < 1u << LINE_BITS)
			mask |= (uint32_t)1 << bit & state_mask;
	}
	unsigned bits = 0;
	for (unsigned bit = 0; bit < LIMIT_STATE_BITS; bit++)
		bits += mask >> bit & 1;
	for (unsigned bit = 0; bit < LIMIT_STATE_BITS && bits < BLOCK_BITS; bit++) {
		uint32_t extra = (uint32_t)1 << bit & state_mask & ~mask;
		bits += extra != 0;
		mask |= extra;
	}
	return mask;
}

static void block_plan_init(struct block_plan *plan, const struct chip_reader *reader, uint32_t state_mask)
{
	plan->mask = block_mask(reader, state_mask);
	plan->size = 0;
	plan->straight = reader->width == 1;
	uint32_t state = 0;
	do {
		uint32_t address = (uint32_t)chip_address(reader, state);
		plan->state[plan->size] = state;
		plan->address[plan->size] = address;
		plan->straight = plan->straight && state == plan->size && address == plan->address[0] + plan->size;
		plan->size++;
		state = (state - plan->mask) & plan->mask;
	} while (state != 0);
}

static void gather_straight(const uint8_t *bytes, uint32_t size, const uint32_t *value, uint32_t *next, size_t stride,
                            bool first)
{
	for (uint32_t index = 0; index < size; index++) {
		uint32_t *place = next + index * stride;
		*place = (first ? 0 : *place) | value[bytes[index]];
	}
}

// ORs (from the first chip: stores) what a chip's bytes stand for into the results of one block.
static void gather_block(const struct group *group, const struct block_plan *plan, size_t chip, uint32_t base, bool first)
{
	const struct chip_reader *reader = &group->machine->readers[chip];
	meaning value = chip_meaning(group->machine, chip);
	const size_t stride = group->stride;
	uint32_t *next = group->next + base * stride;
	uint32_t base_address = (uint32_t)chip_address(reader, base);
	if (plan->straight) {
		gather_straight(reader->bytes + (base_address | plan->address[0]), plan->size, value[0], next, stride, first);
		return;
	}
	bool wide = reader->width == 2;
	for (uint32_t index = 0; index < plan->size; index++) {
		const uint8_t *data = reader->bytes + (base_address | plan->address[index]);
		uint32_t found = value[0][data[0]] | (wide ? value[1][data[1]] : 0);
		uint32_t *place = next + plan->state[index] * stride;
		*place = (first ? 0 : *place) | found;
	}
}

static void gather_group(const struct group *group)
{
	struct block_plan plan;
	uint32_t state_mask = group->machine->state_mask;
	block_plan_init(&plan, &group->machine->readers[group->chips[0]], state_mask);
	uint32_t outer_mask = state_mask & ~plan.mask, base = 0;
	do {
		for (size_t member = 0; member < group->count; member++)
			gather_block(group, &plan, group->chips[member], base, group->first && member == 0);
		base = (base - outer_mask) & outer_mask;
	} while (base != 0);
}

static bool same_address(const struct chip_reader *left, const struct chip_reader *right)
{
	return left->width == right->width && memcmp(left->address, right->address, sizeof left->address) == 0;
}

// Every chip that has a say in the next state, group by group.
static void gather_all(const struct machine *machine, uint32_t *next, size_t stride_words)
{
	bool counts = machine->wiring.line.advance == ADVANCE_COUNT;
	uint32_t waiting = 0;
	for (size_t chip = 0; chip < machine->wiring.chip_count; chip++) {
		const struct chip_reader *reader = &machine->readers[chip];
		if (counts ? reader->carries_clear : reader->carries_next)
			waiting |= (uint32_t)1 << chip;
	}
	struct group group = {.machine = machine, .first = true, .next = next, .stride = stride_words};
	for (size_t leader = 0; leader < machine->wiring.chip_count; leader++) {
		if ((waiting >> leader & 1) == 0)
			continue;
		group.count = 0;
		for (size_t chip = leader; chip < machine->wiring.chip_count; chip++) {
			if ((waiting >> chip & 1) && same_address(&machine->readers[leader], &machine->readers[chip])) {
				group.chips[group.count++] = chip;
				waiting &= ~((uint32_t)1 << chip);
			}
		}
		gather_group(&group);
		group.first = false;
	}
}

// next[] holds whether clear is asserted; in ascending order, the flag of the state after is still there.
static void count_from_clears(const struct machine *machine, uint32_t *next, size_t stride)
{
	const uint32_t last = machine->state_mask;
	const bool async = machine->wiring.line.clear == CLEAR_ASYNC;
	const bool first_clears = next[0] != 0;
	uint32_t from_first = first_clears || (async && next[stride] != 0) ? 0 : 1;
	for (uint32_t state = 0; state < last; state++) {
		uint32_t *place = next + state * stride;
		if (*place != 0)
			*place = async ? from_first : 0;
		else
			*place = async && place[stride] != 0 ? 0 : state + 1;
	}
	uint32_t *place = next + last * stride;
	*place = async && *place != 0 ? from_first : 0;
}

void machine_all_next(const struct machine *machine, uint32_t *next, size_t stride_words)
{
	gather_all(machine, next, stride_words);
	if (machine->wiring.line.advance == ADVANCE_COUNT)
		count_from_clears(machine, next, stride_words);
}
