#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdbool.h>
#include <stdlib.h>
#include <string.h>

// The unit is compiled in with an allocator that fails on demand.
static bool memory_is_out;

static void *calloc_or_fail(size_t count, size_t size)
{
	return memory_is_out ? NULL : calloc(count, size);
}

#define calloc calloc_or_fail
#include "image/hex_decode.c"
#undef calloc

#define END ":00000001FF\n"
#define CAPACITY 0x20000

static uint8_t image[CAPACITY];
static struct hex_result result;

// Decodes over an erased image.
static enum hex_status decode_bytes(const char *bytes, size_t length, size_t capacity)
{
	memset(image, 0xFF, sizeof(image));
	memset(&result, 0x5A, sizeof(result));
	return hex_decode(bytes, length, image, capacity, &result);
}

static enum hex_status decode(const char *text, size_t capacity)
{
	return decode_bytes(text, strlen(text), capacity);
}

static void assert_fault(const char *text, size_t capacity, enum hex_status status, size_t line, uint32_t address)
{
	assert_int_equal(decode(text, capacity), status);
	assert_int_equal(result.line, line);
	assert_int_equal(result.address, address);
}

static void assert_decodes(const char *text, size_t capacity, size_t missing, uint32_t first_missing)
{
	assert_int_equal(decode(text, capacity), HEX_OK);
	assert_int_equal(result.line, 0);
	assert_int_equal(result.missing, missing);
	assert_int_equal(result.first_missing, first_missing);
}

// From a public README of example files; the checksums were recomputed.
static const char published[] =
	":10010000214601360121470136007EFE09D2190140\n"
	":100110002146017E17C20001FF5F16002148011928\n"
	":10012000194E79234623965778239EDA3F01B2CAA7\n"
	":100130003F0156702B5E712B722B732146013421C7\n"
	":00000001FF\n";

static void published_records_are_read(void **state)
{
	(void)state;
	static const uint8_t expected[64] = {
		0x21, 0x46, 0x01, 0x36, 0x01, 0x21, 0x47, 0x01, 0x36, 0x00, 0x7E, 0xFE, 0x09, 0xD2, 0x19, 0x01,
		0x21, 0x46, 0x01, 0x7E, 0x17, 0xC2, 0x00, 0x01, 0xFF, 0x5F, 0x16, 0x00, 0x21, 0x48, 0x01, 0x19,
		0x19, 0x4E, 0x79, 0x23, 0x46, 0x23, 0x96, 0x57, 0x78, 0x23, 0x9E, 0xDA, 0x3F, 0x01, 0xB2, 0xCA,
		0x3F, 0x01, 0x56, 0x70, 0x2B, 0x5E, 0x71, 0x2B, 0x72, 0x2B, 0x73, 0x21, 0x46, 0x01, 0x34, 0x21,
	};
	assert_decodes(published, 0x140, 0x100, 0);
	assert_memory_equal(image + 0x100, expected, 64);
	assert_int_equal(image[0xFF], 0xFF);
	// A variant of the second record that goes round too (B7, checksum 88) is just as valid.
	assert_decodes(":100110002146017EB7C20001FF5F16002148011988\n" END, 0x140, 0x130, 0);
	assert_int_equal(image[0x114], 0xB7);
	// Three bytes at 0030h (from memory, recomputed).
	assert_decodes(":0300300002337A1E\n" END, 0x40, 0x3D, 0);
	assert_memory_equal(image + 0x30, "\x02\x33\x7A\xFF", 4);
}

static void lines_may_end_in_any_way(void **state)
{
	(void)state;
	static const char *const texts[] = {
		":0200000012AB41\n:00000001FF\n",
		":0200000012AB41\r\n:00000001FF\r\n",
		":0200000012AB41\r:00000001FF\r",
		":0200000012AB41\n:00000001FF",
		"\n\r\n \t\n:0200000012AB41\n\n\r\r  \n:00000001FF\n\n \t",
		":0200000012ab41\n:00000001ff\n",
		":0200000012aB41\n:00000001Ff\n",
	};
	for (size_t index = 0; index < sizeof(texts) / sizeof(texts[0]); index++) {
		assert_decodes(texts[index], 2, 0, 0);
		assert_int_equal(image[0], 0x12);
		assert_int_equal(image[1], 0xAB);
	}
}

static void lines_are_counted_whatever_ends_them(void **state)
{
	(void)state;
	assert_fault("\n\r\n\r:00000001FE\n", 16, HEX_CHECKSUM, 4, 0);
	assert_fault(":0100000000FF\r\n:0100010000FE\r\n:0100020000FC\r\n", 16, HEX_CHECKSUM, 3, 0);
}

