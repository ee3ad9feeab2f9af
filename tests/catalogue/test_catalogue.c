// The built-in catalogue against published organisations and times, and the reader against bad catalogues.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdio.h>
#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

struct fixture {
	struct arena *arena;
	struct diagnostics *diagnostics;
	const struct catalogue *catalogue; // the built-in one
};

static int set_up(void **state)
{
	static struct fixture fixture;
	fixture = (struct fixture){arena_create(), diagnostics_create(), NULL};
	if (fixture.arena == NULL || fixture.diagnostics == NULL)
		return -1;
	fixture.catalogue = catalogue_load(fixture.arena, fixture.diagnostics);
	*state = &fixture;
	return 0;
}

static int tear_down(void **state)
{
	struct fixture *fixture = *state;
	diagnostics_destroy(fixture->diagnostics);
	arena_destroy(fixture->arena);
	return 0;
}

static void loads_without_a_diagnostic(void **state)
{
	const struct fixture *fixture = *state;
	assert_non_null(fixture->catalogue);
	assert_int_equal(diagnostics_count(fixture->diagnostics), 0);
}

// Organisation as the makers title their data sheets, in K of 1024 words, and the pins of the DIP.
struct expected_part {
	const char *name;
	unsigned address_pins, data_pins;
	size_t kilowords;
	const char *package;
	unsigned grades_ns[9]; // 0 ends them
};

static const struct expected_part expected_parts[] = {
	// AT28C16 Rev 0540B: 2K x 8, 24 pins, 150 ns; M28C16: 90 ns; 200 and 250 from memory.
	{"28C16", 11, 8, 2, "DIP-24", {90, 150, 200, 250}},
	// AT28C64, AT28C64B: 8K x 8, 28 pins, 120 and 150 ns; the others from memory.
	{"28C64", 13, 8, 8, "DIP-28", {70, 120, 150, 200, 250}},
	// AT28C256 Rev 0006M: 32K x 8, 28 pins, suffixes -15 -20 -25 -35; below 150 ns from memory.
	{"28C256", 15, 8, 32, "DIP-28", {70, 90, 120, 150, 200, 250, 350}},
	// AT28C010 Rev 0353E: 128K x 8, 32 pins, 120 ns; the others from memory.
	{"28C010", 17, 8, 128, "DIP-32", {120, 150, 200}},
	// From memory.
	{"29C010", 17, 8, 128, "DIP-32", {70, 90, 120, 150}},
	// SST39SF0x0, S71147-02 (2001): 45 and 70 ns; DS20005022C (2016): 55 and 70 ns; 128K, 256K, 512K x 8, 32 pins.
	{"39SF010A", 17, 8, 128, "DIP-32", {45, 55, 70}},
	{"39SF020A", 18, 8, 256, "DIP-32", {45, 55, 70}},
	{"39SF040", 19, 8, 512, "DIP-32", {45, 55, 70}},
	// Pins: KiCad Memory_EPROM 6.0.10 (27C256: A0 … A14 on 28 pins, 27C512: A0 … A15). Times: from memory.
	{"27C256", 15, 8, 32, "DIP-28", {45, 70, 90, 120, 150, 200}},
	{"27C512", 16, 8, 64, "DIP-28", {45, 70, 90, 100, 120, 150}},
	{"27C010", 17, 8, 128, "DIP-32", {45, 70, 90, 120, 150}},
	// TMS27C020 SMLS020C: 256K x 8, 100 to 250 ns; below 100 ns from memory.
	{"27C020", 18, 8, 256, "DIP-32", {55, 70, 90, 100, 120, 150, 200, 250}},
	// NM27C040 Rev C.1: 512K x 8, 120 and 150 ns; the others from memory.
	{"27C040", 19, 8, 512, "DIP-32", {70, 90, 120, 150}},
	// KiCad Memory_EPROM 6.0.10: "1 Mi x 8", A0 … A19. Times: from memory.
	{"27C080", 20, 8, 1024, "DIP-32", {90, 100, 120, 150}},
	// From memory: 64K x 16, 40 pins.
	{"27C1024", 16, 16, 64, "DIP-40", {45, 90, 120, 150}},
};

static void assert_nanoseconds(struct fraction seconds, int64_t tenths_ns)
{
	struct fraction wanted;
	assert_true(fraction_make(tenths_ns, INT64_C(10000000000), &wanted));
	assert_int_equal(fraction_compare(seconds, wanted), 0);
}

