// Bytes of chips, worked out by hand for small machines.

#include "../table/builder.h"

#include "image/image.h"

#define NEXT(bit) {DATA_NEXT, bit}
#define STATE(bit) {ADDRESS_STATE, bit}
#define OPEN_DATA {DATA_OPEN, 0}
#define OPEN_ADDRESS {ADDRESS_OPEN, 0}

static bool fill_alone(const struct table *table, struct arena *arena, struct image *images)
{
	return images_fill(&table, 1, arena, images);
}

// Adds a chip without wires; all pins are open.
static struct chip *add_chip(struct bench *bench, unsigned address_pins, unsigned data_pins)
{
	const size_t number = bench->plan.chip_count++;
	assert_true(number < BENCH_CHIPS);
	bench->parts[number] = (struct part){.name = "XROM", .address_pins = address_pins, .data_pins = data_pins};
	bench->chips[number] = (struct chip){.label = "U1", .part = &bench->parts[number]};
	return &bench->chips[number];
}

static void assert_bytes(const struct image *image, const uint8_t *bytes, size_t length)
{
	assert_int_equal(image->length, length);
	assert_memory_equal(image->bytes, bytes, length);
}

// States 0, 1, 2, 3; sync, active low, in cell 3. Bits of a byte: D0, D1 next, D2 sync, D7 blank, which is high in
// cells 0 and 3.
static struct bench *create_four(void)
{
	struct bench *bench = bench_create(2, 4);
	const size_t sync = bench_data(bench, "sync"), blank = bench_data(bench, "blank");
	bench->signals[sync].active_high = false;
	bench_region(bench, "porch", 1, SIGNAL(blank));
	bench_region(bench, "picture", 2, 0);
	bench_region(bench, "sync", 1, SIGNAL(blank) | SIGNAL(sync));
	return bench;
}

static void test_straight(void **state)
{
	(void)state;
	struct bench *bench = create_four();
	struct chip *chip = add_chip(bench, 3, 8);
	memcpy(chip->address, (const struct address_wire[]){STATE(0), STATE(1)}, 2 * sizeof *chip->address);
	memcpy(chip->data,
	       (const struct data_wire[]){
			   NEXT(0), NEXT(1), {DATA_SIGNAL, 0}, OPEN_DATA, OPEN_DATA, OPEN_DATA, OPEN_DATA, {DATA_SIGNAL, 1}},
	       8 * sizeof *chip->data);
	struct image image;
	assert_true(fill_alone(bench_table(bench), bench->arena, &image));
	const uint8_t expected[] = {
		0x7D,                   // state 0: next 01, of cell 1: sync high (1 << 2), blank low; D3 to D6 open: 1
		0x7E,                   // state 1: next 10, of cell 2: sync high, blank low
		0xFB,                   // state 2: next 11, of cell 3: sync low, blank high
		0xFC,                   // state 3: next 00, of cell 0: sync high, blank high
		0x7D, 0x7E, 0xFB, 0xFC, // again with A2, which is open
	};
	assert_bytes(&image, expected, sizeof expected);
	bench_destroy(bench);
}

