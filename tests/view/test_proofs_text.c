// The report of the proofs for a terminal, word for word, from results that were filled in by hand.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "base/text.h"
#include "harbour_proofs.h"
#include "view/proofs.h"

static void assert_report(const struct harbour *harbour, bool colour, const char *expected)
{
	struct text out = {0};
	view_proofs(&out, &harbour->proofs, colour);
	assert_false(out.failed);
	assert_string_equal(text_string(&out), expected);
	text_release(&out);
}

static void assert_proof(const struct harbour *harbour, enum proof_kind kind, const char *expected)
{
	struct text out = {0};
	view_proof(&out, &harbour->proofs, kind, false);
	assert_false(out.failed);
	assert_string_equal(text_string(&out), expected);
	text_release(&out);
}

// Cell 300 is cell 98 of line 2, cell 107 cell 6 of line 1. 1/3 is 0.333, 50/101 is 0.495.
static void a_good_plan_has_a_line_for_each_proof(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	assert_report(&harbour, false,
		"pass  closure   262 lines, 26462 cells, 238944 ticks; home in state 0x8000 after 16.688 ms\n"
		"pass  signals   132310 pin levels and 17280 held addresses as planned\n"
		"      load is asserted in codes of field top: 1 4 5\n"
		"pass  colour    228 cycles a line; the phase is the same at every line and frame; asked: every line\n"
		"pass  power-up  all 65536 states come home, the longest way 1 cell (1/101 line, 0.629 us) from state\n"
		"                0x0000\n"
		"pass  upset     423392 flips of one bit: home after 101 cells at worst (bit 14 in line 2, cell 98),\n"
		"                1.02 in the mean; the raster slips 50 cells (0.495 lines) at worst (bit 3 in line 1,\n"
		"                cell 6), 0.333 in the mean\n"
		"none  limits    the plan names no standard\n"
		"pass  glitches  26462 cell edges, 0 with more than one bit of a decoded field changing; no decoded\n"
		"                signal can flicker; decoded pins settle after 79 ns (latch 41 + decoder 38)\n"
		"pass  speed     needed 226 ns of the shortest cell's 628.571 ns: latch 41 + access 150 of rom0 +\n"
		"                setup 15 + margin 20; slack 402.571 ns\n"
		"pass  sweep     all 128 values of at.6..0 come up at least every 1.2 ms, the slowest 0x7F; asked:\n"
		"                every 2 ms\n"
		"Lines and cells are counted from 0.\n");
}

// A counted monochrome board: nothing decoded, no sweep, every state in the frame. No line is named, so nothing is said of them.
static void what_the_plan_does_not_ask_is_none(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	struct proofs *proofs = &harbour.proofs;
	harbour.plan.sweep_count = 0;
	harbour.plan.clock.has_subcarrier = false;
	proofs->speed.passes[0].counter = true;
	proofs->proof[PROOF_COLOUR].verdict = VERDICT_ABSENT;
	proofs->proof[PROOF_GLITCHES].verdict = VERDICT_ABSENT;
	proofs->proof[PROOF_SWEEP].verdict = VERDICT_ABSENT;
	proofs->glitches.has_field_signals = false;
	proofs->signals.held_comparisons = 0;
	proofs->power_up.longest_cells = 0;
	proofs->upset.worst_cells = proofs->upset.worst_slip_cells = 0;
	assert_report(&harbour, false,
		"pass  closure   262 lines, 26462 cells, 238944 ticks; home in state 0x8000 after 16.688 ms\n"
		"pass  signals   132310 pin levels as planned\n"
		"      load is asserted in codes of field top: 1 4 5\n"
		"none  colour    the plan has no subcarrier\n"
		"pass  power-up  all 65536 states come home: all are states of the frame\n"
		"pass  upset     423392 flips of one bit: home at once; the raster does not slip\n"
		"none  limits    the plan names no standard\n"
		"none  glitches  no signal is decoded from the state, and the data outputs are latched\n"
		"pass  speed     needed 226 ns of the shortest cell's 628.571 ns: counter 41 + access 150 of rom0 +\n"
		"                setup 15 + margin 20; slack 402.571 ns\n"
		"none  sweep     the plan asks for none\n");
}

