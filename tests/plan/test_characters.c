// Texts as messages show them.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "base/text.h"
#include "plan/characters.h"

// `count` times the character, then the tail.
static void assert_shortened(const char *character, size_t count, const char *tail, size_t wanted_count, const char *wanted_tail)
{
	struct text text = {0}, wanted = {0};
	for (size_t index = 0; index < count; index++)
		text_put(&text, character);
	text_put(&text, tail);
	for (size_t index = 0; index < wanted_count; index++)
		text_put(&wanted, character);
	text_put(&wanted, wanted_tail);
	assert_false(text.failed || wanted.failed);
	assert_string_equal(SHORT(text_string(&text)), text_string(&wanted));
	text_release(&text);
	text_release(&wanted);
}

static void short_texts_stand_whole(void **state)
{
	(void)state;
	const char *const text = "ebb";
	assert_ptr_equal(SHORT(text), text);
	assert_string_equal(SHORT(""), "");
	assert_shortened("x", 60, "", 60, "");
	assert_shortened("\xF0\x9F\x8C\x8A", 60, "", 60, "");
}

static void long_texts_are_cut_between_characters(void **state)
{
	(void)state;
	assert_shortened("x", 61, "", 60, "...");
	assert_shortened("x", 1000000, "", 60, "...");
	assert_shortened("\xC3\xA9", 61, "", 60, "...");
	assert_shortened("\xF0\x9F\x8C\x8A", 60, "x", 60, "...");
}

// Labels on the command line are any bytes.
static void bytes_that_are_not_utf8_count_each(void **state)
{
	(void)state;
	assert_shortened("\x80", 60, "", 60, "");
	assert_shortened("\x80", 1000, "", 60, "...");
	assert_shortened("x", 59, "\xF0", 59, "\xF0");
	assert_shortened("x", 59, "\xF0\x9F", 59, "\xF0...");
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(short_texts_stand_whole),
		cmocka_unit_test(long_texts_are_cut_between_characters),
		cmocka_unit_test(bytes_that_are_not_utf8_count_each),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
