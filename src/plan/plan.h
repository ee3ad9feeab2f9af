// A plan: what its text says, in exact values, with the place of everything that a later step may have to point at.
// Made by plan_read; never changed afterwards. All memory belongs to the plan's arena.
#ifndef SCANLATCH_PLAN_PLAN_H
#define SCANLATCH_PLAN_PLAN_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#include "base/diagnostics.h"
#include "base/fraction.h"
#include "catalogue/standards.h"

struct arena;
struct expression;
struct part;
struct catalogue;

#define LIMIT_STATE_BITS 24     // of a stage; with the kind bits where there are any
#define LIMIT_FEEDBACK_BITS 26  // of a machine: everything that its latches and counters hold
#define LIMIT_KIND_BITS 20
#define LIMIT_LINES 1048576
#define LIMIT_CELLS 16777216
#define LIMIT_SIGNALS 64
#define LIMIT_CHIPS 16
#define LIMIT_ADDRESS_PINS 26
#define LIMIT_DATA_PINS 16
#define LIMIT_BANK_BITS 8
#define LIMIT_FIELDS 24
#define LIMIT_REGIONS 1000000 // over all line types, derived ones included
#define LIMIT_LEAD_CELLS 1000000
#define LIMIT_CELL_TICKS 1000000

enum phase_kind { PHASE_FREE, PHASE_LINES, PHASE_FRAMES };

struct clock {
	struct fraction master_hz;     // > 0
	bool has_accuracy;
	struct fraction accuracy_ppm;  // >= 0
	int64_t dot_ticks;             // >= 1
	int64_t cell_ticks;            // >= 1: a normal cell
	int64_t stretch_ticks;         // extra ticks of a stretched cell; 0 if the plan has none
	bool has_subcarrier;
	struct fraction subcarrier_hz; // > 0
	enum phase_kind phase;         // PHASE_FREE where no subcarrier or no demand
	int64_t phase_count;           // every N lines or frames; >= 1
	struct place place;            // of `clock`
	struct place cell_place;       // of the values; of `clock` where a key is left out
	struct place stretch_place;
	struct place phase_place;
};

enum role {
	ROLE_PLAIN,
	ROLE_COMPOSITE_SYNC,
	ROLE_HORIZONTAL_SYNC,
	ROLE_VERTICAL_SYNC,
	ROLE_BLANKING,
	ROLE_BURST_GATE,
	ROLE_STRETCH,
	ROLE_COUNT
};

// The role as plans write it ("burst gate"). Cannot fail.
const char *role_name(enum role role);

enum machine_form { FORM_LOOP, FORM_LINE_FRAME };

// An EEPROM group with its latch or counter. A loop machine has the line stage alone.
enum stage { STAGE_LINE, STAGE_FRAME };
#define STAGE_COUNT 2

// The stage as plans write it ("line"). Cannot fail.
const char *stage_name(enum stage stage);

enum signal_origin { FROM_DATA, FROM_FIELD };

struct signal {
	const char *name;
	enum role role;
	bool active_high;
	int64_t lead_cells;           // may be negative
	enum stage stage;             // STAGE_LINE in a loop machine
	enum signal_origin origin;
	size_t field;                 // FROM_FIELD: index into machine.fields
	bool auto_codes;              // FROM_FIELD: the planner chooses
	const uint32_t *codes;        // FROM_FIELD with listed codes: ascending, distinct
	size_t code_count;
	struct place place;
};

struct hold {
	size_t field;
	const struct expression *expression;
	const char *text;             // of the expression
	struct place place;           // of the expression
};

enum length_kind { LENGTH_CELLS, LENGTH_TIME, LENGTH_FILL };
enum stretch_kind { STRETCH_COUNT, STRETCH_AUTO };

struct region {
	const char *name;
	enum length_kind length;
	int64_t cells;                // LENGTH_CELLS
	struct fraction ticks;        // LENGTH_TIME: the asked length, exact
	uint64_t assert_mask;         // bit s: signal s is asserted (the stretch signal only where asserted by name)
	enum stretch_kind stretch;
	int64_t stretch_cells;        // STRETCH_COUNT: the first N cells are stretched
	const struct hold *holds;
	size_t hold_count;
	struct place place;           // of the region (in a derived type: of the change, if there is one)
	struct place length_place;    // of the length's value
	struct place stretch_place;
};

// A line type with `like` and `change` already carried out.
struct line_type {
	const char *name;
	bool has_cells;
	int64_t cells;                // as asked by `cells:`
	struct region *regions;
	size_t region_count;
	struct place place;
	struct place cells_place;
};

struct block {
	int64_t repeat;               // >= 1
	size_t line_type;
	struct place place;
};

