#include "machine/machine.h"

#include "base/arena.h"
#include "machine/chips.h"

struct machine *machine_create(struct arena *arena, const struct wiring *wiring, const struct image *images, uint32_t bank)
{
	struct machine *machine = arena_alloc(arena, sizeof *machine);
	if (machine == NULL)
		return NULL;
	machine->readers = arena_array(arena, wiring->chip_count, sizeof *machine->readers);
	if (machine->readers == NULL)
		return NULL;
	machine->wiring = *wiring;
	machine->state_mask = ((uint32_t)1 << wiring->state_bits) - 1;
	for (size_t chip = 0; chip < wiring->chip_count; chip++)
		chip_reader_init(&machine->readers[chip], &wiring->chips[chip], &images[chip], bank);
	return machine;
}

struct row machine_row(const struct machine *machine, uint32_t state)
{
	struct row row = {0};
	uint32_t clear = 0;
	for (size_t chip = 0; chip < machine->wiring.chip_count; chip++) {
		const struct chip_reader *reader = &machine->readers[chip];
		const uint8_t *bytes = reader->bytes + chip_address(reader, state);
		for (unsigned lane = 0; lane < reader->width; lane++) {
			row.next |= reader->next[lane][bytes[lane]];
			row.levels |= reader->levels[lane][bytes[lane]];
			clear |= reader->clear[lane][bytes[lane]];
		}
	}
	row.next &= machine->state_mask;
	row.clear = clear != 0;
	return row;
}

static bool machine_clears(const struct machine *machine, uint32_t state)
{
	for (size_t chip = 0; chip < machine->wiring.chip_count; chip++) {
		const struct chip_reader *reader = &machine->readers[chip];
		if (!reader->carries_clear)
			continue;
		const uint8_t *bytes = reader->bytes + chip_address(reader, state);
		for (unsigned lane = 0; lane < reader->width; lane++)
			if (reader->clear[lane][bytes[lane]] != 0)
				return true;
	}
	return false;
}

uint32_t machine_settle(const struct machine *machine, uint32_t state)
{
	if (machine->wiring.advance != ADVANCE_COUNT || machine->wiring.clear != CLEAR_ASYNC)
		return state;
	return machine_clears(machine, state) ? 0 : state;
}

static uint32_t count_next(const struct machine *machine, uint32_t state)
{
	if (machine->wiring.clear == CLEAR_SYNC)
		return machine_clears(machine, state) ? 0 : (state + 1) & machine->state_mask;
	uint32_t settled = machine_settle(machine, state);
	if (machine_clears(machine, settled))
		return 0;
	return machine_settle(machine, (settled + 1) & machine->state_mask);
}

uint32_t machine_next(const struct machine *machine, uint32_t state)
{
	if (machine->wiring.advance == ADVANCE_COUNT)
		return count_next(machine, state);
	uint32_t next = 0;
	for (size_t chip = 0; chip < machine->wiring.chip_count; chip++) {
		const struct chip_reader *reader = &machine->readers[chip];
		if (!reader->carries_next)
			continue;
		const uint8_t *bytes = reader->bytes + chip_address(reader, state);
		for (unsigned lane = 0; lane < reader->width; lane++)
			next |= reader->next[lane][bytes[lane]];
	}
	return next & machine->state_mask;
}

size_t machine_address(const struct machine *machine, uint32_t state, size_t chip)
{
	return chip_address(&machine->readers[chip], state);
}
