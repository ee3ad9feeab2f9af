// The judge of the prover for line-frame machines: their two stages taken apart and stepped as plainly as can be, and the
// musts that do not depend on the plan alone (closure, signals, power-up). For small machines only.
#ifndef SCANLATCH_FUZZ_NAIVE_STAGES_H
#define SCANLATCH_FUZZ_NAIVE_STAGES_H

#include "naive.h"

#define STAGES_MOST_BITS 13u

// What the latches and counters hold. What is not latched is 0.
struct held {
	uint32_t h, step, kind, v;
};

struct stages {
	struct naive naive;              // images, plan, timeline, wiring, expected pins, bank and chosen codes
	struct row *rows[STAGE_COUNT];   // [2^address_bits]
	struct held *lap;                // [cell_count]
	uint32_t longest;
};

static const struct stage_wiring *stages_wiring(const struct stages *stages, enum stage stage)
{
	return stage == STAGE_LINE ? &stages->naive.wiring.line : &stages->naive.wiring.frame;
}

// A chip's byte address for a row of its stage: the state, and above it the kind.
static size_t stages_address(const struct stages *stages, const struct chip *chip, uint32_t row)
{
	const unsigned state_bits = stages_wiring(stages, chip->stage)->state_bits;
	size_t address = 0;
	for (unsigned pin = 0; pin < chip->part->address_pins; pin++) {
		const struct address_wire *wire = &chip->address[pin];
		bool high = wire->kind == ADDRESS_HIGH;
		high = high || (wire->kind == ADDRESS_STATE && (row >> wire->index & 1));
		high = high || (wire->kind == ADDRESS_KIND && (row >> (state_bits + wire->index) & 1));
		high = high || (wire->kind == ADDRESS_BANK && (stages->naive.bank >> wire->index & 1));
		address |= (size_t)high << pin;
	}
	return address * (chip->part->data_pins / 8);
}

static void stages_read_pin(const struct data_wire *wire, bool level, struct row *row)
{
	if (level && wire->kind == DATA_KIND)
		row->kind |= (uint32_t)1 << wire->index;
	else if (level && wire->kind == DATA_STEP)
		row->step = true;
	else
		naive_read_pin(wire, level, row);
}

static struct row stages_row(const struct stages *stages, enum stage stage, uint32_t address)
{
	struct row row = {0};
	for (size_t index = 0; index < stages->naive.wiring.chip_count; index++) {
		const struct chip *chip = &stages->naive.wiring.chips[index];
		if (chip->stage != stage)
			continue;
		const uint8_t *bytes = stages->naive.images->images[index].bytes + stages_address(stages, chip, address);
		for (unsigned pin = 0; pin < chip->part->data_pins; pin++)
			stages_read_pin(&chip->data[pin], bytes[pin / 8] >> pin % 8 & 1, &row);
	}
	return row;
}

static bool line_latched(const struct stages *stages)
{
	return stages->naive.wiring.line.outputs == OUTPUTS_REGISTERED;
}

static bool frame_latched(const struct stages *stages)
{
	return stages->naive.wiring.frame.outputs == OUTPUTS_REGISTERED;
}

static const struct row *frame_row_of(const struct stages *stages, struct held held)
{
	return &stages->rows[STAGE_FRAME][held.v];
}

static uint32_t line_address(const struct stages *stages, struct held held)
{
	const uint32_t kind = frame_latched(stages) ? held.kind : frame_row_of(stages, held)->kind;
	return held.h + (kind << stages->naive.wiring.line.state_bits);
}

static const struct row *line_row_of(const struct stages *stages, struct held held)
{
	return &stages->rows[STAGE_LINE][line_address(stages, held)];
}

static bool falls(const struct stages *stages, enum stage stage, const struct row *row)
{
	const struct stage_wiring *wiring = stages_wiring(stages, stage);
	return wiring->advance == ADVANCE_COUNT && wiring->clear == CLEAR_ASYNC && row->clear;
}

static struct held stages_settled(const struct stages *stages, struct held held)
{
	if (falls(stages, STAGE_FRAME, frame_row_of(stages, held)))
		held.v = 0;
	if (falls(stages, STAGE_LINE, line_row_of(stages, held)))
		held.h = 0;
	return held;
}

