// Random tiny machines, for tests of tables.
#ifndef SCANLATCH_TESTS_TABLE_RANDOM_MACHINE_H
#define SCANLATCH_TESTS_TABLE_RANDOM_MACHINE_H

#include "builder.h"

#define STATES 64

// xorshift (Marsaglia, 2003); the same numbers in every run.
struct numbers {
	uint64_t state;
};

static inline uint32_t below(struct numbers *numbers, uint32_t limit)
{
	numbers->state ^= numbers->state << 13;
	numbers->state ^= numbers->state >> 7;
	numbers->state ^= numbers->state << 17;
	return (uint32_t)((numbers->state >> 20) % limit);
}

static inline void add_fields(struct bench *bench, struct numbers *numbers, unsigned bits, unsigned count,
                              unsigned widest)
{
	for (unsigned index = 0; index < count; index++) {
		const unsigned low = below(numbers, bits);
		unsigned high = low + below(numbers, widest);
		if (high >= bits)
			high = bits - 1;
		bench_field(bench, "field", high, low);
	}
}

static inline void add_signals(struct bench *bench, struct numbers *numbers, unsigned count, unsigned automatic)
{
	for (unsigned index = 0; index < count; index++) {
		const size_t field = below(numbers, (uint32_t)bench->plan.machine.field_count);
		const unsigned width = bench->fields[field].high - bench->fields[field].low + 1;
		uint32_t codes[STATES];
		size_t codes_count = 0;
		for (uint32_t code = 0; code < 1u << width; code++)
			if (below(numbers, 2) == 0)
				codes[codes_count++] = code;
		if (codes_count == 0)
			codes[codes_count++] = below(numbers, 1u << width);
		const size_t signal =
			bench_coded(bench, "signal", field, index < automatic ? NULL : codes, index < automatic ? 0 : codes_count);
		bench->signals[signal].lead_cells = (int64_t)below(numbers, 5) - 2;
	}
}

// Cells drawn from a hidden assignment, so that many machines can be solved, though with `noise` some cells are changed
// afterwards; without, all can be.
static inline void add_cells(struct bench *bench, struct numbers *numbers, uint32_t cells, bool noise)
{
	const struct plan *plan = &bench->plan;
	const uint32_t states = (uint32_t)1 << plan->machine.line.state_bits;
	uint64_t sets[BENCH_SIGNALS] = {0};
	uint32_t hidden[STATES];
	for (size_t index = 0; index < plan->signal_count; index++) {
		if (plan->signals[index].auto_codes)
			sets[index] = below(numbers, 1u << 30) | (uint64_t)below(numbers, 1u << 30) << 30;
		for (size_t code = 0; code < plan->signals[index].code_count; code++)
			sets[index] |= (uint64_t)1 << plan->signals[index].codes[code];
	}
	for (uint32_t state = 0; state < states; state++) {
		const uint32_t other = below(numbers, state + 1);
		hidden[state] = hidden[other];
		hidden[other] = state;
	}
	bench_region(bench, "all", cells, 0);
	for (size_t field = 0; field < plan->machine.field_count && below(numbers, 4) != 0; field++)
		bench_add_hold(bench, field);
	for (uint32_t cell = 0; cell < cells; cell++) {
		const uint32_t state = noise && below(numbers, 12) == 0 ? below(numbers, states) : hidden[cell];
		for (size_t index = 0; index < plan->signal_count; index++) {
			const int64_t led = (((int64_t)cell + plan->signals[index].lead_cells) % cells + cells) % cells;
			const uint32_t value = field_value(&plan->machine.fields[plan->signals[index].field], state);
			bench->laid.asserted[led] |= (sets[index] >> value & 1) << index;
		}
		const uint32_t held = noise && below(numbers, 20) == 0 ? below(numbers, states) : state;
		for (size_t field = 0; field < bench->regions[0].hold_count; field++) {
			const uint32_t mask = field_mask(&bench->fields[field]);
			if (below(numbers, 3) == 0)
				bench->timeline.hold_mask[cell] |= mask;
			bench->timeline.hold_value[cell] = held & bench->timeline.hold_mask[cell];
		}
	}
	if (below(numbers, 3) == 0)
		bench_start(bench, !noise || below(numbers, 2) == 0 ? hidden[0] : below(numbers, states));
}

#endif
