#include "plan/read.h"

#include <string.h>

#include "base/arena.h"
#include "base/excerpt.h"
#include "base/file.h"
#include "base/text.h"

enum {
	PLAN_VERSION,
	PLAN_NAME,
	PLAN_NOTE,
	PLAN_STANDARD,
	PLAN_GRADE,
	PLAN_CLOCK,
	PLAN_SIGNALS,
	PLAN_LINES,
	PLAN_FRAME,
	PLAN_MACHINE,
	PLAN_PARTS,
	PLAN_CHIPS,
	PLAN_TIMING,
	PLAN_SWEEP,
	PLAN_BANK,
	PLAN_BANKS,
	PLAN_KEYS
};

// What plans and boards have both.
#define BOARD_KEYS \
	[PLAN_VERSION] = {"scanlatch", KEY_REQUIRED, &version_shape, "The version of the plan language"}, \
	[PLAN_NAME] = {"name", KEY_REQUIRED, &file_stem_shape, "Begins the names of the files that are written"}, \
	[PLAN_NOTE] = {"note", KEY_OPTIONAL, &note_shape, "What the board is, for reports"}, \
	[PLAN_STANDARD] = {"standard", KEY_OPTIONAL, &standard_shape, "What to measure against: a standard of the catalogue, or one's own"}, \
	[PLAN_GRADE] = {"grade", KEY_OPTIONAL, &grade_shape, \
	                "studio: the published limits; monitor (what it is when left out): what receivers and monitors accept"}, \
	[PLAN_CLOCK] = {"clock", KEY_REQUIRED, &clock_shape, "The master clock, and what is divided from it"}, \
	[PLAN_SIGNALS] = {"signals", KEY_REQUIRED, &signals_shape, "The control lines of the board, in the order of the word's bits"}, \
	[PLAN_MACHINE] = {"machine", KEY_REQUIRED, &machine_shape, "The form of the sequencer and its state"}, \
	[PLAN_PARTS] = {"parts", KEY_OPTIONAL, &parts_shape, "Memories that the catalogue does not have, by name"}, \
	[PLAN_CHIPS] = {"chips", KEY_REQUIRED, &chips_shape, "The EEPROMs, and what is wired to their pins"}, \
	[PLAN_TIMING] = {"timing", KEY_OPTIONAL, &timing_shape, "The parts around the EEPROMs, for the proof of speed"}, \
	[PLAN_SWEEP] = {"sweep", KEY_OPTIONAL, &sweeps_shape, "State bits whose values must all come up within a time"}, \
	[PLAN_BANK] = {"bank", KEY_ELSEWHERE, NULL, NULL}, \
	[PLAN_BANKS] = {"banks", KEY_ELSEWHERE, NULL, NULL}

static const struct key plan_keys[PLAN_KEYS] = {
	BOARD_KEYS,
	[PLAN_LINES] = {"lines", KEY_REQUIRED, &lines_shape, "The line types, by name: what regions each is made of"},
	[PLAN_FRAME] = {"frame", KEY_REQUIRED, &frame_shape, "Blocks of lines, in order; the sequencer loops over them for ever"},
};

// A board is everything but lines and frame; those of a plan that is given in its place are passed over.
static const struct key board_keys[PLAN_KEYS] = {
	BOARD_KEYS,
	[PLAN_LINES] = {"lines", KEY_OPTIONAL, &lines_shape, "Of a plan in a board's place; passed over"},
	[PLAN_FRAME] = {"frame", KEY_OPTIONAL, &frame_shape, "Of a plan in a board's place; passed over"},
};

const struct shape plan_shape = {
	.kind = SHAPE_MAPPING, .about = "What every line of the picture is made of, and what the board looks like",
	.keys = plan_keys, .key_count = PLAN_KEYS,
};
const struct shape board_shape = {
	.kind = SHAPE_MAPPING, .about = "What a board looks like: a plan without lines and frame",
	.keys = board_keys, .key_count = PLAN_KEYS,
	BONDS({.key = "lines", .absent = true, .needs = "machine", .shape = &lineless_machine_shape}),
};

#define OF_A_SET "that is of a set, which begins with scanlatch-set: 1"

static const struct stray_key set_strays[] = {{"bank", OF_A_SET}, {"banks", OF_A_SET}};

// Longest name of a plan or set: with a label and an ending it must still make a file name.
#define STEM_CHARACTERS 100

static const char *const versions[] = {"1"};

const struct shape version_shape = {.kind = SHAPE_CHOICE, .words = versions, .word_count = COUNT_OF(versions)};
const struct shape file_stem_shape = {
	.kind = SHAPE_TEXT, .about = "1 to 100 lower-case letters, digits and -, not starting with -",
	.pattern = "[a-z0-9][a-z0-9-]*", .most = STEM_CHARACTERS, .also = ALSO_NUMBER | ALSO_TRUTH,
};

