// What the reader makes of a line-frame machine: kinds, words, addresses, times. What it refuses is in tests/bad.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "plan/read.h"
#include "read.h"

static const char *const two_signals = "sync: { role: composite sync, active: low }, pump: { role: plain, active: high, stage: frame }";
static const char *const two_chips = "{ line: { part: 28C16, speed: 150 ns }, frame: { part: 28C64, speed: 200 ns } }";

static struct plan *read_text(struct reading *reading, const char *text)
{
	struct plan *plan = plan_read(add_source(reading, "quay.yaml", text), reading->catalogue, reading->diagnostics);
	assert_no_errors(reading);
	assert_non_null(plan);
	return plan;
}

// "state.0 state.1 kind.0": the pins of a chip up to the last that is wired.
static void assert_pins(const struct plan *plan, size_t chip, bool is_address, const char *wanted)
{
	char name[WIRE_NAME_BYTES];
	struct text found = {0};
	size_t wired = 0;
	const unsigned pins = is_address ? LIMIT_ADDRESS_PINS : LIMIT_DATA_PINS;
	for (unsigned pin = 0; pin < pins; pin++) {
		const char *wire = is_address ? address_wire_name(plan->chips[chip].address[pin], name)
		                              : data_wire_name(plan, plan->chips[chip].data[pin], name);
		text_printf(&found, "%s%s", pin > 0 ? " " : "", wire);
		if (strcmp(wire, "-") != 0)
			wired = found.length;
	}
	assert_int_equal(strlen(wanted), wired);
	assert_memory_equal(text_string(&found), wanted, wired);
	text_release(&found);
}

static void test_short_form_of_tables(void **state)
{
	(void)state;
	struct reading *reading = begin_reading();
	struct plan *plan = read_text(reading, plan_text(reading, 5, two_signals,
	                                                 "form: line-frame, line: { state: 6 bits, outputs: direct }, frame: { state: 3 bits }",
	                                                 two_chips, ""));
	assert_int_equal(plan->machine.form, FORM_LINE_FRAME);
	assert_int_equal(plan->machine.kind_bits, 3); // 5 types
	assert_int_equal(plan->machine.line.outputs, OUTPUTS_DIRECT);
	assert_int_equal(plan->machine.frame.outputs, OUTPUTS_REGISTERED);
	assert_int_equal(plan->chip_count, 2);
	assert_string_equal(plan->chips[0].label, "rom0");
	assert_string_equal(plan->chips[1].label, "rom1");
	assert_int_equal(plan->chips[0].stage, STAGE_LINE);
	assert_int_equal(plan->chips[1].stage, STAGE_FRAME);
	assert_string_equal(plan->chips[1].part->name, "28C64");
	assert_pins(plan, 0, true, "state.0 state.1 state.2 state.3 state.4 state.5 kind.0 kind.1 kind.2");
	assert_pins(plan, 0, false, "next.0 next.1 next.2 next.3 next.4 next.5 step sync");
	assert_pins(plan, 1, true, "state.0 state.1 state.2");
	assert_pins(plan, 1, false, "next.0 next.1 next.2 kind.0 kind.1 kind.2 pump");
	plan_destroy(plan);
	end_reading(reading);
}

static void test_short_form_of_counters(void **state)
{
	(void)state;
	struct reading *reading = begin_reading();
	struct plan *plan = read_text(reading, plan_text(reading, 2, two_signals,
	                                                 "form: line-frame, line: { state: 9 bits, advance: count, clear: async },"
	                                                 " frame: { state: 3 bits, advance: count }, kind: 2 bits",
	                                                 two_chips, ""));
	assert_int_equal(plan->machine.kind_bits, 2); // one more than 2 types need
	assert_pins(plan, 0, false, "step clear sync");
	assert_pins(plan, 1, false, "kind.0 kind.1 clear pump");
	plan_destroy(plan);
	end_reading(reading);
}

// Bits of a line stage's word that do not fit its first chip are on its second; the frame stage's chips come after them.
static void test_chips_of_both_stages_are_numbered_through(void **state)
{
	(void)state;
	struct reading *reading = begin_reading();
	struct plan *plan = read_text(reading, plan_text(reading, 1, two_signals,
	                                                 "form: line-frame, line: { state: 8 bits }, frame: { state: 8 bits }", two_chips, ""));
	assert_int_equal(plan->machine.kind_bits, 0);
	assert_int_equal(plan->chip_count, 4);
	assert_pins(plan, 1, false, "step sync");
	assert_pins(plan, 2, false, "next.0 next.1 next.2 next.3 next.4 next.5 next.6 next.7");
	assert_pins(plan, 3, false, "pump");
	assert_string_equal(plan->chips[3].label, "rom3");
	assert_int_equal(plan->chips[1].stage, STAGE_LINE);
	assert_int_equal(plan->chips[2].stage, STAGE_FRAME);
	plan_destroy(plan);
	end_reading(reading);
}

