// Latches and counters as net lists: what each pin carries, from where and to where.
#include <string.h>

#include "base/text.h"
#include "plan/plan.h"
#include "view/nets.h"
#include "view/page.h"
#include "view/sheet_parts.h"

struct logic_view {
	const struct plan *plan;
	const struct stage_nets *nets;
	unsigned first, count;        // bits of this chip
};

static void put_field_bits(struct text *out, const struct plan *plan, unsigned bit)
{
	for (size_t index = 0; index < plan->machine.field_count; index++) {
		const struct field *field = &plan->machine.fields[index];
		if (bit < field->low || bit > field->high)
			continue;
		if (field->high == field->low)
			text_printf(out, "; field %s", field->name);
		else
			text_printf(out, "; field %s, bit %u", field->name, bit - field->low);
	}
}

static void put_signal_use(struct text *out, const struct signal *signal)
{
	text_printf(out, "the board: %s, active %s", signal->role == ROLE_PLAIN ? "a signal" : role_name(signal->role), signal->active_high ? "high" : "low");
}

static void put_state_use(struct text *out, const struct plan *plan, enum stage stage, unsigned bit)
{
	if (!put_address_pins(out, plan, stage, ADDRESS_STATE, bit))
		text_put(out, "no EEPROM");
	if (stage == STAGE_LINE)
		put_field_bits(out, plan, bit);
}

// Where what a latch or an EEPROM gives goes.
static void put_use(struct text *out, const struct logic_view *view, struct data_wire wire)
{
	switch (wire.kind) {
	case DATA_NEXT: put_state_use(out, view->plan, view->nets->stage, wire.index); break;
	case DATA_KIND: put_address_pins(out, view->plan, STAGE_LINE, ADDRESS_KIND, wire.index); break;
	case DATA_STEP: text_put(out, "the frame stage's enable"); break;
	case DATA_SIGNAL: put_signal_use(out, &view->plan->signals[wire.index]); break;
	default: put_data_sink(out, view->plan, view->nets, wire); break;
	}
}

enum { LATCH_BIT, LATCH_FROM, LATCH_CARRIES, LATCH_TO, LATCH_COLUMNS };

static const struct column latch_columns[LATCH_COLUMNS] = {
	[LATCH_BIT] = {"pins", false}, [LATCH_FROM] = {"D from", false}, [LATCH_CARRIES] = {"Q is", false}, [LATCH_TO] = {"Q goes to", false},
};

static void put_latch_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct logic_view *view = context;
	const struct data_wire wire = view->nets->latch[view->first + row];
	switch (column) {
	case LATCH_BIT: text_printf(out, "D%zu, Q%zu", row, row); break;
	case LATCH_FROM: put_data_pin(out, view->plan, view->nets->stage, wire); break;
	case LATCH_CARRIES: put_latched_net(out, view->plan, wire); break;
	default: put_use(out, view, wire); break;
	}
}

static const char *enable_words(const char *part)
{
	return strstr(part, "273") != NULL ? "clear high" : "output enable low";
}

static void put_latch(struct text *out, const struct plan *plan, const struct stage_nets *nets, unsigned latch)
{
	const unsigned left = nets->latch_bits - latch * LATCH_BITS;
	const struct logic_view view = {plan, nets, latch * LATCH_BITS, left < LATCH_BITS ? left : LATCH_BITS};
	struct text caption = {0};
	const char *prefix = plan->machine.form == FORM_LOOP ? "" : nets->stage == STAGE_LINE ? "line " : "frame ";
	text_printf(&caption, "%slatch %u: %s; %s", prefix, latch + 1, plan->timing.latch_part, enable_words(plan->timing.latch_part));
	if (view.count < LATCH_BITS)
		text_printf(&caption, "; D%u to D7 unused, low", view.count);
	const struct page_table table = {text_string(&caption), "nets", {latch_columns, LATCH_COLUMNS, view.count, put_latch_cell, &view}, NULL};
	page_table(out, &table);
	out->failed = out->failed || caption.failed;
	text_release(&caption);
}

enum { COUNTER_PIN, COUNTER_CARRIES, COUNTER_TO, COUNTER_COLUMNS };

static const struct column counter_columns[COUNTER_COLUMNS] = {
	[COUNTER_PIN] = {"pin", false}, [COUNTER_CARRIES] = {"is", false}, [COUNTER_TO] = {"goes to", false},
};

static void put_counter_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct logic_view *view = context;
	const unsigned bit = view->first + (unsigned)row;
	switch (column) {
	case COUNTER_PIN: text_printf(out, "Q%zu", row); break;
	case COUNTER_CARRIES: text_printf(out, "state.%u", bit); break;
	default: put_state_use(out, view->plan, view->nets->stage, bit); break;
	}
}

