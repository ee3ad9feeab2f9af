// Which regions of a line type of the plan the pieces of a line are: the reading that takes the fewest changes.
#include <string.h>

#include "base/arena.h"
#include "compare/seen_work.h"

// What a reading costs. A region that shows something else is one change, and that of fewer signals is likelier; one that comes or goes
// changes a neighbour's length too. So where both could be, regions show something else rather than come and go.
#define COST_SIGNALS 5u        // and one more for each signal
#define COST_MOST_SIGNALS 9u
#define COST_LENGTH 2u
#define COST_ALONE 5u          // a piece that is no region, a region that is nowhere
#define MOST_SPAN 16u          // regions that one piece may be
#define MOST_OTHERS 1000u      // line types that are looked at for the same regions
#define MOST_PAIRS 250000u     // of pieces and regions

enum step { STEP_END, STEP_PIECE_ALONE, STEP_REGION_ALONE, STEP_SPAN }; // STEP_SPAN + n: n + 1 regions; above MOST_SPAN: without odd ones

struct cell {
	uint32_t cost;             // of what is left from here on
	uint32_t step;
};

// Pieces and regions that are not one another from either end on.
struct reading {
	const struct seeing *seeing;
	size_t planned_type;
	const struct region *regions;
	const struct laid_region *laid;
	const struct piece *pieces;
	size_t piece_count, region_count;
	size_t first_region;       // in the line
	uint32_t cells, planned_cells; // of the whole line
	uint64_t stretch;
	struct cell *table;        // [pieces + 1][regions + 1]
};

static struct cell *at(const struct reading *reading, size_t piece, size_t region)
{
	return &reading->table[piece * (reading->region_count + 1) + region];
}

static uint32_t signals_cost(const struct reading *reading, size_t piece, size_t region)
{
	uint64_t differing = (reading->pieces[piece].asserted ^ reading->regions[region].assert_mask) & ~reading->stretch;
	uint32_t cost = differing != 0 ? COST_SIGNALS : 0;
	for (; differing != 0; differing &= differing - 1)
		cost++;
	return cost < COST_MOST_SIGNALS ? cost : COST_MOST_SIGNALS;
}

static void offer(struct cell *cell, uint32_t cost, uint32_t step)
{
	if (cost < cell->cost)
		*cell = (struct cell){cost, step};
}

// A piece may be several regions in a row; of those in between that show something else, all are there, or none.
static void offer_spans(const struct reading *reading, size_t piece, size_t region)
{
	struct cell *cell = at(reading, piece, region);
	uint32_t signals = 0, odd = 0;
	uint64_t cells = 0, even_cells = 0;
	for (uint32_t span = 0; span < MOST_SPAN && region + span < reading->region_count; span++) {
		const uint32_t cost = signals_cost(reading, piece, region + span), here = reading->laid[region + span].cells;
		const uint32_t rest = at(reading, piece + 1, region + span + 1)->cost;
		signals += cost;
		odd += cost != 0;
		cells += here;
		even_cells += cost == 0 ? here : 0;
		if (reading->pieces[piece].cells > span)
			offer(cell, rest + signals + (cells != reading->pieces[piece].cells ? COST_LENGTH : 0), STEP_SPAN + span);
		if (odd > 0 && odd <= span && reading->pieces[piece].cells > span - odd)
			offer(cell, rest + odd * COST_ALONE + (even_cells != reading->pieces[piece].cells ? COST_LENGTH : 0),
			      STEP_SPAN + MOST_SPAN + span);
	}
}

static void fill_table(const struct reading *reading)
{
	for (size_t piece = reading->piece_count + 1; piece-- > 0;)
		for (size_t region = reading->region_count + 1; region-- > 0;) {
			struct cell *cell = at(reading, piece, region);
			const bool last_piece = piece == reading->piece_count, last_region = region == reading->region_count;
			*cell = (struct cell){last_piece && last_region ? 0 : UINT32_MAX, STEP_END};
			if (!last_piece && !last_region)
				offer_spans(reading, piece, region);
			if (!last_piece)
				offer(cell, at(reading, piece + 1, region)->cost + COST_ALONE, STEP_PIECE_ALONE);
			if (!last_region)
				offer(cell, at(reading, piece, region + 1)->cost + COST_ALONE, STEP_REGION_ALONE);
		}
}

