#include "catalogue/crystals.h"

#include <string.h>

#include "catalogue/data.h"
#include "catalogue/reading.h"

#define LIMIT_CRYSTALS 1000

enum { CRYSTAL_FREQUENCY, CRYSTAL_USE, CRYSTAL_SOURCE, CRYSTAL_KEY_COUNT };

static const struct key file_keys[] = {PLAIN_KEY("crystals", KEY_REQUIRED)};
static const struct key crystal_keys[CRYSTAL_KEY_COUNT] = {
	[CRYSTAL_FREQUENCY] = PLAIN_KEY("frequency", KEY_REQUIRED),
	[CRYSTAL_USE] = PLAIN_KEY("use", KEY_REQUIRED),
	[CRYSTAL_SOURCE] = PLAIN_KEY("source", KEY_REQUIRED),
};

// The read_… functions below report what is wrong and read on; what they leave behind is used only if nothing was reported.

static void read_frequency(struct reader *reader, const struct node *node, struct fraction *frequency_hz)
{
	struct quantity quantity;
	if (node == NULL || !read_quantity(reader, node, "frequency", 1u << DIMENSION_FREQUENCY, &quantity))
		return;
	if (quantity.value.numerator <= 0)
		diagnose(reader->diagnostics, RULE_BAD_QUANTITY, node->place, "frequency: must be above zero, found \"%s\"", SHORT(node->text));
	*frequency_hz = quantity.value;
}

static void read_crystal(struct reader *reader, const struct node_pair *pair, struct crystal *crystal)
{
	const struct node *values[CRYSTAL_KEY_COUNT];
	*crystal = (struct crystal){pair->key->text, FRACTION_ZERO, "", ""};
	if (!check_printable_name(reader, pair->key, "crystal") ||
	    !read_mapping(reader, pair->value, "a crystal", crystal_keys, CRYSTAL_KEY_COUNT, values))
		return;
	read_frequency(reader, values[CRYSTAL_FREQUENCY], &crystal->frequency_hz);
	catalogue_text(reader, values[CRYSTAL_USE], "use", &crystal->use);
	catalogue_text(reader, values[CRYSTAL_SOURCE], "source", &crystal->source);
}

static void read_crystals(struct reader *reader, const struct node *node, struct crystals *result)
{
	if (node == NULL || !expect_kind(reader, node, NODE_MAPPING, "crystals") ||
	    !catalogue_count(reader, node, "crystals", LIMIT_CRYSTALS))
		return;
	struct crystal *crystals = reader_array(reader, node->count, sizeof *crystals);
	if (crystals == NULL)
		return;
	for (size_t index = 0; index < node->count; index++)
		read_crystal(reader, &node->pairs[index], &crystals[index]);
	*result = (struct crystals){crystals, node->count};
}

const struct crystals *crystals_read(struct arena *arena, const struct source *source, struct diagnostics *diagnostics)
{
	struct plan plan = {.arena = arena, .source = source}; // the plan's reader wants to know what it reads
	struct reader reader = {.arena = arena, .plan = &plan, .diagnostics = diagnostics};
	const size_t errors_before = diagnostics_error_count(diagnostics);
	const struct node *document = document_parse(arena, source, diagnostics), *list;
	if (document == NULL || !read_mapping(&reader, document, "a catalogue", file_keys, COUNT_OF(file_keys), &list))
		return NULL;
	struct crystals *crystals = reader_array(&reader, 1, sizeof *crystals);
	if (crystals == NULL)
		return NULL;
	read_crystals(&reader, list, crystals);
	return diagnostics_error_count(diagnostics) == errors_before ? crystals : NULL;
}

const struct crystals *crystals_load(struct arena *arena, struct diagnostics *diagnostics)
{
	const struct source *source =
		catalogue_source(arena, "crystals.yaml", catalogue_crystals, catalogue_crystals_length, diagnostics);
	return source != NULL ? crystals_read(arena, source, diagnostics) : NULL;
}

const struct crystal *catalogue_crystal(const struct crystals *crystals, const char *name)
{
	for (size_t index = 0; index < crystals->count; index++)
		if (strcmp(crystals->crystals[index].name, name) == 0)
			return &crystals->crystals[index];
	return NULL;
}