// Two chips share the address in different orders, with pins that are low, high, open, or a bank's; the word is split
// between them.
static void test_scrambled(void **state)
{
	(void)state;
	struct bench *bench = create_four();
	struct chip *left = add_chip(bench, 4, 8), *right = add_chip(bench, 3, 8);
	memcpy(left->address, (const struct address_wire[]){STATE(1), {ADDRESS_LOW, 0}, STATE(0), {ADDRESS_BANK, 0}},
	       4 * sizeof *left->address);
	memcpy(right->address, (const struct address_wire[]){{ADDRESS_HIGH, 0}, STATE(1), STATE(0)},
	       3 * sizeof *right->address);
	for (unsigned pin = 0; pin < 8; pin++)
		left->data[pin] = right->data[pin] = (struct data_wire)OPEN_DATA;
	left->data[6] = (struct data_wire)NEXT(0);
	left->data[1] = (struct data_wire){DATA_SIGNAL, 1};
	right->data[0] = (struct data_wire){DATA_SIGNAL, 0};
	right->data[7] = (struct data_wire)NEXT(1);
	struct image images[2];
	assert_true(fill_alone(bench_table(bench), bench->arena, images));
	// Left: D6 next.0, D1 blank, the other six 1: 0xBD | next.0 << 6 | blank << 1. State 0: next 01, blank 0: 0xFD.
	// State 1: next 10, blank 0: 0xBD. State 2: next 11, blank 1: 0xFF. State 3: next 00, blank 1: 0xBF. Address: A0 is
	// state.1, A2 is state.0.
	const uint8_t left_bytes[] = {
		0xFD, 0xFF, 0xFD, 0xFF, // A2 = 0: states 0 and 2, the same with A1 (wired low) at 1
		0xBD, 0xBF, 0xBD, 0xBF, // A2 = 1: states 1 and 3
		0xFD, 0xFF, 0xFD, 0xFF, // A3, the bank's, makes no difference
		0xBD, 0xBF, 0xBD, 0xBF,
	};
	// Right: D7 next.1, D0 sync: 0x7E | next.1 << 7 | sync. State 0: next 01, sync 1: 0x7F. State 1: next 10, sync 1:
	// 0xFF. State 2: next 11, sync 0: 0xFE. State 3: next 00, sync 1: 0x7F. Address: A1 is state.1, A2 is state.0.
	const uint8_t right_bytes[] = {
		0x7F, 0x7F, // A1 = A2 = 0: state 0, the same with A0 (wired high) at 0
		0xFE, 0xFE, // A1: state 2
		0xFF, 0xFF, // A2: state 1
		0x7F, 0x7F, // both: state 3
	};
	assert_bytes(&images[0], left_bytes, sizeof left_bytes);
	assert_bytes(&images[1], right_bytes, sizeof right_bytes);
	bench_destroy(bench);
}

// A part of 16 bits: low byte first; pins in an order that crosses the bytes.
static void test_sixteen_bits(void **state)
{
	(void)state;
	struct bench *bench = create_four();
	struct chip *chip = add_chip(bench, 3, 16);
	memcpy(chip->address, (const struct address_wire[]){STATE(1), STATE(0), OPEN_ADDRESS}, 3 * sizeof *chip->address);
	chip->data[0] = (struct data_wire)NEXT(1);
	chip->data[8] = (struct data_wire)NEXT(0);
	chip->data[15] = (struct data_wire){DATA_SIGNAL, 0};
	chip->data[4] = (struct data_wire){DATA_SIGNAL, 1};
	for (unsigned pin = 0; pin < 16; pin++)
		if (pin % 8 != 0 && pin != 15 && pin != 4)
			chip->data[pin] = (struct data_wire)OPEN_DATA;
	struct image image;
	assert_true(fill_alone(bench_table(bench), bench->arena, &image));
	// Low byte 0xEE | next.1 | blank << 4, high byte 0x7E | next.0 | sync << 7.
	const uint8_t expected[] = {
		0xEE, 0xFF,                                     // state 0: next 01, sync 1, blank 0
		0xFF, 0x7F,                                     // state 2: next 11, sync 0, blank 1
		0xEF, 0xFE,                                     // state 1: next 10, sync 1, blank 0
		0xFE, 0xFE,                                     // state 3: next 00, sync 1, blank 1
		0xEE, 0xFF, 0xFF, 0x7F, 0xEF, 0xFE, 0xFE, 0xFE, // A2 is open
	};
	assert_bytes(&image, expected, sizeof expected);
	bench_destroy(bench);
}