// The regions that a piece is.
struct span {
	const struct reading *reading;
	const struct piece *piece;
	size_t count;
	uint32_t regions[MOST_SPAN];
	int64_t cells;             // that they have in the plan
};

static int64_t planned_cells(const struct span *span, size_t index)
{
	return span->reading->laid[span->regions[index]].cells;
}

// Which region of a span is longer or shorter than planned: the one at the edge that has moved; where the line is longer or shorter and
// neither edge has moved but for that, the longest.
static size_t stretched_region(const struct span *span)
{
	const struct reading *reading = span->reading;
	const struct laid_region *start = &reading->laid[span->regions[0]], *end = &reading->laid[span->regions[span->count - 1]];
	const bool starts_there = span->piece->first == start->first_cell;
	const bool ends_there = reading->cells - (span->piece->first + span->piece->cells) ==
	                        reading->planned_cells - (end->first_cell + end->cells);
	size_t longest = 0;
	if (starts_there != ends_there)
		return starts_there ? span->count - 1 : 0;
	for (size_t index = 1; starts_there && index < span->count; index++)
		if (planned_cells(span, index) > planned_cells(span, longest))
			longest = index;
	return starts_there ? longest : span->count - 1;
}

// Whether another line type has the same regions there in the plan, and where all their edges are seen they fill the piece too: then its
// edges are where that has them, as lines are described alike.
static bool take_lengths(const struct span *span, const struct seen_type *other, int64_t *lengths)
{
	const struct reading *reading = span->reading;
	const struct timeline *planned = reading->seeing->planned;
	const struct line_type *here = &planned->plan->lines[reading->planned_type], *there = &planned->plan->lines[other->planned];
	const struct laid_line *laid_here = &planned->types[reading->planned_type], *laid_there = &planned->types[other->planned];
	int64_t sum = 0;
	for (size_t index = 0; index < span->count; index++) {
		const size_t region = reading->first_region + span->regions[index];
		if (region >= there->region_count || strcmp(here->regions[region].name, there->regions[region].name) != 0 ||
		    laid_here->regions[region].cells != laid_there->regions[region].cells || other->cells_of[region] == 0)
			return false;
		lengths[index] = other->cells_of[region];
		sum += lengths[index];
	}
	return sum == span->piece->cells;
}

static bool find_lengths(const struct span *span, int64_t *lengths)
{
	const struct seeing *seeing = span->reading->seeing;
	int64_t found[MOST_SPAN];
	for (size_t type = 0; type < seeing->type_count && type < MOST_OTHERS; type++) {
		const struct seen_type *other = &seeing->types[type];
		if (other->cells_of == NULL || other->is_variant || !take_lengths(span, other, found))
			continue;
		memcpy(lengths, found, span->count * sizeof *found);
		return true;
	}
	return false;
}

// Cuts a piece into its regions. What is shorter keeps a cell; the next ones give what is missing.
static size_t put_span(const struct span *span, struct piece *out)
{
	const size_t at = stretched_region(span);
	int64_t more = (int64_t)span->piece->cells - span->cells, lengths[MOST_SPAN];
	uint32_t first = span->piece->first;
	for (size_t index = 0; index < span->count; index++)
		lengths[index] = planned_cells(span, index);
	if (more != 0 && find_lengths(span, lengths))
		more = 0;
	for (size_t step = 0; step < span->count && more != 0; step++) {
		int64_t *length = &lengths[(at + step) % span->count];
		const int64_t given = *length + more < 1 ? 1 - *length : more;
		*length += given;
		more -= given;
	}
	for (size_t index = 0; index < span->count; index++) {
		out[index] = (struct piece){first, (uint32_t)lengths[index], span->piece->asserted,
		                            span->reading->first_region + span->regions[index]};
		first += (uint32_t)lengths[index];
	}
	return span->count;
}