static void no_record(void **state)
{
	(void)state;
	assert_fault("", 16, HEX_NO_RECORD, 0, 0);
	assert_fault("\n \t\r\n", 16, HEX_NO_RECORD, 0, 0);
}

static void bad_characters(void **state)
{
	(void)state;
	assert_fault("x", 16, HEX_BAD_CHARACTER, 1, 0);
	assert_fault("0100000000FF\n" END, 16, HEX_BAD_CHARACTER, 1, 0);
	assert_fault(" " END, 16, HEX_BAD_CHARACTER, 1, 0);
	assert_fault("\n:010000000GFF\n" END, 16, HEX_BAD_CHARACTER, 2, 0);
	assert_fault(":0g00000000FF\n" END, 16, HEX_BAD_CHARACTER, 1, 0);
	assert_fault(":0100000000F/\n" END, 16, HEX_BAD_CHARACTER, 1, 0);
	assert_fault(":0100000000F:\n" END, 16, HEX_BAD_CHARACTER, 1, 0);
	assert_fault(":0100000000FF \n" END, 16, HEX_BAD_CHARACTER, 1, 0);
	assert_fault(":0100000000FF:00000001FF\n", 16, HEX_BAD_CHARACTER, 1, 0);
	assert_fault(END "rubbish\n", 16, HEX_BAD_CHARACTER, 2, 0);
	assert_int_equal(decode_bytes(":0100000000F\0\n", 14, 16), HEX_BAD_CHARACTER);
	assert_int_equal(decode_bytes(":0100000000F\xC6\n", 14, 16), HEX_BAD_CHARACTER);
	assert_int_equal(decode_bytes(END "\x1A", sizeof(END), 16), HEX_BAD_CHARACTER);
}

static void truncated_records(void **state)
{
	(void)state;
	// Every beginning of a record, at the text's end and at a line's end.
	static const char record[] = ":0100000000FF";
	for (size_t length = 1; length < sizeof(record) - 1; length++) {
		char text[64];
		memcpy(text, record, length);
		assert_int_equal(decode_bytes(text, length, 16), HEX_TRUNCATED);
		memcpy(text + length, "\n" END, sizeof(END) + 1);
		assert_fault(text, 16, HEX_TRUNCATED, 1, 0);
	}
	assert_fault(END ":01", 16, HEX_AFTER_END, 2, 0);
	assert_fault(":0100000000FF0\n" END, 16, HEX_TRUNCATED, 1, 0);
	assert_fault(":0100000000FF00\n" END, 16, HEX_TRUNCATED, 1, 0);
	assert_fault(":FF00000000FF\n" END, 16, HEX_TRUNCATED, 1, 0);
}

static void wrong_checksums(void **state)
{
	(void)state;
	assert_fault(":00000001FE\n", 16, HEX_CHECKSUM, 1, 0);
	assert_fault(":0100000000FF\n:0100010001FF\n" END, 16, HEX_CHECKSUM, 2, 0);
}

// 01 takes no data bytes, 02 and 04 two, 03 and 05 four. Checksums by hand: the complement of the sum of all bytes.
static void wrong_lengths(void **state)
{
	(void)state;
	assert_fault(":0100000100FE\n", 16, HEX_BAD_LENGTH, 1, 0);
	assert_fault(":0100000200FD\n" END, 16, HEX_BAD_LENGTH, 1, 0);
	assert_fault(":00000003FD\n" END, 16, HEX_BAD_LENGTH, 1, 0);
	assert_fault(":03000004000000F9\n" END, 16, HEX_BAD_LENGTH, 1, 0);
	assert_fault(":020000050000F9\n" END, 16, HEX_BAD_LENGTH, 1, 0);
}

static void unknown_types(void **state)
{
	(void)state;
	assert_fault(":00000006FA\n" END, 16, HEX_UNKNOWN_TYPE, 1, 0);
	assert_fault(":000000FF01\n" END, 16, HEX_UNKNOWN_TYPE, 1, 0);
}

static void the_end_record_is_needed_and_last(void **state)
{
	(void)state;
	assert_fault(":0100000000FF\n", 16, HEX_NO_END, 0, 0);
	assert_fault(":020000040000FA\n", 16, HEX_NO_END, 0, 0);
	assert_fault(END "\n:0100000000FF\n", 16, HEX_AFTER_END, 3, 0);
	assert_fault(END END, 16, HEX_AFTER_END, 2, 0);
}

