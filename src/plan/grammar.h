// The plan language as tables: which keys each mapping has, and what their values look like. The reader sorts keys and takes choices,
// ranges and units by them; the schema for editors (view/schema.h) is made from the same.
#ifndef SCANLATCH_PLAN_GRAMMAR_H
#define SCANLATCH_PLAN_GRAMMAR_H

#include <stddef.h>
#include <stdint.h>

#include "plan/quantity.h"

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

enum shape_kind {
	SHAPE_TEXT,      // a single value that is not empty; of a `pattern`, if there is one
	SHAPE_NOTE,      // a single value, which may be empty
	SHAPE_WHOLE,     // a whole number from `least` to `most`
	SHAPE_TRUE,      // true: where it is not so, the key is left out
	SHAPE_CHOICE,    // one of `words`
	SHAPE_LISTED,    // a name out of a catalogue
	SHAPE_QUANTITY,  // of one of `dimensions`
	SHAPE_BIT_COUNT, // `least` to `most` bits
	SHAPE_LIST,      // `least` to `most` values of the shape `item`
	SHAPE_MAPPING,   // of `keys`
	SHAPE_NAMED,     // `least` to `most` values of the shape `item`, each under a name of the shape `name` (NULL: of any)
	SHAPE_LIMITS,    // limits under the names of what is measured
	SHAPE_EITHER,    // one of `shapes`, of which no value has two
};

// What a text may also be where YAML takes it for a value of another kind (YAML 1.2.2, section 10.3.2): the name 2024 for a number.
enum {
	ALSO_WHOLE = 1,  // an integer from 0 on
	ALSO_NUMBER = 2,
	ALSO_SHARE = 4,  // a number above 0, at most 1
	ALSO_TRUTH = 8,
};

enum quantity_sign { QUANTITY_POSITIVE, QUANTITY_NOT_NEGATIVE, QUANTITY_SIGNED };

enum listed_names { LISTED_STANDARDS, LISTED_MEMORIES, LISTED_LATCHES, LISTED_COUNTERS, LISTED_DECODERS };

// KEY_UNUSED: a slot of the table that this kind of mapping does not have. KEY_ELSEWHERE: the same, but report_elsewhere
// has told of it.
enum key_need { KEY_OPTIONAL, KEY_REQUIRED, KEY_UNUSED, KEY_ELSEWHERE };

struct shape;

// A key of a mapping.
struct key {
	const char *name;
	enum key_need need;
	const struct shape *shape; // of its value
	const char *about;         // what it means, for who writes one: a sentence without its full stop
};

// A key of the built-in catalogues, of which no schema is made.
#define PLAIN_KEY(name, need) {name, need, NULL, NULL}

// Keys of which a mapping has at most one, or with `one` exactly one.
struct key_group {
	size_t first, count; // in its table of keys; none if count is 0
	bool one;
};

// Where a key stands, another has to stand too.
struct key_bond {
	const char *key;
	bool absent;               // it is where `key` does not stand
	const char *with, *but;    // it is where the value of `key` is this word, or is not this one
	const char *holding;       // it is where `key` is a list and one of its mappings has this key
	const char *needs;         // the other key,
	bool optional;             // which may be left out all the same
	const struct shape *shape; // and what its value looks like then; NULL: like everywhere
};

