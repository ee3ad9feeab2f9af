// The last resort of codes: auto: a search for labels. For the table's own use.
#ifndef SCANLATCH_TABLE_SEARCH_H
#define SCANLATCH_TABLE_SEARCH_H

#include "table/automatic.h"

enum search_result { SEARCH_FOUND, SEARCH_NONE, SEARCH_GAVE_UP, SEARCH_MEMORY };

// Searches for labels of fields, as automatic_label has left them, with which every cell can have a state.
// SEARCH_FOUND: they are set. Otherwise they are as they were, and *fault says (but for SEARCH_MEMORY) which cell is
// the first to lack a code or a state; SEARCH_NONE: it is proved that there are no such labels. The assignment's states
// and owners are used. Memory is taken from the arena.
enum search_result search_labels(struct automatic_field *fields, size_t count, struct assignment *assignment,
                                 struct arena *arena, struct fault *fault);

#endif