static void data_beyond_the_capacity(void **state)
{
	(void)state;
	assert_decodes(":0100030000FC\n" END, 4, 3, 0);
	assert_fault(":0100040000FB\n" END, 4, HEX_OUT_OF_RANGE, 1, 4);
	// Two bytes of which the second is one too far.
	assert_fault(":020003000000FB\n" END, 4, HEX_OUT_OF_RANGE, 1, 4);
	// Type 04 0800 (public test files): base 0800 0000h.
	assert_fault(":020000040800F2\n:0100000000FF\n" END, CAPACITY, HEX_OUT_OF_RANGE, 2, 0x08000000);
	assert_fault(":0100000000FF\n" END, 0, HEX_OUT_OF_RANGE, 1, 0);
	// No data bytes are nowhere out of range.
	assert_decodes(":00FFFF0002\n" END, 4, 4, 0);
}

static void overlaps(void **state)
{
	(void)state;
	// 12 AB at 0 and AB CD at 1: the byte at 1 is the same both times.
	assert_decodes(":0200000012AB41\n:02000100ABCD85\n" END, 3, 0, 0);
	assert_memory_equal(image, "\x12\xAB\xCD", 3);
	// AC in its place: 02 + 01 + AC + CD = 17C, checksum 84.
	assert_fault(":0200000012AB41\n:02000100ACCD84\n" END, 3, HEX_OVERLAP, 2, 1);
	// FF given is not the same as nothing given.
	assert_fault(":01000000FF00\n:0100000000FF\n" END, 3, HEX_OVERLAP, 2, 0);
}

// 255 bytes from address 1 cover several words of the bookkeeping; then address 100 (64h) comes again with another byte.
static void overlaps_within_long_records(void **state)
{
	(void)state;
	char text[1024] = ":FF000100";
	for (size_t index = 0; index < 255; index++)
		strcat(text, "00");
	// FF + 01 = 100: checksum 00.
	strcat(text, "00\n:0100640000" "9B\n");
	const size_t length = strlen(text);
	strcat(text, END);
	assert_decodes(text, 256, 1, 0);
	strcpy(text + length, ":0100640001" "9A\n" END);
	assert_fault(text, 256, HEX_OVERLAP, 3, 100);
}

static void missing_bytes_are_counted(void **state)
{
	(void)state;
	assert_decodes(END, 100, 100, 0);
	assert_decodes(":020000000000FE\n" END, 100, 98, 2);
	assert_decodes(":0100000000FF\n:0100020000FD\n" END, 3, 1, 1);
	assert_int_equal(image[1], 0xFF);
	assert_decodes(END, 0, 0, 0);
}

// Type 04: the address goes on across 64 KiB (specification: mod 4G).
static void linear_records_cross_64_kib(void **state)
{
	(void)state;
	// 02 + FF + FF + 11 + 22 = 233: checksum CD.
	assert_decodes(":02FFFF001122CD\n" END, CAPACITY, CAPACITY - 2, 0);
	assert_int_equal(image[0xFFFF], 0x11);
	assert_int_equal(image[0x10000], 0x22);
	assert_int_equal(image[0], 0xFF);
	assert_decodes(":020000040001F9\n:0100020033CA\n:020000040000FA\n:0100020044B9\n" END, CAPACITY, CAPACITY - 2, 0);
	assert_int_equal(image[0x10002], 0x33);
	assert_int_equal(image[2], 0x44);
	// At the very top of 4 GiB the first byte is already out of range here.
	assert_fault(":02000004FFFFFC\n:02FFFF001122CD\n" END, CAPACITY, HEX_OUT_OF_RANGE, 2, 0xFFFFFFFF);
}

// Type 02: bits 4 to 19 of the base, and offsets wrap within 64 KiB of it (specification: mod 64K).
static void segmented_records_wrap(void **state)
{
	(void)state;
	// Base 1 0000h: 1 FFFFh, then 1 0000h.
	assert_decodes(":020000021000EC\n:02FFFF001122CD\n" END, CAPACITY, CAPACITY - 2, 0);
	assert_int_equal(image[0x1FFFF], 0x11);
	assert_int_equal(image[0x10000], 0x22);
	// Base 1 2000h.
	assert_decodes(":020000021200EA\n:0100340055" "76\n" END, CAPACITY, CAPACITY - 1, 0);
	assert_int_equal(image[0x12034], 0x55);
	// Base 10h wraps to 10h, not to 0. 02 + 02 + 01 = 05, FB.
	assert_decodes(":020000020001FB\n:02FFFF001122CD\n" END, CAPACITY, CAPACITY - 2, 0);
	assert_int_equal(image[0x1000F], 0x11);
	assert_int_equal(image[0x10], 0x22);
	// A type 04 ends the segment's rule.
	assert_decodes(":020000021000EC\n:020000040000FA\n:02FFFF001122CD\n" END, CAPACITY, CAPACITY - 2, 0);
	assert_int_equal(image[0x10000], 0x22);
	assert_int_equal(image[0], 0xFF);
}

