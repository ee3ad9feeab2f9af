// Pieces of the build sheet: how logic is packed, which wire each pin has, and what a counter must show, worked out by hand.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <string.h>

#include "base/text.h"
#include "library/library.h"
#include "view/bring_up.h"
#include "view/nets.h"
#include "view/sheet_parts.h"

struct board {
	scanlatch_messages *messages;
	scanlatch_plan *plan;
	scanlatch_images *images;
	scanlatch_proofs *proofs;
};

static struct board board_of(const char *text)
{
	struct board board = {.messages = scanlatch_messages_create()};
	assert_non_null(board.messages);
	board.plan = scanlatch_plan_read("quay.yaml", text, strlen(text), board.messages);
	assert_non_null(board.plan);
	board.images = scanlatch_images_make(board.plan, board.messages);
	assert_non_null(board.images);
	board.proofs = scanlatch_prove(board.images);
	assert_non_null(board.proofs);
	return board;
}

static void board_end(struct board *board)
{
	scanlatch_proofs_destroy(board->proofs);
	scanlatch_images_destroy(board->images);
	scanlatch_plan_destroy(board->plan);
	scanlatch_messages_destroy(board->messages);
}

// Nine bits of state and two signals in the word, one decoded; the pins of the second chip are crossed.
static const char loop_text[] =
	"scanlatch: 1\nname: quay\nclock: { master: 9 MHz, cell: 3 ticks, stretch: 2 ticks }\n"
	"signals:\n  lamp: { role: plain, active: high }\n  long: { role: stretch, active: low }\n"
	"  sync: { role: composite sync, active: low, from: { field: top, codes: [1, 2] } }\n"
	"lines: { only: { regions: [ { region: a, cells: 2, assert: [sync], hold: { n: 256 + cell } },\n"
	"                            { region: b, cells: 3, assert: [lamp], stretch: 1, hold: { n: cell } } ] } }\n"
	"frame: [ { repeat: 1, line: only } ]\n"
	"machine: { form: loop, state: 10 bits, fields: { n: 8..0, top: 9..8 }, start: 0x100 }\n"
	"chips:\n"
	"  - { label: U1, part: 28C16, speed: 150 ns, address: [state.0, state.1, state.2, state.3, state.4, state.5, state.6, state.7, state.8, state.9, -],\n"
	"      data: [next.0, next.1, next.2, next.3, next.4, next.5, next.6, next.7] }\n"
	"  - { label: U2, part: 28C16, speed: 150 ns, address: [state.1, state.0, state.2, state.3, state.4, state.5, state.6, state.7, state.8, low, state.9],\n"
	"      data: [lamp, -, next.9, long, next.8, -, -, -] }\n";

static const char stages_text[] =
	"scanlatch: 1\nname: quay\nclock: { master: 1 MHz, cell: 1 tick }\n"
	"signals: { sync: { role: horizontal sync, active: low }, dark: { role: blanking, active: high, stage: frame } }\n"
	"lines:\n  shown: { regions: [ { region: sync, cells: 1, assert: [sync] }, { region: rest, cells: 5 } ] }\n"
	"  hidden: { regions: [ { region: sync, cells: 1, assert: [sync, dark] }, { region: rest, cells: 5, assert: [dark] } ] }\n"
	"frame: [ { repeat: 2, line: shown }, { repeat: 1, line: hidden } ]\n"
	"machine:\n  form: line-frame\n  line: { state: 5 bits, outputs: registered, advance: count, clear: sync }\n"
	"  frame: { state: 2 bits, outputs: direct, advance: table }\n"
	"chips: { line: { part: 28C16, speed: 150 ns }, frame: { part: 28C16, speed: 150 ns } }\n";

#define assert_puts(expected, call) \
	do { \
		struct text out = {0}; \
		call; \
		assert_false(out.failed); \
		assert_string_equal(text_string(&out), expected); \
		text_release(&out); \
	} while (0)

static void latches_are_packed_in_order(void **state)
{
	(void)state;
	struct board board = board_of(loop_text);
	const struct plan *plan = board.plan->plan;
	const struct stage_nets nets = nets_of_stage(plan, STAGE_LINE);
	assert_int_equal(nets.latch_bits, 12); // ten bits of next, lamp, long; sync has no bit
	assert_int_equal(nets_latches(&nets), 2);
	assert_int_equal(nets_counters(&nets, plan), 0);
	assert_int_equal(nets.straight_count, 0);
	assert_puts("latch 2, Q1", put_state_source(&out, plan, STAGE_LINE, 9));
	assert_puts("latch 2, D2", put_data_sink(&out, plan, &nets, (struct data_wire){DATA_SIGNAL, 0}));
	assert_puts("latch 2, Q3", put_data_source(&out, plan, &nets, (struct data_wire){DATA_SIGNAL, 1}));
	// AT28C16 Rev 0540B: D2 is pin 11, D4 pin 14; A0 pin 8, A1 pin 7, A9 pin 22, A10 pin 19.
	assert_puts("D2 (pin 11) of U2", put_data_pin(&out, plan, STAGE_LINE, (struct data_wire){DATA_NEXT, 9}));
	assert_puts("A0 (pin 8) of U1; A1 (pin 7) of U2", assert_true(put_address_pins(&out, plan, STAGE_LINE, ADDRESS_STATE, 0)));
	assert_puts("A2 (pin 6) of U1, U2", assert_true(put_address_pins(&out, plan, STAGE_LINE, ADDRESS_STATE, 2)));
	assert_puts("A9 (pin 22) of U1; A10 (pin 19) of U2", assert_true(put_address_pins(&out, plan, STAGE_LINE, ADDRESS_STATE, 9)));
	assert_puts("", assert_false(put_address_pins(&out, plan, STAGE_LINE, ADDRESS_BANK, 0)));
	board_end(&board);
}

