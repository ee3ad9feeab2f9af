#include "view/palette.h"

#include "base/text.h"
#include "view/svg.h"

// Okabe and Ito (2008), figure 16, as 8-bit RGB.
#define BLACK "#000000"
#define ORANGE "#E69F00"
#define SKY_BLUE "#56B4E9"
#define BLUISH_GREEN "#009E73"
#define BLUE "#0072B2"
#define VERMILLION "#D55E00"
#define REDDISH_PURPLE "#CC79A7"
// Ink and paper of the dark.
#define LIGHT_INK "#F2F2F2"

static const struct hue_row hues[HUE_COUNT] = {
	[HUE_SYNC] = {"sync", "sync", BLUE, SKY_BLUE},
	[HUE_VERTICAL] = {"vertical", "vertical sync", BLUE, SKY_BLUE},
	[HUE_BURST] = {"burst", "burst", ORANGE, ORANGE},
	[HUE_BLANKING] = {"blanking", "blanking", BLACK, LIGHT_INK},
	[HUE_PICTURE] = {"picture", "picture", SKY_BLUE, BLUE},
	[HUE_STRETCH] = {"stretch", "stretched cell", REDDISH_PURPLE, REDDISH_PURPLE},
	[HUE_OTHER] = {"other", "other", BLUISH_GREEN, BLUISH_GREEN},
};

const struct hue_row *palette_hue(enum hue hue)
{
	return &hues[hue];
}

enum hue palette_of_role(enum role role)
{
	switch (role) {
	case ROLE_COMPOSITE_SYNC:
	case ROLE_HORIZONTAL_SYNC:
		return HUE_SYNC;
	case ROLE_VERTICAL_SYNC:
		return HUE_VERTICAL;
	case ROLE_BLANKING:
		return HUE_BLANKING;
	case ROLE_BURST_GATE:
		return HUE_BURST;
	case ROLE_STRETCH:
		return HUE_STRETCH;
	case ROLE_PLAIN:
	case ROLE_COUNT:
		break;
	}
	return HUE_OTHER;
}

static const char still_style[] =
	"svg.scanlatch{font-family:system-ui,\"Segoe UI\",\"Noto Sans\",\"DejaVu Sans\",sans-serif;font-size:15px;font-variant-numeric:tabular-nums}\n"
	"svg.scanlatch text{stroke:none}\n"
	"svg.scanlatch .title{font-size:21px;font-weight:600}\n"
	"svg.scanlatch .name{font-weight:600}\n"
	"svg.scanlatch .small{font-size:13px}\n"
	"svg.scanlatch .letter{font-size:13px;font-weight:600}\n"
	"svg.scanlatch .trace-line{fill:none;stroke-width:2.5px;stroke-linejoin:miter}\n"
	"svg.scanlatch .dots{stroke-width:4px;stroke-linecap:round}\n"
	"svg.scanlatch .soft{fill-opacity:.2}\n"
	"svg.scanlatch .blanking.plain{fill-opacity:.14}\n"
	"svg.scanlatch .rule{stroke-width:1.5px;fill:none}\n"
	"svg.scanlatch .hair{stroke-width:1px;fill:none}\n"
	"svg.scanlatch .guide{stroke-width:1px;stroke-dasharray:2 4;fill:none}\n"
	"svg.scanlatch .edge{stroke-width:2.5px;fill:none}\n"
	"svg.scanlatch .outline{fill:none}\n"
	"svg.scanlatch .run{fill:none;pointer-events:all}\n"
	"svg.scanlatch .missed{font-weight:600}\n"
	"svg.scanlatch .was path,svg.scanlatch .was rect{opacity:.6}\n"
	"svg.scanlatch .moved{stroke:" VERMILLION ";stroke-width:2px;fill:none}\n";

