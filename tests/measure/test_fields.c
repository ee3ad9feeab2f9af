// Fields as they are measured.
#include "../layout/laid.h"

#include "measure/measure.h"

// A vertical sync of half the frame; normal lines begin only after it, and the one before the next 0V lies more than a lap after the
// first. (An index ran past the list of fields there.)
static const char late_field[] =
	"scanlatch: 1\n"
	"name: late-field\n"
	"clock: { master: 315/22 MHz, dot: 2 ticks, cell: 11 dots }\n"
	"signals: { sync: { role: composite sync, active: low } }\n"
	"lines:\n"
	"  vertical:\n"
	"    regions:\n"
	"      - { region: sync, cells: 37, assert: [sync] }\n"
	"      - { region: edge, cells: 3 }\n"
	"  border:\n"
	"    regions:\n"
	"      - { region: rest, cells: 33 }\n"
	"      - { region: sync, cells: 5, assert: [sync] }\n"
	"      - { region: porch, cells: 2 }\n"
	"frame:\n"
	"  - { repeat: 15, line: vertical }\n"
	"  - { repeat: 15, line: border }\n"
	"machine: { form: loop, state: 13 bits }\n"
	"chips: { part: 28C64, speed: 150 ns }\n";

static void a_late_field_is_counted_around_the_frame(void **state)
{
	(void)state;
	static const struct standard standard = {.name = "none", .fields = 1};
	struct laid laid = {.arena = arena_create(), .diagnostics = diagnostics_create()};
	const struct source source = {"late-field.yaml", late_field, sizeof late_field - 1};
	laid.plan = plan_read(&source, catalogue_load(laid.arena, laid.diagnostics), laid.diagnostics);
	laid.timeline = laid.plan != NULL ? timeline_create(laid.plan, laid.diagnostics) : NULL;
	assert_laid(&laid);
	const struct recording recording = {.plan = laid.plan, .asserted = laid.timeline->asserted, .cells = laid.timeline->cell_count};
	const struct measurement *measured = measure_recording(laid.arena, &recording, &standard);
	assert_non_null(measured);
	assert_null(measured->flaw);
	assert_int_equal(measured->field_count, 1);
	assert_int_equal(measured->fields[0].cell, 0);
	// There is no burst at all: every line is without, in one run of the only field.
	assert_int_equal(measured->fields[0].burstless_lines, 30);
	assert_int_equal(measured->burstless_count, 1);
	assert_int_equal(measured->burstless[0].field, 0);
	release(&laid);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(a_late_field_is_counted_around_the_frame)};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
