// Plans and timelines put together by hand, for tests of tables and images: one line type, whose regions are given one
// by one, and a frame that repeats it.
#ifndef SCANLATCH_TESTS_TABLE_BUILDER_H
#define SCANLATCH_TESTS_TABLE_BUILDER_H

#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>

#include <cmocka.h>

#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "catalogue/catalogue.h"
#include "table/table.h"

#define BENCH_FIELDS 8
#define BENCH_SIGNALS 8
#define BENCH_REGIONS 64
#define BENCH_HOLDS 8
#define BENCH_CHIPS 4

#define SIGNAL(number) ((uint64_t)1 << (number))

// Places in the made-up source: the machine is line 1, its start line 2, signal n line 10 + n, region n line 100 + 10
// n, hold k of region n line 101 + 10 n + k.
struct bench {
	struct arena *arena;
	struct source source;
	struct plan plan;
	struct timeline timeline;
	struct laid_line laid;
	struct line_type line;
	struct field fields[BENCH_FIELDS];
	struct signal signals[BENCH_SIGNALS];
	struct region regions[BENCH_REGIONS];
	struct hold holds[BENCH_REGIONS][BENCH_HOLDS];
	struct laid_region laid_regions[BENCH_REGIONS];
	struct chip chips[BENCH_CHIPS];
	struct part parts[BENCH_CHIPS];
	uint32_t cells; // of the line so far
	uint32_t room;  // for cells of the line
	struct diagnostics *diagnostics;
	struct text printed;
	struct table *table;
};

static inline struct place bench_place(const struct bench *bench, uint32_t line)
{
	return (struct place){&bench->source, line, 1};
}

// A machine of `state_bits`, registered, that advances by table; room for `room` cells in a line.
static inline struct bench *bench_create(unsigned state_bits, uint32_t room)
{
	struct arena *arena = arena_create();
	assert_non_null(arena);
	struct bench *bench = arena_alloc(arena, sizeof *bench);
	assert_non_null(bench);
	bench->arena = arena;
	bench->room = room;
	bench->source.name = "board.yaml";
	bench->plan.source = &bench->source;
	bench->plan.signals = bench->signals;
	bench->plan.lines = &bench->line;
	bench->plan.line_count = 1;
	bench->plan.chips = bench->chips;
	for (int role = 0; role < ROLE_COUNT; role++)
		bench->plan.role_signal[role] = -1;
	bench->plan.machine.line.state_bits = state_bits;
	bench->plan.machine.fields = bench->fields;
	bench->plan.machine.place = bench_place(bench, 1);
	bench->plan.machine.start_place = bench_place(bench, 2);
	bench->line.name = "quay";
	bench->line.regions = bench->regions;
	bench->timeline.arena = arena;
	bench->timeline.plan = &bench->plan;
	bench->timeline.types = &bench->laid;
	bench->laid.regions = bench->laid_regions;
	bench->laid.region_of_cell = arena_array(arena, room, sizeof(uint16_t));
	bench->laid.asserted = arena_array(arena, room, sizeof(uint64_t));
	bench->timeline.hold_mask = arena_array(arena, room, sizeof(uint32_t));
	bench->timeline.hold_value = arena_array(arena, room, sizeof(uint32_t));
	assert_true(bench->laid.region_of_cell != NULL && bench->laid.asserted != NULL);
	assert_true(bench->timeline.hold_mask != NULL && bench->timeline.hold_value != NULL);
	bench->diagnostics = diagnostics_create();
	assert_non_null(bench->diagnostics);
	return bench;
}

static inline void bench_destroy(struct bench *bench)
{
	table_destroy(bench->table);
	diagnostics_destroy(bench->diagnostics);
	text_release(&bench->printed);
	arena_destroy(bench->arena);
}

static inline void bench_start(struct bench *bench, uint32_t start)
{
	bench->plan.machine.has_start = true;
	bench->plan.machine.start = start;
}