// Proofs that could not be judged fail: musts and advice.
static void only_the_verdict_is_coloured(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.plan.sweep_count = 0;
	harbour.proofs.proof[PROOF_SWEEP].verdict = VERDICT_ABSENT;
	for (enum proof_kind kind = PROOF_SIGNALS; kind <= PROOF_SPEED; kind++)
		harbour_not_judged(&harbour, kind);
	assert_report(&harbour, true,
		"\033[1;32mpass\033[0m  closure   262 lines, 26462 cells, 238944 ticks; home in state 0x8000 after 16.688 ms\n"
		"\033[1;31mFAIL\033[0m  signals   not judged: the frame does not close\n"
		"\033[1;31mFAIL\033[0m  colour    not judged: the frame does not close\n"
		"\033[1;31mFAIL\033[0m  power-up  not judged: the frame does not close\n"
		"\033[1;33mmiss\033[0m  upset     not judged: the frame does not close\n"
		"\033[1;33mmiss\033[0m  limits    not judged: the frame does not close\n"
		"\033[1;33mmiss\033[0m  glitches  not judged: the frame does not close\n"
		"\033[1;33mmiss\033[0m  speed     not judged: the frame does not close\n"
		"none  sweep     the plan asks for none\n");
}

// Upsets that were not judged name no line; the wrong pin does.
static void a_fault_that_names_a_line_says_how_lines_are_counted(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.plan.sweep_count = 0;
	harbour.proofs.proof[PROOF_SWEEP].verdict = VERDICT_ABSENT;
	for (enum proof_kind kind = PROOF_COLOUR; kind <= PROOF_SPEED; kind++)
		harbour_not_judged(&harbour, kind);
	harbour_fails(&harbour, PROOF_SIGNALS, harbour_wrong_sync());
	assert_report(&harbour, false,
		"pass  closure   262 lines, 26462 cells, 238944 ticks; home in state 0x8000 after 16.688 ms\n"
		"FAIL  signals   not all of 132310 pin levels and 17280 held addresses are as planned\n"
		"      sync is low, expected high\n"
		"      at line 17 (border), cell 3 (sync); cell 1720 of the frame\n"
		"      row of state 0x06B7, which sets sync: byte 0x5F at address 0x106B7 of chip rom0\n"
		"      load is asserted in codes of field top: 1 4 5\n"
		"FAIL  colour    not judged: the frame does not close\n"
		"FAIL  power-up  not judged: the frame does not close\n"
		"miss  upset     not judged: the frame does not close\n"
		"miss  limits    not judged: the frame does not close\n"
		"miss  glitches  not judged: the frame does not close\n"
		"miss  speed     not judged: the frame does not close\n"
		"none  sweep     the plan asks for none\n"
		"Lines and cells are counted from 0.\n");
}

static void several_banks_are_named(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.proofs.banks = 4;
	harbour.proofs.power_up.longest_bank = 3;
	assert_proof(&harbour, PROOF_CLOSURE,
		"pass  closure   262 lines, 26462 cells, 238944 ticks; home in state 0x8000 after 16.688 ms in each\n"
		"                of 4 banks\n");
	assert_proof(&harbour, PROOF_SIGNALS,
		"pass  signals   132310 pin levels and 17280 held addresses as planned in 4 banks\n"
		"      load is asserted in codes of field top: 1 4 5\n");
	assert_proof(&harbour, PROOF_POWER_UP,
		"pass  power-up  all 65536 states in 4 banks come home, the longest way 1 cell (1/101 line, 0.629 us)\n"
		"                from state 0x0000 in bank 3\n");
	struct counterexample found = harbour_wrong_sync();
	found.bank = 2;
	harbour_fails(&harbour, PROOF_SIGNALS, found);
	assert_proof(&harbour, PROOF_SIGNALS,
		"FAIL  signals   not all of 132310 pin levels and 17280 held addresses are as planned in 4 banks\n"
		"      sync is low, expected high\n"
		"      at line 17 (border), cell 3 (sync); cell 1720 of the frame, bank 2\n"
		"      row of state 0x06B7, which sets sync: byte 0x5F at address 0x106B7 of chip rom0\n"
		"      load is asserted in codes of field top: 1 4 5\n");
}

