#include "view/svg.h"

#include <assert.h>
#include <inttypes.h>
#include <string.h>

#include "base/text.h"
#include "view/figures.h"
#include "view/markup.h"
#include "view/palette.h"

__extension__ typedef __int128 wide;

static void end_tag(struct svg *svg)
{
	if (svg->in_tag)
		text_put(svg->out, ">");
	svg->in_tag = false;
}

void svg_open(struct svg *svg, const char *element)
{
	assert(svg->depth < SVG_DEPTH);
	end_tag(svg);
	if (svg->depth > 0 && !svg->in_words)
		text_put(svg->out, "\n");
	text_put(svg->out, "<");
	text_put(svg->out, element);
	svg->open[svg->depth++] = element;
	svg->in_tag = true;
}

void svg_close(struct svg *svg)
{
	assert(svg->depth > 0);
	const char *element = svg->open[--svg->depth];
	if (svg->in_tag) {
		text_put(svg->out, "/>");
	} else {
		text_put(svg->out, svg->in_words ? "</" : "\n</");
		text_put(svg->out, element);
		text_put(svg->out, ">");
	}
	svg->in_tag = svg->in_words = false;
}

static void begin_attribute(struct svg *svg, const char *name)
{
	assert(svg->in_tag);
	text_put(svg->out, " ");
	text_put(svg->out, name);
	text_put(svg->out, "=\"");
}

void svg_attribute(struct svg *svg, const char *name, const char *words)
{
	begin_attribute(svg, name);
	text_put_markup(svg->out, words);
	text_put(svg->out, "\"");
}

void svg_put_length(struct text *out, int64_t length)
{
	const uint64_t magnitude = length < 0 ? 0 - (uint64_t)length : (uint64_t)length;
	unsigned rest = (unsigned)(magnitude % 1000), places = 3;
	text_printf(out, "%s%" PRIu64, length < 0 ? "-" : "", magnitude / 1000);
	if (rest == 0)
		return;
	for (; rest % 10 == 0; rest /= 10)
		places--;
	text_printf(out, ".%0*u", (int)places, rest);
}

void svg_length(struct svg *svg, const char *name, int64_t length)
{
	begin_attribute(svg, name);
	svg_put_length(svg->out, length);
	text_put(svg->out, "\"");
}

void svg_whole(struct svg *svg, const char *name, int64_t value)
{
	begin_attribute(svg, name);
	text_printf(svg->out, "%" PRId64 "\"", value);
}

void svg_decimal(struct svg *svg, const char *name, struct fraction value)
{
	begin_attribute(svg, name);
	text_put_rounded(svg->out, value, 6);
	text_put(svg->out, "\"");
}

void svg_reference(struct svg *svg, const char *name, const char *part)
{
	begin_attribute(svg, name);
	text_printf(svg->out, "url(#%s-%s)\"", svg->picture->id, part);
}

void svg_words(struct svg *svg, const char *words)
{
	end_tag(svg);
	text_put_markup(svg->out, words);
	svg->in_words = true;
}

void svg_group(struct svg *svg, const char *class)
{
	svg_open(svg, "g");
	svg_attribute(svg, "class", class);
}

void svg_box(struct svg *svg, const char *class, int64_t x, int64_t y, int64_t width, int64_t height)
{
	svg_open(svg, "rect");
	svg_attribute(svg, "class", class);
	svg_length(svg, "x", x);
	svg_length(svg, "y", y);
	svg_length(svg, "width", width);
	svg_length(svg, "height", height);
	svg_close(svg);
}

void svg_line(struct svg *svg, const char *class, int64_t x1, int64_t y1, int64_t x2, int64_t y2)
{
	svg_open(svg, "line");
	svg_attribute(svg, "class", class);
	svg_length(svg, "x1", x1);
	svg_length(svg, "y1", y1);
	svg_length(svg, "x2", x2);
	svg_length(svg, "y2", y2);
	svg_close(svg);
}

static void open_text(struct svg *svg, const char *class, int64_t x, int64_t y, enum svg_anchor anchor)
{
	static const char *const anchors[] = {"start", "middle", "end"};
	svg_open(svg, "text");
	svg_attribute(svg, "class", class);
	svg_length(svg, "x", x);
	svg_length(svg, "y", y);
	if (anchor != ANCHOR_START)
		svg_attribute(svg, "text-anchor", anchors[anchor]);
}

void svg_text(struct svg *svg, const char *class, int64_t x, int64_t y, enum svg_anchor anchor, const char *words)
{
	open_text(svg, class, x, y, anchor);
	svg_words(svg, words);
	svg_close(svg);
}

void svg_title(struct svg *svg, const char *words)
{
	svg_open(svg, "title");
	svg_words(svg, words);
	svg_close(svg);
}

// Thousandths of their size that characters are wide in a wide face; those of other scripts may be as wide as high.
static int64_t character_width(unsigned char first, unsigned size)
{
	if (first >= 0xE1u)
		return (int64_t)size * 1050;
	if (strchr("mwMW@%", first) != NULL)
		return (int64_t)size * 1000;
	if (strchr(" .,:;'|!()[]fijltrI", first) != NULL)
		return (int64_t)size * 390;
	return (int64_t)size * (first >= 'A' && first <= 'Z' ? 720 : 600);
}

