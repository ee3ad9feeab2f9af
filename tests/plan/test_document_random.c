// Random and damaged texts: each gives a sound tree or a diagnostic, and nothing is read out of bounds.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdbool.h>

#include "parsing.h"

#define ROUNDS 4000
#define TEXT_BYTES 2048

static const char *const sound_texts[] = {
	"scanlatch: 1\nname: tide-board\nclock:\n  master: 315/22 MHz\n  cell: 9 dots\n"
	"signals:\n  sync: { role: composite sync, active: low }\n  load: { role: plain, lead: 1 cell }\n"
	"lines:\n  picture:\n    cells: 101\n    regions:\n"
	"      - { region: picture, cells: 80, hold: { page: 0, at: 80*(row/9) + col } }\n"
	"      - { region: porch,   fill: true, assert: [sync] }\n"
	"frame:\n  - { repeat: 18, line: picture }\n",
	"%YAML 1.2\n---\na: &x [1, 'two', \"th\\u00e9r\\ee\\x41\"]\nb: *x\nc: {d: *x, e: &y {f: g}}\n? h\n: *y\n...\n",
	"- |\n  text\n   more\n- >-\n  folded\n\n  \xC3\xA9 \xE2\x82\xAC \xF0\x9D\x84\x9E\n- [-, a, [b, {c: d}]]\n-\n- - x\n  - y: z\n",
	"\xEF\xBB\xBFkey: value\r\nlist:\r\n- 1 # comment\r\n- 2\r\n",
};

static const char *const pieces[] = {
	"[", "]", "{", "}", ",", ": ", ":", "- ", "-", "? ", "&a ", "*a", "!t ", "! ", "<<: ", "|\n", ">\n", "\"", "'", "\\", "#",
	" ", "  ", "\t", "\n", "\r", "\r\n", "---\n", "...\n", "%TAG ! x\n", "%", "@", "a: ", "\xC3", "\xA9", "\xEF\xBB\xBF",
	"\xE2\x80\xA8", "\xC2\x85", "\0", "\\0", "\\x", "\\uD800",
};

// xorshift64 (G. Marsaglia, "Xorshift RNGs", Journal of Statistical Software 8(14), 2003).
static uint64_t next_random(uint64_t *random)
{
	*random ^= *random << 13;
	*random ^= *random >> 7;
	*random ^= *random << 17;
	return *random;
}

static size_t random_below(uint64_t *random, size_t limit)
{
	return (size_t)(next_random(random) >> 32) % limit;
}

struct sample {
	char bytes[TEXT_BYTES];
	size_t length;
};

static void insert(struct sample *sample, size_t offset, const char *bytes, size_t length)
{
	if (length > TEXT_BYTES - sample->length)
		return;
	memmove(sample->bytes + offset + length, sample->bytes + offset, sample->length - offset);
	memcpy(sample->bytes + offset, bytes, length);
	sample->length += length;
}

static void cut(struct sample *sample, size_t offset, size_t length)
{
	memmove(sample->bytes + offset, sample->bytes + offset + length, sample->length - offset - length);
	sample->length -= length;
}

static void insert_piece(struct sample *sample, uint64_t *random)
{
	const char *const piece = pieces[random_below(random, sizeof(pieces) / sizeof(pieces[0]))];

	// The empty piece is the NUL.
	insert(sample, random_below(random, sample->length + 1), piece, piece[0] == '\0' ? 1 : strlen(piece));
}

static void repeat_span(struct sample *sample, uint64_t *random)
{
	const size_t start = random_below(random, sample->length);
	const size_t length = random_below(random, sample->length - start) + 1;
	char span[TEXT_BYTES];

	memcpy(span, sample->bytes + start, length);
	insert(sample, random_below(random, sample->length + 1), span, length);
}

static void damage(struct sample *sample, uint64_t *random)
{
	const size_t kind = random_below(random, 8);

	if (sample->length == 0 || kind < 4) {
		insert_piece(sample, random);
	} else if (kind == 4) {
		const size_t offset = random_below(random, sample->length);
		cut(sample, offset, random_below(random, sample->length - offset) % 20);
	} else if (kind == 5) {
		sample->bytes[random_below(random, sample->length)] ^= (char)(1 << random_below(random, 7));
	} else if (kind == 6) {
		sample->bytes[random_below(random, sample->length)] = (char)(next_random(random) >> 56);
	} else {
		repeat_span(sample, random);
	}
}

