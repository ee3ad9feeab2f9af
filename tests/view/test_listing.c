// The listing of a table made by hand: two cells, states 1 and 2, each field and pin looked up below.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <string.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "image/image.h"
#include "table/table.h"
#include "view/listing.h"

// Two bits of state. Sync (active low) is asserted in cell 0, the gate decoded from bit 1, which is the field "top", in
// cell 1. U1 has 8 data pins and U2 16; next is on U1 D0 and D1, sync on U2 D0. The bytes are any.
struct bench {
	struct part narrow, wide;
	struct chip chips[2];
	struct signal signals[2];
	struct field fields[2];
	struct region region;
	struct line_type line_type;
	struct plan plan;
	uint16_t region_of_cell[2];
	struct laid_line type;
	struct frame_line line;
	struct timeline timeline;
	uint32_t states[2];
	uint64_t pins[2];
	uint8_t narrow_bytes[4], wide_bytes[8];
	struct image images[2];
	struct table table;
};

static void fill_plan(struct bench *bench)
{
	bench->narrow = (struct part){.name = "NARROW", .address_pins = 2, .data_pins = 8};
	bench->wide = (struct part){.name = "WIDE", .address_pins = 2, .data_pins = 16};
	bench->chips[0] = (struct chip){.label = "U1", .part = &bench->narrow, .data = {{DATA_NEXT, 0}, {DATA_NEXT, 1}}};
	bench->chips[1] = (struct chip){.label = "U2", .part = &bench->wide, .data = {{DATA_SIGNAL, 0}}};
	for (size_t chip = 0; chip < 2; chip++)
		for (unsigned pin = 0; pin < 2; pin++)
			bench->chips[chip].address[pin] = (struct address_wire){ADDRESS_STATE, pin};
	bench->signals[0] = (struct signal){.name = "sync", .origin = FROM_DATA};
	bench->signals[1] = (struct signal){.name = "gate", .active_high = true, .origin = FROM_FIELD, .field = 1};
	bench->fields[0] = (struct field){.name = "low", .high = 0, .low = 0};
	bench->fields[1] = (struct field){.name = "top", .high = 1, .low = 1};
	bench->region.name = "all";
	bench->line_type = (struct line_type){.name = "only", .regions = &bench->region, .region_count = 1};
	bench->plan = (struct plan){.name = "bench", .signals = bench->signals, .signal_count = 2, .lines = &bench->line_type,
	                            .line_count = 1, .chips = bench->chips, .chip_count = 2};
	bench->plan.machine = (struct machine_plan){.line.state_bits = 2, .fields = bench->fields, .field_count = 2};
}

static void fill_bench(struct bench *bench)
{
	*bench = (struct bench){.states = {1, 2}, .pins = {1, 2}, .narrow_bytes = {0x10, 0x12, 0x11, 0x13},
	                        .wide_bytes = {0x20, 0xA0, 0x21, 0xA1, 0x22, 0xA2, 0x23, 0xA3}};
	fill_plan(bench);
	bench->type = (struct laid_line){.cells = 2, .region_of_cell = bench->region_of_cell};
	bench->timeline = (struct timeline){.plan = &bench->plan, .types = &bench->type, .lines = &bench->line, .line_count = 1,
	                                    .cell_count = 2};
	bench->images[0] = (struct image){.bytes = bench->narrow_bytes, .length = 4};
	bench->images[1] = (struct image){.bytes = bench->wide_bytes, .length = 8};
	bench->table = (struct table){.timeline = &bench->timeline, .wiring = wiring_of(&bench->plan), .period = 2,
	                              .state_of_cell = bench->states, .pins = bench->pins, .spare = {{.next = 1, .levels = 0}}};
}

// Registered: row 1 (cell 0) holds sync of cell 1, not asserted and so high; row 2 that of cell 0, low.
static void registered_outputs(void **state)
{
	(void)state;
	struct bench bench;
	struct text text = {0};
	fill_bench(&bench);
	view_listing(&text, &bench.table, bench.images, 0);
	assert_string_equal(text_string(&text),
		"# bench: every row of the frame\n"
		"# line type, line, cell, region, state, field top, word (next state, then the levels of sync), then address:byte in U1, "
		"address:word in U2\n"
		"# levels are electrical, 1 is high; they are latched at the end of a cell: those in a row are the pins of the next cell\n"
		"\"only\" 0 0 \"all\" 1 0  2 1  1:12  1:A121\n"
		"\"only\" 0 1 \"all\" 2 1  1 0  2:11  2:A222\n"
		"# the 2 states that are not on the frame have this row:\n"
		"spare 0 0  1 0  0:10  0:A020\n");
	text_release(&text);
}