void read_version(struct reader *reader, const struct node *node, const char *what)
{
	if (node->kind == NODE_SCALAR && strcmp(node->text, versions[0]) == 0)
		return;
	if (!expect_kind(reader, node, NODE_SCALAR, what))
		return;
	diagnose(reader->diagnostics, RULE_LANGUAGE_VERSION, node->place, "%s: wanted version 1 of the plan language, found \"%s\"", what,
	         SHORT(node->text));
}

bool read_file_stem(struct reader *reader, const struct node *node, const char **name)
{
	const char *text;
	if (!read_scalar(reader, node, "name", &text))
		return false;
	if (text[0] == '-' || node->length > STEM_CHARACTERS ||
	    strspn(text, "abcdefghijklmnopqrstuvwxyz0123456789-") != node->length) {
		diagnose(reader->diagnostics, RULE_BAD_NAME, node->place,
		         "name \"%s\": wanted 1 to %d lower-case letters, digits and -, not starting with -", SHORT(text), STEM_CHARACTERS);
		return false;
	}
	*name = text;
	return true;
}

const char *read_note(struct reader *reader, const struct node *node)
{
	return node != NULL && expect_kind(reader, node, NODE_SCALAR, "note") ? node->text : "";
}

static const struct node *set_key(const struct node *root)
{
	if (root->kind != NODE_MAPPING || node_value(root, "scanlatch") != NULL)
		return NULL;
	for (size_t pair = 0; pair < root->count; pair++)
		if (strcmp(root->pairs[pair].key->text, "scanlatch-set") == 0)
			return root->pairs[pair].key;
	return NULL;
}

bool node_is_set(const struct node *root)
{
	return set_key(root) != NULL;
}

// True if the document is a set; reported.
static bool refuse_set(struct reader *reader, const struct node *root)
{
	const struct node *key = set_key(root);
	if (key == NULL)
		return false;
	diagnose(reader->diagnostics, RULE_BANK_PLAN, key->place, "wanted a plan, found a set");
	if (reader->set != NULL) {
		const struct set_bank *bank = &reader->set->banks[reader->bank];
		diagnose_also(reader->diagnostics, bank->place, "bank %u of the set \"%s\"", bank->number, reader->set->file_name);
		diagnose_hint(reader->diagnostics, "a set cannot stand in a set: name the plans themselves");
	}
	return true;
}

// True if the document is neither a plan nor meant to be one, so that what else it lacks is no news; reported.
static bool refuse_other(struct reader *reader, const struct node *root, const char *what)
{
	if (root->kind != NODE_MAPPING || node_value(root, plan_keys[PLAN_VERSION].name) != NULL ||
	    key_is_misspelt(root, plan_keys, PLAN_KEYS, PLAN_VERSION))
		return false;
	diagnose(reader->diagnostics, RULE_MISSING_KEY, root->place, "%s needs the key \"%s\"", what, plan_keys[PLAN_VERSION].name);
	diagnose_hint(reader->diagnostics, "plans and boards begin with scanlatch: 1, sets of plans with scanlatch-set: 1; other YAML files are none");
	return true;
}

static void hint_board(struct reader *reader, const struct node *root, const struct node **values)
{
	if (values[PLAN_LINES] == NULL && values[PLAN_FRAME] == NULL && values[PLAN_MACHINE] != NULL &&
	    !key_is_misspelt(root, plan_keys, PLAN_KEYS, PLAN_LINES) && !key_is_misspelt(root, plan_keys, PLAN_KEYS, PLAN_FRAME))
		diagnose_hint(reader->diagnostics, "a file without lines and frame is a board, not a plan; scanlatch lift reads images against it");
}

// Settles the kind of a board. Line types are only counted, should it be a plan.
static void settle_board(struct reader *reader, const struct node *lines)
{
	struct plan *plan = reader->plan;
	const bool is_plan = lines != NULL && lines->kind == NODE_MAPPING && lines->count > 0;
	if (reader->form_known && plan->machine.form == FORM_LINE_FRAME && reader->kind == NULL && !is_plan) {
		diagnose(reader->diagnostics, RULE_BOARD_KIND, plan->machine.place,
		         "a board of two stages has to say how many bits its kind has, found no kind in machine");
		diagnose_hint(reader->diagnostics, "add kind: N bits: there are no line types to count");
	}
	plan->line_count = is_plan ? lines->count : 0;
	settle_kinds(reader);
	plan->line_count = 0;
}

static void read_lines_and_frame(struct reader *reader, const struct node *lines, const struct node *frame)
{
	if (reader->board) {
		settle_board(reader, lines);
		return;
	}
	if (lines != NULL)
		read_lines(reader, lines);
	settle_kinds(reader);
	if (frame != NULL && reader->plan->line_count > 0)
		read_frame(reader, frame);
}

