// The results of the proofs as JSON, from results that were filled in by hand.
#include <string.h>
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdlib.h>

#include "harbour_proofs.h"
#include "view/proofs.h"

static json_t *json_of(const struct harbour *harbour)
{
	json_t *object = view_proofs_json(&harbour->proofs);
	assert_non_null(object);
	return object;
}

// Asserts one proof's object, written with single quotes; precision as reports have it.
static void assert_proof(const struct harbour *harbour, enum proof_kind kind, const char *expected)
{
	json_t *object = json_of(harbour);
	char *dump = json_dumps(json_object_get(object, proof_name(kind)), JSON_COMPACT | JSON_REAL_PRECISION(12));
	assert_non_null(dump);
	for (char *byte = dump; *byte != '\0'; byte++)
		if (*byte == '"')
			*byte = '\'';
	assert_string_equal(dump, expected);
	free(dump);
	json_decref(object);
}

static void the_keys_are_the_proofs_in_order(void **state)
{
	(void)state;
	static const char *const names[] = {"closure", "signals", "colour", "power-up", "upset", "limits", "glitches", "speed",
	                                    "sweep"};
	struct harbour harbour;
	harbour_fill(&harbour);
	json_t *object = json_of(&harbour), *value;
	const char *key;
	size_t index = 0;
	json_object_foreach(object, key, value) {
		assert_true(index < 9);
		assert_string_equal(key, names[index++]);
		assert_string_equal(json_string_value(json_object_get(value, "verdict")), strcmp(key, "limits") == 0 ? "absent" : "pass");
		assert_null(json_object_get(value, "counterexample"));
	}
	assert_int_equal(index, 9);
	json_decref(object);
}

// Figures and their decimals are worked out in harbour_proofs.h and test_proofs_text.c.
static void the_figures_of_a_good_plan(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	assert_proof(&harbour, PROOF_CLOSURE,
		"{'verdict':'pass','must':true,'lines':262,'cells':26462,'ticks':'238944','frame_s':'27379/1640625',"
		"'frame_ms':16.688152,'period_cells':26462,'start_state':32768,'banks':1}");
	assert_proof(&harbour, PROOF_SIGNALS,
		"{'verdict':'pass','must':true,'comparisons':132310,'held_comparisons':17280,'codes':{'load':[1,4,5]}}");
	assert_proof(&harbour, PROOF_COLOUR,
		"{'verdict':'pass','must':true,'uniform':true,'cycles_per_line':'228','cycles_per_line_rounded':228.0,"
		"'cycles_per_frame':'59736','cycles_per_frame_rounded':59736.0,'repeats_lines':1,'repeats_frames':1,"
		"'phases':{'period':1,'advance':'0','runs':[{'line':0,'lines':1,'phase':'0','advance':'0'}]},'asked':'every line'}");
	assert_proof(&harbour, PROOF_POWER_UP,
		"{'verdict':'pass','must':true,'states':65536,'frame_states':26462,'cleared_states':0,'longest_cells':1,"
		"'longest_lines':'1/101','longest_lines_rounded':0.009901,'longest_ticks':'9',"
		"'longest_s':'11/17500000','longest_us':0.628571,'longest_state':0,'longest_bank':0,'lost_states':0}");
	assert_proof(&harbour, PROOF_UPSET,
		"{'verdict':'pass','must':false,'upsets':423392,'worst_cells':101,'worst':{'line':2,'line_type':'border',"
		"'cell':98,'region':'picture','frame_cell':300,'bit':14},'mean_cells':'51/50','mean_cells_rounded':1.02,"
		"'worst_slip_cells':50,'worst_slip_lines':'50/101','worst_slip_lines_rounded':0.49505,'worst_slip':{'line':1,"
		"'line_type':'border','cell':6,'region':'sync','frame_cell':107,'bit':3},'mean_slip_cells':'1/3',"
		"'mean_slip_cells_rounded':0.333333}");
	assert_proof(&harbour, PROOF_GLITCHES,
		"{'verdict':'pass','must':false,'decoded':true,'edges':26462,'multi_bit_edges':0,'disturbed':[],"
		"'settle_s':'79/1000000000','settle_ns':79.0,'direct':false,'async_clear':false}");
	assert_proof(&harbour, PROOF_SPEED,
		"{'verdict':'pass','must':false,'of':'cell','cell_s':'11/17500000','cell_ns':628.571429,'available_s':'11/17500000',"
		"'available_ns':628.571429,'delay_s':'41/1000000000','delay_ns':41.0,'access_s':'3/20000000','access_ns':150.0,"
		"'passes':[{'chip':'rom0','counter':false,'delay_s':'41/1000000000','delay_ns':41.0,'access_s':'3/20000000','access_ns':150.0}],"
		"'setup_s':'3/200000000','setup_ns':15.0,'margin_s':'1/50000000','margin_ns':20.0,'needed_s':'113/500000000',"
		"'needed_ns':226.0,'slack_s':'1409/3500000000','slack_ns':402.571429}");
	assert_proof(&harbour, PROOF_SWEEP,
		"{'verdict':'pass','must':true,'sweeps':[{'bits':'at.6..0','kept':true,'values':128,'missing':0,"
		"'worst_gap_s':'3/2500','worst_gap_ms':1.2,'worst_value':127,'within_s':'1/500','within_ms':2.0}]}");
}

