// Whether what two regions hold comes to the same.
#include <string.h>

#include "compare/parts.h"
#include "plan/expression.h"

static bool same_words(const char *left, const char *right)
{
	for (;; left++, right++) {
		left += strspn(left, " \t\n");
		right += strspn(right, " \t\n");
		if (*left != *right)
			return false;
		if (*left == '\0')
			return true;
	}
}

// In a line of the frame: every cell of a region.
static bool line_agrees(const struct timeline *timeline, const struct hold *old, const struct hold *now, const struct laid_region *region,
                        uint32_t line)
{
	int64_t variables[VARIABLE_COUNT] = {[VARIABLE_LINE] = line, [VARIABLE_ROW] = timeline->lines[line].row};
	bool same = true;
	for (uint32_t col = 0; same && col < region->cells; col++) {
		int64_t before = 0, after = 0;
		variables[VARIABLE_CELL] = region->first_cell + col;
		variables[VARIABLE_COL] = col;
		same = expression_value(old->expression, variables, &before) == EXPRESSION_OK &&
		       expression_value(now->expression, variables, &after) == EXPRESSION_OK && before == after;
	}
	return same;
}

static bool counts_lines(const struct hold *hold)
{
	return expression_uses(hold->expression, VARIABLE_LINE) || expression_uses(hold->expression, VARIABLE_ROW);
}

bool holds_agree(const struct comparing *comparing, const struct hold *old, const struct hold *now, size_t now_line, size_t now_region)
{
	const struct timeline *timeline = comparing->now_timeline;
	const struct laid_region *region = &timeline->types[now_line].regions[now_region];
	const bool once = !counts_lines(old) && !counts_lines(now);
	bool same = true, found = false;
	if (same_words(old->text, now->text))
		return true;
	for (uint32_t line = 0; same && line < timeline->line_count && !(found && once); line++) {
		if (timeline->lines[line].type != now_line)
			continue;
		found = true;
		same = line_agrees(timeline, old, now, region, line);
	}
	return same && found;
}
