#include "view/proofs.h"

#include <inttypes.h>

#include "base/text.h"
#include "view/limits.h"
#include "view/proofs_shared.h"
#include "view/states.h"

// Columns: the verdict at 0, the name at 6, the figures at 16. Details stand below the name.
#define VERDICT_CHARACTERS 4
#define NAME_CHARACTERS 8
#define GAP 2
#define FIGURES_INDENT (VERDICT_CHARACTERS + GAP + NAME_CHARACTERS + GAP)
// Of a list of codes; JSON has them all.
#define MOST_CODES 64
#define DETAIL_INDENT (VERDICT_CHARACTERS + GAP)
#define DETAIL_WRAPPED_INDENT (DETAIL_INDENT + 2)

struct report {
	struct text *out;
	struct text words;           // of the line that is being made
	const struct proofs *proofs;
	bool colour;
	put_detail *put_detail;      // takes a detail's words; NULL: they are wrapped for a terminal
};

struct verdict_row {
	const char *word;
	const char *colour;
};

static const struct verdict_row pass_row = {"pass", "\033[1;32m"};
static const struct verdict_row fail_row = {"FAIL", "\033[1;31m"};
static const struct verdict_row miss_row = {"miss", "\033[1;33m"};
static const struct verdict_row none_row = {"none", NULL};

static const struct verdict_row *row_of_verdict(const struct proofs *proofs, enum proof_kind kind)
{
	switch (proofs->proof[kind].verdict) {
	case VERDICT_PASS: return &pass_row;
	case VERDICT_FAIL: return proof_is_must(kind) ? &fail_row : &miss_row;
	case VERDICT_ABSENT: break;
	}
	return &none_row;
}

// Puts the words that were made, and makes room for the next.
static void put_words(struct report *report, size_t used, size_t indent)
{
	text_put_wrapped(report->out, text_string(&report->words), used, indent);
	text_put(report->out, "\n");
	report->words.length = 0;
	text_put(&report->words, "");
}

static void end_detail(struct report *report)
{
	if (report->put_detail != NULL) {
		report->put_detail(report->out, &report->words);
		return;
	}
	text_put_repeated(report->out, ' ', DETAIL_INDENT);
	put_words(report, DETAIL_INDENT, DETAIL_WRAPPED_INDENT);
}

static void put_verdict(struct report *report, const struct verdict_row *row, const char *name)
{
	const bool colour = report->colour && row->colour != NULL;
	text_printf(report->out, "%s%s%s", colour ? row->colour : "", row->word, colour ? "\033[0m" : "");
	text_put_repeated(report->out, ' ', GAP);
	text_printf(report->out, "%-*s", NAME_CHARACTERS + GAP, name);
}

void put_place(struct text *words, const struct timeline *timeline, uint32_t cell)
{
	const struct cell_place place = timeline_place(timeline, cell);
	text_printf(words, "line %" PRIu32 " (%s), cell %" PRIu32 " (%s)", place.line, timeline_line_name(timeline, cell),
	            place.cell, timeline_region_name(timeline, cell));
}

static void put_bank(struct report *report, uint32_t bank)
{
	if (report->proofs->banks > 1)
		text_printf(&report->words, ", bank %" PRIu32, bank);
}

static void put_byte(struct report *report, const struct byte_place *byte)
{
	const struct chip *chip = &plan_of(report->proofs)->chips[byte->chip];
	text_put(&report->words, chip->part->data_pins > 8 ? "word " : "byte ");
	text_put_hex(&report->words, byte->value, chip->part->data_pins);
	text_put(&report->words, " at address ");
	text_put_hex(&report->words, byte->address, chip->part->address_pins);
	text_printf(&report->words, " of chip %s", chip->label);
}

// Where the fault shows; if no byte is to blame, in which state, if one is known.
static void detail_place(struct report *report, const struct counterexample *found)
{
	text_put(&report->words, "at ");
	put_place(&report->words, report->proofs->timeline, found->cell);
	text_printf(&report->words, "; cell %" PRIu32 " of the frame", found->cell);
	put_bank(report, found->bank);
	if (!found->byte_known && found->state != NO_STATE) {
		text_put(&report->words, ", ");
		put_row_state(&report->words, report->proofs, found->stage, found->state);
	}
	end_detail(report);
}

