// Line-frame tables in their machine: random plans, made, filled into chips and stepped by the simulator, against the timeline.

#include "drawn.h"

#include "image/image.h"
#include "machine/machine.h"

#define PLANS 3000
#define TYPES 3
#define SIGNALS 3 // lamp and bell of the line stage, flag of the frame stage

struct sketch {
	uint32_t random;
	struct text machine, rest;
};

// (Multiplier and increment: Numerical Recipes, 1992.)
static uint32_t below(struct sketch *sketch, uint32_t limit)
{
	sketch->random = sketch->random * 1664525u + 1013904223u;
	return (uint32_t)((uint64_t)sketch->random * limit >> 32);
}

static void sketch_stage(struct sketch *sketch, const char *stage, unsigned bits, bool counts, bool async)
{
	text_printf(&sketch->machine, "  %s: { state: %u bits, outputs: %s", stage, bits, below(sketch, 2) == 0 ? "direct" : "registered");
	text_printf(&sketch->machine, counts ? ", advance: count, clear: %s }\n" : " }\n", async ? "async" : "sync");
}

static void sketch_type(struct sketch *sketch, unsigned type, uint32_t cells, bool flag)
{
	text_printf(&sketch->rest, "  line%u:\n    regions:\n", type);
	for (uint32_t cell = 0; cell < cells; cell++) {
		const uint32_t asserted = below(sketch, 2) == 0 || (cell > 0 && cell + 1 < cells) ? below(sketch, 4) : 0;
		text_printf(&sketch->rest, "      - { region: r%u, cells: 1, assert: [%s%s] }\n", (unsigned)cell,
		            (const char *const[]){"", "lamp", "bell", "lamp, bell"}[asserted], !flag ? "" : asserted == 0 ? "flag" : ", flag");
	}
}

// One to three line types of up to six cells, a frame of up to twelve lines, every kind of stage.
static struct drawn *draw_random(struct sketch *sketch)
{
	const bool async = below(sketch, 2) == 0, alike = async || below(sketch, 2) == 0;
	const unsigned types = 1 + below(sketch, TYPES), blocks = 1 + below(sketch, 4);
	const uint32_t cells = 1 + below(sketch, 6);
	sketch_stage(sketch, "line", 3, below(sketch, 2) == 0, async);
	sketch_stage(sketch, "frame", 4, below(sketch, 2) == 0, below(sketch, 2) == 0);
	text_printf(&sketch->machine, "  kind: %u bits\n", (types > 2 ? 2 : types > 1 ? 1 : 0) + 1);
	text_printf(&sketch->rest, "signals:\n  lamp: { role: blanking, active: %s, lead: %d cells }\n", below(sketch, 2) == 0 ? "low" : "high",
	            below(sketch, 3) == 0 ? (int)below(sketch, 5) - 2 : 0);
	text_put(&sketch->rest, "  bell: { role: plain, active: high }\n  flag: { role: plain, active: low, stage: frame }\nlines:\n");
	for (unsigned type = 0; type < types; type++)
		sketch_type(sketch, type, alike ? cells : 1 + below(sketch, 6), below(sketch, 2) == 0);
	text_put(&sketch->rest, "frame:\n");
	for (unsigned block = 0; block < blocks; block++)
		text_printf(&sketch->rest, "  - { repeat: %u, line: line%u }\n", (unsigned)(1 + below(sketch, 3)), (unsigned)below(sketch, types));
	text_put(&sketch->rest, "chips: { line: { part: 28C64, speed: 150 ns }, frame: { part: 28C64, speed: 150 ns } }\n");
	return draw(text_string(&sketch->machine), text_string(&sketch->rest));
}

static bool is_last(const struct timeline *timeline, uint32_t cell)
{
	const struct cell_place place = timeline_place(timeline, cell);
	return place.cell + 1 == timeline->types[timeline->lines[place.line].type].cells;
}

// Whether lines of one cell stand beside longer ones, and step is latched.
static bool is_trap(const struct drawn *drawn)
{
	const struct timeline *timeline = drawn->timeline;
	uint32_t single = 0;
	for (uint32_t line = 0; line < timeline->line_count; line++)
		single += timeline->types[timeline->lines[line].type].cells == 1;
	return drawn->plan->machine.line.outputs == OUTPUTS_REGISTERED && single > 0 && single < timeline->line_count;
}

