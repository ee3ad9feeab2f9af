// How the machine reads its chips: the wires of a chip unrolled into tables, so that a look-up costs the same whatever the
// order of the wires. Internal to machine/.
#ifndef SCANLATCH_MACHINE_CHIPS_H
#define SCANLATCH_MACHINE_CHIPS_H

#include "machine/machine.h"

#define STATE_BYTES ((LIMIT_STATE_BITS + 7) / 8)
#define LANE_BYTES (LIMIT_DATA_PINS / 8)

#define CONTROL_CLEAR 1u
#define CONTROL_STEP 2u

// A chip. The byte address of a row is the OR of address[k][byte k of the stage's address]; what byte k of the data there
// means is in next[k], kind[k], control[k] and levels[k], again to be ORed.
struct chip_reader {
	enum stage stage;
	const uint8_t *bytes;
	unsigned width;                             // bytes at an address: 1 or 2
	uint32_t address[STATE_BYTES][256];
	uint32_t next[LANE_BYTES][256];
	uint32_t kind[LANE_BYTES][256];
	uint32_t control[LANE_BYTES][256];          // CONTROL_…
	uint64_t levels[LANE_BYTES][256];
	bool carries_next, carries_clear, carries_levels;
};

struct two_stages;

struct machine {
	struct wiring wiring;
	struct feedback at;                         // where the parts of a state lie
	uint32_t state_mask;                        // of the line stage
	struct chip_reader *readers;                // [wiring.chip_count]
	struct two_stages *two;                     // FORM_LINE_FRAME only
};

// Unrolls the wires of one chip, its jumpers set to `bank`. Cannot fail.
void chip_reader_init(struct chip_reader *reader, const struct wiring *wiring, size_t chip, const struct image *image, uint32_t bank);

// The byte that a stage's address selects. Cannot fail.
static inline size_t chip_address(const struct chip_reader *reader, uint32_t address)
{
	return reader->address[0][address & 255] | reader->address[1][address >> 8 & 255] | reader->address[2][address >> 16 & 255];
}

// The two stages of a line-frame machine, in the arena; NULL when memory is out. The readers must be there.
struct two_stages *two_stages_create(struct arena *arena, const struct machine *machine);
uint32_t two_stages_settle(const struct two_stages *two, uint32_t state);
uint32_t two_stages_passing(const struct two_stages *two, uint32_t state);
uint32_t two_stages_next(const struct two_stages *two, uint32_t state);
bool two_stages_steps(const struct two_stages *two, uint32_t state);
uint32_t two_stages_kind(const struct two_stages *two, uint32_t state);

#endif