static void test_long_form(void **state)
{
	(void)state;
	struct reading *reading = begin_reading();
	struct plan *plan = read_text(reading, plan_text(reading, 2, two_signals, "form: line-frame, line: { state: 2 bits }, frame: { state: 1 bit }",
	                                                 "\n"
	                                                 "  - { label: V, stage: frame, part: 28C16, address: [bank.0, state.0, -, -, -, -, -, -, -, -, -],"
	                                                 " data: [pump, kind.0, -, next.0, -, -, -, -] }\n"
	                                                 "  - { label: H, stage: line, part: 28C16, address: [kind.0, -, state.1, low, state.0, bank.0, -, -, -, -, -],"
	                                                 " data: [-, step, sync, next.1, next.0, -, -, -] }",
	                                                 ""));
	assert_int_equal(plan->bank_bits, 1);
	assert_int_equal(plan->chips[0].stage, STAGE_FRAME);
	assert_int_equal(plan->chips[1].stage, STAGE_LINE);
	assert_pins(plan, 0, true, "bank.0 state.0");
	assert_pins(plan, 0, false, "pump kind.0 - next.0");
	assert_pins(plan, 1, true, "kind.0 - state.1 low state.0 bank.0");
	assert_pins(plan, 1, false, "- step sync next.1 next.0");
	plan_destroy(plan);
	end_reading(reading);
}

// Each stage's counter is the usual one for its clear; what the plan names is both's.
static void test_counters_by_stage(void **state)
{
	(void)state;
	static const char *const machine = "form: line-frame, line: { state: 4 bits, advance: count },"
	                                   " frame: { state: 4 bits, advance: count, clear: async }";
	struct reading *reading = begin_reading();
	struct plan *usual = read_text(reading, plan_text(reading, 1, two_signals, machine, two_chips, ""));
	struct plan *named = read_text(reading, plan_text(reading, 1, two_signals, machine, two_chips,
	                                                  "timing: { counter: 74HC161, counter delay: 7 ns }\n"));
	assert_string_equal(usual->timing.counter_part[STAGE_LINE], "74HC163");
	assert_string_equal(usual->timing.counter_part[STAGE_FRAME], "74HC161");
	assert_string_equal(named->timing.counter_part[STAGE_LINE], "74HC161");
	assert_string_equal(named->timing.counter_part[STAGE_FRAME], "74HC161");
	for (unsigned stage = 0; stage < STAGE_COUNT; stage++) {
		assert_int_equal(fraction_compare(named->timing.counter_delay_s[stage], (struct fraction){7, 1000000000}), 0);
		assert_int_equal(fraction_compare(named->timing.counter_setup_s[stage], usual->timing.counter_setup_s[STAGE_FRAME]), 0);
	}
	plan_destroy(usual);
	plan_destroy(named);
	end_reading(reading);
}

// Limits are reached without an error: 20 + 4 bits address the line stage; 11 + 1 + 3 + 11 bits feed back.
static void test_limits_are_within(void **state)
{
	(void)state;
	struct reading *reading = begin_reading();
	static const char *const wide = "\n  W: { address pins: 26, data pins: 16, access: [100 ns] }\n";
	char parts[128];
	snprintf(parts, sizeof parts, "parts:%s", wide);
	struct plan *address = read_text(reading, plan_text(reading, 9, two_signals,
	                                                    "form: line-frame, line: { state: 20 bits, outputs: direct },"
	                                                    " frame: { state: 6 bits, outputs: direct }",
	                                                    "{ line: { part: W }, frame: { part: W } }", parts));
	struct plan *feedback = read_text(reading, plan_text(reading, 5, two_signals,
	                                                     "form: line-frame, line: { state: 11 bits }, frame: { state: 11 bits }",
	                                                     "{ line: { part: W }, frame: { part: W } }", parts));
	// Direct outputs of the frame stage hold no kind: 12 + 1 + 13 bits; those of the line stage no step: 11 + 3 + 12.
	struct plan *no_kind = read_text(reading, plan_text(reading, 5, two_signals,
	                                                    "form: line-frame, line: { state: 12 bits }, frame: { state: 13 bits, outputs: direct }",
	                                                    "{ line: { part: W }, frame: { part: W } }", parts));
	struct plan *no_step = read_text(reading, plan_text(reading, 5, two_signals,
	                                                    "form: line-frame, line: { state: 11 bits, outputs: direct }, frame: { state: 12 bits }",
	                                                    "{ line: { part: W }, frame: { part: W } }", parts));
	assert_int_equal(address->machine.kind_bits, 4);
	plan_destroy(no_kind);
	plan_destroy(no_step);
	plan_destroy(address);
	plan_destroy(feedback);
	end_reading(reading);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_short_form_of_tables),
		cmocka_unit_test(test_short_form_of_counters),
		cmocka_unit_test(test_chips_of_both_stages_are_numbered_through),
		cmocka_unit_test(test_long_form),
		cmocka_unit_test(test_counters_by_stage),
		cmocka_unit_test(test_limits_are_within),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