static struct span make_span(const struct reading *reading, size_t piece, size_t region, uint32_t step)
{
	const bool even_only = step >= STEP_SPAN + MOST_SPAN;
	const uint32_t count = (step - STEP_SPAN) % MOST_SPAN + 1;
	struct span span = {.reading = reading, .piece = &reading->pieces[piece]};
	for (uint32_t index = 0; index < count; index++) {
		if (even_only && signals_cost(reading, piece, region + index) != 0)
			continue;
		span.regions[span.count++] = (uint32_t)(region + index);
		span.cells += reading->laid[region + index].cells;
	}
	return span;
}

static size_t walk_table(const struct reading *reading, struct piece *out)
{
	size_t count = 0;
	for (size_t piece = 0, region = 0; piece < reading->piece_count || region < reading->region_count;) {
		const uint32_t step = at(reading, piece, region)->step;
		if (step == STEP_REGION_ALONE) {
			region++;
			continue;
		}
		if (step == STEP_PIECE_ALONE) {
			out[count++] = reading->pieces[piece++];
			continue;
		}
		const struct span span = make_span(reading, piece, region, step);
		count += put_span(&span, out + count);
		region += (step - STEP_SPAN) % MOST_SPAN + 1;
		piece++;
	}
	return count;
}

// Whether a piece is a region and nothing else can be.
static bool is_region(const struct seeing *seeing, const struct piece *piece, size_t planned_type, size_t region)
{
	const struct line_type *line = &seeing->planned->plan->lines[planned_type];
	const uint64_t asserted = line->regions[region].assert_mask | seeing->stretch;
	const bool after_same = region > 0 && (line->regions[region - 1].assert_mask | seeing->stretch) == asserted;
	const bool before_same = region + 1 < line->region_count && (line->regions[region + 1].assert_mask | seeing->stretch) == asserted;
	const uint32_t cells = seeing->planned->types[planned_type].regions[region].cells;
	return piece->cells == cells && (piece->asserted | seeing->stretch) == asserted && !after_same && !before_same;
}

// Reads what is left of a line between its ends; returns how many pieces that makes. False when memory is out, or there is too much.
static bool read_middle(struct seeing *seeing, struct reading *reading, struct piece *out, size_t *count)
{
	const size_t size = (reading->piece_count + 1) * (reading->region_count + 1);
	if (reading->piece_count >= MOST_PAIRS / (reading->region_count + 1) || size > seeing->steps.work_left)
		return seen_refuse(seeing, "a line of the images has too many regions that differ from the plan's");
	seeing->steps.work_left -= size;
	reading->table = arena_array(seeing->arena, size, sizeof *reading->table);
	if (reading->table == NULL)
		return seen_memory(seeing);
	fill_table(reading);
	*count = walk_table(reading, out);
	return true;
}

bool seen_match_regions(struct seeing *seeing, size_t planned_type, struct piece **pieces, size_t *count)
{
	const struct line_type *line = &seeing->planned->plan->lines[planned_type];
	const struct laid_line *laid = &seeing->planned->types[planned_type];
	struct piece *const list = *pieces, *out = arena_array(seeing->arena, *count + line->region_count, sizeof *out);
	size_t front = 0, piece_end = *count, region_end = line->region_count, middle = 0;
	if (out == NULL)
		return seen_memory(seeing);
	for (; front < piece_end && front < region_end && is_region(seeing, &list[front], planned_type, front); front++)
		list[front].region = front;
	for (; piece_end > front && region_end > front && is_region(seeing, &list[piece_end - 1], planned_type, region_end - 1);
	     piece_end--, region_end--)
		list[piece_end - 1].region = region_end - 1;
	const struct piece *last = &list[*count - 1];
	struct reading reading = {.seeing = seeing, .planned_type = planned_type, .regions = line->regions + front,
	                          .laid = laid->regions + front, .pieces = list + front, .piece_count = piece_end - front,
	                          .region_count = region_end - front, .first_region = front, .cells = last->first + last->cells,
	                          .planned_cells = laid->cells, .stretch = seeing->stretch};
	if (!read_middle(seeing, &reading, out + front, &middle))
		return false;
	memcpy(out, list, front * sizeof *out);
	memcpy(out + front + middle, list + piece_end, (*count - piece_end) * sizeof *out);
	*count = front + middle + *count - piece_end;
	*pieces = out;
	return true;
}
