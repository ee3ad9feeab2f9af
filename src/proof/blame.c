// Where a fault comes from: the row that was read, the chip and the byte.
#include <inttypes.h>

#include "base/arena.h"
#include "base/text.h"
#include "catalogue/catalogue.h"
#include "proof/trial.h"

bool proof_fails(struct trial *trial, enum proof_kind kind, struct counterexample found)
{
	struct proof *proof = &trial->proofs->proof[kind];
	if (found.what == NULL)
		return false;
	if (proof->verdict != VERDICT_FAIL)
		proof->counterexample = found;
	proof->verdict = VERDICT_FAIL;
	return true;
}

void proof_not_judged(struct trial *trial, enum proof_kind kind, const char *reason)
{
	struct proof *proof = &trial->proofs->proof[kind];
	if (proof->verdict != VERDICT_FAIL)
		proof->counterexample = (struct counterexample){.bank = trial->bank, .signal = SIZE_MAX, .what = reason};
	proof->verdict = VERDICT_FAIL;
}

uint32_t cell_before(const struct trial *trial, uint32_t cell)
{
	return cell == 0 ? trial->timeline->cell_count - 1 : cell - 1;
}

static bool chip_carries(const struct chip *chip, enum stage stage, enum data_wire_kind kind, uint64_t indices)
{
	const bool numbered = kind != DATA_CLEAR && kind != DATA_STEP;
	for (unsigned pin = 0; pin < chip->part->data_pins; pin++)
		if (chip->stage == stage && chip->data[pin].kind == kind && (!numbered || (indices >> chip->data[pin].index & 1)))
			return true;
	return false;
}

static struct byte_place place_in_chip(const struct trial *trial, size_t chip, uint32_t row_address)
{
	size_t address = machine_address(trial->machine, row_address, chip);
	const uint8_t *bytes = trial->images[chip].bytes + address;
	if (trial->wiring.chips[chip].part->data_pins == 8)
		return (struct byte_place){.chip = chip, .address = address, .value = bytes[0]};
	return (struct byte_place){.chip = chip, .address = address / 2, .value = bytes[0] | (uint32_t)bytes[1] << 8};
}

// Names the byte of the first chip that carries one of some word bits.
static void blame_bits(const struct trial *trial, enum data_wire_kind kind, uint64_t indices, struct counterexample *found)
{
	for (size_t chip = 0; chip < trial->wiring.chip_count && !found->byte_known; chip++) {
		if (!chip_carries(&trial->wiring.chips[chip], found->stage, kind, indices))
			continue;
		found->byte_known = true;
		found->byte = place_in_chip(trial, chip, found->state);
	}
}

static enum data_wire_kind next_kind(const struct trial *trial, enum stage stage)
{
	return wiring_stage(&trial->wiring, stage)->advance == ADVANCE_COUNT ? DATA_CLEAR : DATA_NEXT;
}

// The row that decides where a stage goes from a state on. An asynchronous clear is read in the row that the counter passes
// through afterwards: that of the line stage under the kind that then follows.
static void find_next_row(const struct trial *trial, enum stage stage, uint32_t state, struct counterexample *found)
{
	const struct stage_wiring *wired = wiring_stage(&trial->wiring, stage);
	const uint32_t address = machine_row_address(trial->machine, stage, state), mask = low_bits(wired->state_bits);
	found->stage = stage;
	found->state = address;
	if (clears_at_once(wired) && !machine_row(trial->machine, stage, address).clear) // else it is held at 0
		found->state = ((address + 1) & mask) |
		               (machine_row_address(trial->machine, stage, machine_next(trial->machine, state)) & ~mask);
}

// Of the wrong bits of a state, those of the part that is blamed, and the word bits that decide them.
static void blame_state_bits(const struct trial *trial, uint32_t state, uint32_t wrong_bits, struct counterexample *found)
{
	const struct feedback *at = &trial->at;
	const uint32_t line_bits = wrong_bits & low_bits(trial->wiring.line.state_bits), kind_mask = low_bits(at->kind_bits);
	if (line_bits != 0 || trial->wiring.form == FORM_LOOP) {
		find_next_row(trial, STAGE_LINE, state, found);
		blame_bits(trial, next_kind(trial, STAGE_LINE), wrong_bits, found);
	} else if (at->has_step && (wrong_bits >> at->step & 1) != 0) {
		found->state = machine_row_address(trial->machine, STAGE_LINE, state);
		blame_bits(trial, DATA_STEP, 1, found);
	} else if ((wrong_bits >> at->kind & kind_mask) != 0) {
		found->stage = STAGE_FRAME;
		found->state = machine_row_address(trial->machine, STAGE_FRAME, state);
		blame_bits(trial, DATA_KIND, wrong_bits >> at->kind & kind_mask, found);
	} else {
		find_next_row(trial, STAGE_FRAME, state, found);
		blame_bits(trial, next_kind(trial, STAGE_FRAME), wrong_bits >> at->frame, found);
	}
}