// What differs by the paper. %s: paper, ink, muted ink, hair lines.
static void put_paper(struct text *out, const char *paper, const char *ink, const char *muted, const char *hair)
{
	text_printf(out, "svg.scanlatch .paper{fill:%s}\n", paper);
	text_printf(out, "svg.scanlatch .plate{fill:%s;fill-opacity:.9}\n", paper);
	text_printf(out, "svg.scanlatch text{fill:%s}\n", ink);
	text_printf(out, "svg.scanlatch .note,svg.scanlatch .small{fill:%s}\n", muted);
	text_printf(out, "svg.scanlatch .rule,svg.scanlatch .edge{stroke:%s}\n", ink);
	text_printf(out, "svg.scanlatch .hair,svg.scanlatch .guide{stroke:%s}\n", hair);
	text_printf(out, "svg.scanlatch .allowed{fill:%s;fill-opacity:.16}\n", ink);
	text_printf(out, "svg.scanlatch .mark{stroke:%s;stroke-opacity:.65;stroke-width:1.4px;fill:none}\n", paper);
	text_printf(out, "svg.scanlatch .spare{fill:%s;fill-opacity:.06}\n", ink);
}

static void put_hues(struct text *out, bool dark)
{
	for (unsigned hue = 0; hue < HUE_COUNT; hue++) {
		const char *name = hues[hue].name, *colour = dark ? hues[hue].dark : hues[hue].light;
		text_printf(out, "svg.scanlatch .%s{fill:%s;stroke:none}\n", name, colour);
		text_printf(out, "svg.scanlatch .%s.trace-line{fill:none;stroke:%s}\n", name, colour);
	}
}

void palette_put_style(struct text *out)
{
	text_put(out, still_style);
	put_paper(out, "#FFFFFF", "#14181D", "#4A525C", "#B9C0C8");
	put_hues(out, false);
	text_put(out, "svg.scanlatch .missed-box{fill:" VERMILLION ";fill-opacity:.35}\n");
	text_put(out, "@media screen and (prefers-color-scheme:dark){\n");
	put_paper(out, "#14181D", LIGHT_INK, "#B4BCC6", "#4A525C");
	put_hues(out, true);
	text_put(out, "}\n");
}

// The marks of a pattern's tile of eight pixels, as the data of a path; NULL: a plain colour.
static const char *const tiles[HUE_COUNT] = {
	[HUE_SYNC] = "M-2 2L2-2M0 8L8 0M6 10L10 6",
	[HUE_VERTICAL] = "M-2 2L2-2M0 8L8 0M6 10L10 6M-2 6L2 10M0 0L8 8M6-2L10 2",
	[HUE_BURST] = "M2 0V8M6 0V8",
	[HUE_STRETCH] = "M1 2H3M5 6H7",
	[HUE_OTHER] = "M0 2H8M0 6H8",
};

static void put_pattern(struct svg *svg, enum hue hue)
{
	struct text class = {0}, id = {0};
	text_printf(&class, "%s plain", hues[hue].name);
	text_printf(&id, "%s-%s", svg->picture->id, hues[hue].name);
	svg_open(svg, "pattern");
	svg_attribute(svg, "id", text_string(&id));
	svg_attribute(svg, "width", "8");
	svg_attribute(svg, "height", "8");
	svg_attribute(svg, "patternUnits", "userSpaceOnUse");
	svg_box(svg, text_string(&class), 0, 0, PX(8), PX(8));
	if (tiles[hue] != NULL) {
		svg_open(svg, "path");
		svg_attribute(svg, "class", "mark");
		svg_attribute(svg, "d", tiles[hue]);
		svg_close(svg);
	}
	svg_close(svg);
	svg_release(svg, &class);
	svg_release(svg, &id);
}

void palette_put_patterns(struct svg *svg)
{
	svg_open(svg, "defs");
	for (unsigned hue = 0; hue < HUE_COUNT; hue++)
		put_pattern(svg, (enum hue)hue);
	svg_close(svg);
}
