// Colours of pictures: the eight of Masataka Okabe and Kei Ito, "Color Universal Design (CUD): How to make figures and presentations
// that are friendly to colorblind people" (2002, revised 2008), which readers of every kind of colour vision can tell apart. Colour is
// never the only sign: each hue has a pattern of its own, or stands beside a label. The black of the palette is ink, and so it is light
// where the reader's paper is dark; blue and sky blue change places there.
#ifndef SCANLATCH_VIEW_PALETTE_H
#define SCANLATCH_VIEW_PALETTE_H

#include "plan/plan.h"

struct svg;
struct text;

// What is coloured.
enum hue {
	HUE_SYNC,
	HUE_VERTICAL,     // vertical sync that is a signal of its own
	HUE_BURST,
	HUE_BLANKING,
	HUE_PICTURE,
	HUE_STRETCH,
	HUE_OTHER,        // border, and signals without a role
	HUE_COUNT
};

struct hue_row {
	const char *name;       // of classes and patterns: "sync"
	const char *words;      // for legends: "vertical sync"
	const char *light, *dark; // colours, as #RRGGBB
};

// Cannot fail.
const struct hue_row *palette_hue(enum hue hue);

// The hue of a signal's trace. Cannot fail.
enum hue palette_of_role(enum role role);

// The rules of CSS for all pictures, without <style> around them; put once in a page that has pictures inline. They are about
// `svg.scanlatch` and what is in it, follow the reader's preference of light or dark, and print as light.
//   .paper  the ground        .title .note .name .value .small  kinds of words
//   .rule .hair .guide .axis  kinds of lines
//   .HUE (sync, vertical, burst, blanking, picture, stretch, other) with
//     .trace-line: a stroke of the hue; .soft: its fill, thinned; .plain: its fill
//   .was    what stands for the old of two
//   .moved  marks of what changed
//   patterns are filled by fill="url(#ID-HUE)"
void palette_put_style(struct text *out);

// <defs> with the pattern of each hue: ID-HUE; and ID-missed.
void palette_put_patterns(struct svg *svg);

#endif