// All lines alike: the states run through one line only.
static void a_frame_that_repeats_says_after_how_many_cells(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.proofs.closure.period_cells = 101;
	assert_proof(&harbour, PROOF_CLOSURE,
		"pass  closure   262 lines, 26462 cells, 238944 ticks; home in state 0x8000 after 16.688 ms; the\n"
		"                states repeat every 101 cells\n");
}

// The last cell of the frame is cell 100 of line 261. A word of rom1 is to blame.
static void a_frame_that_does_not_close_is_shown(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.proofs.closure = (struct closure_result){.ticks = 238941, .start_state = 0x8000};
	harbour_fails(&harbour, PROOF_CLOSURE, (struct counterexample){.present = true, .cell = 26461, .state = 0x675D,
		.signal = SIZE_MAX, .byte_known = true, .byte = {CHIP_ROM1, 0x675D, 0xC1},
		.what = "the next state after the frame's 26462 cells is 0xC1, expected the first state 0x8000"});
	assert_proof(&harbour, PROOF_CLOSURE,
		"FAIL  closure   the machine does not keep to the frame of 262 lines, 26462 cells, 238944 ticks\n"
		"      the next state after the frame's 26462 cells is 0xC1, expected the first state 0x8000\n"
		"      at line 261 (border), cell 100 (picture); cell 26461 of the frame\n"
		"      row of state 0x675D: word 0x00C1 at address 0x675D of chip rom1\n");
}

static void a_long_detail_wraps_two_further_in(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	struct counterexample found = harbour_wrong_sync();
	found.what = "sync is low, expected high: top is 0x5, which stands for low elsewhere in the frame of the harbour's board";
	harbour_fails(&harbour, PROOF_SIGNALS, found);
	assert_proof(&harbour, PROOF_SIGNALS,
		"FAIL  signals   not all of 132310 pin levels and 17280 held addresses are as planned\n"
		"      sync is low, expected high: top is 0x5, which stands for low elsewhere in the frame of the\n"
		"        harbour's board\n"
		"      at line 17 (border), cell 3 (sync); cell 1720 of the frame\n"
		"      row of state 0x06B7, which sets sync: byte 0x5F at address 0x106B7 of chip rom0\n"
		"      load is asserted in codes of field top: 1 4 5\n");
}

// Line 1 begins with cell 101.
static void a_phase_that_does_not_repeat_is_shown(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.proofs.colour = harbour_quarter_cycles();
	harbour.plan.clock.phase_count = 2;
	harbour_fails(&harbour, PROOF_COLOUR, (struct counterexample){.present = true, .cell = 101, .state = 0x0065,
		.signal = SIZE_MAX, .what = "2 lines from line 1 on take 1818 ticks, 909/2 cycles, expected a whole number; all "
		"other such runs are whole", .hint = "the lines meet \"every 4 lines\""});
	assert_proof(&harbour, PROOF_COLOUR,
		"FAIL  colour    909/4 (227.25) cycles a line; lines start at 0, 1/4, 1/2 and 3/4 of a cycle in turn;\n"
		"                the phase repeats every 4 lines and every 2 frames; asked: every 2 lines\n"
		"      2 lines from line 1 on take 1818 ticks, 909/2 cycles, expected a whole number; all other such\n"
		"        runs are whole\n"
		"      at line 1 (border), cell 0 (front porch); cell 101 of the frame, state 0x0065\n"
		"      hint: the lines meet \"every 4 lines\"\n");
	// Before images are made there are no states.
	harbour.proofs.proof[PROOF_COLOUR].counterexample.state = NO_STATE;
	assert_proof(&harbour, PROOF_COLOUR,
		"FAIL  colour    909/4 (227.25) cycles a line; lines start at 0, 1/4, 1/2 and 3/4 of a cycle in turn;\n"
		"                the phase repeats every 4 lines and every 2 frames; asked: every 2 lines\n"
		"      2 lines from line 1 on take 1818 ticks, 909/2 cycles, expected a whole number; all other such\n"
		"        runs are whole\n"
		"      at line 1 (border), cell 0 (front porch); cell 101 of the frame\n"
		"      hint: the lines meet \"every 4 lines\"\n");
}

