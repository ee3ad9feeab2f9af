#include "plan/read.h"

#include <stdio.h>

size_t word_of(const struct plan *plan, enum stage stage, struct data_wire *word)
{
	const struct stage_plan *stage_plan = machine_stage(&plan->machine, stage);
	const bool line_frame = plan->machine.form == FORM_LINE_FRAME;
	size_t count = 0;
	for (unsigned bit = 0; stage_plan->advance == ADVANCE_TABLE && bit < stage_plan->state_bits; bit++)
		word[count++] = (struct data_wire){DATA_NEXT, bit};
	for (unsigned bit = 0; line_frame && stage == STAGE_FRAME && bit < plan->machine.kind_bits; bit++)
		word[count++] = (struct data_wire){DATA_KIND, bit};
	if (line_frame && stage == STAGE_LINE)
		word[count++] = (struct data_wire){DATA_STEP, 0};
	if (stage_plan->advance == ADVANCE_COUNT)
		word[count++] = (struct data_wire){DATA_CLEAR, 0};
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (signal_is_data(&plan->signals[signal]) && plan->signals[signal].stage == stage)
			word[count++] = (struct data_wire){DATA_SIGNAL, (unsigned)signal};
	return count;
}

size_t address_of(const struct plan *plan, enum stage stage, unsigned bank_bits, struct address_wire *bits)
{
	size_t count = 0;
	for (unsigned bit = 0; bit < machine_stage(&plan->machine, stage)->state_bits; bit++)
		bits[count++] = (struct address_wire){ADDRESS_STATE, bit};
	for (unsigned bit = 0; stage == STAGE_LINE && bit < plan->machine.kind_bits; bit++)
		bits[count++] = (struct address_wire){ADDRESS_KIND, bit};
	for (unsigned bit = 0; bit < bank_bits; bit++)
		bits[count++] = (struct address_wire){ADDRESS_BANK, bit};
	return count;
}

static const char *numbered(const char *word, unsigned number, char name[WIRE_NAME_BYTES])
{
	snprintf(name, WIRE_NAME_BYTES, "%s.%u", word, number);
	return name;
}

const char *data_wire_name(const struct plan *plan, struct data_wire wire, char name[WIRE_NAME_BYTES])
{
	switch (wire.kind) {
	case DATA_NEXT:
		return numbered("next", wire.index, name);
	case DATA_KIND:
		return numbered("kind", wire.index, name);
	case DATA_STEP:
		return "step";
	case DATA_CLEAR:
		return "clear";
	case DATA_SIGNAL:
		return plan->signals[wire.index].name;
	case DATA_OPEN:
		break;
	}
	return "-";
}

const char *address_wire_name(struct address_wire wire, char name[WIRE_NAME_BYTES])
{
	switch (wire.kind) {
	case ADDRESS_STATE:
		return numbered("state", wire.index, name);
	case ADDRESS_KIND:
		return numbered("kind", wire.index, name);
	case ADDRESS_BANK:
		return numbered("bank", wire.index, name);
	case ADDRESS_LOW:
		return "low";
	case ADDRESS_HIGH:
		return "high";
	case ADDRESS_OPEN:
		break;
	}
	return "-";
}
