#include "plan/read.h"

#include <limits.h>
#include <stdio.h>
#include <string.h>

#include "base/text.h"

#define NUMBERED_BYTES 24
#define MISSING_NAMED 4
#define NO_BIT UINT_MAX

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

// Names of wires, to find the one that is meant.
struct wire_names {
	char numbered[LIMIT_STATE_BITS + LIMIT_BANK_BITS][NUMBERED_BYTES];
	const char *names[LIMIT_STATE_BITS + LIMIT_BANK_BITS + LIMIT_SIGNALS];
	size_t count;
};

static void add_numbered(struct wire_names *wires, const char *word, unsigned bits)
{
	for (unsigned bit = 0; bit < bits; bit++) {
		char *name = wires->numbered[wires->count];
		snprintf(name, NUMBERED_BYTES, "%s.%u", word, bit);
		wires->names[wires->count++] = name;
	}
}

static void add_address_names(const struct plan *plan, struct wire_names *wires)
{
	add_numbered(wires, "state", plan->machine.line.state_bits);
	add_numbered(wires, "bank", LIMIT_BANK_BITS);
	wires->names[wires->count++] = "low";
	wires->names[wires->count++] = "high";
}

static void add_data_names(const struct plan *plan, struct wire_names *wires)
{
	if (plan->machine.line.advance == ADVANCE_COUNT)
		wires->names[wires->count++] = "clear";
	else
		add_numbered(wires, "next", plan->machine.line.state_bits);
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (signal_is_data(&plan->signals[signal]))
			wires->names[wires->count++] = plan->signals[signal].name;
}

static bool has_name(const struct wire_names *wires, const char *text)
{
	for (size_t index = 0; index < wires->count; index++)
		if (strcmp(wires->names[index], text) == 0)
			return true;
	return false;
}

// `forms` says what there is for such a pin.
static void report_unknown_wire(struct reader *reader, const struct node *node, bool is_address, unsigned pin, const char *forms)
{
	struct wire_names address = {.count = 0}, data = {.count = 0};
	add_address_names(reader->plan, &address);
	add_data_names(reader->plan, &data);
	const struct wire_names *own = is_address ? &address : &data;
	diagnose(reader->diagnostics, RULE_WIRE_UNKNOWN, node->place, "%s%u: there is no wire \"%s\" to put on it", is_address ? "A" : "D",
	         pin, SHORT(node->text));
	const char *near = nearest_word(node->text, own->names, own->count);
	if (has_name(is_address ? &data : &address, node->text))
		diagnose_hint(reader->diagnostics, "\"%s\" is for %s pins", SHORT(node->text), is_address ? "data" : "address");
	else if (near != NULL)
		diagnose_hint(reader->diagnostics, "did you mean \"%s\"?", near);
	else
		diagnose_hint(reader->diagnostics, "wires are %s, and - for an open pin", forms);
}

static void report_beyond(struct reader *reader, const struct node *node, const char *pin, unsigned index, const char *word,
                          unsigned bits)
{
	diagnose(reader->diagnostics, RULE_WIRE_UNKNOWN, node->place, "%s%u: there is no \"%s\": the highest is %s.%u", pin, index,
	         SHORT(node->text), word, bits - 1);
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
	else if (parse_numbered(text, "state", &number) && number < reader->plan->machine.line.state_bits)
		*wire = (struct address_wire){ADDRESS_STATE, number};
	else if (parse_numbered(text, "bank", &number) && number < LIMIT_BANK_BITS)
		*wire = (struct address_wire){ADDRESS_BANK, number};
	else if (parse_numbered(text, "kind", &number)) {
		diagnose(reader->diagnostics, RULE_NOT_YET, node->place,
		         "A%u: \"%s\" belongs to line-frame machines, which this version does not carry out yet", pin, SHORT(text));
		return false;
	} else if (parse_numbered(text, "state", &number)) {
		report_beyond(reader, node, "A", pin, "state", reader->plan->machine.line.state_bits);
		return false;
	} else if (parse_numbered(text, "bank", &number)) {
		report_beyond(reader, node, "A", pin, "bank", LIMIT_BANK_BITS);
		return false;
	} else {
		report_unknown_wire(reader, node, true, pin, "state.N, bank.N, low, high");
		return false;
	}
	return true;
}

