// How the machine reads its chips: the wires of a chip unrolled into tables, so that a look-up costs the same whatever the
// order of the wires. Internal to machine/.
#ifndef SCANLATCH_MACHINE_CHIPS_H
#define SCANLATCH_MACHINE_CHIPS_H

#include "machine/machine.h"

#define STATE_BYTES ((LIMIT_STATE_BITS + 7) / 8)
#define LANE_BYTES (LIMIT_DATA_PINS / 8)

// A chip. The byte address of a state is the OR of address[k][byte k of the state]; what byte k of the data there means
// is in next[k], levels[k] and clear[k], again to be ORed.
struct chip_reader {
	const uint8_t *bytes;
	unsigned width;                             // bytes at an address: 1 or 2
	uint32_t address[STATE_BYTES][256];
	uint32_t next[LANE_BYTES][256];
	uint64_t levels[LANE_BYTES][256];
	uint32_t clear[LANE_BYTES][256];            // 1: asserted
	bool carries_next, carries_clear, carries_levels;
};

struct machine {
	struct wiring wiring;
	uint32_t state_mask;
	struct chip_reader *readers;                // [wiring.chip_count]
};

// Unrolls the wires of one chip, its jumpers set to `bank`. Cannot fail.
void chip_reader_init(struct chip_reader *reader, const struct chip *chip, const struct image *image, uint32_t bank);

// The byte address that a state selects. Cannot fail.
static inline size_t chip_address(const struct chip_reader *reader, uint32_t state)
{
	return reader->address[0][state & 255] | reader->address[1][state >> 8 & 255] | reader->address[2][state >> 16 & 255];
}

#endif