// Start segment and start linear address (from memory, recomputed) say nothing about a memory.
static void start_addresses_are_passed_over(void **state)
{
	(void)state;
	assert_decodes(":0400000300003800C1\n:04000005000000CD2A\n:0100000077" "88\n" END, 1, 0, 0);
	assert_int_equal(image[0], 0x77);
}

// Any one digit changed to any other breaks the checksum or the length, and any other character is noticed too.
static void no_single_change_goes_unnoticed(void **state)
{
	(void)state;
	static const char replacements[] = "0123456789ABCDEFG:;@`g/ \n";
	char text[sizeof(published)];
	size_t unnoticed = 0;
	for (size_t index = 0; index < sizeof(published) - 2; index++) {
		for (size_t next = 0; next < sizeof(replacements); next++) {
			memcpy(text, published, sizeof(published));
			text[index] = replacements[next];
			if (text[index] != published[index])
				unnoticed += decode_bytes(text, sizeof(published) - 1, 0x140) == HEX_OK;
		}
	}
	assert_int_equal(unnoticed, 0);
}

static void memory_that_is_out_is_reported(void **state)
{
	(void)state;
	memory_is_out = true;
	enum hex_status status = decode(END, 16);
	memory_is_out = false;
	assert_int_equal(status, HEX_MEMORY);
	assert_int_equal(result.line, 0);
}

static void each_status_has_words_of_its_own(void **state)
{
	(void)state;
	for (enum hex_status status = HEX_OK; status <= HEX_MEMORY; status++) {
		assert_true(strlen(hex_status_words(status)) > 3);
		for (enum hex_status other = HEX_OK; other < status; other++)
			assert_string_not_equal(hex_status_words(status), hex_status_words(other));
	}
}

static bool is_hex(const char *text, size_t capacity)
{
	return image_is_hex((const uint8_t *)text, strlen(text), capacity);
}

static void hex_is_told_from_binary_by_content(void **state)
{
	(void)state;
	assert_true(is_hex(published, 32768));
	assert_true(is_hex("\r\n \t" END, 32768));
	assert_true(is_hex(":00000001ff\r\nwhatever", 32768));
	// Hex with a fault is still meant as hex.
	assert_true(is_hex(":0100000000F\n", 32768));
	assert_false(is_hex("", 0));
	assert_false(is_hex("\n\n", 2048));
	assert_false(is_hex("S00600004844521B\n", 2048));
	assert_false(is_hex(":not hexadecimal\n", 2048));
	// A dump of exactly the capacity, which happens to begin like a record, is binary unless all of it can be printed.
	uint8_t dump[64];
	memset(dump, 0xFF, sizeof(dump));
	memcpy(dump, ":00000001FF\n", 12);
	assert_false(image_is_hex(dump, sizeof(dump), 64));
	assert_true(image_is_hex(dump, sizeof(dump), 128));
	memset(dump + 12, '\n', sizeof(dump) - 12);
	assert_true(image_is_hex(dump, sizeof(dump), 64));
	dump[63] = 0x7F;
	assert_false(image_is_hex(dump, sizeof(dump), 64));
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(published_records_are_read),
		cmocka_unit_test(lines_may_end_in_any_way),
		cmocka_unit_test(lines_are_counted_whatever_ends_them),
		cmocka_unit_test(no_record),
		cmocka_unit_test(bad_characters),
		cmocka_unit_test(truncated_records),
		cmocka_unit_test(wrong_checksums),
		cmocka_unit_test(wrong_lengths),
		cmocka_unit_test(unknown_types),
		cmocka_unit_test(the_end_record_is_needed_and_last),
		cmocka_unit_test(data_beyond_the_capacity),
		cmocka_unit_test(overlaps),
		cmocka_unit_test(overlaps_within_long_records),
		cmocka_unit_test(missing_bytes_are_counted),
		cmocka_unit_test(linear_records_cross_64_kib),
		cmocka_unit_test(segmented_records_wrap),
		cmocka_unit_test(start_addresses_are_passed_over),
		cmocka_unit_test(no_single_change_goes_unnoticed),
		cmocka_unit_test(memory_that_is_out_is_reported),
		cmocka_unit_test(each_status_has_words_of_its_own),
		cmocka_unit_test(hex_is_told_from_binary_by_content),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
