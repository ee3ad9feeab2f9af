// What is lifted is read again, laid out and held against the images; and as far as that is told without long searches, whether the plan
// can be built.
#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "library/library.h"
#include "proof/lift.h"

static bool report_memory(scanlatch_messages *messages)
{
	diagnose(messages->diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "memory is out");
	return false;
}

// A plan that was lifted, read again.
struct reread {
	struct arena *arena;
	struct diagnostics *diagnostics;
	struct source source;
	struct plan *plan;
	struct timeline *timeline;
};

static void reread_plan(struct reread *reread, const scanlatch_lift *lift)
{
	const scanlatch_plan *board = lift->images->plan;
	const unsigned bank = lift->lift->options.bank;
	const struct catalogue *catalogue = catalogue_load(reread->arena, reread->diagnostics);
	reread->source = (struct source){"the lifted plan", lift->plan, strlen(lift->plan)};
	if (catalogue != NULL && board->set != NULL)
		reread->plan = plan_read_for_set(&reread->source, catalogue, board->set->set, set_bank_shown(board->set->set, bank),
		                                 reread->diagnostics);
	else if (catalogue != NULL)
		reread->plan = plan_read(&reread->source, catalogue, reread->diagnostics);
	if (reread->plan != NULL)
		reread->timeline = timeline_create(reread->plan, reread->diagnostics);
}

// Whether a timeline is the images' loop, so many times.
static bool lays_out(const struct timeline *timeline, const struct lift *lift)
{
	const uint64_t cells = (uint64_t)lift->cell_count * lift->copies;
	if (timeline->cell_count != cells || timeline->tick_count != lift->tick_count * lift->copies)
		return false;
	for (uint32_t copy = 0; copy < lift->copies; copy++)
		if (memcmp(timeline->asserted + (size_t)copy * lift->cell_count, lift->asserted, lift->cell_count * sizeof *lift->asserted) != 0)
			return false;
	return true;
}

// Whether a byte of a chip is read with the jumpers set to a bank.
static bool is_of_bank(const struct chip *chip, size_t offset, unsigned bank)
{
	const size_t address = offset / (chip->part->data_pins / 8);
	for (unsigned pin = 0; pin < chip->part->address_pins; pin++)
		if (chip->address[pin].kind == ADDRESS_BANK && (address >> pin & 1) != (bank >> chip->address[pin].index & 1))
			return false;
	return true;
}

static size_t count_differing(const struct chip *chip, const struct image *left, const struct image *right, unsigned bank,
                              size_t *first)
{
	size_t count = 0;
	for (size_t offset = 0; offset < left->length; offset++) {
		if (left->bytes[offset] == right->bytes[offset] || !is_of_bank(chip, offset, bank))
			continue;
		if (count++ == 0)
			*first = offset;
	}
	return count;
}

// Whether what failed did so for want of memory.
static bool is_out_of_memory(const struct diagnostics *refusals)
{
	for (size_t index = 0; index < diagnostics_count(refusals); index++)
		if (diagnostics_rule(refusals, index) == RULE_OUT_OF_MEMORY)
			return true;
	return false;
}

// The first error among diagnostics; their count if there is none.
static size_t first_error(const struct diagnostics *diagnostics)
{
	size_t index = 0;
	while (index < diagnostics_count(diagnostics) && rule_row(diagnostics_rule(diagnostics, index))->severity != SEVERITY_ERROR)
		index++;
	return index;
}

// Of images that no plan gives, such as those of two stages whose lines begin in different states.
static void report_unbuilt(scanlatch_lift *lift, const struct diagnostics *refusals, scanlatch_messages *messages)
{
	const size_t error = first_error(refusals);
	diagnose(messages->diagnostics, RULE_LIFT_NEAR, (struct place){lift->lift->plan->source, 0, 0},
	         "the plan lays out the images' lines, but cannot be built as it stands: %s: %s", rule_row(diagnostics_rule(refusals, error))->id,
	         diagnostics_message(refusals, error));
	diagnose_hint(messages->diagnostics, "no plan gives images like these");
	lift->found = true;
}

// A proof that the plan fails however it is built, as the board asks for something that the images do not keep to.
static void report_must(scanlatch_lift *lift, const struct proofs *proofs, enum proof_kind kind, scanlatch_messages *messages)
{
	const char *what = proofs->proof[kind].counterexample.what;
	if (proofs->proof[kind].verdict != VERDICT_FAIL)
		return;
	diagnose(messages->diagnostics, RULE_LIFT_NEAR, (struct place){lift->lift->plan->source, 0, 0},
	         "the plan lays out the images' lines, but cannot be built as it stands: it fails the proof %s%s%s", proof_name(kind),
	         what != NULL ? ": " : "", what != NULL ? what : "");
	diagnose_hint(messages->diagnostics, "the board asks for it, and the images do not keep to it: are they damaged, or is it another board's?");
	lift->found = true;
}

// Judges colour, for which no states are needed.
static bool judge_colour(scanlatch_lift *lift, const struct reread *reread, scanlatch_messages *messages)
{
	if (!reread->plan->clock.has_subcarrier || reread->plan->clock.phase == PHASE_FREE)
		return true;
	struct proofs *proofs = proofs_of_plan(reread->timeline);
	if (proofs == NULL)
		return report_memory(messages);
	report_must(lift, proofs, PROOF_COLOUR, messages);
	proofs_destroy(proofs);
	return true;
}

