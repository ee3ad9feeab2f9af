#include "image/codec.h"

#include <stdlib.h>
#include <string.h>

// Bytes of a record besides its data: length, offset (2), type, checksum.
#define RECORD_FRAME 5
#define RECORD_MOST (RECORD_FRAME + 255)
#define RECORD_DATA_AT 4
#define SEGMENT_BYTES ((uint64_t)65536)
#define LINEAR_BYTES ((uint64_t)1 << 32)

enum record_type {
	RECORD_DATA = 0,
	RECORD_END = 1,
	RECORD_SEGMENT_ADDRESS = 2,
	RECORD_SEGMENT_START = 3,
	RECORD_LINEAR_ADDRESS = 4,
	RECORD_LINEAR_START = 5,
};

struct decoder {
	const char *next;
	const char *end;
	uint8_t *image;
	size_t capacity;
	uint64_t *given;       // one bit for each byte of the image: a record gave it
	size_t given_count;
	uint64_t base;         // from the last record of type 02 or 04
	bool is_segmented;     // that was type 02: addresses wrap within 64 KiB of the base
	bool ended;            // a record of type 01 has been read
	struct hex_result *result;
};

const char *hex_status_words(enum hex_status status)
{
	switch (status) {
	case HEX_OK: return "well-formed";
	case HEX_NO_RECORD: return "no record";
	case HEX_BAD_CHARACTER: return "a character that has no place there";
	case HEX_TRUNCATED: return "a record that does not have the length it says";
	case HEX_CHECKSUM: return "a record whose checksum is wrong";
	case HEX_BAD_LENGTH: return "a record whose length does not fit its type";
	case HEX_UNKNOWN_TYPE: return "a record of unknown type";
	case HEX_NO_END: return "no end record";
	case HEX_AFTER_END: return "a record after the end record";
	case HEX_OUT_OF_RANGE: return "data beyond the chip's capacity";
	case HEX_OVERLAP: return "an address that is given twice with different bytes";
	case HEX_MEMORY: return "memory is out";
	}
	return "an unknown status";
}

// The value of each hexadecimal digit, with DIGIT set; 0 for every other character.
#define DIGIT 0x10
static const uint8_t digits[256] = {
	['0'] = DIGIT | 0x0, ['1'] = DIGIT | 0x1, ['2'] = DIGIT | 0x2, ['3'] = DIGIT | 0x3,
	['4'] = DIGIT | 0x4, ['5'] = DIGIT | 0x5, ['6'] = DIGIT | 0x6, ['7'] = DIGIT | 0x7,
	['8'] = DIGIT | 0x8, ['9'] = DIGIT | 0x9, ['A'] = DIGIT | 0xA, ['B'] = DIGIT | 0xB,
	['C'] = DIGIT | 0xC, ['D'] = DIGIT | 0xD, ['E'] = DIGIT | 0xE, ['F'] = DIGIT | 0xF,
	['a'] = DIGIT | 0xA, ['b'] = DIGIT | 0xB, ['c'] = DIGIT | 0xC, ['d'] = DIGIT | 0xD,
	['e'] = DIGIT | 0xE, ['f'] = DIGIT | 0xF,
};

static bool is_digit(char character)
{
	return digits[(uint8_t)character] != 0;
}

static bool is_line_end(char character)
{
	return character == '\n' || character == '\r';
}

static bool is_blank(char character)
{
	return character == ' ' || character == '\t';
}

// Decodes `count` pairs of digits and adds the bytes to *sum; false if one of the characters is no digit.
static inline bool read_bytes(const char *characters, unsigned count, uint8_t *bytes, unsigned *sum)
{
	unsigned all = DIGIT;
	unsigned total = 0;
	for (unsigned index = 0; index < count; index++) {
		unsigned high = digits[(uint8_t)characters[2 * index]];
		unsigned low = digits[(uint8_t)characters[2 * index + 1]];
		all &= high & low;
		bytes[index] = (uint8_t)(high << 4 | (low & 0x0F));
		total += bytes[index];
	}
	*sum += total;
	return all == DIGIT;
}

// Why the record at `next` (behind its ':') has no `characters` digits followed by a line's end.
static enum hex_status find_fault(const struct decoder *decoder, size_t characters)
{
	const char *next = decoder->next;
	for (size_t index = 0; index < characters; index++, next++) {
		if (next == decoder->end || is_line_end(*next))
			return HEX_TRUNCATED;
		if (!is_digit(*next))
			return HEX_BAD_CHARACTER;
	}
	return is_digit(*next) ? HEX_TRUNCATED : HEX_BAD_CHARACTER;
}

