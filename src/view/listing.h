// The listing: every row of the frame.
#ifndef SCANLATCH_VIEW_LISTING_H
#define SCANLATCH_VIEW_LISTING_H

struct image;
struct table;
struct text;

// Puts a line for each cell of the frame: line type and number, cell, region, state, the codes in it of the fields that
// signals are decoded from, word, each chip's address and byte (or 16-bit word); then the spare row. Lines that begin
// with # say what is what.
void view_listing(struct text *out, const struct table *table, const struct image *images);

#endif
