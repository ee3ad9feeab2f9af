// Holds where picture is shown: there the state is meant to address something. Each field that the board names is tried in each
// region of each block of lines, and where it names none, runs of state bits. What no expression tells is left free.
#include <string.h>

#include "base/arena.h"
#include "base/diagnostics.h"
#include "proof/lift_grid.h"

// A block of lines that show the same, while its holds are being looked for.
struct held_lines {
	uint32_t first_line, lines;
	uint8_t *cuts;                 // [lines]: it is to be cut before this line
	uint32_t cut_count;
};

// A field is regular if it wants a block in so few parts.
static uint32_t most_parts(uint32_t lines)
{
	return 1 + lines / 16;
}

static uint32_t cell_of(const struct lifting *lifting, uint32_t line, const struct lift_region *region)
{
	return lifting->lines[line].first_cell + region->first_cell;
}

// Of a line-frame machine all lines of a content must agree: rows would be an expression that its language does not have.
static bool take_line(const struct lifting *lifting, struct grid *grid, uint32_t cell)
{
	struct grid tried = *grid;
	if (!grid_take(&tried, cell) || (lifting->ends != NULL && tried.rows.slope != 0))
		return false;
	*grid = tried;
	return true;
}

// In how many parts a field's values over a block have expressions, as long ones as can be; 0 if they have none, or too many parts.
// Cuts between parts are marked in cuts[], if it is not NULL.
static uint32_t count_parts(const struct lifting *lifting, const struct held_lines *block, const struct lift_region *region,
                            const struct lift_field *field, bool by_modulus, uint8_t *cuts)
{
	const uint32_t most = lifting->ends != NULL ? 1 : most_parts(block->lines);
	uint32_t parts = 0, line = 0;
	while (line < block->lines) {
		struct grid grid;
		if (parts == most || !grid_start(&grid, lifting->lift->states, field->high, field->low, cell_of(lifting, block->first_line + line, region),
		                                 region->cells, by_modulus))
			return 0;
		if (cuts != NULL)
			cuts[line] = 1;
		parts++;
		do
			line++;
		while (line < block->lines && take_line(lifting, &grid, cell_of(lifting, block->first_line + line, region)));
	}
	return parts;
}

// Marks where a regular field wants the block cut.
static void mark_cuts(const struct lifting *lifting, struct held_lines *block, const struct lift_region *region,
                      const struct lift_field *field)
{
	const uint32_t exact = count_parts(lifting, block, region, field, false, NULL);
	const uint32_t modular = exact == 1 ? 0 : count_parts(lifting, block, region, field, true, NULL);
	if (exact > 0 || modular > 0)
		count_parts(lifting, block, region, field, exact == 0 || (modular > 0 && modular < exact), block->cuts);
}

// The expression of a field over a whole block; NULL if it has none.
static bool find_expression(struct lifting *lifting, const struct held_lines *block, const struct lift_region *region,
                            const struct lift_field *field, const char **expression)
{
	*expression = NULL;
	for (unsigned by_modulus = 0; by_modulus < 2; by_modulus++) {
		struct grid grid;
		if (!grid_start(&grid, lifting->lift->states, field->high, field->low, cell_of(lifting, block->first_line, region), region->cells,
		                by_modulus == 1))
			continue;
		uint32_t line = 1;
		while (line < block->lines && take_line(lifting, &grid, cell_of(lifting, block->first_line + line, region)))
			line++;
		if (line < block->lines)
			continue;
		*expression = grid_expression(&grid, lifting->lift->arena);
		return *expression != NULL || lift_memory(lifting);
	}
	return true;
}

static bool hold_region(struct lifting *lifting, const struct held_lines *block, struct lift_region *region,
                        const struct lift_field *fields, size_t count)
{
	region->holds = arena_array(lifting->lift->arena, count, sizeof *region->holds);
	if (region->holds == NULL)
		return lift_memory(lifting);
	for (size_t index = 0; index < count; index++) {
		const char *expression;
		if (!find_expression(lifting, block, region, &fields[index], &expression))
			return false;
		if (expression != NULL)
			region->holds[region->hold_count++] = (struct lift_hold){fields[index].name, expression};
	}
	return true;
}