static size_t character_bytes(const char *bytes)
{
	size_t length = 1;
	while (((unsigned char)bytes[length] & 0xC0u) == 0x80u)
		length++;
	return length;
}

// The bytes of the longest beginning that is at most so wide; *fits: it is all.
static size_t bytes_within(const char *words, unsigned size, int64_t width, bool *fits)
{
	size_t length = 0;
	int64_t used = 0;
	while (words[length] != '\0') {
		used += character_width((unsigned char)words[length], size);
		if (used > width)
			break;
		length += character_bytes(words + length);
	}
	*fits = words[length] == '\0';
	return length;
}

int64_t svg_words_width(const char *words, unsigned size)
{
	int64_t width = 0;
	for (size_t index = 0; words[index] != '\0'; index += character_bytes(words + index))
		width += character_width((unsigned char)words[index], size);
	return width;
}

void svg_fitted(struct svg *svg, const char *class, int64_t x, int64_t y, enum svg_anchor anchor, int64_t width, unsigned size,
                const char *words)
{
	bool fits;
	(void)bytes_within(words, size, width, &fits);
	if (fits) {
		svg_text(svg, class, x, y, anchor, words);
		return;
	}
	struct text cut = {0};
	text_put_bytes(&cut, words, bytes_within(words, size, width - (int64_t)size * 1000, &fits));
	text_put(&cut, "\xE2\x80\xA6");
	open_text(svg, class, x, y, anchor);
	svg->in_words = true; // a break of the line would be seen as a space
	svg_title(svg, words);
	svg->in_words = true;
	svg_words(svg, text_string(&cut));
	svg_close(svg);
	svg_release(svg, &cut);
}

static void put_span(struct svg *svg, const char *class, const char *gap, const char *words)
{
	svg->in_words = true;
	svg_open(svg, "tspan");
	svg_attribute(svg, "class", class);
	if (gap != NULL)
		svg_attribute(svg, "dx", gap);
	svg_words(svg, words);
	svg_close(svg);
	svg->in_words = true;
}

void svg_named(struct svg *svg, int64_t x, int64_t y, enum svg_anchor anchor, int64_t width, const char *name, const char *words)
{
	bool fits;
	const int64_t room = width - svg_words_width(words, 13) - PX(8);
	struct text cut = {0};
	bool shorter;
	const size_t length = bytes_within(name, SVG_NAME_SIZE, room, &fits);
	text_put_bytes(&cut, name, fits ? length : bytes_within(name, SVG_NAME_SIZE, room - PX(16), &shorter));
	text_put(&cut, fits ? "" : "\xE2\x80\xA6");
	open_text(svg, "pair", x, y, anchor);
	svg->in_words = true; // a break of the line would be seen as a space
	if (!fits)
		svg_title(svg, name);
	put_span(svg, "name", NULL, text_string(&cut));
	put_span(svg, "small", "8", words);
	svg_close(svg);
	svg_release(svg, &cut);
}

void svg_release(struct svg *svg, struct text *words)
{
	svg->out->failed = svg->out->failed || words->failed;
	text_release(words);
}

int64_t svg_share(int64_t length, int64_t part, int64_t whole)
{
	return (int64_t)(((wide)length * part * 2 + whole) / ((wide)whole * 2));
}

// An element of the picture by its id: ID-PART.
static void put_id(struct svg *svg, const char *part)
{
	begin_attribute(svg, "id");
	text_printf(svg->out, "%s-%s\"", svg->picture->id, part);
}

static void put_told(struct svg *svg, const char *element, const char *part, const char *words)
{
	svg_open(svg, element);
	put_id(svg, part);
	svg_words(svg, words);
	svg_close(svg);
}

void svg_begin(struct svg *svg, struct text *out, const struct picture *picture, int64_t width, int64_t height, const char *title,
               const char *description)
{
	*svg = (struct svg){.out = out, .picture = picture};
	if (picture->standalone)
		text_put(out, "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n");
	svg_open(svg, "svg");
	svg_attribute(svg, "xmlns", "http://www.w3.org/2000/svg");
	svg_attribute(svg, "class", "scanlatch");
	svg_length(svg, "width", width);
	svg_length(svg, "height", height);
	begin_attribute(svg, "viewBox");
	text_put(out, "0 0 ");
	svg_put_length(out, width);
	text_put(out, " ");
	svg_put_length(out, height);
	text_put(out, "\"");
	svg_attribute(svg, "role", "img");
	begin_attribute(svg, "aria-labelledby");
	text_printf(out, "%s-title %s-desc\"", picture->id, picture->id);
	put_told(svg, "title", "title", title);
	put_told(svg, "desc", "desc", description);
	if (picture->standalone) {
		svg_open(svg, "style");
		end_tag(svg);
		text_put(out, "\n");
		palette_put_style(out);
		svg->in_words = true;
		svg_close(svg);
	}
	palette_put_patterns(svg);
	svg_box(svg, "paper", 0, 0, width, height);
}

void svg_put_drawn(struct svg *svg, struct text *drawn)
{
	end_tag(svg);
	text_put(svg->out, "\n");
	text_put(svg->out, text_string(drawn));
	svg_release(svg, drawn);
}

void svg_end(struct svg *svg)
{
	while (svg->depth > 0)
		svg_close(svg);
	text_put(svg->out, "\n");
}
