// A jump of the line stage: within a line every state leads to one that no other does, and a state that comes twice would
// come for ever.
#include "proof/line_jump.h"

#include <inttypes.h>

#include "base/arena.h"

// The rows of one kind, and a line that is read in them.
struct line_rows {
	const struct trial *trial;
	uint32_t mask;        // of the line stage's state
	uint32_t kind;        // in its place in an address
	uint32_t first;       // the state in which every line begins
	uint32_t first_cell;  // of the line, in the frame
	uint32_t cells;
	bool latched;
};

static struct row row_at(const struct line_rows *rows, uint32_t state)
{
	return machine_row(rows->trial->machine, STAGE_LINE, state | rows->kind);
}

// A state of no cell, or one that can not be told from that: latched, the last cell's.
static bool is_spare(const struct line_rows *rows, struct row row)
{
	return row.next == rows->first && (rows->latched || !row.step);
}

// The only state that is not spare and that nothing leads to. False if there is no or more than one.
static bool find_orphan(const struct line_rows *rows, bool *led_to, uint32_t *orphan)
{
	unsigned found = 0;
	for (uint32_t state = 0; state <= rows->mask; state++)
		if (!is_spare(rows, row_at(rows, state)))
			led_to[row_at(rows, state).next & rows->mask] = true;
	for (uint32_t state = 0; state <= rows->mask && found < 2; state++) {
		if (state == rows->first || led_to[state] || is_spare(rows, row_at(rows, state)))
			continue;
		*orphan = state;
		found++;
	}
	return found == 1;
}

// The cells of a line that is left when it begins in some state; `most` if there are as many or more.
static uint32_t cells_left(const struct line_rows *rows, uint32_t state, uint32_t most)
{
	uint32_t cells = 1;
	for (; cells < most; cells++) {
		const uint32_t next = row_at(rows, state).next;
		if (next == rows->first)
			break;
		state = next;
	}
	return cells;
}

// Whether step is stored where it should be, once the state of cell `jump` leads to `successor`.
static bool steps_right(const struct line_rows *rows, uint32_t jump, uint32_t successor)
{
	const uint32_t step_cell = rows->latched ? rows->cells - 2 : rows->cells - 1;
	uint32_t state = rows->first;
	for (uint32_t cell = 0; cell <= step_cell; cell++) {
		const struct row row = row_at(rows, state);
		if (row.step != (cell == step_cell))
			return false;
		state = cell == jump ? successor : row.next;
	}
	return true;
}

static bool blame_jump(const struct line_rows *rows, uint32_t orphan, struct counterexample *found, bool *certain)
{
	const struct trial *trial = rows->trial;
	const uint32_t left = cells_left(rows, orphan, rows->cells);
	if (left >= rows->cells || !steps_right(rows, rows->cells - 1 - left, orphan))
		return true;
	const uint32_t cell = rows->first_cell + rows->cells - 1 - left;
	if (cell > found->cell)
		return true;
	const uint32_t after = row_at(rows, trial->lap.states[cell] & rows->mask).next;
	struct counterexample jump = blame_next(trial, cell, after ^ orphan);
	jump.what = arena_format(trial->proofs->arena, "the next H is 0x%" PRIX32 ", expected 0x%" PRIX32 ", which nothing else leads to",
	                         after, orphan);
	*found = jump;
	*certain = true;
	return jump.what != NULL;
}

// A state that comes again in the same line.
static bool blame_repeat(const struct line_rows *rows, struct counterexample *found, bool *certain)
{
	const struct trial *trial = rows->trial;
	const uint32_t states = rows->mask + 1;
	uint32_t *came_in = arena_array(trial->arena, states, sizeof *came_in);
	if (came_in == NULL)
		return false;
	for (uint32_t cell = 0; rows->first_cell + cell <= found->cell; cell++) {
		const uint32_t state = trial->lap.states[rows->first_cell + cell] & rows->mask;
		if (came_in[state] != 0) {
			struct counterexample repeat = blame_next(trial, rows->first_cell + cell - 1, rows->mask);
			const char *bytes = next_bytes(trial, STAGE_LINE, repeat.state);
			if (bytes != NULL)
				repeat.what = arena_format(trial->proofs->arena, "the next H is 0x%" PRIX32 " (%s), which cell %" PRIu32
				                           " of this line had already", state, bytes, came_in[state] - 1);
			*found = repeat;
			*certain = true;
			return repeat.what != NULL;
		}
		came_in[state] = cell + 1;
	}
	return true;
}

bool find_line_jump(const struct trial *trial, uint32_t wrong_at, struct counterexample *found, bool *certain)
{
	const struct timeline *timeline = trial->timeline;
	const uint32_t mask = low_bits(trial->wiring.line.state_bits);
	const bool latched = trial->wiring.line.outputs == OUTPUTS_REGISTERED;
	*certain = (trial->numbered_bits & mask) != 0;
	if (*certain || wrong_at == 0)
		return true;
	const uint32_t shown_in = wrong_at == UINT32_MAX || !latched ? wrong_at : wrong_at - 1;
	const struct frame_line *line = &timeline->lines[timeline_place(timeline, shown_in < found->cell ? shown_in : found->cell).line];
	const uint32_t state = trial->lap.states[line->first_cell];
	const struct line_rows rows = {.trial = trial, .mask = mask, .first = trial->lap.states[0] & mask, .first_cell = line->first_cell,
	                               .kind = machine_row_address(trial->machine, STAGE_LINE, state) & ~mask,
	                               .cells = timeline->types[line->type].cells, .latched = latched};
	if (found->cell >= line->first_cell + rows.cells || rows.cells < 2)
		return true;
	bool *led_to = arena_array(trial->arena, (size_t)mask + 1, sizeof *led_to);
	uint32_t orphan = 0;
	if (led_to == NULL)
		return false;
	if (find_orphan(&rows, led_to, &orphan) && !blame_jump(&rows, orphan, found, certain))
		return false;
	return *certain || blame_repeat(&rows, found, certain);
}
