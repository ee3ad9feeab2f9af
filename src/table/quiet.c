#include "table/quiet.h"

#include <string.h>

#include "base/arena.h"
#include "table/relax.h"

#define AHEAD_CODES 1024               // at most so many codes are looked at ahead
#define AHEAD_BYTES ((size_t)1 << 18)  // of cost vectors in one window
#define AHEAD_WORK ((uint64_t)1 << 26) // bytes of cost vectors, and codes tried, in all walks
#define RUN_STEPS 16                   // vectors that one run may use; beyond, costs count as settled
#define REPLANS 256

// Cells that allow the same codes, in a window of cells that are not settled.
struct run {
	uint32_t first_cell;
	uint32_t mask, value, pattern; // codes with these bits and this pattern, in the code space
	uint32_t vector;               // the first of its vectors, that of its last cell
	uint32_t steps;                // how many it has; cells further from the run's end share the last
	uint32_t target;               // the code that most of the run is to have, NO_CODE: not looked for yet
	bool arrived;
};

// The vector of a cell says for each code of the cell before how many fields must jump, by more than one bit, from
// there on to the end of the window: less a constant, which is in `dropped` relative to the vector of the cell after.
struct quiet {
	const struct assignment *assignment;
	struct relaxer relaxer;
	uint8_t *vectors;
	uint8_t *dropped;
	uint8_t *terminal; // the vector of the cell after the window
	uint8_t *blocked;
	struct run *runs;
	uint32_t run_limit;
	uint32_t run_count;
	uint32_t current;    // the run that the last chosen cell is in
	uint32_t window_end; // first cell after the window
	uint32_t valid_end;  // first cell for which the window is not to be used: its end is too near
	uint64_t work;
	unsigned replans;
	bool ahead;
	uint32_t *near_start;   // [patterns]: codes of the pattern before this one in the list are used up
	uint32_t *excluded;     // [codes]: cell + 1 for which the code will not do
	uint32_t *reached;      // [codes]: what flood found
	uint32_t *reached_from; // [codes]: the code before it, NO_CODE if it was not found
};

static bool allocate_window(struct quiet *quiet, struct arena *arena, uint32_t codes)
{
	const size_t runs = AHEAD_BYTES / codes / RUN_STEPS, cells = quiet->assignment->constraints->period;
	const size_t vectors = (runs < cells ? runs : cells) * RUN_STEPS;
	quiet->run_limit = (uint32_t)(vectors / RUN_STEPS);
	quiet->vectors = arena_array(arena, vectors, codes);
	quiet->dropped = arena_array(arena, vectors, 1);
	quiet->terminal = arena_array(arena, codes, 1);
	quiet->blocked = arena_array(arena, codes, 1);
	quiet->runs = arena_array(arena, quiet->run_limit, sizeof *quiet->runs);
	quiet->reached = arena_array(arena, codes, sizeof *quiet->reached);
	quiet->reached_from = arena_array(arena, codes, sizeof *quiet->reached_from);
	return quiet->vectors != NULL && quiet->dropped != NULL && quiet->terminal != NULL && quiet->blocked != NULL &&
	       quiet->runs != NULL && quiet->reached != NULL && quiet->reached_from != NULL &&
	       relaxer_create(&quiet->relaxer, arena, quiet->assignment->codes);
}

struct quiet *quiet_create(struct arena *arena, const struct assignment *assignment)
{
	struct quiet *quiet = arena_alloc(arena, sizeof *quiet);
	if (quiet == NULL)
		return NULL;
	const uint32_t codes = assignment->codes->count;
	quiet->assignment = assignment;
	quiet->ahead = codes > 1 && codes <= AHEAD_CODES;
	quiet->near_start = arena_array(arena, assignment->constraints->patterns.count, sizeof *quiet->near_start);
	quiet->excluded = arena_array(arena, codes, sizeof *quiet->excluded);
	if (quiet->near_start == NULL || quiet->excluded == NULL || (quiet->ahead && !allocate_window(quiet, arena, codes)))
		return NULL;
	return quiet;
}

bool quiet_looks_ahead(const struct quiet *quiet)
{
	return quiet->ahead;
}

void quiet_begin(struct quiet *quiet)
{
	quiet->valid_end = 0;
	quiet->replans = 0;
}

void quiet_exclude(struct quiet *quiet, uint32_t cell, uint32_t code)
{
	quiet->excluded[code] = cell + 1;
}

