#include "view/states.h"

#include <inttypes.h>

#include "base/text.h"
#include "view/figures.h"

// A part of the state: `bits` bits from `low` on.
struct part_view {
	const char *name;
	unsigned low, bits;
};

#define PARTS 4

// The parts of a line-frame machine's state, from bit 0 up; those that are not latched have no bits.
static void list_parts(const struct proofs *proofs, struct part_view parts[PARTS])
{
	const struct wiring wiring = wiring_of(proofs->timeline->plan);
	const struct feedback at = feedback_of(&wiring);
	parts[0] = (struct part_view){"H", 0, wiring.line.state_bits};
	parts[1] = (struct part_view){"step", at.step, at.has_step};
	parts[2] = (struct part_view){"kind", at.kind, at.kind_bits};
	parts[3] = (struct part_view){"V", at.frame, wiring.frame.state_bits};
}

static bool is_loop(const struct proofs *proofs)
{
	return proofs->timeline->plan->machine.form == FORM_LOOP;
}

static uint32_t part_value(const struct part_view *part, uint32_t state)
{
	return state >> part->low & low_bits(part->bits);
}

// Codes of kinds are short numbers; states are shown in hexadecimal.
static void put_part(struct text *out, const struct part_view *part, uint32_t value)
{
	text_printf(out, "%s ", part->name);
	if (part->name[0] == 'H' || part->name[0] == 'V')
		text_put_hex(out, value, part->bits);
	else
		text_printf(out, "%" PRIu32, value);
}

void put_state(struct text *out, const struct proofs *proofs, uint32_t state)
{
	struct part_view parts[PARTS];
	if (is_loop(proofs)) {
		text_put(out, "state ");
		text_put_hex(out, state, proofs->timeline->plan->machine.line.state_bits);
		return;
	}
	list_parts(proofs, parts);
	for (unsigned index = 0; index < PARTS; index++) {
		if (parts[index].bits == 0)
			continue;
		text_put(out, index > 0 ? ", " : "");
		put_part(out, &parts[index], part_value(&parts[index], state));
	}
}

void put_row_state(struct text *out, const struct proofs *proofs, enum stage stage, uint32_t address)
{
	const struct machine_plan *machine = &proofs->timeline->plan->machine;
	struct part_view parts[PARTS];
	if (is_loop(proofs)) {
		put_state(out, proofs, address);
		return;
	}
	list_parts(proofs, parts);
	const struct part_view *part = &parts[stage == STAGE_LINE ? 0 : PARTS - 1];
	put_part(out, part, address & low_bits(part->bits));
	if (stage == STAGE_LINE && machine->kind_bits > 0)
		text_printf(out, " of kind %" PRIu32, address >> machine->line.state_bits);
}

static const struct part_view *part_of_bit(struct part_view parts[PARTS], unsigned bit)
{
	unsigned index = PARTS - 1;
	while (index > 0 && (parts[index].bits == 0 || bit < parts[index].low))
		index--;
	return &parts[index];
}

void put_state_bit(struct text *out, const struct proofs *proofs, unsigned bit)
{
	struct part_view parts[PARTS];
	if (is_loop(proofs)) {
		text_printf(out, "bit %u", bit);
		return;
	}
	list_parts(proofs, parts);
	const struct part_view *part = part_of_bit(parts, bit);
	if (part->name[0] == 's')
		text_put(out, "the step latch");
	else
		text_printf(out, "bit %u of %s", bit - part->low, part->name);
}

json_t *state_json(const struct proofs *proofs, uint32_t state)
{
	struct part_view parts[PARTS];
	if (is_loop(proofs))
		return json_integer(state);
	json_t *object = json_object();
	list_parts(proofs, parts);
	for (unsigned index = 0; index < PARTS; index++)
		if (parts[index].bits > 0)
			json_put(&object, parts[index].name, json_integer(part_value(&parts[index], state)));
	return object;
}

void json_put_row_state(json_t **object, const struct proofs *proofs, enum stage stage, uint32_t address)
{
	const struct machine_plan *machine = &proofs->timeline->plan->machine;
	const unsigned bits = machine_stage(machine, stage)->state_bits;
	if (!is_loop(proofs))
		json_put(object, "stage", json_string(stage_name(stage)));
	json_put(object, "state", json_integer(address & low_bits(bits)));
	if (!is_loop(proofs) && stage == STAGE_LINE)
		json_put(object, "kind", json_integer(address >> bits));
}

void json_put_state_bit(json_t **object, const struct proofs *proofs, unsigned bit)
{
	struct part_view parts[PARTS];
	list_parts(proofs, parts);
	const struct part_view *part = part_of_bit(parts, bit);
	if (!is_loop(proofs))
		json_put(object, "part", json_string(part->name));
	json_put(object, "bit", json_integer(is_loop(proofs) ? bit : bit - part->low));
}
