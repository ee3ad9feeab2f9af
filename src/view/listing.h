// The listing: every row of the frame.
#ifndef SCANLATCH_VIEW_LISTING_H
#define SCANLATCH_VIEW_LISTING_H

struct image;
struct table;
struct text;

// Puts a line for each cell of the frame: line number and type, cell, region, address (state), word, each chip's byte; then the spare row.
void view_listing(struct text *out, const struct table *table, const struct image *images);

#endif
