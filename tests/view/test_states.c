// States of line-frame machines in words and JSON, and what the proofs say of two stages, filled in by hand.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdlib.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "view/proofs.h"
#include "view/states.h"

#define NS(value) ((struct fraction){value, 1000000000})

// Seven bits of H, ten of V and two of kind; two chips, and three signals, of which the last is the frame stage's.
struct pier {
	struct part part;
	struct chip chips[2];
	struct signal signals[3];
	struct plan plan;
	struct timeline timeline;
	struct proofs proofs;
};

static void fill(struct pier *pier, enum outputs line, enum outputs frame)
{
	*pier = (struct pier){.part = {.name = "PIERROM", .address_pins = 11, .data_pins = 8}};
	pier->chips[0] = (struct chip){.label = "rom0", .stage = STAGE_LINE, .part = &pier->part};
	pier->chips[1] = (struct chip){.label = "rom1", .stage = STAGE_FRAME, .part = &pier->part};
	pier->signals[0] = (struct signal){.name = "sync"};
	pier->signals[1] = (struct signal){.name = "blank"};
	pier->signals[2] = (struct signal){.name = "night", .stage = STAGE_FRAME};
	pier->plan = (struct plan){.chips = pier->chips, .chip_count = 2, .signals = pier->signals, .signal_count = 3};
	pier->plan.machine = (struct machine_plan){.form = FORM_LINE_FRAME, .kind_bits = 2, .line.state_bits = 7, .line.outputs = line,
	                                           .frame.state_bits = 10, .frame.outputs = frame};
	pier->plan.timing.share = (struct fraction){1, 1};
	pier->timeline.plan = &pier->plan;
	pier->proofs = (struct proofs){.timeline = &pier->timeline, .banks = 1};
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		pier->proofs.proof[kind].counterexample.signal = SIZE_MAX;
}

static void assert_text(struct text *found, const char *expected)
{
	assert_false(found->failed);
	assert_string_equal(text_string(found), expected);
	text_release(found);
}

static void assert_state(const struct pier *pier, uint32_t state, const char *expected)
{
	struct text text = {0};
	put_state(&text, &pier->proofs, state);
	assert_text(&text, expected);
}

static void assert_row(const struct pier *pier, enum stage stage, uint32_t address, const char *expected)
{
	struct text text = {0};
	put_row_state(&text, &pier->proofs, stage, address);
	assert_text(&text, expected);
}

static void assert_bit(const struct pier *pier, unsigned bit, const char *expected)
{
	struct text text = {0};
	put_state_bit(&text, &pier->proofs, bit);
	assert_text(&text, expected);
}

// Takes the reference.
static void assert_json(json_t *found, const char *expected)
{
	assert_non_null(found);
	char *words = json_dumps(found, JSON_COMPACT | JSON_ENCODE_ANY);
	assert_string_equal(words, expected);
	free(words);
	json_decref(found);
}

static json_t *row_json(const struct pier *pier, enum stage stage, uint32_t address)
{
	json_t *object = json_object();
	json_put_row_state(&object, &pier->proofs, stage, address);
	return object;
}

static json_t *bit_json(const struct pier *pier, unsigned bit)
{
	json_t *object = json_object();
	json_put_state_bit(&object, &pier->proofs, bit);
	return object;
}

// H 0x50, step 1, kind 2, V 0x20C: 0x50 + 1 · 2^7 + 2 · 2^8 + 0x20C · 2^10.
static void everything_latched(void **test)
{
	(void)test;
	struct pier pier;
	fill(&pier, OUTPUTS_REGISTERED, OUTPUTS_REGISTERED);
	const uint32_t state = 0x50 | 1 << 7 | 2 << 8 | 0x20C << 10;
	assert_state(&pier, state, "H 0x50, step 1, kind 2, V 0x20C");
	assert_state(&pier, 0, "H 0x00, step 0, kind 0, V 0x000");
	assert_bit(&pier, 0, "bit 0 of H");
	assert_bit(&pier, 6, "bit 6 of H");
	assert_bit(&pier, 7, "the step latch");
	assert_bit(&pier, 8, "bit 0 of kind");
	assert_bit(&pier, 9, "bit 1 of kind");
	assert_bit(&pier, 10, "bit 0 of V");
	assert_bit(&pier, 19, "bit 9 of V");
	assert_json(state_json(&pier.proofs, state), "{\"H\":80,\"step\":1,\"kind\":2,\"V\":524}");
	assert_json(bit_json(&pier, 7), "{\"part\":\"step\",\"bit\":0}");
	assert_json(bit_json(&pier, 12), "{\"part\":\"V\",\"bit\":2}");
}

