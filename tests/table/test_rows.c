// Small machines worked out by hand.

#include "builder.h"

// Six cells, nothing held: states count up from 0, but 7, which is a bit from the last cell's 5 and must not be spare,
// takes the place of 3. Each row stores what the next cell shows.
static void test_registered(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 6);
	const size_t sync = bench_data(bench, "sync"), blank = bench_data(bench, "blank");
	bench->signals[sync].active_high = false;
	bench->plan.role_signal[ROLE_BLANKING] = (int)blank;
	bench_region(bench, "picture", 3, 0);
	bench_region(bench, "porch", 1, SIGNAL(blank));
	bench_region(bench, "sync", 2, SIGNAL(blank) | SIGNAL(sync));
	const struct table *table = bench_table(bench);
	assert_states(table, (const uint32_t[]){0, 1, 2, 7, 4, 5}, 6);
	assert_row(table_row(table, STAGE_LINE, 0), 1, false, 1); // cell 1, picture: sync high (at rest), blank low
	assert_row(table_row(table, STAGE_LINE, 1), 2, false, 1); // cell 2, picture
	assert_row(table_row(table, STAGE_LINE, 2), 7, false, 3); // cell 3, porch: sync high, blank high
	assert_row(table_row(table, STAGE_LINE, 3), 4, false, 2); // cell 4, sync: sync low, blank high
	assert_row(table_row(table, STAGE_LINE, 4), 5, false, 2); // cell 5, sync
	assert_row(table_row(table, STAGE_LINE, 5), 0, false, 1); // back to cell 0, picture
	assert_row(table_spare(table, STAGE_LINE, 0), 0, false, 1);        // leads to cell 0, with its signals
	assert_valid(bench);
	bench_destroy(bench);
}

// The same with outputs straight from the EEPROM: each row stores what its own cell shows.
static void test_direct(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 6);
	const size_t sync = bench_data(bench, "sync"), blank = bench_data(bench, "blank");
	bench->signals[sync].active_high = false;
	bench->plan.role_signal[ROLE_BLANKING] = (int)blank;
	bench->plan.machine.line.outputs = OUTPUTS_DIRECT;
	bench_region(bench, "picture", 3, 0);
	bench_region(bench, "porch", 1, SIGNAL(blank));
	bench_region(bench, "sync", 2, SIGNAL(blank) | SIGNAL(sync));
	const struct table *table = bench_table(bench);
	assert_row(table_row(table, STAGE_LINE, 0), 1, false, 1); // picture: sync high, blank low
	assert_row(table_row(table, STAGE_LINE, 2), 7, false, 1); // picture
	assert_row(table_row(table, STAGE_LINE, 3), 4, false, 3); // porch
	assert_row(table_row(table, STAGE_LINE, 4), 5, false, 2); // sync
	assert_row(table_row(table, STAGE_LINE, 5), 0, false, 2); // sync
	assert_row(table_spare(table, STAGE_LINE, 0), 0, false, 3);        // at rest, but blanked: sync high, blank high
	bench_destroy(bench);
}

// A signal that later hardware delays by a cell must be a cell early at its pin, one with lead -1 a cell late.
static void test_lead(void **state)
{
	(void)state;
	struct bench *bench = bench_create(2, 4);
	const size_t load = bench_data(bench, "load"), mute = bench_data(bench, "mute");
	bench->signals[load].lead_cells = 1;
	bench->signals[mute].lead_cells = -1;
	bench_region(bench, "a", 1, 0);
	bench_region(bench, "b", 1, SIGNAL(load) | SIGNAL(mute));
	bench_region(bench, "c", 2, 0);
	const struct table *table = bench_table(bench);
	assert_int_equal(table->pins[0], SIGNAL(load)); // the timeline has it at cell 1
	assert_int_equal(table->pins[1], 0);
	assert_int_equal(table->pins[2], SIGNAL(mute)); // the timeline had it at cell 1
	assert_int_equal(table->pins[3], 0);
	assert_row(table_row(table, STAGE_LINE, 0), 1, false, 0); // the pins of cell 1
	assert_row(table_row(table, STAGE_LINE, 1), 2, false, 2); // the pins of cell 2: mute
	assert_row(table_row(table, STAGE_LINE, 2), 3, false, 0);
	assert_row(table_row(table, STAGE_LINE, 3), 0, false, 1); // the pins of cell 0: load
	assert_row(table_spare(table, STAGE_LINE, 0), 0, false, 1);
	bench_destroy(bench);
}

