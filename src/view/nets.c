#include "view/nets.h"

#include "base/text.h"
#include "catalogue/catalogue.h"

static const struct stage_plan *stage_of(const struct plan *plan, enum stage stage)
{
	return machine_stage(&plan->machine, stage);
}

static void add_wire(struct stage_nets *nets, bool latched, enum data_wire_kind kind, unsigned index)
{
	const struct data_wire wire = {kind, index};
	if (latched)
		nets->latch[nets->latch_bits++] = wire;
	else
		nets->straight[nets->straight_count++] = wire;
}

struct stage_nets nets_of_stage(const struct plan *plan, enum stage stage)
{
	const struct stage_plan *planned = stage_of(plan, stage);
	const bool two = plan->machine.form == FORM_LINE_FRAME;
	struct stage_nets nets = {.stage = stage, .counted = planned->advance == ADVANCE_COUNT, .latched = planned->outputs == OUTPUTS_REGISTERED};
	for (unsigned bit = 0; !nets.counted && bit < planned->state_bits; bit++)
		add_wire(&nets, true, DATA_NEXT, bit);
	for (unsigned bit = 0; stage == STAGE_FRAME && bit < plan->machine.kind_bits; bit++)
		add_wire(&nets, nets.latched, DATA_KIND, bit);
	if (two && stage == STAGE_LINE)
		add_wire(&nets, nets.latched, DATA_STEP, 0);
	for (unsigned signal = 0; signal < plan->signal_count; signal++)
		if (plan->signals[signal].stage == stage && signal_is_data(&plan->signals[signal]))
			add_wire(&nets, nets.latched, DATA_SIGNAL, signal);
	if (nets.counted)
		add_wire(&nets, false, DATA_CLEAR, 0);
	return nets;
}

unsigned nets_latches(const struct stage_nets *nets)
{
	return (nets->latch_bits + LATCH_BITS - 1) / LATCH_BITS;
}

unsigned nets_counters(const struct stage_nets *nets, const struct plan *plan)
{
	return nets->counted ? (stage_of(plan, nets->stage)->state_bits + COUNTER_BITS - 1) / COUNTER_BITS : 0;
}

void put_data_net(struct text *out, const struct plan *plan, struct data_wire wire)
{
	switch (wire.kind) {
	case DATA_OPEN: break;
	case DATA_NEXT: text_printf(out, "next.%u", wire.index); break;
	case DATA_KIND: text_printf(out, "kind.%u", wire.index); break;
	case DATA_STEP: text_put(out, "step"); break;
	case DATA_CLEAR: text_put(out, "clear"); break;
	case DATA_SIGNAL: text_put(out, plan->signals[wire.index].name); break;
	}
}

void put_latched_net(struct text *out, const struct plan *plan, struct data_wire wire)
{
	if (wire.kind == DATA_NEXT)
		text_printf(out, "state.%u", wire.index);
	else
		put_data_net(out, plan, wire);
}

// "frame " where there are two stages.
static const char *stage_prefix(const struct plan *plan, enum stage stage)
{
	if (plan->machine.form == FORM_LOOP)
		return "";
	return stage == STAGE_LINE ? "line " : "frame ";
}

void put_latch_pin(struct text *out, const struct plan *plan, const struct stage_nets *nets, unsigned bit, char pin)
{
	text_printf(out, "%slatch %u, %c%u", stage_prefix(plan, nets->stage), bit / LATCH_BITS + 1, pin, bit % LATCH_BITS);
}

static unsigned latch_bit_of(const struct stage_nets *nets, struct data_wire wire)
{
	unsigned bit = 0;
	while (bit < nets->latch_bits && (nets->latch[bit].kind != wire.kind || nets->latch[bit].index != wire.index))
		bit++;
	return bit;
}

static void put_pin_number(struct text *out, const struct part *part, enum pin_kind kind, unsigned index)
{
	const unsigned number = part_pin_number(part, kind, index);
	text_printf(out, "%c%u", kind == PIN_ADDRESS ? 'A' : 'D', index);
	if (number > 0)
		text_printf(out, " (pin %u)", number);
}

