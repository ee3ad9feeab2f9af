#include "plan/set.h"

#include <stdio.h>
#include <string.h>

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "plan/read.h"

// Bank 0's plan, and another of the set that is held against it.
struct comparison {
	const struct plan *first, *second;
	const char *first_path, *second_path; // as the set has them
	struct diagnostics *diagnostics;
};

// Reports that `what` is one thing in the second plan and another in the first; false.
static bool differ(const struct comparison *compared, struct place second_place, struct place first_place, const char *what,
                   const char *second_value, const char *first_value)
{
	diagnose(compared->diagnostics, RULE_SET_DISAGREES, second_place, "%s: %s in \"%s\", but %s in \"%s\" of the same set", what,
	         second_value, compared->second_path, first_value, compared->first_path);
	diagnose_also(compared->diagnostics, first_place, "%s: %s here", what, first_value);
	return false;
}

// The same for words of which the plans have one each.
static bool same_word(const struct comparison *compared, struct place second_place, struct place first_place, const char *what,
                      const char *second, const char *first)
{
	return strcmp(first, second) == 0 || differ(compared, second_place, first_place, what, second, first);
}

#define VALUE_BYTES 48

// The same for counts: "3 bits in …".
static bool same_count(const struct comparison *compared, struct place second_place, struct place first_place, const char *what,
                       const char *unit, size_t second, size_t first)
{
	char second_text[VALUE_BYTES], first_text[VALUE_BYTES];
	snprintf(second_text, sizeof second_text, "%zu %s%s", second, unit, second == 1 ? "" : "s");
	snprintf(first_text, sizeof first_text, "%zu %s%s", first, unit, first == 1 ? "" : "s");
	return same_word(compared, second_place, first_place, what, second_text, first_text);
}

static const char *form_word(const struct machine_plan *machine)
{
	return machine->form == FORM_LOOP ? "loop" : "line-frame";
}

static const char *outputs_word(const struct stage_plan *stage)
{
	return stage->outputs == OUTPUTS_REGISTERED ? "registered" : "direct";
}

static const char *advance_word(const struct stage_plan *stage)
{
	return stage->advance == ADVANCE_TABLE ? "table" : stage->clear == CLEAR_SYNC ? "count with clear: sync" : "count with clear: async";
}

#define WHAT_BYTES 192 // room for a label or a signal's name

// "state of the line stage", or without the stage where there is one.
static const char *of_stage(const struct machine_plan *machine, enum stage stage, const char *word, char what[WHAT_BYTES])
{
	if (machine->form == FORM_LOOP)
		return word;
	snprintf(what, WHAT_BYTES, "%s of the %s stage", word, stage_name(stage));
	return what;
}

static bool same_stage(const struct comparison *compared, enum stage stage)
{
	const struct machine_plan *machine = &compared->first->machine;
	const struct stage_plan *first = machine_stage(machine, stage), *second = machine_stage(&compared->second->machine, stage);
	char what[WHAT_BYTES];
	return same_count(compared, second->place, first->place, of_stage(machine, stage, "state", what), "bit", second->state_bits,
	                  first->state_bits) &&
	       same_word(compared, second->place, first->place, of_stage(machine, stage, "outputs", what), outputs_word(second),
	                 outputs_word(first)) &&
	       same_word(compared, second->place, first->place, of_stage(machine, stage, "advance", what), advance_word(second),
	                 advance_word(first));
}

static bool same_machine(const struct comparison *compared)
{
	const struct machine_plan *first = &compared->first->machine, *second = &compared->second->machine;
	if (!same_word(compared, second->place, first->place, "form", form_word(second), form_word(first)))
		return false;
	for (unsigned stage = 0; stage < machine_stages(first); stage++)
		if (!same_stage(compared, (enum stage)stage))
			return false;
	if (same_count(compared, second->place, first->place, "kind", "bit", second->kind_bits, first->kind_bits))
		return true;
	const unsigned most = first->kind_bits > second->kind_bits ? first->kind_bits : second->kind_bits;
	diagnose_hint(compared->diagnostics, "write kind: %u bit%s in both machines", most, most == 1 ? "" : "s");
	return false;
}

