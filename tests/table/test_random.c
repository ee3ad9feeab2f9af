// Random tiny machines: a table is made exactly when a plain matching of cells with states, over all periods of the
// signals and all choices of codes, finds one; and with the shortest such period.

#include "random_machine.h"

#define MACHINES 10000

// A machine as the plain search sees it: each signal's codes as a bit set of field values.
struct machine_case {
	struct bench *bench;
	uint32_t period;
	uint64_t sets[BENCH_SIGNALS];
	int cell_of_state[STATES];
	bool visited[STATES];
};

static bool may_have(const struct machine_case *machine, uint32_t cell, uint32_t state, int start)
{
	const struct timeline *timeline = &machine->bench->timeline;
	const struct plan *plan = &machine->bench->plan;
	if (cell == 0 && start >= 0 && state != (uint32_t)start)
		return false;
	for (uint32_t lap = cell; timeline->has_holds && lap < timeline->cell_count; lap += machine->period)
		if ((state & timeline->hold_mask[lap]) != timeline->hold_value[lap])
			return false;
	for (size_t index = 0; index < plan->signal_count; index++) {
		const struct signal *signal = &plan->signals[index];
		const int64_t count = timeline->cell_count;
		const int64_t led = (((int64_t)cell + signal->lead_cells) % count + count) % count;
		const uint32_t value = field_value(&plan->machine.fields[signal->field], state);
		if ((machine->sets[index] >> value & 1) != (timeline->asserted[led] >> index & 1))
			return false;
	}
	return true;
}

// Kuhn's algorithm: looks for an augmenting path from a cell.
static bool find_state(struct machine_case *machine, uint32_t cell, int start)
{
	const uint32_t states = (uint32_t)1 << machine->bench->plan.machine.line.state_bits;
	for (uint32_t state = 0; state < states; state++) {
		if (machine->visited[state] || !may_have(machine, cell, state, start))
			continue;
		machine->visited[state] = true;
		if (machine->cell_of_state[state] < 0 || find_state(machine, (uint32_t)machine->cell_of_state[state], start)) {
			machine->cell_of_state[state] = (int)cell;
			return true;
		}
	}
	return false;
}

static bool can_match(struct machine_case *machine, int start)
{
	for (int state = 0; state < STATES; state++)
		machine->cell_of_state[state] = -1;
	for (uint32_t cell = 0; cell < machine->period; cell++) {
		memset(machine->visited, 0, sizeof machine->visited);
		if (!find_state(machine, cell, start))
			return false;
	}
	return true;
}

// Tries all code sets of all signals with automatic codes. (Their fields have at most 3 bits.)
static bool can_solve(struct machine_case *machine, int start)
{
	const struct plan *plan = &machine->bench->plan;
	for (size_t index = 0; index < plan->signal_count; index++) {
		machine->sets[index] = 0;
		for (size_t code = 0; code < plan->signals[index].code_count; code++)
			machine->sets[index] |= (uint64_t)1 << plan->signals[index].codes[code];
	}
	for (;;) {
		if (can_match(machine, start))
			return true;
		size_t index = 0;
		for (; index < plan->signal_count; index++) {
			const struct field *field = &plan->machine.fields[plan->signals[index].field];
			const uint64_t sets = (uint64_t)1 << (1u << (field->high - field->low + 1));
			if (!plan->signals[index].auto_codes)
				continue;
			machine->sets[index] = (machine->sets[index] + 1) % sets;
			if (machine->sets[index] != 0)
				break;
		}
		if (index == plan->signal_count)
			return false;
	}
}

static bool has_period(const struct timeline *timeline, uint32_t period)
{
	for (uint32_t cell = 0; cell < timeline->cell_count; cell++)
		if (timeline->asserted[cell] != timeline->asserted[cell % period])
			return false;
	return timeline->cell_count % period == 0;
}

// Tries all periods, the shortest first; true if one of them has a solution, which the machine then keeps.
static bool can_solve_some(struct machine_case *machine, int start)
{
	const struct bench *bench = machine->bench;
	for (machine->period = 1; machine->period <= bench->timeline.cell_count; machine->period++)
		if (machine->period <= 1u << bench->plan.machine.line.state_bits && has_period(&bench->timeline, machine->period) &&
		    can_solve(machine, start))
			return true;
	return false;
}

