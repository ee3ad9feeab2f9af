// A line-frame machine: two stages, of which the second steps at the end of each line.
#include "base/arena.h"
#include "machine/chips.h"

#define NEXT_MASK 0x00FFFFFFu
#define STEPS 0x40000000u
#define CLEARS 0x80000000u

// A stage's rows, read once: next state, and whether step and clear are asserted.
struct stage_table {
	uint32_t *rows;            // [2^address_bits]
	uint32_t state_mask;
	enum advance advance;
	bool at_once;              // an asynchronous clear
};

struct two_stages {
	struct feedback at;
	struct stage_table line, frame;
	uint32_t *kinds;           // [2^frame state bits]
	unsigned line_bits;
	uint32_t kind_mask;
};

static bool read_rows(struct arena *arena, const struct machine *machine, enum stage stage, struct stage_table *table, uint32_t *kinds)
{
	const struct stage_wiring *wired = wiring_stage(&machine->wiring, stage);
	const size_t addresses = (size_t)1 << wired->address_bits;
	*table = (struct stage_table){.state_mask = low_bits(wired->state_bits), .advance = wired->advance,
	                              .at_once = clears_at_once(wired)};
	table->rows = arena_array(arena, addresses, sizeof *table->rows);
	for (size_t address = 0; table->rows != NULL && address < addresses; address++) {
		const struct row row = machine_row(machine, stage, (uint32_t)address);
		table->rows[address] = row.next | (row.step ? STEPS : 0) | (row.clear ? CLEARS : 0);
		if (kinds != NULL)
			kinds[address] = row.kind;
	}
	return table->rows != NULL;
}

struct two_stages *two_stages_create(struct arena *arena, const struct machine *machine)
{
	struct two_stages *two = arena_alloc(arena, sizeof *two);
	if (two == NULL)
		return NULL;
	two->at = machine->at;
	two->line_bits = machine->wiring.line.state_bits;
	two->kind_mask = low_bits(two->at.kind_bits);
	two->kinds = arena_array(arena, (size_t)1 << machine->wiring.frame.address_bits, sizeof *two->kinds);
	if (two->kinds == NULL || !read_rows(arena, machine, STAGE_LINE, &two->line, NULL) ||
	    !read_rows(arena, machine, STAGE_FRAME, &two->frame, two->kinds))
		return NULL;
	return two;
}

// The kind that the line stage sees: latched, or as the frame stage's row has it.
static inline uint32_t kind_at(const struct two_stages *two, uint32_t state, uint32_t frame_state)
{
	return two->at.kind_bits > 0 ? state >> two->at.kind & two->kind_mask : two->kinds[frame_state];
}

static inline uint32_t line_row(const struct two_stages *two, uint32_t line_state, uint32_t kind)
{
	return two->line.rows[line_state | kind << two->line_bits];
}

// A stage's state after an edge, before an asynchronous clear; `row` is that of its state before.
static inline uint32_t advanced(const struct stage_table *stage, uint32_t state, uint32_t row)
{
	if (stage->advance == ADVANCE_TABLE)
		return row & NEXT_MASK;
	return (row & CLEARS) != 0 ? 0 : (state + 1) & stage->state_mask;
}

uint32_t two_stages_settle(const struct two_stages *two, uint32_t state)
{
	const uint32_t line_mask = two->line.state_mask;
	uint32_t frame_state = state >> two->at.frame;
	if (two->frame.at_once && (two->frame.rows[frame_state] & CLEARS) != 0) {
		frame_state = 0;
		state &= low_bits(two->at.frame);
	}
	if (two->line.at_once && (line_row(two, state & line_mask, kind_at(two, state, frame_state)) & CLEARS) != 0)
		state &= ~line_mask;
	return state;
}

uint32_t two_stages_kind(const struct two_stages *two, uint32_t state)
{
	return kind_at(two, state, state >> two->at.frame);
}

bool two_stages_steps(const struct two_stages *two, uint32_t state)
{
	if (two->at.has_step)
		return (state >> two->at.step & 1) != 0;
	return (line_row(two, state & two->line.state_mask, two_stages_kind(two, state)) & STEPS) != 0;
}

uint32_t two_stages_passing(const struct two_stages *two, uint32_t state)
{
	const struct feedback *at = &two->at;
	const uint32_t line_state = state & two->line.state_mask, frame_state = state >> at->frame;
	const uint32_t row = line_row(two, line_state, kind_at(two, state, frame_state));
	const bool steps = at->has_step ? (state >> at->step & 1) != 0 : (row & STEPS) != 0;
	uint32_t next = steps ? advanced(&two->frame, frame_state, two->frame.rows[frame_state]) << at->frame
	                      : state & ~(low_bits(at->frame));
	if (at->kind_bits > 0)
		next |= steps ? two->kinds[frame_state] << at->kind : state & two->kind_mask << at->kind;
	if (at->has_step && (row & STEPS) != 0)
		next |= (uint32_t)1 << at->step;
	return next | advanced(&two->line, line_state, row);
}

uint32_t two_stages_next(const struct two_stages *two, uint32_t state)
{
	const uint32_t next = two_stages_passing(two, state);
	return two->line.at_once || two->frame.at_once ? two_stages_settle(two, next) : next;
}