// The data signals of a stage's word, in their order; returns how many.
static size_t word_signals(const struct plan *plan, enum stage stage, const struct signal **signals)
{
	size_t count = 0;
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (signal_is_data(&plan->signals[signal]) && plan->signals[signal].stage == stage)
			signals[count++] = &plan->signals[signal];
	return count;
}

static struct place place_of(const struct plan *plan, const struct signal *signal)
{
	return signal != NULL ? signal->place : plan->signal_count > 0 ? plan->signals[plan->signal_count - 1].place : plan->machine.place;
}

static const char *name_of(const struct signal *signal)
{
	return signal != NULL ? signal->name : "none";
}

static bool same_word_signals(const struct comparison *compared, enum stage stage)
{
	const struct signal *first[LIMIT_SIGNALS + 1] = {NULL}, *second[LIMIT_SIGNALS + 1] = {NULL};
	const size_t first_count = word_signals(compared->first, stage, first);
	const size_t second_count = word_signals(compared->second, stage, second);
	char word[VALUE_BYTES], what[WHAT_BYTES];
	for (size_t index = 0; index < first_count || index < second_count; index++) {
		snprintf(word, sizeof word, "signal %zu in the word", index + 1);
		if (!same_word(compared, place_of(compared->second, second[index]), place_of(compared->first, first[index]),
		               of_stage(&compared->first->machine, stage, word, what), name_of(second[index]), name_of(first[index])))
			return false;
	}
	return true;
}

// "bits 3..2 with codes 1, 5": what a decoder on the latch is wired to.
static void put_decoding(struct text *text, const struct plan *plan, const struct signal *signal)
{
	if (signal == NULL || signal_is_data(signal)) {
		text_put(text, "no signal from a field");
		return;
	}
	const struct field *field = &plan->machine.fields[signal->field];
	if (field->high > field->low)
		text_printf(text, "bits %u..%u", field->high, field->low);
	else
		text_printf(text, "bit %u", field->low);
	text_put(text, signal->auto_codes ? " with codes: auto" : signal->code_count == 1 ? " with code " : " with codes ");
	for (size_t code = 0; code < signal->code_count; code++)
		text_printf(text, "%s%u", code > 0 ? ", " : "", (unsigned)signal->codes[code]);
}

// A signal of either plan that comes from a field must come from the same bits and codes in the other.
static bool same_decoding(const struct comparison *compared, const char *name)
{
	const struct plan *plans[2] = {compared->first, compared->second};
	const struct signal *signals[2];
	struct text decodings[2] = {{0}, {0}};
	char what[WHAT_BYTES];
	for (size_t plan = 0; plan < 2; plan++) {
		const size_t index = find_signal(plans[plan], name);
		signals[plan] = index != SIZE_MAX ? &plans[plan]->signals[index] : NULL;
		put_decoding(&decodings[plan], plans[plan], signals[plan]);
	}
	snprintf(what, sizeof what, "signal \"%s\"", name);
	bool same = !decodings[0].failed && !decodings[1].failed;
	if (!same)
		diagnose(compared->diagnostics, RULE_OUT_OF_MEMORY, (struct place){compared->second->source, 0, 0}, "memory is out");
	else
		same = same_word(compared, place_of(plans[1], signals[1]), place_of(plans[0], signals[0]), what, text_string(&decodings[1]),
		                 text_string(&decodings[0]));
	text_release(&decodings[0]);
	text_release(&decodings[1]);
	return same;
}

static bool same_signals(const struct comparison *compared)
{
	const struct plan *plans[2] = {compared->first, compared->second};
	for (unsigned stage = 0; stage < machine_stages(&plans[0]->machine); stage++)
		if (!same_word_signals(compared, (enum stage)stage))
			return false;
	for (size_t plan = 0; plan < 2; plan++)
		for (size_t signal = 0; signal < plans[plan]->signal_count; signal++)
			if (!signal_is_data(&plans[plan]->signals[signal]) && !same_decoding(compared, plans[plan]->signals[signal].name))
				return false;
	return true;
}