// All jumps of all fields with signals, where fields that share bits count as one.
static uint32_t count_all_jumps(const struct bench *bench, const struct table *table)
{
	const struct plan *plan = &bench->plan;
	uint32_t jumps = 0, counted = 0;
	for (size_t index = 0; index < plan->signal_count; index++) {
		struct field joined = plan->machine.fields[plan->signals[index].field];
		// Fields are runs of bits, so those that share some make a run, and growing it settles in a round for each.
		for (size_t other = 0; other < plan->signal_count * plan->signal_count; other++) {
			const struct field *field = &plan->machine.fields[plan->signals[other % plan->signal_count].field];
			if ((field_mask(&joined) & field_mask(field)) == 0)
				continue;
			joined.high = field->high > joined.high ? field->high : joined.high;
			joined.low = field->low < joined.low ? field->low : joined.low;
		}
		if ((field_mask(&joined) & counted) == 0)
			jumps += count_jumps(table, &joined);
		counted |= field_mask(&joined);
	}
	return jumps;
}

static void assert_quieter_than_zero(struct bench *bench)
{
	struct diagnostics *diagnostics = diagnostics_create();
	assert_non_null(diagnostics);
	bench_start(bench, 0);
	struct table *zero = table_create(&bench->timeline, diagnostics);
	assert_non_null(zero);
	assert_true(count_all_jumps(bench, bench->table) < count_all_jumps(bench, zero));
	table_destroy(zero);
	diagnostics_destroy(diagnostics);
}

// Compares the table with the plain search; true if there is a table.
static bool check_machine(struct bench *bench)
{
	const bool has_start = bench->plan.machine.has_start;
	const struct table *table = bench_table(bench);
	struct machine_case machine = {.bench = bench};
	assert_int_equal(table != NULL, can_solve_some(&machine, has_start ? (int)bench->plan.machine.start : -1));
	if (table == NULL)
		return false;
	assert_valid(bench);
	assert_int_equal(table->period, machine.period);
	// A cleared latch holds 0; only quieter edges excuse another state.
	if (!has_start && table->state_of_cell[0] != 0 && can_solve(&machine, 0))
		assert_quieter_than_zero(bench);
	return true;
}

struct variety {
	unsigned least_bits, bit_choices;
	unsigned field_choices, widest;
	unsigned signal_choices, automatic_choices;
	uint32_t machines; // 0: MACHINES
};

// Checks machines of a variety; of these some must have a table and some not, or the comparison would show little.
static void check_variety(const struct variety *variety, uint64_t seed)
{
	struct numbers numbers = {seed};
	const uint32_t machines = variety->machines != 0 ? variety->machines : MACHINES;
	uint32_t solved = 0;
	for (uint32_t number = 0; number < machines; number++) {
		const unsigned bits = variety->least_bits + below(&numbers, variety->bit_choices);
		struct bench *bench = bench_create(bits, STATES);
		add_fields(bench, &numbers, bits, 1 + below(&numbers, variety->field_choices), variety->widest);
		const unsigned automatic =
			variety->automatic_choices == 0 ? 0 : 1 + below(&numbers, variety->automatic_choices);
		add_signals(bench, &numbers, automatic + below(&numbers, variety->signal_choices), automatic);
		add_cells(bench, &numbers, 1 + below(&numbers, 1u << bits), true);
		solved += check_machine(bench);
		bench_destroy(bench);
	}
	assert_in_range(solved, machines / 20, machines - machines / 20);
}

static void test_holds(void **state)
{
	(void)state;
	check_variety(&(struct variety){2, 3, 4, 4, 1, 0, 0}, 20261);
}

static void test_listed_codes(void **state)
{
	(void)state;
	check_variety(&(struct variety){2, 3, 3, 3, 4, 0, 0}, 20262);
}

static void test_overlapping_fields(void **state)
{
	(void)state;
	check_variety(&(struct variety){4, 1, 5, 4, 3, 0, 0}, 20263);
}

static void test_many_states(void **state)
{
	(void)state;
	check_variety(&(struct variety){5, 2, 6, 5, 2, 0, 0}, 20266);
}

static void test_automatic_codes(void **state)
{
	(void)state;
	check_variety(&(struct variety){2, 3, 1, 3, 3, 1, 0}, 20264);
}

static void test_automatic_fields(void **state)
{
	(void)state;
	check_variety(&(struct variety){2, 3, 3, 2, 2, 2, 0}, 20265);
}

// Fields of up to 4 codes that share bits, all codes to be chosen, with holds and starts that cut through them.
static void test_automatic_overlaps(void **state)
{
	(void)state;
	check_variety(&(struct variety){3, 1, 4, 2, 2, 3, 3000}, 20267);
}

static void test_automatic_wide(void **state)
{
	(void)state;
	check_variety(&(struct variety){4, 1, 3, 3, 1, 2, 300}, 20268);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_holds),
		cmocka_unit_test(test_listed_codes),
		cmocka_unit_test(test_overlapping_fields),
		cmocka_unit_test(test_many_states),
		cmocka_unit_test(test_automatic_codes),
		cmocka_unit_test(test_automatic_fields),
		cmocka_unit_test(test_automatic_overlaps),
		cmocka_unit_test(test_automatic_wide),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