// The same straight: a whole image is copied, not looked up.
static void test_sixteen_bits_straight(void **state)
{
	(void)state;
	struct bench *bench = create_four();
	struct chip *chip = add_chip(bench, 2, 16);
	memcpy(chip->address, (const struct address_wire[]){STATE(0), STATE(1)}, 2 * sizeof *chip->address);
	chip->data[0] = (struct data_wire)NEXT(0);
	chip->data[1] = (struct data_wire)NEXT(1);
	chip->data[8] = (struct data_wire){DATA_SIGNAL, 0};
	chip->data[9] = (struct data_wire){DATA_SIGNAL, 1};
	for (unsigned pin = 2; pin < 16; pin++)
		if (pin != 8 && pin != 9)
			chip->data[pin] = (struct data_wire)OPEN_DATA;
	struct image image;
	assert_true(fill_alone(bench_table(bench), bench->arena, &image));
	const uint8_t expected[] = {
		0xFD, 0xFD, // state 0: next 01; sync 1, blank 0
		0xFE, 0xFD, // state 1: next 10
		0xFF, 0xFE, // state 2: next 11; sync 0, blank 1
		0xFC, 0xFF, // state 3: next 00; sync 1, blank 1
	};
	assert_bytes(&image, expected, sizeof expected);
	bench_destroy(bench);
}

// A counter of two bits with three cells; clear on D7. Rows that are no cell's assert it, and with a synchronous clear
// the last cell's.
static void test_counter(void **state)
{
	(void)state;
	for (int clear = CLEAR_SYNC; clear <= CLEAR_ASYNC; clear++) {
		struct bench *bench = bench_create(2, 4);
		const size_t sync = bench_data(bench, "sync");
		bench->plan.machine.line.advance = ADVANCE_COUNT;
		bench->plan.machine.line.clear = (enum clear_kind)clear;
		bench_region(bench, "line", 2, 0);
		bench_region(bench, "sync", 1, SIGNAL(sync));
		struct chip *chip = add_chip(bench, 2, 8);
		memcpy(chip->address, (const struct address_wire[]){STATE(0), STATE(1)}, 2 * sizeof *chip->address);
		memset(chip->data, 0, sizeof chip->data);
		chip->data[0] = (struct data_wire){DATA_SIGNAL, 0};
		chip->data[7] = (struct data_wire){DATA_CLEAR, 0};
		struct image image;
		assert_true(fill_alone(bench_table(bench), bench->arena, &image));
		const uint8_t expected[] = {
			0x7E,                              // state 0: cell 1 is no sync
			0x7F,                              // state 1: cell 2 is
			clear == CLEAR_SYNC ? 0xFE : 0x7E, // state 2, the last
			0xFE,                              // state 3: cleared, as before cell 0
		};
		assert_bytes(&image, expected, sizeof expected);
		bench_destroy(bench);
	}
}

// A spare row of a table with direct outputs: next is the first cell's state, sync at rest (high), blank asserted.
static void test_spare_rows(void **state)
{
	(void)state;
	struct bench *bench = bench_create(2, 4);
	const size_t sync = bench_data(bench, "sync"), blank = bench_data(bench, "blank");
	bench->signals[sync].active_high = false;
	bench->plan.role_signal[ROLE_BLANKING] = (int)blank;
	bench->plan.machine.line.outputs = OUTPUTS_DIRECT;
	bench_start(bench, 2);
	bench_region(bench, "sync", 1, SIGNAL(sync) | SIGNAL(blank));
	bench_region(bench, "picture", 1, 0);
	struct chip *chip = add_chip(bench, 2, 8);
	memcpy(chip->address, (const struct address_wire[]){STATE(0), STATE(1)}, 2 * sizeof *chip->address);
	memset(chip->data, 0, sizeof chip->data);
	memcpy(chip->data, (const struct data_wire[]){NEXT(0), NEXT(1), {DATA_SIGNAL, 0}, {DATA_SIGNAL, 1}},
	       4 * sizeof *chip->data);
	struct image image;
	assert_true(fill_alone(bench_table(bench), bench->arena, &image));
	const uint8_t expected[] = {
		0xF6, // state 0, the picture: next 10, sync high, blank low
		0xFE, // state 1, spare: next 10, sync high, blank high
		0xF8, // state 2, sync: next 00, sync low, blank high
		0xFE, // state 3, spare
	};
	assert_bytes(&image, expected, sizeof expected);
	bench_destroy(bench);
}

