#include <string.h>

#include "base/arena.h"
#include "machine/machine.h"
#include "near/near.h"

struct walk {
	struct arena *arena;
	const struct old_machine *old;
	struct wiring wiring;
	struct feedback at;
	const struct machine *machine;
	struct old_frame *frame;
};

static uint32_t line_state(const struct walk *walk, uint32_t state)
{
	return state & low_bits(walk->wiring.line.state_bits);
}

static uint32_t frame_state(const struct walk *walk, uint32_t state)
{
	return walk->wiring.form == FORM_LOOP ? 0 : state >> walk->at.frame;
}

// The state that most states lead to.
static uint32_t commonest_next(const struct walk *walk)
{
	const uint32_t states = (uint32_t)1 << walk->wiring.line.state_bits;
	uint32_t *counts = arena_array(walk->arena, states, sizeof *counts), commonest = 0;
	for (uint32_t state = 0; counts != NULL && state < states; state++) {
		const uint32_t next = machine_next(walk->machine, machine_settle(walk->machine, state));
		if (++counts[next] > counts[commonest])
			commonest = next;
	}
	return counts != NULL ? commonest : NO_STATE;
}

// How many cells there are until a state comes again. 0 when memory is out.
static uint32_t count_loop(struct walk *walk, uint32_t first)
{
	uint8_t *seen = arena_alloc(walk->arena, ((size_t)1 << walk->wiring.line.state_bits) / 8 + 1);
	uint32_t cells = 0, state = first;
	if (seen == NULL)
		return 0;
	for (; (seen[state / 8] >> state % 8 & 1) == 0; cells++) {
		seen[state / 8] |= (uint8_t)(1u << state % 8);
		state = machine_next(walk->machine, state);
	}
	walk->frame->closed = state == first;
	return cells;
}

// A line-frame machine is let run until the frame stage steps to its first line; where it began does not matter then. NO_STATE if it never does.
static uint32_t find_first_line(const struct walk *walk)
{
	uint32_t state = machine_settle(walk->machine, 0);
	unsigned steps = 0;
	for (uint64_t left = 2 * ((uint64_t)1 << walk->at.bits); left > 0; left--) {
		const bool stepped = machine_steps(walk->machine, state);
		state = machine_next(walk->machine, state);
		steps += stepped && steps < 2;
		if (stepped && steps == 2 && frame_state(walk, state) == 0)
			return state;
	}
	return NO_STATE;
}

// Cells and lines of a lap; none if it does not close.
static void count_lap(struct walk *walk, uint32_t first)
{
	uint32_t state = first, cells = 0, lines = 0;
	do {
		lines += machine_steps(walk->machine, state);
		state = machine_next(walk->machine, state);
		cells++;
	} while (state != first && cells < LIMIT_CELLS);
	walk->frame->closed = state == first;
	walk->frame->cell_count = walk->frame->closed ? cells : 0;
	walk->frame->line_count = walk->frame->closed ? lines : 0;
}

static uint64_t decoded_pins(const struct walk *walk, uint32_t state)
{
	const struct plan *plan = walk->old->plan;
	uint64_t pins = 0;
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		if (plan->signals[signal].origin != FROM_FIELD || walk->old->codes[signal] == NULL)
			continue;
		const uint32_t value = field_value(&plan->machine.fields[plan->signals[signal].field], state);
		for (size_t code = 0; code < walk->old->code_counts[signal]; code++)
			pins |= (uint64_t)(walk->old->codes[signal][code] == value) << signal;
	}
	return pins;
}

static uint64_t data_signals(const struct walk *walk)
{
	return walk->old->known & walk->wiring.line.data_signals;
}

static uint64_t known_signals(const struct walk *walk)
{
	const struct plan *plan = walk->old->plan;
	uint64_t known = data_signals(walk);
	for (size_t signal = 0; signal < plan->signal_count; signal++)
		if (plan->signals[signal].origin == FROM_FIELD && walk->old->codes[signal] != NULL)
			known |= (uint64_t)1 << signal;
	return known;
}

// Records the cells that were counted.
static void record(struct walk *walk, uint32_t first)
{
	struct old_frame *frame = walk->frame;
	const uint64_t at_rest = levels_of(walk->old->plan, 0);
	uint32_t state = first, line = 0;
	bool begins = true;
	for (uint32_t cell = 0; cell < frame->cell_count; cell++) {
		const uint64_t levels = machine_row(walk->machine, STAGE_LINE, machine_row_address(walk->machine, STAGE_LINE, state)).levels;
		if (begins && line < frame->line_count)
			frame->lines[line++] = cell;
		frame->states[cell] = line_state(walk, state);
		frame->rows[cell] = (levels ^ at_rest) & frame->data;
		frame->decoded[cell] = decoded_pins(walk, frame->states[cell]);
		begins = machine_steps(walk->machine, state);
		state = machine_next(walk->machine, state);
	}
	old_frame_read(frame, 0);
}

static bool allocate(struct walk *walk)
{
	struct old_frame *frame = walk->frame;
	frame->states = arena_array(walk->arena, frame->cell_count, sizeof *frame->states);
	frame->rows = arena_array(walk->arena, frame->cell_count, sizeof *frame->rows);
	frame->decoded = arena_array(walk->arena, frame->cell_count, sizeof *frame->decoded);
	frame->pins = arena_array(walk->arena, frame->cell_count, sizeof *frame->pins);
	frame->lines = arena_array(walk->arena, frame->line_count, sizeof *frame->lines);
	return frame->states != NULL && frame->rows != NULL && frame->decoded != NULL && frame->pins != NULL && frame->lines != NULL;
}

static bool walk_loop(struct walk *walk)
{
	const uint32_t start = walk->old->has_start ? walk->old->start : commonest_next(walk);
	if (start == NO_STATE)
		return false;
	const uint32_t first = machine_settle(walk->machine, line_state(walk, start));
	walk->frame->cell_count = count_loop(walk, first);
	if (walk->frame->cell_count == 0 || !allocate(walk))
		return false;
	record(walk, first);
	return true;
}

static bool walk_lines(struct walk *walk)
{
	const uint32_t first = find_first_line(walk);
	if (first != NO_STATE)
		count_lap(walk, first);
	if (!allocate(walk))
		return false;
	record(walk, first);
	return true;
}

bool old_frame_walk(struct arena *arena, const struct old_machine *machine, struct old_frame *frame)
{
	struct walk walk = {.arena = arena, .old = machine, .wiring = wiring_of(machine->plan), .frame = frame};
	*frame = (struct old_frame){.closed = false};
	walk.at = feedback_of(&walk.wiring);
	walk.machine = machine_create(arena, &walk.wiring, machine->images, machine->bank);
	if (walk.machine == NULL)
		return false;
	frame->latched = walk.wiring.line.outputs == OUTPUTS_REGISTERED;
	frame->data = data_signals(&walk);
	frame->known = known_signals(&walk);
	return walk.wiring.form == FORM_LOOP ? walk_loop(&walk) : walk_lines(&walk);
}