static uint32_t stage_after(const struct stage_wiring *wiring, uint32_t state, const struct row *row)
{
	if (wiring->advance == ADVANCE_TABLE)
		return row->next;
	return row->clear ? 0 : (state + 1) % ((uint32_t)1 << wiring->state_bits);
}

static bool stages_step(const struct stages *stages, struct held held)
{
	return line_latched(stages) ? held.step != 0 : line_row_of(stages, held)->step;
}

static struct held stages_next(const struct stages *stages, struct held old)
{
	const struct row *line = line_row_of(stages, old), *frame = frame_row_of(stages, old);
	struct held new = old;
	new.h = stage_after(&stages->naive.wiring.line, old.h, line);
	new.step = line_latched(stages) && line->step;
	if (stages_step(stages, old)) {
		new.v = stage_after(&stages->naive.wiring.frame, old.v, frame);
		new.kind = frame_latched(stages) ? frame->kind : 0;
	}
	return stages_settled(stages, new);
}

static bool held_same(struct held left, struct held right)
{
	return left.h == right.h && left.step == right.step && left.kind == right.kind && left.v == right.v;
}

// A number for all that is held, in an order of its own.
static uint32_t held_number(const struct stages *stages, struct held held)
{
	const struct wiring *wiring = &stages->naive.wiring;
	return ((held.v << wiring->kind_bits | held.kind) << 1 | held.step) << wiring->line.state_bits | held.h;
}

static uint32_t held_numbers(const struct stages *stages)
{
	const struct wiring *wiring = &stages->naive.wiring;
	return (uint32_t)1 << (wiring->frame.state_bits + wiring->kind_bits + 1 + wiring->line.state_bits);
}

// False if no latch holds that.
static bool held_of(const struct stages *stages, uint32_t number, struct held *held)
{
	const struct wiring *wiring = &stages->naive.wiring;
	held->h = number % ((uint32_t)1 << wiring->line.state_bits);
	number >>= wiring->line.state_bits;
	held->step = number & 1;
	number >>= 1;
	held->kind = number % ((uint32_t)1 << wiring->kind_bits);
	held->v = number >> wiring->kind_bits;
	return (held->step == 0 || line_latched(stages)) && (held->kind == 0 || frame_latched(stages));
}

// ---- the lap

// The levels of the data signals at a cell: a latch of the line stage shows the row of the cell before, one of the frame stage
// the row of the line before.
static uint64_t stages_levels(const struct stages *stages, uint32_t line, uint32_t cell)
{
	const struct timeline *timeline = stages->naive.timeline;
	const uint32_t cells = timeline->cell_count, first = timeline->lines[line].first_cell;
	const uint32_t line_cell = line_latched(stages) ? (cell + cells - 1) % cells : cell;
	const uint32_t frame_cell = frame_latched(stages) ? (first + cells - 1) % cells : cell;
	return (line_row_of(stages, stages->lap[line_cell])->levels & stages->naive.wiring.line.data_signals) |
	       (frame_row_of(stages, stages->lap[frame_cell])->levels & stages->naive.wiring.frame.data_signals);
}

static bool cell_as_planned(const struct stages *stages, uint32_t line, uint32_t cell)
{
	const struct plan *plan = stages->naive.plan;
	const uint64_t levels = stages_levels(stages, line, cell);
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		const bool data = plan->signals[signal].origin == FROM_DATA;
		const bool asserted = data ? (levels >> signal & 1) == plan->signals[signal].active_high
		                           : naive_decoded(&stages->naive, signal, stages->lap[cell].h);
		if (asserted != (stages->naive.expected[cell] >> signal & 1))
			return false;
	}
	return true;
}

// Whether the line stage's state must be the number of the cell.
static bool cells_are_numbered(const struct stages *stages)
{
	const struct plan *plan = stages->naive.plan;
	if (plan->machine.line.advance == ADVANCE_COUNT)
		return true;
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (plan->signals[signal].origin == FROM_FIELD)
			return false;
	return !stages->naive.timeline->has_holds && !plan->machine.has_start;
}

