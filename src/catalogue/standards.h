// The catalogue of standards: what a signal is measured for, and between which limits, each with its source.
// Data: src/catalogue/standards.yaml.
#ifndef SCANLATCH_CATALOGUE_STANDARDS_H
#define SCANLATCH_CATALOGUE_STANDARDS_H

#include <stdbool.h>
#include <stddef.h>

#include "base/diagnostics.h"
#include "base/fraction.h"
#include "plan/quantity.h"

struct arena;
struct node;
struct reader;

// What is measured; the order of reports. limit_item_facts says of each what exactly.
// 0H is the leading edge of a line's sync, 0V that of a field's first broad pulse (or of its vertical sync).
enum limit_item {
	ITEM_LINE_RATE,
	ITEM_FIELD_RATE,
	ITEM_FRAME_RATE,
	ITEM_LINES_PER_FIELD,
	ITEM_PIXEL_CLOCK,
	ITEM_SUBCARRIER,
	ITEM_CYCLES_PER_LINE,
	ITEM_FRONT_PORCH,
	ITEM_SYNC_WIDTH,
	ITEM_BREEZEWAY,
	ITEM_BURST_START,
	ITEM_BURST_START_CYCLES,
	ITEM_BURST_LENGTH,
	ITEM_BURST_LENGTH_CYCLES,
	ITEM_BURST_TO_PICTURE,
	ITEM_BACK_PORCH,
	ITEM_HORIZONTAL_BLANKING,
	ITEM_PICTURE_START,
	ITEM_PICTURE_WIDTH,
	ITEM_HORIZONTAL_CENTRE,
	ITEM_PRE_EQUALISING_PULSES,
	ITEM_PRE_EQUALISING_LINES,
	ITEM_BROAD_PULSES,
	ITEM_VERTICAL_SYNC,
	ITEM_POST_EQUALISING_PULSES,
	ITEM_POST_EQUALISING_LINES,
	ITEM_EQUALISING_WIDTH,
	ITEM_BROAD_WIDTH,
	ITEM_SERRATION_WIDTH,
	ITEM_VERTICAL_FRONT_PORCH,
	ITEM_VERTICAL_BACK_PORCH,
	ITEM_VERTICAL_BLANKING,
	ITEM_PICTURE_TOP,
	ITEM_PICTURE_HEIGHT,
	ITEM_VERTICAL_CENTRE,
	ITEM_LINES_WITHOUT_BURST,
	ITEM_HORIZONTAL_POLARITY,
	ITEM_VERTICAL_POLARITY,
	ITEM_COUNT
};

struct limit_item_facts {
	const char *name;          // as plans and reports have it
	const char *measures;      // from where to where, or of what
	bool is_polarity;          // values are 1 (positive: the pulse is high) and -1 (negative); dimension and unit mean nothing
	enum dimension dimension;  // of its values, which are in hertz, seconds, lines, cycles or pulses
	const char *unit;          // in which it is shown
};

// Cannot fail.
const struct limit_item_facts *limit_item_facts(enum limit_item item);

// False if there is no item of the name (exact).
bool limit_item_find(const char *name, enum limit_item *item);

enum limit_grade {
	GRADE_STUDIO,  // the published figure
	GRADE_MONITOR, // what receivers and monitors accept
	GRADE_COUNT
};

// "studio", "monitor". Cannot fail.
const char *limit_grade_name(enum limit_grade grade);

// Values are exact and in the unit of the item's dimension; low <= nominal <= high of those that there are. With neither low nor
// high the nominal is for information and no value misses it.
struct limit {
	enum limit_item item;
	enum limit_grade grade;
	bool has_nominal, has_low, has_high;
	struct fraction nominal, low, high; // 0 where there is none
	const char *source;
};

// Lines of a field in which the standard has no burst.
struct burst_pause {
	unsigned field;                 // from 1; there are fewer than the colour sequence has fields if they repeat
	unsigned first_line, last_line; // by the standard's numbers, which start anew after the frame's last line
	const char *source;
};

struct standard {
	const char *name;
	const char *title;
	const char *documents;
	unsigned fields;                 // of a frame: 2 if it is interlaced, otherwise 1
	unsigned vertical_sync_line;     // number of the line at whose 0H the 0V of field 1 is; 0 if the standard numbers no lines
	const struct limit *limits;      // in the order of the items, of each the studio's first
	size_t limit_count;
	const struct burst_pause *pauses;
	size_t pause_count;
	const char *const *notes;        // where sources disagree: what was taken, and why
	size_t note_count;
	size_t own_limits;               // how many items have limits of a plan's own
};

struct standards {
	const struct standard *standards;
	size_t count;
};

// Reads a catalogue in the form of src/catalogue/standards.yaml into the arena; reports every error that can be found.
// NULL, with diagnostics, if there was any or memory is out. The source must outlive the printing of the diagnostics.
const struct standards *standards_read(struct arena *arena, const struct source *source, struct diagnostics *diagnostics);

// Reads the built-in catalogue. NULL if memory is out or (our own fault) the data is bad, with diagnostics, which must
// then be printed before the arena is destroyed.
const struct standards *standards_load(struct arena *arena, struct diagnostics *diagnostics);

// The standard of a name (exact), or NULL. Cannot fail.
const struct standard *catalogue_standard(const struct standards *standards, const char *name);

// A standard's limit, or NULL if it has none for the item. Cannot fail.
const struct limit *standard_limit(const struct standard *standard, enum limit_item item, enum limit_grade grade);

enum limit_status {
	LIMIT_OK,
	LIMIT_MALFORMED,    // none of the forms below
	LIMIT_NO_UNIT,
	LIMIT_UNIT,         // no unit, or one that does not fit the item
	LIMIT_ORDER,        // low above nominal or high, nominal above high, or a value below zero
	LIMIT_OVERFLOW,     // does not fit 64-bit fractions
};

// Reads values of a limit:
//   NOMINAL | NOMINAL +- TOLERANCE | NOMINAL (RANGE) | RANGE | exactly NOMINAL
//   RANGE: LOW to HIGH | at least LOW | at most HIGH
// each a quantity with a unit of the item's dimension, a tolerance also in ppm of the nominal; of a polarity
//   positive | negative
// Sets only the item, nominal, low and high of *limit, and those only on LIMIT_OK.
enum limit_status limit_parse(const char *text, enum limit_item item, struct limit *limit);

// What a status means, as words for a diagnostic. Cannot fail.
const char *limit_status_words(enum limit_status status);

// limit_parse of a node's text; false after reporting.
bool read_limit(struct reader *reader, const struct node *node, enum limit_item item, struct limit *limit);

#endif
