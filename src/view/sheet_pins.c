// Each EEPROM's pins with their wires, drawn as the package is seen from above.
#include "base/text.h"
#include "catalogue/catalogue.h"
#include "view/figures.h"
#include "view/nets.h"
#include "view/page.h"
#include "view/sheet_parts.h"

static void put_address_wire(struct text *words, const struct plan *plan, const struct chip *chip, unsigned pin)
{
	const struct address_wire *wire = &chip->address[pin];
	switch (wire->kind) {
	case ADDRESS_OPEN: text_put(words, "GND\nunused"); break;
	case ADDRESS_LOW: text_put(words, "GND\nlow"); break;
	case ADDRESS_HIGH: text_put(words, "VCC\nhigh"); break;
	case ADDRESS_STATE:
		text_printf(words, "state.%u\nfrom ", wire->index);
		put_state_source(words, plan, chip->stage, wire->index);
		break;
	case ADDRESS_KIND:
		text_printf(words, "kind.%u\nfrom ", wire->index);
		put_kind_source(words, plan, wire->index);
		break;
	case ADDRESS_BANK: text_printf(words, "bank.%u\nfrom its jumper", wire->index); break;
	}
}

static void put_data_wire(struct text *words, const struct plan *plan, const struct chip *chip, unsigned pin)
{
	const struct stage_nets nets = nets_of_stage(plan, chip->stage);
	if (chip->data[pin].kind == DATA_OPEN) {
		text_put(words, "open");
		return;
	}
	put_data_net(words, plan, chip->data[pin]);
	text_put(words, "\nto ");
	put_data_sink(words, plan, &nets, chip->data[pin]);
}

static void put_wire(struct text *words, const struct plan *plan, const struct chip *chip, const struct package_pin *pin)
{
	switch (pin->kind) {
	case PIN_ADDRESS: put_address_wire(words, plan, chip, pin->index); break;
	case PIN_DATA: put_data_wire(words, plan, chip, pin->index); break;
	case PIN_GROUND: text_put(words, "GND"); break;
	case PIN_SUPPLY: text_put(words, "VCC\n100 nF to GND beside it"); break;
	case PIN_TIED_LOW: text_put(words, "GND"); break;
	case PIN_TIED_HIGH: text_put(words, "VCC"); break;
	case PIN_OPEN: text_put(words, "open"); break;
	}
}

// What a pin is for, so that neighbours can be told apart at a glance.
static const char *pin_class(const struct chip *chip, const struct package_pin *pin)
{
	if (pin->kind == PIN_ADDRESS)
		return chip->address[pin->index].kind == ADDRESS_BANK ? "bank" : chip->address[pin->index].kind < ADDRESS_STATE ? "tied" : "address";
	if (pin->kind == PIN_DATA)
		return chip->data[pin->index].kind == DATA_OPEN ? "open" : "data";
	return pin->kind == PIN_OPEN ? "open" : "tied";
}

static void put_wire_cell(struct text *out, const struct plan *plan, const struct chip *chip, const struct package_pin *pin)
{
	struct text words = {0};
	text_printf(out, "<td class=\"wire %s\">", pin_class(chip, pin));
	put_wire(&words, plan, chip, pin);
	page_words(out, &words);
	text_put(out, "</td>");
}

// The left side of the package counts down, the right side up.
static void put_package_row(struct text *out, const struct plan *plan, const struct chip *chip, unsigned left)
{
	const struct part *part = chip->part;
	const unsigned right = part->pin_count - 1 - left;
	text_put(out, "<tr>");
	put_wire_cell(out, plan, chip, &part->pins[left]);
	text_printf(out, "<td class=\"pin\">%s</td><th scope=\"row\" class=\"pin\">%u</th><th scope=\"row\" class=\"pin\">%u</th><td class=\"pin\">%s</td>",
	            part->pins[left].name, left + 1, right + 1, part->pins[right].name);
	put_wire_cell(out, plan, chip, &part->pins[right]);
	text_put(out, "</tr>\n");
}

static void put_package(struct text *out, const struct plan *plan, const struct chip *chip)
{
	text_put(out, "<div class=\"wide\"><table class=\"package\">\n");
	page_element(out, "caption", "", "%s from above, the notch at the top", chip->part->package);
	text_put(out, "<thead><tr><th scope=\"col\">wire</th><th scope=\"col\">name</th><th scope=\"col\">pin</th><th scope=\"col\">pin</th>"
	              "<th scope=\"col\">name</th><th scope=\"col\">wire</th></tr></thead>\n<tbody>\n");
	for (unsigned row = 0; row < chip->part->pin_count / 2; row++)
		put_package_row(out, plan, chip, row);
	text_put(out, "</tbody></table></div>\n");
	page_element(out, "p", " class=\"source\"", "Pinout: %s.", chip->part->pinout_source);
}

static void put_named_row(struct text *out, const struct plan *plan, const struct chip *chip, struct package_pin pin)
{
	text_printf(out, "<tr><th scope=\"row\" class=\"pin\">%c%u</th>", pin.kind == PIN_ADDRESS ? 'A' : 'D', pin.index);
	put_wire_cell(out, plan, chip, &pin);
	text_put(out, "</tr>\n");
}

static void put_names(struct text *out, const struct plan *plan, const struct chip *chip)
{
	page_element(out, "p", "", "The catalogue does not know the package of %s: its pins are here by name. Look their numbers up in its data sheet, and "
	             "tie its enables active, writing and programming off.", chip->part->name);
	text_put(out, "<div class=\"wide\"><table class=\"package names\">\n<thead><tr><th scope=\"col\">name</th><th scope=\"col\">wire</th></tr></thead>\n<tbody>\n");
	for (unsigned pin = 0; pin < chip->part->address_pins; pin++)
		put_named_row(out, plan, chip, (struct package_pin){NULL, PIN_ADDRESS, pin});
	for (unsigned pin = 0; pin < chip->part->data_pins; pin++)
		put_named_row(out, plan, chip, (struct package_pin){NULL, PIN_DATA, pin});
	text_put(out, "</tbody></table></div>\n");
}

static void put_chip(struct text *out, const struct plan *plan, const struct chip *chip)
{
	struct text words = {0};
	text_put(out, "<div class=\"chip\">\n");
	text_printf(&words, "%s: %s, ", chip->label, chip->part->name);
	text_put_time_in(&words, chip->access_s, UNIT_NANOSECONDS);
	if (plan->machine.form == FORM_LINE_FRAME)
		text_printf(&words, ", %s stage", stage_name(chip->stage));
	page_element_of(out, "h3", "", &words);
	if (chip->part->pins != NULL)
		put_package(out, plan, chip);
	else
		put_names(out, plan, chip);
	text_put(out, "</div>\n");
}

void sheet_pins(struct text *out, const struct plan *plan)
{
	page_element(out, "p", "", "GND and VCC are ground and the supply. The chips are read all the time: enables low, writing and programming off. An "
	             "address pin that nothing drives must not float.");
	text_put(out, "<div class=\"chips\">\n");
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		put_chip(out, plan, &plan->chips[chip]);
	text_put(out, "</div>\n");
}
