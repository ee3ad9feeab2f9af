// Inside the plan reader: what its parts share. One file reads each top-level key.
#ifndef SCANLATCH_PLAN_READ_H
#define SCANLATCH_PLAN_READ_H

#include "catalogue/catalogue.h"
#include "plan/characters.h"
#include "plan/document.h"
#include "plan/plan.h"
#include "plan/quantity.h"

struct reader {
	struct arena *arena;
	struct plan *plan;
	const struct catalogue *catalogue;
	struct diagnostics *diagnostics;
	bool clock_known;    // clock was read without errors: times can become ticks
	bool machine_known;  // state bits, fields and word are known: codes, holds and wires can be checked
	bool signals_known;  // every signal was read without errors: the word is known
	bool line_frame;     // the form is one that this version refuses: what follows from it is not judged
	const struct part *own_parts;  // of `parts:`
	size_t own_part_count;
	size_t region_count;           // over all line types, kept within LIMIT_REGIONS
};

// KEY_UNUSED: a slot of the table that this kind of mapping does not have.
enum key_need { KEY_OPTIONAL, KEY_REQUIRED, KEY_LATER, KEY_UNUSED };

// A key of a mapping. The tables of keys are the language's grammar.
struct key {
	const char *name;
	enum key_need need;
};

#define COUNT_OF(array) (sizeof(array) / sizeof((array)[0]))

// Sorts a mapping's values into values[count] by the table (NULL: absent); reports unknown, missing and later keys. `what` names the mapping in
// messages ("a region"). False, with values all NULL, if node is not a mapping.
bool read_mapping(struct reader *reader, const struct node *node, const char *what, const struct key *keys, size_t count,
                  const struct node **values);

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
// A quantity of one of the dimensions whose bits (1u << dimension) are in `allowed`.
bool read_quantity(struct reader *reader, const struct node *node, const char *what, unsigned allowed, struct quantity *result);
// A time in seconds; `positive`: zero is an error. Never negative.
bool read_time(struct reader *reader, const struct node *node, const char *what, bool positive, struct fraction *seconds);
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

// The parts of a plan. Each reports its errors and leaves defaults where it found any.
void read_clock(struct reader *reader, const struct node *node);
void read_signals(struct reader *reader, const struct node *node);
void read_machine(struct reader *reader, const struct node *node);
void read_lines(struct reader *reader, const struct node *node);
void read_frame(struct reader *reader, const struct node *node);
void read_own_parts(struct reader *reader, const struct node *node);
void read_chips(struct reader *reader, const struct node *node);
void read_timing(struct reader *reader, const struct node *node);
void read_sweeps(struct reader *reader, const struct node *node);

// The word's bits in their order: next.0 … or clear, then the data signals. Puts them into word[LIMIT_STATE_BITS + LIMIT_SIGNALS] and
// returns how many there are. Cannot fail.
size_t word_of(const struct plan *plan, struct data_wire *word);

// The wires of a chip in the long form.
void read_address_wires(struct reader *reader, const struct node *node, struct chip *chip);
void read_data_wires(struct reader *reader, const struct node *node, struct chip *chip);
// Whether a bit of the word is on two pins; with `all_known`, every chip could be read, and what is on none is told too.
void check_data_doubled(struct reader *reader, const struct node *chips, bool all_known);
// Whether every bit of the word and the banks is wired. Every chip must have been read without errors.
void check_word_wired(struct reader *reader, const struct node *chips);

// Looks up names. SIZE_MAX if there is none.
size_t find_signal(const struct plan *plan, const char *name);
size_t find_field(const struct plan *plan, const char *name);

#endif
