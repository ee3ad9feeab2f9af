// Divides line types into the plan's regions, or where these are none, into their own with names by roles.
#include <inttypes.h>
#include <string.h>

#include "base/arena.h"
#include "compare/seen_work.h"
#include "plan/name_tree.h"

static bool list_named(struct seeing *seeing)
{
	const struct lift *lift = seeing->lift;
	uint32_t line = 0, first = 0;
	seeing->named = arena_array(seeing->arena, lift->line_count, sizeof *seeing->named);
	if (seeing->named == NULL)
		return seen_memory(seeing);
	for (size_t block = 0; block < lift->block_count; block++)
		for (uint32_t index = 0; index < lift->blocks[block].repeat; index++) {
			seeing->named[line++] = (struct named_line){first, lift->blocks[block].type};
			first += lift->types[lift->blocks[block].type].cells;
		}
	return true;
}

// The lifted line that a cell of the images' frame is in; *cell becomes one of the line.
static const struct lift_type *lifted_type(const struct seeing *seeing, uint32_t *cell)
{
	uint32_t low = 0, high = seeing->lift->line_count - 1;
	*cell = (uint32_t)(((uint64_t)*cell + seeing->images.turned) % seeing->lift->cell_count);
	while (low < high) {
		const uint32_t middle = low + (high - low + 1) / 2;
		if (seeing->named[middle].first <= *cell)
			low = middle;
		else
			high = middle - 1;
	}
	*cell -= seeing->named[low].first;
	return &seeing->lift->types[seeing->named[low].type];
}

static const char *lifted_region_name(const struct seeing *seeing, uint32_t cell)
{
	const struct lift_type *type = lifted_type(seeing, &cell);
	size_t region = 0;
	while (region + 1 < type->region_count && type->regions[region + 1].first_cell <= cell)
		region++;
	return type->regions[region].name;
}

// The length of a name without the number that lifting has told it apart by.
static size_t bare_length(const char *name)
{
	const size_t length = strlen(name);
	size_t bare = length;
	while (bare > 0 && name[bare - 1] >= '0' && name[bare - 1] <= '9')
		bare--;
	return bare < length && bare > 1 && name[bare - 1] == ' ' ? bare - 1 : length;
}

// A name as it is, or with the first number that makes it one that is not there yet; NULL when memory is out. It is kept with what is seen.
static const char *name_apart(struct seeing *seeing, struct name_tree *names, const char *name, size_t length)
{
	for (uint32_t number = 1; number < UINT32_MAX; number++) {
		const char *numbered =
			number == 1 ? arena_copy(seeing->seen->arena, name, length)
			            : arena_format(seeing->seen->arena, "%.*s %" PRIu32, (int)length, name, number);
		void **slot = numbered != NULL ? name_tree_slot(seeing->arena, names, numbered) : NULL;
		if (slot == NULL)
			return NULL;
		if (*slot != NULL)
			continue;
		*slot = names;
		return numbered;
	}
	return NULL;
}

static bool take_name(struct seeing *seeing, struct name_tree *names, const char *name)
{
	void **slot = name_tree_slot(seeing->arena, names, name);
	if (slot != NULL)
		*slot = names;
	return slot != NULL;
}

// A line type in the making.
struct dividing {
	struct seeing *seeing;
	struct seen_type *type;
	const struct line_type *planned; // NULL: the plan has it not
	const uint64_t *asserted;  // [cells]
	struct piece *pieces;
	size_t piece_count;
	struct name_tree names;    // of regions
	struct line_type *line;
};

static size_t list_pieces(const struct dividing *dividing, struct piece *pieces)
{
	const uint64_t stretch = dividing->seeing->stretch;
	size_t count = 0;
	for (uint32_t cell = 0; cell < dividing->type->cells; cell++) {
		const uint64_t asserted = dividing->asserted[cell] & ~stretch;
		const bool begins = cell == 0 || asserted != (dividing->asserted[cell - 1] & ~stretch);
		if (begins && pieces != NULL)
			pieces[count] = (struct piece){.first = cell, .asserted = asserted, .region = NONE};
		count += begins;
		if (pieces != NULL)
			pieces[count - 1].cells++;
	}
	return count;
}

