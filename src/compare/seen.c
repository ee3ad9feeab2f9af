#include "compare/seen.h"

#include <string.h>

#include "base/arena.h"
#include "base/diagnostics.h"
#include "compare/compare.h"
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

// A plan that names the state of its first cell, or of the first cell of its lines, would name the one that the images have there; of a
// frame as long as planned, or else it is none that was meant.
static void find_start(struct seeing *seeing)
{
	struct machine_plan *machine = &seeing->seen->plan->machine;
	const uint32_t mask = UINT32_MAX >> (32 - machine->line.state_bits), start = seeing->states[0] & mask;
	bool same = machine->has_start && seeing->images.cells == seeing->plan.cells;
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
	       seen_divide(seeing) && seen_blocks(seeing) && seen_hold(seeing) && count_blocks(seeing) && lay_out(seeing);
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

// What every try starts from.
struct sight {
	const struct timeline *planned;
	const struct lift *lift;
	struct seen_options options;
	struct diagnostics *diagnostics;
	uint32_t start;            // the cell of the loop in which the frame begins, as the last try has it
	bool other_signals;        // some try took signals for other ones
};

static bool differ_in_signals(const struct plan *planned, const struct plan *seen)
{
	bool differ = false;
	for (size_t signal = 0; !differ && signal < planned->signal_count; signal++)
		differ = planned->signals[signal].active_high != seen->signals[signal].active_high ||
		         planned->signals[signal].lead_cells != seen->signals[signal].lead_cells;
	return differ;
}

static struct seen *try_to_see(struct sight *sight, enum seen_try try)
{
	struct arena *arena = arena_create(), *scratch = arena_create();
	struct seen *seen = arena != NULL ? arena_alloc(arena, sizeof *seen) : NULL;
	struct plan *plan = seen != NULL ? arena_alloc(arena, sizeof *plan) : NULL;
	struct seeing seeing = {.arena = scratch, .seen = seen, .planned = sight->planned, .options = sight->options, .lift = sight->lift,
	                        .try = try, .near_start = sight->start, .diagnostics = sight->diagnostics};
	bool good = false;
	if (plan == NULL || scratch == NULL) {
		seen_memory(&seeing);
	} else {
		*seen = (struct seen){.arena = arena, .plan = plan};
		begin(&seeing);
		good = see(&seeing);
		sight->start = seeing.images.turned;
		sight->other_signals = sight->other_signals || seeing.inverts || differ_in_signals(seeing.planned->plan, plan);
	}
	arena_destroy(scratch);
	if (good)
		return seen;
	if (plan != NULL)
		timeline_destroy(seen->timeline);
	arena_destroy(arena);
	return NULL;
}

// How many changes there are but those of words; SIZE_MAX when memory is out.
static size_t count_changes(const struct timeline *planned, const struct seen *seen)
{
	struct comparison *comparison = comparison_create(seen->timeline, planned);
	size_t count = 0;
	if (comparison == NULL)
		return SIZE_MAX;
	for (size_t index = 0; index < comparison->count; index++)
		count += comparison->changes[index].section != CHANGE_WORDS && comparison->changes[index].section != CHANGE_LIMITS;
	comparison_destroy(comparison);
	return count;
}

// Another try, if that leaves fewer changes than *changes. What it cannot do is no fault.
static struct seen *try_again(struct sight *sight, enum seen_try try, struct seen *first, size_t *changes)
{
	sight->diagnostics = diagnostics_create();
	struct seen *second = sight->diagnostics != NULL ? try_to_see(sight, try) : NULL;
	diagnostics_destroy(sight->diagnostics);
	const size_t others = second != NULL ? count_changes(sight->planned, second) : SIZE_MAX;
	const bool better = others < *changes;
	*changes = better ? others : *changes;
	seen_destroy(better ? first : second);
	return better ? second : first;
}

// No pin tells where the lines of a loop machine begin; and a signal may look as if it were of another level or lead.
static struct seen *try_other_ways(struct sight *sight, struct seen *seen)
{
	const bool loop = sight->planned->plan->machine.form == FORM_LOOP;
	size_t changes = count_changes(sight->planned, seen);
	if (changes > 1 && loop && sight->planned->cell_count == seen->timeline->cell_count)
		seen = try_again(sight, TRY_PLANNED_LINES, seen, &changes);
	if (changes > 1 && loop)
		seen = try_again(sight, TRY_CUTS, seen, &changes);
	if (changes > 1 && sight->other_signals)
		seen = try_again(sight, TRY_AS_READ, seen, &changes);
	return seen;
}

// The board with codes that its signals may be read by. NULL when memory is out.
static const struct plan *board_with_codes(struct arena *arena, const struct plan *plan, const struct seen_options *options)
{
	struct plan *board = arena_alloc(arena, sizeof *board);
	struct signal *signals = arena_array(arena, plan->signal_count, sizeof *signals);
	if (board == NULL || signals == NULL)
		return NULL;
	*board = *plan;
	board->signals = signals;
	for (size_t index = 0; index < plan->signal_count; index++) {
		signals[index] = plan->signals[index];
		if (!signals[index].auto_codes || options->code_counts[index] == 0)
			continue;
		signals[index].auto_codes = false;
		signals[index].codes = options->codes[index];
		signals[index].code_count = options->code_counts[index];
	}
	return board;
}

struct seen *seen_create(const struct timeline *planned, const struct image *images, struct seen_options options,
                         struct diagnostics *diagnostics)
{
	const struct lift_options bare = {.cut_signal = SIZE_MAX, .bank = options.bank, .without_holds = true};
	struct sight sight = {.planned = planned, .options = options, .diagnostics = diagnostics};
	struct arena *arena = arena_create();
	const struct plan *board = arena != NULL ? board_with_codes(arena, planned->plan, &options) : NULL;
	struct lift *lift = board != NULL ? lift_images(board, images, bare, diagnostics) : NULL;
	struct seen *seen = NULL;
	if (board == NULL)
		diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){planned->plan->source, 0, 0}, "memory is out");
	sight.lift = lift;
	if (lift != NULL)
		seen = try_to_see(&sight, TRY_SYNC);
	if (seen != NULL)
		seen = try_other_ways(&sight, seen);
	lift_destroy(lift);
	arena_destroy(arena);
	return seen;
}

void seen_destroy(struct seen *seen)
{
	if (seen == NULL)
		return;
	timeline_destroy(seen->timeline);
	arena_destroy(seen->arena);
}