static bool hold_block(struct lifting *lifting, const struct held_lines *block, const struct lift_field *fields, size_t count)
{
	const uint32_t index = lifting->lines[block->first_line].content;
	const struct content *content = &lifting->contents[index];
	struct lift_region *regions = arena_array(lifting->lift->arena, content->region_count, sizeof *regions);
	if (regions == NULL)
		return lift_memory(lifting);
	memcpy(regions, content->regions, content->region_count * sizeof *regions);
	for (size_t region = 0; region < content->region_count && count > 0; region++)
		if (regions[region].class == CLASS_PICTURE && !hold_region(lifting, block, &regions[region], fields, count))
			return false;
	return lift_add_block(lifting, index, block->lines, regions, content->region_count);
}

// Cuts a block where regular fields want it, unless that leaves scraps, and holds the parts.
static bool hold_run(struct lifting *lifting, struct held_lines block, const struct lift_field *fields, size_t count)
{
	const struct content *content = &lifting->contents[lifting->lines[block.first_line].content];
	memset(block.cuts, 0, block.lines);
	for (size_t region = 0; region < content->region_count; region++)
		for (size_t field = 0; field < count && content->regions[region].class == CLASS_PICTURE; field++)
			mark_cuts(lifting, &block, &content->regions[region], &fields[field]);
	block.cuts[0] = 1;
	for (uint32_t line = 0; line < block.lines; line++)
		block.cut_count += block.cuts[line];
	if (block.cut_count > 2 * most_parts(block.lines))
		memset(block.cuts + 1, 0, block.lines - 1);
	for (uint32_t first = 0, end; first < block.lines; first = end) {
		for (end = first + 1; end < block.lines && !block.cuts[end];)
			end++;
		const struct held_lines part = {.first_line = block.first_line + first, .lines = end - first};
		if (!hold_block(lifting, &part, fields, count))
			return false;
	}
	return true;
}

// Whether bits have expressions wherever picture is shown, and somewhere for more than one cell.
static bool is_regular(const struct lifting *lifting, const struct lift_field *field)
{
	bool any = false;
	for (uint32_t line = 0, lines; line < lifting->lift->line_count; line += lines) {
		const struct content *content = &lifting->contents[lifting->lines[line].content];
		lines = lift_run(lifting, line);
		const struct held_lines block = {.first_line = line, .lines = lines};
		for (size_t index = 0; index < content->region_count; index++) {
			const struct lift_region *region = &content->regions[index];
			if (region->class != CLASS_PICTURE)
				continue;
			any = any || region->cells > 1 || (lifting->ends == NULL && lines > 1);
			if (count_parts(lifting, &block, region, field, false, NULL) == 0 && count_parts(lifting, &block, region, field, true, NULL) == 0)
				return false;
		}
	}
	return any;
}

// The highest bit up to which the bits from `low` on are regular; `low` - 1 if even that one is not.
static int regular_high(const struct lifting *lifting, unsigned low)
{
	int high = (int)lifting->wiring.line.state_bits - 1;
	while (high >= (int)low && !is_regular(lifting, &(struct lift_field){NULL, (unsigned)high, low}))
		high--;
	return high;
}

// The most terms of a field's expressions wherever picture is shown; 0 if some block has none, exactly and as a whole.
static unsigned most_terms(const struct lifting *lifting, const struct lift_field *field)
{
	unsigned most = 0;
	for (uint32_t line = 0, lines; line < lifting->lift->line_count; line += lines) {
		const struct content *content = &lifting->contents[lifting->lines[line].content];
		lines = lift_run(lifting, line);
		for (size_t index = 0; index < content->region_count; index++) {
			const struct lift_region *region = &content->regions[index];
			struct grid grid;
			if (region->class != CLASS_PICTURE)
				continue;
			if (!grid_start(&grid, lifting->lift->states, field->high, field->low, cell_of(lifting, line, region), region->cells, false))
				return 0;
			for (uint32_t next = 1; next < lines; next++)
				if (!take_line(lifting, &grid, cell_of(lifting, line + next, region)))
					return 0;
			const unsigned terms = sequence_terms(&grid.rows) + sequence_terms(&grid.columns);
			most = terms > most ? terms : most;
		}
	}
	return most;
}

