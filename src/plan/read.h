// Inside the plan reader: what its parts share. One file reads each top-level key.
#ifndef SCANLATCH_PLAN_READ_H
#define SCANLATCH_PLAN_READ_H

#include "catalogue/catalogue.h"
#include "plan/characters.h"
#include "plan/document.h"
#include "plan/grammar.h"
#include "plan/plan.h"
#include "plan/quantity.h"
#include "plan/set.h"

struct reader {
	struct arena *arena;
	struct plan *plan;
	const struct catalogue *catalogue;
	struct diagnostics *diagnostics;
	bool clock_known;    // clock was read without errors: times can become ticks
	bool form_known;     // what belongs to one form of machine only can be judged
	bool machine_known;  // the line stage's state bits and fields are known: codes and holds can be checked
	bool signals_known;  // every signal was read without errors: the data signals are known
	bool words_known;    // each stage's state, kind and way to advance are known: with the signals, so is its word
	bool board;          // what is read is a board: lines and frame may be left out and are passed over
	const struct node *kind;       // of a line-frame machine; NULL if the plan does not say it
	const struct set *set;         // that the plan is of; NULL if it is of none
	size_t bank;                   // of the set's listed banks
	unsigned set_bits;             // its ; 0 without a set
	const struct part *own_parts;  // of `parts:`
	size_t own_part_count;
	size_t region_count;           // over all line types, kept within LIMIT_REGIONS
};

// A key that belongs to another place, and a hint that says to which.
struct stray_key {
	const char *name;
	const char *hint;
};

// Sorts a mapping's values into values[count] by the table (NULL: absent); reports unknown and missing keys. `what` names the mapping in
// messages ("a region"). False, with values all NULL, if node is not a mapping. Where a key stands that belongs elsewhere, none is
// reported as missing.
bool read_mapping(struct reader *reader, const struct node *node, const char *what, const struct key *keys, size_t count,
                  const struct node **values);

// Reports the keys of a mapping that belong elsewhere; of those that follow each other with the same hint, the first. False if
// there was any; true for what is no mapping.
bool report_elsewhere(struct reader *reader, const struct node *node, const char *what, const struct stray_key *strays, size_t count);

// True if node is of the kind; else reports "WHAT: wanted a list, found …".
bool expect_kind(struct reader *reader, const struct node *node, enum node_kind kind, const char *what);

// The same for a list of single values: adds the hint "write [VALUE]" for one that stands alone.
bool expect_values(struct reader *reader, const struct node *node, const char *what);

// True if a mapping has an unknown key that seems to mean keys[wanted]: then that one is not missing too. Cannot fail.
bool key_is_misspelt(const struct node *mapping, const struct key *keys, size_t count, size_t wanted);

// Each read_… below returns false after reporting, and then leaves *result as it was. `what` names the value in messages.
bool read_scalar(struct reader *reader, const struct node *node, const char *what, const char **result);
bool read_whole(struct reader *reader, const struct node *node, const char *what, int64_t least, int64_t most, int64_t *result);
bool read_truth(struct reader *reader, const struct node *node, const char *what, bool *result);
// One of `count` words; *result is its index.
bool read_choice(struct reader *reader, const struct node *node, const char *what, const char *const *words, size_t count,
                 size_t *result);
// line or frame.
bool read_stage_word(struct reader *reader, const struct node *node, enum stage *result);
// A quantity of one of the dimensions whose bits (1u << dimension) are in `allowed`.
bool read_quantity(struct reader *reader, const struct node *node, const char *what, unsigned allowed, struct quantity *result);
// A number of bits from `least` to `most`.
bool read_bit_count(struct reader *reader, const struct node *node, const char *what, int64_t least, int64_t most, unsigned *bits);
// A time in seconds; `positive`: zero is an error. Never negative.
bool read_time(struct reader *reader, const struct node *node, const char *what, bool positive, struct fraction *seconds);

// The same by the key whose value the node is; NULL is no value: false, with nothing reported. Choices, ranges and units are those of
// its shape, which must be of the kind.
bool key_whole(struct reader *reader, const struct key *key, const struct node *node, int64_t *result);
bool key_truth(struct reader *reader, const struct key *key, const struct node *node, bool *result);
bool key_choice(struct reader *reader, const struct key *key, const struct node *node, size_t *result);
bool key_quantity(struct reader *reader, const struct key *key, const struct node *node, struct quantity *result);
bool key_bit_count(struct reader *reader, const struct key *key, const struct node *node, unsigned *bits);
bool key_time(struct reader *reader, const struct key *key, const struct node *node, struct fraction *seconds);

// A bit range within a word of `bits` bits.
bool read_bits(struct reader *reader, const struct node *node, const char *text, const char *what, unsigned bits, unsigned *high,
               unsigned *low);

// Checks names of signals and fields. False after reporting.
bool check_identifier(struct reader *reader, const struct node *node, const char *what);
// Checks names of regions and line types: printable, 1 to 40 characters, no quotes.
bool check_printable_name(struct reader *reader, const struct node *node, const char *what);