// What one data pin of a chip holds at a state, bit by bit.
static unsigned pin_level(const struct table *table, const struct data_wire wire, uint32_t state)
{
	struct row row = table_spare(table, STAGE_LINE, 0);
	for (uint32_t cell = 0; cell < table->period; cell++)
		if (table->state_of_cell[cell] == state)
			row = table_row(table, STAGE_LINE, cell);
	if (wire.kind == DATA_NEXT)
		return row.next >> wire.index & 1;
	if (wire.kind == DATA_SIGNAL)
		return row.levels >> wire.index & 1;
	return 1;
}

// Ten state bits over thirteen address pins and two chips, wired at random: each bit of each image against its wires.
static void test_random_wires(void **state)
{
	(void)state;
	struct bench *bench = bench_create(10, 700);
	uint32_t number = 3;
	for (int signal = 0; signal < 6; signal++)
		bench_data(bench, "signal");
	bench_start(bench, 77);
	bench_region(bench, "all", 700, 0);
	for (uint32_t cell = 0; cell < 700; cell++)
		bench->laid.asserted[cell] = (number = number * 1664525u + 1013904223u) >> 26;
	for (unsigned index = 0; index < 2; index++) {
		struct chip *chip = add_chip(bench, 13, index == 0 ? 8 : 16);
		for (unsigned pin = 0; pin < 13; pin++) {
			number = number * 1664525u + 1013904223u;
			const unsigned other = (number >> 16) % (pin + 1);
			chip->address[pin] = chip->address[other];
			chip->address[other] = pin < 10 ? (struct address_wire)STATE(pin)
			                                : (struct address_wire){(enum address_wire_kind)(pin - 10), 0};
		}
		for (unsigned pin = 0; pin < chip->part->data_pins; pin++) {
			const unsigned bit = index * 8 + pin;
			chip->data[pin] = bit < 10   ? (struct data_wire)NEXT(9 - bit)
			                  : bit < 16 ? (struct data_wire){DATA_SIGNAL, 15 - bit}
			                             : (struct data_wire)OPEN_DATA;
		}
	}
	struct image images[2];
	const struct table *table = bench_table(bench);
	assert_true(fill_alone(table, bench->arena, images));
	for (unsigned index = 0; index < 2; index++) {
		const struct chip *chip = &bench->chips[index];
		const unsigned width = chip->part->data_pins / 8;
		assert_int_equal(images[index].length, 8192 * width);
		for (uint32_t address = 0; address < 8192; address += 7) {
			uint32_t at = 0;
			for (unsigned pin = 0; pin < 13; pin++)
				if (chip->address[pin].kind == ADDRESS_STATE && (address >> pin & 1) != 0)
					at |= 1u << chip->address[pin].index;
			for (unsigned pin = 0; pin < chip->part->data_pins; pin++)
				assert_int_equal(images[index].bytes[address * width + pin / 8] >> pin % 8 & 1,
				                 pin_level(table, chip->data[pin], at));
		}
	}
	bench_destroy(bench);
}

// The largest part: the state is on its highest pins, A24 and A25, so the image is four blocks of 16 MiB.
static void test_highest_pins(void **state)
{
	(void)state;
	struct bench *bench = create_four();
	struct chip *chip = add_chip(bench, 26, 8);
	chip->address[24] = (struct address_wire)STATE(1);
	chip->address[25] = (struct address_wire)STATE(0);
	memcpy(chip->data, (const struct data_wire[]){NEXT(0), NEXT(1), {DATA_SIGNAL, 0}, {DATA_SIGNAL, 1}},
	       4 * sizeof *chip->data);
	struct image image;
	assert_true(fill_alone(bench_table(bench), bench->arena, &image));
	assert_int_equal(image.length, 67108864);
	const size_t block = 16777216;
	const uint8_t expected[] = {
		0xF5, // state 0: next 01, sync high, blank low; D4 to D7 open: 1
		0xFB, // A24, state 2: next 11, sync low, blank high
		0xF6, // A25, state 1: next 10, sync high, blank low
		0xFC, // both, state 3: next 00, sync high, blank high
	};
	for (size_t index = 0; index < 4; index++) {
		const uint8_t *bytes = image.bytes + index * block;
		assert_int_equal(bytes[0], expected[index]);
		assert_int_equal(memcmp(bytes, bytes + 1, block - 1), 0);
	}
	bench_destroy(bench);
}

