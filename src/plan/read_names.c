#include "plan/read.h"

#include <string.h>

#include "base/excerpt.h"
#include "base/text.h"
#include "plan/expression.h"

#define NAME_CHARACTERS 40
#define IDENTIFIER_CHARACTERS 100
#define WORD_BYTES 48

// The last four are an expression's variables.
static const char *const reserved_words[] = {"state", "next", "kind", "bank", "step", "clear", "low", "high",
                                             "line",  "cell", "col",  "row"};
_Static_assert(VARIABLE_COUNT == 4, "a new variable is reserved too");

const struct shape identifier_shape = {
	.kind = SHAPE_TEXT,
	.about = "A lower-case letter, then lower-case letters, digits and _; no name that the language uses itself",
	.pattern = IDENTIFIER_PATTERN,
	.most = IDENTIFIER_CHARACTERS,
	.forbidden = reserved_words,
	.forbidden_count = COUNT_OF(reserved_words),
	.also = ALSO_TRUTH,
};
const struct shape printable_name_shape = {
	.kind = SHAPE_TEXT,
	.about = "1 to 40 printable characters without quotes",
	.most = NAME_CHARACTERS,
	.never = UNPRINTABLE_PATTERN "|[\"']",
	.also = ALSO_NUMBER | ALSO_TRUTH,
};

static bool is_reserved(const char *name)
{
	for (size_t index = 0; index < COUNT_OF(reserved_words); index++)
		if (strcmp(reserved_words[index], name) == 0)
			return true;
	return false;
}

bool check_identifier(struct reader *reader, const struct node *node, const char *what)
{
	const char *text = node->text;
	bool good = text[0] >= 'a' && text[0] <= 'z' && node->length <= IDENTIFIER_CHARACTERS;
	for (size_t index = 0; good && index < node->length; index++)
		good = (text[index] >= 'a' && text[index] <= 'z') || (text[index] >= '0' && text[index] <= '9') || text[index] == '_';
	if (!good) {
		diagnose(reader->diagnostics, RULE_BAD_NAME, node->place,
		         "%s \"%s\": wanted a lower-case letter, then lower-case letters, digits and _, at most %d in all", what,
		         SHORT(text), IDENTIFIER_CHARACTERS);
		return false;
	}
	if (is_reserved(text)) {
		diagnose(reader->diagnostics, RULE_RESERVED_NAME, node->place, "%s \"%s\": the plan language uses this name itself", what,
		         text);
		return false;
	}
	return true;
}

// True if a terminal shows the name as it stands: no control characters, and none that steer the direction of text.
// When memory is out that is reported, and the name is let pass.
static bool is_shown_as_is(struct reader *reader, const struct node *node)
{
	struct text shown = {0};
	excerpt_put_printable(node->text, node->length, &shown);
	if (shown.failed)
		diagnose(reader->diagnostics, RULE_OUT_OF_MEMORY, node->place, "memory is out");
	const bool same = shown.failed ||
	                  (shown.length == node->length && memcmp(text_string(&shown), node->text, node->length) == 0);
	text_release(&shown);
	return same;
}

bool check_printable_name(struct reader *reader, const struct node *node, const char *what)
{
	char quoted[QUOTATION_BYTES];
	size_t characters = 0;
	for (size_t offset = 0; offset < node->length; offset += character_bytes(node->text + offset, node->length - offset))
		characters++;
	if (characters >= 1 && characters <= NAME_CHARACTERS && strpbrk(node->text, "\"'") == NULL && is_shown_as_is(reader, node))
		return true;
	diagnose(reader->diagnostics, RULE_BAD_NAME, node->place, "%s %s: wanted 1 to %d printable characters without quotes", what,
	         quotation(quoted, node->text, node->length), NAME_CHARACTERS);
	return false;
}

// Edit distance of two short words (Levenshtein 1966; adjacent transpositions count as one).
static unsigned edit_distance(const char *left, const char *right)
{
	const size_t left_length = strlen(left), right_length = strlen(right);
	unsigned table[3][WORD_BYTES + 1];
	if (left_length > WORD_BYTES || right_length > WORD_BYTES)
		return WORD_BYTES;
	for (size_t column = 0; column <= right_length; column++)
		table[0][column] = (unsigned)column;
	for (size_t row = 1; row <= left_length; row++) {
		unsigned *now = table[row % 3], *before = table[(row - 1) % 3], *earlier = table[(row + 1) % 3];
		now[0] = (unsigned)row;
		for (size_t column = 1; column <= right_length; column++) {
			const bool same = left[row - 1] == right[column - 1];
			unsigned best = before[column - 1] + (same ? 0 : 1);
			best = before[column] + 1 < best ? before[column] + 1 : best;
			best = now[column - 1] + 1 < best ? now[column - 1] + 1 : best;
			if (row > 1 && column > 1 && left[row - 1] == right[column - 2] && left[row - 2] == right[column - 1])
				best = earlier[column - 2] + 1 < best ? earlier[column - 2] + 1 : best;
			now[column] = best;
		}
	}
	return table[left_length % 3][right_length];
}

const char *nearest_word(const char *word, const char *const *candidates, size_t count)
{
	const char *best = NULL;
	if (word[strspn(word, "0123456789.,-")] == '\0')
		return NULL;
	unsigned best_distance = strlen(word) <= 3 ? 2 : 3;
	for (size_t index = 0; index < count; index++) {
		const unsigned distance = edit_distance(word, candidates[index]);
		if (distance < best_distance) {
			best = candidates[index];
			best_distance = distance;
		}
	}
	return best;
}

void hint_words(struct reader *reader, const char *word, const char *const *candidates, size_t count)
{
	if (!diagnostics_take_hint(reader->diagnostics))
		return;
	const char *near = nearest_word(word, candidates, count);
	if (near != NULL) {
		diagnose_hint(reader->diagnostics, "did you mean \"%s\"?", near);
		return;
	}
	if (count == 0)
		return;
	struct text list = {0};
	const size_t shown = count > 16 ? 16 : count;
	for (size_t index = 0; index < shown; index++)
		text_printf(&list, "%s%s", index == 0 ? "" : ", ", SHORT(candidates[index]));
	if (shown < count)
		text_printf(&list, " and %zu more", count - shown);
	diagnose_hint(reader->diagnostics, "there %s: %s", count == 1 ? "is" : "are", text_string(&list));
	text_release(&list);
}
