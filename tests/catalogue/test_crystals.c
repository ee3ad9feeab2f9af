// The catalogue of crystals: exact frequencies, against the figures that they come from.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "catalogue/crystals.h"
#include "catalogue/standards.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

struct fixture {
	struct arena *arena;
	struct diagnostics *diagnostics;
	const struct crystals *crystals;
	const struct standards *standards;
};

static int set_up(void **state)
{
	static struct fixture fixture;
	fixture.arena = arena_create();
	fixture.diagnostics = diagnostics_create();
	fixture.crystals = crystals_load(fixture.arena, fixture.diagnostics);
	fixture.standards = standards_load(fixture.arena, fixture.diagnostics);
	*state = &fixture;
	return fixture.crystals != NULL && fixture.standards != NULL && diagnostics_count(fixture.diagnostics) == 0 ? 0 : -1;
}

static int tear_down(void **state)
{
	struct fixture *fixture = *state;
	diagnostics_destroy(fixture->diagnostics);
	arena_destroy(fixture->arena);
	return 0;
}

struct expected_crystal {
	const char *name;
	int64_t numerator, denominator; // of hertz
};

static const struct expected_crystal expected[] = {
	// SMPTE 170M-2004 11.1: subcarrier 5 MHz * 63/88 = 315/88 MHz; SMPTE 244M-2003 samples at 4 times that.
	{"3.579545 MHz", 39375000, 11},
	{"7.15909 MHz", 78750000, 11},
	{"14.31818 MHz", 157500000, 11},
	{"28.63636 MHz", 315000000, 11},
	// BT.470-6 2.11: 4433618.75 Hz; EBU Tech. 3280-E table 1: 17734475 Hz.
	{"4.433619 MHz", 17734475, 4},
	{"17.734475 MHz", 17734475, 1},
	// BT.601-5 part A table 2.
	{"13.5 MHz", 13500000, 1},
	// VESA DMT 1.0 rev. 13, modes 04h and 10h.
	{"25.175 MHz", 25175000, 1},
	{"65 MHz", 65000000, 1},
};

static void frequencies_are_exact(void **state)
{
	const struct fixture *fixture = *state;
	for (size_t index = 0; index < COUNT_OF(expected); index++) {
		const struct crystal *crystal = catalogue_crystal(fixture->crystals, expected[index].name);
		struct fraction hertz;
		assert_non_null(crystal);
		assert_true(fraction_make(expected[index].numerator, expected[index].denominator, &hertz));
		assert_int_equal(fraction_compare(crystal->frequency_hz, hertz), 0);
	}
}

// What is printed on a case is the frequency, rounded to five decimals of a MHz or more.
static void names_are_the_rounded_frequencies(void **state)
{
	const struct fixture *fixture = *state;
	for (size_t index = 0; index < fixture->crystals->count; index++) {
		const struct crystal *crystal = &fixture->crystals->crystals[index];
		char *end;
		const double printed = strtod(crystal->name, &end) * 1e6;
		assert_string_equal(end, " MHz");
		const double error = printed - fraction_rounded(crystal->frequency_hz);
		assert_true(error < 5 && error > -5);
		assert_ptr_equal(catalogue_crystal(fixture->crystals, crystal->name), crystal);
	}
}

static void every_crystal_has_a_use_and_a_source(void **state)
{
	static const char *const words[] = {"SMPTE", "BT.470-6", "BT.601-5", "EBU Tech.", "VESA DMT", "from memory", "second-hand"};
	const struct fixture *fixture = *state;
	for (size_t index = 0; index < fixture->crystals->count; index++) {
		const struct crystal *crystal = &fixture->crystals->crystals[index];
		bool found = false;
		for (size_t word = 0; word < COUNT_OF(words); word++)
			found = found || strstr(crystal->source, words[word]) != NULL;
		assert_true(found);
		assert_true(strlen(crystal->use) > 0);
	}
}

static bool has_frequency(const struct crystals *crystals, struct fraction hertz)
{
	for (size_t index = 0; index < crystals->count; index++)
		if (fraction_compare(crystals->crystals[index].frequency_hz, hertz) == 0)
			return true;
	return false;
}

// Every standard that has a subcarrier or a pixel clock can be built with a crystal of the catalogue.
static void there_is_a_crystal_for_every_standard(void **state)
{
	const struct fixture *fixture = *state;
	for (size_t index = 0; index < fixture->standards->count; index++) {
		const struct standard *standard = &fixture->standards->standards[index];
		const struct limit *colour = standard_limit(standard, ITEM_SUBCARRIER, GRADE_STUDIO);
		const struct limit *clock = standard_limit(standard, ITEM_PIXEL_CLOCK, GRADE_STUDIO);
		struct fraction quadruple;
		if (colour != NULL) {
			assert_true(fraction_multiply(colour->nominal, fraction_whole(4), &quadruple));
			assert_true(has_frequency(fixture->crystals, quadruple));
		}
		if (clock != NULL)
			assert_true(has_frequency(fixture->crystals, clock->nominal));
	}
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(frequencies_are_exact),
		cmocka_unit_test(names_are_the_rounded_frequencies),
		cmocka_unit_test(every_crystal_has_a_use_and_a_source),
		cmocka_unit_test(there_is_a_crystal_for_every_standard),
	};
	return cmocka_run_group_tests(tests, set_up, tear_down);
}