static bool parse_data_wire(struct reader *reader, const struct node *node, unsigned pin, struct data_wire *wire)
{
	const struct plan *plan = reader->plan;
	const bool counted = plan->machine.line.advance == ADVANCE_COUNT;
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
	else if (!counted && parse_numbered(text, "next", &number) && number < plan->machine.line.state_bits)
		*wire = (struct data_wire){DATA_NEXT, number};
	else if (strcmp(text, "step") == 0 || parse_numbered(text, "kind", &number)) {
		diagnose(reader->diagnostics, RULE_NOT_YET, node->place,
		         "D%u: \"%s\" belongs to line-frame machines, which this version does not carry out yet", pin, SHORT(text));
		return false;
	} else if (signal != SIZE_MAX) {
		diagnose(reader->diagnostics, RULE_WIRE_UNKNOWN, node->place,
		         "D%u: signal \"%s\" comes from a field of the state and has no bit in the word", pin, SHORT(text));
		return false;
	} else if (!counted && parse_numbered(text, "next", &number)) {
		report_beyond(reader, node, "D", pin, "next", plan->machine.line.state_bits);
		return false;
	} else {
		report_unknown_wire(reader, node, false, pin, counted ? "clear and the names of data signals" : "next.N and the names of data signals");
		return false;
	}
	return true;
}

// Checks a list of pins against a part's; a shorter list leaves the rest open.
static bool check_pin_count(struct reader *reader, const struct node *node, const char *pin, const struct part *part, unsigned pins)
{
	if (node->count > pins) {
		diagnose(reader->diagnostics, RULE_WIRE_OFF_PART, node->items[pins]->place,
		         "part %s has no pin %s%u: it ends at %s%u, but %zu pins are listed", SHORT(part->name), pin, pins, pin,
		         pins - 1, node->count);
		return false;
	}
	if (node->count < pins)
		diagnose(reader->diagnostics, RULE_PIN_NOT_LISTED, node->place,
		         "part %s has pins up to %s%u, but %zu are listed: the others are taken as open", SHORT(part->name), pin, pins - 1,
		         node->count);
	return true;
}

// Collects what is on no pin, for a message.
struct missing {
	struct text names;
	size_t count;
};

static void add_missing(struct missing *missing, const char *word, unsigned bit)
{
	if (missing->count < MISSING_NAMED)
		text_printf(&missing->names, "%s%s", missing->count == 0 ? "" : ", ", word);
	if (missing->count < MISSING_NAMED && bit != NO_BIT)
		text_printf(&missing->names, ".%u", bit);
	missing->count++;
}

// Adds the hint that goes with a wire that is doubled, and releases the names.
static void hint_missing(struct reader *reader, struct missing *missing, const char *where)
{
	if (missing->count > MISSING_NAMED)
		text_printf(&missing->names, " and %zu more", missing->count - MISSING_NAMED);
	if (missing->count > 0)
		diagnose_hint(reader->diagnostics, "%s %s on no %s", text_string(&missing->names), missing->count == 1 ? "is" : "are", where);
	text_release(&missing->names);
}

static unsigned address_pin_of(const struct chip *chip, struct address_wire wire)
{
	unsigned pin = 0;
	while (pin < LIMIT_ADDRESS_PINS && (chip->address[pin].kind != wire.kind || chip->address[pin].index != wire.index))
		pin++;
	return pin;
}

