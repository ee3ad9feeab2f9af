#include <errno.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>

#include "base/arena.h"
#include "base/file.h"
#include "catalogue/catalogue.h"
#include "library/library.h"
#include "plan/characters.h"
#include "plan/read.h"

// True if a bank's plan is there to be read. What waits for somebody to write, or never ends, is no plan. A folder is told by the reader.
static bool is_plan_there(const struct set_bank *bank, const char *path, struct diagnostics *diagnostics)
{
	struct stat status;
	if (stat(path, &status) != 0 && (errno == ENOENT || errno == ENOTDIR)) {
		diagnose(diagnostics, RULE_BANK_PLAN, bank->place, "bank %u: there is no file \"%s\"", bank->number, SHORT(bank->path));
		diagnose_hint(diagnostics, "paths are relative to the set's folder");
		return false;
	}
	if (stat(path, &status) != 0 || S_ISREG(status.st_mode) || S_ISDIR(status.st_mode))
		return true;
	diagnose(diagnostics, RULE_BANK_PLAN, bank->place, "bank %u: \"%s\" is no ordinary file", bank->number, SHORT(bank->path));
	return false;
}

static struct plan *load_bank(struct plan_set *plans, const struct catalogue *catalogue, size_t bank, scanlatch_messages *messages)
{
	const struct set *set = plans->set;
	const char *path = set_bank_path(messages->names, set, bank);
	const size_t errors_before = diagnostics_error_count(messages->diagnostics);
	char *bytes = NULL;
	size_t length = 0;
	const struct source *source = NULL;
	if (path != NULL && !is_plan_there(&set->banks[bank], path, messages->diagnostics))
		return NULL;
	if (path != NULL && read_plan_file(plans->arena, path, &bytes, &length, messages))
		source = keep_source(messages->names, path, bytes, length);
	if (source != NULL)
		return plan_read_for_set(source, catalogue, set, bank, messages->diagnostics);
	if (diagnostics_error_count(messages->diagnostics) == errors_before)
		diagnose(messages->diagnostics, RULE_OUT_OF_MEMORY, (struct place){set->source, 0, 0}, "memory is out");
	else
		diagnose_also(messages->diagnostics, set->banks[bank].place, "bank %u of the set", set->banks[bank].number);
	return NULL;
}

// Every bank is read, so that all that is wrong is told.
static bool load_banks(struct plan_set *plans, scanlatch_messages *messages)
{
	// It stays with the messages, which quote it where memory did not suffice for it.
	const struct catalogue *catalogue = catalogue_load(messages->names, messages->diagnostics);
	bool good = catalogue != NULL;
	for (size_t bank = 0; catalogue != NULL && bank < plans->set->bank_count; bank++) {
		plans->plans[bank] = load_bank(plans, catalogue, bank, messages);
		good = good && plans->plans[bank] != NULL;
	}
	return good && set_plans_agree(plans->set, (const struct plan *const *)plans->plans, messages->diagnostics);
}

struct plan_set *plan_set_load(const char *name, const char *bytes, size_t length, scanlatch_messages *messages)
{
	const struct source *source = keep_source(messages->names, name, bytes, length);
	struct arena *arena = arena_create();
	struct plan_set *plans = arena != NULL ? arena_alloc(arena, sizeof *plans) : NULL;
	if (source == NULL || plans == NULL) {
		diagnose(messages->diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "memory is out");
		arena_destroy(arena);
		return NULL;
	}
	plans->arena = arena;
	plans->set = set_read(source, messages->diagnostics);
	plans->plans = plans->set != NULL ? arena_array(arena, plans->set->bank_count, sizeof(struct plan *)) : NULL;
	if (plans->set != NULL && plans->plans == NULL)
		diagnose(messages->diagnostics, RULE_OUT_OF_MEMORY, (struct place){source, 0, 0}, "memory is out");
	if (plans->plans != NULL && load_banks(plans, messages))
		return plans;
	plan_set_destroy(plans);
	return NULL;
}

static bool is_named_before(const struct set *set, size_t bank)
{
	for (size_t before = 0; before < bank; before++)
		if (strcmp(set->banks[before].path, set->banks[bank].path) == 0)
			return true;
	return false;
}

static void put_plan_files(struct arena *arena, const struct set *set, struct text *out)
{
	for (size_t bank = 0; set != NULL && bank < set->bank_count; bank++) {
		const char *path = is_named_before(set, bank) ? "" : set_bank_path(arena, set, bank);
		out->failed = out->failed || path == NULL;
		if (path != NULL && path[0] != '\0')
			text_put_bytes(out, path, strlen(path) + 1);
	}
	text_put_bytes(out, "", 1);
}

// Puts nothing if the source is no set's.
static void put_files_of_set(struct arena *arena, const struct source *source, struct text *out)
{
	struct diagnostics *unsaid = diagnostics_create();
	const struct node *root = unsaid != NULL ? document_parse(arena, source, unsaid) : NULL;
	struct set *set = NULL;
	if (root != NULL && node_is_set(root)) {
		set = set_read(source, unsaid);
		put_plan_files(arena, set, out);
	}
	out->failed = out->failed || unsaid == NULL || diagnostics_has_system_error(unsaid);
	set_destroy(set);
	diagnostics_destroy(unsaid);
}

bool scanlatch_set_plans(const char *path, const char *name, char **plans)
{
	struct arena *arena = arena_create();
	struct text files = {0};
	struct source source = {name, NULL, 0};
	char *bytes, *result = NULL;
	const enum read_status status = arena != NULL ? file_read(arena, path, SCANLATCH_PLAN_BYTES, &bytes, &source.length) : READ_MEMORY;
	if (status == READ_OK) {
		source.bytes = bytes;
		put_files_of_set(arena, &source, &files);
	}
	if (files.length > 0 && !files.failed && (result = malloc(files.length)) != NULL)
		memcpy(result, files.bytes, files.length);
	const bool good = status != READ_MEMORY && !files.failed && (files.length == 0 || result != NULL);
	if (good)
		*plans = result;
	text_release(&files);
	arena_destroy(arena);
	return good;
}

void plan_set_destroy(struct plan_set *plans)
{
	if (plans == NULL)
		return;
	for (size_t bank = 0; plans->plans != NULL && bank < plans->set->bank_count; bank++)
		plan_destroy(plans->plans[bank]);
	set_destroy(plans->set);
	arena_destroy(plans->arena);
}
