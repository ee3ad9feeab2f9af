// The tick divider in words and in JSON.
#ifndef SCANLATCH_VIEW_DIVIDER_H
#define SCANLATCH_VIEW_DIVIDER_H

#include <jansson.h>

struct clock;
struct divider;
struct text;

// Puts the sequence of counts, the taps' levels at each (H, L; " .. " where counts are left out, " | " where a stretched cell
// goes on), where each tap comes from, and whether it stays in step. When memory is out, out->failed is set.
void view_divider(struct text *out, const struct clock *clock);

// In words, without line breaks: the counts, where the dots come from, where the subcarrier (if there is one) comes from.
void put_divider_counts(struct text *words, const struct divider *divider);
void put_dot_words(struct text *words, const struct divider *divider);
void put_subcarrier_words(struct text *words, const struct divider *divider);

// The same as
//   { "cell_counts": how many ticks; with a stretch "stretched_cell_counts", and "lengthens": the count after which a
//       stretched cell goes on,
//     "bits": of the counter,
//     "dot": { "from": "master", "counter" or "divider", "period_ticks", "cell_cycles",
//       with a stretch "stretched_cell_cycles", "in_step" },
//     "subcarrier" (if there is one): the same, but "from" may be "oscillator" too, and besides "cell_phase",
//       with a stretch "stretched_cell_phase": by what part of a cycle its phase at the cells' starts moves,
//     "sequence": [ { "first", "last": counts, "stretched": only in a stretched cell,
//       "dot", "subcarrier": "HHLL…" (of taps that have levels) } ] }
// Exact values are strings: ticks, counts and fractions; fractions are left out where they do not fit 64 bits. A long
// sequence has only its ends. A new reference; NULL when memory is out.
json_t *view_divider_json(const struct clock *clock);

#endif