static void assert_grades(const struct part *part, const unsigned *grades_ns)
{
	size_t count = 0;
	for (; grades_ns[count] != 0; count++) {
		assert_true(count < part->grade_count);
		assert_nanoseconds(part->grades[count].access_s, grades_ns[count] * INT64_C(10));
	}
	assert_int_equal(part->grade_count, count);
}

static void memories_are_the_published_ones(void **state)
{
	const struct fixture *fixture = *state;
	assert_int_equal(fixture->catalogue->part_count, COUNT_OF(expected_parts));
	for (size_t index = 0; index < COUNT_OF(expected_parts); index++) {
		const struct expected_part *expected = &expected_parts[index];
		const struct part *part = catalogue_part(fixture->catalogue, expected->name);
		assert_non_null(part);
		assert_int_equal(part->address_pins, expected->address_pins);
		assert_int_equal(part->data_pins, expected->data_pins);
		assert_string_equal(part->package, expected->package);
		assert_int_equal(part_bytes(part), expected->kilowords * 1024 * expected->data_pins / 8);
		assert_grades(part, expected->grades_ns);
	}
}

// A package must have room for address and data pins and for four others: chip and output enable, supply and ground.
static void packages_have_room_for_the_pins(void **state)
{
	const struct fixture *fixture = *state;
	for (size_t index = 0; index < fixture->catalogue->part_count; index++) {
		const struct part *part = &fixture->catalogue->parts[index];
		unsigned pins = 0;
		assert_int_equal(sscanf(part->package, "DIP-%u", &pins), 1);
		assert_true(part->address_pins + part->data_pins + 4 <= pins);
	}
}

// Pins by their numbers as data sheets print them, from the sheets and the KiCad library's symbols that parts.yaml names: those where the
// parts differ, and both ends of the rest.
struct expected_pin {
	const char *part;
	unsigned number;
	const char *name;
};

static const struct expected_pin expected_pins[] = {
	// AT28C16 Rev 0540B.
	{"28C16", 1, "A7"}, {"28C16", 8, "A0"}, {"28C16", 9, "D0"}, {"28C16", 17, "D7"}, {"28C16", 18, "/CE"}, {"28C16", 19, "A10"},
	{"28C16", 20, "/OE"}, {"28C16", 21, "/WE"}, {"28C16", 22, "A9"}, {"28C16", 23, "A8"}, {"28C16", 12, "GND"}, {"28C16", 24, "VCC"},
	// AT28C64.
	{"28C64", 1, "RDY"}, {"28C64", 2, "A12"}, {"28C64", 23, "A11"}, {"28C64", 26, "NC"}, {"28C64", 27, "/WE"},
	// AT28C256 Rev 0006M; KiCad. A14 and A13 change places with /WE and VPP in the EPROM.
	{"28C256", 1, "A14"}, {"28C256", 26, "A13"}, {"28C256", 27, "/WE"}, {"28C256", 14, "GND"}, {"28C256", 28, "VCC"},
	{"27C256", 1, "VPP"}, {"27C256", 26, "A13"}, {"27C256", 27, "A14"}, {"27C256", 20, "/CE"}, {"27C256", 22, "/OE"},
	{"27C512", 1, "A15"}, {"27C512", 27, "A14"}, {"27C512", 22, "/OE/VPP"},
	// AT28C010 Rev 0353E.
	{"28C010", 1, "NC"}, {"28C010", 2, "A16"}, {"28C010", 3, "A15"}, {"28C010", 4, "A12"}, {"28C010", 12, "A0"}, {"28C010", 13, "D0"},
	{"28C010", 16, "GND"}, {"28C010", 22, "/CE"}, {"28C010", 24, "/OE"}, {"28C010", 28, "A13"}, {"28C010", 29, "A14"},
	{"28C010", 30, "NC"}, {"28C010", 31, "/WE"}, {"28C010", 32, "VCC"},
	// KiCad Memory_Flash and Memory_EPROM 6.0.10.
	{"39SF010A", 30, "NC"}, {"39SF020A", 30, "A17"}, {"39SF040", 1, "A18"}, {"39SF040", 31, "/WE"}, {"27C010", 31, "/PGM"},
	{"27C020", 30, "A17"}, {"27C040", 1, "VPP"}, {"27C040", 31, "A18"}, {"27C080", 1, "A19"},
	// From memory.
	{"27C1024", 1, "VPP"}, {"27C1024", 2, "/CE"}, {"27C1024", 3, "D15"}, {"27C1024", 11, "GND"}, {"27C1024", 19, "D0"},
	{"27C1024", 20, "/OE"}, {"27C1024", 21, "A0"}, {"27C1024", 30, "GND"}, {"27C1024", 37, "A15"}, {"27C1024", 40, "VCC"},
};

