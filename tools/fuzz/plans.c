// Plans: whatever the text is, it is read into a plan or refused with an error; a plan is made into images or refused
// with an error; images that were made prove; and images that were spoilt prove exactly if a plainer machine says
// that they still follow the plan.
#include "naive_stages.h"

#define SPOILT 10u // sets of images for each plan
#define LARGEST_PICTURE 4000000u
#define PROVED_CELLS 300000u
#define PROVED_STATE_BITS 20u

static const char *const words[] = {
	"scanlatch", "name", "note", "clock", "master", "accuracy", "dot", "cell", "stretch", "subcarrier", "phase",
	"every", "line", "lines", "frame", "frames", "free", "signals", "role", "active", "lead", "from", "field",
	"codes", "auto", "data", "high", "low", "plain", "blanking", "cells", "regions", "region", "time", "fill",
	"true", "false", "assert", "hold", "like", "change", "repeat", "machine", "form", "loop", "state", "bits",
	"fields", "start", "outputs", "registered", "direct", "advance", "table", "count", "clear", "sync", "async",
	"chips", "part", "speed", "label", "address", "next", "bank", "parts", "access", "timing", "share", "margin",
	"latch", "delay", "setup", "sweep", "within", "Hz", "MHz", "us", "ns", "ticks", "dots", "ppm", "28C16",
	"28C64", "28C256", "27C1024", "27C080", "XROM", "col", "row", "0x10", "standard", "grade", "kind", "stage",
	"step", "line-frame", "loop", "kind.0", "state.0", "bits", "composite", "horizontal", "vertical", "burst", "gate",
	"composite-525", "composite-625", "dmt-640x480-60", "studio", "monitor", "base", "limits", "exactly", "at least", "at most",
	"line rate", "horizontal sync width", "front porch", "burst length in cycles", "picture top", "lines without burst", "kHz", "pulses",
	"cycles", NULL,
};

static void require_text(char *text)
{
	FUZZ_REQUIRE(text != NULL);
	scanlatch_free(text);
}

static void require_json(char *text)
{
	FUZZ_REQUIRE(text != NULL);
	json_t *document = json_loads(text, 0, NULL);
	FUZZ_REQUIRE(document != NULL);
	json_decref(document);
	scanlatch_free(text);
}

// A refusal has an error, and none that is the system's.
static void require_refusal(const scanlatch_messages *messages)
{
	FUZZ_REQUIRE(scanlatch_messages_errors(messages) > 0);
	FUZZ_REQUIRE(!scanlatch_messages_system(messages));
}

static enum verdict verdict_of(const scanlatch_proofs *proofs, enum proof_kind kind)
{
	return proofs->proofs[0]->proof[kind].verdict;
}

// Proves images, and requires that the report can be written and that a plainer machine agrees. True if closure,
// signals and power-up pass.
static bool prove(const scanlatch_images *images)
{
	uint32_t longest = 0;
	scanlatch_proofs *proofs = fuzz_need(scanlatch_prove(images));
	const bool passed = verdict_of(proofs, PROOF_CLOSURE) == VERDICT_PASS &&
	                    verdict_of(proofs, PROOF_SIGNALS) == VERDICT_PASS &&
	                    verdict_of(proofs, PROOF_POWER_UP) == VERDICT_PASS;
	FUZZ_REQUIRE(passed || scanlatch_proofs_failed(proofs, false));
	require_text(scanlatch_proofs_text(proofs, false));
	require_json(scanlatch_proofs_json(proofs));
	const bool two = images->plan->plan->machine.form == FORM_LINE_FRAME;
	const enum naive_verdict naive = two ? stages_judge(images, &longest) : naive_judge(images, &longest);
	FUZZ_REQUIRE(naive != NAIVE_GOOD || passed);
	FUZZ_REQUIRE(naive != NAIVE_BAD || !passed);
	FUZZ_REQUIRE(naive != NAIVE_GOOD || proofs->proofs[0]->power_up.longest_cells == longest);
	scanlatch_proofs_destroy(proofs);
	return passed;
}

