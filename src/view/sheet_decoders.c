// Decoders: which codes of a field assert a signal, and which outputs of one-of-eight decoders give it.
#include <inttypes.h>

#include "base/text.h"
#include "view/nets.h"
#include "view/page.h"
#include "view/sheet_parts.h"

#define MOST_CODES 64u     // of a list; beyond that it is for a program to read
#define MOST_DECODED_BITS 6u // of a field; above that, eight decoders do not suffice

struct decoder_view {
	const struct proofs *proofs;
	const struct field *field;
	size_t signals[LIMIT_SIGNALS]; // that are decoded from the field
	size_t count;
};

enum { DECODED_SIGNAL, DECODED_ACTIVE, DECODED_CODES, DECODED_OUTPUTS, DECODED_COLUMNS };

static const struct column decoded_columns[DECODED_COLUMNS] = {
	[DECODED_SIGNAL] = {"signal", false}, [DECODED_ACTIVE] = {"active", false}, [DECODED_CODES] = {"asserted in codes", false},
	[DECODED_OUTPUTS] = {"from the decoder's outputs", false},
};

static unsigned field_bits(const struct field *field)
{
	return field->high - field->low + 1;
}

static void put_codes(struct text *out, const struct decoder_view *view, size_t signal)
{
	const size_t count = view->proofs->code_counts[signal];
	for (size_t code = 0; code < count && code < MOST_CODES; code++)
		text_printf(out, "%s%" PRIu32, code > 0 ? ", " : "", view->proofs->codes[signal][code]);
	text_put(out, count == 0 ? "none" : count > MOST_CODES ? ", …" : "");
}

static void put_output(struct text *out, const struct decoder_view *view, uint32_t code)
{
	text_printf(out, "Y%" PRIu32, code % DECODER_OUTPUTS);
	if (field_bits(view->field) > DECODER_INPUTS)
		text_printf(out, " of decoder %" PRIu32, code / DECODER_OUTPUTS + 1);
}

// Outputs of a 138 are low while they are chosen: several together are low through an AND, high through a NAND.
static void put_gate(struct text *out, const struct decoder_view *view, size_t signal)
{
	const size_t count = view->proofs->code_counts[signal];
	const bool high = view->proofs->timeline->plan->signals[signal].active_high;
	if (count == 0) {
		text_printf(out, "none: always %s", high ? "low" : "high");
		return;
	}
	if (field_bits(view->field) > MOST_DECODED_BITS || count > MOST_CODES) {
		text_put(out, "gates of your own");
		return;
	}
	if (count == 1)
		text_put(out, high ? "inverter on " : "");
	else
		text_put(out, high ? "NAND of " : "AND of ");
	for (size_t code = 0; code < count; code++) {
		text_put(out, code > 0 ? ", " : "");
		put_output(out, view, view->proofs->codes[signal][code]);
	}
}

static void put_decoded_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct decoder_view *view = context;
	const struct signal *signal = &view->proofs->timeline->plan->signals[view->signals[row]];
	switch (column) {
	case DECODED_SIGNAL: text_put(out, signal->name); break;
	case DECODED_ACTIVE: text_put(out, signal->active_high ? "high" : "low"); break;
	case DECODED_CODES: put_codes(out, view, view->signals[row]); break;
	default: put_gate(out, view, view->signals[row]); break;
	}
}

static void put_inputs(struct text *out, const struct decoder_view *view)
{
	const struct plan *plan = view->proofs->timeline->plan;
	const unsigned bits = field_bits(view->field);
	const unsigned decoders = bits > DECODER_INPUTS ? 1u << (bits - DECODER_INPUTS) : 1;
	struct text words = {0};
	if (bits > MOST_DECODED_BITS)
		text_printf(&words, "The field has %u bits, too many for one-of-eight decoders.", bits);
	else
		text_printf(&words, "%u x %s.", decoders, plan->timing.decoder_part);
	for (unsigned bit = 0; bit < DECODER_INPUTS && bits <= MOST_DECODED_BITS; bit++) {
		text_printf(&words, "%s%c%s: ", bit > 0 ? "; " : " Inputs ", 'A' + (int)bit, bit == 0 ? " (the lowest)" : "");
		if (bit >= bits) {
			text_put(&words, "low");
			continue;
		}
		text_printf(&words, "state.%u from ", view->field->low + bit);
		put_state_source(&words, plan, STAGE_LINE, view->field->low + bit);
	}
	text_put(&words, ".");
	if (bits > DECODER_INPUTS && bits <= MOST_DECODED_BITS)
		text_printf(&words, " The field's bits above these enable one decoder: decoder 1 while they are 0, decoder %u while they are %u.", decoders, decoders - 1);
	page_element_of(out, "p", "", &words);
}

static void put_decoder(struct text *out, const struct decoder_view *view)
{
	const struct page_table table = {NULL, "nets", {decoded_columns, DECODED_COLUMNS, view->count, put_decoded_cell, view}, NULL};
	page_element(out, "h3", "", "Decoder of field %s, state bits %u to %u", view->field->name, view->field->high, view->field->low);
	put_inputs(out, view);
	page_table(out, &table);
}

void sheet_decoders(struct text *out, const struct proofs *proofs)
{
	const struct plan *plan = proofs->timeline->plan;
	for (size_t field = 0; field < plan->machine.field_count; field++) {
		struct decoder_view view = {.proofs = proofs, .field = &plan->machine.fields[field]};
		for (size_t signal = 0; signal < plan->signal_count; signal++)
			if (plan->signals[signal].origin == FROM_FIELD && plan->signals[signal].field == field)
				view.signals[view.count++] = signal;
		if (view.count > 0)
			put_decoder(out, &view);
	}
}
