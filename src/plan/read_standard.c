// standard and grade: what the plan is measured against (page 2.9).
#include "catalogue/standards.h"

#include "base/arena.h"
#include "plan/read.h"

#define MOST_STANDARDS 200

enum { OWN_BASE, OWN_LIMITS, OWN_KEYS };

static const struct key own_keys[OWN_KEYS] = {
	[OWN_BASE] = {"base", KEY_OPTIONAL, LISTED(LISTED_STANDARDS), "A standard whose limits hold but for those given here"},
	[OWN_LIMITS] = {"limits", KEY_OPTIONAL, SHAPE(.kind = SHAPE_LIMITS), "Limits of the plan's own, by what is measured"},
};

static const struct shape own_shape = {
	.kind = SHAPE_MAPPING, .title = "own standard", .keys = own_keys, .key_count = OWN_KEYS,
	BONDS({.key = "base", .absent = true, .needs = "limits", .shape = SHAPE(.kind = SHAPE_NAMED, .least = 1, .most = INT64_MAX)}),
};
static const struct shape *const standard_shapes[] = {LISTED(LISTED_STANDARDS), &own_shape};

const struct shape standard_shape = {.kind = SHAPE_EITHER, .shapes = standard_shapes, .shape_count = COUNT_OF(standard_shapes)};

static const char *const grade_words[GRADE_COUNT] = {[GRADE_STUDIO] = "studio", [GRADE_MONITOR] = "monitor"};

const struct shape grade_shape = {.kind = SHAPE_CHOICE, .words = grade_words, .word_count = GRADE_COUNT};

static void report_unknown(struct reader *reader, const struct node *node, const struct standards *standards)
{
	const char *names[MOST_STANDARDS];
	size_t count = 0;
	for (; count < standards->count && count < MOST_STANDARDS; count++)
		names[count] = standards->standards[count].name;
	diagnose(reader->diagnostics, RULE_UNKNOWN_STANDARD, node->place, "there is no standard \"%s\" in the catalogue", SHORT(node->text));
	hint_words(reader, node->text, names, count);
}

// NULL after reporting.
static const struct standard *read_named(struct reader *reader, const struct node *node, const char *what)
{
	const char *name;
	const struct standards *standards;
	if (!read_scalar(reader, node, what, &name))
		return NULL;
	standards = standards_load(reader->arena, reader->diagnostics);
	if (standards == NULL)
		return NULL;
	const struct standard *standard = catalogue_standard(standards, name);
	if (standard == NULL)
		report_unknown(reader, node, standards);
	return standard;
}

// Puts the limits of an item: the plan's own in both grades where it has one, else those of the base.
static void put_item(struct reader *reader, struct standard *standard, struct limit *limits, const struct standard *base,
                     enum limit_item item, const struct node *own)
{
	struct limit limit = {.item = item, .source = "the plan's own"};
	const bool taken = own != NULL && read_limit(reader, own, item, &limit);
	standard->own_limits += taken;
	for (unsigned grade = 0; grade < GRADE_COUNT; grade++) {
		limit.grade = (enum limit_grade)grade;
		const struct limit *inherited = base != NULL ? standard_limit(base, item, limit.grade) : NULL;
		if (taken)
			limits[standard->limit_count++] = limit;
		else if (inherited != NULL)
			limits[standard->limit_count++] = *inherited;
	}
}

static const struct standard *read_own(struct reader *reader, const struct node *node)
{
	const struct node *values[OWN_KEYS], *own[ITEM_COUNT] = {NULL};
	struct key keys[ITEM_COUNT];
	struct standard *standard = reader_array(reader, 1, sizeof *standard);
	struct limit *limits = reader_array(reader, (size_t)ITEM_COUNT * GRADE_COUNT, sizeof *limits);
	if (standard == NULL || limits == NULL || !read_mapping(reader, node, "a standard of one's own", own_keys, OWN_KEYS, values))
		return NULL;
	for (size_t item = 0; item < ITEM_COUNT; item++)
		keys[item] = (struct key)PLAIN_KEY(limit_item_facts((enum limit_item)item)->name, KEY_OPTIONAL);
	if (values[OWN_LIMITS] != NULL)
		read_mapping(reader, values[OWN_LIMITS], "limits", keys, ITEM_COUNT, own);
	if (values[OWN_BASE] == NULL && (values[OWN_LIMITS] == NULL || values[OWN_LIMITS]->count == 0))
		diagnose(reader->diagnostics, RULE_MISSING_KEY, node->place, "a standard of one's own needs limits, or the key \"base\"");
	const struct standard *base = values[OWN_BASE] != NULL ? read_named(reader, values[OWN_BASE], "base") : NULL;
	*standard = base != NULL ? *base : (struct standard){.name = "own", .title = "the plan's own limits", .documents = "", .fields = 1};
	standard->limits = limits;
	standard->limit_count = 0;
	for (size_t item = 0; item < ITEM_COUNT; item++)
		put_item(reader, standard, limits, base, (enum limit_item)item, own[item]);
	return standard;
}

void read_plan_standard(struct reader *reader, const struct node *standard, const struct node *grade)
{
	struct plan *plan = reader->plan;
	size_t choice = GRADE_MONITOR;
	if (standard != NULL)
		plan->standard = standard->kind == NODE_MAPPING ? read_own(reader, standard) : read_named(reader, standard, "standard");
	if (grade != NULL && read_choice(reader, grade, "grade", grade_words, GRADE_COUNT, &choice) && standard == NULL) {
		diagnose(reader->diagnostics, RULE_GRADE_UNUSED, grade->place, "grade: there is no standard whose grade it could be");
		diagnose_hint(reader->diagnostics, "name one with standard; scanlatch list standards has them");
	}
	plan->grade = (enum limit_grade)choice;
}