struct counterexample blame_next(const struct trial *trial, uint32_t cell, uint32_t wrong_bits)
{
	struct counterexample found = {.present = true, .bank = trial->bank, .cell = cell, .signal = SIZE_MAX};
	blame_state_bits(trial, trial->lap.states[cell], wrong_bits, &found);
	return found;
}

struct counterexample blame_step(const struct trial *trial, uint32_t cell)
{
	struct counterexample found = {.present = true, .bank = trial->bank, .cell = cell, .signal = SIZE_MAX};
	const uint32_t row_cell = trial->at.has_step ? cell_before(trial, cell) : cell;
	found.state = machine_row_address(trial->machine, STAGE_LINE, trial->lap.states[row_cell]);
	blame_bits(trial, DATA_STEP, 1, &found);
	return found;
}

struct counterexample blame_kind(const struct trial *trial, uint32_t line, uint32_t wrong_bits)
{
	const uint32_t cell = trial->timeline->lines[line].first_cell;
	struct counterexample found = {.present = true, .bank = trial->bank, .cell = cell, .stage = STAGE_FRAME, .signal = SIZE_MAX};
	if (trial->at.kind_bits > 0 && line == 0) // where the lap began, and not where it may have ended
		found.state = trial->timeline->line_count - 1;
	else
		found.state = machine_row_address(trial->machine, STAGE_FRAME, trial->lap.states[trial->at.kind_bits > 0 ? cell - 1 : cell]);
	blame_bits(trial, DATA_KIND, wrong_bits, &found);
	return found;
}

// The cell whose row holds what a data signal's pin shows at a cell.
static uint32_t row_cell_of(const struct trial *trial, uint32_t cell, enum stage stage)
{
	if (wiring_stage(&trial->wiring, stage)->outputs == OUTPUTS_DIRECT)
		return cell;
	if (stage == STAGE_LINE)
		return cell_before(trial, cell);
	return cell_before(trial, trial->timeline->lines[timeline_place(trial->timeline, cell).line].first_cell);
}

struct counterexample blame_pin(const struct trial *trial, uint32_t cell, size_t signal)
{
	const struct plan *plan = trial->timeline->plan;
	const enum stage stage = plan->signals[signal].stage;
	struct counterexample found = {.present = true, .bank = trial->bank, .cell = cell, .signal = signal};
	if (plan->signals[signal].origin == FROM_FIELD) {
		find_next_row(trial, STAGE_LINE, trial->lap.states[cell_before(trial, cell)], &found);
		blame_bits(trial, next_kind(trial, STAGE_LINE), field_mask(&plan->machine.fields[plan->signals[signal].field]), &found);
		return found;
	}
	found.stage = stage;
	found.state = machine_row_address(trial->machine, stage, trial->lap.states[row_cell_of(trial, cell, stage)]);
	blame_bits(trial, DATA_SIGNAL, (uint64_t)1 << signal, &found);
	return found;
}

void blame_other_proof(const struct trial *trial, enum proof_kind kind, struct counterexample *found)
{
	found->state = NO_STATE;
	found->byte_known = false;
	if (found->what != NULL)
		found->what = arena_format(trial->proofs->arena, "%s; this may follow from the earlier fault under %s", found->what, proof_name(kind));
}

const char *next_bytes(const struct trial *trial, enum stage stage, uint32_t address)
{
	struct text text = {0};
	for (size_t chip = 0; chip < trial->wiring.chip_count; chip++) {
		const struct chip *wired = &trial->wiring.chips[chip];
		if (!chip_carries(wired, stage, next_kind(trial, stage), UINT64_MAX))
			continue;
		struct byte_place place = place_in_chip(trial, chip, address);
		text_printf(&text, "%s%s 0x%04zX: 0x%0*" PRIX32, text.length > 0 ? " and " : "", wired->label, place.address,
		            (int)wired->part->data_pins / 4, place.value);
	}
	const char *copy = text.failed ? NULL : arena_copy(trial->proofs->arena, text_string(&text), text.length);
	text_release(&text);
	return copy;
}

const char *state_words(const struct trial *trial, uint32_t state)
{
	const struct feedback *at = &trial->at;
	if (trial->wiring.form == FORM_LOOP)
		return arena_format(trial->proofs->arena, "0x%" PRIX32, state);
	struct text text = {0};
	text_printf(&text, "H 0x%" PRIX32, state & low_bits(trial->wiring.line.state_bits));
	if (at->has_step)
		text_printf(&text, ", step %" PRIu32, state >> at->step & 1);
	if (at->kind_bits > 0)
		text_printf(&text, ", kind %" PRIu32, state >> at->kind & low_bits(at->kind_bits));
	text_printf(&text, ", V 0x%" PRIX32, state >> at->frame);
	const char *copy = text.failed ? NULL : arena_copy(trial->proofs->arena, text_string(&text), text.length);
	text_release(&text);
	return copy;
}