static void a_pin_fault_names_the_byte(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour_fails(&harbour, PROOF_SIGNALS, harbour_wrong_sync());
	assert_proof(&harbour, PROOF_SIGNALS,
		"{'verdict':'fail','must':true,'comparisons':132310,'held_comparisons':17280,'codes':{'load':[1,4,5]},"
		"'counterexample':{'what':'sync is low, expected high','bank':0,'line':17,'line_type':'border','cell':3,"
		"'region':'sync','frame_cell':1720,'state':1719,'signal':'sync','chip':'rom0','address':67255,'byte':95}}");
}

static void a_fault_of_no_byte_and_no_pin_has_no_such_keys(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.proofs.colour = harbour_quarter_cycles();
	harbour.proofs.colour.out_of_step = (struct out_of_step){true, 2, 1, {1, 4}};
	harbour_fails(&harbour, PROOF_COLOUR, (struct counterexample){.present = true, .bank = 3, .cell = 101, .state = 101,
		.signal = SIZE_MAX, .what = "1 line takes 909/4 cycles", .hint = "longer lines"});
	assert_proof(&harbour, PROOF_COLOUR,
		"{'verdict':'fail','must':true,'uniform':true,'cycles_per_line':'909/4','cycles_per_line_rounded':227.25,"
		"'cycles_per_frame':'119079/2','cycles_per_frame_rounded':59539.5,'repeats_lines':4,'repeats_frames':2,"
		"'phases':{'period':1,'advance':'1/4','runs':[{'line':0,'lines':1,'phase':'0','advance':'1/4'}]},"
		"'out_of_step':{'line':2,'frame':1,'by':'1/4'},'asked':'every line','counterexample':{'what':'1 line takes 909/4 cycles','bank':3,'hint':'longer lines','line':1,'line_type':'border',"
		"'cell':0,'region':'front porch','frame_cell':101,'state':101}}");
	harbour.proofs.proof[PROOF_COLOUR].counterexample.state = NO_STATE;
	json_t *proofs = view_proofs_json(&harbour.proofs);
	assert_non_null(json_object_get(json_object_get(json_object_get(proofs, "colour"), "counterexample"), "frame_cell"));
	assert_null(json_object_get(json_object_get(json_object_get(proofs, "colour"), "counterexample"), "state"));
	json_decref(proofs);
}

static void figures_that_do_not_fit_are_left_out(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	struct colour_result *colour = &harbour.proofs.colour;
	colour->cycles_per_line = colour->cycles_per_frame = (struct fraction){0, 1};
	colour->repeats_known = false;
	harbour.plan.clock.phase = PHASE_FREE;
	assert_proof(&harbour, PROOF_COLOUR, "{'verdict':'pass','must':true,'uniform':true,'repeats_frames':1,"
		"'phases':{'period':1,'advance':'0','runs':[{'line':0,'lines':1,'phase':'0','advance':'0'}]},'asked':'free'}");
	// 238944 ticks of 2^63 - 1 seconds each.
	harbour.plan.clock.master_hz = (struct fraction){1, INT64_MAX};
	assert_proof(&harbour, PROOF_CLOSURE,
		"{'verdict':'pass','must':true,'lines':262,'cells':26462,'ticks':'238944','period_cells':26462,"
		"'start_state':32768,'banks':1}");
}

