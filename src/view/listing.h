// The listing: every row of the frame.
#ifndef SCANLATCH_VIEW_LISTING_H
#define SCANLATCH_VIEW_LISTING_H

#include <stdint.h>

struct image;
struct table;
struct text;

// Puts a line for each cell of the frame: line type and number, cell, region, state, the codes in it of the fields that
// signals are decoded from, word, each chip's address and byte (or 16-bit word); then the spare row. Lines that begin
// with # say what is what. A line-frame machine's frame stage follows with a line for each line of the frame. Addresses are
// those with the jumpers set to `bank`.
void view_listing(struct text *out, const struct table *table, const struct image *images, uint32_t bank);

#endif
