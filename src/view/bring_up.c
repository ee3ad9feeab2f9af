#include "view/bring_up.h"

#include <inttypes.h>

#include "base/arena.h"
#include "base/text.h"
#include "layout/divider.h"
#include "view/figures.h"
#include "view/nets.h"

#define RATE_PLACES 6
#define PERCENT_PLACES 4

int64_t counter_bit_rises(int64_t counts, unsigned bit)
{
	const int64_t half = (int64_t)1 << bit;
	return (counts - 1 + half) / (2 * half);
}

int64_t counter_bit_high(int64_t counts, unsigned bit)
{
	const int64_t half = (int64_t)1 << bit, rest = counts % (2 * half);
	return counts / (2 * half) * half + (rest > half ? rest - half : 0);
}

static const struct clock *clock_of(const struct bring_up *bring_up)
{
	return &bring_up->proofs->timeline->plan->clock;
}

static struct bring_up_row *add_row(struct bring_up *bring_up, enum bring_up_kind kind)
{
	struct bring_up_row *row = &bring_up->rows[bring_up->count++];
	*row = (struct bring_up_row){.kind = kind, .hertz = FRACTION_ZERO, .duty = FRACTION_ZERO};
	return row;
}

// A net that rises so often in a frame, and is high for so many ticks of it.
static void set_counted(const struct bring_up *bring_up, struct bring_up_row *row, uint64_t rises, int64_t high_ticks)
{
	const struct net_tally net = {.rises = rises, .high_ticks = high_ticks};
	row->has_duty = true;
	row->known = tally_frequency(bring_up->tally, &net, clock_of(bring_up)->master_hz, &row->hertz) &&
	             tally_duty(bring_up->tally, &net, &row->duty);
}

static void add_steady_rate(struct bring_up *bring_up, enum bring_up_kind kind, struct fraction hertz)
{
	struct bring_up_row *row = add_row(bring_up, kind);
	row->known = true;
	row->hertz = hertz;
}

// A long cell counts on where a normal one starts over.
static void add_divider_bit(struct bring_up *bring_up, const struct divider *divider, unsigned bit)
{
	const struct tally *tally = bring_up->tally;
	const int64_t counts = divider->cell_ticks, most = counts + divider->stretch_ticks;
	const int64_t stretched = (int64_t)tally->stretched, normal = (int64_t)tally->cells - stretched;
	const int64_t rises = normal * counter_bit_rises(counts, bit) + stretched * counter_bit_rises(most, bit);
	struct bring_up_row *row = add_row(bring_up, BRING_UP_DIVIDER);
	row->bit = bit;
	set_counted(bring_up, row, (uint64_t)rises, normal * counter_bit_high(counts, bit) + stretched * counter_bit_high(most, bit));
}

static void add_clock(struct bring_up *bring_up)
{
	const struct clock *clock = clock_of(bring_up);
	const struct divider divider = divider_of_clock(clock);
	struct fraction dots_hz;
	add_steady_rate(bring_up, BRING_UP_MASTER, clock->master_hz);
	if (clock->dot_ticks > 1 && fraction_divide(clock->master_hz, fraction_whole(clock->dot_ticks), &dots_hz))
		add_steady_rate(bring_up, BRING_UP_DOT, dots_hz);
	if (clock->has_subcarrier && divider.subcarrier.source != TAP_MASTER)
		add_steady_rate(bring_up, BRING_UP_SUBCARRIER, clock->subcarrier_hz);
	for (unsigned bit = 0; bit < divider.bits; bit++)
		add_divider_bit(bring_up, &divider, bit);
	if (divider.bits == 0)
		return;
	struct bring_up_row *cell = add_row(bring_up, BRING_UP_CELL);
	set_counted(bring_up, cell, bring_up->tally->cells, 0);
	cell->has_duty = false; // how long its pulse is, is the builder's
}

static void add_net(struct bring_up *bring_up, const struct net_tally *net)
{
	struct bring_up_row *row = add_row(bring_up, BRING_UP_NET);
	row->net = net;
	set_counted(bring_up, row, net->rises, net->high_ticks);
}

// Signals by role, sync first, those without one last.
static void add_signals(struct bring_up *bring_up, enum role role)
{
	const struct plan *plan = bring_up->proofs->timeline->plan;
	for (size_t index = 0; index < bring_up->tally->net_count; index++) {
		const struct net_tally *net = &bring_up->tally->nets[index];
		if (net->kind == NET_SIGNAL && plan->signals[net->index].role == role)
			add_net(bring_up, net);
	}
}

