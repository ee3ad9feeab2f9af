// Line types, regions and frame lifted out of loops made by hand. A loop is written as its lines, a character a cell:
//     S sync and blank   - blank   u blank and burst   . none   x lamp
//     T, W and w are S, - and . in a stretched cell
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "base/text.h"
#include "by_hand.h"
#include "proof/lift.h"

#define SYNC ((uint64_t)1)
#define BLANK ((uint64_t)2)
#define BURST ((uint64_t)4)
#define LAMP ((uint64_t)8)
#define STRETCH ((uint64_t)16)

static const struct letter {
	char letter;
	uint64_t asserted;
} letters[] = {
	{'S', SYNC | BLANK}, {'-', BLANK}, {'u', BLANK | BURST}, {'.', 0}, {'x', LAMP}, {'T', SYNC | BLANK | STRETCH}, {'W', BLANK | STRETCH},
	{'w', STRETCH},
};

static uint64_t cell_of(char letter)
{
	size_t row = 0;
	while (letters[row].letter != letter)
		row++;
	return letters[row].asserted;
}

// signals sync, blank, burst, lamp; so many state bits, of which the loop takes 0, 1, 2 … and the others lead to 0.
static struct by_hand *board(unsigned state_bits)
{
	static const enum role roles[] = {ROLE_COMPOSITE_SYNC, ROLE_BLANKING, ROLE_BURST_GATE, ROLE_PLAIN, ROLE_STRETCH};
	static const char *const names[] = {"sync", "blank", "burst", "lamp"};
	struct by_hand *hand = by_hand_create(state_bits);
	for (size_t signal = 0; signal < 4; signal++) {
		add_signal(hand, names[signal], signal % 2 == 1);
		hand->signals[signal].role = roles[signal];
		if (roles[signal] != ROLE_PLAIN)
			hand->plan.role_signal[roles[signal]] = (int)signal;
	}
	hand->plan.name = "hand";
	return hand;
}

static uint32_t cells_in(const char *loop)
{
	uint32_t cells = 0;
	for (; *loop != '\0'; loop++)
		cells += *loop != ' ';
	return cells;
}

static char letter_at(const char *loop, uint32_t cell)
{
	for (;; loop++) {
		if (*loop == ' ')
			continue;
		if (cell-- == 0)
			return *loop;
	}
}

// What the pins show at a cell of the loop, leads included.
static uint64_t pins_at(const struct by_hand *hand, const char *loop, uint32_t cell)
{
	const int64_t cells = cells_in(loop);
	uint64_t pins = 0;
	for (size_t signal = 0; signal < hand->plan.signal_count; signal++) {
		const int64_t shown = ((cell + hand->signals[signal].lead_cells) % cells + cells) % cells;
		pins |= cell_of(letter_at(loop, (uint32_t)shown)) & (uint64_t)1 << signal;
	}
	return pins;
}

// State `first` + i, around, for cell i.
static void burn_loop(struct by_hand *hand, const char *loop, uint32_t first)
{
	const uint32_t cells = cells_in(loop), states = (uint32_t)1 << hand->plan.machine.line.state_bits;
	const bool direct = hand->plan.machine.line.outputs == OUTPUTS_DIRECT;
	add_straight_chips(hand);
	for (uint32_t state = 0; state < states; state++)
		burn(hand, state, first, pins_at(hand, loop, 0));
	for (uint32_t cell = 0; cell < cells; cell++)
		burn(hand, (first + cell) % states, (first + (cell + 1) % cells) % states, pins_at(hand, loop, direct ? cell : (cell + 1) % cells));
}

static void put_type(struct text *text, const struct lift_type *type)
{
	text_printf(text, "%s:", type->name);
	for (size_t index = 0; index < type->region_count; index++) {
		const struct lift_region *region = &type->regions[index];
		text_printf(text, " %s*%u", region->name, (unsigned)region->cells);
		if (region->stretched > 0)
			text_printf(text, "+%u", (unsigned)region->stretched);
		for (size_t hold = 0; hold < region->hold_count; hold++)
			text_printf(text, "{%s=%s}", region->holds[hold].field, region->holds[hold].expression);
	}
	text_put(text, "; ");
}