// A signal decoded from the top bit has no bit in the word, and picks the half of the states that its cells lie in. Of
// the states a bit from the last cell's 6, 4 is used; 7 and 2 take the places of 5 and 1 in their halves.
static void test_field_signal(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 5);
	const size_t top = bench_field(bench, "top", 2, 2);
	const size_t burst = bench_data(bench, "burst");
	const size_t blank = bench_coded(bench, "blank", top, (const uint32_t[]){1}, 1);
	bench->signals[blank].active_high = false;
	bench->plan.role_signal[ROLE_BLANKING] = (int)blank;
	bench_region(bench, "picture", 2, 0);
	bench_region(bench, "burst", 1, SIGNAL(blank) | SIGNAL(burst));
	bench_region(bench, "porch", 2, SIGNAL(blank));
	const struct table *table = bench_table(bench);
	assert_states(table, (const uint32_t[]){0, 2, 4, 7, 6}, 5);
	assert_row(table_row(table, STAGE_LINE, 0), 2, false, 0);
	assert_row(table_row(table, STAGE_LINE, 1), 4, false, 1); // burst is asserted in cell 2; blank is no data signal
	assert_row(table_row(table, STAGE_LINE, 2), 7, false, 0);
	assert_row(table_row(table, STAGE_LINE, 4), 0, false, 0);
	assert_row(table_spare(table, STAGE_LINE, 0), 0, false, 0);
	assert_codes(table, blank, (const uint32_t[]){1}, 1);
	assert_null(table->codes[burst]);
	assert_valid(bench);
	bench_destroy(bench);
}

// A field signal that must be a cell early: the states of the cells before are the coded ones.
static void test_field_lead(void **state)
{
	(void)state;
	struct bench *bench = bench_create(2, 4);
	const size_t top = bench_field(bench, "top", 1, 1);
	const size_t load = bench_coded(bench, "load", top, (const uint32_t[]){1}, 1);
	bench->signals[load].lead_cells = 1;
	bench_region(bench, "wait", 2, 0);
	bench_region(bench, "load", 2, SIGNAL(load));
	const struct table *table = bench_table(bench);
	// Pins: cell 0 shows cell 1 (not), cells 1 and 2 show 2 and 3 (load), cell 3 shows cell 0 (not).
	assert_states(table, (const uint32_t[]){0, 2, 3, 1}, 4);
	assert_valid(bench);
	bench_destroy(bench);
}

// A frame of six cells that repeats after two needs two states.
static void test_period(void **state)
{
	(void)state;
	struct bench *bench = bench_create(1, 6);
	const size_t tick = bench_data(bench, "tick");
	for (int line = 0; line < 3; line++) {
		bench_region(bench, "low", 1, 0);
		bench_region(bench, "high", 1, SIGNAL(tick));
	}
	const struct table *table = bench_table(bench);
	assert_states(table, (const uint32_t[]){0, 1}, 2);
	assert_row(table_row(table, STAGE_LINE, 0), 1, false, 1);
	assert_row(table_row(table, STAGE_LINE, 1), 0, false, 0);
	bench_destroy(bench);
}

// A frame without any change needs one state, which leads to itself.
static void test_one_cell(void **state)
{
	(void)state;
	struct bench *bench = bench_create(1, 4);
	const size_t on = bench_data(bench, "on");
	bench_region(bench, "all", 4, SIGNAL(on));
	const struct table *table = bench_table(bench);
	assert_states(table, (const uint32_t[]){0}, 1);
	assert_row(table_row(table, STAGE_LINE, 0), 0, false, 1);
	bench_destroy(bench);
}

