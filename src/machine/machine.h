// The simulator: latches, counters, EEPROM chips and their wires. It knows nothing of what plans mean: no lines, regions or
// roles. Independent of the maker: it reads bytes through the wires.
#ifndef SCANLATCH_MACHINE_MACHINE_H
#define SCANLATCH_MACHINE_MACHINE_H

#include "image/image.h"
#include "table/wiring.h"

struct machine;

// A machine of the given wiring with the given chip images (wiring.chip_count of them, of the chips' capacity), its jumpers
// set to `bank`. Images must outlive it. NULL when memory is out.
struct machine *machine_create(struct arena *arena, const struct wiring *wiring, const struct image *images, uint32_t bank);

// What a stage's EEPROMs answer at an address of the stage (its state, and above it the kind where it sees one). Cannot
// fail for address < 2^address_bits. Open address pins read as low.
struct row machine_row(const struct machine *machine, enum stage stage, uint32_t address);

// A state is the whole feedback state: see feedback_of. Its functions cannot fail for state < 2^feedback bits.

// The state after the next clock edge. With an async clear, a state whose row asserts clear falls to 0 at once, before it is a
// cell of its own: machine_settle gives the state that counter values settle to, and machine_next the settled state after the edge
// that ends a settled state's cell. Should clear be asserted at state 0 too, the counter stays at 0. In a line-frame machine the
// frame stage settles first, then the line stage under the kind that follows from it.
uint32_t machine_settle(const struct machine *machine, uint32_t state);
uint32_t machine_next(const struct machine *machine, uint32_t state);

// What counters with an async clear show for an instant at the edge that ends a settled state's cell, before they settle to
// machine_next; the same where nothing is cleared.
uint32_t machine_passing(const struct machine *machine, uint32_t state);

// Whether the frame stage steps at the edge that ends a settled state's cell. Never in a loop machine.
bool machine_steps(const struct machine *machine, uint32_t state);

// The address that a state presents to the chips of a stage.
uint32_t machine_row_address(const struct machine *machine, enum stage stage, uint32_t state);

// A chip's byte (or 16-bit word's two bytes) that an address of its stage reads: the byte address in the chip's image of its low byte.
// For messages. Cannot fail.
size_t machine_address(const struct machine *machine, uint32_t address, size_t chip);

// Fills next[0 … 2^state_bits - 1] with machine_next of every (settled) state, in one linear pass: much faster than calling
// machine_next for each. For loop machines only. Cannot fail.
void machine_all_next(const struct machine *machine, uint32_t *next, size_t stride_words);

#endif