// The high bit of a field's lower part, where two parts tell by fewer terms each, and by no more together, what takes three or four as one:
// 80*(row/9) and row%9 in place of 80*(row/9) + 2048*(row%9). The field's own high bit if there are none.
static unsigned split_high(const struct lifting *lifting, unsigned high, unsigned low)
{
	const unsigned whole = most_terms(lifting, &(struct lift_field){NULL, high, low});
	for (unsigned cut = high; whole > 2 && cut > low + 1; cut--) {
		const unsigned below = most_terms(lifting, &(struct lift_field){NULL, cut - 1, low});
		const unsigned above = below == 0 || below >= whole ? 0 : most_terms(lifting, &(struct lift_field){NULL, high, cut});
		if (above > 0 && below + above <= whole)
			return cut - 1;
	}
	return high;
}

// Finds runs of two state bits and more that the picture's lines and columns tell.
static bool find_fields(struct lifting *lifting)
{
	struct lift *lift = lifting->lift;
	lift->fields = arena_array(lift->arena, LIMIT_FIELDS, sizeof *lift->fields);
	if (lift->fields == NULL)
		return lift_memory(lifting);
	for (unsigned low = 0; low + 1 < lifting->wiring.line.state_bits;) {
		const int regular = regular_high(lifting, low);
		const int high = regular > (int)low ? (int)split_high(lifting, (unsigned)regular, low) : regular;
		if (high > (int)low) {
			const char *name = arena_format(lift->arena, "bits_%d_%u", high, low);
			if (name == NULL)
				return lift_memory(lifting);
			lift->fields[lift->field_count++] = (struct lift_field){name, (unsigned)high, low};
		}
		low = high < (int)low ? low + 1 : (unsigned)high + 1;
	}
	return true;
}

// Whether the line stage of a line-frame machine numbers cells as a plan without holds would have it.
bool lift_numbers_cells(const struct lifting *lifting)
{
	const uint32_t mask = low_bits(lifting->wiring.line.state_bits);
	for (uint32_t line = 0; line < lifting->lift->line_count; line++)
		for (uint32_t cell = 0; cell < lifting->lines[line].cells; cell++)
			if ((lifting->lift->states[lifting->lines[line].first_cell + cell] & mask) != cell)
				return false;
	return true;
}

// The fields that may be held: the board's own, or found ones.
static bool choose_fields(struct lifting *lifting, const struct lift_field **fields, size_t *count)
{
	const struct machine_plan *machine = &lifting->plan->machine;
	struct lift_field *named = arena_array(lifting->arena, machine->field_count + 1, sizeof *named);
	*count = 0;
	if (named == NULL)
		return lift_memory(lifting);
	*fields = named;
	if (machine->line.advance == ADVANCE_COUNT || lifting->lift->options.near || lifting->lift->options.without_holds)
		return true;
	for (size_t index = 0; index < machine->field_count; index++)
		named[(*count)++] = (struct lift_field){machine->fields[index].name, machine->fields[index].high, machine->fields[index].low};
	if (*count > 0 || (lifting->ends != NULL && lift_numbers_cells(lifting)))
		return true;
	if (!find_fields(lifting))
		return false;
	*fields = lifting->lift->fields;
	*count = lifting->lift->field_count;
	return true;
}

bool lift_hold(struct lifting *lifting)
{
	const struct lift *lift = lifting->lift;
	const struct lift_field *fields = NULL;
	size_t count;
	uint8_t *cuts = arena_alloc(lifting->arena, lift->line_count);
	if (cuts == NULL)
		return lift_memory(lifting);
	if (!choose_fields(lifting, &fields, &count))
		return false;
	for (uint32_t line = 0, lines; line < lift->line_count; line += lines) {
		lines = lift_run(lifting, line);
		if (!hold_run(lifting, (struct held_lines){.first_line = line, .lines = lines, .cuts = cuts}, fields, count))
			return false;
	}
	return true;
}
