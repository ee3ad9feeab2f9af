// The writer of SVG. What is expected is worked out by hand from SVG 1.1 and XML 1.0.
#include <stdarg.h>
#include <stddef.h>
#include <setjmp.h>
#include <stdint.h>
#include <cmocka.h>

#include <stdio.h>
#include <string.h>

#include "base/text.h"
#include "view/palette.h"
#include "view/svg.h"

static void assert_length(int64_t length, const char *expected)
{
	struct text text = {0};
	svg_put_length(&text, length);
	assert_string_equal(text_string(&text), expected);
	text_release(&text);
}

static void lengths_are_exact_decimals(void **state)
{
	(void)state;
	assert_length(0, "0");
	assert_length(PX(12), "12");
	assert_length(12500, "12.5");
	assert_length(12005, "12.005");
	assert_length(1090, "1.09");
	assert_length(7, "0.007");
	assert_length(-7, "-0.007");
	assert_length(-1500, "-1.5");
	assert_length(INT64_MIN, "-9223372036854775.808");
}

static void shares_are_rounded_to_the_nearest_thousandth(void **state)
{
	(void)state;
	assert_int_equal(svg_share(PX(1), 1, 3), 333);
	assert_int_equal(svg_share(PX(1), 2, 3), 667);
	assert_int_equal(svg_share(3, 1, 2), 2); // halves up
	assert_int_equal(svg_share(PX(900), 0, 7), 0);
	assert_int_equal(svg_share(PX(900), 7, 7), PX(900));
	// 128 bits in between.
	assert_int_equal(svg_share(PX(900), INT64_MAX / 2, INT64_MAX - 1), PX(450));
}

// What a function puts into a picture, without the picture's own beginning and end.
static void assert_put(void (*put)(struct svg *svg), const char *expected)
{
	const struct picture picture = {"quay", false};
	struct text text = {0};
	struct svg svg = {.out = &text, .picture = &picture};
	put(&svg);
	assert_false(text.failed);
	assert_string_equal(text_string(&text), expected);
	text_release(&text);
}

static void put_elements(struct svg *svg)
{
	svg_group(svg, "trace");
	svg_attribute(svg, "data-trace", "a\"<&'>b");
	svg_whole(svg, "data-cells", -3);
	svg_decimal(svg, "data-us", (struct fraction){2, 3});
	svg_reference(svg, "fill", "sync");
	svg_line(svg, "hair", 0, 500, PX(2), 500);
	svg_title(svg, "<script>alert('tide & \"time\"')</script>");
	svg_close(svg);
}

static void elements_are_nested_and_escaped(void **state)
{
	(void)state;
	assert_put(put_elements,
	           "<g class=\"trace\" data-trace=\"a&quot;&lt;&amp;&#39;&gt;b\" data-cells=\"-3\" data-us=\"0.666667\" fill=\"url(#quay-sync)\">\n"
	           "<line class=\"hair\" x1=\"0\" y1=\"0.5\" x2=\"2\" y2=\"0.5\"/>\n"
	           "<title>&lt;script&gt;alert(&#39;tide &amp; &quot;time&quot;&#39;)&lt;/script&gt;</title>\n"
	           "</g>");
}

static void put_texts(struct svg *svg)
{
	svg_text(svg, "name", PX(1), PX(2), ANCHOR_END, "a < b");
}

static void words_have_no_breaks_beside_them(void **state)
{
	(void)state;
	assert_put(put_texts, "<text class=\"name\" x=\"1\" y=\"2\" text-anchor=\"end\">a &lt; b</text>");
}

// Seven letters of 10 pixels are 6 wide, f, i and j 3.9: 53.7. With 40 there is room for five and the dots, which take 10.
static void put_fitted(struct svg *svg)
{
	svg_fitted(svg, "name", 0, 0, ANCHOR_START, PX(55), 10, "abcdefghij");
	svg_fitted(svg, "name", 0, 0, ANCHOR_START, PX(40), 10, "abcdef\xC3\xA9hij");
}

static void words_that_do_not_fit_are_cut_and_told_whole(void **state)
{
	(void)state;
	assert_put(put_fitted,
	           "<text class=\"name\" x=\"0\" y=\"0\">abcdefghij</text>"
	           "<text class=\"name\" x=\"0\" y=\"0\"><title>abcdef\xC3\xA9hij</title>abcde\xE2\x80\xA6</text>");
}

static void put_named(struct svg *svg)
{
	svg_named(svg, 0, 0, ANCHOR_START, PX(500), "burst", "4 cells");
	svg_named(svg, 0, 0, ANCHOR_END, PX(100), "a name beyond measure", "4 cells");
}

static void a_name_is_cut_and_its_words_stay(void **state)
{
	(void)state;
	assert_put(put_named,
	           "<text class=\"pair\" x=\"0\" y=\"0\"><tspan class=\"name\">burst</tspan><tspan class=\"small\" dx=\"8\">4 cells</tspan></text>"
	           "<text class=\"pair\" x=\"0\" y=\"0\" text-anchor=\"end\"><title>a name beyond measure</title><tspan class=\"name\">a n\xE2\x80\xA6</tspan>"
	           "<tspan class=\"small\" dx=\"8\">4 cells</tspan></text>");
}

