// Image files: whatever the bytes are, they are read as a second reader reads them or refused with an error; and what
// was read proves exactly if a plainer machine says that it follows the plan.
#include "naive.h"

#include "image/codec.h"

#define SMALL 128u     // the capacity of the plan's chip
#define LARGE 140000u // addresses beyond 64 KiB

static const char plan_text[] =
	"scanlatch: 1\n"
	"name: chart\n"
	"clock: { master: 1 MHz, cell: 4 ticks, stretch: 1 tick }\n"
	"signals:\n"
	"  sync: { role: composite sync, active: low }\n"
	"  long: { role: stretch, active: high, lead: 1 cell }\n"
	"lines:\n"
	"  a: { regions: [ { region: p, cells: 3, assert: [sync], stretch: 1 },\n"
	"                  { region: q, cells: 9, hold: { lane: col } } ] }\n"
	"  b: { like: a, change: [ { region: q, cells: 10, hold: {} } ] }\n"
	"frame: [ { repeat: 3, line: a }, { repeat: 1, line: b } ]\n"
	"machine: { form: loop, state: 6 bits, fields: { lane: 3..0 } }\n"
	"parts: { ROM7: { address pins: 7, data pins: 8, access: [100 ns] } }\n"
	"chips: [ { label: U1, part: ROM7, address: [state.0, state.1, state.2, bank.0, state.3, state.4, state.5],\n"
	"           data: [next.0, next.1, next.2, next.3, sync, next.4, long, next.5] } ]\n";

static const char *const words[] = {
	"00000001FF", "020000040000FA", "020000040001F9", "020000021000EC", "020000021200EA", "0400000300003800C1",
	"04000005000000CD2A", "0300300002337A1E", "02000004FFFFFC", "0000000000", "00FFFF0002", "FF", "ff", "00",
	"01", "02", "03", "04", "05", "06", NULL,
};

// What the second reader knows of a file.
struct reading {
	uint8_t image[LARGE];
	bool given[LARGE];
	size_t capacity;
	uint64_t base;
	bool segmented, ended, any;
};

static int digit_value(uint8_t character)
{
	static const char digits[] = "0123456789ABCDEFabcdef";
	const char *found = character == 0 ? NULL : strchr(digits, character);
	return found == NULL ? -1 : found - digits < 16 ? (int)(found - digits) : (int)(found - digits) - 6;
}

static bool read_byte(struct reading *reading, unsigned offset, unsigned index, uint8_t byte)
{
	uint64_t address = (reading->base + offset + index) % 4294967296;
	if (reading->segmented)
		address = reading->base + (offset + index) % 65536;
	if (address >= reading->capacity || (reading->given[address] && reading->image[address] != byte))
		return false;
	reading->image[address] = byte;
	reading->given[address] = true;
	return true;
}

static bool read_record(struct reading *reading, const uint8_t *record, size_t length)
{
	static const int lengths[] = {-1, 0, 2, 4, 2, 4};
	unsigned sum = 0;
	for (size_t index = 0; index < length; index++)
		sum += record[index];
	if (length < 5 || length != record[0] + 5u || sum % 256 != 0 || record[3] > 5 || reading->ended)
		return false;
	if (record[3] > 0 && record[0] != lengths[record[3]])
		return false;
	for (unsigned index = 0; record[3] == 0 && index < record[0]; index++)
		if (!read_byte(reading, record[1] * 256u + record[2], index, record[4 + index]))
			return false;
	reading->ended = record[3] == 1;
	if (record[3] == 2 || record[3] == 4) {
		reading->segmented = record[3] == 2;
		reading->base = (record[4] * 256ull + record[5]) * (reading->segmented ? 16 : 65536);
	}
	return true;
}

// A line without its end: blank, or ':' and pairs of digits.
static bool read_line(struct reading *reading, const uint8_t *line, size_t length)
{
	uint8_t record[300];
	size_t blanks = 0;
	while (blanks < length && (line[blanks] == ' ' || line[blanks] == '\t'))
		blanks++;
	if (blanks == length)
		return true;
	if (line[0] != ':' || length % 2 == 0 || length / 2 > sizeof record)
		return false;
	for (size_t index = 1; index < length; index++) {
		const int value = digit_value(line[index]);
		if (value < 0)
			return false;
		record[(index - 1) / 2] = (uint8_t)(index % 2 == 1 ? value * 16 : record[(index - 1) / 2] + value);
	}
	reading->any = true;
	return read_record(reading, record, length / 2);
}

