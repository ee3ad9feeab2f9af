// Faults of the states: collected by the attempts to find them, put into words once the last attempt has failed.
// For the table's own use.
#ifndef SCANLATCH_TABLE_FAULTS_H
#define SCANLATCH_TABLE_FAULTS_H

#include "table/constraints.h"

#define FAULTS_OF_A_RULE 5
#define FAULTS_LIMIT 40
#define NO_SUBJECT SIZE_MAX

struct fault {
	enum rule rule;
	uint32_t cell;      // of the period; NO_CELL: the machine as a whole
	uint32_t other;     // a second cell, or NO_CELL
	size_t field;       // index of a field, or NO_SUBJECT
	size_t signal;      // index of a signal, or NO_SUBJECT
	uint32_t state;     // NO_STATE where there is none
	uint32_t needed;    // a count, 0: not known; for a value: what was expected
	uint32_t available; // a count; for a value: what was found
	bool proved;        // codes of which no count is known: that there are none, not only that none were found
};

struct faults {
	struct fault list[FAULTS_LIMIT];
	size_t count;
	bool memory_out;
};

// A fault that names a cell and nothing else. Cannot fail.
struct fault fault_at(enum rule rule, uint32_t cell);

// Adds a fault, unless FAULTS_OF_A_RULE of its rule are there. Cannot fail.
void faults_add(struct faults *faults, struct fault fault);

// True if further faults of this rule will not be added. Cannot fail.
bool faults_full(const struct faults *faults, enum rule rule);

// Notes that memory is out; returns false.
bool faults_memory(struct faults *faults);

// Turns the faults into diagnostics. In a line-frame machine the timeline has each line type once; `pins` are what its cells
// show.
void faults_report(const struct faults *faults, const struct timeline *timeline, const uint64_t *pins,
                   struct diagnostics *diagnostics);

#endif
