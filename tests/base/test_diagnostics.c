#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdlib.h>
#include <string.h>

#include "base/diagnostics.h"
#include "base/text.h"

static struct source source_of(const char *name, const char *text)
{
	return (struct source){.name = name, .bytes = text, .length = strlen(text)};
}

static struct place at(const struct source *source, uint32_t line, uint32_t column)
{
	return (struct place){source, line, column};
}

// Prints, compares, and frees the diagnostics.
static void assert_prints(struct diagnostics *diagnostics, bool colour, const char *expected)
{
	struct text text = {0};
	diagnostics_print(diagnostics, &text, colour);
	assert_false(text.failed);
	assert_string_equal(text_string(&text), expected);
	text_release(&text);
	diagnostics_destroy(diagnostics);
}

// One error at a place of a text called "t".
static void assert_excerpt(const char *text, uint32_t line, uint32_t column, const char *expected)
{
	struct source source = source_of("t", text);
	struct diagnostics *diagnostics = diagnostics_create();
	diagnose(diagnostics, RULE_BAD_NUMBER, at(&source, line, column), "m");
	struct text all = {0};
	text_printf(&all, "t:%u:%u: error: m [bad-number]\n%s", (unsigned)line, (unsigned)column, expected);
	assert_prints(diagnostics, false, text_string(&all));
	text_release(&all);
}

static void a_diagnostic_has_all_its_parts(void **state)
{
	(void)state;
	struct source source = source_of("board.yaml", "clock:\n  dot: 1 tick\n  dott: 2\n");
	struct diagnostics *diagnostics = diagnostics_create();
	diagnose(diagnostics, RULE_UNKNOWN_KEY, at(&source, 3, 3), "unknown key '%s' in %s", "dott", "clock");
	diagnose_hint(diagnostics, "did you mean '%s'?", "dot");
	diagnose_also(diagnostics, at(&source, 2, 3), "'%s' is here", "dot");
	assert_prints(diagnostics, false,
	              "board.yaml:3:3: error: unknown key 'dott' in clock [unknown-key]\n"
	              "    dott: 2\n"
	              "    ^\n"
	              "board.yaml:2:3: note: 'dot' is here\n"
	              "  hint: did you mean 'dot'?\n");
}

static void remarks_belong_to_the_last_added(void **state)
{
	(void)state;
	struct source source = source_of("a", "one\ntwo\n");
	struct diagnostics *diagnostics = diagnostics_create();
	diagnose_hint(diagnostics, "belongs to nothing");
	diagnose(diagnostics, RULE_BAD_NAME, at(&source, 2, 1), "second");
	diagnose(diagnostics, RULE_BAD_NAME, at(&source, 1, 1), "first");
	diagnose_hint(diagnostics, "to the first");
	diagnose_hint(diagnostics, "and one more");
	assert_prints(diagnostics, false,
	              "a:1:1: error: first [bad-name]\n  one\n  ^\n  hint: to the first\n  hint: and one more\n"
	              "a:2:1: error: second [bad-name]\n  two\n  ^\n");
}

static void diagnostics_come_in_file_order(void **state)
{
	(void)state;
	struct source late = source_of("a.yaml", "abc\nabc\nabc\n");
	struct source early = source_of("z.yaml", "xyz\n");
	struct source early_again = source_of("z.yaml", "xyz\n");
	struct diagnostics *diagnostics = diagnostics_create();
	// z.yaml is used first, so it comes first; the same name is the same file, whichever struct has it.
	diagnose(diagnostics, RULE_BAD_BITS, at(&early, 1, 3), "z13");
	diagnose(diagnostics, RULE_BAD_BITS, at(&late, 3, 1), "a31");
	diagnose(diagnostics, RULE_BAD_BITS, at(&late, 2, 3), "a23");
	diagnose(diagnostics, RULE_BAD_BITS, at(&late, 2, 1), "a21 first");
	diagnose(diagnostics, RULE_BAD_BITS, at(&late, 2, 1), "a21 second");
	diagnose(diagnostics, RULE_BAD_BITS, at(&late, 0, 0), "a");
	diagnose(diagnostics, RULE_BAD_BITS, at(&early_again, 1, 1), "z11");
	assert_int_equal(diagnostics_count(diagnostics), 7);
	assert_prints(diagnostics, false,
	              "z.yaml:1:1: error: z11 [bad-bits]\n  xyz\n  ^\n"
	              "z.yaml:1:3: error: z13 [bad-bits]\n  xyz\n    ^\n"
	              "a.yaml: error: a [bad-bits]\n"
	              "a.yaml:2:1: error: a21 first [bad-bits]\n  abc\n  ^\n"
	              "a.yaml:2:1: error: a21 second [bad-bits]\n  abc\n  ^\n"
	              "a.yaml:2:3: error: a23 [bad-bits]\n  abc\n    ^\n"
	              "a.yaml:3:1: error: a31 [bad-bits]\n  abc\n  ^\n");
}