// Two kinds of lines, of 683/3 cycles and of 228, in a frame of 262: 178946/3 = 59648 2/3 cycles.
static void colour_names_what_is_asked(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	static const struct phase_run runs[] = {{0, 18, 0, 2}, {18, 1, 0, 0}, {19, 242, 0, 2}, {261, 1, 1, 0}};
	harbour.proofs.colour = (struct colour_result){.cycles_per_line = {683, 3}, .cycles_per_frame = {178946, 3}, .repeats_known = true,
		.repeats_lines = 786, .repeats_frames = 3, .phases = {3, 262, 1, runs, 4}, .out_of_step.by = {0, 1}};
	harbour.plan.clock.phase = PHASE_FREE;
	assert_proof(&harbour, PROOF_COLOUR,
		"pass  colour    lines differ, the first has 683/3 (227.666667) cycles; 178946/3 (59648.666667)\n"
		"                cycles a frame; the phase advances by 2/3 of a cycle in 260 lines and stays in 2\n"
		"                (line 18 first); lines start at 0, 1/3 or 2/3; the phase repeats every 786 lines and\n"
		"                every 3 frames; asked: free\n");
}

static void colour_that_does_not_fit_is_said_plainly(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	struct colour_result *colour = &harbour.proofs.colour;
	static const struct phase_run run = {0, 1, 0, 1};
	*colour = (struct colour_result){.uniform = true, .cycles_per_line = {0, 1}, .cycles_per_frame = {0, 1},
		.phases = {2500, 1, 1879, &run, 1}, .out_of_step.by = {0, 1}};
	harbour.plan.clock.phase = PHASE_FRAMES;
	assert_proof(&harbour, PROOF_COLOUR,
		"pass  colour    cycles a line or frame do not fit 64 bits; the phase advances by 1879/2500 (0.7516)\n"
		"                of a cycle a line and repeats too seldom to count; asked: every frame\n");
	harbour.plan.clock.phase_count = 3;
	colour->cycles_per_line = (struct fraction){228, 1};
	colour->cycles_per_frame = (struct fraction){59736, 1};
	assert_proof(&harbour, PROOF_COLOUR,
		"pass  colour    228 cycles a line; the phase advances by 1879/2500 (0.7516) of a cycle a line and\n"
		"                repeats too seldom to count; asked: every 3 frames\n");
}

static void show_runs(struct harbour *harbour, const struct phase_run *runs, uint32_t count, int64_t advance, const char *expected)
{
	harbour->proofs.colour.uniform = false;
	harbour->proofs.colour.repeats_lines = 20960;
	harbour->proofs.colour.repeats_frames = 80;
	harbour->proofs.colour.phases = (struct line_phases){80, 131, advance, runs, count};
	assert_proof(harbour, PROOF_COLOUR, expected);
}