void put_data_pin(struct text *out, const struct plan *plan, enum stage stage, struct data_wire wire)
{
	for (size_t index = 0; index < plan->chip_count; index++) {
		const struct chip *chip = &plan->chips[index];
		for (unsigned pin = 0; chip->stage == stage && pin < chip->part->data_pins; pin++) {
			if (chip->data[pin].kind != wire.kind || chip->data[pin].index != wire.index)
				continue;
			put_pin_number(out, chip->part, PIN_DATA, pin);
			text_printf(out, " of %s", chip->label);
			return;
		}
	}
}

void put_state_source(struct text *out, const struct plan *plan, enum stage stage, unsigned bit)
{
	const struct stage_nets nets = nets_of_stage(plan, stage);
	if (nets.counted)
		text_printf(out, "%scounter %u, Q%u", stage_prefix(plan, stage), bit / COUNTER_BITS + 1, bit % COUNTER_BITS);
	else
		put_latch_pin(out, plan, &nets, latch_bit_of(&nets, (struct data_wire){DATA_NEXT, bit}), 'Q');
}

void put_data_source(struct text *out, const struct plan *plan, const struct stage_nets *nets, struct data_wire wire)
{
	const unsigned bit = latch_bit_of(nets, wire);
	if (bit < nets->latch_bits)
		put_latch_pin(out, plan, nets, bit, 'Q');
	else
		put_data_pin(out, plan, nets->stage, wire);
}

void put_kind_source(struct text *out, const struct plan *plan, unsigned bit)
{
	const struct stage_nets nets = nets_of_stage(plan, STAGE_FRAME);
	put_data_source(out, plan, &nets, (struct data_wire){DATA_KIND, bit});
}

static void put_straight_sink(struct text *out, const struct plan *plan, const struct stage_nets *nets, struct data_wire wire)
{
	const char *prefix = stage_prefix(plan, nets->stage);
	const struct stage_plan *planned = stage_of(plan, nets->stage);
	switch (wire.kind) {
	case DATA_CLEAR:
		if (nets->stage == STAGE_FRAME && planned->clear == CLEAR_SYNC)
			text_printf(out, "%scounters, clear: by a NAND with step", prefix);
		else
			text_printf(out, "%scounters, clear: by an inverter", prefix);
		break;
	case DATA_STEP: text_put(out, "the frame stage's enable"); break;
	case DATA_KIND: put_address_pins(out, plan, STAGE_LINE, ADDRESS_KIND, wire.index); break;
	default: text_put(out, "the board, straight"); break;
	}
}

void put_data_sink(struct text *out, const struct plan *plan, const struct stage_nets *nets, struct data_wire wire)
{
	const unsigned bit = latch_bit_of(nets, wire);
	if (bit < nets->latch_bits)
		put_latch_pin(out, plan, nets, bit, 'D');
	else
		put_straight_sink(out, plan, nets, wire);
}

// Puts the labels of the stage's chips whose address pin carries the wire, after that pin. False if none does.
static bool put_chips_of_pin(struct text *out, const struct plan *plan, enum stage stage, struct address_wire wire, unsigned pin, const char *before)
{
	unsigned number = 0;
	bool any = false;
	for (size_t index = 0; index < plan->chip_count; index++) {
		const struct chip *chip = &plan->chips[index];
		if (chip->stage != stage || pin >= chip->part->address_pins || chip->address[pin].kind != wire.kind || chip->address[pin].index != wire.index)
			continue;
		const unsigned here = part_pin_number(chip->part, PIN_ADDRESS, pin);
		if (any && here == number) {
			text_printf(out, ", %s", chip->label);
			continue;
		}
		text_put(out, any ? ", " : before);
		put_pin_number(out, chip->part, PIN_ADDRESS, pin);
		text_printf(out, " of %s", chip->label);
		number = here;
		any = true;
	}
	return any;
}

bool put_address_pins(struct text *out, const struct plan *plan, enum stage stage, enum address_wire_kind kind, unsigned index)
{
	bool any = false;
	for (unsigned pin = 0; pin < LIMIT_ADDRESS_PINS; pin++)
		any = put_chips_of_pin(out, plan, stage, (struct address_wire){kind, index}, pin, any ? "; " : "") || any;
	return any;
}
