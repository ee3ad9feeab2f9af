#include "view/crystals.h"

#include "base/text.h"
#include "catalogue/crystals.h"
#include "view/columns.h"
#include "view/figures.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))
#define PLACES 6

static const struct column crystal_columns[] = {{"name", false}, {"exact Hz", true}, {"Hz", true}, {"use", false}};
static const struct column source_columns[] = {{"name", false}, {"source of the frequency", false}};

static void put_crystal_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct crystal *crystal = &((const struct crystals *)context)->crystals[row];
	switch (column) {
	case 0: text_put(out, crystal->name); break;
	case 1: text_put_fraction(out, crystal->frequency_hz); break;
	case 2: text_put_rounded(out, crystal->frequency_hz, PLACES); break;
	default: text_put(out, crystal->use); break;
	}
}

static void put_source_cell(struct text *out, const void *context, size_t row, size_t column)
{
	const struct crystal *crystal = &((const struct crystals *)context)->crystals[row];
	text_put(out, column == 0 ? crystal->name : crystal->source);
}

void view_crystals(struct text *out, const struct crystals *crystals)
{
	const struct columns table = {crystal_columns, COUNT_OF(crystal_columns), crystals->count, put_crystal_cell, crystals};
	const struct columns sources = {source_columns, COUNT_OF(source_columns), crystals->count, put_source_cell, crystals};
	text_put(out, "Crystals and oscillators, by what is printed on them\n\n");
	view_columns(out, &table, TERMINAL_CHARACTERS);
	text_put(out, "\nSources of their values\n\n");
	view_columns(out, &sources, TERMINAL_CHARACTERS);
}

json_t *view_crystals_json(const struct crystals *crystals)
{
	json_t *object = json_object(), *array = json_array();
	for (size_t index = 0; index < crystals->count; index++) {
		const struct crystal *crystal = &crystals->crystals[index];
		json_t *entry = json_pack("{s:s}", "name", crystal->name);
		json_put_fraction(&entry, "hz", crystal->frequency_hz);
		json_put(&entry, "use", json_string(crystal->use));
		json_put(&entry, "source", json_string(crystal->source));
		json_append(&array, entry);
	}
	json_put(&object, "crystals", array);
	return object;
}