// Reads the record behind ':' into `record`, length byte first, and steps over it.
static enum hex_status read_record(struct decoder *decoder, uint8_t *record)
{
	size_t room = (size_t)(decoder->end - decoder->next);
	unsigned sum = 0;
	if (room < 2 || !read_bytes(decoder->next, 1, record, &sum))
		return find_fault(decoder, 2);
	unsigned count = record[0] + RECORD_FRAME;
	bool is_read;
	if (room < 2 * (size_t)count)
		return find_fault(decoder, 2 * (size_t)count);
	// The usual length as a constant lets the compiler unroll the loop.
	if (count == RECORD_FRAME + 16)
		is_read = read_bytes(decoder->next + 2, RECORD_FRAME + 16 - 1, record + 1, &sum);
	else
		is_read = read_bytes(decoder->next + 2, count - 1, record + 1, &sum);
	const char *after = decoder->next + 2 * (size_t)count;
	if (!is_read || (after != decoder->end && !is_line_end(*after)))
		return find_fault(decoder, 2 * (size_t)count);
	decoder->next = after;
	return (sum & 0xFF) == 0 ? HEX_OK : HEX_CHECKSUM;
}

// The bits of `given` for the bytes from `address` on that share a 64-bit word, at most `count`; *part says how many.
static inline uint64_t word_mask(uint64_t address, unsigned count, unsigned *part)
{
	unsigned bit = (unsigned)(address % 64);
	*part = count < 64 - bit ? count : 64 - bit;
	return UINT64_MAX >> (64 - *part) << bit;
}

static bool any_given(const struct decoder *decoder, uint64_t address, unsigned count)
{
	uint64_t given = 0;
	for (unsigned part; count > 0; address += part, count -= part)
		given |= decoder->given[address / 64] & word_mask(address, count, &part);
	return given != 0;
}

static void mark_given(struct decoder *decoder, uint64_t address, unsigned count)
{
	decoder->given_count += count;
	for (unsigned part; count > 0; address += part, count -= part)
		decoder->given[address / 64] |= word_mask(address, count, &part);
}

// Places bytes of which some have been given before.
static enum hex_status place_again(struct decoder *decoder, uint64_t address, const uint8_t *data, unsigned count)
{
	for (unsigned index = 0; index < count; index++, address++) {
		if (!any_given(decoder, address, 1)) {
			mark_given(decoder, address, 1);
			decoder->image[address] = data[index];
		} else if (decoder->image[address] != data[index]) {
			decoder->result->address = (uint32_t)address;
			return HEX_OVERLAP;
		}
	}
	return HEX_OK;
}

// Places bytes at consecutive addresses.
static enum hex_status place_run(struct decoder *decoder, uint64_t address, const uint8_t *data, unsigned count)
{
	if (count == 0)
		return HEX_OK;
	if (address + count > decoder->capacity) {
		decoder->result->address = (uint32_t)(address > decoder->capacity ? address : decoder->capacity);
		return HEX_OUT_OF_RANGE;
	}
	if (any_given(decoder, address, count))
		return place_again(decoder, address, data, count);
	mark_given(decoder, address, count);
	memcpy(decoder->image + address, data, count);
	return HEX_OK;
}

// After type 02 addresses wrap within the segment, otherwise at 4 GiB (specification: "mod 64K", "mod 4G").
static enum hex_status place_record(struct decoder *decoder, unsigned offset, const uint8_t *data, unsigned count)
{
	uint64_t address = decoder->base + offset;
	uint64_t to_border = decoder->is_segmented ? SEGMENT_BYTES - offset : LINEAR_BYTES - address;
	unsigned before = count < to_border ? count : (unsigned)to_border;
	enum hex_status status = place_run(decoder, address, data, before);
	if (status != HEX_OK)
		return status;
	return place_run(decoder, decoder->is_segmented ? decoder->base : 0, data + before, count - before);
}

// Data bytes of a record of each type but 00.
static bool is_length_of_type(enum record_type type, unsigned count)
{
	static const uint8_t counts[] = {
		[RECORD_END] = 0, [RECORD_SEGMENT_ADDRESS] = 2, [RECORD_SEGMENT_START] = 4,
		[RECORD_LINEAR_ADDRESS] = 2, [RECORD_LINEAR_START] = 4,
	};
	return type == RECORD_DATA || count == counts[type];
}