static inline size_t bench_field(struct bench *bench, const char *name, unsigned high, unsigned low)
{
	assert_true(bench->plan.machine.field_count < BENCH_FIELDS);
	bench->fields[bench->plan.machine.field_count] = (struct field){name, high, low, {&bench->source, 3, 1}};
	return bench->plan.machine.field_count++;
}

// A data signal, active high.
static inline size_t bench_data(struct bench *bench, const char *name)
{
	const size_t number = bench->plan.signal_count++;
	assert_true(number < BENCH_SIGNALS);
	bench->signals[number] =
		(struct signal){.name = name, .active_high = true, .place = bench_place(bench, 10 + (uint32_t)number)};
	return number;
}

// A signal from a field, with `count` codes (ascending), or with codes: auto if codes is NULL.
static inline size_t bench_coded(struct bench *bench, const char *name, size_t field, const uint32_t *codes,
                                 size_t count)
{
	const size_t number = bench_data(bench, name);
	struct signal *signal = &bench->signals[number];
	uint32_t *copy = arena_array(bench->arena, count, sizeof *copy);
	assert_non_null(copy);
	if (count > 0)
		memcpy(copy, codes, count * sizeof *copy);
	signal->origin = FROM_FIELD;
	signal->field = field;
	signal->auto_codes = codes == NULL;
	signal->codes = codes != NULL ? copy : NULL;
	signal->code_count = count;
	return number;
}

// A region of `cells` cells with signals asserted.
static inline void bench_region(struct bench *bench, const char *name, uint32_t cells, uint64_t asserted)
{
	const size_t number = bench->line.region_count++;
	assert_true(number < BENCH_REGIONS && bench->cells + cells <= bench->room);
	bench->regions[number] = (struct region){.name = name,
	                                         .cells = cells,
	                                         .assert_mask = asserted,
	                                         .holds = bench->holds[number],
	                                         .place = bench_place(bench, 100 + 10 * (uint32_t)number)};
	bench->laid_regions[number] = (struct laid_region){.first_cell = bench->cells, .cells = cells};
	for (uint32_t cell = bench->cells; cell < bench->cells + cells; cell++) {
		bench->laid.asserted[cell] = asserted;
		bench->laid.region_of_cell[cell] = (uint16_t)number;
	}
	bench->cells += cells;
}

// Says that the last region holds a field, for messages.
static inline void bench_add_hold(struct bench *bench, size_t field)
{
	const size_t number = bench->line.region_count - 1;
	const size_t hold = bench->regions[number].hold_count++;
	assert_true(hold < BENCH_HOLDS);
	bench->holds[number][hold] =
		(struct hold){.field = field, .place = bench_place(bench, (uint32_t)(101 + 10 * number + hold))};
	bench->timeline.has_holds = true;
}

// Holds a field in the last region: first + step * col.
static inline void bench_hold(struct bench *bench, size_t field, uint32_t first, uint32_t step)
{
	const struct laid_region *laid = &bench->laid_regions[bench->line.region_count - 1];
	bench_add_hold(bench, field);
	for (uint32_t col = 0; col < laid->cells; col++) {
		bench->timeline.hold_mask[laid->first_cell + col] |= field_mask(&bench->fields[field]);
		bench->timeline.hold_value[laid->first_cell + col] |= (first + step * col) << bench->fields[field].low;
	}
}

// Lays out a frame of one line.
static inline void bench_lay(struct bench *bench)
{
	struct timeline *timeline = &bench->timeline;
	bench->laid.cells = bench->cells;
	bench->laid.ticks = bench->cells;
	timeline->lines = arena_array(bench->arena, 1, sizeof *timeline->lines);
	assert_non_null(timeline->lines);
	timeline->line_count = 1;
	timeline->cell_count = bench->cells;
	timeline->tick_count = bench->cells;
	timeline->asserted = bench->laid.asserted;
}

// Lays out and makes the table; NULL, with the diagnostics in `printed`, if that fails.
static inline const struct table *bench_table(struct bench *bench)
{
	bench_lay(bench);
	bench->table = table_create(&bench->timeline, bench->diagnostics);
	diagnostics_print(bench->diagnostics, &bench->printed, false);
	assert_int_equal(bench->table == NULL, diagnostics_error_count(bench->diagnostics) > 0);
	return bench->table;
}

