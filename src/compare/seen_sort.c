// The line types of the images: lines that show the same, and are the same line of the plan's.
#include "base/arena.h"
#include "compare/seen_work.h"

// Lines of one content that are of one line type of the plan.
struct sort {
	struct sort *next;         // of the same content
	struct sort *other;        // of the same line type
	size_t planned;
	uint32_t content;
	size_t first;              // line
	uint32_t lines;
	size_t type;               // of the plan that is seen
};

struct sorting {
	struct seeing *seeing;
	uint32_t *content_of_line; // [lines]
	uint32_t *content_of_type; // [plan's line types]
	struct sort **of_content;  // [contents]
	size_t *type_of_content;   // [contents]: a line type of the plan that shows it, or NONE
	struct sort **of_type;     // [plan's line types]
	struct sort *unplanned, **last_unplanned;
	bool *used;                // [plan's line types]: the plan's frame has lines of them
	size_t count;
};

static bool begin(struct sorting *sorting)
{
	struct seeing *seeing = sorting->seeing;
	struct arena *arena = seeing->arena;
	const size_t types = seeing->planned->plan->line_count, most = types + seeing->line_count;
	sorting->content_of_line = arena_array(arena, seeing->line_count, sizeof *sorting->content_of_line);
	sorting->content_of_type = arena_array(arena, types, sizeof *sorting->content_of_type);
	sorting->of_content = arena_array(arena, most, sizeof(struct sort *));
	sorting->type_of_content = arena_array(arena, most, sizeof *sorting->type_of_content);
	sorting->of_type = arena_array(arena, types, sizeof(struct sort *));
	sorting->used = arena_array(arena, types, sizeof *sorting->used);
	sorting->last_unplanned = &sorting->unplanned;
	for (size_t content = 0; sorting->type_of_content != NULL && content < most; content++)
		sorting->type_of_content[content] = NONE;
	if (sorting->content_of_line == NULL || sorting->content_of_type == NULL || sorting->of_content == NULL ||
	    sorting->type_of_content == NULL || sorting->of_type == NULL || sorting->used == NULL)
		return seen_memory(seeing);
	for (uint32_t line = 0; line < seeing->planned->line_count; line++)
		sorting->used[seeing->planned->lines[line].type] = true;
	return true;
}

static bool number_contents(struct sorting *sorting)
{
	struct seeing *seeing = sorting->seeing;
	const struct timeline *planned = seeing->planned;
	const size_t types = planned->plan->line_count;
	struct shelf *shelf = shelf_create(seeing->arena, types + seeing->line_count);
	if (shelf == NULL)
		return seen_memory(seeing);
	for (size_t type = types; type-- > 0;) {
		const struct laid_line *laid = &planned->types[type];
		const uint32_t content = shelf_number(shelf, laid->asserted, laid->cells, UINT64_MAX);
		sorting->content_of_type[type] = content;
		// Of several, the first that the frame has.
		if (sorting->type_of_content[content] == NONE || sorting->used[type] || !sorting->used[sorting->type_of_content[content]])
			sorting->type_of_content[content] = type;
	}
	for (size_t line = 0; line < seeing->line_count; line++)
		sorting->content_of_line[line] =
			shelf_number(shelf, seeing->images.asserted + seeing->lines[line].first, seeing->lines[line].cells, UINT64_MAX);
	return true;
}

static struct sort *add_sort(struct sorting *sorting, size_t planned, uint32_t content, size_t line)
{
	struct sort *sort = arena_alloc(sorting->seeing->arena, sizeof *sort);
	if (sort == NULL)
		return NULL;
	*sort = (struct sort){.next = sorting->of_content[content], .planned = planned, .content = content, .first = line};
	sorting->of_content[content] = sort;
	sorting->count++;
	if (planned == NONE) {
		*sorting->last_unplanned = sort;
		sorting->last_unplanned = &sort->other;
	} else {
		sort->other = sorting->of_type[planned];
		sorting->of_type[planned] = sort;
	}
	return sort;
}

// A line that is none of the plan's, but shows what one of its types does, is of that.
static bool sort_lines(struct sorting *sorting, struct sort **sort_of_line)
{
	struct seeing *seeing = sorting->seeing;
	for (size_t index = 0; index < seeing->line_count; index++) {
		const uint32_t content = sorting->content_of_line[index];
		struct seen_line *line = &seeing->lines[index];
		if (line->planned_type == NONE)
			line->planned_type = sorting->type_of_content[content];
		struct sort *sort = sorting->of_content[content];
		while (sort != NULL && sort->planned != line->planned_type)
			sort = sort->next;
		if (sort == NULL)
			sort = add_sort(sorting, line->planned_type, content, index);
		if (sort == NULL)
			return seen_memory(seeing);
		sort->lines++;
		sort_of_line[index] = sort;
	}
	return true;
}

// The lines of a type that have its name: those that show what the plan says, or most.
static const struct sort *main_sort(const struct sorting *sorting, size_t type)
{
	const struct sort *best = NULL;
	for (const struct sort *sort = sorting->of_type[type]; sort != NULL; sort = sort->other) {
		if (sort->content == sorting->content_of_type[type])
			return sort;
		if (best == NULL || sort->lines >= best->lines)
			best = sort;
	}
	return best;
}

static void add_type(struct sorting *sorting, struct sort *sort, bool is_variant)
{
	struct seeing *seeing = sorting->seeing;
	const struct seen_line *line = &seeing->lines[sort->first];
	sort->type = seeing->type_count;
	seeing->types[seeing->type_count++] = (struct seen_type){.planned = sort->planned, .is_variant = is_variant, .first = line->first,
	                                                         .cells = line->cells, .lines = sort->lines};
}

// Types in the plan's order, each before its variants; those that the plan's frame does not have either stay; then the images' own.
static bool list_types(struct sorting *sorting)
{
	struct seeing *seeing = sorting->seeing;
	const size_t types = seeing->planned->plan->line_count;
	seeing->types = arena_array(seeing->arena, types + sorting->count, sizeof *seeing->types);
	if (seeing->types == NULL)
		return seen_memory(seeing);
	for (size_t type = 0; type < types; type++) {
		const struct sort *first = main_sort(sorting, type);
		if (first == NULL && !sorting->used[type])
			seeing->types[seeing->type_count++] = (struct seen_type){.planned = type, .cells = seeing->planned->types[type].cells};
		for (unsigned variants = 0; variants < 2; variants++)
			for (struct sort *sort = sorting->of_type[type]; sort != NULL; sort = sort->other)
				if ((sort != first) == (variants == 1))
					add_type(sorting, sort, variants == 1);
	}
	for (struct sort *sort = sorting->unplanned; sort != NULL; sort = sort->other)
		add_type(sorting, sort, false);
	return true;
}

bool seen_sort(struct seeing *seeing)
{
	struct sorting sorting = {.seeing = seeing};
	struct sort **sort_of_line = arena_array(seeing->arena, seeing->line_count, sizeof *sort_of_line);
	if (sort_of_line == NULL)
		return seen_memory(seeing);
	if (!begin(&sorting) || !number_contents(&sorting) || !sort_lines(&sorting, sort_of_line) || !list_types(&sorting))
		return false;
	for (size_t type = 0; type < seeing->type_count; type++)
		seeing->types[type].first_line = NONE;
	for (size_t line = seeing->line_count; line-- > 0;) {
		struct seen_type *type = &seeing->types[sort_of_line[line]->type];
		seeing->lines[line].type = sort_of_line[line]->type;
		seeing->lines[line].next = type->first_line;
		type->first_line = line;
	}
	return true;
}
