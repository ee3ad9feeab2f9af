// Image files: binary and Intel HEX (Intel Hexadecimal Object File Format Specification, Rev. A, 6 January 1988).
#ifndef SCANLATCH_IMAGE_CODEC_H
#define SCANLATCH_IMAGE_CODEC_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

struct text;

enum hex_status {
	HEX_OK,
	HEX_NO_RECORD,      // no record at all
	HEX_BAD_CHARACTER,  // not ':' at a record's start, or not a hexadecimal digit
	HEX_TRUNCATED,      // a record ends early, or has digits beyond its length
	HEX_CHECKSUM,
	HEX_BAD_LENGTH,     // a record type with a wrong number of data bytes
	HEX_UNKNOWN_TYPE,
	HEX_NO_END,         // no type 01 record
	HEX_AFTER_END,      // a record after type 01
	HEX_OUT_OF_RANGE,   // data beyond the capacity
	HEX_OVERLAP,        // an address is given twice with different bytes
	HEX_MEMORY,
};

const char *hex_status_words(enum hex_status status);

// Puts an image as Intel HEX: records of `record` (16 or 32) data bytes, upper case, a type 04 record only where the address
// passes 64 KiB (none for the first 64 KiB), type 01 last, "\n" line ends, the whole of `length`. Failure is text's.
void hex_encode(const uint8_t *image, size_t length, unsigned record, struct text *out);

struct hex_result {
	size_t line;        // of the fault, from 1; 0 if none
	uint32_t address;   // of the fault, where it has one
	size_t missing;     // bytes of the capacity that no record gave (left as they were in image)
	uint32_t first_missing;
};

// Decodes Intel HEX text into image[0 … capacity-1], which the caller has filled with the erased value (0xFF). Reads types
// 00 to 05; \n, \r\n or \r ends; upper and lower case; blank lines. Bytes after a fault are unspecified.
enum hex_status hex_decode(const char *bytes, size_t length, uint8_t *image, size_t capacity, struct hex_result *result);

// True if bytes look like Intel HEX and not like a binary image of `capacity` bytes: the first non-blank character is ':' and
// everything in the first record is a hexadecimal digit. A file of exactly `capacity` bytes that is not wholly printable is binary.
bool image_is_hex(const uint8_t *bytes, size_t length, size_t capacity);

#endif
