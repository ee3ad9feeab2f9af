#include "compare/seen.h"

#include <string.h>

#include "base/arena.h"
#include "base/diagnostics.h"
#include "compare/seen_work.h"

#define MOST_WORK 16000000u // pairs that alignments look at

bool seen_memory(struct seeing *seeing)
{
	diagnose(seeing->diagnostics, RULE_OUT_OF_MEMORY, (struct place){seeing->planned->plan->source, 0, 0}, "memory is out");
	return false;
}

bool seen_refuse(struct seeing *seeing, const char *why)
{
	diagnose(seeing->diagnostics, RULE_LIFT_RASTER, (struct place){seeing->planned->plan->source, 0, 0}, "%s", why);
	return false;
}

static bool count_blocks(struct seeing *seeing)
{
	struct plan *plan = seeing->seen->plan;
	size_t count = 0;
	for (size_t line = 0; line < seeing->line_count; line++)
		count += seeing->lines[line].begins_block;
	plan->blocks = arena_array(seeing->seen->arena, count, sizeof *plan->blocks);
	plan->block_count = 0;
	for (size_t line = 0; plan->blocks != NULL && line < seeing->line_count; line++) {
		if (seeing->lines[line].begins_block)
			plan->blocks[plan->block_count++] = (struct block){.line_type = seeing->lines[line].type,
			                                                   .place = {plan->source, 0, 0}};
		plan->blocks[plan->block_count - 1].repeat++;
	}
	return plan->blocks != NULL || seen_memory(seeing);
}

// A plan that names the state of its first cell, or of the first cell of its lines, would name the one that the images have there.
static void find_start(struct seeing *seeing)
{
	struct machine_plan *machine = &seeing->seen->plan->machine;
	const uint32_t mask = UINT32_MAX >> (32 - machine->line.state_bits), start = seeing->states[0] & mask;
	bool same = machine->has_start;
	for (size_t line = 0; same && machine->form == FORM_LINE_FRAME && line < seeing->line_count; line++)
		same = (seeing->states[seeing->lines[line].first] & mask) == start;
	if (same)
		machine->start = start;
}

// What is laid out must be what the images do: should it not be, nothing is told rather than something wrong.
static bool lay_out(struct seeing *seeing)
{
	struct seen *seen = seeing->seen;
	const struct circle *images = &seeing->images;
	find_start(seeing);
	seen->timeline = timeline_create(seen->plan, seeing->diagnostics);
	if (seen->timeline == NULL)
		return false;
	if (seen->timeline->cell_count == images->cells &&
	    memcmp(seen->timeline->asserted, images->asserted, images->cells * sizeof *images->asserted) == 0)
		return true;
	return seen_refuse(seeing, "what the images show cannot be told in the plan's regions");
}

static bool see(struct seeing *seeing)
{
	return seen_cut(seeing) && seen_turn(seeing) && seen_signals(seeing) && seen_pair(seeing) && seen_sort(seeing) &&
	       seen_divide(seeing) && seen_hold(seeing) && count_blocks(seeing) && lay_out(seeing);
}

static uint64_t signal_mask(int signal)
{
	return signal >= 0 ? (uint64_t)1 << signal : 0;
}

static void begin(struct seeing *seeing)
{
	const struct plan *plan = seeing->planned->plan;
	const int composite = plan->role_signal[ROLE_COMPOSITE_SYNC];
	seeing->stretch = signal_mask(plan->role_signal[ROLE_STRETCH]);
	if (plan->machine.form == FORM_LOOP)
		seeing->cut = signal_mask(composite >= 0 ? composite : plan->role_signal[ROLE_HORIZONTAL_SYNC]);
	seeing->steps = (struct comparing){.arena = seeing->arena, .work_left = MOST_WORK};
	*seeing->seen->plan = *plan;
}

// The board with codes that its signals may be read by. NULL when memory is out.
static const struct plan *board_with_codes(struct seeing *seeing)
{
	const struct plan *plan = seeing->planned->plan;
	struct plan *board = arena_alloc(seeing->arena, sizeof *board);
	struct signal *signals = arena_array(seeing->arena, plan->signal_count, sizeof *signals);
	if (board == NULL || signals == NULL)
		return NULL;
	*board = *plan;
	board->signals = signals;
	for (size_t index = 0; index < plan->signal_count; index++) {
		signals[index] = plan->signals[index];
		if (!signals[index].auto_codes || seeing->options.code_counts[index] == 0)
			continue;
		signals[index].auto_codes = false;
		signals[index].codes = seeing->options.codes[index];
		signals[index].code_count = seeing->options.code_counts[index];
	}
	return board;
}

struct seen *seen_create(const struct timeline *planned, const struct image *images, struct seen_options options,
                         struct diagnostics *diagnostics)
{
	struct arena *arena = arena_create(), *scratch = arena_create();
	struct seen *seen = arena != NULL ? arena_alloc(arena, sizeof *seen) : NULL;
	struct plan *plan = seen != NULL ? arena_alloc(arena, sizeof *plan) : NULL;
	struct seeing seeing = {.arena = scratch, .seen = seen, .planned = planned, .options = options, .diagnostics = diagnostics};
	const struct lift_options bare = {.cut_signal = SIZE_MAX, .bank = options.bank, .without_holds = true};
	const struct plan *board = plan != NULL && scratch != NULL ? board_with_codes(&seeing) : NULL;
	struct lift *lift = NULL;
	bool good = false;
	if (board == NULL) {
		seen_memory(&seeing);
	} else {
		*seen = (struct seen){.arena = arena, .plan = plan};
		seeing.lift = lift = lift_images(board, images, bare, diagnostics);
		begin(&seeing);
		good = lift != NULL && see(&seeing);
	}
	lift_destroy(lift);
	arena_destroy(scratch);
	if (good)
		return seen;
	if (board != NULL)
		timeline_destroy(seen->timeline);
	arena_destroy(arena);
	return NULL;
}

void seen_destroy(struct seen *seen)
{
	if (seen == NULL)
		return;
	timeline_destroy(seen->timeline);
	arena_destroy(seen->arena);
}
