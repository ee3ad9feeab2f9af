#include "base/arena.h"
#include "base/text.h"
#include "catalogue/catalogue.h"
#include "library/library.h"
#include "view/reports.h"
#include "view/schema.h"

// The languages come first, then the reports.
static const struct {
	const char *name;
	const char *title;
	const struct shape *root;
} languages[] = {
	{"plan", "scanlatch plan", &plan_shape},
	{"set", "scanlatch set", &set_shape},
	{"board", "scanlatch board", &board_shape},
};

size_t scanlatch_schema_count(void)
{
	return COUNT_OF(languages) + report_count();
}

const char *scanlatch_schema_name(size_t schema)
{
	return schema < COUNT_OF(languages) ? languages[schema].name : report_schemas[schema - COUNT_OF(languages)].name;
}

// The schema of a language, with the names that the catalogues have. NULL when memory is out.
static json_t *language_schema(size_t language)
{
	struct arena *arena = arena_create();
	struct diagnostics *diagnostics = diagnostics_create();
	json_t *schema = NULL;
	if (arena != NULL && diagnostics != NULL) {
		const struct schema_names names = {catalogue_load(arena, diagnostics), standards_load(arena, diagnostics)};
		if (names.parts != NULL && names.standards != NULL)
			schema = view_schema(languages[language].title, languages[language].root, &names);
	}
	diagnostics_destroy(diagnostics);
	arena_destroy(arena);
	return schema;
}

char *scanlatch_schema_json(size_t schema)
{
	if (schema < COUNT_OF(languages))
		return take_json(language_schema(schema));
	struct text text = {0};
	view_report_schema(&text, schema - COUNT_OF(languages));
	return take_string(&text);
}
