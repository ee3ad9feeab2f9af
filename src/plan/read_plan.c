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
	PLAN_KEYS
};

static const struct key plan_keys[PLAN_KEYS] = {
	[PLAN_VERSION] = {"scanlatch", KEY_REQUIRED}, [PLAN_NAME] = {"name", KEY_REQUIRED},     [PLAN_NOTE] = {"note", KEY_OPTIONAL},
	[PLAN_STANDARD] = {"standard", KEY_LATER},    [PLAN_GRADE] = {"grade", KEY_LATER},      [PLAN_CLOCK] = {"clock", KEY_REQUIRED},
	[PLAN_SIGNALS] = {"signals", KEY_REQUIRED},   [PLAN_LINES] = {"lines", KEY_REQUIRED},   [PLAN_FRAME] = {"frame", KEY_REQUIRED},
	[PLAN_MACHINE] = {"machine", KEY_REQUIRED},   [PLAN_PARTS] = {"parts", KEY_OPTIONAL},   [PLAN_CHIPS] = {"chips", KEY_REQUIRED},
	[PLAN_TIMING] = {"timing", KEY_OPTIONAL},     [PLAN_SWEEP] = {"sweep", KEY_OPTIONAL},
};

// Longest plan name: with a label and an ending it must still make a file name.
#define PLAN_NAME_CHARACTERS 100

static void read_version(struct reader *reader, const struct node *node)
{
	if (node->kind == NODE_SCALAR && strcmp(node->text, "1") == 0)
		return;
	if (!expect_kind(reader, node, NODE_SCALAR, "scanlatch"))
		return;
	diagnose(reader->diagnostics, RULE_LANGUAGE_VERSION, node->place, "scanlatch: wanted version 1 of the plan language, found \"%s\"",
	         node->text);
}

static void read_plan_name(struct reader *reader, const struct node *node)
{
	const char *text;
	if (!read_scalar(reader, node, "name", &text))
		return;
	if (text[0] == '-' || node->length > PLAN_NAME_CHARACTERS ||
	    strspn(text, "abcdefghijklmnopqrstuvwxyz0123456789-") != node->length) {
		diagnose(reader->diagnostics, RULE_BAD_NAME, node->place,
		         "name \"%s\": wanted 1 to %d lower-case letters, digits and -, not starting with -", text, PLAN_NAME_CHARACTERS);
		return;
	}
	reader->plan->name = text;
}

static void read_note(struct reader *reader, const struct node *node)
{
	reader->plan->note = "";
	if (node != NULL && expect_kind(reader, node, NODE_SCALAR, "note"))
		reader->plan->note = node->text;
}

// True if the document is something else than a plan: a set, or a board; reported.
static bool is_other_document(struct reader *reader, const struct node *root)
{
	if (root->kind != NODE_MAPPING || node_value(root, "scanlatch") != NULL)
		return false;
	for (size_t pair = 0; pair < root->count; pair++)
		if (strcmp(root->pairs[pair].key->text, "scanlatch-set") == 0) {
			diagnose(reader->diagnostics, RULE_NOT_YET, root->pairs[pair].key->place, "sets are not carried out by this version yet");
			return true;
		}
	return false;
}

static void hint_board(struct reader *reader, const struct node *root, const struct node **values)
{
	if (values[PLAN_LINES] == NULL && values[PLAN_FRAME] == NULL && values[PLAN_MACHINE] != NULL &&
	    !key_is_misspelt(root, plan_keys, PLAN_KEYS, PLAN_LINES) && !key_is_misspelt(root, plan_keys, PLAN_KEYS, PLAN_FRAME))
		diagnose_hint(reader->diagnostics, "a file without lines and frame is a board, not a plan");
}

static void read_root(struct reader *reader, const struct node *root)
{
	struct plan *plan = reader->plan;
	const struct node *values[PLAN_KEYS];
	if (is_other_document(reader, root) || !read_mapping(reader, root, "a plan", plan_keys, PLAN_KEYS, values))
		return;
	hint_board(reader, root, values);
	if (values[PLAN_VERSION] != NULL)
		read_version(reader, values[PLAN_VERSION]);
	if (values[PLAN_NAME] != NULL)
		read_plan_name(reader, values[PLAN_NAME]);
	read_note(reader, values[PLAN_NOTE]);
	if (values[PLAN_CLOCK] != NULL)
		read_clock(reader, values[PLAN_CLOCK]);
	if (values[PLAN_MACHINE] != NULL)
		read_machine(reader, values[PLAN_MACHINE]);
	if (values[PLAN_SIGNALS] != NULL)
		read_signals(reader, values[PLAN_SIGNALS]);
	if (values[PLAN_LINES] != NULL)
		read_lines(reader, values[PLAN_LINES]);
	settle_kinds(reader);
	if (values[PLAN_FRAME] != NULL && plan->line_count > 0)
		read_frame(reader, values[PLAN_FRAME]);
	if (values[PLAN_PARTS] != NULL)
		read_own_parts(reader, values[PLAN_PARTS]);
	if (values[PLAN_CHIPS] != NULL)
		read_chips(reader, values[PLAN_CHIPS]);
	read_timing(reader, values[PLAN_TIMING]);
	if (values[PLAN_SWEEP] != NULL)
		read_sweeps(reader, values[PLAN_SWEEP]);
}

// A path without its folders, printable as messages have it: a file's name may be any bytes, but JSON is UTF-8 (RFC 8259, section 8.1).
// In the arena; NULL when memory is out.
static const char *base_name(struct arena *arena, const char *path)
{
	const char *slash = strrchr(path, '/');
	const char *name = slash != NULL ? slash + 1 : path;
	struct text shown = {0};
	excerpt_put_printable(name, strlen(name), &shown);
	const char *copy = shown.failed ? NULL : arena_copy(arena, text_string(&shown), shown.length);
	text_release(&shown);
	return copy;
}

struct plan *plan_read(const struct source *source, const struct catalogue *catalogue, struct diagnostics *diagnostics)
{
	const size_t errors_before = diagnostics_error_count(diagnostics);
	struct arena *arena = arena_create();
	struct plan *plan = arena != NULL ? arena_alloc(arena, sizeof *plan) : NULL;
	const char *file_name = plan != NULL ? base_name(arena, source->name) : NULL;
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
	struct reader reader = {.arena = arena, .plan = plan, .catalogue = catalogue, .diagnostics = diagnostics};
	const struct node *root = document_parse(arena, source, diagnostics);
	if (root != NULL)
		read_root(&reader, root);
	if (root == NULL || diagnostics_error_count(diagnostics) > errors_before) {
		arena_destroy(arena);
		return NULL;
	}
	return plan;
}

void plan_destroy(struct plan *plan)
{
	if (plan != NULL)
		arena_destroy(plan->arena);
}
