// The catalogue of crystals: master clocks that can be bought. Data: src/catalogue/crystals.yaml.
#ifndef SCANLATCH_CATALOGUE_CRYSTALS_H
#define SCANLATCH_CATALOGUE_CRYSTALS_H

#include <stddef.h>

#include "base/diagnostics.h"
#include "base/fraction.h"

struct arena;

struct crystal {
	const char *name;             // as printed on its case
	struct fraction frequency_hz; // > 0, exact
	const char *use;              // what it is made for
	const char *source;
};

struct crystals {
	const struct crystal *crystals; // in the order of the data
	size_t count;
};

// Reads a catalogue in the form of src/catalogue/crystals.yaml into the arena; reports every error that can be found.
// NULL, with diagnostics, if there was any or memory is out. The source must outlive the printing of the diagnostics.
const struct crystals *crystals_read(struct arena *arena, const struct source *source, struct diagnostics *diagnostics);

// Reads the built-in catalogue. NULL if memory is out or (our own fault) the data is bad, with diagnostics, which must
// then be printed before the arena is destroyed.
const struct crystals *crystals_load(struct arena *arena, struct diagnostics *diagnostics);

// The crystal of a name (exact), or NULL. Cannot fail.
const struct crystal *catalogue_crystal(const struct crystals *crystals, const char *name);

#endif
