#include "plan/read.h"

#include <limits.h>
#include <stdio.h>
#include <string.h>

#include "base/text.h"

#define MISSING_NAMED 4

const struct shape address_wire_shape = {.kind = SHAPE_TEXT, .pattern = "(state|kind|bank)\\.[0-9]+|low|high|-"};
const struct shape data_wire_shape = {
	.kind = SHAPE_TEXT, .pattern = "(next|kind)\\.[0-9]+|-|" IDENTIFIER_PATTERN, .also = ALSO_TRUTH,
};

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
	char numbered[LIMIT_WORD_BITS][WIRE_NAME_BYTES];
	const char *names[LIMIT_WORD_BITS];
	size_t count;
};

// How many bank bits may be wired.
static unsigned bank_limit(const struct reader *reader)
{
	return reader->set_bits > 0 ? reader->set_bits : LIMIT_BANK_BITS;
}

static void list_address_names(const struct reader *reader, enum stage stage, struct wire_names *wires)
{
	struct address_wire bits[LIMIT_ADDRESS_BITS + 2];
	size_t count = address_of(reader->plan, stage, bank_limit(reader), bits);
	bits[count++] = (struct address_wire){ADDRESS_LOW, 0};
	bits[count++] = (struct address_wire){ADDRESS_HIGH, 0};
	for (wires->count = 0; wires->count < count; wires->count++)
		wires->names[wires->count] = address_wire_name(bits[wires->count], wires->numbered[wires->count]);
}

static void list_data_names(const struct reader *reader, enum stage stage, struct wire_names *wires)
{
	struct data_wire word[LIMIT_WORD_BITS];
	const size_t count = word_of(reader->plan, stage, word);
	for (wires->count = 0; wires->count < count; wires->count++)
		wires->names[wires->count] = data_wire_name(reader->plan, word[wires->count], wires->numbered[wires->count]);
}

static void list_names(const struct reader *reader, enum stage stage, bool is_address, struct wire_names *wires)
{
	if (is_address)
		list_address_names(reader, stage, wires);
	else
		list_data_names(reader, stage, wires);
}

static bool has_name(const struct wire_names *wires, const char *text)
{
	for (size_t index = 0; index < wires->count; index++)
		if (strcmp(wires->names[index], text) == 0)
			return true;
	return false;
}

// "next.N, step and the names of the line stage's data signals".
static void hint_wires(struct reader *reader, enum stage stage, bool is_address)
{
	const struct machine_plan *machine = &reader->plan->machine;
	const bool loop = machine->form == FORM_LOOP, counts = machine_stage(machine, stage)->advance == ADVANCE_COUNT;
	const char *words[3], *kind = machine->kind_bits > 0 ? "kind.N" : NULL;
	size_t count = 0;
	if (is_address) {
		diagnose_hint(reader->diagnostics, "wires are state.N, %sbank.N, low, high, and - for an open pin",
		              stage == STAGE_LINE && kind != NULL ? "kind.N, " : "");
		return;
	}
	if (!counts)
		words[count++] = "next.N";
	if (!loop && (stage == STAGE_LINE || kind != NULL))
		words[count++] = stage == STAGE_LINE ? "step" : kind;
	if (counts)
		words[count++] = "clear";
	struct text list = {0};
	for (size_t word = 0; word < count; word++)
		text_printf(&list, "%s%s", word > 0 ? ", " : "", words[word]);
	diagnose_hint(reader->diagnostics, "wires are %s and the names of %sdata signals, and - for an open pin", text_string(&list),
	              loop ? "" : stage == STAGE_LINE ? "the line stage's " : "the frame stage's ");
	text_release(&list);
}

