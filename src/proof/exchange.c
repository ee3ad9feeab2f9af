#include "proof/exchange.h"

#include "base/arena.h"
#include "catalogue/catalogue.h"
#include "proof/frame_find.h"
#include "proof/line_frame.h"

// Of so many first cells no more than a few may be wrong, else the images are taken for those of another plan.
#define FIRST_CELLS 64u
#define FEW_CELLS 8u

// States that the searches for a start may look at, in all.
#define SEARCHED_STATES ((size_t)1 << 25)
// Cells of line-frame machines that may be run.
#define SEARCHED_CELLS ((uint64_t)1 << 24)

static bool is_wrong(const struct trial *trial, uint32_t cell)
{
	return trial->lap.pins[cell] != trial->expected[cell] || wrong_held_bits(trial, cell, trial->lap.states[cell]) != 0;
}

static bool many_wrong_cells(const struct trial *trial)
{
	uint32_t wrong = 0;
	for (uint32_t cell = first_judged_cell(trial); cell < trial->timeline->cell_count && cell < FIRST_CELLS; cell++)
		wrong += is_wrong(trial, cell);
	return wrong > FEW_CELLS;
}

// A lap up to the first fault in a held bit, a data pin or a known decoder; true if there is none and it ends where it
// began.
static bool passes(const struct trial *trial, uint32_t start)
{
	const uint32_t cells = trial->timeline->cell_count;
	const uint64_t inverted = levels_of(trial->timeline->plan, 0), data = trial->wiring.line.data_signals;
	const bool registered = trial->wiring.line.outputs == OUTPUTS_REGISTERED;
	const uint64_t known = decoders_known(trial->decoders);
	const uint32_t first = machine_settle(trial->machine, start);
	uint32_t state = first;
	for (uint32_t cell = 0; cell < cells; cell++) {
		const uint32_t shown_at = !registered ? cell : cell + 1 == cells ? 0 : cell + 1;
		const uint64_t pins = (machine_row(trial->machine, STAGE_LINE, state).levels ^ inverted) & data;
		const uint64_t decoded = decoders_pins(trial->decoders, state);
		if (pins != (trial->expected[shown_at] & data) || decoded != (trial->expected[cell] & known) ||
		    wrong_held_bits(trial, cell, state) != 0)
			return false;
		state = machine_next(trial->machine, state);
	}
	return state == first;
}

// The whole lap, codes that are read out of the images included.
static bool lap_is_right(struct trial *trial, uint32_t start, bool *right)
{
	*right = false;
	if (!passes(trial, start))
		return true;
	if (!lap_run(trial, start) || !lap_finish(trial))
		return false;
	*right = trial->lap.closed && signals_first_cell(trial) == UINT32_MAX;
	return true;
}

// The same for a line-frame machine, whose start follows from its rows.
static bool stages_are_right(struct trial *other, const struct trial *trial, bool *right)
{
	const uint32_t line_start = trial->start & low_bits(trial->wiring.line.state_bits);
	if (!lap_run(other, line_frame_start(other, trial->has_start, line_start)) || !lap_finish(other))
		return false;
	*right = other->lap.closed && !other->departure.present && signals_first_cell(other) == UINT32_MAX;
	return true;
}

static bool try_pair(const struct trial *trial, struct arena *arena, size_t left, size_t right_chip, bool search, bool *right)
{
	const size_t chips = trial->wiring.chip_count;
	struct image *images = arena_array(arena, chips, sizeof *images);
	struct proofs scratch = {.arena = arena, .timeline = trial->timeline};
	struct trial other = *trial;
	uint32_t start = trial->start;
	if (images == NULL)
		return false;
	for (size_t chip = 0; chip < chips; chip++)
		images[chip] = trial->images[chip == left ? right_chip : chip == right_chip ? left : chip];
	other.proofs = &scratch;
	other.arena = arena;
	other.images = images;
	other.lap = (struct lap){0};
	other.machine = machine_create(arena, &trial->wiring, images, trial->bank);
	other.decoders = decoders_create(arena, trial->timeline->plan);
	if (other.machine == NULL || other.decoders == NULL)
		return false;
	if (trial->wiring.form == FORM_LINE_FRAME)
		return stages_are_right(&other, trial, right);
	if (search && !frame_find(arena, trial->timeline, &trial->wiring, other.machine, trial->expected, other.decoders, &start))
		return false;
	return lap_is_right(&other, start, right);
}

static bool may_exchange(const struct trial *trial, size_t left, size_t right)
{
	const struct chip *chips = trial->wiring.chips;
	return chips[left].part == chips[right].part;
}

static size_t count_pairs(const struct trial *trial)
{
	size_t count = 0;
	for (size_t right = 1; right < trial->wiring.chip_count; right++)
		for (size_t left = 0; left < right; left++)
			count += may_exchange(trial, left, right);
	return count;
}

bool find_exchange(const struct trial *trial, const char **hint)
{
	const struct chip *chips = trial->wiring.chips;
	const bool search = !trial->has_start && count_pairs(trial) <= SEARCHED_STATES >> trial->wiring.line.state_bits;
	bool tried = true, right_lap = false;
	*hint = NULL;
	if (trial->wiring.form == FORM_LINE_FRAME && (uint64_t)count_pairs(trial) * trial->timeline->cell_count > SEARCHED_CELLS)
		return true;
	for (size_t right = 1; tried && right < trial->wiring.chip_count; right++) {
		for (size_t left = 0; tried && left < right; left++) {
			if (!may_exchange(trial, left, right))
				continue;
			struct arena *arena = arena_create();
			tried = arena != NULL && try_pair(trial, arena, left, right, search, &right_lap);
			arena_destroy(arena);
			if (!tried || !right_lap)
				continue;
			*hint = arena_format(trial->proofs->arena, "with %s and %s exchanged the frame closes as planned", chips[left].label,
			                     chips[right].label);
			return *hint != NULL;
		}
	}
	const bool at_once = trial->wiring.form == FORM_LOOP || trial->departed_cell <= FEW_CELLS;
	if (tried && at_once && many_wrong_cells(trial))
		*hint = "are these images of this plan? compare the CRC-32 in its manifest";
	return tried;
}
