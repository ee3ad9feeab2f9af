// Without a start, the first cell's code is chosen such that the whole round, its closing edge included, is as quiet as
// it can be; state 0 comes second.

#include "random_machine.h"

#define CODE_BITS 4
#define CODES (1u << CODE_BITS)
#define MACHINES 3000
#define NEVER 100000u

// Two disjoint fields, on the upper bits of the state, so that every code has states enough for all cells.
struct decoders {
	unsigned left, right; // bits of each, CODE_BITS together; right may be 0
	uint32_t listed[BENCH_SIGNALS];
};

static uint32_t field_jumps(uint32_t change)
{
	return (change & (change - 1)) != 0;
}

static uint32_t jumps_between(const struct decoders *decoders, uint32_t from, uint32_t to)
{
	const uint32_t right = (1u << decoders->right) - 1;
	return field_jumps((from ^ to) & ~right) + field_jumps((from ^ to) & right);
}

static bool may_have(const struct bench *bench, uint32_t cell, uint32_t code)
{
	const struct timeline *timeline = &bench->timeline;
	const unsigned low = bench->plan.machine.line.state_bits - CODE_BITS;
	if (timeline->has_holds && ((code << low ^ timeline->hold_value[cell]) & timeline->hold_mask[cell]) != 0)
		return false;
	for (size_t index = 0; index < bench->plan.signal_count; index++) {
		const struct signal *signal = &bench->plan.signals[index];
		const uint32_t value = field_value(&bench->fields[signal->field], code << low);
		bool listed = false;
		for (size_t number = 0; number < signal->code_count; number++)
			listed |= signal->codes[number] == value;
		if (listed != (bool)(bench->laid.asserted[cell] >> index & 1))
			return false;
	}
	return true;
}

// The least jumps of a round that begins in `first`, by plain dynamic programming over all codes of all cells.
static uint32_t round_from(const struct bench *bench, const struct decoders *decoders, uint32_t first)
{
	uint32_t cost[CODES], next[CODES];
	for (uint32_t code = 0; code < CODES; code++)
		cost[code] = code == first && may_have(bench, 0, code) ? 0 : NEVER;
	for (uint32_t cell = 1; cell <= bench->cells; cell++) {
		for (uint32_t code = 0; code < CODES; code++) {
			next[code] = NEVER;
			if (cell < bench->cells ? !may_have(bench, cell, code) : code != first)
				continue;
			for (uint32_t from = 0; from < CODES; from++)
				if (cost[from] + jumps_between(decoders, from, code) < next[code])
					next[code] = cost[from] + jumps_between(decoders, from, code);
		}
		memcpy(cost, next, sizeof cost);
	}
	return cost[first];
}

static void add_listed(struct bench *bench, struct numbers *numbers, size_t field, unsigned width)
{
	uint32_t codes[CODES], count = 0;
	for (uint32_t code = 0; code < 1u << width; code++)
		if (below(numbers, 3) == 0)
			codes[count++] = code;
	if (count == 0)
		codes[count++] = below(numbers, 1u << width);
	bench_coded(bench, "signal", field, codes, count);
}

// Runs of cells along a hidden walk over codes, so that every cell has some code; some hold a bit of it.
static void add_runs(struct bench *bench, struct numbers *numbers, size_t top)
{
	const unsigned low = bench->plan.machine.line.state_bits - CODE_BITS;
	const bool holds = below(numbers, 2) == 0;
	for (uint32_t run = 0; run < 12; run++) {
		const uint32_t code = below(numbers, CODES);
		uint64_t asserted = 0;
		for (size_t index = 0; index < bench->plan.signal_count; index++) {
			const struct signal *signal = &bench->plan.signals[index];
			for (size_t number = 0; number < signal->code_count; number++)
				if (signal->codes[number] == field_value(&bench->fields[signal->field], code << low))
					asserted |= SIGNAL(index);
		}
		bench_region(bench, "run", 1 + below(numbers, 3), asserted);
		if (holds && below(numbers, 4) == 0)
			bench_hold(bench, top, field_value(&bench->fields[top], code << low), 0);
	}
}

static struct bench *draw_machine(struct numbers *numbers, struct decoders *decoders)
{
	struct bench *bench = bench_create(CODE_BITS + 6, 64);
	const unsigned low = 6;
	decoders->right = below(numbers, 3);
	decoders->left = CODE_BITS - decoders->right;
	const size_t left = bench_field(bench, "left", low + CODE_BITS - 1, low + decoders->right);
	add_listed(bench, numbers, left, decoders->left);
	add_listed(bench, numbers, left, decoders->left);
	if (decoders->right > 0)
		add_listed(bench, numbers, bench_field(bench, "right", low + decoders->right - 1, low), decoders->right);
	const unsigned held = low + decoders->right;
	add_runs(bench, numbers, bench_field(bench, "held", low + CODE_BITS - 1, held + below(numbers, decoders->left)));
	return bench;
}

static uint32_t table_jumps(const struct bench *bench)
{
	uint32_t jumps = 0;
	for (size_t field = 0; field + 1 < bench->plan.machine.field_count; field++)
		jumps += count_jumps(bench->table, &bench->fields[field]);
	return jumps;
}

// As few jumps as a round over the period can have; and state 0 exactly where one from its code has no more.
static void test_fewest_jumps(void **state)
{
	(void)state;
	struct numbers numbers = {40261};
	uint32_t zero = 0, compared = 0;
	for (uint32_t number = 0; number < MACHINES; number++) {
		struct decoders decoders;
		struct bench *bench = draw_machine(&numbers, &decoders);
		const struct table *table = bench_table(bench);
		assert_valid(bench);
		uint32_t least = NEVER;
		for (uint32_t first = 0; first < CODES; first++) {
			const uint32_t here = round_from(bench, &decoders, first);
			least = here < least ? here : least;
		}
		if (table->period == bench->cells) {
			assert_int_equal(table_jumps(bench), least);
			assert_int_equal(table->state_of_cell[0] == 0, round_from(bench, &decoders, 0) == least);
			zero += table->state_of_cell[0] == 0;
			compared++;
		}
		bench_destroy(bench);
	}
	assert_in_range(compared, MACHINES / 2, MACHINES);
	assert_in_range(zero, compared / 20, compared - compared / 20);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_fewest_jumps),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