static void report_unknown_wire(struct reader *reader, const struct node *node, bool is_address, unsigned pin, enum stage stage)
{
	const struct machine_plan *machine = &reader->plan->machine;
	const enum stage other = stage == STAGE_LINE && machine->form == FORM_LINE_FRAME ? STAGE_FRAME : STAGE_LINE;
	struct wire_names own, opposite, elsewhere;
	unsigned number;
	list_names(reader, stage, is_address, &own);
	list_names(reader, stage, !is_address, &opposite);
	list_names(reader, other, is_address, &elsewhere);
	diagnose(reader->diagnostics, RULE_WIRE_UNKNOWN, node->place, "%s%u: there is no wire \"%s\" to put on it", is_address ? "A" : "D",
	         pin, SHORT(node->text));
	const char *near = nearest_word(node->text, own.names, own.count);
	const bool is_kind = parse_numbered(node->text, "kind", &number);
	if (machine->form == FORM_LOOP && (is_kind || strcmp(node->text, "step") == 0))
		diagnose_hint(reader->diagnostics, "\"%s\" belongs to line-frame machines", SHORT(node->text));
	else if (machine->kind_bits == 0 && is_kind)
		diagnose_hint(reader->diagnostics, "the kind has no bits, as one line type needs none");
	else if (has_name(&opposite, node->text))
		diagnose_hint(reader->diagnostics, "\"%s\" is for %s pins", SHORT(node->text), is_address ? "data" : "address");
	else if (has_name(&elsewhere, node->text))
		diagnose_hint(reader->diagnostics, "\"%s\" is a wire of the %s stage, and this chip is of the %s stage", SHORT(node->text),
		              stage_name(other), stage_name(stage));
	else if (near != NULL)
		diagnose_hint(reader->diagnostics, "did you mean \"%s\"?", near);
	else
		hint_wires(reader, stage, is_address);
}

static void report_beyond(struct reader *reader, const struct node *node, const char *pin, unsigned index, unsigned bits)
{
	diagnose(reader->diagnostics, RULE_WIRE_UNKNOWN, node->place, "%s%u: there is no \"%s\": the highest is %.*s.%u", pin, index,
	         SHORT(node->text), (int)strcspn(node->text, "."), SHORT(node->text), bits - 1);
}

// Reads what a wire of an address pin is, whether the machine has it or not. False if it has another form.
static bool parse_address_text(const char *text, struct address_wire *wire)
{
	unsigned number = 0;
	if (strcmp(text, "-") == 0)
		wire->kind = ADDRESS_OPEN;
	else if (strcmp(text, "low") == 0)
		wire->kind = ADDRESS_LOW;
	else if (strcmp(text, "high") == 0)
		wire->kind = ADDRESS_HIGH;
	else if (parse_numbered(text, "state", &number))
		wire->kind = ADDRESS_STATE;
	else if (parse_numbered(text, "kind", &number))
		wire->kind = ADDRESS_KIND;
	else if (parse_numbered(text, "bank", &number))
		wire->kind = ADDRESS_BANK;
	else
		return false;
	wire->index = number;
	return true;
}

// How many bits of that kind address a stage; those of other kinds are as many as one likes.
static unsigned address_bits_like(const struct reader *reader, enum stage stage, struct address_wire wire)
{
	struct address_wire bits[LIMIT_ADDRESS_BITS];
	const size_t count = address_of(reader->plan, stage, bank_limit(reader), bits);
	unsigned found = 0;
	if (wire.kind == ADDRESS_OPEN || wire.kind == ADDRESS_LOW || wire.kind == ADDRESS_HIGH)
		return UINT_MAX;
	for (size_t bit = 0; bit < count; bit++)
		found += bits[bit].kind == wire.kind;
	return found;
}

static bool parse_address_wire(struct reader *reader, const struct node *node, unsigned pin, struct chip *chip)
{
	const char *text;
	struct address_wire wire;
	if (!read_scalar(reader, node, "address", &text))
		return false;
	const bool formed = parse_address_text(text, &wire);
	const unsigned bits = formed ? address_bits_like(reader, chip->stage, wire) : 0;
	if (formed && wire.index < bits) {
		chip->address[pin] = wire;
		return true;
	}
	if (bits == 0) {
		report_unknown_wire(reader, node, true, pin, chip->stage);
		return false;
	}
	report_beyond(reader, node, "A", pin, bits);
	if (wire.kind == ADDRESS_BANK && reader->set_bits > 0)
		diagnose_hint(reader->diagnostics, "the set has %u bank bit%s", bits, bits == 1 ? "" : "s");
	return false;
}

