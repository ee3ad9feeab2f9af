// Inside the catalogues' readers: what they share. All report what is wrong and let the reader read on.
#ifndef SCANLATCH_CATALOGUE_READING_H
#define SCANLATCH_CATALOGUE_READING_H

#include "catalogue/catalogue.h"
#include "plan/read.h"

// Reads a single value that is not empty; a node that is NULL was reported before. *result stays where there is none.
void catalogue_text(struct reader *reader, const struct node *node, const char *what, const char **result);

// The pins of a memory's package, { pins: [...], source }, into a part whose address and data pins are known: each of them stands there once, the
// others are of the names that src/catalogue/parts.yaml tells of. Reports what is wrong; the part keeps no pins then.
void read_pinout(struct reader *reader, const struct node *node, struct part *part);

// A mapping or list of 1 to `limit` things; else reports it.
bool catalogue_count(struct reader *reader, const struct node *node, const char *what, size_t limit);

// A file that is built in as a source, in the arena; reports and returns NULL when memory is out.
const struct source *catalogue_source(struct arena *arena, const char *name, const unsigned char *bytes, size_t length,
                                      struct diagnostics *diagnostics);

#endif
