#include "view/address_use.h"

#include "base/arena.h"

// Calls for each row of a stage with its line type.
typedef void row_visit(void *context, uint32_t address, size_t type);

// A loop's rows are the cells of the first lap of its period, those of a line stage the cells of each type.
static void visit_rows(const struct table *table, enum stage stage, row_visit *visit, void *context)
{
	const struct timeline *timeline = table->timeline;
	const uint32_t count = table_row_count(table, stage);
	if (stage == STAGE_FRAME || table->wiring.form == FORM_LOOP) {
		uint32_t line = 0;
		for (uint32_t row = 0; row < count; row++) {
			while (stage == STAGE_LINE && line + 1 < timeline->line_count && timeline->lines[line + 1].first_cell <= row)
				line++;
			visit(context, table_row_address(table, stage, row), timeline->lines[stage == STAGE_FRAME ? row : line].type);
		}
		return;
	}
	for (size_t type = 0; type < timeline->plan->line_count; type++)
		for (uint32_t row = table->first_row[type]; row < table->first_row[type + 1]; row++)
			visit(context, table_row_address(table, stage, row), type);
}

struct type_count {
	uint32_t *rows;                // [types]
};

static void count_type(void *context, uint32_t address, size_t type)
{
	(void)address;
	((struct type_count *)context)->rows[type]++;
}

// The types with the most rows, by falling number, and then in the order of the plan.
static void choose_types(struct address_use *use, const uint32_t *rows, size_t count)
{
	for (size_t type = 0; type < count; type++) {
		if (rows[type] == 0)
			continue;
		unsigned place = use->type_count < NAMED_USES ? use->type_count : NAMED_USES;
		while (place > 0 && rows[use->types[place - 1]] < rows[type])
			place--;
		if (use->type_count == NAMED_USES)
			use->other_types++;
		else
			use->type_count++;
		for (unsigned index = use->type_count - 1; index > place && place < NAMED_USES; index--)
			use->types[index] = use->types[index - 1];
		if (place < NAMED_USES)
			use->types[place] = type;
	}
}

static void count_bin(void *context, uint32_t address, size_t type)
{
	struct address_use *use = context;
	unsigned kind = 0;
	while (kind < use->type_count && use->types[kind] != type)
		kind++;
	kind = kind == use->type_count ? USE_OTHERS : kind;
	use->bins[address >> (use->bits - use->bin_bits)][kind]++;
	use->first[kind] = use->rows[kind] == 0 || address < use->first[kind] ? address : use->first[kind];
	use->last[kind] = use->rows[kind] == 0 || address > use->last[kind] ? address : use->last[kind];
	use->rows[kind]++;
}

static void count_spare(struct address_use *use)
{
	const uint32_t size = (uint32_t)1 << (use->bits - use->bin_bits);
	for (uint32_t bin = 0; bin >> use->bin_bits == 0; bin++) {
		uint32_t used = 0;
		for (unsigned kind = 0; kind < USE_SPARE; kind++)
			used += use->bins[bin][kind];
		use->bins[bin][USE_SPARE] = size - used;
		use->rows[USE_SPARE] += size - used;
	}
}

bool address_use_count(struct address_use *use, const struct table *table, enum stage stage, struct arena *arena)
{
	const size_t types = table->timeline->plan->line_count;
	struct type_count count = {arena_array(arena, types, sizeof *count.rows)};
	*use = (struct address_use){.stage = stage, .bits = wiring_stage(&table->wiring, stage)->address_bits};
	use->bin_bits = use->bits < MOST_BIN_BITS ? use->bits : MOST_BIN_BITS;
	use->bins = arena_array(arena, (size_t)1 << use->bin_bits, sizeof *use->bins);
	if (count.rows == NULL || use->bins == NULL)
		return false;
	visit_rows(table, stage, count_type, &count);
	choose_types(use, count.rows, types);
	visit_rows(table, stage, count_bin, use);
	count_spare(use);
	return true;
}

unsigned bin_use(const struct address_use *use, uint32_t bin, bool *whole)
{
	const uint32_t *counts = use->bins[bin], size = (uint32_t)1 << (use->bits - use->bin_bits);
	unsigned most = 0;
	for (unsigned kind = 1; kind < USE_SPARE; kind++)
		if (counts[kind] > counts[most])
			most = kind;
	most = counts[most] == 0 ? USE_SPARE : most;
	*whole = counts[most] == size;
	return most;
}

struct code_count {
	const struct field *field;
	uint32_t *counts;
};

static void count_code(void *context, uint32_t address, size_t type)
{
	const struct code_count *count = context;
	(void)type;
	count->counts[field_value(count->field, address)]++;
}

void rows_by_code(const struct table *table, const struct field *field, uint32_t *counts)
{
	struct code_count count = {field, counts};
	visit_rows(table, STAGE_LINE, count_code, &count);
}