// In a frame of 262 lines, so that a period of 131 comes twice. A cycle has 80 parts.
static void lines_that_advance_the_phase_differently(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	static const struct phase_run kept[] = {{0, 83, 0, 0}, {83, 1, 0, 20}, {84, 46, 20, 0}, {130, 1, 20, 20}};
	show_runs(&harbour, kept, 4, 40,
		"pass  colour    lines differ, the first has 228 cycles; 59736 cycles a frame; the phase stays in 258\n"
		"                lines and advances by 1/4 of a cycle in 4 (line 83 first); lines start at 0, 1/4,\n"
		"                1/2 or 3/4; the phase repeats every 20960 lines and every 80 frames; asked: every\n"
		"                line\n");
	static const struct phase_run three[] = {{0, 1, 0, 20}, {1, 129, 20, 0}, {130, 1, 20, 60}};
	show_runs(&harbour, three, 3, 0,
		"pass  colour    lines differ, the first has 228 cycles; 59736 cycles a frame; the phase advances by\n"
		"                1/4 of a cycle in 2 lines, stays in 258 (line 1 first) and advances by 3/4 in 2\n"
		"                (line 130 first); lines start at 0 or 1/4; the phase repeats every 20960 lines and\n"
		"                every 80 frames; asked: every line\n");
	static const struct phase_run many[] = {{0, 1, 0, 1}, {1, 2, 1, 2}, {3, 100, 5, 3}, {103, 20, 65, 4}, {123, 8, 65, 5}};
	show_runs(&harbour, many, 5, 25,
		"pass  colour    lines differ, the first has 228 cycles; 59736 cycles a frame; the phase advances by\n"
		"                1/80 of a cycle in 2 lines, by 1/40 in 4 (line 1 first), by 3/80 in 200 (line 3\n"
		"                first) and otherwise in 56; the phase repeats every 20960 lines and every 80 frames;\n"
		"                asked: every line\n");
}

static void a_second_loop_is_shown(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	struct power_up_result *power_up = &harbour.proofs.power_up;
	power_up->lost_states = 17;
	harbour_fails(&harbour, PROOF_POWER_UP, (struct counterexample){.present = true, .bank = 1, .state = 0x12,
		.signal = SIZE_MAX, .byte_known = true, .byte = {CHIP_ROM0, 0x12, 0x34},
		.what = "state 0x12 is on a second loop of 3 cells: its next state is 0x34"});
	assert_proof(&harbour, PROOF_POWER_UP,
		"FAIL  power-up  17 of 65536 states never come home\n"
		"      state 0x12 is on a second loop of 3 cells: its next state is 0x34\n"
		"      row of state 0x0012: byte 0x34 at address 0x00012 of chip rom0\n");
	harbour.proofs.banks = 2;
	power_up->lost_states = 1;
	assert_proof(&harbour, PROOF_POWER_UP,
		"FAIL  power-up  1 of 65536 states in 2 banks never comes home\n"
		"      in bank 1, state 0x12 is on a second loop of 3 cells: its next state is 0x34\n"
		"      row of state 0x0012: byte 0x34 at address 0x00012 of chip rom0\n");
}

// 2617 cells of 101 a line are 25.911 lines; 303 are 3.
static void long_ways_home_count_lines(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	struct power_up_result *power_up = &harbour.proofs.power_up;
	power_up->longest_cells = 2617;
	power_up->longest_lines = (struct fraction){2617, 101};
	power_up->longest_state = 0xFFFF;
	assert_proof(&harbour, PROOF_POWER_UP,
		"pass  power-up  all 65536 states come home, the longest way 2617 cells (25.911 lines, 0.629 us) from\n"
		"                state 0xFFFF\n");
	power_up->longest_cells = 303;
	power_up->longest_lines = (struct fraction){3, 1};
	assert_proof(&harbour, PROOF_POWER_UP,
		"pass  power-up  all 65536 states come home, the longest way 303 cells (3 lines, 0.629 us) from state\n"
		"                0xFFFF\n");
	power_up->longest_cells = 101;
	power_up->longest_lines = (struct fraction){1, 1};
	assert_proof(&harbour, PROOF_POWER_UP,
		"pass  power-up  all 65536 states come home, the longest way 101 cells (1 line, 0.629 us) from state\n"
		"                0xFFFF\n");
}

static void cleared_states_are_not_of_the_frame(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	struct power_up_result *power_up = &harbour.proofs.power_up;
	power_up->longest_cells = 0;
	power_up->cleared_states = 39074; // 65536 - 26462
	assert_proof(&harbour, PROOF_POWER_UP,
		"pass  power-up  all 65536 states come home: 26462 are states of the frame, 39074 at once, by\n"
		"                clearing the counter\n");
	power_up->cleared_states = 0;
	assert_proof(&harbour, PROOF_POWER_UP, "pass  power-up  all 65536 states come home: all are states of the frame\n");
}