// Images from the files that would have been written: binary for even chips, Intel HEX for odd ones.
static scanlatch_images *read_back(const scanlatch_images *made, scanlatch_messages *messages)
{
	scanlatch_images *read = fuzz_need(scanlatch_images_create(made->plan));
	for (size_t index = 0; index < scanlatch_plan_chips(made->plan); index++) {
		const char *label = scanlatch_plan_chip_label(made->plan, index);
		const struct image *image = &made->images[index];
		const unsigned record = index % 4 == 1 ? 16 : 32;
		size_t length = image->length;
		char *hex = index % 2 == 1 ? fuzz_need(scanlatch_images_hex(made, index, record, &length)) : NULL;
		const void *file = hex != NULL ? (const void *)hex : image->bytes;
		FUZZ_REQUIRE(scanlatch_images_read(read, label, "image", file, length, messages));
		FUZZ_REQUIRE(memcmp(read->images[index].bytes, image->bytes, image->length) == 0);
		scanlatch_free(hex);
	}
	FUZZ_REQUIRE(scanlatch_images_complete(read, messages));
	return read;
}

// Flips a bit that a cell of the frame reads for a signal. False if no chip that was tried carries one.
static bool flip_signal(const struct naive *naive, const struct table *table, uint64_t *random)
{
	const struct image *images = naive->images->images;
	const size_t chip = fuzz_below(random, naive->wiring.chip_count);
	const struct chip *wires = &naive->wiring.chips[chip];
	const unsigned pins = wires->part->data_pins, first = (unsigned)fuzz_below(random, pins);
	const uint32_t state = table->state_of_cell[fuzz_below(random, table->period)];
	for (unsigned tried = 0; tried < pins; tried++) {
		const unsigned pin = (first + tried) % pins;
		if (wires->data[pin].kind != DATA_SIGNAL)
			continue;
		images[chip].bytes[naive_address(naive, wires, state) * (pins / 8) + pin / 8] ^= (uint8_t)(1u << pin % 8);
		return true;
	}
	return false;
}

static void flip_anywhere(const struct naive *naive, uint64_t *random)
{
	const struct image *image = &naive->images->images[fuzz_below(random, naive->wiring.chip_count)];
	image->bytes[fuzz_below(random, image->length)] ^= (uint8_t)(1u << fuzz_below(random, 8));
}

// A row leads to itself or anywhere, or clears where it did not.
static void divert(const struct naive *naive, uint64_t *random)
{
	const uint32_t state = (uint32_t)fuzz_below(random, naive->states);
	struct row row = naive_row(naive, state);
	row.next = fuzz_below(random, 2) == 0 ? state : (uint32_t)fuzz_below(random, naive->states);
	row.clear = !row.clear;
	naive_write_row(naive, state, &row);
}

// Two states change places everywhere: the same machine, but for what is seen of the state.
static void swap_states(const struct naive *naive, const struct table *table, uint64_t *random)
{
	const uint32_t one = table->state_of_cell[fuzz_below(random, table->period)];
	const uint32_t other = (uint32_t)fuzz_below(random, naive->states);
	const struct row row_of_one = naive_row(naive, one), row_of_other = naive_row(naive, other);
	naive_write_row(naive, one, &row_of_other);
	naive_write_row(naive, other, &row_of_one);
	for (uint32_t state = 0; state < naive->states; state++) {
		struct row row = naive_row(naive, state);
		if (row.next != one && row.next != other)
			continue;
		row.next ^= one ^ other;
		naive_write_row(naive, state, &row);
	}
}

