#include "plan/read.h"

#include <string.h>

#include "base/text.h"

enum { PART_ADDRESS_PINS, PART_DATA_PINS, PART_ACCESS, PART_PACKAGE, PART_KEYS };

#define MOST_GRADES 64

static const char *const widths[] = {"8", "16"};

static const struct key part_keys[PART_KEYS] = {
	[PART_ADDRESS_PINS] = {"address pins", KEY_REQUIRED, WHOLE(1, LIMIT_ADDRESS_PINS), "How many address pins it has"},
	[PART_DATA_PINS] = {"data pins", KEY_REQUIRED, CHOICE(widths), "How many data pins it has"},
	[PART_ACCESS] = {"access", KEY_REQUIRED, LIST_OF(&time_shape, 1, MOST_GRADES), "The access times that it is sold with"},
	[PART_PACKAGE] = {"package", KEY_OPTIONAL, &text_shape, "Its package; reported"},
};

static const struct shape part_shape = {.kind = SHAPE_MAPPING, .title = "part", .keys = part_keys, .key_count = PART_KEYS};

const struct shape parts_shape = {
	.kind = SHAPE_NAMED, .name = &printable_name_shape, .item = &part_shape, .most = INT64_MAX,
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
	if (node->count == 0 || node->count > MOST_GRADES) {
		diagnose(reader->diagnostics, RULE_TOO_MANY, node->place, "access: wanted 1 to %d grades, found %zu", MOST_GRADES,
		         node->count);
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
	if (key_whole(reader, &part_keys[PART_ADDRESS_PINS], values[PART_ADDRESS_PINS], &pins))
		part->address_pins = (unsigned)pins;
	size_t width;
	if (key_choice(reader, &part_keys[PART_DATA_PINS], values[PART_DATA_PINS], &width))
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

const struct part *read_chip_part(struct reader *reader, const struct node *name, const struct node *speed, struct fraction *access_s)
{
	const char *text;
	if (name == NULL || !read_scalar(reader, name, "part", &text))
		return NULL;
	const struct part *part = find_part(reader, text);
	if (part == NULL) {
		report_unknown_part(reader, name);
		return NULL;
	}
	if (part->address_pins == 0 || part->data_pins == 0 || part->grade_count == 0)
		return NULL; // the plan's own part, reported already
	struct fraction asked_s;
	*access_s = part->grades[part->grade_count - 1].access_s;
	if (speed == NULL || !read_time(reader, speed, "speed", true, &asked_s))
		return part;
	*access_s = asked_s;
	for (size_t index = 0; index < part->grade_count; index++)
		if (fraction_compare(part->grades[index].access_s, asked_s) == 0)
			return part;
	diagnose(reader->diagnostics, RULE_SPEED_NOT_LISTED, speed->place,
	         "speed %s is none of the listed grades of part %s, and is taken as given", SHORT(speed->text),
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

// Puts what addresses a stage: "the state has 12 bits", or the sum and its parts.
static void put_address_bits(struct text *text, const struct reader *reader, enum stage stage, unsigned bits)
{
	const struct machine_plan *machine = &reader->plan->machine;
	const unsigned state = machine_stage(machine, stage)->state_bits;
	if (machine->form == FORM_LOOP && bits == state) {
		text_printf(text, "the state has %u bits", bits);
		return;
	}
	if (machine->form == FORM_LOOP)
		text_printf(text, "the address has %u bits (state %u", bits, state);
	else
		text_printf(text, "the %s stage is addressed by %u bits (state %u", stage_name(stage), bits, state);
	if (stage == STAGE_LINE && machine->kind_bits > 0)
		text_printf(text, ", kind %u", machine->kind_bits);
	if (reader->set_bits > 0)
		text_printf(text, ", bank %u", reader->set_bits);
	text_put(text, ")");
}

bool check_part_size(struct reader *reader, const struct node *name, const struct part *part, enum stage stage)
{
	struct address_wire wires[LIMIT_ADDRESS_BITS];
	const unsigned bits = (unsigned)address_of(reader->plan, stage, reader->set_bits, wires);
	if (part->address_pins >= bits)
		return true;
	struct text why = {0};
	put_address_bits(&why, reader, stage, bits);
	diagnose(reader->diagnostics, RULE_PART_TOO_SMALL, name->place, "part %s has %u address pins, but %s", SHORT(part->name),
	         part->address_pins, text_string(&why));
	text_release(&why);
	hint_larger_part(reader, part, bits);
	return false;
}
