// A small writer of SVG 1.1: elements, attributes and words, always well-formed and escaped. Lengths are whole thousandths of a
// pixel, put as exact decimals, so that the same picture is the same bytes on every machine. When memory is out, out->failed is
// set; nothing fails otherwise. SVG 1.1 (Second Edition, W3C Recommendation 16 August 2011).
#ifndef SCANLATCH_VIEW_SVG_H
#define SCANLATCH_VIEW_SVG_H

#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

#include "base/fraction.h"

struct text;

// A length of whole pixels, in the thousandths that all lengths are.
#define PX(pixels) ((int64_t)(pixels)*1000)

#define SVG_DEPTH 16

// Sizes for svg_fitted and svg_words_width of words whose class is heavy: as wide as lighter ones so high. The others are as high as
// they are: 15, and 13 if small.
#define SVG_TITLE_SIZE 24
#define SVG_NAME_SIZE 17

// How a picture stands: as a file of its own, with an XML heading and its style, or inline in a page of HTML, which has the style
// (svg_put_style) once.
struct picture {
	const char *id;       // begins all ids of the picture: a-z, 0-9 and '-', begins with a letter; no two pictures of a page share it
	bool standalone;
};

// A writer. Elements that are open are its own.
struct svg {
	struct text *out;
	const struct picture *picture;
	const char *open[SVG_DEPTH]; // names of the elements that are open, the innermost last; constants
	unsigned depth;
	bool in_tag;                 // attributes may follow
	bool in_words;               // the innermost element holds words, and no line may be broken in it
};

// Begins a picture: heading, <svg> with its size, style if it stands alone, <title> and <desc> for screen readers, patterns, and the paper.
// What it is called and tells are plain words.
void svg_begin(struct svg *svg, struct text *out, const struct picture *picture, int64_t width, int64_t height, const char *title,
               const char *description);
// Ends it, with all that is open, and a line's end.
void svg_end(struct svg *svg);

// Puts whole elements that another writer with the same picture has put into a text of its own, and releases that text.
void svg_put_drawn(struct svg *svg, struct text *drawn);

// Opens an element; its name is a constant. At most SVG_DEPTH are open.
void svg_open(struct svg *svg, const char *element);
// Closes the innermost.
void svg_close(struct svg *svg);

// Attributes of the element that was just opened; names are constants. Words are escaped.
void svg_attribute(struct svg *svg, const char *name, const char *words);
void svg_length(struct svg *svg, const char *name, int64_t length);
void svg_whole(struct svg *svg, const char *name, int64_t value);
// Rounded to six places, as JSON has it.
void svg_decimal(struct svg *svg, const char *name, struct fraction value);
// A reference to an id of the picture: NAME="url(#ID-PART)".
void svg_reference(struct svg *svg, const char *name, const char *part);

// Words inside the element that was opened, escaped.
void svg_words(struct svg *svg, const char *words);
// Puts a length alone, as in the data of a path: "12.5".
void svg_put_length(struct text *out, int64_t length);

// <g class="…">.
void svg_group(struct svg *svg, const char *class);
// A rectangle, line, or text at a place; class may hold several. `anchor` is start, middle or end.
void svg_box(struct svg *svg, const char *class, int64_t x, int64_t y, int64_t width, int64_t height);
void svg_line(struct svg *svg, const char *class, int64_t x1, int64_t y1, int64_t x2, int64_t y2);
enum svg_anchor { ANCHOR_START, ANCHOR_MIDDLE, ANCHOR_END };
void svg_text(struct svg *svg, const char *class, int64_t x, int64_t y, enum svg_anchor anchor, const char *words);
// The same; of words that would be wider than `width`, as far as that can be told without the reader's fonts, the end is cut and
// the whole is their title.
void svg_fitted(struct svg *svg, const char *class, int64_t x, int64_t y, enum svg_anchor anchor, int64_t width, unsigned size,
                const char *words);
// A name and, smaller, words behind it; the name is cut where both would be wider than `width`, and then the whole is the title.
void svg_named(struct svg *svg, int64_t x, int64_t y, enum svg_anchor anchor, int64_t width, const char *name, const char *words);
// <title>: what a reader's pointer shows over the element that was opened.
void svg_title(struct svg *svg, const char *words);

// How wide words of a size in pixels are, generously. Cannot fail.
int64_t svg_words_width(const char *words, unsigned size);

// Releases words that were put together for the picture; where memory was out, the picture has failed.
void svg_release(struct svg *svg, struct text *words);

// An exact place: part/whole of a length, to the nearest thousandth, halves up. 0 <= part, 0 < whole. Cannot fail.
int64_t svg_share(int64_t length, int64_t part, int64_t whole);

#endif