static void read_root(struct reader *reader, const struct node *root)
{
	struct plan *plan = reader->plan;
	const struct node *values[PLAN_KEYS];
	const char *what = reader->board ? "a board" : "a plan";
	if (refuse_set(reader, root) || refuse_other(reader, root, what) || !read_mapping(reader, root, what, reader->board ? board_keys : plan_keys, PLAN_KEYS, values))
		return;
	report_elsewhere(reader, root, what, set_strays, COUNT_OF(set_strays));
	if (!reader->board)
		hint_board(reader, root, values);
	if (values[PLAN_VERSION] != NULL)
		read_version(reader, values[PLAN_VERSION], "scanlatch");
	if (values[PLAN_NAME] != NULL)
		read_file_stem(reader, values[PLAN_NAME], &plan->name);
	plan->note = read_note(reader, values[PLAN_NOTE]);
	read_plan_standard(reader, values[PLAN_STANDARD], values[PLAN_GRADE]);
	if (values[PLAN_CLOCK] != NULL)
		read_clock(reader, values[PLAN_CLOCK]);
	if (values[PLAN_MACHINE] != NULL)
		read_machine(reader, values[PLAN_MACHINE]);
	if (values[PLAN_SIGNALS] != NULL)
		read_signals(reader, values[PLAN_SIGNALS]);
	read_lines_and_frame(reader, values[PLAN_LINES], values[PLAN_FRAME]);
	if (values[PLAN_PARTS] != NULL)
		read_own_parts(reader, values[PLAN_PARTS]);
	if (values[PLAN_CHIPS] != NULL)
		read_chips(reader, values[PLAN_CHIPS]);
	read_timing(reader, values[PLAN_TIMING]);
	if (values[PLAN_SWEEP] != NULL)
		read_sweeps(reader, values[PLAN_SWEEP]);
}

const char *printable_base_name(struct arena *arena, const char *path)
{
	size_t end = strlen(path), start;
	while (end > 1 && path[end - 1] == '/')
		end--;
	for (start = end; start > 0 && path[start - 1] != '/'; start--)
		;
	if (start == end && end > 0) // the root
		start--;
	struct text shown = {0};
	excerpt_put_printable(path + start, end - start, &shown);
	const char *copy = shown.failed ? NULL : arena_copy(arena, text_string(&shown), shown.length);
	text_release(&shown);
	return copy;
}

// An empty plan in an arena of its own. NULL after reporting.
static struct plan *make_plan(const struct source *source, struct diagnostics *diagnostics)
{
	struct arena *arena = arena_create();
	struct plan *plan = arena != NULL ? arena_alloc(arena, sizeof *plan) : NULL;
	const char *file_name = plan != NULL ? printable_base_name(arena, source->name) : NULL;
	if (file_name == NULL) {
		diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){source, 0, 0}, "memory is out");
		arena_destroy(arena);
		return NULL;
	}
	plan->arena = arena;
	plan->source = source;
	plan->file_name = file_name;
	plan->source_crc32 = file_crc32(source->bytes, source->length);
	for (size_t role = 0; role < ROLE_COUNT; role++)
		plan->role_signal[role] = -1;
	return plan;
}

// Reads what a source holds; the reader says as what, and of which set.
static struct plan *read_source(const struct source *source, struct reader reader)
{
	struct diagnostics *diagnostics = reader.diagnostics;
	const size_t errors_before = diagnostics_error_count(diagnostics);
	struct plan *plan = make_plan(source, diagnostics);
	if (plan == NULL)
		return NULL;
	reader.arena = plan->arena;
	reader.plan = plan;
	reader.set_bits = plan->bank_bits = reader.set != NULL ? reader.set->bank_bits : 0;
	const struct node *root = document_parse(plan->arena, source, diagnostics);
	if (root != NULL)
		read_root(&reader, root);
	if (root != NULL && diagnostics_error_count(diagnostics) == errors_before)
		return plan;
	plan_destroy(plan);
	return NULL;
}

struct plan *plan_read_for_set(const struct source *source, const struct catalogue *catalogue, const struct set *set, size_t bank,
                               struct diagnostics *diagnostics)
{
	return read_source(source, (struct reader){.catalogue = catalogue, .diagnostics = diagnostics, .set = set, .bank = bank});
}

struct plan *plan_read(const struct source *source, const struct catalogue *catalogue, struct diagnostics *diagnostics)
{
	return plan_read_for_set(source, catalogue, NULL, 0, diagnostics);
}

struct plan *board_read(const struct source *source, const struct catalogue *catalogue, struct diagnostics *diagnostics)
{
	return read_source(source, (struct reader){.catalogue = catalogue, .diagnostics = diagnostics, .board = true});
}

void plan_destroy(struct plan *plan)
{
	if (plan != NULL)
		arena_destroy(plan->arena);
}