static void report_doubled_address(struct reader *reader, const struct node *node, const struct chip *chip, unsigned pin,
                                   unsigned first, bool all_known)
{
	struct missing missing = {.count = 0};
	diagnose(reader->diagnostics, RULE_WIRE_DOUBLED, node->items[pin]->place, "A%u: \"%s\" is on A%u of this chip already", pin,
	         SHORT(node->items[pin]->text), first);
	for (unsigned bit = 0; all_known && bit < reader->plan->machine.line.state_bits; bit++)
		if (address_pin_of(chip, (struct address_wire){ADDRESS_STATE, bit}) == LIMIT_ADDRESS_PINS)
			add_missing(&missing, "state", bit);
	hint_missing(reader, &missing, "address pin of this chip");
}

// True if no bit is on two pins. With `all_known`, the pins that are listed are all well-formed.
static bool check_address_doubled(struct reader *reader, const struct node *node, const struct chip *chip, bool all_known)
{
	bool good = true;
	for (unsigned pin = 0; pin < node->count; pin++) {
		const struct address_wire wire = chip->address[pin];
		const unsigned first = address_pin_of(chip, wire);
		if ((wire.kind != ADDRESS_STATE && wire.kind != ADDRESS_BANK) || first == pin)
			continue;
		report_doubled_address(reader, node, chip, pin, first, all_known);
		good = false;
	}
	return good;
}

void read_address_wires(struct reader *reader, const struct node *node, struct chip *chip)
{
	if (!expect_values(reader, node, "address") || !check_pin_count(reader, node, "A", chip->part, chip->part->address_pins))
		return;
	struct plan *plan = reader->plan;
	bool all_known = true;
	for (unsigned pin = 0; pin < node->count; pin++) {
		struct address_wire *wire = &chip->address[pin];
		all_known = parse_address_wire(reader, node->items[pin], pin, wire) && all_known;
		if (wire->kind == ADDRESS_BANK && wire->index >= plan->bank_bits)
			plan->bank_bits = wire->index + 1;
	}
	if (!check_address_doubled(reader, node, chip, all_known) || !all_known)
		return;
	for (unsigned bit = 0; bit < plan->machine.line.state_bits; bit++)
		if (address_pin_of(chip, (struct address_wire){ADDRESS_STATE, bit}) == LIMIT_ADDRESS_PINS)
			diagnose(reader->diagnostics, RULE_WIRE_MISSING, node->place, "state.%u is on no address pin of chip \"%s\"", bit,
			         chip->label != NULL ? chip->label : "");
}

void read_data_wires(struct reader *reader, const struct node *node, struct chip *chip)
{
	if (!expect_values(reader, node, "data") || !check_pin_count(reader, node, "D", chip->part, chip->part->data_pins))
		return;
	for (unsigned pin = 0; pin < node->count; pin++)
		parse_data_wire(reader, node->items[pin], pin, &chip->data[pin]);
}

// A data pin of a chip of the plan.
struct data_pin {
	size_t chip;
	unsigned pin;
};

// The first pin that carries a wire, from *at on. False if there is none; then *at is past the last pin.
static bool find_data_pin(const struct plan *plan, struct data_wire wanted, struct data_pin *at)
{
	for (; at->chip < plan->chip_count; at->chip++, at->pin = 0) {
		const struct chip *chip = &plan->chips[at->chip];
		for (; chip->part != NULL && at->pin < chip->part->data_pins; at->pin++)
			if (chip->data[at->pin].kind == wanted.kind && chip->data[at->pin].index == wanted.index)
				return true;
	}
	return false;
}

static bool is_wired(const struct plan *plan, struct data_wire wanted)
{
	struct data_pin at = {0, 0};
	return find_data_pin(plan, wanted, &at);
}

static const struct node *list_of(const struct node *chips, size_t chip, const char *key)
{
	return chips->items[chip]->kind == NODE_MAPPING ? node_value(chips->items[chip], key) : NULL;
}

