#include "base/diagnostics.h"

#include <stdarg.h>
#include <stdlib.h>
#include <string.h>

#include "base/arena.h"
#include "base/excerpt.h"
#include "base/text.h"

// Where a diagnostic has no source, the program itself speaks.
#define PROGRAM_NAME "scanlatch"

// Whoever puts a value of the plan into a message shortens it, and this is room for what then remains but lists, which stand last.
// A plan made to annoy can have more faults than anybody reads.
#define MESSAGE_CHARACTERS 600
#define ENTRIES_LIMIT 1000

struct remark {
	struct remark *next;
	bool is_hint;          // else a second place
	struct place place;
	const char *message;
};

struct diagnostic {
	enum rule rule;
	struct place place;
	const char *message;
	size_t source_rank;    // sources in order of first use
	size_t sequence;       // order added
	struct remark *remarks;
	struct remark *last_remark;
};

// A source's name, in order of first use.
struct source_name {
	struct source_name *next;
	const char *name;
	size_t rank;
};

struct diagnostics {
	struct arena *arena;
	struct diagnostic **entries;
	size_t count;
	size_t capacity;
	size_t error_count;
	struct source_name *names; // the newest first
	bool memory_failed;        // a fixed out-of-memory diagnostic stands after the entries
	bool last_lost;            // the diagnostic added last was not kept
	size_t left_out;           // diagnostics beyond ENTRIES_LIMIT, counted only
	bool system_left_out;      // one of them was a refusal of the system
};

struct diagnostics *diagnostics_create(void)
{
	struct diagnostics *diagnostics = calloc(1, sizeof(*diagnostics));
	struct arena *arena = arena_create();
	if (diagnostics == NULL || arena == NULL) {
		free(diagnostics);
		arena_destroy(arena);
		return NULL;
	}
	diagnostics->arena = arena;
	return diagnostics;
}

void diagnostics_destroy(struct diagnostics *diagnostics)
{
	if (diagnostics == NULL)
		return;
	arena_destroy(diagnostics->arena);
	free(diagnostics->entries);
	free(diagnostics);
}

static const char *source_label(const struct source *source)
{
	return source == NULL || source->name == NULL ? PROGRAM_NAME : source->name;
}

static bool find_rank(struct diagnostics *diagnostics, const struct source *source, size_t *rank)
{
	const char *label = source_label(source);
	for (const struct source_name *name = diagnostics->names; name != NULL; name = name->next) {
		if (strcmp(name->name, label) == 0) {
			*rank = name->rank;
			return true;
		}
	}
	struct source_name *name = arena_alloc(diagnostics->arena, sizeof(*name));
	if (name == NULL)
		return false;
	name->rank = diagnostics->names == NULL ? 0 : diagnostics->names->rank + 1;
	name->name = label;
	name->next = diagnostics->names;
	diagnostics->names = name;
	*rank = name->rank;
	return true;
}

static bool reserve_entry(struct diagnostics *diagnostics)
{
	if (diagnostics->count < diagnostics->capacity)
		return true;
	size_t capacity = diagnostics->capacity == 0 ? 16 : diagnostics->capacity * 2;
	if (capacity > SIZE_MAX / sizeof(diagnostics->entries[0]))
		return false;
	struct diagnostic **entries = realloc(diagnostics->entries, capacity * sizeof(entries[0]));
	if (entries == NULL)
		return false;
	diagnostics->entries = entries;
	diagnostics->capacity = capacity;
	return true;
}

// The longest prefix of a message that is not too long and does not cut a character of UTF-8.
static size_t cut_length(const char *bytes, size_t length)
{
	size_t cut = 0, characters = 0;
	for (; cut < length && cut < 4 * MESSAGE_CHARACTERS; cut++) {
		characters += ((unsigned char)bytes[cut] & 0xC0u) != 0x80u;
		if (characters > MESSAGE_CHARACTERS)
			break;
	}
	return cut;
}

// In the arena; NULL when memory is out.
__attribute__((format(printf, 2, 0)))
static const char *format_message(struct arena *arena, const char *format, va_list arguments)
{
	struct text text = {0};
	text_vprintf(&text, format, arguments);
	const size_t length = cut_length(text_string(&text), text.length);
	const char *message = NULL;
	if (!text.failed && length == text.length)
		message = arena_copy(arena, text_string(&text), length);
	else if (!text.failed)
		message = arena_format(arena, "%.*s ...", (int)length, text_string(&text));
	text_release(&text);
	return message;
}

