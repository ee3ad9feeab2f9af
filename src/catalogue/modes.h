// Display modes: standards that are told by a pixel clock and counts of dots and lines.
#ifndef SCANLATCH_CATALOGUE_MODES_H
#define SCANLATCH_CATALOGUE_MODES_H

#include "catalogue/reading.h"
#include "catalogue/standards.h"

// How far the value of one item may lie from a mode's own, as shares of it.
struct mode_share {
	bool has_low, has_high;
	struct fraction low, high; // of the nominal; low <= 1 <= high
	const char *source;
};

struct mode_rules {
	struct mode_share shares[ITEM_COUNT][GRADE_COUNT]; // of the items that modes have
};

// Reads `mode limits`: of every item that modes have, the shares at both grades.
void read_mode_rules(struct reader *reader, const struct node *node, struct mode_rules *rules);

// Reads a mode and works out its limits by the rules. The limits are in the reader's arena.
void read_mode(struct reader *reader, const struct node_pair *pair, const struct mode_rules *rules, struct standard *mode);

#endif