static bool shows_plan(const struct dividing *dividing)
{
	const struct laid_line *laid = &dividing->seeing->planned->types[dividing->type->planned];
	return laid->cells == dividing->type->cells && memcmp(laid->asserted, dividing->asserted, laid->cells * sizeof *laid->asserted) == 0;
}

static bool take_regions(struct dividing *dividing)
{
	const struct laid_line *laid = &dividing->seeing->planned->types[dividing->type->planned];
	dividing->piece_count = dividing->planned->region_count;
	dividing->pieces = arena_array(dividing->seeing->arena, dividing->piece_count, sizeof *dividing->pieces);
	if (dividing->pieces == NULL)
		return seen_memory(dividing->seeing);
	for (size_t region = 0; region < dividing->piece_count; region++)
		dividing->pieces[region] = (struct piece){laid->regions[region].first_cell, laid->regions[region].cells,
		                                          dividing->planned->regions[region].assert_mask & ~dividing->seeing->stretch, region};
	return true;
}

static bool find_pieces(struct dividing *dividing)
{
	struct seeing *seeing = dividing->seeing;
	if (dividing->planned != NULL && shows_plan(dividing))
		return take_regions(dividing);
	dividing->piece_count = list_pieces(dividing, NULL);
	dividing->pieces = arena_array(seeing->arena, dividing->piece_count, sizeof *dividing->pieces);
	if (dividing->pieces == NULL)
		return seen_memory(seeing);
	list_pieces(dividing, dividing->pieces);
	return dividing->planned == NULL ||
	       seen_match_regions(seeing, dividing->type->planned, &dividing->pieces, &dividing->piece_count);
}

static uint32_t count_stretched(const struct dividing *dividing, uint32_t first, uint32_t end)
{
	uint32_t cell = first;
	while (cell < end && (dividing->asserted[cell] & dividing->seeing->stretch) != 0)
		cell++;
	return cell - first;
}

// The next stretched cell after ones that are not, which only another region can have; or the end.
static uint32_t next_stretched(const struct dividing *dividing, uint32_t cell, uint32_t end)
{
	while (cell < end && (dividing->asserted[cell] & dividing->seeing->stretch) == 0)
		cell++;
	return cell;
}

// The name of a region that is none of the plan's, or the rest of one.
static const char *other_name(struct dividing *dividing, const struct piece *piece, uint32_t first)
{
	const char *name = piece->region != NONE ? dividing->planned->regions[piece->region].name
	                                         : lifted_region_name(dividing->seeing, dividing->type->first + first);
	return name_apart(dividing->seeing, &dividing->names, name, piece->region != NONE ? strlen(name) : bare_length(name));
}

static bool add_region(struct dividing *dividing, const struct piece *piece, uint32_t first, uint32_t end, uint32_t stretched)
{
	struct seeing *seeing = dividing->seeing;
	const struct plan *plan = seeing->planned->plan;
	const size_t from = first == piece->first ? piece->region : NONE;
	const struct region *planned = from != NONE ? &dividing->planned->regions[from] : NULL;
	// Where the plan asserts stretch by name it counts no cells.
	const bool by_name = planned != NULL && (planned->assert_mask & seeing->stretch) != 0 && stretched == end - first;
	const char *name = planned != NULL ? planned->name : other_name(dividing, piece, first);
	if (name == NULL)
		return seen_memory(seeing);
	dividing->type->region_of[dividing->line->region_count] = from;
	dividing->line->regions[dividing->line->region_count++] = (struct region){
		.name = name, .length = LENGTH_CELLS, .cells = end - first, .assert_mask = piece->asserted | (by_name ? seeing->stretch : 0),
		.stretch = STRETCH_COUNT, .stretch_cells = by_name ? 0 : stretched, .place = {plan->source, 0, 0}};
	return true;
}

static bool add_piece(struct dividing *dividing, const struct piece *piece)
{
	const uint32_t end = piece->first + piece->cells;
	for (uint32_t first = piece->first, next; first < end; first = next) {
		const uint32_t stretched = count_stretched(dividing, first, end);
		next = next_stretched(dividing, first + stretched, end);
		if (!add_region(dividing, piece, first, next, stretched))
			return false;
	}
	return true;
}

static size_t most_regions(const struct dividing *dividing)
{
	size_t count = dividing->piece_count;
	for (uint32_t cell = 1; cell < dividing->type->cells; cell++)
		count += (dividing->asserted[cell] & ~dividing->asserted[cell - 1] & dividing->seeing->stretch) != 0;
	return count;
}