// As many states as there may be: the highest bit of the state is in the address and in next. The frame begins at
// 0x800000, where the spare rows lead too, and goes by 0x7FFFFF.
static void test_highest_state_bit(void **state)
{
	(void)state;
	struct bench *bench = bench_create(24, 2);
	const size_t sync = bench_data(bench, "sync"), all = bench_field(bench, "all", 23, 0);
	bench_start(bench, 0x800000);
	bench_region(bench, "sync", 1, SIGNAL(sync));
	bench_region(bench, "rest", 1, 0);
	bench_hold(bench, all, 0x7FFFFF, 0);
	struct chip *chip = add_chip(bench, 24, 8);
	for (unsigned pin = 0; pin < 24; pin++)
		chip->address[pin] = (struct address_wire)STATE(pin);
	memcpy(chip->data, (const struct data_wire[]){NEXT(23), NEXT(22), NEXT(16), NEXT(15), NEXT(0), {DATA_SIGNAL, 0}},
	       6 * sizeof *chip->data);
	struct image image;
	assert_true(fill_alone(bench_table(bench), bench->arena, &image));
	assert_int_equal(image.length, 16777216);
	assert_int_equal(image.bytes[0x800000], 0xDE); // next 0x7FFFFF: not bit 23, but 22, 16, 15 and 0; no sync
	assert_int_equal(image.bytes[0x7FFFFF], 0xE1); // next 0x800000: bit 23 alone; sync
	assert_int_equal(image.bytes[0], 0xE1);        // so do spare rows
	assert_int_equal(image.bytes[0xFFFFFF], 0xE1);
	bench_destroy(bench);
}

struct two_stages {
	struct line_type types[2];
	struct laid_line laid[2];
	struct frame_line lines[3];
	uint32_t first_row[3], line_of_type[2], states[4];
	uint64_t pins[6];
	struct table table;
};

// Direct stages. Three lines of two cells: even (kind 0), odd (kind 1), even. Lamp and the frame stage's bell are asserted in odd.
static struct bench *create_two_stages(struct two_stages *two, unsigned state_bits, unsigned kind_bits)
{
	struct bench *bench = bench_create(1, 6);
	*two = (struct two_stages){.types = {{.name = "even"}, {.name = "odd"}}, .laid = {{.cells = 2}, {.cells = 2}},
	                           .lines = {{.type = 0}, {.type = 1, .first_cell = 2}, {.type = 0, .first_cell = 4}},
	                           .first_row = {0, 2, 4}, .line_of_type = {0, 1}, .states = {0, 1, 0, 1}, .pins = {0, 0, 3, 3, 0, 0}};
	bench->plan.lines = two->types;
	bench->plan.line_count = 2;
	bench->plan.machine.form = FORM_LINE_FRAME;
	bench->plan.machine.kind_bits = kind_bits;
	bench->plan.machine.line = (struct stage_plan){.state_bits = state_bits, .outputs = OUTPUTS_DIRECT};
	bench->plan.machine.frame = (struct stage_plan){.state_bits = 2, .outputs = OUTPUTS_DIRECT};
	bench_data(bench, "lamp");
	bench->signals[bench_data(bench, "bell")].stage = STAGE_FRAME;
	bench->timeline.types = two->laid;
	bench->timeline.lines = two->lines;
	bench->timeline.line_count = 3;
	bench->timeline.cell_count = 6;
	two->table = (struct table){.timeline = &bench->timeline, .period = 4, .state_of_cell = two->states, .pins = two->pins,
	                            .first_row = two->first_row, .line_of_type = two->line_of_type};
	return bench;
}

