// The judge of the prover: a machine that goes state by state through wires and bytes, as plainly as it can be
// written, and the musts that do not depend on the plan alone (closure, signals, power-up), checked in the same way.
// For small machines only.
#ifndef SCANLATCH_FUZZ_NAIVE_H
#define SCANLATCH_FUZZ_NAIVE_H

#include "driver.h"

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "library/library.h"

#define NAIVE_STATE_BITS 14u
#define NAIVE_STEPS 20000000u // cells compared while the frame is looked for

enum naive_verdict { NAIVE_GOOD, NAIVE_BAD, NAIVE_TOO_LARGE };

struct naive {
	const scanlatch_images *images;
	const struct plan *plan;
	const struct timeline *timeline;
	struct wiring wiring;
	const uint64_t *expected;      // timeline_pins
	uint32_t bank, states;
	struct row *rows;              // [states]
	bool *chosen[LIMIT_SIGNALS];   // codes of `codes: auto`, as the first bank's lap shows them; NULL for other signals
	uint32_t *lap;                 // [cell_count]
	uint32_t longest;              // way home in cells, over all banks
};

static size_t naive_address(const struct naive *naive, const struct chip *chip, uint32_t state)
{
	size_t address = 0;
	for (unsigned pin = 0; pin < chip->part->address_pins; pin++) {
		const struct address_wire *wire = &chip->address[pin];
		const bool high = wire->kind == ADDRESS_HIGH || (wire->kind == ADDRESS_STATE && (state >> wire->index & 1)) ||
		                  (wire->kind == ADDRESS_BANK && (naive->bank >> wire->index & 1));
		address |= (size_t)high << pin;
	}
	return address;
}

static void naive_read_pin(const struct data_wire *wire, uint32_t level, struct row *row)
{
	if (wire->kind == DATA_NEXT)
		row->next |= level << wire->index;
	else if (wire->kind == DATA_CLEAR)
		row->clear = level != 0;
	else if (wire->kind == DATA_SIGNAL)
		row->levels |= (uint64_t)level << wire->index;
}

static struct row naive_row(const struct naive *naive, uint32_t state)
{
	struct row row = {0};
	for (size_t index = 0; index < naive->wiring.chip_count; index++) {
		const struct chip *chip = &naive->wiring.chips[index];
		const uint8_t *bytes = naive->images->images[index].bytes;
		const size_t address = naive_address(naive, chip, state);
		const bool wide = chip->part->data_pins == 16;
		const uint32_t word = wide ? bytes[2 * address] | (uint32_t)bytes[2 * address + 1] << 8 : bytes[address];
		for (unsigned pin = 0; pin < chip->part->data_pins; pin++)
			naive_read_pin(&chip->data[pin], word >> pin & 1, &row);
	}
	return row;
}

// What a data pin stores of a row.
static inline bool naive_level(const struct data_wire *wire, const struct row *row)
{
	switch (wire->kind) {
	case DATA_NEXT: return row->next >> wire->index & 1;
	case DATA_CLEAR: return row->clear;
	case DATA_SIGNAL: return row->levels >> wire->index & 1;
	case DATA_OPEN:
	case DATA_KIND:
	case DATA_STEP: return true;
	}
	return true;
}

// Writes a row into the images, for the bank that the machine is set to.
static inline void naive_write_row(const struct naive *naive, uint32_t state, const struct row *row)
{
	for (size_t index = 0; index < naive->wiring.chip_count; index++) {
		const struct chip *chip = &naive->wiring.chips[index];
		const unsigned width = chip->part->data_pins / 8;
		uint8_t *bytes = naive->images->images[index].bytes + naive_address(naive, chip, state) * width;
		for (unsigned pin = 0; pin < chip->part->data_pins; pin++) {
			const bool level = naive_level(&chip->data[pin], row);
			bytes[pin / 8] = (uint8_t)((bytes[pin / 8] & ~(1u << pin % 8)) | (unsigned)level << pin % 8);
		}
	}
}