// Cell 1823 is cell 5 of line 18, the first of type "picture".
static void an_upset_that_never_comes_home_is_shown(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour_fails(&harbour, PROOF_UPSET, (struct counterexample){.present = true, .cell = 1823, .state = 0x800D,
		.signal = SIZE_MAX, .byte_known = true, .byte = {CHIP_ROM1, 0x800D, 0xC00D},
		.what = "with bit 3 flipped, state 0x8005 becomes 0x800D, from which the frame is never regained"});
	assert_proof(&harbour, PROOF_UPSET,
		"miss  upset     423392 flips of one bit, some of which never come home; the others home after 101\n"
		"                cells at worst (bit 14 in line 2, cell 98), 1.02 in the mean; the raster slips 50\n"
		"                cells (0.495 lines) at worst (bit 3 in line 1, cell 6), 0.333 in the mean\n"
		"      with bit 3 flipped, state 0x8005 becomes 0x800D, from which the frame is never regained\n"
		"      at line 18 (picture), cell 5 (sync); cell 1823 of the frame\n"
		"      row of state 0x800D: word 0xC00D at address 0x800D of chip rom1\n");
}

// Cell 1839 is cell 21 of line 18. State 0xA123 has code 5 in its upper three bits, 0x4456 code 2; 7 differs from both.
static void disturbed_signals_show_their_first_edge(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	struct glitch_result *glitches = &harbour.proofs.glitches;
	glitches->disturbed = 2;
	glitches->multi_bit_edges = 432;
	harbour.edges[0] = (struct glitch_edge){SIGNAL_LOAD, 1839, 0xA123, 0x4456, 5, 2, 7, 216};
	harbour.edges[1] = (struct glitch_edge){SIGNAL_BURST, 0, 0x2000, 0xE000, 1, 7, 3, 1};
	harbour_fails(&harbour, PROOF_GLITCHES, (struct counterexample){.present = true, .cell = 1839, .state = 0xA123,
		.signal = SIGNAL_LOAD, .what = "load may flicker"});
	assert_proof(&harbour, PROOF_GLITCHES,
		"miss  glitches  26462 cell edges, 432 with more than one bit of a decoded field changing; 2 decoded\n"
		"                signals may flicker; decoded pins settle after 79 ns (latch 41 + decoder 38)\n"
		"      load may flicker at 216 edges, first where line 18 (picture), cell 21 (picture) begins: code 5\n"
		"        to 2, between them 7; state 0xA123 to 0x4456\n"
		"      burst may flicker at 1 edge, where line 0 (border), cell 0 (front porch) begins: code 1 to 7,\n"
		"        between them 3; state 0x2000 to 0xE000\n");
	glitches->disturbed = 1;
	assert_proof(&harbour, PROOF_GLITCHES,
		"miss  glitches  26462 cell edges, 432 with more than one bit of a decoded field changing; 1 decoded\n"
		"                signal may flicker; decoded pins settle after 79 ns (latch 41 + decoder 38)\n"
		"      load may flicker at 216 edges, first where line 18 (picture), cell 21 (picture) begins: code 5\n"
		"        to 2, between them 7; state 0xA123 to 0x4456\n");
}

static void direct_outputs_are_unsettled(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	struct glitch_result *glitches = &harbour.proofs.glitches;
	glitches->has_field_signals = false;
	glitches->stages[STAGE_LINE].direct = true;
	glitches->stages[STAGE_LINE].unsettled_s = (struct fraction){191, 1000000000};
	glitches->stages[STAGE_LINE].unsettled_part = "rom1";
	assert_proof(&harbour, PROOF_GLITCHES,
		"pass  glitches  no signal is decoded from the state; the data outputs are taken straight from the\n"
		"                EEPROMs and are unsettled for 191 ns after each edge (rom1)\n");
	glitches->stages[STAGE_LINE].direct = false;
	glitches->stages[STAGE_LINE].async_clear = true;
	glitches->stages[STAGE_LINE].clear_unsettled_s = (struct fraction){201, 1000000000};
	glitches->stages[STAGE_LINE].clear_part = "rom0";
	assert_proof(&harbour, PROOF_GLITCHES,
		"pass  glitches  no signal is decoded from the state; clear is taken straight from rom0 into an\n"
		"                asynchronous pin and is unsettled for 201 ns after each edge, when a spike on it\n"
		"                clears the counter too early: gate it, or use clear: sync\n");
}

