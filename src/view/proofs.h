// The results of the proofs for people and for programs. Everywhere, lines and cells are counted from 0, as in plans.
#ifndef SCANLATCH_VIEW_PROOFS_H
#define SCANLATCH_VIEW_PROOFS_H

#include <jansson.h>
#include <stdbool.h>

#include "proof/proof.h"

struct text;

// More runs of lines than that come of faults or of plans beyond use; a manifest stays small.
#define COLOUR_RUNS 256

// Puts a line for each proof, in the order of enum proof_kind: the verdict, the proof's name and its figures in words,
// wrapped to 100 characters. Verdicts: "pass"; "FAIL", a must that failed; "miss", advice that failed; "none", the plan does
// not ask. The details of a failure follow it, indented. With `colour`, verdicts are coloured by ANSI codes. A last line says
// from where lines and cells are counted, if any is named. When memory is out, out->failed is set.
void view_proofs(struct text *out, const struct proofs *proofs, bool colour);

// The same for one proof, without that last line.
void view_proof(struct text *out, const struct proofs *proofs, enum proof_kind kind, bool colour);

// Puts that last line if a line is named.
void view_counting(struct text *out, const struct proofs *proofs);

// Puts a line of the same form for a must that follows from proofs: `words` say what.
void view_must(struct text *out, const char *name, bool kept, const char *words, bool colour);

