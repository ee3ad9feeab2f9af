// The last resort of codes: auto: trying all labels of small fields. For the table's own use.
#ifndef SCANLATCH_TABLE_SEARCH_H
#define SCANLATCH_TABLE_SEARCH_H

#include "table/automatic.h"

struct label_search;

// A search over all labels of all values that no cell holds, which it sets to the first choice. Memory is the arena's.
// NULL when memory is out or (then *too_many is set) when there are too many choices to try with `work` steps each.
struct label_search *label_search_create(struct arena *arena, struct automatic_field *fields, size_t count,
                                         uint64_t work, bool *too_many);

// Sets the labels to the next choice; false when there is none. Cannot fail.
bool label_search_next(struct label_search *search);

#endif
