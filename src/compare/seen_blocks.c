// Blocks of the images' frame: in a run of lines of one type, rows are counted from wherever the plan's holds then are what the states
// have. Of all such ways, that which cuts the run most nearly as the plan does.
#include "base/arena.h"
#include "compare/seen_work.h"

#define MOST_RECUTS 4u // cuts of a run that the plan has and the images have not, or the other way round: with more, holds were edited
#define MOST_ROWS 262144u // rows that are held against a line, in all runs

enum telling {
	TELLS_UNKNOWN,
	TELLS_ROW,
	TELLS_NOTHING              // what the line holds is in no row that it may be
};

// A run of lines of one type, numbered from 0. Places are before lines; the last is the end.
struct run {
	const struct seeing *seeing;
	size_t first, count;
	uint32_t *recuts;          // [count + 1]: the fewest with which a block can begin at a place
	size_t *from;              // [count + 1]: where the block before begins
	uint8_t *telling;          // [count]
	uint32_t *rows_left;
};

// Whether the plan has a line and the one before in different blocks.
static bool plan_cuts(const struct run *run, size_t place)
{
	const struct seen_line *line = &run->seeing->lines[run->first + place];
	const struct frame_line *planned = run->seeing->planned->lines;
	return place > 0 && place < run->count && line[-1].planned != NONE && line->planned != NONE &&
	       planned[line[-1].planned].block != planned[line->planned].block;
}

static bool fits(struct run *run, size_t line, size_t row)
{
	if (*run->rows_left == 0)
		return false;
	--*run->rows_left;
	return seen_row_fits(run->seeing, run->first + line, (uint32_t)row);
}

// A line whose holds are damaged stands in any row.
static bool may_be(struct run *run, size_t line, size_t row)
{
	if (run->telling[line] == TELLS_NOTHING || fits(run, line, row))
		return true;
	if (run->telling[line] == TELLS_UNKNOWN) {
		size_t other = 0;
		while (other <= line && !fits(run, line, other))
			other++;
		run->telling[line] = other <= line ? TELLS_ROW : TELLS_NOTHING;
	}
	return run->telling[line] == TELLS_NOTHING;
}

// All blocks that begin at a place.
static void try_blocks(struct run *run, size_t begin)
{
	uint32_t recuts = run->recuts[begin];
	for (size_t line = begin; line < run->count && recuts <= MOST_RECUTS && may_be(run, line, line - begin); line++) {
		const size_t end = line + 1;
		const bool planned = end == run->count || plan_cuts(run, end);
		if (recuts + !planned < run->recuts[end]) {
			run->recuts[end] = recuts + !planned;
			run->from[end] = begin;
		}
		recuts += plan_cuts(run, end);
	}
}

// Places in the order of how few recuts lead to them. Returns whether blocks were found.
static bool find_blocks(struct run *run)
{
	for (size_t place = 1; place <= run->count; place++)
		run->recuts[place] = MOST_RECUTS + 1;
	if (!fits(run, 0, 0))
		return false;
	for (uint32_t recuts = 0; recuts <= MOST_RECUTS && run->recuts[run->count] > recuts; recuts++)
		for (size_t place = 0; place < run->count; place++)
			if (run->recuts[place] == recuts)
				try_blocks(run, place);
	return run->recuts[run->count] <= MOST_RECUTS && *run->rows_left > 0;
}

static bool cut_run(struct seeing *seeing, size_t first, size_t count, uint32_t *rows_left)
{
	struct run run = {.seeing = seeing, .first = first, .count = count, .rows_left = rows_left,
	                  .recuts = arena_array(seeing->arena, count + 1, sizeof *run.recuts),
	                  .from = arena_array(seeing->arena, count + 1, sizeof *run.from), .telling = arena_alloc(seeing->arena, count)};
	struct seen_line *lines = seeing->lines + first;
	if (run.recuts == NULL || run.from == NULL || run.telling == NULL)
		return seen_memory(seeing);
	const bool found = find_blocks(&run);
	for (size_t place = 0; place < count; place++)
		lines[place].begins_block = place == 0 || (!found && plan_cuts(&run, place));
	for (size_t place = run.from[count]; found && place > 0; place = run.from[place])
		lines[place].begins_block = true;
	for (size_t place = 0; place < count; place++)
		lines[place].row = lines[place].begins_block ? 0 : lines[place - 1].row + 1;
	return true;
}

bool seen_blocks(struct seeing *seeing)
{
	uint32_t rows_left = MOST_ROWS;
	for (size_t first = 0, count; first < seeing->line_count; first += count) {
		for (count = 1; first + count < seeing->line_count && seeing->lines[first + count].type == seeing->lines[first].type;)
			count++;
		if (!cut_run(seeing, first, count, &rows_left))
			return false;
	}
	return true;
}
