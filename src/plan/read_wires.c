#include "plan/read.h"

#include <stdio.h>
#include <string.h>

// Splits "state.12" into its word and number. False if the text has another form.
static bool parse_numbered(const char *text, const char *word, unsigned *number)
{
	const size_t length = strlen(word);
	if (strncmp(text, word, length) != 0 || text[length] != '.')
		return false;
	unsigned high, low;
	if (!bit_range_parse(text + length + 1, &high, &low) || high != low)
		return false;
	*number = low;
	return true;
}

static void report_unknown_wire(struct reader *reader, const struct node *node, const char *pin, unsigned index, const char *forms)
{
	diagnose(reader->diagnostics, RULE_WIRE_UNKNOWN, node->place, "%s%u: there is no wire \"%s\" to put on it", pin, index, node->text);
	diagnose_hint(reader->diagnostics, "wires are %s, and - for an open pin", forms);
}

static void report_beyond(struct reader *reader, const struct node *node, const char *pin, unsigned index, const char *word,
                          unsigned bits)
{
	diagnose(reader->diagnostics, RULE_WIRE_UNKNOWN, node->place, "%s%u: there is no \"%s\": the highest is %s.%u", pin, index,
	         node->text, word, bits - 1);
}

static bool parse_address_wire(struct reader *reader, const struct node *node, unsigned pin, struct address_wire *wire)
{
	const char *text;
	unsigned number;
	if (!read_scalar(reader, node, "address", &text))
		return false;
	if (strcmp(text, "-") == 0)
		*wire = (struct address_wire){ADDRESS_OPEN, 0};
	else if (strcmp(text, "low") == 0)
		*wire = (struct address_wire){ADDRESS_LOW, 0};
	else if (strcmp(text, "high") == 0)
		*wire = (struct address_wire){ADDRESS_HIGH, 0};
	else if (parse_numbered(text, "state", &number) && number < reader->plan->machine.state_bits)
		*wire = (struct address_wire){ADDRESS_STATE, number};
	else if (parse_numbered(text, "bank", &number) && number < LIMIT_BANK_BITS)
		*wire = (struct address_wire){ADDRESS_BANK, number};
	else if (parse_numbered(text, "kind", &number)) {
		diagnose(reader->diagnostics, RULE_NOT_YET, node->place, "A%u: \"%s\" belongs to line-frame machines, which this version does not carry out yet", pin, text);
		return false;
	} else if (parse_numbered(text, "state", &number)) {
		report_beyond(reader, node, "A", pin, "state", reader->plan->machine.state_bits);
		return false;
	} else if (parse_numbered(text, "bank", &number)) {
		report_beyond(reader, node, "A", pin, "bank", LIMIT_BANK_BITS);
		return false;
	} else {
		report_unknown_wire(reader, node, "A", pin, "state.N, bank.N, low, high");
		return false;
	}
	return true;
}

static bool parse_data_wire(struct reader *reader, const struct node *node, unsigned pin, struct data_wire *wire)
{
	const struct plan *plan = reader->plan;
	const bool counted = plan->machine.advance == ADVANCE_COUNT;
	const char *text;
	unsigned number;
	if (!read_scalar(reader, node, "data", &text))
		return false;
	const size_t signal = find_signal(plan, text);
	if (strcmp(text, "-") == 0)
		*wire = (struct data_wire){DATA_OPEN, 0};
	else if (signal != SIZE_MAX && signal_is_data(&plan->signals[signal]))
		*wire = (struct data_wire){DATA_SIGNAL, (unsigned)signal};
	else if (counted && strcmp(text, "clear") == 0)
		*wire = (struct data_wire){DATA_CLEAR, 0};
	else if (!counted && parse_numbered(text, "next", &number) && number < plan->machine.state_bits)
		*wire = (struct data_wire){DATA_NEXT, number};
	else if (strcmp(text, "step") == 0 || parse_numbered(text, "kind", &number)) {
		diagnose(reader->diagnostics, RULE_NOT_YET, node->place, "D%u: \"%s\" belongs to line-frame machines, which this version does not carry out yet", pin, text);
		return false;
	} else if (signal != SIZE_MAX) {
		diagnose(reader->diagnostics, RULE_WIRE_UNKNOWN, node->place, "D%u: signal \"%s\" comes from a field of the state and has no bit in the word", pin, text);
		return false;
	} else if (!counted && parse_numbered(text, "next", &number)) {
		report_beyond(reader, node, "D", pin, "next", plan->machine.state_bits);
		return false;
	} else {
		report_unknown_wire(reader, node, "D", pin, counted ? "clear and the names of data signals" : "next.N and the names of data signals");
		return false;
	}
	return true;
}

// Checks a list of pins against a part's; a shorter list leaves the rest open.
static bool check_pin_count(struct reader *reader, const struct node *node, const char *pin, const struct part *part, unsigned pins)
{
	if (node->count > pins) {
		diagnose(reader->diagnostics, RULE_WIRE_OFF_PART, node->items[pins]->place,
		         "part %s has no pin %s%u: it ends at %s%u, but %zu pins are listed", part->name, pin, pins, pin, pins - 1, node->count);
		return false;
	}
	if (node->count < pins)
		diagnose(reader->diagnostics, RULE_PIN_NOT_LISTED, node->place,
		         "part %s has pins up to %s%u, but %zu are listed: the others are taken as open", part->name, pin, pins - 1, node->count);
	return true;
}