void quiet_replan(struct quiet *quiet)
{
	if (quiet->replans++ < REPLANS)
		quiet->valid_end = 0;
}

uint32_t quiet_settled(const struct quiet *quiet, uint32_t cell)
{
	const struct assignment *assignment = quiet->assignment;
	const struct constraints *constraints = assignment->constraints;
	if (assignment->state_of_cell[cell] != NO_STATE)
		return code_of_state(assignment->codes, assignment->state_of_cell[cell]);
	const uint32_t class = constraints->class_of_cell[cell];
	if ((constraints->decoder_mask & ~class_mask(constraints, class)) == 0)
		return code_of_state(assignment->codes, class_value(constraints, class));
	return NO_CODE;
}

static struct run run_at(const struct quiet *quiet, uint32_t cell)
{
	const struct constraints *constraints = quiet->assignment->constraints;
	const uint32_t class = constraints->class_of_cell[cell];
	return (struct run){.first_cell = cell,
	                    .mask = code_of_state(quiet->assignment->codes, class_mask(constraints, class)),
	                    .value = code_of_state(quiet->assignment->codes, class_value(constraints, class)),
	                    .pattern = class_pattern(constraints, class),
	                    .target = NO_CODE};
}

static bool allows(const struct quiet *quiet, const struct run *run, uint32_t code)
{
	return quiet->assignment->codes->pattern_of_code[code] == run->pattern && (code & run->mask) == run->value &&
	       quiet->assignment->remaining[code] > 0;
}

// The same for one cell of the run.
static bool allows_here(const struct quiet *quiet, const struct run *run, uint32_t cell, uint32_t code)
{
	return allows(quiet, run, code) && quiet->excluded[code] != cell + 1;
}

static uint32_t run_end(const struct quiet *quiet, uint32_t run)
{
	return run + 1 < quiet->run_count ? quiet->runs[run + 1].first_cell : quiet->window_end;
}

// Cuts the cells from `cell` on into runs, up to a settled one, the end of the period, or the limit.
static void collect_runs(struct quiet *quiet, uint32_t cell)
{
	const struct constraints *constraints = quiet->assignment->constraints;
	const uint32_t *class_of_cell = constraints->class_of_cell;
	quiet->run_count = 0;
	for (; cell < constraints->period && quiet_settled(quiet, cell) == NO_CODE; cell++) {
		if (quiet->run_count > 0 && class_of_cell[cell] == class_of_cell[cell - 1])
			continue;
		const struct run run = run_at(quiet, cell);
		const struct run *last = quiet->run_count > 0 ? &quiet->runs[quiet->run_count - 1] : NULL;
		if (last != NULL && last->mask == run.mask && last->value == run.value && last->pattern == run.pattern)
			continue;
		if (quiet->run_count == quiet->run_limit)
			break;
		quiet->runs[quiet->run_count++] = run;
	}
	quiet->window_end = cell;
}

// What comes after the window: a settled cell, the first cell again, or (0 everywhere) something not yet known.
static void fill_terminal(struct quiet *quiet, uint32_t first)
{
	const struct code_space *codes = quiet->assignment->codes;
	const uint32_t period = quiet->assignment->constraints->period;
	const uint32_t target = quiet->window_end < period ? quiet_settled(quiet, quiet->window_end) : first;
	quiet->valid_end = quiet->window_end;
	if (target == NO_CODE && quiet->window_end < period)
		quiet->valid_end = quiet->runs[quiet->run_count - quiet->run_count / 4].first_cell;
	for (uint32_t code = 0; code < codes->count; code++)
		quiet->terminal[code] = target == NO_CODE ? 0 : (uint8_t)relaxer_jumps(&quiet->relaxer, code, target);
}

// Fills the vectors of a run from its last cell backwards, until they no longer change; returns the vector of its first
// cell.
static const uint8_t *fill_run(struct quiet *quiet, uint32_t number, uint32_t vector, const uint8_t *next)
{
	const uint32_t codes = quiet->assignment->codes->count;
	struct run *run = &quiet->runs[number];
	const uint32_t cells = run_end(quiet, number) - run->first_cell;
	run->vector = vector;
	run->steps = 0;
	for (uint32_t code = 0; code < codes; code++)
		quiet->blocked[code] = allows(quiet, run, code) ? 0 : RELAX_BLOCKED;
	while (run->steps < cells && run->steps < RUN_STEPS) {
		uint8_t *here = &quiet->vectors[(size_t)vector * codes];
		quiet->dropped[vector] = relaxer_step(&quiet->relaxer, next, quiet->blocked, here);
		if (run->steps > 0 && memcmp(here, next, codes) == 0)
			break;
		next = here;
		vector++;
		run->steps++;
	}
	return next;
}