// A counter's decoder sees the passing state first: where that clears, the pins settle its delay and the access time later.
static void decoded_pins_settle_later_after_an_async_clear(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	struct glitch_result *glitches = &harbour.proofs.glitches;
	harbour.plan.machine.line.advance = ADVANCE_COUNT;
	glitches->settle_s = (struct fraction){88, 1000000000};
	assert_proof(&harbour, PROOF_GLITCHES,
		"pass  glitches  26462 cell edges, 0 with more than one bit of a decoded field changing; no decoded\n"
		"                signal can flicker; decoded pins settle after 88 ns (counter 50 + decoder 38)\n");
	glitches->stages[STAGE_LINE].async_clear = true;
	glitches->stages[STAGE_LINE].clear_unsettled_s = (struct fraction){201, 1000000000};
	glitches->stages[STAGE_LINE].clear_part = "rom0";
	assert_proof(&harbour, PROOF_GLITCHES,
		"pass  glitches  26462 cell edges, 0 with more than one bit of a decoded field changing; no decoded\n"
		"                signal can flicker; decoded pins settle after 88 ns (counter 50 + decoder 38), 201\n"
		"                ns later where the counter is cleared; clear is taken straight from rom0 into an\n"
		"                asynchronous pin and is unsettled for 201 ns after each edge, when a spike on it\n"
		"                clears the counter too early: gate it, or use clear: sync\n");
}

// Half of the cell is 314.286 ns. Twice 41 + 150, and 15 + 20, are 417 ns: 102.714 ns too much.
static void too_slow_a_chip_says_by_how_much(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	struct speed_result *speed = &harbour.proofs.speed;
	harbour.plan.timing.share = (struct fraction){1, 2};
	harbour.plan.machine.line.advance = ADVANCE_COUNT;
	speed->available_s = (struct fraction){11, 35000000};
	speed->passes[0].counter = true;
	speed->passes[0].chip = CHIP_ROM1;
	speed->passes[1] = speed->passes[0];
	speed->pass_count = 2;
	speed->needed_s = (struct fraction){417, 1000000000};
	speed->slack_s = (struct fraction){-719, 7000000000};
	harbour.proofs.proof[PROOF_SPEED].verdict = VERDICT_FAIL;
	assert_proof(&harbour, PROOF_SPEED,
		"miss  speed     needed 417 ns of 314.286 ns (1/2 of the shortest cell): 2 x (counter 41 + access 150\n"
		"                of rom1) + setup 15 + margin 20; short by 102.714 ns\n");
}

// The gap is 3 ms of 2 ms; it ends in cell 500, which is cell 96 of line 4.
static void a_late_value_is_shown_where_it_comes_up_again(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.sweep_results[0].worst_gap_s = (struct fraction){3, 1000};
	harbour.sweep_results[0].worst_value = 5;
	harbour_fails(&harbour, PROOF_SWEEP, (struct counterexample){.present = true, .cell = 500, .state = 0x1F4,
		.signal = SIZE_MAX, .what = "value 5 comes up late"});
	assert_proof(&harbour, PROOF_SWEEP,
		"FAIL  sweep     value 0x05 of at.6..0 stays away for 3 ms, 1 ms too long; asked: every 2 ms\n"
		"      at line 4 (border), cell 96 (picture); cell 500 of the frame, state 0x01F4\n");
}

// A gap that rounds to what is asked still shows by how much it is too long: 2 ms and 1/100 ns.
static void a_gap_that_is_a_trifle_too_long_shows_it(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.sweep_results[0].worst_gap_s = (struct fraction){200000001, 100000000000};
	harbour_fails(&harbour, PROOF_SWEEP, (struct counterexample){.signal = SIZE_MAX, .what = "late"});
	assert_proof(&harbour, PROOF_SWEEP,
		"FAIL  sweep     value 0x7F of at.6..0 stays away for 2 ms, 0.01 ns too long; asked: every 2 ms\n");
}