static void spoil_and_prove(const scanlatch_images *made, uint64_t *random, scanlatch_messages *messages)
{
	scanlatch_images *read = read_back(made, messages);
	if (made->plan->plan->machine.form == FORM_LINE_FRAME) {
		stages_spoil(read, random);
		prove(read);
		scanlatch_images_destroy(read);
		return;
	}
	const struct table *table = made->members[0].table;
	struct naive naive = {.images = read, .plan = made->plan->plan, .wiring = wiring_of(made->plan->plan)};
	naive.states = (uint32_t)1 << naive.wiring.line.state_bits;
	naive.bank = (uint32_t)fuzz_below(random, (size_t)1 << naive.wiring.bank_bits);
	const size_t kind = fuzz_below(random, 4);
	bool must_fail = false;
	if (kind == 0)
		must_fail = flip_signal(&naive, table, random);
	else if (kind == 1)
		divert(&naive, random);
	else if (kind == 2 && naive.wiring.line.advance == ADVANCE_TABLE && naive.wiring.bank_bits == 0 && naive.states <= 4096)
		swap_states(&naive, table, random);
	else
		flip_anywhere(&naive, random);
	const bool passed = prove(read);
	FUZZ_REQUIRE(!must_fail || !passed);
	scanlatch_images_destroy(read);
}

// Images that were made show at their pins what the plan means, leads undone: so the same is measured, and judged, of both.
static void require_limits(const scanlatch_images *made, const scanlatch_proofs *proofs)
{
	struct proofs *planned = fuzz_need(proofs_of_plan(made->plan->members[0].timeline));
	const struct limits_result *one = &planned->limits, *other = &proofs->proofs[0]->limits;
	FUZZ_REQUIRE(planned->proof[PROOF_LIMITS].verdict == verdict_of(proofs, PROOF_LIMITS));
	FUZZ_REQUIRE((one->measurement == NULL) == (other->measurement == NULL));
	for (unsigned item = 0; one->measurement != NULL && item < ITEM_COUNT; item++) {
		const struct measured *plan = &one->measurement->items[item], *pins = &other->measurement->items[item];
		FUZZ_REQUIRE(plan->known == pins->known);
		FUZZ_REQUIRE(fraction_compare(plan->values.low, pins->values.low) == 0 && fraction_compare(plan->values.high, pins->values.high) == 0);
		FUZZ_REQUIRE(plan->low_at.from_cell == pins->low_at.from_cell && plan->high_at.to_cell == pins->high_at.to_cell);
		FUZZ_REQUIRE(fraction_compare(plan->values.low, plan->values.high) <= 0);
	}
	for (unsigned grade = 0; grade < GRADE_COUNT; grade++)
		FUZZ_REQUIRE(one->kept[grade] == other->kept[grade] && one->missed[grade] == other->missed[grade]);
	proofs_destroy(planned);
}

static void judge_images(const scanlatch_images *made, uint64_t random, bool colour_kept, scanlatch_messages *messages)
{
	const struct timeline *timeline = made->plan->members[0].timeline;
	const struct wiring wiring = wiring_of(timeline->plan);
	if (timeline->cell_count > PROVED_CELLS || feedback_of(&wiring).bits > PROVED_STATE_BITS || made->plan->set != NULL)
		return;
	scanlatch_proofs *proofs = fuzz_need(scanlatch_prove(made));
	const bool sweep_kept = verdict_of(proofs, PROOF_SWEEP) != VERDICT_FAIL;
	FUZZ_REQUIRE((verdict_of(proofs, PROOF_COLOUR) != VERDICT_FAIL) == colour_kept);
	FUZZ_REQUIRE(scanlatch_proofs_failed(proofs, false) == !(colour_kept && sweep_kept));
	require_limits(made, proofs);
	require_json(scanlatch_manifest(proofs, SCANLATCH_FILE_BIN | SCANLATCH_FILE_HEX));
	scanlatch_proofs_destroy(proofs);
	require_text(scanlatch_images_listing(made));
	scanlatch_images *read = read_back(made, messages);
	FUZZ_REQUIRE(prove(read));
	scanlatch_images_destroy(read);
	for (unsigned spoilt = 0; spoilt < SPOILT; spoilt++)
		spoil_and_prove(made, &random, messages);
}

