#include "plan/read.h"

#include <string.h>

#include "base/arena.h"

enum { PART_ADDRESS_PINS, PART_DATA_PINS, PART_ACCESS, PART_PACKAGE, PART_KEYS };

static const struct key part_keys[PART_KEYS] = {
	[PART_ADDRESS_PINS] = {"address pins", KEY_REQUIRED},
	[PART_DATA_PINS] = {"data pins", KEY_REQUIRED},
	[PART_ACCESS] = {"access", KEY_REQUIRED},
	[PART_PACKAGE] = {"package", KEY_OPTIONAL},
};

enum { CHIP_LABEL, CHIP_PART, CHIP_SPEED, CHIP_ADDRESS, CHIP_DATA, CHIP_STAGE, CHIP_KEYS };

static const struct key short_keys[CHIP_KEYS] = {
	[CHIP_LABEL] = {"label", KEY_UNUSED},     [CHIP_PART] = {"part", KEY_REQUIRED}, [CHIP_SPEED] = {"speed", KEY_OPTIONAL},
	[CHIP_ADDRESS] = {"address", KEY_UNUSED}, [CHIP_DATA] = {"data", KEY_UNUSED},   [CHIP_STAGE] = {"stage", KEY_LATER},
};

static const struct key long_keys[CHIP_KEYS] = {
	[CHIP_LABEL] = {"label", KEY_REQUIRED},     [CHIP_PART] = {"part", KEY_REQUIRED}, [CHIP_SPEED] = {"speed", KEY_OPTIONAL},
	[CHIP_ADDRESS] = {"address", KEY_REQUIRED}, [CHIP_DATA] = {"data", KEY_REQUIRED}, [CHIP_STAGE] = {"stage", KEY_LATER},
};

static int slower_first(const struct access_grade *left, const struct access_grade *right)
{
	return fraction_compare(left->access_s, right->access_s);
}

// Grades fastest first; lists are short.
static void sort_grades(struct access_grade *grades, size_t count)
{
	for (size_t index = 1; index < count; index++)
		for (size_t at = index; at > 0 && slower_first(&grades[at - 1], &grades[at]) > 0; at--) {
			const struct access_grade grade = grades[at];
			grades[at] = grades[at - 1];
			grades[at - 1] = grade;
		}
}

static void read_grades(struct reader *reader, const struct node *node, struct part *part)
{
	if (!expect_values(reader, node, "access"))
		return;
	if (node->count == 0 || node->count > 64) {
		diagnose(reader->diagnostics, RULE_TOO_MANY, node->place, "access: wanted 1 to 64 grades, found %zu", node->count);
		return;
	}
	struct access_grade *grades = reader_array(reader, node->count, sizeof *grades);
	if (grades == NULL)
		return;
	size_t count = 0;
	for (size_t index = 0; index < node->count; index++) {
		grades[count].source = "the plan";
		count += read_time(reader, node->items[index], "access", true, &grades[count].access_s);
	}
	sort_grades(grades, count);
	part->grades = grades;
	part->grade_count = count;
}

static void read_own_part(struct reader *reader, const struct node *key, const struct node *value, struct part *part)
{
	const struct node *values[PART_KEYS];
	int64_t pins = 0;
	part->name = key->text;
	part->package = "";
	part->source = "the plan";
	check_printable_name(reader, key, "part");
	if (!read_mapping(reader, value, "a part", part_keys, PART_KEYS, values))
		return;
	if (values[PART_ADDRESS_PINS] != NULL &&
	    read_whole(reader, values[PART_ADDRESS_PINS], "address pins", 1, LIMIT_ADDRESS_PINS, &pins))
		part->address_pins = (unsigned)pins;
	static const char *const widths[] = {"8", "16"};
	size_t width;
	if (values[PART_DATA_PINS] != NULL && read_choice(reader, values[PART_DATA_PINS], "data pins", widths, COUNT_OF(widths), &width))
		part->data_pins = width == 0 ? 8 : 16;
	if (values[PART_ACCESS] != NULL)
		read_grades(reader, values[PART_ACCESS], part);
	if (values[PART_PACKAGE] != NULL)
		read_scalar(reader, values[PART_PACKAGE], "package", &part->package);
}

void read_own_parts(struct reader *reader, const struct node *node)
{
	if (!expect_kind(reader, node, NODE_MAPPING, "parts"))
		return;
	struct part *parts = reader_array(reader, node->count, sizeof *parts);
	if (parts == NULL)
		return;
	for (size_t index = 0; index < node->count; index++)
		read_own_part(reader, node->pairs[index].key, node->pairs[index].value, &parts[index]);
	reader->own_parts = parts;
	reader->own_part_count = node->count;
}

static const struct part *find_part(const struct reader *reader, const char *name)
{
	for (size_t index = 0; index < reader->own_part_count; index++)
		if (strcmp(reader->own_parts[index].name, name) == 0)
			return &reader->own_parts[index];
	return catalogue_part(reader->catalogue, name);
}

