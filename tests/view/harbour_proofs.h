// The proofs of a small harbour's board, filled in by hand, for the tests of their views.
//
// 262 lines of 101 cells: 18 of type "border", 216 "picture", 28 "border". A cell has 9 ticks of 315/22 MHz, one of each line 3
// more: 912 ticks a line, 238944 a frame. Regions: front porch (cells 0-1), sync (2-9), back porch (10-20), picture (21-100).
#ifndef SCANLATCH_TESTS_VIEW_HARBOUR_PROOFS_H
#define SCANLATCH_TESTS_VIEW_HARBOUR_PROOFS_H

#include "catalogue/catalogue.h"
#include "proof/proof.h"

#define HARBOUR_LINES 262
#define HARBOUR_CELLS 101

enum { SIGNAL_SYNC, SIGNAL_BLANK, SIGNAL_BURST, SIGNAL_STRETCH, SIGNAL_LOAD, SIGNALS };
enum { CHIP_ROM0, CHIP_ROM1, CHIPS };

struct harbour {
	struct part parts[CHIPS];
	struct chip chips[CHIPS];
	struct signal signals[SIGNALS];
	struct field field;
	struct region regions[4];
	struct line_type line_types[2];
	struct sweep sweeps[2];
	struct plan plan;
	uint16_t region_of_cell[HARBOUR_CELLS];
	struct laid_line types[2];
	struct frame_line lines[HARBOUR_LINES];
	struct timeline timeline;
	uint32_t load_codes[3];
	const uint32_t *codes[SIGNALS];
	size_t code_counts[SIGNALS];
	struct glitch_edge edges[2];
	struct sweep_result sweep_results[2];
	struct proofs proofs;
};

// Two chips: rom0 has eight data pins, rom1 sixteen.
static inline void harbour_machine(struct harbour *harbour)
{
	static const char *const names[SIGNALS] = {"sync", "blank", "burst", "stretch", "load"};
	for (size_t signal = 0; signal < SIGNALS; signal++)
		harbour->signals[signal] = (struct signal){.name = names[signal], .active_high = true};
	harbour->signals[SIGNAL_LOAD].origin = FROM_FIELD;
	harbour->signals[SIGNAL_LOAD].auto_codes = true;
	harbour->field = (struct field){.name = "top", .high = 15, .low = 13};
	harbour->parts[CHIP_ROM0] = (struct part){.name = "HARBOUR128", .address_pins = 17, .data_pins = 8};
	harbour->parts[CHIP_ROM1] = (struct part){.name = "WIDE64", .address_pins = 16, .data_pins = 16};
	harbour->chips[CHIP_ROM0] = (struct chip){.label = "rom0", .part = &harbour->parts[CHIP_ROM0]};
	harbour->chips[CHIP_ROM1] = (struct chip){.label = "rom1", .part = &harbour->parts[CHIP_ROM1]};
}

static inline void harbour_plan(struct harbour *harbour)
{
	static const char *const regions[] = {"front porch", "sync", "back porch", "picture"};
	for (size_t region = 0; region < 4; region++)
		harbour->regions[region].name = regions[region];
	harbour->line_types[0] = (struct line_type){.name = "border", .regions = harbour->regions, .region_count = 4};
	harbour->line_types[1] = (struct line_type){.name = "picture", .regions = harbour->regions, .region_count = 4};
	harbour->sweeps[0] = (struct sweep){.high = 6, .low = 0, .text = "at.6..0", .within_s = {1, 500}};
	harbour->sweeps[1] = (struct sweep){.high = 14, .low = 11, .text = "scan", .within_s = {1, 500}};
	harbour->plan = (struct plan){.name = "tide-board", .signals = harbour->signals, .signal_count = SIGNALS,
	                              .lines = harbour->line_types, .line_count = 2, .chips = harbour->chips,
	                              .chip_count = CHIPS, .sweeps = harbour->sweeps, .sweep_count = 1};
	harbour->plan.clock = (struct clock){.master_hz = {157500000, 11}, .has_subcarrier = true, .phase = PHASE_LINES,
	                                     .phase_count = 1};
	harbour->plan.machine = (struct machine_plan){.line.state_bits = 16, .fields = &harbour->field, .field_count = 1};
	harbour->plan.timing = (struct timing){.latch_delay_s = {41, 1000000000}, .counter_delay_s[STAGE_LINE] = {50, 1000000000},
	                                       .decoder_delay_s = {38, 1000000000}, .share = {1, 1}};
}

static inline void harbour_timeline(struct harbour *harbour)
{
	for (uint32_t cell = 0; cell < HARBOUR_CELLS; cell++)
		harbour->region_of_cell[cell] = cell < 2 ? 0 : cell < 10 ? 1 : cell < 21 ? 2 : 3;
	for (size_t type = 0; type < 2; type++)
		harbour->types[type] = (struct laid_line){.cells = HARBOUR_CELLS, .ticks = 912,
		                                          .region_of_cell = harbour->region_of_cell};
	for (uint32_t line = 0; line < HARBOUR_LINES; line++)
		harbour->lines[line] = (struct frame_line){.type = line >= 18 && line < 234, .first_cell = line * HARBOUR_CELLS,
		                                           .first_tick = line * 912};
	harbour->timeline = (struct timeline){.plan = &harbour->plan, .types = harbour->types, .lines = harbour->lines,
	                                      .line_count = HARBOUR_LINES, .cell_count = 26462, .tick_count = 238944};
}