static inline void assert_states(const struct table *table, const uint32_t *states, uint32_t count)
{
	assert_non_null(table);
	assert_int_equal(table->period, count);
	for (uint32_t cell = 0; cell < count; cell++)
		assert_int_equal(table->state_of_cell[cell], states[cell]);
}

static inline void assert_codes(const struct table *table, size_t signal, const uint32_t *codes, size_t count)
{
	assert_non_null(table);
	assert_int_equal(table->code_counts[signal], count);
	for (size_t index = 0; index < count; index++)
		assert_int_equal(table->codes[signal][index], codes[index]);
}

static inline void assert_row(struct row row, uint32_t next, bool clear, uint64_t levels)
{
	assert_int_equal(row.next, next);
	assert_int_equal(row.clear, clear);
	assert_int_equal(row.levels, levels);
}

// Checks a table against the timeline without a look at how it was made: states differ, holds and start are kept, field
// signals are asserted where the timeline says and nowhere else, codes ascend, and automatic codes all come up.
static inline void assert_valid(const struct bench *bench)
{
	const struct table *table = bench->table;
	const struct timeline *timeline = &bench->timeline;
	const struct plan *plan = &bench->plan;
	const int64_t count = timeline->cell_count;
	const uint32_t states = (uint32_t)1 << plan->machine.line.state_bits;
	uint8_t *seen = test_calloc(states, 1);
	assert_non_null(table);
	assert_int_equal(timeline->cell_count % table->period, 0);
	for (uint32_t cell = 0; cell < table->period; cell++) {
		assert_true(table->state_of_cell[cell] < states);
		assert_int_equal(seen[table->state_of_cell[cell]], 0);
		seen[table->state_of_cell[cell]] = 1;
	}
	if (plan->machine.has_start)
		assert_int_equal(table->state_of_cell[0], plan->machine.start);
	for (uint32_t cell = 0; cell < timeline->cell_count && timeline->has_holds; cell++)
		assert_int_equal(table->state_of_cell[cell % table->period] & timeline->hold_mask[cell],
		                 timeline->hold_value[cell]);
	for (size_t index = 0; index < plan->signal_count; index++) {
		const struct signal *signal = &plan->signals[index];
		if (signal->origin == FROM_DATA)
			continue;
		const struct field *field = &plan->machine.fields[signal->field];
		const size_t values = (size_t)1 << (field->high - field->low + 1);
		uint8_t *asserts = test_calloc(values, 1), *used = test_calloc(values, 1);
		for (size_t code = 0; code < table->code_counts[index]; code++) {
			assert_true(code == 0 || table->codes[index][code - 1] < table->codes[index][code]);
			asserts[table->codes[index][code]] = 1;
		}
		for (uint32_t cell = 0; cell < timeline->cell_count; cell++) {
			const int64_t led = (((int64_t)cell + signal->lead_cells) % count + count) % count;
			const uint32_t value = field_value(field, table->state_of_cell[cell % table->period]);
			assert_int_equal(asserts[value], timeline->asserted[led] >> index & 1);
			used[value] = 1;
		}
		for (size_t code = 0; signal->auto_codes && code < table->code_counts[index]; code++)
			assert_true(used[table->codes[index][code]]);
		test_free(asserts);
		test_free(used);
	}
	test_free(seen);
}

// How many steps from a cell to the next, with that from the last to the first, change more than one bit of the field.
static inline uint32_t count_jumps(const struct table *table, const struct field *field)
{
	uint32_t jumps = 0;
	for (uint32_t cell = 0; cell < table->period; cell++) {
		const uint32_t next = table->state_of_cell[(cell + 1) % table->period];
		const uint32_t change = field_value(field, table->state_of_cell[cell] ^ next);
		jumps += (change & (change - 1)) != 0;
	}
	return jumps;
}

#endif
