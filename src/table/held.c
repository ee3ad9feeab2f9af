#include "table/assignment.h"

#include <string.h>

#include "base/arena.h"
#include "table/walk.h"

#define EXHAUSTED UINT32_MAX

// Where the search for a free state with some code has come to in the class that is being served.
struct cursor {
	uint32_t class;   // + 1: whose cursor this is
	uint32_t subset;  // of the free bits beside the code, or EXHAUSTED
};

// The class that is being served.
struct server {
	struct assignment *assignment;
	struct cursor *cursors;   // [codes->count]
	uint32_t class, mask, value, pattern;
	uint32_t fallback;        // codes before this subset of the free decoded bits are exhausted, or EXHAUSTED
};

// The lowest state of the class with this code that nobody owns, or NO_STATE.
static uint32_t pick(const struct server *server, uint32_t code)
{
	const struct assignment *assignment = server->assignment;
	const struct constraints *constraints = assignment->constraints;
	const uint32_t decoder = constraints->decoder_mask;
	const uint32_t free = constraints->state_mask & ~(server->mask | decoder);
	const uint32_t base = (server->value & ~decoder) | state_of_code(assignment->codes, code);
	struct cursor *cursor = &server->cursors[code];
	if (cursor->class != server->class + 1)
		*cursor = (struct cursor){server->class + 1, 0};
	while (cursor->subset != EXHAUSTED && assignment->owner[base | cursor->subset] != 0) {
		cursor->subset = next_subset(cursor->subset, free);
		if (cursor->subset == 0)
			cursor->subset = EXHAUSTED;
	}
	return cursor->subset == EXHAUSTED ? NO_STATE : base | cursor->subset;
}

// The same over all codes of the class, ascending.
static uint32_t pick_any(struct server *server)
{
	const struct assignment *assignment = server->assignment;
	const uint32_t decoder = assignment->constraints->decoder_mask;
	const uint32_t free = decoder & ~server->mask;
	while (server->fallback != EXHAUSTED) {
		const uint32_t code = code_of_state(assignment->codes, (server->value & decoder) | server->fallback);
		const bool allowed = assignment->codes->pattern_of_code[code] == server->pattern;
		const uint32_t state = allowed ? pick(server, code) : NO_STATE;
		if (state != NO_STATE)
			return state;
		server->fallback = next_subset(server->fallback, free);
		if (server->fallback == 0)
			server->fallback = EXHAUSTED;
	}
	return NO_STATE;
}

// Returns how many cells of the class are left without a state.
static uint32_t serve_class(struct server *server, uint32_t class)
{
	const struct constraints *constraints = server->assignment->constraints;
	uint32_t left = 0;
	server->class = class;
	server->mask = class_mask(constraints, class);
	server->value = class_value(constraints, class);
	server->pattern = class_pattern(constraints, class);
	server->fallback = 0;
	for (uint32_t index = constraints->held_start[class]; index < constraints->held_start[class + 1]; index++) {
		const uint32_t cell = constraints->held_cells[index];
		if (server->assignment->state_of_cell[cell] != NO_STATE)
			continue;
		const uint32_t state = pick_any(server);
		if (state != NO_STATE)
			assignment_place(server->assignment, cell, state);
		left += state == NO_STATE;
	}
	return left;
}

static unsigned count_bits(uint32_t bits)
{
	unsigned count = 0;
	for (; bits != 0; bits &= bits - 1)
		count++;
	return count;
}

// Bit n is set if some family holds n bits.
static uint32_t held_widths(const struct constraints *constraints)
{
	uint32_t widths = 0;
	for (uint32_t family = 0; family < constraints->families.count; family++)
		widths |= (uint32_t)1 << count_bits((uint32_t)(constraints->families.keys[family] >> 24));
	return widths;
}

static uint32_t serve_width(struct server *server, unsigned width)
{
	const struct constraints *constraints = server->assignment->constraints;
	uint32_t left = 0;
	for (uint32_t class = 0; class < constraints->classes.count; class++)
		if (count_bits(class_mask(constraints, class)) == width)
			left += serve_class(server, class);
	return left;
}

bool assignment_hold(struct assignment *assignment, struct arena *arena, struct quiet *quiet, struct faults *faults)
{
	const uint32_t widths = held_widths(assignment->constraints);
	struct server server = {.assignment = assignment};
	uint32_t left = 0;
	server.cursors = arena_array(arena, assignment->codes->count, sizeof *server.cursors);
	if (server.cursors == NULL)
		return faults_memory(faults);
	for (unsigned width = LIMIT_STATE_BITS; width > 0; width--) {
		if ((widths >> width & 1) == 0)
			continue;
		if (quiet != NULL && !walk_hold(assignment, quiet, width, arena))
			return faults_memory(faults);
		left += serve_width(&server, width);
	}
	return left == 0 || assignment_augment(assignment, arena, faults);
}