// Two chips of odd wires, one for each stage.
static void test_two_stages(void **state)
{
	(void)state;
	struct two_stages two;
	struct bench *bench = create_two_stages(&two, 1, 1);
	struct chip *line = add_chip(bench, 3, 8), *frame = add_chip(bench, 2, 16);
	frame->stage = STAGE_FRAME;
	// Line chip: A0 kind.0, A1 open, A2 state.0; D0 step, D3 next.0, D7 lamp.
	line->address[0] = (struct address_wire){ADDRESS_KIND, 0};
	line->address[2] = (struct address_wire)STATE(0);
	line->data[0] = (struct data_wire){DATA_STEP, 0};
	line->data[3] = (struct data_wire)NEXT(0);
	line->data[7] = (struct data_wire){DATA_SIGNAL, 0};
	// Frame chip: A0 state.1, A1 state.0; D1 next.1, D8 next.0, D9 kind.0, D15 bell.
	frame->address[0] = (struct address_wire)STATE(1);
	frame->address[1] = (struct address_wire)STATE(0);
	frame->data[1] = (struct data_wire)NEXT(1);
	frame->data[8] = (struct data_wire)NEXT(0);
	frame->data[9] = (struct data_wire){DATA_KIND, 0};
	frame->data[15] = (struct data_wire){DATA_SIGNAL, 1};
	two.table.wiring = wiring_of(&bench->plan);
	struct image images[2];
	assert_true(fill_alone(&two.table, bench->arena, images));
	const uint8_t of_line[] = {
		0x7E, // state 0, kind 0: next 1 (D3), step 0, lamp 0; open pins 0x76
		0xFE, // state 0, kind 1: the same with the lamp
		0x7E, 0xFE, // again with A1
		0x77, // state 1, kind 0: next 0, step 1
		0xF7, // state 1, kind 1, with the lamp
		0x77, 0xF7,
	};
	assert_bytes(&images[0], of_line, sizeof of_line);
	const uint8_t of_frame[] = {
		0xFD, 0x7D, // state 0: next 01: D1 0, D8 1; kind 0, bell 0; open pins 0xFD and 0x7C
		0xFD, 0x7C, // A0 is state.1, so state 2: next 00, kind 0
		0xFF, 0xFE, // state 1: next 10, kind 1, bell 1
		0xFD, 0x7C, // state 3, spare: next 00, kind 0
	};
	assert_bytes(&images[1], of_frame, sizeof of_frame);
	bench_destroy(bench);
}

// Spare rows of a kind that no line has assert step; those of other kinds do not.
static void test_spare_kinds(void **state)
{
	(void)state;
	struct two_stages two;
	struct bench *bench = create_two_stages(&two, 2, 2);
	struct chip *chip = add_chip(bench, 4, 8);
	for (unsigned pin = 0; pin < 4; pin++)
		chip->address[pin] = pin < 2 ? (struct address_wire)STATE(pin) : (struct address_wire){ADDRESS_KIND, pin - 2};
	chip->data[0] = (struct data_wire)NEXT(0);
	chip->data[1] = (struct data_wire)NEXT(1);
	chip->data[2] = (struct data_wire){DATA_STEP, 0};
	chip->data[3] = (struct data_wire){DATA_SIGNAL, 0};
	two.table.wiring = wiring_of(&bench->plan);
	struct image image;
	assert_true(fill_alone(&two.table, bench->arena, &image));
	const uint8_t expected[] = {
		0xF1, 0xF4, 0xF0, 0xF0, // kind 0: 0 leads to 1, which steps; 2 and 3 are spare
		0xF9, 0xFC, 0xF0, 0xF0, // kind 1, with the lamp
		0xF4, 0xF4, 0xF4, 0xF4, // kinds 2 and 3: nothing but step
		0xF4, 0xF4, 0xF4, 0xF4,
	};
	assert_bytes(&image, expected, sizeof expected);
	// With the kind's bits in each other's place, those of kinds 1 and 2 change.
	chip->address[2].index = 1;
	chip->address[3].index = 0;
	assert_true(fill_alone(&two.table, bench->arena, &image));
	assert_memory_equal(image.bytes, expected, 4);
	assert_memory_equal(image.bytes + 4, expected + 8, 4);
	assert_memory_equal(image.bytes + 8, expected + 4, 4);
	assert_memory_equal(image.bytes + 12, expected + 12, 4);
	bench_destroy(bench);
}