static void pins_are_where_data_sheets_have_them(void **state)
{
	const struct fixture *fixture = *state;
	for (size_t index = 0; index < COUNT_OF(expected_pins); index++) {
		const struct part *part = catalogue_part(fixture->catalogue, expected_pins[index].part);
		assert_non_null(part);
		assert_true(expected_pins[index].number <= part->pin_count);
		assert_string_equal(part->pins[expected_pins[index].number - 1].name, expected_pins[index].name);
	}
}

// JEDEC's byte-wide packages: supply and ground at opposite corners, and every pin of the package has its name.
static void packages_have_all_their_pins(void **state)
{
	const struct fixture *fixture = *state;
	for (size_t index = 0; index < fixture->catalogue->part_count; index++) {
		const struct part *part = &fixture->catalogue->parts[index];
		unsigned pins = 0, grounds = 0;
		assert_int_equal(sscanf(part->package, "DIP-%u", &pins), 1);
		assert_int_equal(part->pin_count, pins);
		assert_int_equal(part->pins[pins - 1].kind, PIN_SUPPLY);
		for (unsigned pin = 0; pin < pins; pin++)
			grounds += part->pins[pin].kind == PIN_GROUND;
		assert_int_equal(grounds, part->data_pins == 16 ? 2 : 1);
		assert_true(part_pin_number(part, PIN_ADDRESS, part->address_pins - 1) > 0);
		assert_int_equal(part_pin_number(part, PIN_ADDRESS, part->address_pins), 0);
	}
}

struct expected_logic {
	const char *name;
	enum logic_kind kind;
	int64_t delay_tenths_ns, setup_tenths_ns;
};

// The -40 … 85 °C columns, HC and HCT at 4.5 V, AC at 5 V.
static const struct expected_logic expected_logic[] = {
	// CD74HC374/574 SCHS183E (Oct 2022): 33 / 41 / 50 ns. Setup: SN74HC574 and SN74HC374, from memory (SCHS183E: 15 ns).
	{"74HC574", LOGIC_LATCH, 410, 250},
	{"74HC374", LOGIC_LATCH, 410, 250},
	// SN74HCT574 SCLS177H (Aug 2024) 4.6: 36 / 45 / 54 ns. Setup from memory.
	{"74HCT574", LOGIC_LATCH, 450, 250},
	// From memory: SN74HC273 32 / 40 / 48 and 20 / 25 / 30 ns.
	{"74HC273", LOGIC_LATCH, 400, 250},
	{"74AC574", LOGIC_LATCH, 105, 30},
	// From memory: SN74HC161 and SN74HC163; 41 ns and 25 ns at 25 °C second-hand.
	{"74HC161", LOGIC_COUNTER, 510, 310},
	{"74HC163", LOGIC_COUNTER, 510, 400},
	{"74AC161", LOGIC_COUNTER, 105, 90},
	{"74AC163", LOGIC_COUNTER, 105, 90},
	// CD74HC138 SCHS147J (Nov 2021) 5.5: 30 / 38 / 45 ns. The others from memory.
	{"74HC138", LOGIC_DECODER, 380, 0},
	{"74HCT138", LOGIC_DECODER, 440, 0},
	{"74AC138", LOGIC_DECODER, 100, 0},
};

static void logic_has_the_worst_case_times(void **state)
{
	const struct fixture *fixture = *state;
	assert_int_equal(fixture->catalogue->logic_count, COUNT_OF(expected_logic));
	for (size_t index = 0; index < COUNT_OF(expected_logic); index++) {
		const struct expected_logic *expected = &expected_logic[index];
		const struct logic_part *part = catalogue_logic(fixture->catalogue, expected->name);
		assert_non_null(part);
		assert_int_equal(part->kind, expected->kind);
		assert_nanoseconds(part->delay_s, expected->delay_tenths_ns);
		assert_nanoseconds(part->setup_s, expected->setup_tenths_ns);
	}
}

