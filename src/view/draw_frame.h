// Inside the picture of a frame: what its parts share.
#ifndef SCANLATCH_VIEW_DRAW_FRAME_H
#define SCANLATCH_VIEW_DRAW_FRAME_H

#include "view/frame_rows.h"
#include "view/svg.h"

#define FRAME_LEFT PX(92)
#define FRAME_PLOT PX(780)    // width at most
#define FRAME_HEIGHT PX(860)  // of all fields together, at most
#define FRAME_SIDE PX(392)    // for the names of blocks
#define MOST_FRAME_RUNS 12000u
#define MOST_NAMED 24u        // blocks of a panel

// Where a field's rows are in a panel: row r in slot first + r × step.
struct panel_field {
	unsigned field;
	int64_t first, step;
};

// A drawing of one field, or of both between each other.
struct panel {
	struct panel_field fields[MOST_FIELDS];
	unsigned field_count;
	int64_t slots;
	int64_t y, height;         // of the rows; heading above, caption below
};

// The cells that show picture, as a box.
struct picture_box {
	bool any;
	uint32_t first_cell, end_cell; // of a row
	uint32_t first_row, last_row;  // of the field
	uint32_t rows;             // that show picture
};

struct frame_drawing {
	struct svg *svg;
	struct frame_rows rows;
	bool interleaved;
	struct panel panels[MOST_FIELDS];
	unsigned panel_count;
	int64_t width;             // of the plot
	uint32_t row_step, cell_step; // only every so many are looked at
	bool used[HUE_COUNT];      // what is there
};

// Places. Cannot fail.
static inline int64_t frame_x(const struct frame_drawing *drawing, int64_t cell)
{
	return FRAME_LEFT + svg_share(drawing->width, cell, drawing->rows.widest);
}

static inline int64_t panel_y(const struct panel *panel, int64_t slot)
{
	return panel->y + svg_share(panel->height, slot, panel->slots);
}

// Puts the cells of a panel, by their hues; first finds the steps with which there are not too many.
void draw_frame_cells(struct frame_drawing *drawing, const struct panel *panel);
void choose_frame_steps(struct frame_drawing *drawing);

// Names of blocks at the side, and the heights that they need.
void draw_frame_blocks(struct frame_drawing *drawing, const struct panel *panel);
int64_t frame_blocks_height(const struct frame_drawing *drawing, const struct panel *panel);

#endif