// The lift as "name: region*cells+stretched{field=expression} …; … | 3 name, …".
static void assert_lifted(const struct by_hand *hand, struct lift_options options, const char *wanted)
{
	struct diagnostics *diagnostics = diagnostics_create();
	struct lift *lift = lift_images(&hand->plan, hand->images, options, diagnostics);
	struct text text = {0};
	assert_non_null(lift);
	for (size_t type = 0; type < lift->type_count; type++)
		put_type(&text, &lift->types[type]);
	text_put(&text, "|");
	for (size_t block = 0; block < lift->block_count; block++)
		text_printf(&text, " %u %s", (unsigned)lift->blocks[block].repeat, lift->types[lift->blocks[block].type].name);
	assert_string_equal(text_string(&text), wanted);
	text_release(&text);
	lift_destroy(lift);
	diagnostics_destroy(diagnostics);
}

static const struct lift_options plain = {.cut_signal = SIZE_MAX};
static const struct lift_options near = {.cut_signal = SIZE_MAX, .near = true};

static void assert_loop(unsigned state_bits, const char *loop, const char *wanted)
{
	struct by_hand *hand = board(state_bits);
	burn_loop(hand, loop, 0);
	assert_lifted(hand, plain, wanted);
	by_hand_destroy(hand);
}

static void regions_by_roles(void **test)
{
	(void)test;
	// The picture's state is its cell of the loop, so that each row's is 9 more.
	assert_loop(6, "SS-u-..-- SS-u-..-- SS-u----- SSSSSSS--",
	            "picture: sync*2 breezeway*1 burst*1 back porch*1 picture*2{bits_5_0=5 + 9*row + col} front porch*2; "
	            "border: sync*2 breezeway*1 burst*1 blank*5; vertical sync: broad sync*7 serration*2; "
	            "| 2 picture 1 border 1 vertical sync");
	// Without burst, sync and picture have back and front porch between them; other signals tell regions of a kind apart.
	assert_loop(5, "S-..xx.- S-..xx.-",
	            "picture: sync*1 back porch*1 picture*2{bits_4_0=2 + 8*row + col} picture 2*2{bits_4_0=4 + 8*row + col} "
	            "picture 3*1{bits_4_0=6 + 8*row} front porch*1; | 2 picture");
}

// The loop begins anywhere: the frame begins after vertical sync, however the images have it.
static void turned_loops(void **test)
{
	(void)test;
	static const char *const loops[] = {"S-...- S-...- SSSSS- S-----", "...- S-...- SSSSS- S----- S-", "-- S-...- S-...- SSSSS- S---",
	                                    "SSSSS- S----- S-...- S-...-", "SS- S----- S-...- S-...- SSS"};
	for (size_t index = 0; index < sizeof loops / sizeof *loops; index++) {
		struct by_hand *hand = board(5);
		burn_loop(hand, loops[index], (uint32_t)(7 * index));
		hand->plan.machine.has_start = true;
		hand->plan.machine.start = (uint32_t)(7 * index);
		struct diagnostics *diagnostics = diagnostics_create();
		struct lift *lift = lift_images(&hand->plan, hand->images, plain, diagnostics);
		assert_non_null(lift);
		assert_string_equal(lift->types[lift->blocks[0].type].name, "border");
		assert_string_equal(lift->types[lift->blocks[lift->block_count - 1].type].name, "vertical sync");
		assert_int_equal(lift->line_count, 4);
		assert_int_equal(lift->first, FIRST_AFTER_SYNC);
		assert_int_equal(lift->lead_in_cells, 0);
		assert_true(lift->has_start);
		assert_int_equal(lift->start, lift->states[0]);
		lift_destroy(lift);
		diagnostics_destroy(diagnostics);
		by_hand_destroy(hand);
	}
}