static void conditions_go_with_the_family(void **state)
{
	const struct fixture *fixture = *state;
	for (size_t index = 0; index < fixture->catalogue->logic_count; index++) {
		const struct logic_part *part = &fixture->catalogue->logic[index];
		const bool fast = strncmp(part->name, "74AC", 4) == 0;
		assert_int_equal(strncmp(part->conditions, fast ? "5 V" : "4.5 V", fast ? 3 : 5), 0);
		assert_non_null(strstr(part->conditions, "-40 to 85"));
	}
}

// What makes a source: a document's number or revision, or an honest word that there is none.
static bool is_source(const char *source)
{
	static const char *const words[] = {"data sheet", "KiCad symbol library", "from memory", "second-hand"};
	for (size_t index = 0; index < COUNT_OF(words); index++)
		if (strstr(source, words[index]) != NULL)
			return true;
	return false;
}

static void every_value_has_a_source(void **state)
{
	const struct fixture *fixture = *state;
	for (size_t index = 0; index < fixture->catalogue->part_count; index++) {
		const struct part *part = &fixture->catalogue->parts[index];
		assert_true(is_source(part->source));
		assert_true(is_source(part->pinout_source));
		assert_true(part->grade_count > 0);
		for (size_t grade = 0; grade < part->grade_count; grade++)
			assert_true(is_source(part->grades[grade].source));
	}
	for (size_t index = 0; index < fixture->catalogue->logic_count; index++) {
		const struct logic_part *part = &fixture->catalogue->logic[index];
		assert_true(is_source(part->delay_source));
		assert_int_equal(is_source(part->setup_source), part->kind != LOGIC_DECODER);
	}
}

static void names_are_unique(void **state)
{
	const struct catalogue *catalogue = ((const struct fixture *)*state)->catalogue;
	for (size_t index = 0; index < catalogue->part_count; index++) {
		assert_ptr_equal(catalogue_part(catalogue, catalogue->parts[index].name), &catalogue->parts[index]);
		assert_null(catalogue_logic(catalogue, catalogue->parts[index].name));
	}
	for (size_t index = 0; index < catalogue->logic_count; index++)
		assert_ptr_equal(catalogue_logic(catalogue, catalogue->logic[index].name), &catalogue->logic[index]);
}

static void names_are_looked_up_exactly(void **state)
{
	const struct catalogue *catalogue = ((const struct fixture *)*state)->catalogue;
	assert_null(catalogue_part(catalogue, "28c256"));
	assert_null(catalogue_part(catalogue, "28C25"));
	assert_null(catalogue_part(catalogue, "28C2560"));
	assert_null(catalogue_part(catalogue, ""));
	assert_null(catalogue_logic(catalogue, "74HC57"));
}

static void capacity_counts_both_bytes_of_a_word(void **state)
{
	(void)state;
	assert_int_equal(part_bytes(&(struct part){.address_pins = 1, .data_pins = 8}), 2);
	assert_int_equal(part_bytes(&(struct part){.address_pins = 26, .data_pins = 16}), 134217728);
}

// Reading other catalogues. A bad one differs from this in one line.
#define GOOD_MEMORY \
	"  M: { address pins: 4, data pins: 8, package: DIP-16, source: s, access: [ { time: 9 ns, source: s } ] }\n"
#define GOOD_LATCH "  L: { conditions: c, delay: { time: 1 ns, source: s }, setup: { time: 2 ns, source: s } }\n"
#define GOOD_COUNTER "  C: { conditions: c, delay: { time: 1 ns, source: s }, setup: { time: 2 ns, source: s } }\n"
#define GOOD_DECODER "  D: { conditions: c, delay: { time: 1 ns, source: s } }\n"
#define CATALOGUE(memory, latch, counter, decoder) \
	"memories:\n" memory "latches:\n" latch "counters:\n" counter "decoders:\n" decoder
#define WITH_MEMORY(memory) CATALOGUE(memory, GOOD_LATCH, GOOD_COUNTER, GOOD_DECODER)
#define MEMORY_WITH(pins, width, more) \
	WITH_MEMORY("  M: { address pins: " pins ", data pins: " width ", package: DIP-16, " more " }\n")
#define PINOUT_OF(pins) MEMORY_WITH("1", "8", "source: s, access: [ { time: 9 ns, source: s } ], pinout: " pins)
#define ACCESS_OF(grades) MEMORY_WITH("4", "8", "source: s, access: [ " grades " ]")

struct reading {
	struct arena *arena;
	struct diagnostics *diagnostics;
	struct source source;
	const struct catalogue *catalogue;
};

