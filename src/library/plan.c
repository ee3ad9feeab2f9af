#include <string.h>

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "library/library.h"
#include "view/check.h"
#include "view/parts.h"

static bool load_plan(scanlatch_plan *plan, struct diagnostics *diagnostics)
{
	const struct catalogue *catalogue = catalogue_load(plan->arena, diagnostics);
	if (catalogue == NULL)
		return false;
	plan->plan = plan_read(plan->source, catalogue, diagnostics);
	if (plan->plan == NULL)
		return false;
	plan->timeline = timeline_create(plan->plan, diagnostics);
	return plan->timeline != NULL;
}

const struct source *keep_source(struct arena *arena, const char *name, const char *bytes, size_t length)
{
	struct source *source = arena_alloc(arena, sizeof *source);
	if (source == NULL)
		return NULL;
	source->name = arena_copy(arena, name, strlen(name));
	source->bytes = arena_copy(arena, bytes, length);
	source->length = length;
	return source->name != NULL && source->bytes != NULL ? source : NULL;
}

scanlatch_plan *scanlatch_plan_read(const char *name, const char *bytes, size_t length, scanlatch_messages *messages)
{
	const struct source *source = keep_source(messages->names, name, bytes, length);
	struct arena *arena = arena_create();
	scanlatch_plan *plan = arena != NULL ? arena_alloc(arena, sizeof *plan) : NULL;
	if (source == NULL || plan == NULL) {
		diagnose(messages->diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "memory is out");
		arena_destroy(arena);
		return NULL;
	}
	plan->arena = arena;
	plan->source = source;
	if (load_plan(plan, messages->diagnostics))
		return plan;
	scanlatch_plan_destroy(plan);
	return NULL;
}

void scanlatch_plan_destroy(scanlatch_plan *plan)
{
	if (plan == NULL)
		return;
	timeline_destroy(plan->timeline);
	plan_destroy(plan->plan);
	arena_destroy(plan->arena);
}

const char *scanlatch_plan_name(const scanlatch_plan *plan)
{
	return plan->plan->name;
}

size_t scanlatch_plan_chips(const scanlatch_plan *plan)
{
	return plan->plan->chip_count;
}

const char *scanlatch_plan_chip_label(const scanlatch_plan *plan, size_t chip)
{
	return plan->plan->chips[chip].label;
}

size_t scanlatch_plan_chip_bytes(const scanlatch_plan *plan, size_t chip)
{
	return chip_bytes(&plan->plan->chips[chip]);
}

char *scanlatch_plan_text(const scanlatch_plan *plan, bool *kept, bool *advice_kept)
{
	struct text text = {0};
	if (!view_check(&text, plan->timeline, kept, advice_kept))
		text.failed = true;
	return take_string(&text);
}

char *scanlatch_plan_json(const scanlatch_plan *plan, bool *kept, bool *advice_kept)
{
	return take_json(view_check_json(plan->timeline, kept, advice_kept));
}

// The catalogue in an arena of its own, which the caller destroys. NULL when memory is out.
static const struct catalogue *load_catalogue(struct arena *arena)
{
	struct diagnostics *diagnostics = diagnostics_create();
	const struct catalogue *catalogue = arena != NULL && diagnostics != NULL ? catalogue_load(arena, diagnostics) : NULL;
	diagnostics_destroy(diagnostics);
	return catalogue;
}

char *scanlatch_parts_text(void)
{
	struct arena *arena = arena_create();
	const struct catalogue *catalogue = load_catalogue(arena);
	struct text text = {0};
	if (catalogue != NULL)
		view_parts(&text, catalogue);
	else
		text.failed = true;
	arena_destroy(arena);
	return take_string(&text);
}

char *scanlatch_parts_json(void)
{
	struct arena *arena = arena_create();
	const struct catalogue *catalogue = load_catalogue(arena);
	char *string = catalogue != NULL ? take_json(view_parts_json(catalogue)) : NULL;
	arena_destroy(arena);
	return string;
}