// 256 runs are listed, and how many more there are is said.
static void runs_of_lines_are_bounded(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	static struct phase_run runs[COLOUR_RUNS + 2];
	for (uint32_t run = 0; run < COLOUR_RUNS + 2; run++)
		runs[run] = (struct phase_run){run, 1, run % 2, 1 + run % 2 * 2};
	struct line_phases *phases = &harbour.proofs.colour.phases;
	*phases = (struct line_phases){4, COLOUR_RUNS, 0, runs, COLOUR_RUNS};
	json_t *proofs = view_proofs_json(&harbour.proofs);
	json_t *shown = json_object_get(json_object_get(proofs, "colour"), "phases");
	assert_int_equal(json_array_size(json_object_get(shown, "runs")), 256);
	assert_null(json_object_get(shown, "more_runs"));
	json_decref(proofs);
	phases->run_count = phases->period_lines = COLOUR_RUNS + 2;
	proofs = view_proofs_json(&harbour.proofs);
	shown = json_object_get(json_object_get(proofs, "colour"), "phases");
	assert_int_equal(json_array_size(json_object_get(shown, "runs")), 256);
	assert_int_equal(json_integer_value(json_object_get(shown, "more_runs")), 2);
	const json_t *last = json_array_get(json_object_get(shown, "runs"), 255);
	assert_int_equal(json_integer_value(json_object_get(last, "line")), 255);
	assert_string_equal(json_string_value(json_object_get(last, "phase")), "1/4");
	assert_string_equal(json_string_value(json_object_get(last, "advance")), "3/4");
	json_decref(proofs);
}

static void a_second_loop_has_no_place_in_the_frame(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.proofs.power_up.lost_states = 17;
	harbour.proofs.power_up.second_loop_state = 18;
	harbour.proofs.power_up.second_loop_cells = 3;
	harbour_fails(&harbour, PROOF_POWER_UP, (struct counterexample){.present = true, .state = 18, .signal = SIZE_MAX,
		.byte_known = true, .byte = {CHIP_ROM0, 18, 52}, .what = "17 states are lost"});
	assert_proof(&harbour, PROOF_POWER_UP,
		"{'verdict':'fail','must':true,'states':65536,'frame_states':26462,'cleared_states':0,'longest_cells':1,"
		"'longest_lines':'1/101','longest_lines_rounded':0.009901,'longest_ticks':'9',"
		"'longest_s':'11/17500000','longest_us':0.628571,'longest_state':0,'longest_bank':0,'lost_states':17,"
		"'second_loop':{'state':18,'cells':3},'counterexample':{'what':'17 states are lost','bank':0,'state':18,"
		"'chip':'rom0','address':18,'byte':52}}");
}

static void disturbed_signals_are_listed(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.proofs.glitches.disturbed = 1;
	harbour.proofs.glitches.multi_bit_edges = 432;
	harbour.edges[0] = (struct glitch_edge){SIGNAL_LOAD, 1839, 0xA123, 0x4456, 5, 2, 7, 216};
	harbour.proofs.proof[PROOF_GLITCHES].verdict = VERDICT_FAIL;
	assert_proof(&harbour, PROOF_GLITCHES,
		"{'verdict':'fail','must':false,'decoded':true,'edges':26462,'multi_bit_edges':432,'disturbed':[{'signal':'load',"
		"'edges':216,'line':18,'line_type':'picture','cell':21,'region':'picture','frame_cell':1839,'from_state':41251,"
		"'to_state':17494,'from_code':5,'between_code':7,'to_code':2}],'settle_s':'79/1000000000','settle_ns':79.0,"
		"'direct':false,'async_clear':false}");
}

static void direct_outputs_are_unsettled(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	struct glitch_result *glitches = &harbour.proofs.glitches;
	*glitches = (struct glitch_result){.stages[STAGE_LINE] = {.direct = true, .unsettled_s = {191, 1000000000}, .unsettled_part = "rom1"}};
	assert_proof(&harbour, PROOF_GLITCHES,
		"{'verdict':'pass','must':false,'decoded':false,'edges':0,'multi_bit_edges':0,'disturbed':[],'direct':true,"
		"'unsettled_s':'191/1000000000','unsettled_ns':191.0,'unsettled_chip':'rom1','async_clear':false}");
	*glitches = (struct glitch_result){.stages[STAGE_LINE] = {.async_clear = true, .clear_unsettled_s = {201, 1000000000}, .clear_part = "rom0"}};
	assert_proof(&harbour, PROOF_GLITCHES,
		"{'verdict':'pass','must':false,'decoded':false,'edges':0,'multi_bit_edges':0,'disturbed':[],'direct':false,"
		"'async_clear':true,'clear_unsettled_s':'201/1000000000','clear_unsettled_ns':201.0,'clear_chip':'rom0'}");
}