// Elements of a picture are nested: each end tag ends one that is open, and at its end none is.
static void require_picture(char *picture)
{
	long depth = 0;
	FUZZ_REQUIRE(picture != NULL && strlen(picture) < LARGEST_PICTURE);
	for (const char *at = strchr(picture, '<'); at != NULL; at = strchr(at + 1, '<')) {
		const char *end = strchr(at, '>');
		FUZZ_REQUIRE(end != NULL);
		if (at[1] == '/')
			depth--;
		else if (at[1] != '?' && end[-1] != '/')
			depth++;
		FUZZ_REQUIRE(depth >= 0);
	}
	FUZZ_REQUIRE(depth == 0 && strcmp(picture + strlen(picture) - 7, "</svg>\n") == 0);
	scanlatch_free(picture);
}

// A picture, or an error more than before: not all plans have what is to be drawn.
static void require_picture_or_error(char *picture, const scanlatch_messages *messages, size_t errors)
{
	if (picture != NULL)
		require_picture(picture);
	else
		FUZZ_REQUIRE(scanlatch_messages_errors(messages) == errors + 1 && !scanlatch_messages_system(messages));
}

// What is drawn of a plan that compiles.
static void judge_pictures(const scanlatch_plan *plan, const scanlatch_images *made, uint64_t random)
{
	scanlatch_messages *messages = fuzz_need(scanlatch_messages_create());
	char line[24];
	snprintf(line, sizeof line, "%u", (unsigned)(random % plan->members[0].timeline->line_count));
	require_picture(scanlatch_draw_line(plan, 0, NULL, messages));
	require_picture(scanlatch_draw_frame(plan, 0, false, messages));
	require_picture(scanlatch_draw_table(made, 0, messages));
	require_text(scanlatch_draw_line_text(plan, 0, NULL, (unsigned)(random % 300), random % 2 == 0, messages));
	FUZZ_REQUIRE(scanlatch_messages_count(messages) == 0);
	char *interleaved = scanlatch_draw_frame(plan, 0, true, messages);
	require_picture_or_error(interleaved, messages, 0);
	size_t errors = scanlatch_messages_errors(messages);
	char *phase = scanlatch_draw_phase(plan, 0, messages);
	require_picture_or_error(phase, messages, errors);
	errors = scanlatch_messages_errors(messages);
	char *numbered = scanlatch_draw_line(plan, 0, line, messages); // it may be the name of a type that no line has
	require_picture_or_error(numbered, messages, errors);
	scanlatch_messages_destroy(messages);
}

// True if it compiles.
static bool judge_plan(const scanlatch_plan *plan, uint64_t random, scanlatch_messages *messages)
{
	bool kept = false, advice_kept = false;
	require_text(scanlatch_plan_text(plan, &kept, &advice_kept));
	require_json(scanlatch_plan_json(plan, NULL, NULL));
	scanlatch_images *made = scanlatch_images_make(plan, messages);
	if (made == NULL) {
		require_refusal(messages);
		return false;
	}
	FUZZ_REQUIRE(scanlatch_messages_errors(messages) == 0);
	judge_images(made, random, kept, messages);
	judge_pictures(plan, made, random);
	scanlatch_images_destroy(made);
	return true;
}

static bool judge(void *context, const uint8_t *bytes, size_t length)
{
	(void)context;
	scanlatch_messages *messages = fuzz_need(scanlatch_messages_create());
	scanlatch_plan *plan = scanlatch_plan_read("fuzz.yaml", (const char *)bytes, length, messages);
	bool compiles = false;
	if (plan == NULL)
		require_refusal(messages);
	else
		compiles = judge_plan(plan, fuzz_seed_of(bytes, length), messages);
	require_text(scanlatch_messages_text(messages, true));
	scanlatch_plan_destroy(plan);
	scanlatch_messages_destroy(messages);
	return compiles;
}

static const struct fuzz fuzz = {.judge = judge, .words = words};

FUZZ_MAIN(fuzz)
