// Pictures of a plan: what a builder looks at while wiring, burning and probing. Each is put as SVG, alone or inline in a page
// (struct picture in svg.h; then the page has palette_put_style's rules once), and is at most some hundred thousand bytes, of a hostile
// plan a few millions: what there is too much of is left out, and the picture says so. All return false when memory is out; then what was put is of no use.
//
// What a page can show, hide and tell of a picture:
//   every picture  svg.scanlatch[role=img], named by its <title> and <desc>; ids are ID-title, ID-desc, and ID-HUE of patterns
//   view_line_svg  g.trace[data-trace, data-role, data-active, data-lead]: a signal; in it path.trace-line, and for each run of
//                  one level rect.run[data-cell, data-cells, data-tick, data-ticks, data-start-us, data-us, data-level: 0 or 1, data-asserted: 0 or
//                  1], which takes the pointer and has the same in words as its <title>
//                  rect.region[data-region, and data-cell to data-us as above], rect.stretched[data-cell, data-cells, data-tick, data-ticks]
//                  g.composite: the composite level, in it rect.run[data-kind: sync, blanking, burst, picture, and data-cell to data-us]
//                  g.limit[data-item, data-value, data-low, data-high, data-unit: "s" or "cycles"; exact; data-kept: 0 or 1]
//                  g.plot[data-ticks, data-left, data-width]: the ticks of the line and where they are drawn, in pixels
//   view_frame_svg g.field[data-field: 1 or 2], in it g.hue-HUE: all cells that have a hue; rect.box[data-cell, data-cells, data-row,
//                  data-rows, data-us, data-ms]: the picture's box, of rows of the field; g.block[data-block, data-rows, data-type]
//   view_table_svg g.map[data-stage: loop, line or frame, data-bits], in it g.use[data-type, data-rows]
//   view_phase_svg g.plot[data-lines], in it path.phase, and, where lines are few, rect.run[data-line, data-lines, data-phase: exact, in
//                  cycles], which takes the pointer and has the same in words as its <title>
// HUE is sync, vertical, burst, blanking, picture, stretch or other (palette.h). A picture has no size of its own in a page but the attributes width and
// height, in pixels, and a viewBox: a page may scale it down with svg.scanlatch { max-width: 100%; height: auto }, or let it scroll.
// Microseconds in attributes are rounded to six places as in the JSON of `check`; ticks and cells are exact.
#ifndef SCANLATCH_VIEW_PICTURES_H
#define SCANLATCH_VIEW_PICTURES_H

#include "layout/timeline.h"
#include "proof/proof.h"
#include "table/table.h"
#include "view/svg.h"

// A line of the frame to show a type by: the first that stands between others of the type, or else its first; UINT32_MAX if it has none.
// Cannot fail.
uint32_t picture_line_of_type(const struct timeline *timeline, size_t type);

// That of the type that most lines of the frame have: what to draw where nobody says which. When memory is
// out, line 0.
uint32_t picture_common_line(const struct timeline *timeline);

// A line of the frame: all signals at their pins at the scale of ticks, regions, rulers, the composite level where the plan has
// composite sync, and the limits that the plan's standard sets for its edges. line < timeline->line_count.
bool view_line_svg(struct text *out, const struct picture *picture, const struct timeline *timeline, uint32_t line);

// The same for a terminal of so many columns (at least 20; fewer count as 20): lines that are too wide are folded, and it says so. With
// `ascii` nothing but ASCII, names apart from it as '?'.
bool view_line_text(struct text *out, const struct timeline *timeline, uint32_t line, size_t columns, bool ascii);

// The whole frame: cells across, lines down. Fields of an interlaced frame stand one above the other, or line by line between each
// other if `interleaved`, which takes an interlaced frame.
bool view_frame_svg(struct text *out, const struct picture *picture, const struct timeline *timeline, bool interleaved);

// Whether the frame is interlaced: of two fields, one of which begins half way through a line. False when memory is out.
bool picture_interlaced(const struct timeline *timeline, bool *interlaced);

// The phase of the subcarrier at the start of each line; the plan has a subcarrier, and it was measured (parts > 0).
bool view_phase_svg(struct text *out, const struct picture *picture, const struct timeline *timeline,
                    const struct colour_result *colour);

// A bank of a set, in words.
struct bank_words {
	unsigned number;
	const char *plan;      // its name
};

// The addresses of each stage and what their rows are for. `banks` are those that the plan's jumpers choose from, bank_count of
// them (0: none); `bank` is the number of the one shown.
bool view_table_svg(struct text *out, const struct picture *picture, const struct table *table, unsigned bank,
                    const struct bank_words *banks, size_t bank_count);

#endif