static void plan_window(struct quiet *quiet, uint32_t cell, uint32_t first)
{
	collect_runs(quiet, cell);
	fill_terminal(quiet, first);
	const uint8_t *next = quiet->terminal;
	uint32_t vector = 0;
	for (uint32_t run = quiet->run_count; run-- > 0;) {
		next = fill_run(quiet, run, vector, next);
		vector += quiet->runs[run].steps;
	}
	quiet->current = 0;
	quiet->work += (uint64_t)vector * quiet->assignment->codes->count;
	quiet->ahead = quiet->work <= AHEAD_WORK;
}

// The vector of a cell that is `distance` cells before the last of its run.
static const uint8_t *vector_of(const struct quiet *quiet, uint32_t number, uint32_t distance)
{
	const struct run *run = &quiet->runs[number];
	const uint32_t step = distance < run->steps ? distance : run->steps - 1;
	return &quiet->vectors[(size_t)(run->vector + step) * quiet->assignment->codes->count];
}

static const uint8_t *vector_after(const struct quiet *quiet, uint32_t cell)
{
	const uint32_t end = run_end(quiet, quiet->current);
	if (cell + 1 < end)
		return vector_of(quiet, quiet->current, end - 2 - cell);
	if (quiet->current + 1 == quiet->run_count)
		return quiet->terminal;
	return vector_of(quiet, quiet->current + 1, run_end(quiet, quiet->current + 1) - 1 - end);
}

// True if going on with the code of the cell before is as good as anything.
static bool may_stay(const struct quiet *quiet, uint32_t cell, uint32_t previous, const uint8_t *after)
{
	const struct run *run = &quiet->runs[quiet->current];
	if (previous == NO_CODE || !allows_here(quiet, run, cell, previous))
		return false;
	const uint32_t distance = run_end(quiet, quiet->current) - 1 - cell;
	if (distance >= run->steps)
		return true;
	return after[previous] ==
	       vector_of(quiet, quiet->current, distance)[previous] + quiet->dropped[run->vector + distance];
}

// The order of preference: fewest jumps, then states enough for the rest of the run, then fewest bits that change, then
// the lowest code.
static uint32_t rate(const struct quiet *quiet, uint32_t cell, uint32_t previous, uint32_t code, const uint8_t *after)
{
	const uint32_t change = previous == NO_CODE ? 0 : previous ^ code;
	const uint32_t left = run_end(quiet, quiet->current) - cell;
	uint32_t jumps = after[code], bits = 0;
	if (change != 0)
		jumps += relaxer_jumps(&quiet->relaxer, previous, code);
	for (uint32_t rest = change; rest != 0; rest &= rest - 1)
		bits++;
	return jumps << 16 | (uint32_t)(quiet->assignment->remaining[code] < left) << 8 | bits;
}

// Finds, in steps of one bit, all codes that are as good as `origin` for the cells of the current run that are far from
// its end; each with the code that it was reached from. Returns how many there are, in `reached`.
static uint32_t flood(struct quiet *quiet, uint32_t cell, uint32_t origin)
{
	const struct run *run = &quiet->runs[quiet->current];
	const uint32_t codes = quiet->assignment->codes->count;
	const uint8_t *far = vector_of(quiet, quiet->current, UINT32_MAX);
	uint32_t count = 1;
	for (uint32_t code = 0; code < codes; code++)
		quiet->reached_from[code] = NO_CODE;
	quiet->reached_from[origin] = origin;
	quiet->reached[0] = origin;
	for (uint32_t index = 0; index < count; index++)
		for (uint32_t bit = 1; bit < codes; bit <<= 1) {
			const uint32_t code = quiet->reached[index] ^ bit;
			if (quiet->reached_from[code] != NO_CODE || far[code] != far[origin] ||
			    !allows_here(quiet, run, cell, code))
				continue;
			quiet->reached_from[code] = quiet->reached[index];
			quiet->reached[count++] = code;
		}
	quiet->work += (uint64_t)codes + (uint64_t)count * LIMIT_STATE_BITS;
	return count;
}

