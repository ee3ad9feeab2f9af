// The bytes of each chip, whole capacity.
#ifndef SCANLATCH_IMAGE_IMAGE_H
#define SCANLATCH_IMAGE_IMAGE_H

#include "base/diagnostics.h"
#include "table/wiring.h"

struct arena;
struct table;

struct image {
	uint8_t *bytes;    // 16-bit parts: low byte first
	size_t length;     // capacity
};

// Fills images[chip_count] in the arena from tables (maker's side). The part of each chip that bank b of its wires selects holds
// the rows of tables[b]; bank_count is a power of two, 1 for a plan on its own, and bank bits beyond it select nothing. All tables
// have the wiring of the first; a table may stand for several banks. False when memory is out.
bool images_fill(const struct table *const *tables, uint32_t bank_count, struct arena *arena, struct image *images);

// True if what the chip answers depends on an address pin to which nothing is wired: *pin is the first such pin, *offset the first byte of the
// image, with that pin low, that differs with it high, and *count how many do. Cannot fail.
bool image_reads_open_pin(const struct chip *chip, const struct image *image, unsigned *pin, size_t *offset, size_t *count);

// CRC-32 and 16-bit sum (sum of all bytes mod 65536). Cannot fail.
uint32_t image_crc32(const struct image *image);
uint16_t image_sum16(const struct image *image);

#endif