static void nothing_latched(void **test)
{
	(void)test;
	struct pier pier;
	fill(&pier, OUTPUTS_DIRECT, OUTPUTS_DIRECT);
	assert_state(&pier, 0x50 | 0x20C << 7, "H 0x50, V 0x20C");
	assert_bit(&pier, 6, "bit 6 of H");
	assert_bit(&pier, 7, "bit 0 of V");
	assert_bit(&pier, 16, "bit 9 of V");
	assert_json(state_json(&pier.proofs, 0x50 | 0x20C << 7), "{\"H\":80,\"V\":524}");
	assert_json(bit_json(&pier, 7), "{\"part\":\"V\",\"bit\":0}");
}

static void one_of_them_latched(void **test)
{
	(void)test;
	struct pier pier;
	fill(&pier, OUTPUTS_REGISTERED, OUTPUTS_DIRECT);
	assert_state(&pier, 0x7F | 1 << 7 | 3 << 8, "H 0x7F, step 1, V 0x003");
	assert_bit(&pier, 7, "the step latch");
	assert_bit(&pier, 8, "bit 0 of V");
	assert_json(state_json(&pier.proofs, 1 << 7), "{\"H\":0,\"step\":1,\"V\":0}");
	fill(&pier, OUTPUTS_DIRECT, OUTPUTS_REGISTERED);
	assert_state(&pier, 0x7F | 3 << 7 | 1 << 9, "H 0x7F, kind 3, V 0x001");
	assert_bit(&pier, 7, "bit 0 of kind");
	assert_bit(&pier, 9, "bit 0 of V");
	assert_json(state_json(&pier.proofs, 3 << 7), "{\"H\":0,\"kind\":3,\"V\":0}");
}

static void rows(void **test)
{
	(void)test;
	struct pier pier;
	fill(&pier, OUTPUTS_REGISTERED, OUTPUTS_REGISTERED);
	assert_row(&pier, STAGE_LINE, 0x50 | 1 << 7, "H 0x50 of kind 1");
	assert_row(&pier, STAGE_FRAME, 0x20C, "V 0x20C");
	assert_json(row_json(&pier, STAGE_LINE, 0x50 | 1 << 7), "{\"stage\":\"line\",\"state\":80,\"kind\":1}");
	assert_json(row_json(&pier, STAGE_FRAME, 0x20C), "{\"stage\":\"frame\",\"state\":524}");
	pier.plan.machine.kind_bits = 0; // only one line type
	assert_row(&pier, STAGE_LINE, 0x50, "H 0x50");
	assert_state(&pier, 0x50 | 1 << 7 | 5 << 8, "H 0x50, step 1, V 0x005");
}

static void loop_machine(void **test)
{
	(void)test;
	struct pier pier;
	fill(&pier, OUTPUTS_REGISTERED, OUTPUTS_REGISTERED);
	pier.plan.machine.form = FORM_LOOP;
	pier.plan.machine.kind_bits = 0;
	assert_state(&pier, 0x50, "state 0x50");
	assert_row(&pier, STAGE_LINE, 0x50, "state 0x50");
	assert_bit(&pier, 6, "bit 6");
	assert_json(state_json(&pier.proofs, 0x50), "80");
	assert_json(row_json(&pier, STAGE_LINE, 0x50), "{\"state\":80}");
	assert_json(bit_json(&pier, 6), "{\"bit\":6}");
}

static void assert_proof(const struct pier *pier, enum proof_kind kind, const char *expected)
{
	struct text text = {0};
	view_proof(&text, &pier->proofs, kind, false);
	assert_text(&text, expected);
}

static void glitches_of_two_stages(void **test)
{
	(void)test;
	struct pier pier;
	fill(&pier, OUTPUTS_DIRECT, OUTPUTS_DIRECT);
	pier.proofs.glitches.stages[STAGE_LINE] = (struct stage_glitches){.direct = true, .unsettled_s = NS(241), .unsettled_part = "rom0"};
	pier.proofs.glitches.stages[STAGE_FRAME] = (struct stage_glitches){
		.direct = true, .unsettled_s = NS(141), .unsettled_part = "rom1", .async_clear = true, .clear_unsettled_s = NS(145), .clear_part = "rom1",
		.passes = true, .passing_address = 0x20D, .passing_pins = 5};
	assert_proof(&pier, PROOF_GLITCHES,
	             "pass  glitches  no signal is decoded from the state; the data outputs of the line stage are taken\n"
	             "                straight from the EEPROMs and are unsettled for 241 ns after each edge (rom0); the\n"
	             "                data outputs of the frame stage are taken straight from the EEPROMs and are\n"
	             "                unsettled for 141 ns after each step (rom1); clear of the frame stage is taken\n"
	             "                straight from rom1 into an asynchronous pin and is unsettled for 145 ns after each\n"
	             "                step, when a spike on it clears the counter too early: gate it, or use clear: sync;\n"
	             "                it passes through V 0x20D, which spikes sync, night\n");
	pier.proofs.glitches.stages[STAGE_FRAME] = (struct stage_glitches){0};
	pier.proofs.glitches.stages[STAGE_LINE] = (struct stage_glitches){.async_clear = true, .clear_unsettled_s = NS(190), .clear_part = "rom0",
	                                                                  .passes = true, .passing_address = 0x50 | 1 << 7};
	assert_proof(&pier, PROOF_GLITCHES,
	             "pass  glitches  no signal is decoded from the state; clear of the line stage is taken straight from\n"
	             "                rom0 into an asynchronous pin and is unsettled for 190 ns after each edge, when a\n"
	             "                spike on it clears the counter too early: gate it, or use clear: sync; it passes\n"
	             "                through H 0x50 of kind 1\n");
}