enum advance { ADVANCE_TABLE, ADVANCE_COUNT };
enum clear_kind { CLEAR_SYNC, CLEAR_ASYNC };
enum outputs { OUTPUTS_REGISTERED, OUTPUTS_DIRECT };

struct field {
	const char *name;
	unsigned high, low;           // state bits, high >= low
	struct place place;
};

struct stage_plan {
	unsigned state_bits;          // 1 … 24
	enum outputs outputs;
	enum advance advance;
	enum clear_kind clear;        // meaningful with ADVANCE_COUNT
	struct place place;           // of the number of state bits
};

struct machine_plan {
	enum machine_form form;
	struct stage_plan line;       // a loop machine's only stage
	struct stage_plan frame;      // FORM_LINE_FRAME only
	unsigned kind_bits;           // 0 for a loop machine
	struct field *fields;         // of the line stage's state
	size_t field_count;
	bool has_start;               // the line stage's state in the frame's first cell (line-frame: in every line's first cell)
	uint32_t start;
	struct place place;
	struct place start_place;
};

// How many stages a machine has. Cannot fail.
unsigned machine_stages(const struct machine_plan *machine);
// One of its stages. Cannot fail.
const struct stage_plan *machine_stage(const struct machine_plan *machine, enum stage stage);

enum address_wire_kind { ADDRESS_OPEN, ADDRESS_LOW, ADDRESS_HIGH, ADDRESS_STATE, ADDRESS_KIND, ADDRESS_BANK };
enum data_wire_kind { DATA_OPEN, DATA_NEXT, DATA_KIND, DATA_STEP, DATA_CLEAR, DATA_SIGNAL };

struct address_wire {
	enum address_wire_kind kind;
	unsigned index;               // state, kind or bank bit
};

struct data_wire {
	enum data_wire_kind kind;
	unsigned index;               // next or kind bit, or index of the signal
};

struct chip {
	const char *label;
	enum stage stage;             // whose address it sees
	const struct part *part;      // the catalogue's or the plan's own
	struct fraction access_s;     // access time in seconds
	struct address_wire address[LIMIT_ADDRESS_PINS]; // A0 first; pins beyond the part's are ADDRESS_OPEN
	struct data_wire data[LIMIT_DATA_PINS];          // D0 first
	struct place place;
};

// Times of the parts around the EEPROM, in seconds.
struct timing {
	const char *latch_part, *decoder_part;
	const char *counter_part[STAGE_COUNT];
	struct fraction latch_delay_s, latch_setup_s;
	struct fraction counter_delay_s[STAGE_COUNT], counter_setup_s[STAGE_COUNT];
	struct fraction decoder_delay_s;
	struct fraction share;        // of the shortest cell, 0 < share <= 1
	struct fraction margin_s;
};

struct sweep {
	unsigned high, low;           // state bits
	const char *text;             // as the plan writes the bits
	struct fraction within_s;
	struct place place;
};

struct plan {
	struct arena *arena;
	const struct source *source;
	const char *file_name;        // the plan's file name without its folder, or "standard input"; UTF-8 that can be printed
	uint32_t source_crc32;
	const char *name;
	const char *note;             // "" if none
	const struct standard *standard; // to measure against, the catalogue's or made of the plan's own limits; NULL if none
	enum limit_grade grade;       // whose verdict counts; monitor where the plan does not say
	struct clock clock;
	struct signal *signals;
	size_t signal_count;
	int role_signal[ROLE_COUNT];  // index of the signal with a role, -1 if none (ROLE_PLAIN: always -1)
	struct line_type *lines;
	size_t line_count;
	struct block *blocks;
	size_t block_count;
	struct machine_plan machine;
	unsigned bank_bits;           // highest bank.N wired, plus one; 0 if no pin is wired to a bank
	struct chip *chips;
	size_t chip_count;
	struct timing timing;
	struct sweep *sweeps;
	size_t sweep_count;
};

// Reads a plan from a source whose bytes are loaded; the source must outlive the plan. Reports every error it can.
// Returns NULL if there was any error (or memory is out); otherwise the plan, freed with plan_destroy.
struct plan *plan_read(const struct source *source, const struct catalogue *catalogue, struct diagnostics *diagnostics);
// The same for a board, a file with everything but lines and frame: its plan has no line types and no blocks. A plan is a board
// too; its lines and frame are not read, but its line types are counted for the kind's bits.
struct plan *board_read(const struct source *source, const struct catalogue *catalogue, struct diagnostics *diagnostics);
void plan_destroy(struct plan *plan);

// Signals with origin FROM_DATA, in the order of `signals`; the word is next (or clear), then these.
bool signal_is_data(const struct signal *signal);

// The value of a field in a state. Cannot fail.
uint32_t field_value(const struct field *field, uint32_t state);
// Bit mask of a field in the state. Cannot fail.
uint32_t field_mask(const struct field *field);

#endif