static bool read_hex(struct reading *reading, const uint8_t *bytes, size_t length, size_t capacity)
{
	*reading = (struct reading){.capacity = capacity};
	memset(reading->image, 0xFF, sizeof reading->image);
	for (size_t first = 0, end; first < length; first = end + 1) {
		for (end = first; end < length && bytes[end] != '\n' && bytes[end] != '\r'; end++)
			;
		if (!read_line(reading, bytes + first, end - first))
			return false;
	}
	return reading->any && reading->ended;
}

static void require_same_reading(const uint8_t *bytes, size_t length, size_t capacity)
{
	struct reading *reading = fuzz_need(malloc(sizeof *reading));
	uint8_t *image = fuzz_need(malloc(capacity));
	struct hex_result result;
	memset(image, 0xFF, capacity);
	const bool good = hex_decode((const char *)bytes, length, image, capacity, &result) == HEX_OK;
	FUZZ_REQUIRE(read_hex(reading, bytes, length, capacity) == good);
	FUZZ_REQUIRE(good == (result.line == 0) || result.line == 0);
	if (good) {
		size_t missing = 0;
		FUZZ_REQUIRE(memcmp(image, reading->image, capacity) == 0);
		for (size_t address = capacity; address > 0; address--)
			missing += !reading->given[address - 1];
		FUZZ_REQUIRE(missing == result.missing);
		FUZZ_REQUIRE(missing == 0 || !reading->given[result.first_missing]);
	}
	free(image);
	free(reading);
}

// The bytes as an image, encoded and decoded, are the bytes.
static void require_round_trip(const uint8_t *bytes, size_t length, unsigned record)
{
	struct text text = {0};
	struct hex_result result;
	uint8_t *image = fuzz_need(malloc(length + 1));
	hex_encode(bytes, length, record, &text);
	FUZZ_REQUIRE(!text.failed);
	FUZZ_REQUIRE(hex_decode(text.bytes, text.length, image, length, &result) == HEX_OK);
	FUZZ_REQUIRE(result.missing == 0 && memcmp(image, bytes, length) == 0);
	text_release(&text);
	free(image);
}

static void judge_proofs(const scanlatch_images *images)
{
	uint32_t longest = 0;
	scanlatch_proofs *proofs = fuzz_need(scanlatch_prove(images));
	const enum naive_verdict naive = naive_judge(images, &longest);
	FUZZ_REQUIRE(naive != NAIVE_TOO_LARGE);
	FUZZ_REQUIRE(scanlatch_proofs_failed(proofs, false) == (naive == NAIVE_BAD));
	FUZZ_REQUIRE(naive == NAIVE_BAD || proofs->proofs[0]->power_up.longest_cells == longest);
	char *text = fuzz_need(scanlatch_proofs_text(proofs, true)), *json = fuzz_need(scanlatch_proofs_json(proofs));
	scanlatch_free(text);
	scanlatch_free(json);
	scanlatch_proofs_destroy(proofs);
}

// What is lifted lays out the images' loop, and with states pinned gives back their bytes, as far as the messages do not say otherwise: the library
// itself holds one against the other, and refuses what is not so as beyond the language.
static void judge_lift(const scanlatch_images *images, bool near)
{
	const struct scanlatch_lift_options options = {.near = near};
	scanlatch_messages *messages = fuzz_need(scanlatch_messages_create());
	scanlatch_lift *lift = scanlatch_lift_images(images, &options, messages);
	FUZZ_REQUIRE((lift != NULL) == (scanlatch_messages_errors(messages) == 0));
	for (size_t index = 0; index < scanlatch_messages_count(messages); index++) {
		const enum rule rule = diagnostics_rule(messages->diagnostics, index);
		FUZZ_REQUIRE(rule == RULE_LIFT_RASTER || rule == RULE_LIFT_LOOPS || (near && rule == RULE_LIFT_NEAR));
	}
	if (lift != NULL) {
		FUZZ_REQUIRE(scanlatch_lift_found(lift) == (scanlatch_messages_count(messages) > 0));
		scanlatch_free(fuzz_need(scanlatch_lift_text(lift)));
		scanlatch_free(fuzz_need(scanlatch_lift_json(lift)));
	}
	scanlatch_lift_destroy(lift);
	scanlatch_messages_destroy(messages);
}