// What is held stays where it is; free cells take the lowest states that are left, the start its own.
static void test_hold_and_start(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 6);
	const size_t at = bench_field(bench, "at", 2, 0);
	const size_t blank = bench_data(bench, "blank");
	bench_start(bench, 7);
	bench_region(bench, "porch", 3, SIGNAL(blank));
	bench_region(bench, "picture", 3, 0);
	bench_hold(bench, at, 0, 1);
	const struct table *table = bench_table(bench);
	assert_states(table, (const uint32_t[]){7, 3, 4, 0, 1, 2}, 6);
	assert_row(table_row(table, STAGE_LINE, 2), 0, false, 0); // from the porch into the picture at state 0
	assert_row(table_row(table, STAGE_LINE, 5), 7, false, 1); // and back to the start
	assert_row(table_spare(table, STAGE_LINE, 0), 7, false, 1);
	assert_valid(bench);
	bench_destroy(bench);
}

// A counter that is cleared at the next edge: the last state's row asserts clear.
static void test_count_sync(void **state)
{
	(void)state;
	struct bench *bench = bench_create(3, 5);
	const size_t sync = bench_data(bench, "sync");
	bench->plan.machine.line.advance = ADVANCE_COUNT;
	bench->plan.machine.line.clear = CLEAR_SYNC;
	bench_region(bench, "line", 4, 0);
	bench_region(bench, "sync", 1, SIGNAL(sync));
	const struct table *table = bench_table(bench);
	assert_states(table, (const uint32_t[]){0, 1, 2, 3, 4}, 5);
	assert_row(table_row(table, STAGE_LINE, 0), 0, false, 0);
	assert_row(table_row(table, STAGE_LINE, 3), 0, false, 1); // cell 4 is sync
	assert_row(table_row(table, STAGE_LINE, 4), 0, true, 0);  // the last: clear, and cell 0 follows
	assert_row(table_spare(table, STAGE_LINE, 0), 0, true, 0);         // states 5 to 7
	bench_destroy(bench);
}

// Even where the counter would wrap by itself, clear is asserted in the last row.
static void test_count_sync_full(void **state)
{
	(void)state;
	struct bench *bench = bench_create(2, 4);
	const size_t sync = bench_data(bench, "sync");
	bench->plan.machine.line.advance = ADVANCE_COUNT;
	bench_region(bench, "line", 3, 0);
	bench_region(bench, "sync", 1, SIGNAL(sync));
	const struct table *table = bench_table(bench);
	assert_row(table_row(table, STAGE_LINE, 2), 0, false, 1);
	assert_row(table_row(table, STAGE_LINE, 3), 0, true, 0);
	bench_destroy(bench);
}

// A counter that is cleared at once: only rows that are no cell's assert clear. Direct outputs, at rest but blanked
// there.
static void test_count_async(void **state)
{
	(void)state;
	struct bench *bench = bench_create(2, 3);
	const size_t sync = bench_data(bench, "sync"), blank = bench_data(bench, "blank");
	bench->plan.role_signal[ROLE_BLANKING] = (int)blank;
	bench->plan.machine.line.advance = ADVANCE_COUNT;
	bench->plan.machine.line.clear = CLEAR_ASYNC;
	bench->plan.machine.line.outputs = OUTPUTS_DIRECT;
	bench_region(bench, "line", 2, 0);
	bench_region(bench, "sync", 1, SIGNAL(sync) | SIGNAL(blank));
	const struct table *table = bench_table(bench);
	assert_states(table, (const uint32_t[]){0, 1, 2}, 3);
	assert_row(table_row(table, STAGE_LINE, 0), 0, false, 0);
	assert_row(table_row(table, STAGE_LINE, 2), 0, false, 3);
	assert_row(table_spare(table, STAGE_LINE, 0), 0, true, 2); // state 3, one past the last
	bench_destroy(bench);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_registered),  cmocka_unit_test(test_direct),
		cmocka_unit_test(test_lead),        cmocka_unit_test(test_field_signal),
		cmocka_unit_test(test_field_lead),  cmocka_unit_test(test_period),
		cmocka_unit_test(test_one_cell),    cmocka_unit_test(test_hold_and_start),
		cmocka_unit_test(test_count_sync),  cmocka_unit_test(test_count_sync_full),
		cmocka_unit_test(test_count_async),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
