#include <string.h>

#include "base/arena.h"
#include "base/excerpt.h"
#include "library/library.h"
#include "proof/lift.h"
#include "view/lift.h"

static bool report_memory(scanlatch_messages *messages)
{
	diagnose(messages->diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "memory is out");
	return false;
}

// The board that the bank's plan is.
static const struct member *member_of_bank(const scanlatch_plan *plan, unsigned bank)
{
	return &plan->members[plan->set != NULL ? set_bank_shown(plan->set->set, bank) : 0];
}

// The files' names as comments have them: without folders, and printable. False when memory is out.
static bool list_files(scanlatch_lift *lift)
{
	const size_t chips = lift->images->plan->plan->chip_count;
	const char **files = arena_array(lift->arena, chips, sizeof *files);
	for (size_t chip = 0; files != NULL && chip < chips; chip++) {
		const char *path = lift->images->sources[chip]->name, *slash = strrchr(path, '/');
		const char *name = slash != NULL ? slash + 1 : path;
		struct text shown = {0};
		excerpt_put_printable(name, strlen(name), &shown);
		files[chip] = shown.failed ? NULL : arena_copy(lift->arena, text_string(&shown), shown.length);
		text_release(&shown);
		if (files[chip] == NULL)
			return false;
	}
	lift->files = files;
	return files != NULL;
}

static struct lift_sources sources_of(const scanlatch_lift *lift)
{
	return (struct lift_sources){lift->lift->plan->file_name, lift->images->images, lift->files};
}

static bool write_plan(scanlatch_lift *lift, scanlatch_messages *messages)
{
	const struct lift_sources sources = sources_of(lift);
	struct text text = {0};
	const struct node *root = document_parse(lift->arena, lift->lift->plan->source, messages->diagnostics);
	if (root == NULL)
		return false;
	view_lift_plan(&text, lift->lift, root, &sources);
	lift->plan = text.failed ? NULL : arena_copy(lift->arena, text_string(&text), text.length);
	text_release(&text);
	return lift->plan != NULL || report_memory(messages);
}

static bool find_cut(const struct plan *plan, const char *name, size_t *signal, scanlatch_messages *messages)
{
	*signal = SIZE_MAX;
	for (size_t index = 0; name != NULL && index < plan->signal_count; index++)
		if (strcmp(plan->signals[index].name, name) == 0)
			*signal = index;
	if (name == NULL || *signal != SIZE_MAX)
		return true;
	struct text names = {0};
	for (size_t index = 0; index < plan->signal_count; index++)
		text_printf(&names, "%s%s", index > 0 ? ", " : "", plan->signals[index].name);
	diagnose(messages->diagnostics, RULE_UNKNOWN_SIGNAL, (struct place){plan->source, 0, 0}, "the board has no signal \"%s\" to cut lines at",
	         name);
	diagnose_hint(messages->diagnostics, "its signals are %s", text_string(&names));
	text_release(&names);
	return false;
}

static bool lift_all(scanlatch_lift *lift, const struct scanlatch_lift_options *options, scanlatch_messages *messages)
{
	const struct plan *plan = member_of_bank(lift->images->plan, options->bank)->plan;
	struct lift_options wanted = {.near = options->near, .bank = options->bank};
	if (options->bank >> plan->bank_bits != 0) {
		diagnose(messages->diagnostics, RULE_BAD_NUMBER, (struct place){lift->images->plan->source, 0, 0},
		         "bank: wanted 0 to %u, as the chips have %u bank bit%s, found %u", (1u << plan->bank_bits) - 1, plan->bank_bits,
		         plan->bank_bits == 1 ? "" : "s", options->bank);
		return false;
	}
	if (!find_cut(plan, options->cut, &wanted.cut_signal, messages))
		return false;
	lift->lift = lift_images(plan, lift->images->images, wanted, messages->diagnostics);
	if (lift->lift == NULL)
		return false;
	lift->found = lift->lift->loop_count > 0;
	if (!list_files(lift))
		return report_memory(messages);
	return write_plan(lift, messages) && lift_verify(lift, messages);
}

scanlatch_lift *scanlatch_lift_images(const scanlatch_images *images, const struct scanlatch_lift_options *options,
                                      scanlatch_messages *messages)
{
	struct arena *arena = arena_create();
	scanlatch_lift *lift = arena != NULL ? arena_alloc(arena, sizeof *lift) : NULL;
	if (lift == NULL) {
		report_memory(messages);
		arena_destroy(arena);
		return NULL;
	}
	*lift = (scanlatch_lift){.arena = arena, .images = images};
	if (lift_all(lift, options, messages))
		return lift;
	scanlatch_lift_destroy(lift);
	return NULL;
}

void scanlatch_lift_destroy(scanlatch_lift *lift)
{
	if (lift == NULL)
		return;
	lift_destroy(lift->lift);
	arena_destroy(lift->arena);
}

bool scanlatch_lift_found(const scanlatch_lift *lift)
{
	return lift->found;
}

const char *scanlatch_lift_plan(const scanlatch_lift *lift)
{
	return lift->plan;
}

char *scanlatch_lift_text(const scanlatch_lift *lift)
{
	struct text text = {0};
	view_lift_text(&text, lift->lift);
	return take_string(&text);
}

char *scanlatch_lift_json(const scanlatch_lift *lift)
{
	const struct lift_sources sources = sources_of(lift);
	return take_json(view_lift_json(lift->lift, &sources, lift->plan));
}

char *scanlatch_images_chip_text(const scanlatch_images *images, size_t chip)
{
	struct text text = {0};
	view_chip_rows(&text, images->plan->plan, chip, &images->images[chip]);
	return take_string(&text);
}
