// The catalogue of parts: memories and the logic around them, each value with its source. Data: src/catalogue/parts.yaml.
#ifndef SCANLATCH_CATALOGUE_CATALOGUE_H
#define SCANLATCH_CATALOGUE_CATALOGUE_H

#include <stdbool.h>
#include <stddef.h>

#include "base/diagnostics.h"
#include "base/fraction.h"

struct arena;

struct access_grade {
	struct fraction access_s; // > 0
	const char *source;
};

enum pin_kind {
	PIN_ADDRESS,
	PIN_DATA,
	PIN_GROUND,
	PIN_SUPPLY,
	PIN_TIED_LOW,   // a control input that is low while the chip is read all the time
	PIN_TIED_HIGH,  // one that is high then: no writing, no programming
	PIN_OPEN        // not connected inside, or an output that nobody needs
};

// A pin of a package.
struct package_pin {
	const char *name;        // "A3", "D0", "/CE"
	enum pin_kind kind;
	unsigned index;          // of an address or data pin
};

// A parallel memory.
struct part {
	const char *name;
	unsigned address_pins;   // 1 … 26
	unsigned data_pins;      // 8 or 16
	const char *package;     // "" if not known
	const struct access_grade *grades; // fastest first
	size_t grade_count;
	const char *source;      // of organisation and package
	const struct package_pin *pins; // [pin_count], from pin 1 on; NULL if they are not known
	unsigned pin_count;
	const char *pinout_source;
};

enum logic_kind { LOGIC_LATCH, LOGIC_COUNTER, LOGIC_DECODER };

// A latch, counter or decoder: its worst-case times.
struct logic_part {
	const char *name;
	enum logic_kind kind;
	struct fraction delay_s;      // clock (or address) to output
	struct fraction setup_s;      // 0 for a decoder
	const char *conditions;       // supply and temperature of the values
	const char *delay_source;
	const char *setup_source;     // "" for a decoder
};

struct catalogue {
	const struct part *parts;
	size_t part_count;
	const struct logic_part *logic;
	size_t logic_count;
};

// Reads a catalogue in the form of src/catalogue/parts.yaml into the arena; reports every error that can be found.
// NULL, with diagnostics, if there was any or memory is out. The source must outlive the printing of the diagnostics.
const struct catalogue *catalogue_read(struct arena *arena, const struct source *source, struct diagnostics *diagnostics);

// Reads the built-in catalogue. NULL if memory is out or (our own fault) the data is bad, with diagnostics, which must
// then be printed before the arena is destroyed.
const struct catalogue *catalogue_load(struct arena *arena, struct diagnostics *diagnostics);

// The part of a name (exact), or NULL. Cannot fail.
const struct part *catalogue_part(const struct catalogue *catalogue, const char *name);
const struct logic_part *catalogue_logic(const struct catalogue *catalogue, const char *name);

// The number of the package's pin that is address pin or data pin `index`; 0 if the part's pins are not known. Cannot fail.
unsigned part_pin_number(const struct part *part, enum pin_kind kind, unsigned index);

// Bytes of a part's whole capacity. Cannot fail.
size_t part_bytes(const struct part *part);

#endif