// Direct: each row holds sync of its own cell. Without decoded signals there are no codes.
static void direct_outputs(void **state)
{
	(void)state;
	struct bench bench;
	struct text text = {0};
	fill_bench(&bench);
	bench.plan.signal_count = 1;
	bench.plan.chip_count = 1;
	bench.plan.machine.line.outputs = OUTPUTS_DIRECT;
	bench.table.wiring = wiring_of(&bench.plan);
	view_listing(&text, &bench.table, bench.images, 0);
	assert_string_equal(text_string(&text),
		"# bench: every row of the frame\n"
		"# line type, line, cell, region, state, word (next state, then the levels of sync), then address:byte in U1\n"
		"# levels are electrical, 1 is high; outputs are direct: those in a row are the pins of its own cell\n"
		"\"only\" 0 0 \"all\" 1  2 0  1:12\n"
		"\"only\" 0 1 \"all\" 2  1 1  2:11\n"
		"# the 2 states that are not on the frame have this row:\n"
		"spare 0  1 0  0:10\n");
	text_release(&text);
}

// The same chips on two stages: U1 reads the line stage's state (A0) and kind (A1), U2 the frame stage's state. Two lines: "only",
// kind 0, of two cells, then "other", kind 1, of one. Direct line stage, latched frame stage. The gate is the frame stage's data.
static void two_stages(void **state)
{
	(void)state;
	struct bench bench;
	struct text text = {0};
	fill_bench(&bench);
	struct line_type types[2] = {bench.line_type, {.name = "other", .regions = &bench.region, .region_count = 1}};
	struct laid_line laid[2] = {bench.type, {.cells = 1, .region_of_cell = bench.region_of_cell}};
	struct frame_line lines[2] = {{.type = 0}, {.type = 1, .first_cell = 2}};
	uint32_t first_row[3] = {0, 2, 3}, line_of_type[2] = {0, 1}, states[3] = {0, 1, 0};
	uint64_t pins[3] = {0, 1, 2}; // sync in cell 1, the gate in line 1
	bench.plan.lines = types;
	bench.plan.line_count = 2;
	bench.plan.machine.form = FORM_LINE_FRAME;
	bench.plan.machine.line = (struct stage_plan){.state_bits = 1, .outputs = OUTPUTS_DIRECT};
	bench.plan.machine.frame = (struct stage_plan){.state_bits = 2};
	bench.plan.machine.kind_bits = 1;
	bench.signals[1] = (struct signal){.name = "gate", .active_high = true, .stage = STAGE_FRAME};
	bench.chips[0].address[1] = (struct address_wire){ADDRESS_KIND, 0};
	bench.chips[1].stage = STAGE_FRAME;
	bench.timeline.types = laid;
	bench.timeline.lines = lines;
	bench.timeline.line_count = 2;
	bench.timeline.cell_count = 3;
	bench.table = (struct table){.timeline = &bench.timeline, .wiring = wiring_of(&bench.plan), .period = 3, .state_of_cell = states,
	                             .pins = pins, .first_row = first_row, .line_of_type = line_of_type};
	view_listing(&text, &bench.table, bench.images, 0);
	assert_string_equal(text_string(&text),
		"# bench: every row of the frame\n"
		"# the line stage:\n"
		"# line type, line, cell, region, state, kind, word (next state, step, then the levels of sync), then address:byte in U1\n"
		"# levels are electrical, 1 is high; outputs are direct: those in a row are the pins of its own cell\n"
		"\"only\" 0 0 \"all\" 0 0  1 0 1  0:10\n"
		"\"only\" 0 1 \"all\" 1 0  0 1 0  1:12\n"
		"\"other\" 1 0 \"all\" 0 1  0 1 1  2:11\n"
		"# row of the 1 state of the frame's kinds that the frame does not use:\n"
		"spare 1 1  0 0 0  3:13\n"
		"# the frame stage:\n"
		"# line type, line, state, word (next state, kind, then the levels of gate), then address:word in U2\n"
		"# levels are electrical, 1 is high; they and kind are latched at the end of a line: those in a row are the pins of the next line\n"
		"\"only\" 0 0  1 1 1  0:A020\n"
		"\"other\" 1 1  0 0 0  1:A121\n"
		"# the 2 states that are not on the frame have this row:\n"
		"spare 2  0 0 0  2:A222\n");
	text_release(&text);
	// With a third kind bit's worth of other kinds, and counters: step and clear stand for the next states.
	bench.plan.machine.kind_bits = 2;
	bench.plan.machine.line.advance = bench.plan.machine.frame.advance = ADVANCE_COUNT;
	bench.chips[0].address[0] = (struct address_wire){ADDRESS_KIND, 0};
	bench.chips[0].address[1] = (struct address_wire){ADDRESS_KIND, 1};
	bench.table.wiring = wiring_of(&bench.plan);
	view_listing(&text, &bench.table, bench.images, 0);
	assert_non_null(strstr(text_string(&text), "state, kind, word (step, clear, then the levels of sync), then"));
	assert_non_null(strstr(text_string(&text), "\"only\" 0 1 \"all\" 1 0  1 1 0  0:10\n"));
	assert_non_null(strstr(text_string(&text), "# row of the 4 states of all other kinds, which ends the line:\nspare 0 2  1 0 0  2:11\n"));
	assert_non_null(strstr(text_string(&text), "state, word (kind, clear, then the levels of gate), then"));
	assert_non_null(strstr(text_string(&text), "\"other\" 1 1  0 1 0  1:A121\n"));
	text_release(&text);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(registered_outputs),
		cmocka_unit_test(direct_outputs),
		cmocka_unit_test(two_stages),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
