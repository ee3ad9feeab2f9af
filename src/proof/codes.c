// Decoders of a set: they are wired once, so that signals with codes: auto must be asserted in the same codes in all banks.
#include <string.h>

#include "base/arena.h"
#include "base/text.h"
#include "proof/proof.h"

static size_t signal_of_name(const struct plan *plan, const char *name)
{
	size_t signal = 0;
	while (signal < plan->signal_count && strcmp(plan->signals[signal].name, name) != 0)
		signal++;
	return signal;
}

static void put_codes(struct text *text, const uint32_t *codes, size_t count)
{
	text_put(text, count == 0 ? "no code" : count == 1 ? "code" : "codes");
	for (size_t code = 0; code < count; code++)
		text_printf(text, " %u", (unsigned)codes[code]);
}

// The words in the arena of the proofs; NULL when memory is out.
static const char *difference_words(const struct proofs *first, size_t there, const struct proofs *other, size_t signal)
{
	struct text text = {0};
	text_printf(&text, "%s is asserted in ", other->timeline->plan->signals[signal].name);
	put_codes(&text, other->codes[signal], other->code_counts[signal]);
	text_put(&text, ", but in ");
	put_codes(&text, first->codes[there], first->code_counts[there]);
	text_printf(&text, " in bank %u: the decoder is the same", (unsigned)first->bank_numbers[0]);
	const char *words = text.failed ? NULL : arena_copy(other->arena, text_string(&text), text.length);
	text_release(&text);
	return words;
}

static bool same_codes(const struct proofs *first, size_t there, const struct proofs *other, size_t signal)
{
	const size_t count = other->code_counts[signal];
	return count == first->code_counts[there] && (count == 0 || memcmp(first->codes[there], other->codes[signal], count * sizeof(uint32_t)) == 0);
}

bool proofs_compare_codes(const struct proofs *first, struct proofs *other)
{
	const struct plan *plan = other->timeline->plan;
	struct proof *signals = &other->proof[PROOF_SIGNALS];
	for (size_t signal = 0; signal < plan->signal_count && signals->verdict == VERDICT_PASS; signal++) {
		const size_t there = signal_of_name(first->timeline->plan, plan->signals[signal].name);
		if (!plan->signals[signal].auto_codes || first->proof[PROOF_SIGNALS].verdict != VERDICT_PASS || same_codes(first, there, other, signal))
			continue;
		signals->verdict = VERDICT_FAIL;
		signals->counterexample = (struct counterexample){.bank = other->bank_numbers[0], .state = NO_STATE, .signal = signal,
		                                                  .what = difference_words(first, there, other, signal)};
		return signals->counterexample.what != NULL;
	}
	return true;
}
