#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "catalogue/crystals.h"
#include "catalogue/standards.h"
#include "library/library.h"
#include "view/crystals.h"
#include "view/figures.h"
#include "view/parts.h"
#include "view/standards.h"

// What a catalogue is loaded into. The arena may be NULL: then so is `diagnostics`.
struct shelf {
	struct arena *arena;
	struct diagnostics *diagnostics;
};

static struct shelf open_shelf(void)
{
	struct shelf shelf = {arena_create(), diagnostics_create()};
	if (shelf.arena != NULL && shelf.diagnostics != NULL)
		return shelf;
	arena_destroy(shelf.arena);
	diagnostics_destroy(shelf.diagnostics);
	return (struct shelf){NULL, NULL};
}

static void close_shelf(struct shelf *shelf)
{
	diagnostics_destroy(shelf->diagnostics);
	arena_destroy(shelf->arena);
}

char *scanlatch_parts_text(void)
{
	struct shelf shelf = open_shelf();
	struct text text = {0};
	const struct catalogue *catalogue = shelf.arena != NULL ? catalogue_load(shelf.arena, shelf.diagnostics) : NULL;
	if (catalogue != NULL)
		view_parts(&text, catalogue);
	text.failed = text.failed || catalogue == NULL;
	close_shelf(&shelf);
	return take_string(&text);
}

char *scanlatch_parts_json(void)
{
	struct shelf shelf = open_shelf();
	const struct catalogue *catalogue = shelf.arena != NULL ? catalogue_load(shelf.arena, shelf.diagnostics) : NULL;
	char *string = catalogue != NULL ? take_json(view_parts_json(catalogue)) : NULL;
	close_shelf(&shelf);
	return string;
}

char *scanlatch_standards_text(void)
{
	struct shelf shelf = open_shelf();
	struct text text = {0};
	const struct standards *standards = shelf.arena != NULL ? standards_load(shelf.arena, shelf.diagnostics) : NULL;
	if (standards != NULL)
		view_standards(&text, standards);
	text.failed = text.failed || standards == NULL;
	close_shelf(&shelf);
	return take_string(&text);
}

char *scanlatch_standards_json(void)
{
	struct shelf shelf = open_shelf();
	const struct standards *standards = shelf.arena != NULL ? standards_load(shelf.arena, shelf.diagnostics) : NULL;
	char *string = standards != NULL ? take_json(view_standards_json(standards)) : NULL;
	close_shelf(&shelf);
	return string;
}

char *scanlatch_crystals_text(void)
{
	struct shelf shelf = open_shelf();
	struct text text = {0};
	const struct crystals *crystals = shelf.arena != NULL ? crystals_load(shelf.arena, shelf.diagnostics) : NULL;
	if (crystals != NULL)
		view_crystals(&text, crystals);
	text.failed = text.failed || crystals == NULL;
	close_shelf(&shelf);
	return take_string(&text);
}

char *scanlatch_crystals_json(void)
{
	struct shelf shelf = open_shelf();
	const struct crystals *crystals = shelf.arena != NULL ? crystals_load(shelf.arena, shelf.diagnostics) : NULL;
	char *string = crystals != NULL ? take_json(view_crystals_json(crystals)) : NULL;
	close_shelf(&shelf);
	return string;
}