// The same for data pins.
static bool parse_data_text(const struct plan *plan, const char *text, struct data_wire *wire)
{
	unsigned number = 0;
	const size_t signal = find_signal(plan, text);
	if (strcmp(text, "-") == 0)
		wire->kind = DATA_OPEN;
	else if (strcmp(text, "step") == 0)
		wire->kind = DATA_STEP;
	else if (strcmp(text, "clear") == 0)
		wire->kind = DATA_CLEAR;
	else if (parse_numbered(text, "next", &number))
		wire->kind = DATA_NEXT;
	else if (parse_numbered(text, "kind", &number))
		wire->kind = DATA_KIND;
	else if (signal != SIZE_MAX)
		wire->kind = DATA_SIGNAL;
	else
		return false;
	wire->index = signal != SIZE_MAX ? (unsigned)signal : number;
	return true;
}

// Counts the bits of that kind in a stage's word; *found: the wire is one of them, or an open pin.
static unsigned word_bits_like(const struct plan *plan, enum stage stage, struct data_wire wire, bool *found)
{
	struct data_wire word[LIMIT_WORD_BITS];
	const size_t count = word_of(plan, stage, word);
	unsigned bits = 0;
	*found = wire.kind == DATA_OPEN;
	for (size_t bit = 0; bit < count; bit++) {
		bits += word[bit].kind == wire.kind;
		*found = *found || (word[bit].kind == wire.kind && word[bit].index == wire.index);
	}
	return bits;
}

