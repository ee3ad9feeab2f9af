#include "image/codec.h"

#include <assert.h>
#include <string.h>

#include "base/text.h"

// Characters of a record besides its data: ':' length offset type checksum '\n'.
#define RECORD_FRAME 13
#define SEGMENT_BYTES ((uint64_t)65536)

enum record_type { RECORD_DATA = 0, RECORD_END = 1, RECORD_LINEAR_ADDRESS = 4 };

// "00" to "FF" one behind the other: two characters for each byte.
#define ROW(high) \
	high "0" high "1" high "2" high "3" high "4" high "5" high "6" high "7" \
	high "8" high "9" high "A" high "B" high "C" high "D" high "E" high "F"
static const char digit_pairs[] =
	ROW("0") ROW("1") ROW("2") ROW("3") ROW("4") ROW("5") ROW("6") ROW("7")
	ROW("8") ROW("9") ROW("A") ROW("B") ROW("C") ROW("D") ROW("E") ROW("F");
#undef ROW

static inline char *put_byte(char *next, unsigned byte)
{
	memcpy(next, digit_pairs + 2 * byte, 2);
	return next + 2;
}

// The checksum makes the sum of all bytes of the record 0 (specification).
static inline char *put_record(char *next, enum record_type type, unsigned offset, const uint8_t *data, unsigned count)
{
	unsigned sum = count + (offset >> 8) + (offset & 0xFF) + (unsigned)type;
	*next++ = ':';
	next = put_byte(next, count);
	next = put_byte(next, offset >> 8);
	next = put_byte(next, offset & 0xFF);
	next = put_byte(next, (unsigned)type);
	for (unsigned index = 0; index < count; index++) {
		sum += data[index];
		next = put_byte(next, data[index]);
	}
	next = put_byte(next, (0 - sum) & 0xFF);
	*next++ = '\n';
	return next;
}

static char *put_linear_address(char *next, uint64_t address)
{
	const uint8_t upper[] = {(uint8_t)(address >> 24), (uint8_t)(address >> 16)};
	return put_record(next, RECORD_LINEAR_ADDRESS, 0, upper, sizeof(upper));
}

// Bytes from `address` on that one record can hold: many readers wrap inside 64 KiB (common practice, from memory).
static unsigned record_bytes(uint64_t address, uint64_t length, unsigned record)
{
	uint64_t count = length - address;
	uint64_t to_border = SEGMENT_BYTES - address % SEGMENT_BYTES;
	if (count > to_border)
		count = to_border;
	return count < record ? (unsigned)count : record;
}

// No more characters than hex_encode puts: each segment has at most one record that is cut short, and one of type 04.
static bool reserve(uint64_t length, unsigned record, struct text *out)
{
	uint64_t segments = length / SEGMENT_BYTES + 1;
	uint64_t records = length / record + segments;
	uint64_t characters = length * 2 + records * RECORD_FRAME + segments * (RECORD_FRAME + 4) + RECORD_FRAME;
	if (characters > SIZE_MAX / 2) {
		out->failed = true;
		return false;
	}
	return text_reserve(out, (size_t)characters);
}

void hex_encode(const uint8_t *image, size_t length, unsigned record, struct text *out)
{
	assert(record >= 1 && record <= 255 && length <= (uint64_t)1 << 32);
	if (!reserve(length, record, out))
		return;
	char *next = out->bytes + out->length;
	for (uint64_t address = 0; address < length;) {
		unsigned count = record_bytes(address, length, record);
		unsigned offset = (unsigned)(address % SEGMENT_BYTES);
		if (offset == 0 && address > 0)
			next = put_linear_address(next, address);
		// A constant count lets the compiler unroll the loop over the data.
		if (count == 16)
			next = put_record(next, RECORD_DATA, offset, image + address, 16);
		else
			next = put_record(next, RECORD_DATA, offset, image + address, count);
		address += count;
	}
	next = put_record(next, RECORD_END, 0, NULL, 0);
	*next = '\0';
	out->length = (size_t)(next - out->bytes);
}
