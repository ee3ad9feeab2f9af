#include "plan/set.h"

#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "base/file.h"
#include "plan/read.h"

enum { SET_VERSION, SET_NAME, SET_NOTE, SET_BANK, SET_BANKS, SET_KEYS };

static const struct shape bank_number_shape = {.kind = SHAPE_TEXT, .pattern = WHOLE_PATTERN};
static const struct shape bank_path_shape = {
	.kind = SHAPE_TEXT, .never = "^/|(^|/)\\.\\.(/|$)", .also = ALSO_NUMBER | ALSO_TRUTH,
};
static const struct shape banks_shape = {
	.kind = SHAPE_NAMED, .name = &bank_number_shape, .item = &bank_path_shape, .least = 1, .most = 1 << LIMIT_BANK_BITS,
	.needs_name = "0x0+|0+",
};

static const struct key set_keys[SET_KEYS] = {
	[SET_VERSION] = {"scanlatch-set", KEY_REQUIRED, &version_shape, "The version of the plan language"},
	[SET_NAME] = {"name", KEY_REQUIRED, &file_stem_shape, "Begins the names of the files that are written"},
	[SET_NOTE] = {"note", KEY_OPTIONAL, &note_shape, "What the set is, for reports"},
	[SET_BANK] = {"bank", KEY_REQUIRED, BIT_COUNT(1, LIMIT_BANK_BITS), "The bits that choose a bank: so many jumpers"},
	[SET_BANKS] = {"banks", KEY_REQUIRED, &banks_shape,
	               "The plan of each bank, by its number; those that are not listed repeat bank 0. Paths are relative to the set and "
	               "stay in its folder"},
};

const struct shape set_shape = {
	.kind = SHAPE_MAPPING, .about = "Several plans in the same chips, chosen by jumpers", .keys = set_keys, .key_count = SET_KEYS,
};

bool source_is_set(const struct source *source)
{
	struct arena *arena = arena_create();
	struct diagnostics *unsaid = diagnostics_create();
	const struct node *root = arena != NULL && unsaid != NULL ? document_parse(arena, source, unsaid) : NULL;
	const bool is_set = root != NULL && node_is_set(root);
	diagnostics_destroy(unsaid);
	arena_destroy(arena);
	return is_set;
}

// True if no step of a path leads upwards or to the root.
static bool stays_in_folder(const char *path)
{
	if (path[0] == '/')
		return false;
	for (const char *step = path; step != NULL; step = strchr(step, '/')) {
		step += strspn(step, "/");
		if (strncmp(step, "..", 2) == 0 && (step[2] == '/' || step[2] == '\0'))
			return false;
	}
	return true;
}

static bool read_bank_path(struct reader *reader, const struct node *node, struct set_bank *bank)
{
	bank->place = node->place;
	if (!read_scalar(reader, node, "bank", &bank->path))
		return false;
	if (stays_in_folder(bank->path))
		return true;
	diagnose(reader->diagnostics, RULE_BANK_PATH, node->place, "bank %u: wanted a plan in the set's folder or below it, found \"%s\"",
	         bank->number, SHORT(bank->path));
	diagnose_hint(reader->diagnostics, "paths are relative to the set and have no step \"..\"");
	return false;
}

static bool read_bank_number(struct reader *reader, const struct node *node, unsigned bank_bits, struct set_bank *bank)
{
	const int64_t most = ((int64_t)1 << bank_bits) - 1;
	int64_t number;
	if (!read_whole(reader, node, "bank", 0, most, &number)) {
		if (whole_number_parse(node->text, &number))
			diagnose_hint(reader->diagnostics, "%u bank bit%s tell%s %lld banks apart", bank_bits, bank_bits == 1 ? "" : "s",
			              bank_bits == 1 ? "s" : "", (long long)most + 1);
		return false;
	}
	bank->number = (unsigned)number;
	return true;
}

static int compare_banks(const void *left, const void *right)
{
	const struct set_bank *a = left, *b = right;
	return (a->number > b->number) - (a->number < b->number);
}

// "0" and "0x0" are different keys but the same bank.
static bool is_first_of_number(struct reader *reader, const struct node *key, const struct set_bank *banks,
                               const struct set_bank *bank)
{
	for (const struct set_bank *other = banks; other < bank; other++)
		if (other->number == bank->number) {
			diagnose(reader->diagnostics, RULE_DOUBLED_NAME, key->place, "bank %u has a plan already", bank->number);
			diagnose_also(reader->diagnostics, other->place, "its plan");
			return false;
		}
	return true;
}

