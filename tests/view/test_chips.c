#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "plan/plan.h"
#include "view/chips.h"

// A chip with every kind of wire: 10 address pins, so that its address line is just too long for one line.
struct board {
	struct part part;
	struct signal signals[1];
	struct chip chip;
	struct plan plan;
};

static void fill_board(struct board *board)
{
	*board = (struct board){.part = {.name = "HARBOUR1", .address_pins = 10, .data_pins = 8}};
	board->signals[0].name = "sync";
	board->chip = (struct chip){.label = "U7", .part = &board->part, .access_s = {3, 20000000}};
	for (unsigned pin = 0; pin < 6; pin++)
		board->chip.address[pin] = (struct address_wire){ADDRESS_STATE, 5 - pin};
	board->chip.address[6] = (struct address_wire){ADDRESS_BANK, 0};
	board->chip.address[7] = (struct address_wire){ADDRESS_LOW, 0};
	board->chip.address[8] = (struct address_wire){ADDRESS_HIGH, 0};
	board->chip.data[0] = (struct data_wire){DATA_NEXT, 4};
	board->chip.data[1] = (struct data_wire){DATA_CLEAR, 0};
	board->chip.data[6] = (struct data_wire){DATA_SIGNAL, 0};
	board->plan = (struct plan){.signals = board->signals, .signal_count = 1, .chips = &board->chip, .chip_count = 1};
}

// Pins are not parted from their wires at a line's end: the first line has 95 characters; two spaces and "A8" would
// fit, "A8 high" does not.
static void every_kind_of_wire(void **state)
{
	(void)state;
	struct board board;
	struct text text = {0};
	fill_board(&board);
	view_chips(&text, &board.plan);
	assert_string_equal(text_string(&text),
		"chip U7: HARBOUR1, 150 ns\n"
		"      A0 state.5  A1 state.4  A2 state.3  A3 state.2  A4 state.1  A5 state.0  A6 bank.0  A7 low\n"
		"      A8 high  A9 open (tie low)\n"
		"      D0 next.4  D1 clear  D2 -  D3 -  D4 -  D5 -  D6 sync  D7 -\n");
	text_release(&text);
}

static void the_same_in_json(void **state)
{
	(void)state;
	struct board board;
	fill_board(&board);
	json_t *found = view_chips_json(&board.plan);
	json_t *wanted = json_pack("[{s:s, s:s, s:s, s:f, s:[ssssssssss], s:[ssssssss]}]", "label", "U7", "part", "HARBOUR1", "access_s",
	                           "3/20000000", "access_ns", 150.0, "address", "state.5", "state.4", "state.3", "state.2", "state.1",
	                           "state.0", "bank.0", "low", "high", "-", "data", "next.4", "clear", "-", "-", "-", "-", "sync", "-");
	assert_non_null(wanted);
	assert_true(json_equal(found, wanted));
	json_decref(found);
	json_decref(wanted);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(every_kind_of_wire),
		cmocka_unit_test(the_same_in_json),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
