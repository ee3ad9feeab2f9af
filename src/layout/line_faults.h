// Faults of line types. Types that derive from each other share places of the plan, so that one mistake there may show in
// many of them: faults are collected, and each place is reported once for each rule, naming the other line types.
#ifndef SCANLATCH_LAYOUT_LINE_FAULTS_H
#define SCANLATCH_LAYOUT_LINE_FAULTS_H

#include "base/diagnostics.h"

struct arena;
struct line_type;
struct line_faults;
struct line_fault;

// An empty collection in the arena; NULL when memory is out. The arena must outlive line_faults_report.
struct line_faults *line_faults_create(struct arena *arena, struct diagnostics *diagnostics);

// Adds a fault of a line type, as diagnose does. If another line type has one of the same rule at the same place, the type
// is only noted there. NULL then, and where no more are kept; out of memory is diagnosed at once.
__attribute__((format(printf, 5, 6)))
struct line_fault *line_faults_add(struct line_faults *faults, enum rule rule, struct place place,
                                   const struct line_type *line, const char *format, ...);

// Like diagnose_also and diagnose_hint. A fault that is NULL is passed over. Hints follow in the order added.
__attribute__((format(printf, 4, 5)))
void line_fault_also(struct line_faults *faults, struct line_fault *fault, struct place place, const char *format, ...);
__attribute__((format(printf, 3, 4)))
void line_fault_hint(struct line_faults *faults, struct line_fault *fault, const char *format, ...);

// Hands all faults that wait to the diagnostics, in the order added.
void line_faults_report(struct line_faults *faults);

#endif