static void put_counter(struct text *out, const struct plan *plan, const struct stage_nets *nets, unsigned counter)
{
	const unsigned bits = machine_stage(&plan->machine, nets->stage)->state_bits, left = bits - counter * COUNTER_BITS;
	const struct logic_view view = {plan, nets, counter * COUNTER_BITS, left < COUNTER_BITS ? left : COUNTER_BITS};
	struct text caption = {0};
	const char *prefix = plan->machine.form == FORM_LOOP ? "" : nets->stage == STAGE_LINE ? "line " : "frame ";
	const char *enable = nets->stage == STAGE_FRAME ? "step" : "high";
	text_printf(&caption, "%scounter %u: %s; load high, ENP %s, ENT ", prefix, counter + 1, plan->timing.counter_part[nets->stage], enable);
	if (counter == 0)
		text_put(&caption, enable);
	else
		text_printf(&caption, "from RCO of %scounter %u", prefix, counter);
	const struct page_table table = {text_string(&caption), "nets", {counter_columns, COUNTER_COLUMNS, view.count, put_counter_cell, &view}, NULL};
	page_table(out, &table);
	out->failed = out->failed || caption.failed;
	text_release(&caption);
}

enum { STRAIGHT_NET, STRAIGHT_FROM, STRAIGHT_TO, STRAIGHT_COLUMNS };

static const struct column straight_columns[STRAIGHT_COLUMNS] = {
	[STRAIGHT_NET] = {"net", false}, [STRAIGHT_FROM] = {"from", false}, [STRAIGHT_TO] = {"goes to", false},
};

static void put_straight_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct logic_view *view = context;
	const struct data_wire wire = view->nets->straight[row];
	switch (column) {
	case STRAIGHT_NET: put_data_net(out, view->plan, wire); break;
	case STRAIGHT_FROM: put_data_pin(out, view->plan, view->nets->stage, wire); break;
	default: put_use(out, view, wire); break;
	}
}

static void put_straight(struct text *out, const struct plan *plan, const struct stage_nets *nets)
{
	const struct logic_view view = {plan, nets, 0, nets->straight_count};
	const struct page_table table = {"straight from the EEPROMs, not latched", "nets",
	                                 {straight_columns, STRAIGHT_COLUMNS, nets->straight_count, put_straight_cell, &view}, NULL};
	page_table(out, &table);
}

static void put_clear_words(struct text *out, const struct plan *plan, const struct stage_nets *nets)
{
	const struct stage_plan *stage = machine_stage(&plan->machine, nets->stage);
	struct text words = {0};
	text_put(&words, "The EEPROM asserts clear high, and the counters' clear is active low: ");
	if (nets->stage == STAGE_FRAME && stage->clear == CLEAR_SYNC)
		text_put(&words, "drive it by a NAND of clear and step. A 74x163 obeys clear at every edge, enabled or not.");
	else
		text_put(&words, "drive it by an inverter.");
	if (stage->clear == CLEAR_ASYNC)
		text_put(&words, " It acts at once: whatever spikes on clear while the EEPROM is looked up may clear the counter too early.");
	page_element_of(out, "p", "", &words);
}

static void put_chip_counts(struct text *out, const struct plan *plan, const struct stage_nets *nets)
{
	const unsigned latches = nets_latches(nets), counters = nets_counters(nets, plan);
	struct text words = {0};
	if (counters > 0)
		text_printf(&words, "%u x %s, of four bits. ", counters, plan->timing.counter_part[nets->stage]);
	if (latches > 0)
		text_printf(&words, "%u x %s, of eight bits. ", latches, plan->timing.latch_part);
	if (nets->stage == STAGE_LINE)
		text_put(&words, "Clock of all of them: the edge that ends a cell.");
	if (nets->stage == STAGE_FRAME && counters > 0)
		text_put(&words, "Clock of the counters: the edge that ends a cell; step enables them. ");
	if (nets->stage == STAGE_FRAME && latches > 0)
		text_put(&words, "Clock of the latches: the edge that ends a cell, gated so that it comes only while step is high.");
	page_element_of(out, "p", "", &words);
}

static void put_stage(struct text *out, const struct plan *plan, enum stage stage)
{
	const struct stage_nets nets = nets_of_stage(plan, stage);
	if (plan->machine.form == FORM_LINE_FRAME)
		page_element(out, "h3", "", "%s stage", stage == STAGE_LINE ? "Line" : "Frame");
	put_chip_counts(out, plan, &nets);
	text_put(out, "<div class=\"chips\">\n");
	for (unsigned counter = 0; counter < nets_counters(&nets, plan); counter++)
		put_counter(out, plan, &nets, counter);
	for (unsigned latch = 0; latch < nets_latches(&nets); latch++)
		put_latch(out, plan, &nets, latch);
	if (nets.straight_count > 0)
		put_straight(out, plan, &nets);
	text_put(out, "</div>\n");
	if (nets.counted)
		put_clear_words(out, plan, &nets);
}

void sheet_logic(struct text *out, const struct plan *plan)
{
	page_element(out, "p", "", "Bits are packed in order; any other order does as well, as long as a bit's D and Q stay together.");
	for (enum stage stage = STAGE_LINE; stage < machine_stages(&plan->machine); stage++)
		put_stage(out, plan, stage);
}