static bool place_as_planned(const struct stages *stages, struct held held, uint32_t line, uint32_t cell, uint32_t in_line)
{
	const struct timeline *timeline = stages->naive.timeline;
	if (held.v != line || (cells_are_numbered(stages) && held.h != in_line))
		return false;
	return !timeline->has_holds || (held.h & timeline->hold_mask[cell]) == timeline->hold_value[cell];
}

// The codes of `codes: auto` are those of the cells at which the signal is to be asserted.
static void stages_choose(struct stages *stages)
{
	for (size_t signal = 0; signal < stages->naive.plan->signal_count; signal++) {
		if (stages->naive.chosen[signal] == NULL)
			continue;
		const struct field *field = &stages->naive.plan->machine.fields[stages->naive.plan->signals[signal].field];
		memset(stages->naive.chosen[signal], 0, naive_codes(&stages->naive, signal) * sizeof(bool));
		for (uint32_t cell = 0; cell < stages->naive.timeline->cell_count; cell++)
			if (stages->naive.expected[cell] >> signal & 1)
				stages->naive.chosen[signal][field_value(field, stages->lap[cell].h)] = true;
	}
}

// True if the machine, with the line stage started there, goes through the frame as planned and returns.
static bool stages_follow(struct stages *stages, uint32_t h)
{
	const struct timeline *timeline = stages->naive.timeline;
	struct held held = {.h = h, .step = line_latched(stages) && timeline->types[timeline->lines[0].type].cells == 1};
	held.kind = frame_latched(stages) ? stages->rows[STAGE_FRAME][timeline->line_count - 1].kind : 0;
	const struct held first = held = stages_settled(stages, held);
	for (uint32_t line = 0, cell = 0; line < timeline->line_count; line++) {
		for (uint32_t in_line = 0; in_line < timeline->types[timeline->lines[line].type].cells; in_line++, cell++) {
			if (!place_as_planned(stages, held, line, cell, in_line))
				return false;
			stages->lap[cell] = held;
			held = stages_next(stages, held);
		}
		// Else the frame stage's latches keep what they came up with.
		if (timeline->line_count == 1 && frame_latched(stages) && !stages_step(stages, stages->lap[cell - 1]))
			return false;
		if (held.h != first.h)
			return false;
	}
	if (!held_same(held, first))
		return false;
	if (stages->naive.bank == 0)
		stages_choose(stages);
	for (uint32_t line = 0, cell = 0; line < timeline->line_count; line++)
		for (uint32_t left = timeline->types[timeline->lines[line].type].cells; left > 0; left--, cell++)
			if (!cell_as_planned(stages, line, cell))
				return false;
	return true;
}

static bool stages_find(struct stages *stages)
{
	const struct machine_plan *machine = &stages->naive.plan->machine;
	if (machine->line.advance == ADVANCE_COUNT || machine->has_start)
		return stages_follow(stages, machine->line.advance == ADVANCE_COUNT ? 0 : machine->start);
	for (uint32_t h = 0; h >> machine->line.state_bits == 0; h++)
		if (stages_follow(stages, h))
			return true;
	return false;
}

// The cells of the longest way home; UINT32_MAX if some state never comes home.
static uint32_t stages_power_up(const struct stages *stages)
{
	const uint32_t numbers = held_numbers(stages);
	uint32_t *way = fuzz_need(malloc(numbers * sizeof *way)), *trail = fuzz_need(malloc(numbers * sizeof *trail));
	uint32_t longest = 0;
	struct held held;
	memset(way, 0xFF, numbers * sizeof *way);
	for (uint32_t cell = 0; cell < stages->naive.timeline->cell_count; cell++)
		way[held_number(stages, stages->lap[cell])] = 0;
	for (uint32_t from = 0; from < numbers && longest != UINT32_MAX; from++) {
		uint32_t length = 0;
		if (!held_of(stages, from, &held))
			continue;
		const uint32_t settled = held_number(stages, stages_settled(stages, held));
		uint32_t at = settled;
		for (; way[at] == UINT32_MAX && length < numbers && held_of(stages, at, &held); length++) {
			trail[length] = at;
			at = held_number(stages, stages_next(stages, held));
		}
		for (uint32_t cells = way[at]; length > 0 && cells != UINT32_MAX; length--)
			way[trail[length - 1]] = ++cells;
		longest = way[settled] == UINT32_MAX || way[settled] > longest ? way[settled] : longest;
	}
	free(way);
	free(trail);
	return longest;
}