// The code with the most states left, of those that can be reached from where the run stands while its end is still
// far, and that have enough for the rest of the run.
static uint32_t find_richest(struct quiet *quiet, uint32_t cell, uint32_t previous)
{
	const struct run *run = &quiet->runs[quiet->current];
	const uint32_t *remaining = quiet->assignment->remaining;
	const uint32_t left = run_end(quiet, quiet->current) - cell;
	const uint32_t count = left > 2 * run->steps ? flood(quiet, cell, previous) : 0;
	uint32_t best = previous;
	for (uint32_t index = 0; index < count; index++) {
		uint32_t steps = 0;
		for (uint32_t code = quiet->reached[index]; code != previous; code = quiet->reached_from[code])
			steps++;
		const uint32_t here = remaining[quiet->reached[index]];
		if (here > remaining[best] && here >= left && left > 2 * run->steps + steps)
			best = quiet->reached[index];
	}
	return best;
}

// A run that may stay where it is moves, once, to the code that has the most states left. So long runs spend the states
// of codes that no other pattern is near to, and those that lead from pattern to pattern last till the frame's last
// line.
static uint32_t move_on(struct quiet *quiet, uint32_t cell, uint32_t previous, const uint8_t *after)
{
	struct run *run = &quiet->runs[quiet->current];
	if (run->target == NO_CODE)
		run->target = find_richest(quiet, cell, previous);
	if (run->arrived || run->target == previous) {
		run->arrived = true;
		return previous;
	}
	flood(quiet, cell, run->target);
	const uint32_t next = quiet->reached_from[previous];
	if (next != NO_CODE && after[next] == after[previous] && allows_here(quiet, run, cell, next))
		return next;
	run->arrived = true;
	return previous;
}

static uint32_t choose_ahead(struct quiet *quiet, uint32_t cell, uint32_t previous)
{
	const uint8_t *after = vector_after(quiet, cell);
	uint32_t best = NO_CODE, best_rate = UINT32_MAX;
	if (may_stay(quiet, cell, previous, after))
		return move_on(quiet, cell, previous, after);
	quiet->work += quiet->assignment->codes->count;
	for (uint32_t code = 0; code < quiet->assignment->codes->count; code++) {
		if (!allows_here(quiet, &quiet->runs[quiet->current], cell, code))
			continue;
		const uint32_t here = rate(quiet, cell, previous, code, after);
		if (here < best_rate) {
			best_rate = here;
			best = code;
		}
	}
	return best;
}

// The same code, or one a bit away, or the lowest that the cell's class has.
static uint32_t choose_near(struct quiet *quiet, uint32_t cell, uint32_t previous)
{
	const struct code_space *codes = quiet->assignment->codes;
	const struct run run = run_at(quiet, cell);
	if (previous != NO_CODE && allows_here(quiet, &run, cell, previous))
		return previous;
	for (uint32_t bit = 1; previous != NO_CODE && bit < codes->count; bit <<= 1)
		if (allows_here(quiet, &run, cell, previous ^ bit))
			return previous ^ bit;
	uint32_t *start = &quiet->near_start[run.pattern];
	const uint32_t *list = &codes->pattern_codes[codes->pattern_start[run.pattern]];
	const uint32_t length = codes->pattern_start[run.pattern + 1] - codes->pattern_start[run.pattern];
	while (*start < length && quiet->assignment->remaining[list[*start]] == 0)
		(*start)++;
	for (uint32_t index = *start; index < length; index++)
		if (allows_here(quiet, &run, cell, list[index]))
			return list[index];
	return NO_CODE;
}

uint32_t quiet_choose(struct quiet *quiet, uint32_t cell, uint32_t previous, uint32_t first)
{
	if (quiet->ahead && cell >= quiet->valid_end)
		plan_window(quiet, cell, first);
	if (!quiet->ahead)
		return choose_near(quiet, cell, previous);
	while (cell >= run_end(quiet, quiet->current))
		quiet->current++;
	const uint32_t code = choose_ahead(quiet, cell, previous);
	quiet->ahead = quiet->work <= AHEAD_WORK;
	// The way back to the first cell was not known yet.
	if (first == NO_CODE)
		quiet->valid_end = 0;
	return code;
}
