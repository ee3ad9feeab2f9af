#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/text.h"
#include "image/codec.h"

// Encodes and compares with the whole text expected.
static void assert_encodes(const uint8_t *image, size_t length, unsigned record, const char *expected)
{
	struct text text = {0};
	hex_encode(image, length, record, &text);
	assert_false(text.failed);
	assert_string_equal(text_string(&text), expected);
	assert_int_equal(text.length, strlen(expected));
	text_release(&text);
}

// Line `index` (from 0) of an encoded text whose lines all have `width` characters without "\n".
static void assert_line(const struct text *text, size_t index, size_t width, const char *expected)
{
	assert_int_equal(strlen(expected), width);
	assert_memory_equal(text->bytes + index * (width + 1), expected, width);
	assert_int_equal(text->bytes[index * (width + 1) + width], '\n');
}

// The end record is the only legal form (specification of 1988, section 8).
static void an_empty_image_is_an_end_record(void **state)
{
	(void)state;
	assert_encodes(NULL, 0, 16, ":00000001FF\n");
}

// The four records of a public README of example files, at 0100h to 013Fh; their checksums were recomputed by hand.
static void published_records_come_out(void **state)
{
	(void)state;
	static const uint8_t data[64] = {
		0x21, 0x46, 0x01, 0x36, 0x01, 0x21, 0x47, 0x01, 0x36, 0x00, 0x7E, 0xFE, 0x09, 0xD2, 0x19, 0x01,
		0x21, 0x46, 0x01, 0x7E, 0x17, 0xC2, 0x00, 0x01, 0xFF, 0x5F, 0x16, 0x00, 0x21, 0x48, 0x01, 0x19,
		0x19, 0x4E, 0x79, 0x23, 0x46, 0x23, 0x96, 0x57, 0x78, 0x23, 0x9E, 0xDA, 0x3F, 0x01, 0xB2, 0xCA,
		0x3F, 0x01, 0x56, 0x70, 0x2B, 0x5E, 0x71, 0x2B, 0x72, 0x2B, 0x73, 0x21, 0x46, 0x01, 0x34, 0x21,
	};
	uint8_t image[0x140] = {0};
	memcpy(image + 0x100, data, sizeof(data));
	struct text text = {0};
	hex_encode(image, sizeof(image), 16, &text);
	assert_line(&text, 0, 43, ":1000000000000000000000000000000000000000F0");
	assert_line(&text, 16, 43, ":10010000214601360121470136007EFE09D2190140");
	assert_line(&text, 17, 43, ":100110002146017E17C20001FF5F16002148011928");
	assert_line(&text, 18, 43, ":10012000194E79234623965778239EDA3F01B2CAA7");
	assert_line(&text, 19, 43, ":100130003F0156702B5E712B722B732146013421C7");
	assert_string_equal(text.bytes + 20 * 44, ":00000001FF\n");
	text_release(&text);
}

static void a_remainder_is_a_shorter_record(void **state)
{
	(void)state;
	const uint8_t image[] = {0xAB, 0xCD, 0xEF};
	// 03 + AB + CD + EF = 26A; its complement's low byte is 96. 01 + AB = AC, 54.
	assert_encodes(image, 3, 16, ":03000000ABCDEF96\n:00000001FF\n");
	assert_encodes(image, 1, 32, ":01000000AB54\n:00000001FF\n");
}

static void records_of_32_bytes(void **state)
{
	(void)state;
	uint8_t image[33];
	memset(image, 0xFF, sizeof(image));
	// 20 + 32 * FF = 2000, checksum 00; 01 + 00 + 20 + FF = 120, checksum E0.
	assert_encodes(image, 33, 32,
	               ":20000000FFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFFF00\n"
	               ":01002000FFE0\n"
	               ":00000001FF\n");
}

static void what_was_put_before_stays(void **state)
{
	(void)state;
	struct text text = {0};
	const uint8_t image[] = {0x00};
	text_put(&text, "before\n");
	hex_encode(image, 1, 16, &text);
	text_put(&text, "after\n");
	assert_string_equal(text_string(&text), "before\n:0100000000FF\n:00000001FF\nafter\n");
	text_release(&text);
}

// The last record of the first 64 KiB, then the address record (derived: 02 + 04 + 01 = 07, F9), then offset 0000 again.
static void an_address_record_stands_at_each_64_kib(void **state)
{
	(void)state;
	uint8_t *image = calloc(1, 0x30001);
	assert_non_null(image);
	image[0x30000] = 0xFF;
	struct text text = {0};
	hex_encode(image, 0x10000, 16, &text);
	assert_null(strstr(text.bytes, ":02000004"));
	assert_string_equal(text.bytes + 4095 * 44, ":10FFF0000000000000000000000000000000000001\n:00000001FF\n");
	text_release(&text);

	hex_encode(image, 0x30001, 16, &text);
	const size_t segment = 4096 * 44 + 16;
	assert_memory_equal(text.bytes + 4096 * 44, ":020000040001F9\n:10000000", 25);
	assert_memory_equal(text.bytes + 4096 * 44 + segment, ":020000040002F8\n:10000000", 25);
	assert_string_equal(text.bytes + 4096 * 44 + 2 * segment, ":020000040003F7\n:01000000FF00\n:00000001FF\n");
	text_release(&text);
	free(image);
}