static void each_sweep_has_its_own_figures(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.plan.sweep_count = 2;
	harbour.sweep_results[1].missing = 2;
	harbour.sweep_results[1].first_missing = 14;
	harbour_fails(&harbour, PROOF_SWEEP, (struct counterexample){.signal = SIZE_MAX, .what = "2 values never come up"});
	assert_proof(&harbour, PROOF_SWEEP,
		"{'verdict':'fail','must':true,'sweeps':[{'bits':'at.6..0','kept':true,'values':128,'missing':0,"
		"'worst_gap_s':'3/2500','worst_gap_ms':1.2,'worst_value':127,'within_s':'1/500','within_ms':2.0},{'bits':'scan',"
		"'kept':false,'values':16,'missing':2,'first_missing':14,'worst_gap_s':'127/250000','worst_gap_ms':0.508,"
		"'worst_value':2,'within_s':'1/500','within_ms':2.0}],'counterexample':{'what':'2 values never come up','bank':0}}");
}

static void what_was_not_asked_or_not_judged_has_no_figures(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour.proofs.proof[PROOF_COLOUR].verdict = VERDICT_ABSENT;
	harbour_not_judged(&harbour, PROOF_UPSET);
	assert_proof(&harbour, PROOF_COLOUR, "{'verdict':'absent','must':true}");
	assert_proof(&harbour, PROOF_UPSET,
		"{'verdict':'fail','must':false,'reason':'not judged: the frame does not close'}");
}

// Memory for JSON that runs out after a number of allocations, and counts what was not given back.
static long allocations_left;
static long blocks_in_use;

static void *scarce_alloc(size_t size)
{
	if (allocations_left-- <= 0)
		return NULL;
	void *block = malloc(size);
	blocks_in_use += block != NULL;
	return block;
}

static void scarce_free(void *block)
{
	blocks_in_use -= block != NULL;
	free(block);
}

static void running_out_of_memory_gives_null_and_leaks_nothing(void **state)
{
	(void)state;
	struct harbour harbour;
	harbour_fill(&harbour);
	harbour_fails(&harbour, PROOF_SIGNALS, harbour_wrong_sync());
	harbour.proofs.glitches.disturbed = 1;
	harbour.edges[0] = (struct glitch_edge){SIGNAL_LOAD, 1839, 0xA123, 0x4456, 5, 2, 7, 216};
	json_malloc_t usual_alloc;
	json_free_t usual_free;
	json_get_alloc_funcs(&usual_alloc, &usual_free);
	json_set_alloc_funcs(scarce_alloc, scarce_free);
	json_t *object = NULL;
	long refused = 0;
	for (long enough = 0; object == NULL && enough < 100000; enough++) {
		allocations_left = enough;
		object = view_proofs_json(&harbour.proofs);
		refused += object == NULL;
		if (object == NULL && blocks_in_use != 0)
			break;
	}
	const bool made = object != NULL;
	json_decref(object);
	json_set_alloc_funcs(usual_alloc, usual_free);
	assert_true(made);
	assert_int_equal(blocks_in_use, 0);
	assert_true(refused > 100);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(the_keys_are_the_proofs_in_order),
		cmocka_unit_test(the_figures_of_a_good_plan),
		cmocka_unit_test(a_pin_fault_names_the_byte),
		cmocka_unit_test(a_fault_of_no_byte_and_no_pin_has_no_such_keys),
		cmocka_unit_test(figures_that_do_not_fit_are_left_out),
		cmocka_unit_test(runs_of_lines_are_bounded),
		cmocka_unit_test(a_second_loop_has_no_place_in_the_frame),
		cmocka_unit_test(disturbed_signals_are_listed),
		cmocka_unit_test(direct_outputs_are_unsettled),
		cmocka_unit_test(each_sweep_has_its_own_figures),
		cmocka_unit_test(what_was_not_asked_or_not_judged_has_no_figures),
		cmocka_unit_test(running_out_of_memory_gives_null_and_leaks_nothing),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