// Where the fault comes from.
static void detail_byte(struct report *report, const struct counterexample *found)
{
	text_put(&report->words, "row of ");
	put_row_state(&report->words, report->proofs, found->stage, found->state);
	if (found->signal != SIZE_MAX)
		text_printf(&report->words, ", which sets %s", plan_of(report->proofs)->signals[found->signal].name);
	text_put(&report->words, ": ");
	put_byte(report, &found->byte);
	end_detail(report);
}

static void detail_counterexample(struct report *report, enum proof_kind kind)
{
	const struct counterexample *found = &report->proofs->proof[kind].counterexample;
	if (found->what != NULL) {
		text_put(&report->words, found->what);
		end_detail(report);
	}
	if (has_place(report->proofs, kind))
		detail_place(report, found);
	if (found->present && found->byte_known)
		detail_byte(report, found);
	if (found->hint != NULL) {
		text_printf(&report->words, "hint: %s", found->hint);
		end_detail(report);
	}
}

// A loop off the frame has no place in it, but a row.
static void detail_second_loop(struct report *report)
{
	const struct counterexample *found = &report->proofs->proof[PROOF_POWER_UP].counterexample;
	if (report->proofs->banks > 1)
		text_printf(&report->words, "in bank %" PRIu32 ", ", found->bank);
	text_put(&report->words, found->what);
	end_detail(report);
	if (found->byte_known)
		detail_byte(report, found);
}

static void detail_glitch(struct report *report, const struct glitch_edge *edge)
{
	struct text *words = &report->words;
	text_printf(words, "%s may flicker at ", plan_of(report->proofs)->signals[edge->signal].name);
	text_put_count(words, edge->count, "edge", "edges");
	text_put(words, edge->count == 1 ? ", where " : ", first where ");
	put_place(words, report->proofs->timeline, edge->cell);
	text_printf(words, " begins: code %" PRIu32 " to %" PRIu32 ", between them %" PRIu32 "; ", edge->from_code, edge->to_code,
	            edge->between_code);
	put_state(words, report->proofs, edge->from_state);
	text_put(words, " to ");
	if (plan_of(report->proofs)->machine.form == FORM_LOOP)
		text_put_hex(words, edge->to_state, state_bits(report->proofs));
	else
		put_state(words, report->proofs, edge->to_state);
	end_detail(report);
}

// Stray pulses first, as they may spoil what else is measured; then each limit that is missed, and what would keep it.
static void detail_limits(struct report *report)
{
	if (report->proofs->proof[PROOF_LIMITS].counterexample.present)
		detail_counterexample(report, PROOF_LIMITS);
	if (report->proofs->limits.no_vertical_sync) {
		text_put(&report->words, "vertical sync never comes: there is no broad pulse, and no signal with the role vertical sync is asserted");
		end_detail(report);
	}
	for (size_t item = 0; item < ITEM_COUNT; item++) {
		if (!limit_is_missed(report->proofs, (enum limit_item)item))
			continue;
		put_limit_miss(&report->words, report->proofs, (enum limit_item)item);
		end_detail(report);
		// Where pulses are stray, what is measured may be of them.
		if (report->proofs->limits.measurement->strays > 0)
			continue;
		text_put(&report->words, "hint: ");
		if (put_limit_move(&report->words, report->proofs, (enum limit_item)item))
			end_detail(report);
		report->words.length = 0;
	}
}

static void detail_sweeps(struct report *report)
{
	const struct plan *plan = plan_of(report->proofs);
	for (size_t index = 0; plan->sweep_count > 1 && index < plan->sweep_count; index++) {
		put_sweep(&report->words, &plan->sweeps[index], &report->proofs->sweeps[index]);
		end_detail(report);
	}
	if (has_place(report->proofs, PROOF_SWEEP))
		detail_place(report, &report->proofs->proof[PROOF_SWEEP].counterexample);
}