static enum hex_status apply_record(struct decoder *decoder, const uint8_t *record)
{
	const uint8_t *data = record + RECORD_DATA_AT;
	unsigned type = record[RECORD_DATA_AT - 1];
	if (type > RECORD_LINEAR_START)
		return HEX_UNKNOWN_TYPE;
	if (!is_length_of_type((enum record_type)type, record[0]))
		return HEX_BAD_LENGTH;
	if (type == RECORD_DATA)
		return place_record(decoder, (unsigned)record[1] << 8 | record[2], data, record[0]);
	decoder->ended = type == RECORD_END;
	// Start addresses (types 03, 05) are for a processor and mean nothing to a memory.
	if (type == RECORD_SEGMENT_ADDRESS || type == RECORD_LINEAR_ADDRESS) {
		decoder->is_segmented = type == RECORD_SEGMENT_ADDRESS;
		decoder->base = ((uint64_t)data[0] << 8 | data[1]) << (decoder->is_segmented ? 4 : 16);
	}
	return HEX_OK;
}

// Over the rest of this line, if nothing is left on it, and the blank lines after it.
static void skip_blank_lines(struct decoder *decoder)
{
	for (;;) {
		const char *next = decoder->next;
		while (next != decoder->end && is_blank(*next))
			next++;
		if (next == decoder->end)
			decoder->next = next;
		if (next == decoder->end || !is_line_end(*next))
			return;
		bool is_pair = *next == '\r' && next + 1 != decoder->end && next[1] == '\n';
		decoder->next = next + (is_pair ? 2 : 1);
		decoder->result->line++;
	}
}

static enum hex_status decode_records(struct decoder *decoder)
{
	uint8_t record[RECORD_MOST];
	bool any_record = false;
	for (skip_blank_lines(decoder); decoder->next != decoder->end; skip_blank_lines(decoder)) {
		if (*decoder->next != ':')
			return HEX_BAD_CHARACTER;
		if (decoder->ended)
			return HEX_AFTER_END;
		decoder->next++;
		any_record = true;
		enum hex_status status = read_record(decoder, record);
		if (status == HEX_OK)
			status = apply_record(decoder, record);
		if (status != HEX_OK)
			return status;
	}
	decoder->result->line = 0;
	if (!any_record)
		return HEX_NO_RECORD;
	return decoder->ended ? HEX_OK : HEX_NO_END;
}

static void note_missing(const struct decoder *decoder)
{
	decoder->result->missing = decoder->capacity - decoder->given_count;
	if (decoder->result->missing == 0)
		return;
	uint64_t address = 0;
	while (decoder->given[address / 64] == UINT64_MAX)
		address += 64;
	while (any_given(decoder, address, 1))
		address++;
	decoder->result->first_missing = (uint32_t)address;
}

enum hex_status hex_decode(const char *bytes, size_t length, uint8_t *image, size_t capacity, struct hex_result *result)
{
	*result = (struct hex_result){.line = 1};
	struct decoder decoder = {
		.next = bytes,
		.end = bytes + length,
		.image = image,
		.capacity = capacity,
		.given = calloc(capacity / 64 + 1, sizeof(uint64_t)),
		.result = result,
	};
	if (decoder.given == NULL) {
		result->line = 0;
		return HEX_MEMORY;
	}
	enum hex_status status = decode_records(&decoder);
	if (status == HEX_OK)
		note_missing(&decoder);
	free(decoder.given);
	return status;
}

static bool is_printable(const uint8_t *bytes, size_t length)
{
	for (size_t index = 0; index < length; index++)
		if ((bytes[index] < ' ' || bytes[index] > '~') && bytes[index] != '\t' && !is_line_end((char)bytes[index]))
			return false;
	return true;
}

bool image_is_hex(const uint8_t *bytes, size_t length, size_t capacity)
{
	if (length == capacity && !is_printable(bytes, length))
		return false;
	size_t index = 0;
	while (index < length && (is_blank((char)bytes[index]) || is_line_end((char)bytes[index])))
		index++;
	if (index == length || bytes[index] != ':')
		return false;
	for (index++; index < length && !is_line_end((char)bytes[index]); index++)
		if (!is_digit((char)bytes[index]))
			return false;
	return true;
}