// The candidate nearest to a misspelt word, or NULL if none is near; none is near a number.
const char *nearest_word(const char *word, const char *const *candidates, size_t count);
// Adds the hint "did you mean …" for a misspelt word, or, if none is near, lists the candidates.
void hint_words(struct reader *reader, const char *word, const char *const *candidates, size_t count);

// An array in the plan's arena; reports and returns NULL when memory is out.
void *reader_array(struct reader *reader, size_t count, size_t size);

// What plans and sets have in common. The version is 1; `what` is its key.
void read_version(struct reader *reader, const struct node *node, const char *what);
// A name that begins file names; false after reporting.
bool read_file_stem(struct reader *reader, const struct node *node, const char **name);
// The note, "" where the node is NULL or wrong.
const char *read_note(struct reader *reader, const struct node *node);
// True if a document is a set. Cannot fail.
bool node_is_set(const struct node *root);
// A path without its folders, printable as messages have it: a file's name may be any bytes, but JSON is UTF-8 (RFC 8259,
// section 8.1). In the arena; NULL when memory is out.
const char *printable_base_name(struct arena *arena, const char *path);

// The parts of a plan. Each reports its errors and leaves defaults where it found any.
void read_plan_standard(struct reader *reader, const struct node *standard, const struct node *grade); // NULL where absent
void read_clock(struct reader *reader, const struct node *node);
void read_signals(struct reader *reader, const struct node *node);
void read_machine(struct reader *reader, const struct node *node);
// The values of a stage's keys; NULL where they are absent.
struct stage_nodes {
	const struct node *state, *outputs, *advance, *clear;
};

// Sorts the keys of a line-frame machine's stage. Reports; then leaves *nodes as it was.
void read_stage_nodes(struct reader *reader, const struct node *node, enum stage stage, struct stage_nodes *nodes);
// Each reads a part of a stage; a node that is NULL leaves the default.
void read_state_bits(struct reader *reader, const struct node *node, struct stage_plan *stage);
void read_outputs(struct reader *reader, const struct node *node, struct stage_plan *stage);
// False if it is not known how the stage advances.
bool read_advance(struct reader *reader, const struct stage_nodes *nodes, enum stage stage);

void read_lines(struct reader *reader, const struct node *node);
// Settles how many kind bits a line-frame machine has, once the line types are counted, and whether it keeps within its limits.
void settle_kinds(struct reader *reader);
void read_frame(struct reader *reader, const struct node *node);
void read_own_parts(struct reader *reader, const struct node *node);
// A part of the plan's own or the catalogue's, by `part`, and its access time, by `speed` (NULL: its slowest grade). NULL after
// reporting.
const struct part *read_chip_part(struct reader *reader, const struct node *name, const struct node *speed, struct fraction *access_s);
// True if a part has the address pins of a stage; else reports it at `name`.
bool check_part_size(struct reader *reader, const struct node *name, const struct part *part, enum stage stage);
void read_chips(struct reader *reader, const struct node *node);
void read_timing(struct reader *reader, const struct node *node);
void read_sweeps(struct reader *reader, const struct node *node);

// A stage's word, bit by bit: next.0 … (or nothing, if it counts), kind.0 … or step, clear, then the data signals. Puts the bits
// into word[LIMIT_WORD_BITS] and returns how many there are. Cannot fail.
#define LIMIT_WORD_BITS (LIMIT_STATE_BITS + LIMIT_KIND_BITS + 2 + LIMIT_SIGNALS)
size_t word_of(const struct plan *plan, enum stage stage, struct data_wire *word);

// The bits that address a stage, lowest first: state.0 …, kind.0 … for the line stage, then so many bank bits. Puts them into
// bits[LIMIT_ADDRESS_BITS] and returns how many there are. Cannot fail.
#define LIMIT_ADDRESS_BITS (LIMIT_STATE_BITS + LIMIT_KIND_BITS + LIMIT_BANK_BITS)
size_t address_of(const struct plan *plan, enum stage stage, unsigned bank_bits, struct address_wire *bits);

// What plans call a wire ("next.3"); numbered ones are put into `name`. Cannot fail.
#define WIRE_NAME_BYTES 24
const char *data_wire_name(const struct plan *plan, struct data_wire wire, char name[WIRE_NAME_BYTES]);
const char *address_wire_name(struct address_wire wire, char name[WIRE_NAME_BYTES]);

// The wires of a chip in the long form, whose stage is known.
void read_address_wires(struct reader *reader, const struct node *node, struct chip *chip);
void read_data_wires(struct reader *reader, const struct node *node, struct chip *chip);
// Whether a bit of a word is on two pins; with `all_known`, every chip could be read, and what is on none is told too.
void check_data_doubled(struct reader *reader, const struct node *chips, bool all_known);
// Whether every bit of the words and the banks is wired. Every chip must have been read without errors.
void check_word_wired(struct reader *reader, const struct node *chips);

// Looks up names. SIZE_MAX if there is none.
size_t find_signal(const struct plan *plan, const char *name);
size_t find_field(const struct plan *plan, const char *name);

#endif
