// The blocks of a frame, named at its side.
#include <inttypes.h>
#include <string.h>

#include "base/text.h"
#include "view/draw_frame.h"
#include "view/figures.h"

#define LABEL_HEIGHT PX(20)

// Rows of a field that belong to one block.
struct named_block {
	uint32_t block;
	unsigned placed;           // index into the panel's fields
	uint32_t row, rows;        // of the field
	uint32_t lines;            // of the block, of which these rows are a part or all
	int64_t middle;            // where the label would be
};

struct block_list {
	struct named_block list[MOST_NAMED];
	unsigned count;
	uint64_t left_out;
};

// Keeps the tallest.
static void keep_block(struct block_list *blocks, struct named_block block)
{
	if (blocks->count < MOST_NAMED) {
		blocks->list[blocks->count++] = block;
		return;
	}
	unsigned least = 0;
	for (unsigned index = 1; index < MOST_NAMED; index++)
		if (blocks->list[index].rows < blocks->list[least].rows)
			least = index;
	blocks->left_out++;
	if (blocks->list[least].rows >= block.rows)
		return;
	memmove(&blocks->list[least], &blocks->list[least + 1], (MOST_NAMED - 1 - least) * sizeof block);
	blocks->list[MOST_NAMED - 1] = block;
}

static uint32_t block_of_row(const struct frame_drawing *drawing, const struct frame_field *field, uint32_t row)
{
	return drawing->rows.timeline->lines[drawing->rows.rows[field_row(&drawing->rows, field, row)].line].block;
}

static void list_field(const struct frame_drawing *drawing, const struct panel *panel, unsigned placed, struct block_list *blocks)
{
	const struct frame_field *field = &drawing->rows.fields[panel->fields[placed].field];
	for (uint32_t row = 0; row < field->rows;) {
		struct named_block block = {.block = block_of_row(drawing, field, row), .placed = placed, .row = row};
		while (row < field->rows && block_of_row(drawing, field, row) == block.block)
			row++;
		block.rows = row - block.row;
		block.lines = (uint32_t)drawing->rows.timeline->plan->blocks[block.block].repeat;
		keep_block(blocks, block);
	}
}

// The first and the end of the slots of a block.
static int64_t block_top(const struct panel *panel, const struct named_block *block)
{
	const struct panel_field *placed = &panel->fields[block->placed];
	return panel_y(panel, placed->first + (int64_t)block->row * placed->step);
}

static int64_t block_bottom(const struct panel *panel, const struct named_block *block)
{
	const struct panel_field *placed = &panel->fields[block->placed];
	return panel_y(panel, placed->first + (int64_t)(block->row + block->rows - 1) * placed->step + 1);
}

static void list_blocks(const struct frame_drawing *drawing, const struct panel *panel, struct block_list *blocks)
{
	*blocks = (struct block_list){.count = 0};
	for (unsigned placed = 0; placed < panel->field_count; placed++)
		list_field(drawing, panel, placed, blocks);
}

// By the height of their middles; few enough for the plainest way.
static void sort_blocks(const struct panel *panel, struct block_list *blocks)
{
	for (unsigned index = 0; index < blocks->count; index++) {
		struct named_block block = blocks->list[index];
		block.middle = (block_top(panel, &block) + block_bottom(panel, &block)) / 2;
		unsigned place = index;
		for (; place > 0 && blocks->list[place - 1].middle > block.middle; place--)
			blocks->list[place] = blocks->list[place - 1];
		blocks->list[place] = block;
	}
}

// Moves labels apart, down and then up from the end of the room.
static void spread_labels(const struct panel *panel, struct block_list *blocks, int64_t labels[MOST_NAMED])
{
	int64_t limit = panel->y + frame_blocks_height(NULL, panel);
	const int64_t needed = (int64_t)blocks->count * LABEL_HEIGHT;
	limit = limit < panel->y + needed ? panel->y + needed : limit;
	int64_t next = panel->y + LABEL_HEIGHT / 2;
	for (unsigned index = 0; index < blocks->count; index++) {
		labels[index] = blocks->list[index].middle > next ? blocks->list[index].middle : next;
		next = labels[index] + LABEL_HEIGHT;
	}
	int64_t last = limit - LABEL_HEIGHT / 2;
	for (unsigned index = blocks->count; index-- > 0;) {
		labels[index] = labels[index] < last ? labels[index] : last;
		last = labels[index] - LABEL_HEIGHT;
	}
}