static uint32_t naive_settled(const struct naive *naive, uint32_t state)
{
	const bool may_fall = naive->wiring.line.advance == ADVANCE_COUNT && naive->wiring.line.clear == CLEAR_ASYNC;
	return may_fall && naive->rows[state].clear ? 0 : state;
}

static uint32_t naive_next(const struct naive *naive, uint32_t state)
{
	if (naive->wiring.line.advance == ADVANCE_TABLE)
		return naive->rows[state].next;
	if (naive->rows[state].clear)
		return 0;
	return naive_settled(naive, (state + 1) % naive->states);
}

// Whether the pin of a signal that comes from the state is asserted.
static bool naive_decoded(const struct naive *naive, size_t signal, uint32_t state)
{
	const struct signal *from = &naive->plan->signals[signal];
	const uint32_t code = field_value(&naive->plan->machine.fields[from->field], state);
	if (from->auto_codes)
		return naive->chosen[signal][code];
	for (size_t index = 0; index < from->code_count; index++)
		if (from->codes[index] == code)
			return true;
	return false;
}

static bool naive_asserted(const struct naive *naive, size_t signal, uint32_t cell)
{
	const uint32_t cells = naive->timeline->cell_count;
	if (naive->plan->signals[signal].origin == FROM_FIELD)
		return naive_decoded(naive, signal, naive->lap[cell]);
	const bool direct = naive->wiring.line.outputs == OUTPUTS_DIRECT;
	const bool level = naive->rows[naive->lap[direct ? cell : (cell + cells - 1) % cells]].levels >> signal & 1;
	return level == naive->plan->signals[signal].active_high;
}

static size_t naive_codes(const struct naive *naive, size_t signal)
{
	const struct field *field = &naive->plan->machine.fields[naive->plan->signals[signal].field];
	return (size_t)1 << (field->high - field->low + 1);
}

// The codes of `codes: auto` are those of the cells at which the signal is to be asserted.
static void naive_choose(struct naive *naive)
{
	for (size_t signal = 0; signal < naive->plan->signal_count; signal++) {
		if (naive->chosen[signal] == NULL)
			continue;
		const struct field *field = &naive->plan->machine.fields[naive->plan->signals[signal].field];
		memset(naive->chosen[signal], 0, naive_codes(naive, signal) * sizeof(bool));
		for (uint32_t cell = 0; cell < naive->timeline->cell_count; cell++)
			if (naive->expected[cell] >> signal & 1)
				naive->chosen[signal][field_value(field, naive->lap[cell])] = true;
	}
}

// True if the machine, started there, goes through the frame as planned and returns.
static bool naive_follows(struct naive *naive, uint32_t start)
{
	const struct timeline *timeline = naive->timeline;
	uint32_t state = start;
	for (uint32_t cell = 0; cell < timeline->cell_count; cell++) {
		naive->lap[cell] = state;
		if (timeline->has_holds && (state & timeline->hold_mask[cell]) != timeline->hold_value[cell])
			return false;
		state = naive_next(naive, state);
	}
	if (state != start)
		return false;
	if (naive->bank == 0)
		naive_choose(naive);
	for (uint32_t cell = 0; cell < timeline->cell_count; cell++)
		for (size_t signal = 0; signal < naive->plan->signal_count; signal++)
			if (naive_asserted(naive, signal, cell) != (naive->expected[cell] >> signal & 1))
				return false;
	return true;
}