// A line of 912 ticks at a quarter of the master clock is 228 cycles, a frame 59736.
static inline struct colour_result harbour_whole_cycles(void)
{
	static const struct phase_run run = {0, 1, 0, 0};
	return (struct colour_result){.uniform = true, .cycles_per_line = {228, 1}, .cycles_per_frame = {59736, 1},
	                              .repeats_known = true, .repeats_lines = 1, .repeats_frames = 1,
	                              .phases = {.parts = 4, .period_lines = 1, .runs = &run, .run_count = 1}, .out_of_step.by = {0, 1}};
}

// 909 ticks a line are 909/4 cycles, and a frame of 262 of them 119079/2; four lines, or two frames, are whole.
static inline struct colour_result harbour_quarter_cycles(void)
{
	static const struct phase_run run = {0, 1, 0, 1};
	return (struct colour_result){.uniform = true, .cycles_per_line = {909, 4}, .cycles_per_frame = {119079, 2},
	                              .repeats_known = true, .repeats_lines = 4, .repeats_frames = 2,
	                              .phases = {.parts = 4, .period_lines = 1, .period_advance = 1, .runs = &run, .run_count = 1},
	                              .out_of_step.by = {0, 1}};
}

// 5 signals in 26462 cells are 132310 pin levels; 216 lines hold 80 cells each: 17280. 26462 states of 16 bits: 423392 flips.
static inline void harbour_figures(struct proofs *proofs)
{
	proofs->closure = (struct closure_result){262, 26462, 238944, 26462, 0x8000};
	proofs->signals = (struct signals_result){132310, 17280};
	proofs->colour = harbour_whole_cycles();
	proofs->power_up = (struct power_up_result){.states = 65536, .frame_states = 26462, .longest_cells = 1,
	                                            .longest_lines = {1, 101}, .longest_ticks = 9};
	proofs->upset = (struct upset_result){.upsets = 423392, .worst_cells = 101, .worst_cell = 300, .worst_bit = 14,
	                                      .mean_cells = {51, 50}, .worst_slip_cells = 50, .worst_slip_lines = {50, 101},
	                                      .mean_slip_cells = {1, 3}, .worst_slip_cell = 107, .worst_slip_bit = 3};
	proofs->glitches = (struct glitch_result){.has_field_signals = true, .edges = 26462, .settle_s = {79, 1000000000},
	                                          .stages[STAGE_LINE].unsettled_s = {0, 1}};
	// 9 ticks are 99/157500000 s = 11/17500000 s = 628.571 ns; 41 + 150 + 15 + 20 = 226 ns; what is left, 1409/3500000000 s.
	proofs->speed = (struct speed_result){.cell_s = {11, 17500000}, .available_s = {11, 17500000},
	                                      .pass_count = 1, .passes[0] = {.has_delay = true, .delay_s = {41, 1000000000},
	                                      .access_s = {3, 20000000}, .chip = CHIP_ROM0},
	                                      .setup_s = {3, 200000000}, .margin_s = {1, 50000000},
	                                      .needed_s = {113, 500000000}, .slack_s = {1409, 3500000000}};
}

// Everything passes.
static inline void harbour_fill(struct harbour *harbour)
{
	*harbour = (struct harbour){.load_codes = {1, 4, 5}};
	harbour_machine(harbour);
	harbour_plan(harbour);
	harbour_timeline(harbour);
	harbour->codes[SIGNAL_LOAD] = harbour->load_codes;
	harbour->code_counts[SIGNAL_LOAD] = 3;
	// 1.2 ms and 0.508 ms of 2 ms.
	harbour->sweep_results[0] = (struct sweep_result){128, 0, 0, {3, 2500}, 0x7F, {1, 500}};
	harbour->sweep_results[1] = (struct sweep_result){16, 0, 0, {127, 250000}, 2, {1, 500}};
	harbour->proofs = (struct proofs){.timeline = &harbour->timeline, .banks = 1, .sweeps = harbour->sweep_results,
	                                  .codes = harbour->codes, .code_counts = harbour->code_counts};
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		harbour->proofs.proof[kind].counterexample.signal = SIZE_MAX;
	harbour->proofs.proof[PROOF_LIMITS].verdict = VERDICT_ABSENT;
	harbour_figures(&harbour->proofs);
	harbour->proofs.glitches.first = harbour->edges;
}

// A proof fails with a counterexample.
static inline void harbour_fails(struct harbour *harbour, enum proof_kind kind, struct counterexample found)
{
	harbour->proofs.proof[kind] = (struct proof){VERDICT_FAIL, found};
}

// A proof could not be judged: words, but no place.
static inline void harbour_not_judged(struct harbour *harbour, enum proof_kind kind)
{
	harbour_fails(harbour, kind, (struct counterexample){.signal = SIZE_MAX, .what = "not judged: the frame does not close"});
}

// Sync is wrong in cell 1720: line 17 has cells 1717 to 1817, so in cell 3 of line 17, of type "border", region "sync".
static inline struct counterexample harbour_wrong_sync(void)
{
	return (struct counterexample){.present = true, .cell = 1720, .state = 0x06B7, .signal = SIGNAL_SYNC, .byte_known = true,
	                               .byte = {CHIP_ROM0, 0x106B7, 0x5F}, .what = "sync is low, expected high"};
}

#endif