// The codes that were chosen for `codes: auto`, as read out of the images: what the decoder must be wired for.
static void detail_codes(struct report *report)
{
	const struct proofs *proofs = report->proofs;
	const struct plan *plan = plan_of(proofs);
	for (size_t index = 0; index < plan->signal_count; index++) {
		const struct signal *signal = &plan->signals[index];
		const size_t count = proofs->code_counts[index];
		if (signal->origin != FROM_FIELD || !signal->auto_codes)
			continue;
		text_printf(&report->words, "%s is asserted in %s of field %s:", signal->name, count == 1 ? "code" : "codes",
		            plan->machine.fields[signal->field].name);
		for (size_t code = 0; code < count && code < MOST_CODES; code++)
			text_printf(&report->words, " %" PRIu32, proofs->codes[index][code]);
		text_put(&report->words, count == 0 ? " none" : count > MOST_CODES ? " …" : "");
		end_detail(report);
	}
}

static void put_details(struct report *report, enum proof_kind kind)
{
	const struct proofs *proofs = report->proofs;
	if (kind == PROOF_SWEEP) {
		detail_sweeps(report);
	} else if (kind == PROOF_LIMITS) {
		detail_limits(report);
	} else if (kind == PROOF_GLITCHES) {
		for (size_t index = 0; index < proofs->glitches.disturbed; index++)
			detail_glitch(report, &proofs->glitches.first[index]);
	} else if (kind == PROOF_POWER_UP && proofs->power_up.lost_states > 0) {
		detail_second_loop(report);
	} else if (proof_failed(proofs, kind)) {
		detail_counterexample(report, kind);
	}
	if (kind == PROOF_SIGNALS)
		detail_codes(report);
}

static void put_proof(struct report *report, enum proof_kind kind)
{
	const char *reason = reason_of(report->proofs, kind);
	put_verdict(report, row_of_verdict(report->proofs, kind), proof_name(kind));
	if (reason != NULL)
		text_put(&report->words, reason);
	else
		put_proof_figures(&report->words, report->proofs, kind);
	put_words(report, FIGURES_INDENT, FIGURES_INDENT);
	if (reason == NULL)
		put_details(report, kind);
}

// Whether the report names a line: in every place, and with the worst upsets.
static bool names_lines(const struct proofs *proofs)
{
	const struct upset_result *upset = &proofs->upset;
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		if (proof_failed(proofs, kind) && has_place(proofs, kind))
			return true;
	for (size_t item = 0; item < ITEM_COUNT; item++)
		if (limit_is_missed(proofs, (enum limit_item)item))
			return true;
	return reason_of(proofs, PROOF_UPSET) == NULL && (upset->worst_cells > 0 || upset->worst_slip_cells > 0);
}

void view_proof(struct text *out, const struct proofs *proofs, enum proof_kind kind, bool colour)
{
	struct report report = {out, {0}, proofs, colour, NULL};
	put_proof(&report, kind);
	out->failed = out->failed || report.words.failed;
	text_release(&report.words);
}

const char *verdict_word(const struct proofs *proofs, enum proof_kind kind)
{
	return row_of_verdict(proofs, kind)->word;
}

void put_proof_details(struct text *out, const struct proofs *proofs, enum proof_kind kind, put_detail *put)
{
	struct report report = {out, {0}, proofs, false, put};
	if (reason_of(proofs, kind) == NULL)
		put_details(&report, kind);
	out->failed = out->failed || report.words.failed;
	text_release(&report.words);
}

void view_must(struct text *out, const char *name, bool kept, const char *words, bool colour)
{
	struct report report = {out, {0}, NULL, colour, NULL};
	put_verdict(&report, kept ? &pass_row : &fail_row, name);
	text_put(&report.words, words);
	put_words(&report, FIGURES_INDENT, FIGURES_INDENT);
	out->failed = out->failed || report.words.failed;
	text_release(&report.words);
}

void view_counting(struct text *out, const struct proofs *proofs)
{
	if (names_lines(proofs))
		text_put(out, "Lines and cells are counted from 0.\n");
}

void view_proofs(struct text *out, const struct proofs *proofs, bool colour)
{
	for (enum proof_kind kind = PROOF_CLOSURE; kind < PROOF_COUNT; kind++)
		view_proof(out, proofs, kind, colour);
	view_counting(out, proofs);
}