// From 16 MiB on the upper byte of an address record is in use (derived: 02 + 04 + 01 = 07, F9).
static void an_address_record_has_two_bytes(void **state)
{
	(void)state;
	const size_t length = 0x1000001;
	uint8_t *image = calloc(1, length);
	assert_non_null(image);
	image[length - 1] = 0x5A; // 01 + 5A = 5B, A5
	struct text text = {0};
	hex_encode(image, length, 32, &text);
	assert_false(text.failed);
	static const char last[] = ":020000040100F9\n:010000005AA5\n:00000001FF\n";
	assert_true(text.length > strlen(last));
	assert_string_equal(text.bytes + text.length - strlen(last), last);
	// Before it, the last record of the 16 MiB; 256 segments begin with 00FF (derived: 02 + 04 + FF = 105, FB).
	assert_memory_equal(text.bytes + text.length - strlen(last) - 76, ":20FFE000", 9);
	assert_non_null(strstr(text.bytes, ":0200000400FFFB\n:20000000"));
	struct hex_result result;
	memset(image, 0xFF, length);
	assert_int_equal(hex_decode(text.bytes, text.length, image, length, &result), HEX_OK);
	assert_int_equal(result.missing, 0);
	assert_int_equal(image[0], 0);
	assert_int_equal(image[length - 1], 0x5A);
	text_release(&text);
	free(image);
}

// Every data record says where it is; none may reach past 64 KiB, together they are the image.
static void assert_no_record_crosses(const uint8_t *image, size_t length, unsigned record)
{
	struct text text = {0};
	hex_encode(image, length, record, &text);
	unsigned long base = 0;
	size_t covered = 0;
	for (const char *line = text.bytes; *line != '\0'; line = strchr(line, '\n') + 1) {
		unsigned count, offset, type, first;
		assert_true(sscanf(line, ":%2X%4X%2X%4X", &count, &offset, &type, &first) >= 3);
		if (type == 4)
			base = (unsigned long)first << 16;
		if (type != 0)
			continue;
		assert_true(count >= 1 && count <= record);
		assert_true(offset + count <= 0x10000);
		assert_int_equal(base + offset, covered);
		covered += count;
	}
	assert_int_equal(covered, length);
	text_release(&text);
}

static void no_record_crosses_64_kib(void **state)
{
	(void)state;
	uint8_t *image = calloc(1, 0x20010);
	assert_non_null(image);
	for (unsigned record = 16; record <= 32; record++) {
		assert_no_record_crosses(image, 0xFFFF, record);
		assert_no_record_crosses(image, 0x10001, record);
		assert_no_record_crosses(image, 0x20010, record);
	}
	free(image);
}

// A simple generator of noise (xorshift, Marsaglia 2003, triple 13 17 5).
static void fill_with_noise(uint8_t *bytes, size_t length)
{
	uint32_t noise = 2463534242;
	for (size_t index = 0; index < length; index++) {
		noise ^= noise << 13;
		noise ^= noise >> 17;
		noise ^= noise << 5;
		bytes[index] = (uint8_t)noise;
	}
}

static void assert_comes_back(const uint8_t *image, size_t length, unsigned record)
{
	struct text text = {0};
	struct hex_result result;
	hex_encode(image, length, record, &text);
	uint8_t *decoded = malloc(length + 1);
	assert_non_null(decoded);
	memset(decoded, 0xFF, length + 1);
	assert_int_equal(hex_decode(text.bytes, text.length, decoded, length, &result), HEX_OK);
	assert_int_equal(result.missing, 0);
	assert_true(length == 0 || memcmp(decoded, image, length) == 0);
	assert_int_equal(decoded[length], 0xFF);
	assert_true(image_is_hex((const uint8_t *)text.bytes, text.length, length));
	free(decoded);
	text_release(&text);
}

static void every_image_comes_back(void **state)
{
	(void)state;
	static const size_t lengths[] = {
		0, 1, 2, 15, 16, 17, 31, 32, 33, 255, 256, 2048, 65535, 65536, 65537, 131072, 200001, 1048576,
	};
	uint8_t *image = malloc(1048576);
	assert_non_null(image);
	fill_with_noise(image, 1048576);
	for (size_t index = 0; index < sizeof(lengths) / sizeof(lengths[0]); index++) {
		assert_comes_back(image, lengths[index], 16);
		assert_comes_back(image, lengths[index], 32);
	}
	free(image);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(an_empty_image_is_an_end_record),
		cmocka_unit_test(published_records_come_out),
		cmocka_unit_test(a_remainder_is_a_shorter_record),
		cmocka_unit_test(records_of_32_bytes),
		cmocka_unit_test(what_was_put_before_stays),
		cmocka_unit_test(an_address_record_stands_at_each_64_kib),
		cmocka_unit_test(an_address_record_has_two_bytes),
		cmocka_unit_test(no_record_crosses_64_kib),
		cmocka_unit_test(every_image_comes_back),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