static void stages_have_latches_and_counters_of_their_own(void **state)
{
	(void)state;
	struct board board = board_of(stages_text);
	const struct plan *plan = board.plan->plan;
	const struct stage_nets line = nets_of_stage(plan, STAGE_LINE), frame = nets_of_stage(plan, STAGE_FRAME);
	assert_int_equal(nets_counters(&line, plan), 2);
	assert_int_equal(line.latch_bits, 2); // step and sync
	assert_int_equal(line.straight_count, 1);
	assert_int_equal(line.straight[0].kind, DATA_CLEAR);
	assert_int_equal(frame.latch_bits, 2); // next; kind and dark are direct
	assert_int_equal(frame.straight_count, 2);
	assert_puts("line counter 2, Q0", put_state_source(&out, plan, STAGE_LINE, 4));
	assert_puts("frame latch 1, Q1", put_state_source(&out, plan, STAGE_FRAME, 1));
	assert_puts("line latch 1, D0", put_data_sink(&out, plan, &line, (struct data_wire){DATA_STEP, 0}));
	assert_puts("line counters, clear: by an inverter", put_data_sink(&out, plan, &line, (struct data_wire){DATA_CLEAR, 0}));
	// Straight: next in D0 and D1, kind in D2, dark in D3 of the second chip; kind follows five bits of state at A5, pin 3.
	assert_puts("D2 (pin 11) of rom1", put_kind_source(&out, plan, 0));
	assert_puts("A5 (pin 3) of rom0", put_data_sink(&out, plan, &frame, (struct data_wire){DATA_KIND, 0}));
	assert_puts("D3 (pin 13) of rom1", put_data_source(&out, plan, &frame, (struct data_wire){DATA_SIGNAL, 1}));
	board_end(&board);
}

// A counter of five: 0 1 2 3 4. Bit 0 rises to 1 and to 3, bit 1 to 2, bit 2 to 4.
static void counters_count(void **state)
{
	(void)state;
	static const int64_t rises[] = {2, 1, 1, 0}, high[] = {2, 2, 1, 0};
	for (unsigned bit = 0; bit < 4; bit++) {
		assert_int_equal(counter_bit_rises(5, bit), rises[bit]);
		assert_int_equal(counter_bit_high(5, bit), high[bit]);
	}
	assert_int_equal(counter_bit_rises(1, 0), 0);
	for (int64_t counts = 1; counts < 70; counts++)
		for (unsigned bit = 0; bit < 7; bit++) {
			int64_t rising = 0, ticks = 0;
			for (int64_t count = 0; count < counts; count++) {
				rising += (count >> bit & 1) != 0 && ((count - 1) >> bit & 1) == 0;
				ticks += count >> bit & 1;
			}
			assert_int_equal(counter_bit_rises(counts, bit), rising);
			assert_int_equal(counter_bit_high(counts, bit), ticks);
		}
}

static void rates_and_parts_are_rounded(void **state)
{
	(void)state;
	assert_puts("15.734266 kHz", put_rate(&out, (struct fraction){2250000, 143})); // SMPTE 170M-2004, 11.2
	assert_puts("1 MHz", put_rate(&out, (struct fraction){1000000, 1}));
	assert_puts("999.999 Hz", put_rate(&out, (struct fraction){999999, 1000}));
	assert_puts("14.318182 MHz", put_rate(&out, (struct fraction){157500000, 11}));
	assert_puts("33.3333 %", put_percent(&out, (struct fraction){1, 3}));
	assert_puts("100 %", put_percent(&out, (struct fraction){1, 1}));
}