// Whether some row would have to be two at once, by looking at every two cells that share one.
static bool contradicts(const struct drawn *drawn)
{
	const struct timeline *timeline = drawn->timeline;
	const struct plan *plan = drawn->plan;
	const int64_t count = timeline->cell_count;
	const bool registered = plan->machine.line.outputs == OUTPUTS_REGISTERED;
	for (uint32_t left = 0; left < count; left++)
		for (uint32_t right = 0; right < left; right++) {
			const struct cell_place one = timeline_place(timeline, left), other = timeline_place(timeline, right);
			if (timeline->lines[one.line].type != timeline->lines[other.line].type || one.cell != other.cell)
				continue;
			for (size_t signal = 0; signal < plan->signal_count; signal++) {
				const int64_t ahead = plan->signals[signal].lead_cells + registered + 2 * count;
				if (plan->signals[signal].stage == STAGE_LINE &&
				    ((timeline->asserted[(left + ahead) % count] ^ timeline->asserted[(right + ahead) % count]) >> signal & 1) != 0)
					return true;
			}
		}
	return false;
}

// The feedback state in the frame's first cell.
static uint32_t first_state(const struct drawn *drawn, const struct wiring *wiring)
{
	const struct feedback at = feedback_of(wiring);
	uint32_t state = 0;
	if (at.has_step && is_last(drawn->timeline, 0))
		state |= (uint32_t)1 << at.step;
	return at.kind_bits > 0 ? state | drawn->timeline->lines[0].type << at.kind : state;
}

struct pins {
	uint64_t line, frame; // what is latched of each stage
};

static uint64_t levels_now(const struct machine *machine, const struct wiring *wiring, uint32_t state, const struct pins *pins)
{
	const uint64_t line = wiring->line.outputs == OUTPUTS_REGISTERED
	                          ? pins->line
	                          : machine_row(machine, STAGE_LINE, machine_row_address(machine, STAGE_LINE, state)).levels;
	const uint64_t frame = wiring->frame.outputs == OUTPUTS_REGISTERED
	                           ? pins->frame
	                           : machine_row(machine, STAGE_FRAME, machine_row_address(machine, STAGE_FRAME, state)).levels;
	return line | frame;
}

// Steps through two frames: pins are known in the second. Then starts everywhere: each state must come to the frame.
static void check_machine(const struct drawn *drawn)
{
	struct image images[LIMIT_CHIPS];
	const struct table *table = drawn->table;
	const struct wiring *wiring = &table->wiring;
	const uint32_t cells = drawn->timeline->cell_count, first = first_state(drawn, wiring);
	struct pins pins = {0};
	assert_true(images_fill(&table, 1, drawn->arena, images));
	const struct machine *machine = machine_create(drawn->arena, wiring, images, 0);
	assert_non_null(machine);
	uint32_t state = first;
	for (uint32_t cell = 0; cell < 2 * cells; cell++) {
		const uint32_t line = machine_row_address(machine, STAGE_LINE, state), frame = machine_row_address(machine, STAGE_FRAME, state);
		const struct cell_place place = timeline_place(drawn->timeline, cell % cells);
		assert_int_equal(line, table_row_address(table, STAGE_LINE, table_cell_row(table, place.line, place.cell)));
		assert_int_equal(frame, table_row_address(table, STAGE_FRAME, place.line));
		assert_int_equal(machine_steps(machine, state), is_last(drawn->timeline, cell % cells));
		if (cell >= cells)
			assert_int_equal(levels_now(machine, wiring, state, &pins), levels_of(drawn->plan, table->pins[cell - cells]) & 7);
		pins.line = machine_row(machine, STAGE_LINE, line).levels;
		if (machine_steps(machine, state))
			pins.frame = machine_row(machine, STAGE_FRAME, frame).levels;
		state = machine_next(machine, state);
	}
	assert_int_equal(state, first);
	for (uint32_t begin = 0; begin < (uint32_t)1 << feedback_of(wiring).bits; begin++) {
		uint32_t steps = 0;
		for (state = machine_settle(machine, begin); state != first && steps < 1000; steps++)
			state = machine_next(machine, state);
		assert_int_equal(state, first);
	}
}

static void test_random(void **state)
{
	(void)state;
	struct sketch sketch = {.random = 1};
	unsigned made = 0, refused = 0;
	for (unsigned number = 0; number < PLANS; number++) {
		struct drawn *drawn = draw_random(&sketch);
		const bool refuse = contradicts(drawn) || is_trap(drawn);
		assert_int_equal(drawn->table == NULL, refuse);
		if (drawn->table != NULL)
			check_machine(drawn);
		made += !refuse;
		refused += refuse;
		drawn_destroy(drawn);
		text_release(&sketch.machine);
		text_release(&sketch.rest);
	}
	assert_true(made > PLANS / 10 && refused > PLANS / 10);
}

int main(void)
{
	const struct CMUnitTest tests[] = {cmocka_unit_test(test_random)};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
