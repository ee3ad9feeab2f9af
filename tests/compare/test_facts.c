// What the machine does, and what a plan says of standard, machine and chips. Cells are 1 us; sync is 5 of 64 of them.
#include "compared.h"

struct sketch {
	const char *standard, *clock, *role, *machine, *chips;
};

static const struct sketch plain = {"", "master: 10 MHz", "composite sync", "state: 12 bits", "part: 28C64, speed: 150 ns"};

static struct laid draw(struct sketch sketch)
{
	struct text text = {0};
	text_printf(&text,
	            "scanlatch: 1\n"
	            "name: quay\n"
	            "%sclock: { %s, cell: 10 ticks }\n"
	            "signals: { sync: { role: %s, active: low }, blank: { role: blanking, active: high } }\n"
	            "machine: { form: loop, %s }\n"
	            "chips: { %s }\n"
	            "lines: { a: { regions: [ { region: sync, cells: 5, assert: [sync, blank] }, { region: rest, cells: 59 } ] } }\n"
	            "frame: [ { repeat: 3, line: a } ]\n",
	            sketch.standard, sketch.clock, sketch.role, sketch.machine, sketch.chips);
	assert_false(text.failed);
	const struct laid laid = lay_whole(text_string(&text));
	text_release(&text);
	return laid;
}

static struct compared compare(struct sketch old, struct sketch now)
{
	return compare_laid(draw(old), draw(now));
}

static const struct fact *fact_of(const struct compared *compared, const char *what)
{
	for (size_t index = 0; index < compared->comparison->fact_count; index++)
		if (strcmp(compared->comparison->facts[index].what, what) == 0)
			return &compared->comparison->facts[index];
	return NULL;
}

static void assert_fact(struct compared compared, const char *what, const char *old, const char *now)
{
	const struct fact *fact = fact_of(&compared, what);
	assert_non_null(fact);
	assert_string_equal(fact->old, old);
	assert_string_equal(fact->now, now);
	forget(&compared);
}

static struct sketch with_clock(const char *clock)
{
	struct sketch sketch = plain;
	sketch.clock = clock;
	return sketch;
}

static struct sketch with_standard(const char *standard, const char *clock)
{
	struct sketch sketch = with_clock(clock);
	sketch.standard = standard;
	return sketch;
}

// A proof that could not be judged fails, but has no figures.
static void test_not_judged(void **state)
{
	(void)state;
	const char *width = "standard: { limits: { horizontal sync width: at least 4 us } }\n";
	struct sketch other = with_standard(width, "master: 10 MHz");
	other.role = "vertical sync";
	assert_fact(compare(with_clock("master: 14318181 Hz"), with_clock("master: 14318181.8181818181 Hz")), "speed of the chips",
	            "in time, 482.413 ns to spare", "not judged: the times do not fit fractions of 64 bits");
	assert_fact(compare(with_clock("master: 10 MHz, subcarrier: 1 MHz"),
	                    with_clock("master: 9999999.9999999 Hz, subcarrier: 0.0000000000001 Hz")), "colour",
	            "in step as asked, 64 cycles a line, repeats after 1 line and 1 frame",
	            "not judged: subcarrier cycles per tick do not fit 64 bits");
	assert_fact(compare(with_standard(width, "master: 10 MHz"), other), "limits", "1 of 1 kept at monitor grade of the plan's own",
	            "not judged: no signal has the role composite sync or horizontal sync");
}

// What one of the plans does not have is no figure.
static void test_absent(void **state)
{
	(void)state;
	assert_fact(compare(with_clock("master: 10 MHz, subcarrier: 1 MHz"), plain), "colour",
	            "in step as asked, 64 cycles a line, repeats after 1 line and 1 frame", "no subcarrier");
	struct compared compared = compare(with_standard("standard: { limits: { horizontal sync width: at least 5.1 us } }\n", "master: 10 MHz"), plain);
	assert_string_equal(text_string(&compared.words), "standard removed: standard: gone, was own\n");
	assert_fact(compared, "limits", "0 of 1 kept at monitor grade of the plan's own", "no standard");
}

#define AT_LEAST(width) "standard: { limits: { horizontal sync width: at least " width " } }\n"

static void assert_width(const char *width, const char *accuracy, const char *words)
{
	char standard[200], clock[200];
	struct text expected = {0};
	snprintf(standard, sizeof standard, AT_LEAST("%s"), width);
	snprintf(clock, sizeof clock, "master: 10 MHz%s", accuracy);
	struct compared compared = compare(with_standard(AT_LEAST("4 us"), "master: 10 MHz"), with_standard(standard, clock));
	text_printf(&expected, "limits missed: horizontal sync width: MISSED (%s), was kept (5 us, allowed at least 4 us)\n", words);
	const size_t length = strcspn(text_string(&compared.words), "\n") + 1;
	assert_int_equal(length, expected.length);
	assert_memory_equal(text_string(&compared.words), text_string(&expected), length);
	text_release(&expected);
	forget(&compared);
}