static struct reading read_catalogue(const char *bytes)
{
	struct reading reading = {arena_create(), diagnostics_create(), {"test.yaml", bytes, strlen(bytes)}, NULL};
	assert_non_null(reading.arena);
	assert_non_null(reading.diagnostics);
	reading.catalogue = catalogue_read(reading.arena, &reading.source, reading.diagnostics);
	return reading;
}

static void finish(struct reading *reading)
{
	diagnostics_destroy(reading->diagnostics);
	arena_destroy(reading->arena);
}

static void values_keep_their_sources(void **state)
{
	(void)state;
	struct reading reading = read_catalogue(CATALOGUE(
		"  M: { address pins: 4, data pins: 16, package: P, source: a, access: [ { time: 9 ns, source: b } ] }\n",
		"  L: { conditions: c, delay: { time: 1.5 ns, source: d }, setup: { time: 2 ns, source: e } }\n", GOOD_COUNTER,
		GOOD_DECODER));
	assert_non_null(reading.catalogue);
	const struct part *part = catalogue_part(reading.catalogue, "M");
	assert_non_null(part);
	assert_int_equal(part_bytes(part), 32);
	assert_string_equal(part->package, "P");
	assert_string_equal(part->source, "a");
	assert_string_equal(part->grades[0].source, "b");
	const struct logic_part *latch = catalogue_logic(reading.catalogue, "L");
	assert_non_null(latch);
	assert_string_equal(latch->conditions, "c");
	assert_nanoseconds(latch->delay_s, 15);
	assert_string_equal(latch->delay_source, "d");
	assert_string_equal(latch->setup_source, "e");
	finish(&reading);
}

static void grades_are_sorted_fastest_first(void **state)
{
	(void)state;
	struct reading reading = read_catalogue(
		ACCESS_OF("{ time: 30 ns, source: third }, { time: 10 ns, source: first }, { time: 20 ns, source: second }"));
	assert_non_null(reading.catalogue);
	assert_int_equal(reading.catalogue->parts[0].grade_count, 3);
	assert_string_equal(reading.catalogue->parts[0].grades[0].source, "first");
	assert_string_equal(reading.catalogue->parts[0].grades[1].source, "second");
	assert_string_equal(reading.catalogue->parts[0].grades[2].source, "third");
	assert_nanoseconds(reading.catalogue->parts[0].grades[2].access_s, 300);
	finish(&reading);
}

struct bad_catalogue {
	const char *bytes;
	enum rule rule;
};

