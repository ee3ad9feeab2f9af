// What the reader makes of a set and of the plans in it. What it refuses is in tests/bad.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "plan/read.h"
#include "read.h"

static struct set *read_set_text(struct reading *reading, const char *name, const char *text)
{
	return set_read(add_source(reading, name, text), reading->diagnostics);
}

static const char *const two_banks = "scanlatch-set: 1\nname: kit\nbank: 2 bits\nbanks: { 2: deep/b.yaml, 0: a.yaml }\n";

static void test_set(void **state)
{
	(void)state;
	struct reading *reading = begin_reading();
	struct set *set = read_set_text(reading, "boards/kit.yaml", two_banks);
	assert_no_errors(reading);
	assert_string_equal(set->name, "kit");
	assert_string_equal(set->note, "");
	assert_string_equal(set->file_name, "kit.yaml");
	assert_int_equal(set->bank_bits, 2);
	assert_int_equal(set->bank_count, 2);
	assert_int_equal(set->banks[0].number, 0);
	assert_int_equal(set->banks[1].number, 2);
	assert_int_equal(set->banks[1].place.column, 13); // of the path in the fourth line
	assert_int_equal(set->banks[1].place.line, 4);
	assert_string_equal(set_bank_path(reading->arena, set, 0), "boards/a.yaml");
	assert_string_equal(set_bank_path(reading->arena, set, 1), "boards/deep/b.yaml");
	// Banks 1 and 3 are not listed.
	assert_int_equal(set_bank_shown(set, 0), 0);
	assert_int_equal(set_bank_shown(set, 1), 0);
	assert_int_equal(set_bank_shown(set, 2), 1);
	assert_int_equal(set_bank_shown(set, 3), 0);
	set_destroy(set);
	end_reading(reading);
}

// A set in the folder where the program runs: a path that looks like standard input, or like an option, is none.
static void test_paths_without_folder(void **state)
{
	(void)state;
	struct reading *reading = begin_reading();
	struct set *set = read_set_text(reading, "kit.yaml", "scanlatch-set: 1\nname: kit\nbank: 1 bit\nbanks: { 0: '-', 1: ..a/b..yaml }\n");
	assert_no_errors(reading);
	assert_string_equal(set_bank_path(reading->arena, set, 0), "./-");
	assert_string_equal(set_bank_path(reading->arena, set, 1), "..a/b..yaml");
	set_destroy(set);
	struct set *root = read_set_text(reading, "/kit.yaml", two_banks);
	assert_string_equal(set_bank_path(reading->arena, root, 0), "/a.yaml");
	set_destroy(root);
	end_reading(reading);
}

// All 256 banks may be listed; one more number is doubled or too high, and each that is gets told.
static void test_all_banks(void **state)
{
	(void)state;
	struct reading *reading = begin_reading();
	struct text text = {0};
	text_put(&text, "scanlatch-set: 1\nname: kit\nbank: 8 bits\nbanks:\n");
	for (unsigned bank = 0; bank < 256; bank++)
		text_printf(&text, "  %u: plan.yaml\n", 255 - bank);
	struct set *set = read_set_text(reading, "kit.yaml", arena_copy(reading->arena, text_string(&text), text.length));
	assert_no_errors(reading);
	assert_int_equal(set->bank_count, 256);
	assert_int_equal(set->banks[255].number, 255);
	set_destroy(set);
	text_put(&text, "  0x0: plan.yaml\n  256: plan.yaml\n  0xff: plan.yaml\n");
	assert_null(read_set_text(reading, "kit.yaml", text_string(&text)));
	assert_int_equal(diagnostics_error_count(reading->diagnostics), 3);
	text_release(&text);
	end_reading(reading);
}

static void test_what_is_a_set(void **state)
{
	(void)state;
	struct reading *reading = begin_reading();
	assert_true(source_is_set(add_source(reading, "a", two_banks)));
	assert_true(source_is_set(add_source(reading, "b", "{ name: x, scanlatch-set: 7 }")));
	assert_false(source_is_set(add_source(reading, "c", "scanlatch: 1\n")));
	assert_false(source_is_set(add_source(reading, "d", "[scanlatch-set]")));
	assert_false(source_is_set(add_source(reading, "e", "scanlatch-set: [")));
	assert_false(source_is_set(add_source(reading, "f", "")));
	assert_int_equal(diagnostics_count(reading->diagnostics), 0);
	end_reading(reading);
}