// Takes the message (NULL when memory was out). False when there is no memory for the diagnostic.
static bool add_entry(struct diagnostics *diagnostics, enum rule rule, struct place place, const char *message)
{
	struct diagnostic *entry = arena_alloc(diagnostics->arena, sizeof(*entry));
	size_t rank;
	if (message == NULL || entry == NULL || !find_rank(diagnostics, place.source, &rank) || !reserve_entry(diagnostics))
		return false;
	*entry = (struct diagnostic){.rule = rule, .place = place, .message = message, .source_rank = rank,
	                             .sequence = diagnostics->count};
	diagnostics->entries[diagnostics->count++] = entry;
	if (rule_row(rule)->severity == SEVERITY_ERROR)
		diagnostics->error_count++;
	return true;
}

static void leave_out(struct diagnostics *diagnostics, const struct rule_row *row)
{
	const bool error = row->severity == SEVERITY_ERROR;
	diagnostics->last_lost = true;
	diagnostics->left_out++;
	diagnostics->error_count += error;
	diagnostics->system_left_out = diagnostics->system_left_out || (error && row->area == AREA_SYSTEM);
}

void diagnose(struct diagnostics *diagnostics, enum rule rule, struct place place, const char *format, ...)
{
	va_list arguments;
	if (diagnostics->count >= ENTRIES_LIMIT) {
		leave_out(diagnostics, rule_row(rule));
		return;
	}
	va_start(arguments, format);
	const char *message = format_message(diagnostics->arena, format, arguments);
	va_end(arguments);
	diagnostics->last_lost = !add_entry(diagnostics, rule, place, message);
	if (diagnostics->last_lost)
		diagnostics->memory_failed = true;
}

// What belongs to a diagnostic that was lost has nothing to stand under.
bool diagnostics_take_hint(const struct diagnostics *diagnostics)
{
	return !diagnostics->last_lost && diagnostics->count > 0;
}

__attribute__((format(printf, 4, 0)))
static void add_remark(struct diagnostics *diagnostics, bool is_hint, struct place place, const char *format,
                       va_list arguments)
{
	if (!diagnostics_take_hint(diagnostics))
		return;
	struct remark *remark = arena_alloc(diagnostics->arena, sizeof(*remark));
	const char *message = format_message(diagnostics->arena, format, arguments);
	if (remark == NULL || message == NULL) {
		diagnostics->memory_failed = true;
		return;
	}
	*remark = (struct remark){.is_hint = is_hint, .place = place, .message = message};
	struct diagnostic *entry = diagnostics->entries[diagnostics->count - 1];
	if (entry->remarks == NULL)
		entry->remarks = remark;
	else
		entry->last_remark->next = remark;
	entry->last_remark = remark;
}

void diagnose_hint(struct diagnostics *diagnostics, const char *format, ...)
{
	va_list arguments;
	va_start(arguments, format);
	add_remark(diagnostics, true, (struct place){0}, format, arguments);
	va_end(arguments);
}

void diagnose_also(struct diagnostics *diagnostics, struct place place, const char *format, ...)
{
	va_list arguments;
	va_start(arguments, format);
	add_remark(diagnostics, false, place, format, arguments);
	va_end(arguments);
}

size_t diagnostics_error_count(const struct diagnostics *diagnostics)
{
	return diagnostics->error_count + (diagnostics->memory_failed ? 1 : 0);
}

size_t diagnostics_count(const struct diagnostics *diagnostics)
{
	return diagnostics->count + (diagnostics->memory_failed ? 1 : 0);
}

enum rule diagnostics_rule(const struct diagnostics *diagnostics, size_t index)
{
	return index < diagnostics->count ? diagnostics->entries[index]->rule : RULE_OUT_OF_MEMORY;
}

const char *diagnostics_first_error(const struct diagnostics *diagnostics)
{
	for (size_t index = 0; index < diagnostics->count; index++)
		if (rule_row(diagnostics->entries[index]->rule)->severity == SEVERITY_ERROR)
			return diagnostics->entries[index]->message;
	return diagnostics->memory_failed ? "memory is out" : NULL;
}

