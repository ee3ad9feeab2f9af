// The catalogue as tables and as JSON: of a small catalogue worked out by hand, and of the built-in one.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdio.h>
#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "catalogue/catalogue.h"
#include "view/parts.h"

static const struct access_grade harbour_grades[] = {
	{{9, 200000000}, "sheet one"},     // 45 ns
	{{7, 100000000}, "sheet two"},     // 70 ns
	{{9, 100000000}, "sheet two"},     // 90 ns
	{{1, 3000000000}, "by division"},  // 1/3 ns
};
static const struct access_grade tiny_grades[] = {{{1, 8000000}, "from memory"}}; // 125 ns
static const struct package_pin harbour_pins[] = {{"A3", PIN_ADDRESS, 3}, {"GND", PIN_GROUND, 0}};
static const struct part harbour_parts[] = {
	{"HARBOUR32", 15, 8, "DIP-28", harbour_grades, 4, "chart of the pins", NULL, 0, NULL},
	{"WIDE1M", 20, 16, "", tiny_grades, 1, "s", NULL, 0, NULL},
	{"TINY", 4, 8, "DIP-16", tiny_grades, 1, "t", harbour_pins, 2, "drawn"},
};
static const struct logic_part harbour_logic[] = {
	{"LATCH", LOGIC_LATCH, {21, 2000000000}, {3, 1000000000}, "4.5 V, 85 \xC2\xB0" "C", "delay sheet", "setup sheet"},
	{"COUNT", LOGIC_COUNTER, {5, 100000000}, {1, 25000000}, "4.5 V", "a", "b"},
	{"DECODE", LOGIC_DECODER, {19, 500000000}, {0, 1}, "4.5 V", "c", ""},
};
static const struct catalogue harbour = {harbour_parts, 3, harbour_logic, 3};

static void tables_are_aligned_and_followed_by_sources(void **state)
{
	(void)state;
	struct text out = {0};
	view_parts(&out, &harbour);
	assert_false(out.failed);
	assert_string_equal(text_string(&out),
		"Memories (address, data: pins; K = 1024, M = 1024 K)\n"
		"\n"
		"name       organisation    bytes  address  data  package  access\n"
		"HARBOUR32       32K x 8    32768       15     8  DIP-28   45, 70, 90, 1/3 ns\n"
		"WIDE1M          1M x 16  2097152       20    16           125 ns\n"
		"TINY             16 x 8       16        4     8  DIP-16   125 ns\n"
		"\n"
		"Sources of the memories' values\n"
		"\n"
		"name       value                  source\n"
		"HARBOUR32  organisation, package  chart of the pins\n"
		"HARBOUR32  45 ns                  sheet one\n"
		"HARBOUR32  70, 90 ns              sheet two\n"
		"HARBOUR32  1/3 ns                 by division\n"
		"WIDE1M     organisation, package  s\n"
		"WIDE1M     125 ns                 from memory\n"
		"TINY       organisation, package  t\n"
		"TINY       pinout                 drawn\n"
		"TINY       125 ns                 from memory\n"
		"\n"
		"Latches, counters and decoders (delay: clock, or a decoder's address, to output)\n"
		"\n"
		"name    kind       delay  setup  conditions\n"
		"LATCH   latch    10.5 ns   3 ns  4.5 V, 85 \xC2\xB0" "C\n"
		"COUNT   counter    50 ns  40 ns  4.5 V\n"
		"DECODE  decoder    38 ns      -  4.5 V\n"
		"\n"
		"Sources of their values\n"
		"\n"
		"name    value          source\n"
		"LATCH   delay 10.5 ns  delay sheet\n"
		"LATCH   setup 3 ns     setup sheet\n"
		"COUNT   delay 50 ns    a\n"
		"COUNT   setup 40 ns    b\n"
		"DECODE  delay 38 ns    c\n");
	text_release(&out);
}

// 2^62 seconds do not fit as a 64-bit number of nanoseconds.
static void a_time_that_no_nanoseconds_hold_is_put_in_seconds(void **state)
{
	(void)state;
	const struct access_grade slow = {{INT64_C(4611686018427387904), 1}, "s"};
	const struct part part = {"SLOW", 4, 8, "", &slow, 1, "s", NULL, 0, NULL};
	const struct catalogue catalogue = {&part, 1, NULL, 0};
	struct text out = {0};
	view_parts(&out, &catalogue);
	assert_non_null(strstr(text_string(&out), "4611686018427387904 s"));
	text_release(&out);
}

static const char *string_of(const json_t *object, const char *key)
{
	const char *string = json_string_value(json_object_get(object, key));
	assert_non_null(string);
	return string;
}

static void assert_time(const json_t *time, const char *exact, const char *seconds, double nanoseconds, const char *source)
{
	assert_string_equal(string_of(time, "time"), exact);
	assert_string_equal(string_of(time, "seconds"), seconds);
	assert_true(json_is_number(json_object_get(time, "ns")));
	const double error = json_number_value(json_object_get(time, "ns")) - nanoseconds;
	assert_true(error < 1e-9 && error > -1e-9);
	assert_string_equal(string_of(time, "source"), source);
	assert_int_equal(json_object_size(time), 4);
}