// Of line types of one name, the commonest has it as it is, wherever it comes first; the others are numbered.
static void names_by_use(void **test)
{
	(void)test;
	assert_loop(6, "S--u- S---- S---- S-u-- S---- SSSS-",
	            "border 2: sync*1 breezeway*2 burst*1 blank*1; border: sync*1 blank*4; border 3: sync*1 breezeway*1 burst*1 blank*2; "
	            "vertical sync: broad sync*4 serration*1; | 1 border 2 2 border 1 border 3 1 border 1 vertical sync");
}

static void interlaced_pulses(void **test)
{
	(void)test;
	// Lines of 20 cells, half lines of 10. Equalising pulses are half as wide as sync, broad ones fill most of a half line.
	assert_loop(8,
	            "SSSS--............-- SSSS--............-- SSSS--............-- SSSS--............-- SSSS--............-- SSSS--...."
	            "SS-------- SS-------- SSSSSSSS-- SSSSSSSS--"
	            "SS-------- SS--------",
	            "equalising: equalising pulse*2 blank*8; picture: sync*4 back porch*2 picture*12{bits_7_0=6 + 20*row + col} front porch*2; "
	            "half picture: sync*4 back porch*2 picture*4{bits_7_0=106 + col}; vertical sync: broad sync*8 serration*2; "
	            "| 2 equalising 5 picture 1 half picture 2 equalising 2 vertical sync");
}

static void vertical_sync_without_serration(void **test)
{
	(void)test;
	// Sync stays on for three lines and two cells of the fourth.
	assert_loop(6, "S-..- S-..- S-..- S-..- S-..- SSSSS SSSSS SSSSS S----",
	            "border: sync*1 blank*4; picture: sync*1 back porch*1 picture*2{bits_5_0=2 + 5*row + col} front porch*1; "
	            "vertical sync: broad sync*5; | 1 border 5 picture 3 vertical sync");
}

static void vertical_sync_begun_elsewhere(void **test)
{
	(void)test;
	// Sync begins in cell 6, vertical sync in cell 0: lines of equal length are the shorter description.
	assert_loop(8, "......S- ......S- ......S- ------S- ------S- SSSSSSS- SSSSSSS- ------S- ------S-",
	            "border: sync*1 blank*7; picture: sync*1 back porch*1 picture*6{bits_7_0=8*row + col}; "
	            "vertical sync: sync*1 blank*1 broad sync*6; | 2 border 3 picture 2 border 2 vertical sync");
}

// A board with a signal that stretches cells by 3 ticks.
static struct by_hand *stretching(void)
{
	static const char *const names[] = {"sync", "blank", "lamp", "stretch"};
	static const enum role roles[] = {ROLE_COMPOSITE_SYNC, ROLE_BLANKING, ROLE_PLAIN, ROLE_STRETCH};
	struct by_hand *hand = by_hand_create(5);
	for (size_t signal = 0; signal < 4; signal++) {
		add_signal(hand, names[signal], true);
		hand->signals[signal].role = roles[signal];
		if (roles[signal] != ROLE_PLAIN)
			hand->plan.role_signal[roles[signal]] = (int)signal;
	}
	hand->plan.clock.stretch_ticks = 3;
	return hand;
}

// Stretched cells that are not the first of a region begin one.
static void stretched_cells(void **test)
{
	(void)test;
	static const uint64_t cells[] = {3 | 8, 3, 2, 2, 2 | 8, 0 | 8, 0 | 8, 0, 0 | 8, 2};
	struct by_hand *hand = stretching();
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 32; state++)
		burn(hand, state, state < 9 ? state + 1 : 0, cells[state < 9 ? state + 1 : 0]);
	assert_lifted(hand, plain,
	              "picture: sync*2+1 back porch*2 back porch 2*1+1 picture*3+2{bits_4_0=5 + col} picture 2*1+1{bits_4_0=8} front porch*1; "
	              "| 1 picture");
	struct diagnostics *diagnostics = diagnostics_create();
	struct lift *lift = lift_images(&hand->plan, hand->images, plain, diagnostics);
	assert_int_equal(lift->tick_count, 10 * 10 + 5 * 3);
	lift_destroy(lift);
	diagnostics_destroy(diagnostics);
	by_hand_destroy(hand);
}