// What a value looks like. Members that the kind does not name are 0.
struct shape {
	enum shape_kind kind;
	const char *title;            // of a definition of its own in the schema; NULL: it stands where it is used
	const char *about;            // what it is, in a sentence; NULL where keys tell
	int64_t least, most;          // of numbers and counts; a text: `most` characters, 0 for any number of them
	const char *pattern;          // SHAPE_TEXT: a regular expression of the whole text (ECMA-262, of it what all dialects have)
	const char *never;            // SHAPE_TEXT: a regular expression of what the text does not contain
	const char *const *forbidden; // SHAPE_TEXT: words that it is not
	size_t forbidden_count;
	unsigned also;                // SHAPE_TEXT: of ALSO_…
	const char *const *words;     // SHAPE_CHOICE
	size_t word_count;
	enum listed_names listed;     // SHAPE_LISTED
	bool own_too;                 // SHAPE_LISTED: the plan may add names of its own
	unsigned dimensions;          // SHAPE_QUANTITY: bits 1u << dimension
	enum quantity_sign sign;      // SHAPE_QUANTITY
	const struct shape *item;     // SHAPE_LIST, SHAPE_NAMED
	bool distinct;                // SHAPE_LIST: no value stands twice
	const char *once;             // SHAPE_LIST: at most one of its mappings has this key
	const struct key *each;       // SHAPE_LIST: each word of this key, whose shape is a choice, stands in one of its mappings
	const struct shape *name;     // SHAPE_NAMED
	const char *needs_name;       // SHAPE_NAMED: a regular expression that a name must have; NULL: none need
	const struct key *keys;       // SHAPE_MAPPING
	size_t key_count;
	struct key_group group;       // SHAPE_MAPPING
	const struct key_bond *bonds; // SHAPE_MAPPING
	size_t bond_count;
	const struct shape *const *shapes; // SHAPE_EITHER
	size_t shape_count;
	// Of a plan's key: what the value looks like beside a machine of that form; NULL: like this.
	const struct shape *in_loop, *in_line_frame;
};

#define SHAPE(...) (&(const struct shape){__VA_ARGS__})
#define WHOLE(from, to) SHAPE(.kind = SHAPE_WHOLE, .least = (from), .most = (to))
#define BIT_COUNT(from, to) SHAPE(.kind = SHAPE_BIT_COUNT, .least = (from), .most = (to))
#define CHOICE(choices) SHAPE(.kind = SHAPE_CHOICE, .words = (choices), .word_count = COUNT_OF(choices))
#define LISTED(names) SHAPE(.kind = SHAPE_LISTED, .listed = (names))
#define QUANTITY(which, signs) SHAPE(.kind = SHAPE_QUANTITY, .dimensions = (which), .sign = (signs))
#define LIST_OF(shape, from, to) SHAPE(.kind = SHAPE_LIST, .item = (shape), .least = (from), .most = (to))
#define SET_OF(shape, from, to) SHAPE(.kind = SHAPE_LIST, .item = (shape), .least = (from), .most = (to), .distinct = true)
#define BONDS(...) \
	.bonds = (const struct key_bond[]){__VA_ARGS__}, .bond_count = COUNT_OF(((const struct key_bond[]){__VA_ARGS__}))
#define EITHER(...) \
	SHAPE(.kind = SHAPE_EITHER, .shapes = (const struct shape *const[]){__VA_ARGS__}, \
	      .shape_count = COUNT_OF(((const struct shape *const[]){__VA_ARGS__})))

#define IN_HERTZ (1u << DIMENSION_FREQUENCY)
#define IN_SECONDS (1u << DIMENSION_TIME)
#define IN_TICKS (1u << DIMENSION_TICKS)
#define IN_DOTS (1u << DIMENSION_DOTS)
#define IN_CELLS (1u << DIMENSION_CELLS)
#define IN_PPM (1u << DIMENSION_PPM)

// A decimal number, and one above zero, as regular expressions.
#define NUMBER_PATTERN "[0-9]+(\\.[0-9]+)?"
#define ABOVE_ZERO_PATTERN "(0*[1-9][0-9]*(\\.[0-9]+)?|0+\\.0*[1-9][0-9]*)"
#define WHOLE_PATTERN "(0x[0-9a-fA-F]+|[0-9]+)"

extern const struct shape text_shape, note_shape, true_shape, version_shape, time_shape;
#define IDENTIFIER_PATTERN "[a-z][a-z0-9_]*"
extern const struct shape identifier_shape;     // the name of a signal or field
extern const struct shape printable_name_shape; // of a region, a line type or a part
extern const struct shape file_stem_shape;      // of a plan or set
extern const struct shape expression_shape, bits_shape;
extern const struct shape address_wire_shape, data_wire_shape;

// The values of a plan's keys.
extern const struct shape standard_shape, grade_shape, clock_shape, signals_shape, lines_shape, frame_shape, machine_shape, parts_shape,
	chips_shape, timing_shape, sweeps_shape;
extern const struct shape lineless_machine_shape; // where a board has no lines: nothing else tells how many kinds there are
// What a line-frame machine's stage is, and a line or a frame stage's name.
extern const struct shape stage_shape, stage_word_shape;

// The three languages.
extern const struct shape plan_shape, board_shape, set_shape;

#endif
