#include "table/closing.h"

#include <string.h>

#include "base/arena.h"
#include "table/relax.h"

#define VECTOR_BYTES ((size_t)1 << 16) // of all vectors at the end of the period
#define WORK ((uint64_t)1 << 27)       // bytes of vectors that are computed

// Dynamic programming from the period's last cell backwards, for all codes of the first cell at once. A vector says for
// each code of the cell before what it costs to go on from there to the end, and then to the first cell's code; less a
// constant. Going backwards, the vectors of different first codes soon become equal, from when on they are one: so the
// work is hardly more than that for a single code.
struct strand {
	uint8_t *vector;  // [codes]
	int64_t constant;
};

struct closer {
	const struct assignment *assignment;
	struct relaxer relaxer;
	uint32_t codes;
	uint32_t *firsts;      // codes that the first cell may have
	uint32_t *strand_of;   // [first_count]
	int64_t *more;         // [first_count]: cost beyond that of the strand
	uint32_t first_count;
	struct strand *strands; // [first_count], strand_count of them left
	uint32_t strand_count;
	uint8_t *blocked;      // [codes]
	uint8_t *result;       // [codes]
	uint64_t work;
};

// Which codes a cell may have.
struct choice {
	uint32_t mask, value, pattern; // pattern is NO_PATTERN where the mask says everything
};

static struct choice choice_of(const struct assignment *assignment, uint32_t cell)
{
	const struct constraints *constraints = assignment->constraints;
	const struct code_space *codes = assignment->codes;
	const uint32_t class = constraints->class_of_cell[cell], state = assignment->state_of_cell[cell];
	if (state != NO_STATE)
		return (struct choice){codes->count - 1, code_of_state(codes, state), NO_PATTERN};
	return (struct choice){code_of_state(codes, class_mask(constraints, class)),
	                       code_of_state(codes, class_value(constraints, class)), class_pattern(constraints, class)};
}

static bool is_settled(const struct closer *closer, const struct choice *choice)
{
	return choice->mask == closer->codes - 1;
}

static bool allows(const struct closer *closer, const struct choice *choice, uint32_t code)
{
	if ((code & choice->mask) != choice->value)
		return false;
	return choice->pattern == NO_PATTERN || (closer->assignment->codes->pattern_of_code[code] == choice->pattern &&
	                                         closer->assignment->remaining[code] > 0);
}

static bool create_closer(struct closer *closer, struct arena *arena, const struct assignment *assignment)
{
	*closer = (struct closer){.assignment = assignment, .codes = assignment->codes->count};
	closer->firsts = arena_array(arena, closer->codes, sizeof *closer->firsts);
	closer->blocked = arena_array(arena, closer->codes, 1);
	closer->result = arena_array(arena, closer->codes, 1);
	return closer->firsts != NULL && closer->blocked != NULL && closer->result != NULL &&
	       relaxer_create(&closer->relaxer, arena, assignment->codes);
}

static void find_firsts(struct closer *closer)
{
	const struct choice choice = choice_of(closer->assignment, 0);
	for (uint32_t code = 0; code < closer->codes; code++)
		if (allows(closer, &choice, code))
			closer->firsts[closer->first_count++] = code;
}

// A strand for each code of the first cell: what it costs to come to it.
static bool create_strands(struct closer *closer, struct arena *arena)
{
	closer->strands = arena_array(arena, closer->first_count, sizeof *closer->strands);
	closer->strand_of = arena_array(arena, closer->first_count, sizeof *closer->strand_of);
	closer->more = arena_array(arena, closer->first_count, sizeof *closer->more);
	uint8_t *vectors = arena_array(arena, closer->first_count, closer->codes);
	if (closer->strands == NULL || closer->strand_of == NULL || closer->more == NULL || vectors == NULL)
		return false;
	for (uint32_t first = 0; first < closer->first_count; first++) {
		uint8_t *vector = &vectors[(size_t)first * closer->codes];
		for (uint32_t code = 0; code < closer->codes; code++)
			vector[code] = (uint8_t)relaxer_jumps(&closer->relaxer, code, closer->firsts[first]);
		closer->strands[first] = (struct strand){.vector = vector};
		closer->strand_of[first] = first;
	}
	closer->strand_count = closer->first_count;
	return true;
}

// Goes a cell back; true if that changed a vector.
static bool step_back(struct closer *closer)
{
	bool changed = false;
	for (uint32_t index = 0; index < closer->strand_count; index++) {
		struct strand *strand = &closer->strands[index];
		strand->constant += relaxer_step(&closer->relaxer, strand->vector, closer->blocked, closer->result);
		if (memcmp(strand->vector, closer->result, closer->codes) == 0)
			continue;
		memcpy(strand->vector, closer->result, closer->codes);
		changed = true;
	}
	closer->work += (uint64_t)closer->strand_count * closer->codes;
	return changed;
}