static bool note_cells(struct dividing *dividing)
{
	struct seen_type *type = dividing->type;
	type->cells_of = arena_array(dividing->seeing->arena, dividing->planned->region_count, sizeof *type->cells_of);
	if (type->cells_of == NULL)
		return seen_memory(dividing->seeing);
	for (size_t piece = 0; piece < dividing->piece_count; piece++)
		if (dividing->pieces[piece].region != NONE)
			type->cells_of[dividing->pieces[piece].region] = dividing->pieces[piece].cells;
	return true;
}

static bool divide(struct dividing *dividing)
{
	struct seeing *seeing = dividing->seeing;
	if (!find_pieces(dividing))
		return false;
	const size_t most = most_regions(dividing);
	if (most > UINT16_MAX)
		return seen_refuse(seeing, "a line of the images has more regions than a plan's may have");
	dividing->line->regions = arena_array(seeing->seen->arena, most, sizeof *dividing->line->regions);
	dividing->type->region_of = arena_array(seeing->arena, most, sizeof *dividing->type->region_of);
	if (dividing->line->regions == NULL || dividing->type->region_of == NULL)
		return seen_memory(seeing);
	for (size_t piece = 0; piece < dividing->piece_count; piece++)
		if (dividing->pieces[piece].region != NONE &&
		    !take_name(seeing, &dividing->names, dividing->planned->regions[dividing->pieces[piece].region].name))
			return seen_memory(seeing);
	for (size_t piece = 0; piece < dividing->piece_count; piece++)
		if (!add_piece(dividing, &dividing->pieces[piece]))
			return false;
	return dividing->planned == NULL || note_cells(dividing);
}

static bool make_line(struct seeing *seeing, struct name_tree *names, size_t index)
{
	struct seen_type *type = &seeing->types[index];
	struct line_type *line = &seeing->seen->plan->lines[index];
	const struct line_type *planned = type->planned != NONE ? &seeing->planned->plan->lines[type->planned] : NULL;
	struct dividing dividing = {.seeing = seeing, .type = type, .planned = planned, .line = line,
	                            .asserted = seeing->images.asserted + type->first};
	if (type->lines == 0) {
		*line = *planned;
		return true;
	}
	uint32_t cell = type->first + type->cells / 2;
	const char *name = planned == NULL ? lifted_type(seeing, &cell)->name : planned->name;
	const size_t length = planned == NULL ? bare_length(name) : strlen(name);
	*line = (struct line_type){.name = planned != NULL && !type->is_variant ? name : name_apart(seeing, names, name, length),
	                           .place = {seeing->planned->plan->source, 0, 0}};
	return line->name != NULL ? divide(&dividing) : seen_memory(seeing);
}

// Whether pins see all edges of a line type of the plan.
static bool sees_edges(const struct seeing *seeing, const struct seen_type *type)
{
	const struct line_type *line = type->planned != NONE ? &seeing->planned->plan->lines[type->planned] : NULL;
	bool seen = true;
	for (size_t region = 1; line != NULL && seen && region < line->region_count; region++)
		seen = ((line->regions[region].assert_mask ^ line->regions[region - 1].assert_mask) & ~seeing->stretch) != 0;
	return seen;
}

// First those that show all of the plan's edges, which others may then follow.
static bool make_lines(struct seeing *seeing)
{
	struct name_tree names = {NULL};
	for (size_t line = 0; line < seeing->planned->plan->line_count; line++)
		if (!take_name(seeing, &names, seeing->planned->plan->lines[line].name))
			return seen_memory(seeing);
	for (unsigned pass = 0; pass < 2; pass++)
		for (size_t index = 0; index < seeing->type_count; index++)
			if (sees_edges(seeing, &seeing->types[index]) == (pass == 0) && !make_line(seeing, &names, index))
				return false;
	return true;
}

bool seen_divide(struct seeing *seeing)
{
	struct plan *plan = seeing->seen->plan;
	plan->lines = arena_array(seeing->seen->arena, seeing->type_count, sizeof *plan->lines);
	plan->line_count = seeing->type_count;
	if (plan->lines == NULL)
		return seen_memory(seeing);
	return list_named(seeing) && make_lines(seeing);
}