// Five cells of three ticks, one of them of five: 17 ticks of 9 MHz. States 0x100, 0x101, 2, 3, 4. The divider counts 0 to 2, once to 4.
static void bring_up_goes_from_the_clock_to_the_signals(void **state)
{
	(void)state;
	static const char *const nets[] = {"master clock", "divider bit 0", "divider bit 1", "divider bit 2", "cells", "state.0", "state.1", "state.2",
		"state.3", "state.4", "state.5", "state.6", "state.7", "state.8", "state.9", "sync", "long", "lamp"};
	// Rising edges in a frame; of the master clock all of its ticks.
	static const int64_t rises[] = {17, 6, 5, 1, 5, 2, 1, 1, 0, 0, 0, 0, 0, 1, 0, 1, 1, 1};
	static const int64_t high[] = {0, 6, 6, 1, 0, 6, 8, 3, 0, 0, 0, 0, 0, 6, 0, 11, 12, 11};
	struct board board = board_of(loop_text);
	struct tally *tally = NULL;
	struct bring_up bring_up;
	assert_true(tally_run(board.proofs->proofs[0], board.images->images, &tally));
	assert_true(bring_up_make(board.proofs->proofs[0], tally, &bring_up));
	assert_int_equal(bring_up.count, sizeof nets / sizeof *nets);
	for (size_t row = 0; row < bring_up.count; row++) {
		struct fraction wanted = FRACTION_ZERO;
		assert_puts(nets[row], put_bring_up_net(&out, &bring_up, &bring_up.rows[row]));
		assert_true(bring_up.rows[row].known);
		assert_true(fraction_make(rises[row] * 9000000, 17, &wanted));
		assert_int_equal(fraction_compare(bring_up.rows[row].hertz, wanted), 0);
		assert_true(fraction_make(high[row], 17, &wanted));
		assert_int_equal(fraction_compare(bring_up.rows[row].duty, wanted), 0);
	}
	assert_puts("3 MHz: no cell is stretched; 1.8 MHz: every cell is stretched; another: the divider starts over at a wrong count",
	            put_bring_up_fault(&out, &bring_up, &bring_up.rows[4]));
	assert_puts("the decoder of field top", put_bring_up_place(&out, &bring_up, &bring_up.rows[15]));
	tally_destroy(tally);
	board_end(&board);
}

// Both sides of the package, as JEDEC's 24 pins go: 1 down to 12, 13 up to 24.
static void pins_go_round_the_package(void **state)
{
	(void)state;
	struct board board = board_of(loop_text);
	struct text out = {0};
	sheet_pins(&out, board.plan->plan);
	const char *at = text_string(&out);
	static const char *const rows[] = {
		"<td class=\"wire address\">state.7<br/><small>from latch 1, Q7</small></td><td class=\"pin\">A7</td><th scope=\"row\" class=\"pin\">1</th>"
		"<th scope=\"row\" class=\"pin\">24</th><td class=\"pin\">VCC</td><td class=\"wire tied\">VCC<br/><small>100 nF to GND beside it</small></td></tr>",
		"<td class=\"wire tied\">GND</td><td class=\"pin\">GND</td><th scope=\"row\" class=\"pin\">12</th><th scope=\"row\" class=\"pin\">13</th>"
		"<td class=\"pin\">D3</td><td class=\"wire data\">next.3<br/><small>to latch 1, D3</small></td></tr>",
		"<h3>U2: 28C16, 150 ns</h3>",
		"<td class=\"wire address\">state.0<br/><small>from latch 1, Q0</small></td><td class=\"pin\">A1</td><th scope=\"row\" class=\"pin\">7</th>",
		"<td class=\"pin\">A9</td><td class=\"wire tied\">GND<br/><small>low</small></td>",
	};
	for (size_t row = 0; row < sizeof rows / sizeof *rows; row++) {
		const char *found = strstr(text_string(&out), rows[row]);
		assert_non_null(found);
		assert_true(row == 4 || found >= at);
		at = row == 4 ? at : found;
	}
	text_release(&out);
	board_end(&board);
}

static void decoders_say_which_outputs_and_gates(void **state)
{
	(void)state;
	struct board board = board_of(loop_text);
	struct text out = {0};
	sheet_decoders(&out, board.proofs->proofs[0]);
	assert_non_null(strstr(text_string(&out), "1 x 74HC138. Inputs A (the lowest): state.8 from latch 2, Q0; B: state.9 from latch 2, Q1; C: low."));
	assert_non_null(strstr(text_string(&out), "<th scope=\"row\">sync</th><td>low</td><td>1, 2</td><td>AND of Y1, Y2</td>"));
	text_release(&out);
	board_end(&board);
}

static void terms_are_explained_where_they_are_used(void **state)
{
	(void)state;
	struct text out = {0};
	sheet_glossary(&out, "a jumper");
	assert_string_equal(text_string(&out), "<dl class=\"glossary\">\n<div><dt>jumper</dt>\n<dd>a wire or switch that ties a pin high or low</dd>\n</div>\n</dl>\n");
	text_release(&out);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(latches_are_packed_in_order),
		cmocka_unit_test(stages_have_latches_and_counters_of_their_own),
		cmocka_unit_test(counters_count),
		cmocka_unit_test(rates_and_parts_are_rounded),
		cmocka_unit_test(bring_up_goes_from_the_clock_to_the_signals),
		cmocka_unit_test(pins_go_round_the_package),
		cmocka_unit_test(decoders_say_which_outputs_and_gates),
		cmocka_unit_test(terms_are_explained_where_they_are_used),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