bool bring_up_make(const struct proofs *proofs, const struct tally *tally, struct bring_up *bring_up)
{
	struct bring_up made = {.proofs = proofs, .tally = tally};
	made.rows = arena_array(tally->arena, tally->net_count + 4 + divider_of_clock(clock_of(&made)).bits, sizeof *made.rows);
	if (made.rows == NULL)
		return false;
	add_clock(&made);
	for (size_t index = 0; index < tally->net_count; index++)
		if (tally->nets[index].kind != NET_SIGNAL)
			add_net(&made, &tally->nets[index]);
	for (enum role role = ROLE_PLAIN + 1; role < ROLE_COUNT; role++)
		add_signals(&made, role);
	add_signals(&made, ROLE_PLAIN);
	*bring_up = made;
	return true;
}

void put_rate(struct text *out, struct fraction hertz)
{
	struct fraction scaled = hertz;
	const bool mega = fraction_compare(hertz, fraction_whole(1000000)) >= 0, kilo = fraction_compare(hertz, fraction_whole(1000)) >= 0;
	if ((mega || kilo) && fraction_divide(hertz, fraction_whole(mega ? 1000000 : 1000), &scaled)) {
		text_put_rounded(out, scaled, RATE_PLACES);
		text_put(out, mega ? " MHz" : " kHz");
		return;
	}
	text_put_rounded(out, hertz, RATE_PLACES);
	text_put(out, " Hz");
}

void put_percent(struct text *out, struct fraction part)
{
	struct fraction percent;
	if (fraction_multiply(part, fraction_whole(100), &percent))
		text_put_rounded(out, percent, PERCENT_PLACES);
	else
		text_put(out, "?");
	text_put(out, " %");
}

static const struct plan *plan_of_rows(const struct bring_up *bring_up)
{
	return bring_up->proofs->timeline->plan;
}

// "frame " where the plan has two stages.
static const char *stage_word(const struct bring_up *bring_up, enum stage stage)
{
	if (plan_of_rows(bring_up)->machine.form == FORM_LOOP)
		return "";
	return stage == STAGE_LINE ? "line " : "frame ";
}

static void put_net_name(struct text *out, const struct bring_up *bring_up, const struct net_tally *net)
{
	switch (net->kind) {
	case NET_STATE: text_printf(out, "%sstate.%u", stage_word(bring_up, net->stage), net->index); break;
	case NET_STEP: text_put(out, "step"); break;
	case NET_KIND: text_printf(out, "kind.%u", net->index); break;
	case NET_CLEAR: text_printf(out, "%sclear", stage_word(bring_up, net->stage)); break;
	case NET_SIGNAL: text_put(out, plan_of_rows(bring_up)->signals[net->index].name); break;
	}
}

void put_bring_up_net(struct text *out, const struct bring_up *bring_up, const struct bring_up_row *row)
{
	switch (row->kind) {
	case BRING_UP_MASTER: text_put(out, "master clock"); break;
	case BRING_UP_DOT: text_put(out, "dots"); break;
	case BRING_UP_SUBCARRIER: text_put(out, "subcarrier"); break;
	case BRING_UP_DIVIDER: text_printf(out, "divider bit %u", row->bit); break;
	case BRING_UP_CELL: text_put(out, "cells"); break;
	case BRING_UP_NET: put_net_name(out, bring_up, row->net); break;
	}
}

static struct data_wire wire_of(const struct net_tally *net)
{
	static const enum data_wire_kind kinds[] = {
		[NET_STATE] = DATA_NEXT, [NET_STEP] = DATA_STEP, [NET_KIND] = DATA_KIND, [NET_CLEAR] = DATA_CLEAR, [NET_SIGNAL] = DATA_SIGNAL,
	};
	return (struct data_wire){kinds[net->kind], net->index};
}

static bool is_decoded(const struct bring_up *bring_up, const struct net_tally *net)
{
	return net->kind == NET_SIGNAL && plan_of_rows(bring_up)->signals[net->index].origin == FROM_FIELD;
}

static void put_net_place(struct text *out, const struct bring_up *bring_up, const struct net_tally *net)
{
	const struct plan *plan = plan_of_rows(bring_up);
	const struct stage_nets nets = nets_of_stage(plan, net->stage);
	if (net->kind == NET_STATE)
		put_state_source(out, plan, net->stage, net->index);
	else if (is_decoded(bring_up, net))
		text_printf(out, "the decoder of field %s", plan->machine.fields[plan->signals[net->index].field].name);
	else
		put_data_source(out, plan, &nets, wire_of(net));
}

