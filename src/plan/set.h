// A set: several plans in the same chips, one a bank, chosen by jumpers on address pins that no plan uses.
// Made by set_read; never changed afterwards. All memory belongs to the set's arena. Reading the files that it names is the caller's.
#ifndef SCANLATCH_PLAN_SET_H
#define SCANLATCH_PLAN_SET_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#include "plan/plan.h"

// A bank that the set lists.
struct set_bank {
	unsigned number;      // 0 … 2^bank_bits - 1
	const char *path;     // of its plan, as the set has it; relative to the set's folder, which no step of it leaves
	struct place place;   // of the path in the set
};

struct set {
	struct arena *arena;
	const struct source *source;
	const char *file_name;        // the set's file name without its folder, as in struct plan
	uint32_t source_crc32;
	const char *name;
	const char *note;             // "" if none
	unsigned bank_bits;           // 1 … LIMIT_BANK_BITS
	const struct set_bank *banks; // by ascending number; the first is bank 0
	size_t bank_count;            // 1 … 2^bank_bits
};

// True if a source is a set's and not a plan's. What is not well-formed is no set: plan_read then says what is wrong. Cannot fail.
bool source_is_set(const struct source *source);

// Reads a set from a source whose bytes are loaded and that is one; the source must outlive the set. Reports every error it can.
// Paths are judged by their text: absolute ones, and those with a step "..", are refused; a symbolic link below the set's
// folder may lead anywhere, as it was put there by whoever owns the folder. Returns NULL if there was any error (or memory is
// out); otherwise the set, freed with set_destroy.
struct set *set_read(const struct source *source, struct diagnostics *diagnostics);
void set_destroy(struct set *set);

// The path of a listed bank's plan, as seen from where the set's own path is: its folder is that of the source's name. In the
// arena; never "-", which would be standard input. NULL when memory is out.
const char *set_bank_path(struct arena *arena, const struct set *set, size_t bank);

// The listed bank (an index) that a bank's number shows: its own, or bank 0's where it is not listed. Cannot fail.
size_t set_bank_shown(const struct set *set, unsigned number);

// Reads the plan of a listed bank like plan_read. In the short form of chips the set's bank bits follow on the address pins; in the
// long form each must be wired, and no others. A set in a plan's place, this one or another, is refused.
struct plan *plan_read_for_set(const struct source *source, const struct catalogue *catalogue, const struct set *set, size_t bank,
                               struct diagnostics *diagnostics);

// True if the plans of a set's listed banks (bank_count of them, in that order) agree on the form of the machine, its stages and
// words, the signals decoded from fields, the chips and their wiring. The codes that the planner chooses for codes: auto are not known
// here: where both plans have it, they may still come out different. The first difference of each plan from bank 0's is reported.
bool set_plans_agree(const struct set *set, const struct plan *const *plans, struct diagnostics *diagnostics);

#endif
