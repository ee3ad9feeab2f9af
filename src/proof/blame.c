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

static bool chip_carries(const struct chip *chip, enum data_wire_kind kind, uint64_t indices)
{
	for (unsigned pin = 0; pin < chip->part->data_pins; pin++)
		if (chip->data[pin].kind == kind && (kind == DATA_CLEAR || (indices >> chip->data[pin].index & 1)))
			return true;
	return false;
}

static struct byte_place place_in_chip(const struct trial *trial, size_t chip, uint32_t state)
{
	size_t address = machine_address(trial->machine, state, chip);
	const uint8_t *bytes = trial->images[chip].bytes + address;
	if (trial->wiring.chips[chip].part->data_pins == 8)
		return (struct byte_place){.chip = chip, .address = address, .value = bytes[0]};
	return (struct byte_place){.chip = chip, .address = address / 2, .value = bytes[0] | (uint32_t)bytes[1] << 8};
}

// Names the byte of the first chip that carries one of some word bits.
static void blame_bits(const struct trial *trial, enum data_wire_kind kind, uint64_t indices, struct counterexample *found)
{
	for (size_t chip = 0; chip < trial->wiring.chip_count && !found->byte_known; chip++) {
		if (!chip_carries(&trial->wiring.chips[chip], kind, indices))
			continue;
		found->byte_known = true;
		found->byte = place_in_chip(trial, chip, found->state);
	}
}

static enum data_wire_kind next_kind(const struct trial *trial)
{
	return trial->wiring.line.advance == ADVANCE_COUNT ? DATA_CLEAR : DATA_NEXT;
}

struct counterexample blame_next(const struct trial *trial, uint32_t cell, uint32_t wrong_bits)
{
	struct counterexample found = {.present = true, .bank = trial->bank, .cell = cell, .signal = SIZE_MAX};
	found.state = trial->lap.states[cell];
	// An asynchronous clear is read in the row that the counter passes through after the cell.
	if (trial->wiring.line.advance == ADVANCE_COUNT && trial->wiring.line.clear == CLEAR_ASYNC)
		found.state = (found.state + 1) & (((uint32_t)1 << trial->wiring.line.state_bits) - 1);
	blame_bits(trial, next_kind(trial), wrong_bits, &found);
	return found;
}

struct counterexample blame_pin(const struct trial *trial, uint32_t cell, size_t signal)
{
	const struct plan *plan = trial->timeline->plan;
	struct counterexample found = {.present = true, .bank = trial->bank, .cell = cell, .signal = signal};
	bool decoded = plan->signals[signal].origin == FROM_FIELD;
	bool row_before = decoded || trial->wiring.line.outputs == OUTPUTS_REGISTERED;
	found.state = trial->lap.states[row_before ? cell_before(trial, cell) : cell];
	if (decoded)
		blame_bits(trial, next_kind(trial), field_mask(&plan->machine.fields[plan->signals[signal].field]), &found);
	else
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

const char *next_bytes(const struct trial *trial, uint32_t state)
{
	struct text text = {0};
	for (size_t chip = 0; chip < trial->wiring.chip_count; chip++) {
		const struct chip *wired = &trial->wiring.chips[chip];
		if (!chip_carries(wired, next_kind(trial), UINT64_MAX))
			continue;
		struct byte_place place = place_in_chip(trial, chip, state);
		text_printf(&text, "%s%s 0x%04zX: 0x%0*" PRIX32, text.length > 0 ? " and " : "", wired->label, place.address,
		            (int)wired->part->data_pins / 4, place.value);
	}
	const char *copy = text.failed ? NULL : arena_copy(trial->proofs->arena, text_string(&text), text.length);
	text_release(&text);
	return copy;
}

struct counterexample blame_loop(const struct trial *trial, uint32_t state)
{
	const uint32_t next = machine_next(trial->machine, state), home = trial->lap.states[0];
	struct counterexample found = {.present = true, .bank = trial->bank, .state = state, .signal = SIZE_MAX};
	blame_bits(trial, next_kind(trial), next ^ home, &found);
	const char *bytes = next_bytes(trial, state);
	if (bytes != NULL)
		found.what = arena_format(trial->proofs->arena, "its next state is 0x%" PRIX32 " (%s), expected one that leads to the frame, "
		                          "such as its first, 0x%" PRIX32, next, bytes, home);
	return found;
}
