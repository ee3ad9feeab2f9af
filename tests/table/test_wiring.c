// The wiring of a plan, as maker and prover both read it.

#include "builder.h"

static void test_wiring_of(void **state)
{
	(void)state;
	struct bench *bench = bench_create(5, 4);
	const size_t top = bench_field(bench, "top", 4, 4);
	const size_t sync = bench_data(bench, "sync"), blank = bench_coded(bench, "blank", top, (const uint32_t[]){1}, 1);
	const size_t burst = bench_data(bench, "burst");
	bench->plan.chip_count = 2;
	bench->plan.bank_bits = 1;
	bench->plan.machine.line.advance = ADVANCE_COUNT;
	bench->plan.machine.line.clear = CLEAR_ASYNC;
	bench->plan.machine.line.outputs = OUTPUTS_DIRECT;
	const struct wiring wiring = wiring_of(&bench->plan);
	assert_ptr_equal(wiring.chips, bench->chips);
	assert_int_equal(wiring.chip_count, 2);
	assert_int_equal(wiring.line.state_bits, 5);
	assert_int_equal(wiring.bank_bits, 1);
	assert_int_equal(wiring.line.advance, ADVANCE_COUNT);
	assert_int_equal(wiring.line.clear, CLEAR_ASYNC);
	assert_int_equal(wiring.line.outputs, OUTPUTS_DIRECT);
	assert_int_equal(wiring.line.data_signals, SIGNAL(sync) | SIGNAL(burst)); // blank is decoded
	assert_int_equal(blank, 1);
	bench_destroy(bench);
}

static void test_chip_bytes(void **state)
{
	(void)state;
	const struct part narrow = {.name = "XROM15", .address_pins = 15, .data_pins = 8},
					  wide = {.name = "XROM16", .address_pins = 16, .data_pins = 16};
	assert_int_equal(chip_bytes(&(struct chip){.part = &narrow}), 32768);
	assert_int_equal(chip_bytes(&(struct chip){.part = &wide}), 131072);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_wiring_of),
		cmocka_unit_test(test_chip_bytes),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
