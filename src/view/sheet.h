// The build sheet: one page for the person who wires, burns and probes the board. It is HTML and well-formed XML, loads nothing from
// anywhere, can be read without its script, and prints.
#ifndef SCANLATCH_VIEW_SHEET_H
#define SCANLATCH_VIEW_SHEET_H

#include "proof/tally.h"
#include "table/table.h"
#include "view/set.h"

struct text;

struct sheet {
	const struct set_view *view;
	const struct image *images;          // one for each chip
	const struct tally *const *tallies;  // [view->count]; NULL where the machine does not keep to the frame
	const struct table *const *tables;   // [view->count]: the maker's; NULL where images were read
	bool strict;                         // advice that fails counts like a must
};

// Puts the whole page. When memory is out, out->failed is set.
void view_sheet(struct text *out, const struct sheet *sheet);

#endif