void read_address_wires(struct reader *reader, const struct node *node, struct chip *chip)
{
	if (!expect_kind(reader, node, NODE_LIST, "address") || !check_pin_count(reader, node, "A", chip->part, chip->part->address_pins))
		return;
	struct plan *plan = reader->plan;
	unsigned pin_of_state[LIMIT_STATE_BITS], pin_of_bank[LIMIT_BANK_BITS];
	memset(pin_of_state, 0xFF, sizeof pin_of_state);
	memset(pin_of_bank, 0xFF, sizeof pin_of_bank);
	bool good = true;
	for (unsigned pin = 0; pin < node->count; pin++) {
		struct address_wire *wire = &chip->address[pin];
		if (!parse_address_wire(reader, node->items[pin], pin, wire)) {
			good = false;
			continue;
		}
		if (wire->kind != ADDRESS_STATE && wire->kind != ADDRESS_BANK)
			continue;
		unsigned *taken = wire->kind == ADDRESS_STATE ? &pin_of_state[wire->index] : &pin_of_bank[wire->index];
		if (*taken != UINT32_MAX) {
			diagnose(reader->diagnostics, RULE_WIRE_DOUBLED, node->items[pin]->place, "A%u: \"%s\" is on A%u of this chip already", pin,
			         node->items[pin]->text, *taken);
			good = false;
		}
		*taken = pin;
		if (wire->kind == ADDRESS_BANK && wire->index >= plan->bank_bits)
			plan->bank_bits = wire->index + 1;
	}
	for (unsigned bit = 0; good && bit < plan->machine.state_bits; bit++)
		if (pin_of_state[bit] == UINT32_MAX)
			diagnose(reader->diagnostics, RULE_WIRE_MISSING, node->place, "state.%u is on no address pin of chip \"%s\"", bit,
			         chip->label != NULL ? chip->label : "");
}

void read_data_wires(struct reader *reader, const struct node *node, struct chip *chip)
{
	if (!expect_kind(reader, node, NODE_LIST, "data") || !check_pin_count(reader, node, "D", chip->part, chip->part->data_pins))
		return;
	for (unsigned pin = 0; pin < node->count; pin++) {
		struct data_wire wire;
		if (!parse_data_wire(reader, node->items[pin], pin, &wire))
			continue;
		chip->data[pin] = wire;
		if (wire.kind == DATA_OPEN)
			continue;
		for (const struct chip *other = reader->plan->chips; other <= chip; other++)
			for (unsigned at = 0; at < (other == chip ? pin : LIMIT_DATA_PINS); at++)
				if (other->data[at].kind == wire.kind && other->data[at].index == wire.index)
					diagnose(reader->diagnostics, RULE_WIRE_DOUBLED, node->items[pin]->place, "D%u: \"%s\" is on D%u of chip \"%s\" already", pin,
					         node->items[pin]->text, at, other->label != NULL ? other->label : "");
	}
}

static bool is_wired(const struct plan *plan, struct data_wire wanted)
{
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		for (unsigned pin = 0; pin < LIMIT_DATA_PINS; pin++)
			if (plan->chips[chip].data[pin].kind == wanted.kind && plan->chips[chip].data[pin].index == wanted.index)
				return true;
	return false;
}

static void check_banks_wired(struct reader *reader)
{
	const struct plan *plan = reader->plan;
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		for (unsigned bit = 0; bit < plan->bank_bits; bit++) {
			bool found = false;
			for (unsigned pin = 0; pin < LIMIT_ADDRESS_PINS; pin++)
				found = found || (plan->chips[chip].address[pin].kind == ADDRESS_BANK && plan->chips[chip].address[pin].index == bit);
			if (!found)
				diagnose(reader->diagnostics, RULE_WIRE_MISSING, plan->chips[chip].place, "bank.%u is on no address pin of chip \"%s\"", bit,
				         plan->chips[chip].label);
		}
}

void check_word_wired(struct reader *reader, const struct node *chips)
{
	const struct plan *plan = reader->plan;
	const unsigned state_bits = plan->machine.advance == ADVANCE_TABLE ? plan->machine.state_bits : 0;
	for (unsigned bit = 0; bit < state_bits; bit++)
		if (!is_wired(plan, (struct data_wire){DATA_NEXT, bit}))
			diagnose(reader->diagnostics, RULE_WIRE_MISSING, chips->place, "next.%u is on no data pin of any chip", bit);
	if (state_bits == 0 && !is_wired(plan, (struct data_wire){DATA_CLEAR, 0}))
		diagnose(reader->diagnostics, RULE_WIRE_MISSING, chips->place, "clear is on no data pin of any chip");
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (signal_is_data(&plan->signals[signal]) && !is_wired(plan, (struct data_wire){DATA_SIGNAL, (unsigned)signal}))
			diagnose(reader->diagnostics, RULE_WIRE_MISSING, chips->place, "signal \"%s\" is on no data pin of any chip",
			         plan->signals[signal].name);
	check_banks_wired(reader);
}