// Pins that lead or lag, latched or not, show the same lines.
static void leads_are_undone(void **test)
{
	(void)test;
	static const int64_t leads[] = {1, -1, 3, -20, 0};
	for (size_t index = 0; index < 10; index++) {
		struct by_hand *hand = board(6);
		hand->signals[index % 4].lead_cells = leads[index % 5];
		hand->signals[3].lead_cells = leads[(index + 1) % 5];
		hand->plan.machine.line.outputs = index % 2 == 0 ? OUTPUTS_REGISTERED : OUTPUTS_DIRECT;
		burn_loop(hand, "S-u-..xx- S-u-..xx- S-u------ SSSSSSS--", 0);
		assert_lifted(hand, plain,
		              "picture: sync*1 breezeway*1 burst*1 back porch*1 picture*2{bits_5_0=4 + 9*row + col} picture 2*2{bits_5_0=6 + 9*row + col} "
		              "front porch*1; border: sync*1 breezeway*1 burst*1 blank*6; vertical sync: broad sync*7 serration*2; "
		              "| 2 picture 1 border 1 vertical sync");
		by_hand_destroy(hand);
	}
}

// Every state is held, and the frame begins where spare rows lead: two cells before sync.
static void pinned_states(void **test)
{
	(void)test;
	struct by_hand *hand = board(5);
	burn_loop(hand, "--S-.. --S-.. --S-.. --SSSS", 0);
	assert_lifted(hand, near,
	              "picture: front porch*2{pinned=6*row + col} sync*1{pinned=2 + 6*row} back porch*1{pinned=3 + 6*row} picture*2{pinned=4 + 6*row + col}; "
	              "vertical sync: blank*2{pinned=18 + col} broad sync*4{pinned=20 + col}; | 3 picture 1 vertical sync");
	by_hand_destroy(hand);
}

static void decoded_signals(void **test)
{
	(void)test;
	static const uint32_t codes[] = {2};
	struct by_hand *hand = by_hand_create(4);
	add_field(hand, "code", 3, 1);
	add_decoded(hand, "sync", 0, codes, 1);
	hand->signals[0].role = ROLE_COMPOSITE_SYNC;
	hand->plan.role_signal[ROLE_COMPOSITE_SYNC] = 0;
	add_straight_chips(hand);
	for (uint32_t state = 0; state < 16; state++)
		burn(hand, state, (state + 1) % 16, 0);
	// States 4 and 5 are sync; without blanking the longest of the rest is picture, whose codes go on from 3.
	assert_lifted(hand, plain, "picture: sync*2 picture*14{code=(3 + col/2) % 8}; | 1 picture");
	by_hand_destroy(hand);
}

static enum rule refusal(const struct by_hand *hand, struct lift_options options)
{
	struct diagnostics *diagnostics = diagnostics_create();
	assert_null(lift_images(&hand->plan, hand->images, options, diagnostics));
	assert_int_equal(diagnostics_count(diagnostics), 1);
	const enum rule rule = diagnostics_rule(diagnostics, 0);
	diagnostics_destroy(diagnostics);
	return rule;
}

static void no_rasters(void **test)
{
	(void)test;
	// Lines of 2 to 9 cells, none of which takes half of the time.
	struct by_hand *hand = board(6);
	burn_loop(hand, "S- S-- S--- S---- S----- S------ S------- S--------", 0);
	assert_int_equal(refusal(hand, plain), RULE_LIFT_RASTER);
	by_hand_destroy(hand);
	hand = board(4);
	burn_loop(hand, "----..", 0);
	assert_int_equal(refusal(hand, plain), RULE_LIFT_RASTER);
	const struct lift_options by_blank = {.cut_signal = 1};
	assert_lifted(hand, by_blank, "picture: blank*4 picture*2{bits_3_0=4 + col}; | 1 picture");
	hand->plan.role_signal[ROLE_COMPOSITE_SYNC] = -1;
	assert_int_equal(refusal(hand, plain), RULE_BOARD_SYNC);
	by_hand_destroy(hand);
}

