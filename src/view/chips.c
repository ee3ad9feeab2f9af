#include "view/chips.h"

#include "base/text.h"
#include "catalogue/catalogue.h"
#include "plan/plan.h"
#include "view/figures.h"

#define PIN_INDENT 6
#define PIN_GAP 2

// Puts a wire's name; `open` for a pin to which nothing is wired.
static void put_address_wire(struct text *out, const struct address_wire *wire, const char *open)
{
	switch (wire->kind) {
	case ADDRESS_OPEN: text_put(out, open); break;
	case ADDRESS_LOW: text_put(out, "low"); break;
	case ADDRESS_HIGH: text_put(out, "high"); break;
	case ADDRESS_STATE: text_printf(out, "state.%u", wire->index); break;
	case ADDRESS_KIND: text_printf(out, "kind.%u", wire->index); break;
	case ADDRESS_BANK: text_printf(out, "bank.%u", wire->index); break;
	}
}

static void put_data_wire(struct text *out, const struct plan *plan, const struct data_wire *wire)
{
	switch (wire->kind) {
	case DATA_OPEN: text_put(out, "-"); break;
	case DATA_NEXT: text_printf(out, "next.%u", wire->index); break;
	case DATA_KIND: text_printf(out, "kind.%u", wire->index); break;
	case DATA_STEP: text_put(out, "step"); break;
	case DATA_CLEAR: text_put(out, "clear"); break;
	case DATA_SIGNAL: text_put(out, plan->signals[wire->index].name); break;
	}
}

// Puts a pin and its wire, which are not parted, on the line that has `used` characters, or on the next. Empties `pin`.
static void put_pin(struct text *out, struct text *pin, size_t *used)
{
	if (*used > PIN_INDENT && *used + PIN_GAP + pin->length > TERMINAL_CHARACTERS) {
		text_put(out, "\n");
		*used = 0;
	}
	const size_t spaces = *used == 0 ? PIN_INDENT : PIN_GAP;
	text_put_repeated(out, ' ', spaces);
	text_put(out, text_string(pin));
	*used += spaces + pin->length;
	out->failed = out->failed || pin->failed;
	pin->length = 0;
	text_put(pin, "");
}

static void put_pins(struct text *out, const struct plan *plan, const struct chip *chip)
{
	struct text pin = {0};
	size_t used = 0;
	for (unsigned index = 0; index < chip->part->address_pins; index++) {
		text_printf(&pin, "A%u ", index);
		put_address_wire(&pin, &chip->address[index], "open (tie low)");
		put_pin(out, &pin, &used);
	}
	text_put(out, "\n");
	used = 0;
	for (unsigned index = 0; index < chip->part->data_pins; index++) {
		text_printf(&pin, "D%u ", index);
		put_data_wire(&pin, plan, &chip->data[index]);
		put_pin(out, &pin, &used);
	}
	text_put(out, "\n");
	text_release(&pin);
}

void view_chips(struct text *out, const struct plan *plan)
{
	for (size_t index = 0; index < plan->chip_count; index++) {
		const struct chip *chip = &plan->chips[index];
		text_printf(out, "chip %s: %s, ", chip->label, chip->part->name);
		text_put_time_in(out, chip->access_s, UNIT_NANOSECONDS);
		if (plan->machine.form == FORM_LINE_FRAME)
			text_printf(out, ", %s stage", stage_name(chip->stage));
		text_put(out, "\n");
		put_pins(out, plan, chip);
	}
}

// Appends the words and empties them.
static void append_name(json_t **names, struct text *name)
{
	json_append(names, name->failed ? NULL : json_string(text_string(name)));
	name->length = 0;
	text_put(name, "");
}

json_t *view_address_json(const struct chip *chip)
{
	json_t *names = json_array();
	struct text name = {0};
	for (unsigned pin = 0; pin < chip->part->address_pins; pin++) {
		put_address_wire(&name, &chip->address[pin], "-");
		append_name(&names, &name);
	}
	text_release(&name);
	return names;
}

json_t *view_data_json(const struct plan *plan, const struct chip *chip)
{
	json_t *names = json_array();
	struct text name = {0};
	for (unsigned pin = 0; pin < chip->part->data_pins; pin++) {
		put_data_wire(&name, plan, &chip->data[pin]);
		append_name(&names, &name);
	}
	text_release(&name);
	return names;
}

json_t *view_chips_json(const struct plan *plan)
{
	json_t *chips = json_array();
	for (size_t index = 0; index < plan->chip_count; index++) {
		const struct chip *chip = &plan->chips[index];
		json_t *entry = json_object();
		json_put(&entry, "label", json_string(chip->label));
		json_put(&entry, "part", json_string(chip->part->name));
		if (plan->machine.form == FORM_LINE_FRAME)
			json_put(&entry, "stage", json_string(stage_name(chip->stage)));
		json_put_time(&entry, "access", chip->access_s, UNIT_NANOSECONDS);
		json_put(&entry, "address", view_address_json(chip));
		json_put(&entry, "data", view_data_json(plan, chip));
		json_append(&chips, entry);
	}
	return chips;
}
