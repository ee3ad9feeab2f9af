#include "layout/line_faults.h"

#include <stdarg.h>

#include "base/arena.h"
#include "base/text.h"
#include "plan/plan.h"

// As many as the diagnostics keep; what comes then is only counted there.
#define KEPT_LIMIT 1000
#define BUCKETS 1024
#define TYPES_NAMED 3

struct remark {
	struct remark *next;
	bool is_hint;
	struct place place;
	const char *message;
};

struct line_fault {
	struct line_fault *next;            // in the order added
	struct line_fault *next_in_bucket;
	enum rule rule;
	struct place place;
	const struct line_type *line;  // the last that has it
	const char *message;
	struct remark *remarks;
	struct remark **remarks_end;
	const struct line_type *others[TYPES_NAMED]; // that have it too
	size_t other_count;
};

struct line_faults {
	struct arena *arena;
	struct diagnostics *diagnostics;
	struct line_fault *first;
	struct line_fault **end;
	struct line_fault *buckets[BUCKETS]; // by place; also of those that were reported
	size_t count;
};

struct line_faults *line_faults_create(struct arena *arena, struct diagnostics *diagnostics)
{
	struct line_faults *faults = arena_alloc(arena, sizeof *faults);
	if (faults == NULL)
		return NULL;
	faults->arena = arena;
	faults->diagnostics = diagnostics;
	faults->end = &faults->first;
	return faults;
}

static struct line_fault **bucket_of(struct line_faults *faults, struct place place)
{
	return &faults->buckets[(place.line * 61u + place.column) % BUCKETS];
}

static bool same_place(struct place left, struct place right)
{
	return left.source == right.source && left.line == right.line && left.column == right.column;
}

// Notes the line type with a fault that is there already; a type of its own that has two of one place counts once.
static bool merge(struct line_faults *faults, enum rule rule, struct place place, const struct line_type *line)
{
	struct line_fault *fault = *bucket_of(faults, place);
	while (fault != NULL && (fault->rule != rule || !same_place(fault->place, place)))
		fault = fault->next_in_bucket;
	if (fault == NULL)
		return false;
	if (fault->line == line)
		return true;
	fault->line = line;
	if (fault->other_count < TYPES_NAMED)
		fault->others[fault->other_count] = line;
	fault->other_count++;
	return true;
}

static void report_memory(struct line_faults *faults)
{
	diagnose(faults->diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "memory is out");
}

// In the arena; NULL, after diagnosing it, when memory is out.
__attribute__((format(printf, 2, 0)))
static const char *format_message(struct line_faults *faults, const char *format, va_list arguments)
{
	struct text text = {0};
	text_vprintf(&text, format, arguments);
	const char *message = text.failed ? NULL : arena_copy(faults->arena, text_string(&text), text.length);
	text_release(&text);
	if (message == NULL)
		report_memory(faults);
	return message;
}

// Takes the message. NULL, after diagnosing it, when memory is out.
static struct line_fault *keep(struct line_faults *faults, enum rule rule, struct place place,
                               const struct line_type *line, const char *message)
{
	struct line_fault *fault = arena_alloc(faults->arena, sizeof *fault);
	struct line_fault **bucket = bucket_of(faults, place);
	if (fault == NULL) {
		report_memory(faults);
		return NULL;
	}
	*fault = (struct line_fault){.next_in_bucket = *bucket, .rule = rule, .place = place, .line = line,
	                             .message = message};
	fault->remarks_end = &fault->remarks;
	*bucket = fault;
	*faults->end = fault;
	faults->end = &fault->next;
	faults->count++;
	return fault;
}

struct line_fault *line_faults_add(struct line_faults *faults, enum rule rule, struct place place,
                                   const struct line_type *line, const char *format, ...)
{
	if (merge(faults, rule, place, line))
		return NULL;
	if (faults->count == KEPT_LIMIT) {
		line_faults_report(faults);
		diagnose(faults->diagnostics, rule, place, "beyond what is shown");
		return NULL;
	}
	va_list arguments;
	va_start(arguments, format);
	const char *message = format_message(faults, format, arguments);
	va_end(arguments);
	return message == NULL ? NULL : keep(faults, rule, place, line, message);
}

// Takes the message, unless it is NULL.
static void add_remark(struct line_faults *faults, struct line_fault *fault, bool is_hint, struct place place,
                       const char *message)
{
	if (message == NULL)
		return;
	struct remark *remark = arena_alloc(faults->arena, sizeof *remark);
	if (remark == NULL) {
		report_memory(faults);
		return;
	}
	*remark = (struct remark){.is_hint = is_hint, .place = place, .message = message};
	*fault->remarks_end = remark;
	fault->remarks_end = &remark->next;
}

void line_fault_also(struct line_faults *faults, struct line_fault *fault, struct place place, const char *format, ...)
{
	if (fault == NULL)
		return;
	va_list arguments;
	va_start(arguments, format);
	add_remark(faults, fault, false, place, format_message(faults, format, arguments));
	va_end(arguments);
}

void line_fault_hint(struct line_faults *faults, struct line_fault *fault, const char *format, ...)
{
	if (fault == NULL)
		return;
	va_list arguments;
	va_start(arguments, format);
	add_remark(faults, fault, true, (struct place){0}, format_message(faults, format, arguments));
	va_end(arguments);
}

static void note_others(struct diagnostics *diagnostics, const struct line_fault *fault)
{
	if (fault->other_count == 0)
		return;
	struct text names = {0};
	for (size_t index = 0; index < fault->other_count && index < TYPES_NAMED; index++)
		text_printf(&names, "%s\"%s\"", index == 0 ? "" : ", ", fault->others[index]->name);
	if (fault->other_count > TYPES_NAMED)
		text_printf(&names, " and %zu more", fault->other_count - TYPES_NAMED);
	diagnose_also(diagnostics, fault->others[0]->place, "and in line type%s %s", fault->other_count == 1 ? "" : "s",
	              text_string(&names));
	text_release(&names);
}

static void report_fault(struct diagnostics *diagnostics, const struct line_fault *fault)
{
	diagnose(diagnostics, fault->rule, fault->place, "%s", fault->message);
	for (const struct remark *remark = fault->remarks; remark != NULL; remark = remark->next) {
		if (remark->is_hint)
			diagnose_hint(diagnostics, "%s", remark->message);
		else
			diagnose_also(diagnostics, remark->place, "%s", remark->message);
	}
	note_others(diagnostics, fault);
}

void line_faults_report(struct line_faults *faults)
{
	for (const struct line_fault *fault = faults->first; fault != NULL; fault = fault->next)
		report_fault(faults->diagnostics, fault);
	faults->first = NULL;
	faults->end = &faults->first;
}
