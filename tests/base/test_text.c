#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <string.h>

#include "base/text.h"

static void an_empty_text_is_an_empty_string(void **state)
{
	(void)state;
	struct text text = {0};
	assert_string_equal(text_string(&text), "");
	text_put(&text, "");
	assert_string_equal(text_string(&text), "");
	assert_int_equal(text.length, 0);
	assert_false(text.failed);
	text_release(&text);
}

static void puts_follow_each_other(void **state)
{
	(void)state;
	struct text text = {0};
	text_put(&text, "high");
	text_put_repeated(&text, '.', 3);
	text_put_bytes(&text, "water!", 5);
	text_printf(&text, " %02d:%02d", 6, 5);
	text_put_repeated(&text, '#', 0);
	text_put_bytes(&text, NULL, 0);
	assert_string_equal(text_string(&text), "high...water 06:05");
	assert_int_equal(text.length, 18);
	text_release(&text);
	assert_null(text.bytes);
	assert_int_equal(text.length, 0);
	assert_int_equal(text.capacity, 0);
}

static void bytes_may_hold_nul(void **state)
{
	(void)state;
	struct text text = {0};
	text_put_bytes(&text, "a\0b", 3);
	text_put(&text, "c");
	assert_int_equal(text.length, 4);
	assert_memory_equal(text.bytes, "a\0bc\0", 5);
	text_release(&text);
}

static void a_text_grows_past_any_capacity(void **state)
{
	(void)state;
	struct text text = {0};
	for (int index = 0; index < 10000; index++)
		text_printf(&text, "%04d", index);
	assert_int_equal(text.length, 40000);
	assert_int_equal(strlen(text.bytes), 40000);
	assert_memory_equal(text.bytes + 4 * 4711, "4711", 4);
	assert_true(text.capacity > text.length && text.capacity <= 81920);
	text_release(&text);
}

// Around the room that is at hand for the first try, where a string just fits or just does not.
static void formatted_strings_of_every_length_fit(void **state)
{
	(void)state;
	for (int width = 1; width < 700; width++) {
		struct text text = {0};
		text_printf(&text, "<%*d>", width, 8);
		assert_int_equal(text.length, width + 2);
		assert_int_equal(strlen(text.bytes), width + 2);
		assert_int_equal(text.bytes[width], '8');
		assert_int_equal(text.bytes[width + 1], '>');
		text_release(&text);
	}
}

static void reserved_room_is_taken_without_moving(void **state)
{
	(void)state;
	struct text text = {0};
	text_put(&text, "ab");
	assert_true(text_reserve(&text, 100000));
	const char *bytes = text.bytes;
	assert_string_equal(bytes, "ab");
	text_put_repeated(&text, 'x', 100000);
	assert_ptr_equal(text.bytes, bytes);
	assert_int_equal(text.length, 100002);
	assert_int_equal(text.bytes[100002], '\0');
	text_release(&text);
}

static void failure_is_sticky_and_keeps_what_was_put(void **state)
{
	(void)state;
	struct text text = {0};
	text_put(&text, "kept");
	assert_false(text_reserve(&text, SIZE_MAX));
	assert_true(text.failed);
	text_put(&text, "lost");
	text_printf(&text, "%d", 1);
	text_put_repeated(&text, 'x', 2);
	assert_false(text_reserve(&text, 1));
	assert_string_equal(text_string(&text), "kept");
	text_release(&text);
	assert_false(text.failed);
	text_put(&text, "again");
	assert_string_equal(text_string(&text), "again");
	text_release(&text);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(an_empty_text_is_an_empty_string),
		cmocka_unit_test(puts_follow_each_other),
		cmocka_unit_test(bytes_may_hold_nul),
		cmocka_unit_test(a_text_grows_past_any_capacity),
		cmocka_unit_test(formatted_strings_of_every_length_fit),
		cmocka_unit_test(reserved_room_is_taken_without_moving),
		cmocka_unit_test(failure_is_sticky_and_keeps_what_was_put),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