static void parse_data_wire(struct reader *reader, const struct node *node, unsigned pin, struct chip *chip)
{
	const struct plan *plan = reader->plan;
	const char *text;
	struct data_wire wire;
	if (!read_scalar(reader, node, "data", &text))
		return;
	bool found = false;
	const bool formed = parse_data_text(plan, text, &wire);
	const unsigned bits = formed ? word_bits_like(plan, chip->stage, wire, &found) : 0;
	if (found)
		chip->data[pin] = wire;
	else if (formed && wire.kind == DATA_SIGNAL && !signal_is_data(&plan->signals[wire.index]))
		diagnose(reader->diagnostics, RULE_WIRE_UNKNOWN, node->place,
		         "D%u: signal \"%s\" comes from a field of the state and has no bit in the word", pin, SHORT(text));
	else if (formed && wire.kind != DATA_SIGNAL && bits > 0)
		report_beyond(reader, node, "D", pin, bits);
	else
		report_unknown_wire(reader, node, false, pin, chip->stage);
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

static void add_missing(struct missing *missing, const char *name)
{
	if (missing->count < MISSING_NAMED)
		text_printf(&missing->names, "%s%s", missing->count == 0 ? "" : ", ", name);
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

static bool is_bit(struct address_wire wire)
{
	return wire.kind == ADDRESS_STATE || wire.kind == ADDRESS_KIND || wire.kind == ADDRESS_BANK;
}

static void report_doubled_address(struct reader *reader, const struct node *node, const struct chip *chip, unsigned pin,
                                   unsigned first, bool all_known)
{
	struct missing missing = {.count = 0};
	struct address_wire bits[LIMIT_ADDRESS_BITS];
	char name[WIRE_NAME_BYTES];
	const size_t count = address_of(reader->plan, chip->stage, reader->set_bits, bits);
	diagnose(reader->diagnostics, RULE_WIRE_DOUBLED, node->items[pin]->place, "A%u: \"%s\" is on A%u of this chip already", pin,
	         SHORT(node->items[pin]->text), first);
	for (size_t bit = 0; all_known && bit < count; bit++)
		if (address_pin_of(chip, bits[bit]) == LIMIT_ADDRESS_PINS)
			add_missing(&missing, address_wire_name(bits[bit], name));
	hint_missing(reader, &missing, "address pin of this chip");
}

// True if no bit is on two pins. With `all_known`, the pins that are listed are all well-formed.
static bool check_address_doubled(struct reader *reader, const struct node *node, const struct chip *chip, bool all_known)
{
	bool good = true;
	for (unsigned pin = 0; pin < node->count; pin++) {
		const unsigned first = address_pin_of(chip, chip->address[pin]);
		if (!is_bit(chip->address[pin]) || first == pin)
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
	struct address_wire bits[LIMIT_ADDRESS_BITS];
	char name[WIRE_NAME_BYTES];
	bool all_known = true;
	for (unsigned pin = 0; pin < node->count; pin++) {
		all_known = parse_address_wire(reader, node->items[pin], pin, chip) && all_known;
		if (chip->address[pin].kind == ADDRESS_BANK && chip->address[pin].index >= plan->bank_bits)
			plan->bank_bits = chip->address[pin].index + 1;
	}
	if (!check_address_doubled(reader, node, chip, all_known) || !all_known)
		return;
	const size_t count = address_of(plan, chip->stage, 0, bits);
	for (size_t bit = 0; bit < count; bit++)
		if (address_pin_of(chip, bits[bit]) == LIMIT_ADDRESS_PINS)
			diagnose(reader->diagnostics, RULE_WIRE_MISSING, node->place, "%s is on no address pin of chip \"%s\"",
			         address_wire_name(bits[bit], name), chip->label != NULL ? chip->label : "");
}

void read_data_wires(struct reader *reader, const struct node *node, struct chip *chip)
{
	if (!expect_values(reader, node, "data") || !check_pin_count(reader, node, "D", chip->part, chip->part->data_pins))
		return;
	for (unsigned pin = 0; pin < node->count; pin++)
		parse_data_wire(reader, node->items[pin], pin, chip);
}

// A data pin of a chip of the plan.
struct data_pin {
	size_t chip;
	unsigned pin;
};

// The first pin of a stage's chips that carries a wire, from *at on. False if there is none; then *at is past the last pin.
static bool find_data_pin(const struct plan *plan, enum stage stage, struct data_wire wanted, struct data_pin *at)
{
	for (; at->chip < plan->chip_count; at->chip++, at->pin = 0) {
		const struct chip *chip = &plan->chips[at->chip];
		for (; chip->part != NULL && chip->stage == stage && at->pin < chip->part->data_pins; at->pin++)
			if (chip->data[at->pin].kind == wanted.kind && chip->data[at->pin].index == wanted.index)
				return true;
	}
	return false;
}

static bool is_wired(const struct plan *plan, enum stage stage, struct data_wire wanted)
{
	struct data_pin at = {0, 0};
	return find_data_pin(plan, stage, wanted, &at);
}

static const struct node *list_of(const struct node *chips, size_t chip, const char *key)
{
	return chips->items[chip]->kind == NODE_MAPPING ? node_value(chips->items[chip], key) : NULL;
}

// "any chip", or of which stage's chips where there are two.
static const char *any_chip(const struct plan *plan, enum stage stage)
{
	if (plan->machine.form == FORM_LOOP)
		return "any chip";
	return stage == STAGE_LINE ? "any chip of the line stage" : "any chip of the frame stage";
}

static void hint_missing_data(struct reader *reader, enum stage stage)
{
	const struct plan *plan = reader->plan;
	struct data_wire word[LIMIT_WORD_BITS];
	struct missing missing = {.count = 0};
	char name[WIRE_NAME_BYTES], where[64];
	const size_t bits = word_of(plan, stage, word);
	for (size_t bit = 0; bit < bits; bit++)
		if (!is_wired(plan, stage, word[bit]))
			add_missing(&missing, data_wire_name(plan, word[bit], name));
	snprintf(where, sizeof where, "data pin of %s", any_chip(plan, stage));
	hint_missing(reader, &missing, where);
}

void check_data_doubled(struct reader *reader, const struct node *chips, bool all_known)
{
	const struct plan *plan = reader->plan;
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		for (unsigned pin = 0; pin < LIMIT_DATA_PINS; pin++) {
			const struct data_wire wire = plan->chips[chip].data[pin];
			const enum stage stage = plan->chips[chip].stage;
			struct data_pin first = {0, 0};
			if (wire.kind == DATA_OPEN || !find_data_pin(plan, stage, wire, &first) || (first.chip == chip && first.pin == pin))
				continue;
			const struct node *node = list_of(chips, chip, "data")->items[pin];
			const char *label = plan->chips[first.chip].label;
			diagnose(reader->diagnostics, RULE_WIRE_DOUBLED, node->place, "D%u: \"%s\" is on D%u of chip \"%s\" already", pin,
			         SHORT(node->text), first.pin, label != NULL ? label : "");
			if (all_known)
				hint_missing_data(reader, stage);
		}
}

// The last chip of a stage, which has one.
static size_t last_chip(const struct plan *plan, enum stage stage)
{
	size_t chip = plan->chip_count - 1;
	while (plan->chips[chip].stage != stage)
		chip--;
	return chip;
}

// Reports a bit of a stage's word that is on no pin, where the next open pin is; moves *open past it.
static void report_missing_data(struct reader *reader, const struct node *chips, enum stage stage, struct data_wire wire,
                                struct data_pin *open)
{
	const struct plan *plan = reader->plan;
	char name[WIRE_NAME_BYTES];
	const bool found = find_data_pin(plan, stage, (struct data_wire){DATA_OPEN, 0}, open);
	const size_t chip = found ? open->chip : last_chip(plan, stage);
	const struct place place = list_of(chips, chip, "data")->place;
	diagnose(reader->diagnostics, RULE_WIRE_MISSING, place, wire.kind == DATA_SIGNAL ? "signal \"%s\" is on no data pin of %s"
	                                                                               : "%s is on no data pin of %s",
	         data_wire_name(plan, wire, name), any_chip(plan, stage));
	if (found)
		diagnose_hint(reader->diagnostics, "D%u of chip \"%s\" is open", open->pin++, plan->chips[chip].label);
	else if (plan->machine.form == FORM_LOOP)
		diagnose_hint(reader->diagnostics, "no data pin is left open: add a chip");
	else
		diagnose_hint(reader->diagnostics, "no data pin is left open: add a chip with stage: %s", stage_name(stage));
}

static bool is_bank_wired(const struct plan *plan, size_t chip, unsigned bit)
{
	return address_pin_of(&plan->chips[chip], (struct address_wire){ADDRESS_BANK, bit}) < LIMIT_ADDRESS_PINS;
}

// Whether a jumper must reach a stage's chips: it reaches one of them, or none of the machine.
static bool is_bank_wanted(const struct plan *plan, enum stage stage, unsigned bit)
{
	bool elsewhere = false;
	for (size_t chip = 0; chip < plan->chip_count; chip++) {
		if (!is_bank_wired(plan, chip, bit))
			continue;
		if (plan->chips[chip].stage == stage)
			return true;
		elsewhere = true;
	}
	return !elsewhere;
}

// All chips of a stage must see a jumper, but a stage may do without: then its rows are the same in all banks.
static void check_banks_wired(struct reader *reader, const struct node *chips)
{
	const struct plan *plan = reader->plan;
	for (size_t chip = 0; chip < plan->chip_count; chip++)
		for (unsigned bit = 0; bit < plan->bank_bits; bit++)
			if (!is_bank_wired(plan, chip, bit) && is_bank_wanted(plan, plan->chips[chip].stage, bit)) {
				diagnose(reader->diagnostics, RULE_WIRE_MISSING, list_of(chips, chip, "address")->place,
				         "bank.%u is on no address pin of chip \"%s\"", bit, plan->chips[chip].label);
				if (reader->set_bits > 0)
					diagnose_hint(reader->diagnostics, "the set has %u bank bit%s", reader->set_bits, reader->set_bits == 1 ? "" : "s");
			}
}

void check_word_wired(struct reader *reader, const struct node *chips)
{
	const struct plan *plan = reader->plan;
	for (unsigned stage = 0; stage < machine_stages(&plan->machine); stage++) {
		struct data_wire word[LIMIT_WORD_BITS];
		struct data_pin open = {0, 0};
		const size_t bits = word_of(plan, (enum stage)stage, word);
		for (size_t bit = 0; bit < bits; bit++)
			if (!is_wired(plan, (enum stage)stage, word[bit]))
				report_missing_data(reader, chips, (enum stage)stage, word[bit], &open);
	}
	check_banks_wired(reader, chips);
}