static void report_unknown_part(struct reader *reader, const struct node *node)
{
	const char *names[128];
	size_t count = 0;
	for (size_t index = 0; index < reader->own_part_count && count < COUNT_OF(names); index++)
		names[count++] = reader->own_parts[index].name;
	for (size_t index = 0; index < reader->catalogue->part_count && count < COUNT_OF(names); index++)
		names[count++] = reader->catalogue->parts[index].name;
	diagnose(reader->diagnostics, RULE_UNKNOWN_PART, node->place, "there is no part \"%s\" in the catalogue or in the plan's parts",
	         SHORT(node->text));
	hint_words(reader, node->text, names, count);
}

// Reads part and speed of a chip; NULL after reporting.
static const struct part *read_part(struct reader *reader, const struct node **values, struct fraction *access_s)
{
	const char *name;
	if (values[CHIP_PART] == NULL || !read_scalar(reader, values[CHIP_PART], "part", &name))
		return NULL;
	const struct part *part = find_part(reader, name);
	if (part == NULL) {
		report_unknown_part(reader, values[CHIP_PART]);
		return NULL;
	}
	if (part->address_pins == 0 || part->data_pins == 0 || part->grade_count == 0)
		return NULL; // the plan's own part, reported already
	*access_s = part->grades[part->grade_count - 1].access_s;
	if (values[CHIP_SPEED] == NULL || !read_time(reader, values[CHIP_SPEED], "speed", true, access_s))
		return part;
	for (size_t index = 0; index < part->grade_count; index++)
		if (fraction_compare(part->grades[index].access_s, *access_s) == 0)
			return part;
	diagnose(reader->diagnostics, RULE_SPEED_NOT_LISTED, values[CHIP_SPEED]->place,
	         "speed %s is none of the listed grades of part %s, and is taken as given", SHORT(values[CHIP_SPEED]->text),
	         SHORT(part->name));
	return part;
}

// True if two names begin alike up to the first digit after a letter: 28C64 and 28C256.
static bool same_family(const char *left, const char *right)
{
	static const char digits[] = "0123456789";
	size_t length = strspn(left, digits);
	length += strcspn(left + length, digits);
	return strncmp(left, right, length) == 0 && strspn(right + length, digits) > 0;
}

// The smallest part of the width that has the address pins, in the family of `small` or outside it; NULL if there is none.
static const struct part *larger_part(const struct reader *reader, const struct part *small, unsigned address_pins, bool in_family)
{
	const struct part *best = NULL;
	const struct catalogue *catalogue = reader->catalogue;
	for (size_t index = 0; index < reader->own_part_count + catalogue->part_count; index++) {
		const struct part *part = index < reader->own_part_count ? &reader->own_parts[index]
		                                                         : &catalogue->parts[index - reader->own_part_count];
		if (part->data_pins == small->data_pins && part->address_pins >= address_pins &&
		    same_family(small->name, part->name) == in_family && (best == NULL || part->address_pins < best->address_pins))
			best = part;
	}
	return best;
}

// What is programmed in the same way comes first; another family may have a smaller one.
static void hint_larger_part(struct reader *reader, const struct part *small, unsigned address_pins)
{
	const struct part *like = larger_part(reader, small, address_pins, true);
	const struct part *other = larger_part(reader, small, address_pins, false);
	if (like != NULL && other != NULL && other->address_pins < like->address_pins)
		diagnose_hint(reader->diagnostics, "part %s with %u address pins would do, or %s with %u", SHORT(like->name), like->address_pins,
		              SHORT(other->name), other->address_pins);
	else if (like != NULL || other != NULL)
		diagnose_hint(reader->diagnostics, "part %s with %u address pins would do", SHORT(like != NULL ? like->name : other->name),
		              like != NULL ? like->address_pins : other->address_pins);
	else
		diagnose_hint(reader->diagnostics, "no part of that width is large enough: use fewer state bits, or add one under parts");
}

static bool check_part_size(struct reader *reader, const struct node *node, const struct part *part)
{
	const unsigned bits = reader->plan->machine.line.state_bits;
	if (part->address_pins >= bits)
		return true;
	diagnose(reader->diagnostics, RULE_PART_TOO_SMALL, node->place, "part %s has %u address pins, but the state has %u bits",
	         SHORT(part->name), part->address_pins, bits);
	hint_larger_part(reader, part, bits);
	return false;
}

static void wire_straight_address(const struct plan *plan, struct chip *chip)
{
	for (unsigned pin = 0; pin < plan->machine.line.state_bits; pin++)
		chip->address[pin] = (struct address_wire){ADDRESS_STATE, pin};
}

size_t word_of(const struct plan *plan, struct data_wire *word)
{
	size_t count = 0;
	if (plan->machine.line.advance == ADVANCE_COUNT)
		word[count++] = (struct data_wire){DATA_CLEAR, 0};
	else
		for (unsigned bit = 0; bit < plan->machine.line.state_bits; bit++)
			word[count++] = (struct data_wire){DATA_NEXT, bit};
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (signal_is_data(&plan->signals[signal]))
			word[count++] = (struct data_wire){DATA_SIGNAL, (unsigned)signal};
	return count;
}