// Two states of a hand that lead to each other, as random bytes make them: so the frame is not the only loop.
static void add_loop(struct by_hand *hand, uint32_t state)
{
	burn(hand, state, state + 1, 0);
	burn(hand, state + 1, state, 0);
}

// Lengths of which the commonest, 4 cells, takes a third of the time; all are multiples of its half, as short lines often are by chance.
static void multiples_of_short_halves(void **test)
{
	(void)test;
	struct by_hand *hand = board(6);
	burn_loop(hand, "S--- S----- S--- S--------- S--- S-------", 0);
	add_loop(hand, 60);
	assert_int_equal(refusal(hand, plain), RULE_LIFT_RASTER);
	by_hand_destroy(hand);
}

// Short lines are a raster that power-up leads to soon, in which sync is off for most of the time, and that takes its share of states.
static void short_lines(void **test)
{
	(void)test;
	assert_loop(5, "S-..- S-..- SSS--", "picture: sync*1 back porch*1 picture*2{bits_4_0=2 + 5*row + col} front porch*1; "
	            "vertical sync: broad sync*3 serration*2; | 2 picture 1 vertical sync");
	struct by_hand *hand = board(5);
	burn_loop(hand, "SSS-- SSS-- S-..-", 0);
	add_loop(hand, 20);
	assert_int_equal(refusal(hand, plain), RULE_LIFT_RASTER);
	by_hand_destroy(hand);
	hand = board(5);
	burn_loop(hand, "S-..- S-..- SSS--", 0);
	for (uint32_t state = 15; state < 26; state++) // eleven states on the way
		burn(hand, state + 1, state == 15 ? 0 : state, 0);
	hand->plan.machine.has_start = true;
	hand->plan.machine.start = 25;
	assert_lifted(hand, plain, "picture: sync*1 back porch*1 picture*2{bits_4_0=2 + 5*row + col} front porch*1; "
	              "vertical sync: broad sync*3 serration*2; | 2 picture 1 vertical sync");
	hand->plan.machine.start = 26;
	assert_int_equal(refusal(hand, plain), RULE_LIFT_RASTER);
	by_hand_destroy(hand);
	hand = board(14);
	burn_loop(hand, "S-..- S-..- SSS--", 0);
	add_loop(hand, 100);
	assert_int_equal(refusal(hand, plain), RULE_LIFT_RASTER);
	by_hand_destroy(hand);
}

// Where every spare state leads home at once, lines of any kind were meant: short, mostly sync, of many states, of lengths that are few or
// close together. One longer way, and chance may have made them.
static void rows_that_come_home(void **test)
{
	(void)test;
	static const char *const loops[] = {
		"S-..- S-..- SSS--", "SSS-- SSS-- S-..-", "S- S-", "S--- S----- S--- S--------- S--- S-------",
		"S--------- S---------- S----------- S------------ S------------- S--------------",
	};
	for (size_t loop = 0; loop < sizeof loops / sizeof *loops; loop++) {
		struct by_hand *hand = board(17);
		struct diagnostics *diagnostics = diagnostics_create();
		burn_loop(hand, loops[loop], 0);
		struct lift *lift = lift_images(&hand->plan, hand->images, plain, diagnostics);
		assert_non_null(lift);
		lift_destroy(lift);
		diagnostics_destroy(diagnostics);
		burn(hand, 200, 201, 0);
		assert_int_equal(refusal(hand, plain), RULE_LIFT_RASTER);
		by_hand_destroy(hand);
	}
}

// Beside another loop few lines are none, long as they are; but beside one of erased rows alone they are.
static void few_lines_beside_loops(void **test)
{
	(void)test;
	struct by_hand *hand = board(12);
	burn_loop(hand, "S--............- S--............- S------", 0);
	add_loop(hand, 100);
	assert_int_equal(refusal(hand, plain), RULE_LIFT_RASTER);
	by_hand_destroy(hand);
	hand = board(12);
	burn_loop(hand, "S-..- S-..- SSS--", 0);
	burn(hand, 0xFFF, 0xFFF, 0);
	struct diagnostics *diagnostics = diagnostics_create();
	struct lift *lift = lift_images(&hand->plan, hand->images, plain, diagnostics);
	assert_non_null(lift);
	assert_int_equal(lift->loop_count, 1);
	lift_destroy(lift);
	diagnostics_destroy(diagnostics);
	by_hand_destroy(hand);
}

