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
	machine->at = feedback_of(wiring);
	machine->state_mask = low_bits(wiring->line.state_bits);
	for (size_t chip = 0; chip < wiring->chip_count; chip++)
		chip_reader_init(&machine->readers[chip], wiring, chip, &images[chip], bank);
	if (wiring->form == FORM_LOOP)
		return machine;
	machine->two = two_stages_create(arena, machine);
	return machine->two != NULL ? machine : NULL;
}

struct row machine_row(const struct machine *machine, enum stage stage, uint32_t address)
{
	struct row row = {0};
	uint32_t control = 0;
	for (size_t chip = 0; chip < machine->wiring.chip_count; chip++) {
		const struct chip_reader *reader = &machine->readers[chip];
		if (reader->stage != stage)
			continue;
		const uint8_t *bytes = reader->bytes + chip_address(reader, address);
		for (unsigned lane = 0; lane < reader->width; lane++) {
			row.next |= reader->next[lane][bytes[lane]];
			row.kind |= reader->kind[lane][bytes[lane]];
			row.levels |= reader->levels[lane][bytes[lane]];
			control |= reader->control[lane][bytes[lane]];
		}
	}
	row.clear = (control & CONTROL_CLEAR) != 0;
	row.step = (control & CONTROL_STEP) != 0;
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
			if ((reader->control[lane][bytes[lane]] & CONTROL_CLEAR) != 0)
				return true;
	}
	return false;
}

uint32_t machine_settle(const struct machine *machine, uint32_t state)
{
	if (machine->two != NULL)
		return two_stages_settle(machine->two, state);
	return clears_at_once(&machine->wiring.line) && machine_clears(machine, state) ? 0 : state;
}

static uint32_t count_next(const struct machine *machine, uint32_t state)
{
	if (machine->wiring.line.clear == CLEAR_SYNC)
		return machine_clears(machine, state) ? 0 : (state + 1) & machine->state_mask;
	uint32_t settled = machine_settle(machine, state);
	if (machine_clears(machine, settled))
		return 0;
	return machine_settle(machine, (settled + 1) & machine->state_mask);
}

uint32_t machine_next(const struct machine *machine, uint32_t state)
{
	if (machine->two != NULL)
		return two_stages_next(machine->two, state);
	if (machine->wiring.line.advance == ADVANCE_COUNT)
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
	return next;
}

uint32_t machine_passing(const struct machine *machine, uint32_t state)
{
	if (machine->two != NULL)
		return two_stages_passing(machine->two, state);
	if (!clears_at_once(&machine->wiring.line) || machine_clears(machine, state))
		return machine_next(machine, state);
	return (state + 1) & machine->state_mask;
}

bool machine_steps(const struct machine *machine, uint32_t state)
{
	return machine->two != NULL && two_stages_steps(machine->two, state);
}

uint32_t machine_row_address(const struct machine *machine, enum stage stage, uint32_t state)
{
	if (machine->two == NULL)
		return state;
	if (stage == STAGE_FRAME)
		return state >> machine->at.frame;
	return (state & machine->state_mask) | two_stages_kind(machine->two, state) << machine->wiring.line.state_bits;
}

size_t machine_address(const struct machine *machine, uint32_t address, size_t chip)
{
	return chip_address(&machine->readers[chip], address);
}