static bool stages_bank(struct stages *stages)
{
	for (unsigned stage = 0; stage < STAGE_COUNT; stage++)
		for (uint32_t address = 0; address >> stages_wiring(stages, (enum stage)stage)->address_bits == 0; address++)
			stages->rows[stage][address] = stages_row(stages, (enum stage)stage, address);
	if (!stages_find(stages))
		return false;
	const uint32_t longest = stages_power_up(stages);
	stages->longest = longest > stages->longest ? longest : stages->longest;
	return longest != UINT32_MAX;
}

static bool stages_prepare(struct stages *stages, const scanlatch_images *images, struct arena *arena)
{
	struct naive *naive = &stages->naive;
	*stages = (struct stages){.naive = {.images = images, .plan = images->plan->plan, .timeline = images->plan->members[0].timeline}};
	naive->wiring = wiring_of(naive->plan);
	const struct wiring *wiring = &naive->wiring;
	if (wiring->line.state_bits + wiring->frame.state_bits + wiring->kind_bits > STAGES_MOST_BITS || wiring->bank_bits > 2)
		return false;
	naive->expected = timeline_pins(naive->timeline, arena);
	FUZZ_REQUIRE(naive->expected != NULL);
	for (unsigned stage = 0; stage < STAGE_COUNT; stage++)
		stages->rows[stage] =
			fuzz_need(arena_array(arena, (size_t)1 << stages_wiring(stages, (enum stage)stage)->address_bits, sizeof(struct row)));
	stages->lap = fuzz_need(arena_array(arena, naive->timeline->cell_count, sizeof *stages->lap));
	for (size_t signal = 0; signal < naive->plan->signal_count; signal++)
		if (naive->plan->signals[signal].origin == FROM_FIELD && naive->plan->signals[signal].auto_codes)
			naive->chosen[signal] = fuzz_need(arena_array(arena, naive_codes(naive, signal), sizeof(bool)));
	return true;
}

// Judges complete images of a line-frame machine. *longest becomes the longest way home.
static inline enum naive_verdict stages_judge(const scanlatch_images *images, uint32_t *longest)
{
	struct stages stages;
	struct arena *arena = fuzz_need(arena_create());
	const bool small = stages_prepare(&stages, images, arena);
	bool good = small;
	for (stages.naive.bank = 0; good && stages.naive.bank >> stages.naive.wiring.bank_bits == 0; stages.naive.bank++)
		good = stages_bank(&stages);
	*longest = stages.longest;
	arena_destroy(arena);
	return !small ? NAIVE_TOO_LARGE : good ? NAIVE_GOOD : NAIVE_BAD;
}

// Flips a bit that some cell of the frame reads, or one of any row. Machines too large are left as they are.
static inline void stages_spoil(const scanlatch_images *images, uint64_t *random)
{
	struct stages stages;
	struct arena *arena = fuzz_need(arena_create());
	if (stages_prepare(&stages, images, arena)) {
		const bool of_frame = stages_bank(&stages) && fuzz_below(random, 3) > 0;
		const size_t chip = fuzz_below(random, stages.naive.wiring.chip_count);
		const struct chip *wires = &stages.naive.wiring.chips[chip];
		const struct held held = stages.lap[fuzz_below(random, stages.naive.timeline->cell_count)];
		uint32_t row = wires->stage == STAGE_LINE ? line_address(&stages, held) : held.v;
		if (!of_frame)
			row = (uint32_t)fuzz_below(random, (size_t)1 << stages_wiring(&stages, wires->stage)->address_bits);
		const unsigned pin = (unsigned)fuzz_below(random, wires->part->data_pins);
		images->images[chip].bytes[stages_address(&stages, wires, row) + pin / 8] ^= (uint8_t)(1u << pin % 8);
	}
	arena_destroy(arena);
}

#endif