// Lines of few lengths are a raster, though none of them takes half of the time.
static void few_lengths(void **test)
{
	(void)test;
	static const char loop[] = "S------- S-------- S--------- S------- S-------- S--------- S------- S-------- S--------- "
		"S------- S-------- S---------";
	struct by_hand *hand = board(7);
	burn_loop(hand, loop, 0);
	struct diagnostics *diagnostics = diagnostics_create();
	struct lift *lift = lift_images(&hand->plan, hand->images, plain, diagnostics);
	assert_non_null(lift);
	assert_int_equal(lift->type_count, 3);
	assert_int_equal(lift->first, FIRST_FREE);
	assert_false(lift->vertical_sync);
	lift_destroy(lift);
	diagnostics_destroy(diagnostics);
	by_hand_destroy(hand);
}

static void other_loops(void **test)
{
	(void)test;
	struct by_hand *hand = board(5);
	burn_loop(hand, "S-..- S-..- SSS--", 0);
	burn(hand, 20, 21, 0);
	burn(hand, 21, 22, 0);
	burn(hand, 22, 20, 0);
	burn(hand, 23, 22, 0);
	burn(hand, 31, 31, 0);
	struct diagnostics *diagnostics = diagnostics_create();
	struct lift *lift = lift_images(&hand->plan, hand->images, plain, diagnostics);
	assert_non_null(lift);
	assert_int_equal(lift->loop_count, 2);
	assert_int_equal(lift->lost_states, 5);
	assert_int_equal(lift->loops[0].state, 20);
	assert_int_equal(lift->loops[0].cells, 3);
	assert_int_equal(lift->loops[1].state, 31);
	assert_int_equal(lift->loops[1].cells, 1);
	assert_int_equal(diagnostics_rule(diagnostics, 0), RULE_LIFT_LOOPS);
	lift_destroy(lift);
	diagnostics_destroy(diagnostics);
	by_hand_destroy(hand);
}

// Two laps of the loop until a phase that is asked of frames comes back.
static void laps_for_the_phase(void **test)
{
	(void)test;
	struct by_hand *hand = board(4);
	burn_loop(hand, "S-..- S-..- SSS--", 0);
	hand->plan.clock.has_subcarrier = true;
	hand->plan.clock.subcarrier_hz = ratio(1000000, 100); // 15 cells of 10 ticks are 3/2 of its cycles
	for (int64_t frames = 1; frames <= 2; frames++) {
		hand->plan.clock.phase = PHASE_FRAMES;
		hand->plan.clock.phase_count = frames;
		struct diagnostics *diagnostics = diagnostics_create();
		struct lift *lift = lift_images(&hand->plan, hand->images, plain, diagnostics);
		assert_non_null(lift);
		assert_int_equal(lift->copies, frames == 1 ? 2 : 1);
		lift_destroy(lift);
		diagnostics_destroy(diagnostics);
	}
	by_hand_destroy(hand);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(regions_by_roles),
		cmocka_unit_test(turned_loops),
		cmocka_unit_test(names_by_use),
		cmocka_unit_test(interlaced_pulses),
		cmocka_unit_test(vertical_sync_without_serration),
		cmocka_unit_test(vertical_sync_begun_elsewhere),
		cmocka_unit_test(stretched_cells),
		cmocka_unit_test(leads_are_undone),
		cmocka_unit_test(pinned_states),
		cmocka_unit_test(decoded_signals),
		cmocka_unit_test(no_rasters),
		cmocka_unit_test(multiples_of_short_halves),
		cmocka_unit_test(short_lines),
		cmocka_unit_test(rows_that_come_home),
		cmocka_unit_test(few_lines_beside_loops),
		cmocka_unit_test(few_lengths),
		cmocka_unit_test(other_loops),
		cmocka_unit_test(laps_for_the_phase),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