static void put_speed(struct text *text, struct fraction access_s)
{
	struct fraction access_ns;
	const bool fits = fraction_multiply(access_s, fraction_whole(1000000000), &access_ns);
	text_put_fraction(text, fits ? access_ns : access_s);
	text_put(text, fits ? " ns" : " s");
}

static bool same_speed(const struct comparison *compared, const struct chip *first, const struct chip *second)
{
	char what[WHAT_BYTES];
	struct text second_speed = {0}, first_speed = {0};
	if (fraction_compare(first->access_s, second->access_s) == 0)
		return true;
	put_speed(&second_speed, second->access_s);
	put_speed(&first_speed, first->access_s);
	snprintf(what, sizeof what, "speed of chip \"%s\"", first->label);
	differ(compared, second->place, first->place, what, text_string(&second_speed), text_string(&first_speed));
	text_release(&second_speed);
	text_release(&first_speed);
	return false;
}

// Each plan may have a part of its own of the same name.
static bool same_part(const struct comparison *compared, const struct chip *first, const struct chip *second)
{
	char what[WHAT_BYTES];
	snprintf(what, sizeof what, "part of chip \"%s\"", first->label);
	return same_word(compared, second->place, first->place, what, second->part->name, first->part->name) &&
	       same_count(compared, second->place, first->place, what, "address pin", second->part->address_pins,
	                  first->part->address_pins) &&
	       same_count(compared, second->place, first->place, what, "data pin", second->part->data_pins, first->part->data_pins);
}

static const char *pin_value(const char *wire)
{
	return strcmp(wire, "-") == 0 ? "nothing" : wire;
}

static bool same_pins(const struct comparison *compared, const struct chip *first, const struct chip *second)
{
	char what[WHAT_BYTES], second_name[WIRE_NAME_BYTES], first_name[WIRE_NAME_BYTES];
	for (unsigned pin = 0; pin < first->part->address_pins; pin++) {
		snprintf(what, sizeof what, "A%u of chip \"%s\"", pin, first->label);
		if (!same_word(compared, second->place, first->place, what,
		               pin_value(address_wire_name(second->address[pin], second_name)),
		               pin_value(address_wire_name(first->address[pin], first_name))))
			return false;
	}
	for (unsigned pin = 0; pin < first->part->data_pins; pin++) {
		snprintf(what, sizeof what, "D%u of chip \"%s\"", pin, first->label);
		if (!same_word(compared, second->place, first->place, what,
		               pin_value(data_wire_name(compared->second, second->data[pin], second_name)),
		               pin_value(data_wire_name(compared->first, first->data[pin], first_name))))
			return false;
	}
	return true;
}

static bool same_chip(const struct comparison *compared, size_t index)
{
	const struct chip *first = &compared->first->chips[index], *second = &compared->second->chips[index];
	char what[WHAT_BYTES];
	snprintf(what, sizeof what, "label of chip %zu", index + 1);
	if (!same_word(compared, second->place, first->place, what, second->label, first->label))
		return false;
	snprintf(what, sizeof what, "stage of chip \"%s\"", first->label);
	return same_word(compared, second->place, first->place, what, stage_name(second->stage), stage_name(first->stage)) &&
	       same_part(compared, first, second) && same_speed(compared, first, second) && same_pins(compared, first, second);
}

static bool same_chips(const struct comparison *compared)
{
	const struct plan *first = compared->first, *second = compared->second;
	if (!same_count(compared, second->chips[0].place, first->chips[0].place, "chips", "chip", second->chip_count, first->chip_count))
		return false;
	for (size_t chip = 0; chip < first->chip_count; chip++)
		if (!same_chip(compared, chip))
			return false;
	return true;
}

bool set_plans_agree(const struct set *set, const struct plan *const *plans, struct diagnostics *diagnostics)
{
	bool agree = true;
	for (size_t bank = 1; bank < set->bank_count; bank++) {
		const struct comparison compared = {plans[0], plans[bank], set->banks[0].path, set->banks[bank].path, diagnostics};
		agree = same_machine(&compared) && same_signals(&compared) && same_chips(&compared) && agree;
	}
	return agree;
}