void put_bring_up_place(struct text *out, const struct bring_up *bring_up, const struct bring_up_row *row)
{
	switch (row->kind) {
	case BRING_UP_MASTER: text_put(out, "the oscillator"); break;
	case BRING_UP_DOT:
	case BRING_UP_SUBCARRIER: text_put(out, "its tap"); break;
	case BRING_UP_DIVIDER: text_printf(out, "Q%u of the divider", row->bit); break;
	case BRING_UP_CELL: text_put(out, "the clock of all latches"); break;
	case BRING_UP_NET: put_net_place(out, bring_up, row->net); break;
	}
}

// "kHz if no cell is stretched".
static void put_rate_of_cells(struct text *out, const struct clock *clock, int64_t ticks, const char *when)
{
	struct fraction hertz;
	if (!fraction_divide(clock->master_hz, fraction_whole(ticks), &hertz))
		return;
	put_rate(out, hertz);
	text_printf(out, ": %s is stretched; ", when);
}

static void put_cell_fault(struct text *out, const struct clock *clock)
{
	if (clock->stretch_ticks > 0) {
		put_rate_of_cells(out, clock, clock->cell_ticks, "no cell");
		put_rate_of_cells(out, clock, clock->cell_ticks + clock->stretch_ticks, "every cell");
	}
	text_put(out, "another: the divider starts over at a wrong count");
}

static void put_state_fault(struct text *out, const struct bring_up *bring_up, const struct net_tally *net)
{
	const struct plan *plan = plan_of_rows(bring_up);
	if (machine_stage(&plan->machine, net->stage)->advance == ADVANCE_COUNT) {
		text_put(out, "steady: no clock, not enabled, or held in clear; another row's value: crossed with it");
		return;
	}
	if (net->rises == 0) {
		text_put(out, "it moves: crossed with another bit, or the machine is not in its frame");
		return;
	}
	text_put(out, "steady: the latch's clock, or the wire from ");
	put_data_pin(out, plan, net->stage, wire_of(net));
	text_put(out, "; another row's value: crossed with it");
}

static void put_signal_fault(struct text *out, const struct bring_up *bring_up, const struct bring_up_row *row)
{
	const struct plan *plan = plan_of_rows(bring_up);
	struct fraction inverted;
	if (row->known && row->net->rises > 0 && fraction_subtract(fraction_whole(1), row->duty, &inverted) &&
	    fraction_compare(inverted, row->duty) != 0) {
		put_percent(out, inverted);
		text_put(out, ": inverted; ");
	}
	if (is_decoded(bring_up, row->net)) {
		text_put(out, "another while states are right: another output of the decoder, or its inputs crossed");
		return;
	}
	text_put(out, "another while states are right: the wire from ");
	put_data_pin(out, plan, row->net->stage, wire_of(row->net));
	text_put(out, " is open, shorted or another signal's");
}

static void put_spikes(struct text *out, const struct bring_up *bring_up, const struct net_tally *net)
{
	struct net_tally with_spikes = *net;
	struct fraction hertz;
	if (net->spikes == 0)
		return;
	with_spikes.rises += net->spikes;
	text_put(out, "; the asynchronous clear adds ");
	text_put_count(out, net->spikes, "spike", "spikes");
	text_put(out, " a frame");
	if (!tally_frequency(bring_up->tally, &with_spikes, clock_of(bring_up)->master_hz, &hertz))
		return;
	text_put(out, ": ");
	put_rate(out, hertz);
	text_put(out, " on a counter that sees them");
}

static void put_net_fault(struct text *out, const struct bring_up *bring_up, const struct bring_up_row *row)
{
	switch (row->net->kind) {
	case NET_STATE: put_state_fault(out, bring_up, row->net); break;
	case NET_STEP: text_put(out, "none: the line stage does not come to a line's last cell; too often: lines are short, see kind"); break;
	case NET_KIND: text_put(out, "another: kind bits crossed, or the frame stage is not in its frame"); break;
	case NET_CLEAR: text_put(out, "none: the counter runs through all its counts; too often: it is cleared too early"); break;
	case NET_SIGNAL: put_signal_fault(out, bring_up, row); break;
	}
	put_spikes(out, bring_up, row->net);
}

void put_bring_up_fault(struct text *out, const struct bring_up *bring_up, const struct bring_up_row *row)
{
	switch (row->kind) {
	case BRING_UP_MASTER: text_put(out, "none: no supply, or the oscillator does not start; another: another crystal"); break;
	case BRING_UP_DOT: text_put(out, "another: a wrong tap"); break;
	case BRING_UP_SUBCARRIER: text_put(out, "another: a wrong tap or divisor; colour is lost"); break;
	case BRING_UP_DIVIDER: text_put(out, "steady: no clock, or held in clear; another: it starts over at a wrong count"); break;
	case BRING_UP_CELL: put_cell_fault(out, clock_of(bring_up)); break;
	case BRING_UP_NET: put_net_fault(out, bring_up, row); break;
	}
}
