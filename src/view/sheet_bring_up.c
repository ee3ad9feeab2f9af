// The bring-up table of a bank.
#include <inttypes.h>

#include "base/text.h"
#include "view/bring_up.h"
#include "view/page.h"
#include "view/sheet_parts.h"

enum { COLUMN_NET, COLUMN_PLACE, COLUMN_RATE, COLUMN_DUTY, COLUMN_FAULT, COLUMN_COUNT };

static const struct column bring_up_columns[COLUMN_COUNT] = {
	[COLUMN_NET] = {"net", false}, [COLUMN_PLACE] = {"at", false},       [COLUMN_RATE] = {"frequency", true},
	[COLUMN_DUTY] = {"high", true}, [COLUMN_FAULT] = {"if it is wrong", false},
};

// A bit of the divider stays low where only stretched cells would reach it, and there are none.
static bool is_steady(const struct bring_up_row *row)
{
	return row->has_duty && row->hertz.numerator == 0;
}

// Rounded, and below it exact.
static void put_rate_cell(struct text *out, const struct bring_up_row *row)
{
	if (is_steady(row)) {
		text_put(out, row->kind == BRING_UP_NET && row->net->level ? "steady high" : "steady low");
		return;
	}
	put_rate(out, row->hertz);
	text_put(out, "\n");
	text_put_fraction(out, row->hertz);
	text_put(out, " Hz");
}

static void put_duty_cell(struct text *out, const struct bring_up_row *row)
{
	if (!row->has_duty || is_steady(row)) {
		text_put(out, "–");
		return;
	}
	put_percent(out, row->duty);
	text_put(out, "\n");
	text_put_fraction(out, row->duty);
}

static void put_cell(struct text *out, const void *context, size_t index, size_t column)
{
	const struct bring_up *bring_up = context;
	const struct bring_up_row *row = &bring_up->rows[index];
	if ((column == COLUMN_RATE || column == COLUMN_DUTY) && !row->known) {
		text_put(out, "does not fit 64 bits");
		return;
	}
	switch (column) {
	case COLUMN_NET: put_bring_up_net(out, bring_up, row); break;
	case COLUMN_PLACE: put_bring_up_place(out, bring_up, row); break;
	case COLUMN_RATE: put_rate_cell(out, row); break;
	case COLUMN_DUTY: put_duty_cell(out, row); break;
	default: put_bring_up_fault(out, bring_up, row); break;
	}
}

// What was counted, of a net of the machine.
static void put_title(struct text *out, const void *context, size_t index)
{
	const struct bring_up *bring_up = context;
	const struct bring_up_row *row = &bring_up->rows[index];
	struct text words = {0};
	if (row->kind != BRING_UP_NET)
		return;
	put_bring_up_net(&words, bring_up, row);
	text_printf(&words, ": rises %" PRIu64 " times in a frame, high for %" PRId64 " of %" PRId64 " ticks", row->net->rises, row->net->high_ticks,
	            bring_up->tally->ticks);
	page_attribute(out, "title", &words);
}

static void put_introduction(struct text *out, const struct bring_up *bring_up)
{
	struct text words = {0};
	const struct net_tally frame = {.rises = 1};
	struct fraction rate;
	text_put(&words, "Probe from the top down: each row relies on those above it. Frequencies are means over a whole frame, as a counter with a "
	                 "gate of a second shows them, and “high” is the part of the time, counted at the pins of the simulated machine");
	if (tally_frequency(bring_up->tally, &frame, bring_up->proofs->timeline->plan->clock.master_hz, &rate)) {
		text_put(&words, "; a frame is ");
		put_rate(&words, rate);
	}
	text_put(&words, ". The divider is taken for a counter that counts up from 0.");
	page_element_of(out, "p", "", &words);
}

void sheet_bring_up(struct text *out, const struct proofs *proofs, const struct tally *tally)
{
	struct bring_up bring_up;
	if (tally == NULL) {
		page_element(out, "p", " class=\"warning\"", "The machine does not keep to its frame: there is nothing that a counter should show.");
		return;
	}
	if (!bring_up_make(proofs, tally, &bring_up)) {
		out->failed = true;
		return;
	}
	const struct page_table table = {NULL, "bring-up", {bring_up_columns, COLUMN_COUNT, bring_up.count, put_cell, &bring_up}, put_title};
	put_introduction(out, &bring_up);
	page_table(out, &table);
}
