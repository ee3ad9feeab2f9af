#include "proof/decoder.h"

#include "base/arena.h"

// Makes codes, count and relevant bits from the bit set.
static bool decoder_finish(struct decoder *decoder, struct arena *arena)
{
	size_t words = decoder->code_mask / 64 + 1, count = 0;
	for (size_t word = 0; word < words; word++)
		for (uint64_t rest = decoder->members[word]; rest != 0; rest &= rest - 1)
			count++;
	uint32_t *codes = arena_array(arena, count, sizeof *codes);
	if (codes == NULL)
		return false;
	count = 0;
	for (size_t word = 0; word < words; word++)
		for (unsigned bit = 0; decoder->members[word] != 0 && bit < 64; bit++)
			if (decoder->members[word] >> bit & 1)
				codes[count++] = (uint32_t)(word * 64 + bit);
	for (size_t index = 0; index < count; index++)
		for (uint32_t bit = 1; bit <= decoder->code_mask; bit <<= 1)
			if (!decoder_asserts(decoder, codes[index] ^ bit))
				decoder->relevant |= bit;
	decoder->codes = codes;
	decoder->code_count = count;
	decoder->known = true;
	return true;
}

static void decoder_add(struct decoder *decoder, uint32_t code)
{
	decoder->members[code / 64] |= (uint64_t)1 << code % 64;
}

static bool decoder_init(struct decoder *decoder, struct arena *arena, const struct plan *plan, size_t signal_index)
{
	const struct signal *signal = &plan->signals[signal_index];
	const struct field *field = &plan->machine.fields[signal->field];
	uint32_t code_mask = (uint32_t)(((uint64_t)1 << (field->high - field->low + 1)) - 1);
	*decoder = (struct decoder){.signal = signal_index, .low = field->low, .code_mask = code_mask};
	decoder->members = arena_array(arena, code_mask / 64 + 1, sizeof *decoder->members);
	if (decoder->members == NULL)
		return false;
	if (signal->auto_codes)
		return true;
	for (size_t index = 0; index < signal->code_count; index++)
		decoder_add(decoder, signal->codes[index] & code_mask);
	return decoder_finish(decoder, arena);
}

struct decoders *decoders_create(struct arena *arena, const struct plan *plan)
{
	struct decoders *decoders = arena_alloc(arena, sizeof *decoders);
	if (decoders == NULL)
		return NULL;
	decoders->list = arena_array(arena, plan->signal_count, sizeof *decoders->list);
	if (decoders->list == NULL)
		return NULL;
	for (size_t signal = 0; signal < plan->signal_count; signal++) {
		if (plan->signals[signal].origin != FROM_FIELD)
			continue;
		if (!decoder_init(&decoders->list[decoders->count], arena, plan, signal))
			return NULL;
		decoders->count++;
	}
	return decoders;
}

bool decoders_read(struct decoders *decoders, struct arena *arena, const uint32_t *states, const uint64_t *expected,
                   uint32_t cells)
{
	for (size_t index = 0; index < decoders->count; index++) {
		struct decoder *decoder = &decoders->list[index];
		if (decoder->known)
			continue;
		for (uint32_t cell = 0; cell < cells; cell++)
			if (expected[cell] >> decoder->signal & 1)
				decoder_add(decoder, decoder_code(decoder, states[cell]));
		if (!decoder_finish(decoder, arena))
			return false;
	}
	return true;
}

uint64_t decoders_pins(const struct decoders *decoders, uint32_t state)
{
	uint64_t asserted = 0;
	for (size_t index = 0; index < decoders->count; index++) {
		const struct decoder *decoder = &decoders->list[index];
		if (decoder->known && decoder_asserts(decoder, decoder_code(decoder, state)))
			asserted |= (uint64_t)1 << decoder->signal;
	}
	return asserted;
}

// An edge under judgement: the codes from ^ subset of `changing` may show on the way.
struct crossing {
	const struct decoder *decoder;
	uint32_t from;
	uint32_t changing;
	bool from_asserted, to_asserted;
};

// The first of some code bits whose flip takes the code out of the asserted set; 0 if none does.
static uint32_t leaving_bit(const struct decoder *decoder, uint32_t code, uint32_t bits)
{
	for (; bits != 0; bits &= bits - 1) {
		uint32_t bit = bits & (0 - bits);
		if (!decoder_asserts(decoder, code ^ bit))
			return bit;
	}
	return 0;
}

// Whether one asserted code on the way, with its neighbours, shows that the signal may flicker. Neighbours suffice:
// along any path between an asserted and an unasserted code there is a step from one to the other.
static bool code_flickers(const struct crossing *crossing, uint32_t code, uint32_t *between)
{
	uint32_t flipped = code ^ crossing->from, leaving = 0;
	if (!crossing->from_asserted && !crossing->to_asserted) {
		*between = code;
		return true;
	}
	if (crossing->from_asserted && !crossing->to_asserted) {
		leaving = leaving_bit(crossing->decoder, code, flipped);
		if (leaving != 0)
			*between = code;
		return leaving != 0;
	}
	uint32_t bits = crossing->from_asserted ? crossing->changing : crossing->changing & ~flipped;
	leaving = leaving_bit(crossing->decoder, code, bits);
	if (leaving != 0)
		*between = code ^ leaving;
	return leaving != 0;
}

static bool list_flickers(const struct crossing *crossing, uint32_t *between)
{
	const struct decoder *decoder = crossing->decoder;
	for (size_t index = 0; index < decoder->code_count; index++) {
		uint32_t code = decoder->codes[index];
		if (((code ^ crossing->from) & ~crossing->changing) == 0 && code_flickers(crossing, code, between))
			return true;
	}
	return false;
}

static bool subsets_flicker(const struct crossing *crossing, uint32_t *between)
{
	uint32_t flipped = 0;
	do {
		uint32_t code = crossing->from ^ flipped;
		if (decoder_asserts(crossing->decoder, code) && code_flickers(crossing, code, between))
			return true;
		flipped = (flipped - crossing->changing) & crossing->changing;
	} while (flipped != 0);
	return false;
}

static unsigned bit_count(uint32_t bits)
{
	unsigned count = 0;
	for (; bits != 0; bits &= bits - 1)
		count++;
	return count;
}

bool decoder_flickers(const struct decoder *decoder, uint32_t from, uint32_t to, uint32_t *between)
{
	// Bits on which no level depends change nothing, in whatever order they flip.
	uint32_t changing = (from ^ to) & decoder->relevant;
	unsigned bits = bit_count(changing);
	if (bits < 2)
		return false;
	struct crossing crossing = {decoder, from, changing, decoder_asserts(decoder, from), decoder_asserts(decoder, to)};
	if ((size_t)1 << bits <= decoder->code_count)
		return subsets_flicker(&crossing, between);
	return list_flickers(&crossing, between);
}