// A whole picture: NULL-terminated text that the caller frees.
static struct text whole_picture(const char *id, bool standalone)
{
	const struct picture picture = {id, standalone};
	struct text text = {0};
	struct svg svg;
	svg_begin(&svg, &text, &picture, PX(100), 50500, "quay & pier", "what it <tells>");
	svg_group(&svg, "left open");
	svg_end(&svg);
	assert_false(text.failed);
	return text;
}

static size_t count_of(const char *text, const char *words)
{
	size_t count = 0;
	for (const char *at = text; (at = strstr(at, words)) != NULL; at += strlen(words))
		count++;
	return count;
}

static void a_picture_alone_has_heading_size_and_style(void **state)
{
	(void)state;
	struct text text = whole_picture("quay", true);
	const char *bytes = text_string(&text);
	assert_ptr_equal(strstr(bytes, "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n<svg xmlns=\"http://www.w3.org/2000/svg\" "), bytes);
	assert_non_null(strstr(bytes, " width=\"100\" height=\"50.5\" viewBox=\"0 0 100 50.5\" role=\"img\" "
	                              "aria-labelledby=\"quay-title quay-desc\">"));
	assert_non_null(strstr(bytes, "<title id=\"quay-title\">quay &amp; pier</title>"));
	assert_non_null(strstr(bytes, "<desc id=\"quay-desc\">what it &lt;tells&gt;</desc>"));
	assert_int_equal(count_of(bytes, "<style>"), 1);
	assert_int_equal(count_of(bytes, "prefers-color-scheme:dark"), 1);
	assert_string_equal(bytes + text.length - strlen("</svg>\n"), "</svg>\n");
	text_release(&text);
}

// Two pictures of a page have no id in common, and neither heading nor style of their own.
static void pictures_inline_share_no_ids(void **state)
{
	(void)state;
	struct text left = whole_picture("line-0", false), right = whole_picture("line-1", false);
	assert_ptr_equal(strstr(text_string(&left), "<svg "), text_string(&left));
	assert_int_equal(count_of(text_string(&left), "<style>"), 0);
	const size_t ids = count_of(text_string(&left), " id=\"");
	assert_true(ids >= 2 + HUE_COUNT);
	assert_int_equal(count_of(text_string(&left), " id=\"line-0-"), ids);
	assert_int_equal(count_of(text_string(&right), " id=\"line-1-"), ids);
	text_release(&left);
	text_release(&right);
}

// Okabe and Ito, "Color Universal Design" (2008): the colours of their palette as 8-bit RGB (from memory of figure 16); and the ink of a dark
// paper, which stands for their black.
static void colours_are_those_of_the_palette(void **state)
{
	(void)state;
	static const char *const published[] = {"#000000", "#E69F00", "#56B4E9", "#009E73", "#F0E442", "#0072B2", "#D55E00", "#CC79A7", "#F2F2F2"};
	for (unsigned hue = 0; hue < HUE_COUNT; hue++) {
		const char *colours[] = {palette_hue((enum hue)hue)->light, palette_hue((enum hue)hue)->dark};
		for (unsigned index = 0; index < 2; index++) {
			bool found = false;
			for (size_t known = 0; known < sizeof published / sizeof *published; known++)
				found = found || strcmp(colours[index], published[known]) == 0;
			assert_true(found);
		}
	}
}

// The marks of a pattern; "" if it has none.
static void marks_of(const char *picture, const char *hue, char marks[128])
{
	char id[64];
	snprintf(id, sizeof id, "<pattern id=\"quay-%s\"", hue);
	const char *pattern = strstr(picture, id);
	assert_non_null(pattern);
	const char *end = strstr(pattern, "</pattern>"), *data = strstr(pattern, " d=\"");
	marks[0] = '\0';
	if (data == NULL || data > end)
		return;
	data += strlen(" d=\"");
	const size_t length = strcspn(data, "\"");
	assert_true(length < 128);
	memcpy(marks, data, length);
	marks[length] = '\0';
}

// Colour is not the only sign: of two hues of a picture, one has marks that the other has not; only blanking and picture are plain, and they differ
// by far in lightness.
static void patterns_differ_without_colour(void **state)
{
	(void)state;
	struct text text = whole_picture("quay", true);
	for (unsigned left = 0; left < HUE_COUNT; left++)
		for (unsigned right = 0; right < left; right++) {
			char first[128], second[128];
			marks_of(text_string(&text), palette_hue((enum hue)left)->name, first);
			marks_of(text_string(&text), palette_hue((enum hue)right)->name, second);
			if (left == HUE_PICTURE && right == HUE_BLANKING)
				assert_true(first[0] == '\0' && second[0] == '\0');
			else
				assert_string_not_equal(first, second);
		}
	text_release(&text);
}

int main(void)
{
	const struct CMUnitTest tests[] = {
		cmocka_unit_test(lengths_are_exact_decimals),
		cmocka_unit_test(shares_are_rounded_to_the_nearest_thousandth),
		cmocka_unit_test(elements_are_nested_and_escaped),
		cmocka_unit_test(words_have_no_breaks_beside_them),
		cmocka_unit_test(words_that_do_not_fit_are_cut_and_told_whole),
		cmocka_unit_test(a_name_is_cut_and_its_words_stay),
		cmocka_unit_test(a_picture_alone_has_heading_size_and_style),
		cmocka_unit_test(pictures_inline_share_no_ids),
		cmocka_unit_test(colours_are_those_of_the_palette),
		cmocka_unit_test(patterns_differ_without_colour),
	};
	return cmocka_run_group_tests(tests, NULL, NULL);
}