const char *diagnostics_message(const struct diagnostics *diagnostics, size_t index)
{
	return index < diagnostics->count ? diagnostics->entries[index]->message : "memory is out";
}

bool diagnostics_has_system_error(const struct diagnostics *diagnostics)
{
	for (size_t index = 0; index < diagnostics->count; index++) {
		const struct rule_row *row = rule_row(diagnostics->entries[index]->rule);
		if (row->area == AREA_SYSTEM && row->severity == SEVERITY_ERROR)
			return true;
	}
	return diagnostics->memory_failed || diagnostics->system_left_out;
}

static int compare_numbers(size_t left, size_t right)
{
	return (left > right) - (left < right);
}

static int compare_entries(const void *left_item, const void *right_item)
{
	const struct diagnostic *left = *(const struct diagnostic *const *)left_item;
	const struct diagnostic *right = *(const struct diagnostic *const *)right_item;
	int order = compare_numbers(left->source_rank, right->source_rank);
	if (order == 0)
		order = compare_numbers(left->place.line, right->place.line);
	if (order == 0)
		order = compare_numbers(left->place.column, right->place.column);
	return order == 0 ? compare_numbers(left->sequence, right->sequence) : order;
}

// "file:line:col: ", "file: " where the source is meant as a whole.
static void put_place(struct text *out, struct place place)
{
	const char *label = source_label(place.source);
	excerpt_put_printable(label, strlen(label), out);
	if (place.source != NULL && place.line > 0)
		text_printf(out, ":%lu:%lu", (unsigned long)place.line, (unsigned long)place.column);
	text_put(out, ": ");
}

enum word { WORD_ERROR, WORD_NOTICE, WORD_NOTE, WORD_HINT };

static void put_word(struct text *out, enum word word, bool colour)
{
	static const char *const words[] = {"error:", "notice:", "note:", "hint:"};
	static const char *const codes[] = {"\033[1;31m", "\033[1;35m", "\033[1;36m", "\033[1;32m"};
	if (colour)
		text_put(out, codes[word]);
	text_put(out, words[word]);
	text_put(out, colour ? "\033[0m " : " ");
}

static void put_remarks(struct text *out, const struct diagnostic *entry, bool hints, bool colour)
{
	for (const struct remark *remark = entry->remarks; remark != NULL; remark = remark->next) {
		if (remark->is_hint != hints)
			continue;
		if (hints)
			text_put(out, "  ");
		else
			put_place(out, remark->place);
		put_word(out, hints ? WORD_HINT : WORD_NOTE, colour);
		excerpt_put_printable(remark->message, strlen(remark->message), out);
		text_put(out, "\n");
	}
}

static void put_entry(struct text *out, const struct diagnostic *entry, struct excerpt_cursor *cursor, bool colour)
{
	const struct rule_row *row = rule_row(entry->rule);
	put_place(out, entry->place);
	put_word(out, row->severity == SEVERITY_ERROR ? WORD_ERROR : WORD_NOTICE, colour);
	excerpt_put_printable(entry->message, strlen(entry->message), out);
	text_printf(out, " [%s]\n", row->id);
	excerpt_put(cursor, entry->place, out);
	put_remarks(out, entry, false, colour);
	put_remarks(out, entry, true, colour);
}

void diagnostics_print(const struct diagnostics *diagnostics, struct text *out, bool colour)
{
	static const struct diagnostic out_of_memory = {.rule = RULE_OUT_OF_MEMORY, .message = "out of memory"};
	struct excerpt_cursor cursor = {0};
	size_t size = diagnostics->count * sizeof(diagnostics->entries[0]);
	const struct diagnostic **sorted = malloc(size + 1);
	if (sorted == NULL) {
		out->failed = true;
		return;
	}
	if (size > 0) {
		memcpy(sorted, diagnostics->entries, size);
		qsort(sorted, diagnostics->count, sizeof(sorted[0]), compare_entries);
	}
	for (size_t index = 0; index < diagnostics->count; index++)
		put_entry(out, sorted[index], &cursor, colour);
	if (diagnostics->memory_failed)
		put_entry(out, &out_of_memory, &cursor, colour);
	if (diagnostics->left_out > 0)
		text_printf(out, "%s: %zu more are left out\n", PROGRAM_NAME, diagnostics->left_out);
	free(sorted);
}