// Judges the sweeps that a plan asks for by its own images.
static bool judge_sweeps(scanlatch_lift *lift, const struct reread *reread, const struct image *made, scanlatch_messages *messages)
{
	const uint32_t bank = lift->lift->options.bank;
	const struct machine_plan *machine = &reread->plan->machine;
	if (reread->plan->sweep_count == 0)
		return true;
	struct proofs *proofs = proofs_run_banks(reread->timeline, made, &bank, 1, machine->has_start, machine->start);
	if (proofs == NULL)
		return report_memory(messages);
	report_must(lift, proofs, PROOF_SWEEP, messages);
	proofs_destroy(proofs);
	return true;
}

static void compare_chip(scanlatch_lift *lift, size_t index, const struct image *made, scanlatch_messages *messages)
{
	const struct chip *chip = &lift->lift->plan->chips[index];
	const struct image *image = &lift->images->images[index];
	size_t first = 0;
	const size_t count = count_differing(chip, made, image, lift->lift->options.bank, &first);
	if (count == 0)
		return;
	diagnose(messages->diagnostics, RULE_LIFT_NEAR, (struct place){lift->images->sources[index], 0, 0},
	         "the plan gives back other bytes for %zu of chip \"%s\", first at 0x%zX: 0x%02X, found 0x%02X", count, chip->label, first,
	         made->bytes[first], image->bytes[first]);
	diagnose_hint(messages->diagnostics, "no plan says what rows hold that no cell of the frame reads, nor unwired pins");
	lift->found = true;
}

// Builds the plan again and judges what comes of it: where states are pinned, its images against those that it was lifted from. False after
// reporting that memory is out.
static bool judge_images(scanlatch_lift *lift, struct reread *reread, scanlatch_messages *messages)
{
	const size_t chips = lift->lift->plan->chip_count;
	struct table *table = table_create(reread->timeline, reread->diagnostics);
	struct image *made = arena_array(reread->arena, chips, sizeof *made);
	const struct table *tables[1] = {table};
	bool good = made != NULL && (table == NULL ? !is_out_of_memory(reread->diagnostics) : images_fill(tables, 1, reread->arena, made));
	good = good || report_memory(messages);
	if (good && table == NULL)
		report_unbuilt(lift, reread->diagnostics, messages);
	if (good && table != NULL)
		good = judge_sweeps(lift, reread, made, messages);
	for (size_t chip = 0; good && table != NULL && lift->lift->options.near && chip < chips; chip++)
		compare_chip(lift, chip, &made[chip], messages);
	table_destroy(table);
	return good;
}

// A plan that cannot even be read, or is laid out otherwise than the images' loop.
static void report_refusal(const scanlatch_lift *lift, const struct diagnostics *refusals, scanlatch_messages *messages)
{
	const struct place place = {lift->lift->plan->source, 0, 0};
	const size_t types = lift->lift->type_count, error = first_error(refusals);
	const char *message = error < diagnostics_count(refusals) ? diagnostics_message(refusals, error) : "its timeline is another one";
	if (error < diagnostics_count(refusals) && diagnostics_rule(refusals, error) == RULE_KIND_SHORT) {
		diagnose(messages->diagnostics, RULE_LIFT_SIZE, place, "no plan gives images like these: %s", message);
		diagnose_hint(messages->diagnostics, "in a plan, lines that differ in signals of the frame stage alone have kinds of their own; those of "
		              "the images share some");
		return;
	}
	diagnose(messages->diagnostics, RULE_LIFT_SIZE, place,
	         "a plan of these images, of %zu bytes and %zu line type%s, is beyond what the plan language takes: %s", strlen(lift->plan),
	         types, types == 1 ? "" : "s", message);
	if (lift->lift->options.near)
		diagnose_hint(messages->diagnostics, "without --near the plan is shorter");
}

// Whether the plan is to be built. A loop that was lifted freely has states, those of the images, and to find others may take long; but by
// others it may miss a sweep. What of a line-frame machine can be built is not known.
static bool is_to_be_built(const scanlatch_lift *lift)
{
	const struct plan *plan = lift->lift->plan;
	return lift->lift->options.near || plan->machine.form == FORM_LINE_FRAME || plan->sweep_count > 0;
}

// What is written is read again and held against the images.
bool lift_verify(scanlatch_lift *lift, scanlatch_messages *messages)
{
	struct reread reread = {.arena = arena_create(), .diagnostics = diagnostics_create()};
	bool good = reread.arena != NULL && reread.diagnostics != NULL;
	if (good)
		reread_plan(&reread, lift);
	else
		report_memory(messages);
	if (good && is_out_of_memory(reread.diagnostics))
		good = report_memory(messages);
	if (good && (reread.timeline == NULL || !lays_out(reread.timeline, lift->lift))) {
		good = false;
		report_refusal(lift, reread.diagnostics, messages);
	}
	good = good && judge_colour(lift, &reread, messages) && (!is_to_be_built(lift) || judge_images(lift, &reread, messages));
	timeline_destroy(reread.timeline);
	plan_destroy(reread.plan);
	diagnostics_destroy(reread.diagnostics);
	arena_destroy(reread.arena);
	return good;
}