// Reads the bytes as the file of the plan's chip. True if they are an image.
static bool judge_images(const scanlatch_plan *plan, const uint8_t *bytes, size_t length, scanlatch_messages *messages)
{
	scanlatch_images *images = fuzz_need(scanlatch_images_create(plan));
	const bool read = scanlatch_images_read(images, "U1", "fuzz.hex", bytes, length, messages);
	FUZZ_REQUIRE(read == (scanlatch_messages_errors(messages) == 0));
	FUZZ_REQUIRE(read || !scanlatch_messages_system(messages));
	if (read) {
		FUZZ_REQUIRE(scanlatch_images_read(images, "U1", "again.hex", bytes, length, messages));
		judge_proofs(images);
		judge_lift(images, false);
		judge_lift(images, true);
	}
	scanlatch_free(fuzz_need(scanlatch_messages_text(messages, false)));
	scanlatch_images_destroy(images);
	return read;
}

// The plan, and the messages that it was read with.
struct context {
	scanlatch_messages *messages;
	scanlatch_plan *plan;
};

static void *create(void)
{
	struct context *context = fuzz_need(malloc(sizeof *context));
	context->messages = fuzz_need(scanlatch_messages_create());
	context->plan = fuzz_need(scanlatch_plan_read("chart.yaml", plan_text, strlen(plan_text), context->messages));
	return context;
}

static void destroy(void *given)
{
	struct context *context = given;
	scanlatch_plan_destroy(context->plan);
	scanlatch_messages_destroy(context->messages);
	free(context);
}

static bool judge(void *context, const uint8_t *bytes, size_t length)
{
	require_same_reading(bytes, length, SMALL);
	require_same_reading(bytes, length, LARGE);
	if (length > 0)
		require_round_trip(bytes, length, length % 2 == 0 ? 16 : 32);
	scanlatch_messages *messages = fuzz_need(scanlatch_messages_create());
	const bool good = judge_images(((const struct context *)context)->plan, bytes, length, messages);
	scanlatch_messages_destroy(messages);
	return good;
}

// Gives a record of whole bytes the length and checksum that it should have; now and then a checksum of which a bit
// is wrong.
static void repair_record(uint8_t *digits, size_t length)
{
	static const char hex[] = "0123456789ABCDEF";
	unsigned sum = 0;
	const size_t count = length / 2;
	if (count < 5 || length % 2 == 1)
		return;
	digits[0] = (uint8_t)hex[(count - 5) / 16 % 16];
	digits[1] = (uint8_t)hex[(count - 5) % 16];
	for (size_t index = 0; index + 2 < length; index++) {
		const int value = digit_value(digits[index]);
		sum += (unsigned)(value < 0 ? 0 : index % 2 == 0 ? value * 16 : value);
	}
	const uint64_t seed = fuzz_seed_of(digits, length);
	sum ^= seed / 2 % 32 == 0 ? 1u << seed / 64 % 8 : 0;
	digits[length - 2] = (uint8_t)hex[(0 - sum) / 16 % 16];
	digits[length - 1] = (uint8_t)hex[(0 - sum) % 16];
}

static void repair(uint8_t *bytes, size_t length)
{
	for (size_t first = 0, end; first < length; first = end + 1) {
		for (end = first; end < length && bytes[end] != '\n' && bytes[end] != '\r'; end++)
			;
		if (bytes[first] == ':')
			repair_record(bytes + first + 1, end - first - 1);
	}
}

static const struct fuzz fuzz = {judge, create, destroy, words, true, repair};

FUZZ_MAIN(fuzz)
