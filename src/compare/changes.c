// The list of changes: those that line types share are one.
#include <stdarg.h>
#include <string.h>

#include "base/arena.h"
#include "compare/parts.h"

#define BUCKETS 65536u

struct noted_line {
	const char *name;
	struct noted_line *next;
};

struct noted_change {
	struct change change;
	uint64_t hash;                     // of all but the line types
	struct noted_line *first_line, *last_line;
	struct noted_change *next;         // in the order in which they came
	struct noted_change *chain;        // in its bucket
};

static bool same_string(const char *left, const char *right)
{
	return left == right || (left != NULL && right != NULL && strcmp(left, right) == 0);
}

// FNV-1a, 64 bits.
static uint64_t hash_bytes(uint64_t hash, const void *bytes, size_t length)
{
	const unsigned char *byte = bytes;
	for (size_t index = 0; index < length; index++)
		hash = (hash ^ byte[index]) * 0x100000001B3u;
	return hash;
}

static uint64_t hash_string(uint64_t hash, const char *string)
{
	return string != NULL ? hash_bytes(hash, string, strlen(string) + 1) : hash_bytes(hash, "\1", 1);
}

static uint64_t hash_change(const struct change *change)
{
	uint64_t hash = 0xCBF29CE484222325u;
	hash = hash_bytes(hash, &change->section, sizeof change->section);
	hash = hash_string(hash_string(hash, change->kind), change->what);
	hash = hash_string(hash_string(hash_string(hash, change->old), change->now), change->also);
	return hash_bytes(hash_bytes(hash, &change->cells, sizeof change->cells), &change->ticks, sizeof change->ticks);
}

static bool differ_in_lines_only(const struct change *left, const struct change *right)
{
	return left->section == right->section && strcmp(left->kind, right->kind) == 0 && same_string(left->what, right->what) &&
	       same_string(left->old, right->old) && same_string(left->now, right->now) && same_string(left->also, right->also) &&
	       left->shifted == right->shifted && left->longer == right->longer && left->cells == right->cells && left->ticks == right->ticks;
}

static void add_line(struct comparing *comparing, struct noted_change *noted, const char *name)
{
	struct noted_line *line = arena_alloc(comparing->arena, sizeof *line);
	comparing->failed = comparing->failed || line == NULL;
	if (line == NULL)
		return;
	*line = (struct noted_line){name, NULL};
	if (noted->last_line == NULL)
		noted->first_line = line;
	else
		noted->last_line->next = line;
	noted->last_line = line;
	noted->change.line_count++;
}

// The bucket of a hash; NULL when memory is out.
static struct noted_change **bucket_of(struct comparing *comparing, uint64_t hash)
{
	if (comparing->buckets == NULL)
		comparing->buckets = arena_array(comparing->arena, BUCKETS, sizeof(struct noted_change *));
	comparing->failed = comparing->failed || comparing->buckets == NULL;
	return comparing->buckets != NULL ? &comparing->buckets[hash % BUCKETS] : NULL;
}

static void append(struct comparing *comparing, struct noted_change *noted)
{
	if (comparing->last == NULL)
		comparing->first = noted;
	else
		comparing->last->next = noted;
	comparing->last = noted;
	comparing->count++;
}

void add_change(struct comparing *comparing, struct change change)
{
	const char *line = change.line_count > 0 ? change.lines[0] : NULL;
	const uint64_t hash = line != NULL ? hash_change(&change) : 0;
	struct noted_change **bucket = line != NULL && !comparing->failed ? bucket_of(comparing, hash) : NULL;
	for (struct noted_change *other = bucket != NULL ? *bucket : NULL; other != NULL; other = other->chain)
		if (other->hash == hash && differ_in_lines_only(&other->change, &change)) {
			add_line(comparing, other, line);
			return;
		}
	struct noted_change *noted = comparing->failed ? NULL : arena_alloc(comparing->arena, sizeof *noted);
	comparing->failed = comparing->failed || noted == NULL;
	if (noted == NULL)
		return;
	*noted = (struct noted_change){.change = change, .hash = hash, .chain = bucket != NULL ? *bucket : NULL};
	noted->change.line_count = 0;
	if (bucket != NULL)
		*bucket = noted;
	append(comparing, noted);
	if (line != NULL)
		add_line(comparing, noted, line);
}

void drop_sections(struct comparing *comparing, bool drops(enum change_section section))
{
	struct noted_change **link = &comparing->first;
	comparing->last = NULL;
	comparing->buckets = NULL;
	while (*link != NULL) {
		if (drops((*link)->change.section)) {
			*link = (*link)->next;
			comparing->count--;
			continue;
		}
		comparing->last = *link;
		link = &(*link)->next;
	}
}

void move_sections(struct comparing *comparing, bool moves(enum change_section section), enum change_section into)
{
	for (struct noted_change *noted = comparing->first; noted != NULL; noted = noted->next)
		if (moves(noted->change.section))
			noted->change.section = into;
}

static bool take_lines(struct comparing *comparing, const struct noted_change *noted, struct change *change)
{
	const char **names = arena_array(comparing->arena, change->line_count, sizeof *names);
	size_t count = 0;
	if (names == NULL)
		return false;
	for (const struct noted_line *line = noted->first_line; line != NULL; line = line->next)
		names[count++] = line->name;
	change->lines = names;
	return true;
}

struct change *sorted_changes(struct comparing *comparing)
{
	struct change *sorted = arena_array(comparing->arena, comparing->count, sizeof *sorted);
	size_t count = 0;
	for (unsigned section = 0; sorted != NULL && section < CHANGE_SECTIONS; section++)
		for (const struct noted_change *noted = comparing->first; noted != NULL; noted = noted->next) {
			if (noted->change.section != section)
				continue;
			sorted[count] = noted->change;
			if (!take_lines(comparing, noted, &sorted[count++]))
				return NULL;
		}
	return sorted;
}

const char *keep_text(struct comparing *comparing, struct text *text)
{
	const char *kept = text->failed ? NULL : arena_copy(comparing->arena, text_string(text), text->length);
	text_release(text);
	comparing->failed = comparing->failed || kept == NULL;
	return kept != NULL ? kept : "";
}

const char *keep_words(struct comparing *comparing, const char *format, ...)
{
	struct text words = {0};
	va_list arguments;
	va_start(arguments, format);
	text_vprintf(&words, format, arguments);
	va_end(arguments);
	return keep_text(comparing, &words);
}

void compare_words(struct comparing *comparing, enum change_section section, const char *what, const char *old, const char *now)
{
	if (!same_string(old, now))
		add_change(comparing, (struct change){.section = section, .kind = old == NULL ? "added" : now == NULL ? "removed" : "changed",
		                                      .what = what, .old = old, .now = now});
}

static const char *or_null(const char *words)
{
	return words[0] != '\0' ? words : NULL;
}

void compare_texts(struct comparing *comparing, enum change_section section, const char *what, struct text *old, struct text *now)
{
	const char *left = keep_text(comparing, old), *right = keep_text(comparing, now);
	if (!comparing->failed)
		compare_words(comparing, section, what, or_null(left), or_null(right));
}