// A value that misses a bound never looks like it; where an exact clock would not miss it, the accuracy is told.
static void test_told_apart(void **state)
{
	(void)state;
	assert_width("5.1 us", "", "5 us, allowed at least 5.1 us");
	assert_width("5.0004 us", "", "5 us, allowed at least 5.0004 us");
	assert_width("5.000000001 us", "", "5 us, allowed at least 5.000000001 us");
	assert_width("5.0000000000004 us", "", "5 us, allowed at least 12500000000001/2500000000000 us");
	assert_width("5 us", ", accuracy: 50 ppm", "5 us by an exact clock, 4.9998 to 5.0003 at 50 ppm, allowed at least 5 us");
	assert_width("4.999 us", ", accuracy: 1000 ppm", "5 us by an exact clock, 4.995 to 5.005 at 1000 ppm, allowed at least 4.999 us");
}

// Against another standard or grade the verdicts are counted, and those that are missed named.
static void test_another_grade(void **state)
{
	(void)state;
	const char *old = "standard: composite-525\ngrade: monitor\n", *now = "standard: composite-525\ngrade: studio\n";
	struct compared compared = compare(with_standard(old, "master: 10 MHz"), with_standard(now, "master: 10 MHz"));
	unsigned limits = 0;
	for (size_t index = 0; index < compared.comparison->count; index++)
		limits += compared.comparison->changes[index].section == CHANGE_LIMITS;
	assert_int_equal(limits, 1);
	assert_string_equal(compared.comparison->changes[0].what, "limits missed");
	assert_memory_equal(compared.comparison->changes[0].now, "8 (line rate, ", 14);
	forget(&compared);
	compared = compare(plain, with_standard(AT_LEAST("5.1 us"), "master: 10 MHz"));
	assert_compared(compared, "limits changed: limits missed: 1 (horizontal sync width), was not judged\nstandard added: standard: new, own\n",
	                true, false);
}

static struct sketch with_machine(const char *machine, const char *chips)
{
	struct sketch sketch = plain;
	sketch.machine = machine;
	sketch.chips = chips;
	return sketch;
}

static bool says(const struct compared *compared, const char *words)
{
	return strstr(text_string(&compared->words), words) != NULL;
}

// Start is a number: its width is that of the state.
static void test_start(void **state)
{
	(void)state;
	struct compared compared = compare(with_machine("state: 12 bits, start: 0x800", plain.chips), with_machine("state: 13 bits, start: 0x800", plain.chips));
	assert_true(says(&compared, "machine changed: state: 13 bits, was 12 bits\n"));
	assert_false(says(&compared, "start"));
	forget(&compared);
	compared = compare(with_machine("state: 12 bits, start: 0x800", plain.chips), with_machine("state: 13 bits, start: 0x801", plain.chips));
	assert_true(says(&compared, "machine changed: start: 0x0801, was 0x800\n"));
	forget(&compared);
}

// The counters of a machine that has no stages are of no stage.
static void test_counters(void **state)
{
	(void)state;
	struct compared compared = compare(plain, with_machine("state: 12 bits, advance: count", plain.chips));
	assert_true(says(&compared, "timing added: counters: new, 74HC163, "));
	forget(&compared);
}

// Pins that only one of two parts has: 28C64 has 8 data pins and 13 address pins, 27C1024 has 16 of both.
static void test_pins(void **state)
{
	(void)state;
	const struct sketch large = with_machine("state: 12 bits", "part: 27C1024, speed: 150 ns");
	struct compared compared = compare(plain, large);
	assert_true(says(&compared, "wiring changed: chip rom0: 27C1024, 150 ns, was 28C64, 150 ns\n"));
	assert_true(says(&compared, "wiring pin: chip rom0, pin D8: new, next.8\n"));
	assert_false(says(&compared, "pin A13"));
	forget(&compared);
	compared = compare(large, plain);
	assert_true(says(&compared, "wiring pin: chip rom0, pin D8: gone, was next.8\n"));
	assert_false(says(&compared, "pin A13"));
	forget(&compared);
	compared = compare(plain, with_machine("state: 14 bits", "part: 28C256, speed: 150 ns"));
	assert_true(says(&compared, "wiring pin: chip rom0, pin A12: state.12, was open\n"));
	assert_true(says(&compared, "wiring pin: chip rom0, pin A13: new, state.13\n"));
	forget(&compared);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_not_judged), cmocka_unit_test(test_absent), cmocka_unit_test(test_told_apart),
		cmocka_unit_test(test_another_grade), cmocka_unit_test(test_start), cmocka_unit_test(test_counters),
		cmocka_unit_test(test_pins),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