static void counts_tell_errors_from_notices(void **state)
{
	(void)state;
	struct source source = source_of("a", "b\n");
	struct diagnostics *diagnostics = diagnostics_create();
	assert_int_equal(diagnostics_count(diagnostics), 0);
	assert_false(diagnostics_take_hint(diagnostics));
	diagnose(diagnostics, RULE_UNUSED_LINE, at(&source, 1, 1), "line type 'spare' is not used");
	assert_int_equal(diagnostics_error_count(diagnostics), 0);
	diagnose(diagnostics, RULE_WIRE_DOUBLED, at(&source, 1, 1), "doubled");
	assert_int_equal(diagnostics_error_count(diagnostics), 1);
	assert_int_equal(diagnostics_count(diagnostics), 2);
	assert_int_equal(diagnostics_rule(diagnostics, 0), RULE_UNUSED_LINE);
	assert_int_equal(diagnostics_rule(diagnostics, 1), RULE_WIRE_DOUBLED);
	assert_false(diagnostics_has_system_error(diagnostics));
	diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "memory is out");
	assert_true(diagnostics_has_system_error(diagnostics));
	diagnostics_destroy(diagnostics);
	diagnostics_destroy(NULL);
}

// A message of 601 two-byte characters is cut after 600 of them, one of bytes that begin none after 2,400; the 1,001st diagnostic and later ones are counted.
static void what_nobody_reads_is_cut(void **state)
{
	(void)state;
	struct source source = source_of("a", "b\n");
	struct diagnostics *diagnostics = diagnostics_create();
	struct text message = {0}, wanted = {0}, found = {0};
	for (size_t index = 0; index < 601; index++)
		text_put(&message, "\xC3\xA4");
	diagnose(diagnostics, RULE_YAML_SYNTAX, at(&source, 0, 0), "%s", text_string(&message));
	diagnose(diagnostics, RULE_YAML_SYNTAX, at(&source, 0, 0), "%s", text_string(&message) + 2);
	text_printf(&wanted, "a: error: %.1200s ... [yaml-syntax]\n", text_string(&message));
	text_printf(&wanted, "a: error: %.1200s [yaml-syntax]\n", text_string(&message));
	text_release(&message);
	text_put_repeated(&message, '\x80', 2401);
	diagnose(diagnostics, RULE_YAML_SYNTAX, at(&source, 0, 0), "%s", text_string(&message));
	text_put(&wanted, "a: error: ");
	text_put_repeated(&wanted, '?', 2400);
	text_put(&wanted, " ... [yaml-syntax]\n");
	diagnostics_print(diagnostics, &found, false);
	assert_string_equal(text_string(&found), text_string(&wanted));
	text_release(&message);
	text_release(&wanted);
	text_release(&found);
	for (size_t index = 3; index < 1003; index++) {
		diagnose(diagnostics, RULE_YAML_SYNTAX, at(&source, 0, 0), "again");
		assert_int_equal(diagnostics_take_hint(diagnostics), index < 1000);
	}
	diagnose(diagnostics, RULE_OUT_OF_MEMORY, at(&source, 0, 0), "memory is out");
	diagnose_hint(diagnostics, "of what is not there");
	assert_int_equal(diagnostics_error_count(diagnostics), 1004);
	assert_int_equal(diagnostics_count(diagnostics), 1000);
	assert_true(diagnostics_has_system_error(diagnostics));
	diagnostics_print(diagnostics, &found, false);
	assert_non_null(strstr(text_string(&found), "again [yaml-syntax]\nscanlatch: 4 more are left out\n"));
	assert_null(strstr(text_string(&found), "not there"));
	text_release(&found);
	diagnostics_destroy(diagnostics);
}

static void a_place_may_be_less_than_a_character(void **state)
{
	(void)state;
	struct source unreadable = {.name = "gone.yaml"};
	struct diagnostics *diagnostics = diagnostics_create();
	diagnose(diagnostics, RULE_OUT_OF_MEMORY, (struct place){0}, "no room in 'out'");
	diagnose(diagnostics, RULE_FILE_UNREADABLE, at(&unreadable, 0, 0), "no such file");
	diagnose(diagnostics, RULE_FILE_EMPTY, at(&unreadable, 4, 2), "bytes are not there");
	assert_prints(diagnostics, false,
	              "scanlatch: error: no room in 'out' [out-of-memory]\n"
	              "gone.yaml: error: no such file [file-unreadable]\n"
	              "gone.yaml:4:2: error: bytes are not there [file-empty]\n");
}