// Two tables in four banks: 0 and 3 hold the one, 1 and 2 the other. Straight, and with the bank below the state.
static void test_banks(void **state)
{
	(void)state;
	struct bench *bench = create_four(), *other = create_four();
	other->signals[0].active_high = true; // sync, D2
	for (unsigned number = 0; number < 2; number++)
		for (unsigned kind = 0; kind < 2; kind++) {
			struct chip *chip = add_chip(number == 0 ? bench : other, 5, 8);
			for (unsigned pin = 0; pin < 4; pin++)
				chip->address[pin] = (pin < 2) == (kind == 0) ? (struct address_wire)STATE(pin % 2) : (struct address_wire){ADDRESS_BANK, pin % 2};
			for (unsigned pin = 0; pin < 3; pin++)
				chip->data[pin] = pin < 2 ? (struct data_wire)NEXT(pin) : (struct data_wire){DATA_SIGNAL, 0};
		}
	bench->plan.bank_bits = other->plan.bank_bits = 2;
	assert_non_null(bench_table(bench));
	assert_non_null(bench_table(other));
	const struct table *tables[] = {bench->table, other->table, other->table, bench->table};
	struct image images[2], alone[2], others[2];
	assert_true(images_fill(tables, 4, bench->arena, images));
	assert_true(fill_alone(bench->table, bench->arena, alone));
	assert_true(fill_alone(other->table, bench->arena, others));
	for (uint32_t address = 0; address < 32; address++) {
		const bool is_other = (address >> 2 & 3) == 1 || (address >> 2 & 3) == 2;
		const bool is_other_low = (address & 3) == 1 || (address & 3) == 2;
		assert_int_equal(images[0].bytes[address], (is_other ? others : alone)[0].bytes[address]);
		assert_int_equal(images[1].bytes[address], (is_other_low ? others : alone)[1].bytes[address]);
	}
	// Sync is low in cell 3 of the one and high there in the other: rows 2.
	assert_int_equal(images[0].bytes[2], 0xFB);
	assert_int_equal(images[0].bytes[6], 0xFF);
	// Of two tables bank.0 alone chooses.
	assert_true(images_fill(tables, 2, bench->arena, images));
	assert_int_equal(images[0].bytes[2], 0xFB);
	assert_int_equal(images[0].bytes[6], 0xFF);
	assert_int_equal(images[0].bytes[10], 0xFB);
	assert_int_equal(images[0].bytes[14], 0xFF);
	bench_destroy(other);
	bench_destroy(bench);
}

// Check value of CRC-32/ISO-HDLC: Greg Cook, "Catalogue of parametrised CRC algorithms". The sum: 0x31 + … + 0x39.
static void test_checksums(void **state)
{
	(void)state;
	uint8_t digits[] = "123456789";
	const struct image image = {digits, 9};
	assert_int_equal(image_crc32(&image), 0xCBF43926);
	assert_int_equal(image_sum16(&image), 477);
	uint8_t full[65794];
	memset(full, 0xFF, sizeof full);
	const struct image large = {full, sizeof full};
	assert_int_equal(image_sum16(&large), (65794u * 255u) % 65536u);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(test_straight),     cmocka_unit_test(test_scrambled),
		cmocka_unit_test(test_sixteen_bits), cmocka_unit_test(test_sixteen_bits_straight),
		cmocka_unit_test(test_counter),      cmocka_unit_test(test_spare_rows),
		cmocka_unit_test(test_random_wires), cmocka_unit_test(test_highest_pins),
		cmocka_unit_test(test_highest_state_bit), cmocka_unit_test(test_checksums),
		cmocka_unit_test(test_two_stages),   cmocka_unit_test(test_spare_kinds),
		cmocka_unit_test(test_banks),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