// Moves the first cell's codes of one strand to another with an equal vector.
static void move_firsts(struct closer *closer, uint32_t from, uint32_t to, int64_t more)
{
	for (uint32_t first = 0; first < closer->first_count; first++)
		if (closer->strand_of[first] == from) {
			closer->strand_of[first] = to;
			closer->more[first] += more;
		}
}

// Makes strands with equal vectors one.
static void merge(struct closer *closer)
{
	uint32_t kept = 1;
	for (uint32_t index = 1; index < closer->strand_count; index++) {
		const struct strand strand = closer->strands[index];
		uint32_t equal = 0;
		while (equal < kept && memcmp(closer->strands[equal].vector, strand.vector, closer->codes) != 0)
			equal++;
		if (equal == kept)
			closer->strands[kept++] = strand;
		if (equal != index)
			move_firsts(closer, index, equal, strand.constant - closer->strands[equal].constant);
	}
	closer->strand_count = kept;
}

// True if a cell may have the same codes as the one after it.
static bool same_choice(const struct closer *closer, uint32_t cell)
{
	const struct assignment *assignment = closer->assignment;
	const uint32_t *class_of_cell = assignment->constraints->class_of_cell;
	if (assignment->state_of_cell[cell] != NO_STATE || assignment->state_of_cell[cell + 1] != NO_STATE)
		return false;
	if (class_of_cell[cell] == class_of_cell[cell + 1])
		return true;
	const struct choice here = choice_of(assignment, cell), after = choice_of(assignment, cell + 1);
	return here.mask == after.mask && here.value == after.value && here.pattern == after.pattern;
}

// Goes back from the cell before `end` to cell 1, or to the first settled cell, which is returned; 0 if there is none.
static uint32_t go_back(struct closer *closer, uint32_t end)
{
	bool steady = false;
	for (uint32_t cell = end; cell-- > 1 && closer->work <= WORK;) {
		const bool same = cell + 1 < end && same_choice(closer, cell);
		if (same && steady)
			continue;
		const struct choice choice = choice_of(closer->assignment, cell);
		for (uint32_t code = 0; code < closer->codes && !same; code++)
			closer->blocked[code] = allows(closer, &choice, code) ? 0 : RELAX_BLOCKED;
		steady = !step_back(closer);
		if (closer->strand_count > 1)
			merge(closer);
		if (is_settled(closer, &choice))
			return cell;
	}
	return 0;
}

// All strands became one at the last settled cell; what comes between the first and the last is the same for all codes
// of the first cell.
static void pass_settled(struct closer *closer)
{
	uint32_t cell = 1;
	struct choice choice = choice_of(closer->assignment, cell);
	while (!is_settled(closer, &choice))
		choice = choice_of(closer->assignment, ++cell);
	for (uint32_t code = 0; code < closer->codes; code++)
		closer->strands[0].vector[code] = (uint8_t)relaxer_jumps(&closer->relaxer, code, choice.value);
	go_back(closer, cell);
}

static void find_costs(const struct closer *closer, struct closing *closing)
{
	int64_t least = INT64_MAX;
	for (unsigned pass = 0; pass < 2; pass++)
		for (uint32_t first = 0; first < closer->first_count; first++) {
			const struct strand *strand = &closer->strands[closer->strand_of[first]];
			const uint32_t code = closer->firsts[first];
			const int64_t cost = strand->vector[code] + strand->constant + closer->more[first];
			least = cost < least ? cost : least;
			closing->costs[code] = (uint32_t)(cost - least);
		}
	closing->known = true;
}

bool closing_find(struct closing *closing, struct arena *arena, const struct assignment *assignment)
{
	struct closer closer;
	*closing = (struct closing){.known = false};
	closing->costs = arena_array(arena, assignment->codes->count, sizeof *closing->costs);
	if (closing->costs == NULL || !create_closer(&closer, arena, assignment))
		return false;
	memset(closing->costs, 0xFF, assignment->codes->count * sizeof *closing->costs);
	find_firsts(&closer);
	if (closer.first_count == 0 || (size_t)closer.first_count * closer.codes > VECTOR_BYTES)
		return true;
	if (!create_strands(&closer, arena))
		return false;
	if (go_back(&closer, assignment->constraints->period) > 0)
		pass_settled(&closer);
	if (closer.work <= WORK)
		find_costs(&closer, closing);
	return true;
}

bool closing_count(const struct assignment *assignment, struct arena *arena, uint64_t *jumps)
{
	const uint32_t period = assignment->constraints->period;
	struct relaxer relaxer;
	if (!relaxer_create(&relaxer, arena, assignment->codes))
		return false;
	uint32_t before = code_of_state(assignment->codes, assignment->state_of_cell[period - 1]);
	*jumps = 0;
	for (uint32_t cell = 0; cell < period; cell++) {
		const uint32_t code = code_of_state(assignment->codes, assignment->state_of_cell[cell]);
		if (code != before)
			*jumps += relaxer_jumps(&relaxer, before, code);
		before = code;
	}
	return true;
}