// Finds the frame's first cell. NAIVE_BAD if no state of the loop that state 0 falls into will do.
static enum naive_verdict naive_find(struct naive *naive)
{
	const struct machine_plan *machine = &naive->plan->machine;
	if (machine->line.advance == ADVANCE_COUNT || machine->has_start)
		return naive_follows(naive, machine->line.advance == ADVANCE_COUNT ? 0 : machine->start) ? NAIVE_GOOD : NAIVE_BAD;
	uint32_t state = 0, first;
	for (uint32_t step = 0; step < naive->states; step++)
		state = naive_next(naive, state);
	first = state;
	uint64_t steps = 0;
	do {
		if (naive_follows(naive, state))
			return NAIVE_GOOD;
		steps += naive->timeline->cell_count;
		state = naive_next(naive, state);
	} while (state != first && steps < NAIVE_STEPS);
	return state == first ? NAIVE_BAD : NAIVE_TOO_LARGE;
}

// The cells of the longest way home; UINT32_MAX if some state never comes home.
static uint32_t naive_power_up(const struct naive *naive)
{
	uint32_t longest = 0;
	uint32_t *way = fuzz_need(malloc(naive->states * sizeof *way));
	uint32_t *trail = fuzz_need(malloc(naive->states * sizeof *trail));
	memset(way, 0xFF, naive->states * sizeof *way);
	for (uint32_t cell = 0; cell < naive->timeline->cell_count; cell++)
		way[naive->lap[cell]] = 0;
	for (uint32_t from = 0; from < naive->states && longest != UINT32_MAX; from++) {
		uint32_t length = 0, state = naive_settled(naive, from);
		for (; way[state] == UINT32_MAX && length < naive->states; state = naive_next(naive, state))
			trail[length++] = state;
		for (uint32_t cells = way[state]; length > 0 && way[state] != UINT32_MAX; length--)
			way[trail[length - 1]] = ++cells;
		const uint32_t home = way[naive_settled(naive, from)];
		longest = home == UINT32_MAX || home > longest ? home : longest;
	}
	free(way);
	free(trail);
	return longest;
}

static enum naive_verdict naive_bank(struct naive *naive)
{
	for (uint32_t state = 0; state < naive->states; state++)
		naive->rows[state] = naive_row(naive, state);
	const enum naive_verdict found = naive_find(naive);
	if (found != NAIVE_GOOD)
		return found;
	const uint32_t longest = naive_power_up(naive);
	if (longest == UINT32_MAX)
		return NAIVE_BAD;
	naive->longest = longest > naive->longest ? longest : naive->longest;
	return NAIVE_GOOD;
}

// Judges complete images. *longest (may be NULL) becomes the longest way home.
static enum naive_verdict naive_judge(const scanlatch_images *images, uint32_t *longest)
{
	const struct timeline *timeline = images->plan->members[0].timeline;
	struct naive naive = {.images = images, .plan = timeline->plan, .timeline = timeline};
	naive.wiring = wiring_of(timeline->plan);
	if (naive.wiring.line.state_bits > NAIVE_STATE_BITS || naive.wiring.bank_bits > 2)
		return NAIVE_TOO_LARGE;
	struct arena *arena = fuzz_need(arena_create());
	naive.states = (uint32_t)1 << naive.wiring.line.state_bits;
	naive.expected = timeline_pins(timeline, arena);
	FUZZ_REQUIRE(naive.expected != NULL);
	naive.rows = fuzz_need(arena_array(arena, naive.states, sizeof *naive.rows));
	naive.lap = fuzz_need(arena_array(arena, timeline->cell_count, sizeof *naive.lap));
	for (size_t signal = 0; signal < naive.plan->signal_count; signal++)
		if (naive.plan->signals[signal].origin == FROM_FIELD && naive.plan->signals[signal].auto_codes)
			naive.chosen[signal] = fuzz_need(arena_array(arena, naive_codes(&naive, signal), sizeof(bool)));
	enum naive_verdict verdict = NAIVE_GOOD;
	for (naive.bank = 0; verdict == NAIVE_GOOD && naive.bank >> naive.wiring.bank_bits == 0; naive.bank++)
		verdict = naive_bank(&naive);
	if (longest != NULL)
		*longest = naive.longest;
	arena_destroy(arena);
	return verdict;
}

#endif
