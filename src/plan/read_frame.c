#include "plan/read.h"

#include <string.h>

enum { BLOCK_REPEAT, BLOCK_LINE, BLOCK_KEYS };

static const struct key block_keys[BLOCK_KEYS] = {
	[BLOCK_REPEAT] = {"repeat", KEY_REQUIRED, WHOLE(1, LIMIT_LINES), "How many lines of the type follow each other"},
	[BLOCK_LINE] = {"line", KEY_REQUIRED, &printable_name_shape, "The line type, one of those in lines"},
};

static const struct shape block_shape = {.kind = SHAPE_MAPPING, .title = "block", .keys = block_keys, .key_count = BLOCK_KEYS};

const struct shape frame_shape = {.kind = SHAPE_LIST, .item = &block_shape, .least = 1, .most = INT64_MAX};

static bool find_line(struct reader *reader, const struct node *node, size_t *line)
{
	const struct plan *plan = reader->plan;
	const char *name;
	if (!read_scalar(reader, node, "line", &name))
		return false;
	for (size_t index = 0; index < plan->line_count; index++)
		if (strcmp(plan->lines[index].name, name) == 0) {
			*line = index;
			return true;
		}
	if (plan->line_count == 0)
		return false; // `lines` itself was reported
	const char *names[64];
	const size_t count = plan->line_count < COUNT_OF(names) ? plan->line_count : COUNT_OF(names);
	for (size_t index = 0; index < count; index++)
		names[index] = plan->lines[index].name;
	diagnose(reader->diagnostics, RULE_UNKNOWN_LINE, node->place, "there is no line type \"%s\"", SHORT(name));
	hint_words(reader, name, names, count);
	return false;
}

// Reads one block; false after reporting, or once the frame is too long.
static bool read_block(struct reader *reader, const struct node *node, struct block *block, int64_t *lines)
{
	const struct node *values[BLOCK_KEYS];
	block->place = node->place;
	block->repeat = 1;
	if (!read_mapping(reader, node, "a block of the frame", block_keys, BLOCK_KEYS, values))
		return false;
	key_whole(reader, &block_keys[BLOCK_REPEAT], values[BLOCK_REPEAT], &block->repeat);
	if (values[BLOCK_LINE] != NULL)
		find_line(reader, values[BLOCK_LINE], &block->line_type);
	if (block->repeat <= LIMIT_LINES - *lines) {
		*lines += block->repeat;
		return true;
	}
	diagnose(reader->diagnostics, RULE_FRAME_SIZE, values[BLOCK_REPEAT] != NULL ? values[BLOCK_REPEAT]->place : node->place,
	         "the frame has more than %d lines", LIMIT_LINES);
	*lines = LIMIT_LINES;
	return false;
}

static void notice_unused_lines(struct reader *reader)
{
	const struct plan *plan = reader->plan;
	bool *used = reader_array(reader, plan->line_count, sizeof *used);
	if (used == NULL)
		return;
	for (size_t block = 0; block < plan->block_count; block++)
		used[plan->blocks[block].line_type] = true;
	for (size_t line = 0; line < plan->line_count; line++)
		if (!used[line])
			diagnose(reader->diagnostics, RULE_UNUSED_LINE, plan->lines[line].place, "line type \"%s\" is in no block of the frame",
			         SHORT(plan->lines[line].name));
}

void read_frame(struct reader *reader, const struct node *node)
{
	struct plan *plan = reader->plan;
	const size_t errors_before = diagnostics_error_count(reader->diagnostics);
	if (!expect_kind(reader, node, NODE_LIST, "frame"))
		return;
	if (node->count == 0) {
		diagnose(reader->diagnostics, RULE_MISSING_KEY, node->place, "frame: wanted at least one block, found none");
		return;
	}
	plan->blocks = reader_array(reader, node->count, sizeof *plan->blocks);
	if (plan->blocks == NULL)
		return;
	int64_t lines = 0;
	for (size_t index = 0; index < node->count; index++) {
		plan->block_count = index + 1;
		if (!read_block(reader, node->items[index], &plan->blocks[index], &lines) && lines == LIMIT_LINES)
			return;
	}
	if (diagnostics_error_count(reader->diagnostics) == errors_before && plan->line_count > 0)
		notice_unused_lines(reader);
}