// A state of a line-frame machine's second loop whose row is to blame: of a line that the frame does not have, one in which
// the frame stage goes to the next; of a loop that never steps, any; else one whose H is to blame, as far as can be told.
static uint32_t state_to_blame(const struct trial *trial, uint32_t state, bool *steps)
{
	uint32_t at = state;
	*steps = false;
	do {
		if (machine_steps(trial->machine, at)) {
			*steps = true;
			if (at >> trial->at.frame >= trial->timeline->line_count)
				return at;
		}
		at = machine_next(trial->machine, at);
	} while (at != state);
	return state;
}

// The rows of the line stage that the frame reads; in the trial's arena, a byte each. NULL when memory is out.
static const uint8_t *frame_rows(const struct trial *trial)
{
	uint8_t *rows = arena_array(trial->arena, (size_t)1 << trial->wiring.line.address_bits, sizeof *rows);
	for (uint32_t cell = 0; rows != NULL && cell < trial->timeline->cell_count; cell++)
		rows[machine_row_address(trial->machine, STAGE_LINE, trial->lap.states[cell])] = 1;
	return rows;
}

// Whether a loop that never steps is of rows that the frame has none of, though it has lines of their kind: spare rows, which should
// lead home. Of a kind that the frame does not have, rows should step.
static bool is_spare_loop(const struct trial *trial, uint32_t state)
{
	const uint8_t *rows = frame_rows(trial);
	const uint32_t states = low_bits(trial->wiring.line.state_bits), kind = machine_row_address(trial->machine, STAGE_LINE, state) & ~states;
	bool has_kind = false, spare = rows != NULL;
	for (uint32_t line_state = 0; spare && line_state <= states; line_state++)
		has_kind = has_kind || rows[kind | line_state] != 0;
	uint32_t at = state;
	do {
		spare = spare && rows[machine_row_address(trial->machine, STAGE_LINE, at)] == 0;
		at = machine_next(trial->machine, at);
	} while (at != state && spare);
	return spare && has_kind;
}

// A loop that keeps to one line: step is never asserted. Any of its rows should.
static struct counterexample blame_missing_step(const struct trial *trial, uint32_t state, struct counterexample found)
{
	found.state = machine_row_address(trial->machine, STAGE_LINE, state);
	blame_bits(trial, DATA_STEP, 1, &found);
	found.what = arena_format(trial->proofs->arena, "no row of it asserts step, expected one that does, so that the line ends");
	return found;
}

static struct counterexample blame_next_line(const struct trial *trial, uint32_t state, struct counterexample found)
{
	find_next_row(trial, STAGE_FRAME, state, &found);
	blame_bits(trial, next_kind(trial, STAGE_FRAME), UINT64_MAX, &found);
	const char *bytes = next_bytes(trial, STAGE_FRAME, found.state);
	if (bytes != NULL)
		found.what = arena_format(trial->proofs->arena, "from V 0x%" PRIX32 ", which is no line of the frame, the next V is 0x%" PRIX32
		                          " (%s), expected one that leads to the frame, such as its first, 0x0", state >> trial->at.frame,
		                          machine_next(trial->machine, state) >> trial->at.frame, bytes);
	return found;
}

struct counterexample blame_loop(const struct trial *trial, uint32_t state)
{
	const uint32_t next = machine_next(trial->machine, state), home = trial->lap.states[0];
	struct counterexample found = {.present = true, .bank = trial->bank, .signal = SIZE_MAX};
	const bool two = trial->wiring.form == FORM_LINE_FRAME;
	bool steps = true;
	const uint32_t blamed = two ? state_to_blame(trial, state, &steps) : state;
	if (!steps && !is_spare_loop(trial, state))
		return blame_missing_step(trial, blamed, found);
	if (two && blamed >> trial->at.frame >= trial->timeline->line_count)
		return blame_next_line(trial, blamed, found);
	blame_state_bits(trial, state, two ? low_bits(trial->wiring.line.state_bits) : next ^ home, &found);
	const char *bytes = next_bytes(trial, found.stage, found.state);
	const char *next_state = state_words(trial, next), *home_state = state_words(trial, home);
	if (bytes != NULL && next_state != NULL && home_state != NULL)
		found.what = arena_format(trial->proofs->arena, "its next state is %s (%s), expected one that leads to the frame, "
		                          "such as its first, %s", next_state, bytes, home_state);
	return found;
}
