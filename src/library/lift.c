#include <string.h>

#include "base/arena.h"
#include "base/excerpt.h"
#include "catalogue/catalogue.h"
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

// A plan that was lifted, read again.
struct reread {
	struct arena *arena;
	struct diagnostics *diagnostics;
	struct source source;
	struct plan *plan;
	struct timeline *timeline;
};

static void reread_plan(struct reread *reread, const scanlatch_lift *lift)
{
	const scanlatch_plan *board = lift->images->plan;
	const unsigned bank = lift->lift->options.bank;
	const struct catalogue *catalogue = catalogue_load(reread->arena, reread->diagnostics);
	reread->source = (struct source){"the lifted plan", lift->plan, strlen(lift->plan)};
	if (catalogue != NULL && board->set != NULL)
		reread->plan = plan_read_for_set(&reread->source, catalogue, board->set->set, set_bank_shown(board->set->set, bank),
		                                 reread->diagnostics);
	else if (catalogue != NULL)
		reread->plan = plan_read(&reread->source, catalogue, reread->diagnostics);
	if (reread->plan != NULL)
		reread->timeline = timeline_create(reread->plan, reread->diagnostics);
}

// Whether a timeline is the images' loop, so many times.
static bool lays_out(const struct timeline *timeline, const struct lift *lift)
{
	const uint64_t cells = (uint64_t)lift->cell_count * lift->copies;
	if (timeline->cell_count != cells || timeline->tick_count != lift->tick_count * lift->copies)
		return false;
	for (uint32_t copy = 0; copy < lift->copies; copy++)
		if (memcmp(timeline->asserted + (size_t)copy * lift->cell_count, lift->asserted, lift->cell_count * sizeof *lift->asserted) != 0)
			return false;
	return true;
}

// Whether a byte of a chip is read with the jumpers set to a bank.
static bool is_of_bank(const struct chip *chip, size_t offset, unsigned bank)
{
	const size_t address = offset / (chip->part->data_pins / 8);
	for (unsigned pin = 0; pin < chip->part->address_pins; pin++)
		if (chip->address[pin].kind == ADDRESS_BANK && (address >> pin & 1) != (bank >> chip->address[pin].index & 1))
			return false;
	return true;
}

static size_t count_differing(const struct chip *chip, const struct image *left, const struct image *right, unsigned bank,
                              size_t *first)
{
	size_t count = 0;
	for (size_t offset = 0; offset < left->length; offset++) {
		if (left->bytes[offset] == right->bytes[offset] || !is_of_bank(chip, offset, bank))
			continue;
		if (count++ == 0)
			*first = offset;
	}
	return count;
}

// Whether what failed did so for want of memory.
static bool is_out_of_memory(const struct diagnostics *refusals)
{
	for (size_t index = 0; index < diagnostics_count(refusals); index++)
		if (diagnostics_rule(refusals, index) == RULE_OUT_OF_MEMORY)
			return true;
	return false;
}

// Of images that no plan gives, such as those of two stages whose lines begin in different states.
static void report_unbuilt(scanlatch_lift *lift, const struct diagnostics *refusals, scanlatch_messages *messages)
{
	size_t index = 0;
	while (index + 1 < diagnostics_count(refusals) && rule_row(diagnostics_rule(refusals, index))->severity != SEVERITY_ERROR)
		index++;
	diagnose(messages->diagnostics, RULE_LIFT_NEAR, (struct place){lift->lift->plan->source, 0, 0},
	         "the plan lays out the images' lines, but cannot be built as it stands: %s", rule_row(diagnostics_rule(refusals, index))->id);
	diagnose_hint(messages->diagnostics, "no plan gives images like these; build it to see why");
	lift->found = true;
}

// Builds the plan again and, where states are pinned, compares its images with those that it was lifted from. False after reporting that
// memory is out.
static bool compare_images(scanlatch_lift *lift, struct reread *reread, scanlatch_messages *messages)
{
	const struct plan *plan = lift->lift->plan;
	struct table *table = table_create(reread->timeline, reread->diagnostics);
	struct image *made = arena_array(reread->arena, plan->chip_count, sizeof *made);
	const struct table *tables[1] = {table};
	bool good = made != NULL && (table == NULL ? !is_out_of_memory(reread->diagnostics) : images_fill(tables, 1, reread->arena, made));
	if (good && table == NULL)
		report_unbuilt(lift, reread->diagnostics, messages);
	for (size_t chip = 0; good && table != NULL && lift->lift->options.near && chip < plan->chip_count; chip++) {
		size_t first = 0;
		const size_t count =
			count_differing(&plan->chips[chip], &made[chip], &lift->images->images[chip], lift->lift->options.bank, &first);
		if (count == 0)
			continue;
		diagnose(messages->diagnostics, RULE_LIFT_NEAR, (struct place){lift->images->sources[chip], 0, 0},
		         "the plan gives back other bytes for %zu of chip \"%s\", first at 0x%zX: 0x%02X, found 0x%02X", count,
		         plan->chips[chip].label, first, made[chip].bytes[first], lift->images->images[chip].bytes[first]);
		diagnose_hint(messages->diagnostics, "no plan says what rows hold that no cell of the frame reads, nor unwired pins");
		lift->found = true;
	}
	table_destroy(table);
	return good || report_memory(messages);
}

static void report_refusal(const scanlatch_lift *lift, const struct diagnostics *refusals, scanlatch_messages *messages)
{
	const size_t types = lift->lift->type_count;
	const char *rule = diagnostics_count(refusals) > 0 ? rule_row(diagnostics_rule(refusals, 0))->id : "another timeline";
	diagnose(messages->diagnostics, RULE_LIFT_SIZE, (struct place){lift->lift->plan->source, 0, 0},
	         "a plan of these images, of %zu bytes and %zu line type%s, is beyond what the plan language takes: %s", strlen(lift->plan),
	         types, types == 1 ? "" : "s", rule);
	if (lift->lift->options.near)
		diagnose_hint(messages->diagnostics, "without --near the plan is shorter");
}

// What is written is read again and held against the images.
static bool verify(scanlatch_lift *lift, scanlatch_messages *messages)
{
	struct reread reread = {.arena = arena_create(), .diagnostics = diagnostics_create()};
	bool good = reread.arena != NULL && reread.diagnostics != NULL;
	if (good)
		reread_plan(&reread, lift);
	else
		report_memory(messages);
	if (good && is_out_of_memory(reread.diagnostics))
		good = report_memory(messages);
	if (good && (reread.timeline == NULL || !lays_out(reread.timeline, lift->lift))) {
		good = false;
		report_refusal(lift, reread.diagnostics, messages);
	}
	// A loop that was lifted freely has states: those of the images. To find others may take long.
	if (good && (lift->lift->options.near || lift->lift->plan->machine.form == FORM_LINE_FRAME))
		good = compare_images(lift, &reread, messages);
	timeline_destroy(reread.timeline);
	plan_destroy(reread.plan);
	diagnostics_destroy(reread.diagnostics);
	arena_destroy(reread.arena);
	return good;
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
	return write_plan(lift, messages) && verify(lift, messages);
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