static void severity_words_are_coloured(void **state)
{
	(void)state;
	struct source source = source_of("a", "b\n");
	struct diagnostics *diagnostics = diagnostics_create();
	diagnose(diagnostics, RULE_BAD_NAME, at(&source, 1, 1), "e");
	diagnose_also(diagnostics, at(&source, 1, 2), "n");
	diagnose_hint(diagnostics, "h");
	diagnose(diagnostics, RULE_UNUSED_LINE, at(&source, 1, 1), "w");
	assert_prints(diagnostics, true,
	              "a:1:1: \033[1;31merror:\033[0m e [bad-name]\n  b\n  ^\n"
	              "a:1:2: \033[1;36mnote:\033[0m n\n"
	              "  \033[1;32mhint:\033[0m h\n"
	              "a:1:1: \033[1;35mnotice:\033[0m w [unused-line]\n  b\n  ^\n");
}

static void columns_count_characters(void **state)
{
	(void)state;
	// e acute, euro sign, a character beyond the first plane: 2, 3 and 4 bytes, a column each.
	assert_excerpt("\xC3\xA9\xE2\x82\xAC\xF0\x9F\x9A\xA2x\n", 1, 4, "  \xC3\xA9\xE2\x82\xAC\xF0\x9F\x9A\xA2x\n     ^\n");
	assert_excerpt("\ta\tb\n", 1, 4, "   a b\n     ^\n");
}

static void nothing_commands_the_terminal(void **state)
{
	(void)state;
	// ESC, DEL, NEXT LINE's neighbour U+0086, RIGHT-TO-LEFT OVERRIDE: a column each.
	assert_excerpt("a\033b\x7F" "c\xC2\x86" "d\xE2\x80\xAE" "e\n", 1, 9, "  a?b?c?d?e\n          ^\n");
	struct source source = source_of("n\033m", "x\n");
	struct diagnostics *diagnostics = diagnostics_create();
	diagnose(diagnostics, RULE_BAD_NAME, at(&source, 1, 1), "found '%s'", "\033[2J\n-\xFF");
	diagnose_hint(diagnostics, "\a");
	assert_prints(diagnostics, false, "n?m:1:1: error: found '?[2J?-?' [bad-name]\n  x\n  ^\n  hint: ?\n");
}

static void bytes_that_are_not_utf8_count_singly(void **state)
{
	(void)state;
	// RFC 3629: a lone continuation, FF, overlong '/' in two and three bytes, a surrogate, above U+10FFFF, and sequences
	// that the line's end or the text's end cuts.
	assert_excerpt("\x80x\n", 1, 2, "  ?x\n   ^\n");
	assert_excerpt("\xFFx\n", 1, 2, "  ?x\n   ^\n");
	assert_excerpt("\xC0\xAFx\n", 1, 3, "  ??x\n    ^\n");
	assert_excerpt("\xE0\x80\xAFx\n", 1, 4, "  ???x\n     ^\n");
	assert_excerpt("\xED\xA0\x80x\n", 1, 4, "  ???x\n     ^\n");
	assert_excerpt("\xF4\x90\x80\x80x\n", 1, 5, "  ????x\n      ^\n");
	assert_excerpt("x\xE2\x82\ny\n", 1, 2, "  x??\n   ^\n");
	assert_excerpt("x\xE2\x82\ny\n", 2, 1, "  y\n  ^\n");
	assert_excerpt("x\xE2", 1, 2, "  x?\n   ^\n");
}

static void lines_end_in_any_way(void **state)
{
	(void)state;
	assert_excerpt("one\r\ntwo\r\nthree", 2, 2, "  two\n   ^\n");
	assert_excerpt("one\r\ntwo\r\nthree", 3, 5, "  three\n      ^\n");
	assert_excerpt("one\rtwo\rthree", 2, 1, "  two\n  ^\n");
	assert_excerpt("one\n\n\nfour\n", 4, 1, "  four\n  ^\n");
	// In YAML 1.1 (4.1.4, from memory) NEL, LS and PS break lines.
	assert_excerpt("one\xC2\x85two\xE2\x80\xA8three\xE2\x80\xA9" "four", 4, 1, "  four\n  ^\n");
	assert_excerpt("one\xC2\x85two\xE2\x80\xA8three\xE2\x80\xA9" "four", 2, 3, "  two\n    ^\n");
}