static void hint_missing_data(struct reader *reader)
{
	const struct plan *plan = reader->plan;
	struct data_wire word[LIMIT_STATE_BITS + LIMIT_SIGNALS];
	struct missing missing = {.count = 0};
	const size_t bits = word_of(plan, word);
	for (size_t bit = 0; bit < bits; bit++) {
		if (is_wired(plan, word[bit]))
			continue;
		if (word[bit].kind == DATA_NEXT)
			add_missing(&missing, "next", word[bit].index);
		else
			add_missing(&missing, word[bit].kind == DATA_CLEAR ? "clear" : plan->signals[word[bit].index].name, NO_BIT);
	}
	hint_missing(reader, &missing, "data pin of any chip");
}

void check_data_doubled(struct reader *reader, const struct node *chips, bool all_known)
{
	const struct plan *plan = reader->plan;
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		for (unsigned pin = 0; pin < LIMIT_DATA_PINS; pin++) {
			const struct data_wire wire = plan->chips[chip].data[pin];
			struct data_pin first = {0, 0};
			if (wire.kind == DATA_OPEN || !find_data_pin(plan, wire, &first) || (first.chip == chip && first.pin == pin))
				continue;
			const struct node *node = list_of(chips, chip, "data")->items[pin];
			const char *label = plan->chips[first.chip].label;
			diagnose(reader->diagnostics, RULE_WIRE_DOUBLED, node->place, "D%u: \"%s\" is on D%u of chip \"%s\" already", pin,
			         SHORT(node->text), first.pin, label != NULL ? label : "");
			if (all_known)
				hint_missing_data(reader);
		}
}

// Reports a bit of the word that is on no pin, where the next open pin is; moves *open past it.
static void report_missing_data(struct reader *reader, const struct node *chips, struct data_wire wire, struct data_pin *open)
{
	const struct plan *plan = reader->plan;
	const bool found = find_data_pin(plan, (struct data_wire){DATA_OPEN, 0}, open);
	const size_t chip = found ? open->chip : plan->chip_count - 1;
	const struct place place = list_of(chips, chip, "data")->place;
	if (wire.kind == DATA_NEXT)
		diagnose(reader->diagnostics, RULE_WIRE_MISSING, place, "next.%u is on no data pin of any chip", wire.index);
	else if (wire.kind == DATA_CLEAR)
		diagnose(reader->diagnostics, RULE_WIRE_MISSING, place, "clear is on no data pin of any chip");
	else
		diagnose(reader->diagnostics, RULE_WIRE_MISSING, place, "signal \"%s\" is on no data pin of any chip",
		         plan->signals[wire.index].name);
	if (found)
		diagnose_hint(reader->diagnostics, "D%u of chip \"%s\" is open", open->pin++, plan->chips[chip].label);
	else
		diagnose_hint(reader->diagnostics, "no data pin is left open: add a chip");
}

static void check_banks_wired(struct reader *reader, const struct node *chips)
{
	const struct plan *plan = reader->plan;
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		for (unsigned bit = 0; bit < plan->bank_bits; bit++)
			if (address_pin_of(&plan->chips[chip], (struct address_wire){ADDRESS_BANK, bit}) == LIMIT_ADDRESS_PINS)
				diagnose(reader->diagnostics, RULE_WIRE_MISSING, list_of(chips, chip, "address")->place,
				         "bank.%u is on no address pin of chip \"%s\"", bit, plan->chips[chip].label);
}

void check_word_wired(struct reader *reader, const struct node *chips)
{
	struct data_wire word[LIMIT_STATE_BITS + LIMIT_SIGNALS];
	struct data_pin open = {0, 0};
	const size_t bits = word_of(reader->plan, word);
	for (size_t bit = 0; bit < bits; bit++)
		if (!is_wired(reader->plan, word[bit]))
			report_missing_data(reader, chips, word[bit], &open);
	check_banks_wired(reader, chips);
}