static void json_has_exact_times_beside_rounded_ones(void **state)
{
	(void)state;
	json_t *root = view_parts_json(&harbour);
	assert_non_null(root);
	assert_int_equal(json_object_size(root), 4);
	const json_t *memories = json_object_get(root, "memories");
	assert_int_equal(json_array_size(memories), 3);
	const json_t *memory = json_array_get(memories, 0);
	assert_string_equal(string_of(memory, "name"), "HARBOUR32");
	assert_string_equal(string_of(memory, "organisation"), "32K x 8");
	assert_int_equal(json_integer_value(json_object_get(memory, "bytes")), 32768);
	assert_int_equal(json_integer_value(json_object_get(memory, "address_pins")), 15);
	assert_int_equal(json_integer_value(json_object_get(memory, "data_pins")), 8);
	assert_string_equal(string_of(memory, "package"), "DIP-28");
	assert_string_equal(string_of(memory, "source"), "chart of the pins");
	const json_t *access = json_object_get(memory, "access");
	assert_int_equal(json_array_size(access), 4);
	assert_time(json_array_get(access, 0), "45 ns", "9/200000000", 45, "sheet one");
	assert_time(json_array_get(access, 3), "1/3 ns", "1/3000000000", 1.0 / 3, "by division");
	assert_true(json_is_null(json_object_get(memory, "pinout")));
	const json_t *pinout = json_object_get(json_array_get(memories, 2), "pinout");
	assert_int_equal(json_array_size(json_object_get(pinout, "pins")), 2);
	assert_string_equal(json_string_value(json_array_get(json_object_get(pinout, "pins"), 0)), "A3");
	assert_string_equal(string_of(pinout, "source"), "drawn");
	json_decref(root);
}

static void json_keeps_the_kinds_of_logic_apart(void **state)
{
	(void)state;
	json_t *root = view_parts_json(&harbour);
	assert_non_null(root);
	assert_int_equal(json_array_size(json_object_get(root, "latches")), 1);
	assert_int_equal(json_array_size(json_object_get(root, "counters")), 1);
	assert_int_equal(json_array_size(json_object_get(root, "decoders")), 1);
	const json_t *latch = json_array_get(json_object_get(root, "latches"), 0);
	assert_string_equal(string_of(latch, "name"), "LATCH");
	assert_string_equal(string_of(latch, "conditions"), "4.5 V, 85 \xC2\xB0" "C");
	assert_time(json_object_get(latch, "delay"), "10.5 ns", "21/2000000000", 10.5, "delay sheet");
	assert_time(json_object_get(latch, "setup"), "3 ns", "3/1000000000", 3, "setup sheet");
	const json_t *decoder = json_array_get(json_object_get(root, "decoders"), 0);
	assert_time(json_object_get(decoder, "delay"), "38 ns", "19/500000000", 38, "c");
	assert_null(json_object_get(decoder, "setup"));
	json_decref(root);
}

static void assert_lines_fit(const char *text, size_t limit)
{
	for (const char *line = text; *line != '\0'; line += strcspn(line, "\n") + 1) {
		size_t characters = 0;
		for (size_t index = 0; index < strcspn(line, "\n"); index++)
			characters += ((unsigned char)line[index] & 0xC0u) != 0x80u;
		assert_true(characters <= limit);
	}
}

// Every part has a row in its table and one for each of its sources.
static void the_built_in_catalogue_fits_a_terminal(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	struct diagnostics *diagnostics = diagnostics_create();
	const struct catalogue *catalogue = catalogue_load(arena, diagnostics);
	assert_non_null(catalogue);
	struct text out = {0};
	view_parts(&out, catalogue);
	assert_false(out.failed);
	assert_lines_fit(text_string(&out), 100);
	// 28C256 is 32K x 8 = 32768 bytes on 15 + 8 pins, AT28C256 Rev 0006M.
	assert_non_null(strstr(text_string(&out), "\n28C256         32K x 8    32768       15     8  DIP-28   "
	                                          "70, 90, 120, 150, 200, 250, 350 ns\n"));
	assert_non_null(strstr(text_string(&out), "\n74HC574   delay 41 ns    CD74HC574 data sheet SCHS183E"));
	text_release(&out);
	diagnostics_destroy(diagnostics);
	arena_destroy(arena);
}

static void json_of_the_built_in_catalogue_has_every_part(void **state)
{
	(void)state;
	struct arena *arena = arena_create();
	struct diagnostics *diagnostics = diagnostics_create();
	const struct catalogue *catalogue = catalogue_load(arena, diagnostics);
	assert_non_null(catalogue);
	json_t *root = view_parts_json(catalogue);
	assert_non_null(root);
	assert_int_equal(json_array_size(json_object_get(root, "memories")), catalogue->part_count);
	assert_int_equal(json_array_size(json_object_get(root, "latches")) + json_array_size(json_object_get(root, "counters")) +
	                 json_array_size(json_object_get(root, "decoders")), catalogue->logic_count);
	json_decref(root);
	diagnostics_destroy(diagnostics);
	arena_destroy(arena);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(tables_are_aligned_and_followed_by_sources),
		cmocka_unit_test(a_time_that_no_nanoseconds_hold_is_put_in_seconds),
		cmocka_unit_test(json_has_exact_times_beside_rounded_ones),
		cmocka_unit_test(json_keeps_the_kinds_of_logic_apart),
		cmocka_unit_test(the_built_in_catalogue_fits_a_terminal),
		cmocka_unit_test(json_of_the_built_in_catalogue_has_every_part),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