static void read_short_chips(struct reader *reader, const struct node *node)
{
	struct plan *plan = reader->plan;
	const struct node *values[CHIP_KEYS];
	struct data_wire word[LIMIT_STATE_BITS + LIMIT_SIGNALS];
	struct fraction access_s;
	if (!read_mapping(reader, node, "chips", short_keys, CHIP_KEYS, values))
		return;
	const struct part *part = read_part(reader, values, &access_s);
	if (part == NULL || !reader->machine_known || !reader->signals_known || !check_part_size(reader, values[CHIP_PART], part))
		return;
	const size_t bits = word_of(plan, word);
	const size_t count = (bits + part->data_pins - 1) / part->data_pins;
	if (count > LIMIT_CHIPS) {
		diagnose(reader->diagnostics, RULE_TOO_MANY_CHIPS, node->place, "a word of %zu bits needs %zu chips of part %s, wanted at most %d",
		         bits, count, SHORT(part->name), LIMIT_CHIPS);
		return;
	}
	plan->chips = reader_array(reader, count, sizeof *plan->chips);
	if (plan->chips == NULL)
		return;
	plan->chip_count = count;
	for (size_t index = 0; index < count; index++) {
		struct chip *chip = &plan->chips[index];
		chip->label = arena_format(reader->arena, "rom%zu", index);
		chip->part = part;
		chip->access_s = access_s;
		chip->place = node->place;
		wire_straight_address(plan, chip);
		for (unsigned pin = 0; pin < part->data_pins && index * part->data_pins + pin < bits; pin++)
			chip->data[pin] = word[index * part->data_pins + pin];
	}
}

static bool read_label(struct reader *reader, const struct node *node, struct chip *chip, size_t index)
{
	const char *text;
	if (node == NULL || !read_scalar(reader, node, "label", &text))
		return false;
	const size_t good = strspn(text, "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789_-");
	if (good != strlen(text) || good > 100) {
		diagnose(reader->diagnostics, RULE_BAD_NAME, node->place, "label \"%s\": wanted 1 to 100 letters, digits, _ and -",
		         SHORT(text));
		return false;
	}
	for (size_t other = 0; other < index; other++)
		if (reader->plan->chips[other].label != NULL && strcmp(reader->plan->chips[other].label, text) == 0) {
			diagnose(reader->diagnostics, RULE_DOUBLED_NAME, node->place, "label \"%s\" is the label of an earlier chip",
			         SHORT(text));
			diagnose_also(reader->diagnostics, reader->plan->chips[other].place, "the earlier chip");
			return false;
		}
	chip->label = text;
	return true;
}

static void read_chip(struct reader *reader, const struct node *node, size_t index)
{
	struct chip *chip = &reader->plan->chips[index];
	const struct node *values[CHIP_KEYS];
	chip->place = node->place;
	if (!read_mapping(reader, node, "a chip", long_keys, CHIP_KEYS, values))
		return;
	read_label(reader, values[CHIP_LABEL], chip, index);
	chip->part = read_part(reader, values, &chip->access_s);
	if (chip->part == NULL || !reader->machine_known || !check_part_size(reader, values[CHIP_PART], chip->part))
		return;
	if (values[CHIP_ADDRESS] != NULL)
		read_address_wires(reader, values[CHIP_ADDRESS], chip);
	if (values[CHIP_DATA] != NULL && reader->signals_known)
		read_data_wires(reader, values[CHIP_DATA], chip);
}

static void read_long_chips(struct reader *reader, const struct node *node)
{
	struct plan *plan = reader->plan;
	if (node->count == 0 || node->count > LIMIT_CHIPS) {
		diagnose(reader->diagnostics, RULE_TOO_MANY_CHIPS, node->place, "chips: wanted 1 to %d, found %zu", LIMIT_CHIPS, node->count);
		return;
	}
	const size_t errors_before = diagnostics_error_count(reader->diagnostics);
	plan->chips = reader_array(reader, node->count, sizeof *plan->chips);
	if (plan->chips == NULL)
		return;
	for (size_t index = 0; index < node->count; index++) {
		plan->chip_count = index + 1;
		read_chip(reader, node->items[index], index);
	}
	if (!reader->machine_known || !reader->signals_known)
		return;
	check_data_doubled(reader, node, diagnostics_error_count(reader->diagnostics) == errors_before);
	if (diagnostics_error_count(reader->diagnostics) == errors_before)
		check_word_wired(reader, node);
}

void read_chips(struct reader *reader, const struct node *node)
{
	if (reader->line_frame)
		return;
	if (node->kind == NODE_MAPPING)
		read_short_chips(reader, node);
	else if (expect_kind(reader, node, NODE_LIST, "chips (a mapping with part, or a list of chips)"))
		read_long_chips(reader, node);
}
