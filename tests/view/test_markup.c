// Words in markup.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include "base/text.h"
#include "view/markup.h"

static void assert_markup(const char *words, const char *expected)
{
	struct text text = {0};
	text_put_markup(&text, words);
	assert_false(text.failed);
	assert_string_equal(text_string(&text), expected);
	text_release(&text);
}

// The five characters that XML 1.0 (section 2.4) gives references, &#39; for the apostrophe because HTML 4 knows no &apos;.
static void markup_is_referred_to(void **state)
{
	(void)state;
	assert_markup("<script>alert(\"quay & lock's\")</script>",
	              "&lt;script&gt;alert(&quot;quay &amp; lock&#39;s&quot;)&lt;/script&gt;");
	assert_markup("&amp;", "&amp;amp;");
	assert_markup("", "");
}

static void other_words_stay(void **state)
{
	(void)state;
	assert_markup("bord\xC3\xA9 1/2 ]]", "bord\xC3\xA9 1/2 ]]");
}

// XML has no character for most control characters, not even as a reference (XML 1.0, section 2.2).
static void control_characters_are_shown_as_in_messages(void **state)
{
	(void)state;
	struct text text = {0};
	text_put_markup(&text, "a\x01" "b\x1B[31m");
	for (size_t index = 0; index < text.length; index++)
		assert_true((unsigned char)text.bytes[index] >= 0x20);
	text_release(&text);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(markup_is_referred_to),
		cmocka_unit_test(other_words_stay),
		cmocka_unit_test(control_characters_are_shown_as_in_messages),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