static const struct bad_catalogue bad_catalogues[] = {
	{"", RULE_FILE_EMPTY},
	{"memories: [", RULE_YAML_SYNTAX},
	{"- memories", RULE_NODE_KIND},
	{"memories:\n" GOOD_MEMORY "latches:\n" GOOD_LATCH "counters:\n" GOOD_COUNTER, RULE_MISSING_KEY},
	{WITH_MEMORY(GOOD_MEMORY) "crystals: {}\n", RULE_UNKNOWN_KEY},
	{WITH_MEMORY("  []\n"), RULE_NODE_KIND},
	{WITH_MEMORY("  {}\n"), RULE_TOO_MANY},
	{WITH_MEMORY("  M: 3\n"), RULE_NODE_KIND},
	{WITH_MEMORY(GOOD_MEMORY GOOD_MEMORY), RULE_YAML_DUPLICATE_KEY},
	{CATALOGUE(GOOD_MEMORY, GOOD_LATCH, GOOD_LATCH, GOOD_DECODER), RULE_DOUBLED_NAME},
	{WITH_MEMORY("  D: { address pins: 4, data pins: 8, package: P, source: s, access: [ { time: 9 ns, source: s } ] }\n"),
	 RULE_DOUBLED_NAME},
	{MEMORY_WITH("0", "8", "source: s, access: [ { time: 9 ns, source: s } ]"), RULE_BAD_NUMBER},
	{MEMORY_WITH("27", "8", "source: s, access: [ { time: 9 ns, source: s } ]"), RULE_BAD_NUMBER},
	{PINOUT_OF("{ pins: [A0, D0, D1, D2, D3, D4, D5, D6, D7] }"), RULE_MISSING_KEY},
	{PINOUT_OF("{ pins: A0, source: s }"), RULE_NODE_KIND},
	{PINOUT_OF("{ pins: [], source: s }"), RULE_TOO_MANY},
	{PINOUT_OF("{ pins: [A0, A1, D0, D1, D2, D3, D4, D5, D6, D7], source: s }"), RULE_BAD_CHOICE},
	{PINOUT_OF("{ pins: [A0, D0, D1, D2, D3, D4, D5, D6, D7, D7], source: s }"), RULE_DOUBLED_NAME},
	{PINOUT_OF("{ pins: [A0, D0, D1, D2, D3, D4, D5, D6, NC], source: s }"), RULE_BAD_CHOICE},
	{MEMORY_WITH("4", "12", "source: s, access: [ { time: 9 ns, source: s } ]"), RULE_BAD_CHOICE},
	{MEMORY_WITH("4", "8", "access: [ { time: 9 ns, source: s } ]"), RULE_MISSING_KEY},
	{MEMORY_WITH("4", "8", "source: , access: [ { time: 9 ns, source: s } ]"), RULE_NODE_KIND},
	{MEMORY_WITH("4", "8", "source: s, access: 9 ns"), RULE_NODE_KIND},
	{ACCESS_OF(""), RULE_TOO_MANY},
	{ACCESS_OF("{ time: 9 ns }"), RULE_MISSING_KEY},
	{ACCESS_OF("{ source: s }"), RULE_MISSING_KEY},
	{ACCESS_OF("9 ns"), RULE_NODE_KIND},
	{ACCESS_OF("{ time: 0 ns, source: s }"), RULE_BAD_QUANTITY},
	{ACCESS_OF("{ time: 9, source: s }"), RULE_BAD_QUANTITY},
	{ACCESS_OF("{ time: 9 MHz, source: s }"), RULE_BAD_QUANTITY},
	{ACCESS_OF("{ time: 1 us, source: s }, { time: 1000 ns, source: s }"), RULE_BAD_QUANTITY},
	{CATALOGUE(GOOD_MEMORY, "  L: { conditions: c, delay: { time: 1 ns, source: s } }\n", GOOD_COUNTER, GOOD_DECODER),
	 RULE_MISSING_KEY},
	{CATALOGUE(GOOD_MEMORY, GOOD_LATCH, GOOD_COUNTER,
	           "  D: { conditions: c, delay: { time: 1 ns, source: s }, setup: { time: 2 ns, source: s } }\n"),
	 RULE_UNKNOWN_KEY},
};

static void a_bad_catalogue_is_refused_with_its_reason(void **state)
{
	(void)state;
	for (size_t index = 0; index < COUNT_OF(bad_catalogues); index++) {
		struct reading reading = read_catalogue(bad_catalogues[index].bytes);
		assert_null(reading.catalogue);
		assert_int_equal(diagnostics_error_count(reading.diagnostics), 1);
		assert_int_equal(diagnostics_rule(reading.diagnostics, 0), bad_catalogues[index].rule);
		finish(&reading);
	}
}

static void independent_errors_are_all_reported(void **state)
{
	(void)state;
	struct reading reading = read_catalogue(CATALOGUE(
		"  M: { address pins: 99, data pins: 9, package: P, source: s, access: [ { time: 9 ns, source: s } ] }\n",
		"  L: { conditions: c, delay: { time: 1, source: s }, setup: { time: 2 ns } }\n", GOOD_COUNTER, GOOD_DECODER));
	assert_null(reading.catalogue);
	assert_int_equal(diagnostics_error_count(reading.diagnostics), 4);
	finish(&reading);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(loads_without_a_diagnostic),
		cmocka_unit_test(memories_are_the_published_ones),
		cmocka_unit_test(packages_have_room_for_the_pins),
		cmocka_unit_test(pins_are_where_data_sheets_have_them),
		cmocka_unit_test(packages_have_all_their_pins),
		cmocka_unit_test(logic_has_the_worst_case_times),
		cmocka_unit_test(conditions_go_with_the_family),
		cmocka_unit_test(every_value_has_a_source),
		cmocka_unit_test(names_are_unique),
		cmocka_unit_test(names_are_looked_up_exactly),
		cmocka_unit_test(capacity_counts_both_bytes_of_a_word),
		cmocka_unit_test(values_keep_their_sources),
		cmocka_unit_test(grades_are_sorted_fastest_first),
		cmocka_unit_test(a_bad_catalogue_is_refused_with_its_reason),
		cmocka_unit_test(independent_errors_are_all_reported),
	};
	return cmocka_run_group_tests(tests, set_up, tear_down);
}