static void missing_values_are_counted(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.sweep_results[0].missing = 5;
	harbour.sweep_results[0].first_missing = 0x12;
	harbour_fails(&harbour, PROOF_SWEEP, (struct counterexample){.signal = SIZE_MAX, .what = "5 values never come up"});
	assert_proof(&harbour, PROOF_SWEEP,
		"FAIL  sweep     5 of 128 values of at.6..0 never come up, the first is 0x12; asked: every 2 ms\n");
	// A sweep that was not judged counts no values.
	harbour.sweep_results[0] = (struct sweep_result){.worst_gap_s = {0, 1}, .within_s = {1, 500}};
	harbour_not_judged(&harbour, PROOF_SWEEP);
	assert_proof(&harbour, PROOF_SWEEP, "FAIL  sweep     not judged: the frame does not close\n");
}

static void several_sweeps_have_a_line_each(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.plan.sweep_count = 2;
	assert_proof(&harbour, PROOF_SWEEP,
		"pass  sweep     all 2 sweeps are kept\n"
		"      all 128 values of at.6..0 come up at least every 1.2 ms, the slowest 0x7F; asked: every 2 ms\n"
		"      all 16 values of scan come up at least every 508 us, the slowest 0x2; asked: every 2 ms\n");
	harbour.sweep_results[1].missing = 1;
	harbour.sweep_results[1].first_missing = 0xF;
	harbour_fails(&harbour, PROOF_SWEEP, (struct counterexample){.signal = SIZE_MAX, .what = "1 value never comes up"});
	assert_proof(&harbour, PROOF_SWEEP,
		"FAIL  sweep     1 of 2 sweeps are kept\n"
		"      all 128 values of at.6..0 come up at least every 1.2 ms, the slowest 0x7F; asked: every 2 ms\n"
		"      1 of 16 values of scan never come up, the first is 0xF; asked: every 2 ms\n");
}

// A state of 10 bits has three digits.
static void states_are_as_wide_as_the_latch(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.plan.machine.line.state_bits = 10;
	harbour.proofs.closure.start_state = 7;
	assert_proof(&harbour, PROOF_CLOSURE,
		"pass  closure   262 lines, 26462 cells, 238944 ticks; home in state 0x007 after 16.688 ms\n");
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(a_good_plan_has_a_line_for_each_proof),
		cmocka_unit_test(what_the_plan_does_not_ask_is_none),
		cmocka_unit_test(only_the_verdict_is_coloured),
		cmocka_unit_test(a_fault_that_names_a_line_says_how_lines_are_counted),
		cmocka_unit_test(several_banks_are_named),
		cmocka_unit_test(a_frame_that_repeats_says_after_how_many_cells),
		cmocka_unit_test(a_frame_that_does_not_close_is_shown),
		cmocka_unit_test(a_long_detail_wraps_two_further_in),
		cmocka_unit_test(a_phase_that_does_not_repeat_is_shown),
		cmocka_unit_test(colour_names_what_is_asked),
		cmocka_unit_test(colour_that_does_not_fit_is_said_plainly),
		cmocka_unit_test(lines_that_advance_the_phase_differently),
		cmocka_unit_test(a_second_loop_is_shown),
		cmocka_unit_test(long_ways_home_count_lines),
		cmocka_unit_test(cleared_states_are_not_of_the_frame),
		cmocka_unit_test(an_upset_that_never_comes_home_is_shown),
		cmocka_unit_test(disturbed_signals_show_their_first_edge),
		cmocka_unit_test(direct_outputs_are_unsettled),
		cmocka_unit_test(decoded_pins_settle_later_after_an_async_clear),
		cmocka_unit_test(too_slow_a_chip_says_by_how_much),
		cmocka_unit_test(a_late_value_is_shown_where_it_comes_up_again),
		cmocka_unit_test(a_gap_that_is_a_trifle_too_long_shows_it),
		cmocka_unit_test(missing_values_are_counted),
		cmocka_unit_test(several_sweeps_have_a_line_each),
		cmocka_unit_test(states_are_as_wide_as_the_latch),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