int64_t frame_blocks_height(const struct frame_drawing *drawing, const struct panel *panel)
{
	struct block_list blocks = {.count = 0};
	if (drawing != NULL)
		list_blocks(drawing, panel, &blocks);
	const int64_t needed = (int64_t)blocks.count * LABEL_HEIGHT + (blocks.left_out > 0 ? LABEL_HEIGHT : 0);
	return needed > panel->height ? needed : panel->height;
}

static void put_block_lines(const struct frame_drawing *drawing, const struct panel *panel, const struct named_block *block,
                            struct text *words)
{
	const struct frame_field *field = &drawing->rows.fields[panel->fields[block->placed].field];
	const uint32_t first = drawing->rows.rows[field_row(&drawing->rows, field, block->row)].line;
	text_put_count(words, block->lines, "line", "lines");
	text_printf(words, " from %" PRIu32, first);
	if (panel->field_count > 1)
		text_printf(words, ", field %u", panel->fields[block->placed].field + 1);
}

static void draw_leader(const struct frame_drawing *drawing, const struct panel *panel, const struct named_block *block, int64_t label)
{
	const int64_t right = FRAME_LEFT + drawing->width + (block->placed == 0 ? PX(6) : PX(12));
	const int64_t middle = block->middle, end = FRAME_LEFT + drawing->width + PX(36);
	struct text data = {0};
	text_put(&data, "M");
	svg_put_length(&data, right);
	text_put(&data, " ");
	svg_put_length(&data, block_top(panel, block));
	text_put(&data, "V");
	svg_put_length(&data, block_bottom(panel, block));
	text_put(&data, "M");
	svg_put_length(&data, right);
	text_put(&data, " ");
	svg_put_length(&data, middle);
	text_put(&data, "h6L");
	svg_put_length(&data, end - PX(6));
	text_put(&data, " ");
	svg_put_length(&data, label);
	text_put(&data, "h6");
	svg_open(drawing->svg, "path");
	svg_attribute(drawing->svg, "class", "hair");
	svg_attribute(drawing->svg, "d", text_string(&data));
	svg_close(drawing->svg);
	svg_release(drawing->svg, &data);
}

static void draw_block(const struct frame_drawing *drawing, const struct panel *panel, const struct named_block *block, int64_t label)
{
	const struct plan *plan = drawing->rows.timeline->plan;
	const char *type = plan->lines[plan->blocks[block->block].line_type].name;
	const int64_t x = FRAME_LEFT + drawing->width + PX(42);
	struct svg *svg = drawing->svg;
	struct text words = {0};
	put_block_lines(drawing, panel, block, &words);
	svg_group(svg, "block");
	svg_whole(svg, "data-block", block->block);
	svg_whole(svg, "data-rows", block->rows);
	svg_attribute(svg, "data-type", type);
	draw_leader(drawing, panel, block, label);
	svg_named(svg, x, label + PX(5), ANCHOR_START, FRAME_SIDE - PX(50), type, text_string(&words));
	svg_close(svg);
	svg_release(svg, &words);
}

void draw_frame_blocks(struct frame_drawing *drawing, const struct panel *panel)
{
	struct block_list blocks;
	int64_t labels[MOST_NAMED];
	list_blocks(drawing, panel, &blocks);
	sort_blocks(panel, &blocks);
	spread_labels(panel, &blocks, labels);
	for (unsigned index = 0; index < blocks.count; index++)
		draw_block(drawing, panel, &blocks.list[index], labels[index]);
	if (blocks.left_out == 0)
		return;
	struct text words = {0};
	text_put_count(&words, blocks.left_out, "smaller block is not named", "smaller blocks are not named");
	svg_text(drawing->svg, "small", FRAME_LEFT + drawing->width + PX(42),
	         (blocks.count > 0 ? labels[blocks.count - 1] : panel->y) + LABEL_HEIGHT + PX(5), ANCHOR_START, text_string(&words));
	svg_release(drawing->svg, &words);
}