// The results as an object with a key for each proof, in the order of enum proof_kind. A new reference, owned by the caller;
// NULL when memory is out. Every proof has
//   "verdict": "pass", "fail" or "absent" (the plan does not ask), "must": true or false (advice)
//   "reason": why, in words          only where it could not be judged; then it has no further keys
//   "counterexample": {…}            only where it failed and there is one
// and its figures, which an absent proof does not have.
//
// Values: counts, states, addresses, bytes, codes and bits are integers. TICKS and exact fractions are strings such as
// "238944" or "455/2". For a time NAME, "NAME_s" is the exact fraction of a second and "NAME_ms" or "NAME_ns" the number in
// that unit; for any other fraction NAME, "NAME" is exact and "NAME_rounded" the decimal. Rounded numbers have at most 6
// decimals and are reals.
//
// STATE is "state"; in a line-frame machine also "stage": "line" or "frame" and, of the line stage, "kind". A whole state ("start_state",
// "longest_state", …) is an integer, or there { "H", "step", "kind", "V" } without what is not latched; a "bit" there goes with "part",
// one of these four.
//
// PLACE is five keys: "line" (in the frame), "line_type" (its name), "cell" (in the line), "region" (its name), "frame_cell"
// (in the frame).
//
//   "closure":  { "lines", "cells", "ticks": TICKS (as the machine takes them), time frame (_s, _ms; left out if it does not
//                 fit a fraction of 64 bits), "period_cells" (the states run through so many cells; 0: they never come
//                 back), "start_state", "banks" }
//   "signals":  { "comparisons", "held_comparisons", "codes": { NAME: [code, …] of every signal decoded from the state } }
//   "colour":   { "uniform": all lines have the same number of cycles, fractions cycles_per_line (of the first line) and
//                 cycles_per_frame, "repeats_lines", "repeats_frames" (what does not fit 64 bits is left out), "phases": PHASES,
//                 "out_of_step": { "line", "frame": 0 for the first, "by": fraction of a cycle } (the first line whose start has not
//                 the phase that is asked for; left out if there is none), "asked": "free", "every line", "every 2 frames", … }
//   "power-up": { "states" (in all banks), "frame_states" (in one), "cleared_states" (in all banks: fall to 0 at once, by an
//                 async clear), "longest_cells", fraction longest_lines, "longest_ticks": TICKS, time longest (_s, _us; left out if it does not fit), "longest_state",
//                 "longest_bank", "lost_states", and if some are lost "second_loop": { "state", "cells" } }
//   "upset":    { "upsets", "worst_cells", "worst": { PLACE, "bit" }, fraction mean_cells, "worst_slip_cells", fraction
//                 worst_slip_lines, "worst_slip": { PLACE, "bit" }, fraction mean_slip_cells }
//   "limits":   { "standard": its name ("own" for limits of the plan's own alone), "own_limits": how many items have limits of the
//                 plan's own, "grade", "kept", "missed", "not_measured": { "studio", "monitor" }: how many of the limits that bind,
//                 "items": [ { "item", "unit": of all values below, which are exact, beside NAME_rounded; polarities are 1 or -1,
//                 "low", "high": measured over the frame, "accuracy_low", "accuracy_high" (where the clock's accuracy widens
//                 them), "low_at", "high_at": { PLACE } where the first of them begins, or in place of all these
//                 "not_measured": why, in words; "studio", "monitor": { "nominal", "low", "high" (those that there are; list standards has their sources),
//                 of the picture's middle "offset_low", "offset_high" (measured less nominal),
//                 and if one of low and high is there "kept", "margin" (to the nearer bound; below zero: missed by so much),
//                 "share" (of the tolerance; not where low is high), "move": what would keep it, if whole cells do: { "what":
//                 "edge", "picture" or "line length", "cells" (later, or longer; negative: earlier, shorter), "line_type", of an
//                 edge "after_region", "before_region": between which it is } } } ],
//                 "no_vertical_sync": true (only where it never comes, though there is a signal for it: then limits fails),
//                 "fields": the first 16, from 0V to 0V [ { "begins": "at a line" or "half way through a line",
//                 "lines_without_burst": [[first, last], …] by the standard's numbers (if it numbers lines) } ],
//                 "burst_pauses_kept": these are the standard's (the same) }
//   "glitches": { "decoded": signals are decoded from the state, "edges", "multi_bit_edges", "disturbed": [ { "signal",
//                 "edges", PLACE of the cell that the first of them begins, "from_state", "to_state", "from_code",
//                 "between_code", "to_code" } ], if decoded time settle (_s, _ns) from an edge until decoded pins have their
//                 level (clear_unsettled later where an async clear strikes), "direct": data outputs are direct, and if so
//                 time unsettled (_s, _ns) and "unsettled_chip": its label, "async_clear": clear goes straight into an
//                 asynchronous pin, and if so time clear_unsettled (_s, _ns) and "clear_chip": its label, and "passing": { STATE that
//                 falls to 0 at once, "spikes": [direct signals that spike meanwhile] }; in a line-frame machine these are the line
//                 stage's, and "frame": { the same keys of the frame stage } }
//   "speed":    { "of": "cell" or "line" (the frame stage's own way), times cell (or line), available, delay (of the
//                 first look-up) and access (of the slowest), setup, margin, needed, slack (_s, _ns), "passes": [ { "chip": label of the slowest, "counter": a counter holds the address, times
//                 delay (0 where the address is another chip's answer), access } ], one look-up after the other }
//   "sweep":    { "sweeps": [ { "bits": as the plan has them, "kept": true or false, "values", "missing", and if some are
//                 "first_missing", times worst_gap and within (_s, _ms), "worst_value" } ] }
//
// PHASES: the phase of the subcarrier at the start of each line, relative to line 0, as an exact fraction of a cycle from 0 to below
//   1: { "period": lines after which lines advance the phase alike again (it divides the frame's), "advance": of so many lines,
//   "runs": [ { "line": the first of the period, "lines", "phase": at the start of the first, "advance": of each } ] of a period, in
//   order and without gaps, "more_runs": how many are left out after the first COLOUR_RUNS, if any }.
//   Line L, counted on through all frames from 0, lies in the run that holds line L modulo period, and starts at
//   (whole periods before L) × advance + the run's phase + (L modulo period - the run's line) × the run's advance, less whole cycles.
//   After repeats_lines all of it repeats.
//
// counterexample: { "what": in words, with expected and found, "bank", "hint" (what may help, if
//   something is known), PLACE (not of power-up), STATE (whose row was read; left out where
//   there are no images, and where the fault may follow from the earlier one of another proof), "signal": its name, if a pin is
//   wrong, and if a byte is to blame "chip": label, "address", "byte" (of a 16-bit chip: the word, and its address counts words) }.
//   One without a place or state has "what" and "bank" only.
json_t *view_proofs_json(const struct proofs *proofs);

// The object of one proof. A new reference; NULL when memory is out.
json_t *view_proof_json(const struct proofs *proofs, enum proof_kind kind);

#endif
