// A set, or a plan alone: what is said of all banks together. Each plan of a set has proofs of its own, for the banks that show it.
#ifndef SCANLATCH_VIEW_SET_H
#define SCANLATCH_VIEW_SET_H

#include <jansson.h>
#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#include "proof/proof.h"

struct set;
struct text;

// What is shown. `set` is NULL for a plan alone; then there is one member.
struct set_view {
	const struct set *set;
	const struct proofs *const *proofs; // [count]: of each listed bank's plan
	size_t count;
};

// Whether the machine comes home whatever the jumpers do: its latches and counters are the same in all banks, so that a change of the
// jumpers only takes it to some state of another bank, and power-up has followed every state of every bank. Cannot fail.
bool set_comes_home(const struct set_view *view);

// Whether a proof that is advice fails in any bank. Cannot fail.
bool set_misses(const struct set_view *view, enum proof_kind kind);

// Puts "bank 0: NAME (FILE)", "banks 2 and 3: …" for a plan of a set and the banks that show it.
void view_banks(struct text *out, const struct plan *plan, const uint32_t *banks, size_t count);

// Puts the report: of a set, each plan's under a heading, and a line on the jumpers last. When memory is out,
// out->failed is set.
void view_set_proofs(struct text *out, const struct set_view *view, bool colour);

// { "name": of the plan or set, "failed": true if a must failed, "missed": [names of advice that fails], and for a plan "proofs": see
// view/proofs.h, for a set "banks": [ { "banks": [number…], "name", "plan": { "file", "crc32" }, "proofs" } ] and "jumpers": "pass" or
// "fail": whether the machine comes home when they change }. A new reference; NULL when memory is out.
json_t *view_set_json(const struct set_view *view);

// The manifest that `build` writes beside the images:
//   { "format": 1, "name",
//     "plan": { "file", "crc32" },
//     "chips": [ { "label", "part", "bytes", "crc32", "sum16", "files": [NAME…], "stage": "line" or "frame" (of a line-frame machine),
//                  "address": [wire…], "data": [wire…]: see view/chips.h } ],
//     "start": [ { "bank", "stage": "loop", "line" or "frame", "state" } ],
//     "frame": { "lines", "cells", "ticks" (string), "rate": { "fraction" (Hz), "decimal" } },
//     "proofs": see view/proofs.h }
// For a set, "plan" is the set's file, and instead of "frame" and "proofs" there is
//     "banks": [ { "banks": [number…], "name", "plan": { "file", "crc32" }, "frame", "proofs" } ]
// and "jumpers" as above. `files`: bit 0 .bin, bit 1 .hex. A new reference; NULL when memory is out.
json_t *view_manifest(const struct set_view *view, const struct image *images, unsigned files);

#endif