static void a_byte_order_mark_is_no_column(void **state)
{
	(void)state;
	assert_excerpt("\xEF\xBB\xBF" "abc\n", 1, 3, "  abc\n    ^\n");
}

static void a_place_off_the_text_is_marked_nearby(void **state)
{
	(void)state;
	assert_excerpt("abc\n", 1, 4, "  abc\n     ^\n");
	assert_excerpt("abc\n", 1, 40, "  abc\n     ^\n");
	assert_excerpt("abc\n", 1, 0, "  abc\n  ^\n");
	// No such line, and lines with nothing on them: there is nothing to show.
	assert_excerpt("abc\n", 2, 1, "");
	assert_excerpt("abc\n", 3, 1, "");
	assert_excerpt("abc", 2, 1, "");
	assert_excerpt("a\n\nb\n", 2, 1, "");
	assert_excerpt("", 1, 1, "");
}

// A line of `length` characters that goes 0123456789 round and round.
static char *counting_line(size_t length)
{
	char *line = malloc(length + 1);
	assert_non_null(line);
	for (size_t index = 0; index < length; index++)
		line[index] = (char)('0' + index % 10);
	line[length] = '\0';
	return line;
}

// Characters first … first+count-1 (from 0) of a line of `length` are shown, the marker stands under place `marked` of
// them.
static void assert_cut(size_t length, uint32_t column, size_t first, size_t count, size_t marked)
{
	char *line = counting_line(length);
	struct text expected = {0};
	text_put(&expected, "  ");
	text_put_bytes(&expected, line + first, count);
	text_put(&expected, "\n  ");
	text_put_repeated(&expected, ' ', marked);
	text_put(&expected, "^\n");
	assert_excerpt(line, 1, column, text_string(&expected));
	text_release(&expected);
	free(line);
}

static void long_lines_are_cut_around_the_marker(void **state)
{
	(void)state;
	assert_cut(100, 90, 0, 100, 89);
	assert_cut(100, 101, 0, 100, 100);
	assert_cut(101, 1, 0, 100, 0);
	assert_cut(101, 51, 0, 100, 50);
	assert_cut(101, 52, 1, 100, 50);
	assert_cut(300, 150, 99, 100, 50);
	assert_cut(300, 251, 200, 100, 50);
	assert_cut(300, 300, 249, 51, 50);
	assert_cut(300, 301, 250, 50, 50);
}

// Later places on the same line go on from where the last excerpt began; all must come out as if they were alone.
static void places_on_one_long_line_do_not_disturb_each_other(void **state)
{
	(void)state;
	char *line = counting_line(5000);
	struct source source = source_of("t", line);
	struct diagnostics *diagnostics = diagnostics_create();
	struct text expected = {0};
	for (uint32_t column = 1; column <= 4900; column += 7) {
		diagnose(diagnostics, RULE_BAD_NUMBER, at(&source, 1, column), "m");
		size_t before = column > 50 ? 50 : column - 1;
		text_printf(&expected, "t:1:%u: error: m [bad-number]\n  ", (unsigned)column);
		text_put_bytes(&expected, line + column - 1 - before, 100);
		text_printf(&expected, "\n  %*s\n", (int)before + 1, "^");
	}
	assert_prints(diagnostics, false, text_string(&expected));
	text_release(&expected);
	free(line);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(a_diagnostic_has_all_its_parts),
		cmocka_unit_test(remarks_belong_to_the_last_added),
		cmocka_unit_test(diagnostics_come_in_file_order),
		cmocka_unit_test(counts_tell_errors_from_notices),
		cmocka_unit_test(what_nobody_reads_is_cut),
		cmocka_unit_test(a_place_may_be_less_than_a_character),
		cmocka_unit_test(severity_words_are_coloured),
		cmocka_unit_test(columns_count_characters),
		cmocka_unit_test(nothing_commands_the_terminal),
		cmocka_unit_test(bytes_that_are_not_utf8_count_singly),
		cmocka_unit_test(lines_end_in_any_way),
		cmocka_unit_test(a_byte_order_mark_is_no_column),
		cmocka_unit_test(a_place_off_the_text_is_marked_nearby),
		cmocka_unit_test(long_lines_are_cut_around_the_marker),
		cmocka_unit_test(places_on_one_long_line_do_not_disturb_each_other),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