// Every node of the tree, aliases as often as they are used; with the place of each inside of the text.
static void assert_sound(const struct parsed *parsed)
{
	static const struct node *waiting[DOCUMENT_LIMIT_NODES];
	size_t waiting_count = 0;
	size_t count = 0;

	for (const struct node *node = parsed->root; node != NULL;
	     node = waiting_count > 0 ? waiting[--waiting_count] : NULL) {
		assert_true(++count <= DOCUMENT_LIMIT_NODES);
		assert_ptr_equal(node->place.source, &parsed->source);
		assert_true(node->place.line >= 1 && node->place.line <= parsed->source.length + 1);
		assert_true(node->place.column >= 1 && node->place.column <= parsed->source.length + 1);
		if (node->kind == NODE_SCALAR)
			assert_int_equal(strlen(node->text), node->length);
		for (size_t index = 0; node->kind == NODE_LIST && index < node->count; index++)
			waiting[waiting_count++] = node->items[index];
		for (size_t index = 0; node->kind == NODE_MAPPING && index < node->count; index++) {
			assert_int_equal(node->pairs[index].key->kind, NODE_SCALAR);
			assert_ptr_equal(node_value(node, node->pairs[index].key->text), node->pairs[index].value);
			count++;
			waiting[waiting_count++] = node->pairs[index].value;
		}
	}
}

// True if it was taken.
static bool try_sample(const struct sample *sample)
{
	struct parsed *const parsed = parse_bytes(sample->bytes, sample->length);
	const bool taken = parsed->root != NULL;

	if (taken)
		assert_sound(parsed);
	parsed_release(parsed);
	return taken;
}

static void stands_damaged_texts(void **state)
{
	uint64_t random = 0x686172626F7572;
	size_t taken = 0;

	(void)state;
	for (unsigned round = 0; round < ROUNDS; round++) {
		const char *const text = sound_texts[random_below(&random, sizeof(sound_texts) / sizeof(sound_texts[0]))];
		struct sample sample = {.length = strlen(text)};
		memcpy(sample.bytes, text, sample.length);
		for (size_t count = random_below(&random, 4) + 1; count > 0; count--)
			damage(&sample, &random);
		taken += try_sample(&sample);
	}
	// Both outcomes come up often, or the damage is of the wrong size.
	assert_true(taken > ROUNDS / 20 && taken < ROUNDS * 19 / 20);
}

static void stands_texts_of_pieces(void **state)
{
	uint64_t random = 0x6C616E7465726E;
	size_t taken = 0;

	(void)state;
	for (unsigned round = 0; round < ROUNDS; round++) {
		struct sample sample = {.length = 0};
		for (size_t count = random_below(&random, 20) + 1; count > 0; count--)
			insert_piece(&sample, &random);
		taken += try_sample(&sample);
	}
	assert_true(taken > 0 && taken < ROUNDS);
}

static void stands_random_bytes(void **state)
{
	uint64_t random = 0x627265616B65;
	size_t taken = 0;

	(void)state;
	for (unsigned round = 0; round < ROUNDS; round++) {
		struct sample sample = {.length = random_below(&random, 64)};
		const size_t bits = random_below(&random, 2) == 0 ? 8 : 7;
		for (size_t index = 0; index < sample.length; index++)
			sample.bytes[index] = (char)(next_random(&random) >> (64 - bits));
		taken += try_sample(&sample);
	}
	assert_true(taken < ROUNDS / 10);
}

int main(void)
{
	for (size_t index = 0; index < sizeof(sound_texts) / sizeof(sound_texts[0]); index++) {
		if (strlen(sound_texts[index]) > TEXT_BYTES)
			return 1;
	}
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(stands_damaged_texts),
		cmocka_unit_test(stands_texts_of_pieces),
		cmocka_unit_test(stands_random_bytes),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