static json_t *part_of_json(const struct pier *pier, const char *proof, const char *key)
{
	json_t *document = view_proofs_json(&pier->proofs);
	assert_non_null(document);
	json_t *found = json_object_get(json_object_get(document, proof), key);
	assert_non_null(found);
	json_incref(found);
	json_decref(document);
	return found;
}

static void glitches_as_json(void **test)
{
	(void)test;
	struct pier pier;
	fill(&pier, OUTPUTS_DIRECT, OUTPUTS_DIRECT);
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		if (kind != PROOF_GLITCHES)
			pier.proofs.proof[kind].verdict = VERDICT_ABSENT;
	pier.proofs.glitches.stages[STAGE_LINE] = (struct stage_glitches){.direct = true, .unsettled_s = NS(241), .unsettled_part = "rom0"};
	pier.proofs.glitches.stages[STAGE_FRAME] = (struct stage_glitches){.async_clear = true, .clear_unsettled_s = NS(145), .clear_part = "rom1",
	                                                                   .passes = true, .passing_address = 3, .passing_pins = 4};
	assert_json(part_of_json(&pier, "glitches", "direct"), "true");
	json_t *frame = part_of_json(&pier, "glitches", "frame");
	assert_string_equal(json_string_value(json_object_get(frame, "clear_chip")), "rom1");
	assert_true(json_is_false(json_object_get(frame, "direct")));
	json_t *passing = json_object_get(frame, "passing");
	assert_non_null(passing);
	assert_int_equal(json_integer_value(json_object_get(passing, "state")), 3);
	assert_int_equal(json_array_size(json_object_get(passing, "spikes")), 1);
	assert_string_equal(json_string_value(json_array_get(json_object_get(passing, "spikes"), 0)), "night");
	json_decref(frame);
}

// A way over both stages, one of the frame stage alone, and a share of the cell.
static void speed_of_two_stages(void **test)
{
	(void)test;
	struct pier pier;
	fill(&pier, OUTPUTS_REGISTERED, OUTPUTS_DIRECT);
	struct speed_result *speed = &pier.proofs.speed;
	*speed = (struct speed_result){.cell_s = NS(500), .available_s = NS(500), .pass_count = 2, .setup_s = NS(15), .margin_s = NS(20),
	                               .needed_s = NS(315), .slack_s = NS(185)};
	speed->passes[0] = (struct speed_pass){.has_delay = true, .delay_s = NS(30), .access_s = NS(100), .chip = 1};
	speed->passes[1] = (struct speed_pass){.access_s = NS(150), .chip = 0};
	assert_proof(&pier, PROOF_SPEED,
	             "pass  speed     needed 315 ns of the shortest cell's 500 ns: latch 30 + access 100 of rom1 + access\n"
	             "                150 of rom0 + setup 15 + margin 20; slack 185 ns\n");
	*speed = (struct speed_result){.of_line = true, .cell_s = NS(1000), .available_s = NS(500), .pass_count = 2, .setup_s = NS(28),
	                               .margin_s = NS(20), .needed_s = NS(938), .slack_s = {-438, 1000000000}};
	speed->passes[0] = (struct speed_pass){.has_delay = true, .counter = true, .delay_s = NS(45), .access_s = NS(400), .chip = 1};
	speed->passes[1] = speed->passes[0];
	pier.plan.timing.share = (struct fraction){1, 2};
	pier.proofs.proof[PROOF_SPEED].verdict = VERDICT_FAIL;
	assert_proof(&pier, PROOF_SPEED,
	             "miss  speed     needed 938 ns of 500 ns (1/2 of the shortest line): counter 45 + access 400 of rom1\n"
	             "                + counter 45 + access 400 of rom1 + setup 28 + margin 20; short by 438 ns\n");
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(everything_latched),
		cmocka_unit_test(nothing_latched),
		cmocka_unit_test(one_of_them_latched),
		cmocka_unit_test(rows),
		cmocka_unit_test(loop_machine),
		cmocka_unit_test(glitches_of_two_stages),
		cmocka_unit_test(glitches_as_json),
		cmocka_unit_test(speed_of_two_stages),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