static void assert_bank_pins(const struct chip *chip, unsigned first)
{
	assert_int_equal(chip->address[first - 1].kind == ADDRESS_BANK, false);
	for (unsigned bit = 0; bit < 2; bit++) {
		assert_int_equal(chip->address[first + bit].kind, ADDRESS_BANK);
		assert_int_equal(chip->address[first + bit].index, bit);
	}
	assert_int_equal(chip->address[first + 2].kind, ADDRESS_OPEN);
}

// In the short form the bank bits follow state and kind on each stage's chips.
static void test_bank_pins(void **state)
{
	(void)state;
	struct reading *reading = begin_reading();
	struct set *set = read_set_text(reading, "kit.yaml", two_banks);
	const char *text = plan_text(reading, 2, "sync: { role: composite sync, active: low }",
	                             "form: line-frame, line: { state: 3 bits }, frame: { state: 4 bits }",
	                             "{ line: { part: 28C16, speed: 150 ns }, frame: { part: 28C16, speed: 150 ns } }", "");
	const struct source *source = add_source(reading, "a.yaml", text);
	struct plan *first = plan_read_for_set(source, reading->catalogue, set, 0, reading->diagnostics);
	struct plan *second = plan_read_for_set(source, reading->catalogue, set, 1, reading->diagnostics);
	struct plan *alone = plan_read(source, reading->catalogue, reading->diagnostics);
	assert_no_errors(reading);
	assert_int_equal(first->bank_bits, 2);
	assert_bank_pins(&first->chips[0], 4);
	assert_bank_pins(&first->chips[1], 4);
	assert_int_equal(alone->bank_bits, 0);
	assert_int_equal(alone->chips[0].address[4].kind, ADDRESS_OPEN);
	const struct plan *const plans[] = {first, second};
	assert_true(set_plans_agree(set, plans, reading->diagnostics));
	assert_no_errors(reading);
	plan_destroy(first);
	plan_destroy(second);
	plan_destroy(alone);
	set_destroy(set);
	end_reading(reading);
}

// What a set leaves free: clocks, lines, roles, active levels, leads, the names of fields, where signals from fields stand among the others.
static void test_plans_may_differ(void **state)
{
	(void)state;
	struct reading *reading = begin_reading();
	struct set *set = read_set_text(reading, "kit.yaml", two_banks);
	static const char *const chips = "{ part: 28C16, speed: 150 ns }";
	const char *texts[] = {
		plan_text(reading, 1, "sync: { role: composite sync, active: low }, lamp: { role: plain, active: high, from: { field: top, codes: [0] } }",
	              "form: loop, state: 3 bits, fields: { top: 2 }, start: 1", chips, ""),
		plan_text(reading, 3, "lit: { role: plain, active: high }, lamp: { role: plain, active: high, from: { field: lit_by, codes: [0] } }",
	              "form: loop, state: 3 bits, fields: { lit_by: 2 }", chips, "timing: { share: 1/2 }\n"),
		plan_text(reading, 2, "lamp: { role: plain, active: high, from: { field: lit_by, codes: [0] } }, sync: { role: plain, active: high, lead: 1 cell }",
	              "form: loop, state: 3 bits, fields: { lit_by: 2 }", chips, ""),
	};
	struct plan *read[COUNT_OF(texts)];
	for (size_t plan = 0; plan < COUNT_OF(texts); plan++) {
		read[plan] = plan_read_for_set(add_source(reading, "plan.yaml", texts[plan]), reading->catalogue, set, 0, reading->diagnostics);
		assert_no_errors(reading);
	}
	const struct plan *const alike[] = {read[0], read[2]}, *const unlike[] = {read[0], read[1]};
	assert_true(set_plans_agree(set, alike, reading->diagnostics));
	assert_no_errors(reading);
	assert_false(set_plans_agree(set, unlike, reading->diagnostics)); // sync and lit
	assert_int_equal(diagnostics_error_count(reading->diagnostics), 1);
	for (size_t plan = 0; plan < COUNT_OF(texts); plan++)
		plan_destroy(read[plan]);
	set_destroy(set);
	end_reading(reading);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_set),
		cmocka_unit_test(test_paths_without_folder),
		cmocka_unit_test(test_all_banks),
		cmocka_unit_test(test_what_is_a_set),
		cmocka_unit_test(test_bank_pins),
		cmocka_unit_test(test_plans_may_differ),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