static void read_banks(struct reader *reader, const struct node *node, unsigned bank_bits, struct set *set)
{
	if (!expect_kind(reader, node, NODE_MAPPING, "banks"))
		return;
	struct set_bank banks[(1 << LIMIT_BANK_BITS) + 1]; // and one to read a number into that is doubled or too high
	size_t count = 0;
	bool known = true;
	for (size_t pair = 0; pair < node->count; pair++) {
		struct set_bank *bank = &banks[count];
		if (!read_bank_number(reader, node->pairs[pair].key, bank_bits, bank) ||
		    !is_first_of_number(reader, node->pairs[pair].key, banks, bank)) {
			known = false;
			continue;
		}
		read_bank_path(reader, node->pairs[pair].value, bank);
		count++;
	}
	qsort(banks, count, sizeof *banks, compare_banks);
	if (known && (count == 0 || banks[0].number != 0)) {
		diagnose(reader->diagnostics, RULE_MISSING_KEY, node->place, "banks: wanted a plan for bank 0, found none");
		diagnose_hint(reader->diagnostics, "banks that are not listed repeat bank 0");
	}
	struct set_bank *kept = reader_array(reader, count, sizeof *kept);
	if (kept == NULL)
		return;
	if (count > 0)
		memcpy(kept, banks, count * sizeof *kept);
	set->banks = kept;
	set->bank_count = count;
}

static void read_set_root(struct reader *reader, const struct node *root, struct set *set)
{
	const struct node *values[SET_KEYS];
	if (!read_mapping(reader, root, "a set", set_keys, SET_KEYS, values))
		return;
	if (values[SET_VERSION] != NULL)
		read_version(reader, values[SET_VERSION], "scanlatch-set");
	if (values[SET_NAME] != NULL)
		read_file_stem(reader, values[SET_NAME], &set->name);
	set->note = read_note(reader, values[SET_NOTE]);
	unsigned bank_bits = LIMIT_BANK_BITS;
	if (key_bit_count(reader, &set_keys[SET_BANK], values[SET_BANK], &bank_bits))
		set->bank_bits = bank_bits;
	if (values[SET_BANKS] != NULL)
		read_banks(reader, values[SET_BANKS], bank_bits, set);
}

struct set *set_read(const struct source *source, struct diagnostics *diagnostics)
{
	const size_t errors_before = diagnostics_error_count(diagnostics);
	struct arena *arena = arena_create();
	struct set *set = arena != NULL ? arena_alloc(arena, sizeof *set) : NULL;
	const char *file_name = set != NULL ? printable_base_name(arena, source->name) : NULL;
	if (file_name == NULL) {
		diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){source, 0, 0}, "memory is out");
		arena_destroy(arena);
		return NULL;
	}
	set->arena = arena;
	set->source = source;
	set->file_name = file_name;
	set->source_crc32 = file_crc32(source->bytes, source->length);
	struct plan no_plan = {.arena = arena, .source = source};
	struct reader reader = {.arena = arena, .plan = &no_plan, .diagnostics = diagnostics};
	const struct node *root = document_parse(arena, source, diagnostics);
	if (root != NULL)
		read_set_root(&reader, root, set);
	if (root == NULL || diagnostics_error_count(diagnostics) > errors_before) {
		arena_destroy(arena);
		return NULL;
	}
	return set;
}

void set_destroy(struct set *set)
{
	if (set != NULL)
		arena_destroy(set->arena);
}

const char *set_bank_path(struct arena *arena, const struct set *set, size_t bank)
{
	const char *name = set->source->name, *path = set->banks[bank].path;
	const char *slash = strrchr(name, '/');
	if (slash != NULL)
		return arena_format(arena, "%.*s/%s", (int)(slash - name), name, path);
	return arena_format(arena, "%s%s", path[0] == '-' ? "./" : "", path);
}

size_t set_bank_shown(const struct set *set, unsigned number)
{
	for (size_t bank = 0; bank < set->bank_count; bank++)
		if (set->banks[bank].number == number)
			return bank;
	return 0;
}
